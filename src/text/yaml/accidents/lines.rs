//! Colons in the wrong place, and lines that do not fit together.

use super::{MISSING_BLANK, Scene, first_line, in_quotes};
use crate::text::fields::with_blank;
use crate::text::problems::Problem;
use crate::text::yaml::surroundings::{Line, without_comment};

impl<'a> Scene<'a> {
    /// A colon that is no colon of a key.
    pub(super) fn colon(&self) -> Option<Problem> {
        if !self.reason.contains("mapping values are not allowed") {
            return None;
        }
        let one = self.at..self.at + 1;
        if self.line.text.starts_with("---") {
            return Some(
                self.problem(one, "a map begins on the line of `---`")
                    .expected("the first key on the next line"),
            );
        }
        match self.line.key() {
            Some((key, colon)) if colon < self.at => {
                let value = without_comment(first_line(&self.text[colon + 1..])).trim();
                let advice = format!("quotes around the text: `{key}: {}`", in_quotes(value));
                Some(self.problem(one, "a colon with a blank after it splits the text").expected(advice))
            }
            _ => {
                let above = self.line.before(self.text, self.section.bytes.start)?;
                self.missing_blank(above).or_else(|| {
                    Some(if above.key().is_some() || self.line.indent() > above.indent() {
                        self.problem(
                            self.line.bytes(),
                            "this entry is indented under one that has a value already",
                        )
                        .expected("the indentation of the entries it stands with")
                    } else {
                        self.no_colon(above)
                    })
                })
            }
        }
    }

    /// Lines that do not fit together.
    pub(super) fn lines(&self) -> Option<Problem> {
        // A key without its colon is noticed only when the next line begins.
        let late = self.reason.starts_with("simple key");
        let line = if late { self.line.before(self.text, self.section.bytes.start)? } else { self.line };
        let above = line.before(self.text, self.section.bytes.start);
        if let Some(problem) =
            self.missing_blank(line).or_else(|| above.and_then(|above| self.missing_blank(above)))
        {
            return Some(problem);
        }
        let bytes = line.bytes();
        if late {
            return Some(match above.and_then(Line::block_sign) {
                Some(sign) => self
                    .problem(bytes, format!("the text after `{sign}` is not indented"))
                    .expected("every line of the text indented deeper than its key"),
                None => self.no_colon(line),
            });
        }
        if self.reason.contains("wrongly indented line in block scalar") {
            return Some(
                self.problem(bytes, "this line is indented less than the blank line above it")
                    .expected("blank lines without blanks, or a text indented at least as deep"),
            );
        }
        if let Some(last) = &self.last
            && self.text[last.start..].starts_with(['|', '>'])
            && line.indent() > Line::at(self.text, last.start).indent()
        {
            return Some(
                self.problem(bytes, "this line is indented less than the first line of its text")
                    .expected("every line of the text indented at least as deep as the first"),
            );
        }
        let is_item = line.content().starts_with("- ") || line.content() == "-";
        if self.reason.contains("did not find expected key") && is_item {
            return Some(
                self.problem(bytes, "a list item stands among the keys of a map")
                    .expected("a key above it, and the indentation of the other items"),
            );
        }
        let deeper = above.is_some_and(|above| line.indent() > above.indent());
        if self.reason.contains("expected '-' indicator") && line.key().is_some() && !deeper {
            return Some(
                self.problem(bytes, "a key stands among the items of a list")
                    .expected("`- ` before it, or the indentation of the entry it belongs to"),
            );
        }
        if self.reason.contains("<document start>") {
            let first = self.first_line()?;
            if first.indent() <= line.indent() {
                return Some(
                    self.problem(bytes, "text follows the end of the document")
                        .expected("one map a document; a line `---` between documents"),
                );
            }
        }
        (self.reason.contains("did not find expected") || self.reason.contains("invalid indentation")).then(
            || {
                self.problem(bytes, "the indentation of this line fits none of the lines above")
                    .expected("the indentation of the entries it stands with")
            },
        )
    }

    /// `diameter:210 nm`.
    fn missing_blank(&self, line: Line<'_>) -> Option<Problem> {
        let entry = line.entry();
        let start = line.start + line.text.find(entry)?;
        let corrected = with_blank(entry)?;
        Some(self.problem(start..start + entry.len(), MISSING_BLANK).expected(format!("`{corrected}`")))
    }

    fn no_colon(&self, line: Line<'_>) -> Problem {
        self.problem(line.bytes(), "this line holds no key with a colon")
            .expected("`key: value`; a text that goes on is indented deeper than its key")
    }

    /// The first line of the document that holds something.
    fn first_line(&self) -> Option<Line<'a>> {
        let mut first = None;
        let mut line = self.line;
        while let Some(above) = line.before(self.text, self.section.bytes.start) {
            first = Some(above);
            line = above;
        }
        first
    }
}

#[cfg(test)]
mod tests {
    use crate::text::yaml::tests::shows;

    #[test]
    fn a_colon_in_unquoted_text_is_explained() {
        shows(
            "notes: Sample A: from core\nb: 1\n",
            r#"
s.yaml:1:16  a colon with a blank after it splits the text
      notes: Sample A: from core
                     ~
   expected  quotes around the text: `notes: "Sample A: from core"`
"#,
        );
        shows(
            "- b: c: d\n",
            r#"
s.yaml:1:7  a colon with a blank after it splits the text
      - b: c: d
            ~
   expected  quotes around the text: `b: "c: d"`
"#,
        );
        shows(
            "formula: choose(x > 1, a: b)  # µ\n",
            r#"
s.yaml:1:25  a colon with a blank after it splits the text
      formula: choose(x > 1, a: b)  # µ
                              ~
   expected  quotes around the text: `formula: "choose(x > 1, a: b)"`
"#,
        );
        shows(
            "a: 'x' : y\n",
            r#"
s.yaml:1:8  a colon with a blank after it splits the text
      a: 'x' : y
             ~
   expected  quotes around the text: `a: "'x' : y"`
"#,
        );
        shows(
            "a: \"b\": c\n",
            r#"
s.yaml:1:7  a colon with a blank after it splits the text
      a: "b": c
            ~
   expected  quotes around the text: `a: '"b": c'`
"#,
        );
        shows(
            "a: {b: c: d}\n",
            r#"
s.yaml:1:9  a second colon stands in one entry
      a: {b: c: d}
              ~
   expected  a comma between entries, or quotes around a text that holds a colon
"#,
        );
        shows(
            "a: {b: 1 c: 2}\n",
            r#"
s.yaml:1:11  a second colon stands in one entry
      a: {b: 1 c: 2}
                ~
   expected  a comma between entries, or quotes around a text that holds a colon
"#,
        );
        shows(
            "--- a: 1\n",
            r#"
s.yaml:1:6  a map begins on the line of `---`
      --- a: 1
           ~
   expected  the first key on the next line
"#,
        );
    }

    #[test]
    fn indentation_that_does_not_fit_is_explained() {
        shows(
            "a: 1\n  b: 2\n",
            r#"
s.yaml:2:3  this entry is indented under one that has a value already
      b: 2
      ~~~~
   expected  the indentation of the entries it stands with
"#,
        );
        shows(
            "a:\n  b: 1\n c: 2\n",
            r#"
s.yaml:3:2  the indentation of this line fits none of the lines above
      c: 2
      ~~~~
   expected  the indentation of the entries it stands with
"#,
        );
        shows(
            "- x\n  y: 2\n",
            r#"
s.yaml:2:3  this entry is indented under one that has a value already
      y: 2
      ~~~~
   expected  the indentation of the entries it stands with
"#,
        );
        shows(
            "  a: 1\nb: 2\n",
            r#"
s.yaml:2:1  the indentation of this line fits none of the lines above
      b: 2
      ~~~~
   expected  the indentation of the entries it stands with
"#,
        );
        shows(
            "- a: 1\n b: 2\n",
            r#"
s.yaml:2:2  the indentation of this line fits none of the lines above
      b: 2
      ~~~~
   expected  the indentation of the entries it stands with
"#,
        );
        shows(
            "- b\na: 1\n",
            r#"
s.yaml:2:1  a key stands among the items of a list
      a: 1
      ~~~~
   expected  `- ` before it, or the indentation of the entry it belongs to
"#,
        );
        shows(
            "a: 1\n- b\n",
            r#"
s.yaml:2:1  a list item stands among the keys of a map
      - b
      ~~~
   expected  a key above it, and the indentation of the other items
"#,
        );
        shows(
            "a:\n- x\n - y\n- z\n",
            r#"
s.yaml:3:2  this item is indented deeper than the one above, and so a part of its text
      - y
      ~~~
   expected  the indentation of the other items
"#,
        );
        shows(
            "a: - 5\n",
            r#"
s.yaml:1:4  a list begins on the line of its key
      a: - 5
         ~~~
   expected  each item on a line of its own, items in `[ ]`, or a number without a blank after its
             sign
"#,
        );
    }

    #[test]
    fn a_line_without_a_colon_is_explained() {
        shows(
            "a: 1\nfoo\nb: 2\n",
            r#"
s.yaml:2:1  this line holds no key with a colon
      foo
      ~~~
   expected  `key: value`; a text that goes on is indented deeper than its key
"#,
        );
        shows(
            "foo bar\nb: 2\n",
            r#"
s.yaml:1:1  this line holds no key with a colon
      foo bar
      ~~~~~~~
   expected  `key: value`; a text that goes on is indented deeper than its key
"#,
        );
        shows(
            "a: 1\r\nfoo\r\n",
            r#"
s.yaml:2:1  this line holds no key with a colon
      foo
      ~~~
   expected  `key: value`; a text that goes on is indented deeper than its key
"#,
        );
    }

    #[test]
    fn a_block_of_text_out_of_line_is_explained() {
        shows(
            "a: |\ntext\nb: 1\n",
            r#"
s.yaml:2:1  the text after `|` is not indented
      text
      ~~~~
   expected  every line of the text indented deeper than its key
"#,
        );
        shows(
            "a: |\n    \n  text\n",
            r#"
s.yaml:3:3  this line is indented less than the blank line above it
      text
      ~~~~
   expected  blank lines without blanks, or a text indented at least as deep
"#,
        );
        shows(
            "a: |\n    deep\n  shallow\n",
            r#"
s.yaml:3:3  this line is indented less than the first line of its text
      shallow
      ~~~~~~~
   expected  every line of the text indented at least as deep as the first
"#,
        );
    }
}
