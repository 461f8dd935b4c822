//! The tail of a comet: five engraved lines straight away from the star.

use super::super::geometry::{Px, along, length};
use super::super::list::{Shape, Tag};
use super::super::look;
use super::super::scene::{Scene, Spot, stroke};
use crate::math::float;
use crate::scenario::{BodyId, Kind};

/// Lines of a tail: turn from the middle one, degrees; where it starts and ends, in parts of the tail's length.
const LINES: [(f64, f64, f64); 5] =
    [(-9.0, 0.08, 0.46), (-4.5, 0.05, 0.86), (0.0, 0.04, 1.0), (4.5, 0.05, 0.84), (9.0, 0.08, 0.44)];
/// Length at 1 au from the star, part of the picture's height.
const LENGTH: f64 = 0.13;
const AU_M: f64 = 149_597_870_700.0;

/// Draws the tails of all comets on stage.
pub fn draw(scene: &mut Scene<'_>, spots: &[Spot]) {
    for (body, segments) in pieces(scene, spots) {
        let stroke = stroke(scene.frame.line(look::HATCH), look::INK);
        if segments.iter().flatten().any(|p| scene.keep().holds(*p)) {
            scene.add(Tag::Tail(body), Shape::Segments { segments: segments.to_vec(), stroke });
        }
    }
}

/// The lines of all tails, away from the star with the greatest GM. They shorten as the star's warmth does, with the
/// distance, between a third and 1.2 of their length at 1 au; seen from the end they are short.
pub fn pieces(scene: &Scene<'_>, spots: &[Spot]) -> Vec<(BodyId, [[Px; 2]; 5])> {
    let Some(star) = brightest(scene) else {
        return Vec::new();
    };
    let is_comet = |id: BodyId| scene.show.scenario.bodies.get(id.0).is_some_and(|b| b.kind == Kind::Comet);
    let of = |spot: &Spot| {
        let away = scene.position(spot.body) - scene.position(star);
        let distance = away.norm();
        if distance <= 0.0 {
            return None;
        }
        let unit = scene.camera.turn(away / distance).map(|v| v / scene.camera.px_per_m);
        let long = long(scene, distance);
        let segments = LINES.map(|(turn_deg, from, to)| {
            let (s, c) = float::sin_cos(turn_deg.to_radians());
            let d = [unit[0] * c - unit[1] * s, unit[0] * s + unit[1] * c];
            let start: Px = along(spot.at, d, spot.radius * 1.15 + from * long);
            [start, along(spot.at, d, spot.radius * 1.15 + to * long)]
        });
        (length(unit) > 0.05).then_some((spot.body, segments))
    };
    spots.iter().filter(|s| is_comet(s.body)).filter_map(of).collect()
}

/// Length of a tail at a distance from the star, px.
fn long(scene: &Scene<'_>, distance_m: f64) -> f64 {
    scene.frame.part(LENGTH) * (AU_M / distance_m).sqrt().clamp(0.33, 1.2)
}

/// How far the tail of a body reaches at most now, in whichever direction it is seen, px; `None`: it has none.
pub fn longest(scene: &Scene<'_>, body: BodyId) -> Option<f64> {
    let comet = scene.show.scenario.bodies.get(body.0).is_some_and(|b| b.kind == Kind::Comet);
    let star = brightest(scene).filter(|_| comet)?;
    let distance_m = (scene.position(body) - scene.position(star)).norm();
    (distance_m > 0.0).then(|| long(scene, distance_m))
}

fn brightest(scene: &Scene<'_>) -> Option<BodyId> {
    let stars = scene.show.scenario.bodies.iter().enumerate().filter(|(_, b)| b.kind == Kind::Star);
    stars.map(|(i, _)| BodyId(i)).max_by(|&a, &b| {
        let gm = |body| scene.show.ephemeris.gm_m3_s2(body, scene.t_s);
        gm(a).total_cmp(&gm(b)).then(b.cmp(&a))
    })
}
