//! Worst cases and sensitivities of nodes, one after another.

use pintle_graph::{Enclosure, Graph, InputId, NodeId, Op, enclose};
use pintle_interval::Interval;

use crate::block::{self, Known, Work};
use crate::cone::{Cone, Reach};
use crate::linear;
use crate::{Solved, Spread, Unproved, Worst};

/// How tolerances reach the nodes of one graph.
pub struct Study<'g> {
    graph: &'g Graph,
    spreads: Vec<Spread>,
    blocks: Vec<Solved>,
    reach: Reach,
    /// None where the equations are singular at their nominal solution.
    known: Vec<Option<Known>>,
    work: Work<'g>,
}

impl<'g> Study<'g> {
    /// `inputs` are the nominal values, those of unknowns included. `blocks` stand in the order in which they were
    /// solved; unknowns that were not found are in none, and what needs them has no worst case.
    pub fn new(graph: &'g Graph, inputs: &[f64], spreads: Vec<Spread>, blocks: Vec<Solved>) -> Study<'g> {
        let reach = Reach::new(graph, &spreads, &blocks);
        let mut ranges: Vec<Interval> = inputs.iter().map(|&value| Interval::point(value)).collect();
        ranges.resize(graph.n_inputs(), Interval::EMPTY);
        let mut input_nodes = vec![None; graph.n_inputs()];
        for (index, &op) in graph.ops().iter().enumerate() {
            if let Op::Input(input) = op
                && let Some(slot) = input_nodes.get_mut(input.0 as usize)
            {
                *slot = Some(NodeId(index as u32));
            }
        }
        let values = enclose(graph, &ranges);
        let slopes = vec![Interval::ZERO; graph.len()];
        let work = Work { graph, inputs: ranges, values, slopes, input_nodes };
        let mut study = Study { graph, spreads, blocks, reach, known: Vec::new(), work };
        study.known = (0..study.blocks.len()).map(|at| study.know(at)).collect();
        study
    }

    /// Whether a tolerance moves the node.
    pub fn is_moved(&self, node: NodeId) -> bool {
        self.reach.moved.get(node.index()) == Some(&true)
    }

    /// The toleranced inputs, as given.
    pub fn spreads(&self) -> &[Spread] {
        &self.spreads
    }

    /// What a block is like at its nominal solution, which `work` holds.
    fn know(&mut self, at: usize) -> Option<Known> {
        let (block, cone) = (self.blocks.get(at)?, self.reach.blocks.get(at)?);
        let own = |input: InputId| block.unknowns.iter().any(|unknown| unknown.input == input);
        let outer: Vec<InputId> = cone
            .nodes
            .iter()
            .filter_map(|&node| match self.graph.op(node) {
                Op::Input(input) if !own(input) => Some(input),
                _ => None,
            })
            .collect();
        let matrix = block::jacobian(&mut self.work, block, cone, &outer);
        let middle: Vec<f64> = matrix.iter().map(|slope| slope.middle()).collect();
        if matrix.iter().any(|slope| !slope.is_bounded()) || middle.len() != block.unknowns.len().pow(2) {
            return None;
        }
        let near = linear::inverse(&middle, block.unknowns.len())?;
        Some(Known { near, outer })
    }

    /// Brings a cone up to date over ranges of the toleranced inputs, unknowns included.
    fn evaluate(&mut self, cone: &Cone, range: impl Fn(usize, &Spread) -> Interval) -> Result<(), Unproved> {
        for (at, spread) in self.spreads.iter().enumerate() {
            self.work.set(spread.input, range(at, spread));
        }
        for &at in &cone.blocks {
            let (Some(block), Some(below)) = (self.blocks.get(at), self.reach.blocks.get(at)) else { continue };
            let Some(Some(known)) = self.known.get(at) else { return Err(Unproved::Equations) };
            block::enclose(&mut self.work, block, below, known)?;
        }
        self.work.update(&cone.nodes);
        Ok(())
    }

    /// Slopes of a node by every toleranced input over the box that was evaluated last; None where equations bound none.
    fn slopes(&mut self, node: NodeId, cone: &Cone) -> Option<Vec<Interval>> {
        self.work.seed(node, Interval::ONE);
        self.work.sweep(&cone.nodes);
        let mut fine = true;
        for &at in cone.blocks.iter().rev() {
            let (Some(block), Some(below)) = (self.blocks.get(at), self.reach.blocks.get(at)) else { continue };
            let done = match self.known.get(at) {
                Some(Some(known)) => block::pull_back(&mut self.work, block, below, known),
                _ => None,
            };
            if done.is_none() {
                fine = false;
                break;
            }
        }
        let mut slopes = Vec::with_capacity(self.spreads.len());
        for spread in &self.spreads {
            slopes.push(self.work.take_slope(spread.input));
        }
        if !fine {
            // What was under way may have left slopes behind.
            self.work.slopes.iter_mut().for_each(|slope| *slope = Interval::ZERO);
            return None;
        }
        slopes.iter().all(|slope| !slope.is_empty()).then_some(slopes)
    }

    /// The derivative of a node by every toleranced input at the nominal values; None where there is none.
    pub fn sensitivities(&mut self, node: NodeId) -> Option<Vec<f64>> {
        if !self.is_moved(node) {
            return Some(vec![0.0; self.spreads.len()]);
        }
        let cone = self.reach.cone(self.graph, &[node]);
        self.evaluate(&cone, |_, spread| Interval::point(spread.nominal)).ok()?;
        if !self.work.value(node).smooth {
            return None;
        }
        let slopes = self.slopes(node, &cone)?;
        slopes.iter().all(|slope| slope.is_bounded()).then(|| slopes.iter().map(|slope| slope.middle()).collect())
    }

    /// The worst case of a node.
    pub fn worst(&mut self, node: NodeId) -> Result<Worst, Unproved> {
        let cone = self.reach.cone(self.graph, &[node]);
        let nominal = self.at(node, &cone, |_, spread| Interval::point(spread.base()))?.range;
        let whole = self.at(node, &cone, |_, spread| spread.range)?;
        let mut worst = whole.range;
        let mut attained = nominal;
        if whole.smooth
            && let Some(slopes) = self.slopes(node, &cone)
        {
            let mut form = nominal;
            for (slope, spread) in slopes.iter().zip(&self.spreads) {
                if *slope != Interval::ZERO {
                    form = form + *slope * (spread.range - Interval::point(spread.base()));
                }
            }
            worst = meet(worst, form);
            for end in [End::Low, End::High] {
                // Where the sign of a slope is known, the end of the input that goes with this end of the node.
                if let Ok(corner) = self.at(node, &cone, |at, spread| end.of(slopes[at], spread.range)) {
                    let side = match end {
                        End::Low => Interval { lo: corner.range.lo, hi: f64::INFINITY },
                        End::High => Interval { lo: f64::NEG_INFINITY, hi: corner.range.hi },
                    };
                    worst = meet(worst, side);
                }
                let likely = |at: usize, spread: &Spread| {
                    let sign = Interval::point(if slopes[at].middle() < 0.0 { -1.0 } else { 1.0 });
                    end.of(sign, spread.range)
                };
                if let Ok(corner) = self.at(node, &cone, likely) {
                    attained = attained.hull(corner.range);
                }
            }
        }
        if !worst.is_bounded() || worst.is_empty() {
            return Err(Unproved::Undefined);
        }
        let attained = attained.meet(worst);
        Ok(Worst { low: worst.lo, high: worst.hi, attained: (attained.lo, attained.hi) })
    }

    fn at(
        &mut self,
        node: NodeId,
        cone: &Cone,
        range: impl Fn(usize, &Spread) -> Interval,
    ) -> Result<Enclosure, Unproved> {
        self.evaluate(cone, range)?;
        let value = self.work.value(node);
        if value.range.is_empty() { Err(Unproved::Undefined) } else { Ok(value) }
    }
}

/// An end of the worst case.
#[derive(Clone, Copy, PartialEq, Eq)]
enum End {
    Low,
    High,
}

impl End {
    /// The part of an input's range where a node with this slope has its end.
    fn of(self, slope: Interval, range: Interval) -> Interval {
        let rising = slope.lo >= 0.0;
        let falling = slope.hi <= 0.0;
        match (self, rising, falling) {
            (_, false, false) | (_, true, true) => range,
            (End::Low, true, _) | (End::High, _, true) => Interval::point(range.lo),
            (End::High, true, _) | (End::Low, _, true) => Interval::point(range.hi),
        }
    }
}

/// Two enclosures of one thing: what both hold. Rounding can make neither wrong, so they always meet.
fn meet(a: Interval, b: Interval) -> Interval {
    let both = a.meet(b);
    if both.is_empty() { a } else { both }
}
