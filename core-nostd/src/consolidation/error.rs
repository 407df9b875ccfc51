//! What can be wrong with the input of a consolidation calculation.

use crate::quantity::{Bounded, OutOfRange};
use core::fmt;

/// Declares the quantities of this room: name, unit, range, remedy.
macro_rules! quantities {
    ($($ident:ident = $name:literal [$unit:literal] $min:literal to $max:literal, $remedy:literal;)*) => {
        $(pub(crate) static $ident: Bounded =
            Bounded { name: $name, unit: $unit, min: $min, max: $max, remedy: $remedy };)*
    };
}

quantities! {
    TIME_FACTOR = "time factor" [""] 0.0 to 1e9, "It is cv t/H^2 or ch t/De^2; check the unit of time.";
    POSITIVE_TIME_FACTOR = "time factor" [""] 1e-300 to 1e9, "It must be above zero here.";
    CONSTRUCTION_TIME_FACTOR = "construction time factor" [""] 0.0 to 1e9, "It is cv tc/H^2; check the unit of time.";
    DEPTH_RATIO = "depth over thickness" [""] 0.0 to 1.0, "Depth is measured from the drained top.";
    SPACING_RATIO = "drain spacing ratio n" [""] 1.01 to 1e4, "It is De/dw; check both diameters.";
    SMEAR_RATIO = "smear ratio s" [""] 1.0 to 100.0, "It is ds/dw; give 1 for no smear.";
    PERMEABILITY_RATIO = "permeability ratio kh/ks" [""] 1.0 to 1000.0, "Smear lowers permeability; give 1 for no smear.";
    WELL_TERM = "well resistance term" [""] 0.0 to 1e9, "It is added to mu; give 0 for none.";
    DRAIN_SPACING = "drain spacing" ["m"] 0.1 to 20.0, "Give it in metres.";
    DRAIN_DIAMETER = "equivalent drain diameter" ["m"] 0.005 to 2.0, "Give it in metres: 0.066, not 66.";
    DRAIN_DEPTH = "depth of a drain end" ["m"] 0.0 to 1000.0, "Give it below ground level.";
    DRAIN_LENGTH = "longest way inside a drain" ["m"] 0.01 to 1000.0, "Its length if open at one end, half if at both.";
    DISCHARGE = "discharge capacity of a drain" ["m3/s"] 1e-12 to 10.0, "Give it per drain; leave it out for no resistance.";
    THICKNESS = "layer thickness" ["m"] 0.01 to 500.0, "Leave out layers of no thickness.";
    CV = "coefficient of consolidation cv" ["m2/s"] 1e-14 to 10.0, "1 m2/year is 3.17e-8 m2/s.";
    CH = "coefficient of consolidation ch" ["m2/s"] 1e-14 to 10.0, "1 m2/year is 3.17e-8 m2/s.";
    PERMEABILITY = "vertical permeability" ["m/s"] 1e-16 to 10.0, "Soft clay has about 1e-9 m/s.";
    COMPRESSIBILITY = "coefficient of volume compressibility k/(cv gamma_w)" ["1/kPa"] 1e-9 to 10.0, "Permeability and cv do not belong together.";
    WATER_UNIT_WEIGHT = "unit weight of water" ["kN/m3"] 9.0 to 11.0, "Fresh water has 9.81.";
    EXCESS = "excess pore pressure" ["kPa"] -1e6 to 1e6, "Check the load and its unit.";
    STEP = "time step" ["s"] 0.0 to 1e10, "Time runs forward; 1e10 s are 317 years.";
    DEPTH = "depth" ["m"] 0.0 to 1e4, "Depth is below the top of the column.";
    RATIO = "influence ratio" [""] -10.0 to 10.0, "Excess pore pressure per kPa of load.";
    LOAD = "load" ["kPa"] -1e5 to 1e5, "Check its unit.";
    DAY = "day" ["d"] -1e6 to 1e6, "Days from any common start.";
}

/// Why a consolidation calculation was refused.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Error {
    /// A value outside its range.
    OutOfRange(OutOfRange),
    /// A column without layers.
    NoLayers,
    /// More layers than the cells of the column can follow.
    TooFewCells {
        /// Number of layers.
        layers: usize,
        /// Cells the column has.
        cells: usize,
        /// Cells these layers need at least.
        needed: usize,
    },
    /// The lower end of the drains is not below their top.
    DrainEnds {
        /// Top, m.
        top_m: f64,
        /// Lower end, m.
        base_m: f64,
    },
    /// The longest way inside a drain is shorter than half the drain.
    DrainLength {
        /// Way given, m.
        length_m: f64,
        /// Drain between its ends, m.
        drain_m: f64,
    },
    /// The smeared zone is as wide as the ground served by a drain.
    SmearBeyondSpacing {
        /// s = ds/dw.
        smear_ratio: f64,
        /// n = De/dw.
        spacing_ratio: f64,
    },
    /// Depths or times of a list that must rise do not.
    Order {
        /// Which list.
        list: &'static str,
        /// First item that is out of order, counted from 0.
        index: usize,
    },
    /// A list that must hold something is empty.
    Empty {
        /// Which list.
        list: &'static str,
    },
    /// A list for answers has the wrong length.
    Length {
        /// Which list.
        list: &'static str,
        /// Length given.
        given: usize,
        /// Length needed.
        needed: usize,
    },
    /// A depth below the base of the column.
    BelowColumn {
        /// Depth asked for, m.
        depth_m: f64,
        /// Depth of the base, m.
        column_m: f64,
    },
    /// The state or factor belongs to another column.
    OtherColumn,
    /// The saved state holds a number that is not finite.
    NotFinite,
}

impl From<OutOfRange> for Error {
    fn from(refused: OutOfRange) -> Self {
        Self::OutOfRange(refused)
    }
}

impl fmt::Display for Error {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::OutOfRange(refused) => refused.fmt(f),
            Self::NoLayers => f.write_str("the column has no layers; give at least one"),
            Self::TooFewCells { layers, cells, needed } => write!(
                f,
                "{layers} layers need at least {needed} cells, the column has {cells}; join thin layers"
            ),
            Self::DrainEnds { top_m, base_m } => write!(
                f,
                "drains end at {base_m} m, not below their top at {top_m} m; depth grows downwards"
            ),
            Self::DrainLength { length_m, drain_m } => write!(
                f,
                "longest way inside a drain is {length_m} m, less than half of its {drain_m} m; give \
                 the length if it is open at one end, half of it if at both"
            ),
            Self::SmearBeyondSpacing { smear_ratio, spacing_ratio } => write!(
                f,
                "smear ratio {smear_ratio} must be below the spacing ratio {spacing_ratio}; check \
                 spacing, drain and smear diameter"
            ),
            Self::Order { list, index } => {
                write!(
                    f,
                    "{list}: item {} does not follow the one before; sort it",
                    index.saturating_add(1)
                )
            }
            Self::Empty { list } => write!(f, "{list} is empty; give at least one point"),
            Self::Length { list, given, needed } => {
                write!(f, "{list} has {given} places, {needed} are needed")
            }
            Self::BelowColumn { depth_m, column_m } => {
                write!(f, "depth {depth_m} m is below the base of the column at {column_m} m")
            }
            Self::OtherColumn => f.write_str(
                "the saved state belongs to a column of other layers or drains; start it anew",
            ),
            Self::NotFinite => {
                f.write_str("the saved state holds a number that is not finite; start it anew")
            }
        }
    }
}

impl core::error::Error for Error {
    fn source(&self) -> Option<&(dyn core::error::Error + 'static)> {
        match self {
            Self::OutOfRange(refused) => Some(refused),
            _ => None,
        }
    }
}
