//! The worker's brain: rehearses shows in small steps, and makes small pictures when nothing else is to be done.
//!
//! It knows of no browser; time comes from the caller, so the same engine is tested natively.

use crate::drawing::{self, Drawing};
use crate::protocol::{Facts, Fault, FromWorker, ToWorker};
use fallaround_core::picture::{Composer, DisplayList, Options, Screen};
use fallaround_core::scenario::{self, Beat, BeatClock, Mark, Scenario};
use fallaround_core::show::{Action, Clock, Fingerprint, Rehearsal, Show};
use std::collections::VecDeque;

/// Longest that a turn works before it listens again, ms.
const TURN_MS: f64 = 12.0;
/// Steps of the integrator between two looks at the clock.
const STEPS: usize = 64;
/// A small picture, in its own pixels; it is shown at half that size.
const SMALL_PX: [f64; 2] = [384.0, 216.0];
/// No line of a small picture is thinner, no body smaller, px.
const SMALL_LINE_PX: f64 = 2.0;
const SMALL_DISC_PX: f64 = 5.0;
/// Share of its beat after which a small picture is taken: what the beat draws is then mostly drawn.
const SMALL_AT: f64 = 0.85;

/// A message for the page, and the numbers that travel beside it.
#[derive(Debug, Clone, PartialEq)]
pub struct Answer {
    /// The message.
    pub message: FromWorker,
    /// The paths of a show, or nothing.
    pub numbers: Vec<f64>,
}

impl From<FromWorker> for Answer {
    fn from(message: FromWorker) -> Self {
        Self { message, numbers: Vec::new() }
    }
}

/// A show on its way.
#[derive(Debug)]
struct Job {
    run: u32,
    text: String,
    rehearsal: Rehearsal,
    /// Hundredths last said.
    said: Option<u32>,
}

/// The brain.
#[derive(Debug, Default)]
pub struct Engine {
    wanted: Option<Job>,
    /// Texts that wait for their small picture.
    waiting: VecDeque<(u32, String)>,
    small: Option<Job>,
}

impl Engine {
    /// Whether there is work for another turn.
    pub fn busy(&self) -> bool {
        self.wanted.is_some() || self.small.is_some() || !self.waiting.is_empty()
    }

    /// Hears a message. What needs long is left to the turns.
    pub fn handle(&mut self, message: ToWorker) -> Vec<Answer> {
        match message {
            ToWorker::Rehearse { run, text } => {
                self.wanted = None;
                match Job::start(run, text) {
                    Ok(job) => self.wanted = Some(job),
                    Err(failed) => return vec![failed],
                }
                Vec::new()
            }
            ToWorker::Stop { run } => {
                if self.wanted.as_ref().is_some_and(|job| job.run == run) {
                    self.wanted = None;
                }
                Vec::new()
            }
            ToWorker::Card { run, text } => match scenario::parse(&text) {
                scenario::Parsed { scenario: Some(scenario), .. } => {
                    self.waiting.push_back((run, text));
                    vec![FromWorker::Card { run, facts: facts(&scenario) }.into()]
                }
                scenario::Parsed { problems, .. } => {
                    vec![FromWorker::Failed { run, problems: Fault::errors(&problems) }.into()]
                }
            },
        }
    }

    /// Works for a moment. `clock_ms` is any clock in ms.
    pub fn turn(&mut self, clock_ms: impl Fn() -> f64) -> Vec<Answer> {
        let until_ms = clock_ms() + TURN_MS;
        if let Some(mut job) = self.wanted.take() {
            return match job.work(until_ms, &clock_ms) {
                Ok(true) => vec![job.rehearsed()],
                Ok(false) => {
                    let said = job.say();
                    self.wanted = Some(job);
                    said.into_iter().collect()
                }
                Err(failed) => vec![failed],
            };
        }
        if let Some(mut job) = self.small.take() {
            return match job.work(until_ms, &clock_ms) {
                Ok(true) => job.picture().into_iter().collect(),
                Ok(false) => {
                    self.small = Some(job);
                    Vec::new()
                }
                Err(failed) => vec![failed],
            };
        }
        if let Some((run, text)) = self.waiting.pop_front() {
            match Job::start(run, text) {
                Ok(job) => self.small = Some(job),
                Err(failed) => return vec![failed],
            }
        }
        Vec::new()
    }
}

impl Job {
    fn start(run: u32, text: String) -> Result<Self, Answer> {
        match Rehearsal::start(&text) {
            Ok(rehearsal) => Ok(Self { run, text, rehearsal, said: None }),
            Err(problems) => Err(FromWorker::Failed { run, problems: Fault::errors(&problems) }.into()),
        }
    }

    fn work(&mut self, until_ms: f64, clock_ms: &impl Fn() -> f64) -> Result<bool, Answer> {
        loop {
            match self.rehearsal.work(STEPS) {
                Ok(progress) if progress.done => return Ok(true),
                Ok(_) => {}
                Err(problems) => {
                    return Err(
                        FromWorker::Failed { run: self.run, problems: Fault::errors(&problems) }.into()
                    );
                }
            }
            if clock_ms() >= until_ms {
                return Ok(false);
            }
        }
    }

    /// Progress, when it has come far enough to be worth a word.
    fn say(&mut self) -> Option<Answer> {
        let progress = self.rehearsal.progress();
        let hundredth = hundredths(progress.fraction);
        if self.said == Some(hundredth) {
            return None;
        }
        self.said = Some(hundredth);
        let beats = &self.rehearsal.scenario().beats;
        let what = match beats.get(progress.beat) {
            Some(beat) if !beat.title.is_empty() => {
                format!("beat {} of {}, {}", progress.beat + 1, beats.len(), beat.title)
            }
            _ => format!("beat {} of {}", progress.beat + 1, beats.len()),
        };
        Some(FromWorker::Progress { run: self.run, fraction: progress.fraction, what }.into())
    }

    fn rehearsed(self) -> Answer {
        let Self { run, text, rehearsal, .. } = self;
        match rehearsal.finish() {
            Some(show) => {
                let fingerprint = Fingerprint::of(&text, &show).to_string();
                let numbers = crate::carry::pack(&show);
                Answer { message: FromWorker::Rehearsed { run, fingerprint }, numbers }
            }
            None => FromWorker::Failed { run, problems: Vec::new() }.into(),
        }
    }

    fn picture(self) -> Option<Answer> {
        let run = self.run;
        let show = self.rehearsal.finish()?;
        let drawing = Drawing::of(&small_picture(&show));
        Some(FromWorker::Picture { run, drawing }.into())
    }
}

/// Hundredths of a fraction, 0 to 100.
fn hundredths(fraction: f64) -> u32 {
    (0..=100).rev().find(|n| f64::from(*n) <= fraction * 100.0).unwrap_or(0)
}

/// What the start page lists of a show.
pub fn facts(scenario: &Scenario) -> Facts {
    Facts {
        title: scenario.title.clone(),
        summary: scenario.summary.clone(),
        audience: scenario.audience.clone(),
        lasts_s: scenario.beats.iter().map(|beat| lasts_s(&beat.clock)).sum(),
    }
}

fn lasts_s(clock: &BeatClock) -> f64 {
    match clock {
        BeatClock::Hold { lasts }
        | BeatClock::Pace { lasts, .. }
        | BeatClock::Stretch { lasts, .. }
        | BeatClock::Reach { lasts, .. } => lasts.s(),
    }
}

/// The house picture near the end of the beat that explains most, made small.
fn small_picture(show: &Show) -> DisplayList {
    let beat = telling_beat(&show.scenario);
    let mut clock = Clock::new(&show.plan);
    clock.act(&show.plan, Action::Next);
    clock.act(&show.plan, Action::Jump(beat));
    let lasts_s = show.plan.beats.get(beat).map_or(0.0, |planned| planned.lasts_s);
    let step_s = 0.25;
    let mut gone_s = 0.0;
    while gone_s < lasts_s * SMALL_AT {
        clock.advance(&show.plan, step_s);
        gone_s += step_s;
    }
    let screen = Screen { width_px: SMALL_PX[0], height_px: SMALL_PX[1], density: 1.0 };
    let options = Options { language: show.scenario.language.clone(), reduced_motion: true };
    let list = Composer::new(show, screen, options).compose(show, &clock.moment(&show.plan));
    drawing::small(&list, SMALL_LINE_PX, SMALL_DISC_PX)
}

/// The first of the beats that explain most: areas before anything else, then as many marks as there are.
fn telling_beat(scenario: &Scenario) -> usize {
    let tells = |beat: &Beat| {
        let sectors =
            beat.marks.iter().any(|mark| matches!(mark, Mark::Sector { count, .. } if *count != Some(1)));
        (sectors, beat.marks.len())
    };
    let most = scenario.beats.iter().map(tells).max();
    scenario.beats.iter().position(|beat| Some(tells(beat)) == most).unwrap_or(0)
}

#[cfg(test)]
#[path = "engine_tests.rs"]
mod tests;
