//! Start: the last show left, the shows that come with the program right.

pub mod last;
pub mod list;

use crate::panels::Progress;
use crate::state::State;
use last::LastShow;
use leptos::html;
use leptos::prelude::*;
use list::ShowList;

/// The start page.
#[component]
pub fn Start() -> impl IntoView {
    let state = expect_context::<State>();
    view! {
        <main class="start" class:no-last=move || state.last.with(Option::is_none)>
            <div class="left">
                <h1>"Fallaround"</h1>
                <p class="tagline">"every orbit is a fall that keeps missing"</p>
                <LastShow/>
                <OpenFile/>
                <Progress/>
            </div>
            <ShowList/>
            <footer>
                <p>
                    "Works with no network. For teaching only: never use it for navigation, launch or collision decisions."
                </p>
                <p>"Never look straight at the Sun. It can blind you."</p>
            </footer>
        </main>
    }
}

#[component]
fn OpenFile() -> impl IntoView {
    let state = expect_context::<State>();
    let input = NodeRef::<html::Input>::new();
    let pick = move |_| {
        if let Some(input) = input.get_untracked() {
            input.click();
        }
    };
    let picked = move |_| {
        let Some(input) = input.get_untracked() else { return };
        match crate::files::picked(input.files().as_ref()) {
            Ok(file) => crate::root::open(state, file),
            Err(trouble) => state.lay_open(trouble),
        }
        // The same file can be picked again after it was put right.
        input.set_value("");
    };
    view! {
        <div class="open">
            <input
                type="file"
                node_ref=input
                accept=".toml,text/plain,application/toml"
                hidden=true
                aria-label="a scenario file"
                on:change=picked
            />
            <button type="button" class="press" on:click=pick>"Open a file"</button>
            <p>"or let a scenario file fall anywhere on this page"</p>
        </div>
    }
}
