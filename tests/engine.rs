//! The engine on small invented catalogues, laid over the shipped one, whose answers can be worked out by hand.

use std::f64::consts::LOG10_2;

use crate::run::{Run, constraint, margin, overall, screen};

const SOURCES: &str =
    "invented: { authors: Test, year: 2026, title: Invented for this test, standing: common-practice }\n";

/// Two limits that never hold together: at least 285 nm, at most 265 nm.
const APART: &str = "
- id: at-least
  title: At least 285 nm
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: the diameter, formula: diameter }
  required: { says: the least, formula: '285e-9 [m]' }
  meaning: Invented.
  source: invented
- id: at-most
  title: At most 265 nm
  family: two
  applies_to: { body_plan: other }
  basis: physical
  available: { says: the most, formula: '265e-9 [m]' }
  required: { says: the diameter, formula: diameter }
  meaning: Invented.
  source: invented
";

fn overlaid(constraints: &str, relations: &str, quantities: &str, candidate: &str) -> Run {
    let mut run = Run::new("screen c.yaml --format json --overlay over")
        .file("c.yaml", candidate)
        .file("over/sources.yaml", SOURCES)
        .file("over/constraints/test.yaml", constraints);
    if !relations.is_empty() {
        run = run.file("over/relations/test.yaml", relations);
    }
    if !quantities.is_empty() {
        run = run.file("over/quantities.yaml", quantities);
    }
    run
}

const OTHER: &str = "hypobiont: 1\nname: test\nattributes: { body_plan: other }\n";

#[test]
fn a_name_and_a_body_plan_alone_are_not_assessed() {
    let found = screen("hypobiont: 1\nname: bare\nattributes: { body_plan: prokaryotic-cell }\n");
    assert_eq!(overall(&found), "not-assessed");
    assert_eq!(found["overall"]["assessed"], 0);
    assert!(found["overall"]["of"].as_u64().unwrap() > 5);
    assert!(found["overall"].get("binding").is_none_or(serde_json::Value::is_null));
}

#[test]
fn what_is_missing_can_be_stated_of_one_form() {
    // Mixing along the body concerns rods, filaments and helices. Their length is stated or follows from volume and
    // width; a diameter or a thickness would give the volume of a sphere or a disc, which have no length.
    let found = screen(
        "hypobiont: 1\nname: formless\nattributes: { body_plan: prokaryotic-cell }\nenvironment: { temperature: 30 °C }\n",
    );
    let missing = &constraint(&found, "reach-of-a-genome")["missing"];
    assert_eq!(*missing, serde_json::json!([["cell_volume", "length"], ["form"], ["length", "width"]]));
}

#[test]
fn limits_that_hold_apart_but_never_together_fail() {
    let candidate = format!("{OTHER}organism: {{ diameter: 275 ± 25 nm }}\n");
    let found = overlaid(APART, "", "", &candidate).json();
    for id in ["at-least", "at-most"] {
        // P(Z >= 0.4) = 0.3446 for the standard normal distribution.
        let chance = constraint(&found, id)["chance"].as_f64().unwrap();
        assert!((chance - 0.3446).abs() < 0.01, "{id}: {chance}");
        assert_eq!(constraint(&found, id)["verdict"], "marginal");
    }
    assert_eq!(found["overall"]["chance"], 0.0);
    assert_eq!(overall(&found), "fail");
}

#[test]
fn what_fails_most_often_binds_not_what_is_tightest() {
    let constraints = "
- id: small-and-sure
  title: Always 0.1 dex to spare
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: '10^0.1 * diameter' }
  required: { says: needs, formula: diameter }
  meaning: Invented.
  source: invented
- id: large-but-risky
  title: Two decades short in four draws of ten
  family: two
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: diameter * luck }
  required: { says: needs, formula: diameter }
  parameters:
    luck: { value: { values: [0.01, 1000], weights: [0.4, 0.6] } }
  meaning: Invented.
  source: invented
";
    let candidate = format!("{OTHER}organism: {{ diameter: 275 ± 25 nm }}\n");
    let found = overlaid(constraints, "", "", &candidate).json();
    assert_eq!(found["overall"]["binding"], "large-but-risky");
    assert_eq!(found["overall"]["binding_share"], 1.0);
    let chance = constraint(&found, "large-but-risky")["chance"].as_f64().unwrap();
    assert!((chance - 0.6).abs() < 0.01, "{chance}");
    assert_eq!(overall(&found), "marginal");
    assert!((margin(&found, "small-and-sure") - 0.1).abs() < 1e-6);
}

#[test]
fn a_margin_of_exactly_zero_holds_and_all_exact_takes_one_round() {
    let constraints = "
- id: just
  title: Just
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: diameter }
  required: { says: needs, formula: '285 [nm]' }
  meaning: Invented.
  source: invented
";
    let candidate = format!("{OTHER}organism: {{ diameter: 285 nm }}\n");
    let found = overlaid(constraints, "", "", &candidate).json();
    assert_eq!(constraint(&found, "just")["verdict"], "pass");
    assert_eq!(margin(&found, "just"), 0.0);
    assert_eq!(found["run"]["draws"], 65_536);
    assert_eq!(found["run"]["settled"], true);
    let codes: Vec<&str> =
        found["warnings"].as_array().unwrap().iter().filter_map(|warning| warning["code"].as_str()).collect();
    assert!(codes.contains(&"all-exact"), "{codes:?}");
}

#[test]
fn less_than_single_precision_short_does_not_pass() {
    // 1 - 1e-12 short: a margin of -4e-13 dex would be -0 in fewer digits.
    let constraints = "
- id: hair
  title: A hair short
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: 'diameter * (1 - 1e-12)' }
  required: { says: needs, formula: diameter }
  meaning: Invented.
  source: invented
";
    let candidate = format!("{OTHER}organism: {{ diameter: 285 nm }}\n");
    let found = overlaid(constraints, "", "", &candidate).json();
    assert_eq!(constraint(&found, "hair")["verdict"], "fail");
}

/// One quantity that two entries need is one number in a draw; its default changed once moves both.
#[test]
fn a_number_in_two_entries_changes_in_both() {
    let constraints = "
- id: first
  title: First
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: diameter }
  required: { says: needs, formula: test_length }
  meaning: Invented.
  source: invented
- id: second
  title: Second
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: diameter / 2 }
  required: { says: needs, formula: test_length }
  meaning: Invented.
  source: invented
";
    let dictionary = |value: &str| {
        format!(
            "test_length: {{ of: organism, unit: nm, bounds: [0 nm, none], about: invented, default: {{ value: {value}, \
             role: unknown, basis: physical, source: invented }} }}\n"
        )
    };
    let candidate = format!("{OTHER}organism: {{ diameter: 300 ± 20 nm }}\n");
    let before = overlaid(constraints, "", &dictionary("200 ± 10 nm"), &candidate).json();
    let after = overlaid(constraints, "", &dictionary("400 ± 20 nm"), &candidate).json();
    for id in ["first", "second"] {
        // Twice the length is log10(2) = 0.30103 dex less; the same draws, so exactly that.
        let moved = margin(&before, id) - margin(&after, id);
        assert!((moved - LOG10_2).abs() < 1e-4, "{id}: {moved}");
    }
    let difference = margin(&before, "first") - margin(&before, "second");
    assert!((difference - LOG10_2).abs() < 1e-6, "one number in one draw: {difference}");
}

#[test]
fn a_free_number_is_set_once_for_all_limits() {
    // Short wants to be small, long wants to be large: what suits both best lies between, at 100 nm.
    let constraints = "
- id: short
  title: Short
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: '1 [µm]' }
  required: { says: needs, formula: test_length * (diameter / diameter) }
  meaning: Invented.
  source: invented
- id: long
  title: Long
  family: two
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: test_length * (diameter / diameter) }
  required: { says: needs, formula: '10 [nm]' }
  meaning: Invented.
  source: invented
";
    let dictionary = "test_length: { of: organism, unit: nm, bounds: [0 nm, none], about: invented, default: { value: { \
                      anywhere_in: [1 nm, 10 µm] }, typical: 2 nm, role: free, basis: physical, source: invented } }\n";
    let candidate = format!("{OTHER}organism: {{ diameter: 300 nm }}\n");
    let found = overlaid(constraints, "", dictionary, &candidate).json();
    let quantity =
        found["quantities"].as_array().unwrap().iter().find(|q| q["name"] == "test_length").unwrap();
    assert_eq!(quantity["role"], "free");
    assert!((quantity["chosen"].as_f64().unwrap() - 100.0).abs() < 1e-9, "{quantity}");
    assert!((margin(&found, "short") - 1.0).abs() < 1e-6);
    assert!((margin(&found, "long") - 1.0).abs() < 1e-6);
}

#[test]
fn inputs_that_contradict_each_other_are_an_error_with_both_values() {
    let ended = Run::new("screen c.yaml")
        .file(
            "c.yaml",
            "hypobiont: 1\nname: two sizes\nattributes: { body_plan: prokaryotic-cell, form: sphere }\norganism:\n  diameter: \
             500 ± 10 nm\n  cell_volume: 0.2 ± 0.01 µm^3\n",
        )
        .output();
    assert_eq!(ended.status, Some(2), "{}", ended.stdout);
    // A sphere of 500 nm has 0.0654 µm³, one of 0.2 µm³ 726 nm.
    assert!(ended.stderr.contains("0.065") && ended.stderr.contains("726"), "{}", ended.stderr);
}

#[test]
fn inputs_that_agree_within_their_uncertainties_are_both_used() {
    let found = screen(
        "hypobiont: 1\nname: two sizes\nattributes: { body_plan: prokaryotic-cell, form: sphere }\norganism:\n  diameter: 500 ± 10 \
         nm\n  cell_volume: 0.066 ± 0.004 µm^3\n",
    );
    let origin = |name: &str| {
        let list = found["quantities"].as_array().unwrap();
        list.iter().find(|quantity| quantity["name"] == name).map(|quantity| quantity["origin"].clone())
    };
    assert_eq!(origin("cell_volume"), Some("given".into()));
    assert_eq!(origin("diameter"), Some("given".into()));
}

#[test]
fn a_volume_follows_from_a_diameter_and_the_reverse() {
    let value = |organism: &str, name: &str| {
        let found = screen(&format!(
            "hypobiont: 1\nname: s\nattributes: {{ body_plan: prokaryotic-cell, form: sphere }}\norganism: {{ {organism} }}\n"
        ));
        let list = found["quantities"].as_array().unwrap();
        list.iter().find(|quantity| quantity["name"] == name).unwrap()["median"].as_f64().unwrap()
    };
    let volume = value("diameter: 300 nm", "cell_volume");
    // π/6 × 0.3³ = 0.0141372 µm³.
    assert!((volume - 0.014_137_2).abs() < 1e-6, "{volume}");
    let ratio = value("cell_volume: 0.0141372 µm^3", "diameter") / 300.0;
    assert!((ratio - 1.0).abs() < 1e-5 || (ratio - 1e-3).abs() < 1e-8, "{ratio}");
}

/// Correlated normal inputs: the variance of a sum of logarithms follows the coefficient.
#[test]
fn a_correlation_is_that_of_normal_scores() {
    let constraints = "
- id: product
  title: Product
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: diameter * width }
  required: { says: needs, formula: '1 [µm^2]' }
  meaning: Invented.
  source: invented
";
    let width_of = |coefficient: &str| {
        let candidate = format!(
            "{OTHER}organism:\n  diameter: 1 µm ×/÷ 2\n  width: 1 µm ×/÷ 2\ncorrelations:\n  - {{ between: [diameter, width], \
             coefficient: {coefficient} }}\n"
        );
        let found = overlaid(constraints, "", "", &candidate).json();
        let margin = &constraint(&found, "product")["margin_dex"];
        margin["high"].as_f64().unwrap() - margin["low"].as_f64().unwrap()
    };
    // 2 × 1.6449 × log10(2) × sqrt(2 + 2ρ): 1.9154 for ρ = 0.87, 0.5 for -0.87.
    for (coefficient, expected) in [("0.87", 1.9154), ("-0.87", 0.5050), ("0.001", 1.4012)] {
        let found = width_of(coefficient);
        assert!((found / expected - 1.0).abs() < 0.02, "{coefficient}: {found} against {expected}");
    }
}

#[test]
fn a_correlation_with_a_resampled_quantity_is_refused() {
    let candidate = format!(
        "{OTHER}organism:\n  diameter: 275 ± 25 nm\n  width: {{ sample: w.csv, column: width, unit: nm }}\n\
         correlations:\n  - {{ between: [diameter, width], coefficient: 0.5 }}\n"
    );
    let ended = Run::new("screen c.yaml").file("c.yaml", &candidate).file("w.csv", "width\n1\n2\n").output();
    assert_eq!(ended.status, Some(2), "{}", ended.stdout);
    assert!(ended.stderr.contains("`width` comes from a file"), "{}", ended.stderr);
}

#[test]
fn numbers_that_come_in_sets_stay_together() {
    // a × b is 6 in every set, though a and b vary sixfold.
    let constraints = "
- id: sets
  title: Sets
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: a * b * diameter }
  required: { says: needs, formula: 6 * diameter }
  joint_values:
    - { a: 1, b: 6 }
    - { a: 2, b: 3 }
    - { a: 6, b: 1, weight: 2 }
  meaning: Invented.
  source: invented
";
    let candidate = format!("{OTHER}organism: {{ diameter: 300 ± 20 nm }}\n");
    let found = overlaid(constraints, "", "", &candidate).json();
    assert!(margin(&found, "sets").abs() < 1e-7);
    assert_eq!(
        constraint(&found, "sets")["margin_dex"]["low"],
        constraint(&found, "sets")["margin_dex"]["high"]
    );
}

#[test]
fn scatter_is_one_factor_per_draw() {
    let relations = "
- id: test-law
  gives: test_length
  kind: law
  basis: empirical
  formula: 2 * diameter
  scatter: 0.15 dex
  source: invented
";
    let constraints = "
- id: spread
  title: Spread
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: test_length }
  required: { says: needs, formula: diameter }
  meaning: Invented.
  source: invented
- id: none
  title: None
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: test_length }
  required: { says: needs, formula: test_length * (diameter / diameter) }
  meaning: Invented.
  source: invented
";
    let dictionary = "test_length: { of: organism, unit: nm, bounds: [0 nm, none], about: invented }\n";
    let candidate = format!("{OTHER}organism: {{ diameter: 300 nm }}\n");
    let found = overlaid(constraints, relations, dictionary, &candidate).json();
    let dex = &constraint(&found, "spread")["margin_dex"];
    // log10(2) ± 1.6449 × 0.15 dex.
    assert!((dex["median"].as_f64().unwrap() - LOG10_2).abs() < 0.005);
    assert!((dex["high"].as_f64().unwrap() - dex["low"].as_f64().unwrap() - 0.4935).abs() < 0.01);
    assert_eq!(margin(&found, "none"), 0.0);
    assert_eq!(constraint(&found, "spread")["basis"], "empirical", "the law weakens what it gives");
}

#[test]
fn a_cycle_is_printed() {
    let relations = "
- id: one-way
  gives: test_one
  kind: law
  basis: empirical
  formula: 2 * test_two
  source: invented
- id: other-way
  gives: test_two
  kind: law
  basis: empirical
  formula: test_one / 2
  source: invented
";
    let constraints = "
- id: turn
  title: Turn
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: test_one }
  required: { says: needs, formula: diameter }
  meaning: Invented.
  source: invented
";
    let one = |name: &str| {
        format!(
            "{name}: {{ of: organism, unit: nm, bounds: [0 nm, none], about: invented, default: {{ value: 5 nm, role: unknown, \
             basis: physical, source: invented }} }}\n"
        )
    };
    let candidate = format!("{OTHER}organism: {{ diameter: 300 nm }}\n");
    let ended =
        overlaid(constraints, relations, &format!("{}{}", one("test_one"), one("test_two")), &candidate)
            .output();
    assert_eq!(ended.status, Some(2), "{}", ended.stdout);
    assert!(ended.stderr.contains("test_one → test_two → test_one"), "{}", ended.stderr);
}

#[test]
fn an_adopted_parameter_replaces_one_number_and_is_reported() {
    let constraints = "
- id: limit
  title: Limit
  family: one
  applies_to: { body_plan: other }
  basis: physical
  available: { says: has, formula: diameter }
  required: { says: needs, formula: smallest }
  parameters: { smallest: 100 nm }
  meaning: Invented.
  source: invented
";
    let candidate = format!("{OTHER}organism: {{ diameter: 300 nm }}\nadopt: {{ limit.smallest: 150 nm }}\n");
    let found = overlaid(constraints, "", "", &candidate).json();
    assert!((margin(&found, "limit") - LOG10_2).abs() < 1e-5);
    let adopted =
        found["quantities"].as_array().unwrap().iter().find(|q| q["name"] == "limit.smallest").unwrap();
    assert_eq!(adopted["origin"], "adopted");
    assert_eq!(adopted["median"], 150.0);
}

#[test]
fn values_that_span_hundreds_of_decades_keep_their_quantiles() {
    let figure = "
- id: wide
  title: From e^-300 to e^300
  applies_to: { body_plan: other }
  basis: physical
  formula: 'exp((diameter - 301 [nm]) / 1 [nm])'
  unit: \"\"
  source: invented
";
    let candidate = format!("{OTHER}organism: {{ diameter: {{ min: 1 nm, max: 601 nm }} }}\n");
    let found = overlaid(APART, "", "", &candidate).file("over/figures/test.yaml", figure).json();
    let list = found["quantities"].as_array().unwrap();
    let wide = list.iter().find(|quantity| quantity["name"] == "wide").unwrap();
    // The quantiles of the exponent are -270, 0 and 270, each within 1.2 at most.
    for (quantile, expected) in [("low", -270.0), ("median", 0.0), ("high", 270.0)] {
        let exponent = libm::log(wide[quantile].as_f64().unwrap());
        assert!((exponent - expected).abs() < 8.0, "{quantile}: {exponent}");
    }
}

#[test]
fn fixed_draws_are_a_prefix_and_leave_settled_out() {
    let candidate = format!("{OTHER}organism: {{ diameter: 275 ± 25 nm }}\n");
    let run = |draws: &str| overlaid(APART, "", "", &candidate).arg("--draws").arg(draws).json();
    let (few, many) = (run("1000"), run("65536"));
    assert_eq!(few["run"]["draws"], 1000);
    assert!(few["run"].get("settled").is_none());
    let holds = |found: &serde_json::Value, draws: f64| {
        (constraint(found, "at-least")["chance"].as_f64().unwrap() * draws).round()
    };
    assert!(holds(&few, 1000.0) <= holds(&many, 65_536.0));
    let default = overlaid(APART, "", "", &candidate).json();
    assert_eq!(default["constraints"], many["constraints"], "the default is the same draws");
}

#[test]
fn a_run_that_does_not_settle_says_so() {
    // 5 % of the draws lie two dex lower, whatever their number: the 5 % quantile cannot be told from them.
    let limit = |number: usize| {
        format!(
            "- id: limit-{number}\n  title: Limit\n  family: one\n  basis: physical\n  available: {{ says: has, formula: diameter * \
             luck }}\n  required: {{ says: needs, formula: diameter }}\n  parameters: {{ luck: {{ values: [1e-3, 0.1], weights: [0.05, \
             0.95] }} }}\n  meaning: Invented.\n  source: invented\n"
        )
    };
    let constraints: String = (0..8).map(limit).collect();
    let candidate = format!("{OTHER}organism: {{ diameter: 300 nm }}\n");
    let found = overlaid(&constraints, "", "", &candidate).json();
    assert_eq!(found["run"]["settled"], false);
    assert_eq!(found["run"]["draws"], found["run"]["cap"]);
    let codes: Vec<&str> =
        found["warnings"].as_array().unwrap().iter().filter_map(|warning| warning["code"].as_str()).collect();
    assert!(codes.contains(&"cap-reached"), "{codes:?}");
}
