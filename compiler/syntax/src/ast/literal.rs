//! Numbers with unit and tolerance, as written. Nothing here knows a unit's size.

use pintle_text::Span;
use smol_str::SmolStr;

use super::{Expr, Name, UnitText};

/// A number as written: `60 mm ± 0.1 mm`, `0.12 within 0.08 .. 0.16`, `60 mm h6`.
#[derive(Clone, Debug, PartialEq)]
pub struct Literal {
    /// The digits as written, underscores left in: `1_450`, `6.5e3`.
    pub number: SmolStr,
    /// Their value. Infinite if too large (reported by the checker).
    pub value: f64,
    /// Where the digits stand.
    pub number_span: Span,
    /// The unit behind.
    pub unit: Option<UnitText>,
    /// The tolerance behind.
    pub tolerance: Option<Tolerance>,
    /// `normal`, `triangular`, `arcsine`, `uniform`.
    pub distribution: Option<Name>,
}

/// What is said of how sure a number is.
#[derive(Clone, Debug, PartialEq)]
pub enum Tolerance {
    /// `± 0.1 mm`, `+/- 5 %`.
    Symmetric(Box<Literal>),
    /// `± (+0.2, -0.0) mm`; signs as written.
    Limits {
        /// First value.
        upper: f64,
        /// Second value.
        lower: f64,
        /// The unit behind the bracket.
        unit: Option<UnitText>,
        /// Where.
        span: Span,
    },
    /// `within 0.08 .. 0.16`.
    Within(Box<Range>),
    /// `u 0.05 kg`.
    Standard(Box<Literal>),
    /// `h6`, `H7`, `k6`: an ISO 286 class.
    Class(Name),
}

/// `a .. b`.
#[derive(Clone, Debug, PartialEq)]
pub struct Range {
    /// Lower end.
    pub low: Expr,
    /// Upper end.
    pub high: Expr,
}
