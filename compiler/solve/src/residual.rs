//! A block as functions of its unknowns: residuals `left - right`, their
//! derivatives, and whether a residual is zero as far as f64 can tell.

use pintle_graph::{Function, Graph, NodeId, Op, Part, evaluate_into, rounding, tangents};

/// Relative to the sum of the absolute values of the terms of both sides.
const TOLERANCE: f64 = 1e-12;
/// Rounding may add up to this many half ulps on the way.
const ROUNDING: f64 = 64.0 * (f64::EPSILON / 2.0);
/// Where rounding decides, the residual must be this small against its usual
/// size in the range too: next to a pole everything drowns in rounding.
const SMALL: f64 = 1e-6;

/// Residuals of a block's equations over its unknowns.
pub(crate) struct Residuals {
    part: Part,
    /// Per equation, the terms at the top of both sides.
    terms: Vec<Vec<NodeId>>,
    /// Usual size of each residual in the range; set by the search.
    pub(crate) usual: Vec<f64>,
    values: Vec<f64>,
    scratch: Vec<f64>,
}

impl Residuals {
    /// `part.outputs` are left and right of each equation in turn.
    pub(crate) fn new(part: Part) -> Residuals {
        let terms: Vec<_> = part.outputs.chunks_exact(2).map(|sides| terms(&part.graph, sides)).collect();
        let usual = vec![0.0; terms.len()];
        Residuals { part, terms, usual, values: Vec::new(), scratch: Vec::new() }
    }

    pub(crate) fn count(&self) -> usize {
        self.terms.len()
    }

    pub(crate) fn graph(&self) -> &Graph {
        &self.part.graph
    }

    /// Both sides of all equations.
    pub(crate) fn outputs(&self) -> Vec<NodeId> {
        self.part.outputs.clone()
    }

    /// Left and right of equation `k`.
    pub(crate) fn sides(&self, k: usize) -> (NodeId, NodeId) {
        (self.part.outputs[2 * k], self.part.outputs[2 * k + 1])
    }

    fn difference(&self, k: usize, of: &[f64]) -> f64 {
        let (left, right) = self.sides(k);
        let result = of[left.index()] - of[right.index()];
        // An infinite residual is as undefined as none.
        if result.is_finite() { result } else { f64::NAN }
    }

    /// Moves to `x`; the other calls are about this point.
    pub(crate) fn at(&mut self, x: &[f64]) {
        evaluate_into(&self.part.graph, x, &mut self.values);
    }

    /// Residual of equation `k`.
    pub(crate) fn residual(&self, k: usize) -> f64 {
        self.difference(k, &self.values)
    }

    /// Derivatives of all residuals by unknown `j`, into `column`.
    pub(crate) fn slopes(&mut self, j: usize, column: &mut Vec<f64>) {
        let mut scratch = std::mem::take(&mut self.scratch);
        tangents(&self.part.graph, &self.values, j as u32, &mut scratch);
        column.clear();
        for k in 0..self.count() {
            let (left, right) = self.sides(k);
            column.push(scratch[left.index()] - scratch[right.index()]);
        }
        self.scratch = scratch;
    }

    /// Sum of the absolute values of the terms of equation `k`.
    pub(crate) fn scale(&self, k: usize) -> f64 {
        self.terms[k].iter().map(|term| self.values[term.index()].abs()).sum()
    }

    /// Whether every equation holds here as far as f64 can tell.
    pub(crate) fn holds(&mut self) -> bool {
        let mut reach: Option<Vec<f64>> = None;
        for k in 0..self.count() {
            let residual = self.residual(k).abs();
            if residual.is_nan() {
                return false;
            }
            if residual == 0.0 || residual <= TOLERANCE * self.scale(k) {
                continue;
            }
            if residual > SMALL * self.usual[k] {
                return false;
            }
            let reach = reach.get_or_insert_with(|| {
                let mut reach = std::mem::take(&mut self.scratch);
                rounding(&self.part.graph, &self.values, &mut reach);
                reach
            });
            let (left, right) = (self.part.outputs[2 * k], self.part.outputs[2 * k + 1]);
            if residual > ROUNDING * (reach[left.index()] + reach[right.index()]) {
                return false;
            }
        }
        true
    }

    /// As [`Residuals::holds`], but at a point that no search led to (an end of
    /// the range): only what rounding explains counts, not the tolerance.
    pub(crate) fn holds_to_rounding(&mut self) -> bool {
        let mut reach = Vec::new();
        for k in 0..self.count() {
            let residual = self.residual(k).abs();
            if residual == 0.0 {
                continue;
            }
            if residual.is_nan() || residual > SMALL * self.usual[k] {
                return false;
            }
            rounding(&self.part.graph, &self.values, &mut reach);
            let (left, right) = self.sides(k);
            if residual > ROUNDING * (reach[left.index()] + reach[right.index()]) {
                return false;
            }
        }
        true
    }
}

/// The terms at the top of the sides, names opened, each once.
fn terms(graph: &Graph, sides: &[NodeId]) -> Vec<NodeId> {
    let mut seen = vec![false; graph.len()];
    let mut open: Vec<NodeId> = sides.to_vec();
    let mut result = Vec::new();
    while let Some(node) = open.pop() {
        if std::mem::replace(&mut seen[node.index()], true) {
            continue;
        }
        match graph.op(node) {
            Op::Add(a, b) | Op::Subtract(a, b) => open.extend([a, b]),
            Op::Quantity(_, a) | Op::Apply(Function::Negate, a) => open.push(a),
            _ => result.push(node),
        }
    }
    result.sort_unstable();
    result
}
