//! Readings out of the store.

use super::error::Fault;
use super::import::RawReading;
use crate::import::SeriesOf;
use crate::site::Signal;
use crate::site::reader::Choice;
use crate::units::UnitName;
use rusqlite::{Connection, OptionalExtension, Row};
use serde::Serialize;
use std::collections::BTreeMap;
use std::fmt;

/// Length of an hour, s.
pub(super) const HOUR_S: i64 = 3600;

/// What gives readings. An instrument whose raw digits and values both stand in files has two.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize)]
pub struct Channel {
    /// An instrument, or something that a reduction needs.
    pub of: SeriesOf,
    /// Raw digits or engineering values.
    pub signal: Signal,
}

impl Channel {
    /// The values of an instrument.
    #[must_use]
    pub fn instrument(id: &str) -> Self {
        Self { of: SeriesOf::Instrument(id.to_owned()), signal: Signal::Engineering }
    }

    /// The raw digits of an instrument.
    #[must_use]
    pub fn digits(id: &str) -> Self {
        Self { of: SeriesOf::Instrument(id.to_owned()), signal: Signal::Digits }
    }

    /// Something that is no instrument, such as `barometer`.
    #[must_use]
    pub fn other(name: &str) -> Self {
        Self { of: SeriesOf::Channel(name.to_owned()), signal: Signal::Engineering }
    }

    /// Kind, name and signal, as the store has them.
    pub(super) fn words(&self) -> (&'static str, &str, &'static str) {
        let (kind, name) = match &self.of {
            SeriesOf::Instrument(name) => ("instrument", name),
            SeriesOf::Channel(name) => ("channel", name),
        };
        (kind, name, self.signal.word())
    }

    /// From kind, name and signal at a column on.
    fn read(row: &Row<'_>, from: usize) -> Result<Self, Fault> {
        let (kind, name): (String, String) = (row.get(from)?, row.get(from + 1)?);
        let signal: String = row.get(from + 2)?;
        let of = match kind.as_str() {
            "instrument" => SeriesOf::Instrument(name),
            _ => SeriesOf::Channel(name),
        };
        let signal =
            if signal == Signal::Digits.word() { Signal::Digits } else { Signal::Engineering };
        Ok(Self { of, signal })
    }
}

impl fmt::Display for Channel {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.signal {
            Signal::Digits => write!(f, "{} (digits)", self.of.name()),
            Signal::Engineering => f.write_str(self.of.name()),
        }
    }
}

/// A reading in the store.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct StoredReading {
    /// When it was measured.
    pub time_s: i64,
    /// The value as read.
    pub value: f64,
    /// Unit as read.
    pub unit: UnitName,
    /// Number of the file it came from.
    pub file: i64,
    /// Line in that file.
    pub line: u32,
}

/// A reading beside the one that counts.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ReadingConflict {
    /// The reading that counts: the one that was stored first.
    pub held: StoredReading,
    /// The reading that differs.
    pub other: StoredReading,
}

/// What is held of a channel.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ChannelState {
    /// The channel.
    pub channel: Channel,
    /// How many readings.
    pub readings: u64,
    /// Time of the first.
    pub first_s: i64,
    /// The newest.
    pub latest: StoredReading,
}

/// The readings of one hour in one unit.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct HourSummary {
    /// Begin of the hour.
    pub start_s: i64,
    /// Unit as read.
    pub unit: UnitName,
    /// How many readings.
    pub count: u64,
    /// The lowest.
    pub lowest: f64,
    /// When it was measured.
    pub lowest_s: i64,
    /// The highest.
    pub highest: f64,
    /// When it was measured.
    pub highest_s: i64,
}

impl HourSummary {
    pub(super) fn of(unit: UnitName, reading: &RawReading) -> Self {
        let RawReading { time_s, value, .. } = *reading;
        Self {
            start_s: time_s.div_euclid(HOUR_S) * HOUR_S,
            unit,
            count: 1,
            lowest: value,
            lowest_s: time_s,
            highest: value,
            highest_s: time_s,
        }
    }

    pub(super) fn hour(&self) -> i64 {
        self.start_s / HOUR_S
    }

    pub(super) fn holds(&self, time_s: i64) -> bool {
        time_s.div_euclid(HOUR_S) == self.hour()
    }

    pub(super) fn include(&mut self, reading: &RawReading) {
        self.count += 1;
        if reading.value < self.lowest {
            (self.lowest, self.lowest_s) = (reading.value, reading.time_s);
        }
        if reading.value > self.highest {
            (self.highest, self.highest_s) = (reading.value, reading.time_s);
        }
    }
}

/// The units by their numbers; they are few.
pub(super) struct Units(BTreeMap<i64, UnitName>);

impl Units {
    pub(super) fn of(connection: &Connection) -> Result<Self, Fault> {
        let mut statement = connection.prepare_cached("SELECT id, word FROM unit")?;
        let mut rows = statement.query([])?;
        let mut units = BTreeMap::new();
        while let Some(row) = rows.next()? {
            let word: String = row.get(1)?;
            let unit = UnitName::ALL.iter().find(|(_, known)| *known == word);
            let (unit, _) = unit.ok_or_else(|| Fault::Entry(format!("unit \"{word}\"")))?;
            units.insert(row.get(0)?, *unit);
        }
        Ok(Self(units))
    }

    fn by_number(&self, number: i64) -> Result<UnitName, Fault> {
        self.0.get(&number).copied().ok_or_else(|| Fault::Entry(format!("unit number {number}")))
    }

    /// Time, value, unit, file and line from a column on.
    fn reading(&self, row: &Row<'_>, from: usize) -> Result<StoredReading, Fault> {
        Ok(StoredReading {
            time_s: row.get(from)?,
            value: row.get(from + 1)?,
            unit: self.by_number(row.get(from + 2)?)?,
            file: row.get(from + 3)?,
            line: row.get(from + 4)?,
        })
    }
}

const READING: &str = "time_s, value, unit, file, line";

/// Number of a channel that has been imported.
pub(super) fn number_of(connection: &Connection, channel: &Channel) -> Result<Option<i64>, Fault> {
    let mut statement = connection
        .prepare_cached("SELECT id FROM channel WHERE kind = ?1 AND name = ?2 AND signal = ?3")?;
    Ok(statement.query_row(channel.words(), |row| row.get(0)).optional()?)
}

/// Every channel that has been imported, by name.
pub(super) fn all(connection: &Connection) -> Result<Vec<(i64, Channel)>, Fault> {
    let mut statement = connection.prepare_cached(
        "SELECT id, kind, name, signal FROM channel ORDER BY kind DESC, name, signal",
    )?;
    let mut rows = statement.query([])?;
    let mut found = Vec::new();
    while let Some(row) = rows.next()? {
        found.push((row.get(0)?, Channel::read(row, 1)?));
    }
    Ok(found)
}

/// Gives each reading of a channel in a window to `each`, by time.
pub(super) fn for_each(
    connection: &Connection,
    units: &Units,
    (channel, from_s, to_s): (i64, i64, i64),
    mut each: impl FnMut(StoredReading),
) -> Result<(), Fault> {
    let mut statement = connection.prepare_cached(&format!(
        "SELECT {READING} FROM reading
         WHERE channel = ?1 AND time_s BETWEEN ?2 AND ?3 ORDER BY time_s"
    ))?;
    let mut rows = statement.query((channel, from_s, to_s))?;
    while let Some(row) = rows.next()? {
        each(units.reading(row, 0)?);
    }
    Ok(())
}

pub(super) fn in_window(
    connection: &Connection,
    channel: &Channel,
    from_s: i64,
    to_s: i64,
) -> Result<Vec<StoredReading>, Fault> {
    let mut readings = Vec::new();
    if let Some(number) = number_of(connection, channel)? {
        let units = Units::of(connection)?;
        for_each(connection, &units, (number, from_s, to_s), |reading| readings.push(reading))?;
    }
    Ok(readings)
}

pub(super) fn latest(
    connection: &Connection,
    channel: &Channel,
) -> Result<Option<StoredReading>, Fault> {
    let Some(number) = number_of(connection, channel)? else { return Ok(None) };
    let units = Units::of(connection)?;
    let mut statement = connection.prepare_cached(&format!(
        "SELECT {READING} FROM reading WHERE channel = ?1 ORDER BY time_s DESC LIMIT 1"
    ))?;
    let mut rows = statement.query([number])?;
    rows.next()?.map(|row| units.reading(row, 0)).transpose()
}

pub(super) fn channels(connection: &Connection) -> Result<Vec<ChannelState>, Fault> {
    let mut statement = connection.prepare_cached(
        "SELECT readings, (SELECT min(time_s) FROM reading WHERE channel = ?1)
         FROM reading_count WHERE channel = ?1",
    )?;
    let mut states = Vec::new();
    for (number, channel) in all(connection)? {
        if let Some(latest) = latest(connection, &channel)? {
            let (count, first_s): (i64, i64) =
                statement.query_row([number], |row| Ok((row.get(0)?, row.get(1)?)))?;
            let readings = count.unsigned_abs();
            states.push(ChannelState { channel, readings, first_s, latest });
        }
    }
    Ok(states)
}

pub(super) fn hours(
    connection: &Connection,
    channel: &Channel,
    from_s: i64,
    to_s: i64,
) -> Result<Vec<HourSummary>, Fault> {
    let Some(number) = number_of(connection, channel)? else { return Ok(Vec::new()) };
    let units = Units::of(connection)?;
    let mut statement = connection.prepare_cached(
        "SELECT hour, unit, count, lowest, lowest_s, highest, highest_s FROM reading_hour
         WHERE channel = ?1 AND hour BETWEEN ?2 AND ?3 ORDER BY hour, unit",
    )?;
    let hour = |time_s: i64| time_s.div_euclid(HOUR_S);
    let mut rows = statement.query((number, hour(from_s), hour(to_s)))?;
    let mut summaries = Vec::new();
    while let Some(row) = rows.next()? {
        summaries.push(HourSummary {
            start_s: row.get::<_, i64>(0)? * HOUR_S,
            unit: units.by_number(row.get(1)?)?,
            count: row.get::<_, i64>(2)?.unsigned_abs(),
            lowest: row.get(3)?,
            lowest_s: row.get(4)?,
            highest: row.get(5)?,
            highest_s: row.get(6)?,
        });
    }
    Ok(summaries)
}

pub(super) fn conflicts(
    connection: &Connection,
    channel: &Channel,
) -> Result<Vec<ReadingConflict>, Fault> {
    let units = Units::of(connection)?;
    let mut statement = connection.prepare_cached(
        "SELECT h.time_s, h.value, h.unit, h.file, h.line, o.time_s, o.value, o.unit, o.file, o.line
         FROM reading_conflict AS o
         JOIN reading AS h ON h.channel = o.channel AND h.time_s = o.time_s
         WHERE o.channel = ?1 AND (h.value <> o.value OR h.unit <> o.unit)
           AND o.file NOT IN (SELECT file FROM import_withdrawal)
         ORDER BY o.time_s, o.id",
    )?;
    let mut rows = statement.query([number_of(connection, channel)?])?;
    let mut found = Vec::new();
    while let Some(row) = rows.next()? {
        found.push(ReadingConflict { held: units.reading(row, 0)?, other: units.reading(row, 5)? });
    }
    Ok(found)
}
