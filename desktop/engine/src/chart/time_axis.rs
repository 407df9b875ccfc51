//! Where a time axis is divided: whole minutes, hours, days, weeks, months or years of the civil
//! time of the site, so that a day begins at the site's midnight also across a change of clocks.

use super::ticks::Tick;
use jiff::civil::{Date, DateTime};
use jiff::tz::TimeZone;
use jiff::{Span, Timestamp, ToSpan};

/// A step of civil time.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Step {
    Minutes(i32),
    Hours(i32),
    Days(i32),
    Months(i32),
    Years(i32),
}

use Step::{Days, Hours, Minutes, Months, Years};

/// From fine to coarse, all multiples that fit into the next larger unit.
const STEPS: [Step; 30] = [
    Minutes(1),
    Minutes(2),
    Minutes(5),
    Minutes(10),
    Minutes(15),
    Minutes(30),
    Hours(1),
    Hours(2),
    Hours(3),
    Hours(6),
    Hours(12),
    Days(1),
    Days(2),
    Days(7),
    Days(14),
    Months(1),
    Months(2),
    Months(3),
    Months(6),
    Years(1),
    Years(2),
    Years(5),
    Years(10),
    Years(20),
    Years(50),
    Years(100),
    Years(200),
    Years(500),
    Years(1000),
    Years(2000),
];

impl Step {
    fn seconds(self) -> f64 {
        match self {
            Minutes(n) => 60.0 * f64::from(n),
            Hours(n) => 3_600.0 * f64::from(n),
            Days(n) => 86_400.0 * f64::from(n),
            // Mean Gregorian month and year.
            Months(n) => 2_629_746.0 * f64::from(n),
            Years(n) => 31_556_952.0 * f64::from(n),
        }
    }

    fn span(self) -> Span {
        match self {
            Minutes(n) => n.minutes(),
            Hours(n) => n.hours(),
            Days(n) => n.days(),
            Months(n) => n.months(),
            Years(n) => n.years(),
        }
    }

    /// The last division at or before a civil time.
    fn start(self, from: DateTime) -> Option<DateTime> {
        let date = from.date();
        let first = |year: i32, month: i32| {
            Date::new(year.try_into().ok()?, month.try_into().ok()?, 1).ok()
        };
        let date = match self {
            Minutes(_) | Hours(_) => date,
            // Weeks begin on Monday; two days and two weeks are counted from one fixed Monday.
            Days(n) => {
                let monday = Date::new(2001, 1, 1).ok()?;
                let since = (date - monday).get_days();
                date.checked_sub(since.rem_euclid(n).days()).ok()?
            }
            Months(n) => first(date.year().into(), (i32::from(date.month()) - 1) / n * n + 1)?,
            Years(n) => first(i32::from(date.year()).div_euclid(n) * n, 1)?,
        };
        Some(date.at(0, 0, 0, 0))
    }

    fn label(self, at: DateTime) -> String {
        let format = match self {
            Minutes(_) | Hours(_) => "%H:%M",
            Days(_) => "%-d %b",
            Months(_) => "%b",
            Years(_) => "%Y",
        };
        at.strftime(format).to_string()
    }

    /// The second line, where something larger begins than at the division `before`.
    fn under(self, before: Option<DateTime>, at: DateTime) -> Option<String> {
        let same_year = before.is_some_and(|before| before.year() == at.year());
        let same_day = before.is_some_and(|before| before.date() == at.date());
        let format = match self {
            Minutes(_) | Hours(_) if same_day => return None,
            Minutes(_) | Hours(_) if same_year => "%-d %b",
            Minutes(_) | Hours(_) => "%-d %b %Y",
            Days(_) | Months(_) if !same_year => "%Y",
            _ => return None,
        };
        Some(at.strftime(format).to_string())
    }
}

/// Divisions of `low..=high` (seconds of Unix time), at most about `most`.
pub(crate) fn ticks(low: f64, high: f64, zone: &TimeZone, most: usize) -> Vec<Tick> {
    let least = (high - low) / most.max(1) as f64;
    // The coarsest step cuts all the years that a date can have into ten.
    let step = STEPS.into_iter().find(|step| step.seconds() >= least).unwrap_or(Years(2000));
    let Some(mut at) = civil(low, zone).and_then(|from| step.start(from)) else {
        return Vec::new();
    };
    let (mut ticks, mut before, mut last) = (Vec::new(), None, f64::NEG_INFINITY);
    // An hour that the clocks skip falls on the one after it; it is not divided twice.
    while let Ok(instant) = zone.to_timestamp(at) {
        let second = instant.as_second() as f64;
        if second > high {
            break;
        }
        if second >= low && second > last {
            ticks.push(Tick { at: second, label: step.label(at), under: step.under(before, at) });
            (before, last) = (Some(at), second);
        }
        let Ok(next) = at.checked_add(step.span()) else { break };
        at = next;
    }
    ticks
}

fn civil(second: f64, zone: &TimeZone) -> Option<DateTime> {
    Timestamp::from_second(second.floor() as i64).ok().map(|instant| zone.to_datetime(instant))
}

/// The offsets from UTC in force at the two ends: `UTC+2`, or `UTC+1 to UTC+2`.
pub(crate) fn offsets(low: f64, high: f64, zone: &TimeZone) -> String {
    let name = |second: f64| {
        let offset = zone.to_offset(Timestamp::from_second(second as i64).unwrap_or_default());
        let minutes = offset.seconds() / 60;
        let sign = if minutes < 0 { '-' } else { '+' };
        match (minutes.abs() / 60, minutes.abs() % 60) {
            (0, 0) => "UTC".to_owned(),
            (hours, 0) => format!("UTC{sign}{hours}"),
            (hours, rest) => format!("UTC{sign}{hours}:{rest:02}"),
        }
    };
    let (first, last) = (name(low), name(high));
    if first == last { first } else { format!("{first} to {last}") }
}

/// An instant in words with its zone: `23 May 2026, 14:30 (UTC+2)`.
pub fn stamp(time_s: i64, zone: &TimeZone) -> String {
    match civil(time_s as f64, zone) {
        Some(at) => {
            let offset = offsets(time_s as f64, time_s as f64, zone);
            format!("{} ({offset})", at.strftime("%-d %b %Y, %H:%M"))
        }
        None => format!("second {time_s} of Unix time"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn zone() -> TimeZone {
        TimeZone::get("Europe/Amsterdam").unwrap()
    }

    fn second(text: &str) -> f64 {
        text.parse::<Timestamp>().unwrap().as_second() as f64
    }

    fn rows(low: &str, high: &str, most: usize) -> Vec<String> {
        ticks(second(low), second(high), &zone(), most)
            .iter()
            .map(|tick| format!("{} {}", tick.label, tick.under.as_deref().unwrap_or("")))
            .map(|row| row.trim().to_owned())
            .collect()
    }

    #[test]
    fn hours_carry_the_date_where_it_changes() {
        assert_eq!(
            rows("2026-05-22T15:00:00Z", "2026-05-23T07:00:00Z", 6),
            ["18:00 22 May 2026", "21:00", "00:00 23 May", "03:00", "06:00", "09:00"]
        );
    }

    #[test]
    fn weeks_begin_on_monday_at_local_midnight() {
        let found =
            ticks(second("2026-03-16T00:00:00Z"), second("2026-04-20T00:00:00Z"), &zone(), 6);
        let labels: Vec<_> = found.iter().map(|tick| tick.label.as_str()).collect();
        assert_eq!(labels, ["23 Mar", "30 Mar", "6 Apr", "13 Apr", "20 Apr"]);
        // Clocks go forward on 29 March: midnight moves from 23:00 to 22:00 UTC.
        assert_eq!(found[0].at, second("2026-03-22T23:00:00Z"));
        assert_eq!(found[1].at, second("2026-03-29T22:00:00Z"));
    }

    #[test]
    fn the_hour_that_is_skipped_and_the_one_that_comes_twice() {
        // 29 March 2026: 02:00 does not exist. 25 October 2026: 02:00 comes twice.
        assert_eq!(
            rows("2026-03-28T23:00:00Z", "2026-03-29T04:00:00Z", 6),
            ["00:00 29 Mar 2026", "01:00", "02:00", "04:00", "05:00", "06:00"]
        );
        let autumn =
            ticks(second("2026-10-24T22:00:00Z"), second("2026-10-25T04:00:00Z"), &zone(), 6);
        assert!(autumn.windows(2).all(|pair| pair[1].at > pair[0].at));
    }

    #[test]
    fn months_carry_the_year() {
        assert_eq!(
            rows("2026-09-10T00:00:00Z", "2027-03-10T00:00:00Z", 7),
            ["Oct 2026", "Nov", "Dec", "Jan 2027", "Feb", "Mar"]
        );
    }

    #[test]
    fn decades_are_divided_too() {
        assert_eq!(
            rows("1960-02-01T00:00:00Z", "2026-01-01T00:00:00Z", 4),
            ["1980", "2000", "2020"]
        );
    }

    #[test]
    fn a_stamp_names_its_zone() {
        let at = |text: &str| stamp(second(text) as i64, &zone());
        assert_eq!(at("2026-05-23T12:30:00Z"), "23 May 2026, 14:30 (UTC+2)");
        assert_eq!(stamp(0, &TimeZone::UTC), "1 Jan 1970, 00:00 (UTC)");
        let india = TimeZone::get("Asia/Kolkata").unwrap();
        assert_eq!(stamp(0, &india), "1 Jan 1970, 05:30 (UTC+5:30)");
    }

    #[test]
    fn a_change_of_clocks_shows_in_the_offsets() {
        let found =
            offsets(second("2026-03-20T00:00:00Z"), second("2026-04-20T00:00:00Z"), &zone());
        assert_eq!(found, "UTC+1 to UTC+2");
    }
}
