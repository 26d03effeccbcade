//! The program of a plan against a plain walk over the tree of its formula: the same bits in every draw.

use proptest::prelude::{BoxedStrategy, Just, ProptestConfig, Strategy, prop, prop_oneof, proptest};
use proptest::test_runner::TestCaseError;
use proptest::{prop_assert, prop_assert_eq};

use super::{constraint, settings, try_ready};
use crate::formula::Formula;
use crate::math::streams::Stream;
use crate::quantity::Distribution;
use crate::run::{Outcome, run};

const DRAWS: usize = 130;

/// One of each way in which a number enters a program: stated exactly, stated uncertain, a default exact, a default
/// uncertain, free; and a parameter.
const QUANTITIES: &str = "
stated: { of: organism, unit: '', bounds: [none, none], about: any }
uncertain: { of: organism, unit: '', bounds: [none, none], about: any }
assumed:
  { of: organism, unit: '', bounds: [none, none], about: any, default: { value: -2.5, role: unknown, basis: physical, source: invented } }
spread:
  of: organism
  unit: ''
  bounds: [none, none]
  about: any
  default: { value: 1.5 ×/÷ 2, role: unknown, basis: physical, source: invented }
chosen:
  of: organism
  unit: ''
  bounds: [none, none]
  about: any
  default: { value: { anywhere_in: [-3, 3] }, typical: 0.5, role: free, basis: physical, source: invented }
";
const ORGANISM: &str = "stated: 0.75, uncertain: 0 ± 2";
const MORE: &str = "  parameters: { own: { min: -1, max: 4 } }
  curves:
    bend: { of: stated, at: [-1, 0, 2], gives: [3, -1, 0.5], axes: linear-linear, between: straight, outside: edge }
    law: { of: stated, at: [0.1, 1, 9], gives: [2, 3, 70], axes: log-log, between: monotone, outside: refuse }
";
/// Names everything, so that all of it flows in.
const EVERYTHING: &str = "own + (stated + uncertain + assumed + spread + chosen) * bend(0) * law(1)";

/// Any formula of pure numbers, as text.
fn any_formula() -> BoxedStrategy<String> {
    let leaf = prop_oneof![
        6 => prop::sample::select(vec!["stated", "uncertain", "assumed", "spread", "chosen", "own"])
            .prop_map(str::to_owned),
        2 => prop::sample::select(vec!["0", "1", "2", "0.5", "3.7", "1e-3", "4e9", "infinity"]).prop_map(str::to_owned),
        1 => (0..10_000).prop_map(|number| (f64::from(number) / 1000.0).to_string()),
    ];
    let functions = vec![
        "sqrt", "cbrt", "exp", "expm1", "ln", "ln1p", "log10", "sin", "cos", "tan", "atan", "tanh", "erf",
        "erfc", "abs", "bend", "law",
    ];
    let exponents = vec![
        "0", "1", "2", "3", "4", "-1", "-2", "-3", "0.5", "-0.5", "1.5", "(1/3)", "-(1/3)", "(2/3)", "0.7",
        "-1.5", "17",
    ];
    leaf.prop_recursive(6, 48, 3, move |inner| {
        let pair = || (inner.clone(), inner.clone());
        let comparison = (pair(), prop::sample::select(vec!["<", "<=", ">", ">=", "="]))
            .prop_map(|((a, b), sign)| format!("({a}) {sign} ({b})"));
        let condition = comparison.prop_recursive(2, 6, 2, |inner| {
            prop_oneof![
                inner.clone().prop_map(|a| format!("not ({a})")),
                (inner.clone(), inner, prop::sample::select(vec!["and", "or"]))
                    .prop_map(|(a, b, word)| format!("({a}) {word} ({b})")),
            ]
        });
        prop_oneof![
            inner.clone().prop_map(|a| format!("-({a})")),
            (pair(), prop::sample::select(vec!["+", "-", "*", "/"]))
                .prop_map(|((a, b), sign)| format!("({a}) {sign} ({b})")),
            (inner.clone(), prop::sample::select(exponents.clone()))
                .prop_map(|(a, power)| format!("({a})^{power}")),
            pair().prop_map(|(a, b)| format!("({a})^({b})")),
            (inner.clone(), prop::sample::select(functions.clone()))
                .prop_map(|(a, function)| format!("{function}({a})")),
            (prop::sample::select(vec!["min", "max"]), prop::collection::vec(inner.clone(), 2..4))
                .prop_map(|(function, arguments)| format!("{function}({})", arguments.join(", "))),
            (condition, pair()).prop_map(|(condition, (a, b))| format!("choose({condition}, {a}, {b})")),
            // The same part twice, which the program computes once.
            (inner.clone(), prop_oneof![Just("+"), Just("*"), Just("/"), Just("-")])
                .prop_map(|(a, sign)| format!("({a}) {sign} ({a})")),
        ]
    })
    .boxed()
}

/// The numbers of the names in each draw, from the streams and the distributions alone.
fn numbers(name: &str) -> Vec<f64> {
    let sampled = |stream: &str, distribution: Distribution| {
        let mut probabilities = vec![0.0; DRAWS];
        Stream::new(1, stream).fill_open_unit(0, &mut probabilities);
        probabilities.into_iter().map(|p| distribution.quantile(p)).collect()
    };
    match name {
        "stated" => vec![0.75; DRAWS],
        "uncertain" => sampled(name, Distribution::Normal { mean: 0.0, sd: 2.0 }),
        "assumed" => vec![-2.5; DRAWS],
        "spread" => sampled(name, Distribution::Lognormal { median: 1.5, factor: 2.0 }),
        "chosen" => vec![0.5; DRAWS],
        "own" => sampled("test.own", Distribution::Uniform { min: -1.0, max: 4.0 }),
        _ => unreachable!("no other name"),
    }
}

fn same(a: f64, b: f64) -> bool {
    a.to_bits() == b.to_bits() || a.is_nan() && b.is_nan()
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn the_program_gives_the_bits_of_the_tree(text in any_formula()) {
        let ready = match try_ready(QUANTITIES, &constraint("test", &text, EVERYTHING, MORE), ORGANISM) {
            Ok(ready) => ready,
            Err(problems) => {
                // Exponents made of literals must be ratios of moderate whole numbers, and formulas not too long.
                let known = ["the exponent", "bytes"];
                prop_assert!(known.iter().any(|known| problems.to_string().contains(known)), "{problems}");
                return Err(TestCaseError::reject("refused"));
            }
        };
        let outcome: Outcome = run(&ready.plan, std::slice::from_ref(&ready.case), settings(Some(DRAWS))).remove(0);
        let entry = &ready.catalog.constraints[0];
        let names = ["stated", "uncertain", "assumed", "spread", "chosen", "own"];
        let columns = names.map(numbers);
        let planned = &ready.plan.constraints[0];
        let sides: [(&Formula, usize); 2] =
            [(&entry.available.formula, planned.available), (&entry.required.formula, planned.required)];
        for (formula, node) in sides {
            let values = outcome.values(node);
            for draw in 0..DRAWS {
                let lookup = |name: &str| {
                    columns[names.iter().position(|known| *known == name).expect("a name")][draw]
                };
                let meant = formula.evaluate(&lookup, &|name| &entry.entry.curves[name]);
                let found = values.as_ref().map_or(ready.case.scalars[node], |values| values[draw]);
                prop_assert!(same(found, meant), "{} in draw {draw}: {found:e} instead of {meant:e}", formula.text());
            }
        }
        // What holds is what the margins say.
        let holds = outcome.record.holds(0);
        let side = |node: usize| outcome.values(node).unwrap_or_else(|| vec![ready.case.scalars[node]; DRAWS]);
        for (draw, (has, needs)) in side(planned.available).into_iter().zip(side(planned.required)).enumerate() {
            let expected = has > 0.0 && has >= needs && !needs.is_nan();
            prop_assert_eq!(holds[draw / 64] >> (draw % 64) & 1 == 1, expected, "{} against {}", has, needs);
        }
    }
}
