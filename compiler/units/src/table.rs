//! The unit table: SI, units accepted beside it, and the customary and legacy units of the trade.
//!
//! Sizes are exact quotients wherever the definition is exact (NIST SP 811, appendix B, and the definitions of
//! 1959 for inch and pound, of 1901 for standard gravity; figures from memory, checked against the outside cases).
//! Lookup with prefixes stands in `symbols`. This module must never know how unit text is written together.

use std::f64::consts::{PI, TAU};

use smol_str::SmolStr;

use crate::dimension::Dimension;
use crate::kind::Kind;
use crate::scale::Scale;

/// One unit of the table.
#[derive(Clone, Debug)]
pub struct UnitDef {
    /// The symbol that stands in sheets.
    pub symbol: SmolStr,
    /// Other spellings.
    pub aliases: Vec<SmolStr>,
    /// The name in words.
    pub words: SmolStr,
    /// The dimension.
    pub dim: Dimension,
    /// The size in the coherent SI unit.
    pub scale: Scale,
    /// The reading of a temperature level at the ice point, 273.15 K: 0 for `degC`, 32 for `degF`.
    pub ice_point: Option<f64>,
    /// The kind that the unit fixes.
    pub kind: Option<Kind>,
    /// Where the size comes from.
    pub source: &'static str,
    /// Which prefixes it takes.
    pub prefixes: Prefixes,
}

/// Which SI prefixes a unit takes.
#[derive(Copy, Clone, PartialEq, Eq, Debug)]
pub enum Prefixes {
    /// None.
    None,
    /// All of them.
    All,
    /// Only those listed, by their symbols without spaces: "kM".
    Only(&'static str),
}

/// The SI prefixes: symbol, name, power of ten.
pub(crate) const PREFIXES: &[(&str, &str, i32)] = &[
    ("Q", "quetta", 30),
    ("R", "ronna", 27),
    ("Y", "yotta", 24),
    ("Z", "zetta", 21),
    ("E", "exa", 18),
    ("P", "peta", 15),
    ("T", "tera", 12),
    ("G", "giga", 9),
    ("M", "mega", 6),
    ("k", "kilo", 3),
    ("h", "hecto", 2),
    ("da", "deca", 1),
    ("d", "deci", -1),
    ("c", "centi", -2),
    ("m", "milli", -3),
    ("u", "micro", -6),
    ("n", "nano", -9),
    ("p", "pico", -12),
    ("f", "femto", -15),
    ("a", "atto", -18),
    ("z", "zepto", -21),
    ("y", "yocto", -24),
    ("r", "ronto", -27),
    ("q", "quecto", -30),
];

const SI: &str = "SI brochure, 9th edition";
const BESIDE: &str = "SI brochure, 9th edition, units accepted for use with the SI";
const SP811: &str = "NIST SP 811, appendix B";
const PRACTICE: &str = "common practice";

const FORCE: Dimension = Dimension::FORCE;
const ENERGY: Dimension = Dimension::ENERGY;
const POWER: Dimension = Dimension::POWER;
const PRESSURE: Dimension = Dimension::PRESSURE;
const LENGTH: Dimension = Dimension::LENGTH;
const MASS: Dimension = Dimension::MASS;
const TIME: Dimension = Dimension::TIME;
const ANGLE: Dimension = Dimension::ANGLE;
const NUMBER: Dimension = Dimension::NONE;
const VOLUME: Dimension = Dimension::of(3, 0, 0, 0);
const SPEED: Dimension = Dimension::of(1, 0, -1, 0);
const RATE: Dimension = Dimension::of(0, 0, -1, 0);
const ANGULAR: Dimension = Dimension::of(0, 0, -1, 1);

struct Row(&'static str, &'static [&'static str], &'static str, Dimension, f64, f64);

/// The table without prefixed units, in the order of listings.
pub(crate) fn rows() -> Vec<UnitDef> {
    let mut table: Vec<UnitDef> = Vec::with_capacity(120);
    let mut add = |source: &'static str, prefixes: Prefixes, kind: Option<Kind>, row: Row| {
        let Row(symbol, aliases, words, dim, num, den) = row;
        table.push(UnitDef {
            symbol: symbol.into(),
            aliases: aliases.iter().map(|a| SmolStr::new_static(a)).collect(),
            words: words.into(),
            dim,
            scale: Scale::new(num, den),
            ice_point: None,
            kind,
            source,
            prefixes,
        });
    };
    si(&mut add);
    beside(&mut add);
    customary(&mut add);
    engineering(&mut add);
    temperatures(&mut table);
    table
}

type Add<'a> = &'a mut dyn FnMut(&'static str, Prefixes, Option<Kind>, Row);

fn si(add: Add) {
    let all = Prefixes::All;
    add(SI, all, None, Row("m", &[], "metre", LENGTH, 1.0, 1.0));
    add(SI, all, Some(Kind::Mass), Row("g", &[], "gram", MASS, 1.0, 1e3));
    add(SI, all, Some(Kind::Time), Row("s", &[], "second", TIME, 1.0, 1.0));
    add(SI, all, Some(Kind::Current), Row("A", &[], "ampere", Dimension::CURRENT, 1.0, 1.0));
    add(SI, all, None, Row("K", &[], "kelvin", Dimension::TEMPERATURE, 1.0, 1.0));
    add(SI, all, None, Row("mol", &[], "mole", Dimension::AMOUNT, 1.0, 1.0));
    add(SI, all, None, Row("cd", &[], "candela", Dimension::LUMINOUS_INTENSITY, 1.0, 1.0));
    add(SI, Prefixes::Only("mun"), Some(Kind::Angle), Row("rad", &[], "radian", ANGLE, 1.0, 1.0));
    add(SI, all, Some(Kind::Frequency), Row("Hz", &[], "hertz", RATE, 1.0, 1.0));
    add(SI, all, Some(Kind::Force), Row("N", &[], "newton", FORCE, 1.0, 1.0));
    add(SI, all, Some(Kind::Pressure), Row("Pa", &[], "pascal", PRESSURE, 1.0, 1.0));
    add(SI, all, Some(Kind::Energy), Row("J", &[], "joule", ENERGY, 1.0, 1.0));
    add(SI, all, Some(Kind::Power), Row("W", &[], "watt", POWER, 1.0, 1.0));
    add(SI, all, Some(Kind::Voltage), Row("V", &[], "volt", Dimension::of(2, 1, -3, 0).and(0, -1), 1.0, 1.0));
    let ohm = Dimension::of(2, 1, -3, 0).and(0, -2);
    // Both code points of the capital omega: Greek letter and ohm sign.
    add(SI, all, Some(Kind::Resistance), Row("ohm", &["\u{3a9}", "\u{2126}"], "ohm", ohm, 1.0, 1.0));
}

fn beside(add: Add) {
    let none = Prefixes::None;
    let time = Some(Kind::Time);
    let angle = Some(Kind::Angle);
    add(BESIDE, none, time, Row("min", &[], "minute", TIME, 60.0, 1.0));
    add(BESIDE, none, time, Row("h", &[], "hour", TIME, 3600.0, 1.0));
    add(BESIDE, none, time, Row("d", &[], "day", TIME, 86400.0, 1.0));
    add(BESIDE, none, Some(Kind::Mass), Row("t", &[], "tonne", MASS, 1e3, 1.0));
    add(BESIDE, Prefixes::Only("hdcmu"), None, Row("L", &[], "litre", VOLUME, 1.0, 1e3));
    add(BESIDE, none, angle, Row("deg", &["°"], "degree", ANGLE, PI, 180.0));
    add(BESIDE, none, angle, Row("arcmin", &["′"], "minute of arc", ANGLE, PI, 10_800.0));
    add(BESIDE, none, angle, Row("arcsec", &["″"], "second of arc", ANGLE, PI, 648_000.0));
    add(SP811, none, angle, Row("gon", &["grad"], "gon", ANGLE, PI, 200.0));
    add(PRACTICE, none, angle, Row("rev", &["turn"], "revolution", ANGLE, TAU, 1.0));
    let angular = Some(Kind::AngularVelocity);
    add(PRACTICE, none, angular, Row("rpm", &[], "revolution per minute", ANGULAR, TAU, 60.0));
    add(PRACTICE, none, angular, Row("rps", &[], "revolution per second", ANGULAR, TAU, 1.0));
    let pressure = Some(Kind::Pressure);
    add(BESIDE, Prefixes::Only("kmu"), pressure, Row("bar", &[], "bar", PRESSURE, 1e5, 1.0));
    add(SI, none, None, Row("%", &[], "per cent", NUMBER, 1.0, 100.0));
    add(SI, none, None, Row("‰", &["permille"], "per mille", NUMBER, 1.0, 1000.0));
    add(SI, none, None, Row("ppm", &[], "part per million", NUMBER, 1.0, 1e6));
    add(SI, Prefixes::Only("kMGT"), Some(Kind::Energy), Row("Wh", &[], "watt hour", ENERGY, 3600.0, 1.0));
}

fn customary(add: Add) {
    let none = Prefixes::None;
    let mass = Some(Kind::Mass);
    let force = Some(Kind::Force);
    add(SP811, none, None, Row("in", &[], "inch", LENGTH, 127.0, 5000.0));
    add(SP811, none, None, Row("ft", &[], "foot", LENGTH, 381.0, 1250.0));
    add(SP811, none, None, Row("yd", &[], "yard", LENGTH, 1143.0, 1250.0));
    add(SP811, none, None, Row("mi", &[], "mile", LENGTH, 1_609_344.0, 1000.0));
    add(SP811, none, None, Row("nmi", &[], "nautical mile", LENGTH, 1852.0, 1.0));
    add(SP811, none, None, Row("mil", &["thou"], "mil (thousandth of an inch)", LENGTH, 127.0, 5e6));
    add(SP811, none, mass, Row("lb", &["lbm"], "pound (mass)", MASS, 45_359_237.0, 1e8));
    add(SP811, none, mass, Row("oz", &["ozm"], "ounce (mass)", MASS, 45_359_237.0, 16e8));
    let lbf = Scale::new(44_482_216_152_605.0, 1e13);
    let (num, den) = lbf.over(Scale::new(381.0, 1250.0)).parts();
    add(SP811, none, mass, Row("slug", &[], "slug (lbf*s^2/ft)", MASS, num, den));
    add(SP811, none, mass, Row("short_ton", &[], "short ton (2000 lb)", MASS, 2000.0 * 45_359_237.0, 1e8));
    add(SP811, none, mass, Row("long_ton", &[], "long ton (2240 lb)", MASS, 2240.0 * 45_359_237.0, 1e8));
    // 1 lbf = 0.45359237 kg times 9.80665 m/s^2, exactly.
    add(SP811, none, force, Row("lbf", &[], "pound-force", FORCE, 44_482_216_152_605.0, 1e13));
    add(SP811, none, force, Row("ozf", &[], "ounce-force", FORCE, 44_482_216_152_605.0, 16e13));
    add(SP811, none, force, Row("kip", &[], "kip (1000 lbf)", FORCE, 44_482_216_152_605.0, 1e10));
    add(SP811, none, force, Row("short_tonf", &[], "short ton-force (2000 lbf)", FORCE, 88_964_432_305_210.0, 1e10));
    let (num, den) = lbf.times(Scale::new(2240.0, 1.0)).parts();
    add(SP811, none, force, Row("long_tonf", &[], "long ton-force (2240 lbf)", FORCE, num, den));
    add(SP811, none, force, Row("pdl", &[], "poundal", FORCE, 138_254_954_376.0, 1e12));
    add(SP811, none, None, Row("gal", &[], "gallon (US liquid)", VOLUME, 3_785_411_784.0, 1e12));
    let speed = Some(Kind::Speed);
    add(SP811, none, speed, Row("fpm", &[], "foot per minute", SPEED, 381.0, 75_000.0));
    add(SP811, none, speed, Row("mph", &[], "mile per hour", SPEED, 44_704.0, 1e5));
    add(SP811, none, speed, Row("kn", &[], "knot", SPEED, 1852.0, 3600.0));
}

fn engineering(add: Add) {
    let none = Prefixes::None;
    let force = Some(Kind::Force);
    add(SP811, none, force, Row("kgf", &["kp"], "kilogram-force (kilopond)", FORCE, 980_665.0, 1e5));
    add(SP811, none, force, Row("gf", &[], "gram-force", FORCE, 980_665.0, 1e8));
    add(SP811, none, force, Row("tf", &[], "tonne-force (1000 kgf)", FORCE, 980_665.0, 100.0));
    add(SP811, none, force, Row("dyn", &[], "dyne", FORCE, 1.0, 1e5));
    let pressure = Some(Kind::Pressure);
    // lbf/in^2: numerator and denominator of the force times (5000/127)^2.
    let psi = Scale::new(44_482_216_152_605.0, 1e13).over(Scale::new(127.0, 5000.0).pow(2, 1));
    let (num, den) = psi.parts();
    add(SP811, none, pressure, Row("psi", &[], "pound-force per square inch", PRESSURE, num, den));
    let (num, den) = psi.times(Scale::new(1000.0, 1.0)).parts();
    add(SP811, none, pressure, Row("ksi", &[], "kip per square inch", PRESSURE, num, den));
    add(SP811, none, pressure, Row("atm", &[], "standard atmosphere", PRESSURE, 101_325.0, 1.0));
    add(SP811, none, pressure, Row("tech_atm", &[], "technical atmosphere (kgf/cm^2)", PRESSURE, 980_665.0, 10.0));
    add(SP811, none, pressure, Row("torr", &[], "torr", PRESSURE, 101_325.0, 760.0));
    add(SP811, none, pressure, Row("mmHg", &[], "millimetre of mercury", PRESSURE, 133_322_387_415.0, 1e9));
    add(SP811, none, pressure, Row("inHg", &[], "inch of mercury", PRESSURE, 3_386_388_640_341.0, 1e9));
    add(SP811, none, pressure, Row("mmH2O", &[], "millimetre of water", PRESSURE, 980_665.0, 1e5));
    add(SP811, none, pressure, Row("inH2O", &[], "inch of water", PRESSURE, 24_908_891.0, 1e5));
    let power = Some(Kind::Power);
    let hp = Scale::new(550.0 * 381.0, 1250.0).times(Scale::new(44_482_216_152_605.0, 1e13));
    let (num, den) = hp.parts();
    add(SP811, none, power, Row("hp", &[], "horsepower (mechanical, 550 ft*lbf/s)", POWER, num, den));
    let metric = "metric horsepower (75 kgf*m/s)";
    add(SP811, none, power, Row("PS", &["CV", "hp_metric"], metric, POWER, 73_549_875.0, 1e5));
    add(SP811, none, power, Row("hp_electric", &[], "horsepower (electric)", POWER, 746.0, 1.0));
    let energy = Some(Kind::Energy);
    add(SP811, none, energy, Row("Btu", &[], "British thermal unit (IT)", ENERGY, 105_505_585_262.0, 1e8));
    let calorie = "calorie (IT, 4.1868 J)";
    add(SP811, Prefixes::Only("kM"), energy, Row("cal", &[], calorie, ENERGY, 41_868.0, 1e4));
    let thermochemical = "calorie (thermochemical, 4.184 J)";
    add(SP811, Prefixes::Only("k"), energy, Row("cal_th", &[], thermochemical, ENERGY, 4184.0, 1e3));
    add(SP811, none, energy, Row("erg", &[], "erg", ENERGY, 1.0, 1e7));
}

fn temperatures(table: &mut Vec<UnitDef>) {
    let mut push =
        |symbol: &str, aliases: &[&'static str], words: &str, scale: Scale, ice_point: Option<f64>, kind: Kind| {
            table.push(UnitDef {
                symbol: symbol.into(),
                aliases: aliases.iter().map(|a| SmolStr::new_static(a)).collect(),
                words: words.into(),
                dim: Dimension::TEMPERATURE,
                scale,
                ice_point,
                kind: Some(kind),
                source: SP811,
                prefixes: Prefixes::None,
            });
        };
    let (level, difference) = (Kind::Temperature, Kind::TemperatureDifference);
    let fahrenheit = Scale::new(5.0, 9.0);
    push("degC", &["°C", "℃"], "degree Celsius", Scale::ONE, Some(0.0), level);
    push("degF", &["°F", "℉"], "degree Fahrenheit", fahrenheit, Some(32.0), level);
    push("delta_degC", &["Δ°C", "ΔdegC"], "degree Celsius (difference)", Scale::ONE, None, difference);
    push("delta_degF", &["Δ°F", "ΔdegF"], "degree Fahrenheit (difference)", fahrenheit, None, difference);
}
