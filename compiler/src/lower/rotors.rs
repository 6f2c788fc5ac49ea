//! Rotors: parts put together on an axis.

use super::axes::Axis;
use super::space::{Arithmetic, Tensor, Vector};
use super::value::Value;
use super::{Env, Lowerer};
use crate::codes;
use pintle_graph::NodeId;
use pintle_syntax::ast::{Name, Placement};
use pintle_text::Diagnostic;

/// What one part brings, in the sheet's frame; removed material has negative mass.
#[derive(Clone, Debug)]
pub struct Contribution {
    /// kg
    pub mass: NodeId,
    /// m
    pub centre: Vector,
    /// About its own centre, axes of the sheet; None where only the axial moment is known.
    pub tensor: Option<Tensor>,
    /// About its own centre along the running axis.
    pub axial: NodeId,
    /// Greatest distance from the running axis, m; None for removed material.
    pub reach: Option<NodeId>,
}

/// A rotor.
#[derive(Clone, Debug)]
pub struct Rotor {
    /// Its parts.
    pub contributions: Vec<Contribution>,
    /// Its running axis.
    pub axis: Axis,
    /// Moment of inertia about it, kg*m^2.
    pub moment: NodeId,
    /// Greatest radius, m.
    pub reach: Option<NodeId>,
}

impl<'s> Lowerer<'s, '_> {
    pub(super) fn rotor(
        &mut self,
        env: &mut Env,
        name: &Name,
        axis: Option<&Name>,
        placements: &'s [Placement],
    ) -> Value {
        let place = env.place(name.span);
        let axis = match axis {
            Some(axis) => match self.named_axis(env, axis) {
                Some(axis) => axis,
                None => return Value::Failed,
            },
            None => {
                let origin = self.origin();
                self.coordinate_axis("x").unwrap_or(Axis { through: origin, along: origin })
            }
        };
        let mut contributions = Vec::new();
        let mut aliases = Vec::new();
        let mut fine = !placements.is_empty();
        if placements.is_empty() {
            self.report(
                Diagnostic::new(codes::MISSING_FIELD, place, format!("the rotor `{}` holds no part", name.text))
                    .with_help("name its parts in the braces: `BODY at 0 mm`"),
            );
        }
        for placement in placements {
            match &placement.clauses.repeat {
                Some(repeat) => {
                    let done = self.repeated(env, repeat, |this, env| {
                        this.placement(env, name, &axis, placement, &mut contributions, &mut aliases)
                    });
                    fine &= done.iter().all(Option::is_some);
                }
                None => fine &= self.placement(env, name, &axis, placement, &mut contributions, &mut aliases).is_some(),
            }
        }
        if !fine || contributions.is_empty() {
            return Value::Failed;
        }
        self.rotor_of(name.text.clone(), place, axis, contributions)
    }
}
