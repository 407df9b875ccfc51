//! Validity checks: a value that has been reduced gets its data state here.
//!
//! Each check is a switch in [`Checks`] and a small piece of state in [`Channel`]; the state is
//! plain data that is copied in and out, so the same readings give the same states on logger and
//! desktop.
//!
//! ```text
//!  value --range--> out of range
//!        --flat line--> frozen
//!        --step, rate, spike, noise, response to load--> suspect (this reading only)
//!        --rod length, many channels at once--> suspect, and held until a person releases it
//!        --age--> stale
//! ```
//!
//! A suspect or frozen value still counts as evidence of trouble in [`crate::watch`], and never as
//! evidence that trouble is over.

mod flat_line;
mod level;
mod response;
mod spike;

pub use flat_line::{FlatLine, flat_runs};
pub use level::{LevelCheck, LevelState, LevelView};
pub use response::{Response, ResponseState};
pub use spike::{Hampel, HampelVerdict, hampel_at, hampel_centred};

use super::{Doubt, FixedList, OutOfOrder, Reading};
use crate::config::{CHECK_HISTORY, MAX_ROD_LENGTHS};
use crate::quantity::{Bounded, OutOfRange};
use serde::{Deserialize, Serialize};

static RANGE_END: Bounded = Bounded {
    name: "end of the measuring range",
    unit: "",
    min: -1e9,
    max: 1e9,
    remedy: "Copy it from the data sheet; the high end must be above the low end.",
};

static ALLOWED: Bounded = Bounded {
    name: "allowed deviation of a check",
    unit: "",
    min: 0.0,
    max: 1e9,
    remedy: "Give it in the instrument's own unit; leave the check out to switch it off.",
};

static WINDOW: Bounded = Bounded {
    name: "readings a check looks back over",
    unit: "readings",
    min: 3.0,
    max: CHECK_HISTORY as f64,
    remedy: "Fewer than three tell nothing.",
};

static SECONDS: Bounded = Bounded {
    name: "time of a check",
    unit: "s",
    min: 0.0,
    max: 31_557_600.0,
    remedy: "Give it in seconds, up to a year.",
};

/// Measuring range; both ends are still measured.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Range {
    /// Low end.
    pub low: f64,
    /// High end.
    pub high: f64,
}

/// Scatter: root of half the mean square of successive differences, which leaves a steady trend
/// out (von Neumann 1941).
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Noise {
    /// Readings looked back over.
    pub readings: u8,
    /// Standard deviation allowed.
    pub allowed: f64,
}

/// Lengths of rod in use: a step that equals one of them is probably an extension not booked.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Rods {
    /// The lengths, m.
    pub lengths_m: FixedList<f64, MAX_ROD_LENGTHS>,
    /// How near a step must come, m.
    pub tolerance_m: f64,
}

/// The checks of one instrument; `None` switches one off.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Checks {
    /// Measuring range.
    pub range: Option<Range>,
    /// Largest plausible change between two readings.
    pub step: Option<f64>,
    /// Largest plausible change per hour.
    pub rate_per_hour: Option<f64>,
    /// Equal readings in a row.
    pub flat_line: Option<FlatLine>,
    /// Distance from the median of the last readings.
    pub spike: Option<Hampel>,
    /// Scatter.
    pub noise: Option<Noise>,
    /// Age above which a reading is stale, s.
    pub stale_after_s: Option<i64>,
    /// Spacing above which a gap is reported, s.
    pub gap_above_s: Option<i64>,
    /// Rods, for plates.
    pub rods: Option<Rods>,
    /// Answer to steps of load.
    pub response: Option<Response>,
}

/// A value and its instant.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Sample {
    /// Unix seconds UTC.
    pub time_s: i64,
    /// Value in the instrument's unit.
    pub value: f64,
}

/// What the checks remember of one instrument. Starts as `Channel::default()`.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Channel {
    recent: FixedList<Sample, CHECK_HISTORY>,
    last_s: Option<i64>,
    held: Option<Doubt>,
    response: ResponseState,
}

impl Channel {
    /// The doubt that is held until a person releases it.
    #[must_use]
    pub fn held(&self) -> Option<Doubt> {
        self.held
    }

    /// Lets go of a held doubt: the extension is booked, or the jump was verified by hand. What
    /// was read before is forgotten, so that the booked step is not found again.
    #[must_use]
    pub fn released(self) -> Self {
        Self { held: None, recent: FixedList::default(), ..self }
    }

    /// Time of the last finite value within range.
    #[must_use]
    pub fn last_value_s(&self) -> Option<i64> {
        self.recent.as_slice().last().map(|sample| sample.time_s)
    }

    /// Change of the value since the first remembered reading at or after an instant; `None`
    /// where there are fewer than two.
    #[must_use]
    pub fn change_since(&self, time_s: i64) -> Option<f64> {
        let recent = self.recent.as_slice();
        let first = recent.iter().find(|sample| sample.time_s >= time_s)?;
        let last = recent.last()?;
        (last.time_s > first.time_s).then_some(last.value - first.value)
    }
}

/// A reading after its checks.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Checked {
    /// The reading with its data state.
    pub reading: Reading,
    /// Whether it jumped by more than the plausible step.
    pub stepped: bool,
    /// Time since the value before it, where that is a gap, s.
    pub gap_s: Option<i64>,
}

/// The checks of one instrument, themselves checked.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Checker {
    checks: Checks,
}

impl Checker {
    /// Checks the checks.
    ///
    /// # Errors
    /// A threshold that is negative or not finite, a window too short or too long to remember, a
    /// range whose ends are swapped.
    pub fn new(checks: &Checks) -> Result<Self, OutOfRange> {
        if let Some(range) = checks.range {
            RANGE_END.check(range.low)?;
            RANGE_END.check(range.high)?;
            RANGE_END.check(if range.high > range.low { range.high } else { f64::NAN })?;
        }
        for allowed in [checks.step, checks.rate_per_hour].into_iter().flatten() {
            ALLOWED.check(allowed)?;
        }
        for seconds in [checks.stale_after_s, checks.gap_above_s].into_iter().flatten() {
            SECONDS.check(seconds as f64)?;
        }
        if let Some(noise) = checks.noise {
            WINDOW.check(f64::from(noise.readings))?;
            ALLOWED.check(noise.allowed)?;
        }
        if let Some(rods) = checks.rods {
            ALLOWED.check(rods.tolerance_m)?;
            for length_m in rods.lengths_m.as_slice() {
                ALLOWED.check(*length_m)?;
            }
        }
        if let Some(flat) = checks.flat_line {
            flat.check()?;
        }
        if let Some(spike) = checks.spike {
            spike.check()?;
        }
        if let Some(response) = checks.response {
            response.check()?;
        }
        Ok(Self { checks: *checks })
    }

    /// Takes a reading and gives it its data state. The pressure applied at the same instant is
    /// used by the response check alone.
    ///
    /// # Errors
    /// An instant not later than the one before.
    pub fn observe(
        &self,
        channel: &Channel,
        reading: Reading,
        applied_pressure_kpa: Option<f64>,
    ) -> Result<(Channel, Checked), OutOfOrder> {
        if let Some(last_s) = channel.last_s
            && reading.time_s <= last_s
        {
            return Err(OutOfOrder { time_s: reading.time_s, last_s });
        }
        let mut next = *channel;
        next.last_s = Some(reading.time_s);
        let ranged = self.ranged(reading);
        let Some(value) = ranged.doubtful() else {
            let reading = held(&next, self.aged(&next, ranged));
            return Ok((next, Checked { reading, stepped: false, gap_s: None }));
        };
        let sample = Sample { time_s: reading.time_s, value };
        let before = channel.recent.as_slice().last().copied();
        next.recent.push_dropping_oldest(sample);
        let stepped = self.change_doubts(before, sample);
        next.held = next.held.or(stepped.rod);
        let mut checked = ranged;
        for doubt in [stepped.step, stepped.rate].into_iter().flatten() {
            checked = checked.with_doubt(doubt);
        }
        checked = self.history_doubts(next.recent.as_slice(), checked);
        if let (Some(response), Some(load_kpa)) = (self.checks.response, applied_pressure_kpa) {
            let (state, doubt) = response.observe(&next.response, sample, load_kpa);
            next.response = state;
            checked = doubt.map_or(checked, |doubt| checked.with_doubt(doubt));
        }
        let gap_s = before.and_then(|before| self.gap_s(before.time_s, sample.time_s));
        let checked =
            Checked { reading: held(&next, checked), stepped: stepped.step.is_some(), gap_s };
        Ok((next, checked))
    }

    /// The doubt about the last value at an instant without a new one.
    #[must_use]
    pub fn age_at(&self, channel: &Channel, now_s: i64) -> Option<Doubt> {
        let limit_s = self.checks.stale_after_s?;
        let age_s = now_s.saturating_sub(channel.last_value_s()?);
        (age_s > limit_s).then_some(Doubt::Age { age_s, limit_s })
    }

    fn ranged(&self, reading: Reading) -> Reading {
        let finite = reading.believed();
        match (self.checks.range, finite.value) {
            (Some(range), Some(value)) if value < range.low => {
                finite.with_doubt(Doubt::BelowRange { limit: range.low })
            }
            (Some(range), Some(value)) if value > range.high => {
                finite.with_doubt(Doubt::AboveRange { limit: range.high })
            }
            _ => finite,
        }
    }

    fn aged(&self, channel: &Channel, reading: Reading) -> Reading {
        self.age_at(channel, reading.time_s).map_or(reading, |doubt| reading.with_doubt(doubt))
    }

    fn gap_s(&self, before_s: i64, now_s: i64) -> Option<i64> {
        let gap_s = now_s.saturating_sub(before_s);
        self.checks.gap_above_s.filter(|limit_s| gap_s > *limit_s).map(|_| gap_s)
    }

    fn change_doubts(&self, before: Option<Sample>, now: Sample) -> ChangeDoubts {
        let Some(before) = before else {
            return ChangeDoubts::default();
        };
        let change = now.value - before.value;
        let hours = now.time_s.saturating_sub(before.time_s) as f64 / 3600.0;
        let per_hour = change / hours;
        let step = self.checks.step.filter(|limit| change.abs() > *limit);
        let rate = self.checks.rate_per_hour.filter(|limit| per_hour.abs() > *limit);
        ChangeDoubts {
            step: step.map(|limit| Doubt::Step { change, limit }),
            rate: rate.map(|limit| Doubt::Rate { per_hour, limit }),
            rod: self.checks.rods.and_then(|rods| rod_doubt(&rods, change)),
        }
    }

    fn history_doubts(&self, recent: &[Sample], mut reading: Reading) -> Reading {
        let found = [
            self.checks.flat_line.and_then(|flat| flat.doubt(recent)),
            self.checks.spike.and_then(|spike| spike.doubt(recent)),
            self.checks.noise.and_then(|noise| noise_doubt(&noise, recent)),
        ];
        for doubt in found.into_iter().flatten() {
            reading = reading.with_doubt(doubt);
        }
        reading
    }
}

#[derive(Default)]
struct ChangeDoubts {
    step: Option<Doubt>,
    rate: Option<Doubt>,
    rod: Option<Doubt>,
}

fn held(channel: &Channel, reading: Reading) -> Reading {
    match channel.held {
        // The held doubt names the cause that a person must clear, so it goes before the passing
        // doubts of the same weight.
        Some(doubt) if doubt.state() >= reading.state => {
            Reading { state: doubt.state(), doubt: Some(doubt), ..reading }
        }
        _ => reading,
    }
}

fn rod_doubt(rods: &Rods, change_m: f64) -> Option<Doubt> {
    let near = |rod_m: &&f64| (change_m.abs() - **rod_m).abs() <= rods.tolerance_m;
    let rod_m = *rods.lengths_m.as_slice().iter().find(near)?;
    Some(Doubt::RodLength { change_m, rod_m })
}

fn noise_doubt(noise: &Noise, recent: &[Sample]) -> Option<Doubt> {
    let count = usize::from(noise.readings);
    let window = recent.get(recent.len().checked_sub(count)?..)?;
    let squares = window.iter().zip(window.iter().skip(1)).map(|(before, after)| {
        let difference = after.value - before.value;
        difference * difference
    });
    let pairs = count.saturating_sub(1) as f64;
    let deviation = libm::sqrt(squares.sum::<f64>() / (2.0 * pairs));
    (deviation > noise.allowed).then_some(Doubt::Noise { deviation, allowed: noise.allowed })
}

/// When many channels jump at once.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct ManyAtOnce {
    /// Fewest channels.
    pub channels: u16,
    /// Smallest share of the channels that answered.
    pub share: f64,
}

/// Looks over one scan: when many channels stepped at once, each of them is held suspect as an
/// electrical event until a person has verified it. Their values still raise triggers: a jump of
/// many instruments can also be the ground.
///
/// Returns how many channels were held by this scan.
pub fn look_over_scan(
    rule: &ManyAtOnce,
    time_s: i64,
    channels: &mut [Channel],
    checked: &mut [Checked],
) -> u16 {
    let answered = checked.iter().filter(|c| c.reading.doubtful().is_some()).count();
    let stepped = checked.iter().filter(|c| c.stepped).count();
    let many = stepped >= usize::from(rule.channels)
        && stepped as f64 >= rule.share * answered as f64
        && stepped > 0;
    if !many {
        return 0;
    }
    let count = u16::try_from(stepped).unwrap_or(u16::MAX);
    let doubt = Doubt::ManyStepped { channels: count, time_s };
    for (channel, checked) in channels.iter_mut().zip(checked.iter_mut()) {
        if checked.stepped {
            channel.held = Some(doubt);
            checked.reading = held(channel, checked.reading);
        }
    }
    count
}

#[cfg(test)]
mod tests;
