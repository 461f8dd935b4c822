//! From a show and an instant of its clock to a list of things to paint.

pub mod caption;
pub mod compose;
pub mod emptiness;
#[cfg(test)]
mod fixture;
pub mod frame;
pub mod geometry;
pub mod labels;
pub mod layout;
pub mod list;
pub mod look;
pub mod marks;
pub mod passage;
pub mod sample;
pub mod scene;
pub mod scouts;
pub mod type_metrics;
pub mod view;
pub mod wording;
pub mod words;

pub use compose::Composer;
pub use list::*;

/// The window that a picture is made for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Screen {
    /// Width, device pixels.
    pub width_px: f64,
    /// Height, device pixels.
    pub height_px: f64,
    /// Device pixels per CSS pixel.
    pub density: f64,
}

/// What the audience wants to see it like.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Options {
    /// Language of captions, foot line and read-outs, as a BCP 47 tag; empty: the scenario's own.
    pub language: String,
    /// No moves between views: cross-fades instead.
    pub reduced_motion: bool,
}
