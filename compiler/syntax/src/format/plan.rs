//! What the printer must know of each token: read once from layout and syntax.

use pintle_lexer::{Token, lex};
use pintle_text::Span;

use super::spacing::{Role, is_operand_end};
use crate::ast::{Item, ItemKind};
use crate::codes;
use crate::grammar::{display_unit_len, unit_len};
use crate::items::read_all;
use crate::layout::{Layout, Statement, lay_out};
use crate::marks::{Gap, Mark};

/// One token with its surroundings.
pub(super) struct Piece {
    pub token: Token,
    pub span: Span,
    /// What is before it on its line.
    pub gap: Gap,
    /// Whether it touches both neighbours.
    pub touches_both: bool,
    /// The white space before it, where it is the first of its line.
    pub indent: Option<Span>,
    /// Whether a statement begins with it.
    pub starts: bool,
    /// What it does to its neighbours.
    pub role: Role,
    /// Where the faulty item ends that begins here and is kept as it is.
    pub verbatim: Option<u32>,
}

/// All tokens of a text, ready to be printed.
pub(super) struct Plan {
    pub pieces: Vec<Piece>,
    /// Whether any line ends with a carriage return and a line feed; then all shall.
    pub crlf: bool,
    /// Whether braces do not match, so that indentation carries meaning.
    pub keeps_indent: bool,
}

impl Plan {
    pub fn new(text: &str) -> Plan {
        let tokens = lex(text);
        let layout = lay_out(text, &tokens);
        let mut plan = Plan { pieces: pieces(text, &tokens), crlf: false, keeps_indent: false };
        plan.crlf = plan.pieces.iter().any(|piece| piece.token == Token::Newline && piece.span.len() == 2);
        for statement in &layout.statements {
            plan.note_statement(&layout, statement);
        }
        plan.note_signs(text);
        plan.note_faults(&read_all(text).items, 0);
        plan
    }

    fn find(&mut self, start: u32) -> Option<&mut Piece> {
        let at = self.pieces.partition_point(|piece| piece.span.start < start);
        self.pieces.get_mut(at).filter(|piece| piece.span.start == start)
    }

    fn set_role(&mut self, mark: &Mark, role: Role) {
        if let Some(piece) = self.find(mark.span.start).filter(|_| !mark.is_supplied()) {
            piece.role = role;
        }
    }

    fn note_statement(&mut self, layout: &Layout, statement: &Statement) {
        if let Some(piece) = self.find(statement.span.start) {
            piece.starts = true;
        }
        let braces = |fault: &pintle_text::Diagnostic<Span>| {
            matches!(fault.code, codes::UNCLOSED_BRACKET | codes::UNOPENED_BRACKET)
        };
        self.keeps_indent |= statement.faults.iter().any(braces);
        for range in [statement.head.clone(), statement.tail.clone()] {
            self.note_units(layout.marks.get(range).unwrap_or(&[]));
        }
        // Blocks nest at most `layout::depth::MAX_BLOCKS` deep.
        for inner in statement.block.iter().flat_map(|block| &block.statements) {
            self.note_statement(layout, inner);
        }
    }

    fn note_units(&mut self, marks: &[Mark]) {
        let uses = marks.first().is_some_and(|mark| mark.is_word("use"))
            && marks.get(1).is_some_and(|mark| !matches!(mark.token, Token::Equals | Token::Colon));
        if uses {
            // A path is one run; where it ends, clauses follow.
            for (n, part) in marks.iter().enumerate().skip(1) {
                let role = if n == 1 { Role::Unit } else { Role::Tight };
                if n > 1 && part.gap != Gap::None {
                    break;
                }
                self.set_role(part, role);
            }
            return;
        }
        let mut at = 0;
        while let Some(mark) = marks.get(at) {
            at += 1;
            let rest = marks.get(at..).unwrap_or(&[]);
            let len = match mark.token {
                Token::Number => unit_len(rest),
                // The unit behind `± (+0.2, -0.0)`.
                Token::CloseParen if closes_limits(marks, at) => unit_len(rest),
                Token::Word if mark.text == "as" => display_unit_len(rest),
                _ => 0,
            };
            let unit = rest.get(..len).unwrap_or(&[]);
            for (n, part) in unit.iter().enumerate() {
                let lone_degree = n == 0 && len == 1 && part.token == Token::Degree;
                let role = if n > 0 || lone_degree { Role::Tight } else { Role::Unit };
                self.set_role(part, role);
            }
            // Touching the unit, the sign would become a part of it.
            if let Some(next) =
                rest.get(len).filter(|next| len > 0 && matches!(next.token, Token::Caret | Token::Slash))
            {
                self.set_role(next, Role::Loose);
            }
            at += len;
        }
    }

    /// Tells signs from operators of two operands.
    fn note_signs(&mut self, text: &str) {
        let mut before: Option<(Token, Span)> = None;
        let gaps: Vec<Gap> = self.pieces.iter().skip(1).map(|piece| piece.gap).chain([Gap::Line]).collect();
        for (piece, gap_behind) in self.pieces.iter_mut().zip(gaps) {
            if piece.token.is_trivia() {
                continue;
            }
            if matches!(piece.token, Token::Plus | Token::Minus) && piece.role == Role::Plain {
                let operand_before = !piece.starts
                    && before.is_some_and(|(token, span)| {
                        is_operand_end(token, text.get(span.range()).unwrap_or(""), gap_behind)
                    });
                piece.role = if operand_before { Role::Plain } else { Role::Sign };
            }
            before = Some((piece.token, piece.span));
        }
    }

    fn note_faults(&mut self, items: &[Item], origin: u32) {
        for item in items {
            let start = origin + item.offset;
            if !item.errors.is_empty() {
                if let Some(piece) = self.find(start) {
                    piece.verbatim = Some(start + item.len);
                }
            } else if let ItemKind::Component { items, .. } = &item.kind {
                self.note_faults(items, start);
            }
        }
    }
}

/// Whether the bracket that closes before `at` holds two limits behind `±`.
fn closes_limits(marks: &[Mark], at: usize) -> bool {
    // `± ( + 0.2 , - 0.0 )`, each sign left out or not.
    (6..=8).any(|len| {
        let start = at.checked_sub(len).and_then(|start| marks.get(start..at)).unwrap_or(&[]);
        matches!(start, [sign, open, ..] if sign.token == Token::PlusMinus && open.token == Token::OpenParen)
    })
}

fn pieces(text: &str, tokens: &[(Token, Span)]) -> Vec<Piece> {
    let mut pieces = Vec::with_capacity(tokens.len());
    let mut end = if text.starts_with('\u{FEFF}') { 3 } else { 0 };
    let mut line_begins = true;
    for &(token, span) in tokens {
        let gap = match (line_begins, span.start == end) {
            (true, _) => Gap::Line,
            (false, true) => Gap::None,
            (false, false) => Gap::Space,
        };
        let indent = line_begins.then(|| Span::new(end, span.start));
        if let Some(before) = pieces.last_mut() {
            let before: &mut Piece = before;
            before.touches_both = before.gap == Gap::None && gap == Gap::None && token != Token::Newline;
        }
        pieces.push(Piece {
            token,
            span,
            gap,
            touches_both: false,
            indent,
            starts: false,
            role: Role::Plain,
            verbatim: None,
        });
        line_begins = token == Token::Newline;
        end = span.end;
    }
    pieces
}
