//! Along the plan after the last reading: the level, and what each instrument would be expected to
//! read.

use super::session::Session;
use crate::compare::words::planned_level_m;
use crate::expect::{LoadHistory, LoadPoint, expect};
use crate::site::SiteFile;
use brimstead_core::quantity::Expected;

/// Step of the load history where it only serves curves and contours, s: between its points the
/// level changes evenly.
pub(super) const COARSE_S: i64 = 3 * 3600;
/// Time between expectations along the plan, s.
const STEP_S: i64 = 6 * 3600;

/// What is expected along the plan.
#[derive(Debug, Default)]
pub(super) struct Ahead {
    times_s: Vec<i64>,
    /// By instrument, by time.
    bands: Vec<Vec<Option<Expected>>>,
}

impl Ahead {
    /// All bands of an instrument along the plan, in the core's unit.
    pub fn of(&self, instrument: usize) -> impl Iterator<Item = (i64, Expected)> + '_ {
        let bands = self.bands.get(instrument).into_iter().flatten();
        self.times_s.iter().zip(bands).filter_map(|(time_s, band)| Some((*time_s, (*band)?)))
    }

    /// What an instrument would be expected to read, in the core's unit.
    pub fn at(&self, instrument: usize, time_s: i64) -> Option<Expected> {
        let bands = self.bands.get(instrument)?;
        let after = self.times_s.partition_point(|step_s| *step_s <= time_s);
        let before = after.checked_sub(1)?;
        let (from_s, low) = (*self.times_s.get(before)?, (*bands.get(before)?)?);
        let Some(to_s) = self.times_s.get(after) else { return Some(low) };
        let high = (*bands.get(after)?)?;
        let share = (time_s - from_s) as f64 / (to_s - from_s) as f64;
        let between = |a: f64, b: f64| a + share * (b - a);
        Expected::new(
            between(low.low, high.low),
            between(low.likely, high.likely),
            between(low.high, high.high),
        )
    }
}

/// Instants from one to another, the ends among them.
pub(super) fn steps_s(from_s: i64, to_s: i64, step_s: i64) -> Vec<i64> {
    let count = (to_s - from_s).max(0) / step_s;
    let mut times: Vec<i64> = (0..=count).map(|index| from_s + index * step_s).collect();
    if times.last().is_some_and(|last| *last < to_s) {
        times.push(to_s);
    }
    times
}

/// The level as measured, then as planned, at even steps.
pub(super) fn coarse_history(site: &SiteFile, measured: &LoadHistory, to_s: i64) -> LoadHistory {
    let baseline_s = site.baseline.time_s;
    let end = |point: Option<&LoadPoint>| point.map_or(baseline_s, |point| point.time_s);
    let (first_s, last_s) = (end(measured.points().first()), end(measured.points().last()));
    let level_m = |time_s: i64| match measured.level_at(time_s) {
        Some(measured_m) if time_s <= last_s => measured_m,
        _ => planned_level_m(site, time_s),
    };
    let mut times = steps_s(first_s, last_s, COARSE_S);
    times.extend(steps_s(last_s, to_s, COARSE_S));
    let points =
        times.into_iter().map(|time_s| LoadPoint { time_s, liquid_level_m: level_m(time_s) });
    LoadHistory::new(points.collect())
}

impl Session {
    /// What is expected along the plan; worked out at the first call.
    pub(super) fn ahead(&self) -> &Ahead {
        self.ahead.get_or_init(|| {
            let last_s = self.comparison.last_s;
            let (_, to_s) = self.span_s();
            if to_s <= last_s {
                return Ahead::default();
            }
            let history = coarse_history(&self.site, &self.comparison.history, to_s);
            let times_s = steps_s(last_s, to_s, STEP_S);
            let model = &self.comparison.model;
            let wanted = vec![times_s.clone(); model.instruments.len()];
            // The same site was calculated for the readings; a plan that cannot be (a level above
            // the shell) leaves the instruments without expectation there.
            match expect(model, &history, &wanted) {
                Ok(expected) => Ahead { times_s, bands: expected.by_instrument },
                Err(_) => Ahead::default(),
            }
        })
    }

    /// Level at an instant, m: as measured, and as planned after the last reading.
    pub(super) fn level_m(&self, time_s: i64) -> f64 {
        if time_s > self.comparison.last_s {
            return planned_level_m(&self.site, time_s);
        }
        self.comparison.load.at(time_s).map_or(0.0, |load| load.liquid_level_m)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn steps_hold_both_ends() {
        assert_eq!(steps_s(0, 10, 4), [0, 4, 8, 10]);
        assert_eq!(steps_s(0, 8, 4), [0, 4, 8]);
        assert_eq!(steps_s(5, 5, 4), [5]);
        assert_eq!(steps_s(5, 0, 4), [5], "a plan that is over adds nothing");
    }

    #[test]
    fn between_two_steps_the_band_is_even() {
        let band = |likely: f64| Expected::new(likely - 1.0, likely, likely + 2.0);
        let ahead = Ahead { times_s: vec![0, 100], bands: vec![vec![band(10.0), band(20.0)]] };
        assert_eq!(ahead.at(0, 25), Expected::new(11.5, 12.5, 14.5));
        assert_eq!(ahead.at(0, 500), band(20.0), "held after the last");
        assert_eq!(ahead.at(0, -1), None);
        assert_eq!(ahead.at(1, 25), None);
    }
}
