//! A page of fixed width: columns without boxes, labels with wrapped text beside them, rules.

use comfy_table::{Cell, CellAlignment, ColumnConstraint, Table, TableStyle, Width};
use unicode_width::UnicodeWidthStr;

/// Blanks between columns.
pub(in crate::report) const GAP: usize = 2;

/// Width of the labels, gap included, so that all texts of a page begin at one column.
pub(in crate::report) const LABEL: usize = 15;

/// A text line that is longer than this is hard to read, however wide the screen.
const LONGEST_TEXT: usize = 110;

/// Colours, always beside words that say the same.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(in crate::report) enum Paint {
    Good,
    Middling,
    Bad,
    Strong,
    Faint,
}

/// A column of a table.
#[derive(Clone, Copy, Debug)]
pub(in crate::report) struct Column {
    pub(in crate::report) width: usize,
    pub(in crate::report) right: bool,
}

/// The page under construction.
pub(in crate::report) struct Page {
    width: usize,
    colour: bool,
    out: String,
}

impl Page {
    pub(in crate::report) fn new(width: usize, colour: bool) -> Self {
        // Below this nothing can be laid out; a terminal that narrow shows wrapped lines anyway.
        Self { width: width.max(LABEL + 15), colour, out: String::new() }
    }

    pub(in crate::report) fn width(&self) -> usize {
        self.width
    }

    pub(in crate::report) fn finish(self) -> String {
        self.out
    }

    pub(in crate::report) fn blank(&mut self) {
        self.out.push('\n');
    }

    /// A line across the page.
    pub(in crate::report) fn rule(&mut self) {
        let rule = self.painted(&"─".repeat(self.width), Paint::Faint);
        self.out.push_str(&rule);
        self.blank();
    }

    /// A heading with a rule below it, set apart from what stands above.
    pub(in crate::report) fn heading(&mut self, text: &str, paint: Paint) {
        if !self.out.is_empty() {
            self.blank();
        }
        self.table_head(&[Column { width: self.width, right: false }], &[text], text, paint);
    }

    /// The head of a table with a rule below it; `strong`, the beginning of the first cell, is painted.
    pub(in crate::report) fn table_head(
        &mut self,
        columns: &[Column],
        cells: &[&str],
        strong: &str,
        paint: Paint,
    ) {
        for (place, line) in lines(columns, cells).into_iter().enumerate() {
            match line.strip_prefix(strong) {
                Some(rest) if place == 0 => {
                    let strong = self.painted(strong, paint);
                    self.out.push_str(&strong);
                    self.out.push_str(rest);
                }
                _ => self.out.push_str(&line),
            }
            self.blank();
        }
        self.rule();
    }

    /// One row of a table.
    pub(in crate::report) fn row(&mut self, columns: &[Column], cells: &[&str]) {
        for line in lines(columns, cells) {
            self.out.push_str(&line);
            self.blank();
        }
    }

    /// A label with its text wrapped beside it; `word`, if the text begins with it, is painted.
    pub(in crate::report) fn labelled(&mut self, label: &str, text: &str, word: Option<(&str, Paint)>) {
        self.beside(0, label, LABEL, text, Paint::Strong, word);
    }

    /// The same, set in below a row.
    pub(in crate::report) fn detail(&mut self, label: &str, text: &str) {
        self.beside(2, label, LABEL - 2, text, Paint::Faint, None);
    }

    /// A label of any length; the text begins `column` columns from the left, or below a label that is too long.
    pub(in crate::report) fn beside_at(&mut self, column: usize, label: &str, text: &str) {
        self.beside(0, label, column, text, Paint::Strong, None);
    }

    /// A paragraph, set in.
    pub(in crate::report) fn paragraph(&mut self, indent: usize, text: &str) {
        self.beside(indent, "", 0, text, Paint::Faint, None);
    }

    fn beside(
        &mut self,
        indent: usize,
        label: &str,
        column: usize,
        text: &str,
        paint: Paint,
        word: Option<(&str, Paint)>,
    ) {
        let room = self.width.min(LONGEST_TEXT) - indent - column;
        let margin = " ".repeat(indent);
        let mut fits = label.width() + GAP <= column || label.is_empty();
        if !fits {
            let labels = lines(&[Column { width: self.width - indent, right: false }], &[label]);
            for line in labels {
                self.out.push_str(&margin);
                let line = self.painted(&line, paint);
                self.out.push_str(&line);
                self.blank();
            }
        }
        for (place, line) in lines(&[Column { width: room, right: false }], &[text]).iter().enumerate() {
            self.out.push_str(&margin);
            let shown = if std::mem::take(&mut fits) { label } else { "" };
            if !shown.is_empty() {
                let shown = self.painted(shown, paint);
                self.out.push_str(&shown);
            }
            self.out.push_str(&" ".repeat(column - shown.width()));
            match word.and_then(|(word, paint)| Some((line.strip_prefix(word)?, word, paint))) {
                Some((rest, word, paint)) if place == 0 => {
                    let word = self.painted(word, paint);
                    self.out.push_str(&word);
                    self.out.push_str(rest);
                }
                _ => self.out.push_str(line),
            }
            self.blank();
        }
    }

    fn painted(&self, text: &str, paint: Paint) -> String {
        let code = match paint {
            Paint::Good => "1;32",
            Paint::Middling => "1;33",
            Paint::Bad => "1;31",
            Paint::Strong => "1",
            Paint::Faint => "2",
        };
        if self.colour { format!("\u{1b}[{code}m{text}\u{1b}[0m") } else { text.to_owned() }
    }
}

/// The widest line of any of the texts.
pub(in crate::report) fn widest<'a>(texts: impl IntoIterator<Item = &'a str>) -> usize {
    texts.into_iter().flat_map(str::lines).map(UnicodeWidthStr::width).max().unwrap_or(0)
}

/// Cells wrapped in their columns, side by side.
fn lines(columns: &[Column], cells: &[&str]) -> Vec<String> {
    let mut table = Table::new();
    table.load_style(TableStyle::new()).force_no_tty();
    table.add_row(cells.iter().map(|cell| Cell::new(glued(cell))).collect::<Vec<_>>());
    let last = columns.len().saturating_sub(1);
    for (place, (column, wanted)) in table.column_iter_mut().zip(columns).enumerate() {
        let gap = if place == last { 0 } else { small(GAP) };
        column.set_padding((0, gap));
        column.set_constraint(ColumnConstraint::Absolute(Width::Fixed(small(wanted.width) + gap)));
        column.set_cell_alignment(if wanted.right { CellAlignment::Right } else { CellAlignment::Left });
    }
    table.lines().map(|line| line.replace('\u{a0}', " ").trim_end().to_owned()).collect()
}

fn small(width: usize) -> u16 {
    u16::try_from(width).unwrap_or(u16::MAX / 2)
}

/// A number stays on one line with what follows it, its unit above all; a comparison sign with its number.
fn glued(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut before = ' ';
    let mut characters = text.chars().peekable();
    while let Some(c) = characters.next() {
        let holds = (before.is_ascii_digit() || matches!(before, '<' | '>' | '±'))
            && characters
                .peek()
                .is_some_and(|next| next.is_alphanumeric() || matches!(next, '%' | '‰' | '°'));
        out.push(if c == ' ' && holds { '\u{a0}' } else { c });
        before = c;
    }
    out
}
