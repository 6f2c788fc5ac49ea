//! Which equation fixes which unknown, and blocks one after the other.

mod common;

use common::{Builder, Expect, check_outcome};
use pintle_graph::{NodeId, Op};
use pintle_solve::{NotFound, Outcome, solve};
use std::time::Instant;

/// Unknowns and the unknowns in each equation; blocks as lists of unknowns.
#[track_caller]
fn check(n: usize, equations: &[&[usize]], blocks: &[&[usize]], free: &[usize], spare: &[usize]) {
    let builder = sums(n, equations);
    let structure = builder.structure();
    let found: Vec<Vec<usize>> = structure.blocks.iter().map(|block| block.unknowns.clone()).collect();
    assert_eq!(found, blocks.iter().map(|block| block.to_vec()).collect::<Vec<_>>());
    assert_eq!(structure.free_unknowns, free);
    assert_eq!(structure.spare_equations, spare);
    assert_eq!(structure, builder.structure());
    for block in &structure.blocks {
        assert_eq!(block.unknowns.len(), block.equations.len());
    }
}

fn sums(n: usize, equations: &[&[usize]]) -> Builder {
    let mut builder = Builder::default();
    let unknowns: Vec<NodeId> = (0..n).map(|_| builder.unknown(-100.0, 100.0)).collect();
    for (k, members) in equations.iter().enumerate() {
        let mut sum = builder.number(k as f64);
        for &member in *members {
            sum = builder.add(sum, unknowns[member]);
        }
        let right = builder.number(7.0);
        builder.equal(sum, right);
    }
    builder
}

#[test]
fn nothing_at_all() {
    check(0, &[], &[], &[], &[]);
}

#[test]
fn order_follows_need() {
    check(3, &[&[0, 1, 2], &[1, 2], &[2]], &[&[2], &[1], &[0]], &[], &[]);
}

#[test]
fn coupled_unknowns_are_one_block() {
    check(4, &[&[0, 1], &[0, 1], &[1, 2, 3], &[2, 3]], &[&[0, 1], &[2, 3]], &[], &[]);
}

#[test]
fn a_ring_is_one_block() {
    check(4, &[&[0, 1], &[1, 2], &[2, 3], &[3, 0]], &[&[0, 1, 2, 3]], &[], &[]);
}

#[test]
fn augmenting_path_is_found() {
    check(3, &[&[0, 1], &[0, 1], &[1, 2], &[0]], &[&[0], &[1], &[2]], &[], &[1]);
}

#[test]
fn free_unknown() {
    check(2, &[&[0]], &[&[0]], &[1], &[]);
}

#[test]
fn spare_equation_and_equation_without_unknown() {
    check(1, &[&[0], &[0], &[]], &[&[0]], &[], &[1, 2]);
}

#[test]
fn what_hangs_on_a_free_unknown_is_skipped() {
    let outcomes = sums(3, &[&[0, 1], &[2]]).solve();
    // Two unknowns, one equation: one of them is free and the other waits for it.
    let free = outcomes.iter().filter(|o| matches!(o, Outcome::NotFound { why: NotFound::Free, .. })).count();
    assert_eq!((free, outcomes.iter().filter(|o| **o == Outcome::Skipped).count()), (1, 1));
    check_outcome(&outcomes[2], &Expect::Roots(vec![6.0]), 0.0);
}

#[test]
fn an_unknown_with_no_solution_stops_only_those_that_need_it() {
    let mut s = Builder::default();
    let (x, y, z) = (s.unknown(0.0, 1.0), s.unknown(0.0, 9.0), s.unknown(0.0, 9.0));
    let (five, two) = (s.number(5.0), s.number(2.0));
    s.equal(x, five);
    let sum = s.add(x, y);
    s.equal(sum, five);
    s.equal(z, two);
    let outcomes = s.solve();
    check_outcome(&outcomes[0], &Expect::Nothing(NotFound::NoRoot), 0.0);
    check_outcome(&outcomes[1], &Expect::Skipped, 0.0);
    check_outcome(&outcomes[2], &Expect::Roots(vec![2.0]), 0.0);
}

#[test]
fn several_roots_stop_those_that_need_one() {
    let mut s = Builder::default();
    let (x, y) = (s.unknown(-9.0, 9.0), s.unknown(0.0, 9.0));
    let four = s.number(4.0);
    let square = s.power(x, 2);
    s.equal(square, four);
    let sum = s.add(x, y);
    s.equal(sum, four);
    let outcomes = s.solve();
    check_outcome(&outcomes[0], &Expect::Roots(vec![-2.0, 2.0]), 0.0);
    check_outcome(&outcomes[1], &Expect::Skipped, 0.0);
}

#[test]
fn cancelled_from_outside() {
    let s = sums(2, &[&[0], &[1]]);
    let (mut inputs, mut values) = (Vec::new(), Vec::new());
    let outcomes = solve(&s.graph, &s.problem, &s.structure(), &mut inputs, &mut values, &|| true);
    for outcome in outcomes {
        check_outcome(&outcome, &Expect::Nothing(NotFound::Cancelled), 0.0);
    }
}

/// `x[k]^power = x[k-1] + 1`, each fixed by the one before.
fn chain(n: usize, power: i32) -> Builder {
    let mut s = Builder::default();
    let one = s.number(1.0);
    let mut last = one;
    for _ in 0..n {
        let x = s.unknown(0.0, 50.0);
        let left = s.graph.add(Op::Power(x, power, 1));
        let right = s.add(last, one);
        s.equal(left, right);
        last = x;
    }
    s
}

#[test]
fn two_thousand_blocks_in_a_row() {
    for (power, limit) in [(2, 6.18034e-1), (3, 3.24718e-1)] {
        let s = chain(2000, power);
        let (mut inputs, mut values) = (Vec::new(), Vec::new());
        let begin = Instant::now();
        let structure = s.structure();
        let outcomes = solve(&s.graph, &s.problem, &structure, &mut inputs, &mut values, &|| false);
        let time = begin.elapsed();
        let last = outcomes[1999].value().expect("found");
        assert!((last - 1.0 - limit).abs() < 1e-5, "{last}");
        // Debug builds are many times slower; the bound catches quadratic growth all the same.
        assert!(time.as_secs_f64() < 10.0, "{time:?}");
        println!("2,000 chained blocks, power {power}: {time:?}");
    }
}

#[test]
fn structure_of_a_bad_order_is_fast() {
    // Greedy choice takes the wrong unknown everywhere: every augmenting path is long.
    let n = 3000;
    let mut s = Builder::default();
    let unknowns: Vec<NodeId> = (0..n).map(|_| s.unknown(0.0, 1.0)).collect();
    let zero = s.number(0.0);
    for k in 0..n - 1 {
        let sum = s.add(unknowns[k], unknowns[k + 1]);
        s.equal(sum, zero);
    }
    let sum = s.add(unknowns[0], unknowns[1]);
    s.equal(sum, unknowns[0]);
    let begin = Instant::now();
    let structure = s.structure();
    assert!(structure.free_unknowns.is_empty() && structure.spare_equations.is_empty());
    let time = begin.elapsed();
    assert!(time.as_secs_f64() < 2.0, "{time:?}");
    println!("structure of {n} pairs: {time:?}");
}
