//! Writes the readings of the invented terminal in `data-demo`.
//!
//! ```text
//! site file -> level (what the pumps did) -> ground (stress, flow, strain) -> signals -> files
//!                                             + edge (what yields)     + faults, noise, weather
//! ```
//!
//! The ground is worked out by routes of its own (point loads added up, an explicit finite
//! difference, cell-by-cell strain) and does not use the core: the demo must not agree with the
//! expectation by construction. Units and signs are those of the core: compression and
//! settlement positive, depth positive down, kPa, m, s.

pub mod column;
pub mod edge;
pub mod elastic;
mod files;
pub mod ground;
pub mod level;
pub mod noise;
pub mod run;
mod signals;
pub mod site;
pub mod weather;

use crate::ground::{GroundHistory, TRUTH};
use crate::level::LevelHistory;
use crate::run::Run;
use crate::site::Site;
use std::path::{Path, PathBuf};

/// Why readings could not be written.
#[derive(Debug, thiserror::Error)]
pub enum Error {
    /// A file could not be read or written.
    #[error("{path}: {cause}")]
    File {
        /// The file.
        path: PathBuf,
        /// What the system said.
        cause: std::io::Error,
    },
    /// The site file is not of the expected form.
    #[error("site file: {0}")]
    Site(#[from] serde_json::Error),
    /// A time or a time zone of the site file cannot be used.
    #[error("time: {0}")]
    Time(#[from] jiff::Error),
}

impl Error {
    fn file(path: &Path, cause: std::io::Error) -> Self {
        Error::File { path: path.to_path_buf(), cause }
    }
}

/// Reads the parts of a site file that are needed here.
///
/// # Errors
/// Where the file is missing or not of the expected form.
pub fn read_site(path: &Path) -> Result<Site, Error> {
    let text = std::fs::read_to_string(path).map_err(|e| Error::file(path, e))?;
    Ok(serde_json::from_str(&text)?)
}

/// Writes the reading files of one run into `folder/run-NAME`.
///
/// # Errors
/// Where a file cannot be written.
pub fn write_run(site: &Site, run: &Run, folder: &Path) -> Result<PathBuf, Error> {
    let folder = folder.join(format!("run-{}", run.name));
    std::fs::create_dir_all(&folder).map_err(|e| Error::file(&folder, e))?;
    let level = LevelHistory::new(site, &run.afterwards, run.end_s);
    let ground = GroundHistory::new(site, &TRUTH, true, &level, run.edge.clone());
    for source in &site.readings {
        files::write_source(site, run, source, &ground, &level, &folder)?;
    }
    Ok(folder)
}
