//! Root of a function of one variable, bracketed.

use core::fmt;

/// Why no root was found.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum RootError {
    /// The function has the same sign (or is not a number) at both ends.
    NotBracketed {
        /// Value at the lower end.
        at_low: f64,
        /// Value at the upper end.
        at_high: f64,
    },
    /// The tolerance was not reached.
    NotConverged {
        /// Steps taken.
        steps: u32,
        /// Best estimate so far.
        best: f64,
    },
}

impl fmt::Display for RootError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NotBracketed { at_low, at_high } => write!(
                f,
                "no change of sign between the ends ({at_low} and {at_high}); widen the interval"
            ),
            Self::NotConverged { steps, best } => {
                write!(f, "no root to tolerance after {steps} steps; best estimate {best}")
            }
        }
    }
}

impl core::error::Error for RootError {}

/// Bisection alone halves any f64 interval below resolution in fewer steps than this.
const MAX_STEPS: u32 = 200;

/// Brent's method: inverse quadratic interpolation guarded by bisection. Returns a point within
/// `tolerance` (plus rounding) of a change of sign between `low` and `high`.
///
/// # Errors
/// No change of sign between the ends, or a tolerance that is not reached in 200 steps.
///
/// # References
/// Brent 1973, Algorithms for Minimization without Derivatives, chapter 4.
pub fn brent(
    low: f64,
    high: f64,
    tolerance: f64,
    mut f: impl FnMut(f64) -> f64,
) -> Result<f64, RootError> {
    let (mut a, mut b) = (low, high);
    let (mut fa, mut fb) = (f(a), f(b));
    // Written so that NaN fails.
    let bracketed = (fa <= 0.0 && fb >= 0.0) || (fa >= 0.0 && fb <= 0.0);
    if !bracketed {
        return Err(RootError::NotBracketed { at_low: fa, at_high: fb });
    }
    let (mut c, mut fc) = (a, fa);
    let mut step = b - a;
    let mut step_before = step;
    for _ in 0..MAX_STEPS {
        if (fb > 0.0) == (fc > 0.0) {
            (c, fc) = (a, fa);
            step = b - a;
            step_before = step;
        }
        if fc.abs() < fb.abs() {
            (a, fa) = (b, fb);
            (b, fb) = (c, fc);
            (c, fc) = (a, fa);
        }
        let reach = 2.0 * f64::EPSILON * b.abs() + 0.5 * tolerance;
        let middle = 0.5 * (c - b);
        if middle.abs() <= reach || fb == 0.0 {
            return Ok(b);
        }
        let trial = interpolate((a, fa), (b, fb), (c, fc));
        if step_before.abs() >= reach
            && fa.abs() > fb.abs()
            && acceptable(trial, middle, step_before, reach)
        {
            step_before = step;
            step = trial;
        } else {
            step = middle;
            step_before = middle;
        }
        (a, fa) = (b, fb);
        b += if step.abs() > reach { step } else { libm::copysign(reach, middle) };
        fb = f(b);
    }
    Err(RootError::NotConverged { steps: MAX_STEPS, best: b })
}

/// Step from `b` to the root of the parabola (or line, when two points coincide).
fn interpolate((a, fa): (f64, f64), (b, fb): (f64, f64), (c, fc): (f64, f64)) -> f64 {
    let s = fb / fa;
    if a == c {
        -(c - b) * s / (1.0 - s)
    } else {
        let (q, r) = (fa / fc, fb / fc);
        let p = s * ((c - b) * q * (q - r) - (b - a) * (r - 1.0));
        -p / ((q - 1.0) * (r - 1.0) * (s - 1.0))
    }
}

/// The interpolated step stays well inside the bracket and shrinks fast enough.
fn acceptable(trial: f64, middle: f64, step_before: f64, reach: f64) -> bool {
    let forward = trial * libm::copysign(1.0, middle);
    forward >= 0.0
        && forward < 1.5 * middle.abs() - 0.5 * reach
        && forward < 0.5 * step_before.abs()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finds_smooth_and_awkward_roots() {
        let root = brent(0.0, 1.0, 1e-15, |x| libm::cos(x) - x).unwrap();
        assert!((root - 0.739_085_133_215_160_6).abs() < 1e-14);
        let mut calls = 0;
        let root = brent(-1.0, 4.0, 1e-14, |x| {
            calls += 1;
            libm::pow(x - 1.0, 9.0)
        })
        .unwrap();
        assert!((root - 1.0).abs() < 1e-12, "flat root: {root}");
        assert!(calls < 160, "{calls} calls");
        let step = brent(0.0, 1.0, 1e-12, |x| if x < 0.3 { -1.0 } else { 1.0 }).unwrap();
        assert!((step - 0.3).abs() < 1e-12);
    }

    #[test]
    fn smooth_roots_take_few_calls() {
        let mut calls = 0;
        brent(0.0, 10.0, 1e-12, |x| {
            calls += 1;
            libm::exp(-x) - 0.1
        })
        .unwrap();
        assert!(calls < 20, "bisection alone would take more than 40, this took {calls}");
    }

    #[test]
    fn no_change_of_sign_is_an_error() {
        assert!(matches!(brent(1.0, 2.0, 1e-9, |x| x), Err(RootError::NotBracketed { .. })));
        assert!(matches!(
            brent(-1.0, 2.0, 1e-9, |_| f64::NAN),
            Err(RootError::NotBracketed { .. })
        ));
    }
}
