//! What the house sees of a beat: its window, its view, and what stands in the picture.

use crate::Vector3;
use crate::picture::Screen;
use crate::picture::frame::Frame;
use crate::picture::scene::on_stage;
use crate::picture::view::Camera;
use crate::scenario::{Beat, BodyId, Scenario};
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
    pub(super) fn instants(&self, count: u32) -> impl Iterator<Item = f64> {
        let lasts_s = self.planned.lasts_s;
        (0..=count).map(move |i| lasts_s * f64::from(i) / f64::from(count))
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

    /// How far apart two places of a body are in a view whose centre is followed: in the picture, px, and in space, m.
    pub(super) fn apart(
        &self,
        camera: &Camera,
        [first, second]: [Vector3<f64>; 2],
        centres: [Vector3<f64>; 2],
    ) -> (f64, f64) {
        let way = (second - centres[1]) - (first - centres[0]);
        let [x, y] = camera.turn(way);
        ((x * x + y * y).sqrt(), way.norm())
    }
}

/// How people call a beat: "beat 4".
pub(super) fn called(index: usize) -> String {
    format!("beat {}", index + 1)
}

/// A body's name.
pub(super) fn name(scenario: &Scenario, body: BodyId) -> &str {
    scenario.bodies.get(body.0).map_or("", |body| body.name.as_str())
}

/// The model time that the beats show: from, until, s; both sides of the start are counted in.
pub(super) fn shown_s(show: &Show) -> (f64, f64) {
    let beats = &show.plan.beats;
    let from_s = beats.iter().map(|b| b.from_s.min(b.until_s)).fold(0.0, f64::min);
    let until_s = beats.iter().map(|b| b.from_s.max(b.until_s)).fold(0.0, f64::max);
    (from_s, until_s)
}
