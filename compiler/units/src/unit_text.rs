//! The grammar of unit text: factors with powers, products, one solidus, brackets.
//!
//! Works on byte positions of the unit text alone, so that errors can be placed by the caller.
//! It must never know where in a sheet the text stands.

use std::ops::Range;

use crate::dimension::Dimension;
use crate::kind::Kind;
use crate::rational::Ratio;
use crate::symbols;
use crate::unit::{self, Unit, UnitError, UnitErrorCode};

type User<'a> = &'a dyn Fn(&str) -> Option<Unit>;

/// Brackets deeper than this are refused; no unit needs more than two.
const DEPTH: usize = 8;

/// Longer texts are refused; it keeps the work on an error small.
const LENGTH: usize = 400;

struct Reader<'a> {
    text: &'a str,
    at: usize,
    depth: usize,
    user: User<'a>,
}

/// Reads a whole unit text.
pub(crate) fn read(text: &str, user: User<'_>) -> Result<Unit, UnitError> {
    if text.len() > LENGTH {
        return Err(error(UnitErrorCode::Range, 0..text.len(), "this is too long for a unit".into()));
    }
    let mut reader = Reader { text, at: 0, depth: 0, user };
    let unit = reader.quotient()?;
    if reader.at < text.len() {
        return Err(reader.syntax(reader.at..text.len(), "this does not belong to a unit"));
    }
    if !unit.scale.is_usable() {
        return Err(error(UnitErrorCode::Range, 0..text.len(), format!("the size of `{text}` is out of range")));
    }
    Ok(finish(unit))
}

/// Settles what the whole text means: which kind it fixes and whether its angle exponent stays open.
fn finish(mut unit: Unit) -> Unit {
    let bare = unit.dim.without_angle();
    unit.angle_open = bare == Dimension::ENERGY && unit.length_power.is_positive();
    if unit.kind.is_none() {
        // What has one reading only takes it at once; `m`, `kg*m^2` or `m^3` have several.
        unit.kind = SINGLE_READING.iter().find(|(dim, _)| *dim == unit.dim).map(|(_, kind)| *kind);
        if let Some(Kind::Frequency) = unit.kind
            && unit.text.contains("min")
        {
            unit.kind = Some(Kind::RotationalFrequency);
        }
    }
    unit
}

const SINGLE_READING: &[(Dimension, Kind)] = &[
    (Dimension::of(1, 0, -1, 0), Kind::Speed),
    (Dimension::of(1, 0, -2, 0), Kind::Acceleration),
    (Dimension::of(0, 0, -1, 0), Kind::Frequency),
    (Dimension::of(0, 0, -1, 1), Kind::AngularVelocity),
    (Dimension::of(0, 0, -2, 1), Kind::AngularAcceleration),
    (Dimension::of(-3, 1, 0, 0), Kind::Density),
    (Dimension::of(2, 1, -3, 0), Kind::Power),
    (Dimension::of(-1, 1, -2, 0), Kind::Pressure),
];

fn error(code: UnitErrorCode, range: Range<usize>, message: String) -> UnitError {
    UnitError { code, range, message, help: None, suggestions: Vec::new() }
}

impl Reader<'_> {
    fn peek(&self) -> Option<char> {
        self.text.get(self.at..).and_then(|rest| rest.chars().next())
    }

    fn bump(&mut self) -> Option<char> {
        let c = self.peek()?;
        self.at += c.len_utf8();
        Some(c)
    }

    fn slice(&self, range: Range<usize>) -> &str {
        self.text.get(range).unwrap_or_default()
    }

    fn syntax(&self, range: Range<usize>, message: &str) -> UnitError {
        let mut e = error(UnitErrorCode::Syntax, range, message.into());
        e.help = Some("a unit is written without spaces: `kg*m^2`, `kJ/(kg*K)`, `m^-1`".into());
        e
    }

    fn out_of_range(&self, range: Range<usize>) -> UnitError {
        error(UnitErrorCode::Range, range, "an exponent of this unit is out of range".into())
    }

    /// `a*b` or `a*b/c` or `a*b/(c*d)`.
    fn quotient(&mut self) -> Result<Unit, UnitError> {
        let start = self.at;
        let mut top = self.factor()?;
        let mut product = false;
        while self.is_times() {
            self.bump();
            product = true;
            let from = self.at;
            let next = self.factor()?;
            top = self.combine(&top, &next, Ratio::ONE, start..self.at, from)?;
        }
        if self.peek() != Some('/') {
            if product {
                top.text = self.slice(start..self.at).into();
            }
            return Ok(top);
        }
        let solidus = self.at;
        self.bump();
        let from = self.at;
        let below = self.factor()?;
        let minus = Ratio::whole(-1);
        let mut result = self.combine(&top, &below, minus, start..self.at, from)?;
        if self.is_times() || self.peek() == Some('/') {
            return Err(self.second_operator(start, solidus, from));
        }
        result.text = self.slice(start..self.at).into();
        Ok(result)
    }

    fn is_times(&self) -> bool {
        matches!(self.peek(), Some('*' | '·' | '⋅' | '×'))
    }

    /// `a/b*c` and `a/b/c` have two readings; both are offered with brackets.
    fn second_operator(&mut self, start: usize, solidus: usize, from: usize) -> UnitError {
        let mut below: Vec<String> = vec![self.slice(from..self.at).into()];
        let mut above: Vec<String> = vec![self.slice(start..solidus).into()];
        let mut certain = true;
        while self.is_times() || self.peek() == Some('/') {
            let times = self.bump() != Some('/');
            let begin = self.at;
            if self.factor().is_err() {
                break;
            }
            let part = String::from(self.slice(begin..self.at));
            if times {
                certain = false;
                above.push(part.clone());
            }
            below.push(part);
        }
        let top = self.slice(start..solidus);
        let bracketed = format!("{top}/({})", below.join("*"));
        let range = start..self.at;
        let written = self.slice(range.clone());
        let message = if certain {
            format!("`{written}` has two solidi; a unit takes one, with brackets beyond it")
        } else {
            format!("`{written}` can be read in two ways")
        };
        let mut e = error(UnitErrorCode::Solidus, range, message);
        e.suggestions.push(bracketed.clone());
        if certain {
            e.help = Some(format!("write `{bracketed}` (ISO 80000-1)"));
        } else {
            let product: Vec<&String> = below.iter().filter(|part| !above.contains(part)).collect();
            let product: Vec<&str> = product.into_iter().map(String::as_str).collect();
            let divisor = if product.len() > 1 { format!("({})", product.join("*")) } else { product.concat() };
            if !divisor.is_empty() {
                e.suggestions.push(format!("{}/{divisor}", above.join("*")));
            }
            e.help = Some(format!("write `{}` (ISO 80000-1)", e.suggestions.join("` or `")));
        }
        e
    }

    /// A symbol or a bracket, with its power.
    fn factor(&mut self) -> Result<Unit, UnitError> {
        let start = self.at;
        let base = match self.peek() {
            Some('(') => self.bracket()?,
            Some('1') => {
                self.bump();
                if self.peek().is_some_and(|c| c.is_alphanumeric()) {
                    return Err(self.syntax(start..self.text.len(), "a unit holds no number but a leading `1/`"));
                }
                Unit::one()
            }
            _ => self.symbol()?,
        };
        let named = self.at;
        let Some(power) = self.power()? else { return Ok(base) };
        if base.has_offset() {
            return Err(self.offset_error(&base, start..named));
        }
        let one = Unit::one();
        self.combine(&one, &base, power, start..self.at, start)
    }

    fn bracket(&mut self) -> Result<Unit, UnitError> {
        let open = self.at;
        self.bump();
        self.depth += 1;
        if self.depth > DEPTH {
            return Err(self.syntax(open..self.text.len(), "brackets are nested too deeply for a unit"));
        }
        let inner = self.quotient()?;
        if self.peek() != Some(')') {
            return Err(self.syntax(open..self.at, "this bracket is not closed"));
        }
        self.bump();
        self.depth -= 1;
        Ok(inner)
    }

    fn symbol(&mut self) -> Result<Unit, UnitError> {
        let start = self.at;
        while let Some(c) = self.peek() {
            let ends = matches!(c, '*' | '·' | '⋅' | '×' | '/' | '^' | '(' | ')' | '+' | '-' | '\u{2212}');
            if ends || c.is_whitespace() || superscript(c).is_some() || c == '⁻' {
                break;
            }
            self.bump();
        }
        let range = start..self.at;
        if range.is_empty() {
            let end = self.text.get(start..).and_then(|r| r.chars().next()).map_or(start, |c| start + c.len_utf8());
            return Err(self.syntax(start..end, "a unit is expected here"));
        }
        let name = self.slice(range.clone());
        unit::from_table(name).or_else(|| (self.user)(name)).ok_or_else(|| unknown(name, range))
    }

    /// `^2`, `^-1`, `^(1/2)`, `²`, `⁻¹`.
    fn power(&mut self) -> Result<Option<Ratio>, UnitError> {
        let start = self.at;
        let power = match self.peek() {
            Some('^') => {
                self.bump();
                self.caret_power()
            }
            Some(c) if c == '⁻' || superscript(c).is_some() => self.raised_power(),
            _ => return Ok(None),
        };
        match power {
            Some(power) if !power.is_zero() && power.num().abs() <= 64 && power.den() <= 64 => Ok(Some(power)),
            _ => Err(self.syntax(start..self.at, "a power is a whole number or a fraction: `^2`, `^-1`, `^(1/2)`")),
        }
    }

    fn caret_power(&mut self) -> Option<Ratio> {
        if self.peek() != Some('(') {
            return Ratio::new(self.integer()?, 1);
        }
        self.bump();
        let num = self.integer()?;
        let mut den = 1;
        if self.peek() == Some('/') {
            self.bump();
            den = self.integer()?;
        }
        if self.bump() != Some(')') {
            return None;
        }
        Ratio::new(num, den)
    }

    fn integer(&mut self) -> Option<i32> {
        let negative = matches!(self.peek(), Some('-' | '\u{2212}'));
        if negative || self.peek() == Some('+') {
            self.bump();
        }
        let start = self.at;
        while self.peek().is_some_and(|c| c.is_ascii_digit()) {
            self.bump();
        }
        let value: i32 = self.slice(start..self.at).parse().ok()?;
        if negative { value.checked_neg() } else { Some(value) }
    }

    fn raised_power(&mut self) -> Option<Ratio> {
        let negative = self.peek() == Some('⁻');
        if negative {
            self.bump();
        }
        let mut value: i32 = 0;
        let mut digits = 0;
        while let Some(digit) = self.peek().and_then(superscript) {
            self.bump();
            value = value.checked_mul(10)?.checked_add(digit)?;
            digits += 1;
        }
        if digits > 0 { Ratio::new(if negative { -value } else { value }, 1) } else { None }
    }

    /// `a * b^power`.
    fn combine(&self, a: &Unit, b: &Unit, power: Ratio, whole: Range<usize>, from: usize) -> Result<Unit, UnitError> {
        for (unit, range) in [(a, whole.start..from), (b, from..whole.end)] {
            if unit.has_offset() {
                return Err(self.offset_error(unit, range));
            }
        }
        let combined = || {
            let dim = a.dim.mul(&b.dim.pow(power)?)?;
            let length_power = a.length_power.checked_add(b.length_power.checked_mul(power)?)?;
            Some((dim, length_power))
        };
        let Some((dim, length_power)) = combined() else { return Err(self.out_of_range(whole)) };
        let scale = a.scale.times(b.scale.pow(power.num(), power.den()));
        let mut unit = Unit::plain(self.slice(whole), dim, scale, None);
        unit.length_power = length_power;
        Ok(unit)
    }

    fn offset_error(&self, unit: &Unit, range: Range<usize>) -> UnitError {
        let symbol = &unit.text;
        let difference = unit.of_differences().text;
        let range = match self.slice(range.clone()).find(symbol.as_str()) {
            Some(at) => range.start + at..range.start + at + symbol.len(),
            None => range,
        };
        let message = format!("`{symbol}` is a temperature level and cannot stand in a product of units");
        let mut e = error(UnitErrorCode::Offset, range, message);
        e.help = Some(format!("a difference is meant: write `K` or `{difference}`"));
        e.suggestions = vec!["K".into(), difference.to_string()];
        e
    }
}

fn unknown(name: &str, range: Range<usize>) -> UnitError {
    let suggestions: Vec<String> = symbols::nearest(name).into_iter().map(String::from).collect();
    if name == "ton" || name == "tons" {
        let mut e = error(UnitErrorCode::Ambiguous, range, format!("`{name}` has several meanings"));
        e.help = Some(
            "write `t` (1000 kg), `short_ton` (2000 lb), `long_ton` (2240 lb) or, for a force, `tf` (1000 kgf)".into(),
        );
        e.suggestions = suggestions;
        return e;
    }
    let mut e = error(UnitErrorCode::Unknown, range, format!("`{name}` is no unit"));
    if !suggestions.is_empty() {
        e.help = Some(format!("write `{}`", suggestions.join("` or `")));
    }
    e.suggestions = suggestions;
    e
}

fn superscript(c: char) -> Option<i32> {
    "⁰¹²³⁴⁵⁶⁷⁸⁹".chars().position(|digit| digit == c).and_then(|at| i32::try_from(at).ok())
}
