//! The canonical layout of a text, printed from all its tokens.
//!
//! Line breaks stay where the author put them, one blank line at most between
//! two lines; blocks are indented by two, blanks between marks follow fixed
//! rules, and neighbouring lines of one sort stand in columns. Items with faults are left byte for byte. Where braces do not match,
//! indentation stays too, since it is all that tells what was meant.
//!
//! `a=3 kg*m^2*( b+c )` → `a = 3 kg*m^2 * (b + c)`

mod columns;
mod plan;
mod spacing;

use pintle_lexer::Token;

use columns::{Line, Sort};
use plan::{Piece, Plan};

/// The text in canonical layout. The same tokens and comments, in the same
/// order; formatting the result again changes nothing.
pub fn format(text: &str) -> String {
    let plan = Plan::new(text);
    let newline = if plan.crlf { "\r\n" } else { "\n" };
    let mut printer = Printer { plan: &plan, text, lines: Vec::new(), n_newlines: 2 };
    printer.print();
    columns::align(&mut printer.lines);
    let mut out = String::with_capacity(text.len() + text.len() / 4 + 64);
    if text.starts_with('\u{FEFF}') {
        out.push('\u{FEFF}');
    }
    for line in &printer.lines {
        if line.blank_before {
            out.push_str(newline);
        }
        out.push_str(&line.text);
        out.push_str(newline);
    }
    out
}

/// What is open around the token being printed.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Opened {
    /// Braces of a statement that begins with this word.
    Block(Sort),
    Bracket,
}

struct Printer<'a> {
    plan: &'a Plan,
    text: &'a str,
    lines: Vec<Line>,
    /// Line ends since the last token; two at the start, so that no blank line comes first.
    n_newlines: usize,
}

impl Printer<'_> {
    fn print(&mut self) {
        let mut opened: Vec<Opened> = Vec::new();
        let mut before: Option<&Piece> = None;
        let mut at = 0;
        // The sort of the statement being printed.
        let mut sort = Sort::Other;
        while let Some(piece) = self.plan.pieces.get(at) {
            at += 1;
            if piece.token == Token::Newline {
                self.n_newlines += 1;
                continue;
            }
            if piece.starts {
                sort = self.plan.sort(self.text, at - 1, opened.last());
            }
            let fresh = self.n_newlines > 0;
            if fresh {
                if let Some(line) = self.lines.last_mut() {
                    line.whole &= opened.len() == line.depth;
                }
                let blank_before = self.n_newlines > 1 && !self.lines.is_empty();
                let text = self.indent(piece, &opened);
                let sort = if piece.starts && piece.verbatim.is_none() { sort } else { Sort::Other };
                let is_remark = piece.token == Token::Comment;
                let depth = opened.len();
                self.lines.push(Line { text, blank_before, sort, depth, is_remark, whole: true, stops: Vec::new() });
            } else if let (Some(before), Some(line)) = (before, self.lines.last_mut()) {
                line.text.push_str(spacing::between(before, piece));
            }
            let second = before.is_some_and(|before| before.starts);
            let Some(line) = self.lines.last_mut() else { break };
            // Only the statement that begins the line has columns, not those in its braces.
            if !fresh
                && opened.len() == line.depth
                && let Some(column) = self.plan.column(self.text, at - 1, line.sort, second)
                && line.stops.iter().all(|(known, _)| *known < column)
            {
                line.stops.push((column, line.text.len()));
            }
            self.n_newlines = 0;
            let end = match piece.verbatim {
                // An item with faults: its bytes as they are.
                Some(end) => {
                    line.text.push_str(self.text.get(piece.span.start as usize..end as usize).unwrap_or(""));
                    end
                }
                None => {
                    let text = self.text.get(piece.span.range()).unwrap_or("");
                    let trimmed = matches!(piece.token, Token::Comment | Token::Prose);
                    line.text.push_str(if trimmed { text.trim_end() } else { text });
                    piece.span.end
                }
            };
            note(&mut opened, piece.token, sort, piece.verbatim.is_none());
            before = Some(piece);
            while let Some(inside) = self.plan.pieces.get(at).filter(|inside| inside.span.start < end) {
                before = Some(inside);
                at += 1;
            }
        }
    }

    /// The blanks before the first token of a line.
    fn indent(&self, piece: &Piece, opened: &[Opened]) -> String {
        if let Some(kept) = piece.indent.filter(|_| self.plan.keeps_indent) {
            return self.text.get(kept.range()).unwrap_or("").to_string();
        }
        let closes = matches!(piece.token, Token::CloseBrace | Token::CloseParen | Token::CloseBracket);
        let levels = opened.len().saturating_sub(usize::from(closes));
        let in_bracket = opened.last() == Some(&Opened::Bracket);
        let goes_on = !piece.starts && !closes && !in_bracket && piece.token != Token::Comment;
        "  ".repeat(levels + usize::from(goes_on))
    }
}

/// Keeps account of what is open. A verbatim item opens and closes its own.
fn note(opened: &mut Vec<Opened>, token: Token, sort: Sort, printed: bool) {
    if !printed {
        return;
    }
    match token {
        Token::OpenBrace => opened.push(Opened::Block(sort)),
        Token::OpenParen | Token::OpenBracket => opened.push(Opened::Bracket),
        Token::CloseBrace | Token::CloseParen | Token::CloseBracket => {
            opened.pop();
        }
        _ => {}
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
    fn neighbouring_lines_stand_in_columns() {
        check_format(
            "given mass=3 t cite \"a\"\ngiven v : speed=2 m/s    cite \"b\" # c\ngiven way = 1 m # d",
            "given mass      = 3 t   cite \"a\"\n\
             given v : speed = 2 m/s cite \"b\"  # c\n\
             given way       = 1 m             # d\n",
        );
        check_format("a = 1 m\n\nlonger = 2 m", "a = 1 m\n\nlonger = 2 m\n");
        check_format("a = 1 m\ngiven longer = 2 m", "a = 1 m\ngiven longer = 2 m\n");
        check_format("ω_größte = 1\na = 2\n# c\nb = 3", "ω_größte = 1\na        = 2\n# c\nb        = 3\n");
        check_format(
            "ledger a of b {\nstart at rest\ntravel c 2 m\nlose heat = q\n}",
            "ledger a of b {\n  start  at rest\n  travel c 2 m\n  lose   heat = q\n}\n",
        );
        check_format(
            "train t {\ngear g=a->b{ratio=2}\nrope line=b->load{falls=1}\n}",
            "train t {\n  gear g    = a -> b    { ratio = 2 }\n  rope line = b -> load { falls = 1 }\n}\n",
        );
    }

    #[test]
    fn a_line_far_too_long_leaves_the_columns() {
        let long = "a_name_that_is_far_longer_than_all_others_here";
        check_format(&format!("a = 1\nbc = 2\n{long} = 3\nd=4"), &format!("a  = 1\nbc = 2\n{long} = 3\nd = 4\n"));
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
