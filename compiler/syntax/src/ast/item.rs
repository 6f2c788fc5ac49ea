//! Every kind of item with its parts. Nothing here knows what an item does.

use pintle_text::Span;

use super::{
    Clauses, Definition, Expr, Field, Item, LedgerLine, Link, LoadPath, Name, Parameter, Path, Placement, Text, Wanted,
};

/// What an item is.
#[derive(Clone, Debug, PartialEq)]
pub enum ItemKind {
    /// `sheet "title" { number = ... }`.
    Sheet {
        /// The title.
        title: Text,
        /// number, revision, scope, status ...
        fields: Vec<Field>,
    },
    /// `library "name" { version = ... }`.
    Library {
        /// The name.
        title: Text,
        /// version, licence, needs.
        fields: Vec<Field>,
    },
    /// `use std.materials`, `use ./parts/rope_drum`.
    Use {
        /// The words as written, without spaces.
        path: Text,
    },
    /// Consecutive lines that begin with `|`, the bars taken off.
    Prose {
        /// Markdown.
        text: String,
    },
    /// `given mass : mass = 6.4 t ± 4 %`.
    Given {
        /// Its name.
        name: Name,
        /// Its kind.
        kind: Option<Name>,
        /// Its value.
        value: Definition,
    },
    /// `assume "..." open`.
    Assume {
        /// What is assumed.
        text: Text,
        /// Whether somebody confirmed it.
        status: AssumeStatus,
    },
    /// `pull : force = a + b`.
    Derived {
        /// Its name.
        name: Name,
        /// Its kind.
        kind: Option<Name>,
        /// Its value.
        value: Definition,
    },
    /// `material steel { density = ... }`.
    Material {
        /// Its name.
        name: Name,
        /// density, yield ...
        fields: Vec<Field>,
    },
    /// `body barrel = tube { ... }`.
    Body {
        /// Its name.
        name: Name,
        /// A shape, or `turned`, `extruded`, `mesh`, `measured`.
        shape: Path,
        /// Parameters, material, density, mass.
        fields: Vec<Field>,
    },
    /// `rotor drum about x { ... }`.
    Rotor {
        /// Its name.
        name: Name,
        /// `x`, `y`, `z` or a declared axis. None: x.
        axis: Option<Name>,
        /// What stands on it.
        placements: Vec<Placement>,
    },
    /// `load cradle { mass = ..., path = incline slope }`.
    Load {
        /// Its name.
        name: Name,
        /// Fields other than `path`.
        fields: Vec<Field>,
        /// The `path` field.
        path: Option<LoadPath>,
    },
    /// `spring buffer { rate = 42 kN/m }`, `spring buffer on cradle { ... }`.
    Spring {
        /// Its name.
        name: Name,
        /// The member that it acts on.
        on: Option<Path>,
        /// rate, preload ...
        fields: Vec<Field>,
    },
    /// `axis trunnion = through (1.2 m, 0 mm, 0 mm) along y`.
    Axis {
        /// Its name.
        name: Name,
        /// A point.
        through: Expr,
        /// `x`, `y`, `z` or a point read as a vector.
        along: Expr,
    },
    /// `unit skip_load = 2.4 t`.
    Unit {
        /// Its name.
        name: Name,
        /// Its size.
        value: Expr,
    },
    /// `train haul { gear ... }`.
    Train {
        /// Its name.
        name: Name,
        /// Its links.
        links: Vec<Link>,
    },
    /// `brake holding on motor_rotor { torque = ... }`.
    Brake {
        /// Its name.
        name: Name,
        /// The member it acts on.
        on: Option<Path>,
        /// torque, delay ...
        fields: Vec<Field>,
    },
    /// `clutch engage = a -> b { torque = ... }`.
    Clutch {
        /// Its name.
        name: Name,
        /// Driving and driven member.
        from: Option<Path>,
        /// The driven member.
        to: Option<Path>,
        /// torque ...
        fields: Vec<Field>,
    },
    /// `ledger runaway of haul under each of (worn) { ... }`.
    Ledger {
        /// Its name.
        name: Name,
        /// The train.
        train: Option<Name>,
        /// `under worn`, `under each of (worn, open_b, worn + open_b)`: sums of case names.
        under: Vec<Vec<Name>>,
        /// Its lines.
        lines: Vec<LedgerLine>,
    },
    /// `wanted x : length within a .. b where f == g`.
    Wanted(Wanted),
    /// `limit every drum.rim_speed <= 25 m/s`.
    Limit {
        /// `every`: in all problems and cases.
        every: bool,
        /// A comparison.
        condition: Expr,
    },
    /// `case worn { holding.torque = 208 N*m }`.
    Case {
        /// Its name.
        name: Name,
        /// What differs.
        overrides: Vec<Field>,
    },
    /// `confirm drum.mass agrees 169 kg ± 1 %`.
    Confirm {
        /// The value of the sheet.
        value: Expr,
        /// The second route.
        agrees: Expr,
    },
    /// `shape tube(...) { ... }`.
    Shape {
        /// Its name.
        name: Name,
        /// Its parameters.
        parameters: Vec<Parameter>,
        /// `require` lines.
        requirements: Vec<Expr>,
        /// volume, centre, J_axis ... and helpers.
        members: Vec<Field>,
    },
    /// `formula capstan(tight : force, wrap : angle) : force = ...` or with a block of lines.
    Formula {
        /// Its name.
        name: Name,
        /// Its parameters.
        parameters: Vec<Parameter>,
        /// `: kind` of the result.
        kind: Option<Name>,
        /// The single result; None where a block gives several.
        value: Option<Definition>,
        /// `require` lines of the block.
        requirements: Vec<Expr>,
        /// Local lines of the block; those named in `results` are the results.
        locals: Vec<Field>,
        /// Names behind `offers`; empty: the last local line.
        offers: Vec<Name>,
    },
    /// `component rope_drum(...) { offers drum ... }`.
    Component {
        /// Its name.
        name: Name,
        /// Its parameters.
        parameters: Vec<Parameter>,
        /// Names behind `offers`.
        offers: Vec<Name>,
        /// `require` lines.
        requirements: Vec<Expr>,
        /// Items inside; their offsets count from this item's start.
        items: Vec<Item>,
    },
    /// `part spare = rope_drum { ... }`.
    Part {
        /// Its name.
        name: Name,
        /// The component.
        component: Path,
        /// Its parameters.
        fields: Vec<Field>,
    },
    /// `run`, `cycle`, `vary`, `curve`: parsed for their frame and their lines'
    /// expressions; given meaning later.
    Later(Later),
    /// Nothing that could be read; reported in the item's errors.
    Broken {
        /// The keyword it began with, if any.
        keyword: Option<Name>,
        /// The name behind it, if any.
        name: Option<Name>,
    },
}

/// Status of an assumption.
#[derive(Clone, Debug, PartialEq)]
pub enum AssumeStatus {
    /// Neither word stood there; counts as open.
    Unstated,
    /// `open`.
    Open,
    /// `confirmed "by what"`.
    Confirmed(Option<Text>),
}

/// An item whose meaning comes later.
#[derive(Clone, Debug, PartialEq)]
pub struct Later {
    /// `run`, `cycle`, `vary`, `curve`.
    pub keyword: Name,
    /// Its name, where it has one.
    pub name: Option<Name>,
    /// Its lines, each with the expressions that could be read in it.
    pub lines: Vec<LaterLine>,
}

/// A line of such an item.
#[derive(Clone, Debug, PartialEq)]
pub struct LaterLine {
    /// First word.
    pub keyword: Option<Name>,
    /// Expressions of the line, in order.
    pub expressions: Vec<Expr>,
    /// Behind it.
    pub clauses: Clauses,
    /// Where.
    pub span: Span,
}
