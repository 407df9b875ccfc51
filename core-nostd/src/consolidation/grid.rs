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
//! with a, b = 2.2 at a drained top, base and 0 at a closed one: the end cells of a uniform layer
//! are 21 times thinner than the widest ones. The share of s that falls into a layer is its claim to
//! cells; stacks share by drained ends and the root of thickness. Each layer has at least three
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

/// Crowding at a drained end of a stack.
const CROWDING: f64 = 2.2;
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
    /// A layer outside any stack: equal cells, a small claim.
    fn free_draining(layer: &ColumnLayer, whole_m: f64) -> Self {
        let level = Crowding { top: 0.0, base: 0.0 };
        let claim = 0.25 * layer.thickness_m / whole_m;
        Self { crowding: level, from_x: 0.0, to_x: 1.0, claim, count: 2 }
    }

    /// Share of the layer's thickness above the fraction `part` of its cells.
    fn share_above(&self, part: f64) -> f64 {
        let (from_s, to_s) = (self.crowding.s(self.from_x), self.crowding.s(self.to_x));
        let x = self.crowding.x(from_s + (to_s - from_s) * part);
        ((x - self.from_x) / (self.to_x - self.from_x)).clamp(0.0, 1.0)
    }
}

/// The stack that a consolidating layer belongs to: its layers, and whether its ends drain.
fn stack_of(layers: &[ColumnLayer], index: usize) -> (&[ColumnLayer], usize, bool, bool) {
    let (above, here) = layers.split_at(index);
    let start =
        above.iter().rposition(|layer| layer.drained).map_or(0, |last| last.saturating_add(1));
    let length = here.iter().position(|layer| layer.drained).unwrap_or(here.len());
    let end = index.saturating_add(length);
    (layers.get(start..end).unwrap_or(&[]), start, start > 0, end < layers.len())
}

/// Place of a consolidating layer.
fn place(
    layers: &[ColumnLayer],
    index: usize,
    top: Boundary,
    base: Boundary,
    whole_m: f64,
) -> Place {
    let (stack, start, drained_above, drained_below) = stack_of(layers, index);
    let end = |drains: bool| if drains { CROWDING } else { 0.0 };
    let crowding = Crowding {
        top: end(drained_above || top == Boundary::Drained),
        base: end(drained_below || base == Boundary::Drained),
    };
    let thickness_m: f64 = stack.iter().map(|layer| layer.thickness_m).sum();
    let root_time: f64 = stack.iter().map(ColumnLayer::root_time).sum();
    let share = |layer: &ColumnLayer| {
        BY_THICKNESS * layer.thickness_m / thickness_m
            + (1.0 - BY_THICKNESS) * layer.root_time() / root_time
    };
    let own = index.saturating_sub(start);
    let from_x: f64 = stack.iter().take(own).map(share).sum();
    let to_x = from_x + stack.get(own).map_or(0.0, share);
    // Rounding of the last sum must not reach past the end.
    let to_x = if own.saturating_add(1) == stack.len() { 1.0 } else { to_x };
    let ends = if crowding.top > 0.0 && crowding.base > 0.0 { 2.0 } else { 1.0 };
    let claim = ends * libm::sqrt(thickness_m / whole_m) * (crowding.s(to_x) - crowding.s(from_x));
    Place { crowding, from_x, to_x, claim, count: 3 }
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
    let whole_m = layers.iter().map(|layer| layer.thickness_m).sum();
    let mut places = [NO_PLACE; CELLS];
    for ((index, layer), own) in layers.iter().enumerate().zip(&mut places) {
        *own = if layer.drained {
            Place::free_draining(layer, whole_m)
        } else {
            place(layers, index, top, base, whole_m)
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
