//! Many points of one load: rows of constant depth that share everything that depends on the
//! distance only.

use super::kernel::{BesselBlock, KernelBlock, Sums, WaveBlock};
use super::panels::{Panels, Rule};
use super::{Accuracy, LayeredGround, LayeredLoad, LayeredResponse};
use crate::stress::StressError;

/// Room that a map needs; the caller lends it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct MapSize {
    /// Blocks of wave numbers; a row's scratch has the same length.
    pub waves: usize,
    /// Blocks of Bessel functions: `waves` for every distance.
    pub bessel: usize,
}

/// A map of distances and depths under one load. Set-up computes the Bessel functions of all
/// distances once; each row then computes its kernel once and sums. Rows do not depend on each
/// other, so that they can be shared out among threads.
#[derive(Debug)]
pub struct LayeredMap<'a> {
    ground: &'a LayeredGround,
    load: LayeredLoad,
    radii_m: &'a [f64],
    depths_m: &'a [f64],
    accuracy: Accuracy,
    panels: Panels,
    blocks_per_panel: usize,
    waves: &'a [WaveBlock],
    bessel: &'a [BesselBlock],
}

impl LayeredGround {
    /// Room that a map of these distances from the axis and depths needs.
    ///
    /// # Errors
    /// As [`LayeredGround::response_at`] for any point of the map.
    pub fn map_size(
        &self,
        load: &LayeredLoad,
        radii_m: &[f64],
        depths_m: &[f64],
        accuracy: Accuracy,
    ) -> Result<MapSize, StressError> {
        let (panels, blocks) = self.shared_panels(&load.check()?, radii_m, depths_m, accuracy)?;
        let waves = panels.iter().count().saturating_mul(blocks);
        Ok(MapSize { waves, bessel: waves.saturating_mul(radii_m.len()) })
    }

    /// Prepares a map; `waves` and `bessel` are lent with the lengths of
    /// [`LayeredGround::map_size`] and filled.
    ///
    /// # Errors
    /// As [`LayeredGround::response_at`] for any point of the map, or lengths that do not fit.
    pub fn map<'a>(
        &'a self,
        load: &LayeredLoad,
        radii_m: &'a [f64],
        depths_m: &'a [f64],
        accuracy: Accuracy,
        (waves, bessel): (&'a mut [WaveBlock], &'a mut [BesselBlock]),
    ) -> Result<LayeredMap<'a>, StressError> {
        let size = self.map_size(load, radii_m, depths_m, accuracy)?;
        let given = MapSize { waves: waves.len(), bessel: bessel.len() };
        if given != size {
            return Err(StressError::LengthsDiffer { points: size.bessel, results: given.bessel });
        }
        let load = *load;
        let (panels, blocks_per_panel) = self.shared_panels(&load, radii_m, depths_m, accuracy)?;
        let rule = Rule::new(accuracy);
        for (slot, wave) in waves.iter_mut().zip(rule.waves(panels, &load)) {
            *slot = wave;
        }
        for (r_m, table) in radii_m.iter().zip(bessel.chunks_mut(size.waves.max(1))) {
            for (slot, wave) in table.iter_mut().zip(waves.iter()) {
                *slot = BesselBlock::at(wave, r_m / load.radius_m());
            }
        }
        Ok(LayeredMap {
            ground: self,
            load,
            radii_m,
            depths_m,
            accuracy,
            panels,
            blocks_per_panel,
            waves,
            bessel,
        })
    }

    /// Panels that serve every point of a map; rows use the first of them.
    fn shared_panels(
        &self,
        load: &LayeredLoad,
        radii_m: &[f64],
        depths_m: &[f64],
        accuracy: Accuracy,
    ) -> Result<(Panels, usize), StressError> {
        let mut farthest: f64 = 0.0;
        for r_m in radii_m {
            for z_m in depths_m {
                load.check_point(*r_m, *z_m)?;
            }
            farthest = farthest.max(r_m / load.radius_m());
        }
        let mut last: f64 = 0.0;
        let mut thickness: f64 = 0.0;
        for z_m in depths_m {
            for division in self.divisions() {
                let level = self.level(load.radius_m(), *z_m, accuracy, division)?;
                level.panels(farthest)?;
                last = last.max(level.last_wave());
                thickness = thickness.max(level.stack.thickness());
            }
        }
        Ok((Panels::new(last, farthest, thickness), Rule::new(accuracy).blocks()))
    }
}

impl LayeredMap<'_> {
    /// Number of rows (depths).
    #[must_use]
    pub fn rows(&self) -> usize {
        self.depths_m.len()
    }

    /// Computes one row: `out` has one place per distance, `scratch` as many blocks as `waves`.
    ///
    /// # Errors
    /// Lengths that do not fit, or a row that does not exist.
    pub fn row(
        &self,
        index: usize,
        scratch: &mut [KernelBlock],
        out: &mut [LayeredResponse],
    ) -> Result<(), StressError> {
        let differ = |points, results| StressError::LengthsDiffer { points, results };
        let z_m = *self.depths_m.get(index).ok_or(differ(self.depths_m.len(), index))?;
        if out.len() != self.radii_m.len() {
            return Err(differ(self.radii_m.len(), out.len()));
        }
        if scratch.len() < self.waves.len() {
            return Err(differ(self.waves.len(), scratch.len()));
        }
        let radius_m = self.load.radius_m();
        out.fill(LayeredResponse::default());
        for division in self.ground.divisions() {
            let level = self.ground.level(radius_m, z_m, self.accuracy, division)?;
            let used = self.blocks_to(level.last_wave());
            for (slot, wave) in scratch.iter_mut().zip(self.waves.iter().take(used)) {
                *slot = KernelBlock::at(&level.stack, &level.target, wave);
            }
            let tables = self.bessel.chunks(self.waves.len().max(1));
            // Without a wave (a plain half-space) there is no table, and the sums are zero.
            let tables = tables.chain(core::iter::repeat(&[][..]));
            for ((r_m, table), out) in self.radii_m.iter().zip(tables).zip(out.iter_mut()) {
                let mut sums = Sums::zero();
                for (kernel, bessel) in scratch.iter().take(used).zip(table) {
                    sums.add(kernel, bessel);
                }
                let response = self.ground.finish(&self.load, &level, (*r_m, z_m), &sums)?;
                out.add_scaled(&response, division.weight);
            }
        }
        Ok(())
    }

    /// Blocks of the panels that begin below a wave number.
    fn blocks_to(&self, last: f64) -> usize {
        let panels = self.panels.iter().take_while(|(from, _)| *from < last).count();
        panels.saturating_mul(self.blocks_per_panel)
    }
}
