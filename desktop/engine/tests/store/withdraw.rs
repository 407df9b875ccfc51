//! Files whose readings no longer count.

use crate::support::{Bench, NOON_S, at, bench, import, kpa, now, p4, refused, series, values};
use brimstead_engine::store::{Change, Store};
use brimstead_engine::units::UnitName;
use rusqlite::Connection;

fn minutes(values: &[f64]) -> Vec<(i64, f64)> {
    (0..).zip(values).map(|(minute, &value)| (NOON_S + minute * 60, value)).collect()
}

#[test]
fn a_file_in_the_wrong_unit_makes_room_for_the_right_one() {
    let Bench { folder, path, mut store } = bench();
    import(&mut store, "a.csv", &[kpa("P4", &[(NOON_S - 60, 40.0)])]).expect("import");
    let wrong = [series("P4", UnitName::Psi, &minutes(&[50.0, 51.0, 99.0]))];
    let file = import(&mut store, "b.csv", &wrong).expect("import").file;
    let right = [kpa("P4", &minutes(&[50.0, 51.0]))];
    assert_eq!(import(&mut store, "b again.csv", &right).expect("import").conflicts, 2);
    let done = store.withdraw(file, &at(NOON_S + 600)).expect("withdrawn");
    assert_eq!((done.withdrawn, done.in_their_place), (3, 2));
    assert_eq!(done.times_s, Some((NOON_S, NOON_S + 120)));
    let expected = [(NOON_S - 60, 40.0), (NOON_S, 50.0), (NOON_S + 60, 51.0)];
    assert_eq!(values(&store, "P4"), expected);
    assert!(store.conflicts(&p4()).expect("conflicts").is_empty());
    let hours = store.hours(&p4(), NOON_S - 60, NOON_S).expect("hours");
    let shown: Vec<_> = hours.iter().map(|hour| (hour.unit, hour.count, hour.highest)).collect();
    assert_eq!(shown, [(UnitName::Kpa, 1, 40.0), (UnitName::Kpa, 2, 51.0)]);
    assert_eq!(store.channels().expect("channels")[0].readings, 3);
    let act = store.imports().expect("imports").remove(1).what.withdrawn.expect("withdrawn");
    assert_eq!((act.who.as_str(), act.at_s), ("Ines Vale", NOON_S + 600));
    // Kept for ever all the same.
    let other = Connection::open(&path).expect("open");
    let kept: f64 = other
        .query_row("SELECT sum(value) FROM withdrawn_reading", [], |row| row.get(0))
        .expect("sum");
    assert_eq!(kept, 200.0);
    drop(folder);
}

#[test]
fn the_same_file_can_be_imported_again_after_its_withdrawal() {
    let Bench { mut store, .. } = bench();
    let file = [kpa("P4", &minutes(&[1.0, 2.0]))];
    let first = import(&mut store, "a.csv", &file).expect("import").file;
    store.withdraw(first, &now()).expect("withdrawn");
    assert!(values(&store, "P4").is_empty());
    assert!(store.channels().expect("channels").is_empty());
    assert!(store.hours(&p4(), NOON_S, NOON_S).expect("hours").is_empty());
    let again = import(&mut store, "a.csv", &file).expect("import");
    assert_eq!((again.accepted, again.known_already), (2, false));
    assert_eq!(values(&store, "P4"), minutes(&[1.0, 2.0]));
}

#[test]
fn conflicts_of_a_withdrawn_file_neither_show_nor_come_back() {
    let Bench { mut store, .. } = bench();
    let held = import(&mut store, "a.csv", &[kpa("P4", &minutes(&[1.0]))]).expect("import").file;
    let other = [kpa("P4", &minutes(&[2.0]))];
    let aside = import(&mut store, "b.csv", &other).expect("import").file;
    store.withdraw(aside, &now()).expect("withdrawn");
    assert!(store.conflicts(&p4()).expect("conflicts").is_empty());
    assert_eq!(store.withdraw(held, &now()).expect("withdrawn").in_their_place, 0);
    assert!(values(&store, "P4").is_empty());
    // The difference counts again when the file comes again beside another.
    import(&mut store, "c.csv", &[kpa("P4", &minutes(&[3.0]))]).expect("import");
    assert_eq!(import(&mut store, "b.csv", &other).expect("import").conflicts, 1);
}

#[test]
fn only_a_file_that_counts_is_withdrawn_and_with_a_reason() {
    let Bench { mut store, .. } = bench();
    let file = import(&mut store, "a.csv", &[kpa("P4", &minutes(&[1.0]))]).expect("import").file;
    refused(store.withdraw(file + 1, &now()), "refused");
    refused(store.withdraw(file, &Change { why: " ", ..now() }), "refused");
    assert_eq!(values(&store, "P4").len(), 1);
    store.withdraw(file, &now()).expect("withdrawn");
    let message = refused(store.withdraw(file, &now()), "refused");
    assert!(message.contains("Ines Vale"), "{message}");
}

#[test]
fn readings_do_not_leave_without_being_kept_elsewhere() {
    let Bench { folder, path, mut store } = bench();
    import(&mut store, "a.csv", &[kpa("P4", &minutes(&[1.0]))]).expect("import");
    let other = Connection::open(&path).expect("open");
    let error = other.execute("DELETE FROM reading", []).expect_err("refused").to_string();
    assert!(error.contains("history"), "{error}");
    drop(folder);
}
