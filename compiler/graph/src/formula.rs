//! The formula reading: a node as a tree to typeset, down to the next named
//! quantities. Symbols, numbers put in, MathML: all come from this one tree.

use crate::{CompareOp, Function, Graph, NodeId, Op, QuantityId};
use smol_str::SmolStr;

/// A formula as a tree.
#[derive(Clone, Debug, PartialEq)]
#[allow(missing_docs)]
pub enum Formula {
    /// A named quantity.
    Symbol(QuantityId),
    /// A number as written, with its unit.
    Number(SmolStr),
    /// An input without a name of its own.
    Input(u32),
    /// Terms with the sign in front of each.
    Sum(Vec<(bool, Formula)>),
    Product(Vec<Formula>),
    Fraction(Box<Formula>, Box<Formula>),
    /// Base, exponent `num/den`.
    Power(Box<Formula>, i32, i32),
    PowerOf(Box<Formula>, Box<Formula>),
    Root(Box<Formula>),
    Negative(Box<Formula>),
    Call(&'static str, Vec<Formula>),
    Compare(CompareOp, Box<Formula>, Box<Formula>),
    Logic(&'static str, Vec<Formula>),
    /// Value and condition of each arm, then the value elsewhere.
    Piecewise(Vec<(Formula, Formula)>, Box<Formula>),
    /// Too deep to show.
    Ellipsis,
}

/// Deeper trees are cut; no hand calculation has them on one line.
const DEPTH: u32 = 48;

/// The formula of `node`. At the top a name is opened; below it stops at names.
pub fn formula(graph: &Graph, node: NodeId) -> Formula {
    match graph.op(node) {
        Op::Quantity(_, inner) => read(graph, inner, DEPTH),
        _ => read(graph, node, DEPTH),
    }
}

fn read(graph: &Graph, node: NodeId, depth: u32) -> Formula {
    let Some(depth) = depth.checked_sub(1) else { return Formula::Ellipsis };
    let sub = |node| read(graph, node, depth);
    let boxed = |node| Box::new(read(graph, node, depth));
    match graph.op(node) {
        Op::Literal(literal) => Formula::Number(graph.literal(literal).1.clone()),
        Op::Input(input) => Formula::Input(input.0),
        Op::Quantity(quantity, _) => Formula::Symbol(quantity),
        Op::Add(..) | Op::Subtract(..) => {
            let mut terms = Vec::new();
            let mut rest = node;
            // Sums lean left; walk them in a loop, however long.
            loop {
                match graph.op(rest) {
                    Op::Add(a, b) => {
                        terms.push((false, sub(b)));
                        rest = a;
                    }
                    Op::Subtract(a, b) => {
                        terms.push((true, sub(b)));
                        rest = a;
                    }
                    _ => {
                        terms.push((false, sub(rest)));
                        break;
                    }
                }
            }
            terms.reverse();
            Formula::Sum(terms)
        }
        Op::Multiply(..) => {
            let mut factors = Vec::new();
            let mut rest = node;
            while let Op::Multiply(a, b) = graph.op(rest) {
                factors.push(sub(b));
                rest = a;
            }
            factors.push(sub(rest));
            factors.reverse();
            Formula::Product(factors)
        }
        Op::Divide(a, b) => Formula::Fraction(boxed(a), boxed(b)),
        Op::Power(a, 1, 2) => Formula::Root(boxed(a)),
        Op::Power(a, num, den) => Formula::Power(boxed(a), num, den),
        Op::PowerOf(a, b) => Formula::PowerOf(boxed(a), boxed(b)),
        Op::Apply(Function::Negate, a) => Formula::Negative(boxed(a)),
        Op::Apply(Function::Sqrt, a) => Formula::Root(boxed(a)),
        Op::Apply(Function::Not, a) => Formula::Logic("not", vec![sub(a)]),
        Op::Apply(function, a) => Formula::Call(function_name(function), vec![sub(a)]),
        Op::Atan2(a, b) => Formula::Call("atan2", vec![sub(a), sub(b)]),
        Op::Min(a, b) => Formula::Call("min", vec![sub(a), sub(b)]),
        Op::Max(a, b) => Formula::Call("max", vec![sub(a), sub(b)]),
        Op::Compare(op, a, b) => Formula::Compare(op, boxed(a), boxed(b)),
        Op::And(a, b) => Formula::Logic("and", vec![sub(a), sub(b)]),
        Op::Or(a, b) => Formula::Logic("or", vec![sub(a), sub(b)]),
        Op::Select(..) => {
            let mut arms = Vec::new();
            let mut rest = node;
            while let Op::Select(condition, value, otherwise) = graph.op(rest) {
                arms.push((sub(value), sub(condition)));
                rest = otherwise;
            }
            Formula::Piecewise(arms, boxed(rest))
        }
        Op::PrincipalMoment(tensor, _) | Op::PrincipalAxis(tensor, _, _) => {
            let name = match graph.op(node) {
                Op::PrincipalMoment(_, 0) => "least_moment",
                Op::PrincipalMoment(_, 1) => "middle_moment",
                Op::PrincipalMoment(..) => "greatest_moment",
                _ => "principal_axis",
            };
            Formula::Call(name, graph.tensor(tensor).iter().map(|&member| sub(member)).collect())
        }
    }
}

fn function_name(function: Function) -> &'static str {
    match function {
        Function::Negate => "-",
        Function::Abs => "abs",
        Function::Sqrt => "sqrt",
        Function::Exp => "exp",
        Function::Ln => "ln",
        Function::Log10 => "log10",
        Function::Sin => "sin",
        Function::Cos => "cos",
        Function::Tan => "tan",
        Function::Asin => "asin",
        Function::Acos => "acos",
        Function::Atan => "atan",
        Function::Sinh => "sinh",
        Function::Cosh => "cosh",
        Function::Tanh => "tanh",
        Function::Floor => "floor",
        Function::Ceil => "ceil",
        Function::Round => "round",
        Function::Sign => "sign",
        Function::Not => "not",
    }
}

/// How tightly an operator binds, to place brackets.
fn rank(formula: &Formula) -> u8 {
    match formula {
        Formula::Piecewise(..) | Formula::Logic(..) => 0,
        Formula::Compare(..) => 1,
        Formula::Sum(_) => 2,
        Formula::Negative(_) => 3,
        Formula::Product(_) | Formula::Fraction(..) => 4,
        Formula::Power(..) | Formula::PowerOf(..) => 5,
        _ => 6,
    }
}

impl Formula {
    /// As one line of plain text; `symbol` writes a named quantity (its name,
    /// or its value where numbers are put in), `input` an unnamed input.
    pub fn text(&self, symbol: &dyn Fn(QuantityId) -> String, input: &dyn Fn(u32) -> String) -> String {
        let mut out = String::new();
        self.write(&mut out, symbol, input);
        out
    }

    fn write(&self, out: &mut String, symbol: &dyn Fn(QuantityId) -> String, input: &dyn Fn(u32) -> String) {
        let list = |out: &mut String, items: &[Formula], between: &str| {
            for (at, item) in items.iter().enumerate() {
                if at > 0 {
                    out.push_str(between);
                }
                item.write(out, symbol, input);
            }
        };
        let nested = |out: &mut String, item: &Formula, least: u8| {
            // A number with a unit, or a value put in, is a product in disguise under a power.
            let text = item.text(symbol, input);
            let disguised = least > 4 && text.contains(' ') && rank(item) == 6 && !text.ends_with(')');
            if rank(item) < least || disguised {
                out.push('(');
                out.push_str(&text);
                out.push(')');
            } else {
                out.push_str(&text);
            }
        };
        match self {
            Formula::Symbol(quantity) => out.push_str(&symbol(*quantity)),
            Formula::Number(text) => out.push_str(text),
            Formula::Input(index) => out.push_str(&input(*index)),
            Formula::Sum(terms) => {
                for (at, (negative, term)) in terms.iter().enumerate() {
                    match (at, negative) {
                        (0, false) => {}
                        (0, true) => out.push('-'),
                        (_, false) => out.push_str(" + "),
                        (_, true) => out.push_str(" - "),
                    }
                    nested(out, term, if *negative { 3 } else { 2 });
                }
            }
            Formula::Product(factors) => {
                for (at, factor) in factors.iter().enumerate() {
                    if at > 0 {
                        out.push_str(" * ");
                    }
                    nested(out, factor, 4);
                }
            }
            Formula::Fraction(a, b) => {
                nested(out, a, 4);
                out.push_str(" / ");
                nested(out, b, 5);
            }
            Formula::Power(a, num, den) => {
                nested(out, a, 6);
                if *den == 1 {
                    out.push_str(&format!("^{num}"));
                } else {
                    out.push_str(&format!("^({num}/{den})"));
                }
            }
            Formula::PowerOf(a, b) => {
                nested(out, a, 6);
                out.push('^');
                nested(out, b, 6);
            }
            Formula::Root(a) => {
                out.push_str("sqrt(");
                a.write(out, symbol, input);
                out.push(')');
            }
            Formula::Negative(a) => {
                out.push('-');
                nested(out, a, 4);
            }
            Formula::Call(name, arguments) => {
                out.push_str(name);
                out.push('(');
                list(out, arguments, ", ");
                out.push(')');
            }
            Formula::Compare(op, a, b) => {
                nested(out, a, 2);
                out.push_str(&format!(" {} ", op.symbol()));
                nested(out, b, 2);
            }
            Formula::Logic("not", items) => {
                out.push_str("not ");
                for item in items {
                    nested(out, item, 1);
                }
            }
            Formula::Logic(word, items) => {
                for (at, item) in items.iter().enumerate() {
                    if at > 0 {
                        out.push_str(&format!(" {word} "));
                    }
                    nested(out, item, 1);
                }
            }
            Formula::Piecewise(arms, otherwise) => {
                for (value, condition) in arms {
                    value.write(out, symbol, input);
                    out.push_str(" when ");
                    condition.write(out, symbol, input);
                    out.push_str("; ");
                }
                otherwise.write(out, symbol, input);
                out.push_str(" otherwise");
            }
            Formula::Ellipsis => out.push('…'),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn text(graph: &Graph, node: NodeId) -> String {
        formula(graph, node).text(&|q| format!("q{}", q.0), &|i| format!("i{i}"))
    }

    #[test]
    fn formulas_stop_at_names() {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let m = graph.add(Op::Quantity(QuantityId(0), x));
        let v = graph.number(2.0, "2 m/s");
        let square = graph.add(Op::Power(v, 2, 1));
        let half = graph.number(2.0, "2");
        let one = graph.number(1.0, "1");
        let fraction = graph.add(Op::Divide(one, half));
        let product = graph.add(Op::Multiply(fraction, m));
        let energy = graph.add(Op::Multiply(product, square));
        let named = graph.add(Op::Quantity(QuantityId(1), energy));
        assert_eq!(text(&graph, named), "1 / 2 * q0 * (2 m/s)^2");
    }

    #[test]
    fn brackets_only_where_needed() {
        let mut graph = Graph::new();
        let (_, a) = graph.input();
        let (_, b) = graph.input();
        let sum = graph.add(Op::Add(a, b));
        let difference = graph.add(Op::Subtract(a, sum));
        assert_eq!(text(&graph, difference), "i0 - (i0 + i1)");
        let product = graph.add(Op::Multiply(sum, sum));
        assert_eq!(text(&graph, product), "(i0 + i1) * (i0 + i1)");
        let ratio = graph.add(Op::Divide(a, product));
        assert_eq!(text(&graph, ratio), "i0 / ((i0 + i1) * (i0 + i1))");
    }

    #[test]
    fn long_sums_and_deep_nests_end() {
        let mut graph = Graph::new();
        let (_, x) = graph.input();
        let mut sum = x;
        for _ in 0..100_000 {
            sum = graph.add(Op::Add(sum, x));
        }
        assert!(matches!(formula(&graph, sum), Formula::Sum(terms) if terms.len() == 100_001));
        let mut deep = x;
        for _ in 0..100_000 {
            deep = graph.add(Op::Apply(Function::Sin, deep));
        }
        assert!(text(&graph, deep).contains('…'));
    }
}
