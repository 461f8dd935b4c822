//! The show clock: a pure machine that turns actions and elapsed show time into model time.

/// What a presenter can do to the clock.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Action {
    /// On to the next beat.
    Next,
    /// To the start of this beat, or of the one before when it has only just started.
    Back,
    /// The model stands still, or goes on again.
    Hold,
    /// To the start of this beat.
    RestartBeat,
    /// To the start of the show.
    RestartShow,
    /// To the start of a beat, by its index.
    Jump(usize),
    /// A faster pace.
    Faster,
    /// A slower pace.
    Slower,
}

/// The show clock.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Clock {
    model_s: f64,
}

impl Clock {
    /// Model time, seconds from the scenario's start.
    pub const fn model_s(&self) -> f64 {
        self.model_s
    }
}
