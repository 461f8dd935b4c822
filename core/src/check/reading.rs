//! What can't be read from the back row, or not in time; and what a frame costs, from the same pictures.

use super::finding::{Finding, Topic, Weight};
use super::paint::paint_ms;
use super::report::{BeatReport, Report};
use super::sight::{self, Seen, called};
use crate::math::counts::number_from;
use crate::picture::type_metrics::CAP_HEIGHT;
use crate::picture::{Composer, DisplayList, Options, Shape, Tag};
use crate::scenario::BodyId;
use crate::show::{Lately, Moment, Show};
use std::f64::consts::PI;

/// Pieces of a beat between the pictures looked at.
const PIECES: u32 = 24;

/// The back row sees the picture from so many times its height. Common practice for rooms, 4 to 6, no source; in a dome everybody is nearer.
const BACK_ROW: f64 = 5.0;
/// Least height of capitals that is read at ease, arcmin: ISO 9241-303 (from memory), which recommends 20 and more.
const LEAST_CAPITAL_ARCMIN: f64 = 16.0;
/// Least width of a line that is seen: what normal sight parts (visual acuity of 1), arcmin.
const LEAST_LINE_ARCMIN: f64 = 1.0;
/// Characters that an audience reads in a second beside looking and listening. Common practice for subtitles, 12 to 17, no source.
const READ_A_SECOND: f64 = 12.0;
/// Before a caption is read it is noticed, s.
const NOTICED_S: f64 = 1.0;
/// A name that is missing from more than this share of the pictures that hold its body is missed.
const NAMELESS: f64 = 0.5;
/// A frame that takes longer is late on a slow laptop: half of one at 50 Hz, ms.
const MOST_FRAME_MS: f64 = 10.0;
/// Memory from which a show is near its bound, share.
const MUCH_MEMORY: f64 = 0.75;

/// What the pictures of one beat hold.
#[derive(Debug, Clone, Default)]
struct Tally {
    /// For each body: pictures that hold it, and those of them with its name.
    named: Vec<[u32; 2]>,
}

/// The pictures being looked at.
#[derive(Debug)]
pub(super) struct Reading {
    composer: Composer,
    beat: usize,
    piece: u32,
    tally: Tally,
}

impl Reading {
    pub(super) fn new(show: &Show) -> Self {
        let composer = Composer::new(show, sight::HOUSE, Options::default());
        Self { composer, beat: 0, piece: 0, tally: Tally::default() }
    }

    /// Looks at so many pictures, swarms being brought to each by so many steps of tracers at a time. True once all have been looked at.
    pub(super) fn work(
        &mut self,
        show: &Show,
        report: &mut Report,
        pictures: usize,
        tracer_steps: usize,
    ) -> bool {
        let beats = sight::beats(show);
        for _ in 0..pictures {
            let Some(seen) = beats.get(self.beat) else { return true };
            let Some(of_beat) = report.beats.get_mut(self.beat) else { return true };
            let moment = moment(seen, seen.at(self.piece, PIECES));
            if !self.composer.arrive(show, &moment, tracer_steps) {
                return false;
            }
            let list = self.composer.compose(show, &moment);
            of_beat.frame_ms = of_beat.frame_ms.max(paint_ms(&list));
            smallest(&list, of_beat);
            self.tally.add(seen, moment.model_s, &list);
            self.piece += 1;
            if self.piece > PIECES {
                self.tally.judge(seen, &mut report.findings);
                judge(seen, of_beat, &mut report.findings);
                (self.tally, self.piece) = (Tally::default(), 0);
                self.beat += 1;
            }
        }
        false
    }

    /// Share of the pictures looked at, 0 to 1.
    pub(super) fn fraction(&self, show: &Show) -> f64 {
        (number_from(self.beat) + f64::from(self.piece) / f64::from(PIECES + 1))
            / number_from(show.plan.beats.len().max(1))
    }
}

/// A moment of a beat when the show is run by its plan.
fn moment(seen: &Seen<'_>, beat_s: f64) -> Moment {
    let plan = &seen.show.plan;
    Moment {
        model_s: seen.model_s(beat_s),
        pace: seen.pace_at(beat_s),
        held: false,
        beat: seen.index,
        before: None,
        lately: Lately::default(),
        since_cut_s: beat_s,
        beat_from_s: plan.sectors_from_s(seen.index),
        run_from_s: plan.run_from_s(seen.index),
        veil: 0.0,
    }
}

/// An angle in the picture as the back row sees it, arcmin.
fn arcmin(px: f64) -> f64 {
    px / sight::frame().scene / BACK_ROW * 60.0 * 180.0 / PI
}

/// The smallest capitals and the thinnest line of a picture; what is more than half faded out does not count.
fn smallest(list: &DisplayList, report: &mut BeatReport) {
    const SEEN: u8 = 128;
    let least = |old: Option<f64>, new: f64| Some(old.map_or(new, |old| old.min(new)));
    for item in &list.items {
        match &item.shape {
            Shape::Text { size, colour, .. } if colour.a >= SEEN => {
                report.capital_arcmin = least(report.capital_arcmin, arcmin(CAP_HEIGHT * size));
            }
            Shape::Line { stroke, .. } | Shape::Segments { stroke, .. } if stroke.colour.a >= SEEN => {
                report.line_arcmin = least(report.line_arcmin, arcmin(stroke.width));
            }
            _ => {}
        }
    }
}

impl Tally {
    fn add(&mut self, seen: &Seen<'_>, t_s: f64, list: &DisplayList) {
        self.named.resize(seen.show.scenario.bodies.len(), [0; 2]);
        let camera = seen.camera(t_s);
        for body in seen.bodies(t_s) {
            let at = crate::picture::scene::position(seen.show, body, t_s);
            let Some(counts) = self.named.get_mut(body.0).filter(|_| seen.holds(&camera, at)) else {
                continue;
            };
            counts[0] += 1;
            let named = |shape: &Shape| matches!(shape, Shape::Text { colour, .. } if colour.a >= 128);
            let is_named = list.items.iter().any(|item| item.tag == Tag::Label(body) && named(&item.shape));
            counts[1] += u32::from(is_named);
        }
    }

    fn judge(&self, seen: &Seen<'_>, findings: &mut Vec<Finding>) {
        for (body, [held, named]) in self.named.iter().enumerate() {
            let missing = 1.0 - f64::from(*named) / f64::from((*held).max(1));
            // One picture at the border of the view says little.
            if *held > PIECES / 4 && missing > NAMELESS {
                findings.push(Finding {
                    weight: Weight::Note,
                    topic: Topic::Reading,
                    place: seen.beat.place,
                    wrong: format!(
                        "the name of {} has no room in {:.0} % of {}",
                        seen.show.initial.name(BodyId(body)),
                        100.0 * missing,
                        called(seen.index)
                    ),
                    remedy: "say who it is, show a closer view, or take others off the stage with `cast`"
                        .to_owned(),
                });
            }
        }
    }
}

/// What is too small, too long or too dear in a beat.
fn judge(seen: &Seen<'_>, report: &mut BeatReport, findings: &mut Vec<Finding>) {
    let called = called(seen.index);
    let mut add = |topic, wrong: String, remedy: String| {
        findings.push(Finding { weight: Weight::Warning, topic, place: seen.beat.place, wrong, remedy });
    };
    if let Some(small) = report.capital_arcmin.filter(|size| *size < LEAST_CAPITAL_ARCMIN) {
        add(
            Topic::Reading,
            format!("capitals of {small:.0} arcmin in {called} are too small for the back row"),
            format!(
                "text needs {LEAST_CAPITAL_ARCMIN:.0} arcmin from {BACK_ROW:.0} picture heights away: shorten the caption"
            ),
        );
    }
    if let Some(thin) = report.line_arcmin.filter(|width| *width < LEAST_LINE_ARCMIN) {
        add(
            Topic::Reading,
            format!("lines of {thin:.1} arcmin in {called} are too thin for the back row"),
            format!("lines need {LEAST_LINE_ARCMIN:.0} arcmin from {BACK_ROW:.0} picture heights away"),
        );
    }
    for caption in &seen.beat.captions {
        let characters = caption.text.chars().filter(|c| *c != '*' && *c != '\n').count();
        let needs_s = NOTICED_S + number_from(characters) / READ_A_SECOND;
        report.reading_s = report.reading_s.max(needs_s);
        if needs_s > seen.planned.lasts_s {
            add(
                Topic::Reading,
                format!(
                    "the caption \"{}\" of {called} takes {needs_s:.0} s to read, and the beat lasts {:.0} s",
                    caption.language, seen.planned.lasts_s
                ),
                "shorten it, or give the beat more time".to_owned(),
            );
        }
    }
    if report.frame_ms > MOST_FRAME_MS {
        add(
            Topic::Cost,
            format!(
                "a frame of {called} takes about {:.0} ms to paint without a graphics card",
                report.frame_ms
            ),
            format!("{MOST_FRAME_MS:.0} ms keep it smooth: drop marks, or shorten trails with `lasts`"),
        );
    }
}

/// What the whole show takes of memory.
pub(super) fn memory(show: &Show, report: &mut Report) {
    let share = report.bytes as f64 / report.most_bytes as f64;
    if share > MUCH_MEMORY {
        report.findings.push(Finding {
            weight: Weight::Warning,
            topic: Topic::Cost,
            place: show.scenario.beats.last().map_or_else(Default::default, |beat| beat.place),
            wrong: format!("the paths take {:.0} % of the memory that a show may have", 100.0 * share),
            remedy: "show less model time, or fewer bodies".to_owned(),
        });
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::picture::{Anchor, Item, Stroke, look};

    fn list(shape: Shape) -> DisplayList {
        let items = vec![Item { tag: Tag::Caption, shape }];
        DisplayList { width: 1920.0, height: 1080.0, ground: look::GROUND, items }
    }

    fn text(size: f64, colour: crate::picture::Colour) -> DisplayList {
        let (text, anchor) = ("Orla".to_owned(), Anchor::Start);
        list(Shape::Text { at: [0.0; 2], text, size, weight: 400, colour, anchor, edge: 0.0 })
    }

    #[test]
    fn sizes_are_those_that_the_back_row_sees() {
        let mut report = BeatReport::default();
        smallest(&text(42.0, look::INK), &mut report);
        smallest(&text(8.0, look::fade(look::INK, 0.2)), &mut report);
        let stroke = Stroke { width: 2.0, colour: look::INK, dash: None, round: true };
        smallest(&list(Shape::Line { points: vec![[0.0; 2]; 2], closed: false, stroke }), &mut report);
        // A letter of 42 px, its capitals 0.7 of that high, from 5 · 1080 px: 0.0054 rad.
        let capital = report.capital_arcmin.unwrap();
        assert!((capital / (0.7 * 42.0 / 5400.0 * 3437.75) - 1.0).abs() < 0.1, "{capital}");
        assert!((report.line_arcmin.unwrap() - 2.0 / 5400.0 * 3437.75).abs() < 0.01);
        assert!(capital > LEAST_CAPITAL_ARCMIN && report.line_arcmin.unwrap() > LEAST_LINE_ARCMIN);
    }
}
