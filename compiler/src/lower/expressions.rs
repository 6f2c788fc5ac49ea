//! Expressions: paths, operators, points and lists.

use super::space::Arithmetic;
use super::value::{Condition, Entity, Object, Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use crate::nearest::did_you_mean;
use pintle_graph::{CompareOp, Function, NodeId, Op};
use pintle_syntax::ast::{BinaryOp, Choose, Definition, Expr, ExprKind, Path, Repeat, Segment, UnaryOp};
use pintle_text::{Diagnostic, Place, Span};
use pintle_units::{Ratio, Type};
use smol_str::SmolStr;

/// A repetition longer than this is taken for a slip.
const REPEAT_LIMIT: i64 = 10_000;

impl<'s> Lowerer<'s, '_> {
    /// The right side of a definition.
    pub(super) fn definition(&mut self, env: &mut Env, definition: &Definition) -> Value {
        match definition {
            Definition::Value(expr) => self.expr(env, expr),
            Definition::Choose(choose) => self.choose(env, choose),
        }
    }

    /// What an expression stands for.
    pub(super) fn expr(&mut self, env: &mut Env, expr: &Expr) -> Value {
        match &expr.kind {
            ExprKind::Number(literal) => self.literal(env, literal),
            ExprKind::Text(text) => Value::Text(text.text.as_str().into()),
            ExprKind::Path(path) => self.path(env, path),
            ExprKind::Call { function, arguments } => self.call(env, expr.span, function, arguments),
            ExprKind::Unary { op, operand } => self.unary(env, *op, operand),
            ExprKind::Binary { .. } => self.binary_chain(env, expr),
            ExprKind::About { value, axis } => self.about(env, expr.span, value, axis),
            ExprKind::Point(items) => self.point(env, expr.span, items),
            ExprKind::List(items) => self.list(env, expr.span, items),
            ExprKind::Comprehension { body, repeat } => {
                let items = self.repeated(env, repeat, |this, env| this.expr(env, body));
                Value::List(items, env.place(expr.span))
            }
            ExprKind::Missing => Value::Failed,
        }
    }

    /// A number, or None after a report.
    pub(super) fn number(&mut self, env: &mut Env, expr: &Expr) -> Option<Typed> {
        let value = self.expr(env, expr);
        self.as_number(value, env.place(expr.span))
    }

    /// `value` as a number, or None after a report.
    pub(super) fn as_number(&mut self, value: Value, place: Place) -> Option<Typed> {
        match value {
            Value::Number(typed) => Some(typed),
            Value::Failed => None,
            other => {
                let mut diagnostic = Diagnostic::new(
                    codes::NOT_A_QUANTITY,
                    place,
                    format!("a quantity is needed here, but this is {}", other.what()),
                );
                if let Value::Object(object) = &other {
                    let numbers: Vec<String> = object
                        .members
                        .iter()
                        .filter(|(_, value)| matches!(value, Value::Number(_)))
                        .take(6)
                        .map(|(name, _)| format!("`{}.{name}`", object.name))
                        .collect();
                    if !numbers.is_empty() {
                        diagnostic = diagnostic.with_help(format!("its quantities are {}", numbers.join(", ")));
                    }
                }
                self.report(diagnostic);
                None
            }
        }
    }

    fn point(&mut self, env: &mut Env, span: Span, items: &[Expr]) -> Value {
        let values = items.iter().map(|item| self.expr(env, item)).collect();
        Value::Point(values, env.place(span))
    }

    fn list(&mut self, env: &mut Env, span: Span, items: &[Expr]) -> Value {
        let mut values = Vec::with_capacity(items.len());
        for item in items {
            match self.expr(env, item) {
                // `[point for k from 1 to 9]` is that list, not a list of one list.
                Value::List(inner, _) if matches!(item.kind, ExprKind::Comprehension { .. }) => values.extend(inner),
                value => values.push(value),
            }
        }
        Value::List(values, env.place(span))
    }

    /// Runs `body` for each value of the counter.
    pub(super) fn repeated<T>(
        &mut self,
        env: &mut Env,
        repeat: &Repeat,
        mut body: impl FnMut(&mut Self, &mut Env) -> T,
    ) -> Vec<T> {
        let (Some(from), Some(to)) = (self.whole_number(env, &repeat.from), self.whole_number(env, &repeat.to)) else {
            return Vec::new();
        };
        if to.saturating_sub(from) >= REPEAT_LIMIT {
            self.report(Diagnostic::new(
                codes::NOT_A_NUMBER_FOR_CERTAIN,
                env.place(repeat.to.span),
                format!(
                    "this repeats {} times; at most {REPEAT_LIMIT} are taken",
                    to.saturating_sub(from).saturating_add(1)
                ),
            ));
            return Vec::new();
        }
        let mut results = Vec::new();
        for k in from..=to {
            let node = self.num(k as f64);
            let typed = Typed { node, ty: Type::number(), place: env.place(repeat.variable.span) };
            env.define(repeat.variable.text.clone(), Value::Number(typed));
            results.push(body(self, env));
            env.locals.pop();
        }
        results
    }

    /// A whole number that is known while reading: a count or an index.
    pub(super) fn whole_number(&mut self, env: &mut Env, expr: &Expr) -> Option<i64> {
        let typed = self.number(env, expr)?;
        self.whole(&typed, env.place(expr.span))
    }

    /// The same for a number already read.
    pub(super) fn whole(&mut self, typed: &Typed, place: Place) -> Option<i64> {
        match self.constant(typed.node) {
            Some(value) if value == value.round() && value.abs() < 1e9 => Some(value as i64),
            Some(value) => {
                self.report(Diagnostic::new(
                    codes::NOT_A_NUMBER_FOR_CERTAIN,
                    place,
                    format!("a whole number is needed here, but this is {value}"),
                ));
                None
            }
            None => {
                self.report(
                    Diagnostic::new(codes::NOT_A_NUMBER_FOR_CERTAIN, place, "a count must be known before solving")
                        .with_help("it may not depend on a `wanted` quantity"),
                );
                None
            }
        }
    }

    /// What a path stands for.
    pub(super) fn path(&mut self, env: &mut Env, path: &Path) -> Value {
        let Some((first, rest)) = path.segments.split_first() else { return Value::Failed };
        let mut value = self.name(env, first);
        let mut so_far: SmolStr = first.name.text.clone();
        value = self.indexed(env, value, first, &so_far);
        for segment in rest {
            if value.is_failed() {
                return Value::Failed;
            }
            let place = env.place(segment.name.span);
            value = self.member(value, &so_far, segment, place);
            so_far = format!("{so_far}.{}", segment.name.text).into();
            value = self.indexed(env, value, segment, &so_far);
        }
        // What is used here is pointed at here.
        if let Value::Number(typed) = &mut value {
            typed.place = env.place(path.span);
        }
        value
    }

    fn name(&mut self, env: &Env, segment: &Segment) -> Value {
        let name = &segment.name;
        if let Some(value) = env.local(&name.text) {
            return value.clone();
        }
        if let Some(id) = self.sheet.lookup(env.origin, &name.text) {
            return self.entity(id);
        }
        if name.text == "pi" {
            let node = self.out.model.graph.number(std::f64::consts::PI, "pi");
            return Value::Number(Typed { node, ty: super::typing::pi_type(), place: env.place(name.span) });
        }
        self.unknown_name(env, &name.text, name.span);
        Value::Failed
    }

    fn unknown_name(&mut self, env: &Env, name: &str, span: Span) {
        let place = env.place(span);
        let mut diagnostic = Diagnostic::new(codes::UNKNOWN_NAME, place, format!("nothing is named `{name}`"));
        if let Some(file) = self.sheet.not_imported(name).filter(|_| env.origin != crate::source::Origin::Standard) {
            let part = file.trim_start_matches("std/").trim_end_matches(".pintle");
            diagnostic = diagnostic.with_help(format!("the standard library has it: add the line `use std.{part}`"));
        } else {
            let locals = env.locals.iter().map(|(name, _)| name.as_str());
            let names = self.sheet.visible(env.origin);
            let all = locals.chain(names.iter().map(|name| name.as_str())).chain(["pi"]);
            let close = crate::nearest::nearest(name, all);
            if let Some(first) = close.first() {
                diagnostic = diagnostic
                    .with_help(format!(
                        "did you mean {}?",
                        close.iter().map(|it| format!("`{it}`")).collect::<Vec<_>>().join(" or ")
                    ))
                    .with_fix(format!("write `{first}`"), place, *first);
            } else if self.states.iter().any(|(state, _)| state.split('.').next() == Some(name)) {
                diagnostic = diagnostic.with_help("it is known only inside a problem: write PROBLEM.NAME");
            } else {
                diagnostic = diagnostic.with_help("define it with `given NAME = VALUE` or `NAME = EXPRESSION`");
            }
        }
        self.report(diagnostic);
    }

    fn indexed(&mut self, env: &mut Env, value: Value, segment: &Segment, so_far: &str) -> Value {
        let Some(index) = &segment.index else { return value };
        let place = env.place(index.span);
        let Some(at) = self.whole_number(env, index) else { return Value::Failed };
        let (first, items) = match value {
            Value::Series { first, items } => (first, items),
            Value::List(items, _) => (1, items),
            Value::Failed => return Value::Failed,
            other => {
                let text = format!("`{so_far}` is {}, not a series, so it has no member [{at}]", other.what());
                self.report(Diagnostic::new(codes::UNKNOWN_MEMBER, place, text));
                return Value::Failed;
            }
        };
        match usize::try_from(at - first).ok().and_then(|at| items.get(at).cloned()) {
            Some(value) => value,
            None => {
                let last = first + items.len() as i64 - 1;
                self.report(Diagnostic::new(
                    codes::UNKNOWN_MEMBER,
                    place,
                    format!("`{so_far}` has members [{first}] to [{last}], not [{at}]"),
                ));
                Value::Failed
            }
        }
    }

    fn member(&mut self, value: Value, so_far: &str, segment: &Segment, place: Place) -> Value {
        let name = segment.name.text.as_str();
        match &value {
            Value::Object(object) => match object.member(name) {
                Some(member) => member.clone(),
                None => {
                    self.unknown_member(object, so_far, name, place);
                    Value::Failed
                }
            },
            Value::Point(items, _) => {
                match ["x", "y", "z"].iter().position(|it| *it == name).and_then(|at| items.get(at)) {
                    Some(member) => member.clone(),
                    None => {
                        self.report(
                            Diagnostic::new(codes::UNKNOWN_MEMBER, place, format!("a point has no member `{name}`"))
                                .with_help("its members are x, y, z"),
                        );
                        Value::Failed
                    }
                }
            }
            Value::Failed => Value::Failed,
            other => {
                let text = format!("`{so_far}` is {}, which has no members", other.what());
                self.report(Diagnostic::new(codes::UNKNOWN_MEMBER, place, text));
                Value::Failed
            }
        }
    }

    fn unknown_member(&mut self, object: &Object, so_far: &str, name: &str, place: Place) {
        let state = format!("{so_far}.{name}");
        let problems: Vec<String> = self
            .states
            .iter()
            .filter(|(known, _)| *known == state)
            .map(|(_, id)| format!("`{}`", self.out.model.quantity(*id).name))
            .collect();
        let is_state = matches!(name, "speed" | "rim_speed" | "kinetic" | "travel" | "angle")
            && matches!(object.entity, Entity::Rotor(_) | Entity::Load(_));
        if is_state || !problems.is_empty() {
            let mut diagnostic = Diagnostic::new(
                codes::STATE_WITHOUT_PROBLEM,
                place,
                format!("`{state}` belongs to a problem; say to which"),
            );
            diagnostic = if problems.is_empty() {
                diagnostic.with_help("only a `ledger` or `run` of its train gives it a value: PROBLEM.MEMBER.STATE")
            } else {
                diagnostic
                    .with_help(format!("write {}, or `limit every {state} ...` for all of them", problems.join(" or ")))
            };
            self.report(diagnostic);
            return;
        }
        let names = object.members.iter().map(|(name, _)| name.as_str());
        let mut diagnostic = Diagnostic::new(
            codes::UNKNOWN_MEMBER,
            place,
            format!("`{so_far}`, {}, has no member `{name}`", object.what),
        );
        if let Some(hint) = did_you_mean(name, names.clone()) {
            diagnostic = diagnostic.with_help(hint);
        } else {
            let list: Vec<&str> = names.collect();
            if !list.is_empty() {
                diagnostic = diagnostic.with_help(format!("its members are {}", list.join(", ")));
            }
        }
        self.report(diagnostic);
    }

    fn unary(&mut self, env: &mut Env, op: UnaryOp, operand: &Expr) -> Value {
        match op {
            UnaryOp::Plus => self.expr(env, operand),
            UnaryOp::Minus => {
                let Some(typed) = self.number(env, operand) else { return Value::Failed };
                let node = self.apply(Function::Negate, typed.node);
                Value::Number(Typed { node, ..typed })
            }
            UnaryOp::Not => {
                let Some(condition) = self.condition(env, operand) else { return Value::Failed };
                let node = self.apply(Function::Not, condition.node);
                Value::Condition(Box::new(Condition { node, sides: None, place: condition.place }))
            }
        }
    }

    /// A condition, or None after a report.
    pub(super) fn condition(&mut self, env: &mut Env, expr: &Expr) -> Option<Condition> {
        match self.expr(env, expr) {
            Value::Condition(condition) => Some(*condition),
            Value::Failed => None,
            other => {
                self.report(
                    Diagnostic::new(
                        codes::NOT_A_QUANTITY,
                        env.place(expr.span),
                        format!("a condition is needed here, but this is {}", other.what()),
                    )
                    .with_help("compare two quantities with <, <=, >, >= or =="),
                );
                None
            }
        }
    }

    /// A chain of operators that leans left, walked in a loop: `a + b + c ...`.
    fn binary_chain(&mut self, env: &mut Env, expr: &Expr) -> Value {
        let mut spine = Vec::new();
        let mut rest = expr;
        while let ExprKind::Binary { op, op_span, left, right } = &rest.kind {
            spine.push((*op, *op_span, right, rest.span));
            rest = left;
        }
        let mut value = self.expr(env, rest);
        let mut left_span = rest.span;
        for (op, op_span, right, span) in spine.into_iter().rev() {
            value = if op == BinaryOp::Power {
                self.power(env, value, left_span, right)
            } else {
                let right_value = self.expr(env, right);
                self.binary(env, op, op_span, (value, left_span), (right_value, right.span))
            };
            left_span = span;
        }
        value
    }

    fn binary(&mut self, env: &Env, op: BinaryOp, op_span: Span, left: (Value, Span), right: (Value, Span)) -> Value {
        let place = env.place(left.1.to(right.1));
        if let BinaryOp::And | BinaryOp::Or = op {
            return self.logic(env, op, left, right, place);
        }
        // Report both sides before giving up, so that no fault hides another.
        let a = self.as_number(left.0, env.place(left.1));
        let b = self.as_number(right.0, env.place(right.1));
        let (Some(mut a), Some(mut b)) = (a, b) else { return Value::Failed };
        a.place = env.place(left.1);
        b.place = env.place(right.1);
        match op {
            BinaryOp::Add | BinaryOp::Subtract => {
                let Some(ty) = self.added(&a, &b, op, env.place(op_span)) else { return Value::Failed };
                let node = if op == BinaryOp::Add { Op::Add(a.node, b.node) } else { Op::Subtract(a.node, b.node) };
                self.computed(node, ty, place)
            }
            BinaryOp::Multiply => {
                let Some(ty) = self.multiplied(&a, &b, place) else { return Value::Failed };
                self.computed(Op::Multiply(a.node, b.node), ty, place)
            }
            BinaryOp::Divide => {
                let Some(ty) = self.divided(&a, &b, place) else { return Value::Failed };
                self.computed(Op::Divide(a.node, b.node), ty, place)
            }
            _ => {
                let Some(compare) = compare_op(op) else { return Value::Failed };
                if self.compared(&a, &b, env.place(op_span)).is_none() {
                    return Value::Failed;
                }
                let node = self.out.model.graph.add(Op::Compare(compare, a.node, b.node));
                Value::Condition(Box::new(Condition { node, sides: Some((a, compare, b)), place }))
            }
        }
    }

    fn logic(&mut self, env: &Env, op: BinaryOp, left: (Value, Span), right: (Value, Span), place: Place) -> Value {
        let mut side = |(value, span): (Value, Span)| match value {
            Value::Condition(condition) => Some(condition.node),
            Value::Failed => None,
            other => {
                self.report(Diagnostic::new(
                    codes::NOT_A_QUANTITY,
                    env.place(span),
                    format!("`{}` joins conditions, but this is {}", op.symbol(), other.what()),
                ));
                None
            }
        };
        let (a, b) = (side(left), side(right));
        let (Some(a), Some(b)) = (a, b) else { return Value::Failed };
        let node = self.out.model.graph.add(if op == BinaryOp::And { Op::And(a, b) } else { Op::Or(a, b) });
        Value::Condition(Box::new(Condition { node, sides: None, place }))
    }

    /// A node that may lack a value, with its place for that message.
    pub(super) fn computed(&mut self, op: Op, ty: Type, place: Place) -> Value {
        let node = self.out.model.graph.add(op);
        self.out.node_places.entry(node).or_insert(place);
        Value::Number(Typed { node, ty, place })
    }

    fn power(&mut self, env: &mut Env, base: Value, base_span: Span, exponent: &Expr) -> Value {
        let Some(base) = self.as_number(base, env.place(base_span)) else { return Value::Failed };
        let place = env.place(base_span.to(exponent.span));
        if let Some(ratio) = rational(exponent) {
            let Some(ty) = self.raised(&base, ratio, place) else { return Value::Failed };
            let node = self.power_node(base.node, ratio);
            return match node {
                Some(op) => self.computed(op, ty, place),
                None => Value::Number(Typed { node: base.node, ty, place }),
            };
        }
        let Some(exponent_value) = self.number(env, exponent) else { return Value::Failed };
        // A counter of a repetition is a known whole number too.
        if let Some(value) = self.known(exponent_value.node)
            && value == value.round()
            && value.abs() < 1000.0
            && let Some(ratio) = Ratio::new(value as i32, 1)
        {
            let Some(ty) = self.raised(&base, ratio, place) else { return Value::Failed };
            return match self.power_node(base.node, ratio) {
                Some(op) => self.computed(op, ty, place),
                None => Value::Number(Typed { node: base.node, ty, place }),
            };
        }
        let base_pure = self.pure(&base, "a base with a variable exponent");
        let exponent_pure = self.pure(&exponent_value, "an exponent");
        if !(base_pure && exponent_pure) {
            return Value::Failed;
        }
        self.computed(Op::PowerOf(base.node, exponent_value.node), Type::number(), place)
    }

    fn power_node(&mut self, base: NodeId, ratio: Ratio) -> Option<Op> {
        let (num, den) = (ratio.num(), ratio.den());
        if (num, den) == (1, 1) { None } else { Some(Op::Power(base, num, den)) }
    }

    fn choose(&mut self, env: &mut Env, choose: &Choose) -> Value {
        let mut arms: Vec<(Option<NodeId>, Typed)> = Vec::new();
        let mut failed = false;
        for arm in &choose.arms {
            let condition = match &arm.condition {
                Some(condition) => match self.condition(env, condition) {
                    Some(condition) => Some(condition.node),
                    None => {
                        failed = true;
                        None
                    }
                },
                None => None,
            };
            match self.number(env, &arm.value) {
                Some(typed) => arms.push((condition, typed)),
                None => failed = true,
            }
        }
        if failed {
            return Value::Failed;
        }
        let place = env.place(choose.span);
        let Some((None, last)) = arms.pop() else {
            self.report(
                Diagnostic::new(codes::MISSING_FIELD, place, "a `choose` ends with an arm for all other cases")
                    .with_help("add a last line `VALUE otherwise`"),
            );
            return Value::Failed;
        };
        let mut result = last;
        for (condition, typed) in arms.into_iter().rev() {
            let Some(ty) = self.compared(&typed, &result, typed.place) else { return Value::Failed };
            let Some(condition) = condition else {
                self.report(Diagnostic::new(
                    codes::CONFLICTING_FIELDS,
                    typed.place,
                    "an arm with `otherwise` must be the last; the arms below it can never be taken",
                ));
                return Value::Failed;
            };
            let node = self.out.model.graph.add(Op::Select(condition, typed.node, result.node));
            result = Typed { node, ty, place };
        }
        Value::Number(result)
    }

    /// The value of a node that depends on no unknown.
    pub(super) fn constant(&mut self, node: NodeId) -> Option<f64> {
        self.constants_asked += 1;
        if let Some(value) = self.known(node) {
            return Some(value);
        }
        let model = &self.out.model;
        let value = pintle_graph::value_with(&model.graph, node, |input| {
            match model.inputs.get(input.0 as usize).map(|it| &it.value) {
                Some(&crate::model::InputValue::Given { nominal, .. }) => nominal,
                _ => f64::NAN,
            }
        });
        value.is_finite().then_some(value)
    }
}

fn compare_op(op: BinaryOp) -> Option<CompareOp> {
    Some(match op {
        BinaryOp::Equal => CompareOp::Equal,
        BinaryOp::NotEqual => CompareOp::NotEqual,
        BinaryOp::Less => CompareOp::Less,
        BinaryOp::LessEqual => CompareOp::LessEqual,
        BinaryOp::Greater => CompareOp::Greater,
        BinaryOp::GreaterEqual => CompareOp::GreaterEqual,
        _ => return None,
    })
}

/// An exponent that is written as a number: `2`, `-3`, `(1/2)`, `0.5`.
fn rational(expr: &Expr) -> Option<Ratio> {
    match &expr.kind {
        ExprKind::Number(literal) if literal.unit.is_none() && literal.tolerance.is_none() => {
            let value = literal.value;
            (1..=12).find_map(|den| {
                let num = value * f64::from(den);
                (num == num.round() && num.abs() < 1e6).then(|| Ratio::new(num as i32, den))?
            })
        }
        ExprKind::Unary { op: UnaryOp::Minus, operand } => rational(operand)?.checked_neg(),
        ExprKind::Binary { op: BinaryOp::Divide, left, right, .. } => rational(left)?.checked_div(rational(right)?),
        _ => None,
    }
}
