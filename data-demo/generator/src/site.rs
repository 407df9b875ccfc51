//! The parts of the site file that the invented ground and its loggers need.

use serde::Deserialize;
use std::collections::BTreeMap;

/// Seconds in a year of 365.25 days.
pub const YEAR_S: f64 = 365.25 * 86_400.0;

/// The site file, as far as it is read here.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Site {
    pub water: Water,
    pub layers: Vec<Layer>,
    pub base: Base,
    pub drains: Option<Drains>,
    pub tanks: Vec<Tank>,
    pub liquids: Vec<Liquid>,
    pub dead_load_since: jiff::Timestamp,
    pub baseline: jiff::Timestamp,
    pub stages: Vec<Stage>,
    pub band: Band,
    pub instruments: Vec<Instrument>,
    pub readings: Vec<Source>,
}

/// Ground water.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Water {
    pub water_table_m: f64,
    pub unit_weight_kn_m3: f64,
}

/// A layer of the best estimate.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Layer {
    pub thickness_m: f64,
    pub unit_weight_above_water_kn_m3: f64,
    pub unit_weight_below_water_kn_m3: f64,
    pub compressibility: Compressibility,
    pub preconsolidation: Preconsolidation,
    pub secondary_ratio: f64,
    pub cv_m2_per_year: f64,
    pub ch_m2_per_year: f64,
    pub permeability_m_per_s: f64,
    pub young_undrained_kpa: f64,
    pub pore_pressure_response: f64,
    pub drained: bool,
}

/// One-dimensional compressibility in the three forms of the site file.
#[derive(Debug, Clone, Copy, Deserialize)]
#[serde(untagged)]
#[allow(missing_docs)]
pub enum Compressibility {
    Index { void_ratio: f64, cc: f64, cr: f64 },
    Ratio { compression_ratio: f64, recompression_ratio: f64 },
    Modulus { constrained_modulus_kpa: f64 },
}

/// Stress history in the three forms of the site file.
#[derive(Debug, Clone, Copy, Deserialize)]
#[serde(rename_all = "snake_case")]
#[allow(missing_docs)]
pub enum Preconsolidation {
    Ocr(f64),
    PopKpa(f64),
    ValueKpa(f64),
}

/// Below the lowest layer.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Base {
    pub drainage: Drainage,
}

/// Flow at the base.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "snake_case")]
#[allow(missing_docs)]
pub enum Drainage {
    Drained,
    Closed,
}

/// Vertical drains.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Drains {
    pub pattern: Pattern,
    pub spacing_m: f64,
    pub equivalent_diameter_m: f64,
    pub smear_ratio: f64,
    pub permeability_ratio_h_over_s: f64,
    pub top_m: f64,
    pub base_m: f64,
    pub zone_radius_m: f64,
}

/// Drain pattern in plan.
#[derive(Debug, Clone, Copy, Deserialize)]
#[serde(rename_all = "snake_case")]
#[allow(missing_docs)]
pub enum Pattern {
    Triangular,
    Square,
}

/// A tank; the first of the file is under test.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Tank {
    pub x_m: f64,
    pub y_m: f64,
    pub diameter_m: f64,
    pub floor_pressure_kpa: f64,
    pub pad_pressure_kpa: f64,
    pub excavation_relief_kpa: f64,
    pub shell_line_load_kn_m: f64,
    pub ring_line_load_kn_m: f64,
    #[serde(default)]
    pub liquid_level_m: f64,
}

/// The liquid from an instant on.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Liquid {
    pub unit_weight_kn_m3: f64,
}

/// A planned rise or lowering with its hold.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Stage {
    pub start: jiff::Timestamp,
    pub end: jiff::Timestamp,
    pub to_level_m: f64,
}

/// The spread round the best estimate.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Band {
    pub cases: Vec<Factors>,
}

/// Multipliers on the best estimate.
#[derive(Debug, Clone, Deserialize)]
#[allow(missing_docs)]
pub struct Factors {
    pub compressibility: f64,
    pub cv: f64,
    pub ch: f64,
    pub pore_pressure_response: f64,
    pub young: f64,
}

/// An instrument in the ground, on the tank or beside it.
#[derive(Debug, Clone, Deserialize)]
#[allow(missing_docs)]
pub struct Instrument {
    pub id: String,
    pub kind: Kind,
    pub x_m: f64,
    pub y_m: f64,
    pub depth_m: f64,
    pub noise_sd: f64,
    #[serde(default = "yes")]
    pub vented: bool,
    pub calibration: Option<Calibration>,
}

fn yes() -> bool {
    true
}

/// What an instrument measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "snake_case")]
#[allow(missing_docs)]
pub enum Kind {
    Piezometer,
    SettlementPlate,
    SettlementCell,
    Magnet,
    SurveyPoint,
    LevelGauge,
}

/// Vibrating-wire calibration: pressure = factor (zero digits - digits) + temperature and air
/// pressure terms.
#[derive(Debug, Clone, Copy, Deserialize)]
#[allow(missing_docs)]
pub struct Calibration {
    pub digits_zero: f64,
    pub factor_kpa_per_digit: f64,
    pub temperature_zero_c: f64,
    pub temperature_factor_kpa_per_c: f64,
    pub barometer_zero_kpa: f64,
}

/// A family of reading files.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Source {
    pub name: String,
    pub files: Vec<String>,
    pub delimiter: String,
    pub decimal: String,
    pub time_column: String,
    pub time_format: String,
    pub time_zone: String,
    pub missing: Vec<String>,
    pub encoding: Option<String>,
    pub columns: BTreeMap<String, Column>,
}

/// What a column of a reading file holds.
#[derive(Debug, Deserialize)]
#[allow(missing_docs)]
pub struct Column {
    pub instrument: Option<String>,
    pub channel: Option<String>,
    pub unit: String,
}
