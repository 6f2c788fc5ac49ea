//! Materials.

use super::fields::Fields;
use super::value::{Entity, Object, Value};
use super::{Env, Lowerer};
use crate::results::Group;
use pintle_syntax::ast::{Clauses, Field, Item, Name};
use std::rc::Rc;

/// Properties that a material may state, with their kinds.
pub const PROPERTIES: &[(&str, &str)] = &[
    ("density", "density"),
    ("yield", "stress"),
    ("tensile", "stress"),
    ("fatigue", "stress"),
    ("youngs_modulus", "modulus"),
    ("shear_modulus", "modulus"),
    ("poisson", "ratio"),
    ("specific_heat", "specific_heat"),
    ("thermal_expansion", "thermal_expansion"),
    ("thermal_conductivity", "thermal_conductivity"),
    ("max_temperature", "temperature"),
    ("friction", "ratio"),
];

impl<'s> Lowerer<'s, '_> {
    pub(super) fn material(&mut self, env: &mut Env, item: &'s Item, name: &Name, fields: &'s [Field]) -> Value {
        let clauses: &'s Clauses = &item.clauses;
        let mut fields = Fields::new(name.text.clone(), env, env.place(name.span), fields, clauses);
        let mut members = Vec::new();
        for (property, kind) in PROPERTIES {
            if let Some(typed) = self.take_number(&mut fields, property, kind, Group::Field) {
                members.push(((*property).into(), Value::Number(typed)));
            }
        }
        self.finish(fields, env, &[]);
        Value::Object(Rc::new(Object {
            name: name.text.clone(),
            what: "a material",
            members,
            entity: Entity::Material,
        }))
    }
}
