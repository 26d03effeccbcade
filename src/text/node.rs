//! A YAML document as a tree in which every node knows its place.

use std::sync::Arc;

use super::problems::{Fault, Problem, Problems, nearest};
use super::source::{Place, Source, Span};

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
    /// What it is, in words, for messages: "a list", "a map", "nothing", "the text `210`".
    #[must_use]
    pub fn describe(&self) -> String {
        match &self.kind {
            Kind::Null => "nothing".to_owned(),
            Kind::Scalar(scalar) => format!("the text `{}`", scalar.text),
            Kind::List(_) => "a list".to_owned(),
            Kind::Map(_) => "a map".to_owned(),
        }
    }
    /// A problem from a fault within this scalar's text, placed in the file.
    #[must_use]
    pub fn problem(&self, fault: Fault) -> Problem {
        Problem {
            place: Some(self.place()),
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
            problems
                .push(Problem::at(self.place(), format!("{what} is {}", self.describe())).expected("a text"));
            None
        }
    }
    /// The elements of a list; one scalar counts as a list of one when `or_one`.
    pub fn list(&self, what: &str, or_one: bool, problems: &mut Problems) -> Option<Vec<&Node>> {
        match &self.kind {
            Kind::List(list) => Some(list.iter().collect()),
            Kind::Scalar(_) if or_one => Some(vec![self]),
            _ => {
                problems.push(
                    Problem::at(self.place(), format!("{what} is {}", self.describe())).expected("a list"),
                );
                None
            }
        }
    }
}

/// The keys of a map, taken one by one; `finish` reports those that nobody took.
#[derive(Debug)]
pub struct Fields<'a> {
    node: &'a Node,
    entries: &'a [(Node, Node)],
    asked: Vec<&'static str>,
}

impl<'a> Fields<'a> {
    /// The map's fields; adds a problem and gives `None` when `node` is no map. `what` names it: "a relation".
    pub fn of(node: &'a Node, what: &str, problems: &mut Problems) -> Option<Self> {
        if let Kind::Map(entries) = &node.kind {
            Some(Self { node, entries, asked: Vec::new() })
        } else {
            problems
                .push(Problem::at(node.place(), format!("{what} is {}", node.describe())).expected("a map"));
            None
        }
    }
    /// The value of a key, if it stands there.
    pub fn take(&mut self, key: &'static str) -> Option<&'a Node> {
        self.asked.push(key);
        self.entries.iter().find(|(k, _)| matches!(&k.kind, Kind::Scalar(s) if s.text == key)).map(|(_, v)| v)
    }
    /// The value of a key; adds a problem when it is missing.
    pub fn require(&mut self, key: &'static str, problems: &mut Problems) -> Option<&'a Node> {
        let found = self.take(key);
        if found.is_none() {
            problems.push(Problem::at(self.node.place(), format!("`{key}` is missing")));
        }
        found
    }
    /// Reports every key that was not asked for, with the nearest that was.
    pub fn finish(self, problems: &mut Problems) {
        for (key, _) in self.entries {
            let Kind::Scalar(scalar) = &key.kind else { continue };
            if !self.asked.contains(&scalar.text.as_str()) {
                problems.push(
                    Problem::at(key.place(), format!("`{}` is not known here", scalar.text))
                        .expected(format!("one of {}", self.asked.join(", ")))
                        .nearest(nearest(&scalar.text, self.asked.iter().copied())),
                );
            }
        }
    }
}
