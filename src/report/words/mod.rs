//! The sentences that several formats share. They expect a cleaned assessment.

mod limits;
mod quantities;

use std::collections::BTreeSet;

use crate::judge::Assessment;
use crate::judge::assessment::{Basis, ConstraintResult, Origin, Overall, Verdict};
use crate::quantity::shown::{self, Precision};

pub(super) use limits::{
    compared, dex, factor, factor_with_interval, grouped, marginal, marks, ranked, reservations, speaks_of,
};
pub(super) use quantities::{as_read, chosen, median, origin, with_interval, worked_out};

/// What every report says of its own reach.
pub(super) const CAUTION: &str = "A pass is never evidence of life, and a fail is no proof of its absence: both say \
                                  how a description stands against the limits listed here, and nothing else.";
/// Whose matter the consequences are.
pub(super) const DEFERENCE: &str = "How to treat a sample, a site or a spacecraft is for the mission's \
                                    planetary-protection policy and for specialists of the field to say.";

/// The verdict in sentence case.
pub(super) fn verdict(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Pass => "Pass",
        Verdict::Marginal(_) => "Marginal",
        Verdict::Fail => "Fail",
        Verdict::NotAssessed => "Not assessed",
        Verdict::NotApplicable => "Not applicable",
    }
}

/// The overall verdict in sentence case.
pub(super) fn overall_verdict(verdict: Overall) -> &'static str {
    match verdict {
        Overall::Pass => "Pass",
        Overall::Marginal => "Marginal",
        Overall::Fail => "Fail",
        Overall::NotAssessed => "Not assessed",
    }
}

/// The lines that every report begins with: label and sentence.
pub(super) fn head(a: &Assessment) -> Vec<(&'static str, String)> {
    let passes = a.overall.verdict == Overall::Pass;
    let fails = a.overall.verdict == Overall::Fail;
    let labelled = [
        ("Overall", Some(overall(a))),
        (if passes { "Tightest" } else { "Binding" }, binding(a)),
        (if fails { "Even with" } else { "Possible with" }, chosen(a)),
        ("Rests on", rests_on(a)),
        ("Candidate", Some(candidate(a))),
    ];
    labelled.into_iter().filter_map(|(label, text)| Some((label, text?))).collect()
}

/// The overall verdict, its basis, how much was assessed, and how often everything holds.
pub(super) fn overall(a: &Assessment) -> String {
    let overall = &a.overall;
    let basis = overall.basis.map(|basis| format!(", on {}", with_article(basis))).unwrap_or_default();
    let verdict = match overall.verdict {
        Overall::Pass => format!("Pass{basis}, which is never evidence of life"),
        Overall::Fail => format!("Fail{basis}, which is no proof that life is absent"),
        Overall::Marginal => format!("Marginal{basis}"),
        Overall::NotAssessed => "Not assessed".to_owned(),
    };
    let outside = if overall.outside_known_life {
        "; outside known life, because an empirical limit fails"
    } else {
        ""
    };
    let chosen = if a.run.only.is_empty() { "" } else { "chosen " };
    let assessed = format!("{} of {} {chosen}limits assessed", overall.assessed, overall.of);
    let holds = overall.chance.map(|chance| {
        format!("; everything assessed holds in {} of draws", shown::share(chance, &thresholds(a)))
    });
    format!("{verdict}{outside}. {assessed}{}.", holds.unwrap_or_default())
}

/// The constraint that binds, or the tightest one.
pub(super) fn binding(a: &Assessment) -> Option<String> {
    let result = binding_result(a)?;
    let numbers = result.assessed.as_ref()?;
    let share = a.overall.binding_share.map(|share| {
        format!("; it does not hold in {} of the draws in which something does not", shown::share(share, &[]))
    });
    Some(format!(
        "{} (`{}`): {}{}.",
        result.title,
        result.id,
        factor_with_interval(numbers),
        share.unwrap_or_default()
    ))
}

/// The entry of the binding constraint.
pub(super) fn binding_result(a: &Assessment) -> Option<&ConstraintResult> {
    let id = a.overall.binding.as_ref()?;
    a.constraints.iter().find(|result| &result.id == id)
}

/// How many numbers came from where, and what weakens them.
pub(super) fn rests_on(a: &Assessment) -> Option<String> {
    let count = |wanted: fn(&Origin) -> bool| a.quantities.iter().filter(|q| wanted(&q.origin)).count();
    let habitat = a.habitat.as_ref().map_or("a habitat".to_owned(), |name| format!("habitat `{name}`"));
    let stretched: BTreeSet<&String> =
        a.constraints.iter().flat_map(|result| &result.extrapolated).map(|beyond| &beyond.relation).collect();
    let behind: BTreeSet<&String> = a
        .constraints
        .iter()
        .filter(|result| result.assessed.is_some())
        .flat_map(|result| &result.sources)
        .collect();
    let standing = |word: &str| {
        behind.iter().filter(|key| a.citations.get(**key).is_some_and(|c| c.standing == word)).count()
    };
    let parts = [
        some(count(|o| *o == Origin::Given), "number given", "numbers given"),
        some(count(|o| *o == Origin::Habitat), "from", "from").map(|text| format!("{text} {habitat}")),
        some(count(|o| matches!(o, Origin::Relation(_))), "from a relation", "from relations"),
        some(count(|o| *o == Origin::Default), "default", "defaults"),
        some(count(|o| *o == Origin::Adopted), "adopted parameter", "adopted parameters"),
        some(stretched.len(), "law beyond its range", "laws beyond their range"),
        some(standing("from-memory"), "source from memory", "sources from memory"),
        some(standing("disputed"), "disputed source", "disputed sources"),
        some(a.run.overlays.len(), "entry from an overlay", "entries from overlays"),
    ];
    let parts: Vec<String> = parts.into_iter().flatten().collect();
    if parts.is_empty() { None } else { Some(format!("{}.", parts.join(", "))) }
}

/// The name, where it stands, and its attributes.
pub(super) fn candidate(a: &Assessment) -> String {
    let document = if a.document > 1 { format!(", document {}", a.document) } else { String::new() };
    let attributes = attributes(a);
    let attributes = if attributes.is_empty() { attributes } else { format!(": {attributes}") };
    format!("{} ({}{document}){attributes}.", a.name, a.file)
}

/// The attributes: `body plan prokaryotic-cell, form sphere`.
pub(super) fn attributes(a: &Assessment) -> String {
    let pairs = a.attributes.iter().map(|(name, word)| format!("{} {word}", spoken(name)));
    pairs.collect::<Vec<_>>().join(", ")
}

/// How the draws were made.
pub(super) fn run(a: &Assessment) -> String {
    let run = &a.run;
    let settled = match run.settled {
        Some(true) => "until the answers had settled".to_owned(),
        Some(false) => format!("not settled at the cap of {}", shown::count(run.cap)),
        None => "as many as asked for".to_owned(),
    };
    let mut text = format!(
        "{} draws, {settled}; seed {}; {} laws; pass from {}, fail up to {}; catalogue {}",
        shown::count(run.draws),
        run.seed,
        run.laws,
        shown::number(run.pass_at, Precision::UpTo(4)),
        shown::number(run.fail_at, Precision::UpTo(4)),
        run.catalog_digest.chars().take(12).collect::<String>()
    );
    for (what, ids) in [("entries from overlays", &run.overlays), ("only", &run.only)] {
        if !ids.is_empty() {
            text += &format!(
                "; {what}: {}",
                ids.iter().map(|id| format!("`{id}`")).collect::<Vec<_>>().join(", ")
            );
        }
    }
    format!("{text}.")
}

/// The thresholds that a printed chance must not cross by rounding.
pub(super) fn thresholds(a: &Assessment) -> [f64; 2] {
    [a.run.pass_at, a.run.fail_at]
}

/// A basis with its article: `an aqueous basis`.
pub(super) fn with_article(basis: Basis) -> String {
    let article = if matches!(basis, Basis::Aqueous | Basis::Empirical) { "an" } else { "a" };
    format!("{article} {basis} basis")
}

/// A name as it is spoken: underscores and the hyphen of `from-memory` become blanks.
pub(super) fn spoken(name: &str) -> String {
    if name == "from-memory" { "from memory".to_owned() } else { name.replace('_', " ") }
}

/// `1 limit`, `5 limits`.
pub(super) fn limits(count: usize) -> String {
    if count == 1 { "1 limit".to_owned() } else { format!("{count} limits") }
}

fn some(count: usize, one: &str, many: &str) -> Option<String> {
    match count {
        0 => None,
        1 => Some(format!("1 {one}")),
        _ => Some(format!("{count} {many}")),
    }
}

/// A sentence with a capital at its beginning.
pub(super) fn sentence(text: &str) -> String {
    let mut characters = text.chars();
    match characters.next() {
        Some(first) => first.to_uppercase().chain(characters).collect(),
        None => String::new(),
    }
}
