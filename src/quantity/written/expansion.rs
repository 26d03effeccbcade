//! What makes a stated uncertainty an expanded one: `(k=2)`, `(95 %)`.

use std::ops::Range;

use super::number::number;
use super::print::quoted;
use crate::math::kernels;
use crate::quantity::cursor::{Cursor, is_slash};
use crate::text::Fault;

/// An expanded uncertainty is so many standard uncertainties (JCGM 100:2008, 6.2 and 6.3).
pub(super) struct Expansion {
    /// How many, above 0.
    pub(super) factor: f64,
    /// Where it says so.
    pub(super) span: Range<usize>,
}

/// Half the width, in standard deviations, of the central interval that holds `coverage` of a normal distribution.
pub(super) fn coverage_factor(coverage: f64) -> f64 {
    -kernels::normal_quantile(0.5 * (1.0 - coverage))
}

/// Parts the text after a number into the bytes of its unit and the expansion, if there is one.
pub(super) fn expansion(text: &str, from: usize) -> Result<(Range<usize>, Option<Expansion>), Fault> {
    let all = from..text.len();
    let Some(open) = text[from..].rfind('(').map(|open| from + open).filter(|_| text.ends_with(')')) else {
        return Ok((all, None));
    };
    let content = open + 1..text.len() - 1;
    let span = open..text.len();
    let before = text[..open].trim_end();
    // These parentheses belong to the unit: `kJ/(mol h)`, `m^(1/2)`.
    if before.ends_with(|c| c == '^' || is_slash(c)) {
        return Ok((all, None));
    }
    if !speaks_of_uncertainty(&text[content.clone()]) {
        let remark = quoted(text[content].trim());
        return Err(Fault::new(span, "a remark stands after the quantity")
            .expected(format!("`{{ value: {}, about: {remark} }}`", before.trim_start())));
    }
    match factor(&mut Cursor::new(&text[..content.end], content.start)) {
        Some(factor) => Ok((from..open, Some(Expansion { factor, span }))),
        None => {
            let message = format!("`{}` does not say how the uncertainty was expanded", &text[span.clone()]);
            let remark = quoted(text[content].trim());
            Err(Fault::new(span, message).expected(format!(
                "`(k=2)` or `(95 %)`, nothing for a standard uncertainty; a remark as `{{ value: {}, about: {remark} }}`",
                before.trim_start()
            )))
        }
    }
}

fn speaks_of_uncertainty(content: &str) -> bool {
    let content = content.trim();
    content.starts_with(|c: char| c.is_ascii_digit()) || content.contains(['=', '%', 'σ']) || content == "sd"
}

/// Reads `k=2` or `95 %`.
fn factor(cursor: &mut Cursor<'_>) -> Option<f64> {
    cursor.skip_blanks();
    let is_factor = cursor.takes(|c| c == 'k');
    cursor.skip_blanks();
    if is_factor && !cursor.takes(|c| c == '=') {
        return None;
    }
    cursor.skip_blanks();
    let number = number(cursor).ok().filter(|number| number.uncertainty.is_none())?;
    cursor.skip_blanks();
    let is_percentage = cursor.takes(|c| c == '%');
    cursor.skip_blanks();
    if cursor.peek().is_some() || is_factor == is_percentage {
        return None;
    }
    let share = number.value / 100.0;
    let factor = if is_factor {
        number.value
    } else if 0.0 < share && share < 1.0 {
        coverage_factor(share)
    } else {
        return None;
    };
    Some(factor).filter(|factor| *factor > 0.0)
}
