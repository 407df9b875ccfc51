//! The liquid level in use: the load of every other reading.

use super::Reduced;
use super::limits::checks_of;
use crate::expect::Model;
use crate::site::{InstrumentKind, SiteFile};
use brimstead_core::instrument::check::{Channel, Checker, LevelCheck, LevelState, LevelView};
use brimstead_core::instrument::{DataState, Doubt, Reading};

/// A gauge that has not changed by this many standard deviations of its noise stands still.
const STANDS_STILL_SD: f64 = 6.0;
/// And by at least this much, m: floats and dead bands.
const STANDS_STILL_M: f64 = 0.02;
/// Another gauge has moved when it has changed by this many times that.
const OTHERS_MOVED: f64 = 3.0;
/// A level within this of where it was is held, m: noise, rain, temperature.
const HELD_WITHIN_M: f64 = 0.05;
/// And a hold it is after this time, s; a slow rise passes the band sooner.
const HELD_FOR_S: i64 = 4 * 3600;
/// Time a gauge must have stood still before others count against it, s.
const PATIENCE_S: i64 = 20 * 60;

/// The load at one instant.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LoadInUse {
    /// Unix time, s.
    pub time_s: i64,
    /// Liquid level above the floor, m; the last known one where it is unknown.
    pub liquid_level_m: f64,
    /// Applied pressure under the floor, kPa.
    pub applied_pressure_kpa: f64,
    /// The gauge it comes from, by its place in the site file; none while the load is unknown.
    pub gauge: Option<usize>,
    /// Since when the level is held; none while it moves or is unknown.
    pub hold_since_s: Option<i64>,
}

/// The load over a run.
#[derive(Debug, Clone, Default)]
pub struct LoadLine {
    points: Vec<LoadInUse>,
    /// Every gauge's readings after its checks: (instrument, readings).
    pub(super) gauges: Vec<(usize, Vec<Reading>)>,
}

impl LoadLine {
    /// By rising time.
    #[must_use]
    pub fn points(&self) -> &[LoadInUse] {
        &self.points
    }

    /// The load in use at an instant: the latest not after it.
    #[must_use]
    pub fn at(&self, time_s: i64) -> Option<&LoadInUse> {
        let after = self.points.partition_point(|point| point.time_s <= time_s);
        self.points.get(after.checked_sub(1)?)
    }
}

/// One gauge on its way.
struct Gauge<'a> {
    index: usize,
    readings: &'a [Reduced],
    next: usize,
    checker: Option<Checker>,
    channel: Channel,
    check: LevelCheck,
    state: LevelState,
    stale_after_s: i64,
    /// Values seen, to ask how far it has moved since an instant.
    seen: Vec<(i64, f64)>,
    latest: Option<Reading>,
    checked: Vec<Reading>,
}

/// Picks, at every instant at which a gauge was read, the first gauge that can be believed: the
/// master, then the others in the order of the site file. Where none can, the load is unknown and
/// the last level is kept, marked so.
pub fn load_line(site: &SiteFile, model: &Model, readings: &[Vec<Reduced>]) -> LoadLine {
    let mut gauges = gauges(site, readings);
    let mut times: Vec<i64> = gauges
        .iter()
        .flat_map(|gauge| gauge.readings.iter().map(|one| one.reading.time_s))
        .collect();
    times.sort_unstable();
    times.dedup();
    let mut points: Vec<LoadInUse> = Vec::with_capacity(times.len());
    let mut held = Held::default();
    for time_s in times {
        read_all(&mut gauges, time_s);
        let chosen = gauges.iter().find_map(|gauge| gauge.believed(time_s));
        let last_m = points.last().map(|point| point.liquid_level_m);
        let Some(level_m) = chosen.map(|(_, level_m)| level_m).or(last_m) else { continue };
        // Within the noise of the gauge an empty tank may read below zero.
        let liquid_level_m = level_m.clamp(0.0, shell_height_m(site));
        points.push(LoadInUse {
            time_s,
            liquid_level_m,
            applied_pressure_kpa: model.applied_pressure_kpa(time_s, liquid_level_m),
            gauge: chosen.map(|(index, _)| index),
            hold_since_s: chosen.and_then(|_| held.since_s(time_s, liquid_level_m)),
        });
    }
    let gauges = gauges.into_iter().map(|gauge| (gauge.index, gauge.checked)).collect();
    LoadLine { points, gauges }
}

/// Follows whether the level stands still.
#[derive(Default)]
struct Held {
    reference: Option<(i64, f64)>,
}

impl Held {
    fn since_s(&mut self, time_s: i64, level_m: f64) -> Option<i64> {
        match self.reference {
            Some((since_s, reference_m)) if (level_m - reference_m).abs() <= HELD_WITHIN_M => {
                (time_s - since_s >= HELD_FOR_S).then_some(since_s)
            }
            _ => {
                self.reference = Some((time_s, level_m));
                None
            }
        }
    }
}

fn shell_height_m(site: &SiteFile) -> f64 {
    site.tanks.first().map_or(0.0, |tank| tank.shell_height_m)
}

fn gauges<'a>(site: &SiteFile, readings: &'a [Vec<Reduced>]) -> Vec<Gauge<'a>> {
    let mut gauges: Vec<Gauge<'a>> = Vec::new();
    for (index, (given, readings)) in site.instruments.iter().zip(readings).enumerate() {
        if given.kind != InstrumentKind::LevelGauge {
            continue;
        }
        let moves_by_m = (STANDS_STILL_SD * given.noise_sd).max(STANDS_STILL_M);
        let area_m2 = site
            .tanks
            .first()
            .map_or(0.0, |tank| std::f64::consts::FRAC_PI_4 * tank.diameter_m * tank.diameter_m);
        let gauge = Gauge {
            index,
            readings,
            next: 0,
            checker: Checker::new(&checks_of(given)).ok(),
            channel: Channel::default(),
            check: LevelCheck {
                moves_by_m,
                volume_m3: OTHERS_MOVED * moves_by_m * area_m2,
                others: 1,
                patience_s: PATIENCE_S,
            },
            state: LevelState::default(),
            stale_after_s: seconds(given.stale_after_min),
            seen: Vec::new(),
            latest: None,
            checked: Vec::with_capacity(readings.len()),
        };
        if given.master == Some(true) { gauges.insert(0, gauge) } else { gauges.push(gauge) }
    }
    gauges
}

pub(super) fn seconds(minutes: f64) -> i64 {
    (minutes * 60.0).round() as i64
}

/// Lets every gauge that has a reading at this instant take it, knowing how the others moved.
fn read_all(gauges: &mut [Gauge<'_>], time_s: i64) {
    for gauge in gauges.iter_mut() {
        gauge.note(time_s);
    }
    for index in 0..gauges.len() {
        let since_s = gauges[index].state.still_since_s();
        let others = gauges.iter().enumerate().filter(|(other, gauge)| {
            *other != index
                && since_s.is_some_and(|since_s| {
                    gauge.moved_since(since_s) > OTHERS_MOVED * gauge.check.moves_by_m
                })
        });
        let others_moved = others.count() as u16;
        gauges[index].read(time_s, others_moved);
    }
}

impl Gauge<'_> {
    fn due(&self, time_s: i64) -> Option<Reading> {
        let next = self.readings.get(self.next)?;
        (next.reading.time_s == time_s).then_some(next.reading)
    }

    fn note(&mut self, time_s: i64) {
        if let Some(level_m) = self.due(time_s).and_then(|reading| reading.value) {
            self.seen.push((time_s, level_m));
        }
    }

    /// How far it has moved since its first value at or after an instant, m. What it moved before
    /// says nothing of a gauge that stands still since then.
    fn moved_since(&self, since_s: i64) -> f64 {
        let after = self.seen.partition_point(|seen| seen.0 < since_s);
        match (self.seen.get(after), self.seen.last()) {
            (Some(from), Some(to)) => (to.1 - from.1).abs(),
            _ => 0.0,
        }
    }

    fn read(&mut self, time_s: i64, others_moved: u16) {
        let Some(reading) = self.due(time_s) else { return };
        self.next += 1;
        let checked = match &self.checker {
            Some(checker) => match checker.observe(&self.channel, reading, None) {
                Ok((channel, checked)) => {
                    self.channel = channel;
                    checked.reading
                }
                Err(_) => reading,
            },
            None => reading,
        };
        let view = LevelView { net_volume_m3: None, others_moved };
        let (state, checked) = self.check.observe(&self.state, checked, &view);
        self.state = state;
        self.latest = Some(checked);
        self.checked.push(checked);
    }

    /// Its level at an instant, when it can be believed.
    fn believed(&self, time_s: i64) -> Option<(usize, f64)> {
        let latest = self.latest.as_ref()?;
        let fresh = time_s - latest.time_s <= self.stale_after_s;
        (latest.state == DataState::Good && fresh)
            .then_some(latest.value)
            .flatten()
            .map(|level_m| (self.index, level_m))
    }
}

/// The doubt of a level reading in the words of the tank's owner: what stood still while what was
/// moved.
pub(super) fn is_level_doubt(doubt: &Doubt) -> bool {
    matches!(doubt, Doubt::LevelFrozenVolume { .. } | Doubt::LevelFrozenOthers { .. })
}
