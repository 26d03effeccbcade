use proptest::prelude::{Just, Strategy, prop_oneof};
use proptest::{prop_assert, prop_assert_eq, proptest};

use super::{Axes, Between, Curve, CurveFault, Form, Outside, Scale};
use crate::math::kernels;
use crate::quantity::Dimension;

const LINEAR: Axes = Axes { argument: Scale::Linear, value: Scale::Linear };

fn curve(axes: Axes, between: Between, outside: Outside, points: &[(f64, f64)]) -> Curve {
    let form = Form { argument: Dimension::NONE, value: Dimension::NONE, axes, between, outside };
    Curve::new(form, points).unwrap()
}

fn fault(axes: Axes, points: &[(f64, f64)]) -> CurveFault {
    let form = Form {
        argument: Dimension::NONE,
        value: Dimension::NONE,
        axes,
        between: Between::Straight,
        outside: Outside::Refuse,
    };
    Curve::new(form, points).unwrap_err()
}

#[test]
fn straight_lines_are_exact_at_simple_numbers() {
    let curve = curve(LINEAR, Between::Straight, Outside::Refuse, &[(0.0, 1.0), (2.0, 5.0), (6.0, 3.0)]);
    // By hand: slopes 2 and -1/2.
    for (x, y) in [(0.0, 1.0), (0.5, 2.0), (1.0, 3.0), (2.0, 5.0), (4.0, 4.0), (6.0, 3.0)] {
        assert_eq!(curve.value(x), y, "{x}");
    }
}

#[test]
fn outside_its_points_a_curve_refuses_or_stays_at_its_edge() {
    let points = [(1.0, 2.0), (3.0, 7.0)];
    let refusing = curve(LINEAR, Between::Straight, Outside::Refuse, &points);
    assert!(refusing.value(0.999).is_nan() && refusing.value(3.001).is_nan());
    let edge = curve(LINEAR, Between::Straight, Outside::Edge, &points);
    assert_eq!([edge.value(f64::NEG_INFINITY), edge.value(0.0), edge.value(f64::INFINITY)], [2.0, 2.0, 7.0]);
    assert!(edge.value(f64::NAN).is_nan());
}

#[test]
fn monotone_cubics_agree_with_another_implementation() {
    // Values from scipy 1.17.1, scipy.interpolate.PchipInterpolator, which uses the same slopes.
    let first = curve(
        LINEAR,
        Between::Monotone,
        Outside::Refuse,
        &[(0.0, 0.0), (1.0, 1.0), (2.0, 1.5), (4.0, 10.0), (5.0, 10.0), (7.0, 8.0)],
    );
    let second =
        curve(LINEAR, Between::Monotone, Outside::Refuse, &[(1.0, 5.0), (2.0, 0.0), (3.0, 0.5), (6.0, 0.4)]);
    for (curve, x, expected) in [
        (&first, 0.25, 0.300_781_250_000_000_05),
        (&first, 0.5, 0.572_916_666_666_666_6),
        (&first, 1.5, 1.230_510_752_688_172),
        (&first, 2.5, 3.059_475_806_451_613),
        (&first, 3.0, 5.955_645_161_290_322),
        (&first, 3.75, 9.657_258_064_516_13),
        (&first, 4.5, 10.0),
        (&first, 5.5, 9.843_75),
        (&first, 6.5, 8.781_25),
        (&second, 1.1, 4.232_25),
        (&second, 1.5, 1.531_25),
        (&second, 2.5, 0.25),
        (&second, 4.0, 0.496_296_296_296_296_3),
        (&second, 5.5, 0.442_129_629_629_629_65),
    ] {
        let found = curve.value(x);
        assert!((found - expected).abs() < 1e-14, "{x}: {found}, expected {expected}");
    }
}

#[test]
fn logarithmic_axes_make_powers_and_exponentials_straight() {
    // x³ on log-log, 10^x on linear-log, log10(x) on log-linear: each is a straight line on its axes.
    let (log, linear) = (Scale::Log, Scale::Linear);
    let cases = [
        (Axes { argument: log, value: log }, [(1.0, 1.0), (100.0, 1e6)], 10.0, 1e3),
        (Axes { argument: linear, value: log }, [(0.0, 1.0), (4.0, 1e4)], 2.0, 1e2),
        (Axes { argument: log, value: linear }, [(1.0, 0.0), (1e4, 4.0)], 10.0, 1.0),
    ];
    for (axes, points, x, expected) in cases {
        for between in [Between::Straight, Between::Monotone] {
            let found = curve(axes, between, Outside::Refuse, &points).value(x);
            assert!((found / expected - 1.0).abs() < 1e-14, "{axes:?}: {found}");
        }
    }
}

#[test]
fn a_reciprocal_axis_makes_an_arrhenius_law_straight() {
    // exp(-60 kJ/mol / (R T)) between 280 K and 330 K, read at 300 K and at both ends.
    let law = |temperature: f64| kernels::exp(-60e3 / (8.314_462_618 * temperature));
    let axes = Axes { argument: Scale::Reciprocal, value: Scale::Log };
    let points = [(280.0, law(280.0)), (330.0, law(330.0))];
    let plot = curve(axes, Between::Straight, Outside::Edge, &points);
    for x in [280.0, 300.0, 329.0, 330.0] {
        assert!((plot.value(x) / law(x) - 1.0).abs() < 1e-13, "{x}");
    }
    assert_eq!(plot.value(250.0), law(280.0));
    assert_eq!(fault(axes, &[(0.0, 1.0), (1.0, 2.0)]), CurveFault::NotPositive { position: 0 });
}

#[test]
fn points_that_make_no_curve_are_refused() {
    let log = Axes { argument: Scale::Log, value: Scale::Log };
    assert_eq!(fault(LINEAR, &[(0.0, 1.0)]), CurveFault::TooFew);
    assert_eq!(fault(LINEAR, &[(0.0, 1.0), (1.0, f64::NAN)]), CurveFault::NotFinite { position: 1 });
    assert_eq!(fault(LINEAR, &[(0.0, 1.0), (0.0, 2.0)]), CurveFault::NotIncreasing { position: 1 });
    assert_eq!(fault(log, &[(0.0, 1.0), (1.0, 2.0)]), CurveFault::NotPositive { position: 0 });
    assert_eq!(fault(log, &[(1.0, 1.0), (2.0, -2.0)]), CurveFault::NotPositive { position: 1 });
    assert_eq!(fault(LINEAR, &[(0.0, -1e308), (1.0, 1e308)]), CurveFault::TooSteep { position: 1 });
    assert_eq!(
        fault(LINEAR, &[(0.0, 1.0), (0.0, 2.0)]).to_string(),
        "the argument of point 2 of the curve is not greater than the one before it"
    );
}

fn any_points() -> impl Strategy<Value = Vec<(f64, f64)>> {
    proptest::collection::vec((0.1..10.0, -5.0..5.0), 2..9).prop_map(|steps| {
        let mut x = 0.0;
        steps
            .into_iter()
            .map(|(step, y)| {
                x += step;
                (x, y)
            })
            .collect()
    })
}

proptest! {
    #[test]
    fn a_curve_goes_through_its_points_and_never_beyond_its_neighbours(
        points in any_points(),
        between in prop_oneof![Just(Between::Straight), Just(Between::Monotone)],
        share in 0.0..1.0,
    ) {
        let curve = curve(LINEAR, between, Outside::Refuse, &points);
        for pair in points.windows(2) {
            prop_assert_eq!(curve.value(pair[0].0), pair[0].1);
            prop_assert_eq!(curve.value(pair[1].0), pair[1].1);
            let found = curve.value(pair[0].0 + share * (pair[1].0 - pair[0].0));
            let (low, high) = (pair[0].1.min(pair[1].1), pair[0].1.max(pair[1].1));
            prop_assert!(found >= low - 1e-12 && found <= high + 1e-12, "{} not in {}..{}", found, low, high);
        }
    }

    #[test]
    fn columns_have_the_bits_of_single_values(
        points in any_points(),
        x in proptest::collection::vec(-1.0..60.0, 0..20),
    ) {
        let curve = curve(LINEAR, Between::Monotone, Outside::Edge, &points);
        let mut out = vec![0.0; x.len()];
        curve.value_column(&mut out, &x);
        for (out, x) in out.iter().zip(&x) {
            prop_assert_eq!(out.to_bits(), curve.value(*x).to_bits());
        }
    }
}
