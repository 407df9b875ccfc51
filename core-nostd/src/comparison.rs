//! Reading against expectation: residual, position in the band, margin to a limit.
//!
//! A residual is positive when the reading is larger than expected: more settlement, more pore
//! pressure.

use crate::quantity::Expected;
use serde::{Deserialize, Serialize};

/// Reading less likely value, in the instrument's unit.
#[must_use]
pub fn residual(value: f64, expected: &Expected) -> f64 {
    value - expected.likely
}

/// Where a reading lies in the band: -1 at its low end, 0 at the likely value, +1 at its high end,
/// and on in the same proportion outside.
///
/// Each side is measured by its own half-width, so a lopsided band is not read as a symmetric one.
/// `None` when that half-width is zero and the reading is not the likely value, and when a value
/// is not finite.
#[must_use]
pub fn position_in_band(value: f64, expected: &Expected) -> Option<f64> {
    if !value.is_finite() || !expected.is_band() {
        return None;
    }
    let residual = residual(value, expected);
    if residual == 0.0 {
        return Some(0.0);
    }
    let half_width = half_width(expected, residual > 0.0);
    let position = residual / half_width;
    (half_width > 0.0 && position.is_finite()).then_some(position)
}

/// Width of the band on one side of the likely value.
#[must_use]
pub fn half_width(expected: &Expected, above: bool) -> f64 {
    if above { expected.high - expected.likely } else { expected.likely - expected.low }
}

/// The side of a limit on which it is passed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Side {
    /// Passed by values at or above it.
    Above,
    /// Passed by values at or below it.
    Below,
}

impl Side {
    /// +1 above, -1 below: `sign * (value - limit) >= 0` when the limit is passed.
    #[must_use]
    pub fn sign(self) -> f64 {
        match self {
            Self::Above => 1.0,
            Self::Below => -1.0,
        }
    }

    /// Whether a value has reached the limit. A value equal to the limit has; NaN never has.
    #[must_use]
    pub fn reached(self, value: f64, limit: f64) -> bool {
        match self {
            Self::Above => value >= limit,
            Self::Below => value <= limit,
        }
    }
}

/// Room left to a limit: positive while it is not reached, negative beyond it.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Margin {
    /// In the unit of the limit.
    pub value: f64,
    /// In percent of the way from the reference (the likely value for a band, zero otherwise) to
    /// the limit; `None` where that way has no length.
    pub percent: Option<f64>,
}

/// Margin of a value to a limit that is passed on the given side.
///
/// `m = sign (limit - value)`, percent `100 m / |limit - reference|`.
#[must_use]
pub fn margin(value: f64, limit: f64, reference: f64, side: Side) -> Margin {
    let room = side.sign() * (limit - value);
    let way = (limit - reference).abs();
    let percent = 100.0 * (room / way);
    Margin { value: room, percent: (way > 0.0 && percent.is_finite()).then_some(percent) }
}

#[cfg(test)]
mod tests {
    use super::*;

    const BAND: Expected = Expected { low: 80.0, likely: 100.0, high: 140.0 };

    #[test]
    fn each_side_of_a_lopsided_band_has_its_own_scale() {
        assert_eq!(position_in_band(140.0, &BAND), Some(1.0));
        assert_eq!(position_in_band(80.0, &BAND), Some(-1.0));
        assert_eq!(position_in_band(100.0, &BAND), Some(0.0));
        assert_eq!(position_in_band(180.0, &BAND), Some(2.0));
        assert_eq!(position_in_band(90.0, &BAND), Some(-0.5));
    }

    #[test]
    fn a_band_without_width_gives_no_position() {
        let line = Expected { low: 100.0, likely: 100.0, high: 100.0 };
        assert_eq!(position_in_band(100.0, &line), Some(0.0));
        assert_eq!(position_in_band(101.0, &line), None);
        assert_eq!(position_in_band(f64::NAN, &BAND), None);
    }

    #[test]
    fn margin_is_the_room_left_and_turns_negative_beyond_the_limit() {
        assert_eq!(
            margin(130.0, 140.0, 100.0, Side::Above),
            Margin { value: 10.0, percent: Some(25.0) }
        );
        assert_eq!(
            margin(150.0, 140.0, 100.0, Side::Above),
            Margin { value: -10.0, percent: Some(-25.0) }
        );
        assert_eq!(
            margin(90.0, 80.0, 100.0, Side::Below),
            Margin { value: 10.0, percent: Some(50.0) }
        );
        assert_eq!(margin(1.0, 0.0, 0.0, Side::Above).percent, None);
    }

    #[test]
    fn a_limit_is_reached_by_a_value_equal_to_it_and_never_by_nan() {
        assert!(Side::Above.reached(5.0, 5.0) && Side::Below.reached(5.0, 5.0));
        assert!(!Side::Above.reached(f64::NAN, 5.0) && !Side::Below.reached(f64::NAN, 5.0));
    }
}
