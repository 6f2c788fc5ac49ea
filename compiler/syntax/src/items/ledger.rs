//! The lines of a ledger.

use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use super::Reader;
use super::blocks::{is_line_of_its_own, statements};
use super::item::split_equations;
use crate::ast::{Clauses, Entry, LedgerLine, LedgerLineKind};
use crate::codes;
use crate::faults::describe;
use crate::layout::Statement;
use crate::words;

type Faults = Vec<Diagnostic<Span>>;

impl Reader<'_> {
    pub(super) fn ledger_lines(&self, statement: &Statement, acc: &mut Faults) -> Vec<LedgerLine> {
        let mut lines = Vec::new();
        for line in statements(statement) {
            if !self.open_line(line, acc) {
                continue;
            }
            if let Some((kind, clauses)) = self.ledger_line(line, acc) {
                let clauses = self.with_tail(line, clauses, acc);
                lines.push(LedgerLine { kind, clauses, span: line.span });
            }
        }
        lines
    }

    fn ledger_line(&self, line: &Statement, acc: &mut Faults) -> Option<(LedgerLineKind, Clauses)> {
        let g = &self.grammar;
        let head = self.head(line);
        let first = head.first()?;
        let keyword = if first.token == Token::Word && is_line_of_its_own(head) { first.text } else { "" };
        if matches!(keyword, "start" | "end" | "travel" | "spring" | "wanted" | "limit") {
            self.refuse_block(line, acc);
        }
        Some(match keyword {
            "start" => {
                let (state, clauses) = self.read(&g.lines.state, line, acc)?;
                (LedgerLineKind::Start(state), clauses)
            }
            "end" => {
                let (state, clauses) = self.read(&g.lines.state, line, acc)?;
                (LedgerLineKind::End(state), clauses)
            }
            "travel" => self.read(&g.lines.travel, line, acc)?,
            "spring" => self.read(&g.lines.spring, line, acc)?,
            "wanted" => {
                let (wanted, clauses) = self.read(&g.wanted, line, acc)?;
                (LedgerLineKind::Wanted(split_equations(wanted)), clauses)
            }
            "limit" => {
                let ((every, condition), clauses) = self.read(&g.limit, line, acc)?;
                if every {
                    let message = "inside a ledger a limit holds for that ledger; `every` stands at the top level only";
                    acc.push(Diagnostic::new(codes::SYNTAX_ERROR, condition.span, message));
                }
                (LedgerLineKind::Limit { condition }, clauses)
            }
            "gain" | "lose" => {
                let ((at, head), clauses) = self.read(&g.entry, line, acc)?;
                let mut field = self.finish_field((head, clauses), line, acc);
                let clauses = std::mem::take(&mut field.clauses);
                let entry = Entry { at, field };
                let kind = if keyword == "gain" { LedgerLineKind::Gain(entry) } else { LedgerLineKind::Lose(entry) };
                (kind, clauses)
            }
            _ => {
                let defines = first.token == Token::Word
                    && (head.len() == 1
                        || head
                            .get(1)
                            .is_some_and(|mark| matches!(mark.token, Token::Equals | Token::Colon | Token::Dot)));
                if !defines {
                    acc.push(self.unknown_line(line));
                    return None;
                }
                let field = self.read(&g.field, line, acc)?;
                let mut field = self.finish_field(field, line, acc);
                let clauses = std::mem::take(&mut field.clauses);
                (LedgerLineKind::Local(field), clauses)
            }
        })
    }

    fn unknown_line(&self, line: &Statement) -> Diagnostic<Span> {
        let Some(first) = self.head(line).first() else {
            return Diagnostic::new(codes::MISPLACED_LINE, line.span, "this line cannot stand in a ledger");
        };
        let message = format!("no line of a ledger begins with {}", describe(first));
        let fault = Diagnostic::new(codes::MISPLACED_LINE, first.span, message);
        match words::nearest(first.text, words::LEDGER_LINES) {
            Some(near) => {
                fault.with_help(format!("is `{near}` meant?")).with_fix(format!("write `{near}`"), first.span, near)
            }
            None => {
                fault.with_help(format!("its lines begin with {}, or with `name =`", words::LEDGER_LINES.join(", ")))
            }
        }
    }
}
