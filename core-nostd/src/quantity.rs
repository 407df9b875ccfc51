//! What a number is, in which unit and within which range: written once, used by the check, by
//! the message and by the random values of tests. The words that expectation and reading share:
//! the expected band and the kinds of instrument.

use core::fmt;
use serde::{Deserialize, Serialize};

/// A named quantity with its unit and allowed range (both ends included).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bounded {
    /// Term of the trade, as it reads in a message.
    pub name: &'static str,
    /// Unit of `min`, `max` and of the value checked; empty for a pure number.
    pub unit: &'static str,
    /// Smallest allowed value.
    pub min: f64,
    /// Largest allowed value.
    pub max: f64,
    /// What to look at when a value is refused.
    pub remedy: &'static str,
}

impl Bounded {
    /// Returns the value when it is finite and inside the range.
    ///
    /// # Errors
    /// [`OutOfRange`] carrying the value and this quantity.
    pub fn check(&'static self, value: f64) -> Result<f64, OutOfRange> {
        // Written so that NaN fails.
        if value >= self.min && value <= self.max {
            Ok(value)
        } else {
            Err(OutOfRange { quantity: self, value, index: None })
        }
    }

    /// As [`Bounded::check`], naming which item of a list is meant (counted from 0).
    ///
    /// # Errors
    /// [`OutOfRange`] carrying the value, this quantity and the index.
    pub fn check_at(&'static self, value: f64, index: usize) -> Result<f64, OutOfRange> {
        self.check(value).map_err(|refused| OutOfRange { index: Some(index), ..refused })
    }
}

/// A value that was refused: which quantity, which value, what is allowed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OutOfRange {
    /// The quantity with its range and remedy.
    pub quantity: &'static Bounded,
    /// The value that was given.
    pub value: f64,
    /// Position in a list, counted from 0, where there is one.
    pub index: Option<usize>,
}

impl fmt::Display for OutOfRange {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let q = self.quantity;
        write!(f, "{} ", q.name)?;
        if let Some(index) = self.index {
            write!(f, "(item {}) ", index.saturating_add(1))?;
        }
        write!(
            f,
            "is {} {}; allowed is {} to {} {}. {}",
            self.value, q.unit, q.min, q.max, q.unit, q.remedy
        )
    }
}

impl core::error::Error for OutOfRange {}

/// What the calculation expects an instrument to read at one moment: the likely value and the ends
/// of the band, in the instrument's own unit.
///
/// `low <= likely <= high`, all finite; [`Expected::new`] checks it. Code that receives one from
/// outside asks [`Expected::is_band`] before it relies on it.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Expected {
    /// Lower end of the band.
    pub low: f64,
    /// Most likely value.
    pub likely: f64,
    /// Upper end of the band.
    pub high: f64,
}

impl Expected {
    /// A band from its ends and the likely value; `None` unless all are finite and in order.
    #[must_use]
    pub fn new(low: f64, likely: f64, high: f64) -> Option<Self> {
        let band = Self { low, likely, high };
        band.is_band().then_some(band)
    }

    /// Whether the three values are finite and in order.
    #[must_use]
    pub fn is_band(&self) -> bool {
        self.low.is_finite()
            && self.high.is_finite()
            && self.low <= self.likely
            && self.likely <= self.high
    }
}

/// A kind of instrument. The sign of each is that of the core: settlement, pressure and outward
/// movement positive.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Kind {
    /// Pore pressure at a sealed tip.
    Piezometer,
    /// Pore pressure from the water level in an open pipe; slow in clay.
    Standpipe,
    /// Settlement of a plate under fill, read on a rod.
    SettlementPlate,
    /// Settlement of a liquid-filled cell against its reservoir.
    SettlementCell,
    /// Settlement of a magnet on an extensometer tube.
    Magnet,
    /// Settlement of a point on the shell or beside it, by levelling.
    SurveyPoint,
    /// Fixed point that levelling starts from.
    Benchmark,
    /// Lateral displacement at one depth of an inclinometer tube, outward positive.
    Inclinometer,
    /// Rotation of a wall, pad or shell.
    TiltMeter,
    /// Liquid level above the tank bottom.
    LevelGauge,
    /// Air pressure.
    Barometer,
    /// Temperature.
    Thermometer,
}

impl Kind {
    /// What is measured, as it reads in a message.
    #[must_use]
    pub const fn measures(self) -> &'static str {
        match self {
            Self::Piezometer | Self::Standpipe => "pore pressure",
            Self::SettlementPlate | Self::SettlementCell | Self::Magnet | Self::SurveyPoint => {
                "settlement"
            }
            Self::Benchmark => "benchmark movement",
            Self::Inclinometer => "lateral displacement",
            Self::TiltMeter => "tilt",
            Self::LevelGauge => "liquid level",
            Self::Barometer => "air pressure",
            Self::Thermometer => "temperature",
        }
    }

    /// Unit of a reduced reading.
    #[must_use]
    pub const fn unit(self) -> &'static str {
        match self {
            Self::Piezometer | Self::Standpipe | Self::Barometer => "kPa",
            Self::SettlementPlate
            | Self::SettlementCell
            | Self::Magnet
            | Self::SurveyPoint
            | Self::Benchmark
            | Self::Inclinometer
            | Self::LevelGauge => "m",
            Self::TiltMeter => "mm/m",
            Self::Thermometer => "C",
        }
    }

    /// Whether the value speaks of the ground (and can carry limits) or only of the load and the
    /// air that other readings are compared with or corrected for.
    #[must_use]
    pub const fn reads_the_ground(self) -> bool {
        !matches!(self, Self::LevelGauge | Self::Barometer | Self::Thermometer | Self::Benchmark)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::string::ToString;

    static DIAMETER: Bounded = Bounded {
        name: "tank diameter",
        unit: "m",
        min: 1.0,
        max: 200.0,
        remedy: "Give it in metres.",
    };

    #[test]
    fn nan_and_infinity_are_refused() {
        for value in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY, 0.5, 201.0] {
            assert!(DIAMETER.check(value).is_err(), "{value} must be refused");
        }
        assert_eq!(DIAMETER.check(52.0), Ok(52.0));
    }

    #[test]
    fn a_band_out_of_order_or_not_finite_is_refused() {
        assert!(Expected::new(1.0, 2.0, 3.0).is_some());
        assert!(Expected::new(2.0, 2.0, 2.0).is_some());
        for (low, likely, high) in [
            (3.0, 2.0, 1.0),
            (1.0, 4.0, 3.0),
            (f64::NAN, 2.0, 3.0),
            (1.0, f64::NAN, 3.0),
            (f64::NEG_INFINITY, 2.0, 3.0),
            (1.0, 2.0, f64::INFINITY),
        ] {
            assert!(Expected::new(low, likely, high).is_none(), "{low} {likely} {high}");
        }
    }

    #[test]
    fn message_names_value_range_and_remedy() {
        let message = DIAMETER.check_at(-3.0, 1).unwrap_err().to_string();
        assert_eq!(
            message,
            "tank diameter (item 2) is -3 m; allowed is 1 to 200 m. Give it in metres."
        );
    }
}
