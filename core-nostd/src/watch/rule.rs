//! One rule: its limits at this moment, and its state from one reading to the next.

use super::limits::{Basis, Direction, Limits, Persistence, Rule, Thresholds, When};
use super::{Rate, Trigger};
use crate::comparison::{Margin, Side, half_width, margin};
use crate::quantity::Expected;
use core::fmt;
use serde::{Deserialize, Serialize};

/// Why a rule could not be judged.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Unknown {
    /// No usable reading.
    Reading,
    /// The applied pressure is not known.
    Load,
    /// There is no expected band.
    Expected,
    /// Too few readings, or over too short a time, for a rate.
    Rate,
}

impl fmt::Display for Unknown {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Reading => "no usable reading",
            Self::Load => "the applied pressure is unknown",
            Self::Expected => "there is no expected band",
            Self::Rate => "too few readings for a rate",
        })
    }
}

/// The limits of one rule on one side, at this load and this expectation, in the unit of what is
/// judged (the reading, or its rate per day).
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct LimitsNow {
    /// The side on which they are passed.
    pub side: Side,
    /// Their values.
    pub thresholds: Thresholds,
    /// How far inside a limit its clearing value lies.
    pub clears_within: f64,
    /// What percent of a margin counts from: the likely value for a band, zero otherwise.
    pub reference: f64,
    /// The load is above the last point of the curve.
    pub beyond_curve: bool,
}

impl LimitsNow {
    /// Highest trigger whose limit a value has reached.
    fn raised_by(&self, value: f64) -> Trigger {
        self.highest(|limit| self.side.reached(value, limit))
    }

    /// Highest trigger whose clearing value a value has not come back behind.
    fn held_by(&self, value: f64) -> Trigger {
        self.highest(|limit| {
            self.side.reached(value, limit - self.side.sign() * self.clears_within)
        })
    }

    fn highest(&self, reached: impl Fn(f64) -> bool) -> Trigger {
        let mut raised = Trigger::RAISED.into_iter().rev();
        raised
            .find(|trigger| self.thresholds.of(*trigger).is_some_and(&reached))
            .unwrap_or(Trigger::Normal)
    }

    /// The next limit above a trigger; the highest one there is when none is above.
    #[must_use]
    pub fn next_above(&self, trigger: Trigger) -> Option<(Trigger, f64)> {
        let mut given = Trigger::RAISED
            .into_iter()
            .filter_map(|at| self.thresholds.of(at).map(|limit| (at, limit)));
        let highest = given.clone().next_back();
        given.find(|(at, _)| *at > trigger).or(highest)
    }

    /// Margin of a value to a limit on this side.
    #[must_use]
    pub fn margin(&self, value: f64, limit: f64) -> Margin {
        margin(value, limit, self.reference, self.side)
    }
}

/// What a rule is judged by.
#[derive(Debug, Clone, Copy)]
pub(super) struct View {
    pub reading: Option<f64>,
    pub rate: Option<Rate>,
    pub applied_pressure_kpa: Option<f64>,
    pub expected: Option<Expected>,
    /// Time into the hold, s.
    pub hold_s: Option<i64>,
}

/// A rule against one reading.
#[derive(Debug, Clone, Copy)]
pub(super) struct Assessment {
    /// The value judged.
    pub value: f64,
    /// Whether that is the reading and not its rate.
    pub is_reading: bool,
    /// Highest trigger whose limit is reached.
    pub raise: Trigger,
    /// Highest trigger that is not cleared.
    pub hold: Trigger,
    /// Beyond gross.
    pub gross: bool,
    /// The limits on the side where the value lies.
    pub now: LimitsNow,
}

impl Rule {
    /// The limits at this moment, on one side or both.
    pub(super) fn limits_now(
        &self,
        limits: &Limits,
        view: &View,
    ) -> Result<[Option<LimitsNow>; 2], Unknown> {
        match &self.basis {
            Basis::Band { multiples, smallest_half_band } => {
                let expected = view.expected.filter(Expected::is_band).ok_or(Unknown::Expected)?;
                Ok(self.band(multiples, *smallest_half_band, &expected))
            }
            Basis::Curve => {
                let known = view.applied_pressure_kpa.filter(|kpa| kpa.is_finite());
                let (at, beyond) = limits
                    .curve
                    .as_ref()
                    .zip(known)
                    .map(|(c, kpa)| c.at(kpa))
                    .ok_or(Unknown::Load)?;
                Ok(self.sides(&at, beyond))
            }
            Basis::Fixed { values } => Ok(self.sides(values, false)),
            Basis::Rate { per_day } => Ok(self.sides(per_day, false)),
        }
    }

    /// Whether the rule counts at this moment.
    pub(super) fn counts(&self, view: &View) -> bool {
        match self.when {
            When::Always => true,
            When::InHold { after_s } => view.hold_s.is_some_and(|hold_s| hold_s >= after_s),
        }
    }

    /// What this rule judges: the reading or its rate.
    fn judged(&self, view: &View) -> Result<f64, Unknown> {
        let reading = view.reading.ok_or(Unknown::Reading)?;
        match self.basis {
            Basis::Rate { .. } => view.rate.map(|rate| rate.per_day).ok_or(Unknown::Rate),
            _ => Ok(reading),
        }
    }

    pub(super) fn assess(&self, limits: &Limits, view: &View) -> Result<Assessment, Unknown> {
        let value = self.judged(view)?;
        let [first, second] = self.limits_now(limits, view)?;
        let first = first.or(second).ok_or(Unknown::Expected)?;
        let second = second.unwrap_or(first);
        // The side on which the value lies, seen from the middle.
        let now = if first.side.sign() * (value - first.reference) >= 0.0 { first } else { second };
        let beyond = |side: &LimitsNow| {
            side.thresholds.gross.is_some_and(|gross| side.side.reached(value, gross))
        };
        Ok(Assessment {
            value,
            is_reading: !matches!(self.basis, Basis::Rate { .. }),
            raise: first.raised_by(value).max(second.raised_by(value)),
            hold: first.held_by(value).max(second.held_by(value)),
            gross: beyond(&first) || beyond(&second),
            now,
        })
    }

    fn wants(&self, side: Side) -> bool {
        match self.direction {
            Direction::Above => side == Side::Above,
            Direction::Below => side == Side::Below,
            Direction::Either => true,
        }
    }

    fn both(&self, of: impl Fn(Side) -> LimitsNow) -> [Option<LimitsNow>; 2] {
        [Side::Above, Side::Below].map(|side| self.wants(side).then(|| of(side)))
    }

    /// `L = likely +- k max(half-width, smallest)`.
    fn band(
        &self,
        multiples: &Thresholds,
        smallest: f64,
        expected: &Expected,
    ) -> [Option<LimitsNow>; 2] {
        self.both(|side| {
            let half = half_width(expected, side == Side::Above).max(smallest);
            LimitsNow {
                side,
                thresholds: multiples.map(|k| expected.likely + side.sign() * k * half),
                clears_within: self.hysteresis * half,
                reference: expected.likely,
                beyond_curve: false,
            }
        })
    }

    fn sides(&self, values: &Thresholds, beyond_curve: bool) -> [Option<LimitsNow>; 2] {
        self.both(|side| {
            let mirrored = side == Side::Below && self.direction == Direction::Either;
            LimitsNow {
                side,
                thresholds: if mirrored { values.map(|value| -value) } else { *values },
                clears_within: self.hysteresis,
                reference: 0.0,
                beyond_curve,
            }
        })
    }
}

/// Readings in a row that are alike.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
struct Run {
    since_s: i64,
    readings: u16,
    good: u16,
}

impl Run {
    fn longer(self, time_s: i64, good: bool) -> Self {
        Self {
            since_s: if self.readings == 0 { time_s } else { self.since_s },
            readings: self.readings.saturating_add(1),
            good: self.good.saturating_add(u16::from(good)),
        }
    }

    fn lasts(&self, persistence: &Persistence, time_s: i64) -> bool {
        self.readings >= persistence.readings.max(1)
            && time_s.saturating_sub(self.since_s) >= persistence.seconds
    }
}

/// What one rule remembers.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub(super) struct RuleState {
    pub trigger: Trigger,
    /// Good readings at or beyond the clearing value of the present trigger.
    pub seen: u16,
    /// Readings at or beyond the limit of Watch, Review and Stop.
    reached: [Run; 3],
    /// Readings behind the clearing value of the present trigger.
    clear: Run,
    /// Highest trigger those readings still hold.
    clear_to: Trigger,
}

impl RuleState {
    /// A rule that takes over a trigger from limits that held before it.
    pub(super) fn taking_over(trigger: Trigger, confirmed: bool) -> Self {
        Self { trigger, seen: if confirmed { 2 } else { 0 }, ..Self::default() }
    }

    /// A reading at which the rule does not count breaks the readings in a row that would let its
    /// trigger fall; what is reached stays counted.
    pub(super) fn idle(&self) -> Self {
        Self { clear: Run::default(), ..*self }
    }

    /// From one usable reading to the next. A reading that is not good adds to what is reached
    /// and never to what is cleared.
    pub(super) fn after(&self, rule: &Rule, time_s: i64, good: bool, found: &Assessment) -> Self {
        let mut next = *self;
        let lasting = next.reach(rule, time_s, good, found);
        let raised = if found.gross { Trigger::Stop } else { lasting };
        if raised > self.trigger {
            next.rise(raised);
        } else if found.hold >= self.trigger {
            next.clear = Run::default();
            next.seen = next.seen.saturating_add(u16::from(good));
        } else if good {
            next.fall(rule, time_s, found.hold);
        }
        next
    }

    /// Counts what is reached and gives the highest trigger that lasted long enough.
    fn reach(&mut self, rule: &Rule, time_s: i64, good: bool, found: &Assessment) -> Trigger {
        let mut lasting = Trigger::Normal;
        for (run, trigger) in self.reached.iter_mut().zip(Trigger::RAISED) {
            if found.raise >= trigger {
                *run = run.longer(time_s, good);
                if run.lasts(&rule.raising, time_s) {
                    lasting = trigger;
                }
            } else if good {
                *run = Run::default();
            }
        }
        lasting
    }

    fn rise(&mut self, raised: Trigger) {
        let mut runs = self.reached.iter().zip(Trigger::RAISED);
        self.seen = runs.find(|(_, trigger)| *trigger == raised).map_or(0, |(run, _)| run.good);
        self.trigger = raised;
        self.clear = Run::default();
    }

    fn fall(&mut self, rule: &Rule, time_s: i64, hold: Trigger) {
        self.clear_to = if self.clear.readings == 0 { hold } else { self.clear_to.max(hold) };
        self.clear = self.clear.longer(time_s, true);
        if self.clear.lasts(&rule.clearing, time_s) {
            self.trigger = self.clear_to;
            self.clear = Run::default();
            let still_raised = self.trigger > Trigger::Normal;
            self.seen = if still_raised { self.seen.saturating_add(1) } else { 0 };
        }
    }
}
