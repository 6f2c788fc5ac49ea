//! Sums, products, quotients, powers, and the choices between values.

use crate::rounding::{self, Toward, Toward::Above, Toward::Below, add, divide, multiply};
use crate::{Interval, elementary};
use std::ops::{Add, Div, Mul, Neg, Sub};

impl Neg for Interval {
    type Output = Interval;
    #[inline]
    fn neg(self) -> Interval {
        Interval { lo: -self.hi, hi: -self.lo }
    }
}

impl Add for Interval {
    type Output = Interval;
    #[inline]
    fn add(self, other: Interval) -> Interval {
        if self.is_empty() || other.is_empty() {
            return Interval::EMPTY;
        }
        Interval { lo: add(self.lo, other.lo, Below), hi: add(self.hi, other.hi, Above) }
    }
}

impl Sub for Interval {
    type Output = Interval;
    #[inline]
    fn sub(self, other: Interval) -> Interval {
        self + -other
    }
}

impl Mul for Interval {
    type Output = Interval;
    #[inline]
    fn mul(self, other: Interval) -> Interval {
        if self.is_empty() || other.is_empty() {
            return Interval::EMPTY;
        }
        let (a, b) = (self, other);
        let make = |lo: (f64, f64), hi: (f64, f64)| Interval {
            lo: multiply(lo.0, lo.1, Below),
            hi: multiply(hi.0, hi.1, Above),
        };
        if a.lo >= 0.0 {
            if b.lo >= 0.0 {
                make((a.lo, b.lo), (a.hi, b.hi))
            } else if b.hi <= 0.0 {
                make((a.hi, b.lo), (a.lo, b.hi))
            } else {
                make((a.hi, b.lo), (a.hi, b.hi))
            }
        } else if a.hi <= 0.0 {
            if b.lo >= 0.0 {
                make((a.lo, b.hi), (a.hi, b.lo))
            } else if b.hi <= 0.0 {
                make((a.hi, b.hi), (a.lo, b.lo))
            } else {
                make((a.lo, b.hi), (a.lo, b.lo))
            }
        } else if b.lo >= 0.0 {
            make((a.lo, b.hi), (a.hi, b.hi))
        } else if b.hi <= 0.0 {
            make((a.hi, b.lo), (a.lo, b.lo))
        } else {
            make((a.lo, b.hi), (a.lo, b.lo)).hull(make((a.hi, b.lo), (a.hi, b.hi)))
        }
    }
}

impl Div for Interval {
    type Output = Interval;
    /// The hull of all quotients by what is not 0.
    fn div(self, other: Interval) -> Interval {
        let [a, b] = self.divided(other);
        a.hull(b)
    }
}

impl Interval {
    /// Whether the quotient by it is defined everywhere.
    #[inline]
    pub fn is_divisor(self) -> bool {
        !self.has_zero()
    }

    /// Quotients by what is not 0, in up to two pieces; unused ones are empty.
    pub fn divided(self, other: Interval) -> [Interval; 2] {
        let (a, b) = (self, other);
        if a.is_empty() || b.is_empty() || b.lo == 0.0 && b.hi == 0.0 {
            return [Interval::EMPTY; 2];
        }
        if b.lo > 0.0 || b.hi < 0.0 {
            return [quotient(a, b), Interval::EMPTY];
        }
        if a.lo == 0.0 && a.hi == 0.0 {
            return [Interval::ZERO, Interval::EMPTY];
        }
        if a.has_zero() {
            // A side of 0 in the divisor still tells the sign where the dividend has one.
            let whole = if b.lo == 0.0 {
                Interval {
                    lo: if a.lo < 0.0 { f64::NEG_INFINITY } else { 0.0 },
                    hi: if a.hi > 0.0 { f64::INFINITY } else { 0.0 },
                }
            } else if b.hi == 0.0 {
                Interval {
                    lo: if a.hi > 0.0 { f64::NEG_INFINITY } else { 0.0 },
                    hi: if a.lo < 0.0 { f64::INFINITY } else { 0.0 },
                }
            } else {
                Interval::ENTIRE
            };
            return [whole, Interval::EMPTY];
        }
        // a has one sign; of b its negative and its positive part.
        let near = a.mignitude();
        let upward = |far: f64| Interval { lo: divide(near, far, Below), hi: f64::INFINITY };
        let positive = if b.hi > 0.0 { upward(b.hi) } else { Interval::EMPTY };
        let negative = if b.lo < 0.0 { -upward(-b.lo) } else { Interval::EMPTY };
        if a.lo > 0.0 { [negative, positive] } else { [-positive, -negative] }
    }

    /// Its square.
    #[inline]
    pub fn square(self) -> Interval {
        if self.is_empty() {
            return self;
        }
        let (near, far) = (self.mignitude(), self.magnitude());
        Interval { lo: multiply(near, near, Below), hi: multiply(far, far, Above) }
    }

    /// `x^n`; a negative power of 0 is left out.
    pub fn integer_power(self, n: i32) -> Interval {
        if self.is_empty() {
            return self;
        }
        if n < 0 {
            return Interval::ONE / self.natural_power(n.unsigned_abs());
        }
        self.natural_power(n.unsigned_abs())
    }

    fn natural_power(self, n: u32) -> Interval {
        match n {
            0 => Interval::ONE,
            1 => self,
            2 => self.square(),
            _ if n % 2 == 0 => {
                let (near, far) = (self.mignitude(), self.magnitude());
                Interval { lo: bound_of_power(near, n, Below), hi: bound_of_power(far, n, Above) }
            }
            _ => {
                let end = |x: f64, toward: Toward| {
                    if x >= 0.0 {
                        bound_of_power(x, n, toward)
                    } else {
                        -bound_of_power(-x, n, if toward == Below { Above } else { Below })
                    }
                };
                Interval { lo: end(self.lo, Below), hi: end(self.hi, Above) }
            }
        }
    }

    /// Whether `x^(num/den)` is defined and continuous on all of it.
    pub fn is_power_defined(self, num: i32, den: i32) -> bool {
        match den {
            1 => num >= 0 || !self.has_zero(),
            3 if num == 1 => true,
            _ => {
                if num >= 0 {
                    self.lo >= 0.0
                } else {
                    self.lo > 0.0
                }
            }
        }
    }

    /// `x^(num/den)` with `den > 0`. Defined for negative x only with `den` 1 and as the cube root.
    pub fn power(self, num: i32, den: i32) -> Interval {
        match den {
            1 => self.integer_power(num),
            2 => self.sqrt().integer_power(num),
            3 if num == 1 => elementary::cbrt(self),
            _ => self.positive_power(Interval::point(f64::from(num)) / Interval::point(f64::from(den))),
        }
    }

    /// Whether `x^y` is defined and continuous on all of both: positive base, or a whole number as exponent.
    pub fn is_power_of_defined(self, exponent: Interval) -> bool {
        if let Some(n) = whole(exponent) {
            return n >= 0 || !self.has_zero();
        }
        self.lo > 0.0 || self.lo >= 0.0 && exponent.lo > 0.0
    }

    /// `x^y`. A negative base has powers only for whole exponents; where a range of exponents
    /// meets a negative base, nothing is said.
    pub fn power_of(self, exponent: Interval) -> Interval {
        if self.is_empty() || exponent.is_empty() {
            return Interval::EMPTY;
        }
        if let Some(n) = whole(exponent) {
            return self.integer_power(n);
        }
        if self.lo < 0.0 {
            if exponent.is_point() && exponent.lo.abs() < 9e15 && exponent.lo.floor() != exponent.lo {
                return self.positive_power(exponent);
            }
            return Interval::ENTIRE;
        }
        self.positive_power(exponent)
    }

    /// `x^y` over what is not negative in it. Monotone in each of both, so its extremes are at the corners.
    fn positive_power(self, exponent: Interval) -> Interval {
        let base = self.meet(Interval { lo: 0.0, hi: f64::INFINITY });
        if base.is_empty() || exponent.is_empty() {
            return Interval::EMPTY;
        }
        let mut result = Interval::EMPTY;
        for x in [base.lo, base.hi] {
            for y in [exponent.lo, exponent.hi] {
                result = result.hull(corner(x, y));
            }
        }
        // 0^0 between corners: every power of a number near 0 by an exponent near 0 lies in 0..1 or above.
        if base.lo == 0.0 && exponent.lo <= 0.0 && exponent.hi >= 0.0 {
            result = result.hull(Interval::UNIT);
        }
        // x = 1 inside with unbounded exponents, y = 0 inside with an unbounded base.
        if base.contains(1.0) || exponent.has_zero() {
            result = result.hull(Interval::ONE);
        }
        result
    }

    /// Absolute value.
    #[inline]
    pub fn abs(self) -> Interval {
        if self.is_empty() { self } else { Interval { lo: self.mignitude(), hi: self.magnitude() } }
    }

    /// The lesser of both.
    #[inline]
    pub fn min(self, other: Interval) -> Interval {
        if self.is_empty() || other.is_empty() {
            return Interval::EMPTY;
        }
        Interval { lo: self.lo.min(other.lo), hi: self.hi.min(other.hi) }
    }

    /// The greater of both.
    #[inline]
    pub fn max(self, other: Interval) -> Interval {
        if self.is_empty() || other.is_empty() {
            return Interval::EMPTY;
        }
        Interval { lo: self.lo.max(other.lo), hi: self.hi.max(other.hi) }
    }

    /// `f` of both ends: for functions that never fall.
    fn ends(self, f: impl Fn(f64) -> f64) -> Interval {
        if self.is_empty() { self } else { Interval { lo: f(self.lo), hi: f(self.hi) } }
    }

    /// Greatest whole number below.
    pub fn floor(self) -> Interval {
        self.ends(f64::floor)
    }

    /// Least whole number above.
    pub fn ceil(self) -> Interval {
        self.ends(f64::ceil)
    }

    /// Nearest whole number, halves away from 0.
    pub fn round(self) -> Interval {
        self.ends(f64::round)
    }

    /// -1, 0 or 1.
    pub fn sign(self) -> Interval {
        self.ends(|x| {
            if x > 0.0 {
                1.0
            } else if x < 0.0 {
                -1.0
            } else {
                0.0
            }
        })
    }

    /// Square root of what is not negative in it.
    #[inline]
    pub fn sqrt(self) -> Interval {
        let a = self.meet(Interval { lo: 0.0, hi: f64::INFINITY });
        if a.is_empty() {
            return a;
        }
        Interval { lo: rounding::sqrt(a.lo, Below), hi: rounding::sqrt(a.hi, Above) }
    }

    /// Whether `a < b`: 1, 0, or both.
    pub fn less(self, other: Interval) -> Interval {
        truth(self, other, self.hi < other.lo, self.lo >= other.hi)
    }

    /// Whether `a <= b`.
    pub fn less_or_equal(self, other: Interval) -> Interval {
        truth(self, other, self.hi <= other.lo, self.lo > other.hi)
    }

    /// Whether `a == b`.
    pub fn equal(self, other: Interval) -> Interval {
        truth(self, other, self.is_point() && self == other, self.meet(other).is_empty())
    }

    /// 1 where it is 0, else 0.
    pub fn not(self) -> Interval {
        truth(self, self, self.is_false(), !self.has_zero())
    }
}

fn truth(a: Interval, b: Interval, always: bool, never: bool) -> Interval {
    if a.is_empty() || b.is_empty() {
        Interval::EMPTY
    } else if always {
        Interval::ONE
    } else if never {
        Interval::ZERO
    } else {
        Interval::UNIT
    }
}

/// Divisor without 0.
fn quotient(a: Interval, b: Interval) -> Interval {
    if b.hi < 0.0 {
        return -quotient(a, -b);
    }
    let lo = if a.lo >= 0.0 { divide(a.lo, b.hi, Below) } else { divide(a.lo, b.lo, Below) };
    let hi = if a.hi >= 0.0 { divide(a.hi, b.lo, Above) } else { divide(a.hi, b.hi, Above) };
    Interval { lo, hi }
}

/// Bound of `x^n` for x >= 0: all factors are positive, so rounding each product the same way bounds.
fn bound_of_power(x: f64, n: u32, toward: Toward) -> f64 {
    let (mut rest, mut factor, mut result) = (n, x, 1.0);
    while rest > 0 {
        if rest & 1 == 1 {
            result = multiply(result, factor, toward);
        }
        rest >>= 1;
        if rest > 0 {
            factor = multiply(factor, factor, toward);
        }
    }
    // A lower bound that fell below 0 by the last float.
    if toward == Below { result.max(0.0) } else { result }
}

/// The exponent, if it is one whole number of moderate size.
fn whole(exponent: Interval) -> Option<i32> {
    let n = exponent.lo;
    (exponent.is_point() && n.floor() == n && n.abs() <= 1e6).then_some(n as i32)
}

/// Enclosure of `x^y` for `x >= 0`; ends may be infinite.
fn corner(x: f64, y: f64) -> Interval {
    let exact = x == 1.0 || y == 0.0 || x == 0.0 || x.is_infinite();
    let value = libm::pow(x, y);
    if value.is_nan() {
        return Interval { lo: 0.0, hi: f64::INFINITY };
    }
    if exact || y.is_infinite() {
        return Interval { lo: value.min(f64::MAX), hi: value };
    }
    Interval { lo: rounding::pad(value, 3, Below).max(0.0), hi: rounding::pad(value, 3, Above) }
}
