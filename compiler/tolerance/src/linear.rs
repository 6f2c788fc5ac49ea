//! Small linear systems, in f64 and with intervals.
//!
//! Knows matrices only.

use pintle_interval::Interval;

/// The inverse of a square matrix, row by row, by elimination with scaled rows; None where it is singular to rounding.
pub(crate) fn inverse(matrix: &[f64], n: usize) -> Option<Vec<f64>> {
    let mut work: Vec<Vec<f64>> = Vec::with_capacity(n);
    for (i, row) in matrix.chunks_exact(n).enumerate() {
        let scale = row.iter().fold(0.0_f64, |most, entry| most.max(entry.abs()));
        if scale == 0.0 || !scale.is_finite() {
            return None;
        }
        let unit = (0..n).map(|j| if i == j { 1.0 / scale } else { 0.0 });
        work.push(row.iter().map(|entry| entry / scale).chain(unit).collect());
    }
    for column in 0..n {
        let pivot = (column..n).max_by(|&a, &b| work[a][column].abs().total_cmp(&work[b][column].abs()))?;
        if work[pivot][column].abs() < 1e-14 {
            return None;
        }
        work.swap(column, pivot);
        let lead = work[column].clone();
        for (i, row) in work.iter_mut().enumerate() {
            let factor = row[column] / lead[column];
            if i == column {
                row.iter_mut().for_each(|entry| *entry /= lead[column]);
            } else if factor != 0.0 {
                row.iter_mut().zip(&lead).for_each(|(entry, lead)| *entry -= factor * lead);
            }
        }
    }
    let result: Vec<f64> = work.into_iter().flat_map(|row| row.into_iter().skip(n)).collect();
    result.iter().all(|entry| entry.is_finite()).then_some(result)
}

/// All `x` with `A x = b` for some A and b inside the given ones; None where that is not bounded.
///
/// `near` is about the inverse of A. With C = near * A close to the identity, the size of x is bounded by
/// that of near * b over 1 - |I - C|; sweeps of Gauss-Seidel narrow it from there.
pub(crate) fn solve(a: &[Interval], b: &[Interval], near: &[f64], n: usize) -> Option<Vec<Interval>> {
    let mut c = vec![Interval::ZERO; n * n];
    let mut right = vec![Interval::ZERO; n];
    for i in 0..n {
        for k in 0..n {
            let factor = near[i * n + k];
            right[i] = right[i] + b[k].scaled(factor);
            for j in 0..n {
                c[i * n + j] = c[i * n + j] + a[k * n + j].scaled(factor);
            }
        }
    }
    let mut off = 0.0_f64;
    for i in 0..n {
        let row = (0..n).map(|j| (c[i * n + j] - if i == j { Interval::ONE } else { Interval::ZERO }).magnitude());
        off = off.max(row.sum::<f64>());
    }
    let off = Interval::point(off) * Interval { lo: 1.0, hi: 1.0 + 1e-12 };
    if !(off.hi < 1.0) {
        return None;
    }
    let most = right.iter().fold(0.0_f64, |most, entry| most.max(entry.magnitude()));
    let bound = (Interval::point(most) / (Interval::ONE - off)).hi;
    if !bound.is_finite() {
        return None;
    }
    let mut x = vec![Interval { lo: -bound, hi: bound }; n];
    for _ in 0..3 {
        for i in 0..n {
            let mut rest = right[i];
            for j in (0..n).filter(|&j| j != i) {
                rest = rest - c[i * n + j] * x[j];
            }
            let next = (rest / c[i * n + i]).meet(x[i]);
            if next.is_empty() {
                return None;
            }
            x[i] = next;
        }
    }
    Some(x)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_inverse_undoes_the_matrix() {
        let matrix = [4.0, -2.0, 1.0, 1e6, 3e6, 0.0, 0.5, 0.25, 2.0];
        let found = inverse(&matrix, 3).unwrap();
        for i in 0..3 {
            for j in 0..3 {
                let entry: f64 = (0..3).map(|k| matrix[i * 3 + k] * found[k * 3 + j]).sum();
                let expected = if i == j { 1.0 } else { 0.0 };
                assert!((entry - expected).abs() < 1e-9, "{i} {j}: {entry}");
            }
        }
        assert_eq!(inverse(&[1.0, 2.0, 2.0, 4.0], 2), None);
        assert_eq!(inverse(&[0.0, 0.0, 1.0, 1.0], 2), None);
    }

    #[test]
    fn solutions_of_all_systems_inside_are_held() {
        let around = |x: f64| Interval::new(x - 0.01, x + 0.01);
        let (a, b) = ([3.0, 1.0, -1.0, 2.0], [5.0, 1.0]);
        let near = inverse(&a, 2).unwrap();
        let found = solve(&a.map(around), &b.map(around), &near, 2).unwrap();
        for corner in 0..64 {
            let end = |k: usize, x: f64| x + if corner >> k & 1 == 1 { 0.01 } else { -0.01 };
            let m = [end(0, a[0]), end(1, a[1]), end(2, a[2]), end(3, a[3])];
            let r = [end(4, b[0]), end(5, b[1])];
            let determinant = m[0] * m[3] - m[1] * m[2];
            let x = [(r[0] * m[3] - m[1] * r[1]) / determinant, (m[0] * r[1] - m[2] * r[0]) / determinant];
            assert!(found[0].contains(x[0]) && found[1].contains(x[1]), "{x:?} is not in {found:?}");
        }
        assert!(found.iter().all(|it| it.width() < 0.05), "{found:?}");
    }

    #[test]
    fn a_matrix_that_may_be_singular_bounds_nothing() {
        let wide = Interval::new(-1.0, 1.0);
        assert_eq!(solve(&[wide], &[Interval::ONE], &[1.0], 1), None);
    }
}
