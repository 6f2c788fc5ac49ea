//! Integrals over the body inside a set of triangles, by signed tetrahedra.

use crate::vector::{Point, cross, dot, length, minus};

/// Signed volume, first and second moments at unit density about one point.
#[derive(Clone, Copy, Debug, Default)]
pub(crate) struct Moments {
    pub volume: f64,
    pub first: [f64; 3],
    /// xx, yy, zz, xy, xz, yz.
    pub second: [f64; 6],
}

/// Which coordinates the members of `second` multiply.
pub(crate) const PAIRS: [(usize, usize); 6] = [(0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)];

impl Moments {
    /// Tetrahedra between `from` and each triangle. For a tetrahedron with
    /// corners 0, a, b, c of volume V, the integral of x y is
    /// V/20 (sum of the corners' x y + (sum of x)(sum of y)):
    /// Tonon, Journal of Mathematics and Statistics 1 (2005) 8-11, from memory.
    pub fn about(from: Point, triangles: impl Iterator<Item = [Point; 3]>) -> Moments {
        let mut result = Moments::default();
        for triangle in triangles {
            let [a, b, c] = triangle.map(|corner| minus(corner, from));
            let v = dot(a, cross(b, c)) / 6.0;
            let sum: Point = std::array::from_fn(|at| a[at] + b[at] + c[at]);
            result.volume += v;
            for (member, sum) in result.first.iter_mut().zip(sum) {
                *member += v / 4.0 * sum;
            }
            for (member, (i, j)) in PAIRS.into_iter().enumerate() {
                result.second[member] += v / 20.0 * (sum[i] * sum[j] + a[i] * a[j] + b[i] * b[j] + c[i] * c[j]);
            }
        }
        result
    }
}

pub(crate) fn area([a, b, c]: [Point; 3]) -> f64 {
    length(cross(minus(b, a), minus(c, a))) / 2.0
}
