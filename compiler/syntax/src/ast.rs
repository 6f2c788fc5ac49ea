//! The syntax of one file as data.
//!
//! Spans count from the first byte of the item that holds the node, so an item
//! whose text did not change is equal to its older self wherever it moved.
//! Nothing here knows units, kinds or what a name means.

mod assembly;
mod expression;
mod item;
mod ledger;
mod literal;
mod parts;
mod words;

use pintle_text::{Diagnostic, Span};

pub use assembly::{Link, LoadPath, Placement};
pub use expression::{Argument, BinaryOp, Expr, ExprKind, UnaryOp};
pub use item::{AssumeStatus, ItemKind, Later, LaterLine};
pub use ledger::{Entry, LedgerLine, LedgerLineKind, StateSpec, Wanted};
pub use literal::{Literal, Range, Tolerance};
pub use parts::{Arm, Choose, Cite, Clauses, Definition, Field, Parameter, Repeat};
pub use words::{Name, Path, Segment, Text, UnitText};

/// A parsed file: items in order. Every byte belongs to an item or to the
/// trivia between items.
#[derive(Clone, Debug, Default)]
pub struct SourceFile {
    /// Items in the order of the text.
    pub items: Vec<Item>,
}

/// One top-level item (or an item inside a component).
#[derive(Clone, Debug, PartialEq)]
pub struct Item {
    /// First byte of the item in the file; all spans inside count from here.
    pub offset: u32,
    /// Length in bytes, trailing clauses included.
    pub len: u32,
    /// What it is.
    pub kind: ItemKind,
    /// `cite`, `because`, `as` and the like behind it.
    pub clauses: Clauses,
    /// Faults of its text; the rest of the item is still there.
    pub errors: Vec<Diagnostic<Span>>,
}
