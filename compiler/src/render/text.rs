//! The printed sheet of `solve`: 80 columns, the verdict first.

pub(crate) mod account;
mod cases;
pub(crate) mod limits;
pub(crate) mod tables;

use super::page::{Colour, Page, Paint};
use super::verdicts::{self, Count};
use super::{View, page};
use crate::results::{CaseResults, Status, Verdict};
use pintle_text::Severity;

/// How much is printed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Detail {
    /// Every table.
    Full,
    /// The verdict lines alone.
    Verdicts,
}

/// The whole sheet as text.
pub fn solve(view: &View<'_>, detail: Detail, colour: Colour) -> String {
    let mut page = Page::new(colour);
    if detail == Detail::Full {
        title(&mut page, view);
        page.blank();
    }
    verdict_lines(&mut page, view);
    if detail == Detail::Verdicts {
        return page.text();
    }
    scope(&mut page, view);
    let base = &view.results.base;
    let model = view.models.first();
    tables::givens(&mut page, base, model);
    tables::assumptions(&mut page, &view.results.assumptions);
    tables::results(&mut page, base, model);
    account::ledgers(&mut page, base);
    limits::limits(&mut page, base, limits::Reasons::Shown);
    limits::confirms(&mut page, base);
    for (case, model) in view.cases().skip(1) {
        cases::case(&mut page, base, case, model);
    }
    if !view.results.cautions.is_empty() {
        page.heading("CAUTIONS");
        for caution in &view.results.cautions {
            page.text_block(2, 4, caution, Paint::Plain);
        }
    }
    page.text()
}

/// The colour of a verdict.
pub(crate) fn verdict_paint(verdict: Verdict) -> Paint {
    match verdict {
        Verdict::Met => Paint::Good,
        Verdict::MetAtNominalOnly => Paint::Doubt,
        Verdict::NotMet => Paint::Bad,
        Verdict::Undecided => Paint::Open,
    }
}

fn title(page: &mut Page, view: &View<'_>) {
    let sheet = &view.results.sheet;
    if !sheet.title.is_empty() {
        page.text_block(0, 2, &sheet.title, Paint::Heading);
    }
    let mut parts = Vec::new();
    if !sheet.number.is_empty() {
        parts.push(sheet.number.clone());
    }
    if !sheet.revision.is_empty() {
        parts.push(format!("revision {}", sheet.revision));
    }
    // Short fields stand in the title block, long ones in paragraphs of their own.
    parts.extend(sheet.fields.iter().filter(|field| !is_long(field)).map(|(name, value)| format!("{name}: {value}")));
    if !parts.is_empty() {
        page.text_block(0, 2, &parts.join(", "), Paint::Plain);
    }
}

fn is_long((name, value): &(String, String)) -> bool {
    name == "scope" || page::width(value) > 40
}

fn scope(page: &mut Page, view: &View<'_>) {
    for (name, value) in view.results.sheet.fields.iter().filter(|field| is_long(field)) {
        page.heading(&name.to_uppercase());
        page.text_block(2, 2, value, Paint::Plain);
    }
}

/// The lines that say how the sheet stands.
fn verdict_lines(page: &mut Page, view: &View<'_>) {
    let results = view.results;
    let errors = verdicts::n_reported(view, Severity::Error);
    if errors > 0 {
        let words = if errors == 1 {
            "1 error: what depends on it is missing below".into()
        } else {
            format!("{errors} errors: what depends on them is missing below")
        };
        page.text_block(0, 2, &words, Paint::Bad);
    }
    // A limit with an error in it is in no result: it must not seem that there is none.
    if errors > 0 && results.base.limits.is_empty() {
        page.text_block(0, 2, verdicts::NONE_JUDGED, Paint::Plain);
    } else {
        case_verdicts(page, 0, "", &results.base);
    }
    for case in &results.cases {
        let name = case.case.as_deref().unwrap_or_default();
        case_verdicts(page, 2, &format!("under {name}: "), case);
    }
    let open = results.assumptions.iter().filter(|it| it.confirmed.is_none()).count();
    if open > 0 {
        let words = if open == 1 { "1 assumption is open".into() } else { format!("{open} assumptions are open") };
        page.text_block(0, 2, &words, Paint::Plain);
    }
}

fn case_verdicts(page: &mut Page, indent: usize, prefix: &str, case: &CaseResults) {
    let paint = verdict_paint(Count::of(case).gravest());
    let paint = if case.limits.is_empty() { Paint::Plain } else { paint };
    page.text_block(indent, indent + 2, &format!("{prefix}{}", verdicts::line(case)), paint);
    let undecided: Vec<&str> = case
        .quantities
        .iter()
        .filter(|it| matches!(it.status, Status::Undecided(_) | Status::OneOf(_)))
        .map(|it| it.name.as_str())
        .collect();
    if !undecided.is_empty() {
        page.text_block(indent, indent + 2, &format!("{prefix}undecided: {}", undecided.join(", ")), Paint::Open);
    }
    let apart: Vec<&str> =
        case.confirms.iter().filter(|it| it.agrees == Some(false)).map(|it| it.text.as_str()).collect();
    if !apart.is_empty() {
        let words = format!("{prefix}a second route disagrees: {}", apart.join("; "));
        page.text_block(indent, indent + 2, &words, Paint::Bad);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::fixture::Fixture;
    use crate::render::page::{WIDTH, width};

    #[test]
    fn the_whole_sheet() {
        let found = solve(&Fixture::winch().view(), Detail::Full, Colour::Off);
        let expected = include_str!("text/winch.txt");
        assert_eq!(found, expected, "\n{found}");
    }

    #[test]
    fn the_verdicts_alone() {
        let found = solve(&Fixture::winch().view(), Detail::Verdicts, Colour::Off);
        let expected = "1 limit met, 1 not met: pull <= 4 kN\n  under empty: all 2 limits met\n1 assumption is open\n";
        assert_eq!(found, expected);
    }

    #[test]
    fn colour_changes_nothing_but_colour() {
        let fixture = Fixture::winch();
        let plain = solve(&fixture.view(), Detail::Full, Colour::Off);
        let coloured = solve(&fixture.view(), Detail::Full, Colour::On);
        assert!(coloured.contains("\u{1b}[1;31m"), "a limit that is not met is red");
        let mut stripped = String::new();
        for (at, part) in coloured.split('\u{1b}').enumerate() {
            stripped.push_str(if at == 0 { part } else { part.split_once('m').map_or("", |(_, rest)| rest) });
        }
        assert_eq!(stripped, plain);
    }

    #[test]
    fn an_empty_result_prints() {
        let mut fixture = Fixture::winch();
        fixture.results = crate::results::Results::default();
        fixture.models.clear();
        assert_eq!(solve(&fixture.view(), Detail::Full, Colour::Off), "no limits\n");
    }

    #[test]
    fn nothing_runs_over_the_edge() {
        let mut fixture = Fixture::winch();
        fixture.results.sheet.title = "A title that is much too long for any title block ".repeat(4);
        fixture.results.cautions.push("Stored energy remains after the drive is switched off; wait. ".repeat(3));
        for case in std::iter::once(&mut fixture.results.base).chain(&mut fixture.results.cases) {
            for (at, it) in case.quantities.iter_mut().enumerate() {
                it.name = format!("{}{}", it.name, "_x".repeat(at * 2)).into();
                it.source = "a source that goes on and on ".repeat(at).into();
                it.si = it.si.map(|si| si * 1.000_123_456);
            }
            for limit in &mut case.limits {
                limit.text = format!("{} + {}", limit.text, "another_term * with_factor + ".repeat(6));
                limit.because = "reasons ".repeat(30);
            }
            for line in case.ledgers.iter_mut().flat_map(|it| &mut it.lines) {
                line.name = line.name.repeat(12);
            }
            for confirm in &mut case.confirms {
                confirm.text = confirm.text.repeat(8);
            }
        }
        for line in solve(&fixture.view(), Detail::Full, Colour::Off).lines() {
            assert!(width(line) <= WIDTH, "{} columns: {line}", width(line));
        }
    }
}
