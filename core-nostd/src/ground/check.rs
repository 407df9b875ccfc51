//! What a ground profile may hold: the range of each value, and how the values fit together.

use super::{BaseStiffness, Compressibility, Ground, GroundWater, Layer, Preconsolidation};
use crate::quantity::{Bounded, OutOfRange};
use core::fmt;

/// Thickness of a layer.
pub static LAYER_THICKNESS: Bounded = Bounded {
    name: "layer thickness",
    unit: "m",
    min: 0.01,
    max: 500.0,
    remedy: "Give thicknesses, not depths, from ground level down.",
};
/// Bulk unit weight above the water table; the low end is a light fill.
pub static UNIT_WEIGHT_ABOVE_WATER: Bounded = Bounded {
    name: "unit weight above the water table",
    unit: "kN/m3",
    min: 3.0,
    max: 30.0,
    remedy: "Give the bulk unit weight in kN/m3, not a density in kg/m3 or t/m3.",
};
/// Bulk unit weight below the water table.
pub static UNIT_WEIGHT_BELOW_WATER: Bounded = Bounded {
    name: "unit weight below the water table",
    unit: "kN/m3",
    min: 9.0,
    max: 30.0,
    remedy: "Give the saturated, not the buoyant, unit weight in kN/m3.",
};
/// Unit weight of the ground water, fresh to brine.
pub static WATER_UNIT_WEIGHT: Bounded = Bounded {
    name: "unit weight of the ground water",
    unit: "kN/m3",
    min: 9.5,
    max: 12.0,
    remedy: "Fresh water is 9.81 kN/m3, sea water about 10.05.",
};
/// Depth of the water table.
pub static WATER_TABLE: Bounded = Bounded {
    name: "depth of the water table",
    unit: "m",
    min: -30.0,
    max: 500.0,
    remedy: "Depth below ground level, positive down; negative for free water above the ground.",
};
/// Depth of a point of a measured pore-pressure profile.
pub static WATER_POINT_DEPTH: Bounded = Bounded {
    name: "depth of a pore-pressure point",
    unit: "m",
    min: 0.0,
    max: 500.0,
    remedy: "Depth below ground level, positive down.",
};
/// Pore pressure of a point of a measured profile.
pub static WATER_POINT_PRESSURE: Bounded = Bounded {
    name: "in-situ pore pressure",
    unit: "kPa",
    min: 0.0,
    max: 10_000.0,
    remedy: "Give the pressure before loading in kPa; suction above the water table is not taken.",
};
/// Initial void ratio; the high end is fibrous peat.
pub static VOID_RATIO: Bounded = Bounded {
    name: "void ratio",
    unit: "",
    min: 0.05,
    max: 30.0,
    remedy: "Give e0 as a number, not in percent and not the porosity.",
};
/// Compression index.
pub static COMPRESSION_INDEX: Bounded = Bounded {
    name: "compression index Cc",
    unit: "",
    min: 0.0,
    max: 20.0,
    remedy: "Void ratio per log10 cycle of effective stress.",
};
/// Recompression index.
pub static RECOMPRESSION_INDEX: Bounded = Bounded {
    name: "recompression index Cr",
    unit: "",
    min: 0.0,
    max: 5.0,
    remedy: "Void ratio per log10 cycle of effective stress on the reloading line.",
};
/// Compression ratio CR.
pub static COMPRESSION_RATIO: Bounded = Bounded {
    name: "compression ratio CR",
    unit: "",
    min: 0.0,
    max: 2.0,
    remedy: "Strain per log10 cycle, Cc/(1+e0), as a number and not in percent.",
};
/// Recompression ratio RR.
pub static RECOMPRESSION_RATIO: Bounded = Bounded {
    name: "recompression ratio RR",
    unit: "",
    min: 0.0,
    max: 0.5,
    remedy: "Strain per log10 cycle, Cr/(1+e0), as a number and not in percent.",
};
/// Constrained (oedometer) modulus.
pub static CONSTRAINED_MODULUS: Bounded = Bounded {
    name: "constrained modulus M",
    unit: "kPa",
    min: 10.0,
    max: 1e9,
    remedy: "M = 1/mv in kPa, not in MPa.",
};
/// Overconsolidation ratio.
pub static OVERCONSOLIDATION_RATIO: Bounded = Bounded {
    name: "overconsolidation ratio OCR",
    unit: "",
    min: 1.0,
    max: 1000.0,
    remedy: "1 for normally consolidated soil; soil still consolidating is described by its \
             measured pore-pressure profile.",
};
/// Pre-overburden pressure.
pub static PRE_OVERBURDEN: Bounded = Bounded {
    name: "pre-overburden pressure POP",
    unit: "kPa",
    min: 0.0,
    max: 20_000.0,
    remedy: "Preconsolidation pressure less the in-situ effective stress, kPa.",
};
/// Preconsolidation pressure given as a value.
pub static PRECONSOLIDATION_PRESSURE: Bounded = Bounded {
    name: "preconsolidation pressure",
    unit: "kPa",
    min: 0.1,
    max: 50_000.0,
    remedy: "Give it in kPa.",
};
/// Secondary compression ratio.
pub static SECONDARY_RATIO: Bounded = Bounded {
    name: "secondary compression ratio",
    unit: "",
    min: 0.0,
    max: 0.3,
    remedy: "Strain per log10 cycle of time, C-alpha/(1+e0), as a number and not in percent.",
};
/// Coefficient of consolidation, vertical or horizontal.
pub static CONSOLIDATION_COEFFICIENT: Bounded = Bounded {
    name: "coefficient of consolidation",
    unit: "m2/s",
    min: 1e-12,
    max: 10.0,
    remedy: "Give it in m2/s: 1 m2/year is 3.169e-8 m2/s.",
};
/// Vertical permeability.
pub static PERMEABILITY: Bounded =
    Bounded { name: "permeability", unit: "m/s", min: 1e-15, max: 1.0, remedy: "Give it in m/s." };
/// Young's modulus, undrained or drained.
pub static YOUNG_MODULUS: Bounded = Bounded {
    name: "Young's modulus",
    unit: "kPa",
    min: 10.0,
    max: 1e9,
    remedy: "Give it in kPa, not in MPa.",
};
/// Poisson's ratio.
pub static POISSON_RATIO: Bounded = Bounded {
    name: "Poisson's ratio",
    unit: "",
    min: 0.0,
    max: 0.5,
    remedy: "0.5 is no change of volume.",
};
/// Undrained shear strength.
pub static UNDRAINED_STRENGTH: Bounded = Bounded {
    name: "undrained shear strength",
    unit: "kPa",
    min: 0.0,
    max: 5000.0,
    remedy: "Strength at the top of the layer in kPa; 0 where it is not given.",
};
/// Gradient of undrained shear strength.
pub static STRENGTH_GRADIENT: Bounded = Bounded {
    name: "gradient of undrained shear strength",
    unit: "kPa/m",
    min: -200.0,
    max: 200.0,
    remedy: "Rise of strength per metre of depth.",
};
/// Pore-pressure response to vertical total stress.
pub static PORE_PRESSURE_RESPONSE: Bounded = Bounded {
    name: "pore-pressure response",
    unit: "",
    min: 0.0,
    max: 1.5,
    remedy: "Excess pore pressure per kPa of vertical total stress; 1 for saturated soft clay.",
};

/// Why a ground profile or a depth was refused.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum GroundError {
    /// A value outside its range; the index is that of the layer or pore-pressure point.
    Value(OutOfRange),
    /// There is no layer.
    NoLayer,
    /// A measured pore-pressure profile without a point.
    NoWaterPoint,
    /// The points of the pore-pressure profile do not go down.
    WaterPointsNotDescending {
        /// Position in the list, counted from 0.
        index: usize,
        /// Its depth, m.
        depth_m: f64,
        /// The depth of the point before, m.
        previous_m: f64,
    },
    /// A layer would float: it is no heavier than the ground water.
    NoHeavierThanWater {
        /// Layer, counted from 0.
        layer: usize,
        /// Unit weight below the water table, kN/m3.
        below_water_kn_m3: f64,
        /// Unit weight of the ground water, kN/m3.
        water_kn_m3: f64,
    },
    /// A layer is lighter saturated than it is above the water table.
    LighterBelowWater {
        /// Layer, counted from 0.
        layer: usize,
        /// Unit weight above the water table, kN/m3.
        above_water_kn_m3: f64,
        /// Unit weight below the water table, kN/m3.
        below_water_kn_m3: f64,
    },
    /// Reloading would compress the soil more than first loading.
    RecompressionAboveCompression {
        /// Layer, counted from 0.
        layer: usize,
        /// Recompression index or ratio.
        recompression: f64,
        /// Compression index or ratio.
        compression: f64,
    },
    /// The undrained strength becomes negative within the layer.
    StrengthBelowZero {
        /// Layer, counted from 0.
        layer: usize,
        /// Strength at the base of the layer, kPa.
        at_base_kpa: f64,
    },
    /// The preconsolidation pressure is below the in-situ effective stress in the whole layer.
    PreconsolidationBelowInSitu {
        /// Layer, counted from 0.
        layer: usize,
        /// Preconsolidation pressure, kPa.
        preconsolidation_kpa: f64,
        /// In-situ effective stress at the top of the layer, kPa.
        in_situ_kpa: f64,
    },
    /// The pore pressure lifts the ground.
    Uplift {
        /// Depth, m.
        depth_m: f64,
        /// Total vertical stress, kPa.
        total_kpa: f64,
        /// Pore pressure, kPa.
        pore_kpa: f64,
    },
    /// A depth above ground level or below the lowest layer.
    OutsideProfile {
        /// Depth, m.
        depth_m: f64,
        /// Depth of the base of the lowest layer, m.
        base_m: f64,
    },
}

impl From<OutOfRange> for GroundError {
    fn from(refused: OutOfRange) -> Self {
        Self::Value(refused)
    }
}

impl fmt::Display for GroundError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        // Layers and points are counted from 1 in what people read.
        let number = |index: usize| index.saturating_add(1);
        match *self {
            Self::Value(refused) => refused.fmt(f),
            Self::NoLayer => f.write_str("the ground has no layer. Give at least one."),
            Self::NoWaterPoint => f.write_str(
                "the pore-pressure profile has no point. Give one or state a water table.",
            ),
            Self::WaterPointsNotDescending { index, depth_m, previous_m } => write!(
                f,
                "pore-pressure point {} is at {depth_m} m, not below the point before at \
                 {previous_m} m. List points by rising depth.",
                number(index)
            ),
            Self::NoHeavierThanWater { layer, below_water_kn_m3, water_kn_m3 } => write!(
                f,
                "layer {} weighs {below_water_kn_m3} kN/m3 below the water table, no more than \
                 water ({water_kn_m3} kN/m3). Give the saturated, not the buoyant, unit weight.",
                number(layer)
            ),
            Self::LighterBelowWater { layer, above_water_kn_m3, below_water_kn_m3 } => write!(
                f,
                "layer {} weighs {below_water_kn_m3} kN/m3 below the water table but \
                 {above_water_kn_m3} kN/m3 above it. Saturated soil is the heavier: check the \
                 two values.",
                number(layer)
            ),
            Self::RecompressionAboveCompression { layer, recompression, compression } => write!(
                f,
                "layer {}: recompression {recompression} is above compression {compression}. \
                 Check that Cr and Cc (RR and CR) are not exchanged.",
                number(layer)
            ),
            Self::StrengthBelowZero { layer, at_base_kpa } => write!(
                f,
                "layer {}: undrained strength falls to {at_base_kpa} kPa at its base. Check the \
                 gradient.",
                number(layer)
            ),
            Self::PreconsolidationBelowInSitu { layer, preconsolidation_kpa, in_situ_kpa } => {
                write!(
                    f,
                    "layer {}: preconsolidation pressure {preconsolidation_kpa} kPa is below the \
                     in-situ effective stress {in_situ_kpa} kPa already at its top. Soil still \
                     consolidating is described by its measured pore-pressure profile.",
                    number(layer)
                )
            }
            Self::Uplift { depth_m, total_kpa, pore_kpa } => write!(
                f,
                "pore pressure {pore_kpa} kPa at {depth_m} m leaves no effective stress under the \
                 total stress {total_kpa} kPa. Check unit weights, water table and \
                 pore-pressure points."
            ),
            Self::OutsideProfile { depth_m, base_m } => write!(
                f,
                "depth {depth_m} m is outside the ground profile (0 to {base_m} m). Add a layer \
                 down to this depth or correct the depth."
            ),
        }
    }
}

impl core::error::Error for GroundError {}

impl Ground {
    /// Checks every value and how they fit together.
    ///
    /// # Errors
    /// The first [`GroundError`] found, from the top down.
    pub fn check(&self) -> Result<(), GroundError> {
        super::Profile::new(self).map(|_| ())
    }

    /// Checks what can be said without the in-situ stress.
    pub(super) fn check_values(&self) -> Result<(), GroundError> {
        WATER_UNIT_WEIGHT.check(self.water_unit_weight_kn_m3)?;
        if self.layers.is_empty() {
            return Err(GroundError::NoLayer);
        }
        for (index, layer) in self.layers.iter().enumerate() {
            check_layer(index, layer, self.water_unit_weight_kn_m3)?;
        }
        check_water(&self.water)?;
        if let BaseStiffness::HalfSpace { young_kpa, poisson } = self.base_stiffness {
            YOUNG_MODULUS.check(young_kpa)?;
            POISSON_RATIO.check(poisson)?;
        }
        Ok(())
    }
}

fn check_layer(index: usize, layer: &Layer, water_kn_m3: f64) -> Result<(), GroundError> {
    for (quantity, value) in [
        (&LAYER_THICKNESS, layer.thickness_m),
        (&UNIT_WEIGHT_ABOVE_WATER, layer.unit_weight_above_water_kn_m3),
        (&UNIT_WEIGHT_BELOW_WATER, layer.unit_weight_below_water_kn_m3),
        (&SECONDARY_RATIO, layer.secondary_ratio),
        (&CONSOLIDATION_COEFFICIENT, layer.cv_m2_per_s),
        (&CONSOLIDATION_COEFFICIENT, layer.ch_m2_per_s),
        (&PERMEABILITY, layer.permeability_m_per_s),
        (&YOUNG_MODULUS, layer.young_undrained_kpa),
        (&YOUNG_MODULUS, layer.young_drained_kpa),
        (&POISSON_RATIO, layer.poisson_drained),
        (&UNDRAINED_STRENGTH, layer.undrained_strength_kpa),
        (&STRENGTH_GRADIENT, layer.undrained_strength_gradient_kpa_per_m),
        (&PORE_PRESSURE_RESPONSE, layer.pore_pressure_response),
    ] {
        quantity.check_at(value, index)?;
    }
    layer.compressibility.check(index)?;
    layer.preconsolidation.check(index)?;
    check_weights(index, layer, water_kn_m3)?;
    let at_base_kpa = layer.undrained_strength_kpa
        + layer.undrained_strength_gradient_kpa_per_m * layer.thickness_m;
    if at_base_kpa < 0.0 {
        return Err(GroundError::StrengthBelowZero { layer: index, at_base_kpa });
    }
    Ok(())
}

fn check_weights(index: usize, layer: &Layer, water_kn_m3: f64) -> Result<(), GroundError> {
    let above_water_kn_m3 = layer.unit_weight_above_water_kn_m3;
    let below_water_kn_m3 = layer.unit_weight_below_water_kn_m3;
    if below_water_kn_m3 <= water_kn_m3 {
        return Err(GroundError::NoHeavierThanWater {
            layer: index,
            below_water_kn_m3,
            water_kn_m3,
        });
    }
    if below_water_kn_m3 < above_water_kn_m3 {
        return Err(GroundError::LighterBelowWater {
            layer: index,
            above_water_kn_m3,
            below_water_kn_m3,
        });
    }
    Ok(())
}

impl Compressibility {
    /// Checks the values of one layer, counted from 0.
    ///
    /// # Errors
    /// [`GroundError::Value`] or [`GroundError::RecompressionAboveCompression`].
    pub fn check(&self, layer: usize) -> Result<(), GroundError> {
        let (compression, recompression) = match *self {
            Self::Index { void_ratio, cc, cr } => {
                VOID_RATIO.check_at(void_ratio, layer)?;
                (COMPRESSION_INDEX.check_at(cc, layer)?, RECOMPRESSION_INDEX.check_at(cr, layer)?)
            }
            Self::Ratio { compression_ratio, recompression_ratio } => (
                COMPRESSION_RATIO.check_at(compression_ratio, layer)?,
                RECOMPRESSION_RATIO.check_at(recompression_ratio, layer)?,
            ),
            Self::Modulus { constrained_modulus_kpa } => {
                CONSTRAINED_MODULUS.check_at(constrained_modulus_kpa, layer)?;
                return Ok(());
            }
        };
        if recompression > compression {
            return Err(GroundError::RecompressionAboveCompression {
                layer,
                recompression,
                compression,
            });
        }
        Ok(())
    }
}

impl Preconsolidation {
    fn check(&self, layer: usize) -> Result<(), GroundError> {
        match *self {
            Self::Ocr(ratio) => OVERCONSOLIDATION_RATIO.check_at(ratio, layer)?,
            Self::PopKpa(pop_kpa) => PRE_OVERBURDEN.check_at(pop_kpa, layer)?,
            Self::ValueKpa(value_kpa) => PRECONSOLIDATION_PRESSURE.check_at(value_kpa, layer)?,
        };
        Ok(())
    }
}

fn check_water(water: &GroundWater) -> Result<(), GroundError> {
    WATER_TABLE.check(water.water_table_m())?;
    let GroundWater::Profile { points, .. } = water else { return Ok(()) };
    if points.is_empty() {
        return Err(GroundError::NoWaterPoint);
    }
    let mut previous: Option<f64> = None;
    for (index, &(depth_m, pressure_kpa)) in points.iter().enumerate() {
        WATER_POINT_DEPTH.check_at(depth_m, index)?;
        WATER_POINT_PRESSURE.check_at(pressure_kpa, index)?;
        if let Some(previous_m) = previous.filter(|&above| depth_m <= above) {
            return Err(GroundError::WaterPointsNotDescending { index, depth_m, previous_m });
        }
        previous = Some(depth_m);
    }
    Ok(())
}
