//! Liquid settlement cells: a pressure cell below, a reservoir on stable ground beside.

use super::{ELEVATION, PRESSURE, ReductionError, TEMPERATURE, finite, needed};
use crate::instrument::CorrectionInput;
use crate::quantity::Bounded;
use crate::working::{Silent, Step, Working};
use serde::{Deserialize, Serialize};

static DENSITY: Bounded = Bounded {
    name: "density of the cell's liquid",
    unit: "kg/m3",
    min: 600.0,
    max: 2_000.0,
    remedy: "Water is 998, water with antifreeze 1020 to 1080.",
};

static EXPANSION: Bounded = Bounded {
    name: "volume expansion of the cell's liquid",
    unit: "1/C",
    min: 0.0,
    max: 0.002,
    remedy: "Water near 20 C is 0.0002, antifreeze mixtures 0.0004 to 0.0006.",
};

static GRAVITY: Bounded = Bounded {
    name: "acceleration of gravity",
    unit: "m/s2",
    min: 9.7,
    max: 9.9,
    remedy: "Standard gravity is 9.80665.",
};

/// How the density of the liquid follows temperature.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum DensityLaw {
    /// `rho = rho0 / (1 + beta (T - Tref))`, from the expansion of a given mass.
    Expansion,
    /// `rho = rho0 (1 - beta (T - Tref))`, its first-order form, as some sheets have it.
    Linear,
}

/// The liquid of a cell and the zero reading.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct CellCalibration {
    /// Density at the reference temperature, kg/m3.
    pub density_kg_per_m3: f64,
    /// Reference temperature, C.
    pub reference_temperature_c: f64,
    /// Volume expansion beta, 1/C.
    pub expansion_per_c: f64,
    /// Law of the density.
    pub density_law: DensityLaw,
    /// Acceleration of gravity, m/s2.
    pub gravity_m_per_s2: f64,
    /// Whether the density follows temperature.
    pub apply_temperature: bool,
    /// The zero reading.
    pub zero: CellInput,
}

/// What is read at one moment. The temperature stands for the whole line between reservoir and
/// cell: sun on a part of the tube is an error this reduction cannot see.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct CellInput {
    /// Pressure at the cell, relative to the air at the reservoir, kPa.
    pub pressure_kpa: f64,
    /// Temperature of the liquid, C.
    pub temperature_c: Option<f64>,
    /// Level of the liquid in the reservoir above the site datum, m: it falls by evaporation and
    /// is reset by topping up.
    pub reservoir_level_m: f64,
}

/// A checked settlement cell.
///
/// `z = z_reservoir - P / (rho g)`, settlement `z_zero - z`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SettlementCell {
    calibration: CellCalibration,
    zero_level_m: f64,
}

impl SettlementCell {
    /// Checks a calibration and reduces its zero reading.
    ///
    /// # Errors
    /// A value outside its range, or no temperature at the zero reading while the density follows
    /// temperature.
    pub fn new(calibration: &CellCalibration) -> Result<Self, ReductionError> {
        DENSITY.check(calibration.density_kg_per_m3)?;
        GRAVITY.check(calibration.gravity_m_per_s2)?;
        if calibration.apply_temperature {
            TEMPERATURE.check(calibration.reference_temperature_c)?;
            EXPANSION.check(calibration.expansion_per_c)?;
        }
        let mut cell = Self { calibration: *calibration, zero_level_m: 0.0 };
        cell.zero_level_m = cell.level_above_datum_m(&calibration.zero)?;
        Ok(cell)
    }

    /// Level of the cell above the site datum, m.
    ///
    /// # Errors
    /// A value outside its range or a missing temperature.
    pub fn level_above_datum_m(&self, input: &CellInput) -> Result<f64, ReductionError> {
        self.level_with(input, &mut Silent)
    }

    /// Settlement since the zero reading, m.
    ///
    /// # Errors
    /// As [`SettlementCell::level_above_datum_m`].
    pub fn settlement_m(&self, input: &CellInput) -> Result<f64, ReductionError> {
        self.settlement_with(input, &mut Silent)
    }

    /// As [`SettlementCell::settlement_m`], writing each step.
    ///
    /// # Errors
    /// As [`SettlementCell::level_above_datum_m`].
    pub fn settlement_with(
        &self,
        input: &CellInput,
        working: &mut impl Working,
    ) -> Result<f64, ReductionError> {
        let level_m = self.level_with(input, working)?;
        let settlement_m = self.zero_level_m - level_m;
        working.step(Step {
            name: "settlement of the cell",
            value: settlement_m,
            unit: "m",
            formula: "s = z0 - z",
            inputs: &[("z0", self.zero_level_m), ("z", level_m)],
            source: "",
        });
        Ok(settlement_m)
    }

    fn level_with(
        &self,
        input: &CellInput,
        working: &mut impl Working,
    ) -> Result<f64, ReductionError> {
        let pressure_kpa = PRESSURE.check(input.pressure_kpa)?;
        let reservoir_m = ELEVATION.check(input.reservoir_level_m)?;
        let density = self.density(input, working)?;
        let g = self.calibration.gravity_m_per_s2;
        let level_m = finite(reservoir_m - 1000.0 * pressure_kpa / (density * g))?;
        working.step(Step {
            name: "level of the cell above datum",
            value: level_m,
            unit: "m",
            formula: "z = zr - 1000 P / (rho g)",
            inputs: &[("zr", reservoir_m), ("P", pressure_kpa), ("rho", density), ("g", g)],
            source: "",
        });
        Ok(level_m)
    }

    fn density(
        &self,
        input: &CellInput,
        working: &mut impl Working,
    ) -> Result<f64, ReductionError> {
        let c = &self.calibration;
        if !c.apply_temperature {
            return Ok(c.density_kg_per_m3);
        }
        let t = needed(&TEMPERATURE, input.temperature_c, CorrectionInput::Temperature)?;
        let expansion = c.expansion_per_c * (t - c.reference_temperature_c);
        let (density, formula) = match c.density_law {
            DensityLaw::Expansion => {
                (c.density_kg_per_m3 / (1.0 + expansion), "rho = rho0 / (1 + beta (T - Tref))")
            }
            DensityLaw::Linear => {
                (c.density_kg_per_m3 * (1.0 - expansion), "rho = rho0 (1 - beta (T - Tref))")
            }
        };
        working.step(Step {
            name: "density of the liquid",
            value: density,
            unit: "kg/m3",
            formula,
            inputs: &[
                ("rho0", c.density_kg_per_m3),
                ("beta", c.expansion_per_c),
                ("T", t),
                ("Tref", c.reference_temperature_c),
            ],
            source: "",
        });
        Ok(density)
    }
}
