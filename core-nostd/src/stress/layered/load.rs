//! What presses on layered ground.

use super::LayeredResponse;
use crate::math::lanes::Lanes;
use crate::stress::{AxisPoint, Disc, LINE_LOAD, PRESSURE, RADIUS, Ring, StressError};

/// A load on the surface of layered ground.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum LayeredLoad {
    /// Uniform pressure on a circle.
    Disc {
        /// Radius, m.
        radius_m: f64,
        /// Pressure, kPa.
        pressure_kpa: f64,
    },
    /// Line load on a circle.
    Ring {
        /// Radius, m.
        radius_m: f64,
        /// Line load, kN/m.
        line_load_kn_per_m: f64,
    },
}

impl LayeredLoad {
    pub(super) fn check(self) -> Result<Self, StressError> {
        RADIUS.check(self.radius_m())?;
        match self {
            Self::Disc { pressure_kpa, .. } => PRESSURE.check(pressure_kpa)?,
            Self::Ring { line_load_kn_per_m, .. } => LINE_LOAD.check(line_load_kn_per_m)?,
        };
        Ok(self)
    }

    pub(super) fn radius_m(&self) -> f64 {
        match self {
            Self::Disc { radius_m, .. } | Self::Ring { radius_m, .. } => *radius_m,
        }
    }

    /// What stresses are multiples of, kPa.
    pub(super) fn unit_kpa(&self) -> f64 {
        match self {
            Self::Disc { pressure_kpa, .. } => *pressure_kpa,
            Self::Ring { radius_m, line_load_kn_per_m } => line_load_kn_per_m / radius_m,
        }
    }

    /// Hankel transform in units of the load and the radius, times the wave number.
    pub(super) fn transform<const N: usize>(&self, m: Lanes<N>) -> Lanes<N> {
        match self {
            Self::Disc { .. } => m.map(libm::j1),
            Self::Ring { .. } => m * m.map(libm::j0),
        }
    }

    /// Closed form for a half-space, in kPa and m.
    pub(super) fn on_half_space(
        &self,
        young_kpa: f64,
        poisson: f64,
        r_m: f64,
        z_m: f64,
    ) -> Result<LayeredResponse, StressError> {
        Ok(match *self {
            Self::Disc { radius_m, pressure_kpa } => {
                let disc = Disc::new(radius_m, pressure_kpa, poisson)?;
                LayeredResponse {
                    stress: disc.stress_at(r_m, z_m)?,
                    displacement: disc.displacement_at(young_kpa, r_m, z_m)?,
                }
            }
            Self::Ring { radius_m, line_load_kn_per_m } => {
                let ring = Ring::new(radius_m, line_load_kn_per_m, poisson)?;
                LayeredResponse {
                    stress: ring.stress_at(r_m, z_m)?,
                    displacement: ring.displacement_at(young_kpa, r_m, z_m)?,
                }
            }
        })
    }

    /// A line load has no finite value on itself, whatever lies below.
    pub(super) fn check_point(&self, r_m: f64, z_m: f64) -> Result<(), StressError> {
        AxisPoint { r_m, z_m }.check(None)?;
        let radius_m = self.radius_m();
        if matches!(self, Self::Ring { .. }) && r_m == radius_m && z_m == 0.0 {
            return Err(StressError::NoFiniteValue { radius_m });
        }
        Ok(())
    }
}
