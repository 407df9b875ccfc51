//! The ground engineering of Brimstead, in one crate that runs on a desktop and on a logger.
//!
//! ```text
//! ground + load -> stress -> consolidation -> settlement -> expectation --+
//!                                                                         +-> comparison -> watch
//! raw signal -> instrument ----------------------------------> reading ---+
//! ```
//!
//! A room may use the rooms above it in this list and none below:
//! `config`, `units`, `quantity`, `working`, `math`, `instrument` (whose kinds the expectation
//! must know), `ground`, `load`, `stress`, `consolidation`, `settlement`, `stability`, `expectation`,
//! `comparison`, `watch`, `shell`, `forecast`.
//!
//! # Units and signs
//! SI and its plain multiples, written in the name of every number: `thickness_m`, `pressure_kpa`,
//! `unit_weight_kn_m3`, `cv_m2_per_s`, `time_s`. Compression, settlement and downward movement are
//! positive; depth grows downwards from ground level. Instants are whole seconds of Unix time (UTC)
//! and always an argument: nothing here reads a clock.
//!
//! # What it promises
//! No standard library, no allocation, no `unsafe`, no panic. Inputs are checked once, at the door;
//! a refused input comes back as a typed error that names the quantity, the value, the allowed
//! range and the remedy. A result is never NaN.
//!
//! # Advice only
//! The responsible licensed engineer decides under the local code, the owner's procedure and the
//! law. This is not a safety-rated trip.
#![no_std]

#[cfg(any(test, doctest))]
extern crate std;

pub mod comparison;
pub mod config;
pub mod consolidation;
pub mod expectation;
pub mod forecast;
pub mod ground;
pub mod instrument;
pub mod load;
pub mod math;
pub mod quantity;
pub mod settlement;
pub mod shell;
pub mod stability;
pub mod stress;
pub mod units;
pub mod watch;
pub mod working;
