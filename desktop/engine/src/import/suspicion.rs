//! What looks wrong with units, signs, rods or clocks, tested against the liquid level. Everything
//! here is a question to a person: nothing is changed because of it.

mod fill;
mod lag;
mod rods;
mod signs;
mod units;

use super::Imported;
use super::series::Series;
use crate::site::{Instrument, InstrumentKind, Signal, SiteFile};
use fill::Fill;
use serde::Serialize;
use std::fmt;

/// What is suspected.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum SuspicionKind {
    /// The values fit another unit than the one given.
    Unit {
        /// Unit given.
        given: crate::units::UnitName,
        /// Unit that the values fit.
        fits: crate::units::UnitName,
        /// What the values would be multiplied by.
        factor: f64,
    },
    /// The values go down when they should go up.
    Sign,
    /// A step as long as a rod.
    Rod {
        /// The step, m, as it stands in the readings.
        step_m: f64,
        /// Last reading before it.
        from_s: i64,
        /// First reading after it.
        to_s: i64,
    },
    /// The readings are whole hours late or early.
    Clock {
        /// How late, min; negative for early.
        late_min: i64,
    },
}

/// One suspicion.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Suspicion {
    /// What.
    pub kind: SuspicionKind,
    /// The instruments concerned.
    pub instruments: Vec<String>,
    /// Finding, evidence and what to do.
    pub message: String,
}

impl fmt::Display for Suspicion {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.message)
    }
}

/// Every suspicion about an import.
pub(super) fn all(site: &SiteFile, imported: &Imported) -> Vec<Suspicion> {
    let mut found = rods::find(site, imported);
    let stepped: Vec<String> = found.iter().flat_map(|rod| rod.instruments.clone()).collect();
    found.extend(units::of_settlement(site, imported, &stepped));
    let Some(level) = imported.liquid_level(site) else { return found };
    let level_unit = units::of_level(site, level);
    // The other tests go on with the level as it probably is, or its mistake would be laid to
    // every instrument.
    let factor = level_unit.as_ref().map_or(1.0, |(factor, _)| *factor);
    found.extend(level_unit.map(|(_, suspicion)| suspicion));
    let fill = Fill::new(level, factor);
    found.extend(units::of_piezometers(site, imported, &fill));
    found.extend(signs::find(site, imported, &fill));
    found.extend(lag::find(site, imported, &fill));
    found
}

/// Where an instrument stands in plan, as a share of the radius of the tank under test.
fn radii_from_axis(site: &SiteFile, instrument: &Instrument) -> f64 {
    site.tanks.first().map_or(f64::INFINITY, |tank| {
        (instrument.x_m - tank.x_m).hypot(instrument.y_m - tank.y_m) / (0.5 * tank.diameter_m)
    })
}

/// Under the tank or at its edge, where filling must push the ground down.
fn is_loaded(site: &SiteFile, instrument: &Instrument) -> bool {
    radii_from_axis(site, instrument) <= 1.05
}

fn measures_settlement(kind: InstrumentKind) -> bool {
    match kind {
        InstrumentKind::SettlementPlate
        | InstrumentKind::SettlementCell
        | InstrumentKind::Magnet
        | InstrumentKind::SurveyPoint => true,
        InstrumentKind::Piezometer | InstrumentKind::LevelGauge => false,
    }
}

/// The readings of an instrument in its unit; digits, whose sign and size are those of the gauge,
/// tell nothing here.
fn engineering<'i>(imported: &'i Imported, instrument: &Instrument) -> Option<&'i Series> {
    imported.instrument(&instrument.id).filter(|series| series.signal == Signal::Engineering)
}

/// The kind in the plural, at the beginning of a sentence.
fn plural(kind: InstrumentKind) -> &'static str {
    match kind {
        InstrumentKind::Piezometer => "Piezometers",
        InstrumentKind::SettlementPlate => "Plates",
        InstrumentKind::SettlementCell => "Settlement cells",
        InstrumentKind::Magnet => "Magnets",
        InstrumentKind::SurveyPoint => "Survey points",
        InstrumentKind::LevelGauge => "Level gauges",
    }
}

fn median(mut values: Vec<f64>) -> Option<f64> {
    values.sort_by(f64::total_cmp);
    values.get(values.len() / 2).copied()
}
