//! A case: what differs from the sheet as it stands, and its limits.

use super::limits::{self, Reasons};
use super::tables::{remark, value};
use crate::model::Model;
use crate::render::page::{Align, Page, Paint, Table};
use crate::render::{unit_text, written};
use crate::results::{CaseResults, Group, QuantityResult, Shown, Status};

pub(super) fn case(page: &mut Page, base: &CaseResults, case: &CaseResults, model: Option<&Model>) {
    page.heading(&format!("CASE {}", case.case.as_deref().unwrap_or_default()));
    let mut table = Table::new(2, &[Align::Left, Align::Point, Align::Point, Align::Left, Align::Left]);
    table.row(vec!["".into(), "sheet".into(), "case".into(), "".into(), "".into()]);
    let mut n_rows = 0;
    for it in case.quantities.iter().filter(|it| is_shown(it)) {
        let before = base.quantity(&it.name);
        if before.is_some_and(|before| same(before, it)) {
            continue;
        }
        n_rows += 1;
        let input = written(model, it);
        let base_value = before.map_or("-".into(), |before| match before.si {
            Some(si) => crate::render::number::engineering(it.unit.from_si(si)),
            None => value(before, &crate::render::Written::default()),
        });
        let remark = if it.status == Status::Evaluated { String::new() } else { remark(it, &input) };
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

fn is_shown(it: &QuantityResult) -> bool {
    it.shown == Shown::Always || matches!(it.group, Group::Given | Group::Field | Group::Wanted)
}

fn same(a: &QuantityResult, b: &QuantityResult) -> bool {
    a.si == b.si && a.low == b.low && a.high == b.high && a.status == b.status
}
