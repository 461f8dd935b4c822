//! From the beats left lately to the one on show: the view on its way, or the cross-fade that stands for it.

use super::frame::Frame;
use super::look;
use super::view::Camera;
use crate::scenario::View;
use crate::show::{Moment, Show};

/// The view of each beat left lately, and of the one on show, with the show time since it was left (that one: 0).
fn views(show: &Show, moment: &Moment) -> Vec<(View, f64)> {
    let left = moment.lately.as_slice().iter().map(|l| (l.beat, l.since_s));
    let all = left.chain([(moment.beat, 0.0)]);
    all.filter_map(|(beat, since_s)| Some((show.scenario.beats.get(beat)?.view, since_s))).collect()
}

/// The camera while the picture moves; `None` while its view rests.
pub fn camera(show: &Show, moment: &Moment, frame: &Frame) -> Option<Camera> {
    let views = views(show, moment);
    let moves: Vec<(View, f64)> = views.windows(2).map(|w| (w[1].0, w[0].1 / look::SCENE_S)).collect();
    let (first, _) = views.first()?;
    let moving = moves.iter().any(|m| m.0 != *first && m.1 < 1.0);
    moving.then(|| Camera::moving(show, first, &moves, moment.model_s, frame))
}

/// Where nothing should move: how many beats left lately have been faded from already (the next one is in the
/// picture; all of them: the beat on show), and the veil over it.
pub fn cross_fade(show: &Show, moment: &Moment) -> (usize, f64) {
    let half_s = 0.5 * look::CROSS_FADE_S;
    let views = views(show, moment);
    let (mut shown, mut veil) = (0, 0.0);
    for (goal, w) in views.windows(2).enumerate().map(|(i, w)| (i + 1, w)) {
        let rising_s = (1.0 - veil) * half_s;
        let lasts_s = w[0].1 - w[1].1;
        if views[shown].0 == views[goal].0 {
            shown = goal;
            veil -= lasts_s / half_s;
        } else if lasts_s < rising_s {
            veil += lasts_s / half_s;
        } else {
            shown = goal;
            veil = 1.0 - (lasts_s - rising_s) / half_s;
        }
        veil = f64::clamp(veil, 0.0, 1.0);
    }
    (shown, veil)
}

#[cfg(test)]
#[path = "passage_tests.rs"]
mod tests;
