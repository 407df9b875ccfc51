//! A reading, its data state, and the doubt behind the state.

use core::fmt;
use serde::{Deserialize, Serialize};

/// How far a reading can be trusted, from best to worst. It speaks of the instrument and the link,
/// never of the ground.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum DataState {
    /// Passed every check that is switched on.
    Good,
    /// A value that may be real but failed a check; a person has to look.
    Suspect,
    /// The last value is older than allowed.
    Stale,
    /// The value no longer follows what it measures.
    Frozen,
    /// Outside what the instrument can measure.
    OutOfRange,
    /// No usable signal.
    Failed,
    /// Not asked, not installed, or not answered.
    NotRead,
}

impl DataState {
    /// The state as it reads in a message.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Good => "good",
            Self::Suspect => "suspect",
            Self::Stale => "stale",
            Self::Frozen => "frozen",
            Self::OutOfRange => "out of range",
            Self::Failed => "failed",
            Self::NotRead => "not read",
        }
    }
}

impl fmt::Display for DataState {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// A second quantity that a correction needs.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum CorrectionInput {
    /// Temperature of the instrument.
    Temperature,
    /// Air pressure.
    Barometer,
    /// Settlement of the tip.
    TipSettlement,
}

impl fmt::Display for CorrectionInput {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Temperature => "temperature",
            Self::Barometer => "air pressure",
            Self::TipSettlement => "settlement of the tip",
        })
    }
}

/// Why a reading is not good. Values are in the instrument's own unit.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Doubt {
    /// Not a finite number.
    NotFinite,
    /// No live signal: no wire frequency, broken loop, open thermistor.
    NoSignal,
    /// The bus or the link gave no answer.
    NoAnswer,
    /// There is no such instrument any more, or not yet.
    NotInstalled,
    /// A correction that is switched on lacks its input.
    MissingInput {
        /// Which input.
        input: CorrectionInput,
    },
    /// Below what the instrument can measure.
    BelowRange {
        /// The lowest value it can measure.
        limit: f64,
    },
    /// Above what the instrument can measure.
    AboveRange {
        /// The highest value it can measure.
        limit: f64,
    },
    /// Changed more between two readings than is plausible.
    Step {
        /// The change.
        change: f64,
        /// The largest plausible change.
        limit: f64,
    },
    /// Changed faster than is plausible.
    Rate {
        /// The change per hour.
        per_hour: f64,
        /// The largest plausible change per hour.
        limit: f64,
    },
    /// Stepped by the length of a rod.
    RodLength {
        /// The change, m.
        change_m: f64,
        /// The length of rod it equals, m.
        rod_m: f64,
    },
    /// The same value again and again.
    FlatLine {
        /// How many readings in a row, as far back as is remembered.
        readings: u16,
        /// Time of the first of them.
        since_s: i64,
    },
    /// Far from the readings around it.
    Spike {
        /// Distance from their median.
        deviation: f64,
        /// The distance allowed.
        allowed: f64,
    },
    /// Scatters more than it should.
    Noise {
        /// Standard deviation of a reading.
        deviation: f64,
        /// The deviation allowed.
        allowed: f64,
    },
    /// Older than allowed.
    Age {
        /// Age of the last reading.
        age_s: i64,
        /// Age allowed.
        limit_s: i64,
    },
    /// The liquid level stands still though volume was moved.
    LevelFrozenVolume {
        /// Time since the level last moved.
        for_s: i64,
        /// Net volume moved since, m3.
        volume_m3: f64,
    },
    /// The liquid level stands still though other instruments respond.
    LevelFrozenOthers {
        /// Time since the level last moved.
        for_s: i64,
        /// How many others moved.
        instruments: u16,
    },
    /// Many channels stepped within one scan.
    ManyStepped {
        /// How many.
        channels: u16,
        /// Time of the scan.
        time_s: i64,
    },
    /// Did not follow a step of load.
    NoResponse {
        /// The step, kPa.
        load_step_kpa: f64,
        /// The change that was seen.
        change: f64,
    },
    /// Moved against a step of load.
    WrongSign {
        /// The step, kPa.
        load_step_kpa: f64,
        /// The change that was seen.
        change: f64,
    },
}

impl Doubt {
    /// The data state that this doubt gives.
    #[must_use]
    pub const fn state(&self) -> DataState {
        match self {
            Self::NotFinite | Self::NoSignal | Self::MissingInput { .. } => DataState::Failed,
            Self::NoAnswer | Self::NotInstalled => DataState::NotRead,
            Self::BelowRange { .. } | Self::AboveRange { .. } => DataState::OutOfRange,
            Self::Step { .. }
            | Self::Rate { .. }
            | Self::RodLength { .. }
            | Self::Spike { .. }
            | Self::Noise { .. }
            | Self::ManyStepped { .. }
            | Self::NoResponse { .. }
            | Self::WrongSign { .. } => DataState::Suspect,
            Self::FlatLine { .. }
            | Self::LevelFrozenVolume { .. }
            | Self::LevelFrozenOthers { .. } => DataState::Frozen,
            Self::Age { .. } => DataState::Stale,
        }
    }
}

/// Whole minutes for a message.
fn minutes(seconds: i64) -> f64 {
    seconds as f64 / 60.0
}

/// The finding and the next step; the caller adds which instrument and when.
impl fmt::Display for Doubt {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match *self {
            Self::NotFinite => f.write_str("The value is not a number. Not a ground reading."),
            Self::NoSignal => f.write_str("No live signal. Not a ground reading."),
            Self::NoAnswer => f.write_str("No answer. Check power, cable and address."),
            Self::NotInstalled => f.write_str("Not installed."),
            Self::MissingInput { input } => {
                write!(f, "The {input} is missing, and a correction that is on needs it.")
            }
            Self::BelowRange { limit } => {
                write!(f, "Below the instrument's range, which begins at {limit}.")
            }
            Self::AboveRange { limit } => {
                write!(f, "Above the instrument's range, which ends at {limit}.")
            }
            Self::Step { change, limit } => write!(
                f,
                "Changed by {change:.3} between two readings, more than the plausible {limit}. \
                 Read again."
            ),
            Self::Rate { per_hour, limit } => write!(
                f,
                "Changed by {per_hour:.3} per hour, more than the plausible {limit}. Read again."
            ),
            Self::RodLength { rod_m, .. } => {
                write!(f, "Step of {rod_m:.3} m equals one rod. Enter an extension?")
            }
            Self::FlatLine { readings, .. } => {
                write!(f, "{readings} equal readings in a row. Check the instrument by hand.")
            }
            Self::Spike { deviation, allowed } => write!(
                f,
                "Lies {deviation:.3} from its neighbours in time, allowed {allowed:.3}. Read again."
            ),
            Self::Noise { deviation, allowed } => write!(
                f,
                "Scatters with a deviation of {deviation:.3}, allowed {allowed:.3}. Check cable \
                 and earth."
            ),
            Self::Age { age_s, limit_s } => write!(
                f,
                "Last reading is {:.0} min old, allowed {:.0} min.",
                minutes(age_s),
                minutes(limit_s)
            ),
            Self::LevelFrozenVolume { for_s, volume_m3 } => write!(
                f,
                "Level has not changed for {:.0} min though {volume_m3:.0} m3 was pumped. Load is \
                 unknown: dip by hand. Next rise is blocked.",
                minutes(for_s)
            ),
            Self::LevelFrozenOthers { for_s, instruments } => write!(
                f,
                "Level has not changed for {:.0} min though {instruments} instruments respond. \
                 Load is unknown: dip by hand. Next rise is blocked.",
                minutes(for_s)
            ),
            Self::ManyStepped { channels, .. } => write!(
                f,
                "{channels} channels jumped within one scan. Treat as electrical until verified \
                 by hand; triggers stand until then."
            ),
            Self::NoResponse { load_step_kpa, change } => write!(
                f,
                "Moved by {change:.3} when the load changed by {load_step_kpa:.1} kPa. It may not \
                 work: read by hand."
            ),
            Self::WrongSign { load_step_kpa, change } => write!(
                f,
                "Moved by {change:.3}, against a load change of {load_step_kpa:.1} kPa. Check sign \
                 and zero."
            ),
        }
    }
}

/// One reading of one instrument, reduced to its own unit. The value is kept beside a bad state:
/// what may be done with it is the state's to say.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Reading {
    /// When it was measured, Unix seconds UTC.
    pub time_s: i64,
    /// The value, where there is one.
    pub value: Option<f64>,
    /// How far it can be trusted.
    pub state: DataState,
    /// Why not further.
    pub doubt: Option<Doubt>,
}

impl Reading {
    /// A value before any check: good when finite, failed otherwise.
    #[must_use]
    pub fn new(time_s: i64, value: f64) -> Self {
        if value.is_finite() {
            Self { time_s, value: Some(value), state: DataState::Good, doubt: None }
        } else {
            Self::absent(time_s, Doubt::NotFinite)
        }
    }

    /// No value, and why.
    #[must_use]
    pub const fn absent(time_s: i64, doubt: Doubt) -> Self {
        Self { time_s, value: None, state: doubt.state(), doubt: Some(doubt) }
    }

    /// The same reading with a doubt; of two doubts the one with the worse state stays.
    #[must_use]
    pub fn with_doubt(self, doubt: Doubt) -> Self {
        if doubt.state() > self.state {
            Self { state: doubt.state(), doubt: Some(doubt), ..self }
        } else {
            self
        }
    }

    /// The same reading without its contradictions, as it may come from a wire: a value that is
    /// not finite is none, and a state that promises a value without one is failed. A state never
    /// gets better by this.
    #[must_use]
    pub fn believed(self) -> Self {
        let value = self.value.filter(|value| value.is_finite());
        let promised =
            matches!(self.state, DataState::Good | DataState::Suspect | DataState::Frozen);
        if value.is_none() && (promised || self.value.is_some()) {
            let doubt = if self.value.is_some() { Doubt::NotFinite } else { Doubt::NoSignal };
            return Self { value, ..self }.with_doubt(doubt);
        }
        self
    }

    /// The value when it is finite and good.
    #[must_use]
    pub fn good(&self) -> Option<f64> {
        self.value.filter(|value| value.is_finite() && self.state == DataState::Good)
    }

    /// The value when it is finite and may count as evidence of trouble: good, suspect or frozen.
    #[must_use]
    pub fn doubtful(&self) -> Option<f64> {
        let counts = matches!(self.state, DataState::Good | DataState::Suspect | DataState::Frozen);
        self.value.filter(|value| value.is_finite() && counts)
    }
}

/// An instant that is not later than the one before it. Late data are sorted before they are
/// judged.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub struct OutOfOrder {
    /// The instant that was given.
    pub time_s: i64,
    /// The latest instant already taken.
    pub last_s: i64,
}

impl fmt::Display for OutOfOrder {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            f,
            "reading of {} s is not later than {} s, already taken. Sort late readings by time of \
             measurement and leave out doubles; check the clock.",
            self.time_s, self.last_s
        )
    }
}

impl core::error::Error for OutOfOrder {}

#[cfg(test)]
mod tests {
    use super::*;
    use std::string::ToString;

    #[test]
    fn a_value_that_is_not_finite_is_no_reading() {
        for value in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
            let reading = Reading::new(0, value);
            assert_eq!((reading.value, reading.state), (None, DataState::Failed));
        }
    }

    #[test]
    fn the_worse_doubt_stays() {
        let frozen = Doubt::FlatLine { readings: 6, since_s: 0 };
        let step = Doubt::Step { change: 1.0, limit: 0.5 };
        let reading = Reading::new(0, 1.0);
        assert_eq!(reading.with_doubt(step).with_doubt(frozen).doubt, Some(frozen));
        assert_eq!(reading.with_doubt(frozen).with_doubt(step).doubt, Some(frozen));
    }

    #[test]
    fn a_good_state_beside_a_value_that_is_not_finite_is_not_believed() {
        let forged =
            Reading { time_s: 0, value: Some(f64::NAN), state: DataState::Good, doubt: None };
        assert_eq!((forged.good(), forged.doubtful()), (None, None));
        assert_eq!(forged.believed(), Reading::absent(0, Doubt::NotFinite));
        let empty = Reading { value: None, ..forged };
        assert_eq!(empty.believed(), Reading::absent(0, Doubt::NoSignal));
        let unread = Reading { state: DataState::NotRead, ..forged };
        assert_eq!(unread.believed(), Reading { value: None, ..unread }, "not better than it was");
    }

    #[test]
    fn messages_state_finding_and_next_step() {
        let frozen = Doubt::LevelFrozenVolume { for_s: 2_400, volume_m3: 280.0 };
        assert_eq!(
            frozen.to_string(),
            "Level has not changed for 40 min though 280 m3 was pumped. Load is unknown: dip by \
             hand. Next rise is blocked."
        );
        let rod = Doubt::RodLength { change_m: -1.0002, rod_m: 1.0 };
        assert_eq!(rod.to_string(), "Step of 1.000 m equals one rod. Enter an extension?");
    }

    #[test]
    fn readings_survive_the_wire() {
        let reading = Reading::new(1_750_000_000, 12.5)
            .with_doubt(Doubt::MissingInput { input: CorrectionInput::Barometer });
        let mut bytes = [0; 256];
        let len = serde_json_core::to_slice(&reading, &mut bytes).unwrap();
        let json = core::str::from_utf8(&bytes[..len]).unwrap();
        assert_eq!(
            json,
            "{\"time_s\":1750000000,\"value\":12.5,\"state\":\"failed\",\
             \"doubt\":{\"missing_input\":{\"input\":\"barometer\"}}}"
        );
        assert_eq!(serde_json_core::from_str::<Reading>(json).unwrap().0, reading);
    }
}
