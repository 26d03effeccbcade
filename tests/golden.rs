//! Bits of margins: the same on every machine and in every version, unless a change is meant.

use hypobiont::candidate::{Candidate, read_file};
use hypobiont::catalog::Catalog;
use hypobiont::plan::Plan;
use hypobiont::run::{self, Case, Settings};
use hypobiont::text::{Problems, Source};

use crate::snapshot;

const SOURCES: &str = "invented: { title: Invented for this test, standing: common-practice }\n";
const ATTRIBUTES: &str = "body_plan: { about: any, words: { other: any, cell: any } }\n";
const QUANTITIES: &str = include_str!("golden/quantities.yaml");
const RELATIONS: &str = include_str!("golden/relations.yaml");
const CONSTRAINTS: &str = include_str!("golden/catalogue.yaml");
const CANDIDATE: &str = include_str!("golden/candidate.yaml");

/// Entries that do not touch the candidate's limits, and some that do but are not asked for.
const UNRELATED: &str = "
- id: a-before-all
  family: zero
  basis: physical
  available: { says: has, formula: length * luck }
  required: { says: needs, formula: width }
  parameters: { luck: 1 ×/÷ 3 }
  meaning: Invented.
  source: invented
- id: z-for-others
  family: zero
  applies_to: { body_plan: cell }
  basis: physical
  available: { says: has, formula: length }
  required: { says: needs, formula: width }
  meaning: Invented.
  source: invented
";

fn read(relations: &str, constraints: &[(&str, &str)], candidate: &str) -> (Catalog, Candidate) {
    let mut texts = vec![
        ("sources.yaml", SOURCES),
        ("attributes.yaml", ATTRIBUTES),
        ("quantities.yaml", QUANTITIES),
        ("relations/all.yaml", relations),
    ];
    texts.extend(constraints);
    let catalog = Catalog::from_texts(&[&texts]).unwrap_or_else(|problems| panic!("{problems}"));
    let mut problems = Problems::new();
    let mut read = read_file(&Source::new("candidate.yaml", candidate), None, &catalog, &mut problems);
    assert!(problems.is_empty(), "{problems}");
    (catalog, read.remove(0))
}

/// Of each limit of the golden catalogue: draws that hold, bits of the median margin and of its interval, and of both
/// sides in the first and the last draw; then the free numbers.
fn bits(catalog: &Catalog, candidate: &Candidate) -> String {
    let plan = Plan::new(catalog, candidate, &[]).unwrap_or_else(|problems| panic!("{problems}"));
    let mut case = Case::new(catalog, &plan, candidate);
    let _ = run::choose(&plan, &mut case, &run::streams(&plan, 1), 0.95);
    let settings = Settings { seed: 1, draws: Some(10_000), pass_at: 0.95, fail_at: 0.05 };
    let outcome = run::run(&plan, std::slice::from_ref(&case), settings).remove(0);
    let mut text = String::new();
    for (planned, statistics) in plan.constraints.iter().zip(&outcome.statistics) {
        let id = &catalog.constraints[planned.constraint].entry.id;
        if id.contains("-") {
            continue;
        }
        let side = |node: usize| outcome.values(node).map_or([case.scalars[node]; 2], |v| [v[0], v[9999]]);
        let ([has, has_last], [needs, needs_last]) = (side(planned.available), side(planned.required));
        text += &format!("{id} {}", statistics.holding);
        for value in [statistics.low, statistics.median, statistics.high, has, needs, has_last, needs_last] {
            text += &format!(" {:016x}", value.to_bits());
        }
        text.push('\n');
    }
    for (number, setting) in plan.free.iter().zip(&case.free) {
        text += &format!("{} = {:016x}\n", number.name, setting.value.to_bits());
    }
    text
}

#[test]
fn ten_margins_have_the_bits_they_had() {
    let (catalog, candidate) = read(RELATIONS, &[("constraints/all.yaml", CONSTRAINTS)], CANDIDATE);
    let found = bits(&catalog, &candidate);
    assert_eq!(found.lines().count(), 12);
    snapshot::compare("../golden/bits.txt", &found);
}

#[test]
fn other_entries_and_another_order_change_no_bit() {
    let (catalog, candidate) = read(RELATIONS, &[("constraints/all.yaml", CONSTRAINTS)], CANDIDATE);
    let first = bits(&catalog, &candidate);

    // Entries from the last to the first, split over two files, with others among them.
    let entries: Vec<String> =
        CONSTRAINTS.split("\n- id:").skip(1).map(|entry| format!("- id:{entry}\n")).collect();
    assert_eq!(entries.len(), 10);
    let half = |from: usize| entries[from..from + 5].iter().rev().cloned().collect::<String>();
    let (one, two) = (half(5) + UNRELATED, half(0));
    let others = "- id: unused-law\n  gives: share\n  kind: law\n  basis: physical\n  formula: ratio / 9\n  scatter: 0.3 dex\n  source: invented\n";
    let relations = format!("{others}{RELATIONS}");
    let constraints = [("constraints/b.yaml", one.as_str()), ("constraints/a.yaml", two.as_str())];
    let mut lines: Vec<&str> = CANDIDATE.lines().collect();
    lines[4..10].reverse();
    assert!(lines[4].contains("share") && lines[9].contains("length"), "the statements in another order");
    let (catalog, candidate) = read(&relations, &constraints, &lines.join("\n"));
    let found = bits(&catalog, &candidate);
    for (found, first) in found.lines().zip(first.lines()) {
        assert_eq!(found, first);
    }
    assert_eq!(found.len(), first.len());
}
