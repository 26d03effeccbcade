//! What must hold for any bytes: no panic, a message within the text where it is refused, and where it is read, what is
//! printed reads as the same. Called by the tests over a few seeds, and by the fuzz targets over anything.

use std::collections::BTreeMap;
use std::sync::OnceLock;

use hypobiont::candidate::read_file;
use hypobiont::catalog::Catalog;
use hypobiont::formula::curves::{Axes, Between, Form, Outside, Scale};
use hypobiont::formula::{Curve, Formula, Scope};
use hypobiont::judge::Asked;
use hypobiont::quantity::written::{self, Value, Wanted};
use hypobiont::quantity::{Bounds, Dimension, Unit};
use hypobiont::report::{self, Format, entries};
use hypobiont::run::Settings;
use hypobiont::study;
use hypobiont::text::{Fault, Kind, Node, Problems, Source, yaml};

/// An invented catalogue that uses every form of entry: the ground of the candidates, and what overlays are laid over.
const CATALOGUE: &[(&str, &str)] = &[
    ("sources.yaml", include_str!("catalogue/sources.yaml")),
    ("constants.yaml", include_str!("catalogue/constants.yaml")),
    ("attributes.yaml", include_str!("catalogue/attributes.yaml")),
    ("quantities.yaml", include_str!("catalogue/quantities.yaml")),
    ("relations/all.yaml", include_str!("catalogue/relations/all.yaml")),
    ("constraints/all.yaml", include_str!("catalogue/constraints/all.yaml")),
    ("figures/all.yaml", include_str!("catalogue/figures/all.yaml")),
    ("habitats/all.yaml", include_str!("catalogue/habitats/all.yaml")),
];

/// Draws for each candidate: enough to reach every part, few enough to be quick.
const DRAWS: usize = 64;

fn catalogue() -> &'static Catalog {
    static READ: OnceLock<Catalog> = OnceLock::new();
    READ.get_or_init(|| {
        Catalog::from_texts(&[CATALOGUE]).unwrap_or_else(|problems| panic!("{}", problems.shown(100)))
    })
}

/// A file of candidates: read, screened and reported in every form. Every quantity that was read is printed and read
/// as the same.
pub(crate) fn candidate(bytes: &[u8]) {
    let source = match Source::from_bytes("candidate.yaml", bytes.to_vec()) {
        Ok(source) => source,
        Err(problem) => return assert!(!problem.shown(80).is_empty()),
    };
    let catalog = catalogue();
    let mut problems = Problems::new();
    let candidates = read_file(&source, None, catalog, &mut problems);
    assert!(!candidates.is_empty() || !problems.is_empty(), "neither read nor refused");
    told(&problems);
    for candidate in &candidates {
        for (name, reading) in &candidate.given {
            let quantity = &catalog.quantities[name];
            reads_back(name, &reading.value, &reading.unit, quantity.bounds);
        }
    }
    let settings = Settings { seed: 1, draws: Some(DRAWS), pass_at: 0.95, fail_at: 0.05 };
    let asked = Asked { settings, only: Vec::new() };
    let mut assessments = Vec::new();
    for answer in study::screen(catalog, &candidates, &asked, &|_| {}) {
        match answer {
            Ok(assessment) => assessments.push(assessment),
            Err(problems) => told(&problems),
        }
    }
    let options = report::Options {
        terminal: report::terminal::Options { width: 72, colour: true, every: true },
        command: "hypobiont".to_owned(),
    };
    for format in [Format::Terminal, Format::Lines, Format::Json, Format::Markdown, Format::Csv] {
        let text = report::render(format, &assessments, true, &options);
        if format == Format::Json {
            let read: serde_json::Value =
                serde_json::from_str(&text).expect("what is printed as JSON is JSON");
            assert_eq!(read.as_array().map(Vec::len), Some(assessments.len()));
        }
    }
}

/// One file of an overlay: its path in the first line, then its text. Whatever is read is shown.
pub(crate) fn catalogue_file(bytes: &[u8]) {
    let Ok(text) = std::str::from_utf8(bytes) else { return };
    let (path, text) = text.split_once('\n').unwrap_or((text, ""));
    match Catalog::from_texts(&[CATALOGUE, &[(path, text)]]) {
        Err(problems) => {
            assert!(!problems.is_empty(), "refused without a word");
            told(&problems);
        }
        Ok(catalog) => {
            for name in entries::all_names(&catalog) {
                assert!(entries::show(&catalog, &name, 72).is_some_and(|shown| !shown.is_empty()), "{name}");
            }
            assert!(!entries::constraints(&catalog, Some("other"), 72).is_empty());
            for (name, quantity) in &catalog.quantities {
                let values = quantity.default.iter().flat_map(|default| default.value.values());
                values.for_each(|value| reads_back(name, value, &quantity.unit, quantity.bounds));
            }
        }
    }
}

/// A formula: what is printed reads as the same tree and has the same value, bit by bit.
pub(crate) fn formula(bytes: &[u8]) {
    let Ok(text) = std::str::from_utf8(bytes) else { return };
    let scope = Names::get();
    let read = match Formula::read(text, scope) {
        Ok(formula) => formula,
        Err(faults) => {
            assert!(!faults.is_empty(), "refused without a word");
            return faults.iter().for_each(|fault| inside(fault, text));
        }
    };
    let tex = read.tex(&|_| None);
    assert_eq!(tex.matches('{').count(), tex.matches('}').count(), "{tex}");
    let printed = read.root().to_string();
    // Blanks that printing adds may take a text beyond the longest that is read.
    if printed.len() <= hypobiont::formula::LONGEST {
        let again = Formula::read(&printed, scope).unwrap_or_else(|faults| panic!("{printed}: {faults:?}"));
        assert_eq!(again.root(), read.root(), "{printed}");
        assert_eq!(again.dimension(), read.dimension(), "{printed}");
        let value = |formula: &Formula| formula.evaluate(&Names::value, &|_| &scope.curve);
        assert_eq!(value(&again).to_bits(), value(&read).to_bits(), "{printed}");
    }
}

/// A quantity and a unit: what is printed reads as the same.
pub(crate) fn quantity(bytes: &[u8]) {
    let Ok(text) = std::str::from_utf8(bytes) else { return };
    match written::read_text(text) {
        Err(fault) => inside(&fault, text),
        Ok((distribution, unit)) => {
            assert!(!distribution.describe(&unit).is_empty());
            let printed = written::print(&distribution, &unit);
            let again = written::read_text(&printed).map(|(distribution, _)| distribution);
            assert_eq!(again, Ok(distribution), "{printed}");
        }
    }
    match Unit::read(text) {
        Err(fault) => inside(&fault, text),
        Ok(unit) => assert_eq!(Unit::read(unit.text()), Ok(unit.clone()), "{}", unit.text()),
    }
}

/// A fault points into its text, at whole characters.
fn inside(fault: &Fault, text: &str) {
    assert!(text.get(fault.span.clone()).is_some(), "{fault:?} in {text:?}");
    assert!(!fault.message.is_empty());
}

/// Problems can be shown, each with a message.
fn told(problems: &Problems) {
    assert_eq!(problems.is_empty(), problems.shown(80).is_empty());
    for problem in problems.iter() {
        assert!(!problem.message.is_empty(), "{problem:?}");
    }
}

fn reads_back(name: &str, value: &Value, unit: &Unit, bounds: Bounds) {
    let text = match value {
        Value::Unknown(distribution) => written::print(distribution, unit),
        Value::Free(range) => written::print_range(range, unit),
    };
    let wanted = Wanted { name, dimension: unit.dimension(), bounds, unit, may_be_free: true, folder: None };
    let mut problems = Problems::new();
    let again = node(&format!("value: {text}\n"))
        .and_then(|node| written::read(&node, &wanted, &mut problems))
        .map(|reading| reading.value);
    assert_eq!(again.as_ref(), Some(value), "{text}: {}", problems.shown(100));
}

/// The value under the only key of a map.
fn node(text: &str) -> Option<Node> {
    let mut problems = Problems::new();
    let documents = yaml::documents(&Source::new("printed", text), &mut problems);
    let (_, document) = documents.into_iter().next()?;
    let Kind::Map(entries) = document.kind else { return None };
    entries.into_iter().next().map(|(_, value)| value)
}

/// Names of several dimensions and one curve, for formulas.
struct Names {
    dimensions: BTreeMap<&'static str, Dimension>,
    curve: Curve,
}

impl Names {
    const VALUES: [(&'static str, &'static str, f64); 6] = [
        ("diameter", "m", 3e-7),
        ("width", "m", 0.0),
        ("mass", "kg", 2e-15),
        ("temperature", "K", 300.0),
        ("x", "", -1.5),
        ("y", "", 0.75),
    ];

    fn get() -> &'static Self {
        static MADE: OnceLock<Names> = OnceLock::new();
        MADE.get_or_init(Self::new)
    }

    fn new() -> Self {
        let dimension = |unit| Unit::read(unit).expect("a unit").dimension();
        let form = Form {
            argument: Dimension::NONE,
            value: Dimension::NONE,
            axes: Axes { argument: Scale::Linear, value: Scale::Linear },
            between: Between::Straight,
            outside: Outside::Edge,
        };
        let points = [(0.0, 1.0), (1.0, 4.0), (2.0, 2.0)];
        Self {
            dimensions: Self::VALUES.map(|(name, unit, _)| (name, dimension(unit))).into(),
            curve: Curve::new(form, &points).expect("points that ascend"),
        }
    }

    fn value(name: &str) -> f64 {
        Self::VALUES.iter().find(|(known, ..)| *known == name).map_or(f64::NAN, |(_, _, value)| *value)
    }
}

impl Scope for Names {
    fn dimension_of(&self, name: &str) -> Option<Dimension> {
        self.dimensions.get(name).copied()
    }
    fn curve(&self, name: &str) -> Option<(Dimension, Dimension)> {
        (name == "curve").then_some((Dimension::NONE, Dimension::NONE))
    }
    fn names(&self) -> Vec<String> {
        self.dimensions.keys().map(|name| (*name).to_owned()).chain(["curve".to_owned()]).collect()
    }
}
