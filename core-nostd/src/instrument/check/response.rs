//! Each rise of the load is a free test of each instrument: one that works moves with it.

use super::{ALLOWED, Doubt, SECONDS, Sample};
use crate::quantity::OutOfRange;
use serde::{Deserialize, Serialize};

/// The answer expected to a step of load.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Response {
    /// Load change that makes a test, kPa.
    pub load_step_kpa: f64,
    /// Smallest answer, in the instrument's unit per kPa of load, in the direction of the load.
    pub least_per_kpa: f64,
    /// Time the instrument has to answer, s.
    pub lag_s: i64,
    /// A load change that takes longer than this is no test, since pressures dissipate meanwhile,
    /// s.
    pub within_s: i64,
}

/// What the check remembers: the readings before the load began to move, and the running test.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct ResponseState {
    reference: Option<Reference>,
    stepped_at_s: Option<i64>,
    failed: Option<Doubt>,
}

#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
struct Reference {
    sample: Sample,
    load_kpa: f64,
}

impl Response {
    pub(super) fn check(&self) -> Result<(), OutOfRange> {
        ALLOWED.check(self.load_step_kpa)?;
        ALLOWED.check(self.least_per_kpa)?;
        SECONDS.check(self.lag_s as f64)?;
        SECONDS.check(self.within_s as f64)?;
        Ok(())
    }

    /// Takes a value with its load.
    ///
    /// ```text
    /// waiting for a step --load moved by the step within the time--> answering
    /// answering --answer large enough--> waiting (doubt cleared)
    /// answering --lag over--> failed: the doubt stays until a test is passed
    /// waiting --load stood still for the time--> waiting, from here
    /// ```
    pub(super) fn observe(
        &self,
        state: &ResponseState,
        sample: Sample,
        load_kpa: f64,
    ) -> (ResponseState, Option<Doubt>) {
        if !load_kpa.is_finite() {
            return (*state, state.failed);
        }
        let here = Some(Reference { sample, load_kpa });
        let Some(reference) = state.reference else {
            return (ResponseState { reference: here, ..*state }, state.failed);
        };
        let load_step_kpa = load_kpa - reference.load_kpa;
        let change = sample.value - reference.sample.value;
        if load_step_kpa.abs() < self.load_step_kpa || load_step_kpa == 0.0 {
            let elapsed_s = sample.time_s.saturating_sub(reference.sample.time_s);
            let kept = if elapsed_s > self.within_s { here } else { state.reference };
            let state = ResponseState { reference: kept, stepped_at_s: None, ..*state };
            return (state, state.failed);
        }
        let answer_per_kpa = change / load_step_kpa;
        if answer_per_kpa >= self.least_per_kpa {
            return (ResponseState { reference: here, stepped_at_s: None, failed: None }, None);
        }
        let stepped_at_s = state.stepped_at_s.unwrap_or(sample.time_s);
        let over = sample.time_s.saturating_sub(stepped_at_s) >= self.lag_s;
        let failed = if over {
            let wrong_sign = answer_per_kpa <= -self.least_per_kpa && change != 0.0;
            Some(if wrong_sign {
                Doubt::WrongSign { load_step_kpa, change }
            } else {
                Doubt::NoResponse { load_step_kpa, change }
            })
        } else {
            state.failed
        };
        let state = ResponseState { stepped_at_s: Some(stepped_at_s), failed, ..*state };
        (state, failed)
    }
}
