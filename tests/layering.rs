//! A module uses only those that stand before it in `lib.rs`.

use std::path::Path;

#[test]
fn a_module_uses_only_those_before_it() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let library = std::fs::read_to_string(root.join("lib.rs")).unwrap();
    let order: Vec<&str> =
        library.lines().filter_map(|line| line.strip_prefix("pub mod ")?.strip_suffix(';')).collect();
    assert!(order.len() > 8, "{order:?}");
    let mut wrong = Vec::new();
    let mut seen = 0;
    for (position, module) in order.iter().enumerate() {
        for file in rust_files(&root.join(module)) {
            let text = std::fs::read_to_string(&file).unwrap();
            for (_, rest) in text.match_indices("crate::").map(|(at, found)| (at, &text[at + found.len()..]))
            {
                let used: String =
                    rest.chars().take_while(|c| c.is_ascii_alphanumeric() || *c == '_').collect();
                if let Some(used_position) = order.iter().position(|module| *module == used) {
                    seen += 1;
                    if used_position > position {
                        wrong.push(format!("{} uses {used}", file.display()));
                    }
                }
            }
        }
    }
    assert!(seen > 50, "only {seen} uses seen");
    assert!(wrong.is_empty(), "{wrong:#?}");
}

fn rust_files(folder: &Path) -> Vec<std::path::PathBuf> {
    let mut found = Vec::new();
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            found.extend(rust_files(&path));
        } else if path.extension().is_some_and(|ending| ending == "rs") {
            found.push(path);
        }
    }
    found
}
