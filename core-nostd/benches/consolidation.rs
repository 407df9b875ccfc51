//! A year of hourly steps of one column, and what the same numbers cost otherwise. Quote ratios
//! within one run.
//!
//! `cargo bench -p brimstead-core --bench consolidation`

#![allow(clippy::expect_used, clippy::indexing_slicing, reason = "a bench may panic")]

#[path = "../tests/walking_column/mod.rs"]
mod walking_column;

use brimstead_core::consolidation::{Boundary, Factor, Loading, Stepper};
use divan::{Bencher, black_box};
use walking_column::{CELLS, HOUR_S, clay, column, partial_drains, partly_drained_layers};

const HOURS: u32 = 8766;

fn main() {
    divan::main();
}

/// Pressure put on in each hour: a tank that is filled and drawn down.
fn increment_kpa(hour: u32) -> f64 {
    0.5 * f64::from(hour).sin()
}

fn year(stepper: &Stepper<CELLS>, keep_factor: bool) -> f64 {
    let mut state = stepper.at_rest();
    let mut factor = Factor::empty();
    for hour in 0..HOURS {
        if !keep_factor {
            factor = Factor::empty();
        }
        let increments = [increment_kpa(hour); CELLS];
        stepper
            .advance(&mut state, Loading::Ramp(&increments), HOUR_S, &mut factor)
            .expect("a sound step");
    }
    state.excess_kpa[CELLS >> 1]
}

fn layered(with_drains: bool) -> Stepper<CELLS> {
    let (layers, drains) = (partly_drained_layers(), partial_drains());
    let drains = with_drains.then_some(&drains);
    Stepper::new(&column(&layers, Boundary::Closed, drains)).expect("a sound column")
}

/// The aim: under 5 ms.
#[divan::bench]
fn year_of_hours_with_kept_factor(bencher: Bencher) {
    let stepper = layered(false);
    bencher.bench(|| year(black_box(&stepper), true));
}

#[divan::bench]
fn year_of_hours_with_drains(bencher: Bencher) {
    let stepper = layered(true);
    bencher.bench(|| year(black_box(&stepper), true));
}

#[divan::bench]
fn year_of_hours_without_kept_factor(bencher: Bencher) {
    let stepper = layered(false);
    bencher.bench(|| year(black_box(&stepper), false));
}

/// The textbook way: the same two stages, each by one sweep down and one up with its division
/// done anew, without a balance of water.
#[divan::bench]
fn year_of_hours_by_plain_sweeps(bencher: Bencher) {
    let stepper = layered(false);
    bencher.bench(|| plain_year(black_box(&stepper)));
}

/// The exact series of as many modes as cells, each carried on by its own exponential, for the
/// pressure at one depth: what a program with known modes would do. Finding the modes of layered
/// ground is not counted.
#[divan::bench]
fn year_of_hours_by_exact_modes(bencher: Bencher) {
    let rates: [f64; CELLS] = core::array::from_fn(|n| {
        let n = f64::from(u16::try_from(n).expect("few cells")) + 0.5;
        n * n * 5e-9
    });
    bencher.bench(|| {
        let rates = black_box(&rates);
        let decay = rates.map(|rate| libm::exp(-rate * HOUR_S));
        let gain = rates.map(|rate| -libm::expm1(-rate * HOUR_S) / (rate * HOUR_S));
        let mut modes = [0.0; CELLS];
        let mut worst = 0.0f64;
        for hour in 0..HOURS {
            let increment = increment_kpa(hour);
            let mut here = 0.0;
            for ((mode, decay), gain) in modes.iter_mut().zip(&decay).zip(&gain) {
                *mode = *mode * decay + gain * increment;
                here += *mode;
            }
            worst = worst.max(here);
        }
        worst
    });
}

fn plain_year(stepper: &Stepper<CELLS>) -> f64 {
    // One uniform stand-in of the same size: only the work matters.
    let thickness: Vec<f64> = stepper.thicknesses_m().collect();
    let gamma = 1.0 - core::f64::consts::FRAC_1_SQRT_2;
    let conductance: Vec<f64> = thickness
        .windows(2)
        .map(|pair| gamma * HOUR_S * 1e-7 * 2.0 / (pair[0] + pair[1]))
        .collect();
    let mut pressure = vec![0.0; CELLS];
    for hour in 0..HOURS {
        let source = gamma * increment_kpa(hour);
        let first: Vec<f64> =
            pressure.iter().zip(&thickness).map(|(u, h)| h * (u + source)).collect();
        let first = sweep(&thickness, &conductance, first);
        let root = core::f64::consts::SQRT_2;
        let second: Vec<f64> = (0..CELLS)
            .map(|i| thickness[i] * ((1.0 + root) * first[i] - root * pressure[i] + source))
            .collect();
        pressure = sweep(&thickness, &conductance, second);
    }
    pressure[CELLS >> 1]
}

/// Thomas's sweep with the leak of a drained top.
fn sweep(own: &[f64], link: &[f64], mut values: Vec<f64>) -> Vec<f64> {
    let mut upper = vec![0.0; own.len()];
    for i in 0..own.len() {
        let above = if i > 0 { link[i - 1] } else { link[0] };
        let below = link.get(i).copied().unwrap_or(0.0);
        let carried = if i > 0 { above * upper[i - 1] } else { 0.0 };
        let pivot = own[i] + above + below - carried;
        upper[i] = below / pivot;
        let before = if i > 0 { above * values[i - 1] } else { 0.0 };
        values[i] = (values[i] + before) / pivot;
    }
    for i in (0..own.len() - 1).rev() {
        values[i] += upper[i] * values[i + 1];
    }
    values
}

#[divan::bench]
fn set_up(bencher: Bencher) {
    let layers = [clay(1.5, 0.03, 6e-5), clay(4.0, 0.006, 8e-6), clay(6.0, 0.01, 1.2e-5)];
    bencher.bench(|| {
        Stepper::<CELLS>::new(&column(black_box(&layers), Boundary::Closed, None))
            .expect("a sound column")
    });
}
