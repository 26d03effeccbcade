//! What the catalogue holds, as text: lists, and one entry in full.

use std::collections::{BTreeMap, BTreeSet};

use super::table;
use crate::catalog::{
    ByAttribute, Catalog, Condition, Constraint, Entry, Figure, Of, Parameter, Provenance, Quantity,
    Relation, RelationKind,
};
use crate::formula::Formula;
use crate::quantity::shown::{self, Precision};
use crate::quantity::{Bounds, Dimension, Unit};
use crate::text::one_line;

/// Whether an entry concerns a body plan; every entry concerns all when none is asked for.
fn concerning(catalog: &Catalog, body_plan: Option<&str>) -> impl Fn(&Entry) -> bool {
    let asked = body_plan.map(|word| (Condition::asking("body_plan", word), catalog.words()));
    move |entry| asked.as_ref().is_none_or(|(asked, words)| entry.condition.overlaps(asked, words))
}

/// A row for each constraint.
#[must_use]
pub fn constraints(catalog: &Catalog, body_plan: Option<&str>, width: usize) -> String {
    let concerns = concerning(catalog, body_plan);
    let rows = catalog
        .constraints
        .iter()
        .filter(|constraint| concerns(&constraint.entry))
        .map(|constraint| {
            let entry = &constraint.entry;
            vec![entry.id.clone(), entry.family.clone(), entry.basis.to_string(), entry.title.clone()]
        })
        .collect();
    table::columns(&["Constraint", "Family", "Basis", "Says"], rows, width)
}

/// A row for each relation.
#[must_use]
pub fn relations(catalog: &Catalog, body_plan: Option<&str>, width: usize) -> String {
    let concerns = concerning(catalog, body_plan);
    let rows = catalog
        .relations
        .iter()
        .filter(|relation| concerns(&relation.entry))
        .map(|relation| {
            let entry = &relation.entry;
            vec![
                relation.gives.clone(),
                relation.rank.to_string(),
                entry.id.clone(),
                relation.formula.text().trim().to_owned(),
            ]
        })
        .collect::<BTreeSet<Vec<String>>>()
        .into_iter()
        .collect();
    table::columns(&["Gives", "Rank", "Relation", "Formula"], rows, width)
}

/// A row for each figure.
#[must_use]
pub fn figures(catalog: &Catalog, body_plan: Option<&str>, width: usize) -> String {
    let concerns = concerning(catalog, body_plan);
    let rows = catalog
        .figures
        .iter()
        .filter(|figure| concerns(&figure.entry))
        .map(|figure| {
            vec![figure.entry.id.clone(), figure.unit.text().to_owned(), figure.entry.title.clone()]
        })
        .collect();
    table::columns(&["Figure", "Unit", "Says"], rows, width)
}

/// A row for each quantity; with `opens`, only those listed there, the ones that open most limits first.
#[must_use]
pub fn quantities(
    catalog: &Catalog,
    opens: Option<&BTreeMap<String, BTreeSet<String>>>,
    width: usize,
) -> String {
    let limits = |name: &str| opens.map_or(0, |opens| opens.get(name).map_or(0, BTreeSet::len));
    let mut listed: Vec<&Quantity> = catalog
        .quantities
        .values()
        .filter(|quantity| opens.is_none() || limits(&quantity.name) > 0)
        .collect();
    listed.sort_by_key(|quantity| std::cmp::Reverse(limits(&quantity.name)));
    let rows = listed
        .into_iter()
        .map(|quantity| {
            let mut row = vec![
                quantity.name.clone(),
                match quantity.of {
                    Of::Organism => "organism".to_owned(),
                    Of::Environment => "environment".to_owned(),
                },
                quantity.unit.text().to_owned(),
            ];
            if opens.is_some() {
                row.push(limits(&quantity.name).to_string());
            }
            row.push(one_line(&quantity.about));
            row
        })
        .collect();
    if opens.is_some() {
        table::columns(&["Quantity", "Of", "Unit", "Limits", "Is"], rows, width)
    } else {
        table::columns(&["Quantity", "Of", "Unit", "Is"], rows, width)
    }
}

/// A row for each word of each attribute.
#[must_use]
pub fn attributes(catalog: &Catalog, width: usize) -> String {
    let mut rows = Vec::new();
    for (name, attribute) in &catalog.attributes {
        for (word, meaning) in &attribute.words {
            let default = if attribute.default.as_ref() == Some(word) { "default" } else { "" };
            rows.push(vec![name.clone(), word.clone(), default.to_owned(), one_line(meaning)]);
        }
    }
    table::columns(&["Attribute", "Word", "", "Means"], rows, width)
}

/// A row for each constant.
#[must_use]
pub fn constants(catalog: &Catalog, width: usize) -> String {
    let rows = catalog
        .constants
        .iter()
        .map(|(name, constant)| {
            let value = constant.unit.from_si(constant.value);
            vec![
                name.clone(),
                format!("{value} {}", constant.unit.text()).trim().to_owned(),
                constant.sources.join(", "),
            ]
        })
        .collect();
    table::columns(&["Constant", "Value", "Source"], rows, width)
}

/// A row for each habitat.
#[must_use]
pub fn habitats(catalog: &Catalog, width: usize) -> String {
    let rows = catalog
        .habitats
        .iter()
        .map(|(name, habitat)| {
            let has: Vec<&str> = habitat.environment.keys().map(String::as_str).collect();
            vec![name.clone(), has.join(", "), one_line(&habitat.about)]
        })
        .collect();
    table::columns(&["Habitat", "Has", "Is"], rows, width)
}

/// A row for each work cited.
#[must_use]
pub fn sources(catalog: &Catalog, width: usize) -> String {
    let rows = catalog
        .works
        .iter()
        .map(|(key, work)| {
            let text = format!("{} {}. {}. {}", work.authors, work.year, work.title, work.journal);
            vec![
                key.clone(),
                work.standing.to_string(),
                one_line(&text),
                work.doi.clone().unwrap_or_default(),
            ]
        })
        .collect();
    table::columns(&["Source", "Standing", "Work", "DOI"], rows, width)
}

/// How many entries of each class there are.
#[must_use]
pub fn counts(catalog: &Catalog) -> String {
    format!(
        "No problems: {} constraints, {} relations, {} figures, {} quantities, {} attributes, {} constants, {} habitats, \
         {} sources; {} from overlays. Digest {}\n",
        catalog.constraints.len(),
        catalog.relations.len(),
        catalog.figures.len(),
        catalog.quantities.len(),
        catalog.attributes.len(),
        catalog.constants.len(),
        catalog.habitats.len(),
        catalog.works.len(),
        catalog.overlaid.len(),
        &catalog.digest[..12],
    )
}

/// Every id and name, for the nearest one in messages.
#[must_use]
pub fn all_names(catalog: &Catalog) -> Vec<String> {
    let ids = catalog.entries().map(|entry| &entry.id);
    ids.chain(catalog.quantities.keys())
        .chain(catalog.attributes.keys())
        .chain(catalog.constants.keys())
        .chain(catalog.habitats.keys())
        .chain(catalog.works.keys())
        .cloned()
        .collect()
}

/// One entry in full; `None` when nothing has this id or name.
#[must_use]
pub fn show(catalog: &Catalog, id: &str, width: usize) -> Option<String> {
    let mut page = Page { lines: Vec::new(), width };
    if let Some(constraint) = catalog.constraints.iter().find(|constraint| constraint.entry.id == id) {
        show_constraint(&mut page, catalog, constraint);
    } else if let Some(relation) = catalog.relations.iter().find(|relation| relation.entry.id == id) {
        show_relation(&mut page, catalog, relation);
    } else if let Some(figure) = catalog.figures.iter().find(|figure| figure.entry.id == id) {
        show_figure(&mut page, catalog, figure);
    } else if let Some(quantity) = catalog.quantities.get(id) {
        show_quantity(&mut page, catalog, quantity);
    } else if let Some(attribute) = catalog.attributes.get(id) {
        page.field("Attribute", id);
        page.field("Is", &attribute.about);
        for (word, meaning) in &attribute.words {
            let default = if attribute.default.as_ref() == Some(word) { " (default)" } else { "" };
            page.field("", &format!("{word}{default}: {meaning}"));
        }
    } else if let Some(constant) = catalog.constants.get(id) {
        page.field("Constant", id);
        page.field("Value", &format!("{} {}", constant.unit.from_si(constant.value), constant.unit.text()));
        page.sources(catalog, &constant.sources);
    } else if let Some(habitat) = catalog.habitats.get(id) {
        page.field("Habitat", id);
        page.field("Is", &habitat.about);
        for (name, reading) in &habitat.environment {
            page.field("", &format!("{name}: {}", reading.value.describe(&reading.unit)));
        }
        page.sources(catalog, &habitat.sources);
    } else if catalog.works.contains_key(id) {
        page.sources(catalog, &[id.to_owned()]);
        let users: Vec<&str> = catalog
            .entries()
            .filter(|entry| entry.sources.iter().any(|source| source == id))
            .map(|entry| entry.id.as_str())
            .collect();
        page.field("Cited by", &users.join(", "));
    } else {
        return None;
    }
    Some(page.finish())
}

fn exact(si: f64, unit: &Unit) -> String {
    shown::in_unit(si, Precision::UpTo(6), unit)
}

/// Labelled lines, wrapped behind their label.
struct Page {
    lines: Vec<Vec<String>>,
    width: usize,
}

impl Page {
    fn field(&mut self, label: &str, text: &str) {
        let text = one_line(text);
        if !text.is_empty() {
            self.lines.push(vec![label.to_owned(), text]);
        }
    }

    fn sources(&mut self, catalog: &Catalog, keys: &[String]) {
        for (number, key) in keys.iter().enumerate() {
            let Some(work) = catalog.works.get(key) else { continue };
            let doi = work.doi.as_ref().map(|doi| format!(" doi {doi}.")).unwrap_or_default();
            let text = format!(
                "{key}: {} {}. {}. {}.{doi} [{}]",
                work.authors, work.year, work.title, work.journal, work.standing
            );
            self.field(if number == 0 { "Source" } else { "" }, &text);
        }
    }

    /// The points of an entry's curves, in the units of what its formulas name and of what they give.
    fn curves(&mut self, catalog: &Catalog, entry: &Entry, formulas: &[&Formula], gives: Option<&Unit>) {
        let named = formulas.iter().flat_map(|formula| formula.names());
        let named: Vec<&Unit> =
            named.filter_map(|name| catalog.quantities.get(name)).map(|quantity| &quantity.unit).collect();
        let shown = |si: f64, dimension: Dimension| {
            let mut units = gives.into_iter().chain(named.iter().copied());
            units
                .find(|unit| unit.dimension() == dimension)
                .map_or_else(|| si.to_string(), |unit| exact(si, unit))
        };
        for (name, curve) in &entry.curves {
            let form = curve.form();
            let points: Vec<String> = curve
                .points()
                .iter()
                .map(|(at, value)| format!("{} at {}", shown(*value, form.value), shown(*at, form.argument)))
                .collect();
            self.field("Curve", &format!("{name}: {}", points.join(", ")));
        }
    }

    fn entry(&mut self, catalog: &Catalog, entry: &Entry) {
        self.field("Title", &entry.title);
        self.field("Family", &entry.family);
        self.field("Basis", entry.basis.word());
        for (number, clause) in entry.condition.clauses.iter().enumerate() {
            let label = if number == 0 { "Applies to" } else { "" };
            let not = if clause.excluded { " not" } else { "" };
            self.field(label, &format!("{} is{not} {}", clause.attribute, clause.words.join(" or ")));
        }
        for (number, (name, parameter)) in entry.parameters.iter().enumerate() {
            self.field(if number == 0 { "Numbers" } else { "" }, &parameter_text(name, parameter));
        }
        for (number, name) in entry.joint.iter().flat_map(|joint| joint.units.keys()).enumerate() {
            self.field(if number == 0 { "In sets" } else { "" }, name);
        }
        for (name, (low, high)) in &entry.valid_over {
            let unit = &catalog.quantities[name].unit;
            let text = format!("{name} {} to {}", exact(*low, unit), exact(*high, unit));
            self.field("Drawn from", &text);
        }
        if let Some(meaning) = &entry.meaning {
            self.field("Meaning", meaning);
        }
        if let Some(exceptions) = &entry.exceptions {
            self.field("Exceptions", exceptions);
        }
        self.sources(catalog, &entry.sources);
    }

    fn finish(self) -> String {
        table::labelled(self.lines, self.width)
    }
}

fn parameter_text(name: &str, parameter: &Parameter) -> String {
    let value = match &parameter.value {
        ByAttribute::One(distribution) => distribution.describe(&parameter.unit),
        ByAttribute::By { attribute, cases } => {
            let cases: Vec<String> = cases
                .iter()
                .map(|(word, distribution)| format!("{word}: {}", distribution.describe(&parameter.unit)))
                .collect();
            format!("by {attribute}: {}", cases.join("; "))
        }
    };
    let about = parameter.about.as_ref().map(|about| format!(" ({about})")).unwrap_or_default();
    format!("{name}: {value}{about}{}", provenance_text(&parameter.provenance))
}

fn provenance_text(provenance: &Provenance) -> String {
    let mut parts = provenance.sources.clone();
    parts.extend(provenance.standing.map(|standing| standing.to_string()));
    if parts.is_empty() { String::new() } else { format!(" [{}]", parts.join(", ")) }
}

fn show_constraint(page: &mut Page, catalog: &Catalog, constraint: &Constraint) {
    page.field("Constraint", &constraint.entry.id);
    page.field(
        "Available",
        &format!("{} = {}", constraint.available.says, constraint.available.formula.text()),
    );
    page.field("Required", &format!("{} = {}", constraint.required.says, constraint.required.formula.text()));
    page.field("Margin", "log10(available / required), in dex; holds where it is 0 or more");
    let formulas = [&constraint.available.formula, &constraint.required.formula];
    page.curves(catalog, &constraint.entry, &formulas, Some(&constraint.unit));
    page.entry(catalog, &constraint.entry);
}

fn show_relation(page: &mut Page, catalog: &Catalog, relation: &Relation) {
    page.field("Relation", &relation.entry.id);
    page.field("Gives", &format!("{} = {}", relation.gives, relation.formula.text()));
    let kind = match relation.kind {
        RelationKind::Definition => "definition",
        RelationKind::Law => "law",
    };
    page.field("Kind", &format!("{kind}, rank {}", relation.rank));
    if let Some(scatter) = &relation.scatter {
        let values: Vec<String> = scatter.values().into_iter().map(|dex| format!("{dex} dex")).collect();
        page.field("Scatter", &format!("{}: one factor per draw and organism", values.join(" or ")));
    }
    let unit = catalog.quantities.get(&relation.gives).map(|quantity| &quantity.unit);
    page.curves(catalog, &relation.entry, &[&relation.formula], unit);
    page.entry(catalog, &relation.entry);
}

fn show_figure(page: &mut Page, catalog: &Catalog, figure: &Figure) {
    page.field("Figure", &figure.entry.id);
    page.field("Is", &format!("{} ({})", figure.formula.text(), figure.unit.text()));
    page.curves(catalog, &figure.entry, &[&figure.formula], Some(&figure.unit));
    page.entry(catalog, &figure.entry);
}

fn show_quantity(page: &mut Page, catalog: &Catalog, quantity: &Quantity) {
    page.field("Quantity", &quantity.name);
    page.field("Is", &quantity.about);
    page.field("Of", if quantity.of == Of::Organism { "organism" } else { "environment" });
    page.field("Unit", quantity.unit.text());
    page.field("Bounds", &bounds_text(quantity.bounds, &quantity.unit));
    if let Some(default) = &quantity.default {
        let behind = format!(" [{}{}]", default.basis, provenance_text(&default.provenance));
        match &default.value {
            ByAttribute::One(value) => {
                page.field("Default", &format!("{}{behind}", value.describe(&quantity.unit)))
            }
            ByAttribute::By { attribute, cases } => {
                for (number, (word, value)) in cases.iter().enumerate() {
                    let text = format!("{attribute} {word}: {}{behind}", value.describe(&quantity.unit));
                    page.field(if number == 0 { "Default" } else { "" }, &text);
                }
            }
        }
    }
    let givers: Vec<&str> = catalog
        .relations
        .iter()
        .filter(|relation| relation.gives == quantity.name)
        .map(|relation| relation.entry.id.as_str())
        .collect();
    page.field("Given by", &givers.join(", "));
    let uses: Vec<&str> = catalog
        .constraints
        .iter()
        .filter(|constraint| {
            [&constraint.available, &constraint.required]
                .into_iter()
                .any(|side| side.formula.names().contains(&quantity.name.as_str()))
        })
        .map(|constraint| constraint.entry.id.as_str())
        .collect();
    page.field("Used by", &uses.join(", "));
}

fn bounds_text(bounds: Bounds, unit: &Unit) -> String {
    match (bounds.low.is_finite(), bounds.high.is_finite()) {
        (true, true) => format!("{} to {}", exact(bounds.low, unit), exact(bounds.high, unit)),
        (true, false) => format!("from {}", exact(bounds.low, unit)),
        (false, true) => format!("up to {}", exact(bounds.high, unit)),
        (false, false) => "none".to_owned(),
    }
}
