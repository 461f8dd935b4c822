//! The steps of one direction of time, in one flat array.

use super::State;
use crate::Vector3;

/// Numbers kept for each body and step: position, velocity, acceleration at its start, and the seven
/// coefficients b0 to b6 of each axis, in the order `[x0 y0 z0] [vx vy vz] [ax ay az] [b0x b0y b0z] … [b6x b6y b6z]`.
pub const PER_BODY: usize = 30;

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

    /// Memory held, bytes.
    pub fn bytes(&self) -> usize {
        (self.data.len() + self.starts_s.len() + self.steps_s.len()) * size_of::<f64>()
    }
}

/// State from the numbers of one body in one step, `h` of the step on, 0 to 1.
///
/// # Source
/// E. Everhart, "An efficient integrator that uses Gauss-Radau spacings", in Dynamics of Comets (1985), 185;
/// the acceleration a0 + b0 h + … + b6 h⁷, integrated once and twice.
pub fn evaluate(numbers: &[f64], step_s: f64, h: f64) -> State {
    let mut pos = [0.0; 3];
    let mut vel = [0.0; 3];
    for axis in 0..3 {
        let n = |row: usize| numbers[row * 3 + axis];
        let (x0, v0, a0) = (n(0), n(1), n(2));
        let v = n(9) / 8.0;
        let v = n(8) / 7.0 + h * v;
        let v = n(7) / 6.0 + h * v;
        let v = n(6) / 5.0 + h * v;
        let v = n(5) / 4.0 + h * v;
        let v = n(4) / 3.0 + h * v;
        let v = n(3) / 2.0 + h * v;
        vel[axis] = v0 + step_s * h * (a0 + h * v);
        let x = n(9) / 72.0;
        let x = n(8) / 56.0 + h * x;
        let x = n(7) / 42.0 + h * x;
        let x = n(6) / 30.0 + h * x;
        let x = n(5) / 20.0 + h * x;
        let x = n(4) / 12.0 + h * x;
        let x = n(3) / 6.0 + h * x;
        let x = a0 / 2.0 + h * x;
        pos[axis] = x0 + step_s * h * (v0 + step_s * h * x);
    }
    State { pos: Vector3::from(pos), vel: Vector3::from(vel) }
}
