//! Equal readings in a row.

use super::{ALLOWED, Doubt, Sample, WINDOW};
use crate::quantity::OutOfRange;
use serde::{Deserialize, Serialize};

/// A run of readings whose range is no larger than the tolerance.
///
/// Choose the tolerance below the resolution for exact repeats. A coarse instrument in a hold
/// repeats itself honestly: set the count so high that a hold does not reach it, or leave the
/// check off and rely on the answer to load.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct FlatLine {
    /// Fewest readings of a run.
    pub readings: u8,
    /// Largest range within a run, in the instrument's unit.
    pub tolerance: f64,
}

impl FlatLine {
    pub(super) fn check(&self) -> Result<(), OutOfRange> {
        WINDOW.check(f64::from(self.readings))?;
        ALLOWED.check(self.tolerance)?;
        Ok(())
    }

    /// The doubt when the newest readings are flat.
    pub(super) fn doubt(&self, recent: &[Sample]) -> Option<Doubt> {
        let run = run_ending_here(recent.iter().rev().map(|sample| sample.value), self.tolerance);
        let since_s = recent.get(recent.len().checked_sub(run)?)?.time_s;
        let readings = u16::try_from(run).unwrap_or(u16::MAX);
        (run >= usize::from(self.readings)).then_some(Doubt::FlatLine { readings, since_s })
    }
}

/// Length of the longest run that ends with the first value of `backwards`. Rounding of the values
/// themselves (2 units in the last place each) is allowed for, so that 53.455 less 53.445 counts
/// as 0.01.
fn run_ending_here(backwards: impl Iterator<Item = f64>, tolerance: f64) -> usize {
    let (mut low, mut high, mut run) = (f64::INFINITY, f64::NEG_INFINITY, 0_usize);
    for value in backwards {
        low = low.min(value);
        high = high.max(value);
        let rounding = 4.0 * f64::EPSILON * low.abs().max(high.abs());
        // Written so that a value that is not finite ends the run.
        if high - low <= tolerance + rounding && value.is_finite() {
            run = run.saturating_add(1);
        } else {
            break;
        }
    }
    run
}

/// Marks every member of every flat run of a whole record, also those before the run was long
/// enough to be seen; the live check marks from the last of them on. Marks beyond the shorter of
/// the two slices are left alone.
pub fn flat_runs(rule: &FlatLine, values: &[f64], flat: &mut [bool]) {
    flat.fill(false);
    let needed = usize::from(rule.readings);
    for end in 1..=values.len() {
        let Some(so_far) = values.get(..end) else {
            continue;
        };
        // A flat run is covered by its stretches of exactly the needed length.
        let run = run_ending_here(so_far.iter().rev().take(needed).copied(), rule.tolerance);
        if run >= needed.max(1)
            && let Some(members) = flat.get_mut(end.saturating_sub(run)..end)
        {
            members.fill(true);
        }
    }
}
