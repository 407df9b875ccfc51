//! Westergaard's material: ground held against sideways strain by thin stiff layers.

use super::integrals::{DiscIntegrals, Geometry};
use super::{AxisPoint, POISSON, PRESSURE, RADIUS, StressError};
use crate::math::lanes::Lanes;
use crate::working::{Silent, Step, Working};

/// A uniform disc on ground that cannot strain horizontally (closely layered by stiff sheets).
/// Only the vertical stress is meaningful; it is lower below the load than on the isotropic
/// half-space.
///
/// # Range of validity
/// Poisson's ratio 0 to 0.5 of the soft ground between the sheets; at 0.5 the load goes straight
/// down. Error below 1e-14 of the pressure.
///
/// # References
/// Westergaard 1938, Contributions to the Mechanics of Solids (Timoshenko 60th anniversary
/// volume), 268-277: the point load; its integral over the disc is the isotropic function `A` at
/// the depth multiplied by `eta = sqrt((1 - 2 nu)/(2 - 2 nu))`.
///
/// # Examples
/// ```
/// use brimstead_core::stress::WestergaardDisc;
/// let disc = WestergaardDisc::new(1.0, 1.0, 0.0)?;
/// // On the axis: 1 - eta zeta / sqrt(1 + eta^2 zeta^2) with eta^2 = 1/2.
/// let want = 1.0 - (0.5_f64 / 1.5).sqrt();
/// assert!((disc.sigma_z_at(0.0, 1.0)? - want).abs() < 1e-15);
/// # Ok::<(), brimstead_core::stress::StressError>(())
/// ```
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WestergaardDisc {
    radius_m: f64,
    pressure_kpa: f64,
    poisson: f64,
    eta: f64,
}

impl WestergaardDisc {
    /// Checks the load and the ground.
    ///
    /// # Errors
    /// Radius, pressure or Poisson's ratio out of range.
    pub fn new(radius_m: f64, pressure_kpa: f64, poisson: f64) -> Result<Self, StressError> {
        let poisson = POISSON.check(poisson)?;
        Ok(Self {
            radius_m: RADIUS.check(radius_m)?,
            pressure_kpa: PRESSURE.check(pressure_kpa)?,
            poisson,
            eta: libm::sqrt((1.0 - 2.0 * poisson) / (2.0 - 2.0 * poisson)),
        })
    }

    /// Vertical stress increment, kPa; on the surface at the edge half the pressure.
    ///
    /// # Errors
    /// Distance or depth negative, not finite or beyond 1000 km.
    pub fn sigma_z_at(&self, r_m: f64, z_m: f64) -> Result<f64, StressError> {
        self.sigma_z_at_with(r_m, z_m, &mut Silent)
    }

    /// As [`WestergaardDisc::sigma_z_at`], writing the working.
    ///
    /// # Errors
    /// As [`WestergaardDisc::sigma_z_at`].
    pub fn sigma_z_at_with(
        &self,
        r_m: f64,
        z_m: f64,
        working: &mut impl Working,
    ) -> Result<f64, StressError> {
        let point = AxisPoint { r_m, z_m }.check(None)?;
        let depth = Lanes([self.eta * point.z_m]);
        let at = Geometry::new(Lanes([point.r_m]), depth, self.radius_m);
        let influence = DiscIntegrals::at(&at).s0.value();
        let sigma_z_kpa = self.pressure_kpa * influence;
        if working.wanted() {
            working.step(Step {
                name: "depth factor",
                value: self.eta,
                unit: "",
                formula: "eta = sqrt((1 - 2 nu)/(2 - 2 nu))",
                inputs: &[("nu", self.poisson)],
                source: "Westergaard 1938",
            });
            working.step(Step {
                name: "function A at the scaled depth",
                value: influence,
                unit: "",
                formula: "A = int J1(m) J0(m r/R) exp(-m eta z/R) dm",
                inputs: &[("eta", self.eta), ("r", r_m), ("z", z_m), ("R", self.radius_m)],
                source: "",
            });
            working.step(Step {
                name: "vertical stress increment",
                value: sigma_z_kpa,
                unit: "kPa",
                formula: "sigma_z = q A",
                inputs: &[("q", self.pressure_kpa), ("A", influence)],
                source: "",
            });
        }
        Ok(sigma_z_kpa)
    }
}
