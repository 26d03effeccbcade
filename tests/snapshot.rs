//! Whole outputs compared with files that were read and approved.

use std::fs;
use std::path::Path;

/// Whether approved outputs are to be written anew.
pub(crate) fn rewriting() -> bool {
    std::env::var_os("HYPOBIONT_REWRITE").is_some()
}

/// Compares a text with `tests/snapshots/NAME`; rewrites the file when HYPOBIONT_REWRITE is set.
#[track_caller]
pub(crate) fn compare(name: &str, text: &str) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/snapshots").join(name);
    if rewriting() {
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(&path, text).unwrap();
        return;
    }
    let expected = fs::read_to_string(&path)
        .unwrap_or_else(|error| panic!("{}: {error}; set HYPOBIONT_REWRITE to write it", path.display()));
    let differs = expected.lines().zip(text.lines()).position(|(expected, found)| expected != found);
    let line = differs.unwrap_or(expected.lines().count().min(text.lines().count()));
    let at = |text: &str| text.lines().nth(line).unwrap_or("(the end)").to_owned();
    assert!(
        expected == text,
        "{name} differs in line {}\nexpected: {}\nfound:    {}",
        line + 1,
        at(&expected),
        at(text)
    );
}
