//! All tracers of a swarm on their way through one stretch of time, from a start to the next.
//!
//! Each tracer has a step of 2^k seconds by its own time scale, and shares blocks with others of the same step. The nodes lie at whole steps
//! from the stretch's start.

use super::block::{ABREAST, Block, States, Way};
use super::field::{Field, Node};
use super::lone::Cells;
use super::scale;
use super::watch::Moving;
use super::weights::KEPT;
use super::{Loss, Start};
use crate::Vector3;
use crate::ephemeris::Ephemeris;
use crate::initial::InitialState;
use crate::scenario::BodyId;

/// Numbers of a tracer in a list of states: position and velocity relative to the origin. Of one that is gone, NaN.
pub(super) const PER_TRACER: usize = 6;

/// Nodes for which the bodies are found together; every block goes through them before the next one.
const STRIP: u32 = 32;

/// Steps that a tracer takes in a stretch, in the mean. Going back to a start costs that many; finding the first nodes of a start costs the
/// work of two hundred.
pub(super) const STEPS: f64 = 2048.0;

/// How often a stretch is halved at least to give a step, that of tracers far outside included.
const FEWEST_HALVINGS: i32 = 5;

/// Every so many nodes the places go into the digest.
const DIGESTED: u32 = 8;

/// Work of a start, in steps.
pub(super) const START_STEPS: u16 = 200;

/// The first node from which steps are taken: the last of a start's own.
#[expect(clippy::cast_possible_truncation, reason = "a few")]
const FIRST: u32 = KEPT as u32 - 1;

/// Exponent of the length of a stretch for tracers with steps of such exponents; those of steps too long for it are made less.
fn stretch(order: &mut [(i32, Option<usize>, usize)]) -> i32 {
    let rate: f64 = order.iter().map(|(exponent, ..)| 1.0 / scale::seconds(*exponent)).sum();
    #[expect(clippy::cast_precision_loss, reason = "a count")]
    let mean_s = STEPS * (order.len() as f64) / rate;
    // Nobody is left where that isn't a number.
    let lasts = if mean_s > 0.0 { scale::floor_log2(mean_s) } else { scale::LONGEST };
    for (exponent, ..) in order {
        *exponent = (*exponent).min(lasts - FEWEST_HALVINGS);
    }
    lasts
}

/// What doesn't change on the way.
#[derive(Debug, Clone)]
pub(super) struct Setting {
    pub(super) initial: InitialState,
    pub(super) about: BodyId,
    /// Whether the origin is the centre of mass of all.
    pub(super) inertial: bool,
    pub(super) index: usize,
}

impl Setting {
    /// Of a swarm of an initial state.
    pub(super) fn new(initial: &InitialState, index: usize) -> Self {
        let swarm = &initial.swarms[index];
        let from_m = initial.bodies[swarm.about.0].pos.norm();
        let mut distances: Vec<f64> = swarm.pos.iter().map(|pos| pos.norm()).collect();
        distances.sort_by(f64::total_cmp);
        let middle_m = distances.get(distances.len() / 2).copied().unwrap_or_default();
        Self { initial: initial.clone(), about: swarm.about, inertial: middle_m > from_m, index }
    }

    /// How many tracers.
    pub(super) fn tracers(&self) -> usize {
        self.initial.swarms[self.index].pos.len()
    }

    /// States at time 0, of which time goes on or back.
    pub(super) fn first(&self, eph: &Ephemeris, direction: f64) -> Vec<f64> {
        let swarm = &self.initial.swarms[self.index];
        let body = &self.initial.bodies[self.about.0];
        // A kick at time 0 leaves the tracers alone.
        let kicked = match eph.state(self.about, 0.0) {
            Some(state) if direction > 0.0 => state.vel - body.vel,
            _ => Vector3::zeros(),
        };
        let (pos, vel) = if self.inertial { (body.pos, body.vel) } else { (Vector3::zeros(), -kicked) };
        let both = swarm.pos.iter().zip(&swarm.vel);
        both.flat_map(|(x, v)| {
            let (x, v) = (x + pos, v + vel);
            [x.x, x.y, x.z, v.x, v.y, v.z]
        })
        .collect()
    }

    /// The next instant after `t_s` at which what pulls on tracers, or what they are relative to, breaks.
    pub(super) fn next_break(&self, eph: &Ephemeris, t_s: f64, direction: f64) -> Option<f64> {
        let massive = |body: BodyId| self.initial.bodies[body.0].gm_m3_s2 > 0.0;
        let matters = |a: BodyId, b: BodyId| massive(a) && massive(b) || a == self.about || b == self.about;
        let contacts = eph.contacts().iter().filter(|c| matters(c.body, c.onto)).map(|c| c.t_s);
        let changes = self.initial.changes.iter().map(|change| change.t_s);
        let end_s = if direction > 0.0 { eph.until_s() } else { eph.from_s() };
        contacts
            .chain(changes.filter(|_| direction > 0.0))
            .filter(|at_s| (at_s - t_s) * direction > 0.0 && (end_s - at_s) * direction >= 0.0)
            .min_by(|a, b| (a * direction).total_cmp(&(b * direction)))
    }
}

/// The blocks with one step.
#[derive(Debug, Clone)]
struct Level {
    step_s: f64,
    /// The newest node of every block.
    node: u32,
    blocks: Vec<Block>,
}

/// All tracers, through one stretch.
#[derive(Debug, Clone)]
pub(super) struct Flock {
    pub(super) start_s: f64,
    /// Where the stretch ends if nothing breaks before.
    pub(super) ends_s: f64,
    direction: f64,
    field: Field,
    levels: Vec<Level>,
    nodes: Vec<Node>,
    cells: Cells,
    lost: Vec<(f64, usize, usize)>,
    /// Tracers lost since this was last emptied.
    pub(super) losses: Vec<Loss>,
    pub(super) digest: u64,
    /// Steps of tracers since this was last set to nothing, those of the start included.
    pub(super) steps: usize,
}

impl Flock {
    /// From states at a start. Where the start bounds the steps without need, the bound is taken off it.
    pub(super) fn new(
        setting: &Setting,
        eph: &Ephemeris,
        start: &mut Start,
        direction: f64,
        states: &[f64],
        work: &mut usize,
    ) -> Self {
        let t_s = start.t_s;
        // Going back, what happens at time 0 itself lies outside.
        let inside_s = if direction < 0.0 && t_s >= 0.0 { -f64::MIN_POSITIVE } else { t_s };
        let area_m2_kg = setting.initial.swarms[setting.index].area_m2_kg;
        let field = Field::new(&setting.initial, setting.about, area_m2_kg, setting.inertial, eph, inside_s);
        let mut node = Node::default();
        field.fill(eph, t_s, &mut node);
        let motions = scale::motions(&field, &node);
        let circled = |state: &[f64]| field.strongest(&node, [state[0], state[1], state[2]]);
        // Those in one block have one step, and circle one body.
        let mut order: Vec<(i32, Option<usize>, usize)> = states
            .chunks_exact(PER_TRACER)
            .enumerate()
            .filter(|(_, state)| !state[0].is_nan())
            .map(|(id, state)| (scale::exponent(&field, &motions, &node, state), circled(state), id))
            .collect();
        let mut lasts = stretch(&mut order);
        let longest = order.iter().map(|(exponent, ..)| *exponent).max().unwrap_or_default();
        if start.most_exponent >= longest {
            start.most_exponent = i32::MAX;
        } else {
            for (exponent, ..) in &mut order {
                *exponent = (*exponent).min(start.most_exponent);
            }
            lasts = stretch(&mut order);
        }
        order.sort_unstable();
        let mut flock = Self {
            start_s: t_s,
            ends_s: t_s + direction * scale::seconds(lasts),
            direction,
            field,
            levels: Vec::new(),
            nodes: vec![Node::default(); STRIP as usize + 1],
            cells: Cells::default(),
            lost: Vec::new(),
            losses: Vec::new(),
            digest: 0,
            steps: 0,
        };
        *work += usize::from(START_STEPS) * order.len();
        for group in order.chunk_by(|a, b| a.0 == b.0) {
            flock.add_level(eph, group, states);
        }
        flock
    }

    fn add_level(&mut self, eph: &Ephemeris, group: &[(i32, Option<usize>, usize)], states: &[f64]) {
        let Some((exponent, ..)) = group.first() else { return };
        let step_s = self.direction * scale::seconds(*exponent);
        for (n, node) in (0..).zip(&mut self.nodes[..KEPT]) {
            self.field.fill(eph, self.start_s + f64::from(n) * step_s, node);
        }
        let mut way = Way { field: &self.field, eph, cells: &mut self.cells, lost: &mut self.lost, work: 0 };
        let mut blocks = Vec::new();
        for kin in group.chunk_by(|a, b| a.1 == b.1) {
            for ids in kin.chunks(ABREAST) {
                let ids = ids.iter().map(|(.., id)| *id).collect();
                blocks.push(Block::start(&mut way, &self.nodes[..KEPT], step_s, ids, |id| {
                    let s = &states[id * PER_TRACER..][..PER_TRACER];
                    (!s[0].is_nan()).then_some(([s[0], s[1], s[2]], [s[3], s[4], s[5]]))
                }));
            }
        }
        self.levels.push(Level { step_s, node: FIRST, blocks });
        self.steps += group.len() * FIRST as usize;
        self.tell();
    }

    /// Turns what was lost into losses.
    fn tell(&mut self) {
        let Self { field, lost, losses, .. } = self;
        let loss = |(t_s, tracer, source): (f64, usize, usize)| Loss {
            t_s,
            tracer,
            onto: field.sources[source].body,
        };
        losses.extend(lost.drain(..).map(loss));
    }

    /// Steps on to the last nodes before `until_s`, by about `most` tracer-steps less what `work` already counts. True when there.
    pub(super) fn advance(&mut self, eph: &Ephemeris, until_s: f64, most: usize, work: &mut usize) -> bool {
        for n in 0..self.levels.len() {
            let until = self.levels[n].node_before(self.start_s, until_s);
            while self.levels[n].node < until {
                if *work >= most {
                    return false;
                }
                self.strip(eph, n, until, work);
            }
        }
        self.tell();
        true
    }

    /// Some steps of a level, up to a node.
    fn strip(&mut self, eph: &Ephemeris, n: usize, until: u32, work: &mut usize) {
        let Self { start_s, field, levels, nodes, cells, lost, digest, steps, .. } = self;
        let level = &mut levels[n];
        let first = level.node;
        // Strips end at whole multiples: the bodies are found for as many nodes as there is room for.
        let last = ((first / STRIP + 1) * STRIP).min(until);
        for (node, k) in nodes.iter_mut().zip(first..=last) {
            field.fill(eph, level.time(*start_s, k), node);
        }
        let mut way = Way { field, eph, cells, lost, work: 0 };
        let mut taken = 0;
        for block in &mut level.blocks {
            for (pair, k) in nodes.windows(2).zip(first + 1..=last) {
                block.step(&mut way, &pair[0], &pair[1], k, level.step_s);
                if k.is_multiple_of(DIGESTED) {
                    *digest = digest.wrapping_add(block.digest(u64::from(k)));
                }
            }
            taken += block.ids.len() * (last - first) as usize;
        }
        *steps += taken;
        *work += taken + way.work;
        level.node = last;
    }

    /// Finds what frames at an instant need beyond the newest nodes.
    pub(super) fn look(&mut self, eph: &Ephemeris, t_s: f64) {
        let known_s = if self.direction > 0.0 { eph.until_s() } else { eph.from_s() };
        let mut way = Way { field: &self.field, eph, cells: &mut self.cells, lost: &mut self.lost, work: 0 };
        for level in &mut self.levels {
            let (from_s, next_s) =
                (level.time(self.start_s, level.node), level.time(self.start_s, level.node + 1));
            if (t_s - from_s) * self.direction > 0.0 {
                // Not beyond what is known of the bodies.
                let to_s = if (next_s - known_s) * self.direction <= 0.0 { next_s } else { t_s };
                for block in &mut level.blocks {
                    block.look(&mut way, from_s, level.step_s, to_s);
                }
            }
        }
    }

    /// Whether an instant can still be looked at: it doesn't lie before the nodes of any tracer.
    pub(super) fn reaches_back_to(&self, t_s: f64) -> bool {
        self.levels.iter().all(|level| level.node_before(self.start_s, t_s) >= level.node)
    }

    /// Hands out the positions, and the velocities if asked for, relative to the origin, at an instant up to a step from the newest nodes that
    /// was looked at; `None` of tracers that are gone, and nothing of those that were gone at the start.
    pub(super) fn states(&self, t_s: f64, velocities: bool, mut out: impl FnMut(usize, Option<Moving>)) {
        let mut states = States::default();
        for level in &self.levels {
            let steps = (t_s - self.start_s) / level.step_s - f64::from(level.node);
            for block in &level.blocks {
                block.states(steps, level.step_s, &mut states, velocities);
                let States { pos: [x, y, z], vel: [u, v, w] } = &states;
                for (lane, &id) in block.ids.iter().enumerate() {
                    let state = ([x[lane], y[lane], z[lane]], [u[lane], v[lane], w[lane]]);
                    out(id, block.lives[lane].then_some(state));
                }
                for (lane, state) in block.lone_states(t_s) {
                    out(block.ids[lane], state);
                }
            }
        }
    }

    /// States at the stretch's end, as the next start takes them.
    pub(super) fn finish(&mut self, setting: &Setting, eph: &Ephemeris, end_s: f64) -> Vec<f64> {
        // The step's end counts as after a kick, and the instant before as before it.
        let before_s = if self.direction > 0.0 { end_s.next_down() } else { end_s.next_up() };
        let jump = self.field.origin(eph, end_s).1 - self.field.origin(eph, before_s).1;
        let breaks = setting
            .next_break(eph, before_s, self.direction)
            .is_some_and(|at_s| at_s.to_bits() == end_s.to_bits());
        let jump = if breaks { jump } else { Vector3::zeros() };
        let mut numbers = vec![f64::NAN; setting.tracers() * PER_TRACER];
        self.look(eph, end_s);
        self.states(end_s, true, |id, state| {
            let row = &mut numbers[id * PER_TRACER..][..PER_TRACER];
            row.fill(f64::NAN);
            if let Some((pos, vel)) = state {
                row[..3].copy_from_slice(&pos);
                for axis in 0..3 {
                    row[3 + axis] = vel[axis] - jump[axis];
                }
            }
        });
        for (level, t_s) in self.levels.iter().map(|level| (level, level.time(self.start_s, level.node))) {
            // The last step, which nobody takes any more, may have lost some.
            let ends = level.blocks.iter().flat_map(|block| block.losses_between(t_s, end_s));
            self.lost.extend(ends);
        }
        self.tell();
        numbers
    }

    /// Where the origin is, relative to the body that the swarm is about.
    pub(super) fn origin_from_body(&self, setting: &Setting, eph: &Ephemeris, t_s: f64) -> Vector3<f64> {
        if setting.inertial {
            -eph.state(setting.about, t_s).map_or(Vector3::zeros(), |state| state.pos)
        } else {
            Vector3::zeros()
        }
    }

    /// Memory held, bytes.
    pub(super) fn bytes(&self) -> usize {
        self.levels.iter().map(|level| level.blocks.len() * size_of::<Block>()).sum()
    }
}

impl Level {
    fn time(&self, start_s: f64, node: u32) -> f64 {
        start_s + f64::from(node) * self.step_s
    }

    /// The last node not after an instant, from where frames are drawn: the last of the start's own for what comes earlier.
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped")]
    fn node_before(&self, start_s: f64, t_s: f64) -> u32 {
        let steps = ((t_s - start_s) / self.step_s).floor();
        steps.clamp(f64::from(FIRST), f64::from(u32::MAX)) as u32
    }
}
