//! Settlement plates read on a rod that grows with the fill.

use super::{ELEVATION, ReductionError};
use crate::config::MAX_ROD_EXTENSIONS;
use crate::instrument::FixedList;
use crate::quantity::Bounded;
use crate::working::{Silent, Step, Working};
use serde::{Deserialize, Serialize};

static ROD: Bounded = Bounded {
    name: "length of rod",
    unit: "m",
    min: 0.0,
    max: 50.0,
    remedy: "Give the measured length added, couplings included, in metres.",
};

/// A length of rod added (or, negative, cut off) and booked.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct RodExtension {
    /// From when it counts, Unix seconds UTC: a reading at this instant is on the longer rod.
    pub time_s: i64,
    /// Length added, m.
    pub length_m: f64,
}

/// A plate with its first reading and its booked rods.
///
/// `z_plate = z_top - sum of rods`, settlement `z_plate,0 - z_plate`.
///
/// # References
/// General practice for settlement plates; checked against
/// `tests/reference/time/t10_settlement_plate.csv`.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct SettlementPlate {
    zero_top_m: f64,
    zero_rod_m: f64,
    extensions: FixedList<RodExtension, MAX_ROD_EXTENSIONS>,
}

impl SettlementPlate {
    /// A plate at its zero reading: level of the rod's top above datum and length of rod then.
    ///
    /// # Errors
    /// A value outside its range.
    pub fn new(zero_top_m: f64, zero_rod_m: f64) -> Result<Self, ReductionError> {
        Ok(Self {
            zero_top_m: ELEVATION.check(zero_top_m)?,
            zero_rod_m: ROD.check(zero_rod_m)?,
            extensions: FixedList::default(),
        })
    }

    /// Books a change of rod. The order of booking does not matter.
    ///
    /// # Errors
    /// A length outside its range, or more extensions than can be kept.
    pub fn extend(&mut self, extension: RodExtension) -> Result<(), ReductionError> {
        ROD.check(extension.length_m.abs())?;
        self.extensions.push(extension).map_err(ReductionError::TooMany)
    }

    /// Length of rod at an instant, m.
    #[must_use]
    pub fn rod_length_m(&self, time_s: i64) -> f64 {
        let booked = self.extensions.as_slice().iter().filter(|rod| rod.time_s <= time_s);
        booked.fold(self.zero_rod_m, |sum, rod| sum + rod.length_m)
    }

    /// Settlement at an instant from the level of the rod's top above datum, m.
    ///
    /// # Errors
    /// A level outside its range.
    pub fn settlement_m(&self, time_s: i64, top_m: f64) -> Result<f64, ReductionError> {
        self.settlement_with(time_s, top_m, &mut Silent)
    }

    /// As [`SettlementPlate::settlement_m`], writing each step.
    ///
    /// # Errors
    /// As [`SettlementPlate::settlement_m`].
    pub fn settlement_with(
        &self,
        time_s: i64,
        top_m: f64,
        working: &mut impl Working,
    ) -> Result<f64, ReductionError> {
        let top_m = ELEVATION.check(top_m)?;
        let rod_m = self.rod_length_m(time_s);
        let settlement_m = (self.zero_top_m - self.zero_rod_m) - (top_m - rod_m);
        working.step(Step {
            name: "settlement of the plate",
            value: settlement_m,
            unit: "m",
            formula: "s = (z0 - l0) - (z - l)",
            inputs: &[("z0", self.zero_top_m), ("l0", self.zero_rod_m), ("z", top_m), ("l", rod_m)],
            source: "general practice",
        });
        Ok(settlement_m)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_extension_counts_from_its_instant_whatever_the_order_of_booking() {
        let mut plate = SettlementPlate::new(4.112, 1.5).unwrap();
        plate.extend(RodExtension { time_s: 200, length_m: 1.5 }).unwrap();
        plate.extend(RodExtension { time_s: 100, length_m: 1.0 }).unwrap();
        assert_eq!(plate.rod_length_m(99), 1.5);
        assert_eq!(plate.rod_length_m(100), 2.5);
        assert_eq!(plate.rod_length_m(200), 4.0);
        let before = plate.settlement_m(99, 4.060).unwrap();
        let after = plate.settlement_m(100, 5.060).unwrap();
        assert!((before - 0.052).abs() < 1e-12 && (after - 0.052).abs() < 1e-12);
    }

    #[test]
    fn one_extension_too_many_is_refused() {
        let mut plate = SettlementPlate::new(4.0, 1.5).unwrap();
        let rod = RodExtension { time_s: 0, length_m: 1.0 };
        for _ in 0..MAX_ROD_EXTENSIONS {
            plate.extend(rod).unwrap();
        }
        assert!(matches!(plate.extend(rod), Err(ReductionError::TooMany(_))));
        assert!(SettlementPlate::new(f64::NAN, 1.0).is_err());
    }
}
