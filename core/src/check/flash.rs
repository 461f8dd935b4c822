//! Whether pictures flash, by the general flash rule of WCAG 2.3.1.
//!
//! # Source
//! W3C, Web Content Accessibility Guidelines 2.2 (2023), success criterion 2.3.1 and the definitions there: a flash is a pair of
//! opposing changes of relative luminance of 10 % of the maximum or more, where the darker one is below 0.80; no more than three in any
//! second, unless together they take less than a quarter of any 10 degrees of the field of view: 341 x 256 of 1024 x 768 pixels.
//!
//! The picture is looked at in cells of a fortieth of its height. Only what fills area counts: discs, areas and the veil.

use crate::math::counts::number_from;
use crate::math::float;
use crate::picture::{Colour, DisplayList, Shape};

/// Cells across and down.
const ACROSS: usize = 48;
const DOWN: usize = 27;
/// Cells of a tenth of a radian of sight: a third of the picture each way, as 341 x 256 is of 1024 x 768.
const BLOCK: [usize; 2] = [ACROSS / 3, DOWN / 3];
/// From one block looked at to the next, cells.
const STRIDE: usize = 3;

/// Least change of relative luminance that counts.
const CHANGE: f32 = 0.1;
/// A change between two tones brighter than this does not count.
const BRIGHT: f32 = 0.8;
/// Changes in a second from which there are more than three flashes: pairs of them.
const MOST_CHANGES: usize = 7;
/// The time in which they are counted, s.
const SECOND_S: f64 = 1.0;

/// What one cell has gone through.
#[derive(Debug, Clone, Copy)]
struct Cell {
    /// The last turning point of its luminance.
    turned: f32,
    /// Which way it goes since: 1 up, -1 down, 0 nowhere yet.
    way: i8,
    /// When it last changed its way by enough, the latest last, s.
    changes: [f64; MOST_CHANGES],
}

/// Watches pictures as they follow one another.
#[derive(Debug)]
pub(super) struct Meter {
    cells: Vec<Cell>,
    fresh: bool,
}

impl Meter {
    /// Nothing seen yet.
    pub(super) fn new() -> Self {
        let cell = Cell { turned: 0.0, way: 0, changes: [f64::NEG_INFINITY; MOST_CHANGES] };
        Self { cells: vec![cell; ACROSS * DOWN], fresh: true }
    }

    /// Looks at a picture, at a time in s. The largest share of a block of sight that has flashed more than three times within the last
    /// second: more than a quarter is too much.
    pub(super) fn look(&mut self, list: &DisplayList, now_s: f64) -> f64 {
        let luminances = luminances(list);
        for (cell, luminance) in self.cells.iter_mut().zip(luminances) {
            if self.fresh {
                cell.turned = luminance;
            } else {
                cell.go(luminance, now_s);
            }
        }
        self.fresh = false;
        let flashing: Vec<bool> = self.cells.iter().map(|cell| now_s - cell.changes[0] <= SECOND_S).collect();
        if flashing.iter().any(|one| *one) { worst_block(&flashing) } else { 0.0 }
    }
}

impl Cell {
    fn go(&mut self, luminance: f32, now_s: f64) {
        let change = luminance - self.turned;
        let way = if change > 0.0 { 1 } else { -1 };
        if way == self.way {
            // Further the same way: the turning point moves along.
            self.turned = luminance;
        } else if change.abs() >= CHANGE && luminance.min(self.turned) < BRIGHT {
            self.turned = luminance;
            self.way = way;
            self.changes.rotate_left(1);
            self.changes[MOST_CHANGES - 1] = now_s;
        }
    }
}

/// The largest share of flashing cells in a block.
fn worst_block(flashing: &[bool]) -> f64 {
    let [width, height] = BLOCK;
    let mut worst = 0;
    for top in (0..=DOWN - height).step_by(STRIDE) {
        for left in (0..=ACROSS - width).step_by(STRIDE) {
            let rows = (top..top + height).map(|row| &flashing[row * ACROSS + left..][..width]);
            worst = worst.max(rows.flatten().filter(|one| **one).count());
        }
    }
    number_from(worst) / number_from(width * height)
}

/// Relative luminance of every cell, from its middle.
fn luminances(list: &DisplayList) -> Vec<f32> {
    let mut cells = vec![list.ground; ACROSS * DOWN];
    let middle = |index: usize| {
        let (column, row) = (index % ACROSS, index / ACROSS);
        [
            (number_from(column) + 0.5) / number_from(ACROSS) * list.width,
            (number_from(row) + 0.5) / number_from(DOWN) * list.height,
        ]
    };
    for item in &list.items {
        let mut lay = |inside: &dyn Fn([f64; 2]) -> bool, fill: Colour| {
            for (index, cell) in cells.iter_mut().enumerate() {
                if inside(middle(index)) {
                    *cell = over(*cell, fill);
                }
            }
        };
        match &item.shape {
            Shape::Disc { at, radius, fill: Some(fill), .. } => {
                let near = |p: [f64; 2]| {
                    let [x, y] = [p[0] - at[0], p[1] - at[1]];
                    x * x + y * y < radius * radius
                };
                lay(&near, *fill);
            }
            Shape::Area { points, fill } => lay(&|p| holds(points, p), *fill),
            _ => {}
        }
    }
    cells.into_iter().map(luminance).collect()
}

/// Whether a polygon holds a point, by the even-odd rule.
fn holds(points: &[[f64; 2]], [x, y]: [f64; 2]) -> bool {
    let next = points.iter().cycle().skip(1);
    let crossed = points
        .iter()
        .zip(next)
        .filter(|(a, b)| (a[1] > y) != (b[1] > y) && x < (b[0] - a[0]) * (y - a[1]) / (b[1] - a[1]) + a[0]);
    crossed.count() % 2 == 1
}

/// A colour laid over another, as painters do it.
fn over(below: Colour, above: Colour) -> Colour {
    let opaque = Colour { a: 255, ..above };
    crate::picture::look::mix(below, opaque, f64::from(above.a) / 255.0)
}

/// Relative luminance of a colour, 0 to 1.
///
/// # Source
/// IEC 61966-2-1 (sRGB), as WCAG 2.2 quotes it.
#[expect(
    clippy::cast_possible_truncation,
    reason = "of a number of 0 to 1; single precision is far finer than the eye"
)]
fn luminance(colour: Colour) -> f32 {
    let linear = |channel: u8| {
        let c = f64::from(channel) / 255.0;
        if c <= 0.040_45 { c / 12.92 } else { float::pow((c + 0.055) / 1.055, 2.4) }
    };
    (0.2126 * linear(colour.r) + 0.7152 * linear(colour.g) + 0.0722 * linear(colour.b)) as f32
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::picture::{Item, Tag, look};

    fn disc(radius: f64, fill: Colour) -> DisplayList {
        let shape = Shape::Disc { at: [960.0, 540.0], radius, fill: Some(fill), rim: None };
        let items = vec![Item { tag: Tag::Foot, shape }];
        DisplayList { width: 1920.0, height: 1080.0, ground: look::GROUND, items }
    }

    /// The worst share while a disc blinks so many times a second, for two seconds.
    fn blinking(radius: f64, a_second: f64, bright: Colour) -> f64 {
        let mut meter = Meter::new();
        (0..120)
            .map(|frame| {
                let t_s = f64::from(frame) / 60.0;
                let on = (t_s * a_second).fract() < 0.5;
                meter.look(&disc(radius, if on { bright } else { look::GROUND }), t_s)
            })
            .fold(0.0, f64::max)
    }

    #[test]
    fn a_large_light_that_blinks_five_times_a_second_flashes() {
        assert!(blinking(300.0, 5.0, look::INK) > 0.25);
    }

    #[test]
    fn slow_small_and_faint_lights_don_t() {
        assert!(blinking(300.0, 2.9, look::INK) == 0.0, "three in a second are allowed");
        assert!(blinking(60.0, 5.0, look::INK) < 0.25, "less than a quarter of a block");
        assert!(blinking(300.0, 5.0, look::SOLID) == 0.0, "less than a tenth of the brightest");
    }

    #[test]
    fn luminance_is_that_of_srgb() {
        let grey = |v: u8| Colour { r: v, g: v, b: v, a: 255 };
        assert!((luminance(grey(255)) - 1.0).abs() < 1e-6 && luminance(grey(0)) == 0.0);
        // 188 is the tone that sends out half the light, to its rounding.
        assert!((luminance(grey(188)) - 0.5).abs() < 0.01);
    }
}
