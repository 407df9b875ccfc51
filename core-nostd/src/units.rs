//! Constants with their source, and the few conversions the rooms share.

/// Unit weight of fresh water by convention of this trade, kN/m3 (1000 kg/m3 at 9.81 m/s2).
pub const WATER_UNIT_WEIGHT_KN_M3: f64 = 9.81;
/// Seconds in a day.
pub const DAY_S: f64 = 86_400.0;
/// Seconds in a Julian year of 365.25 days.
pub const YEAR_S: f64 = 31_557_600.0;
/// Standard acceleration of gravity, m/s2 (3rd CGPM 1901, exact).
pub const STANDARD_GRAVITY_M_PER_S2: f64 = 9.806_65;
/// Zero of the Celsius scale, K (SI, exact).
pub const ZERO_CELSIUS_K: f64 = 273.15;
