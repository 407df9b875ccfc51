//! Every reading of a run through checks and limits, in the order of measurement.

use super::level::{LoadLine, is_level_doubt};
use super::timeline::{FaultSpan, Row, Timeline, TriggerChange};
use crate::site::{InstrumentKind, SiteFile};
use brimstead_core::instrument::check::{Channel, Checked, ManyAtOnce, look_over_scan};
use brimstead_core::instrument::{DataState, Doubt, Reading};
use brimstead_core::watch::{Observation, Trigger, WatchState};

/// Channels that step within one scan before it is taken for an electrical event.
const MANY_AT_ONCE: ManyAtOnce = ManyAtOnce { channels: 6, share: 0.5 };

/// What an instrument's checks and limits remember on the way.
#[derive(Debug)]
pub(super) struct Live {
    pub channel: Channel,
    pub state: WatchState,
    pub next: usize,
}

/// Judges all timelines together up to the last instant of the run.
pub(super) fn judge_all(site: &SiteFile, load: &LoadLine, timelines: &mut [Timeline], last_s: i64) {
    for timeline in timelines.iter_mut() {
        mark_silences(timeline, last_s);
    }
    let mut times: Vec<i64> =
        timelines.iter().flat_map(|one| one.rows.iter().map(|row| row.time_s)).collect();
    times.sort_unstable();
    times.dedup();
    let gauge_readings = GaugeReadings::new(load);
    for time_s in times {
        judge_scan(load, &gauge_readings, timelines, time_s);
    }
    for (timeline, given) in timelines.iter_mut().zip(&site.instruments) {
        debug_assert_eq!(timeline.id, given.id);
        timeline.faults = faults_of(&timeline.rows);
        timeline.changes = changes_of(&timeline.rows);
    }
}

/// Puts a row where an instrument has been silent for longer than it may, so that silence shows.
fn mark_silences(timeline: &mut Timeline, last_s: i64) {
    let limit_s = timeline.stale_after_s;
    let mut silences = Vec::new();
    let mut last_read_s: Option<i64> = None;
    let ends = timeline.rows.iter().map(|row| row.time_s).chain([last_s]);
    for time_s in ends {
        if let Some(before_s) = last_read_s {
            let age_s = time_s - before_s;
            if age_s > limit_s {
                silences.push(Reading::absent(
                    before_s + limit_s + 1,
                    Doubt::Age { age_s: limit_s + 1, limit_s },
                ));
            }
        }
        last_read_s = Some(time_s);
    }
    timeline.rows.extend(silences.into_iter().map(|reading| Row {
        time_s: reading.time_s,
        raw: None,
        value: None,
        data_state: reading.state,
        doubt: reading.doubt,
        expected: None,
        liquid_level_m: None,
        applied_pressure_kpa: None,
        hold_since_s: None,
        trigger: Trigger::Normal,
        judgement: None,
    }));
    timeline.rows.sort_by_key(|row| row.time_s);
}

/// The level gauges' readings after their own checks, looked up by instrument and instant.
struct GaugeReadings<'a> {
    load: &'a LoadLine,
}

impl<'a> GaugeReadings<'a> {
    fn new(load: &'a LoadLine) -> Self {
        Self { load }
    }

    fn doubt_of(&self, instrument: usize, time_s: i64) -> Option<Doubt> {
        let (_, readings) = self.load.gauges.iter().find(|(index, _)| *index == instrument)?;
        let place = readings.binary_search_by_key(&time_s, |reading| reading.time_s).ok()?;
        readings[place].doubt.filter(is_level_doubt)
    }
}

/// All readings of one instant: checks, a look over the scan, limits, confirmation by neighbours.
fn judge_scan(
    load: &LoadLine,
    gauges: &GaugeReadings<'_>,
    timelines: &mut [Timeline],
    time_s: i64,
) {
    let here: Vec<usize> = (0..timelines.len())
        .filter(|index| {
            let timeline = &timelines[*index];
            timeline.rows.get(timeline.live.next).is_some_and(|row| row.time_s == time_s)
        })
        .collect();
    let in_use = load.at(time_s).copied();
    let known = in_use.filter(|load| load.gauge.is_some());
    let mut channels = Vec::with_capacity(here.len());
    let mut checked = Vec::with_capacity(here.len());
    for &index in &here {
        let (channel, one) = check(&timelines[index], known.map(|load| load.applied_pressure_kpa));
        let doubt = gauges.doubt_of(index, time_s);
        channels.push(channel);
        checked.push(match doubt {
            Some(doubt) => Checked { reading: one.reading.with_doubt(doubt), ..one },
            None => one,
        });
    }
    look_over_scan(&MANY_AT_ONCE, time_s, &mut channels, &mut checked);
    let mut before: Vec<WatchState> = Vec::with_capacity(here.len());
    for ((&index, channel), checked) in here.iter().zip(channels).zip(&checked) {
        let timeline = &mut timelines[index];
        before.push(timeline.live.state);
        timeline.live.channel = channel;
        let row = &mut timeline.rows[timeline.live.next];
        row.data_state = checked.reading.state;
        row.doubt = checked.reading.doubt;
        row.liquid_level_m = in_use.map(|load| load.liquid_level_m);
        row.applied_pressure_kpa = known.map(|load| load.applied_pressure_kpa);
        row.hold_since_s = known.and_then(|load| load.hold_since_s);
        // A gauge gives the load; nothing is unknown about its own reading.
        if known.is_none() && timeline.kind != InstrumentKind::LevelGauge {
            row.expected = None;
        }
        judge_one(timeline, checked.reading, &[]);
    }
    confirm(timelines, &here, &before, &checked);
    for &index in &here {
        timelines[index].live.next += 1;
    }
}

fn check(timeline: &Timeline, applied_pressure_kpa: Option<f64>) -> (Channel, Checked) {
    let row = &timeline.rows[timeline.live.next];
    let reading =
        Reading { time_s: row.time_s, value: row.value, state: row.data_state, doubt: row.doubt };
    let as_it_is = (timeline.live.channel, Checked { reading, stepped: false, gap_s: None });
    match &timeline.checker {
        Some(checker) => checker
            .observe(&timeline.live.channel, reading, applied_pressure_kpa)
            .unwrap_or(as_it_is),
        None => as_it_is,
    }
}

/// Judges the row an instrument has come to, from the state it had before it.
fn judge_one(timeline: &mut Timeline, reading: Reading, neighbours: &[Trigger]) {
    let row = &mut timeline.rows[timeline.live.next];
    let observation = Observation {
        reading,
        applied_pressure_kpa: row.applied_pressure_kpa,
        expected: row.expected,
        hold_since_s: row.hold_since_s,
    };
    if let Some(watcher) = &timeline.watcher {
        // Rows are by rising time, each time once, so nothing comes out of order.
        if let Ok((state, judgement)) =
            watcher.judge(&timeline.live.state, &observation, neighbours)
        {
            timeline.live.state = state;
            row.judgement = Some(judgement);
        }
    }
    row.trigger = timeline.live.state.trigger();
}

/// A raised instrument is confirmed by a neighbour that is at Watch or above on a good last
/// reading. It is judged again from the state before, now with its neighbours, so that the order
/// of instruments makes no difference.
fn confirm(timelines: &mut [Timeline], here: &[usize], before: &[WatchState], checked: &[Checked]) {
    let latest = |(index, timeline): (usize, &Timeline)| {
        let passed = timeline.live.next + usize::from(here.contains(&index));
        let row = timeline.rows[..passed].last()?;
        (row.data_state == DataState::Good).then_some(row.trigger)
    };
    let speaking: Vec<Trigger> =
        timelines.iter().enumerate().map(|one| latest(one).unwrap_or_default()).collect();
    for ((&index, before), checked) in here.iter().zip(before).zip(checked) {
        let timeline = &mut timelines[index];
        let unconfirmed = timeline.rows[timeline.live.next]
            .judgement
            .is_some_and(|judgement| judgement.trigger > Trigger::Normal && !judgement.confirmed);
        if unconfirmed {
            let neighbours: Vec<Trigger> =
                timeline.neighbours.iter().map(|neighbour| speaking[*neighbour]).collect();
            timeline.live.state = *before;
            judge_one(timeline, checked.reading, &neighbours);
        }
    }
}

fn faults_of(rows: &[Row]) -> Vec<FaultSpan> {
    let mut spans: Vec<FaultSpan> = Vec::new();
    let mut open = false;
    for row in rows {
        if row.data_state == DataState::Good {
            if open && let Some(span) = spans.last_mut() {
                span.to_s = Some(row.time_s);
            }
            open = false;
        } else if open {
            if let Some(span) = spans.last_mut()
                && row.data_state > span.state
            {
                span.state = row.data_state;
                span.doubt = row.doubt;
            }
        } else {
            let (state, doubt) = (row.data_state, row.doubt);
            spans.push(FaultSpan { from_s: row.time_s, to_s: None, state, doubt });
            open = true;
        }
    }
    spans
}

fn changes_of(rows: &[Row]) -> Vec<TriggerChange> {
    let mut changes = Vec::new();
    let mut trigger = Trigger::Normal;
    for row in rows {
        if row.trigger != trigger {
            changes.push(TriggerChange {
                time_s: row.time_s,
                from: trigger,
                to: row.trigger,
                confirmed: row.judgement.is_some_and(|judgement| judgement.confirmed),
            });
            trigger = row.trigger;
        }
    }
    changes
}
