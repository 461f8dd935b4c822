//! Some tracers side by side: one number of each in every row, so that plain loops fill the vector registers.
//!
//! A step of Störmer's method costs one evaluation of the pulls. It is taken in differences, x_{n+1} - x_n from x_n - x_{n-1}, so that what
//! rounding takes from a step is small against the step and not against the place (E. Hairer, S. P. Nørsett & G. Wanner, Solving Ordinary
//! Differential Equations I (2nd ed. 1993), III.10, eq. 10.29).

use super::field::{Field, Node};
use super::lone::{Cells, Lone};
use super::pulls::Pulls;
use super::watch::{Moving, Watch};
use super::weights::{KEPT, SPEED, STEP, Weights, between};
use crate::ephemeris::Ephemeris;
use wide::f64x4;

/// Tracers in a block. The numbers of that many just fit where the processor reaches them fastest, and share the cost of a node.
pub(super) const ABREAST: usize = 128;

/// Tracers worked on together. Four fill the vector registers of every target twice over.
pub(super) const LANES: usize = 4;

/// Where tracers are put that are no more: so far that nothing pulls there, and near enough to stay a number.
const PARKED_M: f64 = 1e30;

/// Those that are farther are no more.
pub(super) const GONE_M: f64 = 0.5 * PARKED_M;

/// Most rounds in which the accelerations of a start are found.
const MOST_ROUNDS: usize = 30;

/// Relative change of accelerations in a further round that would not be noticed: a hundredth of what single precision leaves in the slight ones.
const CONVERGED: f64 = 1e-14;

/// Every so many nodes a block looks which of its tracers have to go by themselves, or no longer.
const WATCHED: u32 = 8;

/// One step more than the next look is away: places and velocities are those of the last node.
const AHEAD: f64 = 9.0;

/// That much ahead of a start: the first look comes at its sixteenth node.
const AHEAD_OF_START: f64 = 17.0;

/// Nodes after which no accelerations are kept from where a tracer had to go by itself.
#[expect(clippy::cast_possible_truncation, reason = "a few")]
const CLEAN: u32 = KEPT as u32;

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
    watch: Watch,
    pulls: Pulls,
    /// Those that go by themselves, and which lanes they are in.
    lones: Vec<Lone>,
    alone: [bool; ABREAST],
}

/// What the way of a block goes through.
#[derive(Debug)]
pub(super) struct Way<'a> {
    pub(super) field: &'a Field,
    pub(super) eph: &'a Ephemeris,
    pub(super) cells: &'a mut Cells,
    /// Tracers that were lost: when, which, and onto which source.
    pub(super) lost: &'a mut Vec<(f64, usize, usize)>,
    /// What those that go by themselves took, in tracer-steps.
    pub(super) work: usize,
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
    pub(super) fn start(
        way: &mut Way<'_>,
        nodes: &[Node],
        step_s: f64,
        ids: Vec<usize>,
        state: impl Fn(usize) -> Option<Moving>,
    ) -> Self {
        let width = ids.len().div_ceil(LANES) * LANES;
        let first = ids.iter().find_map(|id| state(*id)).unwrap_or_default();
        let mut block = Self {
            lives: vec![true; ids.len()],
            width,
            pos: [[PARKED_M; ABREAST]; 3],
            step: [[0.0; ABREAST]; 3],
            acc: [[[0.0; ABREAST]; 3]; KEPT],
            newest: KEPT - 1,
            watch: Watch::new(way.field, &nodes[0], step_s, first),
            pulls: Pulls::of(way.field),
            lones: Vec::new(),
            alone: [false; ABREAST],
            ids,
        };
        let mut from = States { pos: block.pos, vel: block.step };
        for (lane, &id) in block.ids.iter().enumerate() {
            let Some((pos, vel)) = state(id) else {
                block.lives[lane] = false;
                continue;
            };
            if block.watch.near(&nodes[0], (pos, vel), step_s, AHEAD_OF_START) {
                block.lones.push(Lone::new(lane, pos, vel));
                block.alone[lane] = true;
                continue;
            }
            for axis in 0..3 {
                from.pos[axis][lane] = pos[axis];
                from.vel[axis][lane] = vel[axis];
            }
        }
        for axis in 0..3 {
            block.step[axis] = from.vel[axis].map(|v| v * step_s);
        }
        block.watch.narrow(&nodes[0], step_s, AHEAD_OF_START, &from.pos, &block.step, width);
        block.iterate(way.field, nodes, step_s, &from);
        for (slot, node) in nodes.iter().enumerate() {
            if slot > 0 {
                block.go_alone(way, &nodes[slot - 1], node, step_s, true);
            }
            for n in 0..block.lones.len() {
                let (lane, (pos, vel)) = (block.lones[n].lane, block.lones[n].state());
                let acc = way.field.pull_at(node, pos, vel);
                for axis in 0..3 {
                    block.acc[slot][axis][lane] = acc[axis];
                }
            }
        }
        block
    }

    /// Takes those that go by themselves from one node to the next.
    fn go_alone(&mut self, way: &mut Way<'_>, from: &Node, to: &Node, step_s: f64, starting: bool) {
        let mut n = 0;
        while n < self.lones.len() {
            let lone = &mut self.lones[n];
            let lane = lone.lane;
            way.work += lone.look(way.field, way.eph, way.cells, from.t_s, step_s, to.t_s);
            if let Some((t_s, source)) = lone.step(starting) {
                way.lost.push((t_s, self.ids[lane], source));
                self.take_out(lane);
                self.lones.remove(n);
                continue;
            }
            let (pos, _) = lone.state();
            for axis in 0..3 {
                self.pos[axis][lane] = pos[axis];
            }
            n += 1;
        }
    }

    fn take_out(&mut self, lane: usize) {
        self.lives[lane] = false;
        self.alone[lane] = false;
        for axis in 0..3 {
            self.pos[axis][lane] = PARKED_M;
            self.step[axis][lane] = 0.0;
            for acc in &mut self.acc {
                acc[axis][lane] = 0.0;
            }
        }
    }

    /// Finds the places of the start's nodes. Each round takes the accelerations at the places that those of the last round lead to, until they
    /// no longer change (É. Picard, J. Math. Pures Appl. 6 (1890), 145).
    fn iterate(&mut self, field: &Field, nodes: &[Node], step_s: f64, from: &States) {
        #[expect(clippy::cast_precision_loss, reason = "a few")]
        let along = |node: usize| (node as f64, node as f64 - (KEPT - 1) as f64);
        let first = along(0).1;
        self.pos = from.pos;
        self.pull(field, &nodes[0], 0);
        for slot in 1..KEPT {
            self.acc[slot] = self.acc[0];
        }
        let places: [Weights; KEPT] = std::array::from_fn(|node| between(first, along(node).1).0);
        let mut last = f64::INFINITY;
        for round in 0..MOST_ROUNDS {
            let mut changed = 0.0_f64;
            for node in 1..KEPT {
                self.place(&places[node], from, along(node).0 * step_s, step_s * step_s);
                let before = self.acc[node];
                self.pull(field, &nodes[node], node);
                changed = changed.max(self.largest_change(&before, node));
            }
            // Each round shrinks the change by about the same factor, so this is what the next one would still change. When it no longer
            // shrinks, it is made of roundings.
            let next = changed * (changed / last);
            if round > 3 && (next <= CONVERGED || changed >= last) {
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

    /// One step, to the `k`-th node from the start.
    pub(super) fn step(&mut self, way: &mut Way<'_>, from: &Node, node: &Node, k: u32, step_s: f64) {
        self.predict(step_s * step_s);
        self.go_alone(way, from, node, step_s, false);
        self.newest = (self.newest + 1) % KEPT;
        self.pull(way.field, node, self.newest);
        if k.is_multiple_of(WATCHED) {
            self.look_round(node, step_s);
        }
    }

    fn predict(&mut self, step2: f64) {
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
    }

    /// Looks which tracers have to go by themselves from here, and which no longer.
    fn look_round(&mut self, node: &Node, step_s: f64) {
        let speeds = self.by_slot(&SPEED, step_s * step_s);
        let mut n = 0;
        while n < self.lones.len() {
            let lone = &mut self.lones[n];
            let (lane, (pos, vel)) = (lone.lane, lone.state());
            lone.clean =
                if self.watch.near(node, (pos, vel), step_s, AHEAD) { 0 } else { lone.clean + WATCHED };
            if lone.clean <= CLEAN {
                n += 1;
                continue;
            }
            self.lones.remove(n);
            self.alone[lane] = false;
            for axis in 0..3 {
                self.step[axis][lane] = step_s * vel[axis] - self.sum(&speeds, axis, lane);
            }
        }
        let half2 = 0.5 * step_s * step_s;
        self.watch.narrow(node, step_s, AHEAD, &self.pos, &self.step, self.width);
        if !self.watch.looks() {
            return;
        }
        for from in (0..self.width).step_by(LANES) {
            let part = |row: &Row| f64x4::new(lanes(row, from));
            let pos = self.pos.each_ref().map(part);
            let bent = self.acc[self.newest].each_ref().map(part);
            let step = self.step.each_ref().map(part);
            let moved = [0, 1, 2].map(|axis| step[axis] + bent[axis] * half2);
            let margins = self.watch.margins(node, pos, moved, step_s, AHEAD);
            for lane in (from..self.ids.len()).take(LANES) {
                if margins[lane - from] < 0.0 && self.lives[lane] && !self.alone[lane] {
                    let pos = [0, 1, 2].map(|axis| self.pos[axis][lane]);
                    let vel = [0, 1, 2]
                        .map(|axis| (self.step[axis][lane] + self.sum(&speeds, axis, lane)) / step_s);
                    self.lones.push(Lone::new(lane, pos, vel));
                    self.alone[lane] = true;
                }
            }
        }
    }

    fn sum(&self, weights: &Weights, axis: usize, lane: usize) -> f64 {
        weights.iter().zip(&self.acc).map(|(weight, acc)| weight * acc[axis][lane]).sum()
    }

    /// Finds the ways of those that go by themselves as far as `to_s`, which the next node at `next_s` is not before.
    pub(super) fn look(&mut self, way: &mut Way<'_>, from_s: f64, step_s: f64, to_s: f64) {
        for lone in &mut self.lones {
            way.work += lone.look(way.field, way.eph, way.cells, from_s, step_s, to_s);
        }
    }

    /// Accelerations at the places of the block, into a slot.
    fn pull(&mut self, field: &Field, node: &Node, slot: usize) {
        let Self { pulls, watch, pos, acc, width, .. } = self;
        pulls.take(field, node, |source| watch.slight(source));
        pulls.set(field, node, pos, &mut acc[slot], *width);
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

    /// The states of those that go by themselves, at an instant that was looked at; `None` for those that are gone by then.
    pub(super) fn lone_states(&self, t_s: f64) -> impl Iterator<Item = (usize, Option<Moving>)> {
        self.lones.iter().map(move |lone| (lone.lane, lone.at(t_s)))
    }

    /// Those that go by themselves and are lost on the way that was looked at, until an instant.
    pub(super) fn losses_between(&self, from_s: f64, to_s: f64) -> impl Iterator<Item = (f64, usize, usize)> {
        let lost = self.lones.iter().filter_map(|lone| Some((lone.lost_ahead()?, self.ids[lone.lane])));
        let forward = to_s >= from_s;
        lost.filter(move |((t_s, _), _)| if forward { *t_s <= to_s } else { *t_s >= to_s })
            .map(|((t_s, source), id)| (t_s, id, source))
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

/// Some numbers of a row, side by side.
#[inline]
fn lanes(row: &Row, from: usize) -> [f64; LANES] {
    let mut lanes = [0.0; LANES];
    lanes.copy_from_slice(&row[from..from + LANES]);
    lanes
}
