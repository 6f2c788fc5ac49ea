//! Samples of every operation lie in its enclosures, forward and backward:
//! a million each in release builds, 20,000 in debug builds.

use pintle_interval::{HALF_PI, Interval, PI};

const SAMPLES: usize = if cfg!(debug_assertions) { 20_000 } else { 1_000_000 };

/// Sequence of Numerical Recipes' quick generator, high bits only (from memory).
struct Random(u64);

impl Random {
    fn bits(&mut self) -> u64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        self.0 >> 11
    }

    fn share(&mut self) -> f64 {
        self.bits() as f64 / (1u64 << 53) as f64
    }

    /// Numbers of all sizes, now and then a special one.
    fn number(&mut self, range: (f64, f64)) -> f64 {
        let (low, high) = range;
        let x = match self.bits() % 16 {
            0 => 0.0,
            1 => 1.0,
            2 => -1.0,
            3 => (self.share() * 20.0 - 10.0).round(),
            4 => low,
            5 => high,
            6..=9 => (self.share() - 0.5) * libm::pow(10.0, self.share() * 24.0 - 12.0),
            10 => (self.share() - 0.5) * libm::pow(10.0, self.share() * 600.0 - 300.0),
            _ => low + (high - low) * self.share(),
        };
        x.clamp(low, high)
    }

    fn interval(&mut self, range: (f64, f64)) -> Interval {
        let a = self.number(range);
        let b = match self.bits() % 4 {
            0 => a,
            1 => a * (1.0 + 1e-14 * self.share()),
            _ => self.number(range),
        }
        .clamp(range.0, range.1);
        Interval::new(a.min(b), a.max(b))
    }

    fn inside(&mut self, x: Interval) -> f64 {
        match self.bits() % 4 {
            0 => x.lo,
            1 => x.hi,
            _ => x.at_share(self.share()),
        }
    }
}

#[track_caller]
fn check_one(
    range: (f64, f64),
    f: impl Fn(f64) -> f64,
    enclose: impl Fn(Interval) -> Interval,
    back: impl Fn(Interval, Interval) -> Interval,
) {
    let mut random = Random(1);
    let mut inside = 0;
    for _ in 0..SAMPLES {
        let x = random.interval(range);
        let at = random.inside(x);
        let value = f(at);
        let found = enclose(x);
        assert!(!found.lo.is_nan() && !found.hi.is_nan(), "{x:?} gives {found:?}");
        if !value.is_finite() {
            continue;
        }
        inside += 1;
        assert!(found.contains(value), "{value:e} of {at:e} in {x:?} is not in {found:?}");
        // The enclosure of the value alone must lead back to where it came from.
        let value = enclose(Interval::point(at));
        let left = back(x, value);
        assert!(left.contains(at), "{at:e} in {x:?} with the value {value:?} is not in {left:?}");
        assert!(left.is_within(x));
    }
    assert!(inside > SAMPLES / 10, "only {inside} samples were defined");
}

#[track_caller]
fn check_two(ranges: [(f64, f64); 2], f: impl Fn(f64, f64) -> f64, enclose: impl Fn(Interval, Interval) -> Interval) {
    let mut random = Random(2);
    for _ in 0..SAMPLES {
        let (x, y) = (random.interval(ranges[0]), random.interval(ranges[1]));
        let (a, b) = (random.inside(x), random.inside(y));
        let value = f(a, b);
        let found = enclose(x, y);
        assert!(!found.lo.is_nan() && !found.hi.is_nan(), "{x:?}, {y:?} give {found:?}");
        if value.is_finite() {
            assert!(found.contains(value), "{value:e} of {a:e}, {b:e} in {x:?}, {y:?} is not in {found:?}");
        }
    }
}

const ALL: (f64, f64) = (-1e300, 1e300);

#[test]
fn arithmetic_of_two() {
    check_two([ALL, ALL], |a, b| a + b, |x, y| x + y);
    check_two([ALL, ALL], |a, b| a - b, |x, y| x - y);
    check_two([ALL, ALL], |a, b| a * b, |x, y| x * y);
    check_two([ALL, ALL], |a, b| a / b, |x, y| x / y);
    check_two([ALL, ALL], f64::min, Interval::min);
    check_two([ALL, ALL], f64::max, Interval::max);
}

#[test]
fn comparisons() {
    let number = |holds: bool| f64::from(u8::from(holds));
    check_two([(-9.0, 9.0); 2], |a, b| number(a < b), Interval::less);
    check_two([(-9.0, 9.0); 2], |a, b| number(a <= b), Interval::less_or_equal);
    check_two([(-9.0, 9.0); 2], |a, b| number(a == b), Interval::equal);
    check_two([(-1.0, 1.0); 2], |a, _| number(a == 0.0), |x, _| x.not());
}

#[test]
fn powers_and_angles_of_two() {
    check_two([(0.0, 1e9), (-30.0, 30.0)], libm::pow, Interval::power_of);
    check_two([(-9.0, 9.0), (-6.0, 6.0)], libm::pow, Interval::power_of);
    check_two([ALL, ALL], libm::atan2, Interval::atan2);
}

#[test]
fn quotients_lead_back() {
    let mut random = Random(3);
    for _ in 0..SAMPLES {
        let (x, y) = (random.interval((-1e9, 1e9)), random.interval((-1e9, 1e9)));
        let (a, b) = (random.inside(x), random.inside(y));
        let product = Interval::point(a) * Interval::point(b);
        assert!(x.with_product(y, product).contains(a), "{a:e} {b:e} {x:?} {y:?} {product:?}");
        if b != 0.0 {
            let quotient = Interval::point(a) / Interval::point(b);
            assert!(y.with_quotient(x, quotient).contains(b), "{a:e} {b:e} {x:?} {y:?}");
            let [p, q] = x.divided(y);
            assert!(p.meet(quotient) != Interval::EMPTY || q.meet(quotient) != Interval::EMPTY);
        }
    }
}

#[test]
fn functions_of_one() {
    check_one(ALL, |x| -x, |x| -x, |x, z| x.meet(-z));
    check_one(ALL, f64::abs, Interval::abs, Interval::with_abs);
    check_one(ALL, f64::sqrt, Interval::sqrt, Interval::with_sqrt);
    check_one((-720.0, 720.0), libm::exp, Interval::exp, |x, z| x.meet(z.ln()));
    check_one(ALL, libm::log, Interval::ln, |x, z| x.meet(z.exp()));
    check_one(ALL, libm::log10, Interval::log10, |x, _| x);
    check_one((-1e6, 1e6), libm::sin, Interval::sin, Interval::with_sin);
    check_one((-1e6, 1e6), libm::cos, Interval::cos, Interval::with_cos);
    check_one((-20.0, 20.0), libm::tan, Interval::tan, Interval::with_tan);
    check_one((-2.0, 2.0), libm::asin, Interval::asin, Interval::with_asin);
    check_one((-2.0, 2.0), libm::acos, Interval::acos, Interval::with_acos);
    check_one(ALL, libm::atan, Interval::atan, Interval::with_atan);
    check_one((-720.0, 720.0), libm::sinh, Interval::sinh, Interval::with_sinh);
    check_one((-720.0, 720.0), libm::cosh, Interval::cosh, Interval::with_cosh);
    check_one((-30.0, 30.0), libm::tanh, Interval::tanh, Interval::with_tanh);
    check_one((-1e6, 1e6), f64::floor, Interval::floor, Interval::with_floor);
    check_one((-1e6, 1e6), f64::ceil, Interval::ceil, Interval::with_ceil);
    check_one((-1e6, 1e6), f64::round, Interval::round, Interval::with_round);
    check_one(ALL, |x| if x == 0.0 { 0.0 } else { x.signum() }, Interval::sign, Interval::with_sign);
}

#[test]
fn constant_powers() {
    for n in [-3_i32, -2, -1, 0, 1, 2, 3, 4, 5, 6, 7] {
        let by_products = |x: f64| {
            let power = (0..n.abs()).fold(1.0, |acc: f64, _| acc * x);
            // Left to right loses more than the enclosure is wide; compare where it is exact.
            if power.abs() < 9e15 && power.floor() == power {
                if n < 0 { 1.0 / power } else { power }
            } else {
                f64::NAN
            }
        };
        check_one((-20.0, 20.0), by_products, |x| x.power(n, 1), |x, z| x.with_power(n, 1, z));
    }
    for (num, den) in [(1, 2), (3, 2), (-1, 2), (1, 3), (2, 3), (5, 3), (-4, 5), (7, 4)] {
        let near = |x: f64| match (num, den) {
            (1, 2) => x.sqrt(),
            (1, 3) => libm::cbrt(x),
            // Exponents that are floats only.
            (7, 4) => libm::pow(x, 1.75),
            _ => f64::NAN,
        };
        let mut random = Random(4);
        for _ in 0..SAMPLES / 10 {
            let x = random.interval((0.0, 1e6));
            let at = random.inside(x);
            let found = x.power(num, den);
            let value = Interval::point(at).power(num, den);
            // Both hold the true value, or there is none.
            assert!(value.is_empty() || !value.meet(found).is_empty(), "{at} in {x:?}: {value:?} misses {found:?}");
            if near(at).is_finite() {
                assert!(value.contains(near(at)), "{at}^({num}/{den}) is not in {value:?}");
            }
            if !value.is_empty() {
                assert!(x.with_power(num, den, value).contains(at), "{at} {x:?} {value:?}");
            }
        }
    }
}

#[test]
fn whole_numbers_judge_the_rounding() {
    // Sums and products of 53-bit numbers are exact in 128 bits.
    let mut random = Random(5);
    let whole = |x: f64| x as i128;
    for _ in 0..SAMPLES {
        let (m, n) = (random.bits() as i128 - (1 << 52), random.bits() as i128 - (1 << 52));
        let (a, b) = (m as f64, n as f64);
        let product = Interval::point(a) * Interval::point(b);
        assert!(whole(product.lo) <= m * n && m * n <= whole(product.hi), "{a} {b} {product:?}");
        assert!(product.is_point() || product.lo.next_up() == product.hi, "{product:?} is not tight");
        assert_eq!(product.is_point(), whole(product.lo) == m * n);
        let shifted = (1i128 << (random.bits() % 60)) * n;
        let sum = Interval::point(a) + Interval::point(shifted as f64);
        assert!(whole(sum.lo) <= m + shifted && m + shifted <= whole(sum.hi), "{a} {shifted} {sum:?}");
        assert!(sum.is_point() || sum.lo.next_up() == sum.hi, "{sum:?} is not tight");
    }
}

/// `x` as a whole number times 2^-shift.
fn fixed(x: f64, shift: u32) -> i128 {
    (x * libm::ldexp(1.0, shift as i32)) as i128
}

#[test]
fn whole_numbers_judge_quotients_and_roots() {
    let mut random = Random(6);
    for _ in 0..SAMPLES {
        let (m, n) = ((random.bits() % (1 << 20)) as i128 + 1, (random.bits() % (1 << 20)) as i128 + 1);
        let found = Interval::point(m as f64) / Interval::point(n as f64);
        // Quotients of 20-bit numbers have their last bit at 2^-73 or above.
        assert!(fixed(found.lo, 73) * n <= m << 73 && m << 73 <= fixed(found.hi, 73) * n, "{m}/{n}: {found:?}");
        assert!(found.is_point() || found.lo.next_up() == found.hi);
        let root = Interval::point(m as f64).sqrt();
        let (lo, hi) = (fixed(root.lo, 52), fixed(root.hi, 52));
        assert!(lo * lo <= m << 104 && m << 104 <= hi * hi, "sqrt {m}: {root:?}");
        assert!(root.is_point() || root.lo.next_up() == root.hi);
    }
}

#[test]
fn exact_results_stay_exact() {
    let p = Interval::point;
    assert_eq!(p(0.1) - p(0.1), Interval::ZERO);
    assert_eq!(p(0.0) * Interval::ENTIRE, Interval::ZERO);
    assert_eq!(Interval::ZERO / p(3.0), Interval::ZERO);
    assert_eq!(p(-3.0).integer_power(4), p(81.0));
    assert_eq!(p(16.0).sqrt(), p(4.0));
    assert_eq!(Interval::ZERO.exp(), Interval::ONE);
    assert_eq!(Interval::ONE.ln(), Interval::ZERO);
    assert_eq!(Interval::ZERO.sin(), Interval::ZERO);
    assert_eq!(Interval::ZERO.cos(), Interval::ONE);
}

#[test]
fn what_has_no_value_is_empty() {
    assert!(Interval::new(-4.0, -1.0).sqrt().is_empty());
    assert!(Interval::point(0.0).ln().is_empty());
    assert!((Interval::ONE / Interval::ZERO).is_empty());
    assert!(Interval::point(f64::NAN).is_empty() && Interval::point(f64::INFINITY).is_empty());
    assert!(Interval::new(2.0, 1.0).is_empty() && Interval::new(f64::NAN, 1.0).is_empty());
    assert!((Interval::EMPTY + Interval::ONE).is_empty() && (Interval::ONE * Interval::EMPTY).is_empty());
}

#[test]
fn quotients_across_zero_have_two_pieces() {
    let [a, b] = Interval::point(1.0).divided(Interval::new(-2.0, 4.0));
    assert_eq!(a, Interval::new(f64::NEG_INFINITY, -0.5));
    assert_eq!(b, Interval::new(0.25, f64::INFINITY));
}

#[test]
fn domains_are_known() {
    assert!(Interval::new(1.0, 2.0).is_divisor() && !Interval::new(-1.0, 2.0).is_divisor());
    assert!(Interval::new(-1.0, 1.5).is_tan_defined() && !Interval::new(1.0, 2.0).is_tan_defined());
    assert!(!Interval::new(-1.0, 1.0).is_atan2_defined(Interval::new(-1.0, 1.0)));
    assert!(Interval::new(-2.0, 1.0).is_power_defined(3, 1) && !Interval::new(-2.0, 1.0).is_power_defined(3, 2));
    assert!(!Interval::new(-2.0, 1.0).is_power_defined(-1, 1));
    assert!(Interval::new(0.0, 1.0).is_power_of_defined(Interval::new(0.5, 2.0)));
    assert!(!Interval::new(0.0, 1.0).is_power_of_defined(Interval::new(-0.5, 2.0)));
}

#[test]
fn pi_lies_between() {
    assert_eq!(PI.lo.next_up(), PI.hi);
    assert_eq!(HALF_PI.lo.next_up(), HALF_PI.hi);
}
