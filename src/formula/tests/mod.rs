//! Tests of the language as a whole.

mod document;
mod faults;
mod meaning;
mod printing;
mod tex;

use std::collections::BTreeMap;

use super::{Formula, Scope};
use crate::quantity::Dimension;
use crate::text::Fault;

const LENGTH: Dimension = Dimension::whole([1, 0, 0, 0, 0, 0, 0]);
const MASS: Dimension = Dimension::whole([0, 1, 0, 0, 0, 0, 0]);
const TIME: Dimension = Dimension::whole([0, 0, 1, 0, 0, 0, 0]);
const TEMPERATURE: Dimension = Dimension::whole([0, 0, 0, 0, 1, 0, 0]);

/// An invented entry: quantities of several dimensions and two curves.
struct Entry {
    names: BTreeMap<&'static str, Dimension>,
    curves: BTreeMap<&'static str, (Dimension, Dimension)>,
}

fn entry() -> Entry {
    Entry {
        names: BTreeMap::from([
            ("diameter", LENGTH),
            ("width", LENGTH),
            ("mass", MASS),
            ("age", TIME),
            ("temperature", TEMPERATURE),
            ("ratio", Dimension::NONE),
            ("slope", Dimension::NONE),
            ("x", Dimension::NONE),
            ("y", Dimension::NONE),
        ]),
        curves: BTreeMap::from([
            ("viscosity_at", (TEMPERATURE, Dimension::whole([-1, 1, -1, 0, 0, 0, 0]))),
            ("fraction", (Dimension::NONE, Dimension::NONE)),
        ]),
    }
}

impl Scope for Entry {
    fn dimension_of(&self, name: &str) -> Option<Dimension> {
        self.names.get(name).copied()
    }
    fn curve(&self, name: &str) -> Option<(Dimension, Dimension)> {
        self.curves.get(name).copied()
    }
    fn names(&self) -> Vec<String> {
        self.names.keys().chain(self.curves.keys()).map(|&name| name.to_owned()).collect()
    }
}

fn read(text: &str) -> Formula {
    Formula::read(text, &entry()).unwrap_or_else(|faults| panic!("{text}: {faults:?}"))
}

/// The faults of a wrong formula, as `start..end message; expected; nearest`.
fn faults(text: &str) -> Vec<String> {
    Formula::read(text, &entry()).expect_err(text).iter().map(shown).collect()
}

fn shown(fault: &Fault) -> String {
    let mut shown = format!("{}..{} {}", fault.span.start, fault.span.end, fault.message);
    for (word, part) in [("expected", &fault.expected), ("nearest", &fault.nearest)] {
        if let Some(part) = part {
            shown.push_str(&format!("; {word}: {part}"));
        }
    }
    shown
}
