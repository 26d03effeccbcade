//! What is wrong, where, what was found, what was expected, and the nearest known name.

use std::ops::Range;

use super::source::Place;

/// What is wrong within one short text (a number, a unit, a formula). The caller knows where the text stands.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fault {
    /// Bytes of the short text that are at fault.
    pub span: Range<usize>,
    /// One plain sentence, lower case, no full stop, names in backticks.
    pub message: String,
    /// What was expected, or how to write it.
    pub expected: Option<String>,
    /// The nearest known name.
    pub nearest: Option<String>,
}

/// One thing wrong with an input.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Problem {
    /// Where; absent when the input as a whole is at fault.
    pub place: Option<Place>,
    /// One plain sentence, lower case, no full stop, names in backticks.
    pub message: String,
    /// What was expected, or how to write it.
    pub expected: Option<String>,
    /// The nearest known name.
    pub nearest: Option<String>,
}

/// All problems of a phase, in the order found. Beyond the first 10,000 they are only counted, so that a hostile file cannot
/// fill the memory.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Problems {
    list: Vec<Problem>,
    beyond: usize,
}

/// How many problems are kept.
const KEPT: usize = 10_000;

impl Fault {
    /// A fault at these bytes of a short text.
    #[must_use]
    pub fn new(span: Range<usize>, message: impl Into<String>) -> Self {
        Self { span, message: message.into(), expected: None, nearest: None }
    }
    /// Says what was expected.
    #[must_use]
    pub fn expected(mut self, text: impl Into<String>) -> Self {
        self.expected = Some(text.into());
        self
    }
    /// Names the nearest known name.
    #[must_use]
    pub fn nearest(mut self, name: Option<String>) -> Self {
        self.nearest = name;
        self
    }
}

impl Problem {
    /// A problem at a place.
    #[must_use]
    pub fn at(place: Place, message: impl Into<String>) -> Self {
        Self { place: Some(place), message: message.into(), expected: None, nearest: None }
    }
    /// A problem of the input as a whole.
    #[must_use]
    pub fn whole(message: impl Into<String>) -> Self {
        Self { place: None, message: message.into(), expected: None, nearest: None }
    }
    /// Says what was expected.
    #[must_use]
    pub fn expected(mut self, text: impl Into<String>) -> Self {
        self.expected = Some(text.into());
        self
    }
    /// Names the nearest known name.
    #[must_use]
    pub fn nearest(mut self, name: Option<String>) -> Self {
        self.nearest = name;
        self
    }
}

impl Problems {
    /// None yet.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }
    /// Adds one.
    pub fn push(&mut self, problem: Problem) {
        if self.list.len() < KEPT {
            self.list.push(problem);
        } else {
            self.beyond += 1;
        }
    }
    /// Adds all of another list.
    pub fn append(&mut self, other: Self) {
        self.beyond += other.beyond;
        other.list.into_iter().for_each(|problem| self.push(problem));
    }
    /// Whether so many were found that those after them are only counted: time to stop looking.
    #[must_use]
    pub fn is_full(&self) -> bool {
        self.list.len() == KEPT
    }
    /// Whether there are none.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }
    /// How many, those that are only counted included.
    #[must_use]
    pub fn len(&self) -> usize {
        self.list.len() + self.beyond
    }
    /// In the order found.
    pub fn iter(&self) -> std::slice::Iter<'_, Problem> {
        self.list.iter()
    }
}

/// The known name nearest to `name`, if one is near enough to be meant.
#[must_use]
pub fn nearest<'a>(name: &str, known: impl IntoIterator<Item = &'a str>) -> Option<String> {
    let length = name.chars().count();
    let limit = (length / 3).clamp(1, 3);
    known
        .into_iter()
        // The distance is at least the difference in length; comparing only what is near in length bounds the cost.
        .filter(|known| known.chars().count().abs_diff(length) <= limit)
        .map(|known| (strsim::damerau_levenshtein(name, known), known))
        .filter(|(distance, _)| *distance <= limit)
        .min()
        .map(|(_, known)| known.to_owned())
}

#[cfg(test)]
mod tests {
    use super::{KEPT, Problem, Problems, nearest};

    #[test]
    fn the_nearest_name_is_one_that_may_be_meant() {
        let known = ["diameter", "width", "length"];
        assert_eq!(nearest("diametre", known), Some("diameter".to_owned()));
        assert_eq!(nearest("widht", known), Some("width".to_owned()));
        assert_eq!(nearest("mass", known), None);
        assert_eq!(nearest(&"length".repeat(1_000_000), known), None);
    }

    #[test]
    fn problems_beyond_a_limit_are_counted_only() {
        let mut problems = Problems::new();
        let mut others = Problems::new();
        for number in 0..KEPT {
            problems.push(Problem::whole(number.to_string()));
            others.push(Problem::whole(number.to_string()));
        }
        problems.append(others);
        assert_eq!((problems.iter().len(), problems.len()), (KEPT, 2 * KEPT));
        assert!(!problems.is_empty() && Problems::new().is_empty());
        assert!(problems.is_full() && !Problems::new().is_full());
    }
}
