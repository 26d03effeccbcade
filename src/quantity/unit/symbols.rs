//! The listed symbols, each bound by hand to one `uom` unit, and the prefixes that each may take.

use std::sync::LazyLock;

use crate::quantity::dimension::Dimension;

/// A symbol that stands for a unit.
pub(super) struct Symbol {
    /// The text that canonical units use.
    pub(super) name: &'static str,
    /// Other texts that are read as the same symbol.
    pub(super) aliases: &'static [&'static str],
    /// The prefixes it may take, one character each.
    pub(super) prefixes: &'static str,
    /// Its dimension.
    pub(super) dimension: Dimension,
    /// SI value = value × mantissa × 10^ten + offset.
    pub(super) mantissa: f64,
    /// See `mantissa`.
    pub(super) ten: i32,
    /// Non-zero for `°C` alone.
    pub(super) offset: f64,
}

/// A symbol found in a text, with its prefix: the character and the power of ten.
#[derive(Clone, Copy)]
pub(super) struct Found {
    pub(super) symbol: &'static Symbol,
    pub(super) prefix: Option<(char, i32)>,
}

/// SI prefixes (SI brochure, 9th edition, table 7); `da` is left out because nobody writes it.
const PREFIXES: [(char, i32); 18] = [
    ('y', -24),
    ('z', -21),
    ('a', -18),
    ('f', -15),
    ('p', -12),
    ('n', -9),
    ('µ', -6),
    ('m', -3),
    ('c', -2),
    ('d', -1),
    ('h', 2),
    ('k', 3),
    ('M', 6),
    ('G', 9),
    ('T', 12),
    ('P', 15),
    ('E', 18),
    ('Z', 21),
];

/// Words and slips for which people mean a symbol; they are never read, only suggested.
const MEANT: [(&str, &str); 81] = [
    ("AU", "au"),
    ("ATPs", "ATP"),
    ("Gb", "Gbp"),
    ("Mb", "Mbp"),
    ("a", "yr"),
    ("amp", "A"),
    ("ampere", "A"),
    ("amu", "Da"),
    ("angstrom", "Å"),
    ("b", "bp"),
    ("base", "bp"),
    ("bases", "bp"),
    ("cal", "J"),
    ("cc", "cm^3"),
    ("celsius", "°C"),
    ("codon", "aa"),
    ("coulomb", "C"),
    ("dalton", "Da"),
    ("daltons", "Da"),
    ("day", "d"),
    ("days", "d"),
    ("degK", "K"),
    ("degrees", "deg"),
    ("gram", "g"),
    ("grams", "g"),
    ("hectare", "ha"),
    ("hour", "h"),
    ("hours", "h"),
    ("hr", "h"),
    ("hrs", "h"),
    ("joule", "J"),
    ("joules", "J"),
    ("kb", "kbp"),
    ("kcal", "kJ"),
    ("kelvin", "K"),
    ("kilogram", "kg"),
    ("kilograms", "kg"),
    ("kilometre", "km"),
    ("kilometres", "km"),
    ("litre", "L"),
    ("litres", "L"),
    ("liter", "L"),
    ("liters", "L"),
    ("meter", "m"),
    ("meters", "m"),
    ("metre", "m"),
    ("metres", "m"),
    ("micrometre", "µm"),
    ("micrometer", "µm"),
    ("micron", "µm"),
    ("microns", "µm"),
    ("mins", "min"),
    ("minute", "min"),
    ("minutes", "min"),
    ("molar", "M"),
    ("mole", "mol"),
    ("moles", "mol"),
    ("nanometer", "nm"),
    ("nanometre", "nm"),
    ("newton", "N"),
    ("pascal", "Pa"),
    ("per", "/"),
    ("percent", "%"),
    ("sec", "s"),
    ("second", "s"),
    ("seconds", "s"),
    ("secs", "s"),
    ("ton", "t"),
    ("tonne", "t"),
    ("tonnes", "t"),
    ("torr", "Torr"),
    ("tons", "t"),
    ("u", "Da"),
    ("volt", "V"),
    ("watt", "W"),
    ("watts", "W"),
    ("wt%", "%"),
    ("y", "yr"),
    ("year", "yr"),
    ("years", "yr"),
    ("°K", "K"),
];

/// Exponents of a `uom` dimension.
fn dimension_of<D: uom::si::Dimension + ?Sized>() -> Dimension {
    use uom::typenum::Integer;
    Dimension::whole([D::L::I32, D::M::I32, D::T::I32, D::I::I32, D::Th::I32, D::N::I32, D::J::I32])
}

/// Factor and offset of a `uom` unit.
fn conversion_of<U: uom::Conversion<f64>>() -> (f64, f64)
where
    U::T: uom::ConversionFactor<f64>,
{
    use uom::ConversionFactor;
    (U::coefficient().value(), U::constant(uom::ConstantOp::Add).value())
}

/// A power of ten is kept as such, so that `210 nm` is the number nearest to 2.1e-7 m, not a product of two roundings.
fn split(factor: f64) -> (f64, i32) {
    #[allow(clippy::cast_possible_truncation)] // The logarithm of a normal number is below 309.
    let ten = crate::math::kernels::log10(factor).round() as i32;
    if (factor / ten_to(ten) - 1.0).abs() < 4.0 * f64::EPSILON { (1.0, ten) } else { (factor, 0) }
}

/// The number nearest to 10^n; infinite or 0 where it does not fit.
pub(super) fn ten_to(n: i32) -> f64 {
    format!("1e{n}").parse().expect("a one and a whole exponent are a number")
}

macro_rules! symbols {
    ($($name:literal $([$($alias:literal),*])? $prefixes:literal
       = $($times:literal *)? $quantity:ident :: $unit:ident;)*) => {
        vec![$({
            let (coefficient, offset) = conversion_of::<uom::si::$quantity::$unit>();
            let factor = coefficient $(* $times)?;
            let (mantissa, ten) = split(factor);
            Symbol {
                name: $name,
                aliases: &[$($($alias),*)?],
                prefixes: $prefixes,
                dimension: dimension_of::<uom::si::$quantity::Dimension>(),
                mantissa,
                ten,
                // Plain units have the offset -0.0.
                offset: offset + 0.0,
            }
        }),*]
    };
}

/// The symbols: name, aliases, prefixes = unit.
pub(super) static SYMBOLS: LazyLock<Vec<Symbol>> = LazyLock::new(|| {
    symbols! {
        "m" "yzafpnµmcdkMG" = length::meter;
        "Å" ["\u{212b}"] "" = length::angstrom;
        "au" "" = length::astronomical_unit;
        "ha" "" = area::hectare;
        "L" ["l"] "afpnµmcdhkMG" = volume::liter;
        "g" "yzafpnµmckMGTPEZ" = mass::gram;
        "t" "kMG" = mass::ton;
        "Da" "kMG" = mass::dalton;
        "s" "zafpnµmkM" = time::second;
        "min" "" = time::minute;
        "h" "" = time::hour;
        "d" "" = time::day;
        // The Julian year of astronomy.
        "yr" "kMG" = 365.25 * time::day;
        "Hz" "mkMGT" = frequency::hertz;
        "Bq" "mkMGTP" = radioactivity::becquerel;
        "K" "nµmkM" = thermodynamic_temperature::kelvin;
        "°C" ["℃", "ºC", "˚C", "degC"] "" = thermodynamic_temperature::degree_celsius;
        "mol" "yzafpnµmkMGTP" = amount_of_substance::mole;
        "M" "afpnµm" = molar_concentration::mole_per_liter;
        "kat" "pnµm" = catalytic_activity::katal;
        "A" "afpnµmk" = electric_current::ampere;
        "C" "afpnµmkM" = electric_charge::coulomb;
        "V" "npµmkM" = electric_potential::volt;
        "Ω" ["\u{2126}", "ohm"] "µmkMGT" = electrical_resistance::ohm;
        "S" "pnµmk" = electrical_conductance::siemens;
        "F" "afpnµm" = capacitance::farad;
        "T" "fpnµm" = magnetic_flux_density::tesla;
        "N" "fpnµmkMG" = force::newton;
        "Pa" "nµmhkMGT" = pressure::pascal;
        "bar" "µmdkM" = pressure::bar;
        "atm" "npµm" = pressure::atmosphere;
        "Torr" "µm" = pressure::torr;
        "mmHg" "" = pressure::millimeter_of_mercury;
        "J" "yzafpnµmkMGTPEZ" = energy::joule;
        "eV" "µmkMGT" = energy::electronvolt;
        "Wh" "mkMGT" = energy::watt_hour;
        "W" "yzafpnµmkMGTPEZ" = power::watt;
        "Gy" "nµmcdkM" = available_energy::joule_per_kilogram;
        "Sv" "nµmk" = available_energy::joule_per_kilogram;
        "P" "mc" = dynamic_viscosity::poise;
        "St" "c" = kinematic_viscosity::stokes;
        "gₙ" ["g_n"] "mµ" = acceleration::standard_gravity;
        "cd" "m" = luminous_intensity::candela;
        "lx" "mk" = illuminance::lux;
        "rad" "µm" = angle::radian;
        "°" ["deg"] "" = angle::degree;
        "sr" "m" = solid_angle::steradian;
        "%" "" = ratio::percent;
        "‰" "" = ratio::per_mille;
        "ppm" "" = ratio::part_per_million;
        "ppb" "" = ratio::part_per_billion;
        // A difference of decimal logarithms.
        "dex" "" = ratio::ratio;
        // Counts: pure numbers that may be named.
        "aa" "kM" = ratio::ratio;
        "bp" "kMGT" = ratio::ratio;
        "nt" "kMGT" = ratio::ratio;
        "cells" ["cell"] "kM" = ratio::ratio;
        "photons" ["photon"] "kM" = ratio::ratio;
        "ATP" "kMG" = ratio::ratio;
    }
});

/// The symbol, and the prefix, that a whole text stands for.
pub(super) fn find(text: &str) -> Option<Found> {
    SYMBOLS.iter().find_map(|symbol| {
        std::iter::once(symbol.name).chain(symbol.aliases.iter().copied()).find_map(|name| {
            let prefix = text.strip_suffix(name)?;
            let mut characters = prefix.chars();
            match (characters.next(), characters.next()) {
                (None, _) => Some(Found { symbol, prefix: None }),
                (Some(first), None) => {
                    // The Greek letter, and the letter that keyboards have, are taken for the sign.
                    let first = if matches!(first, '\u{3bc}' | 'u') { 'µ' } else { first };
                    let prefix = PREFIXES
                        .iter()
                        .find(|(prefix, _)| *prefix == first && symbol.prefixes.contains(first))?;
                    Some(Found { symbol, prefix: Some(*prefix) })
                }
                _ => None,
            }
        })
    })
}

/// What people may mean by a text that is no symbol: the nearest ones, best first; empty when none is near.
pub(super) fn suggestions(text: &str) -> Vec<String> {
    if let Some((_, symbol)) = MEANT.iter().find(|(word, _)| *word == text) {
        return vec![(*symbol).to_owned()];
    }
    let known: Vec<String> = all().map(|(text, _)| text).collect();
    let lower = text.to_lowercase();
    let alike: Vec<String> = known.iter().filter(|known| known.to_lowercase() == lower).cloned().collect();
    if !alike.is_empty() {
        return alike;
    }
    let words = MEANT.iter().map(|(word, _)| *word).chain(known.iter().map(String::as_str));
    // With one or two letters every symbol is near.
    if text.chars().count() < 3 {
        return Vec::new();
    }
    crate::text::nearest(text, words)
        .map(|near| match MEANT.iter().find(|(word, _)| *word == near) {
            Some((_, symbol)) => (*symbol).to_owned(),
            None => near,
        })
        .into_iter()
        .collect()
}

/// Every text that is read as a symbol (with `µ` for the prefix), and what it is read as.
pub(super) fn all() -> impl Iterator<Item = (String, Found)> {
    SYMBOLS.iter().flat_map(|symbol| {
        std::iter::once(symbol.name).chain(symbol.aliases.iter().copied()).flat_map(move |name| {
            let prefixed = PREFIXES.iter().filter(|(prefix, _)| symbol.prefixes.contains(*prefix)).map(
                move |(prefix, ten)| {
                    (format!("{prefix}{name}"), Found { symbol, prefix: Some((*prefix, *ten)) })
                },
            );
            std::iter::once((name.to_owned(), Found { symbol, prefix: None })).chain(prefixed)
        })
    })
}
