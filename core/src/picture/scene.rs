//! What one frame is drawn from, and the list that it fills.

use super::frame::Frame;
use super::geometry::{Px, Rect, clip_piece, length};
use super::list::{Anchor, Colour, Item, Shape, Stroke, Tag};
use super::sample::{Curve, Sample};
use super::view::Camera;
use super::wording::SpeedUnit;
use super::words::Language;
use super::{look, type_metrics};
use crate::Vector3;
use crate::scenario::{Beat, BodyId, Kind};
use crate::show::Show;

/// Where a body is, m; where it starts while nothing is covered yet.
pub fn position(show: &Show, body: BodyId, t_s: f64) -> Vector3<f64> {
    show.ephemeris
        .state(body, t_s)
        .map(|s| s.pos)
        .or_else(|| show.initial.bodies.get(body.0).map(|b| b.pos))
        .unwrap_or_else(Vector3::zeros)
}

/// What the frames of one window have in common.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct House {
    /// Sizes.
    pub frame: Frame,
    /// The language of words and numbers.
    pub language: &'static Language,
}

/// One frame in the making.
#[derive(Debug)]
pub struct Scene<'a> {
    /// The show.
    pub show: &'a Show,
    /// The beat.
    pub beat: &'a Beat,
    /// Sizes.
    pub frame: Frame,
    /// The language of words and numbers.
    pub language: &'static Language,
    /// The camera.
    pub camera: Camera,
    /// Model time.
    pub t_s: f64,
    /// Model time from which trails run.
    pub run_from_s: f64,
    /// Model time from which sectors run.
    pub beat_from_s: f64,
    /// Model time at which the beat's planned stretch ends.
    pub until_s: f64,
    /// Pace, model seconds per show second, of the beat once it has eased in.
    pub pace: f64,
    /// What is drawn so far.
    pub items: Vec<Item>,
}

/// A body's disc in the picture.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Spot {
    /// Which body.
    pub body: BodyId,
    /// Where, px.
    pub at: Px,
    /// Radius drawn, px.
    pub radius: f64,
    /// Radius true to scale, px.
    pub true_radius: f64,
    /// How far in front of the centre, px.
    pub depth: f64,
}

impl Scene<'_> {
    /// Whether a body is to be seen: listed, in the cast, and not become part of another.
    pub fn on_stage(&self, body: BodyId) -> bool {
        on_stage(self.show, self.beat, body, self.t_s)
    }

    /// The body to which a body's marks relate where they say nothing.
    pub fn primary(&self, body: BodyId) -> Option<BodyId> {
        self.show.initial.bodies.get(body.0).and_then(|b| b.primary)
    }

    /// The unit in which a body's speed is said.
    pub fn speed_unit(&self, body: BodyId) -> SpeedUnit {
        match self.show.scenario.bodies.get(body.0).map(|b| b.kind) {
            Some(Kind::Comet | Kind::Rock | Kind::Ball | Kind::Station) => SpeedUnit::KilometresAnHour,
            _ => SpeedUnit::KilometresASecond,
        }
    }

    /// Where a body is, m.
    pub fn position(&self, body: BodyId) -> Vector3<f64> {
        position(self.show, body, self.t_s)
    }

    /// The discs of the bodies on stage, in the order of the file.
    pub fn spots(&self) -> Vec<Spot> {
        spots(self.show, self.beat, &self.camera, &self.frame, self.t_s)
    }

    /// The path of a body relative to another one, as a curve of this frame.
    pub fn curve(&self, body: BodyId, about: Option<BodyId>) -> Curve<'_> {
        let origin = about.map_or_else(Vector3::zeros, |b| self.position(b));
        Curve { ephemeris: &self.show.ephemeris, body, about, origin }
    }

    /// Where lines still matter: the window and a little around it.
    pub fn keep(&self) -> Rect {
        self.frame.whole().grown(self.frame.part(look::STRONG) + 4.0)
    }

    /// Adds an item.
    pub fn add(&mut self, tag: Tag, shape: Shape) {
        self.items.push(Item { tag, shape });
    }

    /// Adds the parts of a line that are in the picture.
    pub fn add_line(&mut self, tag: Tag, points: &[Px], stroke: &Stroke) {
        for points in visible_parts(points, &self.keep()) {
            self.add(tag, Shape::Line { points, closed: false, stroke: stroke.clone() });
        }
    }

    /// Adds one line of text.
    pub fn add_text(&mut self, tag: Tag, at: Px, anchor: Anchor, words: &Words<'_>) {
        let shape = Shape::Text {
            at,
            text: words.text.to_owned(),
            size: words.size,
            weight: words.weight,
            colour: words.colour,
            anchor,
            edge: 0.16 * words.size,
        };
        self.add(tag, shape);
    }
}

/// Words and how they are set.
#[derive(Debug, Clone, Copy)]
pub struct Words<'a> {
    /// The words.
    pub text: &'a str,
    /// Size, px.
    pub size: f64,
    /// Weight.
    pub weight: u16,
    /// Colour.
    pub colour: Colour,
}

impl Words<'_> {
    /// Their width, px.
    pub fn width(&self) -> f64 {
        type_metrics::width(self.text, self.size, self.weight)
    }
}

/// A stroke with round ends.
pub const fn stroke(width: f64, colour: Colour) -> Stroke {
    Stroke { width, colour, dash: None, round: true }
}

/// Whether a body is to be seen in a beat at an instant.
pub fn on_stage(show: &Show, beat: &Beat, body: BodyId, t_s: f64) -> bool {
    let cast = beat.cast.as_ref().is_none_or(|cast| cast.bodies.contains(&body));
    let merged = show
        .ephemeris
        .at_rest(body, t_s)
        .is_some_and(|contact| contact.outcome == crate::ephemeris::Outcome::Merged);
    body.0 < show.scenario.bodies.len() && cast && !merged
}

/// The discs of the bodies on stage, in the order of the file.
pub fn spots(show: &Show, beat: &Beat, camera: &Camera, frame: &Frame, t_s: f64) -> Vec<Spot> {
    let seen = (0..show.scenario.bodies.len()).map(BodyId).filter(|&b| on_stage(show, beat, b, t_s));
    seen.filter_map(|body| {
        let point = position(show, body, t_s);
        let at = camera.project(point);
        let radius_m = show.initial.bodies.get(body.0).map_or(0.0, |b| b.radius_m);
        let true_radius = radius_m * camera.px_per_m;
        let kind = show.scenario.bodies.get(body.0)?.kind;
        let radius = true_radius.max(frame.part(look::least_radius(kind))).max(1.5);
        let finite = at.iter().all(|v| v.is_finite()) && radius.is_finite();
        finite.then_some(Spot { body, at, radius, true_radius, depth: camera.depth(point) })
    })
    .collect()
}

/// The parts of a line that lie in a rectangle, each as a line of its own.
pub fn visible_parts(points: &[Px], keep: &Rect) -> Vec<Vec<Px>> {
    let mut parts: Vec<Vec<Px>> = Vec::new();
    let mut open = false;
    for w in points.windows(2) {
        let Some([a, b]) = clip_piece(w[0], w[1], keep) else {
            open = false;
            continue;
        };
        match parts.last_mut() {
            Some(part) if open => part.push(b),
            _ => parts.push(vec![a, b]),
        }
        // A piece that was cut at its far end doesn't join the next one.
        open = length([b[0] - w[1][0], b[1] - w[1][1]]) < 1e-9;
    }
    parts
}

/// The points of samples.
pub fn points(samples: &[Sample]) -> Vec<Px> {
    samples.iter().map(|s| s.at).collect()
}
