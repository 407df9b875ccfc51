//! Signed decisions and their chain.

use crate::support::{Bench, NOON_S, at, bench, now, refused};
use brimstead_engine::store::{Chain, Change, Decision, DecisionBasis, SqliteStore, Store};
use rusqlite::Connection;

const BASIS: DecisionBasis = DecisionBasis {
    moment_s: NOON_S - 60,
    liquid_level_m: Some(4.02),
    applied_pressure_kpa: Some(52.3),
    data_age_s: Some(840),
};

fn four(store: &mut SqliteStore) {
    let all = [Decision::Hold, Decision::Continue, Decision::Lower, Decision::Empty];
    for (index, decision) in (0..).zip(all) {
        store.decide(decision, &BASIS, &at(NOON_S + index)).expect("decision");
    }
}

#[test]
fn a_decision_is_kept_with_what_it_was_taken_on() {
    let Bench { mut store, .. } = bench();
    let unknown = DecisionBasis {
        liquid_level_m: None,
        applied_pressure_kpa: None,
        data_age_s: None,
        ..BASIS
    };
    store.decide(Decision::Hold, &BASIS, &now()).expect("decision");
    store.decide(Decision::Lower, &unknown, &now()).expect("decision");
    let kept = store.decisions().expect("decisions");
    assert_eq!((kept[0].id, kept[0].who.as_str(), kept[0].at_s), (1, "Ines Vale", NOON_S));
    assert_eq!((kept[0].what.decision, kept[0].what.basis), (Decision::Hold, BASIS));
    assert_eq!((kept[0].what.site_version, kept[0].what.limit_version), (1, Some(1)));
    assert_eq!((kept[1].what.decision, kept[1].what.basis), (Decision::Lower, unknown));
    assert_eq!(kept[1].what.previous_hash, kept[0].what.hash);
}

#[test]
fn a_decision_needs_a_name_a_reason_and_numbers_that_can_be() {
    let Bench { mut store, .. } = bench();
    refused(store.decide(Decision::Hold, &BASIS, &Change { who: " ", ..now() }), "refused");
    refused(store.decide(Decision::Hold, &BASIS, &Change { why: "", ..now() }), "refused");
    for basis in [
        DecisionBasis { moment_s: 0, ..BASIS },
        DecisionBasis { liquid_level_m: Some(f64::NAN), ..BASIS },
        DecisionBasis { applied_pressure_kpa: Some(f64::INFINITY), ..BASIS },
        DecisionBasis { data_age_s: Some(-1), ..BASIS },
    ] {
        refused(store.decide(Decision::Continue, &basis, &now()), "refused");
    }
    assert!(store.decisions().expect("decisions").is_empty());
}

#[test]
fn the_chain_is_whole_and_its_end_can_be_compared() {
    let Bench { mut store, .. } = bench();
    let Chain::Whole { entries: 0, last_hash } = store.verify_chain().expect("chain") else {
        panic!("an empty chain is whole");
    };
    assert_eq!(last_hash, "0".repeat(64));
    four(&mut store);
    let last = store.decisions().expect("decisions").pop().expect("last").what.hash;
    assert_eq!(store.verify_chain().expect("chain"), Chain::Whole { entries: 4, last_hash: last });
}

/// The hash is part of what a store is. This one was worked out from its description with Python's
/// `hashlib` and `struct`.
#[test]
fn the_hash_of_an_entry_does_not_change_between_versions() {
    let Bench { mut store, .. } = bench();
    store.decide(Decision::Hold, &BASIS, &now()).expect("decision");
    let entry = store.decisions().expect("decisions").remove(0);
    assert_eq!(entry.what.hash, "876e3d417cab2c4fe6ed153f9f1aaaf784cc1973f97ec52f119616c8c738b97b");
}

/// Someone with the file and time enough takes the guards away; the chain tells.
fn altered(sql: &str) -> Chain {
    let Bench { folder, path, mut store } = bench();
    four(&mut store);
    let other = Connection::open(&path).expect("open");
    other
        .execute_batch("DROP TRIGGER decision_no_update; DROP TRIGGER decision_no_delete;")
        .expect("drop");
    assert_eq!(other.execute(sql, []).expect(sql), 1, "{sql}");
    let chain = store.verify_chain().expect("chain");
    drop(folder);
    chain
}

#[test]
fn an_altered_entry_is_found_whatever_was_altered() {
    for set in [
        "who = 'Tomas Roe'",
        "at_s = at_s + 1",
        "why = why || '.'",
        "decision = 'continue'",
        "moment_s = moment_s - 1",
        "liquid_level_m = 4.03",
        "liquid_level_m = NULL",
        "applied_pressure_kpa = 52.300000000000004",
        "data_age_s = 60",
        "data_age_s = NULL",
        "limit_version = NULL",
        "hash = previous_hash",
    ] {
        let chain = altered(&format!("UPDATE decision SET {set} WHERE id = 3"));
        assert!(matches!(chain, Chain::Broken { id: 3, .. }), "{set}: {chain:?}");
    }
}

#[test]
fn an_entry_taken_out_or_moved_is_found() {
    let chain = altered("DELETE FROM decision WHERE id = 2");
    assert!(matches!(chain, Chain::Broken { id: 3, .. }), "{chain:?}");
    let chain = altered("DELETE FROM decision WHERE id = 1");
    assert!(matches!(chain, Chain::Broken { id: 2, .. }), "{chain:?}");
    let chain = altered("UPDATE decision SET id = 9 WHERE id = 2");
    assert!(matches!(chain, Chain::Broken { id: 3, .. }), "{chain:?}");
    let chain = altered("UPDATE decision SET previous_hash = hash WHERE id = 4");
    assert!(matches!(chain, Chain::Broken { id: 4, .. }), "{chain:?}");
}

#[test]
fn a_word_that_is_no_decision_is_reported_not_skipped() {
    let Bench { folder, path, mut store } = bench();
    four(&mut store);
    let other = Connection::open(&path).expect("open");
    other.pragma_update(None, "ignore_check_constraints", true).expect("pragma");
    other
        .execute_batch(
            "DROP TRIGGER decision_no_update; UPDATE decision SET decision = 'wait' WHERE id = 2;",
        )
        .expect("alter");
    refused(store.verify_chain(), "unreadable-entry");
    drop(folder);
}
