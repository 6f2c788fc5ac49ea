//! Equations that are sums of powers of the unknown, any real exponents, over a
//! range without negative values. Such a sum, its terms in the order of their
//! exponents, has no more positive roots than its coefficients change sign
//! (Descartes' rule of signs, which holds for real exponents too: Jameson, Math.
//! Gazette 90 (2006) 223-234, from memory). With one change the two ends of
//! the range decide, and nothing has to be sampled. Drag with the square or cube of the
//! speed, inertia with the fourth power of a diameter: most design questions
//! are of this form.

use pintle_graph::{Function, Graph, NodeId, Op};
use std::cmp::Ordering;

/// `coefficient x^(num/den)`, `den > 0`, reduced.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Term {
    num: i32,
    den: i32,
    coefficient: f64,
    /// Sum of the absolute values that went into the coefficient.
    size: f64,
}

/// Terms in ascending order of their exponents, each exponent once.
type Sum = Vec<Term>;

/// Longer sums are left to the search.
const LONGEST: usize = 12;

fn order(a: &Term, b: &Term) -> Ordering {
    (i64::from(a.num) * i64::from(b.den)).cmp(&(i64::from(b.num) * i64::from(a.den)))
}

fn exponent(num: i64, den: i64) -> Option<(i32, i32)> {
    let (mut a, mut b) = (num.unsigned_abs(), den.unsigned_abs());
    while b != 0 {
        (a, b) = (b, a % b);
    }
    let divisor = i64::try_from(a.max(1)).ok()?;
    Some((i32::try_from(num / divisor).ok()?, i32::try_from(den / divisor).ok()?))
}

fn number(value: f64) -> Sum {
    vec![Term { num: 0, den: 1, coefficient: value, size: value.abs() }]
}

/// Sorts and joins equal exponents.
fn sum(mut terms: Sum) -> Option<Sum> {
    terms.sort_by(order);
    let mut result: Sum = Vec::with_capacity(terms.len());
    for term in terms {
        match result.last_mut() {
            Some(last) if order(last, &term).is_eq() => {
                last.coefficient += term.coefficient;
                last.size += term.size;
            }
            _ => result.push(term),
        }
    }
    (result.len() <= LONGEST).then_some(result)
}

fn plus(a: &Sum, b: &Sum, sign: f64) -> Option<Sum> {
    sum(a.iter().copied().chain(b.iter().map(|t| Term { coefficient: sign * t.coefficient, ..*t })).collect())
}

fn times(a: &Sum, b: &Sum) -> Option<Sum> {
    let mut terms = Vec::with_capacity(a.len() * b.len());
    for x in a {
        for y in b {
            let (num, den) = exponent(
                i64::from(x.num) * i64::from(y.den) + i64::from(y.num) * i64::from(x.den),
                i64::from(x.den) * i64::from(y.den),
            )?;
            terms.push(Term { num, den, coefficient: x.coefficient * y.coefficient, size: x.size * y.size });
        }
    }
    sum(terms)
}

fn power(a: &Sum, num: i32, den: i32) -> Option<Sum> {
    if let [one] = a.as_slice() {
        // Below zero only whole powers exist; below the fraction line nothing may vanish.
        if (den != 1 && one.coefficient <= 0.0) || one.coefficient == 0.0 {
            return None;
        }
        let share = f64::from(num) / f64::from(den);
        let size = libm::pow(one.coefficient.abs(), share);
        let negative = one.coefficient < 0.0 && num % 2 != 0;
        let coefficient = if negative { -size } else { size };
        let (num, den) =
            exponent(i64::from(one.num) * i64::from(num), i64::from(one.den).checked_mul(i64::from(den))?)?;
        // An unclear coefficient stays unclear.
        let clear = size / coefficient.abs() * (one.size / one.coefficient.abs());
        return Some(vec![Term { num, den, coefficient, size: size * clear }]);
    }
    match (num, den) {
        (1, 1) => Some(a.clone()),
        (2, 1) => times(a, a),
        (3, 1) => times(&times(a, a)?, a),
        (4, 1) => {
            let square = times(a, a)?;
            times(&square, &square)
        }
        _ => None,
    }
}

fn read(graph: &Graph, left: NodeId, right: NodeId) -> Option<Sum> {
    let mut found: Vec<Option<Sum>> = Vec::with_capacity(graph.len());
    for &op in graph.ops() {
        let at = |node: NodeId| found.get(node.index()).and_then(|sum| sum.as_ref());
        let next = match op {
            Op::Literal(literal) => Some(number(graph.literal(literal).0)),
            Op::Input(input) => (input.0 == 0).then(|| vec![Term { num: 1, den: 1, coefficient: 1.0, size: 1.0 }]),
            Op::Quantity(_, a) => at(a).cloned(),
            Op::Apply(Function::Negate, a) => at(a).and_then(|a| times(a, &number(-1.0))),
            Op::Apply(Function::Sqrt, a) => at(a).and_then(|a| power(a, 1, 2)),
            Op::Add(a, b) => at(a).zip(at(b)).and_then(|(a, b)| plus(a, b, 1.0)),
            Op::Subtract(a, b) => at(a).zip(at(b)).and_then(|(a, b)| plus(a, b, -1.0)),
            Op::Multiply(a, b) => at(a).zip(at(b)).and_then(|(a, b)| times(a, b)),
            Op::Divide(a, b) => {
                at(a).zip(at(b)).and_then(|(a, b)| if b.len() == 1 { times(a, &power(b, -1, 1)?) } else { None })
            }
            Op::Power(a, num, den) => at(a).and_then(|a| power(a, num, den)),
            _ => None,
        };
        found.push(next);
    }
    let at = |node: NodeId| found.get(node.index()).and_then(|sum| sum.as_ref());
    at(left).zip(at(right)).and_then(|(left, right)| plus(left, right, -1.0))
}

/// How often, at most, the coefficients of `left - right` change sign, if it is
/// a sum of powers of input 0. A coefficient that rounding leaves in doubt is
/// taken with the sign that makes most changes. For positive values of the
/// input there are no more roots than that.
pub(crate) fn sign_changes(graph: &Graph, left: NodeId, right: NodeId) -> Option<usize> {
    const CLEAR: f64 = 1e-9;
    let terms = read(graph, left, right)?;
    // Most changes so far if the last sign was plus, and if it was minus.
    let (mut plus, mut minus): (Option<usize>, Option<usize>) = (None, None);
    for term in terms.iter().filter(|term| term.size != 0.0) {
        if !term.coefficient.is_finite() || !term.size.is_finite() {
            return None;
        }
        let after = |same: Option<usize>, other: Option<usize>| same.max(other.map(|count| count + 1)).or(Some(0));
        let (to_plus, to_minus) = (after(plus, minus), after(minus, plus));
        if term.coefficient.abs() <= CLEAR * term.size {
            (plus, minus) = (to_plus, to_minus);
        } else if term.coefficient > 0.0 {
            (plus, minus) = (to_plus, None);
        } else {
            (plus, minus) = (None, to_minus);
        }
    }
    Some(plus.max(minus).unwrap_or(0))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(expected: Option<usize>, build: impl Fn(&mut Graph, NodeId) -> (NodeId, NodeId)) {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let (left, right) = build(&mut graph, x);
        assert_eq!(sign_changes(&graph, left, right), expected);
    }

    #[test]
    fn drag_by_square_and_cube() {
        check(Some(1), |graph, x| {
            let square = graph.add(Op::Power(x, 2, 1));
            let cube = graph.add(Op::Power(x, 3, 1));
            (graph.add(Op::Add(square, cube)), graph.number(7.0, "7"))
        });
    }

    #[test]
    fn drive_against_drag_changes_twice() {
        check(Some(2), |graph, x| {
            let cube = graph.add(Op::Power(x, 3, 1));
            let seven = graph.number(7.0, "7");
            let left = graph.add(Op::Add(cube, seven));
            let nine = graph.number(9.0, "9");
            (left, graph.add(Op::Multiply(nine, x)))
        });
    }

    #[test]
    fn roots_and_fractions_are_powers() {
        check(Some(1), |graph, x| {
            let root = graph.add(Op::Apply(Function::Sqrt, x));
            let seven = graph.number(7.0, "7");
            (root, graph.add(Op::Divide(seven, x)))
        });
        check(Some(0), |graph, x| {
            let seven = graph.number(-7.0, "-7");
            (graph.add(Op::Power(x, -3, 2)), seven)
        });
    }

    #[test]
    fn square_of_a_sum() {
        check(Some(2), |graph, x| {
            let three = graph.number(3.0, "3");
            let off = graph.add(Op::Subtract(x, three));
            (graph.add(Op::Power(off, 2, 1)), graph.number(0.0, "0"))
        });
    }

    #[test]
    fn doubt_counts_as_the_worse_sign() {
        // 0.2 x^2 - 0.1 x^2 - 0.1 x^2 may be anything about zero; between minus and plus it changes nothing.
        let doubtful = |graph: &mut Graph, x: NodeId| {
            let fifth = graph.number(0.2, "0.2");
            let tenth = graph.number(0.1, "0.1");
            let square = graph.add(Op::Power(x, 2, 1));
            let a = graph.add(Op::Multiply(fifth, square));
            let b = graph.add(Op::Multiply(tenth, square));
            let b = graph.add(Op::Add(b, b));
            graph.add(Op::Subtract(a, b))
        };
        check(Some(1), |graph, x| {
            let doubtful = doubtful(graph, x);
            let fourth = graph.add(Op::Power(x, 4, 1));
            (graph.add(Op::Add(doubtful, fourth)), graph.number(1.0, "1"))
        });
        check(Some(2), |graph, x| {
            let doubtful = doubtful(graph, x);
            let fourth = graph.add(Op::Power(x, 4, 1));
            (graph.add(Op::Add(doubtful, fourth)), graph.number(-1.0, "-1"))
        });
    }

    #[test]
    fn other_functions_and_no_numbers_are_none() {
        check(None, |graph, x| (graph.add(Op::Apply(Function::Exp, x)), x));
        check(None, |graph, x| (x, graph.number(f64::NAN, "?")));
    }
}
