//! `hypobiont screen`: the main job.

use std::collections::BTreeSet;
use std::io::{IsTerminal, stderr, stdout};
use std::path::{Path, PathBuf};
use std::sync::Mutex;
use std::time::{Duration, Instant};

use clap::{Args, ValueEnum};

use super::{Ending, Look, Overlays, output, report};
use crate::candidate::{Candidate, read_file};
use crate::catalog::Catalog;
use crate::judge::assessment::Overall;
use crate::judge::{Asked, Assessment};
use crate::report::{self as reports, Format};
use crate::run::Settings;
use crate::study;
use crate::text::{Problem, Problems, Source, nearest};

/// The most draws that may be asked for: margins are kept for all of them.
const MOST_DRAWS: u64 = 1 << 24;
/// Work shorter than this shows no progress.
const QUIET: Duration = Duration::from_secs(2);

#[derive(Debug, Args)]
pub(super) struct Screen {
    /// Candidate files; `-` reads standard input
    #[arg(required = true, value_name = "FILE")]
    files: Vec<PathBuf>,
    /// Form of the report [default: terminal, or by the ending of --output]
    #[arg(long, value_name = "FORM")]
    format: Option<Format>,
    /// Write to a file, or one file per candidate into a folder
    #[arg(long, value_name = "FILE|DIR")]
    output: Option<PathBuf>,
    /// Make exactly N draws, the first N of the same draws [default: double from 65536 until settled]
    #[arg(long, value_name = "N", value_parser = draws)]
    draws: Option<u64>,
    /// Seed of the random streams
    #[arg(long, value_name = "N", default_value_t = 1, value_parser = seed, allow_negative_numbers = true)]
    seed: u64,
    #[command(flatten)]
    overlays: Overlays,
    /// Which law to use where several match
    #[arg(long, value_name = "WHICH", default_value = "preferred")]
    laws: Laws,
    /// Only these constraints; the overall verdict is then of those chosen
    #[arg(long, value_name = "ID,...", value_delimiter = ',')]
    only: Vec<String>,
    /// Share of draws from which a constraint passes
    #[arg(long, value_name = "SHARE", default_value_t = 0.95, value_parser = share)]
    pass_at: f64,
    /// Share of draws up to which a constraint fails
    #[arg(long, value_name = "SHARE", default_value_t = 0.05, value_parser = share)]
    fail_at: f64,
    /// End with status 3 if any overall verdict is this or worse
    #[arg(long, value_name = "VERDICT")]
    gate: Option<Gate>,
    /// Show every row, also those with room to spare
    #[arg(long)]
    every: bool,
    #[command(flatten)]
    look: Look,
}

#[derive(Clone, Copy, Debug, ValueEnum)]
enum Laws {
    /// The law of lowest rank
    Preferred,
}

#[derive(Clone, Copy, Debug, ValueEnum)]
enum Gate {
    /// Marginal, fail or not assessed
    Marginal,
    /// Fail or not assessed
    Fail,
}

impl Gate {
    const fn reached(self, verdict: Overall) -> bool {
        match self {
            Self::Marginal => matches!(verdict, Overall::Marginal | Overall::Fail | Overall::NotAssessed),
            Self::Fail => matches!(verdict, Overall::Fail | Overall::NotAssessed),
        }
    }
}

fn share(text: &str) -> Result<f64, String> {
    match text.parse::<f64>() {
        Ok(value) if (0.0..=1.0).contains(&value) => Ok(value),
        _ => Err("a share is a number from 0 to 1, such as 0.95".to_owned()),
    }
}

fn draws(text: &str) -> Result<u64, String> {
    match text.parse() {
        Ok(draws) if (1..=MOST_DRAWS).contains(&draws) => Ok(draws),
        _ => Err(format!("a number of draws is a whole number from 1 to {MOST_DRAWS}")),
    }
}

fn seed(text: &str) -> Result<u64, String> {
    text.parse().map_err(|_| format!("a seed is a whole number from 0 to {}", u64::MAX))
}

impl Screen {
    pub(super) fn run(&self) -> Ending {
        if self.pass_at <= self.fail_at {
            let message = format!("--pass-at {} is not above --fail-at {}", self.pass_at, self.fail_at);
            let mut problems = Problems::new();
            problems.push(Problem::whole(message).expected("room between them, as in 0.95 and 0.05"));
            report(&problems);
            return Ending::BadInput;
        }
        let catalog = match Catalog::load(&self.overlays.folders) {
            Ok(catalog) => catalog,
            Err(problems) => {
                report(&problems);
                return Ending::BadInput;
            }
        };
        let mut problems = self.unknown_ids(&catalog);
        let known = problems.is_empty();
        let candidates = self.read(&catalog, &mut problems);
        if !known {
            report(&problems);
            return Ending::BadInput;
        }
        let asked = Asked {
            settings: Settings {
                seed: self.seed,
                // Within MOST_DRAWS, so it fits.
                draws: self.draws.and_then(|draws| usize::try_from(draws).ok()),
                pass_at: self.pass_at,
                fail_at: self.fail_at,
            },
            only: self.only.clone(),
        };
        let assessments = screen(&catalog, &candidates, &asked, &mut problems);
        let mut ending = Ending::Ran;
        if !problems.is_empty() {
            report(&problems);
            ending = Ending::BadInput;
        }
        if assessments.is_empty() {
            return ending;
        }
        let written = self.write(&assessments, candidates.len() > 1 || self.files.len() > 1);
        if written != Ending::Ran {
            return written;
        }
        let gated = self.gate.is_some_and(|gate| {
            assessments.iter().any(|assessment| gate.reached(assessment.overall.verdict))
        });
        if ending == Ending::Ran && gated { Ending::Gate } else { ending }
    }

    fn unknown_ids(&self, catalog: &Catalog) -> Problems {
        let ids: Vec<&str> =
            catalog.constraints.iter().map(|constraint| constraint.entry.id.as_str()).collect();
        let mut problems = Problems::new();
        for id in self.only.iter().filter(|id| !ids.contains(&id.as_str())) {
            problems.push(
                Problem::whole(format!("--only: `{id}` is not a constraint"))
                    .expected("an id that `hypobiont catalog list constraints` shows")
                    .nearest(nearest(id, ids.iter().copied())),
            );
        }
        problems
    }

    fn read(&self, catalog: &Catalog, problems: &mut Problems) -> Vec<Candidate> {
        let mut candidates = Vec::new();
        for path in &self.files {
            let read = Source::from_file(path);
            match read {
                Ok(source) => {
                    let folder = path.parent().filter(|parent| !parent.as_os_str().is_empty());
                    let folder = folder.unwrap_or(Path::new("."));
                    candidates.extend(read_file(&source, Some(folder), catalog, problems));
                }
                Err(problem) => problems.push(problem),
            }
        }
        candidates
    }

    fn format(&self) -> Format {
        let by_ending = || {
            let ending = self.output.as_ref()?.extension()?.to_str()?.to_ascii_lowercase();
            Format::of_ending(&ending)
        };
        self.format.or_else(by_ending).unwrap_or(Format::Terminal)
    }

    fn write(&self, assessments: &[Assessment], several: bool) -> Ending {
        let format = self.format();
        let to_terminal = self.output.is_none() && stdout().is_terminal();
        let options = reports::Options {
            terminal: reports::terminal::Options {
                width: self.look.width(to_terminal),
                colour: self.look.colour(to_terminal),
                every: self.every,
            },
            command: self.command(),
        };
        match &self.output {
            None => output::print(&reports::render(format, assessments, several, &options)),
            Some(path) if path.is_dir() => {
                let mut ending = Ending::Ran;
                let mut taken = BTreeSet::new();
                for assessment in assessments {
                    let text = reports::render(format, std::slice::from_ref(assessment), false, &options);
                    let name = file_name(assessment, format, &mut taken);
                    ending = ending.max(output::save(&path.join(name), &text));
                }
                ending
            }
            Some(path) => output::save(path, &reports::render(format, assessments, several, &options)),
        }
    }

    /// The command that repeats this run, for the reports.
    fn command(&self) -> String {
        let mut words = vec!["hypobiont".to_owned(), "screen".to_owned()];
        words.extend(self.files.iter().map(|file| quoted(&file.to_string_lossy())));
        words.push(format!("--seed {}", self.seed));
        if let Some(draws) = self.draws {
            words.push(format!("--draws {draws}"));
        }
        words.extend(
            self.overlays.folders.iter().map(|dir| format!("--overlay {}", quoted(&dir.to_string_lossy()))),
        );
        if !self.only.is_empty() {
            words.push(format!("--only {}", quoted(&self.only.join(","))));
        }
        if self.pass_at != 0.95 {
            words.push(format!("--pass-at {}", self.pass_at));
        }
        if self.fail_at != 0.05 {
            words.push(format!("--fail-at {}", self.fail_at));
        }
        words.join(" ")
    }
}

/// A word for a shell: in quotes unless it is plain.
fn quoted(word: &str) -> String {
    let plain = |c: char| c.is_ascii_alphanumeric() || "/._-,+=:@%".contains(c);
    if !word.is_empty() && word.chars().all(plain) {
        word.to_owned()
    } else {
        format!("'{}'", word.replace('\'', "'\\''"))
    }
}

/// `stem-2.md` for the second document of `stem.yaml`; of two files with one stem the later gets another number.
fn file_name(assessment: &Assessment, format: Format, taken: &mut BTreeSet<String>) -> String {
    let path = Path::new(&assessment.file);
    let stem = path.file_stem().map(|stem| stem.to_string_lossy().into_owned()).filter(|stem| stem != "-");
    let stem = stem.unwrap_or_else(|| "candidate".to_owned());
    let names = (assessment.document..).map(|number| {
        let number = if number > 1 { format!("-{number}") } else { String::new() };
        format!("{stem}{number}.{}", format.ending())
    });
    names.into_iter().find(|name| taken.insert(name.clone())).unwrap_or(stem)
}

/// Screens with progress on standard error beyond two seconds; wrong candidates are left out.
fn screen(
    catalog: &Catalog,
    candidates: &[Candidate],
    asked: &Asked,
    problems: &mut Problems,
) -> Vec<Assessment> {
    let start = Instant::now();
    let shown = Mutex::new(false);
    let visible = stderr().is_terminal();
    let progress = |done: usize| {
        if visible && start.elapsed() > QUIET {
            output::complain(&format!("\r{done} of {} screened", candidates.len()));
            if let Ok(mut shown) = shown.lock() {
                *shown = true;
            }
        }
    };
    let screened = study::screen(catalog, candidates, asked, &progress);
    if shown.into_inner().unwrap_or(false) {
        output::complain("\n");
    }
    let mut assessments = Vec::new();
    for answer in screened {
        match answer {
            Ok(assessment) => assessments.push(assessment),
            Err(found) => problems.append(found),
        }
    }
    assessments
}
