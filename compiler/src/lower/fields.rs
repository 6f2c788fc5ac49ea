//! The fields of a construct: each taken once, the rest reported.

use super::value::{Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use crate::nearest::did_you_mean;
use crate::results::{Group, Shown};
use pintle_syntax::ast::{Clauses, Definition, Expr, ExprKind, Field};
use pintle_text::{Diagnostic, ItemId, Place};
use smol_str::SmolStr;

/// Fields of one construct, with which of them were read.
pub(super) struct Fields<'f> {
    /// Full name of the construct, the front of `NAME.field`.
    pub owner: SmolStr,
    /// Name of the construct, for "missing" reports.
    pub place: Place,
    fields: &'f [Field],
    item: ItemId,
    taken: Vec<SmolStr>,
    /// Counters of a repetition round the construct.
    pub locals: Vec<(SmolStr, Value)>,
    /// `cite` of the construct, for fields without one.
    clauses: &'f Clauses,
}

impl<'f> Fields<'f> {
    pub(super) fn new(
        owner: impl Into<SmolStr>,
        env: &Env,
        place: Place,
        fields: &'f [Field],
        clauses: &'f Clauses,
    ) -> Self {
        Fields { owner: owner.into(), place, fields, item: env.item, taken: Vec::new(), locals: Vec::new(), clauses }
    }

    /// Names of all fields that stand there.
    pub(super) fn names(&self) -> impl Iterator<Item = &str> {
        self.fields.iter().filter_map(|field| field.path.segments.first()).map(|segment| segment.name.text.as_str())
    }

    /// Whether a field of that name stands there.
    pub(super) fn has(&self, name: &str) -> bool {
        self.fields.iter().any(|field| is_named(field, name))
    }
}

fn is_named(field: &Field, name: &str) -> bool {
    matches!(field.path.segments.as_slice(), [segment] if segment.name.text == name && segment.index.is_none())
}

impl<'s> Lowerer<'s, '_> {
    /// Takes a field: a case's, else the construct's own.
    pub(super) fn take<'f>(&mut self, fields: &mut Fields<'f>, name: &str) -> Option<(Env, &'f Field)>
    where
        's: 'f,
    {
        fields.taken.push(name.into());
        let own = fields.fields.iter().find(|field| is_named(field, name)).map(|field| (fields.item, field));
        let (item, field) = if self.overrides.fields.is_empty() {
            own?
        } else {
            self.overridden(&format!("{}.{name}", fields.owner), own)?
        };
        let mut env = self.env(item);
        env.locals.clone_from(&fields.locals);
        Some((env, field))
    }

    /// A field's expression; a field without one was reported by the parser.
    pub(super) fn take_expr<'f>(&mut self, fields: &mut Fields<'f>, name: &str) -> Option<(Env, &'f Expr)>
    where
        's: 'f,
    {
        let (env, field) = self.take(fields, name)?;
        match &field.value {
            Some(Definition::Value(expr)) => Some((env, expr)),
            Some(Definition::Choose(choose)) => {
                self.report(Diagnostic::new(
                    codes::NOT_A_QUANTITY,
                    env.place(choose.span),
                    "this field takes a single value",
                ));
                None
            }
            None => None,
        }
    }

    /// A field as one of some words: `sense = opposite`.
    pub(super) fn take_word<'f>(
        &mut self,
        fields: &mut Fields<'f>,
        name: &str,
        words: &[&'static str],
    ) -> Option<&'static str>
    where
        's: 'f,
    {
        let (env, expr) = self.take_expr(fields, name)?;
        if let ExprKind::Path(path) = &expr.kind
            && let [segment] = path.segments.as_slice()
            && let Some(word) = words.iter().find(|word| **word == segment.name.text)
        {
            return Some(word);
        }
        self.report(
            Diagnostic::new(
                codes::UNKNOWN_FIELD,
                env.place(expr.span),
                format!("`{name}` takes one of the words {}", words.join(", ")),
            )
            .with_note("not one of them"),
        );
        None
    }

    /// A field as a quantity of a kind, named `OWNER.field`.
    pub(super) fn take_number<'f>(
        &mut self,
        fields: &mut Fields<'f>,
        name: &str,
        kind: &str,
        group: Group,
    ) -> Option<Typed>
    where
        's: 'f,
    {
        let (mut env, field) = self.take(fields, name)?;
        self.field_quantity(&mut env, fields, field, name, Some(kind), group)
    }

    /// The same for a field already taken.
    pub(super) fn field_quantity<'f>(
        &mut self,
        env: &mut Env,
        fields: &Fields<'f>,
        field: &'f Field,
        name: &str,
        kind: Option<&str>,
        group: Group,
    ) -> Option<Typed> {
        let definition = field.value.as_ref()?;
        let full = self.dotted(&[&fields.owner, name]);
        let source = self.source(&field.clauses).or_else(|| self.source(fields.clauses)).unwrap_or_default();
        let place = env.place(field.span);
        let unit = self.display(env, &field.clauses);
        let written = super::literals::literal_of(definition);
        let (value, written_unit, group) = match written {
            Some((negative, literal)) => {
                let read = self.read_literal(env, literal, negative)?;
                let group = if read.tolerance.is_some() { Group::Field } else { group };
                let typed = self.input_or_literal(&read, place);
                (typed, read.unit, group)
            }
            None => {
                let value = self.definition(env, definition);
                (self.as_number(value, place)?, None, group)
            }
        };
        let typed = match kind {
            Some(kind) => self.expect(&value, kind, &format!("`{full}`"))?,
            None => value,
        };
        let unit = unit.or(written_unit).filter(|unit| self.unit_fits(unit, &typed.ty));
        Some(self.quantity(full, group, Shown::OnRequest, typed.ty, typed.node, unit, place, source))
    }

    /// A field that must be there.
    pub(super) fn need_number<'f>(
        &mut self,
        fields: &mut Fields<'f>,
        name: &str,
        kind: &str,
        group: Group,
    ) -> Option<Typed>
    where
        's: 'f,
    {
        let there = fields.has(name) || self.overrides.fields.contains_key(format!("{}.{name}", fields.owner).as_str());
        let typed = self.take_number(fields, name, kind, group);
        if !there {
            self.missing(fields, name, kind);
        }
        typed
    }

    /// Reports a field that is not there.
    pub(super) fn missing(&mut self, fields: &Fields<'_>, name: &str, kind: &str) {
        self.report(
            Diagnostic::new(
                codes::MISSING_FIELD,
                fields.place,
                format!("`{}` does not state its `{name}`", fields.owner),
            )
            .with_help(format!("add `{name} = ...` ({})", kind.replace('_', " "))),
        );
    }

    /// Reports fields that nobody read.
    pub(super) fn finish(&mut self, fields: Fields<'_>, env: &Env, known: &[&str]) {
        let mut seen: Vec<(SmolStr, Place)> = Vec::new();
        for field in fields.fields {
            let name: SmolStr = match field.path.segments.as_slice() {
                [segment] => segment.name.text.clone(),
                _ => self.sheet.sources.text(env.place(field.path.span)).into(),
            };
            let place = env.place(field.path.span);
            if let Some((_, earlier)) = seen.iter().find(|(known, _)| *known == name) {
                let earlier = *earlier;
                self.report(
                    Diagnostic::new(codes::CONFLICTING_FIELDS, place, format!("`{name}` is stated twice"))
                        .with_label(earlier, "first here")
                        .with_help("keep one of them"),
                );
                continue;
            }
            seen.push((name.clone(), place));
            if fields.taken.contains(&name) {
                continue;
            }
            let choices = || fields.taken.iter().map(|it| it.as_str()).chain(known.iter().copied());
            let mut diagnostic =
                Diagnostic::new(codes::UNKNOWN_FIELD, place, format!("`{}` has no field `{name}`", fields.owner));
            if let Some(hint) = did_you_mean(&name, choices()) {
                diagnostic = diagnostic.with_help(hint);
                if let Some(first) = crate::nearest::nearest(&name, choices()).first() {
                    diagnostic = diagnostic.with_fix(format!("write `{first}`"), place, *first);
                }
            } else {
                let list: Vec<&str> = choices().collect();
                diagnostic = diagnostic.with_help(format!("its fields are {}", list.join(", ")));
            }
            self.report(diagnostic);
        }
    }

    /// A whole-number field with a default.
    pub(super) fn take_count<'f>(&mut self, fields: &mut Fields<'f>, name: &str, default: i64) -> Option<i64>
    where
        's: 'f,
    {
        match self.take_expr(fields, name) {
            None => Some(default),
            Some((mut env, expr)) => {
                let count = self.whole_number(&mut env, expr)?;
                if count < 1 {
                    self.report(Diagnostic::new(
                        codes::REQUIREMENT_BROKEN,
                        env.place(expr.span),
                        format!("`{name}` is {count}; it must be at least 1"),
                    ));
                    return None;
                }
                Some(count)
            }
        }
    }

    /// `value` as a list or None after a report.
    pub(super) fn as_list(&mut self, value: Value, place: Place, what: &str) -> Option<Vec<Value>> {
        match value {
            Value::List(items, _) => Some(items),
            Value::Failed => None,
            other => {
                self.report(Diagnostic::new(
                    codes::NOT_A_QUANTITY,
                    place,
                    format!("{what} is needed here, but this is {}", other.what()),
                ));
                None
            }
        }
    }
}
