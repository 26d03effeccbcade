//! The report on a screen: columns without boxes, horizontal rules alone, every colour beside a word that says the same.

mod limits;
mod summary;

use super::page::{self, Page, Paint};

use super::{cleaning, words};
use crate::judge::Assessment;
use crate::judge::assessment::{Origin, Overall, QuantityResult, Verdict};

/// How the report looks.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Options {
    /// Columns of the screen.
    pub width: usize,
    /// Whether to paint headings and verdicts.
    pub colour: bool,
    /// Whether to show every row: passes with over tenfold room one by one, and all quantities.
    pub every: bool,
}

impl Default for Options {
    fn default() -> Self {
        Self { width: 100, colour: false, every: false }
    }
}

/// The report on one candidate; on several, a summary, worst first, and then the report on each in the order given.
#[must_use]
pub fn report(assessments: &[Assessment], options: Options) -> String {
    let clean: Vec<Assessment> = assessments.iter().map(cleaning::cleaned).collect();
    let mut page = Page::new(options.width, options.colour);
    if clean.len() > 1 {
        summary::table(&mut page, &clean);
    }
    for (place, assessment) in clean.iter().enumerate() {
        if clean.len() > 1 {
            page.blank();
            page.heading(&format!("{} of {}: {}", place + 1, clean.len(), assessment.name), Paint::Strong);
        }
        screen(&mut page, assessment, options.every);
    }
    page.finish()
}

/// The summary alone: a row for each candidate, worst first.
#[must_use]
pub fn summary(assessments: &[Assessment], options: Options) -> String {
    let clean: Vec<Assessment> = assessments.iter().map(cleaning::cleaned).collect();
    let mut page = Page::new(options.width, options.colour);
    summary::table(&mut page, &clean);
    page.finish()
}

fn screen(page: &mut Page, a: &Assessment, every: bool) {
    let verdict = words::overall_verdict(a.overall.verdict);
    for (label, text) in words::head(a) {
        page.labelled(label, &text, Some((verdict, paint(a.overall.verdict))));
    }
    limits::blocks(page, a, every);
    for verdict in [Verdict::NotAssessed, Verdict::NotApplicable] {
        without_numbers(page, a, verdict);
    }
    figures(page, a);
    as_read(page, a);
    if every {
        let worked_out = |q: &&QuantityResult| matches!(q.origin, Origin::Relation(_) | Origin::Default);
        let rows = a.quantities.iter().filter(worked_out);
        let rows = rows.map(|q| (q.name.clone(), format!("{}; {}", words::worked_out(q), words::origin(q))));
        part(page, "Worked out", rows.collect());
    }
    if !a.warnings.is_empty() {
        page.heading("Warnings", Paint::Middling);
        for warning in &a.warnings {
            page.paragraph(0, &format!("{}.", words::sentence(&warning.message)));
        }
    }
    page.blank();
    page.rule();
    page.labelled("Run", &words::run(a), None);
    page.labelled("Caution", words::CAUTION, None);
    page.labelled("", words::DEFERENCE, None);
}

fn paint(verdict: Overall) -> Paint {
    match verdict {
        Overall::Pass => Paint::Good,
        Overall::Marginal => Paint::Middling,
        Overall::Fail => Paint::Bad,
        Overall::NotAssessed => Paint::Strong,
    }
}

/// Limits without numbers, by why.
fn without_numbers(page: &mut Page, a: &Assessment, verdict: Verdict) {
    let groups = words::grouped(a, verdict);
    let count: usize = groups.iter().map(|(_, results)| results.len()).sum();
    if count == 0 {
        return;
    }
    page.heading(&format!("{}: {}", words::verdict(verdict), words::limits(count)), Paint::Strong);
    for (why, results) in groups {
        let titles: Vec<&str> = results.iter().map(|result| result.title.as_str()).collect();
        page.paragraph(0, &format!("{}: {}", words::sentence(&why), words::limits(results.len())));
        page.paragraph(2, &format!("{}.", titles.join("; ")));
    }
}

fn figures(page: &mut Page, a: &Assessment) {
    let figures = a.quantities.iter().filter(|q| matches!(q.origin, Origin::Figure(_)));
    let rows = figures.map(|q| (q.name.clone(), format!("{}; {}", words::worked_out(q), q.about)));
    part(page, "Figures, without a verdict", rows.collect());
}

fn as_read(page: &mut Page, a: &Assessment) {
    let stated = |origin: &Origin| matches!(origin, Origin::Given | Origin::Habitat | Origin::Adopted);
    let rows = a.quantities.iter().filter(|q| stated(&q.origin)).map(|q| {
        let from = if q.origin == Origin::Given { String::new() } else { format!("; {}", words::origin(q)) };
        (q.name.clone(), format!("{}{from}", words::as_read(q)))
    });
    part(page, "As read", rows.collect());
    if let Some(notes) = &a.notes {
        page.blank();
        for (place, line) in notes.lines().enumerate() {
            page.labelled(if place == 0 { "Notes" } else { "" }, line, None);
        }
    }
}

/// Names with what is to be said of them.
fn part(page: &mut Page, heading: &str, rows: Vec<(String, String)>) {
    if rows.is_empty() {
        return;
    }
    page.heading(heading, Paint::Strong);
    // A few long names do not push everything else to the right: they stand above their texts.
    let column =
        rows.iter().map(|(name, _)| page::widest([name.as_str()]) + page::GAP).filter(|width| *width <= 24);
    let column = column.max().unwrap_or(0).max(page::LABEL);
    for (name, text) in rows {
        page.beside_at(column, &name, &text);
    }
}
