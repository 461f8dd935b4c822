//! The canvases: the house picture, and small pictures that stand still.

use super::frame_loop::FrameLoop;
use super::paint;
use crate::drawing::Drawing;
use crate::state::State;
use fallaround_core::picture::DisplayList;
use leptos::ev::resize;
use leptos::html::Canvas;
use leptos::prelude::*;
use leptos_use::{use_event_listener, use_prefers_reduced_motion, use_window};
use wasm_bindgen::JsCast;
use web_sys::{CanvasRenderingContext2d, HtmlCanvasElement};

/// Milliseconds between two readouts at least.
const READOUT_MS: f64 = 100.0;

/// The house picture. It fills its place and draws a frame whenever the browser shows one.
#[component]
pub fn StageCanvas() -> impl IntoView {
    let state = expect_context::<State>();
    let canvas = NodeRef::<Canvas>::new();
    let frames = StoredValue::new_local(None::<FrameLoop>);
    let reduced = use_prefers_reduced_motion();
    canvas.on_load(move |canvas| {
        let Some(ctx) = context(&canvas) else {
            return state.say("this browser draws no pictures");
        };
        let mut last_ms = 0.0;
        frames.set_value(Some(FrameLoop::new(move |time_ms| {
            let reduced = reduced.get_untracked();
            let due = time_ms - last_ms >= READOUT_MS;
            let readout = state.with_house(|house| {
                house.set_reduced_motion(reduced);
                house.frame(time_ms, &canvas, &ctx);
                due.then(|| house.readout())
            });
            if let Some(readout) = readout.flatten() {
                last_ms = time_ms;
                state.read_out(readout);
            }
        })));
    });
    view! { <canvas node_ref=canvas id="house" aria-hidden="true"></canvas> }
}

/// A picture that stands still, drawn at the pixels of its place.
#[component]
pub fn Picture(
    /// What to show; nothing leaves the ground.
    #[prop(into)]
    drawing: Signal<Option<Drawing>>,
    /// What it is a picture of.
    #[prop(into)]
    about: Signal<String>,
) -> impl IntoView {
    let canvas = NodeRef::<Canvas>::new();
    let draw = move || {
        let Some(canvas) = canvas.get_untracked() else { return };
        drawing.with_untracked(|drawing| {
            if let Some(drawing) = drawing {
                still(&canvas, &drawing.list());
            }
        });
    };
    Effect::new(move |_| {
        canvas.track();
        drawing.track();
        draw();
    });
    _ = use_event_listener(use_window(), resize, move |_| draw());
    view! { <canvas node_ref=canvas role="img" aria-label=move || about.get()></canvas> }
}

/// Draws a list over the whole of a canvas, whatever size either has.
fn still(canvas: &HtmlCanvasElement, list: &DisplayList) {
    let Some(ctx) = context(canvas) else { return };
    let density = super::house::density();
    let width_px = (f64::from(canvas.client_width()) * density).round();
    let height_px = (f64::from(canvas.client_height()) * density).round();
    if width_px < 1.0 || height_px < 1.0 || list.width < 1.0 {
        return;
    }
    super::house::set_size(canvas, width_px, height_px);
    // Setting the size has reset the canvas, so this is the whole transform; a canvas with a size takes it.
    drop(ctx.scale(width_px / list.width, height_px / list.height));
    paint::paint(&ctx, list, 0.0, None);
}

fn context(canvas: &HtmlCanvasElement) -> Option<CanvasRenderingContext2d> {
    canvas.get_context("2d").ok()??.dyn_into().ok()
}
