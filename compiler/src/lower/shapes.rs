//! Shapes of the library: their members read under bound parameters.

use super::bodies::{Body, Properties};
use super::space::{Arithmetic, Vector};
use super::templates::{self, Part};
use super::value::{Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use pintle_graph::{NodeId, Op};
use pintle_syntax::ast::{Definition, ExprKind, Field, ItemKind};
use pintle_text::{Diagnostic, ItemId, Place};
use smol_str::SmolStr;

/// Whether members that need the mass are read.
#[derive(Clone, Copy, PartialEq)]
enum Reach {
    /// Up to `volume`.
    Volume,
    /// All.
    All,
}

impl<'s> Lowerer<'s, '_> {
    /// Members of a shape, each after those that it uses.
    fn shape_members(
        &mut self,
        id: ItemId,
        bound: &[(SmolStr, Value)],
        mass: Option<NodeId>,
        reach: Reach,
        place: Place,
    ) -> Option<Env> {
        let sheet = self.sheet;
        let ItemKind::Shape { members, .. } = &sheet.item(id)?.kind else { return None };
        let mut env = self.env(id);
        env.locals = bound.to_vec();
        if let Some(mass) = mass {
            let ty = self.kind_type("mass");
            env.define("mass", Value::Number(Typed { node: mass, ty, place }));
        }
        // Written order is nearly always an order of need; what comes too early waits a round.
        let mut waiting: Vec<&Field> = members.iter().collect();
        loop {
            let names: Vec<SmolStr> = waiting.iter().filter_map(|field| word(field)).collect();
            let before = waiting.len();
            let mut later = Vec::new();
            for field in std::mem::take(&mut waiting) {
                let mut needs = false;
                let mut needs_mass = false;
                mentions(field, &mut |name| {
                    needs |= names.iter().any(|other| other == name) && word(field).as_deref() != Some(name);
                    needs_mass |= name == "mass";
                });
                if needs_mass && mass.is_none() {
                    if reach == Reach::All || word(field).as_deref() == Some("volume") {
                        later.push(field);
                    }
                    continue;
                }
                if needs && names_before(&env, field, &names) {
                    later.push(field);
                    continue;
                }
                let (Some(name), Some(definition)) = (word(field), &field.value) else { continue };
                if reach == Reach::Volume && name == "section" {
                    continue;
                }
                let mut value = self.definition(&mut env, definition);
                if let (Value::Number(typed), Some(kind)) = (&value, member_kind(&name)) {
                    let typed = typed.clone();
                    value = match self.expect(&typed, kind, &format!("`{name}` of a shape")) {
                        Some(typed) => Value::Number(typed),
                        None => Value::Failed,
                    };
                }
                env.define(name, value);
            }
            if later.is_empty() || later.len() == before {
                if let Some(field) = later.first()
                    && reach == Reach::All
                    && !self.reported_shapes.contains(&id)
                {
                    self.reported_shapes.push(id);
                    self.report(Diagnostic::new(
                        codes::CIRCULAR_DEFINITION,
                        Place { item: id, span: field.span },
                        "members of this shape need each other in a circle",
                    ));
                }
                return Some(env);
            }
            waiting = later;
        }
    }

    pub(super) fn shape_volume(&mut self, id: ItemId, bound: &[(SmolStr, Value)], place: Place) -> Option<NodeId> {
        let sheet = self.sheet;
        let ItemKind::Shape { members, .. } = &sheet.item(id)?.kind else { return None };
        if !members.iter().any(|field| word(field).as_deref() == Some("volume")) {
            return None;
        }
        let key = templates::key(id, bound, Part::Volume, &self.out.model.graph);
        if let Some((key, parameters)) = &key
            && let Some([volume]) = self.replay(key, parameters).as_deref()
        {
            return Some(*volume);
        }
        let before = self.before_reading();
        let env = self.shape_members(id, bound, None, Reach::Volume, place)?;
        let Some(Value::Number(typed)) = env.local("volume") else { return None };
        if let Some((key, parameters)) = key {
            self.record(key, before, parameters, vec![typed.node]);
        }
        Some(typed.node)
    }

    pub(super) fn shape_properties(
        &mut self,
        id: ItemId,
        bound: &[(SmolStr, Value)],
        mass: Option<NodeId>,
        body: &Body,
    ) -> Option<Properties> {
        let mass = mass.or_else(|| match bound.iter().find(|(name, _)| name == "mass") {
            Some((_, Value::Number(typed))) => Some(typed.node),
            _ => None,
        })?;
        let mut key = templates::key(id, bound, Part::Properties, &self.out.model.graph);
        if let Some((_, parameters)) = &mut key
            && !parameters.contains(&mass)
        {
            parameters.push(mass);
        }
        if let Some((key, parameters)) = &key
            && let Some(results) = self.replay(key, parameters)
            && let Some((&[x, y, z, axial, yy, zz, xy, xz, yz], reach)) = results.split_first_chunk()
        {
            let tensor = Some([axial, yy, zz, xy, xz, yz]);
            return Some(Properties { mass, centre: [x, y, z], axial, tensor, outer_radius: reach.first().copied() });
        }
        let before = self.before_reading();
        let env = self.shape_members(id, bound, Some(mass), Reach::All, body.place)?;
        let number = |env: &Env, name: &str| match env.local(name) {
            Some(Value::Number(typed)) => Some(typed.node),
            _ => None,
        };
        let centre: Vector = match env.local("centre").cloned() {
            Some(value) => {
                let components = self.three(value, body.place, "the centre of a shape")?;
                [components[0].node, components[1].node, components[2].node]
            }
            None => self.origin(),
        };
        let zero = self.num(0.0);
        let (axial, y, z) = match (number(&env, "J_axis"), number(&env, "J_cross")) {
            (Some(axial), Some(cross)) => (axial, cross, cross),
            _ => match (number(&env, "J_x"), number(&env, "J_y"), number(&env, "J_z")) {
                (Some(x), Some(y), Some(z)) => (x, y, z),
                _ => {
                    if !self.reported_shapes.contains(&id) {
                        self.reported_shapes.push(id);
                        self.report(
                            Diagnostic::new(
                                codes::MISSING_FIELD,
                                self.name_place(id),
                                "this shape does not state its moments of inertia",
                            )
                            .with_label(body.place, "used here")
                            .with_help("state J_axis and J_cross, or J_x, J_y and J_z"),
                        );
                    }
                    return None;
                }
            },
        };
        let mut product = |name: &str| match number(&env, name) {
            Some(node) => self.negate(node),
            None => zero,
        };
        let (xy, xz, yz) = (product("product_xy"), product("product_xz"), product("product_yz"));
        let outer_radius = match number(&env, "outer_radius") {
            Some(node) => Some(node),
            None => self.section_radius(&env),
        };
        let tensor = [axial, y, z, xy, xz, yz];
        if let Some((key, parameters)) = key {
            let results = centre.into_iter().chain(tensor).chain(outer_radius).collect();
            self.record(key, before, parameters, results);
        }
        Some(Properties { mass, centre, axial, tensor: Some(tensor), outer_radius })
    }

    /// The greatest radial coordinate of the section.
    fn section_radius(&mut self, env: &Env) -> Option<NodeId> {
        let Some(Value::List(points, _)) = env.local("section") else { return None };
        let mut greatest: Option<NodeId> = None;
        for point in points {
            let Value::Point(items, _) = point else { continue };
            let Some(Value::Number(radial)) = items.get(1) else { continue };
            greatest = Some(match greatest {
                None => radial.node,
                Some(so_far) if so_far == radial.node => so_far,
                Some(so_far) => self.out.model.graph.add(Op::Max(so_far, radial.node)),
            });
        }
        greatest
    }
}

fn word(field: &Field) -> Option<SmolStr> {
    field.path.segments.first().map(|segment| segment.name.text.clone())
}

fn member_kind(name: &str) -> Option<&'static str> {
    Some(match name {
        "volume" => "volume",
        "J_axis" | "J_cross" | "J_x" | "J_y" | "J_z" | "product_xy" | "product_xz" | "product_yz" => {
            "moment_of_inertia"
        }
        "outer_radius" => "radius",
        _ => return None,
    })
}

/// Whether a member names one that has no value yet.
fn names_before(env: &Env, field: &Field, names: &[SmolStr]) -> bool {
    let mut waits = false;
    mentions(field, &mut |name| {
        waits |=
            names.iter().any(|other| other == name) && env.local(name).is_none() && word(field).as_deref() != Some(name)
    });
    waits
}

fn mentions(field: &Field, f: &mut dyn FnMut(&str)) {
    fn walk(expr: &pintle_syntax::ast::Expr, f: &mut dyn FnMut(&str)) {
        match &expr.kind {
            ExprKind::Path(path) => {
                if let Some(segment) = path.segments.first() {
                    f(&segment.name.text);
                }
            }
            ExprKind::Call { arguments, .. } => arguments.iter().for_each(|argument| walk(&argument.value, f)),
            ExprKind::Unary { operand, .. } => walk(operand, f),
            ExprKind::Binary { left, right, .. } => {
                walk(left, f);
                walk(right, f);
            }
            ExprKind::About { value, .. } => walk(value, f),
            ExprKind::Point(items) | ExprKind::List(items) => items.iter().for_each(|item| walk(item, f)),
            ExprKind::Comprehension { body, repeat } => {
                walk(&repeat.from, f);
                walk(&repeat.to, f);
                walk(body, f);
            }
            ExprKind::Number(_) | ExprKind::Text(_) | ExprKind::Missing => {}
        }
    }
    match &field.value {
        Some(Definition::Value(expr)) => walk(expr, f),
        Some(Definition::Choose(choose)) => {
            for arm in &choose.arms {
                walk(&arm.value, f);
                if let Some(condition) = &arm.condition {
                    walk(condition, f);
                }
            }
        }
        None => {}
    }
}
