//! The checked sheet under one case: its graph and the table of its quantities.

use crate::QuickMap;
use crate::results::{Group, Shown};
use pintle_graph::{Graph, InputId, NodeId, QuantityId};
use pintle_text::Place;
use pintle_units::{LengthRole, Type, Unit};
use smol_str::SmolStr;
use std::collections::BTreeMap;
use std::sync::{Arc, OnceLock};

/// A named quantity.
#[derive(Clone, Debug)]
pub struct Quantity {
    /// Full dotted name.
    pub name: SmolStr,
    /// What it belongs to.
    pub group: Group,
    /// Whether tables show it.
    pub shown: Shown,
    /// Its dimension, angle exponent and kind.
    pub ty: Type,
    /// The node that carries its name.
    pub node: NodeId,
    /// The unit it is shown in.
    pub unit: Arc<Unit>,
    /// Where it is defined.
    pub place: Place,
    /// Its source as cited.
    pub source: SmolStr,
}

/// What is known of an input of the graph.
#[derive(Clone, Debug)]
pub struct Input {
    /// The quantity that it is; None for a number inside an expression.
    pub quantity: Option<QuantityId>,
    /// Its number as written, for formulas.
    pub text: SmolStr,
    /// Where it stands.
    pub place: Place,
    /// What it is.
    pub value: InputValue,
}

/// Where an input's value comes from.
#[derive(Clone, Debug, PartialEq)]
pub enum InputValue {
    /// Given, in SI.
    Given {
        /// The nominal value.
        nominal: f64,
        /// What is said of how sure it is.
        tolerance: Option<InputTolerance>,
    },
    /// To be found in a range, in SI.
    Wanted {
        /// Lower end.
        low: f64,
        /// Upper end.
        high: f64,
        /// Whether the range stands in the sheet.
        declared: bool,
    },
}

/// Tolerance of an input, in SI.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum InputTolerance {
    /// A set of possible values.
    Limits {
        /// Lower end.
        low: f64,
        /// Upper end.
        high: f64,
    },
    /// A standard uncertainty, normal.
    Standard(f64),
}

/// The checked sheet under one case.
#[derive(Clone, Debug, Default)]
pub struct Model {
    /// All nodes.
    pub graph: Graph,
    /// All quantities, in the order of the sheet.
    pub quantities: Vec<Quantity>,
    /// All inputs, by [`InputId`].
    pub inputs: Vec<Input>,
    /// Value of every node, once solved.
    pub values: Vec<f64>,
    /// What a length of which nothing says what it does was first used as, and where.
    pub roles: BTreeMap<QuantityId, (LengthRole, Place)>,
    /// Quantities by name, once somebody asks.
    by_name: OnceLock<QuickMap<SmolStr, QuantityId>>,
}

impl Model {
    /// A quantity.
    pub fn quantity(&self, id: QuantityId) -> &Quantity {
        &self.quantities[id.0 as usize]
    }

    /// The quantity of that full name, the first of several. To be asked only when the sheet is complete.
    pub fn named(&self, name: &str) -> Option<QuantityId> {
        let by_name = self.by_name.get_or_init(|| {
            let mut by_name = QuickMap::default();
            for (at, quantity) in self.quantities.iter().enumerate() {
                by_name.entry(quantity.name.clone()).or_insert(QuantityId(at as u32));
            }
            by_name
        });
        by_name.get(name).copied()
    }

    /// Value of a node, once solved.
    pub fn value(&self, node: NodeId) -> Option<f64> {
        self.values.get(node.index()).copied().filter(|value| !value.is_nan())
    }

    /// An input.
    pub fn input(&self, id: InputId) -> &Input {
        &self.inputs[id.0 as usize]
    }
}
