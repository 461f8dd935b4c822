//! What is looked at once the second run is there, one beat after another.

use super::near::Near;
use super::reach::Lateness;
use super::report::Report;
use super::second::Second;
use super::sight;
use super::{kicks, motion, reach};
use crate::math::counts::number_from;
use crate::show::Show;

/// Frames of the show clock that take about as long as a step of the integrator.
const FRAMES_A_STEP: usize = 20;

/// The passes on their way.
#[derive(Debug)]
pub(super) struct Passes {
    second: Second,
    lateness: Lateness,
    near: Near,
    pass: Pass,
    beat: usize,
}

/// Which one.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Pass {
    /// How far the second run is from the first.
    Apart,
    /// When the clock comes to each event.
    Clock,
    /// Whether the second run has the events.
    Events,
    /// What moves too fast, stands still or is out of the picture.
    Motion,
    /// What passes what.
    Near,
}

impl Passes {
    /// Nothing looked at yet.
    pub(super) fn new(show: &Show, second: Second) -> Self {
        let lateness = Lateness::new(&show.plan);
        Self { second, lateness, near: Near::default(), pass: Pass::Apart, beat: 0 }
    }

    /// Looks at the next piece: one beat, or one pair of bodies in one beat, or some frames of the clock. True once all is looked at.
    pub(super) fn work(&mut self, show: &Show, report: &mut Report, max_steps: usize) -> bool {
        let seen = sight::beats(show).into_iter().nth(self.beat);
        let of_beat = report.beats.get_mut(self.beat);
        let findings = &mut report.findings;
        let next = match (self.pass, seen.zip(of_beat)) {
            (Pass::Apart, Some((seen, of_beat))) => {
                match self.second.stopped(show) {
                    Some(stopped) if self.beat == 0 => findings.push(stopped),
                    Some(_) => {}
                    None => self.second.compare(&seen, of_beat, findings),
                }
                None
            }
            (Pass::Apart, None) => Some(Pass::Clock),
            (Pass::Clock, _) => {
                let frames = max_steps.saturating_mul(FRAMES_A_STEP);
                let done = self.lateness.work(&show.plan, frames);
                return self.go_on(done.then_some(Pass::Events), 0);
            }
            (Pass::Events, Some((seen, of_beat))) => {
                let late_s = self.lateness.late_s.get(self.beat).copied().flatten();
                reach::check(&seen, self.second.ephemeris(), late_s, of_beat, findings);
                None
            }
            (Pass::Events, None) => Some(Pass::Motion),
            (Pass::Motion, Some((seen, of_beat))) => {
                motion::check(&seen, of_beat, findings);
                None
            }
            (Pass::Motion, None) => {
                kicks::check(show, findings);
                Some(Pass::Near)
            }
            (Pass::Near, _) => {
                if !self.near.work(show) {
                    return false;
                }
                report.encounters = std::mem::take(&mut self.near).into_encounters();
                return true;
            }
        };
        self.go_on(next, 1)
    }

    /// Into another pass, or so many beats on.
    const fn go_on(&mut self, next: Option<Pass>, beats: usize) -> bool {
        match next {
            Some(pass) => (self.pass, self.beat) = (pass, 0),
            None => self.beat += beats,
        }
        false
    }

    /// Share of the passes done, 0 to 1.
    pub(super) fn fraction(&self, show: &Show) -> f64 {
        let of_beats = number_from(self.beat) / number_from(show.plan.beats.len().max(1));
        let within = if self.pass == Pass::Near { self.near.fraction(show) } else { of_beats.min(1.0) };
        let before = match self.pass {
            Pass::Apart => 0.0,
            Pass::Clock => 0.2,
            Pass::Events => 0.4,
            Pass::Motion => 0.6,
            Pass::Near => 0.8,
        };
        before + 0.2 * within
    }
}
