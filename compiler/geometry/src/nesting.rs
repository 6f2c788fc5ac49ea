//! Which shell lies inside which.

use crate::crossing::crossing;
use crate::mass::MeshFault;
use crate::surface::Surface;
use crate::vector::{Bounds, Point, cross, dot, length, minus};

/// For each shell the shells around it. The time grows with the number of
/// pairs whose boxes meet.
pub(crate) fn enclosers(surface: &Surface, shells: &[Vec<usize>]) -> Result<Vec<Vec<usize>>, MeshFault> {
    let bounds: Vec<Bounds> =
        shells.iter().map(|faces| Bounds::of(faces.iter().flat_map(|&face| surface.corners(face)))).collect();
    let mut around = vec![Vec::new(); shells.len()];
    for one in 0..shells.len() {
        for other in 0..one {
            if !bounds[one].meets(&bounds[other]) {
                continue;
            }
            let common = Bounds {
                low: std::array::from_fn(|at| bounds[one].low[at].max(bounds[other].low[at])),
                high: std::array::from_fn(|at| bounds[one].high[at].min(bounds[other].high[at])),
            };
            if let Some(place) = crossing(surface, &shells[one], &shells[other], &common) {
                return Err(MeshFault::Crossing(place));
            }
            // They do not cut each other, so one place decides for the whole shell.
            for (inner, outer) in [(one, other), (other, one)] {
                if is_inside(surface, &shells[inner], &shells[outer], &bounds[outer])? {
                    around[inner].push(outer);
                }
            }
        }
    }
    Ok(around)
}

fn is_inside(surface: &Surface, inner: &[usize], outer: &[usize], bounds: &Bounds) -> Result<bool, MeshFault> {
    let mut last = [0.0; 3];
    for &face in inner {
        let [a, b, c] = surface.corners(face);
        let middle: Point = std::array::from_fn(|at| (a[at] + b[at] + c[at]) / 3.0);
        for place in [a, middle] {
            if !bounds.holds(place) {
                return Ok(false);
            }
            last = place;
            // On the surface itself the answer is neither: look at another place.
            if let Some(turns) = winding(surface, outer, place) {
                return Ok(turns != 0.0);
            }
        }
    }
    // Every place of it lies on the other.
    Err(MeshFault::Crossing(last))
}

/// How often the faces go round the place: the sum of their solid angles over
/// 4 pi; nothing where the place lies on one of them. Solid angle of a
/// triangle: van Oosterom and Strackee, IEEE Transactions on Biomedical
/// Engineering 30 (1983) 125-126, from memory.
fn winding(surface: &Surface, faces: &[usize], place: Point) -> Option<f64> {
    let mut half_angles = 0.0;
    for &face in faces {
        let [a, b, c] = surface.corners(face).map(|corner| minus(corner, place));
        let (la, lb, lc) = (length(a), length(b), length(c));
        let size = la * lb * lc;
        let over = dot(a, cross(b, c));
        let under = size + dot(a, b) * lc + dot(b, c) * la + dot(c, a) * lb;
        if over.abs() <= 1e-6 * size && under <= 1e-6 * size {
            return None;
        }
        half_angles += libm::atan2(over, under);
    }
    let turns = half_angles / (2.0 * std::f64::consts::PI);
    let whole = turns.round();
    ((turns - whole).abs() < 1e-3).then_some(whole)
}
