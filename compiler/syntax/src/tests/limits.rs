//! Texts made to exhaust the stack or the clock. Tests run on threads with a
//! stack of 2 MB, as the server's workers do.

use crate::{codes, format, parse};

#[track_caller]
fn check_refused(text: &str, code: &str) {
    let start = std::time::Instant::now();
    let file = parse(text);
    let again = parse(text);
    assert!(file.items == again.items, "equal texts, equal items");
    let found: Vec<&str> = file.items.iter().flat_map(|item| &item.errors).map(|fault| fault.code.name).collect();
    assert!(found.contains(&code), "{found:?}");
    assert!(found.len() <= 201);
    drop(file);
    assert!(!format(text).is_empty());
    assert!(start.elapsed().as_secs_f64() < 20.0, "{:?}", start.elapsed());
}

/// At the limit itself the text is read, compared and dropped without trouble.
#[track_caller]
fn check_read(text: &str) {
    let file = parse(text);
    let again = parse(text);
    assert!(file.items == again.items);
    let faults: Vec<_> = file.items.iter().flat_map(|item| &item.errors).collect();
    assert!(faults.is_empty(), "{faults:?}");
    assert!(!format!("{file:?}").is_empty());
}

const MANY: usize = 100_000;

#[test]
fn brackets_nested_too_deep_are_one_error() {
    check_refused(&format!("x = {}1{}", "(".repeat(MANY), ")".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("x = {}1{}", "[".repeat(MANY), "]".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("x = {}1{}", "f(".repeat(MANY), ")".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("x = {}1{}", "a[".repeat(MANY), "]".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("x = {}", "(".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
}

#[test]
fn chains_of_signs_and_powers_are_one_error() {
    check_refused(&format!("x = {}1", "- ".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("x = {}a", "not ".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("x = 2{}", "^2".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("x = a{}", "² ".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("x = {}1", "1 within ".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("x = {}1", "(-".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
}

#[test]
fn chains_of_operands_are_one_error() {
    check_refused(&format!("x = 1{}", "+1".repeat(MANY)), codes::CHAIN_TOO_LONG.name);
    check_refused(&format!("x = 1{}", " * a".repeat(MANY)), codes::CHAIN_TOO_LONG.name);
    check_refused(&format!("x = 1{}", " and a".repeat(MANY)), codes::CHAIN_TOO_LONG.name);
    check_refused(&format!("x = 1{}", " < a".repeat(MANY)), codes::CHAIN_TOO_LONG.name);
}

#[test]
fn blocks_nested_too_deep_are_refused() {
    check_refused(&format!("cycle a {{ {}{} }}", "b {".repeat(MANY), "}".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&format!("cycle a {{ {}", "b {".repeat(MANY)), codes::NESTING_TOO_DEEP.name);
    check_refused(&"a {\n".repeat(MANY / 10), codes::UNCLOSED_BRACKET.name);
    check_refused(&"}".repeat(MANY), codes::UNOPENED_BRACKET.name);
    check_refused(&")".repeat(MANY), codes::UNOPENED_BRACKET.name);
    check_refused(&"body a = b { c = 1\n".repeat(MANY / 10), codes::UNCLOSED_BRACKET.name);
}

#[test]
fn expressions_at_the_limits_are_read() {
    check_read(&format!("x = {}1{}", "(".repeat(255), ")".repeat(255)));
    check_read(&format!("x = {}1{}", "f(".repeat(255), ")".repeat(255)));
    check_read(&format!("x = {}1", "-".repeat(250)));
    check_read(&format!("x = 1{}", "+1".repeat(990)));
    check_read(&format!("x = 2{}", "^2".repeat(250)));
    check_read(&format!("x = {}a", "not ".repeat(250)));
    check_read(&format!("x = {}1{}", "(1 + -".repeat(250), ")".repeat(250)));
    check_read(&format!("x = {}1{}", "(1 + ".repeat(250), " + 1 + 1)".repeat(250)));
    check_read(&format!("x = a{}", ".a".repeat(50_000)));
}

#[test]
fn long_lists_are_not_deep() {
    check_read(&format!("x = [{}]", "(1 mm, 2 mm + 3 mm),\n".repeat(10_000)));
}

#[test]
fn a_refused_statement_costs_no_other() {
    let text = format!("a = 1\nx = {}1{}\nb = 2\n", "(".repeat(1_000), ")".repeat(1_000));
    let file = parse(&text);
    let names: Vec<&str> = file.items.iter().filter_map(|item| item.name()).map(|name| name.text.as_str()).collect();
    assert_eq!(names, ["a", "x", "b"]);
}

#[test]
fn at_most_two_hundred_errors_are_kept() {
    let file = parse(&"3\n".repeat(1_000));
    let faults: Vec<&str> = file.items.iter().flat_map(|item| &item.errors).map(|fault| fault.code.name).collect();
    assert_eq!(faults.len(), 201);
    assert_eq!(faults.last(), Some(&codes::MORE_ERRORS.name));
}
