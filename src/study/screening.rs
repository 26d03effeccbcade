//! Screens candidates: those of one shape share a plan, and those of one plan share the columns that do not depend on
//! what they state.

use std::collections::BTreeMap;

use rayon::iter::{IntoParallelIterator, IntoParallelRefMutIterator, ParallelIterator};

use crate::candidate::Candidate;
use crate::catalog::Catalog;
use crate::judge::{Asked, Assessment, assess, contradictions};
use crate::plan::{Plan, shape_key};
use crate::run::{self, Case, Decisive, FIRST_ROUND};
use crate::text::Problems;

/// Draws of one batch of candidates take about this many bytes at most.
const BATCH_BYTES: usize = 192 << 20;

/// The answer for one candidate, in the order they were given.
pub type Screened = Result<Assessment, Problems>;

/// Screens candidates. `progress` is told how many are done.
pub fn screen(
    catalog: &Catalog,
    candidates: &[Candidate],
    asked: &Asked,
    progress: &(dyn Fn(usize) + Sync),
) -> Vec<Screened> {
    let mut groups: BTreeMap<String, Vec<usize>> = BTreeMap::new();
    for (at, candidate) in candidates.iter().enumerate() {
        groups.entry(shape_key(candidate, &asked.only)).or_default().push(at);
    }
    let mut answers: Vec<Option<Screened>> = candidates.iter().map(|_| None).collect();
    let mut done = 0;
    for members in groups.into_values() {
        let plan = match Plan::new(catalog, &candidates[members[0]], &asked.only) {
            Ok(plan) => plan,
            Err(problems) => {
                for at in members {
                    answers[at] = Some(Err(problems.clone()));
                }
                continue;
            }
        };
        for batch in members.chunks(batch_size(&plan, asked)) {
            let screened = screen_batch(catalog, candidates, &plan, batch, asked);
            done += batch.len();
            for (at, answer) in batch.iter().zip(screened) {
                answers[*at] = Some(answer);
            }
            progress(done);
        }
    }
    // Every candidate is a member of exactly one group.
    answers.into_iter().map(|answer| answer.unwrap_or_else(|| Err(Problems::default()))).collect()
}

fn batch_size(plan: &Plan, asked: &Asked) -> usize {
    let draws = asked.settings.draws.unwrap_or(FIRST_ROUND);
    let bytes = draws * plan.constraints.len() * 5 + draws.min(FIRST_ROUND) * plan.outputs().len() * 16;
    (BATCH_BYTES / bytes.max(1)).clamp(1, 64)
}

fn screen_batch(
    catalog: &Catalog,
    candidates: &[Candidate],
    plan: &Plan,
    batch: &[usize],
    asked: &Asked,
) -> Vec<Screened> {
    let streams = run::streams(plan, asked.settings.seed);
    let mut cases: Vec<Case> = batch.iter().map(|at| Case::new(catalog, plan, &candidates[*at])).collect();
    let share = asked.settings.pass_at;
    let decisive: Vec<Vec<Decisive>> =
        cases.par_iter_mut().map(|case| run::choose(plan, case, &streams, share)).collect();
    let outcomes = run::run(plan, &cases, asked.settings);
    let together: Vec<_> = batch.iter().zip(&cases).zip(&outcomes).zip(&decisive).collect();
    together
        .into_par_iter()
        .map(|(((at, case), outcome), decisive)| {
            let candidate = &candidates[*at];
            let problems = contradictions(catalog, candidate, plan, case, outcome);
            if !problems.is_empty() {
                return Err(problems);
            }
            Ok(assess(catalog, candidate, plan, case, outcome, decisive, asked))
        })
        .collect()
}
