//! The charts of a comparison.

use super::words::{decimals, kind_word, planned_level_m, quantity_word, unit_word};
use super::{Comparison, Row, Timeline};
use crate::chart::{
    self, FillLine, InstrumentChart, LimitKind, Mark, PressureChart, Quantity, Stretch,
};
use crate::site::{Instrument, InstrumentKind, SiteFile};
use brimstead_core::instrument::DataState;
use brimstead_core::watch::Trigger;
use jiff::tz::TimeZone;

/// The mark of an instrument at a row: its trigger, or that it could not be judged.
#[must_use]
pub fn mark_of(timeline: &Timeline, row: Option<&Row>) -> Mark {
    let Some(row) = row else { return Mark::NotJudged };
    let confirmed = row.judgement.is_some_and(|judgement| judgement.confirmed);
    match row.trigger {
        Trigger::Stop => Mark::Stop { confirmed },
        Trigger::Review => Mark::Review { confirmed },
        Trigger::Watch => Mark::Watch { confirmed },
        Trigger::Normal if row.data_state != DataState::Good => Mark::Fault,
        Trigger::Normal if timeline.watcher.is_none() || row.judgement.is_none() => Mark::NotJudged,
        Trigger::Normal => Mark::Normal,
    }
}

fn mark_of_trigger(trigger: Trigger, confirmed: bool) -> Mark {
    match trigger {
        Trigger::Normal => Mark::Normal,
        Trigger::Watch => Mark::Watch { confirmed },
        Trigger::Review => Mark::Review { confirmed },
        Trigger::Stop => Mark::Stop { confirmed },
    }
}

fn limit_kind(trigger: Trigger) -> Option<LimitKind> {
    match trigger {
        Trigger::Normal => None,
        Trigger::Watch => Some(LimitKind::Watch),
        Trigger::Review => Some(LimitKind::Review),
        Trigger::Stop => Some(LimitKind::Stop),
    }
}

/// What is plotted of an instrument.
#[must_use]
pub fn quantity_of(timeline: &Timeline) -> Quantity {
    Quantity {
        name: quantity_word(timeline.kind).to_owned(),
        unit: unit_word(timeline.unit).to_owned(),
        decimals: decimals(timeline.unit),
        downward: !matches!(timeline.kind, InstrumentKind::Piezometer | InstrumentKind::LevelGauge),
    }
}

fn title(timeline: &Timeline) -> String {
    format!("{} {}", timeline.id, kind_word(timeline.kind))
}

/// Holds of the plan, named.
#[must_use]
pub fn holds(site: &SiteFile) -> Vec<Stretch> {
    let hold = |stage: &crate::site::Stage| Stretch {
        from_s: stage.end.time_s,
        to_s: stage.hold_until.time_s,
        label: stage.name.clone(),
    };
    site.stages.iter().map(hold).collect()
}

/// Times through which an instrument could not be believed, within a span.
fn faults(timeline: &Timeline, last_s: i64) -> Vec<Stretch> {
    let stretch = |fault: &super::FaultSpan| Stretch {
        from_s: fault.from_s,
        to_s: fault.to_s.unwrap_or(last_s),
        label: fault.state.name().to_owned(),
    };
    timeline.faults.iter().map(stretch).collect()
}

/// One instrument against time.
#[must_use]
pub fn against_time(
    site: &SiteFile,
    comparison: &Comparison,
    timeline: &Timeline,
    zone: &TimeZone,
) -> InstrumentChart {
    let scale = timeline.scale();
    let expected = |row: &Row| {
        row.expected.map(|band| chart::Expected {
            x: row.time_s,
            low: band.low * scale,
            likely: band.likely * scale,
            high: band.high * scale,
        })
    };
    let reading = |row: &Row| chart::Reading {
        x: row.time_s,
        value: row.value.map_or(f64::NAN, |value| value * scale),
        good: row.data_state == DataState::Good,
    };
    let limits = timeline.limit_curves().into_iter().filter_map(|curve| {
        let points = curve.points.iter().map(|(time_s, _, value)| (*time_s, value * scale));
        Some(chart::Limit { kind: limit_kind(curve.trigger)?, points: points.collect() })
    });
    InstrumentChart {
        title: title(timeline),
        quantity: quantity_of(timeline),
        zone: zone.clone(),
        span_s: None,
        expected: timeline.rows.iter().filter_map(expected).collect(),
        readings: timeline.rows.iter().map(reading).collect(),
        limits: limits.collect(),
        trigger_changes: timeline
            .changes
            .iter()
            .map(|change| chart::TriggerChange {
                time_s: change.time_s,
                mark: mark_of_trigger(change.to, change.confirmed),
            })
            .collect(),
        faults: faults(timeline, comparison.last_s),
        holds: holds(site),
        moment: None,
        mark: mark_of(timeline, timeline.rows.last()),
    }
}

/// Step of applied pressure between points of a curve over it, kPa.
const PRESSURE_STEP_KPA: f64 = 0.5;

/// Those of a run at which the load is higher than ever before: a curve over them has one value for
/// each pressure, that of the first loading, and shows the limits of a rise.
fn first_loading<T>(along: impl Iterator<Item = T>, pressure_kpa: impl Fn(&T) -> f64) -> Vec<T> {
    let mut reached_kpa = f64::NEG_INFINITY;
    let further = along.filter(|one| {
        let further = pressure_kpa(one) >= reached_kpa + PRESSURE_STEP_KPA;
        if further {
            reached_kpa = pressure_kpa(one);
        }
        further
    });
    further.collect()
}

/// One instrument against the applied pressure: all readings, expected band and limits of the
/// first loading.
#[must_use]
pub fn against_pressure(timeline: &Timeline) -> PressureChart {
    let scale = timeline.scale();
    let loaded = || timeline.rows.iter().filter_map(|row| Some((row, row.applied_pressure_kpa?)));
    let expected = loaded().filter_map(|(row, x)| {
        row.expected.map(|band| chart::Expected {
            x,
            low: band.low * scale,
            likely: band.likely * scale,
            high: band.high * scale,
        })
    });
    let expected = first_loading(expected, |one| one.x);
    let readings = loaded().map(|(row, x)| chart::Reading {
        x,
        value: row.value.map_or(f64::NAN, |value| value * scale),
        good: row.data_state == DataState::Good,
    });
    let limits = timeline.limit_curves().into_iter().filter_map(|curve| {
        let points =
            curve.points.iter().filter_map(|(_, load, value)| Some(((*load)?, value * scale)));
        let points = first_loading(points, |point| point.0);
        Some(chart::Limit { kind: limit_kind(curve.trigger)?, points })
    });
    PressureChart {
        title: title(timeline),
        quantity: quantity_of(timeline),
        pressure_unit: "kPa".to_owned(),
        expected,
        readings: readings.collect(),
        limits: limits.collect(),
        mark: mark_of(timeline, timeline.rows.last()),
    }
}

/// The liquid level, planned and actual.
#[must_use]
pub fn fill_line(site: &SiteFile, comparison: &Comparison, zone: &TimeZone) -> FillLine {
    let mut corners = vec![site.baseline.time_s];
    for stage in &site.stages {
        corners.extend([stage.start.time_s, stage.end.time_s, stage.hold_until.time_s]);
    }
    corners.dedup();
    let plan = corners.iter().map(|time_s| (*time_s, planned_level_m(site, *time_s)));
    let actual = comparison.load.points().iter().map(|point| {
        let known = point.gauge.is_some();
        (point.time_s, if known { point.liquid_level_m } else { f64::NAN })
    });
    let tank = site.tanks.first().map_or("", |tank| tank.name.as_str());
    FillLine {
        title: format!("{tank} fill line"),
        unit: "m".to_owned(),
        zone: zone.clone(),
        span_s: None,
        plan: plan.collect(),
        actual: actual.collect(),
        max_gap_s: Some(6 * 3600),
        holds: holds(site),
        trigger_changes: highest_changes(comparison),
        faults: unknown_loads(comparison),
        moment: None,
    }
}

/// When the highest trigger of the whole site changed.
#[must_use]
pub fn highest_changes(comparison: &Comparison) -> Vec<chart::TriggerChange> {
    let mut all: Vec<(usize, &super::TriggerChange)> = comparison
        .timelines
        .iter()
        .enumerate()
        .flat_map(|(place, timeline)| timeline.changes.iter().map(move |change| (place, change)))
        .collect();
    all.sort_by_key(|(_, change)| change.time_s);
    let mut now = vec![Trigger::Normal; comparison.timelines.len()];
    let mut highest = Trigger::Normal;
    let mut changes = Vec::new();
    for (place, change) in all {
        now[place] = change.to;
        let reached = now.iter().copied().max().unwrap_or_default();
        if reached != highest {
            highest = reached;
            let mark = mark_of_trigger(reached, change.confirmed);
            changes.push(chart::TriggerChange { time_s: change.time_s, mark });
        }
    }
    changes
}

/// Times in which the load was not known.
fn unknown_loads(comparison: &Comparison) -> Vec<Stretch> {
    let mut stretches: Vec<Stretch> = Vec::new();
    let mut open = false;
    for point in comparison.load.points() {
        if point.gauge.is_none() && !open {
            stretches.push(Stretch {
                from_s: point.time_s,
                to_s: comparison.last_s,
                label: "load unknown".to_owned(),
            });
        } else if point.gauge.is_some()
            && open
            && let Some(last) = stretches.last_mut()
        {
            last.to_s = point.time_s;
        }
        open = point.gauge.is_none();
    }
    stretches
}

/// Where the instrument is, for captions.
#[must_use]
pub fn caption(site: &SiteFile, given: &Instrument) -> String {
    format!("{}, {}", given.id, super::words::place_words(site, given))
}
