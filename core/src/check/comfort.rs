//! What makes people ill in a dark room: a view that turns or slides fast, and flashes.
//!
//! The show is run by its plan, frame by frame; while one view moves into the next, the camera's own motion is measured and the pictures
//! are watched for flashes. Then each change of beat is gone to and fro as fast as keys can be hit. The pictures are small and without
//! words: what fills area is the same in them.

use super::finding::{Finding, Topic, Weight};
use super::flash::Meter;
use super::reach::Player;
use super::report::BeatReport;
use super::sight::{self, FRAME_S, called};
use crate::math::counts::number_from;
use crate::math::float;
use crate::picture::view::Camera;
use crate::picture::{Composer, Options, Screen, passage};
use crate::show::{Action, Clock, Moment, Show, VIEW_MOVE_S};

/// A small picture: no words, few points.
const SMALL: Screen = Screen { width_px: 192.0, height_px: 108.0, density: 1.0 };

/// Show time after a change of beat in which the picture changes as a whole, s: the longest glide or veil, and the view's move.
const CUT_S: f64 = 3.0 + VIEW_MOVE_S;

/// Fastest turning of the whole picture, degrees a second at its fastest. Common practice in domes, no source: what turns by 90 degrees
/// in the second or so of a move is felt in the stomach.
const TURN_DEG_S: f64 = 100.0;

/// Fastest sliding of the picture's middle, picture heights a second at its fastest. Common practice, no source: the eye follows up to about
/// 100 degrees a second, five heights of a picture seen under 20 degrees.
const PAN_HEIGHTS_S: f64 = 5.0;

/// Frames between two keys hit as fast as can be.
const HAMMER_FRAMES: u32 = 6;
/// How long they are hit, frames.
const HAMMERED_FRAMES: u32 = 150;

/// Share of a block of sight that may flash (WCAG 2.3.1).
const MOST_FLASHING: f64 = 0.25;

/// The check on its way.
#[derive(Debug)]
pub(super) struct Comfort {
    clock: Player,
    composer: Composer,
    meter: Option<Meter>,
    /// Once the plan has been run to its end: the change of beat that is hammered on.
    hammered: Option<Hammer>,
}

/// To and fro between a beat and the one before it, as fast as keys can be hit.
#[derive(Debug)]
struct Hammer {
    beat: usize,
    clock: Clock,
    meter: Meter,
    frame: u32,
}

/// The camera's own motion at an instant.
#[derive(Debug, Clone, Copy, Default)]
struct Moves {
    turn_deg_s: f64,
    pan_heights_s: f64,
}

impl Comfort {
    pub(super) fn new(show: &Show) -> Self {
        let composer = Composer::new(show, SMALL, Options::default()).without_swarms();
        Self { clock: Player::new(&show.plan), composer, meter: None, hammered: None }
    }

    /// Goes on by so many frames. True at the end.
    pub(super) fn work(&mut self, show: &Show, reports: &mut [BeatReport], frames: usize) -> bool {
        if let Some(hammer) = &mut self.hammered {
            let Some(report) = reports.get_mut(hammer.beat) else { return true };
            for _ in 0..frames {
                if hammer.frame >= HAMMERED_FRAMES {
                    *hammer = Hammer::new(show, hammer.beat + 1);
                    return false;
                }
                report.flashing = report.flashing.max(hammer.hit(show, &mut self.composer));
            }
            return false;
        }
        for _ in 0..frames {
            if !self.clock.step(&show.plan) {
                self.hammered = Some(Hammer::new(show, 1));
                return false;
            }
            self.frame(show, reports);
        }
        false
    }

    /// Share of the work, 0 to 1.
    pub(super) fn fraction(&self, show: &Show) -> f64 {
        match &self.hammered {
            Some(Hammer { beat, .. }) => {
                0.5 + 0.5 * number_from(*beat) / number_from(show.plan.beats.len().max(*beat))
            }
            None => (0.5 * self.clock.clock.show_s() / show.plan.lasts_s().max(1.0)).min(0.5),
        }
    }

    fn frame(&mut self, show: &Show, reports: &mut [BeatReport]) {
        let moment = self.clock.clock.moment(&show.plan);
        let Some(report) = reports.get_mut(moment.beat) else { return };
        if moment.since_cut_s > CUT_S {
            self.meter = None;
            return;
        }
        let moves = moves(show, &moment);
        report.turn_deg_s = report.turn_deg_s.max(moves.turn_deg_s);
        report.pan_heights_s = report.pan_heights_s.max(moves.pan_heights_s);
        let list = self.composer.compose(show, &moment);
        let meter = self.meter.get_or_insert_with(Meter::new);
        report.flashing = report.flashing.max(meter.look(&list, self.clock.clock.show_s()));
    }
}

impl Hammer {
    /// On the change into a beat, which is not the first.
    fn new(show: &Show, beat: usize) -> Self {
        let mut clock = Clock::new(&show.plan);
        clock.act(&show.plan, Action::Next);
        clock.act(&show.plan, Action::Jump(beat - 1));
        clock.advance(&show.plan, 2.0 * CUT_S);
        Self { beat, clock, meter: Meter::new(), frame: 0 }
    }

    /// A frame on: the share that has flashed by then.
    fn hit(&mut self, show: &Show, composer: &mut Composer) -> f64 {
        if self.frame.is_multiple_of(HAMMER_FRAMES) {
            let on = self.clock.beat() < self.beat;
            self.clock.act(&show.plan, if on { Action::Next } else { Action::Back });
        }
        self.clock.advance(&show.plan, FRAME_S);
        let list = composer.compose(show, &self.clock.moment(&show.plan));
        let flashing = self.meter.look(&list, f64::from(self.frame) * FRAME_S);
        self.frame += 1;
        flashing
    }
}

/// The camera's motion within a frame, at one model time: what bodies do is not its own.
fn moves(show: &Show, moment: &Moment) -> Moves {
    let frame = sight::frame();
    let mut later = *moment;
    later.lately.advance(FRAME_S);
    let cameras = (passage::camera(show, moment, &frame), passage::camera(show, &later, &frame));
    let (Some(now), Some(next)) = cameras else { return Moves::default() };
    let [x, y] = next.project(now.centre);
    let way = [x - next.middle[0], y - next.middle[1]];
    Moves {
        turn_deg_s: turned_rad(&now, &next).to_degrees() / FRAME_S,
        pan_heights_s: (way[0] * way[0] + way[1] * way[1]).sqrt() / frame.scene / FRAME_S,
    }
}

/// The angle between two cameras: the cross products of their axes add up to twice its sine along the axis of the turn.
fn turned_rad(a: &Camera, b: &Camera) -> f64 {
    let sum = a.right.cross(&b.right) + a.up.cross(&b.up) + a.toward.cross(&b.toward);
    float::asin((0.5 * sum.norm()).min(1.0))
}

/// What is beyond comfort.
pub(super) fn judge(show: &Show, reports: &[BeatReport], findings: &mut Vec<Finding>) {
    for (index, (beat, report)) in show.scenario.beats.iter().zip(reports).enumerate() {
        let mut add = |weight, wrong: String, remedy: &str| {
            let (topic, place) = (Topic::Comfort, beat.place);
            findings.push(Finding { weight, topic, place, wrong, remedy: remedy.to_owned() });
        };
        let called = called(index);
        if report.flashing > MOST_FLASHING {
            add(
                Weight::Failure,
                format!(
                    "the picture can flash more than three times a second when {called} begins: that can set off seizures"
                ),
                "show large bright bodies smaller, or slow the pace",
            );
        }
        if report.turn_deg_s > TURN_DEG_S {
            add(
                Weight::Warning,
                format!("the view turns at {:.0} degrees a second when {called} begins", report.turn_deg_s),
                "turn and tilt by less from beat to beat: in a dome, fast turning makes people ill",
            );
        }
        if report.pan_heights_s > PAN_HEIGHTS_S {
            add(
                Weight::Warning,
                format!(
                    "the view slides by {:.1} picture heights a second when {called} begins",
                    report.pan_heights_s
                ),
                "keep the centre nearer to that of the beat before, or widen the view in between",
            );
        }
    }
}
