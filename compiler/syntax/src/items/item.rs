//! One statement of the top level, or of a component, as an item.

use pintle_lexer::Token;
use pintle_text::{Diagnostic, Span};

use super::Reader;
use crate::ast::{BinaryOp, Clauses, Definition, Expr, ExprKind, Item, ItemKind, Later, Name, Path, Wanted};
use crate::codes;
use crate::faults::describe;
use crate::grammar::{Definer, FieldHead, Marks, name_of};
use crate::layout::Statement;
use crate::marks::Mark;
use crate::words;

type Faults = Vec<Diagnostic<Span>>;

impl<'s> Reader<'s> {
    /// The statement as an item.
    pub(super) fn item(&self, statement: &Statement) -> Item {
        let mut errors = statement.faults.clone();
        let read = if statement.refused { None } else { self.item_kind(statement, &mut errors) };
        let (kind, clauses) = read.unwrap_or_else(|| {
            self.unread_block(statement, &mut errors);
            (self.broken(statement), Clauses::default())
        });
        let clauses = self.with_tail(statement, clauses, &mut errors);
        // One report a place: what comes second only follows from the first.
        errors.sort_by_key(|fault| (fault.place.start, fault.place.end));
        errors.dedup_by_key(|fault| fault.place);
        Item { offset: statement.offset, len: statement.span.end, kind, clauses, errors }
    }

    /// What is left of an item that could not be read: its keyword and its name.
    fn broken(&self, statement: &Statement) -> ItemKind {
        let mut words = self.head(statement).iter().take(2);
        let mut keyword = None;
        let mut name = None;
        if let Some(first) = words.next().filter(|mark| mark.token == Token::Word) {
            if words::ITEMS.contains(&first.text) {
                keyword = Some(name_of(first));
                name = words.next().filter(|mark| mark.token == Token::Word).map(name_of);
            } else {
                name = Some(name_of(first));
            }
        }
        ItemKind::Broken { keyword, name }
    }

    fn item_kind(&self, statement: &Statement, acc: &mut Faults) -> Option<(ItemKind, Clauses)> {
        let head = self.head(statement);
        let Some(first) = head.first() else {
            if statement.faults.is_empty()
                && let Some(block) = &statement.block
            {
                let message = "a block needs an item before its `{`";
                acc.push(Diagnostic::new(codes::SYNTAX_ERROR, block.open, message));
            }
            return None;
        };
        let defines = head.get(1).is_some_and(|mark| matches!(mark.token, Token::Equals | Token::Colon));
        let is_item = first.token == Token::Word && words::ITEMS.contains(&first.text) && !defines;
        if is_item {
            return self.keyword_item(first, statement, acc);
        }
        if first.token == Token::Word && (defines || head.len() == 1 && statement.block.is_none()) {
            let (field, clauses) = self.read(&self.grammar.field, statement, acc)?;
            let (name, kind, value) = self.named_definition(field, statement, acc)?;
            return Some((ItemKind::Derived { name, kind, value }, clauses));
        }
        acc.push(unknown_item(first, head.get(1)));
        None
    }

    fn keyword_item(&self, keyword: &Mark, statement: &Statement, acc: &mut Faults) -> Option<(ItemKind, Clauses)> {
        let g = &self.grammar;
        let lone = |reader: &Reader, acc: &mut Faults| reader.refuse_block(statement, acc);
        Some(match keyword.text {
            "sheet" => {
                let (title, clauses) = self.read(&g.titled, statement, acc)?;
                (ItemKind::Sheet { title, fields: self.fields(statement, acc) }, clauses)
            }
            "library" => {
                let (title, clauses) = self.read(&g.titled, statement, acc)?;
                (ItemKind::Library { title, fields: self.fields(statement, acc) }, clauses)
            }
            "use" => {
                let (path, clauses) = self.read(&g.using, statement, acc)?;
                lone(self, acc);
                (ItemKind::Use { path }, clauses)
            }
            "given" => {
                let (field, clauses) = self.read(&g.keyword_field, statement, acc)?;
                let (name, kind, value) = self.named_definition(field, statement, acc)?;
                (ItemKind::Given { name, kind, value }, clauses)
            }
            "assume" => {
                let ((text, status), clauses) = self.read(&g.assume, statement, acc)?;
                lone(self, acc);
                (ItemKind::Assume { text, status }, clauses)
            }
            "material" => {
                let (name, clauses) = self.read(&g.named, statement, acc)?;
                (ItemKind::Material { name, fields: self.fields(statement, acc) }, clauses)
            }
            "body" => {
                let ((name, shape), clauses) = self.read(&g.assigned, statement, acc)?;
                (ItemKind::Body { name, shape, fields: self.fields(statement, acc) }, clauses)
            }
            "rotor" => {
                let ((name, axis), clauses) = self.read(&g.rotor, statement, acc)?;
                (ItemKind::Rotor { name, axis, placements: self.placements(statement, acc) }, clauses)
            }
            "load" => {
                let (name, clauses) = self.read(&g.named, statement, acc)?;
                let (fields, path) = self.load_fields(statement, acc);
                (ItemKind::Load { name, fields, path }, clauses)
            }
            "spring" => {
                let ((name, on), clauses) = self.read(&g.acting, statement, acc)?;
                (ItemKind::Spring { name, on, fields: self.fields(statement, acc) }, clauses)
            }
            "brake" => {
                let ((name, on), clauses) = self.read(&g.acting, statement, acc)?;
                (ItemKind::Brake { name, on, fields: self.fields(statement, acc) }, clauses)
            }
            "axis" => {
                let ((name, through, along), clauses) = self.read(&g.axis, statement, acc)?;
                lone(self, acc);
                (ItemKind::Axis { name, through, along }, clauses)
            }
            "unit" => {
                let ((name, value), clauses) = self.read(&g.unit, statement, acc)?;
                lone(self, acc);
                (ItemKind::Unit { name, value }, clauses)
            }
            "train" => {
                let (name, clauses) = self.read(&g.named, statement, acc)?;
                (ItemKind::Train { name, links: self.links(statement, acc) }, clauses)
            }
            "clutch" => {
                let ((name, sides), clauses) = self.read(&g.clutch, statement, acc)?;
                let (from, to) = sides.unzip();
                (ItemKind::Clutch { name, from, to, fields: self.fields(statement, acc) }, clauses)
            }
            "ledger" => {
                let (head, clauses) = self.read(&g.ledger, statement, acc)?;
                let lines = self.ledger_lines(statement, acc);
                (ItemKind::Ledger { name: head.name, train: head.train, under: head.under, lines }, clauses)
            }
            "wanted" => {
                let (wanted, clauses) = self.read(&g.wanted, statement, acc)?;
                lone(self, acc);
                (ItemKind::Wanted(split_equations(wanted)), clauses)
            }
            "limit" => {
                let ((every, condition), clauses) = self.read(&g.limit, statement, acc)?;
                lone(self, acc);
                (ItemKind::Limit { every, condition }, clauses)
            }
            "case" => {
                let (name, clauses) = self.read(&g.named, statement, acc)?;
                (ItemKind::Case { name, overrides: self.fields(statement, acc) }, clauses)
            }
            "confirm" => {
                let ((value, agrees), clauses) = self.read(&g.confirm, statement, acc)?;
                lone(self, acc);
                (ItemKind::Confirm { value, agrees }, clauses)
            }
            "shape" => self.shape(statement, acc)?,
            "formula" => self.formula(statement, acc)?,
            "component" => self.component(statement, acc)?,
            "part" => {
                let ((name, component), clauses) = self.read(&g.assigned, statement, acc)?;
                (ItemKind::Part { name, component, fields: self.fields(statement, acc) }, clauses)
            }
            _ => self.later_item(keyword, statement, acc),
        })
    }

    /// A definition whose left side must be one word.
    fn named_definition(
        &self,
        field: FieldHead,
        statement: &Statement,
        acc: &mut Faults,
    ) -> Option<(Name, Option<Name>, Definition)> {
        let value = self
            .definition(field.definer, statement, acc)
            .unwrap_or(Definition::Value(Expr { kind: ExprKind::Missing, span: Span::at(field.path.span.end) }));
        let name = single_name(field.path, acc)?;
        Some((name, field.kind, value))
    }

    /// The right side of a definition, its `choose` read from the block.
    pub(super) fn definition(&self, definer: Definer, statement: &Statement, acc: &mut Faults) -> Option<Definition> {
        match definer {
            Definer::Choose => Some(Definition::Choose(self.choose(statement, acc))),
            Definer::Value(expr) => {
                self.refuse_block(statement, acc);
                Some(Definition::Value(expr))
            }
            Definer::None => {
                self.refuse_block(statement, acc);
                None
            }
        }
    }

    fn later_item(&self, keyword: &Mark, statement: &Statement, acc: &mut Faults) -> (ItemKind, Clauses) {
        let head = self.head(statement);
        let name = head.get(1).filter(|mark| mark.token == Token::Word).map(name_of);
        let after = head.get(if name.is_some() { 2 } else { 1 }..).unwrap_or(&[]);
        if name.is_none() {
            let span = Span::at(keyword.span.end);
            acc.push(Diagnostic::new(
                codes::SYNTAX_ERROR,
                span,
                format!("expected a name after {}", describe(keyword)),
            ));
        }
        let mut lines = Vec::new();
        let mut clauses = Clauses::default();
        if !after.is_empty() {
            let mut line = self.later_line(None, after, acc);
            clauses = std::mem::take(&mut line.clauses);
            lines.push(line);
        }
        self.later_lines(statement, &mut lines, acc);
        (ItemKind::Later(Later { keyword: name_of(keyword), name, lines }), clauses)
    }
}

fn single_name(path: Path, acc: &mut Faults) -> Option<Name> {
    let span = path.span;
    let mut segments = path.segments.into_iter();
    match (segments.next(), segments.next()) {
        (Some(only), None) if only.index.is_none() => Some(only.name),
        (first, _) => {
            let message = "a name is one word here, without dots or brackets";
            acc.push(
                Diagnostic::new(codes::SYNTAX_ERROR, span, message)
                    .with_help("fields of other items are changed in a `case`"),
            );
            first.map(|segment| segment.name)
        }
    }
}

/// Equations joined by `and` are equations of their own.
pub(super) fn split_equations(mut wanted: Wanted) -> Wanted {
    let mut equations = Vec::new();
    let mut rest: Vec<Expr> = std::mem::take(&mut wanted.equations).into_iter().rev().collect();
    while let Some(expr) = rest.pop() {
        match expr.kind {
            ExprKind::Binary { op: BinaryOp::And, left, right, .. } => {
                rest.push(*right);
                rest.push(*left);
            }
            _ => equations.push(expr),
        }
    }
    wanted.equations = equations;
    wanted
}

/// A line of the top level that begins like nothing known.
fn unknown_item(first: &Mark, second: Option<&Mark>) -> Diagnostic<Span> {
    const HELP: &str = "a line begins with an item's keyword (`given`, `body`, `rotor`, `train`, `ledger` ...), with `name =`, with `|` for prose or with `#` for a remark";
    if first.token != Token::Word {
        let message = format!("no item begins with {}", describe(first));
        return Diagnostic::new(codes::UNKNOWN_ITEM, first.span, message).with_help(HELP);
    }
    if let Some((old, new)) = words::RENAMED.iter().find(|(old, _)| *old == first.text) {
        return Diagnostic::new(codes::OLD_SPELLING, first.span, format!("`{old}` is written `{new}`")).with_fix(
            format!("write `{new}`"),
            first.span,
            *new,
        );
    }
    let goes_on = second.is_some_and(|mark| matches!(mark.token, Token::Word | Token::Str | Token::UnterminatedStr));
    let fault = Diagnostic::new(codes::UNKNOWN_ITEM, first.span, format!("no item begins with `{}`", first.text));
    match words::nearest(first.text, words::ITEMS) {
        Some(near) if goes_on => {
            fault.with_help(format!("is `{near}` meant?")).with_fix(format!("write `{near}`"), first.span, near)
        }
        _ => fault.with_help(HELP),
    }
}

/// The marks behind the first.
pub(super) fn behind<'s>(marks: Marks<'s>) -> Marks<'s> {
    marks.get(1..).unwrap_or(&[])
}
