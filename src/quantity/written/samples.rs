//! Columns of data files that a candidate refers to.

use std::fs::File;
use std::io::Read;
use std::path::Path;

use super::number::number;
use crate::quantity::cursor::Cursor;
use crate::quantity::unit::Unit;
use crate::text::{Fault, Problem, nearest};

/// The largest file that is read, in bytes.
const LARGEST: u64 = 16 << 20;

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

impl Column<'_> {
    /// The numbers in SI units, in the order of the rows; `check` refuses those that cannot be.
    pub(super) fn read(&self, check: impl Fn(f64) -> Result<(), Fault>) -> Result<Vec<f64>, (Part, Problem)> {
        let bytes = self.bytes().map_err(|problem| (Part::File, problem))?;
        let of_file = |message: String| (Part::File, Problem::whole(message));
        let text = std::str::from_utf8(&bytes)
            .map_err(|_| of_file(format!("`{}` is not a text in UTF-8", self.file)))?;
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        let mut reader = csv::ReaderBuilder::new().trim(csv::Trim::All).from_reader(text.as_bytes());
        let wrong = |error: &csv::Error| of_file(format!("`{}` is not a table: {error}", self.file));
        let header = reader.headers().map_err(|error| wrong(&error))?;
        let mut places =
            header.iter().enumerate().filter(|(_, name)| *name == self.name).map(|(place, _)| place);
        let place = match (places.next(), places.next()) {
            (Some(place), None) => place,
            (Some(_), Some(_)) => {
                let message = format!("`{}` has more than one column `{}`", self.file, self.name);
                return Err((Part::Column, Problem::whole(message)));
            }
            (None, _) => {
                let known: Vec<_> = header.iter().map(|name| format!("`{name}`")).collect();
                let problem = Problem::whole(format!("`{}` has no column `{}`", self.file, self.name))
                    .expected(format!("one of {}", known.join(", ")))
                    .nearest(nearest(self.name, header.iter()));
                return Err((Part::Column, problem));
            }
        };
        let mut values = Vec::new();
        let mut record = csv::StringRecord::new();
        while reader.read_record(&mut record).map_err(|error| wrong(&error))? {
            let cell = record.get(place).unwrap_or_default();
            let value = self.cell(cell).and_then(|si| check(si).map(|()| si));
            let line = record.position().map_or(0, csv::Position::line);
            values.push(value.map_err(|fault| {
                let problem = Problem {
                    place: None,
                    message: format!("line {line} of `{}`: {}", self.file, fault.message),
                    expected: fault.expected,
                    nearest: fault.nearest,
                };
                (Part::File, problem)
            })?);
        }
        if values.is_empty() {
            return Err(of_file(format!("`{}` has no rows", self.file)));
        }
        Ok(values)
    }

    fn cell(&self, cell: &str) -> Result<f64, Fault> {
        let mut cursor = Cursor::new(cell, 0);
        if cell.is_empty() {
            return Err(Fault::new(0..0, format!("`{}` is empty", self.name)).expected("a number"));
        }
        let number = number(&mut cursor)?;
        if !cursor.rest().is_empty() || number.uncertainty.is_some() {
            return Err(Fault::new(0..cell.len(), format!("`{cell}` is not a number"))
                .expected("a number alone; its unit stands in `unit`"));
        }
        super::text::to_si(self.unit, &number, cell)
    }

    fn bytes(&self) -> Result<Vec<u8>, Problem> {
        let named = Path::new(self.file);
        if self.file.is_empty() || named.is_absolute() {
            return Err(Problem::whole(format!(
                "`{}` is not a file named from the candidate's folder",
                self.file
            ))
            .expected("a name such as `sizes.csv`"));
        }
        let path = self.folder.join(named);
        let unreadable = |error: &std::io::Error| {
            let problem = Problem::whole(format!("`{}` cannot be read: {}", self.file, error.kind()));
            problem.nearest(self.neighbour(&path))
        };
        // Looked at before it is opened: opening a pipe would wait for ever.
        let about = std::fs::metadata(&path).map_err(|error| unreadable(&error))?;
        if !about.is_file() {
            return Err(
                Problem::whole(format!("`{}` is not a file", self.file)).expected("a readable regular file")
            );
        }
        let mut bytes = Vec::new();
        let file = File::open(&path).map_err(|error| unreadable(&error))?;
        file.take(LARGEST + 1).read_to_end(&mut bytes).map_err(|error| unreadable(&error))?;
        if u64::try_from(bytes.len()).is_ok_and(|length| length <= LARGEST) {
            Ok(bytes)
        } else {
            Err(Problem::whole(format!("`{}` is larger than 16 MiB", self.file)).expected("a smaller file"))
        }
    }

    /// The file of the same folder whose name is nearest.
    fn neighbour(&self, path: &Path) -> Option<String> {
        let names: Vec<String> = std::fs::read_dir(path.parent()?)
            .ok()?
            .filter_map(|entry| entry.ok()?.file_name().into_string().ok())
            .collect();
        nearest(path.file_name()?.to_str()?, names.iter().map(String::as_str))
    }
}
