//! Reading candidates: every problem of every document, each with its place.

use std::collections::{BTreeMap, BTreeSet};
use std::path::Path;
use std::sync::Arc;

use super::{Adopted, Candidate};
use crate::catalog::{Catalog, Of, read_correlations};
use crate::quantity::Distribution;
use crate::quantity::written::{self, Reading, Value, Wanted};
use crate::text::{Fields, Kind, Node, Problem, Problems, Source, nearest, yaml};

/// The version of the candidate format.
const FORMAT: &str = "1";

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
    for (document, node) in yaml::documents(source, problems) {
        let mut found = Problems::new();
        let candidate = Reader { catalog, folder, problems: &mut found }.candidate(&node);
        if let (Some(mut candidate), true) = (candidate, found.is_empty()) {
            candidate.file.clone_from(&source.name);
            candidate.document = document;
            candidates.push(candidate);
        }
        problems.append(found);
    }
    candidates
}

struct Reader<'a> {
    catalog: &'a Catalog,
    folder: Option<&'a Path>,
    problems: &'a mut Problems,
}

impl Reader<'_> {
    fn candidate(&mut self, node: &Node) -> Option<Candidate> {
        let mut fields = Fields::of(node, "a candidate", self.problems)?;
        if let Some(version) = fields.require("hypobiont", self.problems) {
            let text = version.text("`hypobiont`", self.problems).unwrap_or_default();
            if text != FORMAT {
                self.problems.push(
                    Problem::at(version.place(), format!("format version `{text}` is not known"))
                        .expected(format!("`hypobiont: {FORMAT}`")),
                );
            }
        }
        let name = fields.require("name", self.problems).and_then(|node| {
            let text = node.text("the name", self.problems)?;
            if text.trim().is_empty() {
                self.problems.push(Problem::at(node.place(), "the name is empty"));
            }
            Some(text.to_owned())
        });
        let attributes_node = fields.require("attributes", self.problems);
        let organism = fields.take("organism");
        let environment = fields.take("environment");
        let adopt = fields.take("adopt");
        let correlations = fields.take("correlations");
        let notes =
            fields.take("notes").and_then(|node| node.text("the notes", self.problems)).map(str::to_owned);
        fields.finish(self.problems);

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

    fn attributes(&mut self, node: &Node) -> BTreeMap<String, String> {
        let mut read: BTreeMap<String, String> = self
            .catalog
            .attributes
            .iter()
            .filter_map(|(name, attribute)| Some((name.clone(), attribute.default.clone()?)))
            .collect();
        let Kind::Map(entries) = &node.kind else {
            self.problems.push(
                Problem::at(node.place(), format!("the attributes are {}", node.describe()))
                    .expected("a map such as `{ body_plan: prokaryotic-cell, form: sphere }`"),
            );
            return read;
        };
        let known = &self.catalog.attributes;
        for (key, value) in entries {
            let Some(name) = key.text("an attribute", self.problems) else { continue };
            let Some(attribute) = known.get(name) else {
                let message = if self.catalog.quantities.contains_key(name) {
                    format!("`{name}` is a quantity, not an attribute")
                } else {
                    format!("`{name}` is not an attribute")
                };
                self.problems.push(
                    Problem::at(key.place(), message)
                        .expected(format!("one of {}", joined(known.keys())))
                        .nearest(nearest(name, known.keys().map(String::as_str))),
                );
                continue;
            };
            let Some(word) = value.text("a word", self.problems) else { continue };
            if !attribute.words.contains_key(word) {
                self.problems.push(
                    Problem::at(value.place(), format!("`{word}` is not a word of `{name}`"))
                        .expected(format!("one of {}", joined(attribute.words.keys())))
                        .nearest(nearest(word, attribute.words.keys().map(String::as_str))),
                );
                continue;
            }
            read.insert(name.to_owned(), word.to_owned());
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

    fn habitat(&mut self, node: &Node) -> Option<String> {
        let Kind::Map(entries) = &node.kind else { return None };
        let (_, value) = entries
            .iter()
            .find(|(key, _)| matches!(&key.kind, Kind::Scalar(scalar) if scalar.text == "habitat"))?;
        let name = value.text("the habitat", self.problems)?;
        if !self.catalog.habitats.contains_key(name) {
            self.problems.push(
                Problem::at(value.place(), format!("`{name}` is not a habitat"))
                    .expected(format!("one of {}", joined(self.catalog.habitats.keys())))
                    .nearest(nearest(name, self.catalog.habitats.keys().map(String::as_str))),
            );
            return None;
        }
        Some(name.to_owned())
    }

    fn quantities(
        &mut self,
        node: &Node,
        of: Of,
        given: &mut BTreeMap<String, Reading>,
        warnings: &mut Vec<(&'static str, String)>,
    ) {
        let section = if of == Of::Organism { "organism" } else { "environment" };
        let Kind::Map(entries) = &node.kind else {
            if !matches!(node.kind, Kind::Null) {
                self.problems.push(
                    Problem::at(node.place(), format!("`{section}` is {}", node.describe()))
                        .expected("a map from quantity to value, such as `diameter: 210 ± 30 nm`"),
                );
            }
            return;
        };
        let known = &self.catalog.quantities;
        for (key, value) in entries {
            let Some(name) = key.text("a quantity", self.problems) else { continue };
            if of == Of::Environment && name == "habitat" {
                continue;
            }
            let Some(quantity) = known.get(name) else {
                let fitting = known.values().filter(|q| q.of == of).map(|q| q.name.as_str());
                let mut problem = Problem::at(key.place(), format!("`{name}` is not a quantity")).nearest(
                    nearest(name, fitting).or_else(|| nearest(name, known.keys().map(String::as_str))),
                );
                if self.catalog.attributes.contains_key(name) {
                    problem = problem.expected(format!("`{name}` under `attributes`"));
                }
                self.problems.push(problem);
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
            let wanted = Wanted {
                name,
                dimension: quantity.dimension(),
                bounds: quantity.bounds,
                unit: &quantity.unit,
                may_be_free: of == Of::Organism,
                folder: self.folder,
            };
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

    fn adopted(&mut self, node: &Node) -> BTreeMap<String, Adopted> {
        let mut adopted = BTreeMap::new();
        let Kind::Map(entries) = &node.kind else {
            self.problems.push(
                Problem::at(node.place(), format!("`adopt` is {}", node.describe()))
                    .expected("a map from `entry.parameter` to a value"),
            );
            return adopted;
        };
        for (key, value) in entries {
            let Some(full) = key.text("a parameter", self.problems) else { continue };
            let all: BTreeSet<String> = self
                .catalog
                .entries()
                .flat_map(|entry| entry.parameters.keys().map(|name| format!("{}.{name}", entry.id)))
                .collect();
            let found = full.split_once('.').and_then(|(id, name)| {
                let entry = self.catalog.entries().find(|entry| entry.id == id)?;
                Some((entry, name, entry.parameters.get(name)?))
            });
            let Some((entry, name, parameter)) = found else {
                self.problems.push(
                    Problem::at(key.place(), format!("`{full}` is not a parameter of an entry"))
                        .expected("`entry.parameter`; `catalog show ENTRY` lists an entry's parameters")
                        .nearest(nearest(full, all.iter().map(String::as_str))),
                );
                continue;
            };
            let wanted = Wanted {
                name: full,
                dimension: parameter.unit.dimension(),
                bounds: crate::quantity::Bounds::NONE,
                unit: &parameter.unit,
                may_be_free: false,
                folder: self.folder,
            };
            if let Some(reading) = written::read(value, &wanted, self.problems) {
                adopted.insert(
                    full.to_owned(),
                    Adopted { entry: entry.id.clone(), parameter: name.to_owned(), reading },
                );
            }
        }
        adopted
    }

    fn correlations(
        &mut self,
        node: &Node,
        given: &BTreeMap<String, Reading>,
    ) -> Vec<(crate::catalog::Correlation, crate::text::Place)> {
        let mut kept = Vec::new();
        let mut pairs = BTreeSet::new();
        for correlation in read_correlations(node, self.problems) {
            for name in &correlation.between {
                let message = match given.get(name).map(|reading| &reading.value) {
                    None => format!("`{name}` is correlated but not stated by this candidate"),
                    Some(Value::Free(_)) => format!("`{name}` is free and cannot be correlated"),
                    Some(Value::Unknown(Distribution::Exact(_))) => {
                        format!("`{name}` is exact and cannot be correlated")
                    }
                    Some(Value::Unknown(_)) => continue,
                };
                self.problems.push(
                    Problem::at(node.place(), message)
                        .expected("two uncertain quantities that this candidate states"),
                );
            }
            if !pairs.insert(correlation.between.clone()) {
                let [a, b] = &correlation.between;
                self.problems
                    .push(Problem::at(node.place(), format!("`{a}` and `{b}` are correlated twice")));
            }
            kept.push((correlation, node.place()));
        }
        kept
    }
}

fn joined<'a>(names: impl Iterator<Item = &'a String>) -> String {
    names.map(String::as_str).collect::<Vec<_>>().join(", ")
}
