//! A report of one moment: as a page that opens anywhere, as JSON for programs, as text for a
//! terminal. All three are made from the same [`ReportPage`] and say the same.
//!
//! Ground and equipment are two lists. What could not be judged is counted beside what was, so that
//! missing data never reads as good news. Each output that could be acted on carries [`CAUTIONS`].

mod html;
mod table;
mod terminal;
mod values;
mod words;

pub use html::HtmlOptions;
pub use table::{Align, Cell, Column, Table};
pub use terminal::{TerminalOptions, colour_wanted};
pub use values::values;
pub use words::age_in_words;

use crate::chart::{LimitKind, Mark};
use jiff::tz::TimeZone;
use serde::{Serialize, Serializer};

/// What goes with every output that could be acted on.
pub const CAUTIONS: [&str; 6] = [
    "Advice only. The responsible licensed engineer decides under the local code, the owner's procedure and the law.",
    "Do not rely on one instrument, one logger, one link or one person; walk and look.",
    "No one inside the bund or under the shell while the level changes.",
    "Lowering takes hours: decide early.",
    "A passed test does not end the need to watch.",
    "Not a safety-rated trip.",
];

/// Said of a site that does not exist.
pub const INVENTED: &str = "This site, its people and all its numbers are invented.";

/// A report of one moment.
#[derive(Debug, Clone, Serialize)]
pub struct ReportPage {
    /// Name of the site.
    pub site: String,
    /// Whether the site does not exist (a demonstration).
    pub invented: bool,
    /// What the report is about: the tank and its test.
    pub title: String,
    /// The moment judged, seconds of Unix time.
    pub moment_s: i64,
    /// Zone of the site.
    #[serde(serialize_with = "zone_name")]
    pub zone: TimeZone,
    /// The load at that moment: level, applied pressure, stage, hours in it.
    pub load: Vec<Fact>,
    /// What happened, against which load, who agrees, what the site's plan says.
    pub headline: Vec<String>,
    /// Ground: one row an instrument, the gravest first.
    pub instruments: Vec<InstrumentRow>,
    /// Equipment: one row a fault.
    pub faults: Vec<FaultRow>,
    /// Pictures.
    #[serde(skip)]
    pub charts: Vec<ChartSection>,
    /// What was read in, and what was not.
    pub import: Vec<ImportFile>,
}

/// A named value in words.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Fact {
    pub name: String,
    /// With its unit.
    pub value: String,
}

/// The load under which a value was read.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LoadAtReading {
    pub liquid_level_m: f64,
    pub applied_pressure_kpa: f64,
    pub stage: String,
    pub hours_in_stage: f64,
}

/// Distance to the next limit.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Margin {
    /// Which trigger begins at the limit.
    pub to: LimitKind,
    /// In the unit of the reading; negative when the limit is passed.
    pub value: f64,
    /// In percent of the limit, where that means something.
    pub percent: Option<f64>,
}

/// Value at which a trigger begins under the load of the reading.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct LimitValue {
    pub trigger: LimitKind,
    pub value: f64,
}

/// The verdict on one instrument.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct InstrumentRow {
    pub mark: Mark,
    pub id: String,
    pub kind: String,
    /// Where it is, in words.
    pub place: String,
    pub unit: String,
    /// Decimals its values are written with.
    pub decimals: usize,
    pub reading: Option<f64>,
    /// The load under which it was read.
    pub load: Option<LoadAtReading>,
    pub expected: Option<f64>,
    pub band_low: Option<f64>,
    pub band_high: Option<f64>,
    /// Values at which the triggers begin under this load.
    pub limits: Vec<LimitValue>,
    pub margin: Option<Margin>,
    /// Data state in words: good, suspect, stale, ...
    pub data_state: String,
    /// Age of the reading at the moment judged, s.
    pub age_s: Option<i64>,
}

/// One equipment fault.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct FaultRow {
    pub id: String,
    pub kind: String,
    pub place: String,
    /// Data state in words: frozen, not read, ...
    pub data_state: String,
    /// What points to it.
    pub evidence: String,
    /// Since when, seconds of Unix time.
    pub since_s: Option<i64>,
    /// When it was good again; none while it goes on.
    pub until_s: Option<i64>,
    /// What to look at first.
    pub next_step: String,
}

/// A picture with its words.
#[derive(Debug, Clone, PartialEq)]
pub struct ChartSection {
    /// Under the picture, which carries its own heading.
    pub caption: String,
    /// Made by `chart`; put into the page as it is.
    pub svg: String,
    /// The numbers of the picture, for those who cannot see it.
    pub values: Option<Table>,
}

/// What became of one file of readings.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ImportFile {
    pub name: String,
    /// Rows in the file.
    pub rows: usize,
    /// Readings taken over, good or not.
    pub kept: usize,
    /// Readings that were there before.
    pub duplicates: usize,
    /// Rows that gave no reading.
    pub refused: usize,
    pub messages: Vec<ImportMessage>,
}

/// A remark of the import.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ImportMessage {
    /// Line in the file, counted from 1.
    pub line: Option<u64>,
    /// Whether data were lost by it.
    pub lost_data: bool,
    pub text: String,
}

impl ReportPage {
    /// How many instruments carry which mark, and how many faults there are, in one sentence.
    pub fn counts(&self) -> String {
        let of = |wanted: fn(&Mark) -> bool| {
            self.instruments.iter().filter(|row| wanted(&row.mark)).count()
        };
        let counted = [
            (of(|mark| matches!(mark, Mark::Stop { .. })), "Stop"),
            (of(|mark| matches!(mark, Mark::Review { .. })), "Review"),
            (of(|mark| matches!(mark, Mark::Watch { .. })), "Watch"),
            (of(|mark| matches!(mark, Mark::Normal)), "Normal"),
            (of(|mark| matches!(mark, Mark::NotJudged | Mark::Fault)), "not judged"),
        ];
        let parts = counted.iter().filter(|(count, _)| *count > 0);
        let parts: Vec<_> = parts.map(|(count, word)| format!("{count} {word}")).collect();
        let ground = match parts.len() {
            0 => "No instrument judged".to_owned(),
            _ => format!("{} of {} instruments", parts.join(", "), self.instruments.len()),
        };
        let over = self.faults.iter().filter(|fault| fault.until_s.is_some()).count();
        let faults = match self.faults.len() - over {
            0 => "no equipment fault known".to_owned(),
            1 => "1 equipment fault".to_owned(),
            count => format!("{count} equipment faults"),
        };
        let over = match over {
            0 => String::new(),
            1 => ", 1 more that is over".to_owned(),
            count => format!(", {count} more that are over"),
        };
        format!("{ground}; {faults}{over}.")
    }

    /// The load that most readings were made under; rows under another load say so.
    pub(crate) fn common_load(&self) -> Option<&LoadAtReading> {
        let loads: Vec<_> = self.instruments.iter().filter_map(|row| row.load.as_ref()).collect();
        let shared = |load: &LoadAtReading| loads.iter().filter(|other| **other == load).count();
        // The first among equals, so that the same report is made each time.
        loads.iter().rev().max_by_key(|load| shared(load)).copied()
    }

    /// Whether any instrument has no verdict: that is not good news, and is said.
    pub fn is_incomplete(&self) -> bool {
        let unjudged = |row: &InstrumentRow| matches!(row.mark, Mark::NotJudged | Mark::Fault);
        self.instruments.is_empty()
            || self.instruments.iter().any(unjudged)
            || self.faults.iter().any(|fault| fault.until_s.is_none())
    }

    /// As JSON, with the cautions.
    ///
    /// # Errors
    /// When a value cannot be written; a report made of finite numbers always can.
    pub fn to_json(&self) -> Result<String, serde_json::Error> {
        #[derive(Serialize)]
        struct Whole<'a> {
            format: &'static str,
            #[serde(flatten)]
            page: &'a ReportPage,
            counts: String,
            incomplete: bool,
            cautions: [&'static str; 6],
        }
        serde_json::to_string_pretty(&Whole {
            format: "brimstead report 1",
            page: self,
            counts: self.counts(),
            incomplete: self.is_incomplete(),
            cautions: CAUTIONS,
        })
    }
}

/// Said when a verdict is missing.
pub(crate) const INCOMPLETE: &str = "Missing or doubtful data are not good news: they block the next rise until they are explained.";

fn zone_name<S: Serializer>(zone: &TimeZone, out: S) -> Result<S::Ok, S::Error> {
    match (zone.iana_name(), zone.to_fixed_offset()) {
        (Some(name), _) => out.serialize_str(name),
        (None, Ok(offset)) => out.collect_str(&offset),
        (None, Err(_)) => out.serialize_str("unknown"),
    }
}

#[cfg(test)]
pub(crate) mod tests;
