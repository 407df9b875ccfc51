//! What each instrument should read at a time, for the liquid level history so far.
//!
//! ```text
//! SiteModel --in_case--> SiteModel --+--> Column (one per plan position)  -- advance --> ColumnState
//!                                    +--> Point  (one per instrument)     -- reading --> expected value
//! ```
//! A [`Column`] is the vertical line of ground below a plan position: the stress increment of all
//! tanks at each of its cells, its stress history and its consolidation. It is advanced from
//! reading to reading of the liquid level, so that the logger, which cannot know the future, and
//! the office compute the same numbers from the same inputs, bit for bit. Columns that carry the
//! instruments of one plan position are shared.
//!
//! # Method
//! Vertical total stress increments are those of a homogeneous elastic half-space under uniform
//! discs (liquid and dead load) and ring line loads (shell, ring wall), superposed for all tanks.
//! Each raises excess pore pressure by the layer's response ratio, dissipating in one dimension
//! vertically and radially to drains ([`crate::consolidation`]). Settlement is the sum of the
//! immediate (undrained, elastic), the primary (effective stress path with memory) and the secondary
//! part below the instrument's depth ([`crate::settlement`]). The dead load and the neighbours stand
//! since a given time and are part of the history before the baseline.
//!
//! # Band
//! The same calculation is run for cases that multiply the best-estimate parameters; the band is
//! the envelope of the cases, widened by the instrument's own noise ([`envelope`]).

mod column;
mod error;
mod explain;
mod point;

pub use column::{Column, ColumnState, LiquidPressures, ProfilePoint, Settled};
pub use error::ExpectationError;
pub use explain::explain;
pub use point::{Moment, Point, Sensor, Zero, envelope};

use crate::consolidation::Drains;
use crate::ground::{Compressibility, Ground, Profile};
use crate::load::{PlanPosition, Tanks, check_tanks};
use crate::quantity::Bounded;
use serde::{Deserialize, Serialize};

/// A multiplier of a best-estimate parameter.
pub static MULTIPLIER: Bounded = Bounded {
    name: "multiplier of a parameter",
    unit: "",
    min: 0.05,
    max: 20.0,
    remedy: "1 is the best estimate; a cautious value is usually within 0.3 and 3.",
};
/// Radius of the plan area with drains.
pub static DRAIN_ZONE_RADIUS: Bounded = Bounded {
    name: "radius of the area with drains",
    unit: "m",
    min: 0.1,
    max: 500.0,
    remedy: "Radius around the axis of the tank under test, m.",
};

/// Vertical drains and the plan area they stand in.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct DrainZone {
    /// The drains.
    pub drains: Drains,
    /// Centre of the area.
    pub axis: PlanPosition,
    /// Its radius, m.
    pub radius_m: f64,
}

/// Ground, drains and tanks: all that the expectation needs to know of a site.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct SiteModel {
    /// The ground profile.
    pub ground: Ground,
    /// Vertical drains, where there are any.
    pub drains: Option<DrainZone>,
    /// All tanks; the first is the one under test.
    pub tanks: Tanks,
}

/// One case of the band: multipliers on the best-estimate parameters of every layer.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Multipliers {
    /// On Cc, Cr, CR, RR, the secondary ratio and on 1/M.
    pub compressibility: f64,
    /// On cv.
    pub cv: f64,
    /// On ch.
    pub ch: f64,
    /// On the pore-pressure response; the product is held at 1, since in one dimension saturated
    /// soil raises no more than the stress increment itself.
    pub pore_pressure_response: f64,
    /// On Young's moduli.
    pub young: f64,
}

impl Multipliers {
    /// The best estimate itself.
    pub const LIKELY: Self =
        Self { compressibility: 1.0, cv: 1.0, ch: 1.0, pore_pressure_response: 1.0, young: 1.0 };

    fn check(&self) -> Result<(), ExpectationError> {
        for value in
            [self.compressibility, self.cv, self.ch, self.pore_pressure_response, self.young]
        {
            MULTIPLIER.check(value)?;
        }
        Ok(())
    }
}

impl SiteModel {
    /// Checks ground, tanks and drains.
    ///
    /// # Errors
    /// The first problem found.
    pub fn check(&self) -> Result<(), ExpectationError> {
        Profile::new(&self.ground)?;
        check_tanks(&self.tanks)?;
        if let Some(zone) = &self.drains {
            DRAIN_ZONE_RADIUS.check(zone.radius_m)?;
            zone.drains.radial_flow()?;
        }
        Ok(())
    }

    /// The same site with the parameters of one case.
    ///
    /// # Errors
    /// A multiplier out of range.
    pub fn in_case(&self, case: &Multipliers) -> Result<Self, ExpectationError> {
        case.check()?;
        let mut model = self.clone();
        for layer in &mut model.ground.layers {
            layer.compressibility = match layer.compressibility {
                Compressibility::Index { void_ratio, cc, cr } => Compressibility::Index {
                    void_ratio,
                    cc: cc * case.compressibility,
                    cr: cr * case.compressibility,
                },
                Compressibility::Ratio { compression_ratio, recompression_ratio } => {
                    Compressibility::Ratio {
                        compression_ratio: compression_ratio * case.compressibility,
                        recompression_ratio: recompression_ratio * case.compressibility,
                    }
                }
                Compressibility::Modulus { constrained_modulus_kpa } => Compressibility::Modulus {
                    constrained_modulus_kpa: constrained_modulus_kpa / case.compressibility,
                },
            };
            layer.secondary_ratio *= case.compressibility;
            layer.cv_m2_per_s *= case.cv;
            layer.ch_m2_per_s *= case.ch;
            // Storage mv = k/(cv gamma_w) stays: flow between layers keeps its proportions.
            layer.permeability_m_per_s *= case.cv;
            layer.pore_pressure_response =
                (layer.pore_pressure_response * case.pore_pressure_response).min(1.0);
            layer.young_undrained_kpa *= case.young;
            layer.young_drained_kpa *= case.young;
        }
        Ok(model)
    }

    /// The drains that a plan position stands among.
    fn drains_at(&self, place: &PlanPosition) -> Option<&Drains> {
        self.drains
            .as_ref()
            .filter(|zone| zone.axis.distance_to_m(place) <= zone.radius_m)
            .map(|zone| &zone.drains)
    }
}
