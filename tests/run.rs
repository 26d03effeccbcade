//! Starts the program on candidates and overlays written for one test.

use std::collections::BTreeMap;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};
use std::sync::atomic::{AtomicU32, Ordering};

use serde_json::Value;

static NUMBER: AtomicU32 = AtomicU32::new(0);

/// One run of the program in a folder of its own.
#[must_use]
pub(crate) struct Run {
    folder: PathBuf,
    arguments: Vec<String>,
    environment: BTreeMap<String, String>,
    input: Option<Vec<u8>>,
}

impl Run {
    /// A run with these arguments, split at blanks.
    pub(crate) fn new(arguments: &str) -> Self {
        let number = NUMBER.fetch_add(1, Ordering::Relaxed);
        let folder = std::env::temp_dir().join(format!("hypobiont-test-{}-{number}", std::process::id()));
        std::fs::create_dir_all(&folder).unwrap();
        Self {
            folder,
            arguments: arguments.split_whitespace().map(str::to_owned).collect(),
            environment: BTreeMap::new(),
            input: None,
        }
    }

    /// Writes a file into the folder of the run.
    pub(crate) fn file(self, name: &str, text: impl AsRef<[u8]>) -> Self {
        let path = self.folder.join(name);
        std::fs::create_dir_all(path.parent().unwrap()).unwrap();
        std::fs::write(path, text).unwrap();
        self
    }

    /// One more argument.
    pub(crate) fn arg(mut self, argument: &str) -> Self {
        self.arguments.push(argument.to_owned());
        self
    }

    /// A variable of the environment.
    pub(crate) fn variable(mut self, name: &str, value: &str) -> Self {
        self.environment.insert(name.to_owned(), value.to_owned());
        self
    }

    /// What stands on standard input.
    pub(crate) fn input(mut self, bytes: impl AsRef<[u8]>) -> Self {
        self.input = Some(bytes.as_ref().to_vec());
        self
    }

    /// The folder of the run.
    pub(crate) fn folder(&self) -> &Path {
        &self.folder
    }

    /// Runs it.
    #[track_caller]
    pub(crate) fn output(&self) -> Ended {
        let mut command = Command::new(env!("CARGO_BIN_EXE_hypobiont"));
        command
            .args(&self.arguments)
            .current_dir(&self.folder)
            .envs(&self.environment)
            .stdin(if self.input.is_some() { Stdio::piped() } else { Stdio::null() })
            .stdout(Stdio::piped())
            .stderr(Stdio::piped());
        let mut child = command.spawn().unwrap();
        if let (Some(input), Some(mut stdin)) = (&self.input, child.stdin.take()) {
            // The program may stop reading before the end.
            let _ = stdin.write_all(input);
        }
        let Output { status, stdout, stderr } = child.wait_with_output().unwrap();
        let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
        Ended { status: status.code(), stdout: text(stdout), stderr: text(stderr) }
    }

    /// Runs it, expects status 0 and gives the JSON it printed.
    #[track_caller]
    pub(crate) fn json(&self) -> Value {
        let ended = self.output();
        assert_eq!(ended.status, Some(0), "{}", ended.stderr);
        serde_json::from_str(&ended.stdout).unwrap()
    }
}

impl Drop for Run {
    fn drop(&mut self) {
        let _ = std::fs::remove_dir_all(&self.folder);
    }
}

/// How a run ended.
#[derive(Debug)]
pub(crate) struct Ended {
    pub(crate) status: Option<i32>,
    pub(crate) stdout: String,
    pub(crate) stderr: String,
}

/// Screens one candidate as JSON.
#[track_caller]
pub(crate) fn screen(candidate: &str) -> Value {
    Run::new("screen c.yaml --format json").file("c.yaml", candidate).json()
}

/// One constraint of an assessment.
#[track_caller]
pub(crate) fn constraint<'a>(assessment: &'a Value, id: &str) -> &'a Value {
    let list = assessment["constraints"].as_array().unwrap();
    list.iter().find(|constraint| constraint["id"] == id).unwrap_or_else(|| {
        let ids: Vec<&str> = list.iter().filter_map(|constraint| constraint["id"].as_str()).collect();
        panic!("no constraint {id} among {ids:?}")
    })
}

/// The median margin of a constraint in dex.
#[track_caller]
pub(crate) fn margin(assessment: &Value, id: &str) -> f64 {
    constraint(assessment, id)["margin_dex"]["median"].as_f64().unwrap()
}

/// The overall verdict.
#[track_caller]
pub(crate) fn overall(assessment: &Value) -> &str {
    assessment["overall"]["verdict"].as_str().unwrap()
}
