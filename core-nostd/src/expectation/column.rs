//! The line of ground below one plan position, and what it remembers.

use super::{ExpectationError, SiteModel};
use crate::config::{MAX_LAYERS, MAX_TANKS};
use crate::consolidation::{self, Boundary, ColumnLayer, Factor, Loading, State, Stepper};
use crate::ground::{BaseDrainage, Layer, Profile};
use crate::load::{PlanPosition, Tank};
use crate::settlement::secondary::Creep;
use crate::settlement::strain::StressStrain;
use crate::stress::{Disc, Ring};
use heapless::Vec;
use serde::{Deserialize, Serialize};
use serde_big_array::BigArray;

/// Pressure of the liquid on the floor of each tank, kPa, in the order of the site's tanks; zero
/// for places without a tank.
pub type LiquidPressures = [f64; MAX_TANKS];

/// Vertical stress does not depend on Poisson's ratio under loads on a homogeneous half-space.
const ANY_POISSON: f64 = 0.5;

/// One cell of a column: where it is and how it compresses.
#[derive(Debug, Clone, Copy)]
struct Cell {
    layer: usize,
    top_m: f64,
    thickness_m: f64,
    law: StressStrain,
    pore_pressure_response: f64,
}

/// The line of ground below a plan position, set up once for one case of parameters.
#[derive(Debug, Clone)]
pub struct Column<const CELLS: usize> {
    place: PlanPosition,
    stepper: Stepper<CELLS>,
    cells: Vec<Cell, CELLS>,
    layers: Vec<Layer, MAX_LAYERS>,
    /// Vertical stress increment per kPa of liquid pressure, by tank and cell.
    influence: [[f64; CELLS]; MAX_TANKS],
    /// Vertical stress increment of everything that stands there with the tanks empty, kPa.
    dead_kpa: [f64; CELLS],
}

/// What a column carries from one instant to the next: plain data of fixed size, to be saved and
/// resumed bit for bit.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct ColumnState<const CELLS: usize> {
    /// The instant reached, Unix s.
    pub time_s: i64,
    /// Liquid pressures at that instant, kPa.
    pub liquid_kpa: LiquidPressures,
    /// Excess pore pressure.
    pub excess: State<CELLS>,
    /// Largest effective stress so far, by cell, kPa.
    #[serde(with = "BigArray")]
    pub largest_effective_kpa: [f64; CELLS],
    /// Creep of each layer.
    pub creep: [Creep; MAX_LAYERS],
}

/// Vertical stress increment under the axis system of a tank per kPa on its floor, and per kN/m
/// under its shell; zero above the loaded level.
pub(super) fn influence_of(
    tank: &Tank,
    place: &PlanPosition,
    depth_m: f64,
) -> Result<(f64, f64), ExpectationError> {
    let below_m = depth_m - tank.loaded_depth_m;
    if below_m <= 0.0 {
        return Ok((0.0, 0.0));
    }
    let r_m = tank.axis.distance_to_m(place);
    let disc = Disc::new(tank.radius_m(), 1.0, ANY_POISSON)?.stress_at(r_m, below_m)?;
    let ring = Ring::new(tank.radius_m(), 1.0, ANY_POISSON)?.stress_at(r_m, below_m)?;
    Ok((disc.sigma_z_kpa, ring.sigma_z_kpa))
}

impl<const CELLS: usize> Column<CELLS> {
    /// Sets up the column below a plan position of a site.
    ///
    /// # Errors
    /// Whatever ground, drains, tanks or the grid refuse.
    pub fn new(model: &SiteModel, place: PlanPosition) -> Result<Self, ExpectationError> {
        let ground = &model.ground;
        let profile = Profile::new(ground)?;
        let mut flow: Vec<ColumnLayer, MAX_LAYERS> = Vec::new();
        for layer in &ground.layers {
            // As many as the ground can have.
            let _ = flow.push(layer.into());
        }
        let stepper = Stepper::new(&consolidation::Column {
            layers: &flow,
            top: Boundary::Drained,
            base: match ground.base_drainage {
                BaseDrainage::Drained => Boundary::Drained,
                BaseDrainage::Closed => Boundary::Closed,
            },
            drains: model.drains_at(&place),
            water_unit_weight_kn_m3: ground.water_unit_weight_kn_m3,
        })?;
        let cells = lay_cells(&profile, &stepper);
        let mut influence = [[0.0; CELLS]; MAX_TANKS];
        let mut dead_kpa = [0.0; CELLS];
        for (tank, by_cell) in model.tanks.iter().zip(&mut influence) {
            for ((share, dead), depth_m) in
                by_cell.iter_mut().zip(&mut dead_kpa).zip(stepper.centre_depths_m())
            {
                let (disc, ring) = influence_of(tank, &place, depth_m)?;
                *share = disc;
                *dead += disc * tank.dead_pressure_kpa() + ring * tank.dead_line_load_kn_m();
            }
        }
        Ok(Self { place, stepper, cells, layers: ground.layers.clone(), influence, dead_kpa })
    }

    /// The plan position.
    #[must_use]
    pub fn place(&self) -> PlanPosition {
        self.place
    }

    /// The column at the moment the dead load and these liquid pressures came onto the ground.
    ///
    /// # Errors
    /// An increment that the column cannot take.
    pub fn start(
        &self,
        since_s: i64,
        liquid_kpa: &LiquidPressures,
    ) -> Result<ColumnState<CELLS>, ExpectationError> {
        let mut state = ColumnState {
            time_s: since_s,
            liquid_kpa: *liquid_kpa,
            excess: self.stepper.at_rest(),
            largest_effective_kpa: [0.0; CELLS],
            creep: [Creep::default(); MAX_LAYERS],
        };
        let raised = self.raised_by(&self.increment_kpa(liquid_kpa));
        self.stepper.advance(
            &mut state.excess,
            Loading::Jump(&raised),
            0.0,
            &mut Factor::empty(),
        )?;
        self.remember(&mut state)?;
        Ok(state)
    }

    /// Carries the state on to an instant, the liquid pressures changing evenly since the last.
    /// A change without time between is taken as sudden.
    ///
    /// `factor` may be lent again and again: a repeated length of step is then cheap. It never
    /// changes the result.
    ///
    /// # Errors
    /// A step back in time, or a load that the column cannot take; the state is then unchanged.
    pub fn advance(
        &self,
        state: &mut ColumnState<CELLS>,
        time_s: i64,
        liquid_kpa: &LiquidPressures,
        factor: &mut Factor<CELLS>,
    ) -> Result<(), ExpectationError> {
        if time_s < state.time_s {
            return Err(ExpectationError::TimeRunsBack { to_s: time_s, reached_s: state.time_s });
        }
        let mut next = *state;
        let mut change = [0.0; MAX_TANKS];
        let mut changes = false;
        for ((change, new), old) in change.iter_mut().zip(liquid_kpa).zip(&state.liquid_kpa) {
            *change = new - old;
            changes |= *change != 0.0;
        }
        let dt_s = time_s.saturating_sub(state.time_s) as f64;
        let raised;
        let loading = if changes {
            raised = self.raised_by(&self.liquid_increment_kpa(&change));
            if dt_s > 0.0 { Loading::Ramp(&raised) } else { Loading::Jump(&raised) }
        } else {
            Loading::Hold
        };
        self.stepper.advance(&mut next.excess, loading, dt_s, factor)?;
        next.time_s = time_s;
        next.liquid_kpa = *liquid_kpa;
        self.remember(&mut next)?;
        *state = next;
        Ok(())
    }

    /// Vertical total stress increment at each cell, kPa, of liquid pressures alone.
    fn liquid_increment_kpa(&self, liquid_kpa: &LiquidPressures) -> [f64; CELLS] {
        let mut sum = [0.0; CELLS];
        for (share, pressure) in self.influence.iter().zip(liquid_kpa) {
            if *pressure != 0.0 {
                for (sum, share) in sum.iter_mut().zip(share) {
                    *sum += share * pressure;
                }
            }
        }
        sum
    }

    /// The same with the dead load.
    fn increment_kpa(&self, liquid_kpa: &LiquidPressures) -> [f64; CELLS] {
        let mut sum = self.liquid_increment_kpa(liquid_kpa);
        for (sum, dead) in sum.iter_mut().zip(&self.dead_kpa) {
            *sum += dead;
        }
        sum
    }

    /// The part of stress increments that raises excess pore pressure.
    fn raised_by(&self, increment_kpa: &[f64; CELLS]) -> [f64; CELLS] {
        let mut raised = *increment_kpa;
        for (raised, cell) in raised.iter_mut().zip(&self.cells) {
            *raised *= cell.pore_pressure_response;
        }
        raised
    }

    /// Updates the largest effective stress and the creep clocks.
    fn remember(&self, state: &mut ColumnState<CELLS>) -> Result<(), ExpectationError> {
        let increment_kpa = self.increment_kpa(&state.liquid_kpa);
        let mut sums = [LayerSums::default(); MAX_LAYERS];
        let cells = self.cells.iter().zip(&increment_kpa).zip(&state.excess.excess_kpa);
        for (((cell, increment), excess), largest) in cells.zip(&mut state.largest_effective_kpa) {
            *largest = largest.max(cell.law.in_situ_kpa() + increment - excess);
            if let Some(sum) = sums.get_mut(cell.layer) {
                sum.thickness_m += cell.thickness_m;
                sum.load_kpa_m += increment * cell.thickness_m;
                sum.excess_kpa_m += excess * cell.thickness_m;
            }
        }
        for ((layer, sum), creep) in self.layers.iter().zip(&sums).zip(&mut state.creep) {
            if layer.secondary_ratio > 0.0 && sum.thickness_m > 0.0 {
                creep.update(state.time_s, sum.load_kpa_m / sum.thickness_m, sum.excess_ratio())?;
            }
        }
        Ok(())
    }

    /// Excess pore pressure at a depth, kPa.
    ///
    /// # Errors
    /// A depth outside the profile.
    pub fn excess_pore_pressure_kpa(
        &self,
        state: &ColumnState<CELLS>,
        depth_m: f64,
    ) -> Result<f64, ExpectationError> {
        Ok(self.stepper.excess_at_kpa(&state.excess, depth_m)?)
    }

    /// Primary and secondary settlement of a depth, m, since the ground was unloaded: what has
    /// been compressed below it. The immediate part belongs to the point ([`super::Point`]).
    #[must_use]
    pub fn settlement_of_m(&self, state: &ColumnState<CELLS>, depth_m: f64) -> Settled {
        let mut settled = Settled::default();
        let increment_kpa = self.increment_kpa(&state.liquid_kpa);
        let cells = self.cells.iter().zip(&increment_kpa).zip(&state.excess.excess_kpa);
        for (((cell, increment), excess), largest) in cells.zip(&state.largest_effective_kpa) {
            let base_m = cell.top_m + cell.thickness_m;
            let part_m = (base_m - depth_m).min(cell.thickness_m);
            if part_m <= 0.0 {
                continue;
            }
            let effective = cell.law.in_situ_kpa() + increment - excess;
            settled.primary_m += part_m * cell.law.strain_at(effective, *largest);
            if let (Some(layer), Some(creep)) =
                (self.layers.get(cell.layer), state.creep.get(cell.layer))
            {
                settled.secondary_m += part_m * layer.secondary_ratio * creep.cycles();
            }
        }
        settled
    }

    /// Depth of cell middles with excess pore pressure, increment of vertical total stress and
    /// effective stress, kPa: the isochrone of this moment.
    pub fn profile_at<'a>(
        &'a self,
        state: &'a ColumnState<CELLS>,
    ) -> impl Iterator<Item = ProfilePoint> + 'a {
        let increment_kpa = self.increment_kpa(&state.liquid_kpa);
        let cells = self.cells.iter().zip(increment_kpa).zip(&state.excess.excess_kpa);
        cells.map(|((cell, increment_kpa), excess_kpa)| ProfilePoint {
            layer: cell.layer,
            depth_m: cell.top_m + 0.5 * cell.thickness_m,
            increment_kpa,
            excess_kpa: *excess_kpa,
            effective_kpa: cell.law.in_situ_kpa() + increment_kpa - excess_kpa,
        })
    }
}

/// One depth of a column at a moment.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ProfilePoint {
    /// Layer, counted from 0 at the top.
    pub layer: usize,
    /// Depth below ground level, m.
    pub depth_m: f64,
    /// Vertical total stress increment, kPa.
    pub increment_kpa: f64,
    /// Excess pore pressure, kPa.
    pub excess_kpa: f64,
    /// Effective vertical stress, kPa.
    pub effective_kpa: f64,
}

/// Settlement by its causes, m.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Settled {
    /// By rising effective stress.
    pub primary_m: f64,
    /// By creep at constant effective stress.
    pub secondary_m: f64,
}

#[derive(Debug, Clone, Copy, Default)]
struct LayerSums {
    thickness_m: f64,
    load_kpa_m: f64,
    excess_kpa_m: f64,
}

impl LayerSums {
    /// Excess over load, both as means of the layer; none without load.
    fn excess_ratio(&self) -> f64 {
        // Below this the ratio of two small numbers would say nothing.
        const LEAST_LOAD_KPA: f64 = 0.1;
        if self.load_kpa_m > LEAST_LOAD_KPA * self.thickness_m {
            (self.excess_kpa_m / self.load_kpa_m).clamp(-10.0, 10.0)
        } else {
            0.0
        }
    }
}

fn lay_cells<const CELLS: usize>(
    profile: &Profile<'_>,
    stepper: &Stepper<CELLS>,
) -> Vec<Cell, CELLS> {
    let mut cells = Vec::new();
    let tops = stepper.face_depths_m().zip(stepper.centre_depths_m());
    let sizes = stepper.thicknesses_m().zip(stepper.layers());
    for ((top_m, centre_m), (thickness_m, layer)) in tops.zip(sizes) {
        let Some(at) = profile.layers().get(layer) else { continue };
        // As many as the stepper has.
        let _ = cells.push(Cell {
            layer,
            top_m,
            thickness_m,
            law: StressStrain::in_layer(profile, at, centre_m),
            pore_pressure_response: at.layer.pore_pressure_response,
        });
    }
    cells
}
