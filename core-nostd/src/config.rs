//! Every fixed capacity, in one place. A collection that is full is an error, never a silent cut.

/// Longest name of a layer, tank or instrument, in bytes.
pub const NAME_BYTES: usize = 32;
/// Layers of a ground profile.
pub const MAX_LAYERS: usize = 16;
/// Points of a measured pore-pressure profile.
pub const MAX_PROFILE_POINTS: usize = 16;
/// Tanks that load the site, neighbours included.
pub const MAX_TANKS: usize = 6;
/// Cells of a consolidation column on the logger and in every comparison, so that both compute
/// the same bits.
pub const COLUMN_CELLS: usize = 60;

/// A short owned name.
pub type Name = heapless::String<NAME_BYTES>;
