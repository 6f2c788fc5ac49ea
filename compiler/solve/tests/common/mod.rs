//! Builds problems for the tests, and judges results by evaluating the graph anew.
#![allow(dead_code)]

use pintle_graph::{Function, Graph, NodeId, Op, evaluate};
use pintle_solve::{Equation, Outcome, Problem, Structure, Unknown, solve, structure};

/// A graph with unknowns in it and equations over them.
#[derive(Default)]
pub struct Builder {
    pub graph: Graph,
    pub problem: Problem,
}

impl Builder {
    pub fn unknown(&mut self, low: f64, high: f64) -> NodeId {
        let (input, node) = self.graph.input();
        self.problem.unknowns.push(Unknown { input, low, high });
        node
    }

    pub fn equal(&mut self, left: NodeId, right: NodeId) {
        self.problem.equations.push(Equation { left, right });
    }

    pub fn number(&mut self, value: f64) -> NodeId {
        self.graph.number(value, &value.to_string())
    }

    pub fn add(&mut self, a: NodeId, b: NodeId) -> NodeId {
        self.graph.add(Op::Add(a, b))
    }

    pub fn subtract(&mut self, a: NodeId, b: NodeId) -> NodeId {
        self.graph.add(Op::Subtract(a, b))
    }

    pub fn multiply(&mut self, a: NodeId, b: NodeId) -> NodeId {
        self.graph.add(Op::Multiply(a, b))
    }

    pub fn divide(&mut self, a: NodeId, b: NodeId) -> NodeId {
        self.graph.add(Op::Divide(a, b))
    }

    pub fn power(&mut self, a: NodeId, exponent: i32) -> NodeId {
        self.graph.add(Op::Power(a, exponent, 1))
    }

    pub fn call(&mut self, function: Function, a: NodeId) -> NodeId {
        self.graph.add(Op::Apply(function, a))
    }

    pub fn structure(&self) -> Structure {
        structure(&self.graph, &self.problem)
    }

    /// Solves from nothing; checks that inputs, values and outcomes agree and that what was found satisfies its equations.
    #[track_caller]
    pub fn solve(&self) -> Vec<Outcome> {
        let structure = self.structure();
        let (mut inputs, mut values) = (Vec::new(), Vec::new());
        let outcomes = solve(&self.graph, &self.problem, &structure, &mut inputs, &mut values, &|| false);
        assert_eq!(outcomes.len(), self.problem.unknowns.len());
        for (outcome, unknown) in outcomes.iter().zip(&self.problem.unknowns) {
            let input = inputs[unknown.input.0 as usize];
            match outcome.value() {
                Some(value) => {
                    assert_eq!(value, input);
                    assert!(unknown.low <= value && value <= unknown.high, "{value} is out of range");
                }
                None => assert!(input.is_nan(), "a value was left in an unknown not found: {outcome:?}"),
            }
        }
        let expected = evaluate(&self.graph, &inputs);
        assert_eq!(values.len(), expected.len());
        for (value, expected) in values.iter().zip(&expected) {
            assert!(value == expected || value.is_nan() && expected.is_nan(), "{value} is out of date, {expected}");
        }
        for block in &structure.blocks {
            let found: Vec<Vec<f64>> = match &outcomes[block.unknowns[0]] {
                Outcome::Found { .. } => vec![block.unknowns.iter().filter_map(|&u| outcomes[u].value()).collect()],
                Outcome::Several { values } => (0..values.len())
                    .map(|k| {
                        let of = |u: &usize| match &outcomes[*u] {
                            Outcome::Several { values } => values[k],
                            other => panic!("{other:?} beside several"),
                        };
                        block.unknowns.iter().map(of).collect()
                    })
                    .collect(),
                _ => continue,
            };
            for solution in found {
                assert_eq!(solution.len(), block.unknowns.len());
                self.check_satisfied(block.equations.as_slice(), &block.unknowns, &solution, &inputs);
            }
        }
        outcomes
    }

    /// The residual against the largest intermediate value, which no code of the solver computes; a root is
    /// also good if the sign changes within two floats on both sides.
    #[track_caller]
    fn check_satisfied(&self, equations: &[usize], unknowns: &[usize], solution: &[f64], inputs: &[f64]) {
        let with = |shift: i64| {
            let mut inputs = inputs.to_vec();
            for (&unknown, &value) in unknowns.iter().zip(solution) {
                let moved = if shift == 0 { value } else { value + shift as f64 * 2.0 * f64::EPSILON * value.abs() };
                inputs[self.problem.unknowns[unknown].input.0 as usize] = moved;
            }
            evaluate(&self.graph, &inputs)
        };
        let (below, at, above) = (with(-1), with(0), with(1));
        for &index in equations {
            let equation = self.problem.equations[index];
            let residual = |values: &[f64]| values[equation.left.index()] - values[equation.right.index()];
            let size = at[equation.left.index()].abs() + at[equation.right.index()].abs();
            let good = residual(&at).abs() <= 2e-12 * size
                || unknowns.len() == 1 && residual(&below) * residual(&above) <= 0.0
                || residual(&at).abs()
                    <= 1e-12 * at.iter().filter(|v| v.is_finite()).fold(0.0, |a: f64, b| a.max(b.abs()));
            assert!(
                good,
                "{solution:?} leaves {:e} of {size:e} in equation {index}: {:?}",
                residual(&at),
                (pintle_graph::formula(&self.graph, equation.left), pintle_graph::formula(&self.graph, equation.right))
            );
        }
    }
}

/// What is expected of one unknown.
#[derive(Clone, Debug)]
pub enum Expect {
    /// These roots, to 1e-14 relative (1e-7 where the flag of the check says so).
    Roots(Vec<f64>),
    Nothing(pintle_solve::NotFound),
    Skipped,
}

#[track_caller]
pub fn check_outcome(outcome: &Outcome, expect: &Expect, tolerance: f64) {
    let good = match (outcome, expect) {
        (Outcome::Found { value }, Expect::Roots(roots)) => roots.len() == 1 && near(*value, roots[0], tolerance),
        (Outcome::Several { values }, Expect::Roots(roots)) => {
            values.len() == roots.len() && values.iter().zip(roots).all(|(a, b)| near(*a, *b, tolerance))
        }
        (Outcome::NotFound { why, .. }, Expect::Nothing(expected)) => why == expected,
        (Outcome::Skipped, Expect::Skipped) => true,
        _ => false,
    };
    assert!(good, "{outcome:?}, expected {expect:?}");
}

fn near(a: f64, b: f64, tolerance: f64) -> bool {
    (a - b).abs() <= tolerance * b.abs()
}
