//! Worst cases hold every sample and are attained; sensitivities are the derivatives.

use pintle_graph::{Function, Graph, InputId, NodeId, Op, evaluate};
use pintle_interval::Interval;
use pintle_tolerance::{Solved, Spread, Study, Unknown, Unproved, Worst};

/// Toleranced inputs by nominal value and half-width.
struct Model {
    graph: Graph,
    spreads: Vec<Spread>,
    inputs: Vec<f64>,
    blocks: Vec<Solved>,
}

impl Model {
    fn new(inputs: &[(f64, f64)]) -> (Model, Vec<NodeId>) {
        let mut model = Model { graph: Graph::new(), spreads: Vec::new(), inputs: Vec::new(), blocks: Vec::new() };
        let mut nodes = Vec::new();
        for &(nominal, half) in inputs {
            let (input, node) = model.graph.input();
            let range = Interval::new(nominal - half, nominal + half);
            model.spreads.push(Spread { input, nominal, range });
            model.inputs.push(nominal);
            nodes.push(node);
        }
        (model, nodes)
    }

    fn unknown(&mut self, value: f64) -> (Unknown, NodeId) {
        let (input, node) = self.graph.input();
        self.inputs.push(value);
        (Unknown { input, value, range: Interval::new(-1e3, 1e3) }, node)
    }

    fn study(&self) -> Study<'_> {
        Study::new(&self.graph, &self.inputs, self.spreads.clone(), self.blocks.clone())
    }

    fn worst(&self, node: NodeId) -> Worst {
        self.study().worst(node).expect("a worst case")
    }
}

/// Values of an input from its lower to its upper end, and the ends themselves.
fn samples(spreads: &[Spread]) -> Vec<Vec<f64>> {
    let mut state = 88_172_645_463_325_252_u64;
    let mut random = || {
        state ^= state << 13;
        state ^= state >> 7;
        state ^= state << 17;
        (state >> 11) as f64 / (1u64 << 53) as f64
    };
    let n = spreads.len();
    let corners = (0..1usize << n).map(|corner| {
        let end = |k: usize, spread: &Spread| if corner >> k & 1 == 1 { spread.range.hi } else { spread.range.lo };
        spreads.iter().enumerate().map(|(k, spread)| end(k, spread)).collect()
    });
    let mut all: Vec<Vec<f64>> = corners.collect();
    for _ in 0..500 {
        all.push(spreads.iter().map(|it| it.range.lo + random() * (it.range.hi - it.range.lo)).collect());
    }
    all
}

/// Every sample lies in the worst case, whose width is at most `over` times what they reach. `solve` gives unknowns.
#[track_caller]
fn check(model: &Model, node: NodeId, over: f64, solve: impl Fn(&[f64]) -> Vec<f64>) {
    let worst = model.worst(node);
    let (mut least, mut most) = (f64::INFINITY, f64::NEG_INFINITY);
    for mut inputs in samples(&model.spreads) {
        let unknowns = solve(&inputs);
        inputs.extend(unknowns);
        let value = evaluate(&model.graph, &inputs)[node.index()];
        let rounding = 1e-12 * value.abs();
        assert!(worst.low <= value + rounding && value - rounding <= worst.high, "{value} is not in {worst:?}");
        (least, most) = (least.min(value), most.max(value));
    }
    let width = worst.high - worst.low;
    assert!(width <= over * (most - least) + 1e-12 * most.abs(), "{worst:?} against {least} .. {most}");
    let (low, high) = worst.attained;
    assert!(low >= worst.low && high <= worst.high && high - low >= (most - least) * 0.999, "{worst:?}: {least} {most}");
}

#[test]
fn a_formula_with_one_slope_sign_is_exact() {
    let (mut model, x) = Model::new(&[(3.0, 0.3), (5.0, 0.2), (2.0, 0.1)]);
    let graph = &mut model.graph;
    // a b / (a + c): natural intervals would be far too wide, a stands in it twice.
    let product = graph.add(Op::Multiply(x[0], x[1]));
    let sum = graph.add(Op::Add(x[0], x[2]));
    let y = graph.add(Op::Divide(product, sum));
    check(&model, y, 1.0 + 1e-9, |_| Vec::new());
}

#[test]
fn a_valley_inside_the_tolerance_is_found() {
    let (mut model, x) = Model::new(&[(0.05, 0.2), (1.0, 0.1)]);
    let square = model.graph.add(Op::Power(x[0], 2, 1));
    let y = model.graph.add(Op::Multiply(square, x[1]));
    // The least value, 0, is attained at no corner.
    let worst = model.worst(y);
    assert_eq!(worst.low, 0.0);
    assert!((worst.high - 0.25 * 0.25 * 1.1).abs() < 1e-12, "{worst:?}");
    assert!(worst.tightness() < 1.0);
}

#[test]
fn kinks_count_with_all_their_slopes() {
    let (mut model, x) = Model::new(&[(0.1, 1.0), (2.0, 0.1)]);
    let abs = model.graph.add(Op::Apply(Function::Abs, x[0]));
    let y = model.graph.add(Op::Multiply(abs, x[1]));
    let worst = model.worst(y);
    assert!(worst.low == 0.0 && (worst.high - 1.1 * 2.1).abs() < 1e-12, "{worst:?}");
}

#[test]
fn a_step_inside_the_tolerance_holds_both_sides() {
    let (mut model, x) = Model::new(&[(1.0, 0.2)]);
    let graph = &mut model.graph;
    let one = graph.plain_number(1.0);
    let above = graph.add(Op::Compare(pintle_graph::CompareOp::Greater, x[0], one));
    let (low, high) = (graph.number(0.22, "0.22"), graph.number(0.35, "0.35"));
    let y = graph.add(Op::Select(above, low, high));
    let worst = model.worst(y);
    assert_eq!((worst.low, worst.high), (0.22, 0.35));
}

/// x^2 + a x = b, and what is made of x.
fn quadratic() -> (Model, NodeId, NodeId) {
    let (mut model, p) = Model::new(&[(2.0, 0.1), (15.0, 0.5)]);
    let (unknown, x) = model.unknown(3.0);
    let graph = &mut model.graph;
    let square = graph.add(Op::Power(x, 2, 1));
    let product = graph.add(Op::Multiply(p[0], x));
    let left = graph.add(Op::Add(square, product));
    let y = graph.add(Op::Multiply(x, p[0]));
    model.blocks.push(Solved { unknowns: vec![unknown], equations: vec![(left, p[1])] });
    (model, x, y)
}

fn root(p: &[f64]) -> Vec<f64> {
    vec![(-p[0] + (p[0] * p[0] + 4.0 * p[1]).sqrt()) / 2.0]
}

#[test]
fn an_unknown_is_enclosed_over_all_tolerances() {
    let (model, x, y) = quadratic();
    check(&model, x, 1.001, root);
    check(&model, y, 1.001, root);
}

#[test]
fn slopes_go_through_equations() {
    let (model, x, y) = quadratic();
    let mut study = model.study();
    // 2x dx + a dx + x da = db
    let by = study.sensitivities(x).unwrap();
    assert!((by[0] + 3.0 / 8.0).abs() < 1e-14 && (by[1] - 1.0 / 8.0).abs() < 1e-14, "{by:?}");
    let by = study.sensitivities(y).unwrap();
    assert!((by[0] - (3.0 - 2.0 * 3.0 / 8.0)).abs() < 1e-14 && (by[1] - 2.0 / 8.0).abs() < 1e-14, "{by:?}");
}

#[test]
fn blocks_stand_behind_blocks() {
    // u + v = a, u v = b; then w^3 = u + c.
    let (mut model, p) = Model::new(&[(7.0, 0.05), (10.0, 0.1), (3.0, 0.05)]);
    let (u_unknown, u) = model.unknown(5.0);
    let (v_unknown, v) = model.unknown(2.0);
    let (w_unknown, w) = model.unknown(2.0);
    let graph = &mut model.graph;
    let sum = graph.add(Op::Add(u, v));
    let product = graph.add(Op::Multiply(u, v));
    let cube = graph.add(Op::Power(w, 3, 1));
    let right = graph.add(Op::Add(u, p[2]));
    let y = graph.add(Op::Divide(w, v));
    model.blocks.push(Solved { unknowns: vec![u_unknown, v_unknown], equations: vec![(sum, p[0]), (product, p[1])] });
    model.blocks.push(Solved { unknowns: vec![w_unknown], equations: vec![(cube, right)] });
    let solve = |p: &[f64]| {
        let u = (p[0] + (p[0] * p[0] - 4.0 * p[1]).sqrt()) / 2.0;
        vec![u, p[0] - u, (u + p[2]).cbrt()]
    };
    check(&model, u, 1.01, solve);
    check(&model, w, 1.01, solve);
    check(&model, y, 1.02, solve);
    // du/da = u / (u - v), du/db = -1 / (u - v), dw = (du + dc) / (3 w^2)
    let by = model.study().sensitivities(w).unwrap();
    let expected = [5.0 / 3.0 / 12.0, -1.0 / 3.0 / 12.0, 1.0 / 12.0];
    for (found, expected) in by.iter().zip(expected) {
        assert!((found - expected).abs() < 1e-14, "{by:?}");
    }
}

#[test]
fn a_root_that_may_vanish_is_not_proved() {
    // x^2 = b with b down to below 0.
    let (mut model, p) = Model::new(&[(0.01, 0.02)]);
    let (unknown, x) = model.unknown(0.1);
    let square = model.graph.add(Op::Power(x, 2, 1));
    model.blocks.push(Solved { unknowns: vec![unknown], equations: vec![(square, p[0])] });
    assert_eq!(model.study().worst(x), Err(Unproved::Equations));
}

#[test]
fn an_unknown_at_the_end_of_its_range_says_so() {
    let (mut model, x, _) = quadratic();
    model.blocks[0].unknowns[0].range = Interval::new(0.0, 3.01);
    assert_eq!(model.study().worst(x), Err(Unproved::RangeEnd(InputId(2))));
}

#[test]
fn what_no_tolerance_moves_stands_still() {
    let (mut model, p) = Model::new(&[(2.0, 0.1)]);
    let two = model.graph.plain_number(2.0);
    let four = model.graph.add(Op::Multiply(two, two));
    let y = model.graph.add(Op::Multiply(four, p[0]));
    let mut study = model.study();
    assert!(!study.is_moved(four) && study.is_moved(y));
    assert_eq!(study.sensitivities(four), Some(vec![0.0]));
    assert_eq!(study.sensitivities(y), Some(vec![4.0]));
}

#[test]
fn a_divisor_that_may_be_zero_leaves_no_worst_case() {
    let (mut model, p) = Model::new(&[(0.1, 0.2)]);
    let one = model.graph.plain_number(1.0);
    let y = model.graph.add(Op::Divide(one, p[0]));
    assert_eq!(model.study().worst(y), Err(Unproved::Undefined));
}

#[test]
fn a_nominal_value_outside_of_its_limits_is_no_possible_value() {
    let (mut model, p) = Model::new(&[(3.0, 0.3)]);
    model.spreads[0].range = Interval::new(2.5, 2.9);
    let y = model.graph.add(Op::Power(p[0], 2, 1));
    let worst = model.worst(y);
    assert!((worst.low - 6.25).abs() < 1e-14 && (worst.high - 8.41).abs() < 1e-14, "{worst:?}");
    assert!(worst.tightness() > 0.999_999);
}
