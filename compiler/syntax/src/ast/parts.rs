//! What items are made of: fields, definitions, parameters, clauses. Nothing
//! here knows which item holds them.

use pintle_text::Span;

use super::{Expr, Name, Path, Text, UnitText};

/// `for k from 1 to 3`.
#[derive(Clone, Debug, PartialEq)]
pub struct Repeat {
    /// The counter.
    pub variable: Name,
    /// First value.
    pub from: Expr,
    /// Last value.
    pub to: Expr,
}

/// What may stand behind an item or a line, in any order.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Clauses {
    /// `cite "..."`, `cite common_practice`.
    pub cite: Option<Cite>,
    /// `because "..."`.
    pub because: Option<Text>,
    /// `as kN`: the display unit.
    pub display: Option<UnitText>,
    /// `for k from 5 to 12`; boxed, for it is large and rare.
    pub repeat: Option<Box<Repeat>>,
}

/// Where a value comes from.
#[derive(Clone, Debug, PartialEq)]
pub enum Cite {
    /// A source in words.
    Source(Text),
    /// One of the words `common_practice`, `from_memory`, `demo`.
    Word(Name),
}

/// `name = value`, `name : kind = value`, or a bare `name`; inside braces.
#[derive(Clone, Debug, PartialEq)]
pub struct Field {
    /// The left side; dotted in a `case`.
    pub path: Path,
    /// `: kind`.
    pub kind: Option<Name>,
    /// The right side. None: a bare name, or a half-typed field (reported).
    pub value: Option<Definition>,
    /// Behind it.
    pub clauses: Clauses,
    /// Where.
    pub span: Span,
}

/// The right side of a definition.
#[derive(Clone, Debug, PartialEq)]
pub enum Definition {
    /// An expression.
    Value(Expr),
    /// `choose { a when c / b otherwise }`.
    Choose(Choose),
}

/// A piecewise value; the first arm whose condition holds wins.
#[derive(Clone, Debug, PartialEq)]
pub struct Choose {
    /// In order.
    pub arms: Vec<Arm>,
    /// Where.
    pub span: Span,
}

/// One line of a `choose`.
#[derive(Clone, Debug, PartialEq)]
pub struct Arm {
    /// The value.
    pub value: Expr,
    /// `when ...`; None: `otherwise`.
    pub condition: Option<Expr>,
    /// Where.
    pub span: Span,
}

/// A parameter of a shape, formula or component: `length : length = 20 mm`.
#[derive(Clone, Debug, PartialEq)]
pub struct Parameter {
    /// Its name.
    pub name: Name,
    /// Its kind, or `material`, `curve`.
    pub kind: Option<Name>,
    /// Taken when the caller gives none.
    pub default: Option<Expr>,
}
