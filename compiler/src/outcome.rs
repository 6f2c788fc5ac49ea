//! From equations to results: solving, then judging requirements, limits and
//! second routes on the values.

mod facts;
mod faults;
mod solving;

use crate::QuickMap;
use crate::codes;
use crate::lower::{ConfirmPlan, Hazards, LedgerPlan, LimitPlan, Lowered};
use crate::model::{InputValue, Model};
use crate::names::Sheet;
use crate::number::shown;
use crate::results::*;
use crate::source::Origin;
use facts::NodeFacts;
use pintle_graph::{CompareOp, InputId, Op, QuantityId};
use pintle_solve::Outcome;
use pintle_text::{Diagnostic, Place};

/// A computed value this near to a bound, relative, counts as equal to it:
/// sums of decimals are not exact in binary.
const EQUAL: f64 = 1e-12;

/// Solves a lowered sheet and judges it.
pub fn outcome(
    sheet: &Sheet,
    mut lowered: Lowered,
    case: Option<String>,
    cancel: &dyn Fn() -> bool,
) -> (CaseResults, Model, Vec<Diagnostic>) {
    let mut acc = std::mem::take(&mut lowered.diagnostics);
    let outcomes = solving::solve(&mut lowered, &mut acc, cancel);
    let facts = NodeFacts::new(&lowered, &outcomes);
    faults::requirements(sheet, &lowered, &facts, &mut acc);
    faults::lost_values(sheet, &lowered, &facts, &mut acc);
    // A tube whose bore exceeds its outside has no inertia, whatever its formula gives.
    for (value, _) in lowered.model.values.iter_mut().zip(&facts.broken).filter(|(_, broken)| **broken) {
        *value = f64::NAN;
    }
    let line = |place: Place| sheet.sources.location(place).line;
    let mut results = CaseResults { case, ..CaseResults::default() };
    results.quantities.reserve(lowered.model.quantities.len());
    for (index, quantity) in lowered.model.quantities.iter().enumerate() {
        if sheet.origin(quantity.place.item) == Origin::Standard {
            continue;
        }
        let id = QuantityId(index as u32);
        results.quantities.push(quantity_result(&lowered.model, id, &outcomes, &facts, line(quantity.place)));
    }
    for plan in &lowered.ledgers {
        results.ledgers.push(ledger_result(&lowered.model, plan, line(plan.place)));
        faults::flows(&lowered.model, plan, &mut acc);
    }
    for plan in &lowered.limits {
        results.limits.push(limit_result(&lowered.model, plan, &facts, line(plan.place)));
    }
    for plan in &lowered.confirms {
        let confirm = confirm_result(&lowered.model, plan, line(plan.place));
        if confirm.agrees == Some(false) {
            let show = |si: Option<f64>| si.map_or("?".into(), |si| shown(si, &plan.unit));
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

type Outcomes = QuickMap<QuantityId, Outcome>;

fn quantity_result(
    model: &Model,
    id: QuantityId,
    outcomes: &Outcomes,
    facts: &NodeFacts,
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
        (None, None) if facts.open[quantity.node.index()] => {
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
        name: quantity.name.clone(),
        group: quantity.group,
        ty: quantity.ty,
        si: if matches!(status, Status::OneOf(_)) { None } else { si },
        unit: quantity.unit.clone(),
        low,
        high,
        std,
        toleranced: facts.toleranced[quantity.node.index()],
        status,
        shown: quantity.shown,
        place: quantity.place,
        line,
        source: quantity.source.clone(),
    }
}

fn ledger_result(model: &Model, plan: &LedgerPlan, line: usize) -> LedgerResult {
    let lines: Vec<LedgerEntry> = plan
        .lines
        .iter()
        .map(|it| LedgerEntry {
            name: it.name.to_string(),
            side: it.side,
            si: model.value(it.energy),
            from_to: it.ends.and_then(|(a, b)| Some((model.value(a)?, model.value(b)?))),
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

fn limit_result(model: &Model, plan: &LimitPlan, facts: &NodeFacts, line: usize) -> LimitResult {
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
    let mut toleranced = facts.toleranced[plan.bound.index()];
    for &(id, node) in &plan.sides {
        toleranced |= facts.toleranced[node.index()];
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
