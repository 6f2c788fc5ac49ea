//! Published spot values, the delta table, and each row against the formula that it was rounded from.

use super::tables::{ABOVE, BELOW, FINE_STEPS, GRADES, MAIN_STEPS, Row, grade_width};
use super::{Deviations, NoLimits, delta, it, limits_of_size, nearest_classes};

/// Spot values of ISO 286-2:2010 (limit deviations for holes and shafts), from memory.
#[track_caller]
fn check_limits(size: f64, class: &str, lower: f64, upper: f64) {
    assert_eq!(limits_of_size(size, class), Ok(Deviations { lower, upper }), "{size} {class}");
}

#[track_caller]
fn check_refused(size: f64, class: &str, why: NoLimits) {
    assert_eq!(limits_of_size(size, class), Err(why), "{size} {class}");
}

#[test]
fn clearance_shafts() {
    check_limits(60.0, "h6", -19.0, 0.0);
    check_limits(60.0, "g6", -29.0, -10.0);
    check_limits(60.0, "f7", -60.0, -30.0);
    check_limits(40.0, "e8", -89.0, -50.0);
    check_limits(25.0, "d9", -117.0, -65.0);
    check_limits(100.0, "c11", -390.0, -170.0);
    check_limits(10.0, "h9", -36.0, 0.0);
    check_limits(12.0, "c11", -205.0, -95.0);
    check_limits(25.0, "c11", -240.0, -110.0);
    check_limits(3.0, "g6", -8.0, -2.0);
}

#[test]
fn transition_and_interference_shafts() {
    check_limits(60.0, "j6", -7.0, 12.0);
    check_limits(25.0, "k6", 2.0, 15.0);
    check_limits(60.0, "m6", 11.0, 30.0);
    check_limits(60.0, "n6", 20.0, 39.0);
    check_limits(60.0, "p6", 32.0, 51.0);
    check_limits(60.0, "r6", 41.0, 60.0);
    check_limits(60.0, "s6", 53.0, 72.0);
    check_limits(60.0, "u6", 87.0, 106.0);
    check_limits(60.0, "k11", 0.0, 190.0);
    check_limits(60.0, "k3", 0.0, 5.0);
    check_limits(3.0, "m6", 2.0, 8.0);
    check_limits(3.0, "n6", 4.0, 10.0);
    check_limits(3.0, "p6", 6.0, 12.0);
    check_limits(3.0, "r6", 10.0, 16.0);
    check_limits(30.0, "t6", 41.0, 54.0);
    check_limits(3.0, "u6", 18.0, 24.0);
    check_limits(6.0, "u6", 23.0, 31.0);
    check_limits(10.0, "u6", 28.0, 37.0);
    check_limits(3.0, "x6", 20.0, 26.0);
    check_limits(6.0, "x6", 28.0, 36.0);
    check_limits(10.0, "x6", 34.0, 43.0);
    check_limits(12.0, "u6", 33.0, 44.0);
    check_limits(12.0, "x6", 40.0, 51.0);
    check_limits(12.0, "z6", 50.0, 61.0);
}

#[test]
fn clearance_holes() {
    check_limits(60.0, "H7", 0.0, 30.0);
    check_limits(45.0, "H7", 0.0, 25.0);
    check_limits(100.0, "F8", 36.0, 90.0);
    check_limits(60.0, "G7", 10.0, 40.0);
    check_limits(25.0, "E9", 40.0, 92.0);
    check_limits(25.0, "D10", 65.0, 149.0);
    check_limits(3.0, "H8", 0.0, 14.0);
}

#[test]
fn transition_and_interference_holes_follow_the_delta_rule() {
    check_limits(60.0, "J7", -12.0, 18.0);
    check_limits(60.0, "K7", -21.0, 9.0);
    check_limits(60.0, "M7", -30.0, 0.0);
    check_limits(60.0, "N7", -39.0, -9.0);
    check_limits(60.0, "P7", -51.0, -21.0);
    check_limits(60.0, "R7", -60.0, -30.0);
    check_limits(60.0, "S7", -72.0, -42.0);
    check_limits(25.0, "K6", -11.0, 2.0);
    check_limits(25.0, "M8", -29.0, 4.0);
    check_limits(60.0, "N8", -50.0, -4.0);
    check_limits(60.0, "N9", -74.0, 0.0);
    check_limits(60.0, "P9", -106.0, -32.0);
    check_limits(2.0, "K7", -10.0, 0.0);
    check_limits(2.0, "N9", -29.0, -4.0);
    check_limits(300.0, "M6", -41.0, -9.0);
}

#[test]
fn symmetric_classes_keep_the_exact_half() {
    check_limits(25.0, "js9", -26.0, 26.0);
    check_limits(30.0, "JS9", -26.0, 26.0);
    check_limits(60.0, "js6", -9.5, 9.5);
    check_limits(2000.0, "js7", -75.0, 75.0);
}

#[test]
fn a_step_includes_its_upper_end() {
    check_limits(50.0, "h6", -16.0, 0.0);
    check_limits(50.000_001, "h6", -19.0, 0.0);
    check_limits(18.0 * (1.0 + f64::EPSILON), "h6", -11.0, 0.0);
    check_limits(3150.0, "h7", -210.0, 0.0);
}

#[test]
fn fine_grades_are_written_with_their_zero() {
    check_limits(60.0, "h01", -0.8, 0.0);
    check_limits(60.0, "h0", -1.2, 0.0);
    check_limits(60.0, "h1", -2.0, 0.0);
}

#[test]
fn what_the_tables_lack_is_refused() {
    check_refused(60.0, "i6", NoLimits::UnknownLetters("i".into()));
    check_refused(60.0, "Js6", NoLimits::UnknownLetters("Js".into()));
    check_refused(60.0, "h19", NoLimits::UnknownGrade("19".into()));
    check_refused(60.0, "h06", NoLimits::UnknownGrade("06".into()));
    check_refused(60.0, "h", NoLimits::UnknownGrade(String::new()));
    check_refused(60.0, "", NoLimits::UnknownLetters(String::new()));
    check_refused(60.0, "h6µ", NoLimits::UnknownGrade("6µ".into()));
    check_refused(0.0, "h6", NoLimits::SizeOutside);
    check_refused(-60.0, "h6", NoLimits::SizeOutside);
    check_refused(3151.0, "h6", NoLimits::SizeOutside);
    check_refused(f64::NAN, "h6", NoLimits::SizeOutside);
    check_refused(600.0, "p6", NoLimits::NoValue);
    check_refused(600.0, "k8", NoLimits::NoValue);
    check_refused(600.0, "N9", NoLimits::NoValue);
    check_refused(600.0, "h01", NoLimits::NoValue);
    check_refused(20.0, "t6", NoLimits::NoValue);
    check_refused(20.0, "ef6", NoLimits::NoValue);
    check_refused(60.0, "j9", NoLimits::NoValue);
    check_refused(60.0, "K9", NoLimits::NoValue);
    check_refused(60.0, "P2", NoLimits::NoValue);
    check_refused(0.8, "a11", NoLimits::NoValue);
    check_refused(0.8, "h14", NoLimits::NoValue);
}

#[test]
fn nearest_classes_have_limits() {
    assert_eq!(nearest_classes(60.0, "j9"), ["h9", "js9", "j7"]);
    for (size, class) in [(60.0, "i6"), (20.0, "t6"), (60.0, "H19"), (600.0, "P7"), (60.0, "q6")] {
        let near = nearest_classes(size, class);
        assert_eq!(near.len(), 3, "{class}: {near:?}");
        for it in near {
            assert!(limits_of_size(size, &it).is_ok(), "{it}");
        }
    }
    assert!(nearest_classes(5000.0, "h6").is_empty());
}

/// The delta table as printed in ISO 286-1:2010, Table 3, from memory: IT3 to IT8, a row a step from 3 mm on.
#[test]
fn delta_is_the_printed_one() {
    const PRINTED: [[f64; 6]; 12] = [
        [1.0, 1.5, 1.0, 3.0, 4.0, 6.0],
        [1.0, 1.5, 2.0, 3.0, 6.0, 7.0],
        [1.0, 2.0, 3.0, 3.0, 7.0, 9.0],
        [1.5, 2.0, 3.0, 4.0, 8.0, 12.0],
        [1.5, 3.0, 4.0, 5.0, 9.0, 14.0],
        [2.0, 3.0, 5.0, 6.0, 11.0, 16.0],
        [2.0, 4.0, 5.0, 7.0, 13.0, 19.0],
        [3.0, 4.0, 6.0, 7.0, 15.0, 23.0],
        [3.0, 4.0, 6.0, 9.0, 17.0, 26.0],
        [4.0, 4.0, 7.0, 9.0, 20.0, 29.0],
        [4.0, 5.0, 7.0, 11.0, 21.0, 32.0],
        [5.0, 5.0, 7.0, 13.0, 23.0, 34.0],
    ];
    for (row, size) in PRINTED.iter().zip(MAIN_STEPS.iter().skip(1)) {
        for (printed, n) in row.iter().zip(3..) {
            assert_eq!(delta(*size, it(n)), Some(*printed), "IT{n} at {size} mm");
        }
    }
}

/// The geometric mean of a step; the first one counts from 1 mm.
fn mean(steps: &[f64], at: usize) -> f64 {
    let start = if at == 0 { 1.0 } else { steps[at - 1] };
    (start * steps[at]).sqrt()
}

/// Published values, from memory, that do not round from the formulas. They are held to be off, so that this list
/// cannot hide a sound row. Spot values above guard m to x, z at 14 mm, c, g and IT7 to IT9; of the rest (z, za, zb, zc
/// up to 10 mm, the other grades up to 3 mm, IT1 to IT3 at 400 and 500 mm) memory is the only source.
const OFF_FORMULA: &[(&str, &[f64])] = &[
    ("IT1", &[500.0]),
    ("IT2", &[400.0, 500.0]),
    ("IT3", &[500.0]),
    ("IT7", &[3.0]),
    ("IT9", &[3.0]),
    ("IT10", &[3.0]),
    ("IT11", &[3.0]),
    ("IT12", &[3.0]),
    ("IT14", &[3.0]),
    ("IT15", &[3.0]),
    ("IT16", &[3.0]),
    ("IT17", &[3.0]),
    ("c", &[14.0, 18.0, 24.0, 30.0, 40.0]),
    ("g", &[3.0]),
    ("m", &[3.0]),
    ("n", &[3.0]),
    ("p", &[3.0]),
    ("r", &[3.0]),
    ("t", &[30.0]),
    ("u", &[3.0, 6.0, 10.0, 14.0]),
    ("x", &[3.0, 6.0, 10.0, 14.0]),
    ("z", &[3.0, 6.0, 10.0, 14.0]),
    ("za", &[3.0, 6.0, 10.0]),
    ("zb", &[3.0, 6.0]),
    ("zc", &[3.0, 6.0]),
];

fn check_within(row: &str, end: f64, table: f64, formula: f64, allowed: f64) -> Option<String> {
    let listed = OFF_FORMULA.iter().any(|(name, ends)| *name == row && ends.contains(&end));
    let off = (table - formula).abs() > allowed;
    (off != listed).then(|| format!("{row} at {end} mm: table {table}, formula {formula:.3}, listed as off: {listed}"))
}

/// IT5 = 7i, IT6 = 10i, then times 1.6 a grade (R5); i = 0.45 D^(1/3) + 0.001 D to 500 mm, I = 0.004 D + 2.1 above.
/// IT01 = 0.3 + 0.008 D, IT0 = 0.5 + 0.012 D, IT1 = 0.8 + 0.020 D to 500 mm; 2 I above. IT2 to IT4 step evenly between.
#[test]
fn grades_agree_with_their_formulas() {
    const OF_UNIT: [f64; 14] =
        [7.0, 10.0, 16.0, 25.0, 40.0, 64.0, 100.0, 160.0, 250.0, 400.0, 640.0, 1000.0, 1600.0, 2500.0];
    let mut faults = Vec::new();
    for (at, end) in MAIN_STEPS.iter().enumerate() {
        let d = mean(&MAIN_STEPS, at);
        let unit = if *end <= 500.0 { 0.45 * libm::cbrt(d) + 0.001 * d } else { 0.004 * d + 2.1 };
        let it1 = if *end <= 500.0 { 0.8 + 0.020 * d } else { 2.0 * unit };
        let ratio = libm::pow(7.0 * unit / it1, 0.25);
        for (grade, name) in GRADES.iter().enumerate() {
            let formula = match grade {
                0 => 0.3 + 0.008 * d,
                1 => 0.5 + 0.012 * d,
                2..=5 => it1 * libm::pow(ratio, grade as f64 - 2.0),
                _ => OF_UNIT[grade - 6] * unit,
            };
            match grade_width(*end, grade) {
                Some(table) => {
                    let absolute: f64 = if grade < 6 { 1.0 } else { 0.75 };
                    faults.extend(check_within(
                        &format!("IT{name}"),
                        *end,
                        table,
                        formula,
                        absolute.max(0.06 * formula),
                    ));
                }
                None => assert!(grade < 2 && *end > 500.0, "IT{name} at {end} mm is missing"),
            }
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

/// The formulas of ISO 286-1:1988 for the deviations of shafts, from memory; `None` where the value has none.
fn formula(letters: &str, d: f64, end: f64) -> Option<(f64, f64)> {
    let width = |n: usize| grade_width(end, it(n)).expect("grades from 1 on cover all steps");
    let power = |factor: f64, exponent: f64| factor * libm::pow(d, exponent);
    let (c, e, f, g) = (
        if d <= 40.0 { power(52.0, 0.2) } else { 95.0 + 0.8 * d },
        power(11.0, 0.41),
        power(5.5, 0.41),
        power(2.5, 0.34),
    );
    let p = width(7) + 2.5;
    let s = if end <= 50.0 { width(8) + 2.0 } else { width(7) + 0.4 * d };
    // Value and spread that the formula leaves: `IT7 + 0 to 5`.
    Some(match letters {
        "a" if end <= 120.0 => (265.0 + 1.3 * d, 0.0),
        "a" => (3.5 * d, 0.0),
        "b" if end <= 160.0 => (140.0 + 0.85 * d, 0.0),
        "b" => (1.8 * d, 0.0),
        "c" => (c, 0.0),
        "cd" => ((c * power(16.0, 0.44)).sqrt(), 0.0),
        "d" => (power(16.0, 0.44), 0.0),
        "e" => (e, 0.0),
        "ef" => ((e * f).sqrt(), 0.0),
        "f" => (f, 0.0),
        "fg" => ((f * g).sqrt(), 0.0),
        "g" => (g, 0.0),
        "h" => (0.0, 0.0),
        "k" => (0.6 * libm::cbrt(d), 0.0),
        "m" => (width(7) - width(6), 0.0),
        "n" => (power(5.0, 0.34), 0.0),
        "p" => (p, 2.5),
        "r" => ((p * s).sqrt(), 2.5),
        "s" => (s, 2.0),
        "t" => (width(7) + 0.63 * d, 0.0),
        "u" => (width(7) + d, 0.0),
        "v" => (width(7) + 1.25 * d, 0.0),
        "x" => (width(7) + 1.6 * d, 0.0),
        "y" => (width(7) + 2.0 * d, 0.0),
        "z" => (width(7) + 2.5 * d, 0.0),
        "za" => (width(8) + 3.15 * d, 0.0),
        "zb" => (width(9) + 4.0 * d, 0.0),
        "zc" => (width(10) + 5.0 * d, 0.0),
        _ => return None,
    })
}

#[track_caller]
fn check_rows(rows: &[(&str, Row)]) {
    let mut faults = Vec::new();
    for (letters, row) in rows {
        let mut before = 0;
        for (at, value) in row.values.iter().enumerate() {
            let at = at + row.from;
            let (d, end) = (mean(row.steps, at), row.steps[at]);
            let (wanted, spread) = formula(letters, d, end).expect("each letter has a formula");
            let what = format!("{letters} at {end} mm");
            let allowed = (1.0 + spread).max(0.05 * wanted);
            faults.extend(check_within(letters, end, f64::from(*value), wanted, allowed));
            assert!(*value >= before, "{what}: a row never falls");
            before = *value;
        }
    }
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn clearance_rows_agree_with_their_formulas() {
    check_rows(&BELOW);
}

#[test]
fn interference_rows_agree_with_their_formulas() {
    check_rows(&ABOVE);
}

#[test]
fn rows_are_complete() {
    for (letters, row) in BELOW.iter().chain(&ABOVE) {
        let n = row.from + row.values.len();
        let short = matches!(*letters, "cd" | "ef" | "fg");
        let above_500 = matches!(*letters, "d" | "e" | "f" | "g" | "h");
        let wanted = match row.steps.len() {
            _ if short => 3,
            _ if above_500 => MAIN_STEPS.len(),
            25 => FINE_STEPS.len(),
            _ => 13,
        };
        assert_eq!(n, wanted, "{letters}");
    }
}
