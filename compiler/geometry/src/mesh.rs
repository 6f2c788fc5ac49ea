//! Volume, centre and second moments of a closed mesh, by signed tetrahedra.

use crate::Mesh;
use std::collections::HashMap;
use std::fmt;

/// Why a mesh is not the surface of a body.
#[derive(Clone, Debug, PartialEq)]
pub enum MeshFault {
    /// Edges with a triangle on one side only: how many, and where one is.
    Open(usize, [f64; 3]),
    /// Neighbours that disagree about inside and outside.
    Inconsistent(usize, [f64; 3]),
    /// More than two triangles on an edge.
    Branching(usize, [f64; 3]),
    /// Closed, but encloses nothing.
    NoVolume,
}

impl fmt::Display for MeshFault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            MeshFault::Open(n, [x, y, z]) => write!(f, "{n} open edge(s), one near ({x}, {y}, {z}) in the file's unit"),
            MeshFault::Inconsistent(n, [x, y, z]) => {
                write!(f, "triangles face both ways along {n} edge(s), one near ({x}, {y}, {z}) in the file's unit")
            }
            MeshFault::Branching(n, [x, y, z]) => {
                write!(f, "{n} edge(s) with more than two triangles, one near ({x}, {y}, {z}) in the file's unit")
            }
            MeshFault::NoVolume => f.write_str("it encloses no volume"),
        }
    }
}

/// Integrals of the body at unit density, in the file's unit.
#[derive(Clone, Debug, PartialEq)]
pub struct MeshProperties {
    /// Enclosed volume, positive.
    pub volume: f64,
    /// Surface.
    pub area: f64,
    /// Centre of volume.
    pub centre: [f64; 3],
    /// Integrals of xx, yy, zz, xy, xz, yz about the centre.
    pub second: [f64; 6],
    /// Number of connected surfaces.
    pub n_shells: usize,
    /// Whether the whole was inside out and was turned.
    pub inverted: bool,
    /// Greatest distance of a corner from the x axis.
    pub reach_x: f64,
}

/// Checks that the mesh is closed and consistent, and integrates over it.
pub fn mass_properties(mesh: &Mesh) -> Result<MeshProperties, MeshFault> {
    let (faces, points) = merged(mesh);
    check_edges(&faces, &points)?;
    let n_shells = shells(&faces, points.len());
    // About the first corner, then again about the centroid: offsets of the
    // part from the file's origin would cost digits otherwise.
    let first = points.first().copied().unwrap_or([0.0; 3]);
    let (signed, about_first, _) = integrals(&faces, &points, first);
    if signed == 0.0 || !signed.is_finite() {
        return Err(MeshFault::NoVolume);
    }
    let centre: [f64; 3] = std::array::from_fn(|at| first[at] + about_first[at] / signed);
    let (_, rest, second) = integrals(&faces, &points, centre);
    let shift: [f64; 3] = std::array::from_fn(|at| rest[at] / signed);
    let sign = signed.signum();
    let pairs = [(0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)];
    let second = std::array::from_fn(|at| {
        let (i, j) = pairs[at];
        sign * (second[at] - signed * shift[i] * shift[j])
    });
    Ok(MeshProperties {
        volume: signed.abs(),
        area: faces.iter().map(|face| area(face.map(|at| points[at]))).sum(),
        centre: std::array::from_fn(|at| centre[at] + shift[at]),
        second,
        n_shells,
        inverted: signed < 0.0,
        reach_x: points.iter().map(|p| (p[1] * p[1] + p[2] * p[2]).sqrt()).fold(0.0, f64::max),
    })
}

/// Corners merged where they are equal to the bit, -0 being 0.
fn merged(mesh: &Mesh) -> (Vec<[usize; 3]>, Vec<[f64; 3]>) {
    let mut known: HashMap<[u64; 3], usize> = HashMap::new();
    let mut points = Vec::new();
    let faces = mesh
        .triangles
        .iter()
        .map(|triangle| {
            triangle.map(|corner| {
                let corner = corner.map(|value| value + 0.0);
                *known.entry(corner.map(f64::to_bits)).or_insert_with(|| {
                    points.push(corner);
                    points.len() - 1
                })
            })
        })
        .collect();
    (faces, points)
}

fn check_edges(faces: &[[usize; 3]], points: &[[f64; 3]]) -> Result<(), MeshFault> {
    // Uses of each edge in either sense.
    let mut edges: HashMap<(usize, usize), (u32, u32)> = HashMap::new();
    for face in faces {
        for at in 0..3 {
            let (a, b) = (face[at], face[(at + 1) % 3]);
            let uses = edges.entry((a.min(b), a.max(b))).or_default();
            if a < b {
                uses.0 += 1;
            } else {
                uses.1 += 1;
            }
        }
    }
    let mut list: Vec<_> = edges.into_iter().collect();
    list.sort();
    let mut faults: [Vec<usize>; 3] = Default::default();
    for ((a, _), (forward, backward)) in list {
        match (forward, backward) {
            (1, 1) => {}
            (1, 0) | (0, 1) => faults[0].push(a),
            (2, 0) | (0, 2) => faults[1].push(a),
            _ => faults[2].push(a),
        }
    }
    let makers: [fn(usize, [f64; 3]) -> MeshFault; 3] =
        [MeshFault::Open, MeshFault::Branching, MeshFault::Inconsistent];
    for (list, make) in [&faults[0], &faults[2], &faults[1]].into_iter().zip(makers) {
        if let Some(&at) = list.first() {
            return Err(make(list.len(), points[at]));
        }
    }
    Ok(())
}

fn shells(faces: &[[usize; 3]], n_points: usize) -> usize {
    let mut parent: Vec<usize> = (0..n_points).collect();
    fn root(parent: &mut [usize], mut at: usize) -> usize {
        while parent[at] != at {
            parent[at] = parent[parent[at]];
            at = parent[at];
        }
        at
    }
    for face in faces {
        for at in 1..3 {
            let (a, b) = (root(&mut parent, face[0]), root(&mut parent, face[at]));
            parent[a] = b;
        }
    }
    (0..n_points).filter(|&at| parent[at] == at).count()
}

fn area([a, b, c]: [[f64; 3]; 3]) -> f64 {
    let (u, v) = (minus(b, a), minus(c, a));
    let n = cross(u, v);
    (n[0] * n[0] + n[1] * n[1] + n[2] * n[2]).sqrt() / 2.0
}

fn minus(a: [f64; 3], b: [f64; 3]) -> [f64; 3] {
    [a[0] - b[0], a[1] - b[1], a[2] - b[2]]
}

fn cross(a: [f64; 3], b: [f64; 3]) -> [f64; 3] {
    [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
}

/// Signed volume, first and second moments about `from`: tetrahedra between
/// `from` and each triangle (Tonon, J. Math. Stat. 1 (2005) 8, from memory).
fn integrals(faces: &[[usize; 3]], points: &[[f64; 3]], from: [f64; 3]) -> (f64, [f64; 3], [f64; 6]) {
    let (mut volume, mut first, mut second) = (0.0, [0.0; 3], [0.0; 6]);
    for face in faces {
        let [a, b, c] = face.map(|at| minus(points[at], from));
        let n = cross(b, c);
        let v = (a[0] * n[0] + a[1] * n[1] + a[2] * n[2]) / 6.0;
        volume += v;
        let sum: [f64; 3] = std::array::from_fn(|at| a[at] + b[at] + c[at]);
        for at in 0..3 {
            first[at] += v * sum[at] / 4.0;
        }
        for (member, (i, j)) in [(0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)].into_iter().enumerate() {
            second[member] += v / 20.0 * (sum[i] * sum[j] + a[i] * a[j] + b[i] * b[j] + c[i] * c[j]);
        }
    }
    (volume, first, second)
}
