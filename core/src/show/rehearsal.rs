//! From the text of a scenario to a show, in small steps, so that whoever drives it can report progress and stop.

use super::Show;
use super::plan::Plan;
use super::planner::{self, Limits, Need};
use crate::ephemeris::{Ephemeris, Propagation, SHOW_BYTES};
use crate::initial::InitialState;
use crate::math::counts::number_from;
use crate::resolve::{self, Solar};
use crate::scenario::{self, ChangeTime, Place, Problem, Scenario};
use crate::swarm::{SNAPSHOT_BYTES, SwarmRun};

/// Steps of tracers that take about as long as one of the integrator.
const TRACER_STEPS: usize = 400;
/// Share of the work that swarms are taken for, where there are some.
const SWARMS_SHARE: f64 = 0.5;

/// A show being integrated.
#[derive(Debug)]
pub struct Rehearsal {
    scenario: Scenario,
    notes: Vec<Problem>,
    initial: InitialState,
    /// When each change of the file is made, where that had to be found, seconds from the scenario's start.
    found_s: Vec<Option<f64>>,
    propagation: Propagation,
    limits: Limits,
    why_limited: String,
    want: Option<(f64, usize)>,
    from_s: f64,
    /// The largest share of the work reported so far.
    fraction: f64,
    plan: Option<Plan>,
    swarms: Vec<SwarmRun>,
}

/// What a look at the ephemeris gave.
enum Made {
    /// The time of a change.
    Change(f64),
    /// The whole plan.
    Plan(Plan),
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
        Self::start_by(text, resolve::resolve)
    }

    /// As [`Rehearsal::start`], with the solar system at the scenario's date known.
    ///
    /// # Errors
    /// As [`Rehearsal::start`].
    pub fn start_among(text: &str, solar: &Solar) -> Result<Self, Vec<Problem>> {
        Self::start_by(text, |scenario| resolve::resolve_among(scenario, solar))
    }

    fn start_by(
        text: &str,
        resolve: impl FnOnce(&Scenario) -> Result<InitialState, Vec<Problem>>,
    ) -> Result<Self, Vec<Problem>> {
        let parsed = scenario::parse(text);
        let Some(scenario) = parsed.scenario else { return Err(parsed.problems) };
        let initial = resolve(&scenario)?;
        let propagation = propagation(&initial);
        Ok(Self {
            found_s: vec![None; scenario.changes.len()],
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
            swarms: Vec::new(),
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
        if let Some(plan) = &self.plan {
            let (from_s, until_s) = (plan.covers_from_s, plan.covers_until_s);
            self.grow_swarms(from_s, until_s, max_steps);
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
        let next = self.open_change();
        let made = match next.and_then(|index| self.scenario.changes.get(index)) {
            Some(change) => {
                planner::change_s(&self.scenario, &self.initial, self.ephemeris(), self.limits, change)
                    .map(Made::Change)
            }
            None => {
                planner::make(&self.scenario, &self.initial, self.ephemeris(), self.limits).map(Made::Plan)
            }
        };
        match made {
            Ok(Made::Plan(plan)) => {
                self.check_changes(&plan)?;
                self.plan = Some(plan);
                let all = 0..self.initial.swarms.len();
                self.swarms = all.map(|index| SwarmRun::new(&self.initial, index)).collect();
            }
            Ok(Made::Change(t_s)) => self.make_change(next.unwrap_or_default(), t_s)?,
            Err(Need::Until { t_s, beat }) => {
                self.from_s = if t_s >= 0.0 { self.ephemeris().until_s() } else { self.ephemeris().from_s() };
                self.want = Some((t_s, beat));
            }
            Err(Need::Beyond { beat, .. }) => return Err(vec![self.ends_too_early(beat)]),
            Err(Need::Impossible(problem)) => return Err(vec![problem]),
        }
        Ok(())
    }

    /// The first change of the file whose time is still to be found.
    fn open_change(&self) -> Option<usize> {
        let open = |(change, found): (&scenario::Change, &Option<f64>)| {
            found.is_none() && !matches!(change.at, ChangeTime::Time(_))
        };
        self.scenario.changes.iter().zip(&self.found_s).position(open)
    }

    /// Takes up a change at the time that was found for it, and starts integrating anew: what was integrated beyond that time is void,
    /// and the steps before it shall not depend on how far that was.
    fn make_change(&mut self, index: usize, t_s: f64) -> Result<(), Vec<Problem>> {
        let Some(change) = self.scenario.changes.get(index) else { return Ok(()) };
        let problem = |wrong: &str, remedy: &str| Err(vec![Problem::error(change.place, wrong, remedy)]);
        if t_s < 0.0 {
            return problem(
                "this change comes before the scenario's start",
                "changes act from model time 0 on; choose a later event, or a beat that starts later",
            );
        }
        if self.found_s.iter().flatten().any(|&earlier_s| earlier_s > t_s) {
            return problem(
                "this change comes before another at a beat or an event that stands above it",
                "write such changes in the order in which they happen",
            );
        }
        if let Some(found) = self.found_s.get_mut(index) {
            *found = Some(t_s);
        }
        self.initial.changes = resolve::timed(&self.scenario, &self.found_s);
        self.propagation = propagation(&self.initial);
        self.limits = Limits::NONE;
        Ok(())
    }

    /// A change at the start of a beat must leave that start where it is: beats before it may have shown later model times.
    fn check_changes(&self, plan: &Plan) -> Result<(), Vec<Problem>> {
        /// What cutting a step at the change may round.
        const SAME: f64 = 1e-9;
        for (change, found_s) in self.scenario.changes.iter().zip(&self.found_s) {
            let (ChangeTime::Beat { beat, after }, Some(t_s)) = (change.at, *found_s) else { continue };
            let from_s = plan.beats.get(beat).map_or(t_s, |planned| planned.from_s + after.s());
            if (from_s - t_s).abs() > SAME * (1.0 + t_s) {
                return Err(vec![Problem::error(
                    change.place,
                    "this change moves the start of its own beat: a beat before it shows what comes after the change",
                    "state the change's time, or let the beats before it end sooner",
                )]);
            }
        }
        Ok(())
    }

    /// Tracers follow once it is known how far, in the field of an ephemeris that grows no more.
    fn grow_swarms(&mut self, from_s: f64, until_s: f64, max_steps: usize) {
        let eph = self.propagation.ephemeris();
        let most = max_steps.saturating_mul(TRACER_STEPS);
        for run in &mut self.swarms {
            for t_s in [until_s, from_s] {
                if !run.path().covers(t_s) {
                    run.advance(eph, t_s, most);
                    return;
                }
            }
        }
    }

    /// Model time of all swarms that has been covered and that is to be, s.
    fn swarm_times(&self, plan: &Plan) -> (f64, f64) {
        let each = plan.covers_until_s - plan.covers_from_s;
        let covered = self.swarms.iter().map(|run| run.path().until_s() - run.path().from_s());
        (covered.sum(), each * self.swarms.iter().map(|_| 1.0).sum::<f64>())
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
        let done = self.plan.as_ref().is_some_and(|plan| {
            self.swarms.iter().all(|run| {
                [plan.covers_until_s, plan.covers_from_s].into_iter().all(|t_s| run.path().covers(t_s))
            })
        });
        let of_bodies = if self.initial.swarms.is_empty() { 1.0 } else { 1.0 - SWARMS_SHARE };
        let estimate = match &self.plan {
            _ if done => 1.0,
            Some(plan) => {
                let (covered_s, all_s) = self.swarm_times(plan);
                of_bodies + (1.0 - of_bodies) * (covered_s / all_s).clamp(0.0, 1.0)
            }
            None => of_bodies * (number_from(beat) + within) / (number_from(beats) + 1.0),
        };
        let fraction = estimate.max(self.fraction);
        Progress { done, fraction, beat, beats, model_s }
    }

    /// The scenario and where everything starts, with the times of all changes found, and without the rest of the show.
    ///
    /// # Errors
    /// As [`Rehearsal::start`] and [`Rehearsal::work`].
    pub fn settled(text: &str) -> Result<(Scenario, InitialState), Vec<Problem>> {
        let mut rehearsal = Self::start(text)?;
        while !rehearsal.settle(usize::MAX)? {}
        Ok((rehearsal.scenario, rehearsal.initial))
    }

    /// Works on until the times of all changes are found, and no farther, for at most so many steps of the integrator. True once they are.
    ///
    /// # Errors
    /// As [`Rehearsal::work`].
    pub fn settle(&mut self, max_steps: usize) -> Result<bool, Vec<Problem>> {
        if self.open_change().is_some() {
            self.step(max_steps)?;
        }
        Ok(self.open_change().is_none())
    }

    /// Where everything starts, with the times of changes that were found, and what has been integrated from there, to go on from.
    pub fn into_motion(self) -> (InitialState, Propagation) {
        (self.initial, self.propagation)
    }

    /// The show, once it is ready.
    pub fn finish(self) -> Option<Show> {
        Some(Show {
            scenario: self.scenario,
            initial: self.initial,
            ephemeris: self.propagation.into_ephemeris(),
            swarms: self.swarms.into_iter().map(SwarmRun::into_path).collect(),
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

/// With its swarms an ephemeris stays within what a show may take.
fn propagation(initial: &InitialState) -> Propagation {
    let of_swarms = if initial.swarms.is_empty() { 0 } else { SNAPSHOT_BYTES };
    Propagation::with_most_bytes(initial, SHOW_BYTES - of_swarms)
}

#[cfg(test)]
#[path = "change_tests.rs"]
mod change_tests;
#[cfg(test)]
#[path = "rehearsal_tests.rs"]
mod tests;
