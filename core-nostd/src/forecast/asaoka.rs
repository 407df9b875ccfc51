//! Asaoka's method: settlements at equal steps against those one step before.
//!
//! ```text
//! s_j = b0 + b1 s_(j-1)          s_ult = b0/(1 - b1)
//! ```
//! The first mode of consolidation under constant load falls by the same factor b1 in each step, so
//! that the plot is a straight line once the higher modes have died out (60 % consolidation or so).
//! Earlier points lie on a curve and give too little ultimate settlement: all of a Terzaghi curve
//! from its start gives three quarters of it. Creep is not in it.
//!
//! # References
//! Asaoka 1978, Soils and Foundations 18(4), 87-101; interval after Fieller 1954, J. R. Statist.
//! Soc. B 16, 175-185.

use super::{
    ELAPSED, Evidence, ForecastError, Interval, Line, Observation, STEP, Ultimate, check, r_squared,
};
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};
use core::f64::consts::PI;

/// Drainage path.
pub static DRAINAGE_PATH: Bounded = Bounded {
    name: "drainage path",
    unit: "m",
    min: 1e-3,
    max: 1e3,
    remedy: "Half the layer when it drains at both faces, the whole layer when at one.",
};
/// Diameter of the ground drained by one drain.
pub static DRAINED_DIAMETER: Bounded = Bounded {
    name: "diameter drained by one drain",
    unit: "m",
    min: 0.05,
    max: 50.0,
    remedy: "1.05 times the spacing in triangles, 1.13 times in squares.",
};
/// Spacing term of drains.
pub static DRAIN_TERM: Bounded = Bounded {
    name: "drain spacing term mu",
    unit: "",
    min: 1e-3,
    max: 1e3,
    remedy: "ln(n/s) + (kh/ks) ln s - 3/4 for wide spacing.",
};

/// Asaoka's line through a hold.
#[derive(Debug, Clone, PartialEq)]
pub struct Asaoka {
    /// b0, m.
    pub intercept_m: f64,
    /// b1.
    pub slope: f64,
    /// 95 % interval of b1.
    pub slope_interval: Option<Interval>,
    /// Standard deviation of b0, m.
    pub intercept_deviation_m: Option<f64>,
    /// Standard deviation of b1.
    pub slope_deviation: Option<f64>,
    /// Standard deviation of the residuals, m.
    pub residual_deviation_m: Option<f64>,
    /// Share of the scatter of s_j explained; close to 1 even for poor forecasts.
    pub r_squared: Option<f64>,
    /// Pairs on the plot.
    pub pairs: usize,
    /// Step, s.
    pub step_s: f64,
    /// Ultimate settlement since the hold began.
    pub ultimate: Ultimate,
}

/// Asaoka's line from readings at any times, taken at equal steps of `step_s` from `start_s` on by
/// straight lines between readings. `start_s` is not before the first reading.
///
/// # Errors
/// Readings out of order, a value outside its range, or too few steps.
pub fn asaoka(
    observations: &[Observation],
    start_s: f64,
    step_s: f64,
) -> Result<Asaoka, ForecastError> {
    asaoka_with(observations, start_s, step_s, &mut Silent)
}

/// As [`asaoka`], writing slope, intercept and ultimate settlement.
///
/// # Errors
/// As [`asaoka`].
pub fn asaoka_with(
    observations: &[Observation],
    start_s: f64,
    step_s: f64,
    working: &mut impl Working,
) -> Result<Asaoka, ForecastError> {
    check(observations)?;
    STEP.check(step_s)?;
    ELAPSED.check(start_s)?;
    let steps = EqualSteps { observations, start_s, step_s };
    let line = Line::through(steps.pairs(0))?;
    let pairs = steps.pairs(0).count();
    let later = Line::through(steps.pairs(pairs.div_ceil(2))).ok();
    let last_m = steps.pairs(0).map(|(_, after)| after).last();
    let settlement_m = end_of(&line);
    let interval_m = fieller(&line);
    let share = settlement_m.zip(last_m).map(|(end_m, last_m)| last_m / end_m);
    let evidence = Evidence {
        readings: pairs,
        settlement_m,
        bounded: interval_m.is_some(),
        share,
        later_m: later.as_ref().and_then(end_of),
    };
    let deviation_m = settlement_m.and_then(|_| end_deviation(&line));
    let ultimate = Ultimate {
        settlement_m,
        interval_m,
        deviation_m,
        linear_interval_m: line.interval_about(settlement_m, deviation_m),
        share,
        judgement: evidence.judgement(),
    };
    write(&line, settlement_m, step_s, working);
    let scatter = line.scatter().map(|(deviation, _)| deviation);
    Ok(Asaoka {
        intercept_m: line.intercept,
        slope: line.slope,
        slope_interval: line.slope_interval(),
        intercept_deviation_m: scatter
            .map(|deviation| deviation * libm::sqrt(line.fit.variance_factor(&[1.0, 0.0]))),
        slope_deviation: line.slope_deviation(),
        residual_deviation_m: scatter,
        r_squared: r_squared(line.fit.residual_sum, steps.pairs(0).map(|(_, after)| after)),
        pairs,
        step_s,
        ultimate,
    })
}

fn write(line: &Line, settlement_m: Option<f64>, step_s: f64, working: &mut impl Working) {
    working.step(Step {
        name: "slope of Asaoka's line",
        value: line.slope,
        unit: "",
        formula: "b1 of the least-squares line s_j = b0 + b1 s_(j-1), equal steps dt",
        inputs: &[("b0", line.intercept), ("dt", step_s)],
        source: "Asaoka 1978",
    });
    if let Some(value) = settlement_m {
        working.step(Step {
            name: "ultimate settlement by Asaoka's method",
            value,
            unit: "m",
            formula: "b0/(1 - b1)",
            inputs: &[("b0", line.intercept), ("b1", line.slope)],
            source: "Asaoka 1978",
        });
    }
}

/// Where the line meets s_j = s_(j-1), if the movement dies out towards it.
fn end_of(line: &Line) -> Option<f64> {
    (line.slope > 0.0 && line.slope < 1.0).then(|| line.intercept / (1.0 - line.slope))
}

/// Standard deviation of b0/(1 - b1) by its derivatives.
fn end_deviation(line: &Line) -> Option<f64> {
    let rest = 1.0 - line.slope;
    let gradient = [1.0 / rest, line.intercept / (rest * rest)];
    Some(line.scatter()?.0 * libm::sqrt(line.fit.variance_factor(&gradient)))
}

/// All S with `(b0 - (1 - b1) S)^2 <= t^2 (v0 + S^2 v1 + 2 S c01)`; `None` when they have no end.
fn fieller(line: &Line) -> Option<Interval> {
    end_of(line)?;
    let (deviation, t) = line.scatter()?;
    let scale = t * t * deviation * deviation;
    let (constant, slope) = ([1.0, 0.0], [0.0, 1.0]);
    let v0 = scale * line.fit.variance_factor(&constant);
    let v1 = scale * line.fit.variance_factor(&slope);
    let c01 = scale * line.fit.covariance_factor(&constant, &slope);
    let (b0, rest) = (line.intercept, 1.0 - line.slope);
    let a = rest * rest - v1;
    let half_b = b0 * rest + c01;
    let c = b0 * b0 - v0;
    let discriminant = half_b * half_b - a * c;
    if !(a > 0.0 && discriminant >= 0.0) {
        return None;
    }
    let root = libm::sqrt(discriminant);
    Some(Interval { low: (half_b - root) / a, high: (half_b + root) / a })
}

impl Asaoka {
    /// Coefficient of consolidation of vertical flow, m2/s: `-4 H^2 ln b1/(pi^2 dt)` (first mode of
    /// Terzaghi's solution); `None` where the movement does not die out.
    ///
    /// # Errors
    /// A drainage path outside its range.
    pub fn cv_m2_per_s(&self, drainage_path_m: f64) -> Result<Option<f64>, OutOfRange> {
        DRAINAGE_PATH.check(drainage_path_m)?;
        let factor = 4.0 * drainage_path_m * drainage_path_m / (PI * PI);
        Ok(self.decay_per_s(self.slope).map(|decay| factor * decay))
    }

    /// The 95 % interval of [`Asaoka::cv_m2_per_s`], from that of the slope.
    ///
    /// # Errors
    /// As [`Asaoka::cv_m2_per_s`].
    pub fn cv_interval_m2_per_s(
        &self,
        drainage_path_m: f64,
    ) -> Result<Option<Interval>, OutOfRange> {
        DRAINAGE_PATH.check(drainage_path_m)?;
        let factor = 4.0 * drainage_path_m * drainage_path_m / (PI * PI);
        let end = |slope| Some(factor * self.decay_per_s(slope)?);
        Ok(self.slope_interval.and_then(|interval| {
            Some(Interval { low: end(interval.high)?, high: end(interval.low)? })
        }))
    }

    /// Coefficient of consolidation of flow to drains, m2/s: `-De^2 mu ln b1/(8 dt)`, when all
    /// water leaves by drains.
    ///
    /// # Errors
    /// A value outside its range.
    pub fn ch_m2_per_s(
        &self,
        drained_diameter_m: f64,
        drain_term: f64,
    ) -> Result<Option<f64>, OutOfRange> {
        DRAINED_DIAMETER.check(drained_diameter_m)?;
        DRAIN_TERM.check(drain_term)?;
        let factor = drained_diameter_m * drained_diameter_m * drain_term / 8.0;
        Ok(self.decay_per_s(self.slope).map(|decay| factor * decay))
    }

    fn decay_per_s(&self, slope: f64) -> Option<f64> {
        (slope > 0.0 && slope < 1.0).then(|| -libm::log(slope) / self.step_s)
    }
}

/// Settlements at equal steps by straight lines between readings.
struct EqualSteps<'a> {
    observations: &'a [Observation],
    start_s: f64,
    step_s: f64,
}

impl<'a> EqualSteps<'a> {
    /// Pairs (s_(j-1), s_j) from the pair counted `first` on.
    fn pairs(&self, first: usize) -> impl Iterator<Item = (f64, f64)> + Clone + 'a {
        let (observations, start_s, step_s) = (self.observations, self.start_s, self.step_s);
        let at = move |step: usize| settlement_at(observations, start_s + step as f64 * step_s);
        (first..).map_while(move |step| Some((at(step)?, at(step.saturating_add(1))?)))
    }
}

/// Settlement at a time between the first and the last reading, m.
fn settlement_at(observations: &[Observation], at_s: f64) -> Option<f64> {
    let after = observations.partition_point(|o| o.elapsed_s < at_s);
    let Some(right) = observations.get(after) else {
        // Steps add up to the last reading but for their rounding.
        let last = observations.last()?;
        return (at_s - last.elapsed_s <= 1e-9 * at_s).then_some(last.settlement_m);
    };
    if right.elapsed_s == at_s {
        return Some(right.settlement_m);
    }
    let left = observations.get(after.checked_sub(1)?)?;
    let share = (at_s - left.elapsed_s) / (right.elapsed_s - left.elapsed_s);
    Some(left.settlement_m + share * (right.settlement_m - left.settlement_m))
}
