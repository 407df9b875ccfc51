//! Quantiles of the normal and of Student's distribution.
//!
//! Both are found as roots of the distribution functions, to a relative 1e-12 (1e-9 for a million
//! degrees of freedom); they are asked for once per fit, not per reading.

use super::root::brent;
use crate::quantity::{Bounded, OutOfRange};
use core::f64::consts::{PI, SQRT_2};

/// Confidence of a two-sided interval.
pub static CONFIDENCE: Bounded = Bounded {
    name: "confidence of a two-sided interval",
    unit: "",
    min: 0.01,
    max: 0.999_999,
    remedy: "0.95 asks for the interval that misses 1 time in 20.",
};
/// Degrees of freedom.
pub static DEGREES_OF_FREEDOM: Bounded = Bounded {
    name: "degrees of freedom",
    unit: "",
    min: 1.0,
    max: 1e9,
    remedy: "An interval needs more observations than unknowns.",
};

/// Number of standard deviations that a normal variable exceeds, up or down, with probability
/// 1 - `confidence`.
///
/// # Errors
/// A confidence outside its range.
pub fn normal_quantile(confidence: f64) -> Result<f64, OutOfRange> {
    let outside = 1.0 - CONFIDENCE.check(confidence)?;
    // Probability outside +-x is erfc(x/sqrt 2).
    Ok(root(0.0, 10.0, |x| libm::erfc(x / SQRT_2) - outside))
}

/// As [`normal_quantile`] for Student's distribution.
///
/// # Errors
/// A confidence or degrees of freedom outside their range.
pub fn student_quantile(confidence: f64, degrees_of_freedom: f64) -> Result<f64, OutOfRange> {
    let outside = 1.0 - CONFIDENCE.check(confidence)?;
    let degrees = DEGREES_OF_FREEDOM.check(degrees_of_freedom)?;
    // Probability outside +-t is I_x(degrees/2, 1/2) at x = degrees/(degrees + t^2)
    // (Abramowitz & Stegun 26.7.1); the logarithm of t keeps the root well scaled.
    let log = root(-10.0, 20.0, |log_t| {
        let t = libm::exp(log_t);
        incomplete_beta(0.5 * degrees, degrees / (degrees + t * t), t * t / (degrees + t * t))
            - outside
    });
    Ok(libm::exp(log))
}

/// The ends are chosen so that the signs differ for every allowed confidence.
fn root(low: f64, high: f64, f: impl FnMut(f64) -> f64) -> f64 {
    brent(low, high, 1e-14, f).unwrap_or(high)
}

/// Regularised incomplete beta function I_x(a, 1/2), `y` being 1 - x.
fn incomplete_beta(a: f64, x: f64, y: f64) -> f64 {
    let b = 0.5;
    if x <= 0.0 {
        return 0.0;
    }
    if y <= 0.0 {
        return 1.0;
    }
    let log_beta = libm::lgamma(a) + 0.5 * libm::log(PI) - libm::lgamma(a + b);
    // ln x from the smaller of x and y, where it keeps its digits.
    let log_x = if y < 0.5 { libm::log1p(-y) } else { libm::log(x) };
    let log_y = if x < 0.5 { libm::log1p(-x) } else { libm::log(y) };
    let front = libm::exp(a * log_x + b * log_y - log_beta);
    if x < (a + 1.0) / (a + b + 2.0) {
        front * continued_fraction(a, b, x) / a
    } else {
        1.0 - front * continued_fraction(b, a, y) / b
    }
}

/// DLMF 8.17.22 by Lentz's method (as modified by Thompson & Barnett 1986). Converges in far fewer
/// steps than allowed on the side of the mean it is used on: `O(sqrt(max(a, b)))`.
fn continued_fraction(a: f64, b: f64, x: f64) -> f64 {
    let guard = |v: f64| if v.abs() < 1e-300 { 1e-300 } else { v };
    let mut c = 1.0;
    let mut d = 1.0 / guard(1.0 - (a + b) * x / (a + 1.0));
    let mut value = d;
    for m in 1..200_000_u32 {
        let m = f64::from(m);
        let even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
        d = 1.0 / guard(1.0 + even * d);
        c = guard(1.0 + even / c);
        value *= d * c;
        let odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
        d = 1.0 / guard(1.0 + odd * d);
        c = guard(1.0 + odd / c);
        let change = d * c;
        value *= change;
        if (change - 1.0).abs() < 1e-15 {
            break;
        }
    }
    value
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Fisher & Yates' table III, with the digits of scipy.stats.t.ppf (scipy 1.17).
    #[test]
    fn student_quantiles_agree_with_the_table() {
        for (degrees, confidence, want) in [
            (1.0, 0.95, 12.706_204_736_174_7),
            (2.0, 0.95, 4.302_652_729_749_462),
            (10.0, 0.95, 2.228_138_851_986_27),
            (28.0, 0.95, 2.048_407_141_795_24),
            (5.0, 0.5, 0.726_686_843_800_424),
            (1e6, 0.95, 1.959_966_356_814_107),
        ] {
            let got = student_quantile(confidence, degrees).unwrap();
            // ln Gamma of half a million has lost seven digits before its difference is taken.
            let tolerance = if degrees < 1e3 { 1e-13 } else { 1e-9 };
            assert!((got / want - 1.0).abs() < tolerance, "{degrees} {confidence}: {got} {want}");
        }
    }

    /// Abramowitz & Stegun 1964, table 26.5.
    #[test]
    fn normal_quantiles_agree_with_the_table() {
        for (confidence, want) in
            [(0.95, 1.959_963_984_540_05), (0.5, 0.674_489_750_196_08), (0.99, 2.575_829_303_548_9)]
        {
            let got = normal_quantile(confidence).unwrap();
            assert!((got - want).abs() < 1e-12, "{got} {want}");
        }
    }

    #[test]
    fn what_is_no_confidence_is_refused() {
        assert!(normal_quantile(1.0).is_err());
        assert!(student_quantile(0.95, 0.0).is_err());
        assert!(student_quantile(f64::NAN, 3.0).is_err());
    }
}
