//! Writing results: to standard output, or to files that are whole or not there at all.

use std::fs;
use std::io::{self, ErrorKind, Write};
use std::path::{Path, PathBuf};

use super::Ending;

/// Writes to standard output. A closed pipe ends quietly: whoever read it has what they wanted.
pub(super) fn print(text: &str) -> Ending {
    let mut stdout = io::stdout().lock();
    match stdout.write_all(text.as_bytes()).and_then(|()| stdout.flush()) {
        Ok(()) => Ending::Ran,
        Err(error) if error.kind() == ErrorKind::BrokenPipe => Ending::Ran,
        Err(error) => {
            complain(&format!("cannot write to standard output: {error}\n"));
            Ending::NotWritten
        }
    }
}

/// Says something on standard error; when that is closed there is nobody to tell.
pub(super) fn complain(text: &str) {
    let _ = io::stderr().lock().write_all(text.as_bytes());
}

/// Writes a file whole or not at all: beside its place first, then moved there.
///
/// # Errors
/// Whatever the file system says.
pub(super) fn write_whole(path: &Path, text: &str) -> io::Result<()> {
    let folder = path.parent().filter(|parent| !parent.as_os_str().is_empty()).unwrap_or(Path::new("."));
    // A device or pipe cannot be replaced by moving a file there.
    if path.exists() && !path.is_file() {
        if path.is_dir() {
            return Err(io::Error::new(ErrorKind::IsADirectory, "it is a folder"));
        }
        return fs::OpenOptions::new().write(true).open(path)?.write_all(text.as_bytes());
    }
    let name = path.file_name().ok_or_else(|| io::Error::new(ErrorKind::InvalidInput, "it names no file"))?;
    let mut beside = name.to_os_string();
    beside.push(format!(".{}.part", std::process::id()));
    let beside: PathBuf = folder.join(beside);
    let written = fs::File::create(&beside)
        .and_then(|mut file| {
            file.write_all(text.as_bytes())?;
            file.sync_all()
        })
        .and_then(|()| fs::rename(&beside, path));
    if written.is_err() {
        let _ = fs::remove_file(&beside);
    }
    written
}

/// Writes a file and says so when it cannot be done.
pub(super) fn save(path: &Path, text: &str) -> Ending {
    match write_whole(path, text) {
        Ok(()) => Ending::Ran,
        Err(error) => {
            complain(&format!("cannot write `{}`: {error}\n", path.display()));
            Ending::NotWritten
        }
    }
}
