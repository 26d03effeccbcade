use super::{
    LADDERS, Precision, ascii_unit, chance, count, dex, difference_in_unit, factor, factor_range, in_unit,
    number, pair, range, share, unit_text,
};
use crate::quantity::Unit;

fn unit(text: &str) -> Unit {
    Unit::read(text).unwrap()
}

#[test]
fn numbers_keep_the_digits_asked_for() {
    let two = Precision::Digits(2);
    for (value, text) in [
        (0.00213, "0.0021"),
        (210.4, "210"),
        (0.3, "0.30"),
        (-3.04, "−3.0"),
        (1_234_567.0, "1.2×10⁶"),
        (9.99e4, "1.0×10⁵"),
        (1.26e-7, "1.3×10⁻⁷"),
        (0.0, "0"),
        (f64::INFINITY, "infinite"),
        (f64::NEG_INFINITY, "−infinite"),
        (f64::NAN, "not a number"),
    ] {
        assert_eq!(number(value, two), text);
    }
    assert_eq!(number(210.0, Precision::UpTo(4)), "210");
    assert_eq!(number(0.125, Precision::UpTo(4)), "0.125");
    assert_eq!(number(2e9, Precision::UpTo(4)), "2×10⁹");
    assert_eq!(number(f64::MIN_POSITIVE, Precision::UpTo(4)), "2.225×10⁻³⁰⁸");
}

#[test]
fn the_last_digit_is_worth_about_a_tenth_of_half_the_interval() {
    // Half of 161 to 259 is 49: a tenth is 5, nearer to 10 than to 1 on a logarithmic scale.
    assert_eq!(Precision::supported_by(210.0, 161.0, 259.0), Precision::Digits(2));
    assert_eq!(Precision::supported_by(210.0, 199.0, 221.0), Precision::Digits(3));
    assert_eq!(Precision::supported_by(1.0, -1000.0, 1000.0), Precision::Digits(1));
    assert_eq!(Precision::supported_by(1.0, 1.0 - 1e-9, 1.0 + 1e-9), Precision::Digits(4));
    assert_eq!(Precision::supported_by(5.0, 5.0, 5.0), Precision::UpTo(4));
    assert_eq!(Precision::supported_by(5.0, f64::NEG_INFINITY, 5.0), Precision::Digits(2));
    assert_eq!(Precision::supported_by(0.0, -1.0, 1.0), Precision::Digits(2));
    assert_eq!(Precision::supported_by_dex(-0.01, 0.01), Precision::Digits(3));
    assert_eq!(Precision::supported_by_dex(-3.0, 3.0), Precision::Digits(2));
    assert_eq!(Precision::supported_by_dex(0.3, 0.3), Precision::UpTo(3));
    assert_eq!(Precision::supported_by_dex(f64::NEG_INFINITY, 0.0), Precision::Digits(2));
}

#[test]
fn units_shift_to_the_prefix_that_reads_best() {
    let two = Precision::Digits(2);
    for (si, preferred, text) in [
        (210e-9, "nm", "210 nm"),
        (3e-6, "nm", "3.0 µm"),
        (0.21e-6, "µm", "0.21 µm"),
        (2.1e-21, "µm^3", "0.0021 µm³"),
        (4e-26, "µm^3", "40 nm³"),
        (4.2e-21, "fW", "4.2 zW"),
        (1.5e-12, "zW", "1.5 pW"),
        (90.0, "h", "1.5 min"),
        (1800.0, "h", "0.50 h"),
        (6.0e7, "d", "690 d"),
        (6.0e9, "d", "190 yr"),
        (12e6, "kg", "12 kt"),
        (328.15, "°C", "55 °C"),
        (1.3e6, "bp", "1.3 Mbp"),
        (1.3e6, "Mbp", "1.3 Mbp"),
        (42.0, "", "42"),
        (17.0, "aa/s", "17 aa/s"),
        (4.5e3 / 3600.0, "kJ/(mol h)", "4.5 kJ/(mol h)"),
        (2e-8, "mol/(m^2 s)", "20 nmol/(m² s)"),
        (1e12, "cells/mL", "1.0×10⁶ cells/mL"),
        (0.0, "nm", "0 nm"),
        (f64::INFINITY, "d", "infinite"),
        // Far off the ladder: the preferred unit.
        (1e-40, "W", "1.0×10⁻⁴⁰ W"),
    ] {
        assert_eq!(in_unit(si, two, &unit(preferred)), text);
    }
    assert_eq!(difference_in_unit(8.0, Precision::UpTo(4), &unit("°C")), "8 °C");
    assert_eq!(difference_in_unit(8e-9, Precision::UpTo(4), &unit("µm")), "8 nm");
}

#[test]
fn every_rung_of_every_ladder_reads_and_lies_above_the_one_before() {
    for ladder in LADDERS {
        let rungs: Vec<Unit> = ladder.iter().map(|rung| unit(rung)).collect();
        for (rung, next) in rungs.iter().zip(&rungs[1..]) {
            assert_eq!(rung.dimension(), next.dimension());
            assert!(rung.factor() < next.factor(), "{} and {}", rung.text(), next.text());
        }
    }
}

#[test]
fn two_numbers_to_compare_share_a_unit_when_that_reads_well() {
    let two = Precision::Digits(2);
    assert_eq!(pair(2.1e-21, 6.7e-21, two, &unit("µm^3")), ("0.0021 µm³".into(), "0.0067 µm³".into()));
    assert_eq!(pair(3.2e-15, 11e-18, two, &unit("zW")), ("3.2 fW".into(), "0.011 fW".into()));
    assert_eq!(pair(1e-12, 4e-21, two, &unit("fW")), ("1.0 pW".into(), "4.0 zW".into()));
    assert_eq!(pair(4e-15, 0.0, two, &unit("zW")), ("4.0 fW".into(), "0 fW".into()));
    assert_eq!(pair(f64::INFINITY, 4e-15, two, &unit("fW")), ("infinite".into(), "4.0 fW".into()));
    assert_eq!(range(161e-9, 259e-9, Precision::Digits(3), &unit("nm")), "161 to 259 nm");
    assert_eq!(range(0.9e-6, 1.2e-6, two, &unit("nm")), "0.90 to 1.2 µm");
}

#[test]
fn margins_read_as_factors_short_or_spare() {
    let two = Precision::Digits(2);
    // 10^0.505 = 3.20 and 10^1.079 = 12.0, by hand.
    assert_eq!(factor(-0.505, two), "3.2 times short");
    assert_eq!(factor(1.079, two), "12 times spare");
    assert_eq!(factor(0.0, two), "just enough");
    assert_eq!(factor(f64::NEG_INFINITY, two), "short without bound");
    assert_eq!(factor(f64::INFINITY, two), "spare without bound");
    assert_eq!(factor_range(-0.69, -0.32, two), "2.1 to 4.9 times short");
    assert_eq!(factor_range(-0.3, 0.3, two), "2.0 times short to 2.0 times spare");
    assert_eq!(factor_range(f64::NEG_INFINITY, -0.3, two), "short without bound to 2.0 times short");
    assert_eq!(dex(-0.504, 2), "−0.50");
    assert_eq!(dex(1.26, 1), "+1.3");
    assert_eq!(dex(-0.001, 2), "−0.00");
    assert_eq!(dex(f64::NEG_INFINITY, 2), "−infinity");
}

#[test]
fn chances_are_never_printed_as_certain_nor_on_the_wrong_side_of_a_threshold() {
    let thresholds = [0.95, 0.05];
    for (value, column, sentence) in [
        (0.0, "< 0.001", "less than 0.1 %"),
        (1.0, "> 0.999", "more than 99.9 %"),
        (0.97, "0.970", "97 %"),
        (0.4231, "0.423", "42 %"),
        (0.9499, "0.9499", "94.99 %"),
        (0.949_96, "0.94996", "94.996 %"),
        (0.95, "0.950", "95 %"),
        (0.0501, "0.0501", "5.01 %"),
        (0.031, "0.031", "3.1 %"),
    ] {
        assert_eq!(chance(value, &thresholds), column);
        assert_eq!(share(value, &thresholds), sentence);
    }
    assert_eq!(count(1_048_576), "1,048,576");
    assert_eq!(count(65_536), "65,536");
    assert_eq!(count(7), "7");
}

#[test]
fn units_in_ascii_read_as_the_same_unit() {
    for (text, ascii) in [
        ("µm^3", "um^3"),
        ("°C", "degC"),
        ("kJ/(mol h)", "kJ/(mol h)"),
        ("", ""),
        // No ASCII symbol: the SI unit instead.
        ("Å", "m"),
        ("‰", ""),
    ] {
        let (same, shown) = ascii_unit(&unit(text));
        assert_eq!(shown, ascii);
        assert_eq!(unit(&shown), same);
        assert_eq!(same.dimension(), unit(text).dimension());
    }
    assert_eq!(unit_text(&unit("mol/(m^2 s)")), "mol/(m² s)");
    assert_eq!(unit_text(&unit("m^-2")), "m⁻²");
}
