//! Growing an ephemeris: from an initial state, both ways in time, a few steps at a time.

use super::run::Run;
use super::track::evaluate;
use super::way::Way;
use super::{Ephemeris, State};
use crate::initial::InitialState;
use crate::integrate::long_steps::time;
use crate::integrate::{PER_BODY, StepTooSmall};
use crate::scenario::BodyId;
use std::fmt;

/// Most memory that the ephemeris of a show may take, bytes: it is held by the page and by the worker beside it.
pub const SHOW_BYTES: usize = 64 << 20;

/// Why the integration can't go on.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Why {
    /// Two points fall into each other.
    Collapse,
    /// The paths would take more memory than is allowed.
    TooLong {
        /// Why not by long steps, which take less: whole sentences.
        against: Vec<String>,
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
        match &self.why {
            Why::Collapse => {
                let names = self.names.join(" and ");
                write!(
                    f,
                    "{names} fall into each other {t_s:.3} s from the start; give one of them a radius, or a little speed aside"
                )
            }
            Why::TooLong { against } => {
                let at = time(t_s.abs());
                write!(f, "the paths take too much memory after {at}")?;
                let against = against.join(" ");
                if !against.is_empty() {
                    write!(f, ", and can't go on by long steps ({})", against.trim_end_matches('.'))?;
                }
                f.write_str("; show less time, fewer bodies, or wider orbits")
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
    forward: Way,
    backward: Way,
}

impl Propagation {
    /// Nothing integrated yet; time starts at 0. It may grow to [`SHOW_BYTES`]: three quarters of it for the time from 0 on, a
    /// quarter for the time before. Paths that would outgrow this are thinned to the next of [`super::Tolerance::ALL`], and go on by long
    /// steps where that can be ([`Track::long_stretches`]).
    ///
    /// [`Track::long_stretches`]: super::Track::long_stretches
    pub fn new(initial: &InitialState) -> Self {
        Self::with_most_bytes(initial, SHOW_BYTES)
    }

    /// The same, with another bound on its memory, bytes.
    pub fn with_most_bytes(initial: &InitialState, most_bytes: usize) -> Self {
        let before_0_bytes = most_bytes / 4;
        Self {
            ephemeris: Ephemeris::new(initial.bodies.iter().map(|body| body.gm_m3_s2).collect()),
            forward: Way::new(initial, false, most_bytes - before_0_bytes),
            backward: Way::new(initial, true, before_0_bytes),
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

    /// Integrates on towards `until_s` (seconds from the start; back in time when negative), by at most `max_steps` steps, each of them one of
    /// the exact method or some dozens of long ones.
    /// True once that instant is covered. Steps don't depend on what was asked for: the same bits come of any sequence of calls.
    ///
    /// # Errors
    /// [`Stopped`], again at every later call in that direction, when it can't go on; what was integrated until then stays.
    pub fn advance(&mut self, until_s: f64, max_steps: usize) -> Result<bool, Stopped> {
        for _ in 0..max_steps {
            if self.covers(until_s) {
                return Ok(true);
            }
            let way = if until_s < 0.0 { &mut self.backward } else { &mut self.forward };
            way.step(&self.initial, &mut self.ephemeris)?;
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
    let mut run = Run::without_contacts(initial, if t_s < 0.0 { -1.0 } else { 1.0 });
    loop {
        let step = run.step(initial).map_err(|StepTooSmall| run.collapse(initial))?;
        if step.step_s != 0.0 && (step.start_s + step.step_s).abs() >= t_s.abs() {
            let h = (t_s - step.start_s) / step.step_s;
            return Ok(run.numbers().chunks_exact(PER_BODY).map(|n| evaluate(n, step.step_s, h)).collect());
        }
    }
}
