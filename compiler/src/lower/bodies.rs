//! Bodies: a shape filled in, with a mass.

use super::fields::Fields;
use super::rotors::Contribution;
use super::space::{Arithmetic, Tensor, Vector};
use super::value::{Entity, Object, Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use crate::results::{Group, Shown};
use pintle_graph::{NodeId, Op};
use pintle_syntax::ast::{Field, Item, ItemKind, Name, Path};
use pintle_text::{Diagnostic, ItemId, Place};
use smol_str::SmolStr;
use std::rc::Rc;

/// A body: its shape filled in, perhaps without a mass yet.
#[derive(Clone, Debug)]
pub struct Body {
    /// Its full name.
    pub name: SmolStr,
    /// Where its name stands.
    pub place: Place,
    /// What shape.
    pub form: Form,
    /// Its properties, once a mass is known.
    pub properties: Option<Properties>,
    /// Its volume, m^3, if the shape has one.
    pub volume: Option<NodeId>,
    /// Its density, kg/m^3, where it has volume and mass.
    pub density: Option<NodeId>,
}

/// Where the formulas of a body come from.
#[derive(Clone, Debug)]
pub enum Form {
    /// A shape of a library or sheet, with its parameters bound.
    Shape(ItemId, Vec<(SmolStr, Value)>),
    /// Integrals at unit density, from a built-in shape.
    Solid(Solid),
    /// Mass and inertia as measured.
    Measured(Properties),
}

/// Integrals of a body of unit density, about its centre of mass.
#[derive(Clone, Debug)]
pub struct Solid {
    /// m^3
    pub volume: NodeId,
    /// m
    pub centre: Vector,
    /// m^5
    pub second: Tensor,
    /// m
    pub outer_radius: NodeId,
}

/// Mass, centre and inertia of a body in its own frame.
#[derive(Clone, Debug)]
pub struct Properties {
    /// kg
    pub mass: NodeId,
    /// m
    pub centre: Vector,
    /// About the own axis direction through the centre of mass, kg*m^2.
    pub axial: NodeId,
    /// About the centre of mass; None where only the own axis is known.
    pub tensor: Option<Tensor>,
    /// m
    pub outer_radius: Option<NodeId>,
}

impl Properties {
    /// Puts a named node in the place of the axial moment.
    pub(super) fn name_axial(&mut self, named: NodeId) {
        if let Some(tensor) = &mut self.tensor {
            for member in tensor.iter_mut().take(2).filter(|member| **member == self.axial) {
                *member = named;
            }
        }
        self.axial = named;
    }
}

impl<'s> Lowerer<'s, '_> {
    pub(super) fn body(
        &mut self,
        env: &mut Env,
        item: &'s Item,
        name: &Name,
        shape: &Path,
        fields: &'s [Field],
    ) -> Value {
        if let Some(repeat) = &item.clauses.repeat {
            return self.series(env, repeat, name, |this, env, name| this.one_body(env, item, name, shape, fields));
        }
        self.one_body(env, item, name, shape, fields)
    }

    fn one_body(&mut self, env: &mut Env, item: &'s Item, name: &Name, shape: &Path, fields: &'s [Field]) -> Value {
        let place = env.place(name.span);
        let mut fields = Fields::new(name.text.clone(), env, place, fields, &item.clauses);
        fields.locals.clone_from(&env.locals);
        let word = match shape.segments.as_slice() {
            [segment] => segment.name.text.clone(),
            _ => SmolStr::default(),
        };
        let built_in = matches!(word.as_str(), "turned" | "extruded" | "mesh" | "measured")
            && self.sheet.lookup(env.origin, &word).is_none();
        let form = if built_in {
            self.built_in_form(env, &word, &mut fields)
        } else {
            match self.path(env, shape) {
                Value::Template(id) => self.shape_form(env, id, shape, &mut fields),
                Value::Failed => None,
                other => {
                    self.report(
                        Diagnostic::new(
                            codes::UNKNOWN_NAME,
                            env.place(shape.span),
                            format!("`{word}` is {}, not a shape", other.what()),
                        )
                        .with_help(
                            "`pintle list shapes` shows the shapes; turned, extruded, mesh and measured are built in",
                        ),
                    );
                    None
                }
            }
        };
        let Some((form, mut members)) = form else { return Value::Failed };
        let measured = matches!(form, Form::Measured(_));
        let owns_mass = matches!(&form, Form::Shape(_, bound) if bound.iter().any(|(name, _)| name == "mass"));
        let (mut stated_mass, mut density, mut failed) = (None, None, false);
        if !measured && !owns_mass {
            if fields.has("mass") || self.has_override(&fields, "mass") {
                stated_mass = self.take_number(&mut fields, "mass", "mass", Group::Body);
                failed |= stated_mass.is_none();
            }
            if fields.has("density") || self.has_override(&fields, "density") {
                density = self.take_number(&mut fields, "density", "density", Group::Body);
                failed |= density.is_none();
            }
            if fields.has("material") || self.has_override(&fields, "material") {
                match self.material_density(&mut fields) {
                    Some(of_material) if density.is_none() => density = Some(of_material),
                    Some(of_material) => {
                        let stated = density.as_ref().map_or(of_material.place, |it| it.place);
                        self.report(
                            Diagnostic::new(
                                codes::CONFLICTING_FIELDS,
                                stated,
                                format!("`{}` states both a density and a material", name.text),
                            )
                            .with_label(of_material.place, "the material brings its own density")
                            .with_help("keep one of them"),
                        );
                    }
                    None => failed = true,
                }
            }
        }
        let known: &[&str] = if measured { &[] } else { &["material", "density", "mass"] };
        self.finish(fields, env, known);
        if failed {
            return Value::Failed;
        }
        let volume = self.form_volume(&form, place);
        // Named before they are used, so that what follows reads `drum.mass`, not all that a mass is made of.
        let volume = volume.map(|volume| {
            let (value, node) = self.named_member(&name.text, "volume", "volume", volume, Group::Body, place);
            members.push(("volume".into(), value));
            node
        });
        let mut mass_value = None;
        let mass = match (&stated_mass, &density, volume) {
            (Some(mass), Some(density), Some(volume)) => {
                self.agreeing_mass(mass, density, volume, &name.text, place);
                Some(mass.node)
            }
            (Some(mass), _, _) => Some(mass.node),
            (None, Some(density), Some(volume)) => {
                let mass = self.times(density.node, volume);
                let (value, node) = self.named_member(&name.text, "mass", "mass", mass, Group::Body, place);
                mass_value = Some(value);
                Some(node)
            }
            (None, Some(density), None) => {
                self.report(
                    Diagnostic::new(
                        codes::MISSING_FIELD,
                        place,
                        format!("`{}` has no volume of its own, so a density or material gives it no mass", name.text),
                    )
                    .with_label(density.place, "stated here")
                    .with_help("state its mass: `mass = ... kg`"),
                );
                return Value::Failed;
            }
            (None, None, None) if !measured && !owns_mass => {
                self.report(
                    Diagnostic::new(codes::MISSING_FIELD, place, format!("`{}` needs a `mass`", name.text))
                        .with_help("an idealised shape has no volume: state `mass = ... kg`"),
                );
                return Value::Failed;
            }
            _ => None,
        };
        let density_node = match (&density, mass, volume) {
            (Some(density), ..) => Some(density.node),
            (None, Some(mass), Some(volume)) => Some(self.over(mass, volume)),
            _ => None,
        };
        let mut body = Body { name: name.text.clone(), place, form, properties: None, volume, density: density_node };
        if measured || owns_mass || mass.is_some() {
            let source = self.source(&item.clauses).unwrap_or_default();
            let Some(mut properties) = self.properties(&body, mass) else { return Value::Failed };
            let mass_value = mass_value.unwrap_or_else(|| {
                // A mass that is stated, measured or a parameter is in the table already.
                Value::Number(Typed { node: properties.mass, ty: self.kind_type("mass"), place })
            });
            members.push(("mass".into(), mass_value));
            if let (Some(density), true) = (density_node, density.is_none()) {
                members.push(("density".into(), self.body_member(&body, "density", "density", density)));
            } else if let Some(density) = &density {
                members.push(("density".into(), Value::Number(density.clone())));
            }
            let (moment, node) =
                self.named_member(&body.name, "J", "moment_of_inertia", properties.axial, Group::Body, place);
            properties.name_axial(node);
            if !source.is_empty()
                && let Op::Quantity(id, _) = self.out.model.graph.op(node)
                && let Some(quantity) = self.out.model.quantities.get_mut(id.0 as usize)
            {
                quantity.source = source;
            }
            members.push(("J".into(), moment.clone()));
            members.push(("J_axis".into(), moment.clone()));
            members.push(("J_x".into(), moment));
            if let Some(tensor) = properties.tensor {
                for (word, at) in [("J_y", 1), ("J_z", 2)] {
                    members.push((word.into(), self.body_member(&body, word, "moment_of_inertia", tensor[at])));
                }
                if tensor[1] == tensor[2]
                    && let Some((_, value)) = members.iter().find(|(name, _)| name == "J_y")
                {
                    let value = value.clone();
                    members.push(("J_cross".into(), value));
                }
            }
            let centre = self.centre_value(&body.name, properties.centre, place);
            members.push(("centre".into(), centre));
            if let Some(reach) = properties.outer_radius {
                members.push(("outer_radius".into(), self.body_member(&body, "outer_radius", "radius", reach)));
            }
            body.properties = Some(properties);
        }
        Value::Object(Rc::new(Object { name: name.text.clone(), what: "a body", members, entity: Entity::Body(body) }))
    }

    fn has_override(&self, fields: &Fields<'_>, name: &str) -> bool {
        self.overrides.fields.contains_key(format!("{}.{name}", fields.owner).as_str())
    }

    /// A property under its own name, and the node that carries the name.
    pub(super) fn named_member(
        &mut self,
        owner: &str,
        word: &str,
        kind: &str,
        node: NodeId,
        group: Group,
        place: Place,
    ) -> (Value, NodeId) {
        let value = self.built_in(&[owner, word], group, Shown::OnRequest, kind, node, place);
        let named = match &value {
            Value::Number(typed) => typed.node,
            _ => node,
        };
        (value, named)
    }

    fn body_member(&mut self, body: &Body, word: &str, kind: &str, node: NodeId) -> Value {
        self.built_in(&[&body.name, word], Group::Body, Shown::OnRequest, kind, node, body.place)
    }

    fn centre_value(&mut self, owner: &str, centre: Vector, place: Place) -> Value {
        let members = ["x", "y", "z"].into_iter().zip(centre).map(|(word, node)| {
            let name = [owner, "centre", word];
            (word.into(), self.built_in(&name, Group::Body, Shown::OnRequest, "length", node, place))
        });
        let members = members.collect();
        let name = self.dotted(&[owner, "centre"]);
        Value::plain(name, "a point", members)
    }

    fn material_density(&mut self, fields: &mut Fields<'s>) -> Option<Typed> {
        let (mut env, expr) = self.take_expr(fields, "material")?;
        let place = env.place(expr.span);
        match self.expr(&mut env, expr) {
            Value::Object(object) if matches!(object.entity, Entity::Material) => match object.member("density") {
                Some(Value::Number(typed)) => Some(Typed { place, ..typed.clone() }),
                _ => {
                    self.report(Diagnostic::new(
                        codes::MISSING_FIELD,
                        place,
                        format!("the material `{}` states no density", object.name),
                    ));
                    None
                }
            },
            Value::Failed => None,
            other => {
                self.report(
                    Diagnostic::new(
                        codes::NOT_A_QUANTITY,
                        place,
                        format!("a material is needed here, but this is {}", other.what()),
                    )
                    .with_help(
                        "`material NAME { density = ... }` declares one; `use std.materials` brings the library's",
                    ),
                );
                None
            }
        }
    }

    fn agreeing_mass(&mut self, mass: &Typed, density: &Typed, volume: NodeId, name: &SmolStr, place: Place) {
        let computed = self.times(density.node, volume);
        let (Some(stated), Some(by_density)) = (self.constant(mass.node), self.constant(computed)) else { return };
        let tolerance = self.half_width(mass.node).max(1e-6 * stated.abs());
        if (stated - by_density).abs() > tolerance {
            self.report(
                Diagnostic::new(
                    codes::CONFLICTING_FIELDS,
                    mass.place,
                    format!(
                        "`{name}` states a mass of {stated:.6} kg, but density times volume gives {by_density:.6} kg"
                    ),
                )
                .with_label(density.place, "density from here")
                .with_label(place, "volume from its sizes")
                .with_help("correct one of them, drop one, or give the mass a tolerance that covers the difference"),
            );
        }
    }

    /// Half-width of a toleranced input behind a quantity; 0 where there is none.
    pub(super) fn half_width(&mut self, node: NodeId) -> f64 {
        let mut node = node;
        loop {
            match self.out.model.graph.op(node) {
                pintle_graph::Op::Quantity(_, inner) => node = inner,
                pintle_graph::Op::Input(input) => {
                    return match self.out.model.inputs.get(input.0 as usize).map(|input| &input.value) {
                        Some(crate::model::InputValue::Given {
                            tolerance: Some(crate::model::InputTolerance::Limits { low, high }),
                            ..
                        }) => (high - low) / 2.0,
                        _ => 0.0,
                    };
                }
                _ => return 0.0,
            }
        }
    }

    fn form_volume(&mut self, form: &Form, place: Place) -> Option<NodeId> {
        match form {
            Form::Solid(solid) => Some(solid.volume),
            Form::Measured(_) => None,
            Form::Shape(id, bound) => self.shape_volume(*id, bound, place),
        }
    }

    /// Properties under a mass; for `less`, under the host's density.
    pub(super) fn properties(&mut self, body: &Body, mass: Option<NodeId>) -> Option<Properties> {
        match &body.form {
            Form::Measured(properties) => Some(properties.clone()),
            Form::Solid(solid) => {
                let mass = mass?;
                let density = self.over(mass, solid.volume);
                let tensor = solid.second.map(|member| self.times(density, member));
                Some(Properties {
                    mass,
                    centre: solid.centre,
                    axial: tensor[0],
                    tensor: Some(tensor),
                    outer_radius: Some(solid.outer_radius),
                })
            }
            Form::Shape(id, bound) => {
                let bound = bound.clone();
                self.shape_properties(*id, &bound, mass, body)
            }
        }
    }

    /// The body as it stands in its own frame.
    pub(super) fn own_contribution(&mut self, body: &Body) -> Option<Contribution> {
        let properties = body.properties.as_ref()?;
        Some(Contribution {
            mass: properties.mass,
            centre: properties.centre,
            tensor: properties.tensor,
            axial: properties.axial,
            reach: properties.outer_radius,
        })
    }

    fn shape_form(
        &mut self,
        env: &mut Env,
        id: ItemId,
        shape: &Path,
        fields: &mut Fields<'s>,
    ) -> Option<(Form, Vec<(SmolStr, Value)>)> {
        let sheet = self.sheet;
        let item = sheet.item(id)?;
        let ItemKind::Shape { parameters, name: shape_name, requirements, .. } = &item.kind else {
            self.report(Diagnostic::new(codes::UNKNOWN_NAME, env.place(shape.span), "this is a formula, not a shape"));
            return None;
        };
        let mut bound: Vec<(SmolStr, Value)> = Vec::new();
        let mut fine = true;
        for parameter in parameters {
            let word = parameter.name.text.as_str();
            let there = fields.has(word) || self.has_override(fields, word);
            let value = if there {
                let (mut field_env, field) = self.take(fields, word)?;
                field_env.locals.clone_from(&fields.locals);
                self.shape_argument(&mut field_env, fields, field, word, parameter.kind.as_ref(), id)
            } else if let Some(default) = &parameter.default {
                let mut inner = self.env(id);
                inner.locals.clone_from(&bound);
                Some(self.expr(&mut inner, default))
            } else {
                let kind = parameter.kind.as_ref().map_or("quantity", |kind| kind.text.as_str()).to_string();
                let mut diagnostic = Diagnostic::new(
                    codes::MISSING_FIELD,
                    fields.place,
                    format!("`{}`, a {}, does not state its `{word}`", fields.owner, shape_name.text),
                )
                .with_help(format!("add `{word} = ...` ({})", kind.replace('_', " ")));
                if let Some(near) = crate::nearest::nearest(word, fields.names()).first() {
                    diagnostic.help = Some(format!("is `{near}` meant to be `{word}` ({})?", kind.replace('_', " ")));
                }
                self.report(diagnostic);
                None
            };
            match value {
                Some(value) if !value.is_failed() => bound.push((parameter.name.text.clone(), value)),
                _ => fine = false,
            }
        }
        if !fine {
            // Unknown fields are worth showing even so.
            return None;
        }
        let mut inner = self.env(id);
        inner.locals.clone_from(&bound);
        let (subject, place) = (fields.owner.clone(), fields.place);
        self.requirements(&mut inner, requirements, subject, place, id);
        Some((Form::Shape(id, bound.clone()), bound))
    }

    fn shape_argument(
        &mut self,
        env: &mut Env,
        fields: &Fields<'s>,
        field: &'s Field,
        word: &str,
        kind: Option<&Name>,
        shape: ItemId,
    ) -> Option<Value> {
        let definition = field.value.as_ref()?;
        if let pintle_syntax::ast::Definition::Value(expr) = definition
            && matches!(expr.kind, pintle_syntax::ast::ExprKind::List(_) | pintle_syntax::ast::ExprKind::Point(_))
        {
            return Some(self.expr(env, expr));
        }
        let kind = match kind {
            Some(kind) if kind.text == "point" => {
                let pintle_syntax::ast::Definition::Value(expr) = definition else { return None };
                return Some(self.expr(env, expr));
            }
            Some(kind) => {
                let inner = self.env(shape);
                Some(self.kind_named(&inner, kind)?.name())
            }
            None => None,
        };
        self.field_quantity(env, fields, field, word, kind, Group::Body).map(Value::Number)
    }
}
