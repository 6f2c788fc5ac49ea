//! Small exact fractions for the exponents of dimensions.
//!
//! Exponents stay exact through roots and powers, so that `sqrt(k/m)` is exactly 1/s.
//! Every operation is checked: an exponent beyond 32,767 is `None`, never a panic or a wrong number. Two bytes each
//! are far more than physics needs and keep types small: every quantity of a sheet carries one.
//! It must never know what the exponents belong to.

use std::cmp::Ordering;
use std::fmt;

/// An exact fraction in lowest terms with a positive denominator.
#[derive(Copy, Clone, PartialEq, Eq, Hash)]
pub struct Ratio {
    num: i16,
    den: i16,
}

impl Ratio {
    /// Zero.
    pub const ZERO: Ratio = Ratio { num: 0, den: 1 };
    /// One.
    pub const ONE: Ratio = Ratio { num: 1, den: 1 };
    /// One half, the exponent of a square root.
    pub const HALF: Ratio = Ratio { num: 1, den: 2 };

    /// A whole number.
    pub const fn whole(num: i16) -> Ratio {
        Ratio { num, den: 1 }
    }

    /// A fraction; `None` where `den` is zero.
    pub fn new(num: i32, den: i32) -> Option<Ratio> {
        Ratio::reduce(i64::from(num), i64::from(den))
    }

    fn reduce(num: i64, den: i64) -> Option<Ratio> {
        if den == 0 {
            return None;
        }
        let shared = gcd(num.unsigned_abs(), den.unsigned_abs());
        let sign = if den < 0 { -1 } else { 1 };
        let shared = i64::try_from(shared).ok()?;
        let num = i16::try_from(sign * (num / shared)).ok()?;
        let den = i16::try_from((den / shared).checked_abs()?).ok()?;
        Some(Ratio { num, den })
    }

    /// The numerator; it carries the sign.
    pub const fn num(self) -> i32 {
        self.num as i32
    }

    /// The denominator, always positive.
    pub const fn den(self) -> i32 {
        self.den as i32
    }

    /// Is it zero?
    pub const fn is_zero(self) -> bool {
        self.num == 0
    }

    /// Is it a whole number?
    pub const fn is_whole(self) -> bool {
        self.den == 1
    }

    /// Is it above zero?
    pub const fn is_positive(self) -> bool {
        self.num > 0
    }

    /// The sum.
    pub fn checked_add(self, other: Ratio) -> Option<Ratio> {
        let (a, b) = (i64::from(self.num), i64::from(other.num));
        let (c, d) = (i64::from(self.den), i64::from(other.den));
        Ratio::reduce((a * d).checked_add(b * c)?, c * d)
    }

    /// The difference.
    pub fn checked_sub(self, other: Ratio) -> Option<Ratio> {
        self.checked_add(other.checked_neg()?)
    }

    /// The product.
    pub fn checked_mul(self, other: Ratio) -> Option<Ratio> {
        Ratio::reduce(i64::from(self.num) * i64::from(other.num), i64::from(self.den) * i64::from(other.den))
    }

    /// The quotient; `None` where `other` is zero.
    pub fn checked_div(self, other: Ratio) -> Option<Ratio> {
        Ratio::reduce(i64::from(self.num) * i64::from(other.den), i64::from(self.den) * i64::from(other.num))
    }

    /// The negative.
    pub fn checked_neg(self) -> Option<Ratio> {
        Some(Ratio { num: self.num.checked_neg()?, den: self.den })
    }

    /// The nearest double.
    pub fn to_f64(self) -> f64 {
        f64::from(self.num) / f64::from(self.den)
    }

    /// The fraction a double stands for, where it is one with a denominator up to 64: `0.5`, `2`, `1.5`.
    pub fn from_f64(value: f64) -> Option<Ratio> {
        if !value.is_finite() || value.abs() > 1e6 {
            return None;
        }
        for den in 1_i32..=64 {
            let scaled = value * f64::from(den);
            let rounded = scaled.round();
            if (scaled - rounded).abs() <= 1e-12 * scaled.abs().max(1.0) {
                return Ratio::new(rounded as i32, den);
            }
        }
        None
    }
}

fn gcd(mut a: u64, mut b: u64) -> u64 {
    while b != 0 {
        (a, b) = (b, a % b);
    }
    a.max(1)
}

impl PartialOrd for Ratio {
    fn partial_cmp(&self, other: &Ratio) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}

impl Ord for Ratio {
    fn cmp(&self, other: &Ratio) -> Ordering {
        (i64::from(self.num) * i64::from(other.den)).cmp(&(i64::from(other.num) * i64::from(self.den)))
    }
}

impl fmt::Display for Ratio {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.den == 1 { write!(f, "{}", self.num) } else { write!(f, "{}/{}", self.num, self.den) }
    }
}

impl fmt::Debug for Ratio {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        fmt::Display::fmt(self, f)
    }
}
