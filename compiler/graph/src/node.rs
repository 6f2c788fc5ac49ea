//! The arena: nodes, and how they are made.

use hashbrown::HashTable;
use smol_str::SmolStr;
use std::collections::HashMap;
use std::hash::BuildHasher;

/// A map with a quick hash and no random seed. Never iterate over it into output.
type QuickMap<K, V> = HashMap<K, V, foldhash::fast::FixedState>;

/// A node of the graph.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct NodeId(pub u32);

impl NodeId {
    /// Position in the arena.
    pub fn index(self) -> usize {
        self.0 as usize
    }
}

/// A value that comes from outside the graph: a given, a toleranced size, an unknown.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct InputId(pub u32);

/// An exact number as written.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct LiteralId(pub u32);

/// A named quantity; the table of names is its owner's.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct QuantityId(pub u32);

/// Six members of a symmetric tensor, read by [`Op::PrincipalMoment`] and [`Op::PrincipalAxis`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct TensorId(pub u32);

/// Functions of one argument.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[allow(missing_docs)]
pub enum Function {
    Negate,
    Abs,
    Sqrt,
    Exp,
    Ln,
    Log10,
    Sin,
    Cos,
    Tan,
    Asin,
    Acos,
    Atan,
    Sinh,
    Cosh,
    Tanh,
    Floor,
    Ceil,
    Round,
    Sign,
    Not,
}

/// Comparisons; they yield 1 or 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[allow(missing_docs)]
pub enum CompareOp {
    Equal,
    NotEqual,
    Less,
    LessEqual,
    Greater,
    GreaterEqual,
}

impl CompareOp {
    /// Whether `a OP b` holds.
    pub fn holds(self, a: f64, b: f64) -> bool {
        match self {
            CompareOp::Equal => a == b,
            CompareOp::NotEqual => a != b,
            CompareOp::Less => a < b,
            CompareOp::LessEqual => a <= b,
            CompareOp::Greater => a > b,
            CompareOp::GreaterEqual => a >= b,
        }
    }

    /// As text.
    pub fn symbol(self) -> &'static str {
        match self {
            CompareOp::Equal => "==",
            CompareOp::NotEqual => "!=",
            CompareOp::Less => "<",
            CompareOp::LessEqual => "<=",
            CompareOp::Greater => ">",
            CompareOp::GreaterEqual => ">=",
        }
    }
}

/// What a node does.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[allow(missing_docs)]
pub enum Op {
    Literal(LiteralId),
    Input(InputId),
    /// The same value under a name; formulas stop here.
    Quantity(QuantityId, NodeId),
    Add(NodeId, NodeId),
    Subtract(NodeId, NodeId),
    Multiply(NodeId, NodeId),
    Divide(NodeId, NodeId),
    /// Constant rational exponent `num/den`, `den > 0`.
    Power(NodeId, i32, i32),
    PowerOf(NodeId, NodeId),
    Apply(Function, NodeId),
    Atan2(NodeId, NodeId),
    Min(NodeId, NodeId),
    Max(NodeId, NodeId),
    Compare(CompareOp, NodeId, NodeId),
    And(NodeId, NodeId),
    Or(NodeId, NodeId),
    /// Condition, value where it holds, value elsewhere.
    Select(NodeId, NodeId, NodeId),
    /// Principal moment, 0 = least.
    PrincipalMoment(TensorId, u8),
    /// Component of a unit principal axis.
    PrincipalAxis(TensorId, u8, u8),
}

impl Op {
    /// The same operation on other operands. The six members behind a tensor are the graph's and stay.
    pub fn with_operands(self, mut f: impl FnMut(NodeId) -> NodeId) -> Op {
        match self {
            Op::Literal(_) | Op::Input(_) | Op::PrincipalMoment(..) | Op::PrincipalAxis(..) => self,
            Op::Quantity(quantity, a) => Op::Quantity(quantity, f(a)),
            Op::Add(a, b) => Op::Add(f(a), f(b)),
            Op::Subtract(a, b) => Op::Subtract(f(a), f(b)),
            Op::Multiply(a, b) => Op::Multiply(f(a), f(b)),
            Op::Divide(a, b) => Op::Divide(f(a), f(b)),
            Op::Power(a, num, den) => Op::Power(f(a), num, den),
            Op::PowerOf(a, b) => Op::PowerOf(f(a), f(b)),
            Op::Apply(function, a) => Op::Apply(function, f(a)),
            Op::Atan2(a, b) => Op::Atan2(f(a), f(b)),
            Op::Min(a, b) => Op::Min(f(a), f(b)),
            Op::Max(a, b) => Op::Max(f(a), f(b)),
            Op::Compare(compare, a, b) => Op::Compare(compare, f(a), f(b)),
            Op::And(a, b) => Op::And(f(a), f(b)),
            Op::Or(a, b) => Op::Or(f(a), f(b)),
            Op::Select(c, a, b) => Op::Select(f(c), f(a), f(b)),
        }
    }
}

/// The arena of nodes with its tables.
#[derive(Clone, Debug, Default)]
pub struct Graph {
    ops: Vec<Op>,
    /// By what they do. Holds numbers only, the operations stand in `ops`: a table of a large sheet stays in cache.
    known: HashTable<NodeId>,
    literals: Vec<(f64, SmolStr)>,
    literals_known: QuickMap<(u64, SmolStr), LiteralId>,
    n_inputs: u32,
    tensors: Vec<[NodeId; 6]>,
    tensors_known: QuickMap<[NodeId; 6], TensorId>,
    usual: [Option<NodeId>; USUAL.len()],
}

/// Numbers that formulas are full of; [`Graph::plain_number`] remembers their nodes.
const USUAL: [(f64, &str); 6] = [(0.0, "0"), (1.0, "1"), (2.0, "2"), (0.5, "0.5"), (-1.0, "-1"), (4.0, "4")];

fn hash(op: &Op) -> u64 {
    foldhash::fast::FixedState::default().hash_one(op)
}

impl Graph {
    /// An empty graph.
    pub fn new() -> Graph {
        Graph::default()
    }

    /// Room for about as many further nodes.
    pub fn reserve(&mut self, nodes: usize) {
        self.ops.reserve(nodes);
        let ops = &self.ops;
        self.known.reserve(nodes, |node| hash(&ops[node.index()]));
    }

    /// Number of nodes.
    pub fn len(&self) -> usize {
        self.ops.len()
    }

    /// Whether there is no node yet.
    pub fn is_empty(&self) -> bool {
        self.ops.is_empty()
    }

    /// Number of inputs.
    pub fn n_inputs(&self) -> usize {
        self.n_inputs as usize
    }

    /// What `node` does.
    pub fn op(&self, node: NodeId) -> Op {
        self.ops[node.index()]
    }

    /// All operations in order.
    pub fn ops(&self) -> &[Op] {
        &self.ops
    }

    /// Value and text of a literal.
    pub fn literal(&self, literal: LiteralId) -> (f64, &SmolStr) {
        let (value, text) = &self.literals[literal.0 as usize];
        (*value, text)
    }

    /// The members xx, yy, zz, xy, xz, yz of a tensor.
    pub fn tensor(&self, tensor: TensorId) -> [NodeId; 6] {
        self.tensors[tensor.0 as usize]
    }

    /// The node that does `op`, made if there is none yet.
    pub fn add(&mut self, op: Op) -> NodeId {
        let ops = &mut self.ops;
        let entry = self.known.entry(hash(&op), |node| ops[node.index()] == op, |node| hash(&ops[node.index()]));
        if let hashbrown::hash_table::Entry::Occupied(known) = entry {
            return *known.get();
        }
        let node = NodeId(ops.len() as u32);
        entry.insert(node);
        ops.push(op);
        node
    }

    /// A node for `op` without looking whether there is one already: for graphs
    /// copied from one that has no equal nodes.
    pub(crate) fn push(&mut self, op: Op) -> NodeId {
        let node = NodeId(self.ops.len() as u32);
        self.ops.push(op);
        node
    }

    /// A number without a text of its own, not shared.
    pub(crate) fn push_number(&mut self, si: f64) -> NodeId {
        let literal = LiteralId(self.literals.len() as u32);
        self.literals.push((si, SmolStr::default()));
        self.push(Op::Literal(literal))
    }

    /// A tensor, not shared.
    pub(crate) fn push_tensor(&mut self, members: [NodeId; 6]) -> TensorId {
        let tensor = TensorId(self.tensors.len() as u32);
        self.tensors.push(members);
        tensor
    }

    /// Room for inputs numbered from 0.
    pub(crate) fn set_inputs(&mut self, n_inputs: u32) {
        self.n_inputs = n_inputs;
    }

    /// A new input.
    pub fn input(&mut self) -> (InputId, NodeId) {
        let input = InputId(self.n_inputs);
        self.n_inputs += 1;
        (input, self.add(Op::Input(input)))
    }

    /// An exact number, in SI, with its text for formulas.
    pub fn number(&mut self, si: f64, text: &str) -> NodeId {
        let key = (si.to_bits(), SmolStr::new(text));
        let literal = match self.literals_known.get(&key) {
            Some(&literal) => literal,
            None => {
                let literal = LiteralId(self.literals.len() as u32);
                self.literals.push((si, key.1.clone()));
                self.literals_known.insert(key, literal);
                literal
            }
        };
        self.add(Op::Literal(literal))
    }

    /// An exact number without a unit.
    pub fn plain_number(&mut self, value: f64) -> NodeId {
        let Some(at) = USUAL.iter().position(|(usual, _)| usual.to_bits() == value.to_bits()) else {
            let whole = value == value.trunc() && value.abs() < 1e15;
            let text = if whole { format!("{value:.0}") } else { format!("{value}") };
            return self.number(value, &text);
        };
        if let Some(node) = self.usual[at] {
            return node;
        }
        let node = self.number(value, USUAL[at].1);
        self.usual[at] = Some(node);
        node
    }

    /// The tensor of six members xx, yy, zz, xy, xz, yz.
    pub fn tensor_of(&mut self, members: [NodeId; 6]) -> TensorId {
        if let Some(&tensor) = self.tensors_known.get(&members) {
            return tensor;
        }
        let tensor = TensorId(self.tensors.len() as u32);
        self.tensors.push(members);
        self.tensors_known.insert(members, tensor);
        tensor
    }

    /// The value of `node` if it is a plain literal.
    pub fn literal_value(&self, node: NodeId) -> Option<f64> {
        match self.op(node) {
            Op::Literal(literal) => Some(self.literal(literal).0),
            _ => None,
        }
    }

    /// Calls `f` with each operand of `node`, in order.
    pub fn operands(&self, node: NodeId, mut f: impl FnMut(NodeId)) {
        match self.op(node) {
            Op::Literal(_) | Op::Input(_) => {}
            Op::Quantity(_, a) | Op::Power(a, _, _) | Op::Apply(_, a) => f(a),
            Op::Add(a, b)
            | Op::Subtract(a, b)
            | Op::Multiply(a, b)
            | Op::Divide(a, b)
            | Op::PowerOf(a, b)
            | Op::Atan2(a, b)
            | Op::Min(a, b)
            | Op::Max(a, b)
            | Op::Compare(_, a, b)
            | Op::And(a, b)
            | Op::Or(a, b) => {
                f(a);
                f(b);
            }
            Op::Select(c, a, b) => {
                f(c);
                f(a);
                f(b);
            }
            Op::PrincipalMoment(tensor, _) | Op::PrincipalAxis(tensor, _, _) => {
                for member in self.tensor(tensor) {
                    f(member);
                }
            }
        }
    }
}
