//! The show that was last left or interrupted, with its true picture, to go on with.

use crate::dom;
use crate::stage::Picture;
use crate::state::State;
use crate::words;
use leptos::prelude::*;

/// The last show; nothing where there is none.
#[component]
pub fn LastShow() -> impl IntoView {
    let state = expect_context::<State>();
    move || {
        state.last.get().map(|last| {
            let place = last.place.clone();
            let stopped = format!("Your last show, stopped at {}", dom::time_of_day(place.kept_ms));
            let beat = format!(
                "Beat {} of {}, {} in, {} left",
                place.mark.beat + 1,
                place.beats,
                words::minutes(place.into_s),
                words::minutes(place.left_s),
            );
            let about = format!("{} at beat {}", place.title, place.mark.beat + 1);
            let picture = last.picture.clone();
            let go_on = move |_| state.rehearse(last.source.clone(), Some(last.place.clone()));
            view! {
                <section class="last" aria-labelledby="last-title">
                    <p class="label">{stopped}</p>
                    <h2 id="last-title">{place.title.clone()}</h2>
                    {picture.map(|picture| view! {
                        <figure><Picture drawing=Signal::stored(Some(picture)) about=Signal::stored(about)/></figure>
                    })}
                    <p class="where">
                        <span>{beat}</span>
                        <span class="cool">{place.model.clone()}</span>
                    </p>
                    <button type="button" class="press first" on:click=go_on>"Go on from there"</button>
                </section>
            }
        })
    }
}
