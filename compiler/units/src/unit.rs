//! Units as written in sheets: `kg*m^2`, `N*m/(rad/s)`, `1/min`, `m^(1/2)`.
//!
//! Reads unit text without spaces and converts values. Quotients follow ISO 80000-1: one solidus, brackets beyond it.
//! It must never know sheets, spans of files or the algebra of types.

use std::fmt;
use std::ops::Range;

use smol_str::SmolStr;

use crate::dimension::{Base, Dimension};
use crate::kind::Kind;
use crate::rational::Ratio;
use crate::scale::Scale;
use crate::symbols;
use crate::unit_text;

/// The kelvin reading at which Celsius has its zero, exactly (SI brochure, 9th edition).
const ICE_POINT: f64 = 273.15;

/// A unit, read and ready to convert.
#[derive(Clone, PartialEq, Debug)]
pub struct Unit {
    /// As written.
    pub text: SmolStr,
    /// The dimension; angle units count with their exponent, lengths contribute none.
    pub dim: Dimension,
    /// The size in the coherent SI unit.
    pub factor: f64,
    /// For temperature levels, what their zero is in kelvin: 273.15 for `degC`; 0 for all else.
    pub offset: f64,
    /// For temperature levels, their reading at 273.15 K; converting from there loses no digits.
    pub(crate) ice_point: Option<f64>,
    /// The kind that the unit fixes: energy for `J`, angular velocity for `rpm`.
    pub kind: Option<Kind>,
    /// Written as a product of force and length, such as `N*m`: a torque or an energy until something fixes it.
    pub angle_open: bool,
    /// The net power of length units in the text: `N*m/rad` has 1, `J` 0, `kg*m^2` 2.
    pub length_power: Ratio,
    /// The size, exactly.
    pub scale: Scale,
}

impl Unit {
    /// The unit of pure numbers.
    pub fn one() -> Unit {
        Unit::plain("1", Dimension::NONE, Scale::ONE, None)
    }

    /// The coherent SI unit of a dimension, angle written out.
    pub fn coherent(dim: Dimension) -> Unit {
        let mut unit = Unit::plain(&dim.si_symbol(), dim, Scale::ONE, None);
        unit.length_power = dim.exponent(Base::Length);
        unit
    }

    pub(crate) fn plain(text: &str, dim: Dimension, scale: Scale, kind: Option<Kind>) -> Unit {
        let length_power = if dim == Dimension::LENGTH { Ratio::ONE } else { Ratio::ZERO };
        Unit {
            text: text.into(),
            dim,
            factor: scale.value(),
            offset: 0.0,
            ice_point: None,
            kind,
            angle_open: false,
            length_power,
            scale,
        }
    }

    /// A user's own unit: `value` of `base` under a new name.
    pub fn named(name: &str, value: f64, base: &Unit) -> Option<Unit> {
        let scale = Scale::new(value, 1.0).times(base.scale);
        if base.has_offset() || !scale.is_usable() {
            return None;
        }
        Some(Unit { text: name.into(), factor: scale.value(), scale, ..base.clone() })
    }

    /// A value in this unit, in SI.
    pub fn to_si(&self, value: f64) -> f64 {
        match self.ice_point {
            None => self.scale.apply(value),
            Some(reading) => self.scale.apply(value - reading) + ICE_POINT,
        }
    }

    /// An SI value, in this unit.
    pub fn from_si(&self, si: f64) -> f64 {
        match self.ice_point {
            None => self.scale.unapply(si),
            Some(reading) => self.scale.unapply(si - ICE_POINT) + reading,
        }
    }

    /// A difference in this unit (a tolerance, an uncertainty), in SI: without the offset of temperatures.
    pub fn difference_to_si(&self, value: f64) -> f64 {
        self.scale.apply(value)
    }

    /// An SI difference, in this unit: without the offset of temperatures.
    pub fn difference_from_si(&self, si: f64) -> f64 {
        self.scale.unapply(si)
    }

    /// Is it a temperature level such as `degC`, whose zero is not at 0 K?
    pub fn has_offset(&self) -> bool {
        self.ice_point.is_some()
    }

    /// The unit of differences that belongs to a temperature level; itself for all others.
    pub fn of_differences(&self) -> Unit {
        let symbol = match self.text.as_str() {
            "degC" | "°C" | "℃" => "delta_degC",
            "degF" | "°F" | "℉" => "delta_degF",
            _ => return self.clone(),
        };
        parse(symbol, &|_| None).unwrap_or_else(|_| self.clone())
    }
}

impl fmt::Display for Unit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.text)
    }
}

/// What is wrong with a unit text.
#[derive(Copy, Clone, PartialEq, Eq, Debug)]
pub enum UnitErrorCode {
    /// No unit of this name.
    Unknown,
    /// A bare `ton`.
    Ambiguous,
    /// More than one solidus, or a product after one.
    Solidus,
    /// A temperature level in a product.
    Offset,
    /// Not unit text.
    Syntax,
    /// Exponents or sizes out of range.
    Range,
}

/// What is wrong with a unit text, where, and what to write instead.
#[derive(Clone, PartialEq, Debug)]
pub struct UnitError {
    /// What is wrong.
    pub code: UnitErrorCode,
    /// Bytes of the unit text.
    pub range: Range<usize>,
    /// One line.
    pub message: String,
    /// How it is mended.
    pub help: Option<String>,
    /// Replacements for the text in `range`, best first.
    pub suggestions: Vec<String>,
}

impl fmt::Display for UnitError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.message)
    }
}

impl std::error::Error for UnitError {}

/// Reads a unit written without spaces. `user` knows the sheet's own units and is asked after the table.
pub fn parse(text: &str, user: &dyn Fn(&str) -> Option<Unit>) -> Result<Unit, UnitError> {
    let mut unit = unit_text::read(text, user)?;
    unit.text = text.into();
    Ok(unit)
}

/// The unit of one symbol of the table.
pub(crate) fn from_table(symbol: &str) -> Option<Unit> {
    let def = symbols::lookup(symbol)?;
    let mut unit = Unit::plain(symbol, def.dim, def.scale, def.kind);
    unit.ice_point = def.ice_point;
    unit.offset = def.ice_point.map_or(0.0, |reading| ICE_POINT - def.scale.apply(reading));
    Some(unit)
}
