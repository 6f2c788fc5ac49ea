//! From loose triangles to closed, consistently oriented shells.

use crate::mass::MeshFault;
use crate::vector::Point;
use std::collections::HashMap;

/// Corners, and triangles as places in the list of corners.
pub(crate) struct Surface {
    pub points: Vec<Point>,
    pub faces: Vec<[usize; 3]>,
}

impl Surface {
    /// Corners merged where they are equal to the bit, -0 being 0. Nearly
    /// equal ones stay apart: what is one point is the writer's business.
    pub fn merge(triangles: &[[Point; 3]]) -> Surface {
        let mut known: HashMap<[u64; 3], usize> = HashMap::new();
        let mut points = Vec::new();
        let mut number = |corner: Point| {
            let corner = corner.map(|value| value + 0.0);
            *known.entry(corner.map(f64::to_bits)).or_insert_with(|| {
                points.push(corner);
                points.len() - 1
            })
        };
        let faces = triangles.iter().map(|triangle| triangle.map(&mut number)).collect();
        Surface { points, faces }
    }

    pub fn corners(&self, face: usize) -> [Point; 3] {
        self.faces[face].map(|at| self.points[at])
    }

    /// Faces of each shell: what hangs together by edges. Every edge must be
    /// used exactly twice, once in each sense.
    pub fn shells(&self) -> Result<Vec<Vec<usize>>, MeshFault> {
        let mut edges: Vec<Edge> = Vec::with_capacity(3 * self.faces.len());
        for (face, &[a, b, c]) in self.faces.iter().enumerate() {
            for (from, to) in [(a, b), (b, c), (c, a)] {
                edges.push(Edge { ends: (from.min(to), from.max(to)), forward: from < to, face });
            }
        }
        edges.sort_unstable();
        let mut groups = Groups::new(self.faces.len());
        let mut faults = Faults::default();
        for uses in edges.chunk_by(|a, b| a.ends == b.ends) {
            match uses {
                [a, b] if a.forward != b.forward => groups.join(a.face, b.face),
                [a] => faults.open.push(a.ends.0),
                [a, _] => faults.inconsistent.push(a.ends.0),
                uses => faults.branching.extend(uses.first().map(|a| a.ends.0)),
            }
        }
        match faults.first(&self.points) {
            Some(fault) => Err(fault),
            None => Ok(groups.lists()),
        }
    }
}

#[derive(PartialEq, Eq, PartialOrd, Ord)]
struct Edge {
    ends: (usize, usize),
    forward: bool,
    face: usize,
}

/// Where edges are at fault, each by its first corner.
#[derive(Default)]
struct Faults {
    open: Vec<usize>,
    branching: Vec<usize>,
    inconsistent: Vec<usize>,
}

impl Faults {
    /// The gravest kind: a hole makes neighbours look inconsistent, not the other way round.
    fn first(&self, points: &[Point]) -> Option<MeshFault> {
        let place = |list: &[usize]| list.first().and_then(|&at| points.get(at)).copied();
        let open = place(&self.open).map(|at| MeshFault::Open(self.open.len(), at));
        let branching = || place(&self.branching).map(|at| MeshFault::Branching(self.branching.len(), at));
        let inconsistent = || place(&self.inconsistent).map(|at| MeshFault::Inconsistent(self.inconsistent.len(), at));
        open.or_else(branching).or_else(inconsistent)
    }
}

/// Disjoint sets of faces.
struct Groups {
    parent: Vec<usize>,
}

impl Groups {
    fn new(n: usize) -> Groups {
        Groups { parent: (0..n).collect() }
    }

    fn root(&mut self, mut at: usize) -> usize {
        while self.parent[at] != at {
            self.parent[at] = self.parent[self.parent[at]];
            at = self.parent[at];
        }
        at
    }

    /// The smaller number leads, so that the order of shells is the file's.
    fn join(&mut self, a: usize, b: usize) {
        let (a, b) = (self.root(a), self.root(b));
        self.parent[a.max(b)] = a.min(b);
    }

    fn lists(mut self) -> Vec<Vec<usize>> {
        let mut place: Vec<usize> = vec![0; self.parent.len()];
        let mut lists: Vec<Vec<usize>> = Vec::new();
        for face in 0..self.parent.len() {
            let root = self.root(face);
            if root == face {
                place[face] = lists.len();
                lists.push(Vec::new());
            }
            lists[place[root]].push(face);
        }
        lists
    }
}
