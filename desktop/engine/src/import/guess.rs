//! A layout guessed from the file itself, when none of the site file fits. The result is a layout
//! like any other, so that it can be looked at, corrected and put into the site file.

mod headers;
mod times;

use super::rows::{fields, is_number};
use crate::site::{Decimal, Delimiter, ReadingsLayout, SiteFile};
use std::collections::BTreeMap;

/// A guess, with what was guessed in words.
#[derive(Debug)]
pub(super) struct Guess {
    pub layout: ReadingsLayout,
    pub notes: Vec<String>,
}

/// Lines at the beginning of a file that are looked at for its shape.
const LOOKED_AT: usize = 200;

/// Guesses the layout of a file.
///
/// # Errors
/// What could not be found out, in words.
pub(super) fn layout(text: &str, site: &SiteFile, file_name: &str) -> Result<Guess, String> {
    let (table, times) = table_with_times(text, &site.site.time_zone)?;
    let found = headers::columns(&table, times.column, site);
    if found.columns.is_empty() {
        return Err(
            "No layout of the site file fits, and no header names an instrument.".to_owned()
        );
    }
    let time_column = table.headers[times.column].clone();
    let mut notes = vec![format!(
        "No layout of the site file fits. Guessed: columns parted by {}, decimal {}, headers on line {}, times in \"{}\" as {}{}.",
        name_of(table.delimiter),
        if table.decimal == Decimal::Comma { "comma" } else { "point" },
        table.skip_lines + 1,
        time_column,
        times.format,
        times.zone_note,
    )];
    notes.extend(found.notes);
    let layout = ReadingsLayout {
        name: format!("Guessed for {file_name}"),
        files: vec![file_name.to_owned()],
        skip_lines: table.skip_lines,
        delimiter: table.delimiter,
        decimal: table.decimal,
        encoding: None,
        time_column,
        time_format: times.format.to_owned(),
        time_zone: times.zone,
        missing: table.marks(times.column),
        columns: found.columns,
    };
    Ok(Guess { layout, notes })
}

/// The largest table of the file that has a column of times. A file with decimal commas is a
/// table by commas too, but one without times.
fn table_with_times(text: &str, site_zone: &str) -> Result<(Table, times::Times), String> {
    const DELIMITERS: [Delimiter; 4] =
        [Delimiter::Semicolon, Delimiter::Tab, Delimiter::Bar, Delimiter::Comma];
    let mut best: Option<(usize, Table, times::Times)> = None;
    let mut reason = None;
    for table in DELIMITERS.into_iter().filter_map(|delimiter| Table::find(text, delimiter)) {
        let size = table.rows.len() * table.headers.len();
        match times::find(&table, site_zone) {
            Ok(times) if best.as_ref().is_none_or(|(largest, ..)| size > *largest) => {
                best = Some((size, table, times));
            }
            Ok(_) => {}
            Err(found) => reason = reason.or(found),
        }
    }
    best.map(|(_, table, times)| (table, times)).ok_or_else(|| {
        reason.unwrap_or_else(|| {
            "No layout of the site file fits, and no line of headers above rows of a time and \
             numbers was found."
                .to_owned()
        })
    })
}

fn name_of(delimiter: Delimiter) -> &'static str {
    match delimiter {
        Delimiter::Comma => "commas",
        Delimiter::Semicolon => "semicolons",
        Delimiter::Tab => "tabulators",
        Delimiter::Bar => "bars",
    }
}

/// The top of a file as headers and rows.
#[derive(Debug)]
struct Table {
    delimiter: Delimiter,
    decimal: Decimal,
    skip_lines: u32,
    headers: Vec<String>,
    rows: Vec<Vec<String>>,
}

impl Table {
    /// The longest run of lines with one number of fields, the first of them the headers.
    fn find(text: &str, delimiter: Delimiter) -> Option<Self> {
        let lines: Vec<Vec<String>> =
            text.lines().take(LOOKED_AT).map(|line| fields(line, delimiter)).collect();
        let (skip_lines, length) = longest_run(&lines)?;
        let mut run = lines.into_iter().skip(skip_lines).take(length);
        let headers = run.next()?;
        let rows: Vec<Vec<String>> = run.collect();
        let decimal = decimal(&rows, delimiter);
        let named = headers.iter().all(|header| !is_number(header, decimal));
        named.then_some(Self { delimiter, decimal, skip_lines: skip_lines as u32, headers, rows })
    }

    fn column(&self, position: usize) -> impl Iterator<Item = &str> {
        self.rows.iter().filter_map(move |row| row.get(position)).map(String::as_str)
    }

    /// Texts that stand among numbers and are common words for a missing value.
    fn marks(&self, time_column: usize) -> Vec<String> {
        const MARKS: [&str; 10] =
            ["nan", "n/a", "na", "null", "-", "--", "---", "n/r", "?", "#n/a"];
        let mut found = BTreeMap::new();
        for position in (0..self.headers.len()).filter(|&position| position != time_column) {
            for field in self.column(position).filter(|field| !field.is_empty()) {
                if MARKS.contains(&field.to_lowercase().as_str()) {
                    found.insert(field.to_owned(), ());
                }
            }
        }
        found.into_keys().collect()
    }
}

/// Where the longest run of lines with the same number of fields, two at least, begins, and how
/// long it is.
fn longest_run(lines: &[Vec<String>]) -> Option<(usize, usize)> {
    let mut best: Option<(usize, usize)> = None;
    let mut start = 0;
    for at in 1..=lines.len() {
        if at < lines.len() && lines[at].len() == lines[start].len() {
            continue;
        }
        let length = at - start;
        if lines[start].len() >= 2
            && length >= 2
            && best.is_none_or(|(_, longest)| length > longest)
        {
            best = Some((start, length));
        }
        start = at;
    }
    best
}

fn decimal(rows: &[Vec<String>], delimiter: Delimiter) -> Decimal {
    if delimiter == Delimiter::Comma {
        return Decimal::Point;
    }
    let count = |mark: char, decimal: Decimal| {
        let fields = rows.iter().flatten();
        fields.filter(|field| field.contains(mark) && is_number(field, decimal)).count()
    };
    if count(',', Decimal::Comma) > count('.', Decimal::Point) {
        Decimal::Comma
    } else {
        Decimal::Point
    }
}
