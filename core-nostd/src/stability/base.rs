//! Failure of the whole base on a slip circle: the tank tips over one edge, loaded over its whole
//! diameter.
//!
//! A slice of unit width through the axis stands for the circular tank, which is hard on it; the
//! axisymmetric bearing capacity of [`super::bearing`] is the other view of the same failure and
//! sees no layers. Look at both.

use super::slip::{Search, SlipStability};
use super::strength::StrengthProfile;
use super::{DIAMETER, PRESSURE, StabilityError};
use crate::working::{Silent, Working};

/// The slip circle under the whole diameter with the least factor of safety.
///
/// # Assumptions
/// As [`super::edge::edge_stability`], with the loaded width fixed at the diameter.
///
/// # Errors
/// A value outside its range.
pub fn base_stability(
    profile: &StrengthProfile<'_>,
    diameter_m: f64,
    pressure_kpa: f64,
) -> Result<SlipStability, StabilityError> {
    base_stability_with(profile, diameter_m, pressure_kpa, &mut Silent)
}

/// As [`base_stability`], writing the hand check of the circle found.
///
/// # Errors
/// As [`base_stability`].
pub fn base_stability_with(
    profile: &StrengthProfile<'_>,
    diameter_m: f64,
    pressure_kpa: f64,
    working: &mut impl Working,
) -> Result<SlipStability, StabilityError> {
    DIAMETER.check(diameter_m)?;
    PRESSURE.check(pressure_kpa)?;
    let search = Search { profile: *profile, least_width_m: diameter_m, most_width_m: diameter_m };
    let found = search.weakest()?.stability(pressure_kpa);
    found.write(profile, working);
    Ok(found)
}
