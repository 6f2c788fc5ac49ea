//! Takes the blocks in turn and says for each unknown what came of it.

use crate::residual::Residuals;
use crate::{NotFound, Problem, Structure, single, system};
use pintle_graph::{Graph, InputId, NodeId, Parts};

/// What came of one unknown.
#[derive(Clone, Debug, PartialEq)]
pub enum Outcome {
    /// The only root seen in the range.
    Found {
        /// The root; its equations hold to rounding.
        value: f64,
    },
    /// More than one; none is chosen.
    Several {
        /// All seen, ascending. In a block of several unknowns solutions are in the order of its
        /// first unknown, and entry k of each unknown belongs to solution k.
        values: Vec<f64>,
    },
    /// None.
    NotFound {
        /// Where in the range the equations come closest to holding.
        closest: Option<f64>,
        /// Left minus right there, in SI; of a block, its worst equation's. NaN if there is no such place.
        residual: f64,
        /// Why.
        why: NotFound,
    },
    /// Needs an unknown that was not found.
    Skipped,
}

impl Outcome {
    pub(crate) fn nothing(why: NotFound) -> Outcome {
        Outcome::NotFound { closest: None, residual: f64::NAN, why }
    }

    /// The value, if one was found.
    pub fn value(&self) -> Option<f64> {
        match self {
            Outcome::Found { value } => Some(*value),
            _ => None,
        }
    }
}

/// Finds the unknowns of `problem`, one outcome for each.
///
/// `inputs` holds every input (those of unknowns are overwritten; NaN where not
/// found), `values` every node (made anew if its length does not fit). After
/// the call both belong together. `cancel` is asked again and again; once it
/// says yes, what is left is not found.
pub fn solve(
    graph: &Graph,
    problem: &Problem,
    structure: &Structure,
    inputs: &mut Vec<f64>,
    values: &mut Vec<f64>,
    cancel: &dyn Fn() -> bool,
) -> Vec<Outcome> {
    inputs.resize(inputs.len().max(graph.n_inputs()), f64::NAN);
    let unknown_inputs: Vec<InputId> = problem.unknowns.iter().map(|unknown| unknown.input).collect();
    let mut of_input = vec![None; inputs.len()];
    for (index, input) in unknown_inputs.iter().enumerate() {
        if let (Some(slot), Some(place)) = (inputs.get_mut(input.0 as usize), of_input.get_mut(input.0 as usize)) {
            *slot = f64::NAN;
            place.get_or_insert(index);
        }
    }
    if values.len() != graph.len() {
        pintle_graph::evaluate_into(graph, inputs, values);
    }
    let mut outcomes: Vec<Outcome> = vec![Outcome::nothing(NotFound::Free); problem.unknowns.len()];
    let mut parts = Parts::new(graph, &unknown_inputs);
    for block in &structure.blocks {
        let own: Vec<_> = block.unknowns.iter().filter_map(|&index| problem.unknowns.get(index).copied()).collect();
        let own_inputs: Vec<InputId> = own.iter().map(|unknown| unknown.input).collect();
        let sides: Vec<NodeId> = block
            .equations
            .iter()
            .filter_map(|&index| problem.equations.get(index))
            .flat_map(|equation| [equation.left, equation.right])
            .collect();
        let found = if own.len() != block.unknowns.len() || sides.len() != 2 * own.len() {
            // A structure of another problem.
            vec![Outcome::nothing(NotFound::Free); block.unknowns.len()]
        } else if cancel() {
            vec![Outcome::nothing(NotFound::Cancelled); own.len()]
        } else {
            let nodes = parts.nodes(&sides);
            let waits = nodes.iter().any(|&node| match graph.op(node) {
                pintle_graph::Op::Input(input) => {
                    !own_inputs.contains(&input)
                        && of_input
                            .get(input.0 as usize)
                            .copied()
                            .flatten()
                            .is_some_and(|other| outcomes[other].value().is_none())
                }
                _ => false,
            });
            if waits {
                vec![Outcome::Skipped; own.len()]
            } else {
                let part = parts.part(&own_inputs, &sides, &nodes, inputs, values);
                let mut residuals = Residuals::new(part);
                match own.as_slice() {
                    [one] => vec![single::search(&mut residuals, one.low, one.high, cancel)],
                    _ => system::search(&mut residuals, &own, cancel),
                }
            }
        };
        for ((&index, unknown), outcome) in block.unknowns.iter().zip(&own).zip(found) {
            if let (Some(value), Some(slot)) = (outcome.value(), inputs.get_mut(unknown.input.0 as usize)) {
                *slot = value;
            }
            if let Some(slot) = outcomes.get_mut(index) {
                *slot = outcome;
            }
        }
    }
    parts.update(inputs, values);
    outcomes
}
