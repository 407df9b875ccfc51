//! Layers, ground water, in-situ stress and stress history.
//!
//! [`Ground`] is what a site file says. [`Profile::new`] is the door: it checks every value and
//! how they fit together, and then answers for stress, stress history and strength at a depth.

mod check;
mod profile;

pub use check::*;
pub use profile::{InSitu, LayerAt, Profile};

use crate::config::{MAX_LAYERS, MAX_PROFILE_POINTS, Name};
use heapless::Vec;
use serde::{Deserialize, Serialize};

/// How a layer compresses in one dimension.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Compressibility {
    /// Compression and recompression index with the initial void ratio: strain is
    /// `Cc/(1+e0) log10(s1/s0)`.
    Index {
        /// Initial void ratio e0.
        void_ratio: f64,
        /// Compression index Cc, per log10 cycle of effective stress.
        cc: f64,
        /// Recompression (swelling) index Cr.
        cr: f64,
    },
    /// The same by strain: CR = Cc/(1+e0), RR = Cr/(1+e0).
    Ratio {
        /// Compression ratio CR.
        compression_ratio: f64,
        /// Recompression ratio RR.
        recompression_ratio: f64,
    },
    /// Constant constrained modulus M = 1/mv, for sands and stiff layers.
    Modulus {
        /// Constrained modulus, kPa.
        constrained_modulus_kpa: f64,
    },
}

/// How the preconsolidation pressure of a layer is given.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Preconsolidation {
    /// Overconsolidation ratio: sigma_p' = OCR sigma_v0'.
    Ocr(f64),
    /// Pre-overburden pressure: sigma_p' = sigma_v0' + POP, kPa.
    PopKpa(f64),
    /// The pressure itself, constant over the layer, kPa. Below the depth at which sigma_v0'
    /// reaches it the soil is normally consolidated: sigma_p' = sigma_v0'.
    ValueKpa(f64),
}

impl Preconsolidation {
    /// Preconsolidation pressure, kPa, where the in-situ effective stress is this, kPa.
    #[must_use]
    pub fn pressure_kpa(&self, effective_kpa: f64) -> f64 {
        match *self {
            Self::Ocr(ratio) => ratio * effective_kpa,
            Self::PopKpa(pop_kpa) => effective_kpa + pop_kpa,
            Self::ValueKpa(value_kpa) => value_kpa.max(effective_kpa),
        }
    }
}

/// One horizontal layer. Values are those of the best estimate; uncertainty is a matter of the
/// expectation.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Layer {
    /// Name on drawings and in messages.
    pub name: Name,
    /// Thickness, m.
    pub thickness_m: f64,
    /// Bulk unit weight above the water table, kN/m3.
    pub unit_weight_above_water_kn_m3: f64,
    /// Bulk (saturated) unit weight below the water table, kN/m3.
    pub unit_weight_below_water_kn_m3: f64,
    /// One-dimensional compressibility.
    pub compressibility: Compressibility,
    /// Stress history.
    pub preconsolidation: Preconsolidation,
    /// Secondary compression as strain per log10 cycle of time, C-alpha-epsilon =
    /// C-alpha/(1+e0); 0 for none.
    pub secondary_ratio: f64,
    /// Coefficient of consolidation for vertical flow, m2/s.
    pub cv_m2_per_s: f64,
    /// Coefficient of consolidation for horizontal flow (to drains), m2/s.
    pub ch_m2_per_s: f64,
    /// Vertical permeability, m/s.
    pub permeability_m_per_s: f64,
    /// Young's modulus, undrained, kPa.
    pub young_undrained_kpa: f64,
    /// Young's modulus, drained, kPa.
    pub young_drained_kpa: f64,
    /// Drained Poisson's ratio.
    pub poisson_drained: f64,
    /// Undrained shear strength at the top of the layer, kPa; 0 for a drained layer.
    pub undrained_strength_kpa: f64,
    /// Its gradient with depth, kPa/m.
    pub undrained_strength_gradient_kpa_per_m: f64,
    /// Excess pore pressure raised per kPa of vertical total stress increment (1 for saturated
    /// soft clay loaded in one dimension).
    pub pore_pressure_response: f64,
    /// A free-draining layer: it carries no excess pore pressure and drains its neighbours.
    pub drained: bool,
}

/// Pore pressure before loading.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum GroundWater {
    /// Hydrostatic below a water table at this depth, m (none above it).
    Hydrostatic {
        /// Depth of the water table, m; negative where free water stands above the ground.
        water_table_m: f64,
    },
    /// A measured profile of (depth m, pore pressure kPa), linear between points; beyond the
    /// last point it grows with the unit weight of water; above the first it is that of the
    /// first falling with the unit weight of water, not below 0.
    Profile {
        /// Depth of the water table, which parts the two unit weights, m; negative where free
        /// water stands above the ground.
        water_table_m: f64,
        /// Points by rising depth.
        points: Vec<(f64, f64), MAX_PROFILE_POINTS>,
    },
}

impl GroundWater {
    /// Depth of the water table, m.
    #[must_use]
    pub fn water_table_m(&self) -> f64 {
        match *self {
            Self::Hydrostatic { water_table_m } | Self::Profile { water_table_m, .. } => {
                water_table_m
            }
        }
    }
}

/// Flow at the bottom of the lowest layer.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum BaseDrainage {
    /// Excess pore pressure is zero there.
    Drained,
    /// No flow.
    Closed,
}

/// Stiffness below the lowest layer, for elastic displacements.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum BaseStiffness {
    /// Nothing moves below the lowest layer.
    Rigid,
    /// An elastic half-space.
    HalfSpace {
        /// Young's modulus, kPa.
        young_kpa: f64,
        /// Poisson's ratio.
        poisson: f64,
    },
}

/// The ground profile of a site.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Ground {
    /// Layers from ground level down.
    pub layers: Vec<Layer, MAX_LAYERS>,
    /// Pore pressure before loading.
    pub water: GroundWater,
    /// Unit weight of the ground water, kN/m3.
    pub water_unit_weight_kn_m3: f64,
    /// Flow at the base.
    pub base_drainage: BaseDrainage,
    /// Stiffness of the base.
    pub base_stiffness: BaseStiffness,
}
