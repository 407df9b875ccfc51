//! Adaptive quadrature with an error bound and bounded work.

use super::SettlementError;
use heapless::Vec;

/// Stretches one integral may be cut into. A logarithmic singularity at one end takes one cut a
/// bit, a jump inside takes two: either reaches 1e-12 with room to spare.
const MAX_STRETCHES: usize = 96;

/// Positive Kronrod nodes with their weight and, at every second one, the weight of the embedded
/// seven-point Gauss rule (Kronrod 1965; recomputed to 20 digits from the Stieltjes polynomial).
const NODES: [(f64, f64, f64); 7] = [
    (0.991_455_371_120_812_639_21, 0.022_935_322_010_529_224_964, 0.0),
    (0.949_107_912_342_758_524_53, 0.063_092_092_629_978_553_291, 0.129_484_966_168_869_693_27),
    (0.864_864_423_359_769_072_79, 0.104_790_010_322_250_183_84, 0.0),
    (0.741_531_185_599_394_439_86, 0.140_653_259_715_525_918_75, 0.279_705_391_489_276_667_90),
    (0.586_087_235_467_691_130_29, 0.169_004_726_639_267_902_83, 0.0),
    (0.405_845_151_377_397_166_91, 0.190_350_578_064_785_409_91, 0.381_830_050_505_118_944_95),
    (0.207_784_955_007_898_467_60, 0.204_432_940_075_298_892_41, 0.0),
];
/// Weights of both rules at the centre.
const CENTRE: (f64, f64) = (0.209_482_141_084_727_828_01, 0.417_959_183_673_469_387_76);

/// Value of an integral with its error bound.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Integral {
    pub value: f64,
    pub error: f64,
}

#[derive(Debug, Clone, Copy)]
struct Stretch {
    from: f64,
    to: f64,
    value: f64,
    error: f64,
}

/// Integral of `f` from `from` to `to` with an error bound not above `target` (or a few roundings
/// of the value). The ends themselves are never asked for.
pub(super) fn integrate(
    f: &mut impl FnMut(f64) -> Result<f64, SettlementError>,
    from: f64,
    to: f64,
    target: f64,
) -> Result<Integral, SettlementError> {
    let mut stretches: Vec<Stretch, MAX_STRETCHES> = Vec::new();
    let mut add = rule(f, from, to)?;
    loop {
        let full = stretches.push(add).is_err();
        // Smallest first would be the better sum; with this few terms it makes no difference.
        let value: f64 = stretches.iter().map(|stretch| stretch.value).sum();
        let error: f64 = stretches.iter().map(|stretch| stretch.error).sum();
        if !full && error <= target.max(1e-14 * value.abs()) {
            return Ok(Integral { value, error });
        }
        let worst = stretches.iter_mut().max_by(|one, other| one.error.total_cmp(&other.error));
        let Some(worst) = worst.filter(|_| !full) else {
            return Err(SettlementError::NotConverged {
                top_m: from,
                base_m: to,
                error_m: error,
                target_m: target,
            });
        };
        let middle = 0.5 * (worst.from + worst.to);
        add = rule(f, middle, worst.to)?;
        *worst = rule(f, worst.from, middle)?;
    }
}

/// Fifteen-point Kronrod rule; the difference to the seven-point Gauss rule bounds its error
/// (generously: it is the error of the Gauss rule).
fn rule(
    f: &mut impl FnMut(f64) -> Result<f64, SettlementError>,
    from: f64,
    to: f64,
) -> Result<Stretch, SettlementError> {
    let half = 0.5 * (to - from);
    let centre = 0.5 * (from + to);
    let middle = f(centre)?;
    let mut kronrod = CENTRE.0 * middle;
    let mut gauss = CENTRE.1 * middle;
    for (node, kronrod_weight, gauss_weight) in NODES {
        let pair = f(centre - half * node)? + f(centre + half * node)?;
        kronrod += kronrod_weight * pair;
        gauss += gauss_weight * pair;
    }
    Ok(Stretch { from, to, value: half * kronrod, error: (half * (kronrod - gauss)).abs() })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(f: impl Fn(f64) -> f64, from: f64, to: f64, target: f64) -> Integral {
        integrate(&mut |x| Ok(f(x)), from, to, target).unwrap()
    }

    #[test]
    fn polynomials_of_degree_22_are_exact() {
        // The fifteen-point rule is exact up to degree 3*7+1 = 22.
        let integral = of(|x| libm::pow(x, 22.0), 0.0, 1.0, 1.0);
        assert!((integral.value - 1.0 / 23.0).abs() < 1e-16, "{integral:?}");
    }

    #[test]
    fn singular_and_broken_integrands_keep_their_error_bound() {
        let log = of(libm::log, 0.0, 1.0, 1e-11);
        assert!((log.value + 1.0).abs() <= log.error, "{log:?}");
        assert!(log.error <= 1e-11, "{log:?}");
        let step = of(|x| if x < 0.3 { 1.0 } else { 2.0 }, 0.0, 1.0, 1e-9);
        assert!((step.value - 1.7).abs() <= step.error, "{step:?}");
    }

    #[test]
    fn what_cannot_converge_says_so() {
        // Not integrable.
        let refused = integrate(&mut |x| Ok(1.0 / x), 0.0, 1.0, 1e-9).unwrap_err();
        assert!(matches!(refused, SettlementError::NotConverged { .. }), "{refused:?}");
    }
}
