//! What the pumps really did: the planned stages with late starts, other rates and a slightly
//! different end, and the times at which the loggers wrote.

use crate::site::Site;

const HOUR_S: i64 = 3600;
const QUARTER_S: i64 = 900;
/// Evaporation and seepage past a valve during holds, m/day.
const LOSS_M_PER_DAY: f64 = 0.0006;
/// For each stage in turn: start late by min, end late by min, end above plan by m.
const DEPARTURES: [(i64, i64, f64); 7] = [
    (20, 95, 0.012),
    (45, -70, -0.008),
    (0, 140, 0.015),
    (75, 60, 0.006),
    (30, 110, 0.021),
    (15, 180, -0.011),
    (25, 50, 0.004),
];

/// The real level of the liquid, piecewise linear.
#[derive(Debug)]
pub struct LevelHistory {
    points: Vec<(i64, f64)>,
    watched: Vec<(i64, i64)>,
    end_s: i64,
}

impl LevelHistory {
    /// The stages as they were carried out, then `afterwards` (start, end, level), until `end_s`.
    pub fn new(site: &Site, afterwards: &[(i64, i64, f64)], end_s: i64) -> Self {
        let mut history = LevelHistory {
            points: vec![(site.baseline.as_second(), 0.0)],
            watched: Vec::new(),
            end_s,
        };
        for (stage, (start_late, end_late, above)) in site.stages.iter().zip(DEPARTURES) {
            let (start_s, end_s) = (stage.start.as_second(), stage.end.as_second());
            history.watched.push((start_s - HOUR_S, end_s + 6 * HOUR_S));
            let level_m = stage.to_level_m + above;
            history.change(start_s + start_late * 60, end_s + end_late * 60, level_m);
        }
        for &(start_s, end_s, level_m) in afterwards {
            history.watched.push((start_s, end_s + 6 * HOUR_S));
            history.change(start_s, end_s, level_m);
        }
        let (last_s, last_m) = *history.points.last().unwrap_or(&(0, 0.0));
        history.points.push((end_s, last_m - lost_m(end_s - last_s, last_m)));
        history
    }

    fn change(&mut self, start_s: i64, end_s: i64, level_m: f64) {
        let (last_s, last_m) = *self.points.last().unwrap_or(&(0, 0.0));
        self.points.push((start_s, last_m - lost_m(start_s - last_s, last_m)));
        self.points.push((end_s, level_m));
    }

    /// End of the run.
    pub fn end_s(&self) -> i64 {
        self.end_s
    }

    /// Level above the floor, m.
    pub fn at_m(&self, at_s: i64) -> f64 {
        let next = self.points.partition_point(|&(t, _)| t <= at_s);
        match (next.checked_sub(1).map(|i| self.points[i]), self.points.get(next)) {
            (Some((t0, h0)), Some(&(t1, h1))) => {
                h0 + (h1 - h0) * (at_s - t0) as f64 / (t1 - t0) as f64
            }
            (Some((_, h)), None) | (None, Some(&(_, h))) => h,
            (None, None) => 0.0,
        }
    }

    /// Whether the level was being changed, or had been within hours.
    pub fn watched_at(&self, at_s: i64) -> bool {
        self.watched.iter().any(|&(from, to)| (from..=to).contains(&at_s))
    }

    /// Times of the loggers' scans: every quarter of an hour while the level is watched, else on
    /// the hour.
    pub fn scans(&self) -> Vec<i64> {
        let start_s = self.points[0].0;
        (start_s..=self.end_s)
            .step_by(QUARTER_S as usize)
            .filter(|t| t % HOUR_S == 0 || self.watched_at(*t))
            .collect()
    }
}

fn lost_m(seconds: i64, level_m: f64) -> f64 {
    if level_m > 0.0 { LOSS_M_PER_DAY * seconds as f64 / 86_400.0 } else { 0.0 }
}
