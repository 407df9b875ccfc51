//! From the true value to what stands in the file: noise, air, temperature, faults, raw digits.

use crate::ground::GroundHistory;
use crate::noise::Noise;
use crate::run::{Fault, Run};
use crate::site::{Column, Instrument, Kind, Site};
use crate::weather::Weather;

/// Air pressure at which an unvented gauge without correction was zeroed, kPa.
const ZEROED_AT_KPA: f64 = 101.4;
/// Sun on the tubes of the settlement cells, mm per C above the mean of the day.
const CELL_WARMTH_MM_PER_C: f64 = 0.3;
/// Error that a round has in common, from its bench mark, mm.
const ROUND_ERROR_MM: f64 = 0.4;

/// One column of a reading file, reading by reading.
#[derive(Debug)]
pub struct Signal<'a> {
    column: &'a Column,
    instrument: Option<&'a Instrument>,
    faults: Vec<&'a Fault>,
    noise: Noise,
    /// Errors in common with the other columns of the file.
    shared: Noise,
    last: Option<String>,
}

impl<'a> Signal<'a> {
    /// The signal of a column in a run.
    pub fn new(site: &'a Site, run: &'a Run, source: &str, column: &'a Column) -> Self {
        let instrument =
            column.instrument.as_ref().and_then(|id| site.instruments.iter().find(|i| &i.id == id));
        let name = column.instrument.as_ref().or(column.channel.as_ref());
        let id = name.map_or("", String::as_str);
        Signal {
            column,
            instrument,
            faults: run.faults.iter().filter(|f| concerns(f, id)).collect(),
            noise: Noise::for_purpose(&format!("{}/{id}", run.name)),
            shared: Noise::for_purpose(&format!("{}/{source}", run.name)),
            last: None,
        }
    }

    /// Text of the reading at an instant; none where the file shows its mark for missing values.
    pub fn read(&mut self, ground: &GroundHistory, weather: &Weather, at_s: i64) -> Option<String> {
        let value = self.measured(ground, weather, at_s) + self.error_of_faults(at_s);
        let text = self.in_words(value, weather, at_s);
        let (mut missing, mut frozen) = (false, false);
        for fault in &self.faults {
            match fault {
                Fault::Missing { from_s, to_s, .. } => missing |= (*from_s..*to_s).contains(&at_s),
                Fault::Frozen { from_s, to_s, .. } => frozen |= (*from_s..*to_s).contains(&at_s),
                _ => {}
            }
        }
        if missing {
            return None;
        }
        if !frozen || self.last.is_none() {
            self.last = Some(text);
        }
        self.last.clone()
    }

    fn measured(&mut self, ground: &GroundHistory, weather: &Weather, at_s: i64) -> f64 {
        let Some(instrument) = self.instrument else {
            return match self.column.channel.as_deref() {
                Some("barometer") => weather.barometer_kpa(at_s) + self.noise.normal(0.01),
                Some("temperature:air") => weather.air_c(at_s) + self.noise.normal(0.2),
                _ => weather.ground_c(at_s) + self.noise.normal(0.03),
            };
        };
        let value = ground.value(instrument, at_s) + self.noise.normal(instrument.noise_sd);
        match instrument.kind {
            Kind::SurveyPoint => value + self.shared.normal(ROUND_ERROR_MM),
            Kind::SettlementCell => {
                value + CELL_WARMTH_MM_PER_C * weather.warmth_of_the_hour_c(at_s)
            }
            // A gauge without a vent feels the air; with a calibration that is for `in_digits`.
            Kind::Piezometer if !instrument.vented && instrument.calibration.is_none() => {
                value + weather.barometer_kpa(at_s) - ZEROED_AT_KPA
            }
            _ => value,
        }
    }

    fn error_of_faults(&self, at_s: i64) -> f64 {
        self.faults
            .iter()
            .map(|fault| match fault {
                Fault::Spike { at_s: when, by, .. } if *when == at_s => *by,
                Fault::Step { from_s, by, .. } if at_s >= *from_s => *by,
                _ => 0.0,
            })
            .sum()
    }

    fn in_words(&self, value: f64, weather: &Weather, at_s: i64) -> String {
        let kind = self.instrument.map(|i| i.kind);
        let (number, decimals) = match (self.column.unit.as_str(), kind) {
            ("digits", _) => (self.in_digits(value, weather, at_s), 1),
            ("kPa", _) => (value, 2),
            ("m", Some(Kind::LevelGauge)) => (value, 3),
            ("m", _) => (value / 1000.0, 3),
            ("mm", Some(Kind::SettlementPlate)) => (value, 0),
            _ => (value, 1),
        };
        let text = format!("{number:.decimals$}");
        // No logger writes a minus before zero.
        match text.strip_prefix('-') {
            Some(rest) if rest.bytes().all(|b| matches!(b, b'0' | b'.')) => rest.to_string(),
            _ => text,
        }
    }

    /// Pressure = factor (zero - digits) + K (T - T0) - (B - B0), solved for the digits.
    fn in_digits(&self, value: f64, weather: &Weather, at_s: i64) -> f64 {
        let Some(calibration) = self.instrument.and_then(|i| i.calibration) else {
            return value;
        };
        let warmer_c = weather.ground_c(at_s) - calibration.temperature_zero_c;
        let air_kpa = weather.barometer_kpa(at_s) - calibration.barometer_zero_kpa;
        let by_wire = value - calibration.temperature_factor_kpa_per_c * warmer_c + air_kpa;
        calibration.digits_zero - by_wire / calibration.factor_kpa_per_digit
    }
}

fn concerns(fault: &Fault, name: &str) -> bool {
    match fault {
        Fault::Spike { id, .. }
        | Fault::Frozen { id, .. }
        | Fault::Step { id, .. }
        | Fault::Missing { id, .. } => *id == name,
        Fault::Gap { .. } | Fault::ClockFast { .. } => false,
    }
}
