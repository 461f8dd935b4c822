//! Growing an ephemeris: from an initial state, both ways in time, a few steps at a time.

use super::{Ephemeris, State};
use crate::gravity::Field;
use crate::initial::InitialState;
use crate::integrate::{PER_BODY, Radau};
use crate::scenario::BodyId;
use std::fmt;

/// Most memory that an ephemeris may take, bytes.
const MOST_BYTES: usize = 64 << 20;

/// Why the integration can't go on.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Why {
    /// Two points fall into each other.
    Collapse,
    /// The paths would take more memory than is allowed.
    TooLong,
}

/// The integration can't go on.
#[derive(Debug, Clone, PartialEq)]
pub struct Stopped {
    /// The bodies concerned; two of them for [`Why::Collapse`].
    pub bodies: Vec<BodyId>,
    /// Their names.
    pub names: Vec<String>,
    /// When, seconds from the scenario's start.
    pub t_s: f64,
    /// Why.
    pub why: Why,
}

impl fmt::Display for Stopped {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let t_s = self.t_s;
        match self.why {
            Why::Collapse => {
                let names = self.names.join(" and ");
                write!(
                    f,
                    "{names} fall into each other {t_s:.3} s from the start; give one of them a radius, or a little speed aside"
                )
            }
            Why::TooLong => {
                let megabytes = MOST_BYTES >> 20;
                write!(
                    f,
                    "the paths take more than {megabytes} MB after {t_s:.0} s; show less time, fewer bodies, or wider orbits"
                )
            }
        }
    }
}

impl std::error::Error for Stopped {}

/// An ephemeris that grows.
#[derive(Debug, Clone)]
pub struct Propagation {
    initial: InitialState,
    ephemeris: Ephemeris,
    forward: Run,
    backward: Run,
}

/// The integration in one direction of time.
#[derive(Debug, Clone)]
struct Run {
    field: Field,
    radau: Radau,
    /// Numbers of all bodies in a step, kept to save allocations.
    numbers: Vec<f64>,
    stopped: Option<Stopped>,
}

impl Run {
    fn new(initial: &InitialState, direction: f64) -> Self {
        let pos: Vec<f64> = initial.bodies.iter().flat_map(|body| <[f64; 3]>::from(body.pos)).collect();
        let vel: Vec<f64> = initial.bodies.iter().flat_map(|body| <[f64; 3]>::from(body.vel)).collect();
        let field = Field::new(initial);
        let first_s = direction * first_step_s(field.gms_m3_s2(), &pos, &vel);
        let numbers = vec![0.0; initial.bodies.len() * PER_BODY];
        Self { radau: Radau::new(0.0, &pos, &vel, first_s), field, numbers, stopped: None }
    }

    fn step(&mut self, initial: &InitialState) -> Result<(), Stopped> {
        if self.radau.solve(&self.field).is_err() {
            return Err(self.collapse(initial));
        }
        for (body, numbers) in self.numbers.chunks_exact_mut(PER_BODY).enumerate() {
            numbers.copy_from_slice(&self.radau.numbers(body));
        }
        Ok(())
    }

    /// Which bodies fall into each other: the pair with the shortest time scale.
    fn collapse(&self, initial: &InitialState) -> Stopped {
        let mut pair = (0, 0);
        let mut least = f64::INFINITY;
        let place = |body: usize| {
            let n = self.radau.numbers(body);
            [n[0], n[1], n[2]]
        };
        let gms = self.field.gms_m3_s2();
        for i in 0..gms.len() {
            for j in i + 1..gms.len() {
                let square = free_fall_squared(gms[i] + gms[j], place(i), place(j));
                if square < least {
                    (pair, least) = ((i, j), square);
                }
            }
        }
        let bodies = vec![BodyId(pair.0), BodyId(pair.1)];
        let names = bodies.iter().map(|body| initial.bodies[body.0].name.clone()).collect();
        Stopped { bodies, names, t_s: self.radau.t_s(), why: Why::Collapse }
    }
}

impl Propagation {
    /// Nothing integrated yet; time starts at 0.
    pub fn new(initial: &InitialState) -> Self {
        Self {
            ephemeris: Ephemeris::new(initial.bodies.iter().map(|body| body.gm_m3_s2).collect()),
            forward: Run::new(initial, 1.0),
            backward: Run::new(initial, -1.0),
            initial: initial.clone(),
        }
    }

    /// What has been integrated so far.
    pub fn ephemeris(&self) -> &Ephemeris {
        &self.ephemeris
    }

    /// What has been integrated.
    pub fn into_ephemeris(self) -> Ephemeris {
        self.ephemeris
    }

    /// Integrates on towards `until_s` (seconds from the start; back in time when negative), by at most `max_steps` steps.
    /// True once that instant is covered. Steps don't depend on what was asked for: the same bits come of any sequence of calls.
    ///
    /// # Errors
    /// [`Stopped`], again at every later call in that direction, when it can't go on; what was integrated until then stays.
    pub fn advance(&mut self, until_s: f64, max_steps: usize) -> Result<bool, Stopped> {
        let backward = until_s < 0.0;
        for _ in 0..max_steps {
            if self.covers(until_s) {
                return Ok(true);
            }
            let run = if backward { &mut self.backward } else { &mut self.forward };
            if let Some(stopped) = &run.stopped {
                return Err(stopped.clone());
            }
            if self.ephemeris.bytes() > MOST_BYTES {
                let t_s = run.radau.t_s();
                return Err(Stopped { bodies: Vec::new(), names: Vec::new(), t_s, why: Why::TooLong });
            }
            if let Err(stopped) = run.step(&self.initial) {
                run.stopped = Some(stopped.clone());
                return Err(stopped);
            }
            let track = if backward { self.ephemeris.backward_mut() } else { self.ephemeris.forward_mut() };
            track.push(run.radau.t_s(), run.radau.step_s(), &run.numbers);
            run.radau.finish();
        }
        Ok(self.covers(until_s))
    }

    fn covers(&self, until_s: f64) -> bool {
        let track = if until_s < 0.0 { self.ephemeris.backward() } else { self.ephemeris.forward() };
        !track.is_empty() && track.end_s().abs() >= until_s.abs()
    }
}

/// States of all bodies at one instant, seconds from that of `initial` (negative: before it). Contacts are left out.
///
/// # Errors
/// [`Stopped`] when bodies fall into each other on the way.
pub fn states_at(initial: &InitialState, t_s: f64) -> Result<Vec<State>, Stopped> {
    let mut run = Run::new(initial, if t_s < 0.0 { -1.0 } else { 1.0 });
    loop {
        run.step(initial)?;
        let (start_s, step_s) = (run.radau.t_s(), run.radau.step_s());
        if (start_s + step_s).abs() >= t_s.abs() {
            let h = (t_s - start_s) / step_s;
            return Ok(run
                .numbers
                .chunks_exact(PER_BODY)
                .map(|n| super::track::evaluate(n, step_s, h))
                .collect());
        }
        run.radau.finish();
    }
}

/// Where the search for the first step starts, s: a small part of the shortest time in which a pair falls or passes.
fn first_step_s(gms: &[f64], pos: &[f64], vel: &[f64]) -> f64 {
    /// The search shortens a step more cheaply than steps grow.
    const PART: f64 = 0.05;
    /// Where nothing pulls on anything; any number does.
    const FREE_S: f64 = 1e6;
    let at = |from: &[f64], body: usize| [from[3 * body], from[3 * body + 1], from[3 * body + 2]];
    let mut least = f64::INFINITY;
    for i in 0..gms.len() {
        for j in i + 1..gms.len() {
            let gm = gms[i] + gms[j];
            if gm > 0.0 {
                let passing = squared(at(pos, i), at(pos, j)) / squared(at(vel, i), at(vel, j));
                least = least.min(free_fall_squared(gm, at(pos, i), at(pos, j))).min(passing);
            }
        }
    }
    if least.is_finite() && least > 0.0 { PART * least.sqrt() } else { FREE_S }
}

fn squared(a: [f64; 3], b: [f64; 3]) -> f64 {
    let d = [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
    d[0] * d[0] + d[1] * d[1] + d[2] * d[2]
}

/// Square of the time in which two bodies would fall into each other, to a factor; infinite for two tracers.
fn free_fall_squared(gm: f64, a: [f64; 3], b: [f64; 3]) -> f64 {
    let r2 = squared(a, b);
    r2 * r2.sqrt() / gm
}
