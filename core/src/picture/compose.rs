//! The composer: from a show and a moment of its clock to a display list.

use super::caption::Caption;
use super::frame::Frame;
use super::layout::{Layout, LayoutKey, scene_at};
use super::list::{Anchor, DisplayList, Item, Shape, Tag};
use super::marks::area::AreaLabel;
use super::marks::arrow::{self, Kind};
use super::marks::foot::Foot;
use super::marks::sector::{self, Sectors};
use super::marks::swarm::Tracers;
use super::marks::{self, apsides, body, conic, foot, path, tail, trail};
use super::scene::{House, Scene, Spot, Words, stroke};
use super::scouts::Scouts;
use super::words::Language;
use super::{Options, Screen, labels, look, passage};
use crate::scenario::Mark;
use crate::show::{Moment, Show};

/// Makes pictures of one show for one window. What is decided once for a beat is kept; in effect a picture
/// follows from show, window, options and moment alone.
#[derive(Debug)]
pub struct Composer {
    house: House,
    options: Options,
    layouts: Vec<Layout>,
    tracers: Tracers,
    scouts: Scouts,
}

/// Layouts kept: the beat on show, the one to come, and those whose captions are on their way out.
const LAYOUTS_KEPT: usize = 6;

impl Composer {
    /// For a show that is ready (or still being integrated: what isn't covered yet stands at its start).
    pub fn new(show: &Show, screen: Screen, options: Options) -> Self {
        let house = house(show, screen, &options);
        Self { house, options, layouts: Vec::new(), tracers: Tracers::new(show), scouts: Scouts::new(show) }
    }

    /// For another window or other options of the same show; what this one has worked out of swarms goes along.
    pub fn for_other(&self, show: &Show, screen: Screen, options: Options) -> Self {
        let (tracers, scouts) = (self.tracers.clone(), self.scouts.clone());
        Self { house: house(show, screen, &options), options, layouts: Vec::new(), tracers, scouts }
    }

    /// The same without the points of swarms, for whom they don't matter.
    #[must_use]
    pub fn without_swarms(mut self) -> Self {
        self.tracers.leave();
        self
    }

    /// Lets a picture take about so many steps of tracers, of all swarms together. Those of a swarm that are not where they should
    /// be by then are not drawn in that picture. Without this, all are always drawn.
    pub const fn work_at_most(&mut self, tracer_steps: usize) {
        self.tracers.work_at_most(tracer_steps);
    }

    /// Brings the swarms that are seen at a moment to it ahead of its picture, by about so many steps of tracers. True once all are there.
    pub fn arrive(&mut self, show: &Show, moment: &Moment, tracer_steps: usize) -> bool {
        let beat = show.scenario.beats.get(moment.beat);
        beat.is_none_or(|beat| self.tracers.arrive(show, beat, moment.model_s, tracer_steps))
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
                let layout = Layout::new(show, beat, key, self.house, &self.options, &self.scouts);
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
        let frame = self.house.frame;
        let calm = self.options.reduced_motion;
        let (shown, fade) = if calm { passage::cross_fade(show, moment) } else { (usize::MAX, 0.0) };
        let shown = moment.lately.as_slice().get(shown).map_or(LayoutKey::of(moment), LayoutKey::left);
        let mut items = if moment.model_s.is_finite() { self.items(show, moment, shown) } else { Vec::new() };
        items.retain(|item| is_finite(&item.shape));
        let veil = if moment.veil.is_finite() { moment.veil.clamp(0.0, 1.0) } else { 0.0 };
        let veil = 1.0 - (1.0 - veil) * (1.0 - fade);
        if veil > 0.0 {
            let (w, h) = (frame.width, frame.height);
            let points = vec![[0.0, 0.0], [w, 0.0], [w, h], [0.0, h]];
            let fill = look::fade(look::GROUND, veil);
            items.push(Item { tag: Tag::Veil, shape: Shape::Area { points, fill } });
        }
        DisplayList { width: frame.width, height: frame.height, ground: look::GROUND, items }
    }

    fn items(&mut self, show: &Show, moment: &Moment, shown: LayoutKey) -> Vec<Item> {
        let house = self.house;
        let frame = house.frame;
        let captions = if frame.has_text { self.captions(show, moment, shown) } else { Vec::new() };
        let moves = !self.options.reduced_motion;
        let Some(beat) = show.scenario.beats.get(shown.beat) else {
            return Vec::new();
        };
        let Some(layout) = self.layout(show, shown) else {
            return Vec::new();
        };
        let mut scene = scene_at(show, beat, shown, house, moment.model_s);
        if let Some(camera) = passage::camera(show, moment, &frame).filter(|_| moves) {
            scene.camera = camera;
        }
        let spots = draw_marks(&mut scene, &layout.foot);
        let words_from = scene.items.len();
        if frame.has_text {
            let areas = layout.area_labels(&scene);
            draw_areas(&mut scene, &areas);
            let blocks = layout.blocks(&scene, &spots);
            let obstacles = layout.obstacles(&scene, &spots, &areas);
            let (earlier, later, share) = layout.standings(show, beat, house, moment.model_s);
            let placed = labels::place(&blocks, earlier, later, share, &obstacles, &frame);
            labels::draw(&mut scene, &placed);
            for (caption, opacity) in captions {
                caption.draw(&mut scene, opacity);
            }
            foot::draw(&mut scene, &layout.foot, moment.pace, moment.held);
        }
        self.tracers.draw(&mut scene, &spots, words_from);
        scene.items
    }

    /// The captions to be seen, with their opacities: those of the beats left lately on their way out, then the one
    /// of the beat shown.
    fn captions(&mut self, show: &Show, moment: &Moment, shown: LayoutKey) -> Vec<(Caption, f64)> {
        let mut wanted: Vec<(LayoutKey, f64)> = Vec::new();
        if shown == LayoutKey::of(moment) {
            let view_of = |beat: usize| show.scenario.beats.get(beat).map(|b| b.view);
            // A cross-fade takes the old words along with their view.
            let stays = |beat: usize| !self.options.reduced_motion || view_of(beat) == view_of(shown.beat);
            let left = moment.lately.as_slice();
            let mut lasted_s = f64::INFINITY;
            for (i, beat) in left.iter().enumerate() {
                if stays(beat.beat) {
                    wanted
                        .push((LayoutKey::left(beat), entered(lasted_s) * (1.0 - beat.since_s / FADE_OUT_S)));
                }
                lasted_s = beat.since_s - left.get(i + 1).map_or(0.0, |l| l.since_s);
            }
            let since_s = if moment.before.is_some() { moment.since_cut_s } else { f64::INFINITY };
            wanted.push((shown, entered(since_s)));
        } else {
            wanted.push((shown, 1.0));
        }
        let seen = wanted.into_iter().filter(|w| w.1 > 0.0);
        seen.filter_map(|(key, opacity)| Some((self.layout(show, key)?.caption.clone()?, opacity))).collect()
    }
}

fn house(show: &Show, screen: Screen, options: &Options) -> House {
    let own = options.language.is_empty();
    let language = Language::of(if own { &show.scenario.language } else { &options.language });
    House { frame: Frame::new(screen), language }
}

/// Show time in which the words of the beat before go, seconds.
const FADE_OUT_S: f64 = 0.3;

/// How far a caption has come in, that long after its beat was entered: words come in once the old ones are gone.
fn entered(since_s: f64) -> f64 {
    look::ease((since_s - FADE_OUT_S) / look::CALM_S)
}

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
        Shape::Line { points, .. } | Shape::Area { points, .. } | Shape::Points { points, .. } => all(points),
        Shape::Segments { segments, .. } => segments.iter().all(|s| all(s)),
        Shape::Disc { at, radius, .. } => all(&[*at]) && radius.is_finite(),
        Shape::Text { at, size, .. } => all(&[*at]) && size.is_finite(),
    }
}

#[cfg(test)]
#[path = "compose_tests.rs"]
mod tests;

#[cfg(test)]
#[path = "swarm_tests.rs"]
mod swarm_tests;
