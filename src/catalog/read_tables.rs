//! The files that are maps: sources, constants, attributes, the dictionary.

use std::collections::{BTreeMap, BTreeSet};

use super::basis::{Basis, Standing};
use super::entry::{Attribute, ByAttribute, Constant, Default, Of, Provenance, Quantity, Work};
use super::files::{File, Holds};
use crate::quantity::written::{self, Reading, Value, Wanted};
use crate::quantity::{Bounds, Dimension, Distribution, Unit};
use crate::text::{Fault, Fields, Kind, Node, Problem, Problems, nearest, yaml};

/// The tables that entries refer to.
#[derive(Debug, std::default::Default)]
pub(super) struct Tables {
    pub(super) quantities: BTreeMap<String, Quantity>,
    pub(super) attributes: BTreeMap<String, Attribute>,
    pub(super) constants: BTreeMap<String, Constant>,
    pub(super) works: BTreeMap<String, Work>,
    pub(super) overlaid: BTreeSet<String>,
}

/// Reads all tables; of two values under one key in different layers, the later layer's stands.
pub(super) fn read(files: &[File], problems: &mut Problems) -> Tables {
    let mut tables = Tables::default();
    let mut seen = Seen::default();
    for holds in [Holds::Sources, Holds::Constants, Holds::Attributes, Holds::Quantities] {
        for file in files.iter().filter(|file| file.holds == holds) {
            for_each_key(file, &mut seen, problems, |name, node, problems| {
                if file.overlaid {
                    tables.overlaid.insert(name.to_owned());
                }
                match holds {
                    Holds::Sources => insert(&mut tables.works, name, work(node, problems)),
                    Holds::Constants => {
                        let constant = constant(name, node, &tables.works, problems);
                        insert(&mut tables.constants, name, constant);
                    }
                    Holds::Attributes => insert(&mut tables.attributes, name, attribute(node, problems)),
                    _ => {
                        let quantity = quantity(name, node, &tables, problems);
                        insert(&mut tables.quantities, name, quantity);
                    }
                }
            });
        }
    }
    tables
}

fn insert<T>(map: &mut BTreeMap<String, T>, name: &str, value: Option<T>) {
    if let Some(value) = value {
        map.insert(name.to_owned(), value);
    }
}

/// Keys read so far, to refuse the same key in two files of one layer.
#[derive(std::default::Default)]
pub(super) struct Seen(BTreeMap<(Holds, String), bool>);

impl Seen {
    /// Adds a key of a layer; a problem when that layer already has it.
    pub(super) fn add(
        &mut self,
        holds: Holds,
        key: &str,
        overlaid: bool,
        node: &Node,
        problems: &mut Problems,
    ) {
        if self.0.insert((holds, key.to_owned()), overlaid) == Some(overlaid) {
            problems.push(Problem::at(node.place(), format!("`{key}` stands twice in the catalogue")));
        }
    }
}

/// Calls `f` with every key and value of the one map in a file.
pub(super) fn for_each_key(
    file: &File,
    seen: &mut Seen,
    problems: &mut Problems,
    mut f: impl FnMut(&str, &Node, &mut Problems),
) {
    for (_, document) in yaml::documents(&file.source, problems) {
        let Kind::Map(entries) = &document.kind else {
            if !matches!(document.kind, Kind::Null) {
                problems.push(
                    Problem::at(document.place(), format!("the file is {}", document.describe()))
                        .expected("a map"),
                );
            }
            continue;
        };
        for (key, value) in entries {
            if let Some(name) = key.text("a name", problems) {
                seen.add(file.holds, name, file.overlaid, key, problems);
                f(name, value, problems);
            }
        }
    }
}

fn work(node: &Node, problems: &mut Problems) -> Option<Work> {
    let mut fields = Fields::of(node, "a source", problems)?;
    let mut text = |key: &'static str, fields: &mut Fields<'_>| {
        fields.take(key).and_then(|node| node.text(key, problems)).unwrap_or_default().to_owned()
    };
    let authors = text("authors", &mut fields);
    let year = text("year", &mut fields);
    let title = text("title", &mut fields);
    let journal = text("journal", &mut fields);
    let doi = Some(text("doi", &mut fields)).filter(|doi| !doi.is_empty());
    let standing = fields.require("standing", problems).and_then(|node| standing(node, problems));
    fields.finish(problems);
    if authors.is_empty() && title.is_empty() {
        problems.push(Problem::at(node.place(), "a source has neither `authors` nor a `title`"));
    }
    Some(Work { authors, year, title, journal, doi, standing: standing? })
}

/// One word of a list; a problem with the nearest one otherwise.
pub(super) fn word<T: Copy>(
    node: &Node,
    what: &str,
    words: &[(&'static str, T)],
    problems: &mut Problems,
) -> Option<T> {
    let text = node.text(what, problems)?;
    let found = words.iter().find(|(word, _)| *word == text).map(|(_, value)| *value);
    if found.is_none() {
        let names: Vec<&str> = words.iter().map(|(word, _)| *word).collect();
        problems.push(
            Problem::at(node.place(), format!("`{text}` is not {what}"))
                .expected(format!("one of {}", names.join(", ")))
                .nearest(nearest(text, names.iter().copied())),
        );
    }
    found
}

/// A standing.
pub(super) fn standing(node: &Node, problems: &mut Problems) -> Option<Standing> {
    word(node, "a standing", &Standing::ALL.map(|standing| (standing.word(), standing)), problems)
}

/// A basis.
pub(super) fn basis(node: &Node, problems: &mut Problems) -> Option<Basis> {
    word(node, "a basis", &Basis::ALL.map(|basis| (basis.word(), basis)), problems)
}

/// Keys of sources, each of which must be known.
pub(super) fn sources(node: &Node, works: &BTreeMap<String, Work>, problems: &mut Problems) -> Vec<String> {
    let mut keys = Vec::new();
    for item in node.list("the sources", true, problems).unwrap_or_default() {
        if let Some(key) = item.text("a source", problems) {
            if !works.contains_key(key) {
                problems.push(
                    Problem::at(item.place(), format!("`{key}` is not in the list of sources"))
                        .nearest(nearest(key, works.keys().map(String::as_str))),
                );
            }
            keys.push(key.to_owned());
        }
    }
    keys
}

/// `source` and `standing` of a value.
pub(super) fn provenance(
    fields: &mut Fields<'_>,
    works: &BTreeMap<String, Work>,
    problems: &mut Problems,
) -> Provenance {
    Provenance {
        sources: fields.take("source").map(|node| sources(node, works, problems)).unwrap_or_default(),
        standing: fields.take("standing").and_then(|node| standing(node, problems)),
    }
}

fn constant(
    name: &str,
    node: &Node,
    works: &BTreeMap<String, Work>,
    problems: &mut Problems,
) -> Option<Constant> {
    let mut fields = Fields::of(node, "a constant", problems)?;
    let reading = fields.require("value", problems).and_then(|node| any_value(name, node, false, problems));
    let sources = fields.require("source", problems).map(|node| sources(node, works, problems));
    let _ = fields.take("about");
    fields.finish(problems);
    let (reading, sources) = (reading?, sources?);
    match reading.value {
        Value::Unknown(Distribution::Exact(value)) => Some(Constant { value, unit: reading.unit, sources }),
        _ => {
            problems.push(Problem::at(reading.place, format!("the constant `{name}` is not one value")));
            None
        }
    }
}

/// A value of whatever dimension its unit says.
pub(super) fn any_value(
    name: &str,
    node: &Node,
    may_be_free: bool,
    problems: &mut Problems,
) -> Option<Reading> {
    written::read_any(name, node, may_be_free, problems)
}

fn attribute(node: &Node, problems: &mut Problems) -> Option<Attribute> {
    let mut fields = Fields::of(node, "an attribute", problems)?;
    let about = text_of(&mut fields, "about", problems);
    let mut words = BTreeMap::new();
    if let Some(node) = fields.require("words", problems) {
        if let Kind::Map(entries) = &node.kind {
            for (key, value) in entries {
                if let (Some(word), Some(meaning)) =
                    (key.text("a word", problems), value.text("a meaning", problems))
                {
                    words.insert(word.to_owned(), meaning.to_owned());
                }
            }
        } else {
            problems.push(
                Problem::at(node.place(), format!("the words are {}", node.describe()))
                    .expected("a map from word to meaning"),
            );
        }
    }
    let default = fields.take("default").and_then(|node| {
        let word = node.text("the default", problems)?;
        if !words.contains_key(word) {
            problems.push(
                Problem::at(node.place(), format!("the default `{word}` is not among the words"))
                    .nearest(nearest(word, words.keys().map(String::as_str))),
            );
        }
        Some(word.to_owned())
    });
    fields.finish(problems);
    Some(Attribute { about: about.unwrap_or_default(), words, default })
}

/// The text under a key that may be absent.
pub(super) fn text_of(fields: &mut Fields<'_>, key: &'static str, problems: &mut Problems) -> Option<String> {
    fields.take(key)?.text(key, problems).map(str::to_owned)
}

/// A unit, with its fault placed.
pub(super) fn unit(node: &Node, problems: &mut Problems) -> Option<Unit> {
    let text = node.text("a unit", problems)?;
    Unit::read(text).map_err(|fault| problems.push(node.problem(fault))).ok()
}

fn quantity(name: &str, node: &Node, tables: &Tables, problems: &mut Problems) -> Option<Quantity> {
    let mut fields = Fields::of(node, "a quantity", problems)?;
    check_name(name, node, problems);
    if tables.constants.contains_key(name) {
        problems.push(Problem::at(node.place(), format!("the quantity `{name}` has the name of a constant")));
    }
    let symbol = text_of(&mut fields, "symbol", problems);
    let of = fields.require("of", problems).and_then(|node| {
        let words = [("organism", Of::Organism), ("environment", Of::Environment)];
        word(node, "what a quantity can be of", &words, problems)
    });
    let unit = fields.require("unit", problems).and_then(|node| unit(node, problems));
    let bounds_node = fields.require("bounds", problems);
    let about =
        fields.require("about", problems).and_then(|node| node.text("about", problems)).map(str::to_owned);
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

/// Names are lower case with underscores, so that formulas can hold them.
pub(super) fn check_name(name: &str, node: &Node, problems: &mut Problems) {
    let mut characters = name.chars();
    let fine = characters.next().is_some_and(|c| c.is_ascii_lowercase())
        && characters.all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '_');
    if !fine {
        problems.push(
            Problem::at(node.place(), format!("`{name}` cannot be a name"))
                .expected("lower-case letters, digits and underscores, a letter first"),
        );
    }
}

fn bounds(name: &str, node: &Node, unit: &Unit, problems: &mut Problems) -> Option<Bounds> {
    let ends = node.list("the bounds", false, problems)?;
    let [low, high] = ends.as_slice() else {
        problems.push(
            Problem::at(node.place(), "bounds are two values").expected("[low, high], either of them `none`"),
        );
        return None;
    };
    let low = bound(name, low, f64::NEG_INFINITY, unit.dimension(), problems)?;
    let high = bound(name, high, f64::INFINITY, unit.dimension(), problems)?;
    if low >= high {
        problems.push(Problem::at(node.place(), format!("the bounds of `{name}` leave no room")));
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

/// One exact value of a known dimension, in SI units.
pub(super) fn exact(name: &str, node: &Node, dimension: Dimension, problems: &mut Problems) -> Option<f64> {
    let text = node.text(name, problems)?;
    match written::read_text(text) {
        // A bare zero is of any dimension.
        Ok((Distribution::Exact(value), unit)) if unit.dimension() == dimension => Some(value),
        Ok((Distribution::Exact(_), unit)) => {
            let fault = Fault::new(0..text.len(), format!("`{text}` is {}", unit.dimension()))
                .expected(format!("{dimension} for `{name}`"));
            problems.push(node.problem(fault));
            None
        }
        Ok(_) => {
            problems.push(Problem::at(node.place(), format!("`{text}` is not one exact value")));
            None
        }
        Err(fault) => {
            problems.push(node.problem(fault));
            None
        }
    }
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
    let free = fields.require("role", problems).and_then(|node| word(node, "a role", &roles, problems));
    let basis = fields.require("basis", problems).and_then(|node| basis(node, problems));
    let provenance = provenance(&mut fields, &tables.works, problems);
    let _ = fields.take("about");
    fields.finish(problems);
    if provenance.sources.is_empty() {
        problems.push(Problem::at(node.place(), format!("the default of `{name}` has no `source`")));
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
        problems
            .push(Problem::at(node.place(), format!("the free default of `{name}` has no `typical` value")));
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
        (Value::Free(_), _) => problems.push(Problem::at(
            node.place(),
            format!("the typical value of `{name}` is missing or outside the range"),
        )),
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

/// A value, or a map `{ by: attribute, word: value, ... }`.
pub(super) fn by_attribute<T>(
    node: &Node,
    tables: &Tables,
    problems: &mut Problems,
    mut read: impl FnMut(&Node, &mut Problems) -> Option<T>,
) -> Option<ByAttribute<T>> {
    let Kind::Map(entries) = &node.kind else { return read(node, problems).map(ByAttribute::One) };
    let is_by = |key: &Node| matches!(&key.kind, Kind::Scalar(scalar) if scalar.text == "by");
    let Some((_, by)) = entries.iter().find(|(key, _)| is_by(key)) else {
        return read(node, problems).map(ByAttribute::One);
    };
    let attribute = by.text("the attribute", problems)?;
    let Some(known) = tables.attributes.get(attribute) else {
        problems.push(
            Problem::at(by.place(), format!("`{attribute}` is not an attribute"))
                .nearest(nearest(attribute, tables.attributes.keys().map(String::as_str))),
        );
        return None;
    };
    let mut cases = BTreeMap::new();
    for (key, value) in entries.iter().filter(|(key, _)| !is_by(key)) {
        let Some(word) = key.text("a word", problems) else { continue };
        if !known.words.contains_key(word) {
            problems.push(
                Problem::at(key.place(), format!("`{word}` is not a word of `{attribute}`"))
                    .nearest(nearest(word, known.words.keys().map(String::as_str))),
            );
        }
        if let Some(value) = read(value, problems) {
            cases.insert(word.to_owned(), value);
        }
    }
    Some(ByAttribute::By { attribute: attribute.to_owned(), cases })
}
