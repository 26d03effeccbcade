//! What is said of one limit, and how limits are put in order.

use std::collections::{BTreeMap, BTreeSet};

use super::{quantities, spoken};
use crate::judge::Assessment;
use crate::judge::assessment::{Assessed, ConstraintResult, Extrapolation, Marginal, Verdict};
use crate::quantity::shown::{self, Precision};

/// What is available and what is required, in units that compare.
pub(in crate::report) fn compared(result: &ConstraintResult, numbers: &Assessed) -> (String, String) {
    let precision = Precision::supported_by_dex(numbers.margin.low, numbers.margin.high);
    shown::pair(numbers.available, numbers.required, precision, &result.unit)
}

/// The median margin as a factor.
pub(in crate::report) fn factor(numbers: &Assessed) -> String {
    shown::factor(numbers.margin.median, factor_precision(numbers))
}

/// The median margin and its interval as factors: `3.2 times short (90 % within 2.1 to 4.9 times short)`.
pub(in crate::report) fn factor_with_interval(numbers: &Assessed) -> String {
    let (margin, median) = (numbers.margin, factor(numbers));
    if margin.low == margin.high {
        return median;
    }
    format!(
        "{median} (90 % within {})",
        shown::factor_range(margin.low, margin.high, factor_precision(numbers))
    )
}

fn factor_precision(numbers: &Assessed) -> Precision {
    let margin = numbers.margin;
    shown::factor_precision(margin.median, margin.low, margin.high)
}

/// The median margin in dex and its interval, if it has any extent.
pub(in crate::report) fn dex(numbers: &Assessed) -> (String, Option<String>) {
    let margin = numbers.margin;
    let decimals = shown::dex_decimals(margin.low, margin.high);
    let shown = |value| shown::dex(value, decimals);
    let interval =
        (margin.low != margin.high).then(|| format!("{} to {}", shown(margin.low), shown(margin.high)));
    (shown(margin.median), interval)
}

/// What lies behind a number that a reader should know before trusting it: label and sentence.
pub(in crate::report) fn reservations(result: &ConstraintResult) -> Vec<(&'static str, String)> {
    let mut out: Vec<_> =
        result.extrapolated.iter().map(|beyond| ("Beyond", extrapolation(beyond))).collect();
    out.extend(standings(result).into_iter().map(|text| ("Standing", text)));
    if let Some(numbers) = &result.assessed
        && numbers.not_a_number_share > 0.0
    {
        let share = shown::share(numbers.not_a_number_share, &[]);
        out.push(("Undefined", format!("not a number in {share} of draws, counted as not holding")));
    }
    out
}

/// A relation used beyond its range.
fn extrapolation(beyond: &Extrapolation) -> String {
    let by = beyond.unit.difference_to_si(beyond.by);
    format!(
        "`{}` is used beyond its range of {} in {}, by {}",
        beyond.relation,
        spoken(&beyond.quantity),
        if beyond.share >= 1.0 {
            "all draws".to_owned()
        } else {
            format!("{} of draws", shown::share(beyond.share, &[]))
        },
        shown::difference_in_unit(by, Precision::UpTo(2), &beyond.unit)
    )
}

/// The numbers behind a result that are disputed or from memory: a line for each standing.
fn standings(result: &ConstraintResult) -> Vec<String> {
    let standings: BTreeSet<&str> = result.doubts.iter().map(|doubt| doubt.standing.as_str()).collect();
    standings
        .into_iter()
        .map(|standing| {
            let numbers = result.doubts.iter().filter(|doubt| doubt.standing == standing);
            let names: Vec<String> = numbers.map(|doubt| format!("`{}`", doubt.what)).collect();
            format!("{}: {}", spoken(standing), names.join(", "))
        })
        .collect()
}

/// Short marks for the same, for lists of titles: `beyond its range, from memory`.
pub(in crate::report) fn marks(result: &ConstraintResult) -> Option<String> {
    let mut marks = BTreeSet::new();
    if !result.extrapolated.is_empty() {
        marks.insert("beyond its range".to_owned());
    }
    marks.extend(result.doubts.iter().map(|doubt| spoken(&doubt.standing)));
    if result.assessed.as_ref().is_some_and(|numbers| numbers.not_a_number_share > 0.0) {
        marks.insert("in part not a number".to_owned());
    }
    if marks.is_empty() { None } else { Some(marks.into_iter().collect::<Vec<_>>().join(", ")) }
}

/// Why a constraint is marginal.
pub(in crate::report) fn marginal(kind: Marginal) -> &'static str {
    match kind {
        Marginal::Near => "near the limit: the interval spans less than 0.5 dex",
        Marginal::Undecided => "undecided: the interval spans 0.5 dex or more",
    }
}

/// Why a constraint has no numbers: "state `diameter` or `width`, and `temperature`".
fn why_not(result: &ConstraintResult) -> String {
    let one_of =
        |group: &Vec<String>| group.iter().map(|name| format!("`{name}`")).collect::<Vec<_>>().join(" or ");
    let groups: Vec<String> = result.missing.iter().map(one_of).collect();
    let state = (!groups.is_empty()).then(|| format!("state {}", groups.join(", and ")));
    match (state, &result.reason) {
        (Some(state), Some(reason)) => format!("{state}; {reason}"),
        (Some(state), None) => state,
        (None, Some(reason)) => reason.clone(),
        (None, None) => "no reason recorded".to_owned(),
    }
}

/// The constraints of a verdict without numbers, by why: what opens most limits first.
pub(in crate::report) fn grouped(a: &Assessment, verdict: Verdict) -> Vec<(String, Vec<&ConstraintResult>)> {
    let mut groups: BTreeMap<String, Vec<&ConstraintResult>> = BTreeMap::new();
    for result in a.constraints.iter().filter(|result| result.verdict == verdict) {
        groups.entry(why_not(result)).or_default().push(result);
    }
    let mut groups: Vec<_> = groups.into_iter().collect();
    groups.sort_by_key(|(_, results)| std::cmp::Reverse(results.len()));
    groups
}

/// The assessed constraints of a verdict by ascending chance, then margin.
pub(in crate::report) fn ranked(
    a: &Assessment,
    wanted: fn(Verdict) -> bool,
) -> Vec<(&ConstraintResult, &Assessed)> {
    let mut rows: Vec<_> = a
        .constraints
        .iter()
        .filter(|result| wanted(result.verdict))
        .filter_map(|result| Some((result, result.assessed.as_ref()?)))
        .collect();
    rows.sort_by(|(_, a), (_, b)| {
        a.chance.total_cmp(&b.chance).then(a.margin.median.total_cmp(&b.margin.median))
    });
    rows
}

/// The quantity a limit speaks of, with its value here.
pub(in crate::report) fn speaks_of(a: &Assessment, result: &ConstraintResult) -> Option<String> {
    let speaks_of = result.speaks_of.as_ref()?;
    let known = a.quantities.iter().find(|q| q.name == speaks_of.quantity);
    let value = shown::in_unit(
        speaks_of.value,
        known.map_or(Precision::UpTo(3), quantities::precision),
        &speaks_of.unit,
    );
    Some(format!("{}, {value} here", spoken(&speaks_of.quantity)))
}
