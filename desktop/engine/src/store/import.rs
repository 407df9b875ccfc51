//! Taking the readings of a file into the store.

use super::decisions::hex;
use super::error::{Fault, StoreError};
use super::history::{act, add, entries};
use super::readings::{Channel, HourSummary, number_of};
use super::types::{Act, Change, LONGEST_NAME, Recorded, is_instant, text, utc};
use crate::import::NoValue;
use crate::units::UnitName;
use rusqlite::{CachedStatement, Connection, OptionalExtension, ToSql};
use serde::{Deserialize, Serialize};
use serde_json::Value;
use sha2::{Digest, Sha256};
use std::borrow::Cow;

/// A file whose readings are stored.
#[derive(Debug, Clone, Copy)]
pub struct ImportFile<'a> {
    /// Its name.
    pub name: &'a str,
    /// SHA-256 of its bytes ([`hash_of`]).
    pub hash: &'a str,
    /// What the reading of the file reported.
    pub report: &'a Value,
}

/// Readings of one channel, as read from one file.
#[derive(Debug, Clone, PartialEq)]
pub struct RawSeries {
    /// What gives them.
    pub channel: Channel,
    /// Unit they are written in.
    pub unit: UnitName,
    /// The readings.
    pub readings: Vec<RawReading>,
    /// Times at which a row stood but no value.
    pub not_read: Vec<RawNotRead>,
}

/// One reading, as read.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RawReading {
    /// When it was measured.
    pub time_s: i64,
    /// The value, in the unit of the series.
    pub value: f64,
    /// Line in the file.
    pub line: u32,
}

/// A row without a value.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RawNotRead {
    /// When.
    pub time_s: i64,
    /// Why.
    pub reason: NoValue,
    /// Line in the file.
    pub line: u32,
}

/// What became of the readings of a file.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct ImportOutcome {
    /// Number of the file in the store. For a file that changed nothing because the same bytes
    /// were imported before, the number it had then.
    pub file: i64,
    /// Whether the same bytes were imported before and nothing was changed now.
    pub known_already: bool,
    /// Readings stored.
    pub accepted: u64,
    /// Readings held already, with the same value in the same unit.
    pub duplicates: u64,
    /// Readings that differ from one held for the same channel and time. They are kept aside; the
    /// one held first counts.
    pub conflicts: u64,
    /// Times without a value that were not known before.
    pub not_read: u64,
    /// Readings that were not stored.
    pub refused: Vec<RefusedReading>,
    /// Readings that came later than others of their channel measured after them.
    pub late: Option<LateReadings>,
    /// Readings stored whose time is later than the moment of the import: a clock is wrong.
    pub ahead: u64,
    /// First time of the readings stored.
    pub first_s: Option<i64>,
    /// Last time of the readings stored.
    pub last_s: Option<i64>,
}

/// Readings put in before others that were there already. What was judged from
/// `first_s` on is to be judged again.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub struct LateReadings {
    /// How many.
    pub count: u64,
    /// When the first was measured.
    pub first_s: i64,
    /// When the last was measured.
    pub last_s: i64,
    /// Time from the measurement of the first to the import, s.
    pub oldest_age_s: i64,
}

/// A reading that was not stored.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct RefusedReading {
    /// The channel.
    pub channel: String,
    /// Line in the file.
    pub line: u32,
    /// Why not.
    pub reason: String,
}

/// A file in the list of imports.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ImportedFile {
    /// Its name.
    pub name: String,
    /// SHA-256 of its bytes.
    pub hash: String,
    /// What the reading of the file reported.
    pub report: Value,
    /// What became of its readings.
    pub outcome: ImportOutcome,
    /// By whom, when and why its readings were withdrawn.
    pub withdrawn: Option<Act>,
}

/// SHA-256 of bytes, in hexadecimal.
#[must_use]
pub fn hash_of(bytes: &[u8]) -> String {
    hex(&Sha256::digest(bytes))
}

/// Stores the readings. When the outcome is `known_already` nothing of this call is to be kept.
pub(super) fn import(
    connection: &Connection,
    file: &ImportFile<'_>,
    series: &[RawSeries],
    change: &Change<'_>,
) -> Result<ImportOutcome, Fault> {
    text("The name of the file", file.name, LONGEST_NAME)?;
    check_hash(file.hash)?;
    for one in series {
        text("The name of a channel", one.channel.of.name(), LONGEST_NAME)?;
    }
    let known: Option<i64> = connection
        .query_row("SELECT max(id) FROM import_file WHERE hash = ?1", [file.hash], |row| row.get(0))
        .optional()?
        .flatten();
    let rest: [(&str, &dyn ToSql); 3] =
        [("name", &file.name), ("hash", &file.hash), ("report", &file.report.to_string())];
    let id = add(connection, "import_file", change, &rest)?;
    let mut intake = Intake::new(connection, id, change.at_s)?;
    for one in series {
        intake.take(one)?;
    }
    let mut outcome = intake.outcome;
    if let Some(known) = known.filter(|_| !outcome.is_new()) {
        outcome.file = known;
        outcome.known_already = true;
        return Ok(outcome);
    }
    let json = serde_json::to_string(&outcome)?;
    connection.execute("INSERT INTO import_outcome VALUES (?1, ?2)", (id, json))?;
    Ok(outcome)
}

fn check_hash(hash: &str) -> Result<(), StoreError> {
    if hash.len() == 64 && hash.bytes().all(|byte| matches!(byte, b'0'..=b'9' | b'a'..=b'f')) {
        return Ok(());
    }
    Err(StoreError::Refused {
        what: "The hash of the file",
        found: format!("\"{hash}\""),
        allowed: "SHA-256 as 64 hexadecimal digits".to_owned(),
        remedy: "Take it over the bytes of the file.",
    })
}

/// Adds readings to those of the same hour.
pub(super) const ADD_TO_HOUR: &str = "
    count = count + excluded.count,
    lowest_s = CASE WHEN excluded.lowest < lowest THEN excluded.lowest_s ELSE lowest_s END,
    lowest = min(lowest, excluded.lowest),
    highest_s = CASE WHEN excluded.highest > highest THEN excluded.highest_s ELSE highest_s END,
    highest = max(highest, excluded.highest)";

/// One file on its way in.
struct Intake<'c> {
    connection: &'c Connection,
    at_s: i64,
    insert: CachedStatement<'c>,
    held: CachedStatement<'c>,
    kept_aside: CachedStatement<'c>,
    keep_aside: CachedStatement<'c>,
    mark: CachedStatement<'c>,
    add_hour: CachedStatement<'c>,
    outcome: ImportOutcome,
}

/// The channel whose readings are being taken.
#[derive(Clone, Copy)]
struct Target {
    channel: i64,
    unit: i64,
    /// Time of the newest reading held before this file.
    newest_s: Option<i64>,
}

impl ImportOutcome {
    /// Whether anything of the file was not held before.
    fn is_new(&self) -> bool {
        self.accepted + self.conflicts + self.not_read > 0
    }
}

impl<'c> Intake<'c> {
    fn new(connection: &'c Connection, file: i64, at_s: i64) -> Result<Self, Fault> {
        Ok(Self {
            connection,
            at_s,
            insert: connection.prepare_cached(
                "INSERT INTO reading (channel, time_s, value, unit, file, line)
                 VALUES (?1, ?2, ?3, ?4, ?5, ?6) ON CONFLICT DO NOTHING",
            )?,
            held: connection.prepare_cached(
                "SELECT value = ?3 AND unit = ?4 FROM reading WHERE channel = ?1 AND time_s = ?2",
            )?,
            kept_aside: connection.prepare_cached(
                "SELECT 1 FROM reading_conflict
                 WHERE channel = ?1 AND time_s = ?2 AND value = ?3 AND unit = ?4
                   AND file NOT IN (SELECT file FROM import_withdrawal)",
            )?,
            keep_aside: connection.prepare_cached(
                "INSERT INTO reading_conflict (channel, time_s, value, unit, file, line)
                 VALUES (?1, ?2, ?3, ?4, ?5, ?6)",
            )?,
            mark: connection.prepare_cached(
                "INSERT INTO not_read VALUES (?1, ?2, ?3, ?4, ?5) ON CONFLICT DO NOTHING",
            )?,
            add_hour: connection.prepare_cached(&format!(
                "INSERT INTO reading_hour VALUES (?1, ?2, ?3, ?4, ?5, ?6, ?7, ?8)
                 ON CONFLICT DO UPDATE SET {ADD_TO_HOUR}"
            ))?,
            outcome: ImportOutcome {
                file,
                known_already: false,
                accepted: 0,
                duplicates: 0,
                conflicts: 0,
                not_read: 0,
                refused: Vec::new(),
                late: None,
                ahead: 0,
                first_s: None,
                last_s: None,
            },
        })
    }

    fn take(&mut self, series: &RawSeries) -> Result<(), Fault> {
        let channel = channel_number(self.connection, &series.channel)?;
        let unit = unit_number(self.connection, series.unit)?;
        let newest_s = self.connection.query_row(
            "SELECT max(time_s) FROM reading WHERE channel = ?1",
            [channel],
            |row| row.get(0),
        )?;
        let target = Target { channel, unit, newest_s };
        let accepted_before = self.outcome.accepted;
        let mut hour: Option<HourSummary> = None;
        for reading in by_time(&series.readings).iter() {
            if let Some(reason) = why_refused(reading) {
                let channel = series.channel.to_string();
                self.outcome.refused.push(RefusedReading { channel, line: reading.line, reason });
            } else if self.store(&target, reading)? {
                self.note(&target, reading);
                match &mut hour {
                    Some(hour) if hour.holds(reading.time_s) => hour.include(reading),
                    other => {
                        let full = other.replace(HourSummary::of(series.unit, reading));
                        self.add_hour(&target, full)?;
                    }
                }
            }
        }
        self.add_hour(&target, hour)?;
        let added = (self.outcome.accepted - accepted_before) as i64;
        self.connection
            .prepare_cached(
                "INSERT INTO reading_count VALUES (?1, ?2)
                 ON CONFLICT DO UPDATE SET readings = readings + excluded.readings",
            )?
            .execute((channel, added))?;
        for mark in series.not_read.iter().filter(|mark| is_instant(mark.time_s)) {
            let RawNotRead { time_s, reason, line } = *mark;
            let values = (channel, time_s, reason_word(reason), self.outcome.file, line);
            self.outcome.not_read += self.mark.execute(values)? as u64;
        }
        Ok(())
    }

    /// Stores one reading; `false` when one is held already for its channel and time.
    fn store(&mut self, target: &Target, reading: &RawReading) -> Result<bool, Fault> {
        let (Target { channel, unit, .. }, file) = (*target, self.outcome.file);
        let RawReading { time_s, value, line } = *reading;
        if self.insert.execute((channel, time_s, value, unit, file, line))? == 1 {
            return Ok(true);
        }
        let same: bool = self.held.query_row((channel, time_s, value, unit), |row| row.get(0))?;
        if same || self.kept_aside.exists((channel, time_s, value, unit))? {
            self.outcome.duplicates += 1;
        } else {
            self.keep_aside.execute((channel, time_s, value, unit, file, line))?;
            self.outcome.conflicts += 1;
        }
        Ok(false)
    }

    fn note(&mut self, target: &Target, reading: &RawReading) {
        let (at_s, time_s) = (self.at_s, reading.time_s);
        let outcome = &mut self.outcome;
        outcome.accepted += 1;
        outcome.ahead += u64::from(time_s > at_s);
        outcome.first_s = Some(outcome.first_s.map_or(time_s, |first| first.min(time_s)));
        outcome.last_s = Some(outcome.last_s.map_or(time_s, |last| last.max(time_s)));
        if target.newest_s.is_some_and(|newest| time_s < newest) {
            let before = outcome.late;
            let first_s = before.map_or(time_s, |late| late.first_s.min(time_s));
            outcome.late = Some(LateReadings {
                count: before.map_or(0, |late| late.count) + 1,
                first_s,
                last_s: before.map_or(time_s, |late| late.last_s.max(time_s)),
                oldest_age_s: at_s - first_s,
            });
        }
    }

    fn add_hour(&mut self, target: &Target, hour: Option<HourSummary>) -> Result<(), Fault> {
        if let Some(hour) = hour {
            self.add_hour.execute((
                target.channel,
                hour.hour(),
                target.unit,
                hour.count as i64,
                hour.lowest,
                hour.lowest_s,
                hour.highest,
                hour.highest_s,
            ))?;
        }
        Ok(())
    }
}

/// In order of time: rows then go in side by side, and hours are gone through once.
fn by_time(readings: &[RawReading]) -> Cow<'_, [RawReading]> {
    if readings.is_sorted_by_key(|reading| reading.time_s) {
        return Cow::Borrowed(readings);
    }
    let mut sorted = readings.to_vec();
    sorted.sort_by_key(|reading| reading.time_s);
    Cow::Owned(sorted)
}

fn why_refused(reading: &RawReading) -> Option<String> {
    if !reading.value.is_finite() {
        Some(format!("the value {} is not a finite number", reading.value))
    } else if !is_instant(reading.time_s) {
        Some(format!("the time {} cannot be: the clock was not set", utc(reading.time_s)))
    } else {
        None
    }
}

fn channel_number(connection: &Connection, channel: &Channel) -> Result<i64, Fault> {
    match number_of(connection, channel)? {
        Some(id) => Ok(id),
        None => {
            connection
                .prepare_cached("INSERT INTO channel (kind, name, signal) VALUES (?1, ?2, ?3)")?
                .execute(channel.words())?;
            Ok(connection.last_insert_rowid())
        }
    }
}

fn unit_number(connection: &Connection, unit: UnitName) -> Result<i64, Fault> {
    let mut add =
        connection.prepare_cached("INSERT INTO unit (word) VALUES (?1) ON CONFLICT DO NOTHING")?;
    add.execute([unit.word()])?;
    let mut find = connection.prepare_cached("SELECT id FROM unit WHERE word = ?1")?;
    Ok(find.query_row([unit.word()], |row| row.get(0))?)
}

const MISSING: &str = "missing";
const REFUSED: &str = "refused";

fn reason_word(reason: NoValue) -> &'static str {
    match reason {
        NoValue::Missing => MISSING,
        NoValue::Refused => REFUSED,
    }
}

pub(super) fn reason_of(word: &str) -> Result<NoValue, Fault> {
    match word {
        MISSING => Ok(NoValue::Missing),
        REFUSED => Ok(NoValue::Refused),
        other => Err(Fault::Entry(format!("reason \"{other}\""))),
    }
}

pub(super) fn imports(connection: &Connection) -> Result<Vec<Recorded<ImportedFile>>, Fault> {
    let sql =
        "SELECT f.id, f.who, f.at_s, f.why, f.name, f.hash, f.report, outcome, w.who, w.at_s, w.why
         FROM import_file AS f
         JOIN import_outcome AS o ON o.file = f.id
         LEFT JOIN import_withdrawal AS w ON w.file = f.id ORDER BY f.id";
    entries(connection, sql, [], |row| {
        let (report, outcome): (String, String) = (row.get(6)?, row.get(7)?);
        Ok(ImportedFile {
            name: row.get(4)?,
            hash: row.get(5)?,
            report: serde_json::from_str(&report)?,
            outcome: serde_json::from_str(&outcome)?,
            withdrawn: act(row, 8)?,
        })
    })
}
