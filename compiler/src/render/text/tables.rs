//! Givens, assumptions and results of the sheet as it stands.

use super::account;
use crate::model::{InputTolerance, Model};
use crate::render::page::{Align, Cell, Page, Paint, Table};
use crate::render::{Written, number, shown, unit_text, with_unit, written};
use crate::results::{Assumption, CaseResults, Group, QuantityResult, Shown, Status};
use pintle_units::Unit;

/// Members that the compact tables of bodies and rotors hold.
const COMPACT: [&str; 5] = [".mass", ".J", ".centre.x", ".centre.y", ".centre.z"];

pub(super) fn givens(page: &mut Page, case: &CaseResults, model: Option<&Model>) {
    let mut table = Table::new(2, &[Align::Left, Align::Point, Align::Left, Align::Left]);
    for it in case.quantities.iter().filter(|it| matches!(it.group, Group::Given | Group::Field)) {
        let input = written(model, it);
        table.row(vec![
            it.name.as_str().into(),
            value(it, &input).into(),
            behind(it, &input).into(),
            it.source.as_str().into(),
        ]);
    }
    if !table.is_empty() {
        page.heading("GIVEN");
        table.write(page);
    }
}

/// The number of a quantity in its unit, as written where the sheet writes it.
pub(crate) fn value(it: &QuantityResult, input: &Written) -> String {
    match (it.si, &input.number) {
        (Some(_), Some(number)) => number.clone(),
        (Some(si), None) => number::engineering(it.unit.from_si(si)),
        (None, _) => missing(&it.status).into(),
    }
}

fn missing(status: &Status) -> &'static str {
    match status {
        Status::OneOf(_) => "several",
        Status::Undecided(_) => "undecided",
        _ => "not known",
    }
}

/// What stands behind the number of a given: tolerance and unit.
pub(crate) fn behind(it: &QuantityResult, input: &Written) -> String {
    let limits = match input.tolerance {
        Some(InputTolerance::Limits { low, high }) => Some((low, high)),
        Some(InputTolerance::Standard(std)) => return uncertain(std, &it.unit),
        None => it.low.zip(it.high),
    };
    match (it.si, limits) {
        (Some(si), Some((low, high))) => tolerance(si, low, high, &it.unit),
        (Some(_), None) => unit_text(&it.unit).into(),
        (None, _) => String::new(),
    }
}

/// `± 0.1 mm`; limits of a temperature level deviate in kelvin all the same.
fn tolerance(si: f64, low: f64, high: f64, unit: &Unit) -> String {
    let [si, low, high] = [si, low, high].map(|it| unit.from_si(it));
    with_unit(number::deviation(si, low, high), unit)
}

fn uncertain(std: f64, unit: &Unit) -> String {
    with_unit(format!("u {}", number::engineering(unit.difference_from_si(std))), unit)
}

pub(super) fn assumptions(page: &mut Page, assumptions: &[Assumption]) {
    if assumptions.is_empty() {
        return;
    }
    page.heading("ASSUMED");
    let mut table = Table::new(2, &[Align::Left, Align::Left]);
    for it in assumptions {
        let status = match it.confirmed {
            Some(_) => Cell::new("confirmed", Paint::Good),
            None => Cell::new("open", Paint::Doubt),
        };
        table.row(vec![status, it.text.as_str().into()]);
        if let Some(by) = it.confirmed.as_deref().filter(|by| !by.is_empty()) {
            table.note(format!("by: {by}"));
        }
    }
    table.write(page);
}

pub(super) fn results(page: &mut Page, case: &CaseResults, model: Option<&Model>) {
    compact(page, case, Group::Body, "BODIES");
    compact(page, case, Group::Rotor, "ROTORS");
    for (group, heading) in
        [(Group::Member, "MEMBERS"), (Group::Train, "TRAINS"), (Group::Derived, "DERIVED"), (Group::Ledger, "STATES")]
    {
        let rows = case
            .quantities
            .iter()
            .filter(|it| it.group == group && it.shown == Shown::Always && !account::stands_in_ledger(case, it));
        values(page, heading, rows, model);
    }
    let found = case.quantities.iter().filter(|it| it.group == Group::Wanted || searched(model, it));
    values(page, "FOUND", found, model);
}

fn searched(model: Option<&Model>, it: &QuantityResult) -> bool {
    it.group != Group::Ledger && written(model, it).range.is_some()
}

/// One row a body or rotor: mass, moment of inertia, centre of mass.
fn compact(page: &mut Page, case: &CaseResults, group: Group, heading: &str) {
    let mut owners: Vec<&str> = Vec::new();
    // Removed material has a mass but no centre of its own: it is part of its rotor's row.
    let whole = |owner: &&str| case.quantity(&format!("{owner}.centre.x")).is_some();
    for it in case.quantities.iter().filter(|it| it.group == group) {
        let owner = COMPACT.iter().find_map(|member| it.name.strip_suffix(member));
        // Members of one thing stand together.
        if let Some(owner) = owner.filter(|owner| owners.last() != Some(owner)).filter(whole) {
            owners.push(owner);
        }
    }
    let others = || {
        let compact = |it: &&QuantityResult| COMPACT.iter().any(|member| it.name.ends_with(member));
        case.quantities.iter().filter(move |it| it.group == group && it.shown == Shown::Always && !compact(it))
    };
    if owners.is_empty() && others().next().is_none() {
        return;
    }
    page.heading(heading);
    let mut table = Table::new(2, &[Align::Left, Align::Point, Align::Left, Align::Point, Align::Left, Align::Left]);
    let mut head = vec!["".into(), "mass".into(), "".into(), "J".into(), "".into(), "centre of mass".into()];
    if owners.is_empty() {
        head.clear();
    } else {
        table.row(head);
    }
    for owner in owners {
        let member = |name: &str| case.quantity(&format!("{owner}.{name}"));
        let number = |it: Option<&QuantityResult>| it.map_or(String::new(), |it| value(it, &Written::default()));
        let unit = |it: Option<&QuantityResult>| {
            it.filter(|it| it.si.is_some()).map_or("", |it| unit_text(&it.unit)).to_string()
        };
        let (mass, moment) = (member("mass"), member("J"));
        table.row(vec![
            owner.into(),
            number(mass).into(),
            unit(mass).into(),
            number(moment).into(),
            unit(moment).into(),
            centre(["centre.x", "centre.y", "centre.z"].map(member)).into(),
        ]);
    }
    table.write(page);
    let mut more = Table::new(4, &[Align::Left, Align::Point, Align::Left]);
    for it in others() {
        more.row(vec![it.name.as_str().into(), value(it, &Written::default()).into(), unit_text(&it.unit).into()]);
    }
    more.write(page);
}

fn centre(members: [Option<&QuantityResult>; 3]) -> String {
    let mut values = Vec::new();
    for member in members {
        match member.and_then(|it| it.si.map(|si| it.unit.from_si(si))) {
            Some(value) => values.push(value),
            None => return String::new(),
        }
    }
    members
        .first()
        .copied()
        .flatten()
        .map_or(String::new(), |it| with_unit(format!("({})", number::vector(&values)), &it.unit))
}

fn values<'a>(page: &mut Page, heading: &str, rows: impl Iterator<Item = &'a QuantityResult>, model: Option<&Model>) {
    let mut table = Table::new(2, &[Align::Left, Align::Point, Align::Left, Align::Left]);
    for it in rows {
        let input = written(model, it);
        let (unit, paint) = match it.si {
            Some(_) => (unit_text(&it.unit), Paint::Plain),
            None => ("", Paint::Open),
        };
        table.row(vec![
            it.name.as_str().into(),
            Cell::new(value(it, &input), paint),
            unit.into(),
            remark(it, &input).into(),
        ]);
    }
    if !table.is_empty() {
        page.heading(heading);
        table.write(page);
    }
}

/// How sure a value is, in words; empty for plain evaluation.
pub(crate) fn remark(it: &QuantityResult, input: &Written) -> String {
    let mut parts = Vec::new();
    let range = input.range.map(|(low, high, declared)| {
        let inferred = if declared { "" } else { " (inferred)" };
        format!(" in {} .. {}{inferred}", number::engineering(it.unit.from_si(low)), shown(high, &it.unit))
    });
    let range = range.unwrap_or_default();
    match &it.status {
        Status::Evaluated | Status::Failed => {}
        Status::Found => parts.push(format!("found{range}")),
        Status::Unique => parts.push(format!("unique{range}")),
        Status::OneOf(solutions) => {
            let list: Vec<String> = solutions.iter().map(|&si| number::engineering(it.unit.from_si(si))).collect();
            parts.push(format!("one of {}{range}: {}", solutions.len(), with_unit(list.join(", "), &it.unit)));
        }
        Status::Undecided(why) => parts.push(format!("{why}{range}")),
    }
    if let (Some(low), Some(high)) = (it.low, it.high) {
        let low = number::engineering(it.unit.from_si(low));
        parts.push(format!("worst case {low} .. {}", number::engineering(it.unit.from_si(high))));
    }
    if let Some(std) = it.std {
        parts.push(format!("u {}", number::engineering(it.unit.difference_from_si(std))));
    }
    if !it.source.is_empty() {
        parts.push(it.source.to_string());
    }
    parts.join("; ")
}
