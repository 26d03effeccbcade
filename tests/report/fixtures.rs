//! Assessments made up for these tests, in an invented setting: no organism, no law and no source here is real.

use hypobiont::judge::Assessment;
use hypobiont::judge::assessment::{
    Assessed, Basis, Citation, ConstraintResult, DoubtfulGround, Extrapolation, Interval, Marginal, Origin,
    Overall, OverallResult, ParameterResult, QuantityResult, Role, RunRecord, SpeaksOf, Verdict, Warning,
    Working,
};
use hypobiont::quantity::Unit;

pub(crate) fn unit(text: &str) -> Unit {
    Unit::read(text).unwrap()
}

fn limit(id: &str, title: &str, family: &str, basis: Basis, verdict: Verdict) -> ConstraintResult {
    ConstraintResult {
        id: id.into(),
        title: title.into(),
        family: family.into(),
        basis,
        verdict,
        assessed: None,
        unit: unit(""),
        available_says: "what there is".into(),
        required_says: "what it takes".into(),
        available_formula: "there".into(),
        required_formula: "taken".into(),
        available_tex: "a".into(),
        required_tex: "b".into(),
        parameters: vec![],
        meaning: "Below this there is less than it takes.".into(),
        exceptions: None,
        speaks_of: None,
        extrapolated: vec![],
        missing: vec![],
        reason: None,
        sources: vec!["quarl-2391".into()],
        doubts: vec![],
    }
}

fn doubt(what: &str, standing: &str) -> DoubtfulGround {
    DoubtfulGround { what: what.into(), standing: standing.into() }
}

/// available and required in the unit; chance; median, low and high of the margin in dex.
fn with(
    mut result: ConstraintResult,
    text: &str,
    sides: [f64; 2],
    chance: f64,
    dex: [f64; 3],
) -> ConstraintResult {
    let unit = unit(text);
    let [median, low, high] = dex;
    result.assessed = Some(Assessed {
        chance,
        chance_se: 0.0004,
        available: unit.to_si(sides[0]),
        required: unit.to_si(sides[1]),
        margin: Interval { median, low, high },
        not_a_number_share: 0.0,
    });
    result.unit = unit;
    result
}

fn speaking(mut result: ConstraintResult, quantity: &str, value: f64, text: &str) -> ConstraintResult {
    let unit = unit(text);
    result.speaks_of = Some(SpeaksOf { quantity: quantity.into(), value: unit.to_si(value), unit });
    result
}

fn missing(mut result: ConstraintResult, groups: &[&[&str]]) -> ConstraintResult {
    result.missing =
        groups.iter().map(|group| group.iter().map(|name| (*name).to_owned()).collect()).collect();
    result
}

fn quantity(name: &str, origin: Origin, text: &str, numbers: [f64; 3], distribution: &str) -> QuantityResult {
    let unit = unit(text);
    let [median, low, high] = numbers.map(|value| unit.to_si(value));
    QuantityResult {
        name: name.into(),
        about: String::new(),
        role: Role::Unknown,
        origin,
        working: None,
        distribution: distribution.into(),
        median,
        low,
        high,
        chosen: None,
        unit,
        remark: None,
    }
}

fn free(name: &str, text: &str, range: [f64; 2], chosen: f64, about: &str) -> QuantityResult {
    let distribution = format!("anywhere from {} to {} {text}", range[0], range[1]);
    let mut q = quantity(name, Origin::Default, text, [chosen; 3], distribution.trim_end());
    q.role = Role::Free;
    q.chosen = Some(q.unit.to_si(chosen));
    q.about = about.into();
    q
}

fn worked(mut q: QuantityResult, formula: &str, parameters: Vec<ParameterResult>) -> QuantityResult {
    q.working = Some(Working { formula: formula.into(), parameters });
    q
}

fn parameter(name: &str, text: &str, numbers: [f64; 3]) -> ParameterResult {
    let unit = unit(text);
    let [median, low, high] = numbers.map(|value| unit.to_si(value));
    ParameterResult { name: name.into(), median, low, high, unit }
}

fn citation(text: &str, doi: Option<&str>, standing: &str) -> Citation {
    Citation { text: text.into(), doi: doi.map(str::to_owned), standing: standing.into() }
}

fn assessment(name: &str, file: &str) -> Assessment {
    Assessment {
        name: name.into(),
        file: file.into(),
        document: 1,
        attributes: [("body_plan", "prokaryotic-cell"), ("form", "sphere"), ("lifestyle", "free-living")]
            .into_iter()
            .map(|(name, word)| (name.to_owned(), word.to_owned()))
            .collect(),
        notes: None,
        habitat: None,
        run: RunRecord {
            seed: 1,
            draws: 131_072,
            settled: Some(true),
            cap: 1_048_576,
            laws: "preferred".into(),
            only: vec![],
            overlays: vec![],
            pass_at: 0.95,
            fail_at: 0.05,
            catalog_digest: "9f2c4e1ab07d55c3f0e1d2c3b4a5968778695a4b3c2d1e0f00112233445566aa".into(),
        },
        overall: OverallResult {
            verdict: Overall::Pass,
            chance: None,
            chance_se: None,
            assessed: 0,
            of: 0,
            basis: None,
            outside_known_life: false,
            binding: None,
            binding_share: None,
        },
        constraints: vec![],
        quantities: vec![],
        warnings: vec![],
        citations: [
            (
                "quarl-2391",
                citation(
                    "Quarl A (2391) Rooms of small cells. Annals of Lake Tarn 7:12",
                    Some("10.0/tarn.7"),
                    "published",
                ),
            ),
            (
                "oswin-2388",
                citation("Oswin B (2388) A budget from a letter. Unpublished", None, "from-memory"),
            ),
            (
                "pell-2395",
                citation("Pell C (2395) On slow cells. Tarn Letters 2:1", Some("10.0/tl.2.1"), "disputed"),
            ),
        ]
        .into_iter()
        .map(|(key, citation)| (key.to_owned(), citation))
        .collect(),
    }
}

fn settle(mut a: Assessment) -> Assessment {
    a.constraints.sort_by(|a, b| a.id.cmp(&b.id));
    a.quantities.sort_by(|a, b| a.name.cmp(&b.name));
    a.overall.assessed = a.constraints.iter().filter(|result| result.assessed.is_some()).count();
    let unassessed = a.constraints.iter().filter(|result| result.verdict == Verdict::NotAssessed).count();
    a.overall.of = a.overall.assessed + unassessed;
    a
}

/// Fails, with one limit that has nothing available, marginals of both kinds, folded passes and limits not assessed.
pub(crate) fn failing() -> Assessment {
    use Basis::{Aqueous, Biochemical, Empirical, Physical};
    let mut a = assessment("Spheroid T-3", "tarn/spheroids.yaml");
    a.habitat = Some("tarn-ice".into());
    a.notes = Some("From the upper core.\nSection 2 was recut.".into());
    let mut contents = speaking(
        with(
            limit("contents-fit", "Room for the least contents", "space", Biochemical, Verdict::Fail),
            "µm^3",
            [0.0021, 0.0067],
            0.0004,
            [-0.504, -0.69, -0.32],
        ),
        "diameter",
        210.0,
        "nm",
    );
    contents.available_says = "room for macromolecules".into();
    contents.required_says = "the least genome, proteins and ribosomes".into();
    contents.available_formula = "lumen_volume * macromolecule_fraction".into();
    contents.required_formula = "genome_volume + ribosome_number * ribosome_volume".into();
    contents.parameters = vec![parameter("ribosome_volume", "nm^3", [3400.0, 3100.0, 3700.0])];
    contents.meaning =
        "Below this size a genome, the fewest proteins and the fewest ribosomes no longer fit.".into();
    contents.exceptions =
        Some("Host-dependent cells with reduced genomes; a single-polymer heredity.".into());
    let mut lumen = with(
        limit("lumen-left", "Lumen left inside the envelope", "space", Aqueous, Verdict::Fail),
        "nm",
        [-4.0, 5.0],
        0.031,
        [f64::NEG_INFINITY, f64::NEG_INFINITY, -0.21],
    );
    lumen.sources.push("oswin-2388".into());
    lumen.doubts = vec![doubt("least-lumen", "from-memory")];
    let mut upkeep = speaking(
        with(
            limit(
                "upkeep-power",
                "Power for upkeep",
                "energy",
                Empirical,
                Verdict::Marginal(Marginal::Undecided),
            ),
            "zW",
            [900.0, 410.0],
            0.7312,
            [0.34, -0.61, 1.3],
        ),
        "temperature",
        -7.0,
        "°C",
    );
    upkeep.extrapolated.push(Extrapolation {
        relation: "carbon-maintenance".into(),
        quantity: "temperature".into(),
        share: 1.0,
        by: 12.0,
        unit: unit("°C"),
    });
    upkeep.sources = vec!["pell-2395".into(), "quarl-2391".into()];
    upkeep.doubts = vec![doubt("upkeep.rate", "disputed")];
    let near = with(
        limit("uptake", "Uptake by diffusion", "supply", Physical, Verdict::Marginal(Marginal::Near)),
        "fmol/s",
        [0.012, 0.011],
        0.9499,
        [0.04, -0.002, 0.09],
    );
    let mut wide = with(
        limit("copying-errors", "Errors in copying", "fidelity", Biochemical, Verdict::Pass),
        "",
        [1.0, 0.21],
        0.9731,
        [0.68, 0.1, 1.4],
    );
    if let Some(numbers) = &mut wide.assessed {
        numbers.not_a_number_share = 0.003;
    }
    let mut turgor = with(
        limit("wall-stress", "Stress in the wall", "mechanics", Basis::Material, Verdict::Pass),
        "MPa",
        [30.0, 0.9],
        1.0,
        [1.52, 1.2, 1.8],
    );
    turgor.sources = vec!["oswin-2388".into()];

    turgor.doubts = vec![doubt("held-over", "from-memory")];
    a.constraints = vec![
        contents,
        lumen,
        upkeep,
        near,
        wide,
        turgor,
        with(
            limit("gas-diffusion", "Gas exchange", "supply", Physical, Verdict::Pass),
            "aW",
            [1.9e7, 4e-3],
            1.0,
            [9.7, 9.2, 10.1],
        ),
        with(
            limit("no-demand", "Light for the slowest growth", "energy", Physical, Verdict::Pass),
            "W/m^2",
            [1.0, 0.0],
            1.0,
            [f64::INFINITY; 3],
        ),
        missing(
            limit("membrane-leak", "Leak through the membrane", "energy", Aqueous, Verdict::NotAssessed),
            &[&["ionic_strength"]],
        ),
        missing(
            limit("heat-damage", "Repair of heat damage", "temperature", Biochemical, Verdict::NotAssessed),
            &[&["doubling_time", "growth_rate"], &["dose_rate"]],
        ),
        missing(
            limit("salt-stress", "Work against salt", "energy", Aqueous, Verdict::NotAssessed),
            &[&["ionic_strength"]],
        ),
    ];
    let mut ribosome_use =
        limit("ribosome-rate", "Ribosomes for growth", "growth", Biochemical, Verdict::NotAssessed);
    ribosome_use.reason = Some("rests on defaults alone".into());
    let mut water = limit("water-activity", "Water for growth", "water", Aqueous, Verdict::NotApplicable);
    water.reason = Some("the solvent is ammonia".into());
    a.constraints.extend([ribosome_use, water]);
    let mut diameter = quantity(
        "diameter",
        Origin::Given,
        "nm",
        [210.0, 161.0, 259.0],
        "normal, standard uncertainty 30 nm, 90 % within 161 to 259 nm",
    );
    diameter.remark = Some("section 2, after recutting".into());
    let mut power = quantity(
        "upkeep-per-year",
        Origin::Figure("upkeep-per-year".into()),
        "pJ",
        [13.0, 4.0, 40.0],
        "worked out",
    );
    power.about = "energy for upkeep in a year".into();
    a.quantities = vec![
        diameter,
        quantity(
            "temperature",
            Origin::Habitat,
            "°C",
            [-7.0, -15.2, 1.2],
            "normal, standard uncertainty 5 °C, 90 % within −15.2 to 1.2 °C",
        ),
        quantity("carbon-maintenance.activation_energy", Origin::Adopted, "kJ/mol", [69.0; 3], "exact"),
        free("envelope_thickness", "nm", [6.0, 20.0], 6.0, "thickness of the envelope on one side"),
        free("ribosome_number", "", [40.0, 70_000.0], 42.0, "ribosomes in a cell"),
        worked(
            quantity(
                "lumen_volume",
                Origin::Relation("lumen-of-sphere".into()),
                "µm^3",
                [0.0041, 0.0017, 0.008],
                "worked out",
            ),
            "pi / 6 * (diameter - 2 * envelope_thickness)^3",
            vec![],
        ),
        worked(
            quantity(
                "genome_volume",
                Origin::Relation("genome-volume".into()),
                "µm^3",
                [0.0012; 3],
                "worked out",
            ),
            "genome_length * volume_per_base_pair",
            vec![parameter("volume_per_base_pair", "nm^3", [1.1, 1.0, 1.2])],
        ),
        free("genome_length", "Mbp", [0.11, 10.0], 0.53, "length of the genome"),
        quantity(
            "macromolecule_fraction",
            Origin::Default,
            "%",
            [35.0, 31.0, 39.0],
            "uniform from 30 to 40 %",
        ),
        power,
    ];
    a.overall = OverallResult {
        verdict: Overall::Fail,
        chance: Some(0.0002),
        chance_se: Some(0.0001),
        assessed: 0,
        of: 0,
        basis: Some(Aqueous),
        outside_known_life: false,
        binding: Some("contents-fit".into()),
        binding_share: Some(0.934),
    };
    a.warnings = vec![Warning {
        code: "cut-by-bounds",
        message: "2.1 % of `temperature` lies outside its bounds and was left out".into(),
    }];
    a.run.settled = Some(false);
    a.run.draws = 1_048_576;
    a.run.overlays = vec!["copying-errors".into()];
    settle(a)
}

/// Passes everything that was assessed.
pub(crate) fn passing() -> Assessment {
    let mut a = assessment("Rodlet T-9", "tarn/rodlets.yaml");
    a.constraints = vec![
        speaking(
            with(
                limit(
                    "contents-fit",
                    "Room for the least contents",
                    "space",
                    Basis::Biochemical,
                    Verdict::Pass,
                ),
                "µm^3",
                [0.21, 0.013],
                0.9987,
                [1.21, 0.91, 1.5],
            ),
            "width",
            0.62,
            "µm",
        ),
        with(
            limit("uptake", "Uptake by diffusion", "supply", Basis::Physical, Verdict::Pass),
            "fmol/s",
            [3.2, 0.011],
            1.0,
            [2.46, 2.2, 2.7],
        ),
    ];
    a.quantities = vec![
        quantity("length", Origin::Given, "µm", [1.9; 3], "exact"),
        quantity("width", Origin::Given, "µm", [0.62, 0.52, 0.72], "uniform from 0.51 to 0.73 µm"),
    ];
    a.overall = OverallResult {
        chance: Some(0.9984),
        chance_se: Some(0.0003),
        basis: Some(Basis::Biochemical),
        binding: Some("contents-fit".into()),
        ..a.overall
    };
    a.run.settled = None;
    a.run.draws = 20_000;
    settle(a)
}

/// A text that tries everything that terminals, Markdown, spreadsheets and readers obey.
pub(crate) const HOSTILE: &str =
    "=T\u{1b}[2J\u{1b}]0;x\u{7}| `|` <b>*_#[a](b)\r\n\tend\u{9b}1m\u{202e}\u{2028}\u{7f} \"q\" 長 ";

/// Marginal and outside known life, with a hostile text in every field that a file of a user reaches.
pub(crate) fn hostile() -> Assessment {
    let mut a = failing();
    let evil = |text: &mut String| text.push_str(HOSTILE);
    a.name = HOSTILE.into();
    a.document = 3;
    evil(&mut a.file);
    a.notes = Some(format!("{HOSTILE}\n{HOSTILE}"));
    a.habitat.iter_mut().for_each(evil);
    a.attributes.insert(HOSTILE.into(), HOSTILE.into());
    a.run.overlays = vec![HOSTILE.into()];
    a.run.only = vec![HOSTILE.into()];
    for result in &mut a.constraints {
        for text in [
            &mut result.title,
            &mut result.family,
            &mut result.available_says,
            &mut result.required_says,
            &mut result.available_formula,
            &mut result.required_formula,
            &mut result.meaning,
        ] {
            evil(text);
        }
        result.exceptions.iter_mut().chain(&mut result.reason).for_each(evil);
        result.sources.push(HOSTILE.into());
        result.doubts.push(DoubtfulGround { what: HOSTILE.into(), standing: HOSTILE.into() });
        result.missing.iter_mut().flatten().for_each(evil);
        result.parameters.iter_mut().for_each(|one| evil(&mut one.name));
        result.extrapolated.iter_mut().for_each(|one| evil(&mut one.relation));
        result.speaks_of.iter_mut().for_each(|one| evil(&mut one.quantity));
    }
    for q in &mut a.quantities {
        for text in [&mut q.about, &mut q.distribution, &mut q.name] {
            evil(text);
        }
        q.remark = Some(HOSTILE.into());
        if let Some(working) = &mut q.working {
            evil(&mut working.formula);
        }
        if let Origin::Relation(id) | Origin::Figure(id) = &mut q.origin {
            evil(id);
        }
    }
    a.warnings.push(Warning { code: "hostile", message: HOSTILE.into() });
    a.citations.insert(HOSTILE.into(), citation(HOSTILE, Some(HOSTILE), "from-memory"));
    a.overall.verdict = Overall::Marginal;
    a.overall.outside_known_life = true;
    a.overall.basis = Some(Basis::Empirical);
    a
}

/// Nothing could be assessed.
pub(crate) fn unassessed() -> Assessment {
    let mut a = assessment("Grain T-11", "tarn/grains.yaml");
    a.constraints = vec![
        missing(
            limit(
                "contents-fit",
                "Room for the least contents",
                "space",
                Basis::Biochemical,
                Verdict::NotAssessed,
            ),
            &[&["diameter", "cell_volume"]],
        ),
        missing(
            limit("uptake", "Uptake by diffusion", "supply", Basis::Physical, Verdict::NotAssessed),
            &[&["diameter", "cell_volume"]],
        ),
    ];
    a.overall.verdict = Overall::NotAssessed;
    settle(a)
}
