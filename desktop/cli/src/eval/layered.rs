//! Elastic response of layered ground, and the pore pressure that a load raises.

use super::request::{Refusal, read, within};
use super::stress::{at_points, displacements, stresses};
use super::trail::Trail;
use brimstead_core::stress::layered::{
    Accuracy, ElasticBase, ElasticLayer, LAYER_THICKNESS, LayeredGround, LayeredLoad,
    YOUNG_GRADIENT,
};
use brimstead_core::stress::pore_pressure::{
    HENKEL_A, INCREMENT, PorePressureLaw, SKEMPTON_A, SKEMPTON_B, UndrainedResponse,
};
use brimstead_core::stress::{self, Principal, StressError};
use serde::Deserialize;
use serde_json::value::RawValue;
use serde_json::{Value, json};

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct LayeredInput {
    radius_m: f64,
    pressure_kpa: f64,
    layers: Vec<GivenLayer>,
    base: GivenBase,
    points: Vec<(f64, f64)>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct GivenLayer {
    thickness_m: f64,
    young_kpa: f64,
    poisson: f64,
    #[serde(default)]
    young_gradient_kpa_per_m: f64,
}

/// One shape for every kind, so that a mistyped value is refused at its own path.
#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct GivenBase {
    kind: BaseKind,
    young_kpa: Option<f64>,
    poisson: Option<f64>,
}

#[derive(Deserialize, Clone, Copy)]
#[serde(rename_all = "snake_case")]
enum BaseKind {
    HalfSpace,
    RigidRough,
    RigidSmooth,
}

impl GivenBase {
    fn checked(&self) -> Result<ElasticBase, Refusal> {
        let rigid = match self.kind {
            BaseKind::HalfSpace => {
                return Ok(ElasticBase::HalfSpace {
                    young_kpa: of_half_space("young_kpa", self.young_kpa, &stress::YOUNG)?,
                    poisson: of_half_space("poisson", self.poisson, &stress::POISSON)?,
                });
            }
            BaseKind::RigidRough => ElasticBase::RigidRough,
            BaseKind::RigidSmooth => ElasticBase::RigidSmooth,
        };
        for (key, value) in [("young_kpa", self.young_kpa), ("poisson", self.poisson)] {
            if value.is_some() {
                let message = format!("a rigid base has no {key}; leave it out");
                return Err(Refusal::new(format!("base.{key}"), message));
            }
        }
        Ok(rigid)
    }
}

fn of_half_space(
    key: &str,
    value: Option<f64>,
    quantity: &'static brimstead_core::quantity::Bounded,
) -> Result<f64, Refusal> {
    let field = format!("base.{key}");
    let value = value.ok_or_else(|| {
        Refusal::new(&field, format!("{key} is missing: a half-space needs it; add it"))
    })?;
    within(&field, value, quantity)
}

fn checked_layer(index: usize, given: &GivenLayer) -> Result<ElasticLayer, Refusal> {
    let at = |key: &str| format!("layers[{index}].{key}");
    let gradient = given.young_gradient_kpa_per_m;
    Ok(ElasticLayer {
        thickness_m: within(&at("thickness_m"), given.thickness_m, &LAYER_THICKNESS)?,
        young_kpa: within(&at("young_kpa"), given.young_kpa, &stress::YOUNG)?,
        poisson: within(&at("poisson"), given.poisson, &stress::POISSON)?,
        young_gradient_kpa_per_m: within(
            &at("young_gradient_kpa_per_m"),
            gradient,
            &YOUNG_GRADIENT,
        )?,
    })
}

/// The ground as a whole; single values were checked before.
fn refused_ground(error: StressError) -> Refusal {
    match error {
        // Of the values checked before, only the modulus at the base of a layer is left.
        StressError::OutOfRange(value) => {
            let field =
                format!("layers[{}].young_gradient_kpa_per_m", value.index.unwrap_or_default());
            Refusal::new(field, format!("at the base of the layer {value}"))
        }
        other => Refusal::at("layers", other),
    }
}

pub fn layered_response(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: LayeredInput = read(input)?;
    let radius_m = within("radius_m", given.radius_m, &stress::RADIUS)?;
    let pressure_kpa = within("pressure_kpa", given.pressure_kpa, &stress::PRESSURE)?;
    let each = given.layers.iter().enumerate();
    let layers: Vec<ElasticLayer> =
        each.map(|(index, one)| checked_layer(index, one)).collect::<Result<_, _>>()?;
    let base = given.base.checked()?;
    let ground = LayeredGround::new(&layers, base).map_err(refused_ground)?;
    let load = LayeredLoad::Disc { radius_m, pressure_kpa };
    let all = at_points(&given.points, |r_m, z_m| {
        ground.response_at_with(&load, r_m, z_m, Accuracy::Reference, trail)
    })?;
    let stress: Vec<_> = all.iter().map(|one| one.stress).collect();
    let moved: Vec<_> = all.iter().map(|one| one.displacement).collect();
    let mut answer = stresses(&stress);
    if let (Some(answer), Value::Object(moved)) = (answer.as_object_mut(), displacements(&moved)) {
        answer.extend(moved);
    }
    Ok(answer)
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct PorePressureInput {
    sigma_1_kpa: f64,
    sigma_2_kpa: f64,
    sigma_3_kpa: f64,
    method: GivenMethod,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct GivenMethod {
    kind: MethodKind,
    a: f64,
    b: f64,
}

#[derive(Deserialize, Clone, Copy)]
#[serde(rename_all = "snake_case")]
enum MethodKind {
    Skempton,
    Henkel,
}

pub fn undrained_pore_pressure(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: PorePressureInput = read(input)?;
    let increment = Principal {
        sigma_1_kpa: within("sigma_1_kpa", given.sigma_1_kpa, &INCREMENT)?,
        sigma_2_kpa: within("sigma_2_kpa", given.sigma_2_kpa, &INCREMENT)?,
        sigma_3_kpa: within("sigma_3_kpa", given.sigma_3_kpa, &INCREMENT)?,
    };
    in_order("sigma_2_kpa", increment.sigma_2_kpa, increment.sigma_1_kpa)?;
    in_order("sigma_3_kpa", increment.sigma_3_kpa, increment.sigma_2_kpa)?;
    let GivenMethod { kind, a, b } = given.method;
    let b = within("method.b", b, &SKEMPTON_B)?;
    let law = match kind {
        MethodKind::Skempton => {
            PorePressureLaw::Skempton { a: within("method.a", a, &SKEMPTON_A)?, b }
        }
        MethodKind::Henkel => PorePressureLaw::Henkel { a: within("method.a", a, &HENKEL_A)?, b },
    };
    let response = UndrainedResponse::new(law).map_err(|error| Refusal::at("method", error))?;
    let excess_kpa = response
        .excess_kpa_with(&increment, trail)
        .map_err(|error| Refusal::at("sigma_1_kpa", error))?;
    Ok(json!({"excess_pore_pressure_kpa": excess_kpa}))
}

/// Skempton's formula tells the major from the minor principal value by its place alone.
fn in_order(field: &str, value: f64, above: f64) -> Result<(), Refusal> {
    if value <= above {
        return Ok(());
    }
    Err(Refusal::new(
        field,
        format!(
            "{field} is {value}, more than the {above} before it; principal values are given from \
             the largest (sigma_1_kpa) to the smallest (sigma_3_kpa), compression positive"
        ),
    ))
}
