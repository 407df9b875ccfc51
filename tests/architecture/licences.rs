//! Under which licences the dependencies come: permissive ones, with the exceptions named here.

use brimstead_tests::root;
use serde_json::Value;
use std::process::Command;

/// Permissive licences that ask for no more than a notice.
const PERMISSIVE: [&str; 14] = [
    "MIT",
    "MIT-0",
    "Apache-2.0",
    "Apache-2.0 WITH LLVM-exception",
    "BSD-2-Clause",
    "BSD-3-Clause",
    "ISC",
    "Zlib",
    "0BSD",
    "Unlicense",
    "Unicode-3.0",
    "BSL-1.0",
    "CC0-1.0",
    "bzip2-1.0.6",
];

/// Weak copyleft by file, used unmodified: package and licence.
const EXCEPTIONS: [(&str, &str); 5] = [
    ("cssparser", "MPL-2.0"),
    ("cssparser-macros", "MPL-2.0"),
    ("dtoa-short", "MPL-2.0"),
    ("selectors", "MPL-2.0"),
    ("option-ext", "MPL-2.0"),
];

/// Whether a licence expression can be met: every part of an AND, one part of an OR. A slash is
/// the old way to write OR.
fn can_be_met(expression: &str, allowed: &dyn Fn(&str) -> bool) -> bool {
    let expression = expression.replace('/', " OR ");
    any_of(&expression, allowed)
}

fn any_of(expression: &str, allowed: &dyn Fn(&str) -> bool) -> bool {
    split_outside_brackets(expression, " OR ").iter().any(|part| all_of(part, allowed))
}

fn all_of(expression: &str, allowed: &dyn Fn(&str) -> bool) -> bool {
    split_outside_brackets(expression, " AND ").iter().all(|part| {
        let part = part.trim();
        match part.strip_prefix('(').and_then(|rest| rest.strip_suffix(')')) {
            Some(inner) => any_of(inner, allowed),
            None => allowed(part),
        }
    })
}

fn split_outside_brackets<'a>(expression: &'a str, separator: &str) -> Vec<&'a str> {
    let mut parts = Vec::new();
    let mut start = 0;
    for (at, _) in expression.match_indices(separator) {
        let before = &expression[..at];
        if before.matches('(').count() == before.matches(')').count() {
            parts.push(&expression[start..at]);
            start = at + separator.len();
        }
    }
    parts.push(&expression[start..]);
    parts
}

fn packages(manifest: &str) -> Vec<Value> {
    let output = Command::new(env!("CARGO"))
        .args(["metadata", "--locked", "--format-version", "1", "--manifest-path"])
        .arg(root().join(manifest))
        .output()
        .expect("cargo starts");
    assert!(
        output.status.success(),
        "cargo metadata: {}\nrun `cargo fetch` once with a network",
        String::from_utf8_lossy(&output.stderr)
    );
    let mut metadata: Value = serde_json::from_slice(&output.stdout).expect("metadata is JSON");
    match metadata["packages"].take() {
        Value::Array(packages) => packages,
        other => panic!("cargo metadata without a list of packages: {other}"),
    }
}

#[test]
fn expressions_are_read_as_written() {
    let allowed = |name: &str| PERMISSIVE.contains(&name);
    for good in ["MIT", "GPL-3.0 OR MIT", "MIT/GPL-3.0", "(MIT OR Apache-2.0) AND Unicode-3.0"] {
        assert!(can_be_met(good, &allowed), "{good}");
    }
    for bad in ["", "GPL-3.0", "MIT AND GPL-3.0", "(MIT OR Apache-2.0) AND GPL-3.0"] {
        assert!(!can_be_met(bad, &allowed), "{bad}");
    }
}

#[test]
fn every_dependency_comes_under_a_permissive_licence() {
    for manifest in ["Cargo.toml", "firmware-demo/image/Cargo.toml"] {
        let packages = packages(manifest);
        assert!(packages.len() > 5, "{manifest}: the packages are listed");
        for package in packages {
            let name = package["name"].as_str().unwrap_or_default();
            let licence = package["license"].as_str().unwrap_or_default();
            let allowed =
                |one: &str| PERMISSIVE.contains(&one) || EXCEPTIONS.contains(&(name, one));
            assert!(
                can_be_met(licence, &allowed),
                "{name} comes under `{licence}`: replace it, or name it here with the reason"
            );
        }
    }
}
