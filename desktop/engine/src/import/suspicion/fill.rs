//! The fill as the level tells it: an even grid of levels, and the rises.

use super::super::series::Series;
use super::median;

/// Step of the grid, s.
pub(super) const STEP_S: i64 = 900;
/// Grid steps in an hour.
const PER_HOUR: usize = 4;
/// A level is not carried over a longer time without readings, s.
const LONGEST_GAP_S: i64 = 3 * 3600;
/// Below that the level is taken to stand, m/h.
const SLOWEST_M_PER_H: f64 = 0.02;
/// Grid points that are kept at most: thirty years.
const MOST: i64 = 30 * 366 * 96;

/// A time in which the level rises.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Rise {
    pub from_s: i64,
    pub to_s: i64,
    pub rise_m: f64,
}

/// Level on a grid, with the rises found in it.
#[derive(Debug)]
pub(super) struct Fill {
    start_s: i64,
    level_m: Vec<Option<f64>>,
    pub rises: Vec<Rise>,
}

impl Fill {
    /// From a level in metres; `factor` turns it into the level that is believed.
    pub(super) fn new(level: &Series, factor: f64) -> Self {
        let (Some(first), Some(last)) = (level.points.first(), level.points.last()) else {
            return Self { start_s: 0, level_m: Vec::new(), rises: Vec::new() };
        };
        let start_s = first.time_s;
        let steps = (last.time_s.saturating_sub(start_s) / STEP_S).min(MOST);
        let mut after = 0;
        let level_m: Vec<Option<f64>> = (0..=steps)
            .map(|step| {
                let time_s = start_s + step * STEP_S;
                while level.points.get(after).is_some_and(|point| point.time_s < time_s) {
                    after += 1;
                }
                let next = level.points.get(after)?;
                let before = after.checked_sub(1).and_then(|before| level.points.get(before));
                let short =
                    before.is_none_or(|before| next.time_s - before.time_s <= LONGEST_GAP_S);
                if short || next.time_s == time_s {
                    level.at(time_s).map(|level| level * factor)
                } else {
                    None
                }
            })
            .collect();
        let rises = rises(start_s, &level_m);
        Self { start_s, level_m, rises }
    }

    /// The level at a time, to the grid step nearest.
    pub(super) fn level_m(&self, time_s: i64) -> Option<f64> {
        let step = (time_s.checked_sub(self.start_s)? + STEP_S / 2).div_euclid(STEP_S);
        *self.level_m.get(usize::try_from(step).ok()?)?
    }

    /// How far a series goes up over each rise, by metre of level, and the median of that. A
    /// median, so that one rod or spike does not decide.
    pub(super) fn response_per_m(&self, series: &Series) -> Option<f64> {
        let slopes = self.rises.iter().filter_map(|rise| {
            let (before, after) = (near(series, rise.from_s)?, near(series, rise.to_s)?);
            Some((after - before) / rise.rise_m)
        });
        median(slopes.collect())
    }
}

/// The value at a time when readings stand close enough around it.
fn near(series: &Series, time_s: i64) -> Option<f64> {
    const LONGEST_S: i64 = 2 * 86_400;
    let after = series.points.partition_point(|point| point.time_s < time_s);
    let next = series.points.get(after)?;
    let before = after.checked_sub(1).and_then(|before| series.points.get(before)).unwrap_or(next);
    if next.time_s - before.time_s > LONGEST_S || next.time_s - time_s > LONGEST_S {
        return None;
    }
    series.at(time_s).or(Some(next.value))
}

/// Runs of hours in which the level rises, pauses of up to two hours bridged.
fn rises(start_s: i64, level_m: &[Option<f64>]) -> Vec<Rise> {
    const LEAST_M: f64 = 0.4;
    const BRIDGED: usize = 2 * PER_HOUR;
    let mut found = Vec::new();
    let mut run: Option<(usize, usize)> = None;
    let mut close = |run: Option<(usize, usize)>| {
        let Some((from, to)) = run else { return };
        let (Some(Some(low)), Some(Some(high))) = (level_m.get(from), level_m.get(to)) else {
            return;
        };
        if high - low >= LEAST_M {
            let at = |step: usize| start_s + step as i64 * STEP_S;
            found.push(Rise { from_s: at(from), to_s: at(to), rise_m: high - low });
        }
    };
    for step in 0..level_m.len().saturating_sub(PER_HOUR) {
        let hour_on = step + PER_HOUR;
        let (Some(now), Some(then)) = (level_m[step], level_m[hour_on]) else { continue };
        if then - now < SLOWEST_M_PER_H {
            continue;
        }
        match &mut run {
            Some((_, to)) if step <= *to + BRIDGED => *to = hour_on,
            _ => {
                close(run.take());
                run = Some((step, hour_on));
            }
        }
    }
    close(run);
    found
}
