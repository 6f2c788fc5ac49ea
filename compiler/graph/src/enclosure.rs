//! The interval reading: for ranges of the inputs, a range that holds every
//! value of a node, and whether everything on the way was defined and
//! continuous over all of the ranges. A proof needs the second as much as the first.
//!
//! Values are those of real numbers: where f64 would give infinity or NaN a
//! node has no value, and its range leaves that point out.

use crate::{CompareOp, Function, Graph, InputId, NodeId, Op, principal};
use pintle_interval::Interval;

/// Where the values of a node lie.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Enclosure {
    /// Holds every value; empty if there is none.
    pub range: Interval,
    /// Whether the node is defined and continuous all over the ranges of the inputs.
    pub smooth: bool,
}

impl Enclosure {
    /// Nothing.
    pub const EMPTY: Enclosure = Enclosure { range: Interval::EMPTY, smooth: false };

    /// Values of a thing that is defined and continuous.
    pub fn smooth(range: Interval) -> Enclosure {
        Enclosure { range, smooth: !range.is_empty() }
    }
}

/// Enclosures of all nodes over the given ranges of the inputs. A missing input has no value.
pub fn enclose(graph: &Graph, inputs: &[Interval]) -> Vec<Enclosure> {
    let mut values = Vec::with_capacity(graph.len());
    for index in 0..graph.len() {
        values.push(enclose_node(graph, NodeId(index as u32), &values, |input| input_range(inputs, input)));
    }
    values
}

/// Brings `nodes` in `values` up to date with `inputs`, operands first.
pub fn enclose_nodes(graph: &Graph, nodes: &[NodeId], inputs: &[Interval], values: &mut [Enclosure]) {
    for &node in nodes {
        let value = enclose_node(graph, node, values, |input| input_range(inputs, input));
        if let Some(slot) = values.get_mut(node.index()) {
            *slot = value;
        }
    }
}

fn input_range(inputs: &[Interval], input: InputId) -> Interval {
    inputs.get(input.0 as usize).copied().unwrap_or(Interval::EMPTY)
}

/// The enclosure of one node from those of its operands.
pub fn enclose_node(
    graph: &Graph,
    node: NodeId,
    values: &[Enclosure],
    input: impl Fn(InputId) -> Interval,
) -> Enclosure {
    let at = |node: NodeId| values.get(node.index()).copied().unwrap_or(Enclosure::EMPTY);
    let one = |a: NodeId, f: &dyn Fn(Interval) -> (Interval, bool)| {
        let a = at(a);
        let (range, defined) = f(a.range);
        Enclosure { range, smooth: a.smooth && defined && !range.is_empty() }
    };
    let two = |a: NodeId, b: NodeId, f: &dyn Fn(Interval, Interval) -> (Interval, bool)| {
        let (a, b) = (at(a), at(b));
        let (range, defined) = f(a.range, b.range);
        Enclosure { range, smooth: a.smooth && b.smooth && defined && !range.is_empty() }
    };
    match graph.op(node) {
        Op::Literal(literal) => Enclosure::smooth(Interval::point(graph.literal(literal).0)),
        Op::Input(own) => Enclosure::smooth(input(own)),
        Op::Quantity(_, a) => at(a),
        Op::Add(a, b) => two(a, b, &|a, b| (a + b, true)),
        Op::Subtract(a, b) if a == b => one(a, &|a| (if a.is_empty() { a } else { Interval::ZERO }, true)),
        Op::Subtract(a, b) => two(a, b, &|a, b| (a - b, true)),
        Op::Multiply(a, b) if a == b => one(a, &|a| (a.square(), true)),
        Op::Multiply(a, b) => two(a, b, &|a, b| (a * b, true)),
        Op::Divide(a, b) => two(a, b, &|a, b| (a / b, b.is_divisor())),
        Op::Power(a, num, den) => one(a, &|a| (a.power(num, den), a.is_power_defined(num, den))),
        Op::PowerOf(a, b) => two(a, b, &|a, b| (a.power_of(b), a.is_power_of_defined(b))),
        Op::Apply(function, a) => one(a, &|a| call(function, a)),
        Op::Atan2(a, b) => two(a, b, &|a, b| (a.atan2(b), a.is_atan2_defined(b))),
        Op::Min(a, b) => two(a, b, &|a, b| (a.min(b), true)),
        Op::Max(a, b) => two(a, b, &|a, b| (a.max(b), true)),
        // A truth value is continuous only where it is the same everywhere.
        Op::Compare(compare, a, b) => two(a, b, &|a, b| constant(holds(compare, a, b))),
        Op::And(a, b) => two(a, b, &|a, b| constant(a * b)),
        Op::Or(a, b) => two(a, b, &|a, b| constant(a.max(b))),
        Op::Select(c, a, b) => {
            let condition = at(c);
            if condition.range.is_empty() {
                Enclosure::EMPTY
            } else if condition.range.is_true() {
                Enclosure { smooth: condition.smooth && at(a).smooth, ..at(a) }
            } else if condition.range.is_false() {
                Enclosure { smooth: condition.smooth && at(b).smooth, ..at(b) }
            } else {
                Enclosure { range: at(a).range.hull(at(b).range), smooth: false }
            }
        }
        Op::PrincipalMoment(tensor, rank) => {
            let members = graph.tensor(tensor).map(at);
            let range = principal_moment(members.map(|it| it.range), rank as usize % 3);
            Enclosure { range, smooth: members.iter().all(|it| it.smooth) && !range.is_empty() }
        }
        Op::PrincipalAxis(tensor, _, _) => {
            // A direction jumps where moments meet or its sign is chosen anew.
            let members = graph.tensor(tensor).map(at);
            if members.iter().any(|it| it.range.is_empty()) {
                return Enclosure::EMPTY;
            }
            Enclosure { range: Interval { lo: -1.0, hi: 1.0 }, smooth: false }
        }
    }
}

fn constant(range: Interval) -> (Interval, bool) {
    (range, range.is_point())
}

fn holds(compare: CompareOp, a: Interval, b: Interval) -> Interval {
    match compare {
        CompareOp::Equal => a.equal(b),
        CompareOp::NotEqual => a.equal(b).not(),
        CompareOp::Less => a.less(b),
        CompareOp::LessEqual => a.less_or_equal(b),
        CompareOp::Greater => b.less(a),
        CompareOp::GreaterEqual => b.less_or_equal(a),
    }
}

fn call(function: Function, x: Interval) -> (Interval, bool) {
    match function {
        Function::Negate => (-x, true),
        Function::Abs => (x.abs(), true),
        Function::Sqrt => (x.sqrt(), x.lo >= 0.0),
        Function::Exp => (x.exp(), true),
        Function::Ln => (x.ln(), x.lo > 0.0),
        Function::Log10 => (x.log10(), x.lo > 0.0),
        Function::Sin => (x.sin(), true),
        Function::Cos => (x.cos(), true),
        Function::Tan => (x.tan(), x.is_tan_defined()),
        Function::Asin => (x.asin(), x.lo >= -1.0 && x.hi <= 1.0),
        Function::Acos => (x.acos(), x.lo >= -1.0 && x.hi <= 1.0),
        Function::Atan => (x.atan(), true),
        Function::Sinh => (x.sinh(), true),
        Function::Cosh => (x.cosh(), true),
        Function::Tanh => (x.tanh(), true),
        Function::Floor => constant(x.floor()),
        Function::Ceil => constant(x.ceil()),
        Function::Round => constant(x.round()),
        Function::Sign => constant(x.sign()),
        Function::Not => constant(x.not()),
    }
}

/// The moments of the middle tensor, with the distance to any other as bound
/// (Weyl's inequality); how good the computed axes are is checked in interval
/// arithmetic (Ostrowski's theorem on congruences: Horn and Johnson, Matrix
/// Analysis, theorem 4.5.9; from memory).
fn principal_moment(members: [Interval; 6], rank: usize) -> Interval {
    if members.iter().any(|it| it.is_empty()) {
        return Interval::EMPTY;
    }
    if members.iter().any(|it| !it.is_bounded()) {
        return Interval::ENTIRE;
    }
    let middle = members.map(Interval::middle);
    let found = principal(middle);
    let place = |i: usize, j: usize| match (i.min(j), i.max(j)) {
        (0, 0) => 0,
        (1, 1) => 1,
        (2, 2) => 2,
        (0, 1) => 3,
        (0, 2) => 4,
        _ => 5,
    };
    // Largest row sum of absolute values: above the spectral norm of a symmetric matrix.
    let norm = |entry: &dyn Fn(usize, usize) -> Interval| {
        (0..3)
            .map(|i| (0..3).map(|j| entry(i, j).abs()).fold(Interval::ZERO, |sum, it| sum + it).hi)
            .fold(0.0_f64, f64::max)
    };
    let axis = |k: usize, i: usize| Interval::point(found.axes[k][i]);
    let tensor = |i: usize, j: usize| Interval::point(middle[place(i, j)]);
    // The axes as the rows of V: V T V^t should be the moments, V V^t should be 1.
    let turned = |a: usize, b: usize| {
        let mut sum = Interval::ZERO;
        for i in 0..3 {
            for j in 0..3 {
                sum = sum + axis(a, i) * tensor(i, j) * axis(b, j);
            }
        }
        if a == b { sum - Interval::point(found.moments[a]) } else { sum }
    };
    let skew = |a: usize, b: usize| {
        let dot = (0..3).fold(Interval::ZERO, |sum, i| sum + axis(a, i) * axis(b, i));
        if a == b { dot - Interval::ONE } else { dot }
    };
    let (off, skewness) = (norm(&turned), norm(&skew));
    let spread = norm(&|i, j| members[place(i, j)] - Interval::point(middle[place(i, j)]));
    if skewness.is_nan() || skewness >= 0.5 || !off.is_finite() {
        return Interval::ENTIRE;
    }
    let near = Interval::point(found.moments[rank]).widened(off);
    let stretch = Interval::ONE.widened(skewness);
    (near / stretch).widened(spread)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::evaluate;

    #[track_caller]
    fn check(inputs: &[(f64, f64)], smooth: bool, build: impl Fn(&mut Graph, &[NodeId]) -> NodeId) -> Interval {
        let mut graph = Graph::new();
        let nodes: Vec<NodeId> = inputs.iter().map(|_| graph.input().1).collect();
        let output = build(&mut graph, &nodes);
        let ranges: Vec<Interval> = inputs.iter().map(|&(lo, hi)| Interval::new(lo, hi)).collect();
        let found = enclose(&graph, &ranges)[output.index()];
        assert_eq!(found.smooth, smooth, "{found:?}");
        for step in 0..200 {
            let at: Vec<f64> = ranges
                .iter()
                .enumerate()
                .map(|(k, range)| {
                    let share = (step as f64) * libm::sqrt(2.0 + k as f64);
                    range.at_share(share - share.floor())
                })
                .collect();
            let value = evaluate(&graph, &at)[output.index()];
            assert!(value.is_nan() || found.range.contains(value), "{value} at {at:?} is not in {found:?}");
        }
        found.range
    }

    #[test]
    fn products_and_squares() {
        assert_eq!(check(&[(-2.0, 3.0)], true, |g, x| g.add(Op::Multiply(x[0], x[0]))), Interval::new(0.0, 9.0));
        assert_eq!(check(&[(-2.0, 3.0)], true, |g, x| g.add(Op::Subtract(x[0], x[0]))), Interval::ZERO);
        check(&[(-2.0, 3.0), (1.0, 2.0)], true, |g, x| g.add(Op::Multiply(x[0], x[1])));
    }

    #[test]
    fn undefined_places_are_told() {
        check(&[(-2.0, 3.0)], false, |g, x| g.add(Op::Apply(Function::Sqrt, x[0])));
        check(&[(-2.0, 3.0)], false, |g, x| g.add(Op::Power(x[0], -1, 1)));
        check(&[(1.0, 2.0)], false, |g, x| g.add(Op::Apply(Function::Tan, x[0])));
        check(&[(1.0, 2.0)], true, |g, x| g.add(Op::Apply(Function::Ln, x[0])));
    }

    #[test]
    fn a_choice_is_smooth_where_it_is_made() {
        let chosen = |g: &mut Graph, x: &[NodeId]| {
            let two = g.number(2.0, "2");
            let when = g.add(Op::Compare(CompareOp::Less, x[0], two));
            let root = g.add(Op::Apply(Function::Sqrt, x[0]));
            g.add(Op::Select(when, two, root))
        };
        assert_eq!(check(&[(-1.0, 1.5)], true, chosen), Interval::point(2.0));
        check(&[(3.0, 4.0)], true, chosen);
        check(&[(1.0, 4.0)], false, chosen);
    }

    #[test]
    fn steps_are_smooth_between_jumps() {
        for function in [Function::Floor, Function::Ceil, Function::Round, Function::Sign, Function::Not] {
            check(&[(0.6, 0.9)], true, |g, x| g.add(Op::Apply(function, x[0])));
            check(&[(-0.6, 1.2)], false, |g, x| g.add(Op::Apply(function, x[0])));
        }
    }

    #[test]
    fn principal_moments_of_a_range_of_tensors() {
        for rank in 0..3 {
            let range = check(&[(2.0, 2.1), (-0.3, 0.3)], true, |g, x| {
                let (three, seven) = (g.number(3.0, "3"), g.number(7.0, "7"));
                let tensor = g.tensor_of([x[0], three, seven, x[1], x[1], x[0]]);
                g.add(Op::PrincipalMoment(tensor, rank))
            });
            assert!(range.width() < 3.0, "{range:?}");
            let point = check(&[(2.0, 2.0), (0.3, 0.3)], true, |g, x| {
                let (three, seven) = (g.number(3.0, "3"), g.number(7.0, "7"));
                let tensor = g.tensor_of([x[0], three, seven, x[1], x[1], x[0]]);
                g.add(Op::PrincipalMoment(tensor, rank))
            });
            assert!(point.width() < 1e-13, "{point:?}");
        }
    }

    #[test]
    fn principal_axes_are_never_smooth() {
        check(&[(2.0, 2.1)], false, |g, x| {
            let (three, zero) = (g.number(3.0, "3"), g.number(0.0, "0"));
            let tensor = g.tensor_of([x[0], three, three, zero, zero, zero]);
            g.add(Op::PrincipalAxis(tensor, 0, 1))
        });
    }
}
