-- Schema 1. Never edited again: what a store of this version looks like is a fact.
-- Instants are whole seconds of Unix time, UTC. In each table of history `who`, `at_s` and `why`
-- say who entered the row, when, and for what reason.

CREATE TABLE site_version (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    json TEXT NOT NULL
) STRICT;

-- Every instrument that any version of the site has named.
CREATE TABLE instrument (
    name TEXT PRIMARY KEY,
    since_version INTEGER NOT NULL REFERENCES site_version (id)
) STRICT, WITHOUT ROWID;

CREATE TABLE life_event (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    instrument TEXT NOT NULL REFERENCES instrument (name),
    happened_s INTEGER NOT NULL,
    what TEXT NOT NULL
) STRICT;
CREATE INDEX life_event_by_instrument ON life_event (instrument, happened_s);

CREATE TABLE baseline (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    name TEXT NOT NULL UNIQUE,
    moment_s INTEGER NOT NULL
) STRICT;

CREATE TABLE baseline_value (
    baseline INTEGER NOT NULL REFERENCES baseline (id),
    instrument TEXT NOT NULL REFERENCES instrument (name),
    value REAL NOT NULL,
    scatter REAL NOT NULL CHECK (scatter >= 0),
    reads INTEGER NOT NULL CHECK (reads >= 1),
    PRIMARY KEY (baseline, instrument)
) STRICT, WITHOUT ROWID;

CREATE TABLE correction (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    instrument TEXT NOT NULL REFERENCES instrument (name),
    step TEXT NOT NULL,
    parameters TEXT NOT NULL,
    is_on INTEGER NOT NULL CHECK (is_on IN (0, 1))
) STRICT;
CREATE INDEX correction_by_step ON correction (instrument, step, id);

CREATE TABLE limit_version (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    effective_from_s INTEGER NOT NULL,
    loosens INTEGER NOT NULL CHECK (loosens IN (0, 1)),
    json TEXT NOT NULL
) STRICT;

CREATE TABLE limit_approval (
    version INTEGER NOT NULL REFERENCES limit_version (id),
    approver TEXT NOT NULL,
    PRIMARY KEY (version, approver)
) STRICT, WITHOUT ROWID;

CREATE TABLE event (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    happened_s INTEGER NOT NULL,
    kind TEXT NOT NULL,
    instrument TEXT REFERENCES instrument (name),
    details TEXT NOT NULL
) STRICT;
CREATE INDEX event_by_time ON event (happened_s);

CREATE TABLE inhibition (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    instrument TEXT NOT NULL REFERENCES instrument (name),
    until_s INTEGER NOT NULL,
    CHECK (until_s > at_s)
) STRICT;

-- An inhibition lifted before its time.
CREATE TABLE inhibition_end (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    inhibition INTEGER NOT NULL UNIQUE REFERENCES inhibition (id)
) STRICT;

CREATE TABLE note (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    moment_s INTEGER NOT NULL,
    instrument TEXT REFERENCES instrument (name),
    text TEXT NOT NULL
) STRICT;
CREATE INDEX note_by_time ON note (moment_s);

CREATE TABLE decision (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    decision TEXT NOT NULL CHECK (decision IN ('continue', 'hold', 'lower', 'empty')),
    moment_s INTEGER NOT NULL,
    liquid_level_m REAL,
    applied_pressure_kpa REAL,
    data_age_s INTEGER,
    site_version INTEGER NOT NULL REFERENCES site_version (id),
    limit_version INTEGER REFERENCES limit_version (id),
    previous_hash TEXT NOT NULL,
    hash TEXT NOT NULL
) STRICT;

CREATE TABLE import_file (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    name TEXT NOT NULL,
    hash TEXT NOT NULL,
    report TEXT NOT NULL
) STRICT;
CREATE INDEX import_file_by_hash ON import_file (hash);

-- What became of a file; written with it in one transaction.
CREATE TABLE import_outcome (
    file INTEGER PRIMARY KEY REFERENCES import_file (id),
    outcome TEXT NOT NULL
) STRICT;

-- Whatever gives readings. An instrument whose raw digits and values both stand in files has two
-- channels; a channel that is no instrument is the barometer or a temperature.
CREATE TABLE channel (
    id INTEGER PRIMARY KEY,
    kind TEXT NOT NULL CHECK (kind IN ('instrument', 'channel')),
    name TEXT NOT NULL,
    signal TEXT NOT NULL CHECK (signal IN ('digits', 'engineering')),
    UNIQUE (kind, name, signal)
) STRICT;

CREATE TABLE unit (
    id INTEGER PRIMARY KEY,
    word TEXT NOT NULL UNIQUE
) STRICT;

-- Raw values as read, in the unit of the file.
CREATE TABLE reading (
    channel INTEGER NOT NULL REFERENCES channel (id),
    time_s INTEGER NOT NULL,
    value REAL NOT NULL,
    unit INTEGER NOT NULL REFERENCES unit (id),
    file INTEGER NOT NULL REFERENCES import_file (id),
    line INTEGER NOT NULL,
    PRIMARY KEY (channel, time_s)
) STRICT, WITHOUT ROWID;

-- Times at which a row stood in a file but no value.
CREATE TABLE not_read (
    channel INTEGER NOT NULL REFERENCES channel (id),
    time_s INTEGER NOT NULL,
    reason TEXT NOT NULL CHECK (reason IN ('missing', 'refused')),
    file INTEGER NOT NULL REFERENCES import_file (id),
    line INTEGER NOT NULL,
    PRIMARY KEY (channel, time_s)
) STRICT, WITHOUT ROWID;

-- Readings that differ from one held already for the same channel and time.
CREATE TABLE reading_conflict (
    id INTEGER PRIMARY KEY,
    channel INTEGER NOT NULL REFERENCES channel (id),
    time_s INTEGER NOT NULL,
    value REAL NOT NULL,
    unit INTEGER NOT NULL REFERENCES unit (id),
    file INTEGER NOT NULL REFERENCES import_file (id),
    line INTEGER NOT NULL
) STRICT;
CREATE INDEX reading_conflict_by_time ON reading_conflict (channel, time_s);

-- A file whose readings no longer count, for a reason: the wrong unit was confirmed, say.
CREATE TABLE import_withdrawal (
    id INTEGER PRIMARY KEY,
    who TEXT NOT NULL,
    at_s INTEGER NOT NULL,
    why TEXT NOT NULL,
    file INTEGER NOT NULL UNIQUE REFERENCES import_file (id)
) STRICT;

-- Where the readings of such a file are kept, and its marks of times without a value.
CREATE TABLE withdrawn_reading (
    channel INTEGER NOT NULL REFERENCES channel (id),
    time_s INTEGER NOT NULL,
    value REAL NOT NULL,
    unit INTEGER NOT NULL REFERENCES unit (id),
    file INTEGER NOT NULL REFERENCES import_withdrawal (file),
    line INTEGER NOT NULL,
    PRIMARY KEY (file, channel, time_s)
) STRICT, WITHOUT ROWID;

CREATE TABLE withdrawn_not_read (
    channel INTEGER NOT NULL REFERENCES channel (id),
    time_s INTEGER NOT NULL,
    reason TEXT NOT NULL,
    file INTEGER NOT NULL REFERENCES import_withdrawal (file),
    line INTEGER NOT NULL,
    PRIMARY KEY (file, channel, time_s)
) STRICT, WITHOUT ROWID;

-- What is written stays: a row is added, never changed and never taken away. Readings leave their
-- table only for the one of those withdrawn.
CREATE TRIGGER site_version_no_update BEFORE UPDATE ON site_version BEGIN SELECT RAISE(ABORT, 'site_version is history and is only added to'); END;
CREATE TRIGGER site_version_no_delete BEFORE DELETE ON site_version BEGIN SELECT RAISE(ABORT, 'site_version is history and is only added to'); END;
CREATE TRIGGER instrument_no_update BEFORE UPDATE ON instrument BEGIN SELECT RAISE(ABORT, 'instrument is history and is only added to'); END;
CREATE TRIGGER instrument_no_delete BEFORE DELETE ON instrument BEGIN SELECT RAISE(ABORT, 'instrument is history and is only added to'); END;
CREATE TRIGGER life_event_no_update BEFORE UPDATE ON life_event BEGIN SELECT RAISE(ABORT, 'life_event is history and is only added to'); END;
CREATE TRIGGER life_event_no_delete BEFORE DELETE ON life_event BEGIN SELECT RAISE(ABORT, 'life_event is history and is only added to'); END;
CREATE TRIGGER baseline_no_update BEFORE UPDATE ON baseline BEGIN SELECT RAISE(ABORT, 'baseline is history and is only added to'); END;
CREATE TRIGGER baseline_no_delete BEFORE DELETE ON baseline BEGIN SELECT RAISE(ABORT, 'baseline is history and is only added to'); END;
CREATE TRIGGER baseline_value_no_update BEFORE UPDATE ON baseline_value BEGIN SELECT RAISE(ABORT, 'baseline_value is history and is only added to'); END;
CREATE TRIGGER baseline_value_no_delete BEFORE DELETE ON baseline_value BEGIN SELECT RAISE(ABORT, 'baseline_value is history and is only added to'); END;
CREATE TRIGGER correction_no_update BEFORE UPDATE ON correction BEGIN SELECT RAISE(ABORT, 'correction is history and is only added to'); END;
CREATE TRIGGER correction_no_delete BEFORE DELETE ON correction BEGIN SELECT RAISE(ABORT, 'correction is history and is only added to'); END;
CREATE TRIGGER limit_version_no_update BEFORE UPDATE ON limit_version BEGIN SELECT RAISE(ABORT, 'limit_version is history and is only added to'); END;
CREATE TRIGGER limit_version_no_delete BEFORE DELETE ON limit_version BEGIN SELECT RAISE(ABORT, 'limit_version is history and is only added to'); END;
CREATE TRIGGER limit_approval_no_update BEFORE UPDATE ON limit_approval BEGIN SELECT RAISE(ABORT, 'limit_approval is history and is only added to'); END;
CREATE TRIGGER limit_approval_no_delete BEFORE DELETE ON limit_approval BEGIN SELECT RAISE(ABORT, 'limit_approval is history and is only added to'); END;
CREATE TRIGGER event_no_update BEFORE UPDATE ON event BEGIN SELECT RAISE(ABORT, 'event is history and is only added to'); END;
CREATE TRIGGER event_no_delete BEFORE DELETE ON event BEGIN SELECT RAISE(ABORT, 'event is history and is only added to'); END;
CREATE TRIGGER inhibition_no_update BEFORE UPDATE ON inhibition BEGIN SELECT RAISE(ABORT, 'inhibition is history and is only added to'); END;
CREATE TRIGGER inhibition_no_delete BEFORE DELETE ON inhibition BEGIN SELECT RAISE(ABORT, 'inhibition is history and is only added to'); END;
CREATE TRIGGER inhibition_end_no_update BEFORE UPDATE ON inhibition_end BEGIN SELECT RAISE(ABORT, 'inhibition_end is history and is only added to'); END;
CREATE TRIGGER inhibition_end_no_delete BEFORE DELETE ON inhibition_end BEGIN SELECT RAISE(ABORT, 'inhibition_end is history and is only added to'); END;
CREATE TRIGGER note_no_update BEFORE UPDATE ON note BEGIN SELECT RAISE(ABORT, 'note is history and is only added to'); END;
CREATE TRIGGER note_no_delete BEFORE DELETE ON note BEGIN SELECT RAISE(ABORT, 'note is history and is only added to'); END;
CREATE TRIGGER decision_no_update BEFORE UPDATE ON decision BEGIN SELECT RAISE(ABORT, 'decision is history and is only added to'); END;
CREATE TRIGGER decision_no_delete BEFORE DELETE ON decision BEGIN SELECT RAISE(ABORT, 'decision is history and is only added to'); END;
CREATE TRIGGER import_file_no_update BEFORE UPDATE ON import_file BEGIN SELECT RAISE(ABORT, 'import_file is history and is only added to'); END;
CREATE TRIGGER import_file_no_delete BEFORE DELETE ON import_file BEGIN SELECT RAISE(ABORT, 'import_file is history and is only added to'); END;
CREATE TRIGGER import_outcome_no_update BEFORE UPDATE ON import_outcome BEGIN SELECT RAISE(ABORT, 'import_outcome is history and is only added to'); END;
CREATE TRIGGER import_outcome_no_delete BEFORE DELETE ON import_outcome BEGIN SELECT RAISE(ABORT, 'import_outcome is history and is only added to'); END;
CREATE TRIGGER channel_no_update BEFORE UPDATE ON channel BEGIN SELECT RAISE(ABORT, 'channel is history and is only added to'); END;
CREATE TRIGGER channel_no_delete BEFORE DELETE ON channel BEGIN SELECT RAISE(ABORT, 'channel is history and is only added to'); END;
CREATE TRIGGER unit_no_update BEFORE UPDATE ON unit BEGIN SELECT RAISE(ABORT, 'unit is history and is only added to'); END;
CREATE TRIGGER unit_no_delete BEFORE DELETE ON unit BEGIN SELECT RAISE(ABORT, 'unit is history and is only added to'); END;
CREATE TRIGGER reading_no_update BEFORE UPDATE ON reading BEGIN SELECT RAISE(ABORT, 'reading is history and is only added to'); END;
CREATE TRIGGER reading_no_delete BEFORE DELETE ON reading WHEN NOT EXISTS (
    SELECT 1 FROM withdrawn_reading WHERE file = OLD.file AND channel = OLD.channel AND time_s = OLD.time_s AND value = OLD.value AND unit = OLD.unit AND line = OLD.line
) BEGIN SELECT RAISE(ABORT, 'reading is history and is only added to'); END;
CREATE TRIGGER not_read_no_update BEFORE UPDATE ON not_read BEGIN SELECT RAISE(ABORT, 'not_read is history and is only added to'); END;
CREATE TRIGGER not_read_no_delete BEFORE DELETE ON not_read WHEN NOT EXISTS (
    SELECT 1 FROM withdrawn_not_read WHERE file = OLD.file AND channel = OLD.channel AND time_s = OLD.time_s AND reason = OLD.reason AND line = OLD.line
) BEGIN SELECT RAISE(ABORT, 'not_read is history and is only added to'); END;
CREATE TRIGGER reading_conflict_no_update BEFORE UPDATE ON reading_conflict BEGIN SELECT RAISE(ABORT, 'reading_conflict is history and is only added to'); END;
CREATE TRIGGER reading_conflict_no_delete BEFORE DELETE ON reading_conflict BEGIN SELECT RAISE(ABORT, 'reading_conflict is history and is only added to'); END;
CREATE TRIGGER import_withdrawal_no_update BEFORE UPDATE ON import_withdrawal BEGIN SELECT RAISE(ABORT, 'import_withdrawal is history and is only added to'); END;
CREATE TRIGGER import_withdrawal_no_delete BEFORE DELETE ON import_withdrawal BEGIN SELECT RAISE(ABORT, 'import_withdrawal is history and is only added to'); END;
CREATE TRIGGER withdrawn_reading_no_update BEFORE UPDATE ON withdrawn_reading BEGIN SELECT RAISE(ABORT, 'withdrawn_reading is history and is only added to'); END;
CREATE TRIGGER withdrawn_reading_no_delete BEFORE DELETE ON withdrawn_reading BEGIN SELECT RAISE(ABORT, 'withdrawn_reading is history and is only added to'); END;
CREATE TRIGGER withdrawn_not_read_no_update BEFORE UPDATE ON withdrawn_not_read BEGIN SELECT RAISE(ABORT, 'withdrawn_not_read is history and is only added to'); END;
CREATE TRIGGER withdrawn_not_read_no_delete BEFORE DELETE ON withdrawn_not_read BEGIN SELECT RAISE(ABORT, 'withdrawn_not_read is history and is only added to'); END;
