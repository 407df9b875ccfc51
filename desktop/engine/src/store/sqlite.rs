//! The store in one SQLite file.

use super::decisions::{self, Chain, Decision, DecisionBasis, DecisionEntry};
use super::error::{Fault, StoreError};
use super::history::{self, Baseline, Correction, Event, Inhibition, LifeEvent, Note};
use super::import::{self, ImportFile, ImportOutcome, ImportedFile, RawSeries};
use super::limits::{self, LimitSet, LimitVersion, NewLimits};
use super::looser::Loosening;
use super::readings::{self, Channel, ChannelState, HourSummary, ReadingConflict, StoredReading};
use super::types::{Change, Recorded};
use super::withdraw::{self, Withdrawal};
use super::{Store, backup, exchange, open, sites};
use crate::import::Imported;
use crate::site::SiteFile;
use rusqlite::{Connection, TransactionBehavior};
use std::path::{Path, PathBuf};
use std::time::Duration;

/// A store in one file.
#[derive(Debug)]
pub struct SqliteStore {
    connection: Connection,
    path: PathBuf,
}

impl SqliteStore {
    /// Makes a new store with its first site file, whose limits become the first version of the
    /// limits.
    ///
    /// # Errors
    /// When there is a file of that name, when the site file has problems, or the disk does.
    pub fn create(path: &Path, site_json: &str, change: &Change<'_>) -> Result<Self, StoreError> {
        let connection =
            open::create(path, |connection| sites::add_first(connection, site_json, change))?;
        Ok(Self { connection, path: path.to_owned() })
    }

    /// Opens a store, checks it, and brings one of an earlier schema up to date after a backup
    /// named by `now_s`.
    ///
    /// # Errors
    /// When it is missing, not a store, damaged, of a later schema, or cannot be written.
    pub fn open(path: &Path, now_s: i64) -> Result<Self, StoreError> {
        let connection = open::open(path, now_s)?;
        Ok(Self { connection, path: path.to_owned() })
    }

    /// Its file.
    #[must_use]
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// Writes a dated copy beside the store and says its name.
    ///
    /// # Errors
    /// When it cannot be written; the store is untouched.
    pub fn backup(&self, now_s: i64) -> Result<PathBuf, StoreError> {
        backup::write(&self.path, now_s)
    }

    /// Sets how long a call that writes waits for another program, 20 s when nothing is said.
    ///
    /// # Errors
    /// When the database refuses it.
    pub fn wait_at_most(&self, patience: Duration) -> Result<(), StoreError> {
        self.connection.busy_timeout(patience).map_err(|error| Fault::from(error).at(&self.path))
    }

    fn read<T>(&self, what: impl FnOnce(&Connection) -> Result<T, Fault>) -> Result<T, StoreError> {
        // One transaction, so that several queries see one state while another program writes.
        let all = || {
            let transaction = self.connection.unchecked_transaction()?;
            what(&transaction)
        };
        all().map_err(|fault: Fault| fault.at(&self.path))
    }

    fn write<T>(
        &mut self,
        what: impl FnOnce(&Connection) -> Result<T, Fault>,
    ) -> Result<T, StoreError> {
        self.write_if(|connection| what(connection).map(|done| (done, true)))
    }

    /// As [`SqliteStore::write`]; nothing is kept when the answer says so.
    fn write_if<T>(
        &mut self,
        what: impl FnOnce(&Connection) -> Result<(T, bool), Fault>,
    ) -> Result<T, StoreError> {
        let Self { connection, path } = self;
        let all = || {
            let transaction =
                connection.transaction_with_behavior(TransactionBehavior::Immediate)?;
            let (done, keep) = what(&transaction)?;
            if keep {
                transaction.commit()?;
            }
            Ok(done)
        };
        all().map_err(|fault: Fault| fault.at(path))
    }
}

impl Store for SqliteStore {
    fn add_site_version(&mut self, json: &str, change: &Change<'_>) -> Result<i64, StoreError> {
        self.write(|connection| sites::add_version(connection, json, change))
    }

    fn site_at(&self, time_s: i64) -> Result<Option<Recorded<String>>, StoreError> {
        self.read(|connection| sites::at(connection, time_s))
    }

    fn site_versions(&self) -> Result<Vec<Recorded<String>>, StoreError> {
        self.read(sites::versions)
    }

    fn add_life_event(
        &mut self,
        event: &LifeEvent,
        change: &Change<'_>,
    ) -> Result<i64, StoreError> {
        self.write(|connection| history::add_life_event(connection, event, change))
    }

    fn life_of(&self, instrument: &str) -> Result<Vec<Recorded<LifeEvent>>, StoreError> {
        self.read(|connection| history::life_of(connection, instrument))
    }

    fn add_baseline(
        &mut self,
        baseline: &Baseline,
        change: &Change<'_>,
    ) -> Result<i64, StoreError> {
        self.write(|connection| history::add_baseline(connection, baseline, change))
    }

    fn baselines(&self) -> Result<Vec<Recorded<Baseline>>, StoreError> {
        self.read(history::baselines)
    }

    fn set_correction(
        &mut self,
        correction: &Correction,
        change: &Change<'_>,
    ) -> Result<i64, StoreError> {
        self.write(|connection| history::set_correction(connection, correction, change))
    }

    fn corrections_at(
        &self,
        instrument: &str,
        time_s: i64,
    ) -> Result<Vec<Recorded<Correction>>, StoreError> {
        self.read(|connection| history::corrections(connection, instrument, Some(time_s)))
    }

    fn correction_history(
        &self,
        instrument: &str,
    ) -> Result<Vec<Recorded<Correction>>, StoreError> {
        self.read(|connection| history::corrections(connection, instrument, None))
    }

    fn add_limits(
        &mut self,
        limits: &NewLimits<'_>,
        change: &Change<'_>,
    ) -> Result<i64, StoreError> {
        self.write(|connection| limits::add_limits(connection, limits, change))
    }

    fn limits_at(&self, time_s: i64) -> Result<Option<Recorded<LimitVersion>>, StoreError> {
        self.read(|connection| limits::limits_at(connection, time_s))
    }

    fn limit_versions(&self) -> Result<Vec<Recorded<LimitVersion>>, StoreError> {
        self.read(limits::versions)
    }

    fn loosened_by(
        &self,
        limits: &LimitSet,
        effective_from_s: i64,
    ) -> Result<Vec<Loosening>, StoreError> {
        self.read(|connection| limits::loosened_by(connection, limits, effective_from_s))
    }

    fn add_event(&mut self, event: &Event, change: &Change<'_>) -> Result<i64, StoreError> {
        self.write(|connection| history::add_event(connection, event, change))
    }

    fn events(&self, from_s: i64, to_s: i64) -> Result<Vec<Recorded<Event>>, StoreError> {
        self.read(|connection| history::events(connection, from_s, to_s))
    }

    fn inhibit(
        &mut self,
        instrument: &str,
        until_s: i64,
        change: &Change<'_>,
    ) -> Result<i64, StoreError> {
        self.write(|connection| history::inhibit(connection, instrument, until_s, change))
    }

    fn lift_inhibition(&mut self, inhibition: i64, change: &Change<'_>) -> Result<i64, StoreError> {
        self.write(|connection| history::lift_inhibition(connection, inhibition, change))
    }

    fn inhibitions_at(&self, time_s: i64) -> Result<Vec<Recorded<Inhibition>>, StoreError> {
        self.read(|connection| history::inhibitions(connection, Some(time_s)))
    }

    fn inhibitions(&self) -> Result<Vec<Recorded<Inhibition>>, StoreError> {
        self.read(|connection| history::inhibitions(connection, None))
    }

    fn add_note(&mut self, note: &Note, change: &Change<'_>) -> Result<i64, StoreError> {
        self.write(|connection| history::add_note(connection, note, change))
    }

    fn notes(&self, from_s: i64, to_s: i64) -> Result<Vec<Recorded<Note>>, StoreError> {
        self.read(|connection| history::notes(connection, from_s, to_s))
    }

    fn decide(
        &mut self,
        decision: Decision,
        basis: &DecisionBasis,
        change: &Change<'_>,
    ) -> Result<i64, StoreError> {
        self.write(|connection| decisions::decide(connection, decision, basis, change))
    }

    fn decisions(&self) -> Result<Vec<Recorded<DecisionEntry>>, StoreError> {
        self.read(decisions::all)
    }

    fn verify_chain(&self) -> Result<Chain, StoreError> {
        self.read(decisions::verify)
    }

    fn import(
        &mut self,
        file: &ImportFile<'_>,
        series: &[RawSeries],
        change: &Change<'_>,
    ) -> Result<ImportOutcome, StoreError> {
        self.write_if(|connection| {
            let outcome = import::import(connection, file, series, change)?;
            let new = !outcome.known_already;
            Ok((outcome, new))
        })
    }

    fn withdraw(&mut self, file: i64, change: &Change<'_>) -> Result<Withdrawal, StoreError> {
        self.write(|connection| withdraw::withdraw(connection, file, change))
    }

    fn imported(&self, site: &SiteFile, from_s: i64, to_s: i64) -> Result<Imported, StoreError> {
        self.read(|connection| exchange::imported(connection, site, from_s, to_s))
    }

    fn imports(&self) -> Result<Vec<Recorded<ImportedFile>>, StoreError> {
        self.read(import::imports)
    }

    fn channels(&self) -> Result<Vec<ChannelState>, StoreError> {
        self.read(readings::channels)
    }

    fn latest(&self, channel: &Channel) -> Result<Option<StoredReading>, StoreError> {
        self.read(|connection| readings::latest(connection, channel))
    }

    fn readings(
        &self,
        channel: &Channel,
        from_s: i64,
        to_s: i64,
    ) -> Result<Vec<StoredReading>, StoreError> {
        self.read(|connection| readings::in_window(connection, channel, from_s, to_s))
    }

    fn hours(
        &self,
        channel: &Channel,
        from_s: i64,
        to_s: i64,
    ) -> Result<Vec<HourSummary>, StoreError> {
        self.read(|connection| readings::hours(connection, channel, from_s, to_s))
    }

    fn conflicts(&self, channel: &Channel) -> Result<Vec<ReadingConflict>, StoreError> {
        self.read(|connection| readings::conflicts(connection, channel))
    }
}

#[cfg(test)]
mod tests {
    use super::super::{RawReading, hash_of};
    use super::*;
    use crate::units::UnitName;

    const SITE: &str = include_str!("../../tests/fixtures/site.json");
    const NOON_S: i64 = 1_930_132_800;

    fn import(
        store: &mut SqliteStore,
        name: &str,
        readings: i64,
    ) -> Result<ImportOutcome, StoreError> {
        let reading = |i| RawReading { time_s: NOON_S + i, value: i as f64, line: 1 };
        let series = RawSeries {
            channel: Channel::instrument("P4"),
            unit: UnitName::Kpa,
            readings: (0..readings).map(reading).collect(),
            not_read: Vec::new(),
        };
        let (hash, report) = (hash_of(name.as_bytes()), serde_json::json!({}));
        let change = Change { who: "Ines Vale", at_s: NOON_S, why: "Morning round" };
        store.import(&ImportFile { name, hash: &hash, report: &report }, &[series], &change)
    }

    /// The database itself is told to take no more pages, which it reports as a full disk.
    #[test]
    fn a_full_disk_loses_only_the_step_that_did_not_fit() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("heron.brim");
        let change = Change { who: "Ines Vale", at_s: NOON_S, why: "First" };
        let mut store = SqliteStore::create(&path, SITE, &change).unwrap();
        import(&mut store, "a.csv", 1).unwrap();
        store.connection.query_row("PRAGMA max_page_count = 80", [], |_| Ok(())).unwrap();
        let error = import(&mut store, "b.csv", 100_000).unwrap_err();
        assert_eq!(error.code(), "disk-full");
        assert!(error.to_string().contains("make room"), "{error}");
        assert_eq!(store.readings(&Channel::instrument("P4"), 0, i64::MAX).unwrap().len(), 1);
        drop(store);
        let mut store = SqliteStore::open(&path, NOON_S).unwrap();
        assert_eq!(store.channels().unwrap()[0].readings, 1);
        assert_eq!(import(&mut store, "b.csv", 100_000).unwrap().accepted, 99_999);
    }
}
