//! `--json`: one object, keys in the order that others rely on.

use pintle::Compilation;
use pintle::render::number::json as number;
use pintle::results::{CaseResults, Group, QuantityResult, Status};
use pintle_text::Severity;
use serde_json::{Map, Value, json};

/// The whole result as one JSON object, with a line end.
pub fn render(compilation: &Compilation) -> String {
    let results = &compilation.results;
    let mut object = Map::new();
    object.insert("schema".into(), json!(1));
    object.insert("pintle".into(), json!(env!("CARGO_PKG_VERSION")));
    object.insert(
        "sheet".into(),
        json!({"title": results.sheet.title, "number": results.sheet.number, "revision": results.sheet.revision}),
    );
    let is_given = |it: &&QuantityResult| matches!(it.group, Group::Given | Group::Field);
    let givens: Vec<Value> = results.base.quantities.iter().filter(is_given).map(given).collect();
    object.insert("givens".into(), Value::Array(givens));
    object.insert("results".into(), quantities(&results.base));
    object.insert("ledgers".into(), ledgers(&results.base));
    let limits: Vec<Value> = results.all_cases().flat_map(limits).collect();
    object.insert("limits".into(), Value::Array(limits));
    let diagnostics: Vec<Value> = compilation
        .diagnostics
        .iter()
        .map(|it| {
            let location = compilation.sources.location(it.place);
            json!({
                "code": it.code.name,
                "severity": match it.severity() { Severity::Error => "error", Severity::Warning => "warning", Severity::Hint => "hint" },
                "file": location.source,
                "line": location.line,
                "column": location.column,
                "message": it.message,
                "help": it.help.clone().unwrap_or_default(),
            })
        })
        .collect();
    object.insert("diagnostics".into(), Value::Array(diagnostics));
    object.insert("confirms".into(), confirms(&results.base));
    let assumptions: Vec<Value> = results
        .assumptions
        .iter()
        .map(|it| json!({"text": it.text, "status": if it.confirmed.is_some() { "confirmed" } else { "open" }, "by": it.confirmed, "line": it.line}))
        .collect();
    object.insert("assumptions".into(), Value::Array(assumptions));
    object.insert("cautions".into(), json!(results.cautions));
    let cases: Vec<Value> = results
        .cases
        .iter()
        .map(|case| json!({"name": case.case, "results": quantities(case), "ledgers": ledgers(case), "confirms": confirms(case)}))
        .collect();
    object.insert("cases".into(), Value::Array(cases));
    format!("{}\n", Value::Object(object))
}

fn optional(value: Option<f64>) -> Value {
    value.map_or(Value::Null, number)
}

fn in_unit(it: &QuantityResult) -> Value {
    optional(it.si.map(|si| it.unit.from_si(si)))
}

fn given(it: &QuantityResult) -> Value {
    let mut value = json!({
        "name": it.name, "kind": it.kind_words, "value": in_unit(it), "unit": it.unit.text.as_str(), "si": optional(it.si),
        "low": optional(it.low), "high": optional(it.high), "source": it.source,
    });
    if let (Some(std), Some(object)) = (it.std, value.as_object_mut()) {
        object.insert("std".into(), number(std));
    }
    value
}

fn quantities(case: &CaseResults) -> Value {
    let rows = case.quantities.iter().filter(|it| !matches!(it.group, Group::Given | Group::Field)).map(|it| {
        let mut row = json!({
            "name": it.name, "kind": it.kind_words, "value": in_unit(it), "unit": it.unit.text.as_str(), "si": optional(it.si),
            "low": optional(it.low), "high": optional(it.high), "std": optional(it.std), "status": it.status.word(), "line": it.line,
        });
        if let (Status::OneOf(solutions), Some(object)) = (&it.status, row.as_object_mut()) {
            object.insert("solutions".into(), Value::Array(solutions.iter().map(|&it| number(it)).collect()));
        }
        row
    });
    Value::Array(rows.collect())
}

fn ledgers(case: &CaseResults) -> Value {
    let rows = case.ledgers.iter().map(|ledger| {
        let lines: Vec<Value> = ledger
            .lines
            .iter()
            .map(|line| json!({"name": line.name, "side": line.side.word(), "si": optional(line.si)}))
            .collect();
        json!({"name": ledger.name, "lines": lines, "residual": optional(ledger.residual)})
    });
    Value::Array(rows.collect())
}

fn limits(case: &CaseResults) -> Vec<Value> {
    case.limits
        .iter()
        .map(|it| {
            let shown = |si: Option<f64>| optional(si.map(|si| it.unit.from_si(si)));
            json!({
                "text": it.text, "verdict": it.verdict.words(), "value": shown(it.value), "bound": shown(it.bound),
                "unit": it.unit.text.as_str(), "margin": optional(it.margin), "low": shown(it.low), "high": shown(it.high),
                "worst": it.worst.map(|worst| worst.word()), "case": case.case, "line": it.line,
            })
        })
        .collect()
}

fn confirms(case: &CaseResults) -> Value {
    let rows = case.confirms.iter().map(|it| {
        json!({
            "text": it.text, "value": optional(it.value), "second": optional(it.second), "half_width": optional(it.half_width),
            "agrees": it.agrees, "source": it.source, "line": it.line,
        })
    });
    Value::Array(rows.collect())
}
