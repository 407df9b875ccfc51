//! Stability and strength.

use super::request::{Refusal, located, read, within};
use super::trail::Trail;
use brimstead_core::stability::bearing::{Roughness, STRENGTH_GROWTH, circular_bearing_with};
use brimstead_core::stability::edge::{Edge, SMALLEST_WIDTH, edge_stability_with};
use brimstead_core::stability::strength::{
    EFFECTIVE_STRESS, PRECONSOLIDATION, SLICE_THICKNESS, STRENGTH_EXPONENT, STRENGTH_GRADIENT,
    STRENGTH_RATIO, StrengthGain, StrengthProfile, StrengthSlice, UNDRAINED_STRENGTH,
};
use brimstead_core::stability::{DIAMETER, PRESSURE, StabilityError};
use serde::Deserialize;
use serde_json::value::RawValue;
use serde_json::{Value, json};

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct BearingInput {
    diameter_m: f64,
    undrained_strength_kpa: f64,
    gradient_kpa_per_m: f64,
    base: GivenBase,
}

#[derive(Deserialize, Clone, Copy)]
#[serde(rename_all = "snake_case")]
enum GivenBase {
    Rough,
    Smooth,
}

pub fn circular_bearing(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: BearingInput = read(input)?;
    let roughness = match given.base {
        GivenBase::Rough => Roughness::Rough,
        GivenBase::Smooth => Roughness::Smooth,
    };
    let found = circular_bearing_with(
        within("diameter_m", given.diameter_m, &DIAMETER)?,
        within("undrained_strength_kpa", given.undrained_strength_kpa, &UNDRAINED_STRENGTH)?,
        within("gradient_kpa_per_m", given.gradient_kpa_per_m, &STRENGTH_GROWTH)?,
        roughness,
        trail,
    )
    .map_err(|error| Refusal::at("undrained_strength_kpa", error))?;
    Ok(json!({"ultimate_kpa": found.ultimate_kpa, "factor": found.factor}))
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct EdgeInput {
    diameter_m: f64,
    pressure_kpa: f64,
    layers: Vec<GivenSlice>,
    smallest_width_m: Option<f64>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct GivenSlice {
    thickness_m: f64,
    undrained_strength_kpa: f64,
    gradient_kpa_per_m: f64,
}

fn checked_slice(index: usize, given: &GivenSlice) -> Result<StrengthSlice, Refusal> {
    let at = |key: &str| format!("layers[{index}].{key}");
    Ok(StrengthSlice {
        thickness_m: within(&at("thickness_m"), given.thickness_m, &SLICE_THICKNESS)?,
        undrained_strength_kpa: within(
            &at("undrained_strength_kpa"),
            given.undrained_strength_kpa,
            &UNDRAINED_STRENGTH,
        )?,
        gradient_kpa_per_m: within(
            &at("gradient_kpa_per_m"),
            given.gradient_kpa_per_m,
            &STRENGTH_GRADIENT,
        )?,
    })
}

/// The profile as a whole; single values were checked before.
fn refused_profile(error: StabilityError) -> Refusal {
    match error {
        // Of the values checked before, only the strength at the base of a slice is left.
        StabilityError::Value(value) => {
            let field = format!("layers[{}].gradient_kpa_per_m", value.index.unwrap_or_default());
            Refusal::new(field, format!("at the base of the layer {value}"))
        }
        other => Refusal::at("layers", other),
    }
}

const EDGE_KEYS: &[(&str, &str)] = &[
    ("diameter of the loaded area", "diameter_m"),
    ("pressure under the tank", "pressure_kpa"),
    ("smallest loaded width of an edge failure", "smallest_width_m"),
];

pub fn edge_stability(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: EdgeInput = read(input)?;
    within("diameter_m", given.diameter_m, &DIAMETER)?;
    within("pressure_kpa", given.pressure_kpa, &PRESSURE)?;
    if let Some(width_m) = given.smallest_width_m {
        within("smallest_width_m", width_m, &SMALLEST_WIDTH)?;
    }
    let each = given.layers.iter().enumerate();
    let slices: Vec<StrengthSlice> =
        each.map(|(index, one)| checked_slice(index, one)).collect::<Result<_, _>>()?;
    let profile = StrengthProfile::new(&slices).map_err(refused_profile)?;
    let edge = Edge {
        diameter_m: given.diameter_m,
        pressure_kpa: given.pressure_kpa,
        smallest_width_m: given.smallest_width_m,
    };
    let found = edge_stability_with(&profile, &edge, trail).map_err(|error| {
        let value = if let StabilityError::Value(value) = error { Some(value) } else { None };
        located(error, value, EDGE_KEYS, "smallest_width_m")
    })?;
    let circle = found.circle;
    Ok(json!({
        "factor_of_safety": found.factor_of_safety,
        "circle": {
            "x_m": circle.centre_x_m,
            // Depth is positive down and the centre lies above the ground.
            "z_m": 0.0 - circle.centre_height_m,
            "radius_m": circle.radius_m,
        },
    }))
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct GainInput {
    effective_stress_kpa: f64,
    preconsolidation_kpa: f64,
    ratio: f64,
    exponent: f64,
}

pub fn strength_gain(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: GainInput = read(input)?;
    let effective_kpa =
        within("effective_stress_kpa", given.effective_stress_kpa, &EFFECTIVE_STRESS)?;
    let yield_kpa = within("preconsolidation_kpa", given.preconsolidation_kpa, &PRECONSOLIDATION)?;
    within("ratio", given.ratio, &STRENGTH_RATIO)?;
    within("exponent", given.exponent, &STRENGTH_EXPONENT)?;
    let strength_kpa = StrengthGain::new(given.ratio, given.exponent)
        .and_then(|gain| gain.strength_kpa_with(effective_kpa, yield_kpa, trail))
        .map_err(|error| Refusal::at("ratio", error))?;
    Ok(json!({"undrained_strength_kpa": strength_kpa}))
}
