//! Known chemistry with one number changed. What a what-if assumes stands in its candidate or its overlay.

use super::{cell, screen_all, verdict};
use crate::run::{Run, margin, overall, screen};

/// With proteins that are replaced at 6.2e-5 1/s (Kempes et al. 2016, ISME J 10:2145), ribosomes forty times slower than known
/// ones, 10 to 23 aa/s at 37 °C, cannot even replace themselves: no growth rate is slow enough. The critical slowdown
/// published for such a composition is 20 to 45.
#[test]
fn translation_forty_times_slower_leaves_no_cell_of_dna_and_proteins() {
    let slower = |times: f64, turnover: &str| {
        let (least, most) = (10.0 / times, 23.0 / times);
        let organism = format!(
            "diameter: 1 ± 0.1 µm, elongation_rate_at_37_celsius: {{ anywhere_in: [{least} aa/s, {most} aa/s] }}{turnover}"
        );
        screen(&cell("form: sphere, lifestyle: cultured", &organism, "temperature: 37 °C"))
    };
    let stated = ", protein_turnover_rate: 6.2e-5 1/s";
    let forty = slower(40.0, stated);
    assert_eq!(verdict(&forty, "ribosome-share"), "fail");
    assert_eq!(overall(&forty), "fail");
    assert_eq!(forty["overall"]["binding"], "ribosome-share");
    // By hand: (6.2e-5 + 2.1e-7) 1/s × 7459 aa / 0.575 aa/s = 0.807 against 0.525: -0.187 dex.
    assert!((margin(&forty, "ribosome-share") + 0.187).abs() < 0.01, "{}", margin(&forty, "ribosome-share"));
    assert_eq!(verdict(&slower(1.0, stated), "ribosome-share"), "pass");
    // With the slowest turnover known, 7e-6 1/s (from memory), forty times slower still leaves cells.
    assert_eq!(verdict(&slower(40.0, ""), "ribosome-share"), "pass");
}

/// The what-if: growth at 1 1/h in 1 µm³ of cell and as the square root of volume from there (no such law holds among real
/// bacteria), and 3e6 proteins per µm³ of cytoplasm (Milo 2013, BioEssays 35:1050).
const GROWTH_WITH_SIZE: &str = "
- id: growth-with-size
  title: Growth as the square root of volume
  gives: growth_rate
  kind: definition
  rank: 2
  basis: empirical
  formula: '1 [1/h] * sqrt(cell_volume / 1 [µm^3])'
  meaning: A what-if.
  source: kempes-2016
";

/// The largest volume, in the logarithm to the base 10 of µm³, at which the ribosomes still have room.
fn largest(elongation: &str) -> f64 {
    // Steps of a twentieth of a decade.
    let volumes: Vec<f64> = (0..160).map(|step| f64::from(step) / 20.0).collect();
    let documents: Vec<String> = volumes
        .iter()
        .map(|volume| {
            let organism = format!(
                "cell_volume: {:e} µm^3, vacuole_fraction: 0, genome_length: 4 Mbp, genome_copies: 1, \
                 protein_concentration: 3e6 1/µm^3, macromolecule_fraction: 0.4, envelope_thickness: 10 nm, \
                 elongation_rate: {elongation}, protein_turnover_rate: 7e-6 1/s",
                libm::pow(10.0, *volume)
            );
            cell("lifestyle: cultured", &organism, "temperature: 37 °C")
        })
        .collect();
    let ended = Run::new("screen - --format ndjson --draws 256 --overlay over --only ribosome-room")
        .file("over/relations/what-if.yaml", GROWTH_WITH_SIZE)
        .input(documents.join("---\n"))
        .output();
    assert_eq!(ended.status, Some(0), "{}", ended.stderr);
    let holds: Vec<bool> = ended
        .stdout
        .lines()
        .map(|line| margin(&serde_json::from_str(line).unwrap(), "ribosome-room") >= 0.0)
        .collect();
    assert_eq!(holds.len(), volumes.len());
    assert!(holds[0] && !holds[volumes.len() - 1], "the limit lies within the volumes tried");
    let first = holds.iter().position(|holds| !holds).unwrap();
    assert!(holds[first..].iter().all(|holds| !holds), "one limit");
    volumes[first - 1]
}

#[test]
fn translation_ten_times_faster_lets_cells_be_two_decades_larger_if_growth_rises_with_size() {
    let (known, faster) = (largest("20 aa/s"), largest("200 aa/s"));
    println!("largest volume 1e{known:.2} µm³ at 20 aa/s, 1e{faster:.2} µm³ at 200 aa/s");
    assert!((faster - known - 2.0).abs() <= 0.2, "{known} {faster}");
    // By hand: (0.4 - 3e6 × 42.4e-9) × 20 aa/s / (3e6 × 325 aa × 3e-6) = 1.9e-3 1/s = 6.7 1/h, so 44 µm³.
    assert!((known - 1.65).abs() < 0.15, "{known}");
}

#[test]
fn without_that_rise_size_sets_no_such_limit() {
    // Growth as fast as E. coli's at every size: ribosomes keep pace with the cytoplasm.
    let documents: Vec<String> = ["1 µm^3", "1e3 µm^3", "1e6 µm^3"]
        .iter()
        .map(|volume| {
            cell(
                "lifestyle: cultured",
                &format!("cell_volume: {volume}, growth_rate: 1 1/h"),
                "temperature: 37 °C",
            )
        })
        .collect();
    for found in screen_all(&documents.join("---\n"), "--draws 1024 --only ribosome-room") {
        assert_eq!(verdict(&found, "ribosome-room"), "pass");
    }
}
