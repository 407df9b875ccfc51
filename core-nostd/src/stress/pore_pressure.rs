//! Excess pore pressure that a load raises in saturated ground before any of it can drain.
//!
//! ```text
//! Skempton   du = B [ds3 + A (ds1 - ds3)]
//! Henkel     du = B (ds_oct + a ds_tau_oct)
//! ```
//! ds1 >= ds2 >= ds3 are the principal values of the total stress *increment*, ds_oct their mean,
//! ds_tau_oct the octahedral shear stress. `a = (3 A - 1)/sqrt 2` gives the same pressure in
//! triaxial compression; elsewhere (off the axis of a tank) the two differ, because Skempton's form
//! does not see ds2. Elastic soil has A = 1/3 and a = 0. Beware of the other ways of writing
//! Henkel's coefficient: with sqrt of the sum of squared differences in place of the octahedral
//! shear stress it is a third of this `a`.
//!
//! # Yield
//! Lightly overconsolidated clay is stiff and drains quickly until its effective stress reaches the
//! preconsolidation pressure; afterwards it does not. [`YieldingResponse`] follows that.
//!
//! # References
//! Skempton 1954, Geotechnique 4, 143-147; Henkel 1960, ASCE Research Conference on Shear Strength
//! of Cohesive Soils, 533-554; Leroueil, Tavenas, Mieussens & Peignaud 1978, Can. Geotech. J. 15,
//! 66-82 (pore pressure below and above yield under embankments).

use super::Principal;
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};
use core::f64::consts::SQRT_2;

/// Skempton's A.
pub static SKEMPTON_A: Bounded = Bounded {
    name: "Skempton's pore-pressure coefficient A",
    unit: "",
    min: -1.0,
    max: 3.0,
    remedy: "1/3 is elastic; at failure 0.5 to 1 for normally consolidated clay, near 0 or \
             negative for heavily overconsolidated clay.",
};
/// Skempton's B.
pub static SKEMPTON_B: Bounded = Bounded {
    name: "pore-pressure coefficient B",
    unit: "",
    min: 0.0,
    max: 1.0,
    remedy: "1 for saturated soft soil, less with gas in the pores.",
};
/// Henkel's a.
pub static HENKEL_A: Bounded = Bounded {
    name: "Henkel's pore-pressure coefficient a",
    unit: "",
    min: -3.0,
    max: 6.0,
    remedy: "a = (3 A - 1)/sqrt 2 with the octahedral shear stress; 0 is elastic.",
};
/// Share of the undrained response that appears before yield.
pub static SHARE_BEFORE_YIELD: Bounded = Bounded {
    name: "share of the undrained response before yield",
    unit: "",
    min: 0.0,
    max: 1.0,
    remedy: "1 is undrained from the start, 0 is drained until yield; 0.4 to 0.6 is often met.",
};
/// A principal or vertical stress increment.
pub static INCREMENT: Bounded = Bounded {
    name: "stress increment",
    unit: "kPa",
    min: -1e6,
    max: 1e6,
    remedy: "Total stress that the load adds, compression positive, in kPa.",
};
/// Effective vertical stress before loading.
pub static IN_SITU_EFFECTIVE: Bounded = Bounded {
    name: "effective vertical stress before loading",
    unit: "kPa",
    min: 0.0,
    max: 1e5,
    remedy: "Total stress less pore pressure, in kPa.",
};
/// Preconsolidation pressure, where yield begins.
pub static YIELD_STRESS: Bounded = Bounded {
    name: "preconsolidation pressure",
    unit: "kPa",
    min: 0.0,
    max: 1e5,
    remedy: "Effective vertical stress at yield; at least the stress before loading.",
};
/// Stress by which a pore-pressure ratio divides.
pub static RATIO_BASE: Bounded = Bounded {
    name: "stress that a pore-pressure ratio divides by",
    unit: "kPa",
    min: 0.1,
    max: 1e6,
    remedy: "Under less load than this the ratio says nothing; wait for more load.",
};
/// An excess pore pressure.
pub static EXCESS: Bounded = Bounded {
    name: "excess pore pressure",
    unit: "kPa",
    min: -1e6,
    max: 1e6,
    remedy: "Pore pressure above the background (water table, tide), in kPa.",
};

/// Which formula gives the undrained excess pore pressure.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum PorePressureLaw {
    /// From the major and the minor principal increment.
    Skempton {
        /// Skempton's A.
        a: f64,
        /// Skempton's B.
        b: f64,
    },
    /// From the octahedral increments.
    Henkel {
        /// Henkel's a, with the octahedral shear stress.
        a: f64,
        /// Pore-pressure coefficient B.
        b: f64,
    },
}

/// A checked [`PorePressureLaw`].
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct UndrainedResponse {
    law: PorePressureLaw,
}

impl UndrainedResponse {
    /// Checks the coefficients.
    ///
    /// # Errors
    /// A coefficient outside its range.
    pub fn new(law: PorePressureLaw) -> Result<Self, OutOfRange> {
        let b = match law {
            PorePressureLaw::Skempton { a, b } => {
                SKEMPTON_A.check(a)?;
                b
            }
            PorePressureLaw::Henkel { a, b } => {
                HENKEL_A.check(a)?;
                b
            }
        };
        SKEMPTON_B.check(b)?;
        Ok(Self { law })
    }

    /// The law.
    #[must_use]
    pub fn law(&self) -> PorePressureLaw {
        self.law
    }

    /// Excess pore pressure, kPa, raised by a total stress increment with these principal values.
    ///
    /// # Errors
    /// A principal value that is not a finite stress.
    pub fn excess_kpa(&self, increment: &Principal) -> Result<f64, OutOfRange> {
        self.excess_kpa_with(increment, &mut Silent)
    }

    /// As [`UndrainedResponse::excess_kpa`], writing its step.
    ///
    /// # Errors
    /// As [`UndrainedResponse::excess_kpa`].
    pub fn excess_kpa_with(
        &self,
        increment: &Principal,
        working: &mut impl Working,
    ) -> Result<f64, OutOfRange> {
        let Principal { sigma_1_kpa: s1, sigma_2_kpa: s2, sigma_3_kpa: s3 } = *increment;
        for (index, value) in [s1, s2, s3].into_iter().enumerate() {
            INCREMENT.check_at(value, index)?;
        }
        Ok(match self.law {
            PorePressureLaw::Skempton { a, b } => {
                let value = b * (s3 + a * (s1 - s3));
                working.step(Step {
                    name: "excess pore pressure, undrained",
                    value,
                    unit: "kPa",
                    formula: "B [ds3 + A (ds1 - ds3)]",
                    inputs: &[("B", b), ("A", a), ("ds1", s1), ("ds3", s3)],
                    source: "Skempton 1954",
                });
                value
            }
            PorePressureLaw::Henkel { a, b } => {
                let (normal, shear) =
                    (increment.octahedral_normal_kpa(), increment.octahedral_shear_kpa());
                let value = b * (normal + a * shear);
                working.step(Step {
                    name: "excess pore pressure, undrained",
                    value,
                    unit: "kPa",
                    formula: "B (ds_oct + a tau_oct), ds_oct = (ds1+ds2+ds3)/3, \
                              tau_oct = sqrt((ds1-ds2)^2+(ds2-ds3)^2+(ds3-ds1)^2)/3",
                    inputs: &[
                        ("B", b),
                        ("ds_oct", normal),
                        ("a", a),
                        ("tau_oct", shear),
                        ("ds1", s1),
                        ("ds2", s2),
                        ("ds3", s3),
                    ],
                    source: "Henkel 1960",
                });
                value
            }
        })
    }
}

/// Henkel's `a` that gives the same pressure as Skempton's `A` in triaxial compression.
#[must_use]
pub fn henkel_from_skempton(skempton_a: f64) -> f64 {
    (3.0 * skempton_a - 1.0) / SQRT_2
}

/// Response of clay that drains in part before it yields and not at all afterwards.
///
/// # Assumptions
/// The increments grow in proportion, by a load factor from 0 to 1. Before yield the share `s` of
/// the undrained response appears, the rest drains as the load comes:
/// ```text
/// u = s lambda du_before                       sigma_v' = sigma_v0' + lambda (dsigma_v - s du_before)
/// ```
/// Yield begins at the load factor lambda_y at which sigma_v' reaches sigma_p'. What comes on top
/// of it is undrained:
/// ```text
/// u = s lambda_y du_before + (lambda - lambda_y) du_after
/// ```
/// Dissipation over time is not in it; that is a matter of `consolidation`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct YieldingResponse {
    before: UndrainedResponse,
    share_before: f64,
    after: UndrainedResponse,
}

/// A point of the ground under a load.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LoadedPoint {
    /// Principal values of the total stress increment.
    pub increment: Principal,
    /// Its vertical component, kPa.
    pub vertical_increment_kpa: f64,
    /// Effective vertical stress before loading, kPa.
    pub in_situ_effective_kpa: f64,
    /// Preconsolidation pressure, kPa.
    pub preconsolidation_kpa: f64,
}

/// What [`YieldingResponse`] gives.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct YieldingExcess {
    /// Excess pore pressure, kPa.
    pub excess_kpa: f64,
    /// Effective vertical stress under the load, kPa.
    pub effective_kpa: f64,
    /// Share of the load under which the soil yields; `None` when it does not. 0 where it was
    /// normally consolidated.
    pub yields_at: Option<f64>,
}

impl YieldingResponse {
    /// `share_before` is the share of the undrained response `before` that appears below the yield
    /// stress; above it all of `after` does.
    ///
    /// # Errors
    /// A share outside 0 to 1.
    pub fn new(
        before: UndrainedResponse,
        share_before: f64,
        after: UndrainedResponse,
    ) -> Result<Self, OutOfRange> {
        SHARE_BEFORE_YIELD.check(share_before)?;
        Ok(Self { before, share_before, after })
    }

    /// Excess pore pressure and effective stress under the whole load.
    ///
    /// # Errors
    /// A stress outside its range.
    pub fn at(&self, point: &LoadedPoint) -> Result<YieldingExcess, OutOfRange> {
        self.at_with(point, &mut Silent)
    }

    /// As [`YieldingResponse::at`], writing its steps.
    ///
    /// # Errors
    /// As [`YieldingResponse::at`].
    pub fn at_with(
        &self,
        point: &LoadedPoint,
        working: &mut impl Working,
    ) -> Result<YieldingExcess, OutOfRange> {
        let vertical = INCREMENT.check(point.vertical_increment_kpa)?;
        let in_situ = IN_SITU_EFFECTIVE.check(point.in_situ_effective_kpa)?;
        let yield_stress = YIELD_STRESS.check(point.preconsolidation_kpa)?;
        let before = self.share_before * self.before.excess_kpa_with(&point.increment, working)?;
        // Effective stress gained under the whole load if the soil did not yield.
        let gain = vertical - before;
        let reserve = (yield_stress - in_situ).max(0.0);
        let yields_at = (gain > reserve).then(|| reserve / gain);
        let Some(share) = yields_at else {
            working.step(Step {
                name: "excess pore pressure, below yield",
                value: before,
                unit: "kPa",
                formula: "s du_before, since sv0' + dsv - s du_before <= sp'",
                inputs: &[
                    ("s", self.share_before),
                    ("sv0'", in_situ),
                    ("dsv", vertical),
                    ("sp'", yield_stress),
                ],
                source: "after Leroueil et al. 1978",
            });
            let effective_kpa = in_situ + gain;
            return Ok(YieldingExcess { excess_kpa: before, effective_kpa, yields_at: None });
        };
        let after = self.after.excess_kpa_with(&point.increment, working)?;
        let excess_kpa = share * before + (1.0 - share) * after;
        working.step(Step {
            name: "share of the load at yield",
            value: share,
            unit: "",
            formula: "(sp' - sv0')/(dsv - s du_before)",
            inputs: &[
                ("sp'", yield_stress),
                ("sv0'", in_situ),
                ("dsv", vertical),
                ("s du_before", before),
            ],
            source: "",
        });
        working.step(Step {
            name: "excess pore pressure, beyond yield",
            value: excess_kpa,
            unit: "kPa",
            formula: "y s du_before + (1 - y) du_after",
            inputs: &[("y", share), ("s du_before", before), ("du_after", after)],
            source: "after Leroueil et al. 1978",
        });
        Ok(YieldingExcess { excess_kpa, effective_kpa: in_situ + vertical - excess_kpa, yields_at })
    }
}

/// Pore-pressure ratio against the *vertical total stress increment at the point*: 1 where water
/// carries all that the load adds there.
///
/// # Errors
/// A stress below 0.1 kPa to divide by, or a pressure out of range.
pub fn ratio_to_vertical_stress(
    excess_kpa: f64,
    vertical_increment_kpa: f64,
) -> Result<f64, OutOfRange> {
    Ok(EXCESS.check(excess_kpa)? / RATIO_BASE.check(vertical_increment_kpa)?)
}

/// Pore-pressure ratio against the *applied pressure at the loaded level*; less than the other one
/// by the influence of depth.
///
/// # Errors
/// As [`ratio_to_vertical_stress`].
pub fn ratio_to_applied_pressure(
    excess_kpa: f64,
    applied_pressure_kpa: f64,
) -> Result<f64, OutOfRange> {
    Ok(EXCESS.check(excess_kpa)? / RATIO_BASE.check(applied_pressure_kpa)?)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn skempton(a: f64) -> UndrainedResponse {
        UndrainedResponse::new(PorePressureLaw::Skempton { a, b: 1.0 }).unwrap()
    }

    /// One-dimensional loading: the same increment in all directions.
    fn even(kpa: f64) -> Principal {
        Principal { sigma_1_kpa: kpa, sigma_2_kpa: kpa, sigma_3_kpa: kpa }
    }

    fn point(preconsolidation_kpa: f64) -> LoadedPoint {
        LoadedPoint {
            increment: even(80.0),
            vertical_increment_kpa: 80.0,
            in_situ_effective_kpa: 40.0,
            preconsolidation_kpa,
        }
    }

    #[test]
    fn half_drained_until_yield_then_all_undrained() {
        let response = YieldingResponse::new(skempton(0.3), 0.5, skempton(0.9)).unwrap();
        // Effective stress grows by half the load: it gains the 20 kPa to yield under 40 kPa.
        let found = response.at(&point(60.0)).unwrap();
        assert_eq!(found.yields_at, Some(0.5));
        assert!((found.excess_kpa - (20.0 + 40.0)).abs() < 1e-12, "{found:?}");
        assert!((found.effective_kpa - 60.0).abs() < 1e-12, "stays at yield: {found:?}");
        let stiff = response.at(&point(81.0)).unwrap();
        assert_eq!(stiff.yields_at, None);
        assert!((stiff.excess_kpa - 40.0).abs() < 1e-12 && stiff.effective_kpa < 81.0);
        let soft = response.at(&point(40.0)).unwrap();
        assert_eq!((soft.yields_at, soft.excess_kpa), (Some(0.0), 80.0));
    }

    #[test]
    fn pressure_is_continuous_over_the_yield_stress() {
        let response = YieldingResponse::new(skempton(0.3), 0.5, skempton(0.9)).unwrap();
        let (just_below, just_above) =
            (response.at(&point(80.0 - 1e-9)).unwrap(), response.at(&point(80.0 + 1e-9)).unwrap());
        assert!((just_below.excess_kpa - just_above.excess_kpa).abs() < 1e-8);
    }

    #[test]
    fn undrained_from_the_start_gives_the_undrained_pressure_whatever_the_yield_stress() {
        let response = YieldingResponse::new(skempton(0.6), 1.0, skempton(0.6)).unwrap();
        let increment = Principal { sigma_1_kpa: 60.0, sigma_2_kpa: 25.0, sigma_3_kpa: 10.0 };
        let undrained = skempton(0.6).excess_kpa(&increment).unwrap();
        for preconsolidation_kpa in [40.0, 50.0, 200.0] {
            let point = LoadedPoint {
                increment,
                vertical_increment_kpa: 55.0,
                ..point(preconsolidation_kpa)
            };
            assert!((response.at(&point).unwrap().excess_kpa - undrained).abs() < 1e-12);
        }
    }

    #[test]
    fn what_is_no_coefficient_or_no_load_is_refused() {
        assert!(UndrainedResponse::new(PorePressureLaw::Skempton { a: 0.5, b: 1.1 }).is_err());
        assert!(UndrainedResponse::new(PorePressureLaw::Henkel { a: f64::NAN, b: 1.0 }).is_err());
        assert!(skempton(0.5).excess_kpa(&even(f64::INFINITY)).is_err());
        assert!(ratio_to_vertical_stress(5.0, 0.05).is_err());
        assert_eq!(ratio_to_vertical_stress(30.0, 60.0), Ok(0.5));
        assert_eq!(ratio_to_applied_pressure(30.0, 120.0), Ok(0.25));
    }
}
