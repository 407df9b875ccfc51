//! Consolidation.

use super::request::{Refusal, located, read, within};
use super::trail::Trail;
use brimstead_core::consolidation::batch::{self, Answers, History};
use brimstead_core::consolidation::drains::RadialFlow;
use brimstead_core::consolidation::terzaghi::{self, Drainage, InitialShape};
use brimstead_core::consolidation::{Boundary, Column, ColumnLayer, DrainPattern, Drains, Error};
use brimstead_core::quantity::Bounded;
use brimstead_core::units::{WATER_UNIT_WEIGHT_KN_M3, YEAR_S};
use brimstead_core::working::{Step, Working};
use serde::Deserialize;
use serde_json::value::RawValue;
use serde_json::{Value, json};

static MV: Bounded = Bounded {
    name: "coefficient of volume compressibility mv",
    unit: "1/kPa",
    min: 1e-9,
    max: 1.0,
    remedy: "Soft clay has about 1e-4 to 3e-3 per kPa.",
};

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct TerzaghiInput {
    time_factor: Vec<f64>,
    initial: GivenShape,
    drainage: GivenDrainage,
}

#[derive(Deserialize, Clone, Copy)]
#[serde(rename_all = "snake_case")]
enum GivenShape {
    Uniform,
    TriangleZeroAtDrain,
    TriangleZeroAtBase,
    HalfSine,
}

#[derive(Deserialize, Clone, Copy)]
#[serde(rename_all = "snake_case")]
enum GivenDrainage {
    Single,
    Double,
}

pub fn terzaghi(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: TerzaghiInput = read(input)?;
    let initial = match given.initial {
        GivenShape::Uniform => InitialShape::Uniform,
        GivenShape::TriangleZeroAtDrain => InitialShape::TriangleZeroAtDrain,
        GivenShape::TriangleZeroAtBase => InitialShape::TriangleZeroAtBase,
        GivenShape::HalfSine => InitialShape::HalfSine,
    };
    let drainage = match given.drainage {
        GivenDrainage::Single => Drainage::Single,
        GivenDrainage::Double => Drainage::Double,
    };
    let mut degrees = Vec::with_capacity(given.time_factor.len());
    for (index, &time_factor) in given.time_factor.iter().enumerate() {
        let degree = terzaghi::degree_of_consolidation(initial, drainage, time_factor)
            .map_err(|error| Refusal::at(format!("time_factor[{index}]"), error))?;
        trail.step(Step {
            name: "degree of consolidation",
            value: degree,
            unit: "",
            formula: "U = 1 - sum A_n int sin(w_n z/D) exp(-lambda_n Tv) / int u0",
            inputs: &[("Tv", time_factor)],
            source: "Terzaghi 1925; Taylor 1948",
        });
        degrees.push(degree);
    }
    Ok(json!({"degree_of_consolidation": degrees}))
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct DrainInput {
    equivalent_spacing_ratio_n: f64,
    smear_ratio: f64,
    permeability_ratio_h_over_s: f64,
    well_resistance_term: f64,
    time_factor_h: Vec<f64>,
}

const DRAIN_KEYS: &[(&str, &str)] = &[
    ("drain spacing ratio n", "equivalent_spacing_ratio_n"),
    ("smear ratio s", "smear_ratio"),
    ("permeability ratio kh/ks", "permeability_ratio_h_over_s"),
    ("well resistance term", "well_resistance_term"),
];

pub fn drain_consolidation(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: DrainInput = read(input)?;
    let flow = RadialFlow::new(
        given.equivalent_spacing_ratio_n,
        given.smear_ratio,
        given.permeability_ratio_h_over_s,
    )
    .map_err(|error| {
        let (value, otherwise) = match error {
            Error::OutOfRange(value) => (Some(value), "equivalent_spacing_ratio_n"),
            _ => (None, "smear_ratio"),
        };
        located(error, value, DRAIN_KEYS, otherwise)
    })?;
    let mut degrees = Vec::with_capacity(given.time_factor_h.len());
    for (index, &time_factor) in given.time_factor_h.iter().enumerate() {
        let degree = flow
            .degree_of_consolidation(time_factor, given.well_resistance_term)
            .map_err(|error| {
                let value = if let Error::OutOfRange(value) = error { Some(value) } else { None };
                located(error, value, DRAIN_KEYS, &format!("time_factor_h[{index}]"))
            })?;
        trail.step(Step {
            name: "degree of radial consolidation",
            value: degree,
            unit: "",
            formula: "U_h = 1 - exp(-8 T_h / (mu + w))",
            inputs: &[("T_h", time_factor), ("mu", flow.mu()), ("w", given.well_resistance_term)],
            source: "Barron 1948; Hansbo 1981",
        });
        degrees.push(degree);
    }
    Ok(json!({"degree_of_consolidation": degrees}))
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct ColumnInput {
    layers: Vec<GivenLayer>,
    top: GivenBoundary,
    base: GivenBoundary,
    #[serde(default)]
    influence: Vec<(f64, f64)>,
    load_kpa: Vec<(f64, f64)>,
    drains: Option<GivenDrains>,
    at_days: Vec<f64>,
    at_depths_m: Vec<f64>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct GivenLayer {
    thickness_m: f64,
    cv_m2_per_year: Option<f64>,
    permeability_m_per_year: Option<f64>,
    mv_per_kpa: Option<f64>,
    ch_m2_per_year: Option<f64>,
}

#[derive(Deserialize, Clone, Copy)]
#[serde(rename_all = "snake_case")]
enum GivenBoundary {
    Drained,
    Closed,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct GivenDrains {
    spacing_m: f64,
    pattern: GivenPattern,
    equivalent_diameter_m: f64,
    smear_ratio: f64,
    permeability_ratio_h_over_s: f64,
    #[serde(default)]
    well_resistance: Option<WellResistance>,
    top_m: f64,
    base_m: f64,
    length_m: f64,
}

/// `null`, a number, or an object with the number.
#[derive(Deserialize)]
#[serde(untagged)]
enum WellResistance {
    Discharge(f64),
    Named { discharge_m3_per_year: f64 },
}

#[derive(Deserialize, Clone, Copy)]
#[serde(rename_all = "snake_case")]
enum GivenPattern {
    Triangular,
    Square,
}

fn boundary(given: GivenBoundary) -> Boundary {
    match given {
        GivenBoundary::Drained => Boundary::Drained,
        GivenBoundary::Closed => Boundary::Closed,
    }
}

/// Two of cv, k and mv give the third: cv = k/(mv gamma_w). All three must agree.
fn layer(index: usize, given: &GivenLayer, drained_by_wells: bool) -> Result<ColumnLayer, Refusal> {
    let path = |key: &str| format!("layers[{index}].{key}");
    let water = WATER_UNIT_WEIGHT_KN_M3;
    let mv = given.mv_per_kpa.map(|mv| within(&path("mv_per_kpa"), mv, &MV)).transpose()?;
    let (cv, k) = match (given.cv_m2_per_year, given.permeability_m_per_year, mv) {
        (Some(cv), Some(k), None) => (cv, k),
        (Some(cv), None, Some(mv)) => (cv, cv * mv * water),
        (None, Some(k), Some(mv)) => (k / (mv * water), k),
        (Some(cv), Some(k), Some(mv)) => {
            let implied = k / (mv * water);
            // More than the rounding of printed values.
            if (implied - cv).abs() > 1e-3 * cv.abs() {
                return Err(Refusal::new(
                    path("cv_m2_per_year"),
                    format!(
                        "cv is {cv}, but k/(mv*9.81) gives {implied} m2/year. Give two of the \
                         three, or values that agree"
                    ),
                ));
            }
            (cv, k)
        }
        _ => {
            return Err(Refusal::new(
                path("cv_m2_per_year"),
                "give two of cv_m2_per_year, permeability_m_per_year and mv_per_kpa",
            ));
        }
    };
    let ch = match given.ch_m2_per_year {
        Some(ch) => ch,
        None if drained_by_wells => {
            return Err(Refusal::new(path("ch_m2_per_year"), "is missing; drains need it"));
        }
        None => cv,
    };
    Ok(ColumnLayer {
        thickness_m: given.thickness_m,
        cv_m2_per_s: cv / YEAR_S,
        ch_m2_per_s: ch / YEAR_S,
        permeability_m_per_s: k / YEAR_S,
        drained: false,
    })
}

fn drains(given: &GivenDrains) -> Drains {
    Drains {
        pattern: match given.pattern {
            GivenPattern::Triangular => DrainPattern::Triangular,
            GivenPattern::Square => DrainPattern::Square,
        },
        spacing_m: given.spacing_m,
        equivalent_diameter_m: given.equivalent_diameter_m,
        smear_ratio: given.smear_ratio,
        permeability_ratio_h_over_s: given.permeability_ratio_h_over_s,
        discharge_m3_per_s: given.well_resistance.as_ref().map(|resistance| match resistance {
            WellResistance::Discharge(q) | WellResistance::Named { discharge_m3_per_year: q } => {
                q / YEAR_S
            }
        }),
        top_m: given.top_m,
        base_m: given.base_m,
        length_m: given.length_m,
    }
}

/// Where in the input each quantity of the core comes from.
const KEYS: &[(&str, &str)] = &[
    ("layer thickness", "layers[{}].thickness_m"),
    ("coefficient of consolidation cv", "layers[{}].cv_m2_per_year"),
    ("coefficient of consolidation ch", "layers[{}].ch_m2_per_year"),
    ("vertical permeability", "layers[{}].permeability_m_per_year"),
    ("coefficient of volume compressibility k/(cv gamma_w)", "layers[{}].permeability_m_per_year"),
    ("drain spacing", "drains.spacing_m"),
    ("drain spacing ratio n", "drains.equivalent_diameter_m"),
    ("equivalent drain diameter", "drains.equivalent_diameter_m"),
    ("smear ratio s", "drains.smear_ratio"),
    ("permeability ratio kh/ks", "drains.permeability_ratio_h_over_s"),
    ("depth of a drain end", "drains.base_m"),
    ("longest way inside a drain", "drains.length_m"),
    ("discharge capacity of a drain", "drains.well_resistance.discharge_m3_per_year"),
    ("depth", "at_depths_m[{}]"),
    ("day", "at_days[{}]"),
    ("influence ratio", "influence[{}]"),
    ("load", "load_kpa[{}]"),
];

fn refused(error: Error) -> Refusal {
    let (value, otherwise) = match error {
        Error::OutOfRange(value) => (Some(value), "layers"),
        Error::DrainEnds { .. } => (None, "drains.base_m"),
        Error::DrainLength { .. } => (None, "drains.length_m"),
        Error::SmearBeyondSpacing { .. } => (None, "drains.smear_ratio"),
        Error::BelowColumn { .. } => (None, "at_depths_m"),
        Error::Order { list: "load", .. } | Error::Empty { list: "load" } => (None, "load_kpa"),
        Error::Order { .. } | Error::Empty { .. } => (None, "influence"),
        _ => (None, "layers"),
    };
    located(error, value, KEYS, otherwise)
}

pub fn consolidation(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: ColumnInput = read(input)?;
    let layers: Vec<ColumnLayer> = given
        .layers
        .iter()
        .enumerate()
        .map(|(index, one)| layer(index, one, given.drains.is_some()))
        .collect::<Result<_, _>>()?;
    let drains = given.drains.as_ref().map(drains);
    let history = History {
        column: Column {
            layers: &layers,
            top: boundary(given.top),
            base: boundary(given.base),
            drains: drains.as_ref(),
            water_unit_weight_kn_m3: WATER_UNIT_WEIGHT_KN_M3,
        },
        influence: &given.influence,
        load_kpa: &given.load_kpa,
    };
    let (times, depths) = (given.at_days.len(), given.at_depths_m.len());
    let mut excess = vec![0.0; times * depths];
    let mut degree = vec![None; times];
    let mut settlement = vec![0.0; times];
    let mut answers = Answers {
        excess_kpa: &mut excess,
        degree_of_consolidation: &mut degree,
        settlement_m: &mut settlement,
    };
    batch::answer(&history, &given.at_days, &given.at_depths_m, &mut answers).map_err(refused)?;
    for (day, settled) in given.at_days.iter().zip(&settlement) {
        trail.step(Step {
            name: "settlement",
            value: *settled,
            unit: "m",
            formula: "s = sum mv h (dsigma - u)",
            inputs: &[("t_days", *day)],
            source: "Terzaghi 1925; implicit finite volumes",
        });
    }
    let rows: Vec<&[f64]> =
        if depths == 0 { vec![&[]; times] } else { excess.chunks(depths).collect() };
    Ok(json!({
        "excess_pore_pressure_kpa": rows,
        "degree_of_consolidation": degree,
        "settlement_m": settlement,
    }))
}
