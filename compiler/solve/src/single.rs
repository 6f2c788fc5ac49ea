//! One unknown in its range.
//!
//! Polynomials of low degree are solved outright. Everything else is sampled,
//! value and derivative, over the whole range; sign changes are narrowed to
//! neighbouring floats, places where the curve turns towards zero and away
//! again are followed to the turning point. A jump or a pole changes sign too:
//! there the equation does not hold, and that alone decides.

use crate::bracket::{Bracket, adjacent, middle, narrow, ordinal};
use crate::pieces::{Inside, candidates};
use crate::residual::Residuals;
use crate::sample::{Sample, sample};
use crate::signs::sign_changes;
use crate::{NotFound, Outcome};

/// Whether there is any number from `low` to `high`; a NaN end is no range.
pub(crate) fn is_range(low: f64, high: f64) -> bool {
    low <= high && low < f64::INFINITY && high > f64::NEG_INFINITY
}

/// All roots in `low..=high`.
pub(crate) fn search(residuals: &mut Residuals, low: f64, high: f64, cancel: &dyn Fn() -> bool) -> Outcome {
    if !is_range(low, high) {
        return Outcome::nothing(NotFound::BadRange);
    }
    let (low, high) = (low.max(-f64::MAX), high.min(f64::MAX));
    if let Some(outcome) = outright(residuals, low, high).or_else(|| by_signs(residuals, low, high)) {
        return outcome;
    }
    let Some(samples) = sample(residuals, low, high, cancel) else { return Outcome::nothing(NotFound::Cancelled) };
    let mut sizes: Vec<f64> = samples.iter().filter(|s| s.defined()).map(|s| s.f.abs()).collect();
    sizes.sort_by(f64::total_cmp);
    let Some(&usual) = sizes.get(sizes.len() * 3 / 4) else { return Outcome::nothing(NotFound::Undefined) };
    residuals.usual = vec![usual];
    if is_flat(&samples) {
        return Outcome::nothing(NotFound::Stretch);
    }
    let mut search = Search { residuals, roots: Vec::new(), closest: (f64::INFINITY, f64::NAN, f64::NAN) };
    for (index, s) in samples.iter().enumerate() {
        if !s.defined() {
            continue;
        }
        search.note(s.x, s.f);
        let at_gap = [index.wrapping_sub(1), index + 1]
            .into_iter()
            .any(|neighbour| samples.get(neighbour).is_none_or(|other| !other.defined()));
        if (s.f == 0.0 || s.x == 0.0 || at_gap) && search.holds_to_rounding(s.x) {
            search.roots.push(s.x);
        }
    }
    for pair in samples.windows(2) {
        if let [a, b] = pair
            && a.defined()
            && b.defined()
        {
            if cancel() {
                return Outcome::nothing(NotFound::Cancelled);
            }
            search.interval(*a, *b);
        }
    }
    search.outcome()
}

/// Equations whose roots are known in closed form: `None` if it is not one, or not one that is clear.
fn outright(residuals: &mut Residuals, low: f64, high: f64) -> Option<Outcome> {
    let (left, right) = residuals.sides(0);
    let candidates = candidates(residuals.graph(), left, right, low, high)?;
    let mut closest = (f64::INFINITY, f64::NAN, f64::NAN);
    let mut usual = 0.0_f64;
    for x in [low, 0.5 * low + 0.5 * high, high] {
        residuals.at(&[x]);
        let f = residuals.residual(0);
        usual = usual.max(f.abs());
        if f.abs() < closest.0 {
            closest = (f.abs(), x, f);
        }
    }
    residuals.usual = vec![usual];
    let mut found: Vec<f64> = Vec::new();
    for (root, inside) in candidates {
        let x = polish(residuals, root);
        // An end of the range belongs to it, and so does a root that only rounding puts beyond.
        let nearest = x.clamp(low, high);
        residuals.at(&[nearest]);
        let beyond = (i128::from(ordinal(x)) - i128::from(ordinal(nearest))).abs();
        let good = match beyond {
            0 => residuals.holds(),
            1..=64 => residuals.holds_to_rounding(),
            _ => false,
        };
        if !good && inside == Inside::Clearly {
            return None;
        }
        // Neighbouring pieces may share a root.
        if good && found.last().is_none_or(|last| (nearest - last).abs() > 1e-9 * nearest.abs()) {
            found.push(nearest);
        }
    }
    Some(match found.as_slice() {
        // The closest place may lie inside: the search sees it.
        [] => return nothing_between(residuals, low, high),
        [value] => Outcome::Found { value: *value },
        _ => Outcome::Several { values: found },
    })
}

/// No root: the closest place is an end if the residual runs one way.
fn nothing_between(residuals: &mut Residuals, low: f64, high: f64) -> Option<Outcome> {
    let mut column = Vec::new();
    let [a, b] = [low, high].map(|x| Sample::at_with(residuals, x, &mut column));
    let one_way = a.slope * b.slope > 0.0 && a.defined() && b.defined();
    let nearest = if a.f.abs() <= b.f.abs() { a } else { b };
    one_way.then_some(Outcome::NotFound { closest: Some(nearest.x), residual: nearest.f, why: NotFound::NoRoot })
}

/// Sums of powers with at most one root: the ends of the range decide. `None` where they do not.
fn by_signs(residuals: &mut Residuals, low: f64, high: f64) -> Option<Outcome> {
    if low < 0.0 {
        return None;
    }
    let (left, right) = residuals.sides(0);
    if sign_changes(residuals.graph(), left, right)? > 1 {
        return None;
    }
    let mut f = |x: f64| {
        residuals.at(&[x]);
        residuals.residual(0)
    };
    let (f_low, f_high) = (f(low), f(high));
    // An exact zero at an end (rest) may have another root beside it; an end may be undefined.
    if f_low * f_high > 0.0 && f_low.abs().min(f_high.abs()) > 1e-9 * f_low.abs().max(f_high.abs()) {
        return nothing_between(residuals, low, high);
    }
    let opposite = f_low * f_high < 0.0;
    if !opposite {
        return None;
    }
    let end = narrow(Bracket { a: low, fa: f_low, b: high, fb: f_high }, f)?;
    residuals.usual = vec![f_low.abs().min(f_high.abs())];
    let value = end.best();
    residuals.at(&[value]);
    residuals.holds().then_some(Outcome::Found { value })
}

/// Newton's method while the residual shrinks.
fn polish(residuals: &mut Residuals, start: f64) -> f64 {
    let mut column = Vec::new();
    let mut x = start;
    residuals.at(&[x]);
    let mut f = residuals.residual(0);
    for _ in 0..8 {
        residuals.slopes(0, &mut column);
        let next = x - f / column.first().copied().unwrap_or(f64::NAN);
        if f == 0.0 || !next.is_finite() || next == x {
            break;
        }
        residuals.at(&[next]);
        let f_next = residuals.residual(0);
        let shrinks = f_next.abs() < f.abs();
        if !shrinks {
            break;
        }
        (x, f) = (next, f_next);
    }
    x
}

/// Whether the residual is exactly zero, and does not move, at five points in a row.
fn is_flat(samples: &[Sample]) -> bool {
    let flat = |s: &Sample| s.f == 0.0 && s.slope == 0.0;
    samples.windows(5).any(|run| run.iter().all(flat))
        || (samples.len() < 5 && samples.iter().all(flat) && samples.len() > 1)
}

struct Search<'r> {
    residuals: &'r mut Residuals,
    roots: Vec<f64>,
    /// Size of the residual, place, residual.
    closest: (f64, f64, f64),
}

impl Search<'_> {
    fn f(&mut self, x: f64) -> f64 {
        self.residuals.at(&[x]);
        self.residuals.residual(0)
    }

    fn f_and_slope(&mut self, x: f64) -> Sample {
        Sample::at(self.residuals, x)
    }

    fn note(&mut self, x: f64, f: f64) {
        if f.abs() < self.closest.0 {
            self.closest = (f.abs(), x, f);
        }
    }

    fn holds(&mut self, x: f64) -> bool {
        self.residuals.at(&[x]);
        self.residuals.holds()
    }

    fn holds_to_rounding(&mut self, x: f64) -> bool {
        self.residuals.at(&[x]);
        self.residuals.holds_to_rounding()
    }

    /// Roots strictly between two neighbouring samples.
    fn interval(&mut self, a: Sample, b: Sample) {
        // Beside an exact zero the slope says on which side the curve goes on.
        let a = if a.f == 0.0 { self.beside(a, b.x, a.slope > 0.0) } else { Some(a) };
        let b = if b.f == 0.0 { a.and_then(|a| self.beside(b, a.x, b.slope < 0.0)) } else { Some(b) };
        let (Some(a), Some(b)) = (a, b) else { return };
        if (a.f > 0.0) != (b.f > 0.0) {
            self.crossing(a, b);
        } else {
            self.dip(a, b);
        }
    }

    /// A point beside the zero `zero` towards `far` where the residual has the sign its slope tells.
    fn beside(&mut self, zero: Sample, far: f64, positive: bool) -> Option<Sample> {
        if zero.slope == 0.0 || zero.slope.is_nan() {
            return None;
        }
        let mut share = 0.25;
        for _ in 0..24 {
            let s = self.f_and_slope(zero.x + (far - zero.x) * share);
            if s.defined() && s.f != 0.0 && (s.f > 0.0) == positive {
                return Some(s);
            }
            share *= 0.25;
        }
        None
    }

    /// A sign change: a root if the equation holds where it happens.
    fn crossing(&mut self, a: Sample, b: Sample) {
        let start = Bracket { a: a.x, fa: a.f, b: b.x, fb: b.f };
        let Some(end) = narrow(start, |x| self.f(x)) else {
            // Undefined in between: the two parts end there, each perhaps in a root.
            for x in self.gap_ends(a.x, b.x) {
                if self.holds_to_rounding(x) {
                    self.roots.push(x);
                }
            }
            return;
        };
        let x = end.best();
        let f = self.f(x);
        // At a pole the residual grows on the way in.
        let shrinks = f.abs() <= a.f.abs().min(b.f.abs());
        if shrinks && self.holds(x) {
            self.note(x, f);
            self.roots.push(x);
        }
    }

    /// Last defined points from both sides of an undefined stretch between `a` and `b`.
    fn gap_ends(&mut self, a: f64, b: f64) -> Vec<f64> {
        let (mut low, mut high) = (a, b);
        let mut hole = None;
        for _ in 0..64 {
            let m = middle(low, high);
            let f = self.f(m);
            if f.is_nan() {
                hole = Some(m);
                break;
            }
            // Towards the sign change, as narrowing went.
            let f_low = self.f(low);
            if (f > 0.0) == (f_low > 0.0) { low = m } else { high = m }
        }
        let Some(hole) = hole else { return Vec::new() };
        [a, b].into_iter().map(|end| edge(end, hole, |x| !self.f(x).is_nan())).collect()
    }

    /// Same sign at both ends: is there a turning point that reaches zero?
    fn dip(&mut self, a: Sample, b: Sample) {
        let sign = if a.f > 0.0 { 1.0 } else { -1.0 };
        if !(sign * a.slope < 0.0 && sign * b.slope > 0.0) {
            return;
        }
        let mut beyond: Option<Sample> = None;
        let mut lowest = if a.f.abs() <= b.f.abs() { a } else { b };
        let start = Bracket { a: a.x, fa: a.slope, b: b.x, fb: b.slope };
        let end = narrow(start, |x| {
            let s = self.f_and_slope(x);
            if s.f.abs() < lowest.f.abs() {
                lowest = s;
            }
            if s.defined() && sign * s.f < 0.0 {
                beyond.get_or_insert(s);
                // Stop: two sign changes are better than a turning point.
                return 0.0;
            }
            s.slope
        });
        if let Some(beyond) = beyond {
            self.crossing(a, beyond);
            self.crossing(beyond, b);
            return;
        }
        let mut candidates = vec![lowest.x];
        if let Some(end) = end {
            candidates.extend([end.a, end.b]);
        }
        for x in candidates {
            let f = self.f(x);
            self.note(x, f);
            if self.holds_to_rounding(x) {
                self.roots.push(x);
            }
        }
    }

    /// Roots that f64 cannot tell apart become one.
    fn merged(&mut self) -> Vec<f64> {
        let mut roots = std::mem::take(&mut self.roots);
        roots.sort_by(f64::total_cmp);
        roots.dedup();
        let mut clusters: Vec<Vec<f64>> = Vec::new();
        for root in roots {
            let joins = match clusters.last().and_then(|cluster| cluster.last()) {
                Some(&last) => {
                    adjacent(last, root)
                        || [0.25, 0.5, 0.75].into_iter().all(|t| self.holds_to_rounding(last + (root - last) * t))
                }
                None => false,
            };
            match clusters.last_mut() {
                Some(cluster) if joins => cluster.push(root),
                _ => clusters.push(vec![root]),
            }
        }
        clusters.into_iter().filter_map(|cluster| self.one_of(&cluster)).collect()
    }

    /// The best of roots that belong together: the turning point if there is one between, else the smallest residual.
    fn one_of(&mut self, cluster: &[f64]) -> Option<f64> {
        let (&first, &last) = (cluster.first()?, cluster.last()?);
        if cluster.len() > 1 {
            // Rest is exactly zero.
            if first <= 0.0 && last >= 0.0 && self.holds_to_rounding(0.0) {
                return Some(0.0);
            }
            let (a, b) = (self.f_and_slope(first), self.f_and_slope(last));
            if a.slope * b.slope < 0.0 {
                let start = Bracket { a: first, fa: a.slope, b: last, fb: b.slope };
                if let Some(end) = narrow(start, |x| self.f_and_slope(x).slope)
                    && self.holds_to_rounding(end.best())
                {
                    return Some(end.best());
                }
            }
        }
        let mut best: Option<(f64, f64, f64)> = None;
        for &x in cluster {
            let s = self.f_and_slope(x);
            let rank = (s.f.abs(), s.slope.abs(), x);
            if best.is_none_or(|best| (rank.0, rank.1) < (best.0, best.1)) {
                best = Some(rank);
            }
        }
        best.map(|best| best.2)
    }

    fn outcome(mut self) -> Outcome {
        let values = self.merged();
        match values.as_slice() {
            [] => {
                let (size, x, f) = self.closest;
                let closest = size.is_finite().then_some(x);
                Outcome::NotFound { closest, residual: f, why: NotFound::NoRoot }
            }
            [value] => Outcome::Found { value: *value },
            _ => Outcome::Several { values },
        }
    }
}

/// The last point with the property of `good` on the way to `bad`, which has it not.
pub(crate) fn edge(good: f64, bad: f64, mut has: impl FnMut(f64) -> bool) -> f64 {
    let (mut good, mut bad) = (good, bad);
    for _ in 0..70 {
        if adjacent(good, bad) {
            break;
        }
        let m = middle(good, bad);
        if has(m) { good = m } else { bad = m }
    }
    good
}
