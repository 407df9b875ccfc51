//! Several programs on one store, and programs that end in the middle. The other programs are
//! this test program itself, started again to run one of the parts below.

use crate::support::{Bench, NOON_S, at, bench, import, kpa, refused, values};
use brimstead_engine::store::{Channel, Decision, DecisionBasis, SqliteStore, Store};
use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{Rng, SeedableRng};
use std::io::{BufRead, BufReader};
use std::path::Path;
use std::process::{Child, Command, Stdio};
use std::time::Duration;

/// Names the store for a part; without it a part has nothing to do.
const STORE: &str = "BRIMSTEAD_TEST_STORE";
/// Tells two parts of one kind apart.
const WHICH: &str = "BRIMSTEAD_TEST_WHICH";

/// Readings in each file of the part that is killed.
const PER_FILE: i64 = 200;

fn start(part: &str, path: &Path, which: &str) -> Child {
    Command::new(std::env::current_exe().expect("this program"))
        .args(["--exact", part, "--ignored", "--nocapture", "--test-threads=1"])
        .env(STORE, path)
        .env(WHICH, which)
        .stdout(Stdio::piped())
        .spawn()
        .expect("starts")
}

fn file(number: i64) -> Vec<(i64, f64)> {
    (0..PER_FILE)
        .map(|index| {
            let count = number * PER_FILE + index;
            (NOON_S + count * 60, count as f64)
        })
        .collect()
}

/// Imports file after file and says so, until it is killed.
#[test]
#[ignore = "a part that another test starts"]
fn part_imports_without_end() {
    let Some(path) = std::env::var_os(STORE) else { return };
    let mut store = SqliteStore::open(Path::new(&path), NOON_S).expect("open");
    let stored = store.imports().expect("imports").len() as i64;
    for number in stored.. {
        let series = [kpa("P4", &file(number)), kpa("P5", &file(number))];
        import(&mut store, &format!("{number}.csv"), &series).expect("import");
        println!("stored {number}");
    }
}

#[test]
fn killed_at_any_moment_nothing_reported_as_stored_is_lost() {
    let Bench { folder, path, store } = bench();
    drop(store);
    let mut random = ChaCha8Rng::seed_from_u64(20_310_301);
    let mut reported = -1;
    for round in 0..12 {
        let mut child = start("processes::part_imports_without_end", &path, "");
        let mut lines = BufReader::new(child.stdout.take().expect("its output")).lines();
        // Waits for one file more than last time, so that each round gets somewhere.
        let number = |line: String| line.strip_prefix("stored ")?.parse::<i64>().ok();
        reported = lines
            .by_ref()
            .map(|line| line.expect("text"))
            .find_map(number)
            .expect("it stores something");
        std::thread::sleep(Duration::from_micros(u64::from(random.next_u32() % 40_000)));
        child.kill().expect("kill");
        child.wait().expect("ended");
        reported = lines.map_while(Result::ok).filter_map(number).last().unwrap_or(reported);
        let store = SqliteStore::open(&path, NOON_S).expect("opens after the kill");
        let files = store.imports().expect("imports").len() as i64;
        assert!(files > reported, "round {round}: {reported} reported, {files} files");
        for channel in ["P4", "P5"] {
            let expected: Vec<(i64, f64)> = (0..files).flat_map(file).collect();
            assert_eq!(values(&store, channel), expected, "round {round}: whole files only");
        }
        let counts: Vec<u64> =
            store.channels().expect("channels").iter().map(|state| state.readings).collect();
        assert_eq!(counts, [(files * PER_FILE) as u64; 2]);
    }
    assert!(reported >= 11);
    drop(folder);
}

const FILES_EACH: i64 = 25;

/// Imports files of its own and files that the other one imports too, and decides in between.
#[test]
#[ignore = "a part that another test starts"]
fn part_imports_beside_another() {
    let Some(path) = std::env::var_os(STORE) else { return };
    let which = std::env::var(WHICH).expect("which");
    let mut store = SqliteStore::open(Path::new(&path), NOON_S).expect("open");
    let basis = DecisionBasis {
        moment_s: NOON_S,
        liquid_level_m: None,
        applied_pressure_kpa: None,
        data_age_s: None,
    };
    for number in 0..FILES_EACH {
        let series = [kpa("P5", &file(number)), kpa(&which, &file(number))];
        import(&mut store, &format!("{which}-{number}.csv"), &series).expect("import");
        store.decide(Decision::Hold, &basis, &at(NOON_S)).expect("decide");
        assert!(values(&store, &which).len() as i64 >= PER_FILE * number);
    }
}

#[test]
fn two_programs_on_one_store_lose_and_double_nothing() {
    let Bench { folder, path, store } = bench();
    let parts =
        ["S1", "P4"].map(|which| start("processes::part_imports_beside_another", &path, which));
    for part in parts {
        let output = part.wait_with_output().expect("ends");
        assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stdout));
    }
    for channel in ["S1", "P4", "P5"] {
        let expected: Vec<(i64, f64)> = (0..FILES_EACH).flat_map(file).collect();
        assert_eq!(values(&store, channel), expected, "{channel}");
        assert!(store.conflicts(&Channel::instrument(channel)).expect("conflicts").is_empty());
    }
    assert_eq!(store.decisions().expect("decisions").len() as i64, 2 * FILES_EACH);
    let chain = store.verify_chain().expect("chain");
    assert!(matches!(chain, brimstead_engine::store::Chain::Whole { entries: 50, .. }));
    drop(folder);
}

#[test]
fn two_programs_bring_an_old_store_up_to_date_once() {
    let folder = tempfile::tempdir().expect("folder");
    let path = folder.path().join("old.brim");
    crate::open::store_of_schema_1(&path);
    let open = || SqliteStore::open(&path, NOON_S).map(|store| values(&store, "P4").len());
    std::thread::scope(|scope| {
        let all: Vec<_> = (0..4).map(|_| scope.spawn(open)).collect();
        for one in all {
            assert_eq!(one.join().expect("no panic").expect("open"), 4);
        }
    });
    assert_eq!(crate::open::backups(folder.path()).len(), 1);
}

#[test]
fn a_reader_goes_on_while_another_writes_and_a_writer_is_told_who_holds_it() {
    let Bench { folder, path, mut store } = bench();
    import(&mut store, "a.csv", &[kpa("P4", &[(NOON_S, 1.0)])]).expect("import");
    store.wait_at_most(Duration::from_millis(50)).expect("patience");
    let other = rusqlite::Connection::open(&path).expect("open");
    other.execute_batch("BEGIN IMMEDIATE").expect("holds the store");
    assert_eq!(values(&store, "P4"), [(NOON_S, 1.0)]);
    let file = [kpa("P4", &[(NOON_S + 60, 2.0)])];
    let message = refused(import(&mut store, "b.csv", &file), "store-locked");
    assert!(message.contains("another program"), "{message}");
    other.execute_batch("ROLLBACK").expect("lets go");
    assert_eq!(import(&mut store, "b.csv", &file).expect("import").accepted, 1);
    drop(folder);
}
