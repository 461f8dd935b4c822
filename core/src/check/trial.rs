//! One run with a changed number, and how far it moves the picture of each beat.

use super::report::{Encounter, Mover, Shift};
use super::sample::{Places, Sample};
use super::sight::{self, farther};
use crate::ephemeris::{Ephemeris, Propagation};
use crate::initial::InitialState;
use crate::resolve::Solar;
use crate::scenario::SwarmId;
use crate::show::{Rehearsal, Show};

/// Pieces of a beat between the instants compared.
pub(super) const PIECES: u32 = 16;

/// Steps of tracers that take about as long as one of the integrator.
pub(super) const TRACER_STEPS: usize = 400;

/// A run with a changed number.
#[derive(Debug)]
pub(super) struct Trial {
    stage: Stage,
    shifts: Vec<Option<Shift>>,
}

#[derive(Debug)]
enum Stage {
    /// The times of changes are found.
    Settling(Box<Rehearsal>),
    /// The bodies move, until all ends are covered.
    Moving { initial: InitialState, propagation: Box<Propagation>, ends_s: Vec<f64> },
    /// Tracers follow.
    Following { propagation: Box<Propagation>, tracers: Sample },
    /// The pictures are compared, one instant after another.
    Comparing { propagation: Box<Propagation>, tracers: Sample, beat: usize, piece: u32 },
    /// All has been compared.
    Done,
}

impl Trial {
    /// With a changed text, and the solar system at its date; `None` where it is no scenario any more, or nothing can start from it.
    pub(super) fn start(text: &str, show: &Show, solar: &Solar) -> Option<Self> {
        let rehearsal = Rehearsal::start_among(text, solar).ok()?;
        Some(Self { stage: Stage::Settling(Box::new(rehearsal)), shifts: vec![None; show.plan.beats.len()] })
    }

    /// Goes on by about the time of so many steps of the integrator. True once all has been compared.
    ///
    /// `places`: where the tracers looked at are in the show, at each instant of each beat.
    ///
    /// # Errors
    /// Why the show can't be given with this number.
    pub(super) fn work(
        &mut self,
        show: &Show,
        places: &[Vec<Places>],
        encounters: &mut [Encounter],
        max_steps: usize,
    ) -> Result<bool, String> {
        let tracer_steps = max_steps.saturating_mul(TRACER_STEPS);
        let (from_s, until_s) = sight::shown_s(show);
        self.stage = match std::mem::replace(&mut self.stage, Stage::Done) {
            Stage::Settling(mut rehearsal) => match rehearsal.settle(max_steps) {
                Err(problems) => {
                    return Err(problems.first().map_or_else(String::new, |problem| problem.wrong.clone()));
                }
                Ok(false) => Stage::Settling(rehearsal),
                Ok(true) => {
                    let (initial, propagation) = rehearsal.into_motion();
                    let ends_s = sight::ends_s(show);
                    Stage::Moving { initial, propagation: Box::new(propagation), ends_s }
                }
            },
            Stage::Moving { initial, mut propagation, mut ends_s } => {
                let Some(&end_s) = ends_s.last() else {
                    note(show, propagation.ephemeris(), encounters);
                    let tracers = Sample::new(&initial);
                    self.stage = Stage::Following { propagation, tracers };
                    return Ok(false);
                };
                match propagation.advance(end_s, max_steps) {
                    Ok(false) => {}
                    Ok(true) => drop(ends_s.pop()),
                    // What ends early is compared as far as it goes.
                    Err(_) => ends_s.clear(),
                }
                Stage::Moving { initial, propagation, ends_s }
            }
            Stage::Following { propagation, mut tracers } => {
                if tracers.grow(propagation.ephemeris(), [until_s, from_s], tracer_steps) {
                    Stage::Comparing { propagation, tracers, beat: 0, piece: 0 }
                } else {
                    Stage::Following { propagation, tracers }
                }
            }
            Stage::Comparing { propagation, mut tracers, beat, piece } => {
                let Some(seen) = sight::beats(show).into_iter().nth(beat) else { return Ok(true) };
                let at = Instant { seen, piece, eph: propagation.ephemeris() };
                let before = places.get(beat).and_then(|pieces| pieces.get(usize::try_from(piece).ok()?));
                let next = match at.worst(&mut tracers, before, tracer_steps) {
                    None => (beat, piece),
                    Some(worst) => {
                        if let (Some(shift), Some(worst)) = (self.shifts.get_mut(beat), worst) {
                            *shift = farther(*shift, worst);
                        }
                        if piece < PIECES { (beat, piece + 1) } else { (beat + 1, 0) }
                    }
                };
                Stage::Comparing { propagation, tracers, beat: next.0, piece: next.1 }
            }
            Stage::Done => return Ok(true),
        };
        Ok(false)
    }

    /// How far the picture of each beat moves at most.
    pub(super) fn into_shifts(self) -> Vec<Option<Shift>> {
        self.shifts
    }
}

/// An instant of a beat in the run.
struct Instant<'a> {
    seen: sight::Seen<'a>,
    piece: u32,
    eph: &'a Ephemeris,
}

impl Instant<'_> {
    /// What of the picture is moved farthest, if anything is in it; `None` while the tracers are on their way.
    fn worst(
        &self,
        tracers: &mut Sample,
        before: Option<&Places>,
        tracer_steps: usize,
    ) -> Option<Option<Shift>> {
        let Self { seen, eph, .. } = self;
        let beat_s = seen.at(self.piece, PIECES);
        let t_s = seen.model_s(beat_s);
        // A run that ended early stands at its end from then on: that is no shift.
        let covered = t_s <= eph.until_s() && t_s >= eph.from_s();
        let Some(both) = seen.both(eph, beat_s).filter(|_| covered) else { return Some(None) };
        let in_picture = |(shift, is_seen): (Shift, bool)| is_seen.then_some(shift);
        let mut worst = both.bodies().filter_map(in_picture).fold(None, farther);
        let now = tracers.places(eph, seen, t_s, tracer_steps)?;
        for (id, (before, now)) in before.into_iter().flatten().zip(&now).enumerate() {
            let of = Mover::Tracer(SwarmId(id));
            let pairs = before.iter().zip(now).filter_map(|(before, now)| Some([(*before)?, (*now)?]));
            worst = pairs.filter_map(|pair| in_picture(both.apart(of, pair))).fold(worst, farther);
        }
        Some(worst)
    }
}

/// How far the run moves bodies apart or together where they pass each other.
fn note(show: &Show, run: &Ephemeris, encounters: &mut [Encounter]) {
    for encounter in encounters {
        let far =
            |eph: &Ephemeris| Some(eph.relative(encounter.body, encounter.other, encounter.t_s)?.pos.norm());
        let moved_m = far(&show.ephemeris).zip(far(run)).map_or(0.0, |(a, b)| (a - b).abs());
        encounter.moved_m = encounter.moved_m.max(moved_m);
    }
}
