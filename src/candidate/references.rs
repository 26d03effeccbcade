//! What a candidate says about names that stand elsewhere: parameters it replaces, quantities it correlates.

use std::collections::BTreeMap;

use super::Adopted;
use super::read::Reader;
use crate::catalog::{Correlated, Correlations, read_correlations};
use crate::quantity::written::{self, Reading, Value, Wanted};
use crate::quantity::{Bounds, Distribution};
use crate::text::{Node, Problem, nearest, shortened};

impl Reader<'_> {
    pub(super) fn adopted(&mut self, node: &Node) -> BTreeMap<String, Adopted> {
        let mut adopted = BTreeMap::new();
        let expected = "a map from `entry.parameter` to a value";
        let Some(entries) = node.map("`adopt`", expected, self.problems) else { return adopted };
        let all: Vec<String> = self
            .catalog
            .entries()
            .flat_map(|entry| entry.parameters.keys().map(|name| format!("{}.{name}", entry.id)))
            .collect();
        for (key, value) in entries {
            if self.problems.is_full() {
                return adopted;
            }
            let Some(full) = key.text("a parameter", self.problems) else { continue };
            let found = full.split_once('.').and_then(|(id, name)| {
                let entry = self.catalog.entries().find(|entry| entry.id == id)?;
                Some((entry, name, entry.parameters.get(name)?))
            });
            let Some((entry, name, parameter)) = found else {
                self.no_parameter(key, full, &all);
                continue;
            };
            let wanted = Wanted {
                name: full,
                dimension: parameter.unit.dimension(),
                bounds: Bounds::NONE,
                unit: &parameter.unit,
                may_be_free: false,
                folder: self.folder,
            };
            if let Some(reading) = written::read(value, &wanted, self.problems) {
                adopted.insert(
                    full.to_owned(),
                    Adopted { entry: entry.id.clone(), parameter: name.to_owned(), reading },
                );
            }
        }
        adopted
    }

    fn no_parameter(&mut self, key: &Node, full: &str, all: &[String]) {
        let written = shortened(full, 80);
        let problem = match self.catalog.quantities.get(full) {
            Some(_) => {
                Problem::at(key.place(), format!("`{full}` is a quantity, not a parameter of an entry"))
                    .expected("its value under `organism` or `environment`")
            }
            None => Problem::at(key.place(), format!("`{written}` is not a parameter of an entry")).expected(
                "`entry.parameter`; `hypobiont catalog show ENTRY` lists the parameters of an entry",
            ),
        };
        // A parameter without its entry, else a slip of the pen.
        let alone =
            all.iter().find(|name| name.split_once('.').is_some_and(|(_, name)| name == full)).cloned();
        let near = alone.or_else(|| nearest(full, all.iter().map(String::as_str)));
        self.problems.push(problem.nearest(near));
    }

    pub(super) fn correlations(&mut self, node: &Node, given: &BTreeMap<String, Reading>) -> Correlations {
        let refusal = |name: &str| match given.get(name).map(|reading| &reading.value) {
            None => Some(format!("`{}` is correlated but not stated by this candidate", shortened(name, 60))),
            Some(Value::Free(_)) => Some(format!("`{name}` is free and cannot be correlated")),
            Some(Value::Unknown(Distribution::Exact(_))) => {
                Some(format!("`{name}` is exact and cannot be correlated"))
            }
            Some(Value::Unknown(distribution)) if distribution.file().is_some() => {
                Some(format!("`{name}` comes from a file, whose rows say how its columns go together"))
            }
            Some(Value::Unknown(_)) => None,
        };
        let correlated = Correlated {
            known: given.keys().map(String::as_str).collect(),
            refusal: &refusal,
            expected: "two uncertain quantities that this candidate states",
        };
        read_correlations(node, &correlated, self.problems)
    }
}
