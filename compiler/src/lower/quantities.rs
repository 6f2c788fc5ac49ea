//! Givens, derived quantities, unknowns, and the table they stand in.

use super::literals::{Read, SizeRead, literal_of};
use super::value::{Typed, Value};
use super::{Env, Equation, Lowerer};
use crate::codes;
use crate::model::{Input, InputTolerance, InputValue, Quantity};
use crate::results::{Group, Shown};
use pintle_graph::{NodeId, Op, QuantityId};
use pintle_syntax::ast::{
    BinaryOp, Cite, Clauses, Definition, Expr, ExprKind, Item, Literal, Name, Range, Repeat, Tolerance, Wanted,
};
use pintle_text::{Diagnostic, Place};
use pintle_units::{Type, Unit};
use smol_str::SmolStr;
use std::sync::Arc;

impl<'s> Lowerer<'s, '_> {
    /// Enters a quantity in the table and names its node.
    #[allow(clippy::too_many_arguments)]
    pub(super) fn quantity(
        &mut self,
        name: SmolStr,
        group: Group,
        shown: Shown,
        ty: Type,
        node: NodeId,
        unit: Option<Arc<Unit>>,
        place: Place,
        source: SmolStr,
    ) -> Typed {
        let id = QuantityId(self.out.model.quantities.len() as u32);
        let of = node;
        let node = self.out.model.graph.add(Op::Quantity(id, node));
        if let Op::Input(input) = self.out.model.graph.op(of)
            && let Some(input) = self.out.model.inputs.get_mut(input.0 as usize)
        {
            input.quantity.get_or_insert(id);
        }
        let unit = unit.unwrap_or_else(|| pintle_units::display_unit(&ty));
        self.out.model.quantities.push(Quantity { name, group, shown, ty, node, unit, place, source });
        Typed { node, ty, place }
    }

    /// The parts of a name with dots between them. Every member of every thing has such a name,
    /// which makes the formatting machinery worth avoiding.
    pub(super) fn dotted(&mut self, parts: &[&str]) -> SmolStr {
        self.scratch.clear();
        for (at, part) in parts.iter().enumerate() {
            if at > 0 {
                self.scratch.push('.');
            }
            self.scratch.push_str(part);
        }
        SmolStr::new(&self.scratch)
    }

    /// A quantity of a built-in formula, with its kind.
    pub(super) fn built_in(
        &mut self,
        name: &[&str],
        group: Group,
        shown: Shown,
        kind: &str,
        node: NodeId,
        place: Place,
    ) -> Value {
        let ty = self.kind_type(kind);
        let name = self.dotted(name);
        Value::Number(self.quantity(name, group, shown, ty, node, None, place, SmolStr::default()))
    }

    /// Its source as cited, in words.
    pub(super) fn source(&self, clauses: &Clauses) -> Option<SmolStr> {
        match clauses.cite.as_ref()? {
            Cite::Source(text) => Some(text.text.as_str().into()),
            Cite::Word(name) => Some(name.text.replace('_', " ").into()),
        }
    }

    /// The unit behind `as`.
    pub(super) fn display(&mut self, env: &Env, clauses: &Clauses) -> Option<Arc<Unit>> {
        let text = clauses.display.as_ref()?;
        self.unit(env, text)
    }

    /// The `as` unit if it fits the type; a report if not.
    fn checked_display(&mut self, env: &Env, clauses: &Clauses, typed: &Typed) -> Option<Arc<Unit>> {
        let unit = self.display(env, clauses)?;
        if self.unit_fits(&unit, &typed.ty) {
            return Some(unit);
        }
        let span = clauses.display.as_ref()?.span;
        self.report(
            Diagnostic::new(
                codes::UNIT_MISMATCH,
                env.place(span),
                format!("cannot show {} in {}", typed.ty.words(), unit.text),
            )
            .with_note(format!("{} is a unit of {}", unit.text, Type::of_unit(&unit).words()))
            .with_label(typed.place, format!("this is {}", typed.ty.words())),
        );
        None
    }

    pub(super) fn given(
        &mut self,
        env: &mut Env,
        item: &Item,
        name: &Name,
        kind: Option<&Name>,
        value: &Definition,
    ) -> Value {
        let place = env.place(name.span);
        let source = self.source(&item.clauses).unwrap_or_default();
        let (mut value_env, over) = self.overridden_value(&name.text, env, value);
        let (typed, unit) = match literal_of(over) {
            Some((negative, literal)) => {
                let Some(mut read) = self.read_literal(&mut value_env, literal, negative) else { return Value::Failed };
                if read.tolerance.is_none() && !std::ptr::eq(over, value) {
                    read.tolerance = self.kept_tolerance(env, &value_env, value, &read, literal);
                }
                let node = self.new_input(&read, place).1;
                (Typed { node, ty: read.ty, place }, read.unit)
            }
            None => {
                let value = self.definition(&mut value_env, over);
                let Some(typed) = self.as_number(value, place) else { return Value::Failed };
                (typed, None)
            }
        };
        let Some(typed) = self.declared(&value_env, typed, kind, name) else { return Value::Failed };
        if kind.is_none() {
            self.hint_open_kind(&typed, name, place);
        }
        let unit = self.checked_display(env, &item.clauses, &typed).or(unit);
        let ty = self.named_type(typed.ty);
        Value::Number(self.quantity(
            name.text.clone(),
            Group::Given,
            Shown::Always,
            ty,
            typed.node,
            unit,
            place,
            source,
        ))
    }

    /// A case changes the value and keeps the tolerance: percent stays percent
    /// only where the case says so anew, so the deviations stay as they are.
    /// An ISO 286 class stays the class, with the deviations of the new size.
    fn kept_tolerance(
        &mut self,
        env: &mut Env,
        case_env: &Env,
        original: &Definition,
        read: &Read,
        size: &Literal,
    ) -> Option<InputTolerance> {
        let (negative, literal) = literal_of(original)?;
        if let Some(Tolerance::Class(class)) = &literal.tolerance {
            let sized = SizeRead {
                si: read.si,
                unit: read.unit.as_deref(),
                literal: size,
                place: case_env.place(size.number_span),
            };
            return self
                .class_limits(env.place(class.span), &class.text, &sized)
                .map(|(low, high)| InputTolerance::Limits { low, high });
        }
        let old = self.read_literal(env, literal, negative)?;
        Some(match old.tolerance? {
            InputTolerance::Limits { low, high } => {
                InputTolerance::Limits { low: read.si - (old.si - low), high: read.si + (high - old.si) }
            }
            standard => standard,
        })
    }

    /// The value checked against a declared kind.
    fn declared(&mut self, env: &Env, typed: Typed, kind: Option<&Name>, name: &Name) -> Option<Typed> {
        match kind {
            Some(kind) => {
                let kind = self.kind_named(env, kind)?;
                self.expect_kind(&typed, kind, &format!("`{}`", name.text), env.place(name.span))
            }
            None => Some(typed),
        }
    }

    pub(super) fn derived(
        &mut self,
        env: &mut Env,
        item: &Item,
        name: &Name,
        kind: Option<&Name>,
        value: &Definition,
    ) -> Value {
        if let Some(repeat) = &item.clauses.repeat {
            return self.series(env, repeat, name, |this, env, name| this.derived_one(env, item, name, kind, value));
        }
        self.derived_one(env, item, name, kind, value)
    }

    /// `NAME[k]` for each value of a counter.
    pub(super) fn series(
        &mut self,
        env: &mut Env,
        repeat: &Repeat,
        name: &Name,
        mut one: impl FnMut(&mut Self, &mut Env, &Name) -> Value,
    ) -> Value {
        let first = self.whole_number(env, &repeat.from).unwrap_or(1);
        let mut k = first;
        let items = self.repeated(env, repeat, |this, env| {
            let name = Name { text: format!("{}[{k}]", name.text).into(), span: name.span };
            k += 1;
            one(this, env, &name)
        });
        Value::Series { first, items }
    }

    fn derived_one(
        &mut self,
        env: &mut Env,
        item: &Item,
        name: &Name,
        kind: Option<&Name>,
        value: &Definition,
    ) -> Value {
        let place = env.place(name.span);
        let source = self.source(&item.clauses).unwrap_or_default();
        let (mut value_env, over) = self.overridden_value(&name.text, env, value);
        value_env.locals.clone_from(&env.locals);
        let value = self.definition(&mut value_env, over);
        let typed = match value {
            Value::Number(typed) => typed,
            // An alias of a thing, a point, a condition: no quantity of its own.
            other => return other,
        };
        let Some(typed) = self.declared(&value_env, typed, kind, name) else { return Value::Failed };
        if kind.is_none() {
            self.warn(&typed.ty.warnings(), typed.place);
        }
        let written = match literal_of(over) {
            Some((_, literal)) => literal.unit.as_ref().and_then(|text| self.unit(&value_env, text)),
            None => None,
        };
        let unit = self.checked_display(env, &item.clauses, &typed).or(written);
        let ty = self.named_type(typed.ty);
        Value::Number(self.quantity(
            name.text.clone(),
            Group::Derived,
            Shown::Always,
            ty,
            typed.node,
            unit,
            place,
            source,
        ))
    }

    /// `wanted x : kind within a .. b where ...` in the sheet: the unknown itself.
    pub(super) fn wanted_item(&mut self, env: &mut Env, item: &Item, wanted: &Wanted) -> Value {
        let [segment] = wanted.path.segments.as_slice() else {
            self.report(
                Diagnostic::new(
                    codes::STATE_WITHOUT_PROBLEM,
                    env.place(wanted.path.span),
                    "a state is wanted outside of its problem",
                )
                .with_help("put this line into the `ledger` that it belongs to; a `wanted` line of the sheet names a new unknown"),
            );
            return Value::Failed;
        };
        let name = segment.name.clone();
        self.unknown(env, &name.text, &name, wanted, &item.clauses, Group::Wanted)
    }

    /// A new unknown under a full name.
    pub(super) fn unknown(
        &mut self,
        env: &mut Env,
        full: &str,
        name: &Name,
        wanted: &Wanted,
        clauses: &Clauses,
        group: Group,
    ) -> Value {
        let place = env.place(name.span);
        let kind = match &wanted.kind {
            Some(kind) => match self.kind_named(env, kind) {
                Some(kind) => Some(kind),
                None => return Value::Failed,
            },
            None => None,
        };
        let range = match &wanted.range {
            Some(range) => match self.range(env, range) {
                Some(range) => Some(range),
                None => return Value::Failed,
            },
            None => None,
        };
        let ty = match (kind, &range) {
            (Some(kind), Some((typed, ..))) => match self.expect_kind(typed, kind, &format!("`{full}`"), place) {
                Some(typed) => typed.ty,
                None => return Value::Failed,
            },
            (Some(kind), None) => Type::of_kind(kind),
            (None, Some((typed, ..))) => typed.ty,
            (None, None) => {
                self.report(
                    Diagnostic::new(codes::MISSING_FIELD, place, format!("what kind of quantity is `{full}`?"))
                        .with_help("write `wanted NAME : KIND within LOW .. HIGH`"),
                );
                return Value::Failed;
            }
        };
        let unit = self.display(env, clauses).or_else(|| range.as_ref().and_then(|(_, unit, ..)| unit.clone()));
        let declared = range.map(|(_, _, low, high)| (low, high));
        Value::Number(self.new_unknown(full, ty, declared, unit, place, group))
    }

    /// Enters an unknown: an input of the graph with a range.
    pub(super) fn new_unknown(
        &mut self,
        full: &str,
        ty: Type,
        declared: Option<(f64, f64)>,
        unit: Option<Arc<Unit>>,
        place: Place,
        group: Group,
    ) -> Typed {
        let (input, node) = self.out.model.graph.input();
        let (low, high) = declared.unwrap_or_else(|| super::typing::sensible_range(&ty));
        self.out.model.inputs.push(Input {
            quantity: None,
            text: full.into(),
            place,
            value: InputValue::Wanted { low, high, declared: declared.is_some() },
        });
        if declared.is_none() {
            let unit = pintle_units::display_unit(&ty);
            let show = |si: f64| format!("{} {}", super::space::plain(unit.from_si(si)), unit.text);
            self.report(
                Diagnostic::new(
                    codes::RANGE_INFERRED,
                    place,
                    format!("`{full}` has no range; {} .. {} is searched", show(low), show(high)),
                )
                .with_help("declare one: `within LOW .. HIGH`"),
            );
        }
        let ty = self.named_type(ty);
        let typed = self.quantity(full.into(), group, Shown::Always, ty, node, unit, place, SmolStr::default());
        if let Some(id) = self.out.model.inputs.last().and_then(|input| input.quantity) {
            self.out.unknowns.push((input, id));
        }
        typed
    }

    /// `a .. b`: the type of both, the unit of the first, the ends in SI.
    pub(super) fn range(&mut self, env: &mut Env, range: &Range) -> Option<(Typed, Option<Arc<Unit>>, f64, f64)> {
        let (low, high) = (self.number(env, &range.low), self.number(env, &range.high));
        let (low, high) = (low?, high?);
        let ty = self.compared(&low, &high, env.place(range.low.span.to(range.high.span)))?;
        let (Some(a), Some(b)) = (self.constant(low.node), self.constant(high.node)) else {
            self.report(Diagnostic::new(
                codes::NOT_A_NUMBER_FOR_CERTAIN,
                env.place(range.low.span.to(range.high.span)),
                "the ends of a range must be known before solving",
            ));
            return None;
        };
        if a > b {
            let text = |expr: &Expr| self.sheet.sources.text(env.place(expr.span)).to_string();
            let (low_text, high_text) = (text(&range.low), text(&range.high));
            self.report(
                Diagnostic::new(
                    codes::CONFLICTING_FIELDS,
                    env.place(range.low.span.to(range.high.span)),
                    format!("the range {low_text} .. {high_text} is empty: its lower end is the greater"),
                )
                .with_fix(
                    "swap the ends",
                    env.place(range.low.span.to(range.high.span)),
                    format!("{high_text} .. {low_text}"),
                ),
            );
            return None;
        }
        let unit = [&range.high, &range.low].into_iter().find_map(|expr| match &expr.kind {
            ExprKind::Number(literal) => literal.unit.as_ref(),
            _ => None,
        });
        let unit = unit.and_then(|text| self.unit(env, text));
        Some((Typed { ty, ..low }, unit, a, b))
    }

    /// The `where` equations of a `wanted` line.
    pub(super) fn equations(&mut self, env: &mut Env, wanted: &Wanted) {
        for equation in &wanted.equations {
            self.equation(env, equation);
        }
    }

    fn equation(&mut self, env: &mut Env, expr: &Expr) {
        match &expr.kind {
            ExprKind::Binary { op: BinaryOp::And, left, right, .. } => {
                self.equation(env, left);
                self.equation(env, right);
            }
            ExprKind::Missing => {}
            _ => {
                let value = self.expr(env, expr);
                match value {
                    Value::Condition(condition) => match condition.sides {
                        Some((left, pintle_graph::CompareOp::Equal, right)) => self.out.equations.push(Equation {
                            left: left.node,
                            right: right.node,
                            place: env.place(expr.span),
                            ledger: None,
                        }),
                        _ => self.report(
                            Diagnostic::new(codes::EXPECTED_EQUATION, env.place(expr.span), "`where` takes equations")
                                .with_help(
                                    "join the two sides by `==`; a bound belongs behind `within` or into a `limit`",
                                ),
                        ),
                    },
                    Value::Failed => self.out.n_broken_equations += 1,
                    other => self.report(
                        Diagnostic::new(
                            codes::EXPECTED_EQUATION,
                            env.place(expr.span),
                            format!("`where` takes equations, but this is {}", other.what()),
                        )
                        .with_help("write `LEFT == RIGHT`"),
                    ),
                }
            }
        }
    }
}
