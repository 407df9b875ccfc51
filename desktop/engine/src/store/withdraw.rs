//! Files whose readings no longer count.

use super::error::{Fault, StoreError};
use super::history::{act, add};
use super::readings::HOUR_S;
use super::types::{Change, utc};
use rusqlite::{Connection, OptionalExtension};
use serde::Serialize;

/// What the withdrawal of a file did.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub struct Withdrawal {
    /// Number of the entry.
    pub id: i64,
    /// Readings that no longer count.
    pub withdrawn: u64,
    /// Readings of other files, kept aside until now because they differed, that count in place.
    pub in_their_place: u64,
    /// First and last time of the readings that no longer count. What was judged on them is to be
    /// judged again.
    pub times_s: Option<(i64, i64)>,
}

/// Puts the readings of a file where they do not count. They are kept, and other files that held
/// the same readings need to be imported again, since a reading is stored once.
pub(super) fn withdraw(
    connection: &Connection,
    file: i64,
    change: &Change<'_>,
) -> Result<Withdrawal, Fault> {
    refuse_unless_it_counts(connection, file)?;
    let id = add(connection, "import_withdrawal", change, &[("file", &file)])?;
    let copied = "INSERT INTO withdrawn_reading (channel, time_s, value, unit, file, line)
         SELECT channel, time_s, value, unit, file, line FROM reading WHERE file = ?1";
    let withdrawn = connection.execute(copied, [file])? as u64;
    connection.execute("DELETE FROM reading WHERE file = ?1", [file])?;
    let marks = "INSERT INTO withdrawn_not_read (channel, time_s, reason, file, line)
         SELECT channel, time_s, reason, file, line FROM not_read WHERE file = ?1";
    connection.execute(marks, [file])?;
    connection.execute("DELETE FROM not_read WHERE file = ?1", [file])?;
    // The first of those that differed and whose own file still counts.
    let in_their_place = connection.execute(
        "INSERT INTO reading (channel, time_s, value, unit, file, line)
         SELECT channel, time_s, value, unit, file, line FROM reading_conflict WHERE id IN (
             SELECT min(c.id) FROM reading_conflict AS c
             JOIN withdrawn_reading AS w
                 ON w.file = ?1 AND w.channel = c.channel AND w.time_s = c.time_s
             WHERE c.file NOT IN (SELECT file FROM import_withdrawal)
             GROUP BY c.channel, c.time_s)",
        [file],
    )? as u64;
    sum_again(connection, file)?;
    let times_s = connection.query_row(
        "SELECT min(time_s), max(time_s) FROM withdrawn_reading WHERE file = ?1",
        [file],
        |row| Ok(Option::zip(row.get(0)?, row.get(1)?)),
    )?;
    Ok(Withdrawal { id, withdrawn, in_their_place, times_s })
}

fn refuse_unless_it_counts(connection: &Connection, file: i64) -> Result<(), Fault> {
    let refused = |found, remedy| {
        let allowed = "a file whose readings count".to_owned();
        Err(Fault::Store(StoreError::Refused { what: "The file", found, allowed, remedy }))
    };
    let exists =
        connection.prepare_cached("SELECT 1 FROM import_file WHERE id = ?1")?.exists([file])?;
    if !exists {
        return refused(format!("number {file}"), "Look it up in the list of imports.");
    }
    let before = connection
        .query_row("SELECT who, at_s, why FROM import_withdrawal WHERE file = ?1", [file], |row| {
            Ok(act(row, 0))
        })
        .optional()?
        .transpose()?
        .flatten();
    match before {
        Some(act) => {
            let found = format!("withdrawn by {} at {} ({})", act.who, utc(act.at_s), act.why);
            refused(found, "Import it again if its readings are to count.")
        }
        None => Ok(()),
    }
}

/// Works out the hours and counts that had readings of the file from what counts now.
fn sum_again(connection: &Connection, file: i64) -> Result<(), Fault> {
    connection.execute_batch("CREATE TEMP TABLE hour_touched (channel INTEGER, hour INTEGER)")?;
    connection.execute(
        &format!(
            "INSERT INTO hour_touched SELECT DISTINCT channel, time_s / {HOUR_S}
             FROM withdrawn_reading WHERE file = ?1"
        ),
        [file],
    )?;
    connection.execute_batch(&format!(
        "DELETE FROM reading_hour WHERE (channel, hour) IN (SELECT channel, hour FROM hour_touched);
         INSERT INTO reading_hour
             (channel, hour, unit, count, lowest, lowest_s, highest, highest_s)
         SELECT r.channel, hour, unit, 1, value, time_s, value, time_s
         FROM hour_touched AS h
         JOIN reading AS r ON r.channel = h.channel
             AND r.time_s BETWEEN hour * {HOUR_S} AND hour * {HOUR_S} + {HOUR_S} - 1
         WHERE true
         ON CONFLICT DO UPDATE SET {ADD_TO_HOUR};
         UPDATE reading_count SET readings = (
             SELECT coalesce(sum(count), 0) FROM reading_hour AS h
             WHERE h.channel = reading_count.channel
         ) WHERE channel IN (SELECT channel FROM hour_touched);
         DROP TABLE hour_touched;",
        ADD_TO_HOUR = super::import::ADD_TO_HOUR,
    ))?;
    Ok(())
}
