//! Dimensions: rational exponents over the seven base quantities of the SI and plane angle.
//!
//! Plane angle is a dimension for checking and is 1 for arithmetic; whether its exponent is binding is the
//! business of `types`. This module must never know units' sizes, kinds or messages.
//! Background: ISO 80000-1 (dimensions, form of unit quotients); Quincey and Brown, Metrologia 53 (2016), on angle.

use std::fmt::{self, Write as _};

use crate::rational::Ratio;

/// Where each base quantity stands in a [`Dimension`].
#[derive(Copy, Clone, PartialEq, Eq, Debug)]
pub enum Base {
    /// Length, metre.
    Length,
    /// Mass, kilogram.
    Mass,
    /// Time, second.
    Time,
    /// Thermodynamic temperature, kelvin.
    Temperature,
    /// Electric current, ampere.
    Current,
    /// Amount of substance, mole.
    Amount,
    /// Luminous intensity, candela.
    LuminousIntensity,
    /// Plane angle, radian.
    Angle,
}

/// Exponents of length, mass, time, temperature, current, amount, luminous intensity, plane angle.
#[derive(Copy, Clone, PartialEq, Eq, Hash, Debug)]
pub struct Dimension([Ratio; 8]);

impl Dimension {
    /// A pure number.
    pub const NONE: Dimension = Dimension::of(0, 0, 0, 0);
    /// Length.
    pub const LENGTH: Dimension = Dimension::of(1, 0, 0, 0);
    /// Mass.
    pub const MASS: Dimension = Dimension::of(0, 1, 0, 0);
    /// Time.
    pub const TIME: Dimension = Dimension::of(0, 0, 1, 0);
    /// Temperature.
    pub const TEMPERATURE: Dimension = Dimension::of(0, 0, 0, 0).with(3, 1);
    /// Electric current.
    pub const CURRENT: Dimension = Dimension::of(0, 0, 0, 0).with(4, 1);
    /// Amount of substance.
    pub const AMOUNT: Dimension = Dimension::of(0, 0, 0, 0).with(5, 1);
    /// Luminous intensity.
    pub const LUMINOUS_INTENSITY: Dimension = Dimension::of(0, 0, 0, 0).with(6, 1);
    /// Plane angle.
    pub const ANGLE: Dimension = Dimension::of(0, 0, 0, 1);
    /// Force.
    pub const FORCE: Dimension = Dimension::of(1, 1, -2, 0);
    /// Energy; a torque has one angle exponent of -1 beside it.
    pub const ENERGY: Dimension = Dimension::of(2, 1, -2, 0);
    /// Power.
    pub const POWER: Dimension = Dimension::of(2, 1, -3, 0);
    /// Pressure, stress.
    pub const PRESSURE: Dimension = Dimension::of(-1, 1, -2, 0);

    /// A mechanical dimension from whole exponents of length, mass, time and angle.
    pub const fn of(length: i16, mass: i16, time: i16, angle: i16) -> Dimension {
        let zero = Ratio::ZERO;
        Dimension([
            Ratio::whole(length),
            Ratio::whole(mass),
            Ratio::whole(time),
            zero,
            zero,
            zero,
            zero,
            Ratio::whole(angle),
        ])
    }

    /// The same with temperature and current exponents set: for tables of kinds and units.
    pub const fn and(self, temperature: i16, current: i16) -> Dimension {
        self.with(3, temperature).with(4, current)
    }

    const fn with(self, slot: usize, exponent: i16) -> Dimension {
        let mut exponents = self.0;
        exponents[slot] = Ratio::whole(exponent);
        Dimension(exponents)
    }

    /// The exponent of one base quantity.
    pub fn exponent(&self, base: Base) -> Ratio {
        self.0[base as usize]
    }

    /// The angle exponent.
    pub const fn angle(&self) -> Ratio {
        self.0[7]
    }

    /// The same with the angle exponent replaced.
    pub const fn with_angle(self, angle: Ratio) -> Dimension {
        let mut exponents = self.0;
        exponents[7] = angle;
        Dimension(exponents)
    }

    /// The same with angle counted as 1.
    pub const fn without_angle(self) -> Dimension {
        self.with_angle(Ratio::ZERO)
    }

    /// Is it a pure number, angle included?
    pub fn is_none(&self) -> bool {
        self.0.iter().all(|e| e.is_zero())
    }

    fn zip(&self, other: &Dimension, op: impl Fn(Ratio, Ratio) -> Option<Ratio>) -> Option<Dimension> {
        let mut exponents = self.0;
        for (mine, theirs) in exponents.iter_mut().zip(other.0) {
            *mine = op(*mine, theirs)?;
        }
        Some(Dimension(exponents))
    }

    /// The dimension of a product; `None` where an exponent leaves the range.
    pub fn mul(&self, other: &Dimension) -> Option<Dimension> {
        self.zip(other, Ratio::checked_add)
    }

    /// The dimension of a quotient.
    pub fn div(&self, other: &Dimension) -> Option<Dimension> {
        self.zip(other, Ratio::checked_sub)
    }

    /// The dimension of a power.
    pub fn pow(&self, power: Ratio) -> Option<Dimension> {
        self.zip(self, |mine, _| mine.checked_mul(power))
    }

    /// The dimension of a square root.
    pub fn sqrt(&self) -> Option<Dimension> {
        self.pow(Ratio::HALF)
    }

    /// The coherent SI unit, written as ISO 80000-1 has it: `kg*m^2/s^2`, `kg/(m*s)`, `1/s`, `1`.
    pub fn si_symbol(&self) -> String {
        // Mass before length is the usual reading order: kg*m^2, not m^2*kg.
        const ORDER: [(usize, &str); 8] =
            [(1, "kg"), (0, "m"), (4, "A"), (5, "mol"), (6, "cd"), (7, "rad"), (2, "s"), (3, "K")];
        let mut above: Vec<String> = Vec::new();
        let mut below: Vec<String> = Vec::new();
        for (slot, symbol) in ORDER {
            let exponent = self.0[slot];
            let (list, size) = match exponent.num().signum() {
                1 => (&mut above, Some(exponent)),
                -1 => (&mut below, exponent.checked_neg()),
                _ => continue,
            };
            let mut text = String::from(symbol);
            match size {
                Some(size) if size == Ratio::ONE => {}
                Some(size) if size.is_whole() => {
                    let _ = write!(text, "^{size}");
                }
                _ => {
                    let _ = write!(text, "^({})", size.unwrap_or(exponent));
                }
            }
            list.push(text);
        }
        let top = if above.is_empty() { String::from("1") } else { above.join("*") };
        match below.len() {
            0 => top,
            1 => format!("{top}/{}", below.join("")),
            _ => format!("{top}/({})", below.join("*")),
        }
    }
}

impl fmt::Display for Dimension {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.si_symbol())
    }
}
