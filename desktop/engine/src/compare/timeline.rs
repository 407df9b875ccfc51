//! What one instrument said over a run, beside what was expected of it.

use super::limits::{LimitsError, checks_of, limits_of};
use super::{Reduced, judge};
use crate::expect::scale_of;
use crate::site::{Instrument, InstrumentKind, InstrumentUnit, SiteFile};
use brimstead_core::instrument::check::{Channel, Checker};
use brimstead_core::instrument::{DataState, Doubt};
use brimstead_core::quantity::Expected;
use brimstead_core::watch::{Basis, Judgement, Limits, Trigger, WatchState, Watcher};

/// One reading, judged. Values in the core's unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Row {
    /// When it was measured, Unix s.
    pub time_s: i64,
    /// The number as it stands in the file.
    pub raw: Option<f64>,
    /// The reduced value.
    pub value: Option<f64>,
    /// How far it can be trusted.
    pub data_state: DataState,
    /// Why not further.
    pub doubt: Option<Doubt>,
    /// What was expected at this load and hour.
    pub expected: Option<Expected>,
    /// Liquid level in use, m.
    pub liquid_level_m: Option<f64>,
    /// Applied pressure, kPa; none while the load is unknown.
    pub applied_pressure_kpa: Option<f64>,
    /// Since when the liquid level is held; none while it moves or is unknown.
    pub hold_since_s: Option<i64>,
    /// The trigger after it.
    pub trigger: Trigger,
    /// What it means; none for an instrument without limits.
    pub judgement: Option<Judgement>,
}

/// A time through which an instrument could not be believed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FaultSpan {
    /// The first doubtful reading, Unix s.
    pub from_s: i64,
    /// The first good reading after it; none while it goes on.
    pub to_s: Option<i64>,
    /// The worst state in it.
    pub state: DataState,
    /// The doubt behind that state.
    pub doubt: Option<Doubt>,
}

/// A change of trigger.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct TriggerChange {
    /// When, Unix s.
    pub time_s: i64,
    /// From.
    pub from: Trigger,
    /// To.
    pub to: Trigger,
    /// Whether it was confirmed at once.
    pub confirmed: bool,
}

/// Limit values of one trigger along a run, in the core's unit.
#[derive(Debug, Clone, PartialEq)]
pub struct LimitCurve {
    /// The trigger.
    pub trigger: Trigger,
    /// Instant, applied pressure where known, value.
    pub points: Vec<(i64, Option<f64>, f64)>,
}

/// One instrument over a run.
#[derive(Debug)]
pub struct Timeline {
    /// Its id.
    pub id: String,
    /// Its kind.
    pub kind: InstrumentKind,
    /// Its unit.
    pub unit: InstrumentUnit,
    /// Its neighbours, by place in the site file.
    pub neighbours: Vec<usize>,
    /// Its readings by rising time.
    pub rows: Vec<Row>,
    /// Times through which it could not be believed.
    pub faults: Vec<FaultSpan>,
    /// Changes of its trigger.
    pub changes: Vec<TriggerChange>,
    /// Its limits; none where it has none.
    pub watcher: Option<Watcher>,
    pub(super) checker: Option<Checker>,
    pub(super) stale_after_s: i64,
    pub(super) live: judge::Live,
}

impl Timeline {
    pub(super) fn new(
        site: &SiteFile,
        given: &Instrument,
        readings: Vec<Reduced>,
        expected: Vec<Option<Expected>>,
    ) -> Result<Self, LimitsError> {
        let limits: Option<Limits> = limits_of(site, given)?;
        let refused = |source| LimitsError::Refused { id: given.id.clone(), source };
        let watcher = limits.as_ref().map(Watcher::new).transpose().map_err(refused)?;
        let place = |id: &String| site.instruments.iter().position(|other| other.id == *id);
        let rows = readings.into_iter().zip(expected).map(|(one, band)| Row {
            time_s: one.reading.time_s,
            raw: one.raw,
            value: one.reading.value,
            data_state: one.reading.state,
            doubt: one.reading.doubt,
            expected: band,
            liquid_level_m: None,
            applied_pressure_kpa: None,
            hold_since_s: None,
            trigger: Trigger::Normal,
            judgement: None,
        });
        Ok(Self {
            id: given.id.clone(),
            kind: given.kind,
            unit: given.unit,
            neighbours: given.neighbours.iter().filter_map(place).collect(),
            rows: rows.collect(),
            faults: Vec::new(),
            changes: Vec::new(),
            watcher,
            checker: Checker::new(&checks_of(given)).ok(),
            stale_after_s: super::level::seconds(given.stale_after_min),
            live: judge::Live {
                channel: Channel::default(),
                state: WatchState::default(),
                next: 0,
            },
        })
    }

    /// Multiplies a value of the core into the unit of the instrument.
    #[must_use]
    pub fn scale(&self) -> f64 {
        scale_of(self.unit)
    }

    /// The latest reading at or before an instant.
    #[must_use]
    pub fn row_at(&self, time_s: i64) -> Option<&Row> {
        let after = self.rows.partition_point(|row| row.time_s <= time_s);
        self.rows.get(after.checked_sub(1)?)
    }

    /// The latest reading with a value at or before an instant.
    #[must_use]
    pub fn value_at(&self, time_s: i64) -> Option<&Row> {
        let after = self.rows.partition_point(|row| row.time_s <= time_s);
        self.rows[..after].iter().rev().find(|row| row.value.is_some())
    }

    /// The trigger at an instant.
    #[must_use]
    pub fn trigger_at(&self, time_s: i64) -> Trigger {
        self.row_at(time_s).map_or(Trigger::Normal, |row| row.trigger)
    }

    /// The fault at an instant.
    #[must_use]
    pub fn fault_at(&self, time_s: i64) -> Option<&FaultSpan> {
        self.faults
            .iter()
            .rev()
            .find(|fault| fault.from_s <= time_s && fault.to_s.is_none_or(|to_s| time_s < to_s))
    }

    /// The highest trigger it reached.
    #[must_use]
    pub fn highest_reached(&self) -> Trigger {
        self.rows.iter().map(|row| row.trigger).max().unwrap_or_default()
    }

    /// Limit lines that can be drawn in the unit of the readings: all but those of rates.
    #[must_use]
    pub fn limit_curves(&self) -> Vec<LimitCurve> {
        let Some(watcher) = &self.watcher else { return Vec::new() };
        let mut curves = Vec::new();
        for (index, rule) in watcher.limits().rules.as_slice().iter().enumerate() {
            if matches!(rule.basis, Basis::Rate { .. }) {
                continue;
            }
            for side in 0..2 {
                for trigger in Trigger::RAISED {
                    let points: Vec<(i64, Option<f64>, f64)> = self
                        .rows
                        .iter()
                        .filter_map(|row| {
                            let load = row.applied_pressure_kpa;
                            let now = watcher.limits_at(index, load, row.expected).ok()?[side]?;
                            Some((row.time_s, load, now.thresholds.of(trigger)?))
                        })
                        .collect();
                    if !points.is_empty() {
                        curves.push(LimitCurve { trigger, points });
                    }
                }
            }
        }
        curves
    }
}
