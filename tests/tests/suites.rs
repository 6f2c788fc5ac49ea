//! The literate suites: every `pintle` block of `suites/` against the `expect` block that follows it.

mod common;

use common::sheet::Solved;

/// A fenced block: its language and its text, and the heading above it.
struct Block {
    language: String,
    text: String,
    heading: String,
}

fn blocks(markdown: &str) -> Vec<Block> {
    let mut found = Vec::new();
    let mut open: Option<Block> = None;
    let mut heading = String::new();
    for line in markdown.lines() {
        match (&mut open, line.strip_prefix("```")) {
            (None, Some(language)) => {
                open = Some(Block { language: language.trim().into(), text: String::new(), heading: heading.clone() });
            }
            (Some(_), Some(_)) => found.extend(open.take()),
            (Some(block), None) => {
                block.text.push_str(line);
                block.text.push('\n');
            }
            (None, None) => {
                if let Some(title) = line.strip_prefix("## ") {
                    heading = title.into();
                }
            }
        }
    }
    assert!(open.is_none(), "a block is not closed");
    found
}

/// Faults and number of checks of one suite.
#[track_caller]
fn check_suite(markdown: &str) -> (Vec<String>, usize) {
    let mut faults = Vec::new();
    let mut checked = 0;
    let mut beside: Vec<(String, String)> = Vec::new();
    let mut waiting: Option<(Solved, String)> = None;
    for block in blocks(markdown) {
        match block.language.as_str() {
            "pintle" => {
                assert!(waiting.is_none(), "`{}`: a sheet without an `expect` block", block.heading);
                let first = block.text.lines().next().unwrap_or("");
                if let Some(path) = first.strip_prefix("# file: ") {
                    beside.push((path.trim().into(), block.text));
                } else {
                    waiting = Some((Solved::text(&block.text, &beside), block.heading));
                    beside.clear();
                }
            }
            "expect" => {
                let (solved, heading) = waiting.take().expect("an `expect` block behind a sheet");
                let (more, n) = common::expect::compare(&solved, &block.text);
                faults.extend(more.into_iter().map(|fault| format!("{heading}: {fault}")));
                checked += n;
            }
            _ => {}
        }
    }
    assert!(waiting.is_none(), "a sheet without an `expect` block");
    (faults, checked)
}

#[track_caller]
fn check(name: &str) {
    let (faults, checked) = check_suite(&common::read(&common::folder().join("suites").join(name)));
    common::report(&faults, checked);
}

#[test]
fn bodies() {
    check("01_bodies.md");
}

#[test]
fn rotors() {
    check("02_rotors.md");
}

#[test]
fn trains() {
    check("03_trains.md");
}

#[test]
fn ledgers() {
    check("04_ledgers.md");
}

#[test]
fn limits_and_cases() {
    check("05_limits_and_cases.md");
}

#[test]
fn unknowns() {
    check("06_unknowns.md");
}

#[test]
fn units_and_kinds() {
    check("07_units_and_kinds.md");
}

#[test]
fn formulas() {
    check("08_formulas.md");
}

#[test]
fn faults() {
    check("09_faults.md");
}

#[test]
fn half_typed_text() {
    check("10_half_typed.md");
}

#[test]
fn library() {
    check("11_library.md");
}

#[test]
fn tolerances() {
    check("12_tolerances.md");
}

#[test]
fn outlines() {
    check("13_outlines.md");
}

#[test]
fn ledger_features() {
    check("14_ledger_features.md");
}

#[test]
fn limits_of_size() {
    check("15_limits_of_size.md");
}

#[test]
fn every_suite_is_run() {
    let run = include_str!("suites.rs");
    for path in common::files(&common::folder().join("suites"), "md") {
        let name = path.file_name().map(|name| name.to_string_lossy().into_owned()).unwrap_or_default();
        assert!(name == "README.md" || run.contains(&format!("check(\"{name}\")")), "{name} is not run");
    }
}

/// The harness must be able to fail: a wrong value, a wrong verdict and an unannounced error are faults.
#[test]
fn wrong_expectations_are_faults() {
    let suite =
        |sheet: &str, expect: &str| check_suite(&format!("```pintle\n{sheet}\n```\n```expect\n{expect}\n```\n")).0;
    assert_eq!(suite("a = 2 kg", "a = 2 kg").len(), 0);
    assert_eq!(suite("a = 2 kg", "a = 2.0001 kg").len(), 1);
    assert_eq!(suite("a = 2 kg", "b = 2 kg").len(), 1);
    assert_eq!(suite("given a = 2 kg ± 1 kg", "low a = 1 kg\nhigh a = 3 kg").len(), 0);
    assert_eq!(suite("given a = 2 kg ± 1 kg", "low a = 1.1 kg\nhigh a = 2.9 kg").len(), 2);
    assert_eq!(suite("given a = 2 kg", "low a = 2 kg").len(), 1);
    assert_eq!(suite("a = 2 kg\nlimit a <= 1 kg", "limit \"a <= 1 kg\" met").len(), 1);
    assert_eq!(suite("a = 2 kg + 1 m\nb = 1", "b = 1 1").len(), 1);
    assert_eq!(suite("a = 2 kg", "a = 2 kg\nerror unit-mismatch at line 1").len(), 1);
}
