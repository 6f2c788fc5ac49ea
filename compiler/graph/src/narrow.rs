//! What equations leave of the enclosures: from the results back to the
//! operands (the backward half of HC4: Benhamou, Goualard, Granvilliers, Puget,
//! Revising hull and box consistency, ICLP 1999; from memory).
//!
//! Nothing that satisfies the equations is ever cut off. The branch of a choice
//! that may not be taken need not be defined, so nothing is concluded from it.

use crate::{CompareOp, Enclosure, Function, Graph, NodeId, Op};
use pintle_interval::Interval;

/// What is left.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Left {
    /// Perhaps something.
    Some,
    /// Nothing: no values of the inputs in their ranges satisfy the equations.
    Nothing,
}

/// Narrows `values` so that left equals right in each of `equal`. `nodes` are
/// those that may be narrowed, operands first; all others are fixed.
/// `active` is scratch.
pub fn narrow(
    graph: &Graph,
    nodes: &[NodeId],
    equal: &[(NodeId, NodeId)],
    values: &mut [Enclosure],
    active: &mut Vec<bool>,
) -> Left {
    active.clear();
    active.resize(graph.len(), false);
    let mut narrower = Narrower { graph, values, active };
    for &(left, right) in equal {
        let both = narrower.range(left).meet(narrower.range(right));
        if narrower.set(left, both) == Left::Nothing || narrower.set(right, both) == Left::Nothing {
            return Left::Nothing;
        }
    }
    for &node in nodes.iter().rev() {
        if narrower.active.get(node.index()).copied().unwrap_or(false) && narrower.back(node) == Left::Nothing {
            return Left::Nothing;
        }
    }
    Left::Some
}

struct Narrower<'a> {
    graph: &'a Graph,
    values: &'a mut [Enclosure],
    active: &'a mut Vec<bool>,
}

impl Narrower<'_> {
    fn range(&self, node: NodeId) -> Interval {
        self.values.get(node.index()).map_or(Interval::EMPTY, |it| it.range)
    }

    /// `node` must have its value in `range`.
    fn set(&mut self, node: NodeId, range: Interval) -> Left {
        let (Some(value), Some(active)) = (self.values.get_mut(node.index()), self.active.get_mut(node.index())) else {
            return Left::Nothing;
        };
        let left = value.range.meet(range);
        if left.is_empty() {
            return Left::Nothing;
        }
        *active = true;
        if !matches!(self.graph.op(node), Op::Literal(_)) {
            value.range = left;
        }
        Left::Some
    }

    fn both(&mut self, a: (NodeId, Interval), b: (NodeId, Interval)) -> Left {
        if self.set(a.0, a.1) == Left::Nothing { Left::Nothing } else { self.set(b.0, b.1) }
    }

    fn back(&mut self, node: NodeId) -> Left {
        let z = self.range(node);
        let at = |node: NodeId| self.range(node);
        match self.graph.op(node) {
            Op::Literal(_) | Op::Input(_) => Left::Some,
            Op::Quantity(_, a) => self.set(a, z),
            Op::Add(a, b) if a == b => self.set(a, z.scaled(0.5)),
            Op::Add(a, b) => {
                let left = z - at(b);
                let right = z - at(a).meet(left);
                self.both((a, left), (b, right))
            }
            Op::Subtract(a, b) if a == b => {
                let whole = at(a);
                if z.has_zero() { self.set(a, whole) } else { Left::Nothing }
            }
            Op::Subtract(a, b) => {
                let left = z + at(b);
                let right = at(a).meet(left) - z;
                self.both((a, left), (b, right))
            }
            Op::Multiply(a, b) if a == b => {
                let left = at(a).with_power(2, 1, z);
                self.set(a, left)
            }
            Op::Multiply(a, b) => {
                let left = at(a).with_product(at(b), z);
                let right = at(b).with_product(left, z);
                self.both((a, left), (b, right))
            }
            Op::Divide(a, b) if a == b => {
                let whole = at(a);
                if z.contains(1.0) { self.set(a, whole) } else { Left::Nothing }
            }
            Op::Divide(a, b) => {
                let left = z * at(b);
                let right = at(b).with_quotient(at(a).meet(left), z);
                self.both((a, left), (b, right))
            }
            Op::Power(a, num, den) => {
                let left = at(a).with_power(num, den, z);
                self.set(a, left)
            }
            Op::PowerOf(a, b) => {
                let (base, exponent) = (at(a), at(b));
                if base.lo > 0.0 && z.hi > 0.0 {
                    // z = exp(b ln a)
                    let log = z.ln();
                    let right = exponent.with_product(base.ln(), log);
                    let left = base.ln().with_product(right, log).exp();
                    return self.both((a, left), (b, right));
                }
                self.both((a, base), (b, exponent))
            }
            Op::Apply(function, a) => {
                let left = argument(function, at(a), z);
                self.set(a, left)
            }
            Op::Atan2(a, b) | Op::And(a, b) | Op::Or(a, b) => {
                let (y, x) = (at(a), at(b));
                self.both((a, y), (b, x))
            }
            Op::Min(a, b) => {
                let above = Interval { lo: z.lo, hi: f64::INFINITY };
                let (mut left, mut right) = (at(a).meet(above), at(b).meet(above));
                if left.lo > z.hi {
                    right = right.meet(z);
                }
                if right.lo > z.hi {
                    left = left.meet(z);
                }
                self.both((a, left), (b, right))
            }
            Op::Max(a, b) => {
                let below = Interval { lo: f64::NEG_INFINITY, hi: z.hi };
                let (mut left, mut right) = (at(a).meet(below), at(b).meet(below));
                if left.hi < z.lo {
                    right = right.meet(z);
                }
                if right.hi < z.lo {
                    left = left.meet(z);
                }
                self.both((a, left), (b, right))
            }
            Op::Compare(compare, a, b) => self.compare(compare, z, a, b),
            Op::Select(c, a, b) => {
                let mut condition = at(c);
                if at(a).meet(z).is_empty() {
                    condition = condition.meet(Interval::ZERO);
                }
                if at(b).meet(z).is_empty() {
                    // Anything but 0 takes the first branch.
                    condition = if condition.is_false() { Interval::EMPTY } else { without_zero(condition) };
                }
                if self.set(c, condition) == Left::Nothing {
                    return Left::Nothing;
                }
                if condition.is_true() {
                    self.set(a, z)
                } else if condition.is_false() {
                    self.set(b, z)
                } else {
                    Left::Some
                }
            }
            Op::PrincipalMoment(tensor, _) | Op::PrincipalAxis(tensor, _, _) => {
                for member in self.graph.tensor(tensor) {
                    let whole = self.range(member);
                    if self.set(member, whole) == Left::Nothing {
                        return Left::Nothing;
                    }
                }
                Left::Some
            }
        }
    }

    fn compare(&mut self, compare: CompareOp, z: Interval, a: NodeId, b: NodeId) -> Left {
        let (mut left, mut right) = (self.range(a), self.range(b));
        let below = |x: Interval, y: Interval| {
            (x.meet(Interval { lo: f64::NEG_INFINITY, hi: y.hi }), y.meet(Interval { lo: x.lo, hi: f64::INFINITY }))
        };
        let (holds, fails) = (z.is_true(), z.is_false());
        match compare {
            CompareOp::Less | CompareOp::LessEqual if holds => (left, right) = below(left, right),
            CompareOp::Less | CompareOp::LessEqual if fails => (right, left) = below(right, left),
            CompareOp::Greater | CompareOp::GreaterEqual if holds => (right, left) = below(right, left),
            CompareOp::Greater | CompareOp::GreaterEqual if fails => (left, right) = below(left, right),
            CompareOp::Equal if holds => {
                left = left.meet(right);
                right = left;
            }
            CompareOp::NotEqual if fails => {
                left = left.meet(right);
                right = left;
            }
            _ => {}
        }
        self.both((a, left), (b, right))
    }
}

/// A truth value that is not 0.
fn without_zero(condition: Interval) -> Interval {
    if condition.lo == 0.0 && condition.hi == 1.0 { Interval::ONE } else { condition }
}

/// What of `x` leads to a value of the function in `z`.
fn argument(function: Function, x: Interval, z: Interval) -> Interval {
    match function {
        Function::Negate => x.meet(-z),
        Function::Abs => x.with_abs(z),
        Function::Sqrt => x.with_sqrt(z),
        Function::Exp => x.meet(z.ln()),
        Function::Ln => x.meet(z.exp()),
        // log10 x = ln x / ln 10
        Function::Log10 => x.meet((z * Interval::point(10.0).ln()).exp()),
        Function::Sin => x.with_sin(z),
        Function::Cos => x.with_cos(z),
        Function::Tan => x.with_tan(z),
        Function::Asin => x.with_asin(z),
        Function::Acos => x.with_acos(z),
        Function::Atan => x.with_atan(z),
        Function::Sinh => x.with_sinh(z),
        Function::Cosh => x.with_cosh(z),
        Function::Tanh => x.with_tanh(z),
        Function::Floor => x.with_floor(z),
        Function::Ceil => x.with_ceil(z),
        Function::Round => x.with_round(z),
        Function::Sign => x.with_sign(z),
        Function::Not => {
            if z.is_true() {
                x.meet(Interval::ZERO)
            } else {
                x
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::enclose;

    fn left(range: (f64, f64), build: impl Fn(&mut Graph, NodeId) -> (NodeId, NodeId)) -> Option<Interval> {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let sides = build(&mut graph, x);
        let mut values = enclose(&graph, &[Interval::new(range.0, range.1)]);
        let nodes: Vec<NodeId> = (0..graph.len()).map(|index| NodeId(index as u32)).collect();
        match narrow(&graph, &nodes, &[sides], &mut values, &mut Vec::new()) {
            Left::Some => Some(values[x.index()].range),
            Left::Nothing => None,
        }
    }

    #[track_caller]
    fn check(range: (f64, f64), expected: (f64, f64), build: impl Fn(&mut Graph, NodeId) -> (NodeId, NodeId)) {
        let found = left(range, build).expect("something is left");
        let near = |a: f64, b: f64| (a - b).abs() <= 1e-14 * b.abs();
        assert!(near(found.lo, expected.0) && near(found.hi, expected.1), "{found:?}");
        assert!(found.lo <= expected.0 && expected.1 <= found.hi, "{found:?} lost something");
    }

    #[test]
    fn through_a_square() {
        check((0.0, 900.0), (4.0, 4.0), |g, x| (g.add(Op::Power(x, 2, 1)), g.number(16.0, "16")));
        check((-900.0, 900.0), (-4.0, 4.0), |g, x| (g.add(Op::Multiply(x, x)), g.number(16.0, "16")));
    }

    #[test]
    fn out_of_reach_is_nothing() {
        assert_eq!(left((5.0, 900.0), |g, x| (g.add(Op::Power(x, 2, 1)), g.number(16.0, "16"))), None);
        assert_eq!(left((0.0, 9.0), |g, x| (g.add(Op::Apply(Function::Exp, x)), g.number(0.5, "0.5"))), None);
    }

    #[test]
    fn to_the_domain() {
        check((-4.0, 9.0), (0.0, 9.0), |g, x| (g.add(Op::Apply(Function::Sqrt, x)), g.add(Op::Power(x, 1, 2))));
    }

    #[test]
    fn a_branch_that_may_not_be_taken_cuts_nothing() {
        let chosen = |g: &mut Graph, x: NodeId| {
            let zero = g.number(0.0, "0");
            let when = g.add(Op::Compare(CompareOp::Greater, x, zero));
            let root = g.add(Op::Apply(Function::Sqrt, x));
            (g.add(Op::Select(when, root, zero)), zero)
        };
        check((-4.0, 9.0), (-4.0, 9.0), chosen);
    }

    #[test]
    fn a_branch_out_of_reach_decides_the_condition() {
        check((0.0, 5.0), (2.0, 5.0), |g, x| {
            let (two, three) = (g.number(2.0, "2"), g.number(3.0, "3"));
            let when = g.add(Op::Compare(CompareOp::Less, x, two));
            (g.add(Op::Select(when, two, three)), three)
        });
    }
}
