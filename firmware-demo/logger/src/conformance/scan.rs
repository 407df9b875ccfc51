//! What the logger does at every scan: check the reading, judge it against limits that follow the
//! load.

use brimstead_core::instrument::check::{
    Channel, Checker, Checks, FlatLine, Hampel, Noise, Range, Response,
};
use brimstead_core::instrument::{FixedList, Reading};
use brimstead_core::quantity::Expected;
use brimstead_core::watch::{
    Basis, Curve, Limits, Observation, Persistence, RateWindow, Rule, Thresholds, WatchState,
    Watcher,
};

const SCAN_S: i64 = 900;
/// Applied pressure and pore pressure at each scan, kPa: a rise, a spike, a passed limit.
const SCANS: [(f64, f64); 9] = [
    (20.3, 31.07),
    (33.9, 38.11),
    (47.2, 45.93),
    (60.1, 90.71),
    (60.1, 53.88),
    (73.7, 61.02),
    (88.4, 83.29),
    (88.4, 109.96),
    (88.4, 110.03),
];

/// Checks and limits of one instrument.
#[derive(Debug, Clone)]
pub struct Guard {
    checks: Checks,
    limits: Limits,
}

impl Guard {
    pub(super) fn invented() -> Option<Self> {
        let checks = Checks {
            range: Some(Range { low: -10.0, high: 350.0 }),
            step: Some(40.0),
            rate_per_hour: Some(120.0),
            flat_line: Some(FlatLine { readings: 6, tolerance: 0.01 }),
            spike: Some(Hampel { readings: 5, threshold: 3.0, floor: 0.7 }),
            noise: Some(Noise { readings: 5, allowed: 25.0 }),
            stale_after_s: Some(4 * SCAN_S),
            gap_above_s: Some(2 * SCAN_S),
            rods: None,
            response: Some(Response {
                load_step_kpa: 10.0,
                least_per_kpa: 0.1,
                lag_s: SCAN_S,
                within_s: 4 * SCAN_S,
            }),
        };
        let raising = Persistence { readings: 2, seconds: 0 };
        let by_load = Rule { basis: Basis::Curve, hysteresis: 1.3, raising, ..Rule::default() };
        let per_day = Thresholds { watch: Some(3000.0), ..Thresholds::default() };
        let by_rate = Rule { basis: Basis::Rate { per_day }, hysteresis: 10.0, ..by_load };
        let limits = Limits {
            rules: FixedList::from_slice(&[by_load, by_rate]).ok()?,
            curve: Some(curve()?),
            rate_window: Some(RateWindow {
                window_s: 6 * SCAN_S,
                min_span_s: 2 * SCAN_S,
                min_readings: 3,
            }),
            noise: Some(0.2),
        };
        Some(Self { checks, limits })
    }
}

fn curve() -> Option<Curve> {
    let list = |values: &[f64]| FixedList::from_slice(values).ok();
    Some(Curve {
        pressure_kpa: list(&[0.0, 150.0])?,
        watch: list(&[40.0, 130.7])?,
        review: list(&[50.0, 170.0])?,
        stop: list(&[70.0, 190.3])?,
        gross: list(&[100.0, 230.0])?,
    })
}

/// Every scan of the story, checked and judged.
#[inline(never)]
pub(super) fn judgements(guard: &Guard, each: &mut impl FnMut(&'static str, f64)) -> Option<()> {
    let checker = Checker::new(&guard.checks).ok()?;
    let watcher = Watcher::new(&guard.limits).ok()?;
    let mut channel = Channel::default();
    let mut state = WatchState::default();
    let mut time_s = 0;
    for (load_kpa, pore_kpa) in SCANS {
        time_s += SCAN_S;
        let reading = Reading::new(time_s, pore_kpa);
        let (next_channel, checked) = checker.observe(&channel, reading, Some(load_kpa)).ok()?;
        let observation = Observation {
            reading: checked.reading,
            applied_pressure_kpa: Some(load_kpa),
            expected: Expected::new(0.4 * load_kpa, 0.6 * load_kpa, 0.9 * load_kpa),
            hold_since_s: None,
        };
        let (next_state, judgement) = watcher.judge(&state, &observation, &[]).ok()?;
        (channel, state) = (next_channel, next_state);
        each("trigger", f64::from(judgement.trigger as u8));
        each("ready for the next rise", f64::from(u8::from(judgement.ready_for_next_rise())));
        let governing = judgement.governing;
        for (name, value) in [
            ("residual", judgement.residual),
            ("position in band", judgement.position_in_band),
            ("rate per day", judgement.rate.map(|rate| rate.per_day)),
            ("margin", governing.map(|by| by.margin_to_next.value)),
            ("margin percent", governing.and_then(|by| by.margin_to_next.percent)),
            ("days to the next limit", governing.and_then(|by| by.days_to_next)),
        ] {
            if let Some(value) = value {
                each(name, value);
            }
        }
    }
    Some(())
}

#[cfg(test)]
mod tests {
    extern crate std;
    use super::*;
    use std::vec::Vec;

    #[test]
    fn the_story_has_a_quiet_part_and_an_alarm() {
        let mut triggers = Vec::new();
        let collect = &mut |name, value| {
            if name == "trigger" {
                triggers.push(value);
            }
        };
        judgements(&Guard::invented().unwrap(), collect).unwrap();
        assert_eq!(triggers.len(), SCANS.len());
        assert_eq!(triggers[0], 0.0);
        assert!(triggers.iter().any(|trigger| *trigger >= 1.0), "{triggers:?}");
    }
}
