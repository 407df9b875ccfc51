//! From the site file to the core's model, once for each case of the band.

use crate::site::{
    self, BandCase, ConversionError, DrainPattern, InstrumentKind, InstrumentUnit, SiteFile,
};
use brimstead_core::config::MAX_TANKS;
use brimstead_core::consolidation::{self, Drains};
use brimstead_core::expectation::{
    DrainZone, ExpectationError, LiquidPressures, Multipliers, Sensor, SiteModel,
};
use brimstead_core::instrument::Kind;
use brimstead_core::load::{LoadError, PlanPosition};
use brimstead_core::units::YEAR_S;
use thiserror::Error;

/// Why nothing can be expected of a site.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum ExpectError {
    /// The site does not fit the core.
    #[error(transparent)]
    Conversion(#[from] ConversionError),
    /// The core refused the ground, the tanks or the drains.
    #[error("the site cannot be calculated: {0}")]
    Site(ExpectationError),
    /// The core refused one instrument.
    #[error("instrument {id}: {source}")]
    Instrument {
        /// Its id.
        id: String,
        /// Why.
        source: ExpectationError,
    },
    /// The liquid level cannot be.
    #[error("at {time}: {source}")]
    Level {
        /// When, in the site's zone.
        time: String,
        /// Why.
        source: LoadError,
    },
    /// No liquid level is known.
    #[error(
        "no liquid level is known, so no load: give the readings of the level gauge, or stages in the plan."
    )]
    NoLevel,
}

/// One instrument of the site, ready for the core.
#[derive(Debug, Clone)]
pub struct Instrument {
    /// Its id.
    pub id: String,
    /// Place, depth and kind.
    pub sensor: Sensor,
    /// Noise of a reading, one standard deviation, in the core's unit (kPa or m).
    pub noise_sd: f64,
}

/// The site as the core calculates it: the best estimate first, then the cases of the band.
#[derive(Debug, Clone)]
pub struct Model {
    /// Name of each case and its site.
    pub cases: Vec<(String, SiteModel)>,
    /// Instruments in the order of the site file.
    pub instruments: Vec<Instrument>,
    /// When the dead load came on, Unix s.
    pub dead_load_since_s: i64,
    /// Zero of settlements, Unix s.
    pub baseline_s: i64,
    liquids: Vec<(i64, f64)>,
    neighbours_kpa: LiquidPressures,
    zone: jiff::tz::TimeZone,
}

/// How many of an instrument's units make one of the core's (kPa or m).
#[must_use]
pub fn scale_of(unit: InstrumentUnit) -> f64 {
    match unit {
        InstrumentUnit::Kpa | InstrumentUnit::Metre => 1.0,
        InstrumentUnit::Millimetre => 1000.0,
    }
}

/// The core's kind of an instrument.
#[must_use]
pub fn kind_of(kind: InstrumentKind) -> Kind {
    match kind {
        InstrumentKind::Piezometer => Kind::Piezometer,
        InstrumentKind::SettlementPlate => Kind::SettlementPlate,
        InstrumentKind::SettlementCell => Kind::SettlementCell,
        InstrumentKind::Magnet => Kind::Magnet,
        InstrumentKind::SurveyPoint => Kind::SurveyPoint,
        InstrumentKind::LevelGauge => Kind::LevelGauge,
    }
}

impl Model {
    /// Sets the site up for every case.
    ///
    /// # Errors
    /// What does not fit the core or is refused by it.
    pub fn new(site: &SiteFile) -> Result<Self, ExpectError> {
        let best =
            SiteModel { ground: site.ground()?, drains: drain_zone(site), tanks: site.tanks()? };
        best.check().map_err(ExpectError::Site)?;
        let mut cases = vec![("likely".to_owned(), best.clone())];
        for case in &site.band.cases {
            let model = best.in_case(&multipliers(case)).map_err(ExpectError::Site)?;
            cases.push((case.name.clone(), model));
        }
        let mut liquids: Vec<(i64, f64)> = site
            .liquids
            .iter()
            .map(|liquid| (liquid.from.time_s, liquid.unit_weight_kn_m3))
            .collect();
        liquids.sort_by_key(|liquid| liquid.0);
        let first_unit_weight = liquids.first().map_or(0.0, |liquid| liquid.1);
        let mut neighbours_kpa = [0.0; MAX_TANKS];
        for ((place, tank), core) in neighbours_kpa.iter_mut().zip(&site.tanks).zip(&best.tanks) {
            if let Some(level_m) = tank.liquid_level_m {
                *place = core
                    .liquid_pressure_kpa(level_m, first_unit_weight)
                    .map_err(|error| ExpectError::Site(error.into()))?;
            }
        }
        Ok(Self {
            instruments: site.instruments.iter().map(instrument).collect(),
            cases,
            dead_load_since_s: site.dead_load_since.time_s,
            baseline_s: site.baseline.time_s,
            liquids,
            neighbours_kpa,
            zone: crate::time::zone(&site.site.time_zone).unwrap_or(jiff::tz::TimeZone::UTC),
        })
    }

    /// The best estimate.
    #[must_use]
    pub fn likely(&self) -> &SiteModel {
        &self.cases[0].1
    }

    /// Unit weight of what the tank under test holds at an instant, kN/m3.
    #[must_use]
    pub fn liquid_unit_weight_kn_m3(&self, time_s: i64) -> f64 {
        let held = self.liquids.partition_point(|liquid| liquid.0 <= time_s);
        let index = held.saturating_sub(1);
        self.liquids.get(index).map_or(0.0, |liquid| liquid.1)
    }

    /// Liquid pressures on the floors of all tanks at an instant with this level in the tank under
    /// test, kPa.
    ///
    /// # Errors
    /// A level that cannot be.
    pub fn liquid_kpa(
        &self,
        time_s: i64,
        liquid_level_m: f64,
    ) -> Result<LiquidPressures, ExpectError> {
        let mut pressures = self.neighbours_kpa;
        let unit_weight = self.liquid_unit_weight_kn_m3(time_s);
        if let (Some(first), Some(tank)) = (pressures.first_mut(), self.likely().tanks.first()) {
            *first = tank.liquid_pressure_kpa(liquid_level_m, unit_weight).map_err(|source| {
                ExpectError::Level { time: crate::time::shown(time_s, &self.zone), source }
            })?;
        }
        Ok(pressures)
    }

    /// Liquid pressures before the tank under test holds anything, kPa.
    #[must_use]
    pub fn empty_kpa(&self) -> LiquidPressures {
        self.neighbours_kpa
    }

    /// Applied pressure under the tank under test, kPa.
    #[must_use]
    pub fn applied_pressure_kpa(&self, time_s: i64, liquid_level_m: f64) -> f64 {
        let dead = self.likely().tanks.first().map_or(0.0, |tank| tank.dead_pressure_kpa());
        dead + self.liquid_unit_weight_kn_m3(time_s) * liquid_level_m
    }
}

fn multipliers(case: &BandCase) -> Multipliers {
    Multipliers {
        compressibility: case.compressibility,
        cv: case.cv,
        ch: case.ch,
        pore_pressure_response: case.pore_pressure_response,
        young: case.young,
    }
}

fn instrument(given: &site::Instrument) -> Instrument {
    Instrument {
        id: given.id.clone(),
        sensor: Sensor {
            kind: kind_of(given.kind),
            place: PlanPosition { x_m: given.x_m, y_m: given.y_m },
            depth_m: given.depth_m,
            tip_sinks: given.tip_sinks.unwrap_or(false),
        },
        noise_sd: given.noise_sd / scale_of(given.unit),
    }
}

fn drain_zone(site: &SiteFile) -> Option<DrainZone> {
    let drains = site.drains.as_ref()?;
    let tank = site.tanks.first()?;
    Some(DrainZone {
        axis: PlanPosition { x_m: tank.x_m, y_m: tank.y_m },
        radius_m: drains.zone_radius_m,
        drains: Drains {
            pattern: match drains.pattern {
                DrainPattern::Triangular => consolidation::DrainPattern::Triangular,
                DrainPattern::Square => consolidation::DrainPattern::Square,
            },
            spacing_m: drains.spacing_m,
            equivalent_diameter_m: drains.equivalent_diameter_m,
            smear_ratio: drains.smear_ratio,
            permeability_ratio_h_over_s: drains.permeability_ratio_h_over_s,
            discharge_m3_per_s: drains.discharge_m3_per_year.map(|q| q / YEAR_S),
            top_m: drains.top_m,
            base_m: drains.base_m,
            length_m: drains.length_m,
        },
    })
}
