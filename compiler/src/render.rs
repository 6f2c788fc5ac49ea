//! What came out, as text for people and programs: tables, JSON, CSV,
//! diagnostics, explanations, listings.
//!
//! Reads results and never computes any: a number that is not in the results
//! does not appear. It knows terminals and formats, and must never know how a
//! sheet is compiled.

pub mod csv;
pub mod diagnostics;
pub mod explain;
#[cfg(test)]
pub(crate) mod fixture;
pub mod json;
pub mod list;
pub mod page;
pub mod text;
pub mod verdicts;

pub use crate::number;
pub(crate) use crate::number::{shown, unit_text, with_unit};
pub use page::Colour;

use crate::model::{InputTolerance, InputValue, Model};
use crate::results::{CaseResults, QuantityResult, Results};
use crate::source::Sources;
use pintle_graph::Op;
use pintle_text::Diagnostic;

/// All that is known of a compiled sheet, for reading.
#[derive(Clone, Copy, Debug)]
pub struct View<'a> {
    /// Its files.
    pub sources: &'a Sources,
    /// What was reported, in order of files and places.
    pub diagnostics: &'a [Diagnostic],
    /// What came out.
    pub results: &'a Results,
    /// The checked sheet, as it stands and then under each case.
    pub models: &'a [Model],
}

impl<'a> View<'a> {
    /// The results of every case with its model; the sheet as it stands first.
    pub fn cases(&self) -> impl Iterator<Item = (&'a CaseResults, Option<&'a Model>)> {
        let models = self.models;
        self.results.all_cases().enumerate().map(move |(at, case)| (case, models.get(at)))
    }
}

/// What an input behind a quantity says.
#[derive(Clone, Debug, Default, PartialEq)]
pub(crate) struct Written {
    /// Its number as written, where it is shown in the unit that it was written in.
    pub number: Option<String>,
    /// Limits or standard uncertainty, in SI.
    pub tolerance: Option<InputTolerance>,
    /// The range that it was searched in, in SI, and whether the sheet declares it.
    pub range: Option<(f64, f64, bool)>,
}

/// What the sheet says about an input that is a quantity.
pub(crate) fn written(model: Option<&Model>, quantity: &QuantityResult) -> Written {
    let input = model.and_then(|model| {
        let node = model.quantities.get(quantity.id.0 as usize)?.node;
        let Op::Quantity(_, inner) = model.graph.op(node) else { return None };
        let Op::Input(input) = model.graph.op(inner) else { return None };
        model.inputs.get(input.0 as usize)
    });
    let Some(input) = input else { return Written::default() };
    match input.value {
        InputValue::Wanted { low, high, declared } => {
            Written { range: Some((low, high, declared)), ..Written::default() }
        }
        InputValue::Given { nominal, tolerance } => {
            let (number, unit) = input.text.split_once(' ').unwrap_or((&input.text, "1"));
            let shown_as_written = unit == quantity.unit.text && quantity.si == Some(nominal) && !number.is_empty();
            let number = shown_as_written.then(|| number.replace('_', ""));
            Written { number, tolerance, range: None }
        }
    }
}
