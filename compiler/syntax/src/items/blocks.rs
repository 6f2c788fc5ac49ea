//! The blocks of items: fields, placements, links, members of shapes,
//! formulas and components, arms of `choose`.

use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use super::Reader;
use super::item::behind;
use crate::ast::{Arm, Choose, Clauses, Expr, Field, Item, ItemKind, LaterLine, Link, LoadPath, Name, Placement};
use crate::codes;
use crate::faults::describe;
use crate::grammar::{Definer, Marks, name_of, run};
use crate::layout::{Statement, is_component_line};
use crate::words;

type Faults = Vec<Diagnostic<Span>>;

/// The statements of a block; none where there is no block.
pub(super) fn statements(statement: &Statement) -> &[Statement] {
    statement.block.as_ref().map_or(&[], |block| &block.statements)
}

impl<'s> Reader<'s> {
    /// Takes over what layout said of a line; true if the line can be read.
    pub(super) fn open_line(&self, line: &Statement, acc: &mut Faults) -> bool {
        acc.extend(line.faults.iter().cloned());
        let head = self.head(line);
        match head.first() {
            _ if line.refused => false,
            Some(mark) if mark.token == Token::Prose => {
                let message = "prose stands between items, not inside a block";
                acc.push(
                    Diagnostic::new(codes::MISPLACED_LINE, mark.span, message).with_help("begin a remark with `#`"),
                );
                false
            }
            Some(_) => true,
            None => {
                if line.faults.is_empty()
                    && let Some(block) = &line.block
                {
                    let message = "a block needs a name before its `{`";
                    acc.push(Diagnostic::new(codes::SYNTAX_ERROR, block.open, message));
                }
                false
            }
        }
    }

    /// `name = value` lines.
    pub(super) fn fields(&self, statement: &Statement, acc: &mut Faults) -> Vec<Field> {
        statements(statement).iter().filter_map(|line| self.field(line, acc)).collect()
    }

    pub(super) fn field(&self, line: &Statement, acc: &mut Faults) -> Option<Field> {
        if !self.open_line(line, acc) {
            return None;
        }
        let head = self.head(line);
        if let Some(first) = head.first().filter(|mark| mark.token != Token::Word) {
            let message = format!("expected a field such as `name = value`, found {}", describe(first));
            acc.push(Diagnostic::new(codes::SYNTAX_ERROR, first.span, message));
            return None;
        }
        let head = self.read(&self.grammar.field, line, acc)?;
        Some(self.finish_field(head, line, acc))
    }

    pub(super) fn finish_field(
        &self,
        (head, clauses): (crate::grammar::FieldHead, Clauses),
        line: &Statement,
        acc: &mut Faults,
    ) -> Field {
        let value = self.definition(head.definer, line, acc);
        let clauses = self.with_tail(line, clauses, acc);
        Field { path: head.path, kind: head.kind, value, clauses, span: line.span }
    }

    /// The fields of a load, its path apart.
    pub(super) fn load_fields(&self, statement: &Statement, acc: &mut Faults) -> (Vec<Field>, Option<LoadPath>) {
        let mut fields = Vec::new();
        let mut path = None;
        for line in statements(statement) {
            let is_path = matches!(self.head(line), [first, second, ..] if first.is_word("path") && second.token == Token::Equals);
            if !is_path {
                fields.extend(self.field(line, acc));
                continue;
            }
            if self.open_line(line, acc) {
                path = self.read(&self.grammar.lines.load_path, line, acc).map(|(path, _)| path).or(path);
                self.refuse_block(line, acc);
            }
        }
        (fields, path)
    }

    pub(super) fn placements(&self, statement: &Statement, acc: &mut Faults) -> Vec<Placement> {
        let mut placements = Vec::new();
        for line in statements(statement) {
            if !self.open_line(line, acc) {
                continue;
            }
            let Some((head, clauses)) = self.read(&self.grammar.lines.placement, line, acc) else {
                self.unread_block(line, acc);
                continue;
            };
            let fields = self.fields(line, acc);
            let clauses = self.with_tail(line, clauses, acc);
            let crate::grammar::PlacementHead { less, part, at, from } = head;
            placements.push(Placement { less, part, at, from, fields, clauses, span: line.span });
        }
        placements
    }

    pub(super) fn links(&self, statement: &Statement, acc: &mut Faults) -> Vec<Link> {
        let mut links = Vec::new();
        for line in statements(statement) {
            if !self.open_line(line, acc) {
                continue;
            }
            let Some((head, clauses)) = self.read(&self.grammar.lines.link, line, acc) else {
                self.unread_block(line, acc);
                continue;
            };
            if !words::LINKS.contains(&head.kind.text.as_str()) {
                let message = format!("`{}` is no kind of link", head.kind.text);
                let mut fault = Diagnostic::new(codes::SYNTAX_ERROR, head.kind.span, message)
                    .with_help(format!("links are {}", words::LINKS.join(", ")));
                if let Some(near) = words::nearest(&head.kind.text, words::LINKS) {
                    fault = fault.with_fix(format!("write `{near}`"), head.kind.span, near);
                }
                acc.push(fault);
            }
            let fields = self.fields(line, acc);
            let clauses = self.with_tail(line, clauses, acc);
            let crate::grammar::LinkHead { kind, name, from, to } = head;
            links.push(Link { kind, name, from, to, fields, clauses, span: line.span });
        }
        links
    }

    /// The arms of a `choose`.
    pub(super) fn choose(&self, statement: &Statement, acc: &mut Faults) -> Choose {
        let Some(block) = &statement.block else {
            let end = self.head(statement).last().map_or(0, |mark| mark.span.end);
            let message = "expected `{` and one line for each value after `choose`";
            acc.push(Diagnostic::new(codes::SYNTAX_ERROR, Span::at(end), message));
            return Choose { arms: Vec::new(), span: Span::at(end) };
        };
        let mut arms = Vec::new();
        for line in &block.statements {
            if !self.open_line(line, acc) {
                continue;
            }
            self.refuse_block(line, acc);
            if let Some((value, condition)) = self.read(&self.grammar.lines.arm, line, acc) {
                arms.push(Arm { value, condition, span: line.span });
            }
        }
        if arms.is_empty() && block.statements.is_empty() {
            let message = "`choose` needs at least one line such as `0.35 when v < 2 m/s`";
            acc.push(Diagnostic::new(codes::MISSING_VALUE, block.open, message));
        }
        let start = self.head(statement).last().map_or(block.open, |mark| mark.span);
        Choose { arms, span: start.to(block.close) }
    }

    /// A `require` line, if the line is one.
    fn requirement(&self, line: &Statement, acc: &mut Faults) -> Option<Option<Expr>> {
        let head = self.head(line);
        if !head.first().is_some_and(|mark| mark.is_word("require")) || !is_line_of_its_own(head) {
            return None;
        }
        self.refuse_block(line, acc);
        Some(self.read(&self.grammar.require, line, acc).map(|(condition, _)| condition))
    }

    /// The names of an `offers` line, if the line is one.
    fn offered(&self, line: &Statement, acc: &mut Faults) -> Option<Vec<Name>> {
        let head = self.head(line);
        if !head.first().is_some_and(|mark| mark.is_word("offers")) || !is_line_of_its_own(head) {
            return None;
        }
        self.refuse_block(line, acc);
        Some(self.read(&self.grammar.offers, line, acc).map(|(names, _)| names).unwrap_or_default())
    }

    pub(super) fn shape(&self, statement: &Statement, acc: &mut Faults) -> Option<(ItemKind, Clauses)> {
        let (signature, mut clauses) = self.read(&self.grammar.signature, statement, acc)?;
        let mut requirements = Vec::new();
        let mut members = Vec::new();
        for line in statements(statement) {
            let head = self.head(line);
            if head.first().is_some_and(|mark| mark.is_word("cite")) && is_line_of_its_own(head) {
                // `cite` alone, after a blank line, speaks of the whole shape.
                acc.extend(line.faults.iter().cloned());
                clauses.cite = self.read(&self.grammar.tail, line, acc).and_then(|c| c.cite).or(clauses.cite);
            } else if let Some(requirement) = self.requirement(line, acc) {
                acc.extend(line.faults.iter().cloned());
                requirements.extend(requirement);
            } else {
                members.extend(self.field(line, acc));
            }
        }
        self.refuse_result(&signature.definer, &signature.kind, acc);
        let (name, parameters) = (signature.name, signature.parameters);
        Some((ItemKind::Shape { name, parameters, requirements, members }, clauses))
    }

    fn refuse_result(&self, definer: &Definer, kind: &Option<Name>, acc: &mut Faults) {
        let span = match (definer, kind) {
            (Definer::Value(expr), _) => expr.span,
            (_, Some(kind)) => kind.span,
            _ => return,
        };
        acc.push(Diagnostic::new(
            codes::SYNTAX_ERROR,
            span,
            "only a `formula` has a kind or a value behind its parameters",
        ));
    }

    pub(super) fn formula(&self, statement: &Statement, acc: &mut Faults) -> Option<(ItemKind, Clauses)> {
        let (signature, clauses) = self.read(&self.grammar.signature, statement, acc)?;
        let mut requirements = Vec::new();
        let mut locals = Vec::new();
        let mut offers = Vec::new();
        let value = match signature.definer {
            Definer::None => {
                for line in statements(statement) {
                    if let Some(requirement) = self.requirement(line, acc) {
                        acc.extend(line.faults.iter().cloned());
                        requirements.extend(requirement);
                    } else if let Some(names) = self.offered(line, acc) {
                        acc.extend(line.faults.iter().cloned());
                        offers.extend(names);
                    } else {
                        locals.extend(self.field(line, acc));
                    }
                }
                if statement.block.is_none() {
                    let end = self.head(statement).last().map_or(0, |mark| mark.span.end);
                    let message =
                        format!("expected `=` and a value, or a block, for the formula `{}`", signature.name.text);
                    acc.push(Diagnostic::new(codes::MISSING_VALUE, Span::at(end), message));
                }
                None
            }
            definer => self.definition(definer, statement, acc),
        };
        let (name, parameters, kind) = (signature.name, signature.parameters, signature.kind);
        Some((ItemKind::Formula { name, parameters, kind, value, requirements, locals, offers }, clauses))
    }

    pub(super) fn component(&self, statement: &Statement, acc: &mut Faults) -> Option<(ItemKind, Clauses)> {
        let (signature, clauses) = self.read(&self.grammar.signature, statement, acc)?;
        let mut requirements = Vec::new();
        let mut offers = Vec::new();
        let mut items: Vec<Item> = Vec::new();
        let lines = statements(statement);
        let mut at = 0;
        while let Some(line) = lines.get(at) {
            if is_component_line(self.marks, line) {
                at += 1;
                acc.extend(line.faults.iter().cloned());
                match self.requirement(line, acc) {
                    Some(requirement) => requirements.extend(requirement),
                    None => offers.extend(self.offered(line, acc).unwrap_or_default()),
                }
                continue;
            }
            // Items in a row are read together, so that lines of prose join.
            let rest = lines.get(at..).unwrap_or(&[]);
            let n_items = rest.iter().take_while(|line| !is_component_line(self.marks, line)).count();
            items.extend(self.items(rest.get(..n_items).unwrap_or(&[])));
            at += n_items.max(1);
        }
        self.refuse_result(&signature.definer, &signature.kind, acc);
        let (name, parameters) = (signature.name, signature.parameters);
        Some((ItemKind::Component { name, parameters, offers, requirements, items }, clauses))
    }

    /// The lines of an item that is given meaning later, inner blocks included.
    pub(super) fn later_lines(&self, statement: &Statement, lines: &mut Vec<LaterLine>, acc: &mut Faults) {
        for line in statements(statement) {
            if !self.open_line(line, acc) {
                continue;
            }
            let head = self.head(line);
            let (keyword, rest) = match head.first() {
                Some(first) if first.token == Token::Word && is_line_of_its_own(head) => {
                    (Some(name_of(first)), behind(head))
                }
                _ => (None, head),
            };
            let mut read = self.later_line(keyword, rest, acc);
            read.span = line.span;
            read.clauses = self.with_tail(line, read.clauses, acc);
            lines.push(read);
            // Blocks nest at most `layout::depth::MAX_BLOCKS` deep.
            self.later_lines(line, lines, acc);
        }
    }

    pub(super) fn later_line(&self, keyword: Option<Name>, marks: Marks<'s>, acc: &mut Faults) -> LaterLine {
        let (expressions, clauses) = run(&self.grammar.lines.later, marks, acc).unwrap_or_default();
        let span = match (marks.first(), marks.last()) {
            (Some(first), Some(last)) => first.span.to(last.span),
            _ => Span::default(),
        };
        LaterLine { keyword, expressions, clauses, span }
    }
}

/// Whether a line that begins with a contextual word means the word and no field of that name.
pub(super) fn is_line_of_its_own(head: Marks) -> bool {
    head.get(1).is_none_or(|mark| !matches!(mark.token, Token::Equals | Token::Colon | Token::Dot))
}
