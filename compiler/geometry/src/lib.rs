//! Closed triangle meshes: STL bytes to exact mass properties of the
//! polyhedron as stored.
//!
//! Lengths stay in the file's unit. The crate knows bytes and triangles; it
//! must never know units, densities or sheets.

mod mesh;
mod stl;

pub use mesh::{MeshFault, MeshProperties, mass_properties};
pub use stl::{StlFault, read_stl};

/// Triangles as read, each with its three corners.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Mesh {
    /// Corners in the file's order; degenerate triangles are left out.
    pub triangles: Vec<[[f64; 3]; 3]>,
    /// How many triangles had two equal corners.
    pub n_degenerate: usize,
}
