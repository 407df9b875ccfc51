//! Readings against what this load at this hour should give: the line from import to trigger.
//!
//! ```text
//! readings -> reduce -> load in use -> expected band (expect) -> checks -> trigger -> timeline
//! ```
//! The office repeats, reading by reading in the order of measurement, what the logger does scan
//! by scan: the same checks and the same state machines of the core. Values are in the core's
//! units (kPa, m) from here to the edge, where each instrument's own unit is shown.

pub mod charts;
mod judge;
mod level;
mod limits;
pub mod page;
pub mod record;
mod reduce;
pub mod story;
mod timeline;
pub mod words;

pub use level::{LoadInUse, LoadLine};
pub use limits::{LimitsError, limits_of};
pub use reduce::{reduction_at, uncorrected};
pub use timeline::{FaultSpan, LimitCurve, Row, Timeline, TriggerChange};

use crate::expect::{ExpectError, LoadHistory, LoadPoint, Model, expect};
use crate::import::Imported;
use crate::site::SiteFile;
use brimstead_core::instrument::Reading;
use brimstead_core::watch::Trigger;
use thiserror::Error;

/// Why a comparison could not be made.
#[derive(Debug, Error)]
pub enum CompareError {
    /// Nothing can be expected of the site.
    #[error(transparent)]
    Expect(#[from] ExpectError),
    /// The limits of an instrument are refused.
    #[error(transparent)]
    Limits(#[from] LimitsError),
    /// No reading at all.
    #[error("no reading was taken from the files; the import report says why, line by line.")]
    NoReadings,
}

/// A whole run compared.
#[derive(Debug)]
pub struct Comparison {
    /// The site as it was calculated.
    pub model: Model,
    /// The liquid level in use.
    pub load: LoadLine,
    /// The load history that the ground was carried through.
    pub history: LoadHistory,
    /// Instruments in the order of the site file.
    pub timelines: Vec<Timeline>,
    /// The last instant at which anything was measured, Unix s.
    pub last_s: i64,
}

/// One reading of an instrument before it is judged, in the core's unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reduced {
    /// The reading with its instant.
    pub reading: Reading,
    /// The number as it stands in the file.
    pub raw: Option<f64>,
}

/// Compares a run.
///
/// # Errors
/// When the site cannot be calculated, no level is known, or no reading came in.
pub fn compare(site: &SiteFile, imported: &Imported) -> Result<Comparison, CompareError> {
    let model = Model::new(site)?;
    let readings: Vec<Vec<Reduced>> =
        site.instruments.iter().map(|one| reduce::readings_of(one, imported)).collect();
    let last_s = readings
        .iter()
        .filter_map(|list| list.last())
        .map(|last| last.reading.time_s)
        .max()
        .ok_or(CompareError::NoReadings)?;
    let load = level::load_line(site, &model, &readings);
    let history = LoadHistory::new(
        load.points()
            .iter()
            .map(|point| LoadPoint { time_s: point.time_s, liquid_level_m: point.liquid_level_m })
            .collect(),
    );
    let times: Vec<Vec<i64>> = readings.iter().map(|list| times_of(list)).collect();
    let expected = expect(&model, &history, &times)?;
    let mut timelines = Vec::with_capacity(readings.len());
    for ((given, list), bands) in site.instruments.iter().zip(readings).zip(expected.by_instrument)
    {
        timelines.push(Timeline::new(site, given, list, bands)?);
    }
    judge::judge_all(site, &load, &mut timelines, last_s);
    Ok(Comparison { model, load, history, timelines, last_s })
}

/// A site of which nothing can be compared yet: its model and its instruments, none of them read.
/// It ends at the baseline, so that all that follows is still to come.
///
/// # Errors
/// When the site cannot be calculated or its limits are refused.
pub fn nothing_compared(site: &SiteFile) -> Result<Comparison, CompareError> {
    let timelines = site.instruments.iter().map(|given| Timeline::new(site, given, vec![], vec![]));
    Ok(Comparison {
        model: Model::new(site)?,
        load: LoadLine::default(),
        history: LoadHistory::default(),
        timelines: timelines.collect::<Result<_, _>>()?,
        last_s: site.baseline.time_s,
    })
}

fn times_of(readings: &[Reduced]) -> Vec<i64> {
    readings.iter().map(|one| one.reading.time_s).collect()
}

impl Comparison {
    /// The highest trigger that any instrument reached.
    #[must_use]
    pub fn highest_reached(&self) -> Trigger {
        let reached = self.timelines.iter().map(Timeline::highest_reached);
        reached.max().unwrap_or_default()
    }

    /// Whether any instrument could not be believed at some time.
    #[must_use]
    pub fn any_fault(&self) -> bool {
        self.timelines.iter().any(|timeline| !timeline.faults.is_empty())
    }

    /// The first change to a trigger or above, of all instruments: instrument and instant.
    #[must_use]
    pub fn first_at(&self, trigger: Trigger) -> Option<(&Timeline, i64)> {
        self.timelines
            .iter()
            .filter_map(|timeline| {
                let change = timeline.changes.iter().find(|change| change.to >= trigger)?;
                Some((timeline, change.time_s))
            })
            .min_by_key(|(_, time_s)| *time_s)
    }
}
