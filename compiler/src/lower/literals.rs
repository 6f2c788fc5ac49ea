//! Numbers as written: unit, tolerance, value in SI.

use super::value::{Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use crate::model::{Input, InputTolerance, InputValue};
use crate::source::Origin;
use pintle_graph::InputId;
use pintle_syntax::ast::{Definition, Expr, ExprKind, ItemKind, Literal, Tolerance, UnaryOp, UnitText};
use pintle_text::{Diagnostic, Place};
use pintle_units::{Type, Unit, limits_of_size, nearest_classes};
use smol_str::SmolStr;
use std::sync::Arc;

/// A literal, read.
#[derive(Clone, Debug)]
pub(super) struct Read {
    pub si: f64,
    pub unit: Option<Arc<Unit>>,
    pub ty: Type,
    pub tolerance: Option<InputTolerance>,
    /// Number and unit, for formulas.
    pub text: SmolStr,
}

/// A number as written and read, as far as a tolerance class needs it.
#[derive(Clone, Copy)]
pub(super) struct SizeRead<'l> {
    pub si: f64,
    pub unit: Option<&'l Unit>,
    pub literal: &'l Literal,
    pub place: Place,
}

/// A definition that is nothing but a number, with its sign.
pub(super) fn literal_of(definition: &Definition) -> Option<(bool, &Literal)> {
    match definition {
        Definition::Value(expr) => literal_of_expr(expr),
        Definition::Choose(_) => None,
    }
}

fn literal_of_expr(expr: &Expr) -> Option<(bool, &Literal)> {
    match &expr.kind {
        ExprKind::Number(literal) => Some((false, literal)),
        ExprKind::Unary { op: UnaryOp::Minus, operand } => match &operand.kind {
            ExprKind::Number(literal) => Some((true, literal)),
            _ => None,
        },
        _ => None,
    }
}

impl<'s> Lowerer<'s, '_> {
    /// A literal inside an expression.
    pub(super) fn literal(&mut self, env: &mut Env, literal: &Literal) -> Value {
        match self.read_literal(env, literal, false) {
            Some(read) => Value::Number(self.input_or_literal(&read, env.place(literal.number_span))),
            None => Value::Failed,
        }
    }

    /// A toleranced number is an input of the graph, an exact one a literal.
    pub(super) fn input_or_literal(&mut self, read: &Read, place: Place) -> Typed {
        let node = match read.tolerance {
            Some(_) => self.new_input(read, place).1,
            None => self.out.model.graph.number(read.si, &read.text),
        };
        Typed { node, ty: read.ty, place }
    }

    /// A new input of the graph for a number.
    pub(super) fn new_input(&mut self, read: &Read, place: Place) -> (InputId, pintle_graph::NodeId) {
        let (input, node) = self.out.model.graph.input();
        self.out.model.inputs.push(Input {
            quantity: None,
            text: read.text.clone(),
            place,
            value: InputValue::Given { nominal: read.si, tolerance: read.tolerance },
        });
        (input, node)
    }

    /// Value, unit and tolerance of a literal; None after a report.
    pub(super) fn read_literal(&mut self, env: &mut Env, literal: &Literal, negative: bool) -> Option<Read> {
        let unit = match &literal.unit {
            Some(text) => Some(self.unit(env, text)?),
            None => None,
        };
        let sign = if negative { -1.0 } else { 1.0 };
        let value = sign * literal.value;
        let si = match &unit {
            Some(unit) => unit.to_si(value),
            None => value,
        };
        if !si.is_finite() {
            self.report(
                Diagnostic::new(
                    codes::OVERFLOW,
                    env.place(literal.number_span),
                    format!("{} is too large a number", literal.number),
                )
                .with_help("the largest number is about 1.8e308 in SI units"),
            );
            return None;
        }
        let ty = match &unit {
            Some(unit) => Type::of_unit(unit),
            None => Type::number(),
        };
        let minus = if negative { "-" } else { "" };
        let text: SmolStr = match &literal.unit {
            Some(unit) => format!("{minus}{} {}", literal.number, unit.text).into(),
            None if negative => format!("{minus}{}", literal.number).into(),
            None => literal.number.clone(),
        };
        let tolerance = match &literal.tolerance {
            Some(tolerance) => self.tolerance(env, tolerance, value, si, unit.as_deref(), literal)?,
            None => None,
        };
        Some(Read { si, unit, ty, tolerance, text })
    }

    /// The tolerance in SI. Outer None: reported; inner None: none to carry.
    fn tolerance(
        &mut self,
        env: &mut Env,
        tolerance: &Tolerance,
        value: f64,
        si: f64,
        unit: Option<&Unit>,
        literal: &Literal,
    ) -> Option<Option<InputTolerance>> {
        let limits = |a: f64, b: f64| Some(Some(InputTolerance::Limits { low: a.min(b), high: a.max(b) }));
        match tolerance {
            Tolerance::Symmetric(inner) => {
                let half =
                    self.deviation(env, inner.value, inner.unit.as_ref(), value, unit, env.place(inner.number_span))?;
                limits(si - half.abs(), si + half.abs())
            }
            Tolerance::Limits { upper, lower, unit: own, span } => {
                let place = env.place(*span);
                let up = self.deviation(env, *upper, own.as_ref(), value, unit, place)?;
                let down = self.deviation(env, *lower, own.as_ref(), value, unit, place)?;
                limits(si + up, si + down)
            }
            Tolerance::Within(range) => {
                let (low, high) = (self.number(env, &range.low)?, self.number(env, &range.high)?);
                let ty = match unit {
                    Some(unit) => Type::of_unit(unit),
                    None => Type::number(),
                };
                let nominal = Typed { node: low.node, ty, place: env.place(literal.number_span) };
                self.compared(&nominal, &low, env.place(range.low.span))?;
                self.compared(&nominal, &high, env.place(range.high.span))?;
                let (Some(a), Some(b)) = (self.constant(low.node), self.constant(high.node)) else {
                    self.report(Diagnostic::new(
                        codes::TOLERANCE_REFUSED,
                        env.place(range.low.span.to(range.high.span)),
                        "bounds of a given must be known before solving",
                    ));
                    return None;
                };
                if !(a <= si && si <= b) {
                    self.report(
                        Diagnostic::new(
                            codes::TOLERANCE_REFUSED,
                            env.place(range.low.span.to(range.high.span)),
                            format!("the value {} lies outside its own bounds", literal.number),
                        )
                        .with_label(env.place(literal.number_span), "the value"),
                    );
                    return None;
                }
                limits(a, b)
            }
            Tolerance::Standard(inner) => {
                let u =
                    self.deviation(env, inner.value, inner.unit.as_ref(), value, unit, env.place(inner.number_span))?;
                Some(Some(InputTolerance::Standard(u.abs())))
            }
            Tolerance::Class(name) => {
                let (low, high) = self.class_limits(
                    env.place(name.span),
                    &name.text,
                    &SizeRead { si, unit, literal, place: env.place(literal.number_span) },
                )?;
                limits(low, high)
            }
        }
    }

    /// Lower and upper limit of a size with an ISO 286 class, in SI; None after a report.
    pub(super) fn class_limits(&mut self, class_place: Place, class: &str, sized: &SizeRead<'_>) -> Option<(f64, f64)> {
        let SizeRead { si, unit, literal, place } = *sized;
        let minus = if si < 0.0 { "-" } else { "" };
        let size = match &literal.unit {
            Some(unit) => format!("{minus}{} {}", literal.number, unit.text),
            None => format!("{minus}{}", literal.number),
        };
        let refuse = |message: String| {
            Diagnostic::new(codes::TOLERANCE_REFUSED, class_place, message)
                .with_label(place, format!("the size, {size}"))
        };
        let Some(unit) = unit.filter(|unit| unit.dim == pintle_units::Dimension::LENGTH) else {
            let what = match unit {
                Some(unit) => format!("a number in {}", unit.text),
                None => "a number without a unit".into(),
            };
            self.report(
                refuse(format!("the ISO 286 class {class} on {what}: classes are for lengths"))
                    .with_help("give the limits instead: `± (UPPER, LOWER)` behind the number"),
            );
            return None;
        };
        // The steps of the standard are in mm; by the unit's own ratio 50 mm is 50, without the rounding of 0.05 m.
        let mm = si / unit.factor * (unit.factor / 1e-3);
        match limits_of_size(mm, class) {
            Ok(found) => Some((si + found.lower * 1e-6, si + found.upper * 1e-6)),
            Err(why) => {
                let near: Vec<String> = nearest_classes(mm, class).iter().map(|near| format!("`{near}`")).collect();
                let help = match near.as_slice() {
                    [] => "give the limits instead: `± (UPPER, LOWER)` behind the size".into(),
                    near => format!("classes near it that the table has at this size: {}", near.join(", ")),
                };
                self.report(
                    refuse(format!("{size} has no limits for the ISO 286 class {class}: {why}")).with_help(help),
                );
                None
            }
        }
    }

    /// A deviation in SI: in the number's unit where it has none of its own;
    /// percent of the number, except where the number is itself a percentage
    /// or a temperature.
    fn deviation(
        &mut self,
        env: &mut Env,
        amount: f64,
        own: Option<&UnitText>,
        value: f64,
        unit: Option<&Unit>,
        place: Place,
    ) -> Option<f64> {
        let offset = unit.is_some_and(|unit| unit.offset != 0.0);
        let percent = |unit: Option<&Unit>| unit.is_some_and(|unit| matches!(unit.text.as_str(), "%" | "‰"));
        let own_unit = match own {
            Some(text) => Some(self.unit(env, text)?),
            None => None,
        };
        if percent(own_unit.as_deref()) {
            if offset || percent(unit) {
                let what = if offset { "a temperature" } else { "a percentage" };
                self.report(
                    Diagnostic::new(
                        codes::TOLERANCE_REFUSED,
                        place,
                        format!("a percent tolerance on {what} has two meanings"),
                    )
                    .with_help("give the bounds instead: `within LOW .. HIGH`"),
                );
                return None;
            }
            let share = own_unit.map_or(1.0, |unit| unit.factor);
            let nominal = unit.map_or(value, |unit| unit.to_si(value));
            return Some(nominal.abs() * amount * share);
        }
        let Some(own_unit) = own_unit else { return Some(unit.map_or(amount, |unit| amount * unit.factor)) };
        let same = unit.map_or_else(
            || own_unit.dim == pintle_units::Dimension::NONE,
            |unit| unit.dim.without_angle() == own_unit.dim.without_angle(),
        );
        if !same {
            self.report(
                Diagnostic::new(
                    codes::UNIT_MISMATCH,
                    place,
                    format!(
                        "a tolerance in {} on a number in {}",
                        own_unit.text,
                        unit.map_or("no unit", |unit| unit.text.as_str())
                    ),
                )
                .with_help("write the tolerance in a unit of the same quantity, or in %"),
            );
            return None;
        }
        Some(amount * own_unit.factor)
    }

    /// A unit as written, read once a file.
    pub(super) fn unit(&mut self, env: &Env, text: &UnitText) -> Option<Arc<Unit>> {
        let key = (env.origin, text.text.clone());
        if let Some(known) = self.units.get(&key).cloned() {
            if known.is_none() {
                // Each wrong place is shown, not only the first.
                self.read_unit(env, text);
            }
            return known;
        }
        let unit = self.read_unit(env, text);
        self.units.insert(key, unit.clone());
        unit
    }

    fn read_unit(&mut self, env: &Env, text: &UnitText) -> Option<Arc<Unit>> {
        let declared = self.declared_units(env.origin, text);
        match pintle_units::parse(&text.text, &|name| {
            declared.iter().find(|(known, _)| known == name).map(|(_, unit)| unit.clone())
        }) {
            Ok(unit) => Some(Arc::new(unit)),
            Err(error) => {
                let place = env.place(text.span);
                let diagnostic = self.unit_error(env, text, place, error);
                self.report(diagnostic);
                None
            }
        }
    }

    /// Units that the sheet itself declares and that this text may mean.
    fn declared_units(&mut self, origin: Origin, text: &UnitText) -> Vec<(SmolStr, Unit)> {
        let mut found = Vec::new();
        for word in text.text.split(|c: char| !(c.is_alphanumeric() || c == '_')) {
            if let Some(id) = self.sheet.lookup(origin, word)
                && let Some(item) = self.sheet.item(id)
                && let ItemKind::Unit { name, value } = &item.kind
                && !self.open.contains(&id)
            {
                let mut env = self.env(id);
                self.open.push(id);
                let typed = self.number(&mut env, value);
                self.open.pop();
                if let Some(typed) = typed
                    && let Some(size) = self.constant(typed.node)
                {
                    found.push((name.text.clone(), self.unit_of(name.text.clone(), &typed.ty, size)));
                }
            }
        }
        found
    }
}
