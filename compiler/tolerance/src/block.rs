//! One block of equations over a box of inputs: where its unknowns lie, and how
//! slopes go back through it.

use pintle_graph::{Enclosure, Graph, NodeId, enclose_nodes, slope_enclosures};
use pintle_interval::Interval;

use crate::cone::Cone;
use crate::{Solved, Unproved, linear};

/// How often the box round the unknowns is tried anew.
const TRIES: usize = 14;

/// What is worked on: one value per node and per input, and scratch for slopes.
pub(crate) struct Work<'g> {
    pub graph: &'g Graph,
    pub inputs: Vec<Interval>,
    pub values: Vec<Enclosure>,
    /// 0 everywhere between uses.
    pub slopes: Vec<Interval>,
    /// The node of each input.
    pub input_nodes: Vec<Option<NodeId>>,
}

impl Work<'_> {
    pub fn set(&mut self, input: pintle_graph::InputId, range: Interval) {
        if let Some(slot) = self.inputs.get_mut(input.0 as usize) {
            *slot = range;
        }
    }

    pub fn value(&self, node: NodeId) -> Enclosure {
        self.values.get(node.index()).copied().unwrap_or(Enclosure::EMPTY)
    }

    pub fn update(&mut self, nodes: &[NodeId]) {
        enclose_nodes(self.graph, nodes, &self.inputs, &mut self.values);
    }

    /// Adds to the slope of a node.
    pub fn seed(&mut self, node: NodeId, slope: Interval) {
        if let Some(slot) = self.slopes.get_mut(node.index()) {
            *slot = *slot + slope;
        }
    }

    pub fn sweep(&mut self, nodes: &[NodeId]) {
        slope_enclosures(self.graph, nodes, &self.values, &mut self.slopes);
    }

    /// The slope gathered at an input, which is 0 again afterwards.
    pub fn take_slope(&mut self, input: pintle_graph::InputId) -> Interval {
        let node = self.input_nodes.get(input.0 as usize).copied().flatten();
        match node.and_then(|node| self.slopes.get_mut(node.index())) {
            Some(slot) => std::mem::replace(slot, Interval::ZERO),
            None => Interval::ZERO,
        }
    }

    /// Left minus right.
    fn residual(&self, (left, right): (NodeId, NodeId)) -> Enclosure {
        let (left, right) = (self.value(left), self.value(right));
        Enclosure { range: left.range - right.range, smooth: left.smooth && right.smooth }
    }

    /// Rows of slopes of all equations by `columns`; the slopes of all other inputs are dropped.
    fn jacobian(
        &mut self,
        block: &Solved,
        cone: &Cone,
        columns: &[pintle_graph::InputId],
        others: &[pintle_graph::InputId],
    ) -> Vec<Interval> {
        let mut matrix = Vec::with_capacity(block.equations.len() * columns.len());
        for &(left, right) in &block.equations {
            self.seed(left, Interval::ONE);
            self.seed(right, -Interval::ONE);
            self.sweep(&cone.nodes);
            for &column in columns {
                let slope = self.take_slope(column);
                matrix.push(slope);
            }
            for &other in others {
                self.take_slope(other);
            }
        }
        matrix
    }
}

/// What is known of a block from its nominal solution.
#[derive(Clone, Debug)]
pub(crate) struct Known {
    /// About the inverse of the Jacobian there, row by row.
    pub near: Vec<f64>,
    /// Inputs other than its unknowns that its equations depend on and that move.
    pub outer: Vec<pintle_graph::InputId>,
}

/// The Jacobian over the present box.
pub(crate) fn jacobian(
    work: &mut Work<'_>,
    block: &Solved,
    cone: &Cone,
    outer: &[pintle_graph::InputId],
) -> Vec<Interval> {
    let own: Vec<_> = block.unknowns.iter().map(|unknown| unknown.input).collect();
    work.jacobian(block, cone, &own, outer)
}

/// The unknowns over the present ranges of all other inputs: set in `work`, with the nodes of the block brought up to date.
pub(crate) fn enclose(work: &mut Work<'_>, block: &Solved, cone: &Cone, known: &Known) -> Result<(), Unproved> {
    let n = block.unknowns.len();
    let centre = centre(work, block, cone, known);
    for (unknown, &centre) in block.unknowns.iter().zip(&centre) {
        work.set(unknown.input, Interval::point(centre));
    }
    work.update(&cone.nodes);
    let mut at_centre: Vec<Interval> = Vec::with_capacity(n);
    for &equation in &block.equations {
        let residual = work.residual(equation);
        if !residual.smooth || !residual.range.is_bounded() {
            return Err(Unproved::Equations);
        }
        at_centre.push(residual.range);
    }
    mean_value(work, block, cone, known, &mut at_centre);
    // near * F at the centre: about where the solutions go, with the sign turned.
    let step: Vec<Interval> = (0..n)
        .map(|i| (0..n).fold(Interval::ZERO, |sum, k| sum + at_centre[k].scaled(known.near[i * n + k])))
        .collect();
    let mut range: Vec<Interval> = (0..n)
        .map(|i| {
            // The mean value theorem wants the centre inside.
            let target = (Interval::point(centre[i]) - step[i]).hull(Interval::point(centre[i]));
            target.widened(0.1 * target.width() + 1e-12 * centre[i].abs() + 1e-300)
        })
        .collect();
    let mut proved = false;
    for _ in 0..TRIES {
        let Some(next) = krawczyk(work, block, cone, known, &centre, &step, &range) else {
            return Err(Unproved::Equations);
        };
        if proved {
            let keep = |a: Interval, b: Interval, centre: f64| a.meet(b).hull(Interval::point(centre));
            let both = next.iter().zip(&range).zip(&centre);
            let narrower: Vec<Interval> = both.map(|((a, b), centre)| keep(*a, *b, *centre)).collect();
            let done = narrower.iter().zip(&range).all(|(new, old)| new.width() > 0.99 * old.width());
            range = narrower;
            if done {
                break;
            }
        } else if next.iter().zip(&range).all(|(inner, outer)| inner.is_inside(*outer)) {
            proved = true;
            range = next.iter().zip(&centre).map(|(it, &centre)| it.hull(Interval::point(centre))).collect();
        } else {
            range = next
                .iter()
                .zip(&range)
                .map(|(a, b)| {
                    let both = a.hull(*b);
                    both.widened(0.1 * both.width())
                })
                .collect();
        }
        if range.iter().any(|it| it.is_empty() || !it.is_bounded()) {
            return Err(Unproved::Equations);
        }
    }
    if !proved {
        return Err(Unproved::Equations);
    }
    for (unknown, range) in block.unknowns.iter().zip(&range) {
        if range.lo < unknown.range.lo || range.hi > unknown.range.hi {
            return Err(Unproved::RangeEnd(unknown.input));
        }
        work.set(unknown.input, *range);
    }
    work.update(&cone.nodes);
    Ok(())
}

/// About the solution in the middle of the present ranges, by steps with the nominal inverse from the nominal solution.
/// A guess only: what is proved is proved round it.
fn centre(work: &mut Work<'_>, block: &Solved, cone: &Cone, known: &Known) -> Vec<f64> {
    let n = block.unknowns.len();
    let mut x: Vec<f64> = block.unknowns.iter().map(|unknown| unknown.value).collect();
    let mut best = (f64::INFINITY, x.clone());
    for _ in 0..12 {
        for (unknown, &x) in block.unknowns.iter().zip(&x) {
            work.set(unknown.input, Interval::point(x));
        }
        work.update(&cone.nodes);
        let residual: Vec<f64> = block.equations.iter().map(|&it| work.residual(it).range.middle()).collect();
        let steps: Vec<f64> =
            (0..n).map(|i| (0..n).map(|k| known.near[i * n + k] * residual[k]).sum::<f64>()).collect();
        let size: f64 = steps.iter().zip(&x).map(|(step, x)| step.abs() / x.abs().max(1e-300)).sum();
        if !(size < best.0) {
            break;
        }
        best = (size, x.clone());
        x.iter_mut().zip(&steps).for_each(|(x, step)| *x -= step);
    }
    best.1
}

/// Narrows residuals at the centre by their mean-value form in the outer inputs.
fn mean_value(work: &mut Work<'_>, block: &Solved, cone: &Cone, known: &Known, at_centre: &mut [Interval]) {
    let own: Vec<_> = block.unknowns.iter().map(|unknown| unknown.input).collect();
    let slopes = work.jacobian(block, cone, &known.outer, &own);
    let ranges: Vec<Interval> = known
        .outer
        .iter()
        .map(|input| work.inputs.get(input.0 as usize).copied().unwrap_or(Interval::ENTIRE))
        .collect();
    let middles: Vec<f64> = ranges.iter().map(|range| range.middle()).collect();
    for (input, middle) in known.outer.iter().zip(&middles) {
        work.set(*input, Interval::point(*middle));
    }
    work.update(&cone.nodes);
    for (i, (residual, &equation)) in at_centre.iter_mut().zip(&block.equations).enumerate() {
        let mut form = work.residual(equation).range;
        for (k, range) in ranges.iter().enumerate() {
            form = form + slopes[i * ranges.len() + k] * (*range - Interval::point(middles[k]));
        }
        let both = residual.meet(form);
        if !both.is_empty() {
            *residual = both;
        }
    }
    for (input, range) in known.outer.iter().zip(ranges) {
        work.set(*input, range);
    }
    work.update(&cone.nodes);
}

/// `centre - near F(centre) + (I - near J(range)) (range - centre)`; None where J is not bounded.
fn krawczyk(
    work: &mut Work<'_>,
    block: &Solved,
    cone: &Cone,
    known: &Known,
    centre: &[f64],
    step: &[Interval],
    range: &[Interval],
) -> Option<Vec<Interval>> {
    let n = centre.len();
    for (unknown, range) in block.unknowns.iter().zip(range) {
        work.set(unknown.input, *range);
    }
    work.update(&cone.nodes);
    if !block.equations.iter().all(|&equation| work.residual(equation).smooth) {
        return None;
    }
    let matrix = jacobian(work, block, cone, &known.outer);
    if matrix.iter().any(|slope| !slope.is_bounded()) {
        return None;
    }
    let next = (0..n).map(|i| {
        let mut sum = Interval::point(centre[i]) - step[i];
        for j in 0..n {
            let product = (0..n).fold(Interval::ZERO, |sum, k| sum + matrix[k * n + j].scaled(known.near[i * n + k]));
            let off = if i == j { Interval::ONE - product } else { -product };
            sum = sum + off * (range[j] - Interval::point(centre[j]));
        }
        sum
    });
    Some(next.collect())
}

/// Takes the slopes gathered at the unknowns back through the equations to what is behind them.
pub(crate) fn pull_back(work: &mut Work<'_>, block: &Solved, cone: &Cone, known: &Known) -> Option<()> {
    let n = block.unknowns.len();
    let right: Vec<Interval> = block.unknowns.iter().map(|unknown| -work.take_slope(unknown.input)).collect();
    if right.iter().all(|slope| *slope == Interval::ZERO) {
        return Some(());
    }
    // The slopes of other inputs gathered so far must wait.
    let waiting: Vec<Interval> = known.outer.iter().map(|&input| work.take_slope(input)).collect();
    let matrix = jacobian(work, block, cone, &known.outer);
    let transposed: Vec<Interval> = (0..n * n).map(|at| matrix[at % n * n + at / n]).collect();
    let near: Vec<f64> = (0..n * n).map(|at| known.near[at % n * n + at / n]).collect();
    let weights = linear::solve(&transposed, &right, &near, n)?;
    for (&input, slope) in known.outer.iter().zip(waiting) {
        if let Some(node) = work.input_nodes.get(input.0 as usize).copied().flatten() {
            work.seed(node, slope);
        }
    }
    for (&(left, right), &weight) in block.equations.iter().zip(&weights) {
        work.seed(left, weight);
        work.seed(right, -weight);
    }
    work.sweep(&cone.nodes);
    // By the unknowns themselves nothing is left.
    for unknown in &block.unknowns {
        work.take_slope(unknown.input);
    }
    Some(())
}
