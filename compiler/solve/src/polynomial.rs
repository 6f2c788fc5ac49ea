//! Equations that are polynomials of the first or second degree in the unknown:
//! most energy balances are. Their roots are known in closed form, so nothing
//! has to be searched for.

use pintle_graph::{Function, Graph, NodeId, Op};

/// `c[0] + c[1] x + c[2] x^2` with the sums of absolute values that went into each.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(crate) struct Polynomial {
    pub(crate) c: [f64; 3],
    pub(crate) size: [f64; 3],
    degree: u8,
}

impl Polynomial {
    pub(crate) fn number(value: f64) -> Polynomial {
        Polynomial { c: [value, 0.0, 0.0], size: [value.abs(), 0.0, 0.0], degree: 0 }
    }

    /// The unknown itself.
    pub(crate) fn unknown() -> Polynomial {
        Polynomial { c: [0.0, 1.0, 0.0], size: [0.0, 1.0, 0.0], degree: 1 }
    }

    /// The number that it is, if it is one.
    pub(crate) fn constant(self) -> Option<f64> {
        (self.degree == 0).then_some(self.c[0])
    }

    pub(crate) fn value(self, x: f64) -> f64 {
        self.c[0] + x * (self.c[1] + x * self.c[2])
    }

    pub(crate) fn negated(self) -> Polynomial {
        Polynomial { c: self.c.map(|c| -c), ..self }
    }

    /// Where it changes sign, ascending; `None` where rounding could make or unmake a change.
    pub(crate) fn sign_changes(&self) -> Option<Vec<f64>> {
        // A number, or a multiple of x^2: one sign, whatever it is.
        if self.size[1] == 0.0 && (self.size[0] == 0.0 || self.size[2] == 0.0) {
            return Some(Vec::new());
        }
        if self.c == [0.0; 3] {
            return Some(Vec::new());
        }
        self.roots()
    }

    pub(crate) fn plus(self, other: Polynomial, sign: f64) -> Polynomial {
        let mut result = Polynomial { degree: self.degree.max(other.degree), ..self };
        for k in 0..3 {
            result.c[k] += sign * other.c[k];
            result.size[k] += other.size[k];
        }
        result
    }

    pub(crate) fn times(self, other: Polynomial) -> Option<Polynomial> {
        let degree = self.degree + other.degree;
        if degree > 2 {
            return None;
        }
        let mut result = Polynomial { degree, ..Polynomial::default() };
        for i in 0..=self.degree as usize {
            for j in 0..=other.degree as usize {
                result.c[i + j] += self.c[i] * other.c[j];
                result.size[i + j] += self.size[i] * other.size[j];
            }
        }
        Some(result)
    }

    pub(crate) fn divided_by(self, divisor: Polynomial) -> Option<Polynomial> {
        if divisor.degree > 0 || divisor.c[0] == 0.0 {
            return None;
        }
        let mut result = self;
        for k in 0..3 {
            result.c[k] /= divisor.c[0];
            result.size[k] /= divisor.c[0].abs();
        }
        Some(result)
    }

    /// All real roots, ascending; `None` where rounding could make or unmake one.
    pub(crate) fn roots(&self) -> Option<Vec<f64>> {
        const CLEAR: f64 = 1e-9;
        let [c, b, a] = self.c;
        let [size_c, size_b, size_a] = self.size;
        if !(a.is_finite() && b.is_finite() && c.is_finite()) {
            return None;
        }
        if size_a == 0.0 && size_b == 0.0 {
            return (c.abs() > CLEAR * size_c).then(Vec::new);
        }
        if size_a == 0.0 {
            return (b.abs() > CLEAR * size_b).then(|| vec![-c / b]);
        }
        let discriminant = b * b - 4.0 * a * c;
        let size = size_b * size_b + 4.0 * size_a * size_c;
        if a.abs() <= CLEAR * size_a || !size.is_finite() || discriminant.abs() <= CLEAR * size {
            return None;
        }
        if discriminant < 0.0 {
            return Some(Vec::new());
        }
        // The form without cancellation.
        let root = discriminant.sqrt();
        let q = -0.5 * if b >= 0.0 { b + root } else { b - root };
        let (one, two) = (q / a, c / q);
        Some(if one <= two { vec![one, two] } else { vec![two, one] })
    }
}

/// Whether every equation is of the first degree in all inputs together.
pub(crate) fn is_affine(graph: &Graph, outputs: &[NodeId]) -> bool {
    const OTHER: u8 = 2;
    let mut degree: Vec<u8> = Vec::with_capacity(graph.len());
    for &op in graph.ops() {
        let at = |node: NodeId| degree.get(node.index()).copied().unwrap_or(OTHER);
        let next = match op {
            Op::Literal(_) => 0,
            Op::Input(_) => 1,
            Op::Quantity(_, a) | Op::Apply(Function::Negate, a) | Op::Power(a, 1, 1) => at(a),
            Op::Add(a, b) | Op::Subtract(a, b) => at(a).max(at(b)),
            Op::Multiply(a, b) => at(a).saturating_add(at(b)).min(OTHER),
            Op::Divide(a, b) if at(b) == 0 => at(a),
            _ => OTHER,
        };
        degree.push(next);
    }
    outputs.iter().all(|output| degree.get(output.index()).is_some_and(|&degree| degree < OTHER))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(c: [f64; 3], expected: Option<&[f64]>) {
        let size = c.map(f64::abs);
        let found = Polynomial { c, size, degree: 2 }.roots();
        assert_eq!(found.as_deref(), expected);
    }

    #[test]
    fn roots_of_the_second_degree() {
        check([6.0, -5.0, 1.0], Some(&[2.0, 3.0]));
        check([1.0, 0.0, 1.0], Some(&[]));
        check([-4.0, 0.0, 1.0], Some(&[-2.0, 2.0]));
        check([-4.0, 2.0, 0.0], Some(&[2.0]));
    }

    #[test]
    fn doubtful_cases_are_left_to_the_search() {
        check([1.0, -2.0, 1.0], None);
        check([0.0, 0.0, 3.0], None);
        check([0.0, 0.0, 0.0], None);
        check([f64::NAN, 1.0, 0.0], None);
    }

    #[test]
    fn degree_of_all_unknowns_together() {
        let mut graph = Graph::new();
        let ((_, x), (_, y)) = (graph.input(), graph.input());
        let sum = graph.add(Op::Add(x, y));
        let product = graph.add(Op::Multiply(x, y));
        let root = graph.add(Op::Apply(Function::Sqrt, x));
        assert!(is_affine(&graph, &[sum, x]));
        assert!(!is_affine(&graph, &[sum, product]));
        assert!(!is_affine(&graph, &[root]));
    }

    #[test]
    fn changes_of_sign() {
        let of = |c: [f64; 3]| Polynomial { c, size: c.map(f64::abs), degree: 2 }.sign_changes();
        assert_eq!(of([0.0, 0.0, 3.0]), Some(vec![]));
        assert_eq!(of([5.0, 0.0, 0.0]), Some(vec![]));
        assert_eq!(of([0.0, 0.0, 0.0]), Some(vec![]));
        assert_eq!(of([-4.0, 0.0, 1.0]), Some(vec![-2.0, 2.0]));
        assert_eq!(of([1.0, -2.0, 1.0]), None);
    }
}
