//! When each beat starts, in show time and in model time.

use super::pacing::Pacing;
use crate::scenario::{EventRef, Scenario, Then};
use crate::time::Epoch;

/// The plan of a whole show.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Plan {
    /// The beats, in order.
    pub beats: Vec<PlannedBeat>,
    /// First model time that the clock may come to, seconds from the scenario's start.
    pub covers_from_s: f64,
    /// Last model time that the clock may come to, seconds from the scenario's start.
    pub covers_until_s: f64,
}

/// Whether a beat's model time follows from the beat before.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Run {
    /// It goes on from there.
    GoesOn,
    /// It starts at a time of its own.
    Anew,
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
    /// The event that it reaches.
    pub cue: Option<Cue>,
    /// What its clock was told.
    pub way: Way,
    /// What happens when its time is over.
    pub then: Then,
    /// Whether its model time follows from the beat before.
    pub run: Run,
    /// Whether sectors that the beat before began go on in it (same marks, same run).
    pub keeps_sectors: bool,
}

/// How the pace of a planned beat comes about.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Way {
    /// It stands still.
    Still,
    /// Stated.
    Pace,
    /// From a span of model time.
    Span(f64),
    /// From the event of [`PlannedBeat::cue`].
    Cue,
}

/// An event that a beat reaches.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Cue {
    /// Show time into the beat, seconds.
    pub at_s: f64,
    /// Model time, seconds from the scenario's start.
    pub model_s: f64,
    /// Which event.
    pub event: EventRef,
}

impl PlannedBeat {
    /// How model time runs when the beat is entered at a model time with a pace, after `lead_s` of its show time
    /// went into getting there: what it has to reach by a stated time is still reached by then.
    pub fn pacing(&self, from_s: f64, first_pace: f64, lead_s: f64) -> Pacing {
        let hold = self.then == Then::Hold;
        let left = |show_s: f64| (show_s - lead_s).max(0.2 * show_s);
        match (self.way, self.cue) {
            (Way::Cue, Some(cue)) => {
                let at_s = left(cue.at_s);
                let pacing = Pacing::covering(from_s, first_pace, cue.model_s - from_s, at_s, false);
                if hold { pacing.then_hold(at_s, left(self.lasts_s)) } else { pacing }
            }
            (Way::Span(span_s), _) => Pacing::covering(from_s, first_pace, span_s, left(self.lasts_s), hold),
            (Way::Pace, _) => {
                Pacing::steady(from_s, first_pace, self.pace, hold.then_some(left(self.lasts_s)))
            }
            _ => Pacing::still(from_s),
        }
    }

    /// Whether the beat can be entered at a model time past its planned start and still do what it says.
    pub fn can_start_at(&self, model_s: f64) -> bool {
        match self.cue {
            // A tenth of the way has to be left, or the picture would all but stand still up to the event.
            Some(cue) => cue.model_s - model_s > 0.1 * (cue.model_s - self.from_s),
            None => true,
        }
    }
}

impl Plan {
    /// Show time planned for the whole show, seconds.
    pub fn lasts_s(&self) -> f64 {
        self.beats.last().map_or(0.0, |beat| beat.show_s + beat.lasts_s)
    }

    /// Model time from which the model runs on without a cut into a beat, seconds.
    pub fn run_from_s(&self, beat: usize) -> f64 {
        self.first_of(beat, |b| b.run == Run::GoesOn)
    }

    /// Model time at which a beat's sectors start, seconds.
    pub fn sectors_from_s(&self, beat: usize) -> f64 {
        self.first_of(beat, |b| b.keeps_sectors)
    }

    fn first_of(&self, beat: usize, follows: impl Fn(&PlannedBeat) -> bool) -> f64 {
        let mut index = beat.min(self.beats.len().saturating_sub(1));
        while index > 0 && self.beats.get(index).is_some_and(&follows) {
            index -= 1;
        }
        self.beats.get(index).map_or(0.0, |b| b.from_s)
    }
}

/// Instant of a model time, where the scenario has a date.
pub fn epoch_at(scenario: &Scenario, model_s: f64) -> Option<Epoch> {
    scenario.date.map(|date| Epoch::from_tdb_s(date.tdb_s() + model_s))
}
