//! Bad input: a gallery of wrong files, each with the whole message that the program must give for it.
//!
//! `tests/wrong/` holds folders by subject. Every `NAME.txt` in them is a case: its first line is the command, run in that
//! folder, the rest is what stands on standard error; standard output stays empty and the status is 2. HYPOBIONT_REWRITE
//! writes the messages anew: read each as somebody who sees it for the first time.

mod monsters;

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};
use std::process::Command;

use rayon::iter::{IntoParallelRefIterator, ParallelIterator};

/// The folder of the gallery.
fn gallery() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/wrong")
}

/// What a folder holds, in order.
fn listed(folder: &Path) -> Vec<PathBuf> {
    let mut found: Vec<PathBuf> =
        std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    found.sort();
    found
}

/// The cases of the gallery: the file that holds the command and the message.
fn cases() -> Vec<PathBuf> {
    let folders = listed(&gallery()).into_iter().filter(|path| path.is_dir());
    let files = folders.flat_map(|folder| listed(&folder));
    files.filter(|path| path.extension().is_some_and(|ending| ending == "txt")).collect()
}

/// Runs one case and says how it differs from what was approved.
fn differs(case: &Path) -> Option<String> {
    let approved = std::fs::read_to_string(case).unwrap();
    let command = approved.lines().next().unwrap_or_default();
    let Some(arguments) = command.strip_prefix("$ hypobiont ") else {
        return Some(format!("{}: the first line is not `$ hypobiont ...`", case.display()));
    };
    let ended = Command::new(env!("CARGO_BIN_EXE_hypobiont"))
        .args(arguments.split_whitespace())
        .current_dir(case.parent().unwrap())
        .output()
        .unwrap();
    let (stdout, stderr) =
        (String::from_utf8(ended.stdout).unwrap(), String::from_utf8(ended.stderr).unwrap());
    if ended.status.code() != Some(2) || !stdout.is_empty() || stderr.is_empty() {
        return Some(format!("{}: {:?}, {stdout:?}, {stderr:?}", case.display(), ended.status));
    }
    if stderr.contains(env!("CARGO_MANIFEST_DIR")) {
        return Some(format!("{}: a path of this machine stands in\n{stderr}", case.display()));
    }
    let found = format!("{command}\n\n{stderr}");
    if found == approved {
        return None;
    }
    if std::env::var_os("HYPOBIONT_REWRITE").is_some() {
        std::fs::write(case, found).unwrap();
        return None;
    }
    Some(format!("--- {} should say\n{approved}\n--- but says\n{found}", case.display()))
}

#[test]
fn every_wrong_input_gets_its_whole_message_and_status_2() {
    let cases = cases();
    assert!(cases.len() > 200, "only {} cases", cases.len());
    let wrong: Vec<String> = cases.par_iter().filter_map(|case| differs(case)).collect();
    assert!(wrong.is_empty(), "{} of {}\n\n{}", wrong.len(), cases.len(), wrong.join("\n"));
}

#[test]
fn every_file_of_the_gallery_belongs_to_a_case() {
    let mut unused = BTreeSet::new();
    for folder in listed(&gallery()).into_iter().filter(|path| path.is_dir()) {
        let all: String =
            listed(&folder).iter().filter_map(|path| std::fs::read_to_string(path).ok()).collect();
        for path in listed(&folder) {
            let name = path.file_name().unwrap().to_str().unwrap();
            if !name.ends_with(".txt") && !all.contains(name) {
                unused.insert(path);
            }
        }
    }
    assert!(unused.is_empty(), "{unused:#?}");
}
