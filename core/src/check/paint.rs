//! What a picture costs to paint, from what is in it.
//!
//! # Source
//! Measured: Canvas 2D in Chromium without a graphics card, 1920x1080, two cores; the table stands in `core/benches/README.md`.

use crate::math::counts::number_from;
use crate::picture::{DisplayList, Shape};

/// To clear the picture, ms.
const CLEAR_MS: f64 = 0.3;
/// A point of a line wider than a pixel, ms.
const POINT_MS: f64 = 0.65e-3;
/// A point of a line no wider than a pixel, ms.
const THIN_POINT_MS: f64 = 0.125e-3;
/// A separate piece: a line's two ends and its own caps, ms.
const PIECE_MS: f64 = 6e-3;
/// A disc, and each pixel of it, or of an area, ms.
const DISC_MS: f64 = 2e-3;
const PIXEL_MS: f64 = 0.5e-6;
/// A line of text with its edge, ms.
const TEXT_MS: f64 = 0.02;

/// An image of the whole picture for the points of swarms, and each of them, ms.
const IMAGE_MS: f64 = 1.0;
const DOT_MS: f64 = 2e-5;

/// Time to paint a picture, ms.
pub(super) fn paint_ms(list: &DisplayList) -> f64 {
    list.items.iter().map(|item| shape_ms(&item.shape, list)).fold(CLEAR_MS, |sum, one| sum + one)
}

fn shape_ms(shape: &Shape, list: &DisplayList) -> f64 {
    let whole = list.width * list.height;
    match shape {
        Shape::Line { points, stroke, .. } => {
            number_from(points.len()) * if stroke.width > 1.0 { POINT_MS } else { THIN_POINT_MS }
        }
        Shape::Segments { segments, .. } => number_from(segments.len()) * PIECE_MS,
        Shape::Area { points, .. } => {
            number_from(points.len()) * THIN_POINT_MS + area(points).min(whole) * PIXEL_MS
        }
        Shape::Disc { radius, .. } => {
            DISC_MS + (std::f64::consts::PI * radius * radius).min(whole) * PIXEL_MS
        }
        Shape::Points { points, .. } => IMAGE_MS + number_from(points.len()) * DOT_MS,
        Shape::Text { .. } => TEXT_MS,
    }
}

/// Area of a polygon, px².
fn area(points: &[[f64; 2]]) -> f64 {
    let next = points.iter().cycle().skip(1);
    0.5 * points.iter().zip(next).map(|(a, b)| a[0] * b[1] - a[1] * b[0]).sum::<f64>().abs()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::picture::{Colour, Item, Stroke, Tag};

    fn list(shapes: Vec<Shape>) -> DisplayList {
        let items = shapes.into_iter().map(|shape| Item { tag: Tag::Foot, shape }).collect();
        DisplayList { width: 1920.0, height: 1080.0, ground: Colour::default(), items }
    }

    #[test]
    fn twenty_lines_of_two_thousand_points_cost_what_was_measured() {
        let line = |width| Shape::Line {
            points: vec![[0.0; 2]; 2000],
            closed: false,
            stroke: Stroke { width, colour: Colour::default(), dash: None, round: true },
        };
        // The table's own rows: 25 ms at a width of 1.5, 5 ms at 1.
        assert!((paint_ms(&list(vec![line(1.5); 20])) - 25.0).abs() < 2.0);
        assert!((paint_ms(&list(vec![line(1.0); 20])) - 5.0).abs() < 0.5);
    }

    #[test]
    fn an_area_costs_by_its_pixels_and_no_more_than_the_picture() {
        let square = |side: f64| Shape::Area {
            points: vec![[0.0, 0.0], [side, 0.0], [side, side], [0.0, side]],
            fill: Colour::default(),
        };
        let [small, large] = [100.0, 1e5].map(|side| paint_ms(&list(vec![square(side)])));
        assert!(small < 0.31 && large > 1.3 && large < 1.4, "{small} {large}");
    }
}
