//! What stands around the place where a document is broken: its lines, open brackets and quotes. Looked at only to explain
//! an error, and never trusted for more.

use std::ops::Range;

use super::guard::MOST_NODES;

/// How many signs may stand between brackets: quotes, a colon and a comma for every node.
pub(super) const MOST_SIGNS: usize = 4 * MOST_NODES;

/// A line of a document, in bytes of the source.
#[derive(Clone, Copy, Debug)]
pub(super) struct Line<'a> {
    /// Its first byte.
    pub(super) start: usize,
    /// The line without its line end.
    pub(super) text: &'a str,
}

impl<'a> Line<'a> {
    /// The line that holds a byte.
    pub(super) fn at(text: &'a str, byte: usize) -> Self {
        let start = text[..byte].rfind(['\n', '\r']).map_or(0, |end| end + 1);
        let length = text[start..].find(['\n', '\r']).unwrap_or(text.len() - start);
        Self { start, text: &text[start..start + length] }
    }
    /// The nearest line before this one, and not before byte `first`, that holds more than blanks and a comment.
    pub(super) fn before(self, text: &'a str, first: usize) -> Option<Self> {
        let mut line = self;
        while line.start > first {
            line = Self::at(text, line.start - 1);
            if line.start >= first && !line.content().is_empty() {
                return Some(line);
            }
        }
        None
    }
    /// How many blanks and tabs it begins with.
    pub(super) fn indent(self) -> usize {
        self.text.len() - self.text.trim_start_matches([' ', '\t']).len()
    }
    /// What it holds, without indentation and comment.
    pub(super) fn content(self) -> &'a str {
        let content = without_comment(self.text).trim();
        if content.starts_with('#') { "" } else { content }
    }
    /// The content after the dashes of list items.
    pub(super) fn entry(self) -> &'a str {
        let mut entry = self.content();
        while let Some(rest) = entry.strip_prefix("- ") {
            entry = rest.trim_start();
        }
        entry
    }
    /// The key that begins the entry of this line, and the byte of its colon.
    pub(super) fn key(self) -> Option<(&'a str, usize)> {
        let entry = self.entry();
        let start = self.start + self.text.find(entry)?;
        let length = match entry.chars().next()? {
            '"' | '\'' => quoted_length(entry)?,
            _ => entry.find(": ").or_else(|| entry.strip_suffix(':').map(str::len))?,
        };
        let blanks = entry[length..].len() - entry[length..].trim_start().len();
        let colon = length + blanks;
        entry[colon..].starts_with(':').then(|| (entry[..length].trim_end(), start + colon))
    }
    /// The bytes of its content.
    pub(super) fn bytes(self) -> Range<usize> {
        let start = self.start + self.indent();
        start..start + self.content().len()
    }
    /// The sign of a block of text, `|` or `>`, that this line opens.
    pub(super) fn block_sign(self) -> Option<char> {
        let header = self.content().trim_end_matches(['+', '-', '1', '2', '3', '4', '5', '6', '7', '8', '9']);
        let before = header.strip_suffix(['|', '>'])?;
        (before.is_empty() || before.ends_with(' ')).then(|| header.chars().last()).flatten()
    }
}

/// A text without the comment at its end.
pub(super) fn without_comment(text: &str) -> &str {
    let end = [" #", "\t#"].iter().filter_map(|sign| text.find(sign)).min();
    text[..end.unwrap_or(text.len())].trim_end()
}

/// The length of the quoted text at the start of `text`, with its quotes; none when it is not closed.
pub(super) fn quoted_length(text: &str) -> Option<usize> {
    let bytes = text.as_bytes();
    let quote = *bytes.first()?;
    let mut at = 1;
    loop {
        match *bytes.get(at)? {
            b'\\' if quote == b'"' => at += 2,
            byte if byte != quote => at += 1,
            _ if quote == b'\'' && bytes.get(at + 1) == Some(&quote) => at += 2,
            _ => return Some(at + 1),
        }
    }
}

/// Where the `|` or `>` of a block of text stands in what precedes its first line; the whole length when there is none.
pub(super) fn block_header(before: &str) -> usize {
    let mut in_comment = false;
    let mut previous = '\n';
    for (byte, character) in before.char_indices() {
        match character {
            '\n' | '\r' => in_comment = false,
            '#' if previous.is_whitespace() => in_comment = true,
            '|' | '>' if !in_comment => return byte,
            _ => {}
        }
        previous = character;
    }
    before.len()
}

/// Brackets and quotes, followed from a known state on.
#[derive(Clone, Debug)]
pub(super) struct Brackets {
    /// The bytes of the brackets that are open, outermost first.
    pub(super) open: Vec<usize>,
    /// The last quoted text that was closed.
    pub(super) quoted: Option<Range<usize>>,
    /// The first bracket that was closed by one of the other kind, and that one.
    pub(super) mismatched: Option<(usize, usize)>,
    /// How many signs of YAML stood between brackets, outside quotes.
    pub(super) signs: usize,
    at: usize,
}

impl Brackets {
    /// The state at byte `at`, between two nodes.
    pub(super) fn new(open: Vec<usize>, at: usize) -> Self {
        Self { open, quoted: None, mismatched: None, signs: 0, at }
    }

    /// Moves on to byte `to`, or to where a quote opens that is not closed before it, or to one sign too many.
    pub(super) fn advance(&mut self, text: &str, to: usize) {
        let mut in_text = false;
        let mut in_property = false;
        let mut previous = '\n';
        while self.at < to
            && self.signs <= MOST_SIGNS
            && let Some(character) = text[self.at..to].chars().next()
        {
            let next = text[self.at + character.len_utf8()..].chars().next().unwrap_or('\n');
            let mut length = character.len_utf8();
            if !self.open.is_empty() && ",:[]{}\"'?*&!-".contains(character) {
                self.signs += 1;
            }
            match character {
                '\n' | '\r' => in_text = false,
                '#' if previous.is_whitespace() => {
                    length = text[self.at..to].find(['\n', '\r']).unwrap_or(to - self.at);
                }
                ':' if next.is_whitespace() => in_text = false,
                ',' if !self.open.is_empty() => in_text = false,
                ']' | '}' if !self.open.is_empty() => {
                    if let Some(open) = self.open.pop()
                        && text[open..].starts_with('[') != (character == ']')
                    {
                        self.mismatched.get_or_insert((open, self.at));
                    }
                    in_text = false;
                }
                '[' | '{' if !in_text || !self.open.is_empty() => {
                    self.open.push(self.at);
                    in_text = false;
                }
                '"' | '\'' if !in_text => match quoted_length(&text[self.at..to]) {
                    Some(quoted) => {
                        self.quoted = Some(self.at..self.at + quoted);
                        length = quoted;
                    }
                    None => return,
                },
                '-' | '?' if next.is_whitespace() => {}
                // An anchor or a tag stands before what it belongs to; after an alias nothing can stand.
                '&' | '!' | '*' if !in_text => in_property = true,
                _ if character.is_whitespace() => in_property = false,
                _ => in_text |= !in_property,
            }
            self.at += length;
            previous = character;
        }
    }
}
