//! What is known of each node besides its value.

use super::Outcomes;
use crate::lower::{Lowered, Requirement};
use crate::model::InputValue;
use pintle_graph::{InputId, NodeId, Op};
use pintle_solve::Outcome;

/// One flag a node.
pub(super) struct NodeFacts {
    /// A toleranced input enters it.
    pub toleranced: Vec<bool>,
    /// An unknown that was not found enters it.
    pub open: Vec<bool>,
    /// Something that breaks its own requirements enters it, so its number means nothing.
    pub broken: Vec<bool>,
}

impl NodeFacts {
    pub(super) fn new(lowered: &Lowered, outcomes: &Outcomes) -> NodeFacts {
        let model = &lowered.model;
        let mut toleranced = vec![false; model.graph.len()];
        let mut open = vec![false; model.graph.len()];
        for (index, &op) in model.graph.ops().iter().enumerate() {
            let Op::Input(input) = op else { continue };
            let input = model.input(input);
            match input.value {
                InputValue::Given { tolerance, .. } => toleranced[index] = tolerance.is_some(),
                InputValue::Wanted { .. } => {
                    let found = input.quantity.and_then(|id| outcomes.get(&id));
                    open[index] = !matches!(found, Some(Outcome::Found { .. }));
                }
            }
        }
        forward(lowered, &mut open);
        spread(lowered, &mut toleranced);
        let mut broken = vec![false; model.graph.len()];
        let mut any = false;
        for requirement in lowered.requirements.iter().filter(|it| is_broken(lowered, it)) {
            any = true;
            for result in &requirement.results {
                broken[result.index()] = true;
            }
            if !requirement.results.is_empty() {
                continue;
            }
            let prefix = format!("{}.", requirement.subject);
            for quantity in model.quantities.iter().filter(|it| it.name.starts_with(prefix.as_str())) {
                broken[quantity.node.index()] = true;
            }
        }
        if any {
            spread(lowered, &mut broken);
        }
        NodeFacts { toleranced, open, broken }
    }
}

/// Whether a requirement is known not to hold.
pub(super) fn is_broken(lowered: &Lowered, requirement: &Requirement) -> bool {
    lowered.model.value(requirement.condition) == Some(0.0)
}

/// From operands to what is computed of them.
fn forward(lowered: &Lowered, flags: &mut [bool]) {
    let graph = &lowered.model.graph;
    for index in 0..graph.len() {
        let mut any = flags[index];
        graph.operands(NodeId(index as u32), |operand| any |= flags[operand.index()]);
        flags[index] = any;
    }
}

/// The same, and from equations to the unknowns that they fix.
fn spread(lowered: &Lowered, flags: &mut [bool]) {
    let model = &lowered.model;
    let equations = reach_of_equations(lowered, flags);
    let mut inputs = vec![false; model.inputs.len()];
    loop {
        let mut grown = false;
        for (flagged, used) in &equations {
            if !*flagged && !used.iter().any(|input| inputs[input.0 as usize]) {
                continue;
            }
            for &input in used {
                let unknown = matches!(model.input(input).value, InputValue::Wanted { .. });
                if unknown && !std::mem::replace(&mut inputs[input.0 as usize], true) {
                    grown = true;
                }
            }
        }
        if !grown {
            break;
        }
    }
    for (index, &op) in model.graph.ops().iter().enumerate() {
        if let Op::Input(input) = op {
            flags[index] |= inputs[input.0 as usize];
        }
    }
    forward(lowered, flags);
}

/// For each equation whether it needs a flagged node, and the inputs that it needs.
fn reach_of_equations(lowered: &Lowered, flags: &[bool]) -> Vec<(bool, Vec<InputId>)> {
    let graph = &lowered.model.graph;
    let mut seen = vec![usize::MAX; graph.len()];
    let mut result = Vec::with_capacity(lowered.equations.len());
    for (at, equation) in lowered.equations.iter().enumerate() {
        let (mut flagged, mut inputs) = (false, Vec::new());
        let mut stack = vec![equation.left, equation.right];
        while let Some(node) = stack.pop() {
            if std::mem::replace(&mut seen[node.index()], at) == at {
                continue;
            }
            flagged |= flags[node.index()];
            if let Op::Input(input) = graph.op(node) {
                inputs.push(input);
            }
            graph.operands(node, |operand| stack.push(operand));
        }
        result.push((flagged, inputs));
    }
    result
}
