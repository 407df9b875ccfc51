//! From imported series to readings in the core's unit.

use super::Reduced;
use crate::expect::scale_of;
use crate::import::{Imported, Series};
use crate::site::{Calibration, Instrument, Signal};
use brimstead_core::instrument::reduce::{
    VibratingWire, WireCalibration, WireConversion, WireInput,
};
use brimstead_core::instrument::{Doubt, Reading};

/// A reading of a second quantity counts for this long, s.
const COMPANION_AGE_S: i64 = 2 * 3600;

/// The readings of an instrument by rising time, missing ones included.
pub fn readings_of(instrument: &Instrument, imported: &Imported) -> Vec<Reduced> {
    let Some(series) = imported.instrument(&instrument.id) else { return Vec::new() };
    let scale = scale_of(instrument.unit);
    let mut list: Vec<Reduced> = match (&series.signal, &instrument.calibration) {
        (Signal::Digits, Some(calibration)) => digits(instrument, calibration, series, imported),
        // Digits without a calibration are no pressure.
        (Signal::Digits, None) => series
            .points
            .iter()
            .map(|point| Reduced {
                reading: Reading::absent(point.time_s, Doubt::NoSignal),
                raw: Some(point.value),
            })
            .collect(),
        (Signal::Engineering, _) => series
            .points
            .iter()
            .map(|point| Reduced {
                reading: Reading::new(point.time_s, point.value / scale),
                raw: point.raw.or(Some(point.value)),
            })
            .collect(),
    };
    list.extend(
        series.not_read.iter().map(|mark| Reduced {
            reading: Reading::absent(mark.time_s, Doubt::NoAnswer),
            raw: None,
        }),
    );
    list.sort_by_key(|one| one.reading.time_s);
    list
}

fn digits(
    instrument: &Instrument,
    calibration: &Calibration,
    series: &Series,
    imported: &Imported,
) -> Vec<Reduced> {
    let gauge = VibratingWire::new(&WireCalibration {
        digits_zero: calibration.digits_zero,
        conversion: WireConversion::Linear {
            factor_kpa_per_digit: calibration.factor_kpa_per_digit,
        },
        temperature_zero_c: calibration.temperature_zero_c,
        temperature_factor_kpa_per_c: calibration.temperature_factor_kpa_per_c,
        barometer_zero_kpa: calibration.barometer_zero_kpa,
        apply_temperature: calibration.apply_temperature,
        apply_barometer: calibration.apply_barometer,
    });
    let temperature = imported.channel(&format!("temperature:{}", instrument.id));
    let barometer = imported.channel("barometer");
    let each = series.points.iter();
    each.map(|point| {
        let input = WireInput {
            digits: point.value,
            temperature_c: companion(temperature, point.time_s),
            barometer_kpa: companion(barometer, point.time_s),
        };
        let reduced = gauge.and_then(|gauge| gauge.pressure(&input));
        let reading = match reduced {
            Ok(pressure) => Reading::new(point.time_s, pressure.pressure_kpa),
            Err(refused) => Reading::absent(point.time_s, refused.doubt()),
        };
        Reduced { reading, raw: Some(point.value) }
    })
    .collect()
}

/// The latest value of a second quantity at an instant, while it is fresh.
fn companion(series: Option<&Series>, time_s: i64) -> Option<f64> {
    let points = &series?.points;
    let after = points.partition_point(|point| point.time_s <= time_s);
    let latest = points.get(after.checked_sub(1)?)?;
    (time_s - latest.time_s <= COMPANION_AGE_S).then_some(latest.value)
}
