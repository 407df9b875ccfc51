//! Stress, stress history and strength at a depth of a checked ground profile.

use super::{Ground, GroundError, GroundWater, Layer, Preconsolidation};
use crate::config::{MAX_LAYERS, MAX_PROFILE_POINTS};
use crate::working::{Silent, Step, Working};
use heapless::Vec;

/// A depth may miss the base of the lowest layer by this much, m: the rounding of summed
/// thicknesses, and nothing an engineer could mean.
const DEPTH_ROUNDING_M: f64 = 1e-9;

/// Depths at which pore pressure or unit weight bends: the water table, the measured points and
/// the depth where the pressure above the first point has fallen to zero.
pub(crate) type Bends = Vec<f64, { MAX_PROFILE_POINTS + 2 }>;

/// A layer in its place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LayerAt<'g> {
    /// Position from the top, counted from 0.
    pub index: usize,
    /// The layer.
    pub layer: &'g Layer,
    /// Depth of its top, m.
    pub top_m: f64,
    /// Depth of its base, m.
    pub base_m: f64,
    total_at_top_kpa: f64,
}

/// Vertical stress before loading.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct InSitu {
    /// Total vertical stress, kPa.
    pub total_kpa: f64,
    /// Pore pressure, kPa.
    pub pore_kpa: f64,
    /// Effective vertical stress, kPa.
    pub effective_kpa: f64,
    /// Preconsolidation pressure, kPa.
    pub preconsolidation_kpa: f64,
}

/// A ground profile that passed every check, ready to be asked.
///
/// # Conventions
/// - Depth is below ground level, positive down. A depth on an interface belongs to the layer
///   below it, the base of the profile to the lowest layer.
/// - Below the lowest layer nothing is known: [`GroundError::OutsideProfile`], never a guess.
/// - Above the water table pore pressure is zero: suction is not counted.
/// - A negative `water_table_m` is free water standing on the ground: it adds the same to total
///   stress and to pore pressure.
#[derive(Debug, Clone)]
pub struct Profile<'g> {
    ground: &'g Ground,
    layers: Vec<LayerAt<'g>, MAX_LAYERS>,
    base_m: f64,
}

impl<'g> Profile<'g> {
    /// Checks a ground profile and prepares it.
    ///
    /// # Errors
    /// The first [`GroundError`] found: a value out of range, values that contradict each other,
    /// or pore pressure that leaves no effective stress.
    pub fn new(ground: &'g Ground) -> Result<Self, GroundError> {
        ground.check_values()?;
        let mut profile = Self { ground, layers: Vec::new(), base_m: 0.0 };
        // Free water on the ground weighs on it.
        let mut total_kpa = ground.water_unit_weight_kn_m3 * (-profile.water_table_m()).max(0.0);
        for (index, layer) in ground.layers.iter().enumerate() {
            let top_m = profile.base_m;
            let base_m = top_m + layer.thickness_m;
            let at = LayerAt { index, layer, top_m, base_m, total_at_top_kpa: total_kpa };
            total_kpa = profile.total_in(&at, base_m);
            profile.base_m = base_m;
            // As many places as the ground itself may have layers.
            if profile.layers.push(at).is_err() {
                return Err(GroundError::OutsideProfile { depth_m: base_m, base_m: top_m });
            }
        }
        profile.check_effective_stress()?;
        profile.check_preconsolidation()?;
        Ok(profile)
    }

    /// The ground it was made from.
    #[must_use]
    pub fn ground(&self) -> &'g Ground {
        self.ground
    }

    /// Layers from the top down, in their places.
    #[must_use]
    pub fn layers(&self) -> &[LayerAt<'g>] {
        &self.layers
    }

    /// Depth of the base of the lowest layer, m.
    #[must_use]
    pub fn base_m(&self) -> f64 {
        self.base_m
    }

    /// Depth of the water table, m.
    #[must_use]
    pub fn water_table_m(&self) -> f64 {
        self.ground.water.water_table_m()
    }

    /// The layer at a depth, m; on an interface the lower one.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`] above ground level or below the lowest layer.
    pub fn layer_at(&self, depth_m: f64) -> Result<LayerAt<'g>, GroundError> {
        let outside = GroundError::OutsideProfile { depth_m, base_m: self.base_m };
        // Written so that NaN fails.
        if !(depth_m >= 0.0 && depth_m <= self.base_m + DEPTH_ROUNDING_M) {
            return Err(outside);
        }
        self.layers
            .iter()
            .find(|at| depth_m < at.base_m)
            .or_else(|| self.layers.last())
            .copied()
            .ok_or(outside)
    }

    /// Total vertical stress before loading at a depth, kPa.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn total_stress_kpa(&self, depth_m: f64) -> Result<f64, GroundError> {
        self.total_stress_kpa_with(depth_m, &mut Silent)
    }

    /// As [`Profile::total_stress_kpa`], writing a step for each layer.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn total_stress_kpa_with(
        &self,
        depth_m: f64,
        working: &mut impl Working,
    ) -> Result<f64, GroundError> {
        let here = self.layer_at(depth_m)?;
        let total_kpa = self.total_in(&here, depth_m);
        if working.wanted() {
            self.write_total(&here, depth_m, working);
        }
        Ok(total_kpa)
    }

    /// Pore pressure before loading at a depth, kPa.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn pore_pressure_kpa(&self, depth_m: f64) -> Result<f64, GroundError> {
        self.pore_pressure_kpa_with(depth_m, &mut Silent)
    }

    /// As [`Profile::pore_pressure_kpa`], writing its step.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn pore_pressure_kpa_with(
        &self,
        depth_m: f64,
        working: &mut impl Working,
    ) -> Result<f64, GroundError> {
        self.layer_at(depth_m)?;
        let value = self.pore_at(depth_m);
        let (formula, z_w) = match &self.ground.water {
            GroundWater::Hydrostatic { water_table_m } => {
                ("u0 = gamma_w (z - z_w), not below 0", *water_table_m)
            }
            GroundWater::Profile { points, .. } => (
                "u0: linear between measured points, gamma_w beyond them, not below 0; z_w first point",
                points.first().map_or(0.0, |point| point.0),
            ),
        };
        working.step(Step {
            name: "in-situ pore pressure",
            value,
            unit: "kPa",
            formula,
            inputs: &[
                ("gamma_w", self.ground.water_unit_weight_kn_m3),
                ("z", depth_m),
                ("z_w", z_w),
            ],
            source: "",
        });
        Ok(value)
    }

    /// Effective vertical stress before loading at a depth, kPa (Terzaghi).
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn effective_stress_kpa(&self, depth_m: f64) -> Result<f64, GroundError> {
        self.effective_stress_kpa_with(depth_m, &mut Silent)
    }

    /// As [`Profile::effective_stress_kpa`], writing its steps.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn effective_stress_kpa_with(
        &self,
        depth_m: f64,
        working: &mut impl Working,
    ) -> Result<f64, GroundError> {
        let sigma = self.total_stress_kpa_with(depth_m, working)?;
        let u = self.pore_pressure_kpa_with(depth_m, working)?;
        let value = effective(sigma, u);
        working.step(Step {
            name: "in-situ effective stress",
            value,
            unit: "kPa",
            formula: "sigma_v0' = sigma_v0 - u0",
            inputs: &[("sigma_v0", sigma), ("u0", u)],
            source: "Terzaghi 1925",
        });
        Ok(value)
    }

    /// Preconsolidation pressure at a depth, kPa.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn preconsolidation_kpa(&self, depth_m: f64) -> Result<f64, GroundError> {
        self.preconsolidation_kpa_with(depth_m, &mut Silent)
    }

    /// As [`Profile::preconsolidation_kpa`], writing its steps.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn preconsolidation_kpa_with(
        &self,
        depth_m: f64,
        working: &mut impl Working,
    ) -> Result<f64, GroundError> {
        let rule = self.layer_at(depth_m)?.layer.preconsolidation;
        let in_situ = self.effective_stress_kpa_with(depth_m, working)?;
        let value = rule.pressure_kpa(in_situ);
        let (formula, given) = match rule {
            Preconsolidation::Ocr(ratio) => ("sigma_p' = OCR sigma_v0'", ("OCR", ratio)),
            Preconsolidation::PopKpa(pop) => ("sigma_p' = POP + sigma_v0'", ("POP", pop)),
            Preconsolidation::ValueKpa(given) => {
                ("sigma_p' = max(value, sigma_v0')", ("value", given))
            }
        };
        working.step(Step {
            name: "preconsolidation pressure",
            value,
            unit: "kPa",
            formula,
            inputs: &[given, ("sigma_v0'", in_situ)],
            source: "",
        });
        Ok(value)
    }

    /// Undrained shear strength at a depth, kPa; none where the layer is drained or its strength
    /// is not given (0 at the top with no gradient).
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn undrained_strength_kpa(&self, depth_m: f64) -> Result<Option<f64>, GroundError> {
        self.undrained_strength_kpa_with(depth_m, &mut Silent)
    }

    /// As [`Profile::undrained_strength_kpa`], writing its step.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn undrained_strength_kpa_with(
        &self,
        depth_m: f64,
        working: &mut impl Working,
    ) -> Result<Option<f64>, GroundError> {
        let at = self.layer_at(depth_m)?;
        let s_top = at.layer.undrained_strength_kpa;
        let k = at.layer.undrained_strength_gradient_kpa_per_m;
        if at.layer.drained || (s_top == 0.0 && k == 0.0) {
            return Ok(None);
        }
        let value = s_top + k * (depth_m - at.top_m);
        working.step(Step {
            name: "undrained shear strength",
            value,
            unit: "kPa",
            formula: "s_u = s_top + k (z - z_top)",
            inputs: &[("s_top", s_top), ("k", k), ("z", depth_m), ("z_top", at.top_m)],
            source: "",
        });
        Ok(Some(value))
    }

    /// All of the in-situ stress at a depth.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn in_situ(&self, depth_m: f64) -> Result<InSitu, GroundError> {
        Ok(self.in_situ_in(&self.layer_at(depth_m)?, depth_m))
    }

    /// As [`Profile::in_situ`], with the stress history of this layer even on its base, where the
    /// depth alone would mean the layer below. The depth is held within the layer.
    #[must_use]
    pub fn in_situ_in(&self, at: &LayerAt<'_>, depth_m: f64) -> InSitu {
        let depth_m = depth_m.max(at.top_m).min(at.base_m);
        let total_kpa = self.total_in(at, depth_m);
        let pore_kpa = self.pore_at(depth_m);
        let effective_kpa = effective(total_kpa, pore_kpa);
        let preconsolidation_kpa = at.layer.preconsolidation.pressure_kpa(effective_kpa);
        InSitu { total_kpa, pore_kpa, effective_kpa, preconsolidation_kpa }
    }

    /// Depths at which the in-situ effective stress bends inside layers.
    pub(crate) fn bends(&self) -> Bends {
        let mut bends = Bends::new();
        // Room for all of them by the type's length.
        let _ = bends.push(self.water_table_m());
        if let GroundWater::Profile { points, .. } = &self.ground.water {
            if let Some(&(depth_m, pressure_kpa)) = points.first() {
                let _ = bends.push(depth_m - pressure_kpa / self.ground.water_unit_weight_kn_m3);
            }
            for &(depth_m, _) in points {
                let _ = bends.push(depth_m);
            }
        }
        bends
    }

    fn total_in(&self, at: &LayerAt<'_>, depth_m: f64) -> f64 {
        let (moist_m, wet_m) = self.parts(at, depth_m);
        at.total_at_top_kpa
            + at.layer.unit_weight_above_water_kn_m3 * moist_m
            + at.layer.unit_weight_below_water_kn_m3 * wet_m
    }

    /// Thickness from the layer's top to the depth, above and below the water table, m.
    fn parts(&self, at: &LayerAt<'_>, depth_m: f64) -> (f64, f64) {
        let all_m = (depth_m - at.top_m).max(0.0);
        let moist_m = (self.water_table_m() - at.top_m).max(0.0).min(all_m);
        (moist_m, all_m - moist_m)
    }

    fn pore_at(&self, depth_m: f64) -> f64 {
        let gamma_w = self.ground.water_unit_weight_kn_m3;
        let points = match &self.ground.water {
            GroundWater::Hydrostatic { water_table_m } => {
                return (gamma_w * (depth_m - water_table_m)).max(0.0);
            }
            GroundWater::Profile { points, .. } => points,
        };
        let mut above: Option<(f64, f64)> = None;
        for &(z, u) in points {
            if depth_m <= z {
                return match above {
                    None => (u - gamma_w * (z - depth_m)).max(0.0),
                    Some((z_above, u_above)) => {
                        u_above + (u - u_above) * (depth_m - z_above) / (z - z_above)
                    }
                };
            }
            above = Some((z, u));
        }
        above.map_or(0.0, |(z, u)| u + gamma_w * (depth_m - z))
    }

    /// Effective stress is linear between bends, so that looking at them is enough.
    fn check_effective_stress(&self) -> Result<(), GroundError> {
        for at in &self.layers {
            for depth_m in self
                .bends()
                .into_iter()
                .filter(|&bend| bend > at.top_m && bend < at.base_m)
                .chain([at.top_m, at.base_m])
            {
                let total_kpa = self.total_in(at, depth_m);
                let pore_kpa = self.pore_at(depth_m);
                let lifted = if depth_m > 0.0 {
                    total_kpa <= pore_kpa
                } else {
                    // At ground level both are the weight of the free water, to rounding.
                    pore_kpa - total_kpa > 1e-9 * (1.0 + total_kpa)
                };
                if lifted {
                    return Err(GroundError::Uplift { depth_m, total_kpa, pore_kpa });
                }
            }
        }
        Ok(())
    }

    fn check_preconsolidation(&self) -> Result<(), GroundError> {
        for at in &self.layers {
            let in_situ_kpa = self.in_situ_in(at, at.top_m).effective_kpa;
            match at.layer.preconsolidation {
                Preconsolidation::ValueKpa(preconsolidation_kpa)
                    if preconsolidation_kpa < in_situ_kpa =>
                {
                    return Err(GroundError::PreconsolidationBelowInSitu {
                        layer: at.index,
                        preconsolidation_kpa,
                        in_situ_kpa,
                    });
                }
                _ => {}
            }
        }
        Ok(())
    }

    fn write_total(&self, here: &LayerAt<'_>, depth_m: f64, working: &mut impl Working) {
        for at in self.layers.iter().take(here.index.saturating_add(1)) {
            let base_m = at.base_m.min(depth_m);
            let (moist_m, wet_m) = self.parts(at, base_m);
            working.step(Step {
                name: "total vertical stress down to the depth or the base of the layer",
                value: self.total_in(at, base_m),
                unit: "kPa",
                formula: "sigma = sigma_top + gamma_above h_above + gamma_below h_below",
                inputs: &[
                    ("layer", at.index as f64 + 1.0),
                    ("sigma_top", at.total_at_top_kpa),
                    ("gamma_above", at.layer.unit_weight_above_water_kn_m3),
                    ("h_above", moist_m),
                    ("gamma_below", at.layer.unit_weight_below_water_kn_m3),
                    ("h_below", wet_m),
                ],
                source: "",
            });
        }
    }
}

/// Never below zero: the checks leave only rounding at ground level to cut off.
fn effective(total_kpa: f64, pore_kpa: f64) -> f64 {
    (total_kpa - pore_kpa).max(0.0)
}
