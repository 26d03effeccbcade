//! Cases that a careless screening gets wrong.

use super::{COLI, CULTURED_ROD, cell, chance, median, verdict};
use crate::run::{Run, constraint, margin, overall, screen};

#[test]
fn a_typical_envelope_leaves_nothing_of_a_50_nanometre_sphere() {
    // 34 nm on either side are more than 50 nm: nothing is available, a margin of -∞, which JSON writes as null.
    let found = screen(&cell("form: sphere", "diameter: 50 ± 2 nm, envelope_thickness: 34 nm", ""));
    assert_eq!(overall(&found), "fail");
    for id in ["envelope-leaves-lumen", "contents-fit"] {
        assert_eq!(verdict(&found, id), "fail");
        for quantile in ["median", "low", "high"] {
            assert!(constraint(&found, id)["margin_dex"][quantile].is_null(), "{id} {quantile}");
        }
        assert_eq!(constraint(&found, id)["available"]["median"], 0.0);
    }
}

#[test]
fn a_stated_elongation_rate_is_not_scaled_with_temperature() {
    // ln 2 × 7459 aa / 20 aa/s = 258.5 s; scaled by 60 kJ/mol from 37 to 67 °C it would be 38 s.
    let organism = "doubling_time: 12.6 min, elongation_rate: 20 aa/s";
    let found = screen(&cell("lifestyle: cultured", organism, "temperature: 67 °C"));
    assert!((median(&found, "ribosome-copying-limit") - 4.308).abs() < 0.005);
    // From 23 aa/s at 37 °C the law promises more than any ribosome is known to do and is held at 36 aa/s.
    let free = screen(&cell("lifestyle: cultured", "doubling_time: 12.6 min", "temperature: 67 °C"));
    assert!((median(&free, "elongation_rate") - 36.0).abs() < 1e-6);
    // At 15 °C: 23 aa/s × exp(-60 kJ/mol / R × (1/288.15 K - 1/310.15 K)) = 3.9 aa/s.
    let cold = screen(&cell("lifestyle: cultured", "doubling_time: 28.7 h", "temperature: 15 °C"));
    assert!((median(&cold, "elongation_rate") - 3.89).abs() < 0.03);
}

#[test]
fn beyond_the_record_of_heat_is_outside_known_life_and_beyond_chemistry_fails() {
    // Takai et al. 2008, PNAS 105:10949: growth at 122 °C. Bains et al. 2015, Life 5:1054: metabolism ends at 150 to 180 °C.
    let at = |celsius: &str| {
        let organism = "diameter: 1 ± 0.1 µm";
        screen(&cell(
            "form: sphere, metabolism: lithotrophic",
            organism,
            &format!("temperature: {celsius} °C"),
        ))
    };
    let known = at("122");
    assert_eq!(overall(&known), "pass");
    assert_eq!(known["overall"]["outside_known_life"], false);
    let hotter = at("123.5");
    assert_eq!(overall(&hotter), "marginal");
    assert_eq!(hotter["overall"]["outside_known_life"], true);
    assert_eq!(verdict(&hotter, "heat-record"), "fail");
    assert_eq!(verdict(&hotter, "heat-ceiling"), "pass");
    let impossible = at("230");
    assert_eq!(overall(&impossible), "fail");
    assert_eq!(verdict(&impossible, "heat-ceiling"), "fail");
}

#[test]
fn a_diffusion_fail_takes_the_basis_of_its_demand() {
    let environment = "temperature: 37 °C, substrate_concentration: 1e-9 ± 1e-10 mol/m^3, substrate_diffusivity: 6e-10 m^2/s, \
                       substrate_energy: 2870 kJ/mol";
    // E. coli on picomoles per litre of sugar: far short of what growth in 20 min takes.
    let regressed = screen(&cell(CULTURED_ROD, &format!("{COLI}, doubling_time: 20 min"), environment));
    assert_eq!(verdict(&regressed, "uptake-against-demand"), "fail");
    assert_eq!(constraint(&regressed, "uptake-against-demand")["basis"], "empirical");
    // The same with a power that the candidate claims: 4πDRc is physics.
    let stated = screen(&cell(CULTURED_ROD, &format!("{COLI}, power_supply: 1.3 pW"), environment));
    assert_eq!(verdict(&stated, "uptake-against-supply"), "fail");
    assert_eq!(constraint(&stated, "uptake-against-supply")["basis"], "physical");
    assert_eq!(overall(&stated), "fail");
    assert_eq!(stated["overall"]["basis"], "physical");
}

#[test]
fn an_empty_lake_feeds_a_cell_but_not_a_population() {
    // One cell in 10 nmol/L of methane finds enough; 1e6 cells/mL on 1e-3 pW/mL do not.
    let organism = "diameter: 0.6 ± 0.05 µm, vacuole_fraction: 0";
    let environment = "temperature: 4 ± 1 °C, substrate_concentration: 1e-5 mol/m^3, substrate_diffusivity: 1e-9 m^2/s, \
                       substrate_energy: 100 kJ/mol, cell_density: 1e6 1/mL, power_density: 1e-3 pW/mL";
    let found = screen(&cell("form: sphere, state: maintaining", organism, environment));
    assert_eq!(verdict(&found, "uptake-against-demand"), "pass");
    assert_eq!(verdict(&found, "population-power"), "fail");
}

#[test]
fn a_giant_is_saved_by_its_genome_copies() {
    // Volland et al. 2022, Science 376:1453: up to 2 cm, more than 5e5 copies; 20 d is invented within their weeks.
    let giant = |copies: &str| {
        let organism = format!(
            "width: 0.12 mm, length: 20 mm, vacuole_fraction: 0.75, genome_length: 11.5 Mbp, doubling_time: 20 d{copies}"
        );
        screen(&cell("form: filament, metabolism: lithotrophic", &organism, "temperature: 28 °C"))
    };
    let single = giant(", genome_copies: 1");
    assert_eq!(overall(&single), "fail");
    assert_eq!(single["overall"]["binding"], "reach-of-a-genome");
    assert_eq!(overall(&giant(", genome_copies: 5e5")), "pass");
    // Copies that are not stated are free within what is known.
    assert_eq!(overall(&giant("")), "pass");
}

#[test]
fn repair_limits_a_maintaining_cell_in_the_heat() {
    // Onstott et al. 2014, Geobiology 12:1: proteins last 2 to 3 d at 85 °C, 89 yr at 27 °C; 1 µm³ then takes 1.4e-15 W and 1.1e-19 W.
    let at = |celsius: &str| {
        let organism = "cell_volume: 1 µm^3, vacuole_fraction: 0, protein_number: 3e6, protein_length: 300 aa, power_supply: 1e-18 W";
        screen(&cell("state: maintaining", organism, &format!("temperature: {celsius} °C")))
    };
    for (celsius, watts, expected) in [("85", 1.4e-15, "fail"), ("27", 1.1e-19, "pass")] {
        let found = at(celsius);
        assert_eq!(verdict(&found, "least-repair"), expected, "{celsius} °C");
        assert_eq!(constraint(&found, "least-repair")["unit"], "zW");
        let needs = constraint(&found, "least-repair")["required"]["median"].as_f64().unwrap() * 1e-21;
        assert!(
            libm::log10(needs / watts).abs() < 0.1,
            "{celsius} °C: {needs:.2e} W, expected {watts:.1e} W"
        );
    }
    assert_eq!(overall(&at("85")), "fail");
}

#[test]
fn one_number_behind_two_limits_moves_both() {
    let candidate = cell(CULTURED_ROD, &format!("{COLI}, genome_copies: 4, vacuole_fraction: 0"), "");
    let dictionary = "volume_per_base_pair:\n  symbol: v_bp\n  of: organism\n  unit: nm^3\n  bounds: [0 nm^3, none]\n  about: doubled for a \
                      test\n  default: { value: { min: 2.14 nm^3, mode: 2.4 nm^3, max: 2.94 nm^3 }, role: unknown, basis: \
                      biochemical, source: kempes-2016 }\n";
    let before = screen(&candidate);
    let after = Run::new("screen c.yaml --format json --overlay over")
        .file("c.yaml", &candidate)
        .file("over/quantities.yaml", dictionary)
        .json();
    let moved = |id: &str| margin(&before, id) - margin(&after, id);
    // The share of the genome is the genome alone; among all contents it is some share.
    assert!(
        (moved("genome-packing") - std::f64::consts::LOG10_2).abs() < 1e-3,
        "{}",
        moved("genome-packing")
    );
    assert!((0.01..0.3).contains(&moved("contents-fit")), "{}", moved("contents-fit"));
}

#[test]
fn growth_at_the_record_holds_and_a_little_faster_is_outside_known_life() {
    // Eagon 1962: 9.6 min at 37 °C. The hull is drawn through it: a margin of 0 holds.
    let at = |minutes: &str| {
        screen(&cell("lifestyle: cultured", &format!("doubling_time: {minutes} min"), "temperature: 37 °C"))
    };
    assert!((0.0..1e-4).contains(&margin(&at("9.6"), "growth-ceiling")));
    let faster = at("8.5");
    assert_eq!(verdict(&faster, "growth-ceiling"), "fail");
    assert_eq!(overall(&faster), "marginal");
    assert_eq!(faster["overall"]["outside_known_life"], true);
    // Faster than any ribosome copies itself at 37 °C, 3.75 min: Dill et al. 2011, PNAS 108:17876.
    assert_eq!(overall(&at("3.5")), "fail");
    // Between the points straight in ln µ against 1/T: at 20 °C from 5.4 °C, 0.235 1/h, and 37 °C, 4.3322 1/h.
    let cool = screen(&cell("lifestyle: cultured", "growth_rate: 0.5 1/h", "temperature: 20 °C"));
    let share = (1.0 / 278.55 - 1.0 / 293.15) / (1.0 / 278.55 - 1.0 / 310.15_f64);
    let hull = 0.235 * libm::pow(4.3322 / 0.235, share);
    assert!((margin(&cool, "growth-ceiling") - libm::log10(hull / 0.5)).abs() < 1e-4);
}

#[test]
fn numbers_from_memory_fail_no_candidate_alone() {
    // A genome of 300 Mbp doubling in 15 min at 37 °C: too slow to copy by the fork speed, which is from memory.
    let organism = "genome_length: 300 Mbp, doubling_time: 15 min, genome_copies: 1";
    let found = screen(&cell("lifestyle: cultured", organism, "temperature: 37 °C"));
    assert_eq!(verdict(&found, "genome-copying"), "fail");
    assert_eq!(constraint(&found, "genome-copying")["basis"], "empirical");
    assert_eq!(overall(&found), "marginal");
    assert_eq!(found["overall"]["outside_known_life"], true);
    // The same for packing between what cells are known to hold and what capsids do.
    let packed =
        screen(&cell("form: sphere", "diameter: 600 ± 5 nm, vacuole_fraction: 0, genome_length: 36 Mbp", ""));
    assert_eq!(verdict(&packed, "genome-packing"), "fail");
    assert_eq!(overall(&packed), "marginal");
    assert!(chance(&packed, "contents-fit") > 0.05);
    // And the report names the number.
    let screen = Run::new("screen c.yaml").file(
        "c.yaml",
        cell("form: sphere", "diameter: 600 ± 5 nm, vacuole_fraction: 0, genome_length: 36 Mbp", ""),
    );
    let told = screen.output().stdout;
    assert!(told.contains("from memory: `genome_share_limit`"), "{told}");
}
