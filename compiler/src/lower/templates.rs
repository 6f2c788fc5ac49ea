//! Shapes used again: the formulas of a shape are read once for each combination
//! of parameter types; further bodies of it repeat the nodes on their own
//! parameters. Reading them anew would give the same nodes, only slower.
//!
//! A recording knows nodes only. It is not made where something was reported,
//! or where a value decided what was built (a count, a list), for then the next
//! body may differ.

use super::Lowerer;
use super::value::Value;
use pintle_graph::{NodeId, Op};
use pintle_text::ItemId;
use pintle_units::Type;
use smol_str::SmolStr;

/// What two uses of a shape must have in common.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub(super) struct TemplateKey {
    shape: ItemId,
    /// A node of its own is a parameter; any other (a default, a constant) belongs to the recording.
    parameters: Vec<(Type, Option<NodeId>)>,
    part: Part,
}

/// Which formulas of the shape.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(super) enum Part {
    Volume,
    Properties,
}

/// Nodes built from parameters, to be built again from others.
#[derive(Clone, Debug)]
pub(super) struct Template {
    parameters: Vec<NodeId>,
    /// Nodes that depend on a parameter, operands first.
    steps: Vec<NodeId>,
    results: Vec<NodeId>,
}

/// The state before a reading that may become a recording.
pub(super) struct Before {
    diagnostics: usize,
    constants: usize,
}

/// Parameters and mass of one use: None where not all are single quantities.
pub(super) fn key(
    shape: ItemId,
    bound: &[(SmolStr, Value)],
    part: Part,
    graph: &pintle_graph::Graph,
) -> Option<(TemplateKey, Vec<NodeId>)> {
    let mut parameters = Vec::with_capacity(bound.len());
    let mut nodes = Vec::with_capacity(bound.len() + 1);
    for (_, value) in bound {
        let Value::Number(typed) = value else { return None };
        let own = matches!(graph.op(typed.node), Op::Quantity(..)) && !nodes.contains(&typed.node);
        // Which length it is that nothing says the use of makes no difference.
        let mut ty = typed.ty;
        if let Some((length, _)) = &mut ty.open {
            *length = pintle_units::ANONYMOUS;
        }
        parameters.push((ty, (!own).then_some(typed.node)));
        if own {
            nodes.push(typed.node);
        }
    }
    Some((TemplateKey { shape, parameters, part }, nodes))
}

impl Lowerer<'_, '_> {
    pub(super) fn before_reading(&self) -> Before {
        Before { diagnostics: self.out.diagnostics.len(), constants: self.constants_asked }
    }

    /// Keeps what was just built from `parameters` for further uses.
    pub(super) fn record(&mut self, key: TemplateKey, before: Before, parameters: Vec<NodeId>, results: Vec<NodeId>) {
        if self.out.diagnostics.len() != before.diagnostics || self.constants_asked != before.constants {
            return;
        }
        let graph = &self.out.model.graph;
        let Some(first) = parameters.iter().min() else { return };
        let Some(last) = results.iter().max() else { return };
        // Everything that depends on a parameter came after it.
        let span = (last.index() + 1).saturating_sub(first.index());
        let mut needed = vec![false; span];
        let place = |node: NodeId| node.index().checked_sub(first.index());
        for &result in &results {
            if let Some(slot) = place(result).and_then(|at| needed.get_mut(at)) {
                *slot = true;
            }
        }
        for at in (0..span).rev() {
            let node = NodeId((first.index() + at) as u32);
            if needed[at] && !parameters.contains(&node) {
                graph.operands(node, |operand| {
                    if let Some(slot) = place(operand).and_then(|at| needed.get_mut(at)) {
                        *slot = true;
                    }
                });
            }
        }
        let mut depends = vec![false; span];
        let mut steps = Vec::new();
        for at in 0..span {
            let node = NodeId((first.index() + at) as u32);
            if parameters.contains(&node) {
                depends[at] = true;
                continue;
            }
            let mut any = false;
            graph.operands(node, |operand| any |= place(operand).is_some_and(|at| depends.get(at) == Some(&true)));
            depends[at] = any;
            if any && needed[at] {
                if matches!(graph.op(node), Op::Quantity(..) | Op::PrincipalMoment(..) | Op::PrincipalAxis(..)) {
                    return;
                }
                steps.push(node);
            }
        }
        self.templates.insert(key, Template { parameters, steps, results });
    }

    /// The results of a recording on other parameters.
    pub(super) fn replay(&mut self, key: &TemplateKey, parameters: &[NodeId]) -> Option<Vec<NodeId>> {
        let template = self.templates.get(key)?;
        if template.parameters.len() != parameters.len() {
            return None;
        }
        let graph = &mut self.out.model.graph;
        let mut renamed: Vec<(NodeId, NodeId)> = Vec::with_capacity(template.steps.len());
        let now = |renamed: &[(NodeId, NodeId)], node: NodeId| {
            if let Some(at) = template.parameters.iter().position(|it| *it == node) {
                return parameters[at];
            }
            renamed.binary_search_by_key(&node, |(old, _)| *old).map_or(node, |at| renamed[at].1)
        };
        for &step in &template.steps {
            let op = graph.op(step).with_operands(|operand| now(&renamed, operand));
            let node = graph.add(op);
            if let Some(&place) = self.out.node_places.get(&step) {
                self.out.node_places.entry(node).or_insert(place);
            }
            renamed.push((step, node));
        }
        Some(template.results.iter().map(|&result| now(&renamed, result)).collect())
    }
}
