//! Jobs with known answers: every sheet of `scenarios/` against the `.expect` file beside it.

mod common;

use common::sheet::Solved;
use std::path::Path;

#[track_caller]
fn check_scenario(path: &Path) -> (Vec<String>, usize) {
    let solved = Solved::file(path);
    let (faults, checked) = common::expect::compare(&solved, &common::read(&path.with_extension("expect")));
    let name = path.file_stem().map(|name| name.to_string_lossy().into_owned()).unwrap_or_default();
    (faults.into_iter().map(|fault| format!("{name}: {fault}")).collect(), checked)
}

#[test]
fn answers_of_the_jobs_come_out() {
    let mut faults = Vec::new();
    let mut checked = 0;
    for path in common::files(&common::folder().join("scenarios"), "pintle") {
        let (more, n) = check_scenario(&path);
        faults.extend(more);
        checked += n;
    }
    common::report(&faults, checked);
}

/// The examples that a new user sees first: no errors, every limit of the base case met or named here.
#[test]
fn examples_solve_without_errors() {
    let mut faults = Vec::new();
    let mut checked = 0;
    for path in common::files(&common::folder().join("../stdlib/examples"), "pintle") {
        let solved = Solved::file(&path);
        for found in solved.diagnostics().iter().filter(|it| it.severity == "error") {
            faults.push(format!("{}: {} at line {}: {}", path.display(), found.code, found.line, found.message));
        }
        for text in solved.limit_texts(None) {
            checked += 1;
            let verdict = solved.verdict(None, &text).unwrap_or_default();
            // The review question of two examples is what fails; a fault of those is a verdict that changes.
            let expected = match text.as_str() {
                "before <= allowed" | "runaway.motor.speed <= 5000 rpm" => "not met",
                _ => "met",
            };
            if verdict != expected {
                faults.push(format!("{}: `{text}` is {verdict}", path.display()));
            }
        }
    }
    common::report(&faults, checked);
}
