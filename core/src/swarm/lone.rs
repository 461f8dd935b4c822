//! A tracer by itself, where the common step of its block doesn't do: close to a body, and in air.
//!
//! It takes steps of the Gauss-Radau method (`integrate`) in the field of the ephemeris. Each is a half, a quarter, ... of the block's step and
//! lies at a whole multiple of itself, so that tracers in one neighbourhood find the bodies at the same instants, and it comes out at the
//! block's nodes.

use super::field::{Field, Node, apart};
use super::scale::floor_log2;
use crate::ephemeris::Ephemeris;
use crate::integrate::radau::time_scale_square;
use crate::integrate::spacings::{
    B_FROM_G, BINOMIAL, G_FROM_B, INVERSE, POSITION, SPACINGS, VELOCITY, position_weights, velocity_weights,
};

/// Length of a step in time scales, and by how much it may turn out too long: as for bodies (`integrate::radau`).
const STEP_IN_TIME_SCALES: f64 = 0.174_9;
const LARGEST_CHANGE: f64 = 0.25;
const MOST_ROUNDS: usize = 12;
const CONVERGED: f64 = 1e-16;

/// How often a block's step may be halved. A tracer that would need more has fallen into a point.
const MOST_HALVINGS: u32 = 36;

/// Work of a step, in steps of a block.
const WORK: usize = 100;

/// Steps for which the bodies are kept.
const CELLS: usize = 128;

/// How much longer than its chord a piece of the way in a step may be. A step turns by less than a third of a radian.
const LONGER_THAN_CHORD: f64 = 1.02;

/// Part of a radius by which a tracer may dip below a surface unnoticed.
const UNNOTICED: f64 = 1e-9;

/// The bodies at the instants of one step: its eight spacings and its end.
#[derive(Debug, Clone, Default)]
struct Cell {
    key: (u64, u64),
    nodes: [Node; 9],
}

/// The bodies at the instants of the last steps, for tracers that take the same ones.
#[derive(Debug, Clone, Default)]
pub(super) struct Cells(Vec<Cell>);

impl Cells {
    fn at(&mut self, field: &Field, eph: &Ephemeris, t_s: f64, step_s: f64) -> &[Node; 9] {
        if self.0.is_empty() {
            self.0.resize(CELLS, Cell::default());
        }
        let key = (t_s.to_bits(), step_s.to_bits());
        // Any mixture will do: the place of an entry doesn't change what is found.
        let mixed = (key.0 ^ key.1.rotate_left(17)).wrapping_mul(0x9e37_79b9_7f4a_7c15);
        let cell = &mut self.0[(mixed >> 57) as usize % CELLS];
        // No step has length 0, which is the key of an empty cell.
        if cell.key != key {
            cell.key = key;
            for (node, h) in cell.nodes.iter_mut().zip(SPACINGS.into_iter().chain([1.0])) {
                field.fill(eph, t_s + h * step_s, node);
            }
        }
        &cell.nodes
    }
}

/// One step, dense.
#[derive(Debug, Clone, Copy)]
struct Piece {
    t_s: f64,
    step_s: f64,
    pos: [f64; 3],
    vel: [f64; 3],
    acc: [f64; 3],
    b: [[f64; 3]; 7],
}

impl Piece {
    /// Position and velocity at a part of the step.
    fn at(&self, h: f64) -> ([f64; 3], [f64; 3]) {
        let (places, speeds) = (position_weights(h), velocity_weights(h));
        (self.place(&places, h), self.speed(&speeds))
    }

    fn place(&self, weights: &[f64; 8], h: f64) -> [f64; 3] {
        std::array::from_fn(|axis| {
            let mut sum = 0.0;
            for k in (0..7).rev() {
                sum += weights[k + 1] * self.b[k][axis];
            }
            sum += weights[0] * self.acc[axis];
            self.pos[axis] + (h * self.step_s * self.vel[axis] + self.step_s * self.step_s * sum)
        })
    }

    fn speed(&self, weights: &[f64; 8]) -> [f64; 3] {
        std::array::from_fn(|axis| {
            let mut sum = 0.0;
            for k in (0..7).rev() {
                sum += weights[k + 1] * self.b[k][axis];
            }
            self.vel[axis] + self.step_s * (sum + weights[0] * self.acc[axis])
        })
    }

    /// Starts with what the step before leads to.
    fn predict(&mut self, last: &Self) {
        let ratio = self.step_s / last.step_s;
        let mut power = 1.0;
        for k in 0..7 {
            power *= ratio;
            for axis in 0..3 {
                let mut sum = 0.0;
                for j in (k..7).rev() {
                    sum += BINOMIAL[j][k] * last.b[j][axis];
                }
                self.b[k][axis] = power * sum;
            }
        }
    }

    /// Finds the polynomials of the step. False when a number is no longer finite.
    fn solve(&mut self, field: &Field, nodes: &[Node; 9]) -> bool {
        self.acc = field.pull_at(&nodes[0], self.pos, self.vel);
        let mut g = [[0.0; 3]; 7];
        for k in 0..7 {
            for axis in 0..3 {
                for j in (k..7).rev() {
                    g[k][axis] += G_FROM_B[j][k] * self.b[j][axis];
                }
            }
        }
        let mut last = f64::INFINITY;
        for round in 0..MOST_ROUNDS {
            let (mut changed, mut largest) = (0.0_f64, 0.0_f64);
            for n in 1..8 {
                let pos = self.place(&POSITION[n], SPACINGS[n]);
                let vel = if field.airy() { self.speed(&VELOCITY[n]) } else { self.vel };
                let acc = field.pull_at(&nodes[n], pos, vel);
                changed = 0.0;
                for axis in 0..3 {
                    let mut new = (acc[axis] - self.acc[axis]) * INVERSE[n][0];
                    for j in 1..n {
                        new = (new - g[j - 1][axis]) * INVERSE[n][j];
                    }
                    let change = new - g[n - 1][axis];
                    g[n - 1][axis] = new;
                    for k in 0..n {
                        self.b[k][axis] += change * B_FROM_G[n - 1][k];
                    }
                    changed = changed.max(change.abs());
                    largest = largest.max(acc[axis].abs());
                    if !change.is_finite() {
                        return false;
                    }
                }
            }
            if changed <= CONVERGED * largest || round > 1 && changed >= last {
                return true;
            }
            last = changed;
        }
        true
    }

    /// The time scale at the end of the step, in units of the step: from derivatives of the acceleration, as for bodies.
    fn time_scale(&self) -> f64 {
        let mut squares = [0.0; 4];
        for axis in 0..3 {
            let mut d = [self.acc[axis], 0.0, 0.0, 0.0];
            let mut n = 1.0;
            for b in &self.b {
                d[0] += b[axis];
                d[1] += n * b[axis];
                d[2] += n * (n - 1.0) * b[axis];
                d[3] += n * (n - 1.0) * (n - 2.0) * b[axis];
                n += 1.0;
            }
            for (square, d) in squares.iter_mut().zip(d) {
                *square += d * d;
            }
        }
        let square = time_scale_square(squares);
        if square.is_nan() { f64::INFINITY } else { square.sqrt() }
    }

    /// The first touch of a source in the step: after which part of it.
    fn touch(&self, field: &Field, eph: &Ephemeris, nodes: &[Node; 9]) -> Option<(f64, usize)> {
        let (end, _) = self.at(1.0);
        let mut first: Option<(f64, usize)> = None;
        for (source, radius_m) in field.solids() {
            let from = apart(self.pos, nodes[0].at[source]);
            let to = apart(end, nodes[8].at[source]);
            let place = |h: f64| apart(self.at(h).0, field.place(eph, source, self.t_s + h * self.step_s));
            let inwards = dot(from, apart(self.vel, nodes[0].moving[source])) * self.step_s < 0.0;
            let found = if size(from) < radius_m && inwards {
                Some(0.0)
            } else {
                inside(&place, (0.0, from), (1.0, to), radius_m)
            };
            if let Some(h) = found.filter(|h| first.is_none_or(|(earlier, _)| *h < earlier)) {
                first = Some((h, source));
            }
        }
        first
    }
}

/// When a way between two places, known at two parts of a step, first comes from outside a sphere to its inside.
fn inside(
    place: &impl Fn(f64) -> [f64; 3],
    a: (f64, [f64; 3]),
    b: (f64, [f64; 3]),
    radius_m: f64,
) -> Option<f64> {
    let (from, to) = (size(a.1), size(b.1));
    let chord = size(apart(a.1, b.1));
    if from >= radius_m && to < radius_m {
        return crate::math::root::bracketed(|h| size(place(h)) - radius_m, a.0, b.0, 0.0);
    }
    if 0.5 * (from + to - LONGER_THAN_CHORD * chord) >= radius_m
        || chord < UNNOTICED.sqrt() * radius_m
        || from.max(to) < radius_m && chord < 0.5 * radius_m
    {
        return None;
    }
    let half = 0.5 * (a.0 + b.0);
    let middle = (half, place(half));
    inside(place, a, middle, radius_m).or_else(|| inside(place, middle, b, radius_m))
}

fn dot(a: [f64; 3], b: [f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

fn size(a: [f64; 3]) -> f64 {
    dot(a, a).sqrt()
}

/// Where a tracer is, and what it takes its next step by.
#[derive(Debug, Clone, Copy)]
struct Stand {
    pos: [f64; 3],
    vel: [f64; 3],
    /// How often the block's step is halved.
    halvings: u32,
    /// When it touched which source.
    lost: Option<(f64, usize)>,
}

/// A tracer by itself.
#[derive(Debug, Clone)]
pub(super) struct Lone {
    pub(super) lane: usize,
    /// Nodes since it was last where its block's step doesn't do.
    pub(super) clean: u32,
    now: Stand,
    /// The steps before the newest node that can still be asked for, and those after it, with where and when they end.
    behind: Vec<Piece>,
    ahead: Vec<Piece>,
    then: Stand,
    ahead_to_s: Option<f64>,
}

impl Lone {
    pub(super) fn new(lane: usize, pos: [f64; 3], vel: [f64; 3]) -> Self {
        let now = Stand { pos, vel, halvings: 0, lost: None };
        Self { lane, clean: 0, now, behind: Vec::new(), ahead: Vec::new(), then: now, ahead_to_s: None }
    }

    /// Position and velocity at the newest node.
    pub(super) fn state(&self) -> ([f64; 3], [f64; 3]) {
        (self.now.pos, self.now.vel)
    }

    /// Finds the way from the newest node at `from_s`, in steps that are parts of `step_s`, to `to_s`, which is the next node unless what is known of
    /// the bodies ends before. How much work that was.
    pub(super) fn look(
        &mut self,
        field: &Field,
        eph: &Ephemeris,
        cells: &mut Cells,
        from_s: f64,
        step_s: f64,
        to_s: f64,
    ) -> usize {
        if self.ahead_to_s.is_some_and(|there_s| there_s.to_bits() == to_s.to_bits()) {
            return 0;
        }
        self.ahead_to_s = Some(to_s);
        self.ahead.clear();
        let mut stand = self.now;
        let (mut at, mut needed) = (0_u64, stand.halvings);
        while at < 1 << stand.halvings {
            // Longer steps only where they lie at whole multiples of themselves.
            while stand.halvings > needed && at % 2 == 0 {
                (stand.halvings, at) = (stand.halvings - 1, at / 2);
            }
            while stand.halvings < needed {
                (stand.halvings, at) = (stand.halvings + 1, at * 2);
            }
            #[expect(clippy::cast_precision_loss, reason = "far below 2^53")]
            let parts = (at as f64, (1_u64 << stand.halvings) as f64);
            let mut part_s = step_s / parts.1;
            let t_s = from_s + parts.0 * part_s;
            let ends = (t_s + part_s - to_s) * step_s.signum() > 0.0;
            if ends {
                part_s = to_s - t_s;
                if part_s * step_s <= 0.0 {
                    break;
                }
            }
            let nodes = cells.at(field, eph, t_s, part_s);
            let mut piece = Piece {
                t_s,
                step_s: part_s,
                pos: stand.pos,
                vel: stand.vel,
                acc: [0.0; 3],
                b: [[0.0; 3]; 7],
            };
            if let Some(last) = self.ahead.last().or(self.behind.last()) {
                piece.predict(last);
            }
            let allowed_s = field.longest_step_s(&nodes[0], stand.pos, stand.vel);
            let fine = piece.solve(field, nodes);
            let wanted_s = (STEP_IN_TIME_SCALES * piece.time_scale() * part_s.abs()).min(allowed_s);
            let halvings = u32::try_from(floor_log2(step_s.abs() / wanted_s) + 1).unwrap_or_default();
            if !fine || wanted_s < LARGEST_CHANGE * part_s.abs() || allowed_s < part_s.abs() {
                needed = halvings.max(stand.halvings + 1);
                if stand.halvings >= MOST_HALVINGS || needed > MOST_HALVINGS {
                    // Into a point: the nearest one.
                    stand.lost = Some((t_s, field.nearest(&nodes[0], stand.pos)));
                    break;
                }
                continue;
            }
            if let Some((h, source)) = piece.touch(field, eph, nodes) {
                self.ahead.push(piece);
                stand.lost = Some((t_s + h * part_s, source));
                break;
            }
            (stand.pos, stand.vel) = piece.at(1.0);
            self.ahead.push(piece);
            at += 1;
            needed = halvings.min(MOST_HALVINGS);
            if ends {
                break;
            }
        }
        self.then = stand;
        WORK * self.ahead.len()
    }

    /// To where [`Lone::look`] came, which is the next node. What lies behind is kept while asked to. When it touched which source on the way, if it did.
    pub(super) fn step(&mut self, keep: bool) -> Option<(f64, usize)> {
        if !keep {
            self.behind.clear();
        }
        self.behind.append(&mut self.ahead);
        self.now = self.then;
        self.ahead_to_s = None;
        self.now.lost
    }

    /// When it touches which source on the way that was looked at, if it does.
    pub(super) fn lost_ahead(&self) -> Option<(f64, usize)> {
        self.ahead_to_s.and(self.then.lost)
    }

    /// Position and velocity at an instant that was looked at; `None` when it is gone by then.
    pub(super) fn at(&self, t_s: f64) -> Option<([f64; 3], [f64; 3])> {
        let ahead = self.ahead_to_s.is_some();
        let lost = if ahead { self.then.lost } else { self.now.lost };
        let pieces = || self.behind.iter().chain(&self.ahead);
        let direction = pieces().next().map_or(1.0, |piece| piece.step_s.signum());
        if lost.is_some_and(|(lost_s, _)| (t_s - lost_s) * direction >= 0.0) {
            return None;
        }
        let piece = pieces().rfind(|piece| (t_s - piece.t_s) * direction >= 0.0);
        Some(piece.map_or((self.now.pos, self.now.vel), |piece| {
            piece.at(((t_s - piece.t_s) / piece.step_s).min(1.0))
        }))
    }
}
