//! Principal values and directions of a symmetric 3x3 tensor by cyclic Jacobi
//! rotations (Golub and Van Loan, Matrix Computations, section on Jacobi
//! methods; from memory). The trigonometric closed form is not used: it loses
//! half of the digits where two moments are equal, as in every round body.

/// Principal moments, least first, each with its unit direction.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Principal {
    /// Ascending.
    pub moments: [f64; 3],
    /// `axes[k]` belongs to `moments[k]`; its largest component is positive.
    pub axes: [[f64; 3]; 3],
}

/// Principal moments of the tensor with members xx, yy, zz, xy, xz, yz.
///
/// Errors stay below 1e-15 of the largest moment. Any NaN in gives NaN out.
pub fn principal(t: [f64; 6]) -> Principal {
    let mut a = [[t[0], t[3], t[4]], [t[3], t[1], t[5]], [t[4], t[5], t[2]]];
    let mut v = [[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]];
    if t.iter().any(|x| !x.is_finite()) {
        return Principal { moments: [f64::NAN; 3], axes: [[f64::NAN; 3]; 3] };
    }
    // Quadratic convergence: five sweeps suffice, thirty bound the work.
    for _ in 0..30 {
        let off = a[0][1] * a[0][1] + a[0][2] * a[0][2] + a[1][2] * a[1][2];
        if off == 0.0 {
            break;
        }
        for (p, q) in [(0, 1), (0, 2), (1, 2)] {
            let apq = a[p][q];
            if apq == 0.0 {
                continue;
            }
            // Below rounding of both diagonal members: zero it outright.
            if a[p][p].abs() + 0.01 * apq.abs() == a[p][p].abs() && a[q][q].abs() + 0.01 * apq.abs() == a[q][q].abs() {
                a[p][q] = 0.0;
                a[q][p] = 0.0;
                continue;
            }
            let theta = (a[q][q] - a[p][p]) / (2.0 * apq);
            let root = (theta * theta + 1.0).sqrt();
            let tan = if theta >= 0.0 { 1.0 / (theta + root) } else { 1.0 / (theta - root) };
            let cos = 1.0 / (tan * tan + 1.0).sqrt();
            let sin = tan * cos;
            let r = 3 - p - q;
            let (app, aqq, apr, aqr) = (a[p][p], a[q][q], a[p][r], a[q][r]);
            a[p][p] = app - tan * apq;
            a[q][q] = aqq + tan * apq;
            a[p][q] = 0.0;
            a[q][p] = 0.0;
            a[p][r] = cos * apr - sin * aqr;
            a[r][p] = a[p][r];
            a[q][r] = sin * apr + cos * aqr;
            a[r][q] = a[q][r];
            for row in &mut v {
                let (vp, vq) = (row[p], row[q]);
                row[p] = cos * vp - sin * vq;
                row[q] = sin * vp + cos * vq;
            }
        }
    }
    let mut order = [0, 1, 2];
    order.sort_by(|&i, &j| a[i][i].total_cmp(&a[j][j]));
    let mut result = Principal { moments: [0.0; 3], axes: [[0.0; 3]; 3] };
    for (rank, &k) in order.iter().enumerate() {
        result.moments[rank] = a[k][k];
        let mut axis = [v[0][k], v[1][k], v[2][k]];
        let largest = axis.iter().copied().fold(0.0_f64, |acc, x| if x.abs() > acc.abs() + 1e-12 { x } else { acc });
        if largest < 0.0 {
            axis = axis.map(|x| -x);
        }
        result.axes[rank] = axis;
    }
    result
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(tensor: [f64; 6], moments: [f64; 3]) {
        let found = principal(tensor);
        let largest = moments[2].abs();
        for (a, b) in found.moments.iter().zip(moments) {
            assert!((a - b).abs() <= 2e-15 * largest, "{found:?} against {moments:?}");
        }
        let full = |i: usize, j: usize| match (i.min(j), i.max(j)) {
            (0, 0) => tensor[0],
            (1, 1) => tensor[1],
            (2, 2) => tensor[2],
            (0, 1) => tensor[3],
            (0, 2) => tensor[4],
            _ => tensor[5],
        };
        for k in 0..3 {
            let v = found.axes[k];
            for i in 0..3 {
                let product: f64 = (0..3).map(|j| full(i, j) * v[j]).sum();
                assert!((product - found.moments[k] * v[i]).abs() <= 4e-15 * largest, "axis {k} of {found:?}");
            }
        }
    }

    #[test]
    fn diagonal_tensor_is_sorted() {
        check([3.0, 1.0, 2.0, 0.0, 0.0, 0.0], [1.0, 2.0, 3.0]);
    }

    #[test]
    fn coupled_pair() {
        check([2.0, 2.0, 5.0, 1.0, 0.0, 0.0], [1.0, 3.0, 5.0]);
    }

    #[test]
    fn full_tensor_with_equal_moments() {
        // 2 I + u u^T with u = (1, 2, 2): eigenvalues 2, 2, 11.
        check([3.0, 6.0, 6.0, 2.0, 2.0, 4.0], [2.0, 2.0, 11.0]);
    }

    #[test]
    fn not_a_number_ends() {
        assert!(principal([f64::NAN, 1.0, 1.0, 0.0, 0.0, 0.0]).moments[0].is_nan());
    }
}
