//! What goes wrong between brackets, and after a value on its line.

use super::{MISSING_BLANK, Scene, first_line};
use crate::text::problems::Problem;
use crate::text::yaml::surroundings::{Line, without_comment};

impl Scene<'_> {
    /// What can go wrong between brackets.
    pub(super) fn in_brackets(&mut self) -> Option<Problem> {
        let here = self.text[self.at..].chars().next();
        if self.reason == "misplaced bracket" {
            let bracket = here?;
            return Some(
                self.problem(self.at..self.at + 1, format!("`{bracket}` closes nothing"))
                    .expected("as many opening as closing brackets, or quotes around the text"),
            );
        }
        if matches!(here, Some(']' | '}')) {
            self.brackets.advance(self.text, self.at + 1);
        }
        if let Some((open, close)) = self.brackets.mismatched.filter(|_| self.reason.contains("expected ','"))
        {
            let line = self.section.line_of(self.text, open);
            let bracket = &self.text[open..=open];
            let message =
                format!("`{}` cannot close the `{bracket}` of line {line}", &self.text[close..=close]);
            return Some(self.problem(close..close + 1, message).expected(format!("`{}`", closing(bracket))));
        }
        let open = *self.brackets.open.last()?;
        let opening = Line::at(self.text, open);
        let bracket = &self.text[open..=open];
        let ended = self.text[self.at..].trim().is_empty();
        if ended || self.line.start != opening.start && self.line.indent() <= opening.indent() {
            if self.reason.contains("invalid indentation") {
                let depth = self.brackets.open.len();
                let mut later = self.brackets.clone();
                later.advance(self.text, self.text.len());
                if later.open.len() < depth {
                    return Some(
                        self.problem(self.line.bytes(), "a line inside brackets is not indented")
                            .expected("every further line indented deeper than the key of the brackets"),
                    );
                }
            }
            let bytes = open..open + without_comment(first_line(&self.text[open..])).len();
            return Some(
                self.problem(bytes, format!("the `{bracket}` that opens here is not closed"))
                    .expected(format!("`{}` after the last entry", closing(bracket))),
            );
        }
        let one = self.at..self.at + 1;
        match here {
            Some(',') => Some(
                self.problem(one, "a comma stands where a value is expected")
                    .expected("one comma between entries"),
            ),
            Some(':') if self.reason.contains("may not precede") => {
                let name = self.text[..self.at].rfind([' ', ',', '{', '[', '\n']).map_or(0, |end| end + 1);
                let value = if self.text[self.at + 1..].starts_with('[') { "[…]" } else { "{…}" };
                Some(
                    self.problem(name..self.at + 1, MISSING_BLANK)
                        .expected(format!("`{}: {value}`", &self.text[name..self.at])),
                )
            }
            Some(':') => Some(
                self.problem(one, "a second colon stands in one entry")
                    .expected("a comma between entries, or quotes around a text that holds a colon"),
            ),
            Some('-') => Some(
                self.problem(one, "an item with a dash stands inside brackets")
                    .expected("items separated by commas, or quotes around a text that begins with `-`"),
            ),
            _ => Some(
                self.problem(self.rest_of_value(), "an entry follows another without a comma")
                    .expected("a comma between entries, or quotes around the text"),
            ),
        }
    }

    /// Something after a value on the same line.
    pub(super) fn after_value(&self) -> Option<Problem> {
        if self.reason.starts_with("comment") {
            let bytes = self.at..self.at + first_line(&self.text[self.at..]).trim_end().len();
            let (message, expected) = if self.reason.contains("intercepting") {
                (
                    "a comment ends the text, which goes on in the next line",
                    "quotes around a text that holds `#`; a text of several lines after `|`",
                )
            } else {
                ("no blank stands before the comment", "a blank before `#`")
            };
            return Some(self.problem(bytes, message).expected(expected));
        }
        if self.reason.contains("block sequence entries are not allowed") {
            return Some(self.problem(self.rest_of_line(), "a list begins on the line of its key").expected(
                "each item on a line of its own, items in `[ ]`, or a number without a blank after its sign",
            ));
        }
        let before = self.text[self.line.start..self.at].trim_end();
        let closing = before.chars().last().filter(|last| matches!(last, ']' | '}'))?;
        Some(
            self.problem(self.rest_of_line(), format!("text follows the closing `{closing}`"))
                .expected("quotes around a text that begins with a bracket"),
        )
    }
}

/// The bracket that closes one.
fn closing(bracket: &str) -> &'static str {
    if bracket == "[" { "]" } else { "}" }
}

#[cfg(test)]
mod tests {
    use crate::text::yaml::tests::shows;

    #[test]
    fn brackets_that_do_not_match_are_explained() {
        shows(
            "a: [1, 2\nb: 3\n",
            r#"
s.yaml:1:4  the `[` that opens here is not closed
      a: [1, 2
         ~~~~~
   expected  `]` after the last entry
"#,
        );
        shows(
            "a: {b: 1, c: 2 # d\nd:\n  e: 1\n",
            r#"
s.yaml:1:4  the `{` that opens here is not closed
      a: {b: 1, c: 2 # d
         ~~~~~~~~~~~
   expected  `}` after the last entry
"#,
        );
        shows(
            "a:\n- {b: [1, 2}\n",
            r#"
s.yaml:2:12  `}` cannot close the `[` of line 2
      - {b: [1, 2}
                 ~
   expected  `]`
"#,
        );
        shows(
            "a: {b: 1]\n",
            r#"
s.yaml:1:9  `]` cannot close the `{` of line 1
      a: {b: 1]
              ~
   expected  `}`
"#,
        );
        shows(
            "a: [b: [1, 2], c: 3} # d\ne: f\n",
            r#"
s.yaml:1:20  `}` cannot close the `[` of line 1
      a: [b: [1, 2], c: 3} # d
                         ~
   expected  `]`
"#,
        );
        shows(
            "a: ]\n",
            r#"
s.yaml:1:4  `]` closes nothing
      a: ]
         ~
   expected  as many opening as closing brackets, or quotes around the text
"#,
        );
        shows(
            "a: [1 2]]\n",
            r#"
s.yaml:1:9  `]` closes nothing
      a: [1 2]]
              ~
   expected  as many opening as closing brackets, or quotes around the text
"#,
        );
        shows(
            "a: [1, 2\n",
            r#"
s.yaml:1:4  the `[` that opens here is not closed
      a: [1, 2
         ~~~~~
   expected  `]` after the last entry
"#,
        );
        shows(
            "a: [1, 2\n- x\n",
            r#"
s.yaml:1:4  the `[` that opens here is not closed
      a: [1, 2
         ~~~~~
   expected  `]` after the last entry
"#,
        );
        shows(
            "a: {\n  b: 1\n  c: 2\n}\n",
            r#"
s.yaml:3:4  a second colon stands in one entry
      c: 2
       ~
   expected  a comma between entries, or quotes around a text that holds a colon
"#,
        );
        shows(
            "a: [\n1\n]\n",
            r#"
s.yaml:2:1  a line inside brackets is not indented
      1
      ~
   expected  every further line indented deeper than the key of the brackets
"#,
        );
        shows(
            "a: [- x]\n",
            r#"
s.yaml:1:5  an item with a dash stands inside brackets
      a: [- x]
          ~
   expected  items separated by commas, or quotes around a text that begins with `-`
"#,
        );
        shows(
            "a: [1,, 2]\n",
            r#"
s.yaml:1:7  a comma stands where a value is expected
      a: [1,, 2]
            ~
   expected  one comma between entries
"#,
        );
        shows(
            "a: [{b: 1} {c: 2}]\n",
            r#"
s.yaml:1:12  an entry follows another without a comma
      a: [{b: 1} {c: 2}]
                 ~~~~~
   expected  a comma between entries, or quotes around the text
"#,
        );
        shows(
            "a: [1, 2] nm\n",
            r#"
s.yaml:1:11  text follows the closing `]`
      a: [1, 2] nm
                ~~
   expected  quotes around a text that begins with a bracket
"#,
        );
        shows(
            "[1]\nb: 2\n",
            r#"
s.yaml:2:1  text follows the end of the document
      b: 2
      ~~~~
   expected  one map a document; a line `---` between documents
"#,
        );
    }

    #[test]
    fn a_comment_in_the_wrong_place_is_explained() {
        shows(
            "a: b # c\n  d\n",
            r#"
s.yaml:1:6  a comment ends the text, which goes on in the next line
      a: b # c
           ~~~
   expected  quotes around a text that holds `#`; a text of several lines after `|`
"#,
        );
        shows(
            "a: \"x\"#c\n",
            r##"
s.yaml:1:7  no blank stands before the comment
      a: "x"#c
            ~~
   expected  a blank before `#`
"##,
        );
    }
}
