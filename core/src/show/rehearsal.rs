//! From the text of a scenario to a show, in small steps, so that whoever drives it can report progress and stop.

use super::Show;
use super::plan::Plan;
use super::planner::{self, Limits, Need};
use crate::ephemeris::{Ephemeris, Propagation};
use crate::initial::InitialState;
use crate::resolve;
use crate::scenario::{self, Place, Problem, Scenario};

/// A show being integrated.
#[derive(Debug)]
pub struct Rehearsal {
    scenario: Scenario,
    notes: Vec<Problem>,
    initial: InitialState,
    propagation: Propagation,
    limits: Limits,
    why_limited: String,
    want: Option<(f64, usize)>,
    from_s: f64,
    /// The largest share of the work reported so far.
    fraction: f64,
    plan: Option<Plan>,
}

/// How far a rehearsal has come.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Progress {
    /// Whether the show is ready.
    pub done: bool,
    /// Share of the work done, 0 to 1. What lies ahead is only known in parts, so it is an estimate that never goes back.
    pub fraction: f64,
    /// The beat that is being prepared.
    pub beat: usize,
    /// How many beats there are.
    pub beats: usize,
    /// Model time that has been integrated, seconds.
    pub model_s: f64,
}

impl Rehearsal {
    /// Reads a scenario and resolves where everything starts.
    ///
    /// # Errors
    /// Every problem of the text, or every problem of its initial state.
    pub fn start(text: &str) -> Result<Self, Vec<Problem>> {
        let parsed = scenario::parse(text);
        let Some(scenario) = parsed.scenario else { return Err(parsed.problems) };
        let initial = resolve::resolve(&scenario)?;
        let propagation = Propagation::new(&initial);
        Ok(Self {
            scenario,
            notes: parsed.problems,
            initial,
            propagation,
            limits: Limits::NONE,
            why_limited: String::new(),
            want: None,
            from_s: 0.0,
            fraction: 0.0,
            plan: None,
        })
    }

    /// The scenario.
    pub const fn scenario(&self) -> &Scenario {
        &self.scenario
    }

    /// Notes on the text that don't keep it from being shown.
    pub fn notes(&self) -> &[Problem] {
        &self.notes
    }

    /// Where everything starts.
    pub const fn initial(&self) -> &InitialState {
        &self.initial
    }

    /// What has been integrated so far.
    pub fn ephemeris(&self) -> &Ephemeris {
        self.propagation.ephemeris()
    }

    /// Works on, for at most so many steps of the integrator.
    ///
    /// # Errors
    /// The problem of the first beat that can't be done.
    pub fn work(&mut self, max_steps: usize) -> Result<Progress, Vec<Problem>> {
        self.fraction = self.progress().fraction;
        self.step(max_steps)?;
        Ok(self.progress())
    }

    fn step(&mut self, max_steps: usize) -> Result<(), Vec<Problem>> {
        if self.plan.is_some() {
            return Ok(());
        }
        if let Some((t_s, _)) = self.want {
            match self.propagation.advance(t_s, max_steps) {
                Ok(false) => return Ok(()),
                Ok(true) => {}
                Err(stopped) => {
                    if t_s >= 0.0 {
                        self.limits.until_s = self.ephemeris().until_s();
                    } else {
                        self.limits.from_s = self.ephemeris().from_s();
                    }
                    self.why_limited = stopped.to_string();
                }
            }
            self.want = None;
        }
        match planner::make(&self.scenario, &self.initial, self.ephemeris(), self.limits) {
            Ok(plan) => self.plan = Some(plan),
            Err(Need::Until { t_s, beat }) => {
                self.from_s = if t_s >= 0.0 { self.ephemeris().until_s() } else { self.ephemeris().from_s() };
                self.want = Some((t_s, beat));
            }
            Err(Need::Beyond { beat, .. }) => return Err(vec![self.ends_too_early(beat)]),
            Err(Need::Impossible(problem)) => return Err(vec![problem]),
        }
        Ok(())
    }

    /// How far it has come.
    pub fn progress(&self) -> Progress {
        let beats = self.scenario.beats.len();
        let (beat, within, model_s) = match self.want {
            Some((t_s, beat)) => {
                let at_s = if t_s >= 0.0 { self.ephemeris().until_s() } else { self.ephemeris().from_s() };
                let way_s = t_s - self.from_s;
                let within =
                    if way_s.abs() > 0.0 { ((at_s - self.from_s) / way_s).clamp(0.0, 1.0) } else { 0.0 };
                (beat, within, at_s)
            }
            None => (0, 0.0, self.ephemeris().until_s()),
        };
        let done = self.plan.is_some();
        let share = |count: usize| u32::try_from(count).map_or(0.0, f64::from);
        let estimate = if done { 1.0 } else { (share(beat) + within) / (share(beats) + 1.0) };
        let fraction = estimate.max(self.fraction);
        Progress { done, fraction, beat, beats, model_s }
    }

    /// The show, once it is ready.
    pub fn finish(self) -> Option<Show> {
        Some(Show {
            scenario: self.scenario,
            initial: self.initial,
            ephemeris: self.propagation.into_ephemeris(),
            plan: self.plan?,
        })
    }

    /// The show at once, however long it takes.
    ///
    /// # Errors
    /// As [`Rehearsal::start`] and [`Rehearsal::work`].
    pub fn whole(text: &str) -> Result<Show, Vec<Problem>> {
        let mut rehearsal = Self::start(text)?;
        while !rehearsal.work(usize::MAX)?.done {}
        rehearsal.finish().ok_or_else(Vec::new)
    }

    fn ends_too_early(&self, beat: usize) -> Problem {
        let place = self.scenario.beats.get(beat).map_or(Place { line: 1, column: 1 }, |b| b.clock_place);
        Problem::error(
            place,
            format!("this beat needs model time that is never reached: {}", self.why_limited),
            "shorten the beat, or change the motion so that it can go on",
        )
    }
}

#[cfg(test)]
#[path = "rehearsal_tests.rs"]
mod tests;
