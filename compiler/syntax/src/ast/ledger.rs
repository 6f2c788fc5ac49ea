//! Lines of ledgers, and unknowns. Nothing here knows energy.

use pintle_text::Span;

use super::{Clauses, Expr, Field, Name, Path, Range};

/// One line of a ledger.
#[derive(Clone, Debug, PartialEq)]
pub struct LedgerLine {
    /// What it says.
    pub kind: LedgerLineKind,
    /// Behind it.
    pub clauses: Clauses,
    /// Where.
    pub span: Span,
}

/// Kinds of ledger lines.
#[derive(Clone, Debug, PartialEq)]
pub enum LedgerLineKind {
    /// `start at rest`, `start drum.speed = 24 rpm`, `start from runaway.end`.
    Start(StateSpec),
    /// `end at rest`, `end drum.speed = 24 rpm`.
    End(StateSpec),
    /// `travel cradle 5.5 m down_path`.
    Travel {
        /// The member.
        member: Path,
        /// How far; None with a `wanted` line for it.
        distance: Expr,
        /// `down_path`, `up_path`, `forward`, `back`.
        direction: Option<Name>,
    },
    /// `spring buffer from 0 mm to x`.
    Spring {
        /// The spring.
        spring: Path,
        /// Deflection at the start.
        from: Expr,
        /// Deflection at the end.
        to: Expr,
    },
    /// `gain motor = torque * motor.angle`, `gain motor at motor_rotor = 3 kJ`.
    Gain(Entry),
    /// `lose rolling = roll_force * cradle.travel`, `lose brake at drum = heat`.
    Lose(Entry),
    /// `wanted drum.speed within 0 rpm .. 900 rpm`.
    Wanted(Wanted),
    /// `limit ...` inside the ledger.
    Limit {
        /// A comparison.
        condition: Expr,
    },
    /// `name = value`, local to the ledger.
    Local(Field),
}

/// A gain or loss of a ledger.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// `at MEMBER`: where on the train it acts. None: read off the members named in the value.
    pub at: Option<Path>,
    /// Name and value.
    pub field: Field,
}

/// A state of a train.
#[derive(Clone, Debug, PartialEq)]
pub enum StateSpec {
    /// `at rest`.
    AtRest(Span),
    /// `drum.speed = 24 rpm`.
    Speed {
        /// `drum.speed`.
        path: Path,
        /// The value.
        value: Expr,
    },
    /// `from runaway.end`.
    From(Path),
}

/// An unknown with its range and equations.
#[derive(Clone, Debug, PartialEq)]
pub struct Wanted {
    /// What is wanted.
    pub path: Path,
    /// `: kind`.
    pub kind: Option<Name>,
    /// `within a .. b`.
    pub range: Option<Range>,
    /// `where f == g, h == k`: comparisons joined by `and` or commas.
    pub equations: Vec<Expr>,
}
