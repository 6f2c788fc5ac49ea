//! One unknown: what is found, what is not, and what must never be taken for a root.

mod common;

use common::{Builder, Expect, check_outcome};
use pintle_graph::Function::*;
use pintle_graph::{CompareOp, NodeId, Op};
use pintle_solve::{NotFound, Outcome};

fn outcome((low, high): (f64, f64), build: impl Fn(&mut Builder, NodeId) -> (NodeId, NodeId)) -> Outcome {
    let mut builder = Builder::default();
    let x = builder.unknown(low, high);
    let (left, right) = build(&mut builder, x);
    builder.equal(left, right);
    builder.solve().remove(0)
}

#[track_caller]
fn check(range: (f64, f64), roots: &[f64], build: impl Fn(&mut Builder, NodeId) -> (NodeId, NodeId)) {
    check_outcome(&outcome(range, build), &Expect::Roots(roots.to_vec()), 1e-14);
}

#[track_caller]
fn check_none(range: (f64, f64), why: NotFound, build: impl Fn(&mut Builder, NodeId) -> (NodeId, NodeId)) {
    check_outcome(&outcome(range, build), &Expect::Nothing(why), 0.0);
}

/// `x^2 + b x + c = 0`, written so that the closed form does not see it (through `sqrt(x^4)`).
fn hidden_quadratic(s: &mut Builder, x: NodeId, b: f64, c: f64) -> (NodeId, NodeId) {
    let fourth = s.power(x, 4);
    let square = s.call(Sqrt, fourth);
    let (b, c) = (s.number(b), s.number(c));
    let linear = s.multiply(b, x);
    let sum = s.add(square, linear);
    let sum = s.add(sum, c);
    let zero = s.number(0.0);
    (sum, zero)
}

#[test]
fn linear() {
    check((0.0, 100.0), &[3.5], |s, x| {
        let (two, seven) = (s.number(2.0), s.number(7.0));
        (s.multiply(two, x), seven)
    });
}

#[test]
fn linear_over_all_numbers() {
    check((f64::NEG_INFINITY, f64::INFINITY), &[-3.5e30], |s, x| {
        let (two, seven) = (s.number(-2.0), s.number(7e30));
        (s.multiply(two, x), seven)
    });
}

#[test]
fn quadratic_with_one_root_in_range() {
    check((0.0, 900.0), &[4.0], |s, x| (s.power(x, 2), s.number(16.0)));
}

#[test]
fn quadratic_with_both_roots_in_range() {
    check((-9.0, 900.0), &[-4.0, 4.0], |s, x| (s.power(x, 2), s.number(16.0)));
}

#[test]
fn the_search_finds_what_the_closed_form_finds() {
    for range in [(0.0, 10.0), (-5.0, 5.0), (0.0, 1e6), (1e-6, 1e12), (0.0, f64::INFINITY)] {
        check(range, &[1.0, 3.0], |s, x| hidden_quadratic(s, x, -4.0, 3.0));
    }
}

#[test]
fn close_pair_is_two_roots() {
    let (a, b) = (2.0, 2.001);
    let found = outcome((0.0, 100.0), |s, x| hidden_quadratic(s, x, -(a + b), a * b));
    check_outcome(&found, &Expect::Roots(vec![a, b]), 1e-11);
}

#[test]
fn double_root_in_one_piece() {
    for range in [(0.0, 10.0), (-7.0, 11.0), (0.0, 1000.0)] {
        check(range, &[3.0], |s, x| {
            let three = s.number(3.0);
            let off = s.subtract(x, three);
            (s.power(off, 2), s.number(0.0))
        });
    }
}

#[test]
fn double_root_expanded() {
    let found = outcome((0.0, 10.0), |s, x| hidden_quadratic(s, x, -6.0, 9.0));
    check_outcome(&found, &Expect::Roots(vec![3.0]), 1e-14);
}

#[test]
fn curves_that_just_miss_have_no_root() {
    check_none((0.0, 10.0), NotFound::NoRoot, |s, x| hidden_quadratic(s, x, -6.0, 9.0 + 1e-12));
}

#[test]
fn triple_root() {
    check((0.0, 10.0), &[2.0], |s, x| {
        let two = s.number(2.0);
        let off = s.subtract(x, two);
        (s.power(off, 3), s.number(0.0))
    });
}

#[test]
fn root_at_either_end() {
    check((4.0, 9.0), &[4.0], |s, x| (s.power(x, 2), s.number(16.0)));
    check((0.0, 4.0), &[4.0], |s, x| (s.power(x, 2), s.number(16.0)));
    check((1.0, 2.5), &[1.0], |s, x| hidden_quadratic(s, x, -4.0, 3.0));
    check((2.0, 3.0), &[3.0], |s, x| hidden_quadratic(s, x, -4.0, 3.0));
}

#[test]
fn root_just_outside_is_none() {
    check_none((4.000001, 9.0), NotFound::NoRoot, |s, x| (s.power(x, 2), s.number(16.0)));
    check_none((3.000001, 4.0), NotFound::NoRoot, |s, x| hidden_quadratic(s, x, -4.0, 3.0));
    check_none((1e-7, 10.0), NotFound::NoRoot, |s, x| {
        let large = s.number(1e6);
        (s.add(x, large), large)
    });
}

#[test]
fn range_of_one_point() {
    check((3.0, 3.0), &[3.0], |s, x| hidden_quadratic(s, x, -4.0, 3.0));
    check_none((2.0, 2.0), NotFound::NoRoot, |s, x| hidden_quadratic(s, x, -4.0, 3.0));
}

#[test]
fn rest_is_exactly_zero() {
    check((0.0, 900.0), &[0.0], |s, x| {
        let half = s.number(0.5);
        let square = s.power(x, 2);
        (s.multiply(half, square), s.number(0.0))
    });
    check((-900.0, 900.0), &[0.0], |s, x| {
        let fourth = s.power(x, 4);
        let five = s.number(5.0);
        (s.add(fourth, five), five)
    });
}

#[test]
fn rest_beside_motion_is_two_roots() {
    check((0.0, 900.0), &[0.0, 12.0], |s, x| {
        let twelve = s.number(12.0);
        let drive = s.multiply(twelve, x);
        (s.power(x, 2), drive)
    });
    check((0.0, 900.0), &[0.0, 4.0], |s, x| {
        let root = s.call(Sqrt, x);
        let half = s.number(0.5);
        (root, s.multiply(half, x))
    });
}

#[test]
fn no_root_tells_the_closest_approach() {
    match outcome((0.0, 10.0), |s, x| hidden_quadratic(s, x, -6.0, 10.0)) {
        Outcome::NotFound { closest: Some(closest), residual, why: NotFound::NoRoot } => {
            assert!((closest - 3.0).abs() < 1e-6 && (residual - 1.0).abs() < 1e-9, "{closest} {residual}");
        }
        other => panic!("{other:?}"),
    }
}

#[test]
fn pole_is_no_root() {
    check_none((0.0, 5.0), NotFound::NoRoot, |s, x| {
        let (one, third) = (s.number(1.0), s.number(1.0 / 3.0));
        let off = s.subtract(x, third);
        (s.divide(one, off), s.number(0.0))
    });
    check_none((0.0, 3.0), NotFound::NoRoot, |s, x| (s.power(x, -1), s.number(0.0)));
    check_none((-3.0, 3.0), NotFound::NoRoot, |s, x| (s.power(x, -1), s.number(0.0)));
}

#[test]
fn root_beside_a_pole() {
    check((0.0, 5.0), &[2.0], |s, x| {
        let (one, minus) = (s.number(1.0), s.number(-1.0));
        let off = s.add(x, minus);
        (s.divide(one, off), one)
    });
}

#[test]
fn jump_is_no_root() {
    check_none((0.0, 5.0), NotFound::NoRoot, |s, x| {
        let two = s.number(2.0);
        let when = s.graph.add(Op::Compare(CompareOp::Less, x, two));
        let (low, high) = (s.number(0.35), s.number(0.22));
        let mu = s.graph.add(Op::Select(when, low, high));
        (mu, s.number(0.3))
    });
    check_none((-2.0, 3.3), NotFound::NoRoot, |s, x| (s.call(Sign, x), s.number(0.5)));
}

#[test]
fn roots_on_both_sides_of_a_jump() {
    check((0.0, 5.0), &[1.0, 3.0], |s, x| {
        let two = s.number(2.0);
        let when = s.graph.add(Op::Compare(CompareOp::Less, x, two));
        let (one, three) = (s.number(1.0), s.number(3.0));
        let target = s.graph.add(Op::Select(when, one, three));
        (x, target)
    });
}

#[test]
fn kink_that_touches_zero() {
    check((0.0, 5.0), &[1.7], |s, x| {
        let at = s.number(1.7);
        let off = s.subtract(x, at);
        (s.call(Abs, off), s.number(0.0))
    });
}

#[test]
fn square_root_is_searched_where_it_is_defined() {
    check((0.0, 100.0), &[11.0], |s, x| {
        let two = s.number(2.0);
        let off = s.subtract(x, two);
        (s.call(Sqrt, off), s.number(3.0))
    });
}

#[test]
fn root_at_the_edge_of_the_domain() {
    check((-4.0, 9.0), &[2.3], |s, x| {
        let at = s.number(2.3);
        let off = s.subtract(x, at);
        (s.call(Sqrt, off), s.number(0.0))
    });
}

#[test]
fn nowhere_defined() {
    check_none((1.0, 9.0), NotFound::Undefined, |s, x| {
        let minus = s.call(Negate, x);
        (s.call(Sqrt, minus), s.number(3.0))
    });
}

#[test]
fn exponential_and_logarithm() {
    for range in [(0.0, 1e4), (-1e4, 1e4), (f64::NEG_INFINITY, f64::INFINITY)] {
        check(range, &[libm::log(50.0)], |s, x| (s.call(Exp, x), s.number(50.0)));
    }
    check((0.0, f64::INFINITY), &[libm::exp(9.0)], |s, x| (s.call(Ln, x), s.number(9.0)));
}

#[test]
fn every_root_of_a_sine() {
    let pi = std::f64::consts::PI;
    let roots: Vec<f64> = (1..=20).map(|k| f64::from(k) * pi).collect();
    check((0.5, 64.0), &roots, |s, x| (s.call(Sin, x), s.number(0.0)));
}

#[test]
fn tangent_to_the_top_of_a_sine() {
    let found = outcome((0.0, 3.0), |s, x| (s.call(Sin, x), s.number(1.0)));
    check_outcome(&found, &Expect::Roots(vec![std::f64::consts::FRAC_PI_2]), 1e-7);
}

#[test]
fn small_root_in_a_wide_range() {
    check((0.0, 1e9), &[3e-7], |s, x| {
        let (root, number) = (s.call(Sqrt, x), s.number(libm::sqrt(3e-7)));
        let one = s.number(1.0);
        (s.multiply(root, one), number)
    });
}

#[test]
fn identity_fixes_nothing() {
    check_none((0.0, 10.0), NotFound::Stretch, |s, x| {
        let twice = s.add(x, x);
        let two = s.number(2.0);
        (twice, s.multiply(two, x))
    });
    check_none((0.0, 10.0), NotFound::Stretch, |s, x| {
        let four = s.number(4.0);
        (s.graph.add(Op::Max(x, four)), four)
    });
}

#[test]
fn bad_ranges() {
    let far = f64::INFINITY;
    for range in [(3.0, 2.0), (f64::NAN, 2.0), (0.0, f64::NAN), (far, far), (-far, -far)] {
        check_none(range, NotFound::BadRange, |s, x| (x, s.number(1.0)));
    }
}

#[test]
fn slipping_winch_to_the_edge_of_the_range() {
    // 1/2 J w^2 = E with a loss that grows with the cube of the speed; root planted at 62.83.
    let root = 62.83;
    check((0.0, 94.25), &[root], |s, x| {
        let half_j = s.number(1.85);
        let square = s.power(x, 2);
        let kinetic = s.multiply(half_j, square);
        let drag = s.number(0.004);
        let cube = s.power(x, 3);
        let loss = s.multiply(drag, cube);
        let sum = s.add(kinetic, loss);
        (sum, s.number(1.85 * (root * root) + 0.004 * (root * root * root)))
    });
}

#[test]
fn flywheel_with_a_bore_has_its_diameter() {
    // J = rho pi/32 b (D^4 - d^4), written through the mass, as shapes are.
    let (bore, planted): (f64, f64) = (0.06, 0.72);
    let inertia = 46.2 * (planted * planted - bore * bore) * (planted * planted + bore * bore);
    check((0.1, 1.5), &[planted], |s, x| {
        let square = s.power(x, 2);
        let bore = s.number(bore);
        let bore = s.power(bore, 2);
        let (difference, sum) = (s.subtract(square, bore), s.add(square, bore));
        let factor = s.number(46.2);
        let mass = s.multiply(factor, difference);
        (s.multiply(mass, sum), s.number(inertia))
    });
}

#[test]
fn the_law_of_the_loss_changes_with_the_flow() {
    // 1/2 J w^2 + loss(1/2 J w^2 - W) = E with the loss 5 % or 10 % of what crosses.
    for energy in [50.0, 150.0] {
        let outcome = outcome((0.0, 1e4), |s, x| {
            let half = s.number(0.5);
            let square = s.power(x, 2);
            let kinetic = s.multiply(half, square);
            let work = s.number(100.0);
            let crossing = s.subtract(kinetic, work);
            let (a, b) = (s.number(0.05), s.number(-0.1));
            let (a, b) = (s.multiply(a, crossing), s.multiply(b, crossing));
            let loss = s.graph.add(Op::Max(a, b));
            (s.add(kinetic, loss), s.number(energy))
        });
        // By hand: k + 0.1 (100 - k) = E below k = 100, k + 0.05 (k - 100) = E above.
        let kinetic: f64 = if energy < 100.0 { (energy - 10.0) / 0.9 } else { (energy + 5.0) / 1.05 };
        check_outcome(&outcome, &Expect::Roots(vec![(2.0 * kinetic).sqrt()]), 1e-14);
    }
}
