//! The files of a catalogue: those inside the binary, and those of overlays.

use std::path::Path;
use std::sync::Arc;

use include_dir::{Dir, include_dir};
use sha2::{Digest, Sha256};

use crate::text::{Problem, Problems, Source, neighbour};

static EMBEDDED: Dir<'_> = include_dir!("$CARGO_MANIFEST_DIR/catalogs");

/// What a file of a catalogue holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Holds {
    /// `sources.yaml`
    Sources,
    /// `constants.yaml`
    Constants,
    /// `attributes.yaml`
    Attributes,
    /// `quantities.yaml`
    Quantities,
    /// `relations/*.yaml`
    Relations,
    /// `constraints/*.yaml`
    Constraints,
    /// `figures/*.yaml`
    Figures,
    /// `habitats/*.yaml`
    Habitats,
}

/// Folders of the same shape that are not part of the rules: candidates to screen, organisms with known answers,
/// and kinds, which no entry uses yet.
const BESIDE: [&str; 3] = ["candidates", "controls", "kinds"];

impl Holds {
    fn of(path: &str) -> Option<Self> {
        Some(match path.split_once('/') {
            None => match path {
                "sources.yaml" => Self::Sources,
                "constants.yaml" => Self::Constants,
                "attributes.yaml" => Self::Attributes,
                "quantities.yaml" => Self::Quantities,
                _ => return None,
            },
            Some((folder, file)) if !file.contains('/') => match folder {
                "relations" => Self::Relations,
                "constraints" => Self::Constraints,
                "figures" => Self::Figures,
                "habitats" => Self::Habitats,
                _ => return None,
            },
            Some(_) => return None,
        })
    }
}

/// One file of a catalogue.
#[derive(Clone, Debug)]
pub(super) struct File {
    /// What it holds.
    pub(super) holds: Holds,
    /// Its text.
    pub(super) source: Arc<Source>,
    /// Whether it came from an overlay.
    pub(super) overlaid: bool,
}

/// The files inside the binary, in order of path.
#[must_use]
pub(super) fn embedded() -> Vec<File> {
    let mut found = Vec::new();
    collect_embedded(&EMBEDDED, &mut found);
    found.sort_by(|a, b| a.source.name.cmp(&b.source.name));
    found
}

fn collect_embedded(folder: &Dir<'_>, found: &mut Vec<File>) {
    for file in folder.files() {
        let path = file.path().to_string_lossy().replace('\\', "/");
        if let (Some(holds), Some(text)) = (Holds::of(&path), file.contents_utf8()) {
            let source = Arc::new(Source { name: format!("catalogs/{path}"), text: text.to_owned() });
            found.push(File { holds, source, overlaid: false });
        }
    }
    for folder in folder.dirs() {
        collect_embedded(folder, found);
    }
}

/// The YAML files of an overlay, in order of path. A YAML file that has no place in a catalogue is a problem.
pub(super) fn overlay(folder: &Path, problems: &mut Problems) -> Vec<File> {
    let mut found = Vec::new();
    if folder.is_dir() {
        collect_overlay(folder, "", &mut found, problems);
    } else {
        let name = folder.display().to_string();
        let state = if folder.exists() { "is not a folder" } else { "does not exist" };
        problems.push(
            Problem::whole(format!("the overlay `{name}` {state}"))
                .expected(
                    "a folder with the shape of a catalogue: quantities.yaml, relations/, constraints/, ...",
                )
                .nearest(neighbour(folder, &name)),
        );
    }
    if found.is_empty() && problems.is_empty() {
        problems.push(
            Problem::whole(format!("the overlay `{}` holds no files of a catalogue", folder.display()))
                .expected("quantities.yaml, sources.yaml, relations/*.yaml, constraints/*.yaml, ..."),
        );
    }
    found
}

/// Files given as paths inside a catalogue and texts, in the order given. A path that has no place there is a problem.
pub(super) fn given(texts: &[(&str, &str)], overlaid: bool, problems: &mut Problems) -> Vec<File> {
    let mut found = Vec::new();
    for (path, text) in texts {
        match Holds::of(path) {
            Some(holds) => found.push(File { holds, source: Source::new(*path, *text), overlaid }),
            None => problems.push(misplaced(path)),
        }
    }
    found
}

fn misplaced(path: &str) -> Problem {
    Problem::whole(format!("`{path}` has no place in a catalogue")).expected(
        "quantities.yaml, attributes.yaml, constants.yaml, sources.yaml, or a file in relations/, constraints/, \
         figures/ or habitats/",
    )
}

fn collect_overlay(root: &Path, below: &str, found: &mut Vec<File>, problems: &mut Problems) {
    let folder = root.join(below);
    let entries = match std::fs::read_dir(&folder) {
        Ok(entries) => entries,
        Err(error) => {
            let message = format!("the folder `{}` cannot be read: {}", folder.display(), error.kind());
            problems.push(Problem::whole(message));
            return;
        }
    };
    let mut names: Vec<String> =
        entries.flatten().map(|entry| entry.file_name().to_string_lossy().into_owned()).collect();
    names.sort();
    for name in names {
        if name.starts_with('.') {
            continue;
        }
        let path = if below.is_empty() { name.clone() } else { format!("{below}/{name}") };
        let full = root.join(&path);
        if full.is_dir() {
            if !below.is_empty() {
                problems.push(
                    Problem::whole(format!("the folder `{}` stands too deep", full.display()))
                        .expected(format!("its files straight in `{}`", folder.display())),
                );
            } else if !BESIDE.contains(&name.as_str()) {
                collect_overlay(root, &path, found, problems);
            }
        } else if name.ends_with(".yml") {
            problems.push(
                Problem::whole(format!("`{}` does not end in `.yaml`", full.display()))
                    .expected(format!("`{}aml`", full.display().to_string().trim_end_matches("ml"))),
            );
        } else if name.ends_with(".yaml") {
            match Holds::of(&path) {
                Some(holds) => match Source::from_file(&full) {
                    Ok(source) => found.push(File { holds, source, overlaid: true }),
                    Err(problem) => problems.push(problem),
                },
                None => problems.push(misplaced(&full.display().to_string())),
            }
        }
    }
}

/// SHA-256 over names and contents, hexadecimal: says which catalogue answered.
#[must_use]
pub(super) fn digest(files: &[File]) -> String {
    let mut hasher = Sha256::new();
    for file in files {
        // The place of an overlay on this machine does not matter, what it holds does.
        let name = if file.overlaid { "overlay" } else { file.source.name.as_str() };
        for part in [name, file.source.text.as_str()] {
            hasher.update((part.len() as u64).to_le_bytes());
            hasher.update(part.as_bytes());
        }
    }
    hasher.finalize().iter().map(|byte| format!("{byte:02x}")).collect()
}
