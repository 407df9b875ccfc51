//! Reduction of raw signals.

use super::request::{Refusal, located, read};
use super::trail::Trail;
use brimstead_core::instrument::reduce::{
    ReductionError, VibratingWire, WireCalibration, WireConversion, WireInput,
};
use serde::Deserialize;
use serde_json::value::RawValue;
use serde_json::{Value, json};

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct WirePressureInput {
    digits: f64,
    digits_zero: f64,
    linear: Option<Linear>,
    polynomial: Option<Polynomial>,
    temperature_c: f64,
    temperature_zero_c: f64,
    temperature_factor_kpa_per_c: f64,
    barometer_kpa: f64,
    barometer_zero_kpa: f64,
    apply_temperature: bool,
    apply_barometer: bool,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Linear {
    factor_kpa_per_digit: f64,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Polynomial {
    a: f64,
    b: f64,
    c: f64,
}

/// The reduction does not say which of two like values it refuses; the caller does by `digits`.
fn refused(error: ReductionError, digits: &str) -> Refusal {
    let value = if let ReductionError::OutOfRange(value) = error { Some(value) } else { None };
    located(error, value, &[("wire digits (f^2/1000)", digits)], digits)
}

pub fn wire_pressure(input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    let given: WirePressureInput = read(input)?;
    let conversion = match (given.linear, given.polynomial) {
        (Some(Linear { factor_kpa_per_digit }), None) => {
            WireConversion::Linear { factor_kpa_per_digit }
        }
        (None, Some(Polynomial { a, b, c })) => WireConversion::Polynomial { a, b, c },
        _ => return Err(Refusal::new("linear", "give either linear or polynomial, not both")),
    };
    let calibration = WireCalibration {
        digits_zero: given.digits_zero,
        conversion,
        temperature_zero_c: given.temperature_zero_c,
        temperature_factor_kpa_per_c: given.temperature_factor_kpa_per_c,
        barometer_zero_kpa: given.barometer_zero_kpa,
        apply_temperature: given.apply_temperature,
        apply_barometer: given.apply_barometer,
    };
    let gauge = VibratingWire::new(&calibration).map_err(|error| refused(error, "digits_zero"))?;
    let reading = WireInput {
        digits: given.digits,
        temperature_c: Some(given.temperature_c),
        barometer_kpa: Some(given.barometer_kpa),
    };
    let reduced = gauge.pressure_with(&reading, trail).map_err(|error| refused(error, "digits"))?;
    Ok(json!({"pressure_kpa": reduced.pressure_kpa}))
}
