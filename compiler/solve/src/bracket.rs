//! Narrowing a sign change to two neighbouring floats.

/// Place of `x` in the order of all floats; neighbours differ by 1. Both zeros are 0.
pub(crate) fn ordinal(x: f64) -> i64 {
    let bits = x.to_bits() as i64;
    if bits < 0 { i64::MIN.wrapping_sub(bits) } else { bits }
}

/// The float at a place.
pub(crate) fn at_ordinal(place: i64) -> f64 {
    f64::from_bits(if place < 0 { i64::MIN.wrapping_sub(place) as u64 } else { place as u64 })
}

/// The float in the middle, counted in floats: halves any bracket in at most 64 steps.
pub(crate) fn middle(a: f64, b: f64) -> f64 {
    let (a, b) = (i128::from(ordinal(a)), i128::from(ordinal(b)));
    at_ordinal(((a + b) / 2) as i64)
}

/// Whether no float lies strictly between.
pub(crate) fn adjacent(a: f64, b: f64) -> bool {
    (i128::from(ordinal(a)) - i128::from(ordinal(b))).abs() <= 1
}

/// A narrowed bracket, `f` having opposite signs at its ends or being 0 at one of them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Bracket {
    pub(crate) a: f64,
    pub(crate) fa: f64,
    pub(crate) b: f64,
    pub(crate) fb: f64,
}

impl Bracket {
    /// The end nearer to zero.
    pub(crate) fn best(&self) -> f64 {
        if self.fa.abs() <= self.fb.abs() { self.a } else { self.b }
    }
}

/// Narrows `a < b` until the ends are neighbouring floats or one is an exact zero.
/// `None` if `f` is NaN somewhere in between.
///
/// Regula falsi with the correction of Anderson and Björck (BIT 13 (1973)
/// 253-264, from memory), every third step at worst the middle in floats, so
/// that 200 evaluations always do.
pub(crate) fn narrow(bracket: Bracket, mut f: impl FnMut(f64) -> f64) -> Option<Bracket> {
    let Bracket { mut a, mut fa, mut b, mut fb } = bracket;
    // Weights of the secant only; the true values stay in fa and fb.
    let (mut wa, mut wb) = (fa, fb);
    let mut nudge: i128 = 1;
    let mut width = i128::from(ordinal(b)) - i128::from(ordinal(a));
    for step in 0..200 {
        if fa == 0.0 || fb == 0.0 || adjacent(a, b) {
            break;
        }
        let (oa, ob) = (i128::from(ordinal(a)), i128::from(ordinal(b)));
        let force = step % 3 == 2 && {
            let slow = ob - oa > width / 8;
            width = ob - oa;
            slow
        };
        let secant = a + (b - a) * (wa / (wa - wb));
        let c = if force || !(secant >= a && secant <= b) {
            middle(a, b)
        } else {
            // Never an end: a step a little past the estimate closes the bracket from the other side.
            let place = i128::from(ordinal(secant));
            let clamped = place.clamp(oa + 1, ob - 1);
            if clamped - oa < nudge || ob - clamped < nudge {
                let close_to_a = clamped - oa <= ob - clamped;
                let moved = if close_to_a { oa + nudge } else { ob - nudge };
                nudge *= 2;
                at_ordinal(moved.clamp(oa + 1, ob - 1) as i64)
            } else {
                at_ordinal(clamped as i64)
            }
        };
        let fc = f(c);
        if fc.is_nan() {
            return None;
        }
        let factor = |replaced: f64| {
            let m = 1.0 - fc / replaced;
            if m > 0.0 { m } else { 0.5 }
        };
        if (fc > 0.0) == (fa > 0.0) && fc != 0.0 {
            wb *= factor(fa);
            (a, fa, wa) = (c, fc, fc);
        } else {
            wa *= factor(fb);
            (b, fb, wb) = (c, fc, fc);
        }
    }
    Some(Bracket { a, fa, b, fb })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(a: f64, b: f64, root: f64, f: impl Fn(f64) -> f64) {
        let mut count = 0;
        let start = Bracket { a, fa: f(a), b, fb: f(b) };
        let found = narrow(start, |x| {
            count += 1;
            f(x)
        });
        let found = found.expect("defined everywhere");
        assert!(adjacent(found.a, found.b) || found.fa == 0.0 || found.fb == 0.0, "{found:?}");
        assert!((found.best() - root).abs() <= 2.0 * f64::EPSILON * root.abs(), "{found:?} after {count}");
        assert!(count <= 200, "{count} evaluations");
    }

    #[test]
    fn smooth_and_nasty_functions() {
        check(0.0, 2.0, 2.0_f64.sqrt(), |x| x * x - 2.0);
        check(-1e300, 1e300, 3.0, |x| x - 3.0);
        check(0.0, 1.0, 1e-200, |x| x - 1e-200);
        check(0.0, 10.0, 1.0, |x| (x - 1.0) * (x - 1.0) * (x - 1.0));
        check(0.0, 100.0, 1.0, |x| libm::exp(x) - libm::exp(1.0));
        check(-5.0, 7.0, 0.1, |x| if x < 0.1 { -1.0 } else { 1e9 });
    }

    #[test]
    fn ordinals_go_through_zero() {
        for x in [0.0, -0.0, 1.0, -1.0, 5e-324, -5e-324, f64::MAX, f64::MIN] {
            assert_eq!(at_ordinal(ordinal(x)), x);
        }
        assert!(adjacent(-5e-324, 0.0) && adjacent(0.0, 5e-324));
        assert!(ordinal(-2.0) < ordinal(-1.0) && ordinal(-1.0) < ordinal(0.5));
    }

    #[test]
    fn a_gap_inside_is_told() {
        let f = |x: f64| if (0.4..0.6).contains(&x) { f64::NAN } else { x - 0.5 };
        assert_eq!(narrow(Bracket { a: 0.0, fa: -0.5, b: 1.0, fb: 0.5 }, f), None);
    }
}
