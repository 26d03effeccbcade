//! Exact powers as products and roots, by the steps that the formula language prescribes.

use super::graph::{Arithmetic, NodeId, Op};
use crate::formula::{Function, PowerSteps, Steps};

/// Nodes of `base` to an exact power; `node` gives the node of an operation.
pub(super) fn nodes(node: &mut impl FnMut(Op) -> NodeId, base: NodeId, steps: PowerSteps) -> NodeId {
    let one = Op::Constant(1.0_f64.to_bits());
    match steps {
        PowerSteps::One => node(one),
        PowerSteps::Direct(steps) => product(node, base, steps),
        PowerSteps::Reciprocal(steps) => {
            let (one, product) = (node(one), product(node, base, steps));
            node(Op::Binary(Arithmetic::Divide, one, product))
        }
        PowerSteps::General(exponent) => {
            let exponent = node(Op::Constant(exponent.to_bits()));
            node(Op::Binary(Arithmetic::Power, base, exponent))
        }
    }
}

fn product(node: &mut impl FnMut(Op) -> NodeId, x: NodeId, steps: Steps) -> NodeId {
    let mut times = |a, b| node(Op::Binary(Arithmetic::Multiply, a, b));
    match steps {
        Steps::Itself => x,
        Steps::Square => times(x, x),
        Steps::Cube => {
            let square = times(x, x);
            times(square, x)
        }
        Steps::Fourth => {
            let square = times(x, x);
            times(square, square)
        }
        Steps::SquareRoot => node(Op::Unary(Function::Sqrt, x)),
        Steps::CubeRoot => node(Op::Unary(Function::Cbrt, x)),
        Steps::ThreeHalves => {
            let root = node(Op::Unary(Function::Sqrt, x));
            node(Op::Binary(Arithmetic::Multiply, x, root))
        }
    }
}
