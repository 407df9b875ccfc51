//! From text through the store and back: a comparison sees the same either way.

use crate::support::{Bench, NOON_S, SITE, bench, now, refused};
use brimstead_engine::import::{Imported, NoValue, Series, SeriesOf, read_bytes, read_files};
use brimstead_engine::site::{self, Limit, LimitDefaults, SiteFile};
use brimstead_engine::store::{Channel, ImportOutcome, LimitSet, SqliteStore, Store, keep};
use brimstead_engine::units::UnitName;
use std::path::Path;

fn site() -> SiteFile {
    site::parse(SITE, "site.json").expect("the fixture is good")
}

/// The layout "Logger" of the fixture: 06:00 at +08:00 is 22:00 UTC.
const HEAD: &str = "Invented logger\nsecond line\nTime,Level,P5,S1 (mm),Baro kPa,T_P4,P4 digits\n";
const FIRST: &str = "\
2031-03-02 06:00:00,0.010,45.2,1,101.2,27.1,8440.5
2031-03-02 06:15:00,0.080,NAN,1.5,101.2,27.1,8433.0
2031-03-02 06:30:00,0.150,46.4,2,101.2,,ERROR
2031-03-02 09:30:00,0.150,46.9,2,101.2,27.0,8431.0
";
const SECOND: &str = "\
2031-03-02 06:15:00,0.080,45.8,1.5,101.2,27.1,8433.0
2031-03-02 06:30:00,0.150,46.5,2,101.2,27.2,8432.0
2031-03-02 09:45:00,0.150,47.0,2,101.2,27.0,8430.0
";

fn text(rows: &str) -> String {
    format!("{HEAD}{rows}")
}

fn take(store: &mut SqliteStore, name: &str, rows: &str) -> ImportOutcome {
    let text = text(rows);
    let imported = read_bytes(&site(), &[(name, text.as_bytes())]);
    keep(store, &imported, 0, text.as_bytes(), &now()).expect("kept")
}

fn all(store: &SqliteStore, site: &SiteFile) -> Imported {
    store.imported(site, i64::MIN, i64::MAX).expect("readings")
}

/// Series without the numbers of their files, which are those of the store.
fn without_sources(series: &[Series]) -> Vec<Series> {
    let mut series = series.to_vec();
    for one in &mut series {
        one.points.iter_mut().for_each(|point| point.source = 0);
        one.not_read.iter_mut().for_each(|mark| mark.source = 0);
    }
    series
}

#[test]
fn series_from_the_store_are_those_of_the_files() {
    let Bench { mut store, .. } = bench();
    take(&mut store, "logger-1.csv", FIRST);
    let outcome = take(&mut store, "logger-2.csv", SECOND);
    assert_eq!((outcome.conflicts, outcome.late.map(|late| late.count)), (1, Some(3)));
    let (first, second) = (text(FIRST), text(SECOND));
    let files = [("logger-1.csv", first.as_bytes()), ("logger-2.csv", second.as_bytes())];
    let direct = read_bytes(&site(), &files);
    let stored = all(&store, &site());
    assert_eq!(without_sources(&stored.series), without_sources(&direct.series));
    assert_eq!(stored.report.gaps, direct.report.gaps);
    assert!(!stored.report.gaps.is_empty(), "the case has a gap");
    let values = |imported: &Imported| -> Vec<_> {
        let each = imported.report.conflicts.iter();
        each.map(|conflict| (conflict.of.clone(), conflict.kept, conflict.refused)).collect()
    };
    assert_eq!(values(&stored), values(&direct));
    assert_eq!(values(&stored), [("P5".to_owned(), 46.4, 46.5)]);
    let p5 = stored.instrument("P5").expect("P5");
    assert_eq!(p5.points.iter().map(|point| point.source).collect::<Vec<_>>(), [1, 2, 1, 1, 2]);
}

#[test]
fn rows_without_a_value_are_known_and_give_way_to_a_value() {
    let Bench { mut store, .. } = bench();
    let outcome = take(&mut store, "logger-1.csv", FIRST);
    // One missing mark of P5, one empty temperature, one text in place of digits.
    assert_eq!(outcome.not_read, 3);
    let again = take(&mut store, "logger-1.csv", FIRST);
    assert_eq!((again.not_read, again.known_already), (0, true));
    let stored = all(&store, &site());
    let p4 = stored.instrument("P4").expect("P4");
    assert_eq!(p4.not_read.len(), 1);
    assert_eq!(p4.not_read[0].reason, NoValue::Refused);
    take(&mut store, "logger-2.csv", SECOND);
    let stored = all(&store, &site());
    assert!(stored.series.iter().all(|series| series.not_read.is_empty()));
}

#[test]
fn values_are_stored_as_read_and_come_back_in_the_unit_of_the_instrument() {
    let Bench { mut store, .. } = bench();
    let mut psi = site();
    let column = psi.readings[0].columns.get_mut("P5").expect("P5");
    *column =
        site::Column::Instrument { instrument: "P5".to_owned(), unit: UnitName::Psi, raw: None };
    let text = text("2031-03-02 06:00:00,0.010,6.5,1,101.2,27.1,8440.5\n");
    let imported = read_bytes(&psi, &[("logger-1.csv", text.as_bytes())]);
    keep(&mut store, &imported, 0, text.as_bytes(), &now()).expect("kept");
    let raw = store.latest(&Channel::instrument("P5")).expect("latest").expect("one");
    assert_eq!((raw.value, raw.unit, raw.line), (6.5, UnitName::Psi, 4));
    let stored = all(&store, &site());
    let point = stored.instrument("P5").expect("P5").points[0];
    // 6.5 lbf/in2 at 6.894757293168361 kPa each (NIST SP 811, appendix B.8).
    assert!((point.value - 44.815_922_405_594_35).abs() < 1e-12, "{}", point.value);
    assert_eq!(point.raw, Some(6.5));
    assert_eq!(point.value, imported.instrument("P5").expect("P5").points[0].value);
}

#[test]
fn digits_and_values_of_one_instrument_are_two_channels() {
    let Bench { mut store, .. } = bench();
    take(&mut store, "logger-1.csv", FIRST);
    let channels: Vec<String> =
        store.channels().expect("channels").iter().map(|state| state.channel.to_string()).collect();
    assert_eq!(channels, ["LG1", "P4 (digits)", "P5", "S1", "barometer", "temperature:P4"]);
}

#[test]
fn a_window_is_cut_at_both_ends() {
    let Bench { mut store, .. } = bench();
    take(&mut store, "logger-1.csv", FIRST);
    let from_s = 1_930_168_800 + 900;
    let stored = store.imported(&site(), from_s, from_s + 900).expect("readings");
    let level = stored.series.iter().find(|series| series.of.name() == "LG1").expect("level");
    let times: Vec<i64> = level.points.iter().map(|point| point.time_s - from_s).collect();
    assert_eq!(times, [0, 900]);
    let none = store.imported(&site(), 0, NOON_S).expect("readings");
    assert!(none.series.is_empty());
}

#[test]
fn an_instrument_that_left_the_site_gives_no_series_and_keeps_its_readings() {
    let Bench { mut store, .. } = bench();
    take(&mut store, "logger-1.csv", FIRST);
    let mut without = site();
    without.instruments.retain(|instrument| instrument.id != "S1");
    let of_s1 = SeriesOf::Instrument("S1".to_owned());
    assert!(all(&store, &without).series.iter().all(|series| series.of != of_s1));
    assert!(all(&store, &site()).series.iter().any(|series| series.of == of_s1));
}

#[test]
fn a_second_reading_inside_one_file_is_kept_aside() {
    let Bench { mut store, .. } = bench();
    let rows = "2031-03-02 06:00:00,0.010,45.2,1,101.2,27.1,8440.5\n\
                2031-03-02 06:00:00,0.010,48.8,1,101.2,27.1,8440.5\n";
    assert_eq!(take(&mut store, "logger-1.csv", rows).conflicts, 1);
    let conflicts = store.conflicts(&Channel::instrument("P5")).expect("conflicts");
    assert_eq!((conflicts[0].held.value, conflicts[0].other.value), (45.2, 48.8));
    assert_eq!((conflicts[0].held.line, conflicts[0].other.line), (4, 5));
    assert!(take(&mut store, "logger-1.csv", rows).known_already);
}

#[test]
fn a_file_that_is_not_in_the_report_is_refused() {
    let Bench { mut store, .. } = bench();
    let imported = read_bytes(&site(), &[("logger-1.csv", text(FIRST).as_bytes())]);
    refused(keep(&mut store, &imported, 1, b"", &now()), "refused");
}

#[test]
fn the_report_of_a_file_stays_with_it() {
    let Bench { mut store, .. } = bench();
    take(&mut store, "logger-1.csv", FIRST);
    let file = store.imports().expect("imports").remove(0).what;
    assert_eq!(file.name, "logger-1.csv");
    assert_eq!(file.report["refused"][0]["text"], "ERROR");
    assert_eq!(file.report["rows"], 4);
}

#[test]
fn limits_put_into_a_site_are_those_it_then_has() {
    let site = site();
    let mut limits = LimitSet::of_site(&site);
    let tighter = |of_one: &mut LimitDefaults| of_one.hysteresis += 1.0;
    tighter(limits.instruments.get_mut("P4").expect("P4"));
    limits.instruments.remove("S1");
    let with = limits.put_into(&site);
    let of_s1 = with.instruments.iter().find(|instrument| instrument.id == "S1").expect("S1");
    assert_eq!(of_s1.limits, Some(Vec::<Limit>::new()), "none, and not those of its kind");
    let mut read_back = LimitSet::of_site(&with);
    read_back.instruments.retain(|_, of_one| !of_one.limits.is_empty());
    assert_eq!(read_back, limits);
}

/// The demo's files one by one into a store, newest first as after an outage, and all of them read
/// at once: the same series.
#[test]
fn whole_runs_of_the_demo_come_back_as_the_files_give_them() {
    let demo = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../data-demo");
    let json = std::fs::read_to_string(demo.join("site.json")).expect("the demo site");
    let site = site::parse(&json, "site.json").expect("the demo site is good");
    for run in ["run-good", "run-bad"] {
        let folder = tempfile::tempdir().expect("folder");
        let path = folder.path().join("demo.brim");
        let mut store = SqliteStore::create(&path, &json, &now()).expect("store");
        let files = std::fs::read_dir(demo.join(run)).expect("the run");
        let mut files: Vec<_> = files.map(|file| file.expect("file").path()).collect();
        files.sort();
        for file in files.iter().rev() {
            let bytes = std::fs::read(file).expect("read");
            let name = file.file_name().expect("name").to_string_lossy();
            let imported = read_bytes(&site, &[(&name, &bytes)]);
            let outcome = keep(&mut store, &imported, 0, &bytes, &now()).expect("kept");
            assert!(outcome.accepted > 0 && outcome.refused.is_empty(), "{name}: {outcome:?}");
        }
        let mut direct = read_files(&site, &files).expect("files");
        let mut stored = all(&store, &site);
        for imported in [&mut direct, &mut stored] {
            imported.series.sort_by(|a, b| a.of.cmp(&b.of));
        }
        assert!(!direct.series.is_empty());
        assert_eq!(without_sources(&stored.series), without_sources(&direct.series), "{run}");
    }
}
