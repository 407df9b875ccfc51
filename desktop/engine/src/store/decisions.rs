//! Decisions, each chained to the one before it by a hash.

use super::error::{Fault, StoreError};
use super::history::{HEAD, add, entries};
use super::limits;
use super::types::{Change, Recorded, finite, instant, utc};
use rusqlite::{Connection, OptionalExtension};
use serde::Serialize;
use sha2::{Digest, Sha256};
use std::fmt;
use std::fmt::Write as _;

/// What a person decides. The program never does.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Decision {
    /// Go on as planned.
    Continue,
    /// Keep the liquid level.
    Hold,
    /// Lower the liquid level.
    Lower,
    /// Empty the tank.
    Empty,
}

impl Decision {
    const ALL: [Self; 4] = [Self::Continue, Self::Hold, Self::Lower, Self::Empty];

    /// The word in the store and in the interface.
    #[must_use]
    pub fn word(self) -> &'static str {
        match self {
            Self::Continue => "continue",
            Self::Hold => "hold",
            Self::Lower => "lower",
            Self::Empty => "empty",
        }
    }
}

impl fmt::Display for Decision {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.word())
    }
}

/// What was known when a decision was taken; what was not known is left out, and that is kept too.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct DecisionBasis {
    /// The moment it was taken for.
    pub moment_s: i64,
    /// Liquid level then, m.
    pub liquid_level_m: Option<f64>,
    /// Applied pressure then, kPa.
    pub applied_pressure_kpa: Option<f64>,
    /// Age of the oldest reading it rests on, s.
    pub data_age_s: Option<i64>,
}

/// A decision as it was entered; who signed it and why stand with the entry.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct DecisionEntry {
    /// What was decided.
    pub decision: Decision,
    /// What was known.
    pub basis: DecisionBasis,
    /// Number of the site file in force.
    pub site_version: i64,
    /// Number of the limits in force; none when none counted yet.
    pub limit_version: Option<i64>,
    /// Hash of the entry before; zeros for the first.
    pub previous_hash: String,
    /// Hash of this entry, over the one before and all of its content.
    pub hash: String,
}

/// What working through the chain of decisions gave.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case", tag = "chain")]
pub enum Chain {
    /// Every entry is as it was entered. Entries taken off the end do not show in the chain:
    /// compare count and hash with those on an earlier report.
    Whole {
        /// Number of entries.
        entries: u64,
        /// Hash of the last.
        last_hash: String,
    },
    /// The first entry that is not as it was entered, or before which one is missing.
    Broken {
        /// Its number.
        id: i64,
        /// What does not fit.
        what: String,
    },
}

/// Stands before the first entry.
const NO_HASH: &str = "0000000000000000000000000000000000000000000000000000000000000000";

pub(super) fn decide(
    connection: &Connection,
    decision: Decision,
    basis: &DecisionBasis,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    change.check()?;
    check(basis)?;
    let site_version: i64 =
        connection.query_row("SELECT max(id) FROM site_version", [], |row| row.get(0))?;
    let last: Option<(i64, String)> = connection
        .query_row("SELECT id, hash FROM decision ORDER BY id DESC LIMIT 1", [], |row| {
            Ok((row.get(0)?, row.get(1)?))
        })
        .optional()?;
    let (last_id, previous_hash) = last.unwrap_or_else(|| (0, NO_HASH.to_owned()));
    let mut entry = Recorded {
        id: last_id + 1,
        who: change.who.to_owned(),
        at_s: change.at_s,
        why: change.why.to_owned(),
        what: DecisionEntry {
            decision,
            basis: *basis,
            site_version,
            limit_version: limits::version_at(connection, change.at_s)?,
            previous_hash,
            hash: String::new(),
        },
    };
    entry.what.hash = hash(&entry);
    let what = &entry.what;
    add(
        connection,
        "decision",
        change,
        &[
            ("id", &entry.id),
            ("decision", &decision.word()),
            ("moment_s", &basis.moment_s),
            ("liquid_level_m", &basis.liquid_level_m),
            ("applied_pressure_kpa", &basis.applied_pressure_kpa),
            ("data_age_s", &basis.data_age_s),
            ("site_version", &what.site_version),
            ("limit_version", &what.limit_version),
            ("previous_hash", &what.previous_hash),
            ("hash", &what.hash),
        ],
    )
}

fn check(basis: &DecisionBasis) -> Result<(), StoreError> {
    instant("The moment of the decision", basis.moment_s)?;
    basis.liquid_level_m.map_or(Ok(()), |level| finite("The liquid level", level))?;
    basis
        .applied_pressure_kpa
        .map_or(Ok(()), |pressure| finite("The applied pressure", pressure))?;
    match basis.data_age_s.filter(|age| *age < 0) {
        Some(age) => Err(StoreError::Refused {
            what: "The age of the data",
            found: format!("{age} s at {}", utc(basis.moment_s)),
            allowed: "0 s or more".to_owned(),
            remedy: "A reading is later than the moment: check the clocks.",
        }),
        None => Ok(()),
    }
}

/// SHA-256 over the hash before and every field, each on a line with its name. Texts carry their
/// length and numbers their bits, so that no two entries are written alike.
fn hash(entry: &Recorded<DecisionEntry>) -> String {
    let what = &entry.what;
    let basis = &what.basis;
    let bits = |value: Option<f64>| {
        value.map_or_else(|| "unknown".to_owned(), |value| format!("{:016x}", value.to_bits()))
    };
    let whole =
        |value: Option<i64>| value.map_or_else(|| "unknown".to_owned(), |value| value.to_string());
    let text = |text: &str| format!("{}:{text}", text.len());
    let lines = [
        ("brimstead-decision", "1".to_owned()),
        ("previous", what.previous_hash.clone()),
        ("id", entry.id.to_string()),
        ("decision", what.decision.word().to_owned()),
        ("moment_s", basis.moment_s.to_string()),
        ("liquid_level_m", bits(basis.liquid_level_m)),
        ("applied_pressure_kpa", bits(basis.applied_pressure_kpa)),
        ("data_age_s", whole(basis.data_age_s)),
        ("site_version", what.site_version.to_string()),
        ("limit_version", whole(what.limit_version)),
        ("who", text(&entry.who)),
        ("at_s", entry.at_s.to_string()),
        ("why", text(&entry.why)),
    ];
    let mut digest = Sha256::new();
    for (name, value) in lines {
        digest.update(format!("{name}={value}\n"));
    }
    hex(&digest.finalize())
}

pub(super) fn hex(bytes: &[u8]) -> String {
    bytes.iter().fold(String::new(), |mut text, byte| {
        // Writing into a text cannot fail.
        let _ = write!(text, "{byte:02x}");
        text
    })
}

pub(super) fn all(connection: &Connection) -> Result<Vec<Recorded<DecisionEntry>>, Fault> {
    let sql = format!(
        "SELECT {HEAD}, decision, moment_s, liquid_level_m, applied_pressure_kpa, data_age_s,
         site_version, limit_version, previous_hash, hash FROM decision ORDER BY id"
    );
    entries(connection, &sql, [], |row| {
        let word: String = row.get(4)?;
        let decision = Decision::ALL.into_iter().find(|decision| decision.word() == word);
        Ok(DecisionEntry {
            decision: decision.ok_or_else(|| Fault::Entry(format!("decision \"{word}\"")))?,
            basis: DecisionBasis {
                moment_s: row.get(5)?,
                liquid_level_m: row.get(6)?,
                applied_pressure_kpa: row.get(7)?,
                data_age_s: row.get(8)?,
            },
            site_version: row.get(9)?,
            limit_version: row.get(10)?,
            previous_hash: row.get(11)?,
            hash: row.get(12)?,
        })
    })
}

pub(super) fn verify(connection: &Connection) -> Result<Chain, Fault> {
    let entries = all(connection)?;
    let mut last_hash = NO_HASH.to_owned();
    for (expected_id, entry) in (1..).zip(&entries) {
        let broken = |what: &str| Ok(Chain::Broken { id: entry.id, what: what.to_owned() });
        if entry.id != expected_id {
            return broken("an entry before it is missing");
        }
        if entry.what.previous_hash != last_hash {
            return broken("it does not follow from the entry before it");
        }
        if hash(entry) != entry.what.hash {
            return broken("its content was altered");
        }
        last_hash.clone_from(&entry.what.hash);
    }
    Ok(Chain::Whole { entries: entries.len() as u64, last_hash })
}
