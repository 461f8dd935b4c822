//! What lifts a body off the one that it touches: a rebound, or a kick.

use super::{Run, State};
use crate::Vector3;

/// A rebound that brings a body back within this time is not seen any more, s.
const SHORTEST_REBOUND_S: f64 = 0.01;

/// As [`SHORTEST_REBOUND_S`], as a part of the time scale √(r³ / GM) of the surface.
const SHORTEST_REBOUND: f64 = 1e-5;

/// What a body at rest touches: a body that is free, at rest itself, or one with what it touches.
#[derive(Debug, Clone, Copy)]
pub(super) struct Laid {
    pub(super) body: usize,
    pub(super) onto: usize,
    pub(super) merged: bool,
}

impl Run {
    /// A body at rest is kicked: where that lifts it off what it touches, it is free from then on, and what rests on it goes with it.
    pub(super) fn release(&mut self, body: usize, kick: Vector3<f64>, states: &mut Vec<State>) -> bool {
        let offset = |body: usize| self.at_rest.iter().find(|rest| rest.body == body).map(|rest| rest.offset);
        let laid = self.laid.iter().position(|laid| laid.body == body && !laid.merged);
        let (Some(laid), Some(from_host)) = (laid, offset(body)) else { return false };
        let onto = self.laid[laid].onto;
        let apart = from_host - offset(onto).unwrap_or_else(Vector3::zeros);
        let rise_m_s = kick.dot(&apart) / apart.norm();
        let along2 = kick.norm_squared() - rise_m_s * rise_m_s;
        let host = self.hosts().nth(body).unwrap_or(body);
        if !is_seen(rise_m_s, along2, from_host.norm(), self.total(host)) {
            return false;
        }
        let State { pos, vel } = self.state_among(body, states);
        self.laid.remove(laid);
        self.at_rest.retain(|rest| rest.body != body);
        for n in 0..self.at_rest.len() {
            let mut root = self.at_rest[n].body;
            while let Some(laid) = self.laid.iter().find(|laid| laid.body == root) {
                root = laid.onto;
            }
            if root == body {
                self.at_rest[n].host = body;
                self.at_rest[n].offset -= from_host;
            }
        }
        let place = self.free.partition_point(|&free| free < body);
        self.free.insert(place, body);
        states.insert(place, State { pos, vel: vel + kick });
        true
    }
}

/// Whether what leaves a surface with such a speed upwards, and the square of one along it, is back only after a time that is seen. GM is
/// that of both bodies.
pub(super) fn is_seen(rise_m_s: f64, along2_m2_s2: f64, distance_m: f64, gm_m3_s2: f64) -> bool {
    let back_m_s2 = gm_m3_s2 / (distance_m * distance_m) - along2_m2_s2 / distance_m;
    let fall_s = (distance_m * distance_m * distance_m / gm_m3_s2).sqrt();
    let shortest_s = SHORTEST_REBOUND_S.max(SHORTEST_REBOUND * fall_s);
    // Also false where the speed isn't a number.
    rise_m_s > 0.0 && 2.0 * rise_m_s > shortest_s * back_m_s2
}
