//! The value reading: every node as an f64, in coherent SI units.
//!
//! Elementary functions come from libm, so that results are the same bytes on
//! every machine.

use crate::{Function, Graph, InputId, NodeId, Op, principal};
use std::collections::HashSet;

/// Values of all nodes for the given inputs. A missing input is NaN.
pub fn evaluate(graph: &Graph, inputs: &[f64]) -> Vec<f64> {
    let mut values = Vec::new();
    evaluate_into(graph, inputs, &mut values);
    values
}

/// As [`evaluate`], into a vector that is used again and again.
pub fn evaluate_into(graph: &Graph, inputs: &[f64], values: &mut Vec<f64>) {
    values.clear();
    values.reserve(graph.len());
    for &op in graph.ops() {
        values.push(apply(graph, op, values, inputs));
    }
}

/// The value of one node, computing only what it needs.
pub fn value_of(graph: &Graph, node: NodeId, inputs: &[f64]) -> f64 {
    value_with(graph, node, |input| inputs.get(input.0 as usize).copied().unwrap_or(f64::NAN))
}

/// As [`value_of`], asking for the inputs that are needed. Costs what lies below the node, however large the graph.
pub fn value_with(graph: &Graph, node: NodeId, input: impl Fn(InputId) -> f64) -> f64 {
    let mut needed = vec![node];
    let mut seen = HashSet::<NodeId, foldhash::fast::FixedState>::default();
    seen.insert(node);
    let mut next = 0;
    while let Some(&open) = needed.get(next) {
        next += 1;
        graph.operands(open, |operand| {
            if seen.insert(operand) {
                needed.push(operand);
            }
        });
    }
    needed.sort_unstable();
    let mut values: Vec<f64> = Vec::with_capacity(needed.len());
    for &each in &needed {
        let at = |operand: NodeId| needed.binary_search(&operand).map_or(f64::NAN, |place| values[place]);
        let value = apply_with(graph, graph.op(each), at, &input);
        values.push(value);
    }
    values.last().copied().unwrap_or(f64::NAN)
}

/// The nodes between some inputs and some outputs, to evaluate again and again
/// while everything else stands still.
#[derive(Clone, Debug)]
pub struct Cone {
    nodes: Vec<NodeId>,
}

impl Cone {
    /// Nodes on which an output depends and which depend on one of `inputs`.
    pub fn new(graph: &Graph, inputs: &[InputId], outputs: &[NodeId]) -> Cone {
        let Some(last) = outputs.iter().max() else { return Cone { nodes: Vec::new() } };
        let size = last.index() + 1;
        let mut needed = vec![false; size];
        for output in outputs {
            needed[output.index()] = true;
        }
        for index in (0..size).rev() {
            if needed[index] {
                graph.operands(NodeId(index as u32), |operand| needed[operand.index()] = true);
            }
        }
        let mut moves = vec![false; size];
        let mut nodes = Vec::new();
        for index in 0..size {
            if !needed[index] {
                continue;
            }
            let node = NodeId(index as u32);
            let moved = match graph.op(node) {
                Op::Input(input) => inputs.contains(&input),
                _ => {
                    let mut any = false;
                    graph.operands(node, |operand| any |= moves[operand.index()]);
                    any
                }
            };
            if moved {
                moves[index] = true;
                nodes.push(node);
            }
        }
        Cone { nodes }
    }

    /// Whether no output depends on any of the inputs.
    pub fn is_empty(&self) -> bool {
        self.nodes.is_empty()
    }

    /// The nodes, operands first.
    pub fn nodes(&self) -> &[NodeId] {
        &self.nodes
    }

    /// Brings the cone's nodes in `values` up to date with `inputs`.
    pub fn update(&self, graph: &Graph, inputs: &[f64], values: &mut [f64]) {
        for &node in &self.nodes {
            values[node.index()] = apply(graph, graph.op(node), values, inputs);
        }
    }
}

pub(crate) fn apply(graph: &Graph, op: Op, values: &[f64], inputs: &[f64]) -> f64 {
    let input = |input: InputId| inputs.get(input.0 as usize).copied().unwrap_or(f64::NAN);
    apply_with(graph, op, |node: NodeId| values[node.index()], input)
}

#[inline(always)]
fn apply_with(graph: &Graph, op: Op, at: impl Fn(NodeId) -> f64, input_value: impl Fn(InputId) -> f64) -> f64 {
    let truth = |holds: bool| if holds { 1.0 } else { 0.0 };
    match op {
        Op::Literal(literal) => graph.literal(literal).0,
        Op::Input(input) => input_value(input),
        Op::Quantity(_, a) => at(a),
        Op::Add(a, b) => at(a) + at(b),
        Op::Subtract(a, b) => at(a) - at(b),
        Op::Multiply(a, b) => at(a) * at(b),
        Op::Divide(a, b) => at(a) / at(b),
        Op::Power(a, num, den) => power(at(a), num, den),
        Op::PowerOf(a, b) => libm::pow(at(a), at(b)),
        Op::Apply(function, a) => call(function, at(a)),
        Op::Atan2(a, b) => libm::atan2(at(a), at(b)),
        // A NaN on either side stays visible, unlike with f64::min.
        Op::Min(a, b) => pick(at(a), at(b), |a, b| a <= b),
        Op::Max(a, b) => pick(at(a), at(b), |a, b| a >= b),
        Op::Compare(op, a, b) => {
            if at(a).is_nan() || at(b).is_nan() {
                f64::NAN
            } else {
                truth(op.holds(at(a), at(b)))
            }
        }
        Op::And(a, b) => at(a) * at(b),
        Op::Or(a, b) => pick(at(a), at(b), |a, b| a >= b),
        Op::Select(c, a, b) => {
            let condition = at(c);
            if condition.is_nan() {
                f64::NAN
            } else if condition != 0.0 {
                at(a)
            } else {
                at(b)
            }
        }
        Op::PrincipalMoment(tensor, rank) => principal(graph.tensor(tensor).map(&at)).moments[rank as usize % 3],
        Op::PrincipalAxis(tensor, rank, component) => {
            principal(graph.tensor(tensor).map(&at)).axes[rank as usize % 3][component as usize % 3]
        }
    }
}

fn pick(a: f64, b: f64, first: impl Fn(f64, f64) -> bool) -> f64 {
    if a.is_nan() || b.is_nan() {
        f64::NAN
    } else if first(a, b) {
        a
    } else {
        b
    }
}

/// `x^(num/den)`: integer powers by multiplication, halves by square root.
fn power(x: f64, num: i32, den: i32) -> f64 {
    match den {
        1 => integer_power(x, num),
        2 => integer_power(x.sqrt(), num),
        3 if num == 1 => libm::cbrt(x),
        _ => libm::pow(x, f64::from(num) / f64::from(den)),
    }
}

fn integer_power(x: f64, n: i32) -> f64 {
    let mut rest = n.unsigned_abs();
    let (mut factor, mut result) = (x, 1.0);
    while rest > 0 {
        if rest & 1 == 1 {
            result *= factor;
        }
        rest >>= 1;
        if rest > 0 {
            factor *= factor;
        }
    }
    if n < 0 { 1.0 / result } else { result }
}

fn call(function: Function, x: f64) -> f64 {
    match function {
        Function::Negate => -x,
        Function::Abs => x.abs(),
        Function::Sqrt => x.sqrt(),
        Function::Exp => libm::exp(x),
        Function::Ln => libm::log(x),
        Function::Log10 => libm::log10(x),
        Function::Sin => libm::sin(x),
        Function::Cos => libm::cos(x),
        Function::Tan => libm::tan(x),
        Function::Asin => libm::asin(x),
        Function::Acos => libm::acos(x),
        Function::Atan => libm::atan(x),
        Function::Sinh => libm::sinh(x),
        Function::Cosh => libm::cosh(x),
        Function::Tanh => libm::tanh(x),
        Function::Floor => x.floor(),
        Function::Ceil => x.ceil(),
        Function::Round => x.round(),
        Function::Sign => {
            if x > 0.0 {
                1.0
            } else if x < 0.0 {
                -1.0
            } else {
                x
            }
        }
        Function::Not => {
            if x.is_nan() {
                x
            } else if x == 0.0 {
                1.0
            } else {
                0.0
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn equal_expressions_are_one_node() {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let a = graph.add(Op::Multiply(x, x));
        let b = graph.add(Op::Multiply(x, x));
        assert_eq!(a, b);
        assert_eq!(graph.len(), 2);
    }

    #[test]
    fn one_value_is_that_of_the_whole() {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let (_, y) = graph.input();
        let square = graph.add(Op::Multiply(y, y));
        let sum = graph.add(Op::Add(square, x));
        let tensor = graph.tensor_of([sum, square, x, y, sum, x]);
        let moment = graph.add(Op::PrincipalMoment(tensor, 2));
        graph.add(Op::Multiply(moment, x));
        let inputs = [1.5, -0.25];
        assert_eq!(value_of(&graph, moment, &inputs), evaluate(&graph, &inputs)[moment.index()]);
        assert!(value_of(&graph, sum, &[1.0]).is_nan());
    }

    #[test]
    fn cone_holds_only_what_moves() {
        let mut graph = Graph::new();
        let (x_input, x) = graph.input();
        let (_, y) = graph.input();
        let still = graph.add(Op::Multiply(y, y));
        let moving = graph.add(Op::Add(x, still));
        let cone = Cone::new(&graph, &[x_input], &[moving]);
        assert_eq!(cone.nodes(), [x, moving]);
        let mut values = evaluate(&graph, &[1.0, 3.0]);
        cone.update(&graph, &[5.0, 3.0], &mut values);
        assert_eq!(values[moving.index()], 14.0);
    }

    #[test]
    fn powers_are_exact_where_they_can_be() {
        assert_eq!(power(3.0, 4, 1), 81.0);
        assert_eq!(power(2.0, -2, 1), 0.25);
        assert_eq!(power(9.0, 3, 2), 27.0);
        assert_eq!(power(7.0, 0, 1), 1.0);
    }

    #[test]
    fn not_a_number_passes_through_choices() {
        assert!(pick(f64::NAN, 1.0, |a, b| a <= b).is_nan());
    }
}
