//! The same input and seed give the same bits, whatever the threads, the order of entries or what else there is.

use crate::run::Run;

const CANDIDATE: &str = "hypobiont: 1
name: repeat
attributes: { body_plan: prokaryotic-cell, form: sphere }
organism:
  diameter: 330 ± 40 nm
  elongation_rate: { median: 12 aa/s, factor: 1.3 }
  doubling_time: 5 h ×/÷ 1.5
environment: { temperature: 20 ± 5 °C }
";

fn lines(run: &Run) -> String {
    let ended = run.output();
    assert_eq!(ended.status, Some(0), "{}", ended.stderr);
    ended.stdout
}

#[test]
fn the_number_of_threads_changes_nothing() {
    let run = |threads: &str| {
        lines(
            &Run::new("screen c.yaml --format json --draws 20000")
                .file("c.yaml", CANDIDATE)
                .variable("RAYON_NUM_THREADS", threads),
        )
    };
    let one = run("1");
    assert_eq!(one, run("2"));
    assert_eq!(one, run("5"));
}

#[test]
fn another_seed_gives_other_draws() {
    let run = |seed: &str| {
        Run::new("screen c.yaml --format json --draws 2000 --seed").arg(seed).file("c.yaml", CANDIDATE).json()
    };
    assert_eq!(run("7"), run("7"));
    assert_ne!(run("7")["constraints"], run("8")["constraints"]);
}

#[test]
fn entries_in_another_order_and_unrelated_ones_change_no_bit() {
    let law = |id: &str, gives: &str, body_plan: &str| {
        format!(
            "- id: {id}\n  gives: {gives}\n  kind: law\n  basis: empirical\n  applies_to: {{ body_plan: {body_plan} }}\n  formula: \
             2 * diameter\n  scatter: 0.2 dex\n  source: invented\n"
        )
    };
    let constraints = "
- id: b-limit
  title: B
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: test_one }
  required: { says: needs, formula: test_two }
  meaning: Invented.
  source: invented
";
    let dictionary = "test_one: { of: organism, unit: nm, bounds: [0 nm, none], about: invented }\ntest_two: { of: organism, unit: nm, \
                      bounds: [0 nm, none], about: invented }\n";
    let run = |relations: String| {
        Run::new("screen c.yaml --format json --overlay over")
            .file(
                "c.yaml",
                "hypobiont: 1\nname: n\nattributes: { body_plan: other }\norganism: { diameter: 3 ± 1 µm }\n",
            )
            .file(
                "over/sources.yaml",
                "invented: { authors: Test, year: 2026, title: Invented, standing: common-practice }\n",
            )
            .file("over/quantities.yaml", dictionary)
            .file("over/constraints/a.yaml", constraints)
            .file("over/relations/a.yaml", relations)
            .json()["constraints"]
            .clone()
    };
    let (one, two) = (law("law-one", "test_one", "other"), law("law-two", "test_two", "other"));
    let unrelated = law("a-third", "test_two", "tree");
    let first = run(format!("{one}{two}"));
    assert_eq!(first, run(format!("{two}{one}")));
    assert_eq!(first, run(format!("{unrelated}{two}{one}")));
}

#[test]
fn candidates_screened_together_get_the_bits_they_get_alone() {
    let other = CANDIDATE.replace("330 ± 40", "250 ± 10").replace("name: repeat", "name: second");
    let together = Run::new("screen c.yaml --format json --draws 8000")
        .file("c.yaml", format!("{CANDIDATE}---\n{other}"))
        .json();
    let alone = Run::new("screen c.yaml --format json --draws 8000").file("c.yaml", &other).json();
    assert_eq!(together[1]["constraints"], alone["constraints"]);
    assert_eq!(together[1]["overall"], alone["overall"]);
}
