//! What is claimed about one organism: attributes and stated quantities, read from a document.

mod read;
mod references;

use std::collections::{BTreeMap, BTreeSet};

pub use read::read_file;

use crate::catalog::Correlations;
use crate::quantity::Unit;
use crate::quantity::written::Reading;

/// A parameter of an entry that the candidate replaces.
#[derive(Clone, Debug)]
pub struct Adopted {
    /// The entry's id.
    pub entry: String,
    /// The parameter's name.
    pub parameter: String,
    /// What replaces it.
    pub reading: Reading,
}

/// A candidate whose every number was understood.
#[derive(Clone, Debug)]
pub struct Candidate {
    /// Its name.
    pub name: String,
    /// The file it came from.
    pub file: String,
    /// Number of the document in the file, from 1.
    pub document: usize,
    /// Attributes, with the defaults of those that it does not state.
    pub attributes: BTreeMap<String, String>,
    /// Attributes that it states itself.
    pub stated_attributes: BTreeSet<String>,
    /// Quantities it states itself, of the organism and of the environment.
    pub given: BTreeMap<String, Reading>,
    /// The habitat it refers to.
    pub habitat: Option<String>,
    /// Quantities that it takes from its habitat.
    pub from_habitat: BTreeMap<String, Reading>,
    /// Parameters it replaces, by `entry.parameter`.
    pub adopted: BTreeMap<String, Adopted>,
    /// Correlations between stated quantities.
    pub correlations: Correlations,
    /// Free text.
    pub notes: Option<String>,
    /// Warnings that reading gave: code and message.
    pub warnings: Vec<(&'static str, String)>,
}

impl Candidate {
    /// What is stated of a quantity, by the candidate or by its habitat.
    #[must_use]
    pub fn stated(&self, name: &str) -> Option<&Reading> {
        self.given.get(name).or_else(|| self.from_habitat.get(name))
    }

    /// The unit a stated quantity was written in.
    #[must_use]
    pub fn unit(&self, name: &str) -> Option<&Unit> {
        self.stated(name).map(|reading| &reading.unit)
    }
}
