//! Every kind of problem has a case: messages are collected from the source, and each must stand in the gallery.

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

use super::{cases, listed};

/// Modules whose problems a person can be told.
const MODULES: [&str; 8] = ["text", "quantity", "formula", "catalog", "candidate", "plan", "judge", "cli"];

/// What begins a call whose first text is a message.
const CALLS: [&str; 7] =
    ["Problem::at(", "Problem::whole(", "Fault::new(", ".problem(", ".refuse(", "fault(", "find_fault("];

/// What begins a message that has a name, or one of several.
const NAMED: [&str; 4] =
    ["let message = ", "let (message, ", "let written = format!(", "MISSING_BLANK: &str = "];

/// Messages that no case can bring about, each with the reason.
const WITHOUT_CASE: [(&str, &str); 3] = [
    (
        "versions of YAML disagree on how this is to be read",
        "every known way to differ has a sentence of its own",
    ),
    ("`{}` is not a table", "a text in memory can only have rows of unequal lengths"),
    ("the folder `{}` cannot be read: {}", "whoever runs the tests may be allowed to read every folder"),
];

/// A text in quotes at the start of `code`, unescaped, and its length with both quotes.
fn quoted(code: &str) -> Option<(String, usize)> {
    let mut text = String::new();
    let mut rest = code.strip_prefix('"')?;
    loop {
        let c = rest.chars().next()?;
        rest = &rest[c.len_utf8()..];
        match c {
            '"' => return Some((text, code.len() - rest.len())),
            '\\' if rest.starts_with('\n') => rest = rest.trim_start(),
            '\\' => {
                let escaped = rest.chars().next()?;
                text.push(escaped);
                rest = &rest[escaped.len_utf8()..];
            }
            _ => text.push(c),
        }
    }
}

/// The texts in quotes of the call or statement that begins before `code`.
fn texts(code: &str) -> Vec<String> {
    let mut found = Vec::new();
    let (mut at, mut depth) = (0, 0);
    while let Some(c) = code[at..].chars().next() {
        let mut length = c.len_utf8();
        match c {
            '(' | '{' | '[' => depth += 1,
            ')' | '}' | ']' if depth == 0 => break,
            ')' | '}' | ']' => depth -= 1,
            ';' if depth == 0 => break,
            // A character in single quotes is no bracket; a lifetime has no second quote so near.
            '\'' => {
                let escaped = usize::from(code[at + 1..].starts_with('\\'));
                let inner = code[at + 1 + escaped..].chars().next().map_or(0, char::len_utf8);
                if code[at + 1 + escaped + inner..].starts_with('\'') {
                    length = 2 + escaped + inner;
                }
            }
            '"' => {
                if let Some((text, quoted)) = quoted(&code[at..]) {
                    found.push(text);
                    length = quoted;
                }
            }
            _ => {}
        }
        at += length;
    }
    found
}

fn source_files(folder: &Path) -> Vec<PathBuf> {
    let mut files = Vec::new();
    for path in listed(folder) {
        let name = path.file_name().unwrap().to_str().unwrap();
        if path.is_dir() && name != "tests" {
            files.extend(source_files(&path));
        } else if name.ends_with(".rs") && name != "tests.rs" {
            files.push(path);
        }
    }
    files
}

/// The messages in a source file, with `{...}` where something is put in.
fn messages(code: &str) -> BTreeSet<String> {
    let code = code.split("#[cfg(test)]\nmod tests {").next().unwrap();
    let after =
        |marker: &'static str| code.match_indices(marker).map(move |(at, _)| &code[at + marker.len()..]);
    let called = CALLS.into_iter().flat_map(after).filter_map(|code| texts(code).into_iter().next());
    let named = NAMED.into_iter().flat_map(after).flat_map(texts);
    called.chain(named).filter(|text| text.contains(' ')).collect()
}

/// The parts of a message that stand in it as they are.
fn fixed(message: &str) -> Vec<String> {
    let mut parts = vec![String::new()];
    let mut rest = message.replace("{{", "\u{1}").replace("}}", "\u{2}");
    while let Some((before, after)) = rest.split_once('{') {
        parts.last_mut().unwrap().push_str(before);
        parts.push(String::new());
        rest = after.split_once('}').unwrap().1.to_owned();
    }
    parts.last_mut().unwrap().push_str(&rest);
    parts.iter().map(|part| part.replace('\u{1}', "{").replace('\u{2}', "}")).collect()
}

/// Whether a line holds all the parts of a message in their order.
fn says(line: &str, parts: &[String]) -> bool {
    let mut rest = line;
    parts.iter().all(|part| match rest.find(part.as_str()) {
        Some(at) => {
            rest = &rest[at + part.len()..];
            true
        }
        None => false,
    })
}

#[test]
fn every_kind_of_problem_has_a_case() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let read = |path: PathBuf| std::fs::read_to_string(path).unwrap();
    let mut said: String = cases().into_iter().map(read).collect();
    // Formulas have a gallery of their own, and some files are made when the test runs.
    said += &read(root.join("src/formula/tests/wrong-formulas.txt"));
    said += &read(root.join("src/formula/tests/faults.rs"));
    said += &read(root.join("tests/wrong_input/monsters.rs"));
    let mut all = 0;
    let mut silent = Vec::new();
    for module in MODULES {
        for path in source_files(&root.join("src").join(module)) {
            for message in messages(&read(path.clone())) {
                all += 1;
                let parts = fixed(&message);
                let excused = WITHOUT_CASE.iter().any(|(excused, _)| *excused == message);
                if !excused && !said.lines().any(|line| says(line, &parts)) {
                    silent.push(format!("{}: {message}", path.strip_prefix(root).unwrap().display()));
                }
            }
        }
    }
    assert!(all > 250, "only {all} messages were found: has the way of writing them changed?");
    assert!(
        silent.is_empty(),
        "{} of {all} have no case in tests/wrong:\n{}",
        silent.len(),
        silent.join("\n")
    );
}
