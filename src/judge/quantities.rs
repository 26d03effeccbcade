//! The quantities of an assessment: how each reads, where it came from, what it comes to.

use super::assess::Builder;
use super::assessment::{Origin, ParameterResult, QuantityResult, Role, Working};
use crate::catalog;
use crate::formula::Formula;
use crate::plan::{PlannedQuantity, Producer};
use crate::quantity::Distribution;
use crate::quantity::written::{Reading, Value};
use crate::text::one_line;

impl Builder<'_> {
    pub(super) fn quantities(&self) -> Vec<QuantityResult> {
        let mut results: Vec<QuantityResult> =
            self.plan.quantities.iter().map(|planned| self.quantity(planned)).collect();
        // What nothing uses was stated all the same: the report echoes how it was read.
        for name in &self.plan.unused {
            if let Some(reading) = self.candidate.given.get(name) {
                results.push(self.reading(name, reading, Origin::Given));
            }
        }
        for planned in &self.plan.figures {
            let figure = &self.catalog.figures[planned.figure];
            let [low, median, high] = self.quantiles(planned.node);
            results.push(QuantityResult {
                name: figure.entry.id.clone(),
                about: figure.entry.title.clone(),
                role: Role::Unknown,
                origin: Origin::Figure(figure.entry.id.clone()),
                working: Some(self.working(&figure.entry, &figure.formula)),
                distribution: String::new(),
                median,
                low,
                high,
                chosen: None,
                unit: figure.unit.clone(),
                remark: None,
            });
        }
        for (name, adopted) in &self.candidate.adopted {
            results.push(self.reading(name, &adopted.reading, Origin::Adopted));
        }
        results
    }

    fn reading(&self, name: &str, reading: &Reading, origin: Origin) -> QuantityResult {
        let quantity = self.catalog.quantities.get(name);
        let (role, [low, median, high]) = match &reading.value {
            Value::Unknown(distribution) => (Role::Unknown, quantiles_of(distribution)),
            Value::Free(range) => (Role::Free, [range.low, range.typical, range.high]),
        };
        QuantityResult {
            name: name.to_owned(),
            about: quantity.map(|quantity| quantity.about.clone()).unwrap_or_default(),
            role,
            origin,
            working: None,
            distribution: reading.value.describe(&reading.unit),
            median,
            low,
            high,
            chosen: None,
            unit: reading.unit.clone(),
            remark: reading.about.clone(),
        }
    }

    pub(super) fn quantity(&self, planned: &PlannedQuantity) -> QuantityResult {
        let PlannedQuantity { name, node, producer } = planned;
        let quantity = &self.catalog.quantities[name];
        let free = self.plan.free.iter().position(|number| number.name == *name);
        let stated = self.candidate.stated(name);
        let default = || quantity.default.as_ref()?.value.of(&self.candidate.attributes).ok();
        let written = || stated.map(|reading| &reading.value);
        let (origin, value, working) = match producer {
            Producer::Given => (Origin::Given, written(), None),
            Producer::Habitat => (Origin::Habitat, written(), None),
            Producer::Default => (Origin::Default, default(), None),
            Producer::Relation(at) => {
                let relation = &self.catalog.relations[*at];
                let working = self.working(&relation.entry, &relation.formula);
                (Origin::Relation(relation.entry.id.clone()), None, Some(working))
            }
        };
        let unit = stated.map_or_else(|| quantity.unit.clone(), |reading| reading.unit.clone());
        let [low, median, high] = match value {
            Some(Value::Unknown(distribution)) => quantiles_of(distribution),
            _ => self.quantiles(*node),
        };
        QuantityResult {
            name: name.to_owned(),
            about: quantity.about.clone(),
            working,
            role: if free.is_some() { Role::Free } else { Role::Unknown },
            origin,
            distribution: value.map(|value| value.describe(&unit)).unwrap_or_default(),
            median,
            low,
            high,
            chosen: free.map(|at| self.case.free[at].value),
            unit,
            remark: stated.and_then(|reading| reading.about.clone()),
        }
    }

    fn working(&self, entry: &catalog::Entry, formula: &Formula) -> Working {
        Working { formula: one_line(formula.text()), parameters: self.parameters(entry) }
    }

    /// The numbers that an entry alone brings along, adopted ones as adopted.
    pub(super) fn parameters(&self, entry: &catalog::Entry) -> Vec<ParameterResult> {
        entry
            .parameters
            .iter()
            .filter_map(|(name, parameter)| {
                let adopted = self.candidate.adopted.get(&format!("{}.{name}", entry.id));
                let (distribution, unit) =
                    match adopted.map(|adopted| (&adopted.reading.value, &adopted.reading.unit)) {
                        Some((Value::Unknown(distribution), unit)) => (distribution, unit),
                        _ => (parameter.value.of(&self.candidate.attributes).ok()?, &parameter.unit),
                    };
                let [low, median, high] = quantiles_of(distribution);
                Some(ParameterResult { name: name.clone(), median, low, high, unit: unit.clone() })
            })
            .collect()
    }
}

fn quantiles_of(distribution: &Distribution) -> [f64; 3] {
    [0.05, 0.5, 0.95].map(|p| distribution.quantile(p))
}
