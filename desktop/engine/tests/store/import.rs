//! Files of readings into the store and out again.

use crate::support::{Bench, NOON_S, bench, import, kpa, now, refused, series, values};
use brimstead_engine::store::{
    Channel, ImportFile, LateReadings, RawReading, RawSeries, Store, hash_of,
};
use brimstead_engine::units::UnitName;
use proptest::prelude::*;
use serde_json::json;
use std::collections::BTreeMap;

fn minutes(from: i64, values: &[f64]) -> Vec<(i64, f64)> {
    (from..).zip(values).map(|(minute, &value)| (NOON_S + minute * 60, value)).collect()
}

#[test]
fn readings_come_back_as_read_with_file_and_line() {
    let Bench { mut store, .. } = bench();
    let digits = series("P4", UnitName::Digits, &minutes(0, &[8800.0, 8801.5]));
    let air = series("barometer", UnitName::Hpa, &minutes(0, &[1013.2]));
    let outcome = import(&mut store, "a.csv", &[digits, air]).expect("import");
    assert_eq!((outcome.accepted, outcome.duplicates, outcome.conflicts), (3, 0, 0));
    assert_eq!((outcome.first_s, outcome.last_s), (Some(NOON_S), Some(NOON_S + 60)));
    assert_eq!((outcome.late, outcome.ahead, outcome.known_already), (None, 1, false));
    let readings = store.readings(&Channel::digits("P4"), NOON_S, NOON_S + 60).expect("readings");
    assert_eq!(readings.len(), 2);
    assert_eq!((readings[1].value, readings[1].unit), (8801.5, UnitName::Digits));
    assert_eq!((readings[1].file, readings[1].line), (outcome.file, 3));
    let files = store.imports().expect("imports");
    assert_eq!(files.len(), 1);
    assert_eq!((files[0].what.name.as_str(), &files[0].what.outcome), ("a.csv", &outcome));
    assert_eq!(files[0].what.report, json!({ "file": "a.csv" }));
    assert_eq!(files[0].what.hash, hash_of(b"a.csv"));
}

/// FIPS 180-2, appendix B.1: the digest of "abc".
#[test]
fn the_hash_of_a_file_is_sha_256() {
    let expected = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";
    assert_eq!(hash_of(b"abc"), expected);
}

#[test]
fn windows_include_both_ends_and_unknown_channels_are_empty() {
    let Bench { mut store, .. } = bench();
    import(&mut store, "a.csv", &[kpa("P4", &minutes(0, &[0.0, 1.0, 2.0, 3.0]))]).expect("import");
    let in_window = |from, to| -> Vec<f64> {
        let readings = store
            .readings(&Channel::instrument("P4"), NOON_S + from, NOON_S + to)
            .expect("readings");
        readings.iter().map(|reading| reading.value).collect()
    };
    assert_eq!(in_window(60, 120), [1.0, 2.0]);
    assert_eq!(in_window(61, 119), [0.0; 0]);
    assert_eq!(in_window(120, 60), [0.0; 0]);
    assert!(
        store.readings(&Channel::instrument("P5"), NOON_S, NOON_S).expect("readings").is_empty()
    );
    assert!(store.latest(&Channel::instrument("P5")).expect("latest").is_none());
    assert!(store.hours(&Channel::instrument("P5"), NOON_S, NOON_S).expect("hours").is_empty());
    assert!(store.conflicts(&Channel::instrument("P5")).expect("conflicts").is_empty());
}

#[test]
fn the_same_file_again_changes_nothing() {
    let Bench { mut store, .. } = bench();
    let file = [kpa("P4", &minutes(0, &[1.0, 2.0])), kpa("P5", &minutes(0, &[7.0]))];
    let first = import(&mut store, "a.csv", &file).expect("import");
    let again = import(&mut store, "a.csv", &file).expect("import");
    assert_eq!((again.accepted, again.duplicates, again.conflicts), (0, 3, 0));
    assert_eq!((again.known_already, again.file), (true, first.file));
    assert_eq!(store.imports().expect("imports").len(), 1);
    let renamed = import(&mut store, "copy of a.csv", &file).expect("import");
    assert_eq!((renamed.accepted, renamed.duplicates, renamed.known_already), (0, 3, false));
    assert_eq!(store.imports().expect("imports").len(), 2, "another file, and it is on record");
    assert_eq!(values(&store, "P4"), minutes(0, &[1.0, 2.0]));
    let channels = store.channels().expect("channels");
    assert_eq!(channels.iter().map(|state| state.readings).collect::<Vec<_>>(), [2, 1]);
}

#[test]
fn overlapping_files_add_what_is_new() {
    let Bench { mut store, .. } = bench();
    import(&mut store, "a.csv", &[kpa("P4", &minutes(0, &[1.0, 2.0, 3.0]))]).expect("import");
    let file = [kpa("P4", &minutes(1, &[2.0, 3.0, 4.0]))];
    let outcome = import(&mut store, "b.csv", &file).expect("import");
    assert_eq!((outcome.accepted, outcome.duplicates, outcome.late), (1, 2, None));
    assert_eq!(values(&store, "P4"), minutes(0, &[1.0, 2.0, 3.0, 4.0]));
}

#[test]
fn late_readings_go_to_the_time_they_were_measured() {
    let Bench { mut store, .. } = bench();
    import(&mut store, "a.csv", &[kpa("P4", &minutes(-60, &[1.0]))]).expect("import");
    import(&mut store, "b.csv", &[kpa("P4", &minutes(-10, &[9.0]))]).expect("import");
    let late = [kpa("P4", &minutes(-30, &[4.0, 5.0])), kpa("P5", &minutes(-300, &[2.0]))];
    let outcome = import(&mut store, "late.csv", &late).expect("import");
    let expected = LateReadings {
        count: 2,
        first_s: NOON_S - 1800,
        last_s: NOON_S - 1740,
        oldest_age_s: 1800,
    };
    // P5 had nothing later: its readings are old but nothing was judged without them.
    assert_eq!(outcome.late, Some(expected));
    let order: Vec<f64> = values(&store, "P4").into_iter().map(|(_, value)| value).collect();
    assert_eq!(order, [1.0, 4.0, 5.0, 9.0]);
    assert_eq!(store.latest(&Channel::instrument("P4")).expect("latest").expect("one").value, 9.0);
}

#[test]
fn readings_that_differ_are_kept_aside_and_the_first_counts() {
    let Bench { mut store, .. } = bench();
    import(&mut store, "a.csv", &[kpa("P4", &minutes(0, &[1.0, 2.0]))]).expect("import");
    let other = [kpa("P4", &minutes(0, &[1.0, 2.5]))];
    let outcome = import(&mut store, "b.csv", &other).expect("import");
    assert_eq!((outcome.accepted, outcome.duplicates, outcome.conflicts), (0, 1, 1));
    let again = import(&mut store, "b.csv", &other).expect("import");
    assert_eq!((again.duplicates, again.conflicts, again.known_already), (2, 0, true));
    // The same number in another unit is another reading.
    let psi = [series("P4", UnitName::Psi, &minutes(0, &[1.0]))];
    assert_eq!(import(&mut store, "c.csv", &psi).expect("import").conflicts, 1);
    assert_eq!(values(&store, "P4"), minutes(0, &[1.0, 2.0]));
    let conflicts = store.conflicts(&Channel::instrument("P4")).expect("conflicts");
    assert_eq!(conflicts.len(), 2);
    assert_eq!((conflicts[0].held.unit, conflicts[0].other.unit), (UnitName::Kpa, UnitName::Psi));
    assert_eq!((conflicts[1].held.value, conflicts[1].other.value), (2.0, 2.5));
    assert_eq!((conflicts[1].other.file, conflicts[1].other.line), (2, 3));
}

#[test]
fn readings_that_cannot_be_are_refused_by_line_and_the_rest_is_stored() {
    let Bench { mut store, .. } = bench();
    let file = [kpa(
        "P4",
        &[
            (NOON_S, 1.0),
            (NOON_S + 60, f64::NAN),
            (NOON_S + 120, f64::INFINITY),
            (600, 4.0),
            (i64::MAX, 5.0),
            (NOON_S + 180, 6.0),
        ],
    )];
    let outcome = import(&mut store, "a.csv", &file).expect("import");
    assert_eq!(outcome.accepted, 2);
    let lines: Vec<u32> = outcome.refused.iter().map(|refused| refused.line).collect();
    assert_eq!(lines, [5, 2 + 1, 2 + 2, 6], "in order of time");
    assert!(outcome.refused[0].reason.contains("1970"), "{:?}", outcome.refused[0]);
    assert_eq!(values(&store, "P4"), [(NOON_S, 1.0), (NOON_S + 180, 6.0)]);
}

#[test]
fn a_file_without_name_hash_or_channel_is_refused_whole() {
    let Bench { mut store, .. } = bench();
    let report = json!({});
    let good = [kpa("P4", &minutes(0, &[1.0]))];
    let hash = hash_of(b"x");
    for (name, hash) in [("", hash.as_str()), ("a.csv", "abc"), ("a.csv", &"g".repeat(64))] {
        let file = ImportFile { name, hash, report: &report };
        refused(store.import(&file, &good, &now()), "refused");
    }
    let file = ImportFile { name: "a.csv", hash: &hash, report: &report };
    let nameless = [good[0].clone(), kpa(" ", &minutes(0, &[1.0]))];
    refused(store.import(&file, &nameless, &now()), "refused");
    assert!(store.channels().expect("channels").is_empty());
    assert!(store.imports().expect("imports").is_empty());
}

#[test]
fn a_file_with_nothing_in_it_is_on_record() {
    let Bench { mut store, .. } = bench();
    let outcome = import(&mut store, "empty.csv", &[]).expect("import");
    assert_eq!((outcome.accepted, outcome.first_s), (0, None));
    assert_eq!(store.imports().expect("imports").len(), 1);
}

#[test]
fn channels_tell_how_much_and_how_new() {
    let Bench { mut store, .. } = bench();
    let file = [kpa("P5", &minutes(5, &[1.0, 2.0])), kpa("P4", &minutes(0, &[3.0]))];
    import(&mut store, "a.csv", &file).expect("import");
    let states = store.channels().expect("channels");
    let shown: Vec<_> = states
        .iter()
        .map(|state| (state.channel.of.name(), state.readings, state.first_s, state.latest.value))
        .collect();
    assert_eq!(shown, [("P4", 1, NOON_S, 3.0), ("P5", 2, NOON_S + 300, 2.0)]);
}

/// One reading as a random file gives it: channel, minute, value, unit.
type Given = (bool, i64, i8, bool);

fn as_file(given: &[Given]) -> Vec<RawSeries> {
    let mut by_series: BTreeMap<(bool, bool), Vec<RawReading>> = BTreeMap::new();
    for (line, &(channel, minute, value, unit)) in (2..).zip(given) {
        let time_s = NOON_S + minute * 600;
        let reading = RawReading { time_s, value: f64::from(value), line };
        by_series.entry((channel, unit)).or_default().push(reading);
    }
    let series = |((channel, unit), readings)| RawSeries {
        channel: Channel::instrument(if channel { "P4" } else { "P5" }),
        unit: if unit { UnitName::Kpa } else { UnitName::Psi },
        readings,
        not_read: Vec::new(),
    };
    by_series.into_iter().map(series).collect()
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]

    /// Against a plain map: first come, first held; nothing is lost, hours agree with readings,
    /// and all of it again changes nothing.
    #[test]
    fn any_files_in_any_order_keep_every_reading_once(
        files in prop::collection::vec(
            prop::collection::vec((any::<bool>(), 0..40i64, -3..3i8, any::<bool>()), 0..30), 1..5)
    ) {
        let Bench { mut store, .. } = bench();
        let mut held: BTreeMap<(Channel, i64), (f64, UnitName)> = BTreeMap::new();
        for (index, given) in files.iter().enumerate() {
            let file = as_file(given);
            let outcome = import(&mut store, &format!("{index}.csv"), &file).expect("import");
            let total = outcome.accepted + outcome.duplicates + outcome.conflicts;
            prop_assert_eq!(total, given.len() as u64);
            for one in &file {
                let mut sorted = one.readings.clone();
                sorted.sort_by_key(|reading| reading.time_s);
                for reading in sorted {
                    held.entry((one.channel.clone(), reading.time_s))
                        .or_insert((reading.value, one.unit));
                }
            }
        }
        for (index, given) in files.iter().enumerate() {
            let again = import(&mut store, &format!("{index}.csv"), &as_file(given)).expect("again");
            prop_assert_eq!((again.accepted, again.conflicts), (0, 0));
        }
        for channel in ["P4", "P5"].map(Channel::instrument) {
            let stored = store.readings(&channel, 0, i64::MAX).expect("readings");
            let expected: Vec<_> = held
                .iter()
                .filter(|((of, _), _)| *of == channel)
                .map(|((_, time_s), &(value, unit))| (*time_s, value, unit))
                .collect();
            let found: Vec<_> =
                stored.iter().map(|reading| (reading.time_s, reading.value, reading.unit)).collect();
            prop_assert_eq!(&found, &expected);
            for hour in store.hours(&channel, 0, NOON_S * 2).expect("hours") {
                let inside: Vec<_> = expected
                    .iter()
                    .filter(|(time_s, _, unit)| time_s / 3600 * 3600 == hour.start_s && *unit == hour.unit)
                    .collect();
                prop_assert_eq!(hour.count, inside.len() as u64);
                let lowest = inside.iter().map(|at| at.1).fold(f64::INFINITY, f64::min);
                let highest = inside.iter().map(|at| at.1).fold(f64::NEG_INFINITY, f64::max);
                prop_assert_eq!((hour.lowest, hour.highest), (lowest, highest));
                let has = |time_s, value| inside.iter().any(|at| at.0 == time_s && at.1 == value);
                prop_assert!(has(hour.lowest_s, lowest) && has(hour.highest_s, highest));
            }
        }
    }
}
