use crate::consolidation;
use crate::ground::GroundError;
use crate::load::LoadError;
use crate::quantity::Kind;
use crate::quantity::OutOfRange;
use crate::settlement::SettlementError;
use crate::stress::StressError;
use core::fmt;

/// Why no expected value can be given.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ExpectationError {
    /// A value outside its range.
    Value(OutOfRange),
    /// The ground was refused.
    Ground(GroundError),
    /// A tank or a liquid level was refused.
    Load(LoadError),
    /// A stress increment was refused.
    Stress(StressError),
    /// The consolidation column refused.
    Consolidation(consolidation::Error),
    /// Settlement was refused.
    Settlement(SettlementError),
    /// A step back in time was asked for.
    TimeRunsBack {
        /// The instant asked for, Unix s.
        to_s: i64,
        /// The instant already reached, Unix s.
        reached_s: i64,
    },
    /// Nothing is computed for this kind of instrument.
    NoExpectation {
        /// The kind.
        kind: Kind,
    },
    /// The computed value is not a number that can be compared.
    NotFinite,
}

macro_rules! from {
    ($($variant:ident($source:ty)),*) => {$(
        impl From<$source> for ExpectationError {
            fn from(error: $source) -> Self {
                Self::$variant(error)
            }
        }
    )*};
}
from!(
    Value(OutOfRange),
    Ground(GroundError),
    Load(LoadError),
    Stress(StressError),
    Consolidation(consolidation::Error),
    Settlement(SettlementError)
);

impl fmt::Display for ExpectationError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Value(error) => error.fmt(f),
            Self::Ground(error) => error.fmt(f),
            Self::Load(error) => error.fmt(f),
            Self::Stress(error) => error.fmt(f),
            Self::Consolidation(error) => error.fmt(f),
            Self::Settlement(error) => error.fmt(f),
            Self::TimeRunsBack { to_s, reached_s } => write!(
                f,
                "the calculation stands at Unix time {reached_s} s and cannot go back to {to_s} s. \
                 Sort the readings by time, or start the calculation anew."
            ),
            Self::NoExpectation { kind } => write!(
                f,
                "no expected value is computed for {}. Watch it by fixed limits or a rate.",
                kind.measures()
            ),
            Self::NotFinite => f.write_str(
                "the expected value is not a finite number. Check the ground values of this \
                 plan position.",
            ),
        }
    }
}

impl core::error::Error for ExpectationError {}
