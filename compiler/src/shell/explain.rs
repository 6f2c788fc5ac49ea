//! `explain`: one value, its formula, and the chain down to the givens.

use pintle::Compilation;
use pintle::model::Model;
use pintle::render::number::engineering;
use pintle::results::QuantityResult;
use pintle_graph::{NodeId, Op, QuantityId, formula};

/// The explanation of a quantity; None where nothing has that name.
pub fn render(compilation: &Compilation, name: &str) -> Option<String> {
    let results = &compilation.results.base;
    let model = compilation.models.first()?;
    let top = results.quantity(name)?;
    let mut out = String::new();
    // Reading order: what is asked for first, then what it needs, each once.
    let mut order = vec![top.id];
    let mut at = 0;
    while let Some(&id) = order.get(at) {
        at += 1;
        for next in used(model, id) {
            if !order.contains(&next) {
                order.push(next);
            }
        }
    }
    for (step, id) in order.iter().enumerate() {
        match results.quantities.iter().find(|it| it.id == *id) {
            Some(quantity) => block(&mut out, model, quantity),
            None => {
                let quantity = model.quantity(*id);
                let value = model.value(quantity.node).map_or("?".into(), |si| engineering(quantity.unit.from_si(si)));
                out.push_str(&format!("{} = {value} {}\n", quantity.name, quantity.unit.text));
                if !quantity.source.is_empty() {
                    out.push_str(&format!("    source: {}\n", quantity.source));
                }
            }
        }
        if step == 0 && order.len() > 1 {
            out.push_str("\nfrom\n");
        }
    }
    Some(out)
}

fn block(out: &mut String, model: &Model, quantity: &QuantityResult) {
    let unit = if quantity.unit.text == "1" { "" } else { quantity.unit.text.as_str() };
    let value = quantity.si.map_or_else(|| quantity.status.word(), |si| engineering(quantity.unit.from_si(si)));
    out.push_str(&format!(
        "{} = {value} {unit}   ({}, {}, line {})\n",
        quantity.name,
        quantity.kind_words,
        quantity.status.word(),
        quantity.line
    ));
    let node = model.quantity(quantity.id).node;
    let inner = match model.graph.op(node) {
        Op::Quantity(_, inner) => inner,
        _ => node,
    };
    if !matches!(model.graph.op(inner), Op::Input(_) | Op::Literal(_)) {
        let tree = formula(&model.graph, node);
        let input = |at: u32| model.inputs.get(at as usize).map_or(String::new(), |it| it.text.to_string());
        let symbols = tree.text(&|id| model.quantity(id).name.to_string(), &input);
        let numbers = tree.text(
            &|id| {
                let it = model.quantity(id);
                let value = model.value(it.node).map_or("?".into(), |si| engineering(it.unit.from_si(si)));
                if it.unit.text == "1" { value } else { format!("{value} {}", it.unit.text) }
            },
            &input,
        );
        out.push_str(&format!("    = {symbols}\n"));
        if numbers != symbols {
            out.push_str(&format!("    = {numbers}\n"));
        }
    }
    if !quantity.source.is_empty() {
        out.push_str(&format!("    source: {}\n", quantity.source));
    }
}

/// Named quantities that a quantity's formula mentions.
fn used(model: &Model, id: QuantityId) -> Vec<QuantityId> {
    let mut found = Vec::new();
    let mut seen = std::collections::HashSet::new();
    let mut stack: Vec<NodeId> = Vec::new();
    model.graph.operands(model.quantity(id).node, |operand| stack.push(operand));
    while let Some(node) = stack.pop() {
        if !seen.insert(node) {
            continue;
        }
        match model.graph.op(node) {
            Op::Quantity(other, _) => found.push(other),
            _ => model.graph.operands(node, |operand| stack.push(operand)),
        }
    }
    found.sort();
    found
}
