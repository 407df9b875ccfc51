//! An alarm silenced for a time, by name and with a reason, and kept in view.

use crate::config::{INHIBITION_LONGEST_S, Name, REASON_BYTES};
use core::fmt;
use serde::{Deserialize, Serialize};

/// Why an alarm is inhibited.
pub type Reason = heapless::String<REASON_BYTES>;

/// Silence for one instrument. It ends by itself; the trigger is judged and shown meanwhile, and
/// the instrument does not support the next rise.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Inhibition {
    from_s: i64,
    until_s: i64,
    by: Name,
    reason: Reason,
}

/// Why an inhibition was refused.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum InhibitionError {
    /// Nobody's name.
    NoName,
    /// No reason.
    NoReason,
    /// It would end before it begins.
    Ended,
    /// Longer than an alarm may be silenced in one go.
    TooLong {
        /// The longest, s.
        longest_s: i64,
    },
}

impl fmt::Display for InhibitionError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NoName => f.write_str("an inhibition needs the name of who ordered it."),
            Self::NoReason => f.write_str("an inhibition needs a reason."),
            Self::Ended => {
                f.write_str("the inhibition would end before it begins. Check the time.")
            }
            Self::TooLong { longest_s } => write!(
                f,
                "an alarm may be inhibited for {:.0} days at most. Renew it then, after a look.",
                *longest_s as f64 / crate::units::DAY_S
            ),
        }
    }
}

impl core::error::Error for InhibitionError {}

impl Inhibition {
    /// An inhibition from now until an instant.
    ///
    /// # Errors
    /// A missing name or reason, an end that is not after the beginning, or one too far off.
    pub fn new(
        from_s: i64,
        until_s: i64,
        by: Name,
        reason: Reason,
    ) -> Result<Self, InhibitionError> {
        if by.trim().is_empty() {
            return Err(InhibitionError::NoName);
        }
        if reason.trim().is_empty() {
            return Err(InhibitionError::NoReason);
        }
        if until_s <= from_s {
            return Err(InhibitionError::Ended);
        }
        if until_s.saturating_sub(from_s) > INHIBITION_LONGEST_S {
            return Err(InhibitionError::TooLong { longest_s: INHIBITION_LONGEST_S });
        }
        Ok(Self { from_s, until_s, by, reason })
    }

    /// When it ends.
    #[must_use]
    pub fn until_s(&self) -> i64 {
        self.until_s
    }

    /// Who ordered it.
    #[must_use]
    pub fn by(&self) -> &str {
        &self.by
    }

    /// Why.
    #[must_use]
    pub fn reason(&self) -> &str {
        &self.reason
    }

    /// Whether it holds at an instant: from its beginning until just before its end. One that was
    /// stored with an end too far off holds no longer than allowed.
    #[must_use]
    pub fn holds_at(&self, time_s: i64) -> bool {
        let longest_s = self.from_s.saturating_add(INHIBITION_LONGEST_S);
        time_s >= self.from_s && time_s < self.until_s.min(longest_s)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn ordered(from_s: i64, until_s: i64, by: &str, reason: &str) -> Result<(), InhibitionError> {
        let by = Name::try_from(by).unwrap();
        Inhibition::new(from_s, until_s, by, Reason::try_from(reason).unwrap()).map(|_| ())
    }

    #[test]
    fn silence_needs_a_name_a_reason_and_an_end() {
        assert_eq!(ordered(0, 3600, "A. Example", "cable repair"), Ok(()));
        assert_eq!(ordered(0, 3600, " ", "cable repair"), Err(InhibitionError::NoName));
        assert_eq!(ordered(0, 3600, "A. Example", ""), Err(InhibitionError::NoReason));
        assert_eq!(ordered(3600, 3600, "A. Example", "x"), Err(InhibitionError::Ended));
        let too_long = INHIBITION_LONGEST_S + 1;
        assert!(matches!(
            ordered(0, too_long, "A. Example", "x"),
            Err(InhibitionError::TooLong { .. })
        ));
    }

    #[test]
    fn it_ends_by_itself() {
        let by = Name::try_from("A. Example").unwrap();
        let reason = Reason::try_from("cable repair").unwrap();
        let inhibition = Inhibition::new(100, 200, by, reason).unwrap();
        assert!(!inhibition.holds_at(99));
        assert!(inhibition.holds_at(100) && inhibition.holds_at(199));
        assert!(!inhibition.holds_at(200));
    }
}
