//! When an entry applies: words that attributes must or must not have.

use std::collections::{BTreeMap, BTreeSet};

/// One attribute asked for by an entry.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Clause {
    /// The attribute.
    pub attribute: String,
    /// The words.
    pub words: Vec<String>,
    /// Whether the words are excluded instead of asked for.
    pub excluded: bool,
}

impl Clause {
    fn allows(&self, word: &str) -> bool {
        self.words.iter().any(|w| w == word) != self.excluded
    }
}

/// All the clauses of an entry; empty applies always.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Condition {
    /// Each must allow the candidate's word.
    pub clauses: Vec<Clause>,
}

/// Whether an entry applies to a candidate.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Match {
    /// It does.
    Yes,
    /// It does not, because of these attributes.
    No(Vec<String>),
    /// These attributes are not known, and nothing else speaks against it.
    Unknown(Vec<String>),
}

impl Condition {
    /// The condition that asks for one word of one attribute.
    #[must_use]
    pub fn asking(attribute: &str, word: &str) -> Self {
        let clause =
            Clause { attribute: attribute.to_owned(), words: vec![word.to_owned()], excluded: false };
        Self { clauses: vec![clause] }
    }

    /// Whether the entry applies to a candidate with these attributes.
    #[must_use]
    pub fn matches(&self, attributes: &BTreeMap<String, String>) -> Match {
        let (mut against, mut unknown) = (Vec::new(), Vec::new());
        for clause in &self.clauses {
            match attributes.get(&clause.attribute) {
                Some(word) if clause.allows(word) => {}
                Some(_) => against.push(clause.attribute.clone()),
                None => unknown.push(clause.attribute.clone()),
            }
        }
        if !against.is_empty() {
            Match::No(against)
        } else if unknown.is_empty() {
            Match::Yes
        } else {
            Match::Unknown(unknown)
        }
    }

    /// The words of `all` that the condition allows for one attribute.
    fn allowed<'a>(&self, attribute: &str, all: &'a BTreeSet<String>) -> BTreeSet<&'a str> {
        all.iter()
            .map(String::as_str)
            .filter(|word| {
                self.clauses
                    .iter()
                    .filter(|clause| clause.attribute == attribute)
                    .all(|clause| clause.allows(word))
            })
            .collect()
    }

    /// Whether some candidate satisfies both conditions; `words` lists the words of each attribute.
    #[must_use]
    pub fn overlaps(&self, other: &Self, words: &BTreeMap<String, BTreeSet<String>>) -> bool {
        let attributes: BTreeSet<&str> =
            self.clauses.iter().chain(&other.clauses).map(|clause| clause.attribute.as_str()).collect();
        attributes.into_iter().all(|attribute| {
            words
                .get(attribute)
                .is_none_or(|all| !self.allowed(attribute, all).is_disjoint(&other.allowed(attribute, all)))
        })
    }
}
