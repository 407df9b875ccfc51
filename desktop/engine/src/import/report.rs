//! What was taken in, what was not, and why. Nothing is left out silently.

use super::number::NotANumber;
use super::series::SeriesOf;
use super::suspicion::Suspicion;
use super::text::EncodingFrom;
use crate::site::{FileEncoding, Signal};
use crate::units::UnitName;
use serde::Serialize;
use std::collections::BTreeMap;
use std::fmt;

/// Refusals of one file that are listed one by one; beyond that they are counted by reason.
pub const LISTED_PER_FILE: usize = 10_000;

/// Report of one import.
#[derive(Debug, Clone, Default, PartialEq, Serialize)]
pub struct ImportReport {
    /// One entry for each file, in the order given.
    pub files: Vec<FileReport>,
    /// Readings that stood in the files more than once with the same value: the first was kept.
    pub duplicates_ignored: u64,
    /// Readings of one instrument at one time with different values: the first was kept.
    pub conflicts: Vec<Conflict>,
    /// Times without readings longer than the instrument's age of a stale reading.
    pub gaps: Vec<Gap>,
    /// What looks wrong with units, signs, rods or clocks. Nothing was changed because of it.
    pub suspicions: Vec<Suspicion>,
}

/// What became of one file.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct FileReport {
    /// Its name.
    pub file: String,
    /// How its columns were understood.
    pub layout: LayoutUsed,
    /// How its bytes were read.
    pub encoding: FileEncoding,
    /// How that is known.
    pub encoding_from: EncodingFrom,
    /// Rows below the headers, blank lines not counted.
    pub rows: u64,
    /// Rows of which at least the time was good.
    pub rows_accepted: u64,
    /// Readings taken, missing marks not counted.
    pub readings: u64,
    /// Of these, readings that stood before with the same value; the first was kept.
    pub duplicates: u64,
    /// Of these, readings that stood before with another value; the first was kept.
    pub contradicted: u64,
    /// Fields with a missing-value mark or nothing in them.
    pub missing: u64,
    /// What was refused, by line.
    pub refused: Vec<Refused>,
    /// What was refused, counted by reason, also beyond the list.
    pub refused_by_reason: BTreeMap<Reason, u64>,
    /// Rows earlier than a row above them; they were sorted in.
    pub out_of_order: u64,
    /// The longest way such a row was late, s.
    pub latest_by_s: i64,
    /// First and last time of an accepted row.
    pub times_s: Option<(i64, i64)>,
    /// Columns that were taken, and what they are.
    pub columns_taken: Vec<ColumnTaken>,
    /// Columns that nothing says the meaning of, and columns of the layout that the file lacks.
    pub columns: Vec<ColumnNote>,
    /// Anything else worth knowing, such as guesses.
    pub notes: Vec<String>,
}

/// How the columns of a file were understood.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum LayoutUsed {
    /// By the layout of this name in the site file.
    Named(String),
    /// Guessed from the file; the notes say what.
    Guessed,
    /// Not understood: nothing of the file was taken.
    None,
}

/// A column that was taken.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct ColumnTaken {
    /// Its header.
    pub header: String,
    /// Whose readings it holds.
    pub of: SeriesOf,
    /// Raw digits or engineering values.
    pub signal: Signal,
    /// Unit in the file.
    pub unit: UnitName,
}

/// A column that was not taken.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct ColumnNote {
    /// Its header.
    pub header: String,
    /// Why not.
    pub reason: String,
}

/// Why something was refused.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Reason {
    /// The time does not fit the format.
    Time,
    /// The time occurs twice where clocks go back.
    TimeTwice,
    /// The time does not occur where clocks go forward.
    TimeSkipped,
    /// The row has another number of fields than the headers.
    FieldCount,
    /// A quotation mark is not closed on its line.
    OpenQuote,
    /// A field is not a number.
    // A word like the others, so that it can be the key of a JSON object.
    #[serde(untagged)]
    Number(NotANumber),
}

impl fmt::Display for Reason {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Number(reason) => reason.fmt(f),
            Self::Time => f.write_str("a time that does not fit the format"),
            Self::TimeTwice => f.write_str("a local time that occurs twice because clocks go back"),
            Self::TimeSkipped => {
                f.write_str("a local time that does not exist because clocks go forward")
            }
            Self::FieldCount => f.write_str("another number of fields than headers"),
            Self::OpenQuote => f.write_str("a quotation mark that is not closed"),
        }
    }
}

/// One field or row that was refused.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Refused {
    /// Line in the file, counted from 1.
    pub line: u32,
    /// Header of the column; empty when the whole row was refused.
    pub column: String,
    /// What stands there.
    pub text: String,
    /// Why it was refused.
    pub reason: Reason,
}

impl Refused {
    /// What stands there and why it was refused, without the line.
    #[must_use]
    pub fn what(&self) -> String {
        let what = format!("\"{}\" is {}", self.text, self.reason);
        if self.column.is_empty() { what } else { format!("{}: {what}", self.column) }
    }
}

impl fmt::Display for Refused {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let separator = if self.column.is_empty() { ':' } else { ',' };
        write!(f, "line {}{separator} {}", self.line, self.what())
    }
}

/// Where a reading stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub struct Source {
    /// Index of the file in the report.
    pub file: u32,
    /// Line, counted from 1.
    pub line: u32,
}

/// Two readings of one instrument at one time.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Conflict {
    /// The instrument or channel.
    pub of: String,
    /// When.
    pub time_s: i64,
    /// The reading that was kept.
    pub kept: f64,
    /// Where it stands.
    pub kept_at: Source,
    /// The reading that was not taken.
    pub refused: f64,
    /// Where it stands.
    pub refused_at: Source,
}

/// A time without readings.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Gap {
    /// The instrument.
    pub of: String,
    /// Last reading before it.
    pub from_s: i64,
    /// First reading after it.
    pub to_s: i64,
}

impl FileReport {
    /// A report with nothing in it yet.
    pub(super) fn new(file: String, encoding: FileEncoding, encoding_from: EncodingFrom) -> Self {
        Self {
            file,
            layout: LayoutUsed::None,
            encoding,
            encoding_from,
            rows: 0,
            rows_accepted: 0,
            readings: 0,
            duplicates: 0,
            contradicted: 0,
            missing: 0,
            refused: Vec::new(),
            refused_by_reason: BTreeMap::new(),
            out_of_order: 0,
            latest_by_s: 0,
            times_s: None,
            columns_taken: Vec::new(),
            columns: Vec::new(),
            notes: Vec::new(),
        }
    }

    pub(super) fn refuse(&mut self, line: u32, column: &str, text: &[u8], reason: Reason) {
        const SHOWN: usize = 60;
        *self.refused_by_reason.entry(reason).or_default() += 1;
        if self.refused.len() < LISTED_PER_FILE {
            let text = String::from_utf8_lossy(text).chars().take(SHOWN).collect();
            self.refused.push(Refused { line, column: column.to_owned(), text, reason });
        }
    }

    /// How many fields and rows were refused.
    #[must_use]
    pub fn refused_count(&self) -> u64 {
        self.refused_by_reason.values().sum()
    }

    pub(super) fn column_not_taken(&mut self, header: &str, reason: impl Into<String>) {
        self.columns.push(ColumnNote { header: header.to_owned(), reason: reason.into() });
    }
}

/// Lines of a list that are shown in the text form; the data hold them all.
const SHOWN_LINES: usize = 20;

impl fmt::Display for FileReport {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match &self.layout {
            LayoutUsed::Named(name) => writeln!(f, "{}: read as \"{name}\".", self.file)?,
            LayoutUsed::Guessed => {
                writeln!(f, "{}: layout guessed, check it before use.", self.file)?
            }
            LayoutUsed::None => writeln!(f, "{}: not understood, nothing imported.", self.file)?,
        }
        let from = match self.encoding_from {
            EncodingFrom::Layout => "as the layout says",
            EncodingFrom::ByteOrderMark => "by its byte order mark",
            EncodingFrom::Bytes => "by its bytes",
        };
        writeln!(f, "  Encoding {}, {from}.", self.encoding)?;
        writeln!(
            f,
            "  {} of {} rows accepted, {} readings, {} missing values, {} refused.",
            self.rows_accepted,
            self.rows,
            self.readings,
            self.missing,
            self.refused_count()
        )?;
        if self.out_of_order > 0 {
            let (count, late) = (self.out_of_order, duration(self.latest_by_s));
            writeln!(f, "  {count} rows were out of order, by up to {late}; sorted by time.")?;
        }
        for note in &self.notes {
            writeln!(f, "  {note}")?;
        }
        for column in &self.columns {
            writeln!(f, "  Column \"{}\" not imported: {}.", column.header, column.reason)?;
        }
        for refused in self.refused.iter().take(SHOWN_LINES) {
            writeln!(f, "  {refused}; not imported.")?;
        }
        if self.refused_count() > SHOWN_LINES as u64 {
            for (reason, count) in &self.refused_by_reason {
                writeln!(f, "  In all {count} times {reason}.")?;
            }
        }
        Ok(())
    }
}

impl ImportReport {
    /// Gaps of several instruments at the same time are one: a logger without power.
    fn gaps_together(&self) -> BTreeMap<(i64, i64), Vec<&str>> {
        let mut together: BTreeMap<_, Vec<_>> = BTreeMap::new();
        for gap in &self.gaps {
            together.entry((gap.from_s, gap.to_s)).or_default().push(gap.of.as_str());
        }
        together
    }
}

impl fmt::Display for ImportReport {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for file in &self.files {
            file.fmt(f)?;
        }
        if self.duplicates_ignored > 0 {
            writeln!(
                f,
                "{} duplicates ignored (same instrument, time and value).",
                self.duplicates_ignored
            )?;
        }
        for conflict in self.conflicts.iter().take(SHOWN_LINES) {
            let place = |source: Source| {
                let file =
                    self.files.get(source.file as usize).map_or("?", |file| file.file.as_str());
                format!("{file} line {}", source.line)
            };
            writeln!(
                f,
                "{} has two readings for {}: {} ({}) kept, {} ({}) not imported.",
                conflict.of,
                utc(conflict.time_s),
                conflict.kept,
                place(conflict.kept_at),
                conflict.refused,
                place(conflict.refused_at),
            )?;
        }
        if self.conflicts.len() > SHOWN_LINES {
            writeln!(f, "In all {} such conflicts.", self.conflicts.len())?;
        }
        let gaps = self.gaps_together();
        for ((from_s, to_s), of) in gaps.iter().take(SHOWN_LINES) {
            let length = duration(to_s - from_s);
            writeln!(
                f,
                "{}: no reading for {length} from {} to {}.",
                of.join(", "),
                utc(*from_s),
                utc(*to_s)
            )?;
        }
        if gaps.len() > SHOWN_LINES {
            writeln!(f, "In all {} such gaps.", gaps.len())?;
        }
        for suspicion in &self.suspicions {
            writeln!(f, "{suspicion}")?;
        }
        Ok(())
    }
}

/// An instant for a report that is read anywhere.
pub(super) fn utc(time_s: i64) -> String {
    crate::time::shown(time_s, &jiff::tz::TimeZone::UTC)
}

/// A length of time in the largest unit that keeps it readable.
pub(super) fn duration(seconds: i64) -> String {
    let minutes = seconds as f64 / 60.0;
    if minutes < 120.0 {
        format!("{minutes:.0} min")
    } else if minutes < 48.0 * 60.0 {
        format!("{:.1} h", minutes / 60.0)
    } else {
        format!("{:.1} days", minutes / 1440.0)
    }
}
