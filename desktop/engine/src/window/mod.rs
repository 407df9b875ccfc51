//! What the desktop companion shows: view models made from the store, the comparison and the core.
//! The shell hands them over as they are; the front end draws them.
//!
//! ```text
//! store, demo -> Session -> moment, section, contours, charts, reading, working, faults, ...
//! ```
//! A [`Session`] compares once and then answers from memory. Everything it gives is in the units
//! asked for, with its text; what it cannot do it says in a [`WindowError`].

mod ahead;
mod charts;
mod contours;
mod failure;
mod imports;
mod iso;
mod limits;
mod log;
mod mathml;
mod moment;
mod reading;
pub mod records;
mod section;
mod sentences;
mod session;
mod shown;
mod site_file;
pub mod views;
mod working;

pub use charts::ReadingChart;
pub use failure::WindowError;
pub use session::{Progress, Session};
pub use site_file::site_check;
