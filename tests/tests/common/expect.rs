//! Expectations: `drum.J = 8.2251 kg*m^2 ~ 1e-4`, verdicts, diagnostics.

use super::sheet::Solved;
use super::{agrees, units};

/// Relative tolerance where a line states none.
const TOLERANCE: f64 = 1e-9;

/// Compares a solved sheet with lines of expectations; gives faults and the number of checks made.
/// A diagnostic of error severity that no line announces is a fault.
pub fn compare(solved: &Solved, expectations: &str) -> (Vec<String>, usize) {
    let mut faults = Vec::new();
    let mut checked = 0;
    let mut case: Option<String> = None;
    let mut announced = Vec::new();
    for line in expectations.lines().map(str::trim) {
        if line.is_empty() || line.starts_with('#') {
            continue;
        }
        checked += 1;
        let (word, rest) = line.split_once(' ').unwrap_or((line, ""));
        let fault = match word {
            "case" => {
                case = Some(rest.to_string());
                solved.case(Some(rest)).is_none().then(|| format!("no case `{rest}`"))
            }
            "limit" => check_limit(solved, case.as_deref(), rest),
            "low" | "high" if !rest.starts_with('=') => {
                let end = if word == "low" { Solved::low } else { Solved::high };
                check_number(rest, |name| end(solved, case.as_deref(), name), |_| String::new())
            }
            "status" => check_status(solved, case.as_deref(), rest),
            "caution" => {
                let wanted = rest.trim_matches('"');
                (!solved.cautions().iter().any(|it| it.contains(wanted))).then(|| format!("no caution says {rest}"))
            }
            "exit" => (solved.exit_code().to_string() != rest)
                .then(|| format!("exit code {} instead of {rest}", solved.exit_code())),
            "error" | "warning" | "hint" => {
                let (at, fault) = check_diagnostic(solved, word, rest);
                announced.extend(at);
                fault
            }
            _ => check_value(solved, case.as_deref(), line),
        };
        faults.extend(fault.map(|fault| format!("{line}\n    {fault}")));
    }
    for (at, found) in solved.diagnostics().iter().enumerate() {
        if found.severity == "error" && !announced.contains(&at) {
            faults.push(format!("unexpected error {} at line {}: {}", found.code, found.line, found.message));
        }
    }
    (faults, checked)
}

fn check_value(solved: &Solved, case: Option<&str>, line: &str) -> Option<String> {
    check_number(line, |name| solved.si(case, name), |name| solved.near(name))
}

/// `NAME = NUMBER UNIT ~ TOLERANCE` against what `find` has for the name.
fn check_number(line: &str, find: impl Fn(&str) -> Option<f64>, near: impl Fn(&str) -> String) -> Option<String> {
    let Some((name, value)) = line.split_once(" = ") else { return Some("this line is not understood".into()) };
    let (value, tolerance) = value.split_once(" ~ ").unwrap_or((value, ""));
    let tolerance: f64 = if tolerance.is_empty() { TOLERANCE } else { parse(tolerance)? };
    let (number, unit) = value.trim().split_once(' ').unwrap_or((value.trim(), "1"));
    let expected = units::si(parse(number)?, unit);
    match find(name) {
        None => Some(format!("`{name}` has no value{}", near(name))),
        // Nothing is near zero relatively; a zero is met to rounding of ordinary sizes.
        Some(found) => (!agrees(found, expected, tolerance, if expected == 0.0 { 1e-12 } else { 0.0 }))
            .then(|| format!("found {found} SI, expected {expected} SI, off by {:e}", (found - expected) / expected)),
    }
}

#[track_caller]
fn parse(text: &str) -> Option<f64> {
    Some(text.trim().parse().unwrap_or_else(|_| panic!("`{text}` is no number")))
}

/// `"a <= b" met`
fn check_limit(solved: &Solved, case: Option<&str>, rest: &str) -> Option<String> {
    let (text, verdict) = rest.trim_start_matches('"').rsplit_once("\" ")?;
    let text = text.trim_start_matches("every ");
    match solved.verdict(case, text) {
        None => Some(format!("no limit reads so; there are {:?}", solved.limit_texts(case))),
        Some(found) => (found != verdict).then(|| format!("the verdict is {found}")),
    }
}

/// `x = found`
fn check_status(solved: &Solved, case: Option<&str>, rest: &str) -> Option<String> {
    let (name, status) = rest.split_once(" = ")?;
    match solved.status(case, name) {
        None => Some(format!("`{name}` does not exist")),
        Some(found) => (found != status).then(|| format!("the status is {found}")),
    }
}

/// `unit-mismatch at line 3 "torque"`: the diagnostic's index, or what is wrong.
fn check_diagnostic(solved: &Solved, severity: &str, rest: &str) -> (Option<usize>, Option<String>) {
    let (head, words) = rest.split_once(" \"").unwrap_or((rest, ""));
    let words = words.trim_end_matches('"');
    let (code, line) = head.split_once(" at line ").unwrap_or((head, "0"));
    let line: usize = line.trim().parse().unwrap_or_else(|_| panic!("line in `{rest}`"));
    let all = solved.diagnostics();
    let at = all.iter().position(|it| {
        it.severity == severity && it.code == code && (line == 0 || it.line == line) && it.message.contains(words)
    });
    let fault = at.is_none().then(|| {
        let there: Vec<String> =
            all.iter().map(|it| format!("{} {} at line {}: {}", it.severity, it.code, it.line, it.message)).collect();
        format!("not reported; reported are:\n      {}", there.join("\n      "))
    });
    (at, fault)
}
