//! One scan of 64 instruments: checks and judging against each other, and the bare comparison of
//! the same readings with a limit as the yardstick of the run.

#![allow(clippy::unwrap_used, reason = "a bench may panic")]

use brimstead_core::instrument::check::{Channel, Checker, Checks, FlatLine, Hampel, Noise, Range};
use brimstead_core::instrument::{FixedList, OutOfOrder, Reading};
use brimstead_core::quantity::Expected;
use brimstead_core::watch::{
    Basis, Direction, Limits, Observation, Outcome, Post, RateWindow, Rule, Site, Thresholds,
    WatchState, Watcher,
};
use divan::{Bencher, black_box};

const INSTRUMENTS: usize = 64;

fn main() {
    divan::main();
}

fn observation(scan: i64, instrument: usize) -> Observation {
    let value = 40.0 + (scan as f64 * 0.7 + instrument as f64).sin();
    Observation {
        reading: Reading::new(scan * 900, value),
        applied_pressure_kpa: Some(100.0),
        expected: Expected::new(35.0, 40.0, 50.0),
        hold_since_s: None,
    }
}

fn watcher() -> Watcher {
    let size = |k: f64| Thresholds {
        watch: Some(k),
        review: Some(2.0 * k),
        stop: Some(3.0 * k),
        gross: Some(5.0 * k),
    };
    let band = Basis::Band { multiples: size(1.0), smallest_half_band: 0.5 };
    let rate = Basis::Rate { per_day: size(10.0) };
    let rules = [band, rate].map(|basis| Rule {
        basis,
        direction: Direction::Either,
        hysteresis: 0.1,
        ..Rule::default()
    });
    Watcher::new(&Limits {
        rules: FixedList::from_slice(&rules).unwrap(),
        rate_window: Some(RateWindow { window_s: 86_400, min_span_s: 43_200, min_readings: 6 }),
        ..Limits::default()
    })
    .unwrap()
}

#[divan::bench]
fn bare_comparison(bencher: Bencher<'_, '_>) {
    let scan: Vec<_> = (0..INSTRUMENTS).map(|i| observation(100, i)).collect();
    bencher.bench_local(|| {
        black_box(&scan).iter().filter(|o| o.reading.value.is_some_and(|v| v > 50.0)).count()
    });
}

#[divan::bench]
fn checks(bencher: Bencher<'_, '_>) {
    let checker = Checker::new(&Checks {
        range: Some(Range { low: -20.0, high: 350.0 }),
        step: Some(5.0),
        flat_line: Some(FlatLine { readings: 8, tolerance: 0.0 }),
        spike: Some(Hampel { readings: 11, threshold: 3.0, floor: 0.5 }),
        noise: Some(Noise { readings: 8, allowed: 2.0 }),
        ..Checks::default()
    })
    .unwrap();
    let mut channels = [Channel::default(); INSTRUMENTS];
    let mut scan = 0;
    bencher.bench_local(|| {
        scan += 1;
        for (i, channel) in channels.iter_mut().enumerate() {
            let reading = observation(scan, i).reading;
            *channel = checker.observe(channel, reading, None).unwrap().0;
        }
    });
}

#[divan::bench]
fn judging(bencher: Bencher<'_, '_>) {
    let watcher = watcher();
    let neighbours: Vec<[u16; 2]> = (0..INSTRUMENTS as u16)
        .map(|id| [(id + 1) % INSTRUMENTS as u16, (id + 2) % INSTRUMENTS as u16])
        .collect();
    let posts: Vec<_> = (0..INSTRUMENTS as u16)
        .zip(&neighbours)
        .map(|(id, neighbours)| Post {
            id,
            watcher: &watcher,
            neighbours,
            critical: false,
            inhibition: None,
        })
        .collect();
    let site = Site::new(&posts).unwrap();
    let mut states = [WatchState::default(); INSTRUMENTS];
    let refused: Outcome = Err(OutOfOrder { time_s: 0, last_s: 0 });
    let mut outcomes = [refused; INSTRUMENTS];
    let mut scan = 0;
    bencher.bench_local(|| {
        scan += 1;
        let observations: [_; INSTRUMENTS] = std::array::from_fn(|i| observation(scan, i));
        site.judge_scan(&observations, &mut states, &mut outcomes).unwrap()
    });
}
