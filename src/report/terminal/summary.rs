//! Many candidates at a glance: a row for each, worst first.

use crate::judge::Assessment;
use crate::judge::assessment::Overall;
use crate::quantity::shown;
use crate::report::page::{Column, GAP, Page, Paint, widest};
use crate::report::words;

/// What stands where there is nothing to say.
const NOTHING: &str = "–";

/// The least width of the candidate's and the limit's columns together.
const LEAST_FOR_NAMES: usize = 36;

pub(super) fn table(page: &mut Page, assessments: &[Assessment]) {
    let mut worst_first: Vec<&Assessment> = assessments.iter().collect();
    worst_first.sort_by(|a, b| {
        let chance = |assessment: &Assessment| assessment.overall.chance.unwrap_or(0.0);
        severity(b).cmp(&severity(a)).then(chance(a).total_cmp(&chance(b)))
    });
    let heading = match assessments.len() {
        1 => "1 candidate".to_owned(),
        many => format!("{many} candidates, worst first"),
    };
    for arrange in [full, short] {
        let rows: Vec<Vec<String>> = worst_first.iter().map(|a| arrange(&Row::of(a))).collect();
        let mut head = arrange(&Row::head());
        head[0].clone_from(&heading);
        if let Some(columns) = columns(&head, &rows, page.width()) {
            page.table_head(&columns, &texts(&head), &heading, Paint::Strong);
            for row in &rows {
                page.row(&columns, &texts(row));
            }
            return;
        }
    }
    page.heading(&heading, Paint::Strong);
    for a in worst_first {
        let row = Row::of(a);
        page.paragraph(0, &row.candidate);
        page.paragraph(2, &format!("{}; all hold: {}; assessed: {}", row.overall, row.hold, row.assessed));
        if row.margin != NOTHING {
            page.paragraph(2, &format!("{}: {}", row.binding, row.margin));
        }
    }
}

/// How bad it is; not knowing is worse than a marginal answer.
fn severity(a: &Assessment) -> u8 {
    match a.overall.verdict {
        Overall::Pass => 0,
        Overall::Marginal => 1 + u8::from(a.overall.outside_known_life),
        Overall::NotAssessed => 3,
        Overall::Fail => 4,
    }
}

struct Row {
    candidate: String,
    overall: String,
    hold: String,
    assessed: String,
    binding: String,
    margin: String,
}

impl Row {
    fn head() -> Self {
        let [candidate, overall, hold, assessed, binding, margin] =
            ["Candidate", "Overall", "All hold", "Assessed", "Binding or tightest", "Margin"]
                .map(str::to_owned);
        Self { candidate, overall, hold, assessed, binding, margin }
    }

    fn of(a: &Assessment) -> Self {
        let overall = &a.overall;
        let outside = if overall.outside_known_life { ", outside known life" } else { "" };
        let binding = words::binding_result(a);
        let nothing = || NOTHING.to_owned();
        Self {
            candidate: if a.document > 1 { format!("{} ({})", a.name, a.document) } else { a.name.clone() },
            overall: format!("{}{outside}", words::overall_verdict(overall.verdict)),
            hold: overall.chance.map_or_else(nothing, |chance| shown::chance(chance, &words::thresholds(a))),
            assessed: format!("{} of {}", overall.assessed, overall.of),
            binding: binding.map_or_else(nothing, |result| result.title.clone()),
            margin: binding.and_then(|result| result.assessed.as_ref()).map_or_else(nothing, words::factor),
        }
    }
}

fn full(row: &Row) -> Vec<String> {
    [&row.candidate, &row.binding, &row.margin, &row.overall, &row.hold, &row.assessed]
        .map(Clone::clone)
        .into()
}

/// Without how much was assessed, and with the margin below the limit.
fn short(row: &Row) -> Vec<String> {
    let binding = format!("{}\n{}", row.binding, row.margin.to_lowercase());
    vec![row.candidate.clone(), binding, row.overall.clone(), row.hold.clone()]
}

fn texts(row: &[String]) -> Vec<&str> {
    row.iter().map(String::as_str).collect()
}

/// Widths of the columns: the first two share what the others leave; none on a narrow screen.
fn columns(head: &[String], rows: &[Vec<String>], width: usize) -> Option<Vec<Column>> {
    let natural = |place: usize| widest(rows.iter().chain([&head.to_vec()]).map(|row| row[place].as_str()));
    let others: Vec<usize> = (2..head.len()).map(|place| natural(place).min(16)).collect();
    let names = width.checked_sub(others.iter().map(|width| width + GAP).sum::<usize>() + GAP)?;
    if names < LEAST_FOR_NAMES {
        return None;
    }
    let candidate = natural(0).min((names / 2).max(names.saturating_sub(natural(1))));
    let widths = [candidate, natural(1).min(names - candidate)].into_iter().chain(others);
    Some(widths.map(|width| Column { width, right: false }).collect())
}
