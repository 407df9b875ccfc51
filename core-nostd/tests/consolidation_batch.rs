//! Whole load histories on the fine grid against exact solutions.

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
    Drainage, InitialShape, degree_of_consolidation, isochrone, ramp_degree_of_consolidation,
};
use brimstead_core::consolidation::{Answers, Boundary, Column, Error, History, batch};
use reference_table::{Worst, time};
use walking_column::{
    STAGED_DEPTHS, STAGES, clay, column, combined_clay, combined_drains, partial_drains,
    partly_drained_layers, staged_clay,
};

struct Answered {
    excess_kpa: Vec<f64>,
    degree: Vec<Option<f64>>,
    settlement_m: Vec<f64>,
    depths: usize,
}

impl Answered {
    fn excess(&self, time: usize, depth: usize) -> f64 {
        self.excess_kpa[time * self.depths + depth]
    }

    fn degree(&self, time: usize) -> f64 {
        self.degree[time].unwrap()
    }
}

fn answer(
    ground: Column<'_>,
    influence: &[(f64, f64)],
    load_kpa: &[(f64, f64)],
    days: &[f64],
    depths_m: &[f64],
) -> Result<Answered, Error> {
    let mut answered = Answered {
        excess_kpa: vec![f64::NAN; days.len() * depths_m.len()],
        degree: vec![None; days.len()],
        settlement_m: vec![f64::NAN; days.len()],
        depths: depths_m.len(),
    };
    let history = History { column: ground, influence, load_kpa };
    let mut places = Answers {
        excess_kpa: &mut answered.excess_kpa,
        degree_of_consolidation: &mut answered.degree,
        settlement_m: &mut answered.settlement_m,
    };
    batch::answer(&history, days, depths_m, &mut places)?;
    Ok(answered)
}

/// The largest difference of pressure is at the interface of 25 times the permeability.
#[test]
fn layers_follow_the_exact_modes_to_a_few_millionths() {
    let layers = [clay(2.0, 0.02, 2e-5), clay(5.0, 0.004, 6e-6), clay(3.0, 0.04, 1.5e-4)];
    let rows = time("t03_A_U.csv");
    let points = time("t03_A_isochrones.csv");
    let days: Vec<f64> = rows.iter().map(|row| row.number("t_day")).collect();
    let depths: Vec<f64> = points
        .iter()
        .filter(|point| point.number("t_day") == days[0])
        .map(|point| point.number("z_m"))
        .collect();
    let ground = column(&layers, Boundary::Drained, None);
    let answered = answer(ground, &[], &[(0.0, 100.0)], &days, &depths).unwrap();
    let mut degrees = Worst::default();
    let mut pressures = Worst::default();
    for (index, row) in rows.iter().enumerate() {
        degrees
            .take(answered.degree(index), row.number("U_eigen"), || format!("day {}", days[index]));
    }
    for point in &points {
        let day = days.iter().position(|day| *day == point.number("t_day")).unwrap();
        let depth = depths.iter().position(|z| *z == point.number("z_m")).unwrap();
        let exact = 100.0 * point.number("u_eigen");
        pressures.take(answered.excess(day, depth), exact, || {
            format!("day {} depth {}", days[day], depths[depth])
        });
    }
    degrees.assert_below(1e-7);
    pressures.assert_below(2e-4);
}

#[test]
fn stages_with_a_lowering_follow_the_exact_table() {
    let rows = time("t02_staged.csv");
    let days: Vec<f64> = rows.iter().map(|row| row.number("t_day")).collect();
    let layers = [staged_clay()];
    let ground = column(&layers, Boundary::Closed, None);
    let depths = STAGED_DEPTHS.map(|depth| depth.1);
    let answered = answer(ground, &[], &STAGES, &days, &depths).unwrap();
    let mut worst = Worst::default();
    for (index, row) in rows.iter().enumerate() {
        let place = || format!("day {}", days[index]);
        // Pressure and millimetres alike.
        worst.take(1000.0 * answered.settlement_m[index], row.number("settlement_mm"), place);
        for (depth, (column, _)) in STAGED_DEPTHS.iter().enumerate() {
            worst.take(answered.excess(index, depth), row.number(column), place);
        }
        let degree = answered.degree(index);
        assert!((degree - row.number("U_ref_180kPa")).abs() < 1e-7, "{degree}");
    }
    worst.assert_below(3e-5);
}

/// A triangle of influence, and a ramp, on one layer.
#[test]
fn one_layer_follows_the_series() {
    let layers = [clay(6.0, 0.02, 3e-5)];
    let days = [900.0, 9.0, 90.0, 3000.0];
    let tv = |day: f64| 0.02 * day / 36.0;
    let depths = [0.5, 2.0, 6.0];
    let ground = column(&layers, Boundary::Closed, None);
    let triangle =
        answer(ground, &[(0.0, 0.0), (6.0, 1.0)], &[(0.0, 50.0)], &days, &depths).unwrap();
    let ramp = answer(ground, &[], &[(0.0, 0.0), (100.0, 50.0)], &days, &depths).unwrap();
    for (index, day) in days.iter().enumerate() {
        let shape = InitialShape::TriangleZeroAtDrain;
        let exact = degree_of_consolidation(shape, Drainage::Single, tv(*day)).unwrap();
        let got = triangle.degree(index);
        assert!((got - exact).abs() < 1e-7, "{got} for {exact}");
        for (depth, z_m) in depths.iter().enumerate() {
            let exact = 50.0 * isochrone(shape, Drainage::Single, tv(*day), z_m / 6.0).unwrap();
            let got = triangle.excess(index, depth);
            assert!((got - exact).abs() < 1e-4, "{got} for {exact} at {z_m}");
        }
        let exact = ramp_degree_of_consolidation(tv(*day), tv(100.0)).unwrap();
        let got = ramp.degree(index);
        assert!((got - exact).abs() < 1e-7, "{got} for {exact}");
    }
}

#[test]
fn drains_follow_carrillo_and_the_method_of_lines() {
    let (layers, drains) = ([combined_clay()], combined_drains());
    let rows = time("t04_combined.csv");
    let days: Vec<f64> = rows.iter().map(|row| row.number("t_day")).collect();
    let ground = column(&layers, Boundary::Closed, Some(&drains));
    let jump = answer(ground, &[], &[(0.0, 1.0)], &days, &[]).unwrap();
    let ramp = answer(ground, &[], &[(0.0, 0.0), (60.0, 1.0)], &days, &[]).unwrap();
    let mut worst = Worst::default();
    for (index, row) in rows.iter().enumerate() {
        let place = || format!("day {}", days[index]);
        worst.take(jump.degree(index), row.number("U_carrillo_inst"), place);
        worst.take(ramp.degree(index), row.number("U_ramp_exact_of_carrillo"), place);
    }
    worst.assert_below(1e-6);
}

/// `tests/oracle/consolidation_column.py`: layers, drains to part depth, well resistance.
#[test]
fn partly_drained_layers_follow_the_method_of_lines() {
    let (layers, drains) = (partly_drained_layers(), partial_drains());
    let rows = time("consolidation_method_of_lines.csv");
    let mut days: Vec<f64> = rows.iter().map(|row| row.number("t_day")).collect();
    days.dedup();
    let depths: Vec<f64> = rows
        .iter()
        .filter(|row| row.number("t_day") == days[0])
        .map(|row| row.number("z_m"))
        .collect();
    let ground = column(&layers, Boundary::Closed, Some(&drains));
    let influence = [(0.0, 1.0), (14.0, 1.0 - 0.03 * 14.0)];
    let load = [(0.0, 0.0), (20.0, 120.0)];
    let answered = answer(ground, &influence, &load, &days, &depths).unwrap();
    let mut worst = Worst::default();
    for row in &rows {
        let day = days.iter().position(|day| *day == row.number("t_day")).unwrap();
        let depth = depths.iter().position(|z| *z == row.number("z_m")).unwrap();
        worst.take(answered.excess(day, depth), row.number("excess_kpa"), || {
            format!("day {} depth {}", days[day], depths[depth])
        });
    }
    // Of 120 kPa: the drains end inside a cell of either grid, at another place of each.
    worst.assert_below(7e-3);
}

#[test]
fn days_before_the_load_and_on_a_jump_are_told_apart() {
    let layers = [clay(3.0, 0.02, 3e-5)];
    let ground = column(&layers, Boundary::Closed, None);
    let load = [(10.0, 20.0), (20.0, 20.0), (20.0, 50.0)];
    let answered = answer(ground, &[], &load, &[20.0, 0.0, 10.0, 25.0], &[3.0]).unwrap();
    assert_eq!(answered.excess(1, 0), 0.0);
    assert_eq!(answered.degree(1), 0.0);
    assert!((answered.excess(2, 0) - 20.0).abs() < 1e-9, "just after the first jump");
    assert!((answered.excess(0, 0) - 50.0).abs() < 0.1, "just after the second");
    assert!(answered.excess(3, 0) < answered.excess(0, 0));
}

#[test]
fn an_emptied_tank_has_settlement_but_no_degree() {
    let layers = [clay(3.0, 0.02, 3e-5)];
    let ground = column(&layers, Boundary::Closed, None);
    let load = [(0.0, 0.0), (10.0, 50.0), (20.0, 0.0)];
    let answered = answer(ground, &[], &load, &[20.0], &[1.0]).unwrap();
    assert_eq!(answered.degree[0], None);
    assert!(answered.settlement_m[0] > 0.0);
}

#[test]
fn histories_that_cannot_be_are_refused_with_the_reason() {
    let layers = [clay(3.0, 0.02, 3e-5)];
    let ground = column(&layers, Boundary::Closed, None);
    let refused = |influence: &[(f64, f64)], load: &[(f64, f64)], day: f64, depth: f64| {
        answer(ground, influence, load, &[day], &[depth]).err().unwrap().to_string()
    };
    let load = [(0.0, 10.0)];
    for (message, says) in [
        (refused(&[], &[], 1.0, 1.0), "load is empty"),
        (refused(&[], &[(5.0, 1.0), (4.0, 1.0)], 1.0, 1.0), "load: item 2 does not follow"),
        (refused(&[], &[(0.0, f64::NAN)], 1.0, 1.0), "load (item 1)"),
        (refused(&[(1.0, 1.0), (0.0, 1.0)], &load, 1.0, 1.0), "influence: item 2"),
        (refused(&[], &load, f64::INFINITY, 1.0), "day (item 1)"),
        (refused(&[], &load, 1.0, 3.5), "below the base of the column at 3 m"),
        (refused(&[], &load, 1.0, -0.1), "depth (item 1)"),
    ] {
        assert!(message.contains(says), "{message}");
    }
}
