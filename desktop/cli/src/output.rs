//! Writing results where they were asked for, and saying so.

use anyhow::Context;
use brimstead_engine::chart::theme::LIGHT;
use brimstead_engine::chart::{Size, png};
use brimstead_engine::compare::page::NamedChart;
use brimstead_engine::report::{TerminalOptions, colour_wanted};
use std::io::{self, IsTerminal, Write};
use std::path::Path;

/// Size of a chart as a picture of its own.
pub const PICTURE: Size = Size { width_px: 960.0, height_px: 440.0 };
/// Pixels of the PNG for each of the chart.
const PNG_SCALE: f32 = 2.0;

/// How the terminal is written to: colour only where it is seen and wanted.
pub fn terminal() -> TerminalOptions {
    let is_terminal = io::stdout().is_terminal();
    let width = std::env::var("COLUMNS").ok().and_then(|columns| columns.parse().ok());
    TerminalOptions {
        width: if is_terminal { width } else { None },
        colour: colour_wanted(is_terminal),
    }
}

/// Prints to standard output. A reader that has seen enough and closed its end (`| head`) is no
/// fault.
///
/// # Errors
/// Any other failure to write.
pub fn say(text: impl std::fmt::Display) -> anyhow::Result<()> {
    match writeln!(io::stdout().lock(), "{text}") {
        Err(error) if error.kind() == io::ErrorKind::BrokenPipe => Ok(()),
        other => other.context("standard output could not be written"),
    }
}

/// Makes a folder.
pub fn folder(path: &Path) -> anyhow::Result<()> {
    std::fs::create_dir_all(path).with_context(|| {
        format!(
            "the folder {} could not be made. Check the path and its permissions",
            path.display()
        )
    })
}

/// Writes a file.
pub fn write(path: &Path, content: impl AsRef<[u8]>) -> anyhow::Result<()> {
    std::fs::write(path, content).with_context(|| {
        format!("{} could not be written. Check free space and permissions", path.display())
    })
}

/// Progress of long work, on the error stream and only where somebody watches it.
pub fn progress(done: usize, of: usize, what: &str) {
    if io::stderr().is_terminal() {
        eprint!("\r\x1b[K{what} {done} of {of}");
        if done == of {
            eprint!("\r\x1b[K");
        }
    }
}

/// Draws every chart as SVG and PNG.
pub fn pictures(folder: &Path, charts: &[NamedChart]) -> anyhow::Result<()> {
    for (index, one) in charts.iter().enumerate() {
        progress(index + 1, charts.len(), "chart");
        let drawn = one.chart.render(PICTURE, &LIGHT)?;
        write(&folder.join(format!("{}.svg", one.name)), &drawn.svg)?;
        write(&folder.join(format!("{}.png", one.name)), png(&drawn.svg, PNG_SCALE)?)?;
    }
    Ok(())
}
