//! Blocks, and the two ways to write triangles as STL.
#![allow(dead_code)]

use pintle_geometry::Mesh;

type Triangle = [[f64; 3]; 3];

pub fn mesh(triangles: Vec<Triangle>) -> Mesh {
    Mesh { triangles, ..Mesh::default() }
}

/// The block between two corners, facing outwards.
pub fn block(low: [f64; 3], high: [f64; 3]) -> Vec<Triangle> {
    // Corners by their bits: x 1, y 2, z 4.
    let corner = |bits: usize| std::array::from_fn(|at| if bits >> at & 1 == 1 { high[at] } else { low[at] });
    let sides = [[0, 4, 6, 2], [1, 3, 7, 5], [0, 1, 5, 4], [2, 6, 7, 3], [0, 2, 3, 1], [4, 5, 7, 6]];
    sides
        .iter()
        .flat_map(|&[a, b, c, d]| [[a, b, c], [a, c, d]])
        .map(|triangle: [usize; 3]| triangle.map(corner))
        .collect()
}

pub fn turned(triangles: Vec<Triangle>) -> Vec<Triangle> {
    triangles.into_iter().map(|[a, b, c]| [a, c, b]).collect()
}

pub fn binary(triangles: &[Triangle]) -> Vec<u8> {
    let mut bytes = b"solid is how many binary files begin".to_vec();
    bytes.resize(80, b' ');
    bytes.extend((triangles.len() as u32).to_le_bytes());
    for triangle in triangles {
        bytes.extend([0; 12]);
        bytes.extend(triangle.iter().flatten().flat_map(|value| (*value as f32).to_le_bytes()));
        bytes.extend([0; 2]);
    }
    bytes
}

pub fn text(triangles: &[Triangle]) -> String {
    let mut text = String::from("solid block\n");
    for triangle in triangles {
        text.push_str("  facet normal 0 0 0\n    outer loop\n");
        for [x, y, z] in triangle {
            text.push_str(&format!("      vertex {x:e} {y:e} {z:e}\n"));
        }
        text.push_str("    endloop\n  endfacet\n");
    }
    text.push_str("endsolid block\n");
    text
}
