//! Where the picture is empty: a coarse count of what a beat draws where, to set the caption by.

use super::frame::Frame;
use super::geometry::{Px, Rect, between, length};
use super::list::{Anchor, Item, Shape};
use super::type_metrics;
use crate::math::counts::number_from;

/// Cells down the shorter side of the window.
const CELLS: f64 = 36.0;
/// More distance to things than this (part of the picture's height) makes a place no better.
const ROOM_ENOUGH: f64 = 0.11;

/// What is drawn where.
#[derive(Debug, Clone)]
pub struct Emptiness {
    cell: f64,
    columns: usize,
    rows: usize,
    weights: Vec<f64>,
}

/// A place for a box.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Found {
    /// Its upper left corner, px.
    pub corner: Px,
    /// How much it covers there; 0: nothing.
    pub covered: f64,
    /// How far it stands from all things, 0 to 1: enough.
    pub room: f64,
}

#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped to 0..=100,000 before")]
fn index(value: f64) -> usize {
    value.clamp(0.0, 100_000.0) as usize
}

impl Emptiness {
    /// Nothing drawn yet.
    pub fn new(frame: &Frame) -> Self {
        let cell = frame.width.min(frame.height) / CELLS;
        // A window like a ribbon has no more than 400 cells along it.
        let cell = cell.max(frame.width.max(frame.height) / 400.0);
        let (columns, rows) = (index((frame.width / cell).ceil()), index((frame.height / cell).ceil()));
        Self { cell, columns, rows, weights: vec![0.0; columns * rows] }
    }

    fn mark(&mut self, p: Px, weight: f64) {
        if p[0] >= 0.0 && p[1] >= 0.0 {
            let (c, r) = (index(p[0] / self.cell), index(p[1] / self.cell));
            if c < self.columns && r < self.rows {
                let w = &mut self.weights[r * self.columns + c];
                *w = w.max(weight);
            }
        }
    }

    /// Counts all cells that a rectangle touches.
    pub fn mark_rect(&mut self, rect: &Rect, weight: f64) {
        let (c0, c1) = (index(rect.left / self.cell), index(rect.right / self.cell));
        let (r0, r1) = (index(rect.top / self.cell), index(rect.bottom / self.cell));
        if rect.right < 0.0 || rect.bottom < 0.0 {
            return;
        }
        for r in r0..=r1.min(self.rows.saturating_sub(1)) {
            for c in c0..=c1.min(self.columns.saturating_sub(1)) {
                let w = &mut self.weights[r * self.columns + c];
                *w = w.max(weight);
            }
        }
    }

    /// Counts the cells along a straight piece.
    pub fn mark_piece(&mut self, a: Px, b: Px, weight: f64) {
        let steps = (2.0 * length(between(a, b)) / self.cell).ceil().clamp(1.0, 2000.0);
        let mut i = 0.0;
        while i <= steps {
            self.mark([a[0] + (b[0] - a[0]) * i / steps, a[1] + (b[1] - a[1]) * i / steps], weight);
            i += 1.0;
        }
    }

    /// Counts the cells of points: as lines do.
    pub fn mark_points(&mut self, points: &[Px]) {
        for point in points {
            self.mark(*point, 1.0);
        }
    }

    /// Counts what an item covers. Words weigh most, then bodies, arrows and hatches, then lines.
    pub fn mark_item(&mut self, item: &Item) {
        match &item.shape {
            Shape::Line { points, .. } => {
                for w in points.windows(2) {
                    self.mark_piece(w[0], w[1], 1.0);
                }
            }
            Shape::Segments { segments, .. } => {
                for [a, b] in segments {
                    self.mark_piece(*a, *b, 2.0);
                }
            }
            // The hatch of a sector and the limb of a solid tell where an area is.
            Shape::Area { points, .. } => {
                for (i, p) in points.iter().enumerate() {
                    self.mark_piece(*p, points[(i + 1) % points.len()], 2.0);
                }
            }
            Shape::Disc { at, radius, .. } => self.mark_disc(*at, *radius),
            Shape::Points { points, .. } => self.mark_points(points),
            Shape::Text { at, text, size, weight, anchor, .. } => {
                let width = type_metrics::width(text, *size, *weight);
                let left = match anchor {
                    Anchor::Start => at[0],
                    Anchor::Middle => at[0] - 0.5 * width,
                    Anchor::End => at[0] - width,
                };
                let rect =
                    Rect { left, top: at[1] - 0.75 * size, right: left + width, bottom: at[1] + 0.22 * size };
                self.mark_rect(&rect, 8.0);
            }
        }
    }

    fn mark_disc(&mut self, at: Px, radius: f64) {
        // A solid that fills much of the picture is ground on which words can stand if they must.
        let weight = if radius > 4.0 * self.cell { 1.0 } else { 6.0 };
        let box_of = Rect::about(at, 2.0 * radius, 2.0 * radius);
        let (r0, r1) = (index(box_of.top / self.cell), index(box_of.bottom / self.cell));
        for r in r0..=r1.min(self.rows.saturating_sub(1)) {
            for c in 0..self.columns {
                let rect = Rect {
                    left: number_from(c) * self.cell,
                    top: number_from(r) * self.cell,
                    right: number_from(c + 1) * self.cell,
                    bottom: number_from(r + 1) * self.cell,
                };
                if rect.gap_to_disc(at, radius) <= 0.0 {
                    let w = &mut self.weights[r * self.columns + c];
                    *w = w.max(weight);
                }
            }
        }
    }

    /// The place for a box inside `within`: the one that covers least, then stands farthest from all things (up to enough
    /// room), then nearest to the picture's middle.
    pub fn best(&self, width: f64, height: f64, within: &Rect, frame: &Frame) -> Found {
        let sums = self.sums();
        let away = self.distances();
        let mut best: Option<(f64, Found)> = None;
        let across = (within.width() - width).max(0.0);
        let down = (within.height() - height).max(0.0);
        let steps = |room: f64| index((room / self.cell).floor()).min(400);
        let enough = ROOM_ENOUGH * frame.em;
        let clear = 0.3 * frame.label;
        for i in 0..=steps(down) + 1 {
            for j in 0..=steps(across) + 1 {
                let corner = [
                    within.left + (number_from(j) * self.cell).min(across),
                    within.top + (number_from(i) * self.cell).min(down),
                ];
                let rect = Rect {
                    left: corner[0],
                    top: corner[1],
                    right: corner[0] + width,
                    bottom: corner[1] + height,
                };
                let covered = self.sum(&sums, &rect.grown(clear));
                let off = length(between([0.5 * frame.width, 0.5 * frame.height], rect.middle()));
                let before_room = 100.0 * covered + off / (frame.width + frame.height);
                // The room around a place takes the longest to find: not where none would be enough.
                if best.is_some_and(|b| before_room - 10.0 >= b.0) {
                    continue;
                }
                let room = if covered > 0.0 { 0.0 } else { self.least(&away, &rect).min(enough) };
                let score = before_room - 10.0 * room / enough;
                if best.is_none_or(|b| score < b.0) {
                    best = Some((score, Found { corner, covered, room: room / enough }));
                }
            }
        }
        let none = Found { corner: [within.left, within.top], covered: f64::INFINITY, room: 0.0 };
        best.map_or(none, |b| b.1)
    }

    /// Sums of all weights above and left of each cell's corner.
    fn sums(&self) -> Vec<f64> {
        let wide = self.columns + 1;
        let mut sums = vec![0.0; wide * (self.rows + 1)];
        for r in 0..self.rows {
            let mut row = 0.0;
            for c in 0..self.columns {
                row += self.weights[r * self.columns + c];
                sums[(r + 1) * wide + c + 1] = sums[r * wide + c + 1] + row;
            }
        }
        sums
    }

    fn sum(&self, sums: &[f64], rect: &Rect) -> f64 {
        let wide = self.columns + 1;
        let (c0, c1) =
            (index(rect.left / self.cell), index((rect.right / self.cell).ceil()).min(self.columns));
        let (r0, r1) = (index(rect.top / self.cell), index((rect.bottom / self.cell).ceil()).min(self.rows));
        let (c0, r0) = (c0.min(c1), r0.min(r1));
        sums[r1 * wide + c1] - sums[r0 * wide + c1] - sums[r1 * wide + c0] + sums[r0 * wide + c0]
    }

    /// Distance of each cell from the nearest one with something in it or from the window's edge, px: two sweeps, steps
    /// of 1 and √2.
    fn distances(&self) -> Vec<f64> {
        let (w, h) = (self.columns, self.rows);
        let far = |c: usize, r: usize| number_from((c + 1).min(w - c).min(r + 1).min(h - r));
        let mut d: Vec<f64> =
            (0..w * h).map(|i| if self.weights[i] > 0.0 { 0.0 } else { far(i % w, i / w) }).collect();
        let ways: [(isize, isize, f64); 4] = [
            (-1, 0, 1.0),
            (0, -1, 1.0),
            (-1, -1, std::f64::consts::SQRT_2),
            (1, -1, std::f64::consts::SQRT_2),
        ];
        for back in [false, true] {
            for step in 0..w * h {
                let i = if back { w * h - 1 - step } else { step };
                for (dx, dy, cost) in ways {
                    let (dx, dy) = if back { (-dx, -dy) } else { (dx, dy) };
                    let near = (i % w).checked_add_signed(dx).zip((i / w).checked_add_signed(dy));
                    if let Some((c, r)) = near.filter(|&(c, r)| c < w && r < h) {
                        d[i] = d[i].min(d[r * w + c] + cost);
                    }
                }
            }
        }
        d.iter().map(|cells| cells * self.cell).collect()
    }

    fn least(&self, distances: &[f64], rect: &Rect) -> f64 {
        let (c0, c1) = (index(rect.left / self.cell), index(rect.right / self.cell));
        let (r0, r1) = (index(rect.top / self.cell), index(rect.bottom / self.cell));
        let mut least = f64::INFINITY;
        for r in r0..=r1.min(self.rows.saturating_sub(1)) {
            for c in c0..=c1.min(self.columns.saturating_sub(1)) {
                least = least.min(distances[r * self.columns + c]);
            }
        }
        if least.is_finite() { least } else { 0.0 }
    }
}

#[cfg(test)]
mod tests {
    use super::super::fixture::HOUSE;
    use super::*;

    #[test]
    fn a_box_goes_where_nothing_is() {
        let mut empty = Emptiness::new(&HOUSE);
        // All but the lower right quarter is full.
        empty.mark_rect(&Rect { left: 0.0, top: 0.0, right: 1919.0, bottom: 500.0 }, 1.0);
        empty.mark_rect(&Rect { left: 0.0, top: 0.0, right: 900.0, bottom: 1079.0 }, 1.0);
        let Found { corner, covered, .. } = empty.best(500.0, 200.0, &HOUSE.whole().grown(-96.0), &HOUSE);
        assert!(covered <= 0.0 && corner[0] > 930.0 && corner[1] > 530.0, "{corner:?}");
    }

    #[test]
    fn a_box_larger_than_the_room_still_starts_inside() {
        let empty = Emptiness::new(&HOUSE);
        let Found { corner, .. } = empty.best(5000.0, 5000.0, &HOUSE.whole().grown(-96.0), &HOUSE);
        assert!((corner[0] - 96.0).abs() < 1e-9 && (corner[1] - 96.0).abs() < 1e-9);
    }
}
