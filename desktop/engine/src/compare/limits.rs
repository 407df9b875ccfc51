//! From the limits and checks of the site file to those of the core, in the core's unit.

use super::level::seconds;
use crate::expect::scale_of;
use crate::site::{
    Direction, Instrument, InstrumentKind, Limit, LimitRule, Persistence, SiteFile, Trigger,
};
use brimstead_core::instrument::FixedList;
use brimstead_core::instrument::check::{Checks, FlatLine, Hampel, Range, Rods};
use brimstead_core::watch::{
    self, Basis, Curve, LimitError, Limits, RateWindow, Rule, Thresholds, When,
};
use thiserror::Error;

/// A trigger by a band falls when the value is back by this share of half a band.
const BAND_HYSTERESIS: f64 = 0.1;
/// A trigger by a rate falls when the rate is back by this share of its lowest limit.
const RATE_HYSTERESIS: f64 = 0.1;
/// A band is never taken narrower than this many standard deviations of the noise on each side.
const SMALLEST_HALF_BAND_SD: f64 = 3.0;
/// A rate needs readings over this share of its window.
const RATE_SPAN: f64 = 0.6;
/// Fewest readings of a rate.
const RATE_READINGS: u16 = 3;

/// Why the limits of an instrument cannot be used.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum LimitsError {
    /// The core refuses them.
    #[error("limits of {id}: {source}")]
    Refused {
        /// The instrument.
        id: String,
        /// Why.
        source: LimitError,
    },
    /// More than the core holds.
    #[error(
        "limits of {id}: {what} do not fit; at most {most} are kept on a logger. Join or leave out some."
    )]
    TooMany {
        /// The instrument.
        id: String,
        /// What there are too many of.
        what: &'static str,
        /// How many fit.
        most: usize,
    },
    /// Rates over windows of different length.
    #[error(
        "limits of {id}: rates over {first_h} h and {second_h} h; one instrument has one window of rate. Give both the same window_h."
    )]
    TwoWindows {
        /// The instrument.
        id: String,
        /// One window, h.
        first_h: f64,
        /// The other, h.
        second_h: f64,
    },
}

/// The checks that every reading of an instrument passes through before it is believed, in the
/// core's unit. Common practice, from its range and noise; it judges the instrument, not the
/// ground.
pub(super) fn checks_of(instrument: &Instrument) -> Checks {
    let scale = scale_of(instrument.unit);
    let noise = instrument.noise_sd / scale;
    let range = Range { low: instrument.range.0 / scale, high: instrument.range.1 / scale };
    let logged =
        matches!(instrument.kind, InstrumentKind::Piezometer | InstrumentKind::SettlementCell);
    Checks {
        range: Some(range),
        step: logged.then_some(0.1 * (range.high - range.low)),
        // A live sensor with noise never repeats itself to the last digit for long.
        flat_line: (logged && noise > 0.0).then_some(FlatLine { readings: 8, tolerance: 0.0 }),
        spike: logged.then_some(Hampel { readings: 7, threshold: 5.0, floor: 12.0 * noise }),
        stale_after_s: Some(seconds(instrument.stale_after_min)),
        rods: (instrument.kind == InstrumentKind::SettlementPlate).then(|| Rods {
            lengths_m: list(&[0.5, 1.0, 1.5, 2.0]),
            tolerance_m: (4.0 * noise).max(0.008),
        }),
        ..Checks::default()
    }
}

/// A fixed list of what is known to fit.
fn list<const N: usize>(values: &[f64]) -> FixedList<f64, N> {
    let mut list = FixedList::default();
    for value in values {
        if list.push(*value).is_err() {
            break;
        }
    }
    list
}

/// The limits of an instrument: its own, or those of its kind; none when neither has any.
///
/// # Errors
/// Limits that do not fit the core or contradict each other.
pub fn limits_of(site: &SiteFile, instrument: &Instrument) -> Result<Option<Limits>, LimitsError> {
    let defaults = site.limit_defaults.get(&instrument.kind);
    let given: &[Limit] = match (&instrument.limits, defaults) {
        (Some(own), _) => own,
        (None, Some(defaults)) => &defaults.limits,
        (None, None) => &[],
    };
    if given.is_empty() {
        return Ok(None);
    }
    let persistence = instrument.persistence.as_ref().or(defaults.map(|kind| &kind.persistence));
    let hysteresis = instrument.hysteresis.or(defaults.map(|kind| kind.hysteresis)).unwrap_or(0.0);
    let scale = scale_of(instrument.unit);
    let mut build = Build {
        id: &instrument.id,
        scale,
        noise: instrument.noise_sd / scale,
        hysteresis: hysteresis / scale,
        raising: persistence.map(raising).unwrap_or_default(),
        limits: Limits { noise: Some(instrument.noise_sd / scale), ..Limits::default() },
    };
    for direction in [Direction::Either, Direction::Above, Direction::Below] {
        let side: Vec<&Limit> = given.iter().filter(|limit| limit.direction == direction).collect();
        build.add_side(direction, &side)?;
    }
    Ok(Some(build.limits))
}

fn raising(given: &Persistence) -> watch::Persistence {
    watch::Persistence {
        readings: u16::try_from(given.readings).unwrap_or(u16::MAX),
        seconds: seconds(given.minutes),
    }
}

struct Build<'a> {
    id: &'a str,
    scale: f64,
    noise: f64,
    hysteresis: f64,
    raising: watch::Persistence,
    limits: Limits,
}

impl Build<'_> {
    /// The limits of one direction, one rule for each basis.
    fn add_side(&mut self, direction: Direction, side: &[&Limit]) -> Result<(), LimitsError> {
        let mut multiples = Thresholds::default();
        let mut fixed = Thresholds::default();
        let mut rates = Thresholds::default();
        let mut curves: Vec<(Trigger, &[(f64, f64)])> = Vec::new();
        for limit in side {
            match &limit.rule {
                LimitRule::Band { band_multiple } => {
                    set(&mut multiples, limit.trigger, *band_multiple);
                }
                LimitRule::Value { value } => {
                    set(&mut fixed, limit.trigger, value / self.scale);
                }
                LimitRule::Rate { rate_per_day, window_h } => {
                    set(&mut rates, limit.trigger, rate_per_day / self.scale);
                    self.set_window(*window_h)?;
                }
                LimitRule::Curve { applied_pressure_curve } => {
                    curves.push((limit.trigger, applied_pressure_curve));
                }
            }
        }
        let half_band = (SMALLEST_HALF_BAND_SD * self.noise).max(1e-6);
        if any(&multiples) {
            let basis = Basis::Band { multiples, smallest_half_band: half_band };
            self.push(basis, direction, BAND_HYSTERESIS)?;
        }
        if any(&fixed) {
            self.push(Basis::Fixed { values: fixed }, direction, self.hysteresis)?;
        }
        if any(&rates) {
            let lowest = [rates.watch, rates.review, rates.stop].into_iter().flatten();
            let lowest = lowest.map(f64::abs).fold(f64::INFINITY, f64::min);
            self.push(Basis::Rate { per_day: rates }, direction, RATE_HYSTERESIS * lowest)?;
        }
        if !curves.is_empty() {
            self.limits.curve = Some(self.curve(&curves)?);
            self.push(Basis::Curve, direction, self.hysteresis)?;
        }
        Ok(())
    }

    fn set_window(&mut self, window_h: f64) -> Result<(), LimitsError> {
        let window_s = (window_h * 3600.0).round() as i64;
        match self.limits.rate_window {
            Some(window) if window.window_s != window_s => Err(LimitsError::TwoWindows {
                id: self.id.to_owned(),
                first_h: window.window_s as f64 / 3600.0,
                second_h: window_h,
            }),
            _ => {
                self.limits.rate_window = Some(RateWindow {
                    window_s,
                    min_span_s: (RATE_SPAN * window_s as f64) as i64,
                    min_readings: RATE_READINGS,
                });
                Ok(())
            }
        }
    }

    fn push(
        &mut self,
        basis: Basis,
        direction: Direction,
        hysteresis: f64,
    ) -> Result<(), LimitsError> {
        let rule = Rule {
            basis,
            direction: match direction {
                Direction::Above => watch::Direction::Above,
                Direction::Below => watch::Direction::Below,
                Direction::Either => watch::Direction::Either,
            },
            hysteresis,
            raising: self.raising,
            clearing: self.raising,
            when: When::Always,
        };
        self.limits.rules.push(rule).map_err(|_| self.too_many("rules"))
    }

    fn too_many(&self, what: &'static str) -> LimitsError {
        let most = match what {
            "rules" => brimstead_core::config::MAX_RULES,
            _ => brimstead_core::config::MAX_CURVE_POINTS,
        };
        LimitsError::TooMany { id: self.id.to_owned(), what, most }
    }

    /// Curves of the triggers on one list of pressures: the points of all of them.
    fn curve(&self, curves: &[(Trigger, &[(f64, f64)])]) -> Result<Curve, LimitsError> {
        let mut pressures: Vec<f64> =
            curves.iter().flat_map(|(_, points)| points.iter().map(|point| point.0)).collect();
        pressures.sort_by(f64::total_cmp);
        pressures.dedup();
        let mut curve = Curve::default();
        for pressure in pressures {
            curve
                .pressure_kpa
                .push(pressure)
                .map_err(|_| self.too_many("points of the limit curves"))?;
            for (trigger, points) in curves {
                let list = match trigger {
                    Trigger::Watch => &mut curve.watch,
                    Trigger::Review => &mut curve.review,
                    Trigger::Stop => &mut curve.stop,
                };
                list.push(between(points, pressure) / self.scale)
                    .map_err(|_| self.too_many("points of the limit curves"))?;
            }
        }
        Ok(curve)
    }
}

/// Linear between points by rising x, constant beyond them.
fn between(points: &[(f64, f64)], x: f64) -> f64 {
    let after = points.partition_point(|point| point.0 <= x);
    match (after.checked_sub(1).map(|before| points[before]), points.get(after)) {
        (Some(a), Some(b)) => a.1 + (x - a.0) / (b.0 - a.0) * (b.1 - a.1),
        (Some(end), None) => end.1,
        (None, first) => first.map_or(0.0, |first| first.1),
    }
}

fn set(thresholds: &mut Thresholds, trigger: Trigger, value: f64) {
    match trigger {
        Trigger::Watch => thresholds.watch = Some(value),
        Trigger::Review => thresholds.review = Some(value),
        Trigger::Stop => thresholds.stop = Some(value),
    }
}

fn any(thresholds: &Thresholds) -> bool {
    thresholds.watch.is_some() || thresholds.review.is_some() || thresholds.stop.is_some()
}
