//! Quantities as the candidate format writes them, so that reading gives the same again.

use crate::quantity::digits::{shortest, significant};
use crate::quantity::distribution::{Distribution, FreeRange};
use crate::quantity::unit::Unit;

/// The distribution as a candidate may write it, in `unit` where that loses nothing, else in SI units. Reading it gives
/// the same distribution again; one that was conditioned on bounds is printed as it was before.
#[must_use]
pub fn print(distribution: &Distribution, unit: &Unit) -> String {
    in_unit(distribution, unit)
        .or_else(|| in_unit(distribution, &Unit::coherent(unit.dimension())))
        .expect("the factor of a coherent unit is 1, so that every number is its own text")
}

/// The free range as a candidate may write it; see [`print()`].
#[must_use]
pub fn print_range(range: &FreeRange, unit: &Unit) -> String {
    let write = |unit: &Unit| {
        let scale = if range.logarithmic { "log" } else { "linear" };
        let [low, high, typical] = [range.low, range.high, range.typical]
            .map(|si| exact(unit, si).map(|number| unit.after(&number)));
        Some(format!("{{ anywhere_in: [{}, {}], scale: {scale}, typical: {} }}", low?, high?, typical?))
    };
    write(unit)
        .or_else(|| write(&Unit::coherent(unit.dimension())))
        .expect("the factor of a coherent unit is 1, so that every number is its own text")
}

/// The text in this unit; `None` when a number cannot be written in it without loss.
fn in_unit(distribution: &Distribution, unit: &Unit) -> Option<String> {
    let with_unit = |si: f64| exact(unit, si).map(|number| unit.after(&number));
    Some(match distribution {
        Distribution::Exact(value) => with_unit(*value)?,
        Distribution::Normal { mean, sd } => {
            let sd = nearest_text(unit.difference_from_si(*sd), *sd, |text| unit.difference_to_si(text))?;
            unit.after(&format!("{} ± {sd}", exact(unit, *mean)?))
        }
        Distribution::Lognormal { .. } if unit.offset() != 0.0 => return None,
        Distribution::Lognormal { median, factor } => {
            format!("{} ×/÷ {}", with_unit(*median)?, shortest(*factor))
        }
        Distribution::Uniform { min, max } => {
            format!("{{ min: {}, max: {} }}", with_unit(*min)?, with_unit(*max)?)
        }
        Distribution::LogUniform { min, max } => {
            format!("{{ min: {}, max: {}, scale: log }}", with_unit(*min)?, with_unit(*max)?)
        }
        Distribution::Triangular { min, mode, max } => {
            format!("{{ min: {}, mode: {}, max: {} }}", with_unit(*min)?, with_unit(*mode)?, with_unit(*max)?)
        }
        Distribution::Discrete { values, cumulated } => {
            let values = values.iter().map(|value| with_unit(*value)).collect::<Option<Vec<_>>>()?;
            let weights: Vec<_> = weights(cumulated).into_iter().map(shortest).collect();
            format!("{{ values: [{}], weights: [{}] }}", values.join(", "), weights.join(", "))
        }
        Distribution::Sample { file, column, .. } => {
            let unit =
                if unit.text().is_empty() { String::new() } else { format!(", unit: {}", unit.text()) };
            format!("{{ sample: {}, column: {}{unit} }}", quoted(file), quoted(column))
        }
        Distribution::Within { base, .. } => in_unit(base, unit)?,
    })
}

/// The number in this unit that is read as exactly `si`.
fn exact(unit: &Unit, si: f64) -> Option<String> {
    nearest_text(unit.from_si(si), si, |number| unit.to_si(number))
}

/// A text near `near` that `read` takes to exactly `wanted`, the shorter the better.
fn nearest_text(near: f64, wanted: f64, read: impl Fn(f64) -> f64) -> Option<String> {
    let texts = (15..=17).map(|digits| significant(near, digits));
    let neighbours =
        [near.next_down(), near.next_up(), near.next_down().next_down(), near.next_up().next_up()];
    texts
        .chain(neighbours.map(shortest))
        .find(|text| text.parse().is_ok_and(|number: f64| is_plain(number) && read(number) == wanted))
}

/// Whether a number is read at all: zero, or one that does not vanish.
fn is_plain(number: f64) -> bool {
    number == 0.0 || number.is_normal()
}

/// Weights that add up to these sums: exactly, since all are multiples of 2^-52.
fn weights(cumulated: &[f64]) -> Vec<f64> {
    let before = std::iter::once(&0.0).chain(cumulated);
    cumulated.iter().zip(before).map(|(sum, before)| sum - before).collect()
}

/// A name in double quotes, which YAML reads as JSON does.
pub(super) fn quoted(name: &str) -> String {
    serde_json::Value::from(name).to_string()
}
