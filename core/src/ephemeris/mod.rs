//! The integrated paths, dense in time: the whole show, before it is shown.
//!
//! Each step of the integrator leaves its own polynomial: acceleration as a polynomial of degree 7 in the
//! fraction of the step (Everhart 1985), so positions and velocities between steps are as exact as the step
//! itself. Of each body, steps are joined to longer pieces of the same form where that changes no more than roundings
//! do. Seeking is a binary search.

use crate::Vector3;
use crate::scenario::BodyId;

mod changes;
pub mod events;
mod flat;
mod knots;
mod long;
pub mod osculating;
pub mod propagation;
mod run;
#[cfg(test)]
mod tests;
mod thin;
mod touch;
pub mod track;
pub mod variations;
mod way;

pub use crate::integrate::PER_BODY;
pub use changes::{Release, Switch};
pub use flat::Malformed;
pub use propagation::{Propagation, SHOW_BYTES, Stopped, Why, states_at};
pub use thin::Tolerance;
pub use track::{LongStretch, Piece, Track};

/// Where a body is and how it moves: m and m/s, barycentric.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct State {
    /// Position, m.
    pub pos: Vector3<f64>,
    /// Velocity, m/s.
    pub vel: Vector3<f64>,
}

/// What a contact did.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Outcome {
    /// The body rests on the other from then on.
    Stopped,
    /// The body was thrown back.
    Bounced,
    /// The body became part of the other.
    Merged,
}

/// A body touching the surface of another.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Contact {
    /// When, seconds from the scenario's start.
    pub t_s: f64,
    /// The body that touched.
    pub body: BodyId,
    /// The body whose surface was touched.
    pub onto: BodyId,
    /// What it did.
    pub outcome: Outcome,
    /// Speed of one relative to the other at that instant, m/s.
    pub speed_m_s: f64,
    /// GM of `onto` from then on, m³/s² (a merge adds to it).
    pub onto_gm_m3_s2: f64,
}

/// The paths of all bodies over an interval that contains time 0.
///
/// A body that rests on another, or became part of it, goes on with that other body, until it is kicked off it.
#[derive(Debug, Clone, PartialEq)]
pub struct Ephemeris {
    gms: Vec<f64>,
    forward: Track,
    backward: Track,
    contacts: Vec<Contact>,
    switches: Vec<Switch>,
    releases: Vec<Release>,
}

impl Ephemeris {
    /// No path yet, for bodies of these GM at time 0, m³/s².
    pub fn new(gms_m3_s2: Vec<f64>) -> Self {
        let n = gms_m3_s2.len();
        Self {
            gms: gms_m3_s2,
            forward: Track::new(n, 1.0),
            backward: Track::new(n, -1.0),
            contacts: Vec::new(),
            switches: Vec::new(),
            releases: Vec::new(),
        }
    }

    /// How many bodies it holds, companions included.
    pub fn bodies(&self) -> usize {
        self.gms.len()
    }

    /// First instant covered, seconds from the scenario's start; 0 or before.
    pub fn from_s(&self) -> f64 {
        self.backward.end_s()
    }

    /// Last instant covered, seconds from the scenario's start; 0 or after.
    pub fn until_s(&self) -> f64 {
        self.forward.end_s()
    }

    /// State of a body. Times outside the covered interval give its nearest end; before anything is covered, `None`.
    pub fn state(&self, body: BodyId, t_s: f64) -> Option<State> {
        if body.0 >= self.bodies() {
            return None;
        }
        if t_s < 0.0 && !self.backward.is_empty() || self.forward.is_empty() {
            self.backward.state(body.0, t_s)
        } else {
            self.forward.state(body.0, t_s)
        }
    }

    /// State of a body relative to another.
    pub fn relative(&self, body: BodyId, about: BodyId, t_s: f64) -> Option<State> {
        let a = self.state(body, t_s)?;
        let b = self.state(about, t_s)?;
        Some(State { pos: a.pos - b.pos, vel: a.vel - b.vel })
    }

    /// GM with which a body pulls at an instant, m³/s²: merges add to it, and leave 0 of what became part of another; it is 0
    /// while its gravity is switched off.
    pub fn gm_m3_s2(&self, body: BodyId, t_s: f64) -> f64 {
        let last = self.switches.iter().rfind(|switch| switch.body == body && switch.t_s <= t_s);
        if last.is_some_and(|switch| !switch.on) {
            return 0.0;
        }
        let mut gm = self.gms.get(body.0).copied().unwrap_or(0.0);
        for contact in &self.contacts {
            let past = if contact.t_s >= 0.0 { contact.t_s <= t_s } else { contact.t_s >= t_s };
            if past && contact.outcome == Outcome::Merged {
                if contact.onto == body {
                    gm = contact.onto_gm_m3_s2;
                } else if contact.body == body {
                    gm = 0.0;
                }
            }
        }
        gm
    }

    /// The gravity of bodies switched off and on, in the order of time.
    pub fn switches(&self) -> &[Switch] {
        &self.switches
    }

    /// The contacts, in the order in which the integration met them.
    pub fn contacts(&self) -> &[Contact] {
        &self.contacts
    }

    /// The contact since which a body has not moved by itself, where it doesn't at that instant.
    pub fn at_rest(&self, body: BodyId, t_s: f64) -> Option<&Contact> {
        let last = self.contacts.iter().rfind(|c| {
            let past = if c.t_s >= 0.0 { c.t_s <= t_s } else { c.t_s >= t_s };
            past && c.body == body && c.outcome != Outcome::Bounced
        });
        // A kick at the instant of a contact comes after it.
        last.filter(|c| !self.releases.iter().any(|r| r.body == body && r.t_s >= c.t_s && r.t_s <= t_s))
    }

    /// The bodies that were kicked off those on which they rested, in the order of time.
    pub fn releases(&self) -> &[Release] {
        &self.releases
    }

    /// The paths from time 0 on.
    pub fn forward(&self) -> &Track {
        &self.forward
    }

    /// The paths from time 0 back.
    pub fn backward(&self) -> &Track {
        &self.backward
    }

    /// The paths from time 0 on, to be added to.
    pub fn forward_mut(&mut self) -> &mut Track {
        &mut self.forward
    }

    /// The paths from time 0 back, to be added to.
    pub fn backward_mut(&mut self) -> &mut Track {
        &mut self.backward
    }

    /// Notes a contact.
    pub fn push_contact(&mut self, contact: Contact) {
        self.contacts.push(contact);
    }

    /// How far at most its paths lie from the integrated ones.
    pub const fn tolerance(&self) -> Tolerance {
        let (forward, backward) = (self.forward.tolerance(), self.backward.tolerance());
        if backward.velocity > forward.velocity { backward } else { forward }
    }

    /// Memory held, bytes.
    pub fn bytes(&self) -> usize {
        self.forward.bytes() + self.backward.bytes()
    }
}
