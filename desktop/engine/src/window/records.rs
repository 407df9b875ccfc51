//! What the window shows of the log, the limits, an import and the site file, as plain data.

use super::views::{EntryView, SectionView, TriggerView};
use serde::{Deserialize, Serialize};
use ts_rs::TS;

/// What a person decides. The program never does.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, TS)]
#[serde(rename_all = "snake_case")]
pub enum Decision {
    /// Go on as planned.
    Continue,
    /// Keep the liquid level.
    Hold,
    /// Lower the liquid level.
    Lower,
    /// Empty the tank.
    Empty,
}

/// Who writes something down, and why.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct Signature {
    /// Name of the person.
    pub who: String,
    /// The reason.
    pub why: String,
}

/// One entry of the log.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct LogEntryView {
    /// When it was entered, in the site's zone.
    pub time_text: String,
    /// "decision: hold", "note", "limits 2", "site file 3", "import".
    pub what: String,
    /// Who.
    pub who: String,
    /// Why, or the note.
    pub text: String,
    /// What was known: moment, level, applied pressure, age of the data.
    pub basis: Option<String>,
    /// The instrument it is about.
    pub instrument: Option<String>,
    /// First characters of the hash that chains decisions.
    pub hash: Option<String>,
}

/// The log, newest entry first.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct LogView {
    /// The entries.
    pub entries: Vec<LogEntryView>,
    /// What working through the chain of decisions gave, in a sentence.
    pub chain: String,
    /// No decision was altered or taken out.
    pub chain_whole: bool,
}

/// A version of the limits.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct LimitVersionView {
    /// Its number.
    pub number: u32,
    /// From when it counts.
    pub effective_text: String,
    /// When it was entered.
    pub entered_text: String,
    /// By whom.
    pub who: String,
    /// Why.
    pub why: String,
    /// Who approved it.
    pub approvers: Vec<String>,
    /// It was looser than what it overrode.
    pub loosens: bool,
    /// It judges what is shown.
    pub in_force: bool,
}

/// The limits of one instrument in words.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct LimitRowView {
    /// The instrument.
    pub id: String,
    /// Its kind in words.
    pub kind: String,
    /// Where it is.
    pub place: String,
    /// Each limit in words.
    pub limits: Vec<(TriggerView, String)>,
    /// How long a limit must be passed.
    pub persistence: String,
    /// How far a reading must come back.
    pub hysteresis: String,
}

/// The limits in force and all versions, newest first.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct LimitsView {
    /// All versions.
    pub versions: Vec<LimitVersionView>,
    /// The limits in force by instrument.
    pub rows: Vec<LimitRowView>,
    /// The document of the limits in force, to edit; in SI, as its keys say.
    pub text: String,
}

/// New limits as a person proposes them.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct LimitProposal {
    /// The document.
    pub text: String,
    /// Who enters them.
    pub who: String,
    /// Why.
    pub why: String,
    /// Who approved them.
    pub approvers: Vec<String>,
    /// From when they count, "2026-05-20 06:00" in the zone of the site.
    pub effective: String,
    /// Whether the person says that they are looser.
    pub loosens: bool,
}

/// What does not change with the cursor.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct InstrumentInfo {
    /// Its id.
    pub id: String,
    /// Its kind in words.
    pub kind: String,
    /// Where it is.
    pub place: String,
    /// Unit shown.
    pub unit: String,
    /// What it can measure.
    pub range: String,
    /// Age at which its reading is stale.
    pub stale_after: String,
    /// Instruments that should agree with it.
    pub neighbours: Vec<String>,
    /// Corrections of its readings, in words.
    pub correction: Option<String>,
    /// What its limits are, or why it has none.
    pub judged_by: String,
}

/// A column of a file of readings, as understood.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct ImportColumn {
    /// Its header.
    pub header: String,
    /// Whose readings it holds.
    pub instrument: Option<String>,
    /// Unit in the file.
    pub unit: Option<String>,
    /// Units that it could be in.
    pub units: Vec<String>,
    /// Why it is not taken.
    pub note: Option<String>,
}

/// What would become of a file.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct ImportFile {
    /// Its name.
    pub file: String,
    /// How it was understood.
    pub layout: String,
    /// That was a guess: look at it before use.
    pub guessed: bool,
    /// Rows below the headers.
    pub rows: u32,
    /// Rows of which at least the time was good.
    pub accepted: u32,
    /// Readings taken.
    pub readings: u32,
    /// Fields with nothing in them.
    pub missing: u32,
    /// Line, column, what stands there, why it is refused.
    pub refused: Vec<(u32, String, String, String)>,
    /// How many were refused, also beyond the list.
    pub refused_count: u32,
    /// From when to when.
    pub span: Option<String>,
    /// Anything else worth knowing.
    pub notes: Vec<String>,
    /// Its columns.
    pub columns: Vec<ImportColumn>,
}

/// What an import would do.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct ImportView {
    /// File by file.
    pub files: Vec<ImportFile>,
    /// What looks wrong with units, signs, rods or clocks; nothing was changed because of it.
    pub suspicions: Vec<String>,
    /// Readings that stand twice.
    pub duplicates: u32,
    /// Readings that contradict one another.
    pub conflicts: Vec<String>,
    /// Times without readings.
    pub gaps: Vec<String>,
    /// Readings in all.
    pub readings: u32,
    /// Instruments to choose from.
    pub instruments: Vec<String>,
}

/// What a person says a column is.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct ImportCorrection {
    /// Name of the file.
    pub file: String,
    /// Header of the column.
    pub header: String,
    /// Whose readings it holds; none leaves it out.
    pub instrument: Option<String>,
    /// Its unit.
    pub unit: Option<String>,
}

/// What an import did.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct ImportDone {
    /// In words.
    pub sentence: Vec<String>,
    /// Readings stored.
    pub readings: u32,
    /// Readings held already.
    pub duplicates: u32,
}

/// Something to put right in the site file.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct ProblemView {
    /// Line, counted from 1.
    pub line: u32,
    /// Column in the line, counted from 1.
    pub column: u32,
    /// Place in the document.
    pub path: String,
    /// What stands there.
    pub found: String,
    /// What may stand there.
    pub allowed: String,
    /// What to look at.
    pub remedy: String,
}

/// An instrument of a site that is being written.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct SitePoint {
    /// Its id.
    pub id: String,
    /// Its kind in words.
    pub kind: String,
    /// East of the tank's axis, m.
    pub section_x_m: f64,
    /// Depth, m.
    pub depth_m: f64,
}

/// What checking a site file gave.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct SiteCheckView {
    /// What to put right; none when the file can be used.
    pub problems: Vec<ProblemView>,
    /// Sections that could not be checked against the others yet.
    pub not_cross_checked: Vec<String>,
    /// The drawing, when the text can be used.
    pub section: Option<SectionView>,
    /// The instruments, when the text can be used.
    pub instruments: Vec<SitePoint>,
}

/// The site file in force.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct SiteTextView {
    /// Its text.
    pub text: String,
    /// Its number.
    pub version: u32,
    /// All versions, newest first.
    pub versions: Vec<EntryView>,
}

/// How far long work has come.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct WorkStep {
    /// What is being done.
    pub what: String,
    /// How much of the whole is done, 0 to 1.
    pub done: f64,
}
