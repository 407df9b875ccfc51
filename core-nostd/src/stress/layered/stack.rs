//! The ground as the kernel sees it: sublayers of constant modulus, lengths in radii of the load,
//! moduli over a reference modulus.

use super::{ElasticBase, LayeredGround};
use crate::config::MAX_ELASTIC_SUBLAYERS;
use heapless::Vec;

/// One sublayer of constant modulus.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Sublayer {
    pub(super) top: f64,
    pub(super) bottom: f64,
    /// `2 G` over the reference modulus.
    pub(super) twice_shear: f64,
    pub(super) poisson: f64,
    /// Which of the given layers it belongs to.
    pub(super) layer: usize,
}

/// What is below the last sublayer.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Base {
    HalfSpace(Sublayer),
    Rough,
    Smooth,
}

/// Sublayers from the surface down. Those of a layer whose modulus grows with depth have equal
/// ratios of modulus, and one of their interfaces passes through the depth that is asked for, so
/// that the error of the division is even in their number and can be extrapolated away.
#[derive(Debug, Clone)]
pub(super) struct Stack {
    pub(super) sublayers: Vec<Sublayer, MAX_ELASTIC_SUBLAYERS>,
    pub(super) base: Base,
}

/// Where a point lies in the stack.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Target {
    /// Index of the sublayer; the number of sublayers for the half-space below.
    pub(super) index: usize,
    pub(super) depth: f64,
    pub(super) sublayer: Sublayer,
}

/// Depths that differ by less than this part are the same interface.
const SAME_DEPTH: f64 = 1e-12;

impl Stack {
    /// `steps` sublayers for each layer with a gradient, cut at `depth` (in radii). `None` when
    /// they do not fit.
    pub(super) fn new(
        ground: &LayeredGround,
        radius_m: f64,
        depth: f64,
        steps: usize,
        refine: usize,
    ) -> Option<Self> {
        let mut sublayers = Vec::new();
        let mut top = 0.0;
        for (layer, given) in ground.layers().iter().enumerate() {
            let bottom = top + given.thickness_m / radius_m;
            let young = given.young_kpa / ground.reference_kpa();
            let gradient = given.young_gradient_kpa_per_m * radius_m / ground.reference_kpa();
            let whole = Sublayer { top, bottom, twice_shear: 0.0, poisson: given.poisson, layer };
            let graded = Graded { young, gradient, whole };
            let (above, below) = graded.counts(depth, steps);
            if gradient == 0.0 {
                sublayers.push(graded.between(0.0, 1.0)).ok()?;
            } else if below == 0 {
                graded.divide(0.0, 1.0, above * refine, &mut sublayers)?;
            } else {
                let cut = graded.share(depth);
                graded.divide(0.0, cut, above * refine, &mut sublayers)?;
                // The cut is the depth itself, not what rounding makes of it.
                sublayers.last_mut()?.bottom = depth;
                let first_below = sublayers.len();
                graded.divide(cut, 1.0, below * refine, &mut sublayers)?;
                sublayers.get_mut(first_below)?.top = depth;
            }
            sublayers.last_mut()?.bottom = bottom;
            top = bottom;
        }
        let base = match ground.base() {
            ElasticBase::RigidRough => Base::Rough,
            ElasticBase::RigidSmooth => Base::Smooth,
            ElasticBase::HalfSpace { young_kpa, poisson } => Base::HalfSpace(Sublayer {
                top,
                bottom: f64::INFINITY,
                twice_shear: young_kpa / ground.reference_kpa() / (1.0 + poisson),
                poisson,
                layer: ground.layers().len(),
            }),
        };
        Some(Self { sublayers, base })
    }

    /// The sublayer of a depth; an interface belongs to the upper one. `None` below a rigid base.
    pub(super) fn target(&self, depth: f64) -> Option<Target> {
        for (index, sublayer) in self.sublayers.iter().enumerate() {
            if depth <= sublayer.bottom * (1.0 + SAME_DEPTH) {
                let depth = depth.min(sublayer.bottom);
                return Some(Target { index, depth, sublayer: *sublayer });
            }
        }
        match self.base {
            Base::HalfSpace(sublayer) => {
                Some(Target { index: self.sublayers.len(), depth, sublayer })
            }
            Base::Rough | Base::Smooth => None,
        }
    }

    /// Depth of the last interface.
    pub(super) fn thickness(&self) -> f64 {
        self.sublayers.last().map_or(0.0, |last| last.bottom)
    }
}

/// A layer with the modulus `young + gradient (z - top)`.
struct Graded {
    young: f64,
    gradient: f64,
    whole: Sublayer,
}

impl Graded {
    /// Logarithm of the modulus at a depth over that at the top.
    fn logarithm(&self, depth: f64) -> f64 {
        libm::log1p(self.gradient * (depth - self.whole.top) / self.young)
    }

    /// Share of the logarithmic range above a depth.
    fn share(&self, depth: f64) -> f64 {
        self.logarithm(depth) / self.logarithm(self.whole.bottom)
    }

    /// Sublayers above and below a depth inside; all above where the depth is outside or where a
    /// cut would leave a sliver at the surface.
    fn counts(&self, depth: f64, steps: usize) -> (usize, usize) {
        let sliver = if self.whole.top > 0.0 { 0.0 } else { 0.5 / steps as f64 };
        let inside = depth > self.whole.top && depth < self.whole.bottom;
        if self.gradient == 0.0 || !inside || self.share(depth) <= sliver {
            return (steps, 0);
        }
        let above = libm::round(self.share(depth) * steps as f64) as usize;
        let above = above.clamp(1, steps.saturating_sub(1).max(1));
        (above, steps.saturating_sub(above).max(1))
    }

    /// The sublayer between two shares of the logarithmic range, with the modulus at its middle.
    fn between(&self, from: f64, to: f64) -> Sublayer {
        let range = self.logarithm(self.whole.bottom);
        let depth = |share: f64| {
            if self.gradient == 0.0 {
                self.whole.top + share * (self.whole.bottom - self.whole.top)
            } else {
                self.whole.top + self.young / self.gradient * libm::expm1(range * share)
            }
        };
        let young = self.young * libm::exp(0.5 * range * (from + to));
        Sublayer {
            top: depth(from),
            bottom: depth(to),
            twice_shear: young / (1.0 + self.whole.poisson),
            ..self.whole
        }
    }

    fn divide(
        &self,
        from: f64,
        to: f64,
        count: usize,
        sublayers: &mut Vec<Sublayer, MAX_ELASTIC_SUBLAYERS>,
    ) -> Option<()> {
        let share = |i: usize| from + (to - from) * (i as f64 / count as f64);
        for i in 0..count {
            sublayers.push(self.between(share(i), share(i.saturating_add(1)))).ok()?;
        }
        Some(())
    }
}
