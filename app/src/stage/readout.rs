//! What people read about a running show beside its picture.

use crate::words;
use fallaround_core::show::{Clock, Show};

/// Words and numbers of this instant, for the bar, the words to say and screen readers.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Readout {
    /// The beat, from 0.
    pub beat: usize,
    /// How many beats there are.
    pub beats: usize,
    /// The beat's title.
    pub title: String,
    /// The caption that the audience reads, without marks.
    pub caption: String,
    /// The language of the captions after this one, by its own name; empty: there is none.
    pub language_after: String,
    /// Planned time left in this beat, "0:35".
    pub beat_left: String,
    /// Planned time left in the show, "5:20".
    pub show_left: String,
    /// The model's date or day.
    pub model: String,
    /// What the presenter should know of the clock: waiting, held, faster, slower; empty: nothing.
    pub state: String,
    /// Whether the model is held.
    pub held: bool,
    /// Whether the show waits for its first beat.
    pub waiting: bool,
    /// Whether the house is black.
    pub blackout: bool,
}

impl Readout {
    /// Of a show at an instant of its clock.
    pub fn of(
        show: &Show,
        clock: &Clock,
        blackout: bool,
        language: &str,
        language_after: Option<&str>,
    ) -> Self {
        let plan = &show.plan;
        let index = clock.beat();
        let planned = plan.beats.get(index);
        let beat = show.scenario.beats.get(index);
        let (_, left_s) = show_times(show, clock);
        let beat_left_s = planned.map_or(0.0, |p| p.lasts_s - clock.beat_s());
        Self {
            beat: index,
            beats: plan.beats.len(),
            title: beat.map(|b| b.title.clone()).unwrap_or_default(),
            caption: beat.map(|b| caption(&b.captions, language)).unwrap_or_default(),
            language_after: language_after.map(words::own_name).unwrap_or_default(),
            beat_left: words::minutes(beat_left_s),
            show_left: words::minutes(left_s),
            model: words::model_time(show.scenario.date, clock.moment(plan).model_s),
            state: state(clock, blackout),
            held: clock.held(),
            waiting: clock.waiting(),
            blackout,
        }
    }
}

/// Planned show time up to this instant and from it, seconds.
pub fn show_times(show: &Show, clock: &Clock) -> (f64, f64) {
    let planned = show.plan.beats.get(clock.beat());
    let into_s = planned.map_or(0.0, |p| p.show_s + clock.beat_s().clamp(0.0, p.lasts_s));
    (into_s, (show.plan.lasts_s() - into_s).max(0.0))
}

fn state(clock: &Clock, blackout: bool) -> String {
    let mut parts = Vec::new();
    if blackout {
        parts.push("house is black".to_owned());
    }
    if clock.waiting() {
        parts.push("waiting for next".to_owned());
    } else if clock.held() {
        parts.push("held".to_owned());
    }
    match clock.speed() {
        0 => {}
        steps if steps > 0 => parts.push(format!("{steps} faster")),
        steps => parts.push(format!("{} slower", -steps)),
    }
    parts.join(", ")
}

fn caption(captions: &[fallaround_core::scenario::Caption], language: &str) -> String {
    let own = captions.iter().find(|c| c.language == language).or_else(|| captions.first());
    own.map(|c| c.text.replace('*', "")).unwrap_or_default()
}
