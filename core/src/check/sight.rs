//! What the house sees of a beat: its window, its view, and what stands in the picture.

use super::report::{Mover, Shift};
use crate::Vector3;
use crate::ephemeris::Ephemeris;
use crate::picture::Screen;
use crate::picture::frame::Frame;
use crate::picture::scene::on_stage;
use crate::picture::view::Camera;
use crate::scenario::{Beat, BodyId, SwarmId};
use crate::show::{PlannedBeat, Show};

/// The window that is judged: the house of a full-size projector.
pub(super) const HOUSE: Screen = Screen { width_px: 1920.0, height_px: 1080.0, density: 1.0 };

/// A frame of the show, s.
pub(super) const FRAME_S: f64 = 1.0 / 60.0;

/// The frame of that window.
pub(super) fn frame() -> Frame {
    Frame::new(HOUSE)
}

/// A beat and its plan.
#[derive(Debug, Clone, Copy)]
pub(super) struct Seen<'a> {
    pub(super) show: &'a Show,
    pub(super) index: usize,
    pub(super) beat: &'a Beat,
    pub(super) planned: &'a PlannedBeat,
    /// Pace with which it is entered when the show runs by its plan.
    first_pace: f64,
}

/// All beats of a show, in order.
pub(super) fn beats(show: &Show) -> Vec<Seen<'_>> {
    let mut first_pace = 0.0;
    let both = show.scenario.beats.iter().zip(&show.plan.beats).enumerate();
    both.map(|(index, (beat, planned))| {
        let goes_on = planned.run == crate::show::Run::GoesOn;
        let seen = Seen { show, index, beat, planned, first_pace: if goes_on { first_pace } else { 0.0 } };
        first_pace = seen.pace_at(planned.lasts_s);
        seen
    })
    .collect()
}

impl Seen<'_> {
    /// Model time at a show time into the beat, s.
    pub(super) fn model_s(&self, beat_s: f64) -> f64 {
        self.planned.pacing(self.planned.from_s, self.first_pace, 0.0).model_s(beat_s)
    }

    /// Pace at a show time into the beat.
    pub(super) fn pace_at(&self, beat_s: f64) -> f64 {
        self.planned.pacing(self.planned.from_s, self.first_pace, 0.0).pace_at(beat_s)
    }

    /// Show times into the beat, from its start to its end: `count` pieces.
    pub(super) fn instants(&self, count: u32) -> impl Iterator<Item = f64> + '_ {
        (0..=count).map(move |piece| self.at(piece, count))
    }

    /// Show time into the beat after so many of so many pieces, s.
    pub(super) fn at(&self, piece: u32, of: u32) -> f64 {
        self.planned.lasts_s * f64::from(piece) / f64::from(of)
    }

    /// The bodies on stage at a model time.
    pub(super) fn bodies(&self, t_s: f64) -> impl Iterator<Item = BodyId> {
        let (show, beat) = (self.show, self.beat);
        (0..show.scenario.bodies.len()).map(BodyId).filter(move |&body| on_stage(show, beat, body, t_s))
    }

    /// The camera of the view at rest.
    pub(super) fn camera(&self, t_s: f64) -> Camera {
        Camera::of(self.show, &self.beat.view, t_s, &frame())
    }

    /// Whether a body's middle is in the picture.
    pub(super) fn holds(&self, camera: &Camera, at: Vector3<f64>) -> bool {
        frame().whole().holds(camera.project(at))
    }

    /// The swarms on stage.
    pub(super) fn swarms(&self) -> impl Iterator<Item = SwarmId> {
        let cast = self.beat.cast.as_ref();
        let on_stage = move |swarm: &SwarmId| cast.is_none_or(|cast| cast.swarms.contains(swarm));
        (0..self.show.initial.swarms.len()).map(SwarmId).filter(on_stage)
    }

    /// The views of one instant of the beat in the show and in another run of it; `None` before anything is integrated.
    pub(super) fn both<'b>(&'b self, other: &'b Ephemeris, beat_s: f64) -> Option<Both<'b>> {
        let t_s = self.model_s(beat_s);
        let centre = |eph: &Ephemeris| match self.beat.view.centre.about {
            Some(about) => eph.state(about, t_s).map(|state| state.pos),
            None => Some(Vector3::zeros()),
        };
        let centres = [centre(&self.show.ephemeris)?, centre(other)?];
        Some(Both { seen: self, other, beat_s, t_s, camera: self.camera(t_s), centres })
    }
}

/// One instant of a beat in the show and in another run.
#[derive(Debug)]
pub(super) struct Both<'a> {
    seen: &'a Seen<'a>,
    other: &'a Ephemeris,
    beat_s: f64,
    /// Model time, s.
    pub(super) t_s: f64,
    camera: Camera,
    /// The view's centre, which is followed, m.
    centres: [Vector3<f64>; 2],
}

impl Both<'_> {
    /// How far apart both have what stands at these places, and whether it is in the picture of one of them.
    pub(super) fn apart(&self, of: Mover, [first, second]: [Vector3<f64>; 2]) -> (Shift, bool) {
        let way = (second - self.centres[1]) - (first - self.centres[0]);
        let [x, y] = self.camera.turn(way);
        let shift = Shift { of, beat_s: self.beat_s, px: (x * x + y * y).sqrt(), m: way.norm() };
        (shift, self.seen.holds(&self.camera, first) || self.seen.holds(&self.camera, second))
    }

    /// The same for every body on stage.
    pub(super) fn bodies(&self) -> impl Iterator<Item = (Shift, bool)> {
        let at = |eph: &Ephemeris, body| eph.state(body, self.t_s).map(|state| state.pos);
        self.seen.bodies(self.t_s).filter_map(move |body| {
            let places = [at(&self.seen.show.ephemeris, body)?, at(self.other, body)?];
            Some(self.apart(Mover::Body(body), places))
        })
    }
}

/// The farther one in the picture.
pub(super) fn farther(worst: Option<Shift>, one: Shift) -> Option<Shift> {
    Some(worst.filter(|worst| worst.px >= one.px).unwrap_or(one))
}

/// How people call a beat: "beat 4".
pub(super) fn called(index: usize) -> String {
    format!("beat {}", index + 1)
}

/// What has to be integrated for the model time that the beats show, the next end last, s. Time 0 is always covered: whatever is asked of an
/// ephemeris leans on a first step.
pub(super) fn ends_s(show: &Show) -> Vec<f64> {
    let (from_s, until_s) = shown_s(show);
    let before = (from_s < 0.0).then_some(from_s);
    before.into_iter().chain([until_s.max(0.0)]).collect()
}

/// The model time that the beats show: from, until, s; both sides of the start are counted in.
pub(super) fn shown_s(show: &Show) -> (f64, f64) {
    let beats = &show.plan.beats;
    let from_s = beats.iter().map(|b| b.from_s.min(b.until_s)).fold(0.0, f64::min);
    let until_s = beats.iter().map(|b| b.from_s.max(b.until_s)).fold(0.0, f64::max);
    (from_s, until_s)
}
