//! The meaning of a column from the words of its header.

use super::Table;
use crate::site::{Column, Instrument, Signal, SiteFile};
use crate::units::{Dimension, UnitName};
use std::collections::BTreeMap;

/// Columns found, and what was guessed about each in words.
#[derive(Debug, Default)]
pub(super) struct Found {
    pub columns: BTreeMap<String, Column>,
    pub notes: Vec<String>,
}

/// Finds what the columns are. A column that nothing is known about is left to the report of
/// columns not taken.
pub(super) fn columns(table: &Table, time_column: usize, site: &SiteFile) -> Found {
    let mut found = Found::default();
    for (position, header) in table.headers.iter().enumerate() {
        if position == time_column || header.is_empty() {
            continue;
        }
        let words = words(header);
        let below: Vec<&str> = table.column(position).take(2).collect();
        let guessed = match instrument(header, &site.instruments) {
            Some(instrument) => of_instrument(&words, &below, instrument),
            None => of_air(&words, &below),
        };
        if let Some((column, note)) = guessed {
            found.notes.push(format!("Guessed: column \"{header}\" is {note}."));
            found.columns.insert(header.clone(), column);
        }
    }
    found
}

/// The words of a header: runs of letters, digits and the signs that units are written with.
fn words(header: &str) -> Vec<&str> {
    header
        .split(|c: char| !(c.is_alphanumeric() || "/°²".contains(c)))
        .filter(|word| !word.is_empty())
        .collect()
}

/// The instrument whose id stands in the header by itself; the longest, when an id is part of
/// another.
fn instrument<'i>(header: &str, instruments: &'i [Instrument]) -> Option<&'i Instrument> {
    let header = header.to_lowercase();
    let named = |instrument: &&Instrument| {
        let id = instrument.id.to_lowercase();
        header.match_indices(&id).any(|(at, _)| {
            let before = header[..at].chars().next_back();
            let after = header[at + id.len()..].chars().next();
            !before.is_some_and(char::is_alphanumeric) && !after.is_some_and(char::is_alphanumeric)
        })
    };
    instruments.iter().filter(named).max_by_key(|instrument| instrument.id.len())
}

/// The unit of a header, or of one of the lines right below it, where some loggers put it.
fn unit_of(words: &[&str], below: &[&str]) -> Option<UnitName> {
    let last = words.len().saturating_sub(1);
    let in_header = words.iter().enumerate().rev().find_map(|(at, word)| {
        // "in" is a word of its own except at the end.
        let preposition = at != last && word.eq_ignore_ascii_case("in");
        if preposition { None } else { unit(word) }
    });
    in_header.or_else(|| below.iter().find_map(|word| unit(word)))
}

fn of_instrument(
    words: &[&str],
    below: &[&str],
    instrument: &Instrument,
) -> Option<(Column, String)> {
    let id = instrument.id.clone();
    // The id itself may read like a unit ("M").
    let others: Vec<&str> =
        words.iter().copied().filter(|word| !word.eq_ignore_ascii_case(&id)).collect();
    let warm = others.iter().any(|word| {
        ["t", "temp", "temperature"].iter().any(|name| word.eq_ignore_ascii_case(name))
    });
    let own = UnitName::from(instrument.unit);
    let readings = |unit, raw| Column::Instrument { instrument: id.clone(), unit, raw };
    Some(match unit_of(&others, below) {
        Some(unit) if unit.dimension() == Dimension::Temperature => temperature(&id, unit),
        None if warm => temperature(&id, UnitName::Celsius),
        Some(UnitName::Digits) if instrument.calibration.is_some() => {
            (readings(UnitName::Digits, Some(Signal::Digits)), format!("{id} in digits"))
        }
        Some(unit) if unit.dimension() == own.dimension() => {
            (readings(unit, None), format!("{id} in {unit}"))
        }
        Some(_) => return None,
        None => (readings(own, None), format!("{id}, without a unit: {own} assumed, confirm it")),
    })
}

fn temperature(id: &str, unit: UnitName) -> (Column, String) {
    let channel = format!("temperature:{id}");
    (Column::Channel { channel, unit }, format!("the temperature of {id} in {unit}"))
}

fn of_air(words: &[&str], below: &[&str]) -> Option<(Column, String)> {
    let unit = unit_of(words, below)?;
    let about = |names: &[&str]| {
        words.iter().any(|word| names.iter().any(|name| word.to_lowercase().starts_with(name)))
    };
    match unit.dimension() {
        Dimension::Pressure if about(&["baro", "air", "atm"]) => {
            let channel = "barometer".to_owned();
            Some((Column::Channel { channel, unit }, format!("the barometer in {unit}")))
        }
        Dimension::Temperature if about(&["air", "ambient", "outside"]) => {
            Some(temperature("air", unit))
        }
        _ => None,
    }
}

/// A unit by the ways it is written in headers.
fn unit(word: &str) -> Option<UnitName> {
    let unit = match word.to_lowercase().as_str() {
        "pa" => UnitName::Pa,
        "kpa" | "kn/m2" | "kn/m²" => UnitName::Kpa,
        "mpa" => UnitName::Mpa,
        "bar" => UnitName::Bar,
        "mbar" => UnitName::Mbar,
        "hpa" => UnitName::Hpa,
        "psi" => UnitName::Psi,
        "psf" => UnitName::Psf,
        "kgf/cm2" | "kg/cm2" => UnitName::KgfCm2,
        "mh2o" | "mwc" | "mwg" => UnitName::MetreWater,
        "fth2o" => UnitName::FootWater,
        "inh2o" => UnitName::InchWater,
        "mmhg" => UnitName::MillimetreMercury,
        "m" | "metre" | "metres" | "meter" | "meters" => UnitName::Metre,
        "dm" => UnitName::Decimetre,
        "cm" => UnitName::Centimetre,
        "mm" => UnitName::Millimetre,
        "ft" | "feet" => UnitName::Foot,
        "in" | "inch" | "inches" => UnitName::Inch,
        "c" | "°c" | "degc" => UnitName::Celsius,
        "f" | "°f" | "degf" => UnitName::Fahrenheit,
        "k" => UnitName::Kelvin,
        "digits" | "digit" => UnitName::Digits,
        _ => return None,
    };
    Some(unit)
}
