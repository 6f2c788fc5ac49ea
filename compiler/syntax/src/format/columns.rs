//! Columns: neighbouring lines of one sort have their `=`, their clauses and
//! their remarks one below the other, as on a sheet written by hand.
//!
//! A run of lines ends at a blank line, at a line of another sort and at a line
//! that opens or closes a block. A line that would push the others too far
//! begins a run of its own.

use pintle_lexer::Token;
use unicode_width::UnicodeWidthStr;

use super::Opened;
use super::plan::Plan;

/// What a line is, as far as columns go.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Sort {
    /// An item with a keyword.
    Item(&'static str),
    /// `name = value`: a derived quantity, a field.
    Field,
    /// A line of a ledger, whatever its keyword.
    LedgerLine,
    /// A link of a train.
    Link,
    /// A placement in a rotor.
    Placement,
    /// Anything else: never in columns.
    Other,
}

/// What can stand in a column, from left to right.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Column {
    /// What a line of a ledger speaks of.
    Subject,
    /// Where a part is placed.
    At,
    /// The `:` before a kind.
    Kind,
    /// The `=` of a definition.
    Equals,
    /// The fields of a link or placement.
    Braces,
    /// The first of `cite`, `because`, `as` ...
    Clauses,
    /// A comment.
    Remark,
}

const COLUMNS: [Column; 7] =
    [Column::Subject, Column::At, Column::Kind, Column::Equals, Column::Braces, Column::Clauses, Column::Remark];

/// More blanks than these are a gap, not a column.
const FARTHEST: usize = 28;
/// Beyond this width nothing is moved further right.
const WIDEST: usize = 100;

impl Plan {
    fn word<'t>(&self, text: &'t str, at: usize) -> &'t str {
        let piece = self.pieces.get(at).filter(|piece| piece.token == Token::Word);
        piece.and_then(|piece| text.get(piece.span.range())).unwrap_or("")
    }

    fn token(&self, at: usize) -> Option<Token> {
        self.pieces.get(at).map(|piece| piece.token)
    }

    /// The sort of the statement that begins with a piece.
    pub(super) fn sort(&self, text: &str, at: usize, around: Option<&Opened>) -> Sort {
        if self.token(at) != Some(Token::Word) {
            return Sort::Other;
        }
        let is_field = matches!(self.token(at + 1), Some(Token::Equals | Token::Colon | Token::Dot));
        match around {
            Some(Opened::Block(Sort::Item("ledger"))) => Sort::LedgerLine,
            Some(Opened::Block(Sort::Item("train"))) => Sort::Link,
            Some(Opened::Block(Sort::Item("rotor"))) => Sort::Placement,
            _ if is_field => Sort::Field,
            _ => crate::words::ITEMS
                .iter()
                .find(|word| **word == self.word(text, at))
                .map_or(Sort::Field, |word| Sort::Item(word)),
        }
    }

    /// The column that begins with a piece, where lines of its sort have one there.
    pub(super) fn column(&self, text: &str, at: usize, sort: Sort, second: bool) -> Option<Column> {
        let word = self.word(text, at);
        let named = || matches!(self.token(at + 1), Some(Token::Equals | Token::Colon | Token::Dot));
        match self.token(at)? {
            Token::Comment => Some(Column::Remark),
            _ if second && sort == Sort::LedgerLine => Some(Column::Subject),
            Token::Colon => Some(Column::Kind),
            Token::Equals => Some(Column::Equals),
            Token::OpenBrace if matches!(sort, Sort::Link | Sort::Placement | Sort::Item("case")) => {
                Some(Column::Braces)
            }
            Token::Word if word == "at" && sort == Sort::Placement => Some(Column::At),
            Token::Word if matches!(word, "cite" | "because" | "as" | "confirmed") && !named() => Some(Column::Clauses),
            Token::Word if word == "open" && sort == Sort::Item("assume") => Some(Column::Clauses),
            _ => None,
        }
    }
}

/// One line of the output, without its line end.
#[derive(Debug)]
pub(super) struct Line {
    pub text: String,
    pub blank_before: bool,
    pub sort: Sort,
    /// How many blocks and brackets are open before it.
    pub depth: usize,
    /// Nothing but a comment: passed over, ends no run.
    pub is_remark: bool,
    /// Whether the statement ends on it.
    pub whole: bool,
    /// Columns and where they begin in the text, from left to right.
    pub stops: Vec<(Column, usize)>,
}

/// Puts runs of lines into columns.
pub(super) fn align(lines: &mut [Line]) {
    let mut start = 0;
    while start < lines.len() {
        let end = run(lines, start);
        let members: Vec<usize> = (start..end).filter(|&at| !lines[at].is_remark).collect();
        for column in COLUMNS {
            align_column(lines, &members, column);
        }
        start = end;
    }
}

/// Where the run that begins with a line ends.
fn run(lines: &[Line], start: usize) -> usize {
    let mut first: Option<&Line> = None;
    for (at, line) in lines.iter().enumerate().skip(start) {
        if at > start && line.blank_before {
            return at;
        }
        if line.is_remark {
            continue;
        }
        let fits = line.whole && line.sort != Sort::Other;
        match first {
            _ if !fits => return if first.is_none() { at + 1 } else { at },
            Some(first) if (first.sort, first.depth) != (line.sort, line.depth) => return at,
            Some(_) => {}
            None => first = Some(line),
        }
    }
    lines.len()
}

fn align_column(lines: &mut [Line], members: &[usize], column: Column) {
    let stop = |line: &Line| line.stops.iter().find(|(known, _)| *known == column).map(|(_, at)| *at);
    let width = |line: &Line, at: usize| line.text.get(..at).unwrap_or("").width();
    let mut group: Vec<(usize, usize, usize)> = Vec::new();
    let (mut least, mut most) = (usize::MAX, 0);
    for &member in members {
        let line = &lines[member];
        let Some(at) = stop(line) else { continue };
        let width = width(line, at);
        if width > WIDEST {
            continue;
        }
        if least.min(width) + FARTHEST < most.max(width) {
            pad(lines, &group, most);
            group.clear();
            (least, most) = (usize::MAX, 0);
        }
        (least, most) = (least.min(width), most.max(width));
        group.push((member, at, width));
    }
    pad(lines, &group, most);
}

fn pad(lines: &mut [Line], group: &[(usize, usize, usize)], to: usize) {
    for &(member, at, width) in group {
        let blanks = to.saturating_sub(width);
        let line = &mut lines[member];
        line.text.insert_str(at, &" ".repeat(blanks));
        for (_, stop) in line.stops.iter_mut().filter(|(_, stop)| *stop >= at) {
            *stop += blanks;
        }
    }
}
