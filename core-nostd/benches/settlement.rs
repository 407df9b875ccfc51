//! Settlement: error control against fixed sublayers, and the per-cell law of the time stepper.
//! Quote ratios within one run.
//!
//! `cargo bench -p brimstead-core --bench settlement`

#![allow(clippy::unwrap_used, reason = "a bench may panic")]

use brimstead_core::config::Name;
use brimstead_core::ground::{
    BaseDrainage, BaseStiffness, Compressibility, Ground, GroundWater, Layer, Preconsolidation,
    Profile,
};
use brimstead_core::settlement::primary::{primary_settlement, primary_settlement_by_sublayers};
use brimstead_core::settlement::strain::StressStrain;
use brimstead_core::stress::Disc;
use divan::{Bencher, black_box};

fn main() {
    divan::main();
}

fn ground() -> Ground {
    let soft = |thickness_m, ocr| Layer {
        name: Name::new(),
        thickness_m,
        unit_weight_above_water_kn_m3: 16.5,
        unit_weight_below_water_kn_m3: 16.5,
        compressibility: Compressibility::Index { void_ratio: 1.6, cc: 0.7, cr: 0.08 },
        preconsolidation: Preconsolidation::Ocr(ocr),
        secondary_ratio: 0.01,
        cv_m2_per_s: 3e-8,
        ch_m2_per_s: 6e-8,
        permeability_m_per_s: 1e-9,
        young_undrained_kpa: 10_000.0,
        young_drained_kpa: 7_000.0,
        poisson_drained: 0.3,
        undrained_strength_kpa: 20.0,
        undrained_strength_gradient_kpa_per_m: 1.5,
        pore_pressure_response: 1.0,
        drained: false,
    };
    Ground {
        layers: [soft(2.0, 4.0), soft(3.0, 1.6), soft(4.0, 1.15), soft(5.0, 1.0)]
            .into_iter()
            .collect(),
        water: GroundWater::Hydrostatic { water_table_m: 1.0 },
        water_unit_weight_kn_m3: 9.81,
        base_drainage: BaseDrainage::Closed,
        base_stiffness: BaseStiffness::Rigid,
    }
}

fn at_edge(disc: &Disc) -> impl Fn(f64) -> f64 + '_ {
    |depth_m| disc.stress_at(disc.radius_m(), depth_m).map_or(f64::NAN, |stress| stress.sigma_z_kpa)
}

#[divan::bench(args = [1e-4, 1e-6, 1e-10])]
fn with_error_control(bencher: Bencher, error_target_m: f64) {
    let (site, disc) = (ground(), Disc::new(18.0, 150.0, 0.5).unwrap());
    let profile = Profile::new(&site).unwrap();
    bencher.bench(|| primary_settlement(&profile, at_edge(&disc), 0.0, black_box(error_target_m)));
}

#[divan::bench(args = [0.5, 0.05])]
fn by_fixed_sublayers(bencher: Bencher, sublayer_m: f64) {
    let (site, disc) = (ground(), Disc::new(18.0, 150.0, 0.5).unwrap());
    let profile = Profile::new(&site).unwrap();
    let load = at_edge(&disc);
    bencher.bench(|| primary_settlement_by_sublayers(&profile, &load, 0.0, black_box(sublayer_m)));
}

#[divan::bench]
fn strain_of_one_cell(bencher: Bencher) {
    let site = ground();
    let law = StressStrain::at_depth(&Profile::new(&site).unwrap(), 6.0).unwrap();
    bencher.bench(|| black_box(&law).strain_at(black_box(120.0), black_box(140.0)));
}
