//! How wide words are, so that they can be laid out without a browser.
//!
//! Advance widths of the sans with tabular figures, without kerning. Kerning makes a name at most 5 %
//! narrower ("AVATAR") and a line of text less than 1 %, so what is laid out here always has room.

mod widths;

use widths::{CODES, W400, W500, W600, W700};

/// Height of capitals, part of the size.
pub const CAP_HEIGHT: f64 = 0.668;
/// Height of small letters without ascender, part of the size.
pub const X_HEIGHT: f64 = 0.496;
/// How far letters reach below the baseline, part of the size.
pub const DESCENT: f64 = 0.22;
/// How far accents on capitals reach above the baseline, part of the size.
pub const ASCENT: f64 = 0.92;

/// Width of characters that the sans doesn't have, in thousandths of the size: that of a wide letter.
const UNKNOWN: u16 = 850;

/// Width of a text, in the unit of `size`. Weights between the four of the house take the next heavier one.
pub fn width(text: &str, size: f64, weight: u16) -> f64 {
    let table = match weight {
        0..=400 => &W400,
        401..=500 => &W500,
        501..=600 => &W600,
        _ => &W700,
    };
    let sum: u32 = text.chars().map(|c| u32::from(advance(c, table))).sum();
    f64::from(sum) * size / 1000.0
}

fn advance(character: char, table: &[u16]) -> u16 {
    let index = u16::try_from(u32::from(character)).ok().and_then(|code| CODES.binary_search(&code).ok());
    index.and_then(|i| table.get(i)).copied().unwrap_or(UNKNOWN)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn codes_are_in_order() {
        assert!(CODES.windows(2).all(|w| w[0] < w[1]));
    }

    #[test]
    fn figures_are_tabular() {
        for weight in [400, 500, 600, 700] {
            let zero = width("0", 1.0, weight);
            assert!("123456789".chars().all(|c| (width(&c.to_string(), 1.0, weight) - zero).abs() < 1e-12));
        }
    }

    #[test]
    fn widths_agree_with_a_shaper() {
        // Shaped by HarfBuzz with tabular figures and without kerning, in thousandths of the size.
        for (text, weight, shaped) in [
            ("Six slices, twenty days each.", 400, 12324.0),
            ("3,245 million million km²", 500, 11590.0),
            ("Yr un arwynebedd bob tro", 600, 11935.0),
            ("1 September 2031", 400, 8578.0),
        ] {
            assert!(
                (width(text, 1000.0, weight) - shaped).abs() < 0.5,
                "{text}: {}",
                width(text, 1000.0, weight)
            );
        }
    }

    #[test]
    fn welsh_is_covered() {
        for c in "âêîôûŵŷÂÊÎÔÛŴŶáéíóúẃýàèìòùẁỳäëïöüẅÿ".chars() {
            assert!(CODES.binary_search(&u16::try_from(u32::from(c)).unwrap()).is_ok(), "{c}");
        }
    }
}
