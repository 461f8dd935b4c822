//! Apsides: bars across the path where a body comes nearest and goes farthest, with the distances.

use super::super::geometry::{Px, along, between, unit};
use super::super::list::{Shape, Tag};
use super::super::look;
use super::super::scene::{Scene, stroke};
use super::super::wording::LengthUnit;
use super::super::words::fill;
use super::conic::Osculating;
use crate::scenario::BodyId;

/// An apsis in the picture.
#[derive(Debug, Clone, PartialEq)]
pub struct Apsis {
    /// Whose.
    pub body: BodyId,
    /// Where, px.
    pub at: Px,
    /// What stands beside it: "closest 0.42 au".
    pub words: String,
}

/// The apsides of a body's conic: nearest, then farthest. A circle has none that could be told apart.
pub fn of(scene: &Scene<'_>, body: BodyId, about: Option<BodyId>, in_au: bool) -> Vec<Apsis> {
    let Some(conic) = Osculating::of(scene, body, about) else {
        return Vec::new();
    };
    let largest = conic.apoapsis_m().unwrap_or_else(|| conic.periapsis_m());
    let l = scene.language;
    let lengths = [(l.closest, 1.0, Some(conic.periapsis_m())), (l.farthest, -1.0, conic.apoapsis_m())];
    lengths
        .into_iter()
        .filter_map(|(phrase, side, distance)| {
            let distance = distance?;
            let at = scene.camera.project(conic.focus + conic.toward_periapsis * (side * distance));
            let unit = LengthUnit::upto(largest, in_au);
            let words = fill(phrase, &unit.say(l, distance, distance));
            at.iter().all(|v| v.is_finite()).then_some(Apsis { body, at, words })
        })
        .collect()
}

/// Draws the line of apsides and its bars.
pub fn draw(scene: &mut Scene<'_>, body: BodyId, about: Option<BodyId>) {
    let Some(conic) = Osculating::of(scene, body, about) else {
        return;
    };
    let found = of(scene, body, about, false);
    let focus = scene.camera.project(conic.focus);
    let half = scene.frame.part(1.0 / 70.0);
    let thin = stroke(scene.frame.line(look::THIN), look::RULE);
    let bar = stroke(scene.frame.line(look::STRONG), look::INK);
    for apsis in &found {
        scene.add_line(Tag::Line(body), &[focus, apsis.at], &thin);
        if let Some(out) = unit(between(focus, apsis.at)) {
            let segments = vec![[along(apsis.at, out, -half), along(apsis.at, out, half)]];
            if scene.keep().holds(apsis.at) {
                scene.add(Tag::Line(body), Shape::Segments { segments, stroke: bar.clone() });
            }
        }
    }
}
