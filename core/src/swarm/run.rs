//! Growing the path of a swarm, both ways from time 0.

use super::flock::{Flock, Setting};
use super::path::{SNAPSHOT_BYTES, Snapshot, Start, SwarmPath, Way};
use super::scale;
use super::weights::KEPT;
use crate::ephemeris::Ephemeris;
use crate::initial::InitialState;

/// The path of a swarm that grows.
#[derive(Debug, Clone)]
pub struct SwarmRun {
    setting: Setting,
    path: SwarmPath,
    forward: Hand,
    backward: Hand,
    steps: usize,
}

/// Where one direction has come to.
#[derive(Debug, Clone, Default)]
struct Hand {
    flock: Option<Flock>,
    /// States with which the next stretch starts, and when.
    next: Option<(f64, Vec<f64>)>,
}

impl SwarmRun {
    /// The swarm with this index in an initial state, at time 0.
    pub fn new(initial: &InitialState, index: usize) -> Self {
        let setting = Setting::new(initial, index);
        let all: usize = initial.swarms.iter().map(|swarm| swarm.pos.len()).sum();
        let share = SNAPSHOT_BYTES / all.max(1) * setting.tracers();
        Self {
            path: SwarmPath::new(setting.tracers(), share),
            setting,
            forward: Hand::default(),
            backward: Hand::default(),
            steps: 0,
        }
    }

    /// Steps that its tracers have taken together, each counted.
    pub fn steps(&self) -> usize {
        self.steps
    }

    /// What is known so far.
    pub fn path(&self) -> &SwarmPath {
        &self.path
    }

    /// What is known.
    pub fn into_path(self) -> SwarmPath {
        self.path
    }

    /// Goes on towards `until_s` (seconds from the start; back in time when negative), by about `most_tracer_steps`. True once that
    /// instant is covered; false also where the ephemeris doesn't cover it yet.
    ///
    /// The bits don't depend on what was asked for before. They do depend on how far the ephemeris reached where steps come to
    /// its end, so it should reach as far as it is going to.
    pub fn advance(&mut self, eph: &Ephemeris, until_s: f64, most_tracer_steps: usize) -> bool {
        let direction = if until_s < 0.0 { -1.0 } else { 1.0 };
        let known_s = if direction > 0.0 { eph.until_s() } else { eph.from_s() };
        let goal_s = if (until_s - known_s) * direction > 0.0 { known_s } else { until_s };
        let mut work = 0;
        loop {
            let covered = (self.path.way(direction).end_s - goal_s) * direction >= 0.0;
            if covered || self.setting.tracers() == 0 {
                let way = self.path.way_mut(direction);
                way.end_s = if covered { way.end_s } else { goal_s };
                return (way.end_s - until_s) * direction >= 0.0;
            }
            if work >= most_tracer_steps {
                return false;
            }
            self.go_on(eph, goal_s, direction, most_tracer_steps, &mut work);
        }
    }

    /// Into the next stretch, through the one that it is in, or as far as the work allows.
    fn go_on(&mut self, eph: &Ephemeris, goal_s: f64, direction: f64, most: usize, work: &mut usize) {
        let Self { setting, path, forward, backward, steps } = self;
        let afforded = path.afforded();
        let hand = if direction < 0.0 { backward } else { forward };
        let way = path.way_mut(direction);
        let flock = match &mut hand.flock {
            Some(flock) => flock,
            flock => {
                let (t_s, states) = hand.next.take().unwrap_or_else(|| (0.0, setting.first(eph, direction)));
                let mut start = Start { t_s, most_exponent: room(setting, eph, t_s, direction) };
                let new = flock.insert(Flock::new(setting, eph, &mut start, direction, &states, work));
                keep(way, afforded, start, states);
                new
            }
        };
        let break_s = setting.next_break(eph, flock.start_s, direction);
        let end_s = break_s.map_or(flock.ends_s, |t_s| {
            if (t_s - flock.ends_s) * direction < 0.0 { t_s } else { flock.ends_s }
        });
        let ends = (end_s - goal_s) * direction <= 0.0;
        let to_s = if ends { end_s } else { goal_s };
        let there = flock.advance(eph, to_s, most, work);
        way.losses.append(&mut flock.losses);
        way.digest = way.digest.wrapping_add(std::mem::take(&mut flock.digest));
        *steps += std::mem::take(&mut flock.steps);
        if there {
            way.end_s = to_s;
            if ends {
                hand.next = Some((end_s, flock.finish(setting, eph, end_s)));
                way.losses.append(&mut flock.losses);
                hand.flock = None;
            }
        }
    }
}

/// The longest steps with which the nodes of a start fit into what is known of the bodies, and before the next break.
fn room(setting: &Setting, eph: &Ephemeris, t_s: f64, direction: f64) -> i32 {
    let known_s = if direction > 0.0 { eph.until_s() } else { eph.from_s() };
    let end_s = setting.next_break(eph, t_s, direction).unwrap_or(known_s);
    #[expect(clippy::cast_precision_loss, reason = "a few")]
    let steps = (KEPT - 1) as f64;
    scale::floor_log2((end_s - t_s).abs() / steps)
}

/// Notes a start, and its snapshot unless that is known anyway or not afforded.
fn keep(way: &mut Way, afforded: usize, start: Start, states: Vec<f64>) {
    let index = way.starts.len();
    way.starts.push(start);
    if index > 0 {
        way.snapshots.push(Snapshot { start: index, numbers: states });
    }
    way.thin(afforded);
}
