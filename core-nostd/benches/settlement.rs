//! Settlement: error control against fixed sublayers, and the per-cell law of the time stepper.
//! Quote ratios within one run.
//!
//! `cargo bench -p brimstead-core --bench settlement`

#![allow(clippy::unwrap_used, reason = "a bench may panic")]

#[path = "../tests/sample_ground/mod.rs"]
mod sample_ground;

use brimstead_core::ground::Profile;
use brimstead_core::settlement::primary::{primary_settlement, primary_settlement_by_sublayers};
use brimstead_core::settlement::strain::StressStrain;
use brimstead_core::stress::Disc;
use divan::{Bencher, black_box};
use sample_ground::crust_over_soft_clay;

fn main() {
    divan::main();
}

fn at_edge(disc: &Disc) -> impl Fn(f64) -> f64 + '_ {
    |depth_m| disc.stress_at(disc.radius_m(), depth_m).map_or(f64::NAN, |stress| stress.sigma_z_kpa)
}

#[divan::bench(args = [1e-4, 1e-6, 1e-10])]
fn with_error_control(bencher: Bencher, error_target_m: f64) {
    let (site, disc) = (crust_over_soft_clay(), Disc::new(18.0, 150.0, 0.5).unwrap());
    let profile = Profile::new(&site).unwrap();
    bencher.bench(|| primary_settlement(&profile, at_edge(&disc), 0.0, black_box(error_target_m)));
}

#[divan::bench(args = [0.5, 0.05])]
fn by_fixed_sublayers(bencher: Bencher, sublayer_m: f64) {
    let (site, disc) = (crust_over_soft_clay(), Disc::new(18.0, 150.0, 0.5).unwrap());
    let profile = Profile::new(&site).unwrap();
    let load = at_edge(&disc);
    bencher.bench(|| primary_settlement_by_sublayers(&profile, &load, 0.0, black_box(sublayer_m)));
}

#[divan::bench]
fn strain_of_one_cell(bencher: Bencher) {
    let site = crust_over_soft_clay();
    let law = StressStrain::at_depth(&Profile::new(&site).unwrap(), 6.0).unwrap();
    bencher.bench(|| black_box(&law).strain_at(black_box(120.0), black_box(140.0)));
}
