//! `brimstead`: the command line over the engine.

mod arguments;
mod check;
mod compare;
mod eval;
mod output;
mod predict;
mod working;

use arguments::{Arguments, Command};
use clap::Parser;
use std::process::ExitCode;

/// Exit status when an input could not be read or was refused.
const REFUSED: u8 = 2;

fn main() -> ExitCode {
    let outcome = match Arguments::parse().command {
        Command::Compare(given) => compare::run(&given),
        Command::Predict(given) => predict::run(&given),
        Command::Check(given) => check::run(&given),
        Command::Working(given) => working::run(&given),
        Command::Eval(given) => eval::run_file(&given.file),
    };
    outcome.unwrap_or_else(|error| {
        eprintln!("brimstead: {error:#}");
        ExitCode::from(REFUSED)
    })
}
