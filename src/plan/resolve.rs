//! Which relation gives which quantity, for a candidate of a given shape.
//!
//! A quantity is obtainable if it is stated, if a matching relation gives it from obtainable inputs, or if it has a
//! default; that is a least fixed point, so the order of entries plays no part.

use std::collections::{BTreeMap, BTreeSet};

use crate::catalog::{ByAttribute, Catalog, Condition, Entry, Match, Relation, Words};

/// Where a quantity comes from.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Producer {
    /// The candidate states it.
    Given,
    /// The habitat has it.
    Habitat,
    /// The relation at this position of the catalogue.
    Relation(usize),
    /// The dictionary's default.
    Default,
}

/// What a candidate states, whatever the values.
#[derive(Clone, Copy, Debug)]
pub(super) struct Stated<'a> {
    /// Its attributes.
    pub attributes: &'a BTreeMap<String, String>,
    /// Quantities it states itself.
    pub given: &'a BTreeSet<String>,
    /// Quantities it takes from its habitat.
    pub habitat: &'a BTreeSet<String>,
}

/// Groups of names; one of each group must be stated.
pub(super) type Missing = BTreeSet<BTreeSet<String>>;

/// More groups than this are not spelt out: the quantity itself is then named.
const MOST_GROUPS: usize = 24;

/// Answers which producer a quantity has.
#[derive(Debug)]
pub(super) struct Resolver<'a> {
    catalog: &'a Catalog,
    stated: Stated<'a>,
    names: Vec<&'a str>,
    position: BTreeMap<&'a str, usize>,
    /// Of each relation that matches: what it gives and what it needs.
    usable: Vec<Usable>,
    known: Vec<bool>,
    producers: BTreeMap<usize, Option<Producer>>,
    obtainable: Vec<bool>,
    words: Words,
}

#[derive(Debug)]
struct Usable {
    relation: usize,
    rank: u32,
    gives: usize,
    needs: Vec<usize>,
}

/// Attributes that would have to be known to give an entry's own numbers their values.
pub(super) fn attributes_needed<'a>(
    entry: &'a Entry,
    attributes: &BTreeMap<String, String>,
) -> BTreeSet<&'a str> {
    entry.parameters.values().filter_map(|parameter| parameter.value.of(attributes).err()).collect()
}

fn scatter_needs<'a>(relation: &'a Relation, attributes: &BTreeMap<String, String>) -> Option<&'a str> {
    relation.scatter.as_ref().and_then(|scatter: &ByAttribute<f64>| scatter.of(attributes).err())
}

impl<'a> Resolver<'a> {
    /// A resolver for candidates of one shape.
    #[must_use]
    pub(super) fn new(catalog: &'a Catalog, stated: Stated<'a>) -> Self {
        let names: Vec<&str> = catalog.quantities.keys().map(String::as_str).collect();
        let position: BTreeMap<&str, usize> =
            names.iter().enumerate().map(|(at, name)| (*name, at)).collect();
        let usable = catalog
            .relations
            .iter()
            .enumerate()
            .filter(|(_, relation)| {
                relation.entry.condition.matches(stated.attributes) == Match::Yes
                    && attributes_needed(&relation.entry, stated.attributes).is_empty()
                    && scatter_needs(relation, stated.attributes).is_none()
            })
            .map(|(at, relation)| Usable {
                relation: at,
                rank: relation.rank,
                gives: position[relation.gives.as_str()],
                needs: catalog.quantities_of(&relation.formula).iter().map(|name| position[name]).collect(),
            })
            .collect();
        let known = names
            .iter()
            .map(|name| {
                stated.given.contains(*name)
                    || stated.habitat.contains(*name)
                    || Self::default_of(catalog, stated.attributes, name)
            })
            .collect();
        let mut resolver = Self {
            catalog,
            stated,
            names,
            position,
            usable,
            known,
            producers: BTreeMap::new(),
            obtainable: Vec::new(),
            words: catalog.words(),
        };
        resolver.obtainable = resolver.fixed_point(None);
        resolver
    }

    fn default_of(catalog: &Catalog, attributes: &BTreeMap<String, String>, name: &str) -> bool {
        let default = catalog.quantities.get(name).and_then(|quantity| quantity.default.as_ref());
        default.is_some_and(|default| default.value.of(attributes).is_ok())
    }

    /// What is obtainable when `without` may not be used in any way.
    fn fixed_point(&self, without: Option<usize>) -> Vec<bool> {
        let mut obtainable = self.known.clone();
        if let Some(without) = without {
            obtainable[without] = false;
        }
        loop {
            let mut changed = false;
            for usable in &self.usable {
                if !obtainable[usable.gives]
                    && Some(usable.gives) != without
                    && usable.needs.iter().all(|need| obtainable[*need])
                {
                    obtainable[usable.gives] = true;
                    changed = true;
                }
            }
            if !changed {
                return obtainable;
            }
        }
    }

    /// Whether anything gives the quantity.
    #[must_use]
    pub(super) fn is_obtainable(&self, name: &str) -> bool {
        self.position.get(name).is_some_and(|at| self.obtainable[*at])
    }

    /// What gives the quantity: the candidate, its habitat, the matching relation of lowest rank whose inputs are
    /// obtainable without the quantity itself, the default.
    pub(super) fn producer(&mut self, name: &str) -> Option<Producer> {
        let at = *self.position.get(name)?;
        if let Some(known) = self.producers.get(&at) {
            return *known;
        }
        let producer = self.find_producer(at);
        self.producers.insert(at, producer);
        producer
    }

    fn find_producer(&self, at: usize) -> Option<Producer> {
        let name = self.names[at];
        if self.stated.given.contains(name) {
            return Some(Producer::Given);
        }
        if self.stated.habitat.contains(name) {
            return Some(Producer::Habitat);
        }
        if self.usable.iter().any(|usable| usable.gives == at) {
            let others = self.fixed_point(Some(at));
            let chosen = self
                .usable
                .iter()
                .filter(|usable| usable.gives == at && usable.needs.iter().all(|need| others[*need]))
                .min_by_key(|usable| (usable.rank, usable.relation));
            if let Some(usable) = chosen {
                return Some(Producer::Relation(usable.relation));
            }
        }
        Self::default_of(self.catalog, self.stated.attributes, name).then_some(Producer::Default)
    }

    /// What to state so that all these quantities are obtainable for an entry with this condition: one of each group.
    #[must_use]
    pub(super) fn missing(&self, condition: &'a Condition, names: &[&str]) -> Missing {
        let mut groups = Missing::new();
        for name in names {
            groups.extend(self.missing_for(name, &mut BTreeSet::new(), &mut vec![condition]));
        }
        groups
    }

    /// `above` are the quantities on the way here, `along` the conditions of the entries on it.
    fn missing_for(
        &self,
        name: &str,
        above: &mut BTreeSet<String>,
        along: &mut Vec<&'a Condition>,
    ) -> Missing {
        if self.is_obtainable(name) {
            return Missing::new();
        }
        let itself: Missing = [[name.to_owned()].into()].into();
        if !above.insert(name.to_owned()) {
            return itself;
        }
        let mut groups = itself;
        for relation in self.catalog.relations.iter().filter(|relation| relation.gives == name) {
            let condition = &relation.entry.condition;
            // One word must do for every entry on the way: a sphere has no length.
            if !along.iter().all(|other| condition.overlaps(other, &self.words)) {
                continue;
            }
            let mut needs = Missing::new();
            match condition.matches(self.stated.attributes) {
                Match::No(_) => continue,
                Match::Yes => {}
                Match::Unknown(attributes) => needs.extend(attributes.into_iter().map(|name| [name].into())),
            }
            for attribute in attributes_needed(&relation.entry, self.stated.attributes) {
                needs.insert([attribute.to_owned()].into());
            }
            let inputs = self.catalog.quantities_of(&relation.formula);
            if inputs.iter().any(|input| above.contains(*input)) {
                continue;
            }
            along.push(condition);
            for input in inputs {
                needs.extend(self.missing_for(input, above, along));
            }
            along.pop();
            groups = either(&groups, &minimal(needs));
        }
        above.remove(name);
        if groups.len() > MOST_GROUPS { [[name.to_owned()].into()].into() } else { groups }
    }
}

/// Groups that are satisfied when one or the other list is.
fn either(one: &Missing, other: &Missing) -> Missing {
    if one.len() * other.len() > MOST_GROUPS * MOST_GROUPS {
        return one.clone();
    }
    let pairs = one.iter().flat_map(|a| other.iter().map(|b| a.union(b).cloned().collect()));
    minimal(pairs.collect())
}

/// Without groups that another one implies.
pub(super) fn minimal(groups: Missing) -> Missing {
    groups
        .iter()
        .filter(|group| !groups.iter().any(|other| other != *group && other.is_subset(group)))
        .cloned()
        .collect()
}

/// Whether an entry applies but for the candidate's chemistry, and if so for which attributes.
#[must_use]
pub(super) fn bars_chemistry(
    condition: &Condition,
    attributes: &BTreeMap<String, String>,
) -> Option<Vec<String>> {
    /// Words that say another chemistry, to which a limit of known life does not speak.
    const CHEMISTRY: [&str; 2] = ["solvent", "heredity"];
    match condition.matches(attributes) {
        Match::No(against) if against.iter().all(|name| CHEMISTRY.contains(&name.as_str())) => Some(against),
        _ => None,
    }
}
