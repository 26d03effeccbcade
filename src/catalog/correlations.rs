//! Correlations between uncertain numbers, of an entry or of a candidate: read, and held against each other.

use std::collections::BTreeSet;

use super::read_tables::exact;
use crate::quantity::Dimension;
use crate::text::{Fields, Kind, Node, Problem, Problems, nearest};

/// Correlation of normal scores between two names.
#[derive(Clone, Debug, PartialEq)]
pub struct Correlation {
    /// The names, in alphabetical order.
    pub between: [String; 2],
    /// Strictly inside (-1, 1).
    pub coefficient: f64,
}

/// Correlations that can hold together: their matrix is positive definite.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Correlations {
    pairs: Vec<Correlation>,
    names: Vec<String>,
    lower: Vec<Vec<f64>>,
}

impl Correlations {
    /// Correlations, each pair once; `None` when they contradict each other.
    #[must_use]
    pub fn new(pairs: Vec<Correlation>) -> Option<Self> {
        let names: BTreeSet<&String> = pairs.iter().flat_map(|pair| &pair.between).collect();
        let names: Vec<String> = names.into_iter().cloned().collect();
        let lower = cholesky(&names, &pairs)?;
        Some(Self { pairs, names, lower })
    }

    /// Whether there are none.
    #[must_use]
    pub const fn is_empty(&self) -> bool {
        self.pairs.is_empty()
    }

    /// Pair by pair.
    #[must_use]
    pub fn pairs(&self) -> &[Correlation] {
        &self.pairs
    }

    /// Every name, in alphabetical order.
    #[must_use]
    pub fn names(&self) -> &[String] {
        &self.names
    }

    /// The lower triangle of the matrix's Cholesky factor, rows in the order of the names: times independent normal
    /// scores, it gives correlated ones.
    #[must_use]
    pub fn lower(&self) -> &[Vec<f64>] {
        &self.lower
    }
}

/// The lower triangle of the Cholesky factor of the correlation matrix; `None` when it is not positive definite.
fn cholesky(names: &[String], pairs: &[Correlation]) -> Option<Vec<Vec<f64>>> {
    let entry = |a: &String, b: &String| {
        if a == b {
            return 1.0;
        }
        let holds = |pair: &&Correlation| pair.between.contains(a) && pair.between.contains(b);
        pairs.iter().find(holds).map_or(0.0, |pair| pair.coefficient)
    };
    let mut lower: Vec<Vec<f64>> = Vec::with_capacity(names.len());
    for (i, a) in names.iter().enumerate() {
        let mut row = vec![0.0; i + 1];
        for (j, b) in names.iter().enumerate().take(i + 1) {
            let done: f64 = (0..j).map(|k| row[k] * lower.get(j).map_or(row[k], |other| other[k])).sum();
            let rest = entry(a, b) - done;
            if i == j {
                if rest <= 0.0 {
                    return None;
                }
                row[j] = rest.sqrt();
            } else {
                row[j] = rest / lower[j][j];
            }
        }
        lower.push(row);
    }
    Some(lower)
}

/// What may be correlated where correlations are read.
pub(crate) struct Correlated<'a> {
    /// Names that can be meant.
    pub(crate) known: Vec<&'a str>,
    /// Why a name cannot be correlated, if it cannot.
    pub(crate) refusal: &'a dyn Fn(&str) -> Option<String>,
    /// What can: "two uncertain parameters of the entry".
    pub(crate) expected: &'a str,
}

/// Reads `[{ between: [a, b], coefficient: 0.4 }]`.
pub(crate) fn read(node: &Node, correlated: &Correlated<'_>, problems: &mut Problems) -> Correlations {
    let before = problems.len();
    let mut pairs: Vec<Correlation> = Vec::new();
    let Kind::List(items) = &node.kind else {
        let problem = Problem::at(node.place(), node.instead("`correlations`"));
        problems.push(problem.expected("a list of `{ between: [a, b], coefficient: 0.4 }`"));
        return Correlations::default();
    };
    for item in items {
        let Some((between, pair)) = one(item, correlated, problems) else { continue };
        if pairs.iter().any(|other| other.between == pair.between) {
            let [a, b] = &pair.between;
            problems.push(
                Problem::at(between.place(), format!("`{a}` and `{b}` are correlated twice"))
                    .expected("each pair once"),
            );
            continue;
        }
        pairs.push(pair);
    }
    let read = Correlations::new(pairs);
    if read.is_none() && problems.len() == before {
        problems.push(
            Problem::at(node.place(), "the correlations contradict each other")
                .expected("coefficients that can hold together: their matrix must be positive definite"),
        );
    }
    read.unwrap_or_default()
}

fn one<'a>(
    item: &'a Node,
    correlated: &Correlated<'_>,
    problems: &mut Problems,
) -> Option<(&'a Node, Correlation)> {
    let mut fields = Fields::of(item, "a correlation", problems)?;
    let between = fields.require_like("between", "`between: [a, b]`", problems);
    let coefficient = fields.require_like("coefficient", "`coefficient: 0.4`", problems);
    fields.finish(problems);
    let value = coefficient.and_then(|node| {
        let value = exact("coefficient", node, Dimension::NONE, problems)?;
        let inside = value > -1.0 && value < 1.0;
        if !inside {
            problems.push(
                Problem::at(node.place(), format!("the coefficient is {value}"))
                    .expected("a number strictly between -1 and 1"),
            );
        }
        inside.then_some(value)
    });
    let between = between?;
    let Kind::List(nodes) = &between.kind else {
        problems
            .push(Problem::at(between.place(), between.instead("`between`")).expected("`between: [a, b]`"));
        return None;
    };
    let [a, b] = nodes.as_slice() else {
        problems.push(
            Problem::at(between.place(), "a correlation is between two names").expected("`between: [a, b]`"),
        );
        return None;
    };
    let mut name = |node: &Node| {
        let text = node.text("a name", problems)?;
        if let Some(message) = (correlated.refusal)(text) {
            let near = nearest(text, correlated.known.iter().copied()).filter(|near| near != text);
            let problem = Problem::at(node.place(), message).expected(correlated.expected);
            problems.push(problem.nearest(near));
            return None;
        }
        Some(text.to_owned())
    };
    let (first, second) = (name(a), name(b));
    let mut names = [first?, second?];
    if names[0] == names[1] {
        problems.push(
            Problem::at(between.place(), format!("`{}` stands here twice", names[0]))
                .expected("two different names"),
        );
        return None;
    }
    names.sort();
    Some((between, Correlation { between: names, coefficient: value? }))
}

#[cfg(test)]
mod tests {
    use super::{Correlation, Correlations};

    fn correlations(pairs: &[(&str, &str, f64)]) -> Option<Correlations> {
        let pair = |&(a, b, coefficient): &(&str, &str, f64)| Correlation {
            between: [a.to_owned(), b.to_owned()],
            coefficient,
        };
        Correlations::new(pairs.iter().map(pair).collect())
    }

    #[test]
    fn only_what_can_hold_together_builds() {
        assert!(correlations(&[]).unwrap().is_empty());
        assert!(correlations(&[("a", "b", 0.9), ("b", "c", 0.9), ("a", "c", 0.7)]).is_some());
        // The determinant is 1 + 2·0.9·0.9·(-0.9) - 3·0.81 = -2.888.
        assert_eq!(correlations(&[("a", "b", 0.9), ("b", "c", 0.9), ("a", "c", -0.9)]), None);
    }

    #[test]
    fn the_factor_times_itself_is_the_matrix() {
        let found = correlations(&[("a", "b", 0.6), ("b", "c", -0.3)]).unwrap();
        assert_eq!(found.names(), ["a", "b", "c"]);
        let matrix = [[1.0, 0.6, 0.0], [0.6, 1.0, -0.3], [0.0, -0.3, 1.0]];
        for (i, row) in matrix.iter().enumerate() {
            for (j, expected) in row.iter().enumerate() {
                let product: f64 =
                    found.lower()[i].iter().zip(&found.lower()[j]).map(|(one, other)| one * other).sum();
                assert!((product - expected).abs() < 1e-15, "{i} {j}: {product}");
            }
        }
    }
}
