//! How files of readings are written.

use super::super::model::{
    Column, Decimal, Delimiter, Instrument, InstrumentUnit, ReadingsLayout, Signal, SiteParts,
};
use super::super::reader::{Reading, key_path};
use super::instruments::unknown_instrument;
use super::{quoted, unique, zone_refused};
use crate::time;
use crate::units::{Dimension, UnitName};

pub(super) fn check(reading: &Reading<'_>, parts: &SiteParts<'_>) {
    let Some(layouts) = parts.readings else { return };
    unique(reading, "readings", "name", layouts.iter().map(|layout| layout.name.as_str()));
    for (index, layout) in layouts.iter().enumerate() {
        let path = format!("readings[{index}]");
        writing(reading, &path, layout);
        times(reading, &path, layout);
        if let Some(instruments) = parts.instruments {
            columns(reading, &path, layout, instruments);
        }
    }
}

fn writing(reading: &Reading<'_>, path: &str, layout: &ReadingsLayout) {
    if layout.delimiter == Delimiter::Comma && layout.decimal == Decimal::Comma {
        let allowed = "\".\" when columns are parted by commas";
        reading.report(
            &format!("{path}.decimal"),
            "\",\"",
            allowed,
            "A number would fall apart into two columns.",
        );
    }
    for (index, pattern) in layout.files.iter().enumerate() {
        if let Err(error) = globset::Glob::new(pattern) {
            let allowed = "a pattern of file names such as \"P*.csv\"";
            reading.report(
                &format!("{path}.files[{index}]"),
                quoted(pattern),
                allowed,
                error.kind().to_string(),
            );
        }
    }
}

fn times(reading: &Reading<'_>, path: &str, layout: &ReadingsLayout) {
    if time::reading_zone(&layout.time_zone).is_none() {
        let allowed =
            "an IANA zone name such as \"Asia/Makassar\", or a fixed offset such as \"+08:00\"";
        zone_refused(reading, &format!("{path}.time_zone"), &layout.time_zone, allowed);
    }
    if let Err(reason) = time::check_format(&layout.time_format) {
        let allowed = "a format with date, hours and minutes, such as \"%Y-%m-%d %H:%M:%S\"";
        reading.report(
            &format!("{path}.time_format"),
            quoted(&layout.time_format),
            allowed,
            reason,
        );
    }
    if layout.columns.contains_key(&layout.time_column) {
        let allowed = "a header that is not also a column of values";
        reading.report(&format!("{path}.time_column"), quoted(&layout.time_column), allowed, "");
    }
}

fn columns(reading: &Reading<'_>, path: &str, layout: &ReadingsLayout, instruments: &[Instrument]) {
    let ids: Vec<&str> = instruments.iter().map(|instrument| instrument.id.as_str()).collect();
    let mut taken: Vec<&str> = Vec::new();
    for (header, column) in &layout.columns {
        let path = key_path(&format!("{path}.columns"), header);
        let target = match column {
            Column::Instrument { instrument, unit, raw } => {
                match instruments.iter().find(|known| known.id == *instrument) {
                    Some(known) => instrument_column(reading, &path, known, *unit, *raw),
                    None => {
                        unknown_instrument(reading, &format!("{path}.instrument"), instrument, &ids)
                    }
                }
                instrument
            }
            Column::Channel { channel, unit } => {
                channel_column(reading, &path, channel, *unit, &ids);
                channel
            }
        };
        if taken.contains(&target.as_str()) {
            let allowed = "one column for each instrument or channel of a file";
            reading.report(
                &path,
                format!("a second column for {}", quoted(target)),
                allowed,
                "Keep one of the two.",
            );
        }
        taken.push(target);
    }
}

fn instrument_column(
    reading: &Reading<'_>,
    path: &str,
    instrument: &Instrument,
    unit: UnitName,
    raw: Option<Signal>,
) {
    let digits = raw == Some(Signal::Digits);
    if digits && instrument.calibration.is_none() {
        let found = format!("raw digits for {}, which has no calibration", quoted(&instrument.id));
        reading.report(
            path,
            found,
            "a calibration with the instrument",
            "Digits cannot be turned into kPa without it.",
        );
    }
    let target = UnitName::from(instrument.unit);
    let needed = if digits { UnitName::Digits } else { target };
    if unit.dimension() != needed.dimension() {
        unit_refused(reading, path, unit, needed, &instrument.id);
    }
}

fn unit_refused(reading: &Reading<'_>, path: &str, unit: UnitName, needed: UnitName, whose: &str) {
    let found = format!("{}, which is {}", quoted(unit.word()), unit.dimension().word());
    let allowed = format!(
        "a unit of {} (\"{}\") for {}",
        needed.dimension().word(),
        needed.word(),
        quoted(whose)
    );
    let head = (unit.dimension(), needed.dimension()) == (Dimension::Length, Dimension::Pressure);
    let remedy =
        if head { "For a head of water write \"mH2O\", \"ftH2O\" or \"inH2O\"." } else { "" };
    reading.report(&format!("{path}.unit"), found, allowed, remedy);
}

fn channel_column(reading: &Reading<'_>, path: &str, channel: &str, unit: UnitName, ids: &[&str]) {
    let needed = match channel.strip_prefix("temperature:") {
        Some(id) if id != "air" && !ids.contains(&id) => {
            return unknown_instrument(reading, &format!("{path}.channel"), id, ids);
        }
        Some(_) => UnitName::Celsius,
        None if channel == "barometer" => UnitName::Kpa,
        None => {
            let allowed = "\"barometer\", \"temperature:air\", or \"temperature:\" and the id of an instrument";
            return reading.report(&format!("{path}.channel"), quoted(channel), allowed, "");
        }
    };
    if unit.dimension() != needed.dimension() {
        unit_refused(reading, path, unit, needed, channel);
    }
}

impl From<InstrumentUnit> for UnitName {
    fn from(unit: InstrumentUnit) -> Self {
        match unit {
            InstrumentUnit::Kpa => Self::Kpa,
            InstrumentUnit::Metre => Self::Metre,
            InstrumentUnit::Millimetre => Self::Millimetre,
        }
    }
}
