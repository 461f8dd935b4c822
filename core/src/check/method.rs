//! By which method the paths were integrated, and why.

use crate::ephemeris::{LongStretch, SHOW_BYTES, Track};
use crate::integrate::long_steps::{describe, time};
use crate::show::Show;
use crate::units::number;

/// In whole sentences, for the time from the start on and, where it is shown, for that before it.
pub(super) fn told(show: &Show) -> Vec<String> {
    let mut sentences = Vec::new();
    let (forward, backward) = (show.ephemeris.forward(), show.ephemeris.backward());
    if backward.long_stretches().next().is_some() {
        sentences.push("Going back from the start:".to_owned());
        on_track(show, backward, &mut sentences);
        sentences.push("Going on from the start:".to_owned());
    }
    on_track(show, forward, &mut sentences);
    sentences
}

fn on_track(show: &Show, track: &Track, sentences: &mut Vec<String>) {
    let stretches: Vec<LongStretch> = track.long_stretches().collect();
    let (Some(first), Some(choice)) = (stretches.first(), track.choice()) else {
        sentences.push(format!(
            "Exact steps throughout (Gauss-Radau of 15th order), as the paths fit into the {} MB that a show may take.",
            SHOW_BYTES >> 20
        ));
        return;
    };
    sentences.push(format!(
        "Exact steps (Gauss-Radau of 15th order) for {}; the paths of more would not fit into memory.",
        time(first.from_s.abs())
    ));
    let span_s = track.end_s() - first.from_s;
    sentences.extend(describe(&show.initial, &choice, span_s));
    let place = stretches.iter().map(|stretch| stretch.errors.place).fold(0.0, f64::max);
    let knots: usize = stretches.iter().map(|stretch| stretch.knots).sum();
    sentences.push(format!(
        "Of them {knots} states are kept; between these, places are within {} of the distance from the centre.",
        number::with_digits(place, 1)
    ));
    if stretches.len() > 1 {
        sentences.push(format!(
            "Where bodies came near each other, exact steps again: {} times, first after {}.",
            stretches.len() - 1,
            time(first.until_s.abs())
        ));
    }
}
