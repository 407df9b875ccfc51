//! The store: one file for a site, holding every raw reading and everything people entered about
//! them, for as long as the site is looked after.
//!
//! # What is kept
//! Nothing that was stored is changed or taken away: a new entry takes the place of an older one
//! by being newer, and each says who made it, when and why. The database refuses anything else.
//! Readings are kept as read, in the unit of the file, with file and line. Decisions are chained
//! by their hashes, so that an entry altered later shows ([`Store::verify_chain`]).
//!
//! # Which entry counts
//! The site in force at a moment is the newest version entered by then. Of the limits it is the
//! newest version that counts from that moment or before; a version entered later overrides one
//! agreed earlier, also one that was still to come.
//!
//! # Several programs
//! Any number of programs may have a store open; one at a time writes, the others wait. What a
//! call has reported as stored is on the disk. The file must lie on a disk of the same machine:
//! the locks of shared network folders cannot be relied on. While it is open the newest entries may
//! stand in a second file beside it (its name with `-wal`), so copy it with
//! [`SqliteStore::backup`].
//!
//! # From files to a comparison and back
//! [`crate::import::read_bytes`] reads a file, [`keep`] stores what it gave, [`Store::imported`]
//! gives the readings back as the import would have, and [`LimitSet::put_into`] the site with the
//! limits that were agreed.
//!
//! ```
//! use brimstead_engine::store::{Change, SqliteStore, Store, keep};
//! use brimstead_engine::{import, site};
//! # let folder = tempfile::tempdir()?;
//! # let path = folder.path().join("heron.brim");
//! # let json = include_str!("../../tests/fixtures/site.json");
//! let change = Change { who: "Ines Vale", at_s: 1_930_132_800, why: "Morning round" };
//! let mut store = SqliteStore::create(&path, json, &change)?;
//! let bytes = b"Note\nNote\nTime,P5\n2031-03-02 06:00:00,45.2\n";
//! let site = site::parse(json, "site file")?;
//! let read = import::read_bytes(&site, &[("logger.csv", bytes)]);
//! let outcome = keep(&mut store, &read, 0, bytes, &change)?;
//! assert_eq!((outcome.accepted, outcome.duplicates), (1, 0));
//! let limits = store.limits_at(change.at_s)?.expect("those of the site file");
//! let site = limits.what.limits.put_into(&site);
//! let imported = store.imported(&site, 0, i64::MAX)?;
//! assert_eq!(imported.instrument("P5").expect("P5").points[0].value, 45.2);
//! # Ok::<(), Box<dyn std::error::Error>>(())
//! ```
//!
//! Instants are whole seconds of Unix time, UTC; no clock is read here.

mod backup;
mod decisions;
mod error;
mod exchange;
mod history;
mod import;
mod limits;
mod looser;
mod open;
mod readings;
mod sites;
mod sqlite;
mod types;
mod withdraw;

pub use decisions::{Chain, Decision, DecisionBasis, DecisionEntry};
pub use error::StoreError;
pub use exchange::keep;
pub use history::{
    Baseline, BaselineValue, Correction, Event, Inhibition, LifeEvent, LifeKind, Note,
};
pub use import::{
    ImportFile, ImportOutcome, ImportedFile, LateReadings, RawNotRead, RawReading, RawSeries,
    RefusedReading, hash_of,
};
pub use limits::{InstrumentLimits, LimitSet, LimitVersion, NewLimits};
pub use looser::{Loosening, loosenings};
pub use open::SCHEMA;
pub use readings::{Channel, ChannelState, HourSummary, ReadingConflict, StoredReading};
pub use sqlite::SqliteStore;
pub use types::{Act, Change, Recorded};
pub use withdraw::Withdrawal;

use crate::import::Imported;
use crate::site::SiteFile;

/// Where the readings and the history of a site are kept.
///
/// Each call that writes is one step: it is stored as a whole or not at all, and what was stored
/// before is there either way.
///
/// # Errors
/// Every method: [`StoreError`], which says what happened and what to do.
#[allow(clippy::missing_errors_doc)] // Said once above.
pub trait Store: Send {
    /// Adds a version of the site file. Instruments keep their kind and unit, and limits are not
    /// changed this way ([`Store::add_limits`]).
    fn add_site_version(&mut self, json: &str, change: &Change<'_>) -> Result<i64, StoreError>;

    /// The site file in force at a moment.
    fn site_at(&self, time_s: i64) -> Result<Option<Recorded<String>>, StoreError>;

    /// All versions of the site file, oldest first.
    fn site_versions(&self) -> Result<Vec<Recorded<String>>, StoreError>;

    /// Adds to the life story of an instrument.
    fn add_life_event(&mut self, event: &LifeEvent, change: &Change<'_>)
    -> Result<i64, StoreError>;

    /// The life story of an instrument, by the time things happened.
    fn life_of(&self, instrument: &str) -> Result<Vec<Recorded<LifeEvent>>, StoreError>;

    /// Adds a baseline; its name is new.
    fn add_baseline(&mut self, baseline: &Baseline, change: &Change<'_>)
    -> Result<i64, StoreError>;

    /// All baselines, by their moment.
    fn baselines(&self) -> Result<Vec<Recorded<Baseline>>, StoreError>;

    /// Sets a correction step of an instrument: its parameters, and on or off.
    fn set_correction(
        &mut self,
        correction: &Correction,
        change: &Change<'_>,
    ) -> Result<i64, StoreError>;

    /// The correction steps of an instrument as they were set at a moment, by name.
    fn corrections_at(
        &self,
        instrument: &str,
        time_s: i64,
    ) -> Result<Vec<Recorded<Correction>>, StoreError>;

    /// Every setting of every correction step of an instrument, oldest first.
    fn correction_history(&self, instrument: &str)
    -> Result<Vec<Recorded<Correction>>, StoreError>;

    /// Adds a version of the limits. It counts from now or later, and when it is looser than any
    /// that it overrides it needs two approvers with different names.
    fn add_limits(
        &mut self,
        limits: &NewLimits<'_>,
        change: &Change<'_>,
    ) -> Result<i64, StoreError>;

    /// The limits in force at a moment; none before the first version counts.
    fn limits_at(&self, time_s: i64) -> Result<Option<Recorded<LimitVersion>>, StoreError>;

    /// All versions of the limits, oldest first.
    fn limit_versions(&self) -> Result<Vec<Recorded<LimitVersion>>, StoreError>;

    /// What a set of limits would loosen if it counted from a moment.
    fn loosened_by(
        &self,
        limits: &LimitSet,
        effective_from_s: i64,
    ) -> Result<Vec<Loosening>, StoreError>;

    /// Adds an event.
    fn add_event(&mut self, event: &Event, change: &Change<'_>) -> Result<i64, StoreError>;

    /// Events that happened in a window, both ends included.
    fn events(&self, from_s: i64, to_s: i64) -> Result<Vec<Recorded<Event>>, StoreError>;

    /// Inhibits an instrument from now until a moment.
    fn inhibit(
        &mut self,
        instrument: &str,
        until_s: i64,
        change: &Change<'_>,
    ) -> Result<i64, StoreError>;

    /// Lifts an inhibition before its time.
    fn lift_inhibition(&mut self, inhibition: i64, change: &Change<'_>) -> Result<i64, StoreError>;

    /// What is inhibited at a moment.
    fn inhibitions_at(&self, time_s: i64) -> Result<Vec<Recorded<Inhibition>>, StoreError>;

    /// Every inhibition there was, oldest first.
    fn inhibitions(&self) -> Result<Vec<Recorded<Inhibition>>, StoreError>;

    /// Adds a note.
    fn add_note(&mut self, note: &Note, change: &Change<'_>) -> Result<i64, StoreError>;

    /// Notes about moments in a window, both ends included.
    fn notes(&self, from_s: i64, to_s: i64) -> Result<Vec<Recorded<Note>>, StoreError>;

    /// Enters a decision of the person who signs (`change.who`), with the reason, and chains it.
    fn decide(
        &mut self,
        decision: Decision,
        basis: &DecisionBasis,
        change: &Change<'_>,
    ) -> Result<i64, StoreError>;

    /// All decisions, oldest first.
    fn decisions(&self) -> Result<Vec<Recorded<DecisionEntry>>, StoreError>;

    /// Works the chain of decisions through from the first.
    fn verify_chain(&self) -> Result<Chain, StoreError>;

    /// Stores the readings of one file. The same readings again change nothing.
    fn import(
        &mut self,
        file: &ImportFile<'_>,
        series: &[RawSeries],
        change: &Change<'_>,
    ) -> Result<ImportOutcome, StoreError>;

    /// Withdraws a file: its readings are kept, but no longer count.
    fn withdraw(&mut self, file: i64, change: &Change<'_>) -> Result<Withdrawal, StoreError>;

    /// Readings in a window, both ends included, as the import of files gives them: in the units
    /// of the instruments of `site`. The source of a reading is the number of its file.
    fn imported(&self, site: &SiteFile, from_s: i64, to_s: i64) -> Result<Imported, StoreError>;

    /// The files imported so far, oldest first.
    fn imports(&self) -> Result<Vec<Recorded<ImportedFile>>, StoreError>;

    /// Every channel that has readings, with how many and the newest.
    fn channels(&self) -> Result<Vec<ChannelState>, StoreError>;

    /// The newest reading of a channel.
    fn latest(&self, channel: &Channel) -> Result<Option<StoredReading>, StoreError>;

    /// Readings of a channel in a window, both ends included, by time.
    fn readings(
        &self,
        channel: &Channel,
        from_s: i64,
        to_s: i64,
    ) -> Result<Vec<StoredReading>, StoreError>;

    /// The hours of a window that have readings, each with its lowest and highest.
    fn hours(
        &self,
        channel: &Channel,
        from_s: i64,
        to_s: i64,
    ) -> Result<Vec<HourSummary>, StoreError>;

    /// Readings that differ from the one held for the same channel and time.
    fn conflicts(&self, channel: &Channel) -> Result<Vec<ReadingConflict>, StoreError>;
}
