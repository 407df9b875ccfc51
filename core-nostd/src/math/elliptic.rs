//! Complete elliptic integrals by the arithmetic-geometric mean.
//!
//! The argument is the complementary modulus `kc = sqrt(1 - k^2)`, never `k`: forming `1 - k^2`
//! is where accuracy is lost next to a load's edge. [`Complete`] also carries the sum that lets
//! a caller combine K and E without subtracting nearly equal numbers.
//!
//! Sources: Bulirsch 1965, Numer. Math. 7, 78-90 (`el2`) and 1969, Numer. Math. 13, 305-315
//! (`cel`); DLMF 19.8.

use super::lanes::Lanes;
use crate::quantity::{Bounded, OutOfRange};
use core::f64::consts::FRAC_PI_2;

static COMPLEMENTARY_MODULUS: Bounded = Bounded {
    name: "complementary modulus of an elliptic integral",
    unit: "",
    min: 1e-100,
    max: 1.0,
    remedy: "K is infinite at 0; use the limit of the whole formula there.",
};

static CHARACTERISTIC: Bounded = Bounded {
    name: "characteristic p of cel",
    unit: "",
    min: 1e-100,
    max: 1e100,
    remedy: "Only positive p is supported (no principal values).",
};

/// Relative difference of the two means at which the next one is exact in f64: the error after
/// the last step is of the order of its square.
const CLOSE: f64 = 1e-8;

/// Largest number of steps; `kc = 1e-100` needs 11.
const MAX_STEPS: u32 = 16;

/// Complete integrals of the first and second kind.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Complete {
    /// First kind, K.
    pub k: f64,
    /// Second kind, E.
    pub e: f64,
    /// The positive sum `Sg = 1 - k^2/2 - E/K`.
    pub sum: f64,
}

/// K and E for a complementary modulus `kc`; relative error below 1e-15.
///
/// # Errors
/// `kc` outside 1e-100 to 1.
///
/// # Examples
/// ```
/// let circle = brimstead_core::math::elliptic::complete(1.0)?;
/// assert!((circle.k - core::f64::consts::FRAC_PI_2).abs() < 1e-15);
/// # Ok::<(), brimstead_core::quantity::OutOfRange>(())
/// ```
pub fn complete(kc: f64) -> Result<Complete, OutOfRange> {
    let kc = COMPLEMENTARY_MODULUS.check(kc)?;
    let k2 = (1.0 - kc) * (1.0 + kc);
    let one = Lanes([1.0]);
    let means = Means::new(Lanes([kc]), Lanes([k2]), Third { a: one, b: one, p: one });
    let (k, sum) = (FRAC_PI_2 * means.first.value(), means.sum.value());
    Ok(Complete { k, e: k * (1.0 - 0.5 * k2 - sum), sum })
}

/// Bulirsch's general complete integral, p > 0:
/// `int_0^{pi/2} (a cos^2 + b sin^2) / ((cos^2 + p sin^2) sqrt(cos^2 + kc^2 sin^2))`.
///
/// # Errors
/// `kc` outside 1e-100 to 1, or `p` not between 1e-100 and 1e100.
pub fn cel(kc: f64, p: f64, a: f64, b: f64) -> Result<f64, OutOfRange> {
    let kc = COMPLEMENTARY_MODULUS.check(kc)?;
    let p = libm::sqrt(CHARACTERISTIC.check(p)?);
    let third = Third { a: Lanes([a]), b: Lanes([b / p]), p: Lanes([p]) };
    let k2 = Lanes([(1.0 - kc) * (1.0 + kc)]);
    Ok(FRAC_PI_2 * Means::new(Lanes([kc]), k2, third).third.value())
}

/// Starting values of the third-kind recursion: `a`, `b / sqrt(p)` and `sqrt(p)` of `cel`.
#[derive(Clone, Copy)]
pub(crate) struct Third<const N: usize> {
    pub(crate) a: Lanes<N>,
    pub(crate) b: Lanes<N>,
    pub(crate) p: Lanes<N>,
}

/// All three kinds from one sequence of means.
#[derive(Clone, Copy)]
pub(crate) struct Means<const N: usize> {
    /// `2 K / pi`.
    pub(crate) first: Lanes<N>,
    /// `Sg = 1 - k^2/2 - E/K = sum of 2^(j-1) c_j^2`, all terms positive.
    pub(crate) sum: Lanes<N>,
    /// `2 cel / pi`.
    pub(crate) third: Lanes<N>,
}

impl<const N: usize> Means<N> {
    /// `k2 = 1 - kc^2` is given apart, because the caller knows it without subtraction.
    #[inline(always)]
    pub(crate) fn new(kc: Lanes<N>, k2: Lanes<N>, third: Third<N>) -> Self {
        let Third { mut a, mut b, mut p } = third;
        let (mut m, mut kc, mut e) = (Lanes::splat(1.0), kc, kc);
        let mut sum = Lanes::splat(0.0);
        // 2^j c_j; the first without cancellation, since every later one is small beside it.
        let mut difference = k2 / (1.0 + kc);
        let (mut weight, mut scale) = (0.25, 1.0);
        for _ in 0..MAX_STEPS {
            let p_inverse = p.recip();
            let (a_before, m_before) = (a, m);
            a = a + b * p_inverse;
            let g = e * p_inverse;
            b = (a_before * g + b) * 2.0;
            p = p + g;
            sum = sum + difference.squared() * weight;
            m = kc + m;
            weight *= 0.5;
            scale *= 2.0;
            let open =
                m_before.zip(kc, |g, kc| if (g - kc).abs() <= g * CLOSE { 0.0 } else { 1.0 });
            if open.sum() == 0.0 {
                break;
            }
            kc = e.sqrt() * 2.0;
            e = kc * m;
            difference = m - kc;
        }
        Self { first: scale / m, sum, third: (b + a * m) / (m * (m + p)) }
    }
}

/// `2 E / pi`; here so that the identity is stated once.
#[inline(always)]
pub(crate) fn second<const N: usize>(means: &Means<N>, k2: Lanes<N>) -> Lanes<N> {
    means.first * (1.0 - 0.5 * k2 - means.sum)
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    // Abramowitz & Stegun 1964, table 17.1 (m = k^2), to all printed digits.
    #[test]
    fn first_and_second_kind_agree_with_the_handbook() {
        for (m, k, e) in [
            (0.1_f64, 1.612_441_348_720_219, 1.530_757_636_897_763),
            (0.5, 1.854_074_677_301_372, 1.350_643_881_047_675),
            (0.9, 2.578_092_113_348_173, 1.104_774_732_704_073),
        ] {
            let integrals = complete(libm::sqrt(1.0 - m)).unwrap();
            assert_relative_eq!(integrals.k, k, max_relative = 2e-15);
            assert_relative_eq!(integrals.e, e, max_relative = 2e-15);
        }
    }

    #[test]
    fn first_kind_grows_like_the_logarithm_near_zero() {
        for kc in [1e-12_f64, 1e-50, 1e-100] {
            let k = complete(kc).unwrap().k;
            assert_relative_eq!(k, libm::log(4.0 / kc), max_relative = 1e-14);
        }
    }

    #[test]
    fn cel_holds_the_other_kinds() {
        let kc = 0.3;
        let integrals = complete(kc).unwrap();
        assert_relative_eq!(cel(kc, 1.0, 1.0, 1.0).unwrap(), integrals.k, max_relative = 1e-15);
        assert_relative_eq!(cel(kc, 1.0, 1.0, kc * kc).unwrap(), integrals.e, max_relative = 1e-15);
        // At kc = 1 the integral is elementary: (pi/2) (a sqrt p + b) / (sqrt p (1 + sqrt p)).
        assert_relative_eq!(
            cel(1.0, 4.0, 3.0, 5.0).unwrap(),
            FRAC_PI_2 * 11.0 / 6.0,
            max_relative = 1e-15
        );
    }

    #[test]
    fn legendre_relation_joins_both_kinds() {
        for kc in [0.1, 0.4, 0.7, 0.95] {
            let (one, other) =
                (complete(kc).unwrap(), complete(libm::sqrt((1.0 - kc) * (1.0 + kc))).unwrap());
            let left = one.e * other.k + other.e * one.k - one.k * other.k;
            assert_relative_eq!(left, FRAC_PI_2, max_relative = 4e-15);
        }
    }

    #[test]
    fn arguments_without_an_integral_are_refused() {
        for kc in [0.0, -0.5, 1.1, f64::NAN] {
            assert!(complete(kc).is_err(), "kc = {kc}");
        }
        assert!(cel(0.5, 0.0, 1.0, 1.0).is_err());
        assert!(cel(0.5, -1.0, 1.0, 1.0).is_err());
    }
}
