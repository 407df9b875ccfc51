//! Between readings as they are imported from text and readings as they are stored: there raw and
//! in the unit of the file, here in the unit of the instrument.

use super::error::{Fault, StoreError};
use super::import::{RawNotRead, RawReading, RawSeries, reason_of};
use super::limits::LimitSet;
use super::readings::{self, Channel, Units};
use super::{Change, ImportFile, ImportOutcome, Store, hash_of};
use crate::import::{
    Conflict, FileReport, ImportReport, Imported, NotRead, Sample, Series, SeriesOf, Source,
};
use crate::site::{Signal, SiteFile};
use crate::units::UnitName;
use rusqlite::Connection;

/// Stores what was read of one file: `source` is its place in `imported.report.files`, `bytes`
/// what it was read from. Read files one by one, so that each is compared with the store and not
/// with the others.
///
/// # Errors
/// [`StoreError`]; the store is as it was.
pub fn keep(
    store: &mut (impl Store + ?Sized),
    imported: &Imported,
    source: usize,
    bytes: &[u8],
    change: &Change<'_>,
) -> Result<ImportOutcome, StoreError> {
    let Some(file) = imported.report.files.get(source) else {
        return Err(StoreError::Refused {
            what: "The file to store",
            found: format!("number {source}"),
            allowed: format!("one of the {} imported", imported.report.files.len()),
            remedy: "Import it first.",
        });
    };
    let report = serde_json::to_value(file).map_err(|error| StoreError::Refused {
        what: "The report of the import",
        found: error.to_string(),
        allowed: "one that can be written as JSON".to_owned(),
        remedy: "Import the file again.",
    })?;
    let series = raw_series(imported, file, source as u32);
    let file = ImportFile { name: &file.file, hash: &hash_of(bytes), report: &report };
    store.import(&file, &series, change)
}

/// The readings of one file as they stood in it.
fn raw_series(imported: &Imported, file: &FileReport, source: u32) -> Vec<RawSeries> {
    let mut found = Vec::new();
    for series in &imported.series {
        let column = file
            .columns_taken
            .iter()
            .find(|column| column.of == series.of && column.signal == series.signal);
        let Some(column) = column else { continue };
        let channel = Channel { of: series.of.clone(), signal: series.signal };
        let own = series.points.iter().filter(|point| point.source == source);
        let readings = own
            .map(|point| RawReading {
                time_s: point.time_s,
                value: point.raw.unwrap_or(point.value),
                line: point.line,
            })
            .collect();
        let marks = series.not_read.iter().filter(|mark| mark.source == source);
        let not_read = marks
            .map(|mark| RawNotRead { time_s: mark.time_s, reason: mark.reason, line: mark.line })
            .collect();
        let set_aside = second_readings(&imported.report.conflicts, series, source);
        found.push(RawSeries { channel: channel.clone(), unit: column.unit, readings, not_read });
        if !set_aside.is_empty() {
            let unit = series.unit;
            found.push(RawSeries { channel, unit, readings: set_aside, not_read: Vec::new() });
        }
    }
    found
}

/// Readings that stood in the file beside the one taken, in the unit of the series.
fn second_readings(conflicts: &[Conflict], series: &Series, source: u32) -> Vec<RawReading> {
    let of_series = |conflict: &&Conflict| {
        let point = series.points.binary_search_by_key(&conflict.time_s, |point| point.time_s);
        conflict.of == series.of.name()
            && conflict.refused_at.file == source
            && point.is_ok_and(|at| series.points[at].value == conflict.kept)
    };
    let each = conflicts.iter().filter(of_series);
    each.map(|conflict| RawReading {
        time_s: conflict.time_s,
        value: conflict.refused,
        line: conflict.refused_at.line,
    })
    .collect()
}

/// Readings of the instruments of a site and of all other channels in a window, as the import of
/// files gives them. The source of a reading is the number of its file in the store.
pub(super) fn imported(
    connection: &Connection,
    site: &SiteFile,
    from_s: i64,
    to_s: i64,
) -> Result<Imported, Fault> {
    let units = Units::of(connection)?;
    let mut imported = Imported::default();
    for (number, channel) in readings::all(connection)? {
        let Some(unit) = unit_of(&channel, site) else { continue };
        let mut points = Vec::new();
        let mut misfit = None;
        readings::for_each(connection, &units, (number, from_s, to_s), |reading| {
            let Some(value) = reading.unit.convert(reading.value, unit) else {
                misfit = Some(reading);
                return;
            };
            let keep_raw = channel.signal == Signal::Digits || reading.unit != unit;
            points.push(Sample {
                time_s: reading.time_s,
                value,
                source: reading.file as u32,
                line: reading.line,
                raw: keep_raw.then_some(reading.value),
            });
        })?;
        if let Some(reading) = misfit {
            let detail = format!("{channel} in {} where {unit} is needed", reading.unit);
            return Err(Fault::Entry(detail));
        }
        let not_read = not_read(connection, number, (from_s, to_s), &points)?;
        if points.is_empty() && not_read.is_empty() {
            continue;
        }
        conflicts(connection, &channel, unit, &mut imported.report)?;
        let Channel { of, signal } = channel;
        imported.series.push(Series { of, unit, signal, points, not_read });
    }
    imported.find_gaps(site);
    Ok(imported)
}

/// The unit in which a channel is worked with; none when the site does not know the instrument.
fn unit_of(channel: &Channel, site: &SiteFile) -> Option<UnitName> {
    match &channel.of {
        SeriesOf::Instrument(id) => {
            let instrument = site.instruments.iter().find(|instrument| instrument.id == *id)?;
            Some(match channel.signal {
                Signal::Digits => UnitName::Digits,
                Signal::Engineering => UnitName::from(instrument.unit),
            })
        }
        SeriesOf::Channel(name) => Some(UnitName::of_channel(name)),
    }
}

fn not_read(
    connection: &Connection,
    channel: i64,
    (from_s, to_s): (i64, i64),
    points: &[Sample],
) -> Result<Vec<NotRead>, Fault> {
    let mut statement = connection.prepare_cached(
        "SELECT time_s, reason, file, line FROM not_read
         WHERE channel = ?1 AND time_s BETWEEN ?2 AND ?3 ORDER BY time_s",
    )?;
    let mut rows = statement.query((channel, from_s, to_s))?;
    let mut marks = Vec::new();
    while let Some(row) = rows.next()? {
        let time_s: i64 = row.get(0)?;
        // A reading of the same time from another row or file takes the place of the mark.
        if points.binary_search_by_key(&time_s, |point| point.time_s).is_err() {
            let reason = reason_of(&row.get::<_, String>(1)?)?;
            marks.push(NotRead { time_s, reason, source: row.get(2)?, line: row.get(3)? });
        }
    }
    Ok(marks)
}

fn conflicts(
    connection: &Connection,
    channel: &Channel,
    unit: UnitName,
    report: &mut ImportReport,
) -> Result<(), Fault> {
    for conflict in readings::conflicts(connection, channel)? {
        let (held, other) = (conflict.held, conflict.other);
        let value = |value: f64, from: UnitName| from.convert(value, unit).unwrap_or(value);
        report.conflicts.push(Conflict {
            of: channel.of.name().to_owned(),
            time_s: held.time_s,
            kept: value(held.value, held.unit),
            kept_at: Source { file: held.file as u32, line: held.line },
            refused: value(other.value, other.unit),
            refused_at: Source { file: other.file as u32, line: other.line },
        });
    }
    Ok(())
}

impl LimitSet {
    /// The site file with these limits in place of its own, as a comparison needs it.
    #[must_use]
    pub fn put_into(&self, site: &SiteFile) -> SiteFile {
        let mut site = site.clone();
        for instrument in &mut site.instruments {
            let of_one = self.instruments.get(&instrument.id);
            instrument.limits = Some(of_one.map_or_else(Vec::new, |own| own.limits.clone()));
            instrument.persistence = of_one.map(|own| own.persistence.clone());
            instrument.hysteresis = of_one.map(|own| own.hysteresis);
        }
        site
    }
}
