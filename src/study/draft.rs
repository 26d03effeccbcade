//! Drafts a candidate: what the limits of a body plan use, in the order of how many limits each opens.

use std::collections::{BTreeMap, BTreeSet};
use std::fmt::Write as _;

use crate::catalog::{Catalog, Condition, Entry, Of};
use crate::text::one_line;

/// A commented candidate for a body plan, as YAML that reads back without problems.
#[must_use]
pub fn draft(catalog: &Catalog, body_plan: &str) -> String {
    let opens = opens(catalog, body_plan);
    let mut text = String::new();
    // Writing to a string cannot fail.
    let mut line = |content: &str| {
        let _ = writeln!(text, "{content}");
    };
    line("hypobiont: 1");
    line("name: unnamed");
    line("attributes:");
    line(&format!("  body_plan: {body_plan}"));
    for (name, limits) in attributes_used(catalog, body_plan) {
        let attribute = &catalog.attributes[&name];
        let words: Vec<&str> = attribute.words.keys().map(String::as_str).collect();
        let default = attribute
            .default
            .as_ref()
            .map_or_else(|| "no default".to_owned(), |word| format!("default {word}"));
        line(&format!("  # {name}: {}   # {default}; asked for by {limits}", words.join(" | ")));
    }
    line("# A value is written 210 nm, 210 ± 30 nm, 210 nm ×/÷ 1.5, { min: 150 nm, max: 300 nm },");
    line("# or { anywhere_in: [150 nm, 300 nm] } where the organism may have any of these.");
    for (of, section) in [(Of::Organism, "organism"), (Of::Environment, "environment")] {
        line(&format!("{section}:"));
        let mut names: Vec<(&String, usize)> = opens
            .iter()
            .filter(|(name, _)| catalog.quantities[*name].of == of)
            .map(|(name, limits)| (name, limits.len()))
            .collect();
        names.sort_by(|a, b| b.1.cmp(&a.1).then(a.0.cmp(b.0)));
        for (name, limits) in names {
            let quantity = &catalog.quantities[name];
            let unit = quantity.unit.text();
            let about = one_line(&quantity.about);
            let assumed = if quantity.default.is_some() { "; assumed when not stated" } else { "" };
            line(&format!("  # {name}: _ {unit}   # {about}; limits opened: {limits}{assumed}"));
        }
    }
    text
}

/// Quantities that limits of the body plan can use, each with the ids of those limits.
#[must_use]
pub fn opens(catalog: &Catalog, body_plan: &str) -> BTreeMap<String, BTreeSet<String>> {
    let words = catalog.words();
    let asked = Condition::asking("body_plan", body_plan);
    let concerns = |entry: &Entry| entry.condition.overlaps(&asked, &words);
    let mut opens: BTreeMap<String, BTreeSet<String>> = BTreeMap::new();
    for constraint in catalog.constraints.iter().filter(|constraint| concerns(&constraint.entry)) {
        let mut waiting = catalog.quantities_of(&constraint.available.formula);
        waiting.extend(catalog.quantities_of(&constraint.required.formula));
        let mut seen = BTreeSet::new();
        while let Some(name) = waiting.pop() {
            if !seen.insert(name) {
                continue;
            }
            for relation in &catalog.relations {
                let fits = relation.gives == name
                    && relation.entry.condition.overlaps(&constraint.entry.condition, &words)
                    && concerns(&relation.entry);
                if fits {
                    waiting.extend(catalog.quantities_of(&relation.formula));
                }
            }
            opens.entry(name.to_owned()).or_default().insert(constraint.entry.id.clone());
        }
    }
    opens
}

/// Attributes that entries of the body plan ask for, the most asked first.
fn attributes_used(catalog: &Catalog, body_plan: &str) -> Vec<(String, usize)> {
    let words = catalog.words();
    let asked = Condition::asking("body_plan", body_plan);
    let mut counts: BTreeMap<String, usize> = BTreeMap::new();
    for entry in catalog.entries().filter(|entry| entry.condition.overlaps(&asked, &words)) {
        for clause in entry.condition.clauses.iter().filter(|clause| clause.attribute != "body_plan") {
            *counts.entry(clause.attribute.clone()).or_default() += 1;
        }
    }
    let mut counts: Vec<(String, usize)> = counts.into_iter().collect();
    counts.sort_by(|a, b| b.1.cmp(&a.1).then(a.0.cmp(&b.0)));
    counts
}
