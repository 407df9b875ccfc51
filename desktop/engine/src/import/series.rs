//! Readings by instrument.

use super::report::{Conflict, Gap, ImportReport, Source};
use crate::site::Signal;
use crate::units::UnitName;
use serde::Serialize;

/// What a series belongs to.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum SeriesOf {
    /// An instrument of the site file, by its id.
    Instrument(String),
    /// Something that a reduction needs: `barometer`, `temperature:air` or `temperature:` and the
    /// id of an instrument.
    Channel(String),
}

impl SeriesOf {
    /// The id or the channel.
    #[must_use]
    pub fn name(&self) -> &str {
        match self {
            Self::Instrument(name) | Self::Channel(name) => name,
        }
    }
}

/// One reading.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Sample {
    /// When it was measured, Unix time, s.
    pub time_s: i64,
    /// Value in the unit of the series.
    pub value: f64,
    /// Index of its file in the report.
    pub source: u32,
    /// Its line in that file, counted from 1.
    pub line: u32,
    /// The number as it stands in the file, where that is not `value`: before a change of unit,
    /// or the digits of a gauge.
    pub raw: Option<f64>,
}

/// Why there is no value.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum NoValue {
    /// A missing-value mark or an empty field.
    Missing,
    /// Something that is not a number; the report says what.
    Refused,
}

/// A time at which a row stands but no value: the data state "not read".
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub struct NotRead {
    /// When, Unix time, s.
    pub time_s: i64,
    /// Why.
    pub reason: NoValue,
    /// Index of its file in the report.
    pub source: u32,
    /// Its line in that file, counted from 1.
    pub line: u32,
}

/// The readings of one instrument or channel, by time, each time once.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Series {
    /// Whose readings.
    pub of: SeriesOf,
    /// Unit of the values: that of the instrument, kPa for the barometer, C for temperatures, or
    /// digits.
    pub unit: UnitName,
    /// Digits still have to be reduced with the calibration of the instrument.
    pub signal: Signal,
    /// The readings.
    pub points: Vec<Sample>,
    /// Times without a value, none of which has a reading from another row.
    pub not_read: Vec<NotRead>,
}

impl Series {
    /// Sorts, drops what stands twice and lists what contradicts itself. The order of files and
    /// lines decides which reading is the first.
    pub(super) fn settle(&mut self, report: &mut ImportReport) {
        if !self.points.is_sorted_by_key(|point| point.time_s) {
            // Stable, so that the first stays first.
            self.points.sort_by_key(|point| point.time_s);
        }
        let of = self.of.name();
        self.points.dedup_by(|later, first| {
            if later.time_s != first.time_s {
                return false;
            }
            let file = report.files.get_mut(later.source as usize);
            if later.value == first.value {
                report.duplicates_ignored += 1;
                file.into_iter().for_each(|file| file.duplicates += 1);
            } else {
                file.into_iter().for_each(|file| file.contradicted += 1);
                report.conflicts.push(Conflict {
                    of: of.to_owned(),
                    time_s: first.time_s,
                    kept: first.value,
                    kept_at: Source { file: first.source, line: first.line },
                    refused: later.value,
                    refused_at: Source { file: later.source, line: later.line },
                });
            }
            true
        });
        self.not_read.sort_by_key(|mark| mark.time_s);
        self.not_read.dedup_by_key(|mark| mark.time_s);
        let points = &self.points;
        self.not_read.retain(|mark| {
            points.binary_search_by_key(&mark.time_s, |point| point.time_s).is_err()
        });
    }

    /// Lists the times without a reading that are longer than `longest_s`.
    pub(super) fn gaps(&self, longest_s: f64) -> impl Iterator<Item = Gap> + '_ {
        self.points.windows(2).filter_map(move |pair| {
            let (from_s, to_s) = (pair[0].time_s, pair[1].time_s);
            let long = to_s.saturating_sub(from_s) as f64 > longest_s;
            long.then(|| Gap { of: self.of.name().to_owned(), from_s, to_s })
        })
    }

    /// The value at a time, linear between readings; `None` outside them.
    #[must_use]
    pub fn at(&self, time_s: i64) -> Option<f64> {
        let after = self.points.partition_point(|point| point.time_s < time_s);
        let next = self.points.get(after)?;
        if next.time_s == time_s {
            return Some(next.value);
        }
        let before = self.points.get(after.checked_sub(1)?)?;
        let share = (time_s - before.time_s) as f64 / (next.time_s - before.time_s) as f64;
        Some(before.value + share * (next.value - before.value))
    }
}
