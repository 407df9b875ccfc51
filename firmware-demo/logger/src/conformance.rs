//! The numbers by which a logger and a desktop show that they compute the same to the last bit.
//!
//! Both run [`write_bits`] and compare the text. What the numbers should be is tested in the core
//! against published values; here only sameness counts, so tank and ground are invented.

use brimstead_core::config::Name;
use brimstead_core::ground::{
    BaseDrainage, BaseStiffness, Compressibility, Ground, GroundWater, Layer, Preconsolidation,
    Profile,
};
use brimstead_core::load::{PlanPosition, Tank};
use brimstead_core::settlement::immediate::immediate_settlement;
use brimstead_core::settlement::primary::primary_settlement;
use brimstead_core::stress::{Disc, Ring};
use brimstead_core::working::Silent;
use core::fmt;

/// Levels of the water above the tank floor, m.
const LIQUID_LEVELS_M: [f64; 3] = [0.0, 11.113, 17.9];
/// Distances from the tank's axis as parts of its radius: axis, inside, edge, outside.
const PLACES: [f64; 4] = [0.0, 0.37, 1.0, 1.8];
/// Depths below the loaded level, m, for the stresses.
const DEPTHS_M: [f64; 4] = [0.0, 0.6, 9.7, 71.0];
/// Wanted accuracy of a settlement, m.
const SETTLEMENT_ERROR_M: f64 = 1e-6;

/// Any Young's modulus, kPa: it is divided out again.
const YOUNG_KPA: f64 = 1000.0;

/// What the numbers are computed from.
#[derive(Debug, Clone)]
pub struct Inputs {
    tank: Tank,
    neighbour: PlanPosition,
    ground: Ground,
}

impl Inputs {
    /// The invented tank on its invented ground. `None` only when they outgrow the core's
    /// capacities.
    #[must_use]
    pub fn invented() -> Option<Self> {
        Some(Self {
            tank: tank()?,
            neighbour: PlanPosition { x_m: 61.3, y_m: -22.9 },
            ground: ground()?,
        })
    }
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

/// Computes every number and hands it on with its name; `None` when the core refuses an input.
pub fn compute(inputs: &Inputs, mut each: impl FnMut(&'static str, f64)) -> Option<()> {
    let Inputs { tank, neighbour, ground } = inputs;
    let profile = Profile::new(ground).ok()?;
    each("tank area m2", tank.area_m2());
    each("axis distance m", tank.axis.distance_to_m(neighbour));
    for level_m in LIQUID_LEVELS_M {
        let pressure_kpa =
            tank.applied_pressure_kpa(level_m, ground.water_unit_weight_kn_m3, &mut Silent).ok()?;
        each("applied pressure kPa", pressure_kpa);
        let disc = Disc::new(tank.radius_m(), pressure_kpa, 0.31).ok()?;
        let undrained = Disc::new(tank.radius_m(), pressure_kpa, 0.5).ok()?;
        let ring = Ring::new(tank.radius_m(), tank.dead_line_load_kn_m(), 0.31).ok()?;
        for place in PLACES {
            let r_m = place * tank.radius_m();
            stresses(&disc, &ring, r_m, &mut each)?;
            settlements(&profile, &disc, &undrained, r_m, &mut each)?;
        }
    }
    Some(())
}

fn stresses(
    disc: &Disc,
    ring: &Ring,
    r_m: f64,
    each: &mut impl FnMut(&'static str, f64),
) -> Option<()> {
    for z_m in DEPTHS_M {
        let stress = disc.stress_at(r_m, z_m).ok()?;
        each("disc vertical stress kPa", stress.sigma_z_kpa);
        each("disc radial stress kPa", stress.sigma_r_kpa);
        let below_the_line = z_m > 0.0;
        if below_the_line {
            each("ring vertical stress kPa", ring.stress_at(r_m, z_m).ok()?.sigma_z_kpa);
        }
    }
    Some(())
}

fn settlements(
    profile: &Profile<'_>,
    disc: &Disc,
    undrained: &Disc,
    r_m: f64,
    each: &mut impl FnMut(&'static str, f64),
) -> Option<()> {
    let increment_kpa =
        |depth_m: f64| disc.stress_at(r_m, depth_m).map_or(f64::NAN, |at| at.sigma_z_kpa);
    let primary = primary_settlement(profile, increment_kpa, 0.0, SETTLEMENT_ERROR_M).ok()?;
    each("primary settlement m", primary.settlement_m);

    let times_young = |depth_m: f64, _: f64| {
        let moved = undrained.displacement_at(YOUNG_KPA, r_m, depth_m);
        moved.map_or(f64::NAN, |at| at.settlement_m * YOUNG_KPA)
    };
    let immediate = immediate_settlement(profile, times_young, 0.0).ok()?;
    each("immediate settlement m", immediate.settlement_m);
    Some(())
}

/// Writes one line a number: what it is, and its bits in hexadecimal. Numbers are not written as
/// decimals, because formatting a float costs the logger two kilobytes of stack.
///
/// # Errors
/// [`fmt::Error`] when the sink refuses or when the core refuses an input, which it must not.
pub fn write_bits(sink: &mut impl fmt::Write) -> fmt::Result {
    let inputs = Inputs::invented().ok_or(fmt::Error)?;
    let mut written = Ok(());
    let computed = compute(&inputs, |name, value| {
        written = written.and_then(|()| writeln!(sink, "{name} {:016x}", value.to_bits()));
    });
    written.and(computed.ok_or(fmt::Error))
}

#[cfg(test)]
mod tests {
    extern crate std;
    use super::*;
    use std::string::String;

    #[test]
    fn every_line_is_a_name_and_a_finite_number() {
        let mut text = String::new();
        write_bits(&mut text).unwrap();
        for line in text.lines() {
            let (name, bits) = line.rsplit_once(' ').unwrap();
            let value = f64::from_bits(u64::from_str_radix(bits, 16).unwrap());
            assert!(!name.is_empty() && value.is_finite(), "{line}");
        }
        for room in ["pressure", "disc", "ring", "primary", "immediate"] {
            assert!(text.contains(room), "nothing of {room} is compared");
        }
    }

    #[test]
    fn a_refused_input_is_an_error_and_not_a_shorter_list() {
        let mut inputs = Inputs::invented().unwrap();
        inputs.tank.shell_height_m = 5.0;
        assert_eq!(compute(&inputs, |_, _| {}), None);
    }
}
