//! The composer: from a show and a moment of its clock to a display list.

use super::frame::Frame;
use super::layout::{Layout, LayoutKey, scene_at};
use super::list::{Anchor, DisplayList, Item, Shape, Tag};
use super::marks::arrow::{self, Kind};
use super::marks::foot::Foot;
use super::marks::sector::{self, AreaLabel, Sectors};
use super::marks::{self, apsides, body, conic, foot, path, tail, trail};
use super::scene::{Scene, Spot, Words, stroke};
use super::view::Camera;
use super::{Options, Screen, labels, look};
use crate::scenario::Mark;
use crate::show::{Moment, Show};

/// Makes pictures of one show for one window. What is decided once for a beat is kept; in effect a picture
/// follows from show, window, options and moment alone.
#[derive(Debug)]
pub struct Composer {
    frame: Frame,
    options: Options,
    layouts: Vec<Layout>,
}

/// Layouts kept: the beat on show, the one before, the one to come, and one more.
const LAYOUTS_KEPT: usize = 4;

impl Composer {
    /// For a show that is ready (or still being integrated: what isn't covered yet stands at its start).
    pub fn new(_show: &Show, screen: Screen, options: Options) -> Self {
        Self { frame: Frame::new(screen), options, layouts: Vec::new() }
    }

    /// Decides what a beat entered so will need, so that its first frame costs no more than the others.
    pub fn prepare(&mut self, show: &Show, moment: &Moment) {
        self.layout(show, LayoutKey::of(moment));
    }

    fn layout(&mut self, show: &Show, key: LayoutKey) -> Option<&mut Layout> {
        let found = self.layouts.iter().position(|l| l.is_of(key));
        let index = match found {
            Some(index) => index,
            None => {
                let beat = show.scenario.beats.get(key.beat)?;
                let layout = Layout::new(show, beat, key, self.frame, &self.options);
                if self.layouts.len() >= LAYOUTS_KEPT {
                    self.layouts.remove(0);
                }
                self.layouts.push(layout);
                self.layouts.len() - 1
            }
        };
        self.layouts.get_mut(index)
    }

    /// The picture at a moment. Never empty of its ground; holds finite numbers only.
    pub fn compose(&mut self, show: &Show, moment: &Moment) -> DisplayList {
        let frame = self.frame;
        let mut items = match show.scenario.beats.get(moment.beat) {
            Some(_) if moment.model_s.is_finite() => self.items(show, moment),
            _ => Vec::new(),
        };
        items.retain(|item| is_finite(&item.shape));
        let veil = if moment.veil.is_finite() { moment.veil.clamp(0.0, 1.0) } else { 0.0 };
        if veil > 0.0 {
            let (w, h) = (frame.width, frame.height);
            let points = vec![[0.0, 0.0], [w, 0.0], [w, h], [0.0, h]];
            let fill = look::fade(look::GROUND, veil);
            items.push(Item { tag: Tag::Veil, shape: Shape::Area { points, fill } });
        }
        DisplayList { width: frame.width, height: frame.height, ground: look::GROUND, items }
    }

    fn items(&mut self, show: &Show, moment: &Moment) -> Vec<Item> {
        let (frame, key) = (self.frame, LayoutKey::of(moment));
        let calm = !self.options.reduced_motion;
        let leaving = self.leaving_caption(moment);
        let Some(beat) = show.scenario.beats.get(moment.beat) else {
            return Vec::new();
        };
        let Some(layout) = self.layout(show, key) else {
            return Vec::new();
        };
        let mut scene = scene_at(show, beat, key, frame, moment.model_s);
        let from = moment.before.and_then(|b| show.scenario.beats.get(b)).map(|b| b.view);
        let share = moment.since_cut_s / look::SCENE_S;
        if let Some(from) = from.filter(|f| calm && share < 1.0 && *f != beat.view) {
            scene.camera = Camera::moving(show, &from, &beat.view, share, moment.model_s, &frame);
        }
        let spots = draw_marks(&mut scene, &layout.foot);
        if frame.has_text {
            let areas = layout.area_labels(&scene);
            draw_areas(&mut scene, &areas);
            let blocks = layout.blocks(&scene, &spots);
            let obstacles = layout.obstacles(&scene, &spots, &areas);
            let (earlier, later, share) = layout.standings(show, beat, frame, moment.model_s);
            let placed = labels::place(&blocks, earlier, later, share, &obstacles, &frame);
            labels::draw(&mut scene, &placed);
            // Words come in once the old ones are gone.
            let entered = match moment.before {
                Some(_) => look::ease((moment.since_cut_s - FADE_OUT_S) / look::CALM_S),
                None => 1.0,
            };
            if let Some((caption, opacity)) = leaving {
                caption.draw(&mut scene, opacity);
            }
            if let Some(caption) = layout.caption.as_ref().filter(|_| entered > 0.0) {
                caption.draw(&mut scene, entered);
            }
            foot::draw(&mut scene, &layout.foot, moment.pace, moment.held);
        }
        scene.items
    }

    /// The caption of the beat that was left, on its way out.
    fn leaving_caption(&self, moment: &Moment) -> Option<(super::caption::Caption, f64)> {
        let before = moment.before.filter(|_| moment.since_cut_s < FADE_OUT_S)?;
        let layout = self.layouts.iter().rev().find(|l| l.beat() == before)?;
        Some((layout.caption.clone()?, 1.0 - moment.since_cut_s / FADE_OUT_S))
    }
}

/// Show time in which the words of the beat before go, seconds.
const FADE_OUT_S: f64 = 0.3;

/// Draws bodies and marks, everything but words; returns the discs.
pub fn draw_marks(scene: &mut Scene<'_>, foot: &Foot) -> Vec<Spot> {
    let spots = scene.spots();
    let part = scene.frame.part(1.0);
    let (solids, discs): (Vec<Spot>, Vec<Spot>) = spots.iter().partition(|s| body::is_solid(s, part));
    let marks = marks::on_stage(scene);
    body::draw(scene, &solids);
    for sectors in marks.iter().filter_map(|m| Sectors::of(scene, m)).collect::<Vec<_>>() {
        sector::draw(scene, &sectors);
    }
    for mark in &marks {
        match *mark {
            Mark::Conic { body, about } => conic::draw(scene, body, about),
            Mark::Path { body, ahead } => path::draw(scene, body, ahead, &solids),
            _ => {}
        }
    }
    for mark in &marks {
        match *mark {
            Mark::Trail { body, lasts } => trail::draw(scene, body, lasts, &solids),
            Mark::Apsides { body, about } => apsides::draw(scene, body, about),
            Mark::Foci { body, about } => conic::draw_foci(scene, body, about),
            _ => {}
        }
    }
    let seen: Vec<Spot> = discs.into_iter().filter(|s| !body::hidden(s, &solids)).collect();
    tail::draw(scene, &seen);
    body::draw(scene, &seen);
    let scales = foot.largest.map(|largest| arrow::scale(scene, largest));
    for mark in &marks {
        match arrow::of_mark(mark) {
            Some((Kind::Velocity, ..)) => arrow::draw(scene, &seen, mark, scales[0]),
            Some((Kind::Gravity, ..)) => arrow::draw(scene, &seen, mark, scales[1]),
            None => {}
        }
    }
    spots
}

fn draw_areas(scene: &mut Scene<'_>, labels: &[AreaLabel]) {
    let size = scene.frame.label;
    for label in labels.iter().filter(|l| l.opacity > 0.0) {
        let colour = look::fade(look::LAMP, label.opacity);
        if let Some(leader) = label.leader {
            let stroke = stroke(scene.frame.line(look::THIN), look::fade(look::LAMP_2, label.opacity));
            let segments = vec![leader];
            scene.add(Tag::Sector(label.body, label.index), Shape::Segments { segments, stroke });
        }
        let words = Words { text: &label.text, size, weight: 600, colour };
        let middle = label.rect.middle();
        let at = [middle[0], middle[1] + 0.5 * super::type_metrics::CAP_HEIGHT * size];
        scene.add_text(Tag::Sector(label.body, label.index), at, Anchor::Middle, &words);
    }
}

fn is_finite(shape: &Shape) -> bool {
    let all = |points: &[[f64; 2]]| points.iter().flatten().all(|v| v.is_finite());
    match shape {
        Shape::Line { points, .. } | Shape::Area { points, .. } => all(points),
        Shape::Segments { segments, .. } => segments.iter().all(|s| all(s)),
        Shape::Disc { at, radius, .. } => all(&[*at]) && radius.is_finite(),
        Shape::Text { at, size, .. } => all(&[*at]) && size.is_finite(),
    }
}

#[cfg(test)]
#[path = "compose_tests.rs"]
mod tests;
