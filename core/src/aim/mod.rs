//! Aiming: numbers of a scenario that lead to a stated outcome.
//!
//! `[[aim]]` in a file says what is wanted and which numbers may be changed within which limits. The numbers are written into the
//! text itself, so that what is found is what the file says; comments and order stay. First come guesses by the laws of two bodies, where
//! a place is to be reached, and the best of them are refined by least squares; if none of them gets there, the whole range is sampled, and the
//! best points of it refined. When none of those gets there either, the answer is how near the nearest came.
//!
//! ```
//! let text = r#"
//! format = 1
//! title = "As high as that"
//! [[body]]
//! name = "Skerry"
//! mass = "1 Moon masses"
//! radius = "1737 km"
//! [[body]]
//! name = "Ball"
//! throw = { from = "Skerry", speed = "1 km/s", elevation = "90 deg" } # how fast?
//! [[aim]]
//! want = [{ event = "apoapsis of Ball", until = "2 h", distance = "2000 km" }]
//! free = [{ body = "Ball", quantity = "throw.speed", from = "0.5 km/s", to = "2 km/s" }]
//! "#;
//! let solved = fallaround_core::aim::solve(text).map_err(|failure| failure.to_string())?;
//! // v² / 2 = GM (1 / R - 1 / r) gives 861.8 m/s.
//! assert!(solved.text.contains("speed = \"0.861"), "{}", solved.text);
//! assert!(solved.text.contains("# how fast?"));
//! # Ok::<(), String>(())
//! ```

mod course;
mod fit;
mod guess;
mod outcome;
mod put;
mod slopes;
#[cfg(test)]
mod tests;
mod trial;
mod wording;

pub use outcome::Miss;

use crate::math::counts::number_from;
use crate::resolve::Solar;
use crate::scenario::edit::Document;
use crate::scenario::{Aim, ChangeTime, Place, Problem};
use fit::{Fit, cost};
use std::fmt;
use trial::{Flight, Trial, scene_m};

/// Points sampled for each number that is free, up to a limit.
const SAMPLES: usize = 40;
const MOST_SAMPLES: usize = 160;

/// How many of them are refined.
const STARTS: usize = 8;

/// How many guesses are refined before the whole range is sampled, and the share of the work that guessing counts for.
const GUESSED_STARTS: usize = 3;
const GUESSING: f64 = 0.1;

/// Digits to which the numbers found are rounded, if what is wanted still comes out; else they are written in full.
const DIGITS: [usize; 4] = [6, 8, 10, 12];

/// What aiming gave.
#[derive(Debug, Clone, PartialEq)]
pub struct Solved {
    /// The text with the numbers filled in.
    pub text: String,
    /// How well each outcome is met, aim by aim.
    pub misses: Vec<Miss>,
    /// How many trials were integrated.
    pub trials: usize,
}

/// Why aiming gave nothing.
#[derive(Debug, Clone, PartialEq)]
pub enum AimFailure {
    /// The text has problems.
    Problems(Vec<Problem>),
    /// No numbers within the limits lead there.
    Missed {
        /// Where the aim stands in the text.
        place: Place,
        /// What is aimed with: "throw", "orbit", "start" (of a place) ...
        form: String,
        /// What the nearest trial misses, those outcomes first that it misses most.
        nearest: Vec<Miss>,
    },
    /// No trial came to anything that can be compared.
    Nothing {
        /// Where the aim stands in the text.
        place: Place,
        /// What is aimed with.
        form: String,
        /// Why the first of them didn't.
        why: String,
    },
}

impl fmt::Display for AimFailure {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Problems(problems) => {
                let lines: Vec<String> = problems.iter().map(ToString::to_string).collect();
                f.write_str(&lines.join("\n"))
            }
            Self::Missed { form, nearest, .. } => match nearest.first() {
                Some(miss) => write!(f, "no such {form}: nearest miss {} ({})", miss.off, miss.what),
                None => write!(f, "no such {form}"),
            },
            Self::Nothing { form, why, .. } => write!(f, "no such {form}: {why}"),
        }
    }
}

impl std::error::Error for AimFailure {}

/// How far aiming has come.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Progress {
    /// Whether all aims are met.
    pub done: bool,
    /// Share of the work done at most, 0 to 1; often it ends before.
    pub fraction: f64,
    /// Trials integrated so far.
    pub trials: usize,
}

/// Solves every aim of a scenario, in the order of the file; a later one starts from what an earlier one found.
///
/// # Errors
/// The text's problems, or the first aim that can't be met.
pub fn solve(text: &str) -> Result<Solved, AimFailure> {
    let mut aiming = Aiming::start(text)?;
    while !aiming.work()?.done {}
    Ok(aiming.finish())
}

/// Aiming in small steps, so that whoever drives it can report progress and stop.
#[derive(Debug)]
pub struct Aiming {
    document: Document,
    aims: Vec<Aim>,
    /// The solar system at the scenario's date, which no free number changes.
    solar: Solar,
    /// Which aim is being worked at.
    current: usize,
    /// The size of its scene, m.
    scene_m: f64,
    stage: Stage,
    misses: Vec<Miss>,
    trials: usize,
}

/// A point and its residuals.
type Tried = (Vec<f64>, Vec<f64>);

#[derive(Debug)]
enum Stage {
    /// Points are tried: what the file states, the guesses, and then, once those have been refined, others.
    Trying(Trying),
    /// The starts that are left, nearest last; the one that is refined; and the nearest so far.
    Refining { starts: Vec<Tried>, fit: Box<Fit<Flight>>, nearest: Tried, sampled: bool },
}

/// Points on trial.
#[derive(Debug, Default)]
struct Trying {
    /// The guesses that are left, the best last; before they are made, none.
    guesses: Option<Vec<Vec<f64>>>,
    /// How many points other than guesses so far.
    next: usize,
    /// Whether the best of what the file states and the guesses have been refined.
    refined: bool,
    /// Those that could be compared.
    tried: Vec<Tried>,
    /// Why the first of the rest couldn't.
    why: Option<String>,
}

impl Stage {
    fn start() -> Self {
        Self::Trying(Trying::default())
    }
}

impl Aiming {
    /// Reads a scenario and its aims.
    ///
    /// # Errors
    /// Every problem of the text; that it states no aim is one.
    pub fn start(text: &str) -> Result<Self, AimFailure> {
        let document = Document::parse(text).map_err(AimFailure::Problems)?;
        let parsed = document.scenario();
        let Some(scenario) = parsed.scenario else { return Err(AimFailure::Problems(parsed.problems)) };
        if scenario.aims.is_empty() {
            let remedy = "add [[aim]] with want and free, for an outcome and the numbers to solve for";
            let place = Place { line: 1, column: 1 };
            let problem = Problem::error(place, "the scenario states no aim", remedy);
            return Err(AimFailure::Problems(vec![problem]));
        }
        if let Some(change) = scenario.changes.iter().find(|c| !matches!(c.at, ChangeTime::Time(_))) {
            let wrong = "an aim can't wait for a change at a beat or an event";
            let remedy = "state the change's time while aiming";
            return Err(AimFailure::Problems(vec![Problem::error(change.place, wrong, remedy)]));
        }
        let solar = Solar::of(&scenario);
        let aims = scenario.aims;
        let scene_m = aims.first().map_or(0.0, |aim| scene_m(&document, aim, &solar));
        let stage = Stage::start();
        Ok(Self { document, aims, solar, current: 0, scene_m, stage, misses: Vec::new(), trials: 0 })
    }

    /// Works on for a moment: one sample, or one step of refining.
    ///
    /// # Errors
    /// When an aim can't be met.
    pub fn work(&mut self) -> Result<Progress, AimFailure> {
        if let Some(aim) = self.aims.get(self.current) {
            let trial = Trial { document: &self.document, aim, solar: &self.solar, scene_m: self.scene_m };
            let mut trials = 0;
            let met = self.stage.work(&trial, &mut trials)?;
            let written = met.map(|point| settle(&trial, &point, &mut trials));
            self.trials += trials;
            if let Some((document, misses)) = written.transpose()? {
                self.document = document;
                self.misses.extend(misses);
                self.current += 1;
                self.scene_m =
                    self.aims.get(self.current).map_or(0.0, |aim| scene_m(&self.document, aim, &self.solar));
                self.stage = Stage::start();
            }
        }
        Ok(self.progress())
    }

    fn progress(&self) -> Progress {
        let within = match (&self.stage, self.aims.get(self.current)) {
            (Stage::Trying(trying), Some(aim)) if trying.refined => {
                GUESSING + (0.5 - GUESSING) * share(trying.next, samples(aim) + 1)
            }
            (Stage::Refining { sampled: false, .. }, _) => GUESSING,
            (Stage::Refining { starts, .. }, _) => 1.0 - 0.5 * share(starts.len() + 1, STARTS),
            _ => 0.0,
        };
        let fraction = (share(self.current, 1) + within) / share(self.aims.len(), 1);
        Progress { done: self.current >= self.aims.len(), fraction: fraction.min(1.0), trials: self.trials }
    }

    /// What was found; before all aims are met, what was found so far.
    pub fn finish(self) -> Solved {
        Solved { text: self.document.to_text(), misses: self.misses, trials: self.trials }
    }
}

fn share(part: usize, whole: usize) -> f64 {
    number_from(part) / number_from(whole)
}

fn samples(aim: &Aim) -> usize {
    (SAMPLES * aim.free.len()).min(MOST_SAMPLES)
}

impl Trying {
    /// The next point, if there is one.
    fn point(&mut self, trial: &Trial<'_>) -> Option<Vec<f64>> {
        // The first point is what the file states; then come the guesses.
        if self.next > 0 && !self.refined {
            return self
                .guesses
                .get_or_insert_with(|| guess::points(trial).into_iter().rev().collect())
                .pop();
        }
        self.next += 1;
        match self.next - 1 {
            0 => trial.stated(),
            index => Some(scattered(index, trial.aim.free.len())),
        }
    }

    /// Takes the best points out, as starts: the nearest last.
    fn best(&mut self, count: usize) -> Vec<Tried> {
        self.tried.sort_by(|a, b| cost(&b.1).total_cmp(&cost(&a.1)));
        self.tried.split_off(self.tried.len().saturating_sub(count))
    }
}

impl Stage {
    /// Works on; gives the point that meets the aim once there is one.
    fn work(&mut self, trial: &Trial<'_>, trials: &mut usize) -> Result<Option<Vec<f64>>, AimFailure> {
        match self {
            Self::Trying(trying) => {
                if let Some(point) = trying.point(trial) {
                    *trials += 1;
                    match trial.misses(&point, None) {
                        Ok(misses) => {
                            if misses.iter().all(Miss::is_met) {
                                return Ok(Some(point));
                            }
                            trying.tried.push((point, residuals(&misses)));
                        }
                        Err(reason) => {
                            trying.why.get_or_insert(reason);
                        }
                    }
                }
                let guessed = trying.guesses.as_ref().is_some_and(Vec::is_empty) && !trying.refined;
                if guessed && trying.tried.is_empty() {
                    trying.refined = true;
                    return Ok(None);
                }
                let sampled = trying.next > samples(trial.aim);
                if !sampled && !guessed {
                    return Ok(None);
                }
                let mut starts = trying.best(if sampled { STARTS } else { GUESSED_STARTS });
                let Some(nearest) = starts.pop() else {
                    let why = trying.why.take().unwrap_or_default();
                    return Err(AimFailure::Nothing { place: trial.aim.place, form: form(trial.aim), why });
                };
                let fit = Box::new(Fit::new(nearest.0.clone(), nearest.1.clone()));
                *self = Self::Refining { starts, fit, nearest, sampled };
                Ok(None)
            }
            Self::Refining { starts, fit, nearest, sampled } => {
                fit.step(&mut Flights { trial, trials });
                if !fit.done {
                    return Ok(None);
                }
                *trials += 1;
                if trial.misses(&fit.point, None).is_ok_and(|misses| misses.iter().all(Miss::is_met)) {
                    return Ok(Some(fit.point.clone()));
                }
                if cost(&fit.residuals) < cost(&nearest.1) {
                    *nearest = (fit.point.clone(), fit.residuals.clone());
                }
                if let Some((point, residuals)) = starts.pop() {
                    **fit = Fit::new(point, residuals);
                    return Ok(None);
                }
                if *sampled {
                    return Err(missed(trial, &nearest.0));
                }
                // The guesses led nowhere: the whole range, and what came nearest so far.
                let tried = vec![nearest.clone()];
                let trying = Trying { next: 1, refined: true, tried, ..Trying::default() };
                *self = Self::Trying(trying);
                Ok(None)
            }
        }
    }
}

/// What is refined: trials, each of which is counted.
struct Flights<'a> {
    trial: &'a Trial<'a>,
    trials: &'a mut usize,
}

impl fit::Problem for Flights<'_> {
    type Kept = Flight;

    fn residuals(&mut self, point: &[f64]) -> Option<(Vec<f64>, Flight)> {
        *self.trials += 1;
        let flight = self.trial.fly(point, None).ok()?;
        let misses = self.trial.compare(&flight).ok()?;
        Some((residuals(&misses), flight))
    }

    fn slopes(&mut self, point: &[f64], kept: Option<&Flight>) -> Option<Vec<Vec<f64>>> {
        if let Some(flight) = kept {
            return self.trial.slopes(point, flight);
        }
        let (_, flight) = self.residuals(point)?;
        self.trial.slopes(point, &flight)
    }
}

fn residuals(misses: &[Miss]) -> Vec<f64> {
    misses.iter().flat_map(|miss| miss.residual.iter().copied()).collect()
}

fn missed(trial: &Trial<'_>, point: &[f64]) -> AimFailure {
    let (place, form) = (trial.aim.place, form(trial.aim));
    match trial.misses(point, None) {
        Ok(mut nearest) => {
            nearest.sort_by(|a, b| b.share.abs().total_cmp(&a.share.abs()));
            AimFailure::Missed { place, form, nearest }
        }
        Err(why) => AimFailure::Nothing { place, form, why },
    }
}

/// What an aim is aimed with: the form whose numbers are free.
fn form(aim: &Aim) -> String {
    match aim.free.first().and_then(|free| free.keys.first()) {
        Some(&"place") => "start".to_owned(),
        form => form.map_or("aim", |form| *form).to_owned(),
    }
}

/// The text with the numbers of a point, in as few digits as meet the aim.
fn settle(trial: &Trial<'_>, point: &[f64], trials: &mut usize) -> Result<(Document, Vec<Miss>), AimFailure> {
    // What the file states already is left as it stands.
    if trial.stated().as_deref() == Some(point)
        && let Ok(misses) = trial.misses(point, None)
    {
        *trials += 1;
        return Ok((trial.document.clone(), misses));
    }
    for digits in DIGITS.map(Some).into_iter().chain([None]) {
        *trials += 1;
        let Ok(misses) = trial.misses(point, digits) else { continue };
        if misses.iter().all(Miss::is_met)
            && let Ok(document) = trial.written(point, digits)
        {
            return Ok((document, misses));
        }
    }
    Err(missed(trial, point))
}

/// The n-th point of a sequence that fills the unit cube evenly.
///
/// # Source
/// J. H. Halton, Numerische Mathematik 2 (1960), 84: van der Corput's sequences to bases without common factors.
fn scattered(index: usize, dimensions: usize) -> Vec<f64> {
    const BASES: [usize; 8] = [2, 3, 5, 7, 11, 13, 17, 19];
    BASES
        .iter()
        .take(dimensions)
        .map(|&base| {
            let (mut rest, mut part, mut sum) = (index, 1.0, 0.0);
            while rest > 0 {
                part /= share(base, 1);
                sum += part * share(rest % base, 1);
                rest /= base;
            }
            sum
        })
        .collect()
}
