//! What a constraint rests on: relations, defaults, sources, and the weakest basis among them.

use std::collections::BTreeSet;

use super::resolve::{Producer, Resolver};
use crate::candidate::Candidate;
use crate::catalog::{Basis, Catalog, Entry, Provenance, Standing};
use crate::formula::Formula;

/// A number from memory or disputed, and where it stands.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Doubt {
    /// `entry`, `entry.parameter` or the quantity whose default it is.
    pub what: String,
    /// From memory, or disputed.
    pub standing: Standing,
}

/// What a constraint or figure rests on.
#[derive(Clone, Debug)]
pub struct Support {
    /// Weakest basis in what it is computed from; numbers that the candidate states do not weaken it.
    pub basis: Basis,
    /// Quantities that flow in.
    pub quantities: BTreeSet<String>,
    /// Relations used, by position in the catalogue.
    pub relations: BTreeSet<usize>,
    /// Keys of sources.
    pub sources: BTreeSet<String>,
    /// Numbers from memory or disputed.
    pub doubts: BTreeSet<Doubt>,
    /// Whether anything stated flows in.
    stated: bool,
}

impl Support {
    pub(super) fn of<'a>(
        catalog: &'a Catalog,
        entry: &'a Entry,
        formulas: &[&'a Formula],
        resolver: &mut Resolver<'a>,
        candidate: &Candidate,
    ) -> Self {
        let mut support = Self {
            basis: entry.basis,
            quantities: BTreeSet::new(),
            relations: BTreeSet::new(),
            sources: BTreeSet::new(),
            doubts: BTreeSet::new(),
            stated: false,
        };
        support.entry(catalog, entry, candidate);
        let mut waiting: Vec<&str> =
            formulas.iter().flat_map(|formula| catalog.quantities_of(formula)).collect();
        while let Some(name) = waiting.pop() {
            if !support.quantities.insert(name.to_owned()) {
                continue;
            }
            match resolver.producer(name) {
                Some(Producer::Given | Producer::Habitat) => support.stated = true,
                Some(Producer::Relation(at)) => {
                    let relation = &catalog.relations[at];
                    support.relations.insert(at);
                    support.basis = support.basis.max(relation.entry.basis);
                    support.entry(catalog, &relation.entry, candidate);
                    waiting.extend(catalog.quantities_of(&relation.formula));
                }
                Some(Producer::Default) => {
                    if let Some(default) = catalog.quantities[name].default.as_ref() {
                        support.basis = support.basis.max(default.basis);
                        support.provenance(catalog, name, &default.provenance);
                    }
                }
                None => {}
            }
        }
        support
    }

    /// Whether nothing that the candidate or its habitat states flows in.
    pub(super) const fn rests_on_defaults(&self) -> bool {
        !self.stated
    }

    fn entry(&mut self, catalog: &Catalog, entry: &Entry, candidate: &Candidate) {
        let own = Provenance { sources: entry.sources.clone(), standing: None };
        self.provenance(catalog, &entry.id, &own);
        for (name, parameter) in &entry.parameters {
            let full = format!("{}.{name}", entry.id);
            // What the candidate adopts is its own statement, whatever stood there before.
            if candidate.adopted.contains_key(&full) {
                continue;
            }
            if let Some(basis) = parameter.basis {
                self.basis = self.basis.max(basis);
            }
            self.provenance(catalog, &full, &parameter.provenance);
        }
    }

    fn provenance(&mut self, catalog: &Catalog, what: &str, provenance: &Provenance) {
        self.sources.extend(provenance.sources.iter().cloned());
        let works =
            provenance.sources.iter().filter_map(|key| catalog.works.get(key)).map(|work| work.standing);
        // A number's own standing speaks for it; else the best of its sources does.
        let standing = provenance.standing.or_else(|| works.min());
        if let Some(standing @ (Standing::FromMemory | Standing::Disputed)) = standing {
            self.doubts.insert(Doubt { what: what.to_owned(), standing });
        }
    }
}
