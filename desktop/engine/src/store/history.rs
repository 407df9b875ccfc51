//! What people enter about instruments and moments, apart from limits and decisions.

use super::error::{Fault, StoreError};
use super::types::{Act, Change, LONGEST_NAME, LONGEST_TEXT, Recorded, finite, instant, text, utc};
use rusqlite::{Connection, OptionalExtension, Params, Row, ToSql};
use serde::{Deserialize, Serialize};
use serde_json::Value;
use std::collections::BTreeMap;

/// Something that happened to an instrument.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LifeEvent {
    /// The instrument.
    pub instrument: String,
    /// When it happened.
    pub happened_s: i64,
    /// What happened.
    pub kind: LifeKind,
    /// Anything worth knowing; may be empty.
    pub note: String,
}

/// What can happen to an instrument.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case", tag = "event")]
pub enum LifeKind {
    /// Put in place.
    Installed,
    /// Calibrated; each factor by its name with unit.
    Calibrated {
        /// The factors.
        factors: BTreeMap<String, f64>,
    },
    /// The rod of a plate was made longer.
    RodExtended {
        /// By how much, m.
        length_m: f64,
    },
    /// The zero was set anew.
    ReZeroed {
        /// Added to later readings, in the unit of the instrument, so that the record goes on
        /// without a step.
        continuity_offset: f64,
    },
    /// Damaged: readings from then on are in doubt.
    Damaged,
    /// Another instrument took its place under the same name.
    Replaced {
        /// Serial number or mark of the new one.
        by: String,
        /// Added to later readings, in the unit of the instrument, so that the record goes on
        /// without a step.
        continuity_offset: f64,
    },
    /// None of these; the note says what.
    Noted,
}

/// An agreed reference set.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Baseline {
    /// Its name.
    pub name: String,
    /// The moment it stands for.
    pub moment_s: i64,
    /// Value of each instrument.
    pub values: BTreeMap<String, BaselineValue>,
}

/// Reference value of an instrument, in its unit.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct BaselineValue {
    /// The value agreed.
    pub value: f64,
    /// Scatter of the reads, one standard deviation.
    pub scatter: f64,
    /// Number of reads.
    pub reads: u32,
}

/// Setting of a correction step.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Correction {
    /// The instrument.
    pub instrument: String,
    /// Name of the step.
    pub step: String,
    /// Its parameters.
    pub parameters: Value,
    /// Whether it is applied.
    pub is_on: bool,
}

/// Something that happened at the site, or that the program noticed.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Event {
    /// When it happened.
    pub happened_s: i64,
    /// One word for its kind.
    pub kind: String,
    /// The instrument it is about.
    pub instrument: Option<String>,
    /// What belongs to it.
    pub details: Value,
}

/// An instrument that raises nothing until a moment.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Inhibition {
    /// The instrument.
    pub instrument: String,
    /// Until when, unless lifted before.
    pub until_s: i64,
    /// By whom, when and why it was lifted.
    pub lifted: Option<Act>,
}

/// A note.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Note {
    /// The moment it is about.
    pub moment_s: i64,
    /// The instrument it is about.
    pub instrument: Option<String>,
    /// The text.
    pub text: String,
}

/// Adds a row to a table of history.
pub(super) fn add(
    connection: &Connection,
    table: &str,
    change: &Change<'_>,
    rest: &[(&str, &dyn ToSql)],
) -> Result<i64, Fault> {
    change.check()?;
    let names: String = rest.iter().flat_map(|(name, _)| [", ", name]).collect();
    let places: String = (4..4 + rest.len()).map(|place| format!(", ?{place}")).collect();
    let sql = format!("INSERT INTO {table} (who, at_s, why{names}) VALUES (?1, ?2, ?3{places})");
    let mut values: Vec<&dyn ToSql> = vec![&change.who, &change.at_s, &change.why];
    values.extend(rest.iter().map(|(_, value)| *value));
    connection.prepare_cached(&sql)?.execute(&*values)?;
    Ok(connection.last_insert_rowid())
}

/// Columns that every entry begins with, for [`entries`].
pub(super) const HEAD: &str = "id, who, at_s, why";

/// Entries of a query that selects [`HEAD`] and then what `what` reads, from column 4 on.
pub(super) fn entries<T>(
    connection: &Connection,
    sql: &str,
    parameters: impl Params,
    what: impl Fn(&Row<'_>) -> Result<T, Fault>,
) -> Result<Vec<Recorded<T>>, Fault> {
    let mut statement = connection.prepare_cached(sql)?;
    let mut rows = statement.query(parameters)?;
    let mut found = Vec::new();
    while let Some(row) = rows.next()? {
        found.push(Recorded {
            id: row.get(0)?,
            who: row.get(1)?,
            at_s: row.get(2)?,
            why: row.get(3)?,
            what: what(row)?,
        });
    }
    Ok(found)
}

/// Who, when and why of something else, which may not have happened, from a column on.
pub(super) fn act(row: &Row<'_>, from: usize) -> Result<Option<Act>, Fault> {
    Ok(match row.get(from)? {
        Some(who) => Some(Act { who, at_s: row.get(from + 1)?, why: row.get(from + 2)? }),
        None => None,
    })
}

/// Refuses an instrument that no site file has named.
pub(super) fn known(connection: &Connection, instrument: &str) -> Result<(), Fault> {
    let found: Option<i64> = connection
        .prepare_cached("SELECT 1 FROM instrument WHERE name = ?1")?
        .query_row([instrument], |row| row.get(0))
        .optional()?;
    if found.is_some() {
        return Ok(());
    }
    let mut statement = connection.prepare_cached("SELECT name FROM instrument ORDER BY name")?;
    let names = statement.query_map([], |row| row.get::<_, String>(0))?;
    let names: Vec<String> = names.collect::<Result<_, _>>()?;
    Err(Fault::Store(StoreError::Refused {
        what: "The instrument",
        found: format!("\"{instrument}\""),
        allowed: format!("one of the site file: {}", names.join(", ")),
        remedy: "Check the name, or add the instrument to the site file.",
    }))
}

pub(super) fn add_life_event(
    connection: &Connection,
    event: &LifeEvent,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    known(connection, &event.instrument)?;
    instant("The time it happened", event.happened_s)?;
    life_numbers(&event.kind)?;
    if event.kind == LifeKind::Noted || !event.note.is_empty() {
        text("The note", &event.note, LONGEST_TEXT)?;
    }
    let what = serde_json::to_string(&(&event.kind, &event.note))?;
    add(
        connection,
        "life_event",
        change,
        &[("instrument", &event.instrument), ("happened_s", &event.happened_s), ("what", &what)],
    )
}

fn life_numbers(kind: &LifeKind) -> Result<(), StoreError> {
    match kind {
        LifeKind::Calibrated { factors } => {
            factors.values().try_for_each(|&factor| finite("A calibration factor", factor))
        }
        LifeKind::RodExtended { length_m } => finite("The rod's added length, m,", *length_m),
        LifeKind::ReZeroed { continuity_offset } => finite("The offset", *continuity_offset),
        LifeKind::Replaced { by, continuity_offset } => {
            text("The mark of the new instrument", by, LONGEST_NAME)?;
            finite("The offset", *continuity_offset)
        }
        LifeKind::Installed | LifeKind::Damaged | LifeKind::Noted => Ok(()),
    }
}

pub(super) fn life_of(
    connection: &Connection,
    instrument: &str,
) -> Result<Vec<Recorded<LifeEvent>>, Fault> {
    known(connection, instrument)?;
    let sql = format!(
        "SELECT {HEAD}, happened_s, what FROM life_event WHERE instrument = ?1 ORDER BY happened_s, id"
    );
    entries(connection, &sql, [instrument], |row| {
        let what: String = row.get(5)?;
        let (kind, note) = serde_json::from_str(&what)?;
        Ok(LifeEvent { instrument: instrument.to_owned(), happened_s: row.get(4)?, kind, note })
    })
}

pub(super) fn add_baseline(
    connection: &Connection,
    baseline: &Baseline,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    text("The name of the baseline", &baseline.name, LONGEST_NAME)?;
    instant("The moment of the baseline", baseline.moment_s)?;
    let refused = |what, found: String, allowed: &str, remedy| {
        let allowed = allowed.to_owned();
        Err(Fault::Store(StoreError::Refused { what, found, allowed, remedy }))
    };
    let mut taken = connection.prepare_cached("SELECT 1 FROM baseline WHERE name = ?1")?;
    if taken.exists([&baseline.name])? {
        let found = format!("\"{}\", which is there already", baseline.name);
        let remedy = "Name it by its date; the earlier one is kept.";
        return refused("The name of the baseline", found, "a new name", remedy);
    }
    if baseline.values.is_empty() {
        let allowed = "at least one instrument";
        return refused("The baseline", "empty".to_owned(), allowed, "Choose its instruments.");
    }
    for (instrument, value) in &baseline.values {
        known(connection, instrument)?;
        finite("The baseline value", value.value)?;
        finite("The scatter", value.scatter)?;
        if value.scatter < 0.0 || value.reads == 0 {
            let found = format!("{} from {} reads", value.scatter, value.reads);
            let allowed = "0 or more from at least one read";
            return refused("The scatter", found, allowed, "Check the reads.");
        }
    }
    let head: [(&str, &dyn ToSql); 2] =
        [("name", &baseline.name), ("moment_s", &baseline.moment_s)];
    let id = add(connection, "baseline", change, &head)?;
    let mut insert =
        connection.prepare_cached("INSERT INTO baseline_value VALUES (?1, ?2, ?3, ?4, ?5)")?;
    for (instrument, value) in &baseline.values {
        insert.execute((id, instrument, value.value, value.scatter, value.reads))?;
    }
    Ok(id)
}

pub(super) fn baselines(connection: &Connection) -> Result<Vec<Recorded<Baseline>>, Fault> {
    let sql = format!("SELECT {HEAD}, name, moment_s FROM baseline ORDER BY moment_s, id");
    entries(connection, &sql, [], |row| {
        let mut statement = connection.prepare_cached(
            "SELECT instrument, value, scatter, reads FROM baseline_value WHERE baseline = ?1",
        )?;
        let values = statement.query_map([row.get::<_, i64>(0)?], |row| {
            let value =
                BaselineValue { value: row.get(1)?, scatter: row.get(2)?, reads: row.get(3)? };
            Ok((row.get(0)?, value))
        })?;
        let values = values.collect::<Result<_, _>>()?;
        Ok(Baseline { name: row.get(4)?, moment_s: row.get(5)?, values })
    })
}

pub(super) fn set_correction(
    connection: &Connection,
    correction: &Correction,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    known(connection, &correction.instrument)?;
    text("The name of the correction step", &correction.step, LONGEST_NAME)?;
    add(
        connection,
        "correction",
        change,
        &[
            ("instrument", &correction.instrument),
            ("step", &correction.step),
            ("parameters", &correction.parameters.to_string()),
            ("is_on", &correction.is_on),
        ],
    )
}

/// Settings of the correction steps of an instrument, oldest first; only the newest of each step
/// up to a moment when one is given.
pub(super) fn corrections(
    connection: &Connection,
    instrument: &str,
    at_s: Option<i64>,
) -> Result<Vec<Recorded<Correction>>, Fault> {
    known(connection, instrument)?;
    let which = match at_s {
        Some(_) => {
            "id IN (SELECT max(id) FROM correction WHERE instrument = ?1 AND at_s <= ?2 GROUP BY step) ORDER BY step"
        }
        None => "?2 IS NULL ORDER BY id",
    };
    let sql = format!(
        "SELECT {HEAD}, step, parameters, is_on FROM correction WHERE instrument = ?1 AND {which}"
    );
    entries(connection, &sql, (instrument, at_s), |row| {
        let parameters: String = row.get(5)?;
        Ok(Correction {
            instrument: instrument.to_owned(),
            step: row.get(4)?,
            parameters: serde_json::from_str(&parameters)?,
            is_on: row.get(6)?,
        })
    })
}

pub(super) fn add_event(
    connection: &Connection,
    event: &Event,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    text("The kind of event", &event.kind, LONGEST_NAME)?;
    instant("The time it happened", event.happened_s)?;
    event.instrument.iter().try_for_each(|instrument| known(connection, instrument))?;
    add(
        connection,
        "event",
        change,
        &[
            ("happened_s", &event.happened_s),
            ("kind", &event.kind),
            ("instrument", &event.instrument),
            ("details", &event.details.to_string()),
        ],
    )
}

pub(super) fn events(
    connection: &Connection,
    from_s: i64,
    to_s: i64,
) -> Result<Vec<Recorded<Event>>, Fault> {
    let sql = format!(
        "SELECT {HEAD}, happened_s, kind, instrument, details FROM event
         WHERE happened_s BETWEEN ?1 AND ?2 ORDER BY happened_s, id"
    );
    entries(connection, &sql, (from_s, to_s), |row| {
        let details: String = row.get(7)?;
        Ok(Event {
            happened_s: row.get(4)?,
            kind: row.get(5)?,
            instrument: row.get(6)?,
            details: serde_json::from_str(&details)?,
        })
    })
}

pub(super) fn inhibit(
    connection: &Connection,
    instrument: &str,
    until_s: i64,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    known(connection, instrument)?;
    instant("The end of the inhibition", until_s)?;
    if until_s <= change.at_s {
        return Err(Fault::Store(StoreError::Refused {
            what: "The end of the inhibition",
            found: utc(until_s),
            allowed: format!("later than {}", utc(change.at_s)),
            remedy: "Give the moment at which the instrument counts again.",
        }));
    }
    let rest: [(&str, &dyn ToSql); 2] = [("instrument", &instrument), ("until_s", &until_s)];
    add(connection, "inhibition", change, &rest)
}

pub(super) fn lift_inhibition(
    connection: &Connection,
    inhibition: i64,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    let in_force = inhibitions(connection, Some(change.at_s))?;
    if !in_force.iter().any(|entry| entry.id == inhibition) {
        return Err(Fault::Store(StoreError::Refused {
            what: "The inhibition to lift",
            found: format!("number {inhibition}"),
            allowed: "one that is in force".to_owned(),
            remedy: "It has ended already, or was never entered.",
        }));
    }
    add(connection, "inhibition_end", change, &[("inhibition", &inhibition)])
}

/// All inhibitions, or those in force at a moment. One lifted later was in force until then.
pub(super) fn inhibitions(
    connection: &Connection,
    at_s: Option<i64>,
) -> Result<Vec<Recorded<Inhibition>>, Fault> {
    let sql = "SELECT i.id, i.who, i.at_s, i.why, i.instrument, i.until_s, e.who, e.at_s, e.why
         FROM inhibition AS i LEFT JOIN inhibition_end AS e ON e.inhibition = i.id
         WHERE ?1 IS NULL OR (i.at_s <= ?1 AND ?1 < i.until_s AND (e.at_s IS NULL OR ?1 < e.at_s))
         ORDER BY i.id";
    entries(connection, sql, [at_s], |row| {
        Ok(Inhibition { instrument: row.get(4)?, until_s: row.get(5)?, lifted: act(row, 6)? })
    })
}

pub(super) fn add_note(
    connection: &Connection,
    note: &Note,
    change: &Change<'_>,
) -> Result<i64, Fault> {
    text("The note", &note.text, LONGEST_TEXT)?;
    instant("The moment the note is about", note.moment_s)?;
    note.instrument.iter().try_for_each(|instrument| known(connection, instrument))?;
    let rest: [(&str, &dyn ToSql); 3] =
        [("moment_s", &note.moment_s), ("instrument", &note.instrument), ("text", &note.text)];
    add(connection, "note", change, &rest)
}

pub(super) fn notes(
    connection: &Connection,
    from_s: i64,
    to_s: i64,
) -> Result<Vec<Recorded<Note>>, Fault> {
    let sql = format!(
        "SELECT {HEAD}, moment_s, instrument, text FROM note
         WHERE moment_s BETWEEN ?1 AND ?2 ORDER BY moment_s, id"
    );
    entries(connection, &sql, (from_s, to_s), |row| {
        Ok(Note { moment_s: row.get(4)?, instrument: row.get(5)?, text: row.get(6)? })
    })
}
