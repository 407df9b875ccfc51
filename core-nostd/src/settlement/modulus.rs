//! Settlement from moduli: coefficient of volume compressibility, modulus number, and the
//! correction for the lateral spread of pore pressure.

use super::SettlementError;
use crate::ground::CONSTRAINED_MODULUS;
use crate::quantity::Bounded;
use crate::working::{Silent, Step, Working};

/// Reference stress of the modulus number, kPa: one atmosphere, rounded (Janbu 1963).
pub const REFERENCE_STRESS_KPA: f64 = 100.0;

/// Coefficient of volume compressibility.
pub static VOLUME_COMPRESSIBILITY: Bounded = Bounded {
    name: "coefficient of volume compressibility mv",
    unit: "1/kPa",
    min: 1e-9,
    max: 0.1,
    remedy: "Give it in 1/kPa: 1 m2/MN is 0.001 /kPa.",
};
/// Modulus number.
pub static MODULUS_NUMBER: Bounded = Bounded {
    name: "modulus number",
    unit: "",
    min: 0.5,
    max: 1e6,
    remedy: "About 5 to 20 for soft clay, 100 to 400 for sand.",
};
/// Stress exponent of the modulus.
pub static STRESS_EXPONENT: Bounded = Bounded {
    name: "stress exponent",
    unit: "",
    min: -1.0,
    max: 1.0,
    remedy: "1 for stiff soil, 0.5 for sand, 0 for normally consolidated clay.",
};
/// Effective stress of the modulus law.
pub static EFFECTIVE_STRESS: Bounded = Bounded {
    name: "effective stress",
    unit: "kPa",
    min: 1e-3,
    max: 50_000.0,
    remedy: "The modulus law holds for stresses above zero.",
};
/// Vertical stress increment.
pub static STRESS_INCREMENT: Bounded = Bounded {
    name: "vertical stress increment",
    unit: "kPa",
    min: -5000.0,
    max: 5000.0,
    remedy: "Mean increment over the thickness, kPa.",
};
/// Thickness of a compressing layer or sublayer.
pub static THICKNESS: Bounded = Bounded {
    name: "thickness",
    unit: "m",
    min: 0.0,
    max: 1000.0,
    remedy: "Thickness of the layer or sublayer, m.",
};
/// Skempton's pore-pressure parameter A.
pub static PORE_PRESSURE_A: Bounded = Bounded {
    name: "pore-pressure parameter A",
    unit: "",
    min: -0.5,
    max: 2.0,
    remedy: "Skempton's A for the stress range of the load, not A at failure.",
};
/// Diameter of a circular load.
pub static LOAD_DIAMETER: Bounded = Bounded {
    name: "diameter of the load",
    unit: "m",
    min: 0.1,
    max: 1000.0,
    remedy: "Diameter, not radius, in metres.",
};
/// Depth of clay below the load.
pub static CLAY_DEPTH: Bounded = Bounded {
    name: "thickness of clay below the load",
    unit: "m",
    min: 1e-3,
    max: 10_000.0,
    remedy: "From the loaded level to the base of the clay.",
};

/// Settlement, m, of a thickness by the coefficient of volume compressibility mv: mv times the
/// stress increment times the thickness.
///
/// # Errors
/// [`SettlementError::Value`].
pub fn volume_compressibility_settlement_m(
    mv_per_kpa: f64,
    increment_kpa: f64,
    thickness_m: f64,
) -> Result<f64, SettlementError> {
    volume_compressibility_settlement_m_with(mv_per_kpa, increment_kpa, thickness_m, &mut Silent)
}

/// As [`volume_compressibility_settlement_m`], writing its step.
///
/// # Errors
/// [`SettlementError::Value`].
pub fn volume_compressibility_settlement_m_with(
    mv_per_kpa: f64,
    increment_kpa: f64,
    thickness_m: f64,
    working: &mut impl Working,
) -> Result<f64, SettlementError> {
    VOLUME_COMPRESSIBILITY.check(mv_per_kpa)?;
    STRESS_INCREMENT.check(increment_kpa)?;
    THICKNESS.check(thickness_m)?;
    let value = mv_per_kpa * increment_kpa * thickness_m;
    working.step(Step {
        name: "settlement by volume compressibility",
        value,
        unit: "m",
        formula: "mv increment H",
        inputs: &[("mv", mv_per_kpa), ("increment", increment_kpa), ("H", thickness_m)],
        source: "Terzaghi & Peck 1948",
    });
    Ok(value)
}

/// Constrained modulus that grows with a power of effective stress: `M = m sr (s/sr)^(1-a)` with
/// modulus number m, stress exponent a and reference stress sr = 100 kPa (Janbu 1963).
///
/// a = 1 is a constant modulus m sr; a = 0 with m = ln(10) (1+e0)/Cc is the logarithmic law.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ModulusNumber {
    number: f64,
    exponent: f64,
    recompression_number: f64,
}

impl ModulusNumber {
    /// A law for soil without memory.
    ///
    /// # Errors
    /// [`SettlementError::Value`].
    pub fn new(number: f64, exponent: f64) -> Result<Self, SettlementError> {
        Self::with_recompression(number, exponent, number)
    }

    /// A law with a second, larger modulus number up to the preconsolidation pressure.
    ///
    /// # Errors
    /// [`SettlementError::Value`].
    pub fn with_recompression(
        number: f64,
        exponent: f64,
        recompression_number: f64,
    ) -> Result<Self, SettlementError> {
        MODULUS_NUMBER.check(number)?;
        MODULUS_NUMBER.check(recompression_number)?;
        STRESS_EXPONENT.check(exponent)?;
        Ok(Self { number, exponent, recompression_number })
    }

    /// Tangent constrained modulus of first loading at an effective stress, kPa.
    ///
    /// # Errors
    /// [`SettlementError::Value`].
    pub fn tangent_modulus_kpa(&self, effective_kpa: f64) -> Result<f64, SettlementError> {
        self.tangent_modulus_kpa_with(effective_kpa, &mut Silent)
    }

    /// As [`ModulusNumber::tangent_modulus_kpa`], writing its step.
    ///
    /// # Errors
    /// [`SettlementError::Value`].
    pub fn tangent_modulus_kpa_with(
        &self,
        effective_kpa: f64,
        working: &mut impl Working,
    ) -> Result<f64, SettlementError> {
        EFFECTIVE_STRESS.check(effective_kpa)?;
        let sr = REFERENCE_STRESS_KPA;
        let value = self.number * sr * libm::pow(effective_kpa / sr, 1.0 - self.exponent);
        CONSTRAINED_MODULUS.check(value)?;
        working.step(Step {
            name: "tangent constrained modulus",
            value,
            unit: "kPa",
            formula: "m sr (s/sr)^(1-a)",
            inputs: &[("m", self.number), ("sr", sr), ("s", effective_kpa), ("a", self.exponent)],
            source: "Janbu 1963",
        });
        Ok(value)
    }

    /// Strain, compression positive, from one effective stress to another, kPa, with the
    /// preconsolidation pressure up to which the recompression modulus number holds (0 for none).
    ///
    /// # Errors
    /// [`SettlementError::Value`].
    pub fn strain(
        &self,
        from_kpa: f64,
        to_kpa: f64,
        preconsolidation_kpa: f64,
    ) -> Result<f64, SettlementError> {
        self.strain_with(from_kpa, to_kpa, preconsolidation_kpa, &mut Silent)
    }

    /// As [`ModulusNumber::strain`], writing its step.
    ///
    /// # Errors
    /// [`SettlementError::Value`].
    pub fn strain_with(
        &self,
        from_kpa: f64,
        to_kpa: f64,
        preconsolidation_kpa: f64,
        working: &mut impl Working,
    ) -> Result<f64, SettlementError> {
        EFFECTIVE_STRESS.check(from_kpa)?;
        EFFECTIVE_STRESS.check(to_kpa)?;
        // What was once carried includes where we come from.
        let sp = preconsolidation_kpa.max(from_kpa);
        EFFECTIVE_STRESS.check(sp)?;
        let value = self.power_difference(from_kpa, to_kpa.min(sp)) / self.recompression_number
            + self.power_difference(sp, to_kpa.max(sp)) / self.number;
        working.step(Step {
            name: "vertical strain by modulus numbers",
            value,
            unit: "",
            formula: "[(min(s1,sp)/sr)^a - (s0/sr)^a]/(mr a) + [(max(s1,sp)/sr)^a - (sp/sr)^a]/(m a); a = 0: ln of the ratio",
            inputs: &[
                ("s0", from_kpa),
                ("s1", to_kpa),
                ("sp", sp),
                ("sr", REFERENCE_STRESS_KPA),
                ("a", self.exponent),
                ("mr", self.recompression_number),
                ("m", self.number),
            ],
            source: "Janbu 1963",
        });
        Ok(value)
    }

    /// `[(s1/sr)^a - (s0/sr)^a]/a`, whose limit at a = 0 is the logarithm; by expm1, which loses
    /// nothing near either.
    fn power_difference(&self, from_kpa: f64, to_kpa: f64) -> f64 {
        let a = self.exponent;
        let log_ratio = libm::log(to_kpa / from_kpa);
        let growth = if a == 0.0 { log_ratio } else { libm::expm1(a * log_ratio) / a };
        libm::pow(from_kpa / REFERENCE_STRESS_KPA, a) * growth
    }
}

/// Ratio of consolidation settlement under a circular load to that of an oedometer, on the axis:
/// `mu = A + alpha (1 - A)`, alpha the ratio of the integrals over the clay of the undrained
/// increments of minor and major principal stress.
///
/// # Assumptions
/// Saturated, homogeneous, isotropic elastic clay from the loaded level down to the thickness given
/// (stresses of the half-space with Poisson's ratio 1/2); flexible uniform load; axis only.
///
/// # Errors
/// [`SettlementError::Value`].
pub fn lateral_pore_pressure_factor(
    diameter_m: f64,
    clay_thickness_m: f64,
    a: f64,
) -> Result<f64, SettlementError> {
    lateral_pore_pressure_factor_with(diameter_m, clay_thickness_m, a, &mut Silent)
}

/// As [`lateral_pore_pressure_factor`], writing its steps.
///
/// # Errors
/// [`SettlementError::Value`].
pub fn lateral_pore_pressure_factor_with(
    diameter_m: f64,
    clay_thickness_m: f64,
    a: f64,
    working: &mut impl Working,
) -> Result<f64, SettlementError> {
    PORE_PRESSURE_A.check(a)?;
    LOAD_DIAMETER.check(diameter_m)?;
    CLAY_DEPTH.check(clay_thickness_m)?;
    let (radius, h) = (0.5 * diameter_m, clay_thickness_m);
    let slant = libm::hypot(radius, h);
    let d = slant - radius;
    let major = h - d * d / slant;
    let minor = 0.5 * (2.0 * h - 3.0 * d + d * d / slant);
    let alpha = minor / major;
    let value = a + alpha * (1.0 - a);
    working.step(Step {
        name: "ratio of the integrals of minor and major principal stress on the axis",
        value: alpha,
        unit: "",
        formula: "[2H - 3(S-a) + (S-a)^2/S] / (2 [H - (S-a)^2/S]), S = sqrt(a^2 + H^2)",
        inputs: &[("H", h), ("a", radius), ("S", slant)],
        source: "Skempton & Bjerrum 1957",
    });
    working.step(Step {
        name: "factor of consolidation to oedometer settlement",
        value,
        unit: "",
        formula: "A + alpha (1 - A)",
        inputs: &[("A", a), ("alpha", alpha)],
        source: "Skempton & Bjerrum 1957",
    });
    Ok(value)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_logarithmic_law_is_the_exponent_zero() {
        // m = ln(10) (1+e0)/Cc, Janbu 1963.
        let (void_ratio, cc) = (1.2, 0.55);
        let number = core::f64::consts::LN_10 * (1.0 + void_ratio) / cc;
        let strain = ModulusNumber::new(number, 0.0).unwrap().strain(40.0, 130.0, 0.0).unwrap();
        let log_law = cc / (1.0 + void_ratio) * libm::log10(130.0 / 40.0);
        assert!((strain - log_law).abs() < 1e-15, "{strain} {log_law}");
        // And the exponent may come near zero without loss.
        let near = ModulusNumber::new(number, 1e-12).unwrap().strain(40.0, 130.0, 0.0).unwrap();
        assert!((near - strain).abs() < 1e-12, "{near}");
    }

    #[test]
    fn recompression_holds_up_to_the_preconsolidation_pressure() {
        let law = ModulusNumber::with_recompression(15.0, 0.0, 120.0).unwrap();
        let split = law.strain(50.0, 80.0, 80.0).unwrap() + law.strain(80.0, 200.0, 80.0).unwrap();
        let whole = law.strain(50.0, 200.0, 80.0).unwrap();
        assert!((split - whole).abs() < 1e-15);
        let by_hand = libm::log(1.6) / 120.0 + libm::log(2.5) / 15.0;
        assert!((whole - by_hand).abs() < 1e-15);
        let back = law.strain(80.0, 50.0, 80.0).unwrap();
        assert!((back + libm::log(1.6) / 120.0).abs() < 1e-15, "rebound on the stiff line");
    }

    #[test]
    fn tangent_is_the_slope_of_the_strain() {
        for exponent in [-0.5, 0.0, 0.5, 1.0] {
            let law = ModulusNumber::new(40.0, exponent).unwrap();
            let slope = law.strain(99.99, 100.01, 0.0).unwrap() / 0.02;
            let modulus = law.tangent_modulus_kpa(100.0).unwrap();
            assert!((slope * modulus - 1.0).abs() < 1e-7, "{exponent}: {slope} {modulus}");
        }
    }

    #[test]
    fn no_lateral_spread_for_a_wide_load_or_full_pore_pressure_parameter() {
        assert!((lateral_pore_pressure_factor(100.0, 0.01, 0.0).unwrap() - 1.0).abs() < 1e-3);
        assert_eq!(lateral_pore_pressure_factor(20.0, 30.0, 1.0).unwrap(), 1.0);
    }
}
