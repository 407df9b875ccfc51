//! Reads the reference tables of the project.

#![allow(dead_code, reason = "shared by several tests, each of which uses a part of it")]

use std::collections::HashMap;
use std::path::Path;

/// One row by column heading.
pub struct Row {
    cells: HashMap<String, String>,
}

impl Row {
    pub fn text(&self, column: &str) -> &str {
        self.cells.get(column).unwrap_or_else(|| panic!("no column {column}"))
    }

    pub fn number(&self, column: &str) -> f64 {
        let text = self.text(column);
        text.parse().unwrap_or_else(|_| panic!("{column} holds {text:?}, not a number"))
    }

    /// `None` where the cell is empty.
    pub fn optional(&self, column: &str) -> Option<f64> {
        (!self.text(column).is_empty()).then(|| self.number(column))
    }
}

/// All rows of `tests/reference/elastic/<name>`.
pub fn elastic(name: &str) -> Vec<Row> {
    table("elastic", name)
}

/// All rows of `tests/reference/time/<name>`.
pub fn time(name: &str) -> Vec<Row> {
    table("time", name)
}

/// All rows of a table; lines that begin with `#` tell its origin.
fn table(folder: &str, name: &str) -> Vec<Row> {
    let references = Path::new(env!("CARGO_MANIFEST_DIR")).join("../tests/reference");
    let path = references.join(folder).join(name);
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_path(&path)
        .unwrap_or_else(|e| panic!("{path:?}: {e}"));
    let headings = reader.headers().expect("headings").clone();
    let rows: Vec<Row> = reader
        .records()
        .map(|record| {
            let record = record.expect("a readable row");
            let cells = headings.iter().zip(&record).map(|(h, c)| (h.to_owned(), c.to_owned()));
            Row { cells: cells.collect() }
        })
        .collect();
    assert!(!rows.is_empty(), "{path:?} holds no rows");
    rows
}

/// The largest difference over a table, with the place it was found at.
#[derive(Default)]
pub struct Worst {
    difference: f64,
    place: String,
}

impl Worst {
    pub fn take(&mut self, got: f64, want: f64, place: impl Fn() -> String) {
        let difference = (got - want).abs();
        if difference > self.difference || difference.is_nan() {
            self.difference = difference;
            self.place = format!("{}: got {got:e}, want {want:e}", place());
        }
    }

    pub fn assert_below(&self, tolerance: f64) {
        assert!(
            self.difference <= tolerance,
            "{:e} > {tolerance:e} at {}",
            self.difference,
            self.place
        );
        println!("largest difference {:.1e} at {}", self.difference, self.place);
    }
}

/// Half a unit of the last printed digit, with a hair for the decimal conversion.
pub fn printed_tolerance(text: &str) -> f64 {
    let decimals = text.split_once('.').map_or(0, |(_, fraction)| fraction.len());
    0.5001 * 10_f64.powi(-i32::try_from(decimals).unwrap())
}
