//! Closed forms of the Lipschitz-Hankel integrals behind disc and ring loads on a half-space.
//!
//! With `rho = r/R`, `zeta = z/R` and every integral from 0 to infinity in `m` with the factor
//! `exp(-m zeta)`:
//!
//! | name | integrand |
//! |---|---|
//! | `u0` | `J0(m) J0(m rho)` |
//! | `sm1`, `s0`, `s1` | `J1(m) J0(m rho)` times `1/m`, `1`, `m` |
//! | `q0`, `t1` | `J1(m) J1(m rho)` times `1/rho`, `m` |
//! | `qm1` | `J1(m) J1(m rho) / (m rho)` |
//! | `v0_rho` | `J0(m) J1(m rho) / rho` |
//!
//! Sources: Eason, Noble & Sneddon 1955, Phil. Trans. R. Soc. A 247, 529-551; Love 1929, Phil.
//! Trans. R. Soc. A 228, 377-420.
//!
//! Two routes meet where the modulus of the elliptic integrals is small: the arithmetic-geometric
//! mean with combinations free of cancellation, and a 20-point trapezoid around the circle (error
//! below 3e-19 where it is used), which holds on the axis and far away without special cases.
//! Absolute errors of the stresses stay below 1e-14 of the pressure.

use crate::math::elliptic::{Means, Third, second};
use crate::math::lanes::Lanes;
use core::f64::consts::{FRAC_1_PI, FRAC_2_PI};

/// Depths below this (relative to the radius) are the surface: at the smallest distance from the
/// edge that f64 can tell from zero, the results differ by less than one rounding.
const SURFACE: f64 = 1e-60;

/// Where points lie relative to the load, in radii.
#[derive(Clone, Copy)]
pub(crate) struct Geometry<const N: usize> {
    pub(crate) rho: Lanes<N>,
    pub(crate) zeta: Lanes<N>,
    /// `1 - rho`, from `radius - r` so that nothing is lost next to the edge.
    pub(crate) edge: Lanes<N>,
}

impl<const N: usize> Geometry<N> {
    #[inline(always)]
    pub(crate) fn new(r_m: Lanes<N>, z_m: Lanes<N>, radius_m: f64) -> Self {
        Self {
            rho: r_m / radius_m,
            zeta: (z_m / radius_m).map(|zeta| if zeta < SURFACE { 0.0 } else { zeta }),
            edge: (radius_m - r_m) / radius_m,
        }
    }

    /// 1 inside the circle, 1/2 on it, 0 outside.
    #[inline(always)]
    fn inside(&self) -> Lanes<N> {
        self.edge.map(|edge| {
            if edge > 0.0 {
                1.0
            } else if edge == 0.0 {
                0.5
            } else {
                0.0
            }
        })
    }

    #[inline(always)]
    fn on_surface(&self) -> Lanes<N> {
        self.zeta.map(|zeta| if zeta == 0.0 { 1.0 } else { 0.0 })
    }

    /// On the edge of the load at its level.
    #[inline(always)]
    pub(crate) fn on_rim(&self) -> Lanes<N> {
        self.zeta.zip(self.edge, |zeta, edge| if zeta == 0.0 && edge == 0.0 { 1.0 } else { 0.0 })
    }

    /// Where the trapezoid is exact: modulus squared at most 0.4.
    #[inline(always)]
    fn near_axis_or_far(&self) -> Lanes<N> {
        let distance = 1.0 + self.rho.squared() + self.zeta.squared();
        distance.zip(self.rho, |distance, rho| if distance >= 8.0 * rho { 1.0 } else { 0.0 })
    }
}

/// Computes by one route or the other; by both only where lanes differ.
#[inline(always)]
fn by_route<const N: usize, T>(
    at: &Geometry<N>,
    around: impl Fn() -> T,
    elliptic: impl Fn() -> T,
    merge: impl Fn(T, T, Lanes<N>) -> T,
) -> T {
    let mask = at.near_axis_or_far();
    let count = mask.sum();
    if count == 0.0 {
        elliptic()
    } else if count == N as f64 {
        around()
    } else {
        merge(around(), elliptic(), mask)
    }
}

/// The 20-point rule around the circle, folded by symmetry: `cos(pi j / 10)` and weight.
const CIRCLE: [(f64, f64); 11] = [
    (1.0, 0.05),
    (0.951_056_516_295_153_5, 0.1),
    (0.809_016_994_374_947_4, 0.1),
    (0.587_785_252_292_473_1, 0.1),
    (0.309_016_994_374_947_4, 0.1),
    (0.0, 0.1),
    (-0.309_016_994_374_947_4, 0.1),
    (-0.587_785_252_292_473_1, 0.1),
    (-0.809_016_994_374_947_4, 0.1),
    (-0.951_056_516_295_153_5, 0.1),
    (-1.0, 0.05),
];

/// Integrals for the disc.
#[derive(Clone, Copy)]
pub(crate) struct DiscIntegrals<const N: usize> {
    pub(crate) s0: Lanes<N>,
    pub(crate) sm1: Lanes<N>,
    pub(crate) zeta_s1: Lanes<N>,
    pub(crate) zeta_q0: Lanes<N>,
    pub(crate) zeta_t1: Lanes<N>,
    pub(crate) qm1: Lanes<N>,
}

impl<const N: usize> DiscIntegrals<N> {
    #[inline(always)]
    pub(crate) fn at(at: &Geometry<N>) -> Self {
        let value = by_route(at, || Self::around(at), || Self::elliptic(at), Self::merge);
        value.with_limits(at)
    }

    #[inline(always)]
    fn merge(self, other: Self, mask: Lanes<N>) -> Self {
        Self {
            s0: self.s0.or(other.s0, mask),
            sm1: self.sm1.or(other.sm1, mask),
            zeta_s1: self.zeta_s1.or(other.zeta_s1, mask),
            zeta_q0: self.zeta_q0.or(other.zeta_q0, mask),
            zeta_t1: self.zeta_t1.or(other.zeta_t1, mask),
            qm1: self.qm1.or(other.qm1, mask),
        }
    }

    /// Surface values are exact, and the rim takes the limit straight down its own vertical.
    #[inline(always)]
    fn with_limits(self, at: &Geometry<N>) -> Self {
        let (rim, inside) = (at.on_rim(), at.inside());
        Self {
            s0: inside.or(self.s0, at.on_surface()),
            sm1: self.sm1.set_where(rim, FRAC_2_PI),
            zeta_s1: self.zeta_s1.set_where(rim, 0.0),
            zeta_q0: self.zeta_q0.set_where(rim, 0.0),
            zeta_t1: self.zeta_t1.set_where(rim, FRAC_1_PI),
            qm1: self.qm1.set_where(rim, 0.5),
        }
    }

    #[inline(always)]
    fn around(at: &Geometry<N>) -> Self {
        let Geometry { rho, zeta, edge } = *at;
        let (rho2, zeta2, edge2) = (rho.squared(), zeta.squared(), edge.squared());
        let zero = Lanes::splat(0.0);
        let (mut u0, mut s0, mut s1, mut q0, mut q1, mut qm1) =
            (zero, zero, zero, zero, zero, zero);
        for (cosine, weight) in CIRCLE {
            let sine2 = (1.0 - cosine) * (1.0 + cosine);
            let s = (edge2 + rho * (2.0 * (1.0 - cosine)) + zeta2).sqrt();
            let inverse = s.recip();
            let cube = inverse.squared() * inverse;
            let f = inverse / (s + zeta);
            u0 = u0 + inverse * weight;
            s0 = s0 + (f - rho2 * (2.0 * s + zeta) * f.squared() * inverse * sine2) * weight;
            s1 = s1 + cube * weight;
            q0 = q0 + cube * (sine2 * weight);
            q1 = q1 + cube * inverse.squared() * (sine2 * weight);
            qm1 = qm1 + f * (sine2 * weight);
        }
        Self {
            s0,
            sm1: u0 - rho2 * q0 - zeta * s0,
            zeta_s1: zeta * (s1 - 3.0 * rho2 * q1),
            zeta_q0: zeta * q0,
            zeta_t1: 3.0 * zeta2 * rho * q1,
            qm1,
        }
    }

    #[inline(always)]
    fn elliptic(at: &Geometry<N>) -> Self {
        let by = EllipticSet::new(at);
        let EllipticSet { sum_distance, a_inverse, k2, kc2, means, inside, .. } = by;
        let (a_cube, sum) = (a_inverse.squared() * a_inverse, means.sum);
        let (k2_inverse, kc2_inverse) = (k2.recip(), kc2.recip());
        let sum_k2 = sum * k2_inverse;
        let x = by.x(at);
        let s0 = inside - x;
        let s1 = means.first
            * a_cube
            * (sum_distance * (sum_k2 + 0.5) + at.edge * (0.5 - sum_k2) * kc2_inverse);
        let u0 = means.first * a_inverse;
        // T0 / rho, with A / rho^2 = 4 / (A rho k2).
        let q0 = 2.0 * u0 * sum_k2 / at.rho;
        let t1 = at.zeta
            * means.first
            * a_cube
            * k2_inverse
            * kc2_inverse
            * ((1.0 + kc2) * (1.0 - 0.5 * k2 - sum) - 2.0 * kc2);
        let zeta_q0 = at.zeta * q0;
        let v0_rho = by.v0_rho(at, x, u0);
        Self {
            s0,
            sm1: u0 - at.rho.squared() * q0 - at.zeta * s0,
            zeta_s1: at.zeta * s1,
            zeta_q0,
            zeta_t1: at.zeta * t1,
            qm1: 0.5 * (v0_rho + s0 - zeta_q0),
        }
    }
}

/// What disc and ring share on the elliptic route.
struct EllipticSet<const N: usize> {
    /// `1 + rho`.
    sum_distance: Lanes<N>,
    a_inverse: Lanes<N>,
    k2: Lanes<N>,
    kc2: Lanes<N>,
    means: Means<N>,
    inside: Lanes<N>,
}

impl<const N: usize> EllipticSet<N> {
    #[inline(always)]
    fn new(at: &Geometry<N>) -> Self {
        let zeta2 = at.zeta.squared();
        let sum_distance = 1.0 + at.rho;
        let a_inverse = (sum_distance.squared() + zeta2).sqrt().recip();
        let k2 = 4.0 * at.rho * a_inverse.squared();
        let kc2 = (at.edge.squared() + zeta2) * a_inverse.squared();
        // cel(kc, gamma^2, 1, gamma) with gamma = (1 - rho)/(1 + rho); it becomes K at rho = 1.
        let gamma = at.edge / sum_distance;
        let third = Third {
            a: Lanes::splat(1.0),
            b: at.edge.map(|edge| if edge < 0.0 { -1.0 } else { 1.0 }),
            p: gamma.map(|gamma| if gamma == 0.0 { 1.0 } else { gamma.abs() }),
        };
        let means = Means::new(kc2.sqrt(), k2, third);
        Self { sum_distance, a_inverse, k2, kc2, means, inside: at.inside() }
    }

    /// `2 zeta cel / (pi A (1 + rho))`, the part of `s0` that the depth takes away.
    #[inline(always)]
    fn x(&self, at: &Geometry<N>) -> Lanes<N> {
        at.zeta * self.a_inverse * self.means.third / self.sum_distance
    }

    #[inline(always)]
    fn v0_rho(&self, at: &Geometry<N>, x: Lanes<N>, u0: Lanes<N>) -> Lanes<N> {
        ((1.0 - self.inside) + x - at.zeta * u0) / at.rho.squared()
    }
}

/// Integrals for the ring, `n3` and `n5` being the mean inverse cube and fifth power of the
/// distance to the ring.
#[derive(Clone, Copy)]
pub(crate) struct RingIntegrals<const N: usize> {
    pub(crate) u0: Lanes<N>,
    pub(crate) n3: Lanes<N>,
    pub(crate) n5: Lanes<N>,
    pub(crate) v0_rho: Lanes<N>,
    /// `V1 / rho` with `V1` as `v0` but for a factor `m`.
    pub(crate) v1_rho: Lanes<N>,
    /// `V2 / rho`, a factor `m^2`.
    pub(crate) v2_rho: Lanes<N>,
}

impl<const N: usize> RingIntegrals<N> {
    /// Not finite on the ring itself.
    #[inline(always)]
    pub(crate) fn at(at: &Geometry<N>) -> Self {
        by_route(at, || Self::around(at), || Self::elliptic(at), Self::merge)
    }

    #[inline(always)]
    fn merge(self, other: Self, mask: Lanes<N>) -> Self {
        Self {
            u0: self.u0.or(other.u0, mask),
            n3: self.n3.or(other.n3, mask),
            n5: self.n5.or(other.n5, mask),
            v0_rho: self.v0_rho.or(other.v0_rho, mask),
            v1_rho: self.v1_rho.or(other.v1_rho, mask),
            v2_rho: self.v2_rho.or(other.v2_rho, mask),
        }
    }

    #[inline(always)]
    fn around(at: &Geometry<N>) -> Self {
        let Geometry { rho, zeta, edge } = *at;
        let (zeta2, edge2) = (zeta.squared(), edge.squared());
        let zero = Lanes::splat(0.0);
        let (mut u0, mut n3, mut n5, mut v1_rho, mut v2) = (zero, zero, zero, zero, zero);
        let (mut v0_deep, mut v0_shallow) = (zero, zero);
        for (cosine, weight) in CIRCLE {
            let sine2 = (1.0 - cosine) * (1.0 + cosine);
            let distance2 = edge2 + rho * (2.0 * (1.0 - cosine));
            let s = (distance2 + zeta2).sqrt();
            let inverse = s.recip();
            let inverse2 = inverse.squared();
            let cube = inverse2 * inverse;
            let fifth = cube * inverse2;
            let f = inverse / (s + zeta);
            u0 = u0 + inverse * weight;
            n3 = n3 + cube * weight;
            n5 = n5 + fifth * weight;
            v1_rho = v1_rho + (cube - 3.0 * sine2 * fifth) * weight;
            v2 = v2 + (fifth - 5.0 * sine2 * fifth * inverse2) * weight;
            v0_deep = v0_deep + (f - (2.0 * s + zeta) * f.squared() * inverse * sine2) * weight;
            let d_inverse = distance2.recip();
            v0_shallow = v0_shallow
                + ((3.0 * s.squared() - zeta2) * d_inverse.squared() * cube * sine2
                    - d_inverse * inverse)
                    * weight;
        }
        // Inside and shallow, the first form would leave the rounding of terms of order 1 in a
        // value that vanishes like the depth.
        let shallow = rho.zip(zeta, |rho, zeta| if rho < 1.0 && zeta < 0.5 { 1.0 } else { 0.0 });
        let v0_rho = (zeta * v0_shallow).or(v0_deep, shallow);
        Self { u0, n3, n5, v0_rho, v1_rho, v2_rho: 3.0 * zeta * v2 }
    }

    #[inline(always)]
    fn elliptic(at: &Geometry<N>) -> Self {
        let by = EllipticSet::new(at);
        let EllipticSet { sum_distance, a_inverse, k2, kc2, ref means, .. } = by;
        let u0 = means.first * a_inverse;
        let second = second(means, k2);
        let (a_inverse2, kc2_inverse) = (a_inverse.squared(), kc2.recip());
        let n3 = second * a_inverse * a_inverse2 * kc2_inverse;
        let n5 = (2.0 * (1.0 + kc2) * second - kc2 * means.first)
            * a_inverse
            * a_inverse2.squared()
            * kc2_inverse.squared()
            / 3.0;
        let c = -(at.edge * sum_distance) - at.zeta.squared();
        let half = 0.5 / at.rho.squared();
        Self {
            u0,
            n3,
            n5,
            v0_rho: by.v0_rho(at, by.x(at), u0),
            v1_rho: (c * n3 + u0) * half,
            v2_rho: 3.0 * at.zeta * (c * n5 + n3) * half,
        }
    }
}
