//! Quotes that do not match, and backslashes inside them.

use super::{MISSING_BLANK, REPEATED, Scene, first_line};
use crate::text::problems::Problem;
use crate::text::rendering::shortened;
use crate::text::yaml::surroundings::{Line, quoted_length, without_comment};

impl Scene<'_> {
    /// Quotes that do not close, close too early, or hold a backslash that means nothing.
    pub(super) fn quotes(&self) -> Option<Problem> {
        if self.reason.contains("parsing a quoted scalar") {
            return self.escape(self.opening()?);
        }
        if self.reason.contains("quoted scalar, found") || self.reason.contains("in quoted scalar") {
            let opening = self.opening()?;
            let rest = &self.text[opening..];
            let after = quoted_length(rest).map(|length| without_comment(first_line(&rest[length..])).trim());
            return Some(
                if after.is_some_and(|after| after.is_empty() || after.starts_with([',', ']', '}'])) {
                    self.problem(
                        opening..opening + first_line(rest).len(),
                        "a text in quotes goes on in a line that is not indented",
                    )
                    .expected("every further line of the text indented deeper than its key")
                } else {
                    self.unclosed_quote(opening)
                },
            );
        }
        let before = self.text[..self.at].chars().last();
        let after = self.text[self.at..].strip_prefix(':').and_then(|rest| rest.chars().next());
        if matches!(before, Some('"' | '\'')) && after.is_some_and(|after| !after.is_whitespace()) {
            let quoted = self.brackets.quoted.clone().or_else(|| self.last.clone())?;
            let key = &self.text[quoted.clone()];
            return Some(
                self.problem(quoted.start..self.at + 1, MISSING_BLANK)
                    .expected(format!("`{}: …`", shortened(key, REPEATED))),
            );
        }
        if !self.reason.contains("trailing content after double-quoted") {
            return None;
        }
        let quoted = self.brackets.quoted.clone()?;
        if Line::at(self.text, quoted.start).start != self.line.start {
            return Some(self.unclosed_quote(quoted.start));
        }
        let expected = if self.text[quoted.start..].starts_with('"') {
            "quotes around the whole text; inside double quotes a quote is written `\\\"`"
        } else {
            "quotes around the whole text; inside single quotes an apostrophe is written `''`"
        };
        Some(self.problem(self.rest_of_line(), "text follows a closing quote").expected(expected))
    }

    /// The quote that the parser stopped at. It counts a character too many behind some lines, so the nearest one before
    /// stands for it where there is none.
    fn opening(&self) -> Option<usize> {
        let is_quote = |c| matches!(c, '"' | '\'');
        if self.text[self.at..].starts_with(is_quote) {
            return Some(self.at);
        }
        self.text[..self.at].rfind(is_quote)
    }

    fn unclosed_quote(&self, quote: usize) -> Problem {
        let length = without_comment(first_line(&self.text[quote..])).len();
        let sign = &self.text[quote..=quote];
        let other =
            if sign == "'" { "; a text that only begins with `'` stands in double quotes" } else { "" };
        self.problem(quote..quote + length, "the quote that opens here is not closed")
            .expected(format!("`{sign}` at the end of the text{other}"))
    }

    /// The first backslash in double quotes that YAML does not know.
    fn escape(&self, opening: usize) -> Option<Problem> {
        let mut at = opening + 1;
        loop {
            at += self.text[at..].find('\\')?;
            let rest = &self.text[at + 1..];
            let Some(next) = rest.chars().next() else { return Some(self.unclosed_quote(opening)) };
            let digits = match next {
                'x' => 2,
                'u' => 4,
                'U' => 8,
                _ => 0,
            };
            let number = rest.get(1..=digits).map_or(Err(()), |d| u32::from_str_radix(d, 16).map_err(|_| ()));
            let known = if digits > 0 {
                number.is_ok_and(|number| char::from_u32(number).is_some())
            } else {
                "0abt\tnvfre \"/\\N_LP\r\n".contains(next)
            };
            if !known {
                let bytes = at..at + 1 + next.len_utf8();
                let message = format!("`\\{next}` is no character in double quotes");
                return Some(
                    self.problem(bytes, message).expected("`\\\\` for a backslash, or single quotes"),
                );
            }
            at += 1 + next.len_utf8();
        }
    }
}

#[cfg(test)]
mod tests {
    use crate::text::yaml::tests::shows;

    #[test]
    fn a_quote_is_found_where_the_parser_counts_a_character_too_many() {
        shows(
            "[\n%Å\r\"",
            r#"
s.yaml:3:1  the quote that opens here is not closed
      "
      ~
   expected  `"` at the end of the text
"#,
        );
    }

    #[test]
    fn quotes_that_do_not_match_are_explained() {
        shows(
            "a: \"open # c\nb: 1\n",
            r#"
s.yaml:1:4  the quote that opens here is not closed
      a: "open # c
         ~~~~~
   expected  `"` at the end of the text
"#,
        );
        shows(
            "a: \"open\nb: \"c\"\n",
            r#"
s.yaml:1:4  the quote that opens here is not closed
      a: "open
         ~~~~~
   expected  `"` at the end of the text
"#,
        );
        shows(
            "o:\n  a: 't Hooft\n  b: 1\n",
            r#"
s.yaml:2:6  the quote that opens here is not closed
      a: 't Hooft
         ~~~~~~~~
   expected  `'` at the end of the text; a text that only begins with `'` stands in double quotes
"#,
        );
        shows(
            "\"width\":3\nb: 1\n",
            r#"
s.yaml:1:1  a blank is missing after the colon
      "width":3
      ~~~~~~~~
   expected  `"width": …`
"#,
        );
        shows(
            "a: 'Darwin's finch'\nb: 1\n",
            r#"
s.yaml:1:12  text follows a closing quote
      a: 'Darwin's finch'
                 ~~~~~~~~
   expected  quotes around the whole text; inside single quotes an apostrophe is written `''`
"#,
        );
        shows(
            "a: \"x\" y # c\n",
            r#"
s.yaml:1:8  text follows a closing quote
      a: "x" y # c
             ~
   expected  quotes around the whole text; inside double quotes a quote is written `\"`
"#,
        );
        shows(
            "a: \"open\n---\n",
            r#"
s.yaml:1:4  the quote that opens here is not closed
      a: "open
         ~~~~~
   expected  `"` at the end of the text
"#,
        );
        shows(
            "a: \"x\ny\"\n",
            r#"
s.yaml:1:4  a text in quotes goes on in a line that is not indented
      a: "x
         ~~
   expected  every further line of the text indented deeper than its key
"#,
        );
        shows(
            "a: [\"open, 1]\nb: \"c\"\n",
            r#"
s.yaml:1:5  the quote that opens here is not closed
      a: ["open, 1]
          ~~~~~~~~~
   expected  `"` at the end of the text
"#,
        );
    }

    #[test]
    fn a_backslash_in_double_quotes_is_explained() {
        shows(
            "a: \"\\n \\mu\"\n",
            r#"
s.yaml:1:8  `\m` is no character in double quotes
      a: "\n \mu"
             ~~
   expected  `\\` for a backslash, or single quotes
"#,
        );
        shows(
            "a: \"\\x41 \\x4\"\n",
            r#"
s.yaml:1:10  `\x` is no character in double quotes
      a: "\x41 \x4"
               ~~
   expected  `\\` for a backslash, or single quotes
"#,
        );
        shows(
            "a: \"x\\",
            r#"
s.yaml:1:4  the quote that opens here is not closed
      a: "x\
         ~~~
   expected  `"` at the end of the text
"#,
        );
        shows(
            "a: \"\\ud800\"\n",
            r#"
s.yaml:1:5  `\u` is no character in double quotes
      a: "\ud800"
          ~~
   expected  `\\` for a backslash, or single quotes
"#,
        );
    }
}
