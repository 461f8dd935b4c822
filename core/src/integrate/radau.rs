//! The adaptive Gauss-Radau method of 15th order, to round-off.
//!
//! Each step fits the acceleration by a polynomial of degree 7 in time through eight instants of the step, found by
//! iterating prediction and correction until nothing changes above rounding; positions and velocities are its integrals.
//! The sums over steps are compensated, and times are chosen so that a step's end is an exact f64: the errors that are left
//! are roundings without a preferred sign, and energy errors grow like the square root of the number of steps (D. Brouwer,
//! AJ 46 (1937), 149).
//!
//! # Source
//! E. Everhart, in Dynamics of Comets (1985), 185 (the method); H. Rein & D. S. Spiegel, MNRAS 446 (2015), 1424 (iteration to
//! round-off, prediction with the last step's correction, compensation, tolerance 1e-9 of the last coefficient); S. J. Aarseth, in
//! Multiple Time Scales (1985), 377 (the time scale from derivatives of the acceleration), with the factor that T. Pham,
//! H. Rein & D. S. Spiegel, Open J. Astrophys. 7 (2024), use for such time scales: the seventh root of 7! times the tolerance.

use super::from_memory;
use super::spacings::{
    B_FROM_G, BINOMIAL, G_FROM_B, INVERSE, POSITION_FROM_G, SPACINGS, VELOCITY_FROM_G, position_weights,
    velocity_weights,
};
use crate::gravity::Field;
use wide::f64x4;

/// Numbers of one body in one step: position, velocity, acceleration at its start, and the seven coefficients b0 to b6
/// of each axis, in the order `[x0 y0 z0] [vx vy vz] [ax ay az] [b0x b0y b0z] … [b6x b6y b6z]`.
pub const PER_BODY: usize = 30;

/// Numbers worked on side by side: four fill the vector registers of every target twice over. Left to themselves, compilers
/// find them natively and lose them in wasm.
type Lanes = f64x4;
const LANES: usize = 4;

/// Length of a step in time scales: (7! · 1e-9)^(1/7), the tolerance of Rein & Spiegel. Smaller: slower, and no more exact, because rounding
/// already dominates; larger: the error of the method shows.
const STEP_IN_TIME_SCALES: f64 = 0.174_9;

/// A step is repeated when it turns out longer than allowed by more than this, and grows no more than by its inverse.
const LARGEST_CHANGE: f64 = 0.25;

/// Most rounds of prediction and correction in a step. Smooth steps need two or three.
const MOST_ROUNDS: usize = 12;

/// Relative change of the acceleration, in a further round, that would be lost in roundings.
const CONVERGED: f64 = 1e-16;

/// The share of a change of the last coefficient that velocities change by, in units of the step; places change by less.
const LAST_IN_VELOCITY: f64 = 1.0 / 8.0;

/// Accelerations below this part of the largest are taken as made of roundings alone (a body held between equal pulls), and set
/// no step.
const NOISE: f64 = 1e-11;

/// Longest step, s (thirty thousand years): bodies that nothing pulls on would let steps grow for ever.
const LONGEST_STEP_S: f64 = 1e12;

/// Some of the components, with all that is known of them.
#[derive(Debug, Clone, Default, PartialEq)]
struct Block {
    pos: Lanes,
    vel: Lanes,
    /// What rounding has put into `pos` and `vel` too much.
    pos_excess: Lanes,
    vel_excess: Lanes,
    /// Acceleration at the start of the step.
    acc: Lanes,
    b: [Lanes; 7],
    g: [Lanes; 7],
    /// What the last round changed of the last coefficient.
    last_change: Lanes,
    /// What was predicted for `b`.
    predicted: [Lanes; 7],
    last_b: [Lanes; 7],
    last_predicted: [Lanes; 7],
}

impl Block {
    /// The sum of a0 and b, each with its weight, the smallest first.
    #[inline]
    fn weighted(&self, weights: &[f64; 8]) -> Lanes {
        weighted(weights, self.acc, &self.b)
    }
}

/// The sum of a0 and seven coefficients, each with its weight, the smallest first.
#[inline]
fn weighted(weights: &[f64; 8], acc: Lanes, coefficients: &[Lanes; 7]) -> Lanes {
    let mut sum = coefficients[6] * weights[7];
    for k in (0..6).rev() {
        sum += coefficients[k] * weights[k + 1];
    }
    sum + acc * weights[0]
}

/// The sum of those of seven coefficients from `k` on, each with its weight in column `k` of a table, the last first.
#[inline]
fn column(table: &[[f64; 7]; 7], k: usize, coefficients: &[Lanes; 7]) -> Lanes {
    let mut sum = coefficients[6] * table[6][k];
    for j in (k..6).rev() {
        sum += coefficients[j] * table[j][k];
    }
    sum
}

/// The step has become too small to go on: bodies are falling into each other.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct StepTooSmall;

/// Bodies on their way, one step at a time.
#[derive(Debug, Clone, PartialEq)]
pub struct Radau {
    bodies: usize,
    blocks: Vec<Block>,
    t_s: f64,
    step_s: f64,
    next_step_s: f64,
    /// Length of a step in time scales.
    in_time_scales: f64,
    /// Length of the step that `last_b` belongs to; 0 where there is none.
    last_step_s: f64,
    acc_known: bool,
    pos: Vec<f64>,
    vel: Vec<f64>,
    acc: Vec<f64>,
    /// Squares of the acceleration and its first three derivatives at the end of the step, in units of the step, of each component.
    squares: Vec<[f64; 4]>,
}

impl Radau {
    /// Bodies at time `t_s`; positions and velocities have three numbers for each. `first_step_s` is where the search for the
    /// step starts; its sign is the direction of time.
    pub fn new(t_s: f64, pos: &[f64], vel: &[f64], first_step_s: f64) -> Self {
        debug_assert_eq!(pos.len(), vel.len());
        let padded = pos.len().div_ceil(LANES) * LANES;
        let mut blocks = vec![Block::default(); padded / LANES];
        for (i, (&x, &v)) in pos.iter().zip(vel).enumerate() {
            blocks[i / LANES].pos.as_mut_array()[i % LANES] = x;
            blocks[i / LANES].vel.as_mut_array()[i % LANES] = v;
        }
        Self {
            bodies: pos.len() / 3,
            blocks,
            t_s,
            step_s: 0.0,
            next_step_s: first_step_s,
            in_time_scales: STEP_IN_TIME_SCALES,
            last_step_s: 0.0,
            acc_known: false,
            pos: vec![0.0; padded],
            vel: vec![0.0; padded],
            acc: vec![0.0; padded],
            squares: vec![[0.0; 4]; padded],
        }
    }

    /// Start of the step, s.
    pub const fn t_s(&self) -> f64 {
        self.t_s
    }

    /// Keeps the next step from being longer than this, s. What is not a number is no limit.
    pub fn limit_step(&mut self, longest_s: f64) {
        self.next_step_s = self.next_step_s.signum() * self.next_step_s.abs().min(longest_s);
    }

    /// Makes all steps a share of their usual length, more than 0: the same motion by other steps, to compare with.
    pub fn set_step_share(&mut self, share: f64) {
        self.in_time_scales = STEP_IN_TIME_SCALES * share;
    }

    /// Length of the step that [`Radau::solve`] found, s; negative where time goes back.
    pub const fn step_s(&self) -> f64 {
        self.step_s
    }

    /// Finds the next step and its polynomials, and does not move on yet.
    ///
    /// # Errors
    /// [`StepTooSmall`] when it would have to be shorter than time can be told apart.
    pub fn solve(&mut self, field: &mut Field) -> Result<(), StepTooSmall> {
        debug_assert_eq!(field.bodies(), self.bodies);
        if !self.acc_known {
            self.start_accelerations(field);
        }
        let mut step_s = self.next_step_s;
        loop {
            // The end of the step shall be an exact number.
            step_s = (self.t_s + step_s) - self.t_s;
            if step_s.abs() < 1e-14 * self.t_s.abs() || step_s.abs() < f64::MIN_POSITIVE || step_s.is_nan() {
                return Err(StepTooSmall);
            }
            self.step_s = step_s;
            self.predict();
            let finite = self.iterate(field);
            self.expand();
            let wanted_s = if finite { self.in_time_scales * self.time_scale() * step_s.abs() } else { 0.0 };
            if wanted_s < LARGEST_CHANGE * step_s.abs() {
                step_s = step_s.signum() * wanted_s.max(0.01 * step_s.abs());
                continue;
            }
            let next = wanted_s.min(step_s.abs() / LARGEST_CHANGE).min(LONGEST_STEP_S);
            self.next_step_s = step_s.signum() * next;
            return Ok(());
        }
    }

    /// Moves on to the end of the step that [`Radau::solve`] found.
    pub fn finish(&mut self) {
        const POS: [f64; 8] = position_weights(1.0);
        const VEL: [f64; 8] = velocity_weights(1.0);
        let step = self.step_s;
        for block in &mut self.blocks {
            // The small change first, so that the two sums of each kind lose least.
            let bent = block.weighted(&POS) * (step * step) - block.pos_excess;
            let (x, excess) = compensated(block.pos, bent);
            let straight = block.vel * step - (excess + block.vel_excess * step);
            (block.pos, block.pos_excess) = compensated(x, straight);
            let change = block.weighted(&VEL) * step - block.vel_excess;
            (block.vel, block.vel_excess) = compensated(block.vel, change);
            block.last_b = block.b;
            block.last_predicted = block.predicted;
        }
        self.t_s += step;
        self.last_step_s = step;
        self.acc_known = false;
    }

    /// Positions and velocities at the start of the step: three numbers for each body.
    pub fn state(&self, pos: &mut [f64], vel: &mut [f64]) {
        for (i, (x, v)) in pos.iter_mut().zip(vel).enumerate() {
            let (block, l) = (&self.blocks[i / LANES], i % LANES);
            (*x, *v) = (block.pos.as_array()[l], block.vel.as_array()[l]);
        }
    }

    /// The polynomials of one body in the step, in the order of [`PER_BODY`].
    pub fn numbers(&self, body: usize) -> [f64; PER_BODY] {
        let mut numbers = [0.0; PER_BODY];
        for axis in 0..3 {
            let i = 3 * body + axis;
            let (block, l) = (&self.blocks[i / LANES], i % LANES);
            numbers[axis] = block.pos.as_array()[l];
            numbers[3 + axis] = block.vel.as_array()[l];
            numbers[6 + axis] = block.acc.as_array()[l];
            for (k, b) in block.b.iter().enumerate() {
                numbers[9 + 3 * k + axis] = b.as_array()[l];
            }
        }
        numbers
    }

    fn start_accelerations(&mut self, field: &mut Field) {
        for (i, block) in self.blocks.iter().enumerate() {
            self.pos[i * LANES..][..LANES].copy_from_slice(block.pos.as_array());
            self.vel[i * LANES..][..LANES].copy_from_slice(block.vel.as_array());
        }
        field.accelerations(&self.pos, &self.vel, &mut self.acc);
        for (block, acc) in self.blocks.iter_mut().zip(self.acc.chunks_exact(LANES)) {
            block.acc = lanes(acc);
        }
        self.acc_known = true;
    }

    /// Carries the polynomials of the last step on to this one.
    fn predict(&mut self) {
        let ratio = self.step_s / self.last_step_s;
        // Far beyond the last step its polynomials say nothing.
        let known = self.last_step_s != 0.0 && ratio < 20.0;
        let (binomial, g_from_b) = (from_memory(&BINOMIAL), from_memory(&G_FROM_B));
        for block in &mut self.blocks {
            block.predicted = [Lanes::ZERO; 7];
            block.b = [Lanes::ZERO; 7];
            if known {
                let mut power = 1.0;
                for k in 0..7 {
                    power *= ratio;
                    block.predicted[k] = column(binomial, k, &block.last_b) * power;
                    block.b[k] = block.predicted[k] + (block.last_b[k] - block.last_predicted[k]);
                }
            }
            for k in 0..7 {
                block.g[k] = column(g_from_b, k, &block.b);
            }
        }
    }

    /// Predicts and corrects until the polynomials stay as they are. False when a number is no longer finite.
    fn iterate(&mut self, field: &mut Field) -> bool {
        let mut last = f64::INFINITY;
        // Forces so slight that the next change of the path changes them by roundings only are worked out no more.
        let mut anew = true;
        for round in 0..MOST_ROUNDS {
            for node in 1..8 {
                self.place(node, field.needs_velocities(anew));
                field.accelerations_at(node, anew, &self.pos, &self.vel, &mut self.acc);
                match node {
                    1 => self.correct::<1>(),
                    2 => self.correct::<2>(),
                    3 => self.correct::<3>(),
                    4 => self.correct::<4>(),
                    5 => self.correct::<5>(),
                    6 => self.correct::<6>(),
                    _ => self.correct::<7>(),
                }
            }
            let (changed, largest) = self.last_change();
            if !(changed + largest).is_finite() {
                return false;
            }
            // Each round shrinks the change by about the same factor, so this is what the next one would still change.
            let next = if round == 0 { changed } else { changed * (changed / last) };
            // When it no longer shrinks, it is made of roundings.
            if next <= CONVERGED * largest || round > 1 && changed >= last {
                return true;
            }
            last = changed;
            if anew && field.slight_share() * LAST_IN_VELOCITY * changed <= CONVERGED * largest {
                anew = false;
            }
        }
        true
    }

    /// Positions (and velocities) at one of the spacings.
    fn place(&mut self, node: usize, velocities: bool) {
        let step = self.step_s;
        let along = step * SPACINGS[node];
        let weights = POSITION_FROM_G[node].map(|w| w * (step * step));
        for (block, pos) in self.blocks.iter().zip(self.pos.chunks_exact_mut(LANES)) {
            let bent = weighted(&weights, block.acc, &block.g) - block.pos_excess;
            pos.copy_from_slice((block.pos + (block.vel * along + bent)).as_array());
        }
        if velocities {
            let weights = VELOCITY_FROM_G[node].map(|w| w * step);
            for (block, vel) in self.blocks.iter().zip(self.vel.chunks_exact_mut(LANES)) {
                let change = weighted(&weights, block.acc, &block.g) - block.vel_excess;
                vel.copy_from_slice((block.vel + change).as_array());
            }
        }
    }

    /// Takes the accelerations at one of the spacings into the polynomials.
    fn correct<const NODE: usize>(&mut self) {
        let inverse = from_memory(&INVERSE[NODE]);
        for (block, acc) in self.blocks.iter_mut().zip(self.acc.chunks_exact(LANES)) {
            let mut g = (lanes(acc) - block.acc) * inverse[0];
            for j in 1..NODE {
                g = (g - block.g[j - 1]) * inverse[j];
            }
            if NODE == 7 {
                block.last_change = g - block.g[6];
            }
            block.g[NODE - 1] = g;
        }
    }

    /// The largest change of the last coefficient in this round, and the largest acceleration at the last spacing.
    fn last_change(&self) -> (f64, f64) {
        let (mut changed, mut largest) = (0.0, 0.0);
        for (block, acc) in self.blocks.iter().zip(self.acc.chunks_exact(LANES)) {
            for l in 0..LANES {
                changed = larger(changed, block.last_change.as_array()[l].abs());
                largest = larger(largest, acc[l].abs());
            }
        }
        (changed, largest)
    }

    /// Turns the polynomials into powers of time.
    fn expand(&mut self) {
        let b_from_g = from_memory(&B_FROM_G);
        for block in &mut self.blocks {
            for k in 0..7 {
                block.b[k] = column(b_from_g, k, &block.g);
            }
        }
    }

    /// The shortest time scale of all bodies at the end of the step, in units of the step.
    fn time_scale(&mut self) -> f64 {
        // Of the acceleration and its first three derivatives: 1, n, n (n - 1), n (n - 1)(n - 2).
        const WEIGHTS: [[f64; 8]; 4] = [
            [1.0, 1.0, 1.0, 1.0, 1.0, 1.0, 1.0, 1.0],
            [0.0, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0],
            [0.0, 0.0, 2.0, 6.0, 12.0, 20.0, 30.0, 42.0],
            [0.0, 0.0, 0.0, 6.0, 24.0, 60.0, 120.0, 210.0],
        ];
        let weights = from_memory(&WEIGHTS);
        for (block, squares) in self.blocks.iter().zip(self.squares.chunks_exact_mut(LANES)) {
            for (order, weights) in weights.iter().enumerate() {
                let sum = block.weighted(weights);
                for (squares, square) in squares.iter_mut().zip((sum * sum).to_array()) {
                    squares[order] = square;
                }
            }
        }
        let bodies = || self.squares[..3 * self.bodies].chunks_exact(3);
        let square = |axes: &[[f64; 4]], order: usize| axes[0][order] + axes[1][order] + axes[2][order];
        let largest = bodies().map(|axes| square(axes, 0)).fold(0.0, f64::max);
        let mut least = f64::INFINITY;
        for axes in bodies() {
            let squares = [0, 1, 2, 3].map(|order| square(axes, order));
            if squares[0].max(squares[1]).max(squares[2]) <= NOISE * NOISE * largest {
                continue;
            }
            let square = time_scale_square(squares);
            // Not finite where nothing changes: no limit.
            if square < least {
                least = square;
            }
        }
        least.sqrt()
    }
}

/// Square of the time scale of a body, in units of the step, from the squares of its acceleration and the first three derivatives of that by
/// the fraction of the step. Not a number where nothing changes.
#[inline]
pub(crate) fn time_scale_square([a, jerk, snap, crackle]: [f64; 4]) -> f64 {
    ((a * snap).sqrt() + jerk) / ((jerk * crackle).sqrt() + snap)
}

/// As many numbers of a slice as are worked on side by side.
#[inline]
fn lanes(numbers: &[f64]) -> Lanes {
    let mut lanes = [0.0; LANES];
    lanes.copy_from_slice(numbers);
    Lanes::new(lanes)
}

/// The larger of two numbers; NaN when one of them is (`f64::max` would lose it).
#[inline]
fn larger(a: f64, b: f64) -> f64 {
    if b > a || b.is_nan() { b } else { a }
}

/// Sums, and how much of each is rounding: what is to be taken from the next addend.
///
/// # Source
/// W. Kahan, "Further remarks on reducing truncation errors", Comm. ACM 8 (1965), 40.
#[inline]
fn compensated(sum: Lanes, addend: Lanes) -> (Lanes, Lanes) {
    let new = sum + addend;
    (new, (new - sum) - addend)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::initial::Forces;

    /// Steps of one circle around GM 1, and where it ends.
    fn circle(share: f64) -> (u32, [f64; 3]) {
        let turn = std::f64::consts::TAU;
        let mut field = Field::of(vec![1.0, 0.0], &Forces::default(), &[0, 1]);
        let (pos, vel) = ([0.0, 0.0, 0.0, 1.0, 0.0, 0.0], [0.0, 0.0, 0.0, 0.0, 1.0, 0.0]);
        let mut radau = Radau::new(0.0, &pos, &vel, 0.01);
        radau.set_step_share(share);
        let mut steps = 0;
        while radau.t_s() < turn {
            radau.limit_step(turn - radau.t_s());
            radau.solve(&mut field).unwrap();
            radau.finish();
            steps += 1;
        }
        let (mut pos, mut vel) = ([0.0; 6], [0.0; 6]);
        radau.state(&mut pos, &mut vel);
        (steps, [pos[3], pos[4], pos[5]])
    }

    #[test]
    fn steps_of_half_the_length_are_twice_as_many_and_end_in_the_same_place() {
        let ((whole, a), (half, b)) = (circle(1.0), circle(0.5));
        // But for the search for the first and the rest before the end.
        assert!((2 * whole).abs_diff(half) <= 6, "{whole} and {half} steps");
        // Rounding of some tens of steps.
        for (a, b) in a.into_iter().zip(b) {
            assert!((a - b).abs() < 1e-14, "{a} and {b}");
        }
    }
}
