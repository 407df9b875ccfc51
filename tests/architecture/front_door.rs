//! What a newcomer meets first: the top folder and the README's commands.

use brimstead_tests::{files, root, source};
use std::collections::BTreeSet;
use std::path::Path;

const TOP: [&str; 10] = [
    "Cargo.toml",
    "Cargo.lock",
    "README.md",
    "DEVELOPERS.md",
    "LICENSE-MIT",
    "LICENSE-APACHE",
    "core-nostd",
    "desktop",
    "firmware-demo",
    "tests",
];

/// Beside [`TOP`]: the demo site, which is data and not needed to build.
const TOP_DATA: &str = "data-demo";

/// The commands a reader of the README types.
const COMMANDS: [&str; 2] = ["bash desktop/run.sh", "bash tests/run.sh"];

#[test]
fn top_folder_holds_the_agreed_names_only() {
    let names: BTreeSet<String> = files()
        .iter()
        .map(|path| path.split('/').next().unwrap_or(path).to_owned())
        .filter(|name| !name.starts_with('.'))
        .collect();
    for name in &names {
        assert!(
            TOP.contains(&name.as_str()) || name == TOP_DATA,
            "{name}: has no place in the top folder; find it a room inside one of the five folders"
        );
    }
    for name in TOP {
        assert!(names.contains(name), "{name} is missing from the top folder");
    }
}

#[test]
fn readme_gives_the_two_commands_and_they_exist() {
    let readme = source("README.md");
    for command in COMMANDS {
        assert!(
            readme.text.lines().any(|line| line.trim() == command),
            "README.md must show the line `{command}`"
        );
    }
    let typed = readme.text.lines().map(str::trim).filter_map(|line| line.strip_prefix("bash "));
    for script in typed.filter_map(|rest| rest.split_whitespace().next()) {
        assert!(root().join(script).is_file(), "README.md names {script}, which does not exist");
    }
}

#[test]
fn automatic_run_is_the_command_of_the_readme() {
    let run = source(".ci/run");
    assert!(run.text.contains("bash tests/run.sh"), ".ci/run must call `bash tests/run.sh`");
    assert!(is_executable(&root().join(".ci/run")), ".ci/run must be executable");
}

#[cfg(unix)]
fn is_executable(path: &Path) -> bool {
    use std::os::unix::fs::PermissionsExt;
    path.metadata().is_ok_and(|meta| meta.permissions().mode() & 0o111 != 0)
}

#[cfg(not(unix))]
fn is_executable(path: &Path) -> bool {
    path.is_file()
}
