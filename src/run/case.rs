//! One candidate's numbers, laid out for a plan.

use crate::candidate::Candidate;
use crate::catalog::Catalog;
use crate::plan::{InputKind, Level, Plan};
use crate::quantity::written::Value;
use crate::quantity::{Distribution, FreeRange};

/// A free number: its range and where it stands in it.
#[derive(Clone, Debug)]
pub struct Setting {
    /// The range, from the candidate or the dictionary.
    pub range: FreeRange,
    /// What was chosen.
    pub value: f64,
}

/// The numbers of one candidate.
#[derive(Clone, Debug)]
pub struct Case {
    /// Of each input of the plan: its distribution; exact for what is one value. Free inputs hold their setting.
    pub inputs: Vec<Distribution>,
    /// Of each free number of the plan, in order of name.
    pub free: Vec<Setting>,
    /// Values of all nodes that need no draws, by node; the others hold NaN.
    pub scalars: Vec<f64>,
}

impl Case {
    /// A candidate's numbers; free numbers stand at their typical values.
    #[must_use]
    pub fn new(catalog: &Catalog, plan: &Plan, candidate: &Candidate) -> Self {
        let free: Vec<Setting> = plan
            .free
            .iter()
            .map(|number| {
                let range = range_of(catalog, candidate, &number.name);
                Setting { range, value: range.typical }
            })
            .collect();
        let inputs = plan
            .graph
            .inputs
            .iter()
            .map(|input| match input {
                InputKind::Stated(name) => match candidate.stated(name).map(|reading| &reading.value) {
                    Some(Value::Unknown(distribution)) => distribution.clone(),
                    _ => Distribution::Exact(f64::NAN),
                },
                InputKind::Catalog(distribution) => distribution.clone(),
                InputKind::Free(at) => Distribution::Exact(free[*at].value),
            })
            .collect();
        let mut case = Self { inputs, free, scalars: vec![f64::NAN; plan.graph.nodes.len()] };
        for id in 0..plan.graph.nodes.len() {
            case.compute(plan, id);
        }
        case
    }

    /// Computes one node that needs no draws, from those before it.
    pub(super) fn compute(&mut self, plan: &Plan, id: usize) {
        let node = &plan.graph.nodes[id];
        if matches!(node.level, Level::Constant | Level::Setting) {
            let setting = |input: usize| match &plan.graph.inputs[input] {
                InputKind::Free(at) => self.free[*at].value,
                _ => match &self.inputs[input] {
                    Distribution::Exact(value) => *value,
                    _ => f64::NAN,
                },
            };
            self.scalars[id] = plan.graph.scalar(&node.op, |operand| self.scalars[operand], setting);
        }
    }
}

fn range_of(catalog: &Catalog, candidate: &Candidate, name: &str) -> FreeRange {
    let stated = candidate.stated(name).map(|reading| &reading.value);
    let default = || {
        let default = catalog.quantities.get(name)?.default.as_ref()?;
        default.value.of(&candidate.attributes).ok()
    };
    match stated.or_else(default) {
        Some(Value::Free(range)) => *range,
        // The plan lists only quantities that are free for this candidate.
        _ => FreeRange { low: f64::NAN, high: f64::NAN, typical: f64::NAN, logarithmic: false },
    }
}
