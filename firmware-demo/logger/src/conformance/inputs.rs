//! The invented tank, ground, drains, gauge and rounds.

use super::rounds::Rounds;
use super::scan::Guard;
use brimstead_core::config::Name;
use brimstead_core::consolidation::{DrainPattern, Drains};
use brimstead_core::expectation::{DrainZone, SiteModel};
use brimstead_core::ground::{
    BaseDrainage, BaseStiffness, Compressibility, Ground, GroundWater, Layer, Preconsolidation,
};
use brimstead_core::instrument::reduce::{WireCalibration, WireConversion};
use brimstead_core::load::{PlanPosition, Tank};

/// What the numbers are computed from.
#[derive(Debug, Clone)]
pub struct Inputs {
    pub(super) site: SiteModel,
    pub(super) gauge: WireCalibration,
    pub(super) rounds: Rounds,
    pub(super) guard: Guard,
}

impl Inputs {
    /// The invented tank on its invented ground. `None` only when they outgrow the core's
    /// capacities.
    #[must_use]
    // Its copies must not stay on the stack while the numbers are computed.
    #[inline(never)]
    pub fn invented() -> Option<Self> {
        Some(Self {
            site: site()?,
            gauge: GAUGE,
            rounds: Rounds::invented(),
            guard: Guard::invented()?,
        })
    }
}

const DRAINS: Drains = Drains {
    pattern: DrainPattern::Triangular,
    spacing_m: 1.7,
    equivalent_diameter_m: 0.066,
    smear_ratio: 2.4,
    permeability_ratio_h_over_s: 3.1,
    discharge_m3_per_s: Some(1.3e-5),
    top_m: 0.0,
    base_m: 12.9,
    length_m: 12.9,
};

const GAUGE: WireCalibration = WireCalibration {
    digits_zero: 8932.1,
    conversion: WireConversion::Linear { factor_kpa_per_digit: 0.0713 },
    temperature_zero_c: 11.3,
    temperature_factor_kpa_per_c: -0.031,
    barometer_zero_kpa: 101.2,
    apply_temperature: true,
    apply_barometer: true,
};

fn site() -> Option<SiteModel> {
    let tank = tank()?;
    let neighbour =
        Tank { axis: PlanPosition { x_m: 61.3, y_m: -22.9 }, diameter_m: 31.0, ..tank.clone() };
    let drains = DrainZone { drains: DRAINS, axis: tank.axis, radius_m: 30.0 };
    let mut site = SiteModel { ground: ground()?, drains: Some(drains), tanks: Default::default() };
    for tank in [tank, neighbour] {
        site.tanks.push(tank).ok()?;
    }
    Some(site)
}

fn tank() -> Option<Tank> {
    Some(Tank {
        name: Name::try_from("conformance").ok()?,
        axis: PlanPosition { x_m: 0.1, y_m: 0.2 },
        diameter_m: 52.3,
        shell_height_m: 18.1,
        loaded_depth_m: 0.0,
        floor_pressure_kpa: 0.79,
        pad_pressure_kpa: 21.3,
        excavation_relief_kpa: 4.9,
        shell_line_load_kn_m: 41.7,
        ring_line_load_kn_m: 9.3,
    })
}

fn ground() -> Option<Ground> {
    let clay = Layer {
        name: Name::try_from("clay").ok()?,
        thickness_m: 11.7,
        unit_weight_above_water_kn_m3: 16.3,
        unit_weight_below_water_kn_m3: 16.9,
        compressibility: Compressibility::Index { void_ratio: 1.62, cc: 0.71, cr: 0.083 },
        preconsolidation: Preconsolidation::PopKpa(23.0),
        secondary_ratio: 0.011,
        cv_m2_per_s: 3.3e-8,
        ch_m2_per_s: 7.1e-8,
        permeability_m_per_s: 1.1e-9,
        young_undrained_kpa: 11_300.0,
        young_drained_kpa: 7_700.0,
        poisson_drained: 0.31,
        undrained_strength_kpa: 19.0,
        undrained_strength_gradient_kpa_per_m: 1.7,
        pore_pressure_response: 1.0,
        drained: false,
    };
    let crust = Layer {
        name: Name::try_from("crust").ok()?,
        thickness_m: 1.9,
        preconsolidation: Preconsolidation::Ocr(4.3),
        ..clay.clone()
    };
    let sand = Layer {
        name: Name::try_from("sand").ok()?,
        thickness_m: 14.0,
        compressibility: Compressibility::Modulus { constrained_modulus_kpa: 41_000.0 },
        preconsolidation: Preconsolidation::Ocr(1.0),
        drained: true,
        ..clay.clone()
    };
    let mut ground = Ground {
        layers: Default::default(),
        water: GroundWater::Hydrostatic { water_table_m: 1.3 },
        water_unit_weight_kn_m3: 9.81,
        base_drainage: BaseDrainage::Drained,
        base_stiffness: BaseStiffness::HalfSpace { young_kpa: 61_000.0, poisson: 0.29 },
    };
    for layer in [crust, clay, sand] {
        ground.layers.push(layer).ok()?;
    }
    Some(ground)
}
