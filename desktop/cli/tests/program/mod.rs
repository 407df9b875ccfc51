//! Runs the built program as a user's script does.

#![allow(dead_code, reason = "shared by several tests, each of which uses a part of it")]

use serde_json::Value;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

/// What one run of the program left behind.
pub struct Ran {
    pub status: i32,
    pub out: String,
    pub err: String,
}

impl Ran {
    /// The standard output as JSON.
    pub fn json(&self) -> Value {
        serde_json::from_str(&self.out).unwrap_or_else(|e| panic!("{e}: {}{}", self.out, self.err))
    }

    /// One JSON value for each line of the standard output.
    pub fn lines(&self) -> Vec<Value> {
        let parse = |line: &str| {
            serde_json::from_str(line).unwrap_or_else(|e| panic!("{e} in answer {line}"))
        };
        self.out.lines().map(parse).collect()
    }
}

/// Runs the program with these arguments and this standard input.
pub fn run_with_input(arguments: &[&str], input: &[u8]) -> Ran {
    let mut child = Command::new(env!("CARGO_BIN_EXE_brimstead"))
        .args(arguments)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    let mut stdin = child.stdin.take().expect("a pipe");
    let input = input.to_vec();
    // In a thread of its own: the answers of a long batch fill their pipe before it is all read.
    // A program that does not read its input closes the pipe, which is no fault of the test.
    let writer = std::thread::spawn(move || drop(stdin.write_all(&input)));
    let output = child.wait_with_output().expect("the program ends");
    writer.join().expect("the writer ends");
    Ran {
        status: output.status.code().expect("an exit status"),
        out: String::from_utf8(output.stdout).expect("UTF-8"),
        err: String::from_utf8(output.stderr).expect("UTF-8"),
    }
}

pub fn run(arguments: &[&str]) -> Ran {
    run_with_input(arguments, b"")
}

/// `brimstead eval -` over these lines.
pub fn eval(lines: &[String]) -> Ran {
    run_with_input(&["eval", "-"], lines.join("\n").as_bytes())
}

pub fn demo() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../../data-demo")
}

/// The reading files of a demo run, in the order of their names.
pub fn readings(run: &str) -> Vec<String> {
    let folder = demo().join(run);
    let mut files: Vec<String> = std::fs::read_dir(&folder)
        .unwrap_or_else(|e| panic!("{folder:?}: {e}"))
        .map(|entry| text(&entry.expect("an entry").path()))
        .collect();
    files.sort();
    assert!(!files.is_empty(), "{folder:?} is empty");
    files
}

pub fn text(path: &Path) -> String {
    path.to_str().expect("a path in UTF-8").to_owned()
}

/// The demo's site with a few instruments left: little to calculate and to draw.
pub fn small_site(folder: &Path) -> String {
    let source = std::fs::read_to_string(demo().join("site.json")).unwrap();
    let mut site: Value = serde_json::from_str(&source).unwrap();
    let kept = ["PE1", "SC3", "LG1"];
    let instruments = site["instruments"].as_array_mut().unwrap();
    instruments.retain(|one| kept.contains(&one["id"].as_str().unwrap()));
    for one in instruments.iter_mut() {
        if let Some(neighbours) = one["neighbours"].as_array_mut() {
            neighbours.retain(|id| kept.contains(&id.as_str().unwrap()));
        }
    }
    for layout in site["readings"].as_array_mut().unwrap() {
        let columns = layout["columns"].as_object_mut().unwrap();
        columns.retain(|_, of| of["instrument"].as_str().is_none_or(|id| kept.contains(&id)));
        columns.retain(|_, of| of["channel"] != "temperature:PM2");
    }
    site["readings"].as_array_mut().unwrap().retain(|layout| {
        let name = layout["name"].as_str().unwrap();
        name.starts_with("Logger")
    });
    let file = folder.join("site.json");
    std::fs::write(&file, site.to_string()).unwrap();
    text(&file)
}
