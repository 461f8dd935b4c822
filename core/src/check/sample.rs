//! Some tracers of each swarm, for runs in which the swarms themselves would take too long.

use super::sight::Seen;
use crate::Vector3;
use crate::ephemeris::Ephemeris;
use crate::initial::InitialState;
use crate::swarm::{Cursor, SwarmRun};

/// Tracers of a swarm at most.
const MOST: usize = 32;

/// Places of the tracers looked at, swarm by swarm, m; `None` of those that are gone.
pub(super) type Places = Vec<Vec<Option<Vector3<f64>>>>;

/// Some tracers of each swarm on their way.
#[derive(Debug)]
pub(super) struct Sample {
    initial: InitialState,
    runs: Vec<SwarmRun>,
    cursors: Vec<Cursor>,
}

impl Sample {
    /// Of the swarms of an initial state: tracers evenly from all over each swarm's list.
    pub(super) fn new(initial: &InitialState) -> Self {
        let mut initial = initial.clone();
        for swarm in &mut initial.swarms {
            let stride = swarm.pos.len().div_ceil(MOST).max(1);
            swarm.pos = swarm.pos.iter().step_by(stride).copied().collect();
            swarm.vel = swarm.vel.iter().step_by(stride).copied().collect();
        }
        let all = 0..initial.swarms.len();
        Self {
            runs: all.clone().map(|index| SwarmRun::new(&initial, index)).collect(),
            cursors: all.map(|index| Cursor::new(&initial, index)).collect(),
            initial,
        }
    }

    /// Goes on towards the ends of a stretch of time, by about so many tracer steps. True once the tracers are through it, as far as the
    /// ephemeris goes.
    pub(super) fn grow(&mut self, eph: &Ephemeris, ends_s: [f64; 2], most_tracer_steps: usize) -> bool {
        for run in &mut self.runs {
            for end_s in ends_s.map(|end_s| end_s.clamp(eph.from_s(), eph.until_s())) {
                if !run.path().covers(end_s) {
                    run.advance(eph, end_s, most_tracer_steps);
                    return false;
                }
            }
        }
        true
    }

    /// About how many steps all of them took together.
    pub(super) fn steps(&self) -> f64 {
        self.runs.iter().map(|run| run.path().steps()).sum()
    }

    /// Where they are at a model time, of the swarms that a beat shows; `None` when so many tracer steps don't suffice: ask again.
    pub(super) fn places(
        &mut self,
        eph: &Ephemeris,
        seen: &Seen<'_>,
        t_s: f64,
        most_tracer_steps: usize,
    ) -> Option<Places> {
        let mut places = vec![Vec::new(); self.runs.len()];
        for id in seen.swarms() {
            let (run, cursor) = (self.runs.get(id.0)?, self.cursors.get_mut(id.0)?);
            if !cursor.seek(run.path(), eph, t_s, most_tracer_steps) {
                return None;
            }
            let about = self.initial.swarms.get(id.0)?.about;
            let origin = eph.state(about, t_s).map_or_else(Vector3::zeros, |state| state.pos);
            let at = cursor.positions();
            let rows = at.x.iter().zip(at.y).zip(at.z.iter().zip(at.gone));
            let place = |((x, y), (z, gone)): ((&f64, &f64), (&f64, &bool))| {
                (!gone).then(|| origin + Vector3::new(*x, *y, *z))
            };
            if let Some(slot) = places.get_mut(id.0) {
                slot.extend(rows.map(place));
            }
        }
        Some(places)
    }
}
