//! Perimeter surveys against reference tables, simulation and the laws they must obey.

#![allow(
    clippy::panic,
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

mod reference_table;
mod sheet;

use brimstead_core::math::least_squares::FitError;
use brimstead_core::shell::ShellError;
use brimstead_core::shell::harmonics::Harmonics;
use brimstead_core::shell::perimeter::{PerimeterFit, PerimeterPoint, ShellSteel};
use core::f64::consts::PI;
use proptest::prelude::*;
use proptest::test_runner::{Config, RngSeed};
use reference_table::{Worst, time};
use sheet::Sheet;

/// Printed to 15 digits; millimetres.
const PRINTED_MM: f64 = 1e-11;
const SETS: [&str; 2] = ["S1_even16", "S2_even24_dip"];
const DIAMETER_M: f64 = 40.0;

fn readings(set: &str) -> Vec<PerimeterPoint> {
    let rows = time("t07_readings.csv");
    rows.iter()
        .filter(|row| row.text("set") == set)
        .map(|row| point(row.number("theta_deg").to_radians(), 1e-3 * row.number("s_mm")))
        .collect()
}

fn point(angle_rad: f64, settlement_m: f64) -> PerimeterPoint {
    PerimeterPoint { angle_rad, settlement_m: Some(settlement_m) }
}

fn steel() -> ShellSteel {
    ShellSteel::new(18.0, 250.0, 200_000.0).unwrap()
}

#[test]
fn summary_of_the_table_is_reproduced() {
    for set in SETS {
        let points = readings(set);
        let fit = PerimeterFit::new(&points, DIAMETER_M, 0.001).unwrap();
        let (cosine_m, sine_m) = fit.planar_coefficients_m();
        let tilt = fit.tilt();
        let used = |i: usize| fit.limit(&fit.shape(i).unwrap(), &steel()).utilisation.unwrap();
        let worst = (0..points.len()).max_by(|a, b| used(*a).total_cmp(&used(*b))).unwrap();
        let rows = time("t07_summary.csv");
        for row in rows.iter().filter(|row| row.text("set") == set) {
            let got = match row.text("quantity") {
                "mean_A_mm" => 1e3 * fit.uniform_m(),
                "B_mm" => 1e3 * cosine_m,
                "C_mm" => 1e3 * sine_m,
                "tilt_amplitude_mm" => 0.5e3 * tilt.across_diameter_m,
                "tilt_slope" => tilt.slope,
                "tilt_across_diameter_mm" => 1e3 * tilt.across_diameter_m,
                "azimuth_deg" => tilt.azimuth_rad.unwrap().to_degrees(),
                "R2" => fit.r_squared().unwrap(),
                "SSE_mm2" => 1e6 * fit.residual_sum_m2(),
                "max_abs_residual_mm" => 1e3 * fit.largest_residual_m(),
                "max_utilisation" => used(worst),
                "index_of_max_utilisation" => worst as f64,
                other => panic!("no quantity {other}"),
            };
            let want = row.number("value");
            let what = format!("{set} {}: got {got}, want {want}", row.text("quantity"));
            assert!((got - want).abs() <= 1e-12 * want.abs().max(10.0), "{what}");
        }
    }
}

#[test]
fn every_point_of_the_table_is_reproduced() {
    let mut worst = Worst::default();
    for set in SETS {
        let points = readings(set);
        let fit = PerimeterFit::new(&points, DIAMETER_M, 0.001).unwrap();
        for row in time("t07_points.csv").iter().filter(|row| row.text("set") == set) {
            let index = row.number("i") as usize;
            let shape = fit.shape(index).unwrap();
            let limit = fit.limit(&shape, &steel());
            for (got_m, column) in [
                (shape.planar_m, "plane_mm"),
                (shape.residual_m.unwrap(), "residual_U_mm"),
                (shape.out_of_plane_m.unwrap(), "second_difference_mm"),
                (limit.permitted_m, "permissible_S_mm"),
            ] {
                worst.take(1e3 * got_m, row.number(column), || format!("{set} {index} {column}"));
            }
            // Arcs of eight metres, from angles of up to six radians.
            for (got_m, column) in
                [(shape.arc_before_m, "arc_prev_mm"), (shape.arc_after_m, "arc_next_mm")]
            {
                let want_m = 1e-3 * row.number(column);
                worst.take(got_m, want_m, || format!("{set} {index} {column}, m"));
            }
            let used = limit.utilisation.unwrap();
            worst.take(used, row.number("utilisation"), || format!("{set} {index} utilisation"));
        }
    }
    worst.assert_below(PRINTED_MM);
}

#[test]
fn waves_of_the_table_are_reproduced() {
    let mut worst = Worst::default();
    for (set, order) in SETS.into_iter().zip([5, 6]) {
        let waves = Harmonics::new(&readings(set), order).unwrap();
        for row in time("t07_harmonics.csv").iter().filter(|row| row.text("set") == set) {
            let k = row.number("k") as usize;
            let wave = waves.wave(k).unwrap();
            for (got_m, column) in [
                (wave.cosine_m, "cos_coef_mm"),
                (wave.sine_m, "sin_coef_mm"),
                (wave.amplitude_m, "amplitude_mm"),
            ] {
                worst.take(1e3 * got_m, row.number(column), || format!("{set} {k} {column}"));
            }
            if wave.amplitude_m > 1e-9 {
                let phase = wave.phase_rad.to_degrees();
                worst.take(phase, row.number("phase_deg"), || format!("{set} {k} phase"));
            }
        }
        assert!(waves.wave(order + 1).is_none());
    }
    worst.assert_below(PRINTED_MM);
}

/// The published formula in its own units (ft, psi), worked in the table; the same in SI.
#[test]
fn permitted_deflection_is_that_of_the_published_formula() {
    let (foot_m, psi_mpa) = (0.3048, 0.006_894_757_293_168);
    for row in time("t07_permissible.csv") {
        let shell = ShellSteel::new(
            row.number("H_ft") * foot_m,
            row.number("Y_psi") * psi_mpa,
            row.number("E_psi") * psi_mpa,
        )
        .unwrap();
        let arc_m = row.number("L_ft") * foot_m;
        let got_mm = 1e3 * shell.permitted_m(arc_m, arc_m);
        assert!((got_mm - row.number("S_mm_from_SI")).abs() < 1e-12);
        assert!((got_mm / 25.4 - row.number("S_in")).abs() < 1e-12);
    }
}

/// A quiet generator of normal variates: sums of twelve uniform ones of a linear congruence
/// (Knuth's constants).
struct Noise(u64);

impl Noise {
    fn next(&mut self) -> f64 {
        let mut uniform = || {
            self.0 = self
                .0
                .wrapping_mul(6_364_136_223_846_793_005)
                .wrapping_add(1_442_695_040_888_963_407);
            (self.0 >> 11) as f64 / (1_u64 << 53) as f64
        };
        (0..12).map(|_| uniform()).sum::<f64>() - 6.0
    }
}

/// Noise of every point, unequal arcs included, against 20,000 simulated surveys: the standard
/// deviation is known to 0.5 %, the share of surveys beyond the limit to 0.15 %.
#[test]
fn noise_of_the_survey_comes_through_the_fit_as_simulated() {
    let angles = [0.0, 0.4, 1.3, 1.9, 2.2, 3.4, 4.0, 4.9, 5.6_f64];
    let deviation_m = 0.0014;
    let mut noise = Noise(20_260_131);
    let mut squares = [0.0; 9];
    let mut tilt_squares = 0.0;
    let mut beyond = 0;
    let surveys = 20_000;
    // A tilt much larger than its noise, so that its magnitude is not biased by it.
    let tilted = |angle: f64| 0.080 + 0.200 * libm::cos(angle - 1.0);
    for _ in 0..surveys {
        let points: Vec<_> =
            angles.iter().map(|a| point(*a, tilted(*a) + deviation_m * noise.next())).collect();
        let fit = PerimeterFit::new(&points, DIAMETER_M, deviation_m).unwrap();
        for (sum, shape) in squares.iter_mut().zip(fit.shapes()) {
            *sum += shape.out_of_plane_m.unwrap() * shape.out_of_plane_m.unwrap();
        }
        beyond +=
            u32::from(fit.shapes().any(|s| s.out_of_plane_m.unwrap().abs() > s.noise_limit_m));
        tilt_squares += (fit.tilt().across_diameter_m - 0.4) * (fit.tilt().across_diameter_m - 0.4);
    }
    let even: Vec<_> = angles.iter().map(|a| point(*a, tilted(*a))).collect();
    let fit = PerimeterFit::new(&even, DIAMETER_M, deviation_m).unwrap();
    for (sum, shape) in squares.iter().zip(fit.shapes()) {
        let simulated = libm::sqrt(sum / f64::from(surveys));
        let ratio = simulated / shape.noise_deviation_m;
        assert!((ratio - 1.0).abs() < 0.02, "{shape:?}: simulated {simulated}");
    }
    let tilt_ratio = libm::sqrt(tilt_squares / f64::from(surveys)) / fit.tilt().noise_deviation_m;
    assert!((tilt_ratio - 1.0).abs() < 0.02, "{tilt_ratio}");
    let share = f64::from(beyond) / f64::from(surveys);
    assert!(share > 0.03 && share < 0.055, "1 survey of 20 at most: {share}");
}

/// Levelling with 1 mm, twelve points, difference of two epochs: the largest second difference
/// passes 4.9 mm in 1 of 20 (simulated independently); Bonferroni's bound is a little above.
#[test]
fn a_limit_inside_the_noise_is_flagged() {
    let points: Vec<_> = (0..12).map(|i| point(PI / 6.0 * f64::from(i), 0.05)).collect();
    let fit = PerimeterFit::new(&points, DIAMETER_M, libm::sqrt(2.0) * 0.001).unwrap();
    let shape = fit.shape(0).unwrap();
    assert!((shape.noise_limit_m - 0.0049).abs() < 0.0001, "{shape:?}");
    let low = ShellSteel::new(60.0, 40.0, 200_000.0).unwrap();
    assert!(fit.limit(&shape, &low).inside_noise);
    assert!(!fit.limit(&shape, &steel()).inside_noise);
}

#[test]
fn the_hand_check_holds_the_result() {
    let points = readings("S2_even24_dip");
    let fit = PerimeterFit::new(&points, DIAMETER_M, 0.001).unwrap();
    let mut sheet = Sheet::default();
    fit.write(&mut sheet);
    assert_eq!(sheet.value("tilt across the diameter"), fit.tilt().across_diameter_m);
    let shape = fit.shape_with(7, &mut sheet).unwrap();
    assert_eq!(sheet.value("out-of-plane deflection"), shape.out_of_plane_m.unwrap());
    let limit = fit.limit_with(&shape, &steel(), &mut sheet);
    assert_eq!(sheet.value("permitted out-of-plane deflection"), limit.permitted_m);
}

#[test]
fn a_missing_point_takes_its_neighbours_second_differences_with_it() {
    let mut points = readings("S1_even16");
    points[8].settlement_m = None;
    let fit = PerimeterFit::new(&points, DIAMETER_M, 0.001).unwrap();
    let missing: Vec<_> =
        (0..16).filter(|i| fit.shape(*i).unwrap().out_of_plane_m.is_none()).collect();
    assert_eq!(missing, [7, 8, 9]);
    assert!(fit.shape(8).unwrap().residual_m.is_none());
    assert!(fit.shape(7).unwrap().residual_m.is_some());
    assert!(fit.shape(16).is_none());
    // Left out of the list instead, its neighbours are compared over the wider arc.
    points.remove(8);
    let fit = PerimeterFit::new(&points, DIAMETER_M, 0.001).unwrap();
    let shape = fit.shape(8).unwrap();
    assert!((shape.arc_before_m - 2.0 * shape.arc_after_m).abs() < 1e-12);
    assert!(shape.out_of_plane_m.is_some());
}

#[test]
fn even_settlement_has_no_tilt_no_direction_and_no_r_squared_to_boast_of() {
    let points: Vec<_> = (0..8).map(|i| point(PI / 4.0 * f64::from(i), 0.0625)).collect();
    let fit = PerimeterFit::new(&points, DIAMETER_M, 0.001).unwrap();
    assert!((fit.uniform_m() - 0.0625).abs() < 1e-16);
    assert!(fit.tilt().across_diameter_m < 1e-15 && fit.tilt().azimuth_rad.is_none());
    assert_eq!(fit.r_squared(), None);
}

fn fixed_seed() -> Config {
    Config {
        rng_seed: RngSeed::Fixed(440_318),
        cases: 200,
        failure_persistence: None,
        ..Config::default()
    }
}

/// Uneven arcs once around, with settlements.
fn any_survey() -> impl Strategy<Value = Vec<PerimeterPoint>> {
    prop::collection::vec((0.2..1.0_f64, -0.05..0.3_f64), 5..24).prop_map(|parts| {
        let whole: f64 = parts.iter().map(|(arc, _)| arc).sum();
        let mut angle = 0.0;
        parts
            .into_iter()
            .map(|(arc, settlement_m)| {
                let here = point(angle, settlement_m);
                angle += 2.0 * PI * arc / whole;
                here
            })
            .collect()
    })
}

proptest! {
    #![proptest_config(fixed_seed())]

    #[test]
    fn nothing_depends_on_where_the_angle_is_zero_or_the_list_begins(
        points in any_survey(),
        turn in -3.0..3.0_f64,
        begin in 0..24_usize,
    ) {
        let mut turned: Vec<_> =
            points.iter().map(|p| PerimeterPoint { angle_rad: p.angle_rad + turn, ..*p }).collect();
        let begin = begin % turned.len();
        turned.rotate_left(begin);
        let (one, other) = (
            PerimeterFit::new(&points, DIAMETER_M, 0.001).unwrap(),
            PerimeterFit::new(&turned, DIAMETER_M, 0.001).unwrap(),
        );
        prop_assert!((one.uniform_m() - other.uniform_m()).abs() < 1e-13);
        let (a, b) = (one.tilt(), other.tilt());
        prop_assert!((a.across_diameter_m - b.across_diameter_m).abs() < 1e-13);
        prop_assert!((a.noise_deviation_m - b.noise_deviation_m).abs() < 1e-12);
        let moved = b.azimuth_rad.unwrap() - a.azimuth_rad.unwrap() - turn;
        prop_assert!(libm::sin(0.5 * moved).abs() < 1e-11 / a.across_diameter_m.max(1e-3));
        for (index, shape) in one.shapes().enumerate() {
            let place = (index + points.len() - begin) % points.len();
            let same = other.shape(place).unwrap();
            prop_assert!((shape.out_of_plane_m.unwrap() - same.out_of_plane_m.unwrap()).abs() < 1e-13);
            prop_assert!((shape.noise_deviation_m - same.noise_deviation_m).abs() < 1e-13);
        }
    }

    #[test]
    fn adding_uniform_settlement_and_tilt_leaves_the_rest_alone(
        points in any_survey(),
        uniform_m in -0.2..0.2_f64,
        tilt_m in -0.2..0.2_f64,
        towards in 0.0..6.0_f64,
    ) {
        let more: Vec<_> = points
            .iter()
            .map(|p| {
                let added = uniform_m + tilt_m * libm::cos(p.angle_rad - towards);
                point(p.angle_rad, p.settlement_m.unwrap() + added)
            })
            .collect();
        let (one, other) = (
            PerimeterFit::new(&points, DIAMETER_M, 0.001).unwrap(),
            PerimeterFit::new(&more, DIAMETER_M, 0.001).unwrap(),
        );
        for (a, b) in one.shapes().zip(other.shapes()) {
            prop_assert!((a.residual_m.unwrap() - b.residual_m.unwrap()).abs() < 1e-13);
            prop_assert!((a.out_of_plane_m.unwrap() - b.out_of_plane_m.unwrap()).abs() < 1e-13);
        }
        prop_assert!((other.uniform_m() - one.uniform_m() - uniform_m).abs() < 1e-13);
    }
}

#[test]
fn surveys_that_cannot_be_are_refused() {
    let three = [point(0.0, 0.0), point(2.0, 0.1), point(4.0, 0.1)];
    assert!(PerimeterFit::new(&three, DIAMETER_M, 0.001).is_ok());
    assert_eq!(
        PerimeterFit::new(&three[..2], DIAMETER_M, 0.001).unwrap_err(),
        ShellError::Fit(FitError::TooFew { observations: 2, unknowns: 3 })
    );
    let twice = [point(0.0, 0.0), point(2.0, 0.1), point(2.0, 0.1), point(4.0, 0.2)];
    let refused = PerimeterFit::new(&twice, DIAMETER_M, 0.001).unwrap_err();
    assert_eq!(refused, ShellError::NotOnceAround { index: 2 });
    assert!(refused.to_string().starts_with("point 3 "), "{refused}");
    let backwards = [point(0.0, 0.0), point(6.0, 0.1), point(5.0, 0.1), point(4.0, 0.2)];
    assert!(PerimeterFit::new(&backwards, DIAMETER_M, 0.001).is_err());
    let a_level = [point(0.0, 104.2), point(2.0, 104.3), point(4.0, 104.1)];
    assert!(PerimeterFit::new(&a_level, DIAMETER_M, 0.001).is_err(), "levels are no settlements");
    assert!(Harmonics::new(&three, 2).is_err(), "five unknowns from three points");
    assert!(Harmonics::new(&three, 9).is_err());
}
