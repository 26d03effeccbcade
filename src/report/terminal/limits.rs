//! The blocks of limits that were assessed: rows under a head that names the verdict, with what is to be said of each.

use crate::judge::Assessment;
use crate::judge::assessment::{Assessed, ConstraintResult, Verdict};
use crate::quantity::shown;
use crate::report::page::{Column, GAP, Page, Paint, widest};
use crate::report::words;

/// Passes are folded when even the low end of their margin is above this many dex.
const OVER_TENFOLD: f64 = 1.0;

type Row<'a> = (&'a ConstraintResult, &'a Assessed);

/// How the columns of all blocks stand.
struct Arrangement {
    /// Whether the basis has a column of its own; else it stands below the title.
    basis: bool,
    /// Whether has and needs, and the margin and its interval, share a line.
    joined: bool,
    columns: Vec<Column>,
}

/// The cells of one row: title, basis, has and needs, margin, dex, chance.
type Cells = [String; 6];

pub(super) fn blocks(page: &mut Page, a: &Assessment, every: bool) {
    let fails = words::ranked(a, |verdict| verdict == Verdict::Fail);
    let marginals = words::ranked(a, |verdict| matches!(verdict, Verdict::Marginal(_)));
    let passes = words::ranked(a, |verdict| verdict == Verdict::Pass);
    let (folded, passes): (Vec<Row<'_>>, Vec<Row<'_>>) =
        passes.into_iter().partition(|(_, numbers)| !every && numbers.margin.low > OVER_TENFOLD);
    let rows: Vec<Row<'_>> = fails.iter().chain(&marginals).chain(&passes).copied().collect();
    let arrangement = arrange(a, &rows, page.width());
    for (rows, paint) in [(fails, Paint::Bad), (marginals, Paint::Middling)] {
        block(page, a, &rows, rows.len(), paint, arrangement.as_ref());
    }
    block(page, a, &passes, passes.len() + folded.len(), Paint::Good, arrangement.as_ref());
    if !folded.is_empty() {
        if passes.is_empty() {
            page.heading(&format!("Pass: {}", words::limits(folded.len())), Paint::Good);
        } else {
            page.blank();
        }
        fold(page, &folded);
    }
}

fn block(
    page: &mut Page,
    a: &Assessment,
    rows: &[Row<'_>],
    of: usize,
    paint: Paint,
    arrangement: Option<&Arrangement>,
) {
    let Some((first, _)) = rows.first() else { return };
    let heading = format!("{}: {}", words::verdict(first.verdict), words::limits(of));
    page.blank();
    match arrangement {
        Some(arrangement) => {
            let head = arrangement.head(&heading);
            page.table_head(&arrangement.columns, &head, &heading, paint);
        }
        None => {
            page.table_head(&[Column { width: page.width(), right: false }], &[&heading], &heading, paint);
        }
    }
    for (place, (result, numbers)) in rows.iter().enumerate() {
        let details = details(a, result);
        // Rows that carry details, and rows of several lines, are set apart.
        if place > 0 && !(details.is_empty() && arrangement.is_some_and(|arrangement| arrangement.joined)) {
            page.blank();
        }
        match arrangement {
            Some(arrangement) => {
                let cells = arrangement.cells(a, result, numbers);
                page.row(&arrangement.columns, &cells.iter().map(String::as_str).collect::<Vec<_>>());
            }
            None => stacked(page, a, result, numbers),
        }
        for (label, text) in details {
            page.detail(label, &text);
        }
    }
}

/// What is said below a row: everything for a limit that is not passed, reservations alone for one that is.
fn details(a: &Assessment, result: &ConstraintResult) -> Vec<(&'static str, String)> {
    let mut out = Vec::new();
    if result.verdict != Verdict::Pass {
        if let Verdict::Marginal(kind) = result.verdict {
            out.push(("Marginal", words::marginal(kind).to_owned()));
        }
        out.push(("Compares", format!("{} with {}", result.available_says, result.required_says)));
        if let Some(text) = words::speaks_of(a, result) {
            out.push(("Speaks of", text));
        }
        out.push(("Means", result.meaning.clone()));
        if let Some(exceptions) = &result.exceptions {
            out.push(("Except", exceptions.clone()));
        }
    }
    out.extend(words::reservations(result));
    if result.verdict != Verdict::Pass {
        out.push(("Entry", format!("`{}`, family {}", result.id, result.family)));
    }
    out
}

/// One row without columns, for narrow screens.
fn stacked(page: &mut Page, a: &Assessment, result: &ConstraintResult, numbers: &Assessed) {
    let (has, needs) = words::compared(result, numbers);
    let (median, interval) = words::dex(numbers);
    let interval = interval.map(|interval| format!(" ({interval})")).unwrap_or_default();
    page.paragraph(0, &result.title);
    page.paragraph(
        2,
        &format!("{}; chance {}", result.basis, shown::chance(numbers.chance, &words::thresholds(a))),
    );
    page.paragraph(2, &format!("has {has}, needs {needs}"));
    page.paragraph(2, &format!("{}; {median} dex{interval}", words::factor(numbers)));
}

/// Passes with much room, in one paragraph.
fn fold(page: &mut Page, rows: &[Row<'_>]) {
    let titles: Vec<String> = rows
        .iter()
        .map(|(result, _)| match words::marks(result) {
            Some(marks) => format!("{} ({marks})", result.title),
            None => result.title.clone(),
        })
        .collect();
    let text = format!("{} with tenfold room or more: {}.", words::limits(rows.len()), titles.join("; "));
    page.labelled("Ample", &text, None);
}

/// The most generous arrangement that leaves the titles room enough; none on a narrow screen.
fn arrange(a: &Assessment, rows: &[Row<'_>], width: usize) -> Option<Arrangement> {
    [(true, true, 28), (true, false, 28), (false, false, 22)].into_iter().find_map(
        |(basis, joined, least)| {
            let mut arrangement = Arrangement { basis, joined, columns: Vec::new() };
            let cells: Vec<Cells> =
                rows.iter().map(|(result, numbers)| arrangement.all_cells(a, result, numbers)).collect();
            // The rows of the widest verdict's heading have to fit as well.
            let head = arrangement.all_head("Not assessed: 99 limits");
            let natural = |place: usize| {
                let column = cells.iter().map(|cells| cells[place].as_str()).chain([head[place]]);
                widest(column)
            };
            let most = if joined { usize::MAX } else { 16 };
            let widths = [natural(1), natural(2), natural(3).min(most), natural(4).min(most), natural(5)];
            let shown = if basis { &widths[..] } else { &widths[1..] };
            let rest: usize = shown.iter().map(|width| width + GAP).sum();
            let title = width.checked_sub(rest)?;
            if title < least {
                return None;
            }
            let mut columns = vec![Column { width: title, right: false }];
            columns.extend(shown.iter().map(|&width| Column { width, right: false }));
            columns.last_mut()?.right = true;
            arrangement.columns = columns;
            Some(arrangement)
        },
    )
}

impl Arrangement {
    fn all_head<'h>(&self, heading: &'h str) -> [&'h str; 6] {
        if self.joined {
            [heading, "Basis", "Has / needs", "Margin", "Dex (5 % to 95 %)", "Chance"]
        } else {
            [heading, "Basis", "Has\nNeeds", "Margin", "Dex\n5 % to 95 %", "Chance"]
        }
    }

    fn head<'h>(&self, heading: &'h str) -> Vec<&'h str> {
        let [title, basis, rest @ ..] = self.all_head(heading);
        let mut head = vec![title];
        head.extend(self.basis.then_some(basis));
        head.extend(rest);
        head
    }

    fn cells(&self, a: &Assessment, result: &ConstraintResult, numbers: &Assessed) -> Vec<String> {
        let [title, basis, rest @ ..] = self.all_cells(a, result, numbers);
        let mut cells = if self.basis { vec![title, basis] } else { vec![format!("{title}\n{basis}")] };
        cells.extend(rest);
        cells
    }

    fn all_cells(&self, a: &Assessment, result: &ConstraintResult, numbers: &Assessed) -> Cells {
        let (has, needs) = words::compared(result, numbers);
        let (median, interval) = words::dex(numbers);
        let compared = if self.joined { format!("{has} / {needs}") } else { format!("{has}\n{needs}") };
        let dex = match interval {
            Some(interval) if self.joined => format!("{median} ({interval})"),
            Some(interval) => format!("{median}\n{interval}"),
            None => median,
        };
        let chance = shown::chance(numbers.chance, &words::thresholds(a));
        [result.title.clone(), result.basis.to_string(), compared, words::factor(numbers), dex, chance]
    }
}
