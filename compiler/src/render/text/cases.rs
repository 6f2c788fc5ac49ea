//! A case: what differs from the sheet as it stands, and its limits.

use super::limits::{self, Reasons};
use super::tables::{remark, value};
use crate::model::Model;
use crate::render::page::{Align, Page, Paint, Table};
use crate::render::{unit_text, written};
use crate::results::{CaseResults, Group, QuantityResult, Shown, Status};
use pintle_graph::Op;

pub(super) fn case(page: &mut Page, base: &CaseResults, case: &CaseResults, model: Option<&Model>) {
    page.heading(&format!("CASE {}", case.case.as_deref().unwrap_or_default()));
    let mut table = Table::new(2, &[Align::Left, Align::Point, Align::Point, Align::Left, Align::Left]);
    table.row(vec!["".into(), "sheet".into(), "case".into(), "".into(), "".into()]);
    let mut n_rows = 0;
    for it in &case.quantities {
        let before = base.quantity(&it.name);
        if !is_shown(it, model) || before.is_some_and(|before| same(before, it)) {
            continue;
        }
        n_rows += 1;
        let input = written(model, it);
        let base_value = before.map_or("-".into(), |before| match before.si {
            Some(si) => crate::render::number::engineering(it.unit.from_si(si)),
            None => value(before, &crate::render::Written::default()),
        });
        // How it was found stands with the sheet as it is.
        let as_before = before.is_some_and(|before| before.status == it.status) || it.status == Status::Evaluated;
        let remark = if as_before { String::new() } else { remark(it, &input) };
        table.row(vec![
            it.name.as_str().into(),
            base_value.into(),
            value(it, &input).into(),
            unit_text(&it.unit).into(),
            remark.into(),
        ]);
    }
    if n_rows > 0 {
        table.write(page);
    } else {
        page.text_block(2, 2, "no value differs from the sheet as it stands", Paint::Plain);
    }
    limits::limits(page, case, Reasons::Left);
    let mut confirms = Table::new(2, &[Align::Left, Align::Left]);
    for (at, it) in case.confirms.iter().enumerate() {
        if base.confirms.get(at).map(|before| before.agrees) != Some(it.agrees) {
            let (word, paint) = limits::agreement(it);
            confirms.row(vec![crate::render::page::Cell::new(word, paint), limits::confirm_text(it).into()]);
        }
    }
    confirms.write(page);
}

/// Inputs, whatever they belong to, and results; states of ledgers are left to the limits on them.
fn is_shown(it: &QuantityResult, model: Option<&Model>) -> bool {
    match it.group {
        Group::Given | Group::Field | Group::Wanted => true,
        Group::Ledger => false,
        _ => it.shown == Shown::Always || is_input(it, model),
    }
}

fn is_input(it: &QuantityResult, model: Option<&Model>) -> bool {
    let node = model.and_then(|model| Some((model, model.quantities.get(it.id.0 as usize)?.node)));
    node.is_some_and(|(model, node)| match model.graph.op(node) {
        Op::Quantity(_, inner) => matches!(model.graph.op(inner), Op::Input(_) | Op::Literal(_)),
        _ => false,
    })
}

fn same(a: &QuantityResult, b: &QuantityResult) -> bool {
    a.si == b.si && a.low == b.low && a.high == b.high && a.status == b.status
}
