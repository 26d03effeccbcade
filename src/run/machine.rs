//! Evaluates the program of a plan over blocks of draws. Nothing is allocated per draw or per block.

use crate::math::kernels::{self, Comparison, Operand};
use crate::math::streams::Stream;
use crate::plan::{NodeId, Op, Plan, Step, lookup};

use super::case::Case;
use super::columns;

/// Draws in a block: a column is 32 KiB.
pub const BLOCK: usize = 4096;

/// The random streams of a plan under one seed.
#[must_use]
pub fn streams(plan: &Plan, seed: u64) -> Vec<Stream> {
    plan.graph.streams.iter().map(|name| Stream::new(seed, name)).collect()
}

/// The registers of one thread.
#[derive(Debug, Default)]
pub(super) struct Machine {
    registers: Vec<Vec<f64>>,
}

impl Machine {
    /// Registers for a plan.
    #[must_use]
    pub(super) fn new(plan: &Plan) -> Self {
        Self { registers: vec![vec![0.0; BLOCK]; plan.schedule.registers] }
    }

    /// Computes the columns that all cases share, for the draws `first..first + len`.
    pub(super) fn shared(&mut self, plan: &Plan, streams: &[Stream], case: &Case, first: u64, len: usize) {
        for step in &plan.schedule.shared {
            self.step(plan, streams, case, *step, first, len);
        }
    }

    /// Computes the columns of one case; `shared` was called for the same draws.
    pub(super) fn case(&mut self, plan: &Plan, streams: &[Stream], case: &Case, first: u64, len: usize) {
        for step in &plan.schedule.case {
            self.step(plan, streams, case, *step, first, len);
        }
    }

    /// The values of a node over the current block.
    #[must_use]
    pub(super) fn values<'a>(&'a self, plan: &Plan, case: &Case, node: NodeId, len: usize) -> Operand<'a> {
        match plan.schedule.register_of[node] {
            Some(register) => Operand::Column(&self.registers[register][..len]),
            None => Operand::Scalar(case.scalars[node]),
        }
    }

    fn step(&mut self, plan: &Plan, streams: &[Stream], case: &Case, step: Step, first: u64, len: usize) {
        // The schedule never gives a result the register of one of its operands.
        let mut out = std::mem::take(&mut self.registers[step.register]);
        compute(plan, streams, case, step.node, first, &mut out[..len], |node| {
            self.values(plan, case, node, len)
        });
        self.registers[step.register] = out;
    }
}

/// Computes one column from its operands.
pub(super) fn compute<'a>(
    plan: &Plan,
    streams: &[Stream],
    case: &Case,
    node: NodeId,
    first: u64,
    out: &mut [f64],
    values: impl Fn(NodeId) -> Operand<'a>,
) {
    match &plan.graph.nodes[node].op {
        Op::Constant(_) | Op::Setting(_) => out.fill(case.scalars[node]),
        Op::Uniform(stream) => streams[*stream].fill_open_unit(first, out),
        Op::Quantile(input, probability) => {
            columns::copy(out, values(*probability));
            case.inputs[*input].quantile_column(out);
        }
        Op::Score(probability) => {
            columns::copy(out, values(*probability));
            kernels::normal_quantile_column(out);
        }
        Op::Probability(score) => {
            match values(*score) {
                Operand::Column(column) => kernels::normal_distribution_column(out, column),
                Operand::Scalar(score) => out.fill(kernels::normal_distribution(score)),
            }
            out.iter_mut().for_each(|p| *p = inside_unit(*p));
        }
        Op::Negate(a) => match values(*a) {
            Operand::Column(column) => kernels::negate_column(out, column),
            Operand::Scalar(value) => out.fill(-value),
        },
        Op::Not(a) => kernels::compare_column(Comparison::Equal, out, values(*a), Operand::Scalar(0.0)),
        Op::Unary(function, a) => columns::unary(*function, out, values(*a)),
        Op::Binary(operation, a, b) => columns::binary(*operation, out, values(*a), values(*b)),
        Op::Choose(condition, a, b) => columns::choose(out, values(*condition), values(*a), values(*b)),
        Op::Curve(curve, a) => match values(*a) {
            Operand::Column(column) => plan.graph.curves[*curve].value_column(out, column),
            Operand::Scalar(value) => out.fill(plan.graph.curves[*curve].value(value)),
        },
        Op::Lookup(table, a) => {
            columns::copy(out, values(*a));
            out.iter_mut().for_each(|value| *value = lookup(&plan.graph.tables[*table], *value));
        }
    }
}

/// Keeps a probability strictly inside (0, 1), as quantile functions ask.
fn inside_unit(p: f64) -> f64 {
    p.clamp(f64::MIN_POSITIVE, 1.0 - f64::EPSILON / 2.0)
}
