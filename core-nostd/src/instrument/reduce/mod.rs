//! Reductions: raw signal to value, one named step after another.
//!
//! A step that can be justified on one site and not on another (temperature, air pressure, sinking
//! of the tip) has its own switch, and each result gives the contribution of every step, so that a
//! wrong factor or zero can be seen. A step that is switched on and lacks its input is an error,
//! not a silent zero.

mod cell;
mod level;
mod plate;
mod signal;
mod water;
mod wire;

pub use cell::{CellCalibration, CellInput, DensityLaw, SettlementCell};
pub use level::{LevelSignal, LiquidLevel, settlement_from_levels};
pub use plate::{RodExtension, SettlementPlate};
pub use signal::{CurrentLoop, LinearSignal, SignalFault, Thermistor};
pub use water::{ExcessPorePressure, standpipe_pressure_kpa};
pub use wire::{
    VibratingWire, WireCalibration, WireConversion, WireInput, WirePressure, digits_from_frequency,
    site_zeroed_constant,
};

use super::{CorrectionInput, Doubt, Full};
use crate::quantity::{Bounded, OutOfRange};
use core::fmt;

/// Why a raw signal could not be reduced.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ReductionError {
    /// A value outside its range.
    OutOfRange(OutOfRange),
    /// A step that is switched on lacks its input.
    Missing(CorrectionInput),
    /// The signal itself says that it is no measurement.
    Signal(SignalFault),
    /// Two ends of a scale are equal.
    EmptyScale,
    /// More rod extensions than can be kept.
    TooMany(Full),
    /// The result is not a finite number: the calibration does not fit the signal.
    NotFinite,
}

impl ReductionError {
    /// The doubt to put in place of a value.
    #[must_use]
    pub fn doubt(&self) -> Doubt {
        match *self {
            Self::OutOfRange(refused) if refused.value < refused.quantity.min => {
                Doubt::BelowRange { limit: refused.quantity.min }
            }
            Self::OutOfRange(refused) if refused.value > refused.quantity.max => {
                Doubt::AboveRange { limit: refused.quantity.max }
            }
            Self::Missing(input) => Doubt::MissingInput { input },
            Self::Signal(_) => Doubt::NoSignal,
            Self::OutOfRange(_) | Self::EmptyScale | Self::TooMany(_) | Self::NotFinite => {
                Doubt::NotFinite
            }
        }
    }
}

impl fmt::Display for ReductionError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::OutOfRange(refused) => refused.fmt(f),
            Self::Missing(input) => write!(
                f,
                "the {input} is missing, and the correction for it is switched on. Give it, or \
                 switch the correction off"
            ),
            Self::Signal(fault) => fault.fmt(f),
            Self::EmptyScale => f.write_str("both ends of the scale are equal. Check the range"),
            Self::TooMany(full) => write!(f, "rod extensions: {full}"),
            Self::NotFinite => {
                f.write_str("the result is not a number. Check the calibration against the signal")
            }
        }
    }
}

impl core::error::Error for ReductionError {}

impl From<OutOfRange> for ReductionError {
    fn from(refused: OutOfRange) -> Self {
        Self::OutOfRange(refused)
    }
}

/// The value of a step that may be switched off; an input that is needed and absent is an error.
fn needed(
    quantity: &'static Bounded,
    value: Option<f64>,
    input: CorrectionInput,
) -> Result<f64, ReductionError> {
    let value = value.ok_or(ReductionError::Missing(input))?;
    Ok(quantity.check(value)?)
}

fn finite(value: f64) -> Result<f64, ReductionError> {
    if value.is_finite() { Ok(value) } else { Err(ReductionError::NotFinite) }
}

static TEMPERATURE: Bounded = Bounded {
    name: "instrument temperature",
    unit: "C",
    min: -60.0,
    max: 100.0,
    remedy: "Give it in degrees Celsius; check the thermistor.",
};

static BAROMETER: Bounded = Bounded {
    name: "air pressure",
    unit: "kPa",
    min: 50.0,
    max: 115.0,
    remedy: "Give it as absolute pressure at the site, in kPa (1013 hPa is 101.3 kPa).",
};

static FACTOR: Bounded = Bounded {
    name: "calibration factor",
    unit: "",
    min: -1e9,
    max: 1e9,
    remedy: "Copy it from the calibration sheet.",
};

static PRESSURE: Bounded = Bounded {
    name: "pressure",
    unit: "kPa",
    min: -200.0,
    max: 20_000.0,
    remedy: "Give it in kPa.",
};

static ELEVATION: Bounded = Bounded {
    name: "level above datum",
    unit: "m",
    min: -1_000.0,
    max: 9_000.0,
    remedy: "Give it in metres above the site datum.",
};
