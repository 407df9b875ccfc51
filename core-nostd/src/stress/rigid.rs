//! A rigid plate: the ground below it settles evenly.

use super::integrals::Geometry;
use super::surface::{self, Inputs, SurfaceLoad, Trail};
use super::{AxisymmetricStress, Displacement, POISSON, PRESSURE, RADIUS, StressError, YOUNG};
use crate::math::lanes::Lanes;
use crate::working::Working;
use core::f64::consts::FRAC_PI_2;

/// A rigid, smooth, centrally loaded disc on the surface of a homogeneous elastic half-space.
///
/// The contact pressure is `mean / (2 sqrt(1 - (r/R)^2))`: half the mean at the centre, without
/// bound at the edge.
///
/// # Range of validity
/// Poisson's ratio 0 to 0.5 and every point at or below the plate; on the edge itself only
/// displacements exist. Errors are a few roundings of the largest component at the point.
///
/// # Examples
/// ```
/// use brimstead_core::stress::RigidDisc;
/// let plate = RigidDisc::new(0.15, 200.0, 0.3)?;
/// // Half the mean pressure at the centre of the contact.
/// assert!((plate.stress_at(0.0, 0.0)?.sigma_z_kpa - 100.0).abs() < 1e-12);
/// # Ok::<(), brimstead_core::stress::StressError>(())
/// ```
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RigidDisc {
    radius_m: f64,
    mean_pressure_kpa: f64,
    poisson: f64,
}

impl RigidDisc {
    /// Checks the load and the ground.
    ///
    /// # Errors
    /// Radius, pressure or Poisson's ratio out of range.
    pub fn new(radius_m: f64, mean_pressure_kpa: f64, poisson: f64) -> Result<Self, StressError> {
        Ok(Self {
            radius_m: RADIUS.check(radius_m)?,
            mean_pressure_kpa: PRESSURE.check(mean_pressure_kpa)?,
            poisson: POISSON.check(poisson)?,
        })
    }

    /// Settlement of the plate, m: `(pi/2) (1 - nu^2) q R / E`.
    ///
    /// # Errors
    /// Modulus out of range.
    pub fn settlement_m(&self, young_kpa: f64) -> Result<f64, StressError> {
        let young_kpa = YOUNG.check(young_kpa)?;
        let nu = self.poisson;
        Ok(FRAC_PI_2 * (1.0 - nu) * (1.0 + nu) * self.mean_pressure_kpa * self.radius_m / young_kpa)
    }
}

surface::evaluation!(RigidDisc);

/// The integrals of a rigid plate: `sin m` times `J0(m rho)` or `J1(m rho)`, a power of `m` and
/// `exp(-m zeta)`.
#[derive(Clone, Copy)]
pub(super) struct RigidIntegrals<const N: usize> {
    r0: Lanes<N>,
    zeta_r1: Lanes<N>,
    zeta_p1: Lanes<N>,
    pm1_rho: Lanes<N>,
    zeta_p0_rho: Lanes<N>,
    /// `zeta + Re D` and `1 - Im D`.
    arms: (Lanes<N>, Lanes<N>),
}

impl<const N: usize> RigidIntegrals<N> {
    /// With `Z = zeta - i` and `D = sqrt(rho^2 + Z^2)`, `Re D >= 0 >= Im D`.
    #[inline(always)]
    fn at(at: &Geometry<N>) -> Self {
        let (rho, zeta) = (at.rho, at.zeta);
        let a = zeta.squared() - at.edge * (1.0 + rho);
        let modulus = (a.squared() + 4.0 * zeta.squared()).sqrt();
        let large = ((modulus + a.map(f64::abs)) * 0.5).sqrt();
        // On the rim both parts vanish; 1 keeps the quotient finite there.
        let small = zeta / large.set_where(at.on_rim(), 1.0);
        let outside = a.map(|a| if a >= 0.0 { 1.0 } else { 0.0 });
        let (re, im) = (large.or(small, outside), -small.or(large, outside));
        let inverse = modulus.recip();
        // 1/D = conj(D)/|D|^2 and its cube.
        let (dr, di) = (re * inverse, -im * inverse);
        let (square_r, square_i) = (dr.squared() - di.squared(), 2.0 * dr * di);
        let cube_r = square_r * dr - square_i * di;
        let cube_i = square_r * di + square_i * dr;
        let arms = (zeta + re, 1.0 - im);
        let size = (arms.0.squared() + arms.1.squared()).recip();
        // 1/(D + Z) = (arms.0 + i arms.1) / |D + Z|^2.
        let (sum_r, sum_i) = (arms.0 * size, arms.1 * size);
        Self {
            r0: di,
            zeta_r1: zeta * (zeta * cube_i - cube_r),
            zeta_p1: zeta * rho * cube_i,
            pm1_rho: sum_i,
            zeta_p0_rho: zeta * (dr * sum_i + di * sum_r),
            arms,
        }
    }
}

impl SurfaceLoad for RigidDisc {
    const SOURCE: &'static str =
        "Boussinesq 1885; Sneddon 1946, Proc. Cambridge Phil. Soc. 42, 29-39";
    const STRESS_ON_RIM: bool = false;
    const DISPLACEMENT_ON_RIM: bool = true;
    type Integrals<const N: usize> = RigidIntegrals<N>;

    fn radius_m(&self) -> f64 {
        self.radius_m
    }

    #[inline(always)]
    fn integrals<const N: usize>(&self, at: &Geometry<N>) -> RigidIntegrals<N> {
        RigidIntegrals::at(at)
    }

    #[inline(always)]
    fn stresses<const N: usize>(&self, _: &Geometry<N>, by: &RigidIntegrals<N>) -> [Lanes<N>; 4] {
        let lateral = (1.0 - 2.0 * self.poisson) * by.pm1_rho - by.zeta_p0_rho;
        [
            by.r0 + by.zeta_r1,
            by.r0 - by.zeta_r1 - lateral,
            2.0 * self.poisson * by.r0 + lateral,
            by.zeta_p1,
        ]
        .map(|over_half| 0.5 * self.mean_pressure_kpa * over_half)
    }

    #[inline(always)]
    fn displacements<const N: usize>(
        &self,
        young_kpa: f64,
        at: &Geometry<N>,
        by: &RigidIntegrals<N>,
    ) -> [Lanes<N>; 2] {
        let nu = self.poisson;
        let scale_m = 0.5 * self.mean_pressure_kpa * self.radius_m / young_kpa * (1.0 + nu);
        let rm1 = by.arms.1.zip(by.arms.0, libm::atan2);
        let zeta_r0 = (at.zeta * by.r0).set_where(at.on_rim(), 0.0);
        let zeta_p0_rho = by.zeta_p0_rho.set_where(at.on_rim(), 0.0);
        [
            scale_m * (2.0 * (1.0 - nu) * rm1 + zeta_r0),
            -scale_m * (at.rho * ((1.0 - 2.0 * nu) * by.pm1_rho - zeta_p0_rho)),
        ]
    }

    fn write_stress(
        &self,
        at: &Geometry<1>,
        by: &RigidIntegrals<1>,
        result: &AxisymmetricStress,
        trail: &mut Trail<'_, impl Working>,
    ) {
        trail.steps(
            "",
            &[
                ("R0", by.r0.value(), "R0 = int sin(m) J0(m rho) exp(-m zeta) dm"),
                ("R1", by.zeta_r1.value(), "R1 = zeta int m sin(m) J0(m rho) exp(-m zeta) dm"),
                ("P", by.pm1_rho.value(), "P = (1/rho) int sin(m) J1(m rho) exp(-m zeta)/m dm"),
                (
                    "P0",
                    by.zeta_p0_rho.value(),
                    "P0 = (zeta/rho) int sin(m) J1(m rho) exp(-m zeta) dm",
                ),
                ("P1", by.zeta_p1.value(), "P1 = zeta int m sin(m) J1(m rho) exp(-m zeta) dm"),
            ],
            &[("rho", at.rho.value()), ("zeta", at.zeta.value())],
        );
        let inputs: Inputs<'_> = &[("q", self.mean_pressure_kpa), ("nu", self.poisson)];
        trail.steps(
            "kPa",
            &[
                ("vertical stress increment", result.sigma_z_kpa, "sigma_z = (q/2) (R0 + R1)"),
                (
                    "radial stress increment",
                    result.sigma_r_kpa,
                    "sigma_r = (q/2) (R0 - R1 - (1 - 2 nu) P + P0)",
                ),
                (
                    "tangential stress increment",
                    result.sigma_theta_kpa,
                    "sigma_theta = (q/2) (2 nu R0 + (1 - 2 nu) P - P0)",
                ),
                ("shear stress increment", result.tau_rz_kpa, "tau_rz = (q/2) P1"),
            ],
            inputs,
        );
    }

    fn write_displacement(
        &self,
        young_kpa: f64,
        at: &Geometry<1>,
        _: &RigidIntegrals<1>,
        result: &Displacement,
        trail: &mut Trail<'_, impl Working>,
    ) {
        let inputs: Inputs<'_> = &[
            ("q", self.mean_pressure_kpa),
            ("R", self.radius_m),
            ("nu", self.poisson),
            ("Es", young_kpa),
            ("rho", at.rho.value()),
            ("zeta", at.zeta.value()),
        ];
        trail.steps(
            "m",
            &[
                (
                    "settlement",
                    result.settlement_m,
                    "w = (q R/2) (1 + nu)/Es int (2 (1 - nu) + m zeta) sin(m) J0(m rho) exp(-m zeta)/m dm",
                ),
                (
                    "radial displacement, outwards",
                    result.radial_m,
                    "u = -(q R/2) (1 + nu)/Es int (1 - 2 nu - m zeta) sin(m) J1(m rho) exp(-m zeta)/m dm",
                ),
            ],
            inputs,
        );
    }
}
