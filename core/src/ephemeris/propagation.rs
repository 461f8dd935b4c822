//! Growing an ephemeris: from an initial state, both ways in time, a few steps at a time.

use super::run::Run;
use super::thin::Thinner;
use super::track::evaluate;
use super::{Ephemeris, State};
use crate::initial::InitialState;
use crate::integrate::PER_BODY;
use crate::scenario::BodyId;
use std::fmt;

/// Most memory that the ephemeris of a show may take, bytes: it is held by the page and by the worker beside it.
pub const SHOW_BYTES: usize = 64 << 20;

/// Why the integration can't go on.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Why {
    /// Two points fall into each other.
    Collapse,
    /// The paths would take more memory than is allowed.
    TooLong {
        /// That bound, bytes.
        most_bytes: usize,
    },
}

/// The integration can't go on.
#[derive(Debug, Clone, PartialEq)]
pub struct Stopped {
    /// The bodies concerned: two of them for [`Why::Collapse`], none for [`Why::TooLong`].
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
            Why::TooLong { most_bytes } => {
                let megabytes = most_bytes >> 20;
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
    forward_thinner: Thinner,
    backward_thinner: Thinner,
    forward_stopped: Option<Stopped>,
    backward_stopped: Option<Stopped>,
    most_bytes: usize,
}

impl Propagation {
    /// Nothing integrated yet; time starts at 0. It may grow to [`SHOW_BYTES`]: three quarters of it for the time from 0 on, a
    /// quarter for the time before. Paths that would outgrow this are thinned to the next of [`super::Tolerance::ALL`].
    pub fn new(initial: &InitialState) -> Self {
        Self::with_most_bytes(initial, SHOW_BYTES)
    }

    /// The same, with another bound on its memory, bytes.
    pub fn with_most_bytes(initial: &InitialState, most_bytes: usize) -> Self {
        let thinner = Thinner::new(initial);
        Self {
            most_bytes,
            ephemeris: Ephemeris::new(initial.bodies.iter().map(|body| body.gm_m3_s2).collect()),
            forward: Run::new(initial, 1.0),
            backward: Run::new(initial, -1.0),
            forward_thinner: thinner.clone(),
            backward_thinner: thinner,
            forward_stopped: None,
            backward_stopped: None,
            initial: initial.clone(),
        }
    }

    /// Makes all steps a share of their usual length, more than 0: a second opinion about the same motion. For one that has not
    /// been advanced yet.
    pub fn with_step_share(mut self, share: f64) -> Self {
        self.forward.set_step_share(share);
        self.backward.set_step_share(share);
        self
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
        for _ in 0..max_steps {
            if self.covers(until_s) {
                return Ok(true);
            }
            self.step(until_s < 0.0)?;
        }
        Ok(self.covers(until_s))
    }

    fn covers(&self, until_s: f64) -> bool {
        let track = if until_s < 0.0 { self.ephemeris.backward() } else { self.ephemeris.forward() };
        !track.is_empty() && track.end_s().abs() >= until_s.abs()
    }

    fn step(&mut self, backward: bool) -> Result<(), Stopped> {
        let (run, thinner, stopped) = if backward {
            (&mut self.backward, &mut self.backward_thinner, &mut self.backward_stopped)
        } else {
            (&mut self.forward, &mut self.forward_thinner, &mut self.forward_stopped)
        };
        if let Some(stopped) = stopped {
            return Err(stopped.clone());
        }
        let before_0_bytes = self.most_bytes / 4;
        let most_bytes = if backward { before_0_bytes } else { self.most_bytes - before_0_bytes };
        let track = if backward { self.ephemeris.backward() } else { self.ephemeris.forward() };
        if track.bytes() > most_bytes {
            let why = Why::TooLong { most_bytes: self.most_bytes };
            return Err(Stopped { bodies: Vec::new(), names: Vec::new(), t_s: run.t_s(), why });
        }
        let step = run.step(&self.initial).map_err(|_too_small| {
            let why = collapse(run, &self.initial);
            *stopped = Some(why.clone());
            why
        })?;
        let track = if backward { self.ephemeris.backward_mut() } else { self.ephemeris.forward_mut() };
        if step.step_s != 0.0 {
            track.push(step.start_s, step.step_s, run.numbers());
            thinner.grow(track);
        }
        if step.cut {
            thinner.close(track, run.t_s(), run.hosts());
        }
        while track.bytes() > most_bytes && thinner.coarsen(track) {}
        if let Some(contact) = step.contact {
            self.ephemeris.push_contact(contact);
        }
        for switch in step.switches {
            self.ephemeris.push_switch(switch);
        }
        Ok(())
    }
}

fn collapse(run: &Run, initial: &InitialState) -> Stopped {
    let bodies = run.closest().to_vec();
    let names = bodies.iter().map(|body| initial.bodies[body.0].name.clone()).collect();
    Stopped { bodies, names, t_s: run.t_s(), why: Why::Collapse }
}

/// States of all bodies at one instant, seconds from that of `initial` (negative: before it). Contacts are left out.
///
/// # Errors
/// [`Stopped`] when bodies fall into each other on the way.
pub fn states_at(initial: &InitialState, t_s: f64) -> Result<Vec<State>, Stopped> {
    let mut run = Run::without_contacts(initial, if t_s < 0.0 { -1.0 } else { 1.0 });
    loop {
        let step = run.step(initial).map_err(|_too_small| collapse(&run, initial))?;
        if step.step_s != 0.0 && (step.start_s + step.step_s).abs() >= t_s.abs() {
            let h = (t_s - step.start_s) / step.step_s;
            return Ok(run.numbers().chunks_exact(PER_BODY).map(|n| evaluate(n, step.step_s, h)).collect());
        }
    }
}
