//! Arrows of velocity and gravity, true to one scale for each kind in a beat.

use super::super::geometry::{Px, along, length};
use super::super::list::{Colour, Shape, Tag};
use super::super::look;
use super::super::scene::{Scene, Spot, stroke};
use super::super::wording::SpeedUnit;
use super::body_of;
use crate::Vector3;
use crate::math::float;
use crate::scenario::{BodyId, Mark};

/// Length of the longest arrow of a beat, part of the picture's height.
const LONGEST: f64 = 0.2;
/// Half the opening of an arrow's head, degrees.
const HEAD_DEG: f64 = 28.0;
/// Over how many instants of a beat the longest arrow is looked for.
const LOOKS: u32 = 96;

/// What an arrow stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    /// Velocity, m/s.
    Velocity,
    /// Gravity felt, m/s².
    Gravity,
}

impl Kind {
    /// Its colour: velocity in the lamp's, gravity in ink.
    pub const fn colour(self) -> Colour {
        match self {
            Self::Velocity => look::LAMP,
            Self::Gravity => look::INK,
        }
    }
}

/// Kind, body and reference of an arrow mark.
pub const fn of_mark(mark: &Mark) -> Option<(Kind, BodyId, Option<BodyId>)> {
    match *mark {
        Mark::Velocity { body, about } => Some((Kind::Velocity, body, about)),
        Mark::Gravity { body } => Some((Kind::Gravity, body, None)),
        _ => None,
    }
}

/// The vector of an arrow at a model time, m/s or m/s². Velocity without a reference is relative to the view's centre.
fn vector(
    scene: &Scene<'_>,
    kind: Kind,
    body: BodyId,
    about: Option<BodyId>,
    t_s: f64,
) -> Option<Vector3<f64>> {
    let eph = &scene.show.ephemeris;
    match kind {
        Kind::Velocity => match about.or(scene.beat.view.centre.about) {
            Some(about) => Some(eph.relative(body, about, t_s)?.vel),
            None => Some(eph.state(body, t_s)?.vel),
        },
        Kind::Gravity => {
            let here = eph.state(body, t_s)?.pos;
            let mut sum = Vector3::zeros();
            for other in (0..eph.bodies()).map(BodyId).filter(|&b| b != body) {
                let gm = eph.gm_m3_s2(other, t_s);
                if gm > 0.0 {
                    let way = eph.state(other, t_s)?.pos - here;
                    let r = way.norm();
                    if r > 0.0 {
                        sum += way * (gm / (r * r * r));
                    }
                }
            }
            Some(sum)
        }
    }
}

/// The longest vector of a kind over the beat's stretch of model time, m/s or m/s²; 0 where there is none.
pub fn largest(scene: &Scene<'_>, kind: Kind) -> f64 {
    let marks = scene.beat.marks.iter().filter_map(of_mark).filter(|m| m.0 == kind);
    let mut largest = 0.0_f64;
    for (_, body, about) in marks {
        for look in 0..=LOOKS {
            let t_s =
                scene.beat_from_s + (scene.until_s - scene.beat_from_s) * f64::from(look) / f64::from(LOOKS);
            let size = vector(scene, kind, body, about, t_s).map_or(0.0, |v| v.norm());
            if size.is_finite() {
                largest = largest.max(size);
            }
        }
    }
    largest
}

/// Pixels for each m/s or m/s², when the largest of the beat is known.
pub fn scale(scene: &Scene<'_>, largest: f64) -> f64 {
    if largest > 0.0 { scene.frame.part(LONGEST) / largest } else { 0.0 }
}

/// Draws an arrow from a body's edge.
pub fn draw(scene: &mut Scene<'_>, spots: &[Spot], mark: &Mark, scale_px: f64) {
    let (Some((kind, body, _)), Some((from, direction, long))) =
        (of_mark(mark), shaft(scene, spots, mark, scale_px))
    else {
        return;
    };
    let segments = pieces(from, direction, long, scene.frame.part(1.0 / 45.0));
    let stroke = stroke(scene.frame.line(look::STRONG), kind.colour());
    scene.add(Tag::Arrow(body), Shape::Segments { segments, stroke });
}

/// Start, direction and length of an arrow. Its length over the scale is the vector's size as seen in the picture's
/// plane; `None`: nothing to draw.
pub fn shaft(scene: &Scene<'_>, spots: &[Spot], mark: &Mark, scale_px: f64) -> Option<(Px, Px, f64)> {
    let (kind, body, about) = of_mark(mark)?;
    let spot = spots.iter().find(|s| s.body == body)?;
    let v = vector(scene, kind, body, about, scene.t_s)?;
    let flat = [v.dot(&scene.camera.right) * scale_px, -v.dot(&scene.camera.up) * scale_px];
    let long = length(flat);
    let direction = [flat[0] / long, flat[1] / long];
    (long > 1.0 && long.is_finite()).then(|| (along(spot.at, direction, spot.radius), direction, long))
}

/// Shaft and head of an arrow; a short one has a head of at most half its length.
pub fn pieces(from: Px, direction: Px, long: f64, head: f64) -> Vec<[Px; 2]> {
    let tip = along(from, direction, long);
    let (s, c) = float::sin_cos(HEAD_DEG.to_radians());
    let head = head.min(0.5 * long);
    let side = |s: f64| [-(direction[0] * c - direction[1] * s), -(direction[0] * s + direction[1] * c)];
    vec![[from, tip], [tip, along(tip, side(s), head)], [tip, along(tip, side(-s), head)]]
}

/// The unit of the speeds of a beat's arrows: that of its first one.
pub fn speed_unit(scene: &Scene<'_>) -> SpeedUnit {
    let first = scene.beat.marks.iter().filter_map(of_mark).find(|m| m.0 == Kind::Velocity);
    first.map_or(SpeedUnit::KilometresASecond, |(_, body, _)| scene.speed_unit(body))
}

/// The marks of a beat that are arrows of bodies of its cast.
pub fn any(scene: &Scene<'_>, kind: Kind) -> bool {
    scene
        .beat
        .marks
        .iter()
        .any(|m| of_mark(m).is_some_and(|a| a.0 == kind) && body_of(m).is_some_and(|b| scene.on_stage(b)))
}
