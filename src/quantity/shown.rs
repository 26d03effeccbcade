//! Numbers as people read them: units people use, significant digits that the uncertainty supports.
//!
//! Everything here turns numbers into text and nothing back; files for machines carry the numbers themselves.

#[cfg(test)]
mod tests;

use super::cursor::superscript;
use super::unit::Unit;
use crate::math::kernels;

/// How finely a number is shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Precision {
    /// So many significant digits; zeros at the end are kept.
    Digits(u8),
    /// So many significant digits at most; zeros at the end are dropped.
    UpTo(u8),
}

impl Precision {
    /// The digits that an interval supports: the last one is worth about a tenth of half the interval, at least one
    /// digit and at most four; up to four for an interval without extent, two for one without end.
    #[must_use]
    pub fn supported_by(median: f64, low: f64, high: f64) -> Self {
        let half = (high - low) / 2.0;
        if half == 0.0 {
            return Self::UpTo(4);
        }
        if !(half.is_finite() && median.is_finite()) || median == 0.0 {
            return Self::Digits(2);
        }
        let last = kernels::log10(half.abs()).round() - 1.0;
        let digits = f64::from(exponent_of_ten(median)) - last + 1.0;
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)] // Clamped to 1..=4.
        Self::Digits(digits.clamp(1.0, 4.0) as u8)
    }

    /// The digits that a margin's interval (in dex) supports for the numbers on both sides of it: two or three, so that
    /// two numbers that differ seldom look alike.
    #[must_use]
    pub fn supported_by_dex(low: f64, high: f64) -> Self {
        let spread = kernels::pow(10.0, (high - low) / 2.0);
        match Self::supported_by(1.0, 1.0 / spread, spread) {
            Self::Digits(digits) => Self::Digits(digits.clamp(2, 3)),
            Self::UpTo(_) => Self::UpTo(3),
        }
    }
}

/// A number: `0.0021`, `210`, `1.2×10⁶`, `−3`, `infinite`.
#[must_use]
pub fn number(value: f64, precision: Precision) -> String {
    let sign = if value < 0.0 { "−" } else { "" };
    if value.is_nan() {
        return "not a number".to_owned();
    }
    if value.is_infinite() {
        return format!("{sign}infinite");
    }
    let digits = match precision {
        Precision::Digits(digits) | Precision::UpTo(digits) => usize::from(digits.max(1)),
    };
    let (mantissa, exponent) = scientific(value, digits);
    let size = if value == 0.0 {
        "0".to_owned()
    } else if (-4..5).contains(&exponent) {
        let decimals = usize::try_from(digits as i64 - 1 - i64::from(exponent)).unwrap_or(0);
        let rounded: f64 = format!("{mantissa}e{exponent}").parse().expect("printed by the line above");
        trimmed(format!("{rounded:.decimals$}"), precision)
    } else {
        format!("{}×10{}", trimmed(mantissa, precision), raised(&exponent.to_string()))
    };
    format!("{sign}{size}")
}

/// The unit in which an SI value reads best: `unit`, or the same kind of unit with another prefix (for times another
/// unit of time, for masses the tonne).
#[must_use]
pub fn unit_for(si: f64, unit: &Unit) -> Unit {
    let value = unit.from_si(si).abs();
    let head = unit.text().find([' ', '/']).unwrap_or(unit.text().len());
    let (head, rest) = unit.text().split_at(head);
    let Some(ladder) = LADDERS.iter().find(|ladder| ladder.contains(&head)) else { return unit.clone() };
    // Squares and cubes climb by millions and milliards: people use a wider range of numbers with them.
    let reads_well = if head.contains('^') { 1e-4..1e4 } else { 0.1..1e3 };
    if !value.is_finite() || value == 0.0 || reads_well.contains(&value) {
        return unit.clone();
    }
    let rungs: Vec<Unit> =
        ladder.iter().filter_map(|rung| Unit::read(&format!("{rung}{rest}")).ok()).collect();
    let rung = rungs.iter().rfind(|rung| rung.from_si(si).abs() >= 1.0).or(rungs.first());
    match rung {
        Some(rung) if (1e-3..1e5).contains(&rung.from_si(si).abs()) => rung.clone(),
        _ => unit.clone(),
    }
}

/// An SI value in a unit people use, near the preferred one: `210 nm`, `3.0 µm`, `55 °C`.
#[must_use]
pub fn in_unit(si: f64, precision: Precision, unit: &Unit) -> String {
    exactly_in(si, precision, &unit_for(si, unit))
}

/// An SI difference in a unit people use, near the preferred one: of temperatures, `8 °C`.
#[must_use]
pub fn difference_in_unit(si: f64, precision: Precision, unit: &Unit) -> String {
    if unit.offset() == 0.0 {
        in_unit(si, precision, unit)
    } else {
        with_unit(&number(unit.difference_from_si(si), precision), unit)
    }
}

/// Two SI values to compare, in one unit if that reads well: `0.0021 µm³` and `0.0067 µm³`, but `4 zW` and `9 pW`.
#[must_use]
pub fn pair(a: f64, b: f64, precision: Precision, unit: &Unit) -> (String, String) {
    let smaller = if b == 0.0 || a != 0.0 && a.abs() < b.abs() { a } else { b };
    let larger = if a.abs() > b.abs() { a } else { b };
    let common = unit_for(if larger.is_finite() { larger } else { smaller }, unit);
    if smaller == 0.0 || common.from_si(smaller).abs() >= 1e-3 {
        (exactly_in(a, precision, &common), exactly_in(b, precision, &common))
    } else {
        (in_unit(a, precision, unit), in_unit(b, precision, unit))
    }
}

/// A range of SI values in one unit: `161 to 259 nm`.
#[must_use]
pub fn range(low: f64, high: f64, precision: Precision, unit: &Unit) -> String {
    let unit = unit_for(if high.is_finite() { high } else { low }, unit);
    let end = |si| number(unit.from_si(si), precision);
    with_unit(&format!("{} to {}", end(low), end(high)), &unit)
}

/// A unit with raised exponents: `µm³`, `kJ/(mol h)`; empty for pure numbers.
#[must_use]
pub fn unit_text(unit: &Unit) -> String {
    let mut out = String::new();
    let mut characters = unit.text().chars().peekable();
    while let Some(c) = characters.next() {
        // A fraction as exponent, `^(1/2)`, has no raised form.
        if c == '^' && characters.peek() != Some(&'(') {
            while let Some(digit) = characters.next_if(|c| c.is_ascii_digit() || *c == '-') {
                out.push_str(&raised(&digit.to_string()));
            }
        } else {
            out.push(c);
        }
    }
    out
}

/// A unit in ASCII that reads as the same unit: `um^3`, `degC`; where there is none, the SI unit of that dimension.
#[must_use]
pub fn ascii_unit(unit: &Unit) -> (Unit, String) {
    let mut text = unit.text().to_owned();
    for (symbol, ascii) in [("µ", "u"), ("Ω", "ohm"), ("°C", "degC"), ("°", "deg"), ("gₙ", "g_n")] {
        text = text.replace(symbol, ascii);
    }
    if text.is_ascii() && Unit::read(&text).is_ok_and(|read| read.text() == unit.text()) {
        (unit.clone(), text)
    } else {
        let coherent = Unit::coherent(unit.dimension());
        (coherent.clone(), coherent.text().to_owned())
    }
}

/// A margin in dex as a factor: `3.2 times short`, `12 times spare`.
#[must_use]
pub fn factor(dex: f64, precision: Precision) -> String {
    let side = side(dex);
    if dex.is_nan() {
        "not a number".to_owned()
    } else if dex == 0.0 {
        "just enough".to_owned()
    } else if dex.is_infinite() {
        format!("{side} without bound")
    } else {
        format!("{} times {side}", factor_size(dex, precision))
    }
}

/// An interval of margins in dex as factors: `2.1 to 4.9 times short`, `1.3 times short to 2.0 times spare`.
#[must_use]
pub fn factor_range(low: f64, high: f64, precision: Precision) -> String {
    if low.is_finite() && high.is_finite() && low * high > 0.0 {
        let (near, far) = if low > 0.0 { (low, high) } else { (high, low) };
        format!("{} to {} times {}", factor_size(near, precision), factor_size(far, precision), side(low))
    } else {
        format!("{} to {}", factor(low, precision), factor(high, precision))
    }
}

/// The digits that an interval of margins (in dex) supports for its median as a factor: two or three.
#[must_use]
pub fn factor_precision(median: f64, low: f64, high: f64) -> Precision {
    let (size, half) = (median.abs(), (high - low) / 2.0);
    let ten_to = |dex| kernels::pow(10.0, dex);
    match Precision::supported_by(ten_to(size), ten_to(size - half), ten_to(size + half)) {
        Precision::Digits(digits) => Precision::Digits(digits.clamp(2, 3)),
        Precision::UpTo(_) => Precision::UpTo(3),
    }
}

/// Which way a margin goes; zero has neither.
fn side(dex: f64) -> &'static str {
    if dex < 0.0 { "short" } else { "spare" }
}

fn factor_size(dex: f64, precision: Precision) -> String {
    number(kernels::pow(10.0, dex.abs()), precision)
}

/// A margin with its sign: `−0.50`, `+1.3`. The sign stays where the digits round to zero: it tells which way.
#[must_use]
pub fn dex(value: f64, decimals: usize) -> String {
    let sign = if value < 0.0 { "−" } else { "+" };
    if value.is_nan() {
        "not a number".to_owned()
    } else if value.is_infinite() {
        format!("{sign}infinity")
    } else {
        format!("{sign}{:.decimals$}", value.abs())
    }
}

/// Decimals for an interval in dex: two, or one when it spans more than one dex.
#[must_use]
pub fn dex_decimals(low: f64, high: f64) -> usize {
    if high - low <= 1.0 { 2 } else { 1 }
}

/// A chance: `0.970`, `< 0.001`, `> 0.999`. More decimals follow where rounding would put it on the other side of one
/// of the `thresholds`.
#[must_use]
pub fn chance(value: f64, thresholds: &[f64]) -> String {
    if value < 0.001 {
        "< 0.001".to_owned()
    } else if value > 0.999 {
        "> 0.999".to_owned()
    } else {
        rounded_on_its_side(value, 3, thresholds)
    }
}

/// A share in per cent, for sentences: `42 %`, `97.3 %`, `less than 0.1 %`, `more than 99.9 %`; thresholds as in
/// [`chance`].
#[must_use]
pub fn share(value: f64, thresholds: &[f64]) -> String {
    if value < 0.001 {
        return "less than 0.1 %".to_owned();
    }
    if value > 0.999 {
        return "more than 99.9 %".to_owned();
    }
    let thresholds: Vec<f64> = thresholds.iter().map(|threshold| threshold * 100.0).collect();
    let decimals = usize::from(!(0.1..0.9).contains(&value));
    let text = rounded_on_its_side(value * 100.0, decimals, &thresholds);
    format!("{} %", text.strip_suffix(".0").unwrap_or(&text))
}

/// A whole number with its thousands set apart: `1,048,576`.
#[must_use]
pub fn count(value: u64) -> String {
    let digits = value.to_string();
    let mut out = String::new();
    for (place, digit) in digits.chars().enumerate() {
        if place > 0 && (digits.len() - place).is_multiple_of(3) {
            out.push(',');
        }
        out.push(digit);
    }
    out
}

fn rounded_on_its_side(value: f64, decimals: usize, thresholds: &[f64]) -> String {
    let same_side = |text: &str| {
        let rounded: f64 = text.parse().expect("a printed number");
        thresholds.iter().all(|threshold| rounded.partial_cmp(threshold) == value.partial_cmp(threshold))
    };
    let printed = |decimals: usize| format!("{value:.decimals$}");
    (decimals..decimals + 6).map(printed).find(|text| same_side(text)).unwrap_or_else(|| printed(decimals))
}

fn exactly_in(si: f64, precision: Precision, unit: &Unit) -> String {
    let number = number(unit.from_si(si), precision);
    if si.is_finite() { with_unit(&number, unit) } else { number }
}

fn with_unit(number: &str, unit: &Unit) -> String {
    let unit = unit_text(unit);
    if unit.is_empty() { number.to_owned() } else { format!("{number} {unit}") }
}

/// |value| as mantissa and exponent of ten, rounded to so many digits.
fn scientific(value: f64, digits: usize) -> (String, i32) {
    let text = format!("{:.*e}", digits - 1, value.abs());
    let (mantissa, exponent) = text.split_once('e').expect("the format has an exponent");
    (mantissa.to_owned(), exponent.parse().expect("a whole exponent"))
}

fn exponent_of_ten(value: f64) -> i32 {
    scientific(value, 17).1
}

fn trimmed(text: String, precision: Precision) -> String {
    if matches!(precision, Precision::UpTo(_)) && text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

/// Raised digits and signs.
fn raised(text: &str) -> String {
    text.chars()
        .map(|plain| RAISED.into_iter().find(|c| superscript(*c) == Some(plain)).unwrap_or(plain))
        .collect()
}

const RAISED: [char; 11] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹', '⁻'];

/// Units of one kind in rising order, as people climb them; the first factor of a longer unit climbs alike.
const LADDERS: [&[&str]; 24] = [
    &["fm", "pm", "nm", "µm", "mm", "m", "km"],
    &["nm^2", "µm^2", "mm^2", "m^2", "km^2"],
    &["nm^3", "µm^3", "mm^3", "m^3", "km^3"],
    &["aL", "fL", "pL", "nL", "µL", "mL", "L"],
    &["zg", "ag", "fg", "pg", "ng", "µg", "mg", "g", "kg", "t", "kt", "Mt", "Gt"],
    &["Da", "kDa", "MDa", "GDa"],
    &["ns", "µs", "ms", "s", "min", "h", "d", "yr", "kyr", "Myr", "Gyr"],
    &["mHz", "Hz", "kHz", "MHz", "GHz"],
    &["ymol", "zmol", "amol", "fmol", "pmol", "nmol", "µmol", "mmol", "mol", "kmol", "Mmol"],
    &["aM", "fM", "pM", "nM", "µM", "mM", "M"],
    &["fA", "pA", "nA", "µA", "mA", "A", "kA"],
    &["nV", "µV", "mV", "V", "kV", "MV"],
    &["fN", "pN", "nN", "µN", "mN", "N", "kN", "MN", "GN"],
    &["nPa", "µPa", "mPa", "Pa", "kPa", "MPa", "GPa", "TPa"],
    &["µbar", "mbar", "bar", "kbar", "Mbar"],
    &["patm", "natm", "µatm", "matm", "atm"],
    &["yJ", "zJ", "aJ", "fJ", "pJ", "nJ", "µJ", "mJ", "J", "kJ", "MJ", "GJ", "TJ", "PJ", "EJ"],
    &["µeV", "meV", "eV", "keV", "MeV", "GeV", "TeV"],
    &["yW", "zW", "aW", "fW", "pW", "nW", "µW", "mW", "W", "kW", "MW", "GW", "TW", "PW", "EW"],
    &["nGy", "µGy", "mGy", "Gy", "kGy", "MGy"],
    &["nSv", "µSv", "mSv", "Sv", "kSv"],
    &["mBq", "Bq", "kBq", "MBq", "GBq", "TBq"],
    &["bp", "kbp", "Mbp", "Gbp"],
    &["nt", "knt", "Mnt", "Gnt"],
];

/// The plain digit or sign that a raised one stands for.
#[must_use]
pub fn plain_exponent(c: char) -> Option<char> {
    superscript(c)
}
