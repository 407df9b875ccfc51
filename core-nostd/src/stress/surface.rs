//! What every load on the surface of a half-space shares: from a check of the point to a batch
//! of tensors. A load brings its integrals and how they combine; it is written once for any
//! number of lanes.

use super::integrals::Geometry;
use super::{AxisPoint, AxisymmetricStress, Displacement, StressError, YOUNG};
use crate::math::lanes::{BATCH, Lanes};
use crate::working::{Step, Working};

/// A load with an axis on the surface of a half-space.
pub(super) trait SurfaceLoad {
    /// Source of the method.
    const SOURCE: &'static str;
    /// What is integrated over the load once per point.
    type Integrals<const N: usize>;

    fn radius_m(&self) -> f64;
    /// Whether the stress has a value on the edge of the load at its level.
    const STRESS_ON_RIM: bool;
    /// Whether the displacement has one.
    const DISPLACEMENT_ON_RIM: bool;

    fn integrals<const N: usize>(&self, at: &Geometry<N>) -> Self::Integrals<N>;
    /// `sigma_z, sigma_r, sigma_theta, tau_rz`, kPa.
    fn stresses<const N: usize>(&self, at: &Geometry<N>, by: &Self::Integrals<N>) -> [Lanes<N>; 4];
    /// Settlement and outward displacement, m.
    fn displacements<const N: usize>(
        &self,
        young_kpa: f64,
        at: &Geometry<N>,
        by: &Self::Integrals<N>,
    ) -> [Lanes<N>; 2];
    /// Steps from the integrals to the stresses.
    fn write_stress(
        &self,
        at: &Geometry<1>,
        by: &Self::Integrals<1>,
        result: &AxisymmetricStress,
        trail: &mut Trail<'_, impl Working>,
    );
    /// Steps from the integrals to the displacements.
    fn write_displacement(
        &self,
        young_kpa: f64,
        at: &Geometry<1>,
        by: &Self::Integrals<1>,
        result: &Displacement,
        trail: &mut Trail<'_, impl Working>,
    );
}

/// The public evaluation of a surface load, so that every load reads and behaves alike.
macro_rules! evaluation {
    ($load:ident) => {
        impl $load {
            /// Stress increment at a distance from the axis and a depth below the load.
            ///
            /// # Errors
            /// Distance or depth negative, not finite or beyond 1000 km; a point where the load has no
            /// finite stress (on a line load itself).
            pub fn stress_at(
                &self,
                r_m: f64,
                z_m: f64,
            ) -> Result<$crate::stress::AxisymmetricStress, $crate::stress::StressError> {
                self.stress_at_with(r_m, z_m, &mut $crate::working::Silent)
            }

            /// As [`Self::stress_at`], writing the working.
            ///
            /// # Errors
            /// As [`Self::stress_at`].
            pub fn stress_at_with(
                &self,
                r_m: f64,
                z_m: f64,
                working: &mut impl $crate::working::Working,
            ) -> Result<$crate::stress::AxisymmetricStress, $crate::stress::StressError> {
                $crate::stress::surface::stress_at_with(self, r_m, z_m, working)
            }

            /// Displacement for a Young's modulus of the ground.
            ///
            /// # Errors
            /// As [`Self::stress_at`], or the modulus out of range.
            pub fn displacement_at(
                &self,
                young_kpa: f64,
                r_m: f64,
                z_m: f64,
            ) -> Result<$crate::stress::Displacement, $crate::stress::StressError> {
                self.displacement_at_with(young_kpa, r_m, z_m, &mut $crate::working::Silent)
            }

            /// As [`Self::displacement_at`], writing the working.
            ///
            /// # Errors
            /// As [`Self::displacement_at`].
            pub fn displacement_at_with(
                &self,
                young_kpa: f64,
                r_m: f64,
                z_m: f64,
                working: &mut impl $crate::working::Working,
            ) -> Result<$crate::stress::Displacement, $crate::stress::StressError> {
                $crate::stress::surface::displacement_at_with(self, young_kpa, (r_m, z_m), working)
            }

            /// Stress increments at many points, several at a time: the fast way to a map. The same
            /// formulas as [`Self::stress_at`], equal to it but for the last roundings.
            ///
            /// # Errors
            /// Numbers of points and results that differ, or a point refused as by [`Self::stress_at`]
            /// (named by its index); nothing is written then.
            pub fn stress_into(
                &self,
                points: &[$crate::stress::AxisPoint],
                out: &mut [$crate::stress::AxisymmetricStress],
            ) -> Result<(), $crate::stress::StressError> {
                $crate::stress::surface::stress_into(self, points, out)
            }
        }
    };
}
pub(super) use evaluation;

/// Symbols with their numbers.
pub(super) type Inputs<'a> = &'a [(&'static str, f64)];

/// Writes steps, the source of the method with the first of them.
pub(super) struct Trail<'a, W: Working> {
    working: &'a mut W,
    source: &'static str,
}

impl<'a, W: Working> Trail<'a, W> {
    pub(super) fn new(working: &'a mut W, source: &'static str) -> Self {
        Self { working, source }
    }

    pub(super) fn step(
        &mut self,
        unit: &'static str,
        (name, value, formula): (&str, f64, &'static str),
        inputs: Inputs<'_>,
    ) {
        self.working.step(Step { name, value, unit, formula, inputs, source: self.source });
        self.source = "";
    }

    /// Steps that start from the same numbers.
    pub(super) fn steps(
        &mut self,
        unit: &'static str,
        steps: &[(&str, f64, &'static str)],
        inputs: Inputs<'_>,
    ) {
        for step in steps {
            self.step(unit, *step, inputs);
        }
    }

    /// Relative distance and depth, from which the integrals follow.
    pub(super) fn geometry(&mut self, at: &Geometry<1>, radius_m: f64) {
        let (rho, zeta) = (at.rho.value(), at.zeta.value());
        let (r, z) = (rho * radius_m, zeta * radius_m);
        self.step(
            "",
            ("distance from the axis over radius", rho, "rho = r/R"),
            &[("r", r), ("R", radius_m)],
        );
        self.step("", ("depth over radius", zeta, "zeta = z/R"), &[("z", z), ("R", radius_m)]);
    }
}

/// Refuses lanes on the edge of the load when there is no value there.
pub(super) fn check_rim<const N: usize>(
    at: &Geometry<N>,
    radius_m: f64,
    has_value: bool,
) -> Result<(), StressError> {
    if has_value || at.on_rim().sum() == 0.0 {
        Ok(())
    } else {
        Err(StressError::NoFiniteValue { radius_m })
    }
}

fn geometry_at(
    radius_m: f64,
    r_m: f64,
    z_m: f64,
    has_value_on_rim: bool,
) -> Result<Geometry<1>, StressError> {
    let point = AxisPoint { r_m, z_m }.check(None)?;
    let at = Geometry::new(Lanes([point.r_m]), Lanes([point.z_m]), radius_m);
    check_rim(&at, radius_m, has_value_on_rim)?;
    Ok(at)
}

pub(super) fn stress_at_with<L: SurfaceLoad>(
    load: &L,
    r_m: f64,
    z_m: f64,
    working: &mut impl Working,
) -> Result<AxisymmetricStress, StressError> {
    let at = geometry_at(load.radius_m(), r_m, z_m, L::STRESS_ON_RIM)?;
    let by = load.integrals(&at);
    let [sigma_z, sigma_r, sigma_theta, tau_rz] = load.stresses(&at, &by).map(Lanes::value);
    let result = AxisymmetricStress {
        sigma_z_kpa: sigma_z,
        sigma_r_kpa: sigma_r,
        sigma_theta_kpa: sigma_theta,
        tau_rz_kpa: tau_rz,
    };
    if working.wanted() {
        let mut trail = Trail::new(working, L::SOURCE);
        trail.geometry(&at, load.radius_m());
        load.write_stress(&at, &by, &result, &mut trail);
    }
    Ok(result)
}

pub(super) fn displacement_at_with<L: SurfaceLoad>(
    load: &L,
    young_kpa: f64,
    (r_m, z_m): (f64, f64),
    working: &mut impl Working,
) -> Result<Displacement, StressError> {
    let young_kpa = YOUNG.check(young_kpa)?;
    let at = geometry_at(load.radius_m(), r_m, z_m, L::DISPLACEMENT_ON_RIM)?;
    let by = load.integrals(&at);
    let [settlement_m, radial_m] = load.displacements(young_kpa, &at, &by).map(Lanes::value);
    let result = Displacement { settlement_m, radial_m };
    if working.wanted() {
        let mut trail = Trail::new(working, L::SOURCE);
        trail.geometry(&at, load.radius_m());
        load.write_displacement(young_kpa, &at, &by, &result, &mut trail);
    }
    Ok(result)
}

pub(super) fn stress_into<L: SurfaceLoad>(
    load: &L,
    points: &[AxisPoint],
    out: &mut [AxisymmetricStress],
) -> Result<(), StressError> {
    if points.len() != out.len() {
        return Err(StressError::LengthsDiffer { points: points.len(), results: out.len() });
    }
    for (index, point) in points.iter().enumerate() {
        point.check(Some(index))?;
    }
    for some in points.chunks(BATCH) {
        check_rim(&lanes_of(some, load.radius_m()), load.radius_m(), L::STRESS_ON_RIM)?;
    }
    for (points, out) in points.chunks(BATCH).zip(out.chunks_mut(BATCH)) {
        let at = lanes_of(points, load.radius_m());
        write_stresses(out, load.stresses(&at, &load.integrals(&at)));
    }
    Ok(())
}

/// Up to [`BATCH`] points side by side; unused lanes repeat a harmless place below the centre.
#[inline(always)]
fn lanes_of(points: &[AxisPoint], radius_m: f64) -> Geometry<BATCH> {
    let (mut r, mut z) = ([0.0; BATCH], [radius_m; BATCH]);
    for ((point, r), z) in points.iter().zip(&mut r).zip(&mut z) {
        (*r, *z) = (point.r_m, point.z_m);
    }
    Geometry::new(Lanes(r), Lanes(z), radius_m)
}

#[inline(always)]
pub(super) fn write_stresses(
    out: &mut [AxisymmetricStress],
    [z, r, theta, shear]: [Lanes<BATCH>; 4],
) {
    for ((((out, z), r), theta), shear) in
        out.iter_mut().zip(z.0).zip(r.0).zip(theta.0).zip(shear.0)
    {
        *out = AxisymmetricStress {
            sigma_z_kpa: z,
            sigma_r_kpa: r,
            sigma_theta_kpa: theta,
            tau_rz_kpa: shear,
        };
    }
}
