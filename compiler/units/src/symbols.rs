//! Finding units by their symbols, with prefixes, and naming the nearest ones.
//!
//! It must never know how unit text is written together; that is `unit`.

use std::collections::BTreeMap;
use std::sync::OnceLock;

use smol_str::{SmolStr, format_smolstr};

use crate::scale::Scale;
use crate::suggest;
use crate::table::{self, PREFIXES, Prefixes, UnitDef};

struct Symbols {
    plain: Vec<UnitDef>,
    by_symbol: BTreeMap<SmolStr, UnitDef>,
}

/// Words that begin or join clauses; a unit of the same spelling (the attosecond) is not read.
const CLAUSE_WORDS: &[&str] = &["as", "at", "by", "to", "of", "on", "for", "from", "under", "over", "u", "within"];

fn symbols() -> &'static Symbols {
    static TABLE: OnceLock<Symbols> = OnceLock::new();
    TABLE.get_or_init(|| {
        let plain = table::rows();
        let mut by_symbol = BTreeMap::new();
        for def in &plain {
            for name in std::iter::once(&def.symbol).chain(&def.aliases) {
                by_symbol.entry(name.clone()).or_insert_with(|| def.clone());
            }
        }
        // Prefixed units never hide a plain one: `min` stays the minute, `ft` the foot, `mil` the mil.
        for def in &plain {
            for (prefix, words, power) in PREFIXES {
                if takes(def.prefixes, prefix) {
                    add_prefixed(&mut by_symbol, def, prefix, words, *power);
                }
            }
        }
        Symbols { plain, by_symbol }
    })
}

fn takes(prefixes: Prefixes, prefix: &str) -> bool {
    match prefixes {
        Prefixes::None => false,
        Prefixes::All => true,
        Prefixes::Only(list) => list.contains(prefix),
    }
}

fn add_prefixed(by_symbol: &mut BTreeMap<SmolStr, UnitDef>, def: &UnitDef, prefix: &str, words: &str, power: i32) {
    let step = if power < 0 { Scale::new(1.0, 10.0) } else { Scale::new(10.0, 1.0) };
    let mut prefixed = def.clone();
    prefixed.symbol = format_smolstr!("{prefix}{}", def.symbol);
    prefixed.words = format_smolstr!("{words}{}", def.words);
    prefixed.scale = def.scale.times(step.pow(power.abs(), 1));
    prefixed.prefixes = Prefixes::None;
    let spellings: &[&str] = if prefix == "u" { &["u", "\u{b5}", "\u{3bc}"] } else { &[prefix] };
    let mut names: Vec<SmolStr> = Vec::new();
    for spelling in spellings {
        for base in std::iter::once(&def.symbol).chain(&def.aliases) {
            names.push(format_smolstr!("{spelling}{base}"));
        }
    }
    prefixed.aliases = names.iter().filter(|name| **name != prefixed.symbol).cloned().collect();
    for name in names {
        if !CLAUSE_WORDS.contains(&name.as_str()) {
            by_symbol.entry(name).or_insert_with(|| prefixed.clone());
        }
    }
}

/// The unit of this symbol, prefixed ones included; `kN` and `kn` are different units.
pub fn lookup(symbol: &str) -> Option<&'static UnitDef> {
    symbols().by_symbol.get(symbol)
}

/// All units without prefixed ones, for listings.
pub fn all() -> &'static [UnitDef] {
    &symbols().plain
}

/// All symbols that are read as units, prefixed ones included, in order of their spelling.
pub fn all_symbols() -> impl Iterator<Item = &'static str> {
    symbols().by_symbol.keys().map(SmolStr::as_str)
}

/// Spellings of the shop floor and what is written instead.
const INSTEAD: &[(&str, &[&str])] = &[
    ("ton", &["t", "short_ton", "long_ton", "tf"]),
    ("tons", &["t", "short_ton", "long_ton", "tf"]),
    ("tonne", &["t"]),
    ("tonnes", &["t"]),
    ("Nm", &["N*m"]),
    ("NM", &["N*m"]),
    ("nM", &["N*m"]),
    ("kNm", &["kN*m"]),
    ("Nmm", &["N*mm"]),
    ("Ncm", &["N*cm"]),
    ("daNm", &["daN*m"]),
    ("kgm", &["kg*m", "kgf*m"]),
    ("kgm2", &["kg*m^2"]),
    ("kgcm2", &["kg*cm^2"]),
    ("gmm", &["g*mm"]),
    ("kpm", &["kp*m"]),
    ("kgfm", &["kgf*m"]),
    ("lbft", &["lbf*ft"]),
    ("ftlb", &["lbf*ft"]),
    ("ftlbf", &["lbf*ft"]),
    ("lbin", &["lbf*in"]),
    ("inlb", &["lbf*in"]),
    ("ozin", &["ozf*in", "oz*in"]),
    ("Ws", &["W*s", "J"]),
    ("Ah", &["A*h"]),
    ("lbs", &["lb"]),
    ("pound", &["lb", "lbf"]),
    ("pounds", &["lb", "lbf"]),
    ("ounce", &["oz", "ozf"]),
    ("sec", &["s"]),
    ("secs", &["s"]),
    ("second", &["s"]),
    ("seconds", &["s"]),
    ("mins", &["min"]),
    ("minute", &["min"]),
    ("minutes", &["min"]),
    ("hr", &["h"]),
    ("hrs", &["h"]),
    ("hour", &["h"]),
    ("hours", &["h"]),
    ("day", &["d"]),
    ("days", &["d"]),
    ("r", &["rev"]),
    ("revs", &["rev"]),
    ("r.p.m", &["rpm"]),
    ("degree", &["deg"]),
    ("degrees", &["deg"]),
    ("radian", &["rad"]),
    ("radians", &["rad"]),
    ("sqm", &["m^2"]),
    ("qm", &["m^2"]),
    ("sqmm", &["mm^2"]),
    ("sqft", &["ft^2"]),
    ("sqin", &["in^2"]),
    ("cbm", &["m^3"]),
    ("cum", &["m^3"]),
    ("ccm", &["cm^3"]),
    ("cc", &["cm^3"]),
    ("m2", &["m^2"]),
    ("m3", &["m^3"]),
    ("mm2", &["mm^2"]),
    ("mm3", &["mm^3"]),
    ("mm4", &["mm^4"]),
    ("l", &["L"]),
    ("ltr", &["L"]),
    ("inch", &["in"]),
    ("inches", &["in"]),
    ("feet", &["ft"]),
    ("foot", &["ft"]),
    ("micron", &["um"]),
    ("metre", &["m"]),
    ("meter", &["m"]),
    ("kph", &["km/h"]),
    ("kmh", &["km/h"]),
    ("kmph", &["km/h"]),
    ("mps", &["m/s"]),
    ("kt", &["kn"]),
    ("kts", &["kn"]),
    ("at", &["tech_atm", "kgf/cm^2"]),
    ("C", &["degC"]),
    ("F", &["degF"]),
    ("celsius", &["degC"]),
    ("kelvin", &["K"]),
    ("horsepower", &["hp", "PS"]),
    ("BHP", &["hp"]),
    ("bhp", &["hp"]),
    ("pk", &["PS"]),
    ("ch", &["PS"]),
    ("newton", &["N"]),
    ("joule", &["J"]),
    ("watt", &["W"]),
    ("percent", &["%"]),
    ("pct", &["%"]),
    ("gee", &["g_n"]),
];

/// What a spelling that is no unit is likely meant to be, best first: shop-floor spellings, then case-only
/// differences, then small misspellings.
pub fn nearest(symbol: &str) -> Vec<&'static str> {
    if let Some((_, instead)) = INSTEAD.iter().find(|(written, _)| *written == symbol) {
        return instead.to_vec();
    }
    // Rare prefixed units (petapascal, yoctogram) would drown the likely ones.
    const USUAL: [&str; 9] = ["k", "M", "G", "m", "u", "n", "c", "d", "h"];
    let usual = symbols().by_symbol.iter().filter(|(name, def)| {
        let prefix = name.strip_suffix(suffix_of(def)).unwrap_or_default();
        prefix.is_empty() || USUAL.contains(&prefix)
    });
    let mut found = suggest::nearest_of(symbol, usual.map(|(name, _)| name.as_str()));
    let lower = symbol.to_lowercase();
    if found.is_empty()
        && let Some((_, instead)) = INSTEAD.iter().find(|(written, _)| written.to_lowercase() == lower)
    {
        found = instead.to_vec();
    }
    found
}

/// The symbol of the unit without its prefix.
fn suffix_of(def: &UnitDef) -> &str {
    symbols()
        .plain
        .iter()
        .map(|plain| plain.symbol.as_str())
        .filter(|plain| def.symbol.ends_with(plain))
        .max_by_key(|plain| plain.len())
        .unwrap_or_default()
}
