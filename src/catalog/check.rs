//! Checks between entries: names that are unused, twice taken, or at odds.

use std::collections::{BTreeMap, BTreeSet};

use super::Catalog;
use super::entry::{Entry, RelationKind};
use crate::formula::{Binary, Expr, ExprKind, Formula};
use crate::text::{Problem, Problems};

/// Adds everything at odds in the catalogue as a whole.
pub(super) fn check(catalog: &Catalog, problems: &mut Problems) {
    ids(catalog, problems);
    relations(catalog, problems);
    for relation in &catalog.relations {
        names(&relation.entry, &[&relation.formula], problems);
        uncentred(&relation.entry, &relation.formula, problems);
    }
    for constraint in &catalog.constraints {
        names(&constraint.entry, &[&constraint.available.formula, &constraint.required.formula], problems);
    }
    for figure in &catalog.figures {
        names(&figure.entry, &[&figure.formula], problems);
    }
}

/// One id, one entry, whatever its class: reports and streams are named by it.
fn ids(catalog: &Catalog, problems: &mut Problems) {
    let mut seen: BTreeMap<&str, &Entry> = BTreeMap::new();
    for entry in catalog.entries() {
        if let Some(other) = seen.insert(entry.id.as_str(), entry) {
            problems.push(
                Problem::at(
                    later(entry, other).place.clone(),
                    format!("the id `{}` stands for two entries of different kinds", entry.id),
                )
                .expected("an id of its own for each entry"),
            );
        }
    }
}

/// Of two entries at odds the one to point at: that of an overlay, else the second.
const fn later<'a>(second: &'a Entry, first: &'a Entry) -> &'a Entry {
    if first.overlaid && !second.overlaid { first } else { second }
}

fn relations(catalog: &Catalog, problems: &mut Problems) {
    let words = catalog.words();
    let mut by_rank: BTreeMap<(&str, u32), Vec<&super::entry::Relation>> = BTreeMap::new();
    for relation in &catalog.relations {
        by_rank.entry((&relation.gives, relation.rank)).or_default().push(relation);
        let default = catalog.quantities.get(&relation.gives).and_then(|quantity| quantity.default.as_ref());
        if relation.kind == RelationKind::Law && default.is_some_and(super::entry::Default::is_free) {
            problems.push(
                Problem::at(
                    relation.entry.place.clone(),
                    format!(
                        "the law `{}` gives `{}`, which an organism is free to set",
                        relation.entry.id, relation.gives
                    ),
                )
                .expected(format!("a law that gives `typical_{}`", relation.gives)),
            );
        }
        if relation.formula.names().contains(&relation.gives.as_str()) {
            problems.push(
                Problem::at(
                    relation.entry.place.clone(),
                    format!("the relation `{}` gives `{}` from itself", relation.entry.id, relation.gives),
                )
                .expected("a formula without the quantity that it gives"),
            );
        }
    }
    for ((quantity, _), relations) in by_rank {
        for (position, relation) in relations.iter().enumerate() {
            let mut earlier = relations[..position].iter();
            let clash =
                earlier.find(|other| other.entry.condition.overlaps(&relation.entry.condition, &words));
            let Some(other) = clash else { continue };
            problems.push(
                Problem::at(
                    later(&relation.entry, &other.entry).place.clone(),
                    format!(
                        "`{}` and `{}` both give `{quantity}` and can both match",
                        other.entry.id, relation.entry.id
                    ),
                )
                .expected("different ranks, or conditions that exclude each other"),
            );
        }
    }
}

/// Every parameter, joint value and curve of an entry is used by its formulas.
fn names(entry: &Entry, formulas: &[&Formula], problems: &mut Problems) {
    let mut used = BTreeSet::new();
    for formula in formulas {
        collect_names(formula.root(), &mut used);
    }
    let joint = entry.joint.iter().flat_map(|joint| joint.values.keys());
    for name in entry.parameters.keys().chain(joint).chain(entry.curves.keys()) {
        if !used.contains(name) {
            let place = entry.places.get(name).unwrap_or(&entry.place).clone();
            problems.push(
                Problem::at(place, format!("`{name}` of `{}` is not used", entry.id))
                    .expected("only numbers that a formula of the entry uses"),
            );
        }
    }
}

fn collect_names(expr: &Expr, used: &mut BTreeSet<String>) {
    if let ExprKind::Name(name) | ExprKind::Curve(name, _) = &expr.kind {
        used.insert(name.clone());
    }
    for child in expr.children() {
        collect_names(child, used);
    }
}

/// A regression `level * (x / 1 [unit])^slope` with both uncertain needs its correlation, or a centred form in which
/// slope and level are independent.
fn uncentred(entry: &Entry, formula: &Formula, problems: &mut Problems) {
    let uncertain: BTreeSet<&str> = entry
        .parameters
        .iter()
        .filter(|(_, parameter)| parameter.is_uncertain())
        .map(|(name, _)| name.as_str())
        .collect();
    let mut slopes = Vec::new();
    collect_uncentred(formula.root(), &mut slopes);
    for slope in slopes.into_iter().filter(|slope| uncertain.contains(slope.as_str())) {
        let correlated = |level: &str| {
            entry.correlations.pairs().iter().any(|correlation| {
                correlation.between.contains(&slope) && correlation.between.iter().any(|name| name == level)
            })
        };
        for level in uncertain.iter().filter(|level| **level != slope && !correlated(level)) {
            problems.push(
                Problem::at(
                    entry.places.get(&slope).unwrap_or(&entry.place).clone(),
                    format!("`{}` has an uncertain slope `{slope}` and level `{level}` that are not centred", entry.id),
                )
                .expected(
                    "the mean of the data inside the power, as in `(mass / 0.12 [kg])^slope`, or the correlation of \
                     the two",
                ),
            );
        }
    }
}

/// Exponents that are parameters, on a base divided by exactly one unit.
fn collect_uncentred(expr: &Expr, slopes: &mut Vec<String>) {
    if let ExprKind::Binary(Binary::Power, base, exponent) = &expr.kind
        && let (ExprKind::Binary(Binary::Divide, _, divisor), ExprKind::Name(slope)) =
            (&base.kind, &exponent.kind)
        && let ExprKind::Number { value, unit: Some(_), .. } = &divisor.kind
        && *value == 1.0
    {
        slopes.push(slope.clone());
    }
    for child in expr.children() {
        collect_uncentred(child, slopes);
    }
}
