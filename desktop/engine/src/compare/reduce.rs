//! From imported series to readings in the core's unit.

use super::Reduced;
use crate::expect::scale_of;
use crate::import::{Imported, Series};
use crate::site::{Calibration, Instrument, Signal};
use brimstead_core::instrument::reduce::{
    VibratingWire, WireCalibration, WireConversion, WireInput, WirePressure,
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
    let gauge = VibratingWire::new(&wire(calibration));
    let each = series.points.iter();
    each.map(|point| {
        let input = wire_input(instrument, imported, point.time_s, point.value);
        let reduced = gauge.and_then(|gauge| gauge.pressure(&input));
        let reading = match reduced {
            Ok(pressure) => Reading::new(point.time_s, pressure.pressure_kpa),
            Err(refused) => Reading::absent(point.time_s, refused.doubt()),
        };
        Reduced { reading, raw: Some(point.value) }
    })
    .collect()
}

fn wire(calibration: &Calibration) -> WireCalibration {
    WireCalibration {
        digits_zero: calibration.digits_zero,
        conversion: WireConversion::Linear {
            factor_kpa_per_digit: calibration.factor_kpa_per_digit,
        },
        temperature_zero_c: calibration.temperature_zero_c,
        temperature_factor_kpa_per_c: calibration.temperature_factor_kpa_per_c,
        barometer_zero_kpa: calibration.barometer_zero_kpa,
        apply_temperature: calibration.apply_temperature,
        apply_barometer: calibration.apply_barometer,
    }
}

fn wire_input(instrument: &Instrument, imported: &Imported, time_s: i64, digits: f64) -> WireInput {
    let temperature = imported.channel(&format!("temperature:{}", instrument.id));
    WireInput {
        digits,
        temperature_c: companion(temperature, time_s),
        barometer_kpa: companion(imported.channel("barometer"), time_s),
    }
}

/// The digits of an instrument with its calibration and its readings in digits.
fn in_digits<'a>(
    instrument: &'a Instrument,
    imported: &'a Imported,
) -> Option<(&'a Calibration, &'a Series)> {
    let series = imported.instrument(&instrument.id)?;
    let calibration = instrument.calibration.as_ref()?;
    (series.signal == Signal::Digits).then_some((calibration, series))
}

/// What a gauge read in digits gives before its corrections, in the core's unit; nothing for an
/// instrument that is not read in digits.
#[must_use]
pub fn uncorrected(instrument: &Instrument, imported: &Imported) -> Vec<(i64, f64)> {
    let Some((calibration, series)) = in_digits(instrument, imported) else { return Vec::new() };
    let bare =
        WireCalibration { apply_temperature: false, apply_barometer: false, ..wire(calibration) };
    let Ok(gauge) = VibratingWire::new(&bare) else { return Vec::new() };
    let input = |digits| WireInput { digits, temperature_c: None, barometer_kpa: None };
    let each = series.points.iter();
    each.filter_map(|point| {
        let pressure = gauge.pressure(&input(point.value)).ok()?;
        Some((point.time_s, pressure.pressure_kpa))
    })
    .collect()
}

/// How the pressure of a gauge read in digits came about at an instant at which it was read; none
/// for an instrument that is not read in digits, or when a correction lacks its input.
#[must_use]
pub fn reduction_at(
    instrument: &Instrument,
    imported: &Imported,
    time_s: i64,
) -> Option<WirePressure> {
    let (calibration, series) = in_digits(instrument, imported)?;
    let place = series.points.binary_search_by_key(&time_s, |point| point.time_s).ok()?;
    let input = wire_input(instrument, imported, time_s, series.points[place].value);
    VibratingWire::new(&wire(calibration)).ok()?.pressure(&input).ok()
}

/// The latest value of a second quantity at an instant, while it is fresh.
fn companion(series: Option<&Series>, time_s: i64) -> Option<f64> {
    let points = &series?.points;
    let after = points.partition_point(|point| point.time_s <= time_s);
    let latest = points.get(after.checked_sub(1)?)?;
    (time_s - latest.time_s <= COMPANION_AGE_S).then_some(latest.value)
}
