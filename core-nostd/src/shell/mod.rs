//! Shape in which a tank has settled, from a levelling round.
//!
//! | question | where |
//! |---|---|
//! | does the round close, and do the benchmarks agree | [`round`] |
//! | how much of the shell's settlement is uniform, tilt, out of plane, and how much is noise | [`perimeter`] |
//! | which waves does it hold | [`harmonics`] |
//! | how much of the crown is left, and how far has the floor's edge gone down | [`floor`] |
//!
//! Settlement is positive downwards. Angles run clockwise from north as seen from above, in
//! radians; nothing here depends on where zero lies.
//!
//! # Limits
//! Limits are given by the caller: they belong to the owner's standard and the engineer of the job.
//! What is computed here is the published formula of a limit, next to what the survey itself can
//! show: a limit inside the noise can neither be met nor missed, and is flagged.

pub mod floor;
pub mod harmonics;
pub mod perimeter;
pub mod round;

use crate::math::least_squares::FitError;
use crate::quantity::{Bounded, OutOfRange};
use core::fmt;

/// Diameter of the shell.
pub static SHELL_DIAMETER: Bounded = Bounded {
    name: "diameter of the shell",
    unit: "m",
    min: 1.0,
    max: 200.0,
    remedy: "Give the diameter, not the radius, in metres.",
};
/// Height of the shell.
pub static SHELL_HEIGHT: Bounded = Bounded {
    name: "height of the shell",
    unit: "m",
    min: 0.5,
    max: 60.0,
    remedy: "Give it above the floor, in metres.",
};
/// A settlement, or a height that is compared with one.
pub static SETTLEMENT: Bounded = Bounded {
    name: "settlement",
    unit: "m",
    min: -20.0,
    max: 20.0,
    remedy: "Settlement since the baseline, downwards positive, in metres (not a level).",
};
/// Angle of a point.
pub static ANGLE: Bounded = Bounded {
    name: "angle of the point",
    unit: "rad",
    min: -13.0,
    max: 13.0,
    remedy: "Angle in plan, clockwise from north, in radians (a turn is 6.283).",
};
/// Standard deviation of a settlement.
pub static SETTLEMENT_DEVIATION: Bounded = Bounded {
    name: "standard deviation of a settlement",
    unit: "m",
    min: 0.0,
    max: 1.0,
    remedy: "A settlement is the difference of two levellings: 1.4 times the standard deviation \
             of one.",
};
/// Strength or stiffness of the shell's steel.
pub static STEEL: Bounded = Bounded {
    name: "yield strength or modulus of the shell",
    unit: "MPa",
    min: 1.0,
    max: 1e6,
    remedy: "Give both in MPa; steel has a modulus of about 200 000 MPa.",
};

/// Why a shape was not computed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ShellError {
    /// A value outside its range.
    Value(OutOfRange),
    /// The points read do not determine the shape.
    Fit(FitError),
    /// Points are not listed once around in the sense of growing angle.
    NotOnceAround {
        /// The first point that does not follow the one before it, counted from 0.
        index: usize,
    },
}

impl From<OutOfRange> for ShellError {
    fn from(refused: OutOfRange) -> Self {
        Self::Value(refused)
    }
}

impl From<FitError> for ShellError {
    fn from(refused: FitError) -> Self {
        Self::Fit(refused)
    }
}

impl fmt::Display for ShellError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Value(refused) => refused.fmt(f),
            Self::Fit(refused) => refused.fmt(f),
            Self::NotOnceAround { index } => write!(
                f,
                "point {} does not follow the one before it. List points once around the shell by \
                 growing angle, each angle once.",
                index.saturating_add(1)
            ),
        }
    }
}

impl core::error::Error for ShellError {}
