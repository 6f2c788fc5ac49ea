//! The names that an item mentions, leaving out those it defines inside.

use pintle_syntax::ast::*;
use pintle_text::Span;

/// Calls `f` with each first word of a path in `item` that may be another
/// item's name.
pub fn references(item: &Item, f: &mut dyn FnMut(&str, Span)) {
    let mut locals: Vec<&str> = Vec::new();
    collect_locals(&item.kind, &mut locals);
    let mut walker = Walker { locals, f };
    walker.item(item);
}

fn collect_locals<'a>(kind: &'a ItemKind, acc: &mut Vec<&'a str>) {
    let fields = |fields: &'a [Field], acc: &mut Vec<&'a str>| {
        acc.extend(fields.iter().filter_map(|field| first_word(&field.path)));
    };
    match kind {
        ItemKind::Shape { parameters, members, .. } => {
            acc.extend(parameters.iter().map(|it| it.name.text.as_str()));
            acc.push("mass");
            fields(members, acc);
        }
        ItemKind::Formula { parameters, locals, .. } => {
            acc.extend(parameters.iter().map(|it| it.name.text.as_str()));
            fields(locals, acc);
        }
        ItemKind::Component { parameters, items, .. } => {
            acc.extend(parameters.iter().map(|it| it.name.text.as_str()));
            acc.extend(items.iter().filter_map(|item| item.name()).map(|name| name.text.as_str()));
        }
        ItemKind::Ledger { lines, .. } => {
            for line in lines {
                match &line.kind {
                    LedgerLineKind::Gain(entry) | LedgerLineKind::Lose(entry) => {
                        acc.extend(first_word(&entry.field.path))
                    }
                    LedgerLineKind::Local(field) => acc.extend(first_word(&field.path)),
                    LedgerLineKind::Wanted(wanted) if wanted.path.segments.len() == 1 => {
                        acc.extend(first_word(&wanted.path));
                    }
                    _ => {}
                }
            }
        }
        _ => {}
    }
}

fn first_word(path: &Path) -> Option<&str> {
    path.segments.first().map(|segment| segment.name.text.as_str())
}

struct Walker<'a, 'f> {
    locals: Vec<&'a str>,
    f: &'f mut dyn FnMut(&str, Span),
}

impl Walker<'_, '_> {
    fn path(&mut self, path: &Path) {
        if let Some(segment) = path.segments.first() {
            self.name(&segment.name);
        }
        for segment in &path.segments {
            if let Some(index) = &segment.index {
                self.expr(index);
            }
        }
    }

    fn name(&mut self, name: &Name) {
        if !self.locals.contains(&name.text.as_str()) {
            (self.f)(&name.text, name.span);
        }
    }

    /// Nesting is bounded by the parser, so recursion is too.
    fn expr(&mut self, expr: &Expr) {
        match &expr.kind {
            ExprKind::Number(literal) => self.literal(literal),
            ExprKind::Text(_) | ExprKind::Missing => {}
            ExprKind::Path(path) => self.path(path),
            ExprKind::Call { function, arguments } => {
                self.path(function);
                for argument in arguments {
                    self.expr(&argument.value);
                }
            }
            ExprKind::Unary { operand, .. } => self.expr(operand),
            ExprKind::Binary { left, right, .. } => {
                self.expr(left);
                self.expr(right);
            }
            ExprKind::About { value, axis } => {
                self.expr(value);
                self.name(axis);
            }
            ExprKind::Point(items) | ExprKind::List(items) => {
                for item in items {
                    self.expr(item);
                }
            }
            ExprKind::Comprehension { body, repeat } => {
                self.repeat(repeat);
                self.expr(body);
            }
        }
    }

    fn literal(&mut self, literal: &Literal) {
        match &literal.tolerance {
            Some(Tolerance::Within(range)) => self.range(range),
            Some(Tolerance::Symmetric(inner) | Tolerance::Standard(inner)) => self.literal(inner),
            _ => {}
        }
        // A unit may be one that the sheet declares: `2 skip_load`.
        if let Some(unit) = &literal.unit {
            for word in unit.text.split(|c: char| !(c.is_alphanumeric() || c == '_')) {
                if word.chars().next().is_some_and(char::is_alphabetic) {
                    (self.f)(word, unit.span);
                }
            }
        }
    }

    fn range(&mut self, range: &Range) {
        self.expr(&range.low);
        self.expr(&range.high);
    }

    fn repeat(&mut self, repeat: &Repeat) {
        self.expr(&repeat.from);
        self.expr(&repeat.to);
    }

    fn definition(&mut self, definition: &Definition) {
        match definition {
            Definition::Value(expr) => self.expr(expr),
            Definition::Choose(choose) => {
                for arm in &choose.arms {
                    self.expr(&arm.value);
                    if let Some(condition) = &arm.condition {
                        self.expr(condition);
                    }
                }
            }
        }
    }

    fn fields(&mut self, fields: &[Field]) {
        for field in fields {
            self.field(field);
        }
    }

    fn field(&mut self, field: &Field) {
        if let Some(value) = &field.value {
            self.definition(value);
        }
        self.clauses(&field.clauses);
    }

    fn clauses(&mut self, clauses: &Clauses) {
        if let Some(repeat) = &clauses.repeat {
            self.repeat(repeat);
        }
    }

    fn parameters(&mut self, parameters: &[Parameter]) {
        for parameter in parameters {
            if let Some(default) = &parameter.default {
                self.expr(default);
            }
        }
    }

    fn state(&mut self, state: &StateSpec) {
        match state {
            StateSpec::AtRest(_) => {}
            StateSpec::Speed { path, value } => {
                self.path(path);
                self.expr(value);
            }
            StateSpec::From(path) => self.path(path),
        }
    }

    fn wanted(&mut self, wanted: &Wanted) {
        // The equations are read after all definitions, so they make no circle.
        if let Some(range) = &wanted.range {
            self.range(range);
        }
    }

    fn item(&mut self, item: &Item) {
        self.clauses(&item.clauses);
        match &item.kind {
            ItemKind::Given { value, .. } | ItemKind::Derived { value, .. } => self.definition(value),
            ItemKind::Material { fields, .. } => self.fields(fields),
            ItemKind::Body { shape, fields, .. } => {
                self.path(shape);
                self.fields(fields);
            }
            ItemKind::Rotor { axis, placements, .. } => {
                if let Some(axis) = axis {
                    self.name(axis);
                }
                for placement in placements {
                    self.path(&placement.part);
                    if let Some(at) = &placement.at {
                        self.expr(at);
                    }
                    self.fields(&placement.fields);
                    self.clauses(&placement.clauses);
                }
            }
            ItemKind::Load { fields, path, .. } => {
                self.fields(fields);
                if let Some(LoadPath::Incline(slope)) = path {
                    self.expr(slope);
                }
            }
            ItemKind::Spring { on, fields, .. } | ItemKind::Brake { on, fields, .. } => {
                if let Some(on) = on {
                    self.path(on);
                }
                self.fields(fields);
            }
            ItemKind::Axis { through, along, .. } => {
                self.expr(through);
                self.expr(along);
            }
            ItemKind::Unit { value, .. } => self.expr(value),
            ItemKind::Train { links, .. } => {
                for link in links {
                    self.path(&link.from);
                    self.path(&link.to);
                    self.fields(&link.fields);
                }
            }
            ItemKind::Clutch { from, to, fields, .. } => {
                for path in [from, to].into_iter().flatten() {
                    self.path(path);
                }
                self.fields(fields);
            }
            ItemKind::Ledger { train, lines, .. } => {
                if let Some(train) = train {
                    self.name(train);
                }
                for line in lines {
                    self.ledger_line(&line.kind);
                }
            }
            ItemKind::Wanted(wanted) => self.wanted(wanted),
            ItemKind::Shape { parameters, requirements, members, .. } => {
                self.parameters(parameters);
                for requirement in requirements {
                    self.expr(requirement);
                }
                self.fields(members);
            }
            ItemKind::Formula { parameters, value, requirements, locals, .. } => {
                self.parameters(parameters);
                if let Some(value) = value {
                    self.definition(value);
                }
                for requirement in requirements {
                    self.expr(requirement);
                }
                self.fields(locals);
            }
            ItemKind::Component { parameters, items, .. } => {
                self.parameters(parameters);
                for item in items {
                    self.item(item);
                }
            }
            ItemKind::Part { component, fields, .. } => {
                self.path(component);
                self.fields(fields);
            }
            // Read after all definitions: nothing can depend on them.
            ItemKind::Limit { .. }
            | ItemKind::Confirm { .. }
            | ItemKind::Case { .. }
            | ItemKind::Later(_)
            | ItemKind::Sheet { .. }
            | ItemKind::Library { .. }
            | ItemKind::Use { .. }
            | ItemKind::Prose { .. }
            | ItemKind::Assume { .. }
            | ItemKind::Broken { .. } => {}
        }
    }

    fn ledger_line(&mut self, line: &LedgerLineKind) {
        match line {
            LedgerLineKind::Start(state) | LedgerLineKind::End(state) => self.state(state),
            LedgerLineKind::Travel { member, distance, .. } => {
                self.path(member);
                self.expr(distance);
            }
            LedgerLineKind::Spring { spring, from, to } => {
                self.path(spring);
                self.expr(from);
                self.expr(to);
            }
            LedgerLineKind::Gain(entry) | LedgerLineKind::Lose(entry) => {
                if let Some(at) = &entry.at {
                    self.path(at);
                }
                self.field(&entry.field);
            }
            LedgerLineKind::Wanted(wanted) => self.wanted(wanted),
            LedgerLineKind::Limit { .. } => {}
            LedgerLineKind::Local(field) => self.field(field),
        }
    }
}
