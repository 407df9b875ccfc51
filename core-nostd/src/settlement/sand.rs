//! Settlement of a circular load on sand by strain influence factors.

use super::SettlementError;
use crate::ground::YOUNG_MODULUS;
use crate::quantity::Bounded;
use crate::working::{Silent, Step, Working};

/// Diameter of the load.
pub use super::modulus::LOAD_DIAMETER;

/// Net pressure of the load.
pub static NET_PRESSURE: Bounded = Bounded {
    name: "net pressure",
    unit: "kPa",
    min: 0.1,
    max: 2000.0,
    remedy: "Contact pressure less the effective overburden at the loaded level.",
};
/// Effective overburden at the loaded level.
pub static OVERBURDEN: Bounded = Bounded {
    name: "effective overburden at the loaded level",
    unit: "kPa",
    min: 0.0,
    max: 2000.0,
    remedy: "Effective vertical stress before loading at the loaded level; 0 at ground level.",
};
/// Effective overburden at the depth of the peak.
pub static OVERBURDEN_AT_PEAK: Bounded = Bounded {
    name: "effective overburden at the peak of the influence factor",
    unit: "kPa",
    min: 0.1,
    max: 5000.0,
    remedy: "Effective vertical stress before loading half a diameter below the loaded level.",
};
/// Time under load.
pub static YEARS_UNDER_LOAD: Bounded = Bounded {
    name: "time under load",
    unit: "years",
    min: 0.0,
    max: 1000.0,
    remedy: "Give it in years.",
};
/// A depth below the loaded level.
pub static DEPTH_BELOW_LOAD: Bounded = Bounded {
    name: "depth below the loaded level",
    unit: "m",
    min: 0.0,
    max: 10_000.0,
    remedy: "Positive down from the loaded level.",
};

/// Influence factor at the loaded level (axisymmetric).
const AT_TOP: f64 = 0.1;
/// Floor of the depth factor C1 (Schmertmann 1970; from memory, not read in print).
const DEPTH_FACTOR_FLOOR: f64 = 0.5;

/// A layer below the loaded level.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SandLayer {
    /// Depth of its top below the loaded level, m.
    pub top_m: f64,
    /// Depth of its base below the loaded level, m.
    pub base_m: f64,
    /// Young's modulus of the method, kPa: 2.5 times the cone resistance qc under a circle.
    pub modulus_kpa: f64,
}

/// A circular load on sand.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SandLoad {
    /// Diameter, m.
    pub diameter_m: f64,
    /// Contact pressure less the effective overburden at the loaded level, kPa.
    pub net_pressure_kpa: f64,
    /// Effective overburden at the loaded level, kPa.
    pub overburden_kpa: f64,
    /// Effective overburden before loading half a diameter below the loaded level, kPa.
    pub effective_overburden_at_peak_kpa: f64,
    /// Time under load, years.
    pub time_years: f64,
}

/// Settlement by strain influence factors.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SandSettlement {
    /// Settlement of the centre, m.
    pub settlement_m: f64,
    /// Factor for the depth of the loaded level.
    pub c1: f64,
    /// Factor for time under load.
    pub c2: f64,
    /// Largest strain influence factor, half a diameter below the loaded level.
    pub peak_influence: f64,
    /// Share of the area of the influence diagram that the layers cover, 0 to 1. Below the last
    /// layer the method was given nothing and adds nothing: below 1, the settlement is too small
    /// unless that layer stands on rock.
    pub covered: f64,
}

/// Settlement of a circular load on sand by Schmertmann, Hartman & Brown 1978.
///
/// `S = C1 C2 q sum(Iz dz/E)` with the influence factor Iz linear from 0.1 at the loaded level to
/// `0.5 + 0.1 sqrt(q/svp)` half a diameter down and to 0 two diameters down;
/// `C1 = max(0.5, 1 - 0.5 s0/q)`, `C2 = 1 + 0.2 log10(t/0.1 year)`, not below 1. Iz is integrated
/// exactly, so that cutting a layer in two changes nothing.
///
/// # Assumptions
/// Normally loaded sand, first loading, static; moduli from the cone by the method's own rule. The
/// method was calibrated on footings of a few metres, not on tanks.
///
/// # Errors
/// [`SettlementError::Value`], or [`SettlementError::LayersNotContiguous`] for layers that do not
/// follow each other from the loaded level down.
pub fn strain_influence_settlement(
    load: &SandLoad,
    layers: &[SandLayer],
) -> Result<SandSettlement, SettlementError> {
    strain_influence_settlement_with(load, layers, &mut Silent)
}

/// As [`strain_influence_settlement`], writing its steps.
///
/// # Errors
/// As [`strain_influence_settlement`].
pub fn strain_influence_settlement_with(
    load: &SandLoad,
    layers: &[SandLayer],
    working: &mut impl Working,
) -> Result<SandSettlement, SettlementError> {
    check(load, layers)?;
    let q = load.net_pressure_kpa;
    let (c1, c2) = (depth_factor(load, working), time_factor(load, working));
    let diagram = Diagram::new(load, working);
    let (mut sum_m_per_kpa, mut area_m) = (0.0, 0.0);
    for (index, layer) in layers.iter().enumerate() {
        let part_m = diagram.area_m(layer.base_m) - diagram.area_m(layer.top_m);
        let value = part_m / layer.modulus_kpa;
        working.step(Step {
            name: "integral of the influence factor over the layer, by its modulus",
            value,
            unit: "m/kPa",
            formula: "integral of Iz dz from z_top to z_base / E",
            inputs: &[
                ("layer", index as f64 + 1.0),
                ("z_top", layer.top_m),
                ("z_base", layer.base_m),
                ("integral", part_m),
                ("E", layer.modulus_kpa),
            ],
            source: "",
        });
        sum_m_per_kpa += value;
        area_m += part_m;
    }
    let settlement_m = c1 * c2 * q * sum_m_per_kpa;
    working.step(Step {
        name: "settlement by strain influence factors",
        value: settlement_m,
        unit: "m",
        formula: "C1 C2 q sum",
        inputs: &[("C1", c1), ("C2", c2), ("q", q), ("sum", sum_m_per_kpa)],
        source: "Schmertmann, Hartman & Brown 1978",
    });
    let covered = area_m / diagram.area_m(2.0 * load.diameter_m);
    Ok(SandSettlement { settlement_m, c1, c2, peak_influence: diagram.peak, covered })
}

fn check(load: &SandLoad, layers: &[SandLayer]) -> Result<(), SettlementError> {
    LOAD_DIAMETER.check(load.diameter_m)?;
    NET_PRESSURE.check(load.net_pressure_kpa)?;
    OVERBURDEN.check(load.overburden_kpa)?;
    OVERBURDEN_AT_PEAK.check(load.effective_overburden_at_peak_kpa)?;
    YEARS_UNDER_LOAD.check(load.time_years)?;
    let mut expected_top_m = 0.0;
    for (index, layer) in layers.iter().enumerate() {
        DEPTH_BELOW_LOAD.check_at(layer.top_m, index)?;
        DEPTH_BELOW_LOAD.check_at(layer.base_m, index)?;
        YOUNG_MODULUS.check_at(layer.modulus_kpa, index)?;
        // A micrometre for the rounding of typed depths.
        let apart_m = (layer.top_m - expected_top_m).abs();
        if apart_m > 1e-6 || layer.base_m <= layer.top_m {
            let top_m = layer.top_m;
            return Err(SettlementError::LayersNotContiguous { index, expected_top_m, top_m });
        }
        expected_top_m = layer.base_m;
    }
    if layers.is_empty() {
        return Err(crate::ground::GroundError::NoLayer.into());
    }
    Ok(())
}

fn depth_factor(load: &SandLoad, working: &mut impl Working) -> f64 {
    let (s0, q) = (load.overburden_kpa, load.net_pressure_kpa);
    let value = (1.0 - 0.5 * s0 / q).max(DEPTH_FACTOR_FLOOR);
    working.step(Step {
        name: "factor for the depth of the loaded level C1",
        value,
        unit: "",
        formula: "max(0.5, 1 - 0.5 s0/q)",
        inputs: &[("s0", s0), ("q", q)],
        source: "Schmertmann 1970",
    });
    value
}

fn time_factor(load: &SandLoad, working: &mut impl Working) -> f64 {
    let t = load.time_years;
    let value = if t > 0.1 { 1.0 + 0.2 * libm::log10(t / 0.1) } else { 1.0 };
    working.step(Step {
        name: "factor for time under load C2",
        value,
        unit: "",
        formula: "1 + 0.2 log10(t/0.1), 1 before 0.1 year",
        inputs: &[("t", t)],
        source: "Schmertmann 1970",
    });
    value
}

/// The influence diagram: 0.1 at the top, its peak at half a diameter, 0 at two.
struct Diagram {
    peak: f64,
    peak_m: f64,
    end_m: f64,
}

impl Diagram {
    fn new(load: &SandLoad, working: &mut impl Working) -> Self {
        let (q, svp) = (load.net_pressure_kpa, load.effective_overburden_at_peak_kpa);
        let peak = 0.5 + 0.1 * libm::sqrt(q / svp);
        working.step(Step {
            name: "largest strain influence factor",
            value: peak,
            unit: "",
            formula: "0.5 + 0.1 sqrt(q/svp)",
            inputs: &[("q", q), ("svp", svp)],
            source: "Schmertmann, Hartman & Brown 1978",
        });
        Self { peak, peak_m: 0.5 * load.diameter_m, end_m: 2.0 * load.diameter_m }
    }

    /// Area of the diagram from the loaded level to a depth, m.
    fn area_m(&self, depth_m: f64) -> f64 {
        let rising_m = depth_m.min(self.peak_m);
        let slope = (self.peak - AT_TOP) / self.peak_m;
        let rising = AT_TOP * rising_m + 0.5 * slope * rising_m * rising_m;
        let falling_m = (depth_m.min(self.end_m) - self.peak_m).max(0.0);
        let length_m = self.end_m - self.peak_m;
        rising + self.peak * falling_m * (1.0 - 0.5 * falling_m / length_m)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const LOAD: SandLoad = SandLoad {
        diameter_m: 4.0,
        net_pressure_kpa: 160.0,
        overburden_kpa: 40.0,
        effective_overburden_at_peak_kpa: 40.0,
        time_years: 10.0,
    };

    fn layer(top_m: f64, base_m: f64, modulus_kpa: f64) -> SandLayer {
        SandLayer { top_m, base_m, modulus_kpa }
    }

    #[test]
    fn one_layer_by_hand() {
        // Izp = 0.5 + 0.1*2 = 0.7; area = 2 (0.1+0.7)/2 + 6*0.7/2 = 0.8 + 2.1 = 2.9 m;
        // C1 = 1 - 0.5*0.25 = 0.875; C2 = 1 + 0.2*2 = 1.4; S = 0.875*1.4*160*2.9/20000.
        let found = strain_influence_settlement(&LOAD, &[layer(0.0, 8.0, 20_000.0)]).unwrap();
        assert!((found.peak_influence - 0.7).abs() < 1e-15);
        assert!((found.c1 - 0.875).abs() < 1e-15);
        assert!((found.c2 - 1.4).abs() < 1e-15);
        assert!((found.settlement_m - 0.02842).abs() < 1e-15, "{found:?}");
        assert!((found.covered - 1.0).abs() < 1e-15);
    }

    #[test]
    fn cutting_layers_changes_nothing_and_depth_beyond_two_diameters_adds_nothing() {
        let whole = strain_influence_settlement(&LOAD, &[layer(0.0, 8.0, 20_000.0)]).unwrap();
        let cut = [
            layer(0.0, 0.7, 20_000.0),
            layer(0.7, 2.9, 20_000.0),
            layer(2.9, 8.0, 20_000.0),
            layer(8.0, 30.0, 500.0),
        ];
        let cut = strain_influence_settlement(&LOAD, &cut).unwrap();
        assert!((whole.settlement_m - cut.settlement_m).abs() < 1e-15);
    }

    #[test]
    fn ground_that_ends_early_says_how_much_is_covered() {
        let found = strain_influence_settlement(&LOAD, &[layer(0.0, 2.0, 20_000.0)]).unwrap();
        assert!((found.covered - 0.8 / 2.9).abs() < 1e-15);
    }

    #[test]
    fn factors_have_their_floors() {
        let deep = SandLoad { overburden_kpa: 300.0, time_years: 0.01, ..LOAD };
        let found = strain_influence_settlement(&deep, &[layer(0.0, 8.0, 20_000.0)]).unwrap();
        assert_eq!((found.c1, found.c2), (0.5, 1.0));
    }

    #[test]
    fn gaps_overlaps_and_nonsense_are_refused() {
        for layers in [
            &[][..],
            &[layer(0.5, 8.0, 1e4)],
            &[layer(0.0, 2.0, 1e4), layer(2.5, 8.0, 1e4)],
            &[layer(0.0, 2.0, 1e4), layer(2.0, 1.0, 1e4)],
            &[layer(0.0, 8.0, f64::NAN)],
        ] {
            assert!(strain_influence_settlement(&LOAD, layers).is_err(), "{layers:?}");
        }
        let none = SandLoad { net_pressure_kpa: 0.0, ..LOAD };
        assert!(strain_influence_settlement(&none, &[layer(0.0, 8.0, 1e4)]).is_err());
    }
}
