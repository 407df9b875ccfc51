//! A text of a file to an instant.

use super::report::Reason;
use jiff::Timestamp;
use jiff::civil::DateTime;
use jiff::fmt::strtime::BrokenDownTime;
use jiff::tz::{AmbiguousOffset, Offset, TimeZone};

/// Format and zone of the times of a file.
#[derive(Debug)]
pub(super) struct Clock<'f> {
    format: &'f str,
    zone: TimeZone,
    /// A zone whose offset never changes needs no search for each row.
    fixed: Option<Offset>,
}

impl<'f> Clock<'f> {
    pub(super) fn new(format: &'f str, zone: TimeZone) -> Self {
        let fixed = zone.to_fixed_offset().ok();
        Self { format, zone, fixed }
    }

    /// The instant of a text, in whole seconds (fractions are cut off).
    pub(super) fn instant(&self, text: &[u8]) -> Result<i64, Reason> {
        let time = BrokenDownTime::parse(self.format, text).map_err(|_| Reason::Time)?;
        // A text with its own offset or in Unix time needs no zone.
        let instant = if let Some(instant) = time.timestamp() {
            Ok(instant)
        } else if time.offset().is_some() {
            time.to_timestamp().map_err(|_| Reason::Time)
        } else {
            self.in_zone(time.to_datetime().map_err(|_| Reason::Time)?)
        };
        instant.map(Timestamp::as_second)
    }

    fn in_zone(&self, civil: DateTime) -> Result<Timestamp, Reason> {
        let offset = match self.fixed {
            Some(offset) => offset,
            None => match self.zone.to_ambiguous_timestamp(civil).offset() {
                AmbiguousOffset::Unambiguous { offset } => offset,
                AmbiguousOffset::Gap { .. } => return Err(Reason::TimeSkipped),
                AmbiguousOffset::Fold { .. } => return Err(Reason::TimeTwice),
            },
        };
        offset.to_timestamp(civil).map_err(|_| Reason::Time)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn at(format: &str, zone: &str, text: &str) -> Result<i64, Reason> {
        Clock::new(format, crate::time::reading_zone(zone).unwrap()).instant(text.as_bytes())
    }

    // Instants checked with the command `date -u -d @...`.
    #[test]
    fn zone_and_offset_are_respected() {
        let civil = "%d.%m.%Y %H:%M";
        assert_eq!(at(civil, "UTC", "02.03.2026 08:00"), Ok(1_772_438_400));
        assert_eq!(at(civil, "Europe/Riga", "02.03.2026 08:00"), Ok(1_772_431_200));
        assert_eq!(at(civil, "+02:00", "02.03.2026 08:00"), Ok(1_772_431_200));
        assert_eq!(at(civil, "Etc/GMT-2", "02.03.2026 08:00"), Ok(1_772_431_200));
        assert_eq!(
            at("%Y-%m-%dT%H:%M:%S%:z", "UTC", "2026-03-02T08:00:00+02:00"),
            Ok(1_772_431_200)
        );
        assert_eq!(at("%s", "Europe/Riga", "1772431200"), Ok(1_772_431_200));
        assert_eq!(at("%Y-%m-%dT%H:%M:%S%.f", "UTC", "2026-03-02T08:00:00.75"), Ok(1_772_438_400));
    }

    #[test]
    fn doubled_and_missing_local_hours_are_not_guessed() {
        // Clocks in Riga went forward on 29 March 2026 at 03:00 and go back on 25 October at 04:00.
        let civil = "%Y-%m-%d %H:%M";
        assert_eq!(at(civil, "Europe/Riga", "2026-03-29 03:30"), Err(Reason::TimeSkipped));
        assert_eq!(at(civil, "Europe/Riga", "2026-10-25 03:30"), Err(Reason::TimeTwice));
        assert!(at(civil, "Europe/Riga", "2026-10-25 04:00").is_ok());
        assert!(at(civil, "+02:00", "2026-10-25 03:30").is_ok(), "a fixed offset has neither");
    }

    #[test]
    fn what_is_no_time_is_refused() {
        for text in ["", "2026-02-30 08:00", "2026-03-02 24:30", "yesterday", "2026-03-02 08:00 x"]
        {
            assert_eq!(at("%Y-%m-%d %H:%M", "UTC", text), Err(Reason::Time), "{text}");
        }
    }
}
