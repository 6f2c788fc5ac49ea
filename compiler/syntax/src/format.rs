//! The canonical layout of a text, printed from all its tokens.
//!
//! Line breaks stay where the author put them, one blank line at most between
//! two lines; blocks are indented by two, blanks between marks follow fixed
//! rules. Items with faults are left byte for byte. Where braces do not match,
//! indentation stays too, since it is all that tells what was meant.
//!
//! Neighbouring lines of one sort (givens, definitions, limits, fields ...)
//! have their `=` or comparison, their clauses and their remarks in columns.
//!
//! `a=3 kg*m^2*( b+c )` → `a = 3 kg*m^2 * (b + c)`

mod align;
mod plan;
mod sorts;
mod spacing;

use pintle_lexer::Token;

use align::{Line, align};
use plan::{Piece, Plan};
use sorts::{Column, Sort, column_of, sort_of};

/// The text in canonical layout. The same tokens and comments, in the same
/// order; formatting the result again changes nothing.
pub fn format(text: &str) -> String {
    let plan = Plan::new(text);
    let newline = if plan.crlf { "\r\n" } else { "\n" };
    let mut printer = Printer {
        plan: &plan,
        text,
        newline,
        out: String::with_capacity(text.len() + 64),
        n_newlines: 2,
        lines: Vec::new(),
        depth: 0,
        statement: "",
    };
    printer.print();
    align(&printer.out, &mut printer.lines)
}

/// What is open around the token being printed.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Opened<'a> {
    /// By the word that says what the lines in it are.
    Block(&'a str),
    Bracket,
}

struct Printer<'a> {
    plan: &'a Plan,
    text: &'a str,
    newline: &'static str,
    out: String,
    /// Line ends since the last token; two at the start, so that no blank line comes first.
    n_newlines: usize,
    /// The lines printed so far.
    lines: Vec<Line<'a>>,
    /// Brackets open on this line.
    depth: usize,
    /// The first word of the statement being printed.
    statement: &'a str,
}

impl<'a> Printer<'a> {
    fn print(&mut self) {
        if self.text.starts_with('\u{FEFF}') {
            self.out.push('\u{FEFF}');
        }
        let mut opened: Vec<Opened<'a>> = Vec::new();
        let mut before: Option<&Piece> = None;
        let mut at = 0;
        let mut first = true;
        while let Some(piece) = self.plan.pieces.get(at) {
            at += 1;
            if piece.token == Token::Newline {
                self.n_newlines += 1;
                continue;
            }
            let begins = self.n_newlines > 0;
            let n_newlines = self.n_newlines;
            if begins {
                if !first {
                    self.out.push_str(self.newline);
                    if self.n_newlines > 1 {
                        self.out.push_str(self.newline);
                    }
                }
                let start = self.out.len();
                self.indent(piece, &opened);
                self.begin_line(start, n_newlines, at, piece, &opened);
            } else if let Some(before) = before {
                let blanks = spacing::between(before, piece);
                self.out.push_str(blanks);
                if !blanks.is_empty() {
                    self.note_stop(piece, before);
                }
            }
            if piece.starts {
                self.statement = self.word(piece);
            }
            first = false;
            self.n_newlines = 0;
            let end = match piece.verbatim {
                // An item with faults: its bytes as they are.
                Some(end) => {
                    self.out.push_str(self.text.get(piece.span.start as usize..end as usize).unwrap_or(""));
                    end
                }
                None => {
                    let text = self.text.get(piece.span.range()).unwrap_or("");
                    let trimmed = matches!(piece.token, Token::Comment | Token::Prose);
                    self.out.push_str(if trimmed { text.trim_end() } else { text });
                    piece.span.end
                }
            };
            if piece.verbatim.is_none() {
                let chooses = before.is_some_and(|before| self.word(before) == "choose");
                self.note(&mut opened, piece.token, if chooses { "choose" } else { self.statement });
            }
            before = Some(piece);
            while let Some(inside) = self.plan.pieces.get(at).filter(|inside| inside.span.start < end) {
                before = Some(inside);
                at += 1;
            }
        }
        if !first {
            self.out.push_str(self.newline);
        }
    }

    /// The blanks before the first token of a line.
    fn indent(&mut self, piece: &Piece, opened: &[Opened<'_>]) {
        if let Some(kept) = piece.indent.filter(|_| self.plan.keeps_indent) {
            self.out.push_str(self.text.get(kept.range()).unwrap_or(""));
            return;
        }
        let closes = matches!(piece.token, Token::CloseBrace | Token::CloseParen | Token::CloseBracket);
        let levels = opened.len().saturating_sub(usize::from(closes));
        let in_bracket = opened.last() == Some(&Opened::Bracket);
        let goes_on = !piece.starts && !closes && !in_bracket && piece.token != Token::Comment;
        for _ in 0..levels + usize::from(goes_on) {
            self.out.push_str("  ");
        }
    }

    fn word(&self, piece: &Piece) -> &'a str {
        self.text.get(piece.span.range()).unwrap_or("")
    }

    /// Notes a line whose first token is about to be printed; `next` is the index of the piece behind it.
    fn begin_line(&mut self, start: usize, n_newlines: usize, next: usize, piece: &Piece, opened: &[Opened<'_>]) {
        let opener = match opened.last() {
            Some(Opened::Block(word)) => word,
            _ => "",
        };
        let may_run = piece.starts && piece.verbatim.is_none();
        let next = self.plan.pieces.get(next).map(|next| (next.token, self.word(next)));
        let sort = sort_of(opener, self.word(piece), next).filter(|_| may_run);
        let apart = n_newlines > 1
            || piece.verbatim.is_some()
            || matches!(piece.token, Token::Prose | Token::Comment | Token::CloseBrace);
        self.lines.push(Line { start, indent: self.out.len(), sort, apart, stops: Vec::new() });
        self.depth = 0;
    }

    /// Notes a token that may stand in a column, about to be printed behind blanks.
    fn note_stop(&mut self, piece: &Piece, before: &Piece) {
        let at = self.out.len();
        let text = self.word(piece);
        let depth = self.depth;
        let Some(line) = self.lines.last_mut() else { return };
        if piece.token == Token::Comment {
            line.stop(Column::Comment, at);
        } else if let Some(sort) = line.sort.filter(|_| depth == 0) {
            if before.starts && matches!(sort, Sort::Line(_)) {
                line.stop(Column::Lead, at);
            } else if let Some(column) = column_of(sort, line.last(), piece.token, text) {
                line.stop(column, at);
            }
        }
    }

    /// Keeps account of what is open. A verbatim item opens and closes its own.
    fn note(&mut self, opened: &mut Vec<Opened<'a>>, token: Token, word: &'a str) {
        match token {
            Token::OpenBrace => opened.push(Opened::Block(word)),
            Token::OpenParen | Token::OpenBracket => opened.push(Opened::Bracket),
            Token::CloseBrace | Token::CloseParen | Token::CloseBracket => {
                opened.pop();
                self.depth = self.depth.saturating_sub(1);
                return;
            }
            _ => return,
        }
        self.depth += 1;
    }
}

#[cfg(test)]
mod tests {
    use super::format;

    #[track_caller]
    fn check_format(text: &str, expected: &str) {
        assert_eq!(format(text), expected, "{text:?}");
        assert_eq!(format(expected), expected, "second pass of {text:?}");
    }

    #[test]
    fn blanks_round_operators_commas_and_signs() {
        check_format("a=b+c*d-e", "a = b + c * d - e\n");
        check_format("a =f( b ,c , at=d )", "a = f(b, c, at = d)\n");
        check_format("a:length=- b ^ 2", "a : length = -b^2\n");
        check_format("a = b -c", "a = b - c\n");
        check_format("a = (  - 3 mm,+4 mm )", "a = (-3 mm, +4 mm)\n");
        check_format("a = pi/4 * b", "a = pi/4 * b\n");
        check_format("a = b /c", "a = b / c\n");
        check_format("limit a<=b and not c>d", "limit a <= b and not c > d\n");
        check_format("a = b . c[ k ]", "a = b.c[k]\n");
    }

    #[test]
    fn units_stay_tight_and_arithmetic_loose() {
        check_format("a=3kg*m^2", "a = 3 kg*m^2\n");
        check_format("a = 3 kg*m^2*( b+c )", "a = 3 kg*m^2 * (b + c)\n");
        check_format("a = 40 N*m/(rad/s)  *x", "a = 40 N*m/(rad/s) * x\n");
        check_format("a = 3 m ^2", "a = 3 m ^ 2\n");
        check_format("a = 3 m/( b)", "a = 3 m / (b)\n");
        check_format("a = 6 m/2", "a = 6 m / 2\n");
        check_format("a = 90 °", "a = 90°\n");
        check_format("a = 20°C", "a = 20 °C\n");
        check_format("a = b as  kN*m", "a = b as kN*m\n");
        check_format("a = 24  1/min", "a = 24 1/min\n");
        check_format("a=3.2 kg·m²·b", "a = 3.2 kg·m²·b\n");
    }

    #[test]
    fn tolerances() {
        check_format("a = 60mm±0.1mm", "a = 60 mm ± 0.1 mm\n");
        check_format("a = 6 N*m ±(+0,- 20)%", "a = 6 N*m ± (+0, -20) %\n");
        check_format("a = 1 within 0..2", "a = 1 within 0 .. 2\n");
    }

    #[test]
    fn blocks_are_indented_by_two() {
        check_format(
            "rotor a about x{\nb at  -16 mm{named=c}\n\n\n   less d from c { e=1,f=2 }   # g\n      # h\n}",
            "rotor a about x {\n  b at -16 mm { named = c }\n\n  less d from c { e = 1, f = 2 }  # g\n  # h\n}\n",
        );
        check_format("body a = b {}", "body a = b {}\n");
        check_format("body a = b { }  cite \"c\"", "body a = b {} cite \"c\"\n");
        check_format("body a = b { c = 1 , }", "body a = b { c = 1, }\n");
    }

    #[test]
    fn names_kinds_and_clauses_stand_in_columns() {
        check_format(
            "given a=1 kg cite \"b\"\ngiven long_name:time=12.5 s   cite \"c\" # d\ngiven e:angle=3 rad",
            "given a         = 1 kg            cite \"b\"\n\
             given long_name : time  = 12.5 s  cite \"c\"  # d\n\
             given e         : angle = 3 rad\n",
        );
        check_format("ω = 1\nlänge = 2\n力 = 3", "ω     = 1\nlänge = 2\n力    = 3\n");
        check_format(
            "limit a<=1 because \"b\"\nlimit a.b>2 because \"c\" cite demo\nlimit e<=3 cite demo",
            "limit a   <= 1  because \"b\"\nlimit a.b > 2   because \"c\"  cite demo\nlimit e   <= 3               cite demo\n",
        );
        check_format(
            "ledger a of b {\nstart at rest\nlose c=1 J\nlose long=2 J\n}",
            "ledger a of b {\n  start at rest\n  lose  c    = 1 J\n  lose  long = 2 J\n}\n",
        );
        check_format(
            "train a {\ngear b=c->d{ratio=2}\nrope long=d->ef{falls=1}\n}",
            "train a {\n  gear b    = c -> d  { ratio = 2 }\n  rope long = d -> ef { falls = 1 }\n}\n",
        );
    }

    #[test]
    fn other_lines_end_a_run() {
        check_format("a = 1\n\nlong = 2", "a = 1\n\nlong = 2\n");
        check_format("a = 1\n| prose\nlong = 2", "a = 1\n| prose\nlong = 2\n");
        check_format("a = 1\n# remark\nlong = 2", "a = 1\n# remark\nlong = 2\n");
        check_format("a = 1\ngiven long = 2", "a = 1\ngiven long = 2\n");
        check_format("a = 1\n  cite demo\nlong = 2", "a = 1\n  cite demo\nlong = 2\n");
        check_format("a = 1\nb  =  (  3\nlong = 2", "a = 1\nb  =  (  3\nlong = 2\n");
    }

    #[test]
    fn a_line_out_of_reach_does_not_push_the_others() {
        check_format(
            "a = 1\na_name_that_is_far_too_long_for_a_column = 2\nabc = 3",
            "a   = 1\na_name_that_is_far_too_long_for_a_column = 2\nabc = 3\n",
        );
    }

    #[test]
    fn remarks_stand_under_each_other_whatever_their_lines_say() {
        check_format("use std.rope # a\ngiven b = 1 # c", "use std.rope  # a\ngiven b = 1   # c\n");
    }

    #[test]
    fn continued_lines_are_indented() {
        check_format("a = b +\nc\n    cite \"d\"", "a = b +\n  c\n  cite \"d\"\n");
        check_format("a = f(\nb,\n(c,\nd)\n)", "a = f(\n  b,\n  (c,\n    d)\n)\n");
        check_format("a = choose {\n-1 when b\n-2 otherwise }", "a = choose {\n  -1 when b\n  -2 otherwise }\n");
    }

    #[test]
    fn line_ends_and_blank_lines() {
        check_format("\n\n\na = 1\n\n\n\nb = 2   \n\n", "a = 1\n\nb = 2\n");
        check_format("a=1\r\n\r\n\r\nb=2", "a = 1\r\n\r\nb = 2\r\n");
        check_format("\u{FEFF}a=1", "\u{FEFF}a = 1\n");
        check_format("", "");
        check_format("\n \n", "");
        check_format("# only a remark   ", "# only a remark\n");
        check_format("  | prose  \n  | more", "| prose\n| more\n");
    }

    #[test]
    fn faulty_items_stay_as_they_are() {
        check_format("a=1\nb  =  (  3\nc=2", "a = 1\nb  =  (  3\nc = 2\n");
        check_format("rotor a{\n b   at\n}\nc=2", "rotor a{\n b   at\n}\nc = 2\n");
        check_format("component a(b){\nbody  c =\nd=1\n}", "component a(b) {\n  body  c =\n  d = 1\n}\n");
    }

    #[test]
    fn paths_of_use_stay_tight() {
        check_format("use  ./parts/rope-drum", "use ./parts/rope-drum\n");
        check_format("use ../a.b", "use ../a.b\n");
        check_format("use  std.shapes # c", "use std.shapes  # c\n");
    }
}
