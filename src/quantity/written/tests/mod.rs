mod maps;
mod properties;
mod texts;

use std::path::Path;

use super::{Reading, Value, Wanted, read};
use crate::quantity::distribution::{Bounds, Distribution};
use crate::quantity::unit::Unit;
use crate::text::{Kind, Node, Problems, Source, yaml};

/// The value of the one key of a YAML text.
fn node(yaml: &str) -> Node {
    let mut problems = Problems::new();
    let documents = yaml::documents(&Source::new("candidate.yaml", yaml), &mut problems);
    assert!(problems.is_empty(), "{problems:?}");
    match &documents[0].1.kind {
        Kind::Map(entries) => entries[0].1.clone(),
        other => panic!("no map: {other:?}"),
    }
}

/// What a test wants: a quantity in a unit, within bounds in that unit.
struct Case<'a> {
    unit: &'a str,
    bounds: Bounds,
    folder: Option<&'a Path>,
    may_be_free: bool,
}

/// A length that cannot be negative.
const LENGTH: Case<'static> =
    Case { unit: "nm", bounds: Bounds { low: 0.0, high: 1.0 }, folder: None, may_be_free: true };
/// A pure number of any size.
const NUMBER: Case<'static> = Case { unit: "", bounds: Bounds::NONE, folder: None, may_be_free: false };
/// A temperature in kelvin, at least 0.
const TEMPERATURE: Case<'static> =
    Case { unit: "°C", bounds: Bounds { low: 0.0, high: f64::INFINITY }, folder: None, may_be_free: false };

impl Case<'_> {
    fn try_read(&self, yaml: &str) -> (Option<Reading>, Problems, Node) {
        let unit = Unit::read(self.unit).expect("a unit");
        let wanted = Wanted {
            name: "diameter",
            dimension: unit.dimension(),
            bounds: self.bounds,
            unit: &unit,
            may_be_free: self.may_be_free,
            folder: self.folder,
        };
        let node = node(yaml);
        let mut problems = Problems::new();
        let reading = read(&node, &wanted, &mut problems);
        (reading, problems, node)
    }

    #[track_caller]
    fn reading(&self, value: &str) -> Reading {
        let (reading, problems, _) = self.try_read(&format!("diameter: {value}\n"));
        assert!(problems.is_empty(), "{value}: {problems:?}");
        reading.expect("a reading where there are no problems")
    }

    #[track_caller]
    fn distribution(&self, value: &str) -> Distribution {
        match self.reading(value).value {
            // What a bound far away has cut is of no interest to most tests.
            Value::Unknown(Distribution::Within { base, .. }) => Distribution::clone(&base),
            Value::Unknown(distribution) => distribution,
            Value::Free(range) => panic!("{value} is free: {range:?}"),
        }
    }

    /// The value is refused with exactly one problem that points at `at`, says `says` and offers `remedy`.
    #[track_caller]
    fn refuses(&self, value: &str, at: &str, says: &str, remedy: &str) {
        let (reading, problems, _) = self.try_read(&format!("diameter: {value}\n"));
        assert!(reading.is_none(), "{value} was read: {reading:?}");
        assert_eq!(problems.len(), 1, "{value}: {problems:?}");
        let problem = problems.iter().next().expect("there is one");
        let place = problem.place.as_ref().expect("it has a place");
        assert_eq!(&place.source.text[place.span.start..place.span.end], at, "{problem:?}");
        assert!(problem.message.contains(says), "{problem:?}");
        let expected = problem.expected.clone().unwrap_or_default();
        let remedies = format!("{expected} {}", problem.nearest.clone().unwrap_or_default());
        assert!(remedies.contains(remedy), "{problem:?} offers no {remedy}");
    }
}

#[track_caller]
fn close(found: f64, expected: f64, relative: f64) {
    assert!((found - expected).abs() <= relative * expected.abs(), "{found} instead of {expected}");
}
