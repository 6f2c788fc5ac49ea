//! Which quantities are taken for each other, and how each slip is mended.
//!
//! The slips are those of the trade (common practice; the outside cases list sixteen). Advice is always found: where
//! no known slip fits, the missing factor is named from the dimensions.

use crate::dimension::Dimension;
use crate::kind::Kind;
use crate::mismatch::{FixHint, article};
use crate::rational::Ratio;
use crate::types::{Angle, Type};
use crate::unify;

enum Edit {
    None,
    After(&'static str),
    Slot(&'static str),
    Around(&'static str),
    Unit(&'static str),
}

impl Edit {
    fn hint(&self, found: &Type) -> Option<FixHint> {
        match self {
            Edit::None => None,
            Edit::After(text) => Some(FixHint::Append((*text).into())),
            Edit::Around(call) => Some(FixHint::Wrap(format!("{call}("), ")".into())),
            Edit::Slot(text) => Some(FixHint::AppendSlot((*text).into())),
            // Only a number written in place has a unit to replace.
            Edit::Unit(unit) => found.level_literal.then(|| FixHint::ReplaceUnit((*unit).into())),
        }
    }
}

/// Kinds of one family that must not mix although neither dimension nor angle tells them apart.
pub(crate) fn clash(a: Kind, b: Kind) -> bool {
    const PAIRS: &[(Kind, Kind)] = &[
        (Kind::Diameter, Kind::Radius),
        (Kind::Diameter, Kind::LeverArm),
        (Kind::Diameter, Kind::GyrationRadius),
        (Kind::Diameter, Kind::SpecificUnbalance),
        (Kind::GyrationRadius, Kind::Radius),
        (Kind::GaugePressure, Kind::AbsolutePressure),
    ];
    PAIRS.iter().any(|&(x, y)| (a, b) == (x, y) || (a, b) == (y, x))
}

// found, wanted, help, edit
const SLIPS: &[(Kind, Kind, &str, Edit)] = &[
    (Kind::Diameter, Kind::Radius, "a radius is half the diameter: divide by 2", Edit::After(" / 2")),
    (Kind::Diameter, Kind::LeverArm, "the lever arm of a wheel is half its diameter: divide by 2", Edit::After(" / 2")),
    (
        Kind::Diameter,
        Kind::GyrationRadius,
        "the radius of gyration comes from inertia and mass: `sqrt(J / m)`; a thin ring has half its diameter",
        Edit::After(" / 2"),
    ),
    (Kind::Radius, Kind::Diameter, "a diameter is twice the radius: multiply by 2", Edit::After(" * 2")),
    (Kind::LeverArm, Kind::Diameter, "a diameter is twice the lever arm: multiply by 2", Edit::After(" * 2")),
    (
        Kind::SpecificUnbalance,
        Kind::Diameter,
        "a specific unbalance is the offset of the mass centre, a radius: multiply by 2 if its circle's diameter is meant",
        Edit::After(" * 2"),
    ),
    (
        Kind::Diameter,
        Kind::SpecificUnbalance,
        "a specific unbalance is the offset of the mass centre, a radius: divide by 2",
        Edit::After(" / 2"),
    ),
    (
        Kind::GyrationRadius,
        Kind::Diameter,
        "a radius of gyration is no diameter; the two relate by the body's shape (a thin ring: k = d/2)",
        Edit::None,
    ),
    (
        Kind::Radius,
        Kind::GyrationRadius,
        "the radius of gyration is `sqrt(J / m)`, less than the outer radius (a solid disc: r / sqrt(2))",
        Edit::None,
    ),
    (
        Kind::GyrationRadius,
        Kind::Radius,
        "the radius of gyration is `sqrt(J / m)`; it is no radius of the body (a solid disc: r = k * sqrt(2))",
        Edit::None,
    ),
    (
        Kind::FlywheelEffect,
        Kind::MomentOfInertia,
        "GD² is weight times diameter squared: J = GD² / (4 * g_n), so 4 kgf*m^2 are 1 kg*m^2",
        Edit::Around("inertia_from_flywheel_effect"),
    ),
    (
        Kind::FlywheelEffectMass,
        Kind::MomentOfInertia,
        "GD² in kg*m^2 is four times the moment of inertia: divide by 4",
        Edit::After(" / 4"),
    ),
    (
        Kind::MomentOfInertia,
        Kind::FlywheelEffectMass,
        "GD² in kg*m^2 is four times the moment of inertia; declare this quantity as a moment_of_inertia instead",
        Edit::None,
    ),
    (
        Kind::MomentOfInertia,
        Kind::FlywheelEffect,
        "GD² is weight times diameter squared: multiply by 4 * g_n",
        Edit::After(" * 4 * g_n"),
    ),
    (
        Kind::FlywheelEffect,
        Kind::FlywheelEffectMass,
        "the weight form holds standard gravity: divide by g_n",
        Edit::After(" / g_n"),
    ),
    (
        Kind::SecondMomentOfArea,
        Kind::MomentOfInertia,
        "m^4 is a second moment of area (bending, twisting); a moment of inertia holds mass: for a bar multiply by density and length",
        Edit::Slot(" * density * length"),
    ),
    (
        Kind::MomentOfInertia,
        Kind::SecondMomentOfArea,
        "kg*m^2 is a moment of inertia (turning masses); a second moment of area holds no mass and is in mm^4",
        Edit::None,
    ),
    (
        Kind::Torque,
        Kind::MomentOfInertia,
        "a torque over the angular acceleration that it causes is the moment of inertia",
        Edit::Slot(" / angular_acceleration"),
    ),
    (Kind::Force, Kind::Mass, "a force is not a mass: divide a weight by g_n", Edit::After(" / g_n")),
    (
        Kind::Mass,
        Kind::Force,
        "a mass is not a force: multiply by g_n for its weight (`lb`, `oz`, `kg`, `t` are masses; `lbf`, `ozf`, `kgf`, `tf` forces)",
        Edit::After(" * g_n"),
    ),
    (
        Kind::Frequency,
        Kind::AngularVelocity,
        "a frequency counts turns or cycles: multiply by `1 rev` (2*pi rad); a value that is in radians already, by `1 rad`",
        Edit::After(" * 1 rev"),
    ),
    (
        Kind::AngularVelocity,
        Kind::Frequency,
        "an angular velocity over one turn is the frequency: divide by `1 rev`",
        Edit::After(" / 1 rev"),
    ),
    (
        Kind::Energy,
        Kind::Torque,
        "a torque is an energy per angle: divide by the angle turned (a centrifugal force or a gyroscopic term: name the force, or take the library's formula)",
        Edit::Slot(" / angle"),
    ),
    (
        Kind::Torque,
        Kind::Energy,
        "a torque does work over an angle: multiply by the angle turned (1 rev is 2*pi rad)",
        Edit::Slot(" * angle"),
    ),
    (Kind::Power, Kind::Energy, "a power is an energy per time: multiply by the time", Edit::Slot(" * time")),
    (Kind::Energy, Kind::Power, "a power is an energy per time: divide by the time", Edit::Slot(" / time")),
    (
        Kind::Torque,
        Kind::Power,
        "the power of a torque is torque times angular velocity",
        Edit::Slot(" * angular_velocity"),
    ),
    (
        Kind::Power,
        Kind::Torque,
        "the torque of a power is power over angular velocity",
        Edit::Slot(" / angular_velocity"),
    ),
    (Kind::Force, Kind::Power, "the power of a force is force times speed", Edit::Slot(" * speed")),
    (Kind::Force, Kind::Torque, "a torque is a force times its lever arm", Edit::Slot(" * radius")),
    (Kind::Torque, Kind::Force, "the force at a wheel is the torque over its radius", Edit::Slot(" / radius")),
    (Kind::Force, Kind::Energy, "a work is a force times its travel", Edit::Slot(" * travel")),
    (Kind::Density, Kind::Mass, "a mass is density times volume", Edit::Slot(" * volume")),
    (Kind::LinearDensity, Kind::Mass, "a mass is linear density times length", Edit::Slot(" * length")),
    (Kind::Mass, Kind::Density, "a density is a mass over its volume", Edit::Slot(" / volume")),
    (Kind::Volume, Kind::Mass, "a mass is density times volume", Edit::Slot(" * density")),
    (Kind::Pressure, Kind::Force, "a force is pressure or stress times area", Edit::Slot(" * area")),
    (Kind::Force, Kind::Pressure, "a pressure or stress is a force over its area", Edit::Slot(" / area")),
    (Kind::Torque, Kind::Pressure, "a stress is a torque over its section modulus", Edit::Slot(" / section_modulus")),
    (
        Kind::AngularMomentum,
        Kind::Torque,
        "a torque is a change of angular momentum per time: divide by the time",
        Edit::Slot(" / time"),
    ),
    (
        Kind::Torque,
        Kind::AngularMomentum,
        "an angular momentum is a torque times the time that it acts",
        Edit::Slot(" * time"),
    ),
    (
        Kind::Momentum,
        Kind::Force,
        "a force is a change of momentum per time: divide by the time",
        Edit::Slot(" / time"),
    ),
    (
        Kind::GaugePressure,
        Kind::AbsolutePressure,
        "a gauge pressure counts from the ambient pressure: add it (standard atmosphere: 1 atm)",
        Edit::After(" + 1 atm"),
    ),
    (
        Kind::AbsolutePressure,
        Kind::GaugePressure,
        "a gauge pressure counts from the ambient pressure: subtract it (standard atmosphere: 1 atm)",
        Edit::After(" - 1 atm"),
    ),
    (
        Kind::Temperature,
        Kind::TemperatureDifference,
        "a temperature level is not a difference: subtract the level that it counts from, or write `K` or `delta_degC`",
        Edit::Unit("K"),
    ),
    (
        Kind::TemperatureDifference,
        Kind::Temperature,
        "a temperature difference is not a level: add it to the level that it counts from",
        Edit::Slot(" + 20 degC"),
    ),
    (Kind::Lead, Kind::Length, "a lead is a length per angle: multiply by the angle turned", Edit::After(" * 1 rev")),
    (
        Kind::Length,
        Kind::Lead,
        "a lead is a length per angle: write `mm/rev`, or divide by `1 rev`",
        Edit::After(" / 1 rev"),
    ),
    (
        Kind::Stiffness,
        Kind::TorsionalStiffness,
        "a spring at a lever arm has the torsional stiffness rate times radius squared",
        Edit::Slot(" * radius^2"),
    ),
    (
        Kind::TorsionalStiffness,
        Kind::Stiffness,
        "the rate at a lever arm is the torsional stiffness over radius squared",
        Edit::Slot(" / radius^2"),
    ),
    (
        Kind::Torque,
        Kind::TorsionalStiffness,
        "a torsional stiffness is a torque per angle: N*m/rad",
        Edit::After(" / 1 rad"),
    ),
    (
        Kind::TorsionalStiffness,
        Kind::Torque,
        "a torque is torsional stiffness times the angle of twist",
        Edit::Slot(" * angle"),
    ),
    (
        Kind::TorsionalStiffness,
        Kind::Energy,
        "the energy of a twisted spring is half the stiffness times the angle squared",
        Edit::Slot(" / 2 * angle^2"),
    ),
    (
        Kind::MomentOfInertia,
        Kind::Energy,
        "a kinetic energy is half the moment of inertia times the angular velocity squared",
        Edit::Slot(" / 2 * angular_velocity^2"),
    ),
    (Kind::AngularVelocity, Kind::Speed, "a speed is angular velocity times radius", Edit::Slot(" * radius")),
    (Kind::Speed, Kind::AngularVelocity, "an angular velocity is speed over radius", Edit::Slot(" / radius")),
    (
        Kind::AngularAcceleration,
        Kind::Acceleration,
        "an acceleration is angular acceleration times radius",
        Edit::Slot(" * radius"),
    ),
    (
        Kind::Acceleration,
        Kind::AngularAcceleration,
        "an angular acceleration is acceleration over radius",
        Edit::Slot(" / radius"),
    ),
    (
        Kind::Ratio,
        Kind::Angle,
        "a plain number is no angle: multiply by `1 rad`, `1 deg` or `1 rev`",
        Edit::After(" * 1 rad"),
    ),
    (Kind::Angle, Kind::Ratio, "an angle is no plain number: divide by `1 rad` or `1 rev`", Edit::After(" / 1 rad")),
    (
        Kind::Unbalance,
        Kind::SpecificUnbalance,
        "a specific unbalance is unbalance over rotor mass",
        Edit::Slot(" / mass"),
    ),
    (
        Kind::SpecificUnbalance,
        Kind::Unbalance,
        "an unbalance is specific unbalance times rotor mass",
        Edit::Slot(" * mass"),
    ),
    (
        Kind::Unbalance,
        Kind::MomentOfInertia,
        "an unbalance is mass times one length; a moment of inertia holds the square",
        Edit::None,
    ),
    (
        Kind::MassFlow,
        Kind::Damping,
        "a mass flow and a damping coefficient are both kg/s and are not the same",
        Edit::None,
    ),
    (
        Kind::Damping,
        Kind::TorsionalDamping,
        "a damper at a lever arm has the torsional damping coefficient times radius squared",
        Edit::Slot(" * radius^2"),
    ),
];

/// Help and edit for `found` standing where `wanted` belongs.
pub(crate) fn advice(found: &Type, wanted: Kind) -> (String, Option<FixHint>) {
    if let Some(known) = missing_turn(found, wanted) {
        return known;
    }
    // Exact pairs before families: radius and diameter before length and lead.
    let exact = SLIPS.iter().find(|(f, w, ..)| found.kind == Some(*f) && *w == wanted);
    let family = || SLIPS.iter().find(|(f, w, ..)| is_like(found, *f) && wanted.is_a(*w));
    if let Some((_, _, help, edit)) = exact.or_else(family) {
        return ((*help).into(), edit.hint(found));
    }
    missing_factor(found, &Type::of_kind(wanted))
}

/// Where the formula itself tells whether turns or radians are counted, the fix is certain.
fn missing_turn(found: &Type, wanted: Kind) -> Option<(String, Option<FixHint>)> {
    if found.dim.without_angle() != wanted.dimension().without_angle() {
        return None;
    }
    if wanted == Kind::AngularVelocity && found.kind.is_none() && found.rooted {
        let help = "a root of stiffness over inertia is in 1/s: multiply by `1 rad`, or write `natural(k_t, J)`";
        return Some((help.into(), Some(FixHint::Append(" * 1 rad".into()))));
    }
    let gap = wanted.dimension().angle().checked_sub(found.dim.angle())?;
    let strict = wanted.def().angle == Angle::Fixed && found.angle == Angle::Fixed;
    if found.pi == 0 || !strict || (gap != Ratio::ONE && gap != Ratio::whole(-1)) {
        return None;
    }
    let edit = if gap == Ratio::ONE { " * 1 rad" } else { " / 1 rad" };
    let help = format!("pi is in place, its radian is not: append `{}`", edit.trim());
    Some((help, Some(FixHint::Append(edit.into()))))
}

/// Help and edit for two types that cannot be joined; the edit belongs to the second.
pub(crate) fn advice_between(a: &Type, b: &Type) -> (String, Option<FixHint>) {
    let wanted = |ty: &Type| ty.kind.or_else(|| ty.readings().first().copied());
    if let Some(kind) = wanted(a) {
        let known = SLIPS.iter().any(|(f, w, ..)| is_like(b, *f) && kind.is_a(*w));
        if known {
            return advice(b, kind);
        }
    }
    if let Some(kind) = wanted(b) {
        let known = SLIPS.iter().any(|(f, w, ..)| is_like(a, *f) && kind.is_a(*w));
        if known {
            // The edit would belong to the first side, so only the words are given.
            return (advice(a, kind).0, None);
        }
    }
    missing_factor(b, a)
}

fn is_like(ty: &Type, kind: Kind) -> bool {
    match ty.kind {
        Some(own) => own.is_a(kind),
        None => ty.dim.without_angle() == kind.dimension().without_angle() && unify::angle_fits(ty, kind),
    }
}

/// Names the factor that the dimensions lack.
fn missing_factor(found: &Type, wanted: &Type) -> (String, Option<FixHint>) {
    if found.dim.without_angle() == wanted.dim.without_angle() {
        return missing_angle(found, wanted);
    }
    if found.is_number() {
        let unit = crate::words::display_unit(wanted).text.clone();
        let help =
            format!("write the number with its unit, for example `{unit}`; in a formula a bracket may be missing");
        return (help, Some(FixHint::Append(format!(" * 1 {unit}"))));
    }
    if wanted.is_number() {
        let words = found.words();
        let help = format!("divide by {} to compare with: only a ratio is a pure number", article(&words));
        return (help, None);
    }
    const FACTORS: &[Kind] = &[
        Kind::Time,
        Kind::Length,
        Kind::Area,
        Kind::Volume,
        Kind::Mass,
        Kind::Speed,
        Kind::Acceleration,
        Kind::Force,
        Kind::Density,
        Kind::TemperatureDifference,
        Kind::Stiffness,
        Kind::Pressure,
        Kind::Energy,
        Kind::Power,
        Kind::SpecificHeat,
        Kind::Current,
        Kind::Voltage,
    ];
    let named = |dim: Option<Dimension>| {
        let dim = dim?.without_angle();
        FACTORS.iter().find(|kind| kind.dimension().without_angle() == dim)
    };
    let (mine, theirs) = (found.dim.without_angle(), wanted.dim.without_angle());
    if Dimension::NONE.div(&mine) == Some(theirs) {
        return ("the quotient is upside down: turn it round".into(), None);
    }
    // Rates of turning are told from 1/s by their angle, where that binds on both sides.
    let fixed = found.angle == Angle::Fixed && wanted.angle == Angle::Fixed;
    const TURNING: &[Kind] = &[Kind::AngularVelocity, Kind::AngularAcceleration, Kind::MomentOfInertia];
    for kind in TURNING.iter().filter(|_| fixed) {
        let words = Type::of_kind(*kind).words_and_unit();
        if wanted.dim.div(&found.dim) == Some(kind.dimension()) {
            let fix = FixHint::AppendSlot(format!(" * {}", kind.name()));
            return (format!("it lacks a factor: {}", article(&words)), Some(fix));
        }
        if found.dim.div(&wanted.dim) == Some(kind.dimension()) {
            let fix = FixHint::AppendSlot(format!(" / {}", kind.name()));
            return (format!("it has a factor too many: {}", article(&words)), Some(fix));
        }
    }
    if let Some(kind) = named(theirs.div(&mine)) {
        let words = Type::of_kind(*kind).words_and_unit();
        return (
            format!("it lacks a factor: {}", article(&words)),
            Some(FixHint::AppendSlot(format!(" * {}", kind.name()))),
        );
    }
    if let Some(kind) = named(mine.div(&theirs)) {
        let words = Type::of_kind(*kind).words_and_unit();
        return (
            format!("it has a factor too many: {}", article(&words)),
            Some(FixHint::AppendSlot(format!(" / {}", kind.name()))),
        );
    }
    match theirs.div(&mine) {
        Some(factor) => (format!("the two differ by a factor in {factor}; check the formula"), None),
        None => ("check the formula".into(), None),
    }
}

fn missing_angle(found: &Type, wanted: &Type) -> (String, Option<FixHint>) {
    let gap = wanted.dim.angle().checked_sub(found.dim.angle());
    if found.angle == Angle::Fixed || wanted.angle == Angle::Fixed {
        if gap == Some(Ratio::ONE) {
            // With 2*pi in place only the radian is missing; a bare count of turns lacks the whole turn.
            let missing = if found.pi == 0 && wanted.dim == Dimension::POWER { " * 1 rev" } else { " * 1 rad" };
            return (
                "it lacks an angle: multiply by `1 rev` if it counts turns, by `1 rad` if it holds 2*pi already".into(),
                Some(FixHint::Append(missing.into())),
            );
        }
        if gap == Some(Ratio::whole(-1)) {
            return (
                "it holds an angle too many: divide by `1 rad`, or by `1 rev` if it counts turns".into(),
                Some(FixHint::Append(" / 1 rad".into())),
            );
        }
    }
    let (a, b) = (found.words(), wanted.words());
    (format!("{} and {} share a unit but are not the same quantity", article(&a), article(&b)), None)
}

/// The unit that is meant where a number was written with one of the wrong kind: `lb` for a force means `lbf`.
pub fn unit_instead(written: &str, wanted: Kind) -> Option<&'static str> {
    const INSTEAD: &[(&str, Kind, &str)] = &[
        ("lb", Kind::Force, "lbf"),
        ("oz", Kind::Force, "ozf"),
        ("g", Kind::Force, "gf"),
        ("kg", Kind::Force, "kgf"),
        ("t", Kind::Force, "tf"),
        ("short_ton", Kind::Force, "short_tonf"),
        ("long_ton", Kind::Force, "long_tonf"),
        ("lbf", Kind::Mass, "lb"),
        ("ozf", Kind::Mass, "oz"),
        ("gf", Kind::Mass, "g"),
        ("kgf", Kind::Mass, "kg"),
        ("kp", Kind::Mass, "kg"),
        ("tf", Kind::Mass, "t"),
        ("short_tonf", Kind::Mass, "short_ton"),
        ("long_tonf", Kind::Mass, "long_ton"),
        ("1/min", Kind::AngularVelocity, "rpm"),
        ("1/s", Kind::AngularVelocity, "rps"),
        ("Hz", Kind::AngularVelocity, "rps"),
        ("rpm", Kind::Frequency, "1/min"),
        ("degC", Kind::TemperatureDifference, "delta_degC"),
        ("°C", Kind::TemperatureDifference, "delta_degC"),
        ("degF", Kind::TemperatureDifference, "delta_degF"),
        ("°F", Kind::TemperatureDifference, "delta_degF"),
        ("delta_degC", Kind::Temperature, "degC"),
        ("delta_degF", Kind::Temperature, "degF"),
        ("J", Kind::Torque, "N*m"),
        ("kJ", Kind::Torque, "kN*m"),
        ("mm", Kind::Lead, "mm/rev"),
        ("in", Kind::Lead, "in/rev"),
        ("N*m", Kind::TorsionalStiffness, "N*m/rad"),
        ("kW", Kind::Energy, "kW*h"),
    ];
    INSTEAD.iter().find(|(unit, kind, _)| *unit == written && wanted.is_a(*kind)).map(|(.., instead)| *instead)
}
