//! Grounds that several tests load.

use brimstead_core::config::Name;
use brimstead_core::ground::{
    BaseDrainage, BaseStiffness, Compressibility, Ground, GroundWater, Layer, Preconsolidation,
};

/// A clay layer; what a test is not about has a plausible value.
pub fn layer(
    thickness_m: f64,
    unit_weight_kn_m3: f64,
    compressibility: Compressibility,
    preconsolidation: Preconsolidation,
) -> Layer {
    Layer {
        name: Name::try_from("clay").unwrap_or_default(),
        thickness_m,
        unit_weight_above_water_kn_m3: unit_weight_kn_m3,
        unit_weight_below_water_kn_m3: unit_weight_kn_m3,
        compressibility,
        preconsolidation,
        secondary_ratio: 0.0,
        cv_m2_per_s: 3e-8,
        ch_m2_per_s: 6e-8,
        permeability_m_per_s: 1e-9,
        young_undrained_kpa: 10_000.0,
        young_drained_kpa: 7_000.0,
        poisson_drained: 0.3,
        undrained_strength_kpa: 20.0,
        undrained_strength_gradient_kpa_per_m: 1.5,
        pore_pressure_response: 1.0,
        drained: false,
    }
}

/// Layers over a rigid base, hydrostatic below a water table.
pub fn ground(layers: impl IntoIterator<Item = Layer>, water_table_m: f64) -> Ground {
    Ground {
        layers: layers.into_iter().collect(),
        water: GroundWater::Hydrostatic { water_table_m },
        water_unit_weight_kn_m3: 9.81,
        base_drainage: BaseDrainage::Closed,
        base_stiffness: BaseStiffness::Rigid,
    }
}

/// Crust, two soft clays and a normally consolidated clay: the profile in the head of
/// `tests/reference/time/t05_oc_nc_sublayers.csv`.
pub fn crust_over_soft_clay() -> Ground {
    let clay = |thickness_m, unit_weight, (void_ratio, cc, cr), preconsolidation, c_alpha: f64| {
        let law = Compressibility::Index { void_ratio, cc, cr };
        Layer {
            secondary_ratio: c_alpha / (1.0 + void_ratio),
            ..layer(thickness_m, unit_weight, law, preconsolidation)
        }
    };
    ground(
        [
            clay(2.0, 18.5, (0.90, 0.25, 0.040), Preconsolidation::PopKpa(80.0), 0.006),
            clay(3.0, 16.5, (1.60, 0.70, 0.080), Preconsolidation::Ocr(1.6), 0.028),
            clay(4.0, 16.0, (1.85, 0.85, 0.090), Preconsolidation::Ocr(1.15), 0.038),
            clay(5.0, 17.0, (1.40, 0.60, 0.070), Preconsolidation::Ocr(1.0), 0.024),
        ],
        1.0,
    )
}
