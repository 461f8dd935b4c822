//! The forward path: the way a body will go, dotted, relative to the view's centre.

use super::super::list::Tag;
use super::super::look;
use super::super::scene::{Scene, Spot, points};
use super::conic::Osculating;
use super::line::{add_dots, line_length, unhidden};
use crate::scenario::BodyId;
use crate::units::Span;

/// Draws the path ahead of a body.
///
/// Its dots stand still: they are counted along the path from where the beat started, so the body runs over them.
pub fn draw(scene: &mut Scene<'_>, body: BodyId, ahead: Option<Span>, solids: &[Spot]) {
    let about = scene.beat.view.centre.about;
    if about == Some(body) {
        return;
    }
    let ahead_s = ahead.map_or_else(|| span_ahead_s(scene, body), |span| span.s().abs());
    if ahead_s.is_nan() || ahead_s <= 0.0 {
        return;
    }
    let until_s = scene.t_s + ahead_s;
    let keep = scene.keep();
    let curve = scene.curve(body, about);
    // The count starts anew once a stretch, or it would take ever longer.
    let rounds = ((scene.t_s - scene.beat_from_s) / ahead_s).floor().max(0.0);
    let anchor_s = scene.beat_from_s + rounds * ahead_s;
    let gone = if anchor_s < scene.t_s {
        line_length(&points(&curve.trace(&scene.camera, &keep, anchor_s, scene.t_s)))
    } else {
        0.0
    };
    let samples = curve.trace(&scene.camera, &keep, scene.t_s, until_s);
    for part in unhidden(&samples, solids) {
        let skipped = line_length(&points(
            &samples.iter().take_while(|s| s.t_s < part[0].t_s).copied().collect::<Vec<_>>(),
        ));
        let width = scene.frame.line(look::MARK);
        add_dots(scene, Tag::Line(body), &points(&part), width, look::INK_3, -(gone + skipped));
    }
}

/// One period around the primary; to the end of the beat where there is none.
fn span_ahead_s(scene: &Scene<'_>, body: BodyId) -> f64 {
    let period = Osculating::of(scene, body, None).and_then(|o| o.period_s());
    period.unwrap_or(scene.until_s - scene.t_s)
}
