//! Bringing files of readings in: first a look at what would be taken, with corrections by the
//! person, then the taking.

use super::failure::WindowError;
use super::records::{
    ImportColumn, ImportCorrection, ImportDone, ImportFile, ImportView, Signature,
};
use super::session::{Progress, Session};
use super::shown::duration;
use crate::import::{
    Conflict, FileReport, ImportReport, Imported, LayoutUsed, Refused, SeriesOf, layout_of,
    read_bytes,
};
use crate::site::{Column, InstrumentUnit, SiteFile};
use crate::store::{Change, ImportOutcome, keep};
use crate::units::UnitName;
use std::path::{Path, PathBuf};

/// Refused fields that are listed for a file.
const MOST_REFUSED: usize = 200;
/// Gaps and conflicts that are listed.
const MOST_LISTED: usize = 50;
/// Name of a layout that a person corrected.
const CORRECTED: &str = "as corrected by hand";

/// A file that was read into memory.
struct Content {
    name: String,
    bytes: Vec<u8>,
}

impl Session {
    /// What importing these files would do. Nothing is stored.
    ///
    /// # Errors
    /// When a file cannot be read.
    pub fn import_preview(
        &self,
        paths: &[PathBuf],
        corrections: &[ImportCorrection],
    ) -> Result<ImportView, WindowError> {
        let files = contents(paths)?;
        let site = corrected(&self.site, &files, corrections);
        let imported = read(&site, &files);
        let of_files = imported.report.files.iter().map(|report| self.file_view(report));
        let files: Vec<ImportFile> = of_files.collect();
        Ok(ImportView {
            readings: files.iter().map(|file| file.readings).sum(),
            files,
            suspicions: imported.report.suspicions.iter().map(ToString::to_string).collect(),
            duplicates: count(imported.report.duplicates_ignored),
            conflicts: self.conflicts(&imported.report),
            gaps: self.gaps(&imported.report),
            instruments: self.site.instruments.iter().map(|given| given.id.clone()).collect(),
        })
    }

    /// Stores the readings of files, each as a whole or not at all, and compares everything again.
    ///
    /// # Errors
    /// When a file cannot be read or the store refuses it; files before it are stored.
    pub fn import_commit(
        &self,
        paths: &[PathBuf],
        corrections: &[ImportCorrection],
        signature: &Signature,
        now_s: i64,
        progress: Progress<'_>,
    ) -> Result<(ImportDone, Self), WindowError> {
        progress.step("Reading the files", 0.0)?;
        let files = contents(paths)?;
        let site = corrected(&self.site, &files, corrections);
        let change = Change { who: &signature.who, at_s: now_s, why: &signature.why };
        let mut done = ImportDone { sentence: Vec::new(), readings: 0, duplicates: 0 };
        for (place, file) in files.iter().enumerate() {
            let share = 0.3 * place as f64 / files.len() as f64;
            progress.step(&format!("Storing {}", file.name), share)?;
            let imported = read(&site, std::slice::from_ref(file));
            let outcome = keep(&mut *self.store(), &imported, 0, &file.bytes, &change)?;
            done.readings += count(outcome.accepted);
            done.duplicates += count(outcome.duplicates);
            done.sentence.push(self.outcome_words(&file.name, &outcome));
        }
        let again = self.again(now_s, progress)?;
        Ok((done, again))
    }

    /// "logger-a.csv: 4212 readings stored, 117 duplicates ignored; 12 came late, ..."
    fn outcome_words(&self, name: &str, outcome: &ImportOutcome) -> String {
        if outcome.known_already {
            return format!("{name}: the same file was imported before; nothing was changed.");
        }
        let mut words = format!(
            "{name}: {} readings stored, {} duplicates ignored",
            outcome.accepted, outcome.duplicates
        );
        if outcome.conflicts > 0 {
            words += &format!(
                ", {} differ from those held for the same time and were set aside",
                outcome.conflicts
            );
        }
        if !outcome.refused.is_empty() {
            words += &format!(", {} refused", outcome.refused.len());
        }
        if let Some(late) = &outcome.late {
            words += &format!(
                "; {} came up to {} late, the first of {}",
                late.count,
                duration(late.oldest_age_s as f64),
                self.stamp(late.first_s)
            );
        }
        if outcome.ahead > 0 {
            words += &format!("; {} are later than now: a clock is wrong", outcome.ahead);
        }
        words + "."
    }

    fn file_view(&self, report: &FileReport) -> ImportFile {
        let refused = |one: &Refused| {
            (one.line, one.column.clone(), one.text.clone(), one.reason.to_string())
        };
        ImportFile {
            file: report.file.clone(),
            layout: match &report.layout {
                LayoutUsed::Named(name) => format!("Read by the layout \"{name}\"."),
                LayoutUsed::Guessed => {
                    "Layout guessed from the headers: check it before use.".to_owned()
                }
                LayoutUsed::None => "Not understood: nothing would be taken.".to_owned(),
            },
            guessed: report.layout != LayoutUsed::None && report.layout == LayoutUsed::Guessed,
            rows: count(report.rows),
            accepted: count(report.rows_accepted),
            readings: count(report.readings),
            missing: count(report.missing),
            refused: report.refused.iter().take(MOST_REFUSED).map(refused).collect(),
            refused_count: count(report.refused_count()),
            span: report
                .times_s
                .map(|(from_s, to_s)| format!("{} to {}", self.stamp(from_s), self.stamp(to_s))),
            notes: report.notes.clone(),
            columns: self.columns(report),
        }
    }

    fn columns(&self, report: &FileReport) -> Vec<ImportColumn> {
        let taken = report.columns_taken.iter().map(|column| {
            let instrument = match &column.of {
                SeriesOf::Instrument(id) => Some(id.clone()),
                SeriesOf::Channel(_) => None,
            };
            let note = match &column.of {
                SeriesOf::Instrument(_) => None,
                SeriesOf::Channel(name) => Some(format!("{name}, used in corrections")),
            };
            ImportColumn {
                header: column.header.clone(),
                instrument,
                unit: Some(column.unit.word().to_owned()),
                units: units_like(column.unit),
                note,
            }
        });
        let left_out = report.columns.iter().map(|column| ImportColumn {
            header: column.header.clone(),
            instrument: None,
            unit: None,
            units: UnitName::all().map(|unit| unit.word().to_owned()).collect(),
            note: Some(column.reason.clone()),
        });
        taken.chain(left_out).collect()
    }

    fn conflicts(&self, report: &ImportReport) -> Vec<String> {
        let words = |one: &Conflict| {
            format!(
                "{} at {}: {} kept, {} set aside.",
                one.of,
                self.stamp(one.time_s),
                one.kept,
                one.refused
            )
        };
        cut(report.conflicts.iter().map(words), report.conflicts.len(), "conflicts")
    }

    fn gaps(&self, report: &ImportReport) -> Vec<String> {
        let words = |gap: &crate::import::Gap| {
            format!(
                "{}: no reading for {} from {}.",
                gap.of,
                duration((gap.to_s - gap.from_s) as f64),
                self.stamp(gap.from_s)
            )
        };
        cut(report.gaps.iter().map(words), report.gaps.len(), "gaps")
    }
}

fn count(number: u64) -> u32 {
    u32::try_from(number).unwrap_or(u32::MAX)
}

fn cut(all: impl Iterator<Item = String>, count: usize, noun: &str) -> Vec<String> {
    let mut listed: Vec<String> = all.take(MOST_LISTED).collect();
    if count > MOST_LISTED {
        listed.push(format!("and {} more {noun}.", count - MOST_LISTED));
    }
    listed
}

fn contents(paths: &[PathBuf]) -> Result<Vec<Content>, WindowError> {
    let read = |path: &PathBuf| {
        let name = name_of(path);
        let bytes = crate::import::file_bytes(path)?;
        Ok(Content { name, bytes })
    };
    if paths.is_empty() {
        return Err(crate::import::ImportError::NoFiles.into());
    }
    paths.iter().map(read).collect()
}

fn name_of(path: &Path) -> String {
    let name = path.file_name().unwrap_or(path.as_os_str());
    name.to_string_lossy().into_owned()
}

fn read(site: &SiteFile, files: &[Content]) -> Imported {
    let files: Vec<(&str, &[u8])> =
        files.iter().map(|file| (file.name.as_str(), file.bytes.as_slice())).collect();
    read_bytes(site, &files)
}

/// The site with a layout of its own for every file that the person corrected.
fn corrected(site: &SiteFile, files: &[Content], corrections: &[ImportCorrection]) -> SiteFile {
    let mut site = site.clone();
    for file in files {
        let of_file: Vec<&ImportCorrection> =
            corrections.iter().filter(|one| one.file == file.name).collect();
        if of_file.is_empty() {
            continue;
        }
        let Some((mut layout, _)) = layout_of(&site, &file.name, &file.bytes) else { continue };
        for correction in of_file {
            match column(&site, correction) {
                Some(column) => layout.columns.insert(correction.header.clone(), column),
                None => layout.columns.remove(&correction.header),
            };
        }
        layout.name = CORRECTED.to_owned();
        layout.files = vec![literally(&file.name)];
        site.readings.insert(0, layout);
    }
    site
}

/// A pattern that fits this file name and no other.
fn literally(name: &str) -> String {
    let mut pattern = String::new();
    for letter in name.chars() {
        if "*?[]{}!\\".contains(letter) {
            pattern.push('\\');
        }
        pattern.push(letter);
    }
    pattern
}

/// What a person says a column is; none when it is not to be taken.
fn column(site: &SiteFile, correction: &ImportCorrection) -> Option<Column> {
    let id = correction.instrument.as_deref()?;
    let given = site.instruments.iter().find(|given| given.id == id)?;
    let named = correction.unit.as_deref().and_then(UnitName::named);
    let unit = named.unwrap_or(match given.unit {
        InstrumentUnit::Kpa => UnitName::Kpa,
        InstrumentUnit::Metre => UnitName::Metre,
        InstrumentUnit::Millimetre => UnitName::Millimetre,
    });
    let raw = (unit == UnitName::Digits).then_some(crate::site::Signal::Digits);
    Some(Column::Instrument { instrument: id.to_owned(), unit, raw })
}

/// Units of the same dimension, and digits, which any gauge may give.
fn units_like(unit: UnitName) -> Vec<String> {
    let alike =
        |other: &UnitName| other.dimension() == unit.dimension() || *other == UnitName::Digits;
    UnitName::all().filter(alike).map(|unit| unit.word().to_owned()).collect()
}
