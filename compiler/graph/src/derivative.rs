//! The derivative reading: how much a node moves with each of its operands,
//! and two passes built on that. [`tangents`] carries the derivative by one
//! input forward (chain rule, exact up to rounding; no differences of values).
//! [`rounding`] carries the reach of rounding forward: how far f64 arithmetic
//! can put a node off, in units of half an ulp (running error analysis, after
//! Higham, Accuracy and Stability of Numerical Algorithms, section 3.3; from
//! memory).
//!
//! Steps (comparisons, rounding functions, signs) have derivative 0 here: who
//! looks for roots must test for jumps.

use crate::{Function, Graph, NodeId, Op, principal};

/// Calls `f` with each operand that moves `node` and the partial derivative by it.
pub fn partials(graph: &Graph, node: NodeId, values: &[f64], mut f: impl FnMut(NodeId, f64)) {
    let at = |node: NodeId| values[node.index()];
    let value = at(node);
    match graph.op(node) {
        Op::Literal(_) | Op::Input(_) | Op::Compare(..) | Op::And(..) | Op::Or(..) => {}
        Op::Quantity(_, a) => f(a, 1.0),
        Op::Add(a, b) => {
            f(a, 1.0);
            f(b, 1.0);
        }
        Op::Subtract(a, b) => {
            f(a, 1.0);
            f(b, -1.0);
        }
        Op::Multiply(a, b) => {
            f(a, at(b));
            f(b, at(a));
        }
        Op::Divide(a, b) => {
            f(a, 1.0 / at(b));
            f(b, -value / at(b));
        }
        Op::Power(a, num, den) => f(a, power_slope(at(a), value, num, den)),
        Op::PowerOf(a, b) => {
            let (x, y) = (at(a), at(b));
            f(a, if y == 0.0 { 0.0 } else { y * libm::pow(x, y - 1.0) });
            // x^y is 0 at x = 0 for every y > 0, so its slope by y is 0 there.
            f(b, if value == 0.0 { 0.0 } else { value * libm::log(x) });
        }
        Op::Apply(function, a) => f(a, slope(function, at(a), value)),
        Op::Atan2(a, b) => {
            let (y, x) = (at(a), at(b));
            let square = x * x + y * y;
            f(a, x / square);
            f(b, -y / square);
        }
        Op::Min(a, b) => f(if at(a) <= at(b) { a } else { b }, 1.0),
        Op::Max(a, b) => f(if at(a) >= at(b) { a } else { b }, 1.0),
        Op::Select(c, a, b) => {
            let condition = at(c);
            f(if condition != 0.0 { a } else { b }, if condition.is_nan() { f64::NAN } else { 1.0 });
        }
        Op::PrincipalMoment(tensor, rank) => {
            let members = graph.tensor(tensor);
            let axis = principal(members.map(at)).axes[rank as usize % 3];
            each_member(members, axis, axis, f);
        }
        Op::PrincipalAxis(tensor, rank, component) => {
            let members = graph.tensor(tensor);
            let found = principal(members.map(at));
            let (k, component) = (rank as usize % 3, component as usize % 3);
            for j in (0..3).filter(|&j| j != k) {
                // Equal moments have no direction of their own: infinite or NaN, as it is.
                let weight = found.axes[j][component] / (found.moments[k] - found.moments[j]);
                each_member(members, found.axes[j], found.axes[k], |node, partial| f(node, weight * partial));
            }
        }
    }
}

/// Partials of `u^T T v` by the six members of `T`.
fn each_member(members: [NodeId; 6], u: [f64; 3], v: [f64; 3], mut f: impl FnMut(NodeId, f64)) {
    for (member, (i, j)) in members.into_iter().zip([(0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)]) {
        f(member, if i == j { u[i] * v[i] } else { u[i] * v[j] + u[j] * v[i] });
    }
}

fn power_slope(x: f64, value: f64, num: i32, den: i32) -> f64 {
    let exponent = f64::from(num) / f64::from(den);
    match (num, den) {
        (0, _) => 0.0,
        (1, 1) => 1.0,
        (2, 1) => 2.0 * x,
        _ if x != 0.0 => exponent * value / x,
        _ if exponent > 1.0 => 0.0,
        _ => f64::INFINITY,
    }
}

fn slope(function: Function, x: f64, value: f64) -> f64 {
    match function {
        Function::Negate => -1.0,
        Function::Abs => {
            if x > 0.0 {
                1.0
            } else if x < 0.0 {
                -1.0
            } else {
                x
            }
        }
        Function::Sqrt => 0.5 / value,
        Function::Exp => value,
        Function::Ln => 1.0 / x,
        Function::Log10 => std::f64::consts::LOG10_E / x,
        Function::Sin => libm::cos(x),
        Function::Cos => -libm::sin(x),
        Function::Tan => 1.0 + value * value,
        Function::Asin => 1.0 / (1.0 - x * x).sqrt(),
        Function::Acos => -1.0 / (1.0 - x * x).sqrt(),
        Function::Atan => 1.0 / (1.0 + x * x),
        Function::Sinh => libm::cosh(x),
        Function::Cosh => libm::sinh(x),
        Function::Tanh => 1.0 - value * value,
        Function::Floor | Function::Ceil | Function::Round | Function::Sign | Function::Not => 0.0,
    }
}

/// Derivatives of all nodes by input number `input`, into `tangents`.
pub fn tangents(graph: &Graph, values: &[f64], input: u32, tangents: &mut Vec<f64>) {
    tangents.clear();
    tangents.resize(graph.len(), 0.0);
    for index in 0..graph.len() {
        let node = NodeId(index as u32);
        if let Op::Input(own) = graph.op(node) {
            tangents[index] = if own.0 == input { 1.0 } else { 0.0 };
            continue;
        }
        let mut sum = 0.0;
        // An operand that stands still adds nothing, however steep the node is by it.
        partials(graph, node, values, |operand, partial| {
            let tangent = tangents[operand.index()];
            if tangent != 0.0 {
                sum += partial * tangent;
            }
        });
        tangents[index] = sum;
    }
}

/// How far rounding can put each node off, in half ulps of 1: times 2^-53 it
/// bounds the error of the f64 value to first order, each input and number
/// taken as rounded once. Into `reach`.
pub fn rounding(graph: &Graph, values: &[f64], reach: &mut Vec<f64>) {
    reach.clear();
    reach.resize(graph.len(), 0.0);
    for index in 0..graph.len() {
        let mut sum = values[index].abs();
        partials(graph, NodeId(index as u32), values, |operand, partial| {
            let own = reach[operand.index()];
            if own != 0.0 {
                sum += partial.abs() * own;
            }
        });
        reach[index] = sum;
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{CompareOp, evaluate};

    /// The derivative against Richardson-extrapolated differences, which know
    /// nothing of the rules above (four halvings: about 1e-10 relative).
    #[track_caller]
    fn check(at: f64, build: impl Fn(&mut Graph, NodeId) -> NodeId) {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let output = build(&mut graph, x);
        let value = |x: f64| evaluate(&graph, &[x])[output.index()];
        let mut table = [[0.0; 5]; 5];
        let mut h = 0.02;
        for row in 0..5 {
            table[row][0] = (value(at + h) - value(at - h)) / (2.0 * h);
            let mut factor = 4.0;
            for column in 1..=row {
                table[row][column] =
                    table[row][column - 1] + (table[row][column - 1] - table[row - 1][column - 1]) / (factor - 1.0);
                factor *= 4.0;
            }
            h /= 2.0;
        }
        let expected = table[4][4];
        let mut found = Vec::new();
        tangents(&graph, &evaluate(&graph, &[at]), 0, &mut found);
        let found = found[output.index()];
        assert!((found - expected).abs() <= 1e-8 * expected.abs().max(1.0), "{found} against {expected}");
    }

    #[test]
    fn functions_of_one_argument() {
        use Function::*;
        for function in [Negate, Abs, Sqrt, Exp, Ln, Log10, Sin, Cos, Tan, Asin, Acos, Atan, Sinh, Cosh, Tanh, Floor] {
            check(0.37, |graph, x| graph.add(Op::Apply(function, x)));
        }
    }

    #[test]
    fn arithmetic() {
        check(1.3, |graph, x| {
            let sum = graph.add(Op::Add(x, x));
            let square = graph.add(Op::Multiply(sum, x));
            let difference = graph.add(Op::Subtract(square, x));
            graph.add(Op::Divide(difference, square))
        });
    }

    #[test]
    fn constant_powers() {
        for (num, den) in [(0, 1), (1, 1), (2, 1), (3, 1), (-2, 1), (1, 2), (3, 2), (1, 3), (5, 3)] {
            check(1.7, |graph, x| graph.add(Op::Power(x, num, den)));
        }
    }

    #[test]
    fn power_of_two_moving_sides() {
        check(1.4, |graph, x| graph.add(Op::PowerOf(x, x)));
    }

    #[test]
    fn angle_of_a_point() {
        check(0.8, |graph, x| {
            let square = graph.add(Op::Multiply(x, x));
            graph.add(Op::Atan2(square, x))
        });
    }

    #[test]
    fn choices_follow_the_side_taken() {
        for at in [0.5, 1.5] {
            check(at, |graph, x| {
                let one = graph.number(1.0, "1");
                let square = graph.add(Op::Multiply(x, x));
                let low = graph.add(Op::Min(x, square));
                let high = graph.add(Op::Max(x, square));
                let when = graph.add(Op::Compare(CompareOp::Less, x, one));
                let chosen = graph.add(Op::Select(when, low, high));
                graph.add(Op::Multiply(chosen, high))
            });
        }
    }

    #[test]
    fn principal_moments_and_axes() {
        for rank in 0..3 {
            for component in 0..4 {
                check(0.3, |graph, x| {
                    let (two, three, seven) = (graph.number(2.0, "2"), graph.number(3.0, "3"), graph.number(7.0, "7"));
                    let half = graph.number(0.5, "0.5");
                    let yz = graph.add(Op::Multiply(x, half));
                    let yy = graph.add(Op::Add(three, yz));
                    let tensor = graph.tensor_of([two, yy, seven, x, half, yz]);
                    if component == 3 {
                        graph.add(Op::PrincipalMoment(tensor, rank))
                    } else {
                        graph.add(Op::PrincipalAxis(tensor, rank, component))
                    }
                });
            }
        }
    }

    #[test]
    fn rounding_reaches_as_far_as_cancelling_terms() {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let large = graph.number(1e6, "1e6");
        let sum = graph.add(Op::Add(x, large));
        let back = graph.add(Op::Subtract(sum, large));
        let values = evaluate(&graph, &[1.0]);
        let mut reach = Vec::new();
        rounding(&graph, &values, &mut reach);
        assert!(reach[back.index()] > 3e6 && reach[back.index()] < 4e6, "{reach:?}");
    }
}
