//! Hyperbolic method: `t/S = a + b t`, ultimate settlement `1/b`.
//!
//! An empirical law for a hold, with t and S from its start. Consolidation by Terzaghi's theory is
//! not a hyperbola: between 60 and 90 % of it the plot has a slope of 0.82 times the true one, so
//! that 1/b is too large by a fifth; in practice the surplus often makes room for creep.
//! [`Hyperbolic::ultimate_by_slope_factor_m`] takes such a factor.
//!
//! # References
//! Tan, Inoue & Lee 1991, J. Geotech. Eng. 117(11), 1655-1667; Tan 1995.

use super::{
    ELAPSED, Evidence, ForecastError, Interval, Line, Observation, Ultimate, check, r_squared,
};
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};

/// Time of a reading on the hyperbolic plot.
pub static TIME_ON_PLOT: Bounded = Bounded {
    name: "time since the hold began",
    unit: "s",
    min: 1.0,
    max: 1e11,
    remedy: "t/S has no value at the start of the hold; leave that reading out.",
};
/// Settlement of a reading on the hyperbolic plot.
pub static SETTLEMENT_ON_PLOT: Bounded = Bounded {
    name: "settlement since the hold began",
    unit: "m",
    min: 1e-6,
    max: 20.0,
    remedy: "The hyperbolic method needs settlement at every reading; leave readings without out.",
};
/// Slope factor of the theory of consolidation.
pub static SLOPE_FACTOR: Bounded = Bounded {
    name: "slope factor of the hyperbolic plot",
    unit: "",
    min: 0.3,
    max: 1.5,
    remedy: "0.82 for Terzaghi's curve between 60 and 90 %; 1 takes the plot as it is.",
};

/// The hyperbola through a hold.
#[derive(Debug, Clone, PartialEq)]
pub struct Hyperbolic {
    /// a, s/m: the inverse of the first rate.
    pub intercept_s_per_m: f64,
    /// b, 1/m.
    pub slope_per_m: f64,
    /// Standard deviation of b, 1/m.
    pub slope_deviation_per_m: Option<f64>,
    /// Share of the scatter of t/S explained.
    pub r_squared: Option<f64>,
    /// Readings used.
    pub readings: usize,
    /// Ultimate settlement since the hold began.
    pub ultimate: Ultimate,
}

/// Fits a hyperbola to all the readings given, t and S from the start of the hold; the caller
/// chooses the straight part of the plot.
///
/// # Errors
/// Readings out of order, a value outside its range, or fewer than two readings.
pub fn hyperbolic(observations: &[Observation]) -> Result<Hyperbolic, ForecastError> {
    hyperbolic_with(observations, &mut Silent)
}

/// As [`hyperbolic`], writing slope and ultimate settlement.
///
/// # Errors
/// As [`hyperbolic`].
pub fn hyperbolic_with(
    observations: &[Observation],
    working: &mut impl Working,
) -> Result<Hyperbolic, ForecastError> {
    check(observations)?;
    for (index, observation) in observations.iter().enumerate() {
        TIME_ON_PLOT.check_at(observation.elapsed_s, index)?;
        SETTLEMENT_ON_PLOT.check_at(observation.settlement_m, index)?;
    }
    let plot = |from: usize| {
        observations.iter().skip(from).map(|o| (o.elapsed_s, o.elapsed_s / o.settlement_m))
    };
    let line = Line::through(plot(0))?;
    let readings = observations.len();
    let later = Line::through(plot(readings.div_ceil(2))).ok();
    let settlement_m = end_of(&line);
    let interval_m = line.slope_interval().and_then(|slope| {
        (slope.low > 0.0).then(|| Interval { low: 1.0 / slope.high, high: 1.0 / slope.low })
    });
    let last_m = observations.last().map(|o| o.settlement_m);
    let share = settlement_m.zip(last_m).map(|(end_m, last_m)| last_m / end_m);
    let evidence = Evidence {
        readings,
        settlement_m,
        bounded: interval_m.is_some(),
        share,
        later_m: later.as_ref().and_then(end_of),
    };
    let deviation = line.slope_deviation();
    let deviation_m = settlement_m.and_then(|end_m| Some(deviation? * end_m * end_m));
    working.step(Step {
        name: "slope of the hyperbolic plot",
        value: line.slope,
        unit: "1/m",
        formula: "b of the least-squares line t/S = a + b t",
        inputs: &[("a", line.intercept)],
        source: "Tan, Inoue & Lee 1991",
    });
    if let Some(value) = settlement_m {
        working.step(Step {
            name: "ultimate settlement by the hyperbolic method",
            value,
            unit: "m",
            formula: "1/b",
            inputs: &[("b", line.slope)],
            source: "",
        });
    }
    Ok(Hyperbolic {
        intercept_s_per_m: line.intercept,
        slope_per_m: line.slope,
        slope_deviation_per_m: deviation,
        r_squared: r_squared(line.fit.residual_sum, plot(0).map(|(_, value)| value)),
        readings,
        ultimate: Ultimate {
            settlement_m,
            interval_m,
            deviation_m,
            linear_interval_m: line.interval_about(settlement_m, deviation_m),
            share,
            judgement: evidence.judgement(),
        },
    })
}

fn end_of(line: &Line) -> Option<f64> {
    (line.slope > 0.0).then(|| 1.0 / line.slope)
}

impl Hyperbolic {
    /// Settlement since the hold began, m, at a time since then, s; `None` where the hyperbola has
    /// no value (it does not slow down).
    ///
    /// # Errors
    /// A time outside its range.
    pub fn settlement_at_m(&self, elapsed_s: f64) -> Result<Option<f64>, OutOfRange> {
        ELAPSED.check(elapsed_s)?;
        let divisor = self.intercept_s_per_m + self.slope_per_m * elapsed_s;
        Ok((divisor > 0.0).then(|| elapsed_s / divisor))
    }

    /// Ultimate settlement, m, for a known ratio of the plot's slope to the true one:
    /// `slope factor / b`.
    ///
    /// # Errors
    /// A factor outside its range.
    pub fn ultimate_by_slope_factor_m(&self, factor: f64) -> Result<Option<f64>, OutOfRange> {
        SLOPE_FACTOR.check(factor)?;
        Ok(self.ultimate.settlement_m.map(|end_m| factor * end_m))
    }
}
