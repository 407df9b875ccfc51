//! What can go wrong with a store: a code, a sentence and what to do about it.

use super::looser::Loosening;
use crate::site::SiteProblems;
use rusqlite::ErrorCode;
use std::path::{Path, PathBuf};
use thiserror::Error;

/// Why a store did not do what it was asked. What it held before is still there.
#[derive(Debug, Error)]
pub enum StoreError {
    /// No file of that name.
    #[error("There is no store at {}. Check the name, or create one from a site file.", .path.display())]
    Missing {
        /// Where it was looked for.
        path: PathBuf,
    },
    /// A file of that name is there already.
    #[error("{} exists already and was left as it is. Open it, or give another name.", .path.display())]
    Exists {
        /// The file.
        path: PathBuf,
    },
    /// Some other kind of file.
    #[error("{} is not a Brimstead store. Nothing was changed; choose another file.", .path.display())]
    NotAStore {
        /// The file.
        path: PathBuf,
    },
    /// Written by a later version of the program.
    #[error("{} has schema {found}; this program knows schemas up to {known}. Nothing was changed; open it with the newer program.", .path.display())]
    NewerSchema {
        /// The file.
        path: PathBuf,
        /// Its schema.
        found: i64,
        /// Newest schema this program knows.
        known: i64,
    },
    /// Another program holds the file and did not let go in time.
    #[error("{} is held by another program. Nothing was stored; close the other one or try again.", .path.display())]
    Locked {
        /// The file.
        path: PathBuf,
    },
    /// No room left.
    #[error("The disk with {} is full. Nothing of this step was stored, all before it is kept; make room and try again.", .path.display())]
    DiskFull {
        /// The file.
        path: PathBuf,
    },
    /// The file may not be written or opened.
    #[error("{} cannot be opened for writing ({detail}). Check the rights of the file and its folder.", .path.display())]
    NoAccess {
        /// The file.
        path: PathBuf,
        /// What the system says.
        detail: String,
    },
    /// The disk or the file is failing.
    #[error("{} could not be read or written ({detail}). Check the disk and its cable; copy the folder before anything else.", .path.display())]
    Disk {
        /// The file.
        path: PathBuf,
        /// What the system says.
        detail: String,
    },
    /// The file fails its check.
    #[error("{} is damaged ({detail}). It was not changed. {}", .path.display(), backup_advice(.newest_backup.as_deref()))]
    Damaged {
        /// The file.
        path: PathBuf,
        /// What the check says.
        detail: String,
        /// Newest backup beside it.
        newest_backup: Option<PathBuf>,
    },
    /// The copy before a change of schema could not be made.
    #[error("No backup {} could be written ({detail}), so the store was left as it is. Make room beside it and open it again.", .path.display())]
    Backup {
        /// The backup.
        path: PathBuf,
        /// Why not.
        detail: String,
    },
    /// Something given does not fit.
    #[error("{what} is {found}; allowed is {allowed}. Nothing was stored. {remedy}")]
    Refused {
        /// What was given.
        what: &'static str,
        /// What it was.
        found: String,
        /// What may be given.
        allowed: String,
        /// What to do.
        remedy: &'static str,
    },
    /// The site document is not good.
    #[error("{0}")]
    Site(SiteProblems),
    /// The document of limits is not good.
    #[error("{0}")]
    Limits(SiteProblems),
    /// An entry that would count from a time that is past.
    #[error(
        "The limits would count from {effective_from}, but it is {now} already. Limits are not changed for times past; give a time to come."
    )]
    Backdated {
        /// From when they should have counted, UTC.
        effective_from: String,
        /// When they were entered, UTC.
        now: String,
    },
    /// The clock of this machine runs behind an earlier entry.
    #[error(
        "It is {now} by this machine, but limits were entered at {last}. Limits are not loosened on a clock that went back; set the clock."
    )]
    ClockWentBack {
        /// The clock, UTC.
        now: String,
        /// The newest entry, UTC.
        last: String,
    },
    /// Limits that are looser than those they replace, with too few names.
    #[error("These limits are looser and need two approvers with different names; {given} given. Nothing was changed. Looser are: {}", list(.loosenings))]
    TwoApprovers {
        /// How many different names were given.
        given: usize,
        /// What is looser.
        loosenings: Vec<Loosening>,
    },
    /// Limits that are looser than those they replace, entered as if they were not.
    #[error("These limits were entered as no looser than those in force, but they are. Nothing was changed; look at them again. Looser are: {}", list(.loosenings))]
    LoosensUnsaid {
        /// What is looser.
        loosenings: Vec<Loosening>,
    },
    /// A site document that changes limits on the way.
    #[error(
        "The site file changes what the limits of {instrument} mean ({what}). Nothing was stored; enter limits by themselves, with their approvers, then the site file."
    )]
    LimitsInSite {
        /// Whose.
        instrument: String,
        /// How.
        what: String,
    },
    /// What the store holds does not fit its own rules.
    #[error("{} holds something this program cannot read ({detail}). It was not changed. Keep the file and report this.", .path.display())]
    Unreadable {
        /// The file.
        path: PathBuf,
        /// What.
        detail: String,
    },
}

fn backup_advice(newest: Option<&Path>) -> String {
    match newest {
        Some(path) => format!(
            "Copy it aside, then go on from its backup {} and import the files since.",
            path.display()
        ),
        None => "There is no backup beside it; copy it aside and ask for help.".to_owned(),
    }
}

fn list(loosenings: &[Loosening]) -> String {
    let words: Vec<String> = loosenings.iter().map(ToString::to_string).collect();
    words.join("; ") + "."
}

impl StoreError {
    /// A word for the error that does not change with its text.
    #[must_use]
    pub fn code(&self) -> &'static str {
        match self {
            Self::Missing { .. } => "store-missing",
            Self::Exists { .. } => "store-exists",
            Self::NotAStore { .. } => "not-a-store",
            Self::NewerSchema { .. } => "newer-schema",
            Self::Locked { .. } => "store-locked",
            Self::DiskFull { .. } => "disk-full",
            Self::NoAccess { .. } => "no-access",
            Self::Disk { .. } => "disk-failing",
            Self::Damaged { .. } => "store-damaged",
            Self::Backup { .. } => "backup-failed",
            Self::Refused { .. } => "refused",
            Self::Site(_) => "site-problems",
            Self::Limits(_) => "limit-problems",
            Self::Backdated { .. } => "backdated",
            Self::ClockWentBack { .. } => "clock-went-back",
            Self::TwoApprovers { .. } => "two-approvers",
            Self::LoosensUnsaid { .. } => "loosens-unsaid",
            Self::LimitsInSite { .. } => "limits-in-site",
            Self::Unreadable { .. } => "unreadable-entry",
        }
    }
}

/// An error on its way to the place that knows the path of the store.
#[derive(Debug)]
pub(super) enum Fault {
    Sql(rusqlite::Error),
    Json(serde_json::Error),
    Entry(String),
    Store(StoreError),
}

impl From<rusqlite::Error> for Fault {
    fn from(error: rusqlite::Error) -> Self {
        Self::Sql(error)
    }
}

impl From<serde_json::Error> for Fault {
    fn from(error: serde_json::Error) -> Self {
        Self::Json(error)
    }
}

impl From<StoreError> for Fault {
    fn from(error: StoreError) -> Self {
        Self::Store(error)
    }
}

impl Fault {
    /// The error as it is shown, with the path.
    pub(super) fn at(self, path: &Path) -> StoreError {
        let unreadable = |detail| StoreError::Unreadable { path: path.to_owned(), detail };
        match self {
            Self::Store(error) => error,
            Self::Json(error) => unreadable(error.to_string()),
            Self::Entry(detail) => unreadable(detail),
            Self::Sql(error) => match error.sqlite_error_code() {
                Some(code) => by_code(code, error.to_string(), path),
                None => unreadable(error.to_string()),
            },
        }
    }
}

fn by_code(code: ErrorCode, detail: String, path: &Path) -> StoreError {
    let path = path.to_owned();
    match code {
        ErrorCode::DiskFull => StoreError::DiskFull { path },
        ErrorCode::DatabaseBusy | ErrorCode::DatabaseLocked => StoreError::Locked { path },
        ErrorCode::CannotOpen
        | ErrorCode::PermissionDenied
        | ErrorCode::ReadOnly
        | ErrorCode::AuthorizationForStatementDenied => StoreError::NoAccess { path, detail },
        ErrorCode::DatabaseCorrupt | ErrorCode::NotADatabase => {
            match (super::backup::newest(&path), code) {
                (None, ErrorCode::NotADatabase) => StoreError::NotAStore { path },
                // A file with backups was a store once, whatever its first page says now.
                (newest_backup, _) => StoreError::Damaged { path, detail, newest_backup },
            }
        }
        ErrorCode::SystemIoFailure | ErrorCode::FileLockingProtocolFailed => {
            StoreError::Disk { path, detail }
        }
        _ => StoreError::Unreadable { path, detail },
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use rusqlite::ffi;

    fn code(sqlite: std::ffi::c_int) -> &'static str {
        let error = rusqlite::Error::SqliteFailure(ffi::Error::new(sqlite), None);
        Fault::from(error).at(Path::new("heron.brim")).code()
    }

    #[test]
    fn every_failure_of_the_database_has_its_code() {
        for (sqlite, expected) in [
            (ffi::SQLITE_FULL, "disk-full"),
            (ffi::SQLITE_BUSY, "store-locked"),
            (ffi::SQLITE_LOCKED, "store-locked"),
            (ffi::SQLITE_READONLY, "no-access"),
            (ffi::SQLITE_CANTOPEN, "no-access"),
            (ffi::SQLITE_PERM, "no-access"),
            (ffi::SQLITE_CORRUPT, "store-damaged"),
            (ffi::SQLITE_NOTADB, "not-a-store"),
            (ffi::SQLITE_IOERR, "disk-failing"),
            (ffi::SQLITE_CONSTRAINT, "unreadable-entry"),
        ] {
            assert_eq!(code(sqlite), expected, "{sqlite}");
        }
    }

    #[test]
    fn a_message_says_what_happened_and_what_to_do() {
        let path = PathBuf::from("heron.brim");
        assert_eq!(
            StoreError::Locked { path: path.clone() }.to_string(),
            "heron.brim is held by another program. Nothing was stored; close the other one or try again."
        );
        let newest_backup = Some(PathBuf::from("heron.brim.2031-03-01T120000Z.schema-2.backup"));
        let damaged = StoreError::Damaged { path, detail: "page 7".to_owned(), newest_backup };
        assert_eq!(
            damaged.to_string(),
            "heron.brim is damaged (page 7). It was not changed. Copy it aside, then go on from its backup heron.brim.2031-03-01T120000Z.schema-2.backup and import the files since."
        );
    }
}
