//! The proof of a show before it is given: what an audience would notice, found ahead.
//!
//! A scenario is rehearsed, integrated a second time in other steps, integrated anew with each stated number changed a little,
//! and looked at beat by beat. What is measured goes into a [`Report`]; what is wrong, and what to do, into its
//! findings. A show is ready when none of them is a failure.
//!
//! ```
//! use fallaround_core::check::Proof;
//!
//! let text = r#"
//! format = 1
//! title = "A ball and a world"
//! [[body]]
//! name = "Skerry"
//! mass = "1 Moon masses"
//! radius = "1737 km"
//! [[body]]
//! name = "Ball"
//! drop = { onto = "Skerry", height = "100 m" }
//! [[beat]]
//! title = "Let go"
//! clock = { reach = "contact of Ball with Skerry", at = "10 s" }
//! view = { centre = "Ball", span = "300 m" }
//! "#;
//! let mut proof = Proof::start(text).map_err(|problems| problems[0].to_string())?;
//! while !proof.work(1000).map_err(|problems| problems[0].to_string())?.done {}
//! let proven = proof.finish().ok_or("not done")?;
//! assert!(proven.report.is_ready(), "{:?}", proven.report.findings);
//! # Ok::<(), String>(())
//! ```

mod comfort;
mod finding;
mod flash;
mod kicks;
mod method;
mod motion;
mod near;
#[cfg(test)]
mod number_tests;
mod numbers;
mod paint;
mod passes;
mod reach;
mod reading;
mod report;
mod sample;
mod second;
mod sight;
mod stated;
#[cfg(test)]
mod tests;
mod trial;

pub use finding::{Finding, Topic, Weight};
pub use report::{
    BeatReport, CueReport, Encounter, LeftOut, Lever, Mover, Number, Owner, Report, Shift, Why,
};

use crate::ephemeris::SHOW_BYTES;
use crate::scenario::Problem;
use crate::show::{Rehearsal, Show};
use comfort::Comfort;
use numbers::Numbers;
use passes::Passes;
use reading::Reading;
use second::Second;
use trial::TRACER_STEPS;

/// A check on its way, in small steps, so that whoever drives it can report progress and stop.
#[derive(Debug)]
pub struct Proof {
    text: String,
    /// Until the show is there.
    rehearsal: Option<Rehearsal>,
    /// From then on.
    checking: Option<Checking>,
}

#[derive(Debug)]
struct Checking {
    proven: Proven,
    todo: Todo,
}

/// What is worked at, once the show is there.
#[derive(Debug)]
enum Todo {
    Second(Box<Second>),
    Passes(Box<Passes>),
    Numbers(Box<Numbers>),
    Reading(Box<Reading>),
    Comfort(Box<Comfort>),
    Done,
}

/// A checked show.
#[derive(Debug)]
pub struct Proven {
    /// The show.
    pub show: Show,
    /// Notes on its text.
    pub notes: Vec<Problem>,
    /// What was measured and found.
    pub report: Report,
}

/// How far a check has come.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Progress {
    /// Whether all is checked.
    pub done: bool,
    /// Share of the work done, 0 to 1: an estimate that never goes back.
    pub fraction: f64,
}

impl Proof {
    /// Reads a scenario.
    ///
    /// # Errors
    /// Every problem of the text, or of where its bodies start.
    pub fn start(text: &str) -> Result<Self, Vec<Problem>> {
        let rehearsal = Some(Rehearsal::start(text)?);
        Ok(Self { text: text.to_owned(), rehearsal, checking: None })
    }

    /// Works on, for about the time of so many steps of the integrator.
    ///
    /// # Errors
    /// The problem of a beat that can't be done.
    pub fn work(&mut self, max_steps: usize) -> Result<Progress, Vec<Problem>> {
        if let Some(rehearsal) = &mut self.rehearsal {
            let progress = rehearsal.work(max_steps)?;
            if !progress.done {
                return Ok(Progress { done: false, fraction: SECOND_FROM * progress.fraction });
            }
        }
        if let Some(rehearsal) = self.rehearsal.take() {
            let notes = rehearsal.notes().to_vec();
            self.checking = rehearsal.finish().map(|show| Checking::new(show, notes));
        }
        if let Some(checking) = &mut self.checking {
            checking.work(&self.text, max_steps);
        }
        Ok(self.checking.as_ref().map_or(Progress { done: true, fraction: 1.0 }, Checking::progress))
    }

    /// What came of it, once it is done.
    pub fn finish(self) -> Option<Proven> {
        let Checking { proven, todo } = self.checking?;
        matches!(todo, Todo::Done).then_some(proven)
    }

    /// The whole check at once, however long it takes.
    ///
    /// # Errors
    /// As [`Proof::start`] and [`Proof::work`].
    pub fn whole(text: &str) -> Result<Proven, Vec<Problem>> {
        let mut proof = Self::start(text)?;
        while !proof.work(usize::MAX)?.done {}
        proof.finish().ok_or_else(Vec::new)
    }
}

/// Shares of the whole work at which its parts begin.
const SECOND_FROM: f64 = 0.1;
const PASSES_FROM: f64 = 0.15;
const NUMBERS_FROM: f64 = 0.2;
const READING_FROM: f64 = 0.4;
const COMFORT_FROM: f64 = 0.6;

/// A picture with words takes about as long as so many steps of the integrator, and a small one as so many.
const STEPS_A_PICTURE: usize = 500;
const STEPS_A_SMALL_PICTURE: usize = 50;

impl Checking {
    fn new(show: Show, notes: Vec<Problem>) -> Self {
        let todo = Todo::Second(Box::new(Second::new(&show)));
        let report = Report {
            beats: vec![BeatReport::default(); show.plan.beats.len()],
            bytes: show.bytes(),
            most_bytes: SHOW_BYTES,
            method: method::told(&show),
            ..Report::default()
        };
        Self { proven: Proven { show, notes, report }, todo }
    }

    fn work(&mut self, text: &str, max_steps: usize) {
        let Proven { show, report, .. } = &mut self.proven;
        match &mut self.todo {
            Todo::Second(second) => {
                if second.work(max_steps)
                    && let Todo::Second(second) = std::mem::replace(&mut self.todo, Todo::Done)
                {
                    self.todo = Todo::Passes(Box::new(Passes::new(show, *second)));
                }
            }
            Todo::Passes(passes) => {
                if passes.work(show, report, max_steps) {
                    self.todo = Todo::Numbers(Box::new(Numbers::new(text, show)));
                }
            }
            Todo::Numbers(numbers) => {
                if numbers.work(show, &mut report.encounters, max_steps) {
                    numbers.finish(show, report);
                    numbers::close_calls(show, &report.encounters, &mut report.findings);
                    self.todo = Todo::Reading(Box::new(Reading::new(show)));
                }
            }
            Todo::Reading(reading) => {
                let pictures = (max_steps / STEPS_A_PICTURE).max(1);
                if reading.work(show, report, pictures, max_steps.saturating_mul(TRACER_STEPS)) {
                    reading::memory(show, report);
                    self.todo = Todo::Comfort(Box::new(Comfort::new(show)));
                }
            }
            Todo::Comfort(comfort) => {
                let frames = (max_steps / STEPS_A_SMALL_PICTURE).max(1);
                if comfort.work(show, &mut report.beats, frames) {
                    comfort::judge(show, &report.beats, &mut report.findings);
                    report.findings.sort_by_key(|finding| (finding.weight, finding.place));
                    self.todo = Todo::Done;
                }
            }
            Todo::Done => {}
        }
    }

    fn progress(&self) -> Progress {
        let show = &self.proven.show;
        let (from, to, within) = match &self.todo {
            Todo::Second(second) => (SECOND_FROM, PASSES_FROM, second.fraction(show)),
            Todo::Passes(passes) => (PASSES_FROM, NUMBERS_FROM, passes.fraction(show)),
            Todo::Numbers(numbers) => (NUMBERS_FROM, READING_FROM, numbers.fraction()),
            Todo::Reading(reading) => (READING_FROM, COMFORT_FROM, reading.fraction(show)),
            Todo::Comfort(comfort) => (COMFORT_FROM, 1.0, comfort.fraction(show)),
            Todo::Done => (1.0, 1.0, 1.0),
        };
        Progress { done: matches!(self.todo, Todo::Done), fraction: from + (to - from) * within }
    }
}
