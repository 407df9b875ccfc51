//! What the desktop companion shows: view models made from the store, the comparison and the core.
//! The shell hands them over as they are; the front end draws them.

pub mod views;
