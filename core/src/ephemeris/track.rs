//! The paths of one direction of time: of each body its own pieces, which follow one another.

use super::{State, Tolerance};
use crate::Vector3;
use crate::integrate::PER_BODY;
use crate::math::counts::{count_from, number_from, take};

/// A part of the path of one body: the acceleration as a polynomial of the fraction of it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Piece<'a> {
    /// Where it starts, seconds from the scenario's start.
    pub start_s: f64,
    /// Its length, s; negative where time goes back.
    pub step_s: f64,
    /// Its numbers, [`PER_BODY`] of them.
    pub numbers: &'a [f64],
}

impl Piece<'_> {
    /// The fraction of it at an instant, 0 to 1: the nearest one where it doesn't cover it.
    pub(super) fn part(&self, t_s: f64) -> f64 {
        ((t_s - self.start_s) / self.step_s).clamp(0.0, 1.0)
    }

    /// The same path from `start_s` on for `step_s` seconds, which lie within the piece.
    fn within(&self, start_s: f64, step_s: f64) -> [f64; PER_BODY] {
        let mut out = [0.0; PER_BODY];
        if [start_s, step_s].map(f64::to_bits) == [self.start_s, self.step_s].map(f64::to_bits) {
            out.copy_from_slice(self.numbers);
            return out;
        }
        let h = (start_s - self.start_s) / self.step_s;
        let State { pos, vel } = evaluate(self.numbers, self.step_s, h);
        let ratio = step_s / self.step_s;
        for axis in 0..3 {
            (out[axis], out[3 + axis]) = (pos[axis], vel[axis]);
            // Taylor's series at the new start, by Horner's scheme.
            let mut a: [f64; 8] = std::array::from_fn(|k| self.numbers[6 + 3 * k + axis]);
            for from in 0..7 {
                for k in (from..7).rev() {
                    a[k] += h * a[k + 1];
                }
            }
            let mut power = 1.0;
            for (k, a) in a.into_iter().enumerate() {
                out[6 + 3 * k + axis] = a * power;
                power *= ratio;
            }
        }
        out
    }
}

/// The pieces of one body.
#[derive(Debug, Clone, PartialEq, Default)]
struct Pieces {
    starts_s: Vec<f64>,
    steps_s: Vec<f64>,
    numbers: Vec<f64>,
}

impl Pieces {
    fn push(&mut self, piece: Piece<'_>) {
        self.starts_s.push(piece.start_s);
        self.steps_s.push(piece.step_s);
        self.numbers.extend_from_slice(piece.numbers);
    }

    fn get(&self, index: usize) -> Option<Piece<'_>> {
        let numbers = self.numbers.get(index * PER_BODY..(index + 1) * PER_BODY)?;
        Some(Piece { start_s: *self.starts_s.get(index)?, step_s: *self.steps_s.get(index)?, numbers })
    }
}

/// Paths from time 0 in one direction.
///
/// Each step of the integrator makes a piece of every body; thinning makes one of several.
#[derive(Debug, Clone, PartialEq)]
pub struct Track {
    direction: f64,
    end_s: f64,
    steps: usize,
    tolerance: Tolerance,
    bodies: Vec<Pieces>,
}

impl Track {
    /// Nothing yet. `direction` is 1 for time going on, -1 for time going back.
    pub fn new(bodies: usize, direction: f64) -> Self {
        let bodies = vec![Pieces::default(); bodies];
        Self { direction, end_s: 0.0, steps: 0, tolerance: Tolerance::ROUNDING, bodies }
    }

    /// Whether nothing is covered.
    pub fn is_empty(&self) -> bool {
        self.steps == 0
    }

    /// How many steps of the integrator went into it.
    pub fn len(&self) -> usize {
        self.steps
    }

    /// Where it ends, seconds from the scenario's start; 0 when it is empty.
    pub fn end_s(&self) -> f64 {
        self.end_s
    }

    /// How far at most its paths lie from the integrated ones.
    pub const fn tolerance(&self) -> Tolerance {
        self.tolerance
    }

    /// Takes all pieces out, to be put back by [`Track::push_piece`] within another tolerance.
    pub(super) fn start_anew(&mut self, tolerance: Tolerance) -> Self {
        let empty = vec![Pieces::default(); self.bodies.len()];
        let old = Self { bodies: std::mem::replace(&mut self.bodies, empty), ..*self };
        self.tolerance = tolerance;
        old
    }

    /// Adds a piece of one body.
    pub(super) fn push_piece(&mut self, body: usize, piece: Option<Piece<'_>>) {
        if let (Some(pieces), Some(piece)) = (self.bodies.get_mut(body), piece) {
            pieces.push(piece);
        }
    }

    /// Adds a step that starts where the last one ended. `data` has [`PER_BODY`] numbers for each body.
    pub fn push(&mut self, start_s: f64, step_s: f64, data: &[f64]) {
        debug_assert_eq!(data.len(), self.bodies.len() * PER_BODY);
        for (pieces, numbers) in self.bodies.iter_mut().zip(data.chunks_exact(PER_BODY)) {
            pieces.push(Piece { start_s, step_s, numbers });
        }
        self.steps += 1;
        self.end_s = start_s + step_s;
    }

    /// How many pieces a body has.
    pub fn pieces(&self, body: usize) -> usize {
        self.bodies.get(body).map_or(0, |pieces| pieces.starts_s.len())
    }

    /// A piece of a body.
    pub fn piece(&self, body: usize, index: usize) -> Option<Piece<'_>> {
        self.bodies.get(body)?.get(index)
    }

    /// Puts one piece in the place of `count` pieces of a body, from that at `from` on: with the same start and end, and `numbers`.
    pub(super) fn merge(&mut self, body: usize, from: usize, count: usize, numbers: &[f64; PER_BODY]) {
        let Some(pieces) = self.bodies.get_mut(body) else { return };
        let (Some(first), Some(last)) = (pieces.get(from), pieces.get(from + count - 1)) else { return };
        let step_s = last.start_s + last.step_s - first.start_s;
        pieces.starts_s.drain(from + 1..from + count);
        pieces.steps_s.drain(from + 1..from + count);
        pieces.numbers.drain((from + 1) * PER_BODY..(from + count) * PER_BODY);
        pieces.steps_s[from] = step_s;
        pieces.numbers[from * PER_BODY..(from + 1) * PER_BODY].copy_from_slice(numbers);
    }

    /// The piece of a body that covers an instant; the nearest one where none does.
    pub fn find(&self, body: usize, t_s: f64) -> Option<Piece<'_>> {
        let pieces = self.bodies.get(body)?;
        let past = pieces.starts_s.partition_point(|start| start * self.direction <= t_s * self.direction);
        pieces.get(past.max(1) - 1)
    }

    /// State of a body. Times outside the covered interval give its nearest end.
    pub fn state(&self, body: usize, t_s: f64) -> Option<State> {
        let piece = self.find(body, t_s)?;
        Some(evaluate(piece.numbers, piece.step_s, piece.part(t_s)))
    }

    /// The stretches, start and length in seconds, on which each of some bodies has one and the same piece: those that cover the
    /// time between two instants, the first nearer to 0, in the order of the track.
    pub fn stretches<'a>(
        &'a self,
        bodies: &'a [usize],
        near_s: f64,
        far_s: f64,
    ) -> impl Iterator<Item = (f64, f64)> + 'a {
        let covered = !self.is_empty() && near_s.abs() <= self.end_s.abs();
        let first = |body: &usize| self.find(*body, near_s).map_or(0.0, |piece| piece.start_s.abs());
        let mut start_s = bodies.iter().map(first).fold(0.0, f64::max) * self.direction;
        let mut ended = !covered;
        std::iter::from_fn(move || {
            if ended {
                return None;
            }
            let next = |body: &usize| {
                let pieces = self.bodies.get(*body)?;
                let past =
                    pieces.starts_s.partition_point(|s| s * self.direction <= start_s * self.direction);
                pieces.starts_s.get(past).copied()
            };
            let end_s =
                bodies.iter().filter_map(next).fold(self.end_s, |a, b| if b.abs() < a.abs() { b } else { a });
            let stretch = (start_s, end_s - start_s);
            ended = end_s.abs() > far_s.abs() || end_s.abs() >= self.end_s.abs();
            start_s = end_s;
            Some(stretch)
        })
    }

    /// The numbers of a body on one of its [`Track::stretches`].
    pub fn numbers(&self, body: usize, start_s: f64, step_s: f64) -> Option<[f64; PER_BODY]> {
        Some(self.find(body, start_s)?.within(start_s, step_s))
    }

    /// How many numbers [`Track::write`] writes.
    pub(super) fn written(&self) -> usize {
        4 + self.bodies.iter().map(|pieces| 1 + pieces.starts_s.len() * (2 + PER_BODY)).sum::<usize>()
    }

    /// Writes it: how many steps, the end, both tolerances, and for each body how many pieces, all starts, all lengths, all polynomials.
    pub(super) fn write(&self, numbers: &mut Vec<f64>) {
        let Tolerance { place, velocity } = self.tolerance;
        numbers.extend([number_from(self.steps), self.end_s, place, velocity]);
        for pieces in &self.bodies {
            numbers.push(number_from(pieces.starts_s.len()));
            numbers.extend_from_slice(&pieces.starts_s);
            numbers.extend_from_slice(&pieces.steps_s);
            numbers.extend_from_slice(&pieces.numbers);
        }
    }

    /// As [`Track::write`] wrote it, taken off the front of `numbers`; `None` where they don't fit.
    pub(super) fn read(bodies: usize, direction: f64, numbers: &mut &[f64]) -> Option<Self> {
        let mut take = |count: usize| take(numbers, count);
        let [steps, end_s, place, velocity] = *take(4)? else { return None };
        let mut track = Self {
            direction,
            end_s,
            steps: count_from(steps)?,
            tolerance: Tolerance { place, velocity },
            bodies: Vec::new(),
        };
        for _ in 0..bodies {
            let count = count_from(*take(1)?.first()?)?;
            track.bodies.push(Pieces {
                starts_s: take(count)?.to_vec(),
                steps_s: take(count)?.to_vec(),
                numbers: take(count.checked_mul(PER_BODY)?)?.to_vec(),
            });
        }
        Some(track)
    }

    /// Memory held, bytes.
    pub fn bytes(&self) -> usize {
        self.bodies.iter().map(|pieces| pieces.starts_s.len()).sum::<usize>()
            * (2 + PER_BODY)
            * size_of::<f64>()
    }
}

/// Weights of b0 to b6 in the velocity.
pub(super) const VELOCITY: [f64; 7] =
    [1.0 / 2.0, 1.0 / 3.0, 1.0 / 4.0, 1.0 / 5.0, 1.0 / 6.0, 1.0 / 7.0, 1.0 / 8.0];

/// State from the numbers of one body in one step ([`PER_BODY`] of them), `h` of the step on, 0 to 1.
///
/// # Source
/// E. Everhart, "An efficient integrator that uses Gauss-Radau spacings", in Dynamics of Comets (1985), 185;
/// the acceleration a0 + b0 h + … + b6 h⁷, integrated once and twice.
pub fn evaluate(numbers: &[f64], step_s: f64, h: f64) -> State {
    /// Weights of b0 to b6 in the second integral, smallest term first in use.
    const X: [f64; 7] = [1.0 / 6.0, 1.0 / 12.0, 1.0 / 20.0, 1.0 / 30.0, 1.0 / 42.0, 1.0 / 56.0, 1.0 / 72.0];
    let mut pos = [0.0; 3];
    let mut vel = [0.0; 3];
    let along_s = step_s * h;
    for axis in 0..3 {
        let (mut v, mut x) = (0.0, 0.0);
        for k in (0..7).rev() {
            let b = numbers[9 + 3 * k + axis];
            v = VELOCITY[k] * b + h * v;
            x = X[k] * b + h * x;
        }
        let (x0, v0, a0) = (numbers[axis], numbers[3 + axis], numbers[6 + axis]);
        vel[axis] = v0 + along_s * (a0 + h * v);
        pos[axis] = x0 + along_s * (v0 + along_s * (0.5 * a0 + h * x));
    }
    State { pos: Vector3::from(pos), vel: Vector3::from(vel) }
}
