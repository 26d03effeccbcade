//! The guard pass: reads a document's events with their places, refuses what this format leaves out of YAML, and stops early
//! at anything that would cost time or memory, before the tree is built.

use std::borrow::Cow;
use std::collections::BTreeMap;
use std::collections::btree_map::Entry;
use std::ops::Range;
use std::sync::Arc;

use saphyr_parser::{Event, Marker, Parser, ScalarStyle, ScanError, Span as Marked};

use super::accidents::{self, Broken};
use super::sections::Section;
use super::surroundings::{Brackets, MOST_SIGNS, block_header, quoted_length};
use crate::text::fields::with_blank;
use crate::text::problems::Problem;
use crate::text::source::{Place, Source, Span};

/// How many lists and maps may stand within each other.
pub(super) const DEEPEST: usize = 64;
/// How many lists, maps, keys and values a document may hold, together. A candidate has some fifty, a large file of a
/// catalogue some thousands; a tree of so many takes about 40 MB.
pub(super) const MOST_NODES: usize = 100_000;
/// How many characters a key may have; YAML's own limit for a key before a colon.
const LONGEST_KEY: usize = 1024;
/// How many refusals of one document are reported.
const REFUSALS: usize = 100;

/// A node as the guard saw it; items stand in the order of the text, a list or map before what it holds.
#[derive(Debug)]
pub(super) struct Item {
    /// Its bytes in the source.
    pub(super) span: Span,
    /// What it is.
    pub(super) what: What,
}

/// What a node is.
#[derive(Debug)]
pub(super) enum What {
    /// Nothing, `~` or `null`.
    Null { text: String },
    /// A scalar, after unquoting and folding.
    Scalar { text: String, quoted: bool },
    /// A list of so many elements.
    List { length: usize },
    /// A map of so many entries.
    Map { length: usize },
}

/// A list or map that is not yet closed.
struct Open {
    item: usize,
    /// For a map: the item of each key, and whether a value comes next.
    keys: Option<BTreeMap<String, usize>>,
    value_next: bool,
    length: usize,
    flow: bool,
    end: usize,
}

/// Checks one document. The problems are never empty.
pub(super) fn check(source: &Arc<Source>, section: &Section) -> Result<Vec<Item>, Vec<Problem>> {
    let document = &source.text[section.bytes.clone()];
    if document.len() > MOST_SIGNS {
        // A bracket may begin a key, so the parser reads up to its end before it gives a first event.
        let start = section.bytes.start;
        let mut brackets = Brackets::new(Vec::new(), start);
        brackets.advance(&source.text, section.bytes.end);
        if brackets.signs > MOST_SIGNS {
            return Err(vec![too_many(Place::new(source, start..start + 1))]);
        }
    }
    let offsets = Offsets::of(document, section.bytes.start);
    let mut guard = Guard {
        source,
        section,
        offsets,
        items: Vec::new(),
        open: Vec::new(),
        refused: Vec::new(),
        end: section.bytes.start,
    };
    for event in Parser::new_from_str(document) {
        let going_on = match event {
            Ok((event, at)) => guard.event(event, at),
            Err(error) => {
                guard.broken(&error);
                false
            }
        };
        if !going_on || guard.refused.len() >= REFUSALS {
            break;
        }
    }
    if guard.refused.is_empty() { Ok(guard.items) } else { Err(guard.refused) }
}

struct Guard<'a> {
    source: &'a Arc<Source>,
    section: &'a Section,
    offsets: Offsets<'a>,
    items: Vec<Item>,
    open: Vec<Open>,
    refused: Vec<Problem>,
    /// One past the last byte of the last node.
    end: usize,
}

impl Guard<'_> {
    /// Takes one event; false when nothing after it should be read.
    fn event(&mut self, event: Event<'_>, at: Marked) -> bool {
        let is_node = matches!(event, Event::Scalar(..) | Event::SequenceStart(..) | Event::MappingStart(..));
        if is_node && self.items.len() == MOST_NODES {
            let start = self.offsets.byte(at.start);
            self.refused.push(too_many(Place::new(self.source, start..start + 1)));
            return false;
        }
        match event {
            Event::Scalar(text, style, anchor, tag) => {
                self.refuse_properties(anchor, tag.is_some(), at);
                self.scalar(text, style, at);
                true
            }
            Event::SequenceStart(anchor, tag) => {
                self.refuse_properties(anchor, tag.is_some(), at);
                self.start(None, at)
            }
            Event::MappingStart(anchor, tag) => {
                self.refuse_properties(anchor, tag.is_some(), at);
                self.start(Some(BTreeMap::new()), at)
            }
            Event::SequenceEnd | Event::MappingEnd => {
                self.close(at);
                true
            }
            Event::Alias(_) => {
                // An alias is never followed, so it costs nothing to go on and name the others.
                self.refuse_sign(at);
                self.place_in_parent(true);
                true
            }
            Event::Nothing
            | Event::StreamStart
            | Event::StreamEnd
            | Event::DocumentStart(_)
            | Event::DocumentEnd => true,
        }
    }

    fn scalar(&mut self, text: Cow<'_, str>, style: ScalarStyle, at: Marked) {
        let plain = style == ScalarStyle::Plain;
        let empty = plain && text.is_empty();
        let is_key = self.open.last().is_some_and(|open| open.keys.is_some() && !open.value_next);
        let bytes = if empty { self.empty_bytes(is_key, at) } else { self.scalar_bytes(style, at) };
        if !empty {
            self.end = bytes.end;
        }
        let span = self.source.span(bytes);
        if is_key {
            self.key(&text, plain, span);
        } else if empty {
            self.refuse_missing_blank();
        } else if plain {
            self.refuse_merged_item(span);
        }
        let null = plain && !is_key && matches!(&*text, "" | "~" | "null" | "Null" | "NULL");
        let text = text.into_owned();
        let what = if null { What::Null { text } } else { What::Scalar { text, quoted: !plain } };
        self.items.push(Item { span, what });
        self.place_in_parent(true);
    }

    /// Refuses `{diameter:210 nm}`, which YAML reads as a key without a value.
    fn refuse_missing_blank(&mut self) {
        let Some(Open { flow: true, keys: Some(_), .. }) = self.open.last() else { return };
        let Some(Item { span, what: What::Scalar { text, quoted: false } }) = self.items.last() else {
            return;
        };
        if let Some(corrected) = with_blank(text) {
            let place = Place { source: Arc::clone(self.source), span: *span };
            self.refused
                .push(Problem::at(place, accidents::MISSING_BLANK).expected(format!("`{corrected}`")));
        }
    }

    /// Refuses a list item that is indented deeper than the one above: YAML reads it as more text of that one.
    fn refuse_merged_item(&mut self, span: Span) {
        let Some(Open { flow: false, keys: None, .. }) = self.open.last() else { return };
        let mut start = span.start;
        for line in self.source.text[span.start..span.end].split_inclusive(['\n', '\r']) {
            let item = line.trim();
            if start > span.start && item.starts_with("- ") {
                let first = start + line.len() - line.trim_start().len();
                let place = Place::new(self.source, first..first + item.len());
                self.refused.push(
                    Problem::at(
                        place,
                        "this item is indented deeper than the one above, and so a part of its text",
                    )
                    .expected("the indentation of the other items"),
                );
            }
            start += line.len();
        }
    }

    /// Refuses a merge, an empty, a repeated and an overlong key.
    fn key(&mut self, text: &str, plain: bool, span: Span) {
        let place = Place { source: Arc::clone(self.source), span };
        if self.source.text[span.start..span.end].contains(['\n', '\r']) {
            self.refused
                .push(Problem::at(place, "a key runs over several lines").expected("a key on one line"));
            return;
        }
        if let Some((at, blank)) = text.char_indices().find(|(_, c)| c.is_whitespace() && *c != ' ')
            && plain
        {
            // Pasted from a page: not seen, and a part of the key for YAML.
            let place = Place::new(self.source, span.start + at..span.start + at + blank.len_utf8());
            let message =
                format!("a blank of another kind, U+{:04X}, is a part of the key", u32::from(blank));
            self.refused.push(
                Problem::at(place, message).expected(format!("ordinary blanks: `{}`", unblanked(text))),
            );
            return;
        }
        if text.chars().count() > LONGEST_KEY {
            let message = format!("a key is longer than {LONGEST_KEY} characters");
            self.refused.push(Problem::at(place, message).expected("a short key"));
            return;
        }
        if plain && text == "<<" {
            self.refused.push(
                Problem::at(place, "the key `<<` merges another map, which is not read here")
                    .expected("the entries themselves"),
            );
        } else if plain && text.is_empty() {
            self.refused.push(
                Problem::at(place, "no key stands before the colon").expected("`key: value`, or quotes"),
            );
        } else if let Some(Open { keys: Some(keys), .. }) = self.open.last_mut() {
            match keys.entry(text.to_owned()) {
                Entry::Vacant(vacant) => {
                    vacant.insert(self.items.len());
                }
                Entry::Occupied(first) => {
                    let first = self.items[*first.get()].span.start;
                    let line = self.section.line_of(&self.source.text, first);
                    self.refused.push(
                        Problem::at(place, format!("`{text}` is repeated; it first stands in line {line}"))
                            .expected("each key once in a map"),
                    );
                }
            }
        }
    }

    /// Opens a list (no keys) or a map; false when it stands too deep.
    fn start(&mut self, keys: Option<BTreeMap<String, usize>>, at: Marked) -> bool {
        let mut start = self.offsets.byte(at.start);
        let flow = self.source.text[start..].starts_with(['[', '{']);
        if keys.is_none() && !flow && !self.source.text[start..].starts_with('-') {
            // The parser places a list that is not indented after its first dash.
            start = self.source.text[..start].trim_end().strip_suffix('-').map_or(start, str::len);
        }
        let span = self.source.span(start..start + usize::from(flow));
        let place = Place { source: Arc::clone(self.source), span };
        if self.open.len() == DEEPEST {
            self.refused.push(too_deep(place));
            return false;
        }
        if self.open.last().is_some_and(|open| open.keys.is_some() && !open.value_next) {
            let what = if keys.is_some() { "a map" } else { "a list" };
            self.refused.push(
                Problem::at(place, format!("a key is {what}"))
                    .expected("a word or a text as key; quotes around a text that begins with a bracket"),
            );
        }
        self.place_in_parent(false);
        self.end = self.end.max(span.end);
        let what = if keys.is_some() { What::Map { length: 0 } } else { What::List { length: 0 } };
        self.open.push(Open {
            item: self.items.len(),
            keys,
            value_next: false,
            length: 0,
            flow,
            end: span.end,
        });
        self.items.push(Item { span, what });
        true
    }

    /// Closes the innermost list or map: its span ends with its bracket, or with the last thing in it.
    fn close(&mut self, at: Marked) {
        let Some(open) = self.open.pop() else { return };
        let start = self.offsets.byte(at.start);
        let end = if open.flow { self.closing_end(start).unwrap_or(open.end) } else { open.end };
        self.end = self.end.max(end);
        let item = &mut self.items[open.item];
        item.span.end = end.max(item.span.end);
        match &mut item.what {
            What::List { length } | What::Map { length } => *length = open.length,
            What::Null { .. } | What::Scalar { .. } => {}
        }
        if let Some(parent) = self.open.last_mut() {
            parent.end = parent.end.max(end);
        }
    }

    /// One past the bracket that closes a list or map; after a comma the parser gives the place of the comma.
    fn closing_end(&self, from: usize) -> Option<usize> {
        let mut rest = &self.source.text[from..self.section.bytes.end];
        loop {
            rest = rest.trim_start_matches([',', ' ', '\t', '\n', '\r']);
            match rest.chars().next()? {
                ']' | '}' => return Some(self.section.bytes.end - rest.len() + 1),
                '#' => rest = &rest[rest.find(['\n', '\r'])?..],
                _ => return None,
            }
        }
    }

    /// Counts a node into the list or map around it.
    fn place_in_parent(&mut self, complete: bool) {
        let Some(parent) = self.open.last_mut() else { return };
        if parent.keys.is_some() {
            parent.length += usize::from(parent.value_next);
            parent.value_next = !parent.value_next;
        } else {
            parent.length += 1;
        }
        if complete && let Some(item) = self.items.last() {
            parent.end = parent.end.max(item.span.end);
        }
    }

    fn refuse_properties(&mut self, anchor: usize, tag: bool, at: Marked) {
        if anchor > 0 || tag {
            self.refuse_sign(at);
        }
    }

    fn refuse_sign(&mut self, at: Marked) {
        let start = self.offsets.byte(at.start);
        let in_brackets = self.open.last().is_some_and(|open| open.flow);
        self.refused.extend(accidents::sign(self.source, start, in_brackets));
    }

    fn broken(&mut self, error: &ScanError) {
        let at = self.offsets.byte(*error.marker());
        if error.info() == "recursion limit exceeded" {
            // The scanner's own limit, met while it looks ahead for a key within one run of brackets.
            self.refused.push(too_deep(Place::new(self.source, at..at + 1)));
            return;
        }
        let open = self.open.iter().filter(|open| open.flow).map(|open| self.items[open.item].span.start);
        let last = self.items.last().filter(|item| matches!(item.what, What::Scalar { .. }));
        self.refused.push(accidents::explain(Broken {
            source: self.source,
            section: self.section,
            last: last.map(|item| item.span.start..item.span.end),
            brackets: Brackets::new(open.collect(), self.end),
            at,
            reason: error.info(),
        }));
    }

    /// The bytes of a scalar that is written out. The parser's own range of a quoted scalar includes the comment after it,
    /// that of a block scalar leaves out its first line.
    fn scalar_bytes(&self, style: ScalarStyle, at: Marked) -> Range<usize> {
        let start = self.offsets.byte(at.start);
        let end = self.offsets.byte(at.end).max(start);
        let text = &self.source.text;
        match style {
            ScalarStyle::Plain => start..end,
            ScalarStyle::SingleQuoted | ScalarStyle::DoubleQuoted => {
                start..start + quoted_length(&text[start..end]).unwrap_or(end - start)
            }
            ScalarStyle::Literal | ScalarStyle::Folded => {
                let header = self.end.min(start) + block_header(&text[self.end.min(start)..start]);
                header..header + text[header..end].trim_end().len().max(1)
            }
        }
    }

    /// Where nothing stands: for a value its key, for an element its dash.
    fn empty_bytes(&self, is_key: bool, at: Marked) -> Range<usize> {
        let start = self.offsets.byte(at.start);
        if !is_key
            && let Some(Open { keys: Some(_), .. }) = self.open.last()
            && let Some(key) = self.items.last()
        {
            return key.span.start..key.span.end;
        }
        let before = self.source.text[..start].trim_end();
        if before.ends_with('-') { before.len() - 1..before.len() } else { start..start }
    }
}

/// A key with ordinary blanks, and none around it.
fn unblanked(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

fn too_many(place: Place) -> Problem {
    Problem::at(place, format!("the document holds more than {MOST_NODES} keys and values"))
        .expected("several documents or files; many measured values in a table that `sample` names")
}

fn too_deep(place: Place) -> Problem {
    Problem::at(place, format!("lists and maps stand more than {DEEPEST} deep within each other"))
        .expected("a flatter document")
}

/// From the parser's count of characters to bytes of the source, in constant time after one pass.
struct Offsets<'a> {
    document: &'a str,
    start: usize,
    is_ascii: bool,
    /// The byte of every 64th character; not needed when every character is one byte.
    marks: Vec<usize>,
}

impl<'a> Offsets<'a> {
    const STEP: usize = 64;

    fn of(document: &'a str, start: usize) -> Self {
        let is_ascii = document.is_ascii();
        let marks = if is_ascii {
            Vec::new()
        } else {
            document.char_indices().step_by(Self::STEP).map(|(byte, _)| byte).collect()
        };
        Self { document, start, is_ascii, marks }
    }
    fn byte(&self, marker: Marker) -> usize {
        let index = marker.index();
        let byte = if self.is_ascii {
            index.min(self.document.len())
        } else {
            self.marks.get(index / Self::STEP).map_or(self.document.len(), |&mark| {
                let rest = &self.document[mark..];
                rest.char_indices()
                    .nth(index % Self::STEP)
                    .map_or(self.document.len(), |(byte, _)| mark + byte)
            })
        };
        self.start + byte
    }
}

#[cfg(test)]
mod tests;
