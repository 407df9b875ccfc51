//! Stability, the shape of the shell and forecasts: what is computed a round at a time.

use brimstead_core::forecast::Observation;
use brimstead_core::forecast::asaoka::asaoka;
use brimstead_core::forecast::hyperbolic::hyperbolic;
use brimstead_core::forecast::rate::rate;
use brimstead_core::forecast::secondary::secondary_line;
use brimstead_core::forecast::update::{Factors, Predicted};
use brimstead_core::shell::harmonics::Harmonics;
use brimstead_core::shell::perimeter::{PerimeterFit, PerimeterPoint, ShellSteel};
use brimstead_core::stability::base::base_stability;
use brimstead_core::stability::bearing::{Roughness, circular_bearing};
use brimstead_core::stability::edge::{Edge, edge_stability};
use brimstead_core::stability::squeeze::{Plan, squeezing_pressure_kpa};
use brimstead_core::stability::strength::{StrengthGain, StrengthProfile, StrengthSlice};
use brimstead_core::stress::Principal;
use brimstead_core::stress::pore_pressure::{
    LoadedPoint, PorePressureLaw, UndrainedResponse, YieldingResponse,
};

/// What was surveyed and read.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Rounds {
    slices: [StrengthSlice; 3],
    perimeter: [PerimeterPoint; 9],
    readings: [Observation; 8],
}

impl Rounds {
    pub(super) fn invented() -> Self {
        let slice = |thickness_m, undrained_strength_kpa, gradient_kpa_per_m| StrengthSlice {
            thickness_m,
            undrained_strength_kpa,
            gradient_kpa_per_m,
        };
        let point = |angle_rad, settlement_m| PerimeterPoint {
            angle_rad,
            settlement_m: Some(settlement_m),
        };
        let reading = |elapsed_s, settlement_m| Observation { elapsed_s, settlement_m };
        Self {
            slices: [slice(1.9, 43.0, -7.0), slice(11.7, 14.3, 1.7), slice(6.4, 61.0, 0.0)],
            perimeter: [
                point(0.11, 0.131),
                point(0.74, 0.127),
                point(1.52, 0.109),
                point(2.13, 0.098),
                point(2.95, 0.083),
                point(3.61, 0.091),
                point(4.27, 0.102),
                point(5.08, 0.117),
                point(5.83, 0.133),
            ],
            readings: [
                reading(9.1e4, 0.0131),
                reading(2.3e5, 0.0297),
                reading(4.4e5, 0.0482),
                reading(7.2e5, 0.0671),
                reading(1.1e6, 0.0839),
                reading(1.6e6, 0.0977),
                reading(2.2e6, 0.1083),
                reading(3.1e6, 0.1171),
            ],
        }
    }

    /// Computes every number and hands it on with its name.
    pub(super) fn compute(&self, each: &mut impl FnMut(&'static str, f64)) -> Option<()> {
        self.stability(each)?;
        self.shell(each)?;
        self.forecasts(each)
    }

    #[inline(never)]
    fn stability(&self, each: &mut impl FnMut(&'static str, f64)) -> Option<()> {
        let profile = StrengthProfile::new(&self.slices).ok()?;
        let asked = Edge { diameter_m: 52.3, pressure_kpa: 117.3, smallest_width_m: None };
        each("edge factor of safety", edge_stability(&profile, &asked).ok()?.factor_of_safety);
        let base = base_stability(&profile, asked.diameter_m, asked.pressure_kpa).ok()?;
        each("base factor of safety", base.factor_of_safety);
        let [_, clay, _] = self.slices;
        let (strength, gradient) = (clay.undrained_strength_kpa, clay.gradient_kpa_per_m);
        for roughness in [Roughness::Smooth, Roughness::Rough] {
            let found = circular_bearing(asked.diameter_m, strength, gradient, roughness).ok()?;
            each("bearing capacity kPa", found.ultimate_kpa);
        }
        let squeezed = squeezing_pressure_kpa(Plan::Circle, 52.3, clay.thickness_m, strength);
        each("squeezing pressure kPa", squeezed.ok()?);
        let gain = StrengthGain::new(0.23, 0.81).ok()?;
        each("strength kPa", gain.strength_kpa(47.9, 61.3).ok()?);
        let henkel = UndrainedResponse::new(PorePressureLaw::Henkel { a: 0.37, b: 0.98 }).ok()?;
        let skempton = UndrainedResponse::new(PorePressureLaw::Skempton { a: 0.8, b: 1.0 }).ok()?;
        let response = YieldingResponse::new(henkel, 0.5, skempton).ok()?;
        let increment = Principal { sigma_1_kpa: 83.1, sigma_2_kpa: 37.9, sigma_3_kpa: 21.7 };
        let point = LoadedPoint {
            increment,
            vertical_increment_kpa: 81.7,
            in_situ_effective_kpa: 47.9,
            preconsolidation_kpa: 61.3,
        };
        each("yielding excess kPa", response.at(&point).ok()?.excess_kpa);
        Some(())
    }

    #[inline(never)]
    fn shell(&self, each: &mut impl FnMut(&'static str, f64)) -> Option<()> {
        let fit = PerimeterFit::new(&self.perimeter, 52.3, 0.0014).ok()?;
        each("shell uniform m", fit.uniform_m());
        each("shell tilt m", fit.tilt().across_diameter_m);
        each("shell azimuth rad", fit.tilt().azimuth_rad?);
        let steel = ShellSteel::new(18.1, 355.0, 205_000.0).ok()?;
        for shape in fit.shapes() {
            each("shell out of plane m", shape.out_of_plane_m?);
            each("shell noise m", shape.noise_limit_m);
            each("shell permitted m", fit.limit(&shape, &steel).permitted_m);
        }
        let waves = Harmonics::new(&self.perimeter, 3).ok()?;
        each("shell second wave m", waves.wave(2)?.amplitude_m);
        Some(())
    }

    #[inline(never)]
    fn forecasts(&self, each: &mut impl FnMut(&'static str, f64)) -> Option<()> {
        let line = asaoka(&self.readings, 9.1e4, 3.7e5).ok()?;
        each("forecast Asaoka m", line.ultimate.settlement_m?);
        each("forecast Asaoka upper m", line.ultimate.interval_m?.high);
        let hyperbola = hyperbolic(&self.readings).ok()?;
        each("forecast hyperbolic m", hyperbola.ultimate.settlement_m?);
        each("forecast rate m/day", rate(&self.readings).ok()?.m_per_day);
        let tail = secondary_line(&self.readings).ok()?;
        each("forecast secondary m", tail.settlement_at(1.3e7).ok()?.settlement_m);
        let mut factors = Factors::new(0.3, 0.5).ok()?;
        let predicted = Predicted { settlement_m: 0.101, by_size_m: 0.101, by_pace_m: 0.037 };
        factors.take(0.117, 0.002, &predicted).ok()?;
        each("forecast factor", factors.size);
        Some(())
    }
}
