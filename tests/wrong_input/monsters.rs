//! Hostile input that is made when the test runs, and outputs that cannot be written.

use std::fs::File;
use std::io::{Read, Write};
use std::process::{Command, Stdio};

use crate::run::Run;

const FINE: &str = "hypobiont: 1\nname: fine\nattributes: { body_plan: prokaryotic-cell, form: sphere }\n\
                    organism: { diameter: 600 ± 50 nm }\nenvironment: { temperature: 20 °C }\n";

/// Refused with status 2 and one of these words; nothing on standard output, no panic.
#[track_caller]
fn refused(run: &Run, says: &str) {
    let ended = run.output();
    assert_eq!(ended.status, Some(2), "{}{}", ended.stdout, ended.stderr);
    assert!(ended.stdout.is_empty());
    assert!(ended.stderr.contains(says), "expected `{says}` in\n{}", ended.stderr);
    assert!(!ended.stderr.contains("panicked"), "{}", ended.stderr);
    assert!(ended.stderr.len() < 64 << 10, "{} bytes of messages", ended.stderr.len());
}

#[test]
fn deep_nests_are_refused_at_once() {
    for opener in ["[", "{a: ", "- ", "? "] {
        let monster = opener.repeat(100_000);
        refused(&Run::new("screen c.yaml").file("c.yaml", &monster), "c.yaml:1:");
    }
}

#[test]
fn a_bomb_of_aliases_is_refused_at_the_first() {
    let mut bomb = "a0: &a0 [x, x, x, x, x, x, x, x, x]\n".to_owned();
    for level in 1..30 {
        let below = level - 1;
        bomb += &format!("a{level}: &a{level} [{}]\n", vec![format!("*a{below}"); 9].join(", "));
    }
    refused(&Run::new("screen c.yaml").file("c.yaml", &bomb), "anchor");
}

#[test]
fn bytes_that_are_no_text_are_refused() {
    refused(
        &Run::new("screen c.yaml").file("c.yaml", b"hypobiont: 1\0name: x\n"),
        "byte 13, in line 1, is zero",
    );
    refused(&Run::new("screen c.yaml").file("c.yaml", b"hypobiont: 1\nname: 210 \xb1 30\n"), "UTF-8");
    refused(&Run::new("screen c.yaml").file("c.yaml", b"\xff\xfeh\0y\0"), "UTF-16");
}

#[test]
fn what_is_no_file_of_sensible_size_is_refused() {
    let sparse = Run::new("screen c.yaml").file("c.yaml", "");
    File::options().write(true).open(sparse.folder().join("c.yaml")).unwrap().set_len(1 << 30).unwrap();
    refused(&sparse, "`c.yaml` is larger than 16 MiB");
    refused(&Run::new("screen ."), "folder");
    refused(&Run::new("screen missing.yaml"), "does not exist");
    #[cfg(unix)]
    {
        let pipe = Run::new("screen c.yaml");
        let made = Command::new("mkfifo").arg(pipe.folder().join("c.yaml")).status().unwrap();
        assert!(made.success());
        refused(&pipe, "`c.yaml` is no regular file");
    }
}

#[test]
fn a_large_file_of_one_kind_of_mistake_gets_a_bounded_answer() {
    let large = "- a: 1\n".repeat(200_000);
    let limit = "the document holds more than 100000 keys and values";
    refused(&Run::new("screen c.yaml").file("c.yaml", &large), limit);
}

#[test]
fn more_documents_than_allowed_are_refused() {
    let many = "---\na: 1\n".repeat(65_537);
    let limit = "the file holds more than 65536 documents";
    refused(&Run::new("screen c.yaml").file("c.yaml", &many), limit);
}

#[test]
fn standard_input_is_read_and_wrong_documents_leave_right_ones_screened() {
    let ended = Run::new("screen - --format json --draws 200")
        .input(format!("{FINE}---\nname: [\n---\n{FINE}"))
        .output();
    assert_eq!(ended.status, Some(2));
    assert!(ended.stderr.contains("-:"), "{}", ended.stderr);
    let found: serde_json::Value = serde_json::from_str(&ended.stdout).unwrap();
    assert_eq!(found.as_array().unwrap().len(), 2);
    assert_eq!(found[1]["candidate"]["document"], 3);
}

#[test]
fn a_closed_pipe_ends_quietly() {
    let run = Run::new("").file("c.yaml", format!("{FINE}---\n").repeat(40));
    let mut child = Command::new(env!("CARGO_BIN_EXE_hypobiont"))
        .args(["screen", "c.yaml", "--draws", "50"])
        .current_dir(run.folder())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    // The reader takes ten bytes and goes away.
    let mut reader = child.stdout.take().unwrap();
    reader.read_exact(&mut [0; 10]).unwrap();
    drop(reader);
    let ended = child.wait_with_output().unwrap();
    assert_eq!(String::from_utf8(ended.stderr).unwrap(), "");
    assert_eq!(ended.status.code(), Some(0));
}

#[test]
fn outputs_that_cannot_be_written_end_with_status_1() {
    let ended = Run::new("screen c.yaml --draws 50 --output missing/folder/report.json")
        .file("c.yaml", FINE)
        .output();
    assert_eq!(ended.status, Some(1));
    assert!(ended.stderr.contains("cannot write `missing/folder/report.json`"), "{}", ended.stderr);
    #[cfg(target_os = "linux")]
    {
        let ended = Run::new("screen c.yaml --draws 50 --output /dev/full").file("c.yaml", FINE).output();
        assert_eq!(ended.status, Some(1));
        assert!(ended.stderr.contains("cannot write `/dev/full`"), "{}", ended.stderr);
        let run = Run::new("").file("c.yaml", FINE);
        let ended = Command::new(env!("CARGO_BIN_EXE_hypobiont"))
            .args(["screen", "c.yaml", "--draws", "50"])
            .current_dir(run.folder())
            .stdout(File::options().write(true).open("/dev/full").unwrap())
            .output()
            .unwrap();
        assert_eq!(ended.status.code(), Some(1));
        assert!(String::from_utf8(ended.stderr).unwrap().contains("standard output"));
    }
}

#[test]
fn files_are_whole_and_one_a_candidate() {
    let run = Run::new("screen c.yaml --draws 50 --format json --output reports")
        .file("c.yaml", format!("{FINE}---\n{FINE}"));
    std::fs::create_dir(run.folder().join("reports")).unwrap();
    assert_eq!(run.output().status, Some(0));
    let mut names: Vec<String> = std::fs::read_dir(run.folder().join("reports"))
        .unwrap()
        .map(|entry| entry.unwrap().file_name().into_string().unwrap())
        .collect();
    names.sort();
    assert_eq!(names, ["c-2.json", "c.json"]);
    let mut text = String::new();
    File::open(run.folder().join("reports/c.json")).unwrap().read_to_string(&mut text).unwrap();
    assert_eq!(serde_json::from_str::<serde_json::Value>(&text).unwrap()["format"], 1);
    std::io::stderr().flush().unwrap();
}

/// A candidate that ends in whatever makes it wrong, of nearly 16 MiB.
fn of_almost_the_largest_size(piece: &str, head: &str) -> String {
    format!("{head}{}", piece.repeat(((16 << 20) - head.len()) / piece.len()))
}

#[test]
fn the_largest_files_of_any_shape_get_a_bounded_answer() {
    let head = "hypobiont: 1\nname: large\nattributes: { body_plan: other }\n";
    let organism = format!("{head}organism:\n  diameter: {{ values: [");
    for (piece, head, says) in [
        ("- 1\n", "", "the document holds more than 100000 keys and values"),
        ("1,", "[", "the document holds more than 100000 keys and values"),
        ("a: b, ", "!t {", "the document holds more than 100000 keys and values"),
        ("1 nm, ", organism.as_str(), "the document holds more than 100000 keys and values"),
        ("---\n", "", "the file holds more than 65536 documents"),
        ("word ", "", "the document is the text"),
        ("\n", "", "is empty, or holds nothing but remarks"),
        ("a: |\n b\n", "", "`a` is repeated"),
        (": ", "", "no key stands before the colon"),
        ("\"", "[", "c.yaml:1:"),
    ] {
        let run = Run::new("screen c.yaml").file("c.yaml", of_almost_the_largest_size(piece, head));
        refused(&run, says);
    }
}

#[test]
fn a_file_with_ten_mistakes_gets_ten_messages() {
    let folder = super::gallery().join("candidate");
    let ended = Command::new(env!("CARGO_BIN_EXE_hypobiont"))
        .args(["screen", "ten-mistakes.yaml"])
        .current_dir(folder)
        .output()
        .unwrap();
    let stderr = String::from_utf8(ended.stderr).unwrap();
    assert_eq!(stderr.lines().filter(|line| line.starts_with("ten-mistakes.yaml:")).count(), 10, "{stderr}");
}

#[test]
fn what_papers_and_editors_write_is_read_as_it_is_meant() {
    let plain = "{ diameter: 0.6 µm ± 50 nm, turgor_pressure: 2e5 Pa, growth_rate: 1e-5 1/s }";
    let pasted =
        "{ diameter: 0.6\u{a0}μm +/- 50 nm, turgor_pressure: 2×10⁵ Pa, growth_rate: 10^\u{2212}5 1/s }";
    let screened = |organism: &str, mark: &str, end: &str| {
        let text = FINE.replace("{ diameter: 600 ± 50 nm }", organism).replace('\n', end);
        Run::new("screen c.yaml --format json --draws 200").file("c.yaml", format!("{mark}{text}")).json()
    };
    let expected = screened(plain, "", "\n");
    assert_eq!(screened(pasted, "", "\n"), expected);
    assert_eq!(screened(plain, "\u{feff}", "\r\n"), expected);
}

#[test]
fn the_gate_turns_a_verdict_into_a_status() {
    let small = FINE.replace("600 ± 50", "90 ± 5");
    let status = |candidate: &str, gate: &str| {
        let run = Run::new("screen c.yaml --draws 500").file("c.yaml", candidate).arg("--gate").arg(gate);
        run.output().status
    };
    assert_eq!(status(FINE, "marginal"), Some(0));
    assert_eq!(status(&small, "fail"), Some(3));
    assert_eq!(status("hypobiont: 1\nname: bare\nattributes: { body_plan: tree }\n", "fail"), Some(3));
}
