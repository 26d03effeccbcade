//! The flat program: nodes in dependency order, equal nodes shared.

use std::collections::HashMap;
use std::sync::Arc;

use crate::formula::Function;
use crate::formula::curves::Curve;
use crate::quantity::Distribution;

/// Position of a node; its operands have lower positions.
pub type NodeId = usize;

/// Position of an input.
pub type InputId = usize;

/// What a node computes.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Op {
    /// A number fixed by the catalogue: the bits of the value.
    Constant(u64),
    /// A number fixed by the case: an exact statement, or a free number's setting.
    Setting(InputId),
    /// Numbers of a random stream, strictly inside (0, 1).
    Uniform(usize),
    /// The quantile of an input's distribution at a probability.
    Quantile(InputId, NodeId),
    /// The normal score of a probability.
    Score(NodeId),
    /// The probability of a normal score.
    Probability(NodeId),
    /// -x.
    Negate(NodeId),
    /// 1 where x is 0, else 0.
    Not(NodeId),
    /// A function of one number.
    Unary(Function, NodeId),
    /// Arithmetic, comparison (1 or 0), logic.
    Binary(Arithmetic, NodeId, NodeId),
    /// The second where the first is not 0, else the third.
    Choose(NodeId, NodeId, NodeId),
    /// A curve of an entry.
    Curve(usize, NodeId),
    /// A value of a table at a whole-numbered position.
    Lookup(usize, NodeId),
}

/// Two-operand operations.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Arithmetic {
    /// a + b
    Add,
    /// a - b
    Subtract,
    /// a × b
    Multiply,
    /// a / b
    Divide,
    /// a^b
    Power,
    /// The smaller; NaN passes through.
    Min,
    /// The larger; NaN passes through.
    Max,
    /// 1 where a < b
    Less,
    /// 1 where a <= b
    LessOrEqual,
    /// 1 where a = b
    Equal,
    /// 1 where both are not 0
    And,
    /// 1 where one is not 0
    Or,
}

impl Arithmetic {
    const fn commutes(self) -> bool {
        matches!(self, Self::Add | Self::Multiply | Self::Equal | Self::And | Self::Or)
    }
}

/// How often a node has to be computed.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Level {
    /// Once per plan.
    Constant,
    /// Once per case.
    Setting,
    /// Once per draw, the same for every case of the plan.
    Shared,
    /// Once per draw and case.
    Case,
}

impl Level {
    fn with(self, other: Self) -> Self {
        match (self, other) {
            (Self::Setting, Self::Shared) | (Self::Shared, Self::Setting) => Self::Case,
            _ => self.max(other),
        }
    }

    /// Whether there is a value for each draw.
    #[must_use]
    pub const fn is_column(self) -> bool {
        matches!(self, Self::Shared | Self::Case)
    }
}

/// Where an input's value or distribution is found.
#[derive(Clone, Debug)]
pub enum InputKind {
    /// What the candidate or its habitat states of this quantity.
    Stated(String),
    /// A distribution of the catalogue, or one adopted by the candidate's shape.
    Catalog(Distribution),
    /// A free number of the plan, at this position.
    Free(usize),
}

/// A node: what it computes and how often.
#[derive(Clone, Debug)]
pub struct Node {
    /// What it computes.
    pub op: Op,
    /// How often.
    pub level: Level,
}

/// A program under construction, then finished.
#[derive(Clone, Debug, Default)]
pub struct Graph {
    /// Nodes in dependency order.
    pub nodes: Vec<Node>,
    /// Inputs.
    pub inputs: Vec<InputKind>,
    /// Names of random streams.
    pub streams: Vec<String>,
    /// Curves.
    pub curves: Vec<Arc<Curve>>,
    /// Tables of values that come in sets.
    pub tables: Vec<Vec<f64>>,
    known: HashMap<Op, NodeId>,
    stream_ids: HashMap<String, usize>,
}

impl Graph {
    /// The node for an operation, shared with an equal one.
    pub fn node(&mut self, op: Op) -> NodeId {
        let op = match op {
            Op::Binary(operation, a, b) if operation.commutes() && a > b => Op::Binary(operation, b, a),
            op => op,
        };
        if let Some(id) = self.known.get(&op) {
            return *id;
        }
        let level = self.level(&op);
        let id = self.nodes.len();
        self.nodes.push(Node { op: op.clone(), level });
        self.known.insert(op, id);
        id
    }

    /// The node of a constant.
    pub fn constant(&mut self, value: f64) -> NodeId {
        self.node(Op::Constant(value.to_bits()))
    }

    /// A new input.
    pub fn input(&mut self, kind: InputKind) -> InputId {
        self.inputs.push(kind);
        self.inputs.len() - 1
    }

    /// The node of a stream's numbers.
    pub fn uniform(&mut self, name: &str) -> NodeId {
        let next = self.streams.len();
        let stream = *self.stream_ids.entry(name.to_owned()).or_insert(next);
        if stream == next {
            self.streams.push(name.to_owned());
        }
        self.node(Op::Uniform(stream))
    }

    fn level(&self, op: &Op) -> Level {
        let of = |id: &NodeId| self.nodes[*id].level;
        match op {
            Op::Constant(_) => Level::Constant,
            Op::Setting(_) => Level::Setting,
            Op::Uniform(_) => Level::Shared,
            Op::Quantile(input, u) => match &self.inputs[*input] {
                InputKind::Stated(_) => Level::Case,
                InputKind::Catalog(_) | InputKind::Free(_) => of(u),
            },
            _ => operands(op).iter().fold(Level::Constant, |level, id| level.with(of(id))),
        }
    }
}

/// The operands of an operation.
#[must_use]
pub fn operands(op: &Op) -> Vec<NodeId> {
    match op {
        Op::Constant(_) | Op::Setting(_) | Op::Uniform(_) => Vec::new(),
        Op::Quantile(_, a)
        | Op::Score(a)
        | Op::Probability(a)
        | Op::Negate(a)
        | Op::Not(a)
        | Op::Unary(_, a)
        | Op::Curve(_, a)
        | Op::Lookup(_, a) => vec![*a],
        Op::Binary(_, a, b) => vec![*a, *b],
        Op::Choose(a, b, c) => vec![*a, *b, *c],
    }
}

impl Graph {
    /// The value of a node for one case or one draw, from the values of its operands.
    ///
    /// The same bits as the columns give: one implementation serves both.
    #[must_use]
    pub fn scalar(&self, op: &Op, value: impl Fn(NodeId) -> f64, setting: impl Fn(InputId) -> f64) -> f64 {
        use crate::math::kernels;
        let truth = |is: bool| if is { 1.0 } else { 0.0 };
        match op {
            Op::Constant(bits) => f64::from_bits(*bits),
            Op::Setting(input) => setting(*input),
            Op::Uniform(_) | Op::Quantile(..) => f64::NAN,
            Op::Score(a) => kernels::normal_quantile(value(*a)),
            Op::Probability(a) => kernels::normal_distribution(value(*a)),
            Op::Negate(a) => -value(*a),
            Op::Not(a) => truth(value(*a) == 0.0),
            Op::Unary(function, a) => function.value(&[value(*a)]),
            Op::Binary(operation, a, b) => {
                let (a, b) = (value(*a), value(*b));
                match operation {
                    Arithmetic::Add => a + b,
                    Arithmetic::Subtract => a - b,
                    Arithmetic::Multiply => a * b,
                    Arithmetic::Divide => a / b,
                    Arithmetic::Power => kernels::pow(a, b),
                    Arithmetic::Min => Function::Min.value(&[a, b]),
                    Arithmetic::Max => Function::Max.value(&[a, b]),
                    Arithmetic::Less => truth(a < b),
                    Arithmetic::LessOrEqual => truth(a <= b),
                    Arithmetic::Equal => truth(a == b),
                    Arithmetic::And => truth(a != 0.0 && b != 0.0),
                    Arithmetic::Or => truth(a != 0.0 || b != 0.0),
                }
            }
            Op::Choose(condition, a, b) => {
                if value(*condition) == 0.0 {
                    value(*b)
                } else {
                    value(*a)
                }
            }
            Op::Curve(curve, a) => self.curves[*curve].value(value(*a)),
            Op::Lookup(table, a) => lookup(&self.tables[*table], value(*a)),
        }
    }
}

/// The value of a table at a whole-numbered position.
#[must_use]
pub fn lookup(table: &[f64], position: f64) -> f64 {
    // Positions come from a discrete distribution over 0..len, so the cast neither truncates nor wraps.
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
    let at = position as usize;
    table.get(at).copied().unwrap_or(f64::NAN)
}
