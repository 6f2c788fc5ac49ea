//! An explanation as a JSON object, for editors and scripts.
//!
//! `schema`, `pintle`, `name`; `chain`: what was asked for and then all that it
//! rests on, in reading order, each with `name`, `kind`, `value` in `unit`,
//! `si`, `status`, `line`, `source`, `formula` and `numbers` (null for givens);
//! `used_by`: names of the quantities whose formula names it.

use super::Writer;
use super::chain::Chain;
use crate::render::number;
use pintle_graph::QuantityId;
use serde_json::{Value, json};

impl Writer<'_> {
    /// The object for a name whose chain starts at `tops`.
    pub(super) fn object(&self, name: &str, tops: Vec<QuantityId>) -> Value {
        let mut chain = Chain::new(self.view, self.base, self.model);
        let used_by: Vec<String> = match tops.as_slice() {
            [only] if self.name(*only) == name => chain.users(*only),
            _ => Vec::new(),
        };
        for top in tops {
            chain.follow(top);
        }
        let links: Vec<Value> = chain.order.iter().map(|&id| self.link(id)).collect();
        json!({
            "schema": crate::render::json::SCHEMA,
            "pintle": env!("CARGO_PKG_VERSION"),
            "name": name,
            "chain": links,
            "used_by": used_by,
        })
    }

    fn link(&self, id: QuantityId) -> Value {
        let result = self.result(id).cloned().or_else(|| self.model_result(id));
        let mut steps = self.steps(id).into_iter();
        let (symbols, numbers) = (steps.next(), steps.next());
        let Some(it) = result else { return json!({"name": self.name(id)}) };
        let optional = |value: Option<f64>| value.map_or(Value::Null, number::json);
        json!({
            "name": it.name.as_str(),
            "kind": it.kind_words(),
            "value": optional(it.si.map(|si| it.unit.from_si(si))),
            "unit": it.unit.text.as_str(),
            "si": optional(it.si),
            "status": it.status.word(),
            "line": it.line,
            "source": it.source.as_str(),
            "formula": symbols,
            "numbers": numbers,
        })
    }
}
