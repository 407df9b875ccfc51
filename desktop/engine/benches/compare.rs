//! How long a run of the demo takes from its files to its verdict, and which part of it is the
//! calculation of what was to be expected. Compare within one run; absolute times are those of the
//! machine.

use brimstead_engine::compare::{Comparison, compare};
use brimstead_engine::expect::expect;
use brimstead_engine::import::read_files;
use brimstead_engine::site::{self, SiteFile};
use divan::Bencher;
use std::path::{Path, PathBuf};
use std::time::Instant;

fn main() {
    divan::main();
    print_ratio();
}

fn demo() -> (SiteFile, Vec<PathBuf>) {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../data-demo");
    let site = site::read(&folder.join("site.json")).expect("the demo's site is good");
    let run = std::fs::read_dir(folder.join("run-good")).expect("the demo's run");
    let mut files: Vec<PathBuf> = run.map(|entry| entry.expect("an entry").path()).collect();
    files.sort();
    (site, files)
}

fn whole(site: &SiteFile, files: &[PathBuf]) -> Comparison {
    let imported = read_files(site, files).expect("the files are there");
    compare(site, &imported).expect("the demo compares")
}

/// The times at which each instrument was read.
fn wanted(comparison: &Comparison) -> Vec<Vec<i64>> {
    let timelines = comparison.timelines.iter();
    timelines.map(|one| one.rows.iter().map(|row| row.time_s).collect()).collect()
}

#[divan::bench(sample_count = 3)]
fn from_files_to_verdict(bencher: Bencher<'_, '_>) {
    let (site, files) = demo();
    bencher.bench_local(|| whole(&site, &files));
}

#[divan::bench(sample_count = 3)]
fn reading_the_files(bencher: Bencher<'_, '_>) {
    let (site, files) = demo();
    bencher.bench_local(|| read_files(&site, &files));
}

#[divan::bench(sample_count = 3)]
fn expecting_alone(bencher: Bencher<'_, '_>) {
    let (site, files) = demo();
    let comparison = whole(&site, &files);
    let wanted = wanted(&comparison);
    bencher.bench_local(|| expect(&comparison.model, &comparison.history, &wanted));
}

/// The whole over the expectation alone, both the quickest of three.
fn print_ratio() {
    let (site, files) = demo();
    let comparison = whole(&site, &files);
    let wanted = wanted(&comparison);
    let quickest = |work: &dyn Fn()| {
        let times = (0..3).map(|_| {
            let start = Instant::now();
            work();
            start.elapsed().as_secs_f64()
        });
        times.fold(f64::INFINITY, f64::min)
    };
    let all_s = quickest(&|| drop(whole(&site, &files)));
    let expected_s = quickest(&|| drop(expect(&comparison.model, &comparison.history, &wanted)));
    println!(
        "files to verdict {all_s:.2} s, expectation alone {expected_s:.2} s, ratio {:.2}",
        all_s / expected_s
    );
}
