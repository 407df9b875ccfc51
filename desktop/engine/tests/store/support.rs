//! What the tests of the store share. Site and people are invented.

use brimstead_engine::store::{
    Change, Channel, ImportFile, ImportOutcome, RawReading, RawSeries, SqliteStore, Store,
    StoreError, hash_of,
};
use brimstead_engine::units::UnitName;
use serde_json::{Value, json};
use std::path::PathBuf;
use tempfile::TempDir;

pub const SITE: &str = include_str!("../fixtures/site.json");

/// 1 March 2031, 12:00 UTC.
pub const NOON_S: i64 = 1_930_132_800;

pub fn at(at_s: i64) -> Change<'static> {
    Change { who: "Ines Vale", at_s, why: "Agreed in the morning round" }
}

pub fn now() -> Change<'static> {
    at(NOON_S)
}

/// A folder of its own with a new store in it.
pub struct Bench {
    pub folder: TempDir,
    pub path: PathBuf,
    pub store: SqliteStore,
}

pub fn bench() -> Bench {
    let folder = tempfile::tempdir().expect("a folder for the test");
    let path = folder.path().join("heron.brim");
    let store = SqliteStore::create(&path, SITE, &now()).expect("a new store");
    Bench { folder, path, store }
}

/// The fixture with something changed.
pub fn site_with(change: impl FnOnce(&mut Value)) -> String {
    let mut site: Value = serde_json::from_str(SITE).expect("the fixture is JSON");
    change(&mut site);
    site.to_string()
}

pub fn series(channel: &str, unit: UnitName, readings: &[(i64, f64)]) -> RawSeries {
    let with_line = |(index, &(time_s, value)): (usize, &(i64, f64))| RawReading {
        time_s,
        value,
        line: index as u32 + 2,
    };
    let readings = readings.iter().enumerate().map(with_line).collect();
    let channel = match (channel, unit) {
        ("barometer", _) => Channel::other(channel),
        (_, UnitName::Digits) => Channel::digits(channel),
        _ => Channel::instrument(channel),
    };
    RawSeries { channel, unit, readings, not_read: Vec::new() }
}

pub fn kpa(channel: &str, readings: &[(i64, f64)]) -> RawSeries {
    series(channel, UnitName::Kpa, readings)
}

pub fn p4() -> Channel {
    Channel::instrument("P4")
}

/// Imports under a name; the name stands for the bytes of the file.
pub fn import(
    store: &mut SqliteStore,
    name: &str,
    series: &[RawSeries],
) -> Result<ImportOutcome, StoreError> {
    let report = json!({ "file": name });
    let hash = hash_of(name.as_bytes());
    store.import(&ImportFile { name, hash: &hash, report: &report }, series, &now())
}

pub fn values(store: &SqliteStore, channel: &str) -> Vec<(i64, f64)> {
    let readings =
        store.readings(&Channel::instrument(channel), i64::MIN, i64::MAX).expect("readings");
    readings.iter().map(|reading| (reading.time_s, reading.value)).collect()
}

/// The error, which there must be, with its code.
pub fn refused<T: std::fmt::Debug>(result: Result<T, StoreError>, code: &str) -> String {
    let error = result.expect_err("must be refused");
    assert_eq!(error.code(), code, "{error}");
    error.to_string()
}
