//! The numbers by which a logger and a desktop show that they compute the same to the last bit.
//!
//! Both run [`write_bits`] and compare the text. What the numbers should be is tested in the core
//! against published values; here only sameness counts, so tank, ground and gauge are invented.

mod inputs;
mod rounds;
mod scan;

pub use inputs::Inputs;

use brimstead_core::config::COLUMN_CELLS;
use brimstead_core::consolidation::{self, Boundary, ColumnLayer, Factor, Loading, Stepper};
use brimstead_core::expectation::{Column, LiquidPressures, Moment, Point, Sensor, SiteModel};
use brimstead_core::ground::Profile;
use brimstead_core::instrument::Kind;
use brimstead_core::instrument::reduce::{VibratingWire, WireInput};
use brimstead_core::load::PlanPosition;
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

/// Steps of the column after the fill, s: within a scan, an hour, a month.
const STEPS_S: [f64; 3] = [600.0, 3600.0, 2.6e6];
/// Depths at which the gauges sit, m.
const GAUGE_DEPTHS_M: [f64; 3] = [2.5, 7.7, 12.1];

const DAY_S: i64 = 86_400;
const YEAR_S: i64 = 365 * DAY_S;

/// Any Young's modulus, kPa: it is divided out again.
const YOUNG_KPA: f64 = 1000.0;

/// Computes every number and hands it on with its name; `None` when the core refuses an input.
pub fn compute(inputs: &Inputs, mut each: impl FnMut(&'static str, f64)) -> Option<()> {
    let ground = &inputs.site.ground;
    let [tank, neighbour] = inputs.site.tanks.as_slice() else { return None };
    let profile = Profile::new(ground).ok()?;
    each("tank area m2", tank.area_m2());
    each("axis distance m", tank.axis.distance_to_m(&neighbour.axis));
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
    pore_pressures(inputs, &mut each)?;
    gauge_pressures(inputs, &mut each)?;
    expected_readings(&inputs.site, &mut each)?;
    inputs.rounds.compute(&mut each)?;
    scan::judgements(&inputs.guard, &mut each)
}

// These parts stay functions of their own: joined, they would all hold their stack at once.

#[inline(never)]
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

#[inline(never)]
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

/// The column after a sudden fill, over short steps and long ones.
#[inline(never)]
fn pore_pressures(inputs: &Inputs, each: &mut impl FnMut(&'static str, f64)) -> Option<()> {
    let [crust, clay, sand] = inputs.site.ground.layers.as_slice() else { return None };
    let layers = [crust, clay, sand].map(ColumnLayer::from);
    let stepper = Stepper::<COLUMN_CELLS>::new(&consolidation::Column {
        layers: &layers,
        top: Boundary::Drained,
        base: Boundary::Closed,
        drains: Some(&inputs.site.drains.as_ref()?.drains),
        water_unit_weight_kn_m3: inputs.site.ground.water_unit_weight_kn_m3,
    })
    .ok()?;
    let mut state = stepper.at_rest();
    let mut factor = Factor::empty();
    let increments_kpa = [117.3; COLUMN_CELLS];
    let mut loading = Loading::Jump(&increments_kpa);
    for step_s in STEPS_S {
        let balance = stepper.advance(&mut state, loading, step_s, &mut factor).ok()?;
        loading = Loading::Hold;
        each("outflow m", balance.outflow_m());
        each("column settlement m", stepper.settlement_m(&state, &increments_kpa));
        for depth_m in GAUGE_DEPTHS_M {
            let excess_kpa = stepper.excess_at_kpa(&state, depth_m).ok()?;
            each("excess pore pressure kPa", excess_kpa);
        }
    }
    Some(())
}

#[inline(never)]
fn gauge_pressures(inputs: &Inputs, each: &mut impl FnMut(&'static str, f64)) -> Option<()> {
    let gauge = VibratingWire::new(&inputs.gauge).ok()?;
    for digits in [8932.1, 7741.9, 6120.3] {
        let input = WireInput { digits, temperature_c: Some(12.7), barometer_kpa: Some(99.8) };
        each("gauge pressure kPa", gauge.pressure(&input).ok()?.pressure_kpa);
    }
    Some(())
}

/// What a piezometer and a settlement plate should read while the tank fills.
#[inline(never)]
fn expected_readings(site: &SiteModel, each: &mut impl FnMut(&'static str, f64)) -> Option<()> {
    let place = PlanPosition { x_m: 9.3, y_m: -4.1 };
    let sensor = |kind, depth_m| Sensor { kind, place, depth_m, tip_sinks: true };
    // Borrowed where it was made: a column is large, and moving it would need room for two.
    let column = Column::<COLUMN_CELLS>::new(site, place);
    let column = column.as_ref().ok()?;
    let piezometer = Point::new(site, sensor(Kind::Piezometer, 7.7)).ok()?;
    let plate = Point::new(site, sensor(Kind::SettlementPlate, 0.3)).ok()?;

    let mut liquid_kpa = LiquidPressures::default();
    let mut state = column.start(0, &liquid_kpa).ok()?;
    let mut factor = Factor::empty();
    column.advance(&mut state, YEAR_S, &liquid_kpa, &mut factor).ok()?;
    let zeros = [piezometer.zero(column, &state), plate.zero(column, &state)];
    let mut time_s = YEAR_S;
    for level_m in LIQUID_LEVELS_M {
        time_s += DAY_S;
        let tank = site.tanks.first()?;
        *liquid_kpa.first_mut()? =
            tank.liquid_pressure_kpa(level_m, site.ground.water_unit_weight_kn_m3).ok()?;
        column.advance(&mut state, time_s, &liquid_kpa, &mut factor).ok()?;
        let moment = Moment { liquid_level_m: level_m, background_kpa: 0.7 };
        for (point, zero) in [&piezometer, &plate].into_iter().zip(zeros) {
            each("expected reading", point.reading(column, &state, zero, &moment).ok()?);
        }
    }
    Some(())
}

/// Writes one line a number: what it is, and its bits in hexadecimal. Numbers are not written as
/// decimals, because formatting a float costs the logger two kilobytes of stack.
///
/// # Errors
/// [`fmt::Error`] when the sink refuses or when the core refuses an input, which it must not.
pub fn write_bits(sink: &mut impl fmt::Write) -> fmt::Result {
    // Borrowed where they were made, as the column above.
    let inputs = Inputs::invented();
    let inputs = inputs.as_ref().ok_or(fmt::Error)?;
    let mut written = Ok(());
    let computed = compute(inputs, |name, value| {
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
        for room in [
            "applied",
            "disc",
            "ring",
            "primary",
            "immediate",
            "excess",
            "gauge",
            "expected",
            "edge",
            "shell",
            "forecast",
            "trigger",
        ] {
            assert!(text.contains(room), "nothing of {room} is compared");
        }
    }

    #[test]
    fn a_refused_input_is_an_error_and_not_a_shorter_list() {
        let mut inputs = Inputs::invented().unwrap();
        inputs.site.tanks[0].shell_height_m = 5.0;
        assert_eq!(compute(&inputs, |_, _| {}), None);
    }
}
