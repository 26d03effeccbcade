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

/// The documents of a file, each with its number from 1. A document that is wrong as YAML is left out and its problems
/// added; the others are read all the same. A document that holds nothing is passed over, but counted when a line `---`
/// opens it.
pub fn documents(source: &Arc<Source>, problems: &mut Problems) -> Vec<(usize, Node)> {
    let sections = sections::split(&source.text);
    if let Some(beyond) = sections.get(MOST_DOCUMENTS) {
        let message = format!("the file holds more than {MOST_DOCUMENTS} documents");
        problems.push(
            Problem::at(Place::new(source, source.line_at(beyond.bytes.start)), message)
                .expected("several files"),
        );
        return Vec::new();
    }
    let mut found = Vec::new();
    let mut refused = false;
    for (index, section) in sections.iter().enumerate() {
        if !section.holds_something {
            continue;
        }
        match read(source, section) {
            Ok(node) => found.push((index + 1, node)),
            Err(list) => {
                refused = true;
                list.into_iter().for_each(|problem| problems.push(problem));
            }
        }
    }
    if found.is_empty() && !refused {
        problems.push(Problem::whole(format!("`{}` holds no document", source.name)));
    }
    found
}

fn read(source: &Arc<Source>, section: &sections::Section) -> Result<Node, Vec<Problem>> {
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
