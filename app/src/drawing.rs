//! A display list as it is kept and sent: the same plain data, in a form that can be written as text.

use fallaround_core::picture::{Anchor, Colour, DisplayList, Item, Shape, Stroke, Tag};
use fallaround_core::scenario::BodyId;
use serde::{Deserialize, Serialize};

/// A picture to be kept or sent. What its items stand for is not kept; points are rounded to 0.1 px.
#[derive(Debug, Clone, PartialEq, Default, Serialize, Deserialize)]
pub struct Drawing {
    width: f64,
    height: f64,
    ground: Paint,
    items: Vec<Kept>,
}

type Paint = [u8; 4];

#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
struct KeptStroke {
    width: f64,
    colour: Paint,
    dash: Option<[f64; 2]>,
    round: bool,
}

#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
enum Kept {
    #[serde(rename = "l")]
    Line { points: Vec<f64>, closed: bool, stroke: KeptStroke },
    #[serde(rename = "s")]
    Segments { ends: Vec<f64>, stroke: KeptStroke },
    #[serde(rename = "a")]
    Area { points: Vec<f64>, fill: Paint },
    #[serde(rename = "d")]
    Disc { at: [f64; 2], radius: f64, fill: Option<Paint>, rim: Option<KeptStroke> },
    #[serde(rename = "p")]
    Points { points: Vec<f64>, size: f64, colour: Paint },
    #[serde(rename = "t")]
    Text { at: [f64; 2], text: String, size: f64, weight: u16, colour: Paint, anchor: u8, edge: f64 },
}

impl Drawing {
    /// Keeps a picture.
    pub fn of(list: &DisplayList) -> Self {
        Self {
            width: list.width,
            height: list.height,
            ground: paint(list.ground),
            items: list.items.iter().map(|item| keep(&item.shape)).collect(),
        }
    }

    /// The picture again. Every item is tagged as foot: it stands for nothing that could be pointed at.
    pub fn list(&self) -> DisplayList {
        DisplayList {
            width: self.width,
            height: self.height,
            ground: colour(self.ground),
            items: self.items.iter().map(|kept| Item { tag: Tag::Foot, shape: unkeep(kept) }).collect(),
        }
    }
}

/// A picture made small: bodies, paths, sectors and arrows only, drawn no thinner and no smaller than can be
/// seen at that size. Letters would be too small to read.
pub fn small(list: &DisplayList, least_line: f64, least_disc: f64) -> DisplayList {
    let items = list.items.iter().filter(|item| keeps_when_small(item.tag)).map(|item| {
        let mut item = item.clone();
        match &mut item.shape {
            Shape::Line { stroke, .. } => stroke.width = stroke.width.max(least_line),
            // Hatches would close up if they were drawn as heavy as paths.
            Shape::Segments { stroke, .. } => stroke.width = stroke.width.max(least_line / 2.0),
            Shape::Disc { radius, .. } => *radius = radius.max(least_disc),
            Shape::Points { size, .. } => *size = size.max(least_line / 2.0),
            Shape::Area { .. } | Shape::Text { .. } => {}
        }
        item
    });
    let items = items.filter(|item| !matches!(item.shape, Shape::Text { .. })).collect();
    DisplayList { width: list.width, height: list.height, ground: list.ground, items }
}

const fn keeps_when_small(tag: Tag) -> bool {
    matches!(
        tag,
        Tag::Body(BodyId(_))
            | Tag::Tail(_)
            | Tag::Line(_)
            | Tag::Sector(_, _)
            | Tag::Arrow(_)
            | Tag::Swarm(_)
    )
}

/// Most points of a swarm in a kept picture: enough to see how it lies.
const MOST_POINTS: usize = 3000;

fn tenth(value: f64) -> f64 {
    (value * 10.0).round() / 10.0
}

/// Points as a flat row, each at least half a pixel from the last kept one, but for the ends.
fn flatten(points: &[[f64; 2]]) -> Vec<f64> {
    let mut flat = Vec::with_capacity(points.len() * 2);
    let mut last = [f64::INFINITY; 2];
    for (index, point) in points.iter().enumerate() {
        let end = index + 1 == points.len();
        if end || (point[0] - last[0]).abs() + (point[1] - last[1]).abs() >= 0.5 {
            flat.extend([tenth(point[0]), tenth(point[1])]);
            last = *point;
        }
    }
    flat
}

fn unflatten(flat: &[f64]) -> Vec<[f64; 2]> {
    flat.chunks_exact(2).map(|pair| [pair[0], pair[1]]).collect()
}

const fn paint(colour: Colour) -> Paint {
    [colour.r, colour.g, colour.b, colour.a]
}

const fn colour(paint: Paint) -> Colour {
    Colour { r: paint[0], g: paint[1], b: paint[2], a: paint[3] }
}

fn keep_stroke(stroke: &Stroke) -> KeptStroke {
    KeptStroke { width: stroke.width, colour: paint(stroke.colour), dash: stroke.dash, round: stroke.round }
}

fn unkeep_stroke(kept: &KeptStroke) -> Stroke {
    Stroke { width: kept.width, colour: colour(kept.colour), dash: kept.dash, round: kept.round }
}

fn keep(shape: &Shape) -> Kept {
    match shape {
        Shape::Line { points, closed, stroke } => {
            Kept::Line { points: flatten(points), closed: *closed, stroke: keep_stroke(stroke) }
        }
        Shape::Segments { segments, stroke } => Kept::Segments {
            ends: segments.iter().flatten().flatten().map(|value| tenth(*value)).collect(),
            stroke: keep_stroke(stroke),
        },
        Shape::Area { points, fill } => Kept::Area { points: flatten(points), fill: paint(*fill) },
        Shape::Disc { at, radius, fill, rim } => {
            Kept::Disc { at: *at, radius: *radius, fill: fill.map(paint), rim: rim.as_ref().map(keep_stroke) }
        }
        Shape::Points { points, size, colour } => {
            let step = points.len().div_ceil(MOST_POINTS).max(1);
            let few = points.iter().step_by(step);
            let points = few.flatten().map(|value| tenth(*value)).collect();
            Kept::Points { points, size: *size, colour: paint(*colour) }
        }
        Shape::Text { at, text, size, weight, colour, anchor, edge } => Kept::Text {
            at: *at,
            text: text.clone(),
            size: *size,
            weight: *weight,
            colour: paint(*colour),
            anchor: match anchor {
                Anchor::Start => 0,
                Anchor::Middle => 1,
                Anchor::End => 2,
            },
            edge: *edge,
        },
    }
}

fn unkeep(kept: &Kept) -> Shape {
    match kept {
        Kept::Line { points, closed, stroke } => {
            Shape::Line { points: unflatten(points), closed: *closed, stroke: unkeep_stroke(stroke) }
        }
        Kept::Segments { ends, stroke } => Shape::Segments {
            segments: ends.chunks_exact(4).map(|e| [[e[0], e[1]], [e[2], e[3]]]).collect(),
            stroke: unkeep_stroke(stroke),
        },
        Kept::Area { points, fill } => Shape::Area { points: unflatten(points), fill: colour(*fill) },
        Kept::Disc { at, radius, fill, rim } => Shape::Disc {
            at: *at,
            radius: *radius,
            fill: fill.map(colour),
            rim: rim.as_ref().map(unkeep_stroke),
        },
        Kept::Points { points, size, colour: ink } => {
            Shape::Points { points: unflatten(points), size: *size, colour: colour(*ink) }
        }
        Kept::Text { at, text, size, weight, colour: ink, anchor, edge } => Shape::Text {
            at: *at,
            text: text.clone(),
            size: *size,
            weight: *weight,
            colour: colour(*ink),
            anchor: match anchor {
                0 => Anchor::Start,
                1 => Anchor::Middle,
                _ => Anchor::End,
            },
            edge: *edge,
        },
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn list() -> DisplayList {
        let bone = Colour { r: 251, g: 246, b: 234, a: 255 };
        let stroke = Stroke { width: 0.3, colour: bone, dash: Some([2.0, 3.0]), round: true };
        let line = Shape::Line { points: vec![[0.0, 0.0], [0.1, 0.1], [5.0, 5.0]], closed: false, stroke };
        let disc = Shape::Disc { at: [3.0, 4.0], radius: 1.0, fill: Some(bone), rim: None };
        let words = Shape::Text {
            at: [1.0, 2.0],
            text: "Fenn".into(),
            size: 9.0,
            weight: 600,
            colour: bone,
            anchor: Anchor::End,
            edge: 1.0,
        };
        let items = vec![
            Item { tag: Tag::Line(BodyId(0)), shape: line },
            Item { tag: Tag::Body(BodyId(0)), shape: disc },
            Item { tag: Tag::Label(BodyId(0)), shape: words },
        ];
        DisplayList { width: 192.0, height: 108.0, ground: Colour { r: 12, g: 10, b: 8, a: 255 }, items }
    }

    #[test]
    fn a_kept_picture_comes_back_but_for_points_too_close_to_see() {
        let text = serde_json::to_string(&Drawing::of(&list())).unwrap();
        let back = serde_json::from_str::<Drawing>(&text).unwrap().list();
        assert_eq!(back.items[1].shape, list().items[1].shape);
        assert_eq!(back.items[2].shape, list().items[2].shape);
        let Shape::Line { points, .. } = &back.items[0].shape else { panic!("a line stays a line") };
        assert_eq!(points, &[[0.0, 0.0], [5.0, 5.0]]);
    }

    #[test]
    fn a_small_picture_has_no_letters_and_no_hairs() {
        let small = small(&list(), 1.5, 2.5);
        assert_eq!(small.items.len(), 2);
        let Shape::Line { stroke, .. } = &small.items[0].shape else { panic!("a line stays a line") };
        assert!(stroke.width >= 1.5);
        let Shape::Disc { radius, .. } = &small.items[1].shape else { panic!("a disc stays a disc") };
        assert!(*radius >= 2.5);
    }
}
