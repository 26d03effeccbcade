//! Margins against those worked out by others from the same statements.
//!
//! The reference margins come from a separate calculation (400 000 draws, plain Monte Carlo, no search for free numbers).
//! A margin depends on what is stated: each row states what that calculation held fixed. Run with `--nocapture` for the
//! table.

use super::{COLI, CULTURED_ROD, NATRIEGENS, cell, chance};
use crate::run::{margin, screen};

/// What is compared, the candidate, the constraint, the reference margin in dex.
struct Row {
    what: &'static str,
    candidate: String,
    id: &'static str,
    theirs: f64,
}

fn row(what: &'static str, id: &'static str, theirs: f64, candidate: String) -> Row {
    Row { what, candidate, id, theirs }
}

/// Prints ours beside theirs and expects no more than 0.3 dex, a factor of two, between them.
#[track_caller]
fn compare(rows: &[Row]) {
    let found: Vec<f64> = rows.iter().map(|row| margin(&screen(&row.candidate), row.id)).collect();
    for (row, ours) in rows.iter().zip(&found) {
        println!("{:24} {:54} ours {ours:+.2}  theirs {:+.2}", row.id, row.what, row.theirs);
    }
    for (row, ours) in rows.iter().zip(&found) {
        assert!((ours - row.theirs).abs() <= 0.3, "{}: {ours:+.2}, expected {:+.2}", row.what, row.theirs);
    }
}

/// Zhao et al. 2017, Appl Environ Microbiol 83:e02807-16; Giovannoni et al. 2005, Science 309:1242.
const PELAGIBACTER: &str = "width: 0.24 µm, cell_volume: 0.0365 µm^3, genome_length: 1308759 bp";
/// Breuer et al. 2019, eLife 8:e36842.
const SYN3A: &str = "diameter: 400 nm, genome_length: 543379 bp";
/// The fewest proteins of any cell, whatever its size: what the reference counts where it leaves proteins free. The
/// catalogue takes them in proportion to the cytoplasm instead (Milo 2013, BioEssays 35:1050).
const FEWEST: &str = "protein_number: 18000";

#[test]
fn room_for_the_contents() {
    let sphere = "form: sphere, lifestyle: cultured";
    compare(&[
        row(
            "Pelagibacter, actual contents",
            "contents-fit",
            0.3,
            cell(
                "form: rod",
                &format!("{PELAGIBACTER}, envelope_thickness: 27.6 nm, ribosome_number: 402"),
                "",
            ),
        ),
        row(
            "JCVI-syn3A, actual contents",
            "contents-fit",
            0.3,
            cell(sphere, &format!("{SYN3A}, protein_number: 77000, ribosome_number: 670"), ""),
        ),
        // 6800 ribosomes at slow growth (Bremer & Dennis, from memory) and a typical envelope; but the fewest proteins.
        row(
            "E. coli, actual contents but for its proteins",
            "contents-fit",
            1.2,
            cell(
                CULTURED_ROD,
                &format!("{COLI}, {FEWEST}, ribosome_number: 6800, envelope_thickness: 33.7 nm"),
                "",
            ),
        ),
        row(
            "Pelagibacter, free, fewest proteins",
            "contents-fit",
            0.8,
            cell("form: rod", &format!("{PELAGIBACTER}, {FEWEST}"), ""),
        ),
        row(
            "JCVI-syn3A, free, fewest proteins",
            "contents-fit",
            1.0,
            cell(sphere, &format!("{SYN3A}, {FEWEST}"), ""),
        ),
        row(
            "E. coli, free, fewest proteins",
            "contents-fit",
            1.7,
            cell(CULTURED_ROD, &format!("{COLI}, {FEWEST}"), ""),
        ),
        row(
            "sphere of 100 nm, free-living",
            "contents-fit",
            -1.1,
            cell("form: sphere", "diameter: 100 ± 1 nm", ""),
        ),
        row(
            "sphere of 100 nm, host-dependent",
            "contents-fit",
            -0.9,
            cell("form: sphere, lifestyle: host-dependent", "diameter: 100 ± 1 nm", ""),
        ),
        row(
            "0.009 µm³ with a typical envelope",
            "contents-fit",
            -0.35,
            cell(
                "lifestyle: free-living",
                "cell_volume: 0.009 ± 0.002 µm^3, envelope_thickness: 34 nm, macromolecule_fraction: { min: 0.3, max: 0.5 }",
                "",
            ),
        ),
    ]);
}

#[test]
fn with_its_proteins_counted_e_coli_has_less_to_spare() {
    // 3e6 proteins per µm³ (Milo 2013) of 42 nm³ are an eighth of the volume: no packing leaves E. coli +1.2 dex.
    let organism =
        format!("{COLI}, protein_number: 2.1e6, ribosome_number: 6800, envelope_thickness: 33.7 nm");
    let counted = margin(&screen(&cell(CULTURED_ROD, &organism, "")), "contents-fit");
    println!("E. coli with 2.1e6 proteins: {counted:+.2}");
    assert!((0.2..0.6).contains(&counted), "{counted}");
}

#[test]
fn diameters_at_which_half_of_the_draws_hold() {
    // The reference samples what the catalogue leaves free: packing, a genome near the least, 40 to 400 ribosomes.
    let sampled = "macromolecule_fraction: { min: 0.3, max: 0.5 }, protein_number: 40000, \
                   genome_length: { min: 0.5 Mbp, mode: 0.6 Mbp, max: 1.3 Mbp }, \
                   ribosome_number: { min: 40, max: 400, scale: log }";
    let rows = [
        ("free-living", 317.0, format!("envelope_thickness: 34 nm, {sampled}")),
        ("free-living", 275.0, format!("envelope_thickness: {{ min: 8 nm, max: 20 nm }}, {sampled}")),
        ("free-living", 257.0, format!("envelope_thickness: 5 nm, {sampled}")),
        ("free-living", 220.0, "envelope_thickness: 4 nm".to_owned()),
        ("host-dependent", 190.0, "envelope_thickness: 4 nm".to_owned()),
    ];
    for (lifestyle, theirs, stated) in rows {
        let holds = |diameter: f64| {
            let attributes = format!("form: sphere, lifestyle: {lifestyle}");
            chance(
                &screen(&cell(&attributes, &format!("diameter: {diameter} nm, {stated}"), "")),
                "contents-fit",
            )
        };
        let (mut low, mut high) = (150.0_f64, 400.0_f64);
        while high - low > 1.0 {
            let middle = f64::midpoint(low, high);
            if holds(middle) < 0.5 { low = middle } else { high = middle }
        }
        println!("half hold at {high:.0} nm, theirs {theirs} nm: {lifestyle}, {stated}");
        assert!((high / theirs - 1.0).abs() < 0.05, "{high}, expected {theirs}: {stated}");
    }
}

#[test]
fn share_of_ribosomes() {
    // The reference samples the turnover of proteins that the catalogue leaves free.
    let turnover = "protein_turnover_rate_at_37_celsius: { min: 7e-6 1/s, max: 6.2e-5 1/s }";
    compare(&[
        row(
            "E. coli, 20 min, 37 °C",
            "ribosome-share",
            0.38,
            cell(CULTURED_ROD, &format!("{COLI}, doubling_time: 20 min, {turnover}"), "temperature: 37 °C"),
        ),
        row(
            "V. natriegens, 9.6 min, 37 °C",
            "ribosome-share",
            0.06,
            cell(
                CULTURED_ROD,
                &format!("{NATRIEGENS}, doubling_time: 9.6 min, {turnover}"),
                "temperature: 37 °C",
            ),
        ),
        row(
            "C. perfringens, 6.6 min, 43 °C",
            "ribosome-share",
            0.09,
            cell("lifestyle: cultured", &format!("doubling_time: 6.6 min, {turnover}"), "temperature: 43 °C"),
        ),
        row(
            "Pelagibacter, 28.7 h, 15 °C",
            "ribosome-share",
            1.28,
            cell(
                "form: rod",
                &format!("{PELAGIBACTER}, doubling_time: 28.7 h, {turnover}"),
                "temperature: 15 °C",
            ),
        ),
    ]);
}

#[test]
fn power_of_growth() {
    let coli = |growth: &str| {
        let organism = format!("{COLI}, {growth}, power_supply: 1.3 pW, dry_mass: 0.30 pg");
        cell("form: rod, metabolism: respiring", &organism, "temperature: 37 °C")
    };
    compare(&[
        row("E. coli, 1.3 pW, 20 min, no rich medium", "power-budget", -0.2, coli("doubling_time: 20 min")),
        row("E. coli, 1.3 pW, 0.874 1/h", "power-budget", 0.1, coli("growth_rate: 0.874 1/h")),
    ]);
    // Lynch & Marinov 2015, PNAS 112:15690: 26.92e9 ATP in building 1 µm³, at 50 kJ/mol in 20 min 1.86e-12 W; by carbon
    // (Heijnen & van Dijken 1992; Tijhuis et al. 1993) 1.93e-12 W.
    let organism = "cell_volume: 1 µm^3, vacuole_fraction: 0, doubling_time: 20 min, power_supply: 1 pW";
    let found = screen(&cell("metabolism: respiring", organism, "temperature: 37 °C"));
    let needs = crate::run::constraint(&found, "power-budget");
    assert_eq!(needs["unit"], "fW");
    let femtowatts = needs["required"]["median"].as_f64().unwrap();
    println!("1 µm³ in 20 min: {femtowatts:.0} fW by carbon, 1930 expected; 1860 by ATP");
    assert!((femtowatts / 1930.0 - 1.0).abs() < 0.03, "{femtowatts}");
    assert!(libm::log10(femtowatts / 1860.0).abs() < 0.1);
}

#[test]
fn diffusive_uptake() {
    // O2 at 25 °C: 2.42e-9 m²/s, 0.25 mol/m³, 460 kJ/mol.
    let oxygen = |concentration: &str| {
        format!(
            "temperature: 25 °C, substrate_concentration: {concentration} mol/m^3, substrate_diffusivity: 2.42e-9 m^2/s, \
             substrate_energy: 460 kJ/mol"
        )
    };
    // Thiovulum, radius 8 µm, 2 to 3e-16 mol O2/s (Schulz & Jørgensen 2001), here 2.5e-16 mol/s times 460 kJ/mol, in still water.
    let swimmer =
        |concentration| cell("form: sphere", "diameter: 16 µm, power_supply: 115 pW", &oxygen(concentration));
    // Glucose at 15 °C: 0.673e-9 m²/s at 25 °C times 1.67/2.42, as O2; 2870 kJ/mol. Dry mass 23 fg by the law of 17 bacteria (data
    // compiled by Trickovic & Lynch), not 0.34 g/mL; and the carbon that is built in, a sixth of it per hexose.
    let oligotroph = |concentration: &str| {
        let organism = format!(
            "{PELAGIBACTER}, vacuole_fraction: 0, dry_mass: 23 fg, doubling_time: 28.7 h, substrate_quota: 0.156 fmol"
        );
        let environment = format!(
            "temperature: 15 °C, substrate_concentration: {concentration} mol/m^3, substrate_diffusivity: 4.64e-10 m^2/s, \
             substrate_energy: 2870 kJ/mol"
        );
        cell("form: rod, metabolism: respiring", &organism, &environment)
    };
    compare(&[
        row(
            "E. coli on O2",
            "uptake-against-supply",
            3.2,
            cell("form: rod", &format!("{COLI}, power_supply: 1.3 pW"), &oxygen("0.25")),
        ),
        row("8 µm swimmer, 0.02 mM O2, still water", "uptake-against-supply", 1.2, swimmer("0.02")),
        row("8 µm swimmer, 0.1 mM O2, still water", "uptake-against-supply", 1.9, swimmer("0.1")),
        row("Pelagibacter, 10 nM hexose", "uptake-against-demand", 0.82, oligotroph("1e-5")),
        row("Pelagibacter, 1 nM hexose", "uptake-against-demand", -0.19, oligotroph("1e-6")),
    ]);
}

#[test]
fn internal_mixing() {
    compare(&[
        row(
            "E. coli, 20 min",
            "internal-mixing",
            4.8,
            cell(
                CULTURED_ROD,
                &format!("{COLI}, vacuole_fraction: 0, doubling_time: 20 min"),
                "temperature: 37 °C",
            ),
        ),
        // Film of 1.5 µm (Schulz & Jørgensen 2001: 1 to 2 µm) around the vacuole of a sphere of 750 µm, doubling in two weeks.
        row(
            "film of a vacuolate giant, 14 d",
            "internal-mixing",
            6.4,
            cell("form: sphere", "diameter: 750 µm, vacuole_fraction: 0.988, doubling_time: 14 d", ""),
        ),
        row(
            "solid sphere of 3 mm, 20 min",
            "internal-mixing",
            -2.3,
            cell("form: sphere", "diameter: 3 mm, vacuole_fraction: 0, doubling_time: 20 min", ""),
        ),
        // Volland et al. 2022, Science 376:1453: > 9 mm. One copy is what a careless reading would take.
        row(
            "a giant of 9 mm as if with one genome, 14 d",
            "reach-of-a-genome",
            -1.2,
            cell("form: filament", "width: 0.12 mm, length: 9 mm, genome_copies: 1, doubling_time: 14 d", ""),
        ),
    ]);
}

#[test]
fn errors_of_copying() {
    let strand = |organism: &str| cell("heredity: single-polymer", organism, "");
    compare(&[
        // 2.2e-10 per base and copying: Milo & Phillips, by sequencing.
        row(
            "E. coli, 2.2e-10",
            "error-threshold",
            3.3,
            cell(CULTURED_ROD, &format!("{COLI}, error_rate: 2.2e-10"), ""),
        ),
        // Moger-Reischer et al. 2023, Nature 620:122: 3.1 to 3.25e-8.
        row(
            "JCVI-syn3B, 3.2e-8",
            "error-threshold",
            2.0,
            cell("lifestyle: cultured", "genome_length: 543379 bp, error_rate: 3.2e-8", ""),
        ),
        // Influenza, 13.6 kb (from memory) at 1e-5 to 2e-5 (Milo & Phillips, table), by fission alone.
        row(
            "influenza, two copies",
            "error-threshold-of-a-strand",
            0.8,
            strand("strand_length: 13600 nt, error_rate: { min: 1e-5, max: 2e-5 }"),
        ),
    ]);
    // Phage Qβ, 4.2 kb at 1e-3 (Milo & Phillips, table): two copies a generation would lose it, a burst of thousands does not.
    let fission = screen(&strand("strand_length: 4217 nt, error_rate: 1e-3"));
    assert_eq!(super::verdict(&fission, "error-threshold-of-a-strand"), "fail");
    let burst = screen(&strand("strand_length: 4217 nt, error_rate: 1e-3, offspring_number: 5000"));
    assert_eq!(super::verdict(&burst, "error-threshold-of-a-strand"), "pass");
}
