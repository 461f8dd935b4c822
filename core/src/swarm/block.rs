//! Some tracers side by side: one number of each in every row, so that plain loops fill the vector registers.
//!
//! A step of Störmer's method costs one evaluation of the pulls. It is taken in differences, x_{n+1} - x_n from x_n - x_{n-1}, so that what
//! rounding takes from a step is small against the step and not against the place (E. Hairer, S. P. Nørsett & G. Wanner, Solving Ordinary
//! Differential Equations I (2nd ed. 1993), III.10, eq. 10.29).

use super::field::{Field, Node};
use super::weights::{KEPT, SPEED, STEP, Weights, between};

/// Tracers in a block. The numbers of that many just fit where the processor reaches them fastest, and share the cost of a node.
pub(super) const ABREAST: usize = 128;

/// Tracers worked on together. Four fill the vector registers of every target twice over.
const LANES: usize = 4;

/// Where tracers are put that are no more: so far that nothing pulls there, and near enough to stay a number.
const PARKED_M: f64 = 1e30;

/// Most rounds in which the accelerations of a start are found.
const MOST_ROUNDS: usize = 30;

/// Relative change of accelerations in a round that is made of roundings.
const CONVERGED: f64 = 4e-16;

pub(super) type Row = [f64; ABREAST];

/// Tracers that take their steps together.
#[derive(Debug, Clone)]
pub(super) struct Block {
    /// Which tracers.
    pub(super) ids: Vec<usize>,
    /// Whether each is still there.
    pub(super) lives: Vec<bool>,
    /// Rows in use: as many as tracers, and up to a full group of lanes.
    width: usize,
    pos: [Row; 3],
    /// From the last node to this one, m.
    step: [Row; 3],
    acc: [[Row; 3]; KEPT],
    /// Which accelerations are those of the newest node.
    newest: usize,
}

/// Position and velocity of each tracer, as many as the block holds.
#[derive(Debug, Clone, Copy)]
pub(super) struct States {
    pub(super) pos: [Row; 3],
    pub(super) vel: [Row; 3],
}

impl Default for States {
    fn default() -> Self {
        Self { pos: [[0.0; ABREAST]; 3], vel: [[0.0; ABREAST]; 3] }
    }
}

impl Block {
    /// Tracers `ids`, at the first of the nodes, which are `step_s` apart: finds their way through all of these, [`KEPT`] of them, and stands
    /// at the last.
    ///
    /// Each round takes the accelerations at the places that those of the last round lead to, until they no longer change (É. Picard,
    /// J. Math. Pures Appl. 6 (1890), 145).
    pub(super) fn start(
        field: &Field,
        nodes: &[Node],
        step_s: f64,
        ids: Vec<usize>,
        state: impl Fn(usize) -> ([f64; 3], [f64; 3], bool),
    ) -> Box<Self> {
        let width = ids.len().div_ceil(LANES) * LANES;
        let mut block = Box::new(Self {
            lives: vec![true; ids.len()],
            width,
            pos: [[PARKED_M; ABREAST]; 3],
            step: [[0.0; ABREAST]; 3],
            acc: [[[0.0; ABREAST]; 3]; KEPT],
            newest: KEPT - 1,
            ids,
        });
        let mut from = Box::new(States { pos: block.pos, vel: block.step });
        for (lane, &id) in block.ids.iter().enumerate() {
            let (pos, vel, lives) = state(id);
            block.lives[lane] = lives;
            if lives {
                for axis in 0..3 {
                    from.pos[axis][lane] = pos[axis];
                    from.vel[axis][lane] = vel[axis];
                }
            }
        }
        block.iterate(field, nodes, step_s, &from);
        block
    }

    fn iterate(&mut self, field: &Field, nodes: &[Node], step_s: f64, from: &States) {
        #[expect(clippy::cast_precision_loss, reason = "a few")]
        let along = |node: usize| (node as f64, node as f64 - (KEPT - 1) as f64);
        let first = along(0).1;
        self.pos = from.pos;
        self.pull(field, &nodes[0], 0);
        for slot in 1..KEPT {
            self.acc[slot] = self.acc[0];
        }
        let mut last = f64::INFINITY;
        for round in 0..MOST_ROUNDS {
            let mut changed = 0.0_f64;
            for node in 1..KEPT {
                let (steps, at) = along(node);
                let (places, _) = between(first, at);
                self.place(&places, from, steps * step_s, step_s * step_s);
                let before = self.acc[node];
                self.pull(field, &nodes[node], node);
                changed = changed.max(self.largest_change(&before, node));
            }
            // When it no longer shrinks, it is made of roundings; a tracer too near to a body for its steps may never settle.
            if changed <= CONVERGED || round > 3 && changed >= last {
                break;
            }
            last = changed;
        }
        let (_, speeds) = between(first, 0.0);
        // x_n - x_{n-1} = h v_n - h² Σ SPEED a, where h v_n = h v_0 + h² Σ speeds a; slots are as old as they are before the last.
        for axis in 0..3 {
            for l in 0..self.width {
                let mut sum = 0.0;
                for (slot, acc) in self.acc.iter().enumerate() {
                    sum += (speeds[KEPT - 1 - slot] - SPEED[KEPT - 1 - slot]) * acc[axis][l];
                }
                self.step[axis][l] = step_s * from.vel[axis][l] + step_s * step_s * sum;
            }
        }
    }

    /// Places by weights of the accelerations, from states some time before.
    fn place(&mut self, places: &Weights, from: &States, after_s: f64, step2: f64) {
        for axis in 0..3 {
            for l in 0..self.width {
                let mut sum = 0.0;
                for (slot, acc) in self.acc.iter().enumerate() {
                    sum += places[KEPT - 1 - slot] * acc[axis][l];
                }
                self.pos[axis][l] = from.pos[axis][l] + (after_s * from.vel[axis][l] + step2 * sum);
            }
        }
    }

    /// The largest change of an acceleration since `before`, as part of its size.
    fn largest_change(&self, before: &[Row; 3], slot: usize) -> f64 {
        let now = &self.acc[slot];
        let mut most = 0.0_f64;
        for l in 0..self.width {
            let (mut change, mut size) = (0.0, 0.0);
            for axis in 0..3 {
                change += (now[axis][l] - before[axis][l]).abs();
                size += now[axis][l].abs();
            }
            if change > most * size {
                most = change / size;
            }
        }
        most
    }

    /// One step, to a node.
    pub(super) fn step(&mut self, field: &Field, node: &Node, step_s: f64) {
        let step2 = step_s * step_s;
        let mut weights = [0.0; KEPT];
        for (age, weight) in STEP.iter().enumerate() {
            weights[(self.newest + KEPT - age) % KEPT] = step2 * weight;
        }
        for axis in 0..3 {
            for l in 0..self.width {
                let mut sum = 0.0;
                for slot in 0..KEPT {
                    sum += weights[slot] * self.acc[slot][axis][l];
                }
                self.step[axis][l] += sum;
                self.pos[axis][l] += self.step[axis][l];
            }
        }
        self.newest = (self.newest + 1) % KEPT;
        self.pull(field, node, self.newest);
    }

    /// Accelerations at the places of the block, into a slot.
    fn pull(&mut self, field: &Field, node: &Node, slot: usize) {
        let acc = &mut self.acc[slot];
        for from in (0..self.width).step_by(LANES) {
            let (mut x, mut y, mut z) = ([0.0; LANES], [0.0; LANES], [0.0; LANES]);
            x.copy_from_slice(&self.pos[0][from..from + LANES]);
            y.copy_from_slice(&self.pos[1][from..from + LANES]);
            z.copy_from_slice(&self.pos[2][from..from + LANES]);
            let (mut ax, mut ay, mut az) =
                ([-node.shift[0]; LANES], [-node.shift[1]; LANES], [-node.shift[2]; LANES]);
            for (source, at) in field.sources[..field.massive].iter().zip(&node.at) {
                for l in 0..LANES {
                    let d = [at[0] - x[l], at[1] - y[l], at[2] - z[l]];
                    let r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2];
                    let w = source.gm / (r2 * r2.sqrt());
                    ax[l] += w * d[0];
                    ay[l] += w * d[1];
                    az[l] += w * d[2];
                }
            }
            if field.bulging() {
                for l in 0..LANES {
                    let a = field.bulge_pull(node, [x[l], y[l], z[l]]);
                    ax[l] += a[0];
                    ay[l] += a[1];
                    az[l] += a[2];
                }
            }
            acc[0][from..from + LANES].copy_from_slice(&ax);
            acc[1][from..from + LANES].copy_from_slice(&ay);
            acc[2][from..from + LANES].copy_from_slice(&az);
        }
    }

    /// Finds the tracers that are within the radius of a source at a node, hands them to `lost` with it, and takes them out.
    pub(super) fn contacts(&mut self, field: &Field, node: &Node, mut lost: impl FnMut(usize, usize)) {
        for (n, (source, at)) in field.sources.iter().zip(&node.at).enumerate() {
            if source.radius_m <= 0.0 {
                continue;
            }
            for lane in 0..self.ids.len() {
                let d = [self.pos[0][lane] - at[0], self.pos[1][lane] - at[1], self.pos[2][lane] - at[2]];
                let r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2];
                if r2 < source.radius_m * source.radius_m && self.lives[lane] {
                    self.lives[lane] = false;
                    lost(self.ids[lane], n);
                    for axis in 0..3 {
                        self.pos[axis][lane] = PARKED_M;
                        self.step[axis][lane] = 0.0;
                        for acc in &mut self.acc {
                            acc[axis][lane] = 0.0;
                        }
                    }
                }
            }
        }
    }

    /// Positions some steps after the newest node (before it, down to the oldest one kept, when negative), and velocities if asked for.
    pub(super) fn states(&self, steps: f64, step_s: f64, states: &mut States, velocities: bool) {
        let (mut places, mut speeds) = between(0.0, steps);
        for age in 0..KEPT {
            places[age] += steps * SPEED[age];
            speeds[age] += SPEED[age];
        }
        let (places, speeds) = (self.by_slot(&places, step_s * step_s), self.by_slot(&speeds, step_s));
        for axis in 0..3 {
            for l in 0..self.width {
                let mut sum = 0.0;
                for slot in 0..KEPT {
                    sum += places[slot] * self.acc[slot][axis][l];
                }
                states.pos[axis][l] = self.pos[axis][l] + (steps * self.step[axis][l] + sum);
            }
            if velocities {
                for l in 0..self.width {
                    let mut sum = 0.0;
                    for slot in 0..KEPT {
                        sum += speeds[slot] * self.acc[slot][axis][l];
                    }
                    states.vel[axis][l] = self.step[axis][l] / step_s + sum;
                }
            }
        }
    }

    fn by_slot(&self, by_age: &Weights, times: f64) -> Weights {
        let mut weights = [0.0; KEPT];
        for (age, weight) in by_age.iter().enumerate() {
            weights[(self.newest + KEPT - age) % KEPT] = times * weight;
        }
        weights
    }

    /// A number that changes with any bit of the places: they are mixed by the tracer and the node, and added up, so that the
    /// order doesn't matter.
    pub(super) fn digest(&self, node: u64) -> u64 {
        let mut sum = 0_u64;
        for (lane, &id) in self.ids.iter().enumerate().filter(|(lane, _)| self.lives[*lane]) {
            let mut mixed = (id as u64) << 32 ^ node;
            for axis in &self.pos {
                // The golden ratio in 64 bits: an odd number without a pattern (D. E. Knuth, TAOCP 3, 6.4).
                mixed = (mixed ^ axis[lane].to_bits()).wrapping_mul(0x9e37_79b9_7f4a_7c15).rotate_left(29);
            }
            sum = sum.wrapping_add(mixed);
        }
        sum
    }
}
