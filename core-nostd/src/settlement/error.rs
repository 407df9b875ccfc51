//! Why a settlement was refused.

use crate::ground::GroundError;
use crate::quantity::OutOfRange;
use core::fmt;

/// Why a settlement could not be given.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum SettlementError {
    /// A value outside its range.
    Value(OutOfRange),
    /// The ground profile or a depth in it.
    Ground(GroundError),
    /// What the load does at a depth (stress increment, displacement) is not a number.
    LoadEffectNotFinite {
        /// Depth below ground level, m.
        depth_m: f64,
    },
    /// The integral over depth did not reach its error target within the work allowed.
    NotConverged {
        /// Depth of the top of the stretch, m.
        top_m: f64,
        /// Depth of its base, m.
        base_m: f64,
        /// Error bound reached, m.
        error_m: f64,
        /// Error bound asked for, m.
        target_m: f64,
    },
    /// A layer of a list does not begin where the one above it ends.
    LayersNotContiguous {
        /// Position in the list, counted from 0.
        index: usize,
        /// Where it should begin, m.
        expected_top_m: f64,
        /// Where it begins, m.
        top_m: f64,
    },
    /// An instant before the one last seen.
    TimeRunsBack {
        /// The instant given, Unix s.
        now_s: i64,
        /// The last instant seen, Unix s.
        last_s: i64,
    },
}

impl From<OutOfRange> for SettlementError {
    fn from(refused: OutOfRange) -> Self {
        Self::Value(refused)
    }
}

impl From<GroundError> for SettlementError {
    fn from(refused: GroundError) -> Self {
        Self::Ground(refused)
    }
}

impl fmt::Display for SettlementError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match *self {
            Self::Value(refused) => refused.fmt(f),
            Self::Ground(refused) => refused.fmt(f),
            Self::LoadEffectNotFinite { depth_m } => write!(
                f,
                "stress or displacement from the load at {depth_m} m is not a number. Check the \
                 loads, and that the depth is below the loaded level and not on a line load."
            ),
            Self::NotConverged { top_m, base_m, error_m, target_m } => write!(
                f,
                "settlement between {top_m} m and {base_m} m is only known to {error_m} m; asked \
                 for {target_m} m. Ask for less accuracy or smooth the stress increment."
            ),
            Self::LayersNotContiguous { index, expected_top_m, top_m } => write!(
                f,
                "layer {} begins at {top_m} m; it should begin at {expected_top_m} m. List layers \
                 from the loaded level down without gap or overlap, each with a base below its \
                 top.",
                index.saturating_add(1)
            ),
            Self::TimeRunsBack { now_s, last_s } => write!(
                f,
                "instant {now_s} is before the last one, {last_s}. Give instants in order."
            ),
        }
    }
}

impl core::error::Error for SettlementError {}
