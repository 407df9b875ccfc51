//! What readings say about the settlement to come.

use super::request::{Refusal, located, read};
use super::trail::Trail;
use brimstead_core::forecast::asaoka::asaoka_with;
use brimstead_core::forecast::hyperbolic::hyperbolic_with;
use brimstead_core::forecast::{ForecastError, Interval, Observation};
use brimstead_core::units::DAY_S;
use serde::Deserialize;
use serde_json::value::RawValue;
use serde_json::{Value, json};

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct AsaokaInput {
    day: Vec<f64>,
    settlement_m: Vec<f64>,
    step_days: f64,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct HyperbolicInput {
    day: Vec<f64>,
    settlement_m: Vec<f64>,
}

const KEYS: &[(&str, &str)] = &[
    ("time since the hold began", "day[{}]"),
    ("settlement since the hold began", "settlement_m[{}]"),
    ("time step", "step_days"),
];

fn observations(day: &[f64], settlement_m: &[f64]) -> Result<Vec<Observation>, Refusal> {
    if day.len() != settlement_m.len() {
        return Err(Refusal::new(
            "settlement_m",
            format!(
                "{} settlements were given for {} days; give one for each day",
                settlement_m.len(),
                day.len()
            ),
        ));
    }
    let pairs = day.iter().zip(settlement_m);
    Ok(pairs
        .map(|(day, &settlement_m)| Observation { elapsed_s: day * DAY_S, settlement_m })
        .collect())
}

fn refused(error: ForecastError) -> Refusal {
    let (value, otherwise) = match error {
        ForecastError::Value(value) => (Some(value), "day".to_owned()),
        ForecastError::NotInOrder { index } => (None, format!("day[{index}]")),
        ForecastError::Fit(_) => (None, "day".to_owned()),
    };
    located(error, value, KEYS, &otherwise)
}

/// The ends of an interval; null where the readings do not bound it.
fn ends(interval: Option<Interval>) -> Option<[f64; 2]> {
    interval.map(|one| [one.low, one.high])
}

pub fn asaoka(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: AsaokaInput = read(input)?;
    let readings = observations(&given.day, &given.settlement_m)?;
    let start_s = readings.first().map_or(0.0, |first| first.elapsed_s);
    let found = asaoka_with(&readings, start_s, given.step_days * DAY_S, trail).map_err(refused)?;
    Ok(json!({
        "ultimate_m": found.ultimate.settlement_m,
        "slope": found.slope,
        "intercept_m": found.intercept_m,
        "interval_95_m": ends(found.ultimate.interval_m),
    }))
}

pub fn hyperbolic(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: HyperbolicInput = read(input)?;
    let readings = observations(&given.day, &given.settlement_m)?;
    let found = hyperbolic_with(&readings, trail).map_err(refused)?;
    Ok(json!({
        "ultimate_m": found.ultimate.settlement_m,
        "interval_95_m": ends(found.ultimate.interval_m),
    }))
}
