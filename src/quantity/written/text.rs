//! Quantities in one line: `210 nm`, `210 ± 30 nm`, `(210 ± 30) nm`, `210(30) nm`, `210 ± 60 nm (k=2)`, `17 aa/s ×/÷ 1.3`.

use std::ops::Range;

use super::expansion::{Expansion, expansion};
use super::number::{Number, SIZES, number, power_of_ten};
use super::refused::{apart, fraction, one_sided, range, rough, two_sided};
use crate::math::kernels;
use crate::quantity::cursor::Cursor;
use crate::quantity::digits::significant;
use crate::quantity::distribution::Distribution;
use crate::quantity::unit::Unit;
use crate::text::Fault;

/// The longest text that is looked at, in bytes.
const LONGEST: usize = 300;

/// A text understood.
#[derive(Clone, Debug)]
pub(super) struct Parsed {
    pub(super) distribution: Distribution,
    pub(super) unit: Unit,
    /// Where the (first) number stands.
    pub(super) number: Range<usize>,
    /// Where its unit stands, or would stand.
    pub(super) unit_span: Range<usize>,
}

/// A number with its unit and nothing else.
#[derive(Clone, Debug)]
pub(super) struct One {
    /// In the unit.
    pub(super) value: f64,
    /// In SI units.
    pub(super) si: f64,
    pub(super) unit: Unit,
    pub(super) number: Range<usize>,
    pub(super) unit_span: Range<usize>,
}

/// A number and the unit that stands after it.
struct Part {
    number: Number,
    unit: Unit,
    unit_span: Range<usize>,
}

/// Reads one text.
pub(super) fn parse(text: &str) -> Result<Parsed, Fault> {
    // Blanks at the end would only push the places of faults away from the text.
    let text = text.trim_end();
    let mut cursor = start(text)?;
    match operator(text) {
        None => single(&mut cursor),
        Some((Operator::PlusMinus, sign)) => plus_minus(&mut cursor, sign),
        Some((Operator::TimesDivide, sign)) => times_divide(&mut cursor, sign),
    }
}

/// Reads a text that must be one number with its unit.
pub(super) fn parse_one(text: &str) -> Result<One, Fault> {
    let text = text.trim_end();
    let mut cursor = start(text)?;
    if let Some((_, sign)) = operator(text) {
        return Err(Fault::new(sign, "an uncertainty stands where one number is expected")
            .expected("one number with its unit, such as `210 nm`"));
    }
    let number = number(&mut cursor)?;
    if number.uncertainty.is_some() {
        return Err(Fault::new(number.span, "an uncertainty stands where one number is expected")
            .expected("one number with its unit, such as `210 nm`"));
    }
    range(&cursor, &number)?;
    let (unit, unit_span) = unit(text, cursor.at..text.len())?;
    let si = to_si(&unit, &number, text)?;
    Ok(One { value: number.value, si, unit, number: number.span, unit_span })
}

/// The first place that is not blank; what cannot be read at all is refused with the way to write it.
fn start(text: &str) -> Result<Cursor<'_>, Fault> {
    let mut cursor = Cursor::new(text, 0);
    cursor.skip_blanks();
    if cursor.peek().is_none() {
        return Err(Fault::new(0..text.len(), "there is no text where a number was expected")
            .expected("a number with its unit, such as `210 nm`"));
    }
    if text.len() > LONGEST {
        let message = format!("a text of {} bytes stands where a quantity was expected", text.len());
        return Err(Fault::new(0..text.len(), message).expected("a number with its unit, such as `210 nm`"));
    }
    one_sided(&cursor)?;
    rough(&cursor)?;
    Ok(cursor)
}

#[derive(Clone, Copy)]
enum Operator {
    PlusMinus,
    TimesDivide,
}

/// The first sign that joins a number and its uncertainty.
fn operator(text: &str) -> Option<(Operator, Range<usize>)> {
    let mut before = ' ';
    for (at, c) in text.char_indices() {
        let rest = &text[at..];
        if let Some(sign) =
            ["±", "+/-", "+/\u{2212}", "+-", "+\u{2212}"].iter().find(|sign| rest.starts_with(**sign))
        {
            return Some((Operator::PlusMinus, at..at + sign.len()));
        }
        if c == '\u{22c7}' {
            return Some((Operator::TimesDivide, at..at + c.len_utf8()));
        }
        // An `x` at the end of a symbol (`lx/s`) is no sign.
        if matches!(c, '×' | 'x' | '*') && !before.is_alphabetic() {
            let mut ahead = Cursor::new(text, at + c.len_utf8());
            ahead.skip_blanks();
            let slash = ahead.takes(|c| c == '/');
            let mut division = ahead;
            division.skip_blanks();
            if division.takes(|c| c == '÷') {
                ahead = division;
            } else if !slash {
                before = c;
                continue;
            }
            return Some((Operator::TimesDivide, at..ahead.at));
        }
        before = c;
    }
    None
}

/// `210 nm` or `210(30) nm`.
fn single(cursor: &mut Cursor<'_>) -> Result<Parsed, Fault> {
    let text = cursor.text;
    let number = number(cursor)?;
    range(cursor, &number)?;
    fraction(cursor, &number)?;
    two_sided(cursor, &number)?;
    apart(cursor, &number)?;
    let (unit_text, expansion) = expansion(text, cursor.at)?;
    let (unit, unit_span) = unit(text, unit_text)?;
    match (number.uncertainty, expansion) {
        (None, None) => {
            let distribution = Distribution::Exact(to_si(&unit, &number, text)?);
            Ok(Parsed { distribution, unit, number: number.span, unit_span })
        }
        (None, Some(expansion)) => {
            Err(Fault::new(expansion.span, "there is no uncertainty that this could speak of")
                .expected("an uncertainty, as in `210 ± 60 nm (k=2)`"))
        }
        (Some(uncertainty), expansion) => {
            let stated = Stated { size: uncertainty, unit: &unit, at: number.span.clone() };
            let distribution = normal(text, &number, &unit, &stated, expansion)?;
            Ok(Parsed { distribution, unit, number: number.span, unit_span })
        }
    }
}

/// Everything with `±`.
fn plus_minus(cursor: &mut Cursor<'_>, sign: Range<usize>) -> Result<Parsed, Fault> {
    let text = cursor.text;
    let open = cursor.at;
    if cursor.takes(|c| c == '(') {
        return group(cursor, open, sign);
    }
    let number = lone_number(cursor)?;
    let (unit, unit_span) = unit(text, cursor.at..sign.start)?;
    let mean = Part { number, unit, unit_span };
    cursor.at = sign.end;
    cursor.skip_blanks();
    let number = lone_number(cursor)?;
    let (unit_text, expansion) = expansion(text, cursor.at)?;
    let (unit, unit_span) = self::unit(text, unit_text)?;
    let sd = Part { number, unit, unit_span };
    refuse_shared_power(text, &mean, &sd)?;
    let stands_between = !mean.unit_span.is_empty();
    if stands_between {
        refuse_unlike_units(text, &mean, &sd)?;
    }
    let (unit, unit_span) =
        if stands_between { (mean.unit, mean.unit_span) } else { (sd.unit.clone(), sd.unit_span) };
    let stated = Stated { size: sd.number.value, unit: &sd.unit, at: sign.start..sd.number.span.end };
    let distribution = normal(text, &mean.number, &unit, &stated, expansion)?;
    Ok(Parsed { distribution, unit, number: mean.number.span, unit_span })
}

/// `2.1 ± 0.3×10⁻⁷ m`: the power may be meant for both.
fn refuse_shared_power(text: &str, mean: &Part, sd: &Part) -> Result<(), Fault> {
    if !sd.number.by_power_of_ten || mean.number.by_power_of_ten {
        return Ok(());
    }
    let written = &text[sd.number.span.clone()];
    let digits = written.split(['×', 'x', '*', '·', '\u{22c5}']).next().unwrap_or(written);
    let power = written[digits.len()..].trim();
    let both = format!("({} ± {}){power}", &text[mean.number.span.clone()], digits.trim());
    Err(Fault::new(
        mean.number.span.start..sd.number.span.end,
        "the power of ten may belong to one number or to both",
    )
    .expected(format!("`{}` if to both", sd.unit.after(&both))))
}

/// `210 nm ± 10 %`, `210 nm ± 30`, `210 nm ± 30 s`.
fn refuse_unlike_units(text: &str, mean: &Part, sd: &Part) -> Result<(), Fault> {
    let mean_text = &text[mean.number.span.clone()];
    let with = |uncertainty: &str| format!("`{}`", mean.unit.after(&format!("{mean_text} ± {uncertainty}")));
    let at = sd.number.span.start..sd.number.span.end.max(sd.unit_span.end);
    let repaired = with(&text[sd.number.span.clone()]);
    if sd.unit_span.is_empty() {
        return Err(Fault::new(at, "the uncertainty has no unit while the number has one").expected(repaired));
    }
    if sd.unit.text() == "%" && mean.unit.text() != "%" {
        let share = significant(sd.number.value / 100.0 * mean.number.value.abs(), 3);
        return Err(Fault::new(at, "the uncertainty is a percentage of the number").expected(with(&share)));
    }
    if sd.unit.dimension() != mean.unit.dimension() {
        let message =
            format!("the number is {}, its uncertainty {}", mean.unit.dimension(), sd.unit.dimension());
        return Err(Fault::new(at, message).expected(repaired));
    }
    Ok(())
}

/// `(210 ± 30) nm`, `(2.1 ± 0.3)×10⁻⁷ m`.
fn group(cursor: &mut Cursor<'_>, open: usize, sign: Range<usize>) -> Result<Parsed, Fault> {
    let text = cursor.text;
    let wanted = "two numbers in the parentheses and the unit after them, as in `(210 ± 30) nm`";
    cursor.skip_blanks();
    let mut mean = lone_number(cursor)?;
    cursor.skip_blanks();
    if cursor.at != sign.start {
        return Err(Fault::new(cursor.at..sign.start, "only a number can stand here").expected(wanted));
    }
    cursor.at = sign.end;
    cursor.skip_blanks();
    let mut sd = lone_number(cursor)?;
    cursor.skip_blanks();
    if !cursor.takes(|c| c == ')') {
        let fault = match cursor.peek() {
            None => Fault::new(open..open + 1, "this parenthesis is not closed"),
            Some(_) => Fault::new(cursor.at..cursor.end_of_sign(), "only `)` can stand here"),
        };
        return Err(fault.expected(wanted));
    }
    if let Some(power) = power_of_ten(cursor)? {
        mean = mean.times_ten(power, text)?;
        sd = sd.times_ten(power, text)?;
    }
    let (unit_text, expansion) = expansion(text, cursor.at)?;
    let (unit, unit_span) = unit(text, unit_text)?;
    let stated = Stated { size: sd.value, unit: &unit, at: sign.start..sd.span.end };
    let distribution = normal(text, &mean, &unit, &stated, expansion)?;
    Ok(Parsed { distribution, unit, number: mean.span, unit_span })
}

/// `210 nm ×/÷ 1.5`.
fn times_divide(cursor: &mut Cursor<'_>, sign: Range<usize>) -> Result<Parsed, Fault> {
    let text = cursor.text;
    let median = lone_number(cursor)?;
    let (unit, unit_span) = unit(text, cursor.at..sign.start)?;
    cursor.at = sign.end;
    cursor.skip_blanks();
    let factor = lone_number(cursor)?;
    let (after, expansion) = expansion(text, cursor.at)?;
    let (after, after_span) = self::unit(text, after)?;
    if !after_span.is_empty() {
        let unit = if unit_span.is_empty() { &after } else { &unit };
        let repaired = unit.after(&text[median.span.clone()]);
        return Err(Fault::new(after_span, "the factor is a pure number; the unit stands before the sign")
            .expected(format!("`{repaired} ×/÷ {}`", &text[factor.span.clone()])));
    }
    if unit.offset() != 0.0 {
        return Err(Fault::new(unit_span, "`°C` does not begin at zero and cannot be multiplied")
            .expected("a temperature in `K`, or `±`"));
    }
    if median.value <= 0.0 {
        return Err(Fault::new(median.span, "only a number above zero can be uncertain by a factor")
            .expected("`±` and an uncertainty"));
    }
    if factor.value <= 1.0 {
        let message = format!("the factor `{}` is not above 1", &text[factor.span.clone()]);
        return Err(Fault::new(factor.span, message).expected(
            "the geometric standard deviation, such as `1.5`; no factor at all for an exact value",
        ));
    }
    let standard = match expansion {
        None => factor.value,
        Some(expansion) => kernels::exp(kernels::ln(factor.value) / expansion.factor),
    };
    if !(standard.is_finite() && standard > 1.0) {
        return Err(
            Fault::new(factor.span, "the factor is out of all proportion").expected("a factor such as `1.5`")
        );
    }
    let distribution = Distribution::Lognormal { median: to_si(&unit, &median, text)?, factor: standard };
    Ok(Parsed { distribution, unit, number: median.span, unit_span })
}

/// An uncertainty as stated, and where.
struct Stated<'a> {
    size: f64,
    unit: &'a Unit,
    at: Range<usize>,
}

fn normal(
    text: &str,
    mean: &Number,
    unit: &Unit,
    stated: &Stated<'_>,
    expansion: Option<Expansion>,
) -> Result<Distribution, Fault> {
    let fault = |message: &str| Fault::new(stated.at.clone(), message);
    if stated.size == 0.0 {
        // Without the digits in parentheses.
        let number = text[mean.span.clone()].split('(').next().unwrap_or_default();
        return Err(
            fault("the uncertainty is zero").expected(format!("`{}` for an exact value", unit.after(number)))
        );
    }
    if stated.size < 0.0 {
        return Err(fault("the uncertainty is negative").expected("a standard uncertainty above zero"));
    }
    let factor = expansion.map_or(1.0, |expansion| expansion.factor);
    let sd = stated.unit.difference_to_si(stated.size) / factor;
    if !sd.is_normal() {
        return Err(fault("the uncertainty is not one that a number in SI units can hold").expected(SIZES));
    }
    Ok(Distribution::Normal { mean: to_si(unit, mean, text)?, sd })
}

/// A number without an uncertainty of its own.
fn lone_number(cursor: &mut Cursor<'_>) -> Result<Number, Fault> {
    let number = number(cursor)?;
    match number.uncertainty {
        None => Ok(number),
        Some(_) => {
            Err(Fault::new(number.span, "the number has an uncertainty in parentheses and another one")
                .expected("one of the two"))
        }
    }
}

/// The unit in these bytes, and where it stands without the blanks around it; an empty place after the number if none.
fn unit(text: &str, range: Range<usize>) -> Result<(Unit, Range<usize>), Fault> {
    let inner = &text[range.clone()];
    let start = range.start + (inner.len() - inner.trim_start().len());
    let span =
        if inner.trim().is_empty() { range.start..range.start } else { start..start + inner.trim().len() };
    match Unit::read(&text[span.clone()]) {
        Ok(unit) => Ok((unit, span)),
        Err(mut fault) => {
            fault.span = fault.span.start + span.start..fault.span.end + span.start;
            Err(fault)
        }
    }
}

/// The SI value, if a number can hold it.
pub(super) fn to_si(unit: &Unit, number: &Number, text: &str) -> Result<f64, Fault> {
    let si = unit.to_si(number.value);
    if si.is_finite() && (si.is_normal() || number.value == 0.0 || unit.offset() != 0.0) {
        return Ok(si);
    }
    let written = unit.after(&text[number.span.clone()]);
    let size = if si.is_finite() { "so small that it would vanish" } else { "larger than a number can be" };
    Err(Fault::new(number.span.clone(), format!("`{written}` is {size} in SI units")).expected(SIZES))
}
