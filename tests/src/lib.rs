//! What the whole-project checks share: the files of the project and their text.

use std::fs;
use std::path::{Path, PathBuf};

/// Folders that hold built or downloaded things.
const NOT_OURS: [&str; 6] = [".git", "target", "node_modules", "dist", "gen", "__pycache__"];

/// The top folder of the project.
pub fn root() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).parent().expect("tests/ has a parent").to_path_buf()
}

/// A text file of the project.
#[derive(Debug)]
pub struct Source {
    /// Path from the top folder, with `/`.
    pub path: String,
    /// Its contents.
    pub text: String,
}

impl Source {
    /// Whether the name ends in one of these extensions.
    pub fn has_extension(&self, extensions: &[&str]) -> bool {
        self.path.rsplit_once('.').is_some_and(|(_, found)| extensions.contains(&found))
    }

    /// Whether the whole file is tests.
    pub fn is_test(&self) -> bool {
        self.path.split('/').any(|part| part == "tests" || part == "tests.rs")
    }

    /// The text up to its unit tests, which may use what the code may not.
    pub fn without_unit_tests(&self) -> &str {
        self.text.split("#[cfg(test)]\nmod ").next().unwrap_or_default()
    }
}

/// Every file of the project by its path from the top folder, built and downloaded things apart.
pub fn files() -> Vec<String> {
    let mut found = Vec::new();
    collect(&root(), "", &mut found);
    found.sort();
    found
}

fn collect(folder: &Path, prefix: &str, found: &mut Vec<String>) {
    let entries = fs::read_dir(folder).unwrap_or_else(|e| panic!("{}: {e}", folder.display()));
    for entry in entries {
        let entry = entry.unwrap_or_else(|e| panic!("{}: {e}", folder.display()));
        let name = entry.file_name().to_string_lossy().into_owned();
        let path = format!("{prefix}{name}");
        if NOT_OURS.contains(&name.as_str()) {
            continue;
        }
        if entry.file_type().is_ok_and(|kind| kind.is_dir()) {
            collect(&entry.path(), &format!("{path}/"), found);
        } else {
            found.push(path);
        }
    }
}

/// Every text file of the project.
pub fn sources() -> Vec<Source> {
    files()
        .into_iter()
        .filter_map(|path| {
            let text = fs::read_to_string(root().join(&path)).ok()?;
            Some(Source { path, text })
        })
        .collect()
}

/// One named text file of the project.
pub fn source(path: &str) -> Source {
    let text = fs::read_to_string(root().join(path)).unwrap_or_else(|e| panic!("{path}: {e}"));
    Source { path: path.to_owned(), text }
}
