//! Limits of size by ISO 286-1: from a nominal size and a tolerance class (`60 mm h6`) to its two limit deviations.
//!
//! Holes have capital letters, shafts small ones. It must never know sheets or units: sizes come in millimetres,
//! deviations go out in micrometres. What the tables here do not hold is refused, never reckoned from a formula:
//! the published values are rounded and rule over the formulas behind them.

mod tables;
#[cfg(test)]
mod tests;

use std::fmt;

use tables::{Deviation, GRADES};

/// The two limits of a size less its nominal, in µm.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Deviations {
    /// The lower limit deviation (EI of a hole, ei of a shaft).
    pub lower: f64,
    /// The upper limit deviation (ES of a hole, es of a shaft).
    pub upper: f64,
}

/// Why a size and a class have no limits.
#[derive(Clone, Debug, PartialEq)]
pub enum NoLimits {
    /// The letters are no fundamental deviation of the tables.
    UnknownLetters(String),
    /// The digits are no tolerance grade: those are 01, 0, 1 to 18.
    UnknownGrade(String),
    /// The size is not over 0 and up to 3150 mm.
    SizeOutside,
    /// Letters and grade are known, but the tables hold no value for this size.
    NoValue,
}

impl fmt::Display for NoLimits {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            NoLimits::UnknownLetters(letters) => write!(f, "the table has no fundamental deviation `{letters}`"),
            NoLimits::UnknownGrade(digits) => write!(f, "`{digits}` is no tolerance grade"),
            NoLimits::SizeOutside => write!(f, "the table covers sizes over 0 mm up to 3150 mm"),
            NoLimits::NoValue => write!(f, "the table has no such class at this size"),
        }
    }
}

/// Letters in the order of the standard; the capital ones are the same for holes.
const LETTERS: [&str; 28] = [
    "a", "b", "c", "cd", "d", "e", "ef", "f", "fg", "g", "h", "j", "js", "k", "m", "n", "p", "r", "s", "t", "u", "v",
    "x", "y", "z", "za", "zb", "zc",
];

/// What the letters of a class belong to.
#[derive(Clone, Copy, PartialEq)]
enum Feature {
    Hole,
    Shaft,
}

/// The limit deviations of a class (`h6`, `JS9`) at a nominal size in mm.
pub fn limits_of_size(nominal_mm: f64, class: &str) -> Result<Deviations, NoLimits> {
    let (letters, digits) = split(class);
    let feature = match letters {
        it if it.bytes().all(|byte| byte.is_ascii_lowercase()) => Feature::Shaft,
        it if it.bytes().all(|byte| byte.is_ascii_uppercase()) => Feature::Hole,
        _ => return Err(NoLimits::UnknownLetters(letters.into())),
    };
    let small = letters.to_ascii_lowercase();
    if !LETTERS.contains(&small.as_str()) {
        return Err(NoLimits::UnknownLetters(letters.into()));
    }
    let grade =
        GRADES.iter().position(|grade| *grade == digits).ok_or_else(|| NoLimits::UnknownGrade(digits.into()))?;
    // A size converted from another unit must not leave its step by a last bit.
    let size = nominal_mm * (1.0 - 1e-12);
    if !(size > 0.0 && size <= 3150.0) {
        return Err(NoLimits::SizeOutside);
    }
    let width = tables::grade_width(size, grade).ok_or(NoLimits::NoValue)?;
    let deviation = match feature {
        Feature::Shaft => shaft(size, &small, grade),
        Feature::Hole => hole(size, &small, grade),
    };
    Ok(match deviation.ok_or(NoLimits::NoValue)? {
        Deviation::Lower(lower) => Deviations { lower, upper: lower + width },
        Deviation::Upper(upper) => Deviations { lower: upper - width, upper },
        // The standard allows js7 to js11 of an odd width to be rounded to whole micrometres; the exact half is kept.
        Deviation::Symmetric => Deviations { lower: -width / 2.0, upper: width / 2.0 },
    })
}

/// Up to three classes near a refused one that do have limits at this size, nearest first.
pub fn nearest_classes(nominal_mm: f64, class: &str) -> Vec<String> {
    let (letters, digits) = split(class);
    let upper = letters.starts_with(|first: char| first.is_ascii_uppercase());
    let small = letters.to_ascii_lowercase();
    let wanted_grade = GRADES.iter().position(|grade| *grade == digits);
    // Letters that the table does not have sort behind the last one that precedes them in the alphabet.
    let wanted_letter = LETTERS
        .iter()
        .position(|it| *it == small)
        .unwrap_or_else(|| LETTERS.iter().filter(|it| **it < small.as_str()).count().saturating_sub(1));
    // IT7 stands in the middle of the usual fits where the grade itself is none.
    let near_grade = wanted_grade.unwrap_or_else(|| GRADES.iter().position(|grade| *grade == "7").unwrap_or_default());
    let mut found: Vec<(usize, usize, String)> = Vec::new();
    for (at, letter) in LETTERS.iter().enumerate() {
        for (step, grade) in GRADES.iter().enumerate() {
            let name = if upper { letter.to_ascii_uppercase() } else { (*letter).into() } + grade;
            let (by_letter, by_grade) = (at.abs_diff(wanted_letter), step.abs_diff(near_grade));
            if by_letter + by_grade <= 6 && name != class && limits_of_size(nominal_mm, &name).is_ok() {
                found.push((by_letter + by_grade, by_letter, name));
            }
        }
    }
    found.sort();
    found.into_iter().take(3).map(|(_, _, name)| name).collect()
}

/// Letters and digits of a class.
fn split(class: &str) -> (&str, &str) {
    let at = class.find(|c: char| !c.is_ascii_alphabetic()).unwrap_or(class.len());
    class.split_at_checked(at).unwrap_or((class, ""))
}

/// IT`n` as an index into [`GRADES`], which begins with IT01 and IT0.
const fn it(n: usize) -> usize {
    n + 1
}

/// The fundamental deviation of a shaft.
fn shaft(size: f64, letters: &str, grade: usize) -> Option<Deviation> {
    match letters {
        "js" => Some(Deviation::Symmetric),
        "j" if grade == it(5) || grade == it(6) => tables::J5_J6.at(size).map(Deviation::Lower),
        "j" if grade == it(7) => tables::J7.at(size).map(Deviation::Lower),
        "j" if grade == it(8) => tables::J8.at(size).map(Deviation::Lower),
        "j" => None,
        "k" if grade < it(4) || grade > it(7) => (size <= 500.0).then_some(Deviation::Lower(0.0)),
        _ => tables::shaft_deviation(size, letters),
    }
}

/// The fundamental deviation of a hole: that of the shaft with its sign turned, and for K to ZC in the finer grades
/// raised by delta, the step from the next finer grade, so that a hole one grade coarser makes the same fit.
fn hole(size: f64, letters: &str, grade: usize) -> Option<Deviation> {
    let at_500 = size <= 500.0;
    match letters {
        "js" => return Some(Deviation::Symmetric),
        "j" if grade == it(6) => return tables::HOLE_J6.at(size).map(Deviation::Upper),
        "j" if grade == it(7) => return tables::HOLE_J7.at(size).map(Deviation::Upper),
        "j" if grade == it(8) => return tables::HOLE_J8.at(size).map(Deviation::Upper),
        "j" => return None,
        // K is not tabulated above IT8, save in the first step, where it is 0 at every grade.
        "k" if size <= 3.0 => return Some(Deviation::Upper(0.0)),
        "k" if grade > it(8) => return None,
        // N from IT9 on is 0 above 3 mm and not for use up to 1 mm.
        "n" if grade > it(8) && size <= 1.0 => return None,
        "n" if grade > it(8) && size > 3.0 => return at_500.then_some(Deviation::Upper(0.0)),
        // M6 over 250 up to 315 mm is -9 in the table, not -11 by the rule.
        "m" if grade == it(6) && size > 250.0 && size <= 315.0 => return Some(Deviation::Upper(-9.0)),
        _ => {}
    }
    match tables::shaft_deviation(size, letters)? {
        Deviation::Upper(es) => Some(Deviation::Lower(0.0 - es)),
        Deviation::Symmetric => Some(Deviation::Symmetric),
        Deviation::Lower(ei) => {
            let last = if matches!(letters, "k" | "m" | "n") { it(8) } else { it(7) };
            let delta = if grade <= last { delta(size, grade)? } else { 0.0 };
            Some(Deviation::Upper(delta - ei))
        }
    }
}

/// Delta of the standard's table: IT(n) less IT(n-1), 0 up to 3 mm; tabulated from IT3 to IT8.
fn delta(size: f64, grade: usize) -> Option<f64> {
    if size <= 3.0 {
        return Some(0.0);
    }
    if !(it(3)..=it(8)).contains(&grade) {
        return None;
    }
    Some(tables::grade_width(size, grade)? - tables::grade_width(size, grade.checked_sub(1)?)?)
}
