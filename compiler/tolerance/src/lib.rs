//! How tolerances of inputs reach every node: guaranteed worst case and
//! first-order sensitivities, both through unknowns that equations fix.
//!
//! The worst case is an enclosure with outward rounding: no combination of
//! values inside the tolerances leaves it. It is the meet of three of them: the
//! natural one, the mean-value form, and the one at the corners that the signs
//! of the slopes single out. What the corners attain tells how much of its
//! width is real.
//!
//! An unknown is enclosed by Krawczyk's operator with the toleranced inputs as
//! intervals behind it (Krawczyk, Computing 4 (1969) 187; Moore's test, SIAM
//! J. Numer. Anal. 14 (1977) 611; both from memory): one success proves that
//! the solution at the nominal values goes on, alone near by, for every value
//! inside the tolerances. Slopes go through the equations by the implicit
//! function theorem.
//!
//! Knows nodes and numbers in SI; must never know names, units or texts.

mod block;
mod cone;
mod linear;
mod study;

pub use study::Study;

use pintle_graph::{InputId, NodeId};
use pintle_interval::Interval;

/// An input that may have any value of a range.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Spread {
    /// The input.
    pub input: InputId,
    /// Its nominal value; a size with a tolerance class may have it outside of its limits (`60 mm g6`).
    pub nominal: f64,
    /// All its values.
    pub range: Interval,
}

impl Spread {
    /// The possible value that is nearest to the nominal one.
    pub(crate) fn base(&self) -> f64 {
        self.nominal.max(self.range.lo).min(self.range.hi)
    }
}

/// An unknown with its solution at the nominal values.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Unknown {
    /// The input that stands for it.
    pub input: InputId,
    /// Its value.
    pub value: f64,
    /// The range in which it was looked for.
    pub range: Interval,
}

/// Unknowns that were found together, with as many equations.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Solved {
    /// The unknowns.
    pub unknowns: Vec<Unknown>,
    /// Left and right sides.
    pub equations: Vec<(NodeId, NodeId)>,
}

/// The worst case of a node.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Worst {
    /// Below this it never comes.
    pub low: f64,
    /// Above this it never comes.
    pub high: f64,
    /// The least and the greatest value that a corner of the tolerances was seen to attain.
    pub attained: (f64, f64),
}

impl Worst {
    /// Share of the width that corners attain: 1 where the worst case is exact.
    pub fn tightness(&self) -> f64 {
        let width = self.high - self.low;
        if width > 0.0 { ((self.attained.1 - self.attained.0) / width).clamp(0.0, 1.0) } else { 1.0 }
    }
}

/// Why there is no worst case.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Unproved {
    /// Equations could not be shown to keep one solution over all of the tolerances.
    Equations,
    /// The unknown of this input reaches an end of the range in which it is looked for.
    RangeEnd(InputId),
    /// The node has no value somewhere inside the tolerances, or none that is bounded.
    Undefined,
}
