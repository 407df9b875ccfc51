//! Immediate settlement: saturated soil changes shape as the load comes, before any water leaves.
//!
//! The strain of a homogeneous half-space with each layer's own modulus, summed over the layers
//! (Steinbrenner's way of taking a half-space apart, 1934): a layer contributes the difference of
//! the half-space displacement between its top and its base.
//!
//! # Assumptions
//! Elastic soil far from failure; the stress distribution of the homogeneous half-space, which
//! layers of unlike stiffness change. Under the centre of a disc on one layer over a rough rigid
//! base the result is up to 6 % too small where the layer is thicker than the disc's radius; below
//! that it becomes too large (36 % at half the radius), and the exact layered solution is the
//! better one.

use super::SettlementError;
use crate::config::MAX_LAYERS;
use crate::ground::{BaseStiffness, Profile};
use crate::working::{Silent, Step, Working};
use heapless::Vec;

/// Poisson's ratio of saturated soil that has no time to drain.
pub const POISSON_UNDRAINED: f64 = 0.5;

/// Immediate settlement with the share of each layer.
#[derive(Debug, Clone, PartialEq)]
pub struct ImmediateSettlement {
    /// Settlement of the level asked for, m.
    pub settlement_m: f64,
    /// Share of each layer of the profile, from the top, m; 0 for drained layers.
    pub by_layer_m: Vec<f64, MAX_LAYERS>,
    /// Share of the ground below the lowest layer, m; 0 where it is rigid.
    pub below_m: f64,
}

/// Immediate settlement of the level `from_depth_m`.
///
/// `half_space` gives the settlement of a homogeneous half-space under the load at a depth below
/// *ground* level, m, and a Poisson's ratio, times Young's modulus: kPa m. It is asked for at the
/// level itself, at layer boundaries below it and at the base of the profile.
///
/// Drained layers are left out: their compression comes with the load too, but is counted in the
/// primary settlement, and must not be counted twice.
///
/// # Errors
/// [`SettlementError::Ground`] for a depth outside the profile,
/// [`SettlementError::LoadEffectNotFinite`].
///
/// # Examples
/// ```
/// # use brimstead_core::ground::Profile;
/// # use brimstead_core::settlement::{SettlementError, immediate::immediate_settlement};
/// use brimstead_core::stress::Disc;
/// /// Under the axis of a tank of 20 m radius with 150 kPa at 1 m depth.
/// fn under_axis(profile: &Profile<'_>) -> Result<f64, SettlementError> {
///     // Any modulus will do: the displacement times it is asked for.
///     let young_kpa = 1000.0;
///     let half_space = |depth_m: f64, poisson: f64| {
///         let moved = Disc::new(20.0, 150.0, poisson)
///             .and_then(|disc| disc.displacement_at(young_kpa, 0.0, depth_m - 1.0));
///         moved.map_or(f64::NAN, |moved| moved.settlement_m * young_kpa)
///     };
///     Ok(immediate_settlement(profile, half_space, 1.0)?.settlement_m)
/// }
/// ```
pub fn immediate_settlement(
    profile: &Profile<'_>,
    half_space: impl Fn(f64, f64) -> f64,
    from_depth_m: f64,
) -> Result<ImmediateSettlement, SettlementError> {
    immediate_settlement_with(profile, half_space, from_depth_m, &mut Silent)
}

/// As [`immediate_settlement`], writing a step for each layer.
///
/// # Errors
/// As [`immediate_settlement`].
pub fn immediate_settlement_with(
    profile: &Profile<'_>,
    half_space: impl Fn(f64, f64) -> f64,
    from_depth_m: f64,
    working: &mut impl Working,
) -> Result<ImmediateSettlement, SettlementError> {
    profile.layer_at(from_depth_m)?;
    let moved =
        |depth_m: f64, poisson: f64| super::finite_at(half_space(depth_m, poisson), depth_m);
    let mut settlement_m = 0.0;
    let mut by_layer_m = Vec::new();
    for at in profile.layers() {
        let top_m = at.top_m.max(from_depth_m);
        let mut layer_m = 0.0;
        if top_m < at.base_m && !at.layer.drained {
            let young = at.layer.young_undrained_kpa;
            let at_top = moved(top_m, POISSON_UNDRAINED)?;
            let at_base = moved(at.base_m, POISSON_UNDRAINED)?;
            layer_m = (at_top - at_base) / young;
            working.step(Step {
                name: "immediate settlement of the layer",
                value: layer_m,
                unit: "m",
                formula: "(w E at z_top - w E at z_base)/E_u, half-space with Poisson's ratio 1/2",
                inputs: &[
                    ("layer", at.index as f64 + 1.0),
                    ("w E at z_top", at_top),
                    ("w E at z_base", at_base),
                    ("E_u", young),
                    ("z_top", top_m),
                    ("z_base", at.base_m),
                ],
                source: "strain summation after Steinbrenner 1934",
            });
        }
        settlement_m += layer_m;
        // As many places as the profile has layers.
        let _ = by_layer_m.push(layer_m);
    }
    let below_m = match profile.ground().base_stiffness {
        BaseStiffness::Rigid => 0.0,
        BaseStiffness::HalfSpace { young_kpa, poisson } => {
            let at_base = moved(profile.base_m(), poisson)?;
            let value = at_base / young_kpa;
            working.step(Step {
                name: "settlement of the ground below the lowest layer",
                value,
                unit: "m",
                formula: "w E at z_base / E",
                inputs: &[
                    ("w E at z_base", at_base),
                    ("E", young_kpa),
                    ("z_base", profile.base_m()),
                ],
                source: "",
            });
            value
        }
    };
    settlement_m += below_m;
    working.step(Step {
        name: "immediate settlement",
        value: settlement_m,
        unit: "m",
        formula: "sum over layers and the ground below them",
        inputs: &[],
        source: "",
    });
    Ok(ImmediateSettlement { settlement_m, by_layer_m, below_m })
}
