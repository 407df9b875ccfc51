//! Reading files as their loggers and readers would write them.

use crate::Error;
use crate::ground::GroundHistory;
use crate::level::LevelHistory;
use crate::run::{Fault, Run};
use crate::signals::Signal;
use crate::site::{Site, Source};
use crate::weather::Weather;
use jiff::civil::Time;
use jiff::tz::TimeZone;
use jiff::{Timestamp, ToSpan};
use std::collections::BTreeMap;
use std::path::Path;

/// Lines above the column heads, by source.
fn preamble(source: &str, month: &str) -> Vec<String> {
    let lines: &[&str] = match source {
        "Logger A" => {
            &["# Brackmoor T-7 logger A (invented readings)", "# vibrating wire, level, air; UTC"]
        }
        "Logger B" => &[
            "Brackmoor T-7;logger B",
            "invented readings",
            "clock;UTC+2 all year",
            "settlement down positive",
        ],
        "Perimeter survey" => {
            &["Perimeter rounds T-7 (invented readings), settlement since 2 March, mm"]
        }
        _ => return vec![format!("Daybook T-7 {month} (invented readings)")],
    };
    let mut lines: Vec<String> = lines.iter().map(|l| (*l).to_string()).collect();
    lines.push(match source {
        "Logger A" => format!("# month {month}"),
        "Logger B" => format!("month;{month}"),
        _ => format!("Month {month}; n/r = not read"),
    });
    lines
}

/// Writes all files of one source into `folder`.
///
/// # Errors
/// Where a time zone is unknown or a file cannot be written.
pub fn write_source(
    site: &Site,
    run: &Run,
    source: &Source,
    ground: &GroundHistory,
    level: &LevelHistory,
    folder: &Path,
) -> Result<(), Error> {
    let zone = TimeZone::get(&source.time_zone)?;
    let weather = Weather::new(site.baseline.as_second());
    let mut signals: Vec<Signal> = source
        .columns
        .values()
        .map(|column| Signal::new(site, run, &source.name, column))
        .collect();
    let mut months: BTreeMap<String, Vec<String>> = BTreeMap::new();
    for at_s in times(source, level, &zone)? {
        let cells: Vec<Option<String>> =
            signals.iter_mut().map(|signal| signal.read(ground, &weather, at_s)).collect();
        if silent(run, source, at_s) {
            continue;
        }
        let stamp = Timestamp::from_second(at_s + clock_error_s(run, source, at_s))?
            .to_zoned_datetime(zone.clone());
        let stamp_text = stamp.strftime(&source.time_format).to_string();
        let month = stamp.strftime("%Y-%m").to_string();
        months.entry(month).or_default().push(line(source, &stamp_text, &cells));
    }
    for (month, lines) in months {
        write_month(source, &month, &lines, folder)?;
    }
    Ok(())
}

fn line(source: &Source, stamp: &str, cells: &[Option<String>]) -> String {
    let missing = source.missing.first().map_or("", String::as_str);
    let mut text = stamp.to_string();
    for cell in cells {
        text.push_str(&source.delimiter);
        match cell {
            Some(number) => text.push_str(&number.replace('.', &source.decimal)),
            None => text.push_str(missing),
        }
    }
    text
}

fn write_month(source: &Source, month: &str, lines: &[String], folder: &Path) -> Result<(), Error> {
    let heads: Vec<&str> = source.columns.keys().map(String::as_str).collect();
    let mut text = preamble(&source.name, month).join("\r\n");
    text.push_str("\r\n");
    text.push_str(&source.time_column);
    text.push_str(&source.delimiter);
    text.push_str(&heads.join(&source.delimiter));
    text.push_str("\r\n");
    text.push_str(&lines.join("\r\n"));
    text.push_str("\r\n");
    let pattern = source.files.first().map_or("*", String::as_str);
    let path = folder.join(pattern.replace('*', month));
    std::fs::write(&path, encoded(source, &text)).map_err(|e| Error::file(&path, e))
}

/// The bytes of a file: windows-1252 where the source says so (all characters used here are in
/// its Latin-1 part), else UTF-8.
fn encoded(source: &Source, text: &str) -> Vec<u8> {
    match source.encoding.as_deref() {
        Some("windows-1252") => text.chars().map(|c| u8::try_from(c).unwrap_or(b'?')).collect(),
        _ => text.as_bytes().to_vec(),
    }
}

/// Times of the readings of a source.
fn times(source: &Source, level: &LevelHistory, zone: &TimeZone) -> Result<Vec<i64>, Error> {
    match source.name.as_str() {
        "Perimeter survey" => by_the_clock(level, zone, (7, 10), (16, 20)),
        "Daybook" => by_the_clock(level, zone, (6, 30), (15, 30)),
        _ => Ok(level.scans()),
    }
}

/// Once a day, and a second time on days on which the level is watched.
fn by_the_clock(
    level: &LevelHistory,
    zone: &TimeZone,
    daily: (i8, i8),
    second: (i8, i8),
) -> Result<Vec<i64>, Error> {
    let scans = level.scans();
    let (Some(&first_s), Some(&last_s)) = (scans.first(), scans.last()) else {
        return Ok(Vec::new());
    };
    let mut times = Vec::new();
    let mut day = Timestamp::from_second(first_s)?.to_zoned_datetime(zone.clone()).date();
    let last_day = Timestamp::from_second(last_s)?.to_zoned_datetime(zone.clone()).date();
    while day <= last_day {
        for (round, (hour, minute)) in [daily, second].into_iter().enumerate() {
            let at =
                day.to_datetime(Time::new(hour, minute, 0, 0)?).to_zoned_datetime(zone.clone())?;
            let at_s = at.timestamp().as_second();
            let due = round == 0 || level.watched_at(at_s);
            if due && (first_s..=last_s).contains(&at_s) {
                times.push(at_s);
            }
        }
        day = day.checked_add(1.day())?;
    }
    Ok(times)
}

fn silent(run: &Run, source: &Source, at_s: i64) -> bool {
    run.faults.iter().any(|fault| {
        matches!(fault, Fault::Gap { source: name, from_s, to_s }
            if *name == source.name && (*from_s..*to_s).contains(&at_s))
    })
}

fn clock_error_s(run: &Run, source: &Source, at_s: i64) -> i64 {
    run.faults
        .iter()
        .find_map(|fault| match fault {
            Fault::ClockFast { source: name, from_s, to_s, seconds }
                if *name == source.name && (*from_s..*to_s).contains(&at_s) =>
            {
                Some(*seconds)
            }
            _ => None,
        })
        .unwrap_or(0)
}
