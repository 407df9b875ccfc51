//! The numbers of a column that a hand check needs, at one depth.

use super::grid::Stack;
use super::{Column, Error, State, Stepper};
use crate::working::{Step, Working};

/// A column at one time, as a hand check sees it.
#[derive(Debug, Clone, Copy)]
pub struct Seen<'a, const CELLS: usize> {
    /// The ground that the stepper was made of.
    pub column: &'a Column<'a>,
    /// Its state.
    pub state: &'a State<CELLS>,
    /// Total stress increments since rest, by cell, kPa.
    pub applied_kpa: &'a [f64; CELLS],
    /// Time since loading began, s.
    pub elapsed_s: f64,
}

impl<const CELLS: usize> Stepper<CELLS> {
    /// Writes the key numbers of this column at a depth: time factor and degree of consolidation
    /// of the layer there, mu and sink rate of the drains, excess pressure, and the degree of the
    /// whole column.
    ///
    /// The time factor is that of the layer's own cv over the drainage path of all the layers
    /// between the nearest free-draining faces: exact for one layer loaded at once, a guide
    /// otherwise.
    ///
    /// # Errors
    /// A depth outside the column, or drains that do not fit together.
    pub fn describe_at(
        &self,
        seen: &Seen<'_, CELLS>,
        depth_m: f64,
        working: &mut impl Working,
    ) -> Result<(), Error> {
        let excess_kpa = self.excess_at_kpa(seen.state, depth_m)?;
        if !working.wanted() {
            return Ok(());
        }
        let cell = self.cells.iter().rfind(|cell| cell.top_m <= depth_m);
        let index = cell.map_or(0, |cell| cell.layer);
        self.describe_layer(seen, index, working);
        describe_drains(seen.column, index, depth_m, working)?;
        working.step(Step {
            name: "excess pore pressure at the depth",
            value: excess_kpa,
            unit: "kPa",
            formula: "between the cells of the implicit column, at depth z",
            inputs: &[("z", depth_m)],
            source: "implicit finite volumes, two stages (Alexander 1977)",
        });
        let final_m = self.settlement_m(&self.at_rest(), seen.applied_kpa);
        if final_m != 0.0 {
            let now_m = self.settlement_m(seen.state, seen.applied_kpa);
            working.step(Step {
                name: "degree of consolidation of the column",
                value: now_m / final_m,
                unit: "",
                formula: "U = sum mv h (ds - u) / sum mv h ds",
                inputs: &[("sum mv h (ds - u)", now_m), ("sum mv h ds", final_m)],
                source: "",
            });
        }
        Ok(())
    }

    /// Time factor and degree of one layer.
    fn describe_layer(&self, seen: &Seen<'_, CELLS>, index: usize, working: &mut impl Working) {
        let column = seen.column;
        let Some(layer) = column.layers.get(index) else { return };
        if layer.drained {
            working.step(Step {
                name: "degree of consolidation of the layer",
                value: 1.0,
                unit: "",
                formula: "a free-draining layer holds no excess pressure",
                inputs: &[],
                source: "",
            });
            return;
        }
        let stack = Stack::of(column.layers, index, column.top, column.base);
        if stack.drains() {
            let path_m = stack.thickness_m / stack.drained_ends();
            working.step(Step {
                name: "vertical time factor of the layer",
                value: layer.cv_m2_per_s * seen.elapsed_s / (path_m * path_m),
                unit: "",
                formula: "Tv = cv t / H^2",
                inputs: &[("cv", layer.cv_m2_per_s), ("t", seen.elapsed_s), ("H", path_m)],
                source: "Terzaghi 1925",
            });
        }
        let mut held = 0.0;
        let mut raised = 0.0;
        let pressures = seen.state.excess_kpa.iter().zip(seen.applied_kpa);
        for ((cell, storage), (excess, applied)) in
            self.cells.iter().zip(&self.storage_m_per_kpa).zip(pressures)
        {
            if cell.layer == index {
                held += storage * excess;
                raised += storage * applied;
            }
        }
        if raised != 0.0 {
            working.step(Step {
                name: "degree of consolidation of the layer",
                value: 1.0 - held / raised,
                unit: "",
                formula: "U = 1 - sum mv h u / sum mv h ds",
                inputs: &[("sum mv h u", held), ("sum mv h ds", raised)],
                source: "",
            });
        }
    }
}

/// mu and the sink rate of the drains at a depth, where they pass.
fn describe_drains(
    column: &Column<'_>,
    index: usize,
    depth_m: f64,
    working: &mut impl Working,
) -> Result<(), Error> {
    let (Some(drains), Some(layer)) = (column.drains, column.layers.get(index)) else {
        return Ok(());
    };
    if layer.drained || depth_m < drains.top_m || depth_m > drains.base_m {
        return Ok(());
    }
    let flow = drains.radial_flow()?;
    let kh = layer.ch_m2_per_s * layer.permeability_m_per_s / layer.cv_m2_per_s;
    let well = drains.well_term(&flow, depth_m, kh);
    working.step(Step {
        name: "mu of the drains, smear included",
        value: flow.mu(),
        unit: "",
        formula: "mu = n^2/(n^2-1) (ln(n/s) + eta ln s - 3/4) + s^2/(n^2-1) (1 - s^2/(4 n^2)) \
                  + eta/(n^2-1) ((s^4-1)/(4 n^2) - s^2 + 1)",
        inputs: &[
            ("n", flow.spacing_ratio()),
            ("s", drains.smear_ratio),
            ("eta", drains.permeability_ratio_h_over_s),
        ],
        source: "Barron 1948; Hansbo 1981",
    });
    if let Some(discharge) = drains.discharge_m3_per_s {
        working.step(Step {
            name: "well resistance term",
            value: well,
            unit: "",
            formula: "w = pi z (2 l - z) (kh/qw) (1 - 1/n^2), z from the top of the drain",
            inputs: &[
                ("z", depth_m - drains.top_m),
                ("l", drains.length_m),
                ("kh", kh),
                ("qw", discharge),
                ("n", flow.spacing_ratio()),
            ],
            source: "Hansbo 1981",
        });
    }
    let spacing_m = drains.equivalent_spacing_m();
    working.step(Step {
        name: "sink rate of the drains",
        value: 8.0 * layer.ch_m2_per_s / (spacing_m * spacing_m * (flow.mu() + well)),
        unit: "1/s",
        formula: "8 ch / (De^2 (mu + w))",
        inputs: &[("ch", layer.ch_m2_per_s), ("De", spacing_m), ("mu", flow.mu()), ("w", well)],
        source: "Hansbo 1981",
    });
    Ok(())
}
