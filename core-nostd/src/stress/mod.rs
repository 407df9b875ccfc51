//! Stress and displacement that surface loads cause in elastic ground.
//!
//! | load | room |
//! |---|---|
//! | uniform pressure on a circle (liquid, floor, pad) | [`disc`] |
//! | line load on a circle (shell, ring wall) | [`ring`] |
//! | disc or ring on layered ground | [`layered`] |
//! | mean pressure under a stiff plate (foundation block, test plate) | [`rigid`] |
//! | several discs and rings at their places in plan | [`superposition`] |
//!
//! All results are *increments* caused by the load; the stress that was there before is not in
//! them. But for [`layered`], the ground is a homogeneous, isotropic, linear elastic half-space, weightless, with the
//! load on its surface; the load carries no shear. [`westergaard`] is the limit of a ground that
//! cannot strain sideways.
//!
//! # Axes and signs
//! z downwards from the loaded level, r outwards from the axis of the load, theta around it.
//! Compression positive. The shear `tau_rz` is positive in the sense that a downward load gives
//! outside its axis. Settlement positive downwards, radial displacement positive outwards.

mod integrals;
mod surface;

pub mod disc;
pub mod layered;
pub mod pore_pressure;
pub mod rigid;
pub mod ring;
pub mod superposition;
pub mod tensor;
pub mod westergaard;

pub use disc::Disc;
pub use rigid::RigidDisc;
pub use ring::Ring;
pub use tensor::{AxisymmetricStress, CartesianStress, Principal};
pub use westergaard::WestergaardDisc;

use crate::quantity::{Bounded, OutOfRange};
use core::fmt;

/// Radius of a load.
pub static RADIUS: Bounded = Bounded {
    name: "radius of the load",
    unit: "m",
    min: 1e-3,
    max: 1e4,
    remedy: "Give the radius, not the diameter, in metres.",
};

/// Uniform pressure; negative for a pressure taken away.
pub static PRESSURE: Bounded = Bounded {
    name: "pressure",
    unit: "kPa",
    min: -1e6,
    max: 1e6,
    remedy: "Give it in kPa (kN/m2).",
};

/// Load per length of a ring; negative for a load taken away.
pub static LINE_LOAD: Bounded = Bounded {
    name: "line load",
    unit: "kN/m",
    min: -1e7,
    max: 1e7,
    remedy: "Give it per metre of circumference, in kN/m.",
};

/// Poisson's ratio of the ground.
pub static POISSON: Bounded = Bounded {
    name: "Poisson's ratio",
    unit: "",
    min: 0.0,
    max: 0.5,
    remedy: "Use 0.5 for undrained saturated clay, 0.2 to 0.35 for drained soil.",
};

/// Young's modulus of the ground.
pub static YOUNG: Bounded = Bounded {
    name: "Young's modulus",
    unit: "kPa",
    min: 1e-3,
    max: 1e9,
    remedy: "Give it in kPa (1 MPa is 1000 kPa).",
};

/// Horizontal distance from the axis of a load.
pub static RADIAL_DISTANCE: Bounded = Bounded {
    name: "distance from the axis",
    unit: "m",
    min: 0.0,
    max: 1e6,
    remedy: "It is measured horizontally from the axis of the load and never negative.",
};

/// Depth below the loaded level.
pub static DEPTH: Bounded = Bounded {
    name: "depth below the loaded level",
    unit: "m",
    min: 0.0,
    max: 1e6,
    remedy: "Depth is positive downwards; nothing is known above the loaded level.",
};

/// Coordinate in plan.
pub static PLAN_COORDINATE: Bounded = Bounded {
    name: "coordinate in plan",
    unit: "m",
    min: -1e6,
    max: 1e6,
    remedy: "Use the site's own axes with their origin on the site, not map coordinates.",
};

/// Why a stress or displacement was not computed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum StressError {
    /// An input outside its range.
    OutOfRange(OutOfRange),
    /// The point lies on the edge of a load that concentrates there (a line load, a rigid plate),
    /// where what was asked for is infinite.
    NoFiniteValue {
        /// Radius of the edge, m.
        radius_m: f64,
    },
    /// More layers, or sublayers of layers with a modulus gradient, than there is room for.
    TooManyLayers {
        /// Layers given.
        given: usize,
        /// Room.
        most: usize,
    },
    /// A rigid base without ground on it.
    NoGround,
    /// The point lies inside the rigid base.
    BelowRigidBase {
        /// Depth of the point, m.
        depth_m: f64,
        /// Depth of the base, m.
        base_m: f64,
    },
    /// The integral would need more panels than are allowed.
    TooMuchWork {
        /// Panels allowed.
        most: usize,
    },
    /// As many results as points are needed.
    LengthsDiffer {
        /// Points given.
        points: usize,
        /// Room for results.
        results: usize,
    },
    /// Loads on one half-space were prepared with different Poisson's ratios.
    PoissonDiffers {
        /// That of the first load.
        first: f64,
        /// The one that differs.
        other: f64,
    },
}

impl From<OutOfRange> for StressError {
    fn from(refused: OutOfRange) -> Self {
        Self::OutOfRange(refused)
    }
}

impl fmt::Display for StressError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::OutOfRange(refused) => refused.fmt(f),
            Self::NoFiniteValue { radius_m } => write!(
                f,
                "the point lies on the edge of the load (radius {radius_m} m, depth 0), where a \
                 line load or a rigid plate gives no finite value; ask for a point below or \
                 beside it"
            ),
            Self::TooManyLayers { given, most } => {
                write!(f, "{given} layers were given where at most {most} are possible; merge some")
            }
            Self::NoGround => {
                f.write_str("there is no ground above the rigid base; give at least one layer")
            }
            Self::BelowRigidBase { depth_m, base_m } => write!(
                f,
                "depth {depth_m} m is below the rigid base at {base_m} m, where no stress is \
                 defined; ask above it or describe the ground further down"
            ),
            Self::TooMuchWork { most } => write!(
                f,
                "the layered integral needs more than {most} panels: the top layer is very thin \
                 for the radius, or the point very far away; merge the thin layer with the next"
            ),
            Self::LengthsDiffer { points, results } => {
                write!(f, "{points} points were given with room for {results} results")
            }
            Self::PoissonDiffers { first, other } => write!(
                f,
                "loads on one ground were given Poisson's ratios {first} and {other}; use one"
            ),
        }
    }
}

impl core::error::Error for StressError {}

/// A point relative to the axis of one load.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct AxisPoint {
    /// Horizontal distance from the axis, m.
    pub r_m: f64,
    /// Depth below the loaded level, m.
    pub z_m: f64,
}

impl AxisPoint {
    /// Range check; `index` names the point in a list.
    pub(crate) fn check(self, index: Option<usize>) -> Result<Self, OutOfRange> {
        let at = |refused| OutOfRange { index, ..refused };
        RADIAL_DISTANCE.check(self.r_m).map_err(at)?;
        DEPTH.check(self.z_m).map_err(at)?;
        Ok(self)
    }
}

/// Movement of a point of the ground.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Displacement {
    /// Downwards, m.
    pub settlement_m: f64,
    /// Away from the axis of the load, m.
    pub radial_m: f64,
}
