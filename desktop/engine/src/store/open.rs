//! Creating, checking and bringing a store up to date.

use super::backup;
use super::error::{Fault, StoreError};
use rusqlite::{Connection, OpenFlags, TransactionBehavior};
use std::path::Path;
use std::time::Duration;

/// How long one program waits for another that is writing.
pub(super) const PATIENCE: Duration = Duration::from_secs(20);

/// Marks the file as ours ("BRIM").
const APPLICATION_ID: i64 = 0x4252_494d;

/// What brings a store from one schema to the next; the first makes it from nothing.
const STEPS: [&str; 2] = [include_str!("sql/schema_1.sql"), include_str!("sql/to_schema_2.sql")];

/// The schema of this program.
pub const SCHEMA: i64 = STEPS.len() as i64;

/// Memory for pages, KiB.
const CACHE_KIB: i64 = 64 * 1024;

/// Makes the file of a new store. `fill` writes its first entries; without them there is no file.
pub(super) fn create(
    path: &Path,
    fill: impl FnOnce(&Connection) -> Result<(), Fault>,
) -> Result<Connection, StoreError> {
    // Taking the name first keeps two programs from making the same store.
    if let Err(error) = std::fs::File::create_new(path) {
        let path = path.to_owned();
        return Err(match error.kind() {
            std::io::ErrorKind::AlreadyExists => StoreError::Exists { path },
            _ => StoreError::NoAccess { path, detail: error.to_string() },
        });
    }
    let made = make(path, fill);
    if made.is_err() {
        // The file is ours and holds nothing; an error here changes nothing about the first one.
        let _ = std::fs::remove_file(path);
    }
    made.map_err(|fault| fault.at(path))
}

fn make(
    path: &Path,
    fill: impl FnOnce(&Connection) -> Result<(), Fault>,
) -> Result<Connection, Fault> {
    let mut connection = connect(path)?;
    let transaction = connection.transaction_with_behavior(TransactionBehavior::Immediate)?;
    for step in STEPS {
        transaction.execute_batch(step)?;
    }
    transaction.pragma_update(None, "application_id", APPLICATION_ID)?;
    transaction.pragma_update(None, "user_version", SCHEMA)?;
    fill(&transaction)?;
    transaction.commit()?;
    Ok(connection)
}

/// Opens a store, checks it and brings it to the schema of this program.
pub(super) fn open(path: &Path, now_s: i64) -> Result<Connection, StoreError> {
    if !path.exists() {
        return Err(StoreError::Missing { path: path.to_owned() });
    }
    let known = recognise(path).map_err(|fault| fault.at(path))?;
    if !known {
        return Err(StoreError::NotAStore { path: path.to_owned() });
    }
    let mut connection = connect(path).map_err(|fault| fault.at(path))?;
    let found = schema_of(&connection).map_err(|error| Fault::from(error).at(path))?;
    if found > SCHEMA {
        return Err(StoreError::NewerSchema { path: path.to_owned(), found, known: SCHEMA });
    }
    if let Some(detail) = check_pages(&connection).map_err(|error| Fault::from(error).at(path))? {
        let newest_backup = backup::newest(path);
        return Err(StoreError::Damaged { path: path.to_owned(), detail, newest_backup });
    }
    if found < SCHEMA {
        bring_up_to_date(&mut connection, path, now_s).map_err(|fault| fault.at(path))?;
    }
    Ok(connection)
}

/// Whether the file is a store, found out without changing anything about it.
fn recognise(path: &Path) -> Result<bool, Fault> {
    let connection = Connection::open_with_flags(path, OpenFlags::SQLITE_OPEN_READ_WRITE)?;
    connection.busy_timeout(PATIENCE)?;
    let id: i64 = connection.pragma_query_value(None, "application_id", |row| row.get(0))?;
    Ok(id == APPLICATION_ID && schema_of(&connection)? >= 1)
}

fn connect(path: &Path) -> Result<Connection, Fault> {
    let flags = OpenFlags::SQLITE_OPEN_READ_WRITE | OpenFlags::SQLITE_OPEN_NO_MUTEX;
    let connection = Connection::open_with_flags(path, flags)?;
    connection.busy_timeout(PATIENCE)?;
    connection.set_prepared_statement_cache_capacity(64);
    // Readers go on while another program writes.
    connection.pragma_update(None, "journal_mode", "WAL")?;
    // What is reported as stored has reached the disk, also when the power fails next.
    connection.pragma_update(None, "synchronous", "FULL")?;
    connection.pragma_update(None, "foreign_keys", true)?;
    // Without it a row replaced on conflict would slip past the guards of the history.
    connection.pragma_update(None, "recursive_triggers", true)?;
    connection.pragma_update(None, "trusted_schema", false)?;
    connection.pragma_update(None, "cache_size", -CACHE_KIB)?;
    Ok(connection)
}

pub(super) fn schema_of(connection: &Connection) -> rusqlite::Result<i64> {
    connection.pragma_query_value(None, "user_version", |row| row.get(0))
}

/// What the check of the file's structure finds wrong first.
pub(super) fn check_pages(connection: &Connection) -> rusqlite::Result<Option<String>> {
    let found: String = connection.query_row("PRAGMA quick_check(1)", [], |row| row.get(0))?;
    Ok((found != "ok").then_some(found))
}

/// All steps in one transaction, after a backup. The lock is taken first, so that nothing comes
/// between the two and of two programs only one does the work.
fn bring_up_to_date(connection: &mut Connection, path: &Path, now_s: i64) -> Result<(), Fault> {
    let transaction = connection.transaction_with_behavior(TransactionBehavior::Immediate)?;
    let found = schema_of(&transaction)?;
    if found < SCHEMA {
        backup::write(path, now_s)?;
    }
    for (_, step) in (1..).zip(STEPS).filter(|(gives, _)| *gives > found) {
        transaction.execute_batch(step)?;
    }
    transaction.pragma_update(None, "user_version", SCHEMA.max(found))?;
    transaction.commit()?;
    Ok(())
}
