//! Changes: what is done to the model on its way.

use super::{BodyId, EventRef};
use crate::scenario::problem::Place;
use crate::units::{Span, Speed};

/// Something done to a body at an instant of model time. All instants before it stay as they are, so going back in the show
/// finds the past unchanged.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Change {
    /// When.
    pub at: ChangeTime,
    /// To which body.
    pub body: BodyId,
    /// What.
    pub what: ChangeKind,
    /// Where its `[[change]]` stands in the text.
    pub place: Place,
}

/// When a change is made.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ChangeTime {
    /// At a model time, from the scenario's start; not negative.
    Time(Span),
    /// When a beat starts, as the show is planned.
    Beat {
        /// Its place in the order of the beats.
        beat: usize,
        /// Model time after that; not negative.
        after: Span,
    },
    /// At an event, counted from the scenario's start.
    Event {
        /// Which one.
        event: EventRef,
        /// Model time after it; negative: before it.
        after: Span,
    },
}

/// What is done to a body.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ChangeKind {
    /// Its gravity no longer acts on others, or does again. It keeps its mass, and feels theirs.
    Gravity {
        /// Whether it acts from then on.
        on: bool,
    },
    /// Its velocity changes. A body that rests on another leaves it where that lifts it off, and else keeps its place.
    Kick(Kick),
}

/// How a velocity changes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Kick {
    /// By a velocity, ecliptic axes.
    By([Speed; 3]),
    /// By a speed in a direction that the body's motion gives.
    Along {
        /// How much; negative: the other way.
        speed: Speed,
        /// In which direction. A body to whose motion none belongs, such as one at rest along its velocity, is not changed.
        direction: Direction,
        /// Relative to which body; `None`: the primary, and the barycentre for a body without one.
        about: Option<BodyId>,
    },
}

/// A direction that a body's motion gives.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Direction {
    /// Where it is going.
    Velocity,
    /// Away from what it is measured from.
    Outwards,
}
