use super::{LENGTH, NUMBER, TEMPERATURE, close};
use crate::quantity::distribution::Distribution;
use crate::quantity::written::read_text;

#[track_caller]
fn normal(text: &str) -> (f64, f64) {
    match read_text(text) {
        Ok((Distribution::Normal { mean, sd }, _)) => (mean, sd),
        other => panic!("{text}: {other:?}"),
    }
}

#[track_caller]
fn lognormal(text: &str) -> (f64, f64) {
    match read_text(text) {
        Ok((Distribution::Lognormal { median, factor }, _)) => (median, factor),
        other => panic!("{text}: {other:?}"),
    }
}

#[track_caller]
fn exact(text: &str) -> f64 {
    match read_text(text) {
        Ok((Distribution::Exact(value), _)) => value,
        other => panic!("{text}: {other:?}"),
    }
}

#[test]
fn exact_values_are_read_in_si_units() {
    for (text, si) in [
        ("210 nm", 2.1e-7),
        ("210nm", 2.1e-7),
        ("0.21 µm", 2.1e-7),
        (" 210\u{a0}nm ", 2.1e-7),
        ("55 °C", 328.15),
        ("-5 °C", 268.15),
        ("\u{2212}5 °C", 268.15),
        ("+5 m", 5.0),
        ("0.5", 0.5),
        (".5", 0.5),
        ("20 %", 0.2),
        ("580 kbp", 580e3),
        ("1.5 eV", 1.5 * 1.602_176_634e-19),
        ("5e3 m", 5e3),
        ("5E-3 m", 5e-3),
        ("2.1e\u{2212}7 m", 2.1e-7),
        ("3×10⁻¹⁴ W", 3e-14),
        ("3 × 10⁻¹⁴ W", 3e-14),
        ("3 x 10^-14 W", 3e-14),
        ("3·10^(-14) W", 3e-14),
        ("3e-14 W", 3e-14),
        ("10^6 cells/mL", 1e12),
        ("10⁻¹⁴ W", 1e-14),
        ("3e17 1/(m² s)", 3e17),
        ("5 1 / s", 5.0),
        ("45°", std::f64::consts::FRAC_PI_4),
        ("0", 0.0),
    ] {
        assert_eq!(exact(text), si, "{text}");
    }
}

#[test]
fn a_standard_uncertainty_may_be_written_in_many_ways() {
    for text in [
        "210 ± 30 nm",
        "210±30nm",
        "(210 ± 30) nm",
        "210 nm ± 30 nm",
        "210 nm ± 0.03 µm",
        "210(30) nm",
        "210 +/- 30 nm",
        "210 +- 30 nm",
        "(2.1 ± 0.3)×10⁻⁷ m",
        "(2.1 ± 0.3) x 10^-7 m",
        "2.1e-7 ± 3e-8 m",
        "2.1×10⁻⁷ ± 3×10⁻⁸ m",
        "2.10(30)e-7 m",
        "210 ± 60 nm (k=2)",
        "(210 ± 60) nm (k = 2)",
        "210(60) nm (k=2)",
    ] {
        let (mean, sd) = normal(text);
        assert_eq!(mean, 2.1e-7, "{text}");
        close(sd, 3e-8, 1e-15);
    }
}

#[test]
fn digits_in_parentheses_count_the_last_places() {
    // The form that CODATA uses: m_u = 1.660 539 066 60(50) × 10^-27 kg (2018).
    let (mean, sd) = normal("1.66053906660(50)×10⁻²⁷ kg");
    assert_eq!(mean, 1.660_539_066_60e-27);
    close(sd, 0.000_000_000_50e-27, 1e-15);
    let (mean, sd) = normal("1.234(15)");
    assert_eq!((mean, sd), (1.234, 0.015));
    assert_eq!(normal("1200(30) m"), (1200.0, 30.0));
}

#[test]
fn a_coverage_interval_is_divided_by_its_coverage_factor() {
    // 1.959964 is the 0.975 quantile of the normal, from any handbook table.
    let (_, sd) = normal("210 ± 59 nm (95 %)");
    close(sd, 59e-9 / 1.959_963_984_540, 1e-12);
    let (_, sd) = normal("210 ± 59 nm (95%)");
    close(sd, 59e-9 / 1.959_963_984_540, 1e-12);
    // 68.268949 % lie within one standard deviation.
    close(normal("210 ± 30 nm (68.268949213709 %)").1, 30e-9, 1e-11);
}

#[test]
fn a_factor_may_be_written_in_many_ways() {
    for text in [
        "17 aa/s ×/÷ 1.3",
        "17 aa/s x/ 1.3",
        "17 aa/s x/÷ 1.3",
        "17 aa/s ×÷ 1.3",
        "17 aa/s */ 1.3",
        "17 1/s × / ÷ 1.3",
    ] {
        assert_eq!(lognormal(text), (17.0, 1.3), "{text}");
    }
    assert_eq!(lognormal("0.2 ×/÷ 1.3"), (0.2, 1.3));
    close(lognormal("17 aa/s ×/÷ 1.69 (k=2)").1, 1.3, 1e-14);
    assert_eq!(exact("5 lx/s"), 5.0);
}

#[test]
fn percentages_and_degrees_after_the_sign_are_differences() {
    let (mean, sd) = normal("20 ± 5 %");
    assert_eq!((mean, sd), (0.2, 0.05));
    assert_eq!(normal("20 % ± 5 %"), (0.2, 0.05));
    assert_eq!(normal("55 ± 10 °C"), (328.15, 10.0));
    assert_eq!(normal("55 °C ± 10 K"), (328.15, 10.0));
    assert_eq!(normal("328 K ± 10 °C"), (328.0, 10.0));
    assert_eq!(normal("(55 ± 10) °C"), (328.15, 10.0));
}

#[test]
fn an_uncertainty_that_can_be_meant_in_two_ways_is_refused_repaired() {
    LENGTH.refuses("210 nm ± 10 %", "10 %", "percentage", "`210 ± 21 nm`");
    LENGTH.refuses("210 nm ± 30", "30", "no unit", "`210 ± 30 nm`");
    LENGTH.refuses("2.1 ± 0.3×10⁻⁷ m", "2.1 ± 0.3×10⁻⁷", "one number or to both", "`(2.1 ± 0.3)×10⁻⁷ m`");
    LENGTH.refuses("210 nm ± 30 s", "30 s", "a length, its uncertainty a time", "`210 ± 30 nm`");
    LENGTH.refuses("210 ×/÷ 1.5 nm", "nm", "pure number", "`210 nm ×/÷ 1.5`");
    LENGTH.refuses("210 nm ×/÷ 50 %", "%", "pure number", "`210 nm ×/÷ 50`");
    LENGTH.refuses("210(30) ± 5 nm", "210(30)", "another one", "one of the two");
    LENGTH.refuses("1.2(0.3) nm", "(0.3)", "point", "`1.2 ± 0.3 nm`");
    LENGTH.refuses("210 (30) nm", "(30)", "apart", "`210(30) nm`");
    LENGTH.refuses("(210 nm ± 30 nm)", "nm ", "only a number", "`(210 ± 30) nm`");
    LENGTH.refuses("(210 ± 30 nm", "n", "only `)`", "`(210 ± 30) nm`");
    TEMPERATURE.refuses("20 °C ×/÷ 1.5", "°C", "does not begin at zero", "`K`");
}

#[test]
fn spreads_that_are_none_are_refused() {
    LENGTH.refuses("210 ± 0 nm", "± 0", "zero", "`210 nm` for an exact value");
    LENGTH.refuses("210(0) nm", "210(0)", "zero", "`210 nm` for an exact value");
    LENGTH.refuses("210 ± -30 nm", "± -30", "negative", "above zero");
    LENGTH.refuses("210 nm ×/÷ 1", "1", "not above 1", "`1.5`");
    LENGTH.refuses("210 nm ×/÷ 0.5", "0.5", "not above 1", "`1.5`");
    LENGTH.refuses("0 nm ×/÷ 2", "0", "above zero", "`±`");
    LENGTH.refuses("210 nm (k=2)", "(k=2)", "no uncertainty", "`210 ± 60 nm (k=2)`");
    LENGTH.refuses("210 ± 60 nm (k=0)", "(k=0)", "expanded", "`(k=2)`");
    LENGTH.refuses("210 ± 60 nm (100 %)", "(100 %)", "expanded", "`(95 %)`");
    LENGTH.refuses("210 ± 60 nm (2σ)", "(2σ)", "expanded", "`(k=2)`");
}

#[test]
fn numbers_as_other_habits_write_them_are_refused_repaired() {
    LENGTH.refuses("2,5 nm", "2,5", "decimal comma", "`2.5 nm`");
    LENGTH.refuses("1,500 nm", "1,500", "two ways", "`1.500 nm` or `1500 nm`");
    LENGTH.refuses("1,500,000 nm", "1,500,000", "commas", "`1500000 nm`");
    LENGTH.refuses("1,500.5 nm", "1,500.5", "commas", "`1500.5 nm`");
    LENGTH.refuses("1 500 000 nm", "1 500 000", "blanks", "`1500000 nm`");
    LENGTH.refuses("1_500 nm", "1_500", "marks", "`1500 nm`");
    LENGTH.refuses("1'500 nm", "1'500", "marks", "`1500 nm`");
    LENGTH.refuses("1.500.000 nm", "1.500.000", "marks", "`1500000 nm`");
    LENGTH.refuses("210 ± 2,5 nm", "2,5", "decimal comma", "`210 ± 2.5 nm`");
    LENGTH.refuses("210 30 nm", "210 30", "two numbers", "one number");
    LENGTH.refuses("2 ×1014 nm", "×1014", "product of numbers", "`×10^14`");
}

#[test]
fn limits_ranges_and_rough_numbers_are_refused_with_the_way_to_write_them() {
    LENGTH.refuses("'> 200 nm'", ">", "one side", "`{ min: 200 nm, max: 400 nm }`");
    LENGTH.refuses("<= 200 nm", "<=", "one side", "`{ min: 100 nm, max: 200 nm }`");
    LENGTH.refuses("≥ 200 nm", "≥", "one side", "`{ min: 200 nm, max: 400 nm }`");
    LENGTH.refuses("~210 nm", "~", "how far", "`210 ± 21 nm`");
    LENGTH.refuses("about 210 nm", "about", "how far", "`210 nm` if it is exact");
    LENGTH.refuses("ca. 210 nm", "ca.", "how far", "`210 ± 21 nm`");
    LENGTH.refuses("180–240 nm", "180–240 nm", "range", "`{ min: 180 nm, max: 240 nm }`");
    LENGTH.refuses("180-240 nm", "180-240 nm", "range", "`{ min: 180 nm, max: 240 nm }`");
    LENGTH.refuses("180 nm - 240 nm", "180 nm - 240 nm", "range", "`{ min: 180 nm, max: 240 nm }`");
    LENGTH.refuses("180 to 240 nm", "180 to 240 nm", "range", "`{ min: 180 nm, max: 240 nm }`");
    LENGTH.refuses("180—240 nm", "180—240 nm", "range", "`{ min: 180 nm, max: 240 nm }`");
    LENGTH.refuses("1/3 µm", "1/3", "a fraction", "`0.333333 µm`");
    LENGTH.refuses(
        "210 +30/-20 nm",
        "+30/-20 nm",
        "two different sides",
        "`{ min: 190 nm, mode: 210 nm, max: 240 nm }`",
    );
    LENGTH.refuses("210 +30 −20 nm", "+30 −20 nm", "two different sides", "low: 190 nm, high: 240 nm");
    LENGTH.refuses("2.1 × 10-7 m", "× 10-7", "product", "`×10^-7`");
    LENGTH.refuses("0·21 µm", "·21", "product", "`0.21`");
    LENGTH.refuses("180..240 nm", "180..240 nm", "range", "`{ min: 180 nm, max: 240 nm }`");
    NUMBER.refuses("17 aa s-1", "s-1", "sign of a power", "`s^-1`");
}

#[test]
fn what_is_no_number_is_refused_at_its_place() {
    LENGTH.refuses("nan", "nan", "not a number", "`210`");
    LENGTH.refuses(".nan", ".nan", "not a number", "`210`");
    LENGTH.refuses("-.inf", "-.inf", "not a finite number", "`210`");
    LENGTH.refuses("∞ nm", "∞", "not a finite number", "`210`");
    LENGTH.refuses("unknown", "unknown", "where a number was expected", "`210`");
    LENGTH.refuses("± 30 nm", "±", "where a number was expected", "`210`");
    LENGTH.refuses("5. nm", ".", "cannot stand", "");
    LENGTH.refuses("210 ±", "±", "a number is missing", "`210`");
    LENGTH.refuses("''", "", "no text", "`210 nm`");
    LENGTH.refuses("1e400 nm", "1e400", "larger than a number", "");
    LENGTH.refuses("1e-400 nm", "1e-400", "vanish", "");
    LENGTH.refuses("1e-999999999999999999999 nm", "1e-999999999999999999999", "vanish", "");
    LENGTH.refuses("“210 nm”", "“", "typographic quote", "straight quotes");
    LENGTH.refuses("210 psu", "psu", "not a unit", "`g/kg`");
    LENGTH.refuses("210 kgg", "kgg", "not a unit", "a length such as `1 nm`");
    LENGTH.refuses("1e-305 nm", "1e-305", "`1e-305 nm` is so small", "");
    LENGTH.refuses("1e308 Gm", "1e308", "`1e308 Gm` is larger", "");
    LENGTH.refuses("210 furlong", "furlong", "not a unit", "a length such as `1 nm`");
    LENGTH.refuses("210 nm (TEM, plate 3)", "(TEM, plate 3)", "remark", "about: \"TEM, plate 3\" }`");
    LENGTH.refuses("210 nm ± 30 mn", "mn", "not a unit", "");
    let long = format!("{} nm", "1".repeat(400));
    LENGTH.refuses(&long, &long, "403 bytes", "`210 nm`");
}

#[test]
fn the_dimension_is_the_one_that_is_wanted() {
    LENGTH.refuses("210 s", "s", "found a time", "a length such as `210 nm`");
    LENGTH.refuses("210", "210", "unit is missing", "a length such as `210 nm`");
    LENGTH.refuses("210 ± 30", "210", "unit is missing", "a length such as `210 ± 30 nm`");
    LENGTH.refuses("210 ×/÷ 1.5", "210", "unit is missing", "a length such as `210 nm ×/÷ 1.5`");
    LENGTH.refuses("0", "0", "unit is missing", "a length such as `0 nm`");
    NUMBER.refuses("5 nm", "nm", "found a length", "a pure number such as `5`");
    TEMPERATURE.refuses("55 C", "C", "found an electric charge", "°C");
    TEMPERATURE.refuses("55 ± 5 m °C", "°C", "does not begin at zero", "`K`");
    assert_eq!(NUMBER.distribution("0"), Distribution::Exact(0.0));
    assert_eq!(NUMBER.distribution("3 bp"), Distribution::Exact(3.0));
}

#[test]
fn values_outside_the_bounds_are_refused() {
    LENGTH.refuses("-5 nm", "-5 nm", "cannot be `-5 nm`", "from 0 nm to 1 m");
    LENGTH.refuses("2 m", "2 m", "cannot be `2 m`", "from 0 nm");
    TEMPERATURE.refuses("-300 °C", "-300 °C", "cannot be `-300 °C`", "at least −273.15 °C");
    LENGTH.refuses("-10 ± 5 nm", "-10 ± 5 nm", "98 % of this distribution", "from 0 nm");
    LENGTH.refuses("1e-200 m ×/÷ 1e20", "1e-200 m ×/÷ 1e20", "beyond what numbers can hold", "narrower");
}

#[test]
fn the_share_that_the_bounds_cut_is_given() {
    assert_eq!(LENGTH.reading("210 nm").cut, 0.0);
    // Φ(-2), from the normal table of any handbook.
    close(LENGTH.reading("60 ± 30 nm").cut, 0.022_750_131_948, 1e-10);
    assert!(LENGTH.reading("210 ± 30 nm").cut < 1e-11);
    assert_eq!(LENGTH.reading("210 ± 30 nm").unit.text(), "nm");
}
