//! Several unknowns that must be found together: damped Newton with exact
//! derivatives from many starts in the box.

use crate::polynomial::is_affine;
use crate::residual::Residuals;
use crate::single::is_range;
use crate::{NotFound, Outcome, Unknown};

/// Starts spread over the box, besides the middle and the corners.
const SPREAD: usize = 64;
const STEPS: usize = 60;
/// Operations after which no new start is tried: only blocks of dozens of unknowns come to it.
const WORK: usize = 1_000_000_000;
/// Starts for equations of the first degree, whose solution does not depend on the start.
const AFFINE_STARTS: usize = 8;

/// How a step of Newton's method changes an unknown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Step {
    /// By a difference.
    Add,
    /// By a factor, where the range has one sign.
    Multiply,
}

/// All solutions seen in the box: one outcome per unknown.
pub(crate) fn search(residuals: &mut Residuals, unknowns: &[Unknown], cancel: &dyn Fn() -> bool) -> Vec<Outcome> {
    let n = unknowns.len();
    let all = |outcome: Outcome| vec![outcome; n];
    if unknowns.iter().any(|unknown| !is_range(unknown.low, unknown.high)) {
        return all(Outcome::nothing(NotFound::BadRange));
    }
    let ends: Vec<(f64, f64)> =
        unknowns.iter().map(|unknown| (unknown.low.max(-f64::MAX), unknown.high.min(f64::MAX))).collect();
    let starts = starts(&ends);
    residuals.usual = usual(residuals, &starts);
    if residuals.usual.iter().any(|usual| usual.is_nan()) {
        return all(Outcome::nothing(NotFound::Undefined));
    }
    let mut newton = Newton::new(residuals, ends);
    let affine = is_affine(newton.residuals.graph(), &newton.residuals.outputs());
    let mut solutions: Vec<Vec<f64>> = Vec::new();
    let (mut singular, mut tried) = (0, 0);
    // Each start twice: steps that add, then steps that multiply, which get along tiny roots of wide ranges.
    let runs = starts.iter().map(|start| (start, Step::Add)).chain(starts.iter().map(|start| (start, Step::Multiply)));
    for (start, kind) in runs {
        if cancel() {
            return all(Outcome::nothing(NotFound::Cancelled));
        }
        tried += 1;
        if newton.work > WORK || (affine && tried > AFFINE_STARTS) {
            break;
        }
        let Some(x) = newton.run(start, kind) else { continue };
        if newton.is_singular(&x) {
            singular += 1;
        } else if affine {
            // Straight lines that are not parallel meet once.
            solutions = vec![x];
            break;
        }
        newton.add(&mut solutions, x);
        // A curve of solutions gives a new one from nearly every start.
        if solutions.len() >= 8 && 2 * singular > solutions.len() {
            return all(Outcome::nothing(NotFound::Stretch));
        }
    }
    if solutions.len() >= 3 && solutions.iter().all(|x| newton.is_singular(x)) {
        return all(Outcome::nothing(NotFound::Stretch));
    }
    solutions.sort_by(|a, b| {
        a.iter().zip(b).map(|(a, b)| a.total_cmp(b)).find(|o| o.is_ne()).unwrap_or(a.len().cmp(&b.len()))
    });
    match solutions.as_slice() {
        [] => newton.nothing(),
        [one] => one.iter().map(|&value| Outcome::Found { value }).collect(),
        _ => (0..n).map(|j| Outcome::Several { values: solutions.iter().map(|x| x[j]).collect() }).collect(),
    }
}

/// Place `u` in 0..1 of a range, evenly or by magnitude.
fn place((low, high): (f64, f64), u: f64, by_magnitude: bool) -> f64 {
    let even = low + u * (high - low);
    if !by_magnitude && even.is_finite() {
        return even.clamp(low, high);
    }
    let far = low.abs().max(high.abs());
    let between = |near: f64, far: f64, u: f64| libm::exp(libm::log(near) + u * (libm::log(far) - libm::log(near)));
    // Sizes below a millionth of the range, or of 1 where the range is beyond all bounds, are left to the even starts.
    let least = |far: f64| (far.min(1e9) * 1e-6).max(1e-300);
    let result = if low > 0.0 {
        between(low, high, u)
    } else if high < 0.0 {
        -between(-high, -low, 1.0 - u)
    } else if far == 0.0 {
        0.0
    } else {
        // Shares of the two signs as the sizes of the ends.
        let share = if low == 0.0 {
            0.0
        } else if high == 0.0 {
            1.0
        } else {
            0.5
        };
        if u < share {
            -between(least(-low).min(-low), -low, 1.0 - u / share)
        } else {
            between(least(high).min(high), high, (u - share) / (1.0 - share))
        }
    };
    if result.is_finite() { result.clamp(low, high) } else { low.max(-1.0).min(high) }
}

/// Middle, corners a little inside, then a sequence that fills the box: the
/// additive recurrence by the powers of the root of g^(n+1) = g + 1 (Roberts'
/// generalisation of the golden ratio; from memory).
fn starts(ends: &[(f64, f64)]) -> Vec<Vec<f64>> {
    let n = ends.len();
    let at = |u: &dyn Fn(usize) -> f64, by_magnitude: bool| -> Vec<f64> {
        ends.iter().enumerate().map(|(j, &range)| place(range, u(j), by_magnitude)).collect()
    };
    let mut result = vec![at(&|_| 0.5, false), at(&|_| 0.5, true)];
    let corners = 1usize << n.min(4);
    for corner in 0..corners {
        result.push(at(&|j| if corner >> (j % 4) & 1 == 1 { 0.95 } else { 0.05 }, false));
    }
    let mut g = 2.0_f64;
    for _ in 0..64 {
        g = libm::pow(1.0 + g, 1.0 / (n as f64 + 1.0));
    }
    let steps: Vec<f64> = (1..=n).map(|j| libm::pow(g, -(j as f64))).collect();
    for k in 1..=SPREAD {
        let u = |j: usize| {
            let t = 0.5 + steps[j] * k as f64;
            t - t.floor()
        };
        result.push(at(&u, k % 2 == 0));
    }
    result
}

/// Usual size of each residual over the starts; NaN where none is defined.
fn usual(residuals: &mut Residuals, starts: &[Vec<f64>]) -> Vec<f64> {
    let mut sizes: Vec<Vec<f64>> = vec![Vec::new(); residuals.count()];
    for start in starts {
        residuals.at(start);
        for (k, sizes) in sizes.iter_mut().enumerate() {
            let f = residuals.residual(k).abs();
            if !f.is_nan() {
                sizes.push(f);
            }
        }
    }
    sizes
        .into_iter()
        .map(|mut sizes| {
            sizes.sort_by(f64::total_cmp);
            sizes.get(sizes.len() * 3 / 4).copied().unwrap_or(f64::NAN)
        })
        .collect()
}

struct Newton<'r> {
    residuals: &'r mut Residuals,
    ends: Vec<(f64, f64)>,
    /// Jacobian, row-wise.
    matrix: Vec<f64>,
    column: Vec<f64>,
    /// Worst relative residual, place, residual of the worst equation.
    closest: Option<(f64, Vec<f64>, f64)>,
    /// Operations so far, roughly.
    work: usize,
}

impl<'r> Newton<'r> {
    fn new(residuals: &'r mut Residuals, ends: Vec<(f64, f64)>) -> Newton<'r> {
        Newton { residuals, ends, matrix: Vec::new(), column: Vec::new(), closest: None, work: 0 }
    }

    fn n(&self) -> usize {
        self.ends.len()
    }

    /// Size of unknown `j` near `x`: what a step is measured against.
    fn size(&self, j: usize, x: &[f64]) -> f64 {
        let (low, high) = self.ends[j];
        let width = (high - low).min(1e9);
        x[j].abs().max(1e-6 * width).max(f64::MIN_POSITIVE)
    }

    fn residuals_at(&mut self, x: &[f64]) -> Option<Vec<f64>> {
        self.residuals.at(x);
        let f: Vec<f64> = (0..self.n()).map(|k| self.residuals.residual(k)).collect();
        f.iter().all(|f| !f.is_nan()).then_some(f)
    }

    /// Jacobian at the point last moved to, columns times the sizes of the unknowns, and the largest entry of each row.
    fn jacobian(&mut self, x: &[f64]) -> Option<Vec<f64>> {
        let n = self.n();
        self.work = self.work.saturating_add(4 * n * self.residuals.graph().len() + n * n * n);
        self.matrix.clear();
        self.matrix.resize(n * n, 0.0);
        let mut column = std::mem::take(&mut self.column);
        for j in 0..n {
            self.residuals.slopes(j, &mut column);
            let size = self.size(j, x);
            for (k, slope) in column.iter().enumerate() {
                self.matrix[k * n + j] = slope * size;
            }
        }
        self.column = column;
        if self.matrix.iter().any(|entry| !entry.is_finite()) {
            return None;
        }
        Some(self.matrix.chunks_exact(n).map(|row| row.iter().fold(0.0_f64, |a, b| a.max(b.abs()))).collect())
    }

    /// A solution reached from `start`, in the box.
    fn run(&mut self, start: &[f64], kind: Step) -> Option<Vec<f64>> {
        let n = self.n();
        let mut x = start.to_vec();
        let mut f = self.residuals_at(&x)?;
        let mut stalled = 0;
        for _ in 0..STEPS {
            if f.iter().all(|&f| f == 0.0) {
                break;
            }
            let Some(rows) = self.jacobian(&x) else { break };
            let weights: Vec<f64> = rows.iter().map(|&row| if row > 0.0 { 1.0 / row } else { 0.0 }).collect();
            let merit = |f: &[f64]| f.iter().zip(&weights).map(|(f, w)| (f * w) * (f * w)).sum::<f64>();
            let mut right: Vec<f64> = f.iter().zip(&weights).map(|(f, w)| -f * w).collect();
            let mut matrix = self.matrix.clone();
            for (row, w) in matrix.chunks_exact_mut(n).zip(&weights) {
                row.iter_mut().for_each(|entry| *entry *= w);
            }
            // A singular matrix gets a touch of damping, so that a step exists (Levenberg's idea).
            if eliminate(&mut matrix, &mut right).is_none_or(|pivot| pivot < 1e-14) {
                right = f.iter().zip(&weights).map(|(f, w)| -f * w).collect();
                let scaled: Vec<f64> = self
                    .matrix
                    .chunks_exact(n)
                    .zip(&weights)
                    .flat_map(|(row, w)| row.iter().map(move |e| e * w))
                    .collect();
                let (mut normal, mut gradient) = (vec![0.0; n * n], vec![0.0; n]);
                for k in 0..n {
                    for i in 0..n {
                        gradient[i] += scaled[k * n + i] * right[k];
                        for j in 0..n {
                            normal[i * n + j] += scaled[k * n + i] * scaled[k * n + j];
                        }
                    }
                }
                for i in 0..n {
                    normal[i * n + i] += 1e-10;
                }
                if eliminate(&mut normal, &mut gradient).is_none() {
                    break;
                }
                right = gradient;
            }
            let step: Vec<f64> = right.iter().enumerate().map(|(j, s)| s * self.size(j, &x)).collect();
            let now = merit(&f);
            let mut share = 1.0;
            let mut moved = None;
            for _ in 0..14 {
                let next: Vec<f64> = (0..n)
                    .map(|j| {
                        let (low, high) = self.ends[j];
                        let moved = if kind == Step::Multiply && (low >= 0.0 || high <= 0.0) && x[j] != 0.0 {
                            x[j] * libm::exp((share * step[j] / x[j]).clamp(-3.0, 3.0))
                        } else {
                            x[j] + share * step[j]
                        };
                        moved.clamp(low, high)
                    })
                    .collect();
                if next == x {
                    break;
                }
                if next.iter().all(|x| !x.is_nan())
                    && let Some(f_next) = self.residuals_at(&next)
                    && merit(&f_next) < now * (1.0 - 1e-4 * share)
                {
                    moved = Some((next, f_next));
                    break;
                }
                share *= 0.5;
            }
            let Some((next, f_next)) = moved else { break };
            // Slow progress for long: a place where the residual is least but not zero.
            stalled = if merit(&f_next) > 0.9 * now { stalled + 1 } else { 0 };
            (x, f) = (next, f_next);
            if stalled > 12 {
                break;
            }
        }
        let x = self.snapped(x);
        self.residuals.at(&x);
        if self.residuals.holds() {
            return Some(x);
        }
        self.note(&x);
        None
    }

    /// Tiny values become zero where the equations hold there as well: rest is exact.
    fn snapped(&mut self, x: Vec<f64>) -> Vec<f64> {
        let mut zeroed = x.clone();
        for (j, value) in zeroed.iter_mut().enumerate() {
            let (low, high) = self.ends[j];
            if low <= 0.0 && high >= 0.0 && value.abs() < 1e-4 * (high - low).min(1e4) {
                *value = 0.0;
            }
        }
        if zeroed != x {
            self.residuals.at(&zeroed);
            if self.residuals.holds_to_rounding() {
                return zeroed;
            }
        }
        x
    }

    fn note(&mut self, x: &[f64]) {
        self.residuals.at(x);
        let mut worst = (0.0_f64, 0.0_f64);
        for k in 0..self.n() {
            let f = self.residuals.residual(k);
            let relative = f.abs() / self.residuals.scale(k).max(f64::MIN_POSITIVE);
            if relative.is_nan() {
                return;
            }
            if relative >= worst.0 {
                worst = (relative, f);
            }
        }
        if self.closest.as_ref().is_none_or(|closest| worst.0 < closest.0) {
            self.closest = Some((worst.0, x.to_vec(), worst.1));
        }
    }

    /// Whether the equations, to first order, do not fix a single point at `x`.
    fn is_singular(&mut self, x: &[f64]) -> bool {
        self.residuals.at(x);
        let Some(rows) = self.jacobian(x) else { return true };
        let n = self.n();
        let mut matrix = self.matrix.clone();
        for (row, size) in matrix.chunks_exact_mut(n).zip(&rows) {
            row.iter_mut().for_each(|entry| *entry /= size.max(f64::MIN_POSITIVE));
        }
        eliminate(&mut matrix, &mut vec![0.0; n]).is_none_or(|pivot| pivot < 1e-9)
    }

    /// Adds `x` unless f64 cannot tell it from one already there.
    fn add(&mut self, solutions: &mut Vec<Vec<f64>>, x: Vec<f64>) {
        for known in solutions.iter_mut() {
            let close = (0..x.len()).all(|j| (x[j] - known[j]).abs() <= 1e-9 * self.size(j, known));
            let joined = close || {
                [0.25, 0.5, 0.75].into_iter().all(|t| {
                    let between: Vec<f64> = x.iter().zip(known.iter()).map(|(x, k)| k + (x - k) * t).collect();
                    self.residuals.at(&between);
                    self.residuals.holds()
                }) && (0..x.len()).all(|j| (x[j] - known[j]).abs() <= 1e-3 * self.size(j, known))
            };
            if joined {
                if self.misfit(&x) < self.misfit(known) {
                    *known = x;
                }
                return;
            }
        }
        solutions.push(x);
    }

    /// Sum of relative residuals.
    fn misfit(&mut self, x: &[f64]) -> f64 {
        self.residuals.at(x);
        (0..self.n()).map(|k| self.residuals.residual(k).abs() / self.residuals.scale(k).max(f64::MIN_POSITIVE)).sum()
    }

    fn nothing(&self) -> Vec<Outcome> {
        (0..self.n())
            .map(|j| match &self.closest {
                Some((_, x, residual)) => {
                    Outcome::NotFound { closest: x.get(j).copied(), residual: *residual, why: NotFound::NoRoot }
                }
                None => Outcome::nothing(NotFound::Undefined),
            })
            .collect()
    }
}

/// Solves in place by Gaussian elimination with row exchanges; the smallest
/// pivot, or `None` if one is zero or not a number.
fn eliminate(matrix: &mut [f64], right: &mut [f64]) -> Option<f64> {
    let n = right.len();
    let mut least = f64::INFINITY;
    for k in 0..n {
        let best = (k..n).max_by(|&a, &b| matrix[a * n + k].abs().total_cmp(&matrix[b * n + k].abs()))?;
        let pivot = matrix[best * n + k];
        if pivot == 0.0 || !pivot.is_finite() {
            return None;
        }
        least = least.min(pivot.abs());
        if best != k {
            for j in 0..n {
                matrix.swap(best * n + j, k * n + j);
            }
            right.swap(best, k);
        }
        for i in k + 1..n {
            let factor = matrix[i * n + k] / pivot;
            if factor != 0.0 {
                for j in k..n {
                    matrix[i * n + j] -= factor * matrix[k * n + j];
                }
                right[i] -= factor * right[k];
            }
        }
    }
    for k in (0..n).rev() {
        let mut sum = right[k];
        for j in k + 1..n {
            sum -= matrix[k * n + j] * right[j];
        }
        right[k] = sum / matrix[k * n + k];
    }
    Some(least)
}
