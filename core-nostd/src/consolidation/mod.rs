//! Excess pore pressure and its decay: closed forms for one layer, vertical drains, and the
//! layered column that follows any load history.
//!
//! - [`terzaghi`]: one uniform layer, exact; to check the column and to read time factors.
//! - [`drains`]: radial flow to vertical drains.
//! - [`stepper`]: the implicit column of layered ground with drains, one step at a time, whose
//!   state can be saved and resumed bit for bit. The logger and the office run this one.
//! - [`batch`]: the same column on a fine grid for a whole piecewise linear history at once.
//!
//! Total stress changes raise the excess pore pressure at once and in full by what the caller
//! says; the ground stays linear and one-dimensional: cv does not change with stress, strain is
//! vertical. Unloading leaves negative excess pressure.

pub mod batch;
pub mod drains;
mod error;
mod grid;
mod pace;
mod profile;
mod state;
pub mod stepper;
pub mod terzaghi;
mod working;

pub use batch::{Answers, History};
pub use drains::{DrainPattern, Drains};
pub use error::Error;
pub(crate) use error::{
    CONSTRUCTION_TIME_FACTOR, DEPTH_RATIO, DISCHARGE, DRAIN_DEPTH, DRAIN_DIAMETER, DRAIN_LENGTH,
    DRAIN_SPACING, PERMEABILITY_RATIO, POSITIVE_TIME_FACTOR, SMEAR_RATIO, SPACING_RATIO,
    TIME_FACTOR, WELL_TERM,
};
pub use grid::{Boundary, ColumnLayer};
pub use state::{Balance, State};
pub use stepper::{Column, Factor, Loading, Stepper};
pub use working::Seen;
