//! Instruments, baselines, corrections, events, inhibitions, notes.

use crate::support::{Bench, NOON_S, at, bench, now, refused};
use brimstead_engine::store::{
    Baseline, BaselineValue, Change, Correction, Event, LifeEvent, LifeKind, Note, Store,
};
use serde_json::json;
use std::collections::BTreeMap;

fn life(instrument: &str, happened_s: i64, kind: LifeKind) -> LifeEvent {
    LifeEvent { instrument: instrument.to_owned(), happened_s, kind, note: "Seen".to_owned() }
}

pub fn note(text: &str) -> Note {
    Note { moment_s: NOON_S, instrument: Some("S1".to_owned()), text: text.to_owned() }
}

#[test]
fn a_life_story_reads_in_the_order_things_happened() {
    let Bench { mut store, .. } = bench();
    let factors = BTreeMap::from([("factor_kpa_per_digit".to_owned(), 0.1)]);
    let story = [
        life("S1", NOON_S - 500, LifeKind::Installed),
        life("S1", NOON_S - 400, LifeKind::Calibrated { factors }),
        life("S1", NOON_S - 300, LifeKind::RodExtended { length_m: 1.0 }),
        life("S1", NOON_S - 200, LifeKind::ReZeroed { continuity_offset: -12.5 }),
        life("S1", NOON_S - 100, LifeKind::Damaged),
        life("S1", NOON_S - 50, LifeKind::Replaced { by: "No. 7".into(), continuity_offset: 3.0 }),
        life("S1", NOON_S - 10, LifeKind::Noted),
    ];
    for event in story.iter().rev() {
        store.add_life_event(event, &now()).expect("event");
    }
    store.add_life_event(&life("P4", NOON_S, LifeKind::Installed), &now()).expect("event");
    let told: Vec<LifeEvent> =
        store.life_of("S1").expect("story").into_iter().map(|entry| entry.what).collect();
    assert_eq!(told, story);
}

#[test]
fn life_events_that_do_not_fit_are_refused() {
    let Bench { mut store, .. } = bench();
    let message =
        refused(store.add_life_event(&life("P44", NOON_S, LifeKind::Installed), &now()), "refused");
    assert!(message.contains("P44") && message.contains("P4, P5"), "{message}");
    for kind in [
        LifeKind::RodExtended { length_m: f64::NAN },
        LifeKind::ReZeroed { continuity_offset: f64::INFINITY },
        LifeKind::Replaced { by: String::new(), continuity_offset: 0.0 },
        LifeKind::Calibrated { factors: BTreeMap::from([("x".to_owned(), f64::NAN)]) },
    ] {
        refused(store.add_life_event(&life("P4", NOON_S, kind), &now()), "refused");
    }
    refused(store.add_life_event(&life("P4", 12, LifeKind::Installed), &now()), "refused");
    let mute = LifeEvent { note: " ".to_owned(), ..life("P4", NOON_S, LifeKind::Noted) };
    refused(store.add_life_event(&mute, &now()), "refused");
    refused(store.life_of("P44"), "refused");
    assert!(store.life_of("P4").expect("story").is_empty());
}

#[test]
fn every_entry_needs_a_name_a_time_and_a_reason() {
    let Bench { mut store, .. } = bench();
    let long = "x".repeat(20_001);
    for change in [
        Change { who: "", ..now() },
        Change { why: "\t ", ..now() },
        Change { why: &long, ..now() },
        Change { at_s: 0, ..now() },
        Change { at_s: i64::MAX, ..now() },
    ] {
        refused(store.add_note(&note("Frost"), &change), "refused");
    }
    assert!(store.notes(i64::MIN, i64::MAX).expect("notes").is_empty());
}

fn baseline(name: &str, values: &[(&str, f64, f64, u32)]) -> Baseline {
    let value = |&(name, value, scatter, reads): &(&str, f64, f64, u32)| {
        (name.to_owned(), BaselineValue { value, scatter, reads })
    };
    Baseline { name: name.to_owned(), moment_s: NOON_S, values: values.iter().map(value).collect() }
}

#[test]
fn baselines_are_kept_as_they_were_agreed() {
    let Bench { mut store, .. } = bench();
    let first = baseline("Before filling", &[("P4", 52.1, 0.3, 12), ("S1", 0.0, 0.8, 3)]);
    let second = baseline("After the pause", &[("P4", 53.0, 0.2, 4)]);
    store.add_baseline(&first, &now()).expect("baseline");
    store.add_baseline(&second, &at(NOON_S + 60)).expect("baseline");
    let kept: Vec<Baseline> =
        store.baselines().expect("baselines").into_iter().map(|entry| entry.what).collect();
    assert_eq!(kept, [first, second]);
}

#[test]
fn baselines_that_do_not_fit_leave_nothing_behind() {
    let Bench { mut store, .. } = bench();
    store.add_baseline(&baseline("A", &[("P4", 1.0, 0.0, 1)]), &now()).expect("baseline");
    for bad in [
        baseline("A", &[("P4", 2.0, 0.0, 1)]),
        baseline("B", &[]),
        baseline("", &[("P4", 2.0, 0.0, 1)]),
        baseline("B", &[("P4", 2.0, 0.0, 1), ("Q9", 2.0, 0.0, 1)]),
        baseline("B", &[("P4", f64::NAN, 0.0, 1)]),
        baseline("B", &[("P4", 2.0, -0.1, 1)]),
        baseline("B", &[("P4", 2.0, 0.1, 0)]),
    ] {
        refused(store.add_baseline(&bad, &now()), "refused");
    }
    let kept = store.baselines().expect("baselines");
    assert_eq!(kept.len(), 1);
    assert_eq!(kept[0].what.values["P4"].value, 1.0);
}

#[test]
fn correction_steps_are_switched_and_every_setting_is_kept() {
    let Bench { mut store, .. } = bench();
    let step = |step: &str, is_on, factor: f64| Correction {
        instrument: "P4".to_owned(),
        step: step.to_owned(),
        parameters: json!({ "factor": factor }),
        is_on,
    };
    store.set_correction(&step("barometer", true, 1.0), &at(NOON_S)).expect("set");
    store.set_correction(&step("temperature", true, 0.05), &at(NOON_S)).expect("set");
    store.set_correction(&step("barometer", false, 1.0), &at(NOON_S + 100)).expect("set");
    let set_at = |time_s| -> Vec<(String, bool)> {
        let settings = store.corrections_at("P4", time_s).expect("settings");
        settings.into_iter().map(|entry| (entry.what.step, entry.what.is_on)).collect()
    };
    assert_eq!(set_at(NOON_S - 1), []);
    assert_eq!(set_at(NOON_S + 99), [("barometer".into(), true), ("temperature".into(), true)]);
    assert_eq!(set_at(NOON_S + 100), [("barometer".into(), false), ("temperature".into(), true)]);
    let history = store.correction_history("P4").expect("history");
    assert_eq!(history.len(), 3);
    assert_eq!(history[1].what, step("temperature", true, 0.05));
    assert!(store.correction_history("P5").expect("history").is_empty());
    refused(store.set_correction(&step("", true, 1.0), &now()), "refused");
    refused(store.corrections_at("Q9", NOON_S), "refused");
}

#[test]
fn events_are_found_by_when_they_happened() {
    let Bench { mut store, .. } = bench();
    let event = |happened_s, kind: &str| Event {
        happened_s,
        kind: kind.to_owned(),
        instrument: None,
        details: json!({ "volume_m3": 280 }),
    };
    let started = event(NOON_S - 600, "pump_started");
    let stopped = event(NOON_S - 300, "pump_stopped");
    store.add_event(&stopped, &now()).expect("event");
    store.add_event(&started, &now()).expect("event");
    let all = store.events(NOON_S - 600, NOON_S - 300).expect("events");
    assert_eq!(all.iter().map(|entry| &entry.what).collect::<Vec<_>>(), [&started, &stopped]);
    assert_eq!(store.events(NOON_S - 599, NOON_S - 301).expect("events"), []);
    refused(store.add_event(&event(NOON_S, ""), &now()), "refused");
    let unknown = Event { instrument: Some("Q9".to_owned()), ..started };
    refused(store.add_event(&unknown, &now()), "refused");
}

#[test]
fn an_inhibition_ends_by_itself_or_is_lifted() {
    let Bench { mut store, .. } = bench();
    let first = store.inhibit("P4", NOON_S + 3600, &now()).expect("inhibit");
    let second = store.inhibit("P5", NOON_S + 7200, &now()).expect("inhibit");
    store.lift_inhibition(second, &at(NOON_S + 1800)).expect("lift");
    let names = |time_s| -> Vec<String> {
        let entries = store.inhibitions_at(time_s).expect("inhibitions");
        entries.into_iter().map(|entry| entry.what.instrument).collect()
    };
    assert_eq!(names(NOON_S - 1), [""; 0]);
    assert_eq!(names(NOON_S), ["P4", "P5"]);
    assert_eq!(names(NOON_S + 1799), ["P4", "P5"]);
    assert_eq!(names(NOON_S + 1800), ["P4"]);
    assert_eq!(names(NOON_S + 3600), [""; 0]);
    let all = store.inhibitions().expect("inhibitions");
    assert_eq!(all.len(), 2);
    assert_eq!(all[0].what.lifted, None);
    assert_eq!(all[1].what.lifted.as_ref().expect("lifted").at_s, NOON_S + 1800);
    refused(store.lift_inhibition(second, &at(NOON_S + 1900)), "refused");
    refused(store.lift_inhibition(first, &at(NOON_S + 3600)), "refused");
    refused(store.lift_inhibition(99, &now()), "refused");
}

#[test]
fn an_inhibition_without_an_end_to_come_is_refused() {
    let Bench { mut store, .. } = bench();
    for until_s in [NOON_S, NOON_S - 1, i64::MAX, 0] {
        refused(store.inhibit("P4", until_s, &now()), "refused");
    }
    refused(store.inhibit("Q9", NOON_S + 60, &now()), "refused");
    assert!(store.inhibitions().expect("inhibitions").is_empty());
}

#[test]
fn notes_are_found_by_the_moment_they_are_about() {
    let Bench { mut store, .. } = bench();
    let frost = note("Frost on the plate; \"0.3 mm\" — ≥ usual");
    let id = store.add_note(&frost, &at(NOON_S + 900)).expect("note");
    let found = store.notes(NOON_S, NOON_S).expect("notes");
    assert_eq!((found.len(), found[0].id, found[0].at_s), (1, id, NOON_S + 900));
    assert_eq!(found[0].what, frost);
    assert!(store.notes(NOON_S + 1, NOON_S + 900).expect("notes").is_empty());
    refused(store.add_note(&note(" "), &now()), "refused");
}
