//! The caption: what the audience reads, set into the emptiness of the picture.

use super::emptiness::Emptiness;
use super::frame::Frame;
use super::geometry::{Px, Rect};
use super::list::{Anchor, Tag};
use super::scene::{Scene, Words};
use super::{look, type_metrics};
use crate::math::counts::number_from;
use crate::scenario::Beat;

/// Weight of a caption's words, and of those in the lamp's colour.
const WEIGHTS: [u16; 2] = [500, 600];
/// From baseline to baseline, part of the size.
const LEAD: f64 = 1.26;

/// Some words of one kind.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Run {
    /// The words, with the spaces that part them from what follows.
    pub text: String,
    /// Whether they are what is being explained.
    pub lamp: bool,
}

impl Run {
    fn width(&self, size: f64) -> f64 {
        type_metrics::width(&self.text, size, WEIGHTS[usize::from(self.lamp)])
    }
}

/// The text of a beat's caption in a language: exactly it, else one that starts alike ("en" for "en-GB"), else the
/// scenario's own language, else the first; `None`: it has none.
pub fn text_of<'a>(beat: &'a Beat, wanted: &str, own: &str) -> Option<&'a str> {
    let stem = |tag: &str| tag.split('-').next().unwrap_or("").to_ascii_lowercase();
    let exactly = |tag: &str| beat.captions.iter().find(|c| c.language.eq_ignore_ascii_case(tag));
    let nearly = |tag: &str| beat.captions.iter().find(|c| !tag.is_empty() && stem(&c.language) == stem(tag));
    let found = exactly(wanted).or_else(|| nearly(wanted)).or_else(|| exactly(own)).or_else(|| nearly(own));
    found.or_else(|| beat.captions.first()).map(|c| c.text.as_str()).filter(|t| !t.trim().is_empty())
}

/// Lines of a caption, as its author broke them, and broken further where they are wider than `most`, px.
/// `*so*` is set in the lamp's colour, over line breaks too; a star without a partner is a star.
pub fn lines(text: &str, size: f64, most: f64) -> Vec<Vec<Run>> {
    let stars = text.matches('*').count();
    let mut left = stars - stars % 2;
    let mut lamp = false;
    let mut lines = Vec::new();
    for written in text.trim().lines() {
        let mut words: Vec<Run> = Vec::new();
        let mut open = false;
        for word in written.split_whitespace() {
            // A word can change colour within itself: "the *same*."
            let mut joined = false;
            let mut rest = word;
            while !rest.is_empty() {
                let star = if left > 0 { rest.find('*') } else { None };
                let (piece, after) = star.map_or((rest, ""), |i| (&rest[..i], &rest[i + 1..]));
                if !piece.is_empty() {
                    words.push(Run {
                        text: (if joined || !open { "" } else { " " }).to_owned() + piece,
                        lamp,
                    });
                    joined = true;
                    open = true;
                }
                if star.is_some() {
                    lamp = !lamp;
                    left -= 1;
                }
                rest = after;
            }
        }
        lines.extend(wrap(words, size, most));
    }
    lines
}

/// Words, each with the space before it, as lines of runs no wider than `most` where words allow.
fn wrap(words: Vec<Run>, size: f64, most: f64) -> Vec<Vec<Run>> {
    let mut lines: Vec<Vec<Run>> = vec![Vec::new()];
    let mut wide = 0.0;
    for mut word in words {
        let width = word.width(size);
        if wide + width > most && word.text.starts_with(' ') {
            word.text.remove(0);
            lines.push(Vec::new());
            wide = 0.0;
        }
        wide += word.width(size);
        if let Some(line) = lines.last_mut() {
            match line.last_mut() {
                Some(last) if last.lamp == word.lamp => last.text.push_str(&word.text),
                _ => line.push(word),
            }
        }
    }
    lines
}

/// A caption that has its place.
#[derive(Debug, Clone, PartialEq)]
pub struct Caption {
    /// Its lines.
    pub lines: Vec<Vec<Run>>,
    /// Its box.
    pub rect: Rect,
    /// Size of its type, px.
    pub size: f64,
}

impl Caption {
    /// Lays lines out, none wider than a share of the window's room; the box's corner is at the origin still.
    pub fn set(text: &str, frame: &Frame, share: f64) -> Self {
        let most = share * (frame.width - 2.0 * frame.margin.max(0.5 * frame.label));
        let mut size = frame.caption;
        let (mut lines, mut width, mut height);
        loop {
            lines = self::lines(text, size, most);
            width = lines.iter().map(|l| l.iter().map(|r| r.width(size)).sum()).fold(0.0, f64::max);
            height = lines.iter().map(|_| LEAD * size).sum::<f64>() - (LEAD - 0.95) * size;
            // A long caption in a small window is set smaller, but never below the labels.
            if (height <= 0.5 * frame.height && width <= most) || size <= frame.label {
                break;
            }
            size = (0.9 * size).max(frame.label);
        }
        Self { lines, rect: Rect { left: 0.0, top: 0.0, right: width, bottom: height.max(0.0) }, size }
    }

    /// A caption in the emptiness: where it covers nothing and has room around it, with the margin of the house rather
    /// than nearer to the window's edge, in the lines that its author wrote rather than broken into more. Where
    /// nothing is free, it covers as little as it can.
    pub fn in_emptiness(empty: &Emptiness, text: &str, frame: &Frame) -> Self {
        let usual = frame.margin.max(0.5 * frame.label);
        let least = (0.5 * usual).max(frame.part(look::LEAST_MARGIN)).min(usual);
        let mut best: Option<(f64, Self)> = None;
        let mut tried: Option<Vec<Vec<Run>>> = None;
        for share in [1.0, 0.72, 0.5, 0.36, 0.26] {
            let set = Self::set(text, frame, share);
            if tried.as_ref() == Some(&set.lines) {
                continue;
            }
            tried = Some(set.lines.clone());
            let written = text.trim().lines().count().max(1);
            let broken = set.lines.len().saturating_sub(written);
            for (margin, nearness) in [(usual, 0.0), (least, 1.0)] {
                let within = Rect {
                    left: margin,
                    top: margin,
                    right: frame.width - margin,
                    bottom: frame.foot_baseline() - frame.label,
                };
                let found = empty.best(set.rect.width(), set.rect.height(), &within, frame);
                let score = 100.0 * found.covered - 10.0 * found.room
                    + 4.0 * nearness
                    + if written > 1 { 12.0 } else { 4.0 } * number_from(broken);
                if best.as_ref().is_none_or(|b| score < b.0) {
                    let mut caption = set.clone();
                    caption.move_to(found.corner);
                    best = Some((score, caption));
                }
            }
        }
        best.map_or_else(|| Self::set(text, frame, 1.0), |b| b.1)
    }

    /// Moves its corner.
    pub fn move_to(&mut self, corner: Px) {
        let (w, h) = (self.rect.width(), self.rect.height());
        self.rect = Rect { left: corner[0], top: corner[1], right: corner[0] + w, bottom: corner[1] + h };
    }

    /// Draws it.
    pub fn draw(&self, scene: &mut Scene<'_>, opacity: f64) {
        let mut baseline = self.rect.top + 0.74 * self.size;
        for line in &self.lines {
            let mut x = self.rect.left;
            for run in line {
                let colour = look::fade(if run.lamp { look::LAMP } else { look::INK }, opacity);
                let weight = WEIGHTS[usize::from(run.lamp)];
                // A run's first space moves it, so that no painter has to keep it.
                let trimmed = run.text.trim_start();
                let skip = run.width(self.size) - type_metrics::width(trimmed, self.size, weight);
                let words = Words { text: trimmed, size: self.size, weight, colour };
                scene.add_text(Tag::Caption, [x + skip, baseline], Anchor::Start, &words);
                x += run.width(self.size);
            }
            baseline += LEAD * self.size;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::super::fixture;
    use super::*;

    fn plain(lines: &[Vec<Run>]) -> Vec<String> {
        let one = |l: &Vec<Run>| {
            l.iter()
                .map(|r| if r.lamp { format!("[{}]", r.text) } else { r.text.clone() })
                .collect::<String>()
        };
        lines.iter().map(one).collect()
    }

    #[test]
    fn lines_are_kept_and_stars_mark_the_lamp() {
        let got = lines("Far out it strolls.\nFalling in, it *hurries*.", 60.0, 2000.0);
        assert_eq!(plain(&got), ["Far out it strolls.", "Falling in, it[ hurries]."]);
        let got = lines("5 *two\nlines* 3 * 4", 60.0, 2000.0);
        assert_eq!(plain(&got), ["5[ two]", "[lines] 3 * 4"]);
    }

    #[test]
    fn wide_lines_are_wrapped_between_words() {
        let got = lines("one two three four", 60.0, 240.0);
        assert_eq!(plain(&got), ["one two", "three", "four"]);
    }

    #[test]
    fn the_nearest_language_is_taken() {
        let mut beat = fixture::two_bodies().scenario.beats.remove(0);
        beat.captions = [("en", "water"), ("es", "agua"), ("cy", "dŵr")]
            .map(|(l, t)| crate::scenario::Caption { language: l.into(), text: t.into() })
            .to_vec();
        assert_eq!(text_of(&beat, "cy", "en"), Some("dŵr"));
        assert_eq!(text_of(&beat, "es-MX", "en"), Some("agua"));
        assert_eq!(text_of(&beat, "fr", "en"), Some("water"));
        assert_eq!(text_of(&beat, "", "es"), Some("agua"));
        beat.captions.clear();
        assert_eq!(text_of(&beat, "en", "en"), None);
    }
}
