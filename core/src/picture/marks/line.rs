//! Lines that paths, trails and conics share: parts hidden behind large bodies, dots that stand still.

use super::super::geometry::{Px, along, between, clip_piece, length};
use super::super::list::{Colour, Shape, Tag};
use super::super::look;
use super::super::sample::Sample;
use super::super::scene::{Scene, Spot, stroke};

/// The parts of a path that no large body hides.
pub fn unhidden(samples: &[Sample], solids: &[Spot]) -> Vec<Vec<Sample>> {
    let mut parts = vec![samples.to_vec()];
    for solid in solids {
        parts = parts.iter().flat_map(|part| in_front_of(part, solid)).collect();
    }
    parts
}

fn in_front_of(samples: &[Sample], solid: &Spot) -> Vec<Vec<Sample>> {
    let hidden =
        |s: &Sample| s.depth < solid.depth && length(between(solid.at, s.at)) < solid.true_radius - 0.5;
    if !samples.iter().any(hidden) {
        return vec![samples.to_vec()];
    }
    let mut parts: Vec<Vec<Sample>> = Vec::new();
    let mut last: Option<Sample> = None;
    for &s in samples {
        if let Some(before) = last {
            match (hidden(&before), hidden(&s)) {
                (true, false) => parts.push(vec![at_limb(&before, &s, solid), s]),
                (false, true) => {
                    if let Some(part) = parts.last_mut() {
                        part.push(at_limb(&s, &before, solid));
                    }
                }
                (false, false) => {
                    if let Some(part) = parts.last_mut() {
                        part.push(s);
                    }
                }
                (true, true) => {}
            }
        } else if !hidden(&s) {
            parts.push(vec![s]);
        }
        last = Some(s);
    }
    parts.retain(|part| part.len() > 1);
    parts
}

/// Where the piece from a point inside a disc to one outside crosses its limb.
fn at_limb(inside: &Sample, outside: &Sample, solid: &Spot) -> Sample {
    let d = between(inside.at, outside.at);
    let f = between(solid.at, inside.at);
    let (a, b) = (d[0] * d[0] + d[1] * d[1], f[0] * d[0] + f[1] * d[1]);
    let c = f[0] * f[0] + f[1] * f[1] - solid.true_radius * solid.true_radius;
    let root = (b * b - a * c).max(0.0).sqrt();
    let share = if a > 0.0 { ((root - b) / a).clamp(0.0, 1.0) } else { 0.0 };
    Sample {
        at: along(inside.at, d, share),
        depth: inside.depth + (outside.depth - inside.depth) * share,
        t_s: inside.t_s + (outside.t_s - inside.t_s) * share,
    }
}

/// Length of a line, px.
pub fn line_length(points: &[Px]) -> f64 {
    points.windows(2).map(|w| length(between(w[0], w[1]))).sum()
}

/// Adds a line of dots, the first one `before_first` from the line's start.
pub fn add_dots(
    scene: &mut Scene<'_>,
    tag: Tag,
    points: &[Px],
    width: f64,
    colour: Colour,
    before_first: f64,
) {
    let step = scene.frame.part(look::DOT_STEP).max(2.5 * width);
    let keep = scene.keep();
    let mut segments = Vec::new();
    let mut next = before_first.rem_euclid(step);
    let mut gone = 0.0;
    for w in points.windows(2) {
        let piece = between(w[0], w[1]);
        let l = length(piece);
        if !(l > 0.0 && l.is_finite()) {
            continue;
        }
        // What lies outside is stepped over at once.
        let reach = clip_piece(w[0], w[1], &keep);
        if let Some([a, b]) = reach {
            let (first, last) = (gone + length(between(w[0], a)), gone + length(between(w[0], b)));
            if next < first {
                next += ((first - next) / step).ceil() * step;
            }
            while next <= last && segments.len() < 4000 {
                let at = along(w[0], piece, (next - gone) / l);
                segments.push([at, [at[0] + 0.01, at[1]]]);
                next += step;
            }
        }
        gone += l;
        if next < gone {
            next += ((gone - next) / step).ceil() * step;
        }
    }
    if !segments.is_empty() {
        scene.add(tag, Shape::Segments { segments, stroke: stroke(width, colour) });
    }
}
