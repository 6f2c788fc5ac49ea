//! One graph of quantities, many readings.
//!
//! Every quantity of a sheet, each body's mass, centre and tensor included, is
//! a node of one arena. Equal expressions are one node (hash-consing). A node's
//! operands always have smaller numbers than the node, so one pass over the
//! arena in order evaluates it; no reading recurses.
//!
//! Readings so far: the value ([`evaluate`], [`Cone`]), the derivative
//! ([`tangents`]) with the reach of rounding ([`rounding`]), the enclosure of
//! all values over ranges of the inputs ([`enclose`]) with what equations leave
//! of it ([`narrow`]) and the slopes over it ([`slope_enclosures`]), and the
//! formula ([`formula`]). [`Parts`] cuts out what a few inputs move as a small
//! graph of its own. The graph knows numbers in coherent SI units and must
//! never know units, kinds, names' scopes or text positions.

mod derivative;
mod eigen;
mod enclosure;
mod formula;
mod narrow;
mod node;
mod part;
mod slopes;
mod value;

pub use derivative::{partials, rounding, tangents};
pub use eigen::{Principal, principal};
pub use enclosure::{Enclosure, enclose, enclose_node, enclose_nodes};
pub use formula::{Formula, formula};
pub use narrow::{Left, narrow};
pub use node::{CompareOp, Function, Graph, InputId, LiteralId, NodeId, Op, QuantityId, TensorId};
pub use part::{Part, Parts};
pub use slopes::{partial_enclosures, slope_enclosures};
pub use value::{Cone, evaluate, evaluate_into, value_of, value_with};
