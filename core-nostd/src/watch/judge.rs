//! One instrument: from a reading and the state before it to the trigger and the state after it.

use super::door::{LimitError, LimitWarning, Warnings};
use super::history::History;
use super::limits::Limits;
use super::rule::{Assessment, LimitsNow, RuleState, Unknown, View};
use super::{Inhibition, Rate, Trigger};
use crate::comparison::{Margin, position_in_band, residual};
use crate::config::MAX_RULES;
use crate::instrument::{DataState, Doubt, OutOfOrder, Reading};
use crate::quantity::Expected;
use crate::working::{Silent, Step, Working};
use core::fmt;
use serde::{Deserialize, Serialize};

/// A reading with its load and what was expected of it.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Observation {
    /// The reading with its instant and data state.
    pub reading: Reading,
    /// Applied pressure at that instant, kPa; none when the liquid level is not trusted.
    pub applied_pressure_kpa: Option<f64>,
    /// The expected band at that instant; none when the load is unknown.
    pub expected: Option<Expected>,
    /// Since when the liquid level has stood still; none while it moves or is not trusted.
    pub hold_since_s: Option<i64>,
}

/// What is remembered of one instrument. Plain data: store it, send it, copy it. Starts as
/// `WatchState::default()`.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct WatchState {
    last_s: Option<i64>,
    last_good_s: Option<i64>,
    doubtful_since_s: Option<i64>,
    trigger: Trigger,
    since_s: i64,
    neighbour_confirmed: bool,
    rules: [RuleState; MAX_RULES],
    history: History,
}

impl WatchState {
    /// The present trigger.
    #[must_use]
    pub fn trigger(&self) -> Trigger {
        self.trigger
    }

    /// Instant of the latest reading taken.
    #[must_use]
    pub fn last_s(&self) -> Option<i64> {
        self.last_s
    }

    /// Instant of the latest good reading.
    #[must_use]
    pub fn last_good_s(&self) -> Option<i64> {
        self.last_good_s
    }

    pub(super) fn confirm_by_neighbour(&mut self) {
        self.neighbour_confirmed = self.trigger > Trigger::Normal;
    }
}

/// The rule that gives the trigger, or that is nearest to its next limit.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Governing {
    /// Which rule, from 0.
    pub rule: u8,
    /// The value it judges: the reading, or its rate per day.
    pub value: f64,
    /// Its limits at this load, on the side where the value lies.
    pub limits: LimitsNow,
    /// The trigger of the next limit; the highest one when none is above.
    pub next: Trigger,
    /// Margin to that limit; negative beyond it.
    pub margin_to_next: Margin,
    /// Days until the reading is at that limit if load and rate stay as they are; none when the
    /// reading does not move towards it, is beyond it, or has no rate. Shorter in truth wherever
    /// the rate grows.
    pub days_to_next: Option<f64>,
}

/// Why an instrument does not support the next rise.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum NotReady {
    /// Its trigger is not Normal.
    Raised {
        /// The trigger.
        trigger: Trigger,
    },
    /// A limit is reached and has not lasted yet.
    Pending {
        /// The trigger it would raise.
        trigger: Trigger,
    },
    /// The reading is not good.
    Data {
        /// Its state.
        state: DataState,
        /// Since when no good one came.
        since_s: i64,
    },
    /// A reading that was not later than the one before it.
    OutOfOrder,
    /// A rule could not be judged.
    Unknown {
        /// What was missing.
        unknown: Unknown,
    },
    /// The load is above the last point of the limit curve.
    BeyondCurve,
    /// A rule that counts in a hold has not been judged in the present one.
    HoldNotJudged,
    /// Inhibited.
    Inhibited {
        /// Until when.
        until_s: i64,
    },
}

impl NotReady {
    /// The smaller, the more pressing.
    pub(super) fn rank(&self) -> u8 {
        match self {
            Self::Raised { trigger: Trigger::Stop } => 0,
            Self::Raised { trigger: Trigger::Review } => 1,
            Self::Pending { trigger: Trigger::Stop } => 2,
            Self::Raised { .. } => 3,
            Self::Pending { .. } => 4,
            Self::Data { .. } => 5,
            Self::OutOfOrder => 6,
            Self::Unknown { .. } => 7,
            Self::BeyondCurve => 8,
            Self::HoldNotJudged => 9,
            Self::Inhibited { .. } => 10,
        }
    }
}

impl fmt::Display for NotReady {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Raised { trigger } => write!(f, "trigger is {trigger}. {}", trigger.asks_for()),
            Self::Pending { trigger } => {
                write!(f, "the limit of {trigger} is reached. Read again before anything else.")
            }
            Self::Data { state, .. } => {
                write!(f, "the reading is {state}. Missing or doubtful data is not good news.")
            }
            Self::OutOfOrder => f.write_str("readings come out of order. Check the clock."),
            Self::Unknown { unknown } => write!(f, "{unknown}, so a limit could not be judged."),
            Self::BeyondCurve => {
                f.write_str("the load is above the last point of the limit curve. Set its limits.")
            }
            Self::HoldNotJudged => {
                f.write_str("a limit that counts in a hold has not been judged in this one yet.")
            }
            Self::Inhibited { .. } => f.write_str("the alarm is inhibited. Look at it by hand."),
        }
    }
}

/// What one reading means. It advises; the responsible licensed engineer decides.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Judgement {
    /// Instant of the reading.
    pub time_s: i64,
    /// The trigger after it.
    pub trigger: Trigger,
    /// The trigger before it.
    pub trigger_before: Trigger,
    /// Since when the trigger is what it is.
    pub since_s: i64,
    /// Seen again, or a neighbour is at Watch or above; always false at Normal.
    pub confirmed: bool,
    /// A higher trigger whose limit is reached and has not lasted yet.
    pub pending: Option<Trigger>,
    /// The rule that governs, with its limits and margin; none when no rule could be judged.
    pub governing: Option<Governing>,
    /// Reading less likely value.
    pub residual: Option<f64>,
    /// Place in the band: -1 at its low end, +1 at its high end.
    pub position_in_band: Option<f64>,
    /// Rate over the instrument's window.
    pub rate: Option<Rate>,
    /// Data state of the reading.
    pub data_state: DataState,
    /// Why it is not good.
    pub doubt: Option<Doubt>,
    /// Since when no good reading came: the trigger is held, not measured, from then on.
    pub held_since_s: Option<i64>,
    /// Until when the alarm is inhibited. The trigger above is what it would be without.
    pub inhibited_until_s: Option<i64>,
    /// Why this instrument does not support the next rise; none when it raises no objection.
    pub not_ready: Option<NotReady>,
}

impl Judgement {
    /// Whether this instrument raises no objection to the next rise. The release is a person's.
    #[must_use]
    pub fn ready_for_next_rise(&self) -> bool {
        self.not_ready.is_none()
    }

    /// The same judgement under an inhibition: the trigger stays in view, and the instrument does
    /// not support the next rise.
    #[must_use]
    pub fn inhibited(self, inhibition: &Inhibition) -> Self {
        if !inhibition.holds_at(self.time_s) {
            return self;
        }
        let until_s = inhibition.until_s();
        Self {
            inhibited_until_s: Some(until_s),
            not_ready: self.not_ready.or(Some(NotReady::Inhibited { until_s })),
            ..self
        }
    }
}

/// The checked limits of one instrument.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Watcher {
    limits: Limits,
    warnings: Warnings,
}

/// All rules against one reading.
struct Findings {
    assessed: [Option<Assessment>; MAX_RULES],
    unknown: Option<Unknown>,
    idle: bool,
}

impl Watcher {
    /// Checks limits.
    ///
    /// # Errors
    /// The first thing that makes them unusable.
    pub fn new(limits: &Limits) -> Result<Self, LimitError> {
        Ok(Self { limits: *limits, warnings: limits.check()? })
    }

    /// A state that goes on under these limits, which replace others. The trigger stands, however
    /// wide the new limits are, until a good reading falls through their clearing value; readings
    /// counted against the old limits do not count against the new.
    #[must_use]
    pub fn take_over(&self, state: &WatchState) -> WatchState {
        let mut rules = [RuleState::default(); MAX_RULES];
        for (slot, _) in rules.iter_mut().zip(self.limits.rules.as_slice()) {
            *slot = RuleState::taking_over(state.trigger, is_confirmed(state));
        }
        WatchState { rules, ..*state }
    }

    /// Limits that are allowed and unwise.
    pub fn warnings(&self) -> impl Iterator<Item = LimitWarning> {
        self.warnings.as_slice().iter().flatten().copied()
    }

    /// The limits as they were given.
    #[must_use]
    pub fn limits(&self) -> &Limits {
        &self.limits
    }

    /// The limits of one rule at a load and an expectation, above and below: for charts and for
    /// the sheet of limits. Those of a rate are per day.
    ///
    /// # Errors
    /// What is missing.
    pub fn limits_at(
        &self,
        rule: usize,
        applied_pressure_kpa: Option<f64>,
        expected: Option<Expected>,
    ) -> Result<[Option<LimitsNow>; 2], Unknown> {
        let view = View { reading: None, rate: None, applied_pressure_kpa, expected, hold_s: None };
        match self.limits.rules.as_slice().get(rule) {
            Some(rule) => rule.limits_now(&self.limits, &view),
            None => Ok([None, None]),
        }
    }

    /// Judges one reading. `neighbours` are the triggers of the listed neighbours at the same
    /// scan, of those whose own reading is good.
    ///
    /// # Errors
    /// An instant not later than the one before; the state then stays as it was.
    pub fn judge(
        &self,
        state: &WatchState,
        observation: &Observation,
        neighbours: &[Trigger],
    ) -> Result<(WatchState, Judgement), OutOfOrder> {
        self.judge_with(state, observation, neighbours, &mut Silent)
    }

    /// As [`Watcher::judge`], writing residual, limits and margin.
    ///
    /// # Errors
    /// As [`Watcher::judge`].
    pub fn judge_with(
        &self,
        state: &WatchState,
        observation: &Observation,
        neighbours: &[Trigger],
        working: &mut impl Working,
    ) -> Result<(WatchState, Judgement), OutOfOrder> {
        let observation = &Observation { reading: observation.reading.believed(), ..*observation };
        let time_s = observation.reading.time_s;
        if let Some(last_s) = state.last_s
            && time_s <= last_s
        {
            return Err(OutOfOrder { time_s, last_s });
        }
        let mut next = *state;
        let rate = self.remember(&mut next, &observation.reading);
        let view = View {
            reading: observation.reading.doubtful(),
            rate,
            applied_pressure_kpa: observation.applied_pressure_kpa,
            expected: observation.expected.filter(Expected::is_band),
            hold_s: observation.hold_since_s.map(|since_s| time_s.saturating_sub(since_s)),
        };
        let good = observation.reading.good().is_some();
        let findings = self.step_rules(&mut next, time_s, good, &view);
        settle_trigger(&mut next, state, time_s);
        if neighbours.iter().any(|trigger| *trigger >= Trigger::Watch) {
            next.confirm_by_neighbour();
        }
        let judgement = self.conclude(state, &next, observation, &view, &findings);
        write_working(&judgement, &view, working);
        Ok((next, judgement))
    }

    /// Takes instant and value into the state; gives the rate when the reading is good.
    fn remember(&self, next: &mut WatchState, reading: &Reading) -> Option<Rate> {
        next.last_s = Some(reading.time_s);
        let Some(value) = reading.good() else {
            next.doubtful_since_s = next.doubtful_since_s.or(Some(reading.time_s));
            return None;
        };
        next.doubtful_since_s = None;
        next.last_good_s = Some(reading.time_s);
        let window = self.limits.rate_window?;
        next.history.push(&window, reading.time_s, value);
        next.history.rate(&window, reading.time_s)
    }

    fn step_rules(&self, next: &mut WatchState, time_s: i64, good: bool, view: &View) -> Findings {
        let mut findings = Findings { assessed: [None; MAX_RULES], unknown: None, idle: false };
        let rules = self.limits.rules.as_slice().iter();
        let slots = next.rules.iter_mut().zip(findings.assessed.iter_mut());
        for (rule, (rule_state, slot)) in rules.zip(slots) {
            if !rule.counts(view) {
                *rule_state = rule_state.idle();
                findings.idle = true;
                continue;
            }
            match rule.assess(&self.limits, view) {
                Ok(found) => {
                    *rule_state = rule_state.after(rule, time_s, good, &found);
                    *slot = Some(found);
                }
                Err(unknown) => findings.unknown = findings.unknown.or(Some(unknown)),
            }
        }
        findings
    }

    fn conclude(
        &self,
        before: &WatchState,
        next: &WatchState,
        observation: &Observation,
        view: &View,
        findings: &Findings,
    ) -> Judgement {
        let reading = &observation.reading;
        let raise = findings.assessed.iter().flatten().map(|found| found.raise).max();
        let compared = view.reading.zip(view.expected);
        let mut judgement = Judgement {
            time_s: reading.time_s,
            trigger: next.trigger,
            trigger_before: before.trigger,
            since_s: next.since_s,
            confirmed: is_confirmed(next),
            pending: raise.filter(|trigger| *trigger > next.trigger),
            governing: governing(next, findings, view),
            residual: compared.map(|(value, expected)| residual(value, &expected)),
            position_in_band: compared.and_then(|(value, band)| position_in_band(value, &band)),
            rate: view.rate,
            data_state: reading.state,
            doubt: reading.doubt,
            held_since_s: next.doubtful_since_s,
            inhibited_until_s: None,
            not_ready: None,
        };
        judgement.not_ready = not_ready(&judgement, findings);
        judgement
    }
}

/// Of the rules at the instrument's trigger the one with the smallest margin in percent.
fn governing(next: &WatchState, findings: &Findings, view: &View) -> Option<Governing> {
    let percent = |governing: &Governing| governing.margin_to_next.percent.unwrap_or(f64::INFINITY);
    let rules = (0_u8..).zip(findings.assessed.iter().zip(next.rules.iter()));
    let mut best: Option<Governing> = None;
    for (rule, (found, state)) in rules {
        let found = found.filter(|_| state.trigger == next.trigger);
        let Some(here) = found.and_then(|found| Governing::of(rule, &found, next.trigger, view))
        else {
            continue;
        };
        if best.is_none_or(|best| percent(&here) < percent(&best)) {
            best = Some(here);
        }
    }
    best
}

impl Governing {
    fn of(rule: u8, found: &Assessment, trigger: Trigger, view: &View) -> Option<Self> {
        let (next, limit) = found.now.next_above(trigger)?;
        let margin_to_next = found.now.margin(found.value, limit);
        let nearing = view.rate.map(|rate| found.now.side.sign() * rate.per_day);
        let days = nearing.filter(|_| found.is_reading).map(|rate| margin_to_next.value / rate);
        let days_to_next = days.filter(|days| *days >= 0.0 && days.is_finite());
        Some(Self {
            rule,
            value: found.value,
            limits: found.now,
            next,
            margin_to_next,
            days_to_next,
        })
    }
}

fn settle_trigger(next: &mut WatchState, before: &WatchState, time_s: i64) {
    next.trigger = next.rules.iter().map(|rule| rule.trigger).max().unwrap_or_default();
    if next.trigger != before.trigger || before.last_s.is_none() {
        next.since_s = time_s;
    }
    if next.trigger > before.trigger || next.trigger == Trigger::Normal {
        next.neighbour_confirmed = false;
    }
}

fn is_confirmed(state: &WatchState) -> bool {
    let seen_again = |rule: &RuleState| rule.trigger == state.trigger && rule.seen >= 2;
    state.trigger > Trigger::Normal
        && (state.neighbour_confirmed || state.rules.iter().any(seen_again))
}

fn not_ready(judgement: &Judgement, findings: &Findings) -> Option<NotReady> {
    let beyond = findings.assessed.iter().flatten().any(|found| found.now.beyond_curve);
    let data = (judgement.data_state != DataState::Good).then_some(NotReady::Data {
        state: judgement.data_state,
        since_s: judgement.held_since_s.unwrap_or(judgement.time_s),
    });
    let raised = judgement.trigger > Trigger::Normal;
    let reasons = [
        raised.then_some(NotReady::Raised { trigger: judgement.trigger }),
        judgement.pending.map(|trigger| NotReady::Pending { trigger }),
        data,
        findings.unknown.map(|unknown| NotReady::Unknown { unknown }),
        beyond.then_some(NotReady::BeyondCurve),
        findings.idle.then_some(NotReady::HoldNotJudged),
    ];
    reasons.into_iter().flatten().min_by_key(NotReady::rank)
}

fn write_working(judgement: &Judgement, view: &View, working: &mut impl Working) {
    if !working.wanted() {
        return;
    }
    if let (Some(reading), Some(expected), Some(residual)) =
        (view.reading, view.expected, judgement.residual)
    {
        working.step(Step {
            name: "residual",
            value: residual,
            unit: "",
            formula: "r = reading - likely",
            inputs: &[("reading", reading), ("likely", expected.likely)],
            source: "",
        });
    }
    let Some(governing) = &judgement.governing else { return };
    write_limits(&governing.limits, working);
    let margin = governing.margin_to_next;
    let sign = governing.limits.side.sign();
    let limit = governing.value + sign * margin.value;
    working.step(Step {
        name: "margin to the next limit",
        value: margin.value,
        unit: "",
        formula: "m = sign (limit - value)",
        inputs: &[("sign", sign), ("limit", limit), ("value", governing.value)],
        source: "",
    });
    if let Some(percent) = margin.percent {
        let reference = governing.limits.reference;
        working.step(Step {
            name: "margin to the next limit",
            value: percent,
            unit: "%",
            formula: "100 m / |limit - reference|",
            inputs: &[("m", margin.value), ("limit", limit), ("reference", reference)],
            source: "",
        });
    }
}

fn write_limits(limits: &LimitsNow, working: &mut impl Working) {
    let names = ["limit of Watch now", "limit of Review now", "limit of Stop now"];
    for (name, trigger) in names.into_iter().zip(Trigger::RAISED) {
        let Some(limit) = limits.thresholds.of(trigger) else { continue };
        let clearing = limit - limits.side.sign() * limits.clears_within;
        working.step(Step {
            name,
            value: limit,
            unit: "",
            formula: "reference + way; clears at",
            inputs: &[
                ("reference", limits.reference),
                ("way", limit - limits.reference),
                ("clears at", clearing),
            ],
            source: "limits of the site",
        });
    }
}
