//! Entries of the dictionary.

use super::entry::{ByAttribute, Default, Of, Quantity};
use super::read_tables::{
    Tables, basis, by_attribute, check_name, exact, one_of_bases, provenance, text_of, unit, word,
};
use crate::quantity::written::{self, Value, Wanted};
use crate::quantity::{Bounds, Dimension, Unit};
use crate::text::{Fields, Kind, Node, Problem, Problems};

/// One entry, under its name.
pub(super) fn quantity(
    name: &str,
    key: &Node,
    node: &Node,
    tables: &Tables,
    problems: &mut Problems,
) -> Option<Quantity> {
    check_name(name, key, problems);
    if tables.constants.contains_key(name) {
        problems.push(
            Problem::at(key.place(), format!("the quantity `{name}` has the name of a constant"))
                .expected("another name: one name means one thing everywhere"),
        );
    }
    let mut fields = Fields::of(node, "a quantity", problems)?;
    let symbol = text_of(&mut fields, "symbol", problems);
    let of = fields.require_like("of", "`of: organism` or `of: environment`", problems).and_then(|node| {
        let words = [("organism", Of::Organism), ("environment", Of::Environment)];
        word(node, "what a quantity can be of", &words, problems)
    });
    let unit = fields
        .require_like("unit", "the unit people use, as in `unit: nm`; it fixes the dimension", problems)
        .and_then(|node| unit(node, problems));
    let bounds_node = fields.require_like("bounds", BOUNDS, problems);
    let about =
        fields.require("about", problems).and_then(|node| node.text("`about`", problems)).map(str::to_owned);
    let default_node = fields.take("default");
    fields.finish(problems);
    let (of, unit) = (of?, unit?);
    let bounds = bounds(name, bounds_node?, &unit, problems)?;
    let default = match default_node {
        Some(node) if of == Of::Environment => {
            problems.push(
                Problem::at(node.place(), format!("`{name}` is of the environment and has a default"))
                    .expected(
                        "no default: what an environment is like is for the candidate or its habitat to say",
                    ),
            );
            None
        }
        Some(node) => default(name, node, bounds, &unit, tables, problems),
        None => None,
    };
    Some(Quantity { name: name.to_owned(), symbol, of, unit, bounds, about: about?, default })
}

/// Bounds as they are written.
const BOUNDS: &str = "`[low, high]`, the lower first; `none` for an end that is open";

fn bounds(name: &str, node: &Node, unit: &Unit, problems: &mut Problems) -> Option<Bounds> {
    let Kind::List(ends) = &node.kind else {
        problems.push(Problem::at(node.place(), node.instead("`bounds`")).expected(BOUNDS));
        return None;
    };
    let [low, high] = ends.as_slice() else {
        problems.push(Problem::at(node.place(), "the bounds are not two values").expected(BOUNDS));
        return None;
    };
    let low = bound(name, low, f64::NEG_INFINITY, unit.dimension(), problems)?;
    let high = bound(name, high, f64::INFINITY, unit.dimension(), problems)?;
    if low >= high {
        problems.push(
            Problem::at(node.place(), format!("the bounds of `{name}` leave no room")).expected(BOUNDS),
        );
        return None;
    }
    Some(Bounds { low, high })
}

fn bound(name: &str, node: &Node, none: f64, dimension: Dimension, problems: &mut Problems) -> Option<f64> {
    if node.text("a bound", problems)? == "none" {
        return Some(none);
    }
    exact(name, node, dimension, problems)
}

fn default(
    name: &str,
    node: &Node,
    bounds: Bounds,
    unit: &Unit,
    tables: &Tables,
    problems: &mut Problems,
) -> Option<Default> {
    let mut fields = Fields::of(node, "a default", problems)?;
    let value_node = fields.require("value", problems);
    let typical_node = fields.take("typical");
    let roles = [("unknown", false), ("free", true)];
    let free = fields
        .require_like("role", "`role: unknown` or `role: free`", problems)
        .and_then(|node| word(node, "a role", &roles, problems));
    let basis =
        fields.require_like("basis", &one_of_bases(), problems).and_then(|node| basis(node, problems));
    let provenance = provenance(&mut fields, &tables.works, problems);
    let _ = fields.take("about");
    fields.finish(problems);
    if provenance.sources.is_empty() {
        problems.push(
            Problem::at(node.place(), format!("the default of `{name}` has no `source`"))
                .expected("`source: ...`, one or more keys of sources.yaml"),
        );
    }
    let wanted = Wanted { name, dimension: unit.dimension(), bounds, unit, may_be_free: true, folder: None };
    let mut value = by_attribute(value_node?, tables, problems, |node, problems| {
        written::read(node, &wanted, problems).map(|reading| reading.value)
    })?;
    let typical = typical_node.and_then(|node| {
        by_attribute(node, tables, problems, |node, problems| exact(name, node, unit.dimension(), problems))
    });
    let free = free?;
    if value.values().iter().any(|value| matches!(value, Value::Free(_)) != free) {
        problems.push(
            Problem::at(node.place(), format!("the default of `{name}` does not fit its role"))
                .expected("`{ anywhere_in: [a, b] }` for a free number, a distribution for an unknown one"),
        );
        return None;
    }
    if let Some(typical) = typical {
        set_typical(&mut value, &typical, name, node, problems);
    } else if free {
        problems.push(
            Problem::at(node.place(), format!("the free default of `{name}` has no `typical` value"))
                .expected("`typical: ...`, a value inside the range"),
        );
    }
    Some(Default { value, basis: basis?, provenance })
}

/// Puts the typical values into the free ranges that they belong to.
fn set_typical(
    value: &mut ByAttribute<Value>,
    typical: &ByAttribute<f64>,
    name: &str,
    node: &Node,
    problems: &mut Problems,
) {
    let mut set = |value: &mut Value, typical: Option<&f64>| match (value, typical) {
        (Value::Free(range), Some(&typical)) if (range.low..=range.high).contains(&typical) => {
            range.typical = typical;
        }
        (Value::Free(_), _) => problems.push(
            Problem::at(
                node.place(),
                format!("the typical value of `{name}` is missing or outside the range"),
            )
            .expected("`typical: ...`, a value inside the range"),
        ),
        (Value::Unknown(_), _) => {}
    };
    match (value, typical) {
        (ByAttribute::One(value), ByAttribute::One(typical)) => set(value, Some(typical)),
        (ByAttribute::One(value), ByAttribute::By { .. }) => set(value, None),
        (ByAttribute::By { cases, .. }, ByAttribute::One(typical)) => {
            cases.values_mut().for_each(|value| set(value, Some(typical)));
        }
        (ByAttribute::By { cases, .. }, ByAttribute::By { cases: typical, .. }) => {
            cases.iter_mut().for_each(|(word, value)| set(value, typical.get(word)));
        }
    }
}
