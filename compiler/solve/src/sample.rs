//! Where to look: points over a range, and value and derivative there.

use crate::bracket::adjacent;
use crate::residual::Residuals;
use crate::single::edge;

/// Value and derivative of a residual at a point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Sample {
    pub(crate) x: f64,
    pub(crate) f: f64,
    pub(crate) slope: f64,
}

impl Sample {
    pub(crate) fn at(residuals: &mut Residuals, x: f64) -> Sample {
        Sample::at_with(residuals, x, &mut Vec::with_capacity(1))
    }

    /// As [`Sample::at`], with a vector to work in.
    pub(crate) fn at_with(residuals: &mut Residuals, x: f64, column: &mut Vec<f64>) -> Sample {
        residuals.at(&[x]);
        let f = residuals.residual(0);
        residuals.slopes(0, column);
        Sample { x, f, slope: column.first().copied().unwrap_or(f64::NAN) }
    }

    pub(crate) fn defined(&self) -> bool {
        !self.f.is_nan()
    }
}

const UNIFORM: usize = 144;
/// Samples that may be added where the curve is not yet followed.
const MORE: usize = 6000;
/// Ends of undefined stretches that are looked for.
const EDGES: usize = 300;

/// `10^(k/per)`.
fn tenth_power(k: i32, per: i32) -> f64 {
    libm::pow(10.0, f64::from(k) / f64::from(per))
}

/// Points over `low..=high`, ascending: evenly, and closer and closer toward
/// both ends and zero. Magnitudes matter more than distances where a range is wide.
pub(crate) fn points(low: f64, high: f64) -> Vec<f64> {
    let mut points = vec![low, high, 0.0];
    let width = high - low;
    if width.is_finite() {
        points.extend((1..UNIFORM).map(|k| low + width * (k as f64 / UNIFORM as f64)));
        points.extend((1..=30).flat_map(|k| {
            let near = width * tenth_power(-k, 2);
            [low + near, high - near]
        }));
    }
    let far = low.abs().max(high.abs());
    let near = if low > 0.0 || high < 0.0 { low.abs().min(high.abs()) } else { (far * 1e-16).max(1e-300) };
    if width > 1e15 || far / near > 10.0 {
        // Every magnitude that the range holds, the usual ones more closely.
        let (least, most) = (libm::log10(near).floor() as i32, libm::log10(far).ceil() as i32);
        for decade in least..=most {
            let per = if most - least <= 20 {
                8
            } else if (-12..=12).contains(&decade) {
                6
            } else {
                1
            };
            points.extend((0..per).flat_map(|k| {
                let size = tenth_power(decade * per + k, per);
                [size, -size]
            }));
        }
    }
    points.retain(|x| (low..=high).contains(x));
    points.sort_by(f64::total_cmp);
    points.dedup();
    points
}

/// Samples over the range, ascending, closer where the curve asks for it. `None` if cancelled.
pub(crate) fn sample(residuals: &mut Residuals, low: f64, high: f64, cancel: &dyn Fn() -> bool) -> Option<Vec<Sample>> {
    let mut samples = Vec::new();
    for (index, x) in points(low, high).into_iter().enumerate() {
        if index.is_multiple_of(64) && cancel() {
            return None;
        }
        samples.push(Sample::at(residuals, x));
    }
    samples = with_edges(residuals, samples);
    let mut budget = MORE;
    let mut result: Vec<Sample> = Vec::with_capacity(2 * samples.len());
    let mut open: Vec<(Sample, u8)> = Vec::new();
    for next in samples {
        open.push((next, 0));
        while let Some(&(b, depth)) = open.last() {
            let mid = match result.last() {
                Some(&a) if depth < 6 && budget > 0 => between(residuals, a, b, depth),
                _ => None,
            };
            if let Some(mid) = mid {
                budget -= 1;
                if let Some(last) = open.last_mut() {
                    last.1 = depth + 1;
                }
                open.push((mid, depth + 1));
            } else {
                result.push(b);
                open.pop();
            }
        }
        if result.len().is_multiple_of(64) && cancel() {
            return None;
        }
    }
    // Refining may have found more undefined stretches.
    Some(with_edges(residuals, result))
}

/// The sample in the middle, if the curve between `a` and `b` is not what their
/// values and derivatives promise (Hermite's cubic).
fn between(residuals: &mut Residuals, a: Sample, b: Sample, depth: u8) -> Option<Sample> {
    let width = b.x - a.x;
    if !(a.defined() && b.defined() && a.slope.is_finite() && b.slope.is_finite() && width.is_finite()) {
        return None;
    }
    let promised = 0.5 * (a.f + b.f) + 0.125 * width * (a.slope - b.slope);
    // Straight to within a hundredth, and far from zero: nothing can hide here.
    let straight = (0.5 * (a.f + b.f) - promised).abs();
    let least = a.f.abs().min(b.f.abs());
    let bend = (width * (b.slope - a.slope)).abs();
    if depth == 0 && bend < 0.05 * least && straight < 0.01 * least && (a.f > 0.0) == (b.f > 0.0) {
        let rise = (b.f - a.f - 0.5 * width * (a.slope + b.slope)).abs();
        if rise < 0.05 * least {
            return None;
        }
    }
    let x = a.x + 0.5 * width;
    if !(x > a.x && x < b.x) {
        return None;
    }
    let mid = Sample::at(residuals, x);
    let largest = a.f.abs().max(b.f.abs()).max(mid.f.abs());
    // Fast oscillation may meet the promised value by chance, but hardly the slope as well.
    let promised_slope = 1.5 * (b.f - a.f) - 0.25 * width * (a.slope + b.slope);
    let followed =
        (mid.f - promised).abs() <= 0.02 * largest && (width * mid.slope - promised_slope).abs() <= 0.1 * largest;
    (!followed).then_some(mid)
}

/// Adds the last defined points beside undefined stretches, and points towards them.
fn with_edges(residuals: &mut Residuals, samples: Vec<Sample>) -> Vec<Sample> {
    let mut result: Vec<Sample> = Vec::with_capacity(samples.len());
    let mut left = EDGES;
    for next in samples {
        if let Some(&last) = result.last()
            && last.defined() != next.defined()
            && !adjacent(last.x, next.x)
            && left > 0
        {
            left -= 1;
            let (good, bad) = if last.defined() { (last.x, next.x) } else { (next.x, last.x) };
            let end = edge(good, bad, |x| {
                residuals.at(&[x]);
                !residuals.residual(0).is_nan()
            });
            let mut more: Vec<f64> = (1..=12).map(|k| end + (good - end) * tenth_power(-k, 1)).collect();
            more.push(end);
            more.retain(|x| *x > last.x && *x < next.x);
            more.sort_by(f64::total_cmp);
            more.dedup();
            result.extend(more.into_iter().map(|x| Sample::at(residuals, x)));
        }
        result.push(next);
    }
    result
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(low: f64, high: f64) {
        let points = points(low, high);
        assert!(points.len() >= 200 && points.len() <= 1200, "{} points", points.len());
        assert!(points.windows(2).all(|pair| pair[0] < pair[1]), "not ascending");
        assert_eq!((points[0], points[points.len() - 1]), (low, high));
        assert_eq!(points.contains(&0.0), low <= 0.0 && high >= 0.0);
    }

    #[test]
    fn points_cover_every_kind_of_range() {
        check(0.0, 1.0);
        check(-3.0, 7.0);
        check(1e-9, 1e9);
        check(-2.0, -1.0);
        check(0.0, f64::MAX);
        check(-f64::MAX, f64::MAX);
        check(1e-300, 1e-3);
    }
}
