//! Enclosures of derivatives over ranges of the inputs, swept from the results
//! back to the inputs.
//!
//! For kinks (absolute value, lesser, greater) the range holds all slopes near
//! by (Clarke's generalised gradient), so the mean value theorem holds with it.
//! Steps count as flat: who asks must see to it that the node is smooth.

use crate::{Enclosure, Function, Graph, NodeId, Op};
use pintle_interval::Interval;

/// Calls `f` with each operand that moves `node` and the range of the partial derivative by it.
pub fn partial_enclosures(graph: &Graph, node: NodeId, values: &[Enclosure], mut f: impl FnMut(NodeId, Interval)) {
    let at = |node: NodeId| values.get(node.index()).map_or(Interval::EMPTY, |it| it.range);
    let value = at(node);
    // A slope that no number bounds.
    let mut f = |operand: NodeId, slope: Interval| f(operand, if slope.is_empty() { Interval::ENTIRE } else { slope });
    match graph.op(node) {
        Op::Literal(_) | Op::Input(_) | Op::Compare(..) | Op::And(..) | Op::Or(..) => {}
        Op::Quantity(_, a) => f(a, Interval::ONE),
        Op::Add(a, b) => {
            f(a, Interval::ONE);
            f(b, Interval::ONE);
        }
        Op::Subtract(a, b) => {
            if a != b {
                f(a, Interval::ONE);
                f(b, -Interval::ONE);
            }
        }
        Op::Multiply(a, b) if a == b => f(a, at(a).scaled(2.0)),
        Op::Multiply(a, b) => {
            f(a, at(b));
            f(b, at(a));
        }
        Op::Divide(a, b) => {
            f(a, Interval::ONE / at(b));
            f(b, -(value / at(b)));
        }
        Op::Power(a, num, den) => f(a, power_slope(at(a), num, den)),
        Op::PowerOf(a, b) => {
            let (x, y) = (at(a), at(b));
            f(a, y * x.power_of(y - Interval::ONE));
            f(b, if x.lo < 0.0 { Interval::ENTIRE } else { value * x.ln() });
        }
        Op::Apply(function, a) => {
            if let Some(slope) = slope(function, at(a), value) {
                f(a, slope);
            }
        }
        Op::Atan2(a, b) => {
            let (y, x) = (at(a), at(b));
            let square = x.square() + y.square();
            f(a, x / square);
            f(b, -(y / square));
        }
        Op::Min(a, b) => either(at(a), at(b), |first, second| {
            f(a, first);
            f(b, second);
        }),
        // The greater is the first where the second is the lesser.
        Op::Max(a, b) => either(at(b), at(a), |first, second| {
            f(a, first);
            f(b, second);
        }),
        Op::Select(c, a, b) => {
            let condition = at(c);
            if condition.is_true() {
                f(a, Interval::ONE);
            } else if condition.is_false() {
                f(b, Interval::ONE);
            } else {
                f(a, Interval::UNIT);
                f(b, Interval::UNIT);
            }
        }
        Op::PrincipalMoment(tensor, _) => {
            // u_i u_j of a unit vector: squares in 0..1, twice a mixed product in -1..1.
            for (index, member) in graph.tensor(tensor).into_iter().enumerate() {
                f(member, if index < 3 { Interval::UNIT } else { Interval { lo: -1.0, hi: 1.0 } });
            }
        }
        Op::PrincipalAxis(tensor, _, _) => {
            for member in graph.tensor(tensor) {
                f(member, Interval::ENTIRE);
            }
        }
    }
}

/// Weights of the lesser of two.
fn either(a: Interval, b: Interval, f: impl FnOnce(Interval, Interval)) {
    if a.hi <= b.lo {
        f(Interval::ONE, Interval::ZERO);
    } else if b.hi <= a.lo {
        f(Interval::ZERO, Interval::ONE);
    } else {
        f(Interval::UNIT, Interval::UNIT);
    }
}

fn power_slope(x: Interval, num: i32, den: i32) -> Interval {
    let exponent = Interval::point(f64::from(num)) / Interval::point(f64::from(den));
    match (num, den) {
        (0, _) => Interval::ZERO,
        // x^(1/3) is defined below 0 as well: 1 / (3 x^(2/3)).
        (1, 3) => exponent / x.power(1, 3).square(),
        _ => match num.checked_sub(den) {
            Some(less) => exponent * x.power(less, den),
            None => Interval::ENTIRE,
        },
    }
}

fn slope(function: Function, x: Interval, value: Interval) -> Option<Interval> {
    let one = Interval::ONE;
    Some(match function {
        Function::Negate => -one,
        Function::Abs => {
            if x.lo >= 0.0 {
                one
            } else if x.hi <= 0.0 {
                -one
            } else {
                Interval { lo: -1.0, hi: 1.0 }
            }
        }
        Function::Sqrt => Interval::point(0.5) / value,
        Function::Exp => value,
        Function::Ln => one / x,
        Function::Log10 => one / (x * Interval::point(10.0).ln()),
        Function::Sin => x.cos(),
        Function::Cos => -x.sin(),
        Function::Tan => one + value.square(),
        Function::Asin => one / (one - x.square()).sqrt(),
        Function::Acos => -(one / (one - x.square()).sqrt()),
        Function::Atan => one / (one + x.square()),
        Function::Sinh => x.cosh(),
        Function::Cosh => x.sinh(),
        Function::Tanh => (one - value.square()).meet(Interval::UNIT),
        Function::Floor | Function::Ceil | Function::Round | Function::Sign | Function::Not => return None,
    })
}

/// Sweeps the slopes in `slopes` (one per node, those of the results set by
/// the caller, all others 0) back to the inputs. `nodes` are those between,
/// operands first; the slopes of all but inputs are 0 again afterwards.
pub fn slope_enclosures(graph: &Graph, nodes: &[NodeId], values: &[Enclosure], slopes: &mut [Interval]) {
    for &node in nodes.iter().rev() {
        if matches!(graph.op(node), Op::Input(_)) {
            continue;
        }
        let Some(slot) = slopes.get_mut(node.index()) else { continue };
        let own = std::mem::replace(slot, Interval::ZERO);
        if own == Interval::ZERO {
            continue;
        }
        partial_enclosures(graph, node, values, |operand, partial| {
            if let Some(slot) = slopes.get_mut(operand.index()) {
                *slot = *slot + own * partial;
            }
        });
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{CompareOp, enclose, evaluate, tangents};

    /// The f64 derivative anywhere in the range lies in the enclosure; over one point both agree.
    #[track_caller]
    fn check(range: (f64, f64), build: impl Fn(&mut Graph, NodeId) -> NodeId) {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let output = build(&mut graph, x);
        let nodes: Vec<NodeId> = (0..graph.len()).map(|index| NodeId(index as u32)).collect();
        let over = |range: Interval| {
            let values = enclose(&graph, &[range]);
            let mut slopes = vec![Interval::ZERO; graph.len()];
            slopes[output.index()] = Interval::ONE;
            slope_enclosures(&graph, &nodes, &values, &mut slopes);
            slopes[x.index()]
        };
        let whole = over(Interval::new(range.0, range.1));
        for step in 0..=20 {
            let at = range.0 + (range.1 - range.0) * f64::from(step) / 20.0;
            let values = evaluate(&graph, &[at]);
            let mut found = Vec::new();
            tangents(&graph, &values, 0, &mut found);
            let slope = found[output.index()];
            let tolerance = 1e-12 * slope.abs().max(1.0);
            assert!(whole.widened(tolerance).contains(slope), "{slope} at {at} is not in {whole:?}");
            let point = over(Interval::point(at));
            assert!(point.widened(tolerance).contains(slope), "{slope} at {at} is not {point:?}");
        }
    }

    #[test]
    fn functions_of_one_argument() {
        use Function::*;
        for function in [Negate, Abs, Sqrt, Exp, Ln, Log10, Sin, Cos, Tan, Asin, Acos, Atan, Sinh, Cosh, Tanh, Floor] {
            check((0.31, 0.62), |graph, x| graph.add(Op::Apply(function, x)));
        }
    }

    #[test]
    fn arithmetic_and_powers() {
        check((1.1, 1.7), |graph, x| {
            let sum = graph.add(Op::Add(x, x));
            let square = graph.add(Op::Multiply(sum, x));
            let own = graph.add(Op::Multiply(square, square));
            let difference = graph.add(Op::Subtract(own, x));
            graph.add(Op::Divide(difference, square))
        });
        for (num, den) in [(0, 1), (1, 1), (2, 1), (3, 1), (-2, 1), (1, 2), (3, 2), (1, 3), (5, 3)] {
            check((1.2, 1.9), |graph, x| graph.add(Op::Power(x, num, den)));
        }
        check((1.2, 1.9), |graph, x| graph.add(Op::PowerOf(x, x)));
        check((0.7, 0.9), |graph, x| {
            let square = graph.add(Op::Multiply(x, x));
            graph.add(Op::Atan2(square, x))
        });
    }

    #[test]
    fn choices_hold_both_sides_of_a_kink() {
        check((0.5, 1.5), |graph, x| {
            let one = graph.number(1.0, "1");
            let square = graph.add(Op::Multiply(x, x));
            let low = graph.add(Op::Min(x, square));
            let high = graph.add(Op::Max(x, square));
            let when = graph.add(Op::Compare(CompareOp::Less, x, one));
            let chosen = graph.add(Op::Select(when, low, high));
            graph.add(Op::Multiply(chosen, high))
        });
    }

    #[test]
    fn principal_moments() {
        for rank in 0..3 {
            check((0.2, 0.4), |graph, x| {
                let (two, three, seven) = (graph.number(2.0, "2"), graph.number(3.0, "3"), graph.number(7.0, "7"));
                let tensor = graph.tensor_of([two, three, seven, x, x, x]);
                graph.add(Op::PrincipalMoment(tensor, rank))
            });
        }
    }
}
