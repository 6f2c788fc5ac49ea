//! Which equations fix which unknowns, in which order, and finding them.
//!
//! [`structure`] pairs equations with unknowns and puts the pairs into blocks,
//! each block needing only those before it. [`solve`] takes the blocks in turn:
//! one unknown by a search over its whole range, several together by Newton's
//! method from many starts. A value is returned only if its equations hold to
//! rounding. Nothing here proves that a root is the only one: what was seen is
//! what is reported, and several roots are never silently made one.
//!
//! Knows nodes and numbers in SI; must never know names, units or texts.

mod bracket;
mod pieces;
mod polynomial;
mod residual;
mod sample;
mod signs;
mod single;
mod solve;
mod structure;
mod system;

pub use solve::{Outcome, solve};
pub use structure::{Block, Structure, structure};

use pintle_graph::{InputId, NodeId};

/// An input to be found, within its range (both ends belong to it; an end may be infinite).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Unknown {
    /// The input.
    pub input: InputId,
    /// Lower end.
    pub low: f64,
    /// Upper end.
    pub high: f64,
}

/// `left == right`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Equation {
    /// One side.
    pub left: NodeId,
    /// The other.
    pub right: NodeId,
}

/// Unknowns and the equations that are to fix them.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Problem {
    /// What is to be found.
    pub unknowns: Vec<Unknown>,
    /// What is to hold.
    pub equations: Vec<Equation>,
}

/// Why an unknown was not found.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum NotFound {
    /// No point seen in the range satisfies the equations.
    NoRoot,
    /// The equations have no value at any point seen in the range.
    Undefined,
    /// The equations hold on a whole stretch of the range, or say the same thing twice: they fix no single value.
    Stretch,
    /// No equation is left to fix it.
    Free,
    /// The range is empty or not a number.
    BadRange,
    /// Stopped from outside.
    Cancelled,
}
