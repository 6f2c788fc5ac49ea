//! The list of laws and slips: each law accepted, each slip refused with a message that helps.

use pintle_units::{Kind, Mismatch};

use crate::expression::{Trouble, declarations, type_of};

struct Law {
    line: usize,
    accept: bool,
    kind: Option<Kind>,
    declared: String,
    expression: String,
}

fn laws() -> Vec<Law> {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/../../tests/laws.txt");
    let text = std::fs::read_to_string(path).expect("the list of laws is there");
    let mut list = Vec::new();
    for (at, line) in text.lines().enumerate() {
        if line.trim().is_empty() || line.starts_with('#') {
            continue;
        }
        let parts: Vec<&str> = line.splitn(5, ';').map(str::trim).collect();
        let [verdict, declared, kind, expression, source] = parts[..] else {
            panic!("line {}: five parts are wanted", at + 1)
        };
        assert!(!source.is_empty(), "line {}: no source", at + 1);
        assert!(["accept", "reject"].contains(&verdict), "line {}: `{verdict}` is no verdict", at + 1);
        let known = Kind::from_name(kind);
        assert!(known.is_some() || kind == "-", "line {}: no kind `{kind}`", at + 1);
        list.push(Law {
            line: at + 1,
            accept: verdict == "accept",
            kind: known,
            declared: declared.into(),
            expression: expression.into(),
        });
    }
    list
}

fn judge(law: &Law) -> Result<usize, Mismatch> {
    let names = declarations(&law.declared).unwrap_or_else(|e| panic!("line {}: {e}", law.line));
    let ty = match type_of(&law.expression, &names) {
        Ok(ty) => ty,
        Err(Trouble::Mismatch(mismatch)) => return Err(*mismatch),
        Err(Trouble::Text(e)) => panic!("line {}: {e}", law.line),
    };
    match law.kind {
        Some(kind) => ty.fit(kind).map(|fit| fit.warnings.iter().filter(|w| !w.code.is_note()).count()),
        None => Ok(0),
    }
}

#[test]
fn every_law_is_accepted_without_cautions() {
    let mut wrong = Vec::new();
    for law in laws().iter().filter(|law| law.accept) {
        match judge(law) {
            Ok(0) => {}
            Ok(cautions) => wrong.push(format!("line {}: {} ({cautions} cautions)", law.line, law.expression)),
            Err(e) => wrong.push(format!("line {}: {}: {e}", law.line, law.expression)),
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn every_slip_is_refused() {
    let passed: Vec<String> = laws()
        .iter()
        .filter(|law| !law.accept && judge(law).is_ok())
        .map(|law| format!("line {}: {} as {:?}", law.line, law.expression, law.kind))
        .collect();
    assert!(passed.is_empty(), "{}", passed.join("\n"));
}

#[test]
fn every_refusal_names_both_sides_and_helps() {
    let mut wrong = Vec::new();
    for law in laws().iter().filter(|law| !law.accept) {
        let Err(e) = judge(law) else { continue };
        let names = e.message.contains(&e.expected) || e.message.contains("pure number or an angle");
        if !names || !e.message.contains(&e.found) || e.expected.is_empty() || e.found.is_empty() {
            wrong.push(format!("line {}: {e} does not name `{}` and `{}`", law.line, e.expected, e.found));
        }
        if e.help.as_ref().is_none_or(|help| help.len() < 10) {
            wrong.push(format!("line {}: no help", law.line));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn the_list_is_as_long_as_promised() {
    let list = laws();
    let accepted = list.iter().filter(|law| law.accept).count();
    assert!(accepted >= 60 && list.len() - accepted >= 60, "{accepted} of {}", list.len());
}
