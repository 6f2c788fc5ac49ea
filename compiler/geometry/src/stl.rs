//! STL files, binary and text.
//!
//! A file is binary if and only if its size is 84 + 50 n for the n that it
//! states; many binary files begin with the word "solid".

use crate::Mesh;
use std::fmt;

/// Why bytes are no STL file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum StlFault {
    /// Neither a binary file of the stated length nor text.
    NotStl,
    /// Text that ends or goes wrong at a line.
    Text(usize),
    /// A corner that is no finite number.
    NotFinite,
    /// No triangle.
    Empty,
}

impl fmt::Display for StlFault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            StlFault::NotStl => f.write_str("neither binary of the length that it states nor text"),
            StlFault::Text(line) => write!(f, "line {line} is not what the format expects"),
            StlFault::NotFinite => f.write_str("a corner is not a finite number"),
            StlFault::Empty => f.write_str("it holds no triangle"),
        }
    }
}

/// Reads an STL file.
pub fn read_stl(bytes: &[u8]) -> Result<Mesh, StlFault> {
    let mut mesh = Mesh::default();
    let count = bytes.get(80..84).and_then(|it| it.try_into().ok()).map(u32::from_le_bytes);
    let binary = count.is_some_and(|count| bytes.len() as u64 == 84 + 50 * u64::from(count));
    if binary {
        for record in bytes.get(84..).unwrap_or(&[]).chunks_exact(50) {
            let mut corners = [[0.0; 3]; 3];
            for (at, chunk) in record[12..48].chunks_exact(4).enumerate() {
                let value = f32::from_le_bytes([chunk[0], chunk[1], chunk[2], chunk[3]]);
                corners[at / 3][at % 3] = f64::from(value);
            }
            push(&mut mesh, corners)?;
        }
    } else {
        read_text(bytes, &mut mesh)?;
    }
    if mesh.triangles.is_empty() { Err(StlFault::Empty) } else { Ok(mesh) }
}

fn read_text(bytes: &[u8], mesh: &mut Mesh) -> Result<(), StlFault> {
    let text = std::str::from_utf8(bytes).map_err(|_| StlFault::NotStl)?;
    let first = text.split_whitespace().next().unwrap_or("");
    if !first.eq_ignore_ascii_case("solid") {
        return Err(StlFault::NotStl);
    }
    let mut corners: Vec<[f64; 3]> = Vec::with_capacity(3);
    let mut open = false;
    for (at, line) in text.lines().enumerate() {
        let fault = StlFault::Text(at + 1);
        let mut words = line.split_whitespace();
        let Some(word) = words.next() else { continue };
        match word.to_ascii_lowercase().as_str() {
            "facet" => {
                if open {
                    return Err(fault);
                }
                open = true;
                corners.clear();
            }
            "vertex" => {
                let mut corner = [0.0; 3];
                for slot in &mut corner {
                    *slot = words.next().and_then(|word| word.parse().ok()).ok_or(fault.clone())?;
                }
                if !open || corners.len() == 3 {
                    return Err(fault);
                }
                corners.push(corner);
            }
            "endfacet" => {
                let corners: [[f64; 3]; 3] = corners.as_slice().try_into().map_err(|_| fault)?;
                push(mesh, corners)?;
                open = false;
            }
            "solid" | "outer" | "endloop" | "endsolid" => {}
            _ => return Err(fault),
        }
    }
    if open { Err(StlFault::Text(text.lines().count())) } else { Ok(()) }
}

fn push(mesh: &mut Mesh, corners: [[f64; 3]; 3]) -> Result<(), StlFault> {
    if corners.iter().flatten().any(|value| !value.is_finite()) {
        return Err(StlFault::NotFinite);
    }
    if corners[0] == corners[1] || corners[1] == corners[2] || corners[0] == corners[2] {
        mesh.n_degenerate += 1;
    } else {
        mesh.triangles.push(corners);
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn broken_bytes_are_faults_not_panics() {
        assert_eq!(read_stl(b""), Err(StlFault::NotStl));
        assert_eq!(read_stl(&[0xff; 200]), Err(StlFault::NotStl));
        assert_eq!(read_stl(b"solid x\nfacet normal 0 0 1\nvertex 0 0\n"), Err(StlFault::Text(3)));
        assert_eq!(read_stl(b"SOLID x\nENDSOLID x\n"), Err(StlFault::Empty));
    }

    #[test]
    fn numbers_must_be_finite() {
        let text = b"solid\nfacet\nvertex 0 0 0\nvertex 1 0 0\nvertex 0 nan 0\nendfacet\nendsolid";
        assert_eq!(read_stl(text), Err(StlFault::NotFinite));
    }
}
