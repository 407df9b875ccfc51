//! What a column remembers, and what a step reports.

use serde::{Deserialize, Serialize};
use serde_big_array::BigArray;

/// Everything that a column carries from one step to the next: plain data, to be saved and
/// resumed bit for bit. Obtain one from [`super::Stepper::at_rest`].
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct State<const CELLS: usize> {
    /// Excess pore pressure of each cell, kPa.
    #[serde(with = "BigArray")]
    pub excess_kpa: [f64; CELLS],
    /// Time since the last jump of load, s.
    pub since_jump_s: f64,
    /// Time since the rate of loading last changed, s.
    pub since_kink_s: f64,
    /// Whether the load was changing during the last step.
    pub ramping: bool,
    /// Mark of the column that made this state; another column refuses it.
    pub column_mark: u32,
}

/// Water balance of a step, all per m2 of plan, in m (m3/m2): equal to the settlement that the
/// flow has brought, by linear mv.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Balance {
    /// Volume held by excess pressure before the step.
    pub stored_before_m: f64,
    /// Volume held after it.
    pub stored_after_m: f64,
    /// Put in by the load increment.
    pub load_m: f64,
    /// Out through the top.
    pub top_m: f64,
    /// Out through the base.
    pub base_m: f64,
    /// Out into free-draining layers.
    pub layers_m: f64,
    /// Out into the vertical drains.
    pub drains_m: f64,
}

impl Balance {
    /// All that left the column; the settlement of the step under linear mv.
    #[must_use]
    pub fn outflow_m(&self) -> f64 {
        self.top_m + self.base_m + self.layers_m + self.drains_m
    }

    /// What does not close, relative to the volumes involved; rounding only.
    #[must_use]
    pub fn closing_error(&self) -> f64 {
        let rest = self.stored_after_m - self.stored_before_m - self.load_m + self.outflow_m();
        let scale = self.stored_before_m.abs()
            + self.stored_after_m.abs()
            + self.load_m.abs()
            + self.top_m.abs()
            + self.base_m.abs()
            + self.layers_m.abs()
            + self.drains_m.abs();
        if scale > 0.0 { rest.abs() / scale } else { 0.0 }
    }

    /// This step followed by another.
    pub(super) fn then(self, next: &Self) -> Self {
        Self {
            stored_before_m: self.stored_before_m,
            stored_after_m: next.stored_after_m,
            load_m: self.load_m + next.load_m,
            top_m: self.top_m + next.top_m,
            base_m: self.base_m + next.base_m,
            layers_m: self.layers_m + next.layers_m,
            drains_m: self.drains_m + next.drains_m,
        }
    }
}
