//! What is told: an assessment as text for people and for machines.
//!
//! Every renderer is a pure function of [`Assessment`]s that gives a text; nothing of science is computed here. Texts of
//! users are cleaned once, by `cleaning`, before anything else is done with them.

mod cleaning;
pub mod csv;
pub mod entries;
pub mod json;
pub mod lines;
pub mod markdown;
mod page;
mod table;
pub mod terminal;
mod words;

use clap::ValueEnum;

use crate::judge::Assessment;

/// The form of a report.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum Format {
    /// Columns for a screen
    Terminal,
    /// One sentence a limit, for screen readers
    Lines,
    /// One JSON object, or an array
    Json,
    /// One JSON object a line
    Ndjson,
    /// A section for a review
    Markdown,
    /// One row per candidate and constraint
    Csv,
}

impl Format {
    /// The form that a file's ending asks for.
    #[must_use]
    pub fn of_ending(ending: &str) -> Option<Self> {
        Some(match ending {
            "txt" => Self::Terminal,
            "json" => Self::Json,
            "ndjson" | "jsonl" => Self::Ndjson,
            "md" | "markdown" => Self::Markdown,
            "csv" => Self::Csv,
            _ => return None,
        })
    }

    /// The ending of files in this form.
    #[must_use]
    pub const fn ending(self) -> &'static str {
        match self {
            Self::Terminal | Self::Lines => "txt",
            Self::Json => "json",
            Self::Ndjson => "ndjson",
            Self::Markdown => "md",
            Self::Csv => "csv",
        }
    }
}

/// How a report looks, for the forms that have a look.
#[derive(Clone, Debug)]
pub struct Options {
    /// Of the terminal form.
    pub terminal: terminal::Options,
    /// The command that repeats the run.
    pub command: String,
}

/// A report on one or more candidates. `several` says whether more than one was asked for: JSON is then an array.
#[must_use]
pub fn render(format: Format, assessments: &[Assessment], several: bool, options: &Options) -> String {
    match format {
        Format::Terminal => terminal::report(assessments, options.terminal),
        Format::Lines => lines::report(assessments),
        Format::Json => match assessments {
            [one] if !several => json::object(one),
            _ => json::array(assessments),
        },
        Format::Ndjson => assessments.iter().map(json::line).collect(),
        Format::Markdown => markdown::report(assessments, &options.command),
        Format::Csv => csv::table(assessments),
    }
}
