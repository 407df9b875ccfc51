//! Readings against limits: the trigger of each instrument, and of a site in one scan.
//!
//! # Words
//! * **Trigger**: Normal, Watch, Review, Stop, rising. It speaks of the ground.
//! * **Data state**: good, suspect, stale and so on ([`crate::instrument::DataState`]). It speaks
//!   of the instrument. The two are never mixed.
//! * **Limit**: a threshold for each of Watch, Review and Stop, by one of four bases: multiples of
//!   the expected band, a curve over applied pressure, a fixed value, a rate. An optional fourth
//!   threshold, *gross*, skips the waiting.
//! * **Pending**: a limit is reached, and the readings or seconds asked for are not there yet.
//! * **Unconfirmed**: raised on one sight; not yet seen again, and no listed neighbour is at Watch
//!   or above.
//!
//! # One rule of one instrument
//! ```text
//!              value at or beyond the limit of T > present, on enough readings
//!              and for enough seconds; or beyond gross (to Stop, at once)
//!             +-------------------------------------------------------------+
//!             |                                                             v
//!   +--------------------+                                        +--------------------+
//!   |   lower trigger    |                                        |  T, unconfirmed    |
//!   +--------------------+                                        +--------------------+
//!             ^                                                     |             |
//!             |   good value back beyond the clearing value         |             | good value again at or
//!             |   of T (limit less hysteresis) on enough            |             | beyond the clearing value of
//!             |   readings and for enough seconds                   |             | T, or a neighbour at Watch
//!             +-----------------------------------------------------+             v
//!             |                                                   +--------------------+
//!             +---------------------------------------------------|    T, confirmed    |
//!                                                                 +--------------------+
//!
//!   no value; stale, failed, out of range; load, band or rate unknown: every state stays as it is.
//!   suspect or frozen value: the upward arrow only.
//! ```
//! The trigger of an instrument is the highest of its rules. A trigger may fall over more than one
//! step at once, as far as the value allows, and rises over more than one in the same way.
//!
//! # Readiness
//! [`Judgement::not_ready`] is `None` only when the reading is good, every rule could be judged and
//! is at Normal with nothing pending, and the instrument is not inhibited. It is one line of the
//! list a person goes through before the next rise, not a release.
//!
//! # Advice only
//! A trigger moves no pump and a limit is never moved here. The responsible licensed engineer
//! decides; do not rely on one instrument, one logger, one link or one person.

mod history;
mod inhibition;
mod judge;
mod limits;
mod rule;
mod site;
mod trigger;

pub use history::{Rate, RateWindow};
pub use inhibition::{Inhibition, InhibitionError, Reason};
pub use judge::{Governing, Judgement, NotReady, Observation, WatchState, Watcher};
pub use limits::{
    Basis, Curve, Direction, LimitError, LimitWarning, Limits, Persistence, Rule, Thresholds,
};
pub use rule::{LimitsNow, Unknown};
pub use site::{Fault, Outcome, Post, ScanSummary, Site, SiteError};
pub use trigger::Trigger;
