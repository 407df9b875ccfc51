//! All instruments of a site in one scan.

use super::{Inhibition, Judgement, NotReady, Observation, Trigger, WatchState, Watcher};
use crate::instrument::{DataState, Doubt, OutOfOrder};
use core::fmt;
use serde::{Deserialize, Serialize};

/// One instrument of a site.
#[derive(Debug, Clone, Copy)]
pub struct Post<'a> {
    /// Its number on the site.
    pub id: u16,
    /// Its checked limits.
    pub watcher: &'a Watcher,
    /// The numbers of those that can confirm it: near it, and of the same or another kind.
    pub neighbours: &'a [u16],
    /// Whether filling cannot go on without it.
    pub critical: bool,
    /// Its inhibition, if any.
    pub inhibition: Option<&'a Inhibition>,
}

/// Why instruments do not make a site, or a scan does not fit it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SiteError {
    /// Two instruments with one number.
    Twice {
        /// The number.
        id: u16,
    },
    /// A neighbour that is not on the site, or the instrument itself.
    Neighbour {
        /// The instrument.
        id: u16,
        /// The neighbour it lists.
        neighbour: u16,
    },
    /// A slice that has not one place for each instrument.
    Length {
        /// Instruments of the site.
        instruments: usize,
        /// Places given.
        given: usize,
    },
}

impl fmt::Display for SiteError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Twice { id } => write!(f, "two instruments have the number {id}."),
            Self::Neighbour { id, neighbour } => write!(
                f,
                "instrument {id} lists {neighbour} as a neighbour, which is not another instrument \
                 of this site."
            ),
            Self::Length { instruments, given } => {
                write!(f, "the site has {instruments} instruments and the scan {given} places.")
            }
        }
    }
}

impl core::error::Error for SiteError {}

/// A scan in a few numbers. The list of ground triggers and the list of equipment faults are two
/// lists: see [`Site::faults`].
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
pub struct ScanSummary {
    /// Highest trigger of all, held ones included.
    pub highest: Trigger,
    /// The lowest number of an instrument that has it.
    pub highest_at: Option<u16>,
    /// Highest trigger that is confirmed.
    pub highest_confirmed: Trigger,
    /// Instruments at Normal, Watch, Review, Stop.
    pub at_trigger: [u16; 4],
    /// Instruments whose reading is not good, or came out of order.
    pub faults: u16,
    /// Those among them that filling cannot go on without.
    pub critical_faults: u16,
    /// Instruments that are inhibited now.
    pub inhibited: u16,
    /// The most pressing reason against the next rise, and the lowest number it is at. None when
    /// no instrument objects; a site without instruments always has one.
    pub not_ready: Option<(u16, NotReady)>,
}

impl ScanSummary {
    /// Whether no instrument objects to the next rise. The release is a person's.
    #[must_use]
    pub fn ready_for_next_rise(&self) -> bool {
        self.not_ready.is_none() && self.highest_at.is_some()
    }
}

/// An instrument that is not giving good readings: an affair of the technician.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Fault {
    /// The instrument.
    pub id: u16,
    /// Its data state; not read when its reading was refused.
    pub state: DataState,
    /// Why.
    pub doubt: Option<Doubt>,
    /// Since when no good reading came.
    pub since_s: i64,
    /// Whether filling cannot go on without it.
    pub critical: bool,
}

/// What the judging of one instrument gave.
pub type Outcome = Result<Judgement, OutOfOrder>;

/// The checked instruments of a site.
#[derive(Debug, Clone, Copy)]
pub struct Site<'a> {
    posts: &'a [Post<'a>],
}

impl<'a> Site<'a> {
    /// Checks numbers and neighbours.
    ///
    /// # Errors
    /// A number given twice, or a neighbour that is not another instrument of the site.
    pub fn new(posts: &'a [Post<'a>]) -> Result<Self, SiteError> {
        for (index, post) in posts.iter().enumerate() {
            if posts.iter().skip(index.saturating_add(1)).any(|other| other.id == post.id) {
                return Err(SiteError::Twice { id: post.id });
            }
            for neighbour in post.neighbours {
                let known = posts.iter().any(|other| other.id == *neighbour);
                if !known || *neighbour == post.id {
                    return Err(SiteError::Neighbour { id: post.id, neighbour: *neighbour });
                }
            }
        }
        Ok(Self { posts })
    }

    /// Judges one scan. All slices run parallel to the instruments; states are taken from one scan
    /// to the next in place, and outcomes are written over.
    ///
    /// First every instrument is judged by itself; then each that is raised is confirmed where a
    /// listed neighbour is at Watch or above on a good reading of this scan. Nothing else passes
    /// between instruments, so their order makes no difference. A reading out of order is refused
    /// for its instrument alone: its trigger stays, and it counts as a fault.
    ///
    /// # Errors
    /// A slice of another length; nothing is then changed.
    pub fn judge_scan(
        &self,
        observations: &[Observation],
        states: &mut [WatchState],
        outcomes: &mut [Outcome],
    ) -> Result<ScanSummary, SiteError> {
        for given in [observations.len(), states.len(), outcomes.len()] {
            if given != self.posts.len() {
                return Err(SiteError::Length { instruments: self.posts.len(), given });
            }
        }
        let places = self.posts.iter().zip(observations);
        for ((post, observation), (state, outcome)) in
            places.zip(states.iter_mut().zip(outcomes.iter_mut()))
        {
            *outcome = post.watcher.judge(state, observation, &[]).map(|(next, judgement)| {
                *state = next;
                post.inhibition.map_or(judgement, |inhibition| judgement.inhibited(inhibition))
            });
        }
        self.confirm(states, outcomes);
        Ok(self.summary(states, outcomes))
    }

    fn confirm(&self, states: &mut [WatchState], outcomes: &mut [Outcome]) {
        for (index, (post, state)) in self.posts.iter().zip(states.iter_mut()).enumerate() {
            if !post.neighbours.iter().any(|id| self.speaks(*id, outcomes)) {
                continue;
            }
            if let Some(Ok(judgement)) = outcomes.get_mut(index) {
                state.confirm_by_neighbour();
                judgement.confirmed = judgement.trigger > Trigger::Normal;
            }
        }
    }

    /// Whether an instrument is at Watch or above on a good reading of this scan.
    fn speaks(&self, id: u16, outcomes: &[Outcome]) -> bool {
        let found = self.posts.iter().zip(outcomes).find(|(post, _)| post.id == id);
        matches!(found, Some((_, Ok(judgement)))
            if judgement.trigger >= Trigger::Watch && judgement.data_state == DataState::Good)
    }

    fn summary(&self, states: &[WatchState], outcomes: &[Outcome]) -> ScanSummary {
        let mut summary = ScanSummary::default();
        for ((post, state), outcome) in self.posts.iter().zip(states).zip(outcomes) {
            summary.add(post, state.trigger(), outcome);
        }
        summary
    }

    /// The equipment faults of a scan, in the order of the instruments.
    pub fn faults(&self, outcomes: &[Outcome]) -> impl Iterator<Item = Fault> {
        self.posts.iter().zip(outcomes).filter_map(|(post, outcome)| fault(post, outcome))
    }
}

fn fault(post: &Post<'_>, outcome: &Outcome) -> Option<Fault> {
    let (state, doubt, since_s) = match outcome {
        Ok(judgement) if judgement.data_state == DataState::Good => return None,
        Ok(judgement) => (
            judgement.data_state,
            judgement.doubt,
            judgement.held_since_s.unwrap_or(judgement.time_s),
        ),
        Err(refused) => (DataState::NotRead, None, refused.last_s),
    };
    Some(Fault { id: post.id, state, doubt, since_s, critical: post.critical })
}

impl ScanSummary {
    fn add(&mut self, post: &Post<'_>, trigger: Trigger, outcome: &Outcome) {
        let here = (trigger, core::cmp::Reverse(post.id));
        if self.highest_at.is_none_or(|at| here > (self.highest, core::cmp::Reverse(at))) {
            (self.highest, self.highest_at) = (trigger, Some(post.id));
        }
        if let Some(count) = self.at_trigger.get_mut(usize::from(trigger as u8)) {
            *count = count.saturating_add(1);
        }
        if let Some(fault) = fault(post, outcome) {
            self.faults = self.faults.saturating_add(1);
            self.critical_faults = self.critical_faults.saturating_add(u16::from(fault.critical));
        }
        let reason = match outcome {
            Ok(judgement) => {
                if judgement.confirmed {
                    self.highest_confirmed = self.highest_confirmed.max(trigger);
                }
                let inhibited = judgement.inhibited_until_s.is_some();
                self.inhibited = self.inhibited.saturating_add(u16::from(inhibited));
                judgement.not_ready
            }
            Err(_) => Some(match trigger {
                Trigger::Normal => NotReady::OutOfOrder,
                _ => NotReady::Raised { trigger },
            }),
        };
        if let Some(reason) = reason {
            let rank = (reason.rank(), post.id);
            if self.not_ready.is_none_or(|(id, held)| rank < (held.rank(), id)) {
                self.not_ready = Some((post.id, reason));
            }
        }
    }
}
