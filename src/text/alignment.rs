//! From bytes of a scalar's text back to bytes of the file, through YAML's quotes, escapes, folding and indentation.

use std::ops::Range;

/// The bytes of `raw`, a scalar as it stands in the file, that became these bytes of its `text`. None when the two cannot be
/// followed step by step; then only the scalar as a whole can be pointed at.
pub(super) fn raw_range(raw: &str, text: &str, quoted: bool, bytes: &Range<usize>) -> Option<Range<usize>> {
    let mut walk = Walk::new(raw, text, quoted)?;
    if bytes.start < walk.text_at {
        return None;
    }
    let mut found: Option<Range<usize>> = None;
    while walk.text_at < text.len() {
        let (text_from, raw_from) = (walk.text_at, walk.raw_at);
        if !walk.step()? {
            break;
        }
        let meets = text_from < bytes.end.max(bytes.start + 1) && bytes.start < walk.text_at;
        if meets {
            // Steps of the same length are the same characters; others (escapes, line ends) are pointed at as a whole.
            let same = walk.text_at - text_from == walk.raw_at - raw_from;
            let from = if same { raw_from + bytes.start.saturating_sub(text_from) } else { raw_from };
            let start = found.map_or(from, |found| found.start);
            found = Some(start..walk.raw_at);
        }
    }
    let found = found.unwrap_or(walk.raw_at..walk.raw_at);
    Some(if bytes.is_empty() { found.start..found.start } else { found })
}

/// How line ends and backslashes read.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Style {
    Plain,
    Single,
    Double,
    Block,
}

/// Two cursors that move through the file and the text together.
struct Walk<'a> {
    raw: &'a str,
    text: &'a str,
    style: Style,
    raw_at: usize,
    text_at: usize,
}

impl<'a> Walk<'a> {
    fn new(raw: &'a str, text: &'a str, quoted: bool) -> Option<Self> {
        let (style, raw_at, raw) = match raw.chars().next()? {
            _ if !quoted => (Style::Plain, 0, raw),
            '\'' => (Style::Single, 1, raw.strip_suffix('\'')?),
            '"' => (Style::Double, 1, raw.strip_suffix('"')?),
            '|' | '>' => (Style::Block, raw.find(['\n', '\r'])?, raw),
            _ => return None,
        };
        let mut walk = Self { raw, text, style, raw_at, text_at: 0 };
        if style == Style::Block {
            // The first indentation belongs to no character, but blank lines before the first line do.
            walk.raw_at += blanks(&raw[raw_at..]);
            walk.text_at += blanks(text);
        }
        Some(walk)
    }

    /// Moves past one character of the file, or past one run of blanks and line ends; false when the file's part is used up.
    fn step(&mut self) -> Option<bool> {
        let raw = &self.raw[self.raw_at..];
        let text = &self.text[self.text_at..];
        let run = blanks(raw);
        let Some(first) = raw.chars().next() else {
            // The line end after the last line of a block is not part of its place.
            return (self.style == Style::Block && blanks(text) == text.len()).then_some(false);
        };
        let (raw_step, text_step) = if raw[..run].contains(['\n', '\r']) {
            (run, blanks(text))
        } else if self.style == Style::Double && first == '\\' {
            escape(raw)?
        } else if self.style == Style::Single && first == '\'' {
            (2, 1)
        } else {
            let length = first.len_utf8();
            if !text.starts_with(first) {
                return None;
            }
            (length, length)
        };
        self.raw_at += raw_step;
        self.text_at += if text_step == ONE_CHARACTER { text.chars().next()?.len_utf8() } else { text_step };
        Some(true)
    }
}

/// Stands for the length of whatever character an escape gave.
const ONE_CHARACTER: usize = usize::MAX;

/// The length of an escape in the file and of what it gave in the text.
fn escape(raw: &str) -> Option<(usize, usize)> {
    let next = raw[1..].chars().next()?;
    Some(match next {
        '\n' | '\r' => (1 + blanks(&raw[1..]), 0),
        'x' => (4, ONE_CHARACTER),
        'u' => (6, ONE_CHARACTER),
        'U' => (10, ONE_CHARACTER),
        _ => (1 + next.len_utf8(), ONE_CHARACTER),
    })
}

/// How many bytes of blanks and line ends a text begins with.
fn blanks(text: &str) -> usize {
    text.len() - text.trim_start_matches([' ', '\t', '\n', '\r']).len()
}

#[cfg(test)]
mod tests {
    use super::raw_range;

    /// The part of the file that `needle` of the text came from.
    fn came_from<'a>(raw: &'a str, text: &str, quoted: bool, needle: &str) -> Option<&'a str> {
        let start = text.find(needle).unwrap();
        raw_range(raw, text, quoted, &(start..start + needle.len())).map(|range| &raw[range])
    }

    #[test]
    fn plain_text_is_found_where_it_stands() {
        assert_eq!(came_from("210 ± 30 nm", "210 ± 30 nm", false, "30"), Some("30"));
        assert_eq!(came_from("a +\n    b * c", "a + b * c", false, "b *"), Some("b *"));
        assert_eq!(came_from("a +\n    b", "a + b", false, "+ b"), Some("+\n    b"));
        assert_eq!(raw_range("210 nm", "210 nm", false, &(6..6)), Some(6..6));
        assert_eq!(raw_range("210 nm", "210 nm", false, &(4..4)), Some(4..4));
        assert_eq!(raw_range("210 µm", "210 µm", false, &(4..99)), Some(4..7));
    }

    #[test]
    fn quoted_text_is_found_behind_quotes_and_escapes() {
        assert_eq!(came_from("'210 nm'", "210 nm", true, "nm"), Some("nm"));
        assert_eq!(came_from("'Darwin''s x'", "Darwin's x", true, "s x"), Some("s x"));
        assert_eq!(came_from("'Darwin''s x'", "Darwin's x", true, "'"), Some("''"));
        assert_eq!(came_from(r#""2 \u00b5m x""#, "2 µm x", true, "m x"), Some("m x"));
        assert_eq!(came_from(r#""2 \u00b5m x""#, "2 µm x", true, "µm"), Some(r"\u00b5m"));
        assert_eq!(came_from(r#""\x41\U00000042\t\\c""#, "AB\t\\c", true, "c"), Some("c"));
        assert_eq!(came_from("\"one \\\n   two\n   three\"", "one two three", true, "two"), Some("two"));
        assert_eq!(came_from("\"one \\\n   two\n   three\"", "one two three", true, "three"), Some("three"));
    }

    #[test]
    fn text_in_a_block_is_found_on_its_line() {
        let literal = "|2- # remark\r\n\r\n    a = 1\r\n      b = 2\r\n    c";
        assert_eq!(came_from(literal, "\na = 1\n  b = 2\nc", true, "b = 2"), Some("b = 2"));
        assert_eq!(came_from(literal, "\na = 1\n  b = 2\nc", true, "c"), Some("c"));
        let folded = ">\n  a +\n  b\n\n  c";
        assert_eq!(came_from(folded, "a + b\nc\n", true, "b"), Some("b"));
        assert_eq!(came_from(folded, "a + b\nc\n", true, "c"), Some("c"));
        assert_eq!(raw_range(folded, "a + b\nc\n", true, &(8..8)), Some(folded.len()..folded.len()));
    }

    #[test]
    fn texts_that_do_not_belong_together_are_not_followed() {
        assert_eq!(raw_range("210 nm", "211 nm", false, &(0..3)), None);
        assert_eq!(raw_range("", "x", false, &(0..1)), None);
        assert_eq!(raw_range("\"abc", "abc", true, &(0..1)), None);
        assert_eq!(raw_range("abc", "abc", true, &(0..1)), None);
    }
}
