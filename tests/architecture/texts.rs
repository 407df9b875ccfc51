//! What the files may say.

use brimstead_tests::{Source, files, root, sources};

const LARGEST_FILE_BYTES: u64 = 1024 * 1024;

/// Top folders of a machine; a path below one of them works on that machine only. Written in two
/// halves so that this file passes its own check.
const MACHINE_FOLDERS: [(&str, &str); 6] =
    [("/wo", "rk/"), ("/ro", "ot/"), ("/ho", "me/"), ("/Us", "ers/"), ("/t", "mp/"), ("/m", "nt/")];

/// Marks of unfinished work, in two halves for the same reason.
const UNFINISHED: [(&str, &str); 5] =
    [("TO", "DO"), ("FIX", "ME"), ("XX", "X:"), ("to", "do!("), ("unimple", "mented!(")];

/// Lines with their numbers, counted from 1.
fn numbered(text: &str) -> impl Iterator<Item = (usize, &str)> {
    text.lines().enumerate().map(|(index, line)| (index + 1, line))
}

fn written_by_us() -> impl Iterator<Item = Source> {
    sources()
        .into_iter()
        .filter(|file| !file.has_extension(&["lock"]) && !file.path.ends_with("package-lock.json"))
}

#[test]
fn no_file_is_large() {
    for path in files() {
        let bytes = root().join(&path).metadata().map_or(0, |meta| meta.len());
        assert!(bytes < LARGEST_FILE_BYTES, "{path}: {bytes} bytes; generate it instead");
    }
}

#[test]
fn no_file_names_a_folder_of_one_machine() {
    for file in written_by_us() {
        for (number, line) in numbered(&file.text) {
            for (first, second) in MACHINE_FOLDERS {
                let folder = format!("{first}{second}");
                let named = line.match_indices(&folder).any(|(at, _)| starts_a_path(line, at));
                assert!(!named, "{}:{number}: names {folder} of one machine", file.path);
            }
        }
    }
}

/// The folder itself, not a folder of the same name inside another or inside an address.
fn starts_a_path(line: &str, at: usize) -> bool {
    !line[..at].ends_with(|c: char| c.is_alphanumeric() || "./-_:".contains(c))
}

#[test]
fn packages_come_from_the_public_registries() {
    for file in sources() {
        let (mark, registry) = match file.path.rsplit('/').next() {
            Some("Cargo.lock") => {
                ("source = \"registry+", "https://github.com/rust-lang/crates.io-index\"")
            }
            Some("package-lock.json") => ("\"resolved\": \"", "https://registry.npmjs.org/"),
            _ => continue,
        };
        for (number, line) in numbered(&file.text) {
            if let Some(from) = line.trim_start().strip_prefix(mark) {
                assert!(from.starts_with(registry), "{}:{number}: {from}", file.path);
            }
        }
    }
}

#[test]
fn nothing_is_left_unfinished() {
    for file in written_by_us() {
        for (number, line) in numbered(&file.text) {
            for (first, second) in UNFINISHED {
                let mark = format!("{first}{second}");
                assert!(!line.contains(&mark), "{}:{number}: {mark}", file.path);
            }
        }
    }
}

/// Brimstead advises. That something can be trusted with a life is never its word; the trade's
/// "factor of safety" and "safety-rated" are other words.
#[test]
fn no_text_for_the_user_gives_the_verdict_no_tool_may_give() {
    for file in written_by_us() {
        let rust = file.has_extension(&["rs"]);
        let shown = rust || file.has_extension(&["ts", "svelte", "html", "typ", "json", "jsonc"]);
        if !shown || file.is_test() {
            continue;
        }
        for (number, line) in numbered(file.without_unit_tests()) {
            let said = if rust { string_literals(line) } else { line.to_owned() };
            assert!(
                !has_word(&said, "safe") && !has_word(&said, "safely"),
                "{}:{number}: say what was found and what to do, not that it is safe: {line}",
                file.path
            );
        }
    }
}

/// What stands between double quotes on one line of Rust, comments apart.
fn string_literals(line: &str) -> String {
    let code = if line.trim_start().starts_with("//") { "" } else { line };
    let unescaped = code.replace("\\\"", "").replace("'\"'", "");
    unescaped.split('"').skip(1).step_by(2).collect::<Vec<_>>().join(" ")
}

fn has_word(text: &str, word: &str) -> bool {
    text.split(|c: char| !c.is_alphabetic()).any(|found| found.eq_ignore_ascii_case(word))
}

#[test]
fn the_verdict_is_found_in_strings_and_not_in_comments() {
    assert!(has_word(&string_literals(r#"let a = "The tank is Safe.";"#), "safe"));
    assert!(!has_word(&string_literals(r#"let a = "factor of safety"; "#), "safe"));
    assert!(!has_word(&string_literals(r#"'"' => safe.push_str("&quot;"),"#), "safe"));
    assert!(!has_word(&string_literals("// it never says \"safe\""), "safe"));
}
