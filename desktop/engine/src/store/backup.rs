//! Dated copies beside the store.

use super::error::{Fault, StoreError};
use jiff::Timestamp;
use rusqlite::backup::Backup;
use rusqlite::{Connection, OpenFlags};
use std::ffi::OsString;
use std::fs::File;
use std::path::{Path, PathBuf};
use std::time::Duration;

/// Every backup ends so.
const ENDING: &str = ".backup";

/// Pages copied at one go; other programs can write between two of them.
const PAGES_AT_ONCE: std::ffi::c_int = 4096;

/// Backups of one second that are told apart by a number.
const MOST_IN_ONE_SECOND: u32 = 100;

/// Name of a backup: the store's own name, the time in UTC and the schema. Names sort by time.
fn name(store: &Path, now_s: i64, schema: i64, number: u32) -> PathBuf {
    let time = match Timestamp::from_second(now_s) {
        Ok(instant) => instant.strftime("%Y-%m-%dT%H%M%SZ").to_string(),
        Err(_) => now_s.to_string(),
    };
    let number = if number == 0 { String::new() } else { format!(".{number:02}") };
    let mut file: OsString = store.as_os_str().to_owned();
    file.push(format!(".{time}{number}.schema-{schema}{ENDING}"));
    PathBuf::from(file)
}

/// The newest backup beside a store, by its name.
pub(super) fn newest(store: &Path) -> Option<PathBuf> {
    let own = store.file_name()?.to_str()?;
    let folder = match store.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    };
    let files = std::fs::read_dir(folder).ok()?.flatten().map(|entry| entry.path());
    let is_backup = |path: &PathBuf| {
        path.file_name().and_then(|name| name.to_str()).is_some_and(|name| {
            name.strip_prefix(own)
                .is_some_and(|rest| rest.starts_with('.') && rest.ends_with(ENDING))
        })
    };
    files.filter(is_backup).max()
}

/// Copies the store as it stands, checks the copy, and only then gives it its name: a file with
/// the name of a backup is always whole.
pub(super) fn write(store: &Path, now_s: i64) -> Result<PathBuf, StoreError> {
    let source = open(store, OpenFlags::SQLITE_OPEN_READ_WRITE)
        .map_err(|error| Fault::from(error).at(store))?;
    let schema = super::open::schema_of(&source).map_err(|error| Fault::from(error).at(store))?;
    let free = (0..MOST_IN_ONE_SECOND)
        .map(|number| name(store, now_s, schema, number))
        .find(|path| !path.exists());
    let Some(path) = free else {
        let path = name(store, now_s, schema, 0);
        return Err(StoreError::Backup { path, detail: "there are a hundred already".to_owned() });
    };
    let mut part = path.clone().into_os_string();
    part.push(".part");
    let part = PathBuf::from(part);
    let written = copy(&source, &part)
        .and_then(|()| std::fs::rename(&part, &path).map_err(|error| error.to_string()));
    match written {
        Ok(()) => Ok(path),
        Err(detail) => {
            // Best effort: what is left has no backup's name and misleads nobody.
            let _ = std::fs::remove_file(&part);
            Err(StoreError::Backup { path, detail })
        }
    }
}

fn open(path: &Path, flags: OpenFlags) -> rusqlite::Result<Connection> {
    let connection = Connection::open_with_flags(path, flags | OpenFlags::SQLITE_OPEN_NO_MUTEX)?;
    connection.busy_timeout(super::open::PATIENCE)?;
    Ok(connection)
}

fn copy(source: &Connection, part: &Path) -> Result<(), String> {
    let words = |error: rusqlite::Error| error.to_string();
    if part.exists() {
        std::fs::remove_file(part).map_err(|error| error.to_string())?;
    }
    let create = OpenFlags::SQLITE_OPEN_READ_WRITE | OpenFlags::SQLITE_OPEN_CREATE;
    let mut target = open(part, create).map_err(words)?;
    Backup::new(source, &mut target)
        .and_then(|backup| backup.run_to_completion(PAGES_AT_ONCE, Duration::ZERO, None))
        .map_err(words)?;
    // One file that needs no companion files.
    target.pragma_update(None, "journal_mode", "DELETE").map_err(words)?;
    if let Some(fault) = super::open::check_pages(&target).map_err(words)? {
        return Err(fault);
    }
    target.close().map_err(|(_, error)| error.to_string())?;
    File::open(part).and_then(|file| file.sync_all()).map_err(|error| error.to_string())
}
