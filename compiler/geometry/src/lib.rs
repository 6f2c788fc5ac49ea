//! Closed triangle meshes: STL bytes to exact mass properties of the
//! polyhedron as stored.
//!
//! Lengths stay in the file's unit. The crate knows bytes and triangles; it
//! must never know units, densities or sheets, and it reads no files itself.
//!
//! ```
//! # let bytes = b"solid\nendsolid";
//! let fault = pintle_geometry::read_stl(bytes).unwrap_err();
//! assert_eq!(fault, pintle_geometry::StlFault::Empty);
//! ```

mod crossing;
mod mass;
mod moments;
mod nesting;
mod stl;
mod surface;
mod vector;

pub use mass::{MeshFault, MeshProperties, Role, Shell, mass_properties};
pub use stl::{StlFault, read_stl};

/// Triangles as read, each with its three corners.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Mesh {
    /// How the file held them.
    pub format: Format,
    /// Corners in the file's order; degenerate triangles are left out.
    pub triangles: Vec<[[f64; 3]; 3]>,
    /// How many triangles had two equal corners.
    pub n_degenerate: usize,
}

/// The two kinds of STL file.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Format {
    /// Decimal numbers; how many digits are good, only the writer knows.
    #[default]
    Text,
    /// Corners in single precision.
    Binary,
}
