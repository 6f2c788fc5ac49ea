//! Ledgers as accounts: what is there at the start and put in on one side, what
//! is there at the end and lost on the other.

use super::tables::value;
use crate::render::page::{Align, Cell, Page, Paint, Table};
use crate::render::{Written, number, unit_text};
use crate::results::{CaseResults, Group, LedgerEntry, LedgerResult, QuantityResult, Side};

pub(super) fn ledgers(page: &mut Page, case: &CaseResults) {
    if case.ledgers.is_empty() {
        return;
    }
    page.heading("LEDGERS");
    for (at, ledger) in case.ledgers.iter().enumerate() {
        if at > 0 {
            page.blank();
        }
        account(page, ledger);
        states(page, ledger, case);
    }
}

/// Speed and way of every member at the end, beside the account.
const STATES: [&str; 4] = ["speed", "angle", "travel", "rim_speed"];

fn states(page: &mut Page, ledger: &LedgerResult, case: &CaseResults) {
    let mut members: Vec<&str> = Vec::new();
    for line in &ledger.lines {
        if !members.contains(&line.name.as_str()) {
            members.push(&line.name);
        }
    }
    let mut table =
        Table::new(4, &[Align::Left, Align::Point, Align::Left, Align::Point, Align::Left, Align::Point, Align::Left]);
    let mut rows: Vec<(&str, [Option<&QuantityResult>; 3])> = Vec::new();
    for member in members {
        let state =
            |name: &str| case.quantity(&format!("{}.{member}.{name}", ledger.name)).filter(|it| it.si.is_some());
        let [speed, angle, travel, rim_speed] = STATES.map(state);
        let way = angle.or(travel);
        if speed.is_none() && way.is_none() {
            continue;
        }
        rows.push((member, [speed, way, rim_speed]));
    }
    if rows.is_empty() {
        return;
    }
    let mut head: Vec<Cell> = vec!["at the end".into()];
    for (column, name) in ["speed", "way", "rim speed"].into_iter().enumerate() {
        let is_used = rows.iter().any(|(_, states)| states.get(column).is_some_and(Option::is_some));
        head.extend([if is_used { name } else { "" }, ""].map(Cell::from));
    }
    table.row(head);
    for (member, states) in rows {
        let mut row: Vec<Cell> = vec![member.into()];
        for it in states {
            row.push(it.map_or(String::new(), |it| value(it, &Written::default())).into());
            row.push(it.map_or("", |it| unit_text(&it.unit)).into());
        }
        table.row(row);
    }
    table.write(page);
}

/// Whether a quantity stands with its ledger already: a line, or the state of a member.
pub(super) fn stands_in_ledger(case: &CaseResults, it: &QuantityResult) -> bool {
    it.group == Group::Ledger
        && case.ledgers.iter().any(|ledger| {
            let rest = it.name.strip_prefix(ledger.name.as_str()).and_then(|rest| rest.strip_prefix('.'));
            rest.is_some_and(|rest| ledger.lines.iter().any(|line| is_of(line, rest)))
        })
}

fn is_of(line: &LedgerEntry, name: &str) -> bool {
    let Some(rest) = name.strip_prefix(line.name.as_str()) else { return false };
    let member = rest.strip_prefix('.').unwrap_or("");
    rest.is_empty() || LINES.contains(&member) || STATES.contains(&member)
}

/// Behind the name of a member or link: the quantities that are lines of the account.
pub(crate) const LINES: [&str; 4] = ["kinetic", "height", "spring", "loss"];

/// One account.
pub(crate) fn account(page: &mut Page, ledger: &LedgerResult) {
    let lines: Vec<(&LedgerEntry, Entry)> = ledger.lines.iter().map(|line| (line, Entry::of(line))).collect();
    let scale = Scale::of(lines.iter().flat_map(|(_, entry)| [entry.left, entry.right]).flatten());
    let of = if ledger.train.is_empty() { String::new() } else { format!(" of {}", ledger.train) };
    page.text_block(2, 4, &format!("{}{of}, in {}", ledger.name, scale.unit), Paint::Plain);
    let mut table = Table::new(4, &[Align::Left, Align::Left, Align::Right, Align::Right]);
    table.row(vec!["".into(), "".into(), "start, put in".into(), "end, lost".into()]);
    for (line, entry) in &lines {
        table.row(vec![
            line.name.as_str().into(),
            words(line.side).into(),
            scale.cell(entry.left).into(),
            scale.cell(entry.right).into(),
        ]);
    }
    let sum = |side: fn(&Entry) -> Option<f64>| lines.iter().filter_map(|(_, entry)| side(entry)).sum::<f64>();
    if !lines.is_empty() && lines.iter().all(|(line, _)| line.si.is_some()) {
        let (left, right) = (sum(|it| it.left), sum(|it| it.right));
        table.row(vec!["sum".into(), "".into(), scale.cell(Some(left)).into(), scale.cell(Some(right)).into()]);
    }
    table.write(page);
    match ledger.residual {
        Some(residual) => {
            let share = if ledger.largest > 0.0 { residual.abs() / ledger.largest } else { 0.0 };
            let share = if share > 0.0 {
                format!(", {} of the largest line", number::engineering(rough(share)))
            } else {
                String::new()
            };
            page.text_block(4, 6, &format!("residual {} J{share}", number::engineering(rough(residual))), Paint::Plain);
        }
        None => page.text_block(4, 6, "not closed: a line is not known", Paint::Open),
    }
}

/// Two digits are enough for what rounding leaves.
fn rough(value: f64) -> f64 {
    format!("{value:.1e}").parse().unwrap_or(value)
}

fn words(side: Side) -> &'static str {
    match side {
        Side::Gain => "put in",
        Side::Lose => "lost",
        Side::Link => "lost in link",
        stored => stored.word(),
    }
}

/// The two sides of a line.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Entry {
    left: Option<f64>,
    right: Option<f64>,
}

impl Entry {
    fn of(line: &LedgerEntry) -> Entry {
        match (line.side, line.from_to, line.si) {
            // Where height is counted from is free: from the lower end, so that no stored energy is negative.
            (Side::Height, Some((from, to)), _) => {
                let lowest = from.min(to);
                Entry { left: Some(from - lowest), right: Some(to - lowest) }
            }
            (Side::Height, None, Some(change)) => {
                Entry { left: Some((-change).max(0.0)), right: Some(change.max(0.0)) }
            }
            (_, Some((from, to)), _) => Entry { left: Some(from), right: Some(to) },
            (Side::Gain, None, si) => Entry { left: si, right: None },
            (_, None, si) => Entry { left: None, right: si },
        }
    }
}

/// The unit and the decimals of a whole account.
struct Scale {
    unit: &'static str,
    factor: f64,
    decimals: usize,
    largest: f64,
}

impl Scale {
    fn of(values: impl Iterator<Item = f64>) -> Scale {
        let largest = values.filter(|it| it.is_finite()).fold(0.0_f64, |so_far, it| so_far.max(it.abs()));
        let (unit, factor) = match largest {
            _ if largest < 1e4 => ("J", 1.0),
            _ if largest < 1e7 => ("kJ", 1e3),
            _ if largest < 1e10 => ("MJ", 1e6),
            _ => ("GJ", 1e9),
        };
        let shown = largest / factor;
        let before = if shown >= 1.0 { (libm::log10(shown) as usize) + 1 } else { 1 };
        Scale { unit, factor, decimals: 5_usize.saturating_sub(before), largest }
    }

    fn cell(&self, value: Option<f64>) -> String {
        let Some(value) = value else { return String::new() };
        // A sum of which only rounding is left is nothing.
        let value = if value.abs() < 1e-12 * self.largest { 0.0 } else { value / self.factor };
        let text = format!("{:.*}", self.decimals, value + 0.0);
        // A line that is there must not read as nothing.
        let nothing = text.chars().all(|c| matches!(c, '0' | '.' | '-'));
        match nothing && value != 0.0 {
            true => number::engineering(rough(value)),
            false => text,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check_scale(values: &[f64], expected: &[&str]) {
        let scale = Scale::of(values.iter().copied());
        let cells: Vec<String> = values.iter().map(|&it| format!("{} {}", scale.cell(Some(it)), scale.unit)).collect();
        assert_eq!(cells, expected);
    }

    #[test]
    fn an_account_has_one_unit_and_one_number_of_decimals() {
        check_scale(&[0.0, 3.25, 9999.5], &["0.0 J", "3.2 J", "9999.5 J"]);
        check_scale(&[45_231.7, 1200.0], &["45.232 kJ", "1.200 kJ"]);
        check_scale(&[2.5e8, 0.0], &["250.00 MJ", "0.00 MJ"]);
        check_scale(&[0.0], &["0.0000 J"]);
    }

    #[test]
    fn a_small_line_does_not_read_as_nothing() {
        check_scale(&[45_231.7, 0.012], &["45.232 kJ", "1.2e-5 kJ"]);
    }

    #[test]
    fn height_counts_from_the_lower_end() {
        let line =
            LedgerEntry { name: "load".into(), side: Side::Height, si: Some(-500.0), from_to: Some((0.0, -500.0)) };
        assert_eq!(Entry::of(&line), Entry { left: Some(500.0), right: Some(0.0) });
        let rises = LedgerEntry { si: Some(500.0), from_to: None, ..line };
        assert_eq!(Entry::of(&rises), Entry { left: Some(0.0), right: Some(500.0) });
    }
}
