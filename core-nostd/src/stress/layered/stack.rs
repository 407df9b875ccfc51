//! The ground as the kernel sees it: sublayers of constant modulus, lengths in radii of the load,
//! moduli over a reference modulus.

use super::{ElasticBase, LayeredGround};
use crate::config::MAX_ELASTIC_SUBLAYERS;
use crate::math::root::brent;
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

/// How layers with a gradient are divided.
#[derive(Debug, Clone, Copy)]
pub(super) struct Steps {
    /// Sublayers of the coarsest division.
    pub(super) count: usize,
    /// Of these, each is divided again into so many.
    pub(super) refine: usize,
    /// A depth within this part of the first sublayer is not cut at: the integral would converge
    /// too slowly, and what the cut improves is small there.
    pub(super) sliver: f64,
}

/// Sublayers from the surface down. Those of a layer whose modulus changes with depth follow a
/// smooth rule, and one of their interfaces passes through the depth that is asked for, so that
/// the error of the division is even in their number and can be extrapolated away.
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

/// Depth, in radii, within which sublayers are about equally thin.
const NEAR: f64 = 0.5;

/// Depths that differ by less than this part are the same interface.
const SAME_DEPTH: f64 = 1e-12;

impl Stack {
    /// Layers with a gradient divided and cut at `depth` (in radii). `None` when the sublayers do
    /// not fit.
    pub(super) fn new(
        ground: &LayeredGround,
        radius_m: f64,
        depth: f64,
        steps: Steps,
    ) -> Option<Self> {
        let mut sublayers = Vec::new();
        let mut top = 0.0;
        for (layer, given) in ground.layers().iter().enumerate() {
            let bottom = top + given.thickness_m / radius_m;
            let young = given.young_kpa / ground.reference_kpa();
            let gradient = given.young_gradient_kpa_per_m * radius_m / ground.reference_kpa();
            let whole = Sublayer { top, bottom, twice_shear: 0.0, poisson: given.poisson, layer };
            let graded = Graded { young, gradient, whole };
            let (above, below) = graded.counts(depth, &steps);
            if gradient == 0.0 {
                sublayers.push(graded.undivided()).ok()?;
            } else if below == 0 {
                graded.divide(0.0, 1.0, above * steps.refine, &mut sublayers)?;
            } else {
                let cut = graded.share(depth);
                graded.divide(0.0, cut, above * steps.refine, &mut sublayers)?;
                // The cut is the depth itself, not what rounding makes of it.
                sublayers.last_mut()?.bottom = depth;
                let first_below = sublayers.len();
                graded.divide(cut, 1.0, below * steps.refine, &mut sublayers)?;
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

/// A layer with the modulus `young + gradient (z - top)`, divided evenly in a share that grows
/// with the logarithm of the modulus and with that of the depth: fine where the modulus or the
/// load's effect changes fast.
struct Graded {
    young: f64,
    gradient: f64,
    whole: Sublayer,
}

impl Graded {
    fn young_at(&self, depth: f64) -> f64 {
        self.young + self.gradient * (depth - self.whole.top)
    }

    /// Share of the layer above a depth, 0 at its top and 1 at its bottom.
    fn share(&self, depth: f64) -> f64 {
        let modulus =
            |depth: f64| libm::log1p(self.gradient * (depth - self.whole.top) / self.young);
        let place = |depth: f64| libm::log((depth + NEAR) / (self.whole.top + NEAR));
        let bottom = self.whole.bottom;
        0.5 * (modulus(depth) / modulus(bottom) + place(depth) / place(bottom))
    }

    fn depth_at(&self, share: f64) -> f64 {
        let Sublayer { top, bottom, .. } = self.whole;
        // The share rises from 0 to 1 over the bracket, so that a root is always found; the ends
        // themselves are exact.
        if share <= 0.0 {
            top
        } else if share >= 1.0 {
            bottom
        } else {
            brent(top, bottom, 0.0, |depth| self.share(depth) - share)
                .unwrap_or(top + share * (bottom - top))
        }
    }

    /// Sublayers above and below a depth inside; all above where the depth is outside or where a
    /// cut would leave a sliver at the surface.
    fn counts(&self, depth: f64, steps: &Steps) -> (usize, usize) {
        let Steps { count, sliver, .. } = *steps;
        let sliver = if self.whole.top > 0.0 { 0.0 } else { sliver / count as f64 };
        let inside = depth > self.whole.top && depth < self.whole.bottom;
        if self.gradient == 0.0 || !inside || self.share(depth) <= sliver {
            return (count, 0);
        }
        let above = libm::round(self.share(depth) * count as f64) as usize;
        let above = above.clamp(1, count.saturating_sub(1).max(1));
        (above, count.saturating_sub(above).max(1))
    }

    fn undivided(&self) -> Sublayer {
        Sublayer { twice_shear: self.young / (1.0 + self.whole.poisson), ..self.whole }
    }

    /// Evenly from one share to another, each with the modulus at the middle of its share.
    fn divide(
        &self,
        from: f64,
        to: f64,
        count: usize,
        sublayers: &mut Vec<Sublayer, MAX_ELASTIC_SUBLAYERS>,
    ) -> Option<()> {
        let depth =
            |half: usize| self.depth_at(from + (to - from) * (0.5 * half as f64 / count as f64));
        let mut top = depth(0);
        for i in 0..count {
            let half = i.saturating_mul(2);
            let (middle, bottom) = (depth(half.saturating_add(1)), depth(half.saturating_add(2)));
            let twice_shear = self.young_at(middle) / (1.0 + self.whole.poisson);
            sublayers.push(Sublayer { top, bottom, twice_shear, ..self.whole }).ok()?;
            top = bottom;
        }
        Some(())
    }
}
