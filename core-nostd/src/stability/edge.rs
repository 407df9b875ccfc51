//! Failure of an edge of the tank on a slip circle through the layers.
//!
//! The tank's rim is long beside the failing part, so that plane strain is a fair picture. The
//! loaded width searched runs from a smallest one to the whole diameter.
//!
//! # The smallest width
//! Where strength is least at the surface, smaller and smaller circles need less and less pressure,
//! down to 5.52 times the surface strength. A shell and its foundation bridge a narrow weak strip,
//! so a smallest width must be set; D/12 is the value used here unless another is given, and the
//! result is sensitive to it on such ground. When the circle found has the smallest width, say so.

use super::slip::{Search, SlipStability};
use super::strength::StrengthProfile;
use super::{DIAMETER, PRESSURE, StabilityError};
use crate::quantity::Bounded;
use crate::working::{Silent, Working};

/// Smallest loaded width searched, as a share of the diameter, unless another is given.
pub const SMALLEST_WIDTH_SHARE: f64 = 1.0 / 12.0;

/// Smallest loaded width inside the edge.
pub static SMALLEST_WIDTH: Bounded = Bounded {
    name: "smallest loaded width of an edge failure",
    unit: "m",
    min: 1e-2,
    max: 1e3,
    remedy: "Width that the shell's foundation cannot bridge; at most the diameter.",
};

/// An edge of a tank under uniform pressure.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Edge {
    /// Diameter of the loaded area, m.
    pub diameter_m: f64,
    /// Pressure under the tank, kPa.
    pub pressure_kpa: f64,
    /// Smallest loaded width searched, m; [`SMALLEST_WIDTH_SHARE`] of the diameter when not given.
    pub smallest_width_m: Option<f64>,
}

/// The slip circle of an edge with the least factor of safety.
///
/// # Assumptions
/// Plane strain, level ground, centre of the circle at or above the loaded level, lowest point
/// within the profile. The search is bounded: a grid of 65 half chords and up to seven depths in each
/// slice, refined wherever it comes near the least.
///
/// # Errors
/// A value outside its range, a smallest width beyond the diameter, or a profile too thin for any
/// circle.
pub fn edge_stability(
    profile: &StrengthProfile<'_>,
    edge: &Edge,
) -> Result<SlipStability, StabilityError> {
    edge_stability_with(profile, edge, &mut Silent)
}

/// As [`edge_stability`], writing the hand check of the circle found.
///
/// # Errors
/// As [`edge_stability`].
pub fn edge_stability_with(
    profile: &StrengthProfile<'_>,
    edge: &Edge,
    working: &mut impl Working,
) -> Result<SlipStability, StabilityError> {
    let most_width_m = DIAMETER.check(edge.diameter_m)?;
    let pressure_kpa = PRESSURE.check(edge.pressure_kpa)?;
    let least_width_m = edge.smallest_width_m.unwrap_or(SMALLEST_WIDTH_SHARE * most_width_m);
    SMALLEST_WIDTH.check(least_width_m)?;
    if least_width_m > most_width_m {
        let (smallest_width_m, diameter_m) = (least_width_m, most_width_m);
        return Err(StabilityError::WiderThanTank { smallest_width_m, diameter_m });
    }
    let search = Search { profile: *profile, least_width_m, most_width_m };
    let found = search.weakest()?.stability(pressure_kpa);
    found.write(profile, working);
    Ok(found)
}
