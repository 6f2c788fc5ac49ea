//! Lines of rotors and trains, and the paths of loads. Nothing here knows
//! mechanics.

use pintle_text::Span;

use super::{Clauses, Expr, Field, Name, Path};

/// One line of a rotor.
#[derive(Clone, Debug, PartialEq)]
pub struct Placement {
    /// `less`: material removed.
    pub less: bool,
    /// What is placed: a body, a rotor, a part's member.
    pub part: Path,
    /// `at 600 mm` or `at (0 mm, 1 mm, 2 mm)`.
    pub at: Option<Expr>,
    /// `from far_flange`.
    pub from: Option<Name>,
    /// Fields in the braces.
    pub fields: Vec<Field>,
    /// Behind it; `for` repeats the placement.
    pub clauses: Clauses,
    /// Where.
    pub span: Span,
}

/// How a load moves.
#[derive(Clone, Debug, PartialEq)]
pub enum LoadPath {
    /// `vertical`.
    Vertical(Span),
    /// `incline ANGLE`.
    Incline(Expr),
    /// `level`.
    Level(Span),
}

/// One link of a train.
#[derive(Clone, Debug, PartialEq)]
pub struct Link {
    /// gear, belt, rope, rack, screw, direct, roll, epicyclic: as written.
    pub kind: Name,
    /// Its name.
    pub name: Name,
    /// The side the arrow leaves.
    pub from: Path,
    /// The side the arrow reaches.
    pub to: Path,
    /// ratio, efficiency, back, pitch_diameter, falls, lead ...
    pub fields: Vec<Field>,
    /// Behind it.
    pub clauses: Clauses,
    /// Where.
    pub span: Span,
}
