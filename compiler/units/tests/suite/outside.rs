//! The outside check values for units: every conversion, and the trade's rules of thumb.

use pintle_units::{Unit, parse};
use serde_json::Value;

fn cases() -> Vec<Value> {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/../../tests/checks/units.jsonl");
    let text = std::fs::read_to_string(path).expect("the outside cases are there");
    text.lines().map(|line| serde_json::from_str(line).expect("a case a line")).collect()
}

fn case(id: &str) -> Value {
    let found = cases().into_iter().find(|case| case["id"].as_str().is_some_and(|name| name.starts_with(id)));
    found.unwrap_or_else(|| panic!("no case {id}"))
}

/// The outside cases write `delta degF` with a space; sheets have units without spaces.
fn unit(value: &Value) -> Unit {
    let text = value["unit"].as_str().expect("a unit").replace("delta deg", "delta_deg");
    parse(&text, &|_| None).unwrap_or_else(|e| panic!("`{text}`: {e}"))
}

fn number(value: &Value) -> f64 {
    value["value"].as_f64().expect("a number")
}

fn si(value: &Value) -> f64 {
    unit(value).to_si(number(value))
}

#[track_caller]
fn check_close(found: f64, expected: &Value) {
    let value = number(expected);
    let allowed = expected["rtol"].as_f64().expect("a tolerance") * value.abs();
    assert!((found - value).abs() <= allowed, "found {found}, expected {value}");
}

#[test]
fn every_conversion_agrees() {
    let mut count = 0;
    for case in cases().iter().filter(|case| case["given"]["to"].is_string()) {
        let given = &case["given"]["quantity"];
        let to = parse(case["given"]["to"].as_str().expect("a unit"), &|_| None).expect("a known unit");
        assert_eq!(unit(given).dim, to.dim, "{}", case["id"]);
        check_close(to.from_si(si(given)), &case["expect"]["value"]);
        // The other way round.
        let back = unit(given).from_si(to.to_si(number(&case["expect"]["value"])));
        let value = number(given);
        assert!((back - value).abs() <= 1e-12 * value.abs(), "{}: back to {back}", case["id"]);
        count += 1;
    }
    assert_eq!(count, 38, "conversions with `to`; five more cases have their own tests");
}

#[test]
fn flywheel_effect_over_four_gravities_is_inertia() {
    for id in ["UN-17", "UN-18"] {
        let case = case(id);
        check_close(si(&case["given"]["GD2"]) / (4.0 * 9.80665), &case["expect"]["J"]);
    }
}

#[test]
fn temperatures_and_differences_convert_apart() {
    let case = case("UN-41");
    check_close(si(&case["given"]["absolute"]), &case["expect"]["absolute"]);
    check_close(si(&case["given"]["difference"]), &case["expect"]["difference"]);
}

#[test]
fn power_from_torque_and_speed_needs_no_rounded_constant() {
    let case = case("UN-42");
    let kilowatt = parse("kW", &|_| None).expect("kW");
    check_close(kilowatt.from_si(si(&case["given"]["T"]) * si(&case["given"]["n"])), &case["expect"]["P"]);
    let rpm = parse("rpm", &|_| None).expect("rpm");
    check_close(rpm.from_si(1.0) * 1000.0, &case["expect"]["constant"]);
}

#[test]
fn run_up_time_by_wr2_needs_no_rounded_constant() {
    let case = case("UN-43");
    let given = &case["given"];
    check_close(si(&given["WR2"]) * si(&given["dn"]) / si(&given["T"]), &case["expect"]["t"]);
}

#[test]
fn run_up_time_by_gd2_needs_no_rounded_constant() {
    let case = case("UN-44");
    let given = &case["given"];
    let inertia = si(&given["GD2"]) / (4.0 * 9.80665);
    check_close(inertia * si(&given["n"]) / si(&given["T"]), &case["expect"]["t"]);
}
