//! Undrained strength: its gain with effective stress, and its profile with depth.

use super::StabilityError;
use crate::quantity::{Bounded, OutOfRange};
use crate::working::{Silent, Step, Working};

/// Normalised strength S of normally consolidated clay.
pub static STRENGTH_RATIO: Bounded = Bounded {
    name: "strength ratio S = su/sigma_v' of normally consolidated clay",
    unit: "",
    min: 0.01,
    max: 1.0,
    remedy: "0.22 is a common mean over a slip surface; take it from tests on the clay.",
};
/// Exponent m of the overconsolidation ratio.
pub static STRENGTH_EXPONENT: Bounded = Bounded {
    name: "exponent m of the overconsolidation ratio",
    unit: "",
    min: 0.0,
    max: 1.0,
    remedy: "0.8 is common; 1 - Cr/Cc by critical-state theory.",
};
/// Effective vertical stress now.
pub static EFFECTIVE_STRESS: Bounded = Bounded {
    name: "effective vertical stress",
    unit: "kPa",
    min: 0.0,
    max: 1e5,
    remedy: "Total vertical stress less pore pressure at this moment, in kPa.",
};
/// Preconsolidation pressure.
pub static PRECONSOLIDATION: Bounded = Bounded {
    name: "preconsolidation pressure",
    unit: "kPa",
    min: 0.0,
    max: 1e5,
    remedy: "Largest effective vertical stress the clay has carried, in kPa.",
};
/// Thickness of a slice of the strength profile.
pub static SLICE_THICKNESS: Bounded = Bounded {
    name: "thickness of the slice",
    unit: "m",
    min: 1e-3,
    max: 1e3,
    remedy: "Give slices from the loaded level down, each of some thickness.",
};
/// Undrained strength.
pub static UNDRAINED_STRENGTH: Bounded = Bounded {
    name: "undrained shear strength",
    unit: "kPa",
    min: 0.0,
    max: 1e5,
    remedy: "Give it at the top of the slice, in kPa; with its gradient it may not fall below 0 \
             at the slice's base.",
};
/// Gradient of undrained strength with depth.
pub static STRENGTH_GRADIENT: Bounded = Bounded {
    name: "gradient of undrained shear strength",
    unit: "kPa/m",
    min: -1e4,
    max: 1e4,
    remedy: "Give it in kPa per metre of depth; 1 to 2 is usual in soft clay.",
};

/// Undrained strength that follows effective stress, `su = S sigma_v' OCR^m` with
/// `OCR = max(sigma_p'/sigma_v', 1)`.
///
/// While the stress is below the preconsolidation pressure this is `S sigma_p'^m sigma_v'^(1-m)`:
/// strength grows slowly; beyond it, in proportion.
///
/// # References
/// Ladd & Foott 1974, J. Geotech. Eng. Div. ASCE 100 (GT7), 763-786; Ladd 1991, J. Geotech. Eng.
/// 117(4), 540-615.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StrengthGain {
    ratio: f64,
    exponent: f64,
}

impl StrengthGain {
    /// Normalised strength S and exponent m.
    ///
    /// # Errors
    /// A value outside its range.
    pub fn new(ratio: f64, exponent: f64) -> Result<Self, OutOfRange> {
        STRENGTH_RATIO.check(ratio)?;
        STRENGTH_EXPONENT.check(exponent)?;
        Ok(Self { ratio, exponent })
    }

    /// Undrained strength, kPa, at an effective vertical stress, kPa.
    ///
    /// # Errors
    /// A stress outside its range.
    pub fn strength_kpa(
        &self,
        effective_kpa: f64,
        preconsolidation_kpa: f64,
    ) -> Result<f64, OutOfRange> {
        self.strength_kpa_with(effective_kpa, preconsolidation_kpa, &mut Silent)
    }

    /// As [`StrengthGain::strength_kpa`], writing its step.
    ///
    /// # Errors
    /// As [`StrengthGain::strength_kpa`].
    pub fn strength_kpa_with(
        &self,
        effective_kpa: f64,
        preconsolidation_kpa: f64,
        working: &mut impl Working,
    ) -> Result<f64, OutOfRange> {
        EFFECTIVE_STRESS.check(effective_kpa)?;
        PRECONSOLIDATION.check(preconsolidation_kpa)?;
        let yield_kpa = preconsolidation_kpa.max(effective_kpa);
        // Written without the quotient, so that it holds at zero effective stress too.
        let value = self.ratio
            * libm::pow(yield_kpa, self.exponent)
            * libm::pow(effective_kpa, 1.0 - self.exponent);
        working.step(Step {
            name: "undrained strength",
            value,
            unit: "kPa",
            formula: "S sv' max(sp'/sv', 1)^m",
            inputs: &[
                ("S", self.ratio),
                ("sv'", effective_kpa),
                ("sp'", preconsolidation_kpa),
                ("m", self.exponent),
            ],
            source: "Ladd & Foott 1974",
        });
        Ok(value)
    }
}

/// Stress at one face of a slice.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FaceStress {
    /// Effective vertical stress now, kPa.
    pub effective_kpa: f64,
    /// Preconsolidation pressure, kPa.
    pub preconsolidation_kpa: f64,
}

impl StrengthGain {
    /// Slice of a strength profile between two faces of the ground, from the stress at each; the
    /// strength is taken as linear between them, so that slices should not be thick where stress
    /// changes much.
    ///
    /// # Errors
    /// A value outside its range.
    pub fn slice(
        &self,
        thickness_m: f64,
        top: FaceStress,
        base: FaceStress,
    ) -> Result<StrengthSlice, OutOfRange> {
        SLICE_THICKNESS.check(thickness_m)?;
        let at_top = self.strength_kpa(top.effective_kpa, top.preconsolidation_kpa)?;
        let at_base = self.strength_kpa(base.effective_kpa, base.preconsolidation_kpa)?;
        Ok(StrengthSlice {
            thickness_m,
            undrained_strength_kpa: at_top,
            gradient_kpa_per_m: (at_base - at_top) / thickness_m,
        })
    }
}

/// A slice of the ground with strength linear over its thickness.
///
/// For a drained layer, which has no undrained strength, give `sigma_v' tan phi'`; 0 leaves it out.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StrengthSlice {
    /// Thickness, m.
    pub thickness_m: f64,
    /// Undrained strength at its top, kPa.
    pub undrained_strength_kpa: f64,
    /// Growth of strength with depth, kPa/m.
    pub gradient_kpa_per_m: f64,
}

/// Undrained strength with depth, from the loaded level down.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StrengthProfile<'a> {
    slices: &'a [StrengthSlice],
    depth_m: f64,
}

impl<'a> StrengthProfile<'a> {
    /// Checks the slices, listed from the loaded level down.
    ///
    /// # Errors
    /// No slices, or a value outside its range; strength may not be negative at either end of a
    /// slice.
    pub fn new(slices: &'a [StrengthSlice]) -> Result<Self, StabilityError> {
        let mut depth_m = 0.0;
        for (index, slice) in slices.iter().enumerate() {
            SLICE_THICKNESS.check_at(slice.thickness_m, index)?;
            UNDRAINED_STRENGTH.check_at(slice.undrained_strength_kpa, index)?;
            STRENGTH_GRADIENT.check_at(slice.gradient_kpa_per_m, index)?;
            let at_base =
                slice.undrained_strength_kpa + slice.gradient_kpa_per_m * slice.thickness_m;
            // A strength that runs out exactly at the base may come out a rounding below 0.
            let rounding = 1e-12 * slice.undrained_strength_kpa;
            UNDRAINED_STRENGTH.check_at(at_base + rounding, index)?;
            depth_m += slice.thickness_m;
        }
        if slices.is_empty() {
            Err(StabilityError::NoStrength)
        } else {
            Ok(Self { slices, depth_m })
        }
    }

    /// Depth to the base of the lowest slice, m. Nothing is known below.
    #[must_use]
    pub fn depth_m(&self) -> f64 {
        self.depth_m
    }

    /// The slices with the depth of their tops, m.
    pub fn slices(&self) -> impl Iterator<Item = (f64, &'a StrengthSlice)> + '_ {
        self.slices.iter().scan(0.0, |depth_m, slice| {
            let top_m = *depth_m;
            *depth_m += slice.thickness_m;
            Some((top_m, slice))
        })
    }
}
