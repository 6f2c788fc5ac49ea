//! Calls: functions of the language, formulas of the library, members of things.

use super::space::Arithmetic;
use super::value::{Entity, Typed, Value};
use super::{Env, Lowerer, Requirement};
use crate::codes;
use crate::nearest::did_you_mean;
use pintle_graph::{Function, Op};
use pintle_syntax::ast::{Argument, Expr, ExprKind, ItemKind, Parameter, Path};
use pintle_text::{Diagnostic, ItemId, Place, Span};
use pintle_units::{Ratio, Type};
use smol_str::SmolStr;

/// Functions of the language, with what they do.
pub const FUNCTIONS: &[(&str, &str)] = &[
    ("abs(x)", "size without sign"),
    ("acos(x)", "angle of a cosine"),
    ("asin(x)", "angle of a sine"),
    ("atan(x)", "angle of a tangent"),
    ("atan2(y, x)", "angle of a direction"),
    ("cbrt(x)", "cube root"),
    ("ceil(x)", "next whole number up"),
    ("cos(a)", "cosine of an angle"),
    ("cosh(x)", "hyperbolic cosine"),
    ("exp(x)", "e to the power x"),
    ("floor(x)", "next whole number down"),
    ("ln(x)", "natural logarithm"),
    ("log10(x)", "decimal logarithm"),
    ("max(a, b, ...)", "greatest"),
    ("min(a, b, ...)", "least"),
    ("natural(k, m)", "natural angular frequency of a stiffness and a mass, or a torsional stiffness and an inertia"),
    ("round(x)", "nearest whole number"),
    ("sign(x)", "1, 0 or -1"),
    ("sin(a)", "sine of an angle"),
    ("sinh(x)", "hyperbolic sine"),
    ("sqrt(x)", "square root"),
    ("sum(x for k from a to b)", "sum over a counter, or of a list"),
    ("tan(a)", "tangent of an angle"),
    ("tanh(x)", "hyperbolic tangent"),
];

impl<'s> Lowerer<'s, '_> {
    pub(super) fn call(&mut self, env: &mut Env, span: Span, function: &Path, arguments: &[Argument]) -> Value {
        if let [segment] = function.segments.as_slice() {
            let name = segment.name.text.as_str();
            if env.local(name).is_none() {
                if let Some(id) = self.sheet.lookup(env.origin, name) {
                    return match self.entity(id) {
                        Value::Template(id) => self.formula(env, id, span, arguments),
                        Value::Failed => Value::Failed,
                        other => {
                            self.report(Diagnostic::new(
                                codes::UNKNOWN_FUNCTION,
                                env.place(segment.name.span),
                                format!("`{name}` is {}, not a formula", other.what()),
                            ));
                            Value::Failed
                        }
                    };
                }
                return self.function(env, name, env.place(segment.name.span), env.place(span), arguments);
            }
        }
        self.member_call(env, span, function, arguments)
    }

    fn member_call(&mut self, env: &mut Env, span: Span, function: &Path, arguments: &[Argument]) -> Value {
        let Some((last, rest)) = function.segments.split_last() else { return Value::Failed };
        let owner = Path { segments: rest.to_vec(), span: function.span };
        let place = env.place(span);
        let object = match self.path(env, &owner) {
            Value::Object(object) => object,
            Value::Failed => return Value::Failed,
            other => {
                self.report(Diagnostic::new(
                    codes::UNKNOWN_FUNCTION,
                    place,
                    format!("{} offers no functions", other.what()),
                ));
                return Value::Failed;
            }
        };
        match (&object.entity, last.name.text.as_str()) {
            (Entity::Rotor(rotor), "kinetic_energy") => {
                let Some(speed) = self.single(env, arguments, "angular_velocity", place) else { return Value::Failed };
                let square = self.square(speed.node);
                let product = self.times(rotor.moment, square);
                let half = self.num(0.5);
                let node = self.times(half, product);
                Value::Number(Typed { node, ty: self.kind_type("energy"), place })
            }
            (Entity::Rotor(rotor), "rim_speed") => {
                let reach = rotor.reach;
                let Some(speed) = self.single(env, arguments, "angular_velocity", place) else { return Value::Failed };
                let Some(reach) = reach else {
                    self.report(Diagnostic::new(
                        codes::MISSING_FIELD,
                        place,
                        format!("`{}` has no outer radius", object.name),
                    ));
                    return Value::Failed;
                };
                let node = self.times(speed.node, reach);
                Value::Number(Typed { node, ty: self.kind_type("speed"), place })
            }
            (Entity::Train(train), "ratio") => {
                let train = train.clone();
                self.train_ratio(env, &train, arguments, place)
            }
            (Entity::Train(train), "reflected") => {
                let train = train.clone();
                self.reflected(env, &train, arguments, place)
            }
            (_, name) => {
                self.report(
                    Diagnostic::new(codes::UNKNOWN_FUNCTION, env.place(last.name.span), format!("{} offers no function `{name}`", object.what))
                        .with_help("a rotor offers kinetic_energy(speed) and rim_speed(speed), a train ratio(a, b) and reflected(J, at = member)"),
                );
                Value::Failed
            }
        }
    }

    fn single(&mut self, env: &mut Env, arguments: &[Argument], kind: &str, place: Place) -> Option<Typed> {
        match arguments {
            [argument] => {
                let typed = self.number(env, &argument.value)?;
                self.expect(&typed, kind, "the argument")
            }
            _ => {
                self.report(Diagnostic::new(codes::WRONG_ARGUMENTS, place, "one argument is needed"));
                None
            }
        }
    }

    fn function(
        &mut self,
        env: &mut Env,
        name: &str,
        name_place: Place,
        place: Place,
        arguments: &[Argument],
    ) -> Value {
        let count = |this: &mut Self, n: usize| {
            let right = arguments.len() == n;
            if !right {
                this.report(Diagnostic::new(
                    codes::WRONG_ARGUMENTS,
                    place,
                    format!("`{name}` takes {n} argument{}, found {}", if n == 1 { "" } else { "s" }, arguments.len()),
                ));
            }
            right
        };
        match name {
            "sum" => return self.sum_call(env, place, arguments),
            "min" | "max" => return self.extreme(env, name, place, arguments),
            "atan2" | "natural" => {
                if !count(self, 2) {
                    return Value::Failed;
                }
                let (a, b) = (self.number(env, &arguments[0].value), self.number(env, &arguments[1].value));
                let (Some(a), Some(b)) = (a, b) else { return Value::Failed };
                if name == "atan2" {
                    if self.compared(&a, &b, place).is_none() {
                        return Value::Failed;
                    }
                    let ty = self.kind_type("angle");
                    return self.computed(Op::Atan2(a.node, b.node), ty, place);
                }
                let Some(ty) = self.checked(Type::natural_frequency(&a.ty, &b.ty), place) else { return Value::Failed };
                let ratio = self.out.model.graph.add(Op::Divide(a.node, b.node));
                return self.computed(Op::Power(ratio, 1, 2), ty, place);
            }
            _ => {}
        }
        let Some(function) = unary_function(name) else {
            let known = FUNCTIONS.iter().map(|(text, _)| text.split('(').next().unwrap_or(text));
            let mut diagnostic = Diagnostic::new(
                codes::UNKNOWN_FUNCTION,
                name_place,
                format!("no function or formula is named `{name}`"),
            );
            if let Some(file) = self.sheet.not_imported(name) {
                let part = file.trim_start_matches("std/").trim_end_matches(".pintle");
                diagnostic =
                    diagnostic.with_help(format!("the standard library has it: add the line `use std.{part}`"));
            } else {
                let visible = self.sheet.visible(env.origin);
                let hint = did_you_mean(name, known.chain(visible.iter().map(|it| it.as_str())));
                diagnostic =
                    diagnostic.with_help(hint.unwrap_or_else(|| "`pintle list functions` shows them all".into()));
            }
            self.report(diagnostic);
            return Value::Failed;
        };
        if !count(self, 1) {
            return Value::Failed;
        }
        let Some(x) = self.number(env, &arguments[0].value) else { return Value::Failed };
        let fine = |ty: Type| Some(ty);
        let ty = match name {
            "sin" | "cos" | "tan" => self.angle_argument(&x).then(Type::number),
            "exp" | "ln" | "log10" | "sinh" | "cosh" | "tanh" | "floor" | "ceil" | "round" => {
                self.pure(&x, "the argument").then(Type::number)
            }
            "asin" | "acos" | "atan" => {
                let angle = self.kind_type("angle");
                self.pure(&x, "the argument").then_some(angle)
            }
            "sqrt" => self.checked(x.ty.sqrt(), place),
            "cbrt" => Ratio::new(1, 3).and_then(|third| self.checked(x.ty.pow(third), place)),
            "abs" => self.checked(x.ty.abs(), place),
            _ => fine(Type::number()),
        };
        let Some(ty) = ty else { return Value::Failed };
        let op = match name {
            "sqrt" => Op::Power(x.node, 1, 2),
            "cbrt" => Op::Power(x.node, 1, 3),
            _ => Op::Apply(function, x.node),
        };
        self.computed(op, ty, place)
    }

    fn sum_call(&mut self, env: &mut Env, place: Place, arguments: &[Argument]) -> Value {
        let mut items = Vec::new();
        for argument in arguments {
            match self.expr(env, &argument.value) {
                Value::List(list, _) | Value::Series { items: list, .. } => items.extend(list),
                value => items.push(value),
            }
        }
        let mut total: Option<Typed> = None;
        for item in items {
            let Some(typed) = self.as_number(item, place) else { return Value::Failed };
            total = Some(match total {
                None => typed,
                Some(total) => {
                    let Some(ty) = self.added(&total, &typed, pintle_syntax::ast::BinaryOp::Add, place) else {
                        return Value::Failed;
                    };
                    Typed { node: self.out.model.graph.add(Op::Add(total.node, typed.node)), ty, place }
                }
            });
        }
        match total {
            Some(total) => Value::Number(total),
            None => {
                self.report(Diagnostic::new(codes::WRONG_ARGUMENTS, place, "a sum of nothing has no unit"));
                Value::Failed
            }
        }
    }

    fn extreme(&mut self, env: &mut Env, name: &str, place: Place, arguments: &[Argument]) -> Value {
        let mut result: Option<Typed> = None;
        for argument in arguments {
            let Some(typed) = self.number(env, &argument.value) else { return Value::Failed };
            result = Some(match result {
                None => typed,
                Some(so_far) => {
                    let Some(ty) = self.compared(&so_far, &typed, place) else { return Value::Failed };
                    let op =
                        if name == "min" { Op::Min(so_far.node, typed.node) } else { Op::Max(so_far.node, typed.node) };
                    Typed { node: self.out.model.graph.add(op), ty, place }
                }
            });
        }
        match result {
            Some(typed) => Value::Number(typed),
            None => {
                self.report(Diagnostic::new(
                    codes::WRONG_ARGUMENTS,
                    place,
                    format!("`{name}` needs at least one argument"),
                ));
                Value::Failed
            }
        }
    }

    fn formula(&mut self, env: &mut Env, id: ItemId, span: Span, arguments: &[Argument]) -> Value {
        let sheet = self.sheet;
        let place = env.place(span);
        let Some(item) = sheet.item(id) else { return Value::Failed };
        let ItemKind::Formula { name, parameters, kind, value, requirements, locals, offers } = &item.kind else {
            self.report(Diagnostic::new(
                codes::UNKNOWN_FUNCTION,
                place,
                "a shape makes a body: `body NAME = SHAPE { ... }`",
            ));
            return Value::Failed;
        };
        // A formula that calls itself would never end.
        if self.open.contains(&id) || self.open.len() > 64 {
            self.report(Diagnostic::new(
                codes::CIRCULAR_DEFINITION,
                place,
                format!("the formula `{}` needs itself", name.text),
            ));
            return Value::Failed;
        }
        let Some(bound) = self.bind(env, &name.text, id, parameters, arguments, place) else { return Value::Failed };
        let mut inner = self.env(id);
        inner.locals = bound;
        self.open.push(id);
        let before = self.out.requirements.len();
        let result = self.formula_body(
            &mut inner,
            place,
            (&name.text, id),
            kind.as_ref(),
            value.as_ref(),
            requirements,
            locals,
            offers,
        );
        self.open.pop();
        self.hang_on(before, &result);
        result
    }

    /// A formula outside its validity gives no result: what it returns hangs on its requirements.
    fn hang_on(&mut self, first: usize, result: &Value) {
        let values: Vec<&Value> = match result {
            Value::Object(object) => object.members.iter().map(|(_, value)| value).collect(),
            value => vec![value],
        };
        let mut nodes = Vec::new();
        for value in values {
            if let Value::Number(typed) = value
                // An argument handed through is not the formula's.
                && !matches!(self.out.model.graph.op(typed.node), Op::Literal(_) | Op::Input(_) | Op::Quantity(..))
            {
                nodes.push(typed.node);
            }
        }
        for requirement in self.out.requirements.iter_mut().skip(first) {
            requirement.results.extend(&nodes);
        }
    }

    #[allow(clippy::too_many_arguments)]
    fn formula_body(
        &mut self,
        env: &mut Env,
        place: Place,
        (name, id): (&SmolStr, ItemId),
        kind: Option<&pintle_syntax::ast::Name>,
        value: Option<&pintle_syntax::ast::Definition>,
        requirements: &[Expr],
        locals: &[pintle_syntax::ast::Field],
        offers: &[pintle_syntax::ast::Name],
    ) -> Value {
        let mut last = Value::Failed;
        for field in locals {
            let (Some(segment), Some(definition)) = (field.path.segments.first(), &field.value) else { continue };
            last = self.definition(env, definition);
            if let (Value::Number(typed), Some(kind)) = (&last, &field.kind) {
                let typed = typed.clone();
                let kind = self.kind_named(env, kind);
                last = match kind.and_then(|kind| self.expect_kind(&typed, kind, "this line", typed.place)) {
                    Some(typed) => Value::Number(typed),
                    None => Value::Failed,
                };
            }
            env.define(segment.name.text.clone(), last.clone());
        }
        self.requirements(env, requirements, name.clone(), place, id);
        if let Some(definition) = value {
            last = self.definition(env, definition);
        }
        if offers.len() > 1 {
            let members = offers
                .iter()
                .map(|offer| (offer.text.clone(), env.local(&offer.text).cloned().unwrap_or(Value::Failed)))
                .collect();
            return Value::plain(name.clone(), "the results of a formula", members);
        }
        if let [offer] = offers {
            last = env.local(&offer.text).cloned().unwrap_or(Value::Failed);
        }
        match (last, kind) {
            (Value::Number(typed), Some(kind)) => {
                let Some(kind) = self.kind_named(env, kind) else { return Value::Failed };
                match self.expect_kind(&typed, kind, &format!("the result of `{name}`"), typed.place) {
                    Some(typed) => Value::Number(Typed { place, ..typed }),
                    None => Value::Failed,
                }
            }
            (Value::Number(typed), None) => Value::Number(Typed { place, ..typed }),
            (other, _) => other,
        }
    }

    fn bind(
        &mut self,
        env: &mut Env,
        name: &str,
        id: ItemId,
        parameters: &[Parameter],
        arguments: &[Argument],
        place: Place,
    ) -> Option<Vec<(SmolStr, Value)>> {
        let mut given: Vec<Option<&Expr>> = vec![None; parameters.len()];
        let mut next = 0;
        for argument in arguments {
            let at = match &argument.name {
                Some(word) => parameters.iter().position(|it| it.name.text == word.text),
                None => {
                    next += 1;
                    Some(next - 1)
                }
            };
            match at.and_then(|at| given.get_mut(at)) {
                Some(slot) if slot.is_none() => *slot = Some(&argument.value),
                _ => {
                    let list: Vec<String> = parameters.iter().map(|it| it.name.text.to_string()).collect();
                    self.report(
                        Diagnostic::new(
                            codes::WRONG_ARGUMENTS,
                            env.place(argument.value.span),
                            format!("`{name}` has no place for this argument"),
                        )
                        .with_help(format!("it takes {}({})", name, list.join(", "))),
                    );
                    return None;
                }
            }
        }
        let mut bound: Vec<(SmolStr, Value)> = Vec::new();
        let mut fine = true;
        for (parameter, given) in parameters.iter().zip(given) {
            let value = match (given, &parameter.default) {
                (Some(expr), _) => self.expr(env, expr),
                (None, Some(default)) => {
                    let mut inner = self.env(id);
                    inner.locals.clone_from(&bound);
                    self.expr(&mut inner, default)
                }
                (None, None) => {
                    self.report(
                        Diagnostic::new(
                            codes::WRONG_ARGUMENTS,
                            place,
                            format!("`{name}` needs its `{}`", parameter.name.text),
                        )
                        .with_help(format!(
                            "it takes {}",
                            parameters
                                .iter()
                                .map(|it| match &it.kind {
                                    Some(kind) => format!("{} ({})", it.name.text, kind.text.replace('_', " ")),
                                    None => it.name.text.to_string(),
                                })
                                .collect::<Vec<_>>()
                                .join(", ")
                        )),
                    );
                    Value::Failed
                }
            };
            let value = match (value, &parameter.kind) {
                (Value::Number(typed), Some(kind)) => {
                    let inner = self.env(id);
                    let kind = self.kind_named(&inner, kind)?;
                    match self.expect_kind(&typed, kind, &format!("`{}` of `{name}`", parameter.name.text), typed.place)
                    {
                        Some(typed) => Value::Number(typed),
                        None => Value::Failed,
                    }
                }
                (value, _) => value,
            };
            fine &= !value.is_failed();
            bound.push((parameter.name.text.clone(), value));
        }
        fine.then_some(bound)
    }

    /// Notes `require` lines, to be judged once values are there.
    pub(super) fn requirements(
        &mut self,
        env: &mut Env,
        requirements: &[Expr],
        subject: SmolStr,
        place: Place,
        origin: ItemId,
    ) {
        for requirement in requirements {
            if let Some(condition) = self.condition(env, requirement) {
                self.out.requirements.push(Requirement {
                    condition: condition.node,
                    sides: condition.sides.map(|(left, _, right)| (left.node, right.node, left.ty)),
                    words: None,
                    subject: subject.clone(),
                    results: Vec::new(),
                    place,
                    origin: Place { item: origin, span: requirement.span },
                });
            }
        }
    }

    /// A bare word in an argument: `flow = back`.
    pub(super) fn word<'e>(&self, expr: &'e Expr) -> Option<&'e str> {
        match &expr.kind {
            ExprKind::Path(path) => match path.segments.as_slice() {
                [segment] => Some(segment.name.text.as_str()),
                _ => None,
            },
            _ => None,
        }
    }
}

fn unary_function(name: &str) -> Option<Function> {
    Some(match name {
        "abs" => Function::Abs,
        "acos" => Function::Acos,
        "asin" => Function::Asin,
        "atan" => Function::Atan,
        "cbrt" | "sqrt" => Function::Sqrt,
        "ceil" => Function::Ceil,
        "cos" => Function::Cos,
        "cosh" => Function::Cosh,
        "exp" => Function::Exp,
        "floor" => Function::Floor,
        "ln" => Function::Ln,
        "log10" => Function::Log10,
        "round" => Function::Round,
        "sign" => Function::Sign,
        "sin" => Function::Sin,
        "sinh" => Function::Sinh,
        "tan" => Function::Tan,
        "tanh" => Function::Tanh,
        _ => return None,
    })
}
