//! Layered elastic ground against exact tables, published two- and three-layer values and the
//! closed forms it must become.

#![allow(
    clippy::panic,
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

mod reference_table;
mod sheet;

use brimstead_core::stress::layered::{
    Accuracy, BesselBlock, ElasticBase, ElasticLayer, KernelBlock, LayeredGround, LayeredLoad,
    LayeredResponse, WaveBlock,
};
use brimstead_core::stress::{Disc, Ring, StressError};
use proptest::prelude::*;
use proptest::test_runner::{Config, RngSeed};
use reference_table::{Row, Worst, elastic, printed_tolerance};
use sheet::Sheet;
use std::collections::HashMap;

const RADIUS: f64 = 4.0;
const PRESSURE: f64 = 250.0;
/// What table moduli of 1 stand for, kPa.
const YOUNG: f64 = 5000.0;

fn load() -> LayeredLoad {
    LayeredLoad::Disc { radius_m: RADIUS, pressure_kpa: PRESSURE }
}

fn layer(thickness: f64, young: f64, poisson: f64) -> ElasticLayer {
    ElasticLayer {
        thickness_m: thickness * RADIUS,
        young_kpa: young * YOUNG,
        poisson,
        young_gradient_kpa_per_m: 0.0,
    }
}

fn half_space(young: f64, poisson: f64) -> ElasticBase {
    ElasticBase::HalfSpace { young_kpa: young * YOUNG, poisson }
}

const LAYERS: &str = "layers (h/R : E : nu, top down)";

fn numbers(text: &str) -> Vec<f64> {
    text.split(':').filter_map(|part| part.trim().parse().ok()).collect()
}

/// A ground as the tables write it: layers `h/R : E : nu`, top down, and what they rest on.
fn ground_of(row: &Row) -> LayeredGround {
    let layers: Vec<ElasticLayer> =
        row.text(LAYERS).split('|').map(numbers).map(|n| layer(n[0], n[1], n[2])).collect();
    let base = match row.text("base") {
        "rough" => ElasticBase::RigidRough,
        "smooth" => ElasticBase::RigidSmooth,
        other => {
            let n = numbers(other);
            half_space(n[0], n[1])
        }
    };
    LayeredGround::new(&layers, base).unwrap()
}

/// The grounds of `table5_cases.csv` by name.
fn cases() -> HashMap<String, LayeredGround> {
    let rows = elastic("table5_cases.csv");
    rows.iter().map(|row| (row.text("case").to_owned(), ground_of(row))).collect()
}

/// Components in the units of the tables; displacement over q R / E of the top layer.
fn scaled(response: &LayeredResponse, young_kpa: f64) -> [(&'static str, f64); 6] {
    let (stress, moved) = (&response.stress, &response.displacement);
    let unit_m = PRESSURE * RADIUS / young_kpa;
    [
        ("sigma_z/q", stress.sigma_z_kpa / PRESSURE),
        ("sigma_r/q", stress.sigma_r_kpa / PRESSURE),
        ("sigma_theta/q", stress.sigma_theta_kpa / PRESSURE),
        ("tau_rz/q", stress.tau_rz_kpa / PRESSURE),
        ("u_z*E1/(q*R)", moved.settlement_m / unit_m),
        ("u_r*E1/(q*R)", moved.radial_m / unit_m),
    ]
}

fn worst_over_table(accuracy: Accuracy) -> Worst {
    let grounds = cases();
    let mut worst = Worst::default();
    for row in elastic("table5_layered.csv") {
        let ground = &grounds[row.text("case")];
        let (rho, zeta) = (row.number("r/R"), row.number("z/R"));
        let wanted: usize =
            row.text("layer(1=top; interface depths appear once per side)").parse().unwrap();
        let above: f64 =
            ground.layers().iter().take(wanted - 1).map(|l| l.thickness_m / RADIUS).sum();
        // A point on an interface takes the upper layer; the lower side is met just below it.
        let below_interface = wanted > 1 && (zeta - above).abs() < 1e-9;
        let zeta = if below_interface { zeta * (1.0 + 1e-11) } else { zeta };
        let response = ground.response_at(&load(), rho * RADIUS, zeta * RADIUS, accuracy).unwrap();
        for (name, value) in scaled(&response, ground.layers()[0].young_kpa) {
            // Displacements of a stiff plate on soft ground are over a hundred units.
            let size = row.number(name).abs().max(1.0);
            worst.take(value / size, row.number(name) / size, || {
                format!("{} r/R {rho} z/R {zeta} {name}", row.text("case"))
            });
        }
    }
    worst
}

#[test]
fn layers_agree_with_every_row_of_the_exact_table() {
    worst_over_table(Accuracy::Reference).assert_below(1e-9);
}

#[test]
fn map_accuracy_keeps_what_it_states() {
    worst_over_table(Accuracy::Map).assert_below(1e-6);
}

#[test]
fn one_layer_on_a_rigid_base_has_the_exact_settlement_factors() {
    let mut worst = Worst::default();
    for row in elastic("table5_settlement_factors.csv") {
        let base = match row.text("base") {
            "rough" => ElasticBase::RigidRough,
            "smooth" => ElasticBase::RigidSmooth,
            other => panic!("unknown base {other}"),
        };
        let layers = [layer(row.number("H/R"), 1.0, row.number("nu"))];
        let ground = LayeredGround::new(&layers, base).unwrap();
        for (place, rho) in [("centre", 0.0), ("edge", 1.0)] {
            let found =
                ground.response_at(&load(), rho * RADIUS, 0.0, Accuracy::Reference).unwrap();
            let factor = found.displacement.settlement_m * YOUNG / (PRESSURE * RADIUS);
            worst.take(factor, row.number(&format!("u_z*E/(q*R) {place}")), || {
                format!("{place} H/R {} nu {}", row.text("H/R"), row.text("nu"))
            });
        }
    }
    worst.assert_below(1e-11);
}

#[test]
fn modulus_growing_with_depth_agrees_with_the_exact_table() {
    let (mut reference, mut map) = (Worst::default(), Worst::default());
    for row in elastic("table7_gibson.csv") {
        let gradient = row.number("k*R/E0") * YOUNG / RADIUS;
        let graded = ElasticLayer {
            young_gradient_kpa_per_m: gradient,
            ..layer(row.number("H/R"), 1.0, row.number("nu"))
        };
        let ground = LayeredGround::new(&[graded], ElasticBase::RigidRough).unwrap();
        for (place, rho) in [("centre", 0.0), ("edge", 1.0)] {
            let want = row.number(&format!("u_z*E0/(q*R) {place}"));
            for (accuracy, worst) in
                [(Accuracy::Reference, &mut reference), (Accuracy::Map, &mut map)]
            {
                let found = ground.response_at(&load(), rho * RADIUS, 0.0, accuracy).unwrap();
                let factor = found.displacement.settlement_m * YOUNG / (PRESSURE * RADIUS);
                worst.take(factor, want, || {
                    format!("{place} kR/E0 {} H/R {}", row.text("k*R/E0"), row.text("H/R"))
                });
            }
        }
    }
    // The edge column is printed with eight digits.
    reference.assert_below(5e-8);
    map.assert_below(1e-6);
}

#[test]
fn published_values_are_met_to_their_printed_digits() {
    for row in elastic("published_layered.csv") {
        let ground = ground_of(&row);
        let (r, z) = (row.number("r/R") * RADIUS, row.number("z/R") * RADIUS);
        let found = ground.response_at(&load(), r, z, Accuracy::Reference).unwrap();
        let (sigma_z, sigma_r) =
            (found.stress.sigma_z_kpa / PRESSURE, found.stress.sigma_r_kpa / PRESSURE);
        let settlement = found.displacement.settlement_m / (PRESSURE * RADIUS);
        let value = match row.text("quantity") {
            "sigma_z" => sigma_z,
            "sigma_r" => sigma_r,
            "sigma_z-sigma_r" => sigma_z - sigma_r,
            // Burmister: w = 1.5 q R F2 / E2, and E2 is 1 in the table.
            "F2" => settlement * YOUNG / 1.5,
            "u_z E1/(q R)" => settlement * ground.layers()[0].young_kpa,
            other => panic!("unknown quantity {other}"),
        };
        let name =
            || format!("{} {} z/R {}", row.text("quantity"), row.text(LAYERS), row.text("z/R"));
        let recomputed = row.text("recomputed");
        assert!(
            (value - row.number("recomputed")).abs() <= printed_tolerance(recomputed),
            "{}: {value} but the recomputed value is {recomputed}",
            name()
        );
        // Machine tables of the 1940s to 1960s; Jones states one per cent.
        let print_error = 0.01 * value.abs();
        assert!(
            (value - row.number("printed")).abs() <= print_error,
            "{}: {value} but {} is printed in {}",
            name(),
            row.text("printed"),
            row.text("source")
        );
    }
}

fn difference(one: &LayeredResponse, other: &LayeredResponse) -> f64 {
    scaled(one, YOUNG)
        .iter()
        .zip(scaled(other, YOUNG))
        .map(|((_, a), (_, b))| (a - b).abs())
        .fold(0.0, f64::max)
}

fn places() -> Vec<(f64, f64)> {
    let rho = [0.0, 0.4, 0.999, 1.0, 1.7, 6.0];
    let zeta = [0.0, 0.1, 0.3, 0.31, 1.2, 4.0];
    rho.iter().flat_map(|r| zeta.iter().map(|z| (*r * RADIUS, *z * RADIUS))).collect()
}

#[test]
fn equal_layers_are_a_half_space() {
    for nu in [0.0, 0.3, 0.5] {
        let layers = [layer(0.3, 1.0, nu), layer(0.9, 1.0, nu), layer(2.0, 1.0, nu)];
        let ground = LayeredGround::new(&layers, half_space(1.0, nu)).unwrap();
        let disc = Disc::new(RADIUS, PRESSURE, nu).unwrap();
        for (r, z) in places() {
            let found = ground.response_at(&load(), r, z, Accuracy::Reference).unwrap();
            let closed = LayeredResponse {
                stress: disc.stress_at(r, z).unwrap(),
                displacement: disc.displacement_at(YOUNG, r, z).unwrap(),
            };
            let off = difference(&found, &closed);
            assert!(off < 1e-10, "nu {nu} r {r} z {z}: {off:e}");
        }
    }
}

#[test]
fn equal_layers_under_a_ring_are_a_half_space() {
    let nu = 0.3;
    let line_load = PRESSURE * RADIUS;
    let ring = Ring::new(RADIUS, line_load, nu).unwrap();
    let load = LayeredLoad::Ring { radius_m: RADIUS, line_load_kn_per_m: line_load };
    let layers = [layer(0.3, 1.0, nu), layer(0.9, 1.0, nu)];
    let ground = LayeredGround::new(&layers, half_space(1.0, nu)).unwrap();
    for (r, z) in places() {
        if r == RADIUS && z == 0.0 {
            let refused = ground.response_at(&load, r, z, Accuracy::Reference).unwrap_err();
            assert_eq!(refused, StressError::NoFiniteValue { radius_m: RADIUS });
            continue;
        }
        let found = ground.response_at(&load, r, z, Accuracy::Reference).unwrap();
        let closed = LayeredResponse {
            stress: ring.stress_at(r, z).unwrap(),
            displacement: ring.displacement_at(YOUNG, r, z).unwrap(),
        };
        let off = difference(&found, &closed);
        assert!(off < 1e-10, "r {r} z {z}: {off:e}");
    }
}

#[test]
fn ring_is_the_derivative_of_the_disc_by_its_radius() {
    let ground =
        LayeredGround::new(&[layer(0.4, 6.0, 0.3), layer(1.5, 1.0, 0.45)], ElasticBase::RigidRough)
            .unwrap();
    let (r, z, step) = (1.4 * RADIUS, 0.9 * RADIUS, 1e-3);
    let disc = |radius_m: f64| {
        let load = LayeredLoad::Disc { radius_m, pressure_kpa: PRESSURE };
        scaled(&ground.response_at(&load, r, z, Accuracy::Reference).unwrap(), YOUNG)
    };
    let ring = LayeredLoad::Ring { radius_m: RADIUS, line_load_kn_per_m: PRESSURE };
    let ring = scaled(&ground.response_at(&ring, r, z, Accuracy::Reference).unwrap(), YOUNG);
    let [a, b, c, d] = [-2.0, -1.0, 1.0, 2.0].map(|steps| disc(RADIUS + steps * step));
    for i in 0..6 {
        let slope = (8.0 * (c[i].1 - b[i].1) - (d[i].1 - a[i].1)) / (12.0 * step);
        assert!((ring[i].1 - slope).abs() < 1e-9, "{}: {} {slope}", ring[i].0, ring[i].1);
    }
}

#[test]
fn a_plain_half_space_needs_no_layer() {
    let ground = LayeredGround::new(&[], half_space(1.0, 0.3)).unwrap();
    let found = ground.response_at(&load(), 3.0, 2.0, Accuracy::Reference).unwrap();
    assert_eq!(
        found.stress,
        Disc::new(RADIUS, PRESSURE, 0.3).unwrap().stress_at(3.0, 2.0).unwrap()
    );
    assert_eq!(LayeredGround::new(&[], ElasticBase::RigidRough), Err(StressError::NoGround));
}

#[test]
fn working_shows_what_is_closed_and_what_is_integrated() {
    let ground = LayeredGround::new(&[layer(0.5, 5.0, 0.3)], half_space(1.0, 0.45)).unwrap();
    let mut sheet = Sheet::default();
    let (r, z) = (0.5 * RADIUS, 0.2 * RADIUS);
    let found = ground.response_at_with(&load(), r, z, Accuracy::Reference, &mut sheet).unwrap();
    assert_eq!(found, ground.response_at(&load(), r, z, Accuracy::Reference).unwrap());
    let closed = Disc::new(RADIUS, PRESSURE, 0.3).unwrap().stress_at(r, z).unwrap();
    let shown = sheet.value("vertical stress on a half-space of the top layer");
    assert!((shown - closed.sigma_z_kpa).abs() < 1e-10);
    assert_eq!(sheet.value("settlement"), found.displacement.settlement_m);
    // 38 over twice the layer less the depth.
    assert!((sheet.value("largest wave number times radius") - 38.0 / 0.8).abs() < 1e-12);
    assert!(sheet.source().contains("Burmister"));
}

#[test]
fn nothing_is_known_inside_a_rigid_base() {
    let ground = LayeredGround::new(&[layer(1.0, 1.0, 0.3)], ElasticBase::RigidRough).unwrap();
    let at = |z| ground.response_at(&load(), 0.0, z, Accuracy::Reference);
    let on_base = at(RADIUS).unwrap();
    assert!(on_base.displacement.settlement_m.abs() < 1e-12, "a rigid base does not settle");
    assert!(matches!(at(1.01 * RADIUS), Err(StressError::BelowRigidBase { .. })));
}

#[test]
fn too_much_work_is_refused_before_it_is_begun() {
    let ground = LayeredGround::new(
        &[ElasticLayer { thickness_m: 1e-3, ..layer(1.0, 50.0, 0.3) }],
        half_space(1.0, 0.3),
    )
    .unwrap();
    let wide = LayeredLoad::Disc { radius_m: 100.0, pressure_kpa: 1.0 };
    let refused = ground.response_at(&wide, 1e4, 0.0, Accuracy::Reference);
    assert!(matches!(refused, Err(StressError::TooMuchWork { .. })), "{refused:?}");
}

/// Every point of a map equals the point computed alone.
fn assert_map_equals_points(ground: &LayeredGround, accuracy: Accuracy) {
    let radii: Vec<f64> = (0..9).map(|i| 0.5 * f64::from(i) * RADIUS).collect();
    let depths: Vec<f64> = [0.0, 0.2, 0.5, 0.8, 1.7].iter().map(|z| z * RADIUS).collect();
    let size = ground.map_size(&load(), &radii, &depths, accuracy).unwrap();
    let mut waves = vec![WaveBlock::default(); size.waves];
    let mut bessel = vec![BesselBlock::default(); size.bessel];
    let map = ground.map(&load(), &radii, &depths, accuracy, (&mut waves, &mut bessel)).unwrap();
    let mut scratch = vec![KernelBlock::default(); size.waves];
    let mut out = vec![LayeredResponse::default(); radii.len()];
    for (row, z) in depths.iter().enumerate() {
        map.row(row, &mut scratch, &mut out).unwrap();
        for (r, found) in radii.iter().zip(&out) {
            let single = ground.response_at(&load(), *r, *z, accuracy).unwrap();
            let off = difference(found, &single);
            // Both are quadratures of the stated accuracy, on different panels.
            let tolerance = if accuracy == Accuracy::Map { 1e-6 } else { 1e-10 };
            assert!(off < tolerance, "r {r} z {z}: {off:e}");
        }
    }
    assert!(map.row(depths.len(), &mut scratch, &mut out).is_err());
    assert!(map.row(0, &mut scratch, &mut out[1..]).is_err());
}

#[test]
fn maps_equal_single_points() {
    let layers = [layer(0.5, 5.0, 0.3), layer(2.0, 1.0, 0.45)];
    for base in [half_space(4.0, 0.25), ElasticBase::RigidSmooth] {
        let ground = LayeredGround::new(&layers, base).unwrap();
        assert_map_equals_points(&ground, Accuracy::Reference);
        assert_map_equals_points(&ground, Accuracy::Map);
    }
    let growing = ElasticLayer { young_gradient_kpa_per_m: 900.0, ..layer(3.0, 1.0, 0.3) };
    let ground = LayeredGround::new(&[growing], ElasticBase::RigidRough).unwrap();
    assert_map_equals_points(&ground, Accuracy::Map);
}

/// Inside a layer with a gradient: many thin layers of constant modulus must come to the same.
#[test]
fn stresses_inside_a_growing_modulus_are_those_of_many_layers() {
    let growing = ElasticLayer { young_gradient_kpa_per_m: 3000.0, ..layer(1.5, 1.0, 0.35) };
    let ground = LayeredGround::new(&[growing], half_space(4.0, 0.3)).unwrap();
    let many = |count: usize| {
        // 16 layers at most: fine ones around the depth, coarse ones elsewhere are not needed,
        // since the error falls with the square of their number.
        let layers: Vec<ElasticLayer> = (0..count)
            .map(|i| (i as f64 + 0.5) / count as f64)
            .map(|middle| ElasticLayer {
                thickness_m: 1.5 * RADIUS / count as f64,
                young_kpa: YOUNG + 3000.0 * 1.5 * RADIUS * middle,
                poisson: 0.35,
                young_gradient_kpa_per_m: 0.0,
            })
            .collect();
        LayeredGround::new(&layers, half_space(4.0, 0.3)).unwrap()
    };
    let (r, z) = (0.8 * RADIUS, 0.75 * RADIUS);
    let at =
        |ground: &LayeredGround| ground.response_at(&load(), r, z, Accuracy::Reference).unwrap();
    let found = scaled(&at(&ground), YOUNG);
    let (coarse, fine) = (scaled(&at(&many(8)), YOUNG), scaled(&at(&many(16)), YOUNG));
    // Continuous components only; the horizontal stresses of stepped layers jump.
    for i in [0, 3, 4, 5] {
        let limit = fine[i].1 + (fine[i].1 - coarse[i].1) / 3.0;
        assert!((found[i].1 - limit).abs() < 3e-4, "{}: {} {limit}", found[i].0, found[i].1);
    }
    // Hooke's law at the very depth, with the hoop strain u_r/r, sigma_theta from it.
    let hoop = -at(&ground).displacement.radial_m / r;
    let young_at = YOUNG + 3000.0 * z;
    let stress = at(&ground).stress;
    let from_stress =
        (stress.sigma_theta_kpa - 0.35 * (stress.sigma_r_kpa + stress.sigma_z_kpa)) / young_at;
    assert!((hoop - from_stress).abs() < 1e-6 * hoop.abs(), "{hoop} {from_stress}");
}

/// Layers of any order of stiffness, some with a gradient, on any base.
fn any_ground(gradient: bool) -> impl Strategy<Value = LayeredGround> {
    let layer = (0.05..4.0_f64, -2.0..2.0_f64, 0.0..=0.5_f64, 0.2..4.0_f64).prop_map(
        move |(thickness, exponent, nu, growth)| {
            let plain = layer(thickness, 10_f64.powf(exponent), nu);
            let gradient =
                if gradient { (growth - 1.0) * plain.young_kpa / plain.thickness_m } else { 0.0 };
            ElasticLayer { young_gradient_kpa_per_m: gradient, ..plain }
        },
    );
    let base = prop_oneof![
        Just(ElasticBase::RigidRough),
        Just(ElasticBase::RigidSmooth),
        (-2.0..3.0_f64, 0.0..=0.5_f64).prop_map(|(e, nu)| half_space(10_f64.powf(e), nu)),
    ];
    (prop::collection::vec(layer, 1..5), base)
        .prop_map(|(layers, base)| LayeredGround::new(&layers, base).unwrap())
}

/// Largest difference of two responses, over the largest stress and the largest displacement.
fn relative(one: &LayeredResponse, other: &LayeredResponse, size: &LayeredResponse) -> f64 {
    let (a, b, size) = (scaled(one, YOUNG), scaled(other, YOUNG), scaled(size, YOUNG));
    let largest = |range: std::ops::Range<usize>| {
        size[range].iter().fold(1e-300_f64, |big, (_, value)| big.max(value.abs()))
    };
    let (stress, movement) = (largest(0..4).max(1.0), largest(4..6));
    (0..6)
        .map(|i| (a[i].1 - b[i].1).abs() / if i < 4 { stress } else { movement })
        .fold(0.0, f64::max)
}

proptest! {
    #![proptest_config(Config {
        rng_seed: RngSeed::Fixed(20_240_611),
        cases: 150,
        failure_persistence: None,
        ..Config::default()
    })]

    /// Bonded layers: across an interface nothing jumps but the horizontal stresses, and the
    /// surface carries the pressure and nothing else.
    #[test]
    fn bonded_layers_stay_together(ground in any_ground(false), rho in 0.0..3.0_f64) {
        let at = |z: f64| {
            ground.response_at(&load(), rho * RADIUS, z, Accuracy::Reference).unwrap()
        };
        let surface = at(0.0);
        let pressure = if rho < 1.0 { 1.0 } else { 0.0 };
        prop_assert!((surface.stress.sigma_z_kpa / PRESSURE - pressure).abs() < 1e-9);
        prop_assert!(surface.stress.tau_rz_kpa.abs() < 1e-9 * PRESSURE);
        let mut depth = 0.0;
        let below: &[ElasticLayer] = match ground.base() {
            ElasticBase::HalfSpace { .. } => ground.layers(),
            _ => &ground.layers()[..ground.layers().len() - 1],
        };
        for layer in below {
            depth += layer.thickness_m;
            let (above, below) = (at(depth), at(depth * (1.0 + 1e-11)));
            let smooth = |response: &LayeredResponse| {
                let mut kept = *response;
                kept.stress.sigma_r_kpa = 0.0;
                kept.stress.sigma_theta_kpa = 0.0;
                kept
            };
            let jump = relative(&smooth(&above), &smooth(&below), &surface);
            prop_assert!(jump < 2e-9, "{jump:e} at depth {depth}");
        }
    }

    /// What the two settings state of themselves, on any ground.
    #[test]
    fn map_setting_stays_within_its_bound(
        ground in any_ground(false), rho in 0.0..4.0_f64, share in 0.0..1.0_f64,
    ) {
        let depth: f64 = share * ground.layers().iter().map(|l| l.thickness_m).sum::<f64>();
        let at = |z, accuracy| ground.response_at(&load(), rho * RADIUS, z, accuracy).unwrap();
        let (exact, map) = (at(depth, Accuracy::Reference), at(depth, Accuracy::Map));
        let off = relative(&exact, &map, &at(0.0, Accuracy::Reference));
        prop_assert!(off < 5e-6, "{off:e}");
    }
}

proptest! {
    #![proptest_config(Config {
        rng_seed: RngSeed::Fixed(20_240_611),
        cases: 40,
        failure_persistence: None,
        ..Config::default()
    })]

    #[test]
    fn map_setting_stays_within_its_bound_on_growing_moduli(
        ground in any_ground(true), rho in 0.0..3.0_f64, share in 0.0..1.0_f64,
    ) {
        let depth: f64 = share * ground.layers().iter().map(|l| l.thickness_m).sum::<f64>();
        let at = |z, accuracy| ground.response_at(&load(), rho * RADIUS, z, accuracy).unwrap();
        let (exact, map) = (at(depth, Accuracy::Reference), at(depth, Accuracy::Map));
        let off = relative(&exact, &map, &at(0.0, Accuracy::Reference));
        prop_assert!(off < 1e-4, "{off:e}");
    }

    /// A layer with a gradient may be described as two, cut anywhere.
    #[test]
    fn cutting_a_growing_layer_in_two_changes_nothing(
        ground in any_ground(true), rho in 0.0..3.0_f64, share in 0.0..1.0_f64,
        cut in 0.1..0.9_f64,
    ) {
        let [first, rest @ ..] = ground.layers() else { panic!("no layer") };
        let upper = ElasticLayer { thickness_m: cut * first.thickness_m, ..*first };
        let lower = ElasticLayer {
            thickness_m: (1.0 - cut) * first.thickness_m,
            young_kpa: first.young_kpa + first.young_gradient_kpa_per_m * upper.thickness_m,
            ..*first
        };
        let layers: Vec<ElasticLayer> =
            [upper, lower].into_iter().chain(rest.iter().copied()).collect();
        let in_two = LayeredGround::new(&layers, ground.base()).unwrap();
        let z = share * ground.layers().iter().map(|l| l.thickness_m).sum::<f64>();
        let at = |ground: &LayeredGround, z: f64| {
            ground.response_at(&load(), rho * RADIUS, z, Accuracy::Reference).unwrap()
        };
        let off = relative(&at(&ground, z), &at(&in_two, z), &at(&ground, 0.0));
        prop_assert!(off < 1e-5, "{off:e}");
    }
}
