//! One-dimensional consolidation of one uniform layer in closed form (Terzaghi 1925; Taylor 1948,
//! Fundamentals of Soil Mechanics, ch. 10), for an instantaneous load and for a load that rises
//! linearly (Olson 1977, J. Geotech. Eng. Div. ASCE 103 GT1).
//!
//! `Tv = cv t / H^2`, where H is the longest drainage path: the thickness D for one drained face,
//! half of it for two. Each function joins two exact forms, the Fourier series for late times and
//! the images of the half-space for early ones, so that few terms give full precision at any
//! time. Relative error of U below 1e-12 (largest beside the join), of pressures 1e-14 of the
//! peak.
//!
//! # Assumptions
//! Uniform cv, permeability and compressibility; small strain; the total stress increment does
//! not change after loading; a free-draining face holds zero excess pressure.

use super::{CONSTRUCTION_TIME_FACTOR, DEPTH_RATIO, Error, TIME_FACTOR};
use crate::math::error_integrals::repeated_erfc;
use core::f64::consts::{FRAC_PI_2, PI};
use serde::{Deserialize, Serialize};

/// Faces through which the layer drains.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Drainage {
    /// Top only; the base is impervious. H is the thickness.
    Single,
    /// Top and base. H is half the thickness.
    Double,
}

/// Distribution of the initial excess pore pressure over the thickness D, with `x = z/D` from
/// the drained top.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum InitialShape {
    /// 1.
    Uniform,
    /// `x`: zero at the drained top, greatest at the base.
    TriangleZeroAtDrain,
    /// `1 - x`: greatest at the drained top, zero at the base.
    TriangleZeroAtBase,
    /// `sin(pi x)`: zero at both faces.
    HalfSine,
}

/// Below this time factor the images converge faster than the series; both are exact.
const EARLY: f64 = 0.2;
/// Below this time factor the far face has no influence in double precision (`exp(-1/(4 Tv))` is
/// under 1e-18 of the answer).
const FACES_APART: f64 = 0.006;
/// A half-sine over one drained face: below this the pressure beside the closed base comes from
/// four terms of an expansion, above it from at most 205 terms of the series.
const SINE_BASE_EXPANSION: f64 = 1e-4;
/// `exp(-42)` is below the rounding of 1.
const EXPONENT_NEGLIGIBLE: f64 = 42.0;
/// More terms than any join above can ask for: `sqrt(42/1e-4)/pi = 207`.
const MOST_TERMS: u32 = 256;

/// `sum over m of f(M, (-1)^m) exp(-M^2 T)`, `M = (2m+1) pi/2`.
fn series(time_factor: f64, term: impl Fn(f64, f64) -> f64) -> f64 {
    let mut sum = 0.0;
    let mut sign = 1.0;
    for m in 0..MOST_TERMS {
        let big_m = (2.0 * f64::from(m) + 1.0) * FRAC_PI_2;
        let exponent = big_m * big_m * time_factor;
        if exponent > EXPONENT_NEGLIGIBLE {
            break;
        }
        sum += term(big_m, sign) * libm::exp(-exponent);
        sign = -sign;
    }
    sum
}

/// `sum over j of ratio^j f(j)`, ratio 1 or -1, for terms that fall as `exp(-j^2/T)`: with
/// `T <= EARLY` the ninth is below 1e-100.
fn images(ratio: f64, term: impl Fn(f64) -> f64) -> f64 {
    let mut sum = 0.0;
    let mut sign = 1.0;
    for j in 0..8 {
        sum += sign * term(f64::from(j));
        sign *= ratio;
    }
    sum
}

/// `(4T)^(n/2) i^n erfc(a / (2 sqrt T))`: integrating it over T raises n by two.
fn image(order: u32, distance: f64, time_factor: f64) -> f64 {
    let width = 2.0 * libm::sqrt(time_factor);
    let mut scale = 1.0;
    for _ in 0..order {
        scale *= width;
    }
    scale * repeated_erfc(order, distance / width)
}

/// U for uniform excess pressure: `1 - sum 2/M^2 exp(-M^2 T)`; early `2 sqrt(T/pi)` and images.
fn uniform(t: f64) -> f64 {
    if t < EARLY {
        // The image at distance zero counts once, the others twice.
        2.0 * images(-1.0, |j| image(1, 2.0 * j, t)) - image(1, 0.0, t)
    } else {
        1.0 - series(t, |m, _| 2.0 / (m * m))
    }
}

/// U for `u0 = x`, drained at the top: `1 - sum 4 (-1)^m/M^3 exp(-M^2 T)`; early `2T` and images.
fn triangle_zero_at_drain(t: f64) -> f64 {
    if t < EARLY {
        2.0 * (t - 2.0 * images(-1.0, |j| image(2, 2.0 * j + 1.0, t)))
    } else {
        1.0 - series(t, |m, sign| 4.0 * sign / (m * m * m))
    }
}

/// U for `u0 = sin(pi x)`, drained at the top only. Early on the closed base does not reach the
/// drain and the flow there is `pi exp(-pi^2 T)`.
fn half_sine_single(t: f64) -> f64 {
    if t < FACES_APART {
        -0.5 * libm::expm1(-PI * PI * t)
    } else {
        1.0 + series(t, |m, sign| sign * PI * PI / (m * (m * m - PI * PI)))
    }
}

/// Average degree of consolidation U, 0 to 1: settlement over final settlement after an
/// instantaneous load.
///
/// # Errors
/// A time factor that is negative, not finite or above 1e9.
///
/// # Examples
/// ```
/// use brimstead_core::consolidation::terzaghi::{Drainage, InitialShape, degree_of_consolidation};
/// let u = degree_of_consolidation(InitialShape::Uniform, Drainage::Double, 0.197)?;
/// assert!((u - 0.50).abs() < 0.001);
/// # Ok::<(), brimstead_core::consolidation::Error>(())
/// ```
pub fn degree_of_consolidation(
    initial: InitialShape,
    drainage: Drainage,
    time_factor: f64,
) -> Result<f64, Error> {
    let t = TIME_FACTOR.check(time_factor)?;
    if t == 0.0 {
        return Ok(0.0);
    }
    Ok(match (initial, drainage) {
        // With two drained faces any linear distribution loses the same share as the uniform one.
        (InitialShape::Uniform, _)
        | (
            InitialShape::TriangleZeroAtDrain | InitialShape::TriangleZeroAtBase,
            Drainage::Double,
        ) => uniform(t),
        (InitialShape::TriangleZeroAtDrain, Drainage::Single) => triangle_zero_at_drain(t),
        (InitialShape::TriangleZeroAtBase, Drainage::Single) => {
            2.0 * uniform(t) - triangle_zero_at_drain(t)
        }
        (InitialShape::HalfSine, Drainage::Double) => -libm::expm1(-PI * PI * t / 4.0),
        (InitialShape::HalfSine, Drainage::Single) => half_sine_single(t),
    })
}

/// Excess pressure for uniform u0 = 1 at `big_z = z/H` from the drained face.
fn uniform_pressure(t: f64, big_z: f64) -> f64 {
    if t < EARLY {
        1.0 - images(-1.0, |j| image(0, 2.0 * j + big_z, t) + image(0, 2.0 * j + 2.0 - big_z, t))
    } else {
        series(t, |m, _| 2.0 / m * libm::sin(m * big_z))
    }
}

/// Excess pressure for u0 = x with one drained face.
fn triangle_pressure_single(t: f64, x: f64) -> f64 {
    if t < EARLY {
        x - images(-1.0, |j| image(1, 2.0 * j + 1.0 - x, t) - image(1, 2.0 * j + 1.0 + x, t))
    } else {
        series(t, |m, sign| 2.0 * sign / (m * m) * libm::sin(m * x))
    }
}

/// Excess pressure for u0 = x with two drained faces; `tau = cv t / D^2 = Tv/4`.
fn triangle_pressure_double(t: f64, x: f64) -> f64 {
    let tau = t / 4.0;
    if tau < EARLY {
        x - images(1.0, |j| image(0, 2.0 * j + 1.0 - x, tau) - image(0, 2.0 * j + 1.0 + x, tau))
    } else {
        let mut sum = 0.0;
        let mut sign = 1.0;
        // tau >= 0.2: the seventh term is below exp(-96).
        for n in 1..7 {
            let w = f64::from(n) * PI;
            sum += sign * 2.0 / w * libm::sin(w * x) * libm::exp(-w * w * tau);
            sign = -sign;
        }
        sum
    }
}

/// Excess pressure for u0 = sin(pi x) with one drained face.
fn half_sine_pressure_single(t: f64, x: f64) -> f64 {
    if t < SINE_BASE_EXPANSION {
        // The closed base mirrors the pressure, which puts a kink into the extended sine: Taylor
        // series of the sine, each power smoothed in closed form.
        let from_base = 1.0 - x;
        let mut u = libm::exp(-PI * PI * t) * libm::sin(PI * from_base);
        let mut factor = PI;
        for n in [1, 3, 5, 7] {
            u += factor * image(n, from_base, t);
            factor *= -PI * PI;
        }
        u
    } else {
        -series(t, |m, sign| sign * 2.0 * PI / (m * m - PI * PI) * libm::sin(m * x))
    }
}

/// Excess pore pressure as a ratio of the peak of the initial distribution, at `depth_ratio` =
/// z/D below the drained top.
///
/// # Errors
/// A time factor outside 0 to 1e9 or a depth ratio outside 0 to 1.
pub fn isochrone(
    initial: InitialShape,
    drainage: Drainage,
    time_factor: f64,
    depth_ratio: f64,
) -> Result<f64, Error> {
    let t = TIME_FACTOR.check(time_factor)?;
    let x = DEPTH_RATIO.check(depth_ratio)?;
    // The limit for t -> 0 at a drained face is zero already.
    if x == 0.0 || (x == 1.0 && drainage == Drainage::Double) {
        return Ok(0.0);
    }
    if t == 0.0 {
        return Ok(match initial {
            InitialShape::Uniform => 1.0,
            InitialShape::TriangleZeroAtDrain => x,
            InitialShape::TriangleZeroAtBase => 1.0 - x,
            InitialShape::HalfSine => libm::sin(PI * x),
        });
    }
    Ok(match (initial, drainage) {
        (InitialShape::Uniform, Drainage::Single) => uniform_pressure(t, x),
        (InitialShape::Uniform, Drainage::Double) => uniform_pressure(t, 2.0 * x),
        (InitialShape::TriangleZeroAtDrain, Drainage::Single) => triangle_pressure_single(t, x),
        (InitialShape::TriangleZeroAtDrain, Drainage::Double) => triangle_pressure_double(t, x),
        (InitialShape::TriangleZeroAtBase, Drainage::Single) => {
            uniform_pressure(t, x) - triangle_pressure_single(t, x)
        }
        (InitialShape::TriangleZeroAtBase, Drainage::Double) => {
            triangle_pressure_double(t, 1.0 - x)
        }
        (InitialShape::HalfSine, Drainage::Single) => half_sine_pressure_single(t, x),
        (InitialShape::HalfSine, Drainage::Double) => {
            libm::exp(-PI * PI * t / 4.0) * libm::sin(PI * x)
        }
    })
}

/// `J(T) = integral of U (uniform) from 0 to T = T - 1/3 + sum 2/M^4 exp(-M^2 T)`.
fn degree_integral(t: f64) -> f64 {
    if t <= 0.0 {
        0.0
    } else if t < EARLY {
        2.0 * images(-1.0, |j| image(3, 2.0 * j, t)) - image(3, 0.0, t)
    } else {
        t - 1.0 / 3.0 + series(t, |m, _| 2.0 / (m * m * m * m))
    }
}

/// A ramp this many times shorter than the time since its start acts as an instantaneous load at
/// its middle: the difference is of the order of the square, 1e-12 of U. It replaces the
/// difference of two nearly equal integrals.
const SHORT_RAMP: f64 = 1e-5;

/// Degree of consolidation for a load that rises linearly from 0 to its full value over
/// `construction_time_factor` (Tc, in units of Tv) and stays: settlement over *final* settlement;
/// uniform excess pressure, either drainage (Olson 1977).
///
/// `U = (J(T) - J(T - Tc)) / Tc` with `J` the integral of U: no growing exponential occurs.
///
/// # Errors
/// A time factor outside 0 to 1e9, or a construction time factor outside 0 to 1e9.
pub fn ramp_degree_of_consolidation(
    time_factor: f64,
    construction_time_factor: f64,
) -> Result<f64, Error> {
    let t = TIME_FACTOR.check(time_factor)?;
    let tc = CONSTRUCTION_TIME_FACTOR.check(construction_time_factor)?;
    if t == 0.0 {
        return Ok(0.0);
    }
    if tc <= SHORT_RAMP * t {
        return Ok(uniform(t - 0.5 * tc));
    }
    if t - tc > EARLY {
        // The two integrals, term by term.
        let mean_excess =
            series(t - tc, |m, _| -2.0 / (m * m * m * m) * libm::expm1(-m * m * tc) / tc);
        return Ok(1.0 - mean_excess);
    }
    Ok((degree_integral(t) - degree_integral(t - tc)) / tc)
}

/// Mean excess pore pressure over the *final* load during and after the ramp of
/// [`ramp_degree_of_consolidation`]: load so far less what has consolidated.
///
/// # Errors
/// As [`ramp_degree_of_consolidation`].
pub fn ramp_mean_excess(time_factor: f64, construction_time_factor: f64) -> Result<f64, Error> {
    let degree = ramp_degree_of_consolidation(time_factor, construction_time_factor)?;
    let load = if time_factor < construction_time_factor {
        time_factor / construction_time_factor
    } else {
        1.0
    };
    Ok(load - degree)
}

/// Settlement rate factor dU/dTv for uniform excess pressure after an instantaneous load, the
/// slope used when two parameters are fitted to readings: `sum 2 exp(-M^2 T)`, early
/// `1/sqrt(pi T)`.
///
/// # Errors
/// A time factor that is zero, negative, not finite or above 1e9.
pub fn degree_slope(time_factor: f64) -> Result<f64, Error> {
    let t = super::POSITIVE_TIME_FACTOR.check(time_factor)?;
    Ok(if t < EARLY {
        let mirrored = images(-1.0, |j| libm::exp(-j * j / t));
        (2.0 * mirrored - 1.0) / libm::sqrt(PI * t)
    } else {
        series(t, |_, _| 2.0)
    })
}
