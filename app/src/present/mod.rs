//! Present: the house picture fills the window; everything else comes when asked for and goes by itself.

pub mod controls;
pub mod dialogs;
pub mod spoken;
pub mod words_to_say;

use crate::command::Press;
use crate::panels::Progress;
use crate::stage::StageCanvas;
use crate::state::State;
use controls::Controls;
use dialogs::{KeysCard, LeaveQuestion, OfferQuestion};
use leptos::ev;
use leptos::prelude::*;
use leptos_use::{use_event_listener, use_window};
use spoken::Spoken;
use std::time::Duration;
use wasm_bindgen::JsCast;
use words_to_say::WordsToSay;

/// How long the controls stay after the last sign of a hand.
const STAY: Duration = Duration::from_secs(3);

/// The place where a show runs.
#[component]
pub fn Present() -> impl IntoView {
    let state = expect_context::<State>();
    let shown = hands_seen(state);
    _ = use_event_listener(use_window(), ev::keydown, move |event| hear(state, &event));
    let covered = move || {
        state.keys.get() || state.leaving.get() || state.offering.get() || state.trouble.with(Option::is_some)
    };
    let away = Signal::derive(move || !shown.get() || covered());
    view! {
        <main class="present" class:still=move || !shown.get() class:speaking=move || state.words.get()>
            <h1 class="unseen">{move || state.title.get()}</h1>
            <div class="stage"><StageCanvas/></div>
            <Show when=move || state.words.get()>
                <WordsToSay/>
            </Show>
            <Controls away/>
            <Progress/>
            <Spoken/>
        </main>
        <KeysCard/>
        <LeaveQuestion/>
        <OfferQuestion/>
    }
}

/// Whether a pointer, a touch or the focus has been at work in the last three seconds. A pointer that only moves leaves a
/// black house black.
fn hands_seen(state: State) -> ReadSignal<bool> {
    let (shown, set_shown) = signal(true);
    let timer = StoredValue::new_local(None::<TimeoutHandle>);
    let seen = move || {
        timer.update_value(|timer| timer.take().into_iter().for_each(|timer| timer.clear()));
        if !shown.get_untracked() {
            set_shown.set(true);
        }
        let hide = move || {
            let busy = focus_in_controls();
            set_shown.set(busy);
        };
        timer.set_value(set_timeout_with_handle(hide, STAY).ok());
    };
    _ = use_event_listener(use_window(), ev::pointermove, move |_| {
        if !state.readout.with_untracked(|r| r.blackout) {
            seen();
        }
    });
    _ = use_event_listener(use_window(), ev::pointerdown, move |_| seen());
    _ = use_event_listener(use_window(), ev::focusin, move |_| seen());
    on_cleanup(move || timer.update_value(|timer| timer.take().into_iter().for_each(|timer| timer.clear())));
    seen();
    shown
}

/// Whether a keyboard is at the controls: then they stay.
fn focus_in_controls() -> bool {
    let document = web_sys::window().and_then(|w| w.document());
    document.and_then(|d| d.query_selector(".controls :focus-visible").ok().flatten()).is_some()
}

/// What the arrow keys scroll the words to say by, px.
const SCROLL_PX: f64 = 96.0;

/// Scrolls the words to say, which need no focus for it.
fn scroll_words(by_px: f64) {
    let document = web_sys::window().and_then(|w| w.document());
    if let Some(say) = document.and_then(|d| d.query_selector(".words-to-say .say").ok().flatten()) {
        say.scroll_by_with_x_and_y(0.0, by_px);
    }
}

/// Hears a key, unless it belongs to what has the focus.
fn hear(state: State, event: &web_sys::KeyboardEvent) {
    let key = event.key();
    let at = event.target().and_then(|target| target.dyn_into::<web_sys::Element>().ok());
    let within = |what: &str| at.as_ref().and_then(|at| at.closest(what).ok().flatten()).is_some();
    let for_focus = match key.as_str() {
        // In a dialog and in the list of problems, these are for what has the focus.
        "Enter" | " " | "Tab" => within("dialog, .problems, .progress"),
        "ArrowUp" | "ArrowDown" => {
            if state.words.get_untracked() && !within("dialog, .problems, .say") {
                scroll_words(if key == "ArrowUp" { -SCROLL_PX } else { SCROLL_PX });
                event.prevent_default();
            }
            true
        }
        // A focused button is pressed by Enter; a number being typed is finished by it elsewhere.
        _ => false,
    };
    let for_button = key == "Enter" && within("button");
    if for_focus || for_button || within("input, textarea, select") {
        return;
    }
    // Shift and Tab go back through what can be pressed, as everywhere.
    let backwards = key == "Tab" && event.shift_key();
    let modified = event.ctrl_key() || event.alt_key() || event.meta_key() || backwards;
    let press = Press { key: &key, repeat: event.repeat(), modified };
    if state.press(press) {
        event.prevent_default();
    }
}
