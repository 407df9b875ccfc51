//! How fast the store takes readings in and gives them back. The big store holds ten million
//! readings: 64 channels, one reading each a quarter of an hour for four and a half years.

use brimstead_engine::store::{
    Change, Channel, ImportFile, ImportOutcome, RawReading, RawSeries, SqliteStore, Store, hash_of,
};
use brimstead_engine::units::UnitName;
use divan::Bencher;
use divan::counter::ItemsCount;
use std::path::PathBuf;
use std::sync::LazyLock;
use tempfile::TempDir;

const SITE: &str = include_str!("../tests/fixtures/site.json");
const START_S: i64 = 1_930_132_800;
const STEP_S: i64 = 900;
const CHANNELS: i64 = 64;
/// Readings of each channel in one file of a million.
const PER_FILE: i64 = 1_000_000 / CHANNELS;
const FILES: i64 = 10;

const CHANGE: Change<'_> = Change { who: "Ines Vale", at_s: START_S, why: "Bench" };

fn main() {
    divan::main();
}

fn channel(number: i64) -> Channel {
    Channel::instrument(&format!("P{number}"))
}

/// A million readings that follow those of the file before.
fn file(number: i64) -> Vec<RawSeries> {
    let reading = |channel: i64, index: i64| {
        let count = number * PER_FILE + index;
        // Anything that does not repeat, in steps as a gauge gives them.
        let value = ((count * 7919 + channel * 104_729) % 100_003) as f64 / 100.0;
        RawReading { time_s: START_S + count * STEP_S, value, line: index as u32 + 2 }
    };
    let series = |number| RawSeries {
        channel: channel(number),
        unit: UnitName::Kpa,
        readings: (0..PER_FILE).map(|index| reading(number, index)).collect(),
        not_read: Vec::new(),
    };
    (0..CHANNELS).map(series).collect()
}

fn import(store: &mut SqliteStore, name: &str, series: &[RawSeries]) -> ImportOutcome {
    let (hash, report) = (hash_of(name.as_bytes()), serde_json::json!({}));
    let file = ImportFile { name, hash: &hash, report: &report };
    store.import(&file, series, &CHANGE).expect("import")
}

fn new_store() -> (TempDir, PathBuf, SqliteStore) {
    let folder = tempfile::tempdir().expect("folder");
    let path = folder.path().join("bench.brim");
    let store = SqliteStore::create(&path, SITE, &CHANGE).expect("store");
    (folder, path, store)
}

static BIG: LazyLock<(TempDir, PathBuf)> = LazyLock::new(|| {
    let (folder, path, mut store) = new_store();
    for number in 0..FILES {
        import(&mut store, &number.to_string(), &file(number));
    }
    (folder, path)
});

fn big_store() -> SqliteStore {
    SqliteStore::open(&BIG.1, START_S).expect("open")
}

#[divan::bench(sample_count = 3, sample_size = 1)]
fn import_a_million(bencher: Bencher<'_, '_>) {
    let series = file(0);
    bencher.counter(ItemsCount::new(1_000_000u32)).with_inputs(new_store).bench_local_refs(
        |(_, _, store)| {
            assert_eq!(import(store, "a", &series).accepted, (PER_FILE * CHANNELS) as u64);
        },
    );
}

#[divan::bench(sample_count = 3, sample_size = 1)]
fn import_the_same_million_again(bencher: Bencher<'_, '_>) {
    let series = file(0);
    let (_folder, _path, mut store) = new_store();
    import(&mut store, "a", &series);
    bencher.counter(ItemsCount::new(1_000_000u32)).bench_local(|| {
        assert!(import(&mut store, "a", &series).known_already);
    });
}

#[divan::bench(sample_count = 3, sample_size = 1)]
fn import_a_million_beside_ten(bencher: Bencher<'_, '_>) {
    let mut store = big_store();
    let mut number = FILES;
    bencher.counter(ItemsCount::new(1_000_000u32)).bench_local(|| {
        import(&mut store, &number.to_string(), &file(number));
        number += 1;
    });
}

#[divan::bench(sample_count = 3, sample_size = 1)]
fn open_and_check_ten_million(bencher: Bencher<'_, '_>) {
    LazyLock::force(&BIG);
    bencher.bench_local(big_store);
}

/// Days from the middle of the record of one channel; the last is all of it.
#[divan::bench(args = [1, 30, 365, 2000])]
fn window_of_days(bencher: Bencher<'_, '_>, days: i64) {
    let store = big_store();
    let middle_s = START_S + FILES * PER_FILE * STEP_S / 2;
    let (from_s, to_s) = (middle_s - days * 43_200, middle_s + days * 43_200);
    let all = || store.readings(&channel(17), from_s, to_s).expect("readings");
    bencher.counter(ItemsCount::new(all().len())).bench_local(all);
}

#[divan::bench]
fn hours_of_all_years(bencher: Bencher<'_, '_>) {
    let store = big_store();
    let all = || store.hours(&channel(17), START_S, i64::MAX).expect("hours");
    bencher.counter(ItemsCount::new(all().len())).bench_local(all);
}

#[divan::bench]
fn latest_of_a_channel(bencher: Bencher<'_, '_>) {
    let store = big_store();
    bencher.bench_local(|| store.latest(&channel(17)).expect("latest"));
}

#[divan::bench(sample_count = 10, sample_size = 1)]
fn channels_with_counts(bencher: Bencher<'_, '_>) {
    let store = big_store();
    bencher.bench_local(|| store.channels().expect("channels"));
}
