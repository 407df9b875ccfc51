//! The invented ground as it really is: not quite the site file's best estimate, and not quite
//! the same everywhere.

use crate::column::{Column, STEP_S};
use crate::edge::EdgeYield;
use crate::level::LevelHistory;
use crate::site::{Factors, Instrument, Kind, Site};
use core::f64::consts::PI;
use std::collections::HashMap;

/// The truth on the best estimate of the site file.
pub const TRUTH: Factors = Factors {
    compressibility: 1.11,
    cv: 1.12,
    ch: 0.86,
    pore_pressure_response: 0.97,
    young: 0.92,
};

/// Compressibility round the rim: multiple of the bearing, share at the rim, bearing of the
/// softest side in degrees.
const UNEVENNESS: [(f64, f64, f64); 3] =
    [(1.0, 0.026, 205.0), (2.0, 0.014, 40.0), (3.0, 0.008, 100.0)];
/// Steps between two settlements; settlement is linear between them.
const STEPS_PER_SETTLEMENT: usize = 4;

/// Movements and pressures at one instrument from the baseline on.
#[derive(Debug, Default)]
struct Trace {
    excess_kpa: Vec<f64>,
    settlement_mm: Vec<f64>,
}

/// What every instrument would read if it were perfect.
#[derive(Debug)]
pub struct GroundHistory<'a> {
    site: &'a Site,
    level: &'a LevelHistory,
    edge: Option<EdgeYield>,
    start_s: i64,
    traces: HashMap<&'a str, Trace>,
}

impl<'a> GroundHistory<'a> {
    /// Follows the ground below every instrument through a level history. `uneven` switches the
    /// differences in plan on.
    pub fn new(
        site: &'a Site,
        factors: &Factors,
        uneven: bool,
        level: &'a LevelHistory,
        edge: Option<EdgeYield>,
    ) -> Self {
        let mut places: Vec<(f64, f64, Vec<&Instrument>)> = Vec::new();
        for instrument in site.instruments.iter().filter(|i| i.kind != Kind::LevelGauge) {
            let (x_m, y_m) = (instrument.x_m, instrument.y_m);
            match places.iter_mut().find(|(x, y, _)| (*x, *y) == (x_m, y_m)) {
                Some((_, _, there)) => there.push(instrument),
                None => places.push((x_m, y_m, vec![instrument])),
            }
        }
        let mut traces = HashMap::new();
        for (x_m, y_m, there) in &places {
            let mut here = factors.clone();
            if uneven {
                here.compressibility *= unevenness(site, *x_m, *y_m);
            }
            let column = Column::new(site, &here, *x_m, *y_m);
            follow(site, level, column, there, &mut traces);
        }
        GroundHistory { site, level, edge, start_s: site.baseline.as_second(), traces }
    }

    /// True value of an instrument in its own unit: pore pressure in kPa, settlement in mm since
    /// the baseline, level in m.
    pub fn value(&self, instrument: &Instrument, at_s: i64) -> f64 {
        if instrument.kind == Kind::LevelGauge {
            return self.level.at_m(at_s);
        }
        let Some(trace) = self.traces.get(instrument.id.as_str()) else {
            return 0.0;
        };
        let steps = (at_s - self.start_s) as f64 / STEP_S as f64;
        let mut settlement_mm = between(&trace.settlement_mm, steps / STEPS_PER_SETTLEMENT as f64);
        let mut excess_kpa = between(&trace.excess_kpa, steps);
        if let Some(edge) = &self.edge {
            settlement_mm += edge.settlement_mm(self.site, instrument, at_s);
            excess_kpa += edge.pressure_kpa(self.site, instrument, at_s);
        }
        if instrument.kind != Kind::Piezometer {
            return settlement_mm;
        }
        // The tip sinks with the ground into deeper water.
        let below_water_m =
            instrument.depth_m - self.site.water.water_table_m + settlement_mm / 1000.0;
        self.site.water.unit_weight_kn_m3 * below_water_m + excess_kpa
    }
}

fn follow<'a>(
    site: &Site,
    level: &LevelHistory,
    mut column: Column,
    there: &[&'a Instrument],
    traces: &mut HashMap<&'a str, Trace>,
) {
    let unit_weight = site.liquids[0].unit_weight_kn_m3;
    let start_s = site.baseline.as_second();
    let zeros: Vec<f64> = there.iter().map(|i| column.settlement_mm(i.depth_m)).collect();
    let steps = ((level.end_s() - start_s) / STEP_S) as usize;
    for step in 0..=steps {
        if step > 0 {
            let at_s = start_s + step as i64 * STEP_S;
            column.advance(STEP_S, unit_weight * level.at_m(at_s));
        }
        let settles = step % STEPS_PER_SETTLEMENT == 0;
        if settles {
            column.note_largest_stress();
        }
        for (instrument, zero_mm) in there.iter().zip(&zeros) {
            let trace: &mut Trace = traces.entry(&instrument.id).or_default();
            if instrument.kind == Kind::Piezometer {
                trace.excess_kpa.push(column.excess_kpa(instrument.depth_m));
            }
            if settles {
                trace.settlement_mm.push(column.settlement_mm(instrument.depth_m) - zero_mm);
            }
        }
    }
}

fn unevenness(site: &Site, x_m: f64, y_m: f64) -> f64 {
    let (east_m, north_m) = (x_m - site.tanks[0].x_m, y_m - site.tanks[0].y_m);
    let share = (libm::hypot(east_m, north_m) * 2.0 / site.tanks[0].diameter_m).min(1.0);
    let bearing = libm::atan2(east_m, north_m);
    UNEVENNESS.iter().fold(1.0, |sum, (multiple, amplitude, softest_deg)| {
        sum + share * amplitude * libm::cos(multiple * (bearing - softest_deg * PI / 180.0))
    })
}

fn between(values: &[f64], place: f64) -> f64 {
    let Some(&last) = values.last() else { return 0.0 };
    let i = place.max(0.0) as usize;
    match (values.get(i), values.get(i + 1)) {
        (Some(a), Some(b)) => a + (b - a) * (place - i as f64),
        _ => last,
    }
}
