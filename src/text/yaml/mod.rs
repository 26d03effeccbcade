//! YAML: documents split apart, each checked by a guard pass, then read into nodes that know their place.

mod accidents;
mod guard;
mod sections;
mod surroundings;
mod tree;

use std::sync::Arc;

use super::node::Node;
use super::problems::{Problem, Problems};
use super::source::{Place, Source};

/// How many documents a file may hold.
const MOST_DOCUMENTS: usize = 65_536;

/// Calls `read` with each document of a file and its number from 1; only one is in memory at a time. A document that is
/// wrong as YAML is left out and its problems added; the others are read all the same. A document that holds nothing is
/// passed over, but counted when a line `---` opens it. Nothing more is read once there are more problems than are kept.
pub fn each_document(
    source: &Arc<Source>,
    problems: &mut Problems,
    mut read: impl FnMut(usize, Node, &mut Problems),
) {
    let sections = sections::split(&source.text, MOST_DOCUMENTS + 1);
    if let Some(beyond) = sections.get(MOST_DOCUMENTS) {
        let message = format!("the file holds more than {MOST_DOCUMENTS} documents");
        problems.push(
            Problem::at(Place::new(source, beyond.bytes.start..beyond.bytes.start + 3), message)
                .expected("several files"),
        );
        return;
    }
    let mut empty = true;
    for (index, section) in sections.iter().enumerate() {
        if !section.holds_something {
            continue;
        }
        if problems.is_full() {
            return;
        }
        empty = false;
        match node(source, section) {
            Ok(node) => read(index + 1, node, problems),
            Err(list) => list.into_iter().for_each(|problem| problems.push(problem)),
        }
    }
    if empty {
        let message = format!("`{}` is empty, or holds nothing but remarks", source.name);
        problems.push(Problem::whole(message).expected("a document in YAML"));
    }
}

/// The documents of a small file all together, each with its number.
pub fn documents(source: &Arc<Source>, problems: &mut Problems) -> Vec<(usize, Node)> {
    let mut found = Vec::new();
    each_document(source, problems, |number, node, _| found.push((number, node)));
    found
}

fn node(source: &Arc<Source>, section: &sections::Section) -> Result<Node, Vec<Problem>> {
    if let Some(problem) = sections::refuse(source, section) {
        return Err(vec![problem]);
    }
    let items = guard::check(source, section)?;
    let document = &source.text[section.bytes.clone()];
    tree::read(document, items, source)
        .map_err(|byte| vec![accidents::unreadable(source, &section.bytes, byte)])
}

#[cfg(test)]
mod tests;
