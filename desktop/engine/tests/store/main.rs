//! The store, from outside.

mod decisions;
mod exchange;
mod history;
mod import;
mod limits;
mod open;
mod processes;
mod sites;
mod support;
mod withdraw;
