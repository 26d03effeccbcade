//! Where the documents of a file begin and end, by its lines alone, so that a document that is wrong leaves the others whole.

use std::ops::Range;
use std::sync::Arc;

use crate::text::problems::Problem;
use crate::text::source::{Place, Source, line_ends};

/// The byte order mark.
const MARK: char = '\u{feff}';

/// The bytes of one document.
#[derive(Debug, PartialEq, Eq)]
pub(super) struct Section {
    /// From its line `---`, if it has one, up to the next marker.
    pub(super) bytes: Range<usize>,
    /// The number of its first line in the file, from 1.
    pub(super) line: usize,
    /// Whether anything stands there but blanks and comments.
    pub(super) holds_something: bool,
    /// Text that follows the `...` at its end on the same line.
    after_end: Option<Range<usize>>,
}

/// Splits at the lines `---` and `...`, into at most so many documents. Text before the first marker, or after a `...`, is
/// a document only if it holds something.
pub(super) fn split(text: &str, most: usize) -> Vec<Section> {
    let mut sections = Vec::new();
    // A byte order mark before the first line is no part of it.
    let mut position = text.len() - text.trim_start_matches(MARK).len();
    let mut open = Section { bytes: position..position, line: 0, holds_something: false, after_end: None };
    let mut explicit = false;
    for line in text[position..].split_inclusive(['\n', '\r']) {
        if sections.len() == most {
            return sections;
        }
        let start = position;
        position += line.len();
        let after = line.strip_prefix(['-', '.']).filter(|_| is_marker(line)).map(|_| &line[3..]);
        match after {
            Some(rest) if line.starts_with('-') => {
                let next =
                    Section { bytes: start..start, line: 0, holds_something: holds(rest), after_end: None };
                close(text, &mut sections, std::mem::replace(&mut open, next), start, explicit);
                explicit = true;
            }
            Some(rest) => {
                // `\r\n` is one line end.
                let feed = line.ends_with('\r') && text[position..].starts_with('\n');
                let next_start = position + usize::from(feed);
                let next = Section {
                    bytes: next_start..next_start,
                    line: 0,
                    holds_something: false,
                    after_end: None,
                };
                let mut ended = std::mem::replace(&mut open, next);
                if holds(rest) {
                    ended.holds_something = true;
                    ended.after_end =
                        Some(start + line.len() - rest.trim_start().len()..start + line.trim_end().len());
                }
                close(text, &mut sections, ended, start, explicit);
                explicit = false;
            }
            None => open.holds_something |= holds(line),
        }
    }
    close(text, &mut sections, open, text.len(), explicit);
    sections
}

fn close(text: &str, sections: &mut Vec<Section>, section: Section, end: usize, explicit: bool) {
    if explicit || section.holds_something {
        let bytes = section.bytes.start..end.max(section.bytes.start);
        let line = match sections.last() {
            Some(last) => last.line_of(text, bytes.start),
            None => 1 + line_ends(&text[..bytes.start]),
        };
        sections.push(Section { bytes, line, ..section });
    }
}

impl Section {
    /// The number of the line of a byte not before this section; takes time by the distance only, so that many problems in
    /// many documents stay cheap.
    pub(super) fn line_of(&self, text: &str, byte: usize) -> usize {
        self.line + line_ends(&text[self.bytes.start..byte])
    }
}

/// Whether a line is `---` or `...`, alone or followed by a blank.
fn is_marker(line: &str) -> bool {
    (line.starts_with("---") || line.starts_with("..."))
        && line[3..].chars().next().is_none_or(|next| matches!(next, ' ' | '\t' | '\n' | '\r'))
}

/// Whether a line holds anything but blanks and a comment.
fn holds(line: &str) -> bool {
    let line = line.trim_start_matches([' ', '\t', '\n', '\r']);
    !line.is_empty() && !line.starts_with('#')
}

/// Refuses, by the text alone, what neither parser needs to see: directives, characters that no YAML text may hold, and text
/// after the end of the document.
pub(super) fn refuse(source: &Arc<Source>, section: &Section) -> Option<Problem> {
    let text = &source.text[section.bytes.clone()];
    let at = |bytes: Range<usize>| {
        Place::new(source, section.bytes.start + bytes.start..section.bytes.start + bytes.end)
    };
    if let Some((byte, character)) = text.char_indices().find(|&(_, c)| !may_stand(c)) {
        let message = format!("the character U+{:04X} cannot stand in a YAML text", u32::from(character));
        return Some(Problem::at(at(byte..byte + character.len_utf8()), message).expected(format!(
            "visible characters, or `\"\\u{:04X}\"` in double quotes",
            u32::from(character)
        )));
    }
    if let Some(bytes) = &section.after_end {
        return Some(
            Problem::at(Place::new(source, bytes.clone()), "text follows the `...` that ends a document")
                .expected("`...` alone on its line"),
        );
    }
    let first = text.split_inclusive(['\n', '\r']).find(|line| holds(line))?;
    if first.starts_with('%') {
        let start = text.find(first)?;
        let word = first.split_whitespace().next()?;
        return Some(
            Problem::at(
                at(start..start + first.trim_end().len()),
                format!("`{word}` is a YAML directive, which is not read here"),
            )
            .expected("the document without it, or quotes around a text that begins with `%`"),
        );
    }
    None
}

/// Whether a character may stand in a YAML text as such. The breaks U+0085, U+2028 and U+2029 may not: the versions of YAML
/// disagree on whether they end a line.
fn may_stand(c: char) -> bool {
    match c {
        '\t' | '\n' | '\r' | ' '..='~' => true,
        '\u{0}'..='\u{9f}' | '\u{2028}' | '\u{2029}' | MARK | '\u{fffe}' | '\u{ffff}' => false,
        _ => true,
    }
}

#[cfg(test)]
mod tests {
    use super::split;

    fn parts(text: &str) -> Vec<&str> {
        split(text, 9).into_iter().map(|section| &text[section.bytes]).collect()
    }

    #[test]
    fn sections_know_the_lines_they_begin_with() {
        for end in ["\n", "\r\n", "\r"] {
            let text = "# x|a|...|# y|b|---||c|...|d".replace('|', end);
            let lines: Vec<_> = split(&text, 9).iter().map(|section| section.line).collect();
            assert_eq!(lines, [1, 4, 6, 10], "{end:?}");
        }
    }

    #[test]
    fn documents_split_at_marker_lines_only() {
        assert_eq!(parts("a: 1\n---\nb: 2\n"), ["a: 1\n", "---\nb: 2\n"]);
        assert_eq!(parts("# only a remark\n---\na\n...\n"), ["---\na\n"]);
        assert_eq!(parts("--- [a]\r\n--- # remark\r\nb"), ["--- [a]\r\n", "--- # remark\r\nb"]);
        assert_eq!(parts("a: ---\n----\n --- \n---b\n"), ["a: ---\n----\n --- \n---b\n"]);
        assert_eq!(parts("a\n...\n# remark\n...\nb\n"), ["a\n", "b\n"]);
        assert_eq!(parts("---\n---\n"), ["---\n", "---\n"]);
        assert_eq!(parts("\u{feff}---\na\n"), ["---\na\n"]);
        assert_eq!(parts(""), [""; 0]);
        assert_eq!(split("a\n---\nb\n---\nc\n", 2).len(), 2);
    }
}
