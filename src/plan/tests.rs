//! What a plan claims of its nodes before any draw is made, against their values.

use proptest::prelude::{BoxedStrategy, ProptestConfig, Strategy, prop, prop_oneof, proptest};
use proptest::prop_assert;
use proptest::test_runner::TestCaseError;

use super::direction::{directions, ranges};
use super::{Direction, InputKind, Plan};
use crate::candidate::read_file;
use crate::catalog::Catalog;
use crate::quantity::Bounds;
use crate::text::{Problems, Source};

/// Names, their bounds, and how values between 0 and 1 are spread over what they may be.
const NAMES: [(&str, &str, [f64; 2]); 7] = [
    ("any", "[none, none]", [-3.0, 3.0]),
    ("positive", "[0, none]", [0.0, 3.0]),
    ("negative", "[none, 0]", [-3.0, 0.0]),
    ("share", "[0, 1]", [0.0, 1.0]),
    ("above_one", "[1, none]", [1.0, 4.0]),
    ("free_positive", "[0, none]", [0.1, 3.0]),
    ("free_any", "[none, none]", [-2.0, 2.0]),
];

/// Any formula of pure numbers, as text.
fn any_formula() -> BoxedStrategy<String> {
    let leaf = prop_oneof![
        3 => prop::sample::select(vec!["free_positive", "free_any"]).prop_map(str::to_owned),
        3 => prop::sample::select(vec!["any", "positive", "negative", "share", "above_one"]).prop_map(str::to_owned),
        1 => prop::sample::select(vec!["0", "1", "2", "0.5", "-1", "-0.3"]).prop_map(str::to_owned),
    ];
    let functions = vec![
        "sqrt", "cbrt", "exp", "expm1", "ln", "ln1p", "log10", "sin", "cos", "tan", "atan", "tanh", "erf",
        "erfc", "abs", "bend",
    ];
    let exponents =
        vec!["0", "2", "3", "4", "-1", "-2", "-3", "0.5", "-0.5", "1.5", "(1/3)", "(2/3)", "0.7", "-1.5"];
    leaf.prop_recursive(5, 20, 2, move |inner| {
        let pair = || (inner.clone(), inner.clone());
        prop_oneof![
            1 => inner.clone().prop_map(|a| format!("-({a})")),
            6 => (pair(), prop::sample::select(vec!["+", "-", "*", "/"]))
                .prop_map(|((a, b), sign)| format!("({a}) {sign} ({b})")),
            2 => (inner.clone(), prop::sample::select(exponents.clone()))
                .prop_map(|(a, power)| format!("({a})^{power}")),
            1 => pair().prop_map(|(a, b)| format!("({a})^({b})")),
            3 => (inner.clone(), prop::sample::select(functions.clone()))
                .prop_map(|(a, function)| format!("{function}({a})")),
            1 => (pair(), prop::sample::select(vec!["min", "max"]))
                .prop_map(|((a, b), function)| format!("{function}({a}, {b})")),
            1 => (pair(), pair()).prop_map(|((a, b), (c, d))| format!("choose({a} < {b}, {c}, {d})")),
            1 => inner.clone().prop_map(|a| format!("({a}) * ({a})")),
        ]
    })
    .boxed()
}

/// The plan of one constraint with this formula on one side. Numbers that are not free are stated exactly.
fn plan(formula: &str) -> Result<Plan, Problems> {
    let mut quantities = String::new();
    let mut organism = String::new();
    for (name, bounds, [low, high]) in NAMES {
        let default = if name.starts_with("free") {
            format!(
                ", default: {{ value: {{ anywhere_in: [{low}, {high}] }}, typical: 1, role: free, basis: physical, source: s }}"
            )
        } else {
            organism += &format!("  {name}: {high}\n");
            String::new()
        };
        quantities +=
            &format!("{name}: {{ of: organism, unit: '', bounds: {bounds}, about: any{default} }}\n");
    }
    let everything = NAMES.map(|(name, ..)| name).join(" + ");
    let constraints = format!(
        "- id: test
  title: test
  family: test
  basis: physical
  available: {{ says: has, formula: '{formula}' }}
  required: {{ says: needs, formula: '{everything} + bend(0)' }}
  curves:
    bend: {{ of: any, at: [-1, 0, 2], gives: [3, -1, 0.5], axes: linear-linear, between: straight, outside: edge }}
  meaning: any
  source: s
"
    );
    let catalog = Catalog::from_texts(&[&[
        ("sources.yaml", "s: { title: any, standing: common-practice }\n"),
        ("attributes.yaml", "body_plan: { about: any, words: { other: any } }\n"),
        ("quantities.yaml", &quantities),
        ("constraints/test.yaml", &constraints),
    ]])?;
    let text = format!("hypobiont: 1\nname: n\nattributes: {{ body_plan: other }}\norganism:\n{organism}");
    let mut problems = Problems::new();
    let candidates = read_file(&Source::new("c.yaml", text), None, &catalog, &mut problems);
    assert!(problems.is_empty(), "{problems}");
    Plan::new(&catalog, &candidates[0], &[])
}

fn name_of<'p>(plan: &'p Plan, input: &'p InputKind) -> &'p str {
    match input {
        InputKind::Stated(name) => name,
        InputKind::Free(at) => &plan.free[*at].name,
        InputKind::Catalog(_) => unreachable!("no number of the catalogue is uncertain"),
    }
}

/// The values of all nodes.
fn values(plan: &Plan, of: impl Fn(&str) -> f64) -> Vec<f64> {
    let mut values = vec![f64::NAN; plan.graph.nodes.len()];
    for (id, node) in plan.graph.nodes.iter().enumerate() {
        let setting = |input: usize| of(name_of(plan, &plan.graph.inputs[input]));
        values[id] = plan.graph.scalar(&node.op, |operand| values[operand], setting);
    }
    values
}

/// Whether rounding cannot have turned what is compared around: no number so large or so small that differences of it
/// lose what is left.
fn is_tame(values: &[f64]) -> bool {
    values.iter().all(|value| value.is_nan() || *value == 0.0 || (1e-4..1e4).contains(&value.abs()))
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn values_keep_to_the_ranges_and_directions_that_are_claimed(
        text in any_formula(), places in prop::collection::vec(prop::array::uniform7(0.0..1.0_f64), 6),
    ) {
        let Ok(plan) = plan(&text) else { return Err(TestCaseError::reject("an exponent is refused")) };
        let bounds = |input: &InputKind| {
            let name = name_of(&plan, input);
            let low = if ["positive", "share", "free_positive"].contains(&name) { 0.0 } else { f64::NEG_INFINITY };
            match name {
                "negative" => Bounds { low, high: 0.0 },
                "share" => Bounds { low, high: 1.0 },
                "above_one" => Bounds { low: 1.0, high: f64::INFINITY },
                _ => Bounds { low, high: f64::INFINITY },
            }
        };
        let ranges = ranges(&plan.graph, bounds);
        for free in &plan.free {
            let directions = directions(&plan.graph, &ranges, free.node);
            for place in &places {
                let of = |share: f64, name: &str| {
                    let at = NAMES.iter().position(|(known, ..)| *known == name).expect("a name");
                    let [low, high] = NAMES[at].2;
                    low + (high - low) * if name == free.name { share } else { place[at] }
                };
                let steps: Vec<Vec<f64>> = [0.0, 0.2, 0.45, 0.5, 0.7, 1.0]
                    .map(|share| values(&plan, |name| of(share, name)))
                    .into_iter()
                    .filter(|values| is_tame(values))
                    .collect();
                for step in &steps {
                    for (id, value) in step.iter().enumerate() {
                        let Bounds { low, high } = ranges[id];
                        let room = 1e-9 * (1.0 + value.abs());
                        prop_assert!(
                            value.is_nan() || (low - room..=high + room).contains(value),
                            "{value} of {:?} outside {low} to {high} in {text}", plan.graph.nodes[id].op
                        );
                    }
                }
                for pair in steps.windows(2) {
                    for (id, direction) in directions.iter().enumerate() {
                        let (before, after) = (pair[0][id], pair[1][id]);
                        let room = 1e-8 * (1.0 + before.abs());
                        let kept = before.is_nan() && after.is_nan() || match direction {
                            Direction::Still => before == after,
                            Direction::Up => after >= before - room,
                            Direction::Down => after <= before + room,
                            Direction::Mixed => true,
                        };
                        prop_assert!(
                            kept,
                            "{before} becomes {after} where {} grows: {:?} is said to go {direction:?} in {text}",
                            free.name, plan.graph.nodes[id].op
                        );
                    }
                }
            }
        }
    }
}
