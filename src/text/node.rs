//! A YAML document as a tree in which every node knows its place.

use std::ops::Range;
use std::sync::Arc;

use super::alignment::raw_range;
use super::fields::as_entry;
use super::problems::{Fault, Problem, Problems};
use super::rendering::shortened;
use super::source::{Place, Source, Span};

/// How many characters of a text a message quotes.
const QUOTED: usize = 60;

/// A node of a document.
#[derive(Clone, Debug)]
pub struct Node {
    /// The text it came from.
    pub source: Arc<Source>,
    /// Its bytes.
    pub span: Span,
    /// What it is.
    pub kind: Kind,
}

/// What a node is.
#[derive(Clone, Debug)]
pub enum Kind {
    /// Nothing, `~` or `null`.
    Null,
    /// A number, a word or a text, kept as written.
    Scalar(Scalar),
    /// A list.
    List(Vec<Node>),
    /// A map in the order written; the keys are scalars and differ from each other.
    Map(Vec<(Node, Node)>),
}

/// A scalar as written.
#[derive(Clone, Debug)]
pub struct Scalar {
    /// The text after YAML's own unquoting and folding.
    pub text: String,
    /// Whether it stood in quotes or in a block.
    pub quoted: bool,
}

impl Node {
    /// Where it stands.
    #[must_use]
    pub fn place(&self) -> Place {
        Place { source: Arc::clone(&self.source), span: self.span }
    }
    /// What it is, in words, for messages: "a list", "a map", "nothing", "the text `210`"; a long text is cut.
    #[must_use]
    pub fn describe(&self) -> String {
        match &self.kind {
            Kind::Null => "nothing".to_owned(),
            Kind::Scalar(scalar) => format!("the text `{}`", shortened(&scalar.text, QUOTED)),
            Kind::List(_) => "a list".to_owned(),
            Kind::Map(_) => "a map".to_owned(),
        }
    }
    /// What stands here instead of what should, as a sentence: "the id is a list", "the id has no value".
    #[must_use]
    pub fn instead(&self, what: &str) -> String {
        match self.kind {
            Kind::Null => format!("{what} has no value"),
            _ => format!("{what} is {}", self.describe()),
        }
    }
    /// Where these bytes of a scalar's text stand in the file, through quotes, escapes, folding and indentation. The whole
    /// node when that cannot be told, or when it is no scalar.
    #[must_use]
    pub fn fault_place(&self, bytes: Range<usize>) -> Place {
        let raw = &self.source.text[self.span.start..self.span.end];
        let found = match &self.kind {
            Kind::Scalar(scalar) => raw_range(raw, &scalar.text, scalar.quoted, &bytes),
            Kind::Null | Kind::List(_) | Kind::Map(_) => None,
        };
        found.map_or_else(
            || self.place(),
            |found| Place::new(&self.source, self.span.start + found.start..self.span.start + found.end),
        )
    }
    /// A problem from a fault within this scalar's text, placed in the file.
    #[must_use]
    pub fn problem(&self, fault: Fault) -> Problem {
        Problem {
            place: Some(self.fault_place(fault.span)),
            message: fault.message,
            expected: fault.expected,
            nearest: fault.nearest,
        }
    }
    /// The scalar's text; adds a problem and gives `None` when it is something else. `what` names it: "the id".
    pub fn text(&self, what: &str, problems: &mut Problems) -> Option<&str> {
        if let Kind::Scalar(scalar) = &self.kind {
            Some(&scalar.text)
        } else {
            problems.push(Problem::at(self.place(), self.instead(what)).expected("a text"));
            None
        }
    }
    /// The entries of a map; adds a problem and gives `None` when it is something else. `what` names it, `expected` says
    /// what stands in it: "a map from word to meaning".
    pub fn map(&self, what: &str, expected: &str, problems: &mut Problems) -> Option<&[(Self, Self)]> {
        if let Kind::Map(entries) = &self.kind {
            return Some(entries);
        }
        let meant = match &self.kind {
            Kind::Scalar(scalar) if !scalar.quoted => as_entry(&scalar.text).map(|entry| {
                // A pasted blank or colon looks like an ordinary one.
                let pasted = scalar.text.contains(|c: char| c == '\u{ff1a}' || c.is_whitespace() && c != ' ');
                let with = if pasted { " with an ordinary colon and blank" } else { "" };
                format!("{expected}, here `{entry}`{with}")
            }),
            _ => None,
        };
        let expected = meant.unwrap_or_else(|| expected.to_owned());
        problems.push(Problem::at(self.place(), self.instead(what)).expected(expected));
        None
    }
    /// The elements of a list; one scalar counts as a list of one when `or_one`.
    pub fn list(&self, what: &str, or_one: bool, problems: &mut Problems) -> Option<Vec<&Node>> {
        match &self.kind {
            Kind::List(list) => Some(list.iter().collect()),
            Kind::Scalar(_) if or_one => Some(vec![self]),
            _ => {
                problems.push(Problem::at(self.place(), self.instead(what)).expected("a list"));
                None
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use crate::text::{Fault, Kind, Node, Problems, Source, yaml};

    fn value(text: &str) -> Node {
        let mut problems = Problems::new();
        let mut found = yaml::documents(&Source::new("s.yaml", text), &mut problems);
        assert!(problems.is_empty(), "{problems}");
        match found.remove(0).1.kind {
            Kind::Map(mut entries) => entries.remove(0).1,
            other => panic!("{other:?}"),
        }
    }

    fn shown(text: &str, needle: &str) -> String {
        let value = value(text);
        let Kind::Scalar(scalar) = &value.kind else { panic!("{value:?}") };
        let start = scalar.text.find(needle).unwrap();
        value.problem(Fault::new(start..start + needle.len(), "found")).to_string()
    }

    #[test]
    fn a_fault_in_a_scalar_is_shown_where_it_stands_in_the_file() {
        let plain = "µ: 210 ± 30 nmm
";
        assert_eq!(shown(plain, "nmm"), "s.yaml:1:13  found\n      µ: 210 ± 30 nmm\n                  ~~~\n");
        let quoted = "a: \"2 \\u00b1 3 nmm\" # µ\n";
        assert_eq!(
            shown(quoted, "nmm"),
            "s.yaml:1:16  found\n      a: \"2 \\u00b1 3 nmm\" # µ\n                     ~~~\n"
        );
        let block = "a: # > no\n  |\n\n   b = 1\n    c = µ\n";
        assert_eq!(shown(block, "= µ"), "s.yaml:5:7  found\n      c = µ\n        ~~~\n");
        let folded = "a:\n  b: >-\n    \"x\" +\n    yy\n";
        let Kind::Map(entries) = value(folded).kind else { panic!("no map") };
        let problem = entries[0].1.problem(Fault::new(6..8, "found"));
        assert_eq!(problem.to_string(), "s.yaml:4:5  found\n      yy\n      ~~\n");
    }

    #[test]
    fn a_node_that_is_something_else_is_described() {
        let mut problems = Problems::new();
        assert_eq!(value("a: [1]").text("the id", &mut problems), None);
        assert_eq!(value("a:").text("the id", &mut problems), None);
        assert_eq!(value("a: x").list("the source", true, &mut problems).map(|list| list.len()), Some(1));
        assert_eq!(
            value(&format!("a: {}", "x".repeat(99)))
                .list("the source", false, &mut problems)
                .map(|l| l.len()),
            None
        );
        assert_eq!(
            problems.to_string(),
            format!(
                "\
s.yaml:1:1  the id has no value
      a:
      ~
   expected  a text

s.yaml:1:4  the id is a list
      a: [1]
         ~~~
   expected  a text

s.yaml:1:4  the source is the text `{}…`
      a: {}…
         {}
   expected  a list
",
                "x".repeat(59),
                "x".repeat(90),
                "~".repeat(90)
            )
        );
    }
}
