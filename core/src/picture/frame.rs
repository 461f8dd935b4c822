//! The window that the picture is made for, and the sizes that follow from it.

use super::geometry::Rect;
use super::{Screen, look};

/// Sizes of one picture, px.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Frame {
    /// Width of the window.
    pub width: f64,
    /// Height of the window.
    pub height: f64,
    /// Height of the largest 16:9 frame inside the window: what a view's span covers.
    pub scene: f64,
    /// What sizes of text and marks are parts of: the height of the 16:9 frame of the same area as the window, and
    /// never more than the window's height or 1.2 of its width. At 16:9 it is the height.
    pub em: f64,
    /// Device pixels per CSS pixel.
    pub density: f64,
    /// Size of labels and foot line.
    pub label: f64,
    /// Size of the caption.
    pub caption: f64,
    /// Width of the free margin.
    pub margin: f64,
    /// Whether there is room for words at all.
    pub has_text: bool,
}

impl Frame {
    /// For a window. Sizes that are no numbers, or less than a pixel, count as one pixel.
    pub fn new(screen: Screen) -> Self {
        let sane = |v: f64, least: f64| if v.is_finite() && v > least { v } else { least };
        let (width, height) = (sane(screen.width_px, 1.0), sane(screen.height_px, 1.0));
        let density = sane(screen.density, 0.1);
        let scene = height.min(width * 9.0 / 16.0);
        let em = (0.75 * (width * height).sqrt()).min(height).min(1.2 * width);
        let label = (em * look::LABEL).max(look::TEXT_FLOOR_CSS_PX * density);
        let caption = (em * look::CAPTION).max(look::CAPTION_FLOOR_CSS_PX * density);
        let has_text = height.min(width) >= look::THUMBNAIL_CSS_PX * density;
        // A phone held upright has no room for the margin of a dome's wall.
        let margin = (em * look::MARGIN).min(0.055 * width.max(height)).min(0.09 * width.min(height));
        Self { width, height, scene, em, density, label, caption, margin, has_text }
    }

    /// The whole window.
    pub const fn whole(&self) -> Rect {
        Rect { left: 0.0, top: 0.0, right: self.width, bottom: self.height }
    }

    /// A part of the picture's height as a line's width; never thinner than a device pixel.
    pub fn line(&self, part: f64) -> f64 {
        (self.em * part).max(1.0)
    }

    /// A part of the picture's height.
    pub fn part(&self, part: f64) -> f64 {
        self.em * part
    }

    /// Baseline of the foot line.
    pub fn foot_baseline(&self) -> f64 {
        self.height - self.margin.max(0.75 * self.label) + 0.3 * self.label
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn frame(width_px: f64, height_px: f64, density: f64) -> Frame {
        Frame::new(Screen { width_px, height_px, density })
    }

    #[test]
    fn the_house_is_set_as_its_sheet_says() {
        let f = frame(1920.0, 1080.0, 1.0);
        assert!(
            (f.caption - 60.0).abs() < 0.1 && (f.label - 42.0).abs() < 0.1 && (f.margin - 96.0).abs() < 2.0
        );
        assert!((f.scene - 1080.0).abs() < 1e-9);
    }

    #[test]
    fn small_screens_keep_readable_text() {
        for (w, h, density) in
            [(390.0, 844.0, 1.0), (1170.0, 2532.0, 3.0), (320.0, 480.0, 1.0), (400.0, 225.0, 1.0)]
        {
            let f = frame(w, h, density);
            assert!(f.label >= 13.0 * density && f.has_text);
        }
        assert!(!frame(192.0, 108.0, 1.0).has_text);
    }

    #[test]
    fn labels_keep_their_floor_in_large_windows_of_usual_shapes() {
        for (w, h) in [(1920.0, 1080.0), (1280.0, 720.0), (1024.0, 768.0)] {
            let f = frame(w, h, 1.0);
            assert!(f.label >= look::LABEL_FLOOR * f.scene);
        }
    }

    #[test]
    fn no_window_is_too_odd() {
        for (w, h, d) in [(0.0, 0.0, 0.0), (f64::NAN, 10.0, 1.0), (5.0, f64::INFINITY, -1.0)] {
            let f = frame(w, h, d);
            assert!(f.label.is_finite() && f.width >= 1.0 && f.height >= 1.0 && f.margin >= 0.0);
        }
    }
}
