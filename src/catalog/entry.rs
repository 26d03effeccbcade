//! What a catalogue holds: quantities, attributes, constants, sources, relations, constraints, figures, habitats.

use std::collections::{BTreeMap, BTreeSet};
use std::path::Path;
use std::sync::Arc;

use super::basis::{Basis, Standing};
use super::condition::Condition;
use super::correlations::Correlations;
use crate::formula::Formula;
use crate::formula::curves::Curve;
use crate::quantity::written::{Value, Wanted};
use crate::quantity::{Bounds, Dimension, Distribution, Unit};
use crate::text::Place;

/// Whose number a quantity is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Of {
    /// Of the organism.
    Organism,
    /// Of its environment.
    Environment,
}

/// A value that may depend on a word of the candidate.
#[derive(Clone, Debug, PartialEq)]
pub enum ByAttribute<T> {
    /// The same for all.
    One(T),
    /// One for each word of an attribute.
    By {
        /// The attribute.
        attribute: String,
        /// Word to value.
        cases: BTreeMap<String, T>,
    },
}

impl<T> ByAttribute<T> {
    /// The value for a candidate.
    ///
    /// # Errors
    /// The attribute that would have to be known, or whose word has no value.
    pub fn of(&self, attributes: &BTreeMap<String, String>) -> Result<&T, &str> {
        match self {
            Self::One(value) => Ok(value),
            Self::By { attribute, cases } => {
                attributes.get(attribute).and_then(|word| cases.get(word)).ok_or(attribute.as_str())
            }
        }
    }

    /// All values, in the order of their words.
    pub fn values(&self) -> Vec<&T> {
        match self {
            Self::One(value) => vec![value],
            Self::By { cases, .. } => cases.values().collect(),
        }
    }
}

/// What stands behind a number: its sources and how it stands.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Provenance {
    /// Keys of sources.
    pub sources: Vec<String>,
    /// The number's own standing, where it differs from its source's.
    pub standing: Option<Standing>,
}

/// The default of a quantity.
#[derive(Clone, Debug)]
pub struct Default {
    /// A distribution, or a range that the organism may choose from.
    pub value: ByAttribute<Value>,
    /// Why it holds.
    pub basis: Basis,
    /// What stands behind it.
    pub provenance: Provenance,
}

impl Default {
    /// Whether the organism chooses it.
    #[must_use]
    pub fn is_free(&self) -> bool {
        self.value.values().iter().any(|value| matches!(value, Value::Free(_)))
    }
}

/// An entry of the dictionary.
#[derive(Clone, Debug)]
pub struct Quantity {
    /// Its name.
    pub name: String,
    /// A mathematical symbol for reports (TeX).
    pub symbol: Option<String>,
    /// Whose it is.
    pub of: Of,
    /// The unit people use; its dimension is the quantity's.
    pub unit: Unit,
    /// Where it may lie.
    pub bounds: Bounds,
    /// What it is.
    pub about: String,
    /// What is assumed when nothing gives it.
    pub default: Option<Default>,
}

impl Quantity {
    /// Its dimension.
    #[must_use]
    pub fn dimension(&self) -> Dimension {
        self.unit.dimension()
    }

    /// What a value of it must be; `folder` is where sample files are named from, if they may stand there.
    #[must_use]
    pub fn wanted<'a>(&'a self, may_be_free: bool, folder: Option<&'a Path>) -> Wanted<'a> {
        Wanted {
            name: &self.name,
            dimension: self.dimension(),
            bounds: self.bounds,
            unit: &self.unit,
            may_be_free,
            folder,
        }
    }
}

/// A word that classifies candidates.
#[derive(Clone, Debug)]
pub struct Attribute {
    /// What it classifies.
    pub about: String,
    /// Word to meaning.
    pub words: BTreeMap<String, String>,
    /// What is taken when the candidate does not say.
    pub default: Option<String>,
}

/// A constant of nature or mathematics.
#[derive(Clone, Debug)]
pub struct Constant {
    /// SI value.
    pub value: f64,
    /// Its unit.
    pub unit: Unit,
    /// Keys of sources.
    pub sources: Vec<String>,
}

/// A work that entries cite.
#[derive(Clone, Debug)]
pub struct Work {
    /// Authors.
    pub authors: String,
    /// Year.
    pub year: String,
    /// Title.
    pub title: String,
    /// Journal, book or publisher.
    pub journal: String,
    /// DOI.
    pub doi: Option<String>,
    /// How it stands.
    pub standing: Standing,
}

/// A number that one entry brings along.
#[derive(Clone, Debug)]
pub struct Parameter {
    /// How it is known.
    pub value: ByAttribute<Distribution>,
    /// The unit it was written in.
    pub unit: Unit,
    /// What it is.
    pub about: Option<String>,
    /// Its basis, where it differs from its entry's.
    pub basis: Option<Basis>,
    /// What stands behind it.
    pub provenance: Provenance,
}

impl Parameter {
    /// Whether it is more than one exact value.
    #[must_use]
    pub fn is_uncertain(&self) -> bool {
        self.value.values().into_iter().any(|value| !matches!(value, Distribution::Exact(_)))
    }
}

/// Parameters that come together: one set is taken per draw.
#[derive(Clone, Debug, Default)]
pub struct Joint {
    /// Name to SI values, one for each set.
    pub values: BTreeMap<String, Vec<f64>>,
    /// Name to unit.
    pub units: BTreeMap<String, Unit>,
    /// Cumulated weights of the sets; the last is 1.
    pub cumulated: Vec<f64>,
}

/// What relations, constraints and figures have in common.
#[derive(Clone, Debug)]
pub struct Entry {
    /// Unique among all entries.
    pub id: String,
    /// For reports.
    pub title: String,
    /// What belongs together in reports and in the search for what binds.
    pub family: String,
    /// When it applies.
    pub condition: Condition,
    /// Why it holds.
    pub basis: Basis,
    /// Its own numbers.
    pub parameters: BTreeMap<String, Parameter>,
    /// Its numbers that come in sets.
    pub joint: Option<Joint>,
    /// Between its parameters.
    pub correlations: Correlations,
    /// Its interpolating functions.
    pub curves: BTreeMap<String, Arc<Curve>>,
    /// Quantity to the range (SI) that the entry was drawn from.
    pub valid_over: BTreeMap<String, (f64, f64)>,
    /// Keys of sources.
    pub sources: Vec<String>,
    /// What it means.
    pub meaning: Option<String>,
    /// What escapes it.
    pub exceptions: Option<String>,
    /// Where it stands.
    pub place: Place,
    /// Where its own names stand: parameters, joint values, curves.
    pub places: BTreeMap<String, Place>,
    /// Whether it came from an overlay.
    pub overlaid: bool,
}

/// Whether a relation is an identity or a regularity.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RelationKind {
    /// An identity.
    Definition,
    /// A law of nature or a regularity.
    Law,
}

/// Gives one quantity from others.
#[derive(Clone, Debug)]
pub struct Relation {
    /// What it shares with other entries.
    pub entry: Entry,
    /// The quantity it gives.
    pub gives: String,
    /// Identity or regularity.
    pub kind: RelationKind,
    /// The lowest is preferred.
    pub rank: u32,
    /// How.
    pub formula: Formula,
    /// Residual spread when predicting one organism: a standard deviation in dex.
    pub scatter: Option<ByAttribute<f64>>,
}

/// One side of a constraint.
#[derive(Clone, Debug)]
pub struct Side {
    /// In words.
    pub says: String,
    /// In numbers.
    pub formula: Formula,
}

/// What is available against what is required.
#[derive(Clone, Debug)]
pub struct Constraint {
    /// What it shares with other entries.
    pub entry: Entry,
    /// What there is.
    pub available: Side,
    /// What is needed.
    pub required: Side,
    /// The unit to show both in.
    pub unit: Unit,
    /// The quantity that it limits.
    pub speaks_of: Option<ByAttribute<String>>,
}

/// A formula worth reporting that carries no verdict: a relation that gives no quantity.
#[derive(Clone, Debug)]
pub struct Figure {
    /// What it shares with other entries.
    pub entry: Entry,
    /// Identity or regularity, where it says so.
    pub kind: Option<RelationKind>,
    /// How it is computed.
    pub formula: Formula,
    /// Residual spread when predicting one organism: a standard deviation in dex.
    pub scatter: Option<ByAttribute<f64>>,
    /// The unit to show it in.
    pub unit: Unit,
}

/// A named set of environment quantities.
#[derive(Clone, Debug)]
pub struct Habitat {
    /// What it is.
    pub about: String,
    /// Quantity to value.
    pub environment: BTreeMap<String, crate::quantity::written::Reading>,
    /// Keys of sources.
    pub sources: Vec<String>,
}

/// The words of every attribute.
pub type Words = BTreeMap<String, BTreeSet<String>>;
