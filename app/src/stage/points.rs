//! Many points as pixels: written here, and handed to the canvas in one piece.
//!
//! A canvas takes ten thousand points several times quicker as one image than as rectangles.

use fallaround_core::picture::{Colour, Item, Shape};
use wasm_bindgen::Clamped;
use web_sys::{CanvasRenderingContext2d, ImageData};

/// The pixels of a picture's ground with the points on it.
#[derive(Debug, Default)]
pub struct Pixels {
    width: usize,
    height: usize,
    ground: Colour,
    /// Red, green, blue, opacity of each pixel, row by row.
    bytes: Vec<u8>,
    /// Pixels that are not ground any more, by index.
    touched: Vec<usize>,
}

impl Pixels {
    /// Paints the ground and the points with which a list starts; how many of its items that were. None, where the canvas
    /// takes no image.
    pub fn paint(
        &mut self,
        ctx: &CanvasRenderingContext2d,
        size: [f64; 2],
        ground: Colour,
        items: &[Item],
    ) -> usize {
        let leading = items.iter().take_while(|item| matches!(item.shape, Shape::Points { .. })).count();
        let (Some(width), Some(height)) = (whole(size[0]), whole(size[1])) else { return 0 };
        if leading == 0 {
            return 0;
        }
        self.clear(width, height, ground);
        for item in &items[..leading] {
            if let Shape::Points { points, size, colour } = &item.shape {
                for point in points {
                    self.square(*point, 0.5 * size, *colour);
                }
            }
        }
        let (Ok(columns), Ok(rows)) = (u32::try_from(width), u32::try_from(height)) else { return 0 };
        let image = ImageData::new_with_u8_clamped_array_and_sh(Clamped(&self.bytes), columns, rows);
        let put = image.and_then(|image| ctx.put_image_data(&image, 0.0, 0.0));
        if put.is_ok() { leading } else { 0 }
    }

    /// Ground everywhere: what was touched is put back, all of it only where size or ground are new.
    fn clear(&mut self, width: usize, height: usize, ground: Colour) {
        let pixel = [ground.r, ground.g, ground.b, 255];
        if (width, height, ground) == (self.width, self.height, self.ground) {
            for index in self.touched.drain(..) {
                if let Some(bytes) = self.bytes.get_mut(4 * index..4 * index + 4) {
                    bytes.copy_from_slice(&pixel);
                }
            }
            return;
        }
        (self.width, self.height, self.ground) = (width, height, ground);
        self.touched.clear();
        self.bytes = pixel.repeat(width * height);
    }

    /// A square around a point; each pixel takes as much of its colour as it is covered.
    fn square(&mut self, [x, y]: [f64; 2], half: f64, colour: Colour) {
        let (columns, rows) = (span(x, half, self.width), span(y, half, self.height));
        for row in rows {
            let down = covered(row, y, half);
            for column in columns.clone() {
                let share = f64::from(colour.a) / 255.0 * down * covered(column, x, half);
                let index = row * self.width + column;
                let Some(bytes) = self.bytes.get_mut(4 * index..4 * index + 3) else { continue };
                for (byte, own) in bytes.iter_mut().zip([colour.r, colour.g, colour.b]) {
                    *byte = mixed(*byte, own, share);
                }
                self.touched.push(index);
            }
        }
    }
}

/// A canvas's side in whole pixels.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "checked to be a size that a canvas can have"
)]
fn whole(side: f64) -> Option<usize> {
    (1.0..=16_384.0).contains(&side).then_some(side as usize)
}

/// The pixels from 0 to below `end` that an interval touches.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped to the picture before")]
fn span(middle: f64, half: f64, end: usize) -> std::ops::Range<usize> {
    let most = f64::from(u32::try_from(end).unwrap_or(u32::MAX));
    let [from, until] = [(middle - half).floor(), (middle + half).ceil()].map(|v| v.clamp(0.0, most));
    from as usize..until as usize
}

/// Which share of a pixel an interval covers.
fn covered(pixel: usize, middle: f64, half: f64) -> f64 {
    let from = f64::from(u32::try_from(pixel).unwrap_or(u32::MAX));
    ((middle + half).min(from + 1.0) - (middle - half).max(from)).clamp(0.0, 1.0)
}

/// One channel laid over another.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "between two bytes")]
fn mixed(under: u8, over: u8, share: f64) -> u8 {
    let (under, over) = (f64::from(under), f64::from(over));
    (under + (over - under) * share + 0.5) as u8
}

#[cfg(test)]
mod tests {
    use super::*;

    const GROUND: Colour = Colour { r: 10, g: 10, b: 10, a: 255 };

    fn pixels() -> Pixels {
        let mut pixels = Pixels::default();
        pixels.clear(4, 3, GROUND);
        pixels
    }

    fn red(pixels: &Pixels) -> Vec<u8> {
        pixels.bytes.chunks_exact(4).map(|pixel| pixel[0]).collect()
    }

    #[test]
    fn a_square_covers_pixels_in_part() {
        let mut pixels = pixels();
        let colour = Colour { r: 210, g: 10, b: 10, a: 255 };
        // From 1.0 to 2.5 across and 0.5 to 2.0 down.
        pixels.square([1.75, 1.25], 0.75, colour);
        assert_eq!(red(&pixels), [10, 110, 60, 10, 10, 210, 110, 10, 10, 10, 10, 10]);
        assert!(pixels.bytes.chunks_exact(4).all(|pixel| pixel[3] == 255));
    }

    #[test]
    fn what_was_drawn_is_gone_in_the_next_picture() {
        let mut pixels = pixels();
        pixels.square([1.75, 1.25], 0.75, Colour { r: 210, ..GROUND });
        pixels.clear(4, 3, GROUND);
        assert_eq!(red(&pixels), [10; 12]);
    }

    #[test]
    fn points_at_and_beyond_the_edges_are_cut() {
        let mut pixels = pixels();
        for at in [[-5.0, 1.0], [9.0, 1.0], [2.0, -7.0], [2.0, 70.0]] {
            pixels.square(at, 1.0, Colour { r: 210, ..GROUND });
        }
        assert_eq!(red(&pixels), [10; 12]);
        pixels.square([4.0, 3.0], 1.0, Colour { r: 210, ..GROUND });
        assert_eq!(red(&pixels), [10, 10, 10, 10, 10, 10, 10, 10, 10, 10, 10, 210]);
    }
}
