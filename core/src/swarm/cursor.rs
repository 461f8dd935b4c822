//! Any instant of a swarm, from its path.

use super::flock::{Flock, Setting};
use super::path::SwarmPath;
use crate::ephemeris::Ephemeris;
use crate::initial::InitialState;

/// Most memory for going back, bytes.
const KEPT_BYTES: usize = 32 << 20;

/// Parts of a stretch after which its flock is kept, going on.
const PARTS: f64 = 8.0;

/// Going back, flocks are kept as near as this part of a stretch behind.
const NEAREST: f64 = 1.0 / 256.0;

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
    /// The flock as it was at instants of its stretch, in their order, for going back.
    kept: Vec<(f64, Flock)>,
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
    /// Until when the flock has come at least.
    done_s: f64,
    /// Whether it is on its way to an instant before the one shown last.
    back: bool,
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
            kept: Vec::new(),
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
        let (at, back) = match self.at.take() {
            Some(at) if at.direction.to_bits() == direction.to_bits() && at.stretch == target => {
                if at.flock.reaches_back_to(t_s) {
                    (Some(at), false)
                } else {
                    self.kept.retain(|(kept_s, _)| (t_s - kept_s) * direction >= 0.0);
                    let kept = self.kept.last();
                    let at = kept.map(|(done_s, flock)| At {
                        flock: flock.clone(),
                        done_s: *done_s,
                        back: true,
                        ..at
                    });
                    (at, true)
                }
            }
            Some(at)
                if at.direction.to_bits() == direction.to_bits() && (from..target).contains(&at.stretch) =>
            {
                (Some(at), false)
            }
            _ => (None, self.t_s.is_some_and(|now_s| (now_s - t_s) * direction > 0.0)),
        };
        let mut at = at.unwrap_or_else(|| {
            let mut start = way.starts[from];
            let first;
            let states = match snapshot {
                Some(snapshot) => &snapshot.numbers,
                None => {
                    first = self.setting.first(eph, direction);
                    &first
                }
            };
            self.kept.clear();
            let flock = Flock::new(&self.setting, eph, &mut start, direction, states, &mut work);
            At { direction, stretch: from, done_s: flock.start_s, flock, back }
        });
        let there = loop {
            let Some(next) = way.starts.get(at.stretch + 1).filter(|_| at.stretch < target) else {
                break self.go(&mut at, eph, t_s, most_tracer_steps, &mut work);
            };
            let there = at.flock.advance(eph, next.t_s, most_tracer_steps, &mut work);
            at.flock.losses.clear();
            if !there {
                break false;
            }
            let states = at.flock.finish(&self.setting, eph, next.t_s);
            let mut start = *next;
            at.flock = Flock::new(&self.setting, eph, &mut start, direction, &states, &mut work);
            at.done_s = at.flock.start_s;
            at.stretch += 1;
            self.kept.clear();
        };
        if there {
            at.back = false;
            at.flock.look(eph, t_s);
            self.show(eph, &at.flock, t_s);
            self.t_s = Some(t_s);
        }
        self.at = Some(at);
        there
    }

    /// Goes on in the stretch, and keeps the flock here and there: every so often, or halfway, three quarters of the way and so on, so that
    /// going back one frame after another costs a few steps each.
    fn go(&mut self, at: &mut At, eph: &Ephemeris, t_s: f64, most: usize, work: &mut usize) -> bool {
        let lasts_s = (at.flock.ends_s - at.flock.start_s).abs();
        let room = (KEPT_BYTES / at.flock.bytes().max(1)).max(1);
        loop {
            let left_s = (t_s - at.done_s).abs();
            let last_s = self.kept.last().map_or(at.flock.start_s, |(kept_s, _)| *kept_s);
            let keep_s = if at.back && left_s > NEAREST * lasts_s {
                at.done_s + 0.5 * (t_s - at.done_s)
            } else {
                last_s + at.direction * lasts_s / PARTS
            };
            let keeps = self.kept.len() < room
                && (t_s - keep_s) * at.direction > 0.0
                && (keep_s - at.done_s) * at.direction > 0.0;
            let to_s = if keeps { keep_s } else { t_s };
            let there = at.flock.advance(eph, to_s, most, work);
            at.flock.losses.clear();
            if !there {
                return false;
            }
            at.done_s = to_s;
            if !keeps {
                return true;
            }
            self.kept.push((to_s, at.flock.clone()));
        }
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
        let kept: usize = self.kept.iter().map(|(_, flock)| flock.bytes()).sum();
        let flock = self.at.as_ref().map_or(0, |at| at.flock.bytes());
        kept + flock + size_of_val(&*self.x) * 3 + self.gone.len()
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
        for row in [&mut *x, &mut *y, &mut *z] {
            row.fill(0.0);
        }
        gone.fill(true);
        flock.states(t_s, false, |id, state| {
            if let Some((pos, _)) = state {
                gone[id] = false;
                (x[id], y[id], z[id]) = (pos[0] + by.x, pos[1] + by.y, pos[2] + by.z);
            } else {
                // Its block may have handed it out before.
                gone[id] = true;
                (x[id], y[id], z[id]) = (0.0, 0.0, 0.0);
            }
        });
    }
}
