//! From a raw signal to a reading that says how far it can be trusted.
//!
//! ```text
//! raw signal -> reduction (named steps, each can be switched off) -> value
//! value -> validity checks -> Reading { time, value, data state, doubt }
//! ```
//!
//! The raw value is the caller's to keep; nothing here replaces it. A data state speaks of the
//! instrument and never of the ground: alarm triggers are the affair of [`crate::watch`].

mod fixed_list;
mod reading;

pub mod check;
pub mod reduce;

pub use crate::quantity::Kind;
pub use fixed_list::{FixedList, Full};
pub use reading::{CorrectionInput, DataState, Doubt, OutOfOrder, Reading};
