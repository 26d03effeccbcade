//! What decides: the formulas of one limit as evaluated, and every number put into them, down to what was stated.

use std::collections::BTreeSet;

use super::escaping::{block, inline};
use super::{Numbered, table};
use crate::judge::Assessment;
use crate::judge::assessment::{ParameterResult, QuantityResult};
use crate::report::words;

pub(super) fn text(a: &Assessment, numbered: &Numbered<'_>) -> String {
    let Some(result) = words::binding_result(a) else {
        return "Nothing: no limit could be assessed.\n".to_owned();
    };
    let mut out = String::new();
    if let Some(sentence) = words::binding(a) {
        out += &format!("{}\n", inline(&sentence));
    }
    out += &format!("\n{}\n", inline(&result.meaning));
    if let Some(exceptions) = &result.exceptions {
        out += &format!("\nExceptions: {}\n", inline(exceptions));
    }
    if let Some(text) = words::speaks_of(a, result) {
        out += &format!("\nIt speaks of {}.\n", inline(&text));
    }
    for (side, says, formula, tex) in [
        ("Available", &result.available_says, &result.available_formula, &result.available_tex),
        ("Required", &result.required_says, &result.required_formula, &result.required_tex),
    ] {
        out += &format!("\n{side}, {}, as evaluated and as TeX:\n\n{}", inline(says), block("text", formula));
        out += &format!("\n{}", block("math", tex));
    }
    let rows = numbers(a, &[&result.available_formula, &result.required_formula], &result.parameters);
    if !rows.is_empty() {
        out += "\nNumbers put in, medians with 90 % intervals:\n";
        out += &table(&["Name", "Value", "From", "Formula"], rows);
    }
    let sources = numbered.of_result(result);
    if !sources.is_empty() {
        out += &format!("\nSources: {sources}.\n");
    }
    out
}

/// A row for every number in the formulas and in the formulas behind those, each once.
fn numbers(a: &Assessment, formulas: &[&String], parameters: &[ParameterResult]) -> Vec<Vec<String>> {
    let mut rows: Vec<Vec<String>> = parameters.iter().map(|one| parameter("", one)).collect();
    let mut waiting: Vec<&str> = formulas.iter().rev().map(|formula| formula.as_str()).collect();
    let mut seen = BTreeSet::new();
    while let Some(formula) = waiting.pop() {
        let mut behind = Vec::new();
        for name in names(formula) {
            let Some(q) = a.quantities.iter().find(|q| q.name == name) else { continue };
            if !seen.insert(name) {
                continue;
            }
            rows.push(quantity(q));
            if let Some(working) = &q.working {
                rows.extend(working.parameters.iter().map(|one| parameter(&q.name, one)));
                behind.push(working.formula.as_str());
            }
        }
        waiting.extend(behind.into_iter().rev());
    }
    rows
}

fn quantity(q: &QuantityResult) -> Vec<String> {
    let formula = q.working.as_ref().map(|working| format!("`{}`", working.formula));
    vec![format!("`{}`", q.name), words::worked_out(q), words::origin(q), formula.unwrap_or_default()]
}

fn parameter(of: &str, one: &ParameterResult) -> Vec<String> {
    let value = words::with_interval([one.median, one.low, one.high], &one.unit);
    let from = if of.is_empty() { "parameter".to_owned() } else { format!("parameter, for `{of}`") };
    vec![format!("`{}`", one.name), value, from, String::new()]
}

/// The names in a formula, in the order of their first use, functions and units among them.
fn names(formula: &str) -> Vec<&str> {
    let mut out = Vec::new();
    for word in formula.split(|c: char| !(c.is_ascii_alphanumeric() || c == '_')) {
        if word.starts_with(|c: char| c.is_ascii_alphabetic()) && !out.contains(&word) {
            out.push(word);
        }
    }
    out
}
