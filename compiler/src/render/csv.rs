//! Results as comma-separated values (RFC 4180): one row a quantity, for
//! spreadsheets and scripts.

use super::View;
use crate::results::{Group, Status};

/// The first row.
const HEAD: &str = "case,role,name,kind,value,unit,si,low,high,std,status,line,source";

/// Givens and results of the sheet as it stands (`case` is empty) and of every case.
pub fn solve(view: &View<'_>) -> String {
    let mut out = format!("{HEAD}\n");
    for case in view.results.all_cases() {
        for it in &case.quantities {
            let si = if matches!(it.status, Status::OneOf(_)) { None } else { it.si };
            let role = if matches!(it.group, Group::Given | Group::Field) { "given" } else { "result" };
            let fields = [
                field(case.case.as_deref().unwrap_or("")),
                role.into(),
                field(&it.name),
                field(&it.kind_words()),
                number(si.map(|si| it.unit.from_si(si))),
                field(&it.unit.text),
                number(si),
                number(it.low),
                number(it.high),
                number(it.std),
                field(&it.status.word()),
                it.line.to_string(),
                field(&it.source),
            ];
            out.push_str(&fields.join(","));
            out.push('\n');
        }
    }
    out
}

/// Shortest text that reads back as the same double; empty where there is none.
fn number(value: Option<f64>) -> String {
    value.filter(|it| it.is_finite()).map_or(String::new(), |it| super::number::json(it).to_string())
}

fn field(text: &str) -> String {
    if text.contains(['"', ',', '\n', '\r']) { format!("\"{}\"", text.replace('"', "\"\"")) } else { text.into() }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::fixture::Fixture;

    #[test]
    fn one_row_a_quantity() {
        let fixture = Fixture::winch();
        let text = solve(&fixture.view());
        let rows: Vec<&str> = text.lines().collect();
        let n: usize = fixture.results.all_cases().map(|case| case.quantities.len()).sum();
        assert_eq!(rows.len(), n + 1);
        assert_eq!(rows[1], ",given,trolley_mass,mass,3800.0,kg,3800.0,3724.0,3876.0,,evaluated,2,weighing list");
        assert!(rows[2].ends_with("\"survey of the slipway, rail by rail, with the level of the harbour office\""));
        assert!(rows.iter().any(|row| row.starts_with("empty,result,pull,force,")));
    }

    #[test]
    fn quotes_are_doubled() {
        assert_eq!(field("a \"b\", c"), "\"a \"\"b\"\", c\"");
        assert_eq!(number(Some(f64::NAN)), "");
    }
}
