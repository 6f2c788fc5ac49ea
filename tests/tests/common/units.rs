//! SI factors of the units that expectations use, exact where the unit is defined exactly.

use std::f64::consts::PI;

const G: f64 = 9.80665;
const LB: f64 = 0.45359237;
const FT: f64 = 0.3048;

fn factor(word: &str) -> Option<f64> {
    Some(match word {
        "1" | "m" | "kg" | "s" | "N" | "J" | "W" | "Pa" | "rad" | "K" | "Hz" => 1.0,
        "mm" | "g" => 1e-3,
        "um" | "mg" => 1e-6,
        "kN" | "kJ" | "kW" | "t" => 1e3,
        "MPa" => 1e6,
        "min" => 60.0,
        "h" => 3600.0,
        "deg" => PI / 180.0,
        "rev" | "turn" => 2.0 * PI,
        "rpm" => 2.0 * PI / 60.0,
        "kgf" => G,
        "lb" => LB,
        "ft" => FT,
        "lbf" => LB * G,
        _ => return None,
    })
}

/// `value` of `unit` in SI: `kg*m^2`, `J/(kg*K)`, `degC`.
#[track_caller]
pub fn si(value: f64, unit: &str) -> f64 {
    if unit == "degC" {
        return value + 273.15;
    }
    let mut result = value;
    let mut divides = false;
    for (at, side) in unit.split('/').enumerate() {
        divides |= at > 0;
        for part in side.trim_matches(['(', ')']).split('*') {
            let (word, power) = part.split_once('^').unwrap_or((part, "1"));
            let factor = factor(word).unwrap_or_else(|| panic!("the suite's unit table lacks `{word}` of `{unit}`"));
            let power: i32 = power.parse().unwrap_or_else(|_| panic!("power in `{unit}`"));
            for _ in 0..power {
                result = if divides { result / factor } else { result * factor };
            }
        }
    }
    result
}
