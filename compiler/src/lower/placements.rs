//! Placements: where a part stands in a rotor, how often, and what it brings there.

use super::axes::Axis;
use super::bodies::Body;
use super::fields::Fields;
use super::rotors::Contribution;
use super::space::{Arithmetic, Rotation, Vector};
use super::value::{Entity, Object, Typed, Value};
use super::{Env, Lowerer};
use crate::codes;
use crate::results::Group;
use pintle_graph::NodeId;
use pintle_syntax::ast::{Name, Placement};
use pintle_text::{Diagnostic, Place};
use smol_str::SmolStr;

/// Where an alias stands, for `less ... from`.
pub(super) struct Alias {
    name: SmolStr,
    part: SmolStr,
    origin: Vector,
    turn: Rotation,
    density: Option<NodeId>,
}

/// Equal places on a circle.
struct Pattern {
    n: i64,
    /// Angle of the first.
    first: NodeId,
    /// Radius of the circle.
    off: NodeId,
    /// Its centre.
    base: Vector,
    /// Takes x to its axis.
    frame: Rotation,
}

impl<'s> Lowerer<'s, '_> {
    #[allow(clippy::too_many_arguments)]
    pub(super) fn placement(
        &mut self,
        env: &mut Env,
        rotor: &Name,
        axis: &Axis,
        placement: &'s Placement,
        contributions: &mut Vec<Contribution>,
        aliases: &mut Vec<Alias>,
    ) -> Option<()> {
        let place = env.place(placement.part.span);
        let part_text: SmolStr = self.sheet.sources.text(place).into();
        let object = match self.path(env, &placement.part) {
            Value::Object(object) if matches!(object.entity, Entity::Body(_) | Entity::Rotor(_)) => object,
            Value::Failed => return None,
            other => {
                self.report(Diagnostic::new(
                    codes::NOT_A_QUANTITY,
                    place,
                    format!("a rotor holds bodies and rotors, but `{part_text}` is {}", other.what()),
                ));
                return None;
            }
        };
        // A part that stands there again is counted, so that each field has a name of its own.
        let owner = match aliases.iter().filter(|alias| alias.part == part_text).count() {
            0 => format!("{}.{part_text}", rotor.text),
            n => format!("{}.{part_text}[{}]", rotor.text, n + 1),
        };
        let mut fields = Fields::new(owner.clone(), env, place, &placement.fields, &placement.clauses);
        fields.locals.clone_from(&env.locals);
        let named = match self.take_expr(&mut fields, "named") {
            Some((_, expr)) => self.word(expr).map(SmolStr::new),
            None => None,
        };
        let n = self.take_count(&mut fields, "places", 1)?;
        let circle = self.take_number(&mut fields, "circle_diameter", "diameter", Group::Rotor);
        let radius = self.take_number(&mut fields, "radius", "radius", Group::Rotor);
        let first = self.take_number(&mut fields, "first_at", "angle", Group::Rotor);
        let angle = self.take_number(&mut fields, "angle", "angle", Group::Rotor);
        let own_turn = self.own_turn(&mut fields)?;
        self.finish(fields, env, &[]);
        let (zero, two) = (self.num(0.0), self.num(2.0));
        let off = match (circle, radius) {
            (Some(circle), None) => self.over(circle.node, two),
            (None, Some(radius)) => radius.node,
            (None, None) => zero,
            (Some(circle), Some(radius)) => {
                self.report(
                    Diagnostic::new(
                        codes::CONFLICTING_FIELDS,
                        radius.place,
                        "both `radius` and `circle_diameter` say how far from the axis",
                    )
                    .with_label(circle.place, "and this"),
                );
                return None;
            }
        };
        let angle = first.or(angle).map_or(zero, |typed| typed.node);
        // Where the part's frame goes: its own turn, then along the axis, then round it.
        let align = self.turn_x_to(axis.along);
        let at = match &placement.at {
            None => None,
            Some(expr) => Some((self.expr(env, expr), env.place(expr.span))),
        };
        let host = match &placement.from {
            None => None,
            Some(from) => match aliases.iter().position(|alias| alias.name == from.text) {
                Some(at) => Some(at),
                None => {
                    let known: Vec<String> = aliases.iter().map(|alias| format!("`{}`", alias.name)).collect();
                    self.report(
                        Diagnostic::new(
                            codes::UNKNOWN_NAME,
                            env.place(from.span),
                            format!("no part of this rotor above is named `{}`", from.text),
                        )
                        .with_help(if known.is_empty() {
                            "place it first".into()
                        } else {
                            format!("parts are {}", known.join(", "))
                        }),
                    );
                    return None;
                }
            },
        };
        let (mut base, frame) = match host {
            Some(at) => (aliases[at].origin, aliases[at].turn),
            None => (axis.through, align),
        };
        match at {
            None => {}
            Some((Value::Number(typed), _)) => {
                let distance = self.expect_length(&typed)?.node;
                let step: Vector = axis.along.map(|component| self.times(distance, component));
                base = self.shifted(base, step);
            }
            Some((value @ Value::Point(..), at_place)) => {
                let components = self.three(value, at_place, "a point")?;
                let mut nodes = [zero; 3];
                for (slot, component) in nodes.iter_mut().zip(&components) {
                    *slot = self.expect_length(component)?.node;
                }
                let point = nodes;
                let origin = match host {
                    Some(at) => self.shifted(aliases[at].origin, point),
                    None => point,
                };
                let identity = self.identity();
                let parts = self.part_contributions(
                    &object,
                    placement,
                    host.and_then(|at| aliases[at].density),
                    &owner,
                    place,
                )?;
                for part in parts {
                    self.add_part(contributions, part, &own_turn, &identity, origin, axis, placement.less);
                }
                self.alias(aliases, named, part_text, origin, own_turn, &object);
                return Some(());
            }
            Some((Value::Failed, _)) => return None,
            Some((other, at_place)) => {
                self.report(Diagnostic::new(
                    codes::NOT_A_QUANTITY,
                    at_place,
                    format!("`at` takes a distance along the axis or a point, but this is {}", other.what()),
                ));
                return None;
            }
        }
        let parts =
            self.part_contributions(&object, placement, host.and_then(|at| aliases[at].density), &owner, place)?;
        let pattern = Pattern { n, first: angle, off, base, frame };
        for part in parts {
            // All round the circle what is left over at one place is made up for at the others.
            let centred = host.is_none() || placement.less;
            if n >= 3 && centred {
                self.add_round(contributions, &part, &own_turn, &pattern, axis, placement.less);
            } else {
                for k in 0..n {
                    self.add_one(contributions, part.clone(), &own_turn, &pattern, k, axis, placement.less);
                }
            }
        }
        self.alias(aliases, named, part_text, base, frame, &object);
        Some(())
    }

    fn alias(
        &mut self,
        aliases: &mut Vec<Alias>,
        named: Option<SmolStr>,
        part: SmolStr,
        origin: Vector,
        turn: Rotation,
        object: &Object,
    ) {
        let density = match &object.entity {
            Entity::Body(body) => body.density,
            _ => None,
        };
        aliases.push(Alias { name: named.unwrap_or_else(|| part.clone()), part, origin, turn, density });
    }

    /// `turned = [(z, 30 deg), (x, 20 deg)]`.
    fn own_turn(&mut self, fields: &mut Fields<'s>) -> Option<Rotation> {
        let mut rotation = self.identity();
        let Some((mut env, expr)) = self.take_expr(fields, "turned") else { return Some(rotation) };
        for (at, letter) in ["x", "y", "z"].into_iter().enumerate() {
            let node = self.num(at as f64);
            let place = env.place(expr.span);
            env.define(letter, Value::Number(Typed { node, ty: pintle_units::Type::number(), place }));
        }
        let place = env.place(expr.span);
        let value = self.expr(&mut env, expr);
        let turns = match value {
            Value::Point(items, at) => vec![Value::Point(items, at)],
            value => self.as_list(value, place, "a list of turns such as [(z, 30 deg)]")?,
        };
        for turn in turns {
            let Value::Point(pair, at) = turn else { return None };
            let [axis, angle] = <[Value; 2]>::try_from(pair).ok()?;
            let axis = self.as_number(axis, at)?;
            let axis = self.whole(&axis, at)?;
            let angle = self.as_number(angle, at)?;
            let angle = self.expect(&angle, "angle", "the turn")?;
            let step = self.turn(usize::try_from(axis).ok()?.min(2), angle.node);
            rotation = self.compose(&step, &rotation);
        }
        Some(rotation)
    }

    /// The part in its own frame, under its own mass or its host's density.
    fn part_contributions(
        &mut self,
        object: &Object,
        placement: &Placement,
        host_density: Option<NodeId>,
        owner: &str,
        place: Place,
    ) -> Option<Vec<Contribution>> {
        match &object.entity {
            Entity::Rotor(rotor) => Some(rotor.contributions.clone()),
            Entity::Body(body) => {
                let body: Body = body.clone();
                if placement.from.is_some()
                    && let (Some(volume), Some(density)) = (body.volume, host_density)
                {
                    let mass = self.times(density, volume);
                    // Under names of their own, so that the rotor's formula stays short.
                    let group = Group::Rotor;
                    let (_, mass) = self.named_member(owner, "mass", "mass", mass, group, place);
                    let mut properties = self.properties(&body, Some(mass))?;
                    let moment = properties.axial;
                    let (_, moment) = self.named_member(owner, "J", "moment_of_inertia", moment, group, place);
                    properties.name_axial(moment);
                    let body = Body { properties: Some(properties), ..body };
                    return Some(vec![self.own_contribution(&body)?]);
                }
                match self.own_contribution(&body) {
                    Some(contribution) => Some(vec![contribution]),
                    None => {
                        self.report(
                            Diagnostic::new(codes::MISSING_FIELD, place, format!("`{}` has no mass", object.name))
                                .with_label(body.place, "defined here without material, density or mass")
                                .with_help("give it a `material`, `density` or `mass`; removed material takes its host's: `less BODY from HOST`"),
                        );
                        None
                    }
                }
            }
            _ => None,
        }
    }

    /// One place of a pattern.
    #[allow(clippy::too_many_arguments)]
    fn add_one(
        &mut self,
        contributions: &mut Vec<Contribution>,
        part: Contribution,
        own_turn: &Rotation,
        pattern: &Pattern,
        k: i64,
        axis: &Axis,
        less: bool,
    ) {
        let angle = if k == 0 {
            pattern.first
        } else {
            let step = std::f64::consts::TAU * k as f64 / pattern.n as f64;
            match self.known(pattern.first) {
                Some(value) => self.num(value + step),
                None => {
                    let step = self.num(step);
                    self.plus(pattern.first, step)
                }
            }
        };
        let round = self.turn(0, angle);
        let placed = self.compose(&pattern.frame, &round);
        let zero = self.num(0.0);
        let out = self.turned(&placed, [zero, pattern.off, zero]);
        let origin = self.shifted(pattern.base, out);
        self.add_part(contributions, part, own_turn, &placed, origin, axis, less);
    }

    /// All places of a pattern of three or more as one: turned through equal steps, a tensor of the
    /// second order adds up to what it is on the average of all directions across the axis (sums of
    /// cosines and sines of the single and double angle vanish), wherever the first place lies.
    fn add_round(
        &mut self,
        contributions: &mut Vec<Contribution>,
        part: &Contribution,
        own_turn: &Rotation,
        pattern: &Pattern,
        axis: &Axis,
        less: bool,
    ) {
        let (zero, two, count) = (self.num(0.0), self.num(2.0), self.num(pattern.n as f64));
        // One place, in the frame of the circle.
        let own_centre = self.turned(own_turn, part.centre);
        let centre = self.shifted(own_centre, [zero, pattern.off, zero]);
        let (y, z) = (self.square(centre[1]), self.square(centre[2]));
        let square = self.plus(y, z);
        let carried = self.times(part.mass, square);
        let tensor = part.tensor.map(|tensor| {
            let turned = self.turned_tensor(own_turn, &tensor);
            let along = self.plus(turned[0], carried);
            let across = if turned[1] == turned[2] {
                let half = self.over(carried, two);
                self.plus(turned[1], half)
            } else {
                let sum = self.sum(&[turned[1], turned[2], carried]);
                self.over(sum, two)
            };
            let (along, across) = (self.times(count, along), self.times(count, across));
            [along, across, across, zero, zero, zero]
        });
        let along = match &tensor {
            Some(tensor) => tensor[0],
            None => {
                let one = self.plus(part.axial, carried);
                self.times(count, one)
            }
        };
        let mass = self.times(count, part.mass);
        let reach = match (part.reach, less) {
            (Some(reach), false) => {
                let distance = self.root(square);
                Some(self.plus(distance, reach))
            }
            _ => None,
        };
        let whole = Contribution { mass, centre: [centre[0], zero, zero], tensor, axial: along, reach: None };
        let identity = self.identity();
        self.add_part(contributions, whole, &identity, &pattern.frame, pattern.base, axis, less);
        if let Some(last) = contributions.last_mut() {
            last.reach = reach;
        }
    }

    #[allow(clippy::too_many_arguments)]
    fn add_part(
        &mut self,
        contributions: &mut Vec<Contribution>,
        part: Contribution,
        own_turn: &Rotation,
        placed: &Rotation,
        origin: Vector,
        axis: &Axis,
        less: bool,
    ) {
        let rotation = self.compose(placed, own_turn);
        let centre = self.turned(&rotation, part.centre);
        let centre = self.shifted(origin, centre);
        let tensor = part.tensor.map(|tensor| self.turned_tensor(&rotation, &tensor));
        // Turned about the axis only, the axial moment is the part's own.
        let u = axis.along;
        let own_axis = [rotation[0][0], rotation[1][0], rotation[2][0]];
        let axial = match (&tensor, own_axis == u) {
            (_, true) | (None, _) => part.axial,
            (Some(tensor), false) => self.along(tensor, u),
        };
        let (mass, tensor, axial) = if less {
            (self.negate(part.mass), tensor.map(|tensor| tensor.map(|member| self.negate(member))), self.negate(axial))
        } else {
            (part.mass, tensor, axial)
        };
        let reach = match (part.reach, less) {
            (Some(reach), false) => {
                let offset = self.between(centre, axis.through);
                let square = self.distance_squared(offset, u);
                let distance = self.root(square);
                Some(self.plus(distance, reach))
            }
            _ => None,
        };
        contributions.push(Contribution { mass, centre, tensor, axial, reach });
    }
}
