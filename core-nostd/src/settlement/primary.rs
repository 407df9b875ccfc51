//! Primary settlement at its end: strain of the in-situ state loaded by a stress increment,
//! summed over depth.

use super::SettlementError;
use super::quadrature::integrate;
use super::strain::StressStrain;
use crate::config::MAX_LAYERS;
use crate::ground::{Compressibility, LayerAt, Profile};
use crate::quantity::Bounded;
use crate::working::{Silent, Step, Working};
use heapless::Vec;

/// Error that a settlement may have from its integration over depth.
pub static ERROR_TARGET: Bounded = Bounded {
    name: "error target of the integration",
    unit: "m",
    min: 1e-12,
    max: 0.1,
    remedy: "0.0001 m is plenty beside the uncertainty of the ground.",
};
/// Thickness of fixed sublayers.
pub static SUBLAYER_THICKNESS: Bounded = Bounded {
    name: "sublayer thickness",
    unit: "m",
    min: 0.01,
    max: 100.0,
    remedy: "0.5 to 1 m is usual.",
};

/// Parts of a stretch between the looks for the depth at which the stress path passes the
/// preconsolidation pressure.
const LOOKS: u32 = 8;
/// The first and the last look stand this part of the stretch inside its ends, where nothing may
/// be asked for. Further in, the bend would slip past the outermost node of the quadrature (0.4 %
/// of the stretch) and past its error bound.
const FIRST_LOOK: f64 = 1e-6;

/// Primary settlement with the share of each layer.
#[derive(Debug, Clone, PartialEq)]
pub struct PrimarySettlement {
    /// Settlement of the level asked for, m.
    pub settlement_m: f64,
    /// Share of each layer of the profile, from the top, m.
    pub by_layer_m: Vec<f64, MAX_LAYERS>,
    /// Bound on the error of the integration over depth, m; none for fixed sublayers, whose error
    /// is not known.
    pub error_m: Option<f64>,
}

/// Primary settlement at its end of the level `from_depth_m`, with error control.
///
/// `increment` gives the increment of vertical effective stress, kPa, at a depth below *ground*
/// level, m (a stress below a loaded level is asked for at the depth less that of the level). It is
/// never asked for at a layer boundary or at `from_depth_m` itself. It may be negative (relief).
///
/// # Method
/// Strain ([`StressStrain::strain_for_increment`]) integrated over each layer by an adaptive
/// Gauss-Kronrod rule, cut where the in-situ stress bends and where the stress path passes the
/// preconsolidation pressure; the error targets of the stretches add up to `error_target_m`.
///
/// # Errors
/// [`SettlementError::Ground`] for a depth outside the profile,
/// [`SettlementError::LoadEffectNotFinite`], [`SettlementError::NotConverged`], or
/// [`SettlementError::Value`] for an error target out of range.
pub fn primary_settlement(
    profile: &Profile<'_>,
    increment: impl Fn(f64) -> f64,
    from_depth_m: f64,
    error_target_m: f64,
) -> Result<PrimarySettlement, SettlementError> {
    primary_settlement_with(profile, increment, from_depth_m, error_target_m, &mut Silent)
}

/// As [`primary_settlement`], writing a step for each layer and each depth at which the
/// preconsolidation pressure is passed. For a sheet to follow with a calculator take
/// [`primary_settlement_by_sublayers_with`].
///
/// # Errors
/// As [`primary_settlement`].
pub fn primary_settlement_with(
    profile: &Profile<'_>,
    increment: impl Fn(f64) -> f64,
    from_depth_m: f64,
    error_target_m: f64,
    working: &mut impl Working,
) -> Result<PrimarySettlement, SettlementError> {
    ERROR_TARGET.check(error_target_m)?;
    profile.layer_at(from_depth_m)?;
    let column = Column {
        profile,
        increment: finite(increment),
        target_per_m: error_target_m / (profile.base_m() - from_depth_m).max(f64::MIN_POSITIVE),
    };
    let mut error_m = 0.0;
    let total = sum_layers(profile, from_depth_m, working, |at, top_m, working| {
        let (settlement_m, layer_error_m) = column.layer(at, top_m, working)?;
        error_m += layer_error_m;
        Ok(settlement_m)
    })?;
    Ok(PrimarySettlement { error_m: Some(error_m), ..total })
}

/// Primary settlement at its end by fixed sublayers with mid-point values: the sum an engineer
/// does by hand. Each layer below `from_depth_m` is cut into equal sublayers not thicker than
/// `sublayer_m`.
///
/// # Errors
/// As [`primary_settlement`], except that it cannot fail to converge; its error is not known.
pub fn primary_settlement_by_sublayers(
    profile: &Profile<'_>,
    increment: impl Fn(f64) -> f64,
    from_depth_m: f64,
    sublayer_m: f64,
) -> Result<PrimarySettlement, SettlementError> {
    primary_settlement_by_sublayers_with(profile, increment, from_depth_m, sublayer_m, &mut Silent)
}

/// As [`primary_settlement_by_sublayers`], writing the whole sheet: for each sublayer the in-situ
/// stress, preconsolidation pressure, increment, strain and settlement.
///
/// # Errors
/// As [`primary_settlement_by_sublayers`].
pub fn primary_settlement_by_sublayers_with(
    profile: &Profile<'_>,
    increment: impl Fn(f64) -> f64,
    from_depth_m: f64,
    sublayer_m: f64,
    working: &mut impl Working,
) -> Result<PrimarySettlement, SettlementError> {
    SUBLAYER_THICKNESS.check(sublayer_m)?;
    profile.layer_at(from_depth_m)?;
    let increment = finite(increment);
    sum_layers(profile, from_depth_m, working, |at, top_m, working| {
        let thickness_m = at.base_m - top_m;
        // The rounding of a thickness must not cost one sublayer more.
        let count = libm::ceil(thickness_m / sublayer_m - 1e-9).max(1.0);
        let slice_m = thickness_m / count;
        let mut layer_m = 0.0;
        for number in 0..count as u32 {
            let depth_m = top_m + (f64::from(number) + 0.5) * slice_m;
            layer_m += sublayer(profile, at, depth_m, slice_m, &increment, working)?;
        }
        Ok(layer_m)
    })
}

/// Adds up what the layers below a depth give.
fn sum_layers<W: Working>(
    profile: &Profile<'_>,
    from_depth_m: f64,
    working: &mut W,
    mut of_layer: impl FnMut(&LayerAt<'_>, f64, &mut W) -> Result<f64, SettlementError>,
) -> Result<PrimarySettlement, SettlementError> {
    let mut settlement_m = 0.0;
    let mut by_layer_m = Vec::new();
    for at in profile.layers() {
        let top_m = at.top_m.max(from_depth_m);
        let layer_m = if top_m < at.base_m { of_layer(at, top_m, working)? } else { 0.0 };
        settlement_m += layer_m;
        working.step(Step {
            name: "primary settlement of the layer",
            value: layer_m,
            unit: "m",
            formula: "sum or integral of strain over z_top to z_base",
            inputs: &[
                ("layer", at.index as f64 + 1.0),
                ("z_top", top_m.min(at.base_m)),
                ("z_base", at.base_m),
            ],
            source: "",
        });
        // As many places as the profile has layers.
        let _ = by_layer_m.push(layer_m);
    }
    working.step(Step {
        name: "primary settlement",
        value: settlement_m,
        unit: "m",
        formula: "sum over layers",
        inputs: &[],
        source: "",
    });
    Ok(PrimarySettlement { settlement_m, by_layer_m, error_m: None })
}

/// Refuses an increment that is not a number.
fn finite(increment: impl Fn(f64) -> f64) -> impl Fn(f64) -> Result<f64, SettlementError> {
    move |depth_m| {
        let value = increment(depth_m);
        super::finite_at(value, depth_m)
    }
}

fn sublayer(
    profile: &Profile<'_>,
    at: &LayerAt<'_>,
    depth_m: f64,
    thickness_m: f64,
    increment: &impl Fn(f64) -> Result<f64, SettlementError>,
    working: &mut impl Working,
) -> Result<f64, SettlementError> {
    let law = StressStrain::in_layer(profile, at, depth_m);
    let increment_kpa = increment(depth_m)?;
    if working.wanted() {
        // On an interface the depth alone would mean the layer below; a mid-point is never there.
        profile.preconsolidation_kpa_with(depth_m, working)?;
    }
    let s0 = law.in_situ_kpa();
    working.step(Step {
        name: "effective stress after loading at the middle of the sublayer",
        value: s0 + increment_kpa,
        unit: "kPa",
        formula: "s = s0 + increment",
        inputs: &[("z", depth_m), ("s0", s0), ("increment", increment_kpa)],
        source: "",
    });
    let strain = law.strain_at_with(s0 + increment_kpa, 0.0, working);
    let value = strain * thickness_m;
    working.step(Step {
        name: "primary settlement of the sublayer",
        value,
        unit: "m",
        formula: "strain h",
        inputs: &[("strain", strain), ("h", thickness_m)],
        source: "",
    });
    Ok(value)
}

struct Column<'p, 'g, F> {
    profile: &'p Profile<'g>,
    increment: F,
    target_per_m: f64,
}

impl<F: Fn(f64) -> Result<f64, SettlementError>> Column<'_, '_, F> {
    /// Settlement and error bound of one layer below `top_m`, m.
    fn layer(
        &self,
        at: &LayerAt<'_>,
        top_m: f64,
        working: &mut impl Working,
    ) -> Result<(f64, f64), SettlementError> {
        let mut sum = (0.0, 0.0);
        let bends = self.profile.bends();
        let mut from = top_m;
        // Each round ends at the next bend or, last, at the base.
        while from < at.base_m {
            let to = bends.iter().copied().filter(|bend| *bend > from).fold(at.base_m, f64::min);
            self.stretch(at, from, to, &mut sum, working)?;
            from = to;
        }
        Ok(sum)
    }

    /// Integrates a stretch without bend of the in-situ stress, parting it where the stress path
    /// passes the preconsolidation pressure.
    fn stretch(
        &self,
        at: &LayerAt<'_>,
        from: f64,
        to: f64,
        sum: &mut (f64, f64),
        working: &mut impl Working,
    ) -> Result<(), SettlementError> {
        let mut start = from;
        let mut last: Option<(f64, f64)> = None;
        // A linear law has no such depth.
        let linear = matches!(at.layer.compressibility, Compressibility::Modulus { .. });
        let looks = if linear { 0 } else { LOOKS + 1 };
        for look in 0..looks {
            let part = f64::from(look) / f64::from(LOOKS);
            let depth_m = from + (to - from) * part.clamp(FIRST_LOOK, 1.0 - FIRST_LOOK);
            let beyond_kpa = self.beyond_preconsolidation_kpa(at, depth_m)?;
            if let Some(above) = last.filter(|above| (above.1 < 0.0) != (beyond_kpa < 0.0)) {
                let crossing_m = self.crossing(at, above, (depth_m, beyond_kpa))?;
                working.step(Step {
                    name: "depth at which the stress path passes the preconsolidation pressure",
                    value: crossing_m,
                    unit: "m",
                    formula: "s0 + increment = sp",
                    inputs: &[("layer", at.index as f64 + 1.0)],
                    source: "",
                });
                self.piece(at, start, crossing_m, sum)?;
                start = crossing_m;
            }
            last = Some((depth_m, beyond_kpa));
        }
        self.piece(at, start, to, sum)
    }

    fn piece(
        &self,
        at: &LayerAt<'_>,
        from: f64,
        to: f64,
        sum: &mut (f64, f64),
    ) -> Result<(), SettlementError> {
        let mut strain = |depth_m: f64| {
            let law = StressStrain::in_layer(self.profile, at, depth_m);
            Ok(law.strain_for_increment((self.increment)(depth_m)?))
        };
        let integral = integrate(&mut strain, from, to, self.target_per_m * (to - from))?;
        sum.0 += integral.value;
        sum.1 += integral.error;
        Ok(())
    }

    /// Effective stress after loading less preconsolidation pressure, kPa.
    fn beyond_preconsolidation_kpa(
        &self,
        at: &LayerAt<'_>,
        depth_m: f64,
    ) -> Result<f64, SettlementError> {
        let in_situ = self.profile.in_situ_in(at, depth_m);
        Ok(in_situ.effective_kpa + (self.increment)(depth_m)? - in_situ.preconsolidation_kpa)
    }

    /// Depth at which the stress path passes the preconsolidation pressure: ten halvings and a
    /// straight line. A cut that misses the bend by d costs an error of the order of d squared.
    fn crossing(
        &self,
        at: &LayerAt<'_>,
        mut above: (f64, f64),
        mut below: (f64, f64),
    ) -> Result<f64, SettlementError> {
        for _ in 0..10 {
            let depth_m = 0.5 * (above.0 + below.0);
            let here_kpa = self.beyond_preconsolidation_kpa(at, depth_m)?;
            let side = if (here_kpa < 0.0) == (above.1 < 0.0) { &mut above } else { &mut below };
            *side = (depth_m, here_kpa);
        }
        // One end is negative and the other is not, so that the difference is not zero.
        let share = above.1 / (above.1 - below.1);
        Ok(above.0 + share * (below.0 - above.0))
    }
}
