//! Results as one JSON object: the keys and their order are a promise to
//! scripts and never change within one schema number.
//!
//! | key | holds |
//! | --- | --- |
//! | `schema` | 1 |
//! | `pintle` | version of the program |
//! | `sheet` | `title`, `number`, `revision`; empty where not stated |
//! | `givens` | every `given` and every number with a tolerance inside an item: `name`, `kind`, `value` in `unit`, `si`, `low`, `high`, `source` |
//! | `results` | every other quantity of the sheet as it stands: `name`, `kind`, `value` in `unit`, `si`, `low`, `high`, `std`, `status`, `line` |
//! | `ledgers` | `name`, `lines` of `name`, `side`, `si` (stored energies: end less start), `residual` |
//! | `limits` | of the sheet and then of each case: `text`, `verdict`, `value` and `bound` in `unit`, `margin`, `low`, `high`, `worst`, `case`, `line` |
//! | `diagnostics` | `code`, `severity`, `file`, `line`, `column`, `message`, `help` |
//! | `confirms` | `text`, `agrees`, `value`, `second`, `half_width` in `unit`, `source`, `line` |
//! | `assumptions` | `text`, `status` (`open` or `confirmed`), `by`, `line` |
//! | `cautions` | texts |
//! | `cases` | only where there are any: `name`, `results`, `ledgers`, `confirms`, `givens` |
//!
//! `si` and `low`, `high`, `std` are in coherent SI units, angles in radians; a
//! number that is not known or not finite is null. Further keys stand behind
//! those above, only where they have something to say: `solutions` (SI) with the
//! status `one of N`, `reason` with `undecided`, `coverage` ("k=3") where
//! standard uncertainties enter a worst case.

use super::{View, number};
use crate::model::{InputTolerance, InputValue, Model};
use crate::results::{
    Assumption, CaseResults, ConfirmResult, Group, LedgerResult, LimitResult, QuantityResult, Status,
};
use crate::source::Sources;
use pintle_graph::Op;
use pintle_text::Diagnostic;
use serde_json::{Map, Value, json};

/// Number of the promise; raised when a key changes its meaning.
pub const SCHEMA: u32 = 1;

/// The object of `solve --json`.
pub fn solve(view: &View<'_>) -> Value {
    let results = view.results;
    let base = &results.base;
    let uncertain = uncertain(view.models.first());
    let mut object = Map::new();
    object.insert("schema".into(), SCHEMA.into());
    object.insert("pintle".into(), env!("CARGO_PKG_VERSION").into());
    object.insert(
        "sheet".into(),
        json!({"title": results.sheet.title, "number": results.sheet.number, "revision": results.sheet.revision}),
    );
    object.insert("givens".into(), givens(base, &uncertain));
    object.insert("results".into(), quantities(base, &uncertain));
    object.insert("ledgers".into(), ledgers(base));
    object.insert("limits".into(), limits(view));
    object.insert("diagnostics".into(), diagnostics(view.diagnostics, view.sources));
    object.insert("confirms".into(), base.confirms.iter().map(confirm).collect());
    object.insert("assumptions".into(), results.assumptions.iter().map(assumption).collect());
    object.insert("cautions".into(), results.cautions.iter().map(|it| Value::from(it.as_str())).collect());
    if !results.cases.is_empty() {
        object.insert("cases".into(), view.cases().skip(1).map(|(case, model)| self::case(case, model)).collect());
    }
    Value::Object(object)
}

/// The limits of the sheet as it stands and of every case.
pub fn limits(view: &View<'_>) -> Value {
    let of =
        |case: &CaseResults| -> Vec<Value> { case.limits.iter().map(|it| limit(it, case.case.as_deref())).collect() };
    view.results.all_cases().flat_map(of).collect()
}

/// What was reported.
pub fn diagnostics(diagnostics: &[Diagnostic], sources: &Sources) -> Value {
    diagnostics
        .iter()
        .map(|it| {
            let at = sources.location(it.place);
            json!({
                "code": it.code.name,
                "severity": it.severity().word(),
                "file": at.source,
                "line": at.line,
                "column": at.column,
                "message": it.message,
                "help": it.help.as_deref().unwrap_or(""),
            })
        })
        .collect()
}

fn case(case: &CaseResults, model: Option<&Model>) -> Value {
    let uncertain = uncertain(model);
    json!({
        "name": case.case,
        "results": quantities(case, &uncertain),
        "ledgers": ledgers(case),
        "confirms": case.confirms.iter().map(confirm).collect::<Value>(),
        "givens": givens(case, &uncertain),
    })
}

fn is_given(it: &QuantityResult) -> bool {
    matches!(it.group, Group::Given | Group::Field)
}

fn optional(value: Option<f64>) -> Value {
    value.map_or(Value::Null, number::json)
}

/// The keys that givens and results share, in order.
fn head(it: &QuantityResult) -> Map<String, Value> {
    let si = match it.status {
        Status::OneOf(_) => None,
        _ => it.si,
    };
    let mut object = Map::new();
    object.insert("name".into(), it.name.as_str().into());
    object.insert("kind".into(), it.kind_words().as_ref().into());
    object.insert("value".into(), optional(si.map(|si| it.unit.from_si(si))));
    object.insert("unit".into(), it.unit.text.as_str().into());
    object.insert("si".into(), optional(si));
    object.insert("low".into(), optional(it.low));
    object.insert("high".into(), optional(it.high));
    object
}

fn coverage(object: &mut Map<String, Value>, it: &QuantityResult, uncertain: &[bool]) {
    let enters = uncertain.get(it.id.0 as usize).copied().unwrap_or(false);
    if enters && it.low.is_some() {
        object.insert("coverage".into(), "k=3".into());
    }
}

fn givens(case: &CaseResults, uncertain: &[bool]) -> Value {
    let given = |it: &QuantityResult| {
        let mut object = head(it);
        object.insert("source".into(), it.source.as_str().into());
        coverage(&mut object, it, uncertain);
        Value::Object(object)
    };
    case.quantities.iter().filter(|it| is_given(it)).map(given).collect()
}

fn quantities(case: &CaseResults, uncertain: &[bool]) -> Value {
    let result = |it: &QuantityResult| {
        let mut object = head(it);
        object.insert("std".into(), optional(it.std));
        object.insert("status".into(), it.status.word().into());
        object.insert("line".into(), it.line.into());
        match &it.status {
            Status::OneOf(solutions) => {
                object.insert("solutions".into(), solutions.iter().map(|&si| number::json(si)).collect());
            }
            Status::Undecided(why) => {
                object.insert("reason".into(), why.as_str().into());
            }
            Status::Evaluated | Status::Found | Status::Unique | Status::Failed => {}
        }
        coverage(&mut object, it, uncertain);
        Value::Object(object)
    };
    case.quantities.iter().filter(|it| !is_given(it)).map(result).collect()
}

fn ledgers(case: &CaseResults) -> Value {
    let ledger = |it: &LedgerResult| {
        let lines: Value = it
            .lines
            .iter()
            .map(|line| json!({"name": line.name, "side": line.side.word(), "si": optional(line.si)}))
            .collect();
        json!({"name": it.name, "lines": lines, "residual": optional(it.residual)})
    };
    case.ledgers.iter().map(ledger).collect()
}

fn limit(it: &LimitResult, case: Option<&str>) -> Value {
    let shown = |si: Option<f64>| optional(si.map(|si| it.unit.from_si(si)));
    json!({
        "text": it.text,
        "verdict": it.verdict.words(),
        "value": shown(it.value),
        "bound": shown(it.bound),
        "unit": it.unit.text.as_str(),
        "margin": optional(it.margin),
        "low": optional(it.low),
        "high": optional(it.high),
        "worst": it.worst.map(|worst| worst.word()),
        "case": case,
        "line": it.line,
    })
}

fn confirm(it: &ConfirmResult) -> Value {
    let shown = |si: Option<f64>| optional(si.map(|si| it.unit.from_si(si)));
    json!({
        "text": it.text,
        "agrees": it.agrees,
        "value": shown(it.value),
        "second": shown(it.second),
        "half_width": optional(it.half_width.map(|half| it.unit.difference_from_si(half))),
        "unit": it.unit.text.as_str(),
        "source": it.source,
        "line": it.line,
    })
}

fn assumption(it: &Assumption) -> Value {
    let status = if it.confirmed.is_some() { "confirmed" } else { "open" };
    json!({"text": it.text, "status": status, "by": it.confirmed.as_deref().unwrap_or(""), "line": it.line})
}

/// For each quantity of a model, whether a standard uncertainty enters it.
fn uncertain(model: Option<&Model>) -> Vec<bool> {
    let Some(model) = model else { return Vec::new() };
    let standard =
        |value: &InputValue| matches!(value, InputValue::Given { tolerance: Some(InputTolerance::Standard(_)), .. });
    if !model.inputs.iter().any(|input| standard(&input.value)) {
        return Vec::new();
    }
    let mut nodes: Vec<bool> = Vec::with_capacity(model.graph.len());
    for (index, op) in model.graph.ops().iter().enumerate() {
        let mut enters = match op {
            Op::Input(input) => model.inputs.get(input.0 as usize).is_some_and(|input| standard(&input.value)),
            _ => false,
        };
        let node = pintle_graph::NodeId(index as u32);
        model.graph.operands(node, |operand| enters |= nodes.get(operand.index()).copied().unwrap_or(false));
        nodes.push(enters);
    }
    model.quantities.iter().map(|it| nodes.get(it.node.index()).copied().unwrap_or(false)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::fixture::Fixture;

    fn keys(value: &Value) -> Vec<&str> {
        value.as_object().map(|object| object.keys().map(String::as_str).collect()).unwrap_or_default()
    }

    #[track_caller]
    fn check_keys(value: &Value, expected: &str) {
        assert_eq!(keys(value).join(" "), expected);
    }

    #[test]
    fn keys_stand_in_the_promised_order() {
        let mut fixture = Fixture::winch();
        fixture.report_error();
        let found = solve(&fixture.view());
        check_keys(
            &found,
            "schema pintle sheet givens results ledgers limits diagnostics confirms assumptions cautions cases",
        );
        check_keys(&found["sheet"], "title number revision");
        check_keys(&found["givens"][0], "name kind value unit si low high source");
        check_keys(&found["results"][0], "name kind value unit si low high std status line");
        check_keys(&found["ledgers"][0], "name lines residual");
        check_keys(&found["ledgers"][0]["lines"][0], "name side si");
        check_keys(&found["limits"][0], "text verdict value bound unit margin low high worst case line");
        check_keys(&found["diagnostics"][0], "code severity file line column message help");
        check_keys(&found["cases"][0], "name results ledgers confirms givens");
    }

    #[test]
    fn no_cases_no_key() {
        let mut fixture = Fixture::winch();
        fixture.results.cases.clear();
        assert!(!keys(&solve(&fixture.view())).contains(&"cases"));
    }

    #[test]
    fn values_stand_in_their_unit_and_in_si() {
        let found = solve(&Fixture::winch().view());
        assert_eq!(
            found["givens"][0].to_string(),
            r#"{"name":"trolley_mass","kind":"mass","value":3800.0,"unit":"kg","si":3800.0,"low":3724.0,"high":3876.0,"source":"weighing list"}"#
        );
        assert_eq!(found["limits"][1]["bound"], 900.0);
        assert_eq!(found["limits"][0]["case"], Value::Null);
        assert_eq!(found["limits"][2]["case"], "empty");
        let pull = found["results"].as_array().unwrap().iter().find(|it| it["name"] == "pull").unwrap();
        assert_eq!(pull["value"].as_f64().unwrap() * 1000.0, pull["si"].as_f64().unwrap());
    }

    #[test]
    fn several_solutions_give_no_value() {
        let mut fixture = Fixture::winch();
        let at = fixture.results.base.quantities.iter().position(|it| it.group == Group::Wanted).unwrap();
        fixture.results.base.quantities[at].status = Status::OneOf(vec![1.0, 2.5]);
        let found = solve(&fixture.view());
        let wanted = found["results"].as_array().unwrap().iter().find(|it| it["status"] == "one of 2").unwrap();
        assert_eq!((&wanted["value"], &wanted["si"]), (&Value::Null, &Value::Null));
        assert_eq!(wanted["solutions"].to_string(), "[1.0,2.5]");
    }

    #[test]
    fn what_is_not_finite_is_null() {
        let mut fixture = Fixture::winch();
        fixture.results.base.limits[0].margin = Some(f64::INFINITY);
        fixture.results.base.quantities[0].si = Some(f64::NAN);
        let found = solve(&fixture.view());
        assert_eq!(found["limits"][0]["margin"], Value::Null);
        assert_eq!(found["givens"][0]["si"], Value::Null);
    }

    #[test]
    fn a_standard_uncertainty_states_its_coverage() {
        let mut fixture = Fixture::winch();
        if let InputValue::Given { tolerance, .. } = &mut fixture.models[0].inputs[0].value {
            *tolerance = Some(InputTolerance::Standard(10.0));
        }
        let found = solve(&fixture.view());
        assert_eq!(found["givens"][0]["coverage"], "k=3");
        assert_eq!(found["givens"][1].get("coverage"), None);
    }
}
