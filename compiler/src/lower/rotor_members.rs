//! What a rotor offers: mass, centre, moments, principal moments, unbalance.
//!
//! Moments are summed part by part about the axis or centre asked for
//! (parallel-axis theorem, J = J_c + m a^2; mechanics handbooks), so nothing
//! large is subtracted from anything large.

use super::Lowerer;
use super::axes::Axis;
use super::rotors::{Contribution, Rotor};
use super::space::{Arithmetic, Tensor, Vector};
use super::value::{Entity, Object, Typed, Value};
use crate::results::{Group, Shown};
use pintle_graph::{NodeId, Op};
use pintle_text::Place;
use smol_str::SmolStr;
use std::rc::Rc;

/// Members of one rotor on their way into the table.
struct Owner {
    name: SmolStr,
    place: Place,
}

type Members = Vec<(SmolStr, Value)>;

impl Lowerer<'_, '_> {
    /// A rotor of its parts.
    pub(super) fn rotor_of(
        &mut self,
        name: SmolStr,
        place: Place,
        axis: Axis,
        contributions: Vec<Contribution>,
    ) -> Value {
        let owner = Owner { name, place };
        let mut members = Members::with_capacity(10);
        let masses: Vec<NodeId> = contributions.iter().map(|part| part.mass).collect();
        let mass = self.sum(&masses);
        let mass = self.enter(&owner, &[], "mass", "mass", Shown::Always, mass, &mut members);
        let moment = self.axial_moment(&contributions, &axis);
        let moment = self.enter(&owner, &[], "J", "moment_of_inertia", Shown::Always, moment, &mut members);
        let mut centre = self.origin();
        for (at, slot) in centre.iter_mut().enumerate() {
            let terms: Vec<NodeId> = contributions.iter().map(|part| self.times(part.mass, part.centre[at])).collect();
            let sum = self.sum(&terms);
            *slot = self.over(sum, mass);
        }
        let mut components = Members::with_capacity(3);
        for (slot, word) in centre.iter_mut().zip(["x", "y", "z"]) {
            *slot = self.on_request(&owner, &["centre"], word, "length", *slot, &mut components);
        }
        self.part_of(&owner, &["centre"], "a point", components, &mut members);
        let square = self.over(moment, mass);
        let radius = self.root(square);
        self.on_request(&owner, &[], "gyration_radius", "gyration_radius", radius, &mut members);
        let mut reach: Option<NodeId> = None;
        for node in contributions.iter().filter_map(|part| part.reach) {
            reach = Some(match reach {
                None => node,
                Some(so_far) if so_far == node => node,
                Some(so_far) => self.out.model.graph.add(Op::Max(so_far, node)),
            });
        }
        let reach = reach.map(|node| self.on_request(&owner, &[], "rim_radius", "radius", node, &mut members));
        self.moments(&owner, &axis, &contributions, mass, centre, &mut members);
        let entity = Entity::Rotor(Rotor { contributions, axis, moment, reach });
        Value::Object(Rc::new(Object { name: owner.name, what: "a rotor", members, entity }))
    }

    /// Enters a member in the table; gives the node that carries its name.
    #[allow(clippy::too_many_arguments)]
    fn enter(
        &mut self,
        owner: &Owner,
        path: &[&'static str],
        word: &'static str,
        kind: &str,
        shown: Shown,
        node: NodeId,
        members: &mut Members,
    ) -> NodeId {
        let mut words: [&str; 3] = [&owner.name, word, ""];
        let words = match path {
            [middle] => {
                words = [&owner.name, middle, word];
                &words[..]
            }
            _ => &words[..2],
        };
        let value = self.built_in(words, Group::Rotor, shown, kind, node, owner.place);
        let named = match &value {
            Value::Number(typed) => typed.node,
            _ => node,
        };
        members.push((SmolStr::new_static(word), value));
        named
    }

    fn on_request(
        &mut self,
        owner: &Owner,
        path: &[&'static str],
        word: &'static str,
        kind: &str,
        node: NodeId,
        members: &mut Members,
    ) -> NodeId {
        self.enter(owner, path, word, kind, Shown::OnRequest, node, members)
    }

    /// A member that has members itself.
    fn part_of(
        &mut self,
        owner: &Owner,
        path: &[&'static str],
        what: &'static str,
        inner: Members,
        members: &mut Members,
    ) {
        let Some(word) = path.last() else { return };
        let name = match path {
            [front, word] => self.dotted(&[&owner.name, front, word]),
            _ => self.dotted(&[&owner.name, word]),
        };
        members.push((SmolStr::new_static(word), Value::plain(name, what, inner)));
    }

    /// Tensor, products, principal moments and unbalance.
    fn moments(
        &mut self,
        owner: &Owner,
        axis: &Axis,
        contributions: &[Contribution],
        mass: NodeId,
        centre: Vector,
        members: &mut Members,
    ) {
        // Static unbalance: mass times the distance of its centre from the axis.
        let offset = self.between(centre, axis.through);
        let square = self.distance_squared(offset, axis.along);
        let distance = self.root(square);
        let stat = self.times(mass, distance);
        let mut unbalance = Members::with_capacity(4);
        self.on_request(owner, &["unbalance"], "static", "unbalance", stat, &mut unbalance);
        let turn = self.turn_x_to(axis.along);
        let columns: [Vector; 3] = std::array::from_fn(|column| [turn[0][column], turn[1][column], turn[2][column]]);
        let (y, z) = (self.dot(columns[1], offset), self.dot(columns[2], offset));
        let angle = self.out.model.graph.add(Op::Atan2(z, y));
        self.on_request(owner, &["unbalance"], "static_angle", "angle", angle, &mut unbalance);
        let Some(tensor) = self.central_tensor(contributions, centre) else {
            return self.part_of(owner, &["unbalance"], "an unbalance", unbalance, members);
        };
        let words = ["xx", "yy", "zz", "xy", "xz", "yz"];
        let mut named = tensor;
        let mut inner = Members::with_capacity(6);
        for (slot, word) in named.iter_mut().zip(words) {
            *slot = self.on_request(owner, &["tensor"], word, "moment_of_inertia", *slot, &mut inner);
        }
        self.part_of(owner, &["tensor"], "a tensor", inner, members);
        let mut inner = Members::with_capacity(3);
        for (&member, word) in named.iter().zip(words).skip(3) {
            let node = self.negate(member);
            self.on_request(owner, &["product"], word, "moment_of_inertia", node, &mut inner);
        }
        self.part_of(owner, &["product"], "products of inertia", inner, members);
        self.principal_members(owner, named, members);
        // Couple unbalance: the products of inertia that hold the running axis.
        let full = [[named[0], named[3], named[4]], [named[3], named[1], named[5]], [named[4], named[5], named[2]]];
        let along_axis: Vector = full.map(|row| self.dot(row, columns[0]));
        let (xy, xz) = (self.dot(along_axis, columns[1]), self.dot(along_axis, columns[2]));
        let (pxy, pxz) = (self.negate(xy), self.negate(xz));
        let (a, b) = (self.square(pxy), self.square(pxz));
        let sum = self.plus(a, b);
        let couple = self.root(sum);
        let angle = self.out.model.graph.add(Op::Atan2(pxz, pxy));
        self.on_request(owner, &["unbalance"], "couple", "moment_of_inertia", couple, &mut unbalance);
        self.on_request(owner, &["unbalance"], "couple_angle", "angle", angle, &mut unbalance);
        self.part_of(owner, &["unbalance"], "an unbalance", unbalance, members);
    }

    fn principal_members(&mut self, owner: &Owner, tensor: Tensor, members: &mut Members) {
        let id = self.out.model.graph.tensor_of(tensor);
        let mut inner = Members::with_capacity(6);
        for (rank, (word, axis)) in
            [("least", "least_axis"), ("middle", "middle_axis"), ("greatest", "greatest_axis")].into_iter().enumerate()
        {
            let node = self.out.model.graph.add(Op::PrincipalMoment(id, rank as u8));
            self.on_request(owner, &["principal"], word, "moment_of_inertia", node, &mut inner);
            let mut components = Members::with_capacity(3);
            for (component, letter) in ["x", "y", "z"].into_iter().enumerate() {
                let node = self.out.model.graph.add(Op::PrincipalAxis(id, rank as u8, component as u8));
                let ty = pintle_units::Type::number();
                components.push((SmolStr::new_static(letter), Value::Number(Typed { node, ty, place: owner.place })));
            }
            self.part_of(owner, &["principal", axis], "a direction", components, &mut inner);
        }
        self.part_of(owner, &["principal"], "principal moments", inner, members);
    }

    fn central_tensor(&mut self, contributions: &[Contribution], centre: Vector) -> Option<Tensor> {
        let mut tensors = Vec::with_capacity(2 * contributions.len());
        for part in contributions {
            tensors.push(part.tensor?);
            let offset = self.between(part.centre, centre);
            tensors.push(self.point_tensor(part.mass, offset));
        }
        Some(self.tensor_sum(&tensors))
    }

    fn axial_moment(&mut self, contributions: &[Contribution], axis: &Axis) -> NodeId {
        let mut terms = Vec::with_capacity(2 * contributions.len());
        for part in contributions {
            terms.push(part.axial);
            let offset = self.between(part.centre, axis.through);
            let square = self.distance_squared(offset, axis.along);
            terms.push(self.times(part.mass, square));
        }
        self.sum(&terms)
    }

    /// Moment about any axis; None where a part's cross inertia is not known.
    pub(super) fn moment_about(&mut self, contributions: &[Contribution], axis: &Axis) -> Option<NodeId> {
        let mut turned = Vec::with_capacity(contributions.len());
        for part in contributions {
            let axial = self.along(&part.tensor?, axis.along);
            turned.push(Contribution { axial, ..part.clone() });
        }
        Some(self.axial_moment(&turned, axis))
    }
}
