//! Instruments and their limits.

use super::super::bounds as b;
use super::super::reader::{
    Flag, List, Maybe, Nested, Number, OneOf, Pair, Whole, choices, record, union,
};
use super::NAME;
use brimstead_core::load;

choices! {
    /// Kind of instrument.
    pub enum InstrumentKind {
        /// Pore pressure at a depth.
        Piezometer = "piezometer",
        /// Settlement of a plate with a rod.
        SettlementPlate = "settlement_plate",
        /// Settlement by the pressure of a liquid column.
        SettlementCell = "settlement_cell",
        /// Settlement of a magnet on an extensometer.
        Magnet = "magnet",
        /// Settlement of a levelled point.
        SurveyPoint = "survey_point",
        /// Liquid level in the tank under test.
        LevelGauge = "level_gauge",
    }
}

choices! {
    /// Unit of the readings of an instrument.
    pub enum InstrumentUnit {
        /// Kilopascal.
        Kpa = "kPa",
        /// Metre.
        Metre = "m",
        /// Millimetre.
        Millimetre = "mm",
    }
}

record! {
    /// An instrument.
    pub struct Instrument {
        /// Its name, used everywhere.
        id: String => NAME,
        /// Kind.
        kind: InstrumentKind => OneOf::new(),
        /// Place, east, m.
        x_m: f64 => Number(&load::COORDINATE),
        /// Place, north, m.
        y_m: f64 => Number(&load::COORDINATE),
        /// Depth below ground level, m.
        depth_m: f64 => Number(&b::DEPTH),
        /// Unit of its readings.
        unit: InstrumentUnit => OneOf::new(),
        /// Noise of a reading, one standard deviation, in its unit.
        noise_sd: f64 => Number(&b::NOISE),
        /// Lowest and highest reading it can give, in its unit.
        range: (f64, f64) => Pair(Number(&b::READING), Number(&b::READING)),
        /// Age at which its last reading is stale, min.
        stale_after_min: f64 => Number(&b::STALE_AFTER),
        /// Instruments that should agree with it.
        neighbours: Vec<String> => List(NAME, 0..=16),
        /// true when its tip goes down with the ground; to be given for a piezometer.
        tip_sinks: Option<bool> => Maybe(Flag),
        /// true when it is open to the air pressure; to be given for a piezometer.
        vented: Option<bool> => Maybe(Flag),
        /// Calibration, when raw digits are read.
        calibration: Option<Calibration> => Maybe(Nested::new()),
        /// true for the level gauge that gives the load, when there are several.
        master: Option<bool> => Maybe(Flag),
        /// Its own limits, in place of those of its kind.
        limits: Option<Vec<Limit>> => Maybe(List(Nested::new(), 0..=16)),
        /// Its own persistence, in place of that of its kind.
        persistence: Option<Persistence> => Maybe(Nested::new()),
        /// Its own hysteresis in its unit, in place of that of its kind.
        hysteresis: Option<f64> => Maybe(Number(&b::HYSTERESIS)),
    }
}

record! {
    /// Linear calibration of a vibrating-wire gauge.
    pub struct Calibration {
        /// Zero reading, digits.
        digits_zero: f64 => Number(&b::DIGITS),
        /// Gauge factor, kPa per digit: pressure is factor times (zero less reading).
        factor_kpa_per_digit: f64 => Number(&b::DIGITS_FACTOR),
        /// Temperature at the zero reading, C.
        temperature_zero_c: f64 => Number(&b::TEMPERATURE),
        /// Temperature factor, kPa per C of rise.
        temperature_factor_kpa_per_c: f64 => Number(&b::TEMPERATURE_FACTOR),
        /// Barometric pressure at the zero reading, kPa.
        barometer_zero_kpa: f64 => Number(&b::BAROMETER),
        /// Whether the temperature correction is applied.
        apply_temperature: bool => Flag,
        /// Whether the barometer correction is applied.
        apply_barometer: bool => Flag,
    }
}

choices! {
    /// Level of alarm that a limit raises.
    pub enum Trigger {
        /// Re-read, check the instrument and its neighbours.
        Watch = "watch",
        /// Stop raising; the responsible engineer reviews.
        Review = "review",
        /// Stop filling, clear the area, act by the site's plan.
        Stop = "stop",
    }
}

choices! {
    /// Which side of the limit is bad.
    pub enum Direction {
        /// Above it.
        Above = "above",
        /// Below it.
        Below = "below",
        /// Outside it on either side.
        Either = "either",
    }
}

union! {
    /// How a limit is given.
    pub enum LimitRule {
        words {}
        forms {
            /// As a multiple of the expected band about the expected reading.
            Band {
                /// 1 is the edge of the band.
                band_multiple: f64 => Number(&b::BAND_MULTIPLE),
            }
            /// As a curve over applied pressure.
            Curve {
                /// Points [applied pressure kPa, value in the unit of the instrument].
                applied_pressure_curve: Vec<(f64, f64)> =>
                    List(Pair(Number(&b::APPLIED_PRESSURE), Number(&b::READING)), 2..=32),
            }
            /// As a fixed value.
            Value {
                /// In the unit of the instrument.
                value: f64 => Number(&b::READING),
            }
            /// As a rate.
            Rate {
                /// In the unit of the instrument per day.
                rate_per_day: f64 => Number(&b::RATE),
                /// Time over which the rate is taken, h.
                window_h: f64 => Number(&b::WINDOW),
            }
        }
    }
}

record! {
    /// One limit.
    pub struct Limit {
        /// What it raises.
        trigger: Trigger => OneOf::new(),
        /// Where it lies.
        rule: LimitRule => Nested::new(),
        /// Which side is bad.
        direction: Direction => OneOf::new(),
    }
}

record! {
    /// How long a limit must be passed before the trigger is confirmed.
    pub struct Persistence {
        /// Consecutive readings.
        readings: u32 => Whole(1..=100),
        /// And at least so many minutes.
        minutes: f64 => Number(&b::PERSISTENCE_MINUTES),
    }
}

record! {
    /// Limits of every instrument of a kind.
    pub struct LimitDefaults {
        /// The limits.
        limits: Vec<Limit> => List(Nested::new(), 0..=16),
        /// How long a limit must be passed.
        persistence: Persistence => Nested::new(),
        /// How far a reading must come back before a trigger falls, in the unit of the kind.
        hysteresis: f64 => Number(&b::HYSTERESIS),
    }
}
