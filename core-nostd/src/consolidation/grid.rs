//! Cells of a column: how many each layer gets and where their faces lie.
//!
//! # Rule
//! Every layer interface is a face, and all cells are used. Free-draining layers part the column
//! into stacks of consolidating layers. Down a stack runs a coordinate x from 0 to 1 that grows
//! with diffusion time and with depth,
//!
//! ```text
//! dx = 0.75 dz/sqrt(cv) / (sum of h/sqrt(cv)) + 0.25 dz / (sum of h)
//! ```
//!
//! and cells are equal steps of s, where x follows a hyperbolic tangent that is dense at each
//! drained end of the stack and level at a closed one:
//!
//! ```text
//! x(s) = (tanh((a + b) s - a) + tanh a) / (tanh a + tanh b)
//! ```
//!
//! with a, b = min(2.2, 0.55 ln(cells)) at a drained top, base (the cells of the stack, or twice as
//! many if it drains at one end) and 0 at a closed one: the end cells of one uniform layer over 60
//! cells are 21 times thinner than the widest ones. The share of s that falls into a layer is its claim to
//! cells; stacks share by drained ends and the cube root of thickness. Each layer has at least three
//! cells (a free-draining one two); each further cell goes to the largest claim per cell already
//! given.

use super::Error;
use super::error::{CH, CV, PERMEABILITY, THICKNESS};
use crate::ground;
use serde::{Deserialize, Serialize};

/// Flow at the top or base of the column.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Boundary {
    /// Excess pore pressure is zero there.
    Drained,
    /// No flow.
    Closed,
}

impl From<ground::BaseDrainage> for Boundary {
    fn from(base: ground::BaseDrainage) -> Self {
        match base {
            ground::BaseDrainage::Drained => Self::Drained,
            ground::BaseDrainage::Closed => Self::Closed,
        }
    }
}

/// What consolidation needs to know of a layer.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ColumnLayer {
    /// Thickness, m.
    pub thickness_m: f64,
    /// Coefficient of consolidation for vertical flow, m2/s.
    pub cv_m2_per_s: f64,
    /// Coefficient of consolidation for horizontal flow to drains, m2/s; used where drains pass.
    pub ch_m2_per_s: f64,
    /// Vertical permeability, m/s. With cv it gives the compressibility mv = k/(cv gamma_w).
    pub permeability_m_per_s: f64,
    /// Free-draining: no excess pore pressure, and neighbours drain into it.
    pub drained: bool,
}

impl From<&ground::Layer> for ColumnLayer {
    fn from(layer: &ground::Layer) -> Self {
        Self {
            thickness_m: layer.thickness_m,
            cv_m2_per_s: layer.cv_m2_per_s,
            ch_m2_per_s: layer.ch_m2_per_s,
            permeability_m_per_s: layer.permeability_m_per_s,
            drained: layer.drained,
        }
    }
}

impl ColumnLayer {
    /// Checks each value; `index` is the place of the layer from the top, counted from 0.
    fn check(&self, index: usize) -> Result<(), Error> {
        THICKNESS.check_at(self.thickness_m, index)?;
        CV.check_at(self.cv_m2_per_s, index)?;
        CH.check_at(self.ch_m2_per_s, index)?;
        PERMEABILITY.check_at(self.permeability_m_per_s, index)?;
        Ok(())
    }

    /// Diffusion time to the power of one half, s^0.5.
    fn root_time(&self) -> f64 {
        self.thickness_m / libm::sqrt(self.cv_m2_per_s)
    }
}

/// One cell.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Cell {
    /// Layer, counted from 0.
    pub layer: usize,
    /// Depth of the upper face, m.
    pub top_m: f64,
    /// Thickness, m (not the difference of rounded depths).
    pub thickness_m: f64,
}

const NO_CELL: Cell = Cell { layer: 0, top_m: 0.0, thickness_m: 0.0 };

/// Greatest crowding at a drained end of a stack, and its growth with the cells there.
const CROWDING: f64 = 2.2;
const CROWDING_PER_LOG: f64 = 0.55;
/// Share of thickness in the coordinate of a stack; the rest is diffusion time.
const BY_THICKNESS: f64 = 0.25;

/// The mapping of one stack.
#[derive(Clone, Copy)]
struct Crowding {
    top: f64,
    base: f64,
}

impl Crowding {
    fn x(self, s: f64) -> f64 {
        let (top, base) = (libm::tanh(self.top), libm::tanh(self.base));
        if top + base == 0.0 {
            return s;
        }
        (libm::tanh((self.top + self.base) * s - self.top) + top) / (top + base)
    }

    /// The inverse of `x`.
    fn s(self, x: f64) -> f64 {
        let (top, base) = (libm::tanh(self.top), libm::tanh(self.base));
        if top + base == 0.0 {
            return x;
        }
        ((libm::atanh(x * (top + base) - top) + self.top) / (self.top + self.base)).clamp(0.0, 1.0)
    }
}

/// A layer in its stack.
#[derive(Clone, Copy)]
struct Place {
    crowding: Crowding,
    /// Its ends in the coordinate of the stack.
    from_x: f64,
    to_x: f64,
    /// Claim to cells.
    claim: f64,
    count: u16,
}

impl Place {
    /// Share of the layer's thickness above the fraction `part` of its cells.
    fn share_above(&self, part: f64) -> f64 {
        let (from_s, to_s) = (self.crowding.s(self.from_x), self.crowding.s(self.to_x));
        let x = self.crowding.x(from_s + (to_s - from_s) * part);
        ((x - self.from_x) / (self.to_x - self.from_x)).clamp(0.0, 1.0)
    }
}

/// Consolidating layers between free-draining ones or the ends of the column.
pub(super) struct Stack<'a> {
    layers: &'a [ColumnLayer],
    /// Place of its first layer in the column.
    start: usize,
    drains_top: bool,
    drains_base: bool,
    pub(super) thickness_m: f64,
}

impl<'a> Stack<'a> {
    /// The stack that the consolidating layer `index` belongs to.
    pub(super) fn of(
        layers: &'a [ColumnLayer],
        index: usize,
        top: Boundary,
        base: Boundary,
    ) -> Self {
        let mut above = layers.iter().take(index);
        let start = above.rposition(|layer| layer.drained).map_or(0, |seam| seam.saturating_add(1));
        let mut below = layers.iter().enumerate().skip(index);
        let end = below.find(|(_, layer)| layer.drained).map_or(layers.len(), |seam| seam.0);
        let own = layers.get(start..end).unwrap_or(&[]);
        Self {
            layers: own,
            start,
            drains_top: start > 0 || top == Boundary::Drained,
            drains_base: end < layers.len() || base == Boundary::Drained,
            thickness_m: own.iter().map(|layer| layer.thickness_m).sum(),
        }
    }

    /// Whether it drains at all.
    pub(super) const fn drains(&self) -> bool {
        self.drains_top || self.drains_base
    }

    /// Drained ends, at least 1.
    pub(super) const fn drained_ends(&self) -> f64 {
        if self.drains_top && self.drains_base { 2.0 } else { 1.0 }
    }

    /// Claim to cells of the whole stack.
    fn claim(&self, whole_m: f64) -> f64 {
        self.drained_ends() * libm::cbrt(self.thickness_m / whole_m)
    }

    /// Crowding for a stack of about `cells` cells.
    fn crowding(&self, cells: f64) -> Crowding {
        let at_one_end = cells / self.drained_ends();
        let strength = (CROWDING_PER_LOG * libm::log(2.0 * at_one_end)).clamp(0.5, CROWDING);
        let end = |drains: bool| if drains { strength } else { 0.0 };
        Crowding { top: end(self.drains_top), base: end(self.drains_base) }
    }

    /// Place of the layer `index` of the column.
    fn place(&self, index: usize, claim: f64, cells: f64) -> Place {
        let root_time: f64 = self.layers.iter().map(ColumnLayer::root_time).sum();
        let share = |layer: &ColumnLayer| {
            BY_THICKNESS * layer.thickness_m / self.thickness_m
                + (1.0 - BY_THICKNESS) * layer.root_time() / root_time
        };
        let own = index.saturating_sub(self.start);
        let from_x: f64 = self.layers.iter().take(own).map(share).sum();
        // Rounding of the last sum must not stop short of the end or reach past it.
        let to_x = match self.layers.get(own) {
            Some(layer) if own.saturating_add(1) < self.layers.len() => from_x + share(layer),
            _ => 1.0,
        };
        let crowding = self.crowding(cells);
        let share = crowding.s(to_x) - crowding.s(from_x);
        Place { crowding, from_x, to_x, claim: claim * share, count: 3 }
    }
}

const NO_PLACE: Place = Place {
    crowding: Crowding { top: 0.0, base: 0.0 },
    from_x: 0.0,
    to_x: 1.0,
    claim: 0.0,
    count: 0,
};

/// Places of all layers in a column of `cells` cells; the first `layers.len()` count.
fn places<const CELLS: usize>(
    layers: &[ColumnLayer],
    top: Boundary,
    base: Boundary,
    cells: usize,
) -> Result<[Place; CELLS], Error> {
    if layers.is_empty() {
        return Err(Error::NoLayers);
    }
    let needed: usize = layers.iter().map(|layer| if layer.drained { 2 } else { 3 }).sum();
    if needed > cells || cells > CELLS {
        return Err(Error::TooFewCells { layers: layers.len(), cells, needed });
    }
    let whole_m: f64 = layers.iter().map(|layer| layer.thickness_m).sum();
    let free_claim = |layer: &ColumnLayer| 0.25 * layer.thickness_m / whole_m;
    let stack = |index: usize| Stack::of(layers, index, top, base);
    let claims = layers.iter().enumerate().map(|(index, layer)| {
        if layer.drained {
            return free_claim(layer);
        }
        let stack = stack(index);
        stack.claim(whole_m) * layer.thickness_m / stack.thickness_m
    });
    let cells_per_claim = f64::from(u16::try_from(cells).unwrap_or(u16::MAX)) / claims.sum::<f64>();
    let mut places = [NO_PLACE; CELLS];
    for ((index, layer), own) in layers.iter().enumerate().zip(&mut places) {
        *own = if layer.drained {
            Place { claim: free_claim(layer), count: 2, ..NO_PLACE }
        } else {
            let stack = stack(index);
            let claim = stack.claim(whole_m);
            stack.place(index, claim, claim * cells_per_claim)
        };
    }
    for _ in needed..cells {
        let mut neediest: Option<(f64, &mut u16)> = None;
        for own in places.iter_mut().take(layers.len()) {
            let claim = own.claim / f64::from(own.count);
            // A hair's breadth, so that rounding does not decide between equal layers.
            if neediest.as_ref().is_none_or(|(most, _)| claim > most * (1.0 + 1e-9)) {
                neediest = Some((claim, &mut own.count));
            }
        }
        if let Some((_, count)) = neediest {
            *count = count.saturating_add(1);
        }
    }
    Ok(places)
}

/// Lays out the cells. With `halved` the cells are those of a column of half as many, each cut in
/// two, so that the two grids differ in width of cell alone.
pub(super) fn lay_out<const CELLS: usize>(
    layers: &[ColumnLayer],
    top: Boundary,
    base: Boundary,
    halved: bool,
) -> Result<[Cell; CELLS], Error> {
    for (index, layer) in layers.iter().enumerate() {
        layer.check(index)?;
    }
    let parts: u16 = if halved { 2 } else { 1 };
    let places = places::<CELLS>(layers, top, base, if halved { CELLS >> 1 } else { CELLS })?;
    let mut cells = [NO_CELL; CELLS];
    let mut free = cells.iter_mut();
    let mut layer_top_m = 0.0;
    for (index, (layer, place)) in layers.iter().zip(&places).enumerate() {
        let pieces = place.count.saturating_mul(parts);
        let mut above = 0.0;
        for piece in 1..=pieces {
            let upto = if piece == pieces {
                1.0
            } else {
                place.share_above(f64::from(piece) / f64::from(pieces))
            };
            if let Some(cell) = free.next() {
                *cell = Cell {
                    layer: index,
                    top_m: layer_top_m + layer.thickness_m * above,
                    thickness_m: layer.thickness_m * (upto - above),
                };
            }
            above = upto;
        }
        layer_top_m += layer.thickness_m;
    }
    Ok(cells)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn clay(thickness_m: f64, cv_m2_per_s: f64) -> ColumnLayer {
        ColumnLayer {
            thickness_m,
            cv_m2_per_s,
            ch_m2_per_s: cv_m2_per_s,
            permeability_m_per_s: 1e-9,
            drained: false,
        }
    }

    #[test]
    fn every_interface_is_a_face_and_all_cells_are_used() {
        let layers = [
            clay(1.5, 3e-7),
            clay(4.0, 6e-8),
            ColumnLayer { drained: true, ..clay(0.7, 1.0) },
            clay(6.0, 1e-7),
        ];
        let cells = lay_out::<60>(&layers, Boundary::Drained, Boundary::Closed, false).unwrap();
        let mut top_m = 0.0;
        for (index, layer) in layers.iter().enumerate() {
            let own = cells.iter().filter(|cell| cell.layer == index);
            assert!((own.clone().next().unwrap().top_m - top_m).abs() < 1e-12);
            let sum: f64 = own.map(|cell| cell.thickness_m).sum();
            assert!((sum - layer.thickness_m).abs() < 1e-12, "layer {index} is filled");
            top_m += layer.thickness_m;
        }
        assert!(cells.iter().all(|cell| cell.thickness_m > 0.0));
    }

    #[test]
    fn cells_crowd_at_the_drain_and_widen_to_the_closed_base() {
        let cells =
            lay_out::<60>(&[clay(5.0, 1e-7)], Boundary::Drained, Boundary::Closed, false).unwrap();
        assert!(cells.windows(2).all(|pair| pair[0].thickness_m < pair[1].thickness_m));
        assert!(cells[0].thickness_m < 0.1 * cells[59].thickness_m);
    }

    #[test]
    fn halving_cuts_each_cell_in_two() {
        let layers = [clay(1.0, 3e-7), clay(4.0, 6e-8)];
        let coarse = lay_out::<20>(&layers, Boundary::Drained, Boundary::Drained, false).unwrap();
        let fine = lay_out::<40>(&layers, Boundary::Drained, Boundary::Drained, true).unwrap();
        for (whole, halves) in coarse.iter().zip(fine.chunks(2)) {
            assert!((whole.top_m - halves[0].top_m).abs() < 1e-14);
            let both = halves[0].thickness_m + halves[1].thickness_m;
            assert!((whole.thickness_m - both).abs() < 1e-14);
        }
    }

    #[test]
    fn too_many_layers_for_the_cells_are_refused() {
        let refused =
            lay_out::<10>(&[clay(1.0, 1e-7); 4], Boundary::Drained, Boundary::Drained, false);
        assert_eq!(refused, Err(Error::TooFewCells { layers: 4, cells: 10, needed: 12 }));
        let refused = lay_out::<10>(&[], Boundary::Drained, Boundary::Drained, false);
        assert_eq!(refused, Err(Error::NoLayers));
    }
}
