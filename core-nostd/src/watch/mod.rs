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
//!   no value; stale, failed, out of range; load, band or rate unknown; a rule for holds outside a
//!   hold: every state stays as it is.
//!   suspect or frozen value: the upward arrow only.
//! ```
//! The trigger of an instrument is the highest of its rules. A trigger may fall over more than one
//! step at once, as far as the value allows, and rises over more than one in the same way.
//!
//! New limits ([`Watcher::take_over`]) do not lower a trigger either: it stands until a good
//! reading is behind the new clearing value.
//!
//! # Readiness
//! [`Judgement::not_ready`] is `None` only when the reading is good, every rule could be judged and
//! is at Normal with nothing pending, and the instrument is not inhibited. It is one line of the
//! list a person goes through before the next rise, not a release.
//!
//! # Example
//! A piezometer whose limits follow the load, raised by two readings in a row:
//! ```
//! use brimstead_core::instrument::{FixedList, Reading};
//! use brimstead_core::watch::*;
//!
//! let list = |values: &[f64]| FixedList::from_slice(values);
//! let curve = Curve {
//!     pressure_kpa: list(&[0.0, 150.0])?,
//!     watch: list(&[60.0, 150.0])?,
//!     review: list(&[65.0, 170.0])?,
//!     stop: list(&[70.0, 190.0])?,
//!     gross: FixedList::default(),
//! };
//! let rule = Rule {
//!     basis: Basis::Curve,
//!     hysteresis: 1.0,
//!     raising: Persistence { readings: 2, seconds: 0 },
//!     ..Rule::default()
//! };
//! let rules = FixedList::from_slice(&[rule])?;
//! let watcher = Watcher::new(&Limits { rules, curve: Some(curve), ..Limits::default() })?;
//!
//! let mut state = WatchState::default();
//! for (time_s, pore_pressure_kpa) in [(0, 104.0), (900, 108.0), (1800, 109.0)] {
//!     let observation = Observation {
//!         reading: Reading::new(time_s, pore_pressure_kpa),
//!         applied_pressure_kpa: Some(75.0), // Watch at 105, Review at 117.5 kPa
//!         expected: None,
//!         hold_since_s: None,
//!     };
//!     let (next, judgement) = watcher.judge(&state, &observation, &[])?;
//!     state = next;
//!     let governing = judgement.governing.ok_or("judged")?;
//!     match time_s {
//!         0 => assert_eq!(governing.margin_to_next.value, 1.0),
//!         900 => assert_eq!(judgement.pending, Some(Trigger::Watch)),
//!         _ => assert_eq!((judgement.trigger, governing.next), (Trigger::Watch, Trigger::Review)),
//!     }
//! }
//! # Ok::<(), Box<dyn std::error::Error>>(())
//! ```
//!
//! # Advice only
//! A trigger moves no pump and a limit is never moved here. The responsible licensed engineer
//! decides; do not rely on one instrument, one logger, one link or one person.

mod door;
mod history;
mod inhibition;
mod judge;
mod limits;
mod rule;
mod site;
mod trigger;

pub use door::{LimitError, LimitWarning};
pub use history::{Rate, RateWindow};
pub use inhibition::{Inhibition, InhibitionError, Reason};
pub use judge::{Governing, Judgement, NotReady, Observation, WatchState, Watcher};
pub use limits::{Basis, Curve, Direction, Limits, Persistence, Rule, Thresholds, When};
pub use rule::{LimitsNow, Unknown};
pub use site::{Fault, Outcome, Post, ScanSummary, Site, SiteError};
pub use trigger::Trigger;
