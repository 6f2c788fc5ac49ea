//! Several unknowns at once.

mod common;

use common::{Builder, Expect, check_outcome};
use pintle_graph::Function::*;
use pintle_graph::NodeId;
use pintle_solve::NotFound;

/// One list of roots per unknown, entry k of each being solution k.
#[track_caller]
fn check(ranges: &[(f64, f64)], roots: &[&[f64]], build: impl Fn(&mut Builder, &[NodeId])) {
    check_within(1e-12, ranges, roots, build);
}

#[track_caller]
fn check_within(tolerance: f64, ranges: &[(f64, f64)], roots: &[&[f64]], build: impl Fn(&mut Builder, &[NodeId])) {
    let outcomes = outcomes(ranges, build);
    for (outcome, roots) in outcomes.iter().zip(roots) {
        check_outcome(outcome, &Expect::Roots(roots.to_vec()), tolerance);
    }
}

fn outcomes(ranges: &[(f64, f64)], build: impl Fn(&mut Builder, &[NodeId])) -> Vec<pintle_solve::Outcome> {
    let mut s = Builder::default();
    let x: Vec<NodeId> = ranges.iter().map(|&(low, high)| s.unknown(low, high)).collect();
    build(&mut s, &x);
    s.solve()
}

#[track_caller]
fn check_none(ranges: &[(f64, f64)], why: NotFound, build: impl Fn(&mut Builder, &[NodeId])) {
    for outcome in outcomes(ranges, build) {
        check_outcome(&outcome, &Expect::Nothing(why), 0.0);
    }
}

fn sum_and_product(s: &mut Builder, x: &[NodeId], sum: f64, product: f64) {
    let (left, right) = (s.add(x[0], x[1]), s.number(sum));
    s.equal(left, right);
    let (left, right) = (s.multiply(x[0], x[1]), s.number(product));
    s.equal(left, right);
}

#[test]
fn two_linear() {
    check(&[(-10.0, 10.0), (-10.0, 10.0)], &[&[1.5], &[-0.5]], |s, x| {
        let (left, right) = (s.add(x[0], x[1]), s.number(1.0));
        s.equal(left, right);
        let (left, right) = (s.subtract(x[0], x[1]), s.number(2.0));
        s.equal(left, right);
    });
}

#[test]
fn two_linear_in_endless_ranges() {
    let all = (f64::NEG_INFINITY, f64::INFINITY);
    check(&[all, all], &[&[1.5e12], &[-0.5e12]], |s, x| {
        let (left, right) = (s.add(x[0], x[1]), s.number(1e12));
        s.equal(left, right);
        let (left, right) = (s.subtract(x[0], x[1]), s.number(2e12));
        s.equal(left, right);
    });
}

#[test]
fn the_same_line_twice_fixes_nothing() {
    check_none(&[(-10.0, 10.0), (-10.0, 10.0)], NotFound::Stretch, |s, x| {
        let (left, right) = (s.add(x[0], x[1]), s.number(1.0));
        s.equal(left, right);
        let two = s.number(2.0);
        let (a, b) = (s.multiply(two, x[0]), s.multiply(two, x[1]));
        let (left, right) = (s.add(a, b), s.number(2.0));
        s.equal(left, right);
    });
}

#[test]
fn sum_and_product_have_two_solutions() {
    check(&[(0.0, 10.0), (0.0, 10.0)], &[&[2.0, 3.0], &[3.0, 2.0]], |s, x| sum_and_product(s, x, 5.0, 6.0));
}

#[test]
fn the_range_chooses_one_of_two() {
    check(&[(0.0, 2.5), (0.0, 10.0)], &[&[2.0], &[3.0]], |s, x| sum_and_product(s, x, 5.0, 6.0));
}

#[test]
fn no_solution_in_the_box() {
    check_none(&[(0.0, 10.0), (0.0, 10.0)], NotFound::NoRoot, |s, x| sum_and_product(s, x, 5.0, 7.0));
}

#[test]
fn solution_on_the_corner_of_the_box() {
    check(&[(0.0, 2.0), (3.0, 10.0)], &[&[2.0], &[3.0]], |s, x| sum_and_product(s, x, 5.0, 6.0));
}

#[test]
fn nowhere_defined() {
    check_none(&[(1.0, 2.0), (3.0, 10.0)], NotFound::Undefined, |s, x| {
        let sum = s.add(x[0], x[1]);
        let minus = s.call(Negate, sum);
        let (left, right) = (s.call(Sqrt, minus), s.number(1.0));
        s.equal(left, right);
        let right = s.number(4.0);
        s.equal(sum, right);
    });
}

#[test]
fn three_coupled() {
    // Planted (2, 3, 0.5).
    check(&[(0.1, 10.0), (0.1, 10.0), (0.0, 1.5)], &[&[2.0], &[3.0], &[0.5]], |s, x| {
        let product = s.multiply(x[0], x[1]);
        let (left, right) = (s.add(product, x[2]), s.number(6.5));
        s.equal(left, right);
        let root = s.call(Sqrt, x[2]);
        let (left, right) = (s.multiply(root, x[0]), s.number(2.0 * 0.5_f64.sqrt()));
        s.equal(left, right);
        let e = s.call(Exp, x[2]);
        let (left, right) = (s.add(e, x[1]), s.number(libm::exp(0.5) + 3.0));
        s.equal(left, right);
    });
}

#[test]
fn five_in_a_ring() {
    let planted = [1.5, 2.5, 3.5, 4.5, 5.5];
    let ranges = [(0.5, 20.0); 5];
    let roots: Vec<[f64; 1]> = planted.iter().map(|&x| [x]).collect();
    let roots: Vec<&[f64]> = roots.iter().map(|x| x.as_slice()).collect();
    check(&ranges, &roots, |s, x| {
        for k in 0..5 {
            // x^3 / 20 + next: the first part outweighs, so there is but one solution.
            let twenty = s.number(20.0);
            let cube = s.power(x[k], 3);
            let cube = s.divide(cube, twenty);
            let left = s.add(cube, x[(k + 1) % 5]);
            let p = planted[k];
            let right = s.number((p * p * p) / 20.0 + planted[(k + 1) % 5]);
            s.equal(left, right);
        }
    });
}

#[test]
fn rest_of_two_is_exact() {
    // w^2 = 20 s, s = w^2 (1 + s): only (0, 0) in the box.
    check(&[(0.0, 5.0), (0.0, 0.9)], &[&[0.0], &[0.0]], |s, x| {
        let square = s.power(x[0], 2);
        let twenty = s.number(20.0);
        let right = s.multiply(twenty, x[1]);
        s.equal(square, right);
        let one = s.number(1.0);
        let factor = s.add(one, x[1]);
        let right = s.multiply(square, factor);
        s.equal(x[1], right);
    });
}

#[test]
fn motor_and_fan_on_two_shafts() {
    // Torque 40 - 0.1 w1 on the motor, fan 0.02 w2^2, gear w1 = 3 w2, efficiency 0.95; x = (w1, w2, torque).
    let (drive, slope, fan, ratio, efficiency) = (40.0, 0.1, 0.02, 3.0, 0.95);
    let w2 = {
        let (a, b, c): (f64, f64, f64) = (fan, slope * ratio * ratio * efficiency, -drive * ratio * efficiency);
        (-b + (b * b - 4.0 * a * c).sqrt()) / (2.0 * a)
    };
    let torque = drive - slope * ratio * w2;
    let all = (0.0, 1e4);
    check(&[all, all, all], &[&[ratio * w2], &[w2], &[torque]], |s, x| {
        let (drive, slope, fan) = (s.number(drive), s.number(slope), s.number(fan));
        let (ratio, efficiency) = (s.number(ratio), s.number(efficiency));
        let drop = s.multiply(slope, x[0]);
        let curve = s.subtract(drive, drop);
        s.equal(x[2], curve);
        let square = s.power(x[1], 2);
        let load = s.multiply(fan, square);
        let geared = s.multiply(x[2], ratio);
        let geared = s.multiply(geared, efficiency);
        s.equal(geared, load);
        let right = s.multiply(ratio, x[1]);
        s.equal(x[0], right);
    });
}

#[test]
fn forty_coupled_by_drag_and_couplings() {
    // drag x^2 + coupling to both neighbours; planted 1 + k/10.
    let n = 40;
    let planted: Vec<f64> = (0..n).map(|k| 1.0 + f64::from(k) / 10.0).collect();
    let ranges = vec![(0.0, 100.0); planted.len()];
    let roots: Vec<[f64; 1]> = planted.iter().map(|&x| [x]).collect();
    let roots: Vec<&[f64]> = roots.iter().map(|x| x.as_slice()).collect();
    check(&ranges, &roots, |s, x| {
        for k in 0..x.len() {
            let (before, after) = ((k + x.len() - 1) % x.len(), (k + 1) % x.len());
            let square = s.power(x[k], 2);
            let twice = s.add(x[k], x[k]);
            let neighbours = s.add(x[before], x[after]);
            let slip = s.subtract(twice, neighbours);
            let left = s.add(square, slip);
            let p = &planted;
            let right = s.number((p[k] * p[k]) + ((p[k] + p[k]) - (p[before] + p[after])));
            s.equal(left, right);
        }
    });
}

#[test]
fn linear_with_its_solution_out_of_the_box() {
    check_none(&[(2.0, 10.0), (0.0, 10.0)], NotFound::NoRoot, |s, x| {
        let (left, right) = (s.add(x[0], x[1]), s.number(1.0));
        s.equal(left, right);
        let (left, right) = (s.subtract(x[0], x[1]), s.number(2.0));
        s.equal(left, right);
    });
}
