//! Reading candidates: every problem of every document, each with its place.

use std::collections::{BTreeMap, BTreeSet};
use std::path::Path;
use std::sync::Arc;

use super::Candidate;
use crate::catalog::{Attribute, Catalog, Of};
use crate::quantity::written::{self, Reading};
use crate::text::{Fields, Kind, Node, Problem, Problems, Source, nearest, shortened, yaml};

/// The version of the candidate format.
const FORMAT: &str = "1";

/// Attributes as they are written.
const EXAMPLE: &str = "{ body_plan: prokaryotic-cell, form: sphere }";

/// Share of a stated distribution that bounds may cut off without a word.
const CUT_UNMENTIONED: f64 = 0.01;

/// The candidates of a file. Wrong documents are left out and their problems added; `folder` is where sample files
/// are named from.
pub fn read_file(
    source: &Arc<Source>,
    folder: Option<&Path>,
    catalog: &Catalog,
    problems: &mut Problems,
) -> Vec<Candidate> {
    let mut candidates = Vec::new();
    yaml::each_document(source, problems, |document, node, problems| {
        let before = problems.len();
        let candidate = Reader { catalog, folder, problems }.candidate(&node);
        if let (Some(mut candidate), true) = (candidate, problems.len() == before) {
            candidate.file.clone_from(&source.name);
            candidate.document = document;
            candidates.push(candidate);
        }
    });
    candidates
}

/// Reads one document.
pub(super) struct Reader<'a> {
    pub(super) catalog: &'a Catalog,
    pub(super) folder: Option<&'a Path>,
    pub(super) problems: &'a mut Problems,
}

impl Reader<'_> {
    fn candidate(&mut self, node: &Node) -> Option<Candidate> {
        node.map(
            "the document",
            "a candidate: a map with `hypobiont: 1`, `name` and `attributes`; `hypobiont new` drafts one",
            self.problems,
        )?;
        let mut fields = Fields::of(node, "a candidate", self.problems)?;
        let version = format!("`hypobiont: {FORMAT}`");
        if let Some(node) = fields.require_like("hypobiont", &version, self.problems) {
            self.version(node, &version);
        }
        let name = fields
            .require_like("name", "`name: ...`, which stands in the reports", self.problems)
            .and_then(|node| self.name(node));
        let attributes_node =
            fields.require_like("attributes", &format!("`attributes: {EXAMPLE}`"), self.problems);
        let organism = fields.take("organism");
        let environment = fields.take("environment");
        let adopt = fields.take("adopt");
        let correlations = fields.take("correlations");
        let notes =
            fields.take("notes").and_then(|node| node.text("`notes`", self.problems)).map(str::to_owned);
        fields.finish_or(|key| section_of(key, self.catalog), self.problems);

        let attributes = attributes_node.map(|node| self.attributes(node)).unwrap_or_default();
        let stated_attributes = match attributes_node.map(|node| &node.kind) {
            Some(Kind::Map(entries)) => entries
                .iter()
                .filter_map(|(key, _)| match &key.kind {
                    Kind::Scalar(scalar) => Some(scalar.text.clone()),
                    _ => None,
                })
                .collect(),
            _ => BTreeSet::new(),
        };
        let mut warnings = Vec::new();
        let mut given = BTreeMap::new();
        if let Some(node) = organism {
            self.quantities(node, Of::Organism, &mut given, &mut warnings);
        }
        let mut habitat = None;
        if let Some(node) = environment {
            habitat = self.habitat(node);
            self.quantities(node, Of::Environment, &mut given, &mut warnings);
        }
        let from_habitat = habitat
            .as_ref()
            .and_then(|name| self.catalog.habitats.get(name))
            .map(|habitat| {
                let taken = habitat.environment.iter().filter(|(name, _)| !given.contains_key(*name));
                taken.map(|(name, reading)| (name.clone(), reading.clone())).collect()
            })
            .unwrap_or_default();
        let adopted = adopt.map(|node| self.adopted(node)).unwrap_or_default();
        let correlations = correlations.map(|node| self.correlations(node, &given)).unwrap_or_default();
        Some(Candidate {
            name: name?,
            file: String::new(),
            document: 1,
            attributes,
            stated_attributes,
            given,
            habitat,
            from_habitat,
            adopted,
            correlations,
            notes,
            warnings,
        })
    }

    fn version(&mut self, node: &Node, expected: &str) {
        let message = match &node.kind {
            Kind::Scalar(scalar) if scalar.text == FORMAT => return,
            Kind::Scalar(scalar) => format!("format version `{}` is not known", shortened(&scalar.text, 60)),
            _ => node.instead("`hypobiont`"),
        };
        self.problems.push(Problem::at(node.place(), message).expected(expected));
    }

    fn name(&mut self, node: &Node) -> Option<String> {
        let text = node.text("`name`", self.problems)?;
        if text.trim().is_empty() {
            self.problems
                .push(Problem::at(node.place(), "the name is empty").expected("a name for the reports"));
        }
        Some(text.to_owned())
    }

    fn attributes(&mut self, node: &Node) -> BTreeMap<String, String> {
        let mut read: BTreeMap<String, String> = self
            .catalog
            .attributes
            .iter()
            .filter_map(|(name, attribute)| Some((name.clone(), attribute.default.clone()?)))
            .collect();
        let expected = format!("a map such as `{EXAMPLE}`");
        let Some(entries) = node.map("`attributes`", &expected, self.problems) else { return read };
        let known = &self.catalog.attributes;
        for (key, value) in entries {
            let Some(name) = key.text("an attribute", self.problems) else { continue };
            let Some(attribute) = known.get(name) else {
                self.no_attribute(key, name);
                continue;
            };
            if let Some(word) = self.word(name, attribute, value) {
                read.insert(name.to_owned(), word);
            }
        }
        if let Some(body_plan) = known.get("body_plan")
            && !read.contains_key("body_plan")
            && !entries
                .iter()
                .any(|(key, _)| matches!(&key.kind, Kind::Scalar(scalar) if scalar.text == "body_plan"))
        {
            self.problems.push(
                Problem::at(node.place(), "`body_plan` is missing in the attributes")
                    .expected(format!("one of {}", joined(body_plan.words.keys()))),
            );
        }
        read
    }

    fn no_attribute(&mut self, key: &Node, name: &str) {
        let known = &self.catalog.attributes;
        let problem = match self.catalog.quantities.get(name) {
            Some(quantity) => {
                let section = if quantity.of == Of::Organism { "organism" } else { "environment" };
                Problem::at(key.place(), format!("`{name}` is a quantity, not an attribute"))
                    .expected(format!("`{name}` under `{section}`"))
            }
            None => Problem::at(key.place(), format!("`{}` is not an attribute", shortened(name, 60)))
                .expected(format!("one of {}", joined(known.keys())))
                .nearest(nearest(name, known.keys().map(String::as_str))),
        };
        self.problems.push(problem);
    }

    fn word(&mut self, name: &str, attribute: &Attribute, value: &Node) -> Option<String> {
        let message = match &value.kind {
            Kind::Scalar(scalar) if attribute.words.contains_key(&scalar.text) => {
                return Some(scalar.text.clone());
            }
            Kind::Scalar(scalar) => format!("`{}` is not a word of `{name}`", shortened(&scalar.text, 60)),
            _ => value.instead(&format!("`{name}`")),
        };
        let words = attribute.words.keys().map(String::as_str);
        let near = match &value.kind {
            Kind::Scalar(scalar) => nearest(&scalar.text, words),
            _ => None,
        };
        let expected = format!("one of {}", joined(attribute.words.keys()));
        self.problems.push(Problem::at(value.place(), message).expected(expected).nearest(near));
        None
    }

    fn habitat(&mut self, node: &Node) -> Option<String> {
        let Kind::Map(entries) = &node.kind else { return None };
        let (_, value) = entries
            .iter()
            .find(|(key, _)| matches!(&key.kind, Kind::Scalar(scalar) if scalar.text == "habitat"))?;
        let known = &self.catalog.habitats;
        let (message, near) = match &value.kind {
            Kind::Scalar(scalar) if known.contains_key(&scalar.text) => return Some(scalar.text.clone()),
            Kind::Scalar(scalar) => (
                format!("`{}` is not a habitat", shortened(&scalar.text, 60)),
                nearest(&scalar.text, known.keys().map(String::as_str)),
            ),
            _ => (value.instead("`habitat`"), None),
        };
        let expected = "a name that `hypobiont catalog list habitats` shows; quantities stand beside it under `environment`";
        self.problems.push(Problem::at(value.place(), message).expected(expected).nearest(near));
        None
    }

    fn quantities(
        &mut self,
        node: &Node,
        of: Of,
        given: &mut BTreeMap<String, Reading>,
        warnings: &mut Vec<(&'static str, String)>,
    ) {
        // A section without entries says nothing, as in a fresh draft.
        if matches!(node.kind, Kind::Null) {
            return;
        }
        let (section, example) = match of {
            Of::Organism => ("`organism`", "diameter: 210 ± 30 nm"),
            Of::Environment => ("`environment`", "temperature: 55 ± 10 °C"),
        };
        let habitat = match &node.kind {
            Kind::Scalar(scalar) if of == Of::Environment => {
                self.catalog.habitats.get_key_value(&scalar.text)
            }
            _ => None,
        };
        let expected = match habitat {
            Some((name, _)) => format!("`environment: {{ habitat: {name} }}`"),
            None => format!("a map from quantity to value, such as `{example}`"),
        };
        let Some(entries) = node.map(section, &expected, self.problems) else { return };
        let known = &self.catalog.quantities;
        for (key, value) in entries {
            if self.problems.is_full() {
                return;
            }
            let Some(name) = key.text("a quantity", self.problems) else { continue };
            if of == Of::Environment && name == "habitat" {
                continue;
            }
            let Some(quantity) = known.get(name) else {
                self.no_quantity(key, name, of);
                continue;
            };
            if quantity.of != of {
                let other = if of == Of::Organism { "environment" } else { "organism" };
                self.problems.push(
                    Problem::at(key.place(), format!("`{name}` stands in the wrong section"))
                        .expected(format!("`{name}` under `{other}`")),
                );
                continue;
            }
            let wanted = quantity.wanted(of == Of::Organism, self.folder);
            if let Some(reading) = written::read(value, &wanted, self.problems) {
                if reading.cut > CUT_UNMENTIONED {
                    warnings.push((
                        "cut-by-bounds",
                        format!(
                            "{:.1} % of `{name}` as stated lies outside what is possible and was cut off",
                            100.0 * reading.cut
                        ),
                    ));
                }
                given.insert(name.to_owned(), reading);
            }
        }
    }

    fn no_quantity(&mut self, key: &Node, name: &str, of: Of) {
        let written = shortened(name, 60);
        let problem = if name.starts_with(|c: char| c.is_ascii_digit()) {
            // `{ diameter: 0,21 µm }` ends an entry at its comma.
            let message = format!("`{written}` stands where the name of a quantity was expected");
            Problem::at(key.place(), message)
                .expected("a point in place of a decimal comma: inside brackets a comma ends an entry")
        } else if self.catalog.attributes.contains_key(name) {
            Problem::at(key.place(), format!("`{name}` is an attribute, not a quantity"))
                .expected(format!("`{name}` under `attributes`"))
        } else {
            let known = &self.catalog.quantities;
            let fitting = known.values().filter(|quantity| quantity.of == of).map(|q| q.name.as_str());
            Problem::at(key.place(), format!("`{written}` is not a quantity"))
                .expected("a name that `hypobiont catalog list quantities` shows")
                .nearest(nearest(name, fitting).or_else(|| nearest(name, known.keys().map(String::as_str))))
        };
        self.problems.push(problem);
    }
}

/// Where something belongs that stands at the top of a candidate.
fn section_of(key: &str, catalog: &Catalog) -> Option<String> {
    let section = if key == "habitat" {
        "environment"
    } else if catalog.attributes.contains_key(key) {
        "attributes"
    } else {
        match catalog.quantities.get(key)?.of {
            Of::Organism => "organism",
            Of::Environment => "environment",
        }
    };
    Some(format!("`{key}` under `{section}`, indented deeper than it"))
}

fn joined<'a>(names: impl Iterator<Item = &'a String>) -> String {
    names.map(String::as_str).collect::<Vec<_>>().join(", ")
}
