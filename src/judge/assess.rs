//! Builds the assessment of one candidate from its plan and its draws.

use std::collections::{BTreeMap, BTreeSet};

use super::assessment::{
    Assessed, Assessment, Citation, ConstraintResult, DoubtfulGround, Extrapolation, Interval, OverallResult,
    RunRecord, SpeaksOf, Verdict, Warning,
};
use super::verdict::{Entry, TOLERATED_NOT_A_NUMBER, verdict, whole};
use crate::candidate::Candidate;
use crate::catalog::{Basis, Catalog, Constraint};
use crate::math::quantiles;
use crate::plan::{Outside, Plan, Planned};
use crate::quantity::Distribution;
use crate::quantity::shown::{self, Precision};
use crate::quantity::written::Value;
use crate::run::{
    CAP, Case, Decisive, FIRST_ROUND, Outcome, Settings, Statistics, chance_error, interval_ranks,
};
use crate::text::{Problem, Problems, one_line};

/// What was asked for, for the record.
#[derive(Clone, Debug)]
pub struct Asked {
    /// How draws were made.
    pub settings: Settings,
    /// Ids of the constraints asked for; empty means all.
    pub only: Vec<String>,
}

/// A stated value and what a definition makes of the other statements may differ by this factor without contradiction:
/// the rounding of what is written.
const ROUNDING: f64 = 1.01;

/// Stated quantities that contradict each other by more than their uncertainties.
#[must_use]
pub fn contradictions(
    catalog: &Catalog,
    candidate: &Candidate,
    plan: &Plan,
    case: &Case,
    outcome: &Outcome,
) -> Problems {
    let mut problems = Problems::new();
    for identity in &plan.identities {
        let Some(reading) = candidate.stated(&identity.quantity) else { continue };
        let draws = outcome.record.draws.min(FIRST_ROUND);
        let values = |node: usize| outcome.values(node).unwrap_or_else(|| vec![case.scalars[node]; draws]);
        let (stated, derived) = (values(identity.stated), values(identity.derived));
        let mut ratios: Vec<f64> =
            derived.iter().zip(&stated).map(|(derived, stated)| derived / stated).collect();
        let ranks = interval_ranks(ratios.len());
        let found = quantiles::order_statistics_f64(&mut ratios, ranks);
        if found[2] < 1.0 / ROUNDING || found[0] > ROUNDING || found[1].is_nan() {
            let relation = &catalog.relations[identity.relation];
            let unit = &reading.unit;
            let show = |node: usize| {
                let [low, median, high] = quantiles_at(node, case, outcome);
                shown::in_unit(median, Precision::supported_by(median, low, high), unit)
            };
            problems.push(
                Problem::at(
                    reading.place.clone(),
                    format!(
                        "`{}` is stated as {}, but what else is stated makes it {}",
                        identity.quantity,
                        show(identity.stated),
                        show(identity.derived)
                    ),
                )
                .expected(format!(
                    "only one of the two, or values that agree within their uncertainties (`{}`: {} = {})",
                    relation.entry.id,
                    identity.quantity,
                    relation.formula.text()
                )),
            );
        }
    }
    problems
}

/// 5 % quantile, median and 95 % quantile of a node.
fn quantiles_at(node: usize, case: &Case, outcome: &Outcome) -> [f64; 3] {
    outcome.quantiles(node).unwrap_or([case.scalars[node]; 3])
}

/// Builds the assessment.
#[must_use]
pub fn assess(
    catalog: &Catalog,
    candidate: &Candidate,
    plan: &Plan,
    case: &Case,
    outcome: &Outcome,
    decisive: &[Decisive],
    asked: &Asked,
) -> Assessment {
    let builder = Builder { catalog, candidate, plan, case, outcome, asked };
    let (mut constraints, overall) = builder.constraints();
    constraints.sort_by(|a, b| a.id.cmp(&b.id));
    let mut quantities = builder.quantities();
    quantities.sort_by(|a, b| a.name.cmp(&b.name));
    let citations = builder.citations(&constraints);
    let warnings = builder.warnings(&constraints, decisive);
    Assessment {
        name: candidate.name.clone(),
        file: candidate.file.clone(),
        document: candidate.document,
        attributes: builder.attributes(),
        notes: candidate.notes.clone(),
        habitat: candidate.habitat.clone(),
        run: RunRecord {
            seed: asked.settings.seed,
            draws: outcome.record.draws as u64,
            settled: outcome.settled,
            cap: CAP as u64,
            laws: "preferred".to_owned(),
            only: asked.only.clone(),
            overlays: catalog.overlaid.iter().cloned().collect(),
            pass_at: asked.settings.pass_at,
            fail_at: asked.settings.fail_at,
            catalog_digest: catalog.digest.clone(),
        },
        overall,
        constraints,
        quantities,
        warnings,
        citations,
    }
}

pub(super) struct Builder<'a> {
    pub(super) catalog: &'a Catalog,
    pub(super) candidate: &'a Candidate,
    pub(super) plan: &'a Plan,
    pub(super) case: &'a Case,
    pub(super) outcome: &'a Outcome,
    pub(super) asked: &'a Asked,
}

impl Builder<'_> {
    /// The attributes that the candidate states, and those by whose defaults the limits listed here were chosen.
    fn attributes(&self) -> BTreeMap<String, String> {
        let planned = self.plan.constraints.iter().map(|planned| planned.constraint);
        let outside = self.plan.outside.iter().map(|(at, _)| *at);
        let constraints = planned.chain(outside).map(|at| &self.catalog.constraints[at].entry);
        let relations = self.plan.constraints.iter().flat_map(|planned| &planned.support.relations);
        let relations = relations.map(|at| &self.catalog.relations[*at].entry);
        let asked: BTreeSet<&str> = constraints
            .chain(relations)
            .flat_map(|entry| entry.condition.clauses.iter().map(|clause| clause.attribute.as_str()))
            .collect();
        let told =
            |name: &String| asked.contains(name.as_str()) || self.candidate.stated_attributes.contains(name);
        let attributes = self.candidate.attributes.iter().filter(|(name, _)| told(name));
        attributes.map(|(name, word)| (name.clone(), word.clone())).collect()
    }

    fn constraints(&self) -> (Vec<ConstraintResult>, OverallResult) {
        let (pass_at, fail_at) = (self.asked.settings.pass_at, self.asked.settings.fail_at);
        let draws = self.outcome.record.draws;
        let mut results = Vec::new();
        let mut entries = Vec::new();
        for (at, planned) in self.plan.constraints.iter().enumerate() {
            let statistics = &self.outcome.statistics[at];
            let constraint = &self.catalog.constraints[planned.constraint];
            let not_a_number = statistics.not_a_number as f64 / draws as f64;
            let mut result = self.blank(constraint, planned.support.basis);
            result.sources = planned.support.sources.iter().cloned().collect();
            result.doubts = planned
                .support
                .doubts
                .iter()
                .map(|doubt| DoubtfulGround {
                    what: doubt.what.clone(),
                    standing: doubt.standing.to_string(),
                })
                .collect();
            if not_a_number > TOLERATED_NOT_A_NUMBER {
                result.reason =
                    Some(format!("the margin is not a number in {:.1} % of draws", 100.0 * not_a_number));
            } else {
                result.verdict = verdict(statistics, draws, pass_at, fail_at);
                result.assessed = Some(self.assessed(planned, statistics, not_a_number));
                result.speaks_of = self.speaks_of(constraint);
                result.extrapolated = self.extrapolated(planned, constraint);
                entries.push(Entry {
                    at,
                    id: &constraint.entry.id,
                    family: &constraint.entry.family,
                    basis: planned.support.basis,
                    verdict: result.verdict,
                    statistics,
                });
            }
            results.push(result);
        }
        for (at, why) in &self.plan.outside {
            results.push(self.outside(&self.catalog.constraints[*at], why));
        }
        let whole = whole(&entries, &self.outcome.record, pass_at, fail_at);
        let assessed = entries.len();
        let not_assessed = results.iter().filter(|result| result.verdict == Verdict::NotAssessed).count();
        let chance = (assessed > 0).then(|| whole.together as f64 / draws as f64);
        let overall = OverallResult {
            verdict: whole.verdict,
            chance,
            chance_se: chance.map(|_| chance_error(whole.together, draws as u64)),
            assessed,
            of: assessed + not_assessed,
            basis: whole.basis,
            outside_known_life: whole.outside_known_life,
            binding: whole.binding.map(|(at, _)| entries[at].id.to_owned()),
            binding_share: whole.binding.and_then(|(_, share)| share),
        };
        (results, overall)
    }

    fn blank(&self, constraint: &Constraint, basis: Basis) -> ConstraintResult {
        ConstraintResult {
            id: constraint.entry.id.clone(),
            title: constraint.entry.title.clone(),
            family: constraint.entry.family.clone(),
            basis,
            verdict: Verdict::NotAssessed,
            assessed: None,
            unit: constraint.unit.clone(),
            available_says: constraint.available.says.clone(),
            required_says: constraint.required.says.clone(),
            available_formula: one_line(constraint.available.formula.text()),
            required_formula: one_line(constraint.required.formula.text()),
            available_tex: constraint.available.formula.tex(&|name| self.symbol(name)),
            required_tex: constraint.required.formula.tex(&|name| self.symbol(name)),
            parameters: self.parameters(&constraint.entry),
            meaning: constraint.entry.meaning.clone().unwrap_or_default(),
            exceptions: constraint.entry.exceptions.clone(),
            speaks_of: None,
            extrapolated: Vec::new(),
            missing: Vec::new(),
            reason: None,
            sources: constraint.entry.sources.clone(),
            doubts: Vec::new(),
        }
    }

    fn symbol(&self, name: &str) -> Option<String> {
        self.catalog.quantities.get(name)?.symbol.clone()
    }

    fn outside(&self, constraint: &Constraint, why: &Outside) -> ConstraintResult {
        let mut result = self.blank(constraint, constraint.entry.basis);
        match why {
            Outside::Missing(groups) => result.missing.clone_from(groups),
            Outside::DefaultsAlone => result.reason = Some("rests on defaults alone".to_owned()),
            Outside::Chemistry(attributes) => {
                result.verdict = Verdict::NotApplicable;
                let words: Vec<String> = attributes
                    .iter()
                    .filter_map(|name| Some(format!("{name} is {}", self.candidate.attributes.get(name)?)))
                    .collect();
                result.reason = Some(words.join(", "));
            }
        }
        result
    }

    pub(super) fn quantiles(&self, node: usize) -> [f64; 3] {
        quantiles_at(node, self.case, self.outcome)
    }

    fn assessed(&self, planned: &Planned, statistics: &Statistics, not_a_number_share: f64) -> Assessed {
        let draws = self.outcome.record.draws as u64;
        Assessed {
            chance: statistics.holding as f64 / draws as f64,
            chance_se: chance_error(statistics.holding, draws),
            available: self.quantiles(planned.available)[1],
            required: self.quantiles(planned.required)[1],
            margin: Interval { median: statistics.median, low: statistics.low, high: statistics.high },
            not_a_number_share,
        }
    }

    fn speaks_of(&self, constraint: &Constraint) -> Option<SpeaksOf> {
        let name = constraint.speaks_of.as_ref()?.of(&self.candidate.attributes).ok()?;
        let planned = self.plan.quantities.iter().find(|quantity| quantity.name == *name)?;
        let value = self.quantity(planned).median;
        Some(SpeaksOf { quantity: name.clone(), value, unit: self.catalog.quantities[name].unit.clone() })
    }

    fn extrapolated(&self, planned: &Planned, constraint: &Constraint) -> Vec<Extrapolation> {
        let relations =
            planned.support.relations.iter().map(|at| self.catalog.relations[*at].entry.id.as_str());
        let entries: Vec<&str> = relations.chain([constraint.entry.id.as_str()]).collect();
        let mut found = Vec::new();
        for check in self.plan.ranges.iter().filter(|check| entries.contains(&check.entry.as_str())) {
            let distance = |value: f64| {
                if value < check.range.low {
                    check.range.low - value
                } else if value > check.range.high {
                    value - check.range.high
                } else {
                    0.0
                }
            };
            let values =
                self.outcome.values(check.node).unwrap_or_else(|| vec![self.case.scalars[check.node]]);
            let all = values.len();
            let mut outside: Vec<f64> = values.into_iter().map(distance).collect();
            outside.retain(|distance| *distance > 0.0);
            if !outside.is_empty() {
                found.push(Extrapolation {
                    relation: check.entry.clone(),
                    quantity: check.quantity.clone(),
                    share: outside.len() as f64 / all as f64,
                    by: median_of(&mut outside),
                    unit: self.catalog.quantities[&check.quantity].unit.clone(),
                });
            }
        }
        found
    }

    fn citations(&self, constraints: &[ConstraintResult]) -> BTreeMap<String, Citation> {
        let keys = constraints.iter().flat_map(|constraint| &constraint.sources);
        let figures =
            self.plan.figures.iter().flat_map(|figure| &self.catalog.figures[figure.figure].entry.sources);
        keys.chain(figures)
            .filter_map(|key| {
                let work = self.catalog.works.get(key)?;
                let year = if work.year.is_empty() { String::new() } else { format!(" ({})", work.year) };
                let parts = [format!("{}{year}", work.authors), work.title.clone(), work.journal.clone()];
                let text =
                    parts.iter().filter(|part| !part.is_empty()).cloned().collect::<Vec<_>>().join(". ");
                Some((
                    key.clone(),
                    Citation { text, doi: work.doi.clone(), standing: work.standing.to_string() },
                ))
            })
            .collect()
    }

    fn warnings(&self, constraints: &[ConstraintResult], decisive: &[Decisive]) -> Vec<Warning> {
        let mut warnings: Vec<Warning> = self
            .candidate
            .warnings
            .iter()
            .map(|(code, message)| Warning { code, message: message.clone() })
            .collect();
        let exact = |value: &Value| matches!(value, Value::Unknown(Distribution::Exact(_)));
        if !self.candidate.given.is_empty()
            && self.candidate.given.values().all(|reading| exact(&reading.value))
        {
            warnings.push(Warning {
                code: "all-exact",
                message:
                    "nothing that the candidate states is uncertain; write a standard uncertainty, as in \
                          `210 ± 30 nm`, where a number was measured"
                        .to_owned(),
            });
        }
        for name in &self.plan.unused {
            warnings.push(Warning {
                code: "unused-quantity",
                message: format!("`{name}` is stated, but no limit that applies here uses it"),
            });
        }
        for constraint in constraints {
            let share = constraint.assessed.as_ref().map_or(0.0, |assessed| assessed.not_a_number_share);
            if share > 0.0 {
                warnings.push(Warning {
                    code: "not-a-number",
                    message: format!(
                        "the margin of `{}` is not a number in {:.3} % of draws, which count as not holding",
                        constraint.id,
                        100.0 * share
                    ),
                });
            }
        }
        if self.outcome.settled == Some(false) {
            warnings.push(Warning {
                code: "cap-reached",
                message: format!("the answers had not settled after {CAP} draws, the largest number made"),
            });
        }
        for choice in decisive {
            let number = &self.plan.free[choice.free];
            let setting = &self.case.free[choice.free];
            let unit =
                self.candidate.unit(&number.name).unwrap_or(&self.catalog.quantities[&number.name].unit);
            let show = |value: f64| shown::in_unit(value, Precision::Digits(2), unit);
            let ids: Vec<String> = choice
                .constraints
                .iter()
                .map(|at| {
                    let planned = &self.plan.constraints[*at];
                    format!("`{}`", self.catalog.constraints[planned.constraint].entry.id)
                })
                .collect();
            warnings.push(Warning {
                code: "decided-by-choice",
                message: format!(
                    "{} {} only because `{}` may be {}; at the typical {} {} would not",
                    ids.join(", "),
                    if ids.len() == 1 { "holds" } else { "hold" },
                    number.name,
                    show(setting.value),
                    show(setting.range.typical),
                    if ids.len() == 1 { "it" } else { "they" },
                ),
            });
        }
        warnings
    }
}

fn median_of(values: &mut [f64]) -> f64 {
    let rank = quantiles::rank_median(values.len());
    quantiles::order_statistics_f64(values, [rank])[0]
}
