//! What stands behind the keys of a map: numbers of the wanted dimension, pure numbers, words.

use super::Reader;
use super::text::{One, parse_one};
use crate::text::{Fields, Node, Problem, nearest};

impl Reader<'_, '_> {
    /// Two ends, the lower first; both above zero where the scale is logarithmic.
    pub(super) fn ends(
        &mut self,
        fields: &mut Fields<'_>,
        low: &'static str,
        high: &'static str,
        logarithmic: bool,
    ) -> Option<(One, One)> {
        let both = format!("`{{ {low}: ..., {high}: ... }}`");
        let low_node = fields.require_like(low, &both, self.problems);
        let high_node = fields.require_like(high, &both, self.problems);
        let low_end = low_node.and_then(|node| self.stated(node, low));
        let high_end = high_node.and_then(|node| self.stated(node, high));
        let (low_end, high_end) = (low_end?, high_end?);
        if low_end.si >= high_end.si {
            self.refuse(high_node?, format!("`{high}` is not above `{low}`"), "the lower end as the first");
            return None;
        }
        if logarithmic && low_end.si <= 0.0 {
            self.refuse(
                low_node?,
                format!("`{low}` is not above zero, where a logarithm begins"),
                "a value above zero",
            );
            return None;
        }
        Some((low_end, high_end))
    }

    /// The word after `scale`: whether it is logarithmic.
    pub(super) fn scale(&mut self, fields: &mut Fields<'_>) -> Option<bool> {
        let node = fields.take("scale")?;
        self.word(node, "scale", ["linear", "log"]).map(|word| word == "log")
    }

    pub(super) fn word(&mut self, node: &Node, key: &str, words: [&'static str; 2]) -> Option<&'static str> {
        let text = node.text(&format!("`{key}`"), self.problems)?;
        let found = words.into_iter().find(|word| *word == text);
        if found.is_none() {
            self.problems.push(
                Problem::at(node.place(), format!("`{text}` is not known as a {key}"))
                    .expected(format!("`{}` or `{}`", words[0], words[1]))
                    .nearest(nearest(text, words)),
            );
        }
        found
    }

    /// One number of the wanted dimension.
    pub(super) fn one(&mut self, node: &Node, what: &str) -> Option<One> {
        let text = node.text(&format!("`{what}`"), self.problems)?;
        let read = parse_one(text).and_then(|one| {
            self.check_dimension(text, &one.unit, &one.number, &one.unit_span)?;
            Ok(one)
        });
        read.map_err(|fault| self.problems.push(node.problem(self.fitting(fault, text)))).ok()
    }

    /// One number of the wanted dimension within the bounds.
    pub(super) fn stated(&mut self, node: &Node, what: &str) -> Option<One> {
        let one = self.one(node, what)?;
        let span = one.number.start..one.number.end.max(one.unit_span.end);
        let text = node.text(what, self.problems)?;
        match self.check_bounds(one.si, &text[span.clone()], span) {
            Ok(()) => Some(one),
            Err(fault) => {
                self.problems.push(node.problem(fault));
                None
            }
        }
    }

    pub(super) fn above_zero(&mut self, node: &Node, what: &str) -> Option<One> {
        let one = self.one(node, what)?;
        if one.si <= 0.0 {
            self.refuse(
                node,
                format!("the {what} is not above zero"),
                "a value above zero, or `{ mean, sd }`",
            );
            return None;
        }
        Some(one)
    }

    /// One pure number.
    pub(super) fn pure(&mut self, node: &Node, what: &str) -> Option<f64> {
        let text = node.text(&format!("`{what}`"), self.problems)?;
        match parse_one(text) {
            Ok(one) if one.unit.dimension().is_none() => Some(one.si),
            Ok(one) => {
                self.refuse(node, format!("{what} is {}", one.unit.dimension()), "a pure number");
                None
            }
            Err(fault) => {
                self.problems.push(node.problem(fault));
                None
            }
        }
    }
}
