use std::collections::BTreeMap;

use proptest::prelude::{Strategy, any, prop, proptest};
use proptest::{prop_assert, prop_assert_eq};

use super::Unit;
use super::symbols::{all, find};
use crate::quantity::dimension::Dimension;

fn unit(text: &str) -> Unit {
    Unit::read(text).unwrap_or_else(|fault| panic!("`{text}`: {fault:?}"))
}

#[track_caller]
fn refused(text: &str, at: &str, says: &str, remedy: &str) {
    let fault = Unit::read(text).expect_err(text);
    assert_eq!(&text[fault.span.clone()], at, "{fault:?}");
    assert!(fault.message.contains(says), "{fault:?}");
    let remedies = format!("{} {}", fault.expected.unwrap_or_default(), fault.nearest.unwrap_or_default());
    assert!(remedies.contains(remedy), "{remedies:?} has no {remedy:?}");
}

#[test]
fn factors_are_those_of_the_standards() {
    // NIST SP 811 (2008), appendix B.8, as far as it lists the unit; the SI brochure (9th edition), tables 7 and 8, for
    // °C, Da, eV, min, h, d, ha, L, t; IAU 2012 B2 for au; the Julian year of 365.25 d. From memory.
    let expected = [
        ("Å", 1e-10),
        ("au", 1.495_978_707e11),
        ("ha", 1e4),
        ("L", 1e-3),
        ("t", 1e3),
        ("Da", 1.660_539_066_60e-27),
        ("eV", 1.602_176_634e-19),
        ("min", 60.0),
        ("h", 3600.0),
        ("d", 86_400.0),
        ("yr", 3.155_76e7),
        ("M", 1e3),
        ("bar", 1e5),
        ("atm", 1.013_25e5),
        ("Torr", 1.333_224e2),
        ("mmHg", 1.333_224e2),
        ("Wh", 3.6e3),
        ("Gy", 1.0),
        ("Sv", 1.0),
        ("P", 0.1),
        ("St", 1e-4),
        ("gₙ", 9.806_65),
        ("°", 1.745_329e-2),
        ("%", 1e-2),
        ("‰", 1e-3),
        ("ppm", 1e-6),
        ("ppb", 1e-9),
        ("kbp", 1e3),
        ("pW", 1e-12),
        ("kJ/(mol h)", 1e3 / 3600.0),
        ("mmol/L", 1.0),
        ("µm^3", 1e-18),
    ];
    for (text, factor) in expected {
        let read = unit(text).factor();
        assert!((read / factor - 1.0).abs() < 1e-6, "{text}: {read}");
    }
    assert_eq!(unit("°C").offset(), 273.15);
    assert_eq!(unit("°C").to_si(55.0), 328.15);
    assert_eq!(unit("°C").difference_to_si(10.0), 10.0);
}

#[test]
fn a_decimal_prefix_costs_no_accuracy() {
    for (text, value, si) in [
        ("nm", 210.0, 2.1e-7),
        ("µm", 3.0, 3e-6),
        ("kJ/mol", 69.0, 69e3),
        ("fg", 7.0, 7e-18),
        ("mM", 3.0, 3.0),
        ("cells/mL", 1e6, 1e12),
        ("µm^3", 5.0, 5e-18),
        ("ppm", 420.0, 4.2e-4),
    ] {
        assert_eq!(unit(text).to_si(value), si, "{text}");
    }
}

#[test]
fn dimensions_are_those_of_the_si_brochure() {
    // SI brochure, 9th edition, tables 4 and 5.
    for (text, exponents) in [
        ("N", [1, 1, -2, 0, 0, 0, 0]),
        ("Pa", [-1, 1, -2, 0, 0, 0, 0]),
        ("J", [2, 1, -2, 0, 0, 0, 0]),
        ("W", [2, 1, -3, 0, 0, 0, 0]),
        ("C", [0, 0, 1, 1, 0, 0, 0]),
        ("V", [2, 1, -3, -1, 0, 0, 0]),
        ("F", [-2, -1, 4, 2, 0, 0, 0]),
        ("Ω", [2, 1, -3, -2, 0, 0, 0]),
        ("S", [-2, -1, 3, 2, 0, 0, 0]),
        ("T", [0, 1, -2, -1, 0, 0, 0]),
        ("Gy", [2, 0, -2, 0, 0, 0, 0]),
        ("kat", [0, 0, -1, 0, 0, 1, 0]),
        ("lx", [-2, 0, 0, 0, 0, 0, 1]),
        ("Hz", [0, 0, -1, 0, 0, 0, 0]),
        ("M", [-3, 0, 0, 0, 0, 1, 0]),
        ("Pa s", [-1, 1, -1, 0, 0, 0, 0]),
        ("J/(mol K)", [2, 1, -2, 0, -1, -1, 0]),
        ("°C", [0, 0, 0, 0, 1, 0, 0]),
        ("aa/s", [0, 0, -1, 0, 0, 0, 0]),
        ("Mbp", [0; 7]),
        ("rad", [0; 7]),
        ("dex", [0; 7]),
    ] {
        assert_eq!(unit(text).dimension(), Dimension::whole(exponents), "{text}");
    }
}

#[test]
fn no_text_has_two_readings() {
    let mut readings: BTreeMap<String, String> = BTreeMap::new();
    let mut texts = 0;
    for (text, found) in all() {
        // The prefix may be written in three ways.
        let spellings = match text.strip_prefix('µ') {
            Some(name) if found.prefix.is_some() => {
                vec![format!("\u{b5}{name}"), format!("\u{3bc}{name}"), format!("u{name}")]
            }
            _ => vec![text.clone()],
        };
        for spelling in spellings {
            let read = find(&spelling).expect("every listed text is read");
            assert_eq!((read.symbol.name, read.prefix), (found.symbol.name, found.prefix), "{spelling}");
            let other = readings.insert(spelling.clone(), text.clone());
            assert_eq!(other, None, "`{spelling}` has two readings");
            texts += 1;
        }
    }
    assert!(texts > 350, "only {texts} texts");
}

#[test]
fn every_symbol_alone_is_a_unit_and_its_own_canonical_text() {
    for (text, found) in all() {
        let read = unit(&text);
        assert_eq!(unit(read.text()), read);
        if found.prefix.is_none() && found.symbol.name == text {
            assert_eq!(read.text(), text);
        }
    }
}

#[test]
fn the_same_unit_may_be_written_in_many_ways() {
    for (canonical, others) in [
        ("µm", vec!["\u{3bc}m", "um", " µm "]),
        ("Å", vec!["\u{212b}"]),
        ("W m^-2", vec!["W·m⁻²", "W·m^-2", "W*m^−2", "W m⁻²", "W\u{a0}m⁻²", "W\u{202f}m^(-2)"]),
        ("aa s^-1", vec!["aa s⁻¹", "aa\u{2009}s⁻¹", "aa · s^-1"]),
        ("kJ/(mol h)", vec!["kJ / ( mol h )", "kJ/(mol·h)", "kJ∕(mol*h)"]),
        ("1/s", vec!["1 / s"]),
        ("1/(m^2 s)", vec!["1/(m² s)", "1/(m²s)"]),
        ("MPa m^(1/2)", vec!["MPa·m^0.5", "MPa m^( 1 / 2 )", "MPa m^(2/4)"]),
        ("°C", vec!["degC", "℃", "ºC"]),
        ("mL", vec!["ml"]),
        ("kΩ", vec!["kohm", "k\u{2126}"]),
        ("cells/mL", vec!["cell/mL"]),
        ("", vec![" ", "1"]),
    ] {
        assert_eq!(unit(canonical).text(), canonical);
        for other in others {
            assert_eq!(unit(other), unit(canonical), "{other}");
        }
    }
}

#[test]
fn what_can_be_read_in_two_ways_is_refused_with_both() {
    refused("kJ/mol/h", "/", "two slashes", "`kJ/(mol h)`");
    refused("W/m²/K", "/", "two slashes", "`W/(m^2 K)`");
    refused("kJ/mol h", "h", "two ways", "`kJ/(mol h)` or `kJ h/mol`");
    refused("W/m²·K", "·", "two ways", "`W/(m^2 K)` or `W K/m^2`");
    refused("kJ/(mol/h)", "/", "two ways", "one slash");
}

#[test]
fn a_power_without_its_sign_is_refused_with_the_repair() {
    refused("h-1", "h-1", "sign of a power", "`h^-1`");
    refused("W/m2", "m2", "sign of a power", "`m^2`");
    refused("aa s−1", "s−1", "sign of a power", "`s^-1`");
    refused("cm3", "cm3", "sign of a power", "`cm^3`");
    refused("m**2", "**", "product sign", "`^`");
}

#[test]
fn celsius_stands_alone() {
    refused("J/°C", "°C", "does not begin at zero", "`K`");
    refused("°C^2", "°C", "does not begin at zero", "`K`");
    refused("°C s", "°C", "does not begin at zero", "`K`");
    refused("1/°C", "°C", "does not begin at zero", "`K`");
    refused("m°C", "m°C", "not a unit", "");
}

#[test]
fn unknown_symbols_get_the_nearest_known() {
    refused("Kg", "Kg", "not a unit", "kg");
    refused("kJ/mool", "mool", "not a unit", "mol");
    refused("microns", "microns", "not a unit", "µm");
    refused("mpa", "mpa", "not a unit", "`mPa`");
    refused("mpa", "mpa", "not a unit", "`MPa`");
    refused("kcal/mol", "kcal", "not a unit", "4.184 J");
    refused("furlong", "furlong", "not a unit", "a unit such as");
    refused("pho\u{ad}tons", "\u{ad}", "`<U+00AD>` cannot stand", "not seen");
    refused("m°C", "m°C", "not a unit", "`mK`");
    refused("Â°C", "Â°C", "not a unit", "Latin-1");
    refused("psu", "psu", "not a unit", "`g/kg`");
    refused("°F", "°F", "not a unit", "`K`");
}

#[test]
fn broken_units_are_faults_that_point_at_the_place() {
    refused("kJ/(mol", "(", "not closed", "`)`");
    refused("kJ/", "/", "ends", "a symbol");
    refused("kJ)", ")", "cannot stand", "");
    refused("(kJ)", "(", "cannot stand", "after a slash");
    refused("m^", "^", "no power", "^2");
    refused("m^0", "^0", "no power", "^2");
    refused("m^(1/0)", "^(1/0)", "no power", "^2");
    refused("m^99999999999999999999", "^99999999999999999999", "no power", "^2");
    refused("W.m", ".", "cannot stand", "`·`");
    refused("10 m", "10", "number `10`", "");
    refused("J/3600 s", "3", "a number stands", "before the unit");
    refused("m, s", ",", "cannot stand", "`{ values: [a, b] }`");
    refused("m [12]", "[", "cannot stand", "`{ value: 210 nm");
    refused("m ± 3 m", "±", "cannot stand", "one uncertainty");
    refused("m\u{fffd}", "\u{fffd}", "cannot stand", "lost");
    refused("1 m", "1 ", "a number", "1/s");
    let long = "m".repeat(400);
    refused(&long, &long, "400 bytes", "kJ/mol");
    refused("Gm^30 GW^30", "Gm^30 GW^30", "more than a number can hold", "");
}

#[test]
fn every_power_that_is_read_is_read_again() {
    for (text, canonical) in [
        ("m^0.111", "m^(111/1000)"),
        ("m^11.6", "m^(58/5)"),
        ("m^-30.999", "m^(-30999/1000)"),
        ("m^(31000/1000 )", ""),
        ("m^(1/1001)", ""),
        ("m^0.1234", ""),
        ("m^31", ""),
        // A sum of powers that are read one by one.
        ("m^20 m^20", ""),
        ("m^20 m^20/m^20", "m^20 m^20/m^20"),
        ("m^(1/999) m^(1/998)", ""),
    ] {
        let read = Unit::read(text).ok();
        assert_eq!(read.as_ref().map_or("", Unit::text), canonical, "{text}");
        if let Some(unit) = read {
            assert_eq!(Unit::read(unit.text()), Ok(unit.clone()));
            let coherent = Unit::coherent(unit.dimension());
            assert_eq!(Unit::read(coherent.text()), Ok(coherent.clone()));
        }
    }
}

#[test]
fn the_coherent_unit_of_a_dimension_is_read_with_factor_one() {
    for text in ["kJ/(mol h)", "mV", "1/(m^2 s)", "MPa m^(1/2)", "", "mmol/L", "lx"] {
        let coherent = Unit::coherent(unit(text).dimension());
        assert_eq!(unit(coherent.text()), coherent, "{text}");
        assert_eq!(coherent.factor(), 1.0);
    }
}

fn any_unit() -> impl Strategy<Value = String> {
    let symbols: Vec<String> = all().map(|(text, _)| text).filter(|text| text != "°C").collect();
    let factor = (
        prop::sample::select(symbols),
        prop::sample::select(vec!["", "^2", "⁻¹", "^(1/2)", "^-0.25", "^0.111"]),
    )
        .prop_map(|(symbol, power)| format!("{symbol}{power}"));
    let product = prop::collection::vec(factor, 1..3);
    (product.clone(), prop::option::of(product)).prop_map(|(above, below)| match below {
        Some(below) => format!("{}/({})", above.join(" "), below.join("·")),
        None => above.join("·"),
    })
}

proptest! {
    #[test]
    fn the_canonical_text_reads_as_the_same_unit(text in any_unit()) {
        if let Ok(read) = Unit::read(&text) {
            prop_assert_eq!(Unit::read(read.text()), Ok(read));
        } else {
            prop_assert!(["°C", "℃", "ºC", "˚C", "degC"].iter().any(|celsius| text.contains(celsius)), "{}", text);
        }
    }

    #[test]
    fn any_text_is_read_or_refused_within_its_bytes(text in any::<String>()) {
        check_fault(&text)?;
    }

    #[test]
    fn any_text_of_the_signs_of_units_is_read_or_refused(text in "[ mskgKJ/()^·*²⁻1290.°CµuÅ%−-]{0,12}") {
        check_fault(&text)?;
    }
}

fn check_fault(text: &str) -> Result<(), proptest::test_runner::TestCaseError> {
    match Unit::read(text) {
        Ok(read) => prop_assert_eq!(Unit::read(read.text()), Ok(read)),
        Err(fault) => prop_assert!(text.get(fault.span.clone()).is_some(), "{:?} in {:?}", fault, text),
    }
    Ok(())
}
