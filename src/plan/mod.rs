//! Resolve: from a candidate's shape to a flat program with everything that is known before any draw is made.
//!
//! A plan depends on attributes and on which quantities are stated (exactly, uncertainly, freely), not on the values
//! stated, so that candidates of one shape share it.

mod compile;
mod direction;
mod graph;
mod power;
mod resolve;
mod schedule;
mod support;
#[cfg(test)]
mod tests;

use std::collections::{BTreeMap, BTreeSet};

pub use compile::FreeNumber;
pub use direction::Direction;
pub use graph::{Arithmetic, Graph, InputId, InputKind, Level, Node, NodeId, Op, lookup, operands};
pub use resolve::Producer;
pub use schedule::{Schedule, Step};
pub use support::{Doubt, Support};

use crate::candidate::Candidate;
use crate::catalog::{Catalog, Match, RelationKind};
use crate::quantity::Bounds;
use crate::quantity::written::Value;
use crate::text::{Problem, Problems};

/// A constraint that can be assessed.
#[derive(Clone, Debug)]
pub struct Planned {
    /// Its position in the catalogue.
    pub constraint: usize,
    /// The node of what is available.
    pub available: NodeId,
    /// The node of what is required.
    pub required: NodeId,
    /// What it rests on.
    pub support: Support,
    /// For each free number: which way the margin goes when it grows.
    pub pulls: Vec<Direction>,
}

/// Why a constraint that concerns the candidate is not assessed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Outside {
    /// One of each group must be stated.
    Missing(Vec<Vec<String>>),
    /// Nothing that is stated flows into it.
    DefaultsAlone,
    /// It speaks of another chemistry; these attributes say so.
    Chemistry(Vec<String>),
}

/// A figure that can be computed.
#[derive(Clone, Debug)]
pub struct PlannedFigure {
    /// Its position in the catalogue.
    pub figure: usize,
    /// Its node.
    pub node: NodeId,
}

/// A quantity of the plan.
#[derive(Clone, Debug)]
pub struct PlannedQuantity {
    /// Its name.
    pub name: String,
    /// Its node.
    pub node: NodeId,
    /// Where it comes from.
    pub producer: Producer,
}

/// A range that an entry was drawn from, and the node of the quantity that should lie in it.
#[derive(Clone, Debug)]
pub struct RangeCheck {
    /// The entry's id.
    pub entry: String,
    /// The quantity.
    pub quantity: String,
    /// Its node.
    pub node: NodeId,
    /// The range, SI.
    pub range: Bounds,
}

/// A stated quantity that a definition also gives, from other stated ones.
#[derive(Clone, Debug)]
pub struct Identity {
    /// The quantity.
    pub quantity: String,
    /// The definition.
    pub relation: usize,
    /// The node of what is stated.
    pub stated: NodeId,
    /// The node of what the definition gives.
    pub derived: NodeId,
}

/// All that is known before any draw is made.
#[derive(Debug)]
pub struct Plan {
    /// The program.
    pub graph: Graph,
    /// The order of computing, and which register holds what.
    pub schedule: Schedule,
    /// Constraints to assess, in order of id.
    pub constraints: Vec<Planned>,
    /// Constraints that concern the candidate but are not assessed: position in the catalogue, why.
    pub outside: Vec<(usize, Outside)>,
    /// Figures, in order of id.
    pub figures: Vec<PlannedFigure>,
    /// Quantities of the program, in order of name.
    pub quantities: Vec<PlannedQuantity>,
    /// Ranges to watch.
    pub ranges: Vec<RangeCheck>,
    /// Statements to hold against each other.
    pub identities: Vec<Identity>,
    /// Numbers the organism may set, in order of name.
    pub free: Vec<FreeNumber>,
    /// Stated quantities that nothing uses.
    pub unused: Vec<String>,
}

/// The shape of a candidate: candidates with equal keys share a plan.
#[must_use]
pub fn shape_key(candidate: &Candidate, only: &[String]) -> String {
    let stated: Vec<String> = candidate
        .given
        .iter()
        .map(|(name, reading)| (name, reading, "given"))
        .chain(candidate.from_habitat.iter().map(|(name, reading)| (name, reading, "habitat")))
        .map(|(name, reading, origin)| {
            let kind = match &reading.value {
                Value::Free(_) => "free".to_owned(),
                Value::Unknown(crate::quantity::Distribution::Exact(_)) => "exact".to_owned(),
                Value::Unknown(distribution) => {
                    distribution.file().map_or_else(|| "uncertain".to_owned(), |file| format!("{file}!row"))
                }
            };
            format!("{name} {origin} {kind}")
        })
        .collect();
    let adopted: Vec<String> = candidate
        .adopted
        .iter()
        .map(|(name, adopted)| format!("{name} {:?}", adopted.reading.value))
        .collect();
    let correlations = candidate.correlations.pairs();
    format!("{:?}\n{stated:?}\n{adopted:?}\n{correlations:?}\n{only:?}", candidate.attributes)
}

impl Plan {
    /// The plan for candidates of this one's shape; `only` limits it to these constraints (empty: all).
    ///
    /// # Errors
    /// A cycle among the relations chosen.
    pub fn new(catalog: &Catalog, candidate: &Candidate, only: &[String]) -> Result<Self, Problems> {
        let given: BTreeSet<String> = candidate.given.keys().cloned().collect();
        let habitat: BTreeSet<String> = candidate.from_habitat.keys().cloned().collect();
        let stated = resolve::Stated { attributes: &candidate.attributes, given: &given, habitat: &habitat };
        let mut resolver = resolve::Resolver::new(catalog, stated);
        let mut problems = Problems::new();

        let mut outside = Vec::new();
        let mut chosen = Vec::new();
        for (at, constraint) in catalog.constraints.iter().enumerate() {
            let entry = &constraint.entry;
            if !only.is_empty() && !only.contains(&entry.id) {
                continue;
            }
            let formulas = [&constraint.available.formula, &constraint.required.formula];
            match standing_of(catalog, entry, &formulas, &mut resolver, candidate) {
                Standing::Elsewhere => {}
                Standing::Outside(why) => outside.push((at, why)),
                Standing::Ready(support) => chosen.push((at, support)),
            }
        }
        let mut figures_chosen = Vec::new();
        for (at, figure) in catalog.figures.iter().enumerate() {
            if let Standing::Ready(_) =
                standing_of(catalog, &figure.entry, &[&figure.formula], &mut resolver, candidate)
            {
                figures_chosen.push(at);
            }
        }

        let mut compiler = compile::Compiler::new(catalog, candidate, &mut resolver);
        compiler.couple(&candidate.correlations, str::to_owned);
        let sides: Vec<(NodeId, NodeId)> = chosen
            .iter()
            .map(|(at, _)| {
                let constraint = &catalog.constraints[*at];
                let available = compiler.formula(&constraint.entry, &constraint.available.formula);
                (available, compiler.formula(&constraint.entry, &constraint.required.formula))
            })
            .collect();
        let figures: Vec<PlannedFigure> = figures_chosen
            .into_iter()
            .map(|at| {
                let figure = &catalog.figures[at];
                let node = compiler.scattered(&figure.entry, &figure.formula, figure.scatter.as_ref());
                PlannedFigure { figure: at, node }
            })
            .collect();
        let used: BTreeSet<String> = compiler.quantities.keys().cloned().collect();
        for name in beside(catalog, candidate, &chosen, &figures) {
            if compiler.resolver.producer(&name).is_some() {
                compiler.quantity(&name);
            }
        }
        let identities = identities(catalog, candidate, &mut compiler);
        if let Some(cycle) = compiler.cycle.take() {
            problems.push(
                Problem::whole(format!(
                    "`{}`: the relations chosen form a cycle: {}",
                    candidate.name,
                    cycle.join(" → ")
                ))
                .expected("one of these quantities stated, or relations that do not need each other"),
            );
        }
        let (graph, mut free, nodes) = (compiler.graph, compiler.free, compiler.quantities);
        if !problems.is_empty() {
            return Err(problems);
        }
        let order = sort_free(&mut free);

        let quantities: Vec<PlannedQuantity> = nodes
            .iter()
            .filter_map(|(name, node)| {
                Some(PlannedQuantity { name: name.clone(), node: *node, producer: resolver.producer(name)? })
            })
            .collect();
        let ranges = range_checks(catalog, &chosen, &figures, &nodes);
        let pulls = pulls(catalog, &graph, &free, &order, &sides);
        let constraints: Vec<Planned> = chosen
            .into_iter()
            .zip(sides)
            .zip(pulls)
            .map(|(((at, support), (available, required)), pulls)| Planned {
                constraint: at,
                available,
                required,
                support,
                pulls,
            })
            .collect();
        let unused = given.iter().filter(|name| !used.contains(*name)).cloned().collect();
        let mut plan = Self {
            schedule: Schedule::default(),
            graph,
            constraints,
            outside,
            figures,
            quantities,
            ranges,
            identities,
            free,
            unused,
        };
        plan.renumber_free(&order);
        plan.schedule = Schedule::new(&plan.graph, &plan.outputs());
        Ok(plan)
    }

    /// Nodes whose values are kept: sides of constraints, quantities that relations give, figures, what is held against
    /// a range or another statement. Of stated numbers and defaults the distribution itself is known.
    #[must_use]
    pub fn outputs(&self) -> BTreeSet<NodeId> {
        let sides = self.constraints.iter().flat_map(|planned| [planned.available, planned.required]);
        let given = |quantity: &&PlannedQuantity| matches!(quantity.producer, Producer::Relation(_));
        let quantities = self.quantities.iter().filter(given).map(|quantity| quantity.node);
        let figures = self.figures.iter().map(|figure| figure.node);
        let ranges = self.ranges.iter().map(|range| range.node);
        let identities = self.identities.iter().flat_map(|identity| [identity.stated, identity.derived]);
        sides.chain(quantities).chain(figures).chain(ranges).chain(identities).collect()
    }

    /// Free numbers are kept in order of name; inputs refer to them by position.
    fn renumber_free(&mut self, order: &[usize]) {
        for input in &mut self.graph.inputs {
            if let InputKind::Free(at) = input {
                *at = order[*at];
            }
        }
    }
}

/// How a constraint or figure stands to a candidate.
enum Standing {
    Ready(Support),
    Outside(Outside),
    Elsewhere,
}

fn standing_of<'a>(
    catalog: &'a Catalog,
    entry: &'a crate::catalog::Entry,
    formulas: &[&'a crate::formula::Formula],
    resolver: &mut resolve::Resolver<'a>,
    candidate: &Candidate,
) -> Standing {
    let mut groups = resolve::Missing::new();
    match entry.condition.matches(&candidate.attributes) {
        Match::Yes => {}
        Match::No(_) => {
            return match resolve::bars_chemistry(&entry.condition, &candidate.attributes) {
                Some(attributes) => Standing::Outside(Outside::Chemistry(attributes)),
                None => Standing::Elsewhere,
            };
        }
        Match::Unknown(attributes) => groups.extend(attributes.into_iter().map(|name| [name].into())),
    }
    let needed = resolve::attributes_needed(entry, &candidate.attributes);
    groups.extend(needed.into_iter().map(|name| [name.to_owned()].into()));
    let inputs: Vec<&str> = formulas.iter().flat_map(|formula| catalog.quantities_of(formula)).collect();
    groups.extend(resolver.missing(&entry.condition, &inputs));
    if !groups.is_empty() {
        let groups = resolve::minimal(groups);
        let groups = groups.into_iter().map(|group| group.into_iter().collect()).collect();
        return Standing::Outside(Outside::Missing(groups));
    }
    let support = Support::of(catalog, entry, formulas, resolver, candidate);
    if support.rests_on_defaults() {
        return Standing::Outside(Outside::DefaultsAlone);
    }
    Standing::Ready(support)
}

/// Stated quantities that a definition also gives from other stated ones.
fn identities<'a>(
    catalog: &'a Catalog,
    candidate: &Candidate,
    compiler: &mut compile::Compiler<'a, '_>,
) -> Vec<Identity> {
    let stated =
        |name: &str| candidate.stated(name).is_some_and(|reading| matches!(reading.value, Value::Unknown(_)));
    let mut found = Vec::new();
    for (at, relation) in catalog.relations.iter().enumerate() {
        let applies = relation.kind == RelationKind::Definition
            && stated(&relation.gives)
            && relation.entry.condition.matches(&candidate.attributes) == Match::Yes
            && relation.entry.parameters.is_empty();
        if !applies {
            continue;
        }
        let inputs = catalog.quantities_of(&relation.formula);
        if !inputs.is_empty() && inputs.iter().all(|input| stated(input)) {
            let stated = compiler.quantity(&relation.gives);
            let derived = compiler.formula(&relation.entry, &relation.formula);
            found.push(Identity { quantity: relation.gives.clone(), relation: at, stated, derived });
        }
    }
    found
}

/// Quantities that reports name beside the results: what limits speak of, and where laws were drawn from.
fn beside(
    catalog: &Catalog,
    candidate: &Candidate,
    chosen: &[(usize, Support)],
    figures: &[PlannedFigure],
) -> BTreeSet<String> {
    let spoken_of = chosen.iter().filter_map(|(at, _)| {
        let speaks_of = catalog.constraints[*at].speaks_of.as_ref()?;
        speaks_of.of(&candidate.attributes).ok().cloned()
    });
    let ranges = entries_used(catalog, chosen, figures).flat_map(|entry| entry.valid_over.keys().cloned());
    spoken_of.chain(ranges).collect()
}

/// The entries that the constraints and figures of a plan are computed from, each once.
fn entries_used<'a>(
    catalog: &'a Catalog,
    chosen: &'a [(usize, Support)],
    figures: &'a [PlannedFigure],
) -> impl Iterator<Item = &'a crate::catalog::Entry> {
    let relations: BTreeSet<usize> =
        chosen.iter().flat_map(|(_, support)| support.relations.iter().copied()).collect();
    chosen
        .iter()
        .map(|(at, _)| &catalog.constraints[*at].entry)
        .chain(relations.into_iter().map(|at| &catalog.relations[at].entry))
        .chain(figures.iter().map(|figure| &catalog.figures[figure.figure].entry))
}

/// Puts free numbers in order of name; gives the new position of each old one.
fn sort_free(free: &mut [FreeNumber]) -> Vec<usize> {
    let mut by_name: Vec<(String, usize)> =
        free.iter().enumerate().map(|(at, number)| (number.name.clone(), at)).collect();
    by_name.sort();
    let mut order = vec![0; free.len()];
    for (new, (_, old)) in by_name.iter().enumerate() {
        order[*old] = new;
    }
    free.sort_by(|a, b| a.name.cmp(&b.name));
    order
}

fn range_checks(
    catalog: &Catalog,
    chosen: &[(usize, Support)],
    figures: &[PlannedFigure],
    nodes: &BTreeMap<String, NodeId>,
) -> Vec<RangeCheck> {
    entries_used(catalog, chosen, figures)
        .flat_map(|entry| entry.valid_over.iter().map(move |(quantity, range)| (entry, quantity, range)))
        .filter_map(|(entry, quantity, (low, high))| {
            Some(RangeCheck {
                entry: entry.id.clone(),
                quantity: quantity.clone(),
                node: *nodes.get(quantity)?,
                range: Bounds { low: *low, high: *high },
            })
        })
        .collect()
}

/// For each constraint, for each free number in order of name: which way its margin goes.
fn pulls(
    catalog: &Catalog,
    graph: &Graph,
    free: &[FreeNumber],
    order: &[usize],
    sides: &[(NodeId, NodeId)],
) -> Vec<Vec<Direction>> {
    let bounds_of =
        |name: &str| catalog.quantities.get(name).map_or(Bounds::NONE, |quantity| quantity.bounds);
    let ranges = direction::ranges(graph, |input| match input {
        InputKind::Stated(name) => bounds_of(name),
        InputKind::Free(at) => bounds_of(&free[order[*at]].name),
        InputKind::Catalog(distribution) => distribution.support(),
    });
    let mut pulls = vec![Vec::with_capacity(free.len()); sides.len()];
    for number in free {
        let directions = direction::directions(graph, &ranges, number.node);
        for ((available, required), pulls) in sides.iter().zip(&mut pulls) {
            let (has, needs) = (directions[*available], directions[*required]);
            // A margin is a ratio: its direction is certain when both sides are of one sign, and when they may change
            // sign a larger `available` or a smaller `required` still never makes a draw stop holding.
            pulls.push(has.and(needs.reversed()));
        }
    }
    pulls
}
