//! The hand-check sheet of one expected reading.

use super::column::{Column, ColumnState, influence_of};
use super::point::half_space_settlement;
use super::{ExpectationError, Moment, Point, SiteModel, Zero};
use crate::ground::Profile;
use crate::load::Tank;
use crate::quantity::Kind;
use crate::settlement::immediate::immediate_settlement_with;
use crate::stress::{Disc, Ring};
use crate::working::{Step, Working};

/// Writes how the reading expected of an instrument at the moment its column has reached comes
/// about: applied pressure and stress increment of each tank, in-situ stress, excess pore pressure,
/// settlement by its parts, and the reading itself. Returns the reading.
///
/// Excess pore pressure and creep follow the whole history of loading and cannot be repeated in
/// one line; the sheet states their value and the sums around them that can.
///
/// # Errors
/// As [`Point::reading`].
pub fn explain<const CELLS: usize>(
    model: &SiteModel,
    point: &Point,
    (column, state): (&Column<CELLS>, &ColumnState<CELLS>),
    zero: Zero,
    moment: &Moment,
    working: &mut impl Working,
) -> Result<f64, ExpectationError> {
    let depth_m = point.sensor.depth_m;
    let profile = Profile::new(&model.ground)?;
    let reading = point.reading(column, state, zero, moment)?;
    if point.sensor.kind == Kind::LevelGauge {
        working.step(Step {
            name: "expected liquid level",
            value: reading,
            unit: "m",
            formula: "the level in use for the load",
            inputs: &[],
            source: "",
        });
        return Ok(reading);
    }
    let mut increment_kpa = 0.0;
    for (tank, liquid_kpa) in model.tanks.iter().zip(&state.liquid_kpa) {
        increment_kpa += explain_tank(tank, point, *liquid_kpa, working)?;
    }
    working.step(Step {
        name: "vertical stress increment of all tanks",
        value: increment_kpa,
        unit: "kPa",
        formula: "sum over tanks, liquid and dead load",
        inputs: &[],
        source: "superposition, linear elasticity",
    });
    profile.effective_stress_kpa_with(depth_m, working)?;
    profile.preconsolidation_kpa_with(depth_m, working)?;
    let excess_kpa = column.excess_pore_pressure_kpa(state, depth_m)?;
    working.step(Step {
        name: "excess pore pressure at this moment",
        value: excess_kpa,
        unit: "kPa",
        formula: "m du/dt = d/dz(k du/dz) - m 8 ch/(De^2 mu) u + m B ds/dt, over the load history",
        inputs: &[],
        source: "Terzaghi 1925; Hansbo 1981; implicit finite volumes",
    });
    if increment_kpa > 0.0 {
        working.step(Step {
            name: "pore-pressure ratio against vertical stress increment",
            value: excess_kpa / increment_kpa,
            unit: "",
            formula: "u_e / dsigma_z",
            inputs: &[("u_e", excess_kpa), ("dsigma_z", increment_kpa)],
            source: "",
        });
    }
    let settled_m = explain_settlement(model, &profile, point, (column, state), working)?;
    let since_zero_m = settled_m - zero.settlement_m;
    working.step(Step {
        name: "settlement since the baseline",
        value: since_zero_m,
        unit: "m",
        formula: "s - s_baseline",
        inputs: &[("s", settled_m), ("s_baseline", zero.settlement_m)],
        source: "",
    });
    if point.sensor.kind == Kind::Piezometer {
        let sunk_m = if point.sensor.tip_sinks { since_zero_m } else { 0.0 };
        working.step(Step {
            name: "expected pore pressure",
            value: reading,
            unit: "kPa",
            formula: "u = u0 + gamma_w s_tip + u_background + u_e",
            inputs: &[
                ("u0", point.static_kpa),
                ("gamma_w", point.water_unit_weight_kn_m3),
                ("s_tip", sunk_m),
                ("u_background", moment.background_kpa),
                ("u_e", excess_kpa),
            ],
            source: "",
        });
    }
    Ok(reading)
}

/// Steps of one tank; returns its vertical stress increment.
fn explain_tank(
    tank: &Tank,
    point: &Point,
    liquid_kpa: f64,
    working: &mut impl Working,
) -> Result<f64, ExpectationError> {
    let place = &point.sensor.place;
    let depth_m = point.sensor.depth_m;
    let r_m = tank.axis.distance_to_m(place);
    let below_m = depth_m - tank.loaded_depth_m;
    let (disc, ring) = influence_of(tank, place, depth_m)?;
    let q_kpa = liquid_kpa + tank.dead_pressure_kpa();
    let line_kn_m = tank.dead_line_load_kn_m();
    working.step(Step {
        name: tank.name.as_str(),
        value: q_kpa,
        unit: "kPa",
        formula: "applied pressure q = q_liquid + q_floor + q_pad - q_exc",
        inputs: &[
            ("q_liquid", liquid_kpa),
            ("q_floor", tank.floor_pressure_kpa),
            ("q_pad", tank.pad_pressure_kpa),
            ("q_exc", tank.excavation_relief_kpa),
        ],
        source: "",
    });
    if below_m > 0.0 && working.wanted() {
        Disc::new(tank.radius_m(), 1.0, 0.5)?.stress_at_with(r_m, below_m, working)?;
        if line_kn_m > 0.0 {
            Ring::new(tank.radius_m(), 1.0, 0.5)?.stress_at_with(r_m, below_m, working)?;
        }
    }
    let increment_kpa = disc * q_kpa + ring * line_kn_m;
    working.step(Step {
        name: "vertical stress increment of this tank",
        value: increment_kpa,
        unit: "kPa",
        formula: "dsigma_z = I_disc q + I_ring p",
        inputs: &[("I_disc", disc), ("q", q_kpa), ("I_ring", ring), ("p", line_kn_m)],
        source: "",
    });
    Ok(increment_kpa)
}

/// Steps of the settlement parts; returns their sum.
fn explain_settlement<const CELLS: usize>(
    model: &SiteModel,
    profile: &Profile<'_>,
    point: &Point,
    (column, state): (&Column<CELLS>, &ColumnState<CELLS>),
    working: &mut impl Working,
) -> Result<f64, ExpectationError> {
    let place = &point.sensor.place;
    let depth_m = point.sensor.depth_m;
    if working.wanted() {
        let under_all = |depth_m: f64, poisson: f64| {
            let tanks = model.tanks.iter().zip(&state.liquid_kpa);
            tanks.map(|(tank, p)| p * half_space_settlement(tank, place, depth_m, poisson)).sum()
        };
        immediate_settlement_with(profile, under_all, depth_m, working)?;
    }
    let immediate_m = point.immediate_m(&state.liquid_kpa);
    let settled = column.settlement_of_m(state, depth_m);
    let sum_m = immediate_m + settled.primary_m + settled.secondary_m;
    working.step(Step {
        name: "settlement of this depth since the ground was unloaded",
        value: sum_m,
        unit: "m",
        formula: "s = s_immediate + s_primary + s_secondary",
        inputs: &[
            ("s_immediate", immediate_m),
            ("s_primary", settled.primary_m),
            ("s_secondary", settled.secondary_m),
        ],
        source: "primary: effective stress path in every cell below, with memory",
    });
    Ok(sum_m)
}
