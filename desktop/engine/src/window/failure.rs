//! How anything fails in the companion.

use super::views::Failure;
use crate::chart::ChartError;
use crate::compare::CompareError;
use crate::expect::ExpectError;
use crate::import::ImportError;
use crate::site::SiteProblems;
use crate::store::StoreError;
use std::path::PathBuf;
use thiserror::Error;

/// Why the companion could not do something.
#[derive(Debug, Error)]
pub enum WindowError {
    /// Nothing is open yet.
    #[error("No site is open. Open a store, or the demo.")]
    NothingOpen,
    /// The person thought better of it.
    #[error("Cancelled. Nothing was changed.")]
    Cancelled,
    /// An instrument that the site does not have.
    #[error("The site has no instrument {id}. Choose one of its list.")]
    UnknownInstrument {
        /// What was asked for.
        id: String,
    },
    /// A run that the demo does not have.
    #[error("The demo has no run \"{run}\". It has {known}.")]
    UnknownRun {
        /// What was asked for.
        run: String,
        /// Those it has.
        known: String,
    },
    /// The demo's files are not there.
    #[error("The demo is not at {} ({detail}). Install the program again, or open a store.", .path.display())]
    Demo {
        /// Where it should be.
        path: PathBuf,
        /// What the system says.
        detail: String,
    },
    /// A time that stands for no instant, or for two.
    #[error("\"{text}\" is not a time. Write it as 2026-05-20 06:00, in the zone of the site.")]
    Time {
        /// What was written.
        text: String,
    },
    /// The site file is not good.
    #[error("{0}")]
    Site(#[from] SiteProblems),
    /// The store refused.
    #[error(transparent)]
    Store(#[from] StoreError),
    /// The files could not be read.
    #[error(transparent)]
    Import(#[from] ImportError),
    /// The readings could not be compared.
    #[error("{0} Nothing is shown until that is put right.")]
    Compare(#[from] CompareError),
    /// Nothing can be expected.
    #[error(transparent)]
    Expect(#[from] ExpectError),
    /// A chart could not be drawn.
    #[error(transparent)]
    Chart(#[from] ChartError),
    /// Stresses could not be computed.
    #[error("the contours could not be computed: {0}")]
    Contours(String),
}

impl WindowError {
    /// A word that does not change with the text.
    #[must_use]
    pub fn code(&self) -> &'static str {
        match self {
            Self::NothingOpen => "nothing-open",
            Self::Cancelled => "cancelled",
            Self::UnknownInstrument { .. } => "unknown-instrument",
            Self::UnknownRun { .. } => "unknown-run",
            Self::Demo { .. } => "demo-missing",
            Self::Time { .. } => "not-a-time",
            Self::Site(_) => "site-problems",
            Self::Store(error) => error.code(),
            Self::Import(_) => "import-failed",
            Self::Compare(_) => "compare-failed",
            Self::Expect(_) => "expect-failed",
            Self::Chart(_) => "chart-failed",
            Self::Contours(_) => "contours-failed",
        }
    }
}

impl From<WindowError> for Failure {
    fn from(error: WindowError) -> Self {
        Self { code: error.code().to_owned(), message: error.to_string() }
    }
}
