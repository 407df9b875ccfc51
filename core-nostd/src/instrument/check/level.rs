//! A liquid level that stands still while it should not. The level is the load of every other
//! reading, so a stuck gauge makes all of them meaningless.

use super::{ALLOWED, Doubt, SECONDS};
use crate::instrument::Reading;
use crate::quantity::OutOfRange;
use serde::{Deserialize, Serialize};

/// When a level that stands still is called frozen.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct LevelCheck {
    /// Change of level that counts as moving, m: above the gauge's noise and dead band.
    pub moves_by_m: f64,
    /// Net volume that must show, m3: the tank's area times a few `moves_by_m`.
    pub volume_m3: f64,
    /// Other instruments that must have responded.
    pub others: u16,
    /// Time the level must have stood still before the others count, s.
    pub patience_s: i64,
}

/// What else is known at the moment of a level reading.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct LevelView {
    /// Running total of volume pumped in less volume let out, m3, from any start.
    pub net_volume_m3: Option<f64>,
    /// Instruments that responded to load since the level last moved
    /// ([`LevelState::still_since_s`]).
    pub others_moved: u16,
}

/// What the check remembers.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct LevelState {
    reference: Option<Reference>,
}

#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
struct Reference {
    time_s: i64,
    level_m: f64,
    net_volume_m3: Option<f64>,
}

impl LevelState {
    /// Since when the level stands still, where a level is known.
    #[must_use]
    pub fn still_since_s(&self) -> Option<i64> {
        self.reference.map(|reference| reference.time_s)
    }
}

impl LevelCheck {
    /// Checks the thresholds.
    ///
    /// # Errors
    /// A threshold that is negative or not finite.
    pub fn check(&self) -> Result<(), OutOfRange> {
        ALLOWED.check(self.moves_by_m)?;
        ALLOWED.check(self.volume_m3)?;
        SECONDS.check(self.patience_s as f64)?;
        Ok(())
    }

    /// Takes a level reading; it comes back frozen when the level stands still though volume was
    /// moved or others respond. A reading without a usable value comes back as it is.
    #[must_use]
    pub fn observe(
        &self,
        state: &LevelState,
        reading: Reading,
        view: &LevelView,
    ) -> (LevelState, Reading) {
        let Some(level_m) = reading.doubtful() else {
            return (*state, reading);
        };
        let volume = view.net_volume_m3.filter(|volume| volume.is_finite());
        let here = Reference { time_s: reading.time_s, level_m, net_volume_m3: volume };
        let Some(reference) = state.reference else {
            return (LevelState { reference: Some(here) }, reading);
        };
        if (level_m - reference.level_m).abs() > self.moves_by_m {
            return (LevelState { reference: Some(here) }, reading);
        }
        // A volume counter that starts to report later is counted from then on.
        let net_volume_m3 = reference.net_volume_m3.or(volume);
        let state = LevelState { reference: Some(Reference { net_volume_m3, ..reference }) };
        let moved_m3 = net_volume_m3.zip(volume).map_or(0.0, |(then, now)| now - then);
        let for_s = reading.time_s.saturating_sub(reference.time_s);
        let doubt = if moved_m3.abs() >= self.volume_m3 && moved_m3 != 0.0 {
            Some(Doubt::LevelFrozenVolume { for_s, volume_m3: moved_m3.abs() })
        } else if self.others > 0 && view.others_moved >= self.others && for_s >= self.patience_s {
            Some(Doubt::LevelFrozenOthers { for_s, instruments: view.others_moved })
        } else {
            None
        };
        (state, doubt.map_or(reading, |doubt| reading.with_doubt(doubt)))
    }
}
