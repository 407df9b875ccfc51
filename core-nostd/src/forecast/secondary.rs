//! Secondary line: settlement against the logarithm of time since loading.
//!
//! For readings after the end of primary settlement, on the straight tail of the plot.

use super::{
    ForecastError, Interval, Line, Observation, check, hyperbolic::TIME_ON_PLOT, r_squared,
};
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};

/// Thickness of the creeping layer.
pub static CREEPING_THICKNESS: Bounded = Bounded {
    name: "thickness of the creeping layer",
    unit: "m",
    min: 0.01,
    max: 1e3,
    remedy: "Thickness of the compressible ground below the instrument, in metres.",
};

/// The line `S = intercept + slope log10 t`.
#[derive(Debug, Clone, PartialEq)]
pub struct SecondaryLine {
    /// Settlement per log10 cycle of time, m.
    pub per_cycle_m: f64,
    /// Its standard deviation, m.
    pub per_cycle_deviation_m: Option<f64>,
    /// Share of the scatter of S explained.
    pub r_squared: Option<f64>,
    line: Line,
}

/// Settlement at a time with the interval of a single new reading.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Prediction {
    /// Most likely, m.
    pub settlement_m: f64,
    /// 95 % interval of a reading then, m; `None` with two readings only.
    pub interval_m: Option<Interval>,
}

/// Fits the line; times are since loading.
///
/// # Errors
/// Readings out of order, a value outside its range, or fewer than two readings.
pub fn secondary_line(observations: &[Observation]) -> Result<SecondaryLine, ForecastError> {
    secondary_line_with(observations, &mut Silent)
}

/// As [`secondary_line`], writing the slope.
///
/// # Errors
/// As [`secondary_line`].
pub fn secondary_line_with(
    observations: &[Observation],
    working: &mut impl Working,
) -> Result<SecondaryLine, ForecastError> {
    check(observations)?;
    for (index, observation) in observations.iter().enumerate() {
        TIME_ON_PLOT.check_at(observation.elapsed_s, index)?;
    }
    let line =
        Line::through(observations.iter().map(|o| (libm::log10(o.elapsed_s), o.settlement_m)))?;
    working.step(Step {
        name: "settlement per log cycle of time",
        value: line.slope,
        unit: "m",
        formula: "m of the least-squares line S = c + m log10 t",
        inputs: &[("c", line.intercept)],
        source: "Buisman 1936",
    });
    Ok(SecondaryLine {
        per_cycle_m: line.slope,
        per_cycle_deviation_m: line.slope_deviation(),
        r_squared: r_squared(line.fit.residual_sum, observations.iter().map(|o| o.settlement_m)),
        line,
    })
}

impl SecondaryLine {
    /// Secondary compression ratio Ca/(1+e0) of a layer: settlement per cycle over thickness.
    ///
    /// # Errors
    /// A thickness outside its range.
    pub fn secondary_ratio(&self, thickness_m: f64) -> Result<f64, OutOfRange> {
        Ok(self.per_cycle_m / CREEPING_THICKNESS.check(thickness_m)?)
    }

    /// Settlement at a time since loading, s, if load and law stay as they are.
    ///
    /// # Errors
    /// A time outside its range.
    pub fn settlement_at(&self, elapsed_s: f64) -> Result<Prediction, OutOfRange> {
        let x = libm::log10(TIME_ON_PLOT.check(elapsed_s)?);
        let settlement_m = self.line.intercept + self.line.slope * x;
        let interval_m = self.line.scatter().map(|(deviation, t)| {
            let own = 1.0 + self.line.fit.variance_factor(&[1.0, x]);
            let reach = t * deviation * libm::sqrt(own);
            Interval { low: settlement_m - reach, high: settlement_m + reach }
        });
        Ok(Prediction { settlement_m, interval_m })
    }
}
