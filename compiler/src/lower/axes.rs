//! Axes, and the moment of inertia about one.

use super::space::{Arithmetic, Vector};
use super::value::{Entity, Object, Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use pintle_syntax::ast::{Expr, ExprKind, Name};
use pintle_text::{Diagnostic, Place, Span};
use smol_str::SmolStr;
use std::rc::Rc;

/// A line in space.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// A point on it, m.
    pub through: Vector,
    /// Its unit vector.
    pub along: Vector,
}

impl<'s> Lowerer<'s, '_> {
    /// x, y or z through the origin.
    pub(super) fn coordinate_axis(&mut self, name: &str) -> Option<Axis> {
        let at = ["x", "y", "z"].iter().position(|it| *it == name)?;
        let through = self.origin();
        let one = self.num(1.0);
        let mut along = through;
        along[at] = one;
        Some(Axis { through, along })
    }

    pub(super) fn axis(&mut self, env: &mut Env, name: &Name, through: &Expr, along: &Expr) -> Value {
        let Some(through) = self.length_point(env, through) else { return Value::Failed };
        let Some(along) = self.direction(env, along) else { return Value::Failed };
        Value::Object(Rc::new(Object {
            name: name.text.clone(),
            what: "an axis",
            members: Vec::new(),
            entity: Entity::Axis(Axis { through, along }),
        }))
    }

    /// `x`, `y`, `z`, or the three components of a vector.
    fn direction(&mut self, env: &mut Env, expr: &Expr) -> Option<Vector> {
        if let ExprKind::Path(path) = &expr.kind
            && let [segment] = path.segments.as_slice()
            && env.local(&segment.name.text).is_none()
            && let Some(axis) = self.coordinate_axis(&segment.name.text)
        {
            return Some(axis.along);
        }
        let value = self.expr(env, expr);
        let components = self.three(value, env.place(expr.span), "a direction")?;
        let v: Vector = [components[0].node, components[1].node, components[2].node];
        let square = self.dot(v, v);
        if self.known(square) == Some(1.0) {
            return Some(v);
        }
        if self.constant(square) == Some(0.0) {
            self.report(Diagnostic::new(
                codes::UNDEFINED_VALUE,
                env.place(expr.span),
                "a direction of length zero points nowhere",
            ));
            return None;
        }
        let length = self.root(square);
        Some(v.map(|component| self.over(component, length)))
    }

    /// The components of a point; two components mean z = 0.
    pub(super) fn three(&mut self, value: Value, place: Place, what: &str) -> Option<[Typed; 3]> {
        match value {
            Value::Point(items, _) if items.len() == 3 => {
                let mut numbers = Vec::with_capacity(3);
                for item in items {
                    numbers.push(self.as_number(item, place)?);
                }
                numbers.try_into().ok()
            }
            Value::Object(object) if ["x", "y", "z"].iter().all(|name| object.member(name).is_some()) => {
                let mut numbers = Vec::with_capacity(3);
                for name in ["x", "y", "z"] {
                    let member = object.member(name).cloned().unwrap_or(Value::Failed);
                    numbers.push(self.as_number(member, place)?);
                }
                numbers.try_into().ok()
            }
            Value::Failed => None,
            other => {
                self.report(
                    Diagnostic::new(
                        codes::NOT_A_QUANTITY,
                        place,
                        format!("{what} is needed here, but this is {}", other.what()),
                    )
                    .with_help("write its three components in brackets: (0 mm, 120 mm, 0 mm)"),
                );
                None
            }
        }
    }

    /// A point whose components are lengths.
    pub(super) fn length_point(&mut self, env: &mut Env, expr: &Expr) -> Option<Vector> {
        let value = self.expr(env, expr);
        let components = self.three(value, env.place(expr.span), "a point")?;
        let mut nodes = Vec::with_capacity(3);
        for component in &components {
            nodes.push(self.expect_length(component)?.node);
        }
        nodes.try_into().ok()
    }

    /// An axis by name.
    pub(super) fn named_axis(&mut self, env: &mut Env, name: &Name) -> Option<Axis> {
        if env.local(&name.text).is_none() && self.sheet.lookup(env.origin, &name.text).is_none() {
            if let Some(axis) = self.coordinate_axis(&name.text) {
                return Some(axis);
            }
            let place = env.place(name.span);
            self.report(
                Diagnostic::new(codes::UNKNOWN_NAME, place, format!("no axis is named `{}`", name.text)).with_help(
                    "declare it: `axis NAME = through (0 mm, 0 mm, 0 mm) along y`; x, y and z pass through the origin",
                ),
            );
            return None;
        }
        let value = match (env.local(&name.text), self.sheet.lookup(env.origin, &name.text)) {
            (Some(value), _) => value.clone(),
            (None, Some(id)) => self.entity(id),
            (None, None) => Value::Failed,
        };
        match value {
            Value::Object(object) => match &object.entity {
                Entity::Axis(axis) => Some(axis.clone()),
                _ => self.coordinate_axis(&name.text).or_else(|| {
                    self.not_an_axis(env.place(name.span), &name.text, object.what);
                    None
                }),
            },
            // x, y and z stay axes even where an item of that name failed.
            Value::Failed => self.coordinate_axis(&name.text),
            other => self.coordinate_axis(&name.text).or_else(|| {
                self.not_an_axis(env.place(name.span), &name.text, &other.what());
                None
            }),
        }
    }

    fn not_an_axis(&mut self, place: Place, name: &SmolStr, what: &str) {
        self.report(Diagnostic::new(
            codes::NOT_A_QUANTITY,
            place,
            format!("an axis is needed here, but `{name}` is {what}"),
        ));
    }

    /// `drum.J about trunnion`.
    pub(super) fn about(&mut self, env: &mut Env, span: Span, value: &Expr, axis: &Name) -> Value {
        let place = env.place(span);
        let owner = match &value.kind {
            ExprKind::Path(path) if path.segments.len() >= 2 => {
                let (last, rest) = path.segments.split_last().map_or((None, [].as_slice()), |(a, b)| (Some(a), b));
                if last.is_some_and(|segment| segment.name.text == "J") {
                    let owner = pintle_syntax::ast::Path { segments: rest.to_vec(), span: path.span };
                    self.path(env, &owner)
                } else {
                    Value::Text("".into())
                }
            }
            _ => Value::Text("".into()),
        };
        let Some(axis) = self.named_axis(env, axis) else { return Value::Failed };
        let object = match owner {
            Value::Object(object) => object,
            Value::Failed => return Value::Failed,
            _ => {
                self.report(
                    Diagnostic::new(
                        codes::NOT_A_QUANTITY,
                        place,
                        "`about` needs the moment of inertia of a body or rotor before it",
                    )
                    .with_help("write `BODY.J about AXIS`"),
                );
                return Value::Failed;
            }
        };
        let node = match &object.entity {
            Entity::Rotor(rotor) => self.moment_about(&rotor.contributions.clone(), &axis),
            Entity::Body(body) => {
                let body = body.clone();
                match self.own_contribution(&body) {
                    Some(contribution) => self.moment_about(&[contribution], &axis),
                    None => None,
                }
            }
            _ => {
                self.report(Diagnostic::new(
                    codes::NOT_A_QUANTITY,
                    place,
                    format!("`{}` is {}; only a body or rotor has a moment about an axis", object.name, object.what),
                ));
                return Value::Failed;
            }
        };
        match node {
            Some(node) => Value::Number(Typed { node, ty: self.kind_type("moment_of_inertia"), place }),
            None => {
                self.report(
                    Diagnostic::new(
                        codes::MISSING_FIELD,
                        place,
                        format!("the moment of `{}` about another axis needs its cross inertia", object.name),
                    )
                    .with_help("a `measured` body in it states only its own axis; add `cross_inertia`"),
                );
                Value::Failed
            }
        }
    }
}
