//! What can lie over any place: the problems of a file, the progress of a rehearsal, the quiet line.

use crate::excerpt::excerpt;
use crate::files::Trouble;
use crate::protocol::Fault;
use crate::state::{Rehearsing, State};
use leptos::html;
use leptos::prelude::*;

/// Everything that is wrong with a file. What runs goes on underneath.
#[component]
pub fn Problems() -> impl IntoView {
    let state = expect_context::<State>();
    move || state.trouble.get().map(|trouble| view! { <ProblemPanel trouble/> })
}

#[component]
fn ProblemPanel(trouble: Trouble) -> impl IntoView {
    let state = expect_context::<State>();
    let close = NodeRef::<html::Button>::new();
    close.on_load(|button| {
        // Focus is a courtesy to keyboards; without it the panel still closes by Escape.
        drop(button.focus());
    });
    let Trouble { name, text, faults } = trouble;
    let count = match faults.len() {
        1 => "One thing is wrong with it.".to_owned(),
        count => format!("{count} things are wrong with it."),
    };
    let running = state.title.get_untracked();
    let goes_on = if state.place.get_untracked() == crate::state::Where::Present {
        format!("{running} goes on.")
    } else {
        String::new()
    };
    let rows = faults.into_iter().map(|fault| fault_row(&text, fault)).collect_view();
    view! {
        <section class="panel problems" role="alertdialog" aria-labelledby="problems-title" aria-describedby="problems-about">
            <h2 id="problems-title">{name} " can't be shown"</h2>
            <p id="problems-about" class="about">{count} " " {goes_on}</p>
            <ol tabindex="0" aria-label="what is wrong">{rows}</ol>
            <div class="presses">
                <button type="button" class="press first" node_ref=close on:click=move |_| state.trouble.set(None)>
                    "Close"
                </button>
                <span>"or press escape"</span>
            </div>
        </section>
    }
}

fn fault_row(text: &str, fault: Fault) -> impl IntoView + use<> {
    let Fault { line, column, wrong, remedy } = fault;
    let place = (line > 0).then(|| format!("{line}:{column}"));
    let spoken = format!("line {line}, column {column}");
    let quoted = excerpt(text, line, column).map(|found| {
        let under = found.before.clone();
        view! {
            <pre aria-label="the line in question">
                <code>{found.before}{found.after}"\n"</code>
                <code aria-hidden="true"><span class="before-caret">{under}</span><span class="caret">"^"</span></code>
            </pre>
        }
    });
    view! {
        <li>
            <div class="where">
                {place.map(|place| view! { <span class="place" aria-label=spoken>{place}</span> })}
                <div>
                    <p class="wrong">{sentence(&wrong)}</p>
                    <p class="remedy">{sentence(&remedy)}</p>
                </div>
            </div>
            {quoted}
        </li>
    }
}

/// Words of less than three letters, and these, may be units, which keep their case: "kg is a mass".
const SHORT_WORDS: [&str; 12] = ["a", "an", "as", "at", "by", "if", "in", "is", "it", "no", "on", "to"];
const LONG_UNITS: [&str; 3] = ["min", "deg", "rad"];

/// A problem's half sentence as a sentence.
fn sentence(half: &str) -> String {
    let first_word: &str = half.split_whitespace().next().unwrap_or_default();
    let plain = first_word.chars().all(char::is_alphabetic) && !LONG_UNITS.contains(&first_word);
    let plain = plain && (first_word.chars().count() > 2 || SHORT_WORDS.contains(&first_word));
    let mut chars = half.chars();
    let end = if half.is_empty() || half.ends_with(['.', '?', '!']) { "" } else { "." };
    match chars.next() {
        Some(first) if plain => first.to_uppercase().chain(chars).collect::<String>() + end,
        _ => format!("{half}{end}"),
    }
}

/// How far a rehearsal has come, and a way to give it up.
#[component]
pub fn Progress() -> impl IntoView {
    let state = expect_context::<State>();
    // The panel is made once for a rehearsal; only its numbers change.
    let under_way = Memo::new(move |_| state.rehearsing.with(|r| r.as_ref().map(|r| r.name.clone())));
    move || under_way.get().map(|name| view! { <ProgressPanel name/> })
}

#[component]
fn ProgressPanel(name: String) -> impl IntoView {
    let state = expect_context::<State>();
    let with =
        move |f: fn(&Rehearsing) -> String| state.rehearsing.with(|r| r.as_ref().map(f).unwrap_or_default());
    let share = move || state.rehearsing.with(|r| r.as_ref().map_or(0.0, |r| r.fraction));
    let percent = move || format!("{:.0}", share() * 100.0);
    view! {
        <section class="panel progress" aria-labelledby="progress-title">
            <h2 id="progress-title">"Working out " {name}</h2>
            <div
                class="bar"
                role="progressbar"
                aria-valuemin="0"
                aria-valuemax="100"
                aria-valuenow=percent
                aria-labelledby="progress-title"
            >
                <i style:--done=move || format!("{:.3}", share())></i>
            </div>
            <p class="what">
                <span>{move || with(|r| r.what.clone())}</span>
                <span>{percent} " %"</span>
            </p>
            <div class="presses">
                <button type="button" class="press" on:click=move |_| state.cancel()>"Cancel"</button>
            </div>
        </section>
    }
}

/// One sentence that goes away by itself.
#[component]
pub fn QuietLine() -> impl IntoView {
    let state = expect_context::<State>();
    view! { <p class="line" role="status">{move || state.line.get()}</p> }
}

/// Shown while a file is held over the page.
#[component]
pub fn Landing() -> impl IntoView {
    view! { <div class="landing" aria-hidden="true"><p>"Let it fall"</p></div> }
}

#[cfg(test)]
mod tests {
    use super::sentence;

    #[test]
    fn half_sentences_are_finished() {
        assert_eq!(sentence("this isn't text"), "This isn't text.");
        assert_eq!(sentence("is it?"), "Is it?");
        assert_eq!(sentence(""), "");
        assert_eq!(sentence("élan"), "Élan.");
        assert_eq!(sentence("it stands"), "It stands.");
        assert_eq!(sentence("kg is a mass"), "kg is a mass.");
        assert_eq!(sentence("m/s is a speed"), "m/s is a speed.");
    }
}
