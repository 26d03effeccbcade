//! The command line: what is asked, one command a file.

mod catalog;
mod output;
mod screen;

use std::path::PathBuf;
use std::process::ExitCode;

use clap::{Args, Parser, Subcommand, ValueEnum};

use crate::text::Problems;

/// How a run ended. The exit status is the position in this list.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Ending {
    /// It ran.
    Ran,
    /// The output could not be written.
    NotWritten,
    /// Bad input or usage.
    BadInput,
    /// The gate was reached.
    Gate,
}

impl From<Ending> for ExitCode {
    fn from(ending: Ending) -> Self {
        Self::from(match ending {
            Ending::Ran => 0,
            Ending::NotWritten => 1,
            Ending::BadInput => 2,
            Ending::Gate => 3,
        })
    }
}

/// Could this hypothesised organism physically be alive, as described?
///
/// Holds YAML descriptions of candidate organisms against published budgets and scaling laws, carries every uncertainty
/// through by Monte Carlo, and says pass, marginal or fail per constraint, the margin of each, and which one binds.
/// A pass is never evidence of life.
#[derive(Debug, Parser)]
#[command(name = "hypobiont", version, arg_required_else_help = true)]
pub struct Arguments {
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// Screen candidates: the main job
    Screen(screen::Screen),
    /// What the catalogue holds
    Catalog(catalog::Ask),
    /// Draft a candidate: what the limits of a body plan use, commented
    New(catalog::New),
}

/// When to use colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Colour {
    /// On a terminal that shows it
    Auto,
    /// Always
    Always,
    /// Never
    Never,
}

/// How to show things.
#[derive(Debug, Args)]
struct Look {
    /// Colour; words always say the same
    #[arg(long, visible_alias = "color", value_name = "WHEN", default_value = "auto")]
    colour: Colour,
    /// Columns of text [default: the terminal's, else 100]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(40..=400))]
    width: Option<u16>,
}

impl Look {
    fn colour(&self, to_terminal: bool) -> bool {
        match self.colour {
            Colour::Always => true,
            Colour::Never => false,
            Colour::Auto => {
                let set = |name: &str| std::env::var_os(name).is_some_and(|value| !value.is_empty());
                let dumb = std::env::var_os("TERM").is_some_and(|term| term == "dumb");
                to_terminal && !set("NO_COLOR") && !dumb
            }
        }
    }

    fn width(&self, to_terminal: bool) -> usize {
        let found = || if to_terminal { comfy_table::Table::new().width() } else { None };
        usize::from(self.width.or_else(found).unwrap_or(100)).max(40)
    }
}

/// Folders laid over the catalogue.
#[derive(Debug, Args)]
struct Overlays {
    /// Lay a folder of the same shape over the catalogue (repeatable)
    #[arg(long = "overlay", value_name = "DIR")]
    folders: Vec<PathBuf>,
}

/// Reads the arguments of this process and runs what they ask for.
#[must_use]
pub fn run() -> Ending {
    let arguments = match Arguments::try_parse() {
        Ok(arguments) => arguments,
        Err(error) => {
            // Help and version are answers, not mistakes. A closed pipe changes nothing about either.
            let _ = error.print();
            return if error.use_stderr() { Ending::BadInput } else { Ending::Ran };
        }
    };
    match arguments.command {
        Command::Screen(screen) => screen.run(),
        Command::Catalog(ask) => ask.run(),
        Command::New(new) => new.run(),
    }
}

/// Says on standard error what is wrong.
fn report(problems: &Problems) {
    output::complain(&problems.to_string());
}
