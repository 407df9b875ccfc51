//! Stability: the search for the weakest circle by number of slices, against one bearing capacity.
//! Quote ratios within one run.
//!
//! `cargo bench -p brimstead-core --bench stability`

#![allow(clippy::unwrap_used, reason = "a bench may panic")]

use brimstead_core::stability::bearing::{Roughness, circular_bearing};
use brimstead_core::stability::edge::{Edge, edge_stability};
use brimstead_core::stability::strength::{StrengthProfile, StrengthSlice};
use divan::{Bencher, black_box};

fn main() {
    divan::main();
}

/// Twenty metres of crust over soft clay, cut into equal slices.
fn slices(count: u32) -> Vec<StrengthSlice> {
    let thickness_m = 20.0 / f64::from(count);
    (0..count)
        .map(|i| {
            let depth_m = thickness_m * f64::from(i);
            let undrained_strength_kpa = if depth_m < 1.5 { 40.0 } else { 12.0 + 1.5 * depth_m };
            StrengthSlice { thickness_m, undrained_strength_kpa, gradient_kpa_per_m: 1.5 }
        })
        .collect()
}

#[divan::bench(args = [4, 16, 60])]
fn weakest_circle_of_an_edge(bencher: Bencher, count: u32) {
    let slices = slices(count);
    let edge = Edge { diameter_m: 40.0, pressure_kpa: 100.0, smallest_width_m: None };
    bencher.bench(|| edge_stability(&StrengthProfile::new(black_box(&slices)).unwrap(), &edge));
}

#[divan::bench]
fn bearing_of_a_circle(bencher: Bencher) {
    bencher.bench(|| circular_bearing(black_box(40.0), 15.0, 1.5, Roughness::Rough));
}
