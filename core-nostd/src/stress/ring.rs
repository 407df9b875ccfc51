//! Line load on a circle: the shell of a tank, the roof it carries, its ring wall.

use super::integrals::{Geometry, RingIntegrals};
use super::surface::{self, Inputs, SurfaceLoad, Trail};
use super::{AxisymmetricStress, Displacement, LINE_LOAD, POISSON, RADIUS, StressError};
use crate::math::lanes::Lanes;
use crate::working::Working;

/// A vertical line load on a circle, on the surface of a homogeneous elastic half-space.
///
/// # Range of validity
/// Poisson's ratio 0 to 0.5 and every point at or below the loaded level except the loaded line
/// itself, where stress and settlement are infinite. Errors below 1e-13 of `line load / radius`
/// (stress) and `line load / young` (displacement) at 0.01 radius and more from the line; nearer
/// to it they keep that size relative to the stress, which grows without bound.
///
/// # Examples
/// ```
/// use brimstead_core::stress::{Ring, StressError};
/// let shell = Ring::new(10.0, 40.0, 0.3)?;
/// assert!(shell.stress_at(10.0, 1.0)?.sigma_z_kpa > 0.0);
/// assert!(matches!(shell.stress_at(10.0, 0.0), Err(StressError::NoFiniteValue { .. })));
/// # Ok::<(), StressError>(())
/// ```
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Ring {
    radius_m: f64,
    line_load_kn_per_m: f64,
    poisson: f64,
}

impl Ring {
    /// Checks the load and the ground.
    ///
    /// # Errors
    /// Radius, line load or Poisson's ratio out of range.
    pub fn new(radius_m: f64, line_load_kn_per_m: f64, poisson: f64) -> Result<Self, StressError> {
        Ok(Self {
            radius_m: RADIUS.check(radius_m)?,
            line_load_kn_per_m: LINE_LOAD.check(line_load_kn_per_m)?,
            poisson: POISSON.check(poisson)?,
        })
    }

    /// Radius, m.
    #[must_use]
    pub fn radius_m(&self) -> f64 {
        self.radius_m
    }

    /// Line load, kN/m.
    #[must_use]
    pub fn line_load_kn_per_m(&self) -> f64 {
        self.line_load_kn_per_m
    }

    /// Poisson's ratio of the ground.
    #[must_use]
    pub fn poisson(&self) -> f64 {
        self.poisson
    }
}

surface::evaluation!(Ring);

impl SurfaceLoad for Ring {
    const SOURCE: &'static str =
        "Boussinesq 1885 integrated around the circle; Eason, Noble & Sneddon 1955";
    const STRESS_ON_RIM: bool = false;
    const DISPLACEMENT_ON_RIM: bool = false;
    type Integrals<const N: usize> = RingIntegrals<N>;

    fn radius_m(&self) -> f64 {
        self.radius_m
    }

    #[inline(always)]
    fn integrals<const N: usize>(&self, at: &Geometry<N>) -> RingIntegrals<N> {
        RingIntegrals::at(at)
    }

    #[inline(always)]
    fn stresses<const N: usize>(&self, at: &Geometry<N>, by: &RingIntegrals<N>) -> [Lanes<N>; 4] {
        let sigma_z = 3.0 * at.zeta.squared() * at.zeta * by.n5;
        let twice_mean = 2.0 * at.zeta * by.n3;
        let lateral = (1.0 - 2.0 * self.poisson) * by.v0_rho - at.zeta * by.v1_rho;
        let scale_kpa = self.line_load_kn_per_m / self.radius_m;
        [
            sigma_z,
            twice_mean - sigma_z - lateral,
            self.poisson * twice_mean + lateral,
            at.zeta * at.rho * by.v2_rho,
        ]
        .map(|scaled| scale_kpa * scaled)
    }

    #[inline(always)]
    fn displacements<const N: usize>(
        &self,
        young_kpa: f64,
        at: &Geometry<N>,
        by: &RingIntegrals<N>,
    ) -> [Lanes<N>; 2] {
        let nu = self.poisson;
        let scale_m = self.line_load_kn_per_m / young_kpa * (1.0 + nu);
        [
            scale_m * (2.0 * (1.0 - nu) * by.u0 + at.zeta.squared() * by.n3),
            -scale_m * (at.rho * ((1.0 - 2.0 * nu) * by.v0_rho - at.zeta * by.v1_rho)),
        ]
    }

    fn write_stress(
        &self,
        at: &Geometry<1>,
        by: &RingIntegrals<1>,
        result: &AxisymmetricStress,
        trail: &mut Trail<'_, impl Working>,
    ) {
        write_integrals(at, by, trail);
        let inputs: Inputs<'_> = &[
            ("p", self.line_load_kn_per_m),
            ("R", self.radius_m),
            ("nu", self.poisson),
            ("rho", at.rho.value()),
            ("zeta", at.zeta.value()),
        ];
        trail.steps(
            "kPa",
            &[
                ("vertical stress increment", result.sigma_z_kpa, "sigma_z = (p/R) 3 zeta^3 N5"),
                (
                    "radial stress increment",
                    result.sigma_r_kpa,
                    "sigma_r = (p/R) (2 zeta N3 - 3 zeta^3 N5 - (1 - 2 nu) V0 + zeta V1)",
                ),
                (
                    "tangential stress increment",
                    result.sigma_theta_kpa,
                    "sigma_theta = (p/R) (2 nu zeta N3 + (1 - 2 nu) V0 - zeta V1)",
                ),
                ("shear stress increment", result.tau_rz_kpa, "tau_rz = (p/R) rho zeta V2"),
            ],
            inputs,
        );
    }

    fn write_displacement(
        &self,
        young_kpa: f64,
        at: &Geometry<1>,
        by: &RingIntegrals<1>,
        result: &Displacement,
        trail: &mut Trail<'_, impl Working>,
    ) {
        write_integrals(at, by, trail);
        let inputs: Inputs<'_> = &[
            ("p", self.line_load_kn_per_m),
            ("Es", young_kpa),
            ("nu", self.poisson),
            ("rho", at.rho.value()),
            ("zeta", at.zeta.value()),
        ];
        trail.steps(
            "m",
            &[
                (
                    "settlement",
                    result.settlement_m,
                    "w = (p/Es) (1 + nu) (2 (1 - nu) N1 + zeta^2 N3)",
                ),
                (
                    "radial displacement, outwards",
                    result.radial_m,
                    "u = -(p/Es) (1 + nu) rho ((1 - 2 nu) V0 - zeta V1)",
                ),
            ],
            inputs,
        );
    }
}

fn write_integrals(at: &Geometry<1>, by: &RingIntegrals<1>, trail: &mut Trail<'_, impl Working>) {
    trail.steps(
        "",
        &[
            ("mean inverse distance", by.u0.value(), "N1 = mean around the ring of R/s"),
            ("mean inverse cube", by.n3.value(), "N3 = mean around the ring of (R/s)^3"),
            ("mean inverse fifth power", by.n5.value(), "N5 = mean around the ring of (R/s)^5"),
            (
                "horizontal part",
                by.v0_rho.value(),
                "V0 = (1/rho) int J0(m) J1(m rho) exp(-m zeta) dm",
            ),
            (
                "its first moment",
                by.v1_rho.value(),
                "V1 = (1/rho) int m J0(m) J1(m rho) exp(-m zeta) dm",
            ),
            (
                "its second moment",
                by.v2_rho.value(),
                "V2 = (1/rho) int m^2 J0(m) J1(m rho) exp(-m zeta) dm",
            ),
        ],
        &[("rho", at.rho.value()), ("zeta", at.zeta.value())],
    );
}
