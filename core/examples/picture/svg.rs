//! A display list as an SVG file.

use fallaround_core::picture::{Anchor, Colour, DisplayList, Shape, Stroke};
use std::fmt::Write;

/// The whole list. `fonts` goes into the style sheet as it stands.
pub(crate) fn svg(list: &DisplayList, fonts: &str) -> String {
    let (w, h) = (list.width, list.height);
    let mut out = format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{w}\" height=\"{h}\" viewBox=\"0 0 {w} {h}\">\n<style>{fonts}\
         text{{font-family:'Atkinson Hyperlegible Next',sans-serif;font-variant-numeric:tabular-nums;paint-order:stroke;\
         stroke-linejoin:round;white-space:pre}}</style>\n"
    );
    let _infallible = writeln!(out, "<rect width=\"{w}\" height=\"{h}\" fill=\"{}\"/>", hex(list.ground));
    for item in &list.items {
        let _infallible = writeln!(out, "{}<!-- {:?} -->", shape(&item.shape, list.ground), item.tag);
    }
    out.push_str("</svg>\n");
    out
}

fn shape(shape: &Shape, ground: Colour) -> String {
    match shape {
        Shape::Line { points, closed, stroke } => {
            let end = if *closed { "Z" } else { "" };
            format!("<path d=\"M{}{end}\" fill=\"none\" {}/>", joined(points), stroked(stroke))
        }
        Shape::Segments { segments, stroke } => {
            let d: String = segments.iter().map(|s| format!("M{}", joined(s))).collect();
            format!("<path d=\"{d}\" fill=\"none\" {}/>", stroked(stroke))
        }
        Shape::Area { points, fill } => {
            format!(
                "<path d=\"M{}Z\" fill-rule=\"evenodd\" fill=\"{}\" fill-opacity=\"{:.3}\"/>",
                joined(points),
                hex(*fill),
                opacity(*fill)
            )
        }
        Shape::Disc { at, radius, fill, rim } => {
            let fill = fill.map_or("fill=\"none\"".to_owned(), |f| {
                format!("fill=\"{}\" fill-opacity=\"{:.3}\"", hex(f), opacity(f))
            });
            let rim = rim.as_ref().map(stroked).unwrap_or_default();
            format!("<circle cx=\"{:.2}\" cy=\"{:.2}\" r=\"{radius:.2}\" {fill} {rim}/>", at[0], at[1])
        }
        Shape::Points { points, size, colour } => {
            let half = 0.5 * size;
            let square = |p: &[f64; 2]| {
                format!("M{:.2},{:.2}h{size:.2}v{size:.2}h-{size:.2}z", p[0] - half, p[1] - half)
            };
            let d: String = points.iter().map(square).collect();
            format!("<path d=\"{d}\" fill=\"{}\" fill-opacity=\"{:.3}\"/>", hex(*colour), opacity(*colour))
        }
        Shape::Text { at, text, size, weight, colour, anchor, edge } => {
            let anchor = match anchor {
                Anchor::Start => "start",
                Anchor::Middle => "middle",
                Anchor::End => "end",
            };
            let escaped = text.replace('&', "&amp;").replace('<', "&lt;");
            format!(
                "<text x=\"{:.2}\" y=\"{:.2}\" font-size=\"{size:.2}\" font-weight=\"{weight}\" text-anchor=\"{anchor}\" \
                 fill=\"{}\" stroke=\"{}\" stroke-width=\"{edge:.2}\" opacity=\"{:.3}\">{escaped}</text>",
                at[0],
                at[1],
                hex(*colour),
                hex(ground),
                opacity(*colour)
            )
        }
    }
}

fn joined(points: &[[f64; 2]]) -> String {
    points.iter().map(|p| format!("{:.2},{:.2}", p[0], p[1])).collect::<Vec<_>>().join(" ")
}

fn stroked(stroke: &Stroke) -> String {
    let dash = stroke.dash.map(|[on, off]| format!(" stroke-dasharray=\"{on} {off}\"")).unwrap_or_default();
    let ends = if stroke.round { "round" } else { "butt" };
    format!(
        "stroke=\"{}\" stroke-opacity=\"{:.3}\" stroke-width=\"{:.2}\" stroke-linecap=\"{ends}\" stroke-linejoin=\"round\"{dash}",
        hex(stroke.colour),
        opacity(stroke.colour),
        stroke.width
    )
}

fn hex(c: Colour) -> String {
    format!("#{:02x}{:02x}{:02x}", c.r, c.g, c.b)
}

fn opacity(c: Colour) -> f64 {
    f64::from(c.a) / 255.0
}
