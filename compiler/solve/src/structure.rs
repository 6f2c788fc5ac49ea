//! Which equation fixes which unknown: maximum bipartite matching (Hopcroft and
//! Karp, SIAM J. Comput. 2 (1973) 225-231), then blocks in order (Tarjan, SIAM
//! J. Comput. 1 (1972) 146-160); both from memory, both without recursion.
//!
//! Knows only who depends on whom; must never look at a value.

use crate::Problem;
use pintle_graph::{Graph, Op, Parts};
use std::collections::VecDeque;

/// The order in which a problem falls apart.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Structure {
    /// In the order to be solved.
    pub blocks: Vec<Block>,
    /// Unknowns that no equation is left to fix.
    pub free_unknowns: Vec<usize>,
    /// Equations with no unknown left to fix, or with none in them.
    pub spare_equations: Vec<usize>,
}

/// Unknowns that must be found together, by as many equations. Indices into the problem, ascending.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Block {
    /// Indices of unknowns.
    pub unknowns: Vec<usize>,
    /// Indices of equations.
    pub equations: Vec<usize>,
}

const NONE: usize = usize::MAX;

/// The structure of `problem`. The same problem always gives the same structure.
pub fn structure(graph: &Graph, problem: &Problem) -> Structure {
    let incidence = incidence(graph, problem);
    let (equation_of, unknown_of) = matching(&incidence, problem.unknowns.len());
    let free_unknowns = (0..equation_of.len()).filter(|&unknown| equation_of[unknown] == NONE).collect();
    let spare_equations = (0..unknown_of.len()).filter(|&equation| unknown_of[equation] == NONE).collect();
    Structure { blocks: blocks(&incidence, &equation_of, &unknown_of), free_unknowns, spare_equations }
}

/// For each equation the unknowns in it, ascending.
fn incidence(graph: &Graph, problem: &Problem) -> Vec<Vec<usize>> {
    let inputs: Vec<_> = problem.unknowns.iter().map(|unknown| unknown.input).collect();
    let mut unknown_of_input = vec![NONE; graph.n_inputs()];
    for (unknown, input) in inputs.iter().enumerate() {
        // An input declared twice stays with its first unknown; the second is free.
        match unknown_of_input.get_mut(input.0 as usize) {
            Some(slot) if *slot == NONE => *slot = unknown,
            _ => {}
        }
    }
    let mut parts = Parts::new(graph, &inputs);
    let mut result = Vec::with_capacity(problem.equations.len());
    for equation in &problem.equations {
        let mut unknowns: Vec<usize> = parts
            .nodes(&[equation.left, equation.right])
            .into_iter()
            .filter_map(|node| match graph.op(node) {
                Op::Input(input) => unknown_of_input.get(input.0 as usize).copied().filter(|&unknown| unknown != NONE),
                _ => None,
            })
            .collect();
        unknowns.sort_unstable();
        unknowns.dedup();
        result.push(unknowns);
    }
    result
}

/// Maximum matching: the equation of each unknown and the unknown of each equation.
fn matching(incidence: &[Vec<usize>], n_unknowns: usize) -> (Vec<usize>, Vec<usize>) {
    let mut equation_of = vec![NONE; n_unknowns];
    let mut unknown_of = vec![NONE; incidence.len()];
    // Equations with few unknowns first: they have the least choice, and a greedy start leaves little to mend.
    let mut order: Vec<usize> = (0..incidence.len()).collect();
    order.sort_by_key(|&equation| incidence[equation].len());
    for &equation in &order {
        if let Some(&unknown) = incidence[equation].iter().find(|&&unknown| equation_of[unknown] == NONE) {
            equation_of[unknown] = equation;
            unknown_of[equation] = unknown;
        }
    }
    let mut level = vec![NONE; incidence.len()];
    let mut next_edge = vec![0usize; incidence.len()];
    let mut queue = VecDeque::new();
    loop {
        // Breadth first from unmatched equations, over alternating paths.
        level.fill(NONE);
        queue.clear();
        for (equation, &unknown) in unknown_of.iter().enumerate() {
            if unknown == NONE {
                level[equation] = 0;
                queue.push_back(equation);
            }
        }
        let mut reached = false;
        while let Some(equation) = queue.pop_front() {
            for &unknown in &incidence[equation] {
                let other = equation_of[unknown];
                if other == NONE {
                    reached = true;
                } else if level[other] == NONE {
                    level[other] = level[equation] + 1;
                    queue.push_back(other);
                }
            }
        }
        if !reached {
            return (equation_of, unknown_of);
        }
        // Depth first along the levels, on a stack of our own.
        next_edge.fill(0);
        for start in 0..incidence.len() {
            if unknown_of[start] != NONE {
                continue;
            }
            let mut path: Vec<(usize, usize)> = Vec::new();
            let mut equation = start;
            loop {
                let Some(&unknown) = incidence[equation].get(next_edge[equation]) else {
                    level[equation] = NONE;
                    let Some((previous, _)) = path.pop() else { break };
                    equation = previous;
                    continue;
                };
                next_edge[equation] += 1;
                let other = equation_of[unknown];
                if other == NONE {
                    path.push((equation, unknown));
                    for (equation, unknown) in path {
                        equation_of[unknown] = equation;
                        unknown_of[equation] = unknown;
                    }
                    break;
                }
                if level[equation] != NONE && level[other] == level[equation] + 1 {
                    path.push((equation, unknown));
                    equation = other;
                }
            }
        }
    }
}

/// Strong components of "needs the unknown of", those needed first.
fn blocks(incidence: &[Vec<usize>], equation_of: &[usize], unknown_of: &[usize]) -> Vec<Block> {
    let n = incidence.len();
    let mut number = vec![NONE; n];
    let mut low = vec![0usize; n];
    let mut on_stack = vec![false; n];
    let mut stack = Vec::new();
    let mut calls: Vec<(usize, usize)> = Vec::new();
    let mut count = 0;
    let mut result = Vec::new();
    for start in 0..n {
        if number[start] != NONE || unknown_of[start] == NONE {
            continue;
        }
        calls.push((start, 0));
        while let Some((equation, edge)) = calls.pop() {
            if edge == 0 {
                number[equation] = count;
                low[equation] = count;
                count += 1;
                stack.push(equation);
                on_stack[equation] = true;
            }
            if let Some(&unknown) = incidence[equation].get(edge) {
                calls.push((equation, edge + 1));
                let other = equation_of[unknown];
                if other == NONE || other == equation {
                    continue;
                }
                if number[other] == NONE {
                    calls.push((other, 0));
                } else if on_stack[other] {
                    low[equation] = low[equation].min(number[other]);
                }
                continue;
            }
            if low[equation] == number[equation] {
                let mut block = Block::default();
                while let Some(member) = stack.pop() {
                    on_stack[member] = false;
                    block.equations.push(member);
                    block.unknowns.push(unknown_of[member]);
                    if member == equation {
                        break;
                    }
                }
                block.equations.sort_unstable();
                block.unknowns.sort_unstable();
                result.push(block);
            }
            if let Some(&(caller, _)) = calls.last() {
                low[caller] = low[caller].min(low[equation]);
            }
        }
    }
    result
}
