//! The column of times, its format and zone.

use super::Table;
use jiff::civil::DateTime;
use jiff::fmt::strtime::BrokenDownTime;

/// Formats that are tried. Those with an offset or Z first: they need no zone.
const FORMATS: [&str; 19] = [
    "%Y-%m-%dT%H:%M:%SZ",
    "%Y-%m-%dT%H:%M:%S%:z",
    "%Y-%m-%dT%H:%M:%S%.fZ",
    "%Y-%m-%d %H:%M:%S%:z",
    "%Y-%m-%dT%H:%M:%S%.f",
    "%Y-%m-%dT%H:%M",
    "%Y-%m-%d %H:%M:%S%.f",
    "%Y-%m-%d %H:%M",
    "%Y/%m/%d %H:%M:%S",
    "%Y/%m/%d %H:%M",
    "%d.%m.%Y %H:%M:%S",
    "%d.%m.%Y %H:%M",
    "%d-%b-%Y %H:%M:%S",
    "%d-%b-%Y %H:%M",
    "%d/%m/%Y %H:%M:%S",
    "%d/%m/%Y %H:%M",
    "%m/%d/%Y %H:%M:%S",
    "%m/%d/%Y %H:%M",
    "%Y%m%d %H:%M:%S",
];

/// What was found.
#[derive(Debug)]
pub(super) struct Times {
    pub column: usize,
    pub format: &'static str,
    pub zone: String,
    pub zone_note: String,
}

/// The first column whose fields are times of one format.
///
/// # Errors
/// The reason when there is such a column but two formats fit it, `None` when there is none.
pub(super) fn find(table: &Table, site_zone: &str) -> Result<Times, Option<String>> {
    for column in 0..table.headers.len() {
        let fitting: Vec<&'static str> =
            FORMATS.into_iter().filter(|format| fits(table, column, format)).collect();
        let Some(&format) = fitting.first() else { continue };
        let other = fitting.iter().find(|other| !agree(table, column, format, other));
        if let Some(other) = other {
            let header = &table.headers[column];
            return Err(Some(format!(
                "Day and month cannot be told apart in \"{header}\": {format} and {other} both fit. \
                 Add a layout to the site file."
            )));
        }
        let (zone, zone_note) = zone(format, &table.headers[column], site_zone);
        return Ok(Times { column, format, zone, zone_note });
    }
    Err(None)
}

fn civil(format: &str, text: &str) -> Option<DateTime> {
    BrokenDownTime::parse(format, text).ok()?.to_datetime().ok()
}

/// Nine in ten rows fit: a damaged row must not hide the format.
fn fits(table: &Table, column: usize, format: &str) -> bool {
    let good = table.column(column).filter(|text| civil(format, text).is_some()).count();
    good > 0 && good * 10 >= table.rows.len() * 9
}

fn agree(table: &Table, column: usize, one: &str, other: &str) -> bool {
    table.column(column).all(|text| match (civil(one, text), civil(other, text)) {
        (Some(one), Some(other)) => one == other,
        _ => true,
    })
}

/// The zone: in the text itself, named by the header, or that of the site.
fn zone(format: &str, header: &str, site_zone: &str) -> (String, String) {
    let words: Vec<String> = header
        .split(|c: char| !c.is_ascii_alphanumeric() && c != '+' && c != '-' && c != ':')
        .map(str::to_uppercase)
        .collect();
    if format.ends_with('Z') {
        ("UTC".to_owned(), " (UTC)".to_owned())
    } else if format.contains("%:z") {
        ("UTC".to_owned(), " (with their offset)".to_owned())
    } else if words.iter().any(|word| word == "UTC" || word == "GMT") {
        ("UTC".to_owned(), " (UTC, as the header says)".to_owned())
    } else {
        (site_zone.to_owned(), format!(" in the zone of the site, {site_zone}: confirm it"))
    }
}
