//! Settlement.

use super::request::{Refusal, located, read, within};
use super::trail::Trail;
use brimstead_core::config::Name;
use brimstead_core::ground::{
    self, BaseDrainage, BaseStiffness, Compressibility, Ground, GroundError, GroundWater, Layer,
    Preconsolidation, Profile,
};
use brimstead_core::settlement::SettlementError;
use brimstead_core::settlement::primary::primary_settlement_by_sublayers_with;
use brimstead_core::settlement::sand::{SandLayer, SandLoad, strain_influence_settlement_with};
use brimstead_core::stress::{self, Disc};
use serde::Deserialize;
use serde_json::value::RawValue;
use serde_json::{Value, json};

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct PrimaryInput {
    layers: Vec<PrimaryLayer>,
    water_table_m: f64,
    unit_weight_water_kn_m3: f64,
    sublayer_m: f64,
    increment: Increment,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct PrimaryLayer {
    thickness_m: f64,
    unit_weight_kn_m3: f64,
    void_ratio: f64,
    cc: f64,
    cr: f64,
    preconsolidation: GivenPreconsolidation,
}

#[derive(Deserialize)]
#[serde(rename_all = "snake_case")]
enum GivenPreconsolidation {
    Ocr(f64),
    PopKpa(f64),
    ValueKpa(f64),
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Increment {
    disc: Option<IncrementDisc>,
    r_m: Option<f64>,
    values: Option<Vec<(f64, f64)>>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct IncrementDisc {
    radius_m: f64,
    pressure_kpa: f64,
}

/// The increment as a function of depth.
enum IncrementAt {
    Disc { disc: Disc, r_m: f64 },
    Values(Vec<(f64, f64)>),
}

impl IncrementAt {
    fn new(given: Increment) -> Result<Self, Refusal> {
        match (given.disc, given.r_m, given.values) {
            (Some(disc), Some(r_m), None) => {
                within("increment.disc.radius_m", disc.radius_m, &stress::RADIUS)?;
                within("increment.disc.pressure_kpa", disc.pressure_kpa, &stress::PRESSURE)?;
                within("increment.r_m", r_m, &stress::RADIAL_DISTANCE)?;
                let disc = Disc::new(disc.radius_m, disc.pressure_kpa, 0.5)
                    .map_err(|error| Refusal::at("increment.disc", error))?;
                Ok(Self::Disc { disc, r_m })
            }
            (Some(_), None, None) => Err(Refusal::new("increment.r_m", "is missing; add it")),
            (None, None, Some(values)) => {
                let rising = values.windows(2).all(|pair| pair[0].0 < pair[1].0);
                if values.is_empty() || !rising {
                    return Err(Refusal::new(
                        "increment.values",
                        "give points [z_m, kPa] by rising depth, at least one",
                    ));
                }
                Ok(Self::Values(values))
            }
            _ => Err(Refusal::new("increment", "give either disc and r_m, or values")),
        }
    }

    /// Linear between points, constant beyond their ends; NaN where the disc refuses, which the
    /// core then refuses with the depth named.
    fn at(&self, depth_m: f64) -> f64 {
        match self {
            Self::Disc { disc, r_m } => {
                disc.stress_at(*r_m, depth_m).map_or(f64::NAN, |stress| stress.sigma_z_kpa)
            }
            Self::Values(points) => {
                let after = points.partition_point(|point| point.0 <= depth_m);
                match (after.checked_sub(1).map(|before| points[before]), points.get(after)) {
                    (Some(a), Some(b)) => a.1 + (depth_m - a.0) / (b.0 - a.0) * (b.1 - a.1),
                    (Some(end), None) => end.1,
                    (None, Some(first)) => first.1,
                    (None, None) => f64::NAN,
                }
            }
        }
    }
}

/// What primary settlement does not ask for is filled with values that it does not use.
fn layer(index: usize, given: &PrimaryLayer) -> Result<Layer, Refusal> {
    let path = |key: &str| format!("layers[{index}].{key}");
    within(&path("thickness_m"), given.thickness_m, &ground::LAYER_THICKNESS)?;
    within(&path("unit_weight_kn_m3"), given.unit_weight_kn_m3, &ground::UNIT_WEIGHT_BELOW_WATER)?;
    within(&path("void_ratio"), given.void_ratio, &ground::VOID_RATIO)?;
    within(&path("cc"), given.cc, &ground::COMPRESSION_INDEX)?;
    within(&path("cr"), given.cr, &ground::RECOMPRESSION_INDEX)?;
    Ok(Layer {
        name: Name::new(),
        thickness_m: given.thickness_m,
        unit_weight_above_water_kn_m3: given.unit_weight_kn_m3,
        unit_weight_below_water_kn_m3: given.unit_weight_kn_m3,
        compressibility: Compressibility::Index {
            void_ratio: given.void_ratio,
            cc: given.cc,
            cr: given.cr,
        },
        preconsolidation: match given.preconsolidation {
            GivenPreconsolidation::Ocr(ratio) => Preconsolidation::Ocr(ratio),
            GivenPreconsolidation::PopKpa(kpa) => Preconsolidation::PopKpa(kpa),
            GivenPreconsolidation::ValueKpa(kpa) => Preconsolidation::ValueKpa(kpa),
        },
        secondary_ratio: 0.0,
        cv_m2_per_s: 1e-8,
        ch_m2_per_s: 1e-8,
        permeability_m_per_s: 1e-9,
        young_undrained_kpa: 1e4,
        young_drained_kpa: 1e4,
        poisson_drained: 0.3,
        undrained_strength_kpa: 0.0,
        undrained_strength_gradient_kpa_per_m: 0.0,
        pore_pressure_response: 1.0,
        drained: false,
    })
}

const PROFILE_KEYS: &[(&str, &str)] = &[
    ("overconsolidation ratio OCR", "layers[{}].preconsolidation.ocr"),
    ("pre-overburden pressure POP", "layers[{}].preconsolidation.pop_kpa"),
    ("preconsolidation pressure", "layers[{}].preconsolidation.value_kpa"),
];

pub fn primary(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: PrimaryInput = read(input)?;
    within("water_table_m", given.water_table_m, &ground::WATER_TABLE)?;
    within("unit_weight_water_kn_m3", given.unit_weight_water_kn_m3, &ground::WATER_UNIT_WEIGHT)?;
    let mut layers = heapless::Vec::new();
    for (index, one) in given.layers.iter().enumerate() {
        layers.push(layer(index, one)?).map_err(|_| {
            let most = layers.capacity();
            Refusal::new("layers", format!("more than {most} layers; join some"))
        })?;
    }
    let increment = IncrementAt::new(given.increment)?;
    let ground = Ground {
        layers,
        water: GroundWater::Hydrostatic { water_table_m: given.water_table_m },
        water_unit_weight_kn_m3: given.unit_weight_water_kn_m3,
        base_drainage: BaseDrainage::Drained,
        base_stiffness: BaseStiffness::Rigid,
    };
    let profile = Profile::new(&ground).map_err(|error| {
        let value = if let GroundError::Value(value) = error { Some(value) } else { None };
        located(error, value, PROFILE_KEYS, "layers")
    })?;
    let settled = primary_settlement_by_sublayers_with(
        &profile,
        |depth_m| increment.at(depth_m),
        0.0,
        given.sublayer_m,
        trail,
    )
    .map_err(|error| Refusal::at("sublayer_m", error))?;
    Ok(json!({
        "settlement_m": settled.settlement_m,
        "by_layer_m": settled.by_layer_m.as_slice(),
    }))
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct SandInput {
    diameter_m: f64,
    embedment_m: f64,
    net_pressure_kpa: f64,
    overburden_kpa: f64,
    effective_overburden_at_peak_kpa: f64,
    time_years: f64,
    layers: Vec<GivenSandLayer>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct GivenSandLayer {
    top_m: f64,
    base_m: f64,
    modulus_kpa: f64,
}

const SAND_KEYS: &[(&str, &str)] = &[
    ("radius of the load", "diameter_m"),
    ("tank diameter", "diameter_m"),
    ("net pressure", "net_pressure_kpa"),
    ("effective overburden at the loaded level", "overburden_kpa"),
    (
        "effective overburden at the peak of the influence factor",
        "effective_overburden_at_peak_kpa",
    ),
    ("time under load", "time_years"),
    ("depth below the loaded level", "layers[{}].base_m"),
    ("Young's modulus", "layers[{}].modulus_kpa"),
];

pub fn schmertmann(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: SandInput = read(input)?;
    // The embedment acts through the overburden given beside it.
    within("embedment_m", given.embedment_m, &brimstead_core::load::LOADED_DEPTH)?;
    let layers: Vec<SandLayer> = given
        .layers
        .iter()
        .map(|one| SandLayer { top_m: one.top_m, base_m: one.base_m, modulus_kpa: one.modulus_kpa })
        .collect();
    let load = SandLoad {
        diameter_m: given.diameter_m,
        net_pressure_kpa: given.net_pressure_kpa,
        overburden_kpa: given.overburden_kpa,
        effective_overburden_at_peak_kpa: given.effective_overburden_at_peak_kpa,
        time_years: given.time_years,
    };
    let settled = strain_influence_settlement_with(&load, &layers, trail).map_err(|error| {
        let (value, otherwise) = match error {
            SettlementError::Value(value) => (Some(value), "net_pressure_kpa".to_owned()),
            SettlementError::LayersNotContiguous { index, .. } => {
                (None, format!("layers[{index}].top_m"))
            }
            _ => (None, "layers".to_owned()),
        };
        located(error, value, SAND_KEYS, &otherwise)
    })?;
    Ok(json!({
        "settlement_m": settled.settlement_m,
        "c1": settled.c1,
        "c2": settled.c2,
        "peak_influence": settled.peak_influence,
    }))
}
