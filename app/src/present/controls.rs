//! The quiet bar: every command that a hand without a keyboard needs.

use crate::command::Command;
use crate::state::State;
use leptos::prelude::*;
use wasm_bindgen::JsCast;

/// The bar.
#[component]
pub fn Controls(
    /// Whether it is hidden.
    away: Signal<bool>,
) -> impl IntoView {
    let state = expect_context::<State>();
    let press = move |command: Command, label: &'static str, first: bool| {
        let pressed = move || match command {
            Command::Hold => Some(state.readout.with(|r| r.held).to_string()),
            Command::Blackout => Some(state.readout.with(|r| r.blackout).to_string()),
            Command::Words => Some(state.words.get().to_string()),
            _ => None,
        };
        view! {
            <button
                type="button"
                class="press"
                class:first=first
                aria-pressed=pressed
                on:click=move |event| {
                    state.ask_for(command);
                    let_go(&event);
                }
            >
                {label}
            </button>
        }
    };
    // One button, as on a kiosk: it says the language that it brings, in that language.
    let language = move || state.readout.with(|r| r.language_after.clone());
    let language_button = move || {
        view! {
            <button
                type="button"
                class="press"
                aria-label=move || format!("Captions in {}", language())
                on:click=move |event| {
                    state.ask_for(Command::Language);
                    let_go(&event);
                }
            >
                {language}
            </button>
        }
    };
    let place = move || state.readout.with(|r| format!("Beat {} of {}", r.beat + 1, r.beats));
    let title = move || state.readout.with(|r| r.title.clone());
    let times = move || {
        state.readout.with(|r| {
            let state = if r.state.is_empty() { String::new() } else { format!(", {}", r.state) };
            format!("{} left in this beat, {} in all{state}", r.beat_left, r.show_left)
        })
    };
    view! {
        <div class="foot">
        <nav class="controls" class:away=move || away.get() aria-label="the show">
            <p class="now">
                <span>{place} <b>{title}</b></span>
                <span class="times">{times}</span>
            </p>
            <div class="keys">
                {press(Command::Next, "Next", true)}
                {press(Command::Back, "Back", false)}
                {press(Command::Hold, "Hold", false)}
                {press(Command::Blackout, "Blackout", false)}
                {press(Command::RestartBeat, "Restart", false)}
                {press(Command::Slower, "Slower", false)}
                {press(Command::Faster, "Faster", false)}
                <Show when=move || !language().is_empty()>
                    {language_button()}
                </Show>
                {press(Command::Words, "Words to say", false)}
                {press(Command::Keys, "All keys", false)}
            </div>
        </nav>
        </div>
    }
}

/// A button that a pointer pressed gives the focus back, so that the space bar means the next beat again.
fn let_go(event: &leptos::ev::MouseEvent) {
    let by_pointer = event.detail() > 0;
    let button = event.current_target().and_then(|target| target.dyn_into::<web_sys::HtmlElement>().ok());
    if let Some(button) = button.filter(|_| by_pointer) {
        // What can't lose the focus hasn't got it.
        drop(button.blur());
    }
}
