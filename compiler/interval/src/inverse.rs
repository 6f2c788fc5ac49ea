//! Backward operations: what of an operand is left when the result is known.
//! Each returns a part of `self`, never losing a value that leads to `result`.

use crate::{HALF_PI, Interval, PI};

impl Interval {
    /// The x in it with `x * factor` in `result`.
    pub fn with_product(self, factor: Interval, result: Interval) -> Interval {
        if factor.has_zero() && result.has_zero() {
            return self;
        }
        let [a, b] = result.divided(factor);
        self.meet(a).hull(self.meet(b))
    }

    /// The divisors in it with `dividend / x` in `result`.
    pub fn with_quotient(self, dividend: Interval, result: Interval) -> Interval {
        // dividend = x * result
        self.with_product(result, dividend)
    }

    /// The x in it with `x^(num/den)` in `result`.
    pub fn with_power(self, num: i32, den: i32, result: Interval) -> Interval {
        if num == 0 {
            return if result.contains(1.0) { self } else { Interval::EMPTY };
        }
        if num < 0 {
            // 1 / x^(-num/den) in result.
            let [a, b] = Interval::ONE.divided(result);
            let Some(opposite) = num.checked_neg() else { return self };
            let (a, b) = (self.with_power(opposite, den, a), self.with_power(opposite, den, b));
            return a.hull(b);
        }
        if den == 1 {
            return if num % 2 == 0 {
                let root = result.natural_root(num);
                self.meet(root).hull(self.meet(-root))
            } else {
                let positive = result.natural_root(num);
                let negative = -(-result).natural_root(num);
                self.meet(positive).hull(self.meet(negative))
            };
        }
        if den == 3 && num == 1 {
            return self.meet(result.integer_power(3));
        }
        let positive = Interval { lo: 0.0, hi: f64::INFINITY };
        let base = result.meet(positive).natural_root(num).integer_power(den);
        self.meet(base).meet(positive)
    }

    /// The non-negative n-th root of what is not negative.
    fn natural_root(self, n: i32) -> Interval {
        let (mut rest, mut root) = (n, self.meet(Interval { lo: 0.0, hi: f64::INFINITY }));
        while rest % 2 == 0 && rest > 0 {
            root = root.sqrt();
            rest /= 2;
        }
        match rest {
            1 => root,
            3 => root.power(1, 3).meet(Interval { lo: 0.0, hi: f64::INFINITY }),
            _ => root.power_of(Interval::ONE / Interval::point(f64::from(rest))),
        }
    }

    /// The x in it whose absolute value is in `result`.
    pub fn with_abs(self, result: Interval) -> Interval {
        let result = result.meet(Interval { lo: 0.0, hi: f64::INFINITY });
        self.meet(result).hull(self.meet(-result))
    }

    /// The x in it whose square root is in `result`.
    pub fn with_sqrt(self, result: Interval) -> Interval {
        self.meet(result.meet(Interval { lo: 0.0, hi: f64::INFINITY }).square())
    }

    /// The x in it whose sine is in `result`; nothing is cut where it spans more than one branch.
    pub fn with_sin(self, result: Interval) -> Interval {
        let Some(branch) = self.branch() else { return self };
        let angle = result.asin();
        let turned = PI.scaled(branch);
        self.meet(if branch % 2.0 == 0.0 { turned + angle } else { turned - angle })
    }

    /// The x in it whose cosine is in `result`.
    pub fn with_cos(self, result: Interval) -> Interval {
        self.meet((self + HALF_PI).with_sin(result) - HALF_PI)
    }

    /// The x in it whose tangent is in `result`.
    pub fn with_tan(self, result: Interval) -> Interval {
        let Some(branch) = self.branch() else { return self };
        self.meet(PI.scaled(branch) + result.atan())
    }

    /// The x in it whose arc sine is in `result`.
    pub fn with_asin(self, result: Interval) -> Interval {
        self.meet(result.meet(Interval { lo: -HALF_PI.hi, hi: HALF_PI.hi }).sin())
    }

    /// The x in it whose arc cosine is in `result`.
    pub fn with_acos(self, result: Interval) -> Interval {
        self.meet(result.meet(Interval { lo: 0.0, hi: PI.hi }).cos())
    }

    /// The x in it whose arc tangent is in `result`.
    pub fn with_atan(self, result: Interval) -> Interval {
        let angle = result.meet(Interval { lo: -HALF_PI.hi, hi: HALF_PI.hi });
        if angle.is_empty() {
            return Interval::EMPTY;
        }
        // Where an end may lie on or beyond the pole, that side is not bounded.
        let end = |x: f64, unbounded: f64| {
            if x.abs() >= HALF_PI.lo { Interval { lo: unbounded, hi: unbounded } } else { Interval::point(x).tan() }
        };
        let (lo, hi) = (end(angle.lo, f64::NEG_INFINITY), end(angle.hi, f64::INFINITY));
        let lo = if angle.lo >= HALF_PI.lo { Interval::point(HALF_PI.lo.next_down()).tan().lo } else { lo.lo };
        let hi = if angle.hi <= -HALF_PI.lo { Interval::point(-HALF_PI.lo.next_down()).tan().hi } else { hi.hi };
        self.meet(Interval { lo, hi })
    }

    /// The x in it whose hyperbolic sine is in `result`: bounded through x = sign(y) acosh(sqrt(1 + y^2)).
    pub fn with_sinh(self, result: Interval) -> Interval {
        let root = |y: f64| {
            let y = Interval { lo: y, hi: y };
            let size = y.abs();
            // ln(y + sqrt(y^2 + 1)) for y >= 0
            let angle = (size + (size.square() + Interval::ONE).sqrt()).ln();
            if y.lo >= 0.0 { angle } else { -angle }
        };
        if result.is_empty() {
            return result;
        }
        let ends = |y: f64| if y.is_finite() { root(y) } else { Interval { lo: y, hi: y } };
        self.meet(Interval { lo: ends(result.lo).lo, hi: ends(result.hi).hi })
    }

    /// The x in it whose hyperbolic cosine is in `result`.
    pub fn with_cosh(self, result: Interval) -> Interval {
        let result = result.meet(Interval { lo: 1.0, hi: f64::INFINITY });
        let angle = |y: Interval| (y + (y.square() - Interval::ONE).sqrt()).ln();
        if result.is_empty() {
            return result;
        }
        let hi = if result.hi.is_finite() { angle(Interval::point(result.hi)).hi } else { f64::INFINITY };
        let lo = angle(Interval::point(result.lo)).lo.max(0.0);
        self.with_abs(Interval { lo, hi })
    }

    /// The x in it whose hyperbolic tangent is in `result`.
    pub fn with_tanh(self, result: Interval) -> Interval {
        let result = result.meet(Interval { lo: -1.0, hi: 1.0 });
        if result.is_empty() {
            return result;
        }
        // atanh y = ln((1 + y) / (1 - y)) / 2
        let angle = |y: f64| {
            let y = Interval::point(y);
            ((Interval::ONE + y) / (Interval::ONE - y)).ln().scaled(0.5)
        };
        // Values that round to 1 belong to finite arguments too: an end near 1 says nothing.
        let lo = if result.lo <= -0.999_999 { f64::NEG_INFINITY } else { angle(result.lo.min(0.999_999)).lo };
        let hi = if result.hi >= 0.999_999 { f64::INFINITY } else { angle(result.hi.max(-0.999_999)).hi };
        self.meet(Interval { lo, hi })
    }

    /// The x in it with `floor(x)` in `result`.
    pub fn with_floor(self, result: Interval) -> Interval {
        self.meet(Interval { lo: result.lo.ceil(), hi: result.hi.floor() + 1.0 })
    }

    /// The x in it with `ceil(x)` in `result`.
    pub fn with_ceil(self, result: Interval) -> Interval {
        self.meet(Interval { lo: result.lo.ceil() - 1.0, hi: result.hi.floor() })
    }

    /// The x in it with `round(x)` in `result`.
    pub fn with_round(self, result: Interval) -> Interval {
        self.meet(Interval { lo: result.lo.ceil() - 0.5, hi: result.hi.floor() + 0.5 })
    }

    /// The x in it with `sign(x)` in `result`.
    pub fn with_sign(self, result: Interval) -> Interval {
        let lo = if result.lo > -1.0 { 0.0 } else { f64::NEG_INFINITY };
        let hi = if result.hi < 1.0 { 0.0 } else { f64::INFINITY };
        self.meet(Interval { lo, hi })
    }

    /// The k with all of it between `k pi - pi/2` and `k pi + pi/2`.
    fn branch(self) -> Option<f64> {
        let turns = (self + HALF_PI) / PI;
        let k = turns.lo.floor();
        (turns.is_bounded() && turns.hi <= k + 1.0 && k.abs() < 1e9).then_some(k)
    }
}
