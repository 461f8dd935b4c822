//! The way that paths are integrated in one direction of time, and how they are kept within their memory.
//!
//! They are exact for as long as they fit. Where they would outgrow half of their memory it is asked whether the bodies could go on by
//! long steps. If so, that half is for the exact part, thinned to ever coarser tolerances, and the other half for knots of the long
//! steps that follow. If not, the exact part may have all of it.

use super::long::Long;
use super::run::{Run, Step};
use super::thin::Thinner;
use super::{Ephemeris, Stopped, Track, Why};
use crate::initial::InitialState;
use crate::integrate::StepTooSmall;
use crate::integrate::long_steps::{self, Choice};

/// The largest error of paths between knots, in parts of the distance from the centre: two hundredths of it are some pixels.
const MOST_ERROR: f64 = 0.02;

/// Below the most that paths may take by this, bytes, every second knot goes; it takes up to two more until they can.
const SLACK_BYTES: usize = 64 << 10;

/// One direction of time.
#[derive(Debug, Clone)]
pub(super) struct Way {
    backward: bool,
    run: Run,
    thinner: Thinner,
    stopped: Option<Stopped>,
    most_bytes: usize,
    /// Length of all steps in those usual.
    share: f64,
    /// Whether long steps would do, once that was asked.
    choice: Option<Result<Choice, Vec<String>>>,
    long: Option<Long>,
}

impl Way {
    pub(super) fn new(initial: &InitialState, backward: bool, most_bytes: usize) -> Self {
        Self {
            backward,
            run: Run::new(initial, if backward { -1.0 } else { 1.0 }),
            thinner: Thinner::new(initial),
            stopped: None,
            most_bytes,
            share: 1.0,
            choice: None,
            long: None,
        }
    }

    /// Makes all steps a share of their usual length.
    pub(super) fn set_step_share(&mut self, share: f64) {
        self.share = share;
        self.run.set_step_share(share);
    }

    /// A step on, or some long ones.
    pub(super) fn step(&mut self, initial: &InitialState, ephemeris: &mut Ephemeris) -> Result<(), Stopped> {
        if let Some(stopped) = &self.stopped {
            return Err(stopped.clone());
        }
        let track = if self.backward { &mut ephemeris.backward } else { &mut ephemeris.forward };
        if let Some(long) = self.long.as_mut().filter(|long| long.is_on()) {
            long.leap(&mut self.run, initial, track);
        } else {
            let step =
                self.run.step(initial).map_err(|StepTooSmall| self.stop(self.run.collapse(initial)))?;
            if step.step_s != 0.0 {
                track.push(step.start_s, step.step_s, self.run.numbers());
                self.thinner.grow(track);
            }
            if step.cut {
                self.thinner.close(track, self.run.t_s(), self.run.hosts());
            }
            if let Some(long) = &mut self.long {
                long.try_on(&mut self.run, initial, track, &mut self.thinner);
            }
            let Step { contact, switches, releases, .. } = step;
            ephemeris.contacts.extend(contact);
            ephemeris.switches.extend(switches);
            ephemeris.releases.extend(releases);
        }
        let track = if self.backward { &mut ephemeris.backward } else { &mut ephemeris.forward };
        self.keep(initial, track)
    }

    /// Keeps the paths within their memory.
    fn keep(&mut self, initial: &InitialState, track: &mut Track) -> Result<(), Stopped> {
        let half_bytes = self.most_bytes / 2;
        if track.bytes() <= half_bytes {
            return Ok(());
        }
        if let Some(long) = &mut self.long {
            let coarse = track.long_stretches().any(|stretch| stretch.errors.place > MOST_ERROR);
            let slack_bytes = SLACK_BYTES.min(half_bytes / 8);
            let thinned = track.bytes() + slack_bytes <= self.most_bytes || long.thin(track);
            if coarse || !thinned && track.bytes() > self.most_bytes {
                return Err(self.too_long(initial));
            }
            return Ok(());
        }
        let choice = self.choice.get_or_insert_with(|| {
            let members = self.run.members(initial);
            long_steps::choose(initial, &members, self.run.t_s(), self.backward)
        });
        let most_bytes = if choice.is_ok() { half_bytes } else { self.most_bytes };
        while track.bytes() > most_bytes && self.thinner.coarsen(track) {}
        if track.bytes() <= most_bytes {
            return Ok(());
        }
        let Ok(choice) = choice else { return Err(self.too_long(initial)) };
        let choice = Choice { step_s: choice.step_s * self.share, ..*choice };
        track.set_choice(choice);
        self.long = Some(Long::new(choice, self.backward));
        Ok(())
    }

    fn too_long(&mut self, initial: &InitialState) -> Stopped {
        let against = match &self.choice {
            Some(Err(reasons)) => reasons.clone(),
            Some(Ok(choice)) => vec![format!(
                "Between the states kept they would be off by more than {MOST_ERROR} of the distance from {}, or bodies pass each other too often.",
                initial.bodies[choice.centre].name
            )],
            None => Vec::new(),
        };
        let why = Why::TooLong { against };
        self.stop(Stopped { bodies: Vec::new(), names: Vec::new(), t_s: self.run.t_s(), why })
    }

    fn stop(&mut self, stopped: Stopped) -> Stopped {
        self.stopped = Some(stopped.clone());
        stopped
    }
}
