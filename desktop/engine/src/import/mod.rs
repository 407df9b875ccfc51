//! Readings from files of delimited text, as any logger or notebook writes them.
//!
//! What a file means is said by a layout of the site file; when none fits, it is guessed from the
//! headers and the report says so. Values are converted exactly to the unit of their instrument,
//! times to UTC. Nothing is dropped silently: every refused field and row is listed by line with
//! its reason, a value that is missing leaves a mark that it was not read, and what looks wrong
//! with units, signs, rods or clocks is reported and never applied.

mod clock;
mod guess;
mod layout;
mod number;
mod report;
mod rows;
mod series;
mod suspicion;
mod text;

pub use number::NotANumber;
pub use report::{
    ColumnNote, ColumnTaken, Conflict, FileReport, Gap, ImportReport, LISTED_PER_FILE, LayoutUsed,
    Reason, Refused, Source,
};
pub use series::{NoValue, NotRead, Sample, Series, SeriesOf};
pub use suspicion::{Suspicion, SuspicionKind};
pub use text::EncodingFrom;

use crate::site::{InstrumentKind, ReadingsLayout, SiteFile};
use crate::time;
use clock::Clock;
use rows::RowReader;
use serde::Serialize;
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use thiserror::Error;

/// Largest file that is read, bytes.
const LARGEST_FILE: u64 = 2 << 30;

/// Readings of one import, with the report on how they came in.
#[derive(Debug, Clone, Default, PartialEq, Serialize)]
pub struct Imported {
    /// By instrument, then by channel, each in the order of names.
    pub series: Vec<Series>,
    /// What was taken, refused and suspected.
    pub report: ImportReport,
}

impl Imported {
    /// The readings of an instrument.
    #[must_use]
    pub fn instrument(&self, id: &str) -> Option<&Series> {
        self.series
            .iter()
            .find(|series| matches!(&series.of, SeriesOf::Instrument(name) if name == id))
    }

    /// The readings of a channel, such as `barometer`.
    #[must_use]
    pub fn channel(&self, channel: &str) -> Option<&Series> {
        self.series
            .iter()
            .find(|series| matches!(&series.of, SeriesOf::Channel(name) if name == channel))
    }

    /// Lists the times without readings longer than the age at which they are stale.
    pub(crate) fn find_gaps(&mut self, site: &SiteFile) {
        for series in &self.series {
            let instrument = site.instruments.iter().find(
                |instrument| matches!(&series.of, SeriesOf::Instrument(id) if *id == instrument.id),
            );
            if let Some(instrument) = instrument {
                self.report.gaps.extend(series.gaps(instrument.stale_after_min * 60.0));
            }
        }
    }

    /// The liquid level in the tank under test: the master gauge, or the only one.
    #[must_use]
    pub fn liquid_level(&self, site: &SiteFile) -> Option<&Series> {
        let gauges = || site.instruments.iter().filter(|i| i.kind == InstrumentKind::LevelGauge);
        let master =
            gauges().find(|gauge| gauge.master == Some(true)).or_else(|| gauges().next())?;
        self.instrument(&master.id)
    }
}

/// Why nothing at all was imported.
#[derive(Debug, Error)]
pub enum ImportError {
    /// No file was given.
    #[error("No file was given.")]
    NoFiles,
    /// A file cannot be read; nothing of the others was taken either.
    #[error("{file}: cannot be read ({reason}). Nothing imported.")]
    Unreadable {
        /// Its name.
        file: String,
        /// What the system says.
        reason: std::io::Error,
    },
    /// A file is too large to be one of readings.
    #[error("{file}: {bytes} bytes; at most {LARGEST_FILE} are read. Split it. Nothing imported.")]
    TooLarge {
        /// Its name.
        file: String,
        /// Its size.
        bytes: u64,
    },
}

/// Reads files of readings.
///
/// # Errors
/// When no file is given or one cannot be opened. What is wrong inside the files is in the report.
pub fn read_files(site: &SiteFile, paths: &[PathBuf]) -> Result<Imported, ImportError> {
    if paths.is_empty() {
        return Err(ImportError::NoFiles);
    }
    let mut import = Import::new(site);
    for path in paths {
        let content = file_bytes(path)?;
        let name = path.file_name().unwrap_or(path.as_os_str());
        import.take(&name.to_string_lossy(), &content);
    }
    Ok(import.finish())
}

/// The content of a file of readings.
///
/// # Errors
/// When it cannot be opened or is too large.
pub fn file_bytes(path: &Path) -> Result<Vec<u8>, ImportError> {
    let file = path.display().to_string();
    let unreadable = |reason| ImportError::Unreadable { file: file.clone(), reason };
    let bytes = std::fs::metadata(path).map_err(unreadable)?.len();
    if bytes > LARGEST_FILE {
        return Err(ImportError::TooLarge { file, bytes });
    }
    std::fs::read(path).map_err(unreadable)
}

/// Reads files that are in memory already, as (name, bytes).
#[must_use]
pub fn read_bytes(site: &SiteFile, files: &[(&str, &[u8])]) -> Imported {
    let mut import = Import::new(site);
    for (name, bytes) in files {
        import.take(name, bytes);
    }
    import.finish()
}

/// How a file would be read: the first layout of the site that fits it, else a guess; whether it
/// is a guess. None when it cannot be understood.
#[must_use]
pub fn layout_of(site: &SiteFile, name: &str, bytes: &[u8]) -> Option<(ReadingsLayout, bool)> {
    for layout in layout::candidates(site, name) {
        let decoded = text::decode(bytes, layout.encoding);
        if layout::see(&decoded.text, layout).is_ok() {
            return Some((layout.clone(), false));
        }
    }
    let decoded = text::decode(bytes, None);
    guess::layout(&decoded.text, site, name).ok().map(|guess| (guess.layout, true))
}

/// An import under way.
#[derive(Debug)]
struct Import<'s> {
    site: &'s SiteFile,
    series: BTreeMap<(SeriesOf, crate::site::Signal), Series>,
    report: ImportReport,
}

impl<'s> Import<'s> {
    fn new(site: &'s SiteFile) -> Self {
        Self { site, series: BTreeMap::new(), report: ImportReport::default() }
    }

    /// Takes one file, by the first layout that fits or by a guess.
    fn take(&mut self, name: &str, bytes: &[u8]) {
        let mut misfits = Vec::new();
        for layout in layout::candidates(self.site, name) {
            let decoded = text::decode(bytes, layout.encoding);
            match layout::see(&decoded.text, layout) {
                Ok(seen) => {
                    let mut report = self.file_report(name, &decoded);
                    report.layout = LayoutUsed::Named(layout.name.clone());
                    report.notes.append(&mut misfits);
                    return self.take_seen(&seen, layout, report);
                }
                Err(reason) => misfits.push(reason),
            }
        }
        self.take_guessed(name, bytes, misfits);
    }

    fn file_report(&self, name: &str, decoded: &text::Decoded<'_>) -> FileReport {
        let mut report = FileReport::new(name.to_owned(), decoded.encoding, decoded.from);
        if decoded.damaged {
            report.notes.push(format!(
                "Some bytes are not {}; they stand as \u{fffd} and no number holds one.",
                decoded.encoding
            ));
        }
        report
    }

    fn take_guessed(&mut self, name: &str, bytes: &[u8], misfits: Vec<String>) {
        let decoded = text::decode(bytes, None);
        let mut report = self.file_report(name, &decoded);
        report.notes = misfits;
        match guess::layout(&decoded.text, self.site, name) {
            Ok(guess) => {
                report.layout = LayoutUsed::Guessed;
                report.notes.extend(guess.notes);
                match layout::see(&decoded.text, &guess.layout) {
                    Ok(seen) => self.take_seen(&seen, &guess.layout, report),
                    Err(reason) => {
                        report.layout = LayoutUsed::None;
                        report.notes.push(reason);
                        self.report.files.push(report);
                    }
                }
            }
            Err(reason) => {
                report.notes.push(reason);
                self.report.files.push(report);
            }
        }
    }

    fn take_seen(
        &mut self,
        seen: &layout::Seen<'_>,
        layout: &ReadingsLayout,
        mut report: FileReport,
    ) {
        let Some(zone) = time::reading_zone(&layout.time_zone) else {
            report.notes.push(format!("The time zone \"{}\" is not known.", layout.time_zone));
            self.report.files.push(report);
            return;
        };
        let source = self.report.files.len() as u32;
        let (targets, mut columns): (Vec<_>, Vec<_>) =
            layout::take_columns(seen, layout, &self.site.instruments, &mut report)
                .into_iter()
                .unzip();
        let clock = Clock::new(&layout.time_format, zone);
        let rows = RowReader::new(layout, clock, seen.time_position, seen.headers.len(), source);
        rows.read(seen.body, layout.skip_lines + 2, &mut columns, &mut report);
        for (target, mut column) in targets.into_iter().zip(columns) {
            let series =
                self.series.entry((target.of.clone(), target.signal)).or_insert_with(|| Series {
                    of: target.of,
                    unit: target.to,
                    signal: target.signal,
                    points: Vec::new(),
                    not_read: Vec::new(),
                });
            series.points.append(&mut column.points);
            series.not_read.append(&mut column.not_read);
        }
        self.report.files.push(report);
    }

    fn finish(mut self) -> Imported {
        let mut series: Vec<Series> = self.series.into_values().collect();
        for series in &mut series {
            series.settle(&mut self.report);
        }
        let mut imported = Imported { series, report: self.report };
        imported.find_gaps(self.site);
        imported.report.suspicions = suspicion::all(self.site, &imported);
        imported
    }
}
