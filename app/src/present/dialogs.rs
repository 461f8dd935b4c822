//! The dialogs of a running show: all keys, and the questions before leaving and before another show. The show goes on under them.

use crate::command::KEY_TABLE;
use crate::state::State;
use leptos::ev;
use leptos::html;
use leptos::prelude::*;

/// Opens and closes a dialog with a signal. Closing by the browser's own ways sets the signal back.
fn follow(dialog: NodeRef<html::Dialog>, open: RwSignal<bool>) {
    Effect::new(move |_| {
        let (Some(dialog), open) = (dialog.get(), open.get()) else { return };
        if open && !dialog.open() {
            // Only a dialog outside the page refuses; the keys work without it.
            drop(dialog.show_modal());
        } else if !open && dialog.open() {
            dialog.close();
        }
    });
}

/// The help card.
#[component]
pub fn KeysCard() -> impl IntoView {
    let state = expect_context::<State>();
    let dialog = NodeRef::new();
    follow(dialog, state.keys);
    let fingerprint = move || {
        state.keys.track();
        state.with_house(|house| house.fingerprint().to_owned()).unwrap_or_default()
    };
    let rows = KEY_TABLE
        .iter()
        .map(|row| view! { <tr><th scope="row">{row.printed}</th><td>{row.does}</td></tr> })
        .collect_view();
    view! {
        <dialog
            class="panel keys-card"
            node_ref=dialog
            aria-labelledby="keys-title"
            on:close=move |_| state.keys.set(false)
        >
            <h2 id="keys-title">"All keys"</h2>
            <div class="presses">
                <button type="button" class="press first" on:click=move |_| state.keys.set(false)>"Close"</button>
                <button type="button" class="press" on:click=move |_| crate::dom::toggle_full_screen()>"Full screen"</button>
                <button
                    type="button"
                    class="press"
                    on:click=move |_| {
                        state.keys.set(false);
                        state.leaving.set(true);
                    }
                >
                    "Leave the show"
                </button>
            </div>
            <p class="about">
                "Fingerprint of this show: " <b>{fingerprint}</b>
                ". Where another computer shows the same one, it holds the same show."
            </p>
            <table>
                <tbody>
                    {rows}
                    <tr><th scope="row">"a number, then enter"</th><td>"to that beat"</td></tr>
                </tbody>
            </table>
        </dialog>
    }
}

/// The question before leaving.
#[component]
pub fn LeaveQuestion() -> impl IntoView {
    let state = expect_context::<State>();
    let dialog = NodeRef::new();
    follow(dialog, state.leaving);
    // The browser's own cancel comes with the Escape that the key table hears too: one of them is enough.
    let cancel = move |event: ev::Event| event.prevent_default();
    view! {
        <dialog
            class="panel"
            node_ref=dialog
            aria-labelledby="leave-title"
            on:cancel=cancel
            on:close=move |_| state.leaving.set(false)
        >
            <h2 id="leave-title">"Leave the show?"</h2>
            <p>"It goes on while you decide. You can come back to this very place from the start page."</p>
            <div class="presses">
                <button type="button" class="press first" on:click=move |_| state.leaving.set(false)>"Stay"</button>
                <button type="button" class="press" on:click=move |_| state.leave()>"Leave"</button>
            </div>
        </dialog>
    }
}

/// The question before another show takes the place of the running one.
#[component]
pub fn OfferQuestion() -> impl IntoView {
    let state = expect_context::<State>();
    let dialog = NodeRef::new();
    follow(dialog, state.offering);
    let cancel = move |event: ev::Event| event.prevent_default();
    let name = move || {
        state.offering.track();
        state.offered_name()
    };
    view! {
        <dialog
            class="panel"
            node_ref=dialog
            aria-labelledby="offer-title"
            on:cancel=cancel
            on:close=move |_| state.decline()
        >
            <h2 id="offer-title">"Put on " {name} "?"</h2>
            <p>{move || state.title.get()} " goes on while you decide. Its place is not kept once the other show is on."</p>
            <div class="presses">
                <button type="button" class="press first" on:click=move |_| state.decline()>"Keep this show"</button>
                <button type="button" class="press" on:click=move |_| state.accept()>"Put it on"</button>
            </div>
        </dialog>
    }
}
