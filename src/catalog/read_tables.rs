//! The files that are maps: sources, constants, attributes, the dictionary.

use std::collections::{BTreeMap, BTreeSet};

use super::basis::{Basis, Standing};
use super::entry::{Attribute, ByAttribute, Constant, Provenance, Quantity, Work};
use super::files::{File, Holds};
use super::read_quantities::quantity;
use crate::formula::is_reserved;
use crate::quantity::written::{self, Reading, Value};
use crate::quantity::{Dimension, Distribution, Unit};
use crate::text::{Fault, Fields, Kind, Node, Place, Problem, Problems, nearest, shortened, yaml};

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
            for_each_key(file, &mut seen, problems, |name, key, node, problems| {
                if file.overlaid {
                    tables.overlaid.insert(name.to_owned());
                }
                match holds {
                    Holds::Sources => insert(&mut tables.works, name, work(node, problems)),
                    Holds::Constants => {
                        let constant = constant(name, key, node, &tables.works, problems);
                        insert(&mut tables.constants, name, constant);
                    }
                    Holds::Attributes => insert(&mut tables.attributes, name, attribute(node, problems)),
                    _ => {
                        let quantity = quantity(name, key, node, &tables, problems);
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

/// Keys read so far with their layer, to refuse the same key in two files of one layer.
#[derive(std::default::Default)]
pub(super) struct Seen(BTreeMap<(Holds, String), (bool, Place)>);

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
        let place = node.place();
        if let Some((same, first)) = self.0.insert((holds, key.to_owned()), (overlaid, place.clone()))
            && same == overlaid
        {
            let (line, _) = first.line_column();
            let message = format!("`{key}` is repeated; it first stands in {}:{line}", first.source.name);
            problems.push(Problem::at(place, message).expected("each name once in a catalogue or overlay"));
        }
    }
}

/// Calls `f` with every key and value of the one map in a file, and the key's text.
pub(super) fn for_each_key(
    file: &File,
    seen: &mut Seen,
    problems: &mut Problems,
    mut f: impl FnMut(&str, &Node, &Node, &mut Problems),
) {
    yaml::each_document(&file.source, problems, |_, document, problems| {
        for (key, value) in document.map("the file", "a map from name to entry", problems).unwrap_or_default()
        {
            if problems.is_full() {
                return;
            }
            if let Some(name) = key.text("a name", problems) {
                seen.add(file.holds, name, file.overlaid, key, problems);
                f(name, key, value, problems);
            }
        }
    });
}

fn work(node: &Node, problems: &mut Problems) -> Option<Work> {
    let mut fields = Fields::of(node, "a source", problems)?;
    let mut text = |key: &'static str, fields: &mut Fields<'_>| {
        fields
            .take(key)
            .and_then(|node| node.text(&format!("`{key}`"), problems))
            .unwrap_or_default()
            .to_owned()
    };
    let authors = text("authors", &mut fields);
    let year = text("year", &mut fields);
    let title = text("title", &mut fields);
    let journal = text("journal", &mut fields);
    let doi = Some(text("doi", &mut fields)).filter(|doi| !doi.is_empty());
    let one_of = format!("one of {}", Standing::ALL.map(Standing::word).join(", "));
    let standing =
        fields.require_like("standing", &one_of, problems).and_then(|node| standing(node, problems));
    fields.finish(problems);
    if authors.is_empty() && title.is_empty() {
        problems.push(
            Problem::at(node.place(), "a source has neither `authors` nor a `title`")
                .expected("what a reader needs to find the work"),
        );
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

/// What a name must be, and the list in which such names are shown.
pub(super) type Named = (&'static str, &'static str);
/// A quantity.
pub(super) const QUANTITY: Named = ("a quantity", "quantities");
/// An attribute.
pub(super) const ATTRIBUTE: Named = ("an attribute", "attributes");

/// What a name stands for in a table; a problem with the nearest name otherwise.
pub(super) fn named<'t, T>(
    name: &str,
    (what, list): Named,
    node: &Node,
    table: &'t BTreeMap<String, T>,
    problems: &mut Problems,
) -> Option<&'t T> {
    let found = table.get(name);
    if found.is_none() {
        problems.push(
            Problem::at(node.place(), format!("`{}` is not {what}", shortened(name, 60)))
                .expected(format!("a name that `hypobiont catalog list {list}` shows, or one of the overlay"))
                .nearest(nearest(name, table.keys().map(String::as_str))),
        );
    }
    found
}

/// A problem unless a word is one of an attribute.
pub(super) fn known_word(
    word: &str,
    name: &str,
    attribute: &Attribute,
    node: &Node,
    problems: &mut Problems,
) {
    if !attribute.words.contains_key(word) {
        let words: Vec<&str> = attribute.words.keys().map(String::as_str).collect();
        problems.push(
            Problem::at(node.place(), format!("`{}` is not a word of `{name}`", shortened(word, 60)))
                .expected(format!("one of {}", words.join(", ")))
                .nearest(nearest(word, words.iter().copied())),
        );
    }
}

/// A standing.
pub(super) fn standing(node: &Node, problems: &mut Problems) -> Option<Standing> {
    word(node, "a standing", &Standing::ALL.map(|standing| (standing.word(), standing)), problems)
}

/// What a basis can be, for messages.
pub(super) fn one_of_bases() -> String {
    format!("one of {}", Basis::ALL.map(Basis::word).join(", "))
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
                    Problem::at(item.place(), format!("`{}` is not a source", shortened(key, 60)))
                        .expected("a key of sources.yaml; an overlay may bring its own")
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
    key: &Node,
    node: &Node,
    works: &BTreeMap<String, Work>,
    problems: &mut Problems,
) -> Option<Constant> {
    check_name(name, key, problems);
    let mut fields = Fields::of(node, "a constant", problems)?;
    let reading = fields.require("value", problems).and_then(|node| any_value(name, node, false, problems));
    let sources = fields
        .require_like("source", "`source: ...`, one or more keys of sources.yaml", problems)
        .map(|node| sources(node, works, problems));
    let _ = fields.take("about");
    fields.finish(problems);
    let (reading, sources) = (reading?, sources?);
    match reading.value {
        Value::Unknown(Distribution::Exact(value)) => Some(Constant { value, unit: reading.unit, sources }),
        _ => {
            problems.push(
                Problem::at(reading.place, format!("the constant `{name}` is not one exact value"))
                    .expected("one number with its unit"),
            );
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
    if let Some(node) = fields.require_like("words", "`words: { word: meaning }`", problems) {
        for (key, value) in node.map("`words`", "a map from word to meaning", problems).unwrap_or_default() {
            if let (Some(word), Some(meaning)) =
                (key.text("a word", problems), value.text("a meaning", problems))
            {
                words.insert(word.to_owned(), meaning.to_owned());
            }
        }
    }
    let default = fields.take("default").and_then(|node| {
        let word = node.text("the default", problems)?;
        if !words.contains_key(word) {
            problems.push(
                Problem::at(node.place(), format!("the default `{word}` is not among the words"))
                    .expected("one of the attribute's own words")
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
    fields.take(key)?.text(&format!("`{key}`"), problems).map(str::to_owned)
}

/// A unit, with its fault placed.
pub(super) fn unit(node: &Node, problems: &mut Problems) -> Option<Unit> {
    let text = node.text("a unit", problems)?;
    Unit::read(text).map_err(|fault| problems.push(node.problem(fault))).ok()
}

/// Names are lower case with underscores, so that formulas can hold them, and none of the words that formulas use.
pub(super) fn check_name(name: &str, key: &Node, problems: &mut Problems) {
    let mut characters = name.chars();
    let fine = characters.next().is_some_and(|c| c.is_ascii_lowercase())
        && characters.all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '_');
    if !fine {
        problems.push(
            Problem::at(key.place(), format!("`{name}` cannot be a name"))
                .expected("lower-case letters, digits and underscores, a letter first"),
        );
    } else if is_reserved(name) {
        problems.push(
            Problem::at(key.place(), format!("`{name}` is a word of the formula language"))
                .expected("another name: one name means one thing everywhere"),
        );
    }
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
            problems.push(
                Problem::at(node.place(), format!("`{text}` is not one exact value"))
                    .expected(if dimension.is_none() { "one number" } else { "one number with its unit" }),
            );
            None
        }
        Err(fault) => {
            problems.push(node.problem(fault));
            None
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
    let known = named(attribute, ATTRIBUTE, by, &tables.attributes, problems)?;
    let mut cases = BTreeMap::new();
    for (key, value) in entries.iter().filter(|(key, _)| !is_by(key)) {
        let Some(word) = key.text("a word", problems) else { continue };
        known_word(word, attribute, known, key, problems);
        if let Some(value) = read(value, problems) {
            cases.insert(word.to_owned(), value);
        }
    }
    Some(ByAttribute::By { attribute: attribute.to_owned(), cases })
}
