//! The foot line: scale bar and keys left, model date and pace right.

use super::super::geometry::{Px, Rect};
use super::super::list::{Anchor, Shape, Tag};
use super::super::look;
use super::super::scene::{Scene, Words, stroke};
use super::super::wording::{self, Grain, LengthUnit};
use super::super::words::fill;
use super::arrow::{self, Kind};
use crate::scenario::Mark;

/// What the foot line of a beat needs to know that doesn't change within it.
#[derive(Debug, Clone, PartialEq)]
pub struct Foot {
    /// Whether lengths are said in au.
    pub in_au: bool,
    /// The words of the areas' unit, where areas are written.
    pub area_words: Option<&'static str>,
    /// The largest velocity and gravity of the beat, m/s and m/s².
    pub largest: [f64; 2],
    /// How finely time is told.
    pub grain: Grain,
}

/// The foot line, laid out: where it stands, so that others keep clear.
pub fn draw(scene: &mut Scene<'_>, foot: &Foot, pace: f64, held: bool) -> Vec<Rect> {
    let mut taken = Vec::new();
    let l = scene.language;
    let size = scene.frame.label;
    let (left, right) = (scene.frame.margin, scene.frame.width - scene.frame.margin);
    let lead = 1.3 * size;
    let mut base = scene.frame.foot_baseline();
    let has = |mark: Mark| scene.beat.marks.contains(&mark);
    let (scale, date, has_pace) = (has(Mark::Scale), has(Mark::Date), has(Mark::Pace));

    // Right: date, and the pace above it.
    if date || has_pace {
        let mut lines: Vec<String> = Vec::new();
        if date {
            let text = scene.show.scenario.date.map_or_else(
                || wording::since_start(l, scene.t_s, foot.grain),
                |d| {
                    wording::date(
                        l,
                        d.plus_s(scene.t_s),
                        if held { foot.grain.min_day() } else { foot.grain },
                    )
                },
            );
            lines.push(text);
        }
        if has_pace {
            lines.push(wording::pace(l, if held { 0.0 } else { pace }));
        }
        let mut y = base;
        for text in lines {
            let words = Words { text: &text, size, weight: 400, colour: look::COOL };
            taken.push(text_rect([right - words.width(), y], words.width(), size));
            scene.add_text(Tag::Foot, [right, y], Anchor::End, &words);
            y -= lead;
        }
    }

    // Left, from the foot up: scale bar, arrows' scales, unit of areas. What doesn't fit beside the right side, or
    // beside the one before, goes one line up.
    let taken_right = taken.clone();
    let free = |y: f64| {
        let line = |r: &&Rect| r.top < y + 0.22 * size && r.bottom > y - 0.75 * size;
        taken_right.iter().filter(line).map(|r| r.left).fold(right, f64::min) - 1.2 * size
    };
    let mut start = left;
    let mut next = |width: f64| {
        while start + width > free(base) && (start > left || free(base) < right - 1.3 * size) {
            base -= lead;
            start = left;
        }
        let at = [start, base];
        start += width + 1.6 * size;
        at
    };
    if scale {
        let most = 0.16 * scene.frame.width.max(scene.frame.height) / scene.camera.px_per_m;
        let unit = LengthUnit::upto(most, foot.in_au);
        let long_m = wording::round_below(most / unit.metres()) * unit.metres();
        let (text, long) = (unit.say_round(l, long_m), long_m * scene.camera.px_per_m);
        let at = next(long + 0.6 * size + quiet(&text, size).width());
        taken.push(bar(scene, at, long, &text));
    }
    for (kind, largest) in [(Kind::Velocity, foot.largest[0]), (Kind::Gravity, foot.largest[1])] {
        if arrow::any(scene, kind) && largest > 0.0 {
            let (long, text) = arrow_key(scene, kind, largest);
            let at = next(long + 0.6 * size + quiet(&text, size).width());
            taken.push(draw_arrow_key(scene, at, kind, long, &text));
        }
    }
    if let Some(unit) = foot.area_words {
        let text = fill(l.areas_in, unit);
        let words = Words { text: &text, size, weight: 500, colour: look::LAMP };
        let at = next(words.width());
        taken.push(text_rect(at, words.width(), size));
        scene.add_text(Tag::Foot, at, Anchor::Start, &words);
    }
    taken
}

const fn quiet(text: &str, size: f64) -> Words<'_> {
    Words { text, size, weight: 400, colour: look::INK_2 }
}

fn text_rect(at: Px, width: f64, size: f64) -> Rect {
    Rect { left: at[0], top: at[1] - 0.75 * size, right: at[0] + width, bottom: at[1] + 0.22 * size }
}

fn bar(scene: &mut Scene<'_>, at: Px, long: f64, words: &str) -> Rect {
    let size = scene.frame.label;
    let (y, tick) = (at[1] - 0.32 * size, 0.16 * size);
    let segments = vec![
        [[at[0], y], [at[0] + long, y]],
        [[at[0], y - tick], [at[0], y + tick]],
        [[at[0] + long, y - tick], [at[0] + long, y + tick]],
    ];
    let line = stroke(scene.frame.line(look::MARK) * 0.9, look::INK_2);
    scene.add(Tag::Foot, Shape::Segments { segments, stroke: line });
    let words = quiet(words, size);
    let start = [at[0] + long + 0.6 * size, at[1]];
    scene.add_text(Tag::Foot, start, Anchor::Start, &words);
    Rect { left: at[0], ..text_rect(start, words.width(), size) }
}

/// Length of an arrow of a round size, px, and that size in words.
fn arrow_key(scene: &Scene<'_>, kind: Kind, largest: f64) -> (f64, String) {
    let l = scene.language;
    let (round, text) = match kind {
        Kind::Velocity => arrow::speed_unit(scene).round_below(l, 0.6 * largest),
        Kind::Gravity => {
            let round = wording::round_below(0.6 * largest);
            (round, fill(l.pull_of, &wording::pull_round(l, round)))
        }
    };
    (round * arrow::scale(scene, largest), text)
}

fn draw_arrow_key(scene: &mut Scene<'_>, at: Px, kind: Kind, long: f64, text: &str) -> Rect {
    let size = scene.frame.label;
    let segments =
        arrow::pieces([at[0], at[1] - 0.32 * size], [1.0, 0.0], long, scene.frame.part(1.0 / 45.0));
    let line = stroke(scene.frame.line(look::STRONG), kind.colour());
    scene.add(Tag::Foot, Shape::Segments { segments, stroke: line });
    let words = quiet(text, size);
    let start = [at[0] + long + 0.6 * size, at[1]];
    scene.add_text(Tag::Foot, start, Anchor::Start, &words);
    Rect { left: at[0], ..text_rect(start, words.width(), size) }
}
