//! Tanks, liquid, foundation and the contact pressure that a liquid level gives.

use crate::config::{MAX_TANKS, Name};
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Step, Working};
use core::fmt;
use heapless::Vec;
use serde::{Deserialize, Serialize};

/// Diameter of a tank.
pub static TANK_DIAMETER: Bounded = Bounded {
    name: "tank diameter",
    unit: "m",
    min: 1.0,
    max: 200.0,
    remedy: "Give the inside diameter of the shell in metres.",
};
/// Height of the shell.
pub static SHELL_HEIGHT: Bounded = Bounded {
    name: "shell height",
    unit: "m",
    min: 0.5,
    max: 60.0,
    remedy: "Give the height of the shell above the floor in metres.",
};
/// Depth of the loaded level.
pub static LOADED_DEPTH: Bounded = Bounded {
    name: "depth of the loaded level",
    unit: "m",
    min: 0.0,
    max: 20.0,
    remedy: "Depth of the underside of pad or floor below ground level, positive down.",
};
/// A part of the contact pressure.
pub static PART_PRESSURE: Bounded = Bounded {
    name: "part of the contact pressure",
    unit: "kPa",
    min: 0.0,
    max: 500.0,
    remedy: "Floor, pad and excavation are given as positive pressures; excavation is subtracted.",
};
/// A line load under the shell.
pub static LINE_LOAD: Bounded = Bounded {
    name: "line load under the shell",
    unit: "kN/m",
    min: 0.0,
    max: 2000.0,
    remedy: "Weight of shell, roof share or ring wall per metre of circumference.",
};
/// A coordinate in plan.
pub static COORDINATE: Bounded = Bounded {
    name: "plan coordinate",
    unit: "m",
    min: -5000.0,
    max: 5000.0,
    remedy: "Use the site's own axes with an origin near the tank, not national grid values.",
};
/// Unit weight of the stored liquid.
pub static LIQUID_UNIT_WEIGHT: Bounded = Bounded {
    name: "unit weight of the liquid",
    unit: "kN/m3",
    min: 4.0,
    max: 20.0,
    remedy: "Fresh water is 9.81 kN/m3, sea water about 10.05, light products 6.5 to 9.",
};

/// A place in plan, m, in the site's own east (x) and north (y) axes.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct PlanPosition {
    /// East, m.
    pub x_m: f64,
    /// North, m.
    pub y_m: f64,
}

impl PlanPosition {
    /// Distance in plan, m.
    #[must_use]
    pub fn distance_to_m(&self, other: &Self) -> f64 {
        libm::hypot(self.x_m - other.x_m, self.y_m - other.y_m)
    }
}

/// A storage tank as a load on the ground: a uniform disc (liquid, floor, pad, less excavated
/// soil) and a ring line load (shell, roof carried by it, ring wall).
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Tank {
    /// Name on drawings and in messages.
    pub name: Name,
    /// Axis in plan.
    pub axis: PlanPosition,
    /// Diameter, m.
    pub diameter_m: f64,
    /// Height of the shell, m: the liquid level cannot be above it.
    pub shell_height_m: f64,
    /// Depth of the loaded level below ground level, m (0 for a tank on a pad at ground level;
    /// the stress calculation starts there).
    pub loaded_depth_m: f64,
    /// Floor weight as a uniform pressure, kPa.
    pub floor_pressure_kpa: f64,
    /// Foundation pad weight as a uniform pressure, kPa.
    pub pad_pressure_kpa: f64,
    /// Excavated soil as a pressure taken away, kPa (given positive, subtracted).
    pub excavation_relief_kpa: f64,
    /// Shell, with the part of the roof it carries, as a line load, kN/m.
    pub shell_line_load_kn_m: f64,
    /// Ring wall or ring pad weight as a line load, kN/m.
    pub ring_line_load_kn_m: f64,
}

/// All tanks that load the site; the first is the tank under test.
pub type Tanks = Vec<Tank, MAX_TANKS>;

/// Why a tank or a liquid level was refused.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum LoadError {
    /// A value outside its range.
    Value(OutOfRange),
    /// Two tanks stand on the same ground.
    TanksOverlap {
        /// Position of the first in the list, counted from 0.
        first: usize,
        /// Position of the second.
        second: usize,
        /// How far they overlap, m.
        overlap_m: f64,
    },
    /// No tank is given.
    NoTank,
    /// The liquid level cannot be.
    LiquidLevel {
        /// The level above the floor, m.
        liquid_level_m: f64,
        /// The shell height, m.
        shell_height_m: f64,
    },
}

impl From<OutOfRange> for LoadError {
    fn from(refused: OutOfRange) -> Self {
        Self::Value(refused)
    }
}

impl fmt::Display for LoadError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match *self {
            Self::Value(refused) => refused.fmt(f),
            Self::TanksOverlap { first, second, overlap_m } => write!(
                f,
                "tanks {} and {} overlap by {overlap_m} m in plan. Check x_m, y_m and diameter_m.",
                first.saturating_add(1),
                second.saturating_add(1)
            ),
            Self::NoTank => {
                f.write_str("no tank is given. The first tank is the one under test; add it.")
            }
            Self::LiquidLevel { liquid_level_m, shell_height_m } => write!(
                f,
                "liquid level is {liquid_level_m} m above the floor; allowed is 0 to the shell \
                 height {shell_height_m} m. Check unit, datum (level above floor, not an \
                 elevation) and the gauge."
            ),
        }
    }
}

impl core::error::Error for LoadError {}

impl Tank {
    /// Checks every value of one tank.
    ///
    /// # Errors
    /// [`LoadError::Value`] for the first value outside its range.
    pub fn check(&self) -> Result<(), LoadError> {
        COORDINATE.check(self.axis.x_m)?;
        COORDINATE.check(self.axis.y_m)?;
        TANK_DIAMETER.check(self.diameter_m)?;
        SHELL_HEIGHT.check(self.shell_height_m)?;
        LOADED_DEPTH.check(self.loaded_depth_m)?;
        PART_PRESSURE.check(self.floor_pressure_kpa)?;
        PART_PRESSURE.check(self.pad_pressure_kpa)?;
        PART_PRESSURE.check(self.excavation_relief_kpa)?;
        LINE_LOAD.check(self.shell_line_load_kn_m)?;
        LINE_LOAD.check(self.ring_line_load_kn_m)?;
        Ok(())
    }

    /// Radius, m.
    #[must_use]
    pub fn radius_m(&self) -> f64 {
        0.5 * self.diameter_m
    }

    /// Uniform pressure that stands on the ground with the tank empty, kPa: floor and pad less the
    /// excavated soil (negative for a net relief).
    #[must_use]
    pub fn dead_pressure_kpa(&self) -> f64 {
        self.floor_pressure_kpa + self.pad_pressure_kpa - self.excavation_relief_kpa
    }

    /// Line load under the shell, kN/m: shell, its share of the roof, ring wall.
    #[must_use]
    pub fn dead_line_load_kn_m(&self) -> f64 {
        self.shell_line_load_kn_m + self.ring_line_load_kn_m
    }

    /// Pressure of the liquid on the floor, kPa. The level counts from the floor, which sinks with
    /// the tank, never from a datum.
    ///
    /// # Errors
    /// [`LoadError::LiquidLevel`] for a level below the floor or above the shell, or not finite.
    pub fn liquid_pressure_kpa(
        &self,
        liquid_level_m: f64,
        unit_weight_kn_m3: f64,
    ) -> Result<f64, LoadError> {
        if liquid_level_m >= 0.0 && liquid_level_m <= self.shell_height_m {
            Ok(unit_weight_kn_m3 * liquid_level_m)
        } else {
            Err(LoadError::LiquidLevel { liquid_level_m, shell_height_m: self.shell_height_m })
        }
    }

    /// Applied pressure, kPa: the uniform contact pressure under the floor, liquid and dead load
    /// together, without the line load under the shell.
    ///
    /// # Errors
    /// As [`Tank::liquid_pressure_kpa`].
    pub fn applied_pressure_kpa(
        &self,
        liquid_level_m: f64,
        unit_weight_kn_m3: f64,
        working: &mut impl Working,
    ) -> Result<f64, LoadError> {
        let liquid = self.liquid_pressure_kpa(liquid_level_m, unit_weight_kn_m3)?;
        let applied = liquid + self.dead_pressure_kpa();
        working.step(Step {
            name: "applied pressure under the floor",
            value: applied,
            unit: "kPa",
            formula: "q = gamma_l h + q_floor + q_pad - q_exc",
            inputs: &[
                ("gamma_l", unit_weight_kn_m3),
                ("h", liquid_level_m),
                ("q_floor", self.floor_pressure_kpa),
                ("q_pad", self.pad_pressure_kpa),
                ("q_exc", self.excavation_relief_kpa),
            ],
            source: "",
        });
        Ok(applied)
    }

    /// Plan area inside the shell, m2.
    #[must_use]
    pub fn area_m2(&self) -> f64 {
        core::f64::consts::PI * self.radius_m() * self.radius_m()
    }
}

/// Checks a group of tanks: each value, and that no two stand on the same ground.
///
/// # Errors
/// The first problem found.
pub fn check_tanks(tanks: &[Tank]) -> Result<(), LoadError> {
    if tanks.is_empty() {
        return Err(LoadError::NoTank);
    }
    for tank in tanks {
        tank.check()?;
    }
    for (first, a) in tanks.iter().enumerate() {
        for (second, b) in tanks.iter().enumerate().skip(first.saturating_add(1)) {
            let overlap_m = a.radius_m() + b.radius_m() - a.axis.distance_to_m(&b.axis);
            if overlap_m > 0.0 {
                return Err(LoadError::TanksOverlap { first, second, overlap_m });
            }
        }
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::working::Silent;
    use std::string::ToString;

    fn tank(x_m: f64) -> Tank {
        Tank {
            name: Name::try_from("T1").unwrap(),
            axis: PlanPosition { x_m, y_m: 0.0 },
            diameter_m: 50.0,
            shell_height_m: 18.0,
            loaded_depth_m: 0.0,
            floor_pressure_kpa: 0.8,
            pad_pressure_kpa: 20.0,
            excavation_relief_kpa: 5.0,
            shell_line_load_kn_m: 40.0,
            ring_line_load_kn_m: 10.0,
        }
    }

    #[test]
    fn applied_pressure_counts_liquid_and_net_dead_load() {
        let q = tank(0.0).applied_pressure_kpa(10.0, 9.81, &mut Silent).unwrap();
        assert!((q - (98.1 + 15.8)).abs() < 1e-12);
    }

    #[test]
    fn a_level_that_cannot_be_is_refused_with_a_remedy() {
        for level in [-0.1, 18.01, f64::NAN, f64::INFINITY] {
            let refused = tank(0.0).liquid_pressure_kpa(level, 9.81).unwrap_err();
            assert!(refused.to_string().contains("level above floor"), "{refused}");
        }
    }

    #[test]
    fn tanks_on_the_same_ground_are_refused() {
        assert_eq!(check_tanks(&[]), Err(LoadError::NoTank));
        assert!(check_tanks(&[tank(0.0), tank(50.0)]).is_ok(), "touching shells may be");
        assert!(matches!(
            check_tanks(&[tank(0.0), tank(49.0)]),
            Err(LoadError::TanksOverlap { first: 0, second: 1, .. })
        ));
    }
}
