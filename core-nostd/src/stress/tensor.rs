//! Stress tensors and their principal values.

use core::ops::{Add, AddAssign};

/// Stress increment on the axes of one load, compression positive.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct AxisymmetricStress {
    /// Vertical, kPa.
    pub sigma_z_kpa: f64,
    /// Radial, kPa.
    pub sigma_r_kpa: f64,
    /// Around the axis, kPa.
    pub sigma_theta_kpa: f64,
    /// Shear on vertical and horizontal planes, kPa.
    pub tau_rz_kpa: f64,
}

impl AxisymmetricStress {
    /// The same state on horizontal axes x, y, where (`cosine`, `sine`) is the horizontal
    /// direction from the axis of the load to the point.
    #[must_use]
    pub fn to_cartesian(&self, cosine: f64, sine: f64) -> CartesianStress {
        let (c2, s2) = (cosine * cosine, sine * sine);
        CartesianStress {
            sigma_x_kpa: self.sigma_r_kpa * c2 + self.sigma_theta_kpa * s2,
            sigma_y_kpa: self.sigma_r_kpa * s2 + self.sigma_theta_kpa * c2,
            sigma_z_kpa: self.sigma_z_kpa,
            tau_xy_kpa: (self.sigma_r_kpa - self.sigma_theta_kpa) * cosine * sine,
            tau_xz_kpa: self.tau_rz_kpa * cosine,
            tau_yz_kpa: self.tau_rz_kpa * sine,
        }
    }

    /// Principal values.
    #[must_use]
    pub fn principal(&self) -> Principal {
        let pair = principal_in_plane(self.sigma_z_kpa, self.sigma_r_kpa, self.tau_rz_kpa);
        Principal::ordered([pair.0, pair.1, self.sigma_theta_kpa])
    }
}

/// Stress increment on fixed axes x (east), y (north), z (down), compression positive.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct CartesianStress {
    /// Along x, kPa.
    pub sigma_x_kpa: f64,
    /// Along y, kPa.
    pub sigma_y_kpa: f64,
    /// Vertical, kPa.
    pub sigma_z_kpa: f64,
    /// Shear xy, kPa.
    pub tau_xy_kpa: f64,
    /// Shear xz, kPa.
    pub tau_xz_kpa: f64,
    /// Shear yz, kPa.
    pub tau_yz_kpa: f64,
}

impl Add for CartesianStress {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self {
            sigma_x_kpa: self.sigma_x_kpa + other.sigma_x_kpa,
            sigma_y_kpa: self.sigma_y_kpa + other.sigma_y_kpa,
            sigma_z_kpa: self.sigma_z_kpa + other.sigma_z_kpa,
            tau_xy_kpa: self.tau_xy_kpa + other.tau_xy_kpa,
            tau_xz_kpa: self.tau_xz_kpa + other.tau_xz_kpa,
            tau_yz_kpa: self.tau_yz_kpa + other.tau_yz_kpa,
        }
    }
}

impl AddAssign for CartesianStress {
    fn add_assign(&mut self, other: Self) {
        *self = *self + other;
    }
}

impl CartesianStress {
    /// Mean normal stress, kPa.
    #[must_use]
    pub fn mean_kpa(&self) -> f64 {
        (self.sigma_x_kpa + self.sigma_y_kpa + self.sigma_z_kpa) / 3.0
    }

    /// Principal values, to a few roundings of the largest component also where two or three of
    /// them coincide.
    ///
    /// The value farthest from the other two comes from the trigonometric solution, which is well
    /// conditioned there; its direction leaves a 2 x 2 problem for the other two.
    ///
    /// # References
    /// Scherzinger & Dohrmann 2008, Comput. Methods Appl. Mech. Engrg. 197, 4007-4015.
    #[must_use]
    pub fn principal(&self) -> Principal {
        let mean = self.mean_kpa();
        let (x, y, z) = (self.sigma_x_kpa - mean, self.sigma_y_kpa - mean, self.sigma_z_kpa - mean);
        let (xy, xz, yz) = (self.tau_xy_kpa, self.tau_xz_kpa, self.tau_yz_kpa);
        let largest = [x, y, z, xy, xz, yz].iter().fold(0.0, |big: f64, v| big.max(v.abs()));
        if largest == 0.0 {
            return Principal { sigma_1_kpa: mean, sigma_2_kpa: mean, sigma_3_kpa: mean };
        }
        // Scaled, so that no power of a tiny stress underflows.
        let deviator = Symmetric { x, y, z, xy, xz, yz }.scaled(1.0 / largest);
        let [a, b, c] = deviator.eigenvalues();
        Principal::ordered([mean + largest * a, mean + largest * b, mean + largest * c])
    }
}

/// Principal stresses, compression positive, largest first.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Principal {
    /// Major, kPa.
    pub sigma_1_kpa: f64,
    /// Intermediate, kPa.
    pub sigma_2_kpa: f64,
    /// Minor, kPa.
    pub sigma_3_kpa: f64,
}

impl Principal {
    fn ordered([a, b, c]: [f64; 3]) -> Self {
        let (high, low) = (a.max(b), a.min(b));
        Self {
            sigma_1_kpa: high.max(c),
            sigma_2_kpa: low.max(high.min(c)),
            sigma_3_kpa: low.min(c),
        }
    }

    /// Octahedral normal stress (the mean), kPa.
    #[must_use]
    pub fn octahedral_normal_kpa(&self) -> f64 {
        (self.sigma_1_kpa + self.sigma_2_kpa + self.sigma_3_kpa) / 3.0
    }

    /// Octahedral shear stress, kPa: a third of the root of the sum of the squared differences.
    #[must_use]
    pub fn octahedral_shear_kpa(&self) -> f64 {
        let (a, b, c) = (
            self.sigma_1_kpa - self.sigma_2_kpa,
            self.sigma_2_kpa - self.sigma_3_kpa,
            self.sigma_3_kpa - self.sigma_1_kpa,
        );
        libm::sqrt(a * a + b * b + c * c) / 3.0
    }
}

/// Eigenvalues of `[[a, t], [t, b]]`.
fn principal_in_plane(a: f64, b: f64, t: f64) -> (f64, f64) {
    let (middle, radius) = (0.5 * (a + b), libm::hypot(0.5 * (a - b), t));
    (middle + radius, middle - radius)
}

type Vector = [f64; 3];

fn dot([a, b, c]: Vector, [x, y, z]: Vector) -> f64 {
    a * x + b * y + c * z
}

fn cross([a, b, c]: Vector, [x, y, z]: Vector) -> Vector {
    [b * z - c * y, c * x - a * z, a * y - b * x]
}

fn scale([x, y, z]: Vector, factor: f64) -> Vector {
    [x * factor, y * factor, z * factor]
}

/// Traceless symmetric matrix with entries of order 1.
#[derive(Clone, Copy)]
struct Symmetric {
    x: f64,
    y: f64,
    z: f64,
    xy: f64,
    xz: f64,
    yz: f64,
}

impl Symmetric {
    fn scaled(self, f: f64) -> Self {
        Self {
            x: self.x * f,
            y: self.y * f,
            z: self.z * f,
            xy: self.xy * f,
            xz: self.xz * f,
            yz: self.yz * f,
        }
    }

    fn rows(&self) -> [Vector; 3] {
        [[self.x, self.xy, self.xz], [self.xy, self.y, self.yz], [self.xz, self.yz, self.z]]
    }

    fn times(&self, v: Vector) -> Vector {
        let [a, b, c] = self.rows();
        [dot(a, v), dot(b, v), dot(c, v)]
    }

    fn eigenvalues(&self) -> [f64; 3] {
        let apart = self.farthest_eigenvalue();
        let direction = self.direction_of(apart);
        let (u, v) = plane_across(direction);
        let (su, sv) = (self.times(u), self.times(v));
        let (a, b) = principal_in_plane(dot(u, su), dot(v, sv), dot(u, sv));
        // The quotient is better than the trigonometric value by the square of its error.
        [dot(direction, self.times(direction)), a, b]
    }

    /// The eigenvalue farthest from the middle one.
    fn farthest_eigenvalue(&self) -> f64 {
        let [a, b, c] = self.rows();
        let j2 = 0.5 * (dot(a, a) + dot(b, b) + dot(c, c));
        let j3 = dot(a, cross(b, c));
        let radius = libm::sqrt(j2 / 3.0);
        // cos(3 angle), at least 0 by the choice of sign, so the angle is at most pi/6.
        let cosine = (0.5 * j3.abs() / (radius * radius * radius)).min(1.0);
        libm::copysign(2.0 * radius * libm::cos(libm::acos(cosine) / 3.0), j3)
    }

    /// Unit vector that the matrix less `eigenvalue` sends to zero: it stands across the two
    /// most independent rows.
    fn direction_of(&self, eigenvalue: f64) -> Vector {
        let shifted = Self {
            x: self.x - eigenvalue,
            y: self.y - eigenvalue,
            z: self.z - eigenvalue,
            ..*self
        };
        let [a, b, c] = shifted.rows();
        let mut best = ([0.0; 3], 0.0);
        for candidate in [cross(a, b), cross(b, c), cross(c, a)] {
            let size = dot(candidate, candidate);
            if size > best.1 {
                best = (candidate, size);
            }
        }
        scale(best.0, 1.0 / libm::sqrt(best.1))
    }
}

/// Two unit vectors that make a right-angled frame with the unit vector given.
fn plane_across(direction: Vector) -> (Vector, Vector) {
    let [x, y, z] = direction;
    let helper = if x.abs() <= y.abs() && x.abs() <= z.abs() {
        [1.0, 0.0, 0.0]
    } else if y.abs() <= z.abs() {
        [0.0, 1.0, 0.0]
    } else {
        [0.0, 0.0, 1.0]
    };
    let u = cross(direction, helper);
    let u = scale(u, 1.0 / libm::sqrt(dot(u, u)));
    (u, cross(direction, u))
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;
    use proptest::test_runner::{Config, RngSeed};

    fn fixed_seed() -> Config {
        Config {
            rng_seed: RngSeed::Fixed(20_240_611),
            cases: 2000,
            failure_persistence: None,
            ..Config::default()
        }
    }

    /// A tensor with known principal values, turned by three angles.
    fn turned(values: [f64; 3], [a, b, c]: [f64; 3]) -> CartesianStress {
        let (sa, ca, sb, cb) = (libm::sin(a), libm::cos(a), libm::sin(b), libm::cos(b));
        let (sc, cc) = (libm::sin(c), libm::cos(c));
        let frame = [
            [ca * cb, ca * sb * sc - sa * cc, ca * sb * cc + sa * sc],
            [sa * cb, sa * sb * sc + ca * cc, sa * sb * cc - ca * sc],
            [-sb, cb * sc, cb * cc],
        ];
        let entry =
            |i: usize, j: usize| (0..3).map(|k| frame[i][k] * values[k] * frame[j][k]).sum::<f64>();
        CartesianStress {
            sigma_x_kpa: entry(0, 0),
            sigma_y_kpa: entry(1, 1),
            sigma_z_kpa: entry(2, 2),
            tau_xy_kpa: entry(0, 1),
            tau_xz_kpa: entry(0, 2),
            tau_yz_kpa: entry(1, 2),
        }
    }

    fn assert_principal(values: [f64; 3], angles: [f64; 3]) {
        let found = turned(values, angles).principal();
        let mut sorted = values;
        sorted.sort_by(|a, b| b.total_cmp(a));
        let size = values.iter().fold(0.0_f64, |big, v| big.max(v.abs()));
        for (got, want) in
            [found.sigma_1_kpa, found.sigma_2_kpa, found.sigma_3_kpa].iter().zip(sorted)
        {
            assert!((got - want).abs() <= 4e-15 * size, "{values:?} {angles:?}: {found:?}");
        }
    }

    proptest! {
        #![proptest_config(fixed_seed())]
        #[test]
        fn principal_values_survive_any_rotation(
            values in prop::array::uniform3(-500.0..500.0_f64),
            angles in prop::array::uniform3(-3.0..3.0_f64),
        ) {
            assert_principal(values, angles);
        }

        #[test]
        fn nearly_equal_principal_values_keep_full_accuracy(
            value in -500.0..500.0_f64,
            other in -500.0..500.0_f64,
            exponent in -16..-3_i32,
            angles in prop::array::uniform3(-3.0..3.0_f64),
        ) {
            let gap = libm::pow(10.0, f64::from(exponent));
            assert_principal([value, value * (1.0 + gap), other], angles);
            assert_principal([value, value * (1.0 + gap), value * (1.0 - 3.0 * gap)], angles);
        }
    }

    #[test]
    fn equal_and_zero_states_have_themselves() {
        assert_eq!(CartesianStress::default().principal(), Principal::default());
        let even = CartesianStress {
            sigma_x_kpa: 7.0,
            sigma_y_kpa: 7.0,
            sigma_z_kpa: 7.0,
            ..CartesianStress::default()
        };
        assert_eq!(even.principal().sigma_1_kpa, 7.0);
        assert_eq!(even.principal().sigma_3_kpa, 7.0);
        let tiny = CartesianStress { sigma_z_kpa: 1e-200, ..CartesianStress::default() };
        assert!((tiny.principal().sigma_1_kpa - 1e-200).abs() < 1e-214);
    }

    #[test]
    fn both_forms_of_the_tensor_have_the_same_principal_values() {
        let state = AxisymmetricStress {
            sigma_z_kpa: 80.0,
            sigma_r_kpa: 35.0,
            sigma_theta_kpa: 20.0,
            tau_rz_kpa: 18.0,
        };
        let (one, other) = (state.principal(), state.to_cartesian(0.6, -0.8).principal());
        assert!((one.sigma_1_kpa - other.sigma_1_kpa).abs() < 1e-13);
        assert!((one.sigma_2_kpa - other.sigma_2_kpa).abs() < 1e-13);
        assert!((one.sigma_3_kpa - other.sigma_3_kpa).abs() < 1e-13);
        assert!((one.octahedral_normal_kpa() - 45.0).abs() < 1e-13);
        // One direction loaded: tau_oct = sqrt(2)/3 sigma.
        let single = Principal { sigma_1_kpa: 30.0, ..Principal::default() };
        assert!((single.octahedral_shear_kpa() - 10.0 * libm::sqrt(2.0)).abs() < 1e-13);
    }
}
