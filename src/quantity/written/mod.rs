//! Every way of writing a quantity, read into a distribution or a free range.

mod expansion;
mod fields;
mod forms;
mod number;
mod print;
mod refused;
mod samples;
#[cfg(test)]
mod tests;
mod text;

use std::ops::Range;
use std::path::Path;

use super::digits::significant;
use super::dimension::Dimension;
use super::distribution::{Bounds, Distribution, FreeRange};
use super::shown::{self, Precision};
use super::unit::{ANY_UNIT, Unit};
use crate::text::{Fault, Kind, Node, Place, Problem, Problems};

pub use print::{print, print_range};

/// What a value must be.
#[derive(Clone, Debug)]
pub struct Wanted<'a> {
    /// The name of the quantity or parameter, for messages.
    pub name: &'a str,
    /// Its dimension.
    pub dimension: Dimension,
    /// Where it may lie.
    pub bounds: Bounds,
    /// A unit to show in messages (`expected a length such as 210 nm`).
    pub unit: &'a Unit,
    /// Whether `{ anywhere_in: [a, b] }` is allowed.
    pub may_be_free: bool,
    /// The folder that sample files are named from; `None` where samples are not allowed.
    pub folder: Option<&'a Path>,
}

/// What was written, understood.
#[derive(Clone, Debug)]
pub struct Reading {
    /// How the number is known.
    pub value: Value,
    /// The unit it was written in, for echoing.
    pub unit: Unit,
    /// The remark that stood with it.
    pub about: Option<String>,
    /// Share of the stated distribution that the bounds cut off (0 when none).
    pub cut: f64,
    /// Where it stands.
    pub place: Place,
}

/// How a number is known.
#[derive(Clone, Debug, PartialEq)]
pub enum Value {
    /// Fixed by nature: sampled (or exact).
    Unknown(Distribution),
    /// Chosen by the organism within a range.
    Free(FreeRange),
}

impl Value {
    /// In words, with numbers in `unit`: `normal, standard uncertainty 30 nm, 90 % within 161 to 259 nm`.
    #[must_use]
    pub fn describe(&self, unit: &Unit) -> String {
        match self {
            Self::Unknown(distribution) => distribution.describe(unit),
            Self::Free(range) => range.describe(unit),
        }
    }
}

/// The largest share of a distribution that bounds may cut off.
const LARGEST_CUT: f64 = 0.5;

/// The outermost probabilities that a random stream gives.
const OUTERMOST: [f64; 2] = [f64::EPSILON / 2.0, 1.0 - f64::EPSILON / 2.0];

/// Reads a value of any form of the candidate format. Problems are added, each with its place.
pub fn read(node: &Node, wanted: &Wanted<'_>, problems: &mut Problems) -> Option<Reading> {
    let mut reader = Reader { wanted, problems };
    match &node.kind {
        Kind::Scalar(_) => {
            let (distribution, unit) = reader.text(node)?;
            reader.conclude(node, distribution, unit, None)
        }
        Kind::Map(_) => reader.map(node),
        Kind::Null | Kind::List(_) => {
            let expected = match two_texts(node) {
                Some((low, high)) => format!(
                    "`{{ min: {low}, max: {high} }}` if everything between is equally likely, `{{ values: [{low}, \
                     {high}] }}` for one of the two"
                ),
                None => wanted.example(),
            };
            let message = node.instead(&format!("`{}`", wanted.name));
            problems.push(Problem::at(node.place(), message).expected(expected));
            None
        }
    }
}

/// Reads a value of whatever dimension its first unit says; the rest of it must agree.
pub fn read_any(name: &str, node: &Node, may_be_free: bool, problems: &mut Problems) -> Option<Reading> {
    let unit = first_unit(node).unwrap_or_else(Unit::none);
    let wanted = Wanted {
        name,
        dimension: unit.dimension(),
        bounds: Bounds::NONE,
        unit: &unit,
        may_be_free,
        folder: None,
    };
    read(node, &wanted, problems)
}

impl Wanted<'_> {
    /// A value that would do: `a length such as `1 nm``.
    fn example(&self) -> String {
        format!("{} such as `{}`", self.dimension, self.unit.after("1"))
    }
}

/// The two texts of a list of two.
fn two_texts(node: &Node) -> Option<(&str, &str)> {
    let Kind::List(items) = &node.kind else { return None };
    match items.as_slice() {
        [Node { kind: Kind::Scalar(low), .. }, Node { kind: Kind::Scalar(high), .. }] => {
            Some((&low.text, &high.text))
        }
        _ => None,
    }
}

/// The unit of the first value that has one, in the order written.
fn first_unit(node: &Node) -> Option<Unit> {
    /// Keys whose values are words or pure numbers, whatever the quantity.
    const WITHOUT_UNIT: [&str; 8] =
        ["about", "scale", "coverage", "distribution", "factor", "weights", "sample", "column"];
    match &node.kind {
        Kind::Scalar(scalar) => text::parse(&scalar.text).ok().map(|parsed| parsed.unit).or_else(|| Unit::read(&scalar.text).ok()),
        Kind::List(items) => items.iter().find_map(first_unit),
        Kind::Map(entries) => entries
            .iter()
            .filter(|(key, _)| !matches!(&key.kind, Kind::Scalar(key) if WITHOUT_UNIT.contains(&key.text.as_str())))
            .find_map(|(_, value)| first_unit(value)),
        Kind::Null => None,
    }
}

/// Reads one text such as `210 ± 30 nm`, without wanting any dimension: distribution (SI), unit.
///
/// # Errors
/// A fault that points into `text`.
pub fn read_text(text: &str) -> Result<(Distribution, Unit), Fault> {
    text::parse(text).map(|parsed| (parsed.distribution, parsed.unit))
}

/// Reads what is wanted and collects what is wrong.
struct Reader<'a, 'p> {
    wanted: &'a Wanted<'a>,
    problems: &'p mut Problems,
}

impl Reader<'_, '_> {
    /// Adds a problem about a whole node.
    fn refuse(&mut self, node: &Node, message: impl Into<String>, expected: impl Into<String>) {
        self.problems.push(Problem::at(node.place(), message).expected(expected));
    }

    /// A one-line text of the wanted dimension, in SI units; an exact one lies within the bounds.
    fn text(&mut self, node: &Node) -> Option<(Distribution, Unit)> {
        let name = format!("`{}`", self.wanted.name);
        let text = node.text(&name, self.problems)?;
        let read = text::parse(text).and_then(|parsed| {
            self.check_dimension(text, &parsed.unit, &parsed.number, &parsed.unit_span)?;
            if let Distribution::Exact(si) = parsed.distribution {
                let span = parsed.number.start..parsed.number.end.max(parsed.unit_span.end);
                self.check_bounds(si, &text[span.clone()], span)?;
            }
            Ok((parsed.distribution, parsed.unit))
        });
        read.map_err(|fault| self.problems.push(node.problem(self.fitting(fault, text)))).ok()
    }

    /// Of a symbol that is no unit: what would be of the wanted dimension, and the nearest symbol only if it is.
    fn fitting(&self, mut fault: Fault, text: &str) -> Fault {
        if fault.expected.as_deref() != Some(ANY_UNIT) {
            return fault;
        }
        fault.expected = Some(self.wanted.example());
        let is_whole_unit =
            text[..fault.span.start].trim_end().ends_with(|c: char| c.is_ascii_digit() || c == ')')
                && text[fault.span.end..].trim().is_empty();
        let fits =
            |near: &String| Unit::read(near).is_ok_and(|unit| unit.dimension() == self.wanted.dimension);
        fault.nearest = fault.nearest.filter(|near| !is_whole_unit || fits(near));
        fault
    }

    fn check_dimension(
        &self,
        text: &str,
        unit: &Unit,
        number: &Range<usize>,
        unit_span: &Range<usize>,
    ) -> Result<(), Fault> {
        let wanted = self.wanted;
        if unit.dimension() == wanted.dimension {
            return Ok(());
        }
        if unit_span.is_empty() {
            let (before, after) = text.split_at(unit_span.start);
            let repaired = format!("{before} {}{after}", wanted.unit.text());
            return Err(Fault::new(number.clone(), "the unit is missing").expected(format!(
                "{} such as `{}`",
                wanted.dimension,
                repaired.trim()
            )));
        }
        // A text of a unit alone has no number to repeat.
        let example = match &text[number.clone()] {
            "" => wanted.unit.text().to_owned(),
            number => wanted.unit.after(number),
        };
        // A temperature in coulombs is one in degrees.
        let is_temperature = wanted.dimension == Dimension::whole([0, 0, 0, 0, 1, 0, 0]);
        let nearest = (is_temperature && unit.text() == "C").then(|| "°C".to_owned());
        Err(Fault::new(unit_span.clone(), format!("found {} for `{}`", unit.dimension(), wanted.name))
            .expected(format!("{} such as `{example}`", wanted.dimension))
            .nearest(nearest))
    }

    /// Refuses a value outside the bounds; `written` says it as it stands.
    fn check_bounds(&self, si: f64, written: &str, span: Range<usize>) -> Result<(), Fault> {
        let wanted = self.wanted;
        if wanted.bounds.contains(si) {
            return Ok(());
        }
        let mut expected = self.allowed();
        if wanted.dimension.is_none() && wanted.bounds.high == 1.0 && si <= 100.0 && si > 1.0 {
            let percent = significant(si, 6);
            if written.parse::<f64>().is_ok() {
                expected += &format!("; `{percent} %` if that was meant");
            }
        }
        Err(Fault::new(span, format!("`{}` cannot be `{written}`", wanted.name)).expected(expected))
    }

    /// A bound in a unit that reads well.
    fn shown(&self, si: f64) -> String {
        shown::in_unit(si, Precision::UpTo(6), self.wanted.unit)
    }

    /// The bounds in words.
    fn allowed(&self) -> String {
        let Bounds { low, high } = self.wanted.bounds;
        match (low.is_finite(), high.is_finite()) {
            (true, true) => format!("a value from {} to {}", self.shown(low), self.shown(high)),
            (true, false) => format!("at least {}", self.shown(low)),
            (false, true) => format!("at most {}", self.shown(high)),
            (false, false) => "a finite value".to_owned(),
        }
    }

    /// Conditions on the bounds, and makes the reading.
    fn conclude(
        &mut self,
        node: &Node,
        distribution: Distribution,
        unit: Unit,
        about: Option<String>,
    ) -> Option<Reading> {
        let (distribution, cut) = distribution.conditioned(self.wanted.bounds);
        if cut > LARGEST_CUT {
            let message = format!(
                "{} % of this distribution lies where `{}` cannot be",
                significant(100.0 * cut, 2),
                self.wanted.name
            );
            self.refuse(node, message, self.allowed());
            return None;
        }
        if reaches_too_far(&distribution) {
            self.refuse(node, "this distribution reaches beyond what numbers can hold", "a narrower one");
            return None;
        }
        Some(Reading { value: Value::Unknown(distribution), unit, about, cut, place: node.place() })
    }
}

/// Whether a draw could overflow, or vanish where only numbers above zero are possible.
fn reaches_too_far(distribution: &Distribution) -> bool {
    let base = match distribution {
        Distribution::Within { base, .. } => base,
        other => other,
    };
    let is_listed =
        matches!(base, Distribution::Exact(_) | Distribution::Discrete { .. } | Distribution::Sample { .. });
    // Listed values have been looked at one by one.
    if is_listed {
        return false;
    }
    let [low, high] = OUTERMOST.map(|p| distribution.quantile(p));
    let vanishes = matches!(base, Distribution::Lognormal { .. }) && !low.is_normal();
    vanishes || !low.is_finite() || !high.is_finite()
}
