//! Smallest value of a function of one variable on a closed interval.

/// Golden section: 2 - the golden ratio.
const GOLDEN: f64 = 0.381_966_011_250_105_15;

/// Most evaluations of one search; golden section alone shrinks the interval a millionfold in 29.
const MAX_STEPS: u32 = 80;

/// A place and the value there.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Minimum {
    /// Where.
    pub x: f64,
    /// The value there.
    pub value: f64,
}

/// Brent's minimisation: parabolic steps guarded by golden section, to a relative `tolerance` of
/// the interval; for a function with one minimum in the interval. Both ends are tried too, so that
/// a minimum on the border is met exactly.
///
/// # References
/// Brent 1973, Algorithms for Minimization without Derivatives, chapter 5.
pub fn minimum(low: f64, high: f64, tolerance: f64, mut f: impl FnMut(f64) -> f64) -> Minimum {
    let reach = tolerance * (high - low).abs();
    let (mut a, mut b) = (low, high);
    let mut x = a + GOLDEN * (b - a);
    let (mut w, mut v) = (x, x);
    let mut fx = f(x);
    let (mut fw, mut fv) = (fx, fx);
    let (mut step, mut step_before) = (0.0_f64, 0.0_f64);
    for _ in 0..MAX_STEPS {
        let middle = 0.5 * (a + b);
        let least = reach + 1e-15 * x.abs();
        if (x - middle).abs() <= 2.0 * least - 0.5 * (b - a) {
            break;
        }
        let parabola = parabolic_step((x, fx), (w, fw), (v, fv));
        let usable = step_before.abs() > least
            && parabola.abs() < 0.5 * step_before.abs()
            && x + parabola > a
            && x + parabola < b;
        step_before = step;
        if usable {
            step = parabola;
            if x + step - a < 2.0 * least || b - x - step < 2.0 * least {
                step = libm::copysign(least, middle - x);
            }
        } else {
            step_before = if x < middle { b - x } else { a - x };
            step = GOLDEN * step_before;
        }
        let u = x + if step.abs() >= least { step } else { libm::copysign(least, step) };
        let fu = f(u);
        if fu <= fx {
            if u < x {
                b = x;
            } else {
                a = x;
            }
            (v, fv, w, fw, x, fx) = (w, fw, x, fx, u, fu);
        } else {
            if u < x {
                a = u;
            } else {
                b = u;
            }
            if fu <= fw || w == x {
                (v, fv, w, fw) = (w, fw, u, fu);
            } else if fu <= fv || v == x || v == w {
                (v, fv) = (u, fu);
            }
        }
    }
    let mut best = Minimum { x, value: fx };
    for end in [low, high] {
        let value = f(end);
        if value <= best.value {
            best = Minimum { x: end, value };
        }
    }
    best
}

/// Step from `x` to the vertex of the parabola through three points; infinite where they lie on a
/// line, which no caller takes.
fn parabolic_step((x, fx): (f64, f64), (w, fw): (f64, f64), (v, fv): (f64, f64)) -> f64 {
    let r = (x - w) * (fx - fv);
    let q = (x - v) * (fx - fw);
    let p = (x - v) * q - (x - w) * r;
    let denominator = 2.0 * (q - r);
    if denominator == 0.0 { f64::INFINITY } else { -p / denominator }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finds_smooth_kinked_and_border_minima() {
        let mut calls = 0;
        let found = minimum(0.0, 10.0, 1e-9, |x| {
            calls += 1;
            x - libm::log(x)
        });
        assert!((found.x - 1.0).abs() < 1e-7 && (found.value - 1.0).abs() < 1e-14, "{found:?}");
        assert!(calls < 30, "golden section alone would take 43, this took {calls}");
        let kink = minimum(0.0, 1.0, 1e-9, |x| (x - 0.3).abs());
        assert!((kink.x - 0.3).abs() < 1e-8, "{kink:?}");
        // Falls like a root towards the border, as a slip circle that just enters a layer does.
        let border = minimum(2.0, 5.0, 1e-9, |x| 1.0 - libm::sqrt(5.0 - x) + (5.0 - x) * 8.0);
        assert!((border.x - (5.0 - 1.0 / 256.0)).abs() < 1e-6, "{border:?}");
        let end = minimum(2.0, 5.0, 1e-9, |x| -x);
        assert_eq!(end, Minimum { x: 5.0, value: -5.0 });
    }
}
