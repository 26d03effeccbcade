//! One row for each candidate and constraint, for spreadsheets and data frames.
//!
//! Numbers stand as numbers (`inf` and `-inf` where a margin has no end), units in columns of their own and in ASCII. An empty
//! cell means that the column does not apply. Margins are in dex; `low` and `high` are the 5 % and 95 % quantiles.

use super::cleaning;
use crate::judge::Assessment;
use crate::judge::assessment::{ConstraintResult, Verdict};
use crate::quantity::shown;

const COLUMNS: [&str; 29] = [
    "file",
    "document",
    "candidate",
    "overall",
    "overall_chance",
    "outside_known_life",
    "binding",
    "id",
    "title",
    "family",
    "basis",
    "verdict",
    "marginal",
    "chance",
    "chance_se",
    "available",
    "required",
    "unit",
    "margin_dex_median",
    "margin_dex_low",
    "margin_dex_high",
    "speaks_of",
    "speaks_of_value",
    "speaks_of_unit",
    "not_a_number_share",
    "extrapolated_share",
    "missing",
    "reason",
    "sources",
];

/// The table with its header.
#[must_use]
pub fn table(assessments: &[Assessment]) -> String {
    let mut writer = csv::Writer::from_writer(Vec::new());
    writer.write_record(COLUMNS).expect("memory takes every record");
    for assessment in assessments {
        let a = cleaning::cleaned(assessment);
        for result in &a.constraints {
            writer.write_record(row(&a, result)).expect("every record has as many cells as the header");
        }
    }
    let bytes = writer.into_inner().expect("memory takes every record");
    String::from_utf8(bytes).expect("made of texts")
}

fn row(a: &Assessment, result: &ConstraintResult) -> [String; COLUMNS.len()] {
    let numbers = result.assessed.as_ref();
    let (unit, unit_text) = shown::ascii_unit(&result.unit);
    let in_unit = |si: f64| plain(unit.from_si(si));
    let optional = |value: Option<f64>| value.map(plain).unwrap_or_default();
    let speaks_of = result.speaks_of.as_ref().map(|speaks_of| {
        let (unit, text) = shown::ascii_unit(&speaks_of.unit);
        (inert(&speaks_of.quantity), plain(unit.from_si(speaks_of.value)), text)
    });
    let (speaks_of, speaks_of_value, speaks_of_unit) = speaks_of.unwrap_or_default();
    let groups: Vec<String> = result.missing.iter().map(|group| group.join("|")).collect();
    let farthest = result.extrapolated.iter().map(|beyond| beyond.share).max_by(f64::total_cmp);
    [
        inert(&a.file),
        a.document.to_string(),
        inert(&a.name),
        a.overall.verdict.to_string(),
        optional(a.overall.chance),
        a.overall.outside_known_life.to_string(),
        (a.overall.binding.as_ref() == Some(&result.id)).to_string(),
        inert(&result.id),
        inert(&result.title),
        inert(&result.family),
        result.basis.to_string(),
        result.verdict.to_string(),
        match result.verdict {
            Verdict::Marginal(kind) => kind.to_string(),
            _ => String::new(),
        },
        optional(numbers.map(|numbers| numbers.chance)),
        optional(numbers.map(|numbers| numbers.chance_se)),
        numbers.map(|numbers| in_unit(numbers.available)).unwrap_or_default(),
        numbers.map(|numbers| in_unit(numbers.required)).unwrap_or_default(),
        numbers.map(|_| unit_text).unwrap_or_default(),
        optional(numbers.map(|numbers| numbers.margin.median)),
        optional(numbers.map(|numbers| numbers.margin.low)),
        optional(numbers.map(|numbers| numbers.margin.high)),
        speaks_of,
        speaks_of_value,
        speaks_of_unit,
        optional(numbers.map(|numbers| numbers.not_a_number_share)),
        optional(numbers.and(Some(farthest.unwrap_or(0.0)))),
        inert(&groups.join(" & ")),
        inert(result.reason.as_deref().unwrap_or_default()),
        inert(&result.sources.join(" ")),
    ]
}

/// The shortest digits that read as the same number; long ones with an exponent.
fn plain(value: f64) -> String {
    let size = value.abs();
    if value.is_finite() && size != 0.0 && !(1e-4..1e15).contains(&size) {
        format!("{value:e}")
    } else {
        value.to_string()
    }
}

/// A text that no spreadsheet takes for a formula: one that begins like a formula gets an apostrophe before it.
fn inert(text: &str) -> String {
    if text.starts_with(['=', '+', '-', '@']) { format!("'{text}") } else { text.to_owned() }
}
