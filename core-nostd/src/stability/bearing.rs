//! Bearing capacity of a circular base on clay whose undrained strength is constant or grows with
//! depth, `su = su0 + k z`; load vertical and central, at ground level.
//!
//! ```text
//! q_ult = F (N0 su0 + k B/6)
//! ```
//! N0 is 5.689 for a smooth and 6.048 for a rough base (Eason & Shield 1960; Cox, Eason & Hopkins
//! 1961). `k B/6` is what the gradient alone gives: without strength at the surface the ground is
//! squeezed out in a layer of vanishing thickness, and F = 1. In between F depends on k B/su0 only;
//! it is tabulated over `y = sqrt(kB/su0)/(4 + sqrt(kB/su0))`, which runs from 0 to 1, and
//! interpolated by cubics. The same way of writing it as that of Davis & Booker 1973 for the strip,
//! where the second term is k B/4.
//!
//! # Accuracy
//! F comes from the method of characteristics (Haar & von Karman's hypothesis, the problem treated
//! by Houlsby & Wroth 1983 and Houlsby & Martin 2003), by two nets with extrapolation. Known to
//! 1e-4 for k B/su0 up to 100 and to 5e-4 up to 1300; beyond, it is continued to its limit and
//! known to 3e-3. Interpolation adds less than 1e-4. The stress field is not continued into the
//! rigid ground and no velocity field is constructed, so that it is a candidate for the exact value
//! and no proven bound; at k = 0 it meets the published exact values.
//!
//! # Not covered
//! Layers (see [`super::base`] and [`super::squeeze`]), strength that falls with depth, embedment
//! (the load at depth has the strength of that depth as su0, and surcharge is left out), weight of
//! soil: without friction it changes nothing on level ground.

use super::DIAMETER;
use super::strength::UNDRAINED_STRENGTH;
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};

/// Growth of strength with depth.
pub static STRENGTH_GROWTH: Bounded = Bounded {
    name: "growth of undrained strength with depth",
    unit: "kPa/m",
    min: 0.0,
    max: 1e4,
    remedy: "0 for constant strength; for strength that falls with depth, or layers, search a \
             slip circle.",
};

/// How the base holds the ground below it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Roughness {
    /// No shear between base and ground.
    Smooth,
    /// As much shear as the strength of the ground allows.
    Rough,
}

/// Bearing capacity of a circular base.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CircularBearing {
    /// Mean pressure at failure, kPa.
    pub ultimate_kpa: f64,
    /// Over the strength at the surface; `None` where there is no strength there.
    pub factor: Option<f64>,
    /// F.
    pub gradient_factor: f64,
}

/// N0, smooth.
const SMOOTH_FACTOR: f64 = 5.689_37;
/// N0, rough.
const ROUGH_FACTOR: f64 = 6.048_28;
/// Scale of `sqrt(kB/su0)` in y.
const SCALE: f64 = 4.0;
/// Intervals of the tables.
const INTERVALS: usize = 40;

/// F over y, smooth; output of `tests/oracle/circular_bearing.py`.
const SMOOTH: [f64; INTERVALS + 1] = [
    1.000_000_0,
    1.000_846_7,
    1.003_538_8,
    1.008_281_6,
    1.015_238_5,
    1.024_522_2,
    1.036_192_1,
    1.050_256_5,
    1.066_676_7,
    1.085_371_3,
    1.106_218_0,
    1.129_055_3,
    1.153_674_9,
    1.179_820_0,
    1.207_174_8,
    1.235_358_0,
    1.263_917_4,
    1.292_323_8,
    1.319_972_8,
    1.346_189_5,
    1.370_243_0,
    1.391_368_0,
    1.408_796_9,
    1.421_798_8,
    1.429_725_5,
    1.432_057_9,
    1.428_449_6,
    1.418_759_8,
    1.403_073_4,
    1.381_704_5,
    1.355_168_5,
    1.324_166_5,
    1.289_530_9,
    1.252_181_9,
    1.213_083_7,
    1.173_210_7,
    1.133_538_0,
    1.095_517_8,
    1.060_168_6,
    1.028_181_2,
    1.000_000_0,
];

/// F over y, rough; output of `tests/oracle/circular_bearing.py`.
const ROUGH: [f64; INTERVALS + 1] = [
    1.000_000_0,
    1.001_604_0,
    1.006_684_6,
    1.015_564_2,
    1.028_429_4,
    1.045_306_5,
    1.066_049_1,
    1.090_324_8,
    1.117_631_0,
    1.147_571_2,
    1.179_883_2,
    1.214_344_6,
    1.250_707_9,
    1.288_672_1,
    1.327_860_7,
    1.367_808_8,
    1.407_952_1,
    1.447_619_8,
    1.486_032_0,
    1.522_306_1,
    1.555_471_6,
    1.584_498_3,
    1.608_335_5,
    1.625_965_5,
    1.636_466_2,
    1.639_077_2,
    1.633_265_1,
    1.618_777_0,
    1.595_675_2,
    1.564_361_3,
    1.525_511_1,
    1.480_098_1,
    1.429_297_8,
    1.374_421_9,
    1.316_853_0,
    1.257_974_8,
    1.199_139_3,
    1.142_586_5,
    1.089_892_3,
    1.042_131_3,
    1.000_000_0,
];

/// Mean pressure at which a circular base fails on clay with the strength
/// `undrained_strength_kpa` at its level and the growth `gradient_kpa_per_m` with depth.
///
/// # Errors
/// A value outside its range.
///
/// # Examples
/// ```
/// use brimstead_core::stability::bearing::{Roughness, circular_bearing};
/// let found = circular_bearing(40.0, 20.0, 0.0, Roughness::Rough)?;
/// assert!((found.ultimate_kpa - 6.048 * 20.0).abs() < 0.01);
/// # Ok::<(), brimstead_core::quantity::OutOfRange>(())
/// ```
pub fn circular_bearing(
    diameter_m: f64,
    undrained_strength_kpa: f64,
    gradient_kpa_per_m: f64,
    roughness: Roughness,
) -> Result<CircularBearing, OutOfRange> {
    circular_bearing_with(
        diameter_m,
        undrained_strength_kpa,
        gradient_kpa_per_m,
        roughness,
        &mut Silent,
    )
}

/// As [`circular_bearing`], writing its step.
///
/// # Errors
/// As [`circular_bearing`].
pub fn circular_bearing_with(
    diameter_m: f64,
    undrained_strength_kpa: f64,
    gradient_kpa_per_m: f64,
    roughness: Roughness,
    working: &mut impl Working,
) -> Result<CircularBearing, OutOfRange> {
    let surface = UNDRAINED_STRENGTH.check(undrained_strength_kpa)?;
    let growth = STRENGTH_GROWTH.check(gradient_kpa_per_m)? * DIAMETER.check(diameter_m)?;
    let (plain_factor, table) = match roughness {
        Roughness::Smooth => (SMOOTH_FACTOR, &SMOOTH),
        Roughness::Rough => (ROUGH_FACTOR, &ROUGH),
    };
    let gradient_factor = if growth > 0.0 {
        let root = libm::sqrt(growth);
        interpolated(table, root / (SCALE * libm::sqrt(surface) + root))
    } else {
        1.0
    };
    let ultimate_kpa = gradient_factor * (plain_factor * surface + growth / 6.0);
    working.step(Step {
        name: "bearing capacity of the circular base",
        value: ultimate_kpa,
        unit: "kPa",
        formula: "F (N0 su0 + k B/6)",
        inputs: &[
            ("F", gradient_factor),
            ("N0", plain_factor),
            ("su0", surface),
            ("k", gradient_kpa_per_m),
            ("B", diameter_m),
        ],
        source: "method of characteristics; N0 of Eason & Shield 1960",
    });
    let factor = (surface > 0.0).then(|| ultimate_kpa / surface);
    Ok(CircularBearing { ultimate_kpa, factor, gradient_factor })
}

/// Value of a table at y in 0..1, by the cubic through the four nearest nodes (Lagrange).
fn interpolated(table: &[f64; INTERVALS + 1], y: f64) -> f64 {
    let place = y * INTERVALS as f64;
    let first = libm::floor(place - 1.0).clamp(0.0, INTERVALS as f64 - 3.0);
    let x = place - first;
    let weights = [
        -(x - 1.0) * (x - 2.0) * (x - 3.0) / 6.0,
        x * (x - 2.0) * (x - 3.0) / 2.0,
        -x * (x - 1.0) * (x - 3.0) / 2.0,
        x * (x - 1.0) * (x - 2.0) / 6.0,
    ];
    table.iter().skip(first as usize).zip(weights).map(|(value, weight)| value * weight).sum()
}
