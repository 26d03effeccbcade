//! Cleans the texts that users brought along, so that no report can move the cursor, recolour the screen, or show
//! letters in another order than they stand.

use std::collections::BTreeMap;

use crate::judge::Assessment;
use crate::judge::assessment::{ConstraintResult, Origin, ParameterResult, QuantityResult, Working};

/// An assessment in which every text is one line without anything that a terminal obeys; only notes keep their lines.
///
/// Line ends and tabs become blanks; other control characters become their pictures (`␛`), invisible marks that change
/// direction or hide text become `�`. What was there can be seen, and does nothing.
pub(super) fn cleaned(assessment: &Assessment) -> Assessment {
    let mut clean = assessment.clone();
    each(&mut [&mut clean.name, &mut clean.file]);
    each(clean.habitat.as_mut_slice());
    if let Some(notes) = &mut clean.notes {
        *notes = notes.lines().map(text).collect::<Vec<_>>().join("\n");
    }
    clean.attributes = clean.attributes.iter().map(|(name, word)| (text(name), text(word))).collect();
    each(&mut [&mut clean.run.laws, &mut clean.run.catalog_digest]);
    each(&mut clean.run.only);
    each(&mut clean.run.overlays);
    each(clean.overall.binding.as_mut_slice());
    clean.constraints.iter_mut().for_each(constraint);
    clean.quantities.iter_mut().for_each(quantity);
    for warning in &mut clean.warnings {
        each(&mut [&mut warning.message]);
    }
    clean.citations = std::mem::take(&mut clean.citations)
        .into_iter()
        .map(|(key, mut citation)| {
            each(&mut [&mut citation.text, &mut citation.standing]);
            each(citation.doi.as_mut_slice());
            (text(&key), citation)
        })
        .collect::<BTreeMap<_, _>>();
    clean
}

fn constraint(result: &mut ConstraintResult) {
    each(&mut [
        &mut result.id,
        &mut result.title,
        &mut result.family,
        &mut result.available_says,
        &mut result.required_says,
        &mut result.available_formula,
        &mut result.required_formula,
        &mut result.available_tex,
        &mut result.required_tex,
        &mut result.meaning,
    ]);
    each(result.exceptions.as_mut_slice());
    each(result.reason.as_mut_slice());
    each(&mut result.sources);
    for group in &mut result.missing {
        each(group);
    }
    if let Some(speaks_of) = &mut result.speaks_of {
        each(&mut [&mut speaks_of.quantity]);
    }
    for beyond in &mut result.extrapolated {
        each(&mut [&mut beyond.relation, &mut beyond.quantity]);
    }
    result.parameters.iter_mut().for_each(parameter);
    for doubt in &mut result.doubts {
        each(&mut [&mut doubt.what, &mut doubt.standing]);
    }
}

fn quantity(result: &mut QuantityResult) {
    each(&mut [&mut result.name, &mut result.about, &mut result.distribution]);
    each(result.remark.as_mut_slice());
    if let Origin::Relation(id) | Origin::Figure(id) = &mut result.origin {
        each(&mut [id]);
    }
    if let Some(Working { formula, parameters }) = &mut result.working {
        each(&mut [formula]);
        parameters.iter_mut().for_each(parameter);
    }
}

fn parameter(result: &mut ParameterResult) {
    each(&mut [&mut result.name]);
}

fn each<T: std::borrow::BorrowMut<String>>(texts: &mut [T]) {
    for one in texts {
        let one: &mut String = one.borrow_mut();
        *one = text(one);
    }
}

/// One text on one line.
pub(super) fn text(text: &str) -> String {
    text.chars().map(harmless).collect::<String>().split_whitespace().collect::<Vec<_>>().join(" ")
}

fn harmless(c: char) -> char {
    match c {
        '\n' | '\r' | '\t' | '\u{85}' | '\u{2028}' | '\u{2029}' | '\u{a0}' => ' ',
        '\0'..='\u{1f}' => char::from_u32(0x2400 + u32::from(c)).unwrap_or('\u{fffd}'),
        '\u{7f}' => '\u{2421}',
        // The second set of controls; invisible marks of direction and width; hidden tags.
        '\u{80}'..='\u{9f}'
        | '\u{61c}'
        | '\u{200b}'
        | '\u{200e}'
        | '\u{200f}'
        | '\u{202a}'..='\u{202e}'
        | '\u{2060}'..='\u{206f}'
        | '\u{feff}'
        | '\u{fff9}'..='\u{fffb}'
        | '\u{e0000}'..='\u{e007f}' => '\u{fffd}',
        _ => c,
    }
}

#[cfg(test)]
mod tests {
    use super::text;

    #[test]
    fn controls_are_shown_and_do_nothing() {
        assert_eq!(text("a\u{1b}[31mred\u{7}\u{7f}"), "a␛[31mred␇␡");
        assert_eq!(text(" two\r\n lines\tand\u{2028}more "), "two lines and more");
        assert_eq!(text("abc\u{202e}fed\u{9b}1m\u{e0041}"), "abc�fed�1m�");
        assert_eq!(text("Größe µm³ 長さ 👩\u{200d}🔬"), "Größe µm³ 長さ 👩\u{200d}🔬");
    }
}
