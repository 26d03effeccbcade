//! The files that are lists of entries: relations, constraints, figures; and the habitats.

use std::collections::{BTreeMap, BTreeSet};

use super::basis::Basis;
use super::condition::{Clause, Condition};
use super::entry::{ByAttribute, Constraint, Entry, Figure, Habitat, Of, Relation, RelationKind, Side};
use super::files::{File, Holds};
use super::read_numbers;
use super::read_tables::{
    ATTRIBUTE, QUANTITY, Seen, Tables, basis, by_attribute, exact, for_each_key, known_word, named,
    one_of_bases, sources, text_of, unit, word,
};
use crate::formula::{ExprKind, Formula, Scope};
use crate::quantity::written::{self, Reading};
use crate::quantity::{Dimension, Unit};
use crate::text::{Fields, Kind, Node, Problem, Problems, yaml};

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
                yaml::each_document(&file.source, problems, |_, document, problems| {
                    let Kind::List(list) = &document.kind else {
                        let problem = Problem::at(document.place(), document.instead("the file"));
                        problems.push(problem.expected("a list of entries, each begun by `- id: ...`"));
                        return;
                    };
                    for node in list {
                        if problems.is_full() {
                            return;
                        }
                        read_one(node, file, tables, &mut seen, &mut entries, problems);
                    }
                });
            }
            Holds::Habitats => for_each_key(file, &mut seen, problems, |name, _, node, problems| {
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
    let before = problems.len();
    let Some(mut fields) = Fields::of(node, what, problems) else { return };
    let Some(id) = id(node, &mut fields, file, seen, problems) else { return };
    let (entry, broken) = entry(&id, node, &mut fields, file, tables, problems);
    let scope = EntryScope { tables, entry: &entry, broken: &broken };
    let mut relations = None;
    let mut constraints = None;
    let mut figures = None;
    match file.holds {
        Holds::Relations => relations = relation(&mut fields, &scope, problems),
        Holds::Constraints => constraints = constraint(node, &mut fields, &scope, problems),
        _ => figures = figure(&mut fields, &scope, problems),
    }
    fields.finish(problems);
    // An entry with a problem is left out, so that it is not also held against the others.
    if problems.len() > before {
        return;
    }
    if file.overlaid {
        entries.overlaid.insert(id.clone());
    }
    if let Some((gives, kind, rank, formula, scatter)) = relations {
        entries.relations.insert(id, Relation { gives, kind, rank, formula, scatter, entry });
    } else if let Some(([available, required], unit, speaks_of)) = constraints {
        entries.constraints.insert(id, Constraint { available, required, unit, speaks_of, entry });
    } else if let Some((kind, formula, scatter, unit)) = figures {
        entries.figures.insert(id, Figure { kind, formula, scatter, unit, entry });
    }
}

/// What the names in an entry's formulas mean.
struct EntryScope<'a> {
    tables: &'a Tables,
    entry: &'a Entry,
    /// Names of the entry whose numbers could not be read: what is wrong with them has been said.
    broken: &'a BTreeSet<String>,
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

fn id(
    node: &Node,
    fields: &mut Fields<'_>,
    file: &File,
    seen: &mut Seen,
    problems: &mut Problems,
) -> Option<String> {
    let id_node = fields.require("id", problems)?;
    let id = id_node.text("`id`", problems)?;
    let fine = id.starts_with(|c: char| c.is_ascii_lowercase())
        && id.chars().all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-');
    if !fine {
        problems.push(
            Problem::at(id_node.place(), format!("`{id}` cannot be an id"))
                .expected("lower-case letters, digits and hyphens, a letter first"),
        );
    }
    seen.add(file.holds, id, file.overlaid, node, problems);
    Some(id.to_owned())
}

/// What all entries have in common, and the names of its numbers that could not be read.
fn entry(
    id: &str,
    node: &Node,
    fields: &mut Fields<'_>,
    file: &File,
    tables: &Tables,
    problems: &mut Problems,
) -> (Entry, BTreeSet<String>) {
    let title = text_of(fields, "title", problems);
    let family = text_of(fields, "family", problems);
    let mut condition = Condition::default();
    for (key, excluded) in [("applies_to", false), ("except", true)] {
        if let Some(node) = fields.take(key) {
            clauses(node, excluded, tables, &mut condition, problems);
        }
    }
    let basis =
        fields.require_like("basis", &one_of_bases(), problems).and_then(|node| basis(node, problems));
    let numbers = read_numbers::read(id, fields, tables, problems);
    let sources = fields
        .require_like("source", "`source: ...`, one or more keys of sources.yaml", problems)
        .map(|node| sources(node, &tables.works, problems));
    let meaning = text_of(fields, "meaning", problems);
    let exceptions = text_of(fields, "exceptions", problems);
    let entry = Entry {
        id: id.to_owned(),
        title: title.unwrap_or_else(|| id.replace('-', " ")),
        family: family.unwrap_or_default(),
        condition,
        // One that is missing has been reported; the entry is then left out.
        basis: basis.unwrap_or(Basis::Empirical),
        parameters: numbers.parameters,
        joint: numbers.joint,
        correlations: numbers.correlations,
        curves: numbers.curves,
        valid_over: numbers.valid_over,
        sources: sources.unwrap_or_default(),
        meaning,
        exceptions,
        place: node.place(),
        places: numbers.places,
        overlaid: file.overlaid,
    };
    (entry, numbers.broken)
}

fn clauses(node: &Node, excluded: bool, tables: &Tables, condition: &mut Condition, problems: &mut Problems) {
    let what = if excluded { "`except`" } else { "`applies_to`" };
    let Some(entries) = node.map(what, "a map from attribute to one word or a list of words", problems)
    else {
        return;
    };
    for (key, value) in entries {
        let Some(attribute) = key.text("an attribute", problems) else { continue };
        let Some(known) = named(attribute, ATTRIBUTE, key, &tables.attributes, problems) else { continue };
        let mut words = Vec::new();
        for item in value.list("the words", true, problems).unwrap_or_default() {
            let Some(word) = item.text("a word", problems) else { continue };
            known_word(word, attribute, known, item, problems);
            words.push(word.to_owned());
        }
        condition.clauses.push(Clause { attribute: attribute.to_owned(), words, excluded });
    }
}

fn formula(node: &Node, scope: &EntryScope<'_>, problems: &mut Problems) -> Option<Formula> {
    let Kind::Scalar(scalar) = &node.kind else {
        let expected = match node.kind {
            Kind::Null => "an expression such as `2 * diameter`",
            _ => "one text: a formula that holds `[`, `,` or `: ` stands in quotes or below a `|`",
        };
        problems.push(Problem::at(node.place(), node.instead("the formula")).expected(expected));
        return None;
    };
    let text = &scalar.text;
    let rest = node.source.text[node.span.end..].trim_start();
    if rest.starts_with(',') && text.matches('(').count() > text.matches(')').count() {
        problems.push(
            Problem::at(node.place(), "the formula ends at a comma, which separates entries inside brackets")
                .expected("quotes around the formula, or the entries on lines of their own"),
        );
        return None;
    }
    let faults = match Formula::read(text, scope) {
        Ok(formula) => return Some(formula),
        Err(faults) => faults,
    };
    let is_known = |name: Option<&str>| name.is_some_and(|name| scope.broken.contains(name));
    for fault in faults.into_iter().filter(|fault| !is_known(text.get(fault.span.clone()))) {
        problems.push(node.problem(fault));
    }
    None
}

type RelationParts = (String, RelationKind, u32, Formula, Option<ByAttribute<f64>>);

fn relation(
    fields: &mut Fields<'_>,
    scope: &EntryScope<'_>,
    problems: &mut Problems,
) -> Option<RelationParts> {
    let gives_node = fields.require("gives", problems);
    let kind = fields
        .require_like("kind", "`kind: definition` or `kind: law`", problems)
        .and_then(|node| kind(node, problems));
    let rank = fields.take("rank").and_then(|node| {
        let text = node.text("the rank", problems)?;
        text.parse::<u32>()
            .map_err(|_| {
                problems.push(
                    Problem::at(node.place(), format!("the rank `{text}` is no whole number"))
                        .expected("a whole number; the lowest is preferred"),
                );
            })
            .ok()
    });
    let formula_node = fields.require("formula", problems);
    let scatter = scatter(fields, scope, problems);
    let formula = formula(formula_node?, scope, problems);
    let gives = gives_node?.text("`gives`", problems)?;
    let quantity = named(gives, QUANTITY, gives_node?, &scope.tables.quantities, problems)?;
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
    let [available, required] = ["available", "required"].map(|key| {
        let expected = format!("`{key}: {SIDE}`");
        let node = fields.require_like(key, &expected, problems)?;
        side(&format!("`{key}`"), node, scope, problems)
    });
    let unit_node = fields.take("unit");
    let unit = unit_node.and_then(|node| unit(node, problems));
    let speaks_of = fields.take("speaks_of").and_then(|node| {
        by_attribute(node, scope.tables, problems, |node, problems| {
            let name = node.text("`speaks_of`", problems)?;
            named(name, QUANTITY, node, &scope.tables.quantities, problems)?;
            Some(name.to_owned())
        })
    });
    let _ = fields.require_like("meaning", "`meaning: ...`, a sentence for the reports", problems);
    let _ = fields.require_like("family", "`family: ...`, what belongs together in reports", problems);
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
            Problem::at(
                unit_node.unwrap_or(node).place(),
                format!("the unit of `{}` is {}", scope.entry.id, unit.dimension()),
            )
            .expected(format!("a unit of {dimension}, as its sides are")),
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

/// A side as it is written.
const SIDE: &str = "{ says: words, formula: ... }";

fn side(what: &str, node: &Node, scope: &EntryScope<'_>, problems: &mut Problems) -> Option<Side> {
    node.map(what, &format!("`{SIDE}`"), problems)?;
    let mut fields = Fields::of(node, what, problems)?;
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
        fields.require("about", problems).and_then(|node| node.text("`about`", problems)).map(str::to_owned);
    let environment_node = fields.require("environment", problems);
    let sources =
        fields.take("source").map(|node| sources(node, &tables.works, problems)).unwrap_or_default();
    fields.finish(problems);
    let mut environment: BTreeMap<String, Reading> = BTreeMap::new();
    let entries = environment_node?.map("`environment`", "a map from quantity to value", problems)?;
    for (key, value) in entries {
        let Some(name) = key.text("a quantity", problems) else { continue };
        let Some(quantity) = named(name, QUANTITY, key, &tables.quantities, problems) else { continue };
        if quantity.of == Of::Organism {
            problems.push(
                Problem::at(key.place(), format!("`{name}` is of the organism, not of its environment"))
                    .expected("quantities of the environment"),
            );
            continue;
        }
        if let Some(reading) = written::read(value, &quantity.wanted(false, None), problems) {
            environment.insert(name.to_owned(), reading);
        }
    }
    Some(Habitat { about: about?, environment, sources })
}
