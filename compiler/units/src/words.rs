//! What a type is called, for people: "torque", "torque or energy", "a quantity in kg*m/s".
//!
//! It must never judge; `unify` does.

use std::sync::Arc;

use crate::dimension::Dimension;
use crate::kind::Kind;
use crate::rational::Ratio;
use crate::types::{Angle, Type};
use crate::unify;
use crate::unit::{self, Unit};

impl Type {
    /// What it is, in words.
    pub fn words(&self) -> String {
        if self.condition {
            return "condition".into();
        }
        if let Some(kind) = self.kind {
            return kind.words().into();
        }
        if self.dim == Dimension::NONE.with_angle(self.dim.angle()) && self.angle == Angle::Free {
            return if self.is_angle() { "angle or pure number".into() } else { "pure number".into() };
        }
        match self.readings().as_slice() {
            [] => format!("quantity in {}", self.unit_text_with_angle()),
            [kind] => kind.words().into(),
            [first, second, ..] if unify::strict_about_angle(&self.dim) => {
                format!("{} or {}", first.words(), second.words())
            }
            [first, ..] => first.words().into(),
        }
    }

    /// What it is in words, with its unit: "torque (N*m)".
    pub fn words_and_unit(&self) -> String {
        let words = self.words();
        if self.condition || self.is_number() || words.starts_with("quantity in") {
            return words;
        }
        let unit = match self.kind {
            Some(kind) => coherent_text(kind, self),
            None => self.unit_text(),
        };
        format!("{words} ({unit})")
    }

    /// The general kinds that it can be, the usual ones first.
    pub fn readings(&self) -> Vec<Kind> {
        if self.condition {
            return Vec::new();
        }
        let bare = self.dim.without_angle();
        Kind::all()
            .iter()
            .filter(|def| def.base == def.kind && !matches!(def.kind, Kind::FlywheelEffectMass | Kind::Lead))
            .filter(|def| def.dim.without_angle() == bare && unify::angle_fits(self, def.kind))
            .map(|def| def.kind)
            .collect()
    }

    /// Is it a torque or an energy until something fixes it, as the literal `40 N*m` is?
    pub fn is_torque_or_energy(&self) -> bool {
        let readings = if self.kind.is_none() { self.readings() } else { Vec::new() };
        readings.contains(&Kind::Torque) && readings.contains(&Kind::Energy)
    }

    fn unit_text(&self) -> String {
        display_unit(self).text.to_string()
    }

    /// Where the angle exponent is what is wrong, it must show: `W/rad`.
    fn unit_text_with_angle(&self) -> String {
        let unit = display_unit(self);
        let angle = if unit.dim.angle().is_zero() { self.dim.angle() } else { Ratio::ZERO };
        match (angle == Ratio::ONE, angle == Ratio::whole(-1)) {
            (true, _) => format!("{}*rad", unit.text),
            (_, true) if !unit.text.contains('/') => format!("{}/rad", unit.text),
            _ if angle.is_zero() => unit.text.to_string(),
            _ => self.dim.si_symbol(),
        }
    }
}

/// The unit of a kind in messages: its own where that is an SI unit without a factor, the coherent one else.
fn coherent_text(kind: Kind, ty: &Type) -> String {
    let own = kind.display_unit();
    match kind {
        Kind::AngularVelocity => "rad/s".into(),
        Kind::Lead => "m/rad".into(),
        Kind::RotationalFrequency => "1/s".into(),
        Kind::Temperature | Kind::TemperatureDifference => "K".into(),
        _ if own.factor == 1.0 && !own.has_offset() => own.text.to_string(),
        _ => display_unit(&Type { kind: None, ..*ty }).text.to_string(),
    }
}

/// SI units of the dimensions that have a usual one, angle left out.
const USUAL: &[(Dimension, &str)] = &[
    (Dimension::FORCE, "N"),
    (Dimension::POWER, "W"),
    (Dimension::PRESSURE, "Pa"),
    (Dimension::of(0, 1, -2, 0), "N/m"),
    (Dimension::of(0, 1, -1, 0), "kg/s"),
    (Dimension::of(-1, 1, -1, 0), "Pa*s"),
    (Dimension::of(3, 1, -2, 0), "N*m^2"),
    (Dimension::of(0, 1, -3, 0), "W/m^2"),
    (Dimension::of(2, 1, -3, 0).and(0, -1), "V"),
    (Dimension::of(2, 1, -3, 0).and(0, -2), "ohm"),
    (Dimension::of(2, 1, -2, 0).and(-1, 0), "J/K"),
    (Dimension::of(2, 0, -2, 0).and(-1, 0), "J/(kg*K)"),
    (Dimension::of(1, 1, -3, 0).and(-1, 0), "W/(m*K)"),
    (Dimension::of(0, 1, -3, 0).and(-1, 0), "W/(m^2*K)"),
];

/// The unit that a value of this type is best shown in: that of its kind, or the coherent SI unit.
pub fn display_unit(ty: &Type) -> Arc<Unit> {
    if let Some(kind) = ty.kind {
        return kind.display_unit();
    }
    let bare = ty.dim.without_angle();
    let angle = ty.dim.angle();
    let text = if bare == Dimension::ENERGY {
        let (low, high) = ty.natural_range();
        match ty.angle {
            Angle::Fixed if angle == Ratio::whole(-2) => "N*m/rad".into(),
            Angle::Fixed if angle == Ratio::ZERO => "J".into(),
            Angle::Free if low == Ratio::ZERO && high == Ratio::ZERO => "J".into(),
            _ => String::from("N*m"),
        }
    } else if bare == Dimension::of(0, 0, -1, 0) || bare == Dimension::of(0, 0, -2, 0) || bare.is_none() {
        // Rates of turning keep their radian, or 3 rad/s would read as 3 per second.
        let angle = if ty.angle == Angle::Fixed || angle == Ratio::ONE { angle } else { Ratio::ZERO };
        bare.with_angle(angle).si_symbol()
    } else if let Some((_, text)) = USUAL.iter().find(|(dim, _)| *dim == bare) {
        (*text).into()
    } else {
        bare.si_symbol()
    };
    Arc::new(unit::parse(&text, &|_| None).unwrap_or_else(|_| Unit::coherent(bare)))
}
