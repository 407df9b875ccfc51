//! Radial flow to vertical drains (Barron 1948; Hansbo 1981, 10th ICSMFE vol. 3): equal strain,
//! with a smeared zone of lower permeability and with well resistance.
//!
//! # Symbols
//! `De` diameter of the ground served by one drain, `dw` equivalent diameter of the drain, `ds`
//! of the smeared zone; `n = De/dw`, `s = ds/dw`, `eta = kh/ks`; `Th = ch t/De^2`; `qw` discharge
//! capacity; `l` longest way inside a drain.
//!
//! ```text
//! U_h = 1 - exp(-8 Th / mu),  so that  du/dt = -(8 ch / (De^2 mu)) u  in every slice
//! ```
//!
//! # Assumptions
//! Equal vertical strain in a slice, horizontal flow to the drain, Darcy's law, the drain at
//! hydrostatic pressure but for its resistance. Carrillo's product with vertical flow is exact
//! for uniform excess pressure; the column of [`super::stepper`] needs no such product.

use super::{
    DISCHARGE, DRAIN_DEPTH, DRAIN_DIAMETER, DRAIN_LENGTH, DRAIN_SPACING, Error, PERMEABILITY_RATIO,
    SMEAR_RATIO, SPACING_RATIO, TIME_FACTOR, WELL_TERM,
};
use core::f64::consts::PI;
use serde::{Deserialize, Serialize};

/// Arrangement of the drains in plan.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum DrainPattern {
    /// Equilateral triangles.
    Triangular,
    /// Squares.
    Square,
}

impl DrainPattern {
    /// De over spacing: the circle of the same area as the cell of one drain, rounded as in
    /// practice (Barron 1948): 1.05 for triangles, 1.13 for squares.
    #[must_use]
    pub const fn equivalent_spacing_ratio(self) -> f64 {
        match self {
            Self::Triangular => 1.05,
            Self::Square => 1.13,
        }
    }
}

/// A field of vertical drains.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Drains {
    /// Arrangement in plan.
    pub pattern: DrainPattern,
    /// Distance between neighbours, m.
    pub spacing_m: f64,
    /// Equivalent diameter dw of one drain, m (of a band a by b: 2(a+b)/pi after Hansbo).
    pub equivalent_diameter_m: f64,
    /// Smeared over drain diameter, s = ds/dw; 1 for none.
    pub smear_ratio: f64,
    /// Undisturbed over smeared horizontal permeability, kh/ks; 1 for none.
    pub permeability_ratio_h_over_s: f64,
    /// Discharge capacity qw of one drain under its working gradient of 1, m3/s; none for a drain
    /// without resistance.
    pub discharge_m3_per_s: Option<f64>,
    /// Depth of the top of the drains, m.
    pub top_m: f64,
    /// Depth of their lower end, m.
    pub base_m: f64,
    /// Longest way l of water inside a drain, m: its length where it discharges at one end, half
    /// of it where both ends reach free-draining ground.
    pub length_m: f64,
}

impl Drains {
    /// Diameter De of the ground served by one drain, m.
    #[must_use]
    pub fn equivalent_spacing_m(&self) -> f64 {
        self.pattern.equivalent_spacing_ratio() * self.spacing_m
    }

    /// Checks every value and builds the radial flow without well resistance.
    ///
    /// # Errors
    /// A value outside its range, a smeared zone wider than the ground served, a lower end not
    /// below the top, or a way inside the drain shorter than half of it.
    pub fn radial_flow(&self) -> Result<RadialFlow, Error> {
        DRAIN_SPACING.check(self.spacing_m)?;
        DRAIN_DIAMETER.check(self.equivalent_diameter_m)?;
        DRAIN_DEPTH.check(self.top_m)?;
        DRAIN_DEPTH.check(self.base_m)?;
        DRAIN_LENGTH.check(self.length_m)?;
        if let Some(discharge) = self.discharge_m3_per_s {
            DISCHARGE.check(discharge)?;
        }
        let depth_m = self.base_m - self.top_m;
        if depth_m <= 0.0 {
            return Err(Error::DrainEnds { top_m: self.top_m, base_m: self.base_m });
        }
        // Rounding of depths given in decimals must not refuse a drain open at both ends.
        if self.length_m < 0.5 * depth_m * (1.0 - 1e-9) {
            return Err(Error::DrainLength { length_m: self.length_m, drain_m: depth_m });
        }
        RadialFlow::new(
            self.equivalent_spacing_m() / self.equivalent_diameter_m,
            self.smear_ratio,
            self.permeability_ratio_h_over_s,
        )
    }

    /// Well resistance term of mu at depth `depth_m` in ground of horizontal permeability
    /// `kh_m_per_s`: `pi z (2l - z) (kh/qw) (1 - 1/n^2)`, z from the top of the drain. Zero above
    /// and below the drain and for a drain without resistance.
    ///
    /// Hansbo 1981 prints it without the factor `1 - 1/n^2`, which follows from the flow into the
    /// drain coming from the ground outside the drain only.
    #[must_use]
    pub fn well_term(&self, flow: &RadialFlow, depth_m: f64, kh_m_per_s: f64) -> f64 {
        let z = depth_m - self.top_m;
        match self.discharge_m3_per_s {
            Some(discharge) if z > 0.0 && depth_m < self.base_m => {
                let way = z * (2.0 * self.length_m - z);
                PI * way.max(0.0) * kh_m_per_s / discharge * (1.0 - 1.0 / (flow.n * flow.n))
            }
            _ => 0.0,
        }
    }

    /// Share of the depths `top_m` to `base_m` that the drains pass through, 0 to 1.
    #[must_use]
    pub fn share_between(&self, top_m: f64, base_m: f64) -> f64 {
        let from = self.top_m.max(top_m);
        let to = self.base_m.min(base_m);
        if to > from { ((to - from) / (base_m - top_m)).min(1.0) } else { 0.0 }
    }
}

/// Radial consolidation by ratios alone.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RadialFlow {
    n: f64,
    mu: f64,
}

impl RadialFlow {
    /// From `n = De/dw`, `s = ds/dw` and `eta = kh/ks`; mu by the full expression of [`exact_mu`].
    ///
    /// # Errors
    /// A ratio outside its range, or a smeared zone as wide as the ground served.
    pub fn new(n: f64, s: f64, eta: f64) -> Result<Self, Error> {
        Ok(Self { n, mu: exact_mu(n, s, eta)? })
    }

    /// mu without well resistance.
    #[must_use]
    pub const fn mu(&self) -> f64 {
        self.mu
    }

    /// n = De/dw.
    #[must_use]
    pub const fn spacing_ratio(&self) -> f64 {
        self.n
    }

    /// Degree of consolidation by radial flow alone, `1 - exp(-8 Th/(mu + well_term))`.
    ///
    /// # Errors
    /// A time factor or a well resistance term that is negative, not finite or too large.
    pub fn degree_of_consolidation(
        &self,
        time_factor_h: f64,
        well_term: f64,
    ) -> Result<f64, Error> {
        let th = TIME_FACTOR.check(time_factor_h)?;
        let term = WELL_TERM.check(well_term)?;
        Ok(-libm::expm1(-8.0 * th / (self.mu + term)))
    }
}

/// Checks n, s and eta.
fn checked(n: f64, s: f64, eta: f64) -> Result<(), Error> {
    SPACING_RATIO.check(n)?;
    SMEAR_RATIO.check(s)?;
    PERMEABILITY_RATIO.check(eta)?;
    if s < n { Ok(()) } else { Err(Error::SmearBeyondSpacing { smear_ratio: s, spacing_ratio: n }) }
}

/// mu with smear, without well resistance, from the whole equal-strain solution:
///
/// ```text
/// mu = n^2/(n^2-1) [ln(n/s) + eta ln s - 3/4] + s^2/(n^2-1) [1 - s^2/(4 n^2)]
///      + eta/(n^2-1) [(s^4-1)/(4 n^2) - s^2 + 1]
/// ```
///
/// For s = 1 it is Barron's `F(n) = n^2/(n^2-1) ln n - (3 n^2-1)/(4 n^2)`.
///
/// # Errors
/// As [`RadialFlow::new`].
pub fn exact_mu(n: f64, s: f64, eta: f64) -> Result<f64, Error> {
    checked(n, s, eta)?;
    let n2 = n * n;
    let s2 = s * s;
    let logarithms = n2 / (n2 - 1.0) * (libm::log(n / s) + eta * libm::log(s) - 0.75);
    let undisturbed = s2 / (n2 - 1.0) * (1.0 - s2 / (4.0 * n2));
    let smeared = eta / (n2 - 1.0) * ((s2 * s2 - 1.0) / (4.0 * n2) - s2 + 1.0);
    Ok(logarithms + undisturbed + smeared)
}

/// mu in the short form of practice, `ln(n/s) + eta ln s - 3/4` (Hansbo 1981). Against
/// [`exact_mu`] it differs by under 3 % of mu for n of 10 and more and s up to 4.
///
/// # Errors
/// As [`RadialFlow::new`].
pub fn simplified_mu(n: f64, s: f64, eta: f64) -> Result<f64, Error> {
    checked(n, s, eta)?;
    Ok(libm::log(n / s) + eta * libm::log(s) - 0.75)
}
