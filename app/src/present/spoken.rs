//! What a screen reader says of the picture: the beat's title and its caption, when they change.

use crate::state::State;
use leptos::prelude::*;

/// The live region.
#[component]
pub fn Spoken() -> impl IntoView {
    let state = expect_context::<State>();
    let words = Memo::new(move |_| {
        state.readout.with(|r| {
            let beat = format!("Beat {}: {}", r.beat + 1, r.title);
            if r.caption.is_empty() { beat } else { format!("{beat}. {}", r.caption.replace('\n', " ")) }
        })
    });
    view! { <p class="unseen" aria-live="polite" aria-atomic="true">{move || words.get()}</p> }
}
