//! The paths of one direction of time: of each body its own pieces, which follow one another; or, where long steps were made, knots.

use super::knots::Knots;
use super::{State, Tolerance};
use crate::Vector3;
use crate::integrate::PER_BODY;
use crate::integrate::long_steps::Choice;
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

/// A stretch of time on which paths were integrated by long steps, and are kept in knots.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LongStretch {
    /// From when, seconds from the scenario's start.
    pub from_s: f64,
    /// Until when; before `from_s` where time goes back.
    pub until_s: f64,
    /// How many knots it has.
    pub knots: usize,
    /// The largest errors of paths between knots, as parts of the distance and the speed of each body on its orbit.
    pub errors: Tolerance,
}

/// Paths from time 0 in one direction.
///
/// Each step of the integrator makes a piece of every body; thinning makes one of several. Long steps make no pieces.
#[derive(Debug, Clone, PartialEq)]
pub struct Track {
    direction: f64,
    end_s: f64,
    steps: usize,
    tolerance: Tolerance,
    bodies: Vec<Pieces>,
    /// By which long steps, where there are any.
    choice: Option<Choice>,
    /// In the order of the track; between them there are pieces.
    long: Vec<Knots>,
}

impl Track {
    /// Nothing yet. `direction` is 1 for time going on, -1 for time going back.
    pub fn new(bodies: usize, direction: f64) -> Self {
        let bodies = vec![Pieces::default(); bodies];
        Self {
            direction,
            end_s: 0.0,
            steps: 0,
            tolerance: Tolerance::ROUNDING,
            bodies,
            choice: None,
            long: Vec::new(),
        }
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

    /// How far at most its paths lie from the integrated ones, but on [`Track::long_stretches`].
    pub const fn tolerance(&self) -> Tolerance {
        self.tolerance
    }

    /// Takes all pieces out, to be put back by [`Track::push_piece`] within another tolerance.
    pub(super) fn start_anew(&mut self, tolerance: Tolerance) -> Self {
        let empty = vec![Pieces::default(); self.bodies.len()];
        let bodies = std::mem::replace(&mut self.bodies, empty);
        let old = Self { bodies, long: Vec::new(), ..*self };
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

    /// By which long steps it goes on where it does.
    pub const fn choice(&self) -> Option<Choice> {
        self.choice
    }

    /// Says by which long steps it goes on.
    pub(super) fn set_choice(&mut self, choice: Choice) {
        self.choice = Some(choice);
    }

    /// Begins a stretch of long steps where the track ends.
    pub(super) fn begin_long(&mut self, knots: Knots) {
        self.long.push(knots);
    }

    /// Ends the stretch of long steps that it is in. One of a single knot is none.
    pub(super) fn end_long(&mut self) {
        let Some(knots) = self.long.last_mut() else { return };
        knots.close();
        self.end_s = knots.settled_s();
        if knots.len() < 2 {
            self.long.pop();
        }
    }

    /// Adds a knot to the stretch of long steps that it is in, after so many of them; as [`Knots::push`] does.
    pub(super) fn push_knot(&mut self, t_s: f64, pos: &[f64], vel: &[f64], steps: usize) -> bool {
        let Some(knots) = self.long.last_mut() else { return false };
        let added = knots.push(t_s, pos, vel);
        if added {
            self.steps += steps;
            if knots.settled_s() * self.direction > self.end_s * self.direction {
                self.end_s = knots.settled_s();
            }
        }
        added
    }

    /// Leaves out every second knot of the last stretch of long steps. False where that can't be done.
    pub(super) fn thin_knots(&mut self) -> bool {
        self.long.last_mut().is_some_and(Knots::thin)
    }

    /// The stretches of long steps, in the order of the track.
    pub fn long_stretches(&self) -> impl Iterator<Item = LongStretch> {
        self.long.iter().map(|knots| LongStretch {
            from_s: knots.start_s(),
            until_s: knots.settled_s(),
            knots: knots.len(),
            errors: knots.errors(),
        })
    }

    /// The stretch of long steps that holds an instant, or that is the end of the track before it.
    fn long_at(&self, t_s: f64) -> Option<&Knots> {
        if self.long.is_empty() {
            return None;
        }
        let past =
            self.long.partition_point(|knots| knots.start_s() * self.direction <= t_s * self.direction);
        let knots = self.long.get(past.checked_sub(1)?)?;
        let within = t_s * self.direction < knots.settled_s() * self.direction;
        let last = knots.settled_s() * self.direction >= self.end_s * self.direction;
        (within || last).then_some(knots)
    }

    /// Start and end of the polynomial of a body at an instant, and just after it in the order of the track.
    fn extent(&self, body: usize, t_s: f64) -> (f64, f64) {
        if let Some(knots) = self.long_at(t_s) {
            let (start_s, end_s) = knots.piece(t_s);
            return (start_s, if end_s.abs() < self.end_s.abs() { end_s } else { self.end_s });
        }
        let Some(pieces) = self.bodies.get(body) else { return (t_s, self.end_s) };
        let past = pieces.starts_s.partition_point(|start| start * self.direction <= t_s * self.direction);
        let start_s = pieces.starts_s.get(past.max(1) - 1).copied().unwrap_or(t_s);
        // The next piece starts to the bit where the one before it ends, unless long steps come between.
        let end_s = pieces.starts_s.get(past).copied().unwrap_or(self.end_s);
        let long = self.long.iter().map(Knots::start_s).find(|long_s| long_s.abs() > t_s.abs());
        (start_s, long.map_or(end_s, |long_s| if long_s.abs() < end_s.abs() { long_s } else { end_s }))
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
        if let Some(knots) = self.long_at(t_s) {
            return knots.state(body, if t_s.abs() < self.end_s.abs() { t_s } else { self.end_s });
        }
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
        let first = |body: &usize| self.extent(*body, near_s).0.abs();
        let mut start_s = bodies.iter().map(first).fold(0.0, f64::max) * self.direction;
        let mut ended = !covered;
        std::iter::from_fn(move || {
            if ended {
                return None;
            }
            let next = |body: &usize| self.extent(*body, start_s).1;
            let end_s =
                bodies.iter().map(next).fold(self.end_s, |a, b| if b.abs() < a.abs() { b } else { a });
            let stretch = (start_s, end_s - start_s);
            ended = end_s.abs() > far_s.abs() || end_s.abs() >= self.end_s.abs();
            start_s = end_s;
            Some(stretch)
        })
    }

    /// The numbers of a body on one of its [`Track::stretches`].
    pub fn numbers(&self, body: usize, start_s: f64, step_s: f64) -> Option<[f64; PER_BODY]> {
        if let Some(knots) = self.long_at(start_s) {
            return knots.numbers(body, start_s, step_s);
        }
        Some(self.find(body, start_s)?.within(start_s, step_s))
    }

    /// How many numbers [`Track::write`] writes.
    pub(super) fn written(&self) -> usize {
        let pieces = self.bodies.iter().map(|pieces| 1 + pieces.starts_s.len() * (2 + PER_BODY));
        4 + pieces.sum::<usize>() + 6 + self.long.iter().map(Knots::written).sum::<usize>()
    }

    /// All numbers of its long steps, if it has any.
    pub fn long_numbers(&self) -> Vec<f64> {
        let mut numbers = Vec::with_capacity(self.long.iter().map(Knots::written).sum());
        for knots in &self.long {
            knots.write(&mut numbers);
        }
        numbers
    }

    /// Writes it: how many steps, the end, both tolerances, and for each body how many pieces, all starts, all lengths, all
    /// polynomials; five numbers of the choice of long steps (a step of 0: none), how many stretches of these, and each of them.
    pub(super) fn write(&self, numbers: &mut Vec<f64>) {
        let Tolerance { place, velocity } = self.tolerance;
        numbers.extend([number_from(self.steps), self.end_s, place, velocity]);
        for pieces in &self.bodies {
            numbers.push(number_from(pieces.starts_s.len()));
            numbers.extend_from_slice(&pieces.starts_s);
            numbers.extend_from_slice(&pieces.steps_s);
            numbers.extend_from_slice(&pieces.numbers);
        }
        numbers.extend(self.choice.map_or([0.0; 5], |choice| {
            let Choice { centre, step_s, energy_error, trial_error_rad, trial_s } = choice;
            [number_from(centre), step_s, energy_error, trial_error_rad, trial_s]
        }));
        numbers.push(number_from(self.long.len()));
        for knots in &self.long {
            knots.write(numbers);
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
            choice: None,
            long: Vec::new(),
        };
        for _ in 0..bodies {
            let count = count_from(*take(1)?.first()?)?;
            track.bodies.push(Pieces {
                starts_s: take(count)?.to_vec(),
                steps_s: take(count)?.to_vec(),
                numbers: take(count.checked_mul(PER_BODY)?)?.to_vec(),
            });
        }
        let [centre, step_s, energy_error, trial_error_rad, trial_s] = *take(5)? else { return None };
        if step_s > 0.0 {
            let centre = count_from(centre).filter(|centre| *centre < bodies)?;
            track.choice = Some(Choice { centre, step_s, energy_error, trial_error_rad, trial_s });
        }
        for _ in 0..count_from(*take(1)?.first()?)? {
            track.long.push(Knots::read(bodies, numbers)?);
        }
        Some(track)
    }

    /// Memory held, bytes.
    pub fn bytes(&self) -> usize {
        let pieces: usize = self.bodies.iter().map(|pieces| pieces.starts_s.len()).sum();
        pieces * (2 + PER_BODY) * size_of::<f64>() + self.long.iter().map(Knots::bytes).sum::<usize>()
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
