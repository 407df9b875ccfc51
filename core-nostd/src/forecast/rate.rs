//! Rate of movement over a window, with its uncertainty, and whether it falls.
//!
//! Two noisy readings make a rate of any size; a rate is only as good as its window. A healthy hold
//! shows a falling rate. A constant or rising one means that the ground yields on.

use super::{ForecastError, Interval, Line, Observation, check, quantile};
use crate::math::least_squares::LeastSquares;
use crate::units::DAY_S;
use crate::working::{Silent, Step, Working};

/// What the rate does over the window.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Trend {
    /// It falls: the movement slows down.
    Falling,
    /// It rises: the movement speeds up.
    Rising,
    /// The readings do not tell: too few, or the change is inside their scatter. Not a sign of
    /// rest.
    Unclear,
}

/// Rate over a window.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Rate {
    /// Slope of the least-squares line, m/day.
    pub m_per_day: f64,
    /// Its standard deviation, m/day; `None` for two readings.
    pub deviation_m_per_day: Option<f64>,
    /// Its 95 % interval, m/day.
    pub interval_m_per_day: Option<Interval>,
    /// From the first reading to the last, s.
    pub window_s: f64,
    /// Readings in the window.
    pub readings: usize,
    /// What the rate does (95 % confidence, from the curvature of a parabola).
    pub trend: Trend,
}

/// Rate over all the readings given: the caller chooses the window.
///
/// # Errors
/// Readings out of order, a value outside its range, or fewer than two readings.
pub fn rate(observations: &[Observation]) -> Result<Rate, ForecastError> {
    rate_with(observations, &mut Silent)
}

/// As [`rate`], writing its step.
///
/// # Errors
/// As [`rate`].
pub fn rate_with(
    observations: &[Observation],
    working: &mut impl Working,
) -> Result<Rate, ForecastError> {
    check(observations)?;
    let (first_s, last_s) = match (observations.first(), observations.last()) {
        (Some(first), Some(last)) => (first.elapsed_s, last.elapsed_s),
        _ => (0.0, 0.0),
    };
    // Days from the middle of the window: the constant, the slope and the curvature part well.
    let middle_s = 0.5 * (first_s + last_s);
    let days = |o: &Observation| (o.elapsed_s - middle_s) / DAY_S;
    let line = Line::through(observations.iter().map(|o| (days(o), o.settlement_m)))?;
    let window_s = last_s - first_s;
    working.step(Step {
        name: "rate of settlement",
        value: line.slope,
        unit: "m/day",
        formula: "slope of the least-squares line over n readings within the window",
        inputs: &[("n", observations.len() as f64), ("window, s", window_s)],
        source: "",
    });
    Ok(Rate {
        m_per_day: line.slope,
        deviation_m_per_day: line.slope_deviation(),
        interval_m_per_day: line.slope_interval(),
        window_s,
        readings: observations.len(),
        trend: trend(observations.iter().map(|o| (days(o), o.settlement_m))),
    })
}

fn trend(points: impl Iterator<Item = (f64, f64)>) -> Trend {
    let mut sums = LeastSquares::<3>::new();
    points.for_each(|(days, settlement_m)| sums.add([1.0, days, days * days], settlement_m));
    let found = sums.solve().ok().and_then(|fit| {
        let deviation = fit.residual_deviation()?;
        let reach = quantile(&fit)? * deviation * libm::sqrt(fit.variance_factor(&[0.0, 0.0, 1.0]));
        Some((fit.coefficients, reach))
    });
    match found {
        Some(([.., curvature], reach)) if curvature < -reach => Trend::Falling,
        Some(([.., curvature], reach)) if curvature > reach => Trend::Rising,
        _ => Trend::Unclear,
    }
}
