//! Stress and displacement in layered elastic ground: any number of bonded layers on a
//! half-space or on a rigid base, under a uniform disc or a ring line load.
//!
//! The Hankel transform of the load meets a kernel that depends on depth and ground only
//! (the equations stand above the code of the kernel). In the top layer the
//! closed form of the homogeneous half-space is subtracted from the kernel and added afterwards,
//! so that the surface itself, the edge of the load and points close to it converge as quickly as
//! deep ones.
//!
//! A layer may grow stiffer (or softer) with depth; it is divided into sublayers at three
//! finenesses and the results are extrapolated.

mod kernel;
mod load;
mod map;
mod panels;
mod stack;
mod trail;

pub use kernel::{BesselBlock, KernelBlock, WaveBlock};
pub use load::LayeredLoad;
pub use map::{LayeredMap, MapSize};

use super::{AxisymmetricStress, Displacement, POISSON, StressError, YOUNG};
use crate::config::{MAX_ELASTIC_SUBLAYERS, MAX_LAYERS};
use crate::quantity::Bounded;
use crate::working::{Silent, Working};
use heapless::Vec;
use kernel::{BesselBlock as Bessel, KernelBlock as Kernel, Sums};
use panels::{MAX_PANELS, Panels, Rule};
use stack::{Stack, Steps, Target};

/// Thickness of an elastic layer.
pub static LAYER_THICKNESS: Bounded = Bounded {
    name: "thickness of an elastic layer",
    unit: "m",
    min: 1e-3,
    max: 1e4,
    remedy: "Give the thickness of the layer, not the depth of its bottom.",
};

/// Growth of Young's modulus with depth.
pub static YOUNG_GRADIENT: Bounded = Bounded {
    name: "gradient of Young's modulus",
    unit: "kPa/m",
    min: -1e9,
    max: 1e9,
    remedy: "Give the growth per metre of depth; 0 for a constant modulus.",
};

/// One elastic layer, bonded to its neighbours.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ElasticLayer {
    /// Thickness, m.
    pub thickness_m: f64,
    /// Young's modulus, kPa; at the top of the layer when it has a gradient.
    pub young_kpa: f64,
    /// Poisson's ratio.
    pub poisson: f64,
    /// Growth of the modulus with depth, kPa/m; 0 for a constant one.
    pub young_gradient_kpa_per_m: f64,
}

/// What the layers rest on.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ElasticBase {
    /// An elastic half-space.
    HalfSpace {
        /// Young's modulus, kPa.
        young_kpa: f64,
        /// Poisson's ratio.
        poisson: f64,
    },
    /// A base that does not move at all.
    RigidRough,
    /// A base that does not settle and carries no shear.
    RigidSmooth,
}

/// How finely the integral over the wave number is taken.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Accuracy {
    /// 16 nodes a panel, cut where the kernel is below 1e-16. Error below 1e-9 of the largest
    /// stress (1e-12 seen) and, where moduli change with depth, below 1e-5 (3e-8 seen against
    /// exact values for a single layer).
    Reference,
    /// 8 nodes a panel, cut where the kernel is below 1e-8. Error below 5e-6 of the largest
    /// stress (5e-8 seen against exact values) and, where moduli change with depth, below 1e-4;
    /// about ten times faster. For maps.
    Map,
}

impl Accuracy {
    /// The kernel is cut off where it has decayed by `e` to this power.
    fn exponent(self) -> f64 {
        match self {
            Self::Reference => 38.0,
            Self::Map => 20.0,
        }
    }

    /// Sublayers of the coarser division of a layer with a gradient.
    fn gradient_steps(self) -> usize {
        match self {
            Self::Reference => 20,
            Self::Map => 8,
        }
    }

    /// See [`Steps::sliver`].
    fn sliver(self) -> f64 {
        match self {
            Self::Reference => 0.05,
            Self::Map => 0.5,
        }
    }
}

/// Stress and displacement at a point.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct LayeredResponse {
    /// Stress increment.
    pub stress: AxisymmetricStress,
    /// Displacement.
    pub displacement: Displacement,
}

impl LayeredResponse {
    /// Adds a multiple of another response.
    fn add_scaled(&mut self, other: &Self, factor: f64) {
        let (s, o) = (&mut self.stress, &other.stress);
        s.sigma_z_kpa += factor * o.sigma_z_kpa;
        s.sigma_r_kpa += factor * o.sigma_r_kpa;
        s.sigma_theta_kpa += factor * o.sigma_theta_kpa;
        s.tau_rz_kpa += factor * o.tau_rz_kpa;
        self.displacement.settlement_m += factor * other.displacement.settlement_m;
        self.displacement.radial_m += factor * other.displacement.radial_m;
    }
}

/// Layered elastic ground, checked.
///
/// # Range of validity
/// Up to 16 layers of any modulus ratio, Poisson's ratio 0 to 0.5, points anywhere at or below
/// the surface and above a rigid base; a point on an interface takes the upper layer's values.
/// Work grows with `distance / thickness of the top layer`; what would take more than about a
/// second is refused.
///
/// # Examples
/// ```
/// use brimstead_core::stress::layered::{
///     Accuracy, ElasticBase, ElasticLayer, LayeredGround, LayeredLoad,
/// };
/// let crust = ElasticLayer {
///     thickness_m: 2.0,
///     young_kpa: 20_000.0,
///     poisson: 0.3,
///     young_gradient_kpa_per_m: 0.0,
/// };
/// let clay = ElasticBase::HalfSpace { young_kpa: 4_000.0, poisson: 0.5 };
/// let ground = LayeredGround::new(&[crust], clay)?;
/// let tank = LayeredLoad::Disc { radius_m: 10.0, pressure_kpa: 100.0 };
/// let centre = ground.response_at(&tank, 0.0, 0.0, Accuracy::Reference)?;
/// assert!((centre.stress.sigma_z_kpa - 100.0).abs() < 1e-9);
/// # Ok::<(), brimstead_core::stress::StressError>(())
/// ```
#[derive(Debug, Clone, PartialEq)]
pub struct LayeredGround {
    layers: Vec<ElasticLayer, MAX_LAYERS>,
    base: ElasticBase,
}

impl LayeredGround {
    /// Checks the layers, from the surface down.
    ///
    /// # Errors
    /// A value out of range (the layer is named by its index), a modulus that vanishes within a
    /// layer, too many layers, or no layer on a rigid base.
    pub fn new(layers: &[ElasticLayer], base: ElasticBase) -> Result<Self, StressError> {
        for (index, layer) in layers.iter().enumerate() {
            LAYER_THICKNESS.check_at(layer.thickness_m, index)?;
            YOUNG.check_at(layer.young_kpa, index)?;
            POISSON.check_at(layer.poisson, index)?;
            let gradient = YOUNG_GRADIENT.check_at(layer.young_gradient_kpa_per_m, index)?;
            YOUNG.check_at(layer.young_kpa + gradient * layer.thickness_m, index)?;
        }
        match base {
            ElasticBase::HalfSpace { young_kpa, poisson } => {
                YOUNG.check(young_kpa)?;
                POISSON.check(poisson)?;
            }
            ElasticBase::RigidRough | ElasticBase::RigidSmooth => {
                if layers.is_empty() {
                    return Err(StressError::NoGround);
                }
            }
        }
        let layers = Vec::from_slice(layers)
            .map_err(|_| StressError::TooManyLayers { given: layers.len(), most: MAX_LAYERS })?;
        Ok(Self { layers, base })
    }

    /// The layers, from the surface down.
    #[must_use]
    pub fn layers(&self) -> &[ElasticLayer] {
        &self.layers
    }

    /// What they rest on.
    #[must_use]
    pub fn base(&self) -> ElasticBase {
        self.base
    }

    /// Stress and displacement at a distance from the axis of a load and a depth.
    ///
    /// # Errors
    /// A load or point out of range, a point on a line load or below a rigid base, or more work
    /// than is allowed (a very thin top layer under a very wide load, or a point very far away).
    pub fn response_at(
        &self,
        load: &LayeredLoad,
        r_m: f64,
        z_m: f64,
        accuracy: Accuracy,
    ) -> Result<LayeredResponse, StressError> {
        self.response_at_with(load, r_m, z_m, accuracy, &mut Silent)
    }

    /// As [`LayeredGround::response_at`], writing the working.
    ///
    /// # Errors
    /// As [`LayeredGround::response_at`].
    pub fn response_at_with(
        &self,
        load: &LayeredLoad,
        r_m: f64,
        z_m: f64,
        accuracy: Accuracy,
        working: &mut impl Working,
    ) -> Result<LayeredResponse, StressError> {
        let load = load.check()?;
        load.check_point(r_m, z_m)?;
        let rule = Rule::new(accuracy);
        let mut sum = LayeredResponse::default();
        for division in self.divisions() {
            let level = self.level(load.radius_m(), z_m, accuracy, division)?;
            let rho = r_m / load.radius_m();
            let mut sums = Sums::zero();
            for wave in rule.waves(level.panels(rho)?, &load) {
                let kernel = Kernel::at(&level.stack, &level.target, &wave);
                sums.add(&kernel, &Bessel::at(&wave, rho));
            }
            let response = self.finish(&load, &level, (r_m, z_m), &sums)?;
            if working.wanted() {
                self.write(&load, &level, (r_m, z_m), &response, working)?;
            }
            sum.add_scaled(&response, division.weight);
        }
        if working.wanted() {
            Self::write_result(&sum, working);
        }
        Ok(sum)
    }

    /// Modulus that displacements are related to.
    fn reference_kpa(&self) -> f64 {
        match (self.layers.first(), self.base) {
            (Some(layer), _) => layer.young_kpa,
            (None, ElasticBase::HalfSpace { young_kpa, .. }) => young_kpa,
            (None, _) => 1.0,
        }
    }

    fn graded_layers(&self) -> usize {
        self.layers.iter().filter(|layer| layer.young_gradient_kpa_per_m != 0.0).count()
    }

    /// Modulus of the given layer at a depth, kPa; `None` for the base.
    fn young_at(&self, layer: usize, z_m: f64) -> Option<f64> {
        let top_m: f64 = self.layers.iter().take(layer).map(|above| above.thickness_m).sum();
        let given = self.layers.get(layer)?;
        Some(given.young_kpa + given.young_gradient_kpa_per_m * (z_m - top_m))
    }

    /// The divisions of the ground to compute with: one, or three finenesses whose results are
    /// extrapolated. The error of a division is even in the number of sublayers.
    fn divisions(&self) -> &'static [Division] {
        const PLAIN: [Division; 1] = [Division { refine: 1, weight: 1.0 }];
        const EXTRAPOLATED: [Division; 3] = [
            Division { refine: 1, weight: 1.0 / 45.0 },
            Division { refine: 2, weight: -20.0 / 45.0 },
            Division { refine: 4, weight: 64.0 / 45.0 },
        ];
        if self.graded_layers() == 0 { &PLAIN } else { &EXTRAPOLATED }
    }

    fn level(
        &self,
        radius_m: f64,
        z_m: f64,
        accuracy: Accuracy,
        division: &Division,
    ) -> Result<Level, StressError> {
        // The finest division, one more for the cut at the depth, must fit with plain layers.
        let room = MAX_ELASTIC_SUBLAYERS.saturating_sub(self.layers.len());
        let fit = room.checked_div(4 * self.graded_layers()).unwrap_or(room).saturating_sub(1);
        let steps = Steps {
            count: accuracy.gradient_steps().min(fit).max(1),
            refine: division.refine,
            sliver: accuracy.sliver(),
        };
        let depth = z_m / radius_m;
        let stack = Stack::new(self, radius_m, depth, steps).ok_or(StressError::TooManyLayers {
            given: self.layers.len(),
            most: MAX_ELASTIC_SUBLAYERS,
        })?;
        let target = stack.target(depth).ok_or(StressError::BelowRigidBase {
            depth_m: z_m,
            base_m: stack.thickness() * radius_m,
        })?;
        Ok(Level { stack, target, accuracy })
    }

    /// From the sums over wave numbers to kPa and m, with the closed form in the top sublayer.
    fn finish(
        &self,
        load: &LayeredLoad,
        level: &Level,
        (r_m, z_m): (f64, f64),
        sums: &Sums,
    ) -> Result<LayeredResponse, StressError> {
        let sublayer = level.target.sublayer;
        let twice_shear_kpa = sublayer.twice_shear * self.reference_kpa();
        let young_kpa = twice_shear_kpa * (1.0 + sublayer.poisson);
        let unit_kpa = load.unit_kpa();
        let unit_m = unit_kpa * load.radius_m() / twice_shear_kpa;
        let closed = if level.target.index == 0 {
            load.on_half_space(young_kpa, sublayer.poisson, r_m, z_m)?
        } else {
            LayeredResponse::default()
        };
        let rho = r_m / load.radius_m();
        let [sigma_z, sigma_r, sigma_theta, tau_rz, settlement, radial] = sums.finish(rho);
        let sigma_z_kpa = closed.stress.sigma_z_kpa + unit_kpa * sigma_z;
        // The horizontal stresses jump with the modulus, movement and vertical stress do not: they
        // are taken from the strains with the modulus at the very depth.
        let confined = sublayer.poisson / (1.0 - sublayer.poisson) * sigma_z_kpa;
        let stiffness = self.young_at(sublayer.layer, z_m).map_or(1.0, |at| at / young_kpa);
        let horizontal = |in_sublayer: f64| confined + stiffness * (in_sublayer - confined);
        Ok(LayeredResponse {
            stress: AxisymmetricStress {
                sigma_z_kpa,
                sigma_r_kpa: horizontal(closed.stress.sigma_r_kpa + unit_kpa * sigma_r),
                sigma_theta_kpa: horizontal(closed.stress.sigma_theta_kpa + unit_kpa * sigma_theta),
                tau_rz_kpa: closed.stress.tau_rz_kpa + unit_kpa * tau_rz,
            },
            displacement: Displacement {
                settlement_m: closed.displacement.settlement_m + unit_m * settlement,
                radial_m: closed.displacement.radial_m + unit_m * radial,
            },
        })
    }
}

/// How finely layers with a modulus gradient are divided, and what the result counts.
#[derive(Debug, Clone, Copy)]
struct Division {
    refine: usize,
    weight: f64,
}

/// One division of the ground with the place of the point in it.
#[derive(Debug, Clone)]
struct Level {
    stack: Stack,
    target: Target,
    accuracy: Accuracy,
}

impl Level {
    /// Wave number (times radius) beyond which the kernel has decayed.
    fn last_wave(&self) -> f64 {
        let Target { index, depth, sublayer } = self.target;
        let decay = if index == 0 { 2.0 * sublayer.bottom - depth } else { depth };
        if decay.is_finite() { self.accuracy.exponent() / decay } else { 0.0 }
    }

    fn panels(&self, rho: f64) -> Result<Panels, StressError> {
        let panels = Panels::new(self.last_wave(), rho, self.stack.thickness());
        panels.count().map(|_| panels).ok_or(StressError::TooMuchWork { most: MAX_PANELS })
    }
}
