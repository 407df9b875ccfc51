//! What one instrument should read.

use super::column::{Column, ColumnState, LiquidPressures};
use super::{ExpectationError, SiteModel};
use crate::config::MAX_TANKS;
use crate::ground::Profile;
use crate::load::{PlanPosition, Tank};
use crate::quantity::Expected;
use crate::quantity::Kind;
use crate::settlement::immediate::immediate_settlement;
use crate::stress::Disc;
use serde::{Deserialize, Serialize};

/// An instrument as the expectation sees it.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Sensor {
    /// What it measures.
    pub kind: Kind,
    /// Where in plan.
    pub place: PlanPosition,
    /// Depth below ground level when installed, m.
    pub depth_m: f64,
    /// For a piezometer: the tip goes down with the ground, so that its static pressure grows.
    pub tip_sinks: bool,
}

/// The settlement from which an instrument counts: that of its baseline, m.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct Zero {
    /// Settlement since the ground was unloaded, at the baseline, m.
    pub settlement_m: f64,
}

/// What the surroundings are at the moment asked for.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Moment {
    /// Liquid level above the floor of the tank under test, m.
    pub liquid_level_m: f64,
    /// Change of the background pore pressure (tide, season, dewatering) since the ground water
    /// of the site was set, kPa.
    pub background_kpa: f64,
}

/// One instrument, set up once for one case of parameters.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Point {
    pub(super) sensor: Sensor,
    /// Pore pressure at the tip as installed, before loading, kPa.
    pub(super) static_kpa: f64,
    pub(super) water_unit_weight_kn_m3: f64,
    /// Immediate settlement per kPa of liquid pressure, by tank, m/kPa.
    pub(super) immediate_m_per_kpa: [f64; MAX_TANKS],
}

/// Settlement times Young's modulus of a homogeneous half-space at a depth below ground level,
/// per kPa on the floor of a tank, kPa m per kPa. Above the loaded level the ground moves with it.
pub(super) fn half_space_settlement(
    tank: &Tank,
    place: &PlanPosition,
    depth_m: f64,
    poisson: f64,
) -> f64 {
    let below_m = (depth_m - tank.loaded_depth_m).max(0.0);
    Disc::new(tank.radius_m(), 1.0, poisson)
        .and_then(|disc| disc.displacement_at(1.0, tank.axis.distance_to_m(place), below_m))
        // Refused by `immediate_settlement` with the depth named.
        .map_or(f64::NAN, |moved| moved.settlement_m)
}

impl Point {
    /// Sets up an instrument on a site.
    ///
    /// # Errors
    /// A depth outside the profile, or what ground and tanks refuse.
    pub fn new(model: &SiteModel, sensor: Sensor) -> Result<Self, ExpectationError> {
        let profile = Profile::new(&model.ground)?;
        let mut immediate_m_per_kpa = [0.0; MAX_TANKS];
        for (tank, per_kpa) in model.tanks.iter().zip(&mut immediate_m_per_kpa) {
            *per_kpa = immediate_settlement(
                &profile,
                |depth_m, poisson| half_space_settlement(tank, &sensor.place, depth_m, poisson),
                sensor.depth_m,
            )?
            .settlement_m;
        }
        Ok(Self {
            sensor,
            static_kpa: profile.pore_pressure_kpa(sensor.depth_m)?,
            water_unit_weight_kn_m3: model.ground.water_unit_weight_kn_m3,
            immediate_m_per_kpa,
        })
    }

    /// The instrument.
    #[must_use]
    pub fn sensor(&self) -> &Sensor {
        &self.sensor
    }

    /// Immediate settlement under liquid pressures, m.
    #[must_use]
    pub fn immediate_m(&self, liquid_kpa: &LiquidPressures) -> f64 {
        self.immediate_m_per_kpa.iter().zip(liquid_kpa).map(|(share, p)| share * p).sum()
    }

    /// Settlement of the instrument since the ground was unloaded, m. The immediate part of the
    /// dead load is left out: it was there before any baseline.
    #[must_use]
    pub fn settlement_m<const CELLS: usize>(
        &self,
        column: &Column<CELLS>,
        state: &ColumnState<CELLS>,
    ) -> f64 {
        let settled = column.settlement_of_m(state, self.sensor.depth_m);
        self.immediate_m(&state.liquid_kpa) + settled.primary_m + settled.secondary_m
    }

    /// The zero of this instrument, taken at its baseline.
    #[must_use]
    pub fn zero<const CELLS: usize>(
        &self,
        column: &Column<CELLS>,
        state: &ColumnState<CELLS>,
    ) -> Zero {
        Zero { settlement_m: self.settlement_m(column, state) }
    }

    /// What the instrument should read at the moment the column has reached: kPa for a piezometer
    /// (static pressure at the tip, background and excess), m for a settlement (since the zero)
    /// and for a level gauge (the liquid level itself).
    ///
    /// # Errors
    /// A kind of instrument that nothing is expected of here, a depth outside the column, or a
    /// value that is not finite.
    pub fn reading<const CELLS: usize>(
        &self,
        column: &Column<CELLS>,
        state: &ColumnState<CELLS>,
        zero: Zero,
        moment: &Moment,
    ) -> Result<f64, ExpectationError> {
        let value = match self.sensor.kind {
            Kind::Piezometer => {
                let sunk_m = if self.sensor.tip_sinks {
                    self.settlement_m(column, state) - zero.settlement_m
                } else {
                    0.0
                };
                self.static_kpa
                    + self.water_unit_weight_kn_m3 * sunk_m
                    + moment.background_kpa
                    + column.excess_pore_pressure_kpa(state, self.sensor.depth_m)?
            }
            Kind::LevelGauge => moment.liquid_level_m,
            Kind::SettlementPlate | Kind::SettlementCell | Kind::Magnet | Kind::SurveyPoint => {
                self.settlement_m(column, state) - zero.settlement_m
            }
            kind => return Err(ExpectationError::NoExpectation { kind }),
        };
        if value.is_finite() { Ok(value) } else { Err(ExpectationError::NotFinite) }
    }
}

/// The band of an instrument from the values of the cases, the likely one first: their envelope,
/// widened on both sides by twice the standard deviation of the instrument's noise, so that an
/// unloaded instrument is not outside its band by noise alone.
///
/// `None` without values, or when one is not finite.
#[must_use]
pub fn envelope(values: &[f64], noise_sd: f64) -> Option<Expected> {
    let likely = *values.first()?;
    let low = values.iter().copied().fold(likely, f64::min);
    let high = values.iter().copied().fold(likely, f64::max);
    let spread = 2.0 * noise_sd.max(0.0);
    // `min` and `max` pass over NaN; the sum does not.
    if !values.iter().sum::<f64>().is_finite() {
        return None;
    }
    Expected::new(low - spread, likely, high + spread)
}
