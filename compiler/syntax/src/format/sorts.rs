//! Which lines are of one sort, and which of their tokens may stand in a column.

use pintle_lexer::Token;

/// What a line is; neighbours of the same sort form a run.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Sort<'a> {
    /// `name = value`, `name : kind = value`, as an item or as a field.
    Definition,
    /// A line of a train.
    Link,
    /// `part at 0 mm`.
    Placement,
    /// An arm of a `choose`.
    Arm,
    /// A line of a ledger, run or cycle, by its word.
    Line(&'a str),
    /// An item, by its keyword.
    Item(&'a str),
}

/// The columns of a line, from left to right.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Column {
    /// What follows the word of a ledger's line.
    Lead,
    /// What follows a name or a left side: `:`, `=`, a comparison, `at`, `agrees`, `when`.
    Name,
    /// The `=` or `within` behind a kind.
    Kind,
    /// The brace that opens a line's fields.
    Brace,
    /// `as`, `where`, and how an assumption stands.
    Display,
    Because,
    Cite,
    Comment,
}

impl Column {
    pub const ALL: [Column; 8] = [
        Column::Lead,
        Column::Name,
        Column::Kind,
        Column::Brace,
        Column::Display,
        Column::Because,
        Column::Cite,
        Column::Comment,
    ];

    /// The clauses behind a value stand a little apart from it.
    pub fn is_clause(self) -> bool {
        matches!(self, Column::Display | Column::Because | Column::Cite)
    }

    /// How much wider the widest line of a column may be than its narrowest.
    pub fn reach(self) -> usize {
        if self.is_clause() || self == Column::Comment { 36 } else { 24 }
    }
}

/// Items that are lined up with their neighbours. Formulas and shapes are not:
/// their heads are too uneven.
const LINED_UP: &[&str] = &[
    "given", "wanted", "limit", "confirm", "assume", "body", "part", "material", "load", "spring", "brake", "clutch",
    "case", "unit", "axis",
];

/// The sort of the line that begins with `word`, then `next`, inside a block opened by `opener`.
pub(super) fn sort_of<'a>(opener: &str, word: &'a str, next: Option<(Token, &str)>) -> Option<Sort<'a>> {
    match (opener, next?) {
        ("choose", _) => Some(Sort::Arm),
        (_, (Token::Equals | Token::Colon | Token::Dot, _)) => Some(Sort::Definition),
        ("train", _) => Some(Sort::Link),
        ("ledger" | "run" | "cycle", _) => Some(Sort::Line(word)),
        ("rotor" | "unit", (Token::Word, "at")) => Some(Sort::Placement),
        _ => LINED_UP.contains(&word).then_some(Sort::Item(word)),
    }
}

/// The column in which a token of such a line may stand, outside all brackets
/// of the line and behind the columns up to `last`.
pub(super) fn column_of(sort: Sort<'_>, last: Option<Column>, token: Token, text: &str) -> Option<Column> {
    use Token::*;
    let compares = sort == Sort::Item("limit");
    let behind_name = if last == Some(Column::Name) { Column::Kind } else { Column::Name };
    let column = match token {
        Colon => Column::Name,
        Equals if !compares => behind_name,
        Less | LessEqual | Greater | GreaterEqual | EqualEqual | NotEqual if compares => Column::Name,
        // A body's shape is read together with its sizes.
        OpenBrace if !matches!(sort, Sort::Item("body" | "part")) => Column::Brace,
        Word => match (sort, text) {
            (Sort::Placement, "at") | (Sort::Item("confirm"), "agrees") => Column::Name,
            (Sort::Arm, "when" | "otherwise") => Column::Name,
            (Sort::Item("wanted") | Sort::Line("wanted"), "within") => behind_name,
            (Sort::Item("wanted"), "where") => Column::Display,
            (Sort::Item("assume"), "confirmed" | "open") => Column::Display,
            (_, "as") => Column::Display,
            (_, "because") => Column::Because,
            (_, "cite") => Column::Cite,
            _ => return None,
        },
        _ => return None,
    };
    Some(column)
}
