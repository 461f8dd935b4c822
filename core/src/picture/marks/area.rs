//! Areas: what sectors measure, written beside them.

use super::super::geometry::{Px, Rect, along, between, length, unit};
use super::super::scene::Scene;
use super::super::{look, type_metrics, wording};
use super::sector::Sectors;
use super::tail;
use crate::Vector3;
use crate::math::counts::number_from;
use crate::scenario::BodyId;

/// How far past the covered stretch an area may slide along the path, in lengths of the stretch.
const SLIDE_PAST: f64 = 4.0;
/// Height of a number's box, parts of its size.
const HEIGHT: f64 = 0.78;

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
    /// 0 while its sector grows, 1 once it is whole.
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
    let (unit, words) = wording::area_unit(scene.language, largest);
    let sets = all.into_iter().zip(values).map(|(sectors, values)| {
        let texts = values.iter().enumerate().filter_map(|(index, area)| {
            let value = (*area)? / unit;
            let text = wording::grouped(scene.language, value, wording::decimals(value, 4));
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
            // Comes in as its sector closes: a beat may stand still from there on.
            let opacity = match scene.t_s - self.sectors.ends_s(index)[1] {
                since if calm_s > 0.0 => look::ease(1.0 + since / calm_s),
                since if since < 0.0 => 0.0,
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
        let at = |t: f64| self.rim(scene, t);
        let rim = at(self.middle_s(index))?;
        let near = rect.grown(0.1 * size);
        let end = [rim[0].clamp(near.left, near.right), rim[1].clamp(near.top, near.bottom)];
        let half_rim = 0.5 * length(between(at(from_s)?, at(until_s)?));
        let way = between(rim, end);
        (length(way) > half_rim + 0.9 * size).then(|| [along(rim, way, 0.12 * size / length(way)), end])
    }

    /// Where the areas stand, those to come included, so that none has to make room later.
    fn spread(&self, scene: &Scene<'_>) -> Vec<(usize, Rect)> {
        let rims: Vec<Px> = self.texts.iter().filter_map(|t| self.rim(scene, self.middle_s(t.0))).collect();
        let size = scene.frame.label;
        let apart = rims.windows(2).map(|w| length(between(w[0], w[1]))).fold(0.0, f64::max);
        // Where no rim is as long as a number is high, they can't stand beside their sectors one by one.
        let needles = rims.len() > 1 && apart < HEIGHT * size;
        let fan = if needles { self.fan(scene, &rims) } else { None };
        fan.unwrap_or_else(|| self.slide(scene))
    }

    /// Model time of the middle of a sector.
    fn middle_s(&self, index: usize) -> f64 {
        0.5 * self.sectors.ends_s(index).iter().sum::<f64>()
    }

    /// Where the body is at a model time, about the sectors' centre, px.
    fn rim(&self, scene: &Scene<'_>, t_s: f64) -> Option<Px> {
        let curve = scene.curve(self.sectors.body, Some(self.sectors.about));
        curve.trace(&scene.camera, &scene.keep(), t_s, t_s).first().map(|s| s.at)
    }

    /// The areas of needles: in a row beside all of them, in their order, each with a line to its own. Outside the
    /// path, beyond a comet's tail; where the window leaves no room there, inside, half of them on each side.
    fn fan(&self, scene: &Scene<'_>, rims: &[Px]) -> Option<Vec<(usize, Rect)>> {
        let size = scene.frame.label;
        let centre = scene.camera.project(scene.position(self.sectors.about));
        let (first, last) = (*rims.first()?, *rims.last()?);
        let middle = [0.5 * (first[0] + last[0]), 0.5 * (first[1] + last[1])];
        let row = unit(between(first, last))?;
        let out = {
            let [x, y] = between(centre, middle);
            if row[1] * x - row[0] * y < 0.0 { [-row[1], row[0]] } else { [row[1], -row[0]] }
        };
        let width = self.texts.iter().map(|t| t.2).fold(0.0, f64::max);
        // Boxes in a row are clear of one another once they are so in one direction.
        let clear = |extent: f64, part: f64| (extent + 0.26 * size) / part.abs().max(1e-9);
        let pitch = clear(width, row[0]).min(clear(HEIGHT * size, row[1]));
        let half = 0.5 * (width * out[0].abs() + HEIGHT * size * out[1].abs());
        let tail = tail::longest(scene, self.sectors.body).unwrap_or(0.0) + scene.frame.part(1.0 / 60.0);
        let bundle = 0.5 * length(between(first, last)) + 0.5 * size;
        let beyond = tail + 0.6 * size + half;
        let places = |reach: f64, gap: f64| -> Vec<(usize, Rect)> {
            let count = self.texts.len();
            let place = |(i, text): (usize, &(usize, String, f64))| {
                let off = (number_from(i) - 0.5 * (number_from(count) - 1.0)) * pitch;
                let off = off + if 2 * i < count { -gap } else { gap };
                let at = along(along(middle, out, reach), row, off);
                (text.0, Rect::about(at, text.2, HEIGHT * size))
            };
            self.texts.iter().enumerate().map(place).collect()
        };
        let fits = |rects: &Vec<(usize, Rect)>| {
            let window = scene.frame.whole().grown(-0.35 * size);
            rects
                .iter()
                .all(|(_, r)| window.encloses(r) && self.kept_clear.iter().all(|k| k.gap(r) > 0.1 * size))
        };
        [places(beyond, 0.0), places(-half - 0.8 * size, bundle)].into_iter().find(fits)
    }

    /// Each area starts outside the middle of its rim, along the path's normal, and slides along the path away from its
    /// neighbours, past the ends of the covered stretch if it must, until all are clear of one another.
    fn slide(&self, scene: &Scene<'_>) -> Vec<(usize, Rect)> {
        let sectors = &self.sectors;
        let centre = scene.camera.project(scene.position(sectors.about));
        let size = scene.frame.label;
        let at_px = |t: f64| self.rim(scene, t);
        let eph = &scene.show.ephemeris;
        let whole_s = sectors.every_s * number_from(sectors.count);
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
            let height = HEIGHT * size;
            let reach = 0.5 * (width * out[0].abs() + height * out[1].abs()) + 0.42 * size;
            let outside = Rect::about(along(at, out, reach), width, height);
            // Where foot line or window end leave no room outside, it stands inside, on its sector.
            let fits = self.kept_clear.iter().all(|r| r.gap(&outside) > 0.1 * size)
                && scene.frame.whole().encloses(&outside);
            Some(if fits { outside } else { Rect::about(along(at, out, -reach), width, height) })
        };
        let mut times: Vec<f64> = self.texts.iter().map(|t| self.middle_s(t.0)).collect();
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

#[cfg(test)]
#[path = "area_tests.rs"]
mod tests;
