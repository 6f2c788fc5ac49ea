//! Parts of a graph: what a few inputs move, on the way to a few nodes, cut out
//! as a small graph of its own with everything that stands still put in as a
//! number. Evaluating such a part many times touches nothing else, however
//! large the sheet, and every reading of a graph works on it.

use crate::value::apply;
use crate::{Graph, InputId, NodeId, Op};

/// Cuts parts out of one graph. Making it costs one pass over the graph;
/// each part afterwards costs only what lies in it.
#[derive(Debug)]
pub struct Parts<'g> {
    graph: &'g Graph,
    /// Whether a node depends on any of the inputs asked for.
    depends: Vec<bool>,
    seen: Vec<u32>,
    moved: Vec<u32>,
    local: Vec<NodeId>,
    round: u32,
}

/// A part: its inputs are numbered as they were asked for.
#[derive(Clone, Debug)]
pub struct Part {
    /// The small graph.
    pub graph: Graph,
    /// The nodes asked for, in it.
    pub outputs: Vec<NodeId>,
    /// For each of its nodes the one of the whole graph that it stands for.
    pub origins: Vec<NodeId>,
}

impl<'g> Parts<'g> {
    /// For parts that `inputs`, or some of them, move.
    pub fn new(graph: &'g Graph, inputs: &[InputId]) -> Parts<'g> {
        let mut wanted = vec![false; graph.n_inputs()];
        for input in inputs {
            if let Some(slot) = wanted.get_mut(input.0 as usize) {
                *slot = true;
            }
        }
        let mut depends = vec![false; graph.len()];
        for index in 0..graph.len() {
            let node = NodeId(index as u32);
            depends[index] = match graph.op(node) {
                Op::Input(input) => wanted.get(input.0 as usize).copied().unwrap_or(false),
                _ => {
                    let mut any = false;
                    graph.operands(node, |operand| any |= depends[operand.index()]);
                    any
                }
            };
        }
        let size = graph.len();
        Parts { graph, depends, seen: vec![0; size], moved: vec![0; size], local: vec![NodeId(0); size], round: 0 }
    }

    /// The nodes on which `outputs` depend and which depend on an input asked for, operands first.
    pub fn nodes(&mut self, outputs: &[NodeId]) -> Vec<NodeId> {
        self.round += 1;
        let (graph, round) = (self.graph, self.round);
        let mut found = Vec::new();
        for &output in outputs {
            if self.depends[output.index()] && self.seen[output.index()] != round {
                self.seen[output.index()] = round;
                found.push(output);
            }
        }
        let mut next = 0;
        while let Some(&node) = found.get(next) {
            next += 1;
            graph.operands(node, |operand| {
                if self.depends[operand.index()] && self.seen[operand.index()] != round {
                    self.seen[operand.index()] = round;
                    found.push(operand);
                }
            });
        }
        found.sort_unstable();
        found
    }

    /// The part between `inputs` and `outputs`. `nodes` are those of [`Parts::nodes`]
    /// for the same outputs; what stands still among them is brought up to date in `values` first.
    pub fn part(
        &mut self,
        inputs: &[InputId],
        outputs: &[NodeId],
        nodes: &[NodeId],
        all_inputs: &[f64],
        values: &mut [f64],
    ) -> Part {
        self.round += 1;
        let (graph, round) = (self.graph, self.round);
        let mut part = Graph::new();
        let mut origins = Vec::with_capacity(2 * nodes.len());
        part.set_inputs(inputs.len() as u32);
        for &node in nodes {
            let op = graph.op(node);
            let mut moved = false;
            if let Op::Input(input) = op {
                if let Some(place) = inputs.iter().position(|&own| own == input) {
                    self.moved[node.index()] = round;
                    self.local[node.index()] = part.push(Op::Input(InputId(place as u32)));
                    origins.push(node);
                    self.seen[node.index()] = round;
                    continue;
                }
            } else {
                graph.operands(node, |operand| moved |= self.moved[operand.index()] == round);
            }
            if !moved {
                values[node.index()] = apply(graph, op, values, all_inputs);
                continue;
            }
            // Operands first, so that a number stands before the node that reads it.
            graph.operands(node, |operand| {
                self.local_number(operand, round, values, &mut part, &mut origins);
            });
            let local = |node: NodeId| self.local[node.index()];
            let op = match op {
                Op::PrincipalMoment(tensor, rank) => {
                    Op::PrincipalMoment(part.push_tensor(graph.tensor(tensor).map(local)), rank)
                }
                Op::PrincipalAxis(tensor, rank, component) => {
                    Op::PrincipalAxis(part.push_tensor(graph.tensor(tensor).map(local)), rank, component)
                }
                other => other.with_operands(local),
            };
            self.moved[node.index()] = round;
            self.seen[node.index()] = round;
            self.local[node.index()] = part.push(op);
            origins.push(node);
        }
        let outputs = outputs
            .iter()
            .map(|&output| {
                self.local_number(output, round, values, &mut part, &mut origins);
                self.local[output.index()]
            })
            .collect();
        Part { graph: part, outputs, origins }
    }

    /// Gives `node` a place in the part if it has none yet: then it stands still and is a number there.
    fn local_number(&mut self, node: NodeId, round: u32, values: &[f64], part: &mut Graph, origins: &mut Vec<NodeId>) {
        if self.seen[node.index()] != round {
            self.seen[node.index()] = round;
            self.local[node.index()] = part.push_number(values[node.index()]);
            origins.push(node);
        }
    }

    /// Brings every node that depends on an input asked for up to date.
    pub fn update(&self, inputs: &[f64], values: &mut [f64]) {
        for (index, _) in self.depends.iter().enumerate().filter(|(_, depends)| **depends) {
            values[index] = apply(self.graph, self.graph.op(NodeId(index as u32)), values, inputs);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::evaluate;

    #[test]
    fn a_part_has_the_value_of_the_whole() {
        let mut graph = Graph::new();
        let (x_input, x) = graph.input();
        let (_, y) = graph.input();
        let (z_input, z) = graph.input();
        let still = graph.add(Op::Multiply(y, y));
        let shared = graph.add(Op::Add(x, still));
        let earlier = graph.add(Op::Multiply(z, still));
        let product = graph.add(Op::Multiply(shared, earlier));
        let tensor = graph.tensor_of([product, still, y, y, shared, x]);
        let moment = graph.add(Op::PrincipalMoment(tensor, 1));
        let unrelated = graph.add(Op::Multiply(z, z));
        let inputs = [5.0, 3.0, 0.5];
        let expected = evaluate(&graph, &inputs);
        // The value of z's nodes is out of date on purpose.
        let mut values = evaluate(&graph, &[1.0, 3.0, 77.0]);
        let mut parts = Parts::new(&graph, &[x_input, z_input]);
        let nodes = parts.nodes(&[moment, still]);
        assert!(!nodes.contains(&unrelated) && !nodes.contains(&still));
        let part = parts.part(&[x_input], &[moment, still], &nodes, &inputs, &mut values);
        let found = evaluate(&part.graph, &[5.0]);
        assert_eq!(part.graph.n_inputs(), 1);
        assert_eq!(found[part.outputs[0].index()], expected[moment.index()]);
        assert_eq!(found[part.outputs[1].index()], 9.0);
        parts.update(&inputs, &mut values);
        assert_eq!(values, expected);
    }
}
