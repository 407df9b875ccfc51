//! Stress increments by adding up point loads (Boussinesq 1885) over the loaded area.
//!
//! The area is cut by directions of view from the field point: an azimuth and the angle `t` from
//! the vertical, so that the sum stays smooth under the load and close to the surface. For an
//! incompressible half-space a point load raises one radial stress `3P cos t/(2 pi R^2)`; with
//! `R = z/cos t` an area element gives, per unit of pressure,
//! `sigma_z: (3/2pi) sin t cos^2 t dt dphi`, `sigma_x + sigma_y + sigma_z: (3/2pi) sin t dt dphi`.
//! The vertical stress does not depend on Poisson's ratio.

use core::f64::consts::PI;

/// Azimuths of one field point.
const AZIMUTHS: usize = 180;
/// Gauss-Legendre nodes and weights, 8 points, one side (Abramowitz and Stegun, table 25.4):
/// from the inner to the outer edge of the area, along one azimuth.
const NODES: [(f64, f64); 4] = [
    (0.183_434_642_495_649_8, 0.362_683_783_378_362),
    (0.525_532_409_916_329, 0.313_706_645_877_887_3),
    (0.796_666_477_413_626_7, 0.222_381_034_453_374_5),
    (0.960_289_856_497_536_3, 0.101_228_536_290_376_3),
];
/// Point loads that stand for a ring.
const RING_POINTS: usize = 720;

/// Vertical stress and the sum of the three normal stresses.
#[derive(Debug, Clone, Copy, Default)]
pub struct Increment {
    /// Vertical stress over the pressure (or kPa for a ring of 1 kN/m).
    pub vertical: f64,
    /// Sum of the normal stresses in an incompressible half-space.
    pub sum: f64,
}

impl Increment {
    /// The part of the vertical strain times Young's modulus in an incompressible body:
    /// `sigma_z - (sigma_x + sigma_y)/2`.
    pub fn undrained_strain_kpa(self) -> f64 {
        1.5 * self.vertical - 0.5 * self.sum
    }
}

/// Increment at `depth_m` below the level of a disc of unit pressure, `offset_m` from its axis.
pub fn disc(radius_m: f64, offset_m: f64, depth_m: f64) -> Increment {
    let mut total = Increment::default();
    let dphi = PI / AZIMUTHS as f64;
    for i in 0..AZIMUTHS {
        // Half the plane; the other half is its mirror image.
        let phi = (i as f64 + 0.5) * dphi;
        let Some((inner, outer)) = chord(radius_m, offset_m, phi) else {
            continue;
        };
        let (from, to) = (libm::atan(inner / depth_m), libm::atan(outer / depth_m));
        let (middle, half) = ((from + to) / 2.0, (to - from) / 2.0);
        for (node, weight) in NODES {
            for t in [middle - half * node, middle + half * node] {
                let (sin, cos) = libm::sincos(t);
                let share = 3.0 / PI * sin * weight * half * dphi;
                total.vertical += share * cos * cos;
                total.sum += share;
            }
        }
    }
    total
}

/// Nearest and farthest distance of the disc seen along azimuth `phi` (0 towards the axis).
fn chord(radius_m: f64, offset_m: f64, phi: f64) -> Option<(f64, f64)> {
    let (sin, cos) = libm::sincos(phi);
    let under_root = radius_m * radius_m - offset_m * offset_m * sin * sin;
    if under_root <= 0.0 {
        return None;
    }
    let half = libm::sqrt(under_root);
    let outer = offset_m * cos + half;
    (outer > 0.0).then(|| ((offset_m * cos - half).max(0.0), outer))
}

/// Increment of a ring line load of 1 kN/m.
pub fn ring(radius_m: f64, offset_m: f64, depth_m: f64) -> Increment {
    let mut total = Increment::default();
    let dphi = 2.0 * PI / RING_POINTS as f64;
    for i in 0..RING_POINTS {
        let (sin, cos) = libm::sincos((i as f64 + 0.5) * dphi);
        let (dx, dy) = (radius_m * cos - offset_m, radius_m * sin);
        let distance2 = dx * dx + dy * dy + depth_m * depth_m;
        let cos2 = depth_m * depth_m / distance2;
        let radial = 1.5 / PI * radius_m * dphi * libm::sqrt(cos2) / distance2;
        total.vertical += radial * cos2;
        total.sum += radial;
    }
    total
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn disc_agrees_with_the_closed_form_on_the_axis() {
        // sigma_z = q [1 - (1 + (a/z)^2)^(-3/2)], e.g. Poulos and Davis 1974.
        for depth in [0.05, 1.0, 10.0, 60.0_f64] {
            let exact = 1.0 - (1.0 + (25.0 / depth).powi(2)).powf(-1.5);
            let summed = disc(25.0, 0.0, depth).vertical;
            assert!((summed - exact).abs() < 1e-9, "{depth}: {summed} {exact}");
        }
    }

    #[test]
    fn sum_of_stresses_on_the_axis_is_three_halves_of_the_solid_angle() {
        // Mean stress of an incompressible half-space: q times solid angle over 2 pi.
        for depth in [1.0, 10.0, 60.0_f64] {
            let exact = 3.0 * (1.0 - depth / (depth * depth + 625.0).sqrt());
            let summed = disc(25.0, 0.0, depth).sum;
            assert!((summed - exact).abs() < 1e-9, "{depth}: {summed} {exact}");
        }
    }

    #[test]
    fn disc_carries_its_whole_load_at_depth() {
        let mut carried = 0.0;
        for i in 0..400 {
            let r = f64::from(i) + 0.5;
            carried += disc(25.0, r, 12.0).vertical * 2.0 * PI * r;
        }
        let load = PI * 625.0;
        assert!((carried - load).abs() < 0.01 * load, "{carried} of {load}");
    }

    #[test]
    fn ring_agrees_with_the_closed_form_on_the_axis() {
        // All of the ring is equally far: 3 p a z^3 / (a^2 + z^2)^(5/2).
        let exact = 3.0 * 25.0 * 8.0_f64.powi(3) / (625.0_f64 + 64.0).powf(2.5);
        let summed = ring(25.0, 0.0, 8.0).vertical;
        assert!((summed - exact).abs() < 1e-9, "{summed} {exact}");
    }
}
