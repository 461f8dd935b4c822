//! What a scenario's changes do to the bodies when the integration comes to them.

use super::State;
use crate::Vector3;
use crate::scenario::{BodyId, Direction, Kick};

/// The gravity of a body switched off or on.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Switch {
    /// When, seconds from the scenario's start; not negative.
    pub t_s: f64,
    /// Of which body.
    pub body: BodyId,
    /// Whether its gravity acts from then on.
    pub on: bool,
}

/// A body that rested on another, and was kicked off it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Release {
    /// When, seconds from the scenario's start; not negative.
    pub t_s: f64,
    /// Which body. What rests on it goes along.
    pub body: BodyId,
}

/// What a kick adds to the velocity of a body that moves so relative to what the kick is about, m/s.
pub(super) fn added(kick: &Kick, relative: &State) -> Vector3<f64> {
    match kick {
        Kick::By(velocity) => Vector3::from(velocity.map(|speed| speed.m_s())),
        Kick::Along { speed, direction, .. } => {
            let along = match direction {
                Direction::Velocity => relative.vel,
                Direction::Outwards => relative.pos,
            };
            let length = along.norm();
            if length > 0.0 { along * (speed.m_s() / length) } else { Vector3::zeros() }
        }
    }
}
