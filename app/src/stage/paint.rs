//! Display list → Canvas 2D: the only drawing calls.
//!
//! It knows nothing of orbits. Lines of about one device pixel are drawn at exactly one: without a graphics
//! processor those are many times cheaper than slightly wider ones.

use super::points::Pixels;
use fallaround_core::picture::{Anchor, Colour, DisplayList, Shape, Stroke};
use web_sys::CanvasRenderingContext2d;

/// The sans, as `tokens.css` names it.
const FACE: &str = "\"Atkinson Next\", system-ui, sans-serif";

/// Paints a picture at the canvas's own pixels, then darkens it: `dark` 0 leaves it, 1 is black. With `pixels`, the points that
/// come first are written there; without, or on a canvas that is scaled, they are drawn as the rest is.
pub fn paint(ctx: &CanvasRenderingContext2d, list: &DisplayList, dark: f64, pixels: Option<&mut Pixels>) {
    ctx.set_global_alpha(1.0);
    if dark < 1.0 {
        ctx.set_line_join("round");
        let size = [list.width, list.height];
        let done = pixels.map_or(0, |pixels| pixels.paint(ctx, size, list.ground, &list.items));
        if done == 0 {
            ctx.set_fill_style_str(&css(list.ground));
            ctx.fill_rect(0.0, 0.0, list.width, list.height);
        }
        for item in list.items.iter().skip(done) {
            shape(ctx, &item.shape, list.ground);
        }
    }
    if dark > 0.0 {
        ctx.set_fill_style_str("#000");
        ctx.set_global_alpha(dark.min(1.0));
        ctx.fill_rect(0.0, 0.0, list.width, list.height);
        ctx.set_global_alpha(1.0);
    }
}

fn shape(ctx: &CanvasRenderingContext2d, shape: &Shape, ground: Colour) {
    match shape {
        Shape::Line { points, closed, stroke: with } => {
            if points.len() > 1 {
                trace(ctx, points, *closed);
                stroke(ctx, with);
            }
        }
        Shape::Segments { segments, stroke: with } => {
            ctx.begin_path();
            for [from, to] in segments {
                ctx.move_to(from[0], from[1]);
                ctx.line_to(to[0], to[1]);
            }
            stroke(ctx, with);
        }
        Shape::Area { points, fill } => {
            if points.len() > 2 {
                trace(ctx, points, true);
                ctx.set_fill_style_str(&css(*fill));
                ctx.fill_with_canvas_winding_rule(web_sys::CanvasWindingRule::Evenodd);
            }
        }
        Shape::Disc { at, radius, fill, rim } => {
            ctx.begin_path();
            // Only a negative radius is refused.
            if ctx.arc(at[0], at[1], radius.max(0.0), 0.0, std::f64::consts::TAU).is_ok() {
                if let Some(fill) = fill {
                    ctx.set_fill_style_str(&css(*fill));
                    ctx.fill();
                }
                if let Some(rim) = rim {
                    stroke(ctx, rim);
                }
            }
        }
        Shape::Points { points, size, colour } => {
            ctx.begin_path();
            for [x, y] in points {
                ctx.rect(x - 0.5 * size, y - 0.5 * size, *size, *size);
            }
            ctx.set_fill_style_str(&css(*colour));
            ctx.fill();
        }
        Shape::Text { at, text, size, weight, colour, anchor, edge } => {
            ctx.set_font(&format!("{weight} {size}px {FACE}"));
            ctx.set_text_align(match anchor {
                Anchor::Start => "left",
                Anchor::Middle => "center",
                Anchor::End => "right",
            });
            // Text that a canvas refuses to draw is text it can't lay out; the picture goes on without it.
            if *edge > 0.0 {
                ctx.set_stroke_style_str(&css(Colour { a: colour.a, ..ground }));
                ctx.set_line_width(edge * 2.0);
                no_dash(ctx);
                drop(ctx.stroke_text(text, at[0], at[1]));
            }
            ctx.set_fill_style_str(&css(*colour));
            drop(ctx.fill_text(text, at[0], at[1]));
        }
    }
}

fn trace(ctx: &CanvasRenderingContext2d, points: &[[f64; 2]], closed: bool) {
    ctx.begin_path();
    let mut points = points.iter();
    if let Some(first) = points.next() {
        ctx.move_to(first[0], first[1]);
    }
    for point in points {
        ctx.line_to(point[0], point[1]);
    }
    if closed {
        ctx.close_path();
    }
}

fn stroke(ctx: &CanvasRenderingContext2d, with: &Stroke) {
    ctx.set_stroke_style_str(&css(with.colour));
    ctx.set_line_width(device_width(with.width));
    ctx.set_line_cap(if with.round { "round" } else { "butt" });
    match with.dash {
        Some(dash) => dashed(ctx, &dash),
        None => no_dash(ctx),
    }
    ctx.stroke();
}

/// Widths that would hardly look wider than one device pixel become one.
fn device_width(width: f64) -> f64 {
    if width < 1.25 { width.clamp(0.5, 1.0) } else { width }
}

fn dashed(ctx: &CanvasRenderingContext2d, dash: &[f64]) {
    let lengths: js_sys::Array = dash.iter().map(|length| wasm_bindgen::JsValue::from_f64(*length)).collect();
    // Only negative or infinite lengths are refused; the line is then unbroken.
    drop(ctx.set_line_dash(&lengths));
}

fn no_dash(ctx: &CanvasRenderingContext2d) {
    dashed(ctx, &[]);
}

/// A colour as CSS writes it.
pub fn css(colour: Colour) -> String {
    let Colour { r, g, b, a } = colour;
    format!("#{r:02x}{g:02x}{b:02x}{a:02x}")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn colours_are_written_with_their_opacity() {
        assert_eq!(css(Colour { r: 244, g: 160, b: 44, a: 66 }), "#f4a02c42");
    }

    #[test]
    fn hairlines_are_one_device_pixel() {
        assert!((device_width(1.2) - 1.0).abs() < f64::EPSILON);
        assert!((device_width(3.0) - 3.0).abs() < f64::EPSILON);
    }
}
