//! Stability of a tank on soft clay in terms of undrained strength (total stress, phi = 0).
//!
//! | question | where |
//! |---|---|
//! | what strength does the clay have at the effective stress it has now | [`strength`] |
//! | ultimate pressure of the whole base, strength constant or growing with depth | [`bearing`] |
//! | failure of an edge on a slip circle through layers | [`edge`] |
//! | the same for the whole base | [`base`] |
//! | a thin soft layer squeezed out from under the base | [`squeeze`] |
//!
//! An edge can fail while the base as a whole stands: the tank at Fredrikstad had 1.72 for the base
//! and 1.05 for the edge (Bjerrum & Overland 1957). Look at every mode.
//!
//! # A moment in time
//! Strength belongs to an effective stress. For a moment of the filling, put the effective stress
//! at the faces of each sublayer into [`strength::StrengthGain::slice`], hand the slices to
//! [`strength::StrengthProfile::new`], and search. Strength from the effective stress *before*
//! the shearing is what the methods here want; pore pressures measured during filling say nothing
//! about those at failure and flatter a margin that is computed with them (Ladd 1991).
//!
//! # Not covered
//! Weight of the soil above sloping ground, embankments, berms, reinforcement, piles, progressive
//! failure of sensitive clay (which gives no warning), strength that differs with the direction of
//! shearing (use a mean), horizontal load, earthquake, lack of symmetry of the ground in plan.
//! A slip circle is an upper bound in plane strain: a circular tank has some help from its ends that
//! is left out, but a mechanism of another shape can need less. On uniform clay the circle gives
//! 5.52 su where 5.14 su is exact.

pub mod base;
pub mod bearing;
pub mod edge;
pub mod slip;
pub mod squeeze;
pub mod strength;

use crate::quantity::{Bounded, OutOfRange};
use core::fmt;

/// Pressure of the tank on the ground, of which stability is asked.
pub static PRESSURE: Bounded = Bounded {
    name: "pressure under the tank",
    unit: "kPa",
    min: 1e-3,
    max: 1e4,
    remedy: "Net pressure of liquid, floor and pad, in kPa; without load there is no factor of \
             safety.",
};
/// Diameter of the loaded circle.
pub static DIAMETER: Bounded = Bounded {
    name: "diameter of the loaded area",
    unit: "m",
    min: 0.1,
    max: 1e3,
    remedy: "Give the diameter, not the radius, in metres.",
};

/// Why stability was not computed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum StabilityError {
    /// A value outside its range.
    Value(OutOfRange),
    /// A strength profile without slices.
    NoStrength,
    /// The strength profile is too thin for any circle under a load this wide.
    TooThin {
        /// Depth to the base of the profile, m.
        depth_m: f64,
    },
    /// An edge failure wider than the tank was asked for.
    WiderThanTank {
        /// Smallest loaded width to be searched, m.
        smallest_width_m: f64,
        /// Diameter of the loaded area, m.
        diameter_m: f64,
    },
}

impl From<OutOfRange> for StabilityError {
    fn from(refused: OutOfRange) -> Self {
        Self::Value(refused)
    }
}

impl fmt::Display for StabilityError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Value(refused) => refused.fmt(f),
            Self::NoStrength => f.write_str(
                "the strength profile holds no slices. Give thickness, strength at the top and \
                 gradient of each, from the loaded level down.",
            ),
            Self::TooThin { depth_m } => write!(
                f,
                "the strength profile ends at {depth_m} m, too thin for a slip circle under this \
                 width; ask for squeezing, or give the ground below."
            ),
            Self::WiderThanTank { smallest_width_m, diameter_m } => write!(
                f,
                "smallest loaded width is {smallest_width_m} m under a diameter of {diameter_m} m. \
                 Give a width of at most the diameter."
            ),
        }
    }
}

impl core::error::Error for StabilityError {}
