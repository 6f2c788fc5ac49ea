//! Equations that are, piece by piece, polynomials of at most the second
//! degree in the unknown. Energy balances are: the losses of a link follow one
//! of two laws by the direction of flow, the greater of two polynomials. All pieces
//! and all their roots are known in closed form.

use crate::polynomial::Polynomial;
use pintle_graph::{CompareOp, Function, Graph, NodeId, Op};

/// Polynomials one after the other, each up to its end; the last end is the range's.
type Pieces = Vec<(f64, Polynomial)>;

/// More pieces are left to the search.
const MOST: usize = 24;

/// Candidates for roots of `left - right` in `low..=high`, ascending, each with
/// whether it lies clearly inside its piece. `None` if the equation is not of this form, or a root is in doubt.
pub(crate) fn candidates(
    graph: &Graph,
    left: NodeId,
    right: NodeId,
    low: f64,
    high: f64,
) -> Option<Vec<(f64, Inside)>> {
    let pieces = read(graph, left, right, low, high)?;
    let mut result = Vec::new();
    let mut from = low;
    for (to, polynomial) in pieces {
        let slack = 1e-9 * (to.abs().max(from.abs())).max(to - from);
        for root in polynomial.roots()? {
            if root >= from && root <= to {
                result.push((root, Inside::Clearly));
            } else if root >= from - slack && root <= to + slack {
                result.push((root, Inside::Perhaps));
            }
        }
        from = to;
    }
    result.sort_by(|a, b| a.0.total_cmp(&b.0));
    Some(result)
}

/// Whether a root lies in the piece that it is a root of.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Inside {
    /// It does.
    Clearly,
    /// Rounding decides.
    Perhaps,
}

fn read(graph: &Graph, left: NodeId, right: NodeId, low: f64, high: f64) -> Option<Pieces> {
    let mut found: Vec<Option<Pieces>> = Vec::with_capacity(graph.len());
    let whole = |polynomial| Some(vec![(high, polynomial)]);
    for &op in graph.ops() {
        let at = |node: NodeId| found.get(node.index()).and_then(|pieces| pieces.as_ref());
        let two = |a: NodeId, b: NodeId| at(a).zip(at(b));
        let next = match op {
            Op::Literal(literal) => whole(Polynomial::number(graph.literal(literal).0)),
            Op::Input(input) if input.0 == 0 => whole(Polynomial::unknown()),
            Op::Quantity(_, a) | Op::Power(a, 1, 1) => at(a).cloned(),
            Op::Apply(Function::Negate, a) => at(a).map(|a| a.iter().map(|(end, p)| (*end, p.negated())).collect()),
            Op::Add(a, b) => two(a, b).and_then(|(a, b)| each(low, a, b, |a, b| Some(a.plus(b, 1.0)))),
            Op::Subtract(a, b) => two(a, b).and_then(|(a, b)| each(low, a, b, |a, b| Some(a.plus(b, -1.0)))),
            Op::Multiply(a, b) => two(a, b).and_then(|(a, b)| each(low, a, b, Polynomial::times)),
            Op::Divide(a, b) => two(a, b).and_then(|(a, b)| each(low, a, b, Polynomial::divided_by)),
            Op::Power(a, 2, 1) => at(a).and_then(|a| each(low, a, a, Polynomial::times)),
            Op::Apply(Function::Abs, a) => {
                at(a).and_then(|a| split(low, a, Some, |p, sign| if sign < 0.0 { p.negated() } else { p }))
            }
            Op::Max(a, b) => choice(low, at(a)?, at(b)?, |sign| sign >= 0.0),
            Op::Min(a, b) => choice(low, at(a)?, at(b)?, |sign| sign <= 0.0),
            Op::Compare(compare, a, b) => two(a, b).and_then(|(a, b)| {
                let difference = each(low, a, b, |a, b| Some(a.plus(b, -1.0)))?;
                let holds = |sign: f64| match compare {
                    CompareOp::Less | CompareOp::LessEqual => Some(sign < 0.0),
                    CompareOp::Greater | CompareOp::GreaterEqual => Some(sign > 0.0),
                    CompareOp::Equal | CompareOp::NotEqual => None,
                };
                holds(1.0)?;
                split(low, &difference, Some, |_, sign| {
                    Polynomial::number(if holds(sign) == Some(true) { 1.0 } else { 0.0 })
                })
            }),
            Op::Select(c, a, b) => at(c).and_then(|c| {
                // With a condition of 1 or 0 piece by piece, c a + (1 - c) b is the choice; but the
                // sizes that a coefficient came from must be those of the side taken alone.
                let taken = each(low, at(a)?, at(b)?, |a, _| Some(a))?;
                let other = each(low, at(a)?, at(b)?, |_, b| Some(b))?;
                let first = each(low, c, &taken, |c, a| {
                    c.constant().map(|c| if c != 0.0 { a } else { Polynomial::default() })
                })?;
                let second = each(low, c, &other, |c, b| {
                    c.constant().map(|c| if c != 0.0 { Polynomial::default() } else { b })
                })?;
                each(low, &first, &second, |a, b| Some(a.plus(b, 1.0)))
            }),
            _ => None,
        };
        found.push(next);
    }
    let at = |node: NodeId| found.get(node.index()).and_then(|pieces| pieces.as_ref());
    each(low, at(left)?, at(right)?, |a, b| Some(a.plus(b, -1.0)))
}

/// Both cut into common pieces and put together.
fn each(low: f64, a: &Pieces, b: &Pieces, f: impl Fn(Polynomial, Polynomial) -> Option<Polynomial>) -> Option<Pieces> {
    let mut result = Pieces::with_capacity(a.len().max(b.len()));
    let (mut i, mut j) = (0, 0);
    let mut from = low;
    while let (Some(&(end_a, p)), Some(&(end_b, q))) = (a.get(i), b.get(j)) {
        let end = end_a.min(end_b);
        if end > from || result.is_empty() {
            result.push((end, f(p, q)?));
            from = end;
        }
        i += usize::from(end_a <= end);
        j += usize::from(end_b <= end);
        if result.len() > MOST {
            return None;
        }
    }
    Some(result)
}

/// Every piece cut where the polynomial that `by` makes of it changes sign; `f` gets that sign.
fn split(
    low: f64,
    pieces: &Pieces,
    by: impl Fn(Polynomial) -> Option<Polynomial>,
    f: impl Fn(Polynomial, f64) -> Polynomial,
) -> Option<Pieces> {
    let mut result = Pieces::new();
    let mut from = low;
    for &(to, polynomial) in pieces {
        let measure = by(polynomial)?;
        let mut ends = measure.sign_changes()?;
        ends.retain(|end| *end > from && *end < to);
        ends.push(to);
        for end in ends {
            let sign = measure.value(0.5 * from + 0.5 * end);
            if sign.is_nan() {
                return None;
            }
            result.push((end, f(polynomial, sign)));
            from = end;
        }
        if result.len() > MOST {
            return None;
        }
    }
    Some(result)
}

/// The first where `first` says so of the sign of first minus second, else the second.
fn choice(low: f64, a: &Pieces, b: &Pieces, first: impl Fn(f64) -> bool) -> Option<Pieces> {
    let difference = each(low, a, b, |a, b| Some(a.plus(b, -1.0)))?;
    let chosen = split(low, &difference, Some, |_, sign| Polynomial::number(if first(sign) { 1.0 } else { 0.0 }))?;
    // Cut the sides at the same places, then take one of them whole, sizes included.
    let mut result = Pieces::with_capacity(chosen.len());
    let (mut i, mut j) = (0, 0);
    for (end, which) in chosen {
        let (Some(&(end_a, p)), Some(&(end_b, q))) = (a.get(i), b.get(j)) else { return None };
        result.push((end, if which.constant()? != 0.0 { p } else { q }));
        i += usize::from(end_a <= end);
        j += usize::from(end_b <= end);
    }
    Some(result)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(range: (f64, f64), expected: Option<&[f64]>, build: impl Fn(&mut Graph, NodeId) -> (NodeId, NodeId)) {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let (left, right) = build(&mut graph, x);
        let found = candidates(&graph, left, right, range.0, range.1);
        let found: Option<Vec<f64>> = found.map(|found| found.into_iter().map(|(root, _)| root).collect());
        match (&found, expected) {
            (Some(found), Some(expected)) => {
                assert_eq!(found.len(), expected.len(), "{found:?}");
                assert!(found.iter().zip(expected).all(|(a, b)| (a - b).abs() < 1e-12), "{found:?}");
            }
            _ => assert_eq!(found.is_none(), expected.is_none(), "{found:?}"),
        }
    }

    #[test]
    fn absolute_value() {
        check((-10.0, 10.0), Some(&[-3.0, 3.0]), |g, x| (g.add(Op::Apply(Function::Abs, x)), g.number(3.0, "3")));
        check((0.0, 10.0), Some(&[3.0]), |g, x| (g.add(Op::Apply(Function::Abs, x)), g.number(3.0, "3")));
    }

    #[test]
    fn the_greater_of_two_laws() {
        // x^2 + max(0.1 (x^2 - 16), -0.2 (x^2 - 16)) = 5: below 4 it is x^2 - 0.2 x^2 + 3.2.
        check((0.0, 100.0), Some(&[1.5]), |g, x| {
            let square = g.add(Op::Power(x, 2, 1));
            let sixteen = g.number(16.0, "16");
            let crossing = g.add(Op::Subtract(square, sixteen));
            let (a, b) = (g.number(0.1, "0.1"), g.number(-0.2, "-0.2"));
            let (a, b) = (g.add(Op::Multiply(a, crossing)), g.add(Op::Multiply(b, crossing)));
            let loss = g.add(Op::Max(a, b));
            (g.add(Op::Add(square, loss)), g.number(5.0, "5"))
        });
    }

    #[test]
    fn no_difference_between_the_laws() {
        check((0.0, 100.0), Some(&[2.0]), |g, x| {
            let zero = g.number(0.0, "0");
            let a = g.add(Op::Multiply(zero, x));
            let b = g.add(Op::Apply(Function::Negate, a));
            let loss = g.add(Op::Max(a, b));
            (g.add(Op::Add(x, loss)), g.number(2.0, "2"))
        });
    }

    #[test]
    fn choice_by_condition() {
        check((0.0, 10.0), Some(&[1.0, 3.0]), |g, x| {
            let two = g.number(2.0, "2");
            let when = g.add(Op::Compare(CompareOp::Less, x, two));
            let (one, three) = (g.number(1.0, "1"), g.number(3.0, "3"));
            (x, g.add(Op::Select(when, one, three)))
        });
    }

    #[test]
    fn other_equations_are_none() {
        check((0.0, 10.0), None, |g, x| (g.add(Op::Apply(Function::Exp, x)), x));
        check((0.0, 10.0), None, |g, x| (g.add(Op::Power(x, 3, 1)), x));
        check((0.0, 10.0), None, |g, x| (g.add(Op::Power(x, 2, 1)), g.number(0.0, "0")));
    }
}
