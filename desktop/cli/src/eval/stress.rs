//! Elastic stress and displacement.

use super::request::{Refusal, read, within};
use super::trail::Trail;
use brimstead_core::load::PlanPosition;
use brimstead_core::stress::superposition::{PlacedLoad, SitePoint};
use brimstead_core::stress::{
    self, AxisymmetricStress, CartesianStress, Disc, Displacement, RigidDisc, Ring, StressError,
    WestergaardDisc, superposition,
};
use serde::Deserialize;
use serde_json::value::RawValue;
use serde_json::{Value, json};

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct DiscInput {
    radius_m: f64,
    pressure_kpa: f64,
    poisson: f64,
    points: Vec<(f64, f64)>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct DiscOnSoil {
    radius_m: f64,
    pressure_kpa: f64,
    young_kpa: f64,
    poisson: f64,
    points: Vec<(f64, f64)>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RingInput {
    radius_m: f64,
    line_load_kn_per_m: f64,
    poisson: f64,
    points: Vec<(f64, f64)>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RingOnSoil {
    radius_m: f64,
    line_load_kn_per_m: f64,
    young_kpa: f64,
    poisson: f64,
    points: Vec<(f64, f64)>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RigidInput {
    radius_m: f64,
    mean_pressure_kpa: f64,
    points: Vec<(f64, f64)>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RigidOnSoil {
    radius_m: f64,
    mean_pressure_kpa: f64,
    young_kpa: f64,
    poisson: f64,
}

fn disc(radius_m: f64, pressure_kpa: f64, poisson: f64) -> Result<Disc, Refusal> {
    within("radius_m", radius_m, &stress::RADIUS)?;
    within("pressure_kpa", pressure_kpa, &stress::PRESSURE)?;
    within("poisson", poisson, &stress::POISSON)?;
    Disc::new(radius_m, pressure_kpa, poisson).map_err(|error| Refusal::at("", error))
}

fn ring(radius_m: f64, line_load_kn_per_m: f64, poisson: f64) -> Result<Ring, Refusal> {
    within("radius_m", radius_m, &stress::RADIUS)?;
    within("line_load_kn_per_m", line_load_kn_per_m, &stress::LINE_LOAD)?;
    within("poisson", poisson, &stress::POISSON)?;
    Ring::new(radius_m, line_load_kn_per_m, poisson).map_err(|error| Refusal::at("", error))
}

/// Evaluates at each point; a refusal names the point.
pub(super) fn at_points<T>(
    points: &[(f64, f64)],
    mut value: impl FnMut(f64, f64) -> Result<T, StressError>,
) -> Result<Vec<T>, Refusal> {
    let each = points.iter().enumerate();
    each.map(|(index, &(r_m, z_m))| {
        value(r_m, z_m).map_err(|error| Refusal::at(format!("points[{index}]"), error))
    })
    .collect()
}

pub(super) fn stresses(all: &[AxisymmetricStress]) -> Value {
    let column = |pick: fn(&AxisymmetricStress) -> f64| all.iter().map(pick).collect::<Vec<f64>>();
    json!({
        "sigma_z_kpa": column(|s| s.sigma_z_kpa),
        "sigma_r_kpa": column(|s| s.sigma_r_kpa),
        "sigma_theta_kpa": column(|s| s.sigma_theta_kpa),
        "tau_rz_kpa": column(|s| s.tau_rz_kpa),
    })
}

pub(super) fn displacements(all: &[Displacement]) -> Value {
    let settlement: Vec<f64> = all.iter().map(|moved| moved.settlement_m).collect();
    let radial: Vec<f64> = all.iter().map(|moved| moved.radial_m).collect();
    json!({"settlement_m": settlement, "radial_m": radial})
}

pub fn disc_stress(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: DiscInput = read(input)?;
    let disc = disc(given.radius_m, given.pressure_kpa, given.poisson)?;
    at_points(&given.points, |r, z| disc.stress_at_with(r, z, trail)).map(|all| stresses(&all))
}

pub fn disc_displacement(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: DiscOnSoil = read(input)?;
    let disc = disc(given.radius_m, given.pressure_kpa, given.poisson)?;
    let young = within("young_kpa", given.young_kpa, &stress::YOUNG)?;
    at_points(&given.points, |r, z| disc.displacement_at_with(young, r, z, trail))
        .map(|all| displacements(&all))
}

pub fn ring_stress(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: RingInput = read(input)?;
    let ring = ring(given.radius_m, given.line_load_kn_per_m, given.poisson)?;
    at_points(&given.points, |r, z| ring.stress_at_with(r, z, trail)).map(|all| stresses(&all))
}

pub fn ring_displacement(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: RingOnSoil = read(input)?;
    let ring = ring(given.radius_m, given.line_load_kn_per_m, given.poisson)?;
    let young = within("young_kpa", given.young_kpa, &stress::YOUNG)?;
    at_points(&given.points, |r, z| ring.displacement_at_with(young, r, z, trail))
        .map(|all| displacements(&all))
}

pub fn rigid_disc_stress(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: RigidInput = read(input)?;
    within("radius_m", given.radius_m, &stress::RADIUS)?;
    within("mean_pressure_kpa", given.mean_pressure_kpa, &stress::PRESSURE)?;
    // Vertical stress under a smooth rigid plate does not depend on Poisson's ratio.
    let plate = RigidDisc::new(given.radius_m, given.mean_pressure_kpa, 0.5)
        .map_err(|error| Refusal::at("", error))?;
    let all = at_points(&given.points, |r, z| plate.stress_at_with(r, z, trail))?;
    let sigma_z: Vec<f64> = all.iter().map(|stress| stress.sigma_z_kpa).collect();
    Ok(json!({"sigma_z_kpa": sigma_z}))
}

pub fn rigid_disc_settlement(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: RigidOnSoil = read(input)?;
    within("radius_m", given.radius_m, &stress::RADIUS)?;
    within("mean_pressure_kpa", given.mean_pressure_kpa, &stress::PRESSURE)?;
    within("poisson", given.poisson, &stress::POISSON)?;
    let young = within("young_kpa", given.young_kpa, &stress::YOUNG)?;
    let plate = RigidDisc::new(given.radius_m, given.mean_pressure_kpa, given.poisson)
        .map_err(|error| Refusal::at("", error))?;
    let moved = plate
        .displacement_at_with(young, 0.0, 0.0, trail)
        .map_err(|error| Refusal::at("young_kpa", error))?;
    Ok(json!({"settlement_m": moved.settlement_m}))
}

pub fn westergaard_disc_stress(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: DiscInput = read(input)?;
    within("radius_m", given.radius_m, &stress::RADIUS)?;
    within("pressure_kpa", given.pressure_kpa, &stress::PRESSURE)?;
    within("poisson", given.poisson, &stress::POISSON)?;
    let load = WestergaardDisc::new(given.radius_m, given.pressure_kpa, given.poisson)
        .map_err(|error| Refusal::at("poisson", error))?;
    let sigma_z = at_points(&given.points, |r, z| load.sigma_z_at_with(r, z, trail))?;
    Ok(json!({"sigma_z_kpa": sigma_z}))
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct SiteInput {
    #[serde(default)]
    discs: Vec<PlacedDisc>,
    #[serde(default)]
    rings: Vec<PlacedRing>,
    poisson: f64,
    points: Vec<(f64, f64, f64)>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct PlacedDisc {
    x_m: f64,
    y_m: f64,
    radius_m: f64,
    pressure_kpa: f64,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct PlacedRing {
    x_m: f64,
    y_m: f64,
    radius_m: f64,
    line_load_kn_per_m: f64,
}

fn placed(
    list: &str,
    index: usize,
    (x_m, y_m): (f64, f64),
    load: Result<impl Into<superposition::Load>, Refusal>,
) -> Result<PlacedLoad, Refusal> {
    let path = format!("{list}[{index}]");
    let load = load.map_err(|refusal| Refusal {
        field: format!("{path}.{}", refusal.field),
        message: refusal.message,
    })?;
    PlacedLoad::new(PlanPosition { x_m, y_m }, load).map_err(|error| Refusal::at(path, error))
}

pub fn site_stress(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: SiteInput = read(input)?;
    if given.discs.is_empty() && given.rings.is_empty() {
        return Err(Refusal::new("discs", "no load is given; add at least one disc or ring"));
    }
    let mut loads = Vec::new();
    for (index, one) in given.discs.iter().enumerate() {
        let load = disc(one.radius_m, one.pressure_kpa, given.poisson);
        loads.push(placed("discs", index, (one.x_m, one.y_m), load)?);
    }
    for (index, one) in given.rings.iter().enumerate() {
        let load = ring(one.radius_m, one.line_load_kn_per_m, given.poisson);
        loads.push(placed("rings", index, (one.x_m, one.y_m), load)?);
    }
    let each = given.points.iter().enumerate();
    let all: Vec<CartesianStress> = each
        .map(|(index, &(x_m, y_m, z_m))| {
            superposition::stress_at_with(&loads, SitePoint { x_m, y_m, z_m }, trail)
                .map_err(|error| Refusal::at(format!("points[{index}]"), error))
        })
        .collect::<Result<_, _>>()?;
    let principal: Vec<_> = all.iter().map(CartesianStress::principal).collect();
    Ok(json!({
        "sigma_z_kpa": all.iter().map(|s| s.sigma_z_kpa).collect::<Vec<_>>(),
        "sigma_1_kpa": principal.iter().map(|p| p.sigma_1_kpa).collect::<Vec<_>>(),
        "sigma_2_kpa": principal.iter().map(|p| p.sigma_2_kpa).collect::<Vec<_>>(),
        "sigma_3_kpa": principal.iter().map(|p| p.sigma_3_kpa).collect::<Vec<_>>(),
    }))
}
