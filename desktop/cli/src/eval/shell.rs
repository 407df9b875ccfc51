//! Shape of the shell.

use super::request::{Refusal, read, within};
use super::trail::Trail;
use brimstead_core::quantity::{Bounded, OutOfRange};
use brimstead_core::shell::perimeter::{PerimeterFit, PerimeterPoint, PointShape, ShellSteel};
use brimstead_core::shell::{
    ANGLE, SETTLEMENT, SETTLEMENT_DEVIATION, SHELL_DIAMETER, SHELL_HEIGHT, STEEL, ShellError,
};
use serde::Deserialize;
use serde_json::value::RawValue;
use serde_json::{Value, json};

const MM_PER_M: f64 = 1000.0;

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct PerimeterInput {
    diameter_m: f64,
    height_m: f64,
    yield_mpa: f64,
    young_mpa: f64,
    survey_sd_mm: f64,
    points: Vec<GivenPoint>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct GivenPoint {
    angle_deg: f64,
    settlement_mm: f64,
}

/// Checks a value given in another unit than the core's, which the message names both.
fn converted(
    field: &str,
    (given, given_unit): (f64, &str),
    value: f64,
    quantity: &'static Bounded,
) -> Result<f64, Refusal> {
    quantity.check(value).map_err(|refused: OutOfRange| {
        Refusal::new(field, format!("{given} {given_unit}: {refused}"))
    })
}

fn checked_point(index: usize, given: &GivenPoint) -> Result<PerimeterPoint, Refusal> {
    let GivenPoint { angle_deg, settlement_mm } = *given;
    Ok(PerimeterPoint {
        angle_rad: converted(
            &format!("points[{index}].angle_deg"),
            (angle_deg, "degrees"),
            angle_deg.to_radians(),
            &ANGLE,
        )?,
        settlement_m: Some(converted(
            &format!("points[{index}].settlement_mm"),
            (settlement_mm, "mm"),
            settlement_mm / MM_PER_M,
            &SETTLEMENT,
        )?),
    })
}

pub fn perimeter_fit(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: PerimeterInput = read(input)?;
    within("diameter_m", given.diameter_m, &SHELL_DIAMETER)?;
    within("height_m", given.height_m, &SHELL_HEIGHT)?;
    within("yield_mpa", given.yield_mpa, &STEEL)?;
    within("young_mpa", given.young_mpa, &STEEL)?;
    let deviation_m = converted(
        "survey_sd_mm",
        (given.survey_sd_mm, "mm"),
        given.survey_sd_mm / MM_PER_M,
        &SETTLEMENT_DEVIATION,
    )?;
    let each = given.points.iter().enumerate();
    let points: Vec<PerimeterPoint> =
        each.map(|(index, one)| checked_point(index, one)).collect::<Result<_, _>>()?;
    let fit = PerimeterFit::new(&points, given.diameter_m, deviation_m).map_err(|error| {
        let field = match error {
            ShellError::NotOnceAround { index } => format!("points[{index}].angle_deg"),
            _ => "points".to_owned(),
        };
        Refusal::at(field, error)
    })?;
    let steel = ShellSteel::new(given.height_m, given.yield_mpa, given.young_mpa)
        .map_err(|error| Refusal::at("height_m", error))?;
    fit.write(trail);
    let shapes: Vec<PointShape> =
        (0..points.len()).filter_map(|index| fit.shape_with(index, trail)).collect();
    let tilt = fit.tilt();
    let in_mm = |pick: fn(&PointShape) -> Option<f64>| -> Vec<Option<f64>> {
        shapes.iter().map(|shape| pick(shape).map(|value_m| value_m * MM_PER_M)).collect()
    };
    let permitted: Vec<f64> =
        shapes.iter().map(|shape| fit.limit(shape, &steel).permitted_m * MM_PER_M).collect();
    Ok(json!({
        "uniform_mm": fit.uniform_m() * MM_PER_M,
        "tilt_across_diameter_mm": tilt.across_diameter_m * MM_PER_M,
        "tilt_azimuth_deg": tilt.azimuth_rad.map(f64::to_degrees),
        "r_squared": fit.r_squared(),
        "residual_mm": in_mm(|shape| shape.residual_m),
        "out_of_plane_mm": in_mm(|shape| shape.out_of_plane_m),
        "permitted_mm": permitted,
        "noise_mm": in_mm(|shape| Some(shape.noise_deviation_m)),
    }))
}
