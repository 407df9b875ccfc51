//! Every fixed capacity, in one place. A collection that is full is an error, never a silent cut.

/// Longest name of a layer, tank or instrument, in bytes.
pub const NAME_BYTES: usize = 32;
/// Layers of a ground profile.
pub const MAX_LAYERS: usize = 16;
/// Sublayers that layers with a modulus gradient are divided into for elastic stresses; all of a
/// ground together.
pub const MAX_ELASTIC_SUBLAYERS: usize = 160;
/// Points of a measured pore-pressure profile.
pub const MAX_PROFILE_POINTS: usize = 16;
/// Tanks that load the site, neighbours included.
pub const MAX_TANKS: usize = 6;
/// Cells of a consolidation column on the logger and in every comparison, so that both compute
/// the same bits.
pub const COLUMN_CELLS: usize = 60;
/// Rod extensions booked on one settlement plate.
pub const MAX_ROD_EXTENSIONS: usize = 16;
/// Lengths of rod in use on a site.
pub const MAX_ROD_LENGTHS: usize = 4;
/// Readings an instrument's validity checks look back over.
pub const CHECK_HISTORY: usize = 16;
/// Limit rules of one instrument (a band, a curve, a fixed value and a rate together).
pub const MAX_RULES: usize = 4;
/// Points of a limit curve over applied pressure.
pub const MAX_CURVE_POINTS: usize = 10;
/// Parts into which a rate window is divided; readings of one part are averaged.
pub const RATE_PARTS: usize = 16;
/// Longest reason given for an inhibition, in bytes.
pub const REASON_BYTES: usize = 96;
/// Longest time an alarm may be inhibited in one go, s (a week): after that somebody looks again.
pub const INHIBITION_LONGEST_S: i64 = 604_800;

/// A short owned name.
pub type Name = heapless::String<NAME_BYTES>;
