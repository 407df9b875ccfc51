//! Limits in versions, and who may loosen them.

use crate::support::{Bench, NOON_S, SITE, at, bench, refused, site_with};
use brimstead_engine::site::{self, LimitRule};
use brimstead_engine::store::{Change, LimitSet, NewLimits, SqliteStore, Store, loosenings};
use serde_json::{Value, json};

fn of_fixture() -> LimitSet {
    LimitSet::of_site(&site::parse(SITE, "site").expect("the fixture is good"))
}

/// The stop limit of S1 (settlement, above) at another value.
fn s1_stops_at(value: f64) -> LimitSet {
    let mut set = of_fixture();
    let limits = &mut set.instruments.get_mut("S1").expect("S1").limits;
    limits[1].rule = LimitRule::Value { value };
    set
}

const ONE: [&str; 1] = ["Ines Vale"];
const TWO: [&str; 2] = ["Ines Vale", "Tomas Roe"];

fn enter(
    store: &mut SqliteStore,
    limits: &LimitSet,
    (at_s, effective_from_s): (i64, i64),
    approvers: &[&str],
    loosens: bool,
) -> Result<i64, brimstead_engine::store::StoreError> {
    store.add_limits(&NewLimits { limits, effective_from_s, approvers, loosens }, &at(at_s))
}

fn s1_stop(store: &SqliteStore, time_s: i64) -> Option<LimitRule> {
    let version = store.limits_at(time_s).expect("query")?;
    Some(version.what.limits.instruments["S1"].limits[1].rule.clone())
}

#[test]
fn a_new_store_has_the_limits_of_its_site_file_from_the_baseline_on() {
    let Bench { store, .. } = bench();
    let baseline_s = site::parse(SITE, "site").expect("good").baseline.time_s;
    assert!(store.limits_at(baseline_s - 1).expect("query").is_none());
    let first = store.limits_at(baseline_s).expect("query").expect("in force");
    assert_eq!(first.what.limits, of_fixture());
    assert_eq!(first.what.approvers, ["Ines Vale"]);
    // P4 and P5: the kind's limits and its own.
    assert_eq!(first.what.limits.instruments["P4"].limits.len(), 2);
    assert_eq!(first.what.limits.instruments["P5"].persistence.minutes, 10.0);
    assert!(!first.what.limits.instruments.contains_key("LG1"));
}

#[test]
fn tighter_limits_need_one_name_and_count_from_their_moment() {
    let Bench { mut store, .. } = bench();
    enter(&mut store, &s1_stops_at(800.0), (NOON_S, NOON_S + 60), &ONE, false).expect("tighter");
    assert_eq!(s1_stop(&store, NOON_S + 59), Some(LimitRule::Value { value: 900.0 }));
    assert_eq!(s1_stop(&store, NOON_S + 60), Some(LimitRule::Value { value: 800.0 }));
    let versions = store.limit_versions().expect("versions");
    assert_eq!(versions.iter().map(|entry| entry.what.loosens).collect::<Vec<_>>(), [false; 2]);
}

#[test]
fn looser_limits_need_two_different_names_and_saying_so() {
    let Bench { mut store, .. } = bench();
    let looser = s1_stops_at(950.0);
    let times = (NOON_S, NOON_S);
    let message = refused(enter(&mut store, &looser, times, &TWO, false), "loosens-unsaid");
    assert!(message.contains("S1: stop is 950 (above), was 900 (above)"), "{message}");
    refused(enter(&mut store, &looser, times, &ONE, true), "two-approvers");
    let same = ["Ines Vale", " ines  VALE "];
    refused(enter(&mut store, &looser, times, &same, true), "two-approvers");
    refused(enter(&mut store, &looser, times, &["Ines Vale", " "], true), "refused");
    refused(enter(&mut store, &looser, times, &[], true), "refused");
    let no_reason = Change { why: "", ..at(NOON_S) };
    let new =
        NewLimits { limits: &looser, effective_from_s: NOON_S, approvers: &TWO, loosens: true };
    refused(store.add_limits(&new, &no_reason), "refused");
    assert_eq!(store.limit_versions().expect("versions").len(), 1, "nothing was entered");
    enter(&mut store, &looser, times, &TWO, true).expect("two agree");
    let version = store.limits_at(NOON_S).expect("query").expect("in force");
    assert_eq!(version.what.approvers, TWO);
    assert!(version.what.loosens);
}

#[test]
fn limits_are_not_changed_for_times_past() {
    let Bench { mut store, .. } = bench();
    let message = refused(
        enter(&mut store, &s1_stops_at(800.0), (NOON_S, NOON_S - 1), &TWO, true),
        "backdated",
    );
    assert!(message.contains("2031-03-01 12:00"), "{message}");
    enter(&mut store, &s1_stops_at(800.0), (NOON_S, NOON_S), &ONE, false).expect("from now");
}

#[test]
fn limits_are_not_loosened_on_a_clock_that_went_back() {
    let Bench { mut store, .. } = bench();
    let day = 86_400;
    let back = (NOON_S - day, NOON_S - day);
    refused(enter(&mut store, &s1_stops_at(950.0), back, &TWO, true), "clock-went-back");
    enter(&mut store, &s1_stops_at(800.0), back, &ONE, false).expect("tightening never waits");
}

#[test]
fn cancelling_a_tightening_still_to_come_is_loosening() {
    let Bench { mut store, .. } = bench();
    let (later, now) = (NOON_S + 1000, (NOON_S, NOON_S));
    enter(&mut store, &s1_stops_at(700.0), (NOON_S, later), &ONE, false).expect("for later");
    // Tighter than what is in force, looser than what is to come.
    let between = s1_stops_at(800.0);
    assert_eq!(store.loosened_by(&between, NOON_S).expect("query").len(), 1);
    refused(enter(&mut store, &between, now, &ONE, false), "loosens-unsaid");
    enter(&mut store, &between, now, &TWO, true).expect("two agree");
    assert_eq!(s1_stop(&store, later), Some(LimitRule::Value { value: 800.0 }), "entered later");
}

#[test]
fn limits_of_unknown_instruments_or_out_of_order_are_refused() {
    let Bench { mut store, .. } = bench();
    let mut set = of_fixture();
    let of_s1 = set.instruments["S1"].clone();
    set.instruments.insert("Q9".to_owned(), of_s1);
    let message = refused(enter(&mut store, &set, (NOON_S, NOON_S), &TWO, true), "refused");
    assert!(message.contains("Q9"), "{message}");
    // Review beyond stop.
    let mut set = of_fixture();
    set.instruments.get_mut("P5").expect("P5").limits.swap(0, 1);
    set.instruments.get_mut("P5").expect("P5").limits[0].trigger = site::Trigger::Review;
    set.instruments.get_mut("P5").expect("P5").limits[1].trigger = site::Trigger::Stop;
    refused(enter(&mut store, &set, (NOON_S, NOON_S), &TWO, true), "limit-problems");
    let set = s1_stops_at(f64::NAN);
    refused(enter(&mut store, &set, (NOON_S, NOON_S), &TWO, true), "limit-problems");
    assert_eq!(store.limit_versions().expect("versions").len(), 1);
}

#[test]
fn a_set_of_limits_reads_back_as_it_was_written() {
    let set = of_fixture();
    let json = serde_json::to_string(&set).expect("json");
    assert_eq!(LimitSet::parse(&json, "limits").expect("read"), set);
    let message = refused(LimitSet::parse("{\"instruments\": {}}", "mine.json"), "limit-problems");
    assert!(message.contains("mine.json") && message.contains("format"), "{message}");
}

#[test]
fn a_site_file_may_carry_the_limits_that_were_agreed() {
    let Bench { mut store, .. } = bench();
    enter(&mut store, &s1_stops_at(800.0), (NOON_S, NOON_S), &ONE, false).expect("tighter");
    let site = site_with(|site| {
        site["limit_defaults"]["settlement_plate"]["limits"][1]["rule"]["value"] = json!(800.0);
    });
    store.add_site_version(&site, &at(NOON_S)).expect("the limits in force");
    store.add_site_version(&site, &at(NOON_S)).expect("the limits of the file before");
}

/// One instrument with limits as given, for comparing.
fn set(limits: Value, persistence: (u32, f64), hysteresis: f64) -> LimitSet {
    let persistence = json!({ "readings": persistence.0, "minutes": persistence.1 });
    let of_one = json!({ "limits": limits, "persistence": persistence, "hysteresis": hysteresis });
    let text = json!({ "format": "brimstead-limits/1", "instruments": { "P4": of_one } });
    LimitSet::parse(&text.to_string(), "limits").expect("good limits")
}

fn one(trigger: &str, rule: Value, direction: &str) -> LimitSet {
    let limits = json!([{ "trigger": trigger, "rule": rule, "direction": direction }]);
    set(limits, (2, 10.0), 1.0)
}

/// Whether the second is looser than the first.
fn is_looser(old: &LimitSet, new: &LimitSet) -> bool {
    !loosenings(&old.instruments, &new.instruments).is_empty()
}

#[test]
fn looser_is_told_apart_for_every_rule_and_direction() {
    let value = |value: f64| json!({ "value": value });
    let band = |multiple: f64| json!({ "band_multiple": multiple });
    let rate = |rate: f64, window: f64| json!({ "rate_per_day": rate, "window_h": window });
    let curve = |points: Value| json!({ "applied_pressure_curve": points });
    let line = curve(json!([[0.0, 20.0], [100.0, 120.0]]));
    let cases = [
        ("above", value(10.0), "above", value(10.0), false),
        ("above", value(10.0), "above", value(9.0), false),
        ("above", value(10.0), "above", value(11.0), true),
        ("below", value(-10.0), "below", value(-9.0), false),
        ("below", value(-10.0), "below", value(-11.0), true),
        ("either", value(10.0), "either", value(9.0), false),
        ("either", value(10.0), "either", value(11.0), true),
        ("above", value(10.0), "either", value(9.0), false),
        ("below", value(-10.0), "either", value(9.0), false),
        ("below", value(-10.0), "either", value(11.0), true),
        ("below", value(10.0), "either", value(9.0), true),
        ("either", value(10.0), "above", value(9.0), true),
        ("above", value(10.0), "below", value(9.0), true),
        ("below", band(1.5), "below", band(1.0), false),
        ("below", band(1.0), "below", band(1.5), true),
        ("below", band(1.5), "either", band(1.5), false),
        ("above", rate(5.0, 24.0), "above", rate(4.0, 24.0), false),
        ("above", rate(5.0, 24.0), "above", rate(6.0, 24.0), true),
        ("above", rate(5.0, 24.0), "above", rate(4.0, 48.0), true),
        ("above", value(10.0), "above", rate(1.0, 24.0), true),
        (
            "above",
            line.clone(),
            "above",
            curve(json!([[0.0, 20.0], [50.0, 60.0], [100.0, 120.0]])),
            false,
        ),
        (
            "above",
            line.clone(),
            "above",
            curve(json!([[0.0, 10.0], [50.0, 71.0], [100.0, 110.0]])),
            true,
        ),
        ("above", line.clone(), "above", curve(json!([[10.0, 20.0], [100.0, 120.0]])), false),
        ("above", line.clone(), "above", curve(json!([[0.0, 20.0], [110.0, 130.0]])), true),
        ("above", line, "above", curve(json!([[0.0, 20.0], [90.0, 121.0]])), true),
    ];
    for (old_direction, old, new_direction, new, expected) in cases {
        let before = one("review", old.clone(), old_direction);
        let after = one("review", new.clone(), new_direction);
        let said = is_looser(&before, &after);
        assert_eq!(said, expected, "{old} {old_direction} -> {new} {new_direction}");
    }
}

#[test]
fn a_lower_trigger_is_looser_and_a_higher_one_is_not() {
    let rule = json!({ "value": 10.0 });
    assert!(is_looser(&one("stop", rule.clone(), "above"), &one("review", rule.clone(), "above")));
    assert!(!is_looser(&one("review", rule.clone(), "above"), &one("stop", rule, "above")));
}

#[test]
fn limits_persistence_and_hysteresis_all_count() {
    let limits = json!([{ "trigger": "stop", "rule": { "value": 10.0 }, "direction": "above" }]);
    let base = set(limits.clone(), (2, 10.0), 1.0);
    for (persistence, hysteresis, looser) in [
        ((2, 10.0), 1.0, false),
        ((1, 0.0), 2.0, false),
        ((3, 10.0), 1.0, true),
        ((2, 11.0), 1.0, true),
        ((2, 10.0), 0.9, true),
    ] {
        let new = set(limits.clone(), persistence, hysteresis);
        assert_eq!(is_looser(&base, &new), looser, "{persistence:?} {hysteresis}");
    }
    let none = set(json!([]), (2, 10.0), 1.0);
    assert!(is_looser(&base, &none), "a limit taken away");
    assert!(!is_looser(&none, &base), "a limit more");
    let gone = LimitSet::parse("{\"format\":\"brimstead-limits/1\",\"instruments\":{}}", "x");
    let gone = gone.expect("good");
    assert!(is_looser(&base, &gone), "an instrument taken away");
    assert!(!is_looser(&none, &gone), "an instrument that had none");
}
