//! Secondary compression (creep) after the end of primary settlement.
//!
//! Two forms are published; they are the same, because H/(1+e) is the height of solids:
//!
//! ```text
//! Ss = Ca H0/(1+e0) log10(t/tp)        with thickness and void ratio before loading
//! Ss = Ca Hp/(1+ep) log10(t/tp)        with those at the end of primary settlement
//! ```
//! Ca = C-alpha is the void ratio per log10 cycle of time. Mesri & Godlewski 1977 tie it to the
//! compression index; that choice is the engineer's. Whether creep also runs during primary
//! settlement is disputed (hypotheses A and B); here it begins at its end, which is common practice
//! and the less settlement of the two.
//!
//! A tank does not load the ground once but in rises and holds. [`Creep`] carries the formula
//! through any load history by a rule of common practice, stated there.

use super::SettlementError;
use crate::ground::{Layer, SECONDARY_RATIO};
use crate::quantity::Bounded;
use crate::units::DAY_S;
use crate::working::{Silent, Step, Working};
use serde::{Deserialize, Serialize};

/// Thickness of a compressing layer.
pub static COMPRESSING_THICKNESS: Bounded = Bounded {
    name: "thickness of the compressing layer",
    unit: "m",
    min: 0.0,
    max: 1000.0,
    remedy: "Thickness of the layer or of its part below the loaded level.",
};
/// A time since loading began.
pub static TIME_SINCE_LOADING: Bounded = Bounded {
    name: "time since loading began",
    unit: "s",
    min: 0.0,
    max: 1e12,
    remedy: "Seconds from the start of the load.",
};
/// Time of the end of primary settlement.
pub static END_OF_PRIMARY: Bounded = Bounded {
    name: "time of the end of primary settlement",
    unit: "s",
    min: 1.0,
    max: 1e12,
    remedy: "Seconds from the start of the load to 95 % consolidation or the like; not zero.",
};
/// Mean vertical load on a layer.
pub static MEAN_LOAD: Bounded = Bounded {
    name: "mean vertical stress increment of the layer",
    unit: "kPa",
    min: -2000.0,
    max: 2000.0,
    remedy: "Mean total vertical stress increment over the layer, kPa.",
};
/// Share of the load still carried by pore water.
pub static MEAN_EXCESS_RATIO: Bounded = Bounded {
    name: "mean excess pore-pressure ratio",
    unit: "",
    min: -10.0,
    max: 10.0,
    remedy: "Mean excess pore pressure of the layer over its mean vertical stress increment.",
};
/// Void ratio per log10 cycle of time.
pub static SECONDARY_INDEX: Bounded = Bounded {
    name: "secondary compression index C-alpha",
    unit: "",
    min: 0.0,
    max: 5.0,
    remedy: "Void ratio per log10 cycle of time.",
};

/// Primary settlement of a layer counts as ended when pore water carries no more than this share
/// of the load on it: 95 % consolidation, as is common practice.
pub const END_OF_PRIMARY_RATIO: f64 = 0.05;
/// Changes of load within this band, kPa, are taken as no change: 0.2 m of water, more than
/// evaporation, rain and the noise of a level gauge.
pub const HOLD_BAND_KPA: f64 = 2.0;
/// A rest of the load shorter than this, s, is part of one rise.
pub const SHORTEST_HOLD_S: f64 = DAY_S;
/// Primary settlement is taken to last at least this long, s. C-alpha is read from oedometer steps
/// of a day, and a logarithm from a shorter time would give free-draining soil endless creep.
pub const SHORTEST_PRIMARY_S: f64 = DAY_S;

/// Secondary settlement, m, from the strain per log10 cycle of time `ratio` = Ca/(1+e0) and the
/// thickness before loading; 0 before the end of primary settlement at `end_of_primary_s`.
///
/// # Errors
/// [`SettlementError::Value`].
pub fn secondary_settlement_m(
    ratio: f64,
    thickness_m: f64,
    time_s: f64,
    end_of_primary_s: f64,
) -> Result<f64, SettlementError> {
    secondary_settlement_m_with(ratio, thickness_m, time_s, end_of_primary_s, &mut Silent)
}

/// As [`secondary_settlement_m`], writing its step.
///
/// # Errors
/// [`SettlementError::Value`].
pub fn secondary_settlement_m_with(
    ratio: f64,
    thickness_m: f64,
    time_s: f64,
    end_of_primary_s: f64,
    working: &mut impl Working,
) -> Result<f64, SettlementError> {
    SECONDARY_RATIO.check(ratio)?;
    COMPRESSING_THICKNESS.check(thickness_m)?;
    let value = ratio * thickness_m * cycles(time_s, end_of_primary_s)?;
    working.step(Step {
        name: "secondary settlement",
        value,
        unit: "m",
        formula: "Ca/(1+e0) H log10(t/tp), 0 before tp",
        inputs: &[
            ("Ca/(1+e0)", ratio),
            ("H", thickness_m),
            ("t", time_s),
            ("tp", end_of_primary_s),
        ],
        source: "Buisman 1936; Mesri & Godlewski 1977",
    });
    Ok(value)
}

/// The same from C-alpha and the state at the end of primary settlement: thickness `thickness_m`
/// and void ratio `void_ratio` *then*.
///
/// # Errors
/// [`SettlementError::Value`].
pub fn secondary_settlement_from_end_of_primary_m(
    secondary_index: f64,
    thickness_m: f64,
    void_ratio: f64,
    time_s: f64,
    end_of_primary_s: f64,
) -> Result<f64, SettlementError> {
    secondary_settlement_from_end_of_primary_m_with(
        secondary_index,
        thickness_m,
        void_ratio,
        time_s,
        end_of_primary_s,
        &mut Silent,
    )
}

/// As [`secondary_settlement_from_end_of_primary_m`], writing its step.
///
/// # Errors
/// [`SettlementError::Value`].
pub fn secondary_settlement_from_end_of_primary_m_with(
    secondary_index: f64,
    thickness_m: f64,
    void_ratio: f64,
    time_s: f64,
    end_of_primary_s: f64,
    working: &mut impl Working,
) -> Result<f64, SettlementError> {
    SECONDARY_INDEX.check(secondary_index)?;
    COMPRESSING_THICKNESS.check(thickness_m)?;
    crate::ground::VOID_RATIO.check(void_ratio)?;
    let cycles = cycles(time_s, end_of_primary_s)?;
    let value = secondary_index * thickness_m / (1.0 + void_ratio) * cycles;
    working.step(Step {
        name: "secondary settlement",
        value,
        unit: "m",
        formula: "Ca Hp/(1+ep) log10(t/tp), 0 before tp",
        inputs: &[
            ("Ca", secondary_index),
            ("Hp", thickness_m),
            ("ep", void_ratio),
            ("t", time_s),
            ("tp", end_of_primary_s),
        ],
        source: "Buisman 1936; Mesri & Godlewski 1977",
    });
    Ok(value)
}

fn cycles(time_s: f64, end_of_primary_s: f64) -> Result<f64, SettlementError> {
    TIME_SINCE_LOADING.check(time_s)?;
    END_OF_PRIMARY.check(end_of_primary_s)?;
    Ok(if time_s > end_of_primary_s { libm::log10(time_s / end_of_primary_s) } else { 0.0 })
}

/// Creep of one layer through any history of load, as data to be saved.
///
/// # Rule (common practice, not theory)
/// ```text
///            load > band                 excess ratio <= 0.05
/// unloaded ---------------> primary -----------------------------> creeping
///                             ^                                       |
///                             +------ load > held + band <------------+
///                                     (creep so far is kept)
/// ```
/// - *Held load* is the largest load so far, known to [`HOLD_BAND_KPA`]. A net rise takes the load
///   above it by more than that band.
/// - The clock starts with the last net rise, at the last instant before it. Net rises less than
///   [`SHORTEST_HOLD_S`] apart are one rise and share a clock.
/// - The clock runs while the load is at the held load (within the band) or rising; it stands still
///   while the load is lower: an unloaded layer is taken not to creep.
/// - Primary settlement ends when the mean excess pore-pressure ratio of the layer falls to
///   [`END_OF_PRIMARY_RATIO`], interpolated between the instants given, and not before
///   [`SHORTEST_PRIMARY_S`] on the clock.
/// - From then on creep is Ca/(1+e0) H log10(clock/tp). A net rise ends it and what has crept is
///   kept: the soil is compressed afresh and the next hold begins a new line.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Creep {
    /// Largest load so far, kPa.
    held_load_kpa: f64,
    /// When the held load was last raised, Unix s.
    held_since_s: i64,
    /// Time on the clock of the last net rise, s.
    clock_s: f64,
    /// Clock at the end of primary settlement, s, once reached.
    end_of_primary_s: Option<f64>,
    /// Mean excess pore-pressure ratio at the last instant.
    last_ratio: f64,
    /// The last instant seen, Unix s; none before the first.
    last_s: Option<i64>,
    /// Strain per unit secondary ratio kept from earlier holds: log10 cycles of time.
    cycles_kept: f64,
}

impl Creep {
    /// Carries the state on to an instant with the mean vertical stress increment of the layer,
    /// kPa, and its mean excess pore-pressure ratio (excess pore pressure over that increment; any
    /// value where there is no load). Instants may be at any distance, in order.
    ///
    /// # Errors
    /// [`SettlementError::TimeRunsBack`], or [`SettlementError::Value`] for a value that is not a
    /// number; the state is then unchanged.
    pub fn update(
        &mut self,
        now_s: i64,
        load_kpa: f64,
        excess_ratio: f64,
    ) -> Result<(), SettlementError> {
        MEAN_LOAD.check(load_kpa)?;
        MEAN_EXCESS_RATIO.check(excess_ratio)?;
        let last_s = self.last_s.unwrap_or(now_s);
        if now_s < last_s {
            return Err(SettlementError::TimeRunsBack { now_s, last_s });
        }
        let step_s = now_s.saturating_sub(last_s) as f64;
        let ratio_before = self.last_ratio;
        if load_kpa > self.held_load_kpa + HOLD_BAND_KPA {
            self.rise(now_s, load_kpa, step_s);
            self.look_for_end(excess_ratio, excess_ratio, 0.0);
        } else if self.held_load_kpa > 0.0 && load_kpa >= self.held_load_kpa - HOLD_BAND_KPA {
            self.clock_s += step_s;
            self.look_for_end(ratio_before, excess_ratio, step_s);
        }
        self.last_ratio = excess_ratio;
        self.last_s = Some(now_s);
        Ok(())
    }

    fn rise(&mut self, now_s: i64, load_kpa: f64, step_s: f64) {
        self.cycles_kept += self.cycles_now();
        self.end_of_primary_s = None;
        let rested_s = now_s.saturating_sub(self.held_since_s) as f64;
        let new_rise = self.held_load_kpa <= 0.0 || rested_s > SHORTEST_HOLD_S.max(step_s);
        self.clock_s = if new_rise { step_s } else { self.clock_s + step_s };
        self.held_load_kpa = load_kpa;
        self.held_since_s = now_s;
    }

    fn look_for_end(&mut self, ratio_before: f64, ratio: f64, step_s: f64) {
        if self.end_of_primary_s.is_some() || ratio > END_OF_PRIMARY_RATIO {
            return;
        }
        let fallen = ratio_before - ratio;
        let share_after = if ratio_before > END_OF_PRIMARY_RATIO && fallen > 0.0 {
            (END_OF_PRIMARY_RATIO - ratio) / fallen
        } else {
            0.0
        };
        let end_s = self.clock_s - share_after * step_s;
        self.end_of_primary_s = Some(end_s.max(SHORTEST_PRIMARY_S));
    }

    fn cycles_now(&self) -> f64 {
        match self.end_of_primary_s {
            Some(end_s) if self.clock_s > end_s => libm::log10(self.clock_s / end_s),
            _ => 0.0,
        }
    }

    /// Log10 cycles of time crept so far.
    #[must_use]
    pub fn cycles(&self) -> f64 {
        self.cycles_kept + self.cycles_now()
    }

    /// Time from the last net rise to the end of primary settlement, s, once reached.
    #[must_use]
    pub fn end_of_primary_s(&self) -> Option<f64> {
        self.end_of_primary_s
    }

    /// Secondary settlement of the layer so far, m, of a thickness of it.
    #[must_use]
    pub fn settlement_m(&self, layer: &Layer, thickness_m: f64) -> f64 {
        self.settlement_m_with(layer, thickness_m, &mut Silent)
    }

    /// As [`Creep::settlement_m`], writing its step.
    pub fn settlement_m_with(
        &self,
        layer: &Layer,
        thickness_m: f64,
        working: &mut impl Working,
    ) -> f64 {
        let value = layer.secondary_ratio * thickness_m * self.cycles();
        working.step(Step {
            name: "secondary settlement of the layer",
            value,
            unit: "m",
            formula: "Ca/(1+e0) H [log10(t/tp) + cycles kept from earlier holds]",
            inputs: &[
                ("Ca/(1+e0)", layer.secondary_ratio),
                ("H", thickness_m),
                ("t", self.clock_s),
                ("tp", self.end_of_primary_s.unwrap_or(f64::INFINITY)),
                ("kept", self.cycles_kept),
            ],
            source: "Buisman 1936; rule for rises and holds: common practice",
        });
        value
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::DAY_S;

    const DAY: i64 = DAY_S as i64;

    fn close(got: f64, want: f64) {
        assert!((got - want).abs() < 1e-12, "got {got}, want {want}");
    }

    /// A fill of 100 kPa in five days, 95 % consolidation at day 105, seen at given intervals.
    fn filled(step_days: i64, until_day: i64) -> Creep {
        let mut creep = Creep::default();
        let mut day = 0;
        while day <= until_day {
            let load = 20.0 * (day as f64).min(5.0);
            let ratio = if day < 5 { 1.0 } else { 1.0 - (day - 5) as f64 * 0.0095 };
            creep.update(day * DAY, load, ratio).unwrap();
            day += step_days;
        }
        creep
    }

    #[test]
    fn a_hold_follows_the_formula_from_the_start_of_the_rise() {
        let creep = filled(1, 1050);
        close(creep.end_of_primary_s().unwrap(), 105.0 * DAY_S);
        close(creep.cycles(), 1.0);
    }

    #[test]
    fn the_interval_of_the_instants_does_not_matter() {
        for step_days in [1, 5, 15, 35] {
            close(filled(step_days, 1050).cycles(), 1.0);
        }
    }

    #[test]
    fn a_new_rise_keeps_what_has_crept_and_starts_afresh() {
        let mut creep = filled(1, 1050);
        creep.update(1051 * DAY, 150.0, 0.33).unwrap();
        close(creep.cycles(), libm::log10(1050.0 / 105.0));
        assert_eq!(creep.end_of_primary_s(), None);
        creep.update(1071 * DAY, 150.0, 0.05).unwrap();
        close(creep.end_of_primary_s().unwrap(), 21.0 * DAY_S);
        creep.update((1050 + 210) * DAY, 150.0, 0.0).unwrap();
        close(creep.cycles(), 2.0);
    }

    #[test]
    fn changes_within_the_band_are_no_change() {
        let (mut steady, mut restless) = (filled(1, 200), filled(1, 200));
        for day in 201..400 {
            steady.update(day * DAY, 100.0, 0.0).unwrap();
            let wave = if day % 2 == 0 { 1.9 } else { -1.9 };
            restless.update(day * DAY, 100.0 + wave, 0.0).unwrap();
        }
        assert_eq!(steady.cycles(), restless.cycles());
    }

    #[test]
    fn an_unloaded_layer_does_not_creep_and_goes_on_when_loaded_again() {
        let mut creep = filled(1, 500);
        let before = creep.cycles();
        creep.update(501 * DAY, 30.0, -0.2).unwrap();
        creep.update(900 * DAY, 30.0, 0.0).unwrap();
        assert_eq!(creep.cycles(), before);
        creep.update(901 * DAY, 100.0, 0.02).unwrap();
        creep.update(1451 * DAY, 100.0, 0.0).unwrap();
        // 500 days before, 551 after: the 400 days unloaded do not count.
        close(creep.cycles(), libm::log10(1051.0 / 105.0));
    }

    #[test]
    fn free_draining_soil_creeps_from_the_first_day() {
        let mut creep = Creep::default();
        creep.update(0, 0.0, 0.0).unwrap();
        creep.update(3600, 50.0, 0.0).unwrap();
        close(creep.cycles(), 0.0);
        creep.update(10 * DAY, 50.0, 0.0).unwrap();
        close(creep.cycles(), 1.0);
    }

    #[test]
    fn creep_never_falls() {
        let mut creep = Creep::default();
        let mut last = 0.0;
        for day in 0..3000_i64 {
            let stage = libm::floor(day as f64 / 300.0);
            let lowered = if (700..1400).contains(&day) { 40.0 } else { 0.0 };
            let load = (25.0 * stage - lowered).max(0.0);
            let ratio = libm::exp(-((day % 300) as f64) / 30.0);
            creep.update(day * DAY, load, ratio).unwrap();
            assert!(creep.cycles() >= last, "day {day}");
            last = creep.cycles();
        }
        assert!(last > 1.0, "it did creep: {last}");
    }

    #[test]
    fn a_saved_state_goes_on_as_if_never_stopped() {
        let mut creep = filled(1, 333);
        let mut bytes = [0_u8; 512];
        let length = serde_json_core::to_slice(&creep, &mut bytes).unwrap();
        let (mut restored, _): (Creep, usize) =
            serde_json_core::from_slice(&bytes[..length]).unwrap();
        assert_eq!(restored, creep);
        for state in [&mut creep, &mut restored] {
            state.update(700 * DAY, 140.0, 0.3).unwrap();
            state.update(1500 * DAY, 140.0, 0.0).unwrap();
        }
        assert_eq!(restored, creep);
    }

    #[test]
    fn time_running_back_and_nan_are_refused_and_change_nothing() {
        let mut creep = filled(1, 500);
        let before = creep;
        assert!(creep.update(10 * DAY, 100.0, 0.0).is_err());
        assert!(creep.update(501 * DAY, f64::NAN, 0.0).is_err());
        assert!(creep.update(501 * DAY, 100.0, f64::NAN).is_err());
        assert_eq!(creep, before);
    }
}
