//! The grammar of units.
//!
//! ```text
//! unit     = [ "1" | product ] [ "/" ( factor | "(" product ")" ) ]
//! product  = factor { ( blank | "·" | "*" ) factor }
//! factor   = symbol [ power ]
//! power    = "^" whole | "^" decimal | "^(" whole [ "/" whole ] ")" | superscript digits
//! ```

use std::borrow::Cow;
use std::ops::Range;

use super::symbols::{Found, find, suggestions};
use crate::quantity::cursor::{Cursor, is_minus, is_slash, superscript};
use crate::quantity::dimension::Exponent;
use crate::text::{Fault, visible};

/// What is expected where no unit stands and nothing more is known.
pub(in crate::quantity) const ANY_UNIT: &str = "a unit such as `nm`, `kJ/mol` or `1/s`";

/// Largest whole power.
const LARGEST: i64 = 30;
/// Most parts of one in a power: three decimals are the most that a published exponent has.
const FINEST: i64 = 1000;

/// Whether an exponent can be read as a power, whole, decimal or fraction: what is printed must read again.
pub(super) fn can_be_power(exponent: Exponent) -> bool {
    i64::from(exponent.denominator()) <= FINEST && exponent.value().abs() < (LARGEST + 1) as f64
}

/// A symbol with its power; below the line the power is that of the divisor.
#[derive(Clone)]
pub(super) struct Factor {
    pub(super) found: Found,
    pub(super) power: Exponent,
    pub(super) below: bool,
    pub(super) span: Range<usize>,
}

impl Factor {
    /// The canonical text.
    fn text(&self) -> String {
        let prefix = self.found.prefix.map(|(prefix, _)| prefix.to_string()).unwrap_or_default();
        let name = self.found.symbol.name;
        if self.power == Exponent::whole(1) {
            format!("{prefix}{name}")
        } else {
            format!("{prefix}{name}^{}", self.power)
        }
    }
}

/// The canonical text of factors: `kJ/(mol h)`.
pub(super) fn canonical(factors: &[Factor]) -> String {
    let join = |below: bool| {
        factors.iter().filter(|factor| factor.below == below).map(Factor::text).collect::<Vec<_>>()
    };
    let (above, below) = (join(false), join(true));
    let numerator = if above.is_empty() { "1".to_owned() } else { above.join(" ") };
    match below.len() {
        0 => above.join(" "),
        1 => format!("{numerator}/{}", below[0]),
        _ => format!("{numerator}/({})", below.join(" ")),
    }
}

/// Reads the factors of a unit; none for a pure number.
pub(super) fn parse(text: &str) -> Result<Vec<Factor>, Fault> {
    let mut cursor = Cursor::new(text, 0);
    cursor.skip_blanks();
    if cursor.peek().is_none() {
        return Ok(Vec::new());
    }
    let mut factors = Vec::new();
    if !cursor.takes_one()? {
        cursor.product(false, &mut factors)?;
    }
    cursor.skip_blanks();
    if cursor.takes(is_slash) {
        cursor.divisor(&mut factors)?;
        cursor.skip_blanks();
        if let Some(sign) = cursor.peek() {
            return Err(cursor.after_divisor(sign, factors));
        }
    } else if let Some(sign) = cursor.peek() {
        return Err(cursor.unexpected(sign));
    }
    match factors.iter().find(|factor| factor.found.symbol.offset != 0.0) {
        Some(factor) if factors.len() > 1 || factor.below || factor.power != Exponent::whole(1) => {
            Err(Fault::new(
                factor.span.clone(),
                "`°C` does not begin at zero and cannot stand in a product, a quotient or a power",
            )
            .expected("`K`, which is the same for differences"))
        }
        _ => Ok(factors),
    }
}

impl Cursor<'_> {
    /// A `1` before a slash, or alone.
    fn takes_one(&mut self) -> Result<bool, Fault> {
        let start = self.at;
        let digits = self.digits();
        match &self.text[digits.clone()] {
            "" => Ok(false),
            "1" => {
                self.skip_blanks();
                if self.peek().is_none_or(is_slash) {
                    Ok(true)
                } else {
                    Err(Fault::new(start..self.at, "a number stands in the unit")
                        .expected("a unit such as `1/s` or `s^-1`"))
                }
            }
            number => Err(Fault::new(digits.clone(), format!("the number `{number}` stands in the unit"))
                .expected("a unit such as `kJ/mol`")),
        }
    }

    fn product(&mut self, below: bool, factors: &mut Vec<Factor>) -> Result<(), Fault> {
        factors.push(self.factor(below)?);
        loop {
            self.skip_blanks();
            let times = self.at;
            if self.takes(is_times) {
                self.skip_blanks();
                if !self.peek().is_some_and(is_letter) {
                    let fault =
                        Fault::new(times..self.end_of_sign(), "a symbol is missing after the product sign");
                    return Err(if self.text[times..].starts_with("**") {
                        fault.expected("`^` for a power, as in `m^2`")
                    } else {
                        fault.expected("a symbol such as `m`")
                    });
                }
            } else if !self.peek().is_some_and(is_letter) {
                return Ok(());
            }
            factors.push(self.factor(below)?);
        }
    }

    fn divisor(&mut self, factors: &mut Vec<Factor>) -> Result<(), Fault> {
        self.skip_blanks();
        let open = self.at;
        if !self.takes(|c| c == '(') {
            factors.push(self.factor(true)?);
            return Ok(());
        }
        self.skip_blanks();
        self.product(true, factors)?;
        self.skip_blanks();
        if self.takes(|c| c == ')') {
            return Ok(());
        }
        match self.peek() {
            None => Err(Fault::new(open..open + 1, "this parenthesis is not closed").expected("`)`")),
            Some(c) if is_slash(c) => Err(Fault::new(
                self.at..self.end_of_sign(),
                "a slash within the divisor can be read in two ways",
            )
            .expected("one slash, as in `kJ/(mol h)`")),
            Some(sign) => Err(self.unexpected(sign)),
        }
    }

    fn factor(&mut self, below: bool) -> Result<Factor, Fault> {
        let span = self.run(is_letter);
        if span.is_empty() {
            return Err(match self.peek() {
                Some(sign) => self.unexpected(sign),
                None => Fault::new(self.last_character(), "the unit ends where a symbol is missing")
                    .expected("a symbol such as `m`"),
            });
        }
        let symbol = &self.text[span.clone()];
        let Some(found) = find(symbol) else {
            return Err(match self.peek() {
                // A character that is not seen may stand within the symbol.
                Some(sign) if matches!(visible(sign.encode_utf8(&mut [0; 4])), Cow::Owned(_)) => {
                    self.unexpected(sign)
                }
                _ => unknown(symbol, span),
            });
        };
        self.refuse_bare_power(&span)?;
        let power = self.power()?;
        Ok(Factor { found, power, below, span })
    }

    /// `m2` and `s-1` are common in tables, but `m^2` and `s^-1` are what they mean.
    fn refuse_bare_power(&mut self, symbol: &Range<usize>) -> Result<(), Fault> {
        let rest = &self.text[self.at..];
        let (sign, digits) = match rest.strip_prefix(is_minus) {
            Some(digits) => ("-", digits),
            None => ("", rest),
        };
        let digits = &digits[..digits.find(|c: char| !c.is_ascii_digit()).unwrap_or(digits.len())];
        if digits.is_empty() {
            return Ok(());
        }
        let end = self.at + rest.find(digits).expect("the digits were found in the rest") + digits.len();
        let symbol = symbol.start..self.at;
        let name = &self.text[symbol.clone()];
        Err(Fault::new(
            symbol.start..end,
            format!("`{}` lacks the sign of a power", &self.text[symbol.start..end]),
        )
        .expected(format!("`{name}^{sign}{digits}`")))
    }

    fn power(&mut self) -> Result<Exponent, Fault> {
        let start = self.at;
        let raised = self.run(|c| superscript(c).is_some());
        if !raised.is_empty() {
            let plain: String = self.text[raised].chars().filter_map(superscript).collect();
            return whole(&plain).and_then(|n| self.checked(n, 1)).ok_or_else(|| self.wrong_power(start));
        }
        if !self.takes(|c| c == '^') {
            return Ok(Exponent::whole(1));
        }
        let power = if self.takes(|c| c == '(') { self.fraction() } else { self.plain_power() };
        power.ok_or_else(|| self.wrong_power(start))
    }

    /// `-2` or `0.5`.
    fn plain_power(&mut self) -> Option<Exponent> {
        let sign = if self.takes(is_minus) { -1 } else { 1 };
        let digits = self.digits();
        let whole = whole(&self.text[digits])?;
        if !self.takes(|c| c == '.') {
            return self.checked(sign * whole, 1);
        }
        let decimals = self.digits();
        let scale = 10_i64.checked_pow(u32::try_from(decimals.len()).ok()?)?;
        if decimals.is_empty() || scale > FINEST {
            return None;
        }
        let decimals: i64 = self.text[decimals].parse().ok()?;
        Exponent::new(sign * (whole * scale + decimals), scale).filter(|power| power.value() != 0.0)
    }

    /// The rest of `(1/2)`, `(-1/2)` or `(2)`.
    fn fraction(&mut self) -> Option<Exponent> {
        self.skip_blanks();
        let sign = if self.takes(is_minus) { -1 } else { 1 };
        let digits = self.digits();
        let numerator = sign * part(&self.text[digits])?;
        self.skip_blanks();
        let mut denominator = 1;
        if self.takes(is_slash) {
            self.skip_blanks();
            let digits = self.digits();
            denominator = part(&self.text[digits])?;
            self.skip_blanks();
        }
        if self.takes(|c| c == ')') { self.checked(numerator, denominator) } else { None }
    }

    fn checked(&self, numerator: i64, denominator: i64) -> Option<Exponent> {
        (numerator != 0).then(|| Exponent::new(numerator, denominator))?.filter(|power| can_be_power(*power))
    }

    fn wrong_power(&self, start: usize) -> Fault {
        let end = if start == self.at { self.end_of_sign() } else { self.at };
        Fault::new(start..end, "this is no power that a unit can have")
            .expected("a power such as `^2`, `^-2` or `^(1/2)`")
    }

    /// Says how to write a unit that goes on after its divisor.
    fn after_divisor(&mut self, sign: char, mut factors: Vec<Factor>) -> Fault {
        let start = self.at;
        let end = self.end_of_sign();
        if !is_slash(sign) && !is_times(sign) && !is_letter(sign) {
            return self.unexpected(sign);
        }
        // Read on as if everything more stood below the line, then as if it stood above.
        let read = factors.len();
        while self.peek().is_some() {
            self.skip_blanks();
            if self.takes(is_slash) || self.takes(is_times) {
                self.skip_blanks();
            }
            let Ok(factor) = self.factor(true) else { break };
            factors.push(factor);
            self.skip_blanks();
        }
        let complete = self.peek().is_none() && factors.len() > read;
        let below = canonical(&factors);
        if is_slash(sign) {
            let fault = Fault::new(start..end, "two slashes can be read in two ways");
            return fault.expected(if complete { format!("`{below}`") } else { "one slash".to_owned() });
        }
        for factor in &mut factors[read..] {
            factor.below = false;
        }
        let fault = Fault::new(start..end, "a product after the slash can be read in two ways");
        fault.expected(if complete {
            format!("`{below}` or `{}`", canonical(&factors))
        } else {
            "parentheses, as in `kJ/(mol h)`".to_owned()
        })
    }

    fn unexpected(&self, sign: char) -> Fault {
        let span = self.at..self.end_of_sign();
        if sign.is_ascii_digit() {
            return Fault::new(span, "a number stands in the unit").expected("one number, before the unit");
        }
        let shown = visible(sign.encode_utf8(&mut [0; 4])).into_owned();
        let fault = Fault::new(span, format!("`{shown}` cannot stand in a unit here"));
        match sign {
            _ if shown.starts_with("<U+") => {
                fault.expected("the text without this character, which is not seen")
            }
            '\u{fffd}' => fault.expected("the character that was lost when the file was converted"),
            ',' => fault.expected("one value without a comma after it; several as `{ values: [a, b] }`"),
            '[' => fault.expected("a reference as a remark: `{ value: 210 nm, about: \"...\" }`"),
            '±' => fault.expected("one uncertainty; independent ones add up by their squares"),
            '.' | '⋅' | '×' | '•' => fault.expected("`·` or a blank between symbols"),
            ')' => fault.expected("no parenthesis, or `(` after a slash"),
            '(' => fault.expected("parentheses only after a slash, as in `kJ/(mol h)`"),
            _ => fault.expected(ANY_UNIT),
        }
    }
}

fn unknown(symbol: &str, span: Range<usize>) -> Fault {
    let fault = Fault::new(span, format!("`{symbol}` is not a unit"));
    match symbol {
        "cal" | "kcal" => {
            return fault.expected("joules; a thermochemical calorie is 4.184 J");
        }
        "ppt" => return fault.expected("`‰` or `ppb`; `ppt` has two meanings"),
        "°F" | "ºF" | "degF" => return fault.expected("`°C` or `K`"),
        "psu" | "PSU" => {
            // Within half a percent for sea water (IOC, SCOR and IAPSO 2010, the standard known as TEOS-10).
            return fault.expected("`g/kg`; one unit of practical salinity is nearly one gram a kilogram");
        }
        _ => {}
    }
    if symbol.starts_with('Â') {
        return fault.expected("the file converted anew: `Â` stands where UTF-8 was read as Latin-1");
    }
    if symbol.ends_with("°C") {
        return fault.expected("`°C` without a prefix, or `mK` for a small difference");
    }
    match suggestions(symbol).as_slice() {
        [] => fault.expected(ANY_UNIT),
        [one] => fault.expected(ANY_UNIT).nearest(Some(one.clone())),
        several => {
            let several: Vec<_> = several.iter().map(|symbol| format!("`{symbol}`")).collect();
            fault.expected(several.join(" or "))
        }
    }
}

fn whole(digits: &str) -> Option<i64> {
    digits.parse().ok().filter(|n: &i64| n.abs() <= LARGEST)
}

/// A part of a fraction.
fn part(digits: &str) -> Option<i64> {
    digits.parse().ok().filter(|n: &i64| n.abs() <= (LARGEST + 1) * FINEST)
}

fn is_letter(c: char) -> bool {
    c.is_alphabetic() && superscript(c).is_none() || matches!(c, '%' | '‰' | '°' | '˚' | '℃' | '_' | 'ₙ')
}

fn is_times(c: char) -> bool {
    matches!(c, '·' | '*' | '\u{22c5}' | '\u{2219}')
}
