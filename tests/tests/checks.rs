//! Outside check values: each case of `checks/*.jsonl` against its sheet in `checks/sheets/`.

mod common;

use common::sheet::Solved;
use common::{agrees, units};
use serde_json::Value;

/// Results that a sheet cannot state yet, with the reason. Everything else that a case expects must be there.
fn left_out(id: &str, name: &str) -> Option<&'static str> {
    match name {
        "triangles" | "watertight" | "shells" | "area" | "outward" | "winding_consistent" => {
            Some("a property of the file's surface, not of the body; checked in the geometry crate")
        }
        "time" if id == "EB-23-trip-hammer" => Some("needs an integration in time"),
        _ => None,
    }
}

fn cases(file: &str) -> Vec<Value> {
    common::read(&common::folder().join("checks").join(file))
        .lines()
        .filter(|line| !line.trim().is_empty())
        .map(|line| serde_json::from_str(line).unwrap_or_else(|error| panic!("{file}: {error}")))
        .collect()
}

fn check_case(case: &Value) -> (Vec<String>, usize) {
    let id = case["id"].as_str().expect("an id");
    let solved = Solved::file(&common::folder().join("checks/sheets").join(format!("{}.pintle", id.to_lowercase())));
    let expect = case["expect"].as_object().expect("expected results");
    let mut faults = Vec::new();
    let mut checked = 0;
    if expect.contains_key("reject") {
        checked += 2;
        if solved.exit_code() != 2 {
            faults.push(format!("{id}: accepted, exit code {}", solved.exit_code()));
        }
        // Refused for the engineer's reason and for nothing else, such as a slip of the sheet.
        let reasons = ["unit-mismatch", "kind-mismatch", "bad-mesh"];
        let errors: Vec<_> = solved.diagnostics().into_iter().filter(|it| it.severity == "error").collect();
        if errors.len() != 1 || errors.iter().any(|it| !reasons.contains(&it.code)) {
            faults.push(format!("{id}: refused for {errors:?}"));
        }
        return (faults, checked);
    }
    for found in solved.diagnostics().iter().filter(|it| it.severity == "error") {
        faults.push(format!("{id}: {} at line {}: {}", found.code, found.line, found.message));
    }
    for (name, expected) in expect {
        if left_out(id, name).is_some() {
            continue;
        }
        checked += 1;
        if name == "slips" {
            let verdict = solved.verdict(None, "ratio_needed <= ratio_limit").unwrap_or_default();
            if (verdict == "not met") != (expected["value"] == Value::Bool(true)) {
                faults.push(format!("{id}: the ropes' verdict is {verdict}"));
            }
            continue;
        }
        let value = expected["value"].as_f64().expect("a value");
        let unit = expected["unit"].as_str().expect("a unit");
        let relative = expected["rtol"].as_f64().expect("a tolerance");
        let absolute = expected["atol"].as_f64().unwrap_or(0.0);
        if id.starts_with("UN-") && unit != "1" {
            // A conversion is checked as shown, so that no unit table stands between.
            match solved.shown(name) {
                Some((found, found_unit)) if agrees(found, value, relative, absolute) && unit == found_unit => {}
                found => faults.push(format!("{id}: `{name}` is shown as {found:?}, expected {value} {unit}")),
            }
            continue;
        }
        // The volume of a body has no sign; the file's may have.
        let (name, value) = if name == "signed_volume" { ("volume", value.abs()) } else { (name.as_str(), value) };
        // `NAME_found` where a library formula that the sheet uses has the name.
        let found = solved.si(None, name).or_else(|| solved.si(None, &format!("{name}_found")));
        let expected = units::si(value, unit);
        let absolute = units::si(absolute, unit);
        match found {
            None => faults.push(format!("{id}: `{name}` has no value")),
            Some(found) if agrees(found, expected, relative, absolute) => {}
            Some(found) => faults.push(format!(
                "{id}: `{name}` is {found} SI, expected {expected} SI, off by {:e} (allowed {relative:e})",
                (found - expected) / expected
            )),
        }
    }
    (faults, checked)
}

#[track_caller]
fn check_file(file: &str) {
    let mut faults = Vec::new();
    let mut checked = 0;
    for case in cases(file) {
        let (more, n) = check_case(&case);
        faults.extend(more);
        checked += n;
    }
    common::report(&faults, checked);
}

#[test]
fn mass_properties_agree() {
    check_file("mass.jsonl");
}

#[test]
fn meshes_agree() {
    check_file("meshes.jsonl");
}

#[test]
fn conversions_agree_and_confusions_are_refused() {
    check_file("units.jsonl");
}

#[test]
fn energy_problems_agree() {
    check_file("energy.jsonl");
}

#[test]
fn rope_problems_agree() {
    check_file("rope.jsonl");
}
