//! Volume, centre and second moments of the body that a mesh encloses.
//!
//! Outside is where the corners of a triangle run anticlockwise. A shell
//! inside another is a cavity if it faces the other way; an outermost shell
//! that faces inwards is turned together with what lies in it, and the result
//! says so. A single shell that cuts through itself is not noticed: its
//! doubly enclosed parts count twice.

use crate::moments::{Moments, PAIRS, area};
use crate::nesting::enclosers;
use crate::surface::Surface;
use crate::vector::{Bounds, Point};
use crate::{Format, Mesh};
use std::fmt;

/// Why a mesh is not the surface of a body. Counts are of edges; places are
/// in the file's unit.
#[derive(Clone, Debug, PartialEq)]
pub enum MeshFault {
    /// Edges with a triangle on one side only: how many, and where one is.
    Open(usize, [f64; 3]),
    /// Neighbours that disagree about inside and outside.
    Inconsistent(usize, [f64; 3]),
    /// More than two triangles on an edge.
    Branching(usize, [f64; 3]),
    /// Two shells cut through each other, or lie on each other.
    Crossing([f64; 3]),
    /// A shell inside another that faces the same way: a cavity that faces
    /// wrongly, or material that would count twice.
    Nested([f64; 3]),
    /// A shell that encloses nothing.
    NoVolume,
    /// Coordinates so large that their products overflow.
    TooLarge,
}

impl fmt::Display for MeshFault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let edges = |n: &usize| if *n == 1 { "1 edge".to_string() } else { format!("{n} edges") };
        match self {
            MeshFault::Open(n, at) => {
                write!(f, "{} without a second triangle, one {}", edges(n), Place(at))
            }
            MeshFault::Inconsistent(n, at) => {
                write!(f, "neighbours along {} disagree about inside and outside, one {}", edges(n), Place(at))
            }
            MeshFault::Branching(n, at) => {
                write!(f, "{} with more than two triangles, one {}", edges(n), Place(at))
            }
            MeshFault::Crossing(at) => write!(f, "two of its shells cut through or lie on each other {}", Place(at)),
            MeshFault::Nested(at) => write!(
                f,
                "a shell {} lies inside another and faces the same way: a cavity faces inwards, and material counts once",
                Place(at)
            ),
            MeshFault::NoVolume => f.write_str("it has a shell that encloses no volume"),
            MeshFault::TooLarge => f.write_str("its coordinates are too large to compute with"),
        }
    }
}

impl std::error::Error for MeshFault {}

struct Place<'p>(&'p [f64; 3]);

impl fmt::Display for Place<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let [x, y, z] = self.0;
        write!(f, "near ({x}, {y}, {z}) in the file's unit")
    }
}

/// What a shell bounds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// Material inside.
    Body,
    /// A void in the shell around it.
    Cavity,
}

/// One connected closed surface.
#[derive(Clone, Debug, PartialEq)]
pub struct Shell {
    /// Volume inside, negative where the file's triangles face inwards.
    pub signed_volume: f64,
    /// What it bounds.
    pub role: Role,
    /// Whether it was turned to make a body of the whole.
    pub turned: bool,
}

/// Integrals of the body at unit density, in the file's unit.
#[derive(Clone, Debug, PartialEq)]
pub struct MeshProperties {
    /// Enclosed volume, cavities taken off; positive.
    pub volume: f64,
    /// Surface, cavities' walls included.
    pub area: f64,
    /// Centre of volume.
    pub centre: [f64; 3],
    /// Integrals of xx, yy, zz, xy, xz, yz about the centre.
    pub second: [f64; 6],
    /// Connected surfaces, in the file's order.
    pub shells: Vec<Shell>,
    /// Whether any shell was inside out and was turned.
    pub inverted: bool,
    /// Least coordinates.
    pub low: [f64; 3],
    /// Greatest coordinates.
    pub high: [f64; 3],
    /// Greatest distance of a corner from the x, y and z axis.
    pub reach: [f64; 3],
    /// Bound, to first order, on the relative error of the volume that storing
    /// the corners in single precision may have made; nothing for a text file,
    /// whose good digits are unknown.
    pub single_precision: Option<f64>,
}

/// Checks that the mesh is closed and consistent, and integrates over it.
pub fn mass_properties(mesh: &Mesh) -> Result<MeshProperties, MeshFault> {
    let mut surface = Surface::merge(&mesh.triangles);
    let faces = surface.shells()?;
    let bounds = Bounds::of(surface.points.iter().copied());
    let shells = orient(&mut surface, &faces)?;
    let triangles = || (0..surface.faces.len()).map(|face| surface.corners(face));

    // About the first corner, then again about the centroid: an offset of the
    // part from the file's origin would cost digits otherwise.
    let start = surface.points.first().copied().ok_or(MeshFault::NoVolume)?;
    let rough = Moments::about(start, triangles());
    let near: Point = std::array::from_fn(|at| start[at] + rough.first[at] / rough.volume);
    let fine = Moments::about(near, triangles());
    let shift: Point = std::array::from_fn(|at| fine.first[at] / fine.volume);
    let second = std::array::from_fn(|member| {
        let (i, j) = PAIRS[member];
        fine.second[member] - fine.volume * shift[i] * shift[j]
    });
    let area: f64 = triangles().map(area).sum();
    let reach = std::array::from_fn(|axis| {
        let (i, j) = ((axis + 1) % 3, (axis + 2) % 3);
        surface.points.iter().map(|it| (it[i] * it[i] + it[j] * it[j]).sqrt()).fold(0.0, f64::max)
    });
    let largest = bounds.low.into_iter().chain(bounds.high).map(f64::abs).fold(0.0, f64::max);
    let properties = MeshProperties {
        volume: fine.volume,
        area,
        centre: std::array::from_fn(|at| near[at] + shift[at]),
        second,
        inverted: shells.iter().any(|shell| shell.turned),
        shells,
        low: bounds.low,
        high: bounds.high,
        reach,
        // The surface moves by at most half a unit in the last place along each axis.
        single_precision: (mesh.format == Format::Binary)
            .then(|| area * 3.0_f64.sqrt() * f64::from(f32::EPSILON) / 2.0 * largest / fine.volume),
    };
    let numbers = [properties.volume, properties.area].into_iter().chain(properties.centre);
    if !numbers.chain(properties.second).chain(properties.reach).all(f64::is_finite) {
        return Err(MeshFault::TooLarge);
    }
    if properties.volume > 0.0 { Ok(properties) } else { Err(MeshFault::NoVolume) }
}

/// Says what each shell bounds, and turns the faces of those inside out.
fn orient(surface: &mut Surface, faces: &[Vec<usize>]) -> Result<Vec<Shell>, MeshFault> {
    let mut volumes = Vec::with_capacity(faces.len());
    for faces in faces {
        volumes.push(signed_volume(surface, faces)?);
    }
    let around = enclosers(surface, faces)?;
    let mut shells = Vec::with_capacity(faces.len());
    for (at, faces) in faces.iter().enumerate() {
        let depth = around[at].len();
        // The outermost shell around it, or itself, says whether the whole is inside out.
        let outermost = around[at].iter().copied().find(|&it| around[it].is_empty()).unwrap_or(at);
        let turned = volumes[outermost] < 0.0;
        let faces_outwards = (volumes[at] > 0.0) != turned;
        let role = if depth % 2 == 0 { Role::Body } else { Role::Cavity };
        if faces_outwards != (role == Role::Body) {
            let place = faces.first().map_or([0.0; 3], |&face| surface.corners(face)[0]);
            return Err(MeshFault::Nested(place));
        }
        shells.push(Shell { signed_volume: volumes[at], role, turned });
    }
    for (faces, _) in faces.iter().zip(&shells).filter(|(_, shell)| shell.turned) {
        for &face in faces {
            surface.faces[face].swap(1, 2);
        }
    }
    Ok(shells)
}

fn signed_volume(surface: &Surface, faces: &[usize]) -> Result<f64, MeshFault> {
    let triangles = || faces.iter().map(|&face| surface.corners(face));
    let start = triangles().next().map_or([0.0; 3], |corners| corners[0]);
    let volume = Moments::about(start, triangles()).volume;
    let surface_area: f64 = triangles().map(area).sum();
    let across = Bounds::of(triangles().flatten()).diagonal();
    if !(volume * surface_area * across).is_finite() {
        return Err(MeshFault::TooLarge);
    }
    // A folded sheet leaves only rounding.
    if volume.abs() <= 1e-12 * surface_area * across { Err(MeshFault::NoVolume) } else { Ok(volume) }
}
