//! What is said of one quantity.

use super::spoken;
use crate::judge::Assessment;
use crate::judge::assessment::{Origin, QuantityResult};
use crate::quantity::Unit;
use crate::quantity::shown::{self, Precision};

/// The free numbers and what was chosen for them.
pub(in crate::report) fn chosen(a: &Assessment) -> Option<String> {
    let chosen: Vec<String> = a
        .quantities
        .iter()
        .filter_map(|q| {
            let value = shown::in_unit(q.chosen?, Precision::UpTo(2), &q.unit);
            Some(format!("{} {value}", spoken(&q.name)))
        })
        .collect();
    if chosen.is_empty() { None } else { Some(format!("{}.", chosen.join(", "))) }
}

/// How a quantity reads: `210 nm; normal, standard uncertainty 30 nm, ...`, and the remark that stood with it.
pub(in crate::report) fn as_read(q: &QuantityResult) -> String {
    let remark = q.remark.as_ref().map(|remark| format!("; \"{remark}\"")).unwrap_or_default();
    format!("{}; {}{remark}", median(q), q.distribution)
}

/// The median of a quantity with the digits that its interval supports, or what was chosen.
pub(in crate::report) fn median(q: &QuantityResult) -> String {
    match q.chosen {
        Some(chosen) => format!("{} (chosen)", shown::in_unit(chosen, Precision::UpTo(2), &q.unit)),
        None => shown::in_unit(q.median, precision(q), &q.unit),
    }
}

/// The digits that a quantity's interval supports, in its unit: a temperature in °C has others than in kelvin.
pub(super) fn precision(q: &QuantityResult) -> Precision {
    let [median, low, high] = [q.median, q.low, q.high].map(|si| q.unit.from_si(si));
    Precision::supported_by(median, low, high)
}

/// Median and interval of a quantity that was worked out.
pub(in crate::report) fn worked_out(q: &QuantityResult) -> String {
    if q.chosen.is_some() {
        return median(q);
    }
    with_interval([q.median, q.low, q.high], &q.unit)
}

/// A median and its interval, SI: `35 % (90 % within 31 to 39 %)`.
pub(in crate::report) fn with_interval(si: [f64; 3], unit: &Unit) -> String {
    let [median, low, high] = si.map(|si| unit.from_si(si));
    let precision = Precision::supported_by(median, low, high);
    let shown = shown::in_unit(si[0], precision, unit);
    if low == high {
        shown
    } else {
        format!("{shown} (90 % within {})", shown::range(si[1], si[2], precision, unit))
    }
}

/// Where a number came from, in words.
pub(in crate::report) fn origin(q: &QuantityResult) -> String {
    match &q.origin {
        Origin::Given => "given".to_owned(),
        Origin::Habitat => "habitat".to_owned(),
        Origin::Relation(id) => format!("relation `{id}`"),
        Origin::Figure(_) => "figure".to_owned(),
        Origin::Default => "default".to_owned(),
        Origin::Adopted => "adopted".to_owned(),
    }
}
