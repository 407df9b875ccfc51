//! What limits must fulfil before anything is judged by them, and what is allowed but unwise.

use super::limits::{Basis, Curve, Direction, Limits, Rule, Thresholds, When};
use super::{RateWindow, Trigger};
use crate::config::{MAX_CURVE_POINTS, MAX_RULES};
use crate::instrument::FixedList;
use crate::quantity::{Bounded, OutOfRange};
use core::fmt;
use serde::{Deserialize, Serialize};

static THRESHOLD: Bounded = Bounded {
    name: "limit",
    unit: "",
    min: -1e9,
    max: 1e9,
    remedy: "Give it in the instrument's unit (per day for a rate, as a multiple for a band).",
};

static POSITIVE: Bounded = Bounded {
    name: "limit counted from zero or from the likely value",
    unit: "",
    min: 0.0,
    max: 1e9,
    remedy: "Give its size; the direction says on which side it lies.",
};

static HYSTERESIS: Bounded = Bounded {
    name: "hysteresis",
    unit: "",
    min: 0.0,
    max: 1e9,
    remedy: "Give how far a value must come back before a trigger falls, in the limit's unit.",
};

static HALF_BAND: Bounded = Bounded {
    name: "smallest half band",
    unit: "",
    min: f64::MIN_POSITIVE,
    max: 1e9,
    remedy: "Give the noise of a reading at least, or a band that narrows to a line would call \
             every reading out.",
};

static NOISE: Bounded = Bounded {
    name: "noise of a reading",
    unit: "",
    min: 0.0,
    max: 1e9,
    remedy: "Give the standard deviation of one reading in the instrument's unit.",
};

static PRESSURE: Bounded = Bounded {
    name: "applied pressure of a limit curve",
    unit: "kPa",
    min: 0.0,
    max: 2_000.0,
    remedy: "Give it in kPa.",
};

static READINGS: Bounded = Bounded {
    name: "readings in a row",
    unit: "",
    min: 1.0,
    max: 100.0,
    remedy: "1 raises on the first reading.",
};

static WAIT: Bounded = Bounded {
    name: "time of persistence",
    unit: "s",
    min: 0.0,
    max: 86_400.0,
    remedy: "Every minute of waiting is a minute of warning lost; a day is the longest.",
};

static HOLD: Bounded = Bounded {
    name: "time into the hold",
    unit: "s",
    min: 0.0,
    max: 31_557_600.0,
    remedy: "Give it in seconds, up to a year.",
};

static WINDOW: Bounded = Bounded {
    name: "window of a rate",
    unit: "s",
    min: 60.0,
    max: 31_557_600.0,
    remedy: "Give it in seconds, a minute to a year.",
};

static WINDOW_READINGS: Bounded = Bounded {
    name: "fewest readings of a rate",
    unit: "",
    min: 3.0,
    max: 10_000.0,
    remedy: "Two readings make no rate.",
};

/// Why limits were refused.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum LimitError {
    /// A value outside its range.
    OutOfRange(OutOfRange),
    /// No rule at all: nothing would ever be judged.
    NoRules,
    /// A rule without a limit for Watch, Review or Stop.
    NoThresholds {
        /// Which rule, from 0.
        rule: usize,
    },
    /// Limits that do not rise from Watch to Stop in their direction.
    Order {
        /// Which rule, from 0.
        rule: usize,
    },
    /// A gross limit without one for Stop.
    GrossWithoutStop {
        /// Which rule, from 0.
        rule: usize,
    },
    /// Hysteresis as wide as the way to the lowest limit: the trigger could never fall.
    NeverClears {
        /// Which rule, from 0.
        rule: usize,
    },
    /// A rule on the curve, and no curve.
    CurveMissing {
        /// Which rule, from 0.
        rule: usize,
    },
    /// A curve without points, or whose lists differ in length.
    CurveLength,
    /// Pressures of a curve that do not rise.
    CurveOrder,
    /// A rule on the rate, and no window.
    WindowMissing {
        /// Which rule, from 0.
        rule: usize,
    },
    /// A shortest span of more than 0.8 of its window, which would come and go with the readings.
    SpanBeyondWindow,
}

impl From<OutOfRange> for LimitError {
    fn from(refused: OutOfRange) -> Self {
        Self::OutOfRange(refused)
    }
}

impl fmt::Display for LimitError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let place = |rule: &usize| rule.saturating_add(1);
        match self {
            Self::OutOfRange(refused) => refused.fmt(f),
            Self::NoRules => f.write_str("there is no rule. Give at least one limit."),
            Self::NoThresholds { rule } => write!(
                f,
                "rule {} has no limit for Watch, Review or Stop. Give one or leave the rule out.",
                place(rule)
            ),
            Self::Order { rule } => write!(
                f,
                "the limits of rule {} do not go from Watch through Review to Stop in its \
                 direction. Check values and direction.",
                place(rule)
            ),
            Self::GrossWithoutStop { rule } => write!(
                f,
                "rule {} has a gross limit and none for Stop. Give the limit of Stop too.",
                place(rule)
            ),
            Self::NeverClears { rule } => write!(
                f,
                "the hysteresis of rule {} is as wide as its lowest limit, so that a trigger would \
                 never fall. Make it smaller.",
                place(rule)
            ),
            Self::CurveMissing { rule } => write!(
                f,
                "rule {} counts on the curve of applied pressure, and there is none. Give it.",
                place(rule)
            ),
            Self::CurveLength => f.write_str(
                "the limit curve needs at least one pressure, and for each trigger none or as many \
                 values as pressures.",
            ),
            Self::CurveOrder => f.write_str("the pressures of the limit curve must rise."),
            Self::WindowMissing { rule } => write!(
                f,
                "rule {} counts on a rate, and there is no window. Give its length, span and \
                 readings.",
                place(rule)
            ),
            Self::SpanBeyondWindow => f.write_str(
                "the shortest span of a rate is more than 0.8 of its window. Lengthen the window.",
            ),
        }
    }
}

impl core::error::Error for LimitError {}

/// How many times the noise a limit should be away from what it counts from. Practice says
/// "several"; three standard deviations are passed by noise alone once in 370 readings.
const TIMES_NOISE: f64 = 3.0;

/// A limit that is allowed and unwise.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum LimitWarning {
    /// A limit so near to what it counts from that noise alone reaches it.
    WithinNoise {
        /// Which rule, from 0.
        rule: u8,
        /// Way to the nearest limit, in the unit of the reading or of the rate.
        distance: f64,
        /// Noise of the reading, or of the rate, in the same unit.
        noise: f64,
    },
    /// Hysteresis smaller than the noise: the trigger would come and go.
    Chatters {
        /// Which rule, from 0.
        rule: u8,
        /// The hysteresis, in the unit of the reading or of the rate.
        hysteresis: f64,
        /// Noise in the same unit.
        noise: f64,
    },
    /// A curve that begins above zero load: its first limits hold down to zero, where they may be
    /// too slack.
    CurveStartsLate {
        /// Which rule, from 0.
        rule: u8,
        /// First pressure of the curve, kPa.
        pressure_kpa: f64,
    },
}

impl fmt::Display for LimitWarning {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match *self {
            Self::WithinNoise { rule, distance, noise } => write!(
                f,
                "the nearest limit of rule {} is {distance:.3} away and the noise is {noise:.3}: \
                 expect false calls. Widen the limit or read better.",
                rule.saturating_add(1)
            ),
            Self::Chatters { rule, hysteresis, noise } => write!(
                f,
                "the hysteresis of rule {} is {hysteresis:.3} and the noise is {noise:.3}: expect \
                 a trigger that comes and goes. Widen it or ask for more readings.",
                rule.saturating_add(1)
            ),
            Self::CurveStartsLate { rule, pressure_kpa } => write!(
                f,
                "the curve of rule {} begins at {pressure_kpa} kPa and its first limits hold below \
                 it: they may miss an early yield. Add a point at 0 kPa.",
                rule.saturating_add(1)
            ),
        }
    }
}

/// Room for all warnings of every rule.
pub(super) type Warnings = FixedList<Option<LimitWarning>, { 3 * MAX_RULES }>;

impl Limits {
    /// Checks all limits and gives the warnings.
    ///
    /// # Errors
    /// The first thing that makes the limits unusable.
    pub(super) fn check(&self) -> Result<Warnings, LimitError> {
        if self.rules.as_slice().is_empty() {
            return Err(LimitError::NoRules);
        }
        if let Some(noise) = self.noise {
            NOISE.check(noise)?;
        }
        if let Some(window) = &self.rate_window {
            check_window(window)?;
        }
        if let Some(curve) = &self.curve {
            curve.check()?;
        }
        let mut warnings = Warnings::default();
        for (index, rule) in self.rules.as_slice().iter().enumerate() {
            self.check_rule(index, rule)?;
            for warning in self.warnings_of(index, rule).into_iter().flatten() {
                // Cannot be full: three per rule.
                let _ = warnings.push(Some(warning));
            }
        }
        Ok(warnings)
    }

    fn check_rule(&self, index: usize, rule: &Rule) -> Result<(), LimitError> {
        HYSTERESIS.check(rule.hysteresis)?;
        for persistence in [rule.raising, rule.clearing] {
            READINGS.check(f64::from(persistence.readings))?;
            WAIT.check(persistence.seconds as f64)?;
        }
        if let When::InHold { after_s } = rule.when {
            HOLD.check(after_s as f64)?;
        }
        match &rule.basis {
            Basis::Band { multiples, smallest_half_band } => {
                HALF_BAND.check(*smallest_half_band)?;
                // A multiple is a size on either side, whatever the direction.
                check_thresholds(index, multiples, Direction::Either, rule.hysteresis)
            }
            Basis::Fixed { values } => {
                check_thresholds(index, values, rule.direction, rule.hysteresis)
            }
            Basis::Rate { per_day } => {
                if self.rate_window.is_none() {
                    return Err(LimitError::WindowMissing { rule: index });
                }
                check_thresholds(index, per_day, rule.direction, rule.hysteresis)
            }
            Basis::Curve => {
                let curve = self.curve.ok_or(LimitError::CurveMissing { rule: index })?;
                let mut points = curve.points();
                points.try_for_each(|at| {
                    check_thresholds(index, &at, rule.direction, rule.hysteresis)
                })
            }
        }
    }

    fn warnings_of(&self, index: usize, rule: &Rule) -> [Option<LimitWarning>; 3] {
        let number = u8::try_from(index).unwrap_or(u8::MAX);
        let [within, chatters] =
            self.noise.map_or([None, None], |noise| self.noise_warnings(number, rule, noise));
        let curve = self.curve.filter(|_| matches!(rule.basis, Basis::Curve));
        let first = curve.and_then(|curve| curve.pressure_kpa.as_slice().first().copied());
        let late = first.filter(|pressure_kpa| *pressure_kpa > 0.0);
        let late =
            late.map(|pressure_kpa| LimitWarning::CurveStartsLate { rule: number, pressure_kpa });
        [within, chatters, late]
    }

    fn noise_warnings(&self, rule: u8, of: &Rule, reading_noise: f64) -> [Option<LimitWarning>; 2] {
        let (distance, scale, noise) = match &of.basis {
            Basis::Band { multiples, smallest_half_band } => (
                nearest(multiples).map(|multiple| multiple * smallest_half_band),
                *smallest_half_band,
                reading_noise,
            ),
            Basis::Fixed { values } => (nearest(values), 1.0, reading_noise),
            Basis::Rate { per_day } => (nearest(per_day), 1.0, self.rate_noise(reading_noise)),
            Basis::Curve => {
                let points = self.curve.iter().flat_map(Curve::points);
                (points.filter_map(|at| nearest(&at)).reduce(f64::min), 1.0, reading_noise)
            }
        };
        let hysteresis = of.hysteresis * scale;
        let within = distance.filter(|distance| *distance < TIMES_NOISE * noise);
        [
            within.map(|distance| LimitWarning::WithinNoise { rule, distance, noise }),
            (hysteresis < noise).then_some(LimitWarning::Chatters { rule, hysteresis, noise }),
        ]
    }

    /// Standard deviation of the slope of the fewest readings spread evenly over the shortest
    /// span, per day: `sigma sqrt(12 (n - 1) / (n (n + 1))) / span`.
    fn rate_noise(&self, reading_noise: f64) -> f64 {
        self.rate_window.map_or(0.0, |window| {
            let n = f64::from(window.min_readings);
            let span_days = window.min_span_s as f64 / crate::units::DAY_S;
            reading_noise * libm::sqrt(12.0 * (n - 1.0) / (n * (n + 1.0))) / span_days
        })
    }
}

fn check_window(window: &RateWindow) -> Result<(), LimitError> {
    WINDOW.check(window.window_s as f64)?;
    WINDOW.check(window.min_span_s as f64)?;
    WINDOW_READINGS.check(f64::from(window.min_readings))?;
    if window.min_span_s as f64 > 0.8 * window.window_s as f64 {
        return Err(LimitError::SpanBeyondWindow);
    }
    Ok(())
}

fn check_thresholds(
    rule: usize,
    thresholds: &Thresholds,
    direction: Direction,
    hysteresis: f64,
) -> Result<(), LimitError> {
    let sizes = direction == Direction::Either;
    let quantity = if sizes { &POSITIVE } else { &THRESHOLD };
    let sign = if direction == Direction::Below { -1.0 } else { 1.0 };
    let mut before = f64::NEG_INFINITY;
    for value in thresholds.rising() {
        quantity.check(value)?;
        if sign * value < before {
            return Err(LimitError::Order { rule });
        }
        before = sign * value;
    }
    if Trigger::RAISED.iter().all(|trigger| thresholds.of(*trigger).is_none()) {
        return Err(LimitError::NoThresholds { rule });
    }
    if thresholds.gross.is_some() && thresholds.stop.is_none() {
        return Err(LimitError::GrossWithoutStop { rule });
    }
    // On both sides of a middle the clearing values must not cross it.
    if sizes && thresholds.rising().next().is_some_and(|lowest| hysteresis >= lowest) {
        return Err(LimitError::NeverClears { rule });
    }
    Ok(())
}

/// Size of the smallest limit.
fn nearest(thresholds: &Thresholds) -> Option<f64> {
    thresholds.rising().map(f64::abs).reduce(f64::min)
}

impl Curve {
    fn check(&self) -> Result<(), LimitError> {
        let pressures = self.pressure_kpa.as_slice();
        if pressures.is_empty() {
            return Err(LimitError::CurveLength);
        }
        for (index, pressure) in pressures.iter().enumerate() {
            PRESSURE.check_at(*pressure, index)?;
        }
        if pressures.windows(2).any(|pair| pair.first() >= pair.last()) {
            return Err(LimitError::CurveOrder);
        }
        let fits = |list: &FixedList<f64, MAX_CURVE_POINTS>| {
            list.as_slice().is_empty() || list.as_slice().len() == pressures.len()
        };
        if [&self.watch, &self.review, &self.stop, &self.gross].into_iter().all(fits) {
            Ok(())
        } else {
            Err(LimitError::CurveLength)
        }
    }
}
