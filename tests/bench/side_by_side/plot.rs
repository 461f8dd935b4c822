//! The plot: how the energy error of the Sun and eight planets grows with the steps.

use std::ops::Range;
use std::path::Path;

use fallaround_bench_work::{run, starts};
use fallaround_core::constants::YEAR_S;
use fallaround_core::math::float;
use plotters::prelude::*;
use plotters::style::text_anchor::{HPos, Pos, VPos};

/// How many slightly different starts.
const STARTS: u32 = 8;

/// How far, years.
const YEARS: f64 = 5000.0;

/// Looks to a decade of steps.
const PER_DECADE: f64 = 12.0;

/// The colours of the look: ground, rules, three inks, the lamp and a body.
const GROUND: RGBColor = RGBColor(0x0c, 0x0a, 0x08);
const RULE: RGBColor = RGBColor(0x3a, 0x33, 0x2a);
const AXIS: RGBColor = RGBColor(0x6e, 0x64, 0x56);
const INK: RGBColor = RGBColor(0xef, 0xe6, 0xd4);
const INK_2: RGBColor = RGBColor(0xc4, 0xb9, 0xa5);
const INK_3: RGBColor = RGBColor(0x97, 0x8c, 0x7a);
const LAMP: RGBColor = RGBColor(0xf4, 0xa0, 0x2c);
const BODY: RGBColor = RGBColor(0x93, 0xd4, 0xf7);

const SANS: &str = "Atkinson Next, system-ui, sans-serif";
const STEPS: Range<f64> = 3e3..1e6;
const ERRORS: Range<f64> = 1e-18..1e-14;

/// Energy errors of one start: at how many steps, and how large.
type Errors = Vec<(f64, f64)>;

/// Draws it.
///
/// # Errors
/// When it can't be written.
pub(crate) fn draw(file: &Path) -> Result<(), String> {
    let all: Vec<Errors> = (0..STARTS).map(errors).collect();
    let mean = mean(&all);
    paint(file, &all, &mean).map_err(|e| format!("{}: {e}", file.display()))
}

/// Of a start in which each planet is moved by up to some metres. Working out an energy has roundings of its own, larger than what is
/// sought; so it is the mean of all steps since the last look, against that of the first look.
fn errors(start: u32) -> Errors {
    let mut initial = starts::planets();
    for (n, body) in initial.bodies.iter_mut().enumerate().skip(1) {
        body.pos.x += f64::from(start) * n as f64;
    }
    let mut errors = Vec::new();
    let (mut next, mut sum, mut count, mut first) = (STEPS.start, 0.0, 0.0, None);
    run::follow(&initial, YEARS * YEAR_S, 1.0, |steps, error| {
        let steps = f64::from(steps);
        sum += error;
        count += 1.0;
        if steps >= next {
            let mean = sum / count;
            match first {
                None => first = Some(mean),
                Some(first) => errors.push((steps, f64::abs(mean - first))),
            }
            (sum, count) = (0.0, 0.0);
            next *= float::pow(10.0, 1.0 / PER_DECADE);
        }
    });
    errors
}

/// Root of the mean square over all starts.
fn mean(all: &[Errors]) -> Errors {
    let looks = all.iter().map(Vec::len).min().unwrap_or_default();
    (0..looks)
        .map(|i| {
            let squares: f64 = all.iter().map(|errors| errors[i].1 * errors[i].1).sum();
            (all[0][i].0, (squares / all.len() as f64).sqrt())
        })
        .collect()
}

/// The factor of the square root that fits the second half of the looks best, on the scale of the plot.
fn factor(mean: &Errors) -> f64 {
    let late = &mean[mean.len() / 2..];
    let sum: f64 = late.iter().map(|(steps, error)| float::ln(error / steps.sqrt())).sum();
    float::exp(sum / late.len() as f64)
}

fn paint(file: &Path, all: &[Errors], mean: &Errors) -> Result<(), Box<dyn std::error::Error>> {
    let root = SVGBackend::new(file, (1200, 760)).into_drawing_area();
    root.fill(&GROUND)?;
    let text = |size: i32, colour: &RGBColor| (SANS, size).into_font().color(colour);
    root.draw(&Text::new("The energy error over a million steps", (56, 40), text(30, &INK)))?;
    let second = format!(
        "Sun and 8 planets, {YEARS} years by Gauss-Radau, {STARTS} starts that differ by metres; roundings alone grow like √steps"
    );
    root.draw(&Text::new(second, (56, 80), text(19, &INK_2)))?;
    let mut chart = ChartBuilder::on(&root)
        .margin_top(140)
        .margin_bottom(40)
        .margin_left(40)
        .margin_right(150)
        .x_label_area_size(50)
        .y_label_area_size(80)
        .build_cartesian_2d(STEPS.log_scale(), ERRORS.log_scale())?;
    chart
        .configure_mesh()
        .bold_line_style(RULE)
        .light_line_style(GROUND)
        .axis_style(AXIS)
        .x_labels(5)
        .y_labels(3)
        .x_label_formatter(&|steps| thousands(*steps))
        .y_label_formatter(&|error| format!("{error:.0e}"))
        .label_style(text(18, &INK_3))
        .draw()?;
    root.draw(&Text::new(
        "relative energy error, mean of the steps since the point before",
        (56, 122),
        text(18, &INK_3),
    ))?;
    let end = Pos::new(HPos::Right, VPos::Top);
    root.draw(&Text::new("steps", (1050, 704), text(18, &INK_3).pos(end)))?;

    for errors in all {
        chart.draw_series(LineSeries::new(errors.iter().copied(), INK_3.mix(0.62).stroke_width(1)))?;
    }
    let k = factor(mean);
    let law = [STEPS.start.max((ERRORS.start / k) * (ERRORS.start / k)), STEPS.end];
    chart.draw_series(LineSeries::new(law.map(|steps| (steps, k * steps.sqrt())), LAMP.stroke_width(3)))?;
    chart.draw_series(LineSeries::new(mean.iter().copied(), BODY.stroke_width(2)))?;
    // Names stand on their lines.
    chart.draw_series([Text::new(
        format!("{k:.1e} √steps (Brouwer 1937)"),
        (4e3, 2e-18),
        text(20, &LAMP),
    )])?;
    if let Some(&(steps, error)) = mean.last() {
        chart.draw_series([Text::new("root mean square", (1.1 * steps, error), text(18, &BODY))])?;
    }
    root.present()?;
    Ok(())
}

fn thousands(number: f64) -> String {
    if number >= 1e6 {
        format!("{:.0} million", number / 1e6)
    } else if number >= 1e3 {
        format!("{:.0},000", number / 1e3)
    } else {
        format!("{number:.0}")
    }
}
