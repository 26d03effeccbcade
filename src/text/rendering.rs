//! Problems as a person reads them: where and what, the line with the place underlined, what was expected, the nearest name.
//!
//! ```text
//! spheroid.yaml:7:3  `diametre` is not known here
//!       diametre: 210 ± 30 nm
//!       ~~~~~~~~
//!    expected  one of diameter, width, length
//!    nearest   diameter
//! ```

use std::borrow::Cow;
use std::fmt;
use std::sync::Arc;

use unicode_width::{UnicodeWidthChar, UnicodeWidthStr};

use super::problems::{Problem, Problems};
use super::source::Place;

/// Columns when the width of the terminal is not known.
const WIDTH: usize = 100;
/// Columns before the line of the file.
const INDENT: usize = 6;
/// The narrowest part of a line that is shown.
const LEAST_ROOM: usize = 20;
/// How many problems are shown.
const MOST_SHOWN: usize = 100;
/// How many characters of a message are shown, and of what was expected.
const LONGEST_MESSAGE: usize = 400;
const LONGEST_ADVICE: usize = 800;

impl Problems {
    /// All problems for a person, sorted by file and position, each once, at most 100 of them, within `width` columns
    /// where the text allows it. Ends with a line end; empty when there are none.
    #[must_use]
    pub fn shown(&self, width: usize) -> String {
        let mut list: Vec<&Problem> = self.iter().collect();
        list.sort_by_key(|problem| {
            let place = problem.place.as_ref();
            place.map(|place| (place.source.name.as_str(), place.span.start, place.span.end))
        });
        list.dedup();
        let more = list.len().saturating_sub(MOST_SHOWN) + self.len() - self.iter().len();
        let mut blocks = Vec::new();
        let mut known = None;
        for problem in list.iter().take(MOST_SHOWN) {
            let at = problem.place.as_ref().map(|place| match &known {
                Some((source, byte, at)) if Arc::ptr_eq(source, &place.source) => {
                    place.source.line_column_after((*byte, *at), place.span.start)
                }
                _ => place.line_column(),
            });
            if let (Some(place), Some(at)) = (&problem.place, at) {
                known = Some((Arc::clone(&place.source), place.span.start, at));
            }
            blocks.push(problem.shown_at(at, width));
        }
        if more > 0 {
            let stopped = if self.is_full() { "; what follows them was not read" } else { "" };
            blocks.push(format!("and {more} more{stopped}\n"));
        }
        blocks.join("\n")
    }
}

impl fmt::Display for Problems {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(&self.shown(WIDTH))
    }
}

impl Problem {
    /// The problem for a person, within `width` columns where the text allows it. Ends with a line end.
    #[must_use]
    pub fn shown(&self, width: usize) -> String {
        self.shown_at(self.place.as_ref().map(Place::line_column), width)
    }

    /// The same, where line and column are known already.
    fn shown_at(&self, at: Option<(usize, usize)>, width: usize) -> String {
        let mut text = String::new();
        if let (Some(place), Some((line, column))) = (&self.place, at) {
            text += &format!("{}:{line}:{column}  ", visible(&place.source.name));
        }
        text += &shortened(&visible(&self.message), LONGEST_MESSAGE);
        text.push('\n');
        if let Some(place) = &self.place {
            text += &underlined(place, width.saturating_sub(INDENT).max(LEAST_ROOM));
        }
        for (label, said) in [("expected", &self.expected), ("nearest", &self.nearest)] {
            if let Some(said) = said {
                text += &labelled(label, &shortened(&visible(said), LONGEST_ADVICE), width);
            }
        }
        text
    }
}

impl fmt::Display for Problem {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(&self.shown(WIDTH))
    }
}

/// A text that may be folded over lines in its file, on one line.
#[must_use]
pub fn one_line(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

/// A text on one line that cannot disturb a terminal: control characters become their pictures (`␛`), characters that
/// change the direction of text or take no room become their numbers (`<U+202E>`).
#[must_use]
pub fn visible(text: &str) -> Cow<'_, str> {
    if text.chars().all(|c| picture(c).is_none()) {
        return Cow::Borrowed(text);
    }
    Cow::Owned(text.chars().map(|c| picture(c).unwrap_or_else(|| c.to_string())).collect())
}

/// A text cut to at most so many characters, with `…` for what was cut off.
#[must_use]
pub fn shortened(text: &str, characters: usize) -> Cow<'_, str> {
    match text.char_indices().nth(characters) {
        None => Cow::Borrowed(text),
        Some(_) => Cow::Owned(text.chars().take(characters.saturating_sub(1)).chain(['…']).collect()),
    }
}

/// What stands for a character that must not be passed through.
fn picture(c: char) -> Option<String> {
    match c {
        '\u{0}'..='\u{1f}' => char::from_u32(0x2400 + u32::from(c)).map(String::from),
        '\u{7f}' => Some("\u{2421}".to_owned()),
        '\u{80}'..='\u{9f}'
        | '\u{ad}'
        | '\u{61c}'
        | '\u{180e}'
        | '\u{200b}'..='\u{200f}'
        | '\u{2028}'..='\u{202e}'
        | '\u{2060}'..='\u{206f}'
        | '\u{feff}'
        | '\u{fff9}'..='\u{fffb}'
        | '\u{e0000}'..='\u{e007f}' => Some(format!("<U+{:04X}>", u32::from(c))),
        _ => None,
    }
}

/// A character as shown, with its columns.
struct Cell {
    shown: String,
    width: usize,
    marked: bool,
}

impl Cell {
    fn of(c: char, marked: bool) -> Self {
        match picture(c) {
            Some(shown) => Self { width: shown.width(), shown, marked },
            None => Self { shown: c.to_string(), width: c.width().unwrap_or(0), marked },
        }
    }
}

/// Cells in order until they fill `room` columns, and whether that was all.
fn cells(characters: impl Iterator<Item = (char, bool)>, room: usize) -> (Vec<Cell>, usize, bool) {
    let (mut cells, mut width) = (Vec::new(), 0);
    for (c, marked) in characters {
        let cell = Cell::of(c, marked);
        // Characters of no width could otherwise go on without end.
        if width + cell.width > room || cells.len() > 4 * room {
            return (cells, width, false);
        }
        width += cell.width;
        cells.push(cell);
    }
    (cells, width, true)
}

/// The line of a place and the marks under it; a line too long for `room` columns is cut around the place.
fn underlined(place: &Place, room: usize) -> String {
    let source = &place.source;
    let span = source.span(place.span.start..place.span.end);
    // No cell has more than four bytes, and `cells` stops at four cells a column: more of a long line is never shown.
    let line = source.line_around(span.start, 16 * (room + 1));
    if source.text[line.clone()].trim().is_empty() && span.start >= line.end {
        return String::new();
    }
    let start = span.start.min(line.end);
    let blanks = source.text[line.clone()].len() - source.text[line.clone()].trim_start().len();
    let before = &source.text[(line.start + blanks).min(start)..start];
    let after = source.text[start..line.end].char_indices().map(|(at, c)| (c, start + at < span.end));

    let (mut right, mut right_width, mut right_whole) = cells(after, room);
    let marks: usize = right.iter().filter(|cell| cell.marked).map(|cell| cell.width).sum();
    let left_room = room.saturating_sub(right_width.min(marks + room / 3)).max(room / 3);
    let (mut left, mut left_width, left_whole) = cells(before.chars().rev().map(|c| (c, false)), left_room);
    if !left_whole {
        cut(&mut left, &mut left_width, left_room);
    }
    if left_width + right_width > room || !right_whole {
        right_whole = false;
        cut(&mut right, &mut right_width, room - left_width);
    }
    left.reverse();

    let mut text = " ".repeat(INDENT);
    let ellipsis = |whole: bool| if whole { "" } else { "…" };
    text += ellipsis(left_whole);
    left.iter().chain(&right).for_each(|cell| text += &cell.shown);
    text += ellipsis(right_whole);
    let marks: usize = right.iter().filter(|cell| cell.marked).map(|cell| cell.width).sum();
    let text = text.trim_end();
    format!("{text}\n{}{}\n", " ".repeat(INDENT + left_width), "~".repeat(marks.max(1)))
}

/// Drops cells from the far end until they and a `…` fit into `room`; the width then counts the `…`.
fn cut(cells: &mut Vec<Cell>, width: &mut usize, room: usize) {
    while *width + 1 > room
        && let Some(cell) = cells.pop()
    {
        *width -= cell.width;
    }
    *width += 1;
}

/// A labelled text, wrapped at blanks under itself.
fn labelled(label: &str, said: &str, width: usize) -> String {
    const HANG: usize = 13;
    let room = width.saturating_sub(HANG).max(LEAST_ROOM);
    let mut lines = vec![String::new()];
    let mut filled = 0;
    // A bracket stays with what it opens.
    let mut words: Vec<String> = Vec::new();
    for word in said.split(' ') {
        match words.last_mut() {
            Some(last) if last.ends_with('{') => *last += &format!(" {word}"),
            _ => words.push(word.to_owned()),
        }
    }
    for word in words {
        let needed = word.width();
        if filled > 0 && filled + 1 + needed > room {
            lines.push(String::new());
            filled = 0;
        }
        if let Some(line) = lines.last_mut() {
            if filled > 0 {
                line.push(' ');
                filled += 1;
            }
            line.push_str(&word);
            filled += needed;
        }
    }
    format!("   {label:<8}  {}\n", lines.join(&format!("\n{}", " ".repeat(HANG))))
}

#[cfg(test)]
mod tests {
    use crate::text::{Place, Problem, Problems, Source, visible};

    fn at(text: &str, needle: &str) -> Place {
        let source = Source::new("s.yaml", text);
        let start = text.find(needle).unwrap();
        Place::new(&source, start..start + needle.len())
    }

    #[test]
    fn a_problem_shows_place_line_expectation_and_nearest_name() {
        let place = at("organism:\n  diametre: 210 ± 30 nm\n", "diametre");
        let problem = Problem::at(place, "`diametre` is not known here")
            .expected("one of diameter, width, length")
            .nearest(Some("diameter".to_owned()));
        assert_eq!(
            problem.to_string(),
            "\
s.yaml:2:3  `diametre` is not known here
      diametre: 210 ± 30 nm
      ~~~~~~~~
   expected  one of diameter, width, length
   nearest   diameter
"
        );
        assert_eq!(Problem::whole("`a.yaml` does not exist").to_string(), "`a.yaml` does not exist\n");
    }

    #[test]
    fn marks_stand_under_wide_characters_and_tabs() {
        let place = at("名前:\t細胞 x\n", "細胞");
        assert_eq!(
            Problem::at(place, "found").to_string(),
            "\
s.yaml:1:5  found
      名前:␉細胞 x
            ~~~~
"
        );
    }

    #[test]
    fn a_long_line_is_cut_around_the_place() {
        let text = format!("a: {} here {}\n", "x".repeat(200), "y".repeat(200));
        let shown = Problem::at(at(&text, "here"), "found").shown(46);
        assert_eq!(
            shown,
            "\
s.yaml:1:205  found
      …xxxxxxxxxxxxxxxxxxxxx here yyyyyyyyyyy…
                             ~~~~
"
        );
        let shown = Problem::at(at(&text, &text[3..300]), "found").shown(46);
        assert_eq!(
            shown,
            "\
s.yaml:1:4  found
      a: xxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxxx…
         ~~~~~~~~~~~~~~~~~~~~~~~~~~~~~~~~~~~~
"
        );
    }

    #[test]
    fn a_place_past_the_end_or_over_several_lines_marks_one_line() {
        let source = Source::new("s.yaml", "a: 1\nb: 2");
        assert_eq!(
            Problem::at(Place::new(&source, 90..99), "x").to_string(),
            "s.yaml:2:5  x\n      b: 2\n          ~\n"
        );
        assert_eq!(
            Problem::at(Place::new(&source, 0..9), "x").to_string(),
            "s.yaml:1:1  x\n      a: 1\n      ~~~~\n"
        );
        let empty = Source::new("s.yaml", "");
        assert_eq!(Problem::at(Place::new(&empty, 0..0), "x").to_string(), "s.yaml:1:1  x\n");
    }

    #[test]
    fn control_characters_never_pass_through() {
        assert_eq!(visible("\u{1b}[31m\u{7f}\r\n\u{85}\u{202e}"), "␛[31m␡␍␊<U+0085><U+202E>");
        let place = at("a: \u{1b}[2J\n", "\u{1b}[2J");
        let problem = Problem::at(place, "found `\u{1b}[2J`").expected("no \u{7}");
        assert_eq!(
            problem.to_string(),
            "\
s.yaml:1:4  found `␛[2J`
      a: ␛[2J
         ~~~~
   expected  no ␇
"
        );
    }

    #[test]
    fn an_expectation_wraps_under_itself() {
        let problem = Problem::whole("x").expected("one of alpha, beta, gamma, delta, epsilon");
        assert_eq!(
            problem.shown(34),
            "x\n   expected  one of alpha, beta,\n             gamma, delta, epsilon\n"
        );
    }

    #[test]
    fn problems_are_sorted_each_once_and_no_more_than_a_hundred() {
        let source = Source::new("s.yaml", "x".repeat(300));
        let mut problems = Problems::new();
        for byte in (0..200).rev() {
            problems.push(Problem::at(Place::new(&source, byte..byte + 1), "found"));
            problems.push(Problem::at(Place::new(&source, byte..byte + 1), "found"));
        }
        problems.push(Problem::whole("first of all"));
        let shown = problems.to_string();
        assert!(shown.starts_with("first of all\n\ns.yaml:1:1  found\n"), "{shown}");
        assert_eq!(shown.matches("s.yaml:1:7  found\n").count(), 1);
        assert!(shown.contains("s.yaml:1:99  found\n") && !shown.contains("s.yaml:1:100  found\n"));
        assert!(shown.ends_with("\n\nand 101 more\n"), "{shown}");
    }
}
