//! The syntax of one file as data.
//!
//! Spans count from the first byte of the item that holds the node, so an item
//! whose text did not change is equal to its older self wherever it moved.
//! Nothing here knows units, kinds or what a name means.

use pintle_text::{Diagnostic, Span};
use smol_str::SmolStr;

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

/// A number as written: `60 mm ± 0.1 mm`, `0.12 within 0.08 .. 0.16`, `60 mm h6`.
#[derive(Clone, Debug, PartialEq)]
pub struct Literal {
    /// The digits as written, underscores left in: `1_450`, `6.5e3`.
    pub number: SmolStr,
    /// Their value. Infinite if too large (reported by the checker).
    pub value: f64,
    /// Where the digits stand.
    pub number_span: Span,
    /// The unit behind.
    pub unit: Option<UnitText>,
    /// The tolerance behind.
    pub tolerance: Option<Tolerance>,
    /// `normal`, `triangular`, `arcsine`, `uniform`.
    pub distribution: Option<Name>,
}

/// What is said of how sure a number is.
#[derive(Clone, Debug, PartialEq)]
pub enum Tolerance {
    /// `± 0.1 mm`, `+/- 5 %`.
    Symmetric(Box<Literal>),
    /// `± (+0.2, -0.0) mm`; signs as written.
    Limits {
        /// First value.
        upper: f64,
        /// Second value.
        lower: f64,
        /// The unit behind the bracket.
        unit: Option<UnitText>,
        /// Where.
        span: Span,
    },
    /// `within 0.08 .. 0.16`.
    Within(Box<Range>),
    /// `u 0.05 kg`.
    Standard(Box<Literal>),
    /// `h6`, `H7`, `k6`: an ISO 286 class.
    Class(Name),
}

/// `a .. b`.
#[derive(Clone, Debug, PartialEq)]
pub struct Range {
    /// Lower end.
    pub low: Expr,
    /// Upper end.
    pub high: Expr,
}

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
    /// `for k from 5 to 12`.
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

/// One line of a rotor.
#[derive(Clone, Debug, PartialEq)]
pub struct Placement {
    /// `less`: material removed.
    pub less: bool,
    /// What is placed: a body, a rotor, a part's member.
    pub part: Path,
    /// `at 600 mm` or `at (0 mm, 1 mm, 2 mm)`.
    pub at: Option<Expr>,
    /// `from far_flange`.
    pub from: Option<Name>,
    /// Fields in the braces.
    pub fields: Vec<Field>,
    /// Behind it; `for` repeats the placement.
    pub clauses: Clauses,
    /// Where.
    pub span: Span,
}

/// How a load moves.
#[derive(Clone, Debug, PartialEq)]
pub enum LoadPath {
    /// `vertical`.
    Vertical(Span),
    /// `incline ANGLE`.
    Incline(Expr),
    /// `level`.
    Level(Span),
}

/// One link of a train.
#[derive(Clone, Debug, PartialEq)]
pub struct Link {
    /// gear, belt, rope, rack, screw, direct, roll, epicyclic: as written.
    pub kind: Name,
    /// Its name.
    pub name: Name,
    /// The side the arrow leaves.
    pub from: Path,
    /// The side the arrow reaches.
    pub to: Path,
    /// ratio, efficiency, back, pitch_diameter, falls, lead ...
    pub fields: Vec<Field>,
    /// Behind it.
    pub clauses: Clauses,
    /// Where.
    pub span: Span,
}

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
