//! What candidates write, sampled by the engine, against tables of distributions.
//!
//! Table: scipy 1.17.1, which agrees with mpmath (40 digits) to 2e-14. Tolerances: four standard errors of 65,536 draws.

use hypobiont::candidate::read_file;
use hypobiont::catalog::Catalog;
use hypobiont::plan::Plan;
use hypobiont::run::{self, Case, FIRST_ROUND, Settings};
use hypobiont::text::{Problems, Source};

const CATALOGUE: &[(&str, &str)] = &[
    ("sources.yaml", "table: { title: Table, standing: published }\n"),
    ("attributes.yaml", "body_plan: { about: any, words: { other: any } }\n"),
    (
        "quantities.yaml",
        "size: { of: organism, unit: µm, bounds: [none, none], about: any }\n\
         number: { of: organism, unit: '', bounds: [none, none], about: any }\n\
         kept: { of: organism, unit: '', bounds: [0, 3], about: conditioned on its bounds }\n\
         student_10: { of: organism, unit: '', bounds: [none, none], about: any }\n\
         student_16: { of: organism, unit: '', bounds: [none, none], about: any }\n\
         chi_squared_5: { of: organism, unit: '', bounds: [none, none], about: any }\n",
    ),
    // Student's t and chi-squared, made of normal and rectangular numbers.
    (
        "relations/made.yaml",
        "- id: made-10
  gives: student_10
  kind: definition
  basis: physical
  formula: number / sqrt(-2 * ln(a * b * c * d * e) / 10)
  parameters: { a: { min: 0, max: 1 }, b: { min: 0, max: 1 }, c: { min: 0, max: 1 }, d: { min: 0, max: 1 }, e: { min: 0, max: 1 } }
  source: table
- id: made-16
  gives: student_16
  kind: definition
  basis: physical
  formula: number / sqrt(-2 * ln(a * b * c * d * e * f * g * h) / 16)
  parameters: { a: { min: 0, max: 1 }, b: { min: 0, max: 1 }, c: { min: 0, max: 1 }, d: { min: 0, max: 1 }, e: { min: 0, max: 1 }, f: { min: 0, max: 1 }, g: { min: 0, max: 1 }, h: { min: 0, max: 1 } }
  source: table
- id: made-5
  gives: chi_squared_5
  kind: definition
  basis: physical
  formula: number^2 - 2 * ln(a * b)
  parameters: { a: { min: 0, max: 1 }, b: { min: 0, max: 1 } }
  source: table
",
    ),
    (
        "constraints/any.yaml",
        "- id: any
  title: Any
  family: any
  basis: physical
  available: { says: a, formula: 'size / 1 [µm] + number + kept + student_10 + student_16 + chi_squared_5' }
  required: { says: b, formula: '1' }
  meaning: Any.
  source: table
- id: draws-of-size
  title: Any
  family: any
  basis: physical
  available: { says: a, formula: size }
  required: { says: b, formula: '1 [m]' }
  meaning: A side of a limit is kept draw by draw.
  source: table
- id: draws-of-number
  title: Any
  family: any
  basis: physical
  available: { says: a, formula: number }
  required: { says: b, formula: '1' }
  meaning: A side of a limit is kept draw by draw.
  source: table
- id: draws-of-kept
  title: Any
  family: any
  basis: physical
  available: { says: a, formula: kept }
  required: { says: b, formula: '1' }
  meaning: A side of a limit is kept draw by draw.
  source: table
",
    ),
];

/// The draws of one quantity, ascending, of a candidate that states one of its own and the others as they are.
fn draws(quantity: &str, written: &str) -> Vec<f64> {
    let catalog = Catalog::from_texts(&[CATALOGUE]).unwrap_or_else(|problems| panic!("{problems}"));
    let mut text = "hypobiont: 1\nname: n\nattributes: { body_plan: other }\norganism:\n".to_owned();
    for (name, usual) in [("size", "1 ± 1 µm"), ("number", "0 ± 1"), ("kept", "1 ± 1")] {
        text += &format!("  {name}: {}\n", if name == quantity { written } else { usual });
    }
    let mut problems = Problems::new();
    let candidates = read_file(&Source::new("c.yaml", text), None, &catalog, &mut problems);
    assert!(problems.is_empty(), "{problems}");
    let plan = Plan::new(&catalog, &candidates[0], &[]).unwrap();
    let case = Case::new(&catalog, &plan, &candidates[0]);
    let settings = Settings { seed: 1, draws: Some(FIRST_ROUND), pass_at: 0.95, fail_at: 0.05 };
    let outcome = run::run(&plan, &[case], settings).remove(0);
    let node = plan.quantities.iter().find(|planned| planned.name == quantity).unwrap().node;
    let mut values = outcome.values(node).unwrap();
    values.sort_by(f64::total_cmp);
    values
}

#[test]
fn shares_below_tabulated_quantiles_are_their_probabilities() {
    for (quantity, written, quantile, p) in [
        ("number", "1 ×/÷ 1.6487212707001282", 0.375_317_857_413, 0.025),
        ("number", "{ median: 1, factor: 1.6487212707001282 }", 2.276_016_608_51, 0.95),
        ("number", "1 ×/÷ 1.6487212707001282", 2.664_408_261_55, 0.975),
        ("number", "1 ×/÷ 1.6487212707001282", 5.0, 1.0 - 6.434_710_129_14e-4),
        ("size", "3 µm ×/÷ 1.6", 7.536_836_070_01e-6, 0.975),
        ("kept", "1 ± 1", 1.171_163_918_02, 0.5),
        ("kept", "{ mean: 1, sd: 1 }", 2.714_537_835_07, 0.975),
        ("number", "{ min: 1, mode: 2, max: 5 }", 3.904_554_884_99, 0.9),
        ("student_10", "", 2.228_138_851_99, 0.975),
        ("student_16", "", 2.920_781_622_43, 0.995),
        ("chi_squared_5", "", 11.070_497_693_5, 0.95),
    ] {
        let values = draws(quantity, written);
        let n = values.len() as f64;
        let below = values.partition_point(|value| *value < quantile) as f64 / n;
        let errors = (below - p) / (p * (1.0 - p) / n).sqrt();
        println!("{quantity}: {written}: {below} below {quantile:e}, {errors:+.2} standard errors");
        assert!(
            errors.abs() <= 4.0,
            "{quantity}: {written}: {below} below {quantile:e}, {errors:+.2} standard errors"
        );
    }
}

#[test]
fn means_of_draws_are_those_of_the_table() {
    for (quantity, written, expected) in [
        ("number", "1 ×/÷ 1.6487212707001282", 1.133_148_453_07),
        ("kept", "1 ± 1", 1.229_637_179_09),
        ("size", "{ min: 0.1 µm, max: 1000 µm, scale: log }", 1.085_627_631_14e-4),
    ] {
        let values = draws(quantity, written);
        let n = values.len() as f64;
        let mean = values.iter().sum::<f64>() / n;
        let variance = values.iter().map(|value| (value - mean) * (value - mean)).sum::<f64>() / n;
        let errors = (mean - expected) / (variance / n).sqrt();
        println!("{quantity}: {written}: mean {mean:e}, {errors:+.2} standard errors");
        assert!(errors.abs() <= 4.0, "{quantity}: {written}: {mean:e} instead of {expected:e}");
    }
}
