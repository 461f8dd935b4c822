//! Aims: which numbers of a scenario are free, and what is wanted of them.

use super::{BodyId, EventRef};
use crate::scenario::problem::Place;
use crate::units::{Angle, Length, Span, Speed};

/// `[[aim]]`: an outcome, and the numbers that may be changed for it.
#[derive(Debug, Clone, PartialEq)]
pub struct Aim {
    /// What is wanted, at least one.
    pub want: Vec<Want>,
    /// What may be changed, at least one.
    pub free: Vec<Free>,
    /// Where its `[[aim]]` stands in the text.
    pub place: Place,
}

/// What is wanted of one event, or of one instant.
#[derive(Debug, Clone, PartialEq)]
pub struct Want {
    /// Of what.
    pub of: Wanted,
    /// The outcomes, at least one.
    pub outcomes: Vec<Outcome>,
    /// How far off its one outcome may be, SI; `None`: a millionth or so, as the trial has it.
    pub within: Option<f64>,
}

/// What an outcome is wanted of.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Wanted {
    /// An event. With a wanted time, and no number of its own, it is the one nearest to that time; else the first, or the one
    /// of its number.
    Event {
        /// Which event.
        event: EventRef,
        /// How far from the scenario's start it is looked for.
        until: Span,
    },
    /// A body at an instant, relative to another.
    Instant {
        /// Which body.
        body: BodyId,
        /// Relative to which; `None`: its primary.
        about: Option<BodyId>,
        /// When, from the scenario's start.
        at: Span,
    },
}

/// One number that is wanted.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Outcome {
    /// When the event happens, from the scenario's start.
    At(Span),
    /// Distance from centre to centre.
    Distance(Length),
    /// Relative speed.
    Speed(Speed),
    /// Ecliptic longitude of the body, seen from the centre of the other.
    Longitude(Angle),
    /// Ecliptic latitude of the body, seen from the centre of the other.
    Latitude(Angle),
    /// Its period divided by that of the other, both around their primaries.
    PeriodRatio(f64),
    /// How many such events there are until the end of the search.
    Count(usize),
}

/// A number that may be changed.
#[derive(Debug, Clone, PartialEq)]
pub struct Free {
    /// Of which body.
    pub body: BodyId,
    /// Which `[[body]]` of the file, from 0, is that body's.
    pub section: usize,
    /// The keys that lead to it in the body's section: `["throw", "speed"]`, `["place", "velocity", "1"]`.
    pub keys: Vec<&'static str>,
    /// What it measures.
    pub measure: Measure,
    /// Least value, SI.
    pub from: f64,
    /// Greatest value, SI.
    pub to: f64,
    /// The unit in which it is written: that of its least value; "" for a bare number.
    pub unit: String,
}

impl Free {
    /// Its value at a part of its range, 0 to 1; SI.
    pub fn value(&self, share: f64) -> f64 {
        self.from + share * (self.to - self.from)
    }

    /// Where in its range a value lies, as a part of it; beyond 0 to 1 where it doesn't. SI.
    pub fn share(&self, si: f64) -> f64 {
        (si - self.from) / (self.to - self.from)
    }
}

/// What a free number measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Measure {
    /// A length.
    Length,
    /// A speed.
    Speed,
    /// An angle.
    Angle,
    /// A time.
    Span,
    /// A mass.
    Mass,
    /// A number without unit.
    Number,
}
