//! Loads, springs and brakes.

use super::fields::Fields;
use super::space::Arithmetic;
use super::value::{Entity, Object, Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use crate::results::Group;
use pintle_graph::{Function, NodeId};
use pintle_syntax::ast::{Field, Item, LoadPath, Name, Path};
use pintle_text::Diagnostic;
use smol_str::SmolStr;
use std::rc::Rc;

/// Something that moves along a straight path.
#[derive(Clone, Debug)]
pub struct Load {
    /// Its mass, kg.
    pub mass: NodeId,
    /// Height gained per length of travel up the path: 1, the sine of the slope, or 0.
    pub rise: NodeId,
    /// Whether that is the literal zero: a level path.
    pub level: bool,
}

/// A spring.
#[derive(Clone, Debug)]
pub struct Spring {
    /// Its rate, N/m or N*m/rad^2 in SI numbers.
    pub rate: NodeId,
    /// Whether it is twisted rather than pulled.
    pub torsion: bool,
}

/// A brake.
#[derive(Clone, Debug)]
pub struct Brake {
    /// The member it acts on, as written.
    pub on: Option<SmolStr>,
}

impl<'s> Lowerer<'s, '_> {
    pub(super) fn load(
        &mut self,
        env: &mut Env,
        item: &'s Item,
        name: &Name,
        fields: &'s [Field],
        path: Option<&'s LoadPath>,
    ) -> Value {
        let place = env.place(name.span);
        let mut fields = Fields::new(name.text.clone(), env, place, fields, &item.clauses);
        let mass = self.need_number(&mut fields, "mass", "mass", Group::Member);
        let rise = match path {
            Some(LoadPath::Vertical(_)) => Some(self.num(1.0)),
            Some(LoadPath::Level(_)) => Some(self.num(0.0)),
            Some(LoadPath::Incline(slope)) => {
                let slope = self.number(env, slope);
                let slope = slope.and_then(|slope| self.expect(&slope, "angle", "the slope"));
                slope.map(|slope| self.apply(Function::Sin, slope.node))
            }
            None => {
                self.report(
                    Diagnostic::new(codes::MISSING_FIELD, place, format!("`{}` does not state its `path`", name.text))
                        .with_help("add `path = vertical`, `path = level` or `path = incline ANGLE`"),
                );
                None
            }
        };
        self.finish(fields, env, &["path"]);
        let (Some(mass), Some(rise)) = (mass, rise) else { return Value::Failed };
        let level = matches!(path, Some(LoadPath::Level(_)));
        if !level {
            self.out.hazards.hoisting = true;
        }
        let members = vec![("mass".into(), Value::Number(mass.clone()))];
        Value::Object(Rc::new(Object {
            name: name.text.clone(),
            what: "a load",
            members,
            entity: Entity::Load(Load { mass: mass.node, rise, level }),
        }))
    }

    pub(super) fn spring(
        &mut self,
        env: &mut Env,
        item: &'s Item,
        name: &Name,
        on: Option<&Path>,
        fields: &'s [Field],
    ) -> Value {
        let place = env.place(name.span);
        if let Some(on) = on {
            self.member_name(env, on);
        }
        let mut fields = Fields::new(name.text.clone(), env, place, fields, &item.clauses);
        self.out.hazards.spring = true;
        let rate = match self.take(&mut fields, "rate") {
            Some((mut field_env, field)) => {
                let typed = self.field_quantity(&mut field_env, &fields, field, "rate", None, Group::Member);
                typed.and_then(|typed| self.spring_rate(typed, name))
            }
            None => {
                self.missing(&fields, "rate", "stiffness, N/m, or torsional stiffness, N*m/rad");
                None
            }
        };
        self.finish(fields, env, &[]);
        let Some((rate, torsion)) = rate else { return Value::Failed };
        Value::Object(Rc::new(Object {
            name: name.text.clone(),
            what: "a spring",
            members: vec![("rate".into(), Value::Number(rate.clone()))],
            entity: Entity::Spring(Spring { rate: rate.node, torsion }),
        }))
    }

    fn spring_rate(&mut self, rate: Typed, name: &Name) -> Option<(Typed, bool)> {
        if self.is_of_kind(&rate, "stiffness") {
            return Some((rate, false));
        }
        if self.is_of_kind(&rate, "torsional_stiffness") {
            return Some((rate, true));
        }
        self.report(
            Diagnostic::new(
                codes::UNIT_MISMATCH,
                rate.place,
                format!(
                    "the rate of `{}` is expected as stiffness (N/m) or torsional stiffness (N*m/rad), found {}",
                    name.text,
                    rate.ty.words()
                ),
            )
            .with_help("a spring that is pulled has N/m, one that is twisted N*m/rad"),
        );
        None
    }

    pub(super) fn brake(
        &mut self,
        env: &mut Env,
        item: &'s Item,
        name: &Name,
        on: Option<&Path>,
        fields: &'s [Field],
    ) -> Value {
        let place = env.place(name.span);
        let on = on.and_then(|on| self.member_name(env, on));
        let mut fields = Fields::new(name.text.clone(), env, place, fields, &item.clauses);
        self.out.hazards.braking = true;
        let mut members: Vec<(SmolStr, Value)> = Vec::new();
        if let Some(torque) = self.need_number(&mut fields, "torque", "torque", Group::Member) {
            members.push(("torque".into(), Value::Number(torque)));
        }
        for (field, kind) in [("delay", "time"), ("build_up", "time"), ("inertia", "moment_of_inertia")] {
            if let Some(typed) = self.take_number(&mut fields, field, kind, Group::Member) {
                members.push((field.into(), Value::Number(typed)));
            }
        }
        self.finish(fields, env, &[]);
        if members.is_empty() {
            return Value::Failed;
        }
        Value::Object(Rc::new(Object {
            name: name.text.clone(),
            what: "a brake",
            members,
            entity: Entity::Brake(Brake { on }),
        }))
    }

    /// The full name of a rotor or load; None after a report.
    pub(super) fn member_name(&mut self, env: &mut Env, path: &Path) -> Option<SmolStr> {
        match self.path(env, path) {
            Value::Object(object) if matches!(object.entity, Entity::Rotor(_) | Entity::Load(_)) => {
                Some(object.name.clone())
            }
            Value::Failed => None,
            other => {
                let text = self.sheet.sources.text(env.place(path.span)).to_string();
                self.report(
                    Diagnostic::new(
                        codes::NOT_A_QUANTITY,
                        env.place(path.span),
                        format!("a rotor or load is needed here, but `{text}` is {}", other.what()),
                    )
                    .with_help("put a body on a `rotor NAME about x { BODY }` first"),
                );
                None
            }
        }
    }
}
