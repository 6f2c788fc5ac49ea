//! Limits with their verdicts, and second routes.

use super::verdict_paint;
use crate::render::page::{Align, Cell, Page, Paint, Table, WIDTH, width, wrap};
use crate::render::{number, shown, unit_text, with_unit};
use crate::results::{CaseResults, ConfirmResult, LimitResult, Verdict, Worst};

/// Whether the reasons of limits are printed below them.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Reasons {
    /// They are.
    Shown,
    /// They stand with the sheet as it is already.
    Left,
}

pub(super) fn limits(page: &mut Page, case: &CaseResults, reasons: Reasons) {
    if case.limits.is_empty() {
        return;
    }
    if reasons == Reasons::Shown {
        page.heading("LIMITS");
    }
    let rows: Vec<Row> = case.limits.iter().map(Row::of).collect();
    // The condition takes what the numbers leave.
    let verdicts = case.limits.iter().map(|limit| width(short(limit.verdict))).max().unwrap_or(0);
    let most = |head: &str, text: fn(&Row) -> &str| {
        rows.iter().map(|row| width(text(row))).max().unwrap_or(0).max(width(head))
    };
    let at_point = |head: &str, text: fn(&Row) -> &str| {
        let before = rows.iter().map(|row| width(number::halves(text(row)).0)).max().unwrap_or(0);
        let behind = rows.iter().map(|row| width(number::halves(text(row)).1)).max().unwrap_or(0);
        (before + behind).max(width(head))
    };
    let numbers = at_point("value", |it| &it.value) + at_point("bound", |it| &it.bound);
    let words = verdicts + most("", |it| &it.unit) + most("margin", |it| &it.margin);
    let room = WIDTH.saturating_sub(2 + 5 * 2 + numbers + words).max(16);
    let mut table = Table::new(2, &[Align::Left, Align::Left, Align::Point, Align::Point, Align::Left, Align::Right]);
    table.row(["", "", "value", "bound", "", "margin"].map(Cell::from).to_vec());
    for (row, limit) in rows.iter().zip(&case.limits) {
        for (at, part) in wrap(&limit.text, room).iter().enumerate() {
            let cell = |text: &str| Cell::from(if at == 0 { text } else { "" });
            let verdict = if at == 0 { short(limit.verdict) } else { "" };
            table.row(vec![
                Cell::new(verdict, verdict_paint(limit.verdict)),
                part.into(),
                cell(&row.value),
                cell(&row.bound),
                cell(&row.unit),
                cell(&row.margin),
            ]);
        }
        for note in notes(limit, reasons) {
            table.note(note);
        }
    }
    table.write(page);
}

fn short(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::MetAtNominalOnly => "nominal",
        other => other.words(),
    }
}

struct Row {
    value: String,
    bound: String,
    unit: String,
    margin: String,
}

impl Row {
    fn of(limit: &LimitResult) -> Row {
        let show = |si: f64| limit.unit.from_si(si);
        let (value, bound) = match (limit.value, limit.bound) {
            (Some(value), Some(bound)) => number::apart(show(value), show(bound)),
            (value, bound) => {
                let one = |it: Option<f64>| it.map_or("-".into(), |si| number::engineering(show(si)));
                (one(value), one(bound))
            }
        };
        let margin = limit.margin.map_or(String::new(), number::percent);
        Row { value, bound, unit: unit_text(&limit.unit).into(), margin }
    }
}

/// What stands below a limit.
pub(crate) fn notes(limit: &LimitResult, reasons: Reasons) -> Vec<String> {
    let mut notes = Vec::new();
    if limit.verdict == Verdict::MetAtNominalOnly {
        notes.push(match limit.worst {
            Some(Worst::Broken) => "met at nominal only: a corner of the tolerances breaks it".into(),
            _ => "met at nominal only: not proved for the whole tolerance set".into(),
        });
    }
    if let (Some(low), Some(high)) = (limit.low, limit.high) {
        notes.push(format!(
            "worst case {} .. {}",
            number::engineering(limit.unit.from_si(low)),
            shown(high, &limit.unit)
        ));
    }
    if let Some(governing) = &limit.governing {
        notes.push(format!("governed by {governing}"));
    }
    if reasons == Reasons::Shown {
        match (limit.because.as_str(), limit.source.as_str()) {
            ("", "") => {}
            ("", source) => notes.push(format!("({source})")),
            (because, "") => notes.push(because.into()),
            (because, source) => notes.push(format!("{because} ({source})")),
        }
    }
    notes
}

pub(super) fn confirms(page: &mut Page, case: &CaseResults) {
    if case.confirms.is_empty() {
        return;
    }
    page.heading("CONFIRMED");
    let mut table = Table::new(2, &[Align::Left, Align::Left]);
    for it in &case.confirms {
        let (word, paint) = agreement(it);
        table.row(vec![Cell::new(word, paint), confirm_text(it).into()]);
        table.note(&it.source);
    }
    table.write(page);
}

pub(super) fn agreement(it: &ConfirmResult) -> (&'static str, Paint) {
    match it.agrees {
        Some(true) => ("agrees", Paint::Good),
        Some(false) => ("disagrees", Paint::Bad),
        None => ("undecided", Paint::Open),
    }
}

/// Both values, and how far they are apart.
pub(crate) fn confirm_text(it: &ConfirmResult) -> String {
    let (Some(value), Some(second)) = (it.value, it.second) else {
        return format!("{}: a value is not known", it.text);
    };
    let (own, other) = number::apart(it.unit.from_si(value), it.unit.from_si(second));
    let difference = it.unit.difference_from_si((value - second).abs());
    let mut text = format!("{}: {own} against {}", it.text, with_unit(other, &it.unit));
    match it.half_width.filter(|half| *half > 0.0) {
        Some(half) => {
            let half_shown = number::engineering(it.unit.difference_from_si(half));
            text.push_str(&format!(
                " ± {half_shown}; apart by {} of that",
                number::percent((value - second).abs() / half)
            ));
        }
        None => text.push_str(&format!("; apart by {}", with_unit(number::engineering(difference), &it.unit))),
    }
    text
}
