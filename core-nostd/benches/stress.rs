//! Speed of the stress room, as ratios within one run: closed form against numerical quadrature
//! of the same integrals, and batches against single points.
//!
//! `cargo bench -p brimstead-core --bench stress`

#![allow(clippy::expect_used, clippy::integer_division, reason = "a bench may panic")]

use brimstead_core::load::PlanPosition;
use brimstead_core::math::quadrature::GaussLegendre;
use brimstead_core::stress::layered::{
    Accuracy, BesselBlock, ElasticBase, ElasticLayer, KernelBlock, LayeredGround, LayeredLoad,
    LayeredMap, LayeredResponse, WaveBlock,
};
use brimstead_core::stress::superposition::{self, PlacedLoad, SitePoint};
use brimstead_core::stress::{AxisPoint, AxisymmetricStress, CartesianStress, Disc, Ring};
use divan::counter::ItemsCount;
use divan::{Bencher, black_box};

const POINTS: usize = 128 * 64;

fn main() {
    divan::main();
}

/// A section from below the centre to 2.5 radii beside it and to 2.5 radii deep.
fn section() -> Vec<AxisPoint> {
    let at =
        |i: usize| AxisPoint { r_m: 0.2 * (i % 128) as f64, z_m: 0.1 + 0.4 * (i / 128) as f64 };
    (0..POINTS).map(at).collect()
}

fn disc() -> Disc {
    Disc::new(10.0, 150.0, 0.3).expect("a valid load")
}

mod disc_tensor {
    use super::*;

    #[divan::bench]
    fn batch(bencher: Bencher) {
        let (points, disc) = (section(), disc());
        let mut out = vec![AxisymmetricStress::default(); POINTS];
        bencher
            .counter(ItemsCount::new(POINTS))
            .bench_local(|| disc.stress_into(black_box(&points), &mut out));
    }

    #[divan::bench]
    fn one_by_one(bencher: Bencher) {
        let (points, disc) = (section(), disc());
        bencher.counter(ItemsCount::new(POINTS)).bench_local(|| {
            let sum = |sum: f64, p: &AxisPoint| {
                sum + disc.stress_at(p.r_m, p.z_m).map_or(0.0, |s| {
                    s.sigma_z_kpa + s.sigma_r_kpa + s.sigma_theta_kpa + s.tau_rz_kpa
                })
            };
            black_box(&points).iter().fold(0.0, sum)
        });
    }

    /// The same four components by quadrature of the Hankel integrals to about 1e-9, at the
    /// points where it converges quickly (half a radius deep and more).
    #[divan::bench]
    fn numerical_quadrature(bencher: Bencher) {
        let rule = GaussLegendre::<16>::new();
        let points: Vec<AxisPoint> =
            section().into_iter().filter(|p| p.z_m >= 5.0).step_by(16).collect();
        let disc = disc();
        for p in &points {
            let (exact, [sigma_z, ..]) = (disc.stress_at(p.r_m, p.z_m), by_quadrature(&rule, *p));
            assert!((exact.expect("in range").sigma_z_kpa / 150.0 - sigma_z).abs() < 1e-9);
        }
        bencher.counter(ItemsCount::new(points.len())).bench_local(|| {
            black_box(&points).iter().fold(0.0, |sum, p| sum + by_quadrature(&rule, *p)[0])
        });
    }

    fn by_quadrature(rule: &GaussLegendre<16>, point: AxisPoint) -> [f64; 4] {
        let (rho, zeta, nu) = (point.r_m / 10.0, point.z_m / 10.0, 0.3);
        let mut sum = [0.0; 4];
        // Panels of one oscillation of the faster Bessel function, until exp(-m zeta) is 1e-10.
        let width = std::f64::consts::PI / rho.max(1.0);
        let panels = (24.0 / zeta / width).ceil() as usize;
        for panel in 0..panels {
            let from = panel as f64 * width;
            for (m, weight) in rule.on(from, from + width) {
                let (x, y) = (m * rho, m * zeta);
                let load = weight * libm::j1(m) * libm::exp(-y);
                let (j0, j1) = (libm::j0(x), libm::j1(x));
                let j1_x = if x > 0.0 { j1 / x } else { 0.5 };
                let lateral = (1.0 - 2.0 * nu - y) * j1_x;
                sum[0] += load * (1.0 + y) * j0;
                sum[1] += load * ((1.0 - y) * j0 - lateral);
                sum[2] += load * (2.0 * nu * j0 + lateral);
                sum[3] += load * y * j1;
            }
        }
        sum
    }
}

#[divan::bench]
fn ring_tensor_batch(bencher: Bencher) {
    let points = section();
    let ring = Ring::new(10.0, 50.0, 0.3).expect("a valid load");
    let mut out = vec![AxisymmetricStress::default(); POINTS];
    bencher
        .counter(ItemsCount::new(POINTS))
        .bench_local(|| ring.stress_into(black_box(&points), &mut out));
}

/// Three tanks, each a disc and a ring: items are site points with all six loads.
#[divan::bench]
fn site_tensor_batch_of_six_loads(bencher: Bencher) {
    let loads: Vec<PlacedLoad> = [0.0, 28.0, 60.0]
        .into_iter()
        .flat_map(|x_m| {
            let axis = PlanPosition { x_m, y_m: 0.0 };
            let ring = Ring::new(10.0, 50.0, 0.3).expect("a valid load");
            [PlacedLoad::new(axis, disc()), PlacedLoad::new(axis, ring)]
                .map(|load| load.expect("a valid place"))
        })
        .collect();
    let at = |p: AxisPoint| SitePoint { x_m: p.r_m - 3.03, y_m: 1.7, z_m: p.z_m };
    let points: Vec<SitePoint> = section().into_iter().map(at).collect();
    let mut out = vec![CartesianStress::default(); POINTS];
    bencher
        .counter(ItemsCount::new(POINTS))
        .bench_local(|| superposition::stress_into(&loads, black_box(&points), &mut out));
}

#[divan::bench]
fn principal_values(bencher: Bencher) {
    let loads =
        [PlacedLoad::new(PlanPosition { x_m: 0.0, y_m: 0.0 }, disc()).expect("a valid place")];
    let at = |p: AxisPoint| SitePoint { x_m: p.r_m, y_m: 1.7, z_m: p.z_m };
    let points: Vec<SitePoint> = section().into_iter().map(at).collect();
    let mut stresses = vec![CartesianStress::default(); POINTS];
    superposition::stress_into(&loads, &points, &mut stresses).expect("points in range");
    bencher.counter(ItemsCount::new(POINTS)).bench_local(|| {
        let sum = |sum: f64, s: &CartesianStress| sum + s.principal().sigma_1_kpa;
        black_box(&stresses).iter().fold(0.0, sum)
    });
}

/// A section of 200 distances by 100 depths through crust, soft clay and sand, to four radii
/// beside and below the centre.
mod layered_section {
    use super::*;

    const RADIUS: f64 = 10.0;
    const LOAD: LayeredLoad = LayeredLoad::Disc { radius_m: RADIUS, pressure_kpa: 150.0 };

    fn ground(gradient: f64) -> LayeredGround {
        let layer = |thickness_m, young_kpa, poisson, young_gradient_kpa_per_m| ElasticLayer {
            thickness_m,
            young_kpa,
            poisson,
            young_gradient_kpa_per_m,
        };
        let layers = [layer(3.0, 20_000.0, 0.3, 0.0), layer(15.0, 4_000.0, 0.49, gradient)];
        let sand = ElasticBase::HalfSpace { young_kpa: 40_000.0, poisson: 0.25 };
        LayeredGround::new(&layers, sand).expect("a valid ground")
    }

    /// Set-up and all rows, the rows shared out among threads.
    fn section(ground: &LayeredGround, accuracy: Accuracy, threads: usize) -> f64 {
        let radii: Vec<f64> = (0..200).map(|i| 4.0 * RADIUS * f64::from(i) / 199.0).collect();
        let depths: Vec<f64> = (0..100).map(|i| 4.0 * RADIUS * f64::from(i) / 99.0).collect();
        let size = ground.map_size(&LOAD, &radii, &depths, accuracy).expect("a map that fits");
        let mut waves = vec![WaveBlock::default(); size.waves];
        let mut bessel = vec![BesselBlock::default(); size.bessel];
        let map = ground
            .map(&LOAD, &radii, &depths, accuracy, (&mut waves, &mut bessel))
            .expect("a map that fits");
        std::thread::scope(|scope| {
            let part = |first| {
                let map = &map;
                scope.spawn(move || rows(map, size.waves, (first, threads)))
            };
            let parts: Vec<_> = (0..threads).map(part).collect();
            parts.into_iter().map(|part| part.join().expect("rows")).sum()
        })
    }

    fn rows(map: &LayeredMap<'_>, waves: usize, (first, step): (usize, usize)) -> f64 {
        let mut scratch = vec![KernelBlock::default(); waves];
        let mut out = vec![LayeredResponse::default(); 200];
        let mut sum = 0.0;
        for row in (first..map.rows()).step_by(step) {
            map.row(row, &mut scratch, &mut out).expect("a row of the map");
            sum += out.iter().map(|r| r.stress.sigma_z_kpa).sum::<f64>();
        }
        sum
    }

    #[divan::bench(sample_count = 5)]
    fn map_accuracy_two_threads() -> f64 {
        section(&ground(0.0), Accuracy::Map, 2)
    }

    #[divan::bench(sample_count = 5)]
    fn map_accuracy_one_thread() -> f64 {
        section(&ground(0.0), Accuracy::Map, 1)
    }

    #[divan::bench(sample_count = 5)]
    fn map_accuracy_modulus_gradient_two_threads() -> f64 {
        section(&ground(300.0), Accuracy::Map, 2)
    }

    #[divan::bench(sample_count = 3)]
    fn reference_accuracy_two_threads() -> f64 {
        section(&ground(0.0), Accuracy::Reference, 2)
    }

    #[divan::bench]
    fn single_point() -> LayeredResponse {
        black_box(ground(0.0)).response_at(&LOAD, 7.0, 8.0, Accuracy::Reference).expect("in range")
    }
}
