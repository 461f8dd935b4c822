//! The steps of one direction of time, in one flat array.

use super::State;
use crate::Vector3;
use crate::integrate::PER_BODY;

/// Steps that follow one another from time 0 in one direction.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Track {
    bodies: usize,
    direction: f64,
    starts_s: Vec<f64>,
    steps_s: Vec<f64>,
    data: Vec<f64>,
}

impl Track {
    /// No steps yet. `direction` is 1 for time going on, -1 for time going back.
    pub fn new(bodies: usize, direction: f64) -> Self {
        Self { bodies, direction, starts_s: Vec::new(), steps_s: Vec::new(), data: Vec::new() }
    }

    /// Whether it has no steps.
    pub fn is_empty(&self) -> bool {
        self.starts_s.is_empty()
    }

    /// How many steps it has.
    pub fn len(&self) -> usize {
        self.starts_s.len()
    }

    /// Where the last step ends, seconds from the scenario's start; 0 without steps.
    pub fn end_s(&self) -> f64 {
        match (self.starts_s.last(), self.steps_s.last()) {
            (Some(start), Some(step)) => start + step,
            _ => 0.0,
        }
    }

    /// Adds a step that starts where the last one ended. `data` has [`PER_BODY`] numbers for each body.
    pub fn push(&mut self, start_s: f64, step_s: f64, data: &[f64]) {
        debug_assert_eq!(data.len(), self.bodies * PER_BODY);
        self.starts_s.push(start_s);
        self.steps_s.push(step_s);
        self.data.extend_from_slice(data);
    }

    /// Start and length of a step, seconds; the length is negative where time goes back.
    pub fn step(&self, index: usize) -> Option<(f64, f64)> {
        Some((*self.starts_s.get(index)?, *self.steps_s.get(index)?))
    }

    /// The numbers of one body in one step.
    pub fn numbers(&self, index: usize, body: usize) -> Option<&[f64]> {
        let from = (index * self.bodies + body) * PER_BODY;
        self.data.get(from..from + PER_BODY)
    }

    /// The step that covers an instant; the nearest one where none does.
    pub fn find(&self, t_s: f64) -> Option<usize> {
        let past = self.starts_s.partition_point(|start| start * self.direction <= t_s * self.direction);
        if self.is_empty() { None } else { Some(past.max(1) - 1) }
    }

    /// State of a body. Times outside the covered interval give its nearest end.
    pub fn state(&self, body: usize, t_s: f64) -> Option<State> {
        let index = self.find(t_s)?;
        let (start_s, step_s) = self.step(index)?;
        let h = ((t_s - start_s) / step_s).clamp(0.0, 1.0);
        Some(evaluate(self.numbers(index, body)?, step_s, h))
    }

    /// Writes the steps from `from` on: all starts, all lengths, all polynomials.
    pub(super) fn write_since(&self, from: usize, numbers: &mut Vec<f64>) {
        numbers.extend_from_slice(self.starts_s.get(from..).unwrap_or_default());
        numbers.extend_from_slice(self.steps_s.get(from..).unwrap_or_default());
        numbers.extend_from_slice(self.data.get(from * self.bodies * PER_BODY..).unwrap_or_default());
    }

    /// Adds `steps` steps as [`Track::write_since`] wrote them.
    pub(super) fn read(&mut self, steps: usize, numbers: &[f64]) {
        debug_assert_eq!(numbers.len(), steps * (2 + self.bodies * PER_BODY));
        self.starts_s.extend_from_slice(&numbers[..steps]);
        self.steps_s.extend_from_slice(&numbers[steps..2 * steps]);
        self.data.extend_from_slice(&numbers[2 * steps..]);
    }

    /// Memory held, bytes.
    pub fn bytes(&self) -> usize {
        (self.data.len() + self.starts_s.len() + self.steps_s.len()) * size_of::<f64>()
    }
}

/// State from the numbers of one body in one step ([`PER_BODY`] of them), `h` of the step on, 0 to 1.
///
/// # Source
/// E. Everhart, "An efficient integrator that uses Gauss-Radau spacings", in Dynamics of Comets (1985), 185;
/// the acceleration a0 + b0 h + … + b6 h⁷, integrated once and twice.
pub fn evaluate(numbers: &[f64], step_s: f64, h: f64) -> State {
    /// Weights of b0 to b6 in the two integrals, smallest term first in use.
    const V: [f64; 7] = [1.0 / 2.0, 1.0 / 3.0, 1.0 / 4.0, 1.0 / 5.0, 1.0 / 6.0, 1.0 / 7.0, 1.0 / 8.0];
    const X: [f64; 7] = [1.0 / 6.0, 1.0 / 12.0, 1.0 / 20.0, 1.0 / 30.0, 1.0 / 42.0, 1.0 / 56.0, 1.0 / 72.0];
    let mut pos = [0.0; 3];
    let mut vel = [0.0; 3];
    let along_s = step_s * h;
    for axis in 0..3 {
        let (mut v, mut x) = (0.0, 0.0);
        for k in (0..7).rev() {
            let b = numbers[9 + 3 * k + axis];
            v = V[k] * b + h * v;
            x = X[k] * b + h * x;
        }
        let (x0, v0, a0) = (numbers[axis], numbers[3 + axis], numbers[6 + axis]);
        vel[axis] = v0 + along_s * (a0 + h * v);
        pos[axis] = x0 + along_s * (v0 + along_s * (0.5 * a0 + h * x));
    }
    State { pos: Vector3::from(pos), vel: Vector3::from(vel) }
}
