//! Ways of writing that say too little: a limit on one side, "about", a range. Each is refused with the way to write it.

use super::number::{Number, number};
use crate::quantity::cursor::{Cursor, is_minus, is_slash};
use crate::quantity::digits::significant;
use crate::quantity::unit::Unit;
use crate::text::Fault;

/// Words that make a number a rough one.
const ROUGH: [&str; 9] =
    ["approximately", "approx.", "approx", "about", "around", "circa", "ca.", "ca", "roughly"];

/// `> 200 nm`, `<= 5 d`.
pub(super) fn one_sided(cursor: &Cursor<'_>) -> Result<(), Fault> {
    let mut ahead = *cursor;
    let Some(sign) = ahead.peek().filter(|c| matches!(c, '<' | '>' | '≤' | '≥' | '⩽' | '⩾')) else {
        return Ok(());
    };
    ahead.takes(|c| c == sign);
    ahead.takes(|c| c == '=');
    let end = ahead.at;
    let fault = Fault::new(cursor.at..end, "a limit on one side leaves the other end open");
    let Some((Number { value, .. }, unit)) = rest(&mut ahead) else {
        return Err(fault.expected("both ends, such as `{ min: 200 nm, max: 400 nm }`"));
    };
    // The other end is an example only: twice or half the size.
    let is_upper = matches!(sign, '<' | '≤' | '⩽');
    let other = if is_upper == (value > 0.0) { 0.5 * value } else { 2.0 * value };
    let (low, high) = if is_upper { (other, value) } else { (value, other) };
    let end = |value: f64| unit.after(&significant(value, 6));
    Err(fault.expected(format!("both ends, such as `{{ min: {}, max: {} }}`", end(low), end(high))))
}

/// `~210 nm`, `about 210 nm`.
pub(super) fn rough(cursor: &Cursor<'_>) -> Result<(), Fault> {
    let mut ahead = *cursor;
    if !ahead.takes(|c| matches!(c, '~' | '∼' | '≈' | '≃' | '≅')) {
        let lower = ahead.rest().to_ascii_lowercase();
        let Some(word) = ROUGH.iter().find(|word| {
            lower.strip_prefix(**word).is_some_and(|rest| rest.starts_with(|c: char| !c.is_alphabetic()))
        }) else {
            return Ok(());
        };
        ahead.at += word.len();
    }
    let sign = cursor.at..ahead.at;
    let fault = Fault::new(
        sign.clone(),
        format!("`{}` does not say how far the number may be off", &cursor.text[sign]),
    );
    let Some((Number { value, .. }, unit)) = rest(&mut ahead) else {
        return Err(fault.expected("an uncertainty, such as `210 ± 20 nm`"));
    };
    let number = significant(value, 6);
    let example = unit.after(&format!("{number} ± {}", significant(0.1 * value.abs(), 2)));
    Err(fault
        .expected(format!("its uncertainty, such as `{example}`; `{}` if it is exact", unit.after(&number))))
}

/// `180–240 nm`, `180 nm to 240 nm`; the cursor stands after the low end.
pub(super) fn range(cursor: &Cursor<'_>, low: &Number) -> Result<(), Fault> {
    let text = cursor.text;
    let mut signs = text[cursor.at..].char_indices().filter_map(|(at, c)| {
        let at = cursor.at + at;
        let word = ["to ", "..", "…"].iter().find(|word| text[at..].starts_with(**word));
        let is_word = word.is_some_and(|word| *word != "to " || text[..at].ends_with(char::is_whitespace));
        match word {
            Some(word) if is_word => Some((at, at + word.len())),
            _ => (is_minus(c) || c == '—').then(|| (at, at + c.len_utf8())),
        }
    });
    let fault = signs.find_map(|(at, end)| {
        let left = text[cursor.at..at].trim();
        let left_unit = Unit::read(left).ok()?;
        let mut ahead = Cursor::new(text, end);
        let (high, right_unit) = rest(&mut ahead)?;
        // `aa s-1` is a power without its sign, not a range.
        let may_be_a_power = !left.is_empty() && right_unit.text().is_empty();
        if may_be_a_power && !text[..at].ends_with(char::is_whitespace) {
            return None;
        }
        let unit = |first: &Unit, second: &Unit| {
            if first.text().is_empty() { second.clone() } else { first.clone() }
        };
        let low_end = unit(&left_unit, &right_unit).after(&text[low.span.clone()]);
        let high_end = unit(&right_unit, &left_unit).after(&text[high.span]);
        Some(
            Fault::new(low.span.start..text.len(), "a range does not say how likely its values are")
                .expected(format!("`{{ min: {low_end}, max: {high_end} }}` if all are equally likely")),
        )
    });
    fault.map_or(Ok(()), Err)
}

/// `1/3 µm`; the cursor stands after the first number.
pub(super) fn fraction(cursor: &Cursor<'_>, above: &Number) -> Result<(), Fault> {
    let mut ahead = *cursor;
    ahead.skip_blanks();
    if !ahead.takes(is_slash) {
        return Ok(());
    }
    ahead.skip_blanks();
    let Ok(below) = number(&mut ahead) else { return Ok(()) };
    let fault = Fault::new(above.span.start..ahead.at, "a fraction stands where one number was expected");
    Err(match Unit::read(ahead.rest()) {
        Ok(unit) => fault.expected(format!("`{}`", unit.after(&significant(above.value / below.value, 6)))),
        Err(_) => fault.expected("one number, then its unit"),
    })
}

/// `210 +30 -20 nm`, `210 +30/-20 nm`; the cursor stands after the first number.
pub(super) fn two_sided(cursor: &Cursor<'_>, middle: &Number) -> Result<(), Fault> {
    let mut ahead = *cursor;
    ahead.skip_blanks();
    let start = ahead.at;
    if ahead.peek() != Some('+') {
        return Ok(());
    }
    let Ok(up) = number(&mut ahead) else { return Ok(()) };
    ahead.skip_blanks();
    ahead.takes(|c| is_slash(c) || c == ',');
    ahead.skip_blanks();
    if !ahead.peek().is_some_and(is_minus) {
        return Ok(());
    }
    let Some((down, unit)) = rest(&mut ahead) else { return Ok(()) };
    let end = |value: f64| unit.after(&significant(value, 6));
    let (low, high) = (end(middle.value + down.value), end(middle.value + up.value));
    let middle = end(middle.value);
    Err(Fault::new(start..cursor.text.len(), "an uncertainty of two different sides can mean several things")
        .expected(format!(
            "`{{ min: {low}, mode: {middle}, max: {high} }}` if the ends are the outermost values, `{{ low: {low}, \
             high: {high}, coverage: 0.68, distribution: lognormal }}` if they are standard uncertainties"
        )))
}

/// `210 (30) nm`: digits in parentheses stand straight after the number.
pub(super) fn apart(cursor: &Cursor<'_>, number: &Number) -> Result<(), Fault> {
    let mut ahead = *cursor;
    ahead.skip_blanks();
    let start = ahead.at;
    if start == cursor.at
        || !ahead.takes(|c| c == '(')
        || ahead.digits().is_empty()
        || !ahead.takes(|c| c == ')')
    {
        return Ok(());
    }
    let text = cursor.text;
    let repaired = [&text[number.span.clone()], &text[start..]].concat();
    Err(Fault::new(start..ahead.at, "parentheses stand apart from the number")
        .expected(format!("`{repaired}` if they hold the uncertainty of the last digits")))
}

/// The number and the unit that make up all that is left.
fn rest(cursor: &mut Cursor<'_>) -> Option<(Number, Unit)> {
    cursor.skip_blanks();
    let number = number(cursor).ok()?;
    let unit = Unit::read(cursor.rest()).ok()?;
    Some((number, unit))
}
