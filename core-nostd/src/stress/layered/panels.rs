//! Where the integral over the wave number is sampled.

use super::kernel::WaveBlock;
use super::{Accuracy, LayeredLoad};
use crate::math::lanes::{BATCH, Lanes};
use crate::math::quadrature::GaussLegendre;
use core::f64::consts::PI;
use heapless::Vec;

/// More panels than any sensible ground needs: about a second of work.
pub(super) const MAX_PANELS: usize = 100_000;

/// First panel of all, in units of the wave number times the radius.
const FIRST: f64 = 1.0 / 1024.0;

/// Panels that double in length from 0 until they span half a wave of the faster Bessel
/// function, of constant length afterwards. The doubling follows poles close to the real axis
/// (stiff over soft) and slow variation (thick layers).
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Panels {
    first: f64,
    longest: f64,
    end: f64,
}

impl Panels {
    /// Up to the wave number `end`, for distances up to `rho` and a ground of this thickness (all
    /// in radii).
    pub(super) fn new(end: f64, rho: f64, thickness: f64) -> Self {
        let longest = PI / rho.max(1.0);
        Self { first: FIRST * (32.0 / thickness).min(1.0).min(longest), longest, end }
    }

    /// The panels as intervals. Panels that begin below a smaller `end` are the first of these.
    pub(super) fn iter(self) -> impl Iterator<Item = (f64, f64)> {
        let mut from = 0.0;
        core::iter::from_fn(move || {
            if from >= self.end {
                return None;
            }
            let to = from + if from == 0.0 { self.first } else { from.min(self.longest) };
            let panel = (from, to);
            from = to;
            Some(panel)
        })
    }

    /// Number of panels, or `None` beyond [`MAX_PANELS`].
    pub(super) fn count(self) -> Option<usize> {
        let expected = self.end / self.longest;
        if expected > MAX_PANELS as f64 {
            return None;
        }
        Some(self.iter().count())
    }
}

/// Nodes and weights of one panel, in batches.
#[derive(Debug, Clone)]
pub(super) struct Rule {
    blocks: Vec<(Lanes<BATCH>, Lanes<BATCH>), 2>,
}

impl Rule {
    pub(super) fn new(accuracy: Accuracy) -> Self {
        match accuracy {
            Accuracy::Reference => Self::of(&GaussLegendre::<16>::new()),
            Accuracy::Map => Self::of(&GaussLegendre::<8>::new()),
        }
    }

    fn of<const N: usize>(rule: &GaussLegendre<N>) -> Self {
        let mut blocks = Vec::new();
        for (nodes, weights) in rule.nodes().chunks(BATCH).zip(rule.weights().chunks(BATCH)) {
            // A short last batch would keep weight 0; both rules fill theirs.
            let (mut x, mut w) = ([0.0; BATCH], [0.0; BATCH]);
            for ((x, w), (node, weight)) in x.iter_mut().zip(&mut w).zip(nodes.iter().zip(weights))
            {
                (*x, *w) = (*node, *weight);
            }
            if blocks.push((Lanes(x), Lanes(w))).is_err() {
                break;
            }
        }
        Self { blocks }
    }

    /// Batches per panel.
    pub(super) fn blocks(&self) -> usize {
        self.blocks.len()
    }

    /// The wave numbers of all panels with the transform of the load in their weights.
    pub(super) fn waves<'a>(
        &'a self,
        panels: Panels,
        load: &'a LayeredLoad,
    ) -> impl Iterator<Item = WaveBlock> + 'a {
        panels.iter().flat_map(move |(from, to)| {
            let (half, middle) = (0.5 * (to - from), 0.5 * (from + to));
            self.blocks.iter().map(move |(x, w)| {
                let m = middle + half * *x;
                WaveBlock { m, weight: half * *w * load.transform(m) }
            })
        })
    }
}
