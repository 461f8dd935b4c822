//! The browser side of Fallaround.
//!
//! The page and its worker are the same program. The worker turns the text of a scenario into an ephemeris
//! ([`engine`], behind [`worker`]); the page evaluates and paints it ([`stage`]) and hears the presenter
//! ([`command`]). They speak through [`protocol`]; [`link`] owns the worker. [`state`] holds what the page knows.
//!
//! On the window, for tests, read-only: [`fallaround_frame`] and [`fallaround_fingerprint`].

pub mod carry;
pub mod command;
pub mod dom;
pub mod drawing;
pub mod engine;
pub mod excerpt;
pub mod files;
pub mod keep;
pub mod link;
pub mod panels;
pub mod present;
pub mod protocol;
pub mod shows;
pub mod stage;
pub mod start;
pub mod state;
pub mod words;
pub mod worker;

mod root;

use wasm_bindgen::prelude::*;

/// Starts the page.
#[wasm_bindgen]
pub fn page_main() {
    std::panic::set_hook(Box::new(|info| {
        console_error_panic_hook::hook(info);
        root::show_broken();
    }));
    root::mount();
}

/// What was last drawn of the running show, as JSON; `null` without one. Read-only; for tests.
///
/// `{ beat, model_s, pace, held, waiting, blackout, veil, metres_per_px, width_px, height_px, items, bodies }`: the beat counts from 0, `model_s`
/// is seconds of TDB from the scenario's start, `pace` model seconds per second. Each of `bodies`, those that are drawn, has
/// `{ name, x_px, y_px, radius_px, pos_m }`: its centre on the canvas in the canvas's own pixels, and the position that it was drawn from,
/// barycentric, on the ecliptic axes of J2000, in metres.
#[wasm_bindgen]
pub fn fallaround_frame() -> String {
    state::peek(stage::House::frame_json).unwrap_or_else(|| "null".into())
}

/// The fingerprint of the running show as people read it; empty without one. Read-only; for tests.
#[wasm_bindgen]
pub fn fallaround_fingerprint() -> String {
    state::peek(|house| house.fingerprint().to_owned()).unwrap_or_default()
}
