//! One sentence a line, for screen readers and for searching: no columns, no rules, no signs that are not spoken.

use super::{cleaning, words};
use crate::judge::Assessment;
use crate::judge::assessment::{Assessed, ConstraintResult, Origin, Verdict};
use crate::quantity::shown;

/// The report on each candidate, one after the other with an empty line between.
#[must_use]
pub fn report(assessments: &[Assessment]) -> String {
    assessments.iter().map(|assessment| one(&cleaning::cleaned(assessment))).collect::<Vec<_>>().join("\n")
}

fn one(a: &Assessment) -> String {
    let mut lines: Vec<String> =
        words::head(a).into_iter().map(|(label, text)| format!("{label}: {text}")).collect();
    let verdicts: [fn(Verdict) -> bool; 3] =
        [|v| v == Verdict::Fail, |v| matches!(v, Verdict::Marginal(_)), |v| v == Verdict::Pass];
    for wanted in verdicts {
        let rows = words::ranked(a, wanted);
        lines.extend(rows.into_iter().map(|(result, numbers)| limit(a, result, numbers)));
    }
    for verdict in [Verdict::NotAssessed, Verdict::NotApplicable] {
        for (why, results) in words::grouped(a, verdict) {
            lines.extend(results.iter().map(|result| {
                format!("{}: {} (`{}`): {why}.", words::verdict(verdict), result.title, result.id)
            }));
        }
    }
    for q in &a.quantities {
        match q.origin {
            Origin::Given | Origin::Habitat | Origin::Adopted => {
                lines.push(format!("As read: `{}`, {}: {}.", q.name, words::origin(q), words::as_read(q)));
            }
            Origin::Figure(_) => {
                lines.push(format!("Figure: `{}`, {}: {}.", q.name, q.about, words::worked_out(q)));
            }
            Origin::Relation(_) | Origin::Default => {}
        }
    }
    lines.extend(a.notes.iter().flat_map(|notes| notes.lines()).map(|line| format!("Notes: {line}")));
    lines.extend(a.warnings.iter().map(|warning| format!("Warning: {}.", words::sentence(&warning.message))));
    lines.push(format!("Run: {}", words::run(a)));
    lines.push(format!("Caution: {} {}", words::CAUTION, words::DEFERENCE));
    lines.iter().map(|line| format!("{}\n", spoken_signs(line))).collect()
}

fn limit(a: &Assessment, result: &ConstraintResult, numbers: &Assessed) -> String {
    let (has, needs) = words::compared(result, numbers);
    let (median, interval) = words::dex(numbers);
    let interval = interval.map(|interval| format!(" (90 % within {interval})")).unwrap_or_default();
    let kind = match result.verdict {
        Verdict::Marginal(kind) => format!(" ({kind})"),
        _ => String::new(),
    };
    let mut text = format!(
        "{}{kind}: {} (`{}`), on {}: has {has}, needs {needs}, {}, margin {median} dex{interval}, \
         holds in {} of draws",
        words::verdict(result.verdict),
        result.title,
        result.id,
        words::with_article(result.basis),
        words::factor(numbers),
        shown::share(numbers.chance, &words::thresholds(a)),
    );
    if let Some(speaks_of) = words::speaks_of(a, result) {
        text += &format!("; speaks of {speaks_of}");
    }
    for (_, reservation) in words::reservations(result) {
        text += &format!("; {reservation}");
    }
    if result.verdict != Verdict::Pass {
        text += &format!("; meaning: {}", result.meaning.trim_end_matches('.'));
    }
    format!("{text}.")
}

/// The minus sign and powers of ten in words: many screen readers leave them out.
fn spoken_signs(line: &str) -> String {
    let mut out = String::with_capacity(line.len());
    let mut rest = line;
    while let Some((before, after)) = rest.split_once("×10") {
        let end = after.find(|c| shown::plain_exponent(c).is_none()).unwrap_or(after.len());
        let (raised, tail) = after.split_at(end);
        let power: String = raised.chars().filter_map(shown::plain_exponent).collect();
        out.push_str(before);
        if power.is_empty() {
            out.push_str("×10");
        } else {
            out.push_str(&format!(" times 10 to the power {}", power.replace('-', "minus ")));
        }
        rest = tail;
    }
    out.push_str(rest);
    out.replace('−', "minus ").replace("+infinity", "infinity")
}

#[cfg(test)]
mod tests {
    use super::spoken_signs;

    #[test]
    fn signs_are_spoken() {
        assert_eq!(
            spoken_signs("−0.5 and 1.2×10⁻⁷ m²"),
            "minus 0.5 and 1.2 times 10 to the power minus 7 m²"
        );
        assert_eq!(spoken_signs("3×10⁶; ×10"), "3 times 10 to the power 6; ×10");
    }
}
