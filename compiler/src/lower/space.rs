//! Vectors, rotations and tensors whose members are nodes of the graph.
//!
//! The makers here drop factors of one and terms of zero as they go, so that
//! the formula of a coaxial part stays the formula that an engineer writes.
//! They know no units: members are in coherent SI.

use pintle_graph::{Function, Graph, NodeId, Op};

/// Three components x, y, z.
pub type Vector = [NodeId; 3];

/// Rows of a rotation.
pub type Rotation = [[NodeId; 3]; 3];

/// Members xx, yy, zz, xy, xz, yz of a symmetric tensor.
pub type Tensor = [NodeId; 6];

/// Arithmetic on nodes.
pub trait Arithmetic {
    /// The graph that is written to.
    fn graph(&mut self) -> &mut Graph;

    /// A plain number.
    fn num(&mut self, value: f64) -> NodeId {
        self.graph().plain_number(value)
    }

    /// The value of a literal node.
    fn known(&mut self, node: NodeId) -> Option<f64> {
        self.graph().literal_value(node)
    }

    /// Whether the node is the literal 0.
    fn is_zero(&mut self, node: NodeId) -> bool {
        self.known(node) == Some(0.0)
    }

    /// `a + b`
    fn plus(&mut self, a: NodeId, b: NodeId) -> NodeId {
        match (self.known(a), self.known(b)) {
            (Some(0.0), _) => b,
            (_, Some(0.0)) => a,
            _ => self.graph().add(Op::Add(a, b)),
        }
    }

    /// `a - b`
    fn minus(&mut self, a: NodeId, b: NodeId) -> NodeId {
        match (self.known(a), self.known(b)) {
            _ if a == b => self.num(0.0),
            (Some(0.0), _) => self.negate(b),
            (_, Some(0.0)) => a,
            _ => self.graph().add(Op::Subtract(a, b)),
        }
    }

    /// `a * b`
    fn times(&mut self, a: NodeId, b: NodeId) -> NodeId {
        match (self.known(a), self.known(b)) {
            (Some(0.0), _) => a,
            (_, Some(0.0)) => b,
            (Some(1.0), _) => b,
            (_, Some(1.0)) => a,
            (Some(-1.0), _) => self.negate(b),
            (_, Some(-1.0)) => self.negate(a),
            _ if a == b => self.square(a),
            _ => self.graph().add(Op::Multiply(a, b)),
        }
    }

    /// `a / b`
    fn over(&mut self, a: NodeId, b: NodeId) -> NodeId {
        match (self.known(a), self.known(b)) {
            (Some(0.0), _) => a,
            (_, Some(1.0)) => a,
            _ => self.graph().add(Op::Divide(a, b)),
        }
    }

    /// `a^2`
    fn square(&mut self, a: NodeId) -> NodeId {
        match self.known(a) {
            Some(value) if value == 0.0 || value == 1.0 => a,
            _ => self.graph().add(Op::Power(a, 2, 1)),
        }
    }

    /// `-a`
    fn negate(&mut self, a: NodeId) -> NodeId {
        if let Some(value) = self.known(a) {
            return if value == 0.0 { a } else { self.num(-value) };
        }
        match self.graph().op(a) {
            Op::Apply(Function::Negate, inner) => inner,
            _ => self.graph().add(Op::Apply(Function::Negate, a)),
        }
    }

    /// Square root.
    fn root(&mut self, a: NodeId) -> NodeId {
        match self.known(a) {
            Some(value) if value == 0.0 || value == 1.0 => a,
            _ => self.graph().add(Op::Power(a, 1, 2)),
        }
    }

    /// A function of one argument.
    fn apply(&mut self, function: Function, a: NodeId) -> NodeId {
        self.graph().add(Op::Apply(function, a))
    }

    /// Sum of terms; equal terms become one product.
    fn sum(&mut self, terms: &[NodeId]) -> NodeId {
        let mut counted: Vec<(NodeId, u32)> = Vec::new();
        for &term in terms {
            if self.is_zero(term) {
                continue;
            }
            match counted.iter_mut().find(|(known, _)| *known == term) {
                Some((_, count)) => *count += 1,
                None => counted.push((term, 1)),
            }
        }
        let mut total = None;
        for (term, count) in counted {
            let term = if count == 1 {
                term
            } else {
                let count = self.num(f64::from(count));
                self.times(count, term)
            };
            total = Some(match total {
                None => term,
                Some(total) => self.plus(total, term),
            });
        }
        total.unwrap_or_else(|| self.num(0.0))
    }

    /// Cosine and sine; quarter turns of literal angles are exact.
    fn cos_sin(&mut self, angle: NodeId) -> (NodeId, NodeId) {
        if let Some(value) = self.known(angle) {
            let quarters = value / std::f64::consts::FRAC_PI_2;
            let whole = quarters.round();
            if (quarters - whole).abs() < 1e-14 && whole.abs() < 1e6 {
                let (cos, sin) = match whole.rem_euclid(4.0) as u8 {
                    0 => (1.0, 0.0),
                    1 => (0.0, 1.0),
                    2 => (-1.0, 0.0),
                    _ => (0.0, -1.0),
                };
                return (self.num(cos), self.num(sin));
            }
        }
        (self.apply(Function::Cos, angle), self.apply(Function::Sin, angle))
    }

    /// The vector of zeros.
    fn origin(&mut self) -> Vector {
        [self.num(0.0); 3]
    }

    /// The rotation that does nothing.
    fn identity(&mut self) -> Rotation {
        let (zero, one) = (self.num(0.0), self.num(1.0));
        [[one, zero, zero], [zero, one, zero], [zero, zero, one]]
    }

    /// Turn by `angle` about x (0), y (1) or z (2).
    fn turn(&mut self, axis: usize, angle: NodeId) -> Rotation {
        let (cos, sin) = self.cos_sin(angle);
        let minus_sin = self.negate(sin);
        let mut rotation = self.identity();
        let (i, j) = ((axis + 1) % 3, (axis + 2) % 3);
        rotation[i][i] = cos;
        rotation[j][j] = cos;
        rotation[i][j] = minus_sin;
        rotation[j][i] = sin;
        rotation
    }

    /// The shortest turn that takes x to the unit vector `u`.
    fn turn_x_to(&mut self, u: Vector) -> Rotation {
        let one = self.num(1.0);
        if self.known(u[0]) == Some(1.0) {
            return self.identity();
        }
        if self.known(u[0]) == Some(-1.0) {
            let half = self.num(std::f64::consts::PI);
            return self.turn(2, half);
        }
        let denominator = self.plus(one, u[0]);
        let (minus_y, minus_z) = (self.negate(u[1]), self.negate(u[2]));
        let entry = |this: &mut Self, a: NodeId, b: NodeId| {
            let product = this.times(a, b);
            this.over(product, denominator)
        };
        let (yy, yz, zz) = (entry(self, u[1], u[1]), entry(self, u[1], u[2]), entry(self, u[2], u[2]));
        let middle = self.minus(one, yy);
        let corner = self.minus(one, zz);
        let minus_yz = self.negate(yz);
        [[u[0], minus_y, minus_z], [u[1], middle, minus_yz], [u[2], minus_yz, corner]]
    }

    /// `a` after `b`.
    fn compose(&mut self, a: &Rotation, b: &Rotation) -> Rotation {
        let mut result = self.identity();
        for i in 0..3 {
            for j in 0..3 {
                let terms = [self.times(a[i][0], b[0][j]), self.times(a[i][1], b[1][j]), self.times(a[i][2], b[2][j])];
                result[i][j] = self.sum(&terms);
            }
        }
        result
    }

    /// The vector turned.
    fn turned(&mut self, rotation: &Rotation, v: Vector) -> Vector {
        rotation.map(|row| {
            let terms = [self.times(row[0], v[0]), self.times(row[1], v[1]), self.times(row[2], v[2])];
            self.sum(&terms)
        })
    }

    /// `a + b`, by component.
    fn shifted(&mut self, a: Vector, b: Vector) -> Vector {
        [self.plus(a[0], b[0]), self.plus(a[1], b[1]), self.plus(a[2], b[2])]
    }

    /// `a - b`, by component.
    fn between(&mut self, a: Vector, b: Vector) -> Vector {
        [self.minus(a[0], b[0]), self.minus(a[1], b[1]), self.minus(a[2], b[2])]
    }

    /// Scalar product.
    fn dot(&mut self, a: Vector, b: Vector) -> NodeId {
        let terms = [self.times(a[0], b[0]), self.times(a[1], b[1]), self.times(a[2], b[2])];
        self.sum(&terms)
    }

    /// The tensor seen after turning its body.
    fn turned_tensor(&mut self, rotation: &Rotation, t: &Tensor) -> Tensor {
        let identity = self.identity();
        if *rotation == identity {
            return *t;
        }
        // A body round about x does not notice a turn about x.
        let about_x =
            rotation[0] == identity[0] && rotation[1][0] == identity[1][0] && rotation[2][0] == identity[2][0];
        if about_x && t[1] == t[2] && t[3..].iter().all(|&member| self.is_zero(member)) {
            return *t;
        }
        let full = [[t[0], t[3], t[4]], [t[3], t[1], t[5]], [t[4], t[5], t[2]]];
        let mut entry = |i: usize, j: usize| {
            let mut terms = Vec::with_capacity(9);
            for (k, row) in full.iter().enumerate() {
                for (l, &member) in row.iter().enumerate() {
                    let factor = self.times(rotation[i][k], rotation[j][l]);
                    terms.push(self.times(factor, member));
                }
            }
            self.sum(&terms)
        };
        [entry(0, 0), entry(1, 1), entry(2, 2), entry(0, 1), entry(0, 2), entry(1, 2)]
    }

    /// The tensor of a point mass at `d`: m (d.d 1 - d d^T), off-diagonal
    /// members with their minus sign.
    fn point_tensor(&mut self, mass: NodeId, d: Vector) -> Tensor {
        let squares = d.map(|component| self.square(component));
        let mut diagonal = |i: usize, j: usize| {
            let sum = self.plus(squares[i], squares[j]);
            self.times(mass, sum)
        };
        let (xx, yy, zz) = (diagonal(1, 2), diagonal(0, 2), diagonal(0, 1));
        let mut product = |i: usize, j: usize| {
            let product = self.times(d[i], d[j]);
            let product = self.times(mass, product);
            self.negate(product)
        };
        [xx, yy, zz, product(0, 1), product(0, 2), product(1, 2)]
    }

    /// Sum of tensors, member by member.
    fn tensor_sum(&mut self, tensors: &[Tensor]) -> Tensor {
        std::array::from_fn(|member| {
            let terms: Vec<NodeId> = tensors.iter().map(|tensor| tensor[member]).collect();
            self.sum(&terms)
        })
    }

    /// `u . t . u`: the moment about an axis along the unit vector `u`.
    fn along(&mut self, t: &Tensor, u: Vector) -> NodeId {
        let two = self.num(2.0);
        let mut terms = Vec::with_capacity(6);
        for i in 0..3 {
            let square = self.square(u[i]);
            terms.push(self.times(square, t[i]));
        }
        for (member, (i, j)) in [(3, (0, 1)), (4, (0, 2)), (5, (1, 2))] {
            let factor = self.times(u[i], u[j]);
            let factor = self.times(two, factor);
            terms.push(self.times(factor, t[member]));
        }
        self.sum(&terms)
    }

    /// Square of the distance of the point `d` from the line through the
    /// origin along the unit vector `u`.
    fn distance_squared(&mut self, d: Vector, u: Vector) -> NodeId {
        // Along a coordinate axis only the other two components count; this
        // keeps m (y^2 + z^2) free of cancellation.
        for axis in 0..3 {
            if self.known(u[axis]).is_some_and(|value| value.abs() == 1.0) {
                let (i, j) = ((axis + 1) % 3, (axis + 2) % 3);
                let (a, b) = (self.square(d[i]), self.square(d[j]));
                return self.plus(a, b);
            }
        }
        let mut cross = |i: usize, j: usize| {
            let (a, b) = (self.times(d[i], u[j]), self.times(d[j], u[i]));
            let component = self.minus(a, b);
            self.square(component)
        };
        let terms = [cross(1, 2), cross(2, 0), cross(0, 1)];
        self.sum(&terms)
    }
}

impl Arithmetic for Graph {
    fn graph(&mut self) -> &mut Graph {
        self
    }
}

/// A number as short text.
pub fn plain(value: f64) -> String {
    if value == value.trunc() && value.abs() < 1e15 { format!("{value:.0}") } else { format!("{value}") }
}

#[cfg(test)]
mod tests {
    use super::*;
    use pintle_graph::evaluate;

    #[track_caller]
    fn check(graph: &Graph, node: NodeId, expected: f64) {
        let value = evaluate(graph, &[])[node.index()];
        assert!((value - expected).abs() < 1e-14, "{value} against {expected}");
    }

    #[test]
    fn zeros_and_ones_leave_no_trace() {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let (zero, one) = (graph.num(0.0), graph.num(1.0));
        assert_eq!(graph.times(x, one), x);
        assert_eq!(graph.plus(zero, x), x);
        let sum = graph.sum(&[x, zero, x]);
        assert!(matches!(graph.op(sum), Op::Multiply(..)));
    }

    #[test]
    fn turns_follow_the_right_hand() {
        let mut graph = Graph::new();
        let quarter = graph.num(std::f64::consts::FRAC_PI_2);
        let rotation = graph.turn(2, quarter);
        let (zero, one) = (graph.num(0.0), graph.num(1.0));
        let v = graph.turned(&rotation, [one, zero, zero]);
        assert_eq!(v, [zero, one, zero]);
    }

    #[test]
    fn shortest_turn_takes_x_to_the_axis() {
        let mut graph = Graph::new();
        let u = [2.0 / 7.0, 3.0 / 7.0, 6.0 / 7.0].map(|x| graph.num(x));
        let rotation = graph.turn_x_to(u);
        let (zero, one) = (graph.num(0.0), graph.num(1.0));
        let v = graph.turned(&rotation, [one, zero, zero]);
        for (node, expected) in v.into_iter().zip([2.0 / 7.0, 3.0 / 7.0, 6.0 / 7.0]) {
            check(&graph, node, expected);
        }
        let w = graph.turned(&rotation, [zero, one, zero]);
        let length = graph.dot(w, w);
        check(&graph, length, 1.0);
        let across = graph.dot(v, w);
        check(&graph, across, 0.0);
    }

    #[test]
    fn moment_about_a_skew_axis() {
        let mut graph = Graph::new();
        let t = [3.0, 4.0, 5.0, -0.5, 0.25, 0.0].map(|x| graph.num(x));
        let u = [1.0 / 3.0, 2.0 / 3.0, 2.0 / 3.0].map(|x| graph.num(x));
        let moment = graph.along(&t, u);
        let by_hand = 3.0 / 9.0 + 4.0 * 4.0 / 9.0 + 5.0 * 4.0 / 9.0 - 2.0 * 0.5 * 2.0 / 9.0 + 2.0 * 0.25 * 2.0 / 9.0;
        check(&graph, moment, by_hand);
    }
}
