//! How one value comes about: formula in symbols, then in numbers, then the
//! result; then everything it rests on, down to the givens with their sources.
//!
//! Each quantity stands once, in the order in which the formulas name them. No
//! circle can arise: what was written is never written again.

mod chain;
mod named;
mod object;

use super::page::{Align, Colour, Page, Paint, Table, WIDTH, width, wrap};
use super::text::{account, limits, tables, verdict_paint};
use super::{View, number, shown, with_unit, written};
use crate::model::Model;
use crate::nearest::nearest;
use crate::results::{CaseResults, LedgerResult, LimitResult, QuantityResult, Status};
use chain::{Chain, Leaf};
use pintle_graph::{Formula, QuantityId, formula};
use serde_json::Value;

/// Longer lists of uses are counted.
const MOST_USES: usize = 24;

/// Nothing of that name; the nearest names, or the members of the thing that was named.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct UnknownName {
    /// Names that exist.
    pub nearest: Vec<String>,
    /// Whether they are members of what was named.
    pub members: Members,
}

/// What the names on offer are.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Members {
    /// Members of the thing that was named.
    OfTheThing,
    /// Names that are spelt alike.
    SpeltAlike,
}

/// What a name stands for.
enum Subject<'a> {
    Quantity(Box<QuantityResult>),
    Ledger(&'a LedgerResult),
    Limit(&'a LimitResult),
}

/// The explanation of a quantity, a ledger, or a limit by its text.
pub fn explain(view: &View<'_>, name: &str, colour: Colour) -> Result<String, UnknownName> {
    let writer = Writer { view, base: &view.results.base, model: view.models.first() };
    let mut page = Page::new(colour);
    match writer.subject(name)? {
        Subject::Quantity(quantity) => writer.quantity(&mut page, &quantity),
        Subject::Ledger(ledger) => writer.ledger(&mut page, ledger),
        Subject::Limit(limit) => writer.limit(&mut page, limit),
    }
    Ok(page.text())
}

/// The same as a JSON object.
pub fn json(view: &View<'_>, name: &str) -> Result<Value, UnknownName> {
    let writer = Writer { view, base: &view.results.base, model: view.models.first() };
    let (name, tops) = match writer.subject(name)? {
        Subject::Quantity(quantity) => (quantity.name.to_string(), vec![quantity.id]),
        Subject::Ledger(ledger) => (ledger.name.clone(), writer.below_ledger(ledger)),
        Subject::Limit(limit) => (limit.text.clone(), writer.below_limit(limit)),
    };
    Ok(writer.object(&name, tops))
}

fn unknown(base: &CaseResults, name: &str) -> UnknownName {
    let prefix = format!("{name}.");
    let members: Vec<String> =
        base.quantities.iter().filter(|it| it.name.starts_with(&prefix)).map(|it| it.name.to_string()).collect();
    if !members.is_empty() {
        return UnknownName { nearest: members, members: Members::OfTheThing };
    }
    let names = base.quantities.iter().map(|it| it.name.as_str());
    let names = names
        .chain(base.ledgers.iter().map(|it| it.name.as_str()))
        .chain(base.limits.iter().map(|it| it.text.as_str()));
    let close = nearest(name, names).into_iter().map(String::from).collect();
    UnknownName { nearest: close, members: Members::SpeltAlike }
}

struct Writer<'a> {
    view: &'a View<'a>,
    base: &'a CaseResults,
    model: Option<&'a Model>,
}

impl<'a> Writer<'a> {
    fn subject(&self, name: &str) -> Result<Subject<'a>, UnknownName> {
        let base = self.base;
        let wanted: String = name.split_whitespace().collect::<Vec<_>>().join(" ");
        if let Some(quantity) = base.quantity(&wanted) {
            return Ok(Subject::Quantity(Box::new(quantity.clone())));
        }
        if let Some(ledger) = base.ledgers.iter().find(|it| it.name == wanted) {
            return Ok(Subject::Ledger(ledger));
        }
        if let Some(limit) = base.limits.iter().find(|it| it.text == wanted) {
            return Ok(Subject::Limit(limit));
        }
        // Constants of the library are in no table of results.
        let in_model = self.model.and_then(|model| model.named(&wanted)).and_then(|id| self.model_result(id));
        in_model.map(|it| Subject::Quantity(Box::new(it))).ok_or_else(|| unknown(base, &wanted))
    }

    /// What the model says of a quantity that is in no table of results.
    fn model_result(&self, id: QuantityId) -> Option<QuantityResult> {
        let model = self.model?;
        let it = model.quantities.get(id.0 as usize)?;
        let si = model.value(it.node);
        Some(QuantityResult {
            id,
            name: it.name.clone(),
            group: it.group,
            ty: it.ty,
            si,
            unit: it.unit.clone(),
            low: None,
            high: None,
            std: None,
            toleranced: false,
            status: if si.is_some() { Status::Evaluated } else { Status::Failed },
            shown: it.shown,
            place: it.place,
            line: self.view.sources.location(it.place).line,
            source: it.source.clone(),
        })
    }

    fn quantity(&self, page: &mut Page, quantity: &QuantityResult) {
        self.heading(page, quantity);
        let mut chain = Chain::new(self.view, self.base, self.model);
        let is_leaf = chain.leaf(quantity.id).is_some();
        if !is_leaf {
            self.derivation(page, quantity, &chain);
        } else if !quantity.source.is_empty() {
            page.text_block(2, 4, &format!("source: {}", quantity.source), Paint::Plain);
        }
        chain.follow(quantity.id);
        self.rest(page, &chain, Some(quantity.id));
        self.uses(page, quantity, &chain);
        self.cases(page, quantity);
    }

    fn ledger(&self, page: &mut Page, ledger: &LedgerResult) {
        page.heading(&format!("ledger {}", ledger.name));
        page.text_block(2, 4, &format!("line {}", ledger.line), Paint::Plain);
        account::account(page, ledger);
        let mut chain = Chain::new(self.view, self.base, self.model);
        for id in self.below_ledger(ledger) {
            chain.follow(id);
        }
        self.rest(page, &chain, None);
    }

    fn below_ledger(&self, ledger: &LedgerResult) -> Vec<QuantityId> {
        Chain::new(self.view, self.base, self.model).of_ledger(&ledger.name)
    }

    fn below_limit(&self, limit: &LimitResult) -> Vec<QuantityId> {
        let named = limit.governing.iter().filter_map(|name| self.model.and_then(|model| model.named(name)));
        named.chain(Chain::new(self.view, self.base, self.model).of_condition(&limit.text)).collect()
    }

    fn limit(&self, page: &mut Page, limit: &LimitResult) {
        page.heading(&limit.text);
        let show = |si: Option<f64>| si.map_or("not known".into(), |si| shown(si, &limit.unit));
        let margin = limit.margin.map_or(String::new(), |margin| format!(", margin {}", number::percent(margin)));
        let line = format!("{}: {} against {}{margin}", limit.verdict.words(), show(limit.value), show(limit.bound));
        page.text_block(2, 4, &line, verdict_paint(limit.verdict));
        for note in limits::notes(limit, limits::Reasons::Shown) {
            // The verdict stands in the line above already.
            let note = note.strip_prefix("met at nominal only: ").unwrap_or(&note);
            page.text_block(2, 4, note, Paint::Plain);
        }
        page.text_block(2, 4, &format!("line {}", limit.line), Paint::Plain);
        let mut chain = Chain::new(self.view, self.base, self.model);
        for id in self.below_limit(limit) {
            chain.follow(id);
        }
        self.rest(page, &chain, None);
    }

    /// Name, value, kind and line.
    fn heading(&self, page: &mut Page, quantity: &QuantityResult) {
        page.heading(&format!("{} = {}", quantity.name, self.value(quantity.id)));
        let mut about = format!("{}, {}", quantity.kind_words(), self.line(quantity));
        let input = written(self.model, quantity);
        let remark = tables::remark(&QuantityResult { source: Default::default(), ..quantity.clone() }, &input);
        if !remark.is_empty() {
            about.push_str(&format!(", {remark}"));
        }
        page.text_block(2, 4, &about, Paint::Plain);
    }

    /// The line it stands on, with the file where that is not the sheet.
    fn line(&self, quantity: &QuantityResult) -> String {
        match self.view.sources.file(quantity.place.item.file) {
            Some(file) if quantity.place.item.file.0 > 0 => format!("{}, line {}", file.path, quantity.line),
            _ => format!("line {}", quantity.line),
        }
    }

    /// The formula in symbols and in numbers.
    fn derivation(&self, page: &mut Page, quantity: &QuantityResult, chain: &Chain<'_>) {
        for line in self.steps(quantity.id) {
            page.text_block(2, 6, &format!("= {line}"), Paint::Plain);
        }
        for line in chain.statement(quantity.id) {
            page.text_block(2, 6, &line, Paint::Plain);
        }
        if !quantity.source.is_empty() {
            page.text_block(2, 4, &format!("source: {}", quantity.source), Paint::Plain);
        }
    }

    fn steps(&self, id: QuantityId) -> Vec<String> {
        let Some(model) = self.model else { return Vec::new() };
        let Some(quantity) = model.quantities.get(id.0 as usize) else { return Vec::new() };
        let tree = short(formula(&model.graph, quantity.node));
        if matches!(tree, Formula::Input(_) | Formula::Number(_)) {
            return Vec::new();
        }
        let input = |at: u32| model.inputs.get(at as usize).map_or("?".into(), |it| it.text.to_string());
        let symbol = |id: QuantityId| self.name(id);
        let symbols = tree.text(&symbol, &input);
        let value = |id: QuantityId| {
            let text = self.value(id);
            if text.starts_with('-') { format!("({text})") } else { text }
        };
        let numbers = tree.text(&value, &input);
        if numbers == symbols || numbers == self.value(id) { vec![symbols] } else { vec![symbols, numbers] }
    }

    fn name(&self, id: QuantityId) -> String {
        self.model.and_then(|model| model.quantities.get(id.0 as usize)).map_or("?".into(), |it| it.name.to_string())
    }

    fn result(&self, id: QuantityId) -> Option<&QuantityResult> {
        // Results stand in the order of the model as a rule.
        let direct = self.base.quantities.get(id.0 as usize).filter(|it| it.id == id);
        direct.or_else(|| self.base.quantities.iter().find(|it| it.id == id))
    }

    /// A value with its unit, as written where it is given.
    fn value(&self, id: QuantityId) -> String {
        if let Some(result) = self.result(id) {
            let input = written(self.model, result);
            let value = tables::value(result, &input);
            return if result.si.is_some() { with_unit(value, &result.unit) } else { value };
        }
        let quantity = self.model.and_then(|model| model.quantities.get(id.0 as usize).zip(Some(model)));
        match quantity {
            Some((quantity, model)) => match model.value(quantity.node) {
                Some(si) => shown(si, &quantity.unit),
                None => "not known".into(),
            },
            None => "not known".into(),
        }
    }

    /// What the chain holds besides `top`: derived quantities, then givens.
    fn rest(&self, page: &mut Page, chain: &Chain<'_>, top: Option<QuantityId>) {
        let derived: Vec<QuantityId> =
            chain.order.iter().copied().filter(|&id| Some(id) != top && chain.leaf(id).is_none()).collect();
        if !derived.is_empty() {
            page.heading("WHERE");
            for id in derived {
                self.entry(page, id, chain);
            }
        }
        let leaves: Vec<QuantityId> =
            chain.order.iter().copied().filter(|&id| Some(id) != top && chain.leaf(id).is_some()).collect();
        let mut table = Table::new(2, &[Align::Left, Align::Point, Align::Left, Align::Left]);
        for id in leaves {
            let (value, behind, source) = match self.result(id).cloned().or_else(|| self.model_result(id)) {
                Some(result) => {
                    let result = &result;
                    let input = written(self.model, result);
                    let mut source = result.source.clone();
                    if source.is_empty() && chain.leaf(id) == Some(Leaf::Given) {
                        source = format!("no source, line {}", result.line).into();
                    }
                    (tables::value(result, &input), tables::behind(result, &input), source)
                }
                None => (self.value(id), String::new(), Default::default()),
            };
            table.row(vec![self.name(id).into(), value.into(), behind.into(), source.into()]);
        }
        if !table.is_empty() {
            page.heading("GIVEN");
            table.write(page);
        }
    }

    /// One derived quantity: name, formula, numbers, value.
    fn entry(&self, page: &mut Page, id: QuantityId, chain: &Chain<'_>) {
        let name = self.name(id);
        let mut steps = self.steps(id);
        let mut value = self.value(id);
        if let Some(result) = self.result(id) {
            let input = written(self.model, result);
            let remark = tables::remark(result, &input);
            if !remark.is_empty() {
                value = format!("{value} ({remark})");
            }
        }
        steps.push(value);
        // Short names carry the first step on their own line.
        let hang = width(&name) + 2;
        let inline = hang <= 22;
        if !inline {
            page.text_block(2, 4, &name, Paint::Plain);
        }
        let indent = if inline { hang + 1 } else { 4 };
        for (at, step) in steps.iter().enumerate() {
            for (n, part) in wrap(step, WIDTH - indent - 2).iter().enumerate() {
                let sign = if n == 0 { "= " } else { "  " };
                let before = if inline && at == 0 && n == 0 { format!("  {name} ") } else { " ".repeat(indent) };
                page.line(&format!("{before}{sign}{part}"));
            }
        }
        for line in chain.statement(id) {
            page.text_block(indent, indent + 2, &line, Paint::Plain);
        }
    }

    /// What names the quantity directly.
    fn uses(&self, page: &mut Page, quantity: &QuantityResult, chain: &Chain<'_>) {
        let mut uses = chain.users(quantity.id);
        uses.extend(
            self.base
                .limits
                .iter()
                .filter(|it| named::in_condition(&it.text).iter().any(|name| *name == quantity.name))
                .map(|it| format!("limit {}", it.text)),
        );
        if uses.is_empty() {
            return;
        }
        page.heading("USED BY");
        for name in uses.iter().take(MOST_USES) {
            page.text_block(2, 4, name, Paint::Plain);
        }
        if uses.len() > MOST_USES {
            page.text_block(2, 4, &format!("and {} more", uses.len() - MOST_USES), Paint::Plain);
        }
    }

    /// Its value where a case changes it.
    fn cases(&self, page: &mut Page, quantity: &QuantityResult) {
        let mut rows = Vec::new();
        for case in &self.view.results.cases {
            let Some(other) = case.quantity(&quantity.name) else { continue };
            if other.si != quantity.si || other.status != quantity.status {
                let value = match other.si {
                    Some(si) => shown(si, &other.unit),
                    None => other.status.word(),
                };
                rows.push(format!("{}: {value}", case.case.as_deref().unwrap_or_default()));
            }
        }
        if !rows.is_empty() {
            page.heading("UNDER CASES");
            for row in rows {
                page.text_block(2, 4, &row, Paint::Plain);
            }
        }
    }
}

/// Numbers that a formula got from arithmetic, not from the sheet, rounded for reading.
fn short(tree: Formula) -> Formula {
    let all = |trees: Vec<Formula>| trees.into_iter().map(short).collect();
    let one = |tree: Box<Formula>| Box::new(short(*tree));
    match tree {
        Formula::Number(text) if text.len() > 12 => match text.parse::<f64>() {
            Ok(value) => Formula::Number(number::engineering(value).into()),
            Err(_) => Formula::Number(text),
        },
        Formula::Sum(terms) => Formula::Sum(terms.into_iter().map(|(sign, term)| (sign, short(term))).collect()),
        Formula::Product(factors) => Formula::Product(all(factors)),
        Formula::Fraction(a, b) => Formula::Fraction(one(a), one(b)),
        Formula::Power(a, num, den) => Formula::Power(one(a), num, den),
        Formula::PowerOf(a, b) => Formula::PowerOf(one(a), one(b)),
        Formula::Root(a) => Formula::Root(one(a)),
        Formula::Negative(a) => Formula::Negative(one(a)),
        Formula::Call(name, arguments) => Formula::Call(name, all(arguments)),
        Formula::Compare(op, a, b) => Formula::Compare(op, one(a), one(b)),
        Formula::Logic(word, items) => Formula::Logic(word, all(items)),
        Formula::Piecewise(arms, otherwise) => {
            let arms = arms.into_iter().map(|(value, when)| (short(value), short(when))).collect();
            Formula::Piecewise(arms, one(otherwise))
        }
        leaf => leaf,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::fixture::Fixture;

    #[track_caller]
    fn check_explained(name: &str, expected: &str) {
        let found = explain(&Fixture::winch().view(), name, Colour::Off).unwrap();
        for line in found.lines() {
            assert!(width(line) <= WIDTH, "{line}");
        }
        assert_eq!(found.trim_end(), expected.trim_matches('\n'), "\n{found}");
    }

    #[test]
    fn a_derived_value_goes_down_to_its_givens() {
        check_explained(
            "pull",
            "
pull = 4.8641 kN
  force, line 8
  = trolley_mass * g_n * sin(slope)
  = 3800 kg * 9.80665 m/s^2 * sin(7.5 deg)

GIVEN
  trolley_mass  3800        ± 76 kg  weighing list
  g_n              9.80665  m/s^2
  slope            7.5      deg      survey of the slipway, rail by rail, with
                                     the level of the harbour office

USED BY
  limit pull <= 4 kN

UNDER CASES
  empty: 1.92004 kN",
        );
    }

    #[test]
    fn a_given_says_who_uses_it() {
        check_explained(
            "slope",
            "
slope = 7.5 deg
  angle, line 3
  source: survey of the slipway, rail by rail, with the level of the harbour
    office

USED BY
  pull",
        );
    }

    #[test]
    fn an_unknown_shows_its_range_and_its_problem() {
        let found = explain(&Fixture::winch().view(), "runaway.drum.speed", Colour::Off).unwrap();
        assert!(found.contains("unique in 0 .. 900 rpm"), "{found}");
        assert!(found.contains("so that the ledger `runaway` closes (line 9)"), "{found}");
    }

    #[test]
    fn limits_and_ledgers_are_explained_by_name() {
        let fixture = Fixture::winch();
        let limit = explain(&fixture.view(), "pull  <= 4 kN", Colour::Off).unwrap();
        assert!(limit.contains("not met: 4.8641 kN against 4 kN, margin -21.6 %"), "{limit}");
        assert!(limit.contains("= trolley_mass * g_n * sin(slope)") && limit.contains("weighing list"), "{limit}");
        let ledger = explain(&fixture.view(), "runaway", Colour::Off).unwrap();
        assert!(ledger.contains("residual 1.5e-12 J"), "{ledger}");
    }

    #[test]
    fn each_quantity_stands_once() {
        let found = explain(&Fixture::winch().view(), "pull <= 4 kN", Colour::Off).unwrap();
        for name in ["trolley_mass ", "g_n ", "slope "] {
            assert_eq!(found.lines().filter(|line| line.trim_start().starts_with(name)).count(), 1, "{name}: {found}");
        }
    }

    #[test]
    fn the_object_holds_the_chain() {
        let fixture = Fixture::winch();
        let found = json(&fixture.view(), "pull").unwrap();
        let names: Vec<&str> = found["chain"].as_array().unwrap().iter().filter_map(|it| it["name"].as_str()).collect();
        assert_eq!(names, ["pull", "trolley_mass", "g_n", "slope"]);
        assert_eq!(found["chain"][0]["formula"], "trolley_mass * g_n * sin(slope)");
        assert_eq!(found["chain"][0]["numbers"], "3800 kg * 9.80665 m/s^2 * sin(7.5 deg)");
        assert_eq!(
            (&found["chain"][1]["formula"], &found["chain"][1]["source"]),
            (&Value::Null, &"weighing list".into())
        );
        assert_eq!(json(&fixture.view(), "slope").unwrap()["used_by"], serde_json::json!(["pull"]));
        assert_eq!(json(&fixture.view(), "pull <= 4 kN").unwrap()["chain"][0]["name"], "pull");
    }

    #[test]
    fn a_wrong_name_offers_the_nearest() {
        let fixture = Fixture::winch();
        let error = explain(&fixture.view(), "trolly_mass", Colour::Off).unwrap_err();
        assert_eq!(error, UnknownName { nearest: vec!["trolley_mass".into()], members: Members::SpeltAlike });
        let error = explain(&fixture.view(), "barrel", Colour::Off).unwrap_err();
        assert_eq!((error.members, error.nearest.len()), (Members::OfTheThing, 5));
    }
}
