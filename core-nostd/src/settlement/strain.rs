//! Vertical strain of a soil element from its effective stress and the largest it has carried.
//!
//! ```text
//! strain |  recompression RR           virgin compression CR
//!        |  --------__                 (past sigma_p' the preconsolidation pressure
//!        |            \                 moves with the stress)
//!        |   rebound __ \
//!        |   and       ‾‾\
//!        |   reloading RR \
//!        +---------+-------+------------ log10 sigma_v'
//!              sigma_v0' sigma_p'
//! ```
//! Downwards is compression. Strain is counted from the in-situ state.

use super::SettlementError;
use crate::ground::{Compressibility, GroundError, LayerAt, PRECONSOLIDATION_PRESSURE, Profile};
use crate::quantity::Bounded;
use crate::working::{Silent, Step, Working};

/// Effective stress of a soil element, from which a strain is counted.
pub static IN_SITU_EFFECTIVE_STRESS: Bounded = Bounded {
    name: "in-situ effective stress",
    unit: "kPa",
    min: 0.0,
    max: 50_000.0,
    remedy: "Total stress less pore pressure before loading, kPa.",
};

/// Rebound on the logarithmic law stops at this effective stress, kPa, or at the in-situ stress
/// where that is smaller. The law comes from oedometer tests, which begin at a few kPa; carried on
/// to zero stress it would give endless heave.
pub const REBOUND_FLOOR_KPA: f64 = 1.0;

/// In-situ effective stress is taken as at least this, kPa, so that the logarithm exists at ground
/// level itself. An arithmetic guard, without influence: the logarithm can be integrated up to the
/// surface, and the ground above the depth of 1e-12 kPa contributes less than 1e-15 m.
const SMALLEST_STRESS_KPA: f64 = 1e-12;

#[derive(Debug, Clone, Copy, PartialEq)]
enum Law {
    Log { compression_ratio: f64, recompression_ratio: f64 },
    Linear { constrained_modulus_kpa: f64 },
}

/// The one-dimensional law of a soil element in its place: compressibility, in-situ effective
/// stress and preconsolidation pressure.
///
/// # Assumptions
/// No lateral strain. One rebound line for unloading and reloading (no hysteresis). Rate and time
/// do not matter; creep is added by [`super::secondary`].
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StressStrain {
    law: Law,
    in_situ_kpa: f64,
    preconsolidation_kpa: f64,
}

impl StressStrain {
    /// A law from plain numbers; `preconsolidation_kpa` below the in-situ stress is refused.
    ///
    /// # Errors
    /// [`SettlementError::Value`] or [`SettlementError::Ground`] for what does not fit.
    pub fn new(
        compressibility: &Compressibility,
        in_situ_kpa: f64,
        preconsolidation_kpa: f64,
    ) -> Result<Self, SettlementError> {
        compressibility.check(0)?;
        IN_SITU_EFFECTIVE_STRESS.check(in_situ_kpa)?;
        PRECONSOLIDATION_PRESSURE.check(preconsolidation_kpa)?;
        if preconsolidation_kpa < in_situ_kpa {
            return Err(GroundError::PreconsolidationBelowInSitu {
                layer: 0,
                preconsolidation_kpa,
                in_situ_kpa,
            }
            .into());
        }
        Ok(Self::of(compressibility, in_situ_kpa, preconsolidation_kpa))
    }

    /// The law at a depth of a profile; on an interface that of the layer below it.
    ///
    /// # Errors
    /// [`GroundError::OutsideProfile`].
    pub fn at_depth(profile: &Profile<'_>, depth_m: f64) -> Result<Self, GroundError> {
        Ok(Self::in_layer(profile, &profile.layer_at(depth_m)?, depth_m))
    }

    /// The law of a layer of a profile at a depth, which is held within the layer.
    #[must_use]
    pub fn in_layer(profile: &Profile<'_>, at: &LayerAt<'_>, depth_m: f64) -> Self {
        let in_situ = profile.in_situ_in(at, depth_m);
        Self::of(&at.layer.compressibility, in_situ.effective_kpa, in_situ.preconsolidation_kpa)
    }

    fn of(compressibility: &Compressibility, in_situ_kpa: f64, preconsolidation_kpa: f64) -> Self {
        let law = match *compressibility {
            Compressibility::Index { void_ratio, cc, cr } => Law::Log {
                compression_ratio: cc / (1.0 + void_ratio),
                recompression_ratio: cr / (1.0 + void_ratio),
            },
            Compressibility::Ratio { compression_ratio, recompression_ratio } => {
                Law::Log { compression_ratio, recompression_ratio }
            }
            Compressibility::Modulus { constrained_modulus_kpa } => {
                Law::Linear { constrained_modulus_kpa }
            }
        };
        let in_situ_kpa = in_situ_kpa.max(SMALLEST_STRESS_KPA);
        Self { law, in_situ_kpa, preconsolidation_kpa: preconsolidation_kpa.max(in_situ_kpa) }
    }

    /// In-situ effective stress, kPa.
    #[must_use]
    pub fn in_situ_kpa(&self) -> f64 {
        self.in_situ_kpa
    }

    /// Preconsolidation pressure before loading, kPa.
    #[must_use]
    pub fn preconsolidation_kpa(&self) -> f64 {
        self.preconsolidation_kpa
    }

    /// Vertical strain since the in-situ state, compression positive, at this effective stress,
    /// kPa, when `largest_past_kpa` is the largest effective stress since loading began (anything
    /// up to the preconsolidation pressure means: never beyond it).
    ///
    /// ```text
    /// strain = RR log10(s/s0) + (CR - RR) log10(p/sp),  p = max(sp, largest past, s)
    /// ```
    /// which is recompression up to sp, virgin compression beyond it and rebound from p. With a
    /// constrained modulus it is `(s - s0)/M`, without memory.
    ///
    /// Effective stress below [`REBOUND_FLOOR_KPA`], also zero and negative, is taken as that
    /// floor on the logarithmic law and as not below zero on the linear one.
    #[must_use]
    pub fn strain_at(&self, effective_kpa: f64, largest_past_kpa: f64) -> f64 {
        self.strain_at_with(effective_kpa, largest_past_kpa, &mut Silent)
    }

    /// As [`StressStrain::strain_at`], writing its step.
    pub fn strain_at_with(
        &self,
        effective_kpa: f64,
        largest_past_kpa: f64,
        working: &mut impl Working,
    ) -> f64 {
        let s0 = self.in_situ_kpa;
        match self.law {
            Law::Log { compression_ratio, recompression_ratio } => {
                let sp = self.preconsolidation_kpa;
                let s = effective_kpa.max(REBOUND_FLOOR_KPA.min(s0));
                let p = sp.max(largest_past_kpa).max(s);
                let mut value = recompression_ratio * libm::log10(s / s0);
                if p > sp {
                    value += (compression_ratio - recompression_ratio) * libm::log10(p / sp);
                }
                working.step(Step {
                    name: "vertical strain",
                    value,
                    unit: "",
                    formula: "RR log10(s/s0) + (CR - RR) log10(p/sp)",
                    inputs: &[
                        ("RR", recompression_ratio),
                        ("s", s),
                        ("s0", s0),
                        ("CR", compression_ratio),
                        ("p", p),
                        ("sp", sp),
                    ],
                    source: "logarithmic compression law, Terzaghi & Peck 1948",
                });
                value
            }
            Law::Linear { constrained_modulus_kpa } => {
                let s = effective_kpa.max(0.0);
                let value = (s - s0) / constrained_modulus_kpa;
                working.step(Step {
                    name: "vertical strain",
                    value,
                    unit: "",
                    formula: "(s - s0)/M",
                    inputs: &[("s", s), ("s0", s0), ("M", constrained_modulus_kpa)],
                    source: "",
                });
                value
            }
        }
    }

    /// Strain after loading by this increment of effective stress, kPa, in one go.
    #[must_use]
    pub fn strain_for_increment(&self, increment_kpa: f64) -> f64 {
        self.strain_at(self.in_situ_kpa + increment_kpa, 0.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn clay() -> StressStrain {
        let law = Compressibility::Index { void_ratio: 1.0, cc: 0.6, cr: 0.08 };
        StressStrain::new(&law, 50.0, 80.0).unwrap()
    }

    #[test]
    fn recompression_virgin_and_rebound_by_hand() {
        // CR 0.3, RR 0.04; log10(80/50) = 0.20412, log10(160/80) = 0.30103.
        let law = clay();
        let doubling = core::f64::consts::LOG10_2;
        let (recompression, virgin) = (0.04 * 0.204_119_982_655_925, 0.3 * doubling);
        let close = |got: f64, want: f64| assert!((got - want).abs() < 1e-14, "{got} {want}");
        close(law.strain_at(80.0, 0.0), recompression);
        close(law.strain_at(160.0, 0.0), recompression + virgin);
        close(law.strain_at(80.0, 160.0), recompression + virgin - 0.04 * doubling);
        assert_eq!(law.strain_at(50.0, 0.0), 0.0, "nothing for nothing");
    }

    #[test]
    fn compression_index_and_ratio_are_the_same_law() {
        let ratio = Compressibility::Ratio { compression_ratio: 0.3, recompression_ratio: 0.04 };
        let by_ratio = StressStrain::new(&ratio, 50.0, 80.0).unwrap();
        assert_eq!(by_ratio.strain_at(123.0, 0.0), clay().strain_at(123.0, 0.0));
    }

    #[test]
    fn a_constant_modulus_has_no_memory() {
        let linear = Compressibility::Modulus { constrained_modulus_kpa: 5000.0 };
        let law = StressStrain::new(&linear, 50.0, 80.0).unwrap();
        assert_eq!(law.strain_at(100.0, 400.0), 0.01);
        assert_eq!(law.strain_at(-20.0, 0.0), -0.01, "no tension");
    }

    #[test]
    fn rebound_stops_at_its_floor() {
        let law = clay();
        let floor = law.strain_at(REBOUND_FLOOR_KPA, 0.0);
        for effective_kpa in [0.5, 0.0, -30.0] {
            assert_eq!(law.strain_at(effective_kpa, 0.0), floor, "{effective_kpa}");
        }
        // Below the floor in the ground already: loading is not held up by it.
        let shallow = StressStrain::new(
            &Compressibility::Ratio { compression_ratio: 0.3, recompression_ratio: 0.04 },
            0.1,
            0.1,
        )
        .unwrap();
        assert!((shallow.strain_at(1.0, 0.0) - 0.3).abs() < 1e-14);
        assert_eq!(shallow.strain_at(-1.0, 0.0), 0.0);
    }

    #[test]
    fn what_contradicts_itself_is_refused() {
        let law = Compressibility::Ratio { compression_ratio: 0.3, recompression_ratio: 0.04 };
        for (in_situ, preconsolidation) in [(90.0, 80.0), (f64::NAN, 80.0), (50.0, f64::NAN)] {
            assert!(StressStrain::new(&law, in_situ, preconsolidation).is_err());
        }
    }

    proptest! {
        #[test]
        fn any_loop_closes_below_the_largest_stress_and_strain_never_falls_with_load(
            in_situ in 0.0..200.0_f64,
            over in 0.0..100.0_f64,
            largest in 0.0..600.0_f64,
            one in -50.0..600.0_f64,
            other in -50.0..600.0_f64,
        ) {
            let ratio = Compressibility::Ratio { compression_ratio: 0.25, recompression_ratio: 0.03 };
            let law = StressStrain::new(&ratio, in_situ, in_situ + over + 0.1).unwrap();
            let (less, more) = (one.min(other), one.max(other));
            // Monotone on a given memory, and finite.
            prop_assert!(law.strain_at(less, largest) <= law.strain_at(more, largest) + 1e-15);
            prop_assert!(law.strain_at(less, largest).is_finite());
            // Out to `more`, back to `less`, out to `more` again: the loop closes.
            let out = law.strain_at(more, largest);
            let memory = largest.max(more);
            prop_assert!((law.strain_at(more, memory) - out).abs() < 1e-15);
            // What has once been carried leaves more strain behind, never less.
            prop_assert!(law.strain_at(less, memory) >= law.strain_at(less, largest) - 1e-15);
        }
    }
}
