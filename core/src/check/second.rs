//! A second run of the same motion in other steps, and how far it is from the first.
//!
//! Steps of half the length have a 32,000th of the method's error (its order is 15) and other roundings. So where the first
//! run's error is that of the method, the difference is that error; where it is rounding, the difference is
//! the error of both together.

use super::finding::{Finding, Topic, Weight};
use super::report::{BeatReport, Shift};
use super::sight::{self, Seen, called, farther};
use crate::ephemeris::{Ephemeris, Propagation, SHOW_BYTES};
use crate::show::Show;

/// Length of its steps, in those of the first.
const STEP_SHARE: f64 = 0.5;

/// Most memory of the second run, bytes: twice the steps, and something to spare. Where the show goes on by long steps, so shall this.
fn most_bytes(show: &Show) -> usize {
    let tracks = [show.ephemeris.forward(), show.ephemeris.backward()];
    if tracks.iter().any(|track| track.choice().is_some()) { SHOW_BYTES } else { 3 * SHOW_BYTES }
}

/// Pieces of a beat between the instants compared.
const PIECES: u32 = 200;

/// From here on an eye at the front could see it: thin lines are smoothed over half a pixel, px.
const WARNED_PX: f64 = 0.5;
/// From here on a body stands visibly beside its mark: the thinnest marks are two pixels wide, px.
const FAILED_PX: f64 = 2.0;

/// The second run on its way.
#[derive(Debug)]
pub(super) struct Second {
    propagation: Propagation,
    /// What has to be covered still, s.
    ends_s: Vec<f64>,
    stopped: Option<String>,
}

impl Second {
    pub(super) fn new(show: &Show) -> Self {
        let propagation =
            Propagation::with_most_bytes(&show.initial, most_bytes(show)).with_step_share(STEP_SHARE);
        Self { propagation, ends_s: sight::ends_s(show), stopped: None }
    }

    /// Integrates on. True once all is there.
    pub(super) fn work(&mut self, max_steps: usize) -> bool {
        if let Some(&end_s) = self.ends_s.last() {
            match self.propagation.advance(end_s, max_steps) {
                Ok(false) => {}
                Ok(true) => drop(self.ends_s.pop()),
                Err(stopped) => {
                    self.stopped = Some(stopped.to_string());
                    self.ends_s.clear();
                }
            }
        }
        self.ends_s.is_empty()
    }

    /// Share of the way, 0 to 1.
    pub(super) fn fraction(&self, show: &Show) -> f64 {
        let (from_s, until_s) = sight::shown_s(show);
        let run = self.propagation.ephemeris();
        ((run.until_s().min(until_s) - run.from_s().max(from_s)) / (until_s - from_s).max(1.0))
            .clamp(0.0, 1.0)
    }

    /// The paths.
    pub(super) fn ephemeris(&self) -> &Ephemeris {
        self.propagation.ephemeris()
    }

    /// The finding of a run that ended early.
    pub(super) fn stopped(&self, show: &Show) -> Option<Finding> {
        let stopped = self.stopped.as_ref()?;
        Some(Finding {
            weight: Weight::Failure,
            topic: Topic::Error,
            place: show.scenario.beats.first().map_or_else(Default::default, |beat| beat.place),
            wrong: format!("a second run in shorter steps ends early: {stopped}"),
            remedy: "give bodies that meet a radius, so that they touch instead of falling into a point"
                .to_owned(),
        })
    }

    /// Compares a beat.
    pub(super) fn compare(&self, seen: &Seen<'_>, report: &mut BeatReport, findings: &mut Vec<Finding>) {
        (report.off, report.off_m) = worst(seen, self.ephemeris());
        findings.extend(report.off.and_then(|off| finding(seen, off)));
    }
}

/// The worst in the picture, and the worst of all in metres.
fn worst(seen: &Seen<'_>, second: &Ephemeris) -> (Option<Shift>, f64) {
    let (mut worst, mut most_m) = (None, 0.0f64);
    for both in seen.instants(PIECES).filter_map(|beat_s| seen.both(second, beat_s)) {
        for (shift, is_seen) in both.bodies() {
            most_m = most_m.max(shift.m);
            if is_seen {
                worst = farther(worst, shift);
            }
        }
    }
    (worst, most_m)
}

fn finding(seen: &Seen<'_>, off: Shift) -> Option<Finding> {
    let weight = if off.px > FAILED_PX {
        Weight::Failure
    } else if off.px > WARNED_PX {
        Weight::Warning
    } else {
        return None;
    };
    let body = off.of.called(&seen.show.initial);
    Some(Finding {
        weight,
        topic: Topic::Error,
        place: seen.beat.place,
        wrong: format!(
            "{body} may be drawn {:.1} px off in {}, {:.0} s into it: a second run in shorter steps goes another way",
            off.px,
            called(seen.index),
            off.beat_s
        ),
        remedy: "the motion forgets its start by then: end the beat sooner, start it nearer to what it shows, or keep the bodies \
                 farther apart"
            .to_owned(),
    })
}
