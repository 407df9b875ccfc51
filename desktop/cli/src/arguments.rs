//! What can be typed.

use clap::{Args, Parser, Subcommand};
use std::path::PathBuf;

#[derive(Parser)]
#[command(
    name = "brimstead",
    version,
    about = "What each instrument under a tank should read at this load and hour, and how far it is from its limits.",
    after_help = "Advice only: the responsible licensed engineer decides under the local code, the owner's procedure and the law. Not a safety-rated trip."
)]
pub struct Arguments {
    #[command(subcommand)]
    pub command: Command,
}

#[derive(Subcommand)]
pub enum Command {
    /// Compare readings with what the load at that hour should give
    Compare(CompareArguments),
    /// Expected readings along the plan of stages
    Predict(PredictArguments),
    /// Check a site file and list every problem by line
    Check(CheckArguments),
    /// The hand-check sheet of one expected reading
    Working(WorkingArguments),
    /// Answer JSON requests, one a line (for scripts and checks)
    Eval(EvalArguments),
}

#[derive(Args)]
#[command(after_help = "\
Example:
  brimstead compare data-demo/site.json --readings data-demo/run-bad/* --out target/report

Writes report.html, comparison.json and the charts as SVG and PNG into the folder given by --out.

Exit status, from the highest trigger that any instrument reached:
   0  Normal throughout, every instrument believed throughout
  10  Normal throughout, but an instrument could not be believed at some time
  11  Watch     12  Review     13  Stop
   2  a file could not be read or was refused")]
pub struct CompareArguments {
    /// The site file
    pub site: PathBuf,
    /// Files of readings, as the loggers write them
    #[arg(long, required = true, num_args = 1..)]
    pub readings: Vec<PathBuf>,
    /// Folder for the report, made when it is not there
    #[arg(long)]
    pub out: Option<PathBuf>,
    /// Print JSON instead of the table
    #[arg(long)]
    pub json: bool,
}

#[derive(Args)]
#[command(after_help = "\
Example:
  brimstead predict data-demo/site.json --out target/prediction

For the start and end of each rise and the end of each hold of the plan: the likely reading and
the band of every instrument.")]
pub struct PredictArguments {
    /// The site file, with its stages
    pub site: PathBuf,
    /// Folder for tables and charts, made when it is not there
    #[arg(long)]
    pub out: Option<PathBuf>,
    /// Print JSON instead of the table
    #[arg(long)]
    pub json: bool,
}

#[derive(Args)]
#[command(after_help = "Exit status: 0 nothing to put right, 2 problems (all are listed).")]
pub struct CheckArguments {
    /// The site file
    pub site: PathBuf,
    /// Print JSON
    #[arg(long)]
    pub json: bool,
}

#[derive(Args)]
#[command(after_help = "\
Example:
  brimstead working data-demo/site.json --instrument PE1 --at 2026-05-17T18:00Z \\
      --readings data-demo/run-bad/*

Without --readings the liquid level follows the plan of stages.")]
pub struct WorkingArguments {
    /// The site file
    pub site: PathBuf,
    /// The instrument
    #[arg(long)]
    pub instrument: String,
    /// The moment: RFC 3339, or local time of the site such as "2026-05-17 21:00"
    #[arg(long)]
    pub at: String,
    /// Files of readings whose liquid level is the load
    #[arg(long, num_args = 1..)]
    pub readings: Vec<PathBuf>,
    /// Print JSON
    #[arg(long)]
    pub json: bool,
}

#[derive(Args)]
#[command(after_help = "\
Example:
  echo '{\"id\":1,\"quantity\":\"disc_stress\",\"input\":{\"radius_m\":25,\"pressure_kpa\":150,\
\"poisson\":0.5,\"points\":[[0,10]]}}' | brimstead eval -

Exit status: 0 every line gave a result, 1 some line gave an error, 2 the input could not be read.")]
pub struct EvalArguments {
    /// File of requests, or - for standard input
    pub file: PathBuf,
}
