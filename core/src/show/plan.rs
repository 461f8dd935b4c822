//! When each beat starts, in show time and in model time.

use crate::scenario::Then;

/// The plan of a whole show.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Plan {
    /// The beats, in order.
    pub beats: Vec<PlannedBeat>,
}

/// A beat with its times.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PlannedBeat {
    /// Show time at which it starts, seconds from the start of the show.
    pub show_s: f64,
    /// Show time planned for it, seconds.
    pub lasts_s: f64,
    /// Model time at which it starts, seconds from the scenario's start.
    pub from_s: f64,
    /// Model time at which it ends, seconds from the scenario's start.
    pub until_s: f64,
    /// Pace once it has eased in, model seconds per show second.
    pub pace: f64,
    /// The event that it reaches: show seconds into the beat and model time.
    pub cue: Option<Cue>,
    /// What happens when its time is over.
    pub then: Then,
}

/// An event that a beat reaches.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Cue {
    /// Show time into the beat, seconds.
    pub at_s: f64,
    /// Model time, seconds from the scenario's start.
    pub model_s: f64,
}
