//! A shape is read once and its nodes repeated for further bodies: whether each
//! body of a crowd has the values, bit by bit, that it has alone.

mod common;

use pintle::source::Disk;
use std::collections::BTreeMap;

const HEAD: &str = "use std.materials\nuse std.shapes\n";

type Values = BTreeMap<String, Option<u64>>;

/// All values of a sheet without errors, by name.
fn values(text: &str) -> Option<Values> {
    let compilation = pintle::compile_text("sheet.pintle", text, &Disk, &pintle::Options::default());
    let quantities = compilation.results.base.quantities.iter();
    let values: Values = quantities.map(|it| (it.name.to_string(), it.si.map(f64::to_bits))).collect();
    (!compilation.has_errors() && !values.is_empty()).then_some(values)
}

/// Values named `body.*`, without that name.
fn members(values: &Values, body: &str) -> Values {
    let prefix = format!("{body}.");
    values.iter().filter_map(|(name, si)| Some((name.strip_prefix(&prefix)?.to_string(), *si))).collect()
}

/// The same body with its lengths a quarter greater, so that every shape comes twice.
fn larger(shape: &str) -> String {
    let words: Vec<&str> = shape.split(' ').collect();
    let mut result = Vec::new();
    for (at, word) in words.iter().enumerate() {
        let number = word.trim_start_matches(['(', '[']);
        let is_length = words.get(at + 1).is_some_and(|unit| unit.starts_with("mm"));
        match number.parse::<f64>() {
            Ok(value) if is_length => result.push(word.replace(number, &format!("{}", 1.25 * value))),
            _ => result.push(word.to_string()),
        }
    }
    result.join(" ")
}

/// Bodies of the checks, scenarios and suites that need nothing beside them, each as what stands behind its name.
fn bodies() -> Vec<String> {
    let mut found = Vec::new();
    for (folder, ending) in [("checks/sheets", "pintle"), ("scenarios", "pintle"), ("suites", "md")] {
        for path in common::files(&common::folder().join(folder), ending) {
            for line in common::read(&path).lines() {
                let Some((_, shape)) = line.strip_prefix("body ").and_then(|rest| rest.split_once('=')) else {
                    continue;
                };
                if line.ends_with('}') && !found.iter().any(|known| known == shape) {
                    found.push(shape.to_string());
                }
            }
        }
    }
    found
}

#[test]
fn a_body_in_a_crowd_has_the_values_that_it_has_alone() {
    let alone: Vec<(Values, String)> = bodies()
        .into_iter()
        .flat_map(|shape| [larger(&shape), shape])
        .filter_map(|shape| Some((members(&values(&format!("{HEAD}body b = {shape}\n"))?, "b"), shape)))
        .collect();
    assert!(alone.len() > 60, "only {} bodies stand alone", alone.len());
    let crowd: String = alone.iter().enumerate().map(|(at, (_, shape))| format!("body b{at} = {shape}\n")).collect();
    let crowd = values(&format!("{HEAD}{crowd}")).expect("a sheet without errors");
    let faults: Vec<String> = alone
        .iter()
        .enumerate()
        .filter(|(at, (own, _))| members(&crowd, &format!("b{at}")) != *own)
        .map(|(_, (_, shape))| shape.clone())
        .collect();
    common::report(&faults, alone.len());
}
