use proptest::prelude::{Strategy, any, prop, prop_oneof, proptest};
use proptest::{prop_assert, prop_assert_eq};

use super::{Case, node};
use crate::quantity::distribution::{Bounds, Distribution, FreeRange, on_grid};
use crate::quantity::unit::Unit;
use crate::quantity::written::{Value, Wanted, print, print_range, read, read_text};
use crate::text::Problems;

/// Units of many kinds of factor: decimal, whole, measured, with an offset, with a root.
const UNITS: [&str; 14] = [
    "",
    "nm",
    "µm^3",
    "aa/s",
    "kJ/(mol h)",
    "%",
    "°C",
    "eV",
    "yr",
    "Da",
    "cells/mL",
    "MPa m^(1/2)",
    "atm",
    "1/h",
];

/// Positive numbers of any size that candidates have.
fn positive() -> impl Strategy<Value = f64> {
    prop_oneof![
        (-60..60, 1.0..10.0).prop_map(|(ten, digits)| digits * decade(ten)),
        (1..100_000).prop_map(f64::from)
    ]
}

fn decade(ten: i32) -> f64 {
    format!("1e{ten}").parse().expect("a power of ten")
}

fn any_distribution() -> impl Strategy<Value = Distribution> {
    let signed =
        (positive(), any::<bool>()).prop_map(|(size, negative)| if negative { -size } else { size }).boxed();
    let mut ascending = prop::collection::vec(positive(), 3).boxed();
    ascending = ascending
        .prop_map(|mut values| {
            values.sort_by(f64::total_cmp);
            values
        })
        .prop_filter("three different values", |values| values[0] < values[1] && values[1] < values[2])
        .boxed();
    prop_oneof![
        signed.clone().prop_map(Distribution::Exact),
        (signed, positive()).prop_map(|(mean, sd)| Distribution::Normal { mean, sd }),
        (positive(), 1.01..9.0).prop_map(|(median, factor)| Distribution::Lognormal { median, factor }),
        ascending.clone().prop_map(|ends| Distribution::Uniform { min: -ends[1], max: ends[2] }),
        ascending.clone().prop_map(|ends| Distribution::LogUniform { min: ends[0], max: ends[2] }),
        ascending.clone().prop_map(|ends| Distribution::Triangular {
            min: ends[0],
            mode: ends[1],
            max: ends[2]
        }),
        (ascending, prop::collection::vec(0.0..1.0, 2)).prop_map(|(values, mut sums)| {
            sums.push(1.0);
            sums.sort_by(f64::total_cmp);
            let cumulated = sums.into_iter().map(on_grid).collect();
            Distribution::Discrete { values: values.into(), cumulated }
        }),
    ]
}

/// Everything is wanted: any bounds, free or not.
fn read_back(text: &str, unit: &Unit, bounds: Bounds) -> Result<Value, Problems> {
    let wanted =
        Wanted { name: "size", dimension: unit.dimension(), bounds, unit, may_be_free: true, folder: None };
    let yaml = format!("size: {text}\n");
    let mut problems = Problems::new();
    let reading = read(&node(&yaml), &wanted, &mut problems);
    reading.map(|reading| reading.value).ok_or(problems)
}

proptest! {
    #[test]
    fn a_printed_distribution_is_read_as_the_same(
        distribution in any_distribution(), unit in prop::sample::select(UNITS.to_vec()),
    ) {
        let unit = Unit::read(unit).expect("a unit");
        let text = print(&distribution, &unit);
        let read = read_back(&text, &unit, Bounds::NONE);
        prop_assert_eq!(read, Ok(Value::Unknown(distribution)), "{}", text);
    }

    #[test]
    fn a_printed_distribution_within_bounds_is_read_as_the_same(mean in 0.1..10.0, sd in 0.1..10.0) {
        let unit = Unit::read("nm").expect("a unit");
        let bounds = Bounds { low: 0.0, high: 1.0 };
        let normal = Distribution::Normal { mean: mean * 1e-9, sd: sd * 1e-9 };
        let (conditioned, _) = normal.conditioned(bounds);
        let read = read_back(&print(&conditioned, &unit), &unit, bounds);
        prop_assert_eq!(read, Ok(Value::Unknown(conditioned)));
    }

    #[test]
    fn a_printed_free_range_is_read_as_the_same(
        low in positive(), ratio in 1.1..1e6, place in 0.0..1.0, logarithmic in any::<bool>(),
        unit in prop::sample::select(UNITS.to_vec()),
    ) {
        let high = low * ratio;
        let typical = f64::clamp(low + place * (high - low), low, high);
        let range = FreeRange { low, high, typical, logarithmic };
        let unit = Unit::read(unit).expect("a unit");
        prop_assert_eq!(read_back(&print_range(&range, &unit), &unit, Bounds::NONE), Ok(Value::Free(range)));
    }

    #[test]
    fn any_text_is_read_or_refused_within_its_bytes(text in any::<String>()) {
        check(&text)?;
    }

    #[test]
    fn any_text_of_the_signs_of_quantities_is_read_or_refused(
        text in "[ 0-9.,±+/()×÷xe^⁻¹²\u{a0}nmµ°CkJ%=<>~–-]{0,24}",
    ) {
        check(&text)?;
    }

    #[test]
    fn any_value_of_any_form_is_read_or_refused(
        key in prop::sample::select(vec!["value", "mean", "sd", "min", "max", "mode", "low", "coverage", "values",
            "weights", "sample", "anywhere_in", "about", "scale", "typical"]),
        other in prop::sample::select(vec!["factor", "median", "high", "distribution", "column", "unit"]),
        text in "[0-9.±nm%e-]{0,8}",
    ) {
        let case = Case { unit: "nm", bounds: Bounds::NONE, folder: None, may_be_free: true };
        let (reading, problems, _) = case.try_read(&format!("x: {{ {key}: '{text}', {other}: ['{text}'] }}\n"));
        prop_assert_eq!(reading.is_none(), !problems.is_empty());
    }
}

fn check(text: &str) -> Result<(), proptest::test_runner::TestCaseError> {
    match read_text(text) {
        Ok((distribution, unit)) => {
            let printed = print(&distribution, &unit);
            prop_assert_eq!(read_text(&printed).map(|read| read.0), Ok(distribution), "{}", printed);
        }
        Err(fault) => prop_assert!(text.get(fault.span.clone()).is_some(), "{:?} in {:?}", fault, text),
    }
    Ok(())
}
