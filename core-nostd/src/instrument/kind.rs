//! Kinds of instrument: what each measures and in which unit.

use serde::{Deserialize, Serialize};

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
