//! From a file's path to a scenario, an ephemeris, a show; what is wrong is told with its place in the file.

use std::fmt;
use std::fs;
use std::path::Path;
use std::time::{Duration, SystemTime, UNIX_EPOCH};

use anyhow::{Context as _, Result};
use fallaround_core::ephemeris::{Ephemeris, Propagation, Track};
use fallaround_core::initial::InitialState;
use fallaround_core::integrate::long_steps::describe;
use fallaround_core::scenario::{self, BodyId, Place, Problem, Scenario, Severity, dated};
use fallaround_core::show::{Rehearsal, Show};
use indicatif::{ProgressBar, ProgressStyle};

use crate::cli::Today;

/// Most memory for paths that are only written down, bytes: some two thousand years of the solar system.
const MOST_BYTES: usize = 2 << 30;
/// Steps between two looks at the progress bar: a few milliseconds of work.
const STEPS: usize = 500;
/// Length of the progress bar's scale.
const SCALE: u64 = 1000;

/// What is wrong with a file. Prints a line for each problem: `file:line:column: what is wrong; what would be right`.
#[derive(Debug)]
pub(crate) struct Wrong {
    file: String,
    /// The problems, in the order of the file.
    pub(crate) problems: Vec<Problem>,
}

impl Wrong {
    fn new(path: &Path, problems: Vec<Problem>) -> Self {
        Self { file: path.display().to_string(), problems }
    }
}

impl fmt::Display for Wrong {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (index, problem) in self.problems.iter().enumerate() {
            let end = if index + 1 == self.problems.len() { "" } else { "\n" };
            write!(f, "{}{end}", line(&self.file, problem))?;
        }
        Ok(())
    }
}

impl std::error::Error for Wrong {}

/// The error that a file's problems are.
pub(crate) fn wrong(path: &Path, problems: Vec<Problem>) -> anyhow::Error {
    Wrong::new(path, problems).into()
}

/// A problem as editors read it: `file:line:column: what is wrong; what would be right`.
pub(crate) fn line(file: &str, problem: &Problem) -> String {
    let Problem { place, severity, wrong, remedy } = problem;
    let note = if *severity == Severity::Note { "note: " } else { "" };
    format!("{file}:{}:{}: {note}{wrong}; {remedy}", place.line, place.column)
}

/// The text of a scenario, with the day written in where it says "today".
///
/// # Errors
/// [`Wrong`] when the file can't be read or isn't UTF-8.
pub(crate) fn text(path: &Path, today: &Today) -> Result<String> {
    let bytes = fs::read(path).map_err(|error| {
        let wrong = format!("the file can't be read ({error})");
        let place = Place { line: 1, column: 1 };
        Wrong::new(path, vec![Problem::error(place, wrong, "give the path of a scenario file")])
    })?;
    let text = String::from_utf8(bytes)
        .map_err(|error| Wrong::new(path, scenario::parse_bytes(error.as_bytes()).problems))?;
    let now = SystemTime::now().duration_since(UNIX_EPOCH).map_or(0.0, |since| since.as_secs_f64());
    Ok(dated(&text, today.today.unwrap_or(now)).into_owned())
}

/// A scenario and where everything in it starts.
#[derive(Debug)]
pub(crate) struct Resolved {
    /// The scenario.
    pub(crate) scenario: Scenario,
    /// Where everything starts.
    pub(crate) initial: InitialState,
}

/// Reads and resolves a scenario.
///
/// # Errors
/// [`Wrong`] with every problem.
pub(crate) fn resolved(path: &Path, today: &Today) -> Result<Resolved> {
    let (scenario, initial) =
        Rehearsal::settled(&text(path, today)?).map_err(|problems| Wrong::new(path, problems))?;
    Ok(Resolved { scenario, initial })
}

impl Resolved {
    /// Integrates a stretch of model time, and everything between it and the start.
    ///
    /// # Errors
    /// [`Wrong`] when the paths end before.
    pub(crate) fn integrate(&self, path: &Path, from_s: f64, until_s: f64) -> Result<Ephemeris> {
        let mut propagation = Propagation::with_most_bytes(&self.initial, MOST_BYTES);
        let bar = bar("Integrating")?;
        // Time 0 is always covered, so that times on both sides of it have an end to lean on.
        let ends = [until_s.max(0.0), from_s.min(0.0)];
        for end in ends.into_iter().filter(|end| *end >= 0.0 || from_s < 0.0) {
            let stopped = |stopped: fallaround_core::ephemeris::Stopped| {
                let body = stopped.bodies.iter().find_map(|body| self.scenario.bodies.get(body.0));
                let place = body.map_or(Place { line: 1, column: 1 }, |body| body.place);
                let text = stopped.to_string();
                let (wrong, remedy) =
                    text.split_once("; ").unwrap_or((&text, "ask for a shorter stretch of time"));
                Wrong::new(path, vec![Problem::error(place, wrong, remedy)])
            };
            while !propagation.advance(end, STEPS).map_err(stopped)? {
                let reached = if end < 0.0 {
                    propagation.ephemeris().from_s()
                } else {
                    propagation.ephemeris().until_s()
                };
                bar.set_position(share(reached / end));
            }
        }
        bar.finish_and_clear();
        let ephemeris = propagation.into_ephemeris();
        for track in [ephemeris.forward(), ephemeris.backward()] {
            self.tell_long_steps(track);
        }
        Ok(ephemeris)
    }

    /// Says beside the data from when on they are less than exact.
    fn tell_long_steps(&self, track: &Track) {
        let (Some(first), Some(choice)) = (track.long_stretches().next(), track.choice()) else { return };
        let place = track.long_stretches().map(|stretch| stretch.errors.place).fold(0.0, f64::max);
        eprintln!(
            "note: beyond {:.6e} s states are those of long steps, as exact paths take too much memory.",
            first.from_s
        );
        for sentence in describe(&self.initial, &choice, track.end_s() - first.from_s) {
            eprintln!("      {sentence}");
        }
        eprintln!(
            "      Between the states kept of them, places are within {place:.0e} of the distance from the centre."
        );
    }

    /// The body of a name.
    ///
    /// # Errors
    /// When there is none; the message lists those there are.
    pub(crate) fn body(&self, name: &str) -> Result<BodyId> {
        let bodies = &self.scenario.bodies;
        let found = bodies.iter().position(|body| body.name == name).map(BodyId);
        found.with_context(|| {
            let names: Vec<&str> = bodies.iter().map(|body| body.name.as_str()).collect();
            format!("there is no body {name:?}; there are {}", names.join(", "))
        })
    }
}

/// A rehearsed show, and the text that it was made from.
#[derive(Debug)]
pub(crate) struct Rehearsed {
    /// The text, its day written in.
    pub(crate) text: String,
    /// The show.
    pub(crate) show: Show,
}

/// Rehearses a scenario.
///
/// # Errors
/// [`Wrong`] with every problem.
pub(crate) fn rehearsed(path: &Path, today: &Today) -> Result<Rehearsed> {
    let text = text(path, today)?;
    let wrong = |problems| Wrong::new(path, problems);
    let mut rehearsal = Rehearsal::start(&text).map_err(wrong)?;
    let bar = bar("Rehearsing")?;
    loop {
        let progress = rehearsal.work(STEPS).map_err(wrong)?;
        bar.set_position(share(progress.fraction));
        if progress.done {
            break;
        }
    }
    bar.finish_and_clear();
    let show =
        rehearsal.finish().with_context(|| format!("{}: the rehearsal came to no end", path.display()))?;
    Ok(Rehearsed { text, show })
}

/// A bar on standard error, where that is a terminal and the work takes long enough to be seen.
pub(crate) fn bar(what: &'static str) -> Result<ProgressBar> {
    let bar = ProgressBar::new(SCALE);
    bar.set_style(ProgressStyle::with_template("{msg} {bar:40} {percent} %  {elapsed}").context("bar")?);
    bar.set_message(what);
    bar.enable_steady_tick(Duration::from_millis(200));
    Ok(bar)
}

/// A share of 0 to 1 on the bar's scale.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped to the scale")]
pub(crate) fn share(share: f64) -> u64 {
    (share.clamp(0.0, 1.0) * SCALE as f64) as u64
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_byte_that_is_no_text_is_found() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("bad.toml");
        fs::write(&path, b"format = 1\ntitle = \"\xe9\xff\"\n").unwrap();
        let error = text(&path, &Today::default()).unwrap_err().to_string();
        assert!(error.starts_with(&format!("{}:2:", path.display())), "{error}");
    }

    #[test]
    fn a_missing_file_is_told_like_any_problem() {
        let error = text(Path::new("no/such.toml"), &Today::default()).unwrap_err().to_string();
        assert!(error.starts_with("no/such.toml:1:1: the file can't be read"), "{error}");
    }
}
