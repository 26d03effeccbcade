//! The assessment as JSON, format 1.
//!
//! Keys stand in the order of the structs below. `available`, `required`, `speaks_of`, `by` and the numbers of a
//! quantity are in the `unit` beside them (a pure number has the unit `""`); margins are in dex; chances and shares lie
//! between 0 and 1. `low` and `high` are the 5 % and 95 % quantiles. A number that is infinite or undefined is null; a key
//! that does not apply is absent. Characters that a terminal obeys are replaced in all texts.

use std::collections::BTreeMap;

use serde::Serialize;

use super::cleaning;
use crate::judge::Assessment;
use crate::judge::assessment::{
    ConstraintResult, Extrapolation, Origin, QuantityResult, Role, SpeaksOf, Verdict, Warning,
};

/// Version of the format.
const FORMAT: u32 = 1;

/// One assessment as an object on several lines.
#[must_use]
pub fn object(assessment: &Assessment) -> String {
    let clean = cleaning::cleaned(assessment);
    pretty(&Document::of(&clean))
}

/// Assessments as an array on several lines, for runs in which several files or documents were named.
#[must_use]
pub fn array(assessments: &[Assessment]) -> String {
    let clean: Vec<Assessment> = assessments.iter().map(cleaning::cleaned).collect();
    pretty(&clean.iter().map(Document::of).collect::<Vec<_>>())
}

/// One assessment on one line, for streams of many.
#[must_use]
pub fn line(assessment: &Assessment) -> String {
    let clean = cleaning::cleaned(assessment);
    let text = serde_json::to_string(&Document::of(&clean)).expect("texts and numbers always serialise");
    format!("{text}\n")
}

fn pretty(document: &impl Serialize) -> String {
    let text = serde_json::to_string_pretty(document).expect("texts and numbers always serialise");
    format!("{text}\n")
}

#[derive(Serialize)]
struct Document<'a> {
    format: u32,
    tool: Tool<'a>,
    candidate: Candidate<'a>,
    run: Run<'a>,
    overall: Overall<'a>,
    constraints: Vec<Constraint<'a>>,
    quantities: Vec<Quantity<'a>>,
    warnings: Vec<Note<'a>>,
}

#[derive(Serialize)]
struct Tool<'a> {
    name: &'static str,
    version: &'static str,
    catalog_digest: &'a str,
}

#[derive(Serialize)]
struct Candidate<'a> {
    name: &'a str,
    file: &'a str,
    document: usize,
    attributes: &'a BTreeMap<String, String>,
}

#[derive(Serialize)]
struct Run<'a> {
    seed: u64,
    draws: u64,
    #[serde(skip_serializing_if = "Option::is_none")]
    settled: Option<bool>,
    cap: u64,
    laws: &'a str,
    only: &'a [String],
    overlays: &'a [String],
    thresholds: Thresholds,
}

#[derive(Serialize)]
struct Thresholds {
    pass: f64,
    fail: f64,
}

#[derive(Serialize)]
struct Overall<'a> {
    verdict: String,
    #[serde(skip_serializing_if = "Option::is_none")]
    chance: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    chance_se: Option<f64>,
    assessed: usize,
    of: usize,
    #[serde(skip_serializing_if = "Option::is_none")]
    basis: Option<String>,
    outside_known_life: bool,
    #[serde(skip_serializing_if = "Option::is_none")]
    binding: Option<&'a str>,
    #[serde(skip_serializing_if = "Option::is_none")]
    binding_share: Option<f64>,
}

#[derive(Serialize)]
struct Constraint<'a> {
    id: &'a str,
    title: &'a str,
    family: &'a str,
    basis: String,
    verdict: String,
    #[serde(skip_serializing_if = "Option::is_none")]
    marginal: Option<String>,
    #[serde(skip_serializing_if = "Option::is_none")]
    chance: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    chance_se: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    unit: Option<&'a str>,
    #[serde(skip_serializing_if = "Option::is_none")]
    available: Option<Median>,
    #[serde(skip_serializing_if = "Option::is_none")]
    required: Option<Median>,
    #[serde(skip_serializing_if = "Option::is_none")]
    margin_dex: Option<MarginDex>,
    #[serde(skip_serializing_if = "Option::is_none")]
    speaks_of: Option<Spoken<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    not_a_number_share: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    extrapolated: Option<Vec<Beyond<'a>>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    missing: Option<&'a [Vec<String>]>,
    #[serde(skip_serializing_if = "Option::is_none")]
    reason: Option<&'a str>,
    sources: &'a [String],
}

/// `null` when infinite.
#[derive(Serialize)]
struct Median {
    median: f64,
}

#[derive(Serialize)]
struct MarginDex {
    median: f64,
    low: f64,
    high: f64,
}

#[derive(Serialize)]
struct Spoken<'a> {
    quantity: &'a str,
    value: f64,
    unit: &'a str,
}

#[derive(Serialize)]
struct Beyond<'a> {
    relation: &'a str,
    quantity: &'a str,
    share: f64,
    by: f64,
    unit: &'a str,
}

#[derive(Serialize)]
struct Quantity<'a> {
    name: &'a str,
    role: &'static str,
    origin: String,
    distribution: &'a str,
    median: f64,
    low: f64,
    high: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    chosen: Option<f64>,
    unit: &'a str,
}

#[derive(Serialize)]
struct Note<'a> {
    code: &'a str,
    message: &'a str,
}

impl<'a> Document<'a> {
    fn of(a: &'a Assessment) -> Self {
        let (run, overall) = (&a.run, &a.overall);
        Self {
            format: FORMAT,
            tool: Tool {
                name: env!("CARGO_PKG_NAME"),
                version: env!("CARGO_PKG_VERSION"),
                catalog_digest: &run.catalog_digest,
            },
            candidate: Candidate {
                name: &a.name,
                file: &a.file,
                document: a.document,
                attributes: &a.attributes,
            },
            run: Run {
                seed: run.seed,
                draws: run.draws,
                settled: run.settled,
                cap: run.cap,
                laws: &run.laws,
                only: &run.only,
                overlays: &run.overlays,
                thresholds: Thresholds { pass: run.pass_at, fail: run.fail_at },
            },
            overall: Overall {
                verdict: overall.verdict.to_string(),
                chance: overall.chance,
                chance_se: overall.chance_se,
                assessed: overall.assessed,
                of: overall.of,
                basis: overall.basis.map(|basis| basis.to_string()),
                outside_known_life: overall.outside_known_life,
                binding: overall.binding.as_deref(),
                binding_share: overall.binding_share,
            },
            constraints: a.constraints.iter().map(Constraint::of).collect(),
            quantities: a.quantities.iter().map(Quantity::of).collect(),
            warnings: a.warnings.iter().map(Note::of).collect(),
        }
    }
}

impl<'a> Constraint<'a> {
    fn of(result: &'a ConstraintResult) -> Self {
        let numbers = result.assessed.as_ref();
        let unit = &result.unit;
        Self {
            id: &result.id,
            title: &result.title,
            family: &result.family,
            basis: result.basis.to_string(),
            verdict: result.verdict.to_string(),
            marginal: match result.verdict {
                Verdict::Marginal(kind) => Some(kind.to_string()),
                _ => None,
            },
            chance: numbers.map(|numbers| numbers.chance),
            chance_se: numbers.map(|numbers| numbers.chance_se),
            unit: numbers.map(|_| unit.text()),
            available: numbers.map(|numbers| Median { median: unit.from_si(numbers.available) }),
            required: numbers.map(|numbers| Median { median: unit.from_si(numbers.required) }),
            margin_dex: numbers.map(|numbers| MarginDex {
                median: numbers.margin.median,
                low: numbers.margin.low,
                high: numbers.margin.high,
            }),
            speaks_of: result.speaks_of.as_ref().map(Spoken::of),
            not_a_number_share: numbers.map(|numbers| numbers.not_a_number_share),
            extrapolated: numbers.map(|_| result.extrapolated.iter().map(Beyond::of).collect()),
            missing: (result.verdict == Verdict::NotAssessed).then_some(result.missing.as_slice()),
            reason: result.reason.as_deref(),
            sources: &result.sources,
        }
    }
}

impl<'a> Spoken<'a> {
    fn of(speaks_of: &'a SpeaksOf) -> Self {
        Self {
            quantity: &speaks_of.quantity,
            value: speaks_of.unit.from_si(speaks_of.value),
            unit: speaks_of.unit.text(),
        }
    }
}

impl<'a> Beyond<'a> {
    fn of(beyond: &'a Extrapolation) -> Self {
        Self {
            relation: &beyond.relation,
            quantity: &beyond.quantity,
            share: beyond.share,
            by: beyond.by,
            unit: beyond.unit.text(),
        }
    }
}

impl<'a> Quantity<'a> {
    fn of(q: &'a QuantityResult) -> Self {
        Self {
            name: &q.name,
            role: match q.role {
                Role::Unknown => "unknown",
                Role::Free => "free",
            },
            origin: match &q.origin {
                Origin::Given => "given".to_owned(),
                Origin::Habitat => "habitat".to_owned(),
                Origin::Relation(id) => format!("relation:{id}"),
                Origin::Figure(id) => format!("figure:{id}"),
                Origin::Default => "default".to_owned(),
                Origin::Adopted => "adopted".to_owned(),
            },
            distribution: &q.distribution,
            median: q.unit.from_si(q.median),
            low: q.unit.from_si(q.low),
            high: q.unit.from_si(q.high),
            chosen: q.chosen.map(|chosen| q.unit.from_si(chosen)),
            unit: q.unit.text(),
        }
    }
}

impl<'a> Note<'a> {
    fn of(warning: &'a Warning) -> Self {
        Self { code: warning.code, message: &warning.message }
    }
}
