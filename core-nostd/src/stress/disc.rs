//! Uniform pressure on a circle: the liquid, the floor and the pad of a tank.

use super::integrals::{DiscIntegrals, Geometry};
use super::surface::{self, Inputs, SurfaceLoad, Trail};
use super::{AxisymmetricStress, Displacement, POISSON, PRESSURE, RADIUS, StressError};
use crate::math::lanes::Lanes;
use crate::working::Working;

/// A flexible disc under uniform pressure on the surface of a homogeneous elastic half-space.
///
/// # Range of validity
/// Poisson's ratio 0 to 0.5 and every point at or below the loaded level, the axis, the surface,
/// the edge and far points included. Stresses within 1e-14 of the pressure, displacements within
/// 1e-13 of `pressure * radius / young`. On the surface at the edge `sigma_z` is half the
/// pressure and the other components take their limit straight down from the edge (the shear,
/// zero on the surface on either side, is pressure/pi there).
///
/// # Examples
/// ```
/// use brimstead_core::stress::Disc;
/// // Half the diameter of a 20 m tank below its centre: 0.646 of the pressure (Love).
/// let tank = Disc::new(10.0, 150.0, 0.3)?;
/// let stress = tank.stress_at(0.0, 10.0)?;
/// assert!((stress.sigma_z_kpa / 150.0 - 0.646447).abs() < 1e-6);
/// # Ok::<(), brimstead_core::stress::StressError>(())
/// ```
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Disc {
    radius_m: f64,
    pressure_kpa: f64,
    poisson: f64,
}

impl Disc {
    /// Checks the load and the ground.
    ///
    /// # Errors
    /// Radius, pressure or Poisson's ratio out of range.
    pub fn new(radius_m: f64, pressure_kpa: f64, poisson: f64) -> Result<Self, StressError> {
        Ok(Self {
            radius_m: RADIUS.check(radius_m)?,
            pressure_kpa: PRESSURE.check(pressure_kpa)?,
            poisson: POISSON.check(poisson)?,
        })
    }

    /// Radius, m.
    #[must_use]
    pub fn radius_m(&self) -> f64 {
        self.radius_m
    }

    /// Pressure, kPa.
    #[must_use]
    pub fn pressure_kpa(&self) -> f64 {
        self.pressure_kpa
    }

    /// Poisson's ratio of the ground.
    #[must_use]
    pub fn poisson(&self) -> f64 {
        self.poisson
    }
}

surface::evaluation!(Disc);

impl SurfaceLoad for Disc {
    const SOURCE: &'static str =
        "Love 1929; Eason, Noble & Sneddon 1955; functions A to H as in Ahlvin & Ulery 1962";
    const STRESS_ON_RIM: bool = true;
    const DISPLACEMENT_ON_RIM: bool = true;
    type Integrals<const N: usize> = DiscIntegrals<N>;

    fn radius_m(&self) -> f64 {
        self.radius_m
    }

    #[inline(always)]
    fn integrals<const N: usize>(&self, at: &Geometry<N>) -> DiscIntegrals<N> {
        DiscIntegrals::at(at)
    }

    #[inline(always)]
    fn stresses<const N: usize>(&self, _: &Geometry<N>, by: &DiscIntegrals<N>) -> [Lanes<N>; 4] {
        let lateral = (1.0 - 2.0 * self.poisson) * by.qm1 - by.zeta_q0;
        [
            by.s0 + by.zeta_s1,
            by.s0 - by.zeta_s1 - lateral,
            2.0 * self.poisson * by.s0 + lateral,
            by.zeta_t1,
        ]
        .map(|over_pressure| self.pressure_kpa * over_pressure)
    }

    #[inline(always)]
    fn displacements<const N: usize>(
        &self,
        young_kpa: f64,
        at: &Geometry<N>,
        by: &DiscIntegrals<N>,
    ) -> [Lanes<N>; 2] {
        let nu = self.poisson;
        let scale_m = self.pressure_kpa * self.radius_m / young_kpa * (1.0 + nu);
        [
            scale_m * (2.0 * (1.0 - nu) * by.sm1 + at.zeta * by.s0),
            -scale_m * (at.rho * ((1.0 - 2.0 * nu) * by.qm1 - by.zeta_q0)),
        ]
    }

    fn write_stress(
        &self,
        at: &Geometry<1>,
        by: &DiscIntegrals<1>,
        result: &AxisymmetricStress,
        trail: &mut Trail<'_, impl Working>,
    ) {
        let by = Functions::new(by);
        let place: Inputs<'_> = &[("rho", at.rho.value()), ("zeta", at.zeta.value())];
        trail.steps(
            "",
            &[
                by.step_a(),
                ("function B", by.b, "B = zeta int m J1(m) J0(m rho) exp(-m zeta) dm"),
                by.step_d(),
                ("function C", by.c, "C = D - B"),
                by.step_e(),
                ("function F", by.f, "F = A - E"),
                ("function G", by.g, "G = zeta int m J1(m) J1(m rho) exp(-m zeta) dm"),
            ],
            place,
        );
        let inputs: Inputs<'_> = &[
            ("q", self.pressure_kpa),
            ("nu", self.poisson),
            ("A", by.a),
            ("B", by.b),
            ("C", by.c),
            ("D", by.d),
            ("E", by.e),
            ("F", by.f),
            ("G", by.g),
        ];
        trail.steps(
            "kPa",
            &[
                ("vertical stress increment", result.sigma_z_kpa, "sigma_z = q (A + B)"),
                (
                    "radial stress increment",
                    result.sigma_r_kpa,
                    "sigma_r = q (2 nu A + C + (1 - 2 nu) F)",
                ),
                (
                    "tangential stress increment",
                    result.sigma_theta_kpa,
                    "sigma_theta = q (2 nu A - D + (1 - 2 nu) E)",
                ),
                ("shear stress increment", result.tau_rz_kpa, "tau_rz = q G"),
            ],
            inputs,
        );
    }

    fn write_displacement(
        &self,
        young_kpa: f64,
        at: &Geometry<1>,
        by: &DiscIntegrals<1>,
        result: &Displacement,
        trail: &mut Trail<'_, impl Working>,
    ) {
        let by = Functions::new(by);
        let (rho, zeta) = (at.rho.value(), at.zeta.value());
        let h = ("function H", by.h, "H = 2 int J1(m) J0(m rho) exp(-m zeta) / m dm");
        trail.steps(
            "",
            &[by.step_a(), by.step_d(), by.step_e(), h],
            &[("rho", rho), ("zeta", zeta)],
        );
        let inputs: Inputs<'_> = &[
            ("q", self.pressure_kpa),
            ("R", self.radius_m),
            ("nu", self.poisson),
            ("Es", young_kpa),
            ("rho", rho),
            ("zeta", zeta),
            ("A", by.a),
            ("D", by.d),
            ("E", by.e),
            ("H", by.h),
        ];
        trail.steps(
            "m",
            &[
                ("settlement", result.settlement_m, "w = q R (1 + nu)/Es (zeta A + (1 - nu) H)"),
                (
                    "radial displacement, outwards",
                    result.radial_m,
                    "u = -q R rho (1 + nu)/Es ((1 - 2 nu) E - D)",
                ),
            ],
            inputs,
        );
    }
}

/// The tabulated functions of Ahlvin & Ulery 1962 (Highway Research Board Bulletin 342), which a
/// reader can look up.
struct Functions {
    a: f64,
    b: f64,
    c: f64,
    d: f64,
    e: f64,
    f: f64,
    g: f64,
    h: f64,
}

impl Functions {
    fn new(by: &DiscIntegrals<1>) -> Self {
        let (a, b, d) = (by.s0.value(), by.zeta_s1.value(), by.zeta_q0.value());
        let e = by.qm1.value();
        Self { a, b, c: d - b, d, e, f: a - e, g: by.zeta_t1.value(), h: 2.0 * by.sm1.value() }
    }

    fn step_a(&self) -> (&'static str, f64, &'static str) {
        ("function A", self.a, "A = int J1(m) J0(m rho) exp(-m zeta) dm")
    }

    fn step_d(&self) -> (&'static str, f64, &'static str) {
        ("function D", self.d, "D = (zeta/rho) int J1(m) J1(m rho) exp(-m zeta) dm")
    }

    fn step_e(&self) -> (&'static str, f64, &'static str) {
        ("function E", self.e, "E = (1/rho) int J1(m) J1(m rho) exp(-m zeta) / m dm")
    }
}
