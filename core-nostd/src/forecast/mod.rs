//! What the readings themselves say about the settlement to come.
//!
//! | method | from | gives | where |
//! |---|---|---|---|
//! | Asaoka | equal steps of a hold | ultimate settlement, coefficient of consolidation | [`asaoka`] |
//! | hyperbolic | a hold from its start | ultimate settlement | [`hyperbolic`] |
//! | secondary line | readings after primary settlement | creep per log cycle, settlement at a time | [`secondary`] |
//! | rate | a window of readings | rate with its uncertainty, and whether it falls | [`rate`] |
//! | updating | prediction and readings | two factors on the prediction | [`update`] |
//!
//! All of them are for one hold at constant load: each rise begins a new curve, and a fit through
//! several stages is a classic mistake. Times are seconds since the hold began (or, for the
//! secondary line, since loading); settlement counts from the same start.
//!
//! # Too early
//! Fits to early data look good and mislead. Each forecast carries a [`Judgement`]: what speaks
//! against using it. "Usable" only means that none of the known objections holds; the interval next
//! to it counts the scatter about the fitted law and not whether the law is right. Reading noise
//! stands on both axes of Asaoka's plot, and neighbouring residuals are correlated, so intervals
//! are nominal.

pub mod asaoka;
pub mod hyperbolic;
pub mod rate;
pub mod secondary;
pub mod update;

use crate::math::distribution::student_quantile;
use crate::math::least_squares::{Fit, FitError};
use crate::quantity::{Bounded, OutOfRange};
use core::fmt;

/// Time since the hold began.
pub static ELAPSED: Bounded = Bounded {
    name: "time since the hold began",
    unit: "s",
    min: 0.0,
    max: 1e11,
    remedy: "Seconds since the load became constant.",
};
/// Settlement since the hold began.
pub static SETTLEMENT: Bounded = Bounded {
    name: "settlement since the hold began",
    unit: "m",
    min: -20.0,
    max: 20.0,
    remedy: "Downwards positive, in metres (not a level).",
};
/// Step of Asaoka's plot.
pub static STEP: Bounded = Bounded {
    name: "time step",
    unit: "s",
    min: 1.0,
    max: 1e10,
    remedy: "Equal steps of some days or weeks; long against the reading noise over the rate.",
};

/// Intervals are two-sided and miss 1 time in 20.
pub const CONFIDENCE: f64 = 0.95;
/// Fewest readings (pairs, for Asaoka) that a forecast is taken from: three degrees of freedom.
/// A choice of this tool.
pub const FEWEST_READINGS: usize = 5;
/// Least share of the forecast settlement that must have happened. The hyperbolic method is
/// reported reliable after about half (Huat, Ng & Munzir 2004, Pertanika J. Sci. Technol. 12(1)).
pub const LEAST_SHARE: f64 = 0.5;
/// Largest relative difference between the forecast from all readings and from their later half
/// before the fitted law is doubted. A choice of this tool.
pub const LARGEST_DRIFT: f64 = 0.10;

/// A settlement at a time.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Observation {
    /// Time since the hold began, s.
    pub elapsed_s: f64,
    /// Settlement since the hold began, m.
    pub settlement_m: f64,
}

/// A two-sided interval.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Interval {
    /// Lower end.
    pub low: f64,
    /// Upper end.
    pub high: f64,
}

/// An ultimate settlement and what is known about it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Ultimate {
    /// Settlement that the fitted law tends to, m; `None` where it tends to none.
    pub settlement_m: Option<f64>,
    /// Interval that holds it with 95 % confidence (Fieller's: all values that the scatter does not
    /// exclude), m; `None` where the readings do not bound it.
    pub interval_m: Option<Interval>,
    /// Standard deviation by linear propagation, m; too small where the interval is lopsided.
    pub deviation_m: Option<f64>,
    /// Student's quantile times that deviation to both sides, m: the interval many texts give.
    pub linear_interval_m: Option<Interval>,
    /// Share of it that has happened.
    pub share: Option<f64>,
    /// Whether to use it.
    pub judgement: Judgement,
}

/// Whether a forecast may be used.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Judgement {
    /// None of the known objections holds.
    Usable,
    /// The readings do not carry a forecast yet.
    TooEarly(Objection),
}

/// What speaks against a forecast.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Objection {
    /// Too few readings.
    FewReadings {
        /// Readings (pairs, for Asaoka) there are.
        readings: usize,
    },
    /// The movement does not slow down as the law demands: no end is in sight.
    NotSlowing,
    /// The scatter leaves the end open.
    Unbounded,
    /// Too little of the forecast settlement has happened.
    SmallShare {
        /// Share that has.
        share: f64,
    },
    /// The later half of the readings gives another forecast: the law does not fit yet.
    Drifting {
        /// Forecast from all readings, m.
        all_m: f64,
        /// Forecast from the later half, m; `None` where it has no end.
        later_m: Option<f64>,
    },
}

impl fmt::Display for Objection {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match *self {
            Self::FewReadings { readings } => {
                write!(f, "{readings} readings are too few; {FEWEST_READINGS} are needed")
            }
            Self::NotSlowing => f.write_str("the movement does not slow down; no end is in sight"),
            Self::Unbounded => f.write_str("the scatter of the readings leaves the end open"),
            Self::SmallShare { share } => write!(
                f,
                "only {:.0} % of the forecast settlement has happened; {:.0} % is needed",
                100.0 * share,
                100.0 * LEAST_SHARE
            ),
            Self::Drifting { all_m, later_m: Some(later_m) } => write!(
                f,
                "all readings give {all_m:.3} m, their later half {later_m:.3} m: the readings do \
                 not follow the law yet"
            ),
            Self::Drifting { all_m, later_m: None } => write!(
                f,
                "all readings give {all_m:.3} m, their later half no end: the readings do not \
                 follow the law yet"
            ),
        }
    }
}

/// Why no forecast was made.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ForecastError {
    /// A value outside its range.
    Value(OutOfRange),
    /// The readings do not determine the law.
    Fit(FitError),
    /// A reading is not later than the one before it.
    NotInOrder {
        /// Its position, counted from 0.
        index: usize,
    },
}

impl From<OutOfRange> for ForecastError {
    fn from(refused: OutOfRange) -> Self {
        Self::Value(refused)
    }
}

impl From<FitError> for ForecastError {
    fn from(refused: FitError) -> Self {
        Self::Fit(refused)
    }
}

impl fmt::Display for ForecastError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Value(refused) => refused.fmt(f),
            Self::Fit(refused) => refused.fmt(f),
            Self::NotInOrder { index } => write!(
                f,
                "reading {} is not later than the one before it. Give readings in order of time, \
                 one a time.",
                index.saturating_add(1)
            ),
        }
    }
}

impl core::error::Error for ForecastError {}

fn check(observations: &[Observation]) -> Result<(), ForecastError> {
    let mut last_s = f64::NEG_INFINITY;
    for (index, observation) in observations.iter().enumerate() {
        ELAPSED.check_at(observation.elapsed_s, index)?;
        SETTLEMENT.check_at(observation.settlement_m, index)?;
        if observation.elapsed_s <= last_s {
            return Err(ForecastError::NotInOrder { index });
        }
        last_s = observation.elapsed_s;
    }
    Ok(())
}

/// Student's quantile for a fit; `None` without degrees of freedom.
fn quantile<const P: usize>(fit: &Fit<P>) -> Option<f64> {
    student_quantile(CONFIDENCE, fit.degrees_of_freedom() as f64).ok()
}

/// Share of the scatter that a fit explains; `None` where there is no scatter.
fn r_squared(residual_sum: f64, values: impl Iterator<Item = f64> + Clone) -> Option<f64> {
    let count = values.clone().count().max(1) as f64;
    let mean = values.clone().sum::<f64>() / count;
    let spread: f64 = values.map(|v| (v - mean) * (v - mean)).sum();
    (spread > 0.0).then(|| 1.0 - residual_sum / spread)
}

/// A straight line `value = intercept + slope x` through readings.
#[derive(Debug, Clone, PartialEq)]
struct Line {
    intercept: f64,
    slope: f64,
    fit: Fit<2>,
}

impl Line {
    fn through(points: impl Iterator<Item = (f64, f64)>) -> Result<Self, FitError> {
        let mut sums = crate::math::least_squares::LeastSquares::<2>::new();
        points.for_each(|(x, value)| sums.add([1.0, x], value));
        let fit = sums.solve()?;
        let [intercept, slope] = fit.coefficients;
        Ok(Self { intercept, slope, fit })
    }

    /// Standard deviation of the residuals, and Student's quantile for it.
    fn scatter(&self) -> Option<(f64, f64)> {
        Some((self.fit.residual_deviation()?, quantile(&self.fit)?))
    }

    /// Interval about a value with this standard deviation.
    fn interval_about(&self, value: Option<f64>, deviation: Option<f64>) -> Option<Interval> {
        let reach = self.scatter()?.1 * deviation?;
        value.map(|value| Interval { low: value - reach, high: value + reach })
    }

    fn slope_deviation(&self) -> Option<f64> {
        Some(self.scatter()?.0 * libm::sqrt(self.fit.variance_factor(&[0.0, 1.0])))
    }

    fn slope_interval(&self) -> Option<Interval> {
        self.interval_about(Some(self.slope), self.slope_deviation())
    }
}

/// What the objections are judged from.
struct Evidence {
    readings: usize,
    settlement_m: Option<f64>,
    bounded: bool,
    share: Option<f64>,
    later_m: Option<f64>,
}

impl Evidence {
    fn judgement(&self) -> Judgement {
        match self.objection() {
            Some(objection) => Judgement::TooEarly(objection),
            None => Judgement::Usable,
        }
    }

    fn objection(&self) -> Option<Objection> {
        if self.readings < FEWEST_READINGS {
            return Some(Objection::FewReadings { readings: self.readings });
        }
        let (Some(all_m), Some(share)) = (self.settlement_m, self.share) else {
            return Some(Objection::NotSlowing);
        };
        if !self.bounded {
            return Some(Objection::Unbounded);
        }
        if share < LEAST_SHARE {
            return Some(Objection::SmallShare { share });
        }
        let steady = self.later_m.is_some_and(|m| (m - all_m).abs() <= LARGEST_DRIFT * all_m.abs());
        (!steady).then_some(Objection::Drifting { all_m, later_m: self.later_m })
    }
}
