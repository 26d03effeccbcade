//! Files and standard input as text, with nothing that could block, fill the memory or end in a panic.

use std::fs::File;
use std::io::{self, Read};
use std::path::Path;
use std::sync::Arc;

use super::problems::{Problem, nearest};
use super::source::Source;

/// The most bytes that are read of one file.
pub const MOST_BYTES: u64 = 16 << 20;

impl Source {
    /// Reads a file, or standard input for `-`; its name is the path as given.
    ///
    /// # Errors
    /// The file is missing, cannot be read, is a folder or no regular file, is larger than 16 MiB, or is no UTF-8 text.
    pub fn from_file(path: &Path) -> Result<Arc<Self>, Problem> {
        if path.as_os_str() == "-" {
            return Self::from_bytes("-", limited(io::stdin().lock(), "-")?);
        }
        Self::from_file_named(path, &path.display().to_string())
    }

    /// Reads a file under another name than its path.
    ///
    /// # Errors
    /// The same.
    pub fn from_file_named(path: &Path, name: &str) -> Result<Arc<Self>, Problem> {
        Self::from_bytes(name, file_bytes(path, name)?)
    }

    /// A text from its bytes: UTF-8, with or without a byte order mark, without zero bytes.
    ///
    /// # Errors
    /// The bytes are no such text; the problem says from where on.
    pub fn from_bytes(name: impl Into<String>, mut bytes: Vec<u8>) -> Result<Arc<Self>, Problem> {
        let name = name.into();
        if bytes.starts_with(&[0xFF, 0xFE]) || bytes.starts_with(&[0xFE, 0xFF]) {
            return Err(Problem::whole(format!("`{name}` is written in UTF-16")).expected("a text in UTF-8"));
        }
        if bytes.starts_with(&[0xEF, 0xBB, 0xBF]) {
            bytes.drain(..3);
        }
        let zero = bytes.iter().position(|&byte| byte == 0);
        let text = String::from_utf8(bytes).map_err(|error| {
            let wrong = error.utf8_error().valid_up_to();
            match zero.filter(|&zero| zero < wrong) {
                Some(zero) => binary(&name, &error.as_bytes()[..zero]),
                None => not_utf8(&name, error.as_bytes(), wrong),
            }
        })?;
        match zero {
            Some(zero) => Err(binary(&name, &text.as_bytes()[..zero])),
            None => Ok(Self::new(name, text)),
        }
    }
}

fn file_bytes(path: &Path, name: &str) -> Result<Vec<u8>, Problem> {
    let unreadable = |error: &io::Error| match error.kind() {
        io::ErrorKind::NotFound => {
            Problem::whole(format!("`{name}` does not exist")).nearest(neighbour(path, name))
        }
        kind => Problem::whole(format!("`{name}` cannot be read: {kind}")),
    };
    // The kind of file comes before opening it: opening a pipe without a writer would wait for ever.
    let metadata = path.metadata().map_err(|error| unreadable(&error))?;
    if metadata.is_dir() {
        return Err(Problem::whole(format!("`{name}` is a folder")).expected("a file"));
    }
    if !metadata.is_file() {
        return Err(Problem::whole(format!("`{name}` is no regular file"))
            .expected("a file, or `-` for standard input"));
    }
    if metadata.len() > MOST_BYTES {
        return Err(too_large(name));
    }
    limited(File::open(path).map_err(|error| unreadable(&error))?, name)
}

/// What stands in the same folder under the name nearest to that of a path where nothing is, as somebody would write it
/// who wrote the path as `name`.
#[must_use]
pub fn neighbour(path: &Path, name: &str) -> Option<String> {
    let folder = path.parent()?;
    let here = if folder.as_os_str().is_empty() { Path::new(".") } else { folder };
    let mut names: Vec<String> =
        here.read_dir().ok()?.filter_map(|entry| entry.ok()?.file_name().into_string().ok()).collect();
    // The order in a folder is anyone's guess; of names equally near the first is taken.
    names.sort();
    let last = path.file_name()?.to_str()?;
    let near = nearest(last, names.iter().map(String::as_str).filter(|name| *name != last))?;
    Some(format!("{}{near}", name.strip_suffix(last)?))
}

/// Everything a reader gives, unless it gives too much.
fn limited(reader: impl Read, name: &str) -> Result<Vec<u8>, Problem> {
    let mut bytes = Vec::new();
    let read = reader.take(MOST_BYTES + 1).read_to_end(&mut bytes);
    read.map_err(|error| Problem::whole(format!("`{name}` cannot be read: {}", error.kind())))?;
    if bytes.len() as u64 > MOST_BYTES { Err(too_large(name)) } else { Ok(bytes) }
}

fn too_large(name: &str) -> Problem {
    let limit = MOST_BYTES >> 20;
    Problem::whole(format!("`{name}` is larger than {limit} MiB")).expected("several smaller files")
}

fn binary(name: &str, before: &[u8]) -> Problem {
    let (line, byte) = (line_of(before), before.len() + 1);
    Problem::whole(format!("`{name}` is no text: byte {byte}, in line {line}, is zero"))
        .expected("a text in UTF-8")
}

fn not_utf8(name: &str, bytes: &[u8], wrong: usize) -> Problem {
    let (line, found) = (line_of(&bytes[..wrong]), bytes[wrong]);
    let message = format!("`{name}` is not UTF-8: byte {}, in line {line}, is 0x{found:02X}", wrong + 1);
    // In Latin-1, which old editors write, these bytes are the characters of the same number.
    let expected = match char::from(found) {
        c @ '\u{a0}'..='\u{ff}' => format!("a text saved as UTF-8; the byte is `{c}` in Latin-1"),
        _ => "a text saved as UTF-8".to_owned(),
    };
    Problem::whole(message).expected(expected)
}

fn line_of(before: &[u8]) -> usize {
    1 + before.iter().filter(|&&byte| byte == b'\n').count()
}

#[cfg(test)]
mod tests {
    use std::fs;
    use std::io::repeat;
    use std::path::{Path, PathBuf};
    use std::time::Instant;

    use super::{MOST_BYTES, limited};
    use crate::text::Source;

    fn refusal(bytes: &[u8]) -> String {
        Source::from_bytes("s.yaml", bytes.to_vec()).unwrap_err().to_string()
    }

    /// A folder of its own for one test.
    fn folder(name: &str) -> PathBuf {
        let folder = std::env::temp_dir().join(format!("hypobiont-reading-{name}-{}", std::process::id()));
        fs::create_dir_all(&folder).unwrap();
        folder
    }

    #[test]
    fn bytes_that_are_no_text_are_named_with_their_place() {
        assert_eq!(Source::from_bytes("s", b"\xEF\xBB\xBFa: \xC2\xB5".to_vec()).unwrap().text, "a: µ");
        assert_eq!(
            refusal(b"\xFF\xFEa\0:\0"),
            "`s.yaml` is written in UTF-16\n   expected  a text in UTF-8\n"
        );
        assert_eq!(refusal(b"\xFE\xFF\0a\0:"), refusal(b"\xFF\xFEa\0:\0"));
        assert_eq!(
            refusal(b"a: 1\nb: 210 \xB1 30 nm\n"),
            "`s.yaml` is not UTF-8: byte 13, in line 2, is 0xB1\n   expected  a text saved as UTF-8; the byte is `±` in Latin-1\n"
        );
        assert_eq!(
            refusal(b"a: \xE2\x82"),
            "`s.yaml` is not UTF-8: byte 4, in line 1, is 0xE2\n   expected  a text saved as UTF-8; the byte is `â` in Latin-1\n"
        );
        assert_eq!(
            refusal(b"\x89PNG\r\n"),
            "`s.yaml` is not UTF-8: byte 1, in line 1, is 0x89\n   expected  a text saved as UTF-8\n"
        );
        assert_eq!(
            refusal(b"a\n\0\xFF"),
            "`s.yaml` is no text: byte 3, in line 2, is zero\n   expected  a text in UTF-8\n"
        );
        assert_eq!(refusal(b"a\n\0"), refusal(b"a\n\0\xFF"));
    }

    #[test]
    fn what_is_no_readable_file_is_refused() {
        let folder = folder("refused");
        let shown = |path: &Path| {
            let problem = Source::from_file(path).unwrap_err().to_string();
            problem.replace(&folder.display().to_string(), "DIR")
        };
        fs::write(folder.join("a.yaml"), "a: 1").unwrap();
        assert_eq!(shown(&folder.join("none.yaml")), "`DIR/none.yaml` does not exist\n");
        assert_eq!(shown(&folder), "`DIR` is a folder\n   expected  a file\n");
        // A file used as a folder cannot be read by anyone, whatever their rights.
        assert_eq!(
            shown(&folder.join("a.yaml/b.yaml")),
            "`DIR/a.yaml/b.yaml` cannot be read: not a directory\n"
        );
        assert_eq!(Source::from_file(&folder.join("a.yaml")).unwrap().text, "a: 1");
        fs::remove_dir_all(&folder).unwrap();
    }

    #[cfg(unix)]
    #[test]
    fn pipes_and_devices_are_refused_without_waiting() {
        let folder = folder("special");
        let pipe = folder.join("pipe.yaml");
        let made = std::process::Command::new("mkfifo").arg(&pipe).status();
        assert!(made.is_ok_and(|status| status.success()), "mkfifo is part of POSIX");
        for path in [pipe.as_path(), Path::new("/dev/zero")] {
            let expected = format!(
                "`{}` is no regular file\n   expected  a file, or `-` for standard input\n",
                path.display()
            );
            assert_eq!(Source::from_file(path).unwrap_err().to_string(), expected);
        }
        fs::remove_dir_all(&folder).unwrap();
    }

    #[test]
    fn a_huge_file_is_refused_at_once() {
        let folder = folder("huge");
        let path = folder.join("huge.yaml");
        fs::File::create(&path).unwrap().set_len(1 << 30).unwrap();
        let started = Instant::now();
        let problem = Source::from_file(&path).unwrap_err();
        assert!(started.elapsed().as_millis() < 100, "its size is known without reading it");
        assert!(problem.to_string().contains("huge.yaml` is larger than 16 MiB\n"), "{problem}");
        fs::remove_dir_all(&folder).unwrap();
    }

    #[test]
    fn a_reader_without_end_is_refused_at_the_limit() {
        assert!(limited(repeat(b'a'), "-").unwrap_err().message.contains("larger than 16 MiB"));
        assert_eq!(limited(&b"abc"[..], "-").unwrap(), b"abc");
        assert_eq!(MOST_BYTES, 16_777_216);
    }
}
