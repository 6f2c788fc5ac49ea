//! Words, texts and paths as written. Nothing here knows what they mean.

use pintle_text::Span;
use smol_str::SmolStr;

use super::Expr;

/// A word with its place.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Name {
    /// The word.
    pub text: SmolStr,
    /// Where.
    pub span: Span,
}

/// A text in quotes, without them, escapes resolved.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Text {
    /// The text.
    pub text: String,
    /// Where, quotes included.
    pub span: Span,
}

/// A dotted path: `runaway.drum.speed`, `layer[2].J`.
#[derive(Clone, Debug, PartialEq)]
pub struct Path {
    /// At least one segment.
    pub segments: Vec<Segment>,
    /// Where.
    pub span: Span,
}

/// One part of a path.
#[derive(Clone, Debug, PartialEq)]
pub struct Segment {
    /// The word.
    pub name: Name,
    /// `[k]` behind it.
    pub index: Option<Box<Expr>>,
}

/// A unit as written, without its number: `kg*m^2`, `°`, `%`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct UnitText {
    /// The characters.
    pub text: SmolStr,
    /// Where.
    pub span: Span,
}
