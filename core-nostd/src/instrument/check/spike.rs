//! Hampel's identifier: distance from the median, measured by the median absolute deviation.

use super::{ALLOWED, Doubt, Sample, WINDOW};
use crate::config::CHECK_HISTORY;
use crate::quantity::OutOfRange;
use serde::{Deserialize, Serialize};

/// Makes the median absolute deviation of a normal distribution its standard deviation,
/// 1 / 0.6744898 (Hampel 1974), to the digits in common use.
const NORMAL: f64 = 1.4826;

/// A spike is a reading with `|x - median| > threshold * 1.4826 * MAD`, and more than `floor`.
///
/// The live check can only look back, so it marks the first readings of a true step as well; they
/// pass once the step fills half the window. With a floor of 0 any departure from a flat record is
/// a spike: set it to the noise of the instrument.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Hampel {
    /// Readings in the window, the judged one included.
    pub readings: u8,
    /// Threshold in standard deviations, 3 by custom.
    pub threshold: f64,
    /// Distance that is never a spike, in the instrument's unit.
    pub floor: f64,
}

/// A value against its window.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HampelVerdict {
    /// Median of the window.
    pub median: f64,
    /// Median absolute deviation from it.
    pub deviation: f64,
    /// Distance that would be allowed.
    pub allowed: f64,
    /// Whether the value is a spike.
    pub spike: bool,
}

impl Hampel {
    pub(super) fn check(&self) -> Result<(), OutOfRange> {
        WINDOW.check(f64::from(self.readings))?;
        ALLOWED.check(self.threshold)?;
        ALLOWED.check(self.floor)?;
        Ok(())
    }

    /// The doubt when the newest reading is a spike against those before it; needs at least three.
    pub(super) fn doubt(&self, recent: &[Sample]) -> Option<Doubt> {
        let window = recent.get(recent.len().saturating_sub(usize::from(self.readings))..)?;
        let value = window.last()?.value;
        let verdict = self.judge(value, window.iter().map(|sample| sample.value))?;
        let deviation = (value - verdict.median).abs();
        let doubt = Doubt::Spike { deviation, allowed: verdict.allowed };
        (window.len() >= 3 && verdict.spike).then_some(doubt)
    }

    fn judge(&self, value: f64, window: impl Iterator<Item = f64>) -> Option<HampelVerdict> {
        let mut sorted = Sorted::default();
        for value in window {
            sorted.insert(value);
        }
        let median = sorted.median()?;
        let mut distances = Sorted::default();
        for value in sorted.as_slice() {
            distances.insert((value - median).abs());
        }
        let deviation = distances.median()?;
        let allowed = (self.threshold * (NORMAL * deviation)).max(self.floor);
        let spike = (value - median).abs() > allowed;
        Some(HampelVerdict { median, deviation, allowed, spike })
    }
}

/// Up to a history of values in rising order.
struct Sorted {
    values: [f64; CHECK_HISTORY],
    len: usize,
}

impl Default for Sorted {
    fn default() -> Self {
        Self { values: [0.0; CHECK_HISTORY], len: 0 }
    }
}

impl Sorted {
    fn as_slice(&self) -> &[f64] {
        self.values.get(..self.len).unwrap_or(&[])
    }

    /// Values beyond the capacity are left out; callers stay within it.
    fn insert(&mut self, value: f64) {
        let at = self.as_slice().partition_point(|held| *held <= value);
        let grown = self.len.saturating_add(1);
        if let Some(tail) = self.values.get_mut(at..grown) {
            // Each larger value moves up by one; carried by hand because a rotation can panic.
            let mut carried = value;
            for slot in tail {
                core::mem::swap(slot, &mut carried);
            }
            self.len = grown;
        }
    }

    fn median(&self) -> Option<f64> {
        let values = self.as_slice();
        let upper = *values.get(values.len() >> 1)?;
        if values.len() & 1 == 1 {
            return Some(upper);
        }
        let lower = *values.get((values.len() >> 1).checked_sub(1)?)?;
        Some(f64::midpoint(lower, upper))
    }
}

/// Judges one value of a record against the window of `half_window` readings on both sides of it,
/// cut at the ends of the record. For records that are complete; the live check looks back only.
///
/// `None` beyond the record or for a window that is too long to sort (over [`CHECK_HISTORY`]).
#[must_use]
pub fn hampel_at(
    rule: &Hampel,
    values: &[f64],
    half_window: u8,
    at: usize,
) -> Option<HampelVerdict> {
    let half = usize::from(half_window);
    let from = at.saturating_sub(half);
    let to = at.saturating_add(half).saturating_add(1).min(values.len());
    let window = values.get(from..to)?;
    let value = *values.get(at)?;
    (window.len() <= CHECK_HISTORY).then_some(())?;
    rule.judge(value, window.iter().copied())
}

/// Marks the spikes of a whole record and counts them.
pub fn hampel_centred(
    rule: &Hampel,
    values: &[f64],
    half_window: u8,
    spikes: &mut [bool],
) -> usize {
    spikes.fill(false);
    let mut found = 0_usize;
    for (at, mark) in spikes.iter_mut().enumerate() {
        *mark = hampel_at(rule, values, half_window, at).is_some_and(|verdict| verdict.spike);
        found = found.saturating_add(usize::from(*mark));
    }
    found
}
