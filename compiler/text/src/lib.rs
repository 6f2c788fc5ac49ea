//! Text, places in it, and what can be said about a place.
//!
//! The first stage of the flow. It knows files as bytes and positions as byte
//! offsets; it must never know a token, a name or a unit. Everything that a
//! later stage reports is a [`Diagnostic`]: data until the last moment, which
//! the terminal, the JSON writer and the language server render each in their
//! own way.

mod diagnostic;
mod lines;

pub use diagnostic::{Code, Diagnostic, Edit, Fix, Label, Severity};
pub use lines::LineIndex;

/// Bytes `start .. end` of some text; which text, the context says.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord, Default)]
pub struct Span {
    /// First byte.
    pub start: u32,
    /// One past the last byte.
    pub end: u32,
}

impl Span {
    /// The span of bytes `start .. end`.
    pub const fn new(start: u32, end: u32) -> Span {
        Span { start, end }
    }

    /// The empty span at `offset`.
    pub const fn at(offset: u32) -> Span {
        Span { start: offset, end: offset }
    }

    /// The smallest span that holds both.
    pub fn to(self, other: Span) -> Span {
        Span { start: self.start.min(other.start), end: self.end.max(other.end) }
    }

    /// The same bytes counted from another origin, `by` bytes further on.
    pub fn shifted(self, by: u32) -> Span {
        Span { start: self.start + by, end: self.end + by }
    }

    /// Whether `offset` lies in the span or at its end.
    pub fn touches(self, offset: u32) -> bool {
        self.start <= offset && offset <= self.end
    }

    /// Length in bytes.
    pub fn len(self) -> u32 {
        self.end - self.start
    }

    /// Whether the span holds no byte.
    pub fn is_empty(self) -> bool {
        self.start == self.end
    }

    /// The span as a range of `usize`, to slice text with.
    pub fn range(self) -> std::ops::Range<usize> {
        self.start as usize..self.end as usize
    }
}

/// One file of a compilation, library files included.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct FileId(pub u32);

/// One top-level item of one file.
///
/// Stages after syntax name places by item, never by offset in the file, so
/// that a comment added above changes nothing below it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct ItemId {
    /// The file.
    pub file: FileId,
    /// Position among the items of the file.
    pub index: u32,
}

/// A span of bytes counted from the first byte of an item.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Place {
    /// The item.
    pub item: ItemId,
    /// Bytes, counted from the item's first.
    pub span: Span,
}
