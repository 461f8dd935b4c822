//! The trail: the way a body came, relative to the view's centre.

use super::super::geometry::Px;
use super::super::list::{Shape, Tag};
use super::super::sample::{MOST_POINTS, Sample};
use super::super::scene::{Scene, Spot, points, visible_parts};
use super::super::{Stroke, look};
use super::line::unhidden;
use crate::scenario::BodyId;
use crate::units::Span;

/// In how many steps of opacity a trail fades.
const FADES: usize = 12;

/// Draws the trail of a body. One without a stated length runs from where the model has run on without a cut and
/// stays; one with a length fades to its end.
pub fn draw(scene: &mut Scene<'_>, body: BodyId, lasts: Option<Span>, solids: &[Spot]) {
    let about = scene.beat.view.centre.about;
    if about == Some(body) {
        return;
    }
    let from_s = match lasts {
        Some(span) => scene.t_s - span.s().abs(),
        None => scene.run_from_s.min(scene.t_s),
    };
    let samples = scene.curve(body, about).trace(&scene.camera, &scene.keep(), scene.t_s, from_s);
    let Some(listed) = scene.show.scenario.bodies.get(body.0) else {
        return;
    };
    let colour = look::body(listed.colour);
    let width = scene.frame.line(look::TRAIL);
    let cut_short = samples.len() >= MOST_POINTS;
    let oldest_s = samples.last().map_or(from_s, |s| s.t_s);
    for part in unhidden(&samples, solids) {
        if lasts.is_none() && !cut_short {
            let stroke = Stroke { width, colour, dash: None, round: true };
            scene.add_line(Tag::Line(body), &points(&part), &stroke);
        } else {
            draw_fading(scene, body, &part, [scene.t_s, oldest_s], width, colour);
        }
    }
}

/// The newer half keeps its full colour, the older half fades to nothing.
fn draw_fading(
    scene: &mut Scene<'_>,
    body: BodyId,
    part: &[Sample],
    [now_s, oldest_s]: [f64; 2],
    width: f64,
    colour: super::super::Colour,
) {
    let total = (now_s - oldest_s).abs();
    let keep = scene.keep();
    let step_of = |s: &Sample| {
        let age = if total > 0.0 { ((now_s - s.t_s).abs() / total).clamp(0.0, 1.0) } else { 0.0 };
        (0..FADES).rev().find(|&i| age >= fade_start(i)).unwrap_or(0)
    };
    let mut run: Vec<Px> = Vec::new();
    let mut step = part.first().map_or(0, step_of);
    let mut finished: Vec<(usize, Vec<Px>)> = Vec::new();
    for s in part {
        run.push(s.at);
        let next = step_of(s);
        if next != step {
            finished.push((step, core::mem::replace(&mut run, vec![s.at])));
            step = next;
        }
    }
    finished.push((step, run));
    for (step, run) in finished {
        let share = f64::from(u8::try_from(step).unwrap_or(0)) / f64::from(u8::try_from(FADES).unwrap_or(1));
        let stroke = Stroke { width, colour: look::fade(colour, 1.0 - share), dash: None, round: false };
        for points in visible_parts(&run, &keep) {
            scene.add(Tag::Line(body), Shape::Line { points, closed: false, stroke: stroke.clone() });
        }
    }
}

/// Age, as a share of the trail's length in time, at which a step of opacity starts.
fn fade_start(step: usize) -> f64 {
    if step == 0 {
        return 0.0;
    }
    let share = f64::from(u8::try_from(step).unwrap_or(0)) / f64::from(u8::try_from(FADES).unwrap_or(1));
    0.4 + 0.6 * share
}
