//! The root component: wires state, places and panels together, and what concerns the page as a whole.

use crate::dom;
use crate::files;
use crate::panels::{Landing, Problems, QuietLine};
use crate::present::Present;
use crate::protocol::ToWorker;
use crate::start::Start;
use crate::state::{NOT_READY, State, Where};
use leptos::ev;
use leptos::prelude::*;
use leptos_use::{use_document, use_event_listener, use_window};
use std::time::Duration;
use wasm_bindgen::JsCast;

/// How often the place is kept, and the picture.
const KEEP_PLACE: Duration = Duration::from_secs(1);
const KEEP_PICTURE: Duration = Duration::from_secs(15);

/// Mounts the page into `#app`.
pub(crate) fn mount() {
    let place = web_sys::window().and_then(|w| w.document()).and_then(|d| d.get_element_by_id("app"));
    let place = place.and_then(|element| element.dyn_into::<web_sys::HtmlElement>().ok());
    match place {
        Some(place) => mount_to(place, Root).forget(),
        None => show_broken(),
    }
}

/// Tells the part of the page that works without the program to let the presenter go on.
pub(crate) fn show_broken() {
    let Some(document) = web_sys::window().and_then(|w| w.document()) else { return };
    if let Ok(event) = web_sys::CustomEvent::new("fallaround-broken") {
        // Nobody cancels it.
        drop(document.dispatch_event(&event));
    }
}

#[component]
fn Root() -> impl IntoView {
    let state = State::start();
    provide_context(state);
    keep_going(state);
    go_on_or_list(state);
    hear_keys(state);
    let over = hear_drops(state);
    view! {
        <Show when=move || state.place.get() == Where::Present fallback=|| view! { <Start/> }>
            <Present/>
        </Show>
        <Problems/>
        <QuietLine/>
        <Show when=move || over.get()>
            <Landing/>
        </Show>
    }
}

/// Goes on with a show that was interrupted a moment ago; reads the shipped shows either way.
fn go_on_or_list(state: State) {
    let last = state.last.get_untracked();
    if let Some(last) = last.filter(|last| last.goes_on_at_once(dom::wall_ms())) {
        // The audience sees an empty stage for a moment, not the list.
        state.place.set(Where::Present);
        state.rehearse(last.source, Some(last.place));
    }
    leptos::task::spawn_local(async move {
        state.shows.read(move |text| state.ask(|run| ToWorker::Card { run, text })).await;
    });
}

/// Keeps the place each second, and whenever the page may be about to go.
fn keep_going(state: State) {
    let kept = set_interval_with_handle(move || state.keep_place(), KEEP_PLACE);
    let pictured = set_interval_with_handle(move || state.keep_picture(), KEEP_PICTURE);
    on_cleanup(move || {
        kept.into_iter().chain(pictured).for_each(|handle| handle.clear());
    });
    _ = use_event_listener(use_window(), ev::Custom::<web_sys::Event>::new("pagehide"), move |_| {
        state.keep_place()
    });
    _ = use_event_listener(use_document(), ev::visibilitychange, move |_| {
        let hidden = web_sys::window().and_then(|w| w.document()).is_some_and(|d| d.hidden());
        if hidden { state.keep_place() } else { state.keep_lit() }
    });
}

/// Keys while no show is on: Escape closes what lies over the list, and a clicker is told to wait.
fn hear_keys(state: State) {
    _ = use_event_listener(use_window(), ev::keydown, move |event| {
        if state.place.get_untracked() != Where::Start {
            return;
        }
        match event.key().as_str() {
            "Escape" => {
                state.close_panel();
            }
            "PageDown" | "PageUp" if state.rehearsing.with_untracked(Option::is_some) => {
                event.prevent_default();
                state.say(NOT_READY);
            }
            _ => {}
        }
    });
}

/// Files let fall anywhere on the page. The signal says that one is held over it.
fn hear_drops(state: State) -> ReadSignal<bool> {
    let (over, set_over) = signal(false);
    _ = use_event_listener(use_window(), ev::dragover, move |event| {
        event.prevent_default();
        set_over.set(event.data_transfer().is_some_and(|held| files::are_held(&held)));
    });
    _ = use_event_listener(use_window(), ev::dragleave, move |event| {
        // Leaving one element for another has the other as its related target; leaving the window has none.
        if event.related_target().is_none() {
            set_over.set(false);
        }
    });
    _ = use_event_listener(use_window(), ev::drop, move |event| {
        event.prevent_default();
        set_over.set(false);
        let Some(transfer) = event.data_transfer() else { return };
        match files::dropped(&transfer) {
            Ok(file) => open(state, file),
            Err(trouble) => state.lay_open(trouble),
        }
    });
    over
}

/// Reads a file and makes a show of it.
pub(crate) fn open(state: State, file: web_sys::File) {
    leptos::task::spawn_local(async move {
        match files::read(file).await {
            Ok(source) => state.rehearse(source.dated(dom::wall_ms()), None),
            Err(trouble) => state.lay_open(trouble),
        }
    });
}
