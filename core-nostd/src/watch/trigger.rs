//! The four triggers.

use core::fmt;
use serde::{Deserialize, Serialize};

/// What a reading of the ground asks for, rising.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Default, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Trigger {
    /// Inside what is expected.
    #[default]
    Normal,
    /// Outside what is expected: read again, check instrument and neighbours.
    Watch,
    /// Stop raising; the responsible engineer reviews.
    Review,
    /// Stop filling, clear the area, act by the site's plan.
    Stop,
}

impl Trigger {
    /// Those that a limit can raise, rising.
    pub const RAISED: [Self; 3] = [Self::Watch, Self::Review, Self::Stop];

    /// The trigger as it reads in a message.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Normal => "Normal",
            Self::Watch => "Watch",
            Self::Review => "Review",
            Self::Stop => "Stop",
        }
    }

    /// What it asks for, in one line.
    #[must_use]
    pub const fn asks_for(self) -> &'static str {
        match self {
            Self::Normal => "Go on by the plan; the responsible engineer decides.",
            Self::Watch => "Read again; check the instrument and its neighbours.",
            Self::Review => "Stop raising; the responsible engineer reviews.",
            Self::Stop => "Stop filling, clear the area, act by the site's plan.",
        }
    }
}

impl fmt::Display for Trigger {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}
