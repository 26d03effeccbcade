//! The files that are lists of entries: relations, constraints, figures; and the habitats.

use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

use super::condition::{Clause, Condition};
use super::entry::{
    ByAttribute, Constraint, Correlation, Entry, Figure, Habitat, Joint, Of, Parameter, Relation,
    RelationKind, Side,
};
use super::files::{File, Holds};
use super::read_tables::{
    Seen, Tables, any_value, basis, by_attribute, check_name, exact, for_each_key, provenance, sources,
    text_of, unit, word,
};
use crate::formula::curves::{Axes, Between, Curve, Form, Outside, Scale};
use crate::formula::{ExprKind, Formula, Scope};
use crate::quantity::written::{self, Reading, Value, Wanted};
use crate::quantity::{Dimension, Distribution, Unit};
use crate::text::{Fields, Kind, Node, Problem, Problems, nearest, yaml};

/// All entries, by id.
#[derive(Debug, Default)]
pub(super) struct Entries {
    pub(super) relations: BTreeMap<String, Relation>,
    pub(super) constraints: BTreeMap<String, Constraint>,
    pub(super) figures: BTreeMap<String, Figure>,
    pub(super) habitats: BTreeMap<String, Habitat>,
    pub(super) overlaid: BTreeSet<String>,
}

/// Reads all entries; an overlay's entry replaces one of the same id and class.
pub(super) fn read(files: &[File], tables: &Tables, problems: &mut Problems) -> Entries {
    let mut entries = Entries::default();
    let mut seen = Seen::default();
    for file in files {
        match file.holds {
            Holds::Relations | Holds::Constraints | Holds::Figures => {
                for (_, document) in yaml::documents(&file.source, problems) {
                    let Some(list) = document.list("the file", false, problems) else { continue };
                    for node in list {
                        read_one(node, file, tables, &mut seen, &mut entries, problems);
                    }
                }
            }
            Holds::Habitats => for_each_key(file, &mut seen, problems, |name, node, problems| {
                if let Some(habitat) = habitat(node, tables, problems) {
                    if file.overlaid {
                        entries.overlaid.insert(name.to_owned());
                    }
                    entries.habitats.insert(name.to_owned(), habitat);
                }
            }),
            _ => {}
        }
    }
    entries
}

fn read_one(
    node: &Node,
    file: &File,
    tables: &Tables,
    seen: &mut Seen,
    entries: &mut Entries,
    problems: &mut Problems,
) {
    let what = match file.holds {
        Holds::Relations => "a relation",
        Holds::Constraints => "a constraint",
        _ => "a figure",
    };
    let Some(mut fields) = Fields::of(node, what, problems) else { return };
    let Some(entry) = entry(node, &mut fields, file, tables, problems) else { return };
    let id = entry.id.clone();
    seen.add(file.holds, &id, file.overlaid, node, problems);
    let scope = EntryScope { tables, entry: &entry };
    let read = match file.holds {
        Holds::Relations => {
            relation(&mut fields, &scope, problems).map(|(gives, kind, rank, formula, scatter)| {
                let relation = Relation { gives, kind, rank, formula, scatter, entry: entry.clone() };
                entries.relations.insert(id.clone(), relation);
            })
        }
        Holds::Constraints => {
            constraint(node, &mut fields, &scope, problems).map(|(sides, unit, speaks_of)| {
                let [available, required] = sides;
                let constraint = Constraint { available, required, unit, speaks_of, entry: entry.clone() };
                entries.constraints.insert(id.clone(), constraint);
            })
        }
        _ => figure(&mut fields, &scope, problems).map(|(kind, formula, scatter, unit)| {
            let figure = Figure { kind, formula, scatter, unit, entry: entry.clone() };
            entries.figures.insert(id.clone(), figure);
        }),
    };
    fields.finish(problems);
    if read.is_some() && file.overlaid {
        entries.overlaid.insert(id);
    }
}

/// What the names in an entry's formulas mean.
struct EntryScope<'a> {
    tables: &'a Tables,
    entry: &'a Entry,
}

impl Scope for EntryScope<'_> {
    fn dimension_of(&self, name: &str) -> Option<Dimension> {
        let parameter = self.entry.parameters.get(name).map(|parameter| parameter.unit.dimension());
        let joint = || self.entry.joint.as_ref()?.units.get(name).map(Unit::dimension);
        let constant = || self.tables.constants.get(name).map(|constant| constant.unit.dimension());
        let quantity = || self.tables.quantities.get(name).map(super::entry::Quantity::dimension);
        parameter.or_else(joint).or_else(constant).or_else(quantity)
    }

    fn curve(&self, name: &str) -> Option<(Dimension, Dimension)> {
        self.entry.curves.get(name).map(|curve| (curve.form().argument, curve.form().value))
    }

    fn names(&self) -> Vec<String> {
        let joint = self.entry.joint.iter().flat_map(|joint| joint.units.keys());
        self.entry
            .parameters
            .keys()
            .chain(joint)
            .chain(self.tables.constants.keys())
            .chain(self.tables.quantities.keys())
            .cloned()
            .collect()
    }
}

fn entry(
    node: &Node,
    fields: &mut Fields<'_>,
    file: &File,
    tables: &Tables,
    problems: &mut Problems,
) -> Option<Entry> {
    let id_node = fields.require("id", problems);
    let title = text_of(fields, "title", problems);
    let family = text_of(fields, "family", problems);
    let mut condition = Condition::default();
    for (key, excluded) in [("applies_to", false), ("except", true)] {
        if let Some(node) = fields.take(key) {
            clauses(node, excluded, tables, &mut condition, problems);
        }
    }
    let basis = fields.require("basis", problems).and_then(|node| basis(node, problems));
    let parameters =
        fields.take("parameters").map(|node| parameters(node, tables, problems)).unwrap_or_default();
    let joint = fields.take("joint_values").and_then(|node| joint(node, problems));
    let correlations =
        fields.take("correlations").map(|node| correlations(node, problems)).unwrap_or_default();
    let curves = fields.take("curves").map(|node| curves(node, tables, problems)).unwrap_or_default();
    let valid_over =
        fields.take("valid_over").map(|node| valid_over(node, tables, problems)).unwrap_or_default();
    let sources = fields.require("source", problems).map(|node| sources(node, &tables.works, problems));
    let meaning = text_of(fields, "meaning", problems);
    let exceptions = text_of(fields, "exceptions", problems);
    let id = id_node?.text("the id", problems)?;
    let fine = id.starts_with(|c: char| c.is_ascii_lowercase())
        && id.chars().all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-');
    if !fine {
        problems.push(
            Problem::at(id_node?.place(), format!("`{id}` cannot be an id"))
                .expected("lower-case letters, digits and hyphens, a letter first"),
        );
    }
    Some(Entry {
        id: id.to_owned(),
        title: title.unwrap_or_else(|| id.replace('-', " ")),
        family: family.unwrap_or_default(),
        condition,
        basis: basis?,
        parameters,
        joint,
        correlations,
        curves,
        valid_over,
        sources: sources?,
        meaning,
        exceptions,
        place: node.place(),
        overlaid: file.overlaid,
    })
}

fn clauses(node: &Node, excluded: bool, tables: &Tables, condition: &mut Condition, problems: &mut Problems) {
    let Kind::Map(entries) = &node.kind else {
        problems.push(
            Problem::at(node.place(), format!("the condition is {}", node.describe()))
                .expected("a map from attribute to one word or a list of words"),
        );
        return;
    };
    for (key, value) in entries {
        let Some(attribute) = key.text("an attribute", problems) else { continue };
        let Some(known) = tables.attributes.get(attribute) else {
            problems.push(
                Problem::at(key.place(), format!("`{attribute}` is not an attribute"))
                    .nearest(nearest(attribute, tables.attributes.keys().map(String::as_str))),
            );
            continue;
        };
        let mut words = Vec::new();
        for item in value.list("the words", true, problems).unwrap_or_default() {
            let Some(word) = item.text("a word", problems) else { continue };
            if !known.words.contains_key(word) {
                problems.push(
                    Problem::at(item.place(), format!("`{word}` is not a word of `{attribute}`"))
                        .nearest(nearest(word, known.words.keys().map(String::as_str))),
                );
            }
            words.push(word.to_owned());
        }
        condition.clauses.push(Clause { attribute: attribute.to_owned(), words, excluded });
    }
}

/// The entries of a map under one key of an entry.
fn map<'a>(node: &'a Node, what: &str, problems: &mut Problems) -> Vec<(&'a str, &'a Node, &'a Node)> {
    if let Kind::Map(entries) = &node.kind {
        entries.iter().filter_map(|(key, value)| Some((key.text("a name", problems)?, key, value))).collect()
    } else {
        problems.push(Problem::at(node.place(), format!("{what} is {}", node.describe())).expected("a map"));
        Vec::new()
    }
}

fn parameters(node: &Node, tables: &Tables, problems: &mut Problems) -> BTreeMap<String, Parameter> {
    let mut read = BTreeMap::new();
    for (name, key, value) in map(node, "`parameters`", problems) {
        check_name(name, key, problems);
        check_shadow(name, key, tables, problems);
        if let Some(parameter) = parameter(name, value, tables, problems) {
            read.insert(name.to_owned(), parameter);
        }
    }
    read
}

/// One name means one thing: a parameter may not have the name of a quantity, a constant or a function.
fn check_shadow(name: &str, key: &Node, tables: &Tables, problems: &mut Problems) {
    let what = if tables.quantities.contains_key(name) {
        "a quantity"
    } else if tables.constants.contains_key(name) {
        "a constant"
    } else if crate::formula::Function::from_name(name).is_some() {
        "a function"
    } else {
        return;
    };
    problems.push(
        Problem::at(key.place(), format!("`{name}` is {what} already"))
            .expected("another name: one name means one thing everywhere"),
    );
}

fn parameter(name: &str, node: &Node, tables: &Tables, problems: &mut Problems) -> Option<Parameter> {
    // `{ value: ..., about: ... }` with more than a written value may hold, or a written value alone.
    let details = matches!(&node.kind, Kind::Map(entries) if entries.iter().any(|(key, _)| {
        matches!(&key.kind, Kind::Scalar(scalar) if scalar.text == "value")
    }));
    let (mut about, mut own_basis, mut own_provenance) = (None, None, Default::default());
    let mut value_node = node;
    if details {
        let mut fields = Fields::of(node, "a parameter", problems)?;
        value_node = fields.require("value", problems)?;
        about = text_of(&mut fields, "about", problems);
        own_basis = fields.take("basis").and_then(|node| basis(node, problems));
        own_provenance = provenance(&mut fields, &tables.works, problems);
        fields.finish(problems);
    }
    let mut unit: Option<Unit> = None;
    let value = by_attribute(value_node, tables, problems, |node, problems| {
        let reading = any_value(name, node, false, problems)?;
        match &unit {
            Some(first) if first.dimension() != reading.unit.dimension() => {
                problems.push(Problem::at(
                    node.place(),
                    format!(
                        "`{name}` is {} here and {} elsewhere",
                        reading.unit.dimension(),
                        first.dimension()
                    ),
                ));
            }
            _ => unit = Some(reading.unit),
        }
        distribution(reading.value)
    })?;
    Some(Parameter { value, unit: unit?, about, basis: own_basis, provenance: own_provenance })
}

fn distribution(value: Value) -> Option<Distribution> {
    match value {
        Value::Unknown(distribution) => Some(distribution),
        // `any_value` was asked to refuse these.
        Value::Free(_) => None,
    }
}

fn joint(node: &Node, problems: &mut Problems) -> Option<Joint> {
    let sets = node.list("`joint_values`", false, problems)?;
    let mut joint = Joint::default();
    let mut weights = Vec::new();
    for (number, set) in sets.iter().enumerate() {
        let mut weight = 1.0;
        let mut names = 0;
        for (name, key, value) in map(set, "a set", problems) {
            if name == "weight" {
                weight = exact(name, value, Dimension::NONE, problems).unwrap_or(1.0);
                continue;
            }
            check_name(name, key, problems);
            let reading = any_value(name, value, false, problems)?;
            let Value::Unknown(Distribution::Exact(si)) = reading.value else {
                problems.push(Problem::at(value.place(), format!("`{name}` is not one exact value")));
                return None;
            };
            names += 1;
            let dimension = reading.unit.dimension();
            let unit = joint.units.entry(name.to_owned()).or_insert(reading.unit);
            if unit.dimension() != dimension {
                problems
                    .push(Problem::at(value.place(), format!("`{name}` is {} elsewhere", unit.dimension())));
            }
            let values = joint.values.entry(name.to_owned()).or_default();
            if values.len() != number {
                problems.push(Problem::at(value.place(), format!("`{name}` is missing in an earlier set")));
                return None;
            }
            values.push(si);
        }
        if names != joint.values.len() || weight.is_nan() || weight <= 0.0 {
            problems.push(
                Problem::at(set.place(), "the sets do not hold the same names, or a weight is not positive")
                    .expected("every name in every set, weights above 0"),
            );
            return None;
        }
        weights.push(weight);
    }
    let total: f64 = weights.iter().sum();
    let mut sum = 0.0;
    joint.cumulated = weights
        .iter()
        .map(|weight| {
            sum += weight / total;
            sum
        })
        .collect();
    if let Some(last) = joint.cumulated.last_mut() {
        *last = 1.0;
    }
    (!joint.values.is_empty()).then_some(joint)
}

/// Correlations of an entry or a candidate: `[{ between: [a, b], coefficient: 0.4 }]`.
pub(crate) fn correlations(node: &Node, problems: &mut Problems) -> Vec<Correlation> {
    let mut read = Vec::new();
    for item in node.list("`correlations`", false, problems).unwrap_or_default() {
        let Some(mut fields) = Fields::of(item, "a correlation", problems) else { continue };
        let between = fields.require("between", problems);
        let coefficient = fields.require("coefficient", problems);
        fields.finish(problems);
        let (Some(between), Some(coefficient)) = (between, coefficient) else { continue };
        let names: Vec<String> = between
            .list("`between`", false, problems)
            .unwrap_or_default()
            .into_iter()
            .filter_map(|node| node.text("a name", problems).map(str::to_owned))
            .collect();
        let value = exact("coefficient", coefficient, Dimension::NONE, problems);
        let (Ok(mut between_names), Some(value)) = (<[String; 2]>::try_from(names), value) else {
            problems
                .push(Problem::at(between.place(), "a correlation is between two names").expected("[a, b]"));
            continue;
        };
        between_names.sort();
        if between_names[0] == between_names[1] {
            problems.push(Problem::at(between.place(), format!("`{}` stands here twice", between_names[0])));
        }
        if !(value > -1.0 && value < 1.0) {
            problems.push(
                Problem::at(coefficient.place(), format!("the coefficient is {value}"))
                    .expected("a number strictly between -1 and 1"),
            );
            continue;
        }
        read.push(Correlation { between: between_names, coefficient: value });
    }
    read
}

fn curves(node: &Node, tables: &Tables, problems: &mut Problems) -> BTreeMap<String, Arc<Curve>> {
    let mut read = BTreeMap::new();
    for (name, key, value) in map(node, "`curves`", problems) {
        check_name(name, key, problems);
        check_shadow(name, key, tables, problems);
        if let Some(curve) = curve(name, value, tables, problems) {
            read.insert(name.to_owned(), Arc::new(curve));
        }
    }
    read
}

fn curve(name: &str, node: &Node, tables: &Tables, problems: &mut Problems) -> Option<Curve> {
    let mut fields = Fields::of(node, "a curve", problems)?;
    let of = fields.require("of", problems);
    let at = fields.require("at", problems);
    let gives = fields.require("gives", problems);
    let pair = |argument, value| Axes { argument, value };
    let axes = [
        ("linear-linear", pair(Scale::Linear, Scale::Linear)),
        ("linear-log", pair(Scale::Linear, Scale::Log)),
        ("log-linear", pair(Scale::Log, Scale::Linear)),
        ("log-log", pair(Scale::Log, Scale::Log)),
        ("reciprocal-linear", pair(Scale::Reciprocal, Scale::Linear)),
        ("reciprocal-log", pair(Scale::Reciprocal, Scale::Log)),
    ];
    let axes =
        fields.require("axes", problems).and_then(|node| word(node, "a pair of axes", &axes, problems));
    let between = [("straight", Between::Straight), ("monotone", Between::Monotone)];
    let between = fields
        .require("between", problems)
        .and_then(|node| word(node, "a way between points", &between, problems));
    let outside = [("refuse", Outside::Refuse), ("edge", Outside::Edge)];
    let outside =
        fields.require("outside", problems).and_then(|node| word(node, "a way outside", &outside, problems));
    fields.finish(problems);
    let of_name = of?.text("`of`", problems)?;
    if !tables.quantities.contains_key(of_name) {
        problems.push(
            Problem::at(of?.place(), format!("`{of_name}` is not a quantity"))
                .nearest(nearest(of_name, tables.quantities.keys().map(String::as_str))),
        );
        return None;
    }
    let (argument, at) = points(name, at?, problems)?;
    let (value, gives_values) = points(name, gives?, problems)?;
    if argument != tables.quantities[of_name].dimension() {
        problems.push(Problem::at(node.place(), format!("the points of `{name}` are {argument}")));
        return None;
    }
    if at.len() != gives_values.len() {
        problems.push(Problem::at(
            node.place(),
            format!("the curve `{name}` has {} points and {} values", at.len(), gives_values.len()),
        ));
        return None;
    }
    let points: Vec<(f64, f64)> = at.into_iter().zip(gives_values).collect();
    let form = Form { argument, value, axes: axes?, between: between?, outside: outside? };
    Curve::new(form, &points)
        .map_err(|fault| problems.push(Problem::at(node.place(), format!("the curve `{name}`: {fault}"))))
        .ok()
}

fn points(name: &str, node: &Node, problems: &mut Problems) -> Option<(Dimension, Vec<f64>)> {
    let mut dimension = None;
    let mut values = Vec::new();
    for item in node.list("the points", false, problems)? {
        let reading = any_value(name, item, false, problems)?;
        let Value::Unknown(Distribution::Exact(si)) = reading.value else {
            problems.push(Problem::at(item.place(), "a point is not one exact value"));
            return None;
        };
        if *dimension.get_or_insert(reading.unit.dimension()) != reading.unit.dimension() {
            problems.push(Problem::at(item.place(), format!("this point is {}", reading.unit.dimension())));
            return None;
        }
        values.push(si);
    }
    Some((dimension?, values))
}

fn valid_over(node: &Node, tables: &Tables, problems: &mut Problems) -> BTreeMap<String, (f64, f64)> {
    let mut read = BTreeMap::new();
    for (name, key, value) in map(node, "`valid_over`", problems) {
        let Some(quantity) = tables.quantities.get(name) else {
            problems.push(
                Problem::at(key.place(), format!("`{name}` is not a quantity"))
                    .nearest(nearest(name, tables.quantities.keys().map(String::as_str))),
            );
            continue;
        };
        let ends: Option<Vec<f64>> = value.list("the range", false, problems).map(|ends| {
            ends.into_iter().filter_map(|end| exact(name, end, quantity.dimension(), problems)).collect()
        });
        match ends.as_deref() {
            Some([low, high]) if low < high => {
                read.insert(name.to_owned(), (*low, *high));
            }
            _ => problems.push(
                Problem::at(value.place(), format!("the range of `{name}` cannot be read"))
                    .expected("[low, high], low below high"),
            ),
        }
    }
    read
}

fn formula(node: &Node, scope: &EntryScope<'_>, problems: &mut Problems) -> Option<Formula> {
    let text = match &node.kind {
        Kind::Scalar(scalar) => &scalar.text,
        _ => {
            problems.push(
                Problem::at(node.place(), format!("the formula is {}", node.describe())).expected(
                    "one text: a formula that holds `[`, `,` or `: ` stands in quotes or below a `|`",
                ),
            );
            return None;
        }
    };
    Formula::read(text, scope)
        .map_err(|faults| faults.into_iter().for_each(|fault| problems.push(node.problem(fault))))
        .ok()
}

type RelationParts = (String, RelationKind, u32, Formula, Option<ByAttribute<f64>>);

fn relation(
    fields: &mut Fields<'_>,
    scope: &EntryScope<'_>,
    problems: &mut Problems,
) -> Option<RelationParts> {
    let gives_node = fields.require("gives", problems);
    let kind = fields.require("kind", problems).and_then(|node| kind(node, problems));
    let rank = fields.take("rank").and_then(|node| {
        let text = node.text("the rank", problems)?;
        text.parse::<u32>()
            .map_err(|_| {
                problems.push(Problem::at(node.place(), format!("the rank `{text}` is no whole number")))
            })
            .ok()
    });
    let formula_node = fields.require("formula", problems);
    let scatter = scatter(fields, scope, problems);
    let formula = formula(formula_node?, scope, problems);
    let gives = gives_node?.text("`gives`", problems)?;
    let Some(quantity) = scope.tables.quantities.get(gives) else {
        problems.push(
            Problem::at(gives_node?.place(), format!("`{gives}` is not a quantity"))
                .nearest(nearest(gives, scope.tables.quantities.keys().map(String::as_str))),
        );
        return None;
    };
    let formula = formula?;
    if !formula.fits(quantity.dimension()) {
        problems.push(
            Problem::at(formula_node?.place(), format!("the formula gives {}", dimension_text(&formula)))
                .expected(format!("{}, which `{gives}` is", quantity.dimension())),
        );
        return None;
    }
    Some((gives.to_owned(), kind?, rank.unwrap_or(1), formula, scatter))
}

fn kind(node: &Node, problems: &mut Problems) -> Option<RelationKind> {
    let kinds = [("definition", RelationKind::Definition), ("law", RelationKind::Law)];
    word(node, "a kind of relation", &kinds, problems)
}

fn scatter(
    fields: &mut Fields<'_>,
    scope: &EntryScope<'_>,
    problems: &mut Problems,
) -> Option<ByAttribute<f64>> {
    let node = fields.take("scatter")?;
    by_attribute(node, scope.tables, problems, |node, problems| {
        let dex = exact("scatter", node, Dimension::NONE, problems)?;
        if dex < 0.0 {
            problems.push(
                Problem::at(node.place(), "the scatter is negative").expected("a standard deviation in dex"),
            );
        }
        Some(dex)
    })
}

fn dimension_text(formula: &Formula) -> String {
    formula
        .dimension()
        .map_or_else(|| "a number of any dimension".to_owned(), |dimension| dimension.to_string())
}

type ConstraintParts = ([Side; 2], Unit, Option<ByAttribute<String>>);

fn constraint(
    node: &Node,
    fields: &mut Fields<'_>,
    scope: &EntryScope<'_>,
    problems: &mut Problems,
) -> Option<ConstraintParts> {
    let available = fields.require("available", problems).and_then(|node| side(node, scope, problems));
    let required = fields.require("required", problems).and_then(|node| side(node, scope, problems));
    let unit = fields.take("unit").and_then(|node| unit(node, problems));
    let speaks_of = fields.take("speaks_of").and_then(|node| {
        by_attribute(node, scope.tables, problems, |node, problems| {
            let name = node.text("`speaks_of`", problems)?;
            if !scope.tables.quantities.contains_key(name) {
                problems.push(
                    Problem::at(node.place(), format!("`{name}` is not a quantity"))
                        .nearest(nearest(name, scope.tables.quantities.keys().map(String::as_str))),
                );
            }
            Some(name.to_owned())
        })
    });
    if scope.entry.meaning.is_none() {
        problems
            .push(Problem::at(node.place(), format!("the constraint `{}` has no `meaning`", scope.entry.id)));
    }
    if scope.entry.family.is_empty() {
        problems
            .push(Problem::at(node.place(), format!("the constraint `{}` has no `family`", scope.entry.id)));
    }
    let (available, required) = (available?, required?);
    let dimension = match (available.formula.dimension(), required.formula.dimension()) {
        (Some(a), Some(b)) if a != b => {
            problems.push(
                Problem::at(
                    node.place(),
                    format!("the sides of `{}` differ: {a} against {b}", scope.entry.id),
                )
                .expected("two formulas of one dimension"),
            );
            return None;
        }
        (Some(dimension), _) | (None, Some(dimension)) => dimension,
        (None, None) => Dimension::NONE,
    };
    let unit = unit.unwrap_or_else(|| unit_of_sides(scope.tables, &available, &required, dimension));
    if unit.dimension() != dimension {
        problems.push(
            Problem::at(node.place(), format!("the unit of `{}` is {}", scope.entry.id, unit.dimension()))
                .expected(format!("a unit of {dimension}")),
        );
        return None;
    }
    Some(([available, required], unit, speaks_of))
}

/// The unit of the quantity that a side is, else of a quantity in the sides that has their dimension, else SI's.
fn unit_of_sides(tables: &Tables, available: &Side, required: &Side, dimension: Dimension) -> Unit {
    let sides = [available, required];
    let alone = sides.iter().filter_map(|side| match &side.formula.root().kind {
        ExprKind::Name(name) => Some(name.as_str()),
        _ => None,
    });
    let within = sides.iter().flat_map(|side| side.formula.names());
    alone
        .chain(within)
        .filter_map(|name| tables.quantities.get(name))
        .map(|quantity| &quantity.unit)
        .find(|unit| unit.dimension() == dimension)
        .cloned()
        .unwrap_or_else(|| Unit::coherent(dimension))
}

fn side(node: &Node, scope: &EntryScope<'_>, problems: &mut Problems) -> Option<Side> {
    let mut fields = Fields::of(node, "a side", problems)?;
    let says =
        fields.require("says", problems).and_then(|node| node.text("`says`", problems)).map(str::to_owned);
    let formula = fields.require("formula", problems).and_then(|node| formula(node, scope, problems));
    fields.finish(problems);
    Some(Side { says: says?, formula: formula? })
}

type FigureParts = (Option<RelationKind>, Formula, Option<ByAttribute<f64>>, Unit);

fn figure(fields: &mut Fields<'_>, scope: &EntryScope<'_>, problems: &mut Problems) -> Option<FigureParts> {
    let kind = fields.take("kind").and_then(|node| kind(node, problems));
    let scatter = scatter(fields, scope, problems);
    let formula_node = fields.require("formula", problems);
    let unit = fields.require("unit", problems).and_then(|node| unit(node, problems));
    let formula = formula(formula_node?, scope, problems)?;
    let unit = unit?;
    if !formula.fits(unit.dimension()) {
        problems.push(
            Problem::at(formula_node?.place(), format!("the formula gives {}", dimension_text(&formula)))
                .expected(format!("{}, which the unit says", unit.dimension())),
        );
        return None;
    }
    Some((kind, formula, scatter, unit))
}

fn habitat(node: &Node, tables: &Tables, problems: &mut Problems) -> Option<Habitat> {
    let mut fields = Fields::of(node, "a habitat", problems)?;
    let about =
        fields.require("about", problems).and_then(|node| node.text("about", problems)).map(str::to_owned);
    let environment_node = fields.require("environment", problems);
    let sources =
        fields.take("source").map(|node| sources(node, &tables.works, problems)).unwrap_or_default();
    fields.finish(problems);
    let mut environment: BTreeMap<String, Reading> = BTreeMap::new();
    for (name, key, value) in map(environment_node?, "`environment`", problems) {
        match tables.quantities.get(name) {
            Some(quantity) if quantity.of == Of::Environment => {
                let wanted = Wanted {
                    name,
                    dimension: quantity.dimension(),
                    bounds: quantity.bounds,
                    unit: &quantity.unit,
                    may_be_free: false,
                    folder: None,
                };
                if let Some(reading) = written::read(value, &wanted, problems) {
                    environment.insert(name.to_owned(), reading);
                }
            }
            Some(_) => {
                problems.push(Problem::at(
                    key.place(),
                    format!("`{name}` is of the organism, not of its environment"),
                ));
            }
            None => problems.push(
                Problem::at(key.place(), format!("`{name}` is not a quantity"))
                    .nearest(nearest(name, tables.quantities.keys().map(String::as_str))),
            ),
        }
    }
    Some(Habitat { about: about?, environment, sources })
}
