//! Time zones and formats of times; the only place that knows the calendar. Everywhere else an
//! instant is whole seconds of Unix time, UTC.

use jiff::fmt::strtime::{self, BrokenDownTime};
use jiff::tz::{Offset, TimeZone};
use jiff::{Timestamp, civil};

/// A zone by its IANA name.
#[must_use]
pub fn zone(name: &str) -> Option<TimeZone> {
    // The system's own zone is not a zone that can be written down.
    let zone = TimeZone::get(name).ok()?;
    (!zone.is_unknown()).then_some(zone)
}

/// A zone by its IANA name or as a fixed offset such as `+08:00`, which is how many loggers run.
#[must_use]
pub fn reading_zone(name: &str) -> Option<TimeZone> {
    let fixed = strtime::parse("%:z", name).ok().and_then(|time| time.offset());
    fixed.map(Offset::to_time_zone).or_else(|| zone(name))
}

/// The zone name that a slip of the pen could have turned into `given`.
#[must_use]
pub fn near_zone(given: &str) -> Option<String> {
    let names: Vec<String> = jiff::tz::db().available().map(|name| name.to_string()).collect();
    let candidates: Vec<&str> = names.iter().map(String::as_str).collect();
    crate::site::reader::nearest(given, &candidates).map(str::to_owned)
}

/// Whether a format can give an instant: what it writes it must read back, to the minute at least.
///
/// # Errors
/// The reason in words.
pub fn check_format(format: &str) -> Result<(), String> {
    // 23:47 on a day beyond the 12th of a month beyond the ninth: no two parts can be confused.
    let sample = civil::date(2031, 11, 23).at(23, 47, 0, 0);
    let instant = sample.to_zoned_datetime(TimeZone::UTC).map_err(|error| error.to_string())?;
    let written = strtime::format(format, &instant).map_err(|error| error.to_string())?;
    let read = BrokenDownTime::parse(format, &written).map_err(|error| error.to_string())?;
    let read_back = match read.to_datetime() {
        Ok(time) => time,
        Err(error) => match read.to_timestamp() {
            Ok(instant) => instant.to_zoned_datetime(TimeZone::UTC).datetime(),
            Err(_) => return Err(error.to_string()),
        },
    };
    if read_back == sample { Ok(()) } else { Err(format!("It turns {sample} into {read_back}.")) }
}

/// An instant that a person typed: RFC 3339, or civil time in a zone, when it stands for exactly
/// one instant there.
#[must_use]
pub fn instant(text: &str, zone: &TimeZone) -> Option<i64> {
    if let Ok(instant) = text.parse::<Timestamp>() {
        return Some(instant.as_second());
    }
    let civil: civil::DateTime = text.trim().replace(' ', "T").parse().ok()?;
    let stands_for = zone.to_ambiguous_zoned_datetime(civil);
    stands_for.unambiguous().ok().map(|zoned| zoned.timestamp().as_second())
}

/// An instant in a zone, to the minute, with its offset: for messages.
#[must_use]
pub fn shown(time_s: i64, zone: &TimeZone) -> String {
    match Timestamp::from_second(time_s) {
        Ok(instant) => {
            instant.to_zoned_datetime(zone.clone()).strftime("%Y-%m-%d %H:%M %:z").to_string()
        }
        Err(_) => format!("{time_s} s"),
    }
}
