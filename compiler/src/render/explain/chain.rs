//! What a quantity rests on: its formula's names, theirs, and so on, each once.

use crate::model::{InputValue, Model};
use crate::render::View;
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
                None => self.named_in(self.item_text(id), None).into_iter().filter(|&other| other != id).collect(),
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

    /// The quantities that a ledger's balance is made of.
    pub fn of_ledger(&self, name: &str) -> Vec<QuantityId> {
        let Some(model) = self.model else { return Vec::new() };
        let prefix = format!("{name}.");
        let mut found: Vec<QuantityId> = Vec::new();
        for (at, it) in model.quantities.iter().enumerate() {
            if it.name.starts_with(&prefix) {
                found.push(QuantityId(at as u32));
            }
        }
        if let Some(first) = found.first().copied() {
            for id in self.named_in(self.item_text(first), Some(name)) {
                if !found.contains(&id) {
                    found.push(id);
                }
            }
        }
        found
    }

    /// The quantities named in a text of the sheet; inside a ledger its own names first.
    pub fn named_in(&self, text: &str, ledger: Option<&str>) -> Vec<QuantityId> {
        let Some(model) = self.model else { return Vec::new() };
        let mut found = Vec::new();
        for name in names(text) {
            let own = ledger.and_then(|ledger| model.named(&format!("{ledger}.{name}")));
            if let Some(id) = own.or_else(|| model.named(name)).filter(|id| !found.contains(id)) {
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
            None => vec![format!("as the sheet says: {}", self.item_text(id).split_whitespace().collect::<Vec<_>>().join(" "))],
        }
    }

    /// The source of a quantity that is in no result.
    pub fn source(&self, id: QuantityId) -> String {
        let quantity = self.model.and_then(|model| model.quantities.get(id.0 as usize));
        quantity.map_or(String::new(), |it| it.source.to_string())
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
                let operand_reaches = |operand: NodeId| Some(operand) == wanted || through.get(operand.index()) == Some(&true);
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

/// The dotted names in a text of the sheet.
pub(super) fn names(text: &str) -> Vec<&str> {
    let part = |c: char| c.is_alphanumeric() || matches!(c, '_' | '.' | '[' | ']');
    text.split(|c: char| !part(c))
        .map(|word| word.trim_matches('.'))
        .filter(|word| word.starts_with(|c: char| c.is_alphabetic() || c == '_'))
        .collect()
}
