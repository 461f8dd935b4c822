//! Bodies: discs, and what is so large that it is ground to stand on.

use super::super::geometry::{Px, Rect, along, between, clip_area, length, unit};
use super::super::list::{Colour, Shape, Tag};
use super::super::scene::{Scene, Spot, stroke, visible_parts};
use super::super::{Stroke, look};
use crate::math::float;

/// Radius from which a body starts to turn from a bright disc into a dark solid, and at which it is one; parts of the
/// picture's height. A bright disc of that size would light the room.
const SOLID_FROM: f64 = 1.0 / 45.0;
const SOLID_AT: f64 = 1.0 / 18.0;

/// Whether a body is large enough to hide lines behind it.
pub fn is_solid(spot: &Spot, part: f64) -> bool {
    spot.true_radius > part * SOLID_FROM && spot.true_radius >= spot.radius
}

/// How far a body of that radius has turned into a solid, 0 to 1.
fn solidity(radius: f64, part: f64) -> f64 {
    let share = ((radius / part - SOLID_FROM) / (SOLID_AT - SOLID_FROM)).clamp(0.0, 1.0);
    share * share * (3.0 - 2.0 * share)
}

/// Draws discs, the farthest first. Those whose middle a solid hides stay unseen.
pub fn draw(scene: &mut Scene<'_>, spots: &[Spot]) {
    let mut order: Vec<Spot> = spots.to_vec();
    order.sort_by(|a, b| a.depth.total_cmp(&b.depth).then(b.body.cmp(&a.body)));
    for spot in &order {
        draw_one(scene, spot);
    }
}

/// Whether a solid stands in front of a spot's middle.
pub fn hidden(spot: &Spot, solids: &[Spot]) -> bool {
    solids.iter().any(|s| {
        s.body != spot.body
            && spot.depth < s.depth
            && length(between(s.at, spot.at)) < s.true_radius - 0.5 * spot.radius
    })
}

fn draw_one(scene: &mut Scene<'_>, spot: &Spot) {
    let Some(body) = scene.show.scenario.bodies.get(spot.body.0) else {
        return;
    };
    let own = look::body(body.colour);
    let tag = Tag::Body(spot.body);
    let solid = solidity(spot.true_radius, scene.frame.part(1.0));
    let fill = look::mix(own, look::SOLID, solid);
    if scene.keep().gap_to_disc(spot.at, spot.radius) > scene.frame.part(look::DISC_EDGE) {
        return;
    }
    if solid <= 0.0 {
        let edge = scene.frame.line(look::DISC_EDGE);
        let rim = Some(Stroke { width: edge, colour: look::GROUND, dash: None, round: false });
        scene.add(tag, Shape::Disc { at: spot.at, radius: spot.radius + 0.5 * edge, fill: Some(fill), rim });
        return;
    }
    let rim = stroke(scene.frame.line(look::MARK), look::mix(own, look::INK_3, 0.7 * solid));
    if spot.radius < 3.0 * scene.frame.width.max(scene.frame.height) {
        scene.add(tag, Shape::Disc { at: spot.at, radius: spot.radius, fill: Some(fill), rim: Some(rim) });
    } else {
        draw_limb(scene, tag, spot, fill, &rim);
    }
}

/// A disc many times larger than the picture, as the part of it that is seen: painters work in single precision.
fn draw_limb(scene: &mut Scene<'_>, tag: Tag, spot: &Spot, fill: Colour, rim: &Stroke) {
    let keep = scene.keep();
    let (outline, limb) = limb(spot.at, spot.radius, &keep);
    if outline.len() > 2 {
        scene.add(tag, Shape::Area { points: outline, fill });
    }
    for points in visible_parts(&limb, &keep) {
        scene.add(tag, Shape::Line { points, closed: false, stroke: rim.clone() });
    }
}

/// The part of a huge disc inside a rectangle: its area, and its limb.
fn limb(centre: Px, radius: f64, keep: &Rect) -> (Vec<Px>, Vec<Px>) {
    let middle = keep.middle();
    let across = length([keep.width(), keep.height()]);
    let inside = radius - length(between(centre, middle)) > across;
    let Some(out) = unit(between(centre, middle)).filter(|_| !inside) else {
        return (corners(keep), Vec::new());
    };
    let half = (across / radius).min(0.5);
    // 0.2 px between arc and line.
    let step = (1.6 / radius).sqrt();
    let count = (half / step).ceil().max(2.0);
    let mut arc = Vec::new();
    let mut i = -count;
    while i <= count {
        let (s, c) = float::sin_cos(half * i / count);
        let d = [out[0] * c - out[1] * s, out[0] * s + out[1] * c];
        arc.push(along(centre, d, radius));
        i += 1.0;
    }
    let mut area = arc.clone();
    for end in [arc.last().copied(), arc.first().copied()].into_iter().flatten() {
        area.push(along(end, out, -2.0 * across - radius * half * half));
    }
    (clip_area(&area, keep), arc)
}

fn corners(r: &Rect) -> Vec<Px> {
    vec![[r.left, r.top], [r.right, r.top], [r.right, r.bottom], [r.left, r.bottom]]
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_huge_disc_is_cut_exactly() {
        let keep = Rect { left: 0.0, top: 0.0, right: 1920.0, bottom: 1080.0 };
        // A horizon across the middle of the picture.
        let radius = 4.0e7;
        let (area, line) = limb([960.0, 540.0 + radius], radius, &keep);
        let worst = line
            .iter()
            .map(|p| (length([p[0] - 960.0, p[1] - 540.0 - radius]) - radius).abs())
            .fold(0.0, f64::max);
        assert!(worst < 1e-6, "{worst}");
        let mut doubled = 0.0;
        for (i, p) in area.iter().enumerate() {
            let q = area[(i + 1) % area.len()];
            doubled += p[0] * q[1] - q[0] * p[1];
        }
        assert!((doubled.abs() / 2.0 / (1920.0 * 540.0) - 1.0).abs() < 1e-3, "{}", doubled / 2.0);
    }
}
