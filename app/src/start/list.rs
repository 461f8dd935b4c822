//! The shows that come with the program, in ruled rows. Arrow keys move between them, Enter opens one.

use crate::shows::Card;
use crate::stage::Picture;
use crate::state::State;
use crate::words;
use leptos::ev::KeyboardEvent;
use leptos::html;
use leptos::prelude::*;
use wasm_bindgen::JsCast;

/// The list.
#[component]
pub fn ShowList() -> impl IntoView {
    let state = expect_context::<State>();
    let list = NodeRef::<html::Ul>::new();
    let count = move || state.shows.cards.with(Vec::len);
    view! {
        <section class="right" aria-labelledby="shows-title">
            <h2 id="shows-title" class="label">"Shows that come with it"</h2>
            <ul class="shows" node_ref=list on:keydown=move |event| step(&event, list)>
                <For each=move || 0..count() key=|index| *index let:index>
                    <Row index/>
                </For>
            </ul>
            <p class="label">{move || state.shows.missing.get()}</p>
        </section>
    }
}

#[component]
fn Row(index: usize) -> impl IntoView {
    let state = expect_context::<State>();
    let card = move |read: fn(&Card) -> String| {
        state.shows.cards.with(|cards| cards.get(index).map(read).unwrap_or_default())
    };
    let fact = move |read: fn(&crate::protocol::Facts) -> String| {
        state
            .shows
            .cards
            .with(|cards| cards.get(index).and_then(|card| card.facts.as_ref()).map(read).unwrap_or_default())
    };
    let picture = Signal::derive(move || {
        state.shows.cards.with(|cards| cards.get(index).and_then(|card| card.picture.clone()))
    });
    let title = move || {
        let title = fact(|facts| facts.title.clone());
        if title.is_empty() { card(|card| card.source.name.clone()) } else { title }
    };
    let length =
        move || fact(|facts| if facts.lasts_s > 0.0 { words::length(facts.lasts_s) } else { String::new() });
    let open = move |_| {
        let source =
            state.shows.cards.with_untracked(|cards| cards.get(index).map(|card| card.source.clone()));
        if let Some(source) = source {
            state.rehearse(source, None);
        }
    };
    view! {
        <li>
            <button type="button" class="show" on:click=open>
                <Picture drawing=picture about=Signal::stored(String::new())/>
                <span class="words">
                    <span class="title">{title}</span>
                    <span class="about">{move || fact(|facts| facts.summary.clone())}</span>
                </span>
                <span class="length">{length}</span>
                <span class="audience">{move || fact(|facts| facts.audience.clone())}</span>
            </button>
        </li>
    }
}

/// Moves the focus up and down the rows.
fn step(event: &KeyboardEvent, list: NodeRef<html::Ul>) {
    let by = match event.key().as_str() {
        "ArrowDown" => 1,
        "ArrowUp" => -1,
        "Home" => -1000,
        "End" => 1000,
        _ => return,
    };
    let Some(list) = list.get_untracked() else { return };
    let rows = list.children();
    let Some(row) = event
        .target()
        .and_then(|t| t.dyn_into::<web_sys::Element>().ok())
        .and_then(|e| e.closest("li").ok().flatten())
    else {
        return;
    };
    let count = i64::from(rows.length());
    let at = (0..rows.length()).find(|index| rows.item(*index).as_ref() == Some(&row)).map_or(0, i64::from);
    let to = (at + by).clamp(0, count - 1);
    let button =
        u32::try_from(to).ok().and_then(|to| rows.item(to)).and_then(|row| row.first_element_child());
    if let Some(button) = button.and_then(|b| b.dyn_into::<web_sys::HtmlElement>().ok()) {
        event.prevent_default();
        // A row that can't take the focus leaves it where it is.
        drop(button.focus());
    }
}
