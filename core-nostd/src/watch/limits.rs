//! Limits as data.

use super::{RateWindow, Trigger};
use crate::config::{MAX_CURVE_POINTS, MAX_RULES};
use crate::instrument::FixedList;
use serde::{Deserialize, Serialize};

/// A value for each trigger; a trigger that leads to no action may be left out.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Thresholds {
    /// Limit of Watch.
    #[serde(default)]
    pub watch: Option<f64>,
    /// Limit of Review.
    #[serde(default)]
    pub review: Option<f64>,
    /// Limit of Stop.
    #[serde(default)]
    pub stop: Option<f64>,
    /// Beyond this the trigger goes to Stop at once, on one reading.
    #[serde(default)]
    pub gross: Option<f64>,
}

impl Thresholds {
    /// The limit of a trigger; none for Normal.
    #[must_use]
    pub const fn of(&self, trigger: Trigger) -> Option<f64> {
        match trigger {
            Trigger::Normal => None,
            Trigger::Watch => self.watch,
            Trigger::Review => self.review,
            Trigger::Stop => self.stop,
        }
    }

    /// Each limit through a function.
    #[must_use]
    pub(super) fn map(&self, f: impl Fn(f64) -> f64) -> Self {
        Self {
            watch: self.watch.map(&f),
            review: self.review.map(&f),
            stop: self.stop.map(&f),
            gross: self.gross.map(&f),
        }
    }

    pub(super) fn rising(&self) -> impl Iterator<Item = f64> {
        [self.watch, self.review, self.stop, self.gross].into_iter().flatten()
    }
}

/// On which side a limit is passed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Direction {
    /// By values at or above it.
    #[default]
    Above,
    /// By values at or below it.
    Below,
    /// On both sides: of zero for a curve, a fixed value and a rate (limits are then sizes), of
    /// the likely value for a band.
    Either,
}

/// What a limit counts from.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Basis {
    /// Distance from the likely value in half-widths of the expected band on that side.
    Band {
        /// The multiples: 1 is the edge of the band.
        multiples: Thresholds,
        /// Half-width that is used where the band is narrower, in the instrument's unit.
        smallest_half_band: f64,
    },
    /// The instrument's curve over applied pressure ([`Limits::curve`]).
    Curve,
    /// The same value at any load.
    Fixed {
        /// In the instrument's unit.
        values: Thresholds,
    },
    /// The rate over the instrument's window ([`Limits::rate_window`]).
    Rate {
        /// In the instrument's unit per day.
        per_day: Thresholds,
    },
}

impl Default for Basis {
    fn default() -> Self {
        Self::Fixed { values: Thresholds::default() }
    }
}

/// How long a state must last: both must be reached.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub struct Persistence {
    /// Usable readings in a row; 1 for the first.
    pub readings: u16,
    /// Seconds from the first of them; 0 for none.
    pub seconds: i64,
}

impl Default for Persistence {
    fn default() -> Self {
        Self { readings: 1, seconds: 0 }
    }
}

/// When a rule counts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum When {
    /// At any time.
    #[default]
    Always,
    /// Only in a hold that has lasted so long: for a rate that must have fallen, or a pressure
    /// that must not go on rising, once the liquid level stands still. Take the time no shorter
    /// than the rate's window, or readings of the rise are still in it. Outside such a hold the
    /// trigger of the rule stays as it is, and until it has been judged in the present hold the
    /// instrument does not support the next rise.
    InHold {
        /// Time into the hold, s.
        after_s: i64,
    },
}

/// One way in which a reading can raise a trigger.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Rule {
    /// What the limits count from.
    pub basis: Basis,
    /// On which side they are passed.
    pub direction: Direction,
    /// How far inside its limit a value must be before the trigger falls, in the unit of the
    /// basis (multiples for a band, per day for a rate).
    pub hysteresis: f64,
    /// What raises it.
    pub raising: Persistence,
    /// What lets it fall.
    pub clearing: Persistence,
    /// When it counts.
    #[serde(default)]
    pub when: When,
}

/// Limits over applied pressure, in the instrument's unit, linear between points. A list that is
/// empty leaves its trigger out; the others have one value for each pressure.
///
/// Below the first pressure the first values hold. Above the last the last values hold, and the
/// instrument is not ready for the next rise: nobody has set limits for that load.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Curve {
    /// Applied pressures, rising, kPa.
    pub pressure_kpa: FixedList<f64, MAX_CURVE_POINTS>,
    /// Limits of Watch.
    pub watch: FixedList<f64, MAX_CURVE_POINTS>,
    /// Limits of Review.
    pub review: FixedList<f64, MAX_CURVE_POINTS>,
    /// Limits of Stop.
    pub stop: FixedList<f64, MAX_CURVE_POINTS>,
    /// Values beyond which Stop is raised at once.
    pub gross: FixedList<f64, MAX_CURVE_POINTS>,
}

impl Curve {
    /// The limits at an applied pressure, and whether that lies above the last point.
    #[must_use]
    pub fn at(&self, applied_pressure_kpa: f64) -> (Thresholds, bool) {
        let pressures = self.pressure_kpa.as_slice();
        let upper = pressures.partition_point(|p| *p < applied_pressure_kpa);
        let lower = upper.saturating_sub(1);
        let share = match (pressures.get(lower), pressures.get(upper)) {
            (Some(from), Some(to)) if to > from => (applied_pressure_kpa - from) / (to - from),
            _ => 0.0,
        };
        let value = |list: &FixedList<f64, MAX_CURVE_POINTS>| {
            let from = *list.as_slice().get(lower)?;
            let to = list.as_slice().get(upper).copied().unwrap_or(from);
            Some(from + share * (to - from))
        };
        let thresholds = Thresholds {
            watch: value(&self.watch),
            review: value(&self.review),
            stop: value(&self.stop),
            gross: value(&self.gross),
        };
        (thresholds, pressures.last().is_none_or(|last| applied_pressure_kpa > *last))
    }

    /// The limits at each point; order at the points is order between them.
    pub(super) fn points(&self) -> impl Iterator<Item = Thresholds> {
        self.pressure_kpa.as_slice().iter().map(|pressure| self.at(*pressure).0)
    }
}

/// All limits of one instrument.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Limits {
    /// The rules; the highest trigger of them counts.
    pub rules: FixedList<Rule, MAX_RULES>,
    /// Limits over applied pressure, for rules on that basis.
    #[serde(default)]
    pub curve: Option<Curve>,
    /// Window of the rate; without rules on it the rate is shown only.
    #[serde(default)]
    pub rate_window: Option<RateWindow>,
    /// Standard deviation of one reading, in the instrument's unit, for the warnings.
    #[serde(default)]
    pub noise: Option<f64>,
}
