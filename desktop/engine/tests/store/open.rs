//! Creating, opening, checking, migrating, backing up.

use crate::support::{Bench, NOON_S, SITE, at, bench, import, kpa, now, p4, refused, values};
use brimstead_engine::store::{SCHEMA, SqliteStore, Store, hash_of};
use rusqlite::Connection;
use std::fs;
use std::io::{Seek, SeekFrom, Write};
use std::path::{Path, PathBuf};

#[test]
fn a_store_can_be_sent_to_another_thread() {
    fn takes_send<T: Send>(_: T) {}
    takes_send(bench().store);
}

#[test]
fn what_was_stored_is_there_when_it_is_opened_again() {
    let Bench { folder, path, mut store } = bench();
    import(&mut store, "a.csv", &[kpa("P4", &[(NOON_S, 1.5)])]).expect("import");
    drop(store);
    let store = SqliteStore::open(&path, NOON_S).expect("open");
    assert_eq!(values(&store, "P4"), [(NOON_S, 1.5)]);
    assert_eq!(store.path(), path);
    let site = store.site_at(NOON_S).expect("query").expect("the first site file");
    assert_eq!((site.what.as_str(), site.who.as_str()), (SITE, "Ines Vale"));
    drop(folder);
}

#[test]
fn a_store_is_never_made_over_an_existing_file() {
    let folder = tempfile::tempdir().expect("folder");
    let path = folder.path().join("kept.brim");
    fs::write(&path, "other").expect("write");
    let message = refused(SqliteStore::create(&path, SITE, &now()), "store-exists");
    assert!(message.contains("kept.brim"), "{message}");
    assert_eq!(fs::read(&path).expect("read"), b"other");
}

#[test]
fn a_bad_site_file_or_entry_leaves_no_store_behind() {
    let folder = tempfile::tempdir().expect("folder");
    let path = folder.path().join("new.brim");
    refused(SqliteStore::create(&path, "{}", &now()), "site-problems");
    let nobody = brimstead_engine::store::Change { who: " ", ..now() };
    refused(SqliteStore::create(&path, SITE, &nobody), "refused");
    assert_eq!(fs::read_dir(folder.path()).expect("list").count(), 0);
    refused(SqliteStore::create(&folder.path().join("no/x.brim"), SITE, &now()), "no-access");
}

#[test]
fn files_that_are_no_store_are_named_as_such_and_left_alone() {
    let folder = tempfile::tempdir().expect("folder");
    refused(SqliteStore::open(&folder.path().join("none.brim"), NOON_S), "store-missing");
    let text = folder.path().join("text.brim");
    fs::write(&text, "Time,P4\n".repeat(1000)).expect("write");
    refused(SqliteStore::open(&text, NOON_S), "not-a-store");
    let empty = folder.path().join("empty.brim");
    fs::write(&empty, "").expect("write");
    refused(SqliteStore::open(&empty, NOON_S), "not-a-store");
    let other = folder.path().join("other.brim");
    Connection::open(&other).expect("open").execute_batch("CREATE TABLE t (x)").expect("table");
    let before = fs::read(&other).expect("read");
    refused(SqliteStore::open(&other, NOON_S), "not-a-store");
    assert_eq!(fs::read(&other).expect("read"), before);
}

#[test]
fn a_store_of_a_later_program_is_left_alone() {
    let Bench { folder, path, store } = bench();
    drop(store);
    let other = Connection::open(&path).expect("open");
    other.pragma_update(None, "user_version", SCHEMA + 1).expect("pragma");
    drop(other);
    let message = refused(SqliteStore::open(&path, NOON_S), "newer-schema");
    assert!(message.contains(&format!("schema {}", SCHEMA + 1)), "{message}");
    assert_eq!(backups(folder.path()), Vec::<PathBuf>::new());
}

pub fn backups(folder: &Path) -> Vec<PathBuf> {
    let files = fs::read_dir(folder).expect("list").map(|entry| entry.expect("entry").path());
    let mut found: Vec<PathBuf> =
        files.filter(|path| path.extension().is_some_and(|end| end == "backup")).collect();
    found.sort();
    found
}

/// Overwrites a page in the middle of the file.
fn damage(path: &Path) {
    let mut file = fs::OpenOptions::new().write(true).open(path).expect("open");
    let size = file.metadata().expect("size").len();
    file.seek(SeekFrom::Start(size / 4096 / 2 * 4096)).expect("seek");
    file.write_all(&[0xa5; 4096]).expect("write");
}

fn filled() -> Bench {
    let mut bench = bench();
    let readings: Vec<(i64, f64)> = (0..20_000).map(|i| (NOON_S + i * 60, i as f64)).collect();
    import(&mut bench.store, "a.csv", &[kpa("P4", &readings)]).expect("import");
    bench
}

#[test]
fn a_damaged_store_is_refused_and_its_newest_backup_named() {
    let Bench { folder, path, store } = filled();
    let first = store.backup(NOON_S).expect("backup");
    let second = store.backup(NOON_S + 86_400).expect("backup");
    drop(store);
    assert_eq!(backups(folder.path()), [first, second.clone()]);
    damage(&path);
    let damaged = fs::read(&path).expect("read");
    let message = refused(SqliteStore::open(&path, NOON_S), "store-damaged");
    let name = second.file_name().expect("name").to_str().expect("text");
    assert!(message.contains(name), "{message}");
    assert_eq!(fs::read(&path).expect("read"), damaged, "not changed");
    let store = SqliteStore::open(&second, NOON_S).expect("the backup is a store");
    assert_eq!(values(&store, "P4").len(), 20_000);
}

#[test]
fn a_damaged_store_without_backup_says_so() {
    let Bench { folder, path, store } = filled();
    drop(store);
    damage(&path);
    let message = refused(SqliteStore::open(&path, NOON_S), "store-damaged");
    assert!(message.contains("no backup"), "{message}");
    drop(folder);
}

#[test]
fn a_store_that_lost_its_first_page_is_damaged_when_it_has_a_backup() {
    let Bench { folder, path, store } = bench();
    store.backup(NOON_S).expect("backup");
    drop(store);
    let mut file = fs::OpenOptions::new().write(true).open(&path).expect("open");
    file.write_all(&[0; 4096]).expect("write");
    refused(SqliteStore::open(&path, NOON_S), "store-damaged");
    drop(folder);
}

#[test]
pub fn backups_of_one_second_do_not_replace_each_other() {
    let Bench { folder, store, .. } = bench();
    let names: Vec<PathBuf> = (0..3).map(|_| store.backup(NOON_S).expect("backup")).collect();
    assert_eq!(backups(folder.path()).len(), 3);
    assert!(names[0].to_string_lossy().ends_with("heron.brim.2031-03-01T120000Z.schema-2.backup"));
}

/// Schema 1 as it was.
const SCHEMA_1: &str = include_str!("../../src/store/sql/schema_1.sql");
const SCHEMA_1_SHA256: &str = "09fbef59b10a388d732c309da3c311d8478f89caa30ec706f591de5739cb8b47";

pub fn store_of_schema_1(path: &Path) {
    let old = Connection::open(path).expect("open");
    old.execute_batch(SCHEMA_1).expect("schema 1");
    old.pragma_update(None, "application_id", 0x4252_494d).expect("pragma");
    old.pragma_update(None, "user_version", 1).expect("pragma");
    old.execute(
        "INSERT INTO site_version VALUES (1, 'Ines Vale', ?1, 'First', ?2)",
        (NOON_S, SITE),
    )
    .expect("site");
    old.execute_batch(
        "INSERT INTO instrument VALUES ('P4', 1);
         INSERT INTO import_file VALUES (1, 'Ines Vale', 1930132800, 'Round', 'a.csv', 'h', '{}');
         INSERT INTO channel VALUES
             (7, 'instrument', 'P4', 'engineering'), (8, 'instrument', 'P5', 'engineering');
         INSERT INTO unit VALUES (3, 'kPa');
         INSERT INTO reading VALUES
             (7, 1930132800, 5.0, 3, 1, 2), (7, 1930132860, -4.0, 3, 1, 3),
             (7, 1930132920, 9.0, 3, 1, 4), (7, 1930136400, 1.0, 3, 1, 5),
             (8, 1930132800, 2.0, 3, 1, 2);",
    )
    .expect("readings");
}

/// Stores made by them are out there: a change is a step of its own.
#[test]
fn steps_of_the_schema_are_not_edited() {
    let steps = [
        (SCHEMA_1, SCHEMA_1_SHA256),
        (
            include_str!("../../src/store/sql/to_schema_2.sql"),
            "eb83344dc431d4ff3f2b1b9421e8b2aa3f4e17aa379525fe2b12c63f556611f9",
        ),
    ];
    assert_eq!(steps.len() as i64, SCHEMA, "each step is listed here");
    for (text, hash) in steps {
        // A checkout may have changed how lines end.
        assert_eq!(hash_of(text.replace("\r\n", "\n").as_bytes()), hash);
    }
}

#[test]
fn a_store_of_schema_1_is_brought_up_to_date_after_a_backup() {
    let folder = tempfile::tempdir().expect("folder");
    let path = folder.path().join("old.brim");
    store_of_schema_1(&path);
    let mut store = SqliteStore::open(&path, NOON_S).expect("open");
    assert_eq!(values(&store, "P4").len(), 4);
    let hours = store.hours(&p4(), NOON_S, NOON_S + 7200).expect("hours");
    let shown: Vec<_> = hours
        .iter()
        .map(|hour| {
            let times = (hour.lowest_s - NOON_S, hour.highest_s - NOON_S);
            (hour.start_s - NOON_S, hour.count, hour.lowest, hour.highest, times)
        })
        .collect();
    assert_eq!(shown, [(0, 3, -4.0, 9.0, (60, 120)), (3600, 1, 1.0, 1.0, (3600, 3600))]);
    let counts: Vec<u64> =
        store.channels().expect("channels").iter().map(|state| state.readings).collect();
    assert_eq!(counts, [4, 1]);
    // It goes on as a store of this schema.
    import(&mut store, "b.csv", &[kpa("P4", &[(NOON_S + 180, 11.0)])]).expect("import");
    let hours = store.hours(&p4(), NOON_S, NOON_S).expect("hours");
    assert_eq!((hours[0].count, hours[0].highest), (4, 11.0));
    let names = backups(folder.path());
    assert_eq!(names.len(), 1);
    assert!(names[0].to_string_lossy().ends_with(".schema-1.backup"), "{names:?}");
    let old = Connection::open(&names[0]).expect("open");
    let kept: i64 = old.query_row("SELECT count(*) FROM reading", [], |row| row.get(0)).expect("n");
    assert_eq!(kept, 5);
    drop(store);
    SqliteStore::open(&path, NOON_S + 60).expect("open again");
    assert_eq!(backups(folder.path()).len(), 1, "nothing to bring up to date, no backup");
}

#[test]
fn a_store_is_not_brought_up_to_date_when_no_backup_can_be_written() {
    let folder = tempfile::tempdir().expect("folder");
    let path = folder.path().join("old.brim");
    store_of_schema_1(&path);
    // A folder stands where the unfinished copy would be written.
    let part = folder.path().join("old.brim.2031-03-01T120000Z.schema-1.backup.part");
    fs::create_dir_all(part.join("x")).expect("folder");
    refused(SqliteStore::open(&path, NOON_S), "backup-failed");
    let old = Connection::open(&path).expect("open");
    let schema: i64 = old.pragma_query_value(None, "user_version", |row| row.get(0)).expect("v");
    assert_eq!(schema, 1, "left as it was");
}

#[test]
fn history_cannot_be_changed_from_outside_either() {
    let Bench { folder, path, mut store } = bench();
    import(&mut store, "a.csv", &[kpa("P4", &[(NOON_S, 1.0)])]).expect("import");
    store.add_note(&crate::history::note("Frost"), &at(NOON_S)).expect("note");
    let other = Connection::open(&path).expect("open");
    let mut tables = other
        .prepare(
            "SELECT name FROM sqlite_schema WHERE type = 'table'
             AND name NOT IN ('reading_hour', 'reading_count')",
        )
        .expect("prepare");
    let tables: Vec<String> =
        tables.query_map([], |row| row.get(0)).and_then(Iterator::collect).expect("the tables");
    assert!(tables.len() >= 23, "{tables:?}");
    let guards: i64 = other
        .query_row("SELECT count(*) FROM sqlite_schema WHERE type = 'trigger'", [], |row| {
            row.get(0)
        })
        .expect("count");
    assert_eq!(guards, 2 * tables.len() as i64, "each table refuses change and removal");
    for (table, set) in [
        ("reading", "value = 0"),
        ("note", "text = ''"),
        ("site_version", "json = '{}'"),
        ("import_file", "name = ''"),
        ("limit_version", "json = '{}'"),
    ] {
        for sql in [format!("UPDATE {table} SET {set}"), format!("DELETE FROM {table}")] {
            let error = other.execute(&sql, []).expect_err(&sql).to_string();
            assert!(error.contains("history"), "{sql}: {error}");
        }
    }
    drop(folder);
}
