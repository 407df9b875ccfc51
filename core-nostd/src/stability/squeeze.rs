//! A thin soft layer squeezed out sideways between the base and firm ground.
//!
//! ```text
//! circle   q_ult = su (B/(3 h) + pi + 1)
//! strip    q_ult = su (B/(2 h) + pi + 1)
//! ```
//! with the strength su and thickness h of the layer under a width B. The terms with B/h are the
//! mean of the pressure ridge `2 su x/h` that builds up from the edge inwards between two rough
//! faces; near the edge the pressure is much less, so that a flexible tank floor can squeeze the
//! layer at its edge long before the mean is reached.
//!
//! Meyerhof & Chaplin 1953, Brit. J. Appl. Phys. 4, 20-26 (quoted from memory). For B/h of at least
//! 2; on thicker layers [`super::bearing`] governs.

use super::DIAMETER;
use super::strength::{SLICE_THICKNESS, UNDRAINED_STRENGTH};
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};
use core::f64::consts::PI;

/// Loaded width over thickness of the soft layer.
pub static WIDTH_RATIO: Bounded = Bounded {
    name: "loaded width over thickness of the soft layer",
    unit: "",
    min: 2.0,
    max: 1e5,
    remedy: "Squeezing is for thin layers; under a width of less than twice the thickness use the \
             bearing capacity.",
};

/// Plan of the loaded area.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Plan {
    /// A circle: the whole base.
    Circle,
    /// A strip: an edge, or a long footing.
    Strip,
}

/// Mean pressure, kPa, that squeezes out a soft layer of this strength and thickness.
///
/// # Errors
/// A value outside its range, or a layer too thick for its width.
pub fn squeezing_pressure_kpa(
    plan: Plan,
    width_m: f64,
    thickness_m: f64,
    undrained_strength_kpa: f64,
) -> Result<f64, OutOfRange> {
    squeezing_pressure_kpa_with(plan, width_m, thickness_m, undrained_strength_kpa, &mut Silent)
}

/// As [`squeezing_pressure_kpa`], writing its step.
///
/// # Errors
/// As [`squeezing_pressure_kpa`].
pub fn squeezing_pressure_kpa_with(
    plan: Plan,
    width_m: f64,
    thickness_m: f64,
    undrained_strength_kpa: f64,
    working: &mut impl Working,
) -> Result<f64, OutOfRange> {
    DIAMETER.check(width_m)?;
    SLICE_THICKNESS.check(thickness_m)?;
    UNDRAINED_STRENGTH.check(undrained_strength_kpa)?;
    let ratio = WIDTH_RATIO.check(width_m / thickness_m)?;
    let (ridge, formula) = match plan {
        Plan::Circle => (ratio / 3.0, "su (B/(3 h) + pi + 1)"),
        Plan::Strip => (ratio / 2.0, "su (B/(2 h) + pi + 1)"),
    };
    let value = undrained_strength_kpa * (ridge + PI + 1.0);
    working.step(Step {
        name: "pressure that squeezes out the soft layer",
        value,
        unit: "kPa",
        formula,
        inputs: &[("su", undrained_strength_kpa), ("B", width_m), ("h", thickness_m)],
        source: "Meyerhof & Chaplin 1953",
    });
    Ok(value)
}
