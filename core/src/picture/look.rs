//! The look of the house, set down once: colours, sizes as parts of the picture's height, easing.
//!
//! Night, warm near-black ground, one lamp. The lamp's colour marks only what is being explained, the cool
//! one only model time. Contrast on the ground is stated where text is set in a colour (text needs 4.5).

use super::list::Colour;
use crate::scenario;

const fn rgb(hex: u32) -> Colour {
    let bytes = hex.to_be_bytes();
    Colour { r: bytes[1], g: bytes[2], b: bytes[3], a: 255 }
}

/// The ground of house, stage and kiosk.
pub const GROUND: Colour = rgb(0x000c_0a08);
/// What is solid and large: the disc of a planet that fills part of the picture.
pub const SOLID: Colour = rgb(0x001f_1a14);
/// Axes, conics: lines that stay behind (3.4 on the ground).
pub const RULE: Colour = rgb(0x006e_6456);
/// Words and numbers (15.9).
pub const INK: Colour = rgb(0x00ef_e6d4);
/// Second reading (10.2).
pub const INK_2: Colour = rgb(0x00c4_b9a5);
/// Quiet lines and small labels (6.0).
pub const INK_3: Colour = rgb(0x0097_8c7a);
/// What is being explained (9.3).
pub const LAMP: Colour = rgb(0x00f4_a02c);
/// The quiet line of what is being explained (4.8).
pub const LAMP_2: Colour = rgb(0x00a8_722a);
/// Model time and nothing else (8.8).
pub const COOL: Colour = rgb(0x008f_b2c4);

/// The colour of a body. Smallest CIEDE2000 between two of them: 24.3 in normal sight, 13.8 in any other.
pub const fn body(colour: scenario::Colour) -> Colour {
    match colour {
        scenario::Colour::Bone => rgb(0x00fb_f6ea),
        scenario::Colour::Green => rgb(0x001a_ae7c),
        scenario::Colour::Vermilion => rgb(0x00dd_5a26),
        scenario::Colour::Yellow => rgb(0x00e8_d44c),
        scenario::Colour::Sky => rgb(0x0093_d4f7),
        scenario::Colour::Blue => rgb(0x004a_7cc4),
    }
}

/// Opacity of a sector's tint: of the lamp and of the ink, in turn.
pub const SECTOR_TINTS: [(Colour, f64); 2] = [(LAMP, 0.26), (INK, 0.13)];
/// Turn of the hatch from one sector to the next, radians (30 degrees).
pub const HATCH_TURN_RAD: f64 = core::f64::consts::PI / 6.0;
/// Opacity of lines (never of text) that are over.
pub const PAST: f64 = 0.62;

/// Show time in which the picture moves from one view to the next, seconds.
pub const SCENE_S: f64 = crate::show::VIEW_MOVE_S;
/// Show time in which one view is cross-faded into the next where nothing should move, seconds.
pub const CROSS_FADE_S: f64 = 0.2;
/// Show time in which a mark is drawn on, seconds.
pub const CALM_S: f64 = 0.4;

/// Caption, part of the picture's height.
pub const CAPTION: f64 = 1.0 / 18.0;
/// Labels and foot line; never below [`LABEL_FLOOR`].
pub const LABEL: f64 = 1.0 / 25.7;
/// The least size of any text that an audience should read.
pub const LABEL_FLOOR: f64 = 1.0 / 28.0;
/// The least size of any text on a small screen, CSS px.
pub const TEXT_FLOOR_CSS_PX: f64 = 13.0;
/// The least size of a caption on a small screen, CSS px.
pub const CAPTION_FLOOR_CSS_PX: f64 = 17.0;
/// Pictures less high than this, CSS px, are thumbnails: they carry no text.
pub const THUMBNAIL_CSS_PX: f64 = 170.0;
/// A trail: what a body has flown.
pub const TRAIL: f64 = 1.0 / 270.0;
/// Marks.
pub const MARK: f64 = 1.0 / 360.0;
/// Quiet lines.
pub const THIN: f64 = 1.0 / 540.0;
/// What is pointed at: arrows, bars.
pub const STRONG: f64 = 1.0 / 216.0;
/// Hatch, edges of sectors, tails of comets.
pub const HATCH: f64 = 1.0 / 450.0;
/// From one hatch line to the next.
pub const HATCH_STEP: f64 = 1.0 / 83.0;
/// From one dot of a dotted line to the next.
pub const DOT_STEP: f64 = 1.0 / 83.0;
/// The margin left free around captions and foot line.
pub const MARGIN: f64 = 96.0 / 1080.0;
/// The least margin of a caption that has no room for that one.
pub const LEAST_MARGIN: f64 = 48.0 / 1080.0;
/// The ground-coloured edge of a disc, that parts it from the lines that end at it.
pub const DISC_EDGE: f64 = 1.0 / 300.0;

/// The least radius of a body's disc, part of the picture's height. A body that is larger is drawn true.
pub const fn least_radius(kind: scenario::Kind) -> f64 {
    match kind {
        scenario::Kind::Star => 1.0 / 78.0,
        scenario::Kind::Planet | scenario::Kind::Comet => 1.0 / 98.0,
        scenario::Kind::Ball | scenario::Kind::Station => 1.0 / 110.0,
        scenario::Kind::Moon | scenario::Kind::Rock => 1.0 / 135.0,
    }
}

/// A colour with its opacity multiplied, 0 to 1.
pub fn fade(colour: Colour, opacity: f64) -> Colour {
    Colour { a: channel(f64::from(colour.a) * opacity.clamp(0.0, 1.0)), ..colour }
}

/// From one colour to another, 0 to 1, in sRGB.
pub fn mix(from: Colour, to: Colour, share: f64) -> Colour {
    let s = share.clamp(0.0, 1.0);
    let between = |a: u8, b: u8| channel(f64::from(a) * (1.0 - s) + f64::from(b) * s);
    Colour {
        r: between(from.r, to.r),
        g: between(from.g, to.g),
        b: between(from.b, to.b),
        a: between(from.a, to.a),
    }
}

#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped to 0..=255 before")]
fn channel(value: f64) -> u8 {
    (value + 0.5).clamp(0.0, 255.0) as u8
}

/// The easing of every motion: the cubic Bezier curve from (0, 0) over (0.3, 0) and (0.2, 1) to (1, 1), as a
/// function of the share of time that has passed, 0 to 1. Exact to 1e-15 in time.
///
/// x(p) = 3 (1-p)² p 0.3 + 3 (1-p) p² 0.2 + p³ is solved for p by bisection, which the monotone x allows.
pub fn ease(share: f64) -> f64 {
    // Not a number counts as over: a picture that stands is better than one that never arrives.
    if share.is_nan() || share >= 1.0 {
        return 1.0;
    }
    if share <= 0.0 {
        return 0.0;
    }
    let bezier = |p: f64, first: f64, second: f64| {
        let q = 1.0 - p;
        3.0 * q * q * p * first + 3.0 * q * p * p * second + p * p * p
    };
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..52 {
        let middle = 0.5 * (low + high);
        if bezier(middle, 0.3, 0.2) < share { low = middle } else { high = middle }
    }
    bezier(0.5 * (low + high), 0.0, 1.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn easing_starts_and_ends_at_rest_and_never_turns_back() {
        assert!(ease(0.0).abs() < 1e-15 && (ease(1.0) - 1.0).abs() < 1e-15);
        assert!(ease(1e-4) < 1e-6 && 1.0 - ease(1.0 - 1e-4) < 1e-6);
        let mut last = 0.0;
        for i in 0..=1000 {
            let e = ease(f64::from(i) / 1000.0);
            assert!(e >= last);
            last = e;
        }
    }

    #[test]
    fn easing_goes_through_a_point_of_the_curve() {
        // p = 0.5: x = 3/8 0.3 + 3/8 0.2 + 1/8 = 0.3125, y = 3/8 + 1/8 = 0.5.
        assert!((ease(0.3125) - 0.5).abs() < 1e-13);
    }

    #[test]
    fn mixing_ends_at_its_ends() {
        assert_eq!(mix(LAMP, INK, 0.0), LAMP);
        assert_eq!(mix(LAMP, INK, 1.0), INK);
        assert_eq!(fade(LAMP, 0.5).a, 128);
    }
}
