//! Quantities written as maps: `{ mean, sd }`, `{ min, max }`, `{ anywhere_in: [a, b] }`, ...

use super::expansion::coverage_factor;
use super::samples::Column;
use super::text::One;
use super::{Reader, Reading, Value, two_texts};
use crate::math::kernels;
use crate::quantity::distribution::{Distribution, FreeRange, on_grid};
use crate::quantity::unit::Unit;
use crate::text::{Fields, Kind, Node, Problem, nearest};

/// The keys that tell the forms apart, in the order in which they are looked for.
const FORMS: [(&[&str], Form); 9] = [
    (&["value"], Form::Value),
    (&["anywhere_in"], Form::Free),
    (&["sample"], Form::Sample),
    (&["values"], Form::Discrete),
    (&["mean", "sd"], Form::Normal),
    (&["median", "factor"], Form::Lognormal),
    (&["low", "high"], Form::Interval),
    (&["mode"], Form::Triangular),
    (&["min", "max"], Form::Uniform),
];

/// How the ends of a free range are written.
const TWO_ENDS: &str = "two ends, as in `[6 nm, 20 nm]`";

#[derive(Clone, Copy)]
enum Form {
    Value,
    Free,
    Sample,
    Discrete,
    Normal,
    Lognormal,
    Interval,
    Triangular,
    Uniform,
}

impl Reader<'_, '_> {
    /// A map of any form.
    pub(super) fn map(&mut self, node: &Node) -> Option<Reading> {
        let what = format!("`{}`", self.wanted.name);
        let mut fields = Fields::of(node, &what, self.problems)?;
        let Some((_, form)) = FORMS.iter().find(|(keys, _)| keys.iter().any(|key| has(node, key))) else {
            self.refuse_form(node);
            return None;
        };
        let about = fields.take("about").map(|about| {
            let text = about.text("the remark `about`", self.problems).map(str::to_owned);
            // A remark that is no text has been refused; it counts as missing.
            text.unwrap_or_default()
        });
        if let Form::Free = form {
            return self.free(node, fields, about);
        }
        let before = self.problems.len();
        let read = match form {
            Form::Value => self.value(&mut fields),
            Form::Sample => self.sample(node, &mut fields),
            Form::Discrete => self.discrete(&mut fields),
            Form::Normal => self.normal(&mut fields),
            Form::Lognormal => self.lognormal(&mut fields),
            Form::Interval => self.interval(node, &mut fields),
            Form::Triangular => self.triangular(&mut fields),
            Form::Uniform | Form::Free => self.uniform(&mut fields),
        };
        fields.finish(self.problems);
        let (distribution, unit) = read.filter(|_| self.problems.len() == before)?;
        self.conclude(node, distribution, unit, about)
    }

    fn refuse_form(&mut self, node: &Node) {
        let known = FORMS.iter().flat_map(|(keys, _)| keys.iter().copied());
        let first = match &node.kind {
            Kind::Map(entries) => entries.first().map(|(key, _)| key),
            _ => None,
        };
        let near = first.and_then(|key| match &key.kind {
            Kind::Scalar(scalar) => nearest(&scalar.text, known),
            _ => None,
        });
        self.problems.push(
            Problem::at(node.place(), format!("the map of `{}` has none of the known forms", self.wanted.name))
                .expected(
                    "`{ mean, sd }`, `{ median, factor }`, `{ min, max }`, `{ min, mode, max }`, `{ low, high, \
                     coverage, distribution }`, `{ values, weights }`, `{ sample, column, unit }`, `{ anywhere_in: \
                     [a, b] }` or `{ value, about }`",
                )
                .nearest(near),
        );
    }

    fn value(&mut self, fields: &mut Fields<'_>) -> Option<(Distribution, Unit)> {
        let node = fields.require("value", self.problems)?;
        if let Kind::Map(_) = node.kind {
            self.refuse(
                node,
                "`value` is a map",
                "a text such as `210 ± 30 nm`; other keys stand beside `about`",
            );
            return None;
        }
        self.text(node)
    }

    fn normal(&mut self, fields: &mut Fields<'_>) -> Option<(Distribution, Unit)> {
        let both = "`{ mean: ..., sd: ... }`";
        let mean = fields.require_like("mean", both, self.problems).and_then(|node| self.one(node, "mean"));
        let sd_node = fields.require_like("sd", both, self.problems)?;
        let sd = self.one(sd_node, "sd")?;
        // A standard deviation is a difference: 10 °C is 10 K.
        let spread = sd.unit.difference_to_si(sd.value);
        if !(spread.is_normal() && spread > 0.0) {
            self.refuse(
                sd_node,
                "the standard deviation is not above zero",
                "`{ value: ... }` for an exact value",
            );
            return None;
        }
        let mean = mean?;
        Some((Distribution::Normal { mean: mean.si, sd: spread }, mean.unit))
    }

    fn lognormal(&mut self, fields: &mut Fields<'_>) -> Option<(Distribution, Unit)> {
        let both = "`{ median: ..., factor: ... }`";
        let median = fields
            .require_like("median", both, self.problems)
            .and_then(|node| self.above_zero(node, "median"));
        let factor_node = fields.require_like("factor", both, self.problems)?;
        let factor = self.pure(factor_node, "factor")?;
        if factor <= 1.0 {
            self.refuse(
                factor_node,
                "the factor is not above 1",
                "the geometric standard deviation, such as `1.5`; `{ value: ... }` for an exact value",
            );
            return None;
        }
        let median = median?;
        Some((Distribution::Lognormal { median: median.si, factor }, median.unit))
    }

    fn uniform(&mut self, fields: &mut Fields<'_>) -> Option<(Distribution, Unit)> {
        let logarithmic = self.scale(fields);
        let (min, max) = self.ends(fields, "min", "max", logarithmic == Some(true))?;
        let (low, high) = (min.si, max.si);
        let distribution = if logarithmic == Some(true) {
            Distribution::LogUniform { min: low, max: high }
        } else {
            Distribution::Uniform { min: low, max: high }
        };
        Some((distribution, min.unit))
    }

    fn triangular(&mut self, fields: &mut Fields<'_>) -> Option<(Distribution, Unit)> {
        let mode_node = fields.require("mode", self.problems);
        let ends = self.ends(fields, "min", "max", false);
        let mode = mode_node.and_then(|node| self.stated(node, "mode"));
        let ((min, max), mode, node) = (ends?, mode?, mode_node?);
        if !(min.si <= mode.si && mode.si <= max.si) {
            self.refuse(node, "the mode lies outside min and max", "a mode between them");
            return None;
        }
        if !(max.si - min.si).is_finite() {
            self.refuse(node, "the ends are further apart than a number can hold", "nearer ends");
            return None;
        }
        Some((Distribution::Triangular { min: min.si, mode: mode.si, max: max.si }, min.unit))
    }

    /// A coverage interval with equal tails.
    ///
    /// # Formula
    /// With z the normal quantile of (1 + coverage) / 2: mean (low + high) / 2 and standard deviation
    /// (high - low) / (2 z); or the same of the logarithms.
    fn interval(&mut self, node: &Node, fields: &mut Fields<'_>) -> Option<(Distribution, Unit)> {
        let coverage_node = fields.take("coverage");
        let kind_node = fields.take("distribution");
        let Some(coverage_node) = coverage_node else {
            self.refuse_interval(node, fields);
            return None;
        };
        let coverage = self.pure(coverage_node, "coverage").filter(|coverage| {
            let is_share = 0.0 < *coverage && *coverage < 1.0;
            if !is_share {
                self.refuse(
                    coverage_node,
                    "the coverage is not between 0 and 1",
                    "a share such as `0.95` or `95 %`",
                );
            }
            is_share
        });
        let logarithmic = match kind_node {
            None => {
                let expected = "`distribution: normal` or `distribution: lognormal`";
                self.refuse(node, "`distribution` is missing", expected);
                None
            }
            Some(node) => {
                self.word(node, "distribution", ["normal", "lognormal"]).map(|word| word == "lognormal")
            }
        };
        let (low, high) = self.ends(fields, "low", "high", logarithmic == Some(true))?;
        let (coverage, logarithmic) = (coverage?, logarithmic?);
        let z = coverage_factor(coverage);
        let distribution = if logarithmic {
            let factor = kernels::exp((kernels::ln(high.si) - kernels::ln(low.si)) / (2.0 * z));
            Distribution::Lognormal { median: FreeRange::middle(low.si, high.si, true), factor }
        } else {
            let (mean, half) = (0.5 * low.si + 0.5 * high.si, 0.5 * high.si - 0.5 * low.si);
            Distribution::Normal { mean, sd: half / z }
        };
        let is_wide = match &distribution {
            Distribution::Normal { sd, .. } => sd.is_normal() && *sd > 0.0,
            Distribution::Lognormal { factor, .. } => factor.is_finite() && *factor > 1.0,
            _ => false,
        };
        if !is_wide {
            self.refuse(
                node,
                "the interval leads to a spread that a number cannot hold",
                "another interval or coverage",
            );
            return None;
        }
        Some((distribution, low.unit))
    }

    fn refuse_interval(&mut self, node: &Node, fields: &mut Fields<'_>) {
        let mut text = |key| match fields.require(key, self.problems).map(|node| &node.kind) {
            Some(Kind::Scalar(scalar)) => scalar.text.clone(),
            _ => "...".to_owned(),
        };
        let (low, high) = (text("low"), text("high"));
        self.refuse(
            node,
            "`coverage` is missing, so that it is open how much lies between `low` and `high`",
            format!(
                "`{{ min: {low}, max: {high} }}` if everything does, `{{ low: {low}, high: {high}, coverage: 0.95, \
                 distribution: normal }}` if that share does"
            ),
        );
    }

    fn discrete(&mut self, fields: &mut Fields<'_>) -> Option<(Distribution, Unit)> {
        let weights_node = fields.take("weights");
        let values_node = fields.require("values", self.problems)?;
        let nodes = values_node.list("`values`", false, self.problems)?;
        let values: Vec<Option<One>> = nodes.iter().map(|node| self.stated(node, "a value")).collect();
        let weights = match weights_node {
            None => vec![Some(1.0); values.len()],
            Some(node) => {
                let nodes = node.list("`weights`", false, self.problems)?;
                if nodes.len() != values.len() {
                    let message = format!(
                        "`weights` and `values` differ in length: {} and {}",
                        nodes.len(),
                        values.len()
                    );
                    self.refuse(node, message, "one weight for each value");
                    return None;
                }
                nodes.iter().map(|node| self.weight(node)).collect()
            }
        };
        let values: Vec<One> = values.into_iter().collect::<Option<_>>()?;
        let weights: Vec<f64> = weights.into_iter().collect::<Option<_>>()?;
        let Some(unit) = values.first().map(|value| value.unit.clone()) else {
            self.refuse(values_node, "the list of values is empty", "at least one value");
            return None;
        };
        let mut pairs: Vec<(f64, f64)> = values.iter().map(|value| value.si).zip(weights).collect();
        pairs.sort_by(|a, b| a.0.total_cmp(&b.0));
        let mut sum = 0.0;
        let sums: Vec<f64> = pairs
            .iter()
            .map(|(_, weight)| {
                sum += weight;
                sum
            })
            .collect();
        if !(sum.is_normal() && sum > 0.0) {
            let at = weights_node.unwrap_or(values_node);
            self.refuse(
                at,
                "the weights do not add up to a number above zero",
                "weights such as `[1, 2, 1]`",
            );
            return None;
        }
        let values = pairs.iter().map(|(value, _)| *value).collect();
        let cumulated = sums.iter().map(|part| on_grid(part / sum)).collect();
        Some((Distribution::Discrete { values, cumulated }, unit))
    }

    fn weight(&mut self, node: &Node) -> Option<f64> {
        let weight = self.pure(node, "a weight")?;
        if weight < 0.0 {
            self.refuse(node, "the weight is negative", "zero or more");
            return None;
        }
        Some(weight)
    }

    fn sample(&mut self, node: &Node, fields: &mut Fields<'_>) -> Option<(Distribution, Unit)> {
        let all = "`{ sample: FILE, column: NAME, unit: UNIT }`";
        let file = fields.require_like("sample", all, self.problems);
        let column = fields.require_like("column", all, self.problems);
        let unit_node = fields.take("unit");
        let unit = match unit_node {
            None if self.wanted.dimension.is_none() => Some(Unit::none()),
            None => {
                self.refuse(node, "`unit` is missing", format!("`unit: {}`", self.wanted.unit.text()));
                None
            }
            Some(unit_node) => self.sample_unit(unit_node),
        };
        let file = file.and_then(|file| Some((file, file.text("`sample`", self.problems)?)));
        let column = column.and_then(|column| Some((column, column.text("`column`", self.problems)?)));
        let (file, column, unit) = (file?, column?, unit?);
        let Some(folder) = self.wanted.folder else {
            self.refuse(file.0, "a sample cannot stand here", "a distribution such as `{ mean, sd }`");
            return None;
        };
        let wanted = Column { folder, file: file.1, name: column.1, unit: &unit };
        let values = wanted.read(|si, cell| self.check_bounds(si, &unit.after(cell), 0..0));
        let values = values.map_err(|found| {
            for (part, mut problem) in found {
                problem.place = Some(if part.is_column() { column.0.place() } else { file.0.place() });
                self.problems.push(problem);
            }
        });
        let distribution = Distribution::Sample {
            file: file.1.into(),
            column: column.1.into(),
            values: values.ok()?.into(),
        };
        Some((distribution, unit))
    }

    fn sample_unit(&mut self, node: &Node) -> Option<Unit> {
        let text = node.text("`unit`", self.problems)?;
        let read = Unit::read(text).and_then(|unit| {
            self.check_dimension(text, &unit, &(0..0), &(0..text.len()))?;
            Ok(unit)
        });
        read.map_err(|fault| self.problems.push(node.problem(fault))).ok()
    }

    fn free(&mut self, node: &Node, mut fields: Fields<'_>, about: Option<String>) -> Option<Reading> {
        let before = self.problems.len();
        let stated_scale = self.scale(&mut fields);
        let typical_node = fields.take("typical");
        let range_node = fields.require("anywhere_in", self.problems)?;
        fields.finish(self.problems);
        if !self.wanted.may_be_free {
            let message = format!("`{}` is not for the organism to choose", self.wanted.name);
            let (low, high) = two_texts(range_node).unwrap_or(("...", "..."));
            let expected = format!("`{{ min: {low}, max: {high} }}` for a number that is not known");
            self.refuse(range_node, message, expected);
            return None;
        }
        let Kind::List(nodes) = &range_node.kind else {
            self.refuse(range_node, range_node.instead("`anywhere_in`"), TWO_ENDS);
            return None;
        };
        let [low_node, high_node] = nodes.as_slice() else {
            self.refuse(range_node, "`anywhere_in` does not have two ends", TWO_ENDS);
            return None;
        };
        let low = self.stated(low_node, "the low end");
        let high = self.stated(high_node, "the high end");
        let typical = typical_node.map(|node| (node, self.stated(node, "typical")));
        let (low, high) = (low?, high?);
        if low.si >= high.si {
            self.refuse(range_node, "the low end is not below the high end", "two ends, the lower first");
            return None;
        }
        if stated_scale == Some(true) && low.si <= 0.0 {
            self.refuse(
                low_node,
                "a logarithmic scale begins above zero",
                "a low end above zero, or `scale: linear`",
            );
            return None;
        }
        // Over a decade and more, known life is spread evenly in the logarithm rather than in the number.
        let logarithmic = stated_scale.unwrap_or(low.si > 0.0 && high.si / low.si >= 10.0);
        let typical = match typical {
            None => FreeRange::middle(low.si, high.si, logarithmic),
            Some((node, typical)) => {
                let typical = typical?.si;
                if !(low.si <= typical && typical <= high.si) {
                    self.refuse(node, "the typical value lies outside the range", "a value between its ends");
                    return None;
                }
                typical
            }
        };
        if self.problems.len() != before {
            return None;
        }
        let range = FreeRange { low: low.si, high: high.si, typical, logarithmic };
        Some(Reading { value: Value::Free(range), unit: low.unit, about, cut: 0.0, place: node.place() })
    }
}

/// Whether a map has a key.
fn has(node: &Node, wanted: &str) -> bool {
    match &node.kind {
        Kind::Map(entries) => {
            entries.iter().any(|(key, _)| matches!(&key.kind, Kind::Scalar(scalar) if scalar.text == wanted))
        }
        _ => false,
    }
}
