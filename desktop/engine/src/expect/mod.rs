//! Expected readings of a whole site: sets up the core's columns and points for every case of the
//! band, carries them through a load history on all processors, and gives each instrument its
//! expected band at the times asked for.

mod history;
mod model;
mod run;

pub use history::{LoadHistory, LoadPoint};
pub use model::{ExpectError, Instrument, Model, scale_of};
pub use run::{Expectations, MomentState, expect, state_at};
