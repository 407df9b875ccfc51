//! Rate over a window: a least-squares slope that two noisy points cannot fake.

use crate::config::RATE_PARTS;
use crate::instrument::FixedList;
use crate::units::DAY_S;
use serde::{Deserialize, Serialize};

/// The window of a rate and what it needs before it gives one.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub struct RateWindow {
    /// Length of the window, s.
    pub window_s: i64,
    /// Shortest span of readings, s; at most 0.8 of the window.
    pub min_span_s: i64,
    /// Fewest good readings; at least 3.
    pub min_readings: u16,
}

/// A rate with its window and doubt.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Rate {
    /// Slope in the instrument's unit per day.
    pub per_day: f64,
    /// Its standard error from the scatter about the line, per day. It knows nothing of curvature
    /// or drift.
    pub standard_error_per_day: f64,
    /// From the first to the last reading used, s.
    pub span_s: i64,
    /// Readings used.
    pub readings: u32,
}

/// Good readings of a window, in at most [`RATE_PARTS`] parts of equal length. Readings of one part
/// are averaged, in time and in value; where they are no denser than the parts, each stands alone
/// and the slope is the plain least-squares one. Averages lie on the same line as their readings,
/// so a steady rate is exact at any density.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub(super) struct History {
    parts: FixedList<Part, RATE_PARTS>,
}

#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
struct Part {
    first_s: i64,
    /// Mean time after `first_s`, s.
    mean_after_s: f64,
    mean_value: f64,
    readings: u32,
}

impl Part {
    fn new(time_s: i64, value: f64) -> Self {
        Self { first_s: time_s, mean_after_s: 0.0, mean_value: value, readings: 1 }
    }

    fn add(&mut self, time_s: i64, value: f64) {
        self.readings = self.readings.saturating_add(1);
        let share = 1.0 / f64::from(self.readings);
        let after_s = time_s.saturating_sub(self.first_s) as f64;
        self.mean_after_s += share * (after_s - self.mean_after_s);
        self.mean_value += share * (value - self.mean_value);
    }

    /// Mean time before an instant, s.
    fn mean_before_s(&self, now_s: i64) -> f64 {
        now_s.saturating_sub(self.first_s) as f64 - self.mean_after_s
    }
}

impl History {
    pub(super) fn push(&mut self, window: &RateWindow, time_s: i64, value: f64) {
        // One part fewer than there is room for: the oldest is partly outside the window.
        let part_s = window.window_s as f64 / (RATE_PARTS.saturating_sub(1) as f64);
        match self.parts.last_mut() {
            Some(part) if (time_s.saturating_sub(part.first_s) as f64) < part_s => {
                part.add(time_s, value);
            }
            _ => self.parts.push_dropping_oldest(Part::new(time_s, value)),
        }
        while let Some(oldest) = self.parts.as_slice().first()
            && oldest.mean_before_s(time_s) > window.window_s as f64
        {
            self.parts.drop_oldest();
        }
    }

    /// The rate at the instant of the newest reading; `None` when there is too little for one.
    pub(super) fn rate(&self, window: &RateWindow, newest_s: i64) -> Option<Rate> {
        let parts = self.parts.as_slice();
        let readings = parts.iter().fold(0_u32, |sum, part| sum.saturating_add(part.readings));
        let span_s = newest_s.saturating_sub(parts.first()?.first_s);
        let enough = parts.len() >= 3
            && readings >= u32::from(window.min_readings)
            && span_s >= window.min_span_s;
        if !enough {
            return None;
        }
        let (slope_per_s, error_per_s) = weighted_slope(parts, newest_s)?;
        Some(Rate {
            per_day: slope_per_s * DAY_S,
            standard_error_per_day: error_per_s * DAY_S,
            span_s,
            readings,
        })
    }
}

/// Least-squares slope of the parts' means weighted by their readings, and its standard error.
///
/// `b = sum w (t - tm)(v - vm) / sum w (t - tm)^2`,
/// `se^2 = sum w (v - vm - b (t - tm))^2 / ((n - 2) sum w (t - tm)^2)`.
fn weighted_slope(parts: &[Part], newest_s: i64) -> Option<(f64, f64)> {
    let weights = parts.iter().fold(0.0, |sum, part| sum + f64::from(part.readings));
    let mean = |of: fn(&Part, i64) -> f64| {
        let sum = parts.iter().fold(0.0, |s, p| s + f64::from(p.readings) * of(p, newest_s));
        sum / weights
    };
    let mean_t = mean(|part, newest_s| -part.mean_before_s(newest_s));
    let mean_v = mean(|part, _| part.mean_value);
    let offsets = |part: &Part| {
        (f64::from(part.readings), -part.mean_before_s(newest_s) - mean_t, part.mean_value - mean_v)
    };
    let (stt, stv) = parts
        .iter()
        .map(offsets)
        .fold((0.0, 0.0), |(stt, stv), (w, t, v)| (stt + w * t * t, stv + w * t * v));
    let slope = stv / stt;
    let squares = parts.iter().map(offsets).fold(0.0, |sum, (w, t, v)| {
        let left = v - slope * t;
        sum + w * left * left
    });
    let freedom = parts.len().checked_sub(2)? as f64;
    let error = libm::sqrt(squares / freedom / stt);
    (slope.is_finite() && error.is_finite()).then_some((slope, error))
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    const DAY: RateWindow = RateWindow { window_s: 86_400, min_span_s: 43_200, min_readings: 4 };

    fn fed(window: &RateWindow, readings: impl IntoIterator<Item = (i64, f64)>) -> Option<Rate> {
        let mut history = History::default();
        let mut newest_s = 0;
        for (time_s, value) in readings {
            history.push(window, time_s, value);
            newest_s = time_s;
        }
        history.rate(window, newest_s)
    }

    #[test]
    fn two_noisy_points_and_a_short_burst_give_no_rate() {
        assert_eq!(fed(&DAY, [(0, 0.0), (60, 0.003)]), None);
        assert_eq!(fed(&DAY, [(0, 0.0), (80_000, 0.003)]), None);
        assert_eq!(fed(&DAY, (0..100).map(|i| (i * 60, i as f64))), None, "100 minutes");
    }

    #[test]
    fn a_steady_rate_is_exact_at_any_density() {
        for spacing_s in [60, 300, 900, 3600, 7200, 21_600] {
            let start_s = 1_750_000_000_i64;
            let readings = (0..=172_800)
                .step_by(spacing_s)
                .map(|after_s: i64| (start_s + after_s, 0.5 + 0.012 * (after_s as f64 / 86_400.0)));
            let rate = fed(&DAY, readings).unwrap();
            assert_relative_eq!(rate.per_day, 0.012, max_relative = 1e-9);
            assert!(rate.standard_error_per_day < 1e-12);
            assert!(rate.span_s <= 86_400 + 5_760 && rate.span_s >= 80_640, "{}", rate.span_s);
        }
    }

    /// Against scipy 1.17 `stats.linregress` (slope and stderr) on the same six points.
    #[test]
    fn slope_and_error_agree_with_a_statistics_library() {
        let hours = [0, 4, 9, 13, 18, 22];
        let values = [1.00, 1.31, 1.49, 1.90, 2.12, 2.55];
        let readings = hours.map(|h| h * 3600).into_iter().zip(values);
        let rate = fed(&DAY, readings).unwrap();
        assert_relative_eq!(rate.per_day, LINREGRESS.0, max_relative = 1e-12);
        assert_relative_eq!(rate.standard_error_per_day, LINREGRESS.1, max_relative = 1e-12);
        assert_eq!((rate.span_s, rate.readings), (79_200, 6));
    }

    const LINREGRESS: (f64, f64) = (1.623_448_275_862_068_7, 0.107_545_306_106_943_52);

    #[test]
    fn old_readings_leave_the_window() {
        // A fast day, then a quiet one.
        let readings = (0..=96).map(|i| {
            let time_s = i * 1800;
            (time_s, 0.03 * (time_s.min(86_400) as f64 / 86_400.0))
        });
        let rate = fed(&DAY, readings).unwrap();
        assert!(rate.per_day.abs() < 0.001, "{}", rate.per_day);
    }

    #[test]
    fn after_a_long_gap_there_is_no_rate_until_the_window_has_filled_again() {
        let before = (0..=24).map(|i| (i * 3600, i as f64));
        let after = (0..6).map(|i| (1_000_000 + i * 3600, 24.0));
        assert_eq!(fed(&DAY, before.chain(after)), None);
    }
}
