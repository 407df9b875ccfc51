//! `brimstead`: the command line over the engine.

mod eval;

use anyhow::Context;
use clap::{Parser, Subcommand};
use std::fs::File;
use std::io::{self, BufReader};
use std::path::{Path, PathBuf};
use std::process::ExitCode;

/// Exit status when the input could not be read.
const UNREADABLE: u8 = 2;

#[derive(Parser)]
#[command(
    name = "brimstead",
    version,
    about = "What each instrument under a tank should read at this load and hour, and how far it is from its limits. Advice only: the responsible licensed engineer decides."
)]
struct Arguments {
    #[command(subcommand)]
    command: Command,
}

#[derive(Subcommand)]
enum Command {
    /// Answer JSON requests, one a line (for scripts and checks)
    #[command(
        after_help = "Example:\n  echo '{\"id\":1,\"quantity\":\"disc_stress\",\"input\":{\"radius_m\":25,\"pressure_kpa\":150,\"poisson\":0.5,\"points\":[[0,10]]}}' | brimstead eval -\n\nExit status: 0 every line gave a result, 1 some line gave an error, 2 the input could not be read."
    )]
    Eval {
        /// File of requests, or - for standard input
        file: PathBuf,
    },
}

fn main() -> ExitCode {
    let arguments = Arguments::parse();
    let outcome = match arguments.command {
        Command::Eval { file } => run_eval(&file),
    };
    outcome.unwrap_or_else(|error| {
        eprintln!("brimstead: {error:#}");
        ExitCode::from(UNREADABLE)
    })
}

fn run_eval(file: &Path) -> anyhow::Result<ExitCode> {
    let output = io::BufWriter::new(io::stdout().lock());
    let outcome = if file == Path::new("-") {
        eval::run(io::stdin().lock(), output).context("standard input could not be read")?
    } else {
        let input = File::open(file).with_context(|| {
            format!("{} could not be opened. Check the path and its permissions", file.display())
        })?;
        eval::run(BufReader::new(input), output)
            .with_context(|| format!("{} could not be read to its end", file.display()))?
    };
    Ok(match outcome {
        eval::Outcome::AllGood => ExitCode::SUCCESS,
        eval::Outcome::SomeRefused => ExitCode::from(1),
    })
}
