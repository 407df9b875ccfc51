//! Files of readings as they come from the field, damaged: every loss is told by file and line, in
//! words to act on, and what is good beside it is kept.

mod program;

use program::{Ran, demo, run, small_site, text};
use serde_json::Value;
use std::path::Path;

/// Lines of a demo file, the heads included.
fn lines_of(name: &str, count: usize) -> Vec<String> {
    let bytes = std::fs::read(demo().join("run-good").join(name)).unwrap();
    // windows-1252, of which the demo uses what Latin-1 has too.
    let whole: String = bytes.iter().map(|byte| char::from(*byte)).collect();
    whole.lines().take(count).map(str::to_owned).collect()
}

fn write(path: &Path, lines: &[String]) {
    let whole: Vec<u8> =
        lines.join("\n").chars().map(|c| u8::try_from(u32::from(c)).expect("Latin-1")).collect();
    std::fs::write(path, whole).unwrap();
}

/// Puts a text into a field; lines and columns counted from 1 and 0.
fn set(lines: &mut [String], line: usize, column: usize, value: &str) {
    let mut fields: Vec<&str> = lines[line - 1].split(',').collect();
    fields[column] = value;
    lines[line - 1] = fields.join(",");
}

fn column_of(lines: &[String], header: &str) -> usize {
    let heads = lines.iter().find(|line| line.starts_with("Time UTC")).expect("the heads");
    heads.split(',').position(|head| head == header).expect("that column")
}

struct Field {
    folder: tempfile::TempDir,
}

impl Field {
    fn new() -> Self {
        Self { folder: tempfile::tempdir().unwrap() }
    }

    /// Compares these files, and gives the import part of the report.
    fn compare(&self, files: &[(&str, &[String])], json: bool) -> Ran {
        let site = small_site(self.folder.path());
        let mut paths = Vec::new();
        for (name, lines) in files {
            let path = self.folder.path().join(name);
            write(&path, lines);
            paths.push(text(&path));
        }
        let mut arguments = vec!["compare", site.as_str()];
        if json {
            arguments.push("--json");
        }
        arguments.push("--readings");
        arguments.extend(paths.iter().map(String::as_str));
        run(&arguments)
    }
}

/// Text without its line breaks, so that a sentence is found however it is wrapped.
fn unwrapped(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

fn assert_told(ran: &Ran, sentences: &[&str]) {
    let told = unwrapped(&ran.out);
    for sentence in sentences {
        assert!(told.contains(sentence), "no \"{sentence}\" in {}", ran.out);
    }
}

/// How many readings of an instrument came through with a value.
fn values(whole: &Value, id: &str) -> usize {
    let all = whole["instruments"].as_array().unwrap();
    let one = all.iter().find(|one| one["id"] == id).unwrap();
    one["readings"].as_array().unwrap().iter().filter(|row| !row["value"].is_null()).count()
}

#[test]
fn every_damaged_line_is_told_and_the_rest_is_kept() {
    let name = "logger-a-2026-03.csv";
    let good = lines_of(name, 60);
    let pe1 = column_of(&good, "PE1 kPa");
    let mut bad = good.clone();
    set(&mut bad, 10, pe1, "3O.12");
    set(&mut bad, 12, pe1, "29,62");
    set(&mut bad, 14, 0, "2026-13-02T08:00:00Z");
    set(&mut bad, 16, pe1, "1e999");
    bad[17] = "\u{1}\u{2}garbage".to_owned();
    bad[19] = bad[18].clone();
    set(&mut bad, 20, pe1, "55.5");
    bad[59].truncate(70);
    let field = Field::new();
    let ran = field.compare(&[(name, &bad)], false);
    assert_told(
        &ran,
        &[
            "line 10, data lost: PE1 kPa: \"3O.12\" is text where a number belongs",
            "line 12, data lost: \"2026-03-02T13:00:00Z,101.39",
            "is another number of fields than headers",
            "line 14, data lost: Time UTC: \"2026-13-02T08:00:00Z\" is a time that does not fit",
            "line 16, data lost: PE1 kPa: \"1e999\" is not a number",
            "line 18, data lost:",
            "line 20, data lost: PE1 has two readings for one time: 55.5 not taken",
            "line 60, data lost:",
        ],
    );
    // 56 rows of which 4 are lost, three columns taken; two fields lost, one row read twice.
    assert_told(&ran, &["151 readings kept, 2 duplicates ignored, 6 rows refused."]);
    let (before, after) = (
        Field::new().compare(&[(name, &good)], true).json(),
        field.compare(&[(name, &bad)], true).json(),
    );
    // Lost are lines 10, 12, 14, 16, 18 and 60, and 20 that became a second reading of line 19.
    assert_eq!(values(&before, "PE1") - values(&after, "PE1"), 7);
    // Single bad fields of PE1 cost the gauge nothing.
    assert_eq!(values(&before, "LG1") - values(&after, "LG1"), 5);
}

#[test]
fn a_column_that_is_gone_is_missed() {
    let name = "logger-a-2026-03.csv";
    let good = lines_of(name, 60);
    let pe1 = column_of(&good, "PE1 kPa");
    let without: Vec<String> = good
        .iter()
        .map(|line| {
            let fields = line.split(',').enumerate().filter(|(at, _)| *at != pe1);
            fields.map(|(_, field)| field).collect::<Vec<_>>().join(",")
        })
        .collect();
    let ran = Field::new().compare(&[(name, &without)], false);
    assert_told(
        &ran,
        &["data lost: column \"PE1 kPa\" not taken: the layout names it, the file lacks it."],
    );
    // Its silence is no good news either.
    assert_told(&ran, &["2 not judged of 3 instruments"]);
}

#[test]
fn a_decimal_of_the_wrong_kind_is_refused_and_not_guessed() {
    let (a, b) = ("logger-a-2026-03.csv", "logger-b-2026-03.csv");
    let good = lines_of(a, 60);
    let mut points = lines_of(b, 60);
    points[10] = points[10].replace(',', ".");
    let ran = Field::new().compare(&[(a, &good), (b, &points)], false);
    assert_told(&ran, &["line 11, data lost: SC3 [mm]:", "is a decimal point in a file with"]);
}

#[test]
fn a_file_that_is_no_record_is_named_and_the_others_count() {
    let name = "logger-a-2026-03.csv";
    let good = lines_of(name, 60);
    let odd = ["To whom it may concern".to_owned(), "the logger is broken".to_owned()];
    let ran = Field::new().compare(&[(name, &good), ("letter.txt", &odd)], false);
    assert_told(&ran, &["letter.txt: ", "data lost: Not understood, nothing taken."]);
    let alone = Field::new().compare(&[("letter.txt", &odd)], false);
    assert_eq!((alone.status, alone.out.as_str()), (2, ""), "nothing to compare");
    assert!(alone.err.contains("no reading was taken"), "{}", alone.err);
}
