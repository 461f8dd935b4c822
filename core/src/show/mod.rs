//! The show: the plan of its beats and the clock that serves the talk.

use crate::ephemeris::Ephemeris;
use crate::initial::InitialState;
use crate::scenario::Scenario;
use crate::swarm::SwarmPath;

pub mod clock;
pub mod fingerprint;
mod glide;
mod lately;
mod pacing;
pub mod plan;
pub mod planner;
pub mod rehearsal;

pub use clock::{Action, Bookmark, Clock, Moment};
pub use fingerprint::Fingerprint;
pub use lately::{Lately, Left, VIEW_MOVE_S};
pub use pacing::{EaseOut, Pacing};
pub use plan::{Cue, Plan, PlannedBeat, Run, Way};
pub use planner::{Limits, Need};
pub use rehearsal::{Progress, Rehearsal};

/// A rehearsed show: everything that the picture is a function of, but for the instant.
#[derive(Debug, Clone)]
pub struct Show {
    /// The scenario.
    pub scenario: Scenario,
    /// Where everything starts.
    pub initial: InitialState,
    /// How everything moves.
    pub ephemeris: Ephemeris,
    /// How the tracers of each swarm move, as far as the plan covers.
    pub swarms: Vec<SwarmPath>,
    /// When each beat starts, in show time and model time.
    pub plan: Plan,
}

impl Show {
    /// Memory that its paths take, those of swarms included, bytes.
    pub fn bytes(&self) -> usize {
        self.ephemeris.bytes() + self.swarms.iter().map(SwarmPath::bytes).sum::<usize>()
    }
}
