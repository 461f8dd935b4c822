//! What is decided once for a beat: its caption's place, its units and scales, and, step by step, its labels' places.

use super::caption::{self, Caption};
use super::emptiness::Emptiness;
use super::frame::Frame;
use super::geometry::{Px, Rect, along, between, length};
use super::labels::{self, Block, Key, Line, Obstacles, Standing};
use super::list::{Shape, Tag};
use super::marks::area::{self, AreaLabel, Areas};
use super::marks::arrow::{self, Kind};
use super::marks::foot::Foot;
use super::marks::readout::{self, Reading};
use super::marks::{apsides, body, foot, swarm, tail};
use super::scene::{House, Scene, Spot};
use super::scouts::Scouts;
use super::view::Camera;
use super::wording::Grain;
use super::{Options, compose, look};
use crate::math::counts::number_from;
use crate::scenario::{Beat, BodyId, Mark, Readout};
use crate::show::{Left, Moment, Show};

/// Instants at which a beat's bodies are looked at to find where it is empty.
const BODY_LOOKS: u32 = 120;
/// Instants at which all of its marks are.
const MARK_LOOKS: u32 = 4;
/// Every so many of them, tracers are too.
const SCOUTS_EVERY: u32 = 6;
/// The most steps in which labels are placed; later instants have the last one's places.
const MOST_STEPS: usize = 6000;
/// How many steps past the planned end, or past the last one decided, are decided at once.
const STEPS_PAST_PLAN: usize = 16;

/// The layout of one beat.
#[derive(Debug)]
pub struct Layout {
    key: LayoutKey,
    /// The caption, where there is one.
    pub caption: Option<Caption>,
    /// The foot line.
    pub foot: Foot,
    /// The numbers under names.
    pub readings: Vec<Reading>,
    areas: Vec<Areas>,
    /// Boxes of the foot line.
    pub foot_rects: Vec<Rect>,
    /// Model time from one step of the labels to the next; 0: nothing moves.
    step_s: f64,
    /// Model time of the first step.
    first_step_s: f64,
    planned_steps: f64,
    order: Vec<BodyId>,
    clutter: Vec<Px>,
    steps: Vec<Vec<Standing>>,
}

/// What a layout was made for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LayoutKey {
    /// The beat.
    pub beat: usize,
    /// Model time at which it was entered.
    pub beat_from_s: f64,
    /// Model time from which trails run.
    pub run_from_s: f64,
}

impl LayoutKey {
    /// Of a moment.
    pub const fn of(moment: &Moment) -> Self {
        Self { beat: moment.beat, beat_from_s: moment.beat_from_s, run_from_s: moment.run_from_s }
    }

    /// Of a beat that was left.
    pub const fn left(left: &Left) -> Self {
        Self { beat: left.beat, beat_from_s: left.beat_from_s, run_from_s: left.run_from_s }
    }
}

/// A scene of a beat at an instant, in its view at rest.
pub fn scene_at<'a>(show: &'a Show, beat: &'a Beat, key: LayoutKey, house: House, t_s: f64) -> Scene<'a> {
    let House { frame, language } = house;
    let planned = show.plan.beats.get(key.beat);
    let stretch = planned.map_or(0.0, |p| p.until_s - p.from_s);
    Scene {
        show,
        beat,
        frame,
        language,
        camera: Camera::of(show, &beat.view, t_s, &frame),
        t_s,
        run_from_s: key.run_from_s,
        beat_from_s: key.beat_from_s,
        // Later than planned where the beat was entered late; sectors of the beat before may have begun earlier.
        until_s: planned.map_or(key.beat_from_s, |p| p.until_s).max(key.beat_from_s + stretch.max(0.0)),
        pace: planned.map_or(0.0, |p| p.pace),
        items: Vec::new(),
    }
}

impl Layout {
    /// Decides what can be decided once.
    pub fn new(
        show: &Show,
        beat: &Beat,
        key: LayoutKey,
        house: House,
        options: &Options,
        scouts: &Scouts,
    ) -> Self {
        let frame = house.frame;
        let mut scene = scene_at(show, beat, key, house, key.beat_from_s);
        let (mut areas, area_words) =
            if frame.has_text { area::areas_of(&scene) } else { (Vec::new(), None) };
        let foot = foot_of(&scene, area_words);
        let readings = readout::of_beat(&scene);
        let pace = scene.pace;
        let foot_rects = if frame.has_text { foot::draw(&mut scene, &foot, pace, false) } else { Vec::new() };
        for set in &mut areas {
            set.settle(&scene, &foot_rects);
        }
        let mut layout = Self {
            key,
            caption: None,
            foot,
            readings,
            areas,
            foot_rects,
            step_s: scene.pace.abs() / labels::STEPS_A_SECOND,
            first_step_s: match show.plan.beats.get(key.beat) {
                Some(planned) if planned.keeps_sectors => planned.from_s.max(key.beat_from_s),
                _ => key.beat_from_s,
            },
            planned_steps: 0.0,
            order: order(show, beat),
            clutter: Vec::new(),
            steps: Vec::new(),
        };
        if layout.step_s > 0.0 {
            layout.planned_steps = (scene.until_s - layout.first_step_s) / layout.step_s;
        }
        if frame.has_text {
            let text = caption::text_of(beat, &options.language, &show.scenario.language);
            let empty = layout.look_round(show, beat, house, scouts);
            layout.caption = text.map(|text| Caption::in_emptiness(&empty, text, &frame));
        }
        layout
    }

    /// Whether it is the layout of that beat, entered so.
    pub fn is_of(&self, key: LayoutKey) -> bool {
        self.key == key
    }

    /// Looks at all that the beat will draw.
    fn look_round(&mut self, show: &Show, beat: &Beat, house: House, scouts: &Scouts) -> Emptiness {
        let frame = house.frame;
        let mut empty = Emptiness::new(&frame);
        let mut cursors = scouts.cursors();
        let first = scene_at(show, beat, self.key, house, self.key.beat_from_s);
        let stretch = first.until_s - first.beat_from_s;
        let at = |look: u32, of: u32| self.key.beat_from_s + stretch * f64::from(look) / f64::from(of);
        for look in 0..=(if stretch > 0.0 { BODY_LOOKS } else { 0 }) {
            let scene = scene_at(show, beat, self.key, house, at(look, BODY_LOOKS));
            let spots = scene.spots();
            if look % SCOUTS_EVERY == 0 {
                empty.mark_points(&scouts.points(&mut cursors, &scene));
            }
            // Arrows and tails, which turn quickly.
            for [a, b] in self.obstacles(&scene, &spots, &[]).pieces {
                empty.mark_piece(a, b, 2.0);
            }
            for block in self.blocks(&scene, &spots) {
                let [w, h] = block.size(&frame);
                let name = Rect {
                    left: block.at[0] - block.radius,
                    top: block.at[1] - block.radius.max(0.6 * frame.label),
                    right: block.at[0] + block.radius + 0.4 * frame.label + w,
                    bottom: block.at[1] + block.radius.max(h - 0.5 * frame.label),
                };
                if block.radius < 2.0 * frame.label {
                    empty.mark_rect(&name, 3.0);
                    // It should find room above or below, too.
                    let room = Rect { top: name.top - 0.5 * h, bottom: name.bottom + 0.5 * h, ..name };
                    empty.mark_rect(&room, 0.5);
                }
            }
        }
        let looks = if stretch > 0.0 { MARK_LOOKS } else { 0 };
        for look in 0..=looks {
            let mut scene = scene_at(show, beat, self.key, house, at(look, MARK_LOOKS));
            compose::draw_marks(&mut scene, &self.foot);
            if look == looks {
                for area in self.area_labels(&scene) {
                    empty.mark_rect(&area.rect, 8.0);
                }
            }
            if look == looks {
                self.clutter = clutter(&scene, &frame);
                self.clutter.extend(scouts.points(&mut cursors, &scene));
            }
            for item in &scene.items {
                empty.mark_item(item);
            }
        }
        for rect in &self.foot_rects {
            empty.mark_rect(rect, 8.0);
        }
        empty
    }

    /// The labels of a scene, the most important first.
    pub fn blocks(&self, scene: &Scene<'_>, spots: &[Spot]) -> Vec<Block> {
        let solids: Vec<Spot> =
            spots.iter().filter(|s| body::is_solid(s, scene.frame.part(1.0))).copied().collect();
        let window = scene.frame.whole();
        let mut blocks = Vec::new();
        for id in &self.order {
            let Some(spot) = spots.iter().find(|s| s.body == *id) else {
                continue;
            };
            let in_sight = window
                .gap_to_disc(spot.at, if spot.true_radius < spot.radius { 0.0 } else { spot.radius })
                <= 0.0;
            if !in_sight || body::hidden(spot, &solids) {
                continue;
            }
            let Some(listed) = scene.show.scenario.bodies.get(id.0) else {
                continue;
            };
            let mut lines = vec![Line {
                text: listed.name.clone(),
                weight: 500,
                colour: look::INK,
                tag: Tag::Label(*id),
            }];
            for reading in self.readings.iter().filter(|r| r.body == *id) {
                if let Some(text) = readout::words(scene, reading, self.foot.in_au) {
                    lines.push(Line { text, weight: 400, colour: look::INK_2, tag: Tag::Number(*id) });
                }
            }
            blocks.push(Block { key: Key::Body(id.0), at: spot.at, radius: spot.radius, lines });
        }
        for mark in &scene.beat.marks {
            let Mark::Apsides { body, about } = *mark else {
                continue;
            };
            if !scene.on_stage(body) {
                continue;
            }
            for (i, apsis) in apsides::of(scene, body, about, self.foot.in_au).into_iter().enumerate() {
                if window.holds(apsis.at) {
                    let line =
                        Line { text: apsis.words, weight: 400, colour: look::INK_2, tag: Tag::Number(body) };
                    let radius = scene.frame.part(1.0 / 90.0);
                    blocks.push(Block {
                        key: Key::Apsis(body.0, i),
                        at: apsis.at,
                        radius,
                        lines: vec![line],
                    });
                }
            }
        }
        blocks.extend(swarm::names(scene));
        blocks
    }

    /// The areas beside the sectors of a scene whose bodies are on stage.
    pub fn area_labels(&self, scene: &Scene<'_>) -> Vec<AreaLabel> {
        let seen = self.areas.iter().filter(|a| scene.on_stage(a.sectors.body));
        seen.flat_map(|a| a.labels(scene)).collect()
    }

    /// What labels keep clear of.
    pub fn obstacles(&self, scene: &Scene<'_>, spots: &[Spot], areas: &[AreaLabel]) -> Obstacles {
        let mut rects = self.foot_rects.clone();
        rects.extend(self.caption.as_ref().map(|c| c.rect));
        rects.extend(areas.iter().map(|l| l.rect));
        let tails = tail::pieces(scene, spots).into_iter().flat_map(|t| t.1);
        let arrows = scene.beat.marks.iter().filter_map(|mark| {
            let (kind, ..) = arrow::of_mark(mark)?;
            let largest = self.foot.largest[usize::from(kind == Kind::Gravity)];
            let (from, direction, long) = arrow::shaft(scene, spots, mark, arrow::scale(scene, largest))?;
            Some([from, along(from, direction, long)])
        });
        Obstacles { rects, discs: labels::discs(spots), pieces: tails.chain(arrows).collect() }
    }

    /// The labels' places around an instant: at the step before, at the step after, and the share of the way.
    pub fn standings(
        &mut self,
        show: &Show,
        beat: &Beat,
        house: House,
        t_s: f64,
    ) -> (&[Standing], &[Standing], f64) {
        let position =
            if self.step_s > 0.0 { ((t_s - self.first_step_s) / self.step_s).max(0.0) } else { 0.0 };
        let position = if position.is_finite() { position } else { 0.0 };
        // Past the planned end steps are added as time goes on. On the way here from an instant far beyond (a restart) there
        // is nothing to be decided out there: the last places hold.
        let planned = index(self.planned_steps).max(self.steps.len()) + STEPS_PAST_PLAN;
        let wanted = (index(position) + 2).min(planned).min(MOST_STEPS);
        if self.steps.len() < wanted {
            self.extend(show, beat, house, wanted);
        }
        let last = self.steps.len() - 1;
        let (a, b) = ((wanted - 2).min(last), (wanted - 1).min(last));
        let share = if a == b { 0.0 } else { (position - number_from(a)).clamp(0.0, 1.0) };
        (&self.steps[a], &self.steps[b], share)
    }

    fn extend(&mut self, show: &Show, beat: &Beat, house: House, until: usize) {
        let at = |layout: &Self, step: usize| {
            let t_s = layout.first_step_s + layout.step_s * number_from(step);
            let scene = scene_at(show, beat, layout.key, house, t_s);
            let spots = scene.spots();
            (layout.blocks(&scene, &spots), layout.obstacles(&scene, &spots, &layout.area_labels(&scene)))
        };
        // Each instant is needed twice, as now and as soon.
        let first = self.steps.len();
        let mut ahead: std::collections::VecDeque<_> =
            (first..first + labels::LOOK_AHEAD).map(|step| at(self, step)).collect();
        while self.steps.len() < until {
            let soon = at(self, self.steps.len() + labels::LOOK_AHEAD);
            let Some(now) = ahead.pop_front() else {
                break;
            };
            let before = self.steps.last().map_or(&[][..], Vec::as_slice);
            let standings =
                labels::step(before, (&now.0, &now.1), (&soon.0, &soon.1), &self.clutter, &house.frame);
            self.steps.push(standings);
            ahead.push_back(soon);
        }
    }
}

#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "clamped to 0..=MOST_STEPS before"
)]
fn index(value: f64) -> usize {
    value.clamp(0.0, 6000.0) as usize
}

/// Bodies of which marks speak first, then the others, each in the order of the file.
fn order(show: &Show, beat: &Beat) -> Vec<BodyId> {
    let marked = |id: BodyId| beat.marks.iter().any(|m| super::marks::body_of(m) == Some(id));
    let all = || (0..show.scenario.bodies.len()).map(BodyId);
    all().filter(|&b| marked(b)).chain(all().filter(|&b| !marked(b))).collect()
}

fn foot_of(scene: &Scene<'_>, area_words: Option<&'static str>) -> Foot {
    // Where distances are compared they are in au, the unit in which the laws are told.
    let in_au = scene
        .beat
        .marks
        .iter()
        .any(|m| matches!(m, Mark::Apsides { .. } | Mark::Readout { what: Readout::Distance, .. }));
    // A beat that stands still tells time as finely as its picture is small.
    let far = scene.beat.view.span.m() > 1e9;
    let grain = match scene.pace.abs() {
        p if p > 0.0 => Grain::at_pace(p),
        _ if far => Grain::Day,
        _ => Grain::Minute,
    };
    Foot {
        in_au,
        area_words,
        largest: [arrow::largest(scene, Kind::Velocity), arrow::largest(scene, Kind::Gravity)],
        grain,
    }
}

/// Points along the lines of a finished scene, thinned out.
fn clutter(scene: &Scene<'_>, frame: &Frame) -> Vec<Px> {
    let apart = 0.5 * frame.label;
    let mut found: Vec<Px> = Vec::new();
    let mut along_piece = |a: Px, b: Px| {
        let pieces = (length(between(a, b)) / apart).ceil().clamp(1.0, 200.0);
        let mut i = 0.0;
        while i < pieces {
            let p = along(a, between(a, b), i / pieces);
            if found.last().is_none_or(|l| length(between(*l, p)) >= 0.8 * apart) && found.len() < 2000 {
                found.push(p);
            }
            i += 1.0;
        }
    };
    for item in &scene.items {
        match (&item.shape, item.tag) {
            (Shape::Line { points, .. }, _) => points.windows(2).for_each(|w| along_piece(w[0], w[1])),
            // Of a hatch every second line is enough to tell where it is.
            (Shape::Segments { segments, .. }, Tag::Sector(..)) => {
                segments.iter().step_by(2).for_each(|s| along_piece(s[0], s[1]));
            }
            _ => {}
        }
    }
    found
}
