//! What values give away: broken requirements, values that do not exist,
//! energies that flow where they cannot.

use super::facts::{NodeFacts, is_broken};
use crate::codes;
use crate::lower::{LedgerPlan, LinePlan, Lowered};
use crate::model::Model;
use crate::names::Sheet;
use crate::number::{engineering, shown};
use crate::results::Side;
use crate::source::Origin;
use pintle_graph::{Function, NodeId, Op};
use pintle_syntax::ast::ItemKind;
use pintle_text::{Diagnostic, ItemId};

pub(super) fn requirements(sheet: &Sheet, lowered: &Lowered, facts: &NodeFacts, acc: &mut Vec<Diagnostic>) {
    for requirement in &lowered.requirements {
        if !is_broken(lowered, requirement) || facts.open[requirement.condition.index()] {
            continue;
        }
        let (owner, words) = match &requirement.words {
            Some((owner, words)) => (owner.clone(), words.clone()),
            None => {
                let written = sheet.sources.text(requirement.origin);
                (owner(sheet, requirement.origin.item), written.split_whitespace().collect::<Vec<_>>().join(" "))
            }
        };
        let mut text = format!("`{}` breaks a requirement of its {owner}: {words}", requirement.subject);
        if let Some((left, right, ty)) = &requirement.sides
            && let (Some(a), Some(b)) = (lowered.model.value(*left), lowered.model.value(*right))
        {
            let unit = pintle_units::display_unit(ty);
            text = format!("{text} ({} against {})", shown(a, &unit), shown(b, &unit));
        }
        let mut diagnostic = Diagnostic::new(codes::REQUIREMENT_BROKEN, requirement.place, text);
        if requirement.origin != requirement.place {
            diagnostic = diagnostic.with_label(requirement.origin, "required here");
        }
        acc.push(diagnostic.with_help("correct the size, or choose the shape or formula that is meant"));
    }
}

/// A shape or formula, in words.
fn owner(sheet: &Sheet, item: ItemId) -> String {
    match sheet.item(item).map(|item| &item.kind) {
        Some(ItemKind::Shape { name, .. }) => format!("shape `{}`", name.text),
        Some(ItemKind::Formula { name, .. }) => format!("formula `{}`", name.text),
        _ => "definition".into(),
    }
}

/// Where values were lost: division by zero, roots of negative numbers.
pub(super) fn lost_values(sheet: &Sheet, lowered: &Lowered, facts: &NodeFacts, acc: &mut Vec<Diagnostic>) {
    let model = &lowered.model;
    let value = |node: NodeId| model.values.get(node.index()).copied().unwrap_or(f64::NAN);
    let mut reported: Vec<NodeId> = Vec::new();
    for quantity in &model.quantities {
        if value(quantity.node).is_finite() || facts.open[quantity.node.index()] || facts.broken[quantity.node.index()]
        {
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
        let origin = lowered.node_places.get(&node).copied().unwrap_or(quantity.place);
        // A line of the library is where it happened, not where it can be mended.
        let in_library = sheet.origin(origin.item) == Origin::Standard;
        let (place, other) = if in_library {
            (quantity.place, (origin, "in this formula"))
        } else {
            (origin, (quantity.place, "needed here"))
        };
        let (code, text) = match model.graph.op(node) {
            Op::Divide(_, b) if value(b) == 0.0 => (codes::DIVISION_BY_ZERO, "the divisor is zero".to_string()),
            Op::Power(a, ..) if value(a) == 0.0 => (codes::DIVISION_BY_ZERO, "zero has no negative power".to_string()),
            Op::Power(a, _, den) if value(a) < 0.0 && den % 2 == 0 => (
                codes::UNDEFINED_VALUE,
                format!("the root of a negative number, {} in SI units", engineering(value(a))),
            ),
            Op::Apply(function, a)
                if value(node).is_nan() || matches!(function, Function::Ln | Function::Log10 | Function::Tan) =>
            {
                (
                    codes::UNDEFINED_VALUE,
                    format!("{function:?} has no value for {}", engineering(value(a))).to_lowercase(),
                )
            }
            _ if value(node).is_infinite() => (codes::OVERFLOW, "the value is too large to hold".to_string()),
            _ => (codes::UNDEFINED_VALUE, "there is no value for these operands".to_string()),
        };
        let mut diagnostic = Diagnostic::new(code, place, format!("`{}` has no value: {text}", quantity.name));
        if other.0 != place {
            diagnostic = diagnostic.with_label(other.0, other.1);
        }
        acc.push(diagnostic.with_help("check the givens that enter it; `pintle explain` shows the chain"));
    }
}

/// What the energies across links must not do.
pub(super) fn flows(model: &Model, plan: &LedgerPlan, acc: &mut Vec<Diagnostic>) {
    one_direction(model, plan, acc);
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
                        "in the ledger `{}` the rope `{}` would have to push with {} J",
                        plan.name,
                        flow.link,
                        engineering(crossing.abs())
                    ),
                )
                .with_label(plan.place, "this ledger")
                .with_help("the rope falls slack; split the problem where it does, or leave the rope out of the train"),
            );
        }
    }
}

/// A lossy link needs one direction of flow. Lines that act evenly along the
/// travel give one, the sign of what crosses; a spring does not act evenly.
fn one_direction(model: &Model, plan: &LedgerPlan, acc: &mut Vec<Diagnostic>) {
    let Some(link) = plan.flows.iter().find(|flow| flow.lossy) else { return };
    let moves = |it: &&LinePlan| it.side == Side::Spring && model.value(it.energy).is_some_and(|it| it != 0.0);
    let Some(spring) = plan.lines.iter().find(moves) else { return };
    acc.push(
        Diagnostic::new(
            codes::FLOW_DIRECTION,
            plan.place,
            format!("the power through `{}` may turn round within the ledger `{}`", link.link, plan.name),
        )
        .with_note(format!("the force of `{}` changes on the way", spring.name))
        .with_label(link.place, "its loss depends on the direction")
        .with_help(
            "split the ledger where the flow turns, with `start from LEDGER.end`, or state the link without loss",
        ),
    );
}
