//! Expressions and their operators. Nothing here knows a value.

use pintle_text::Span;

use super::{Literal, Name, Path, Repeat, Text};

/// An expression.
#[derive(Clone, Debug, PartialEq)]
pub struct Expr {
    /// What it is.
    pub kind: ExprKind,
    /// Where.
    pub span: Span,
}

/// Kinds of expressions.
#[derive(Clone, Debug, PartialEq)]
pub enum ExprKind {
    /// A number, perhaps with unit and tolerance.
    Number(Box<Literal>),
    /// A quoted text.
    Text(Text),
    /// A name or dotted path.
    Path(Path),
    /// `sqrt(x)`, `haul.reflected(J, at = motor)`.
    Call {
        /// What is called.
        function: Path,
        /// In order.
        arguments: Vec<Argument>,
    },
    /// `-x`, `not x`.
    Unary {
        /// Which.
        op: UnaryOp,
        /// On what.
        operand: Box<Expr>,
    },
    /// `a + b`, `a <= b`, `a and b`.
    Binary {
        /// Which.
        op: BinaryOp,
        /// Where the operator stands.
        op_span: Span,
        /// Left side.
        left: Box<Expr>,
        /// Right side.
        right: Box<Expr>,
    },
    /// `drum.J about trunnion`.
    About {
        /// The quantity.
        value: Box<Expr>,
        /// A declared axis.
        axis: Name,
    },
    /// `(1 mm, 2 mm)`: a point, at least two members.
    Point(Vec<Expr>),
    /// `[a, b]`.
    List(Vec<Expr>),
    /// `layer[k].J for k from 1 to 3`, inside a call or a list.
    Comprehension {
        /// Repeated.
        body: Box<Expr>,
        /// How.
        repeat: Box<Repeat>,
    },
    /// Nothing readable stood here; already reported.
    Missing,
}

/// An argument of a call, perhaps named.
#[derive(Clone, Debug, PartialEq)]
pub struct Argument {
    /// `at` in `at = motor`.
    pub name: Option<Name>,
    /// The value.
    pub value: Expr,
}

/// Operators with one operand.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum UnaryOp {
    /// `-`
    Minus,
    /// `+`
    Plus,
    /// `not`
    Not,
}

/// Operators with two operands, loosest first.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum BinaryOp {
    /// `or`
    Or,
    /// `and`
    And,
    /// `==`
    Equal,
    /// `!=`
    NotEqual,
    /// `<`
    Less,
    /// `<=` or `≤`
    LessEqual,
    /// `>`
    Greater,
    /// `>=` or `≥`
    GreaterEqual,
    /// `+`
    Add,
    /// `-`
    Subtract,
    /// `*` or `·`
    Multiply,
    /// `/`
    Divide,
    /// `^`, and superscripts
    Power,
}

impl BinaryOp {
    /// The operator as ASCII text.
    pub fn symbol(self) -> &'static str {
        match self {
            BinaryOp::Or => "or",
            BinaryOp::And => "and",
            BinaryOp::Equal => "==",
            BinaryOp::NotEqual => "!=",
            BinaryOp::Less => "<",
            BinaryOp::LessEqual => "<=",
            BinaryOp::Greater => ">",
            BinaryOp::GreaterEqual => ">=",
            BinaryOp::Add => "+",
            BinaryOp::Subtract => "-",
            BinaryOp::Multiply => "*",
            BinaryOp::Divide => "/",
            BinaryOp::Power => "^",
        }
    }

    /// Whether it compares, and so yields a condition.
    pub fn is_comparison(self) -> bool {
        matches!(
            self,
            BinaryOp::Equal
                | BinaryOp::NotEqual
                | BinaryOp::Less
                | BinaryOp::LessEqual
                | BinaryOp::Greater
                | BinaryOp::GreaterEqual
        )
    }
}
