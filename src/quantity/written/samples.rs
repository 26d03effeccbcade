//! Columns of data files that a candidate refers to.

use std::path::Path;
use std::sync::Arc;

use super::number::number;
use crate::quantity::cursor::Cursor;
use crate::quantity::unit::Unit;
use crate::text::{Fault, Problem, Source, nearest, shortened};

/// A column of a comma-separated file whose first line names the columns.
pub(super) struct Column<'a> {
    /// The folder that the file is named from.
    pub(super) folder: &'a Path,
    /// The file as the candidate names it.
    pub(super) file: &'a str,
    /// The column's name.
    pub(super) name: &'a str,
    /// The unit of its numbers.
    pub(super) unit: &'a Unit,
}

/// What a problem is about.
#[derive(Clone, Copy)]
pub(super) enum Part {
    File,
    Column,
}

impl Part {
    pub(super) const fn is_column(self) -> bool {
        matches!(self, Self::Column)
    }
}

/// How many wrong rows of a file are reported.
const REPORTED: usize = 100;

/// How many names of columns a message lists.
const LISTED: usize = 12;

/// How many columns a table may have.
const MOST_COLUMNS: usize = 10_000;

/// Problems, each with what it is about.
type Found = Vec<(Part, Problem)>;

/// The usual case, `12.5`, in a fraction of the time: digits with a point between them at most. Zero and what may
/// overflow or vanish is left to the slow way.
fn plain(cell: &str) -> Option<f64> {
    let size = cell.strip_prefix('-').unwrap_or(cell);
    let (whole, decimals) = size.split_once('.').unwrap_or((size, "0"));
    let are_digits = |part: &str| !part.is_empty() && part.bytes().all(|byte| byte.is_ascii_digit());
    (are_digits(whole) && are_digits(decimals))
        .then(|| cell.parse().ok())?
        .filter(|value: &f64| value.is_normal())
}

impl Column<'_> {
    /// The numbers in SI units, in the order of the rows; `check` refuses those that cannot be.
    ///
    /// # Errors
    /// The file or the column is not what it should be, or every row that is wrong, up to 100.
    pub(super) fn read(&self, check: impl Fn(f64, &str) -> Result<(), Fault>) -> Result<Vec<f64>, Found> {
        let source = self.source().map_err(|problem| vec![(Part::File, problem)])?;
        let first = source.text.lines().next().unwrap_or_default();
        if first.matches(',').count() >= MOST_COLUMNS {
            let problem = Problem::whole(format!("`{}` has more than {MOST_COLUMNS} columns", self.file));
            return Err(vec![(Part::File, problem.expected("a row for each measurement"))]);
        }
        let mut reader = csv::ReaderBuilder::new().trim(csv::Trim::All).from_reader(source.text.as_bytes());
        let header = reader.headers().map_err(|error| vec![(Part::File, self.broken(&error))])?;
        let place = self.place(header).map_err(|found| vec![found])?;
        let mut values = Vec::new();
        let mut found = Vec::new();
        let mut record = csv::StringRecord::new();
        while found.len() < REPORTED {
            match reader.read_record(&mut record) {
                Ok(true) => {}
                Ok(false) => break,
                Err(error) => {
                    found.push((Part::File, self.broken(&error)));
                    continue;
                }
            }
            let cell = record.get(place).unwrap_or_default();
            match self.cell(cell).and_then(|si| check(si, cell).map(|()| si)) {
                Ok(value) => values.push(value),
                Err(fault) => {
                    let line = record.position().map_or(0, csv::Position::line);
                    let problem = Problem {
                        place: None,
                        message: format!("line {line} of `{}`: {}", self.file, fault.message),
                        expected: fault.expected,
                        nearest: fault.nearest,
                    };
                    found.push((Part::File, problem));
                }
            }
        }
        if values.is_empty() && found.is_empty() {
            let problem = Problem::whole(format!("`{}` has no rows", self.file));
            found.push((Part::File, problem.expected("numbers on the lines below the names of the columns")));
        }
        if found.is_empty() { Ok(values) } else { Err(found) }
    }

    /// Which of the columns it is.
    fn place(&self, header: &csv::StringRecord) -> Result<usize, (Part, Problem)> {
        let mut places =
            header.iter().enumerate().filter(|(_, name)| *name == self.name).map(|(place, _)| place);
        match (places.next(), places.next()) {
            (Some(place), None) => Ok(place),
            (Some(_), Some(_)) => {
                let message = format!("`{}` has more than one column `{}`", self.file, self.name);
                Err((Part::Column, Problem::whole(message).expected("columns of different names")))
            }
            (None, _) if header.is_empty() => {
                let problem = Problem::whole(format!("`{}` is empty", self.file));
                Err((Part::File, problem.expected("a first line with the names of the columns")))
            }
            (None, _) => {
                let known: Vec<_> =
                    header.iter().take(LISTED).map(|name| format!("`{}`", shortened(name, 60))).collect();
                let problem = Problem::whole(format!("`{}` has no column `{}`", self.file, self.name));
                let expected =
                    match header.get(0).filter(|name| header.len() == 1 && name.contains([';', '\t'])) {
                        Some(_) => "commas between the columns, and points in decimal numbers".to_owned(),
                        None if header.len() > LISTED => {
                            format!("one of {} and {} more", known.join(", "), header.len() - LISTED)
                        }
                        None => format!("one of {}", known.join(", ")),
                    };
                Err((Part::Column, problem.expected(expected).nearest(nearest(self.name, header.iter()))))
            }
        }
    }

    /// What is wrong with the file as a table.
    fn broken(&self, error: &csv::Error) -> Problem {
        match error.kind() {
            csv::ErrorKind::UnequalLengths { pos, expected_len, len } => {
                let line = pos.as_ref().map_or(0, csv::Position::line);
                let message =
                    format!("line {line} of `{}` has {len} cells, the first line {expected_len}", self.file);
                Problem::whole(message).expected("a cell for each column in every line")
            }
            // What was read is a text in memory: nothing else can go wrong with it.
            _ => Problem::whole(format!("`{}` is not a table", self.file))
                .expected("values separated by commas"),
        }
    }

    fn cell(&self, cell: &str) -> Result<f64, Fault> {
        if let Some(si) = plain(cell).map(|value| self.unit.to_si(value)).filter(|si| si.is_normal()) {
            return Ok(si);
        }
        let mut cursor = Cursor::new(cell, 0);
        if cell.is_empty() {
            return Err(Fault::new(0..0, format!("`{}` is empty", self.name)).expected("a number"));
        }
        let alone = "a number alone; its unit stands in `unit`";
        let number = number(&mut cursor).map_err(|fault| {
            let message = format!("`{}` is not a number", shortened(cell, 60));
            Fault::new(0..cell.len(), message).expected(fault.expected.unwrap_or_else(|| alone.to_owned()))
        })?;
        if !cursor.rest().is_empty() || number.uncertainty.is_some() {
            return Err(Fault::new(0..cell.len(), format!("`{}` is not a number", shortened(cell, 60)))
                .expected(alone));
        }
        super::text::to_si(self.unit, &number, cell)
    }

    fn source(&self) -> Result<Arc<Source>, Problem> {
        let named = Path::new(self.file);
        if self.file.is_empty() || named.is_absolute() {
            let message = format!("`{}` is not a file named from the candidate's folder", self.file);
            return Err(Problem::whole(message).expected("a name such as `sizes.csv`"));
        }
        Source::from_file_named(&self.folder.join(named), self.file)
    }
}
