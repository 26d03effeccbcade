//! `hypobiont catalog` and `hypobiont new`: what the catalogue holds, and a candidate drafted from it.

use std::io::{IsTerminal, stdout};

use clap::{Args, Subcommand, ValueEnum};

use super::{Ending, Look, Overlays, output, report};
use crate::catalog::Catalog;
use crate::report::entries;
use crate::study;
use crate::text::{Problem, Problems, nearest};

#[derive(Debug, Args)]
pub(super) struct Ask {
    #[command(subcommand)]
    about: About,
}

#[derive(Debug, Subcommand)]
enum About {
    /// A line for each entry
    List {
        /// What to list
        #[arg(value_name = "WHAT", default_value = "constraints")]
        what: What,
        /// Only what concerns this body plan
        #[arg(long, value_name = "P")]
        body_plan: Option<String>,
        #[command(flatten)]
        overlays: Overlays,
        #[command(flatten)]
        look: Look,
    },
    /// One entry in full: formula, numbers, range, meaning, exceptions, sources
    Show {
        /// An id or the name of a quantity, attribute, constant, habitat or source
        #[arg(value_name = "ID")]
        id: String,
        #[command(flatten)]
        overlays: Overlays,
        #[command(flatten)]
        look: Look,
    },
    /// Read the catalogue, with overlays if given, and say what is wrong with it
    Check {
        #[command(flatten)]
        overlays: Overlays,
    },
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum What {
    /// Limits: what is available against what is required
    Constraints,
    /// How one quantity follows from others
    Relations,
    /// Numbers worth reporting without a verdict
    Figures,
    /// The dictionary
    Quantities,
    /// Words that classify candidates
    Attributes,
    /// Constants
    Constants,
    /// Named environments
    Habitats,
    /// Works cited
    Sources,
}

#[derive(Debug, Args)]
pub(super) struct New {
    /// The body plan of the candidate
    #[arg(long, value_name = "P")]
    body_plan: String,
    #[command(flatten)]
    overlays: Overlays,
}

fn load(overlays: &Overlays) -> Result<Catalog, Ending> {
    Catalog::load(&overlays.folders).map_err(|problems| {
        report(&problems);
        Ending::BadInput
    })
}

fn refuse(problem: Problem) -> Ending {
    let mut problems = Problems::new();
    problems.push(problem);
    report(&problems);
    Ending::BadInput
}

/// The body plan, if the catalogue knows it.
fn known_body_plan(catalog: &Catalog, word: &str) -> Result<(), Ending> {
    let words: Vec<&str> = catalog
        .attributes
        .get("body_plan")
        .map(|attribute| attribute.words.keys().map(String::as_str).collect())
        .unwrap_or_default();
    if words.contains(&word) {
        return Ok(());
    }
    let problem = Problem::whole(format!("`{word}` is not a body plan"))
        .expected(format!("one of {}", words.join(", ")))
        .nearest(nearest(word, words.iter().copied()));
    Err(refuse(problem))
}

impl Ask {
    pub(super) fn run(&self) -> Ending {
        self.answer().unwrap_or_else(|ending| ending)
    }

    fn answer(&self) -> Result<Ending, Ending> {
        match &self.about {
            About::List { what, body_plan, overlays, look } => {
                let catalog = load(overlays)?;
                if let Some(word) = body_plan {
                    known_body_plan(&catalog, word)?;
                }
                let body_plan = body_plan.as_deref();
                let width = look.width(stdout().is_terminal());
                let text = match what {
                    What::Constraints => entries::constraints(&catalog, body_plan, width),
                    What::Relations => entries::relations(&catalog, body_plan, width),
                    What::Figures => entries::figures(&catalog, body_plan, width),
                    What::Quantities => {
                        let opens = body_plan.map(|word| study::opens(&catalog, word));
                        entries::quantities(&catalog, opens.as_ref(), width)
                    }
                    What::Attributes => entries::attributes(&catalog, width),
                    What::Constants => entries::constants(&catalog, width),
                    What::Habitats => entries::habitats(&catalog, width),
                    What::Sources => entries::sources(&catalog, width),
                };
                Ok(output::print(&text))
            }
            About::Show { id, overlays, look } => {
                let catalog = load(overlays)?;
                let width = look.width(stdout().is_terminal());
                match entries::show(&catalog, id, width) {
                    Some(text) => Ok(output::print(&text)),
                    None => {
                        let names = entries::all_names(&catalog);
                        Err(refuse(
                            Problem::whole(format!("`{id}` is not in the catalogue"))
                                .expected("an id or name that `hypobiont catalog list` shows")
                                .nearest(nearest(id, names.iter().map(String::as_str))),
                        ))
                    }
                }
            }
            About::Check { overlays } => {
                let catalog = load(overlays)?;
                Ok(output::print(&entries::counts(&catalog)))
            }
        }
    }
}

impl New {
    pub(super) fn run(&self) -> Ending {
        let drafted = load(&self.overlays).and_then(|catalog| {
            known_body_plan(&catalog, &self.body_plan)?;
            Ok(output::print(&study::draft(&catalog, &self.body_plan)))
        });
        drafted.unwrap_or_else(|ending| ending)
    }
}
