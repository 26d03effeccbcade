//! Constants of the shipped catalogue against CODATA 2022.

use std::collections::BTreeMap;

use hypobiont::catalog::Catalog;

/// CODATA 2022 as shipped in scipy 1.17.1 (`scipy.constants`), SI units. The exact ones are the same in CODATA 2018; of
/// those derived from them all digits that a double holds are given.
const CODATA: [(&str, f64); 16] = [
    ("avogadro_constant", 6.022_140_76e23),
    ("boltzmann_constant", 1.380_649e-23),
    ("elementary_charge", 1.602_176_634e-19),
    ("faraday_constant", 96_485.332_123_310_01),
    ("gas_constant", 8.314_462_618_153_24),
    ("planck_constant", 6.626_070_15e-34),
    ("speed_of_light", 299_792_458.0),
    ("standard_gravity", 9.806_65),
    ("standard_atmosphere", 101_325.0),
    ("stefan_boltzmann_constant", 5.670_374_419_184_431e-8),
    ("wien_displacement_constant", 2.897_771_955_185_173e-3),
    ("gravitational_constant", 6.674_30e-11),
    ("atomic_mass_constant", 1.660_539_068_92e-27),
    ("electron_mass", 9.109_383_713_9e-31),
    ("vacuum_permittivity", 8.854_187_818_8e-12),
    ("vacuum_permeability", 1.256_637_061_27e-6),
];

#[test]
fn constants_are_those_of_codata() {
    let catalog = Catalog::load(&[]).unwrap();
    let codata = BTreeMap::from(CODATA);
    let cited = catalog
        .constants
        .iter()
        .filter(|(_, constant)| constant.sources.iter().any(|source| source.starts_with("codata")));
    let mut seen = 0;
    for (name, constant) in cited {
        let expected = codata.get(name.as_str()).unwrap_or_else(|| panic!("no value of `{name}` here"));
        assert_eq!(constant.value, *expected, "{name}");
        seen += 1;
    }
    assert!(seen >= 6, "only {seen} cite CODATA");
    let value = |name: &str| catalog.constants[name].value;
    let near = |found: f64, expected: f64| assert!((found / expected - 1.0).abs() < 4.0 * f64::EPSILON);
    near(value("gas_constant"), value("boltzmann_constant") * value("avogadro_constant"));
    near(value("faraday_constant"), value("elementary_charge") * value("avogadro_constant"));
    assert_eq!(value("pi"), std::f64::consts::PI);
}
