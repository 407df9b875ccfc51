//! The layered column of 60 cells against exact solutions, at the steps of a logger: the degree
//! of consolidation within 0.001 everywhere, and closer where a test says so.

#![allow(
    clippy::panic,
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

mod reference_table;
mod walking_column;

use brimstead_core::consolidation::terzaghi::{
    Drainage, InitialShape, degree_of_consolidation, isochrone, ramp_mean_excess,
};
use brimstead_core::consolidation::{
    Boundary, Column, ColumnLayer, DrainPattern, Drains, Loading, Seen,
};
use brimstead_core::working::{Step, Working};
use core::f64::consts::PI;
use reference_table::{Worst, time};
use walking_column::{
    CELLS, DAY_S, HOUR_S, STAGED_DEPTHS, STAGES, Walk, clay, column, combined_clay,
    combined_drains, partial_drains, partly_drained_layers, staged_clay,
};

/// Steps that the logger and the office take, and one call from one time to the next.
const STEPS_S: [f64; 3] = [HOUR_S, DAY_S, 1e10];

fn initial(shape: InitialShape, x: f64) -> f64 {
    match shape {
        InitialShape::Uniform => 1.0,
        InitialShape::TriangleZeroAtDrain => x,
        InitialShape::TriangleZeroAtBase => 1.0 - x,
        InitialShape::HalfSine => (PI * x).sin(),
    }
}

/// Ten metres of clay with cv 0.01 m2/day.
fn uniform_clay(base: Boundary) -> Walk {
    Walk::new(&column(&[clay(10.0, 0.01, 1e-5)], base, None))
}

#[test]
fn an_instantaneous_load_follows_the_exact_degree() {
    let times = [1e-6, 1e-5, 1e-4, 3e-4, 1e-3, 3e-3, 0.01, 0.03, 0.1, 0.2, 0.5, 1.0, 1.5, 2.0];
    for (drainage, base, path_m) in
        [(Drainage::Double, Boundary::Drained, 5.0), (Drainage::Single, Boundary::Closed, 10.0)]
    {
        for shape in [
            InitialShape::Uniform,
            InitialShape::TriangleZeroAtDrain,
            InitialShape::TriangleZeroAtBase,
            InitialShape::HalfSine,
        ] {
            for step_s in STEPS_S {
                let mut worst = Worst::default();
                let mut walk = uniform_clay(base);
                walk.jump_by(|z_m| initial(shape, z_m / 10.0));
                for tv in times {
                    walk.hold_until(tv * path_m * path_m / 0.01 * DAY_S, step_s);
                    let exact = degree_of_consolidation(shape, drainage, tv).unwrap();
                    worst.take(walk.degree(), exact, || {
                        format!("{shape:?} {drainage:?} Tv {tv} step {step_s}")
                    });
                }
                worst.assert_below(7e-4);
            }
        }
    }
}

#[test]
fn pressures_after_an_instantaneous_load_follow_the_exact_isochrones() {
    for (drainage, base, path_m) in
        [(Drainage::Double, Boundary::Drained, 5.0), (Drainage::Single, Boundary::Closed, 10.0)]
    {
        for shape in [InitialShape::Uniform, InitialShape::TriangleZeroAtDrain] {
            let mut worst = Worst::default();
            let mut walk = uniform_clay(base);
            walk.jump_by(|z_m| initial(shape, z_m / 10.0));
            for tv in [0.01, 0.05, 0.1, 0.3, 1.0, 2.0] {
                walk.hold_until(tv * path_m * path_m / 0.01 * DAY_S, DAY_S);
                for i in 0..=40 {
                    let x = f64::from(i) / 40.0;
                    let exact = isochrone(shape, drainage, tv, x).unwrap();
                    worst.take(walk.excess_at(10.0 * x), exact, || {
                        format!("{shape:?} {drainage:?} Tv {tv} z/D {x}")
                    });
                }
            }
            worst.assert_below(1.5e-3);
        }
    }
}

#[test]
fn ramps_follow_the_exact_table() {
    for step_s in [HOUR_S, DAY_S] {
        let mut worst = Worst::default();
        // Tv = 1 after 250 days.
        let tv_s = 250.0 * DAY_S;
        let rows = time("t02_U_ramp.csv");
        let mut at = f64::NAN;
        let mut walk = uniform_clay(Boundary::Closed);
        for row in &rows {
            let tc = row.number("Tc");
            if tc != at {
                at = tc;
                walk = Walk::new(&column(&[clay(5.0, 0.1, 1e-4)], Boundary::Closed, None));
            }
            walk.ramp_until(row.number("Tv") * tv_s, step_s, |t_s| (t_s / (tc * tv_s)).min(1.0));
            let degree = walk.settlement_m() / walk.settlement_per_kpa_m();
            worst.take(degree, row.number("U"), || {
                format!("Tc {tc} Tv {} step {step_s}", row.number("Tv"))
            });
        }
        worst.assert_below(3e-4);
    }
}

fn staged_load_kpa(t_s: f64) -> f64 {
    let day = t_s / DAY_S;
    match STAGES.iter().position(|stage| stage.0 >= day - 1e-9) {
        Some(0) => 0.0,
        Some(after) => {
            let (from, to) = (STAGES[after - 1], STAGES[after]);
            from.1 + (to.1 - from.1) * ((day - from.0) / (to.0 - from.0)).min(1.0)
        }
        None => STAGES[STAGES.len() - 1].1,
    }
}

#[test]
fn a_filling_in_stages_with_a_lowering_follows_the_exact_table() {
    for step_s in [HOUR_S, DAY_S] {
        let mut walk = Walk::new(&column(&[staged_clay()], Boundary::Closed, None));
        let mut degrees = Worst::default();
        let mut pressures = Worst::default();
        for row in time("t02_staged.csv") {
            walk.ramp_until(row.number("t_day") * DAY_S, step_s, staged_load_kpa);
            let degree = walk.settlement_m() / (walk.settlement_per_kpa_m() * 180.0);
            let place = || format!("day {} step {step_s}", row.number("t_day"));
            degrees.take(degree, row.number("U_ref_180kPa"), place);
            for (column, depth_m) in STAGED_DEPTHS {
                pressures.take(walk.excess_at(depth_m), row.number(column), place);
            }
        }
        degrees.assert_below(2e-4);
        // Of 180 kPa; day 225 has negative excess pressure beside the drain.
        pressures.assert_below(0.05);
        assert!(walk.worst_closing < 1e-14, "water balance {}", walk.worst_closing);
    }
}

/// Layers of case A of `t03_layers.csv`.
fn layered(case: &str) -> Vec<ColumnLayer> {
    time("t03_layers.csv")
        .iter()
        .filter(|row| row.text("case") == case)
        .map(|row| clay(row.number("h_m"), row.number("cv_m2_day"), row.number("k_m_day")))
        .collect()
}

#[test]
fn layers_follow_the_exact_modes() {
    let layers = layered("A");
    for step_s in STEPS_S {
        let mut walk = Walk::new(&column(&layers, Boundary::Drained, None));
        walk.jump_by(|_| 1.0);
        let pressures = time("t03_A_isochrones.csv");
        let mut degree_difference = Worst::default();
        let mut pressure_difference = Worst::default();
        for row in time("t03_A_U.csv") {
            let day = row.number("t_day");
            walk.hold_until(day * DAY_S, step_s);
            let place = || format!("day {day} step {step_s}");
            degree_difference.take(walk.degree(), row.number("U_eigen"), place);
            for point in pressures.iter().filter(|point| point.number("t_day") == day) {
                let z_m = point.number("z_m");
                pressure_difference.take(walk.excess_at(z_m), point.number("u_eigen"), || {
                    format!("day {day} depth {z_m}")
                });
            }
        }
        degree_difference.assert_below(7e-4);
        pressure_difference.assert_below(4e-3);
    }
}

#[test]
fn vertical_and_radial_flow_together_follow_carrillo_for_a_jump_and_its_integral_for_a_ramp() {
    let drains = combined_drains();
    let ground = [combined_clay()];
    let fill = |t_s: f64| (t_s / (60.0 * DAY_S)).min(1.0);
    for step_s in [HOUR_S, DAY_S] {
        let mut jump = Walk::new(&column(&ground, Boundary::Closed, Some(&drains)));
        jump.jump_by(|_| 1.0);
        let mut ramp = Walk::new(&column(&ground, Boundary::Closed, Some(&drains)));
        let mut worst = Worst::default();
        for row in time("t04_combined.csv") {
            let t_s = row.number("t_day") * DAY_S;
            let place = || format!("day {} step {step_s}", row.number("t_day"));
            jump.hold_until(t_s, step_s);
            worst.take(jump.degree(), row.number("U_carrillo_inst"), place);
            ramp.ramp_until(t_s, step_s, fill);
            let degree = ramp.settlement_m() / ramp.settlement_per_kpa_m();
            worst.take(degree, row.number("U_ramp_exact_of_carrillo"), place);
        }
        worst.assert_below(3e-4);
    }
}

#[test]
fn well_resistance_follows_the_depth_average_of_hansbo() {
    // Vertical flow all but shut off.
    let (ch, mv) = (1e-7, 1e-3);
    let layer = ColumnLayer {
        thickness_m: 12.0,
        cv_m2_per_s: 1e-13,
        ch_m2_per_s: ch,
        permeability_m_per_s: 1e-13 * mv * 9.81,
        drained: false,
    };
    let ground = [layer];
    let mut worst = Worst::default();
    for row in time("t04_well_resistance.csv") {
        let kh = ch * mv * 9.81;
        let drains = Drains {
            pattern: DrainPattern::Triangular,
            spacing_m: 1.0 / 1.05,
            equivalent_diameter_m: 0.05,
            smear_ratio: 2.0,
            permeability_ratio_h_over_s: 3.0,
            discharge_m3_per_s: Some(kh / row.number("kh_over_qw_1_m2")),
            top_m: 0.0,
            base_m: 12.0,
            length_m: 12.0,
        };
        let mut walk = Walk::new(&column(&ground, Boundary::Closed, Some(&drains)));
        walk.jump_by(|_| 1.0);
        // De = 1 m.
        walk.hold_until(row.number("Th") / ch, 1e10);
        worst.take(walk.degree(), row.number("U_h_depth_average_of_Hansbo"), || {
            format!("kh/qw {} Th {}", row.number("kh_over_qw_1_m2"), row.number("Th"))
        });
    }
    worst.assert_below(3e-4);
}

/// A seam that drains freely parts the column into two layers that know nothing of each other.
#[test]
fn a_free_draining_layer_drains_its_neighbours_and_holds_nothing() {
    let seam = ColumnLayer { drained: true, ..clay(1.0, 10.0, 1.0) };
    let ground = [clay(4.0, 0.01, 1e-5), seam, clay(3.0, 0.02, 1e-5)];
    let mut walk = Walk::new(&column(&ground, Boundary::Drained, None));
    walk.jump_by(|_| 100.0);
    walk.hold_until(60.0 * DAY_S, DAY_S);
    for (depth_m, layer_top_m, thickness_m, cv, drainage) in [
        (1.0, 0.0, 4.0, 0.01, Drainage::Double),
        (3.5, 0.0, 4.0, 0.01, Drainage::Double),
        (5.5, 5.0, 3.0, 0.02, Drainage::Double),
        (7.0, 5.0, 3.0, 0.02, Drainage::Double),
    ] {
        let path_m = 0.5 * thickness_m;
        let tv = cv * 60.0 / (path_m * path_m);
        let x = (depth_m - layer_top_m) / thickness_m;
        let exact = 100.0 * isochrone(InitialShape::Uniform, drainage, tv, x).unwrap();
        let got = walk.excess_at(depth_m);
        assert!((got - exact).abs() < 0.25, "{got} for {exact} at {depth_m} m");
    }
    assert_eq!(walk.excess_at(4.5), 0.0);
    let balance = walk.balance();
    assert!(balance.layers_m > 0.0 && balance.top_m > 0.0 && balance.base_m > 0.0);
}

/// A metre of fast clay below a seam and ten of slow clay: the step that suits the slow one must
/// not blur the fast one. What is left is the width of its cells.
#[test]
fn a_ramp_on_a_thin_fast_layer_beside_a_thick_slow_one_follows_olson() {
    let seam = ColumnLayer { drained: true, ..clay(0.5, 10.0, 1.0) };
    let ground = [clay(10.0, 0.002, 2e-6), seam, clay(1.0, 0.02, 2e-5)];
    let mut walk = Walk::new(&column(&ground, Boundary::Drained, None));
    let path_m = 0.5;
    for (days, step_s) in [(5.0, 5.0 * DAY_S), (10.0, 5.0 * DAY_S), (15.0, 5.0 * DAY_S)] {
        walk.ramp_until(days * DAY_S, step_s, |t_s| 100.0 * (t_s / (10.0 * DAY_S)).min(1.0));
        let t = |days: f64| 0.02 * days / (path_m * path_m);
        let layers: Vec<usize> = walk.stepper.layers().collect();
        let mut held = 0.0;
        let thicknesses = walk.stepper.thicknesses_m().zip(walk.state.excess_kpa);
        for ((thickness_m, excess_kpa), layer) in thicknesses.zip(layers) {
            held += if layer == 2 { thickness_m * excess_kpa } else { 0.0 };
        }
        let exact = 100.0 * ramp_mean_excess(t(days), t(10.0)).unwrap();
        assert!((held - exact).abs() < 0.3, "{held} for {exact} after {days} days");
    }
}

/// Column, load and drains of `tests/oracle/consolidation_column.py`, which solves the same
/// equation by the method of lines on 3000 equal cells with scipy.
#[test]
fn layers_with_drains_to_part_depth_follow_the_method_of_lines() {
    let (layers, drains) = (partly_drained_layers(), partial_drains());
    let fill = |t_s: f64| 120.0 * (t_s / (20.0 * DAY_S)).min(1.0);
    let mut walk = Walk::new(&column(&layers, Boundary::Closed, Some(&drains)));
    walk.influence_by(|z_m| 1.0 - 0.03 * z_m);
    let mut worst = Worst::default();
    for row in time("consolidation_method_of_lines.csv") {
        let t_s = row.number("t_day") * DAY_S;
        walk.ramp_until(t_s, HOUR_S, fill);
        let z_m = row.number("z_m");
        worst.take(walk.excess_at(z_m), row.number("excess_kpa"), || {
            format!("day {} depth {z_m}", row.number("t_day"))
        });
    }
    // Of 120 kPa, beside the lower end of the drains.
    worst.assert_below(0.5);
}

#[test]
fn a_year_of_balances_closes() {
    let layers = layered("C");
    let drains = Drains { base_m: 6.0, length_m: 6.0, ..combined_drains() };
    let mut walk = Walk::new(&column(&layers, Boundary::Drained, Some(&drains)));
    walk.ramp_until(365.0 * DAY_S, 6.0 * HOUR_S, |t_s| 100.0 * (t_s / (5.0 * DAY_S)).sin());
    assert!(walk.worst_closing < 1e-14, "{}", walk.worst_closing);
    let balance = walk.balance();
    let settlement_m = balance.outflow_m();
    assert!((settlement_m - walk.settlement_m()).abs() < 1e-12 * balance.load_m.abs().max(1.0));
}

#[test]
fn grounds_that_cannot_be_are_refused_with_the_reason() {
    let sound = clay(5.0, 0.01, 1e-5);
    let refused = |layers: &[ColumnLayer], water: f64| {
        let ground = Column {
            layers,
            top: Boundary::Drained,
            base: Boundary::Closed,
            drains: None,
            water_unit_weight_kn_m3: water,
        };
        brimstead_core::consolidation::Stepper::<CELLS>::new(&ground).unwrap_err().to_string()
    };
    let thin = ColumnLayer { thickness_m: 0.0, ..sound };
    let odd = ColumnLayer { permeability_m_per_s: 1.0, ..sound };
    for (message, says) in [
        (refused(&[], 9.81), "no layers"),
        (refused(&[sound, thin], 9.81), "layer thickness (item 2)"),
        (refused(&[odd], 9.81), "do not belong together"),
        (refused(&[sound; 25], 9.81), "need at least 75 cells"),
        (refused(&[sound], f64::NAN), "unit weight of water"),
    ] {
        assert!(message.contains(says), "{message}");
    }
}

#[test]
fn a_refused_step_leaves_the_state_as_it_was() {
    let mut walk = uniform_clay(Boundary::Closed);
    walk.jump_by(|_| 10.0);
    let before = walk.state;
    let mut bad = [1.0; CELLS];
    bad[7] = f64::NAN;
    assert!(walk.try_advance(Loading::Ramp(&bad), DAY_S).is_err());
    assert!(walk.try_advance(Loading::Jump(&bad), DAY_S).is_err());
    assert!(walk.try_advance(Loading::Hold, -1.0).is_err());
    assert!(walk.try_advance(Loading::Hold, f64::NAN).is_err());
    assert_eq!(walk.state, before);
    let other = uniform_clay(Boundary::Drained);
    walk.state = other.state;
    assert!(walk.try_advance(Loading::Hold, DAY_S).is_err(), "a state of another column");
    walk.state = before;
    walk.state.excess_kpa[3] = f64::INFINITY;
    assert!(walk.try_advance(Loading::Hold, DAY_S).is_err(), "a state that is not finite");
    assert!(walk.stepper.excess_at_kpa(&before, 10.1).is_err(), "below the column");
}

/// Each line of the trail by its name.
struct Trail(Vec<(String, f64, Vec<f64>)>);

impl Working for Trail {
    fn step(&mut self, step: Step<'_>) {
        let inputs = step.inputs.iter().map(|input| input.1).collect();
        self.0.push((step.name.to_owned(), step.value, inputs));
    }
}

impl Trail {
    fn value(&self, name: &str) -> f64 {
        self.0.iter().find(|step| step.0 == name).unwrap_or_else(|| panic!("no {name}")).1
    }
}

/// The numbers of `t04_combined.csv`: mu 3.8035, 8 ch/(De^2 mu) 0.013566 per day.
#[test]
fn the_trail_of_a_column_can_be_followed_by_hand() {
    let (ground, drains) = ([combined_clay()], combined_drains());
    let ground = column(&ground, Boundary::Closed, Some(&drains));
    let mut walk = Walk::new(&ground);
    walk.jump_by(|_| 1.0);
    walk.hold_until(90.0 * DAY_S, DAY_S);
    let mut trail = Trail(Vec::new());
    let seen = Seen {
        column: &ground,
        state: &walk.state,
        applied_kpa: &walk.influence,
        elapsed_s: 90.0 * DAY_S,
    };
    walk.stepper.describe_at(&seen, 3.0, &mut trail).unwrap();
    let near = |name: &str, want: f64, tolerance: f64| {
        let got = trail.value(name);
        assert!((got - want).abs() <= tolerance * want, "{name}: {got}, want {want}");
    };
    near("mu of the drains, smear included", 3.80353331850825, 1e-12);
    near("sink rate of the drains", 0.0135663066149199 / DAY_S, 1e-12);
    near("vertical time factor of the layer", 0.008 * 90.0 / 64.0, 1e-12);
    near("degree of consolidation of the layer", walk.degree(), 1e-12);
    near("degree of consolidation of the column", walk.degree(), 1e-12);
    near("excess pore pressure at the depth", walk.excess_at(3.0), 1e-12);
    for step in &trail.0 {
        assert!(step.2.iter().all(|input| input.is_finite()), "{step:?}");
    }
}
