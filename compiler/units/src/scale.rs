//! Exact sizes of units as a quotient of two doubles.
//!
//! A factor such as 0.001 has no exact double, its numerator and denominator have. Keeping both apart makes
//! `60 mm` exactly the double nearest to 0.06, and conversions between decimal units correctly rounded.
//! It must never know what is measured.

/// The size of a unit in the coherent SI unit: `num / den`.
#[derive(Copy, Clone, PartialEq, Debug)]
pub struct Scale {
    num: f64,
    den: f64,
}

/// The largest whole number up to which every double is exact.
const EXACT: f64 = 9_007_199_254_740_992.0;

impl Scale {
    /// Size one.
    pub const ONE: Scale = Scale { num: 1.0, den: 1.0 };

    /// The quotient `num / den`, in lowest terms where both are whole numbers.
    pub fn new(num: f64, den: f64) -> Scale {
        match (whole(num), whole(den)) {
            (Some(a), Some(b)) if a != 0 && b != 0 => {
                let shared = gcd(a, b);
                Scale { num: (a / shared) as f64, den: (b / shared) as f64 }
            }
            _ => Scale { num, den },
        }
    }

    /// Numerator and denominator.
    pub fn parts(self) -> (f64, f64) {
        (self.num, self.den)
    }

    /// The size as one double.
    pub fn value(self) -> f64 {
        self.num / self.den
    }

    /// The size of a product of units.
    pub fn times(self, other: Scale) -> Scale {
        // Cancelling across first keeps numerator and denominator small, so exact for longer.
        let a = Scale::new(self.num, other.den);
        let b = Scale::new(other.num, self.den);
        Scale::new(a.num * b.num, a.den * b.den)
    }

    /// The size of a quotient of units.
    pub fn over(self, other: Scale) -> Scale {
        self.times(Scale { num: other.den, den: other.num })
    }

    /// The size of a unit to a power `num / den`.
    pub fn pow(self, num: i32, den: i32) -> Scale {
        let mut result = Scale::ONE;
        let base = if num < 0 { Scale { num: self.den, den: self.num } } else { self };
        // Exponents beyond 64 leave the range of doubles for every unit but 1 anyway.
        for _ in 0..num.unsigned_abs().min(64) {
            result = result.times(base);
        }
        if den == 1 {
            return result;
        }
        let root = |x: f64| if den == 2 { x.sqrt() } else { libm::pow(x, 1.0 / f64::from(den)) };
        Scale::new(root(result.num), root(result.den))
    }

    /// A value in this unit, in SI.
    pub fn apply(self, value: f64) -> f64 {
        if self.num == 1.0 { value / self.den } else { value * self.num / self.den }
    }

    /// An SI value, in this unit.
    pub fn unapply(self, si: f64) -> f64 {
        if self.num == 1.0 { si * self.den } else { si * self.den / self.num }
    }

    /// Is the size usable: finite and above zero?
    pub fn is_usable(self) -> bool {
        let value = self.value();
        value.is_finite() && value > 0.0 && self.num.is_finite() && self.den.is_finite()
    }
}

fn whole(x: f64) -> Option<u64> {
    ((1.0..=EXACT).contains(&x) && x == x.trunc()).then_some(x as u64)
}

fn gcd(mut a: u64, mut b: u64) -> u64 {
    while b != 0 {
        (a, b) = (b, a % b);
    }
    a.max(1)
}
