//! What to say in this beat, for rehearsing in one window.

use crate::state::State;
use leptos::html;
use leptos::prelude::*;

/// The words to say, with the times left.
#[component]
pub fn WordsToSay() -> impl IntoView {
    let state = expect_context::<State>();
    let say = NodeRef::<html::Div>::new();
    let paragraphs = move || {
        state.say.with(|say| {
            say.split("\n\n")
                .map(|paragraph| paragraph.split_whitespace().collect::<Vec<_>>().join(" "))
                .filter(|paragraph| !paragraph.is_empty())
                .map(|paragraph| view! { <p>{paragraph}</p> })
                .collect_view()
        })
    };
    // New words start at their first line.
    Effect::new(move |_| {
        state.say.track();
        if let Some(say) = say.get() {
            say.set_scroll_top(0);
        }
    });
    let read = move |what: fn(&crate::stage::Readout) -> String| state.readout.with(what);
    view! {
        <aside class="words-to-say" aria-label="words to say">
            <div>
                <p class="beat">{move || read(|r| format!("Beat {} of {}", r.beat + 1, r.beats))}</p>
                <h2>{move || read(|r| r.title.clone())}</h2>
            </div>
            <div class="say" node_ref=say tabindex="0">{paragraphs}</div>
            <p class="times">
                <span><b>{move || read(|r| r.beat_left.clone())}</b>"left here"</span>
                <span><b>{move || read(|r| r.show_left.clone())}</b>"left in all"</span>
                <span class="cool">{move || read(|r| r.model.clone())}</span>
            </p>
        </aside>
    }
}
