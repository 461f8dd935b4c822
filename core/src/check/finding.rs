//! What a check found: how much it weighs, where in the file, what is wrong, and what to do.

use crate::scenario::Place;

/// How much a finding weighs. The heaviest comes first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Weight {
    /// The show is not ready.
    Failure,
    /// The show can be given; an audience may notice.
    Warning,
    /// Worth knowing.
    Note,
}

/// What a finding is about.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Topic {
    /// How well the paths are integrated.
    Error,
    /// How much hangs on the last digits of stated numbers.
    Sensitivity,
    /// Whether events come when the beats say.
    Event,
    /// Close encounters and contacts.
    Encounter,
    /// What moves too fast, stands still, or is out of the picture.
    Motion,
    /// Memory and time of a frame.
    Cost,
    /// What can't be read from the back row, or not in time.
    Reading,
    /// What makes people ill: turning, panning, flashing.
    Comfort,
}

impl Weight {
    /// Its name, for programs.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Failure => "failure",
            Self::Warning => "warning",
            Self::Note => "note",
        }
    }
}

impl Topic {
    /// Its name, for programs.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Error => "error",
            Self::Sensitivity => "sensitivity",
            Self::Event => "event",
            Self::Encounter => "encounter",
            Self::Motion => "motion",
            Self::Cost => "cost",
            Self::Reading => "reading",
            Self::Comfort => "comfort",
        }
    }
}

/// One thing that a check found.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Finding {
    /// How much it weighs.
    pub weight: Weight,
    /// What it is about.
    pub topic: Topic,
    /// Where it stands in the text.
    pub place: Place,
    /// What is wrong, as one sentence without a full stop.
    pub wrong: String,
    /// What to do, as one sentence without a full stop.
    pub remedy: String,
}
