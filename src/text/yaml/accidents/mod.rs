//! What goes wrong when people write YAML by hand, said in their terms, with the way to write it.
//!
//! The parser says where it stopped and, in its own words, why. The reason is looked for in what stands around that place;
//! what cannot be explained is still pointed at.

mod brackets;
mod lines;
mod quotes;

use std::ops::Range;
use std::sync::Arc;

use super::sections::Section;
use super::surroundings::{Brackets, Line, without_comment};
use crate::text::problems::Problem;
use crate::text::rendering::shortened;
use crate::text::source::{Place, Source};

/// How many characters of a text an advice repeats.
const REPEATED: usize = 60;

/// The message for `diameter:210 nm`.
pub(super) const MISSING_BLANK: &str = "a blank is missing after the colon";

/// Where a document is broken.
pub(super) struct Broken<'a> {
    /// The file.
    pub(super) source: &'a Arc<Source>,
    /// The document.
    pub(super) section: &'a Section,
    /// The bytes of the last scalar that was read, if any.
    pub(super) last: Option<Range<usize>>,
    /// Brackets known to be open after the last node, and its end.
    pub(super) brackets: Brackets,
    /// The byte where the parser stopped.
    pub(super) at: usize,
    /// The parser's own words.
    pub(super) reason: &'a str,
}

/// A text that begins with a sign that means something else in YAML: an alias, an anchor, a tag, a block.
pub(super) fn sign(source: &Arc<Source>, start: usize, in_brackets: bool) -> Option<Problem> {
    let sign = source.text[start..].chars().next()?;
    let named = if sign == '`' { "a backtick".to_owned() } else { format!("`{sign}`") };
    let (meaning, other) = match sign {
        '*' => (", which is an alias in YAML", ", or the value itself in place of an alias"),
        '&' => (", which is an anchor in YAML", ", or the value without an anchor"),
        '!' => (", which is a tag in YAML", ", or the value without a tag"),
        '|' | '>' => (", which opens a block of lines in YAML", ", or the text on the lines below, indented"),
        '?' if source.text[start + 1..].starts_with(char::is_whitespace) => {
            (" and a blank, which open a key in YAML", "")
        }
        '%' | '@' | '`' => (" in YAML", ""),
        _ => return None,
    };
    let text = rest_of_value(source, start, in_brackets);
    let place = Place::new(source, start..start + text.len());
    Some(
        Problem::at(place, format!("a text cannot begin with {named}{meaning}"))
            .expected(format!("quotes: `{}`{other}", in_quotes(text))),
    )
}

/// Explains what a parser refused.
pub(super) fn explain(broken: Broken<'_>) -> Problem {
    let mut scene = Scene::new(broken);
    scene
        .tab()
        .or_else(|| scene.quotes())
        .or_else(|| scene.sign())
        .or_else(|| scene.in_brackets())
        .or_else(|| scene.after_value())
        .or_else(|| scene.colon())
        .or_else(|| scene.lines())
        .unwrap_or_else(|| scene.problem(scene.at..scene.at + 1, "this cannot be read as YAML"))
}

/// What one parser reads and the other does not, or reads as something else; `byte` counts from the start of the document.
pub(super) fn unreadable(source: &Arc<Source>, section: &Range<usize>, byte: Option<usize>) -> Problem {
    let last = section.start + source.text[section.clone()].trim_end().len();
    let at = source.span(section.start + byte.unwrap_or(0)..section.end).start.min(last);
    let line = Line::at(&source.text, at);
    let in_indent = line.text[..line.indent()].find('\t').map(|tab| line.start + tab);
    let here = source.text[at..].starts_with('\t').then_some(at);
    let before = source.text[..at].ends_with('\t').then(|| at - 1);
    let tab = in_indent.or(here).or(before);
    if let Some(tab) = tab {
        return tab_problem(source, tab);
    }
    let one = Place::new(source, at..at + 1);
    if source.text[at..].starts_with(':') {
        return Problem::at(one, "a colon inside brackets has no blank after it")
            .expected("`key: value` with a blank, or quotes around a text that holds a colon");
    }
    sign(source, at, true).unwrap_or_else(|| {
        Problem::at(one, "versions of YAML disagree on how this is to be read")
            .expected("quotes around a text that holds signs of YAML")
    })
}

struct Scene<'a> {
    source: &'a Arc<Source>,
    text: &'a str,
    section: &'a Section,
    last: Option<Range<usize>>,
    brackets: Brackets,
    at: usize,
    line: Line<'a>,
    reason: &'a str,
}

impl<'a> Scene<'a> {
    fn new(broken: Broken<'a>) -> Self {
        let Broken { source, section, last, mut brackets, at, reason } = broken;
        let text = &source.text[..section.bytes.end];
        let at = source.span(at..at).start.min(section.bytes.end);
        brackets.advance(text, at);
        Self { source, text, section, last, brackets, at, line: Line::at(text, at), reason }
    }

    fn problem(&self, bytes: Range<usize>, message: impl Into<String>) -> Problem {
        Problem::at(Place::new(self.source, bytes), message)
    }

    /// A sign of YAML where a text begins; the parser stops behind that of a directive.
    fn sign(&self) -> Option<Problem> {
        let directive = self.reason.contains("directive") && self.line.text.starts_with('%');
        let start = if directive { self.line.start } else { self.at };
        sign(self.source, start, !self.brackets.open.is_empty())
    }

    /// A tab where only blanks may stand.
    fn tab(&self) -> Option<Problem> {
        let in_indent = |line: Line<'_>| Some(line.start + line.text[..line.indent()].find('\t')?);
        if self.reason.contains("tab") {
            let mut line = self.line;
            while line.start < self.section.bytes.end {
                if let Some(tab) = in_indent(line) {
                    return Some(tab_problem(self.source, tab));
                }
                let next = line.start + line.text.len() + 1;
                if next >= self.section.bytes.end {
                    break;
                }
                line = Line::at(self.text, next);
            }
        }
        let tab = match in_indent(self.line) {
            Some(tab) if self.brackets.open.is_empty() => tab,
            _ if self.reason.contains("tab") || self.reason.contains("valid YAML whitespace") => {
                self.line.start
                    + self.text[self.line.start..].get(..=self.at - self.line.start)?.rfind('\t')?
            }
            _ => return None,
        };
        Some(tab_problem(self.source, tab))
    }

    fn rest_of_line(&self) -> Range<usize> {
        self.at..self.at + without_comment(first_line(&self.text[self.at..])).len()
    }

    fn rest_of_value(&self) -> Range<usize> {
        self.at..self.at + rest_of_value(self.source, self.at, true).len()
    }
}

fn tab_problem(source: &Arc<Source>, tab: usize) -> Problem {
    let tabs = source.text[tab..].len() - source.text[tab..].trim_start_matches('\t').len();
    Problem::at(Place::new(source, tab..tab + tabs), "a tab stands where YAML takes only blanks")
        .expected("blanks")
}

fn first_line(text: &str) -> &str {
    &text[..text.find(['\n', '\r']).unwrap_or(text.len())]
}

/// From a byte to the end of the value, as far as the line goes.
fn rest_of_value(source: &Source, start: usize, in_brackets: bool) -> &str {
    let rest = without_comment(first_line(&source.text[start..]));
    let end = if in_brackets { rest.find([',', ']', '}']) } else { None };
    rest[..end.unwrap_or(rest.len())].trim_end()
}

/// A text in the quotes that need the fewest changes inside.
fn in_quotes(text: &str) -> String {
    let text = shortened(text, REPEATED);
    if text.contains(['"', '\\']) { format!("'{}'", text.replace('\'', "''")) } else { format!("\"{text}\"") }
}

#[cfg(test)]
mod tests {
    use crate::text::yaml::tests::shows;

    #[test]
    fn a_tab_where_blanks_belong_is_explained() {
        shows(
            "a:\n  b: 1\n\tc: 2\n",
            r#"
s.yaml:3:1  a tab stands where YAML takes only blanks
      ␉c: 2
      ~
   expected  blanks
"#,
        );
        shows(
            "a:\n\t\tb: 1\n",
            r#"
s.yaml:2:1  a tab stands where YAML takes only blanks
      ␉␉b: 1
      ~~
   expected  blanks
"#,
        );
        shows(
            "\ta: 1\n",
            r#"
s.yaml:1:1  a tab stands where YAML takes only blanks
      ␉a: 1
      ~
   expected  blanks
"#,
        );
        shows(
            "a: x\n\ty\n",
            r#"
s.yaml:2:1  a tab stands where YAML takes only blanks
      ␉y
      ~
   expected  blanks
"#,
        );
        shows(
            "a: |\n\tx\n",
            r#"
s.yaml:2:1  a tab stands where YAML takes only blanks
      ␉x
      ~
   expected  blanks
"#,
        );
        shows(
            "a: |\n  x\n\ty\n",
            r#"
s.yaml:3:1  a tab stands where YAML takes only blanks
      ␉y
      ~
   expected  blanks
"#,
        );
        shows(
            "a:\tb\n",
            r#"
s.yaml:1:3  a tab stands where YAML takes only blanks
      a:␉b
        ~
   expected  blanks
"#,
        );
    }
}

std::thread_local! { pub(super) static LAST: std::cell::RefCell<String> = const { std::cell::RefCell::new(String::new()) }; }
