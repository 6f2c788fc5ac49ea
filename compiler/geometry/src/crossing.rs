//! Whether two shells cut through each other.
//!
//! Only edges that pass clearly through the inside of a triangle count, so
//! that parts which touch are not taken for parts which overlap.

use crate::surface::Surface;
use crate::vector::{Bounds, Point, cross, dot, length, minus};

/// A place where an edge of one list of faces passes through a face of the other.
pub(crate) fn crossing(surface: &Surface, a: &[usize], b: &[usize], common: &Bounds) -> Option<Point> {
    let (a, b) = (candidates(surface, a, common), candidates(surface, b, common));
    pierces(&a, &b).or_else(|| pierces(&b, &a))
}

struct Candidate {
    corners: [Point; 3],
    bounds: Bounds,
}

/// Faces that reach into `common`, by their least x.
fn candidates(surface: &Surface, faces: &[usize], common: &Bounds) -> Vec<Candidate> {
    let mut list: Vec<Candidate> = faces
        .iter()
        .map(|&face| {
            let corners = surface.corners(face);
            Candidate { corners, bounds: Bounds::of(corners) }
        })
        .filter(|it| it.bounds.meets(common))
        .collect();
    list.sort_by(|one, other| one.bounds.low[0].total_cmp(&other.bounds.low[0]));
    list
}

fn pierces(edges: &[Candidate], faces: &[Candidate]) -> Option<Point> {
    let widest = faces.iter().map(|it| it.bounds.high[0] - it.bounds.low[0]).fold(0.0, f64::max);
    for it in edges {
        let from = faces.partition_point(|face| face.bounds.low[0] < it.bounds.low[0] - widest);
        let near = faces.get(from..).unwrap_or(&[]).iter().take_while(|face| face.bounds.low[0] <= it.bounds.high[0]);
        for face in near.filter(|face| face.bounds.meets(&it.bounds)) {
            let [p, q, r] = it.corners;
            let through = [(p, q), (q, r), (r, p)].into_iter().find_map(|(p, q)| passes(p, q, face.corners));
            if through.is_some() {
                return through;
            }
        }
    }
    None
}

/// Where the segment p-q passes through the inside of the triangle.
fn passes(p: Point, q: Point, [a, b, c]: [Point; 3]) -> Option<Point> {
    let normal = cross(minus(b, a), minus(c, a));
    let (over, under) = (dot(normal, minus(p, a)), dot(normal, minus(q, a)));
    // What is within rounding of the plane touches it; corners come in single precision.
    let size = [p, q, b, c].map(|it| length(minus(it, a))).into_iter().fold(0.0, f64::max);
    let far = [p, q, a, b, c].into_iter().flatten().map(f64::abs).fold(0.0, f64::max);
    let rounding = 1e-6 * size + 4.0 * f64::from(f32::EPSILON) * far;
    let slack = length(normal) * rounding;
    if !(over > slack && under < -slack || over < -slack && under > slack) {
        return None;
    }
    let way = minus(q, p);
    let volume = |from: Point, to: Point| dot(way, cross(minus(from, p), minus(to, p)));
    let sides = [volume(a, b), volume(b, c), volume(c, a)];
    let slack = length(way) * size * rounding;
    let inside = sides.iter().all(|it| *it > slack) || sides.iter().all(|it| *it < -slack);
    let share = over / (over - under);
    inside.then(|| std::array::from_fn(|at| p[at] + share * way[at]))
}
