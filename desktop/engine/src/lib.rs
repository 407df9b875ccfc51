//! What the desktop programs share. No formula of the ground lives here: numbers come from
//! `brimstead_core`, this crate brings them in, sets them side by side and hands them out.
//!
//! [`site`] reads the site file, [`import`] readings from files of any logger; [`store`] keeps
//! both, and all that people enter about them, in one file;
//! [`series`] makes readings ready for drawing, [`chart`] draws them, [`report`] sets them on a
//! page, in JSON or in a terminal.

pub mod chart;
pub mod compare;
pub mod expect;
pub mod import;
pub mod predict;
pub mod report;
pub mod series;
pub mod site;
pub mod store;
pub mod time;
pub mod units;
pub mod window;
pub mod working;
