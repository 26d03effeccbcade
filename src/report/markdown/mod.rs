//! A section to paste into a review: the finding, what was read, every limit, what decides, what it rests on, how it was done,
//! and where each number comes from.

mod decision;
mod escaping;

use std::collections::BTreeMap;

use escaping::{cell, inline};
use tabled::builder::Builder;
use tabled::settings::Style;

use super::{cleaning, words};
use crate::judge::Assessment;
use crate::judge::assessment::{Citation, ConstraintResult, Origin, Overall, QuantityResult, Verdict};
use crate::quantity::shown::{self, Precision};

/// A section for each candidate; `command` is the command line that gave the assessments, as typed.
#[must_use]
pub fn report(assessments: &[Assessment], command: &str) -> String {
    let command = cleaning::text(command);
    let sections = assessments.iter().map(|assessment| section(&cleaning::cleaned(assessment), &command));
    sections.collect::<Vec<_>>().join("\n")
}

fn section(a: &Assessment, command: &str) -> String {
    let numbered = Numbered::of(a);
    let parts = [
        ("Candidate as read", as_read(a)),
        ("Limits", limits(a, &numbered)),
        ("What decides it", decision::text(a, &numbered)),
        ("What it rests on", rests_on(a)),
        ("Not assessed", not_assessed(a)),
        ("Method", method(a, command)),
        ("Sources", numbered.list()),
        ("Scope", format!("{} {}\n", words::CAUTION, words::DEFERENCE)),
    ];
    let mut out = format!("## {}\n\n{}\n", inline(&a.name), inline(&finding(a)));
    for (title, text) in parts {
        out += &format!("\n### {title}\n\n{text}");
    }
    out
}

/// The finding in one sentence.
fn finding(a: &Assessment) -> String {
    let overall = &a.overall;
    if overall.verdict == Overall::NotAssessed {
        return format!(
            "As described, {} could not be assessed: of the {} that apply, none has what it needs.",
            a.name,
            words::limits(overall.of)
        );
    }
    let (verb, reach) = match overall.verdict {
        Overall::Pass => ("passes", "this is never evidence of life"),
        Overall::Fail => ("fails", "this is no proof that life is absent"),
        _ => ("is marginal", "this neither supports nor excludes life"),
    };
    let basis = overall.basis.map(|basis| format!(" on {}", words::with_article(basis))).unwrap_or_default();
    let which = if overall.verdict == Overall::Pass { "the tightest limit" } else { "the binding limit" };
    let binding = words::binding_result(a).and_then(|result| {
        let numbers = result.assessed.as_ref()?;
        Some(format!("{which} is \"{}\", {}, and ", result.title, words::factor_with_interval(numbers)))
    });
    let chance = overall
        .chance
        .map_or("an unknown share".to_owned(), |chance| shown::share(chance, &words::thresholds(a)));
    let outside = if overall.outside_known_life { " and lies outside known life" } else { "" };
    format!(
        "As described, {} {verb}{basis}{outside}: {}everything assessed ({} of {}) holds in {chance} of draws; {reach}.",
        a.name,
        binding.unwrap_or_default(),
        overall.assessed,
        words::limits(overall.of),
    )
}

fn as_read(a: &Assessment) -> String {
    let mut out = format!("{}\n", inline(&words::candidate(a)));
    let stated = |q: &&QuantityResult| matches!(q.origin, Origin::Given | Origin::Habitat | Origin::Adopted);
    let rows = a.quantities.iter().filter(stated).map(|q| {
        let remark = q.remark.clone().unwrap_or_default();
        vec![format!("`{}`", q.name), words::median(q), q.distribution.clone(), words::origin(q), remark]
    });
    out += &table(&["Quantity", "Median", "Read as", "From", "Remark"], rows.collect());
    if let Some(notes) = &a.notes {
        out += "\nNotes of the candidate's author:\n\n";
        for line in notes.lines() {
            out += &format!("> {}\n", inline(line));
        }
    }
    out
}

fn limits(a: &Assessment, numbered: &Numbered<'_>) -> String {
    let verdicts: [fn(Verdict) -> bool; 3] =
        [|v| v == Verdict::Fail, |v| matches!(v, Verdict::Marginal(_)), |v| v == Verdict::Pass];
    let rows = verdicts.into_iter().flat_map(|wanted| words::ranked(a, wanted)).map(|(result, numbers)| {
        let (has, needs) = words::compared(result, numbers);
        let (median, interval) = words::dex(numbers);
        let verdict = match result.verdict {
            Verdict::Marginal(kind) => format!("Marginal ({kind})"),
            other => words::verdict(other).to_owned(),
        };
        let se = shown::number(numbers.chance_se, Precision::Digits(1));
        vec![
            format!("{} (`{}`)", result.title, result.id),
            verdict,
            result.basis.to_string(),
            has,
            needs,
            words::factor(numbers),
            interval.map_or(median.clone(), |interval| format!("{median} ({interval})")),
            format!("{} (s.e. {se})", shown::chance(numbers.chance, &words::thresholds(a))),
            numbered.of_result(result),
        ]
    });
    let rows: Vec<Vec<String>> = rows.collect();
    if rows.is_empty() {
        return "No limit could be assessed.\n".to_owned();
    }
    let head =
        ["Limit", "Verdict", "Basis", "Has", "Needs", "Margin", "Dex (5 % to 95 %)", "Chance", "Sources"];
    format!(
        "Rows stand in the order of their chance, the share of draws in which the limit holds. The margin is \
         has / needs, in dex its decimal logarithm.\n{}",
        table(&head, rows)
    )
}

fn rests_on(a: &Assessment) -> String {
    let mut out = words::rests_on(a).map_or("Nothing.\n".to_owned(), |text| format!("{}\n", inline(&text)));
    if let Some(chosen) = words::chosen(a) {
        let text = format!(
            "Numbers that an organism can set were chosen once, for all limits together, in the candidate's favour: {chosen}"
        );
        out += &format!("\n{}\n", inline(&text));
    }
    let defaults = a.quantities.iter().filter(|q| q.origin == Origin::Default);
    let rows = defaults.map(|q| {
        vec![format!("`{}`", q.name), words::worked_out(q), q.distribution.clone(), q.about.clone()]
    });
    let rows: Vec<Vec<String>> = rows.collect();
    if !rows.is_empty() {
        out += "\nTaken from known life, because the candidate does not state them:\n";
        out += &table(&["Quantity", "Value", "Read as", "Meaning"], rows);
    }
    let mut reservations = String::new();
    for result in a.constraints.iter().filter(|result| result.assessed.is_some()) {
        for (_, text) in words::reservations(result) {
            reservations += &format!("- {}\n", inline(&format!("{}: {text}", result.title)));
        }
    }
    if !reservations.is_empty() {
        out += &format!("\nTo be read with reserve:\n\n{reservations}");
    }
    if !a.warnings.is_empty() {
        out += "\nWarnings:\n\n";
        for warning in &a.warnings {
            out += &format!("- {}\n", inline(&warning.message));
        }
    }
    out
}

fn not_assessed(a: &Assessment) -> String {
    let mut out = String::new();
    for verdict in [Verdict::NotAssessed, Verdict::NotApplicable] {
        for (why, results) in words::grouped(a, verdict) {
            let titles: Vec<String> =
                results.iter().map(|result| format!("{} (`{}`)", result.title, result.id)).collect();
            let why = match verdict {
                Verdict::NotAssessed => words::sentence(&why),
                _ => format!("{}, {why}", words::verdict(verdict)),
            };
            let text = format!("{why}: {}", titles.join("; "));
            out += &format!("- {}\n", inline(&text));
        }
    }
    if out.is_empty() { "Every limit that applies was assessed.\n".to_owned() } else { out }
}

fn method(a: &Assessment, command: &str) -> String {
    let percent = |share: f64| shown::share(share, &[share]);
    format!(
        "Every uncertain number was drawn from its distribution and carried through all formulas by Monte Carlo (JCGM \
         101:2008). A limit passes when it holds in at least {} of draws and fails when it holds in at most {} \
         (conformity assessment, JCGM 106:2012). The basis of a limit is the weakest among the formulas and numbers \
         behind it; numbers that the candidate states do not weaken it.\n\n{}\n\nComputed by {} {}, catalogue digest `{}`, with\n\n{}",
        percent(a.run.pass_at),
        percent(a.run.fail_at),
        inline(&words::run(a)),
        env!("CARGO_PKG_NAME"),
        env!("CARGO_PKG_VERSION"),
        a.run.catalog_digest,
        escaping::block("text", command)
    )
}

/// Sources with the numbers they are cited by.
struct Numbered<'a> {
    sources: BTreeMap<&'a str, (usize, Option<&'a Citation>)>,
}

impl<'a> Numbered<'a> {
    fn of(a: &'a Assessment) -> Self {
        let mut sources: BTreeMap<&str, _> = BTreeMap::new();
        for result in a.constraints.iter().filter(|result| result.assessed.is_some()) {
            for key in &result.sources {
                sources.insert(key, (0, a.citations.get(key)));
            }
        }
        for (place, (number, _)) in sources.values_mut().enumerate() {
            *number = place + 1;
        }
        Self { sources }
    }

    fn of_result(&self, result: &ConstraintResult) -> String {
        let mut numbers: Vec<usize> =
            result.sources.iter().filter_map(|key| Some(self.sources.get(key.as_str())?.0)).collect();
        numbers.sort_unstable();
        numbers.dedup();
        numbers.iter().map(usize::to_string).collect::<Vec<_>>().join(", ")
    }

    fn list(&self) -> String {
        let mut out = String::new();
        for (key, (number, citation)) in &self.sources {
            let text = citation.map_or_else(|| format!("`{key}`"), |citation| citation.text.clone());
            let doi = citation.and_then(|citation| citation.doi.as_ref());
            let doi = doi.map(|doi| format!(" doi:{doi}.")).unwrap_or_default();
            let standing = match citation.map(|citation| citation.standing.as_str()) {
                Some("published") => "",
                Some("disputed") => " (Disputed.)",
                Some("from-memory") => " (From memory: not checked against the source.)",
                Some("common-practice") => " (Common practice.)",
                Some(_) | None => " (Standing not recorded.)",
            };
            out += &format!("{number}. {}{standing}\n", inline(&format!("{text}{doi}")));
        }
        if out.is_empty() { "None: nothing was assessed.\n".to_owned() } else { out }
    }
}

/// A table with an empty line before it; nothing where there are no rows.
fn table(head: &[&str], rows: Vec<Vec<String>>) -> String {
    if rows.is_empty() {
        return String::new();
    }
    let mut builder = Builder::default();
    builder.push_record(head.iter().map(|text| cell(text)));
    for row in rows {
        builder.push_record(row.iter().map(|text| cell(text)));
    }
    format!("\n{}\n", builder.build().with(Style::markdown()))
}
