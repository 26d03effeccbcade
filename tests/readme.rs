//! The documents tell the truth: console blocks are run, and files they show are those that are shipped.

use std::path::Path;
use std::process::Command;

use crate::snapshot::rewriting;

const DOCUMENTS: [&str; 5] =
    ["README.md", "DEVELOPERS.md", "docs/formats.md", "docs/method.md", "docs/formula-language.md"];

/// What follows a marker in a document: a fenced block that must say exactly `wanted`.
fn checked(text: &str, document: &str, wrong: &mut Vec<String>) -> String {
    let mut lines = text.lines();
    let mut out = String::new();
    while let Some(line) = lines.next() {
        out += line;
        out.push('\n');
        let (opening, wanted) = if let Some(path) = marked_file(line) {
            ("```yaml", std::fs::read_to_string(root().join(path)).unwrap())
        } else if line == "```console" {
            let Some(command) = lines.next() else { break };
            out += command;
            out.push('\n');
            ("", answer(command, document))
        } else {
            continue;
        };
        let mut shown = String::new();
        let mut rest = lines.clone();
        if !opening.is_empty() {
            if rest.next() != Some(opening) {
                // No block yet: writing it is what rewriting does.
                rest = lines.clone();
                shown = "\0".to_owned();
            }
            out += &format!("{opening}\n");
        }
        if shown.is_empty() {
            for line in rest.by_ref().take_while(|line| *line != "```") {
                shown += line;
                shown.push('\n');
            }
            lines = rest;
        }
        if shown != wanted {
            wrong.push(format!("{document}: after `{line}`\n--- shown\n{shown}--- is\n{wanted}"));
        }
        out += &wanted;
        out += "```\n";
    }
    out
}

fn marked_file(line: &str) -> Option<&str> {
    line.strip_prefix("<!-- file ")?.strip_suffix(" -->")
}

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// What the program prints for `$ hypobiont ...`.
fn answer(command: &str, document: &str) -> String {
    let arguments = command.strip_prefix("$ hypobiont ").unwrap_or_else(|| panic!("{document}: {command}"));
    let output = Command::new(env!("CARGO_BIN_EXE_hypobiont"))
        .args(arguments.split_whitespace())
        .current_dir(root())
        .output()
        .unwrap();
    assert!(output.stderr.is_empty(), "{command}: {}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap()
}

#[test]
fn documents_show_what_the_program_prints() {
    let mut wrong = Vec::new();
    let mut blocks = 0;
    for document in DOCUMENTS {
        let path = root().join(document);
        let text = std::fs::read_to_string(&path).unwrap();
        blocks += text.lines().filter(|line| *line == "```console").count();
        let right = checked(&text, document, &mut wrong);
        if rewriting() {
            std::fs::write(path, right).unwrap();
        }
    }
    assert!(blocks >= 2, "the README shows a session");
    assert!(rewriting() || wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn the_readme_names_the_two_commands() {
    let text = std::fs::read_to_string(root().join("README.md")).unwrap();
    let commands: Vec<&str> = text.lines().filter(|line| line.starts_with("cargo ")).collect();
    assert_eq!(commands.len(), 2, "{commands:?}");
    let candidate = commands[0].rsplit(' ').next().unwrap();
    assert!(root().join(candidate).is_file(), "{candidate}");
    assert!(commands[1].starts_with("cargo test "));
}

#[test]
fn every_link_in_the_documents_leads_somewhere() {
    for document in DOCUMENTS {
        let path = root().join(document);
        let text = std::fs::read_to_string(&path).unwrap();
        for link in text.split("](").skip(1).filter_map(|rest| rest.split(')').next()) {
            let file = link.split('#').next().unwrap();
            if !file.is_empty() && !file.contains("://") {
                assert!(path.parent().unwrap().join(file).exists(), "{document}: {link}");
            }
        }
    }
}
