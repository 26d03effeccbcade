//! Chooses the numbers that an organism may set, once, for all constraints together.
//!
//! What is maximised, in this order: the chance that everything stronger than empirical holds, the chance that everything
//! holds, the smallest, the next smallest, ... median margin over the constraints that a free number touches, nearness
//! to the typical values. A number that every constraint pulls the same way goes to that end without a search. The
//! others are searched on the first draws of the same streams: 17 points per number on its scale, in passes over the
//! numbers in order of name and over the ends of coupled pairs, until nothing changes. Where two limits pull against each
//! other, moving one number alone may make one of them worse: while something does not hold, slanting steps of coupled
//! pairs are tried too, for the chances alone, since verdicts hang on them.

use std::cmp::Ordering;
use std::collections::BTreeMap;

use crate::catalog::Basis;
use crate::math::kernels::{self, Operand};
use crate::math::quantiles;
use crate::math::streams::Stream;
use crate::plan::{Direction, Level, NodeId, Plan, operands};
use crate::quantity::FreeRange;

use super::case::{Case, Setting};
use super::machine::{BLOCK, compute};
use super::margins::{holding, ratios};

/// Points tried per number.
const POINTS: u32 = 17;
/// Slanting steps of a pair, in distances between neighbouring points.
const SLANTS: [(f64, f64); 12] = [
    (1.0, 1.0),
    (1.0, -1.0),
    (-1.0, 1.0),
    (-1.0, -1.0),
    (1.0, 2.0),
    (1.0, -2.0),
    (-1.0, 2.0),
    (-1.0, -2.0),
    (2.0, 1.0),
    (2.0, -1.0),
    (-2.0, 1.0),
    (-2.0, -1.0),
];
/// How far slanting steps go.
const STRIDES: [f64; 3] = [4.0, 1.0, 0.25];
/// Passes over the numbers at most.
const PASSES: usize = 8;
/// Margins closer than this (dex) count as equal, so that rounding decides nothing.
const SAME: f64 = 1e-9;

/// A free number whose typical value would make these constraints stop holding.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Decisive {
    /// Position among the plan's free numbers.
    pub free: usize,
    /// Positions among the plan's constraints.
    pub constraints: Vec<usize>,
}

/// Sets the free numbers of a case, and lists those that decide: each is then put at its typical value alone, and the
/// constraints that no longer hold in `share` of the draws, but do at the chosen value, are named.
pub fn choose(plan: &Plan, case: &mut Case, streams: &[Stream], share: f64) -> Vec<Decisive> {
    let mut searched = Vec::new();
    for free in 0..plan.free.len() {
        let pull =
            plan.constraints.iter().fold(Direction::Still, |pull, planned| pull.and(planned.pulls[free]));
        let range = case.free[free].range;
        match pull {
            Direction::Still => {}
            Direction::Up => case.free[free].value = range.high,
            Direction::Down => case.free[free].value = range.low,
            Direction::Mixed => searched.push(free),
        }
    }
    for id in 0..plan.graph.nodes.len() {
        case.compute(plan, id);
    }
    let atypical = case.free.iter().any(|free| free.value != free.range.typical);
    if searched.is_empty() && !atypical {
        return Vec::new();
    }
    let mut search = Search::new(plan, case, streams);
    search.run(&searched);
    search.decisive(share)
}

/// What is maximised.
#[derive(Clone, Debug)]
struct Score {
    /// Draws in which everything stronger than empirical holds, and in which everything does.
    chances: (u32, u32),
    /// Median margins of the constraints that a free number touches, ascending.
    medians: Vec<f64>,
    /// Sum of distances from the typical values, each as a share of its range.
    distance: f64,
}

impl Score {
    fn better(&self, other: &Self) -> bool {
        let medians = || {
            self.medians
                .iter()
                .zip(&other.medians)
                .map(|(a, b)| if (a - b).abs() <= SAME { Ordering::Equal } else { a.total_cmp(b) })
                .find(|ordering| *ordering != Ordering::Equal)
                .unwrap_or(Ordering::Equal)
        };
        let distance = || {
            if (self.distance - other.distance).abs() <= SAME {
                Ordering::Equal
            } else {
                other.distance.total_cmp(&self.distance)
            }
        };
        self.chances.cmp(&other.chances).then_with(medians).then_with(distance) == Ordering::Greater
    }
}

/// What makes one setting better than another.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Compare {
    /// Chances, then margins, then nearness to the typical values.
    Everything,
    /// Chances alone.
    Chances,
}

/// All columns of one block, so that only what depends on a changed number is computed again.
struct Search<'a> {
    plan: &'a Plan,
    case: &'a mut Case,
    streams: &'a [Stream],
    columns: Vec<Vec<f64>>,
    holds: Vec<Vec<u64>>,
    medians: Vec<Option<f64>>,
    /// Constraints that some free number touches.
    touched: Vec<usize>,
    scratch: Vec<f64>,
}

impl<'a> Search<'a> {
    fn new(plan: &'a Plan, case: &'a mut Case, streams: &'a [Stream]) -> Self {
        let nodes = plan.graph.nodes.len();
        let mut needed = vec![false; nodes];
        for planned in &plan.constraints {
            needed[planned.available] = true;
            needed[planned.required] = true;
        }
        for id in (0..nodes).rev().filter(|id| plan.graph.nodes[*id].level.is_column()) {
            if needed[id] {
                for operand in operands(&plan.graph.nodes[id].op) {
                    needed[operand] = true;
                }
            }
        }
        let touched = (0..plan.constraints.len())
            .filter(|at| plan.constraints[*at].pulls.iter().any(|pull| *pull != Direction::Still))
            .collect();
        let mut search = Self {
            plan,
            case,
            streams,
            columns: vec![Vec::new(); nodes],
            holds: vec![vec![0; BLOCK / 64]; plan.constraints.len()],
            medians: vec![None; plan.constraints.len()],
            touched,
            scratch: vec![0.0; BLOCK],
        };
        for (id, needed) in needed.into_iter().enumerate() {
            if needed && plan.graph.nodes[id].level.is_column() {
                search.columns[id] = vec![0.0; BLOCK];
                search.column(id);
            }
        }
        for at in 0..plan.constraints.len() {
            search.constraint(at);
        }
        search
    }

    fn operand(&self, id: NodeId) -> Operand<'_> {
        if self.columns[id].is_empty() {
            Operand::Scalar(self.case.scalars[id])
        } else {
            Operand::Column(&self.columns[id])
        }
    }

    fn column(&mut self, id: NodeId) {
        let mut out = std::mem::take(&mut self.columns[id]);
        compute(self.plan, self.streams, self.case, id, 0, &mut out, |operand| self.operand(operand));
        self.columns[id] = out;
    }

    /// Whether a constraint holds, draw by draw; its median is then out of date.
    fn constraint(&mut self, at: usize) {
        let planned = &self.plan.constraints[at];
        let mut holds = std::mem::take(&mut self.holds[at]);
        holding(self.operand(planned.available), self.operand(planned.required), &mut holds, BLOCK);
        (self.holds[at], self.medians[at]) = (holds, None);
    }

    /// The median margin of a constraint, dex; not a number is the worst a margin can be.
    fn median(&mut self, at: usize) -> f64 {
        if let Some(median) = self.medians[at] {
            return median;
        }
        let planned = &self.plan.constraints[at];
        let mut ratio = std::mem::take(&mut self.scratch);
        ratios(self.operand(planned.available), self.operand(planned.required), &mut ratio);
        let [middle] = quantiles::order_statistics_f64(&mut ratio, [quantiles::rank_median(BLOCK)]);
        self.scratch = ratio;
        let median = if middle.is_nan() { f64::NEG_INFINITY } else { kernels::log10(middle) };
        self.medians[at] = Some(median);
        median
    }

    /// Gives free numbers new values and computes what depends on them.
    fn set(&mut self, values: &[(usize, f64)]) {
        let mut changed = vec![false; self.plan.graph.nodes.len()];
        for (free, value) in values {
            self.case.free[*free].value = *value;
            changed[self.plan.free[*free].node] = true;
        }
        for id in 0..changed.len() {
            let node = &self.plan.graph.nodes[id];
            changed[id] = changed[id] || operands(&node.op).iter().any(|operand| changed[*operand]);
            if !changed[id] {
                continue;
            }
            if node.level == Level::Setting {
                self.case.compute(self.plan, id);
            } else if !self.columns[id].is_empty() {
                self.column(id);
            }
        }
        for at in 0..self.plan.constraints.len() {
            let planned = &self.plan.constraints[at];
            if changed[planned.available] || changed[planned.required] {
                self.constraint(at);
            }
        }
    }

    /// The draws in which everything stronger than empirical holds, and in which everything does.
    fn chances(&self) -> (u32, u32) {
        let mut strong = [u64::MAX; BLOCK / 64];
        let mut all = [u64::MAX; BLOCK / 64];
        for (planned, bits) in self.plan.constraints.iter().zip(&self.holds) {
            let is_strong = planned.support.basis < Basis::Empirical;
            for ((strong, all), bits) in strong.iter_mut().zip(&mut all).zip(bits) {
                *all &= bits;
                if is_strong {
                    *strong &= bits;
                }
            }
        }
        (ones(&strong), ones(&all))
    }

    fn score(&mut self) -> Score {
        let chances = self.chances();
        let mut medians: Vec<f64> = self.touched.clone().into_iter().map(|at| self.median(at)).collect();
        medians.sort_by(f64::total_cmp);
        let distance = self.case.free.iter().map(|free| {
            let at = |value| position(&free.range, value);
            (at(free.value) - at(free.range.typical)).abs()
        });
        Score { chances, medians, distance: distance.sum() }
    }

    fn run(&mut self, searched: &[usize]) {
        let mut best = self.score();
        // How often anything changed, and of each number or pair how often it had when it was last tried: trying it
        // again before another change would find nothing new.
        let mut changes = 0_u32;
        let mut tried: BTreeMap<(usize, usize), u32> = BTreeMap::new();
        for _ in 0..PASSES {
            let before = changes;
            let alone = searched.iter().map(|free| (*free, *free));
            let pairs = searched
                .iter()
                .enumerate()
                .flat_map(|(position, one)| searched[position + 1..].iter().map(move |other| (*one, *other)));
            for (one, other) in alone.chain(pairs) {
                if tried.get(&(one, other)) == Some(&changes) || !self.coupled(one, other) {
                    continue;
                }
                let trials = self.trials(one, other);
                changes += u32::from(self.try_all(&trials, &mut best, Compare::Everything));
                for stride in STRIDES {
                    let all_hold = best.chances.1 as usize == BLOCK;
                    if one != other && !all_hold {
                        let trials = self.slants(one, other, stride);
                        changes += u32::from(self.try_all(&trials, &mut best, Compare::Chances));
                    }
                }
                tried.insert((one, other), changes);
            }
            if changes == before {
                break;
            }
        }
    }

    /// The points of one number, or both ends of a pair.
    fn trials(&self, one: usize, other: usize) -> Vec<Vec<(usize, f64)>> {
        let (a, b) = (self.case.free[one].range, self.case.free[other].range);
        if one == other {
            let place = |point: u32| f64::from(point) / f64::from(POINTS - 1);
            return (0..POINTS).map(|point| vec![(one, value_at(&a, place(point)))]).collect();
        }
        let ends = [(a.low, b.low), (a.low, b.high), (a.high, b.low), (a.high, b.high)];
        ends.iter().map(|(a, b)| vec![(one, *a), (other, *b)]).collect()
    }

    /// Both numbers of a pair, moved from where they stand.
    fn slants(&self, one: usize, other: usize, stride: f64) -> Vec<Vec<(usize, f64)>> {
        let moved = |free: usize, steps: f64| {
            let Setting { range, value } = &self.case.free[free];
            (free, value_at(range, position(range, *value) + stride * steps / f64::from(POINTS - 1)))
        };
        SLANTS.iter().map(|(a, b)| vec![moved(one, *a), moved(other, *b)]).collect()
    }

    fn decisive(&mut self, share: f64) -> Vec<Decisive> {
        let enough = |bits: &[u64]| f64::from(ones(bits)) >= share * BLOCK as f64;
        let before: Vec<bool> = self.holds.iter().map(|bits| enough(bits)).collect();
        let mut found = Vec::new();
        let mut back: Option<(usize, f64)> = None;
        for free in 0..self.plan.free.len() {
            let setting = &self.case.free[free];
            let touches = self.plan.constraints.iter().any(|planned| planned.pulls[free] != Direction::Still);
            if setting.value == setting.range.typical || !touches {
                continue;
            }
            let now = (free, setting.range.typical);
            let chosen = (free, setting.value);
            self.set(&back.into_iter().chain([now]).collect::<Vec<_>>());
            back = Some(chosen);
            let constraints: Vec<usize> =
                (0..before.len()).filter(|at| before[*at] && !enough(&self.holds[*at])).collect();
            if !constraints.is_empty() {
                found.push(Decisive { free, constraints });
            }
        }
        self.set(&back.into_iter().collect::<Vec<_>>());
        found
    }

    /// Tries settings of the same numbers and leaves the best of them, or what stood before.
    fn try_all(&mut self, trials: &[Vec<(usize, f64)>], best: &mut Score, compare: Compare) -> bool {
        let Some(first) = trials.first() else { return false };
        let mut keep: Vec<(usize, f64)> =
            first.iter().map(|(free, _)| (*free, self.case.free[*free].value)).collect();
        let mut changed = false;
        for trial in trials {
            if *trial == keep {
                continue;
            }
            self.set(trial);
            // Medians are compared only between settings that hold equally often.
            let ordering = self.chances().cmp(&best.chances);
            if ordering == Ordering::Less || (ordering == Ordering::Equal && compare == Compare::Chances) {
                continue;
            }
            let score = self.score();
            if score.better(best) {
                *best = score;
                keep.clone_from(trial);
                changed = true;
            }
        }
        self.set(&keep);
        changed
    }

    /// Whether one constraint feels both numbers.
    fn coupled(&self, one: usize, other: usize) -> bool {
        self.plan
            .constraints
            .iter()
            .any(|planned| planned.pulls[one] != Direction::Still && planned.pulls[other] != Direction::Still)
    }
}

fn ones(bits: &[u64]) -> u32 {
    bits.iter().map(|word| word.count_ones()).sum()
}

/// Where a value stands in its range, from 0 to 1 on the range's scale.
fn position(range: &FreeRange, value: f64) -> f64 {
    if range.low >= range.high {
        0.0
    } else if range.logarithmic {
        kernels::ln(value / range.low) / kernels::ln(range.high / range.low)
    } else {
        (value - range.low) / (range.high - range.low)
    }
}

/// The value at a place from 0 to 1 on the range's scale; the nearest end beyond.
fn value_at(range: &FreeRange, place: f64) -> f64 {
    if place <= 0.0 {
        range.low
    } else if place >= 1.0 {
        range.high
    } else if range.logarithmic {
        range.low * kernels::exp(place * kernels::ln(range.high / range.low))
    } else {
        range.low + place * (range.high - range.low)
    }
}
