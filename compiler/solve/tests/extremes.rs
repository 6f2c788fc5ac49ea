//! Nothing panics and nothing runs away, whatever the numbers and ranges.

mod common;

use common::Builder;
use pintle_graph::Function::*;
use pintle_graph::{CompareOp, NodeId, Op};
use pintle_solve::{Outcome, solve};
use proptest::prelude::*;
use std::time::Instant;

const NUMBERS: [f64; 14] = [
    0.0,
    1.0,
    -1.0,
    0.5,
    3.7,
    1e-300,
    1e300,
    -1e300,
    f64::INFINITY,
    f64::NEG_INFINITY,
    f64::NAN,
    5e-324,
    f64::MAX,
    -0.0,
];

/// One step of building: which operation, and on which of the nodes so far.
type Step = (usize, usize, usize);

fn build(s: &mut Builder, nodes: &mut Vec<NodeId>, (what, a, b): Step) {
    let functions = [
        Negate, Abs, Sqrt, Exp, Ln, Log10, Sin, Cos, Tan, Asin, Acos, Atan, Sinh, Cosh, Tanh, Floor, Ceil, Round, Sign,
        Not,
    ];
    let (a, b) = (nodes[a % nodes.len()], nodes[b % nodes.len()]);
    let next = match what % 40 {
        0 => s.add(a, b),
        1 => s.subtract(a, b),
        2 => s.multiply(a, b),
        3 => s.divide(a, b),
        4 => s.power(a, 3),
        5 => s.power(a, -2),
        6 => s.graph.add(Op::Power(a, 1, 3)),
        7 => s.graph.add(Op::PowerOf(a, b)),
        8 => s.graph.add(Op::Atan2(a, b)),
        9 => s.graph.add(Op::Min(a, b)),
        10 => s.graph.add(Op::Max(a, b)),
        11 => s.graph.add(Op::Compare(CompareOp::Less, a, b)),
        12 => s.graph.add(Op::Compare(CompareOp::Equal, a, b)),
        13 => s.graph.add(Op::And(a, b)),
        14 => s.graph.add(Op::Or(a, b)),
        15 => {
            let when = s.graph.add(Op::Compare(CompareOp::GreaterEqual, a, b));
            s.graph.add(Op::Select(when, a, b))
        }
        16 => {
            let tensor = s.graph.tensor_of([a, b, a, b, b, a]);
            s.graph.add(Op::PrincipalMoment(tensor, 1))
        }
        17 => {
            let tensor = s.graph.tensor_of([a, b, b, a, b, a]);
            s.graph.add(Op::PrincipalAxis(tensor, 2, 1))
        }
        18 | 19 => s.power(a, 2),
        other => s.call(functions[other - 20], a),
    };
    nodes.push(next);
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 300, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn any_problem_ends(
        ranges in prop::collection::vec((0..14usize, 0..14usize), 1..4),
        steps in prop::collection::vec((0..40usize, 0..30usize, 0..30usize), 1..14),
        sides in prop::collection::vec((0..30usize, 0..30usize), 1..5),
    ) {
        let mut s = Builder::default();
        let mut nodes: Vec<NodeId> = ranges.iter().map(|&(low, high)| s.unknown(NUMBERS[low], NUMBERS[high])).collect();
        for number in NUMBERS {
            let node = s.number(number);
            nodes.push(node);
        }
        // Later nodes more often, so that expressions get deep.
        for step in steps {
            build(&mut s, &mut nodes, step);
        }
        for (a, b) in sides {
            let (left, right) = (nodes[nodes.len() - 1 - a % nodes.len()], nodes[nodes.len() - 1 - b % nodes.len()]);
            s.equal(left, right);
        }
        let begin = Instant::now();
        let structure = s.structure();
        let (mut inputs, mut values) = (Vec::new(), Vec::new());
        let outcomes = solve(&s.graph, &s.problem, &structure, &mut inputs, &mut values, &|| false);
        prop_assert_eq!(outcomes.len(), ranges.len());
        for (outcome, unknown) in outcomes.iter().zip(&s.problem.unknowns) {
            if let Outcome::Found { value } = outcome {
                prop_assert!(value.is_finite() && unknown.low <= *value && *value <= unknown.high);
            }
        }
        prop_assert!(begin.elapsed().as_secs_f64() < 20.0, "{:?}", begin.elapsed());
    }
}
