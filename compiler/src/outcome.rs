//! From equations to results: solving, then judging requirements, limits and
//! second routes on the values.

use crate::codes;
use crate::lower::{ConfirmPlan, Hazards, LedgerPlan, LimitPlan, Lowered};
use crate::model::{InputValue, Model};
use crate::names::Sheet;
use crate::results::*;
use crate::source::Origin;
use pintle_graph::{CompareOp, Function, InputId, NodeId, Op, QuantityId};
use pintle_solve::{Equation, NotFound, Outcome, Problem, Unknown};
use pintle_text::{Diagnostic, Place};
use std::collections::HashMap;

/// A computed value this near to a bound, relative, counts as equal to it:
/// sums of decimals are not exact in binary.
const EQUAL: f64 = 1e-12;

/// Solves a lowered sheet and judges it.
pub fn outcome(sheet: &Sheet, mut lowered: Lowered, case: Option<String>) -> (CaseResults, Model, Vec<Diagnostic>) {
    let mut acc = std::mem::take(&mut lowered.diagnostics);
    let outcomes = solve(sheet, &mut lowered, &mut acc);
    let nodes = NodeFacts::new(&lowered, &outcomes);
    requirements(&lowered, &nodes, &mut acc);
    lost_values(sheet, &lowered, &nodes, &mut acc);
    let line = |place: Place| sheet.sources.location(place).line;
    let mut results = CaseResults { case, ..CaseResults::default() };
    for (index, quantity) in lowered.model.quantities.iter().enumerate() {
        if sheet.origin(quantity.place.item) == Origin::Standard {
            continue;
        }
        let id = QuantityId(index as u32);
        results.quantities.push(quantity_result(&lowered.model, id, &outcomes, &nodes, line(quantity.place)));
    }
    for plan in &lowered.ledgers {
        results.ledgers.push(ledger_result(&lowered.model, plan, line(plan.place)));
        flows(&lowered.model, plan, &mut acc);
    }
    for plan in &lowered.limits {
        results.limits.push(limit_result(&lowered.model, plan, &nodes, line(plan.place)));
    }
    for plan in &lowered.confirms {
        let confirm = confirm_result(&lowered.model, plan, line(plan.place));
        if confirm.agrees == Some(false) {
            let show = |si: Option<f64>| {
                si.map_or("?".into(), |si| format!("{:.6} {}", plan.unit.from_si(si), plan.unit.text))
            };
            acc.push(
                Diagnostic::new(
                    codes::CONFIRM_DISAGREES,
                    plan.place,
                    format!(
                        "`{}` is {} here, but {} by the second route",
                        plan.text,
                        show(confirm.value),
                        show(confirm.second)
                    ),
                )
                .with_help("one of the two is wrong, or the tolerance of the second is too narrow"),
            );
        }
        results.confirms.push(confirm);
    }
    (results, lowered.model, acc)
}

type Outcomes = HashMap<QuantityId, Outcome>;

fn solve(sheet: &Sheet, lowered: &mut Lowered, acc: &mut Vec<Diagnostic>) -> Outcomes {
    let model = &mut lowered.model;
    let mut inputs: Vec<f64> = Vec::with_capacity(model.inputs.len());
    for input in &model.inputs {
        inputs.push(match input.value {
            InputValue::Given { nominal, .. } => nominal,
            InputValue::Wanted { .. } => f64::NAN,
        });
    }
    let unknowns: Vec<Unknown> = lowered
        .unknowns
        .iter()
        .map(|&(input, _)| match model.input(input).value {
            InputValue::Wanted { low, high, .. } => Unknown { input, low, high },
            InputValue::Given { nominal, .. } => Unknown { input, low: nominal, high: nominal },
        })
        .collect();
    let equations = lowered.equations.iter().map(|it| Equation { left: it.left, right: it.right }).collect();
    let problem = Problem { unknowns, equations };
    let structure = pintle_solve::structure(&model.graph, &problem);
    let mut values = pintle_graph::evaluate(&model.graph, &inputs);
    let found = pintle_solve::solve(&model.graph, &problem, &structure, &mut inputs, &mut values, &|| false);
    model.values = values;
    let mut outcomes = Outcomes::new();
    for (at, (&(input, id), outcome)) in lowered.unknowns.iter().zip(found).enumerate() {
        let quantity = model.quantity(id);
        let place = quantity.place;
        let show = |si: f64| format!("{:.6} {}", quantity.unit.from_si(si), quantity.unit.text);
        let range = match model.input(input).value {
            InputValue::Wanted { low, high, .. } => format!("{} .. {}", show(low), show(high)),
            InputValue::Given { .. } => String::new(),
        };
        if structure.free_unknowns.contains(&at) {
            // Its equation may be the one that could not be read.
            if lowered.n_broken_equations > 0 {
                outcomes.insert(id, outcome);
                continue;
            }
            acc.push(
                Diagnostic::new(
                    codes::NOT_DETERMINED,
                    place,
                    format!("`{}` is not fixed by any equation", quantity.name),
                )
                .with_help("add a condition (`where LEFT == RIGHT`, or a ledger that it enters), or make it `given`"),
            );
        } else {
            match &outcome {
                Outcome::Several { values } => {
                    let list: Vec<String> = values.iter().map(|&value| show(value)).collect();
                    acc.push(
                        Diagnostic::new(
                            codes::SEVERAL_SOLUTIONS,
                            place,
                            format!(
                                "`{}` has {} solutions in {range}: {}",
                                quantity.name,
                                values.len(),
                                list.join(", ")
                            ),
                        )
                        .with_help("narrow the range behind `within` to the one that is meant"),
                    );
                }
                Outcome::NotFound { closest, residual, why } => {
                    let text = match why {
                        NotFound::NoRoot => {
                            format!("no value of `{}` in {range} satisfies its equations", quantity.name)
                        }
                        NotFound::Undefined => {
                            format!("the equations of `{}` have no value anywhere in {range}", quantity.name)
                        }
                        NotFound::Stretch => format!(
                            "the equations of `{}` hold on a whole stretch of {range}: they do not fix it",
                            quantity.name
                        ),
                        NotFound::Free => format!("`{}` is not fixed by any equation", quantity.name),
                        NotFound::BadRange => format!("the range of `{}` is empty", quantity.name),
                        NotFound::Cancelled => format!("the search for `{}` was stopped", quantity.name),
                    };
                    let mut diagnostic = Diagnostic::new(codes::NO_SOLUTION, place, text);
                    if let (Some(closest), true) = (closest, residual.is_finite()) {
                        diagnostic = diagnostic.with_note(format!("the closest approach is at {}", show(*closest)));
                    }
                    if let Some(at) = structure
                        .blocks
                        .iter()
                        .find(|block| block.unknowns.contains(&at))
                        .and_then(|block| block.equations.first())
                    {
                        diagnostic = diagnostic.with_label(lowered.equations[*at].place, "the equation");
                    }
                    acc.push(
                        diagnostic.with_help("widen the range, or look for a given that makes the balance impossible"),
                    );
                }
                Outcome::Found { .. } | Outcome::Skipped => {}
            }
        }
        outcomes.insert(id, outcome);
    }
    for &at in &structure.spare_equations {
        spare(sheet, lowered, at, acc);
    }
    outcomes
}

/// An equation with nothing left to fix: a ledger may close all the same.
fn spare(sheet: &Sheet, lowered: &Lowered, at: usize, acc: &mut Vec<Diagnostic>) {
    let equation = &lowered.equations[at];
    let (Some(left), Some(right)) = (lowered.model.value(equation.left), lowered.model.value(equation.right)) else {
        return;
    };
    let largest = match &equation.ledger {
        Some(name) => lowered
            .ledgers
            .iter()
            .filter(|plan| plan.name == *name)
            .flat_map(|plan| &plan.lines)
            .filter_map(|(_, _, node, _)| lowered.model.value(*node))
            .fold(0.0, |acc: f64, value| acc.max(value.abs())),
        None => left.abs().max(right.abs()),
    };
    let difference = left - right;
    if difference.abs() <= 1e-9 * largest {
        return;
    }
    let _ = sheet;
    acc.push(match &equation.ledger {
        Some(name) => Diagnostic::new(
            codes::LEDGER_OPEN,
            equation.place,
            format!(
                "the ledger `{name}` does not close: {:.6} J are {}",
                difference.abs(),
                if difference > 0.0 { "missing on the side of the gains" } else { "left over" }
            ),
        )
        .with_help("everything in it is given; make one quantity unknown: `wanted MEMBER.speed within LOW .. HIGH`"),
        None => Diagnostic::new(
            codes::OVER_DETERMINED,
            equation.place,
            "this equation has nothing left to determine, and it does not hold",
        )
        .with_help("drop it, or make one of its quantities `wanted`"),
    });
}

/// What is known of each node besides its value.
struct NodeFacts {
    toleranced: Vec<bool>,
    open: Vec<bool>,
}

impl NodeFacts {
    fn new(lowered: &Lowered, outcomes: &Outcomes) -> NodeFacts {
        let model = &lowered.model;
        let n = model.graph.len();
        let mut inexact: Vec<bool> = model
            .inputs
            .iter()
            .map(|input| matches!(input.value, InputValue::Given { tolerance: Some(_), .. }))
            .collect();
        // An unknown takes the tolerances of the equations that it enters.
        let used: Vec<Vec<usize>> = inputs_of_equations(lowered);
        loop {
            let mut grown = false;
            for inputs in &used {
                if inputs.iter().any(|&input| inexact[input]) {
                    for &input in inputs {
                        if matches!(model.inputs[input].value, InputValue::Wanted { .. }) && !inexact[input] {
                            inexact[input] = true;
                            grown = true;
                        }
                    }
                }
            }
            if !grown {
                break;
            }
        }
        let (mut toleranced, mut open) = (vec![false; n], vec![false; n]);
        for index in 0..n {
            let node = NodeId(index as u32);
            if let Op::Input(id) = model.graph.op(node) {
                let input = model.input(id);
                toleranced[index] = inexact[id.0 as usize];
                if matches!(input.value, InputValue::Wanted { .. }) {
                    let found = input.quantity.and_then(|id| outcomes.get(&id));
                    open[index] = !matches!(found, Some(Outcome::Found { .. }));
                }
                continue;
            }
            let (mut t, mut o) = (false, false);
            model.graph.operands(node, |operand| {
                t |= toleranced[operand.index()];
                o |= open[operand.index()];
            });
            toleranced[index] = t;
            open[index] = o;
        }
        NodeFacts { toleranced, open }
    }
}

/// The inputs that each equation depends on.
fn inputs_of_equations(lowered: &Lowered) -> Vec<Vec<usize>> {
    let graph = &lowered.model.graph;
    let mut seen = vec![usize::MAX; graph.len()];
    let mut result = Vec::with_capacity(lowered.equations.len());
    for (at, equation) in lowered.equations.iter().enumerate() {
        let mut inputs = Vec::new();
        let mut stack = vec![equation.left, equation.right];
        while let Some(node) = stack.pop() {
            if std::mem::replace(&mut seen[node.index()], at) == at {
                continue;
            }
            if let Op::Input(input) = graph.op(node) {
                inputs.push(input.0 as usize);
            }
            graph.operands(node, |operand| stack.push(operand));
        }
        result.push(inputs);
    }
    result
}

fn requirements(lowered: &Lowered, nodes: &NodeFacts, acc: &mut Vec<Diagnostic>) {
    for requirement in &lowered.requirements {
        let Some(value) = lowered.model.value(requirement.condition) else { continue };
        if value != 0.0 || nodes.open[requirement.condition.index()] {
            continue;
        }
        let mut text = format!(
            "`{}` breaks a requirement of its {}: {}",
            requirement.subject, requirement.owner, requirement.text
        );
        if let Some((left, _, right)) = &requirement.sides
            && let (Some(a), Some(b)) = (lowered.model.value(left.node), lowered.model.value(right.node))
        {
            let unit = pintle_units::display_unit(&left.ty);
            let show = |si: f64| format!("{} {}", crate::render::number::engineering(unit.from_si(si)), unit.text);
            text = format!("{text} ({} against {})", show(a), show(b));
        }
        let mut diagnostic = Diagnostic::new(codes::REQUIREMENT_BROKEN, requirement.place, text);
        if requirement.origin != requirement.place {
            diagnostic = diagnostic.with_label(requirement.origin, "required here");
        }
        acc.push(diagnostic.with_help("correct the size, or choose the shape or formula that is meant"));
    }
}

/// Where values were lost: division by zero, roots of negative numbers.
fn lost_values(sheet: &Sheet, lowered: &Lowered, nodes: &NodeFacts, acc: &mut Vec<Diagnostic>) {
    let model = &lowered.model;
    let value = |node: NodeId| model.values.get(node.index()).copied().unwrap_or(f64::NAN);
    let mut reported: Vec<NodeId> = Vec::new();
    for quantity in &model.quantities {
        if value(quantity.node).is_finite() || nodes.open[quantity.node.index()] {
            continue;
        }
        let mut node = quantity.node;
        loop {
            let mut next = None;
            if let Op::Select(condition, a, b) = model.graph.op(node) {
                let taken = if value(condition).is_nan() {
                    condition
                } else if value(condition) != 0.0 {
                    a
                } else {
                    b
                };
                next = (!value(taken).is_finite()).then_some(taken);
            } else {
                model.graph.operands(node, |operand| {
                    if next.is_none() && !value(operand).is_finite() {
                        next = Some(operand);
                    }
                });
            }
            match next {
                Some(operand) => node = operand,
                None => break,
            }
        }
        if reported.contains(&node) {
            continue;
        }
        reported.push(node);
        let place = lowered.node_places.get(&node).copied().unwrap_or(quantity.place);
        let (code, text) = match model.graph.op(node) {
            Op::Divide(a, b) if value(b) == 0.0 => {
                let _ = a;
                (codes::DIVISION_BY_ZERO, "the divisor is zero".to_string())
            }
            Op::Power(a, ..) if value(a) == 0.0 => (codes::DIVISION_BY_ZERO, "zero has no negative power".to_string()),
            Op::Power(a, _, den) if value(a) < 0.0 && den % 2 == 0 => {
                (codes::UNDEFINED_VALUE, format!("the root of a negative number, {:.6} in SI units", value(a)))
            }
            Op::Apply(function, a)
                if value(node).is_nan() || matches!(function, Function::Ln | Function::Log10 | Function::Tan) =>
            {
                (codes::UNDEFINED_VALUE, format!("{function:?} has no value for {:.6}", value(a)).to_lowercase())
            }
            _ if value(node).is_infinite() => (codes::OVERFLOW, "the value is too large to hold".to_string()),
            _ => (codes::UNDEFINED_VALUE, "there is no value for these operands".to_string()),
        };
        let mut diagnostic = Diagnostic::new(code, place, format!("`{}` has no value: {text}", quantity.name));
        if sheet.origin(place.item) == Origin::Standard || place != quantity.place {
            diagnostic = diagnostic.with_label(quantity.place, "needed here");
        }
        acc.push(diagnostic.with_help("check the givens that enter it; `pintle explain` shows the chain"));
    }
}

fn quantity_result(
    model: &Model,
    id: QuantityId,
    outcomes: &Outcomes,
    nodes: &NodeFacts,
    line: usize,
) -> QuantityResult {
    let quantity = model.quantity(id);
    let si = model.value(quantity.node).filter(|value| value.is_finite());
    let unknown = outcomes.get(&id);
    let status = match (unknown, si) {
        (Some(Outcome::Several { values }), _) => Status::OneOf(values.clone()),
        (Some(Outcome::Found { .. }), Some(_)) => Status::Found,
        (Some(_), _) => Status::Undecided("no solution was found".into()),
        (None, Some(_)) => Status::Evaluated,
        (None, None) if nodes.open[quantity.node.index()] => {
            Status::Undecided("an unknown that it needs was not found".into())
        }
        (None, None) => Status::Failed,
    };
    let inner = match model.graph.op(quantity.node) {
        Op::Quantity(_, inner) => inner,
        _ => quantity.node,
    };
    let (mut low, mut high, mut std) = (None, None, None);
    if let Op::Input(InputId(input)) = model.graph.op(inner)
        && let Some(InputValue::Given { tolerance: Some(tolerance), .. }) =
            model.inputs.get(input as usize).map(|it| &it.value)
    {
        match *tolerance {
            crate::model::InputTolerance::Limits { low: a, high: b } => (low, high) = (Some(a), Some(b)),
            crate::model::InputTolerance::Standard(u) => std = Some(u),
        }
    }
    QuantityResult {
        id,
        name: quantity.name.to_string(),
        group: quantity.group,
        kind: quantity.ty.kind,
        kind_words: quantity.ty.kind.map_or_else(|| quantity.ty.words(), |kind| kind.words().to_string()),
        si: if matches!(status, Status::OneOf(_)) { None } else { si },
        unit: quantity.unit.clone(),
        low,
        high,
        std,
        toleranced: nodes.toleranced[quantity.node.index()],
        status,
        shown: quantity.shown,
        place: quantity.place,
        line,
        source: quantity.source.to_string(),
    }
}

fn ledger_result(model: &Model, plan: &LedgerPlan, line: usize) -> LedgerResult {
    let lines: Vec<LedgerEntry> = plan
        .lines
        .iter()
        .map(|(name, side, node, ends)| LedgerEntry {
            name: name.to_string(),
            side: *side,
            si: model.value(*node),
            from_to: ends.and_then(|(a, b)| Some((model.value(a)?, model.value(b)?))),
        })
        .collect();
    // Summed from the printed lines, not from the equation that was solved.
    let mut residual = Some(0.0);
    let mut largest = 0.0_f64;
    for entry in &lines {
        let signed = match entry.side {
            Side::Gain => entry.si.map(|si| -si),
            _ => entry.si,
        };
        residual = residual.zip(signed).map(|(sum, si)| sum + si);
        largest = largest.max(entry.si.map_or(0.0, f64::abs));
        if let Some((a, b)) = entry.from_to {
            largest = largest.max(a.abs()).max(b.abs());
        }
    }
    LedgerResult {
        name: plan.name.to_string(),
        train: plan.train.to_string(),
        lines,
        residual,
        largest,
        place: plan.place,
        line,
    }
}

/// What the energies across links must not do.
fn flows(model: &Model, plan: &LedgerPlan, acc: &mut Vec<Diagnostic>) {
    for flow in &plan.flows {
        let Some(crossing) = model.value(flow.crossing).filter(|value| value.is_finite()) else { continue };
        if let Some((back, sign)) = flow.locking
            && model.value(back) == Some(0.0)
            && crossing * sign > 0.0
        {
            acc.push(
                Diagnostic::new(
                    codes::SELF_LOCKING,
                    plan.place,
                    format!(
                        "`{}` locks itself (back = 0), but the ledger `{}` would drive it backwards",
                        flow.link, plan.name
                    ),
                )
                .with_label(flow.place, "the link")
                .with_help(
                    "the train stands still in this state; state a `back` efficiency above 0 if it does not lock",
                ),
            );
        }
        if let Some(sign) = flow.slack
            && crossing * sign > 1e-9
        {
            acc.push(
                Diagnostic::new(
                    codes::SLACK_ROPE,
                    flow.place,
                    format!(
                        "in the ledger `{}` the rope `{}` would have to push with {:.6} J",
                        plan.name,
                        flow.link,
                        crossing.abs()
                    ),
                )
                .with_label(plan.place, "this ledger")
                .with_help("the rope falls slack; split the problem where it does, or leave the rope out of the train"),
            );
        }
    }
}

fn limit_result(model: &Model, plan: &LimitPlan, nodes: &NodeFacts, line: usize) -> LimitResult {
    let bound = model.value(plan.bound);
    // The governing side is the one nearest to the bound, or furthest past it.
    let reach = |value: f64, bound: f64| match plan.op {
        CompareOp::Less | CompareOp::LessEqual => bound - value,
        CompareOp::Greater | CompareOp::GreaterEqual => value - bound,
        CompareOp::Equal => -(value - bound).abs(),
        CompareOp::NotEqual => (value - bound).abs(),
    };
    let mut governing: Option<(Option<QuantityId>, f64)> = None;
    let mut unknown = false;
    let mut toleranced = nodes.toleranced[plan.bound.index()];
    for &(id, node) in &plan.sides {
        toleranced |= nodes.toleranced[node.index()];
        match (model.value(node).filter(|it| it.is_finite()), bound) {
            (Some(value), Some(bound)) => {
                if governing.is_none_or(|(_, other)| reach(value, bound) < reach(other, bound)) {
                    governing = Some((id, value));
                }
            }
            _ => unknown = true,
        }
    }
    let (verdict, worst) = match (governing, bound) {
        (Some((_, value)), Some(bound)) => {
            let near = (value - bound).abs() <= EQUAL * bound.abs().max(value.abs());
            let holds = match plan.op {
                CompareOp::Less | CompareOp::Greater | CompareOp::NotEqual => plan.op.holds(value, bound) && !near,
                _ => plan.op.holds(value, bound) || near,
            };
            match (holds, unknown, toleranced) {
                (false, ..) => (Verdict::NotMet, None),
                (true, true, _) => (Verdict::Undecided, None),
                // Tolerances are not carried through in this version: nothing is claimed of them.
                (true, false, true) => (Verdict::MetAtNominalOnly, Some(Worst::Unproved)),
                (true, false, false) => (Verdict::Met, None),
            }
        }
        _ => (Verdict::Undecided, None),
    };
    let value = governing.map(|(_, value)| value);
    let margin = match (value, bound) {
        (Some(value), Some(bound)) if bound != 0.0 => Some(reach(value, bound) / bound.abs()),
        _ => None,
    };
    LimitResult {
        text: plan.text.clone(),
        verdict,
        value,
        bound,
        unit: plan.unit.clone(),
        margin,
        low: None,
        high: None,
        worst,
        governing: governing
            .filter(|_| plan.sides.len() > 1)
            .and_then(|(id, _)| id)
            .map(|id| model.quantity(id).name.to_string()),
        because: plan.because.clone(),
        source: plan.source.clone(),
        place: plan.place,
        line,
    }
}

fn confirm_result(model: &Model, plan: &ConfirmPlan, line: usize) -> ConfirmResult {
    let (value, second) = (model.value(plan.value), model.value(plan.second));
    let agrees = match (value, second) {
        (Some(a), Some(b)) => {
            let half = plan.half_width.unwrap_or(1e-9 * b.abs());
            Some((a - b).abs() <= half * (1.0 + EQUAL))
        }
        _ => None,
    };
    ConfirmResult {
        text: plan.text.clone(),
        value,
        second,
        half_width: plan.half_width,
        unit: plan.unit.clone(),
        agrees,
        source: plan.source.clone(),
        place: plan.place,
        line,
    }
}

/// Short lines of caution.
pub fn cautions(hazards: Hazards) -> Vec<String> {
    let mut lines: Vec<&str> = Vec::new();
    if hazards.hoisting {
        lines.push(
            "Raised load: nobody under it or in line with the rope; rope, hook and structure are not checked here.",
        );
    }
    if hazards.braking {
        lines.push("Brake: torque falls with wear, heat and oil; test it as the maker and the local code ask.");
    }
    if hazards.stored_energy {
        lines.push("Stored energy: wait for standstill or lock the rotor before work on it.");
    }
    if hazards.spring {
        lines.push("Spring: it keeps its energy with the drive off; release it before work on it.");
    }
    if hazards.rim_speed {
        lines.push("Fast rotor: guards, containment and overspeed tests are not covered by this sheet.");
    }
    if !lines.is_empty() {
        lines.push("Local codes and licensed practice apply; this sheet covers only what it states.");
    }
    lines.into_iter().map(String::from).collect()
}
