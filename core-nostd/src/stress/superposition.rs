//! Several loads at their places in plan: a tank with its neighbours, each a disc and a ring.

use super::integrals::Geometry;
use super::surface::{SurfaceLoad, check_rim, write_stresses};
use super::{
    AxisymmetricStress, CartesianStress, DEPTH, Disc, PLAN_COORDINATE, Ring, StressError, YOUNG,
};
use crate::load::PlanPosition;
use crate::math::lanes::{BATCH, Lanes};
use crate::quantity::OutOfRange;
use crate::working::{Silent, Step, Working};

/// One load of a site.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Load {
    /// Uniform pressure on a circle.
    Disc(Disc),
    /// Line load on a circle.
    Ring(Ring),
}

impl From<Disc> for Load {
    fn from(disc: Disc) -> Self {
        Self::Disc(disc)
    }
}

impl From<Ring> for Load {
    fn from(ring: Ring) -> Self {
        Self::Ring(ring)
    }
}

impl Load {
    fn poisson(&self) -> f64 {
        match self {
            Self::Disc(disc) => disc.poisson(),
            Self::Ring(ring) => ring.poisson(),
        }
    }
}

/// A load at its place in plan.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PlacedLoad {
    axis: PlanPosition,
    load: Load,
}

impl PlacedLoad {
    /// Checks the place.
    ///
    /// # Errors
    /// A coordinate that is not finite or beyond 1000 km.
    pub fn new(axis: PlanPosition, load: impl Into<Load>) -> Result<Self, StressError> {
        PLAN_COORDINATE.check(axis.x_m)?;
        PLAN_COORDINATE.check(axis.y_m)?;
        Ok(Self { axis, load: load.into() })
    }

    /// Distance from the axis and the direction to the point (cosine, sine).
    fn polar(&self, point: SitePoint) -> (f64, f64, f64) {
        let (x, y) = (point.x_m - self.axis.x_m, point.y_m - self.axis.y_m);
        let r = libm::hypot(x, y);
        if r > 0.0 { (r, x / r, y / r) } else { (0.0, 1.0, 0.0) }
    }
}

/// A point of the site: plan axes and depth below the loaded level.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct SitePoint {
    /// East, m.
    pub x_m: f64,
    /// North, m.
    pub y_m: f64,
    /// Depth below the loaded level, m.
    pub z_m: f64,
}

impl SitePoint {
    fn check(self, index: Option<usize>) -> Result<Self, OutOfRange> {
        let at = |refused| OutOfRange { index, ..refused };
        PLAN_COORDINATE.check(self.x_m).map_err(at)?;
        PLAN_COORDINATE.check(self.y_m).map_err(at)?;
        DEPTH.check(self.z_m).map_err(at)?;
        Ok(self)
    }
}

/// Sum of the stress increments of all loads, kPa on the site's axes.
///
/// # Errors
/// Loads with different Poisson's ratios, a point out of range or on a line load.
///
/// # Examples
/// ```
/// use brimstead_core::load::PlanPosition;
/// use brimstead_core::stress::superposition::{PlacedLoad, SitePoint, stress_at};
/// use brimstead_core::stress::Disc;
/// let at = |x_m| PlanPosition { x_m, y_m: 0.0 };
/// let tanks = [
///     PlacedLoad::new(at(0.0), Disc::new(10.0, 120.0, 0.3)?)?,
///     PlacedLoad::new(at(30.0), Disc::new(10.0, 120.0, 0.3)?)?,
/// ];
/// let between = stress_at(&tanks, SitePoint { x_m: 15.0, y_m: 0.0, z_m: 10.0 })?;
/// assert!(between.tau_xz_kpa.abs() < 1e-12, "no shear in the plane of symmetry");
/// # Ok::<(), brimstead_core::stress::StressError>(())
/// ```
pub fn stress_at<'a>(
    loads: impl IntoIterator<Item = &'a PlacedLoad>,
    point: SitePoint,
) -> Result<CartesianStress, StressError> {
    stress_at_with(loads, point, &mut Silent)
}

/// As [`stress_at`], writing the share of each load and the sum.
///
/// # Errors
/// As [`stress_at`].
pub fn stress_at_with<'a>(
    loads: impl IntoIterator<Item = &'a PlacedLoad>,
    point: SitePoint,
    working: &mut impl Working,
) -> Result<CartesianStress, StressError> {
    let point = point.check(None)?;
    let mut same = SamePoisson::default();
    let mut sum = CartesianStress::default();
    for placed in loads {
        same.take(placed)?;
        let (r, cosine, sine) = placed.polar(point);
        let stress = match &placed.load {
            Load::Disc(disc) => disc.stress_at_with(r, point.z_m, working)?,
            Load::Ring(ring) => ring.stress_at_with(r, point.z_m, working)?,
        };
        sum += stress.to_cartesian(cosine, sine);
    }
    if working.wanted() {
        write_sum(&sum, working);
    }
    Ok(sum)
}

/// Settlement of a point under all loads, m, for one Young's modulus.
///
/// # Errors
/// As [`stress_at`], or the modulus out of range.
pub fn settlement_at<'a>(
    loads: impl IntoIterator<Item = &'a PlacedLoad>,
    young_kpa: f64,
    point: SitePoint,
) -> Result<f64, StressError> {
    let point = point.check(None)?;
    YOUNG.check(young_kpa)?;
    let mut same = SamePoisson::default();
    let mut sum_m = 0.0;
    for placed in loads {
        same.take(placed)?;
        let (r, ..) = placed.polar(point);
        let moved = match &placed.load {
            Load::Disc(disc) => disc.displacement_at(young_kpa, r, point.z_m)?,
            Load::Ring(ring) => ring.displacement_at(young_kpa, r, point.z_m)?,
        };
        sum_m += moved.settlement_m;
    }
    Ok(sum_m)
}

/// Stress increments at many points, several at a time: the fast way to a map of a site.
///
/// # Errors
/// Numbers of points and results that differ, or as [`stress_at`] (a point out of range is named
/// by its index). After an error the results are not complete.
pub fn stress_into(
    loads: &[PlacedLoad],
    points: &[SitePoint],
    out: &mut [CartesianStress],
) -> Result<(), StressError> {
    if points.len() != out.len() {
        return Err(StressError::LengthsDiffer { points: points.len(), results: out.len() });
    }
    let mut same = SamePoisson::default();
    for placed in loads {
        same.take(placed)?;
    }
    for (index, point) in points.iter().enumerate() {
        point.check(Some(index))?;
    }
    for (points, out) in points.chunks(BATCH).zip(out.chunks_mut(BATCH)) {
        out.fill(CartesianStress::default());
        for placed in loads {
            placed.add_to(points, out)?;
        }
    }
    Ok(())
}

impl PlacedLoad {
    /// Adds this load's stress at up to [`BATCH`] points.
    #[inline]
    fn add_to(&self, points: &[SitePoint], out: &mut [CartesianStress]) -> Result<(), StressError> {
        // Unused lanes stay at a harmless place below the centre.
        let mut directions = [(1.0, 0.0); BATCH];
        let (mut r, mut z) = ([0.0; BATCH], [1.0; BATCH]);
        for (((point, direction), r), z) in
            points.iter().zip(&mut directions).zip(&mut r).zip(&mut z)
        {
            let (distance, cosine, sine) = self.polar(*point);
            *direction = (cosine, sine);
            (*r, *z) = (distance, point.z_m);
        }
        let mut stresses = [AxisymmetricStress::default(); BATCH];
        write_stresses(&mut stresses, self.load.stresses(Lanes(r), Lanes(z))?);
        for ((out, stress), (cosine, sine)) in out.iter_mut().zip(stresses).zip(directions) {
            *out += stress.to_cartesian(cosine, sine);
        }
        Ok(())
    }
}

impl Load {
    #[inline]
    fn stresses(
        &self,
        r_m: Lanes<BATCH>,
        z_m: Lanes<BATCH>,
    ) -> Result<[Lanes<BATCH>; 4], StressError> {
        match self {
            Self::Disc(disc) => stresses(disc, r_m, z_m),
            Self::Ring(ring) => stresses(ring, r_m, z_m),
        }
    }
}

#[inline]
fn stresses<L: SurfaceLoad>(
    load: &L,
    r_m: Lanes<BATCH>,
    z_m: Lanes<BATCH>,
) -> Result<[Lanes<BATCH>; 4], StressError> {
    let at = Geometry::new(r_m, z_m, load.radius_m());
    check_rim(&at, load.radius_m(), L::STRESS_ON_RIM)?;
    Ok(load.stresses(&at, &load.integrals(&at)))
}

/// One half-space has one Poisson's ratio.
#[derive(Default)]
struct SamePoisson {
    first: Option<f64>,
}

impl SamePoisson {
    fn take(&mut self, placed: &PlacedLoad) -> Result<(), StressError> {
        let other = placed.load.poisson();
        let first = *self.first.get_or_insert(other);
        if first == other { Ok(()) } else { Err(StressError::PoissonDiffers { first, other }) }
    }
}

fn write_sum(sum: &CartesianStress, working: &mut impl Working) {
    let principal = sum.principal();
    for (name, value, formula) in [
        ("vertical stress increment of all loads", sum.sigma_z_kpa, "sum of sigma_z"),
        (
            "stress increment along x of all loads",
            sum.sigma_x_kpa,
            "sum of sigma_r cos^2 + sigma_theta sin^2",
        ),
        (
            "stress increment along y of all loads",
            sum.sigma_y_kpa,
            "sum of sigma_r sin^2 + sigma_theta cos^2",
        ),
        ("shear xy of all loads", sum.tau_xy_kpa, "sum of (sigma_r - sigma_theta) cos sin"),
        ("shear xz of all loads", sum.tau_xz_kpa, "sum of tau_rz cos"),
        ("shear yz of all loads", sum.tau_yz_kpa, "sum of tau_rz sin"),
        ("major principal increment", principal.sigma_1_kpa, "largest eigenvalue"),
        ("intermediate principal increment", principal.sigma_2_kpa, "middle eigenvalue"),
        ("minor principal increment", principal.sigma_3_kpa, "smallest eigenvalue"),
    ] {
        working.step(Step { name, value, unit: "kPa", formula, inputs: &[], source: "" });
    }
}
