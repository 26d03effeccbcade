//! Which way a margin goes when a free number grows: known from the program alone, or not.
//!
//! Ranges of nodes follow by interval arithmetic from the bounds of the inputs; directions follow from ranges by the
//! rules of monotone functions. Where neither is certain the answer is `Mixed`, and the number is searched.

use super::graph::{Arithmetic, Graph, InputKind, NodeId, Op};
use crate::formula::Function;
use crate::math::kernels;
use crate::quantity::Bounds;

/// How a value changes when one free number grows.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Direction {
    /// Not at all.
    Still,
    /// It grows or stays.
    Up,
    /// It falls or stays.
    Down,
    /// Not known to be monotone.
    Mixed,
}

impl Direction {
    /// Of a sum.
    #[must_use]
    pub const fn and(self, other: Self) -> Self {
        match (self, other) {
            (Self::Still, other) => other,
            (one, Self::Still) => one,
            (Self::Up, Self::Up) => Self::Up,
            (Self::Down, Self::Down) => Self::Down,
            _ => Self::Mixed,
        }
    }

    /// Of the negative.
    #[must_use]
    pub const fn reversed(self) -> Self {
        match self {
            Self::Up => Self::Down,
            Self::Down => Self::Up,
            same => same,
        }
    }

    /// Of a product with a factor in this range.
    const fn scaled(self, factor: Bounds) -> Self {
        if matches!(self, Self::Still) || factor.low >= 0.0 {
            self
        } else if factor.high <= 0.0 {
            self.reversed()
        } else {
            Self::Mixed
        }
    }
}

const ANY: Bounds = Bounds { low: f64::NEG_INFINITY, high: f64::INFINITY };

/// A range from ends that may be not a number.
fn range(low: f64, high: f64) -> Bounds {
    Bounds {
        low: if low.is_nan() { f64::NEG_INFINITY } else { low },
        high: if high.is_nan() { f64::INFINITY } else { high },
    }
}

/// The range each node may take, from the ranges of the inputs.
pub(super) fn ranges(graph: &Graph, input: impl Fn(&InputKind) -> Bounds) -> Vec<Bounds> {
    let mut ranges: Vec<Bounds> = Vec::with_capacity(graph.nodes.len());
    for node in &graph.nodes {
        let of = |id: &NodeId| ranges[*id];
        let range = match &node.op {
            Op::Constant(bits) => {
                let value = f64::from_bits(*bits);
                range(value, value)
            }
            Op::Setting(at) | Op::Quantile(at, _) => input(&graph.inputs[*at]),
            Op::Uniform(_) | Op::Probability(_) | Op::Not(_) => Bounds { low: 0.0, high: 1.0 },
            Op::Score(_) | Op::Curve(..) => ANY,
            Op::Negate(a) => range(-of(a).high, -of(a).low),
            Op::Unary(function, a) => unary(*function, of(a)),
            Op::Binary(operation, a, b) => binary(*operation, of(a), of(b)),
            Op::Choose(_, a, b) => range(of(a).low.min(of(b).low), of(a).high.max(of(b).high)),
            Op::Lookup(table, _) => graph.tables[*table]
                .iter()
                .fold(Bounds { low: f64::INFINITY, high: f64::NEG_INFINITY }, |all, value| {
                    range(all.low.min(*value), all.high.max(*value))
                }),
        };
        ranges.push(range);
    }
    ranges
}

fn unary(function: Function, a: Bounds) -> Bounds {
    match function {
        Function::Exp => range(kernels::exp(a.low), kernels::exp(a.high)),
        Function::Sqrt => range(a.low.max(0.0).sqrt(), a.high.max(0.0).sqrt()),
        Function::Ln if a.low >= 0.0 => range(kernels::ln(a.low), kernels::ln(a.high)),
        Function::Abs => Bounds { low: 0.0, high: f64::INFINITY },
        Function::Cbrt | Function::Expm1 | Function::Ln1p | Function::Atan if a.low >= 0.0 => {
            Bounds { low: 0.0, high: f64::INFINITY }
        }
        Function::Erf | Function::Tanh if a.low >= 0.0 => Bounds { low: 0.0, high: 1.0 },
        Function::Erfc => Bounds { low: 0.0, high: 2.0 },
        Function::Sin | Function::Cos => Bounds { low: -1.0, high: 1.0 },
        _ => ANY,
    }
}

fn binary(operation: Arithmetic, a: Bounds, b: Bounds) -> Bounds {
    let hull = |f: fn(f64, f64) -> f64| {
        let corners = [f(a.low, b.low), f(a.low, b.high), f(a.high, b.low), f(a.high, b.high)];
        if corners.iter().any(|corner| corner.is_nan()) {
            // 0 × infinity and the like: only the sign is certain.
            let (a_positive, b_positive) = (a.low >= 0.0, b.low >= 0.0);
            return if a_positive && b_positive { Bounds { low: 0.0, high: f64::INFINITY } } else { ANY };
        }
        range(
            corners.iter().copied().fold(f64::INFINITY, f64::min),
            corners.iter().copied().fold(f64::NEG_INFINITY, f64::max),
        )
    };
    match operation {
        Arithmetic::Add => range(a.low + b.low, a.high + b.high),
        Arithmetic::Subtract => range(a.low - b.high, a.high - b.low),
        Arithmetic::Multiply => hull(|a, b| a * b),
        Arithmetic::Divide if b.low > 0.0 || b.high < 0.0 => hull(|a, b| a / b),
        Arithmetic::Divide if a.low >= 0.0 && b.low >= 0.0 => Bounds { low: 0.0, high: f64::INFINITY },
        Arithmetic::Power if a.low >= 0.0 => Bounds { low: 0.0, high: f64::INFINITY },
        Arithmetic::Min => range(a.low.min(b.low), a.high.min(b.high)),
        Arithmetic::Max => range(a.low.max(b.low), a.high.max(b.high)),
        Arithmetic::Divide | Arithmetic::Power => ANY,
        _ => Bounds { low: 0.0, high: 1.0 },
    }
}

/// How each node changes when the free number at node `free` grows.
pub(super) fn directions(graph: &Graph, ranges: &[Bounds], free: NodeId) -> Vec<Direction> {
    let mut directions: Vec<Direction> = Vec::with_capacity(graph.nodes.len());
    for (id, node) in graph.nodes.iter().enumerate() {
        let of = |id: &NodeId| directions[*id];
        let direction = match &node.op {
            _ if id == free => Direction::Up,
            Op::Constant(_) | Op::Setting(_) | Op::Uniform(_) => Direction::Still,
            Op::Quantile(_, a) | Op::Score(a) | Op::Probability(a) => of(a),
            Op::Negate(a) => of(a).reversed(),
            Op::Unary(function, a) => unary_direction(*function, of(a), ranges[*a]),
            Op::Binary(operation, a, b) => {
                binary_direction(*operation, (of(a), ranges[*a]), (of(b), ranges[*b]), a == b)
            }
            Op::Choose(condition, a, b) => match of(condition) {
                Direction::Still => of(a).and(of(b)),
                _ => Direction::Mixed,
            },
            Op::Not(a) | Op::Curve(_, a) | Op::Lookup(_, a) => match of(a) {
                Direction::Still => Direction::Still,
                _ => Direction::Mixed,
            },
        };
        directions.push(direction);
    }
    directions
}

fn unary_direction(function: Function, a: Direction, range: Bounds) -> Direction {
    match function {
        Function::Exp
        | Function::Expm1
        | Function::Cbrt
        | Function::Atan
        | Function::Tanh
        | Function::Erf => a,
        // Below their domain they are not a number, which holds nowhere: then no end is surely the best.
        Function::Sqrt | Function::Ln | Function::Log10 if range.low >= 0.0 => a,
        Function::Ln1p if range.low >= -1.0 => a,
        Function::Erfc => a.reversed(),
        Function::Abs => a.scaled(range),
        _ if a == Direction::Still => a,
        _ => Direction::Mixed,
    }
}

fn binary_direction(
    operation: Arithmetic,
    (a, range_a): (Direction, Bounds),
    (b, range_b): (Direction, Bounds),
    same: bool,
) -> Direction {
    match operation {
        Arithmetic::Add | Arithmetic::Min | Arithmetic::Max => a.and(b),
        Arithmetic::Subtract => a.and(b.reversed()),
        Arithmetic::Multiply if same => a.scaled(range_a),
        Arithmetic::Multiply => a.scaled(range_b).and(b.scaled(range_a)),
        // d(a/b) = da / b - a db / b²; the sign of 1/b is b's where b does not change sign.
        Arithmetic::Divide if b == Direction::Still || range_b.low >= 0.0 || range_b.high <= 0.0 => {
            a.scaled(range_b).and(b.reversed().scaled(range_a))
        }
        Arithmetic::Power if b == Direction::Still && range_a.low >= 0.0 => a.scaled(range_b),
        Arithmetic::Power if a == Direction::Still && range_a.low >= 1.0 => b,
        Arithmetic::Power if a == Direction::Still && range_a.low >= 0.0 && range_a.high <= 1.0 => {
            b.reversed()
        }
        _ if a == Direction::Still && b == Direction::Still => Direction::Still,
        _ => Direction::Mixed,
    }
}
