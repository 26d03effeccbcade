//! From shares of draws to verdicts.

use super::assessment::{Marginal, Overall, Verdict};
use crate::catalog::Basis;
use crate::run::{Record, Statistics};

/// A marginal verdict whose 5-95 % interval spans less than this many dex is near its limit, not undecided.
const NEAR: f64 = 0.5;
/// More than this share of margins that are not a number leaves a constraint unassessed.
pub(super) const TOLERATED_NOT_A_NUMBER: f64 = 0.01;

/// The verdict on one constraint. The interval excludes zero exactly when it is not marginal, at the default thresholds.
pub(super) fn verdict(statistics: &Statistics, draws: usize, pass_at: f64, fail_at: f64) -> Verdict {
    let chance = statistics.holding as f64 / draws as f64;
    if chance >= pass_at {
        Verdict::Pass
    } else if chance <= fail_at {
        Verdict::Fail
    } else if statistics.high - statistics.low < NEAR {
        Verdict::Marginal(Marginal::Near)
    } else {
        Verdict::Marginal(Marginal::Undecided)
    }
}

/// One assessed constraint, as the overall verdict sees it.
#[derive(Clone, Copy, Debug)]
pub(super) struct Entry<'a> {
    /// Position in the plan and in the record.
    pub(super) at: usize,
    pub(super) id: &'a str,
    pub(super) family: &'a str,
    pub(super) basis: Basis,
    pub(super) verdict: Verdict,
    pub(super) statistics: &'a Statistics,
}

/// What the whole comes to.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Whole {
    pub(super) verdict: Overall,
    /// Draws in which everything holds.
    pub(super) together: u64,
    pub(super) basis: Option<Basis>,
    pub(super) outside_known_life: bool,
    /// Position among the entries, and the share that it has in the draws in which something does not hold.
    pub(super) binding: Option<(usize, Option<f64>)>,
}

/// The overall verdict. See `docs/method.md`, "Overall".
pub(super) fn whole(entries: &[Entry<'_>], record: &Record, pass_at: f64, fail_at: f64) -> Whole {
    let draws = record.draws as u64;
    let share = |count: u64| count as f64 / draws as f64;
    let together = all_hold(record, entries.iter());
    if entries.is_empty() {
        let verdict = Overall::NotAssessed;
        return Whole { verdict, together: 0, basis: None, outside_known_life: false, binding: None };
    }
    let strong = || entries.iter().filter(|entry| entry.basis < Basis::Empirical);
    let strong_fails = strong().any(|entry| entry.verdict == Verdict::Fail)
        || (strong().next().is_some() && share(all_hold(record, strong())) <= fail_at);
    let outside_known_life =
        entries.iter().any(|entry| entry.basis == Basis::Empirical && entry.verdict == Verdict::Fail);
    let verdict = if strong_fails {
        Overall::Fail
    } else if share(together) >= pass_at && !outside_known_life {
        Overall::Pass
    } else {
        Overall::Marginal
    };
    let binding = if verdict == Overall::Pass {
        tightest(entries).map(|at| (at, None))
    } else {
        binding(entries, record, draws - together)
    };
    let failed = entries.iter().filter(|entry| entry.verdict == Verdict::Fail).map(|entry| entry.basis).min();
    let bound = binding.map(|(at, _)| entries[at].basis);
    let basis = if verdict == Overall::Fail { failed.or(bound) } else { bound };
    Whole { verdict, together, basis, outside_known_life, binding }
}

/// Draws in which all of these hold.
fn all_hold<'a, 'b: 'a>(record: &Record, entries: impl Iterator<Item = &'a Entry<'b>>) -> u64 {
    let mut all: Option<Vec<u64>> = None;
    for entry in entries {
        let bits = record.holds(entry.at);
        match &mut all {
            None => all = Some(bits),
            Some(all) => all.iter_mut().zip(&bits).for_each(|(all, bits)| *all &= bits),
        }
    }
    // Nothing to fail: everything holds.
    all.map_or(record.draws as u64, |all| all.iter().map(|word| u64::from(word.count_ones())).sum())
}

/// The constraint that does not hold in most of the draws in which something does not; families are pooled first.
fn binding(entries: &[Entry<'_>], record: &Record, failing: u64) -> Option<(usize, Option<f64>)> {
    let draws = record.draws as u64;
    let lowest_median = |members: &[usize]| {
        members.iter().map(|at| rank_of(entries[*at].statistics.median)).fold(f64::INFINITY, f64::min)
    };
    let mut families: Vec<&str> = entries.iter().map(|entry| entry.family).collect();
    families.sort_unstable();
    families.dedup();
    let pooled = families.into_iter().map(|family| {
        let members: Vec<usize> = (0..entries.len()).filter(|at| entries[*at].family == family).collect();
        let fails = draws - all_hold(record, members.iter().map(|at| &entries[*at]));
        (fails, lowest_median(&members), members)
    });
    let (_, _, members) = pooled.min_by(|a, b| b.0.cmp(&a.0).then(a.1.total_cmp(&b.1)))?;
    let fails = |at: &usize| draws - entries[*at].statistics.holding;
    let at = members.into_iter().min_by(|a, b| {
        let medians =
            rank_of(entries[*a].statistics.median).total_cmp(&rank_of(entries[*b].statistics.median));
        fails(b).cmp(&fails(a)).then(medians).then(entries[*a].id.cmp(entries[*b].id))
    })?;
    let share = if failing == 0 { None } else { Some(fails(&at) as f64 / failing as f64) };
    Some((at, share))
}

/// The tightest constraint when everything passes: lowest chance, then smallest median over its half-interval.
fn tightest(entries: &[Entry<'_>]) -> Option<usize> {
    let relative = |statistics: &Statistics| {
        let half = (statistics.high - statistics.low) / 2.0;
        let ratio = statistics.median / half;
        if ratio.is_nan() { f64::INFINITY } else { ratio }
    };
    (0..entries.len()).min_by(|a, b| {
        let (a, b) = (&entries[*a], &entries[*b]);
        a.statistics
            .holding
            .cmp(&b.statistics.holding)
            .then(relative(a.statistics).total_cmp(&relative(b.statistics)))
            .then(a.statistics.median.total_cmp(&b.statistics.median))
            .then(a.id.cmp(b.id))
    })
}

/// Not a number ranks lowest.
const fn rank_of(median: f64) -> f64 {
    if median.is_nan() { f64::NEG_INFINITY } else { median }
}
