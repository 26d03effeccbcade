//! What is known in general: the dictionary, relations, constraints, figures, habitats, and their sources.
//!
//! Files are read into nodes, nodes into entries (`read_*`), entries are checked against each other (`check`).
//! A `Catalog` exists only when all of that succeeded: its formulas cannot fail.

mod basis;
mod check;
mod condition;
mod correlations;
mod entry;
mod files;
mod read_entries;
mod read_numbers;
mod read_quantities;
mod read_tables;

use std::collections::{BTreeMap, BTreeSet};
use std::path::PathBuf;

pub use basis::{Basis, Standing};
pub use condition::{Clause, Condition, Match};
pub(crate) use correlations::{Correlated, read as read_correlations};
pub use correlations::{Correlation, Correlations};

pub use entry::{
    Attribute, ByAttribute, Constant, Constraint, Default, Entry, Figure, Habitat, Joint, Of, Parameter,
    Provenance, Quantity, Relation, RelationKind, Side, Words, Work,
};

use crate::formula::Formula;
use crate::text::Problems;

/// A checked catalogue. Lists of entries are in alphabetical order of id.
#[derive(Debug)]
pub struct Catalog {
    /// The dictionary.
    pub quantities: BTreeMap<String, Quantity>,
    /// Words that classify candidates.
    pub attributes: BTreeMap<String, Attribute>,
    /// Constants.
    pub constants: BTreeMap<String, Constant>,
    /// Works cited.
    pub works: BTreeMap<String, Work>,
    /// Relations.
    pub relations: Vec<Relation>,
    /// Constraints.
    pub constraints: Vec<Constraint>,
    /// Figures.
    pub figures: Vec<Figure>,
    /// Habitats.
    pub habitats: BTreeMap<String, Habitat>,
    /// SHA-256 of all files, hexadecimal.
    pub digest: String,
    /// Names and ids that came from overlays.
    pub overlaid: BTreeSet<String>,
}

impl Catalog {
    /// The catalogue inside the binary with overlays laid over it, in order.
    ///
    /// # Errors
    /// Everything that is wrong with the files.
    pub fn load(overlays: &[PathBuf]) -> Result<Self, Problems> {
        let mut problems = Problems::new();
        let mut all = files::embedded();
        for folder in overlays {
            all.extend(files::overlay(folder, &mut problems));
        }
        Self::from_files(&all, problems)
    }

    /// A catalogue made of the texts alone, without the one inside the binary. Each layer is a list of files, path inside
    /// a catalogue (`constraints/space.yaml`) and text; later layers are laid over earlier ones.
    ///
    /// # Errors
    /// Everything that is wrong with the texts, and paths that have no place in a catalogue.
    pub fn from_texts(layers: &[&[(&str, &str)]]) -> Result<Self, Problems> {
        let mut problems = Problems::new();
        let mut all = Vec::new();
        for (number, layer) in layers.iter().enumerate() {
            all.extend(files::given(layer, number > 0, &mut problems));
        }
        Self::from_files(&all, problems)
    }

    fn from_files(all: &[files::File], mut problems: Problems) -> Result<Self, Problems> {
        let tables = read_tables::read(all, &mut problems);
        let entries = read_entries::read(all, &tables, &mut problems);
        let digest = files::digest(all);
        let mut overlaid = tables.overlaid;
        overlaid.extend(entries.overlaid);
        let catalog = Self {
            quantities: tables.quantities,
            attributes: tables.attributes,
            constants: tables.constants,
            works: tables.works,
            relations: entries.relations.into_values().collect(),
            constraints: entries.constraints.into_values().collect(),
            figures: entries.figures.into_values().collect(),
            habitats: entries.habitats,
            digest,
            overlaid,
        };
        check::check(&catalog, &mut problems);
        if problems.is_empty() { Ok(catalog) } else { Err(problems) }
    }

    /// The quantities among the names of a formula.
    #[must_use]
    pub fn quantities_of<'a>(&'a self, formula: &Formula) -> Vec<&'a str> {
        let names = formula.names();
        let known = names.iter().filter_map(|name| self.quantities.get_key_value(*name));
        known.map(|(name, _)| name.as_str()).collect()
    }

    /// The words of every attribute.
    #[must_use]
    pub fn words(&self) -> Words {
        self.attributes
            .iter()
            .map(|(name, attribute)| (name.clone(), attribute.words.keys().cloned().collect()))
            .collect()
    }

    /// Every entry, whatever its class.
    pub fn entries(&self) -> impl Iterator<Item = &Entry> {
        let relations = self.relations.iter().map(|relation| &relation.entry);
        let constraints = self.constraints.iter().map(|constraint| &constraint.entry);
        let figures = self.figures.iter().map(|figure| &figure.entry);
        relations.chain(constraints).chain(figures)
    }
}
