//! Solving, and what is said where it does not succeed.

use super::Outcomes;
use crate::codes;
use crate::lower::Lowered;
use crate::model::InputValue;
use crate::number::{engineering, shown};
use pintle_solve::{Equation, NotFound, Outcome, Problem, Unknown};
use pintle_text::Diagnostic;

pub(super) fn solve(lowered: &mut Lowered, acc: &mut Vec<Diagnostic>, cancel: &dyn Fn() -> bool) -> Outcomes {
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
    let found = pintle_solve::solve(&model.graph, &problem, &structure, &mut inputs, &mut values, cancel);
    model.values = values;
    let mut outcomes = Outcomes::default();
    for (at, (&(input, id), outcome)) in lowered.unknowns.iter().zip(found).enumerate() {
        let quantity = model.quantity(id);
        let place = quantity.place;
        let show = |si: f64| shown(si, &quantity.unit);
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
        spare(lowered, at, acc);
    }
    outcomes
}

/// An equation with nothing left to fix: a ledger may close all the same.
fn spare(lowered: &Lowered, at: usize, acc: &mut Vec<Diagnostic>) {
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
            .filter_map(|line| lowered.model.value(line.energy))
            .fold(0.0, |acc: f64, value| acc.max(value.abs())),
        None => left.abs().max(right.abs()),
    };
    let difference = left - right;
    if difference.abs() <= 1e-9 * largest {
        return;
    }
    acc.push(match &equation.ledger {
        Some(name) => Diagnostic::new(
            codes::LEDGER_OPEN,
            equation.place,
            format!(
                "the ledger `{name}` does not close: {} J are {}",
                engineering(difference.abs()),
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
