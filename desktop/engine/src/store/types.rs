//! Who, when and why: what every entry has.

use super::error::StoreError;
use serde::Serialize;

/// Longest name of a person, thing or file, characters.
pub(super) const LONGEST_NAME: usize = 255;
/// Longest free text, characters.
pub(super) const LONGEST_TEXT: usize = 20_000;
/// First and last instant taken: a year after a clock set back to nothing, and the year 2200.
pub(super) const INSTANTS_S: (i64, i64) = (31_536_000, 7_258_118_400);

/// Who makes an entry, when and why.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Change<'a> {
    /// Name of the person, or of the program when nobody stood behind it.
    pub who: &'a str,
    /// The moment it is entered.
    pub at_s: i64,
    /// The reason.
    pub why: &'a str,
}

/// Who did something, when and why.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Act {
    /// By whom.
    pub who: String,
    /// When.
    pub at_s: i64,
    /// Why.
    pub why: String,
}

/// An entry of the store.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Recorded<T> {
    /// Number of the entry; later ones are higher.
    pub id: i64,
    /// Who entered it.
    pub who: String,
    /// When it was entered.
    pub at_s: i64,
    /// Why.
    pub why: String,
    /// What was entered.
    pub what: T,
}

impl Change<'_> {
    pub(super) fn check(&self) -> Result<(), StoreError> {
        text("The name of who enters this", self.who, LONGEST_NAME)?;
        text("The reason", self.why, LONGEST_TEXT)?;
        instant("The moment of this entry", self.at_s)
    }
}

/// Refuses a blank text or one that is too long.
pub(super) fn text(what: &'static str, given: &str, longest: usize) -> Result<(), StoreError> {
    let length = given.chars().count();
    let found = if given.trim().is_empty() {
        "left blank".to_owned()
    } else if length > longest {
        format!("{length} characters long")
    } else {
        return Ok(());
    };
    let allowed = format!("1 to {longest} characters");
    Err(StoreError::Refused { what, found, allowed, remedy: "Write it out." })
}

pub(super) fn instant(what: &'static str, time_s: i64) -> Result<(), StoreError> {
    if is_instant(time_s) {
        return Ok(());
    }
    Err(StoreError::Refused {
        what,
        found: utc(time_s),
        allowed: format!("{} to {}", utc(INSTANTS_S.0), utc(INSTANTS_S.1)),
        remedy: "Check the clock it comes from.",
    })
}

pub(super) fn is_instant(time_s: i64) -> bool {
    (INSTANTS_S.0..=INSTANTS_S.1).contains(&time_s)
}

pub(super) fn finite(what: &'static str, value: f64) -> Result<(), StoreError> {
    if value.is_finite() {
        return Ok(());
    }
    Err(StoreError::Refused {
        what,
        found: value.to_string(),
        allowed: "a finite number".to_owned(),
        remedy: "Leave it out when it is not known.",
    })
}

/// An instant in messages.
pub(super) fn utc(time_s: i64) -> String {
    crate::time::shown(time_s, &jiff::tz::TimeZone::UTC)
}
