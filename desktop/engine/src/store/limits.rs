//! Limits in versions: who approved them, from when they count, and that they are not loosened by
//! one person alone.

use super::error::{Fault, StoreError};
use super::history::{HEAD, add, entries, known};
use super::looser::{Loosening, loosenings};
use super::types::{Change, LONGEST_NAME, Recorded, instant, text, utc};
use crate::site::check::instruments::limits as check_limits;
use crate::site::reader::{ByName, Nested, OneOf, Reading, choices, key_path, record};
use crate::site::{self, LimitDefaults, Persistence, SiteFile};
use rusqlite::{Connection, OptionalExtension, Params, ToSql};
use serde::Serialize;
use std::collections::{BTreeMap, BTreeSet};

/// Limits of an instrument, with persistence and hysteresis.
pub type InstrumentLimits = LimitDefaults;

choices! {
    /// Format and version of a set of limits.
    pub enum LimitFormat {
        /// The first version.
        V1 = "brimstead-limits/1",
    }
}

record! {
    /// The limits of every instrument of a site.
    pub struct LimitSet {
        /// Format and version of this document.
        format: LimitFormat => OneOf::new(),
        /// Limits by instrument; one that is left out has none.
        instruments: BTreeMap<String, LimitDefaults> => ByName(Nested::new()),
    }
}

fn check(reading: &Reading<'_>, set: &LimitSet) {
    for (name, of_one) in &set.instruments {
        check_limits(reading, &(key_path("instruments", name) + ".limits"), &of_one.limits);
    }
}

impl LimitSet {
    /// The limits that a site file gives its instruments: their own, or those of their kind.
    #[must_use]
    pub fn of_site(site: &SiteFile) -> Self {
        let at_once = Persistence { readings: 1, minutes: 0.0 };
        let mut instruments = BTreeMap::new();
        for instrument in &site.instruments {
            let kind = site.limit_defaults.get(&instrument.kind);
            let limits = instrument.limits.as_ref().or(kind.map(|kind| &kind.limits));
            let persistence =
                instrument.persistence.as_ref().or(kind.map(|kind| &kind.persistence));
            let hysteresis = instrument.hysteresis.or(kind.map(|kind| kind.hysteresis));
            if let Some(limits) = limits {
                let of_one = LimitDefaults {
                    limits: limits.clone(),
                    persistence: persistence.cloned().unwrap_or_else(|| at_once.clone()),
                    hysteresis: hysteresis.unwrap_or_default(),
                };
                instruments.insert(instrument.id.clone(), of_one);
            }
        }
        Self { format: LimitFormat::V1, instruments }
    }

    /// Reads the document of a set of limits; `file` is its name in messages.
    ///
    /// # Errors
    /// All problems of the text, by line.
    pub fn parse(text: &str, file: &str) -> Result<Self, StoreError> {
        site::document(text, file, check).map_err(StoreError::Limits)
    }
}

/// A version of the limits to enter.
#[derive(Debug, Clone, Copy)]
pub struct NewLimits<'a> {
    /// The limits.
    pub limits: &'a LimitSet,
    /// From when they count.
    pub effective_from_s: i64,
    /// Who approved them.
    pub approvers: &'a [&'a str],
    /// Whether whoever enters them says that they are looser than those they override.
    pub loosens: bool,
}

/// A version of the limits.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LimitVersion {
    /// From when they count.
    pub effective_from_s: i64,
    /// Whether they were looser than those they overrode.
    pub loosens: bool,
    /// Who approved them.
    pub approvers: Vec<String>,
    /// The limits.
    pub limits: LimitSet,
}

pub(super) fn add_limits(
    connection: &Connection,
    new: &NewLimits<'_>,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    change.check()?;
    instant("The moment from which the limits count", new.effective_from_s)?;
    if new.effective_from_s < change.at_s {
        return Err(Fault::Store(StoreError::Backdated {
            effective_from: utc(new.effective_from_s),
            now: utc(change.at_s),
        }));
    }
    let approvers = different_names(new.approvers)?;
    new.limits.instruments.keys().try_for_each(|name| known(connection, name))?;
    let loosenings = loosened_by(connection, new.limits, new.effective_from_s)?;
    if !loosenings.is_empty() {
        may_loosen(connection, new, approvers.len(), loosenings, change)?;
    }
    store(connection, new, &approvers, change)
}

/// Names that differ in more than capitals and spaces, each as it was first written.
fn different_names(given: &[&str]) -> Result<Vec<String>, StoreError> {
    let mut seen = BTreeSet::new();
    let mut names = Vec::new();
    for name in given {
        text("The name of an approver", name, LONGEST_NAME)?;
        let folded = name.split_whitespace().collect::<Vec<_>>().join(" ");
        if seen.insert(folded.to_lowercase()) {
            names.push(folded);
        }
    }
    if names.is_empty() {
        return Err(StoreError::Refused {
            what: "The list of approvers",
            found: "empty".to_owned(),
            allowed: "at least one name".to_owned(),
            remedy: "Limits count only when somebody stands for them.",
        });
    }
    Ok(names)
}

fn may_loosen(
    connection: &Connection,
    new: &NewLimits<'_>,
    approvers: usize,
    loosenings: Vec<Loosening>,
    change: &Change<'_>,
) -> Result<(), Fault> {
    if !new.loosens {
        return Err(Fault::Store(StoreError::LoosensUnsaid { loosenings }));
    }
    if approvers < 2 {
        return Err(Fault::Store(StoreError::TwoApprovers { given: approvers, loosenings }));
    }
    let last: Option<i64> =
        connection.query_row("SELECT max(at_s) FROM limit_version", [], |row| row.get(0))?;
    match last.filter(|&last| change.at_s < last) {
        Some(last) => {
            Err(Fault::Store(StoreError::ClockWentBack { now: utc(change.at_s), last: utc(last) }))
        }
        None => Ok(()),
    }
}

fn store(
    connection: &Connection,
    new: &NewLimits<'_>,
    approvers: &[String],
    change: &Change<'_>,
) -> Result<i64, Fault> {
    let json = serde_json::to_string(new.limits)?;
    // What is stored can be read back: numbers in range, names in order.
    LimitSet::parse(&json, "limits")?;
    let rest: [(&str, &dyn ToSql); 3] =
        [("effective_from_s", &new.effective_from_s), ("loosens", &new.loosens), ("json", &json)];
    let id = add(connection, "limit_version", change, &rest)?;
    let mut approve = connection.prepare_cached("INSERT INTO limit_approval VALUES (?1, ?2)")?;
    for approver in approvers {
        approve.execute((id, approver))?;
    }
    Ok(id)
}

/// The limits of the first site file. They count from its baseline: nothing was agreed before, so
/// nothing is changed for times past.
pub(super) fn add_first(
    connection: &Connection,
    site: &SiteFile,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    let limits = LimitSet::of_site(site);
    let new = NewLimits {
        limits: &limits,
        effective_from_s: site.baseline.time_s.min(change.at_s),
        approvers: &[change.who],
        loosens: false,
    };
    store(connection, &new, &different_names(new.approvers)?, change)
}

/// Against the version in force at that moment and every later one that it would override.
pub(super) fn loosened_by(
    connection: &Connection,
    limits: &LimitSet,
    effective_from_s: i64,
) -> Result<Vec<Loosening>, Fault> {
    let mut found = BTreeSet::new();
    let in_force = limits_at(connection, effective_from_s)?;
    let to_come =
        select(connection, "WHERE effective_from_s > ?1 ORDER BY id", [effective_from_s])?;
    for overridden in in_force.into_iter().chain(to_come) {
        found.extend(loosenings(&overridden.what.limits.instruments, &limits.instruments));
    }
    Ok(found.into_iter().collect())
}

pub(super) fn limits_at(
    connection: &Connection,
    time_s: i64,
) -> Result<Option<Recorded<LimitVersion>>, Fault> {
    let which = "WHERE effective_from_s <= ?1 ORDER BY id DESC LIMIT 1";
    Ok(select(connection, which, [time_s])?.pop())
}

/// Number of the version in force at a moment.
pub(super) fn version_at(connection: &Connection, time_s: i64) -> Result<Option<i64>, Fault> {
    let sql = "SELECT max(id) FROM limit_version WHERE effective_from_s <= ?1";
    Ok(connection.query_row(sql, [time_s], |row| row.get(0)).optional()?.flatten())
}

pub(super) fn versions(connection: &Connection) -> Result<Vec<Recorded<LimitVersion>>, Fault> {
    select(connection, "ORDER BY id", [])
}

fn select(
    connection: &Connection,
    which: &str,
    parameters: impl Params,
) -> Result<Vec<Recorded<LimitVersion>>, Fault> {
    let sql = format!("SELECT {HEAD}, effective_from_s, loosens, json FROM limit_version {which}");
    entries(connection, &sql, parameters, |row| {
        let id: i64 = row.get(0)?;
        let json: String = row.get(6)?;
        let mut statement = connection.prepare_cached(
            "SELECT approver FROM limit_approval WHERE version = ?1 ORDER BY approver",
        )?;
        let approvers = statement.query_map([id], |row| row.get(0))?.collect::<Result<_, _>>()?;
        let limits = LimitSet::parse(&json, &format!("limits {id}"))
            .map_err(|error| Fault::Entry(error.to_string()))?;
        Ok(LimitVersion { effective_from_s: row.get(4)?, loosens: row.get(5)?, approvers, limits })
    })
}
