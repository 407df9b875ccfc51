//! The invented ground below one place in plan: excess pore pressure by an explicit finite
//! difference in thin cells, strain cell by cell.

use crate::elastic::{Increment, disc, ring};
use crate::site::{Compressibility, Drainage, Factors, Layer, Pattern, Preconsolidation};
use crate::site::{Site, Tank, YEAR_S};
use core::f64::consts::PI;

/// Cell height, m. Layers are whole numbers of cells.
pub const CELL_M: f64 = 0.1;
/// Time step while the water is watched, s.
pub const STEP_S: i64 = 900;
/// Time step from the dead load to the baseline, s.
const EARLY_STEP_S: i64 = 21_600;
/// Age at which secondary compression of a yielded cell becomes felt, s.
const SECONDARY_AGE_S: f64 = 30.0 * 86_400.0;

/// One thin slice of the ground.
#[derive(Debug)]
struct Cell {
    drained: bool,
    response: f64,
    /// Storage k/cv, 1/m per m of head.
    storage: f64,
    permeability_m_per_s: f64,
    /// Rate at which drains empty the cell, 1/s.
    drain_rate_per_s: f64,
    initial_kpa: f64,
    yield_kpa: f64,
    largest_kpa: f64,
    yielded_at_s: Option<f64>,
    virgin: f64,
    recompression: f64,
    modulus_kpa: Option<f64>,
    secondary: f64,
    young_undrained_kpa: f64,
    liquid: Increment,
    dead: Increment,
    excess_kpa: f64,
}

/// The ground below one place, at one moment.
#[derive(Debug)]
pub struct Column {
    cells: Vec<Cell>,
    base: Drainage,
    now_s: i64,
    liquid_kpa: f64,
}

impl Column {
    /// Ground at a place in plan under the dead loads, consolidated up to the baseline.
    pub fn new(site: &Site, factors: &Factors, x_m: f64, y_m: f64) -> Self {
        let mut column = Column {
            cells: cells(site, factors, x_m, y_m),
            base: site.base.drainage,
            now_s: site.dead_load_since.as_second(),
            liquid_kpa: 0.0,
        };
        for cell in &mut column.cells {
            cell.excess_kpa = cell.response * cell.dead.vertical;
        }
        let baseline_s = site.baseline.as_second();
        while column.now_s < baseline_s {
            column.advance(EARLY_STEP_S.min(baseline_s - column.now_s), 0.0);
        }
        column.note_largest_stress();
        column
    }

    /// Goes on by `step_s` while the liquid pressure becomes `liquid_kpa`.
    pub fn advance(&mut self, step_s: i64, liquid_kpa: f64) {
        let rise_kpa = liquid_kpa - self.liquid_kpa;
        self.diffuse(step_s as f64);
        for cell in self.cells.iter_mut().filter(|c| !c.drained) {
            cell.excess_kpa += cell.response * cell.liquid.vertical * rise_kpa;
        }
        self.liquid_kpa = liquid_kpa;
        self.now_s += step_s;
    }

    fn diffuse(&mut self, step_s: f64) {
        let faces: Vec<f64> = self.cells.windows(2).map(face_flow).collect();
        let last = self.cells.len() - 1;
        for (i, cell) in self.cells.iter_mut().enumerate() {
            if cell.drained {
                continue;
            }
            let above = if i > 0 {
                faces[i - 1]
            } else {
                2.0 * cell.permeability_m_per_s * cell.excess_kpa
            };
            let below = match faces.get(i) {
                Some(flow) => -flow,
                None if i == last && self.base == Drainage::Drained => {
                    2.0 * cell.permeability_m_per_s * cell.excess_kpa
                }
                None => 0.0,
            };
            let out = (above + below) / (CELL_M * CELL_M * cell.storage);
            cell.excess_kpa -= step_s * (out + cell.drain_rate_per_s * cell.excess_kpa);
        }
    }

    /// Excess pore pressure at a depth, kPa, linear between cell centres.
    pub fn excess_kpa(&self, depth_m: f64) -> f64 {
        let place = (depth_m / CELL_M - 0.5).max(0.0);
        let i = (place as usize).min(self.cells.len() - 2);
        let part = (place - i as f64).min(1.0);
        self.cells[i].excess_kpa * (1.0 - part) + self.cells[i + 1].excess_kpa * part
    }

    /// Remembers the largest effective stress so far and when each cell yielded.
    pub fn note_largest_stress(&mut self) {
        let (now_s, liquid_kpa) = (self.now_s as f64, self.liquid_kpa);
        for cell in &mut self.cells {
            let stress = cell.effective_kpa(liquid_kpa);
            cell.largest_kpa = cell.largest_kpa.max(stress);
            if stress > cell.yield_kpa && cell.yielded_at_s.is_none() {
                cell.yielded_at_s = Some(now_s);
            }
        }
    }

    /// Compression of all that lies below a depth, mm, since the ground was untouched.
    pub fn settlement_mm(&self, depth_m: f64) -> f64 {
        let first = libm::floor(depth_m / CELL_M + 1e-9) as usize;
        self.cells
            .iter()
            .skip(first)
            .map(|c| c.strain(self.liquid_kpa, self.now_s as f64) * CELL_M * 1000.0)
            .sum()
    }
}

/// Upward flow through the face between two cells, times the cell height, by kPa of excess.
fn face_flow(pair: &[Cell]) -> f64 {
    let (upper, lower) = (&pair[0], &pair[1]);
    let conductance = match (upper.drained, lower.drained) {
        (true, true) => 0.0,
        // A drained cell holds no excess up to its face: only half a cell resists.
        (true, false) => 2.0 * lower.permeability_m_per_s,
        (false, true) => 2.0 * upper.permeability_m_per_s,
        (false, false) => {
            let (a, b) = (upper.permeability_m_per_s, lower.permeability_m_per_s);
            2.0 * a * b / (a + b)
        }
    };
    conductance * (lower.excess_kpa - upper.excess_kpa)
}

impl Cell {
    fn effective_kpa(&self, liquid_kpa: f64) -> f64 {
        let added = self.dead.vertical + self.liquid.vertical * liquid_kpa;
        (self.initial_kpa + added - self.excess_kpa).max(1.0)
    }

    fn strain(&self, liquid_kpa: f64, now_s: f64) -> f64 {
        let stress = self.effective_kpa(liquid_kpa);
        if let Some(modulus_kpa) = self.modulus_kpa {
            return (stress - self.initial_kpa) / modulus_kpa;
        }
        let largest = self.largest_kpa.max(stress);
        let virgin = self.virgin * libm::log10((largest / self.yield_kpa).max(1.0));
        let reached = largest.max(self.yield_kpa);
        let first_loading = self.recompression * libm::log10(self.yield_kpa / self.initial_kpa);
        let unloading = self.recompression * libm::log10(reached / stress);
        let secondary = self.yielded_at_s.map_or(0.0, |since_s| {
            self.secondary * libm::log10(1.0 + (now_s - since_s) / SECONDARY_AGE_S)
        });
        let undrained = (self.dead.undrained_strain_kpa()
            + self.liquid.undrained_strain_kpa() * liquid_kpa)
            / self.young_undrained_kpa;
        virgin + first_loading - unloading + secondary + undrained
    }
}

fn cells(site: &Site, factors: &Factors, x_m: f64, y_m: f64) -> Vec<Cell> {
    let mut cells = Vec::new();
    let (mut top_m, mut total_kpa) = (0.0, 0.0);
    for layer in &site.layers {
        let count = libm::round(layer.thickness_m / CELL_M) as usize;
        for k in 0..count {
            let depth_m = top_m + (k as f64 + 0.5) * CELL_M;
            let unit_weight = if depth_m < site.water.water_table_m {
                layer.unit_weight_above_water_kn_m3
            } else {
                layer.unit_weight_below_water_kn_m3
            };
            let mid_kpa = total_kpa + unit_weight * CELL_M / 2.0;
            total_kpa += unit_weight * CELL_M;
            let water_m = (depth_m - site.water.water_table_m).max(0.0);
            let initial_kpa = mid_kpa - site.water.unit_weight_kn_m3 * water_m;
            let mut cell = cell(layer, factors, initial_kpa);
            cell.drain_rate_per_s = drain_rate_per_s(site, layer, factors, x_m, y_m, depth_m);
            (cell.liquid, cell.dead) = loads(&site.tanks, &site.liquids[0], x_m, y_m, depth_m);
            cells.push(cell);
        }
        top_m += count as f64 * CELL_M;
    }
    cells
}

fn cell(layer: &Layer, factors: &Factors, initial_kpa: f64) -> Cell {
    let (virgin, recompression, modulus_kpa) = match layer.compressibility {
        Compressibility::Index { void_ratio, cc, cr } => {
            (cc / (1.0 + void_ratio), cr / (1.0 + void_ratio), None)
        }
        Compressibility::Ratio { compression_ratio, recompression_ratio } => {
            (compression_ratio, recompression_ratio, None)
        }
        Compressibility::Modulus { constrained_modulus_kpa } => {
            (0.0, 0.0, Some(constrained_modulus_kpa / factors.compressibility))
        }
    };
    let yield_kpa = match layer.preconsolidation {
        Preconsolidation::Ocr(ratio) => ratio * initial_kpa,
        Preconsolidation::PopKpa(pressure) => initial_kpa + pressure,
        Preconsolidation::ValueKpa(value) => value.max(initial_kpa),
    };
    let cv = layer.cv_m2_per_year / YEAR_S;
    Cell {
        drained: layer.drained,
        response: if layer.drained {
            0.0
        } else {
            layer.pore_pressure_response * factors.pore_pressure_response
        },
        storage: layer.permeability_m_per_s / cv,
        permeability_m_per_s: layer.permeability_m_per_s * factors.cv,
        drain_rate_per_s: 0.0,
        initial_kpa,
        yield_kpa,
        largest_kpa: initial_kpa,
        yielded_at_s: None,
        virgin: virgin * factors.compressibility,
        recompression: recompression * factors.compressibility,
        modulus_kpa,
        secondary: layer.secondary_ratio,
        young_undrained_kpa: layer.young_undrained_kpa * factors.young,
        liquid: Increment::default(),
        dead: Increment::default(),
        excess_kpa: 0.0,
    }
}

/// Rate of equal-strain flow to a drain with smear (Hansbo 1981), without well resistance: the
/// invented drains run freely, which the site file's best estimate does not quite grant them.
fn drain_rate_per_s(
    site: &Site,
    layer: &Layer,
    factors: &Factors,
    x_m: f64,
    y_m: f64,
    depth_m: f64,
) -> f64 {
    let Some(drains) = &site.drains else { return 0.0 };
    let offset_m = libm::hypot(x_m - site.tanks[0].x_m, y_m - site.tanks[0].y_m);
    if layer.drained
        || offset_m > drains.zone_radius_m
        || !(drains.top_m..=drains.base_m).contains(&depth_m)
    {
        return 0.0;
    }
    // Equal areas: a hexagon or a square of the spacing against a circle.
    let area_per_spacing2: f64 = match drains.pattern {
        Pattern::Triangular => libm::sqrt(3.0) / 2.0,
        Pattern::Square => 1.0,
    };
    let diameter_m = drains.spacing_m * libm::sqrt(4.0 * area_per_spacing2 / PI);
    let n = diameter_m / drains.equivalent_diameter_m;
    let resistance = libm::log(n / drains.smear_ratio)
        + drains.permeability_ratio_h_over_s * libm::log(drains.smear_ratio)
        - 0.75;
    8.0 * layer.ch_m2_per_year * factors.ch / YEAR_S / (diameter_m * diameter_m * resistance)
}

/// Increment by kPa of liquid in the tank under test, and by everything that stands still.
fn loads(
    tanks: &[Tank],
    liquid: &crate::site::Liquid,
    x_m: f64,
    y_m: f64,
    depth_m: f64,
) -> (Increment, Increment) {
    let mut per_kpa = Increment::default();
    let mut dead = Increment::default();
    for (i, tank) in tanks.iter().enumerate() {
        let radius_m = tank.diameter_m / 2.0;
        let offset_m = libm::hypot(x_m - tank.x_m, y_m - tank.y_m);
        let disc = disc(radius_m, offset_m, depth_m);
        let ring = ring(radius_m, offset_m, depth_m);
        let disc_kpa = tank.floor_pressure_kpa + tank.pad_pressure_kpa - tank.excavation_relief_kpa
            + liquid.unit_weight_kn_m3 * tank.liquid_level_m;
        let line_kn_m = tank.shell_line_load_kn_m + tank.ring_line_load_kn_m;
        dead.vertical += disc.vertical * disc_kpa + ring.vertical * line_kn_m;
        dead.sum += disc.sum * disc_kpa + ring.sum * line_kn_m;
        if i == 0 {
            per_kpa = disc;
        }
    }
    (per_kpa, dead)
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    const LIKELY: Factors =
        Factors { compressibility: 1.0, cv: 1.0, ch: 1.0, pore_pressure_response: 1.0, young: 1.0 };

    /// One layer of 4 m, drained above and below, under a tank so wide that the stress is even.
    fn one_layer(baseline: &str, drains: serde_json::Value) -> Site {
        serde_json::from_value(json!({
            "water": {"water_table_m": 0.0, "unit_weight_kn_m3": 9.81},
            "layers": [{"thickness_m": 4.0, "unit_weight_above_water_kn_m3": 17.0,
                "unit_weight_below_water_kn_m3": 17.0,
                "compressibility": {"compression_ratio": 0.2, "recompression_ratio": 0.02},
                "preconsolidation": {"ocr": 1.0}, "secondary_ratio": 0.0, "cv_m2_per_year": 1.0,
                "ch_m2_per_year": 3.0, "permeability_m_per_s": 1e-9, "young_undrained_kpa": 1e9,
                "pore_pressure_response": 1.0, "drained": false}],
            "base": {"drainage": "drained"}, "drains": drains,
            "tanks": [{"x_m": 0.0, "y_m": 0.0, "diameter_m": 4000.0, "floor_pressure_kpa": 100.0,
                "pad_pressure_kpa": 0.0, "excavation_relief_kpa": 0.0,
                "shell_line_load_kn_m": 0.0, "ring_line_load_kn_m": 0.0}],
            "liquids": [{"unit_weight_kn_m3": 9.81}],
            "dead_load_since": "2025-01-01T00:00:00Z", "baseline": baseline,
            "stages": [], "band": {"cases": []}, "instruments": [], "readings": []
        }))
        .unwrap()
    }

    fn mean_excess_kpa(column: &Column) -> f64 {
        column.cells.iter().map(|c| c.excess_kpa).sum::<f64>() / column.cells.len() as f64
    }

    #[test]
    fn half_of_the_excess_is_gone_at_the_time_factor_of_terzaghi() {
        // U = 50 % at Tv = 0.1967 (Taylor 1948, table): 0.1967 x 2^2 / 1 m2/year = 287.4 days.
        let column =
            Column::new(&one_layer("2025-10-15T09:00:00Z", json!(null)), &LIKELY, 0.0, 0.0);
        let left = mean_excess_kpa(&column) / 100.0;
        assert!((left - 0.5).abs() < 0.004, "mean excess left: {left}");
    }

    #[test]
    fn drains_empty_the_cells_at_hansbos_rate() {
        // n = 1.155/0.066 = 17.50, mu = ln(17.5/2) + 2.5 ln 2 - 0.75 = 3.152,
        // 8 ch/(De^2 mu) = 24/(1.334 x 3.152) = 5.708 per year.
        let drains = json!({"pattern": "triangular", "spacing_m": 1.1, "equivalent_diameter_m": 0.066,
            "smear_ratio": 2.0, "permeability_ratio_h_over_s": 2.5, "top_m": 0.0, "base_m": 4.0,
            "zone_radius_m": 10.0});
        let site = one_layer("2025-01-01T00:00:00Z", drains);
        let rate = drain_rate_per_s(&site, &site.layers[0], &LIKELY, 5.0, 0.0, 2.0) * YEAR_S;
        assert!((rate - 5.708).abs() < 0.01, "rate per year: {rate}");
        let outside = drain_rate_per_s(&site, &site.layers[0], &LIKELY, 11.0, 0.0, 2.0);
        assert!(outside == 0.0, "no drains beyond their zone");
    }

    #[test]
    fn settlement_under_a_load_long_gone_by_is_that_of_the_compression_index() {
        // 80 years: no excess is left. Normally consolidated: sum of CR log10((s0 + 100)/s0).
        let mut column =
            Column::new(&one_layer("2025-01-01T00:00:00Z", json!(null)), &LIKELY, 0.0, 0.0);
        for _ in 0..4 * 365 * 20 {
            column.advance(EARLY_STEP_S, 0.0);
        }
        column.note_largest_stress();
        let by_hand: f64 = (0..40)
            .map(|i| (f64::from(i) + 0.5) * 0.1 * (17.0 - 9.81))
            .map(|s0| 100.0 * 0.2 * ((s0 + 100.0) / s0).log10())
            .sum();
        let settled = column.settlement_mm(0.0);
        assert!((settled - by_hand).abs() < 1e-4 * by_hand, "{settled} mm against {by_hand} mm");
    }
}
