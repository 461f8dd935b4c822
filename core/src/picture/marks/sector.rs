//! Sectors: what the line from centre to body covers in equal times, with tint and hatch.

use super::super::geometry::{clip_area, hatch};
use super::super::list::{Shape, Tag};
use super::super::look;
use super::super::scene::{Scene, points, stroke};
use super::conic::Osculating;
use crate::math::counts::number_from;
use crate::math::float;
use crate::scenario::{BodyId, Mark};
use crate::sweep;
use crate::units::Span;

/// More sectors than this tell nobody anything.
const MOST: usize = 72;

/// The sectors of one mark.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sectors {
    /// Of which body.
    pub body: BodyId,
    /// About which centre.
    pub about: BodyId,
    /// Model time at which the first one starts.
    pub from_s: f64,
    /// Model time of each.
    pub every_s: f64,
    /// How many the beat has.
    pub count: usize,
    /// Whether areas are written.
    pub area: bool,
}

impl Sectors {
    /// Those of a mark in a scene; `None` where it is no sector, or there is nothing to cover.
    pub fn of(scene: &Scene<'_>, mark: &Mark) -> Option<Self> {
        let Mark::Sector { body, about, every, count, area } = *mark else {
            return None;
        };
        let about = about.or_else(|| scene.primary(body))?;
        Self::new(scene, body, about, every, count, area)
    }

    fn new(
        scene: &Scene<'_>,
        body: BodyId,
        about: BodyId,
        every: Option<Span>,
        count: Option<usize>,
        area: bool,
    ) -> Option<Self> {
        let every_s = match every {
            Some(every) => every.s(),
            None => {
                let period = Osculating::of(scene, body, Some(about)).and_then(|o| o.period_s());
                period.unwrap_or(scene.until_s - scene.beat_from_s) / 12.0
            }
        };
        if body == about || !(every_s > 0.0 && every_s.is_finite()) {
            return None;
        }
        let has_time_for = ((scene.until_s - scene.beat_from_s) / every_s + 1e-6).floor();
        let fits = (0..MOST).take_while(|&k| number_from(k) < has_time_for).count();
        let count = count.map_or(fits, |c| c.min(MOST));
        (count > 0).then_some(Self { body, about, from_s: scene.beat_from_s, every_s, count, area })
    }

    /// Start and end of one of them, model time.
    pub fn ends_s(&self, index: usize) -> [f64; 2] {
        let from = self.from_s + number_from(index) * self.every_s;
        [from, from + self.every_s]
    }

    /// Area of one of them, m²; `None` where the ephemeris doesn't reach.
    pub fn area_m2(&self, scene: &Scene<'_>, index: usize) -> Option<f64> {
        let [from_s, until_s] = self.ends_s(index);
        sweep::area_m2(&scene.show.ephemeris, self.body, self.about, from_s, until_s)
    }
}

/// Draws the sectors that have begun: tint and hatch first, then their edges.
pub fn draw(scene: &mut Scene<'_>, sectors: &Sectors) {
    for index in 0..sectors.count {
        let [from_s, until_s] = sectors.ends_s(index);
        if from_s >= scene.t_s {
            break;
        }
        draw_one(scene, sectors, index, from_s, until_s.min(scene.t_s));
    }
}

fn draw_one(scene: &mut Scene<'_>, sectors: &Sectors, index: usize, from_s: f64, until_s: f64) {
    let centre = scene.camera.project(scene.position(sectors.about));
    let curve = scene.curve(sectors.body, Some(sectors.about));
    let rim = points(&curve.trace(&scene.camera, &scene.keep(), from_s, until_s));
    let (Some(&first), true) = (rim.first(), rim.len() > 1) else {
        return;
    };
    let (colour, tint) = look::SECTOR_TINTS[index % 2];
    let tag = Tag::Sector(sectors.body, index);
    let mut outline = rim.clone();
    outline.push(centre);
    let seen = clip_area(&outline, &scene.keep());
    if seen.len() > 2 {
        let angle = look::HATCH_TURN_RAD * number_from(index % 6) + 0.25;
        let (s, c) = float::sin_cos(angle);
        let segments = hatch(&seen, [c, -s], centre, scene.frame.part(look::HATCH_STEP).max(4.0));
        scene.add(tag, Shape::Area { points: seen, fill: look::fade(colour, tint) });
        if !segments.is_empty() {
            let line = stroke(scene.frame.line(look::HATCH) * 0.9, look::fade(colour, 0.62));
            scene.add(tag, Shape::Segments { segments, stroke: line });
        }
    }
    let edge = stroke(scene.frame.line(look::HATCH), colour);
    scene.add_line(tag, &[centre, first], &edge);
    // The next one's first edge closes this one; the last one closes itself.
    let begun = scene.t_s > sectors.ends_s(index + 1)[0] && index + 1 < sectors.count;
    if let (false, Some(&last)) = (begun, rim.last()) {
        scene.add_line(tag, &[centre, last], &edge);
    }
}
