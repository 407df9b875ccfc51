//! Waves of the settled perimeter.
//!
//! `s = sum over k of amplitude_k cos k (t - phase_k)`, all orders together by least squares, so
//! that unequal spacing and missing points do no harm. Order 0 is the uniform part, 1 the tilt, 2
//! ovalises the top of the shell and can jam a floating roof. With equal spacing this is the
//! discrete Fourier transform.

use super::ShellError;
use super::perimeter::{PerimeterPoint, check_points, within_turn};
use crate::math::least_squares::{Fit, LeastSquares};
use crate::quantity::Bounded;

/// Highest order that can be asked for.
pub const MAX_ORDER: usize = 8;

const COLUMNS: usize = 2 * MAX_ORDER + 1;

/// Order of the highest wave.
pub static ORDER: Bounded = Bounded {
    name: "highest order of the waves",
    unit: "",
    min: 0.0,
    max: MAX_ORDER as f64,
    remedy: "An order k needs more than 2 k points read.",
};

/// One wave.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Harmonic {
    /// Coefficient of cos k t, m; for order 0 the mean.
    pub cosine_m: f64,
    /// Coefficient of sin k t, m.
    pub sine_m: f64,
    /// Amplitude, m.
    pub amplitude_m: f64,
    /// Angle of the first crest (largest settlement), 0 to 2 pi/k rad.
    pub phase_rad: f64,
}

/// Waves of a perimeter up to some order.
#[derive(Debug, Clone, PartialEq)]
pub struct Harmonics {
    fit: Fit<COLUMNS>,
    order: usize,
}

impl Harmonics {
    /// Fits all waves up to `order`. Points as for
    /// [`PerimeterFit::new`](super::perimeter::PerimeterFit::new).
    ///
    /// # Errors
    /// Too few points read for the order, points out of order, or a value outside its range.
    pub fn new(points: &[PerimeterPoint], order: usize) -> Result<Self, ShellError> {
        ORDER.check(order as f64)?;
        check_points(points)?;
        let mut sums = LeastSquares::with_unknowns(order.saturating_mul(2).saturating_add(1));
        for point in points {
            if let Some(settlement_m) = point.settlement_m {
                sums.add(columns(point.angle_rad), settlement_m);
            }
        }
        Ok(Self { fit: sums.solve()?, order })
    }

    /// Highest order fitted.
    #[must_use]
    pub fn order(&self) -> usize {
        self.order
    }

    /// A wave; `None` beyond the highest order.
    #[must_use]
    pub fn wave(&self, order: usize) -> Option<Harmonic> {
        if order > self.order {
            return None;
        }
        let column = order.saturating_mul(2);
        let cosine_m = self.fit.coefficients.get(column.saturating_sub(1)).copied()?;
        if order == 0 {
            let amplitude_m = cosine_m;
            return Some(Harmonic { cosine_m, sine_m: 0.0, amplitude_m, phase_rad: 0.0 });
        }
        let sine_m = self.fit.coefficients.get(column).copied()?;
        Some(Harmonic {
            cosine_m,
            sine_m,
            amplitude_m: libm::hypot(cosine_m, sine_m),
            phase_rad: within_turn(libm::atan2(sine_m, cosine_m)) / order as f64,
        })
    }
}

/// 1, cos t, sin t, cos 2t, sin 2t, ...
fn columns(angle_rad: f64) -> [f64; COLUMNS] {
    let mut columns = [1.0; COLUMNS];
    for (place, column) in columns.iter_mut().enumerate().skip(1) {
        let angle = place.div_ceil(2) as f64 * angle_rad;
        *column = if place % 2 == 1 { libm::cos(angle) } else { libm::sin(angle) };
    }
    columns
}
