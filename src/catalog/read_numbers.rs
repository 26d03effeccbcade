//! The numbers that an entry brings along: parameters, values that come in sets, correlations, curves, and the range that
//! it was drawn from.

use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

use super::correlations::{Correlated, Correlations, read as correlations};
use super::entry::{Joint, Parameter};
use super::read_tables::{
    QUANTITY, Tables, any_value, basis, by_attribute, check_name, exact, named, provenance, text_of, word,
};
use crate::formula::curves::{Axes, Between, Curve, Form, Outside, Scale};
use crate::quantity::written::Value;
use crate::quantity::{Dimension, Distribution, Unit};
use crate::text::{Fields, Kind, Node, Place, Problem, Problems, shortened};

/// What was read, where each name stands, and the names whose numbers could not be read.
#[derive(Debug, Default)]
pub(super) struct Numbers {
    pub(super) parameters: BTreeMap<String, Parameter>,
    pub(super) joint: Option<Joint>,
    pub(super) correlations: Correlations,
    pub(super) curves: BTreeMap<String, Arc<Curve>>,
    pub(super) valid_over: BTreeMap<String, (f64, f64)>,
    pub(super) places: BTreeMap<String, Place>,
    pub(super) broken: BTreeSet<String>,
}

/// Takes the keys that hold numbers from the entry `id`.
pub(super) fn read(id: &str, fields: &mut Fields<'_>, tables: &Tables, problems: &mut Problems) -> Numbers {
    let mut numbers = Numbers::default();
    if let Some(node) = fields.take("parameters") {
        if !matches!(node.kind, Kind::Map(_)) {
            names_within(node, &mut numbers.broken);
        }
        for (name, key, value) in entries(node, "`parameters`", "a map from name to value", problems) {
            numbers.claim(name, key, tables, problems);
            match parameter(name, value, tables, problems) {
                Some(parameter) => _ = numbers.parameters.insert(name.to_owned(), parameter),
                None => _ = numbers.broken.insert(name.to_owned()),
            }
        }
    }
    if let Some(node) = fields.take("joint_values") {
        numbers.joint = numbers.joint(node, tables, problems);
    }
    if let Some(node) = fields.take("curves") {
        for (name, key, value) in entries(node, "`curves`", "a map from name to curve", problems) {
            numbers.claim(name, key, tables, problems);
            match curve(name, value, tables, problems) {
                Some(curve) => _ = numbers.curves.insert(name.to_owned(), Arc::new(curve)),
                None => _ = numbers.broken.insert(name.to_owned()),
            }
        }
    }
    if let Some(node) = fields.take("correlations") {
        let uncertain: Vec<&str> = numbers
            .parameters
            .iter()
            .filter(|(_, parameter)| parameter.is_uncertain())
            .map(|(name, _)| name.as_str())
            .collect();
        let refusal = |name: &str| {
            let fits = uncertain.contains(&name) || numbers.broken.contains(name);
            (!fits).then(|| format!("`{}` is no uncertain parameter of `{id}`", shortened(name, 60)))
        };
        let correlated = Correlated {
            known: uncertain.clone(),
            refusal: &refusal,
            expected: "two uncertain parameters of the entry",
        };
        numbers.correlations = correlations(node, &correlated, problems);
    }
    if let Some(node) = fields.take("valid_over") {
        numbers.valid_over = valid_over(node, tables, problems);
    }
    numbers
}

/// The entries of a map whose keys are names.
fn entries<'a>(
    node: &'a Node,
    what: &str,
    expected: &str,
    problems: &mut Problems,
) -> Vec<(&'a str, &'a Node, &'a Node)> {
    let entries = node.map(what, expected, problems).unwrap_or_default();
    entries.iter().filter_map(|(key, value)| Some((key.text("a name", problems)?, key, value))).collect()
}

/// The keys in something of the wrong shape: names that were meant to be there.
fn names_within(node: &Node, names: &mut BTreeSet<String>) {
    match &node.kind {
        Kind::Map(entries) => {
            let keys = entries.iter().filter_map(|(key, _)| match &key.kind {
                Kind::Scalar(scalar) => Some(scalar.text.clone()),
                _ => None,
            });
            names.extend(keys);
        }
        Kind::List(items) => items.iter().for_each(|item| names_within(item, names)),
        Kind::Null | Kind::Scalar(_) => {}
    }
}

impl Numbers {
    /// Takes a name for the entry. One name means one thing: neither a quantity nor a constant may have it, nor another
    /// number of the entry.
    fn claim(&mut self, name: &str, key: &Node, tables: &Tables, problems: &mut Problems) {
        check_name(name, key, problems);
        let what = if tables.quantities.contains_key(name) {
            "a quantity"
        } else if tables.constants.contains_key(name) {
            "a constant"
        } else if self.places.contains_key(name) {
            "a number of this entry"
        } else {
            self.places.insert(name.to_owned(), key.place());
            return;
        };
        problems.push(
            Problem::at(key.place(), format!("`{name}` is {what} already"))
                .expected("another name: one name means one thing everywhere"),
        );
    }

    fn joint(&mut self, node: &Node, tables: &Tables, problems: &mut Problems) -> Option<Joint> {
        let before = problems.len();
        let Kind::List(sets) = &node.kind else {
            let problem = Problem::at(node.place(), node.instead("`joint_values`"));
            problems.push(problem.expected("a list of sets, each a map from name to value"));
            names_within(node, &mut self.broken);
            return None;
        };
        let mut joint = Joint::default();
        let mut weights = Vec::new();
        for (number, set) in sets.iter().enumerate() {
            let mut weight = 1.0;
            let mut found = BTreeSet::new();
            for (name, key, value) in entries(set, "a set", "a map from name to value", problems) {
                if name == "weight" {
                    weight = positive_weight(value, problems);
                    continue;
                }
                found.insert(name);
                if number == 0 {
                    self.claim(name, key, tables, problems);
                } else if !joint.values.contains_key(name) && !self.broken.contains(name) {
                    problems.push(
                        Problem::at(key.place(), format!("`{name}` is missing in the first set"))
                            .expected("every name in every set"),
                    );
                }
                match one_value(name, value, problems) {
                    Some((si, unit)) => join(&mut joint, name, si, unit, value, problems),
                    None => _ = self.broken.insert(name.to_owned()),
                }
            }
            for name in joint.values.keys().filter(|name| !found.contains(name.as_str())) {
                problems.push(
                    Problem::at(set.place(), format!("`{name}` is missing in this set"))
                        .expected("every name in every set"),
                );
            }
            weights.push(weight);
        }
        if sets.is_empty() {
            problems
                .push(Problem::at(node.place(), "there are no sets").expected("at least one set of values"));
        }
        if problems.len() > before {
            self.broken.extend(joint.values.into_keys());
            return None;
        }
        let total: f64 = weights.iter().sum();
        let mut sum = 0.0;
        joint.cumulated = weights
            .iter()
            .map(|weight| {
                sum += weight / total;
                sum
            })
            .collect();
        if let Some(last) = joint.cumulated.last_mut() {
            *last = 1.0;
        }
        Some(joint)
    }
}

fn positive_weight(node: &Node, problems: &mut Problems) -> f64 {
    let weight = exact("weight", node, Dimension::NONE, problems).unwrap_or(1.0);
    if weight <= 0.0 {
        problems
            .push(Problem::at(node.place(), "the weight is not above zero").expected("a weight above zero"));
    }
    weight
}

/// Adds a value to its name's column.
fn join(joint: &mut Joint, name: &str, si: f64, unit: Unit, node: &Node, problems: &mut Problems) {
    let dimension = unit.dimension();
    let first = joint.units.entry(name.to_owned()).or_insert(unit).dimension();
    if first != dimension {
        problems.push(
            Problem::at(node.place(), format!("`{name}` is {dimension} here"))
                .expected(format!("{first}, as in the first set")),
        );
    }
    joint.values.entry(name.to_owned()).or_default().push(si);
}

/// One exact value in SI, and its unit.
fn one_value(name: &str, node: &Node, problems: &mut Problems) -> Option<(f64, Unit)> {
    let reading = any_value(name, node, false, problems)?;
    if let Value::Unknown(Distribution::Exact(si)) = reading.value {
        return Some((si, reading.unit));
    }
    problems.push(
        Problem::at(node.place(), format!("`{name}` is not one exact value here"))
            .expected("one number with its unit"),
    );
    None
}

fn parameter(name: &str, node: &Node, tables: &Tables, problems: &mut Problems) -> Option<Parameter> {
    // `{ value: ..., about: ... }` with more than a written value may hold, or a written value alone.
    let details = matches!(&node.kind, Kind::Map(entries) if entries.iter().any(|(key, _)| {
        matches!(&key.kind, Kind::Scalar(scalar) if scalar.text == "value")
    }));
    let (mut about, mut own_basis, mut own_provenance) = (None, None, Default::default());
    let mut value_node = node;
    if details {
        let mut fields = Fields::of(node, "a parameter", problems)?;
        value_node = fields.require("value", problems)?;
        about = text_of(&mut fields, "about", problems);
        own_basis = fields.take("basis").and_then(|node| basis(node, problems));
        own_provenance = provenance(&mut fields, &tables.works, problems);
        fields.finish(problems);
    }
    let mut unit: Option<Unit> = None;
    let value = by_attribute(value_node, tables, problems, |node, problems| {
        let reading = any_value(name, node, false, problems)?;
        match &unit {
            Some(first) if first.dimension() != reading.unit.dimension() => {
                let message = format!("`{name}` is {} here", reading.unit.dimension());
                let expected = format!("{}, as for the first word", first.dimension());
                problems.push(Problem::at(node.place(), message).expected(expected));
            }
            _ => unit = Some(reading.unit),
        }
        match reading.value {
            Value::Unknown(distribution) => Some(distribution),
            // `any_value` was asked to refuse these.
            Value::Free(_) => None,
        }
    })?;
    Some(Parameter { value, unit: unit?, about, basis: own_basis, provenance: own_provenance })
}

/// A curve as it is written.
const CURVE: &str = "`{ of: temperature, at: [0 °C, 37 °C], gives: [0.1 1/h, 4 1/h], axes: linear-log, between: straight, \
                     outside: edge }`";

fn curve(name: &str, node: &Node, tables: &Tables, problems: &mut Problems) -> Option<Curve> {
    let mut fields = Fields::of(node, "a curve", problems)?;
    let of = fields.require_like("of", CURVE, problems);
    let at = fields.require_like("at", CURVE, problems);
    let gives = fields.require_like("gives", CURVE, problems);
    let pair = |argument, value| Axes { argument, value };
    let axes = [
        ("linear-linear", pair(Scale::Linear, Scale::Linear)),
        ("linear-log", pair(Scale::Linear, Scale::Log)),
        ("log-linear", pair(Scale::Log, Scale::Linear)),
        ("log-log", pair(Scale::Log, Scale::Log)),
        ("reciprocal-linear", pair(Scale::Reciprocal, Scale::Linear)),
        ("reciprocal-log", pair(Scale::Reciprocal, Scale::Log)),
    ];
    let axes = fields
        .require_like("axes", CURVE, problems)
        .and_then(|node| word(node, "a pair of axes", &axes, problems));
    let between = [("straight", Between::Straight), ("monotone", Between::Monotone)];
    let between = fields
        .require_like("between", CURVE, problems)
        .and_then(|node| word(node, "a way between points", &between, problems));
    let outside = [("refuse", Outside::Refuse), ("edge", Outside::Edge)];
    let outside = fields
        .require_like("outside", CURVE, problems)
        .and_then(|node| word(node, "a way outside", &outside, problems));
    fields.finish(problems);
    let of_name = of.and_then(|of| of.text("`of`", problems));
    let quantity = of_name.and_then(|name| named(name, QUANTITY, of?, &tables.quantities, problems));
    let arguments = at.and_then(|at| points(name, at, problems));
    let values = gives.and_then(|gives| points(name, gives, problems));
    let (quantity, (argument, arguments), (value, values)) = (quantity?, arguments?, values?);
    if argument != quantity.dimension() {
        problems.push(
            Problem::at(at?.place(), format!("the points of `{name}` are {argument}")).expected(format!(
                "{}, which `{}` is",
                quantity.dimension(),
                quantity.name
            )),
        );
        return None;
    }
    if arguments.len() != values.len() {
        let message = format!("`{name}` has {} points and {} values", arguments.len(), values.len());
        problems.push(
            Problem::at(gives?.place(), message)
                .expected("as many values under `gives` as points under `at`"),
        );
        return None;
    }
    let points: Vec<(f64, f64)> = arguments.into_iter().zip(values).collect();
    let form = Form { argument, value, axes: axes?, between: between?, outside: outside? };
    Curve::new(form, &points)
        .map_err(|fault| {
            problems.push(
                Problem::at(node.place(), format!("`{name}`: {fault}"))
                    .expected("two points or more, in ascending order, above zero on logarithmic axes"),
            );
        })
        .ok()
}

/// Exact values of one dimension.
fn points(name: &str, node: &Node, problems: &mut Problems) -> Option<(Dimension, Vec<f64>)> {
    let mut dimension = None;
    let mut values = Vec::new();
    for item in node.list("the points", false, problems)? {
        let (si, unit) = one_value(name, item, problems)?;
        let first = *dimension.get_or_insert(unit.dimension());
        if first != unit.dimension() {
            problems.push(
                Problem::at(item.place(), format!("this point is {}", unit.dimension()))
                    .expected(format!("{first}, as those before it")),
            );
            return None;
        }
        values.push(si);
    }
    // A curve without points is refused with the others that have too few.
    Some((dimension.unwrap_or(Dimension::NONE), values))
}

fn valid_over(node: &Node, tables: &Tables, problems: &mut Problems) -> BTreeMap<String, (f64, f64)> {
    let mut read = BTreeMap::new();
    for (name, key, value) in entries(node, "`valid_over`", "a map from quantity to `[low, high]`", problems)
    {
        let Some(quantity) = named(name, QUANTITY, key, &tables.quantities, problems) else { continue };
        let before = problems.len();
        let ends: Vec<f64> = value
            .list("the range", false, problems)
            .unwrap_or_default()
            .into_iter()
            .filter_map(|end| exact(name, end, quantity.dimension(), problems))
            .collect();
        match ends.as_slice() {
            [low, high] if low < high => _ = read.insert(name.to_owned(), (*low, *high)),
            _ if problems.len() > before => {}
            _ => problems.push(
                Problem::at(value.place(), format!("the range of `{name}` is not two ends, the lower first"))
                    .expected("`[low, high]`"),
            ),
        }
    }
    read
}
