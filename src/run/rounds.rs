//! Rounds of draws, doubled until the answers are settled.
//!
//! After JCGM 101:2008, 7.9: a result is settled when twice its standard error is below the numerical tolerance.

use std::ops::Range;

use rayon::iter::{
    IndexedParallelIterator, IntoParallelIterator, IntoParallelRefMutIterator, ParallelIterator,
};

use super::case::Case;
use super::machine::{BLOCK, Machine, streams};
use super::margins::margins;
use super::record::{Part, Record, not_a_number, ranks};
use crate::math::kernels::{self, Operand};
use crate::math::quantiles;
use crate::math::streams::Stream;
use crate::plan::{NodeId, Plan};

/// Draws of the first round, and those whose values are kept for medians other than margins.
pub const FIRST_ROUND: usize = 65_536;
/// The largest number of draws that doubling reaches.
pub const CAP: usize = 1 << 20;
/// A standard error of a chance at or below this is settled anyway.
const CHANCE_SETTLED: f64 = 0.002;
/// The finest tolerance of a margin, dex.
const MARGIN_SETTLED: f64 = 0.005;

/// How draws are made.
#[derive(Clone, Copy, Debug)]
pub struct Settings {
    /// The seed of all streams.
    pub seed: u64,
    /// A fixed number of draws; `None` doubles until settled.
    pub draws: Option<usize>,
    /// Share of draws from which a constraint passes.
    pub pass_at: f64,
    /// Share of draws up to which a constraint fails.
    pub fail_at: f64,
}

/// The margins of one constraint in numbers.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Statistics {
    /// Draws that hold.
    pub holding: u64,
    /// Draws whose margin is not a number.
    pub not_a_number: u64,
    /// Median margin, dex.
    pub median: f64,
    /// 5 % quantile.
    pub low: f64,
    /// 95 % quantile.
    pub high: f64,
    /// The largest of twice the standard errors of the three; infinite where one of them may be infinite or finite.
    pub twice_error: f64,
}

/// The draws of one case and what follows from them.
#[derive(Debug)]
pub struct Outcome {
    /// The draws.
    pub record: Record,
    /// Of each constraint of the plan.
    pub statistics: Vec<Statistics>,
    /// Whether the answers are settled; `None` under a fixed number of draws.
    pub settled: Option<bool>,
    /// Nodes whose values were kept, in order.
    kept: Vec<Kept>,
}

/// What is kept of a node.
#[derive(Clone, Copy, Debug)]
struct Kept {
    node: NodeId,
    /// 5 % quantile, median, 95 % quantile in the first draws.
    quantiles: [f64; 3],
}

impl Outcome {
    fn position(&self, node: NodeId) -> Option<usize> {
        self.kept.binary_search_by_key(&node, |kept| kept.node).ok()
    }

    /// The values of a kept node in the first draws; `None` for a node that has one value for all draws.
    #[must_use]
    pub fn values(&self, node: NodeId) -> Option<Vec<f64>> {
        Some(self.record.kept(self.position(node)?))
    }

    /// 5 % quantile, median and 95 % quantile of a kept node; `None` for a node that has one value for all draws.
    #[must_use]
    pub fn quantiles(&self, node: NodeId) -> Option<[f64; 3]> {
        Some(self.kept[self.position(node)?].quantiles)
    }
}

/// A standard error that is never exactly zero: that of (k + 1) / (n + 2).
#[must_use]
pub fn chance_error(holding: u64, draws: u64) -> f64 {
    let p = (holding as f64 + 1.0) / (draws as f64 + 2.0);
    (p * (1.0 - p) / draws as f64).sqrt()
}

/// Ranks of the 5 % quantile, the median and the 95 % quantile among `n` ascending values: floor(0.05 n) + 1 from each
/// end, and the lower of the middle ones.
#[must_use]
pub fn interval_ranks(n: usize) -> [usize; 3] {
    [quantiles::rank_low(n, 0.05), quantiles::rank_median(n), quantiles::rank_high(n, 0.05)]
}

/// Makes the draws of several cases of one plan.
#[must_use]
pub fn run(plan: &Plan, cases: &[Case], settings: Settings) -> Vec<Outcome> {
    let streams = streams(plan, settings.seed);
    let nodes: Vec<NodeId> =
        plan.outputs().into_iter().filter(|node| plan.graph.nodes[*node].level.is_column()).collect();
    let mut outcomes: Vec<Outcome> = cases
        .iter()
        .map(|_| Outcome {
            record: Record::default(),
            statistics: Vec::new(),
            settled: None,
            kept: nodes.iter().map(|node| Kept { node: *node, quantiles: [f64::NAN; 3] }).collect(),
        })
        .collect();
    let mut open: Vec<usize> = (0..cases.len()).collect();
    let (mut done, mut goal) = (0, settings.draws.unwrap_or(FIRST_ROUND));
    loop {
        let batch: Vec<&Case> = open.iter().map(|at| &cases[*at]).collect();
        let blocks: Vec<Vec<Part>> = (done..goal)
            .step_by(BLOCK)
            .collect::<Vec<usize>>()
            .into_par_iter()
            .map_init(
                || Workplace::new(plan),
                |place, first| place.block(plan, &streams, &batch, &nodes, first..goal.min(first + BLOCK)),
            )
            .collect();
        for parts in blocks {
            for (at, part) in open.iter().zip(parts) {
                outcomes[*at].record.push(part);
            }
        }
        if done == 0 {
            outcomes.iter_mut().for_each(summarise);
        }
        done = goal;
        for at in &open {
            let outcome = &mut outcomes[*at];
            let record = &outcome.record;
            outcome.statistics =
                (0..plan.constraints.len()).into_par_iter().map(|c| statistics(record, c)).collect();
            if settings.draws.is_none() {
                outcome.settled = Some(settled(outcome, settings));
            }
        }
        open.retain(|at| outcomes[*at].settled == Some(false));
        if open.is_empty() || done >= CAP {
            return outcomes;
        }
        goal = done * 2;
    }
}

/// What one thread works with.
struct Workplace {
    machine: Machine,
    ratio: Vec<f64>,
    dex: Vec<f64>,
}

impl Workplace {
    fn new(plan: &Plan) -> Self {
        Self { machine: Machine::new(plan), ratio: vec![0.0; BLOCK], dex: vec![0.0; BLOCK] }
    }

    /// These draws of several cases: a part for each.
    fn block(
        &mut self,
        plan: &Plan,
        streams: &[Stream],
        cases: &[&Case],
        kept: &[NodeId],
        draws: Range<usize>,
    ) -> Vec<Part> {
        let (number, len) = (draws.start as u64, draws.len());
        if let Some(any) = cases.first() {
            self.machine.shared(plan, streams, any, number, len);
        }
        let words = len.div_ceil(64);
        cases
            .iter()
            .map(|case| {
                self.machine.case(plan, streams, case, number, len);
                let kept = if draws.start < FIRST_ROUND { kept } else { &[] };
                let mut part = Part::new(len, plan.constraints.len(), kept.len());
                for (at, planned) in plan.constraints.iter().enumerate() {
                    let available = self.machine.values(plan, case, planned.available, len);
                    let required = self.machine.values(plan, case, planned.required, len);
                    let bits = &mut part.holds[at * words..][..words];
                    margins(available, required, &mut self.ratio[..len], &mut self.dex[..len], bits);
                    // Held at single precision: holding was decided before.
                    narrow(&mut part.margins[at * len..][..len], &self.dex);
                }
                for (at, node) in kept.iter().enumerate() {
                    if let Operand::Column(column) = self.machine.values(plan, case, *node, len) {
                        part.kept[at * len..][..len].copy_from_slice(column);
                    }
                }
                part
            })
            .collect()
    }
}

/// Quantiles of what was kept.
fn summarise(outcome: &mut Outcome) {
    let record = &outcome.record;
    outcome.kept.par_iter_mut().enumerate().for_each(|(at, kept)| {
        let mut values = record.kept(at);
        let ranks = interval_ranks(values.len());
        kept.quantiles = quantiles::order_statistics_f64(&mut values, ranks);
    });
}

/// Single precision of a column.
#[allow(clippy::cast_possible_truncation)]
fn narrow(out: &mut [f32], column: &[f64]) {
    for (out, value) in out.iter_mut().zip(column) {
        *out = *value as f32;
    }
}

fn statistics(record: &Record, constraint: usize) -> Statistics {
    let n = record.draws;
    let probabilities = [0.05, 0.5, 0.95];
    let centre = interval_ranks(n);
    let spread = probabilities.map(|p: f64| (n as f64 * p * (1.0 - p)).sqrt());
    let beside = |at: usize| {
        // A rank's spread is small beside the number of draws: the cast is exact enough.
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
        let off = spread[at].ceil() as usize;
        [centre[at].saturating_sub(off), (centre[at] + off).min(n - 1)]
    };
    let [[a, b], [c, d], [e, f]] = [beside(0), beside(1), beside(2)];
    let margins = record.margins(constraint);
    let values = ranks(&margins, [centre[0], centre[1], centre[2], a, b, c, d, e, f]);
    let twice_error = values[3..]
        .chunks(2)
        .map(|ends| match ends[1] - ends[0] {
            // Infinite on both sides, or not a number on both: more draws do not move it.
            _ if ends[0] == ends[1] || ends[0].is_nan() && ends[1].is_nan() => 0.0,
            // On one side only: more draws decide.
            error if error.is_nan() => f64::INFINITY,
            error => error,
        })
        .fold(0.0, f64::max);
    Statistics {
        holding: record.holding(constraint),
        not_a_number: not_a_number(&margins),
        low: values[0],
        median: values[1],
        high: values[2],
        twice_error,
    }
}

fn settled(outcome: &Outcome, settings: Settings) -> bool {
    let draws = outcome.record.draws as u64;
    outcome.statistics.iter().all(|statistics| {
        let error = chance_error(statistics.holding, draws);
        let chance = statistics.holding as f64 / draws as f64;
        let away = |threshold: f64| (chance - threshold).abs() >= 3.0 * error;
        let chance_settled = error <= CHANCE_SETTLED || (away(settings.pass_at) && away(settings.fail_at));
        chance_settled && statistics.twice_error <= tolerance(statistics)
    })
}

/// Half the last of one significant digit of half the interval, or 0.005 dex.
fn tolerance(statistics: &Statistics) -> f64 {
    let half = (statistics.high - statistics.low) / 2.0;
    if !(half.is_finite() && half > 0.0) {
        return MARGIN_SETTLED;
    }
    let decade = kernels::log10(half).floor();
    (0.5 * kernels::pow(10.0, decade)).max(MARGIN_SETTLED)
}
