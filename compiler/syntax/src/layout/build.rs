//! The walk over the tokens that builds statements, with a stack of open
//! blocks in place of recursion.

use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use super::depth::{MAX_BLOCKS, check_depth};
use super::open::{Current, Inside, Open, stand_in};
use super::prescan::{Raw, Scan};
use super::{Block, Layout, Statement};
use crate::codes;
use crate::marks::{Gap, Mark, is_binary_operator};
use crate::words;

/// How braces that do not match are met.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Mode {
    /// Give up at the first one.
    Strict,
    /// Find the likely place by item keywords and indentation.
    Mend,
}

/// Marks between braces that are nested past the limit.
struct Skipped {
    depth: usize,
}

pub(super) struct Builder<'a, 's> {
    scan: &'a Scan<'s>,
    mode: Mode,
    marks: Vec<Mark<'s>>,
    current: Option<Current>,
    open: Vec<Open>,
    done: Vec<Statement>,
    skipped: Option<Skipped>,
    /// Blanks before the present line.
    indent: u32,
    last_end: u32,
    line_ended: bool,
    /// Whether the text did not match in strict mode.
    failed: bool,
    leaky: bool,
}

impl<'a, 's> Builder<'a, 's> {
    pub fn new(scan: &'a Scan<'s>, mode: Mode) -> Builder<'a, 's> {
        Builder {
            scan,
            mode,
            marks: Vec::with_capacity(scan.raw.len()),
            current: None,
            open: Vec::new(),
            done: Vec::new(),
            skipped: None,
            indent: 0,
            last_end: 0,
            line_ended: true,
            failed: false,
            leaky: false,
        }
    }

    /// The layout; None if the mode is strict and the braces do not match.
    pub fn run(mut self) -> Option<Layout<'s>> {
        for at in 0..self.scan.raw.len() {
            let Some(raw) = self.scan.raw.get(at).copied() else { break };
            if let Some(indent) = raw.indent
                && !raw.token.is_trivia()
            {
                self.indent = indent;
                self.begin_line(at, indent, raw);
            }
            self.take(at, raw);
            if self.failed && self.mode == Mode::Strict {
                return None;
            }
            if raw.token == Token::Newline {
                self.line_ended = true;
            } else if raw.token != Token::Comment {
                self.line_ended = false;
                self.last_end = raw.span.end;
            }
        }
        self.finish_statement();
        let end = self.scan.text.len() as u32;
        self.close_blocks(0, Span::at(end.max(self.last_end)), "the text ends here");
        if self.failed && self.mode == Mode::Strict {
            return None;
        }
        Some(Layout { marks: self.marks, statements: self.done })
    }

    /// Looks whether a line tells that open blocks were meant to be closed.
    fn begin_line(&mut self, at: usize, indent: u32, raw: Raw) {
        // A line that goes on with a statement says nothing about blocks.
        if self.open.is_empty() || (self.current.is_some() && self.skipped.is_none()) {
            return;
        }
        let starts_item = self.scan.starts_item(at);
        let mut keep = self.open.len();
        if starts_item {
            let keyword = self.scan.word(at).unwrap_or("");
            while keep > 0 && !self.open.get(keep - 1).is_some_and(|open| open.inside.may_hold(keyword)) {
                keep -= 1;
            }
        }
        if self.mode == Mode::Mend {
            let starts = starts_item || self.scan.starts_definition(at);
            let closes = raw.token == Token::CloseBrace;
            while keep > 0 {
                let Some(open) = self.open.get(keep - 1) else { break };
                let not_deeper = indent <= open.indent;
                let by_column = starts && not_deeper && open.deeper;
                // `flange at 3 mm { named =` with the next placement under it.
                let cut_short = !open.deeper
                    && not_deeper
                    && !closes
                    && (open.content || keep > 1 || open.inside == Inside::Nothing);
                if !(open.leaky && (by_column || cut_short)) {
                    break;
                }
                keep -= 1;
            }
            if closes
                && let Some(innermost) = self.open.get(keep.wrapping_sub(1))
                && innermost.leaky
                && innermost.indent > indent
                && let Some(outer) = self.open.iter().take(keep).rposition(|open| open.indent == indent)
            {
                keep = outer + 1;
            }
        }
        if keep < self.open.len() {
            self.failed = true;
            self.skipped = None;
            self.finish_statement();
            let label = if raw.token == Token::CloseBrace {
                "this `}` belongs to an outer block"
            } else {
                "it was taken as closed before this line"
            };
            self.close_blocks(keep, raw.span, label);
        }
        if let Some(open) = self.open.last_mut() {
            open.deeper |= indent > open.indent;
        }
    }

    fn take(&mut self, at: usize, raw: Raw) {
        if let Some(skipped) = &mut self.skipped {
            match raw.token {
                Token::OpenBrace => skipped.depth += 1,
                Token::CloseBrace if skipped.depth > 1 => skipped.depth -= 1,
                Token::CloseBrace => {
                    self.skipped = None;
                    if let Some(current) = &mut self.current {
                        current.statement.span.end = raw.span.end;
                        current.in_tail = true;
                        current.statement.tail = self.marks.len()..self.marks.len();
                    }
                }
                _ => {}
            }
            return;
        }
        match raw.token {
            Token::Comment => {}
            Token::Newline => self.take_newline(raw),
            Token::Comma => self.take_comma(at, raw),
            Token::OpenBrace => self.open_block(raw),
            Token::CloseBrace => self.close_block(raw),
            Token::OpenParen | Token::OpenBracket => {
                self.push(raw);
                if let Some(current) = &mut self.current {
                    current.open_bracket(raw.token, raw.span, raw.closes);
                }
            }
            Token::CloseParen | Token::CloseBracket => self.close_bracket(raw),
            Token::Prose => {
                self.finish_statement();
                self.push(raw);
                self.finish_statement();
            }
            Token::UnterminatedStr => {
                self.push(raw);
                self.fault(
                    Diagnostic::new(codes::UNTERMINATED_TEXT, raw.span, "this text is not closed on its line")
                        .with_help("end it with `\"`")
                        .with_fix("close the text", Span::at(raw.span.end), "\""),
                );
            }
            Token::Unknown | Token::LineSeparator => self.take_unknown(raw),
            _ => self.push(raw),
        }
    }

    fn take_unknown(&mut self, raw: Raw) {
        let text = self.scan.slice(raw.span);
        let meant = stand_in(text);
        self.push(Raw { token: meant.map_or(raw.token, |(token, _)| token), ..raw });
        let shown = text.chars().next().unwrap_or(' ');
        let mut fault = if raw.token == Token::LineSeparator {
            let message = format!("the character U+{:04X} looks like a line end but is none here", u32::from(shown));
            Diagnostic::new(codes::LINE_SEPARATOR, raw.span, message).with_fix("make it a line end", raw.span, "\n")
        } else if shown == '|' {
            Diagnostic::new(codes::UNKNOWN_CHARACTER, raw.span, "`|` begins prose only as the first mark of a line")
        } else {
            let message = if shown.is_control() || shown == '\u{FEFF}' {
                format!("the character U+{:04X} has no meaning here", u32::from(shown))
            } else {
                format!("the character `{shown}` has no meaning here")
            };
            Diagnostic::new(codes::UNKNOWN_CHARACTER, raw.span, message)
        };
        if let Some((_, spelling)) = meant {
            fault = fault.with_fix(format!("write `{spelling}`"), raw.span, spelling);
        }
        self.fault(fault);
    }

    fn take_newline(&mut self, raw: Raw) {
        let Some(current) = &self.current else { return };
        let goes_on = match current.brackets.last() {
            Some((_, _, true)) => true,
            Some((_, _, false)) => !raw.blank && self.goes_on_in_open_bracket(raw.next),
            None => !raw.blank && self.goes_on(raw.next),
        };
        if !goes_on {
            self.finish_statement();
        }
    }

    /// Whether the tokens at `next` go on with the present statement.
    fn goes_on(&self, next: usize) -> bool {
        let Some(current) = &self.current else { return false };
        let Some(first) = self.scan.raw.get(next).copied() else { return false };
        if let Some(word) = self.scan.word(next)
            && words::CONTINUING.contains(&word)
            && !matches!(self.scan.token(next + 1), Some(Token::Equals | Token::Colon | Token::Dot))
        {
            return true;
        }
        if current.in_tail {
            return false;
        }
        let begins_with_operator = is_binary_operator(first.token)
            || matches!(first.token, Token::PlusMinus | Token::DotDot | Token::Arrow | Token::Equals);
        if begins_with_operator {
            // In `choose`, each line begins with a value, perhaps a negative one.
            let sign = matches!(first.token, Token::Plus | Token::Minus)
                && self.scan.raw.get(next + 1).is_some_and(|behind| behind.span.start == first.span.end);
            let in_choose = self.open.last().is_some_and(|open| open.inside == Inside::Choose);
            return !(sign && in_choose);
        }
        let ends_with_operator = self.last_mark().is_some_and(|mark| {
            is_binary_operator(mark.token) || mark.is_one_of(&["and", "or", "not"]) && mark.gap != Gap::Line
        });
        ends_with_operator && !matches!(first.token, Token::CloseBrace) && !self.scan.starts_statement(next)
    }

    /// The same inside a bracket that nothing closes: go on only where the text
    /// plainly does, so that the next statement is not swallowed.
    fn goes_on_in_open_bracket(&self, next: usize) -> bool {
        let Some(first) = self.scan.raw.get(next) else { return false };
        if matches!(first.token, Token::CloseBrace | Token::Prose) || self.scan.starts_statement(next) {
            return false;
        }
        let open_end = self.last_mark().is_some_and(|mark| {
            matches!(mark.token, Token::Comma | Token::OpenParen | Token::OpenBracket) || is_binary_operator(mark.token)
        });
        let goes_on = matches!(
            first.token,
            Token::OpenParen | Token::OpenBracket | Token::CloseParen | Token::CloseBracket | Token::Number
        ) || is_binary_operator(first.token);
        open_end || goes_on
    }

    fn take_comma(&mut self, at: usize, raw: Raw) {
        let separates = match &self.current {
            None => return,
            Some(current) => current.brackets.is_empty() && !self.open.is_empty() && !self.absorbs_comma(current, at),
        };
        if separates { self.finish_statement() } else { self.push(raw) }
    }

    /// Whether the comma belongs to a list of bare words that the statement
    /// takes: `offers drum, face`, `stop ... , failing`, `wanted ... where a == b, c == d`.
    fn absorbs_comma(&self, current: &Current, at: usize) -> bool {
        if current.in_tail {
            return false;
        }
        let head = self.marks.get(current.statement.head.start..).unwrap_or(&[]);
        let Some(first) = head.first() else { return false };
        let next_line = self.scan.token(at + 1) == Some(Token::Newline);
        let behind = self.scan.token(at + 2);
        let bare = self.scan.word(at + 1).is_some()
            && matches!(behind, None | Some(Token::Comma | Token::Newline | Token::CloseBrace | Token::Comment));
        if first.is_word("offers") {
            bare
        } else if first.is_word("stop") {
            self.scan.word(at + 1) == Some("failing")
        } else if first.is_word("show") {
            !next_line && !matches!(behind, Some(Token::Equals))
        } else if first.is_word("wanted") {
            !next_line && head.iter().any(|mark| mark.is_word("where"))
        } else {
            false
        }
    }

    fn close_bracket(&mut self, raw: Raw) {
        let opener = if raw.token == Token::CloseParen { Token::OpenParen } else { Token::OpenBracket };
        let position = self
            .current
            .as_ref()
            .filter(|current| current.holds(opener))
            .and_then(|current| current.brackets.iter().rposition(|(token, _, _)| *token == opener));
        match position {
            Some(position) => {
                self.supply_closers(position + 1);
                self.push(raw);
                if let Some(current) = &mut self.current {
                    current.pop_bracket();
                }
            }
            None => {
                let text = self.scan.slice(raw.span);
                let fault = Diagnostic::new(codes::UNOPENED_BRACKET, raw.span, format!("nothing opens this `{text}`"))
                    .with_fix("remove it", raw.span, "");
                self.ensure_current(raw.span);
                self.fault(fault);
                if let Some(current) = &mut self.current {
                    current.statement.span = current.statement.span.to(raw.span);
                }
            }
        }
    }

    /// Closes the brackets from `keep` on with supplied marks and one report.
    fn supply_closers(&mut self, keep: usize) {
        let Some(current) = &mut self.current else { return };
        let Some(&(token, place, _)) = current.brackets.last().filter(|_| current.brackets.len() > keep) else {
            return;
        };
        let end = self.marks.last().map_or(0, |mark| mark.span.end);
        let mut closers = String::new();
        while current.brackets.len() > keep {
            let Some(token) = current.pop_bracket() else { break };
            let (closer, sign) =
                if token == Token::OpenParen { (Token::CloseParen, ')') } else { (Token::CloseBracket, ']') };
            closers.push(sign);
            self.marks.push(Mark { token: closer, gap: Gap::None, span: Span::at(end), text: "" });
        }
        let sign = if token == Token::OpenParen { "(" } else { "[" };
        self.fault(
            Diagnostic::new(codes::UNCLOSED_BRACKET, place, format!("this `{sign}` is not closed"))
                .with_label(Span::at(end), "it was taken as closed here")
                .with_fix(format!("add `{closers}`"), Span::at(end), closers),
        );
    }

    fn open_block(&mut self, raw: Raw) {
        self.supply_closers(0);
        if self.current.as_ref().is_some_and(|current| current.in_tail) {
            self.finish_statement();
        }
        self.ensure_current(raw.span);
        let n_open = self.open.len();
        let Some(mut current) = self.current.take() else { return };
        current.statement.span = current.statement.span.to(raw.span);
        current.statement.head.end = self.marks.len();
        if n_open >= MAX_BLOCKS {
            current.statement.refused = true;
            let message = format!("blocks are nested more than {MAX_BLOCKS} deep");
            current.statement.faults.push(Diagnostic::new(codes::NESTING_TOO_DEEP, raw.span, message));
            self.skipped = Some(Skipped { depth: 1 });
            self.current = Some(current);
            return;
        }
        let head = self.marks.get(current.statement.head.clone()).unwrap_or(&[]);
        let parent = self.open.last().map(|open| open.inside);
        let inside = match (head.first(), head.last()) {
            (_, Some(last)) if last.is_word("choose") => Inside::Choose,
            (Some(first), _) if first.is_word("component") => Inside::Component,
            (Some(first), _) if first.is_word("ledger") => Inside::Ledger,
            (Some(first), _) if first.is_one_of(&["run", "cycle", "vary", "curve"]) => Inside::Later,
            _ if parent == Some(Inside::Later) => Inside::Later,
            (Some(first), _) if parent.is_none() && !takes_block(first) => Inside::Nothing,
            _ => Inside::Fields,
        };
        let position = self.position(raw.span);
        let content = !matches!(self.scan.token(position + 1), None | Some(Token::Newline | Token::Comment));
        let leaky = self.leaky;
        let indent = self.indent;
        self.open.push(Open {
            owner: current,
            brace: raw.span,
            indent,
            content,
            deeper: false,
            inside,
            leaky,
            statements: Vec::new(),
        });
    }

    fn close_block(&mut self, raw: Raw) {
        self.finish_statement();
        match self.open.pop() {
            Some(open) => self.fold(open, raw.span),
            None => {
                self.failed = true;
                let fault = Diagnostic::new(codes::UNOPENED_BRACKET, raw.span, "nothing opens this `}`").with_fix(
                    "remove it",
                    raw.span,
                    "",
                );
                self.ensure_current(raw.span);
                self.fault(fault);
                self.finish_statement();
            }
        }
    }

    /// Puts a block into its statement, whose tail begins now.
    fn fold(&mut self, open: Open, close: Span) {
        let mut owner = open.owner;
        owner.statement.span = owner.statement.span.to(close);
        if let Some(last) = open.statements.last() {
            owner.statement.span = owner.statement.span.to(last.span);
        }
        owner.statement.block = Some(Block { open: open.brace, close, statements: open.statements });
        owner.statement.tail = self.marks.len()..self.marks.len();
        owner.in_tail = true;
        self.current = Some(owner);
    }

    /// Closes blocks until `keep` are open, with one report at the innermost brace.
    fn close_blocks(&mut self, keep: usize, taken: Span, label: &str) {
        let mut reported = false;
        while self.open.len() > keep {
            let Some(open) = self.open.pop() else { break };
            self.failed = true;
            let brace = open.brace;
            let end = self.last_end.max(brace.end);
            self.fold(open, Span::at(end));
            if !reported {
                reported = true;
                self.fault(
                    Diagnostic::new(codes::UNCLOSED_BRACKET, brace, "this `{` is not closed")
                        .with_label(taken, label)
                        .with_help("close it with `}`"),
                );
            }
            self.finish_statement();
        }
    }

    fn push(&mut self, raw: Raw) {
        self.ensure_current(raw.span);
        let gap = match (self.line_ended, raw.span.start == self.last_end) {
            (true, _) => Gap::Line,
            (false, true) => Gap::None,
            (false, false) => Gap::Space,
        };
        self.marks.push(Mark { token: raw.token, gap, span: raw.span, text: self.scan.slice(raw.span) });
        if let Some(current) = &mut self.current {
            current.statement.span = current.statement.span.to(raw.span);
        }
    }

    fn ensure_current(&mut self, place: Span) {
        if self.current.is_some() {
            return;
        }
        if self.open.is_empty() && self.mode == Mode::Mend {
            self.leaky = self.is_leaky(self.position(place));
        }
        let at = self.marks.len();
        self.current = Some(Current {
            statement: Statement { span: place, head: at..at, tail: at..at, ..Statement::default() },
            in_tail: false,
            brackets: Vec::new(),
            n_round: 0,
        });
    }

    /// Whether braces opened from here to the next item at the margin outnumber
    /// those closed. The look ahead is bounded so that many broken lines do not
    /// each walk to the end of the file.
    fn is_leaky(&self, from: usize) -> bool {
        const FAR: usize = 256;
        let mut n_open = 0i64;
        for at in from..self.scan.raw.len().min(from + FAR) {
            let Some(raw) = self.scan.raw.get(at) else { break };
            let at_margin = at > from && raw.indent == Some(0);
            if at_margin && (n_open <= 0 || self.scan.starts_item(at) || self.scan.starts_definition(at)) {
                break;
            }
            match raw.token {
                Token::OpenBrace => n_open += 1,
                Token::CloseBrace if n_open == 0 => return false,
                Token::CloseBrace => n_open -= 1,
                _ => {}
            }
        }
        n_open > 0
    }

    fn position(&self, span: Span) -> usize {
        self.scan.raw.partition_point(|raw| raw.span.start < span.start)
    }

    fn last_mark(&self) -> Option<&Mark<'s>> {
        self.marks.last()
    }

    fn fault(&mut self, fault: Diagnostic<Span>) {
        if let Some(current) = &mut self.current {
            current.statement.faults.push(fault);
        }
    }

    fn finish_statement(&mut self) {
        self.supply_closers(0);
        let Some(mut current) = self.current.take() else { return };
        let end = self.marks.len();
        if current.in_tail {
            current.statement.tail.end = end;
        } else {
            current.statement.head.end = end;
            current.statement.tail = end..end;
        }
        for range in [current.statement.head.clone(), current.statement.tail.clone()] {
            if let Some(fault) = check_depth(self.marks.get(range).unwrap_or(&[])) {
                current.statement.refused = true;
                current.statement.faults.push(fault);
                break;
            }
        }
        match self.open.last_mut() {
            Some(open) => open.statements.push(current.statement),
            None => self.done.push(current.statement),
        }
    }
}

/// Whether an item that begins with this mark may have a block of its own.
fn takes_block(first: &Mark) -> bool {
    const WITHOUT: &[&str] = &["use", "given", "assume", "axis", "unit", "wanted", "limit", "confirm"];
    first.is_one_of(words::ITEMS) && !first.is_one_of(WITHOUT)
}
