//! The display list: plain data in pixels that any painter can paint from first to last.
//!
//! Pixels are device pixels of the picture; y grows downwards. A painter needs no knowledge of orbits.

use crate::scenario::{BodyId, SwarmId};

/// A whole picture.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct DisplayList {
    /// Width, px.
    pub width: f64,
    /// Height, px.
    pub height: f64,
    /// The ground, painted first.
    pub ground: Colour,
    /// What is painted on it, in order.
    pub items: Vec<Item>,
}

/// A colour with its opacity, each 0 to 255 in sRGB.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Colour {
    /// Red.
    pub r: u8,
    /// Green.
    pub g: u8,
    /// Blue.
    pub b: u8,
    /// Opacity.
    pub a: u8,
}

/// One thing to paint, and what it stands for.
#[derive(Debug, Clone, PartialEq)]
pub struct Item {
    /// What it stands for.
    pub tag: Tag,
    /// How it is painted.
    pub shape: Shape,
}

/// What an item stands for, for tests, read-outs and pointers.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Tag {
    /// A body itself.
    Body(BodyId),
    /// Its name.
    Label(BodyId),
    /// The tail of a comet.
    Tail(BodyId),
    /// A trail, path, conic or apsis of a body.
    Line(BodyId),
    /// The n-th sector of a body.
    Sector(BodyId, usize),
    /// An arrow at a body.
    Arrow(BodyId),
    /// A number that belongs to a body.
    Number(BodyId),
    /// The points of a swarm, or its name.
    Swarm(SwarmId),
    /// The caption.
    Caption,
    /// Scale bar, date, pace.
    Foot,
    /// The veil over a cut.
    Veil,
}

/// A line.
#[derive(Debug, Clone, PartialEq)]
pub struct Stroke {
    /// Width, px.
    pub width: f64,
    /// Colour.
    pub colour: Colour,
    /// Lengths of dash and gap, px; `None`: unbroken.
    pub dash: Option<[f64; 2]>,
    /// Whether the ends are round.
    pub round: bool,
}

/// How something is painted.
#[derive(Debug, Clone, PartialEq)]
pub enum Shape {
    /// A line through points.
    Line {
        /// Points, px.
        points: Vec<[f64; 2]>,
        /// Whether the last point joins the first.
        closed: bool,
        /// The stroke.
        stroke: Stroke,
    },
    /// Separate straight pieces with one stroke: hatches, dots, ticks. One path for a painter, never dashed.
    Segments {
        /// Both ends of each, px.
        segments: Vec<[[f64; 2]; 2]>,
        /// The stroke.
        stroke: Stroke,
    },
    /// A filled area; the even-odd rule holds.
    Area {
        /// Outline, px.
        points: Vec<[f64; 2]>,
        /// Fill.
        fill: Colour,
    },
    /// A disc, with an optional rim.
    Disc {
        /// Centre, px.
        at: [f64; 2],
        /// Radius, px.
        radius: f64,
        /// Fill.
        fill: Option<Colour>,
        /// Rim.
        rim: Option<Stroke>,
    },
    /// Many small squares of one size and colour, with edges that may lie within pixels. They come first in a list, but for
    /// those in front of something large.
    Points {
        /// The middle of each, px.
        points: Vec<[f64; 2]>,
        /// Length of a side, px.
        size: f64,
        /// Colour.
        colour: Colour,
    },
    /// One line of text.
    Text {
        /// Where, px: on the baseline, at the end that `anchor` says.
        at: [f64; 2],
        /// The words, never markup.
        text: String,
        /// Height of the type (em), px.
        size: f64,
        /// Weight: 400, 500, 600 or 700, of the sans.
        weight: u16,
        /// Colour.
        colour: Colour,
        /// Which end stands at `at`.
        anchor: Anchor,
        /// Width of an edge in the ground's colour that is painted first, px; 0: none.
        edge: f64,
    },
}

/// Which end of a text stands at its point.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Anchor {
    /// The text starts there.
    Start,
    /// Its middle is there.
    Middle,
    /// It ends there.
    End,
}
