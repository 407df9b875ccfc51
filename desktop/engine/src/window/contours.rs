//! Contours on the section at any moment: stress increments by superposition, excess pore pressure
//! and settlement from columns of ground along the section.
//!
//! Stresses are linear in the liquid pressure: they are worked out once for 1 kPa and for all that
//! always stands there. The columns are carried through the load history once, in steps of a few
//! hours, and remembered; a moment between two steps is taken even between them.

use super::ahead::{COARSE_S, coarse_history, steps_s};
use super::failure::WindowError;
use super::iso::{self, Grid, Line};
use super::section::{axis, extent_m};
use super::session::{Session, seconds};
use super::shown::Shown;
use super::views::{ContourLine, ContoursView, Field, Units};
use crate::expect::{LoadHistory, Model};
use brimstead_core::config::COLUMN_CELLS;
use brimstead_core::consolidation::Factor;
use brimstead_core::expectation::{Column, ColumnState, Point, Sensor};
use brimstead_core::load::{PlanPosition, Tank};
use brimstead_core::quantity::Kind;
use brimstead_core::stress::superposition::{PlacedLoad, SitePoint, stress_into};
use brimstead_core::stress::{CartesianStress, Disc, Ring, StressError};
use rayon::prelude::*;

/// Columns of ground along the section.
const COLUMNS: usize = 50;
/// Depths looked at in each.
const DEPTHS: usize = 34;
/// Points of the grid of stresses along the section and in depth.
const STRESS_GRID: (usize, usize) = (101, 41);
/// Poisson's ratio of saturated clay without drainage: that of total stresses while load is young.
const POISSON: f64 = 0.5;
/// Under the shell's line load stresses grow beyond bounds at no depth; the drawing begins at this
/// depth, m.
const SHALLOWEST_M: f64 = 0.3;

/// Stress increments in the plane of the section, for 1 kPa of liquid in the tank under test and
/// for everything else.
#[derive(Debug)]
pub(super) struct Stress {
    xs: Vec<f64>,
    depths: Vec<f64>,
    per_kpa: Vec<CartesianStress>,
    standing: Vec<CartesianStress>,
}

/// Pore pressure and settlement along the section, by time.
#[derive(Debug)]
pub(super) struct Ground {
    xs: Vec<f64>,
    depths: Vec<f64>,
    times_s: Vec<i64>,
    /// By column, then by time and depth.
    excess_kpa: Vec<Vec<f32>>,
    settlement_m: Vec<Vec<f32>>,
}

fn spread(from: f64, to: f64, count: usize) -> Vec<f64> {
    let last = (count - 1) as f64;
    (0..count).map(|index| from + (to - from) * index as f64 / last).collect()
}

impl Stress {
    fn new(session: &Session) -> Result<Self, StressError> {
        let [left_m, right_m, _, bottom_m] = extent_m(&session.site);
        let xs = spread(left_m, right_m, STRESS_GRID.0);
        let depths = spread(SHALLOWEST_M, bottom_m, STRESS_GRID.1);
        let (x_m, y_m) = axis(&session.site);
        let points: Vec<SitePoint> = depths
            .iter()
            .flat_map(|z_m| xs.iter().map(move |x| SitePoint { x_m: x_m + x, y_m, z_m: *z_m }))
            .collect();
        let mut per_kpa = vec![CartesianStress::default(); points.len()];
        let mut standing = per_kpa.clone();
        let model = &session.comparison.model;
        let empty_kpa = model.empty_kpa();
        for (index, tank) in model.likely().tanks.iter().enumerate() {
            if index == 0 {
                add(
                    tank,
                    &[Disc::new(tank.radius_m(), 1.0, POISSON)?.into()],
                    &points,
                    &mut per_kpa,
                )?;
            }
            let pressure_kpa = tank.dead_pressure_kpa() + empty_kpa[index];
            let loads = [
                Disc::new(tank.radius_m(), pressure_kpa, POISSON)?.into(),
                Ring::new(tank.radius_m(), tank.dead_line_load_kn_m(), POISSON)?.into(),
            ];
            add(tank, &loads, &points, &mut standing)?;
        }
        Ok(Self { xs, depths, per_kpa, standing })
    }

    fn grid(&self, liquid_kpa: f64, shown: Shown, part: impl Fn(&CartesianStress) -> f64) -> Grid {
        let value = |index: usize| {
            shown.value(part(&self.standing[index]) + liquid_kpa * part(&self.per_kpa[index]))
        };
        let width = self.xs.len();
        let rows = 0..self.depths.len();
        let values = rows.map(|row| (0..width).map(|column| value(row * width + column)).collect());
        Grid { xs: self.xs.clone(), ys: self.depths.clone(), values: values.collect() }
    }
}

/// Adds what the loads of one tank give at points below its loaded level.
fn add(
    tank: &Tank,
    loads: &[brimstead_core::stress::superposition::Load],
    points: &[SitePoint],
    out: &mut [CartesianStress],
) -> Result<(), StressError> {
    let placed: Vec<PlacedLoad> =
        loads.iter().map(|load| PlacedLoad::new(tank.axis, *load)).collect::<Result<_, _>>()?;
    let below: Vec<usize> =
        (0..points.len()).filter(|index| points[*index].z_m > tank.loaded_depth_m).collect();
    let moved: Vec<SitePoint> = below
        .iter()
        .map(|index| SitePoint { z_m: points[*index].z_m - tank.loaded_depth_m, ..points[*index] })
        .collect();
    let mut found = vec![CartesianStress::default(); moved.len()];
    stress_into(&placed, &moved, &mut found)?;
    for (index, stress) in below.into_iter().zip(found) {
        out[index] += stress;
    }
    Ok(())
}

type CoreColumn = Column<COLUMN_CELLS>;

impl Ground {
    fn new(session: &Session) -> Result<Self, String> {
        let [left_m, right_m, _, bottom_m] = extent_m(&session.site);
        let xs = spread(left_m, right_m, COLUMNS);
        let depths = spread(0.0, bottom_m, DEPTHS);
        let (from_s, to_s) = session.span_s();
        let times_s = steps_s(from_s.max(session.site.baseline.time_s), to_s, COARSE_S);
        let history = coarse_history(&session.site, &session.comparison.history, to_s);
        let model = &session.comparison.model;
        let (x_m, y_m) = axis(&session.site);
        let along: Vec<(Vec<f32>, Vec<f32>)> = xs
            .par_iter()
            .map(|x| {
                let place = PlanPosition { x_m: x_m + x, y_m };
                follow(model, &history, place, &depths, &times_s)
            })
            .collect::<Result<_, _>>()?;
        let (excess_kpa, settlement_m) = along.into_iter().unzip();
        Ok(Self { xs, depths, times_s, excess_kpa, settlement_m })
    }

    fn grid(&self, time_s: i64, of: &[Vec<f32>], shown: Shown) -> Grid {
        let after = self.times_s.partition_point(|step_s| *step_s <= time_s);
        let after = after.clamp(1, self.times_s.len() - 1);
        let (from_s, to_s) = (self.times_s[after - 1], self.times_s[after]);
        let share = ((time_s - from_s) as f64 / (to_s - from_s) as f64).clamp(0.0, 1.0);
        let value = |column: &[f32], depth: usize| {
            let at = |step: usize| f64::from(column[step * self.depths.len() + depth]);
            shown.value(at(after - 1) + share * (at(after) - at(after - 1)))
        };
        let rows = 0..self.depths.len();
        let values = rows.map(|depth| of.iter().map(|column| value(column, depth)).collect());
        Grid { xs: self.xs.clone(), ys: self.depths.clone(), values: values.collect() }
    }
}

/// Excess pore pressure, kPa, and settlement since the baseline, m, at each time and depth.
fn follow(
    model: &Model,
    history: &LoadHistory,
    place: PlanPosition,
    depths: &[f64],
    times_s: &[i64],
) -> Result<(Vec<f32>, Vec<f32>), String> {
    let words = |error: &dyn std::fmt::Display| error.to_string();
    let site = model.likely();
    let column = CoreColumn::new(site, place).map_err(|error| words(&error))?;
    let points: Vec<Point> = depths
        .iter()
        .map(|depth_m| {
            let kind = Kind::SettlementPlate;
            Point::new(site, Sensor { kind, place, depth_m: *depth_m, tip_sinks: false })
        })
        .collect::<Result<_, _>>()
        .map_err(|error| words(&error))?;
    let empty = model.empty_kpa();
    let mut state: ColumnState<COLUMN_CELLS> =
        column.start(model.dead_load_since_s, &empty).map_err(|error| words(&error))?;
    let mut factor = Factor::empty();
    column
        .advance(&mut state, model.baseline_s, &empty, &mut factor)
        .map_err(|error| words(&error))?;
    let zeros: Vec<f64> = points.iter().map(|point| point.settlement_m(&column, &state)).collect();
    let (mut excess, mut settlement) = (Vec::new(), Vec::new());
    for &time_s in times_s {
        let level_m = history.level_at(time_s).unwrap_or_default();
        let liquid = model.liquid_kpa(time_s, level_m).map_err(|error| words(&error))?;
        column.advance(&mut state, time_s, &liquid, &mut factor).map_err(|error| words(&error))?;
        for ((point, zero_m), depth_m) in points.iter().zip(&zeros).zip(depths) {
            let kpa = column.excess_pore_pressure_kpa(&state, *depth_m);
            excess.push(kpa.map_err(|error| words(&error))? as f32);
            settlement.push((point.settlement_m(&column, &state) - zero_m) as f32);
        }
    }
    Ok((excess, settlement))
}

impl Session {
    pub(super) fn ground(&self) -> Result<&Ground, WindowError> {
        let ground = self.ground.get_or_init(|| Ground::new(self));
        ground.as_ref().map_err(|reason| WindowError::Contours(reason.clone()))
    }

    fn stress(&self) -> Result<&Stress, WindowError> {
        let made = || Stress::new(self).map_err(|error| error.to_string());
        let stress = self.stress.get_or_init(made);
        stress.as_ref().map_err(|reason| WindowError::Contours(reason.clone()))
    }

    /// Contours of a field at a moment.
    ///
    /// # Errors
    /// When the ground cannot be calculated.
    pub fn contours(
        &self,
        field: Field,
        time_ms: f64,
        units: Units,
    ) -> Result<ContoursView, WindowError> {
        let time_s = seconds(time_ms);
        let (grid, shown) = match field {
            Field::ExcessPorePressure => {
                let (ground, shown) = (self.ground()?, Shown::pressure(units));
                (ground.grid(time_s, &ground.excess_kpa, shown), shown)
            }
            Field::Settlement => {
                let (ground, shown) = (self.ground()?, Shown::settlement(units));
                (ground.grid(time_s, &ground.settlement_m, shown), shown)
            }
            _ => {
                let level_m = self.level_m(time_s);
                let liquid_kpa = self.comparison.model.liquid_unit_weight_kn_m3(time_s) * level_m;
                let shown = Shown::pressure(units);
                (self.stress()?.grid(liquid_kpa, shown, part_of(field)), shown)
            }
        };
        let (levels, decimals) = iso::levels(&grid);
        let bottom = grid.ys.last().copied().unwrap_or_default();
        let all = levels.into_iter().flat_map(|level| iso::lines(&grid, level));
        Ok(ContoursView {
            unit: shown.unit().to_owned(),
            lines: all.map(|line| view(&line, decimals, bottom)).collect(),
            note: note(field).to_owned(),
        })
    }
}

fn part_of(field: Field) -> fn(&CartesianStress) -> f64 {
    match field {
        Field::SigmaX => |stress| stress.sigma_x_kpa,
        Field::SigmaY => |stress| stress.sigma_y_kpa,
        Field::TauXz => |stress| stress.tau_xz_kpa,
        Field::SigmaZ | Field::ExcessPorePressure | Field::Settlement => {
            |stress| stress.sigma_z_kpa
        }
    }
}

/// What the contours are, beside them.
fn note(field: Field) -> &'static str {
    match field {
        Field::ExcessPorePressure => {
            "Excess pore pressure of the best estimate, at this load and hour."
        }
        Field::Settlement => "Settlement since the baseline, best estimate, at this load and hour.",
        Field::SigmaZ => {
            "Vertical stress increment of all tanks with their own weight, elastic half-space."
        }
        Field::SigmaX | Field::SigmaY | Field::TauXz => {
            "Stress increment of all tanks with their own weight, elastic half-space, Poisson's ratio 0.5."
        }
    }
}

fn view(line: &Line, decimals: usize, bottom: f64) -> ContourLine {
    let short =
        |[x, depth]: [f64; 2]| [(x * 100.0).round() / 100.0, (depth * 100.0).round() / 100.0];
    ContourLine {
        label: crate::chart::number(line.level, decimals),
        label_at: short(line.label_at(bottom)),
        points: line.points.iter().map(|point| short(*point)).collect(),
    }
}
