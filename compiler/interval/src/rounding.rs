//! The four operations and the square root rounded downward or upward.
//!
//! The error of the nearest result is known without error (TwoSum by Knuth,
//! products and remainders by fused multiply-add; Ogita, Rump, Oishi, Accurate
//! sum and dot product, SIAM J. Sci. Comput. 26 (2005), from memory), so an
//! exact result stays as it is: 0 stays 0. Where the error itself could
//! underflow, the next float is taken.
//!
//! Infinite operands mean bounds, not numbers: 0 times infinity is 0.

/// Products and quotients smaller than this may have an error below the smallest float.
const TINY: f64 = 1e-290;

/// Which way a bound is rounded.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Toward {
    Below,
    Above,
}

use Toward::{Above, Below};

/// `nearest` moved so that it bounds `nearest + error`, of which only the sign is asked.
#[inline]
fn settle(nearest: f64, error: f64, toward: Toward) -> f64 {
    match toward {
        Below if error < 0.0 => nearest.next_down(),
        Above if error > 0.0 => nearest.next_up(),
        _ => nearest,
    }
}

/// The bound next to `nearest` where its error is not known.
#[inline]
fn blunt(nearest: f64, toward: Toward) -> f64 {
    match toward {
        Below => nearest.next_down(),
        Above => nearest.next_up(),
    }
}

/// An overflow of finite numbers is not infinite: the bound on the near side is the largest float.
#[inline]
fn overflowed(result: f64, toward: Toward) -> f64 {
    match toward {
        Below => result.min(f64::MAX),
        Above => result.max(-f64::MAX),
    }
}

#[inline]
pub(crate) fn add(a: f64, b: f64, toward: Toward) -> f64 {
    let sum = a + b;
    if !sum.is_finite() {
        if a.is_finite() && b.is_finite() {
            return overflowed(sum, toward);
        }
        // Opposite infinities meet only where a bound says nothing.
        return if sum.is_nan() { if toward == Below { f64::NEG_INFINITY } else { f64::INFINITY } } else { sum };
    }
    let b_part = sum - a;
    let error = (a - (sum - b_part)) + (b - b_part);
    if error.is_nan() { blunt(sum, toward) } else { settle(sum, error, toward) }
}

#[inline]
pub(crate) fn multiply(a: f64, b: f64, toward: Toward) -> f64 {
    if a == 0.0 || b == 0.0 {
        return 0.0;
    }
    let product = a * b;
    if !product.is_finite() {
        return if a.is_finite() && b.is_finite() { overflowed(product, toward) } else { product };
    }
    if product.abs() < TINY {
        return blunt(product, toward);
    }
    settle(product, a.mul_add(b, -product), toward)
}

/// `b` is not 0.
#[inline]
pub(crate) fn divide(a: f64, b: f64, toward: Toward) -> f64 {
    if a == 0.0 {
        return 0.0;
    }
    if b.is_infinite() {
        // A quotient by an unbounded number comes as near to 0 as one likes.
        return if a.is_infinite() { if toward == Below { f64::NEG_INFINITY } else { f64::INFINITY } } else { 0.0 };
    }
    let quotient = a / b;
    if !quotient.is_finite() {
        return if a.is_finite() { overflowed(quotient, toward) } else { quotient };
    }
    if quotient.abs() < TINY || a.abs() < TINY {
        return blunt(quotient, toward);
    }
    // quotient * b - a is exact; the true quotient is less by that over b.
    let remainder = quotient.mul_add(b, -a);
    if remainder.is_nan() {
        return blunt(quotient, toward);
    }
    let error = if b > 0.0 { -remainder } else { remainder };
    settle(quotient, error, toward)
}

/// `a` is not negative.
#[inline]
pub(crate) fn sqrt(a: f64, toward: Toward) -> f64 {
    if a == 0.0 || a.is_infinite() {
        return a;
    }
    let root = a.sqrt();
    if a < TINY {
        return blunt(root, toward).max(0.0);
    }
    settle(root, -root.mul_add(root, -a), toward)
}

/// `x` moved by `ulps` floats.
#[inline]
pub(crate) fn pad(x: f64, ulps: u32, toward: Toward) -> f64 {
    let mut x = if x.is_infinite() { overflowed(x, toward) } else { x };
    for _ in 0..ulps {
        x = blunt(x, toward);
    }
    x
}
