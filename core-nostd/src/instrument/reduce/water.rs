//! Pore pressure from a standpipe, and excess pore pressure above the background.

use super::{PRESSURE, ReductionError, needed};
use crate::instrument::CorrectionInput;
use crate::quantity::Bounded;
use crate::working::{Silent, Step, Working};
use serde::{Deserialize, Serialize};

static DEPTH: Bounded = Bounded {
    name: "depth",
    unit: "m",
    min: -50.0,
    max: 500.0,
    remedy: "Give it in metres below ground level.",
};

static UNIT_WEIGHT: Bounded = Bounded {
    name: "unit weight of the ground water",
    unit: "kN/m3",
    min: 9.5,
    max: 12.0,
    remedy: "Fresh water is 9.81.",
};

static TIP_SETTLEMENT: Bounded = Bounded {
    name: "settlement of the tip",
    unit: "m",
    min: -1.0,
    max: 10.0,
    remedy: "Give it in metres, downward positive.",
};

/// Pore pressure at the tip of an open standpipe, kPa: `u = gamma_w (z_tip - z_water)`.
/// In clay the pipe lags the ground by hours to weeks; nothing here corrects that.
///
/// # Errors
/// A value outside its range. A water level below the tip is refused: the pipe is dry.
pub fn standpipe_pressure_kpa(
    tip_depth_m: f64,
    water_depth_m: f64,
    water_unit_weight_kn_m3: f64,
) -> Result<f64, ReductionError> {
    let head_m = DEPTH.check(tip_depth_m)? - DEPTH.check(water_depth_m)?;
    let pressure_kpa = UNIT_WEIGHT.check(water_unit_weight_kn_m3)? * head_m;
    static DRY: Bounded = Bounded {
        name: "pressure in the standpipe",
        unit: "kPa",
        min: 0.0,
        max: 20_000.0,
        remedy: "The water level is below the tip: the pipe is dry or a depth is mistyped.",
    };
    Ok(DRY.check(pressure_kpa)?)
}

/// Excess pore pressure above the background.
///
/// `u_e = u - u_s - gamma_w s_tip`: a tip that sinks with the ground feels plain hydrostatic
/// pressure that looks like excess (4.9 kPa for half a metre).
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct ExcessPorePressure {
    /// Background pore pressure at the tip's first position, kPa.
    pub background_kpa: f64,
    /// Unit weight of the ground water, kN/m3.
    pub water_unit_weight_kn_m3: f64,
    /// Whether the sinking of the tip is taken off.
    pub apply_tip_settlement: bool,
}

impl ExcessPorePressure {
    /// Excess pore pressure, kPa, from the pore pressure and, where that step is on, the
    /// settlement of the tip.
    ///
    /// # Errors
    /// A value outside its range, or a missing settlement.
    pub fn excess_kpa(
        &self,
        pore_pressure_kpa: f64,
        tip_settlement_m: Option<f64>,
    ) -> Result<f64, ReductionError> {
        self.excess_with(pore_pressure_kpa, tip_settlement_m, &mut Silent)
    }

    /// As [`ExcessPorePressure::excess_kpa`], writing the step.
    ///
    /// # Errors
    /// As [`ExcessPorePressure::excess_kpa`].
    pub fn excess_with(
        &self,
        pore_pressure_kpa: f64,
        tip_settlement_m: Option<f64>,
        working: &mut impl Working,
    ) -> Result<f64, ReductionError> {
        let u = PRESSURE.check(pore_pressure_kpa)?;
        let background = PRESSURE.check(self.background_kpa)?;
        let unit_weight = UNIT_WEIGHT.check(self.water_unit_weight_kn_m3)?;
        let sunk_m = if self.apply_tip_settlement {
            needed(&TIP_SETTLEMENT, tip_settlement_m, CorrectionInput::TipSettlement)?
        } else {
            0.0
        };
        let excess = u - background - unit_weight * sunk_m;
        working.step(Step {
            name: "excess pore pressure",
            value: excess,
            unit: "kPa",
            formula: "ue = u - us - gw s",
            inputs: &[("u", u), ("us", background), ("gw", unit_weight), ("s", sunk_m)],
            source: "",
        });
        Ok(excess)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn half_a_metre_of_sinking_is_not_excess_pressure() {
        let on = ExcessPorePressure {
            background_kpa: 60.0,
            water_unit_weight_kn_m3: 9.81,
            apply_tip_settlement: true,
        };
        assert!((on.excess_kpa(64.905, Some(0.5)).unwrap()).abs() < 1e-12);
        assert_eq!(
            on.excess_kpa(64.905, None),
            Err(ReductionError::Missing(CorrectionInput::TipSettlement))
        );
        let off = ExcessPorePressure { apply_tip_settlement: false, ..on };
        assert!((off.excess_kpa(64.905, Some(0.5)).unwrap() - 4.905).abs() < 1e-12);
    }

    #[test]
    fn a_dry_standpipe_is_no_pressure() {
        assert!((standpipe_pressure_kpa(8.0, 2.0, 9.81).unwrap() - 58.86).abs() < 1e-12);
        assert!(standpipe_pressure_kpa(8.0, 8.5, 9.81).is_err());
    }
}
