//! Numbers for engineers: how many digits, when a power of ten, how aligned.
//!
//! The rules, all of them tested below:
//!
//! 1. A whole number below 1e9 keeps every digit: `1450`, `123456`.
//! 2. Anything else is rounded to five significant digits, six where the first
//!    is a 1, so that the rounding never exceeds one part in forty thousand;
//!    digits before the decimal point are never rounded away below 1e7, and a
//!    value of at most six digits stays whole: `9.80665`.
//! 3. Zeros at the end of a fraction are left out: `25`, not `25.000`.
//! 4. Below 1e-4 and from 1e7 on, the number is written with a power of ten as
//!    in sheets: `1.2346e-5`.
//! 5. No separators of thousands: a number can be copied back into a sheet.
//!
//! Knows numbers and the units behind them; words are the callers'.

use pintle_units::Unit;
use std::cmp::Ordering;

/// Digits that are rounded to, one more where the first digit is 1.
const SIGNIFICANT: usize = 5;
/// Values with no more digits than this are not rounded.
const SHORT: usize = 6;
/// Digits that no double exceeds.
const MOST: usize = 17;
/// Whole numbers below this keep every digit.
const WHOLE: f64 = 1e9;

/// A value, rounded for reading.
pub fn engineering(value: f64) -> String {
    if value.is_finite() && value == value.trunc() && value.abs() < WHOLE {
        return format!("{}", value + 0.0);
    }
    let whole = digits(value, SHORT);
    let error = whole.parse::<f64>().map_or(f64::INFINITY, |read| (read - value).abs());
    if error <= 4.0 * f64::EPSILON * value.abs() { whole } else { digits(value, SIGNIFICANT) }
}

/// Two values that are not equal, with as many digits as it takes to see it:
/// a limit that is missed by a hair must not read "600 against 600".
pub fn apart(a: f64, b: f64) -> (String, String) {
    let mut pair = (engineering(a), engineering(b));
    let mut significant = SIGNIFICANT;
    while a != b && pair.0 == pair.1 && significant < MOST {
        significant += 1;
        pair = (digits(a, significant), digits(b, significant));
    }
    pair
}

/// A share as percent with at most three significant digits: `12.8 %`.
pub fn percent(share: f64) -> String {
    let value = share * 100.0;
    if !value.is_finite() {
        return unusual(value).into();
    }
    let size = value.abs();
    let decimals = match size {
        _ if size >= 99.95 => 0,
        _ if size >= 9.995 => 1,
        _ if size >= 0.0995 => 2,
        _ => return format!("{} %", if value == 0.0 { "0".into() } else { digits(value, 2) }),
    };
    format!("{} %", trimmed(&format!("{value:.decimals$}")))
}

/// The deviation of limits from the nominal value, all in one unit:
/// `± 0.1`, `+0.2 / -0`.
pub fn deviation(nominal: f64, low: f64, high: f64) -> String {
    let (up, down) = (high - nominal, nominal - low);
    // Limits that were computed from a percentage differ in their last bits.
    let noise = 1e-9 * up.abs().max(down.abs());
    if (up - down).abs() <= noise {
        return format!("± {}", digits(up.abs(), 4));
    }
    let signed = |value: f64| match value.partial_cmp(&0.0) {
        Some(Ordering::Greater) => format!("+{}", digits(value, 4)),
        Some(Ordering::Less) => digits(value, 4),
        _ => "0".into(),
    };
    format!("{} / {}", signed(up), if down == 0.0 { "-0".into() } else { signed(-down) })
}

/// Members of a vector: one that is below 1e-12 of the greatest is what
/// rounding left over and shows as 0.
pub fn vector(members: &[f64]) -> String {
    let greatest = members.iter().fold(0.0_f64, |so_far, member| so_far.max(member.abs()));
    let shown = |member: &f64| if member.abs() < 1e-12 * greatest { "0".into() } else { engineering(*member) };
    members.iter().map(shown).collect::<Vec<String>>().join(", ")
}

/// A JSON number that reads back as the same double; null where it is not finite.
pub fn json(value: f64) -> serde_json::Value {
    // A negative zero would differ from a zero byte by byte and means nothing.
    serde_json::Number::from_f64(value + 0.0).map_or(serde_json::Value::Null, serde_json::Value::Number)
}

/// The places before and after the decimal point, to align a column there.
pub fn halves(text: &str) -> (&str, &str) {
    let end = text.find(|c: char| !(c.is_ascii_digit() || c == '-' || c == '+')).unwrap_or(text.len());
    text.split_at_checked(end).unwrap_or((text, ""))
}

fn digits(value: f64, significant: usize) -> String {
    if !value.is_finite() {
        return unusual(value).into();
    }
    if value == 0.0 {
        return "0".into();
    }
    let scientific = rounded(value, significant);
    let Some((mantissa, exponent)) = scientific.split_once('e') else { return scientific };
    let exponent: i32 = exponent.parse().unwrap_or(0);
    if !(-4..7).contains(&exponent) {
        return format!("{}e{exponent}", trimmed(mantissa));
    }
    let kept = mantissa.chars().filter(char::is_ascii_digit).count() as i32;
    let decimals = (kept - 1 - exponent).max(0) as usize;
    trimmed(&format!("{value:.decimals$}")).into()
}

/// As `d.ddde±x`, with one more digit where the first is a 1.
fn rounded(value: f64, significant: usize) -> String {
    let least = significant.saturating_sub(1);
    let text = format!("{value:.least$e}");
    let longer = format!("{value:.significant$e}");
    let begins_with_one = |text: &str| text.trim_start_matches('-').starts_with('1');
    // 9999.97 rounds to 10000 and has no need of the digit that a 1 gets.
    if significant < SHORT && begins_with_one(&text) && begins_with_one(&longer) { longer } else { text }
}

fn trimmed(text: &str) -> &str {
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.') } else { text }
}

fn unusual(value: f64) -> &'static str {
    match value {
        _ if value.is_nan() => "undefined",
        _ if value > 0.0 => "infinite",
        _ => "-infinite",
    }
}

/// A unit as it stands behind a number: nothing for pure numbers.
pub(crate) fn unit_text(unit: &Unit) -> &str {
    if unit.text == "1" { "" } else { &unit.text }
}

/// A number with its unit.
pub(crate) fn with_unit(number: impl std::fmt::Display, unit: &Unit) -> String {
    match unit_text(unit) {
        "" => number.to_string(),
        unit => format!("{number} {unit}"),
    }
}

/// A value in SI, shown in `unit`.
pub(crate) fn shown(si: f64, unit: &Unit) -> String {
    with_unit(engineering(unit.from_si(si)), unit)
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[track_caller]
    fn check_engineering(value: f64, expected: &str) {
        assert_eq!(engineering(value), expected, "{value:e}");
    }

    #[test]
    fn whole_numbers_keep_their_digits() {
        check_engineering(0.0, "0");
        check_engineering(-0.0, "0");
        check_engineering(1450.0, "1450");
        check_engineering(-123_456.0, "-123456");
        check_engineering(235_000_000.0, "235000000");
        check_engineering(2.1e11, "2.1e11");
    }

    #[test]
    fn fractions_are_rounded_to_five_digits_and_six_behind_a_one() {
        check_engineering(0.1 + 0.2, "0.3");
        check_engineering(2.718_459_26, "2.7185");
        check_engineering(1.23456789, "1.23457");
        check_engineering(9.80665, "9.80665");
        check_engineering(9.806_651_23, "9.8067");
        check_engineering(523.4449, "523.44");
        check_engineering(9_999.961_7, "10000");
        check_engineering(-0.061_234_56, "-0.061235");
    }

    #[test]
    fn digits_before_the_point_are_never_rounded_away() {
        check_engineering(238_745.63, "238746");
        check_engineering(9_876_543.2, "9876543");
        check_engineering(98_765_432.1, "9.8765e7");
    }

    #[test]
    fn zeros_at_the_end_are_no_news() {
        check_engineering(24.999_999_999_99, "25");
        check_engineering(0.5, "0.5");
        check_engineering(100.000_000_1, "100");
    }

    #[test]
    fn small_and_large_numbers_take_a_power_of_ten() {
        check_engineering(0.000_12, "0.00012");
        check_engineering(0.000_012_345_67, "1.23457e-5");
        check_engineering(2.5e-17, "2.5e-17");
        check_engineering(6.022e23, "6.022e23");
        check_engineering(f64::MAX, "1.79769e308");
    }

    #[test]
    fn values_that_are_no_numbers_say_so() {
        check_engineering(f64::NAN, "undefined");
        check_engineering(f64::INFINITY, "infinite");
        check_engineering(f64::NEG_INFINITY, "-infinite");
    }

    #[track_caller]
    fn check_apart(a: f64, b: f64, expected: (&str, &str)) {
        let found = apart(a, b);
        assert_eq!((found.0.as_str(), found.1.as_str()), expected);
    }

    #[test]
    fn unequal_values_look_unequal() {
        check_apart(0.61, 25.0, ("0.61", "25"));
        check_apart(600.000_000_1, 600.0, ("600.0000001", "600"));
        check_apart(600.0, 600.0, ("600", "600"));
        check_apart(25.000_000_000_000_004, 25.0, ("25.000000000000004", "25"));
    }

    #[track_caller]
    fn check_percent(share: f64, expected: &str) {
        assert_eq!(percent(share), expected);
    }

    #[test]
    fn shares_read_as_percent() {
        check_percent(0.128_34, "12.8 %");
        check_percent(-0.065, "-6.5 %");
        check_percent(0.976, "97.6 %");
        check_percent(3.334, "333 %");
        check_percent(0.01, "1 %");
        check_percent(0.0, "0 %");
        check_percent(0.000_012, "0.0012 %");
        check_percent(f64::INFINITY, "infinite");
    }

    #[track_caller]
    fn check_deviation(nominal: f64, low: f64, high: f64, expected: &str) {
        assert_eq!(deviation(nominal, low, high), expected);
    }

    #[test]
    fn deviations_show_their_sides_only_where_they_differ() {
        check_deviation(6.4, 6.144, 6.656, "± 0.256");
        check_deviation(60.0, 60.0, 60.2, "+0.2 / -0");
        check_deviation(260.0, 208.0, 260.0, "0 / -52");
        check_deviation(0.015, 0.010, 0.025, "+0.01 / -0.005");
        check_deviation(60.0, 59.5, 59.9, "-0.1 / -0.5");
    }

    #[test]
    fn what_rounding_leaves_of_a_vector_is_zero() {
        assert_eq!(vector(&[300.0, 1.2e-14, -2e-15]), "300, 0, 0");
        assert_eq!(vector(&[0.0, 0.0]), "0, 0");
    }

    #[test]
    fn json_has_no_place_for_infinity() {
        assert_eq!(json(f64::NAN).to_string(), "null");
        assert_eq!(json(f64::NEG_INFINITY).to_string(), "null");
        assert_eq!(json(-0.0).to_string(), "0.0");
        assert_eq!(json(6400.0).to_string(), "6400.0");
    }

    #[test]
    fn columns_align_at_the_point() {
        assert_eq!(halves("12.5"), ("12", ".5"));
        assert_eq!(halves("-3"), ("-3", ""));
        assert_eq!(halves("1.2e-5"), ("1", ".2e-5"));
        assert_eq!(halves("2e9"), ("2", "e9"));
        assert_eq!(halves("undefined"), ("", "undefined"));
    }

    proptest! {
        #[test]
        fn rounding_stays_below_one_part_in_forty_thousand(value in proptest::num::f64::NORMAL) {
            let read: f64 = engineering(value).parse().unwrap();
            prop_assert!((read - value).abs() <= value.abs() / 39_999.0, "{value:e} became {read:e}");
        }

        #[test]
        fn json_reads_back_the_same_double(value in proptest::num::f64::NORMAL) {
            let read: f64 = json(value).to_string().parse().unwrap();
            prop_assert_eq!(read.to_bits(), value.to_bits());
        }

        #[test]
        fn unequal_doubles_never_print_alike(value in 1e-3..1e6_f64) {
            let next = f64::from_bits(value.to_bits() + 1);
            let (a, b) = apart(value, next);
            prop_assert_ne!(a, b);
        }
    }
}
