//! Sectors: what the line from centre to body covers in equal times, with tint, hatch and area.

use super::super::geometry::{Px, Rect, along, between, clip_area, hatch, length, unit};
use super::super::list::{Shape, Tag};
use super::super::scene::{Scene, points, stroke};
use super::super::{look, type_metrics, wording};
use super::conic::Osculating;
use crate::Vector3;
use crate::math::float;
use crate::scenario::{BodyId, Mark};
use crate::sweep;
use crate::units::Span;

/// More sectors than this tell nobody anything.
const MOST: usize = 72;
/// How far past the covered stretch an area may slide along the path, in lengths of the stretch.
const SLIDE_PAST: f64 = 4.0;

/// The sectors of one mark.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sectors {
    /// Of which body.
    pub body: BodyId,
    /// About which centre.
    pub about: BodyId,
    /// Model time at which the first one starts.
    pub from_s: f64,
    /// Model time of each.
    pub every_s: f64,
    /// How many the beat has.
    pub count: usize,
    /// Whether areas are written.
    pub area: bool,
}

impl Sectors {
    /// Those of a mark in a scene; `None` where it is no sector, or there is nothing to cover.
    pub fn of(scene: &Scene<'_>, mark: &Mark) -> Option<Self> {
        let Mark::Sector { body, about, every, count, area } = *mark else {
            return None;
        };
        let about = about.or_else(|| scene.primary(body))?;
        Self::new(scene, body, about, every, count, area)
    }

    fn new(
        scene: &Scene<'_>,
        body: BodyId,
        about: BodyId,
        every: Option<Span>,
        count: Option<usize>,
        area: bool,
    ) -> Option<Self> {
        let every_s = match every {
            Some(every) => every.s(),
            None => {
                let period = Osculating::of(scene, body, Some(about)).and_then(|o| o.period_s());
                period.unwrap_or(scene.until_s - scene.beat_from_s) / 12.0
            }
        };
        if body == about || !(every_s > 0.0 && every_s.is_finite()) {
            return None;
        }
        let has_time_for = ((scene.until_s - scene.beat_from_s) / every_s + 1e-6).floor();
        let fits = (0..MOST).take_while(|&k| as_f64(k) < has_time_for).count();
        let count = count.map_or(fits, |c| c.min(MOST));
        (count > 0).then_some(Self { body, about, from_s: scene.beat_from_s, every_s, count, area })
    }

    /// Start and end of one of them, model time.
    pub fn ends_s(&self, index: usize) -> [f64; 2] {
        let from = self.from_s + as_f64(index) * self.every_s;
        [from, from + self.every_s]
    }

    /// Area of one of them, m²; `None` where the ephemeris doesn't reach.
    fn area_m2(&self, scene: &Scene<'_>, index: usize) -> Option<f64> {
        let [from_s, until_s] = self.ends_s(index);
        sweep::area_m2(&scene.show.ephemeris, self.body, self.about, from_s, until_s)
    }
}

fn as_f64(index: usize) -> f64 {
    u32::try_from(index).map_or(0.0, f64::from)
}

/// Draws the sectors that have begun: tint and hatch first, then their edges.
pub fn draw(scene: &mut Scene<'_>, sectors: &Sectors) {
    for index in 0..sectors.count {
        let [from_s, until_s] = sectors.ends_s(index);
        if from_s >= scene.t_s {
            break;
        }
        draw_one(scene, sectors, index, from_s, until_s.min(scene.t_s));
    }
}

fn draw_one(scene: &mut Scene<'_>, sectors: &Sectors, index: usize, from_s: f64, until_s: f64) {
    let centre = scene.camera.project(scene.position(sectors.about));
    let curve = scene.curve(sectors.body, Some(sectors.about));
    let rim = points(&curve.trace(&scene.camera, &scene.keep(), from_s, until_s));
    let (Some(&first), true) = (rim.first(), rim.len() > 1) else {
        return;
    };
    let (colour, tint) = look::SECTOR_TINTS[index % 2];
    let tag = Tag::Sector(sectors.body, index);
    let mut outline = rim.clone();
    outline.push(centre);
    let seen = clip_area(&outline, &scene.keep());
    if seen.len() > 2 {
        let angle = look::HATCH_TURN_RAD * as_f64(index % 6) + 0.25;
        let (s, c) = float::sin_cos(angle);
        let segments = hatch(&seen, [c, -s], centre, scene.frame.part(look::HATCH_STEP).max(4.0));
        scene.add(tag, Shape::Area { points: seen, fill: look::fade(colour, tint) });
        if !segments.is_empty() {
            let line = stroke(scene.frame.line(look::HATCH) * 0.9, look::fade(colour, 0.62));
            scene.add(tag, Shape::Segments { segments, stroke: line });
        }
    }
    let edge = stroke(scene.frame.line(look::HATCH), colour);
    scene.add_line(tag, &[centre, first], &edge);
    // The next one's first edge closes this one; the last one closes itself.
    let begun = scene.t_s > sectors.ends_s(index + 1)[0] && index + 1 < sectors.count;
    if let (false, Some(&last)) = (begun, rim.last()) {
        scene.add_line(tag, &[centre, last], &edge);
    }
}

/// An area written beside its sector.
#[derive(Debug, Clone, PartialEq)]
pub struct AreaLabel {
    /// Which sector.
    pub index: usize,
    /// Whose.
    pub body: BodyId,
    /// The number.
    pub text: String,
    /// Where it stands.
    pub rect: Rect,
    /// A line from its sector's rim, where it doesn't stand beside it.
    pub leader: Option<[Px; 2]>,
    /// 0 while its sector still grows, 1 soon after.
    pub opacity: f64,
}

/// The areas of one mark's sectors: values once for the beat, and where they stand while the view rests.
#[derive(Debug, Clone, PartialEq)]
pub struct Areas {
    /// The sectors.
    pub sectors: Sectors,
    /// Index, text and width, px, of each area that the ephemeris reaches.
    texts: Vec<(usize, String, f64)>,
    /// Boxes relative to the centre's place in the picture, for a camera of this scale and direction.
    resting: Vec<(usize, Rect)>,
    scale: f64,
    axes: [Vector3<f64>; 2],
    /// Boxes of the foot line.
    kept_clear: Vec<Rect>,
}

/// The areas of all sectors that want them written, and the words of their common unit.
pub fn areas_of(scene: &Scene<'_>) -> (Vec<Areas>, Option<&'static str>) {
    let all: Vec<Sectors> =
        scene.beat.marks.iter().filter_map(|m| Sectors::of(scene, m)).filter(|s| s.area).collect();
    let values: Vec<Vec<Option<f64>>> =
        all.iter().map(|s| (0..s.count).map(|i| s.area_m2(scene, i)).collect()).collect();
    let largest = values.iter().flatten().flatten().copied().fold(0.0, f64::max);
    if largest <= 0.0 {
        return (Vec::new(), None);
    }
    let (unit, words) = wording::area_unit(largest);
    let sets = all.into_iter().zip(values).map(|(sectors, values)| {
        let texts = values.iter().enumerate().filter_map(|(index, area)| {
            let value = (*area)? / unit;
            let text = wording::grouped(value, wording::decimals(value, 4));
            let width = type_metrics::width(&text, scene.frame.label, 600);
            Some((index, text, width))
        });
        Areas {
            sectors,
            texts: texts.collect(),
            resting: Vec::new(),
            scale: scene.camera.px_per_m,
            axes: [scene.camera.right, scene.camera.up],
            kept_clear: Vec::new(),
        }
    });
    (sets.collect(), Some(words))
}

impl Areas {
    /// Decides where the areas stand while the view rests, clear of what stands fast.
    pub fn settle(&mut self, scene: &Scene<'_>, fast: &[Rect]) {
        self.kept_clear = fast.to_vec();
        self.scale = scene.camera.px_per_m;
        self.axes = [scene.camera.right, scene.camera.up];
        let [x, y] = scene.camera.project(scene.position(self.sectors.about));
        self.resting = self.spread(scene).into_iter().map(|(i, r)| (i, r.moved([-x, -y]))).collect();
    }

    /// The labels of a scene.
    pub fn labels(&self, scene: &Scene<'_>) -> Vec<AreaLabel> {
        let same = (self.scale - scene.camera.px_per_m).abs() <= 1e-12 * self.scale
            && self.axes == [scene.camera.right, scene.camera.up];
        let centre = scene.camera.project(scene.position(self.sectors.about));
        let rects: Vec<(usize, Rect)> = if same {
            self.resting.iter().map(|(i, r)| (*i, r.moved(centre))).collect()
        } else {
            self.spread(scene)
        };
        let calm_s = look::CALM_S * scene.pace.abs();
        let label = |(index, rect): (usize, Rect)| {
            let since = scene.t_s - self.sectors.ends_s(index)[1];
            let opacity = match since {
                s if s < 0.0 => 0.0,
                s if calm_s > 0.0 => look::ease(s / calm_s),
                _ => 1.0,
            };
            let text = self.texts.iter().find(|t| t.0 == index)?.1.clone();
            let leader = self.leader(scene, index, &rect);
            Some(AreaLabel { index, body: self.sectors.body, text, rect, leader, opacity })
        };
        rects.into_iter().filter_map(label).collect()
    }

    /// From the middle of a sector's rim to its area's box, where that has slid away from it.
    fn leader(&self, scene: &Scene<'_>, index: usize, rect: &Rect) -> Option<[Px; 2]> {
        let size = scene.frame.label;
        let [from_s, until_s] = self.sectors.ends_s(index);
        let middle_s = 0.5 * (from_s + until_s);
        let curve = scene.curve(self.sectors.body, Some(self.sectors.about));
        let at = |t: f64| curve.trace(&scene.camera, &scene.keep(), t, t).first().map(|s| s.at);
        let rim = at(middle_s)?;
        let near = rect.grown(0.1 * size);
        let end = [rim[0].clamp(near.left, near.right), rim[1].clamp(near.top, near.bottom)];
        let half_rim = 0.5 * length(between(at(from_s)?, at(until_s)?));
        let way = between(rim, end);
        (length(way) > half_rim + 0.9 * size).then(|| [along(rim, way, 0.12 * size / length(way)), end])
    }

    /// Where the areas stand, those to come included, so that none has to make room later.
    ///
    /// Each starts outside the middle of its rim, along the path's normal, and slides along the path away from its
    /// neighbours, past the ends of the covered stretch if it must, until all are clear of one another.
    fn spread(&self, scene: &Scene<'_>) -> Vec<(usize, Rect)> {
        let sectors = &self.sectors;
        let centre = scene.camera.project(scene.position(sectors.about));
        let curve = scene.curve(sectors.body, Some(sectors.about));
        let size = scene.frame.label;
        let at_px = |t: f64| curve.trace(&scene.camera, &scene.keep(), t, t).first().map(|s| s.at);
        let eph = &scene.show.ephemeris;
        let whole_s = sectors.every_s * as_f64(sectors.count);
        let first_s = (sectors.from_s - SLIDE_PAST * whole_s).max(eph.from_s());
        let last_s = (sectors.from_s + (1.0 + SLIDE_PAST) * whole_s).min(eph.until_s());
        let place = |t: f64, width: f64| -> Option<Rect> {
            let h = 0.02 * sectors.every_s;
            let (a, b) = (at_px((t - h).max(first_s))?, at_px((t + h).min(last_s))?);
            let at = at_px(t)?;
            let from_centre = between(centre, at);
            let along_path = unit(between(a, b)).or_else(|| unit([-from_centre[1], from_centre[0]]))?;
            let mut out = [along_path[1], -along_path[0]];
            if out[0] * from_centre[0] + out[1] * from_centre[1] < 0.0 {
                out = [-out[0], -out[1]];
            }
            // The box touches the path with the side or corner that faces it.
            let height = 0.78 * size;
            let reach = 0.5 * (width * out[0].abs() + height * out[1].abs()) + 0.42 * size;
            let outside = Rect::about(along(at, out, reach), width, height);
            // Where foot line or window end leave no room outside, it stands inside, on its sector.
            let fits = self.kept_clear.iter().all(|r| r.gap(&outside) > 0.1 * size)
                && scene.frame.whole().encloses(&outside);
            Some(if fits { outside } else { Rect::about(along(at, out, -reach), width, height) })
        };
        let mut times: Vec<f64> =
            self.texts.iter().map(|t| 0.5 * sectors.ends_s(t.0).iter().sum::<f64>()).collect();
        let mut rects: Vec<Option<Rect>> =
            times.iter().zip(&self.texts).map(|(t, text)| place(*t, text.2)).collect();
        // About a tenth of a letter at a time, whatever the body's speed there.
        let push = |t: f64| {
            let h = 0.05 * sectors.every_s;
            let (a, b) = (at_px((t - h).max(first_s)), at_px((t + h).min(last_s)));
            let gone = a.zip(b).map_or(0.0, |(a, b)| length(between(a, b)));
            (2.0 * h * 0.12 * size / gone.max(1e-3)).clamp(0.02 * sectors.every_s, 2.0 * sectors.every_s)
        };
        // Each pass pushes every touching pair of neighbours apart in time; the number of passes bounds the work.
        for _ in 0..120 {
            let mut moved = false;
            for i in 1..times.len() {
                let (Some(a), Some(b)) = (rects[i - 1], rects[i]) else {
                    continue;
                };
                if a.gap(&b) < 0.22 * size {
                    times[i - 1] = (times[i - 1] - push(times[i - 1])).max(first_s);
                    times[i] = (times[i] + push(times[i])).min(last_s);
                    rects[i - 1] = place(times[i - 1], self.texts[i - 1].2);
                    rects[i] = place(times[i], self.texts[i].2);
                    moved = true;
                }
            }
            if !moved {
                break;
            }
        }
        // Where there is no room even so, the later one waits unseen.
        let mut kept: Vec<(usize, Rect)> = Vec::new();
        for (rect, text) in rects.into_iter().zip(&self.texts) {
            if let Some(rect) = rect.filter(|r| kept.iter().all(|k| k.1.gap(r) >= 0.0)) {
                kept.push((text.0, rect));
            }
        }
        kept
    }
}
