//! What lies below a node: the nodes that tolerances move and the blocks of
//! equations that stand behind its unknowns.

use pintle_graph::{Graph, InputId, NodeId, Op};

use crate::{Solved, Spread};

/// Nodes to be brought up to date for one result.
#[derive(Clone, Debug, Default)]
pub(crate) struct Cone {
    /// Moved nodes between inputs or unknowns and the result, operands first.
    pub nodes: Vec<NodeId>,
    /// Blocks whose unknowns come in, in the order of solving.
    pub blocks: Vec<usize>,
}

/// Who depends on what.
#[derive(Debug)]
pub(crate) struct Reach {
    /// Whether tolerances move a node.
    pub moved: Vec<bool>,
    /// The block of each input that is a moved unknown.
    block_of: Vec<Option<usize>>,
    /// For each block the moved nodes below its equations and the blocks that they need.
    pub blocks: Vec<Cone>,
    seen: Vec<u32>,
    round: u32,
}

impl Reach {
    pub fn new(graph: &Graph, spreads: &[Spread], blocks: &[Solved]) -> Reach {
        let mut input_moved = vec![false; graph.n_inputs()];
        let mut mark = |input: InputId| {
            if let Some(slot) = input_moved.get_mut(input.0 as usize) {
                *slot = true;
            }
        };
        spreads.iter().for_each(|spread| mark(spread.input));
        let mut block_of = vec![None; graph.n_inputs()];
        let mut reach =
            Reach { moved: Vec::new(), block_of: Vec::new(), blocks: Vec::new(), seen: vec![0; graph.len()], round: 0 };
        for (at, block) in blocks.iter().enumerate() {
            let mut moves = false;
            reach.below(graph, &ends(block), |input| {
                let own = block.unknowns.iter().any(|unknown| unknown.input == input);
                moves |= !own && input_moved.get(input.0 as usize) == Some(&true);
            });
            for unknown in block.unknowns.iter().filter(|_| moves) {
                if let (Some(moved), Some(slot)) =
                    (input_moved.get_mut(unknown.input.0 as usize), block_of.get_mut(unknown.input.0 as usize))
                {
                    *moved = true;
                    *slot = Some(at);
                }
            }
        }
        let mut moved: Vec<bool> = Vec::with_capacity(graph.len());
        for index in 0..graph.len() {
            let node = NodeId(index as u32);
            moved.push(match graph.op(node) {
                Op::Input(input) => input_moved.get(input.0 as usize) == Some(&true),
                _ => {
                    let mut any = false;
                    graph.operands(node, |operand| any |= moved.get(operand.index()) == Some(&true));
                    any
                }
            });
        }
        reach.moved = moved;
        reach.block_of = block_of;
        for (at, block) in blocks.iter().enumerate() {
            let mut cone = reach.cone(graph, &ends(block));
            cone.blocks.retain(|&other| other != at);
            reach.blocks.push(cone);
        }
        reach
    }

    /// All nodes below some, each once; `input` is told of the inputs among them.
    fn below(&mut self, graph: &Graph, from: &[NodeId], mut input: impl FnMut(InputId)) -> Vec<NodeId> {
        self.round += 1;
        let (round, moved, seen) = (self.round, &self.moved, &mut self.seen);
        let mut found: Vec<NodeId> = Vec::new();
        // Before anything is known of what moves, everything is walked.
        let mut push = |found: &mut Vec<NodeId>, node: NodeId| {
            let slot = seen.get_mut(node.index()).filter(|slot| **slot != round);
            if let (Some(slot), true) = (slot, moved.get(node.index()) != Some(&false)) {
                *slot = round;
                found.push(node);
            }
        };
        from.iter().for_each(|&node| push(&mut found, node));
        let mut next = 0;
        while let Some(&node) = found.get(next) {
            next += 1;
            if let Op::Input(own) = graph.op(node) {
                input(own);
            }
            graph.operands(node, |operand| push(&mut found, operand));
        }
        found.sort_unstable();
        found
    }

    /// What must be brought up to date for some nodes: their own moved nodes, and all blocks behind them.
    pub fn cone(&mut self, graph: &Graph, from: &[NodeId]) -> Cone {
        let block_of = std::mem::take(&mut self.block_of);
        let mut direct: Vec<usize> = Vec::new();
        let nodes = self.below(graph, from, |input| {
            direct.extend(block_of.get(input.0 as usize).copied().flatten());
        });
        self.block_of = block_of;
        let mut blocks: Vec<usize> = Vec::new();
        while let Some(block) = direct.pop() {
            if blocks.contains(&block) {
                continue;
            }
            blocks.push(block);
            if let Some(known) = self.blocks.get(block) {
                direct.extend(&known.blocks);
            }
        }
        blocks.sort_unstable();
        Cone { nodes, blocks }
    }
}

fn ends(block: &Solved) -> Vec<NodeId> {
    block.equations.iter().flat_map(|&(left, right)| [left, right]).collect()
}
