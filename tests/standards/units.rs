//! Factors of units against NIST SP 811 (2008), appendix B.8 and the SI brochure, 9th edition, table 8: from memory.

use hypobiont::quantity::Unit;

/// Factors to SI units that are exact by definition.
const EXACT: [(&str, f64); 32] = [
    ("Å", 1e-10),
    ("au", 149_597_870_700.0),
    ("ha", 1e4),
    ("L", 1e-3),
    ("mL/L", 1e-3),
    ("t", 1e3),
    ("t/ha", 0.1),
    ("g/cm^3", 1e3),
    ("min", 60.0),
    ("h", 3600.0),
    ("d", 86_400.0),
    ("yr", 31_557_600.0),
    ("1/d", 1.0 / 86_400.0),
    ("km/h", 1.0 / 3.6),
    ("M", 1e3),
    ("bar", 1e5),
    ("mbar", 100.0),
    ("atm", 101_325.0),
    ("kWh", 3.6e6),
    ("kJ/(mol h)", 1.0 / 3.6),
    ("W/cm^2", 1e4),
    ("eV", 1.602_176_634e-19),
    ("cP", 1e-3),
    ("cSt", 1e-6),
    ("gₙ", 9.806_65),
    ("°", std::f64::consts::PI / 180.0),
    ("µS/cm", 1e-4),
    ("MPa m^(1/2)", 1e6),
    ("ppm", 1e-6),
    ("‰", 1e-3),
    ("zW", 1e-21),
    ("aW/µm^3", 1.0),
];

/// Measured, or printed with seven digits.
const ROUNDED: [(&str, f64, f64); 4] = [
    // CODATA 2022; the library behind the units may hold that of 2018, 1.4e-9 less.
    ("Da", 1.660_539_068_92e-27, 2e-9),
    ("kDa", 1.660_539_068_92e-24, 2e-9),
    ("Torr", 133.322_368_421, 5e-7),
    ("mmHg", 133.322_387_415, 5e-7),
];

#[test]
fn factors_are_those_of_the_handbook() {
    let exact = EXACT.map(|(text, factor)| (text, factor, 4.0 * f64::EPSILON));
    for (text, factor, allowed) in exact.into_iter().chain(ROUNDED) {
        let found = Unit::read(text).unwrap_or_else(|fault| panic!("{text}: {fault:?}")).factor();
        assert!((found / factor - 1.0).abs() <= allowed, "{text}: {found:e} instead of {factor:e}");
    }
}

#[test]
fn temperatures_turn_at_the_fixed_points() {
    let celsius = Unit::read("°C").unwrap();
    for (degrees, kelvin) in [(-273.15, 0.0), (0.0, 273.15), (0.01, 273.16), (25.0, 298.15), (100.0, 373.15)]
    {
        assert!((celsius.to_si(degrees) - kelvin).abs() < 1e-12);
        assert!((celsius.from_si(kelvin) - degrees).abs() < 1e-12);
    }
}
