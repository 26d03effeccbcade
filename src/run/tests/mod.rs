//! Tests of the engine as a whole, on small invented catalogues.

mod program;
mod rounds;
mod search;
mod splits;

use super::{Case, Settings};
use crate::candidate::{Candidate, read_file};
use crate::catalog::Catalog;
use crate::plan::Plan;
use crate::text::{Problems, Source};

const SOURCES: &str = "invented: { title: Invented for this test, standing: common-practice }\n";
const ATTRIBUTES: &str = "body_plan: { about: any, words: { other: any } }\n";

/// What a run needs of one candidate.
struct Ready {
    catalog: Catalog,

    plan: Plan,
    case: Case,
}

/// A candidate of a catalogue with these quantities and constraints; `organism` is the body of its map.
fn ready(quantities: &str, constraints: &str, organism: &str) -> Ready {
    try_ready(quantities, constraints, organism).unwrap_or_else(|problems| panic!("{problems}"))
}

/// As [`ready`], with what is wrong with the catalogue.
fn try_ready(quantities: &str, constraints: &str, organism: &str) -> Result<Ready, Problems> {
    let catalog = Catalog::from_texts(&[&[
        ("sources.yaml", SOURCES),
        ("attributes.yaml", ATTRIBUTES),
        ("quantities.yaml", quantities),
        ("constraints/test.yaml", constraints),
    ]])?;
    let candidate = candidate(&catalog, organism);
    let plan = Plan::new(&catalog, &candidate, &[])?;
    let case = Case::new(&catalog, &plan, &candidate);
    Ok(Ready { catalog, plan, case })
}

fn candidate(catalog: &Catalog, organism: &str) -> Candidate {
    let text =
        format!("hypobiont: 1\nname: test\nattributes: {{ body_plan: other }}\norganism: {{ {organism} }}\n");
    let mut problems = Problems::new();
    let mut read = read_file(&Source::new("candidate.yaml", text), None, catalog, &mut problems);
    assert!(problems.is_empty(), "{problems}");
    read.remove(0)
}

/// A constraint of this id.
fn constraint(id: &str, available: &str, required: &str, more: &str) -> String {
    format!(
        "- id: {id}
  title: {id}
  family: {id}
  basis: physical
  available: {{ says: has, formula: '{available}' }}
  required: {{ says: needs, formula: '{required}' }}
  meaning: Invented.
  source: invented
{more}"
    )
}

const fn settings(draws: Option<usize>) -> Settings {
    Settings { seed: 1, draws, pass_at: 0.95, fail_at: 0.05 }
}
