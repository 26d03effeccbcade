//! Checks between entries: names that are unused, twice taken, or at odds.

use std::collections::{BTreeMap, BTreeSet};

use super::Catalog;
use super::entry::{Entry, RelationKind, coefficient};
use crate::formula::{Binary, Expr, ExprKind, Formula};
use crate::math::factor::cholesky;
use crate::quantity::Distribution;
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
    let mut seen = BTreeSet::new();
    for entry in catalog.entries() {
        if !seen.insert(entry.id.as_str()) {
            problems.push(Problem::at(entry.place.clone(), format!("the id `{}` stands twice", entry.id)));
        }
    }
}

fn relations(catalog: &Catalog, problems: &mut Problems) {
    let words = catalog.words();
    let mut by_quantity: BTreeMap<&str, Vec<&super::entry::Relation>> = BTreeMap::new();
    for relation in &catalog.relations {
        by_quantity.entry(&relation.gives).or_default().push(relation);
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
            problems.push(Problem::at(
                relation.entry.place.clone(),
                format!("the relation `{}` gives `{}` from itself", relation.entry.id, relation.gives),
            ));
        }
    }
    for (quantity, relations) in by_quantity {
        for (position, one) in relations.iter().enumerate() {
            for other in &relations[position + 1..] {
                if one.rank == other.rank && one.entry.condition.overlaps(&other.entry.condition, &words) {
                    problems.push(
                        Problem::at(
                            other.entry.place.clone(),
                            format!(
                                "`{}` and `{}` both give `{quantity}` and can both match",
                                one.entry.id, other.entry.id
                            ),
                        )
                        .expected("different ranks, or conditions that exclude each other"),
                    );
                }
            }
        }
    }
}

/// Every parameter, joint value and curve of an entry is used by its formulas, and correlations name parameters.
fn names(entry: &Entry, formulas: &[&Formula], problems: &mut Problems) {
    let mut used = BTreeSet::new();
    for formula in formulas {
        collect_names(formula.root(), &mut used);
    }
    let joint = entry.joint.iter().flat_map(|joint| joint.values.keys());
    for name in entry.parameters.keys().chain(joint).chain(entry.curves.keys()) {
        if !used.contains(name) {
            problems
                .push(Problem::at(entry.place.clone(), format!("`{name}` of `{}` is not used", entry.id)));
        }
    }
    correlations(entry, problems);
    for correlation in &entry.correlations {
        for name in &correlation.between {
            let uncertain = entry.parameters.get(name).is_some_and(is_uncertain);
            if !uncertain {
                problems.push(Problem::at(
                    entry.place.clone(),
                    format!(
                        "the correlation of `{}` names `{name}`, which is no uncertain parameter of it",
                        entry.id
                    ),
                ));
            }
        }
    }
}

/// The coefficients of an entry can hold together.
fn correlations(entry: &Entry, problems: &mut Problems) {
    let names: BTreeSet<&str> = entry
        .correlations
        .iter()
        .flat_map(|correlation| correlation.between.iter().map(String::as_str))
        .collect();
    let names: Vec<&str> = names.into_iter().collect();
    let between = |i: usize, j: usize| coefficient(&entry.correlations, names[i], names[j]);
    if cholesky(names.len(), between).is_none() {
        problems.push(
            Problem::at(
                entry.place.clone(),
                format!("the correlations of `{}` contradict each other", entry.id),
            )
            .expected("coefficients that can hold together: their matrix must be positive definite"),
        );
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

fn is_uncertain(parameter: &super::entry::Parameter) -> bool {
    parameter.value.values().into_iter().any(|value| !matches!(value, Distribution::Exact(_)))
}

/// A regression `level * (x / 1 [unit])^slope` with both uncertain needs its correlation, or a centred form in which
/// slope and level are independent.
fn uncentred(entry: &Entry, formula: &Formula, problems: &mut Problems) {
    let uncertain: BTreeSet<&str> = entry
        .parameters
        .iter()
        .filter(|(_, parameter)| is_uncertain(parameter))
        .map(|(name, _)| name.as_str())
        .collect();
    let mut slopes = Vec::new();
    collect_uncentred(formula.root(), &mut slopes);
    for slope in slopes.into_iter().filter(|slope| uncertain.contains(slope.as_str())) {
        let correlated = |level: &str| {
            entry.correlations.iter().any(|correlation| {
                correlation.between.contains(&slope) && correlation.between.iter().any(|name| name == level)
            })
        };
        for level in uncertain.iter().filter(|level| **level != slope && !correlated(level)) {
            problems.push(
                Problem::at(
                    entry.place.clone(),
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
