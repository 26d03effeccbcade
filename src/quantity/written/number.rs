//! One number as people write it: `210`, `2.1e-7`, `2.1×10⁻⁷`, `10^6`, `210(30)`.

use std::ops::Range;

use crate::quantity::cursor::{Cursor, is_minus, is_slash, superscript};
use crate::text::{Fault, visible};

/// What is expected where no number stands.
const A_NUMBER: &str = "a number such as `210` or `2.1e-7`";
/// The sizes that numbers can have, zero apart.
pub(super) const SIZES: &str = "zero, or a size between 2.3e-308 and 1.7e308 in SI units";

/// A number read.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Number {
    pub(super) value: f64,
    /// The uncertainty in parentheses, which counts the last digits (`210(30)`, `1.234(5)`).
    pub(super) uncertainty: Option<f64>,
    /// Whether a power of ten was written with a product sign, so that it may be meant for a neighbour too.
    pub(super) by_power_of_ten: bool,
    pub(super) span: Range<usize>,
    digits: String,
    exponent: i64,
}

impl Number {
    /// This number times 10^`power`, rounded once.
    pub(super) fn times_ten(&self, power: i64, text: &str) -> Result<Self, Fault> {
        let exponent = self.exponent.saturating_add(power);
        let value = checked(&self.digits, exponent, text, self.span.clone())?;
        Ok(Self { value, exponent, ..self.clone() })
    }
}

/// Reads the number at the cursor.
pub(super) fn number(cursor: &mut Cursor<'_>) -> Result<Number, Fault> {
    let start = cursor.at;
    refuse_words(cursor)?;
    let negative = !cursor.takes(|c| c == '+') && cursor.takes(is_minus);
    let whole = cursor.digits();
    let decimals = decimals(cursor);
    if whole.is_empty() && decimals.is_empty() {
        let end = cursor.end_of_sign();
        let found = &cursor.text[start..end];
        let span = if found.is_empty() { cursor.last_character() } else { start..end };
        if found.contains(['“', '”', '„', '‟', '‘', '’', '«', '»']) {
            let message = format!("`{found}` is a typographic quote, which is a part of the text in YAML");
            return Err(Fault::new(span, message).expected("straight quotes around the text, or none"));
        }
        let message = if found.is_empty() {
            "a number is missing".to_owned()
        } else {
            format!("`{}` stands where a number was expected", visible(found))
        };
        return Err(Fault::new(span, message).expected(A_NUMBER));
    }
    refuse_separators(cursor, start)?;
    let last_digits = last_digits(cursor, start)?;
    let is_ten = decimals.is_empty() && &cursor.text[whole.clone()] == "10";
    let mut by_power_of_ten = false;
    let mut power = 0;
    if let Some(exponent) = exponent_letter(cursor) {
        power = exponent;
    } else if is_ten && let Some(exponent) = raised(cursor) {
        // 10^n is 1 × 10^n, and the digits below are a ten.
        power = exponent - 1;
    } else if let Some(exponent) = power_of_ten(cursor)? {
        power = exponent;
        by_power_of_ten = true;
    }
    let sign = if negative { "-" } else { "" };
    let digits = format!("{sign}{}.{}", &cursor.text[whole], &cursor.text[decimals.clone()]);
    let span = start..cursor.at;
    let value = checked(&digits, power, cursor.text, span.clone())?;
    let uncertainty = match last_digits {
        None => None,
        Some(last) => {
            let places = i64::try_from(decimals.len()).unwrap_or(i64::MAX);
            let exponent = power.saturating_sub(places);
            Some(checked(&format!("{}.", &cursor.text[last]), exponent, cursor.text, span.clone())?)
        }
    };
    Ok(Number { value, uncertainty, by_power_of_ten, span, digits, exponent: power })
}

/// Takes a point and the digits after it; a point without digits is left alone.
fn decimals(cursor: &mut Cursor<'_>) -> Range<usize> {
    let mut ahead = *cursor;
    let digits = if ahead.takes(|c| c == '.') { ahead.digits() } else { ahead.at..ahead.at };
    if !digits.is_empty() {
        *cursor = ahead;
    }
    digits
}

/// Reads `×10^n` at the cursor, if it stands there.
pub(super) fn power_of_ten(cursor: &mut Cursor<'_>) -> Result<Option<i64>, Fault> {
    let mut ahead = *cursor;
    ahead.skip_blanks();
    let start = ahead.at;
    let Some(sign) = ahead.peek().filter(|c| matches!(c, '×' | 'x' | '*' | '·' | '\u{22c5}')) else {
        return Ok(None);
    };
    ahead.takes(|c| c == sign);
    ahead.skip_blanks();
    let digits = ahead.digits();
    let digits = &ahead.text[digits];
    if digits == "10"
        && let Some(exponent) = raised(&mut ahead)
    {
        *cursor = ahead;
        return Ok(Some(exponent));
    }
    if digits.is_empty() {
        return Ok(None);
    }
    // Pasted text loses the raised digits: `2 ×1014` was 2 × 10^14, `2 × 10-7` was 2 × 10^-7.
    let mut end = ahead;
    let power = match digits.strip_prefix("10") {
        Some("") => signed(&mut end).map(|power| power.to_string()),
        power => power.map(str::to_owned),
    };
    let fault = Fault::new(start..end.at, "a product of numbers stands where one number was expected");
    Err(match power {
        Some(power) => fault.expected(format!("`×10^{power}` if a power of ten was meant")),
        None if matches!(sign, '·' | '\u{22c5}') => {
            let whole = cursor.text[..start].rfind(|c: char| !c.is_ascii_digit()).map_or(0, |end| end + 1);
            fault.expected(format!("`{}.{digits}` if a decimal point was meant", &cursor.text[whole..start]))
        }
        None => fault.expected("one number, or a power of ten as in `2×10^14`"),
    })
}

/// Reads `e-14` at the cursor.
fn exponent_letter(cursor: &mut Cursor<'_>) -> Option<i64> {
    let mut ahead = *cursor;
    if !ahead.takes(|c| matches!(c, 'e' | 'E')) {
        return None;
    }
    let exponent = signed(&mut ahead)?;
    *cursor = ahead;
    Some(exponent)
}

/// Reads the power after a ten: `^-14`, `^(-14)`, `⁻¹⁴`.
fn raised(cursor: &mut Cursor<'_>) -> Option<i64> {
    let mut ahead = *cursor;
    let exponent = if ahead.takes(|c| c == '^') {
        let open = ahead.takes(|c| c == '(');
        let exponent = signed(&mut ahead)?;
        if open && !ahead.takes(|c| c == ')') {
            return None;
        }
        exponent
    } else {
        let raised = ahead.run(|c| superscript(c).is_some());
        let plain: String = ahead.text[raised].chars().filter_map(superscript).collect();
        signed(&mut Cursor::new(&plain, 0))?
    };
    *cursor = ahead;
    Some(exponent)
}

fn signed(cursor: &mut Cursor<'_>) -> Option<i64> {
    let negative = !cursor.takes(|c| c == '+') && cursor.takes(is_minus);
    let digits = cursor.digits();
    if digits.is_empty() {
        return None;
    }
    // Beyond this every number overflows or vanishes.
    let size: i64 = cursor.text[digits].parse().unwrap_or(i64::MAX).min(1_000_000_000);
    Some(if negative { -size } else { size })
}

/// Reads `(30)` straight after the digits; other parentheses are left alone.
fn last_digits(cursor: &mut Cursor<'_>, start: usize) -> Result<Option<Range<usize>>, Fault> {
    let mut ahead = *cursor;
    if !ahead.takes(|c| c == '(') {
        return Ok(None);
    }
    let digits = ahead.digits();
    if digits.is_empty() {
        return Ok(None);
    }
    if ahead.takes(|c| c == ')') {
        *cursor = ahead;
        return Ok(Some(digits));
    }
    if ahead.takes(|c| c == '.') {
        let inner = digits.start..ahead.digits().end;
        let number = &cursor.text[start..cursor.at];
        let inner = &cursor.text[inner];
        ahead.takes(|c| c == ')');
        return Err(Fault::new(
            cursor.at..ahead.at,
            "a point stands within the parentheses, which count last digits",
        )
        .expected(format!("`{number} ± {inner}{}`", ahead.rest())));
    }
    Ok(None)
}

/// The number that these digits make, if a number can hold it.
fn checked(digits: &str, exponent: i64, text: &str, span: Range<usize>) -> Result<f64, Fault> {
    let value: f64 = format!("{digits}e{exponent}").parse().expect("digits and an exponent are a number");
    let written = &text[span.clone()];
    if !value.is_finite() {
        Err(Fault::new(span, format!("`{written}` is larger than a number can be")).expected(SIZES))
    } else if !value.is_normal() && digits.bytes().any(|digit| (b'1'..=b'9').contains(&digit)) {
        Err(Fault::new(span, format!("`{written}` is so small that it would vanish")).expected(SIZES))
    } else {
        Ok(value)
    }
}

/// Words, and what YAML takes for numbers that are none.
fn refuse_words(cursor: &Cursor<'_>) -> Result<(), Fault> {
    let mut ahead = *cursor;
    ahead.takes(|c| c == '+' || is_minus(c));
    ahead.takes(|c| c == '.');
    let word = ahead.run(|c| c.is_alphabetic() || c == '∞');
    if word.is_empty() {
        return Ok(());
    }
    let span = cursor.at..ahead.at;
    let written = &cursor.text[span.clone()];
    let message = match cursor.text[word].to_lowercase().as_str() {
        "nan" => format!("`{written}` is not a number"),
        "inf" | "infinity" | "∞" => format!("`{written}` is not a finite number"),
        _ => format!("`{written}` stands where a number was expected"),
    };
    Err(Fault::new(span, message).expected(A_NUMBER))
}

/// Commas, blanks and marks within a number.
fn refuse_separators(cursor: &Cursor<'_>, start: usize) -> Result<(), Fault> {
    let mut ahead = *cursor;
    let blanks = ahead.run(char::is_whitespace);
    let mark = if blanks.is_empty() {
        ahead.peek().filter(|c| matches!(c, ',' | '.' | '_' | '\'' | '’'))
    } else {
        None
    };
    if let Some(mark) = mark {
        ahead.takes(|c| c == mark);
    }
    let next = ahead.digits();
    if next.is_empty() || (blanks.is_empty() && mark.is_none()) {
        return Ok(());
    }
    if mark.is_none() && &cursor.text[next.clone()] == "1" {
        // A unit such as `1/s` begins here.
        ahead.skip_blanks();
        if ahead.takes(is_slash) {
            return Ok(());
        }
    }
    let is_part = |c: char| c.is_ascii_digit() || Some(c) == mark || (mark == Some(',') && c == '.');
    let mut end = Cursor::new(cursor.text, next.end).run(is_part).end;
    // Groups of three digits after blanks.
    while mark.is_none() {
        let mut group = Cursor::new(cursor.text, end);
        group.skip_blanks();
        if group.digits().len() != 3 {
            break;
        }
        end = group.at;
    }
    let written = &cursor.text[start..end];
    let repaired = |number: String| {
        let text = cursor.text;
        format!("`{}`", [&text[..start], &number, &text[end..]].concat().trim())
    };
    let joined: String = written.chars().filter(|c| c.is_ascii_digit() || is_minus(*c)).collect();
    let groups_of_three = next.len() == 3;
    let fault = |message: &str| Fault::new(start..end, format!("{message} `{written}`"));
    Err(match mark {
        Some(',') if written.contains('.') || written.matches(',').count() > 1 => {
            fault("commas stand within the number").expected(repaired(written.replace(',', "")))
        }
        Some(',') if groups_of_three => {
            let point = repaired(written.replace(',', "."));
            fault("a comma that can be read in two ways stands within the number")
                .expected(format!("{point} or {}", repaired(joined)))
        }
        Some(',') => {
            fault("a decimal comma stands within the number").expected(repaired(written.replace(',', ".")))
        }
        Some(_) => fault("marks between digits stand within the number").expected(repaired(joined)),
        None if groups_of_three => fault("blanks stand within the number").expected(repaired(joined)),
        None => fault("two numbers stand side by side in").expected("one number, then its unit"),
    })
}
