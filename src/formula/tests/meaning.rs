use std::collections::BTreeMap;

use super::{LENGTH, MASS, TIME, entry, read};
use crate::formula::curves::{Axes, Between, Form, Outside, Scale};
use crate::formula::{Curve, Formula, can_be_name};
use crate::quantity::{Dimension, Exponent};

/// The value of a formula with x = 3, y = NaN, diameter = 2 m, mass = 16 kg, age = 10 s, temperature = 300 K.
fn value(text: &str) -> f64 {
    let values = BTreeMap::from([
        ("x", 3.0),
        ("y", f64::NAN),
        ("diameter", 2.0),
        ("mass", 16.0),
        ("age", 10.0),
        ("temperature", 300.0),
    ]);
    let form = Form {
        argument: Dimension::NONE,
        value: Dimension::NONE,
        axes: Axes { argument: Scale::Linear, value: Scale::Linear },
        between: Between::Straight,
        outside: Outside::Refuse,
    };
    let fraction = Curve::new(form, &[(0.0, 0.0), (4.0, 1.0)]).unwrap();
    read(text).evaluate(&|name| values[name], &|_| &fraction)
}

#[test]
fn formulas_have_the_values_of_arithmetic() {
    for (text, expected) in [
        ("1 + 2 * x", 7.0),
        ("10 - 4 - 3", 3.0),
        ("16 / 4 / 2", 2.0),
        ("2^3^2", 512.0),
        ("-x^2", -9.0),
        ("(-x)^2", 9.0),
        ("2 * -x", -6.0),
        ("2^-2", 0.25),
        // Not made of literals, though one part of it is, with more decimals than an exact ratio may have.
        ("4^(0.12345678901 * 0 + x / 6)", 2.0),
        ("x^-1 * x", 1.0),
        ("diameter^2 / (1 [km])^2", 4e-6),
        ("mass^0.75 / (1 [kg])^(3/4)", 8.0),
        ("mass / 8 [kg]", 2.0),
        ("1 [h] + age", 3610.0),
        ("sqrt(mass / 1 [kg])", 4.0),
        ("min(x, 2, 5) + max(x, 2, 5)", 7.0),
        ("abs(0 - x)", 3.0),
        ("fraction(x)", 0.75),
        ("0 * diameter", 0.0),
        ("infinity", f64::INFINITY),
        ("1 / infinity", 0.0),
        ("choose(x < 4, 1, 2)", 1.0),
        ("choose(x <= 3 and x >= 3 and not x > 3, 1, 2)", 1.0),
        ("choose(x = 4 or x < 1, 1, 2)", 2.0),
        ("choose(temperature > 0 [K], 1, 2)", 1.0),
        ("choose(x < 4 or x < 5 and x < 1, 1, 2)", 1.0),
        ("choose(not x < 4 and x < 4, 1, 2)", 2.0),
    ] {
        let found = value(text);
        assert!(found == expected || (found - expected).abs() < 1e-14 * expected.abs(), "{text} = {found}");
    }
}

#[test]
fn of_equal_numbers_the_least_and_the_greatest_is_the_first() {
    for (text, negative) in
        [("min(0, -0)", false), ("min(-0, 0)", true), ("max(-0, 0, -0)", true), ("max(0, -0)", false)]
    {
        assert_eq!(value(text).is_sign_negative(), negative, "{text}");
    }
}

#[test]
fn not_a_number_passes_through_except_in_the_branch_not_taken() {
    for text in ["min(y, 1)", "max(1, y)", "y + 1", "choose(x < 4, y, 1)", "fraction(5)", "sqrt(-x)", "y^2"] {
        assert!(value(text).is_nan(), "{text}");
    }
    assert_eq!(value("choose(x < 4, 1, y)"), 1.0);
    // A comparison with NaN does not hold, so its negation does.
    assert_eq!(value("choose(y < 4, 1, 2)"), 2.0);
    assert_eq!(value("choose(not y < 4, 1, 2)"), 1.0);
}

#[test]
fn an_arrhenius_factor_has_its_value() {
    // By hand, with R = 8.314462618 J/(mol K) (CODATA 2018): 69000 / R * (1/298.15 - 1/300) = 0.171644...
    let found = value("exp(-69 [kJ/mol] / 8.314462618 [J/(mol K)] * (1/temperature - 1/298.15 [K]))");
    let exponent: f64 = 69_000.0 / 8.314_462_618 * (1.0 / 298.15 - 1.0 / 300.0);
    assert!((found - libm::exp(exponent)).abs() < 1e-12, "{found}");
    assert!((found - 1.187_26).abs() < 5e-5, "{found}");
}

#[test]
fn formulas_have_their_dimensions() {
    let area = Dimension::whole([2, 0, 0, 0, 0, 0, 0]);
    let root = MASS.power(Exponent::new(3, 4).unwrap()).unwrap();
    for (text, dimension) in [
        ("diameter * width", Some(area)),
        ("sqrt(diameter * width)", Some(LENGTH)),
        ("cbrt(diameter^3)", Some(LENGTH)),
        ("mass^0.75", Some(root)),
        ("mass^(3/4)", Some(root)),
        ("mass^(2^-2 * 3)", Some(root)),
        ("diameter^2^1", Some(area)),
        ("diameter / width", Some(Dimension::NONE)),
        ("(diameter / width)^slope", Some(Dimension::NONE)),
        ("2", Some(Dimension::NONE)),
        ("5 [µm] + diameter", Some(LENGTH)),
        ("0", None),
        ("0 [m]", Some(LENGTH)),
        ("infinity", None),
        ("-0", None),
        ("0 + diameter", Some(LENGTH)),
        ("diameter - 0", Some(LENGTH)),
        ("max(0, diameter, infinity)", Some(LENGTH)),
        ("max(0, infinity)", None),
        ("choose(x < 1, 0, diameter)", Some(LENGTH)),
        ("choose(diameter > 0, infinity, age)", Some(TIME)),
        ("0 * diameter", None),
        ("exp(0)", Some(Dimension::NONE)),
        ("0^slope", Some(Dimension::NONE)),
        ("sqrt(infinity) + age", Some(TIME)),
        ("diameter^0", Some(Dimension::NONE)),
        ("viscosity_at(0) * 1 [m s]", Some(MASS)),
    ] {
        let formula = read(text);
        assert_eq!(formula.dimension(), dimension, "{text}");
        assert!(formula.fits(dimension.unwrap_or(MASS)), "{text}");
        assert_eq!(formula.fits(TIME), dimension.is_none() || dimension == Some(TIME), "{text}");
    }
}

#[test]
fn names_come_in_the_order_of_first_use() {
    let formula = read(
        "mass + 0 [kg] * fraction(x) + mass * y^(slope * x) * viscosity_at(temperature) / viscosity_at(0)",
    );
    assert_eq!(formula.names(), ["mass", "x", "y", "slope", "temperature"]);
    assert_eq!(formula.curves(), ["fraction", "viscosity_at"]);
}

#[test]
fn the_text_is_kept_as_written_over_several_lines() {
    let text = "diameter\n  + width\u{a0}* 2";
    let formula = Formula::read(text, &entry()).unwrap();
    assert_eq!(formula.text(), text);
    assert_eq!(formula.root().to_string(), "diameter + width * 2");
}

#[test]
fn words_of_the_language_cannot_be_names() {
    for name in ["diameter", "_x1", "log"] {
        assert!(can_be_name(name), "{name}");
    }
    for name in ["", "1x", "Mass", "a-b", "exp", "and", "infinity", "sum", "solve", "choose"] {
        assert!(!can_be_name(name), "{name}");
    }
}
