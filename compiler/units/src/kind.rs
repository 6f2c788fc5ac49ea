//! Kinds of quantities: what a number *is* beyond its dimension.
//!
//! A torque and an energy, a radius and a diameter, a temperature and a temperature difference share a dimension and
//! must not mix. The table stands in `kind_table`; which kinds are taken for each other, and what to say then, in
//! `confusion`. This module must never know values or sheets.

use std::collections::HashMap;
use std::fmt;
use std::sync::{Arc, OnceLock};

use crate::dimension::Dimension;
pub use crate::kind_table::Kind;
use crate::suggest;
use crate::types::Angle;
use crate::unit::{self, Unit};

/// What a length does in a formula.
#[derive(Copy, Clone, PartialEq, Eq, Hash, Debug)]
pub enum LengthRole {
    /// A lever: radius, diameter, lever arm, radius of gyration, lead. Free in its angle exponent, naturally -1 a power.
    Lever,
    /// A path: travel, height, path length. Its angle exponent is 0.
    Path,
    /// Not said: its first use decides.
    Open,
}

impl LengthRole {
    /// For hints: "lever arm", "path", "length".
    pub fn words(self) -> &'static str {
        match self {
            LengthRole::Lever => "lever arm or radius",
            LengthRole::Path => "path",
            LengthRole::Open => "length",
        }
    }
}

/// One row of the table of kinds.
#[derive(Debug)]
pub struct KindDef {
    /// The kind.
    pub kind: Kind,
    /// Its name in sheets.
    pub name: &'static str,
    /// Other names accepted in sheets.
    pub aliases: &'static [&'static str],
    /// Its name for people.
    pub words: &'static str,
    /// Its usual symbol.
    pub symbol: &'static str,
    /// The unit that it is shown in by default.
    pub unit: &'static str,
    /// Its dimension; the angle slot is the fixed exponent, or the natural one where the exponent is free.
    pub dim: Dimension,
    /// Is its angle exponent fixed or free?
    pub angle: Angle,
    /// The more general kind it belongs to, or itself.
    pub base: Kind,
}

impl Kind {
    /// The kind of this name or alias.
    pub fn from_name(name: &str) -> Option<Kind> {
        static KNOWN: OnceLock<HashMap<&'static str, Kind>> = OnceLock::new();
        let known = KNOWN.get_or_init(|| {
            let names = |def: &'static KindDef| std::iter::once(def.name).chain(def.aliases.iter().copied());
            Kind::all().iter().flat_map(|def| names(def).map(|name| (name, def.kind))).collect()
        });
        known.get(name).copied()
    }

    /// The names nearest to a misspelt one, best first.
    pub fn nearest(name: &str) -> Vec<&'static str> {
        let names = Kind::all().iter().flat_map(|def| std::iter::once(def.name).chain(def.aliases.iter().copied()));
        suggest::nearest_of(name, names)
    }

    /// Its name in sheets: `moment_of_inertia`.
    pub fn name(self) -> &'static str {
        self.def().name
    }

    /// Its name for people: "moment of inertia".
    pub fn words(self) -> &'static str {
        self.def().words
    }

    /// Its usual symbol, as in ISO 80000-3, -4 and -5 where they have one.
    pub fn symbol(self) -> &'static str {
        self.def().symbol
    }

    /// Its dimension.
    pub fn dimension(self) -> Dimension {
        self.def().dim
    }

    /// The more general kind that it belongs to, or itself.
    pub fn base(self) -> Kind {
        self.def().base
    }

    /// The most general kind that it belongs to.
    pub fn root(self) -> Kind {
        let mut kind = self;
        // Three steps are more than the table is deep; a bound keeps a wrong table from hanging the program.
        for _ in 0..4 {
            kind = kind.base();
        }
        kind
    }

    /// Is it `general`, or does it belong to it?
    pub fn is_a(self, general: Kind) -> bool {
        self == general || self.base() == general || self.root() == general
    }

    /// The unit that it is shown in by default.
    pub fn display_unit(self) -> Arc<Unit> {
        // Every quantity of a sheet asks: each kind's unit text is read once.
        static READ: OnceLock<Vec<OnceLock<Arc<Unit>>>> = OnceLock::new();
        let read = || {
            let mut unit = unit::parse(self.def().unit, &|_| None).unwrap_or_else(|_| Unit::coherent(self.dimension()));
            unit.kind = Some(self);
            Arc::new(unit)
        };
        let slots = READ.get_or_init(|| Kind::all().iter().map(|_| OnceLock::new()).collect());
        slots.get(self as usize).map_or_else(read, |slot| slot.get_or_init(read).clone())
    }

    /// What a length of this kind does in formulas; `None` where it is no length.
    pub fn length_role(self) -> Option<LengthRole> {
        match self {
            Kind::Length | Kind::Thickness | Kind::Width | Kind::Deflection => Some(LengthRole::Open),
            _ if self.root() != Kind::Length => None,
            _ if self.def().angle == Angle::Free => Some(LengthRole::Lever),
            _ => Some(LengthRole::Path),
        }
    }
}

impl fmt::Display for Kind {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.words())
    }
}
