//! A text with a name, and places in it.

use std::ops::Range;
use std::sync::Arc;

/// A text and the name it is reported under (a path, `-`, or `catalog:constraints/space.yaml`).
#[derive(Debug, PartialEq, Eq)]
pub struct Source {
    /// The name shown before line and column.
    pub name: String,
    /// The whole text.
    pub text: String,
}

/// A range of bytes in a source; always on character boundaries when made by [`Source::span`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Span {
    /// First byte.
    pub start: usize,
    /// One past the last byte.
    pub end: usize,
}

/// A range of bytes in a known source.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Place {
    /// The text.
    pub source: Arc<Source>,
    /// Where in it.
    pub span: Span,
}

impl Source {
    /// A text under a name.
    #[must_use]
    pub fn new(name: impl Into<String>, text: impl Into<String>) -> Arc<Self> {
        Arc::new(Self { name: name.into(), text: text.into() })
    }
    /// The span nearest to these bytes that lies inside the text and cuts no character: the start moves back, the end
    /// forward, and neither leaves the text.
    #[must_use]
    pub fn span(&self, bytes: Range<usize>) -> Span {
        let start = self.text.floor_char_boundary(bytes.start);
        let end = self.text.ceil_char_boundary(bytes.end.max(start));
        Span { start, end }
    }
    /// The line and the column of a byte, both from 1; the column counts characters.
    #[must_use]
    pub fn line_column(&self, byte: usize) -> (usize, usize) {
        let before = &self.text[..self.text.floor_char_boundary(byte)];
        let line = 1 + line_ends(before) - usize::from(splits_line_end(&self.text, before.len()));
        (line, before[self.line_start(before.len())..].chars().count() + 1)
    }
    /// The line and the column of a byte after another one, of which they are known; takes time by the distance only.
    #[must_use]
    pub fn line_column_after(&self, (known, at): (usize, (usize, usize)), byte: usize) -> (usize, usize) {
        if byte < known || splits_line_end(&self.text, known) || splits_line_end(&self.text, byte) {
            return self.line_column(byte);
        }
        let between = &self.text[self.text.floor_char_boundary(known)..self.text.floor_char_boundary(byte)];
        match between.rfind(['\n', '\r']) {
            None => (at.0, at.1 + between.chars().count()),
            Some(end) => (at.0 + line_ends(between), between[end + 1..].chars().count() + 1),
        }
    }
    /// The bytes of the line that holds this byte, without its line end, as far as they lie within `most` bytes of it.
    #[must_use]
    pub fn line_around(&self, byte: usize, most: usize) -> Range<usize> {
        let byte = self.text.floor_char_boundary(byte);
        let byte = if splits_line_end(&self.text, byte) { byte - 1 } else { byte };
        let around = self.span(byte.saturating_sub(most)..byte.saturating_add(most));
        let start = self.text[around.start..byte].rfind(['\n', '\r']).map_or(0, |end| end + 1);
        let length = self.text[byte..around.end].find(['\n', '\r']).unwrap_or(around.end - byte);
        around.start + start..byte + length
    }
    fn line_start(&self, byte: usize) -> usize {
        let byte = if splits_line_end(&self.text, byte) { byte - 1 } else { byte };
        self.text[..byte].rfind(['\n', '\r']).map_or(0, |end| end + 1)
    }
}

impl Place {
    /// The place nearest to these bytes that lies inside the text and cuts no character.
    #[must_use]
    pub fn new(source: &Arc<Source>, bytes: Range<usize>) -> Self {
        Self { source: Arc::clone(source), span: source.span(bytes) }
    }
    /// The line and the column of its first byte, both from 1; the column counts characters.
    #[must_use]
    pub fn line_column(&self) -> (usize, usize) {
        self.source.line_column(self.span.start)
    }
}

/// How many line ends stand in a text; `\r\n` is one.
pub(super) fn line_ends(text: &str) -> usize {
    let bytes = text.as_bytes();
    let (feeds, returns) = (count(bytes, b'\n'), count(bytes, b'\r'));
    if returns == 0 {
        return feeds;
    }
    feeds + returns - bytes.windows(2).filter(|pair| pair == b"\r\n").count()
}

/// How often a byte stands in a text; sums within one byte are fast, which matters for many problems in a large file.
fn count(bytes: &[u8], wanted: u8) -> usize {
    let pieces = bytes.chunks(usize::from(u8::MAX));
    pieces.map(|piece| usize::from(piece.iter().map(|&byte| u8::from(byte == wanted)).sum::<u8>())).sum()
}

/// Whether this byte stands between the two of a `\r\n`.
fn splits_line_end(text: &str, byte: usize) -> bool {
    byte > 0 && text.as_bytes().get(byte - 1..=byte) == Some(b"\r\n")
}

#[cfg(test)]
mod tests {
    use super::{Source, Span};

    #[test]
    fn lines_and_columns_count_from_one_and_columns_count_characters() {
        let source = Source::new("s.yaml", "a: 1\nµm: 2\r\nb: 3\rc");
        let at = |needle: &str| source.line_column(source.text.find(needle).unwrap());
        assert_eq!(at("a"), (1, 1));
        assert_eq!(at("m"), (2, 2));
        assert_eq!(at("b"), (3, 1));
        assert_eq!(at("c"), (4, 1));
        assert_eq!(source.line_column(1_000), (4, 2));
        for known in 0..=source.text.len() {
            for byte in 0..=source.text.len() {
                let after = source.line_column_after((known, source.line_column(known)), byte);
                assert_eq!(after, source.line_column(byte), "{known} {byte}");
            }
        }
        let line = |byte| &source.text[source.line_around(byte, 99)];
        assert_eq!(line(source.text.find('m').unwrap()), "µm: 2");
        let feed = source.text.find("\r\n").unwrap() + 1;
        assert_eq!(source.line_column(feed), (2, 7));
        assert_eq!(line(feed), "µm: 2");
        assert_eq!(source.line_around(source.text.len(), 99), 18..19);
        assert_eq!(&source.text[source.line_around(source.text.find('m').unwrap(), 2)], "µm:");
    }

    #[test]
    fn a_span_never_cuts_a_character_nor_leaves_the_text() {
        let source = Source::new("s.yaml", "a µ");
        assert_eq!(source.span(3..3), Span { start: 2, end: 4 });
        assert_eq!(source.span(3..4), Span { start: 2, end: 4 });
        assert_eq!(source.span(0..3), Span { start: 0, end: 4 });
        assert_eq!(source.span(9..99), Span { start: 4, end: 4 });
        let backwards = std::ops::Range { start: 2, end: 1 };
        assert_eq!(source.span(backwards), Span { start: 2, end: 2 });
    }
}
