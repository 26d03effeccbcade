//! Rounds of draws, doubled until the answers are settled.
//!
//! After JCGM 101:2008, 7.9: a result is settled when twice its standard error is below the numerical tolerance.

use rayon::iter::{IndexedParallelIterator, ParallelIterator};
use rayon::slice::ParallelSliceMut;

use super::case::Case;
use super::machine::{BLOCK, Machine, is_column, streams};
use super::margins::margins;
use super::record::{Record, Segment};
use crate::math::kernels::{self, Operand};
use crate::math::quantiles;
use crate::math::streams::Stream;
use crate::plan::{NodeId, Plan};

/// Draws of the first round, and those whose values are kept for medians other than margins.
pub const FIRST_ROUND: usize = 65_536;
/// The largest number of draws that doubling reaches.
pub const CAP: usize = 1 << 20;
/// Draws made at once: bounds the memory beside the margins.
const SEGMENT: usize = 262_144;
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
    /// Margins and kept values.
    pub record: Record,
    /// Of each constraint of the plan.
    pub statistics: Vec<Statistics>,
    /// Whether the answers are settled; `None` under a fixed number of draws.
    pub settled: Option<bool>,
    /// Nodes whose values were kept.
    pub kept: Vec<NodeId>,
}

impl Outcome {
    /// The kept values of a node; `None` for a node that has one value for all draws.
    #[must_use]
    pub fn values(&self, node: NodeId) -> Option<&[f64]> {
        self.kept.binary_search(&node).ok().map(|at| self.record.kept[at].as_slice())
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
    let kept: Vec<NodeId> = plan.outputs().into_iter().filter(|node| is_column(plan, *node)).collect();
    let mut outcomes: Vec<Outcome> = cases
        .iter()
        .map(|_| Outcome {
            record: Record::new(plan.constraints.len(), kept.len()),
            statistics: Vec::new(),
            settled: None,
            kept: kept.clone(),
        })
        .collect();
    let mut open: Vec<usize> = (0..cases.len()).collect();
    let (mut done, mut goal) = (0, settings.draws.unwrap_or(FIRST_ROUND));
    loop {
        while done < goal {
            let draws = SEGMENT.min(goal - done);
            let batch: Vec<&Case> = open.iter().map(|at| &cases[*at]).collect();
            let (segment, values) = segment(plan, &streams, &batch, &kept, done, draws);
            for (position, at) in open.iter().enumerate() {
                let record = &mut outcomes[*at].record;
                record.extend(&segment, position, open.len(), BLOCK);
                keep(record, &values, position, open.len(), draws.min(FIRST_ROUND.saturating_sub(done)));
            }
            done += draws;
        }
        for at in &open {
            let outcome = &mut outcomes[*at];
            outcome.statistics =
                (0..plan.constraints.len()).map(|c| statistics(&outcome.record, c)).collect();
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

/// Makes `draws` draws from number `first`: margins, and values of the kept nodes among the first draws of all.
fn segment(
    plan: &Plan,
    streams: &[Stream],
    cases: &[&Case],
    kept: &[NodeId],
    first: usize,
    draws: usize,
) -> (Segment, Vec<f64>) {
    let blocks = draws.div_ceil(BLOCK);
    let slots = cases.len() * plan.constraints.len();
    let keeping = draws.min(FIRST_ROUND.saturating_sub(first)).div_ceil(BLOCK);
    let kept_slots = cases.len() * kept.len();
    let mut segment = Segment {
        draws,
        margins: vec![0.0; blocks * slots * BLOCK],
        holds: vec![0; blocks * slots * BLOCK / 64],
    };
    let mut values = vec![0.0; keeping * kept_slots * BLOCK];
    if slots == 0 && kept_slots == 0 {
        return (segment, values);
    }
    // Blocks beyond those kept take an empty part each.
    let (mut empty_margins, mut empty_holds) = (vec![0.0_f32; blocks], vec![0_u64; blocks]);
    let margin_parts = if slots == 0 { &mut empty_margins } else { &mut segment.margins };
    let hold_parts = if slots == 0 { &mut empty_holds } else { &mut segment.holds };
    let mut value_parts: Vec<&mut [f64]> =
        if kept_slots == 0 { Vec::new() } else { values.chunks_mut(kept_slots * BLOCK).collect() };
    value_parts.resize_with(blocks, Default::default);
    margin_parts
        .par_chunks_mut((slots * BLOCK).max(1))
        .zip(hold_parts.par_chunks_mut((slots * BLOCK / 64).max(1)))
        .zip(value_parts.par_chunks_mut(1))
        .enumerate()
        .for_each_init(
            || (Machine::new(plan), vec![0.0; BLOCK], vec![0.0; BLOCK]),
            |(machine, scratch, dex), (block, ((margin_part, hold_part), value_part))| {
                let start = block * BLOCK;
                let len = BLOCK.min(draws - start);
                let number = (first + start) as u64;
                let Some(any) = cases.first() else { return };
                machine.shared(plan, streams, any, number, len);
                for (position, case) in cases.iter().enumerate() {
                    machine.case(plan, streams, case, number, len);
                    for (at, planned) in plan.constraints.iter().enumerate() {
                        let slot = position * plan.constraints.len() + at;
                        let available = machine.values(plan, case, planned.available, len);
                        let required = machine.values(plan, case, planned.required, len);
                        let bits = &mut hold_part[slot * BLOCK / 64..][..len.div_ceil(64)];
                        margins(available, required, &mut scratch[..len], &mut dex[..len], bits);
                        let out = &mut margin_part[slot * BLOCK..][..len];
                        for (out, dex) in out.iter_mut().zip(dex.iter()) {
                            // Held at single precision: holding was decided before.
                            #[allow(clippy::cast_possible_truncation)]
                            {
                                *out = *dex as f32;
                            }
                        }
                    }
                    if !value_part[0].is_empty() {
                        for (at, node) in kept.iter().enumerate() {
                            let slot = position * kept.len() + at;
                            if let Operand::Column(column) = machine.values(plan, case, *node, len) {
                                value_part[0][slot * BLOCK..][..len].copy_from_slice(column);
                            }
                        }
                    }
                }
            },
        );
    drop(value_parts);
    (segment, values)
}

fn keep(record: &mut Record, values: &[f64], case: usize, cases: usize, draws: usize) {
    let kept = record.kept.len();
    for (at, column) in record.kept.iter_mut().enumerate() {
        for (block, start) in (0..draws).step_by(BLOCK).enumerate() {
            let slot = (block * cases + case) * kept + at;
            column.extend_from_slice(&values[slot * BLOCK..][..BLOCK.min(draws - start)]);
        }
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
    let values = record.ranks(constraint, [centre[0], centre[1], centre[2], a, b, c, d, e, f]);
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
        not_a_number: record.not_a_number(constraint) as u64,
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
