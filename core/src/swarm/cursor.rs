//! Any instant of a swarm, from its path.

use super::flock::{Flock, Setting};
use super::path::SwarmPath;
use crate::ephemeris::Ephemeris;
use crate::initial::InitialState;

/// Where all tracers are at one instant.
#[derive(Debug, Clone, Copy)]
pub struct Positions<'a> {
    /// Places relative to the body that the swarm is about, m, along each axis. Of tracers that are gone: 0.
    pub x: &'a [f64],
    /// As `x`.
    pub y: &'a [f64],
    /// As `x`.
    pub z: &'a [f64],
    /// Which tracers have touched a body.
    pub gone: &'a [bool],
}

/// Working memory that is brought to one instant after another.
#[derive(Debug, Clone)]
pub struct Cursor {
    setting: Setting,
    at: Option<At>,
    t_s: Option<f64>,
    x: Vec<f64>,
    y: Vec<f64>,
    z: Vec<f64>,
    gone: Vec<bool>,
}

/// In which stretch the flock is.
#[derive(Debug, Clone)]
struct At {
    direction: f64,
    stretch: usize,
    flock: Flock,
}

impl Cursor {
    /// For the swarm with this index in an initial state. It knows no instant yet.
    pub fn new(initial: &InitialState, index: usize) -> Self {
        let setting = Setting::new(initial, index);
        let row = vec![0.0; setting.tracers()];
        Self {
            gone: vec![false; row.len()],
            x: row.clone(),
            y: row.clone(),
            z: row,
            at: None,
            t_s: None,
            setting,
        }
    }

    /// Goes to an instant, seconds from the scenario's start, or the nearest that the path covers, by about `most_tracer_steps`. False
    /// when that was not enough: called again, it goes on from there; until it is true, [`Cursor::positions`] stay as they were.
    ///
    /// The path has to be one of the same swarm, and the ephemeris to cover what the path covers. The bits are the same
    /// whatever was asked for before.
    pub fn seek(&mut self, path: &SwarmPath, eph: &Ephemeris, t_s: f64, most_tracer_steps: usize) -> bool {
        let t_s = t_s.clamp(path.from_s(), path.until_s());
        let direction = if t_s < 0.0 { -1.0 } else { 1.0 };
        if self.t_s.is_some_and(|now_s| now_s.to_bits() == t_s.to_bits()) {
            return true;
        }
        let way = path.way(direction);
        if way.starts.is_empty() {
            // Time 0, of which nothing is integrated yet.
            self.show_first();
            self.t_s = Some(t_s);
            return true;
        }
        let target = way.stretch(t_s, direction);
        let snapshot = way.snapshot_before(target);
        let from = snapshot.map_or(0, |snapshot| snapshot.start);
        let mut work = 0;
        let mut at = match self.at.take() {
            Some(at)
                if at.direction.to_bits() == direction.to_bits()
                    && (from..=target).contains(&at.stretch)
                    && (at.stretch < target || at.flock.reaches_back_to(t_s)) =>
            {
                at
            }
            _ => {
                let mut start = way.starts[from];
                let first;
                let states = match snapshot {
                    Some(snapshot) => &snapshot.numbers,
                    None => {
                        first = self.setting.first(eph, direction);
                        &first
                    }
                };
                let flock = Flock::new(&self.setting, eph, &mut start, direction, states, &mut work);
                At { direction, stretch: from, flock }
            }
        };
        loop {
            let next = way.starts.get(at.stretch + 1).filter(|_| at.stretch < target);
            let there =
                at.flock.advance(eph, next.map_or(t_s, |next| next.t_s), most_tracer_steps, &mut work);
            at.flock.losses.clear();
            match next {
                _ if !there => break,
                Some(next) => {
                    let states = at.flock.finish(&self.setting, eph, next.t_s);
                    let mut start = *next;
                    at.flock = Flock::new(&self.setting, eph, &mut start, direction, &states, &mut work);
                    at.stretch += 1;
                }
                None => {
                    at.flock.look(eph, t_s);
                    self.show(eph, &at.flock, t_s);
                    self.t_s = Some(t_s);
                    self.at = Some(at);
                    return true;
                }
            }
        }
        self.at = Some(at);
        false
    }

    /// The instant at which [`Cursor::positions`] are, seconds from the scenario's start; `None` before any was found.
    pub fn t_s(&self) -> Option<f64> {
        self.t_s
    }

    /// Where the tracers are at the instant last found.
    pub fn positions(&self) -> Positions<'_> {
        Positions { x: &self.x, y: &self.y, z: &self.z, gone: &self.gone }
    }

    /// Memory held, bytes.
    pub fn bytes(&self) -> usize {
        let flock = self.at.as_ref().map_or(0, |at| at.flock.bytes());
        flock + size_of_val(&*self.x) * 3 + self.gone.len()
    }

    fn show_first(&mut self) {
        let swarm = &self.setting.initial.swarms[self.setting.index];
        for (id, pos) in swarm.pos.iter().enumerate() {
            (self.x[id], self.y[id], self.z[id]) = (pos.x, pos.y, pos.z);
        }
        self.gone.fill(false);
    }

    fn show(&mut self, eph: &Ephemeris, flock: &Flock, t_s: f64) {
        let Self { setting, x, y, z, gone, .. } = self;
        let by = flock.origin_from_body(setting, eph, t_s);
        flock.states(t_s, false, |id, state| {
            gone[id] = state.is_none();
            (x[id], y[id], z[id]) =
                state.map_or((0.0, 0.0, 0.0), |(pos, _)| (pos[0] + by.x, pos[1] + by.y, pos[2] + by.z));
        });
    }
}
