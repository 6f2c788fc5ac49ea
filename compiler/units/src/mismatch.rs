//! What is said when two types do not go together, and the cautions for what passes but is likely meant otherwise.
//!
//! Plain data: placing it in a file is the caller's business.

use std::fmt;

use crate::confusion;
use crate::kind::Kind;
use crate::types::Type;

/// Why two types do not go together.
#[derive(Copy, Clone, PartialEq, Eq, Hash, Debug)]
pub enum MismatchCode {
    /// The dimensions differ.
    Dimension,
    /// The dimensions agree but for plane angle: torque and energy, angular velocity and frequency.
    Angle,
    /// The dimensions agree, the kinds do not: radius and diameter, GD² and moment of inertia.
    Kind,
    /// A temperature level where a difference belongs, or the other way round.
    Temperature,
    /// A pure number is wanted.
    Number,
    /// A temperature level written in a product.
    LevelInProduct,
    /// An exponent leaves the range.
    ExponentRange,
    /// A condition where a quantity is wanted, or the other way round.
    Condition,
}

impl MismatchCode {
    /// A short name for diagnostics: "angle-mismatch".
    pub fn slug(self) -> &'static str {
        match self {
            MismatchCode::Dimension => "dimension-mismatch",
            MismatchCode::Angle => "angle-mismatch",
            MismatchCode::Kind => "kind-mismatch",
            MismatchCode::Temperature => "temperature-mismatch",
            MismatchCode::Number => "not-a-number",
            MismatchCode::LevelInProduct => "temperature-level-in-product",
            MismatchCode::ExponentRange => "exponent-out-of-range",
            MismatchCode::Condition => "condition-mismatch",
        }
    }
}

/// An edit that mends a mismatch, relative to the expression that was found.
#[derive(Clone, PartialEq, Eq, Debug)]
pub enum FixHint {
    /// Text after the expression: ` / 2`. A sum needs brackets first.
    Append(String),
    /// Text after the expression with a factor that only the user knows: ` * time`. No complete edit; show it, or
    /// offer it as a snippet whose word is filled in.
    AppendSlot(String),
    /// Text on both sides: `inertia_from_flywheel_effect(` and `)`.
    Wrap(String, String),
    /// Another unit, where the expression is a number with a unit.
    ReplaceUnit(String),
}

/// Two types that do not go together.
#[derive(Clone, PartialEq, Eq, Debug)]
pub struct Mismatch {
    /// Why.
    pub code: MismatchCode,
    /// What is wanted, in words with its unit.
    pub expected: String,
    /// What is there, in words with its unit.
    pub found: String,
    /// The headline; it names both sides.
    pub message: String,
    /// How it is mended, in words.
    pub help: Option<String>,
    /// How it is mended, as an edit; boxed, so that results stay small.
    pub fix: Option<Box<FixHint>>,
}

impl fmt::Display for Mismatch {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.message)
    }
}

impl std::error::Error for Mismatch {}

impl Mismatch {
    /// `found` stands where the kind `wanted` belongs.
    pub(crate) fn wanted(code: MismatchCode, wanted: Kind, found: &Type) -> Mismatch {
        let expected = Type::of_kind(wanted).words_and_unit();
        let there = found.words_and_unit();
        let message = format!("{} is wanted here, but this is {}", article(&expected), article(&there));
        let (help, fix) = confusion::advice(found, wanted);
        Mismatch { code, expected, found: there, message, help: Some(help), fix: fix.map(Box::new) }
    }

    /// `a` and `b` cannot be joined; `how` is "added", "compared".
    pub(crate) fn joined(code: MismatchCode, a: &Type, b: &Type, how: &str) -> Mismatch {
        let (expected, found) = (a.words_and_unit(), b.words_and_unit());
        let message = format!("{} and {} cannot be {how}", article(&expected), article(&found));
        let (help, fix) = confusion::advice_between(a, b);
        Mismatch { code, expected, found, message, help: Some(help), fix: fix.map(Box::new) }
    }

    pub(crate) fn with_help(mut self, help: &str, fix: Option<FixHint>) -> Mismatch {
        self.help = Some(help.into());
        self.fix = fix.map(Box::new);
        self
    }

    pub(crate) fn exponent_range() -> Mismatch {
        Mismatch {
            code: MismatchCode::ExponentRange,
            expected: "an exponent of ordinary size".into(),
            found: "an exponent out of range".into(),
            message:
                "the dimension of this product has an exponent out of range; an exponent of ordinary size is wanted"
                    .into(),
            help: Some("check the powers in this expression".into()),
            fix: None,
        }
    }

    pub(crate) fn of_condition(expected: &str, found: &Type) -> Mismatch {
        let there = found.words_and_unit();
        Mismatch {
            code: MismatchCode::Condition,
            expected: expected.into(),
            message: format!("{expected} is wanted here, but this is {}", article(&there)),
            found: there,
            help: Some("a condition stands after `when`, `require`, `limit` or `where` only".into()),
            fix: None,
        }
    }

    pub(crate) fn level_in_product(found: &Type) -> Mismatch {
        let there = found.words_and_unit();
        Mismatch {
            code: MismatchCode::LevelInProduct,
            expected: "temperature difference (K)".into(),
            message: format!("a product takes a temperature difference (K), but this is {}", article(&there)),
            found: there,
            help: Some(
                "write a difference in `K`, `delta_degC` or `delta_degF`, or give the temperature a name".into(),
            ),
            fix: Some(Box::new(FixHint::ReplaceUnit("K".into()))),
        }
    }
}

/// "a torque (N*m)", "an energy (J)".
pub(crate) fn article(words: &str) -> String {
    let first = words.chars().next().unwrap_or(' ');
    let article = if "aeio".contains(first.to_ascii_lowercase()) || words.starts_with("un") { "an" } else { "a" };
    format!("{article} {words}")
}

/// What passes but is likely meant otherwise, or what a hover should say.
#[derive(Copy, Clone, PartialEq, Eq, Hash, Debug)]
pub enum WarningCode {
    /// Pi times a length feeds an angular quantity: `v/(pi*d)` is turns, not radians.
    CircumferenceAsRadius,
    /// 2*pi times an angular velocity: the turn is counted twice.
    TurnCountedTwice,
    /// A diameter stands where a radius belongs: a factor of two.
    DiameterAsLever,
    /// A plain number stands for an angle in a trigonometric function.
    NumberAsAngle,
    /// Radians stand for a pure number.
    AngleAsNumber,
}

impl WarningCode {
    /// A short name for diagnostics.
    pub fn slug(self) -> &'static str {
        match self {
            WarningCode::CircumferenceAsRadius => "circumference-as-radius",
            WarningCode::TurnCountedTwice => "turn-counted-twice",
            WarningCode::DiameterAsLever => "diameter-as-lever",
            WarningCode::NumberAsAngle => "number-as-angle",
            WarningCode::AngleAsNumber => "angle-as-number",
        }
    }

    /// Is it a note for hovers rather than a caution?
    pub fn is_note(self) -> bool {
        matches!(self, WarningCode::NumberAsAngle | WarningCode::AngleAsNumber)
    }
}

/// A caution or a note beside a type that passes.
#[derive(Clone, PartialEq, Eq, Debug)]
pub struct TypeWarning {
    /// Which.
    pub code: WarningCode,
    /// The headline.
    pub message: String,
    /// What to do.
    pub help: String,
    /// As an edit.
    pub fix: Option<FixHint>,
}

impl TypeWarning {
    pub(crate) fn new(code: WarningCode, message: String, help: &str, fix: Option<FixHint>) -> TypeWarning {
        TypeWarning { code, message, help: help.into(), fix }
    }
}
