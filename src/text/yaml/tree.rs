//! The node tree of a document: the one place that names `serde_yaml`.
//!
//! The guard pass has seen the document first. Its items, one a node in the order of the text, say what to ask for next, so
//! that every scalar arrives as written (`1.30e6`, `010`, `yes`) and both readings must agree.

use std::fmt;
use std::sync::Arc;
use std::vec;

use serde::de::{DeserializeSeed, Deserializer, Error, MapAccess, SeqAccess, Visitor};

use super::guard::{Item, What};
use crate::text::node::{Kind, Node, Scalar};
use crate::text::source::Source;

/// Reads a guarded document. The error is the byte of the document where the two readings part, if known.
pub(super) fn read(document: &str, items: Vec<Item>, source: &Arc<Source>) -> Result<Node, Option<usize>> {
    let mut walk = Walk { items: items.into_iter(), source };
    NodeSeed(&mut walk)
        .deserialize(serde_yaml::Deserializer::from_str(document))
        .map_err(|error| error.location().map(|location| location.index()))
}

struct Walk<'a> {
    items: vec::IntoIter<Item>,
    source: &'a Arc<Source>,
}

/// Asks for the node that the next item describes.
struct NodeSeed<'w, 'a>(&'w mut Walk<'a>);

impl<'de> DeserializeSeed<'de> for NodeSeed<'_, '_> {
    type Value = Node;

    fn deserialize<D: Deserializer<'de>>(self, deserializer: D) -> Result<Node, D::Error> {
        let Self(walk) = self;
        let item = walk.items.next().ok_or_else(|| D::Error::custom("a node too many"))?;
        let source = Arc::clone(walk.source);
        let kind = match item.what {
            What::Null { text } => deserializer.deserialize_str(SameText(text)).map(|_| Kind::Null)?,
            What::Scalar { text, quoted } => {
                Kind::Scalar(Scalar { text: deserializer.deserialize_str(SameText(text))?, quoted })
            }
            What::List { length } => deserializer.deserialize_seq(Elements { walk, length })?,
            What::Map { length } => deserializer.deserialize_map(Entries { walk, length })?,
        };
        Ok(Node { source, span: item.span, kind })
    }
}

/// Accepts exactly the text that the guard read.
struct SameText(String);

impl Visitor<'_> for SameText {
    type Value = String;

    fn expecting(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str("the same text as the guard read")
    }
    fn visit_str<E: Error>(self, text: &str) -> Result<String, E> {
        if text == self.0 { Ok(self.0) } else { Err(E::custom("another text")) }
    }
}

/// Accepts a list of the length that the guard counted.
struct Elements<'w, 'a> {
    walk: &'w mut Walk<'a>,
    length: usize,
}

impl<'de> Visitor<'de> for Elements<'_, '_> {
    type Value = Kind;

    fn expecting(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str("a list")
    }
    fn visit_seq<A: SeqAccess<'de>>(self, mut elements: A) -> Result<Kind, A::Error> {
        let mut list = Vec::with_capacity(self.length);
        for _ in 0..self.length {
            let node = elements.next_element_seed(NodeSeed(&mut *self.walk))?;
            list.push(node.ok_or_else(|| A::Error::custom("a shorter list"))?);
        }
        Ok(Kind::List(list))
    }
}

/// Accepts a map with as many entries as the guard counted.
struct Entries<'w, 'a> {
    walk: &'w mut Walk<'a>,
    length: usize,
}

impl<'de> Visitor<'de> for Entries<'_, '_> {
    type Value = Kind;

    fn expecting(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str("a map")
    }
    fn visit_map<A: MapAccess<'de>>(self, mut entries: A) -> Result<Kind, A::Error> {
        let mut map = Vec::with_capacity(self.length);
        for _ in 0..self.length {
            let key = entries.next_key_seed(NodeSeed(&mut *self.walk))?;
            let key = key.ok_or_else(|| A::Error::custom("a shorter map"))?;
            map.push((key, entries.next_value_seed(NodeSeed(&mut *self.walk))?));
        }
        Ok(Kind::Map(map))
    }
}
