//! Elementary functions: monotone pieces of libm's, widened.

use crate::rounding::{Toward, Toward::Above, Toward::Below, pad};
use crate::{HALF_PI, Interval, PI};

/// More than the worst error of libm seen, in ulps.
const ULPS: u32 = 3;
/// The same for the hyperbolic functions.
const ULPS_HYPERBOLIC: u32 = 6;

/// A rising function over all of `x`, exact at `exact` where it has the value `there`.
#[inline]
fn rising(x: Interval, ulps: u32, (exact, there): (f64, f64), f: impl Fn(f64) -> f64) -> Interval {
    if x.is_empty() {
        return x;
    }
    let end = |x: f64, toward: Toward| {
        if x == exact {
            return there;
        }
        let value = f(x);
        if value.is_infinite() && x.is_infinite() { value } else { pad(value, ulps, toward) }
    };
    Interval { lo: end(x.lo, Below), hi: end(x.hi, Above) }
}

const POSITIVE: Interval = Interval { lo: 0.0, hi: f64::INFINITY };
const MINUS_ONE_TO_ONE: Interval = Interval { lo: -1.0, hi: 1.0 };

pub(crate) fn cbrt(x: Interval) -> Interval {
    rising(x, ULPS, (0.0, 0.0), libm::cbrt)
}

/// Whether `x` may hold a point `place + k step` for a whole number k.
fn may_meet(x: Interval, place: Interval, step: Interval) -> bool {
    let turns = (x - place) / step;
    !turns.is_bounded() || turns.hi.floor() >= turns.lo.ceil()
}

impl Interval {
    /// e to this power.
    pub fn exp(self) -> Interval {
        rising(self, ULPS, (0.0, 1.0), libm::exp).meet(POSITIVE)
    }

    /// Natural logarithm of what is positive in it.
    pub fn ln(self) -> Interval {
        logarithm(self, libm::log)
    }

    /// Logarithm to base 10 of what is positive in it.
    pub fn log10(self) -> Interval {
        logarithm(self, libm::log10)
    }

    /// Sine.
    pub fn sin(self) -> Interval {
        wave(self, HALF_PI, libm::sin)
    }

    /// Cosine.
    pub fn cos(self) -> Interval {
        wave(self, Interval::ZERO, libm::cos)
    }

    /// Whether the tangent has no pole in it.
    pub fn is_tan_defined(self) -> bool {
        !may_meet(self, HALF_PI, PI)
    }

    /// Tangent; everything where a pole may lie in it.
    pub fn tan(self) -> Interval {
        if self.is_empty() {
            self
        } else if self.is_tan_defined() {
            rising(self, ULPS, (0.0, 0.0), libm::tan)
        } else {
            Interval::ENTIRE
        }
    }

    /// Arc sine of what lies in -1..1.
    pub fn asin(self) -> Interval {
        rising(self.meet(MINUS_ONE_TO_ONE), ULPS, (0.0, 0.0), libm::asin)
    }

    /// Arc cosine of what lies in -1..1.
    pub fn acos(self) -> Interval {
        let x = self.meet(MINUS_ONE_TO_ONE);
        -rising(x, ULPS, (1.0, 0.0), |x| -libm::acos(x))
    }

    /// Arc tangent.
    pub fn atan(self) -> Interval {
        rising(self, ULPS, (0.0, 0.0), libm::atan)
    }

    /// Whether the angle of the points (other, self) is defined and does not jump.
    pub fn is_atan2_defined(self, other: Interval) -> bool {
        other.lo > 0.0 || self.lo > 0.0 || self.hi < 0.0
    }

    /// Angle of the points with this ordinate and the other abscissa.
    pub fn atan2(self, other: Interval) -> Interval {
        let (y, x) = (self, other);
        if y.is_empty() || x.is_empty() {
            return Interval::EMPTY;
        }
        if x.lo > 0.0 {
            return (y / x).atan();
        }
        if y.lo > 0.0 {
            return HALF_PI - (x / y).atan();
        }
        if y.hi < 0.0 {
            return -HALF_PI - (x / y).atan();
        }
        // A zero ordinate may be the negative zero of f64, whose angle is -pi.
        Interval { lo: -PI.hi, hi: PI.hi }
    }

    /// Hyperbolic sine.
    pub fn sinh(self) -> Interval {
        rising(self, ULPS_HYPERBOLIC, (0.0, 0.0), libm::sinh)
    }

    /// Hyperbolic cosine.
    pub fn cosh(self) -> Interval {
        rising(self.abs(), ULPS_HYPERBOLIC, (0.0, 1.0), libm::cosh).meet(Interval { lo: 1.0, hi: f64::INFINITY })
    }

    /// Hyperbolic tangent.
    pub fn tanh(self) -> Interval {
        rising(self, ULPS_HYPERBOLIC, (0.0, 0.0), libm::tanh).meet(MINUS_ONE_TO_ONE)
    }
}

fn logarithm(x: Interval, f: impl Fn(f64) -> f64) -> Interval {
    if x.hi <= 0.0 {
        return Interval::EMPTY;
    }
    // The logarithm of 0 is the open lower end: minus infinity.
    let x = x.meet(POSITIVE);
    let upper = rising(x, ULPS, (1.0, 0.0), &f);
    if x.lo <= 0.0 { Interval { lo: f64::NEG_INFINITY, hi: upper.hi } } else { upper }
}

/// A wave with its crests at `crest` and every 2 pi, troughs half-way between.
fn wave(x: Interval, crest: Interval, f: impl Fn(f64) -> f64) -> Interval {
    if x.is_empty() {
        return x;
    }
    let full = Interval { lo: PI.lo * 2.0, hi: PI.hi * 2.0 };
    if x.width() >= full.lo || !x.is_bounded() {
        return MINUS_ONE_TO_ONE;
    }
    let (a, b) = (f(x.lo), f(x.hi));
    let bound = |value: f64, at: f64, toward: Toward| {
        // sin 0 and cos 0 are exact.
        if at == 0.0 { value } else { pad(value, ULPS, toward) }
    };
    let hi = if may_meet(x, crest, full) { 1.0 } else { bound(a, x.lo, Above).max(bound(b, x.hi, Above)) };
    let lo = if may_meet(x, crest - PI, full) { -1.0 } else { bound(a, x.lo, Below).min(bound(b, x.hi, Below)) };
    Interval { lo, hi }.meet(MINUS_ONE_TO_ONE)
}
