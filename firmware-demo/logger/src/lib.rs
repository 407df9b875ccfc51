//! The behaviour of the logger, without any hardware. Time and signals come in as arguments, so
//! that the same code runs under test on a desktop and on the board.
//!
//! # Advice only
//! The responsible licensed engineer decides under the local code, the owner's procedure and the
//! law. The logger is not a safety-rated trip and drives no pump.
#![no_std]

pub mod conformance;
