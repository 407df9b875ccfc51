//! Liquid level above the tank bottom, and settlement from levelling.

use super::{ELEVATION, PRESSURE, ReductionError, finite};
use crate::quantity::Bounded;
use serde::{Deserialize, Serialize};

static HEIGHT: Bounded = Bounded {
    name: "height in the tank",
    unit: "m",
    min: -1.0,
    max: 100.0,
    remedy: "Give it in metres.",
};

static UNIT_WEIGHT: Bounded = Bounded {
    name: "unit weight of the liquid",
    unit: "kN/m3",
    min: 5.0,
    max: 20.0,
    remedy: "Fresh water is 9.81, sea water 10.1.",
};

/// What a level gauge measures.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum LevelSignal {
    /// Height of liquid above a datum plate.
    Innage {
        /// Datum plate above the tank bottom, m.
        datum_above_bottom_m: f64,
    },
    /// Distance from a reference point down to the liquid.
    Ullage {
        /// Reference point above the tank bottom, m.
        reference_above_bottom_m: f64,
    },
    /// Pressure of the liquid at a sensor, kPa above the air.
    Pressure {
        /// Sensor above the tank bottom, m.
        sensor_above_bottom_m: f64,
        /// Unit weight of the liquid, kN/m3.
        unit_weight_kn_m3: f64,
    },
}

/// A checked level gauge. The liquid level counts from the tank bottom, since the bottom sinks and
/// the load follows the height of liquid, not its level above datum.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LiquidLevel {
    signal: LevelSignal,
}

impl LiquidLevel {
    /// Checks the set-up of a gauge.
    ///
    /// # Errors
    /// A value outside its range.
    pub fn new(signal: &LevelSignal) -> Result<Self, ReductionError> {
        match *signal {
            LevelSignal::Innage { datum_above_bottom_m } => HEIGHT.check(datum_above_bottom_m)?,
            LevelSignal::Ullage { reference_above_bottom_m } => {
                HEIGHT.check(reference_above_bottom_m)?
            }
            LevelSignal::Pressure { sensor_above_bottom_m, unit_weight_kn_m3 } => {
                UNIT_WEIGHT.check(unit_weight_kn_m3)?;
                HEIGHT.check(sensor_above_bottom_m)?
            }
        };
        Ok(Self { signal: *signal })
    }

    /// Liquid level above the tank bottom, m, from the gauge's own value (m or kPa).
    ///
    /// # Errors
    /// A value outside its range.
    pub fn liquid_level_m(&self, value: f64) -> Result<f64, ReductionError> {
        finite(match self.signal {
            LevelSignal::Innage { datum_above_bottom_m } => {
                HEIGHT.check(value)? + datum_above_bottom_m
            }
            LevelSignal::Ullage { reference_above_bottom_m } => {
                reference_above_bottom_m - HEIGHT.check(value)?
            }
            LevelSignal::Pressure { sensor_above_bottom_m, unit_weight_kn_m3 } => {
                PRESSURE.check(value)? / unit_weight_kn_m3 + sensor_above_bottom_m
            }
        })
    }
}

/// Settlement of a levelled point or a magnet, m: level at the baseline less level now, both above
/// the same datum.
///
/// # Errors
/// A level outside its range.
pub fn settlement_from_levels(baseline_m: f64, now_m: f64) -> Result<f64, ReductionError> {
    Ok(ELEVATION.check(baseline_m)? - ELEVATION.check(now_m)?)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn three_gauges_on_one_tank_agree() {
        let innage = LiquidLevel::new(&LevelSignal::Innage { datum_above_bottom_m: 0.05 });
        let ullage = LiquidLevel::new(&LevelSignal::Ullage { reference_above_bottom_m: 16.0 });
        let pressure = LiquidLevel::new(&LevelSignal::Pressure {
            sensor_above_bottom_m: 0.3,
            unit_weight_kn_m3: 9.81,
        });
        for (gauge, value) in [(innage, 9.95), (ullage, 6.0), (pressure, 9.7 * 9.81)] {
            let liquid_level_m = gauge.unwrap().liquid_level_m(value).unwrap();
            assert!((liquid_level_m - 10.0).abs() < 1e-12);
        }
    }

    #[test]
    fn a_point_that_sinks_settles_positively() {
        assert!((settlement_from_levels(12.345, 12.300).unwrap() - 0.045).abs() < 1e-12);
        assert!(settlement_from_levels(12.345, f64::NAN).is_err());
    }

    #[test]
    fn millimetres_in_place_of_metres_are_refused() {
        let gauge = LiquidLevel::new(&LevelSignal::Innage { datum_above_bottom_m: 0.0 }).unwrap();
        assert!(gauge.liquid_level_m(9_950.0).is_err());
    }
}
