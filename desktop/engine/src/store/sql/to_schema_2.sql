-- Schema 2: the readings of each hour in one row, so that many years are drawn without reading
-- every value and without losing a peak, and how many there are. Both are worked out from
-- `reading` and could be built again.
CREATE TABLE reading_hour (
    channel INTEGER NOT NULL REFERENCES channel (id),
    hour INTEGER NOT NULL,
    unit INTEGER NOT NULL REFERENCES unit (id),
    count INTEGER NOT NULL,
    lowest REAL NOT NULL,
    lowest_s INTEGER NOT NULL,
    highest REAL NOT NULL,
    highest_s INTEGER NOT NULL,
    PRIMARY KEY (channel, hour, unit)
) STRICT, WITHOUT ROWID;

CREATE TABLE reading_count (
    channel INTEGER PRIMARY KEY REFERENCES channel (id),
    readings INTEGER NOT NULL
) STRICT;

INSERT INTO reading_count SELECT channel, count(*) FROM reading GROUP BY channel;

-- With min() or max() alone, the other columns come from the row that holds it.
INSERT INTO reading_hour (channel, hour, unit, count, lowest, lowest_s, highest, highest_s)
SELECT low.channel, low.hour, low.unit, low.count, low.lowest, low.lowest_s, high.highest, high.highest_s
FROM (
    SELECT channel, time_s / 3600 AS hour, unit, count(*) AS count, min(value) AS lowest, time_s AS lowest_s
    FROM reading GROUP BY channel, hour, unit
) AS low
JOIN (
    SELECT channel, time_s / 3600 AS hour, unit, max(value) AS highest, time_s AS highest_s
    FROM reading GROUP BY channel, hour, unit
) AS high USING (channel, hour, unit);
