//! What a quantity rests on: its formula's names, theirs, and so on, each once.

use super::named;
use crate::model::{InputValue, Model};
use crate::render::View;
use crate::render::text::account::LINES;
use crate::results::{CaseResults, Group};
use pintle_graph::{NodeId, Op, QuantityId};
use std::collections::HashSet;

/// A quantity without a formula.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Leaf {
    /// Given in the sheet.
    Given,
    /// A number of the library or of a definition.
    Constant,
}

/// The chain below some quantities, in reading order.
pub(super) struct Chain<'a> {
    view: &'a View<'a>,
    base: &'a CaseResults,
    model: Option<&'a Model>,
    /// What was reached, in the order in which formulas name it.
    pub order: Vec<QuantityId>,
    seen: HashSet<QuantityId>,
}

impl<'a> Chain<'a> {
    pub fn new(view: &'a View<'a>, base: &'a CaseResults, model: Option<&'a Model>) -> Chain<'a> {
        Chain { view, base, model, order: Vec::new(), seen: HashSet::new() }
    }

    /// Reaches `top` and all that it rests on.
    pub fn follow(&mut self, top: QuantityId) {
        let mut open = vec![top];
        while let Some(id) = open.pop() {
            if !self.seen.insert(id) {
                continue;
            }
            self.order.push(id);
            // The first name of the formula is followed first.
            open.extend(self.needs(id).into_iter().rev());
        }
    }

    fn node(&self, id: QuantityId) -> Option<(&'a Model, NodeId)> {
        let model = self.model?;
        let node = model.quantities.get(id.0 as usize)?.node;
        match model.graph.op(node) {
            Op::Quantity(_, inner) => Some((model, inner)),
            _ => Some((model, node)),
        }
    }

    /// Whether a quantity is given or a constant.
    pub fn leaf(&self, id: QuantityId) -> Option<Leaf> {
        let (model, inner) = self.node(id)?;
        match model.graph.op(inner) {
            Op::Literal(_) => Some(Leaf::Constant),
            Op::Input(input) => match model.inputs.get(input.0 as usize).map(|input| &input.value) {
                Some(InputValue::Wanted { .. }) => None,
                _ => Some(Leaf::Given),
            },
            _ => None,
        }
    }

    /// The quantities that its formula, or the statement that fixes it, names.
    pub fn needs(&self, id: QuantityId) -> Vec<QuantityId> {
        let Some((model, inner)) = self.node(id) else { return Vec::new() };
        if self.is_unknown(id) {
            return match self.problem(id) {
                Some(ledger) => self.of_ledger(&ledger),
                None => self
                    .known(named::in_item(self.item_text(id)), None)
                    .into_iter()
                    .filter(|&other| other != id)
                    .collect(),
            };
        }
        let mut found = Vec::new();
        let mut seen = HashSet::new();
        let mut open = vec![inner];
        while let Some(node) = open.pop() {
            if let Op::Quantity(quantity, _) = model.graph.op(node) {
                if !found.contains(&quantity) {
                    found.push(quantity);
                }
                continue;
            }
            let from = open.len();
            model.graph.operands(node, |operand| {
                if seen.insert(operand) {
                    open.push(operand);
                }
            });
            if let Some(new) = open.get_mut(from..) {
                new.reverse();
            }
        }
        found
    }

    fn is_unknown(&self, id: QuantityId) -> bool {
        let Some((model, inner)) = self.node(id) else { return false };
        match model.graph.op(inner) {
            Op::Input(input) => {
                model.inputs.get(input.0 as usize).is_some_and(|it| matches!(it.value, InputValue::Wanted { .. }))
            }
            _ => false,
        }
    }

    /// The ledger that an unknown belongs to.
    fn problem(&self, id: QuantityId) -> Option<String> {
        let name = &self.model?.quantities.get(id.0 as usize)?.name;
        let owner = |ledger: &&crate::results::LedgerResult| {
            name.strip_prefix(ledger.name.as_str()).is_some_and(|rest| rest.starts_with('.'))
        };
        self.base.ledgers.iter().find(owner).map(|it| it.name.clone())
    }

    /// The quantities that are the lines of a ledger's account, and the names that its text holds.
    pub fn of_ledger(&self, name: &str) -> Vec<QuantityId> {
        let (Some(model), Some(ledger)) = (self.model, self.base.ledgers.iter().find(|it| it.name == name)) else {
            return Vec::new();
        };
        let mut found: Vec<QuantityId> = Vec::new();
        for line in &ledger.lines {
            let own = format!("{name}.{}", line.name);
            let members = LINES.iter().filter_map(|member| model.named(&format!("{own}.{member}")));
            let ids: Vec<QuantityId> = model.named(&own).into_iter().chain(members).collect();
            found.extend(ids.into_iter().filter(|id| self.leaf(*id).is_none()));
        }
        let text = self.view.sources.text(self.view.sources.item_place(ledger.place.item));
        found.extend(self.known(named::in_item(text), Some(name)));
        let mut seen = HashSet::new();
        found.retain(|id| seen.insert(*id));
        found
    }

    /// The quantities that a condition names.
    pub fn of_condition(&self, text: &str) -> Vec<QuantityId> {
        self.known(named::in_condition(text), None)
    }

    /// The quantities of these names; inside a ledger its own names first.
    fn known(&self, names: Vec<String>, ledger: Option<&str>) -> Vec<QuantityId> {
        let Some(model) = self.model else { return Vec::new() };
        let mut found = Vec::new();
        for name in names {
            let own = ledger.and_then(|ledger| model.named(&format!("{ledger}.{name}")));
            if let Some(id) = own.or_else(|| model.named(&name)).filter(|id| !found.contains(id)) {
                found.push(id);
            }
        }
        found
    }

    fn item_text(&self, id: QuantityId) -> &'a str {
        match self.model.and_then(|model| model.quantities.get(id.0 as usize)) {
            Some(it) => self.view.sources.text(self.view.sources.item_place(it.place.item)),
            None => "",
        }
    }

    /// What fixes an unknown, in words.
    pub fn statement(&self, id: QuantityId) -> Vec<String> {
        if !self.is_unknown(id) {
            return Vec::new();
        }
        match self.problem(id) {
            Some(name) => {
                let line = self.base.ledgers.iter().find(|it| it.name == name).map_or(0, |it| it.line);
                vec![format!("so that the ledger `{name}` closes (line {line})")]
            }
            None => vec![format!(
                "as the sheet says: {}",
                self.item_text(id).split_whitespace().collect::<Vec<_>>().join(" ")
            )],
        }
    }

    /// Names of the quantities whose formula names `id`.
    pub fn users(&self, id: QuantityId) -> Vec<String> {
        let Some(model) = self.model else { return Vec::new() };
        // Most quantities have no use for it: look at the graph once, not at each formula.
        let mut through: Vec<bool> = Vec::with_capacity(model.graph.len());
        let wanted = model.quantities.get(id.0 as usize).map(|it| it.node);
        for (index, op) in model.graph.ops().iter().enumerate() {
            let node = NodeId(index as u32);
            let mut reaches = false;
            if !matches!(op, Op::Quantity(..)) {
                let operand_reaches =
                    |operand: NodeId| Some(operand) == wanted || through.get(operand.index()) == Some(&true);
                model.graph.operands(node, |operand| reaches |= operand_reaches(operand));
            }
            through.push(reaches);
        }
        let uses = |at: usize| {
            let inner = self.node(QuantityId(at as u32)).map(|(_, inner)| inner);
            inner.is_some_and(|inner| Some(inner) == wanted || through.get(inner.index()) == Some(&true))
        };
        let quantities = model.quantities.iter().enumerate();
        quantities.filter(|(at, it)| uses(*at) && it.group != Group::Given).map(|(_, it)| it.name.to_string()).collect()
    }
}
