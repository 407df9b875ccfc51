//! The site file in versions.

use super::error::{Fault, StoreError};
use super::history::{HEAD, add, entries};
use super::limits::{self, LimitSet};
use super::types::{Change, Recorded};
use crate::site::{self, SiteFile};
use rusqlite::Connection;

/// The first version, with the limits it brings.
pub(super) fn add_first(
    connection: &Connection,
    json: &str,
    change: &Change<'_>,
) -> Result<(), Fault> {
    let site = parse(json)?;
    store(connection, json, &site, change)?;
    limits::add_first(connection, &site, change)?;
    Ok(())
}

pub(super) fn add_version(
    connection: &Connection,
    json: &str,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    let site = parse(json)?;
    let newest = entries(
        connection,
        &format!("SELECT {HEAD}, json FROM site_version ORDER BY id DESC LIMIT 1"),
        [],
        |row| Ok(row.get::<_, String>(4)?),
    )?;
    if let Some(before) = newest.first() {
        let before =
            site::parse(&before.what, "site").map_err(|error| Fault::Entry(error.to_string()))?;
        keeps_limits(connection, &before, &site)?;
    }
    store(connection, json, &site, change)
}

fn parse(json: &str) -> Result<SiteFile, StoreError> {
    site::parse(json, "site file").map_err(StoreError::Site)
}

/// A site file leaves the limits of an instrument as the site file before it had them or as they
/// are agreed now, and the instrument what it was: a number in another unit is another limit.
fn keeps_limits(connection: &Connection, before: &SiteFile, after: &SiteFile) -> Result<(), Fault> {
    let (old, new) = (LimitSet::of_site(before), LimitSet::of_site(after));
    let agreed = limits::versions(connection)?.pop();
    for instrument in &after.instruments {
        let id = &instrument.id;
        let Some(earlier) = before.instruments.iter().find(|earlier| earlier.id == *id) else {
            continue;
        };
        let what = if earlier.unit != instrument.unit {
            format!("unit {}, was {}", instrument.unit, earlier.unit)
        } else if earlier.kind != instrument.kind {
            format!("kind {}, was {}", instrument.kind, earlier.kind)
        } else {
            let given = new.instruments.get(id);
            let in_force =
                agreed.as_ref().and_then(|agreed| agreed.what.limits.instruments.get(id));
            if given == old.instruments.get(id) || given == in_force {
                continue;
            }
            "other limits".to_owned()
        };
        let instrument = id.clone();
        return Err(Fault::Store(StoreError::LimitsInSite { instrument, what }));
    }
    Ok(())
}

fn store(
    connection: &Connection,
    json: &str,
    site: &SiteFile,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    let id = add(connection, "site_version", change, &[("json", &json)])?;
    let mut insert = connection
        .prepare_cached("INSERT INTO instrument VALUES (?1, ?2) ON CONFLICT DO NOTHING")?;
    for instrument in &site.instruments {
        insert.execute((&instrument.id, id))?;
    }
    Ok(id)
}

pub(super) fn at(connection: &Connection, time_s: i64) -> Result<Option<Recorded<String>>, Fault> {
    Ok(select(connection, "WHERE at_s <= ?1 ORDER BY id DESC LIMIT 1", Some(time_s))?.pop())
}

pub(super) fn versions(connection: &Connection) -> Result<Vec<Recorded<String>>, Fault> {
    select(connection, "WHERE ?1 IS NULL ORDER BY id", None)
}

fn select(
    connection: &Connection,
    which: &str,
    time_s: Option<i64>,
) -> Result<Vec<Recorded<String>>, Fault> {
    let sql = format!("SELECT {HEAD}, json FROM site_version {which}");
    entries(connection, &sql, [time_s], |row| Ok(row.get(4)?))
}
